"""Both ways of the root engine against roots that are known exactly, on families made to be hard."""

from fractions import Fraction as F
from random import Random

import numpy as np
import pytest
from scipy.optimize import linear_sum_assignment

import plasmalin as plin
from plasmalin.exact.univariate import complex_roots
from plasmalin.roots.block import solve_block
from plasmalin.roots.enclose import enclose
from plasmalin.roots.family import Family, times
from plasmalin.roots.pointwise import solved_exactly
from plasmalin.roots.roots import Roots
from plasmalin.roots.scaling import columns_of, table_of
from plasmalin.roots.solved import Status

ZERO = (F(0), F(0))


def product(factors):
    """Polynomials in omega and K as {(power, power): coefficient}, multiplied."""
    whole = {(0, 0): (F(1), F(0))}
    for factor in factors:
        made = {}
        for (a, b), x in whole.items():
            for (c, d), y in factor.items():
                re, im = times(x, y)
                old = made.get((a + c, b + d), ZERO)
                made[a + c, b + d] = old[0] + re, old[1] + im
        whole = made
    return {k: v for k, v in whole.items() if v != ZERO}


def family_of(terms):
    return Family(np.array(list(terms), np.int64), tuple(terms.values()))


def line(a, b):
    """omega - a - b K."""
    return {(1, 0): (F(1), F(0)), (0, 0): (-a[0], -a[1]), (0, 1): (-b[0], -b[1])}


def contained(found, point, truth):
    """Every true root in a radius of its own, and its growth within the growth radius; signs as shown."""
    state, omega = found.state[point], found.omega[point]
    rest = [t for t in truth if t != ZERO]
    assert (state == Status.ZERO).sum() == len(truth) - len(rest)
    rows = np.flatnonzero(state == Status.CERTIFIED)
    assert len(rows) == len(rest)
    outside = np.ones((len(rows), len(rest)))
    for i, row in enumerate(rows):
        re, im = F(omega[row].real), F(omega[row].imag)
        radius, growth = F(found.radius[point, row]), F(found.growth_radius[point, row])
        for j, (a, b) in enumerate(rest):
            near = (re - a) ** 2 + (im - b) ** 2 <= radius**2 and abs(im - b) <= growth
            sign = abs(im) <= growth or (im > 0) == (b > 0)
            outside[i, j] = not (near and sign)
    assert outside[linear_sum_assignment(outside)].sum() == 0


def size(random, decades):
    return random.choice((-1, 1)) * F(10 ** random.uniform(-decades / 2, decades / 2))


def hard_lines(random):
    """Roots a + b K, the range of K, and whether all are real."""
    kind = random.choice(("plain", "cluster", "decades", "growth", "extreme", "cancelling"))
    flat = random.random() < 0.5 and kind != "growth"

    def number(decades=1.0):
        return size(random, decades), F(0) if flat else size(random, decades)

    n, ends = random.choice((2, 3, 4, 6)), (0.5, 2.0)
    lines = [(number(), number()) for _ in range(n)]
    if kind == "cluster":
        (re, im), slope = lines[0]
        gap = F(1, 10 ** random.choice((3, 6, 10, 14, 20, 30)))
        lines[:2] = [((re + j * gap, im + (0 if flat else j * j * gap)), slope) for j in range(3)]
    elif kind == "decades":
        lines = [(number(16), ZERO) for _ in range(n)]
    elif kind == "growth":
        tiny = F(1, 10 ** random.choice((12, 18, 20, 26)))
        lines = [((a, b * tiny), (c, d * tiny)) for (a, b), (c, d) in lines]
    elif kind == "extreme":
        ends = random.choice(((1e-300, 1e-290), (1e290, 1e300), (5e-324, 1e-310), (1e-60, 1e60)))
    elif kind == "cancelling":
        lines = [
            ((a - c * 10**9, b - d * 10**9), (c * 10**9, d * 10**9)) for (a, b), (c, d) in lines
        ]
        ends = 1 - 1e-9, 1 + 1e-9
    return lines, ends


@pytest.mark.parametrize("seed", range(40))
def test_hard_families(seed):
    """Clusters, 16 decades, growth 1e-26 of omega, swept values 1e-323 to 1e300, coefficients that cancel."""
    random = Random(seed)
    lines, ends = hard_lines(random)
    family = family_of(product(line(a, b) for a, b in lines))
    k = np.array([random.uniform(*ends) for _ in range(12)])
    grid = [(k, k * 2.0**-54)]
    discs, points = solve_block(table_of(family, grid), columns_of(grid)), np.arange(len(k))
    for point in (0, 7):
        at = F(k[point]) + F(grid[0][1][point])
        truth = [(a[0] + b[0] * at, a[1] + b[1] * at) for a, b in lines]
        if (discs.state[point] != Status.NOT_CERTIFIED).all():
            contained(discs, point, truth)
        contained(solved_exactly(family, grid, points[[point]]), 0, truth)


def test_roots_that_vanish_or_go_to_infinity_are_counted():
    lead = {(0, 0): (F(-2), F(0)), (0, 1): (F(1), F(0))}
    lines = [((F(1), F(1)), (F(-1), F(-1))), ((F(3), F(0)), (F(1), F(2)))]
    family, k = family_of(product([lead, *(line(a, b) for a, b in lines)])), np.linspace(0, 3, 13)
    found = enclose(family, [(k, 0 * k)], points=13)
    assert list(found.status[4]) == ["zero", "certified"]  # K = 1
    assert (found.status[8] == "masked").all()  # K = 2: every coefficient vanishes
    assert "1 left out" in found.method
    for point in (0, 1, 4, 12):
        contained(
            found, point, [(a[0] + b[0] * F(k[point]), a[1] + b[1] * F(k[point])) for a, b in lines]
        )


def test_a_swept_value_that_scaling_would_lose_counts():
    """K is 2^900 at most points and 2^-180 at one, where its term still moves the roots by 1e-27 of their size."""
    k, q = np.full(400, 2.0**900), np.full(400, 2.0**-290)
    k[7], q[7] = 2.0**-180, 2.0**7
    terms = {(0, 1, 0): F(2) ** -900, (0, 0, 0): F(2) ** -196, (1, 1, 1): F(2) ** -13}
    family = family_of({p: (c, F(0)) for p, c in {**terms, (2, 0, 0): F(1)}.items()})
    grid = [(k, 0 * k), (q, 0 * q)]
    found = enclose(family, grid, points=400)
    half = F(2) ** (-13 - 180 + 7) / 2  # omega^2 + 2 half omega + ...
    assert abs(F(found.omega[7, 0].real) + half) < half / 10**15


@pytest.mark.parametrize("turned", [False, True])
def test_a_growth_too_small_to_resolve_is_not_called_zero(turned):
    tiny = F(1, 10**130)
    lines = [((F(1), tiny), ZERO), ((F(-1), tiny) if turned else (F(2), F(3)), ZERO)]
    found = enclose(
        family_of(product(line(a, b) for a, b in lines)), [(np.ones(1), np.zeros(1))], points=1
    )
    contained(found, 0, [a for a, _ in lines])


def test_roots_beyond_the_range_of_doubles_say_so():
    scale, k = F(10) ** 20, np.geomspace(1e280, 1e300, 21)
    family = family_of(product([line(ZERO, (scale, F(0))), line(ZERO, (-3 * scale, F(0)))]))
    found = enclose(family, [(k, 0 * k)], points=21)
    assert (found.status[:8] == "certified").all()
    assert (found.status[-1] == "not certified").all()
    assert np.array_equal(found.omega[-1].real, [-np.inf, np.inf])
    assert "of them without a proof" in found.method
    with pytest.raises(plin.ValuesError, match="beyond the range of doubles"):
        Roots(found, found.omega.shape).require()


@pytest.mark.parametrize("gap", [F(1, 10**60), F(1, 10**300)])
@pytest.mark.parametrize("flat", [True, False])
def test_clusters_however_close_are_parted(gap, flat):
    """Three roots, two of them nearer still, beside others; each in a disc of its own, real ones proven real."""
    near = [(F(1, 3) + j * gap, F(0 if flat else 1, 5)) for j in (F(0), F(1), 1 + gap / 10**9)]
    truth = [*near, (F(2), F(0)), (F(-7), F(0 if flat else 2))]
    terms = product(line(a, ZERO) for a in truth)
    found = complex_roots([terms.get((n, 0), ZERO) for n in range(len(truth) + 1)], 25)
    assert [m for *_, m in found] == [1] * len(truth)
    for re, im in truth:
        assert any(
            (re - x) ** 2 + (im - y) ** 2 <= r**2 and 10**25 * r <= 3 * abs(x)
            for x, y, r, _ in found
        )
    assert not flat or all(y == 0 for _, y, _, _ in found)


def test_equal_and_close_roots_together():
    """(3 w - 1)^2 ((3 w - 1) - 10^-90) has a double root beside a simple one."""
    a = (F(1, 3), F(0))
    terms = product([line(a, ZERO), line(a, ZERO), line((a[0] + F(1, 10**90), F(0)), ZERO)])
    found = complex_roots([terms[n, 0] for n in range(4)], 25)
    assert sorted(m for *_, m in found) == [1, 2]


def test_numpy_rounds_as_the_proof_assumes():
    """Complex product, quotient and size, and hypot, on parts of like and of very unlike size."""
    random = np.random.default_rng(3)
    parts = random.normal(size=(4, 1500)) * 2.0 ** random.integers(-30, 30, (4, 1500))
    x, y = parts[0] + 1j * parts[1], parts[2] + 1j * parts[3]
    y[:700] = x[:700].conj() * (1 + 1e-15 * random.normal(size=700))
    square = 2.0**-106
    for a, b, p, q, s, h in zip(
        x, y, x * y, x / y, np.abs(x), np.hypot(x.real, x.imag), strict=True
    ):
        (ar, ai), (br, bi) = ((F(z.real), F(z.imag)) for z in (a, b))
        size_a, size_b = ar**2 + ai**2, br**2 + bi**2
        true = ar * br - ai * bi, ar * bi + ai * br
        assert off(p, *true) <= 5 * square * size_a * size_b
        true = (ar * br + ai * bi) / size_b, (ai * br - ar * bi) / size_b
        assert off(q, *true) <= 49 * square * size_a / size_b
        assert (1 - 3 * 2.0**-53) ** 2 <= F(s) ** 2 / size_a <= (1 + 3 * 2.0**-53) ** 2
        assert (1 - 2 * 2.0**-53) ** 2 <= F(h) ** 2 / size_a <= (1 + 2 * 2.0**-53) ** 2


def off(z, re, im):
    return (F(z.real) - re) ** 2 + (F(z.imag) - im) ** 2
