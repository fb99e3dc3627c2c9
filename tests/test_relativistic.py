"""Relations with Lorentz factors: a relativistic beam in a cold plasma, checked and solved."""

import mpmath
import numpy as np
import pytest
import sympy as sp

import plasmalin as plin
from plasmalin import advect, div, dot, grad, laplacian, partial_t
from plasmalin.check.conics import conic_of, square_root

NAMES = {
    "omega_p": "sqrt(n_0 e^2/(epsilon_0 m_e))",
    "omega_b": "sqrt(n_b0 e^2/(epsilon_0 m_e))",
    "gamma": "1/sqrt(1 - u_b^2/c^2)",
}
VALUES = {"n_0": 1e16, "n_b0": 1e14, "u_b": 0.9 * plin.constants.c}


@pytest.fixture(scope="module")
def linear():
    """Electrons at rest and a beam of electrons, the momentum law exactly relativistic; numbers invented."""
    model = plin.FluidModel("relativistic beam", axes="xz")
    e, eps0, mass, c = model.constants("e epsilon_0 m_e c")
    n0, nb0, speed = model.parameters("n_0 n_b0 u_b", positive=True)
    n, nb = model.scalar("n", background=n0), model.scalar("n_b", background=nb0)
    v, vb = model.vector("v"), model.vector("v_b", background=(0, speed))
    phi = model.scalar("phi")
    gamma = 1 / sp.sqrt(1 - dot(vb, vb) / c**2)
    model.law("continuity", partial_t(n) + div(n * v))
    model.law("beam continuity", partial_t(nb) + div(nb * vb))
    model.law("momentum", mass * (partial_t(v) + advect(v, v)), e * grad(phi))
    model.law(
        "beam momentum", mass * (partial_t(gamma * vb) + advect(vb, gamma * vb)), e * grad(phi)
    )
    model.law("Poisson", eps0 * laplacian(phi), e * (n + nb - n0 - nb0))
    return model.linearize()


# Bludman, Watson and Rosenbluth 1960, Phys. Fluids 3, 741 (from memory): mass gamma^3 along, gamma across the beam.
RIGHT = [
    "1 = omega_p^2/omega^2 + omega_b^2 (cos(theta)^2/gamma^3 + sin(theta)^2/gamma)/(omega - k u_b cos(theta))^2",
    "1 - omega_p^2/omega^2 = omega_b^2 (1 - beta^2 cos(theta)^2)/(gamma (omega - k u_b cos(theta))^2)",
    "1 - omega_p^2/omega^2 = omega_b^2 sqrt(c^2 - u_b^2) (1 - beta^2 cos(theta)^2)/(c (omega - k u_b cos(theta))^2)",
]
WRONG = [
    RIGHT[0].replace("gamma^3", "gamma^2"),
    RIGHT[0].replace("sin(theta)^2/gamma", "sin(theta)^2"),
    RIGHT[1].replace("gamma (", "("),
    RIGHT[2].replace("u_b^2)", "2 u_b^2)"),
]


@pytest.mark.parametrize("claim", RIGHT)
def test_lorentz_factors_are_recognized(linear, claim):
    verdict = linear.plane_wave(angle="theta").check(claim, where={**NAMES, "beta": "u_b/c"})
    assert verdict.agrees
    assert verdict.kind == "factor"


@pytest.mark.parametrize("claim", WRONG)
def test_wrong_lorentz_factors_are_not(linear, claim):
    wave = linear.plane_wave(angle="theta")
    verdict = wave.check(claim, where={**NAMES, "beta": "u_b/c"}, budget_s=2)
    assert not verdict.agrees
    assert verdict.kind in ("differs", "limit")  # a factor 1/gamma left out is right for slow beams


def test_a_wrong_power_of_the_lorentz_factor_is_found(linear):
    claim = "1 = omega_p^2/omega^2 + omega_b^2/(gamma^2 (omega - k u_b)^2)"
    verdict = linear.plane_wave("z").check(claim, where=NAMES)
    assert verdict.kind == "differs"
    assert verdict.slips[0].text == "1/γ² should be 1/γ³"


@pytest.mark.parametrize("slow", ["u_b/c << 1", "u_b^2/c^2 << 1", "u_b << c"])
def test_the_slow_beam_is_a_stated_limit(linear, slow):
    """Buneman 1959, Phys. Rev. 115, 503, without Lorentz factors (from memory)."""
    claim = "1 = omega_p^2/omega^2 + omega_b^2/(omega - k u_b)^2"
    verdict = linear.plane_wave("z").check(claim, where=NAMES, under=[slow])
    assert verdict.kind == "limit"
    assert verdict.agrees


def test_coefficients_are_shown_in_the_symbols_of_the_laws(linear):
    claim = "1 = omega_p^2/omega^2 + omega_b^2/(gamma (omega - k u_b)^2)"
    text = str(linear.plane_wave("z").check(claim, where=NAMES, budget_s=0.5))
    assert "√(1 − u_b²/c²)" in text
    assert "1 + √" not in text


def test_roots_of_the_relativistic_beam(linear):
    """Against the quartic of the published relation at 50 digits."""
    k, angle = 30.0, 0.3
    roots = linear.plane_wave(angle="theta").roots(VALUES, k=k, theta=angle)
    with mpmath.workdps(50):
        c, u = mpmath.mpf(plin.constants.c), mpmath.mpf(VALUES["u_b"])
        gamma, cos = 1 / mpmath.sqrt(1 - (u / c) ** 2), mpmath.cos(mpmath.mpf(angle))
        unit = mpmath.mpf(plin.constants.e) ** 2 / (
            mpmath.mpf(plin.constants.epsilon_0) * mpmath.mpf(plin.constants.m_e)
        )
        wp, drift = unit * VALUES["n_0"], k * u * cos
        wb = unit * VALUES["n_b0"] * (cos**2 / gamma**3 + (1 - cos**2) / gamma)
        exact = mpmath.polyroots(
            [1, -2 * drift, drift**2 - wp - wb, 2 * wp * drift, -wp * drift**2],
            maxsteps=200, extraprec=400,
        )  # fmt: skip
        exact = sorted(
            [*(complex(z) for z in exact), complex(drift)], key=lambda z: (z.real, z.imag)
        )
    found = sorted(roots.omega, key=lambda z: (z.real, z.imag))
    assert len(found) == 5
    assert (roots.status == "certified").all()
    assert np.allclose(found, exact, rtol=1e-14)


def test_squares_and_their_positive_roots():
    a, b = sp.symbols("a b", positive=True)
    x = sp.Symbol("x", real=True)
    t = sp.Symbol("t", real=True)
    assert square_root(4 * a**2 / b**4) == 2 * a / b**2
    assert square_root(a**2 + 1) is None
    assert square_root(2 * a**2) is None
    assert square_root(x**2) is None
    assert square_root(x**4) == x**2
    assert sp.expand(square_root((t**2 - 1) ** 2, t)) == 1 - t**2


@pytest.mark.parametrize("sign", [-1, 1])
def test_a_conic_goes_there_and_back(sign):
    a, b = sp.symbols("a b", positive=True)
    s = sp.Symbol("s", real=True)
    root = sp.sqrt(1 + sign * s**2 / a**2)
    conic = conic_of(root.base)
    assert (conic.symbol, conic.sign) == (s, sign)
    assert conic.size**2 == a**2
    value = (3 * s * root + b) / (root**3 + s**2)
    there = conic.rational(value)
    assert all(power.exp.is_Integer for power in there.atoms(sp.Pow))
    back = conic.restored(there)
    numbers = {a: 2.0, b: 0.7, s: -1.3}
    assert abs(float((back - value).subs(numbers))) < 1e-12
