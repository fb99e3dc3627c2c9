"""The ring of an exact polynomial: a main symbol, generators, and what is known of the generators."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property
from math import lcm

import sympy as sp
from flint import Ordering, fmpz_mpoly_ctx

from ..errors import NonPolynomialError, ValuesError
from .gaussian import Gaussian
from .powers import Family, generator, is_plain, split_power

# partner function and sign: f**2 = 1 + sign * partner**2
SQUARES = {sp.cos: (sp.sin, -1), sp.cosh: (sp.sinh, 1)}
QUOTIENTS = {
    sp.tan: (sp.sin, sp.cos), sp.cot: (sp.cos, sp.sin), sp.tanh: (sp.sinh, sp.cosh), sp.coth: (sp.cosh, sp.sinh),
}  # fmt: skip


@dataclass(frozen=True)
class Ring:
    """Generators are ordered; variable 0 is ``main``, variable i is ``generators[i-1]``."""

    main: sp.Symbol
    generators: tuple[sp.Expr, ...]

    @cached_property
    def context(self) -> fmpz_mpoly_ctx:
        return fmpz_mpoly_ctx.get(("x", len(self.generators) + 1), Ordering.lex)

    @cached_property
    def places(self) -> dict[Family, tuple[int, int]]:
        """Variable and root of each family."""
        places = {(self.main, sp.S.One): (0, 1)}
        for i, g in enumerate(self.generators, 1):
            for family, power in split_power(g):
                places[family] = (i, power.denominator)
        return places

    def constant(self, re: int, im: int = 0) -> Gaussian:
        return Gaussian(self.context.constant(re), self.context.constant(im))


class Census:
    """Finds the generators of expressions; raises where ``main`` is not polynomial."""

    def __init__(self, main: sp.Symbol) -> None:
        self.main = main
        self.roots: dict[Family, int] = {}
        self._seen: set[sp.Expr] = set()

    def ring(self) -> Ring:
        found = (generator(family, root) for family, root in self.roots.items())
        return Ring(self.main, tuple(sorted(found, key=str)))

    def visit(self, expr: sp.Expr) -> None:
        if expr in self._seen or expr.is_Number or expr is sp.I:
            return
        self._seen.add(expr)
        for child in self._children(expr):
            self.visit(child)

    def _children(self, expr: sp.Expr) -> Iterable[sp.Expr]:
        if isinstance(expr, sp.Add | sp.Mul):
            return tuple(expr.args)
        if isinstance(expr, sp.Pow) and expr.exp.is_Integer:
            return tuple(expr.args[:1])
        if expr == self.main:
            return ()
        if self.main in expr.free_symbols:
            raise NonPolynomialError(
                f"{self.main} enters through {expr}, which is neither a polynomial nor a ratio of polynomials in"
                f" {self.main}; replace that expression by a polynomial or a ratio."
            )
        if expr.func in QUOTIENTS:
            return [f(expr.args[0]) for f in QUOTIENTS[expr.func]]
        return list(self._opaque(expr))

    def _opaque(self, expr: sp.Expr) -> Iterator[sp.Expr]:
        if expr is sp.zoo:
            raise ValuesError("a denominator is zero at these values; change the values.")
        for (base, unit), power in split_power(expr):
            if unit == 1 and not is_plain(base):
                yield base
                if power.denominator == 1:
                    continue
            family = (base, unit)
            self.roots[family] = lcm(self.roots.get(family, 1), power.denominator)
            if base != expr and unit == 1:
                yield base
            if base.func in SQUARES:
                yield SQUARES[base.func][0](base.args[0])
            if isinstance(base, sp.Abs) and base.args[0].is_extended_real:
                yield base.args[0]


def place(ring: Ring, family: Family, power: Fraction) -> tuple[int, int]:
    """Variable of a family and the whole power of that variable."""
    i, root = ring.places[family]
    return i, int(power * root)


def moved(value: Gaussian, ring: Ring, into: Ring) -> Gaussian:
    """A polynomial in a larger ring, generators that became roots of new ones raised to their power."""
    gens = into.context.gens()
    images = [gens[0]]
    for g in ring.generators:
        (piece, *rest) = split_power(g)
        if rest:
            raise ArithmeticError(f"{g} is not a generator of one family")
        i, power = place(into, *piece)
        images.append(gens[i] ** power)
    return Gaussian(*(p.compose(*images, ctx=into.context) for p in (value.re, value.im)))
