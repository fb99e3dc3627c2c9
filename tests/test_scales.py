"""Relations in chosen scales: exact, in groups that are dimensionless, readable and no more than are needed."""

import numpy as np
import pytest
import sympy
from hypothesis import given, settings
from hypothesis import strategies as st
from sympy import Symbol, cos, sin

import plasmalin as plin
from plasmalin import advect, cross, div, grad, laplacian, partial_t
from plasmalin.declare.units import NONE, product

M_E, M_P = plin.constants.m_e, plin.constants.m_p
PLASMA = {
    "omega_pe": "sqrt(n_e0*e^2/(epsilon_0*m_e))",
    "lambda_De": "sqrt(epsilon_0*T_e/(n_e0*e^2))",
    "c": "1/sqrt(mu_0*epsilon_0)",
    "Omega_i": "e*B_0z/m_i",
    "v_A": "B_0z/sqrt(mu_0*n_e0*m_i)",
}


def some(*names):
    return {name: PLASMA[name] for name in names}


def two_fluids(**species):
    plasma = plin.mixture(
        [
            plin.Species("e", -1, M_E, 1e16, temperature_eV=2.0, **species),
            plin.Species("i", 1, M_P, 1e16, temperature_eV=0.1, collision_frequency=3.0),
        ],
        axes="x",
    )
    relation = plasma.linearize().plane_wave("x").relation
    return relation.substitute({"n_i0": plasma.symbols["n_e0"]})


def magnetized(direction="z"):
    plasma = plin.mixture(
        [plin.Species("e", -1, M_E, 1e16), plin.Species("i", 1, M_P, 1e16)],
        field="electromagnetic",
        magnetic_field=(0, 0, 0.1),
    )
    relation = plasma.linearize().plane_wave(direction).relation
    return relation.substitute({"n_i0": plasma.symbols["n_e0"]})


def upper_hybrid(**plane):
    """Warm electrons across a field whose sign is open: omega^2 = omega_pe^2 + Omega_e^2 + 3 k^2 T/m."""
    model = plin.FluidModel("upper hybrid")
    n = model.scalar("n", background="n_0", unit="m**-3")
    v, phi = model.vector("v", unit="m/s"), model.scalar("phi", unit="V")
    e, eps, m = model.constants("e epsilon_0 m_e")
    b, t = model.parameter("B_0", unit="T"), model.parameter("T", positive=True, unit="eV")
    n_0 = model.parameter("n_0", positive=True)
    model.law("continuity", partial_t(n) + div(n * v))
    push = e * n * grad(phi) - e * n * cross(v, plin.components(0, 0, b)) - 3 * t * grad(n)
    model.law("momentum", m * n * (partial_t(v) + advect(v, v)), push)
    model.law("Poisson", eps * laplacian(phi), e * (n - n_0))
    return model.linearize().plane_wave(**plane or {"direction": "x"}).relation


def mhd(**plane):
    model = plin.FluidModel("resistive MHD")
    rho = model.scalar("rho", background="rho_0", unit="kg/m^3")
    v, p = model.vector("v"), model.scalar("p", background="p_0", unit="Pa")
    b = model.vector("B", background=(0, 0, "B_0"), unit="T")
    mu, (gamma, eta) = model.constants("mu_0"), model.parameters("gamma eta", positive=True)
    model.parameters("rho_0 p_0", positive=True)
    plin.laws.continuity(model, rho, v)
    force = -grad(p) + plin.laws.magnetic_force(b, mu)
    model.law("momentum", rho * (partial_t(v) + advect(v, v)), force)
    plin.laws.adiabatic_pressure(model, p, v, gamma)
    plin.laws.induction(model, b, v, resistivity=eta, mu_0=mu)
    return model.linearize().plane_wave(**plane).relation


ALFVEN = {"time": "L*sqrt(mu_0*rho_0)/B_0", "length": "L"}
CASES = {
    "two fluids": (two_fluids, {"time": "1/omega_pe", "length": "lambda_De", "where": some("omega_pe", "lambda_De")}),
    "two fluids, drift": (
        lambda: two_fluids(drift=(1e5,)),
        {"time": "1/omega_pe", "length": "lambda_De", "where": some("omega_pe", "lambda_De")},
    ),
    "magnetized, electron scales": (
        magnetized,
        {"time": "1/omega_pe", "length": "c/omega_pe", "where": some("omega_pe", "c")},
    ),
    "magnetized, ion scales": (
        magnetized,
        {"time": "1/Omega_i", "length": "v_A/Omega_i", "where": some("Omega_i", "v_A")},
    ),
    "upper hybrid": (upper_hybrid, {"time": "m_e/(e*B_0)", "length": "sqrt(T*m_e)/(e*B_0)"}),
    "a scale that is no monomial": (
        upper_hybrid,
        {
            "time": "1/w_uh",
            "length": "sqrt(T/m_e)/w_uh",
            "where": {"w_uh": "sqrt(n_0*e^2/(epsilon_0*m_e) + (e*B_0/m_e)^2)"},
        },
    ),
    "an angle and a number": (
        lambda: upper_hybrid(angle="theta"),
        {"time": "2/sqrt(n_0*e^2/(epsilon_0*m_e))", "length": "sqrt(T*m_e)/(e*B_0)"},
    ),
    "MHD, two wave numbers": (lambda: mhd(direction=("k_x", 0, "k_z")), ALFVEN),
    "MHD, an angle": (lambda: mhd(angle="theta"), ALFVEN),
}  # fmt: skip


@pytest.fixture(scope="module", params=CASES)
def case(request):
    make, scales = CASES[request.param]
    relation = make()
    return relation, relation.normalise(**scales)


def test_the_groups_put_back_give_the_relation(case):
    """Exactly, up to a factor that holds neither omega nor the wave numbers."""
    relation, scaled = case
    ratio = sympy.factor(sympy.cancel(sympy.together(scaled.restore() / relation.as_expr())))
    waves = {s for e in scaled.waves.values() for s in e.free_symbols} & {
        Symbol("omega"), *(Symbol(k, real=True) for k in ("k", "k_x", "k_z", "theta")),
    }  # fmt: skip
    assert ratio != 0
    assert not ratio.free_symbols & waves


def test_every_group_is_dimensionless(case):
    relation, scaled = case
    known = relation._dimensions.checked()
    for expr in scaled.groups.values():
        total = NONE
        for base, power in expr.as_powers_dict().items():
            if not base.is_number and str(base) != "L":
                total = product(total, known.of(str(base)), sympy.Rational(power))
        lengths = expr.as_powers_dict().get(Symbol("L", positive=True), 0)
        assert total == (-lengths, *NONE[1:])


def test_only_scaled_symbols_are_left(case):
    _, scaled = case
    named = {*scaled.waves, *scaled.groups, Symbol("theta", real=True)}
    assert scaled.expr.free_symbols <= named
    assert scaled.polynomial.gen in scaled.waves
    assert scaled.relation.degree == case[0].degree


def test_it_prints(case):
    _, scaled = case
    text = str(scaled)
    assert text.startswith(str(scaled.relation))
    assert "ω̂ = " in text
    assert r"\hat{\omega}" in scaled.latex()
    shown = scaled._repr_latex_()
    assert shown is None or shown.startswith("$\\displaystyle")
    assert "NormalizedRelation" in repr(scaled)


@settings(max_examples=25, deadline=None)
@given(st.lists(st.floats(0.1, 10.0), min_size=12, max_size=12), st.floats(0.1, 3.0))
def test_roots_scale(numbers, k):
    """The roots of the scaled relation at the groups' values are the roots times the time scale."""
    relation, scaled = SOLVED
    symbols = sorted(
        relation.as_expr().free_symbols - {Symbol("omega"), Symbol("k", real=True)}, key=str
    )
    given = dict(zip(symbols, numbers, strict=False))
    plain = relation.as_expr().subs(given).subs(Symbol("k", real=True), k)
    groups = {s: e.subs(given) for s, e in scaled.groups.items()}
    wave = {s: e.subs(given).subs(Symbol("k", real=True), k) for s, e in scaled.waves.items()}
    time = float(scaled.time.subs(given))
    hat = Symbol("omegahat")
    after = scaled.expr.subs(groups).subs({s: e for s, e in wave.items() if s != hat})
    mine = np.roots([complex(c) for c in sympy.Poly(after, hat).all_coeffs()])
    theirs = np.roots([complex(c) for c in sympy.Poly(plain, Symbol("omega")).all_coeffs()]) * time
    distance = np.abs(mine[:, None] - theirs[None, :])
    assert distance.min(axis=1).max() < 1e-6 * np.abs(theirs).max()


SOLVED = (
    two_fluids(),
    two_fluids().normalise(
        time="1/omega_pe", length="lambda_De", where=some("omega_pe", "lambda_De")
    ),
)


# The groups that a reader expects -----------------------------------------------------------------


def of(scaled):
    return {s.name: str(e) for s, e in scaled.groups.items()}


def test_ratios_of_like_parameters_first():
    assert of(SOLVED[1]) == {
        "mu": "m_e/m_i",
        "tau": "T_i/T_e",
        "nuhat_i": "sqrt(epsilon_0)*sqrt(m_e)*nu_i/(e*sqrt(n_e0))",
        "gamma_e": "gamma_e",
        "gamma_i": "gamma_i",
    }


def test_warm_electrons_and_cold_ions():
    """omega^4 - omega^2 (1 + mu + gamma k^2) + mu gamma k^2 = 0: Langmuir and ion sound waves in plasma units.

    Langmuir 1928, Proc. Natl. Acad. Sci. 14, 627, and Bohm and Gross 1949, Phys. Rev. 75, 1851 (from memory) are its
    limits: omega^2 = 1 + gamma k^2 for mu -> 0, and omega^2 = mu gamma k^2/(1 + gamma k^2).
    """
    relation = two_fluids().substitute({"T_i": 0, "nu_i": 0})
    scaled = relation.normalise(
        time="1/omega_pe", length="lambda_De", where=some("omega_pe", "lambda_De")
    )
    hat, k, (mu, gamma) = Symbol("omegahat"), Symbol("khat", real=True), scaled.groups
    expected = hat**4 - hat**2 * (1 + mu + gamma * k**2) + mu * gamma * k**2
    assert sympy.expand(scaled.expr - expected) == 0
    light = scaled.relation.substitute({mu: 0})
    assert sympy.expand(light.as_expr() - hat**2 * (hat**2 - 1 - gamma * k**2)) == 0


def test_beta_of_mhd():
    """Slow and fast waves in Alfvén units hold beta/2 and gamma only (ideal MHD; Alfvén 1942 for the shear wave)."""
    ideal = mhd(angle="theta").substitute({"eta": 0})
    scaled = ideal.normalise(**ALFVEN)
    assert of(scaled) == {"beta": "2*mu_0*p_0/B_0**2", "gamma": "gamma"}
    beta, gamma = scaled.groups
    hat, k, theta = Symbol("omegahat"), Symbol("khat", real=True), Symbol("theta", real=True)
    sound = beta * gamma / 2
    shear = hat**2 - k**2 * cos(theta) ** 2
    pair = hat**4 - hat**2 * k**2 * (1 + sound) + sound * k**4 * cos(theta) ** 2
    ratio = sympy.cancel(
        scaled.expr.subs(sin(theta), sympy.sqrt(1 - cos(theta) ** 2)) / (hat**2 * shear * pair)
    )
    assert ratio.is_number


def test_omega_p_over_omega_c():
    scaled = magnetized().normalise(
        time="1/omega_pe", length="c/omega_pe", where=some("omega_pe", "c")
    )
    assert of(scaled) == {"mu": "m_e/m_i", "w_e": "sqrt(m_e)*sqrt(n_e0)/(B_0z*sqrt(epsilon_0))"}
    assert "(ω_pe/Ω_e)" in str(scaled)


def test_a_name_that_is_taken():
    model = plin.FluidModel("taken", axes="x")
    x, y = model.scalar("x", unit="m"), model.scalar("y", unit="m")
    a, b, mu = (
        model.parameter(n, positive=True, unit=u)
        for n, u in (("m_a", "kg"), ("m_b", "kg"), ("mu", "1/s"))
    )
    model.law("one", partial_t(x), a / b * mu * y)
    model.law("two", partial_t(y), -b / a * mu * (x + a / b * y))
    scaled = model.linearize().plane_wave("x").relation.normalise(time="1/mu", length="L")
    assert [s.name for s in scaled.groups] == ["mu_1"] or not scaled.groups
    assert not any(s.name == "mu" for s in scaled.expr.free_symbols)


# Errors -------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("given", "error", "message"),
    [
        ({"time": "L"}, plin.UnitError, "time='L' is L in m, not a time; give an expression in s"),
        (
            {"length": "p_0", "time": "eta/mu_0*rho_0/p_0"},
            plin.UnitError,
            "length='p_0' is p_0 in .*Pa.*not a length",
        ),
        ({"time": "1/omega_pe"}, plin.ReadError, "'omega_pe' is not declared"),
        (
            {"time": "sqrt(L*mu_0/eta*L*L*sqrt(mu_0*rho_0)/B_0)"},
            plin.UnitError,
            "'B_0' stands under a root and its sign",
        ),
        ({"time": "0"}, plin.UnitError, "is zero"),
        ({"time": 3.0}, plin.DeclarationError, "give the scale as text"),
        ({"where": {"v": 3.0}}, plin.DeclarationError, "where: give the definition of 'v' as text"),
        ({"time": "rho_0 + p_0"}, plin.UnitError, "terms of a sum differ"),
    ],
)
def test_scales_at_fault(given, error, message):
    with pytest.raises(error, match=message):
        mhd(angle="theta").normalise(**{**ALFVEN, **given})


def test_a_symbol_without_unit_is_named():
    relation = mhd(angle="theta").substitute({"eta": Symbol("q")})
    with pytest.raises(
        plin.UnitError, match=r"'q', and none follows.*model.parameter\('q', unit=...\)"
    ):
        relation.normalise(**ALFVEN)


def test_a_number_with_a_unit():
    with pytest.raises(plin.UnitError, match="a number that carries a unit needs a name"):
        mhd(angle="theta").substitute({"p_0": 3}).normalise(**ALFVEN)


def test_units_that_only_follow_from_constants():
    """Constants of nature alone fix every unit here."""
    model = plin.FluidModel("no unit declared", axes="x")
    n, v, phi = model.scalar("n", background="n_0"), model.vector("v"), model.scalar("phi")
    e, eps, m = model.constants("e epsilon_0 m_e")
    model.parameter("n_0", positive=True)
    model.law("continuity", partial_t(n) + div(n * v))
    model.law("momentum", m * (partial_t(v) + advect(v, v)), e * grad(phi))
    model.law("Poisson", eps * laplacian(phi), e * (n - model.symbols["n_0"]))
    relation = model.linearize().plane_wave("x").relation
    scaled = relation.normalise(time="sqrt(epsilon_0*m_e)/(e*sqrt(n_0))", length="L")
    assert scaled.expr == Symbol("omegahat") ** 2 - 1
