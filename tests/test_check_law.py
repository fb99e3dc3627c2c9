"""Linearized laws derived by hand, held against the ledger."""

import published
import published_more
import pytest
import sympy
from hypothesis import given, settings
from hypothesis import strategies as st
from sympy import Rational, Symbol

import plasmalin as plin
from plasmalin import advect, cross, div, dot, grad, laplacian, partial_t

CASES = {**published.CASES, **published_more.CASES}


def electrons(axes="xyz"):
    model = plin.FluidModel("warm electrons over fixed ions", axes=axes)
    e, eps0, m = model.constants("e epsilon_0 m_e")
    n0, t, gamma, nu = model.parameters("n_0 T_e gamma_e nu", positive=True)
    n, v, phi = model.scalar("n_e", background="n_0"), model.vector("v_e"), model.scalar("phi")
    model.law("electron continuity", partial_t(n) + div(n * v))
    force = e * n * grad(phi) - grad(n0 * t * (n / n0) ** gamma) - m * nu * n * v
    model.law("electron momentum", m * n * (partial_t(v) + advect(v, v)), force)
    model.law("Poisson", eps0 * laplacian(phi), e * (n - n0))
    return model.linearize()


def magnetized():
    model = plin.FluidModel("two cold fluids in a magnetic field")
    e, eps0 = model.constants("e epsilon_0")
    mass, z = model.parameters("m_i Z", positive=True)
    n, v = model.scalar("n_i", background="n_i0"), model.vector("v_i", background=(0, 0, "u"))
    ne, phi = model.scalar("n_e", background="n_e0"), model.scalar("phi")
    b = model.vector_parameter("B", (0, 0, "B_0"))
    model.law("ion continuity", partial_t(n) + div(n * v))
    model.law("electron continuity", partial_t(ne) + div(ne * v))
    acceleration = partial_t(v) + advect(v, v)
    model.law("ion momentum", mass * n * acceleration, z * e * n * (cross(v, b) - grad(phi)))
    model.law("Poisson", eps0 * laplacian(phi), e * (ne - z * n))
    return model.linearize()


RIGHT = "m_e n_0 ∂_t v_e = e n_0 ∇phi - gamma_e T_e ∇n_e - m_e nu n_0 v_e"


@pytest.mark.parametrize(
    ("law", "claim"),
    [
        ("electron momentum", RIGHT),
        ("electron momentum", RIGHT.replace("∇", "∇ ")),
        (
            "electron momentum",
            "m_e*n_0*(partial_t(v_e) + nu*v_e) = e*n_0*grad(phi) - T_e*gamma_e*grad(n_e)",
        ),
        ("electron momentum", "∂_t v_e + nu v_e = (e/m_e) grad(phi) - gamma_e c^2 grad(n_e)/n_0"),
        ("electron momentum", "∂v_e/∂t = grad(e phi/m_e - gamma_e c^2 n_e/n_0) - nu v_e"),
        (
            "electron momentum",
            "m_e n_0 ∂_t v_e_x + m_e n_0 nu v_e_x = e n_0 ∂_x phi - gamma_e T_e ∂_x n_e",
        ),
        (
            "electron momentum, z",
            "m_e n_0 ∂_t v_e_z + m_e n_0 nu v_e_z = e n_0 ∂_z phi - gamma_e T_e ∂_z n_e",
        ),
        ("electron continuity", "∂_t n_e + n_0 ∇·v_e = 0"),
        ("electron continuity", "∂_t n_e + n_0 ∂_x v_e_x + n_0 ∂_y v_e_y = -n_0 ∂_z v_e_z"),
        ("electron continuity", "-div(v_e) = ∂_t n_e/n_0"),
        ("Poisson", "∇²phi = (e/epsilon_0) n_e"),
        ("Poisson", "∂_x² phi + ∂_y² phi + ∂_z² phi = (e/epsilon_0) n_e"),
        ("Poisson", "div(grad(phi)) = e n_e/epsilon_0"),
    ],
)
def test_right_laws(law, claim):
    verdict = electrons().check(law, claim, {"c": "sqrt(T_e/m_e)"})
    assert verdict.kind == "identical", str(verdict)
    assert verdict.agrees
    assert not verdict.slips


def only(verdict):
    assert verdict.kind == "differs"
    assert not verdict.agrees
    (slip,) = verdict.slips
    return slip


def test_a_wrong_coefficient():
    claim = "m_e*n_0*partial_t(v_e) = e*n_0*grad(phi) - T_e*grad(n_e) - m_e*nu*n_0*v_e"
    slip = only(electrons().check("electron momentum", claim))
    assert slip.multiplier == Symbol("gamma_e", positive=True)
    assert "−T_e ∇ñ_e should carry the factor γ_e, −T_e γ_e ∇ñ_e" in slip.text
    assert "first order of −∇((n_e/n_0)^γ_e T_e n_0)" in slip.text


def test_a_wrong_sign():
    slip = only(electrons().check("electron momentum", RIGHT.replace("e n_0 ∇phi", "-e n_0 ∇phi")))
    assert slip.multiplier == -1
    assert "−e n_0 ∇φ̃ should have the other sign, e n_0 ∇φ̃" in slip.text


def test_a_missing_term():
    claim = RIGHT.replace(" - m_e nu n_0 v_e", "")
    slip = only(electrons().check("electron momentum", claim))
    assert slip.multiplier == 1
    assert "missing on the right: first order of −m_e ν n_e v_e" in slip.text
    halved = electrons().check("electron momentum", claim.replace("- gamma_e", "- 2 gamma_e"))
    assert {s.multiplier for s in halved.slips} == {Rational(1, 2), 1}
    assert "the repairs are needed together" in halved.notes


def test_a_missing_term_in_the_author_s_scale():
    claim = "∂_t v_e = (e/m_e) grad(phi) - gamma_e (T_e/m_e) grad(n_e)/n_0"
    slip = only(electrons().check("electron momentum", claim))
    assert slip.text.startswith("−ν ṽ_e is missing")


@pytest.mark.parametrize(
    ("extra", "reason"),
    [
        ("m_e n_e ∂_t v_e", "dropped: product of perturbations"),
        ("m_e n_0 advect(v_e, v_e)", "dropped: product of perturbations"),
        ("m_e nu n_0 grad(phi)/e", "no term of the law has such a first-order part"),
        ("m_e n_0 grad(div(v_e))/nu", "no term of the law has such a first-order part"),
    ],
)
def test_a_term_too_many(extra, reason):
    left, right = RIGHT.split("=")
    verdict = electrons().check("electron momentum", f"{left} + {extra} = {right}")
    slip = only(verdict)
    assert slip.multiplier == 0
    assert f"one term too many: {reason}" in slip.text


def test_zeroth_order_is_not_part_of_a_linearized_law():
    verdict = electrons().check("Poisson", "epsilon_0 ∇²phi = e n_e + e n_0")
    assert "of zeroth order" in only(verdict).text
    kept = "epsilon_0 ∇²phi = e (n_e + n_0) - e n_0 + div(grad(n_0))"
    assert electrons().check("Poisson", kept).kind == "identical"


def test_drifts_and_vector_parameters():
    linear = magnetized()
    claim = "m_i n_i0 (∂_t v_i + u ∂_z v_i) = Z e n_i0 (cross(v_i, B) - ∇phi)"
    assert linear.check("ion momentum", claim).kind == "identical"
    by_background = claim.replace("u ∂_z v_i", "advect(v_i0, v_i)")
    assert linear.check("ion momentum", by_background).kind == "identical"
    forgotten = claim.replace(" + u ∂_z v_i", "")
    assert "first order of m_i n_i (v_i·∇)v_i" in only(linear.check("ion momentum", forgotten)).text
    component = "m_i n_i0 (∂_t v_i_x + u ∂_z v_i_x) = Z e n_i0 (B_0 v_i_y - ∂_x phi)"
    assert linear.check("ion momentum", component).kind == "identical"
    turned = component.replace("B_0 v_i_y", "-B_0 v_i_y")
    slip = only(linear.check("ion momentum, x", turned))
    assert slip.multiplier == -1
    assert linear.check("ion momentum, y", component).kind == "differs"


def test_modulo_the_background():
    linear = magnetized()
    claim = "∂_t n_i + u ∂_z n_i + (n_e0/Z) div(v_i) = 0"
    verdict = linear.check("ion continuity", claim)
    assert verdict.kind == "identical"
    assert any("= 0" in note for note in verdict.notes)
    plain = linear.check("ion continuity", "∂_t n_i + u ∂_z n_i + n_i0 div(v_i) = 0")
    assert plain.notes == ()


def test_the_common_factor_is_named():
    verdict = electrons().check("Poisson", "∇²phi = (e/epsilon_0) n_e")
    assert "multiplied by 1/ε_0, which must not vanish" in verdict.proof
    with_wave = electrons().check("Poisson", "∂_t ∇²phi = (e/epsilon_0) ∂_t n_e")
    assert with_wave.kind == "differs"


def test_tensors_and_multipliers():
    model = plin.FluidModel("pressure tensor", axes="xz")
    rho, v = model.scalar("rho", background="rho_0"), model.vector("v")
    p = model.tensor("P", background=(("p_0", 0), (0, "p_0")))
    chi = model.parameter("chi", positive=True)
    model.law("continuity", partial_t(rho) + div(rho * v))
    model.law("momentum", rho * (partial_t(v) + advect(v, v)), -div(p))
    model.law("P", partial_t(p) + advect(v, p), plin.multiplier(p, -chi * plin.k_abs))
    linear = model.linearize()
    assert linear.check("P", "∂_t P = -chi multiplier(P, k_abs)").kind == "identical"
    assert linear.check("P", "∂_t P_xz = -chi multiplier(P_xz, k_abs)").kind == "identical"
    assert linear.check("P, zz", "∂_t P_zz = -chi multiplier(P_zz, k_abs)").kind == "identical"
    assert linear.check("P", "∂_t P_xz = chi multiplier(P_xz, k_abs)").slips[0].multiplier == -1
    assert linear.check("momentum", "rho_0 ∂_t v_x = -∂_x P_xx - ∂_z P_zx").kind == "identical"


@pytest.mark.parametrize("name", CASES)
def test_every_published_case_agrees_with_itself(name):
    linear = CASES[name]().linear
    for law, equation in linear.equations.items():
        assert linear.check(law, equation).kind == "identical", law


def plain_terms(equation):
    right = (-t for t in sympy.Add.make_args(equation.rhs))
    return [t for t in (*sympy.Add.make_args(equation.lhs), *right) if t != 0]


@settings(max_examples=25, deadline=None)
@given(st.data())
def test_a_changed_term_is_found(data):
    """Whatever one term is multiplied by, the slip is the inverse; a common factor changes nothing."""
    linear = electrons() if data.draw(st.booleans()) else magnetized()
    law = data.draw(st.sampled_from(sorted(linear.equations)))
    terms = plain_terms(linear.equations[law])
    place = data.draw(st.integers(0, len(terms) - 1))
    change = data.draw(st.sampled_from([Rational(2), Rational(-1), Rational(3, 5)]))
    common = data.draw(st.sampled_from([1, 3, Symbol("s") ** 2]))
    changed = [t * (change if i == place else 1) * common for i, t in enumerate(terms)]
    slip = only(linear.check(law, sympy.Add(*changed), {"s": "e/epsilon_0"}))
    inverse = {1 / change, change} if len(terms) == 2 else {1 / change}
    assert slip.multiplier in inverse


@pytest.mark.parametrize(
    ("law", "claim", "error", "message"),
    [
        ("ion momentum", "∂_t v_e = 0", plin.DeclarationError, "no law 'ion momentum'; there are: electron"),
        ("electron momentum, w", "∂_t v_e = 0", plin.DeclarationError, "no law"),
        ("electron momentum", "∂_t v_q = 0", plin.DeclarationError, "'v_q' is not a symbol of the model"),
        ("electron momentum", "∂_t n_e = 0", None, ""),
        ("electron continuity", "∂_t v_e = 0", plin.RankError, "the claim is a vector, the law"),
        ("electron momentum", "v_e = n_e", plin.RankError, "both sides need the same rank"),
        ("electron momentum", "v_e + n_e = 0", plin.RankError, "is added to a vector"),
        ("electron momentum", "v_e v_e = 0", plin.RankError, r"use dot\(v, v\)"),
        ("Poisson", "exp(phi) = n_e", plin.DeclarationError, "not linear in first-order fields"),
        ("Poisson", "n_0 = 1", plin.DeclarationError, "holds no first-order field"),
        ("Poisson", "∇²phi = ", plin.ReadError, "the text ends"),
        ("Poisson", "∇²phi = a/b n_e", plin.DeclarationError, "'a' is not a symbol"),
        ("Poisson", None, plin.DeclarationError, "None is not a law"),
        ("Poisson", sympy.Symbol("zeta"), plin.DeclarationError, "'zeta' is not a symbol"),
    ],
)  # fmt: skip
def test_claims_at_fault(law, claim, error, message):
    linear = electrons()
    if error is None:
        assert linear.check(law, claim).kind == "differs"
        return
    with pytest.raises(error, match=message):
        linear.check(law, claim)


def test_a_curl_that_leaves_the_axes():
    with pytest.raises(plin.DeclarationError, match="leaves the axes 'x'"):
        electrons("x").check("electron continuity", "div(cross(v_e, v_e)) = n_e")


def test_a_shorthand_cannot_be_a_field():
    with pytest.raises(plin.DeclarationError, match="'phi' is a symbol of the model already"):
        electrons().check("Poisson", "∇²phi = n_e", {"phi": "1"})


def test_sympy_claims_with_the_model_s_own_fields():
    linear = electrons()
    n, v = linear.fields["n_e"], linear.fields["v_e"]
    n0 = sympy.Symbol("n_0")  # without the model's assumptions
    assert linear.check("electron continuity", partial_t(n) + n0 * div(v)).kind == "identical"
    own = sympy.Eq(partial_t(n.perturbation), -n0 * div(v.perturbation))
    assert linear.check("electron continuity", own).kind == "identical"
    assert linear.check("electron continuity", partial_t(n) + dot(v, v)).kind == "differs"
