"""The exact core against independent arithmetic: SymPy's determinants, mpmath's roots."""

import pickle
import random
from fractions import Fraction

import mpmath
import numpy as np
import pytest
import sympy
from hypothesis import given, settings
from hypothesis import strategies as st

import plasmalin as plin
from plasmalin.exact.combination import power_below, row_combination
from plasmalin.exact.determinant import determinant, eliminate, underdetermined_block
from plasmalin.exact.factoring import is_irreducible
from plasmalin.exact.matching import diagonal_blocks, maximum_matching
from plasmalin.exact.polynomial import numerator, polynomial
from plasmalin.exact.rational import exact_rational
from plasmalin.exact.sample import holds_off_zero, modes_off_zero, shared_modes
from plasmalin.exact.sines import on_circle
from plasmalin.exact.univariate import complex_roots

w = sympy.Symbol("omega")
k = sympy.Symbol("k", real=True)
a, b, m = sympy.symbols("a b M", positive=True)
theta, gamma = sympy.symbols("theta gamma", real=True)

ATOMS = [w, k, a, sympy.I * w, -sympy.I * k, a / b, 2 * w - 3 * k, w**2 - a, sympy.Integer(1), b + sympy.I * k]  # fmt: skip


def same_up_to_unit(found, expected):
    """Equal up to a factor free of omega."""
    mine, theirs = sympy.Poly(found, w), sympy.Poly(sympy.expand(expected), w)
    return sympy.simplify(mine.as_expr() * theirs.LC() - theirs.as_expr() * mine.LC()) == 0


@settings(max_examples=60, deadline=None)
@given(st.integers(2, 4), st.randoms(use_true_random=False))
def test_determinant_against_sympy(size, rng):
    entries = {
        (i, j): rng.choice(ATOMS) for i in range(size) for j in range(size) if rng.random() < 0.7
    }
    plain = sympy.Matrix(size, size, lambda i, j: entries.get((i, j), 0)).det(method="berkowitz")
    plain = sympy.expand(plain)
    found = determinant(entries, size, w)
    if plain == 0:
        assert found.degree == -1
    else:
        assert same_up_to_unit(found.as_expr(), plain)
        assert same_up_to_unit(found.as_poly().as_expr(), plain)


def test_real_form_where_phases_remove_the_unit():
    entries = {
        (0, 0): -sympy.I * w,
        (0, 1): sympy.I * k * a,
        (1, 0): sympy.I * k * b,
        (1, 1): -sympy.I * w,
    }
    assert determinant(entries, 2, w).is_real
    damped = {**entries, (1, 1): -sympy.I * w + m}
    assert not determinant(damped, 2, w).is_real
    assert same_up_to_unit(
        determinant(damped, 2, w).as_expr(), w**2 + sympy.I * m * w - k**2 * a * b
    )


def test_sine_and_cosine():
    s, c = sympy.sin(theta), sympy.cos(theta)
    entries = {(0, 0): w - k * c, (0, 1): k * s, (1, 0): k * s, (1, 1): w + k * c}
    found = determinant(entries, 2, w)
    assert found.reduced().as_expr() == w**2 - k**2
    singular = {(0, 0): s, (0, 1): -c, (1, 0): c, (1, 1): s - 1 / s}
    assert determinant(singular, 2, w).degree == -1


def test_factors_stay_visible_behind_sine_and_cosine():
    s, c = sympy.sin(theta), sympy.cos(theta)
    entries = {(0, 0): w - k * c * a, (1, 1): w**2 - k**2 * s**2 - k**2 * c**2 * b, (1, 0): w}
    factors = determinant(entries, 2, w).factor()[1]
    assert [f.degree for f, _ in factors] == [1, 2]


def test_square_roots_and_symbolic_powers():
    found = numerator(
        w**2 * sympy.sqrt(m) - m ** sympy.Rational(3, 2) * a ** (gamma + 1) / a**gamma, w
    )
    assert same_up_to_unit(found.as_expr(), w**2 - m * a)


def test_absolute_value_squares():
    assert polynomial(w**2 - sympy.Abs(k) ** 2, w).reduced().as_expr() == w**2 - k**2


def test_memory_denominators_are_cleared_once():
    memory = 1 / (1 - sympy.I * w * a)
    entries = {(0, 0): w - k * memory, (0, 1): memory, (1, 0): k, (1, 1): 1 - memory}
    found = determinant(entries, 2, w)
    plain = sympy.fraction(
        sympy.cancel(sympy.together((w - k * memory) * (1 - memory) - memory * k))
    )[0]
    assert same_up_to_unit(found.as_expr(), plain)


def test_real_denominators_leave_no_spurious_roots():
    entries = {(0, 0): a, (1, 0): 1 / (w - k), (1, 1): k}
    assert determinant(entries, 2, w).degree == 0
    with pytest.raises(plin.NonPolynomialError):
        polynomial(1 / w, w)


def test_zero_denominators_are_named():
    with pytest.raises(plin.ValuesError, match="denominator is zero"):
        determinant({(0, 0): w - 1 / a}, 1, w, {a: Fraction(0)})


@pytest.mark.parametrize(
    "expr", [sympy.exp(w * a), sympy.sqrt(w**2 - k**2), w**gamma, sympy.sin(w)]
)
def test_not_polynomial_in_omega(expr):
    with pytest.raises(plin.NonPolynomialError, match="omega enters through"):
        determinant({(0, 0): expr + 1}, 1, w)


def test_factors_and_multiplicity():
    entries = {(i, i): w**2 - k**2 * a for i in range(3)} | {
        (3, 3): w,
        (4, 4): w,
        (5, 5): 3 * w - b,
    }
    found = determinant(entries, 6, w)
    assert (found.degree, found.lowest) == (9, 2)
    content, factors = found.factor()
    assert content.degree == 0
    assert {(str(f.as_expr()), n) for f, n in factors} == {
        ("omega", 2),
        ("-b + 3*omega", 1),
        ("-a*k**2 + omega**2", 3),
    }


def test_gaussian_factors():
    p = polynomial(sympy.expand((w - a * (1 + sympy.I) + k) ** 2 * (w + sympy.I * b + k)), w)
    factors = p.factor()[1]
    assert sorted((f.degree, n) for f, n in factors) == [(1, 1), (1, 2)]
    product = sympy.prod(f.as_expr() ** n for f, n in factors)
    assert same_up_to_unit(sympy.expand(product), p.as_expr())


def test_factors_with_very_large_coefficients():
    big = sympy.Integer(10) ** 60 + 7
    p = polynomial(sympy.expand((w**2 * big - k**2) * (w - k * big)), w)
    assert [(f.degree, n) for f, n in p.factor()[1]] == [(1, 1), (2, 1)]


def test_substitute_is_exact():
    p = polynomial(w**2 * a - k**2 * sympy.sqrt(m) / b, w)
    q = p.substitute({a: 0.1, b: Fraction(1, 3), m: 4})
    assert q.generators == (k,)
    assert same_up_to_unit(q.as_expr(), w**2 * sympy.Rational(exact_rational(0.1)) - 6 * k**2)
    assert p.substitute({a: b}).degree == 2
    assert same_up_to_unit(p.substitute({w: 3 * w}).as_expr(), p.as_expr().subs(w, 3 * w))


def test_equality_and_pickling():
    p = polynomial(w**2 * a - sympy.I * k * w, w)
    assert pickle.loads(pickle.dumps(p)) == p
    assert len({p, pickle.loads(pickle.dumps(p))}) == 1


def test_gcd_and_division():
    p, q = polynomial(w**2 - k**2, w), polynomial(w**2 + 2 * w * k + k**2, w)
    common = p.gcd(q)
    assert common.as_expr() == w + k
    assert p.exact_div(common).as_expr() == w - k
    with pytest.raises(ArithmeticError):
        p.exact_div(polynomial(w + a, w))


def test_gaussian_numbers_belong_to_the_content():
    p = polynomial(sympy.expand((2 + 4 * sympy.I) * (a + sympy.I * b) * (w**2 + sympy.I * a)), w)
    assert p.primitive()[1].as_expr() == w**2 + sympy.I * a


def test_gaussian_divisor_of_a_polynomial_with_gaussian_content():
    """Coprime though every coefficient of the first is a multiple of 2 − i."""
    p = polynomial(sympy.expand((2 - sympy.I) * (w**3 + sympy.I * a * w - 2 * a * b)), w)
    q = polynomial(sympy.expand((w - k) ** 2 * (w + sympy.I * a * k)), w)
    assert p.gcd(q).degree == 0
    assert (p * q).gcd(q * q).as_expr() == q.as_expr()


def test_discriminant():
    assert (
        sympy.expand(polynomial(w**2 + b * w + a, w).discriminant().as_expr() - (b**2 - 4 * a)) == 0
    )


def test_schur_complement():
    rng = random.Random(3)
    entries = {(i, j): rng.choice(ATOMS) for i in range(4) for j in range(4)}
    matrix = sympy.Matrix(4, 4, lambda i, j: entries[i, j])
    numbers = {w: sympy.Rational(7, 3), k: sympy.Rational(2, 5), a: 3, b: sympy.Rational(1, 7)}
    found = eliminate(entries, w, 4, [0, 2], [1, 3])
    inner, rows = matrix[[1, 3], [0, 2]], matrix[[0, 2], [0, 2]]
    expected = matrix[[0, 2], [1, 3]] - rows * inner.inv() * matrix[[1, 3], [1, 3]]
    for (i, j), value in found.items():
        assert sympy.simplify((value - expected[i, j]).subs(numbers)) == 0


def test_underdetermined_block_names_the_culprits():
    entries = {(0, 0): w, (0, 1): k, (1, 0): 2 * w, (1, 1): 2 * k, (2, 2): w - a, (2, 0): b}
    rows, columns = underdetermined_block(entries, 3, w)
    assert rows == (0, 1)
    assert set(columns) == {0, 1, 2}


@pytest.mark.parametrize(
    "dependent",
    [
        {(0, 0): w * a**gamma, (0, 1): k, (1, 0): a ** (gamma + 1) * w, (1, 1): k * a},
        {(0, 0): w * sympy.sqrt(a + b), (0, 1): k, (1, 0): w * (a + b), (1, 1): k * sympy.sqrt(a + b)},
        {(0, 0): sympy.sqrt(5) * w, (0, 1): sympy.I * k, (1, 0): 5 * w, (1, 1): sympy.I * sympy.sqrt(5) * k},
        {(0, 0): sympy.sin(theta), (0, 1): -sympy.cos(theta), (1, 0): sympy.cos(theta),
         (1, 1): sympy.sin(theta) - 1 / sympy.sin(theta)},
    ],
)  # fmt: skip
def test_underdetermined_block_where_generators_are_related(dependent):
    entries = {**dependent, (2, 2): w - a}
    assert determinant(entries, 3, w).degree == -1
    assert underdetermined_block(entries, 3, w) == ((0, 1), (0, 1))


@settings(deadline=None)
@given(st.lists(st.tuples(st.integers(0, 5), st.integers(0, 5)), max_size=18))
def test_matching_is_maximum(pairs):
    from scipy.sparse import csr_matrix
    from scipy.sparse.csgraph import maximum_bipartite_matching

    dense = np.zeros((6, 6), int)
    for i, j in pairs:
        dense[i, j] = 1
    found = maximum_matching(pairs, 6, 6)
    assert all(dense[i, j] for i, j in found.items())
    assert len(set(found.values())) == len(found)
    assert len(found) == int((maximum_bipartite_matching(csr_matrix(dense)) >= 0).sum())


def test_diagonal_blocks():
    pairs = [(0, 0), (0, 1), (1, 0), (1, 1), (2, 2), (2, 0), (3, 3), (3, 2)]
    blocks = diagonal_blocks(pairs, maximum_matching(pairs, 4, 4))
    assert sorted(len(rows) for rows, _ in blocks) == [1, 1, 2]


@settings(max_examples=30, deadline=None)
@given(st.lists(st.tuples(st.integers(-50, 50), st.integers(-50, 50)), min_size=2, max_size=7))
def test_complex_roots_against_mpmath(coefficients):
    if coefficients[-1] == (0, 0):
        coefficients[-1] = (1, 2)
    exact = [(Fraction(re, 7), Fraction(im, 3)) for re, im in coefficients]
    found = complex_roots(exact)
    assert sum(r[3] for r in found) == len(exact) - 1
    with mpmath.workdps(60):
        for re, im, radius, _ in found:
            z = mpmath.mpc(
                mpmath.mpf(re.numerator) / re.denominator, mpmath.mpf(im.numerator) / im.denominator
            )
            terms = [
                mpmath.mpc(
                    mpmath.mpf(c.numerator) / c.denominator, mpmath.mpf(d.numerator) / d.denominator
                )
                * z**n
                for n, (c, d) in enumerate(exact)
            ]
            assert abs(sum(terms)) <= mpmath.mpf(10) ** -20 * max(map(abs, terms))
            assert radius <= Fraction(1, 10**20) * max(abs(re), abs(im)) or (re, im) == (0, 0)


def test_tiny_growth_keeps_its_sign():
    """(z − (2 + 1e-18 i)) (z + 5): the imaginary part is proved, not lost in the real one."""
    tiny = Fraction(1, 10**18)
    c = [(Fraction(-10), -5 * tiny), (Fraction(3), -tiny), (Fraction(1), Fraction(0))]
    _, im, radius, _ = max(complex_roots(c))
    assert im == pytest.approx(1e-18, rel=1e-12)
    assert radius < im / 1000


def test_zero_polynomial_has_no_roots():
    with pytest.raises(ArithmeticError):
        complex_roots([(Fraction(0), Fraction(0))])


@pytest.mark.parametrize("bad", [float("nan"), float("inf"), "1", None])
def test_exact_rational_refuses(bad):
    with pytest.raises(plin.ValuesError):
        exact_rational(bad)


def test_powers_with_doubles_as_exponents():
    """n**1.4 and n**0.4 share one generator and differ by n; a double is no root of degree 2**52."""
    power = sympy.Rational(exact_rational(1.4))
    p = numerator(w * a**power - w**2 * a ** (power - 1) * b, w)
    assert same_up_to_unit(p.as_expr(), w * a - w**2 * b)
    assert len(p.generators) <= 3
    q = polynomial(w * sympy.exp(sympy.Rational(exact_rational(0.3))) - a, w)
    assert q.degree == 1


def test_roots_of_large_numbers_come_apart_the_same_every_time():
    """1 - (0.9 c)^2 / c^2 in binary: a limited search finds the two large primes of its cofactor now and then."""
    root = sympy.sqrt(sympy.Integer(4806564767067018911565418111959))
    entries = {(0, 0): w - root * a, (0, 1): root, (1, 0): root, (1, 1): w}
    found = determinant(entries, 2, w).reduced().as_expr()
    assert same_up_to_unit(found, w**2 - root * a * w - root**2)


def test_discriminant_with_complex_coefficients():
    """b² − 4ac holds over the Gaussian integers too; the imaginary part is not left out."""
    found = polynomial(w**2 + sympy.I * b * w + (a + sympy.I * k), w).discriminant().as_expr()
    expected = (sympy.I * b) ** 2 - 4 * (a + sympy.I * k)
    assert sympy.expand(found - expected) == 0


# Rows and modes ----------------------------------------------------------------------------------


def small_row(numbers):
    p, q, r, s = numbers
    return {j: x for j, x in enumerate((p * w + q * k, r * sympy.I, s * k**2 + w)) if x != 0}


@settings(max_examples=40, deadline=None)
@given(
    st.lists(st.tuples(*[st.integers(-2, 2)] * 4), min_size=2, max_size=2),
    st.lists(st.integers(-2, 2), min_size=2, max_size=2),
)
def test_row_combination_gives_back_the_target(numbers, factors):
    rows = [small_row(n) for n in numbers]
    multipliers = [f + w * n for n, f in enumerate(factors)]
    target = {
        j: c
        for j in range(3)
        if (c := sympy.expand(sum(m * r.get(j, 0) for m, r in zip(multipliers, rows, strict=True))))
    }
    found = row_combination(rows, w, target)
    assert found is not None
    for j in range(3):
        made = sum(c * rows[i].get(j, 0) for i, c in found.items())
        assert sympy.cancel(made - target.get(j, 0)) == 0


def test_row_combination_of_independent_rows():
    assert row_combination([{0: sympy.S.One}], w, {1: a}) is None
    found = row_combination([{0: w**2, 1: a}, {1: w}], w, {0: sympy.S.One})
    assert found == {0: w**-2, 1: -a / w**3}
    assert [power_below(c, w) for c in found.values()] == [2, 3]
    assert power_below(1 / (w * (w - a)), w) is None


def test_modes_of_a_chain_are_counted_with_their_order():
    """d_t^2 x = 0 and d_t y = a y: one solution of the chain is constant."""
    rows = [{0: w, 1: sympy.S.One}, {1: w}, {2: w - a}]
    x, v, y = ({j: sympy.S.One} for j in range(3))
    assert shared_modes(rows, w, [w, w - a], [(), (v,), (x,), (y,)]) == [[2, 1, 0, 2], [1, 1, 1, 0]]
    assert modes_off_zero(rows, w, [(), (v,), (y,)]) == [1, 1, 0]
    assert [holds_off_zero(rows, w, [r]) for r in (x, v, y)] == [True, True, False]
    assert holds_off_zero([{0: w}, {0: a}], w, [y]) is None


def test_modes_where_roots_of_parameters_are_related():
    """sin² + cos² = 1 holds at the sampled point: (omega − 1)² with sin² + cos² for one of the ones."""
    unit = sympy.sin(theta) ** 2 + sympy.cos(theta) ** 2
    rows = [{0: w - unit}, {1: w - 1}]
    assert shared_modes(rows, w, [w - 1], [(), ({0: sympy.S.One},)]) == [[2, 1]]


@given(
    st.lists(st.integers(-9, 9), min_size=6, max_size=6),
    st.lists(st.integers(-9, 9), min_size=6, max_size=6),
)
def test_a_product_is_never_proven_irreducible(first, second):
    """Images in prime fields prove only what is so: two factors that hold the main symbol are both found."""
    monomials = [1, k, w, w * k, w**2, w**2 * k]
    p, q = (w**3 + sum(c * m for c, m in zip(cs, monomials, strict=True)) for cs in (first, second))
    factors = polynomial(sympy.expand(p * q), w).factor()[1]
    assert sum(m for _, m in factors) >= 2
    product = sympy.prod([f.as_expr() ** m for f, m in factors])
    assert sympy.expand(product - p * q) == 0


def test_long_irreducible_polynomials_are_known_from_prime_fields():
    for expression, proven in (
        (w**6 + k * w**2 + 3, True),
        (w**4 + 1, False),
        (w**2 - k**2, False),
    ):
        part = polynomial(expression, w)._value.re
        assert is_irreducible(part) == proven


@given(st.floats(-1e6, 1e6))
def test_sines_and_cosines_to_32_digits(angle):
    for name in ("sin", "cos"):
        ((high, low),) = on_circle(name, [angle])
        with mpmath.workdps(60):
            exact = getattr(mpmath, name)(mpmath.mpf(angle))
            assert high == float(exact)
            assert abs(exact - mpmath.mpf(high) - mpmath.mpf(low)) <= 1e-31 * abs(exact)
