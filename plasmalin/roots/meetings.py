"""The events of a sweep: all of them from discriminants and resultants where that is cheap, else those that are seen.

What tracking sees by halving intervals is made right to the last digit and proven where two branches meet.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import replace
from fractions import Fraction
from itertools import combinations

import numpy as np
from numpy.typing import NDArray

from ..exact.coalescence import meeting
from ..exact.eliminants import Term
from ..exact.local import Local
from ..exact.places import Place, infinite_places, meeting_places, shared_places
from .events import Event, distinct
from .family import Family

NEAR = 1e-6
"""Relative distance from where tracking saw an event within which its exact place must lie."""
SAME = 1e-13
"""Crossings of three factors are found in pairs, with the same place up to its rounding."""


def all_meetings(family: Family, s: NDArray[np.float64], largest: float) -> list[Event] | None:
    """Every meeting of the roots of a factor from the first to the last value; None where that takes long.

    Parameters
    ----------
    family : Family
        In one quantity, the one that is swept.
    s : ndarray, shape (n,)
        Increasing.
    largest : float
        The largest |omega|.
    """
    if len(s) < 2:
        return []
    terms, between = terms_of(family), _ends(s)
    places = meeting_places(terms, between)
    if places is None:
        return None
    local = Local(terms, Fraction(largest), between[1] - between[0])
    found = [(place, meeting) for place in places for meeting in local.meetings(place[0])]
    return [_event(kind, place, x, n) for place, (x, n, kind) in found]


def all_poles(family: Family, s: NDArray[np.float64]) -> list[Event]:
    """Where roots go to infinity, for tracking: between a first and a last value these are no meetings."""
    if len(s) < 2:
        return []
    terms = terms_of(family)
    local = Local(terms, Fraction(1), Fraction(1))
    places = [at for at, _ in infinite_places(terms, _ends(s))]
    return [Event("pole", float(at), complex(np.inf), roots=local.infinite(at)) for at in places]


def all_crossings(
    families: Sequence[Family], s: NDArray[np.float64], largest: float
) -> list[Event] | None:
    """Every place from the first to the last value at which roots of two factors are the same, as `all_meetings`."""
    if len(s) < 2:
        return []
    between, found = _ends(s), list[Event]()
    terms = [terms_of(family) for family in families]
    width = between[1] - between[0]
    locals_ = [Local(t, Fraction(largest), width) for t in terms] if len(terms) > 1 else []
    for first, second in combinations(range(len(terms)), 2):
        places = shared_places(terms[first], terms[second], between)
        if places is None:
            return None
        for place in places:
            for x in locals_[first].shared(locals_[second], place[0]):
                meet = sum(local.count(place[0], x) for local in locals_)
                found.append(_event("crossing", place, x, meet))
    return distinct(found, SAME)


def terms_of(family: Family) -> list[Term]:
    rows = zip(family.exponents.tolist(), family.coefficients, strict=True)
    return [(row[0], sum(row[1:]), c) for row, c in rows]


def _ends(s: NDArray[np.float64]) -> tuple[Fraction, Fraction]:
    return Fraction(float(s[0])), Fraction(float(s[-1]))


def _event(kind: str, place: Place, x: tuple[Fraction, Fraction], roots: int = 2) -> Event:
    at = float(place[0])
    off = abs(Fraction(at) - place[0]) + place[1]
    return Event(kind, at, complex(*map(float, x)), _upwards(off), roots)


def _upwards(bound: Fraction) -> float:
    return float(np.nextafter(float(bound), np.inf)) if bound else 0.0


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
    terms = terms_of(family)
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
    return replace(event, at=at, omega=omega, radius=_upwards(off))
