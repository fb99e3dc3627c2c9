"""Polynomials as terms with weights: what is of the lowest weight, and quotients."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from fractions import Fraction
from itertools import combinations

from .cones import Vector, minus, plus, times
from .monomials import Coefficient, Space, Terms


def slopes(claimed: Terms, w: Vector, space: Space) -> Iterator[Vector]:
    """The weights with every weight of ω for which terms with different powers of ω are leading."""
    lowest: dict[Fraction, Fraction] = {}
    for v in claimed:
        order = times(w, space.order(v)) - w[0] * v[0]
        lowest[v[0]] = min(order, lowest.get(v[0], order))
    found = {(lowest[b] - lowest[a]) / (a - b) for a, b in combinations(lowest, 2)}
    for slope in sorted(found):
        turned = (slope, *w[1:])
        if len({v[0] for v in initial(claimed, turned, space)}) > 1:
            yield turned


def initial(terms: Terms, w: Vector, space: Space) -> Terms:
    """The terms of the lowest weight."""
    levels = {v: times(w, space.order(v)) for v in terms}
    low = min(levels.values())
    return {v: terms[v] for v, level in levels.items() if level == low}


def product(a: Coefficient, b: Coefficient) -> Coefficient:
    return a[0] * b[0] - a[1] * b[1], a[0] * b[1] + a[1] * b[0]


def matched_shifts(part: Terms, whole: Terms) -> Iterator[tuple[Vector, ...]]:
    """The places where a multiple of `part` by one term stands in `whole`."""
    anchor, *others = part
    for v, c in whole.items():
        shift = minus(v, anchor)
        places = [v]
        for o in others:
            place = plus(shift, o)
            found = whole.get(place)
            if found is None or product(found, part[anchor]) != product(c, part[o]):
                break
            places.append(place)
        else:
            yield tuple(places)


def divided(
    whole: Mapping[Vector, tuple[Fraction | int, Fraction | int]], part: Terms
) -> dict[Vector, tuple[Fraction, Fraction]] | None:
    """The quotient of two polynomials, or None where there is a rest."""
    rest = {v: (Fraction(a), Fraction(b)) for v, (a, b) in whole.items()}
    least = _least(whole)
    base = _least(part)
    lead = max(part)
    a, b = part[lead]
    norm = a * a + b * b
    made: dict[Vector, tuple[Fraction, Fraction]] = {}
    while rest:
        top = max(rest)
        shift = minus(top, lead)
        if any(s < x - y for s, x, y in zip(shift, least, base, strict=True)):
            return None
        c, d = rest[top]
        q = (c * a + d * b) / norm, (d * a - c * b) / norm
        made[shift] = q
        for v, (x, y) in part.items():
            place = plus(shift, v)
            old = rest.get(place, (Fraction(0), Fraction(0)))
            new = old[0] - (q[0] * x - q[1] * y), old[1] - (q[0] * y + q[1] * x)
            if any(new):
                rest[place] = new
            else:
                rest.pop(place, None)
    return made


def _least(terms: Iterable[Vector]) -> Vector:
    return tuple(min(column) for column in zip(*terms, strict=True))
