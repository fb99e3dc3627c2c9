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
    kept: list[Event] = []
    for event in sorted(events, key=lambda e: (e.kind, -e.radius), reverse=True):
        if not any(_same(event, other, near) for other in kept):
            kept.append(event)
    return sorted(kept, key=lambda e: (e.at, e.omega.real, e.omega.imag))


def _same(a: Event, b: Event, near: float) -> bool:
    same_place = np.isclose(a.at, b.at, near)
    return bool(same_place and np.isclose(a.omega, b.omega, max(near, 1e-6)))
