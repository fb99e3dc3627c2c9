"""The reduced pencil: every disc against exact arithmetic, on models, and on matrices and points made to be difficult."""

from fractions import Fraction as F

import numpy as np
import pytest
import sympy as sp
from hypothesis import given, settings
from hypothesis import strategies as st
from published_fluids import CASES as FLUIDS
from published_own import CASES as PLASMAS
from published_user import CASES as USERS
from scipy.optimize import linear_sum_assignment

import plasmalin as plin
from plasmalin import advect, cross, curl, div, grad, laplacian, partial_t
from plasmalin.exact.determinant import determinant
from plasmalin.exact.minors import TooLong
from plasmalin.exact.pencil import circle_point, circles_of, determinant_of
from plasmalin.exact.univariate import complex_roots
from plasmalin.roots.choice import by_blocks, chosen_problem
from plasmalin.roots.deflation import standard
from plasmalin.roots.eigendiscs import eigen_sheet
from plasmalin.roots.enclose import enclose
from plasmalin.roots.family import exact_value, times
from plasmalin.roots.pointwise import solved_exactly
from plasmalin.roots.reduced import ReducedWay
from plasmalin.roots.replay import Ball, minus_product, quotient
from plasmalin.roots.roots import solve
from plasmalin.roots.solve import LONGEST, filled_in, grid_of, pose, what_is_known
from plasmalin.roots.solved import Status
from plasmalin.roots.values import gather, with_defaults
from tests.benchmarks.models import dusty_numbers, electromagnetic, numbers

PUBLISHED = {**PLASMAS, **FLUIDS, **USERS}


def posed(wave, values, **waves):
    """The problem as matrices, however short its determinant, and the numbers."""
    known = gather(wave, with_defaults(wave, values), waves)
    is_real = not any(np.iscomplexobj(v) for v in known.swept.values())
    return by_blocks(wave, *what_is_known(known), is_real, longest=0), known


def assert_agree(found, other):
    """The same roots within the radii, and the same statuses."""
    assert np.array_equal(found.state, other.state)
    finite = np.isfinite(found.omega)
    for mine, theirs, here in zip(
        zip(found.omega, found.radius, strict=True),
        zip(other.omega, other.radius, strict=True),
        finite,
        strict=True,
    ):
        if not here.any():
            continue
        off = np.abs(mine[0][here, None] - theirs[0][None, here])
        over = off - (mine[1][here, None] + theirs[1][None, here])
        rows, columns = linear_sum_assignment(np.maximum(over, 0.0) / (1e-300 + off.max()))
        assert (over[rows, columns] <= 0).all()


def both_ways(wave, values, **waves):
    """The pencil's enclosure, checked against the polynomial's."""
    matrices, known = posed(wave, values, **waves)
    found = solve(matrices, known)
    assert_agree(found, solve(pose(wave, known), known))
    return found


def by_exact_arithmetic(found):
    """How many points the pencil did not prove."""
    return max(int(p.split("arithmetic at ")[1]) for p in found.method.split("; "))


# Models ----------------------------------------------------------------------------------------


@pytest.mark.parametrize("options", [{}, {"drift": True}, {"drift": True, "friction": True}])
@pytest.mark.parametrize("count", [2, 3])
def test_both_ways_agree_at_scattered_points(count, options):
    random = np.random.default_rng(count)
    wave = electromagnetic(count, **options).linearize().plane_wave(angle="theta")
    values = numbers(count, **options)
    swept = values["T_1"] * random.uniform(0.5, 2, 24)
    waves = {"k": random.uniform(10, 2e4, 24), "theta": random.uniform(0, 3.1, 24)}
    found = both_ways(wave, {**values, "T_1": swept}, **waves)
    assert by_exact_arithmetic(found) == 0
    assert (found.radius <= 2.3e-16 * np.abs(found.omega)).all()


@pytest.mark.parametrize("name", PUBLISHED)
def test_published_laws(name):
    """Constraints of every index, gradients, sources, friction, |k|: with all wave numbers swept."""
    case, random = PUBLISHED[name](), np.random.default_rng(1)
    waves = {k: np.multiply(v, random.uniform(0.5, 2, 10)) for k, v in case.k.items()}
    matrices, known = posed(case.wave, case.values, **waves)
    if matrices is None:
        assert name in {"relativistic_beam", "deep_water", "thermal_instability"}
        return
    found = solve(matrices, known)
    assert_agree(found, solve(pose(case.wave, known), known))
    assert by_exact_arithmetic(found) == 0


def massless_electrons():
    """Warm ions and massless electrons, quasi-neutral, no displacement current: E is a multiplier."""
    model = plin.FluidModel("massless electrons")
    e, m, n0, ti, te, mu0 = model.parameters("e m n_0 T_i T_e mu_0", positive=True)
    n_e, n_i = (model.scalar(f"n_{s}", background=n0) for s in "ei")
    v_e, v_i, electric = (model.vector(name) for name in ("v_e", "v_i", "E"))
    magnetic = model.vector("B", background=(0, 0, "B_0"))
    model.law("continuity", partial_t(n_i) + div(n_i * v_i))
    force = n_i * e * (electric + cross(v_i, magnetic)) - ti * grad(n_i)
    model.law("ions", m * n_i * (partial_t(v_i) + advect(v_i, v_i)), force)
    model.law("electrons", n_e * e * (electric + cross(v_e, magnetic)) + te * grad(n_e))
    model.law("neutrality", n_e - n_i)
    model.law("Faraday", partial_t(magnetic), -curl(electric))
    model.law("Ampere", curl(magnetic), mu0 * e * (n_i * v_i - n_e * v_e))
    return model


def test_massless_electrons_without_displacement_current():
    random = np.random.default_rng(3)
    wave = massless_electrons().linearize().plane_wave(("k_x", 0, "k_z"))
    values = dict(
        zip("e m n_0 T_i T_e mu_0 B_0".split(), random.uniform(0.5, 2, (7, 16)), strict=True)
    )
    found = both_ways(
        wave,
        {**values, "m": 1.0, "e": 1.0, "mu_0": 1.0, "T_i": 0.3},
        k_x=0.7,
        k_z=random.uniform(0.1, 3, 16),
    )
    assert found.omega.shape == (16, 6)
    assert by_exact_arithmetic(found) == 0


def test_incompressible_fluid():
    """Pressure as multiplier of div v = 0 (index 2): two shear Alfven pairs, H. Alfven (1942)."""
    model = plin.FluidModel("incompressible")
    v, b, p = model.vector("v"), model.vector("B", background=(0, 0, "B_0")), model.scalar("p")
    rho, mu0 = model.parameters("rho mu_0", positive=True)
    model.law("momentum", rho * (partial_t(v) + advect(v, v)), -grad(p) + cross(curl(b), b) / mu0)
    model.law("induction", partial_t(b), curl(cross(v, b)))
    model.law("incompressible", div(v))
    wave = model.linearize().plane_wave(("k_x", "k_y", "k_z"))
    random = np.random.default_rng(4)
    b0, (kx, ky, kz) = random.uniform(1e-3, 2e-3, 20), random.uniform(1e-5, 3e-5, (3, 20))
    matrices, known = posed(
        wave, {"rho": 1e-12, "mu_0": 1.25e-6, "B_0": b0}, k_x=kx, k_y=ky, k_z=kz
    )
    found = solve(matrices, known)
    alfven = kz * b0 / np.sqrt(1e-12 * 1.25e-6)
    assert np.allclose(found.omega, alfven[:, None] * [-1, -1, 1, 1], rtol=1e-14)
    assert (found.status == "certified").all()
    assert by_exact_arithmetic(found) == 0  # double roots with two eigenvectors are proven together


def test_mixed_degrees():
    """Unknowns with first, second and third time derivatives."""
    model = plin.FluidModel("mixed", axes="x")
    f, g, h = (model.scalar(s) for s in "fgh")
    a, b, c = model.parameters("a b c", positive=True)
    model.law("f", partial_t(partial_t(f)), a**2 * laplacian(f) - b * g)
    model.law("g", partial_t(g) + c * partial_t(f), b * h - a * g)
    model.law("h", partial_t(partial_t(partial_t(h))) + a * partial_t(h), c * f + laplacian(g))
    random = np.random.default_rng(5)
    values = dict(zip("abc", random.uniform(0.5, 2, (3, 20)), strict=True))
    found = both_ways(model.linearize().plane_wave("x"), values, k=random.uniform(0.1, 3, 20))
    assert found.omega.shape == (20, 6)
    assert by_exact_arithmetic(found) == 0


def test_thirteen_decades():
    """A dusty plasma with roots from 1e-2 to 6e12 rad/s: each against exact arithmetic on the polynomial."""
    random = np.random.default_rng(6)
    wave = electromagnetic(3).linearize().plane_wave(angle="theta")
    waves = {"k": np.geomspace(10, 2e4, 12), "theta": random.uniform(0.1, 1.5, 12)}
    values = dusty_numbers()
    values["T_2"] = values["T_2"] * random.uniform(0.5, 2, 12)
    matrices, known = posed(wave, values, **waves)
    found, problem = solve(matrices, known), pose(wave, known)
    ((family, _),) = problem.factors
    exact = solved_exactly(family, grid_of(problem, known), np.arange(12))
    assert np.ptp(np.log10(np.abs(exact.omega))) > 13
    assert (np.abs(found.omega - exact.omega) <= 1e-15 * np.abs(exact.omega)).all()
    assert (found.omega.imag == 0).all()
    assert by_exact_arithmetic(found) == 0


# Points ----------------------------------------------------------------------------------------


def test_special_points_keep_their_statuses():
    """Parallel and perpendicular propagation and k = 0 among others: roots at zero, pivots that vanish."""
    random = np.random.default_rng(7)
    wave = electromagnetic(2, drift=True).linearize().plane_wave(("k_x", 0, "k_z"))
    k_x, k_z = random.uniform(10, 2e4, (2, 24))
    k_x[:6], k_z[6:10] = 0.0, 0.0
    found = both_ways(wave, numbers(2, drift=True), k_x=k_x, k_z=k_z)
    assert {"certified", "zero"} == set(np.unique(found.status))
    assert by_exact_arithmetic(found) == 4


def test_close_to_a_double_root():
    """Angles at which crossings are avoided ever more closely: two branches apart by 1e-4 to 1e-14."""
    wave = electromagnetic(2).linearize().plane_wave(angle="theta")
    theta = np.geomspace(1e-3, 1e-13, 24)
    k = np.full(24, 419.314)
    both_ways(wave, numbers(2), k=k, theta=theta)


def test_points_that_are_not_finite_are_masked():
    wave = electromagnetic(2).linearize().plane_wave(angle="theta")
    k, theta = np.linspace(10, 100, 20), np.linspace(0.1, 1, 20)
    k[3], theta[7] = np.nan, np.inf
    matrices, known = posed(wave, numbers(2), k=k, theta=theta)
    found = solve(matrices, known)
    assert_agree(found, solve(pose(wave, known), known))
    masked = (found.status == "masked").all(axis=1)
    assert np.flatnonzero(masked).tolist() == [3, 7]
    assert (found.status[~masked] == "certified").all()
    every, known = posed(wave, numbers(2), k=np.full(20, np.nan), theta=0.3)
    assert (solve(every, known).status == "masked").all()


def test_numbers_that_overflow_prove_nothing():
    wave = electromagnetic(2).linearize().plane_wave(("k_x", 0, "k_z"))
    k = np.array([1e-280, 1e-200, 1e2, 1e3, 1e160, 1e250])
    matrices, known = posed(wave, numbers(2), k_x=k, k_z=k)
    (matrix,), grid = matrices.matrices, grid_of(matrices, known)
    made = ReducedWay.of(matrix, grid, np.arange(6)).prove(grid)
    proven = (made.state == Status.CERTIFIED).all(axis=1)
    assert proven[2:4].all()
    assert not proven[[0, 5]].any()


def test_complex_wave_numbers():
    wave = electromagnetic(2).linearize().plane_wave(("k_x", 0, "k_z"))
    random = np.random.default_rng(8)
    k_x = random.uniform(10, 2e3, 12) * (1 + 0.1j * random.uniform(-1, 1, 12))
    found = both_ways(wave, numbers(2), k_x=k_x, k_z=random.uniform(10, 2e4, 12))
    assert by_exact_arithmetic(found) == 0


def test_workers_change_nothing():
    random = np.random.default_rng(9)
    wave = electromagnetic(2, drift=True).linearize().plane_wave(("k_x", 0, "k_z"))
    k_x, k_z = random.uniform(10, 2e4, (2, 2100))
    k_z[1500:1510] = 0.0
    matrices, known = posed(wave, numbers(2, drift=True), k_x=k_x, k_z=k_z)
    (matrix,), grid = matrices.matrices, grid_of(matrices, known)
    one = enclose(matrix, grid, points=2100)
    for workers in (2, map):
        other = enclose(matrix, grid, points=2100, workers=workers)
        for mine, theirs in zip(one.arrays(), other.arrays(), strict=True):
            assert np.array_equal(mine, theirs)


# The choice ------------------------------------------------------------------------------------


def seven_swept(points):
    random = np.random.default_rng(10)
    values = numbers(3, drift=True)
    del values["u_1"]
    for name in ("B_0", "T_0", "T_1", "n_00", "u_0"):
        values[name] = values[name] * random.uniform(0.5, 2, points)
    return values, {"k": random.uniform(10, 2e4, points), "theta": random.uniform(0.1, 1.4, points)}


def test_long_determinants_are_not_written_out():
    """And every root is the one found from numbers alone, point by point."""
    wave = electromagnetic(3, drift=True).linearize().plane_wave(angle="theta")
    values, waves = seven_swept(40)
    roots = wave.roots(values, **waves).require()
    assert roots.method == (
        f"the determinant has more than {LONGEST:,} terms in the 7 swept quantities: reduced pencil (16 of 18 "
        "unknowns left), certified discs in twice the working precision at 40 of 40 points, exact ball arithmetic at 0"
    )
    for point in (0, 17, 39):
        here = {n: np.broadcast_to(v, 40)[point] for n, v in (values | waves).items()}
        one = wave.roots({n: here[n] for n in values}, **{n: here[n] for n in waves})
        assert (np.abs(one.omega - roots.omega[point]) <= one.radius + roots.radius[point]).all()
        assert np.array_equal(one.omega.imag == 0, roots.omega[point].imag == 0)
    with_zeros = wave.roots(values, **waves, zero_modes=True)
    assert ((with_zeros.omega == 0).sum(axis=1) == with_zeros.shape[1] - roots.shape[1]).all()


def test_few_points_go_to_exact_arithmetic_at_once():
    wave = electromagnetic(2, drift=True).linearize().plane_wave(("k_x", 0, "k_z"))
    matrices, known = posed(wave, numbers(2, drift=True), k_x=[10.0, 20.0], k_z=[5.0, 7.0])
    found = solve(matrices, known)
    assert found.method.endswith("at 0 of 2 points, exact ball arithmetic at 2")


def test_short_determinants_are_written_out():
    wave = electromagnetic(2).linearize().plane_wave(angle="theta")
    known = gather(wave, with_defaults(wave, numbers(2)), {"k": np.arange(1.0, 9), "theta": 0.5})
    assert chosen_problem(wave, known) is pose(wave, known)
    assert not pose(wave, known).matrices


def test_the_limit_stops_a_determinant_early():
    wave = electromagnetic(2, drift=True).linearize().plane_wave(angle="theta")
    values = with_defaults(wave, numbers(2, drift=True))
    known = gather(wave, values, {"k": [1.0], "theta": [0.5]})
    entries = filled_in(wave, *what_is_known(known))
    terms = len(determinant(entries, len(wave.rows), wave.omega))
    assert len(determinant(entries, len(wave.rows), wave.omega, longest=terms)) == terms
    with pytest.raises(TooLong):
        determinant(entries, len(wave.rows), wave.omega, longest=terms - 1)


def test_relations_that_rounded_numbers_break():
    """Hyperbolic functions and roots of sums are left to the polynomial, |k| and angles of complex numbers too."""
    x, y = sp.symbols("x y", real=True)
    assert circles_of([sp.sin(x), sp.cos(x), y, sp.Abs(y), sp.pi, sp.sqrt(y)]) == (
        (sp.sin(x), sp.cos(x)),
    )
    for g in (sp.cosh(x), sp.sqrt(1 + x), sp.sqrt(2), sp.sqrt(sp.cos(x)), sp.sqrt(sp.Abs(x))):
        assert circles_of([g]) is None
    wave = electromagnetic(2).linearize().plane_wave(angle="theta")
    matrices, _ = posed(wave, numbers(2), k=[1.0, 2.0], theta=[0.5, 0.5 + 0.1j])
    assert matrices is None


def test_a_determinant_that_vanishes():
    model = plin.FluidModel("one law too few", axes="x")
    f, g, a = model.scalar("f"), model.scalar("g"), model.parameter("a")
    model.law("f", partial_t(f), a * laplacian(g))
    model.law("g", partial_t(f), a * laplacian(g) + a * (a - 1) * laplacian(f))
    wave = model.linearize().plane_wave("x")
    with pytest.raises(plin.UndeterminedError, match="vanishes identically"):
        posed(wave, {"a": 1.0}, k=[1.0, 2.0])


# Arithmetic ------------------------------------------------------------------------------------

SIZES = st.floats(-1e3, 1e3).filter(lambda x: x == 0 or abs(x) > 1e-3)


@st.composite
def balls(draw, inexact):
    """A number in two parts, and another one within its bound."""
    high, low = draw(SIZES), draw(st.floats(-1, 1)) * 2.0**-54
    other = (draw(SIZES), draw(st.floats(-1, 1)) * 2.0**-54) if inexact else (0.0, 0.0)
    bound = draw(st.sampled_from([0.0, 1e-30, 1e-20, 1e-5]))
    share = F(draw(st.sampled_from([-1, 0, 1]))) * F(bound)
    parts = (F(high) + F(high * low) + share, F(other[0]) + F(other[0] * other[1]))
    kind = complex if inexact else float
    made = [
        np.array([h + 1j * o if inexact else h], kind)
        for h, o in ((high, other[0]), (high * low, other[0] * other[1]))
    ]
    return Ball(*made, np.array([bound])), parts


def inside(ball, exact):
    if not np.isfinite(ball.bound[0]):
        return True
    re, im = (x - y for x, y in zip(exact_value(ball.high[0], ball.low[0]), exact, strict=True))
    return re * re + im * im <= F(ball.bound[0]) ** 2


@settings(max_examples=60, deadline=None)
@given(st.booleans().flatmap(lambda z: st.tuples(*[balls(z)] * 3)), st.booleans())
def test_balls_hold_what_they_stand_for(three, cancelling):
    (a, x), (b, y), (c, z) = three
    product = times(y, z)
    if cancelling:  # a is the rounded product
        high = b.high * c.high
        a, x = Ball(high, 0 * high, np.zeros(1)), exact_value(high[0], 0 * high[0])
    with np.errstate(all="ignore"):
        difference, ratio = minus_product(a, b, c), quotient(a, b)
    assert inside(difference, (x[0] - product[0], x[1] - product[1]))
    norm = y[0] * y[0] + y[1] * y[1]
    if norm:
        re, im = times(x, (y[0], -y[1]))
        assert inside(ratio, (re / norm, im / norm))
    else:
        assert not np.isfinite(ratio.bound[0])


def test_replay_holds_the_exact_reduced_matrix():
    """The same steps in exact rational arithmetic."""
    wave = electromagnetic(2, drift=True, friction=True).linearize().plane_wave(angle="theta")
    random = np.random.default_rng(11)
    waves = {"k": random.uniform(10, 2e4, 12), "theta": random.uniform(0.1, 1.5, 12)}
    matrices, known = posed(wave, numbers(2, drift=True, friction=True), **waves)
    (matrix,), grid = matrices.matrices, grid_of(matrices, known)
    reduction = standard(matrix, grid)
    found = reduction.entries(matrix.balls(grid), 12)
    program = reduction.program
    for point in (0, 7):
        registers = [exact_value(n.high[0], n.low[0]) for n in program.numbers]
        values = [exact_value(hi[point], lo[point]) for hi, lo in grid]
        for sine, cosine in matrix.circles:
            s, c = circle_point(values[sine][0], values[cosine][0])
            values[sine], values[cosine] = (s, F(0)), (c, F(0))
        registers += values
        for kind, a, b, c in program.steps:
            (x, y), (u, v) = registers[a], registers[b]
            if kind == 0:
                product = times((u, v), registers[c])
                registers.append((x - product[0], y - product[1]))
            else:
                norm = u * u + v * v
                re, im = times((x, y), (u, -v))
                registers.append((re / norm, im / norm))
        for entry, register in enumerate(program.results):
            ball = Ball(*(part[point : point + 1, entry] for part in found))
            assert inside(ball, registers[register])
            assert ball.bound[0] <= 2.0**-80 * abs(ball.high[0])


@settings(max_examples=100, deadline=None)
@given(st.floats(-700, 700))
def test_points_of_the_circle(angle):
    from plasmalin.exact.sines import on_circle
    from plasmalin.roots.matrixfamily import ROUNDED

    (sine,), (cosine,) = (on_circle(kind, [angle]) for kind in ("sin", "cos"))
    given_ = [F(high) + F(low) for high, low in (sine, cosine)]
    s, c = circle_point(*given_)
    assert s * s + c * c == 1
    for mine, theirs in ((s, given_[0]), (c, given_[1])):
        assert abs(mine - theirs) <= F(ROUNDED) * abs(theirs) + F(2) ** -1060


@settings(max_examples=10, deadline=None)
@given(st.integers(0, 10**6), st.booleans())
def test_determinant_of_polynomials(seed, inexact):
    """Against SymPy's."""
    random, x = np.random.default_rng(seed), sp.Symbol("x")
    table = {}
    for ij in np.ndindex(3, 3):
        if random.uniform() < 0.7:
            parts = random.integers(-3, 4, (3, 2))
            table[ij] = [(F(int(a), 2), F(int(b), 3) * inexact) for a, b in parts]
    whole = sp.zeros(3, 3)
    for ij, c in table.items():
        whole[ij] = sum(
            (
                sp.Rational(a.numerator, a.denominator)
                + sp.I * sp.Rational(b.numerator, b.denominator)
            )
            * x**n
            for n, (a, b) in enumerate(c)
        )
    expected = sp.Poly(sp.expand(whole.det(method="berkowitz")), x).all_coeffs()[::-1]
    found = [
        sp.Rational(a.numerator, a.denominator) + sp.I * sp.Rational(b.numerator, b.denominator)
        for a, b in determinant_of(table, 3)
    ]
    if not any(expected):
        assert not found
        return
    assert len(found) == len(expected)
    assert all(
        sp.expand(a * expected[-1] - b * found[-1]) == 0
        for a, b in zip(found, expected, strict=True)
    )


# Eigenvalues -----------------------------------------------------------------------------------


def true_eigenvalues(matrix):
    """From the exact characteristic polynomial."""
    size = len(matrix)
    entries = {ij: [(-F(matrix[ij].real), -F(matrix[ij].imag))] for ij in np.ndindex(size, size)}
    for n in range(size):
        entries[n, n].append((F(1), F(0)))
    roots = complex_roots(determinant_of(entries, size), 60)
    return [(re, im) for re, im, _, m in roots for _ in range(m)]


def proven_share(matrices):
    """All discs that are proven hold their eigenvalue, real ones are real; how many points are proven."""
    pattern = (matrices != 0).any(axis=0)
    high = matrices[:, pattern]
    sheet = eigen_sheet(
        Ball(high, 0 * high, np.zeros(high.shape)), np.argwhere(pattern), matrices.shape[1]
    )
    for point in np.flatnonzero(sheet.real >= 0):
        truth = true_eigenvalues(matrices[point])
        re, im, radius = (x[:, point] for x in (sheet.re, sheet.im, sheet.radius))
        off = np.array(
            [
                [float((F(a) - x) ** 2 + (F(b) - y) ** 2) ** 0.5 for x, y in truth]
                for a, b in zip(re, im, strict=True)
            ]
        )
        rows, columns = linear_sum_assignment(off / np.hypot(re, im)[:, None])
        allowed = radius + 2.0**-53 * np.hypot(re, im)  # of the stored centre
        assert (off[rows, columns] <= allowed * (1 + 1e-12)).all()
        assert all(truth[columns[n]][1] == 0 for n in range(sheet.real[point]))
    return (sheet.real >= 0).mean()


def unimodular(random, shape):
    """Whole matrices with whole inverses, so that similar matrices are exact."""
    lower = np.eye(shape[1]) + np.tril(random.integers(-2, 3, shape), -1)
    return lower, np.rint(np.linalg.inv(lower))


KINDS = {
    "real": lambda r: r.normal(size=(12, 6, 6)),
    "complex": lambda r: r.normal(size=(12, 6, 6)) + 1j * r.normal(size=(12, 6, 6)),
    "thirteen decades by rows": lambda r: r.normal(size=(12, 6, 6)) * np.logspace(-6, 7, 6)[:, None],
    "thirteen decades by columns": lambda r: r.normal(size=(12, 6, 6)) * np.logspace(7, -6, 6),
    "badly scaled": lambda r: r.normal(size=(12, 6, 6)) * np.outer(s := np.logspace(-9, 9, 6), 1 / s),
    "symmetric": lambda r: (m := r.normal(size=(12, 6, 6))) + m.swapaxes(1, 2),
    "imaginary pairs": lambda r: (m := r.normal(size=(12, 6, 6))) - m.swapaxes(1, 2),
    "triangular": lambda r: np.triu(r.normal(size=(12, 6, 6))),
    "diagonal": lambda r: r.normal(size=(12, 6, 1)) * np.eye(6),
}  # fmt: skip


@pytest.mark.parametrize("kind", KINDS)
def test_discs_hold_the_eigenvalues(kind):
    assert proven_share(KINDS[kind](np.random.default_rng(12))) == 1


@pytest.mark.parametrize("gap", [1e-6, 1e-12, 1e-14, 1e-16, 1e-24, 1e-28, 1e-30, 1e-32])
def test_discs_near_defective_matrices(gap):
    """Two eigenvalues 1 +- sqrt(gap) of either sign: proven or not, never wrong."""
    random = np.random.default_rng(13)
    matrices = np.tile(np.diag([1.0, 1.0, 3.0, 4.0, -2.0, 0.5]), (12, 1, 1))
    matrices[:, 0, 1], matrices[:, 1, 0] = 1.0, gap * random.choice([-1, 1], 12)
    share = proven_share(matrices)
    assert share == 1 or gap < 1e-24


def test_double_eigenvalues():
    """With two eigenvectors they are proven together, with one not at all."""
    random = np.random.default_rng(14)
    to, back = unimodular(random, (12, 6, 6))
    twice = np.diag([1.0, 1.0, 3.0, 4.0, -2.0, 0.5])
    assert proven_share(to @ twice @ back) == 1
    twice[0, 1] = 1.0
    assert proven_share(to @ twice @ back) == 0
