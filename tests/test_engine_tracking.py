"""Tracking on closed forms: order through avoided crossings, onsets to ten digits, labels beyond a coalescence."""

from fractions import Fraction

import numpy as np
import pytest
import sympy as sp

from plasmalin.roots.enclose import enclose
from plasmalin.roots.family import Family
from plasmalin.roots.meetings import placed
from plasmalin.roots.slopes import ScaledFamily
from plasmalin.roots.tracking import track

OMEGA, K = sp.symbols("omega k")


def family_of(expression):
    terms = sp.Poly(sp.expand(expression), OMEGA, K).terms()
    parts = [sp.sympify(c).as_real_imag() for _, c in terms]
    exact = tuple(tuple(Fraction(int(x.p), int(x.q)) for x in pair) for pair in parts)
    return Family(np.array([e for e, _ in terms], np.int64), exact)


def solver(expression):
    """Roots and slopes of a polynomial in omega and k with rational coefficients, through the engine."""
    family = family_of(expression)

    def solve(k):
        omega = enclose(family, [(k, np.zeros_like(k))], points=len(k)).omega
        return omega, ScaledFamily(family, omega, [k]).slope(omega, [k], [np.ones_like(k)])

    return solve


def tracked(expression, k):
    solve = solver(expression)
    omega, slope = solve(k)
    order, events = track(solve, k, omega, slope)
    return np.take_along_axis(omega, order, axis=1), events


@pytest.mark.parametrize("points", [50, 1001, 4096])
@pytest.mark.parametrize("coupling", [2, 4, 8, 12])
def test_avoided_crossings_keep_their_order(points, coupling):
    """Two waves coupled by 10^-coupling near k = 1 repel however coarse the grid is."""
    eps = sp.Rational(1, 10**coupling)
    omega, events = tracked((OMEGA - K) * (OMEGA + K - 2) - eps, np.linspace(0, 2.1, points))
    assert events == []
    assert (omega[:, 0].real < omega[:, 1].real).all()


def test_onsets_are_the_roots_of_the_discriminant():
    """Cold two-stream instability of a weak beam: where growth begins and ends, to ten digits."""
    expression = OMEGA**2 * (OMEGA - K) ** 2 - (OMEGA - K) ** 2 - OMEGA**2 / 50
    _, events = tracked(expression, np.linspace(0.05, 3, 400))
    square_free = sp.Poly(sp.discriminant(expression, OMEGA), K).sqf_part()
    exact = [r for r in square_free.nroots(n=30) if abs(sp.im(r)) < 1e-20 and 0.05 < sp.re(r) < 3]
    assert [e.kind for e in events] == ["onset"] * len(exact)
    proven = placed(family_of(expression), events, (3.0, 3.0))
    for event, better, k in zip(events, proven, sorted(sp.re(r) for r in exact), strict=True):
        assert event.at == pytest.approx(float(k), rel=1e-10)
        assert abs(sp.Float(better.at, 30) - k) <= better.radius < 5e-16


def test_growing_and_damped_keep_their_labels():
    """omega^2 = (k^2 - 1)(k^2 - 4): real, then growing and damped, then real again."""
    k = np.linspace(0.5, 2.5, 201)
    omega, events = tracked(OMEGA**2 - (K**2 - 1) * (K**2 - 4), k)
    assert [e.kind for e in events] == ["onset", "onset"]
    upper = omega[:, omega[100].imag.argmax()]
    unstable = (k > 1) & (k < 2)
    assert (upper[unstable].imag > 0).all()
    assert (upper[~unstable & (k != 1) & (k != 2)].real > 0).all()


def test_true_crossings_go_straight_on():
    """A square-free polynomial whose curve crosses itself: three lines and a parabola."""
    k = np.linspace(0.0, 1.0, 37)
    omega, events = tracked((OMEGA - K) * (OMEGA - 1 + K) * (OMEGA - sp.Rational(1, 5)), k)
    assert {e.kind for e in events} == {"crossing"}
    assert [e.at for e in events] == pytest.approx([0.2, 0.5, 0.8], rel=1e-9)
    for line in (k, 1 - k, 0.2 + 0 * k):
        assert any(np.allclose(branch, line, rtol=0, atol=1e-15) for branch in omega.T)


def test_damped_branches_cross_in_frequency_only():
    """Complex roots whose real parts cross change their place in (Re, Im) order but not their branch."""
    k = np.linspace(0.0, 1.0, 300)
    expression = (OMEGA - K + sp.I) * (OMEGA - 1 + K + 2 * sp.I) - sp.Rational(1, 1000)
    omega, events = tracked(expression, k)
    assert events == []
    assert (np.abs(np.diff(omega, axis=0)) < 0.01).all()
    assert (np.diff(omega.real, axis=0)[:, 0] * np.diff(omega.real, axis=0)[:, 1] < 0).all()


@pytest.mark.parametrize("points", [0, 1, 2])
def test_very_few_points(points):
    omega, events = tracked(OMEGA**2 - 1 - K**2, np.linspace(0.5, 1.0, points))
    assert omega.shape == (points, 2)
    assert events == []


def test_places_of_events_are_proven_where_two_meet():
    """The double point of a nodal cubic at k = 1/3, and three lines through one point, where nothing is proven."""
    third, k = sp.Rational(1, 3), np.linspace(0.1, 1.0, 20)
    node = OMEGA**2 - (K - third) ** 2 * (K + 1)
    (event,) = placed(family_of(node), tracked(node, k)[1], (1.0, 1.0))
    assert event.kind == "crossing"
    assert abs(Fraction(event.at) - Fraction(1, 3)) <= event.radius < 1e-16
    lines = (OMEGA - K) * (OMEGA + K - 2 * third) * (OMEGA - third)
    events = tracked(lines, k)[1]
    assert events
    assert placed(family_of(lines), events, (1.0, 1.0)) == events


def test_an_onset_where_growth_is_complex():
    """Complex coefficients: (omega - i)^2 = k - 1/7 coalesces at omega = i."""
    expression = (OMEGA - sp.I) ** 2 - (K - sp.Rational(1, 7))
    (event,) = tracked(expression, np.linspace(0.0, 1.0, 11))[1]
    (better,) = placed(family_of(expression), [event], (2.0, 1.0))
    assert better.omega == pytest.approx(1j, abs=1e-30)
    assert abs(Fraction(better.at) - Fraction(1, 7)) <= better.radius < 1e-16
