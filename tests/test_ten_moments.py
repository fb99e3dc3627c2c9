"""A full pressure tensor: the product of tensors with vectors, and published relations of the ten-moment closure."""

import numpy as np
import pytest
import sympy as sp

import plasmalin as plin
from plasmalin import advect, cross, curl, div, laws, outer, partial_t, transpose

NAMES = {"omega_p": "sqrt(n_0 e^2/(epsilon_0 m_e))", "c": "1/sqrt(epsilon_0 mu_0)"}


def electrons(field=0):
    """Electrons with two temperatures over fixed ions, with Maxwell's laws; an invented plasma."""
    model = plin.FluidModel("electrons with a pressure tensor")
    e, mass, eps0, mu0 = model.constants("e m_e epsilon_0 mu_0")
    n0, perp, par = model.parameters("n_0 T_perp T_par", positive=True)
    n, v = model.scalar("n", background=n0), model.vector("v")
    pressure = model.tensor(
        "P", background=((n0 * perp, 0, 0), (0, n0 * perp, 0), (0, 0, n0 * par))
    )
    electric, magnetic = model.vector("E"), model.vector("B", background=(0, 0, field))
    model.law("continuity", partial_t(n) + div(n * v))
    force = -div(pressure) - e * n * (electric + cross(v, magnetic))
    model.law("momentum", mass * n * (partial_t(v) + advect(v, v)), force)
    laws.pressure_tensor(model, "P", v, magnetic, charge=-e, mass=mass)
    model.law("Faraday", partial_t(magnetic), -curl(electric))
    model.law("Ampere", curl(magnetic), mu0 * (-e * n * v) + mu0 * eps0 * partial_t(electric))
    return model


@pytest.fixture(scope="module")
def along():
    return electrons().linearize().plane_wave("z")


# Basu 2002, Phys. Plasmas 9, 5131 (moment equations for the Weibel instability; from memory).
@pytest.mark.parametrize(
    "claim",
    [
        "omega^2 = omega_p^2 + 3 k^2 T_par/m_e",
        "omega^2 = c^2 k^2 + omega_p^2 (1 + (k^2 T_perp/m_e)/(omega^2 - k^2 T_par/m_e))",
    ],
)
def test_weibel_and_langmuir_waves(along, claim):
    assert along.check(claim, where=NAMES).kind == "factor"


def test_weibel_growth_needs_the_anisotropy(along):
    """Growth below k c = omega_p sqrt(T_perp/T_par − 1), none above."""
    values = {"n_0": 1e18, "T_perp": 4e-16, "T_par": 1e-16}
    edge = np.sqrt(3 * 1e18 * plin.constants.e**2 * plin.constants.mu_0 / plin.constants.m_e)
    growth = along.roots(values, k=edge * np.array([0.5, 0.999, 1.001])).imag.max(axis=1)
    assert (growth[:2] > 0).all()
    assert growth[2] == 0


def test_the_tensor_gyrates_twice_as_fast():
    """Without coupling, at k -> 0, the transverse part of P turns at twice the gyrofrequency."""
    values = {"n_0": 1e6, "T_perp": 1e-20, "T_par": 1e-20, "B_0": 0.01}
    roots = electrons("B_0").linearize().plane_wave("z").roots(values, k=1e-6)
    gyration = plin.constants.e * values["B_0"] / plin.constants.m_e
    for times in (-2, -1, 1, 2):
        assert np.abs(roots.omega - times * gyration).min() < 1e-3 * gyration


def test_the_linearization_is_audited():
    assert electrons("B_0").linearize().audit().passed


def dyads(product):
    """A tensor driven by a product of two flows and a third vector, all with backgrounds."""
    model = plin.FluidModel("dyads")
    u, w = model.vector("u", background=(1, "a", 2)), model.vector("w", background=("c", 3, 1))
    b = model.vector("b", background=(0, 1, "d"))
    for field in (u, w, b):
        model.law(field.name, partial_t(field))
    model.law("t", partial_t(model.tensor("t", symmetric=False)), product(u, w, b))
    return model.linearize(assume=["t"])


@pytest.mark.parametrize(
    ("whole", "parts"),
    [
        (lambda u, w, b: cross(outer(u, w), b), lambda u, w, b: outer(u, cross(w, b))),
        (lambda u, w, b: cross(b, outer(u, w)), lambda u, w, b: outer(cross(b, u), w)),
        (lambda u, w, b: cross(b, outer(u, w)), lambda u, w, b: -transpose(cross(outer(w, u), b))),
    ],
)
def test_products_of_tensors_with_vectors(whole, parts):
    one, other = dyads(whole), dyads(parts)
    assert one.audit().passed
    difference = one.plane_wave("z").matrix - other.plane_wave("z").matrix
    assert difference.expand() == sp.zeros(*difference.shape)


def test_a_tensor_times_a_tensor_has_no_place():
    model = plin.FluidModel("two tensors")
    t = model.tensor("t")
    with pytest.raises(plin.RankError, match="rank above 2"):
        cross(t, t)
