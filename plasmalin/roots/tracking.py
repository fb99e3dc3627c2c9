"""Continuous branches: which root at one point is which root at the next.

Both ends of an interval are extrapolated to its midpoint with their slopes and matched as mutual nearest neighbours.
Only an interval where that is ambiguous is halved, until it is clear or so short that the branches meet there.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

CLEAR = 0.1
"""A match is clear when it is this much nearer than the next one."""
DEEPEST = 44
"""Halvings of an interval before two branches count as meeting."""

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
    order[0] = np.lexsort((omega[0].imag, omega[0].real))
    events: list[Event] = []
    steps, clear = _links(s, omega, slope)
    for i in range(n - 1):
        step = steps[i]
        if not clear[i]:
            left, right = (_End(s[j], omega[j], slope[j]) for j in (i, i + 1))
            step = _refined(solve, left, right, 0, events)
        order[i + 1] = step[order[i]]
    return order, _distinct(events)


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


@dataclass(frozen=True)
class _End:
    s: float
    omega: NDArray[np.complex128]
    slope: NDArray[np.complex128]


def _links(
    s: NDArray[np.float64], omega: NDArray[np.complex128], slope: NDArray[np.complex128]
) -> tuple[NDArray[np.int64], NDArray[np.bool_]]:
    """For each interval the permutation from left to right, and whether it is clear."""
    half = 0.5 * np.diff(s)[:, None]
    gap = np.abs(
        (omega[:-1] + half * slope[:-1])[:, :, None] - (omega[1:] - half * slope[1:])[:, None, :]
    )
    gap = np.where(np.isfinite(gap), gap, np.inf)
    both_far = ~np.isfinite(omega[:-1])[:, :, None] & ~np.isfinite(omega[1:])[:, None, :]
    gap[both_far] = 0.0
    step = gap.argmin(axis=2)
    back = gap.argmin(axis=1)
    d = omega.shape[1]
    mutual = (np.take_along_axis(back, step, axis=1) == np.arange(d)).all(axis=1)
    best = np.take_along_axis(gap, step[:, :, None], axis=2)[:, :, 0]
    rest = gap.copy()
    np.put_along_axis(rest, step[:, :, None], np.inf, axis=2)
    clear = mutual & (best <= CLEAR * rest.min(axis=2, initial=np.inf)).all(axis=1)
    return step, clear & ~_ranks_change(omega, step)


def _ranks_change(omega: NDArray[np.complex128], step: NDArray[np.int64]) -> NDArray[np.bool_]:
    """Whether real branches swap their order across an interval."""
    after = np.take_along_axis(omega[1:], step, axis=1)
    real = (omega[:-1].imag == 0) & (after.imag == 0)
    before_rank = np.argsort(np.argsort(np.where(real, omega[:-1].real, np.inf), axis=1), axis=1)
    after_rank = np.argsort(np.argsort(np.where(real, after.real, np.inf), axis=1), axis=1)
    return np.asarray((real & (before_rank != after_rank)).any(axis=1))


def _refined(
    solve: Solve, left: _End, right: _End, depth: int, events: list[Event]
) -> NDArray[np.int64]:
    """The permutation across an ambiguous interval, by halving."""
    middle_s = 0.5 * (left.s + right.s)
    if depth == DEEPEST or not left.s < middle_s < right.s:
        return _met(left, right, events)
    roots, slopes = solve(np.array([middle_s]))
    middle = _End(middle_s, roots[0], slopes[0])
    halves = []
    for a, b in ((left, middle), (middle, right)):
        step, clear = _links(
            np.array([a.s, b.s]), np.stack([a.omega, b.omega]), np.stack([a.slope, b.slope])
        )
        halves.append(step[0] if clear[0] else _refined(solve, a, b, depth + 1, events))
    first, second = halves
    return second[first]


def _met(left: _End, right: _End, events: list[Event]) -> NDArray[np.int64]:
    """Branches that meet within rounding: straight on, deterministic; the meeting is an event."""
    from scipy.optimize import linear_sum_assignment

    step, clear = _links(
        np.array([left.s, right.s]),
        np.stack([left.omega, right.omega]),
        np.zeros((2, len(left.omega)), complex),
    )
    del clear
    distance = np.abs(left.omega[:, None] - right.omega[None, :])
    turn = np.abs(left.slope[:, None] - right.slope[None, :])
    scale = turn.max(initial=0.0) or 1.0
    near = distance <= 1e-6 * max(float(np.abs(left.omega).max(initial=0.0)), 1e-300)
    cost = np.where(near, turn / scale, 10.0 + distance / (distance.max(initial=0.0) or 1.0))
    found = linear_sum_assignment(np.where(np.isfinite(cost), cost, 1e3))[1]
    changed = [b for b in range(len(found)) if np.sum(near[b]) > 1]
    if changed:
        before, after = left.omega[changed[:2]], right.omega[found[changed[:2]]]
        turned = ((after[1] - after[0]) * np.conj(before[1] - before[0])) ** 2
        kind = "onset" if turned.real < 0 else "crossing"
        events.append(Event(kind, float(0.5 * (left.s + right.s)), complex(before.mean())))
    return (
        np.asarray(found, np.int64)
        if changed or len(set(step[0].tolist())) < len(found)
        else step[0]
    )
