"""Leading balances of a relation under an ordering of its parameters."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction
from itertools import pairwise
from typing import Any

from sympy import Add, Expr, I, Integer, Mul

from ..declare.notation import paper
from ..exact.polynomial import ExactPolynomial

Point = tuple[int, Fraction]


@dataclass(frozen=True)
class LeadingBalance:
    """What is left of a relation at leading order.

    Attributes
    ----------
    scaling : Fraction
        omega ~ epsilon**scaling.
    expr : Expr
        The leading part, with powers of omega that the balance does not need divided out.
    roots : int
        How many roots scale so.
    """

    scaling: Fraction
    expr: Expr
    roots: int

    def __str__(self) -> str:
        return f"ω ~ ε^({self.scaling}): {paper(self.expr)} = 0"


def leading_balances(
    polynomial: ExactPolynomial, weights: Mapping[Expr, Fraction], fixed: Fraction | None
) -> list[LeadingBalance]:
    """The edges of the lower Newton polygon in (power of omega, order in epsilon).

    The slope of an edge is minus the scaling of omega, its length the number of roots (Newton; Puiseux 1850,
    J. Math. Pures Appl. 15, 365; from memory).
    """
    places = [(1 + i, weights[g]) for i, g in enumerate(polynomial.generators) if g in weights]
    terms = [
        (e[0], sum((w * e[i] for i, w in places), Fraction(0)), e, re, im)
        for e, re, im in polynomial.terms()
    ]
    if fixed is not None:
        return [_balance(polynomial, terms, fixed)]
    lowest: dict[int, Fraction] = {}
    for power, order, *_ in terms:
        lowest[power] = min(order, lowest.get(power, order))
    hull = _lower_hull(sorted(lowest.items()))
    slopes = [(b[1] - a[1]) / (b[0] - a[0]) for a, b in pairwise(hull)]
    return [_balance(polynomial, terms, -slope) for slope in slopes]


def _lower_hull(points: list[Point]) -> list[Point]:
    hull: list[Point] = []
    for p in points:
        while len(hull) > 1 and not _turns_up(hull[-2], hull[-1], p):
            hull.pop()
        hull.append(p)
    return hull


def _turns_up(a: Point, b: Point, c: Point) -> bool:
    return (b[1] - a[1]) * (c[0] - b[0]) < (c[1] - b[1]) * (b[0] - a[0])


def _balance(polynomial: ExactPolynomial, terms: list[Any], scaling: Fraction) -> LeadingBalance:
    level = min(order + scaling * power for power, order, *_ in terms)
    kept = [t for t in terms if t[1] + scaling * t[0] == level]
    lowest, highest = min(t[0] for t in kept), max(t[0] for t in kept)
    parts = []
    for power, _, e, re, im in kept:
        factors = (g**n for g, n in zip(polynomial.generators, e[1:], strict=True))
        parts.append(Mul(Integer(re) + I * im, polynomial.main ** (power - lowest), *factors))
    return LeadingBalance(scaling, Add(*parts), highest - lowest)
