"""Ready laws: the same relations as laws declared by hand, conservation, and published limits."""

import numpy as np
import pytest
import sympy
from published import CASES

import plasmalin as plin
from plasmalin import laws


def same_relation(mine, theirs):
    """Equal in every coefficient, parameters matched by name."""
    names = {s.name: s for s in theirs.linear.symbols.values()} | {
        s.name: s for s in theirs.wave_symbols
    }
    renamed = {
        s: names[s.name]
        for s in (*mine.linear.symbols.values(), *mine.wave_symbols)
        if s.name in names
    }
    difference = mine.relation.as_expr().xreplace(renamed) - theirs.relation.as_expr()
    return sympy.expand(difference) == 0


def langmuir():
    model = plin.FluidModel("x", axes="x")
    e, me, eps0, n0, te, gamma = model.parameters("e me eps0 n0 Te_eV gamma", positive=True)
    n, v, phi = model.scalar("n", background=n0), model.vector("v"), model.scalar("phi")
    laws.continuity(model, n, v)
    force = laws.lorentz_force(n, -e, potential=phi)
    pressure = laws.polytropic_pressure(n, n0, e * te, gamma)
    laws.momentum(model, n, v, mass=me, force=force, pressure=pressure)
    laws.poisson(model, phi, -e * (n - n0), epsilon_0=eps0)
    return model.linearize().plane_wave("x")


def boltzmann():
    model = plin.FluidModel("x", axes="x")
    e, eps0, mi, n0, te, ti, gi = model.parameters("e eps0 mi n0 Te_eV Ti_eV gi", positive=True)
    n, v, phi = model.scalar("n_i", background=n0), model.vector("v_i"), model.scalar("phi")
    laws.continuity(model, n, v)
    force = laws.lorentz_force(n, e, potential=phi)
    laws.momentum(
        model, n, v, mass=mi, force=force, pressure=laws.polytropic_pressure(n, n0, e * ti, gi)
    )
    electrons = laws.boltzmann_density(n0, -1, te, phi)
    laws.poisson(model, phi, e * (n - electrons), epsilon_0=eps0)
    return model.linearize().plane_wave("x")


def upper_hybrid():
    model = plin.FluidModel("x")
    e, me, eps0, n0, te, gamma = model.parameters("e me eps0 n0 Te_eV gamma", positive=True)
    b = plin.components(0, 0, model.parameter("B0"))
    n, v, phi = model.scalar("n", background=n0), model.vector("v"), model.scalar("phi")
    laws.continuity(model, n, v)
    force = laws.lorentz_force(n, -e, potential=phi, magnetic=b, v=v)
    laws.momentum(
        model, n, v, mass=me, force=force, pressure=laws.polytropic_pressure(n, n0, e * te, gamma)
    )
    laws.poisson(model, phi, -e * (n - n0), epsilon_0=eps0)
    return model.linearize().plane_wave(("kx", 0, 0))


def mhd(**options):
    model = plin.FluidModel("x")
    mu0, rho0, p0, gamma = model.parameters("mu0 rho0 p0 gamma", positive=True)
    rho, p = model.scalar("rho", background=rho0), model.scalar("p", background=p0)
    v, b = model.vector("v"), model.vector("B", background=(0, 0, "B0"))
    laws.continuity(model, rho, v)
    laws.momentum(model, rho, v, mass=1, force=laws.magnetic_force(b, mu0), pressure=p)
    laws.adiabatic_pressure(model, p, v, gamma)
    hall = 0
    if "di" in options:
        di = model.parameter("di", positive=True)
        hall = di * sympy.sqrt(mu0 * rho0) / rho * laws.magnetic_force(b, mu0)
    laws.induction(model, b, v, hall=hall)
    return model.linearize()


def jeans():
    model = plin.FluidModel("x")
    big_g, rho0, cs, gamma = model.parameters("G rho0 cs gamma", positive=True)
    rho, psi, v = model.scalar("rho", background=rho0), model.scalar("psi"), model.vector("v")
    laws.continuity(model, rho, v)
    pressure = laws.polytropic_pressure(rho, rho0, cs**2 / gamma, gamma)
    laws.momentum(
        model, rho, v, mass=1, force=laws.gravity_force(rho, potential=psi), pressure=pressure
    )
    laws.self_gravity(model, psi, rho, big_g=big_g)
    return model.linearize(assume=["self-gravity"]).plane_wave("x")


def kirchhoff():
    model = plin.FluidModel("x")
    rho0, t0, rg, cv, mu, zeta, kappa = model.parameters(
        "rho0 T0 Rg cv mu zeta kappa", positive=True
    )
    rho, t, v = (
        model.scalar("rho", background=rho0),
        model.scalar("T", background=t0),
        model.vector("v"),
    )
    laws.continuity(model, rho, v)
    laws.momentum(
        model, rho, v, mass=1, force=laws.viscous_force(v, mu, zeta), pressure=rho * rg * t
    )
    # The energy law has T as an energy: with T in kelvin n T -> rho R_g T, gamma − 1 = R_g / c_v.
    laws.energy(model, t, rho, v, 1 + rg / cv, conductivity=kappa / rg)
    return model.linearize().plane_wave("x")


def em_wave():
    model = plin.FluidModel("x")
    e, me, n0, c, eps0 = model.parameters("e me n0 c eps0", positive=True)
    electric, magnetic = model.vector("E"), model.vector("B")
    n, v = model.scalar("n_e", background=n0), model.vector("v_e")
    laws.continuity(model, n, v)
    force = laws.lorentz_force(n, -e, electric=electric, magnetic=magnetic, v=v)
    laws.momentum(model, n, v, mass=me, force=force)
    laws.maxwell(model, electric, magnetic, -e * n * v, mu_0=1 / (eps0 * c**2), epsilon_0=eps0)
    return model.linearize().plane_wave("x")


TWICE = {
    "langmuir-bohm-gross": langmuir,
    "ion-acoustic-boltzmann-debye": boltzmann,
    "upper-hybrid-warm": upper_hybrid,
    "ideal-mhd-shear-fast-slow": lambda: mhd().plane_wave(("kx", 0, "kz")),
    "hall-mhd-parallel": lambda: mhd(di=True).plane_wave("z"),
    "jeans": jeans,
    "kirchhoff-stokes-sound": kirchhoff,
    "em-wave-unmagnetised": em_wave,
}


@pytest.mark.parametrize("name", TWICE)
def test_declared_twice(name):
    """By hand and by ready laws: identical relations."""
    assert same_relation(TWICE[name](), CASES[name]())


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
