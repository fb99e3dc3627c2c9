"""SymPy expressions read into a ring, by structure alone."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable
from fractions import Fraction
from functools import cached_property, reduce
from operator import add, mul
from typing import TypeAlias

import sympy as sp
from flint import fmpq, fmpz, fmpz_mpoly

from ..errors import ValuesError
from .gaussian import Gaussian
from .powers import Family, is_plain, split_power
from .ratio import Ratio
from .rational import exact_rational
from .ring import QUOTIENTS, SQUARES, Census, Ring, place

Exponents: TypeAlias = tuple[int, ...]


def ring_of(expressions: Iterable[sp.Expr], main: sp.Symbol) -> Ring:
    """The smallest ring that holds the expressions."""
    census = Census(main)
    for expr in expressions:
        census.visit(expr)
    return census.ring()


class Reader:
    """Reads expressions into ``ring`` with ``main`` standing for ``i**phase`` times variable 0."""

    def __init__(self, ring: Ring, phase: int = 0) -> None:
        self.ring, self.phase = ring, phase
        self._units: dict[sp.Expr, tuple[tuple[int, int], ...] | None] = {}

    def ratio(self, expr: sp.Expr) -> Ratio:
        """The expression as a ratio, relations among generators used, not in lowest terms."""
        value = self._sum(expr)
        return Ratio(self.reduced(value.top), self._nonzero(self.reduced(value.bottom), expr))

    def _sum(self, expr: sp.Expr) -> Ratio:
        laurent: dict[tuple[Exponents, int], fmpq] = defaultdict(fmpq)
        others: list[Ratio] = []
        for term in sp.Add.make_args(expr):
            key, number, factors = self._term(term)
            if factors:
                others.append(reduce(mul, factors, self._laurent({key: number})))
            else:
                laurent[key] += number
        if laurent or not others:
            others.append(self._laurent(laurent))
        return reduce(add, others)

    def _term(self, term: sp.Expr) -> tuple[tuple[Exponents, int], fmpq, list[Ratio]]:
        """Exponents and parity of i, number, and the factors that are not monomials."""
        exponents = [0] * (len(self.ring.generators) + 1)
        number, turns = fmpq(1), 0
        factors: list[Ratio] = []
        for factor in sp.Mul.make_args(term):
            if factor is sp.I:
                turns += 1
            elif factor.is_Rational:
                number *= fmpq(int(factor.p), int(factor.q))
            elif factor.is_Number:
                value = exact_rational(factor)
                number *= fmpq(value.numerator, value.denominator)
            else:
                base, n = (
                    factor.args
                    if isinstance(factor, sp.Pow) and factor.exp.is_Integer
                    else (factor, sp.S.One)
                )
                monomial = self._monomial(base)
                if monomial is None:
                    factors.append(self._compound(base, int(n)))
                for i, power in monomial or ():
                    exponents[i] += power * int(n)
        turns += self.phase * exponents[0]
        return (tuple(exponents), turns % 2), -number if turns % 4 > 1 else number, factors

    def _monomial(self, base: sp.Expr) -> tuple[tuple[int, int], ...] | None:
        """Variables and powers of an opaque expression; None when it is compound."""
        if base not in self._units:
            self._units[base] = self._look_up(base)
        return self._units[base]

    def _look_up(self, base: sp.Expr) -> tuple[tuple[int, int], ...] | None:
        if (
            isinstance(base, sp.Add | sp.Mul)
            or base.is_Number
            or base is sp.I
            or base.func in QUOTIENTS
        ):
            return None
        if isinstance(base, sp.Pow) and base.exp.is_Integer:
            return None
        pieces = split_power(base)
        if any(unit == 1 and not is_plain(b) and p.denominator == 1 for (b, unit), p in pieces):
            return None
        return tuple(place(self.ring, family, power) for family, power in pieces)

    def _compound(self, base: sp.Expr, n: int) -> Ratio:
        if base.func in QUOTIENTS:
            top, bottom = (self._sum(f(base.args[0])) for f in QUOTIENTS[base.func])
            value = top * bottom**-1
        elif isinstance(base, sp.Pow) and not base.exp.is_Integer:
            value = reduce(mul, (self._piece(*piece) for piece in split_power(base)))
        elif isinstance(base, sp.Mul | sp.Pow):
            key, number, factors = self._term(base)
            value = reduce(mul, factors, self._laurent({key: number}))
        else:
            value = self._sum(base)
        if n < 0:
            self._nonzero(self.reduced(value.top), base)
        return value**n

    def _piece(self, family: Family, power: Fraction) -> Ratio:
        """One power of a family: a generator's, or a whole power of a compound base."""
        if family in self.ring.places and (power.denominator > 1 or is_plain(family[0])):
            i, n = place(self.ring, family, power)
            gen = self.ring.context.gens()[i]
            return Ratio(Gaussian(gen, gen - gen), self.ring.constant(1)) ** n
        return self._compound(family[0], int(power))

    def _laurent(self, terms: dict[tuple[Exponents, int], fmpq]) -> Ratio:
        """A sum of monomials with powers of either sign."""
        ring = self.ring.context
        low = [min(0, *column) for column in zip(*(e for e, _ in terms), strict=True)] or [0]
        scale = reduce(lambda a, q: a * (q.q / a.gcd(q.q)), terms.values(), fmpz(1))
        parts: tuple[dict[Exponents, int], dict[Exponents, int]] = ({}, {})
        for (exponents, parity), number in terms.items():
            shifted = tuple(e - m for e, m in zip(exponents, low, strict=True))
            parts[parity][shifted] = int((number * scale).p)
        bottom = ring.from_dict({tuple(-m for m in low): int(scale)}) if terms else ring.constant(1)
        return Ratio(Gaussian(*map(ring.from_dict, parts)), Gaussian(bottom, ring.constant(0)))

    def _nonzero(self, bottom: Gaussian, expr: sp.Expr) -> Gaussian:
        if not bottom:
            raise ValuesError(
                f"{expr} has a denominator that is identically zero; remove it or change the values."
            )
        return bottom

    # relations -----------------------------------------------------------------------------------

    @cached_property
    def relations(self) -> tuple[tuple[int, int, Gaussian, Gaussian], ...]:
        """Variable, power n, and the ratio that its n-th power equals."""
        found = []
        for (base, unit), (i, root) in list(self.ring.places.items()):
            value = self._square(base) if unit == 1 else None
            if value is not None:
                power = 2 * root if is_plain(base) else root
                ratio = self._sum(value)
                found.append((i, power, ratio.top, ratio.bottom))
        return tuple(found)

    def _square(self, base: sp.Expr) -> sp.Expr | None:
        """What the square of a plain base equals, or the compound base itself; None when nothing is known."""
        if not is_plain(base):
            return base
        if base.func in SQUARES:
            partner, sign = SQUARES[base.func]
            return 1 + sign * partner(base.args[0]) ** 2
        if isinstance(base, sp.Abs) and base.args[0].is_extended_real:
            return base.args[0] ** 2
        return None

    def reduced(self, p: Gaussian) -> Gaussian:
        """``p`` with every related power lowered; denominators of the relations are cleared."""
        changed = True
        while changed and self.relations:
            changed = False
            for i, n, top, bottom in self.relations:
                if any(part.degrees()[i] >= n for part in (p.re, p.im)):
                    p, changed = _lowered(p, i, n, top, bottom), True
        return p


def _lowered(p: Gaussian, i: int, n: int, top: Gaussian, bottom: Gaussian) -> Gaussian:
    """``p`` with the n-th power of variable i replaced by top / bottom, times a power of bottom."""
    re, im = _slices(p.re, i, n), _slices(p.im, i, n)
    zero = p.re.context().constant(0)
    degree = max(*re, *im)
    pieces = (
        Gaussian(re.get(j, zero), im.get(j, zero)) * top**j * bottom ** (degree - j)
        for j in range(degree + 1)
    )
    return reduce(add, pieces)


def _slices(p: fmpz_mpoly, i: int, n: int) -> dict[int, fmpz_mpoly]:
    slices: dict[int, dict[Exponents, fmpz]] = {0: {}}
    for exponents, c in p.terms():
        quotient, rest = divmod(exponents[i], n)
        slices.setdefault(quotient, {})[(*exponents[:i], rest, *exponents[i + 1 :])] = c
    return {j: p.context().from_dict(terms) for j, terms in slices.items()}
