"""What the background carries and what its laws give: net charge and current, drifts with the law that balances them."""

import sympy
from published import CASES
from published_more import CASES as MORE

import plasmalin as plin
from plasmalin import Species, laws

E, ME, U = plin.constants.e, plin.constants.m_e, plin.constants.u


def test_pedersen_and_hall_drift():
    """u = (nu (q/m) E, −Omega (q/m) E)/(nu^2 + Omega^2) for E along x, B along z (Chapman 1956, Nuovo Cimento 4, 1385, from memory)."""
    ion = Species("i", 1, 16 * U, 1e11, drift="balance", collision_frequency=2e3)
    electron = Species("e", -1, ME, 1e11, drift="balance")
    plasma = plin.mixture([ion, electron], magnetic_field=(0, 0, 5e-5), electric_field=(0.01, 0, 0))
    background = plasma.linearize().background
    e, m, nu, b, field = (plasma.symbols[s] for s in ("e", "m_i", "nu_i", "B_0z", "E_0x"))
    gyro = e * b / m
    scale = e / m * field / (nu**2 + gyro**2)
    x, y = (background.drifts[plasma.symbols[f"u_i_{a}"]] for a in "xy")
    assert sympy.simplify(x - nu * scale) == 0
    assert sympy.simplify(y + gyro * scale) == 0
    assert background.drifts[plasma.symbols["u_e_y"]] == -field / b
    text = str(background)
    assert "Drift u_e_y = −E_0x/B_0z (balanced in e momentum)" in text
    assert "Net charge (in Poisson): −e n_e0 + e n_i0" in text
    assert "Net current (in Poisson): " in text


def test_net_current_in_amperes_law_and_by_fluxes():
    background = MORE["filamentation-cold-beams"]().linear.background
    (current,) = background.sources
    assert (current.what, current.field, current.value) == ("current", "B", 0)
    charge, current = CASES["buneman-electron-ion"]().linear.background.sources
    assert (charge.what, charge.field, charge.value) == ("charge", "phi", 0)
    assert str(current.value) == "components(-V)"


def test_like_attracts_like_is_mass():
    (mass,) = CASES["jeans"]().linear.background.sources
    assert mass.what == "mass"
    assert str(mass.value) == "4*pi*G*rho0"


def test_charge_beside_div_e_and_in_quasineutrality():
    model = plin.FluidModel("two ways", axes="x")
    e, eps0, m = model.parameters("e epsilon_0 m", positive=True)
    electric = model.vector("E")
    charge = 0
    for s, q in (("a", e), ("b", -2 * e)):
        n = model.scalar(f"n_{s}", background=model.parameter(f"n_{s}0", positive=True))
        v = model.vector(f"v_{s}", background=(f"u_{s}",))
        laws.continuity(model, n, v)
        laws.momentum(model, n, v, mass=m, force=laws.lorentz_force(n, q, electric=electric))
        charge += q * n
    model.law("Gauss", eps0 * plin.div(electric), charge)
    p = model.symbols
    expected = e * p["n_a0"] - 2 * e * p["n_b0"]
    current = e * p["n_a0"] * p["u_a"] - 2 * e * p["n_b0"] * p["u_b"]
    gauss = model.linearize().background.sources
    assert [s.value for s in gauss] == [expected, plin.components(current)]
    model.remove_law("Gauss")
    laws.quasineutrality(model, charge)
    neutral = model.linearize().background.sources
    assert [s.value for s in neutral] == [expected, plin.components(current)]


def test_drifts_that_are_not_linear_are_left_as_conditions():
    """Drag by |v| v: nothing is claimed."""
    model = plin.FluidModel("turbulent drag", axes="x")
    g, c, m = model.parameters("g c m", positive=True)
    n, v = model.scalar("n", background="n_0"), model.vector("v", background=("u",))
    laws.continuity(model, n, v)
    drag = -c * n * plin.norm(v) * v
    laws.momentum(model, n, v, mass=m, force=drag + n * plin.components(g))
    background = model.linearize().background
    assert background.drifts == {}
    assert "Drift" not in str(background)
    assert background.sources == ()


def test_a_heat_law_is_no_charge():
    """lap(T) beside a source is not the law of a potential: no force comes from grad T alone."""
    model = plin.FluidModel("steady heat", axes="x")
    chi, q = model.parameters("chi q", positive=True)
    n, v, t = model.scalar("n", background="n_0"), model.vector("v"), model.scalar("T")
    laws.continuity(model, n, v)
    laws.momentum(model, n, v, mass=1, pressure=n * t)
    model.law("heat", chi * plin.laplacian(t), q * (n - model.symbols["n_0"]))
    assert model.linearize().background.sources == ()
