"""Published relations of many kinds: every root by the whole road, and what each paper is known for."""

from functools import cache

import numpy as np
import pytest
from published_fluids import CASES as FLUIDS
from published_own import CASES as PLASMAS
from published_roots import assert_published_roots
from scipy.optimize import brentq

CASES = PLASMAS | FLUIDS


@cache
def case(name):
    return CASES[name]()


@pytest.mark.parametrize("name", CASES)
def test_published_roots(name):
    assert_published_roots(case(name))


@pytest.mark.parametrize("name", CASES)
def test_the_laws_audit(name):
    audit = case(name).wave.linear.audit(seed=2)
    assert audit.passed, str(audit)


def growth(name, **changes):
    c = case(name)
    return c.wave.roots(c.values | changes, **c.k).imag.max()


def test_farley_buneman_threshold():
    """Marginal where k u/(1 + Psi) = k c_s: the drift is (1 + Psi) c_s (Farley 1963; Buneman 1963, from memory)."""
    p = case("farley_buneman").values
    gyro = p["B_0"] / p["m_e"]
    psi = p["nu_e"] * p["nu_i"] * p["m_i"] / (p["m_e"] * (p["nu_e"] ** 2 + gyro**2))
    drift = gyro / (p["m_e"] * (p["nu_e"] ** 2 + gyro**2))
    assert brentq(
        lambda e: growth("farley_buneman", E_0=e), 0.05, 1.0, rtol=1e-12
    ) == pytest.approx((1 + psi) / drift, rel=1e-9)


def test_largest_magnetorotational_growth():
    """3/4 of Omega in a Keplerian shear, where (k v_A)^2 = 15/16 Omega^2 (Balbus and Hawley 1991, from memory)."""
    c = case("magnetorotational")
    at = np.sqrt(15 / 16)
    k = np.array([at * (1 - 1e-3), at, at * (1 + 1e-3)])
    found = c.wave.roots(c.values, k=k).imag.max(axis=-1)
    assert found[1] == pytest.approx(0.75, rel=1e-12)
    assert found[1] > max(found[0], found[2])


def test_toomre_criterion():
    """Marginal at c kappa = pi G Sigma, k = kappa/c (Toomre 1964, from memory)."""
    c = case("toomre")
    sound = np.pi * 0.3  # kappa = 1
    at = {"k": 1 / sound}
    assert c.wave.roots(c.values | {"c": sound * (1 + 1e-9)}, **at).imag.max() == 0
    assert c.wave.roots(c.values | {"c": sound * (1 - 1e-9)}, **at).imag.max() > 0


def test_rotation_stops_jeans_across_its_axis_only():
    """Across the axis 4 Omega^2 > 4 pi G rho stabilizes, elsewhere Jeans's criterion is untouched (Chandrasekhar 1955, from memory)."""
    c = case("rotating_jeans")
    fast = c.values | {"Omega": 2.0}
    assert c.wave.roots(fast, k=0.1, theta=np.pi / 2).imag.max() < 1e-7
    assert c.wave.roots(fast, k=0.1, theta=1.5).imag.max() > 0.01


def test_weibel_threshold():
    """Grows up to (c k)^2 = omega_p^2 (T_x/T_z − 1) (Weibel 1959, from memory)."""
    c = case("weibel")
    edge = np.sqrt((1.0 / 0.05 - 1) / 9.0)
    assert c.wave.roots(c.values, k=edge * 0.999).imag.max() > 1e-3
    assert c.wave.roots(c.values, k=edge * 1.001).imag.max() < 1e-12
