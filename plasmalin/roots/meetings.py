"""The exact places of events: what tracking finds by halving intervals, made right to the last digit and proven."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace
from fractions import Fraction

import numpy as np

from ..exact.coalescence import Term, meeting
from .family import Family
from .tracking import Event

NEAR = 1e-6
"""Relative distance from where tracking saw an event within which its exact place must lie."""


def placed(family: Family, events: Iterable[Event], sizes: tuple[float, float]) -> list[Event]:
    """The events of a factor, each once, with proven places where two branches meet.

    Parameters
    ----------
    family : Family
        In one quantity, the one that is swept.
    events : iterable of Event
    sizes : (float, float)
        The largest |omega| and the largest value of what is swept.
    """
    rows = zip(family.exponents.tolist(), family.coefficients, strict=True)
    terms = [(i, j, c) for (i, j), c in rows]
    return list(dict.fromkeys(_placed(terms, event, sizes) for event in events))


def _placed(terms: list[Term], event: Event, sizes: tuple[float, float]) -> Event:
    found = meeting(terms, event.kind, (event.omega, event.at), sizes)
    if found is None:
        return event
    (re, im), (s, beside), doubt = found
    at, omega = float(s), complex(float(re), float(im))
    if abs(at - event.at) > NEAR * sizes[1] or abs(omega - event.omega) > NEAR * sizes[0]:
        return event
    off = abs(Fraction(at) - s) + abs(beside) + doubt
    return replace(event, at=at, omega=omega, radius=float(np.nextafter(float(off), np.inf)))
