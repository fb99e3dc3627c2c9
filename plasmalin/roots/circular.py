"""Polynomials in the sine and the cosine of a swept angle, written so that they keep their digits at every angle.

Factors come in powers of the sine, the cosine's square being 1 - sin². Near a right angle they vanish like a power of
the cosine, by cancellation. Terms filled up with sin² + cos² = 1 to one degree (the Bernstein form on the circle) do not
cancel there.
"""

from __future__ import annotations

from collections.abc import Iterable
from fractions import Fraction
from math import comb

import numpy as np
from sympy import Expr, cos, sin

from .family import Exact, Family

Powers = tuple[int, ...]


def with_partners(generators: Iterable[Expr]) -> tuple[Expr, ...]:
    """Every sine with its cosine and the other way round."""
    found = list(generators)
    for g in list(found):
        partner = {sin: cos, cos: sin}.get(g.func)
        if partner is not None and partner(g.args[0]) not in found:
            found.append(partner(g.args[0]))
    return tuple(found)


def filled_up(family: Family, swept: tuple[Expr, ...]) -> Family:
    """The family with the terms of every power of omega, and of the other quantities, of one degree in sin and cos.

    Even and odd degrees stay apart.
    """
    for i, g in enumerate(swept):
        if isinstance(g, sin) and cos(g.args[0]) in swept:
            family = _filled_up(family, 1 + i, 1 + swept.index(cos(g.args[0])))
    return family


def _filled_up(family: Family, sine: int, cosine: int) -> Family:
    rows = [tuple(row) for row in family.exponents.tolist()]
    highest: dict[Powers, int] = {}
    for row in rows:
        group, degree = _group(row, sine, cosine), row[sine] + row[cosine]
        highest[group] = max(highest.get(group, 0), degree)
    made: dict[Powers, Exact] = {}
    for row, (re, im) in zip(rows, family.coefficients, strict=True):
        missing = (highest[_group(row, sine, cosine)] - row[sine] - row[cosine]) // 2
        for n in range(missing + 1):
            powers = list(row)
            powers[sine] += 2 * n
            powers[cosine] += 2 * (missing - n)
            old, times = made.get(tuple(powers), (Fraction(0), Fraction(0))), comb(missing, n)
            made[tuple(powers)] = old[0] + times * re, old[1] + times * im
    kept = {powers: c for powers, c in made.items() if c[0] or c[1]}
    return Family(np.array(list(kept), np.int64).reshape(len(kept), -1), tuple(kept.values()))


def _group(row: Powers, sine: int, cosine: int) -> Powers:
    """What terms have in common that are brought to one degree."""
    others = (n for i, n in enumerate(row) if i not in (sine, cosine))
    return (*others, (row[sine] + row[cosine]) % 2)
