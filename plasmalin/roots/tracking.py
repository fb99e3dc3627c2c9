"""Continuous branches: which root at one point is which root at the next.

Both ends of an interval are extrapolated to its midpoint with their slopes and matched as mutual nearest neighbors.
Intervals where that is ambiguous are halved, all at once, until they are clear or so short that the branches meet
there. Where the places of all meetings are known beforehand, points ever nearer to them are added instead.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence

import numpy as np
from numpy.typing import NDArray

from .across import Order, across, assigned
from .events import Event, distinct
from .matching import Ends, coincide, matched, pairwise_clear

DEEPEST = 36
"""Halvings of an interval before two branches count as meeting."""
UNEVEN = 0.4871
"""Where an interval is halved: off its middle, since meetings like to sit on round numbers."""
BATCH = 512
NEARER = np.array([4.0**-n for n in range(1, 15)])
"""Points beside a place where branches meet, as parts of the way to the next point."""
ENOUGH = 4.0**-8
"""The least of them where more than two branches may meet, since slopes of nearly triple roots are soon lost."""
NEAREST = 2.0**-34
"""Relative distance to a place that is near enough."""

Solve = Callable[[NDArray[np.float64]], tuple[NDArray[np.complex128], NDArray[np.complex128]]]
"""Parameter values -> roots and slopes, each of shape (points, roots)."""


def track(
    solve: Solve,
    s: NDArray[np.float64],
    omega: NDArray[np.complex128],
    slope: NDArray[np.complex128],
    known: Sequence[Event] | None = None,
    *,
    mirrored: bool = False,
) -> tuple[Order, list[Event]]:
    """Branches through increasing s.

    Parameters
    ----------
    solve : callable
        Roots and slopes at further points.
    s : ndarray, shape (n,)
        Increasing.
    omega, slope : ndarray, shape (n, d)
        Roots sorted by (Re, Im) at every point.
    known : sequence of Event, optional
        All meetings, and the poles between them, when they are known.
    mirrored : bool
        Whether roots are real or come as pairs of conjugates.

    Returns
    -------
    order : ndarray of int, shape (n, d)
        ``omega[i, order[i, b]]`` is branch b at point i; at the first point sorted by (Re, Im).
    events : list of Event
        `known`, or those that were seen.
    """
    meeting = coincide(omega) | ~np.isfinite(omega).all(axis=1)
    if known is not None:
        meeting |= np.isin(s, [e.at for e in known])
    meeting &= not meeting.all()
    points = Ends(s, omega, slope, mirrored)
    points = points.at(~meeting) if meeting.any() else points
    places = _alone(s, meeting)
    if known:
        places = np.union1d(places, [e.at for e in known])
    if len(places) and len(points.s):
        pairs = known is not None and all(e.roots == 2 for e in known)
        points = _with_nearer(solve, points, places, NEARER if pairs else NEARER[ENOUGH <= NEARER])
    place = np.searchsorted(points.s, places)
    inside = places[(place > 0) & (place < len(points.s))]
    found, events = _through(solve, points, inside, known)
    if not len(places) and not meeting.any():
        return found, distinct(events) if known is None else []
    order = found[np.minimum(np.searchsorted(points.s, s), len(points.s) - 1)]
    for i in np.flatnonzero(meeting):
        # Where roots coincide they are not told apart; the point takes its order from a neighbor.
        near = int(np.abs(points.s - s[i]).argmin())
        ahead = points.omega[near] + (s[i] - points.s[near]) * points.slope[near]
        order[i] = assigned(np.abs(ahead[:, None] - omega[i][None, :]))[found[near]]
    return order, list(known) if known is not None else distinct(events)


def _alone(s: NDArray[np.float64], meeting: NDArray[np.bool_]) -> NDArray[np.float64]:
    """Points at which roots coincide, except inside of stretches where they do all along within rounding."""
    beside = np.pad(meeting, 1)
    return s[meeting & ~(beside[:-2] & beside[2:])]


def _with_nearer(
    solve: Solve, points: Ends, places: NDArray[np.float64], nearer: NDArray[np.float64]
) -> Ends:
    """With points ever nearer to the places, as far as doubles and roots tell them apart."""
    ends = np.concatenate([[-np.inf], points.s, [np.inf]])
    right = np.searchsorted(ends, places)
    low, high, between = ends[right - 1], ends[right], 0.5 * (places[1:] + places[:-1])
    low[1:], high[:-1] = np.maximum(low[1:], between), np.minimum(high[:-1], between)
    low, high = (np.where(np.isfinite(end), end, places) for end in (low, high))
    steps = np.concatenate([nearer[:, None] * (end - places) for end in (low, high)])
    added = (places + steps)[np.abs(steps) > NEAREST * np.abs(places)]
    s = np.setdiff1d(added, np.concatenate([points.s, places]))
    between_ends = Ends(s, *solve(s))
    whole = points.and_then(between_ends.at(~coincide(between_ends.omega)))
    return whole.at(np.argsort(whole.s))


def _through(
    solve: Solve, points: Ends, places: NDArray[np.float64], known: Sequence[Event] | None
) -> tuple[Order, list[Event]]:
    """Branches through points at which all roots differ."""
    order = np.empty(points.omega.shape, np.int64)
    if len(order):
        order[0] = np.lexsort((points.omega[0].imag, points.omega[0].real))
    clear = _unmoved(points)
    clear[np.searchsorted(points.s, places) - 1] = False
    moved = np.flatnonzero(~clear)
    steps, events = _followed(solve, points.at(moved), points.at(moved + 1), places, known)
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


def _followed(
    solve: Solve,
    left: Ends,
    right: Ends,
    places: NDArray[np.float64],
    known: Sequence[Event] | None,
) -> tuple[list[Order], list[Event]]:
    """For each interval the permutation from left to right; all that are ambiguous are halved together."""
    events: list[Event] = []
    pieces: list[list[tuple[float, Order]]] = [[] for _ in left.s]
    owner = np.arange(len(left.s))
    for depth in range(DEEPEST + 1):
        step, clear = matched(left, right)
        meets = _hold(left.s, right.s, places)
        doubtful = np.flatnonzero(~clear & ~meets)
        s = left.s[doubtful] + UNEVEN * (right.s - left.s)[doubtful]
        between = Ends(s, *solve(s), left.mirrored)
        inside = (left.s[doubtful] < s) & (s < right.s[doubtful]) & (depth < DEEPEST)
        inside &= ~coincide(between.omega)
        for i in (*doubtful[~inside].tolist(), *np.flatnonzero(meets).tolist()):
            at = places[np.searchsorted(places, left.s[i])] if meets[i] else s[doubtful == i][0]
            step[i] = across(left.at(i), right.at(i), float(at), known, events)
        go_on = doubtful[inside]
        for i in np.setdiff1d(np.arange(len(owner)), go_on):
            pieces[owner[i]].append((float(left.s[i]), step[i]))
        if not len(go_on):
            break
        between = between.at(inside)
        left, right = left.at(go_on).and_then(between), between.and_then(right.at(go_on))
        owner = np.tile(owner[go_on], 2)
    return [_composed(p) for p in pieces], events


def _hold(
    left: NDArray[np.float64], right: NDArray[np.float64], places: NDArray[np.float64]
) -> NDArray[np.bool_]:
    """Whether an interval holds a place."""
    return np.asarray(np.searchsorted(places, left) < np.searchsorted(places, right))


def _composed(pieces: list[tuple[float, NDArray[np.int64]]]) -> NDArray[np.int64]:
    (_, whole), *others = sorted(pieces, key=lambda piece: piece[0])
    for _, step in others:
        whole = step[whole]
    return whole
