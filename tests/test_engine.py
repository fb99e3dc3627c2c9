"""The root engine: every disc against exact arithmetic, on ordinary and on adversarial polynomials."""

from concurrent.futures import ThreadPoolExecutor
from fractions import Fraction as F

import mpmath
import numpy as np
import pytest
import sympy as sp
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.optimize import linear_sum_assignment

from plasmalin.errors import ValuesError
from plasmalin.roots.coefficients import coefficients
from plasmalin.roots.discs import Guess, discs
from plasmalin.roots.doubledouble import (
    UNIT,
    complex_horner,
    complex_noise,
    horner,
    real_noise,
)
from plasmalin.roots.enclose import BLOCK, enclose, merge
from plasmalin.roots.family import Family
from plasmalin.roots.scaling import Scaled, Structure, Table, scaled, structure_of, table_of

OMEGA, K, Q = sp.symbols("omega k q")


def family(expression, *swept):
    """A family from a SymPy polynomial with rational (or Gaussian rational) coefficients."""
    terms = sp.Poly(sp.expand(expression), OMEGA, *swept).terms()
    parts = [sp.sympify(c).as_real_imag() for _, c in terms]
    exact = tuple((F(int(a.p), int(a.q)), F(int(b.p), int(b.q))) for a, b in parts)
    return Family(np.array([e for e, _ in terms], np.int64), exact)


def plain(*arrays):
    return [(np.asarray(a), np.zeros_like(np.asarray(a))) for a in arrays]


def true_roots(found, grid, point):
    """Finite roots at one point by mpmath, 50 digits, from the exact coefficients: (re, im) as Fractions."""
    coefficients = found.at(grid, point)
    while not any(coefficients[-1]):
        coefficients.pop()
    with mpmath.workdps(50):
        number = [
            mpmath.mpc(*(mpmath.mpf(x.numerator) / x.denominator for x in c)) for c in coefficients
        ]
        roots = mpmath.polyroots(number[::-1], maxsteps=500, extraprec=600)
        return [(exact(mpmath.re(z)), exact(mpmath.im(z))) for z in roots]


def exact(x):
    sign, mantissa, exponent, _ = x._mpf_
    return F((-1) ** sign * int(mantissa)) * F(2) ** int(exponent)


def check(polynomial, grid, enclosure, points):
    """Every true root lies in its own disc and has its growth within the growth radius."""
    for point in points:
        truth = true_roots(polynomial, grid, point)
        finite = np.isfinite(enclosure.omega[point])
        omega = enclosure.omega[point][finite]
        assert len(omega) == len(truth)
        off = np.array([[distance(w, z) for z in truth] for w in omega])
        rows, columns = linear_sum_assignment(np.minimum(off, 1e300) / (1 + np.abs(omega)[:, None]))
        slack = 1e-60 + 1e-25 * np.abs(omega)
        assert (off[rows, columns] <= enclosure.radius[point][finite] + slack).all()
        for w, c, bound in zip(omega, columns, enclosure.growth_radius[point][finite], strict=True):
            assert abs(F(w.imag) - truth[c][1]) <= bound + 1e-25 * abs(w.imag) + 1e-60


def distance(w, z):
    with mpmath.workdps(50):
        re, im = (
            mpmath.mpf(d.numerator) / d.denominator for d in (F(w.real) - z[0], F(w.imag) - z[1])
        )
        return float(mpmath.hypot(re, im))


WARM = (OMEGA**2 - 1 - 3 * K**2) * (OMEGA**2 - sp.Rational(1, 1836) * K**2) - K**2 / 10000
TWO_STREAM = (OMEGA**2 * (OMEGA - K) ** 2) - (OMEGA - K) ** 2 - sp.Rational(1, 1836) * OMEGA**2
DAMPED = (OMEGA * (OMEGA + sp.I / 7) - 1 - 3 * K**2) * (OMEGA + sp.I * K**2 / 9) - sp.I * K / 5
DRIFT_AND_FRICTION = (OMEGA - K) * (OMEGA - K + sp.I / 7) * (OMEGA**2 - 5) - OMEGA * (
    OMEGA + sp.I * K / 10**6
)


@pytest.mark.parametrize("expression", [WARM, TWO_STREAM, DAMPED, DRIFT_AND_FRICTION])
def test_every_root_lies_in_its_disc(expression):
    polynomial, grid = family(expression, K), plain(np.geomspace(1e-2, 1e2, 700))
    found = enclose(polynomial, grid, points=700)
    assert (found.status == "certified").all()
    assert (found.radius <= 1e-15 * np.abs(found.omega)).all()
    check(polynomial, grid, found, range(0, 700, 50))
    assert "certified discs in twice the working precision" in found.method


def test_structure_is_found():
    assert structure_of(family(WARM, K), True).step == 2
    assert structure_of(family(DAMPED, K), True).turned
    assert not structure_of(family(DRIFT_AND_FRICTION, K), True).real
    assert not structure_of(family(WARM, K), False).real


def test_conservative_roots_are_exactly_real():
    found = enclose(family(WARM, K), plain(np.linspace(0.1, 3, 100)), points=100)
    assert (found.omega.imag == 0).all()
    assert (found.growth_radius == 0).all()


def test_thirteen_decades():
    """Roots from 1e-2 to 3e11 rad/s, each right to its last digit."""
    sizes = [F(1, 100), F(3), F(7, 2) * 10**4, F(5) * 10**6, F(3) * 10**11]
    expression = (
        sp.Mul(*(OMEGA**2 - sp.Rational(s) ** 2 * (1 + K**2) for s in sizes)) - OMEGA**4 * K
    )
    polynomial, grid = family(expression, K), plain(np.linspace(0.1, 2.0, 300))
    found = enclose(polynomial, grid, points=300)
    assert (found.radius <= 1e-15 * np.abs(found.omega)).all()
    check(polynomial, grid, found, range(0, 300, 30))


@pytest.mark.parametrize("growth", [1e-6, 1e-12, 3e-18])
def test_sign_of_a_tiny_growth_is_proven(growth):
    rate = sp.Rational(F(growth))
    expression = (OMEGA - K - sp.I * rate * K) * (OMEGA + 2 * K + sp.I * rate) * (OMEGA - 5)
    found = enclose(family(expression, K), plain(np.linspace(1, 2, 200)), points=200)
    grown = found.omega.imag[:, 1]
    assert (grown > found.growth_radius[:, 1]).all()
    assert np.allclose(grown, growth * np.linspace(1, 2, 200), rtol=1e-14, atol=0)
    assert (found.omega.imag[:, 0] < -found.growth_radius[:, 0]).all()


def test_special_points_keep_their_roots_in_place():
    expression = K * OMEGA**3 + OMEGA**2 - 1 * OMEGA + (K - 1) * (K + 2)
    polynomial, k = family(expression, K), np.linspace(-2, 2, 41)
    found = enclose(polynomial, plain(k), points=41)
    infinite, zero = k == 0, (k == 1) | (k == -2)
    assert (found.status[infinite] == "at infinity").sum() == 1
    assert np.isinf(found.omega[infinite, -1].real).all()
    assert ((found.status[zero] == "zero").sum(axis=1) == 1).all()
    assert (found.omega[zero][found.status[zero] == "zero"] == 0).all()
    assert (found.status[~infinite & ~zero] == "certified").all()


def test_tiny_leading_coefficients():
    expression = K**6 * OMEGA**4 + OMEGA**3 - OMEGA - sp.Rational(1, 7)
    polynomial, grid = family(expression, K), plain(np.geomspace(1e-9, 1e-3, 60))
    found = enclose(polynomial, grid, points=60)
    assert (found.status == "certified").all()
    check(polynomial, grid, found, range(0, 60, 9))


@pytest.mark.parametrize("gap", [0, 20, 40, 60, 80])
def test_clusters(gap):
    """Three roots 2^-gap apart (0: a double root) at every point, and a lonely one."""
    e = sp.Rational(1, 2**gap) if gap else 0
    expression = (
        (OMEGA - K)
        * (OMEGA - K * (1 + e))
        * (OMEGA - K * (1 + 3 * e) + (0 if gap else 1))
        * (OMEGA + 1)
    )
    polynomial, grid = family(expression, K), plain(np.linspace(0.5, 0.7, 40))
    found = enclose(polynomial, grid, points=40)
    assert (found.status == "certified").all()
    assert (found.radius <= 1e-15 * np.abs(found.omega)).all()


def test_coalescence_at_a_grid_point():
    """omega^2 = k^2 - 1 has a double root exactly at k = 1, real roots beyond, growth before."""
    found = enclose(
        family(OMEGA**2 - 4 * OMEGA + 5 - K**2, K), plain(np.linspace(0, 2, 65)), points=65
    )
    assert (found.status == "certified").all()
    assert np.array_equal(found.omega[32], [2, 2])
    assert (found.omega[:32, 1].imag > 0).all()
    assert (found.omega[33:].imag == 0).all()


def test_complex_wave_numbers_and_low_parts():
    k = np.linspace(1, 2, 50) + 0.1j
    low = 1e-17 * k
    polynomial, grid = family(TWO_STREAM, K), [(k, low)]
    check(polynomial, grid, enclose(polynomial, grid, points=50), range(0, 50, 7))
    q = np.sin(np.linspace(0.2, 1.2, 50))
    both = family(OMEGA**3 - K * Q * OMEGA - Q**2 * K**3, K, Q)
    grid = [(k, low), (q, 1e-17 * q)]
    check(both, grid, enclose(both, grid, points=50), range(0, 50, 7))


def test_points_that_are_not_finite_are_masked():
    k = np.linspace(1, 2, 30)
    k[7], k[20] = np.nan, np.inf
    found = enclose(family(WARM, K), plain(k), points=30)
    good = np.isfinite(k)
    assert (found.status[~good] == "masked").all()
    assert np.isnan(found.omega[~good]).all()
    rest = enclose(family(WARM, K), plain(k[good]), points=28)
    assert np.allclose(found.omega[good], rest.omega, rtol=1e-15)


def test_grids_of_two_quantities_in_any_order():
    x, y = np.meshgrid(np.geomspace(0.1, 10, 40), np.geomspace(0.2, 5, 30), indexing="ij")
    polynomial = family(OMEGA**4 - (1 + K**2 + Q**2) * OMEGA**2 + K**2 * Q**2 / 7, K, Q)
    whole = enclose(polynomial, plain(x.ravel(), y.ravel()), points=1200)
    assert (whole.status == "certified").all()
    shuffled = np.random.default_rng(1).permutation(1200)
    mixed = enclose(polynomial, plain(x.ravel()[shuffled], y.ravel()[shuffled]), points=1200)
    assert np.array_equal(mixed.omega, whole.omega[shuffled])


def test_workers_change_nothing():
    points = 2 * BLOCK + 100
    polynomial, grid = family(TWO_STREAM, K), plain(np.geomspace(0.01, 100, points))
    alone = enclose(polynomial, grid, points=points)
    with ThreadPoolExecutor(2) as pool:
        for workers in (2, pool.map):
            shared = enclose(polynomial, grid, points=points, workers=workers)
            for one, other in zip(alone.arrays(), shared.arrays(), strict=True):
                assert np.array_equal(one, other)
    with pytest.raises(ValuesError, match="workers=0"):
        enclose(polynomial, grid, points=points, workers=0)


def test_merge_keeps_multiplicities_and_missing_roots():
    one = enclose(family(OMEGA - K, K), plain(np.linspace(1, 2, 9)), points=9)
    two = enclose(family(OMEGA**2 - 3, K), plain(np.linspace(1, 2, 9)), points=9)
    whole = merge([one, two], [2, 1], points=9, zeros=1, degree=6)
    assert whole.omega.shape == (9, 6)
    assert (np.diff(whole.omega.real, axis=1) >= 0)[:, :-1].all()
    assert [list(whole.status[0]).count(s) for s in ("certified", "zero", "at infinity")] == [
        4,
        1,
        1,
    ]
    assert (whole.omega == np.linspace(1, 2, 9)[:, None]).sum() == 18


def test_without_swept_quantities():
    found = enclose(family(OMEGA**2 - 2), [], points=3)
    assert found.omega.shape == (3, 2)
    assert np.array_equal(found.omega[:, 1], [np.sqrt(2)] * 3)


NUMBERS = st.floats(-8, 8).map(lambda x: x if abs(x) > 1e-3 else 1.0)


@settings(max_examples=60, deadline=None)
@given(st.lists(st.tuples(NUMBERS, NUMBERS), min_size=2, max_size=9), NUMBERS, NUMBERS)
def test_horner_keeps_its_bounds(coefficients, x, y):
    """The proven error bounds of docs/certificate.md against exact rationals."""
    steps = len(coefficients) - 1
    pairs = [(c, c * 2.0**-54) for c, _ in coefficients]
    imag = [(c, c * 2.0**-55) for _, c in coefficients]
    got = horner(pairs, np.array([x]))
    true = size = F(0)
    for h, lo in pairs:
        true, size = true * F(x) + F(h) + F(lo), size * abs(F(x)) + abs(F(h))
    error = abs(F(float(got[0][0])) + F(float(got[1][0])) - true)
    assert error <= F(UNIT) ** 2 * real_noise(steps) * size
    re, im = complex_horner(pairs, imag, np.array([complex(x, y)]))
    true_re = true_im = F(0)
    size, magnitude = 0.0, abs(complex(x, y))
    for (a, a_low), (b, b_low) in zip(pairs, imag, strict=True):
        true_re, true_im = (
            true_re * F(x) - true_im * F(y) + F(a) + F(a_low),
            true_re * F(y) + true_im * F(x) + F(b) + F(b_low),
        )
        size = size * magnitude + abs(a) + abs(b)
    for (high, rest), true in ((re, true_re), (im, true_im)):
        error = abs(F(float(high[0])) + F(float(rest[0])) - true)
        assert float(error) <= UNIT**2 * complex_noise(steps) * size * (1 + 1e-12)


@settings(max_examples=40, deadline=None)
@given(
    st.lists(st.tuples(NUMBERS, NUMBERS), min_size=2, max_size=6, unique=True), st.integers(0, 50)
)
def test_discs_about_disturbed_roots_hold_the_roots(roots, digits):
    """Soundness: whatever the starts, a point that counts as proven has exactly one true root in every disc."""
    expression = sp.Mul(*(OMEGA - sp.Rational(F(a)) - sp.I * sp.Rational(F(b)) for a, b in roots))
    polynomial = family(expression, K)
    table = table_of(polynomial, plain(np.ones(1)))
    near = scaled(table, [(np.ones(1), np.zeros(1))])
    c = coefficients(near, table.degree, slice(None))
    z = np.array([complex(a, b) for a, b in roots]) * 2.0**-near.unknown
    start = Guess(np.zeros((0, 1)), (z * (1 + 2.0**-digits * (1 + 0.5j) / 8))[:, None], False)
    with np.errstate(all="ignore"):
        found = discs(c, start)
    if found.fair[0]:
        centre = (start.z - found.z_step)[:, 0]
        inside = np.abs(centre[:, None] - z[None]) <= (found.z_radius + 4 * UNIT * np.abs(start.z))
        assert np.array_equal(inside.sum(axis=1), np.ones(len(z)))


EXPONENTS = st.lists(
    st.tuples(*[st.integers(0, 7)] * 3, st.integers(0, 4)), min_size=1, max_size=150, unique=True
)


@settings(max_examples=30, deadline=None)
@given(EXPONENTS, st.integers(0, 2**32 - 1), st.integers(0, 2))
def test_sums_keep_their_bound(rows, seed, slow):
    """The bound of docs/certificate.md, section 4, against exact rationals; with and without runs of points."""
    random, places = np.random.default_rng(seed), np.array(rows)
    numbers = [random.normal(size=len(rows)) * 4.0 ** random.integers(-5, 5, len(rows))]
    numbers.append(numbers[0] * 2.0**-54)
    columns = [(x := np.repeat(random.normal(size=3), 2), x * 2.0**-54) for _ in range(slow)]
    columns += [(x := random.normal(size=6), x * 2.0**-54) for _ in range(3 - slow)]
    table = np.zeros((2, len(rows), 5))
    table[:, np.arange(len(rows)), places[:, 3]] = numbers
    structure = Structure(0, 1, False, True)
    shown = Table(structure, 4, places[:, :3], *table, np.zeros(table[0].shape, np.int64))
    c = coefficients(Scaled(shown, (0, 1, 2), *table, columns, 0), 4, slice(None))
    for point in range(6):
        x = [F(hi[point]) + F(lo[point]) for hi, lo in columns]
        true, size = [F(0)] * 5, [F(0)] * 5
        for (*e, j), high, low in zip(rows, *numbers, strict=True):
            monomial = x[0] ** e[0] * x[1] ** e[1] * x[2] ** e[2]
            true[j] += (F(high) + F(low)) * monomial
            size[j] += abs(F(high) * monomial)
        for j in range(5):
            found = F(c.high[j, point]) + F(c.low[j, point])
            assert abs(found - true[j]) <= c.noise * F(UNIT) ** 2 * size[j]
            assert abs(F(c.size[j, point]) - size[j]) <= size[j] / 2**40


def test_coarse_and_scattered_points():
    """Grids so coarse that the starts are rough, and points in no order, against exact arithmetic."""
    expression = (OMEGA**2 - 1 - 3 * K**2 - Q**2) * (OMEGA**2 - K**2 * Q / 7) - K * Q / 100
    polynomial, random = family(expression, K, Q), np.random.default_rng(5)
    k, q = (a.ravel() for a in np.meshgrid(np.geomspace(0.1, 50, 20), np.geomspace(0.2, 9, 15)))
    for grid in (plain(k, q), plain(*np.exp(random.normal(size=(2, 300))))):
        found = enclose(polynomial, grid, points=300)
        assert (found.status == "certified").all()
        check(polynomial, grid, found, range(0, 300, 37))


def test_pairs_of_points_that_jump_from_each_other():
    """Where both ends of every stretch are nodes nothing lies between, and the nodes are not solved by themselves."""
    pairs = np.linspace(1.0, 2.0, 60)
    falling = np.stack([3 - pairs, 3.0001 - pairs], axis=1).ravel()
    found = family(OMEGA**3 - (1 + K**2 + Q) * OMEGA + K * Q, K, Q)
    made = enclose(found, plain(np.repeat(pairs, 2), falling), points=120)
    assert (made.status == "certified").all()
    assert np.abs(made.omega.sum(axis=1)).max() < 1e-15  # no square term


@pytest.mark.parametrize("friction", [0, sp.I / 9])
def test_scattered_points_with_any_number_of_real_roots(friction):
    """Two streams: real roots at some points, growth at others; neighbors have other kinds of roots."""
    expression = OMEGA**2 * (OMEGA - K + friction) ** 2 - (OMEGA - K) ** 2 - Q * OMEGA**2
    polynomial, random = family(expression, K, Q), np.random.default_rng(2)
    grid = plain(random.uniform(0.2, 4, 900), random.uniform(0.01, 1, 900))
    found = enclose(polynomial, grid, points=900)
    assert (found.status == "certified").all()
    assert (found.radius <= 1e-15 * np.abs(found.omega)).all()
    if not friction:
        assert len(np.unique((found.omega.imag == 0).sum(axis=1))) > 1
    check(polynomial, grid, found, range(0, 900, 60))
