"""Continuous branches: which root at one point is which root at the next.

Both ends of an interval are extrapolated to its midpoint with their slopes and matched as mutual nearest neighbors.
Intervals where that is ambiguous are halved, all at once, until they are clear or so short that the branches meet
there.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from .matching import Ends, coincide, matched, pairwise_clear

DEEPEST = 44
"""Halvings of an interval before two branches count as meeting."""
UNEVEN = 0.4871
"""Where an interval is halved: off its middle, since meetings like to sit on round numbers."""
BATCH = 512

Solve = Callable[[NDArray[np.float64]], tuple[NDArray[np.complex128], NDArray[np.complex128]]]
"""Parameter values -> roots and slopes, each of shape (points, roots)."""


@dataclass(frozen=True)
class Event:
    """Two branches of one factor meet.

    Attributes
    ----------
    kind : str
        "crossing" (both go on as before) or "onset" (they coalesce, and the difference of the two turns by a
        right angle: two real roots become a growing and a damped one, or back).
    at : float
        The value of the swept quantity.
    omega : complex
        rad/s
    radius : float
        The exact value is not farther from `at`; infinite where `at` was found by halving intervals, to about ten digits.
    """

    kind: str
    at: float
    omega: complex
    radius: float = np.inf


def track(
    solve: Solve,
    s: NDArray[np.float64],
    omega: NDArray[np.complex128],
    slope: NDArray[np.complex128],
) -> tuple[NDArray[np.int64], list[Event]]:
    """Branches through increasing s.

    Parameters
    ----------
    solve : callable
        Roots and slopes at further points.
    s : ndarray, shape (n,)
        Increasing.
    omega, slope : ndarray, shape (n, d)
        Roots sorted by (Re, Im) at every point.

    Returns
    -------
    order : ndarray of int, shape (n, d)
        ``omega[i, order[i, b]]`` is branch b at point i; at the first point sorted by (Re, Im).
    events : list of Event
    """
    n, d = omega.shape
    order = np.empty((n, d), np.int64)
    points, meeting = Ends(s, omega, slope), coincide(omega)
    meeting &= not meeting.all()
    if not meeting.any():
        order, events = _through(solve, points)
        return order, _distinct(events)
    kept = np.flatnonzero(~meeting)
    order[kept], events = _through(solve, points.at(kept))
    for i in np.flatnonzero(meeting):
        # Where roots coincide they are not told apart; the point takes its order from a neighbor.
        near = kept[max(int(np.searchsorted(kept, i)) - 1, 0)]
        ahead = omega[near] + (s[i] - s[near]) * slope[near]
        order[i] = _assigned(np.abs(ahead[:, None] - omega[i][None, :]))[order[near]]
    return order, _distinct(events)


def _through(solve: Solve, points: Ends) -> tuple[NDArray[np.int64], list[Event]]:
    """Branches through points at which all roots differ."""
    order = np.empty(points.omega.shape, np.int64)
    if len(order):
        order[0] = np.lexsort((points.omega[0].imag, points.omega[0].real))
    moved = np.flatnonzero(~_unmoved(points))
    steps, events = _followed(solve, points.at(moved), points.at(moved + 1))
    before = 0
    for i, step in zip(moved.tolist(), steps, strict=True):
        order[before + 1 : i + 1] = order[before]
        order[i + 1] = step[order[i]]
        before = i + 1
    order[before + 1 :] = order[before : before + 1]
    return order, events


def _unmoved(points: Ends) -> NDArray[np.bool_]:
    """Whether, from each point to the next, every root clearly goes on as the one in the same place."""
    intervals = max(len(points.s) - 1, 0)
    clear = np.empty(intervals, bool)
    for first in range(0, intervals, BATCH):
        part = slice(first, min(first + BATCH, intervals))
        left, right = points.at(part), points.at(slice(part.start + 1, part.stop + 1))
        clear[part] = pairwise_clear(left, right)
    return clear


def _followed(solve: Solve, left: Ends, right: Ends) -> tuple[list[NDArray[np.int64]], list[Event]]:
    """For each interval the permutation from left to right; all that are ambiguous are halved together."""
    events: list[Event] = []
    pieces: list[list[tuple[float, NDArray[np.int64]]]] = [[] for _ in left.s]
    owner = np.arange(len(left.s))
    for depth in range(DEEPEST + 1):
        step, clear = matched(left, right)
        doubtful = np.flatnonzero(~clear)
        s = left.s[doubtful] + UNEVEN * (right.s - left.s)[doubtful]
        between = Ends(s, *solve(s))
        inside = (left.s[doubtful] < s) & (s < right.s[doubtful]) & (depth < DEEPEST)
        inside &= ~coincide(between.omega)
        for i in doubtful[~inside]:
            step[i] = _met(left.at(i), right.at(i), events)
        go_on = doubtful[inside]
        for i in np.setdiff1d(np.arange(len(owner)), go_on):
            pieces[owner[i]].append((float(left.s[i]), step[i]))
        if not len(go_on):
            break
        between = between.at(inside)
        left, right = left.at(go_on).and_then(between), between.and_then(right.at(go_on))
        owner = np.tile(owner[go_on], 2)
    return [_composed(p) for p in pieces], events


def _composed(pieces: list[tuple[float, NDArray[np.int64]]]) -> NDArray[np.int64]:
    (_, whole), *others = sorted(pieces, key=lambda piece: piece[0])
    for _, step in others:
        whole = step[whole]
    return whole


def _met(left: Ends, right: Ends, events: list[Event]) -> NDArray[np.int64]:
    """The permutation across a short interval in which roots meet; each meeting is an event.

    Roots that cross come out on the other side of their mean. At a coalescence labels are a convention: the root
    that grows more goes on as the one that grows more, and among real ones as the one with the larger real part.
    """
    half = 0.5 * (right.s - left.s)
    ahead, back = left.omega + half * left.slope, right.omega - half * right.slope
    step = _assigned(np.abs(ahead[:, None] - back[None, :]))
    for group in _meetings(left, float(right.s - left.s)):
        partners = step[group]
        before, after = (w - w.mean() for w in (left.omega[group], right.omega[partners]))
        onset = bool((((after[1] - after[0]) * np.conj(before[1] - before[0])) ** 2).real < 0)
        if onset:
            ranked = (np.lexsort((w.real, w.imag)) for w in (before, after))
            step[group[next(ranked)]] = partners[next(ranked)]
        else:
            sizes = (np.abs(w).max() or 1.0 for w in (before, after))
            opposite = before[:, None] / next(sizes) + after[None, :] / next(sizes)
            step[group] = partners[_assigned(np.abs(opposite))]
        at, omega = 0.5 * (left.s + right.s), left.omega[group].mean()
        events.append(Event("onset" if onset else "crossing", float(at), complex(omega)))
    return step


def _meetings(left: Ends, length: float) -> list[NDArray[np.int64]]:
    """Groups of roots that their relative slopes bring together within the interval.

    Two that cross are as far apart as their slopes take them until then; two that coalesce, like a square root,
    are twice as far.
    """
    apart = np.abs(left.omega[:, None] - left.omega[None, :])
    near = apart <= 3 * length * np.abs(left.slope[:, None] - left.slope[None, :])
    rest, groups = set(np.flatnonzero(np.isfinite(left.omega)).tolist()), []
    while rest:
        group, new = set[int](), {rest.pop()}
        while new:
            group |= new
            new = {j for i in new for j in rest if near[i, j]}
            rest -= new
        if len(group) > 1:
            groups.append(np.array(sorted(group)))
    return groups


def _assigned(cost: NDArray[np.float64]) -> NDArray[np.int64]:
    """The permutation of least total cost."""
    from scipy.optimize import linear_sum_assignment

    finite = np.isfinite(cost)
    largest = float(cost[finite].max(initial=0.0)) or 1.0
    scaled = np.where(finite, cost / largest, 2.0 * len(cost))
    return np.asarray(linear_sum_assignment(scaled)[1], np.int64)


def _distinct(events: list[Event]) -> list[Event]:
    """Meetings that differ by rounding only, once; a coalescence counts before a crossing."""
    kept: list[Event] = []
    for event in sorted(events, key=lambda e: e.kind, reverse=True):
        if not any(
            np.isclose(event.at, k.at, 1e-9) and np.isclose(event.omega, k.omega, 1e-6)
            for k in kept
        ):
            kept.append(event)
    return sorted(kept, key=lambda e: e.at)
