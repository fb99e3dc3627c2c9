"""Published cases declared twice, by hand and by ready laws or a mixture: identical relations."""

import pytest
import sympy
from published import CASES
from published_more import CASES as MORE

import plasmalin as plin
from plasmalin import laws
from plasmalin.declare.reader import read_expression

ALL = CASES | MORE


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


# Further cases by ready laws ---------------------------------------------------------------------


def resistive_mhd():
    model = plin.FluidModel("x")
    mu0, rho0, p0, gamma, eta = model.parameters("mu0 rho0 p0 gamma eta", positive=True)
    rho, p = model.scalar("rho", background=rho0), model.scalar("p", background=p0)
    v, b = model.vector("v"), model.vector("B", background=(0, 0, "B0"))
    laws.mhd(model, rho, v, p, b, gamma=gamma, mu_0=mu0, resistivity=eta)
    return model.linearize().plane_wave("z")


def double_adiabatic():
    model = plin.FluidModel("x")
    rho0, b0, along, across = model.parameters("rho0 B0 ppar pperp", positive=True)
    rho, v = model.scalar("rho", background=rho0), model.vector("v")
    b = model.vector("B", background=(0, 0, b0))
    model.scalar("p_par", background=along)
    model.scalar("p_perp", background=across)
    laws.continuity(model, rho, v)
    tensor = laws.double_adiabatic(model, rho, v, b, "p_par", "p_perp")
    laws.momentum(model, rho, v, mass=1, force=laws.magnetic_force(b, 1), pressure=tensor)
    laws.induction(model, b, v)
    return model.linearize().plane_wave(("kx", 0, "kz"))


def ion_cyclotron():
    model = plin.FluidModel("x")
    te, ti, gi, wi = model.parameters("Te Ti gi Wi", positive=True)
    n, v, phi = model.scalar("n", background=1), model.vector("v"), model.scalar("phi")
    b = plin.components(0, 0, wi)
    force = laws.lorentz_force(n, 1, potential=phi, magnetic=b, v=v)
    pressure = laws.polytropic_pressure(n, 1, ti, gi)
    laws.continuity(model, n, v)
    laws.momentum(model, n, v, mass=1, force=force, pressure=pressure)
    laws.quasineutrality(model, n - laws.boltzmann_density(1, -1, te, phi))
    return model.linearize().plane_wave(("kx", 0, "kz"))


def neutral_drag():
    model = plin.FluidModel("x", axes="x")
    e, eps0, mi, n0, te, ti, gi = model.parameters("e eps0 mi n0 Te_eV Ti_eV gi", positive=True)
    nu = model.parameter("nu", positive=True)
    n, v, phi = model.scalar("n", background=n0), model.vector("v"), model.scalar("phi")
    force = laws.lorentz_force(n, e, potential=phi) + laws.neutral_friction(n, v, mi, nu)
    laws.continuity(model, n, v)
    pressure = laws.polytropic_pressure(n, n0, e * ti, gi)
    laws.momentum(model, n, v, mass=mi, force=force, pressure=pressure)
    laws.poisson(model, phi, e * (n - laws.boltzmann_density(n0, -1, te, phi)), epsilon_0=eps0)
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
    "resistive-mhd-alfven": resistive_mhd,
    "cgl-firehose": double_adiabatic,
    "electrostatic-ion-cyclotron": ion_cyclotron,
    "ion-acoustic-neutral-drag": neutral_drag,
}


@pytest.mark.parametrize("name", TWICE)
def test_declared_twice(name):
    """By hand and by ready laws: identical relations."""
    assert same_relation(TWICE[name](), ALL[name]())


# By the numbers of a mixture ---------------------------------------------------------------------

NAMES = {
    "e": "e",
    "epsilon_0": "eps0",
    "m_e": "me",
    "m_i": "mi",
    "n_e0": "n0",
    "n_i0": "n0",
    "B_0z": "B0",
}
NORMALIZED = {"e": 1, "epsilon_0": 1, "n_e0": 1, "n_i0": 1, "m_e": 1, "T_e": 1}
MIXED = {
    "lower-hybrid-perp": ({}, "xyz", ("kx", 0, 0), NAMES),
    "cold-electrostatic-oblique": ({}, "xyz", ("kx", 0, "kz"), NAMES),
    "r-and-l-waves": (
        {"field": "electromagnetic"},
        "xyz",
        "z",
        NAMES | {"mu_0": "1/(eps0*c^2)"},
    ),
    "two-fluid-langmuir-ion-acoustic": (
        {"temperature_eV": 1.0},
        "x",
        "x",
        NORMALIZED | {"m_i": "M", "T_i": "tau", "gamma_e": "ge", "gamma_i": "gi"},
    ),
}


@pytest.mark.parametrize("name", MIXED)
def test_by_mixture(name):
    """By hand and from numbers of two species: identical relations once the parameters are named alike."""
    options, axes, direction, names = MIXED[name]
    warm = {k: v for k, v in options.items() if k == "temperature_eV"}
    other = {k: v for k, v in options.items() if k not in warm}
    if axes == "xyz":
        other["magnetic_field"] = (0, 0, 1.0)
    species = [plin.Species("e", -1, 1.0, 1.0, **warm), plin.Species("i", 1, 2.0, 1.0, **warm)]
    mine = plin.mixture(species, axes=axes, **other).linearize().plane_wave(direction)
    theirs = ALL[name]()
    known = {s.name: s for s in (*theirs.linear.symbols.values(), *theirs.wave_symbols)}
    replaced = {s: known[s.name] for s in mine.wave_symbols}
    for old, new in names.items():
        if old in mine.linear.symbols:
            value = read_expression(new, known) if isinstance(new, str) else new
            replaced[mine.linear.symbols[old]] = value
    ratio = sympy.cancel(mine.relation.as_expr().xreplace(replaced) / theirs.relation.as_expr())
    assert not ratio.free_symbols & {theirs.omega, *theirs.wave_symbols}
    assert ratio != 0
