"""Expressions as a monomial in the parameters times a dimensionless rest, in chosen scales of time and length."""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction
from typing import Any

from sympy import Abs, Add, Dummy, Expr, I, Integer, Mul, Pow, S, Symbol
from sympy.core.function import Function

from ..declare.dimensions import Dimensions
from ..declare.notation import paper
from ..declare.operators import omega
from ..declare.units import NONE, Dimension, dimension, dimension_text, product
from ..errors import UnitError
from ..exact.polynomial import ExactPolynomial
from .groups import Scales
from .monomials import Basis, Group, Monomial, as_expr, times

OMEGA = Symbol("omegahat")
PER_SECOND, PER_METER = dimension(0, 0, -1), dimension(-1)


class SymbolDimensions:
    """The dimension of every symbol that is met, or an error that names it."""

    def __init__(self, dimensions: Dimensions, parameters: set[Symbol]) -> None:
        self.dimensions, self.parameters = dimensions, parameters
        self.found: dict[Expr, Dimension] = {}

    def symbol(self, symbol: Symbol) -> Dimension:
        if symbol not in self.found:
            powers = PER_SECOND if symbol == omega else self.dimensions.of(symbol.name)
            if powers is None:
                raise UnitError(
                    f"no unit is declared for '{symbol.name}', and none follows from the laws; "
                    f"declare it: model.parameter({symbol.name!r}, unit=...)"
                )
            self.found[symbol] = powers
        return self.found[symbol]

    def of(self, expr: Expr) -> Dimension:
        """The dimension of a scale: of the monomial in front of it."""
        return self.monomial(Splitter(self, S.One, S.One).split(expr)[0])

    def monomial(self, powers: Monomial) -> Dimension:
        total = NONE
        for p, n in powers.items():
            inner = p.args[0] if isinstance(p, Abs) else p
            self.found[p] = self.symbol(inner)
            total = product(total, self.found[p], n)
        return total

    def reference(self, length: Any, names: Mapping[str, Any]) -> dict[str, Symbol]:
        """A bare new name as length scale is a length to be chosen by the reader, for laws that have none."""
        if not isinstance(length, str) or not length.isidentifier() or length in names:
            return {}
        made = Symbol(length, positive=True)
        self.found[made] = dimension(1)
        return {length: made}


class Splitter:
    """Takes expressions apart: a monomial in the parameters times a dimensionless rest.

    The rest holds omegahat, khat ..., dimensionless parameters, and a place (a dummy) for each dimensionless monomial.
    """

    def __init__(self, known: SymbolDimensions, time: Expr, length: Expr) -> None:
        self.known = known
        self.hats: dict[Symbol, Symbol] = {}
        self._places: dict[frozenset[tuple[Expr, Fraction]], Dummy] = {}
        self.time: tuple[Monomial, Expr] = ({}, S.One)
        self.length: tuple[Monomial, Expr] = ({}, S.One)
        self.time, self.length = self.split(time), self.split(length)

    @property
    def places(self) -> list[Monomial]:
        return [dict(key) for key in self._places]

    @property
    def scales(self) -> Scales:
        rests = (f for _, f in (self.time, self.length))
        numbers = (
            f if f.is_number or (f.is_positive and not f.atoms(Dummy)) else None for f in rests
        )
        return Scales(self.time[0], self.length[0], *numbers)

    def images(self, groups: list[Group]) -> dict[Any, Expr]:
        """Each place as a product of powers of groups."""
        basis = Basis()
        for g in groups:
            basis.add(g)
        images: dict[Any, Expr] = {}
        for key, dummy in self._places.items():
            powers = basis.coordinates(dict(key)) or {}
            factors = (
                (groups[j].symbol / groups[j].number) ** _rational(c) for j, c in powers.items()
            )
            images[dummy] = Mul(*factors)
        return images

    def factor(self, exact: ExactPolynomial) -> Expr:
        """One factor of a relation, divided by the monomial of its first term."""
        parts = [self.split(g) for g in (exact.main, *exact.generators)]
        total, first = [], None
        for exponents, re, im in exact.terms():
            powers: Monomial = {}
            rest: Expr = Integer(re) + I * Integer(im)
            for (m, r), n in zip(parts, exponents, strict=True):
                powers, rest = times(powers, m, n), rest * r**n
            first = powers if first is None else first
            total.append(rest * self.place(times(powers, first, -1)))
        return Add(*total)

    def place(self, powers: Monomial) -> Expr:
        """A dimensionless monomial as a symbol that stands for it."""
        if not powers:
            return S.One
        if self.known.monomial(powers) != NONE:
            raise UnitError(
                f"terms of a sum differ by {paper(as_expr(powers))}, in {dimension_text(self.known.monomial(powers))}; "
                "a number that carries a unit needs a name, model.parameter(..., unit=...)"
            )
        return self._places.setdefault(frozenset(powers.items()), Dummy(real=True))

    def split(self, expr: Any) -> tuple[Monomial, Expr]:
        if isinstance(expr, Symbol):
            return self._symbol(expr)
        if isinstance(expr, Mul):
            powers: Monomial = {}
            rest: Expr = S.One
            for m, r in map(self.split, expr.args):
                powers, rest = times(powers, m), rest * r
            return powers, rest
        if isinstance(expr, Add):
            return self._sum([self.split(a) for a in expr.args])
        if isinstance(expr, Pow) and expr.exp.is_Rational:
            m, r = self.split(expr.base)
            q = Fraction(int(expr.exp.p), int(expr.exp.q))
            return times({}, m if q.denominator == 1 else _unsigned(m), q), r**expr.exp
        if isinstance(expr, Abs):
            m, r = self.split(expr.args[0])
            return {p if p.is_positive else Abs(p): n for p, n in m.items()}, Abs(r)
        if isinstance(expr, Pow | Function):
            return {}, expr.func(*(self._pure(a) for a in expr.args))
        return {}, expr

    def _symbol(self, symbol: Symbol) -> tuple[Monomial, Expr]:
        kind = self.known.symbol(symbol)
        if symbol == omega:
            return times({}, self.time[0], -1), OMEGA / self.time[1]
        if kind == NONE:
            return {}, symbol
        if symbol in self.known.parameters or kind != PER_METER:
            return {symbol: Fraction(1)}, S.One
        stem, mark, rest = symbol.name.partition("_")
        hat = self.hats.setdefault(symbol, Symbol(f"{stem}hat{mark}{rest}", real=True))
        return times({}, self.length[0], -1), hat / self.length[1]

    def _sum(self, parts: list[tuple[Monomial, Expr]]) -> tuple[Monomial, Expr]:
        """The monomial of one term in front; one without signs that a root would lose, where there is one."""
        first = min(
            (m for m, _ in parts),
            key=lambda m: (any(not p.is_positive for p in m), str(as_expr(m))),
        )
        return first, Add(*(r * self.place(times(m, first, -1)) for m, r in parts))

    def _pure(self, expr: Expr) -> Expr:
        powers, rest = self.split(expr)
        return rest * self.place(powers)


def _unsigned(powers: Monomial) -> Monomial:
    """A monomial under a root: even powers of what has no known sign as powers of its size."""
    for p, n in powers.items():
        if not p.is_positive and not isinstance(p, Abs) and n % 2:
            raise UnitError(
                f"'{p}' stands under a root and its sign is not known; "
                f"declare it positive: model.parameter('{p}', positive=True)"
            )
    return {p if p.is_positive or isinstance(p, Abs) else Abs(p): n for p, n in powers.items()}


def _rational(n: Fraction) -> Expr:
    return Integer(n.numerator) / Integer(n.denominator)
