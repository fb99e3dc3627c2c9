"""What must be added to a value for it to be a root of a derived factor, to leading order."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache

from sympy import (
    Add,
    Expr,
    I,
    Integer,
    Mul,
    cancel,
    expand,
)

from ..exact.polynomial import ExactPolynomial, polynomial
from .scalings import Weights, order


@dataclass(frozen=True)
class Step:
    """The smallest correction to a value: its order, and its leading part where one root only has that order."""

    order: Fraction
    value: Expr | None


@lru_cache(maxsize=64)
def _shifted(factor: ExactPolynomial, value: Expr) -> ExactPolynomial:
    """The factor as a polynomial in what is added to a value."""
    return factor.substitute({factor.main: value + factor.main})


def lowest_terms(
    factor: ExactPolynomial, value: Expr, weights: Weights
) -> dict[int, tuple[Fraction, Expr]]:
    """For every power of what is added to a value, the lowest order in ε and the terms of that order."""
    shifted = _shifted(factor, value)
    sizes = [order(g, weights) for g in shifted.generators]
    found: dict[int, tuple[Fraction, list[Expr]]] = {}
    for e, a, b in shifted.terms():
        level = sum((w * n for w, n in zip(sizes, e[1:], strict=True)), Fraction(0))
        if e[0] in found and found[e[0]][0] < level:
            continue
        powers = (g**n for g, n in zip(shifted.generators, e[1:], strict=True) if n)
        kept = found[e[0]][1] if e[0] in found and found[e[0]][0] == level else []
        found[e[0]] = (level, [*kept, (Integer(a) + I * b) * Mul(*powers)])
    return {i: (level, Add(*terms)) for i, (level, terms) in found.items()}


def correction(factor: ExactPolynomial, value: Expr, weights: Weights) -> Step | None:
    """What must be added to a value for it to be a root, to leading order; None where it is a root."""
    lowest = lowest_terms(factor, value, weights)
    if 0 not in lowest:
        return None
    slopes = {i: (lowest[0][0] - level) / i for i, (level, _) in lowest.items() if i}
    steepest = max(slopes.values())
    edge = [i for i, s in slopes.items() if s == steepest]
    if edge != [1]:
        return Step(steepest, None)
    return Step(steepest, cancel(-lowest[0][1] / lowest[1][1]))


def edges(
    factor: ExactPolynomial, value: Expr, weights: Weights
) -> Iterator[tuple[Fraction, ExactPolynomial]]:
    """For every order that a correction can have, the polynomial whose roots are its leading parts."""
    lowest = lowest_terms(factor, value, weights)
    slopes = {(lowest[i][0] - lowest[j][0]) / (j - i) for i in lowest for j in lowest if i < j}
    for slope in sorted(slopes):
        levels = {i: level + slope * i for i, (level, _) in lowest.items()}
        on = sorted(i for i, level in levels.items() if level == min(levels.values()))
        if len(on) > 1:
            terms = (lowest[i][1] * factor.main ** (i - on[0]) for i in on)
            yield slope, polynomial(Add(*terms), factor.main)


def parts(value: Expr) -> tuple[Expr, Expr]:
    """Real and imaginary part of an expression in real symbols."""
    top, bottom = value.as_numer_denom()
    turned = bottom.xreplace({I: -I})
    whole = expand(top * turned)
    imaginary = Add(*(t for t in Add.make_args(whole) if t.has(I)))
    size = expand(bottom * turned)
    return cancel((whole - imaginary) / size), cancel(expand(imaginary / I) / size)
