"""Continuous branches: which root at one point is which root at the next.

Both ends of an interval are extrapolated to its midpoint with their slopes and matched as mutual nearest neighbors.
Intervals where that is ambiguous are halved, all at once, until they are clear or so short that the branches meet
there.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from itertools import combinations
from typing import Any

import numpy as np
from numpy.typing import NDArray

CLEAR = 0.1
"""A match is clear when it is this much nearer than the next one."""
DEEPEST = 44
"""Halvings of an interval before two branches count as meeting."""
MEETING = 1e-6
"""Distance, relative to the largest root, below which roots at both ends of such an interval are one meeting."""
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
    """

    kind: str
    at: float
    omega: complex


@dataclass(frozen=True)
class Ends:
    """Roots and slopes at one end of some intervals: s of shape (m,), the others (m, roots)."""

    s: NDArray[np.float64]
    omega: NDArray[np.complex128]
    slope: NDArray[np.complex128]

    def at(self, which: Any) -> Ends:
        return Ends(self.s[which], self.omega[which], self.slope[which])

    def and_then(self, other: Ends) -> Ends:
        return Ends(
            np.concatenate([self.s, other.s]),
            np.concatenate([self.omega, other.omega]),
            np.concatenate([self.slope, other.slope]),
        )


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

    Returns
    -------
    order : ndarray of int, shape (n, d)
        ``omega[i, order[i, b]]`` is branch b at point i; at the first point sorted by (Re, Im).
    events : list of Event
    """
    n, d = omega.shape
    order = np.empty((n, d), np.int64)
    if n:
        order[0] = np.lexsort((omega[0].imag, omega[0].real))
    points = Ends(s, omega, slope)
    moved = np.flatnonzero(~_unmoved(points))
    steps, events = _followed(solve, points.at(moved), points.at(moved + 1))
    before = 0
    for i, step in zip(moved.tolist(), steps, strict=True):
        order[before + 1 : i + 1] = order[before]
        order[i + 1] = step[order[i]]
        before = i + 1
    order[before + 1 :] = order[before : before + 1]
    return order, _distinct(events)


def _unmoved(points: Ends) -> NDArray[np.bool_]:
    """Whether, from each point to the next, every root clearly goes on as the one in the same place."""
    intervals = max(len(points.s) - 1, 0)
    clear = np.empty(intervals, bool)
    for first in range(0, intervals, BATCH):
        part = slice(first, min(first + BATCH, intervals))
        left, right = points.at(part), points.at(slice(part.start + 1, part.stop + 1))
        clear[part] = _pairwise_clear(left, right)
    return clear


def _pairwise_clear(left: Ends, right: Ends) -> NDArray[np.bool_]:
    """The clear intervals among those where the matching would change nothing."""
    ahead, back = (np.ascontiguousarray(a.T) for a in _to_the_middle(left, right))
    if not (ahead.imag.any() or back.imag.any()):
        ahead, back = ahead.real.copy(), back.real.copy()
    with np.errstate(invalid="ignore", over="ignore"):
        nearest = np.full((2, *ahead.shape), np.inf)
        for i, j in combinations(range(len(ahead)), 2):
            for a, b in ((i, j), (j, i)):
                square = _square(ahead[a] - back[b])
                np.minimum(nearest[0, a], square, out=nearest[0, a])
                np.minimum(nearest[1, b], square, out=nearest[1, b])
        own = _square(ahead - back)
        clear = (own <= CLEAR**2 * nearest[0]) & (own < nearest[1])
    return np.asarray(clear.all(axis=0) & ~_ranks_change(left, right))


def _to_the_middle(left: Ends, right: Ends) -> tuple[NDArray[Any], NDArray[Any]]:
    half = 0.5 * (right.s - left.s)[:, None]
    return left.omega + half * left.slope, right.omega - half * right.slope


def _square(z: NDArray[Any]) -> NDArray[np.float64]:
    return np.asarray(z.real**2 + z.imag**2 if np.iscomplexobj(z) else z * z)


def _ranks_change(
    left: Ends, right: Ends, step: NDArray[np.int64] | None = None
) -> NDArray[np.bool_]:
    """Whether branches that are real at both ends swap their order across an interval."""
    after = right.omega if step is None else np.take_along_axis(right.omega, step, axis=1)
    real = (left.omega.imag == 0) & (after.imag == 0)
    before, behind = (np.where(real, w.real, np.inf) for w in (left.omega, after))
    if all((w[:, 1:] >= w[:, :-1]).all() for w in (before, behind)):
        return np.zeros(len(real), bool)
    ranks = (np.argsort(np.argsort(w, axis=1), axis=1) for w in (before, behind))
    return np.asarray((real & (next(ranks) != next(ranks))).any(axis=1))


def _followed(solve: Solve, left: Ends, right: Ends) -> tuple[list[NDArray[np.int64]], list[Event]]:
    """For each interval the permutation from left to right; all that are ambiguous are halved together."""
    events: list[Event] = []
    pieces: list[list[tuple[float, NDArray[np.int64]]]] = [[] for _ in left.s]
    owner = np.arange(len(left.s))
    for depth in range(DEEPEST + 1):
        step, clear = _matched(left, right)
        middle = 0.5 * (left.s + right.s)
        short = (middle <= left.s) | (middle >= right.s) | (depth == DEEPEST)
        for i in np.flatnonzero(clear | short):
            met = step[i] if clear[i] else _met(left.at(i), right.at(i), events)
            pieces[owner[i]].append((float(left.s[i]), met))
        go_on = np.flatnonzero(~(clear | short))
        if not len(go_on):
            break
        between = Ends(middle[go_on], *solve(middle[go_on]))
        left, right = left.at(go_on).and_then(between), between.and_then(right.at(go_on))
        owner = np.tile(owner[go_on], 2)
    return [_composed(p) for p in pieces], events


def _composed(pieces: list[tuple[float, NDArray[np.int64]]]) -> NDArray[np.int64]:
    (_, whole), *others = sorted(pieces, key=lambda piece: piece[0])
    for _, step in others:
        whole = step[whole]
    return whole


def _matched(left: Ends, right: Ends) -> tuple[NDArray[np.int64], NDArray[np.bool_]]:
    """For each interval the nearest partners, and whether they are clear."""
    ahead, back = _to_the_middle(left, right)
    gap = np.abs(ahead[:, :, None] - back[:, None, :])
    gap = np.where(np.isfinite(gap), gap, np.inf)
    gap[~np.isfinite(left.omega)[:, :, None] & ~np.isfinite(right.omega)[:, None, :]] = 0.0
    step, from_right = gap.argmin(axis=2), gap.argmin(axis=1)
    mutual = np.take_along_axis(from_right, step, axis=1) == np.arange(gap.shape[1])
    best = np.take_along_axis(gap, step[:, :, None], axis=2)[:, :, 0]
    np.put_along_axis(gap, step[:, :, None], np.inf, axis=2)
    clear = mutual & (best <= CLEAR * gap.min(axis=2, initial=np.inf))
    return step, clear.all(axis=1) & ~_ranks_change(left, right, step)


def _met(left: Ends, right: Ends, events: list[Event]) -> NDArray[np.int64]:
    """The permutation across an interval in which roots meet within rounding; each meeting is an event.

    Roots that cross go straight on. At a coalescence labels are a convention: the root that grows more goes on as
    the one that grows more, and among real ones as the one with the larger real part.
    """
    step = _assigned(np.abs(left.omega[:, None] - right.omega[None, :]))
    for group in _meetings(left.omega):
        partners = step[group]
        before, after = left.omega[group], right.omega[partners]
        turned = ((after[1] - after[0]) * np.conj(before[1] - before[0])) ** 2
        onset = bool(turned.real < 0)
        if onset:
            ranked = (np.lexsort((w.real, w.imag)) for w in (before, after))
            step[group[next(ranked)]] = partners[next(ranked)]
        else:
            turn = np.abs(left.slope[group][:, None] - right.slope[partners][None, :])
            step[group] = partners[_assigned(turn)]
        at = float(0.5 * (left.s + right.s))
        events.append(Event("onset" if onset else "crossing", at, complex(before.mean())))
    return step


def _assigned(cost: NDArray[np.float64]) -> NDArray[np.int64]:
    """The permutation of least total cost."""
    from scipy.optimize import linear_sum_assignment

    finite = np.isfinite(cost)
    largest = float(cost[finite].max(initial=0.0)) or 1.0
    scaled = np.where(finite, cost / largest, 2.0 * len(cost))
    return np.asarray(linear_sum_assignment(scaled)[1], np.int64)


def _meetings(omega: NDArray[np.complex128]) -> list[NDArray[np.int64]]:
    """Groups of two or more roots that are the same within rounding."""
    finite = np.isfinite(omega)
    near = MEETING * float(np.abs(omega[finite]).max(initial=0.0))
    left, groups = np.flatnonzero(finite).tolist(), []
    while left:
        group = [i for i in left if abs(omega[i] - omega[left[0]]) <= near]
        left = [i for i in left if i not in group]
        if len(group) > 1:
            groups.append(np.array(group))
    return groups


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
