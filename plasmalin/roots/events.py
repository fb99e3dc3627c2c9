"""What happens along a sweep: branches meet."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np


@dataclass(frozen=True)
class Event:
    """Branches meet.

    Attributes
    ----------
    kind : str
        "crossing" (all go on as before) or "onset" (they coalesce, and the difference of the two turns by a
        right angle: two real roots become a growing and a damped one, or back).
    at : float
        The value of the swept quantity.
    omega : complex
        rad/s
    radius : float
        The exact value is not farther from `at`; infinite where `at` was found numerically, to about ten digits.
    roots : int
        How many meet.
    """

    kind: str
    at: float
    omega: complex
    radius: float = np.inf
    roots: int = 2


def distinct(events: Iterable[Event], near: float = 1e-9) -> list[Event]:
    """In order, and meetings that differ by rounding only, once; a coalescence counts before a crossing."""
    found = sorted(events, key=lambda e: (e.kind, e.roots, -e.radius), reverse=True)
    size, kept = _size(found), list[Event]()
    for event in found:
        if not any(_same(event, other, near, size) for other in kept):
            kept.append(event)
    return in_order(kept)


def joined_events(inside: Iterable[Event], between: Iterable[Event]) -> list[Event]:
    """Those of all factors and those between factors; where more cross between factors, only these."""
    ours, others = list(inside), list(between)
    size = _size([*ours, *others])
    kept = [
        e for e in ours if not any(e.kind == o.kind and _same(e, o, 1e-13, size) for o in others)
    ]
    return in_order([*kept, *others])


def in_order(events: Iterable[Event]) -> list[Event]:
    """By place, then by omega."""
    return sorted(events, key=lambda e: (e.at, e.omega.real, e.omega.imag))


def _size(events: Iterable[Event]) -> tuple[float, float]:
    """The largest values of what varies and of |omega|."""
    pairs = [(abs(e.at), abs(e.omega)) for e in events]
    return max((at for at, _ in pairs), default=0.0), max((w for _, w in pairs), default=0.0)


def _same(a: Event, b: Event, near: float, size: tuple[float, float]) -> bool:
    apart = 1e-12 * size[1] + max(near, 1e-6) * max(abs(a.omega), abs(b.omega))
    return abs(a.at - b.at) <= near * size[0] and abs(a.omega - b.omega) <= apart
