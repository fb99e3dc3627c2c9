"""Claims in ordinary typed mathematics: what is read, what is refused with both readings."""

import pickle
import time

import pytest
import sympy
from hypothesis import given, settings
from hypothesis import strategies as st
from sympy import Abs, I, Rational, cos, exp, log, pi, sin, sinh, sqrt, symbols, tan
from sympy.core.parameters import distribute

import plasmalin as plin
from plasmalin import components, div, dot, grad, laplacian, partial_t
from plasmalin.declare.typed import (
    latex_reading,
    read_claim,
    read_condition,
    read_matrix,
    read_typed,
)
from plasmalin.errors import AmbiguousText

LISTED = (
    "omega k v a b c d e m G x nu gamma theta phi omega_pe lambda_De v_te v_s rho_0 epsilon_0 mu_0 "
    "Omega_e k_x k_perp k_parallel B0 E0 T_e0 n_0 omega_0 omega' k'' T_i T_e m_e m_i hbar"
)
NAMES = {name: sympy.Symbol(name) for name in LISTED.split()}
omega, k, v, a, b, c, d, e, m, G, x, nu, gamma, theta, phi = (NAMES[n] for n in LISTED.split()[:15])
omega_pe, lambda_De, v_te = (NAMES[n] for n in ("omega_pe", "lambda_De", "v_te"))
rho_0, epsilon_0, mu_0, B0 = (NAMES[n] for n in ("rho_0", "epsilon_0", "mu_0", "B0"))

READ = [
    ("3 k^2 v_te^2", 3 * k**2 * v_te**2),
    ("2(a+b)", 2 * (a + b)),
    ("(a+b)(c+d)", (a + b) * (c + d)),
    ("(a + b) [c + d] {a - b}", (a + b) * (c + d) * (a - b)),
    ("k v", k * v),
    ("4 pi G rho_0", 4 * pi * G * rho_0),
    ("4π G ρ₀", 4 * pi * G * rho_0),
    ("k^2 lambda_De^2", k**2 * lambda_De**2),
    ("k² λ_De²", k**2 * lambda_De**2),
    ("k²λ_{De}²", k**2 * lambda_De**2),
    ("i nu omega", I * nu * omega),
    ("I nu ω", I * nu * omega),
    ("3k^2", 3 * k**2),
    ("1e3", sympy.Integer(1000)),
    ("1e3k", 1000 * k),
    ("1.5e-1 k", Rational(3, 20) * k),
    ("2e", 2 * e),
    ("2e3", sympy.Integer(2000)),
    ("2e^2", 2 * e**2),
    ("0.1", Rational(1, 10)),
    ("½ m v²", m * v**2 / 2),
    ("k⁻¹", 1 / k),
    ("k⁻² v¹⁰", v**10 / k**2),
    ("ω₀", NAMES["omega_0"]),
    ("ω_0", NAMES["omega_0"]),
    ("Ω_e k_∥ k_⊥", NAMES["Omega_e"] * NAMES["k_parallel"] * NAMES["k_perp"]),
    ("Ωₑ kₓ", NAMES["Omega_e"] * NAMES["k_x"]),
    ("ϵ_0 µ_0 μ₀ ε₀", epsilon_0**2 * mu_0**2),
    ("ℏ k", NAMES["hbar"] * k),
    ("B0 T_e0", B0 * NAMES["T_e0"]),
    ("B₀ Tₑ₀", B0 * NAMES["T_e0"]),
    ("omega'^2 k''", NAMES["omega'"] ** 2 * NAMES["k''"]),
    ("ω′² k″", NAMES["omega'"] ** 2 * NAMES["k''"]),
    ("sqrt(x)", sqrt(x)),
    ("√(x) a", a * sqrt(x)),
    ("√x", sqrt(x)),
    ("a√x", a * sqrt(x)),
    ("√2", sqrt(2)),
    ("exp(-a) ln b log(c)", exp(-a) * log(b) * log(c)),
    ("sin^2 theta", sin(theta) ** 2),
    ("sin^2(theta)", sin(theta) ** 2),
    ("sin²θ + cos²θ", sin(theta) ** 2 + cos(theta) ** 2),
    ("sin(theta)^2", sin(theta) ** 2),
    ("cos theta", cos(theta)),
    ("k cos θ", k * cos(theta)),
    ("sin θ cos θ", sin(theta) * cos(theta)),
    ("sin theta*cos theta", sin(theta) * cos(theta)),
    ("sin(theta) phi", sin(theta) * phi),
    ("tan(a)/b", tan(a) / b),
    ("sinh(2 theta)", sinh(2 * theta)),
    ("|k|", Abs(k)),
    ("|k v - omega|", Abs(k * v - omega)),
    ("2|k||v|", 2 * Abs(k) * Abs(v)),
    ("|a| b |c|", Abs(a) * b * Abs(c)),
    ("||a| - b|", Abs(Abs(a) - b)),
    ("|a| - |b|", Abs(a) - Abs(b)),
    ("|k|^2 |a|³", Abs(k) ** 2 * Abs(a) ** 3),
    ("a·b×c − d", a * b * c - d),
    ("a∕b ÷ c", a / b / c),
    ("a/b/c", a / b / c),
    ("a/b*c", a / b * c),
    ("a b/c", a * b / c),
    ("(a/b) c", a / b * c),
    ("(1/2) k^2", k**2 / 2),
    ("3/2 k^2", 3 * k**2 / 2),
    ("omega + 3/2 k^2 v_te^2", omega + 3 * k**2 * v_te**2 / 2),
    ("-1/2 k (a + 5/3 b)", -k * (a + 5 * b / 3) / 2),
    ("1/2 (a + b)", (a + b) / 2),
    ("1/2 sqrt(a)/b", sqrt(a) / b / 2),
    ("1/2", Rational(1, 2)),
    ("a*1/2 b", a * b / 2),
    ("k^2/2", k**2 / 2),
    ("a^b c", a**b * c),
    ("a**b*c", a**b * c),
    ("a^-2 b", b / a**2),
    ("a^2(b + c)", a**2 * (b + c)),
    ("a^(1/2) b", sqrt(a) * b),
    ("a^b^c", a ** (b**c)),
    ("-a^2", -(a**2)),
    ("2 - -3", sympy.Integer(5)),
    ("-a b + c", c - a * b),
    ("ω(ω + i ν)", omega * (omega + I * nu)),
    ("gamma(k + 1)", gamma * (k + 1)),
    ("abs(k)", Abs(k)),
    ("sin[2 theta] exp{-a}", sin(2 * theta) * exp(-a)),
    ("arcsin(a)", sympy.asin(a)),
    ("k'' v", NAMES["k''"] * v),
]


@pytest.mark.parametrize(("text", "expected"), READ)
def test_reads(text, expected):
    assert read_typed(text, NAMES) == expected


@pytest.mark.parametrize("sign", ["=", "==", "≈", "~", "≃"])
def test_two_sides(sign):
    sides = read_claim(f"ω² {sign} ω_pe² + 3 k² v_te²", NAMES)
    assert sides == (omega**2, omega_pe**2 + 3 * k**2 * v_te**2)
    assert read_claim("ω²", NAMES) == (omega**2, 0)


AMBIGUOUS = [
    ("a/b c", "a/(b c)", "(a/b) c"),
    ("a/2b", "a/(2 b)", "(a/2) b"),
    ("1/2k", "1/(2 k)", "(1/2) k"),
    ("3/2k^2", "3/(2 k^2)", "(3/2) k^2"),
    ("3/2(a + b)", "3/(2(a + b))", "(3/2)(a + b)"),
    ("3 / 2 k", "3/(2 k)", "(3/2) k"),
    ("3/ 2 k", "3/(2 k)", "(3/2) k"),
    ("1.5/2 k", "1.5/(2 k)", "(1.5/2) k"),
    ("a^2/3 k", "a^2/(3 k)", "(a^2/3) k"),
    ("a/2 k", "a/(2 k)", "(a/2) k"),
    ("1/3/2 k", "1/3/(2 k)", "(1/3/2) k"),
    ("3/2^2 k", "3/(2^2 k)", "(3/2^2) k"),
    ("d + a b/c (a + b) k", "a b/(c(a + b) k)", "(a b/c)(a + b) k"),
    ("e^2 n_0/m ω", "e^2 n_0/(m ω)", "(e^2 n_0/m) ω"),
    ("a/sqrt(b) c", "a/(sqrt(b) c)", "(a/sqrt(b)) c"),
    ("a/|b| c", "a/(|b| c)", "(a/|b|) c"),
    ("(c + a/b d)", "a/(b d)", "(a/b) d"),
    ("a^2b", "a^(2 b)", "(a^2) b"),
    ("a^-2b", "a^(-2 b)", "(a^-2) b"),
    ("a^b(c)", "a^(b (c))", "(a^b) (c)"),
    ("a^1/2", "a^(1/2)", "(a^1)/2"),
    ("a^-1/2", "a^(-1/2)", "(a^-1)/2"),
    ("sqrt a b", "sqrt(a b)", "sqrt(a) b"),
    ("√a b", "√(a b)", "√(a) b"),
    ("√k²", "√(k²)", "√(k)²"),
    ("sin a b", "sin(a b)", "sin(a) b"),
    ("sin 2 theta", "sin(2 theta)", "sin(2) theta"),
    ("cos theta phi", "cos(theta phi)", "cos(theta) phi"),
    ("cos^2 theta phi", "cos^2(theta phi)", "cos^2(theta) phi"),
    ("sin k*x", "sin(k*x)", "sin(k)*x"),
    ("sin a/b", "sin(a/b)", "sin(a)/b"),
    ("sin a^2", "sin(a^2)", "sin(a)^2"),
    ("ln |a| b", "ln(|a| b)", "ln(|a|) b"),
    ("|a|b|c|", "abs(a) b abs(c)", "abs(a abs(b) c)"),
    ("| a | b | c |", "abs( a ) b abs( c )", "abs( a abs( b ) c )"),
    ("omega(k)", "omega*k", "omega"),
    ("a = ω(k)^2", "ω*k", "ω"),
    ("v 2", "v^2", "v*2"),
    ("2E0^2", "2*10^0", "2*E0"),
]


@pytest.mark.parametrize(("text", "one", "other"), AMBIGUOUS)
def test_ambiguous_text_is_refused_with_both_readings(text, one, other):
    with pytest.raises(AmbiguousText) as caught:
        read_claim(text, NAMES)
    assert caught.value.readings == (one, other)
    assert one in str(caught.value)
    assert other in str(caught.value)
    assert read_typed(one, NAMES) != read_typed(other, NAMES)


def test_two_spellings_of_one_subscript():
    both = {"B_0": a, "B0": b}
    with pytest.raises(AmbiguousText) as caught:
        read_typed("B₀", both)
    assert caught.value.readings == ("B_0", "B0")
    assert read_typed("B₀", {"B_0": a, "B0": a}) == a


def test_inverse_function_is_ambiguous():
    with pytest.raises(AmbiguousText, match="arcsin"):
        read_typed("sin^-1 a", NAMES)


def test_an_ambiguity_survives_pickling():
    with pytest.raises(AmbiguousText) as caught:
        read_claim("a/b c", NAMES)
    again = pickle.loads(pickle.dumps(caught.value))
    assert (again.readings, str(again)) == (caught.value.readings, str(caught.value))


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("kv", r"did you mean k\*v\?"),
        ("Te", "did you mean T_e"),
        ("me", r"did you mean m\*e or m_e"),
        ("kω", r"did you mean k\*omega\?"),
        ("4πGρ_0", r"did you mean pi\*G\*rho_0\?"),
        ("omegak = 0", r"did you mean omega\*k\?"),
        ("omega_p^2", "did you mean omega_pe"),
        ("j k", "write i for the imaginary unit"),
        ("f(a)", r"Write f\*\(\.\.\.\) for a product"),
        ("a ≡ b", "write ="),
        ("a ∝ b", "with its factor"),
        ("a = ±b", "two claims"),
        ("a << b", "belongs in `under`"),
        ("a < b", "belongs in `under`"),
        ("a = b = c", "a second '='"),
        ("2 3", "two numbers side by side"),
        ("a/3 3", "two numbers side by side"),
        ("(a) 3", "a number after a factor"),
        ("a²^3", "a power of a power"),
        ("|a", r"this \| has no partner"),
        ("|a| b|", r"this \| has no partner"),
        ("||", r"this \| has no partner"),
        ("(a]", r"'\)' is needed here"),
        ("(|a)|", r"this \| has no partner"),
        ("a)", r"'\)' is not expected"),
        ("a, b", "',' is not expected"),
        ("a +", "the text ends where"),
        ("", "the text ends where"),
        ("sin", r"sin needs its argument; write sin\(\.\.\.\)"),
        ("exp -a", r"exp needs its argument"),
        ("sin(a, b)", r"sin\(\) does not take 2 arguments"),
        ("sin^a b", "only a power from 1 to 8"),
        ("a/0", "division by zero"),
        ("0^-1", "zero to a power"),
        ("a; b", "the character ';'"),
        ("a.__class__", "the character"),
        ("__import__", "the character '_'"),
        ("∂_t a", "∂_t is not known here"),
        ("∂a/∂t", "∂/∂t is not known here"),
        ("∂(a)/∂t", "∂ stands alone"),
        ("∇a", "∇ is not known here"),
    ],
)
def test_refused_with_the_place(text, message):
    with pytest.raises(plin.ReadError, match=message) as caught:
        read_claim(text, NAMES)
    assert 0 <= caught.value.position <= len(text)


def test_an_exponential_written_as_a_power():
    with pytest.raises(plin.ReadError, match=r"write exp\(\.\.\.\)"):
        read_typed("e^x", {"x": x})


def test_the_charge_to_an_expression_is_ambiguous():
    with pytest.raises(AmbiguousText) as caught:
        read_typed("e^-x", NAMES)
    assert caught.value.readings == ("exp(-x)", "(e)^(-x)")
    assert [read_typed(r, NAMES) for r in caught.value.readings] == [exp(-x), e**-x]


def test_a_product_of_vectors_is_refused():
    names, _, v_e, _ = fluid()
    with pytest.raises(plin.RankError, match=r"dot\(a, b\)"):
        read_typed("v_e × ∇n", names)
    assert read_typed("dot(v_e, v_e)", names) == dot(v_e, v_e)


def test_a_derivative_of_a_number_as_an_exponent():
    names, _, _, _ = fluid()
    assert read_typed("exp(partial_t(3))", names) == exp(partial_t(3))


def test_only_derivatives_let_constants_pass():
    names = fluid()[0] | {"norm": plin.norm}
    with pytest.raises(AmbiguousText):
        read_typed("norm v_e a", names)
    assert read_typed("norm^2 v_e", names) == plin.norm(names["v_e"]) ** 2


def test_unknown_makes_what_is_not_a_run_of_known_names():
    made = read_typed("v_A² k", NAMES, sympy.Symbol)
    assert made == k * sympy.Symbol("v_A") ** 2
    assert read_typed("λ_D", NAMES, sympy.Symbol) == sympy.Symbol("lambda_D")
    with pytest.raises(plin.ReadError, match=r"k\*v"):
        read_typed("kv", NAMES, sympy.Symbol)


def test_declared_letters_come_before_numbers_and_functions():
    declared = {"i": a, "pi": b, "log": c, "γ": d}
    assert read_typed("i pi log γ gamma", declared) == a * b * c * d**2


@pytest.mark.parametrize(
    "text",
    [
        "9**9**9**9**9*k",
        "((9^64)^64)^64*k",
        "(" * 5000 + "k" + ")" * 5000,
        "[" * 5000,
        "|" * 5000,
        "|" * 39,
        "|a" * 41,
        "-" * 5000 + "k",
        "√" * 5000 + "k",
        "sin " * 5000 + "k",
        "1e999999999 k",
        "9" * 5000 + " k",
        "k + " * 10000 + "k",
        "k^99999999999",
        "k⁹⁹⁹⁹⁹⁹⁹",
        "k" + "⁹" * 5000,
        "k^" + "9" * 5000,
        "exp(9^60 log(9)) k",
        "exp(exp(exp(exp(9)))) k",
        "|sin(exp(exp(exp(60))))|",
        "√(((9^64)^64)^7 + 1)",
        "(((2 k)^64)^64)^64",
        "*".join(["9^64"] * 3000),
        "0^i",
        "log(0)",
        "tan(π/2)",
        "kv" * 5000,
        "exp(" * 100 + "k" + ")" * 100,
        "a/b " + "c " * 5000,
    ],
)
def test_hostile_text_fails_fast(text):
    start = time.process_time()
    with pytest.raises(plin.ReadError):
        read_claim(text, NAMES)
    assert time.process_time() - start < 2.0


# Derivatives, with fields and operators of a model


def fluid():
    model = plin.FluidModel("typed", axes="x")
    n, v = model.scalar("n_e", background="n_0"), model.vector("v_e")

    def partial_x(f):
        return dot(components(1), grad(f))

    names = {name: NAMES[name] for name in NAMES if name != "d"}
    names |= {"n_e": n, "n": n, "v_e": v, "partial_t": partial_t, "partial_x": partial_x}
    return names | {"grad": grad, "div": div, "laplacian": laplacian, "dot": dot}, n, v, partial_x


@pytest.mark.parametrize(
    "text",
    [
        "∂²n/∂t²",
        "∂^2 n/∂t^2",
        "d^2 n/dt^2",
        "d²n_e/dt²",
        "∂_t² n",
        "∂_t^2 n",
        "∂_t²ñ_e",
        "∂ₜ²n",
        "∂_tt n",
        "∂_t ∂_t n",
        "partial_t(partial_t(n))",
        "partial_t^2 n",
        "d_t d_t n",
        "∂²/∂t² n",
        "∂/∂t (∂n/∂t)",
    ],
)
def test_second_derivative_in_time(text):
    names, n, _, _ = fluid()
    assert read_typed(text, names) == partial_t(partial_t(n))


def test_wave_equation():
    names, n, _, partial_x = fluid()
    left, right = read_claim("∂²n/∂t² + omega_pe² n = c^2 ∂²n/∂x² - ∂²n/∂x∂t a", names)
    assert left == partial_t(partial_t(n)) + omega_pe**2 * n
    assert right == c**2 * partial_x(partial_x(n)) - a * partial_x(partial_t(n))


def test_nabla():
    names, n, v, _ = fluid()
    read = read_typed("∇²n + ∇·v_e + laplacian n + div(v_e)", names)
    assert read == 2 * laplacian(n) + 2 * div(v)


def test_constants_pass_a_derivative_and_fields_do_not():
    names, n, _, _ = fluid()
    assert read_typed("∂_t n_e/n_0", names) == partial_t(n) / names["n_0"]
    with pytest.raises(AmbiguousText) as caught:
        read_typed("∂_t n_e n", names)
    assert caught.value.readings == ("∂_t(n_e n)", "∂_t(n_e) n")


def test_orders_of_a_derivative_must_agree():
    with pytest.raises(plin.ReadError, match="orders above and below"):
        read_typed("∂²n/∂t", fluid()[0])


def test_a_declared_differential_is_a_name():
    names = fluid()[0] | {"dn": a, "dt": b}
    assert read_typed("dn/dt", names) == a / b


# Matrices and conditions


@pytest.mark.parametrize("form", ["{}", "det {}", "det({})", "det {} = 0"])
def test_matrix(form):
    read = read_matrix(form.format("[[1 - k², 2 i |a|], [-b, ω(c + 1)]]"), NAMES)
    assert read == [[1 - k**2, 2 * I * Abs(a)], [-b, omega * (c + 1)]]


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("[[a, b]]", "is square; 1 rows have 2 entries"),
        ("[[a, b], [c]]", "2 rows have 2 and 1 entries"),
        ("[a, b]", r"'\[' is needed"),
        ("[[a]] = 1", "ends with '= 0'"),
        ("[[a]] b", "a sign is missing"),
    ],
)
def test_matrix_refused(text, message):
    with pytest.raises(plin.ReadError, match=message):
        read_matrix(text, NAMES)


@pytest.mark.parametrize(
    ("text", "ratio"),
    [
        ("m_e/m_i << 1", NAMES["m_e"] / NAMES["m_i"]),
        ("k*lambda_De ≪ 1", k * lambda_De),
        ("k λ_De ≪ 1", k * lambda_De),
        ("omega >> nu", nu / omega),
        ("omega_pe^2 ≫ Omega_e^2", NAMES["Omega_e"] ** 2 / omega_pe**2),
        ("|omega| << nu", Abs(omega) / nu),
    ],
)
def test_small(text, ratio):
    condition = read_condition(text, NAMES)
    assert (condition.kind, condition.ratio) == ("small", ratio)


@pytest.mark.parametrize(
    ("text", "kind", "left", "right"),
    [
        ("nu -> 0", "limit", nu, 0),
        ("ν → 0", "limit", nu, 0),
        ("gamma → 5/3", "limit", gamma, Rational(5, 3)),
        ("T_i = 0", "equal", NAMES["T_i"], 0),
        ("k -> infinity", "limit", k, sympy.oo),
    ],
)
def test_equal_and_limit(text, kind, left, right):
    condition = read_condition(text, NAMES)
    assert (condition.kind, condition.left, condition.right) == (kind, left, right)


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("a", "a condition reads a << b"),
        ("a < 1", "a condition reads a << b"),
        ("a >> 0", "nothing is small against 0"),
        ("a << 0", "nothing is small against 0"),
    ],
)
def test_condition_refused(text, message):
    with pytest.raises(plin.ReadError, match=message):
        read_condition(text, NAMES)


# What is printed reads back

LEAVES = st.sampled_from(
    [k, omega, lambda_De, NAMES["omega'"], I, pi, sympy.Integer(2), Rational(3, 7)]
)


def grow(inner):
    pair = st.tuples(inner, inner)
    return st.one_of(
        pair.map(lambda p: p[0] + p[1]),
        pair.map(lambda p: p[0] * p[1]),
        pair.map(lambda p: p[0] - p[1] / (1 + k**2)),
        inner.map(lambda f: sin(f) + exp(-f * a)),
        inner.map(lambda f: sqrt(a) * (f + b) ** 3),
        inner.map(lambda f: f * Abs(a - k)),
    )


@settings(deadline=None)
@given(st.data())
def test_explicit_text_reads_back(data):
    with distribute(False):  # else SymPy makes 7 k + 7 of the printed 7*(k + 1)
        expr = data.draw(st.recursive(LEAVES, grow, max_leaves=5))
        assert read_typed(str(expr), NAMES) == expr


FLUID = fluid()[0]
PIECES = st.sampled_from("a b c 2 3 i ( ) [ ] | + - * / ^ ² √ sin exp = , ∂_t".split() + [" "] * 8)


@settings(deadline=None, max_examples=300)
@given(st.lists(PIECES, max_size=14).map("".join))
def test_any_text_is_read_or_refused_with_the_place(text):
    error = refusal(text, FLUID)
    if error is not None:
        assert 0 <= error.position <= len(text)
        assert text not in getattr(error, "readings", ())


def refusal(text, names):
    try:
        read_claim(text, names)
    except plin.ReadError as error:
        return error
    return None


@pytest.mark.parametrize(
    ("name", "latex"),
    [
        ("omega'", r"\omega'"),
        ("lambda_De", r"\lambda_{\mathrm{De}}"),
        ("k_parallel", r"k_{\parallel}"),
        ("k_perp", r"k_{\perp}"),
        ("epsilon_0", r"\epsilon_{0}"),
        ("n_alpha", r"n_{\alpha}"),
        ("B0", "B_{0}"),
    ],
)
def test_names_in_latex(name, latex):
    assert latex_reading(symbols(name) ** 2, k) == rf"{latex}^{{2}} = k"
