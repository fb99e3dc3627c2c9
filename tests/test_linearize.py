"""The ledger is the computation: orders, fates, invariants, backgrounds."""

import dataclasses

import pytest
import sympy
from hypothesis import given, settings
from hypothesis import strategies as st

import plasmalin as plin
from plasmalin import advect, cross, curl, div, dot, grad, laplacian, multiplier, norm, partial_t
from plasmalin.declare.fields import Background, Perturbation
from plasmalin.linearize.ledger import Ledger
from plasmalin.linearize.split import Remainder, first_order_factors


def warm_electrons():
    model = plin.FluidModel("warm electrons over fixed ions", axes="x")
    n = model.scalar("n_e", background="n_0")
    v = model.vector("v_e", background=0)
    phi = model.scalar("phi")
    e, eps0, m = model.constants("e epsilon_0 m_e")
    n0, t, gamma = model.parameters("n_0 T_e gamma_e", positive=True)
    model.law("electron continuity", partial_t(n) + div(n * v), 0)
    pressure = n0 * t * (n / n0) ** gamma
    inertia = m * n * (partial_t(v) + advect(v, v))
    model.law("electron momentum", inertia, e * n * grad(phi) - grad(pressure))
    model.law("Poisson", eps0 * laplacian(phi), e * (n - n0))
    return model


def test_equations_in_vector_form():
    model = warm_electrons()
    equations = model.linearize().equations
    n, v, phi = (f.perturbation for f in model.fields.values())
    s = model.symbols
    assert equations["electron continuity"].lhs == partial_t(n) + s["n_0"] * div(v)
    momentum = equations["electron momentum"]
    assert momentum.lhs == s["m_e"] * s["n_0"] * partial_t(v)
    assert momentum.rhs == s["e"] * s["n_0"] * grad(phi) - s["gamma_e"] * s["T_e"] * grad(n)
    assert "m_e n_0 ∂_t ṽ_e" in str(equations)
    assert r"\tilde{\mathbf{v}}_{e}" in equations._repr_html_()


def test_ledger_tells_fates_apart():
    ledger = warm_electrons().linearize().ledger
    text = str(ledger.of("electron momentum"))
    assert "dropped: product of perturbations" in text
    assert "vanishes: derivative of a uniform background" in text
    assert "vanishes: the background is zero" in text
    assert "order 1   kept" in text
    assert {p.fate for p in ledger} == {"kept", "dropped", "vanishes", "balance"}
    assert all(p.order == 1 for p in ledger.with_fate("kept"))
    assert "<table>" in ledger._repr_html_()


def whole(expr):
    """A raw piece with perturbation = field − background, remainders written out."""
    while expr.atoms(Remainder):
        expr = expr.xreplace({r: r.exact for r in expr.atoms(Remainder)})
    parts = {p: p.field - Background(p.field) for p in expr.atoms(Perturbation)}
    return expr.xreplace(parts).doit()


def scalar_laws(n, phi, t, gamma):
    leaves = st.sampled_from(
        [n, phi, t, n * phi, n**gamma, sympy.exp(phi / t), 1 / n, sympy.sqrt(n)]
    )

    def grow(inner):
        pair = st.tuples(inner, inner)
        return st.one_of(
            pair.map(lambda p: p[0] + p[1]),
            pair.map(lambda p: p[0] * p[1]),
            inner.map(lambda x: sympy.exp(x / t)),
            inner.map(lambda x: x**3),
        )

    return st.recursive(leaves, grow, max_leaves=4)


@settings(max_examples=40, deadline=None)
@given(st.data())
def test_pieces_of_all_orders_sum_to_the_law(data):
    model = plin.FluidModel("algebra", axes="x")
    n, phi = model.scalar("n", background="n_0"), model.scalar("phi", background="p")
    t, gamma = model.parameters("T gamma", positive=True)
    drawn = data.draw(scalar_laws(n, phi, t, gamma)) + n
    law = model.law("L", drawn)
    model.law("M", partial_t(phi), n)
    ledger = model.linearize(assume=["L", "M"]).ledger.of("L")
    total = sum(whole(p.raw) for p in ledger)
    numbers = {n: 1.3, phi: 0.4, t: 0.7, gamma: 1.6}
    numbers |= {Background(n): 1.1, Background(phi): 0.3}
    own = {f: numbers[f] for f in (n, phi)}
    plain = {s: numbers[s] for s in (t, gamma)}
    difference = (total - law.lhs).xreplace({**numbers, **own, **plain})
    scale = abs(law.lhs.xreplace(numbers).evalf())
    assert abs(difference.evalf()) < 1e-10 * max(scale, 1)


@settings(max_examples=40, deadline=None)
@given(st.data())
def test_kept_pieces_hold_one_first_order_factor(data):
    model = plin.FluidModel("invariant")
    n = model.scalar("n", background="n_0")
    v = model.vector("v", background=("u", 0, "w"))
    b = model.vector("B", background=(0, 0, "B_0"))
    terms = [
        cross(curl(b), b), n * advect(v, v), grad(laplacian(sympy.sqrt(n)) / sympy.sqrt(n)),
        norm(v) * n * v, curl(cross(v, b)) / n, grad(n ** sympy.Rational(5, 3)), v * dot(v, b) * n,
        multiplier(grad(n), plin.k_abs), plin.components(n * dot(v, v), 0, n), cross(v, cross(v, b)),
    ]  # fmt: skip
    chosen = data.draw(st.lists(st.sampled_from(terms), min_size=1, max_size=4))
    model.law("n", partial_t(n) + div(n * v))
    model.law("v", partial_t(v), sum(chosen, b * n))
    model.law("B", partial_t(b), curl(cross(v, b)))
    linear = model.linearize(assume=["v"])
    for piece in linear.ledger.with_fate("kept"):
        assert first_order_factors(piece.value) == 1
    assert linear.audit(seed=data.draw(st.integers(0, 99))).passed


def test_equilibrium_is_a_condition():
    model = plin.FluidModel("two densities", axes="x")
    a, b, phi = model.scalar("n_a", "n_a0"), model.scalar("n_b", "n_b0"), model.scalar("phi")
    model.law("a", partial_t(a), laplacian(phi))
    model.law("b", partial_t(b), laplacian(phi))
    model.law("Poisson", laplacian(phi), a - b)
    linear = model.linearize()
    s = model.symbols
    (condition,) = linear.conditions
    assert (
        sympy.expand(condition.lhs - (s["n_a0"] - s["n_b0"]))
        * sympy.expand(condition.lhs + (s["n_a0"] - s["n_b0"]))
        == 0
    )
    assert "Poisson: 0 = n_a0 − n_b0" in str(linear.background)


def gravity(law):
    model = plin.FluidModel("gravitating gas", axes="x")
    rho, psi = model.scalar("rho", background="rho_0"), model.scalar("psi")
    v, big_g = model.vector("v"), model.parameter("G", positive=True)
    cs = model.parameter("c_s", positive=True)
    model.law("continuity", partial_t(rho) + div(rho * v))
    model.law("momentum", rho * partial_t(v), -(cs**2) * grad(rho) - rho * grad(psi))
    model.law("gravity", *law(rho, psi, big_g))
    return model


def single(rho, psi, big_g):
    return laplacian(psi), 4 * sympy.pi * big_g * rho


def multiplied(rho, psi, big_g):
    return rho * laplacian(psi), 4 * sympy.pi * big_g * rho**2


@pytest.mark.parametrize("law", [single, multiplied])
def test_contradicted_background(law):
    with pytest.raises(plin.BackgroundError, match=r"law 'gravity' leaves .*assume=\['gravity'\]"):
        gravity(law).linearize()


def test_multiplying_a_law_that_the_background_contradicts_changes_the_relation():
    first, second = (
        gravity(law).linearize(assume=["gravity"]).plane_wave("x").relation.as_expr()
        for law in (single, multiplied)
    )
    assert sympy.expand(first - second) != 0


def test_multiplying_a_law_that_the_background_satisfies_changes_nothing():
    def balanced(power):
        def law(rho, psi, big_g):
            return rho**power * laplacian(psi), 4 * sympy.pi * big_g * rho**power * (
                rho - rho.background
            )

        return gravity(law).linearize().plane_wave("x").relation.as_expr()

    assert sympy.expand(balanced(0) - balanced(1)) == 0
    assert sympy.expand(balanced(0) - balanced(3)) == 0


def test_assumed_source_is_printed_with_its_warning():
    linear = gravity(single).linearize(assume=["gravity"])
    text = str(linear.background)
    assert "balanced by an assumed external source" in text
    assert "depends on how that law is written" in text
    with pytest.raises(plin.DeclarationError, match="no law 'Gauss'"):
        gravity(single).linearize(assume=["Gauss"])


def test_nothing_determines_a_field():
    model = warm_electrons()
    model.remove_law("Poisson")
    with pytest.raises(
        plin.UndeterminedError, match=r"2 component equations for 3.*nothing determines 'phi'"
    ):
        model.linearize()


def test_one_law_too_many():
    model = warm_electrons()
    model.law("neutrality", "n_e = n_0")
    with pytest.raises(plin.UndeterminedError, match="one too many"):
        model.linearize()


def test_law_without_first_order_part():
    model = warm_electrons()
    p = model.scalar("p")
    model.law("empty", p * partial_t(p))
    with pytest.raises(plin.UndeterminedError, match="law 'empty' has no first-order part"):
        model.linearize()


def test_norm_without_background_is_not_smooth():
    model = plin.FluidModel("drag", axes="x")
    v, w = model.vector("v"), model.vector("w", background=("w_0",))
    model.law("quadratic drag", partial_t(v), -norm(v) * v)
    model.law("w", partial_t(w), dot(v, v) * v)
    assert str(model.linearize().equations["quadratic drag"].rhs) == "0"
    model.remove_law("w")
    model.law("speed", partial_t(w), norm(v) * w)
    with pytest.raises(plin.BackgroundError, match=r"law 'speed'.*not smooth"):
        model.linearize()


def test_function_that_is_not_smooth():
    model = plin.FluidModel("kink", axes="x")
    n = model.scalar("n", background="n_0")
    model.law("kink", partial_t(n), sympy.Abs(n))
    with pytest.raises(plin.DeclarationError, match="not a smooth known function"):
        model.linearize()


def test_multiplier_without_value_on_the_background():
    model = plin.FluidModel("inverse", axes="x")
    n = model.scalar("n", background="n_0")
    model.law("L", partial_t(n), multiplier(n, 1 / plin.k_abs))
    with pytest.raises(plin.BackgroundError, match="no value at k = 0"):
        model.linearize()
    with pytest.raises(plin.DeclarationError, match="cannot hold a field"):
        multiplier(n, n)


def test_audit_finds_a_wrong_piece():
    linear = warm_electrons().linearize()
    pieces = [
        dataclasses.replace(p, value=2 * p.value)
        if p.fate == "kept" and p.law == "Poisson" and p.side == "right"
        else p
        for p in linear.ledger
    ]
    wrong = dataclasses.replace(linear, ledger=Ledger(pieces, linear.axes))
    audit = wrong.audit()
    assert not audit.passed
    assert [r.law for r in audit.rows if not r.passed] == ["Poisson"]
    assert "differs" in str(audit)
    assert linear.audit().passed


def test_report_holds_everything():
    report = warm_electrons().linearize().report()
    assert "warm electrons over fixed ions" in report
    assert "order 2+" in report


def test_text_cannot_be_misread():
    """The magnetic force and the induction term print differently, and no operator seems to act on what follows it."""
    model = plin.FluidModel("brackets")
    b, v = model.vector("B", background=(0, 0, "B_0")), model.vector("v")
    s = model.scalar("s", background="s_0")
    model.law("force", partial_t(v), cross(curl(b), b))
    model.law("induction", partial_t(b), curl(cross(v, b)))
    model.law("s", partial_t(s), dot(b, div(v) * b))
    model_text = str(model.linearize().equations)
    assert "(∇×B̃)×(B_0 ẑ)" in model_text
    assert "∇×(ṽ×(B_0 ẑ))" in model_text
    assert "B̃·((∇·ṽ) B̃)" in str(model.linearize().ledger)


def test_parallel_vectors_are_not_called_a_derivative_of_a_background():
    model = plin.FluidModel("parallel")
    b, s = model.vector("B", background=(0, 0, "B_0")), model.scalar("s")
    model.law("b", partial_t(b), curl(cross(b, s * b)))
    model.law("s", partial_t(s), div(b))
    reasons = {
        p.reason
        for p in model.linearize().ledger.of("b").with_fate("vanishes")
        if p.raw.atoms(Perturbation)
    }
    assert "the background gives zero" in reasons
    assert "derivative of a uniform background" not in reasons
