"""Ready laws: conservation and published limits."""

import numpy as np
import pytest
import sympy

import plasmalin as plin
from plasmalin import curl, laws, partial_t


def test_friction_conserves_momentum_identically():
    model = plin.FluidModel("x")
    pairs = [(model.scalar(f"n_{s}", background=f"n_{s}0"), model.vector(f"v_{s}")) for s in "ab"]
    alpha = model.parameter("alpha") * (1 + plin.norm(pairs[0][1] - pairs[1][1]))
    (na, va), (nb, vb) = pairs
    total = laws.friction(na, va, nb, vb, alpha) + laws.friction(nb, vb, na, va, alpha)
    swapped = total.xreplace({plin.norm(vb - va): plin.norm(va - vb)})
    assert sympy.expand(swapped) == 0
    work = plin.dot(laws.friction(na, va, nb, vb, 1), va - vb)
    assert laws.frictional_heat(na, va, nb, vb, 1) == na * nb * plin.dot(va - vb, va - vb)
    assert work != 0


def test_grain_charge_conserves_total_charge():
    """What the grains gain the electrons and ions lose: charge continuity follows from the sum of the laws."""
    model = plin.FluidModel("x", axes="x")
    e = model.constants("e")
    ne, ni = model.scalar("n_e", background="n_e0"), model.scalar("n_i", background="n_i0")
    nd, q = model.scalar("n_d", background="n_d0"), model.scalar("q_d", background="q_0")
    v = model.vector("v")
    a, b = model.parameters("a b", positive=True)
    into_e, into_i = -a * ne * q, b * ni
    sink_e, sink_i = laws.grain_sinks(nd, into_e, into_i, e)
    total = -e * sink_e + e * sink_i + nd * (into_e + into_i)
    assert sympy.expand(total) == 0
    law = laws.grain_charge(model, q, v, into_e, into_i)
    assert law.name == "q_d charging"


def beam(speed):
    """A cold relativistic electron beam over fixed ions, with Maxwell's laws."""
    model = plin.FluidModel("relativistic beam")
    n0, c = model.parameters("n_0 c", positive=True)
    electric, magnetic = model.vector("E"), model.vector("B")
    n = model.scalar("n", background=n0)
    v = model.vector("v", background=(0, 0, "u") if speed else 0)
    laws.continuity(model, n, v)
    force = laws.lorentz_force(n, -1, electric=electric, magnetic=magnetic, v=v)
    laws.relativistic_momentum(model, n, v, mass=1, c=c, force=force)
    laws.maxwell(model, electric, magnetic, -n * v, mu_0=1 / c**2, epsilon_0=1)
    return model.linearize(assume=["Ampere"] if speed else []).plane_wave(("k_x", 0, "k_z"))


def test_lorentz_invariance():
    """(omega, k) of a moving beam are the Lorentz transforms of those at rest (density n_0 gamma)."""
    u, c = 0.6, 1.0
    gamma = 1 / np.sqrt(1 - u**2 / c**2)
    kx, kz, n0 = 0.7, 0.4, 1.0
    at_rest = beam(False).roots({"n_0": n0, "c": c}, k_x=kx, k_z=kz).omega
    moving = beam(True)
    for omega in at_rest:
        boosted = gamma * (omega.real + u * kz)
        k_boosted = gamma * (kz + u * omega.real / c**2)
        found = moving.roots({"n_0": n0 * gamma, "c": c, "u": u}, k_x=kx, k_z=k_boosted).omega
        assert np.abs(found - boosted).min() < 1e-12 * abs(boosted)


def test_longitudinal_and_transverse_mass():
    """gamma^3 along the flow, gamma across it (Akhiezer and Polovin 1956, from memory)."""
    values = {"n_0": 1.0, "c": 1.0, "u": 0.6}
    wave = beam(True)
    roots = wave.roots(values, k_x=0.0, k_z=1e-9).omega
    gamma = 1.25
    longitudinal, transverse = gamma**-1.5, gamma**-0.5
    assert np.abs(roots - longitudinal).min() < 1e-6
    assert np.abs(roots - transverse).min() < 1e-6


def test_double_adiabatic_firehose():
    """Stable below p_par − p_perp = B²/mu_0 along B: omega² = k² (v_A² − (p_par − p_perp)/rho); Chew, Goldberger and Low (1956)."""
    model = plin.FluidModel("double adiabatic")
    rho0, mu0 = model.parameters("rho_0 mu_0", positive=True)
    rho, v = model.scalar("rho", background=rho0), model.vector("v")
    b = model.vector("B", background=(0, 0, model.parameter("B_0", positive=True)))
    par, perp = model.scalar("p_par", background="p_1"), model.scalar("p_perp", background="p_2")
    laws.continuity(model, rho, v)
    tensor = laws.double_adiabatic(model, rho, v, b, par, perp)
    laws.momentum(model, rho, v, mass=1, force=laws.magnetic_force(b, mu0), pressure=tensor)
    laws.induction(model, b, v)
    linear = model.linearize()
    assert linear.audit().passed
    values = {"rho_0": 2.0, "mu_0": 1.0, "B_0": 1.5, "p_1": 0.7, "p_2": 0.2}
    roots = linear.plane_wave("z").roots(values, k=3.0).omega
    expected = 3.0 * np.sqrt(1.5**2 / 2.0 - 0.5 / 2.0)
    assert (np.abs(np.abs(roots) - expected) < 1e-12).sum() == 4
    unstable = linear.plane_wave("z").roots({**values, "p_1": 3.2}, k=3.0)
    assert unstable.imag.max() == pytest.approx(3.0 * np.sqrt((3.0 - 2.25) / 2.0), rel=1e-12)


def test_landau_closure_damps():
    """The three-moment closure damps a wave that the adiabatic law leaves undamped."""
    model = plin.FluidModel("three moments", axes="x")
    n0, t0, m = model.parameters("n_0 T_0 m", positive=True)
    n, v, t = model.scalar("n", background=n0), model.vector("v"), model.scalar("T", background=t0)
    laws.continuity(model, n, v)
    laws.momentum(model, n, v, mass=m, pressure=n * t)
    loss = laws.landau_heat_loss(t, n0, sympy.sqrt(t0 / m))
    laws.energy(model, t, n, v, 3, heating=-loss)
    linear = model.linearize()
    assert linear.audit().passed
    roots = linear.plane_wave("x").roots({"n_0": 1.0, "T_0": 1.0, "m": 1.0}, k=1.0)
    assert (roots.imag < 0).all()


def test_bohm_dispersion():
    """omega² = omega_p² + hbar² k⁴ / 4 m² (D. Bohm and D. Pines 1953, Phys. Rev. 92, 609, from memory)."""
    model = plin.FluidModel("quantum", axes="x")
    n0, m, hbar = model.parameters("n_0 m hbar", positive=True)
    n, v, phi = model.scalar("n", background=n0), model.vector("v"), model.scalar("phi")
    laws.continuity(model, n, v)
    force = laws.lorentz_force(n, -1, potential=phi) + laws.bohm_force(n, m, hbar)
    laws.momentum(model, n, v, mass=m, force=force)
    laws.poisson(model, phi, n0 - n, epsilon_0=1)
    wave = model.linearize().plane_wave("x")
    (k,) = wave.wave_symbols
    square = sympy.solve(wave.relation.as_expr(), wave.omega)[0] ** 2
    assert sympy.simplify(square - n0 / m - hbar**2 * k**4 / (4 * m**2)) == 0


def test_magnetic_force_needs_a_velocity():
    with pytest.raises(plin.DeclarationError, match="needs both magnetic= and v="):
        laws.lorentz_force(sympy.Symbol("n"), 1, magnetic=plin.components(0, 0, 1))


def conducting(memory):
    """Light in a conductor, its current a law of its own or a multiplier with memory."""
    model = plin.FluidModel("light in a conductor")
    eps0, c, sigma, tau = model.parameters("eps0 c sigma_0 tau", positive=True)
    electric, magnetic = model.vector("E"), model.vector("B")
    model.law("Faraday", partial_t(magnetic), -curl(electric))
    if memory:
        current = plin.multiplier(electric, sigma / (1 - sympy.I * plin.omega * tau))
    else:
        current = model.vector("J")
        model.law("Ohm", tau * partial_t(current) + current, sigma * electric)
    model.law("Ampere", partial_t(electric), c**2 * curl(magnetic) - current / eps0)
    return model.linearize().plane_wave("x").relation


def test_a_conductivity_that_depends_on_the_frequency():
    """sigma_0/(1 − i ω τ) is the law τ dJ/dt + J = sigma_0 E (Drude 1900, Ann. Phys. 306, 566; from memory)."""
    with_memory, with_law = conducting(True), conducting(False)
    assert {f.polynomial for f in with_memory.factors if f.polynomial.lowest == 0} == {
        f.polynomial for f in with_law.factors if f.polynomial.lowest == 0
    }
