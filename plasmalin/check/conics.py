"""Square roots of 1 ± (s/a)² made rational, so that polynomials compare without relations between such roots.

With s = a 2t/(1 + t²) the root of 1 − (s/a)² is (1 − t²)/(1 + t²), with s = a 2t/(1 − t²) that of 1 + (s/a)² is
(1 + t²)/(1 − t²): the circle and the hyperbola in their rational parametrizations, |t| < 1. So a Lorentz factor, with s
a velocity or a momentum, is a ratio of polynomials, and s itself too.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

from sympy import (
    Add,
    Expr,
    Mul,
    Poly,
    Pow,
    Rational,
    Symbol,
    cancel,
    factor_list,
    fraction,
    together,
)

from ..declare.notation import paper

_BELOW, _ABOVE = Symbol("_below", positive=True), Symbol("_above", positive=True)


@dataclass(frozen=True)
class Conic:
    """A symbol that a square root holds as its square, and what stands for it.

    Attributes
    ----------
    symbol : Symbol
        s
    size : Expr
        a
    sign : int
        −1 for the root of 1 − (s/a)², 1 for that of 1 + (s/a)².
    """

    symbol: Symbol
    size: Expr
    sign: int

    @property
    def parameter(self) -> Symbol:
        """t, which is s/(2a) where that is small."""
        s, a = self.symbol, self.size
        name = f"{paper(s / a)}/(1 + √(1 {'−' if self.sign < 0 else '+'} {paper(s**2 / a**2)}))"
        return Symbol(name, positive=s.is_positive, real=True)

    @property
    def image(self) -> Expr:
        t = self.parameter
        return self.size * 2 * t / (1 - self.sign * t**2)

    @property
    def root(self) -> Expr:
        """√(1 ± (s/a)²)"""
        return Pow(1 + self.sign * (self.symbol / self.size) ** 2, Rational(1, 2))

    def restored(self, ratio: Expr) -> Expr:
        """A ratio of polynomials of the parameter, in s and the root again."""
        t, root = self.parameter, Symbol("_root", positive=True)
        if t not in ratio.free_symbols:
            return ratio
        square = self.sign * (root - 1) / (root + 1)  # t²

        def written(n: int) -> Expr:
            odd = self.symbol / self.size / (1 + root) if n % 2 else 1
            return square ** (n // 2) * odd

        parts = (Poly(part, t).terms() for part in fraction(together(ratio)))
        top, bottom = (Add(*(c * written(n) for (n,), c in terms)) for terms in parts)
        return cancel(top / bottom).xreplace({root: self.root})

    def rational(self, expr: Expr) -> Expr:
        """An expression with the symbol written by its parameter, roots that become squares taken."""
        if self.symbol not in expr.free_symbols:
            return expr
        return expr.xreplace({self.symbol: self.image}).replace(_is_root, self._root)

    def _root(self, node: Expr) -> Expr:
        if self.parameter not in node.free_symbols:
            return node
        root = square_root(node.base, self.parameter)
        return node if root is None else root ** (2 * node.exp)


def _is_root(node: Expr) -> bool:
    return isinstance(node, Pow) and node.exp.is_Rational and node.exp.q == 2


def square_root(base: Expr, within: Symbol | None = None) -> Expr | None:
    """The positive root of the square of a ratio of polynomials; None for what is no square or of unknown sign.

    Parameters
    ----------
    base : Expr
    within : Symbol, optional
        A symbol that lies between −1 and 1.
    """
    top, bottom = (_root_of(part, within) for part in fraction(cancel(base)))
    return None if top is None or bottom is None else top / bottom


def _root_of(polynomial: Expr, within: Symbol | None) -> Expr | None:
    number, factors = factor_list(polynomial)
    made = [number ** Rational(1, 2)]
    if not made[0].is_Rational:
        return None
    for factor, power in factors:
        root = factor ** (power // 2)
        if power % 2 or (power % 4 and (root := _positive(factor, root, within)) is None):
            return None
        made.append(root)
    return Mul(*made)


def _positive(factor: Expr, root: Expr, within: Symbol | None) -> Expr | None:
    """An odd power of a factor with the sign that makes it positive."""
    shown = factor
    if within is not None:
        shown = fraction(cancel(factor.subs(within, (_ABOVE - _BELOW) / (_ABOVE + _BELOW))))[0]
    if shown.expand().is_positive:
        return root
    return -root if (-shown).expand().is_positive else None


def conics_of(expressions: Iterable[Expr]) -> tuple[Conic, ...]:
    """What makes the square roots among some expressions rational, as far as they are roots of 1 ± (s/a)²."""
    found: list[Conic] = []
    for root in (e for e in expressions if _is_root(e) and isinstance(e.base, Add)):
        left = root
        for known in found:
            left = known.rational(left)
        made = conic_of(left.base) if _is_root(left) else None
        if made is not None:
            found.append(made)
    return tuple(found)


def conic_of(base: Expr) -> Conic | None:
    """The first symbol, by name, in which a base is 1 ± (s/a)² with a ratio a."""
    for symbol in sorted(base.free_symbols, key=str):
        slope = cancel((base - 1) / symbol**2)
        if slope == 0 or symbol in slope.free_symbols:
            continue
        for sign in (-1, 1):
            inverse = square_root(sign * slope)
            if inverse is not None:
                return Conic(symbol, 1 / inverse, sign)
    return None
