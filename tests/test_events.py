"""Events: every meeting of branches from discriminants and resultants, with places that are known otherwise."""

from fractions import Fraction

import flint
import mpmath
import numpy as np
import pytest
import sympy as sp
from hypothesis import given, settings
from hypothesis import strategies as st
from published import CASES, read
from test_engine_tracking import OMEGA, K, family_of, solver

import plasmalin as plin
from plasmalin import components, dot, grad, partial_t
from plasmalin.exact import places
from plasmalin.exact.eliminants import Bivariate, Eliminant
from plasmalin.exact.realroots import isolated, refined
from plasmalin.roots.meetings import all_crossings, all_meetings, terms_of
from plasmalin.roots.tracking import track


def meetings(expression, low, high, size=10.0):
    """(at, kind) of every meeting, each proven within its radius."""
    found = all_meetings(family_of(expression), np.array([low, high]), size)
    assert all(e.radius <= np.spacing(abs(e.at)) for e in found)
    return [(e.at, e.kind) for e in found]


# On models ---------------------------------------------------------------------------------------


def test_buneman_onset_in_closed_form():
    """Cold electrons through cold ions: unstable below k V = wpe (1 + (me/mi)^(1/3))^(3/2) (Buneman 1958, Phys. Rev. Lett. 1, 8; from memory)."""
    p = read("buneman-electron-ion")["parameters"]
    branches = CASES["buneman-electron-ion"]().branches("k", np.linspace(0.1, 3.0, 7), p)
    with mpmath.workdps(40):
        at = (1 + 1 / mpmath.cbrt(mpmath.mpf(p["M"]))) ** 1.5 / p["V"]
    assert branches.events_complete
    assert [(e.kind, e.roots) for e in branches.events] == [("onset", 2)]
    assert branches.events[0].at == pytest.approx(float(at), rel=1e-15)


def test_crossings_between_factors_in_closed_form():
    """The cold plasma oscillation meets the left-hand wave where k² c² = wp² - Σ wps² wp / (wp ∓ Ws) (Stix 1992, Waves in Plasmas, ch. 1; from memory)."""
    p = read("r-and-l-waves")["parameters"]
    wave = CASES["r-and-l-waves"]()
    branches = wave.branches("k", np.geomspace(1.0, 1000.0, 301), p)
    with mpmath.workdps(40):
        e, b, eps, n, c = (mpmath.mpf(p[x]) for x in ("e", "B0", "eps0", "n0", "c"))
        squares = [n * e * e / (eps * mpmath.mpf(p[m])) for m in ("me", "mi")]
        gyration = [-e * b / mpmath.mpf(p["me"]), e * b / mpmath.mpf(p["mi"])]
        w = mpmath.sqrt(sum(squares))
        k2 = [
            (w * w - sum(s * w / (w + sign * g) for s, g in zip(squares, gyration, strict=True)))
            / c**2
            for sign in (1, -1)
        ]
        (at,) = (mpmath.sqrt(k) for k in k2 if 1 < k < 1e6)
    assert branches.events_complete
    assert [e.kind for e in branches.events] == ["crossing", "crossing"]
    assert [e.at for e in branches.events] == pytest.approx([float(at)] * 2, rel=1e-14)
    assert [e.omega for e in branches.events] == pytest.approx([-float(w), float(w)], rel=1e-14)


@pytest.fixture(scope="module")
def pair():
    """Two modes a and b with a coupling g, b drifting: (omega - k U)(omega + k U) = g^2, invented."""
    model = plin.FluidModel("two coupled modes", axes="x")
    u, g = model.parameters("U g")
    a, b = model.scalar("a"), model.scalar("b")
    model.law("a", partial_t(a) + dot(components(u), grad(a)), g * b)
    model.law("b", partial_t(b) - dot(components(u), grad(b)), -g * a)
    return model.linearize().plane_wave("x")


def test_a_parameter_through_zero(pair):
    """omega² = k² U² + g²: with g = 0 the branches cross at U = 0, which is a grid point; else they never meet."""
    drift = np.linspace(-1, 1, 11)
    apart = pair.branches("U", drift, {"g": 1e-9}, k=1.0)
    assert apart.events == ()
    assert apart.events_complete
    (event,) = pair.branches("U", drift, {"g": 0.0}, k=1.0).events
    assert (event.kind, event.at, event.omega) == ("crossing", 0.0, 0.0)


def test_a_narrow_band_between_two_points():
    """Two onsets that no point of the sweep sees: omega² = (k - 1)(k - 1.001)."""
    expression = OMEGA**2 - (K - 1) * (K - sp.Rational(1001, 1000))
    k = np.linspace(0.0, 2.05, 6)
    known = all_meetings(family_of(expression), k, 1.0)
    assert [(e.at, e.kind) for e in known] == [(1.0, "onset"), (1.001, "onset")]
    solve = solver(expression)
    omega, slope = solve(k)
    order, events = track(solve, k, omega, slope, known, mirrored=True)
    assert events == known
    assert (np.take_along_axis(omega, order, axis=1)[:, 1].real > 0).sum() in {0, 2, 4, 6}


@pytest.mark.parametrize("costly", [False, True])
def test_what_is_not_cheap_is_seen_by_tracking(monkeypatch, costly):
    """The same events either way, but only the cheap way can say that there are no others."""
    if costly:
        monkeypatch.setattr(places, "AFFORDABLE", 0)
    p = read("r-and-l-waves")["parameters"]
    parallel = CASES["r-and-l-waves"]().branches("k", np.geomspace(1.0, 1000.0, 301), p)
    beams = CASES["counterstreaming-cold-beams"]().branches(
        "k", np.linspace(0.1, 3.0, 40), {"wp0": 1.0, "V": 1.0}
    )
    for branches in (parallel, beams):
        assert branches.events_complete is not costly
    assert [e.kind for e in parallel.events] == ["crossing", "crossing"]
    assert [e.at for e in parallel.events] == pytest.approx([419.25468160690906] * 2, rel=1e-12)
    assert [e.kind for e in beams.events] == ["onset"]
    assert beams.events[0].at == pytest.approx(np.sqrt(2), rel=1e-15)


def test_angles_are_left_to_tracking():
    wave = plin.load_example("xenon-iodine-plume").linearize().plane_wave(angle="phase_angle")
    branches = wave.branches("phase_angle", np.linspace(0.3, 1.2, 9), k=3e3)
    assert not branches.events_complete


def test_branches_through_infinity():
    """omega = c k/(1 - k²) beside a coupled mode: one root comes back from the other side, the other one goes on."""
    model = plin.FluidModel("a pole", axes="x")
    a, b = model.scalar("a"), model.scalar("b")
    model.law("a", partial_t(plin.multiplier(a, 1 - plin.k_x**2)), dot(components(1), grad(a)) + b)
    model.law("b", partial_t(b) + dot(components(1), grad(b)), a / 10)
    wave = model.linearize().plane_wave("x")
    for k in (np.linspace(0.5, 2.0, 7), np.linspace(0.5, 2.05, 7)):
        branches = wave.branches("k", k)
        far = int(np.abs(branches.omega[:, np.abs(k - 1).argmin()]).argmax())
        through, other = branches.omega[far].real, branches.omega[1 - far].real
        assert (through[k < 1] < 0).all()
        assert (through[k > 1] > 1.5).all()
        assert np.abs(np.diff(other)).max() < 0.4
        assert branches.events_complete
        assert branches.events == ()
    assert (wave.branches("k", [0.5, 1.0, 2.0]).status == "at infinity").sum() == 1


def test_more_than_two_factors_at_one_place():
    """Sound, whistlers and ion cyclotron waves along the field, three factors: all are zero at k = 0."""
    wave = CASES["hall-mhd-parallel"]()
    values = read("hall-mhd-parallel")["parameters"]
    branches = wave.branches("k", np.linspace(-1.0, 1.0, 6), values)
    assert [(e.kind, e.at, e.roots) for e in branches.events] == [("crossing", 0.0, 6)]


# On polynomials ----------------------------------------------------------------------------------

RATIONAL = st.fractions(-4, 4, max_denominator=6)


@given(st.lists(st.tuples(RATIONAL, RATIONAL), min_size=2, max_size=4, unique=True))
@settings(max_examples=40, deadline=None)
def test_lines_cross_where_they_do(lines):
    """Every crossing of lines omega = a k + b is listed, and the branches are these lines."""
    expression = sp.prod(OMEGA - sp.Rational(a) * K - sp.Rational(b) for a, b in lines)
    k = np.linspace(-2.0, 2.1, 9)
    known = all_meetings(family_of(expression), k, 15.0)
    pairs = [(p, q) for i, p in enumerate(lines) for q in lines[:i] if p[0] != q[0]]
    expected = {-(p[1] - q[1]) / (p[0] - q[0]) for p, q in pairs}
    inside = sorted({float(x) for x in expected if -2 <= x <= Fraction(2.1)})
    assert sorted({e.at for e in known}) == inside
    assert all(e.kind == "crossing" for e in known)
    solve = solver(expression)
    omega, slope = solve(k)
    order, _ = track(solve, k, omega, slope, known, mirrored=True)
    for branch in np.take_along_axis(omega, order, axis=1).T:
        assert any(np.allclose(branch, float(a) * k + float(b), atol=1e-9) for a, b in lines)


@given(
    RATIONAL,
    RATIONAL,
    st.dictionaries(RATIONAL, st.integers(1, 3), min_size=1, max_size=3),
    st.sampled_from([1, -1, 3]),
)
@settings(max_examples=40, deadline=None)
def test_parabolas_turn_where_they_do(a, b, zeros, factor):
    """(omega - a k - b)² = c Π (k - r)^m: an onset for odd m, a crossing for even m."""
    square = sp.prod((K - sp.Rational(r)) ** m for r, m in zeros.items()) * factor
    expression = (OMEGA - sp.Rational(a) * K - sp.Rational(b)) ** 2 - square
    kinds = {float(r): ("crossing", "onset")[m % 2] for r, m in zeros.items()}
    if sp.Poly(expression, OMEGA, K).is_sqf and not sp.sqrt(square).is_polynomial(K):
        assert meetings(expression, -5.0, 5.0) == sorted(kinds.items())


def test_meetings_at_the_ends_are_listed():
    """omega² = (k² - 1)(k² - 4) turns at both ends of an interval as it does inside of one."""
    expression = OMEGA**2 - (K**2 - 1) * (K**2 - 4)
    assert meetings(expression, 1.0, 2.0) == [(1.0, "onset"), (2.0, "onset")]
    assert meetings(expression, -2.0, 1.5) == [(-2.0, "onset"), (-1.0, "onset"), (1.0, "onset")]


def test_roots_pass_through_zero_and_infinity():
    """omega² = (k - 1)/(k - 2): both meet at zero; that they meet at infinity is no event."""
    assert meetings(OMEGA**2 * (K - 2) - (K - 1), 0.0, 3.0) == [(1.0, "onset")]


@pytest.mark.parametrize(
    ("expression", "expected"),
    [
        (OMEGA**2 - 2 * K**2, [(0.0, "crossing")]),
        (OMEGA**2 - K**3, [(0.0, "onset")]),
        (OMEGA**3 - K, [(0.0, "onset")]),
        (OMEGA**4 + K * OMEGA + 1, [(-1.7547653506033232, "onset"), (1.7547653506033232, "onset")]),
        ((OMEGA - K + sp.I) * (OMEGA - 1 + K + 2 * sp.I) - sp.Rational(1, 1000), []),
        ((OMEGA - K + sp.I) * (OMEGA - 1 + K + sp.I), [(0.5, "crossing")]),
        ((OMEGA - sp.I) ** 2 - K + sp.Rational(1, 8), [(0.125, "onset")]),
    ],
)
def test_special_places(expression, expected):
    """Cusps, triple roots, complex coefficients; omega⁴ + k omega + 1 coalesces at k⁴ = 256/27."""
    assert meetings(expression, -3.0, 3.0) == expected


def test_complex_pairs_that_coalesce_together():
    """((omega² + 1)² = k has a conjugate pair of double roots ±i at k = 0."""
    found = all_meetings(family_of((OMEGA**2 + 1) ** 2 - K), np.array([-0.5, 0.5]), 2.0)
    assert [(e.at, e.kind, e.omega) for e in found] == [(0.0, "onset", -1j), (0.0, "onset", 1j)]


def test_crossings_of_factors_are_common_roots():
    line, square = family_of(OMEGA - K), family_of(OMEGA**2 - 2)
    slow = family_of(OMEGA - K / 2 - 1 / sp.Integer(2))
    found = all_crossings([line, square, slow], np.array([-3.0, 3.0]), 3.0)
    root = np.sqrt(2)
    assert [e.at for e in found] == pytest.approx([-1 - 2 * root, -root, 1, root, 2 * root - 1][1:])
    assert [e.omega for e in found] == pytest.approx([-root, 1, root, root])


def test_discriminants_agree_with_resultants_by_sympy():
    """The image in the prime field and the values in balls, against SymPy's exact discriminant."""
    expression = OMEGA**3 * (K - 2) + 3 * K**2 * OMEGA - OMEGA**2 * K + 5
    exact = sp.Poly(sp.discriminant(expression, OMEGA), K)
    eliminant = Eliminant(Bivariate.of(terms_of(family_of(expression))))
    image, _ = eliminant.modular()
    prime = image.modulus()
    assert [int(c) for c in image.coeffs()] == [int(c) % prime for c in exact.all_coeffs()[::-1]]
    assert eliminant.bound() >= exact.degree()
    low, high = Fraction(1, 3), Fraction(2)
    q = eliminant.on_interval(low, high, exact.degree(), 0)
    t = Fraction(1, 7)
    value = exact.eval(sp.Rational(low + t * (high - low)))
    assert q(flint.arb(flint.fmpq(1, 7))).overlaps(flint.arb(flint.fmpq(value.p, value.q)))


def test_isolation_of_real_roots():
    """Twelve Chebyshev nodes and a nearly double pair between them, each found to 100 binary digits."""
    nodes = [0.5 - 0.5 * np.cos(np.pi * (n + 0.5) / 12) for n in range(12)]
    roots = sorted([*map(Fraction, nodes), Fraction(3, 10), Fraction(3, 10) + Fraction(1, 10**12)])
    before = flint.ctx.prec
    try:
        flint.ctx.prec = 500
        q = flint.arb_poly.from_roots(
            [flint.arb(flint.fmpq(r.numerator, r.denominator)) for r in roots]
        )
        pieces = isolated(q, len(roots))
        found = [refined(q, *piece, 100) for piece in pieces]
    finally:
        flint.ctx.prec = before
    assert len(found) == len(roots)
    assert all(abs(at - r) <= off for (at, off), r in zip(found, roots, strict=True))
