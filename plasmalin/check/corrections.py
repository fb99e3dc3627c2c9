"""What must be added to a value for it to be a root of a derived factor, to leading order."""

from __future__ import annotations

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

from ..declare.operators import omega
from ..exact.polynomial import ExactPolynomial
from .scalings import Weights, order


@dataclass(frozen=True)
class Step:
    """The smallest correction to a value: its order, and its leading part where one root only has that order."""

    order: Fraction
    value: Expr | None


@lru_cache(maxsize=64)
def _shifted(factor: ExactPolynomial, value: Expr) -> ExactPolynomial:
    """The factor as a polynomial in what is added to a value."""
    return factor.substitute({omega: value + omega})


def correction(factor: ExactPolynomial, value: Expr, weights: Weights) -> Step | None:
    """What must be added to a value for it to be a root, to leading order; None where it is a root."""
    shifted = _shifted(factor, value)
    sizes = [order(g, weights) for g in shifted.generators]
    lowest: dict[int, tuple[Fraction, list[Expr]]] = {}
    for e, a, b in shifted.terms():
        if e[0] > factor.degree:
            continue
        level = sum((w * n for w, n in zip(sizes, e[1:], strict=True)), Fraction(0))
        if e[0] in lowest and lowest[e[0]][0] < level:
            continue
        powers = (g**n for g, n in zip(shifted.generators, e[1:], strict=True) if n)
        term = (Integer(a) + I * b) * Mul(*powers)
        kept = lowest[e[0]][1] if e[0] in lowest and lowest[e[0]][0] == level else []
        lowest[e[0]] = (level, [*kept, term])
    if 0 not in lowest:
        return None
    slopes = {i: (lowest[0][0] - level) / i for i, (level, _) in lowest.items() if i}
    steepest = max(slopes.values())
    edge = [i for i, s in slopes.items() if s == steepest]
    if edge != [1]:
        return Step(steepest, None)
    return Step(steepest, cancel(-Add(*lowest[0][1]) / Add(*lowest[1][1])))


def parts(value: Expr) -> tuple[Expr, Expr]:
    """Real and imaginary part of an expression in real symbols."""
    top, bottom = value.as_numer_denom()
    turned = bottom.xreplace({I: -I})
    whole = expand(top * turned)
    imaginary = Add(*(t for t in Add.make_args(whole) if t.has(I)))
    size = expand(bottom * turned)
    return cancel((whole - imaginary) / size), cancel(expand(imaginary / I) / size)
