"""Which root is which across a short interval in which roots meet."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray

from .events import Event
from .matching import Ends

Order: TypeAlias = NDArray[np.int64]
"""A permutation of roots."""


def across(
    left: Ends, right: Ends, at: float, known: Sequence[Event] | None, events: list[Event]
) -> Order:
    """The permutation across a short interval in which roots meet, those of known events or those that seem to."""
    half = 0.5 * (right.s - left.s)
    ahead, back = left.omega + half * left.slope, right.omega - half * right.slope
    step = assigned(np.abs(ahead[:, None] - back[None, :]))
    if known is None:
        for group in _meetings(left, float(right.s - left.s)):
            # Slopes of nearly triple roots are lost to rounding; they tell nothing more.
            if len(group) > 2 or _apart(left, group) < 0 <= _apart(right, step[group]):
                events.append(_seen(left, right, at, group, step[group]))
                _pass(left, right, group, step, events[-1].kind, 1)
            else:
                _pass(left, right, group, step, "none", 0)
        return step
    inside = [e for e in known if left.s < e.at < right.s]
    if not inside:
        return _in_rank(left, right, step)
    taken = [_nearest(w, inside) for w in (left.omega, right.omega)]
    others = [np.setdiff1d(np.arange(len(step)), np.concatenate(t)) for t in taken]
    step[others[0]] = others[1][assigned(np.abs(ahead[others[0], None] - back[None, others[1]]))]
    for event, group, partners in zip(inside, *taken, strict=True):
        step[group] = partners
        _pass(left, right, group, step, event.kind, _power(left, event.at, group))
    return step


def _nearest(omega: NDArray[np.complex128], events: Sequence[Event]) -> list[Order]:
    """For each event the roots that meet in it."""
    groups, free = [], np.arange(len(omega))
    for event in events:
        away = omega[free] if event.kind == "pole" else omega[free] - event.omega
        distance = -np.abs(away) if event.kind == "pole" else np.abs(away)
        groups.append(
            free[np.sort(np.argsort(np.where(np.isnan(distance), np.inf, distance))[: event.roots])]
        )
        free = np.setdiff1d(free, groups[-1])
    return groups


def _in_rank(left: Ends, right: Ends, step: Order) -> Order:
    """Real branches that do not meet keep their order, even where rounding does not tell them apart."""
    real = (left.omega.imag == 0) & (right.omega.imag[step] == 0)
    group = np.flatnonzero(real)
    step[group[np.argsort(left.omega[group].real, kind="stable")]] = step[group][
        np.argsort(right.omega[step[group]].real, kind="stable")
    ]
    return step


def _seen(left: Ends, right: Ends, at: float, group: Order, partners: Order) -> Event:
    """The event that roots of a short interval look like."""
    before, after = (w - w.mean() for w in (left.omega[group], right.omega[partners]))
    onset = bool((((after[1] - after[0]) * np.conj(before[1] - before[0])) ** 2).real < 0)
    omega = complex(left.omega[group].mean())
    return Event("onset" if onset else "crossing", at, omega, roots=len(group))


def _pass(left: Ends, right: Ends, group: Order, step: Order, kind: str, power: int) -> None:
    """Puts the permutation of the roots that meet right.

    Roots that cross come out on the other side of their mean, or, after an even power, on the same one. At a coalescence
    labels are a convention: the root that grows more goes on as the one that grows more, and among real ones as the
    one with the larger real part.
    """
    partners = step[group].copy()
    before, after = (w - w.mean() for w in (left.omega[group], right.omega[partners]))
    if kind in {"onset", "pole"}:
        ranked = (np.lexsort((w.real, w.imag)) for w in (before, after))
        step[group[next(ranked)]] = partners[next(ranked)]
        return
    side = -1.0 if power % 2 else 1.0
    sizes = [np.abs(w).max() or 1.0 for w in (before, after)]
    apart = np.abs(side * before[:, None] / sizes[0] - after[None, :] / sizes[1])
    step[group] = partners[assigned(apart)]


def _power(left: Ends, at: float, group: Order) -> int:
    """How fast roots near each other, as a power of the distance to the place where they meet."""
    away = left.omega[group] - left.omega[group].mean()
    size = float((np.abs(away) ** 2).sum())
    return max(1, round(_apart(left, group) * float(left.s - at) / size)) if size else 1


def _apart(end: Ends, group: Order) -> float:
    """How fast the squares of the distances of roots from their mean grow, halved."""
    away, rate = (w[group] - w[group].mean() for w in (end.omega, end.slope))
    return float((rate * np.conj(away)).sum().real)


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


def assigned(cost: NDArray[np.float64]) -> NDArray[np.int64]:
    """The permutation of least total cost."""
    from scipy.optimize import linear_sum_assignment

    finite = np.isfinite(cost)
    largest = float(cost[finite].max(initial=0.0)) or 1.0
    scaled = np.where(finite, cost / largest, 2.0 * len(cost))
    return np.asarray(linear_sum_assignment(scaled)[1], np.int64)
