"""What a claim may be: text, SymPy, a matrix, a wave equation; and how a verdict prints."""

import re

import published
import pytest
import sympy
from matplotlib import mathtext
from sympy import Eq, Matrix, Symbol

import plasmalin as plin
from plasmalin.check.claim import make_claim
from plasmalin.check.compare import compare
from plasmalin.check.derived import derive
from plasmalin.check.verdict import KINDS, Slip, Small, Verdict, text_in_latex
from plasmalin.errors import AmbiguousText

WP = {"wp": "sqrt(n0*e^2/(eps0*me))"}


@pytest.fixture(scope="module")
def langmuir():
    return published.langmuir_bohm_gross()


def kind(wave, claim, where=None):
    made = make_claim(wave, claim, where or {})
    found = compare(made, derive(wave, made.residual.free_symbols, ()))
    return found and found.kind


k, e, n0, me, eps0, gamma, t = sympy.symbols("k e n0 me eps0 gamma Te_eV", positive=True)
omega = Symbol("omega", real=True)  # foreign symbols, with other assumptions than the model's
wp = Symbol("wp")
HEAT = gamma * k**2 * e * t / me


@pytest.mark.parametrize(
    "claim",
    [
        "omega^2 = wp^2 + gamma k^2 e Te_eV/me",
        "ω² = wp² + gamma k² e Te_eV/me",
        "1 = wp^2/(omega^2 - gamma k^2 e Te_eV/me)",
        Eq(omega**2, wp**2 + HEAT),
        omega**2 - wp**2 - HEAT,
        Eq(omega**2, n0 * e**2 / (eps0 * me) + HEAT),
        "[[omega, k], [wp^2/k + gamma k e Te_eV/me, omega]]",
        "det [[omega, k], [wp^2/k + gamma k e Te_eV/me, omega]] = 0",
        [["omega", "k"], ["wp^2/k + gamma k e Te_eV/me", "omega"]],
        [[omega, k], [wp**2 / k + HEAT / k, "omega"]],
        Matrix([[omega, k], [wp**2 / k + HEAT / k, omega]]),
        sympy.ImmutableMatrix([[omega**2 - wp**2 - HEAT]]),
        "∂_t² n + wp² n = gamma (e Te_eV/me) ∂_x² n",
        "∂_t² n + wp^2 n - gamma (e Te_eV/me) ∇² n",
        "∂²v/∂t² + wp^2 v = gamma (e Te_eV/me) ∂²v/∂x²",
        "∂_t² v_x + wp^2 v_x = gamma (e Te_eV/me) ∂_x ∂_x v_x",
    ],
)
def test_forms_of_a_right_claim(langmuir, claim):
    assert kind(langmuir, claim, WP) == "identical"


@pytest.mark.parametrize(
    ("claim", "found"),
    [
        ("omega = sqrt(wp^2 + gamma k^2 e Te_eV/me)", "branch"),
        ("k = sqrt((omega^2 - wp^2) me/(gamma e Te_eV))", "branch"),
        ("k^2 = (omega^2 - wp^2) me/(gamma e Te_eV)", "identical"),
        (Eq(omega, sympy.sqrt(wp**2 + HEAT)), "branch"),
        ("[[omega, k], [gamma k e Te_eV/me, omega]]", None),
        ("∂_t² n + wp² n + gamma (e Te_eV/me) ∂_x² n = 0", None),
        ("omega^2 = 0", None),
    ],
)
def test_solved_forms_and_wrong_ones(langmuir, claim, found):
    assert kind(langmuir, claim, WP) == found


def test_shorthands_by_symbol_number_and_one_another(langmuir):
    where = {Symbol("g"): gamma, "ve": sympy.sqrt(e * t / me), "u": "a ve", "a": 1, **WP}
    assert kind(langmuir, "omega^2 = wp^2 + g k^2 u^2", where) == "identical"


def test_a_vector_in_one_axis_needs_no_index_but_in_three_it_does():
    wave = published.em_wave_unmagnetised()
    claim = "∂_t² E_y + wp^2 E_y = c^2 ∂_x² E_y"
    assert kind(wave, claim, WP) == "factor"
    with pytest.raises(plin.DeclarationError, match="'E' is not a symbol of the model"):
        kind(wave, claim.replace("E_y", "E"), WP)


@pytest.mark.parametrize(
    ("claim", "where", "message"),
    [
        ("omega^2 = vte^2 k^2", {}, r"claim: 'vte' is not a symbol .*where=\{'vte'"),
        (Symbol("zeta") * omega, {}, "claim: 'zeta' is not a symbol of the model"),
        (sympy.Function("f")(omega), {}, "claim: 'f' is not a symbol of the model"),
        ([["omega", "q"], ["k", "omega"]], {}, "claim: 'q' is not a symbol"),
        ("omega^2 = a", {"a": "zz"}, "where: a: 'zz' is not a symbol|where: 'zz'|'zz' is not a symbol"),
        ("omega^2 = a", {"a": Symbol("zz")}, "where: a: 'zz' is not a symbol"),
        ("omega^2 = a", {"a": "b", "b": "(a + 1)*(a + 2)"}, "'a' is defined through itself"),
        ("omega^2 = k", {"k": "3"}, "'k' is a symbol of the model already"),
        ("omega^2 = me", {"me": "3"}, "'me' is a symbol of the model already"),
        ("n0 = 3 me", {}, "neither omega nor a wave number"),
        ("omega = omega", {}, "both sides are the same"),
        (3.5, {}, "neither omega nor a wave number"),
        ([[1]], {}, "neither omega nor a wave number"),
        (Eq(1, 1), {}, "True is not an expression"),
        (None, {}, "None is not an expression"),
        (omega > k, {}, "is not an expression"),
        (Eq(Matrix([omega]), Matrix([k]), evaluate=False), {}, "is not an expression"),
        ([[1, 2], [3]], {}, "a matrix must be square, with at most four rows"),
        ([], {}, "a matrix must be square"),
        (sympy.eye(5), {}, "with at most four rows"),
        ("∂_t² n = wp^2 v", WP, "a wave equation is for one field; it holds n, v_x"),
        ("∂_t² n = wp^2 n^2", WP, "holds its field once; n stands otherwise"),
        ("∂_t² n = wp^2", WP, "holds its field once; n stands otherwise"),
    ],
)  # fmt: skip
def test_claims_at_fault(langmuir, claim, where, message):
    with pytest.raises(plin.DeclarationError, match=message):
        make_claim(langmuir, claim, where)


@pytest.mark.parametrize(
    ("claim", "error", "message"),
    [
        ("", plin.ReadError, "claim: the text ends"),
        ("[[omega, k]]", plin.ReadError, "claim: a wave matrix is square"),
        ("omega^2 = me/e k", AmbiguousText, r"write me/\(e k\) or \(me/e\) k"),
        ("omega^2 = k ±", plin.ReadError, "two claims"),
    ],
)
def test_texts_at_fault(langmuir, claim, error, message):
    with pytest.raises(error, match=message):
        make_claim(langmuir, claim, {})


def test_check_hands_over(langmuir):
    verdict = langmuir.check("omega^2 = wp^2 + gamma k^2 e Te_eV/me", where=WP)
    assert verdict.kind == "identical"
    assert verdict.agrees
    with pytest.raises(TypeError):
        langmuir.check("omega = 0", WP)


# How a verdict prints ----------------------------------------------------------------------------


def rendered(text):
    """Whether the mathematics in a text is balanced, and can be set."""
    parser = mathtext.MathTextParser("path")
    for part in re.findall(r"\\\((.*?)\\\)", text):
        plain = part.replace(r"\quad\mbox{missing}", "").replace(r"\;", " ")
        parser.parse(f"${plain}$")
    assert text.count(r"\(") == text.count(r"\)")
    bare = text.replace(r"\{", "").replace(r"\}", "")
    assert bare.count("{") == bare.count("}")
    return True


CLAIMS = [
    ("omega_r^2 = omega_pe'^2 + 3 k^2 v_te^2/2", {"omega_r": "omega", "omega_pe'": "wp", "wp": "e", "v_te": "1"}),
    ("omega = sqrt(|k| me) (n0 + 2 i)^(3/2)", {}),
    ("∂_t² n + e n = 0", {}),
]  # fmt: skip


@pytest.mark.parametrize(("claim", "where"), CLAIMS)
def test_readings_can_be_set(langmuir, claim, where):
    reading = make_claim(langmuir, claim, where).reading
    mathtext.MathTextParser("path").parse(f"${reading}$")


def verdicts():
    slip = Slip(3 * k**2 * t, gamma / 3, "3 k² Te_eV should carry the factor γ/3")
    gone = Slip(-(k**2), sympy.Integer(0), "−k² is one term too many")
    small = Small(me / (me + eps0), 0.01), Small(k, None, physical=False)
    given = {
        "special": {"conditions": {"gamma": 3, "T_i": 0}},
        "limit": {"conditions": small, "agrees": True},
        "convention": {"conditions": (plin.Convention(units="gaussian"),)},
        "differs": {"slips": (slip, gone)},
    }
    for name in KINDS:
        options = {"agrees": name in KINDS[:3], **given.get(name, {})}
        yield Verdict(name, proof="exact & so on: 100 %", reading=r"\omega^{2} = k", **options)


@pytest.mark.parametrize("verdict", list(verdicts()), ids=lambda v: v.kind)
def test_a_verdict_prints_as_a_short_note(verdict):
    text = str(verdict)
    assert text.startswith(f"{verdict.kind}: the claim") or verdict.kind == "undecided"
    assert max(map(len, text.splitlines())) < 120
    assert "proof: exact" in text
    assert rendered(verdict.latex())
    assert verdict.latex().isascii()
    page = verdict._repr_html_()
    assert "exact &amp; so on" in page
    assert f"<b>{verdict.kind}: " in page
    assert page.count("<li>") == page.count("</li>") == len(text.splitlines()) - 1


def test_what_is_not_stated_is_asked_for():
    notes = {v.kind: str(v) for v in verdicts()}
    assert (
        "right only where:\n  gamma = 3\n  T_i = 0\n  the author does not state this"
        in notes["special"]
    )
    assert "does not state" not in notes["limit"]
    assert "me/(eps0 + me) ≪ 1 (here 0.01)\n  k ≪ 1, an unphysical ordering" in notes["limit"]
    assert "it is right in:\n  exp(-i omega t), gaussian units" in notes["convention"]
    assert "repair: 3 k² Te_eV should carry the factor γ/3\n  repair: −k²" in notes["differs"]


def test_law_verdicts_can_be_set():
    linear = published.ideal_mhd_shear_fast_slow().linear
    claim = "rho0 ∂_t v = -2 grad(p) + cross(curl(B), B_0)/mu0 + v + n^2"
    with pytest.raises(plin.DeclarationError, match="'n' is not a symbol"):
        linear.check("momentum", claim)
    verdict = linear.check("momentum", claim.replace(" + n^2", ""))
    assert verdict.kind == "differs"
    assert len(verdict.slips) == 2
    assert rendered(verdict.latex())
    mathtext.MathTextParser("path").parse(f"${verdict.reading}$")


def test_plain_text_in_latex():
    assert text_in_latex("50 % of m_e #1 & {x}") == r"50 \% of m\_e \#1 \& \{x\}"
    assert text_in_latex("∂_t ñ") == r"\(\partial\)\_t \(\tilde{n}\)"
    assert text_in_latex("−ω²") == r"\(- \omega {}^2\)"
    assert text_in_latex("φ̃ ≪ x̂") == r"\(\tilde{\phi}\) \(\ll\) \(\hat{x}\)"
