"""A random point in a large prime field, at which expressions become rational functions of a few unknowns.

What vanishes identically vanishes there; what does not, vanishes there with probability near 1e-18 (Schwartz 1980,
J. ACM 27, 701). The field serves to look for candidates; what is found is proved elsewhere by exact algebra.
"""

from __future__ import annotations

import random
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from fractions import Fraction
from functools import reduce
from itertools import combinations
from typing import Any

import sympy as sp
from flint import nmod_mpoly, nmod_mpoly_ctx, nmod_poly

from .field import ROOT, field, numeric_root, small_rational
from .polynomial import ExactPolynomial
from .rational import exact_rational


class Point:
    """Numbers of the field for symbols and opaque expressions, the same for the same seed.

    Parameters
    ----------
    seed : int
    doubled : Expr, optional
        A symbol whose twelfth root is twice what it is without; its value is 2**12 times.
    step : int
        How often every symbol's twelfth root was multiplied by a number of its own.
    """

    def __init__(self, seed: int, doubled: Any = None, step: int = 0) -> None:
        self.seed, self.doubled, self.step = seed, doubled, step
        self.prime, self.unit = field()
        self._known: dict[sp.Expr, int] = {}

    def root_of(self, symbol: Any) -> int:
        """The twelfth root of a symbol's value."""
        draw = random.Random(f"{self.seed}:{symbol}")
        value, factor = (draw.randrange(2, self.prime) for _ in range(2))
        value = value * pow(factor, self.step, self.prime) % self.prime
        return value * 2 % self.prime if symbol == self.doubled else value

    def number(self, expr: sp.Expr) -> int:
        """The value of an expression without unknowns."""
        if expr not in self._known:
            self._known[expr] = self._number(expr)
        return self._known[expr]

    def _number(self, expr: sp.Expr) -> int:
        p = self.prime
        if expr.is_Rational or expr.is_Float:
            q = exact_rational(expr)
            return q.numerator * pow(q.denominator, -1, p) % p
        if expr is sp.I:
            return self.unit
        if isinstance(expr, sp.Add):
            return sum(map(self.number, expr.args)) % p
        if isinstance(expr, sp.Mul):
            return reduce(lambda a, b: a * b % p, map(self.number, expr.args))
        if isinstance(expr, sp.Pow) and expr.exp.is_Rational:
            return self._power(expr.base, Fraction(int(expr.exp.p), int(expr.exp.q)))
        return pow(self.root_of(expr), ROOT, p)

    def _power(self, base: sp.Expr, power: Fraction) -> int:
        p = self.prime
        if power.denominator == 1:
            return pow(self.number(base), power.numerator, p)
        if base.is_number and ROOT % power.denominator == 0:
            root = numeric_root(self.number(base), power.denominator)
            if root is not None:
                return pow(root, power.numerator, p)
        if ROOT % power.denominator == 0 and base.is_Symbol:
            return pow(self.root_of(base), int(power * ROOT), p)
        return pow(self.root_of(base**power), ROOT, p)

    def recognized(self, value: int) -> sp.Expr | None:
        """The small rational number that a value stands for, its square or cube root, or i times one of them."""
        for turn in (0, 1):
            rest = value * pow(self.unit, -turn, self.prime) % self.prime
            for index in (1, 2, 3):
                power = small_rational(pow(rest, index, self.prime))
                if power is None or (index > 1 and power <= 0):
                    continue
                root = sp.root(power, index)
                for made in (root, -root):
                    if self.number(made) == rest:
                        return sp.I**turn * made
        return None

    def polynomial(self, given: ExactPolynomial, ring: Ring) -> nmod_mpoly:
        """An exact polynomial at this point, a polynomial in its main symbol."""
        p = self.prime
        values = [self.number(g) for g in given.generators]
        place = ring.names.index(given.main)
        out: dict[tuple[int, ...], int] = {}
        for exponents, re, im in given.terms():
            value = (re + im * self.unit) % p
            for x, n in zip(values, exponents[1:], strict=True):
                value = value * pow(x, n, p) % p
            key = tuple(exponents[0] if i == place else 0 for i in range(len(ring.names)))
            out[key] = (out.get(key, 0) + value) % p
        return ring.context.from_dict(out)


class Ring:
    """Polynomials over the field in a few unknowns."""

    def __init__(self, names: Sequence[sp.Symbol]) -> None:
        self.names = list(names)
        labels = tuple(f"x{i}" for i in range(len(names)))
        self.context = nmod_mpoly_ctx.get(labels, modulus=field()[0], ordering="lex")
        self.one = self.context.constant(1)
        self.gens = dict(zip(self.names, self.context.gens(), strict=True))

    def constant(self, value: int) -> Quotient:
        return Quotient(self.context.constant(value), self.one)

    def gen(self, name: sp.Symbol) -> Quotient:
        return Quotient(self.gens[name], self.one)


@dataclass(frozen=True, slots=True)
class Quotient:
    """A rational function over the field, not in lowest terms."""

    top: Any
    bottom: Any

    def __add__(self, other: Quotient | int) -> Quotient:
        if isinstance(other, int):
            return Quotient(self.top + other * self.bottom, self.bottom)
        if self.bottom == other.bottom:
            return Quotient(self.top + other.top, self.bottom)
        common = self.bottom.gcd(other.bottom)
        mine, theirs = divmod(other.bottom, common)[0], divmod(self.bottom, common)[0]
        return Quotient(self.top * mine + other.top * theirs, self.bottom * mine)

    def __mul__(self, other: Quotient | int) -> Quotient:
        if isinstance(other, int):
            return Quotient(self.top * other, self.bottom)
        return Quotient(self.top * other.top, self.bottom * other.bottom)

    def __truediv__(self, other: Quotient | int) -> Quotient:
        if isinstance(other, int):
            return Quotient(self.top, self.bottom * other)
        return self * other**-1

    def __rtruediv__(self, other: int) -> Quotient:
        return Quotient(other * self.bottom, self._invertible())

    def __pow__(self, n: int) -> Quotient:
        if n >= 0:
            return Quotient(self.top**n, self.bottom**n)
        return Quotient(self.bottom**-n, self._invertible() ** -n)

    def _invertible(self) -> Any:
        if not self.top:
            raise ZeroDivisionError("a quotient over the field has the denominator 0")
        return self.top

    def __neg__(self) -> Quotient:
        return Quotient(-1 * self.top, self.bottom)

    __radd__ = __add__


def without_root(top: Any, place: int, index: int, base: Quotient, gen: Any) -> Any:
    """A polynomial freed of a root, ``root**index = base``: the root put in where its powers are whole, else a norm."""
    powers = {e[place] for e in top.to_dict()}
    if not any(powers):
        return top
    if any(n % index for n in powers):
        return top.resultant(gen**index * base.bottom - base.top, f"x{place}")
    highest = max(powers) // index
    made = top * 0
    for n, part in split(top, place).items():
        made += part * base.top ** (n // index) * base.bottom ** (highest - n // index)
    return made


def split(p: Any, place: int) -> dict[int, Any]:
    """The coefficients of the powers of one unknown."""
    groups: dict[int, dict[tuple[int, ...], int]] = {}
    for exponents, c in p.to_dict().items():
        key = tuple(0 if i == place else n for i, n in enumerate(exponents))
        groups.setdefault(int(exponents[place]), {})[key] = c
    return {n: p.context().from_dict(g) for n, g in groups.items()}


def remainders(top: Any, divisor: Any, place: int) -> list[Any]:
    """What must vanish for `divisor`, a polynomial in one unknown, to divide `top`: a polynomial for each power."""
    return [*split(divmod(top, divisor)[1], place).values()]


def common_zeros(polynomials: Iterable[Any], ring: Ring, unknown: sp.Symbol) -> list[int] | None:
    """The values of one unknown at which all polynomials in it vanish; None where every value does."""
    place = ring.names.index(unknown)
    found: nmod_poly | None = None
    for p in polynomials:
        poly = univariate(p, place)
        found = poly if found is None else found.gcd(poly)
        if found.degree() == 0:
            return []
    if found is None:
        return None
    return [int(r) for r, _ in found.roots()]


def common_pairs(
    polynomials: Sequence[Any], ring: Ring, first: sp.Symbol, second: sp.Symbol
) -> list[tuple[int, int]]:
    """Pairs of values of two unknowns at which all polynomials vanish, by a resultant; isolated ones only."""
    held = sorted((p for p in polynomials if p), key=len)
    x, y = (ring.names.index(s) for s in (first, second))
    eliminants = (a.resultant(b, f"x{y}") for a, b in combinations(held, 2))
    eliminant = next((e for e in eliminants if e and e.degrees()[x]), None)
    if eliminant is None:
        return []
    found = []
    for value, _ in univariate(eliminant, x).roots():
        rest = [p.subs({f"x{x}": int(value)}) for p in held]
        for other in common_zeros([p for p in rest if p], ring, second) or ():
            found.append((int(value), other))
    return found


def univariate(p: Any, place: int) -> nmod_poly:
    """A polynomial that holds one unknown only."""
    terms = {int(e[place]): int(c) for e, c in p.to_dict().items()}
    return nmod_poly([terms.get(n, 0) for n in range(max(terms, default=0) + 1)], field()[0])
