"""A random point in a large prime field, at which expressions become rational functions of a few unknowns.

What vanishes identically vanishes there; what does not, vanishes there with probability near 1e-18 (Schwartz 1980,
J. ACM 27, 701). The field serves to look for candidates; what is found is proved elsewhere by exact algebra.
"""

from __future__ import annotations

import random
from collections.abc import Callable, Iterable, Sequence
from fractions import Fraction
from functools import lru_cache, reduce
from itertools import combinations
from typing import Any

import sympy as sp
from flint import nmod_mpoly, nmod_mpoly_ctx, nmod_poly

from .polynomial import ExactPolynomial
from .radicals import isolated
from .rational import exact_rational

ROOT = 12
"""Every symbol is a twelfth power, so that its square, cube and fourth roots are in the field."""

LARGEST = 4096
"""The largest numerator and denominator that a number is recognized with."""


@lru_cache
def field() -> tuple[int, int]:
    """A prime of 61 bits in which -1, 2, 3, 5 and 7 have square roots and 2 and 3 cube roots, and the root of -1."""
    p = 2**61 + 1 - (2**61 % 24)
    while True:
        p -= 24
        if not sp.isprime(p) or any(pow(a, (p - 1) // 2, p) != 1 for a in (2, 3, 5, 7)):
            continue
        if all(pow(a, (p - 1) // 3, p) == 1 for a in (2, 3)):
            root = next(r for a in range(2, 60) if pow(r := pow(a, p // 4, p), 2, p) == p - 1)
            return p, root


class Point:
    """Numbers of the field for symbols and opaque expressions, the same for the same seed.

    Parameters
    ----------
    seed : int
    doubled : Expr, optional
        A symbol whose twelfth root is twice what it is without; its value is 2**12 times.
    """

    def __init__(self, seed: int, doubled: Any = None) -> None:
        self.seed, self.doubled = seed, doubled
        self.prime, self.unit = field()
        self._known: dict[sp.Expr, int] = {}

    def root_of(self, symbol: Any) -> int:
        """The twelfth root of a symbol's value."""
        value = random.Random(f"{self.seed}:{symbol}").randrange(2, self.prime)
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
            root = sp.ntheory.residue_ntheory.nthroot_mod(self.number(base), power.denominator, p)
            if root is not None:
                return pow(int(root), power.numerator, p)
        if ROOT % power.denominator == 0 and base.is_Symbol:
            return pow(self.root_of(base), int(power * ROOT), p)
        return pow(self.root_of(base**power), ROOT, p)

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
        self.gens = dict(zip(self.names, self.context.gens(), strict=True))


Value = Any
"""A number of the field (int), or a pair (numerator, denominator) of polynomials."""


def numerator(expr: sp.Expr, point: Point, unknowns: Sequence[sp.Symbol]) -> tuple[Any, Ring]:
    """The numerator of an expression at a point, a polynomial in the unknowns, freed of roots by norms."""
    plain, radicals = isolated(expr, *unknowns)
    ring = Ring([*unknowns, *(r.symbol for r in radicals)])
    top, _ = ratio(plain, point, ring)
    for radical in reversed(radicals):
        high, low = ratio(radical.base, point, ring)
        gen = ring.gens[radical.symbol]
        if top.degrees()[ring.names.index(radical.symbol)]:
            top = top.resultant(gen**radical.index * low - high, str(gen))
    return top, ring


def ratio(expr: sp.Expr, point: Point, ring: Ring) -> tuple[Any, Any]:
    """Numerator and denominator, not in lowest terms."""
    one = ring.context.constant(1)
    seen: dict[sp.Expr, Value] = {}

    def visit(node: sp.Expr) -> Value:
        if node not in seen:
            seen[node] = made(node)
        return seen[node]

    def made(node: sp.Expr) -> Value:
        if node in ring.gens:
            return ring.gens[node], one
        if isinstance(node, sp.Add | sp.Mul):
            plain, rest = _split([visit(a) for a in node.args], node.is_Add, point.prime)
            join = _sum if node.is_Add else _product
            if not rest:
                return plain
            neutral = 0 if node.is_Add else 1
            pairs = rest if plain == neutral else [*rest, (plain * one, one)]
            return reduce(join, pairs)
        if isinstance(node, sp.Pow) and node.exp.is_Integer:
            base, n = visit(node.base), int(node.exp)
            if isinstance(base, int):
                return pow(base, n, point.prime)
            top, bottom = base
            return (top**n, bottom**n) if n >= 0 else (bottom**-n, top**-n)
        return point.number(node)

    value = visit(expr)
    return (value * one, one) if isinstance(value, int) else value


def _split(values: list[Value], adds: bool, prime: int) -> tuple[int, list[Value]]:
    """The plain numbers joined to one, and the rest."""
    plain, rest = 0 if adds else 1, []
    for v in values:
        if isinstance(v, int):
            plain = (plain + v if adds else plain * v) % prime
        else:
            rest.append(v)
    return plain, rest


def _sum(a: Value, b: Value) -> Value:
    if a[1] == b[1]:
        return a[0] + b[0], a[1]
    common = a[1].gcd(b[1])
    mine, theirs = divmod(b[1], common)[0], divmod(a[1], common)[0]
    return a[0] * mine + b[0] * theirs, a[1] * mine


def _product(a: Value, b: Value) -> Value:
    return a[0] * b[0], a[1] * b[1]


def remainders(top: Any, divisor: Any, ring: Ring, main: sp.Symbol) -> list[Any]:
    """What must vanish for `divisor`, a polynomial in `main`, to divide `top`: one polynomial for each power."""
    place = ring.names.index(main)
    rest = divmod(top, divisor)[1]
    groups: dict[int, dict[tuple[int, ...], int]] = {}
    for exponents, c in rest.to_dict().items():
        key = tuple(0 if i == place else n for i, n in enumerate(exponents))
        groups.setdefault(int(exponents[place]), {})[key] = c
    return [ring.context.from_dict(g) for g in groups.values()]


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
    return nmod_poly([terms.get(n, 0) for n in range(max(terms) + 1)], field()[0])


def recognized(value: int) -> sp.Expr | None:
    """A small rational number, its square root, or i times it, that a value of the field is; None where it is none."""
    p, unit = field()
    for turn, factor in ((0, 1), (1, pow(unit, -1, p))):
        found = _small_rational(value * factor % p)
        if found is not None:
            return sp.I**turn * found
        square = _small_rational(pow(value * factor, 2, p))
        if square is not None and square > 0:
            return sp.I**turn * sp.sqrt(square)
    return None


def _small_rational(value: int) -> sp.Rational | None:
    """By the half-extended algorithm of Euclid (Wang 1981, SYMSAC, 212)."""
    p = field()[0]
    a, b, u, v = p, value % p, 0, 1
    while b > LARGEST:
        q = a // b
        a, b, u, v = b, a - q * b, v, u - q * v
    if v == 0 or abs(v) > LARGEST:
        return None
    return sp.Rational(b, v)


def power_of_scale(ratio: int, scale: int, powers: Iterable[Fraction]) -> Fraction | None:
    """The power n for which ``scale**n`` (2**12 for a doubled symbol) is a ratio of two values."""
    p = field()[0]
    for n in powers:
        if pow(scale, int(n * ROOT), p) == ratio:
            return n
    return None


def quotient(a: int, b: int) -> int:
    """a / b in the field."""
    p = field()[0]
    return a * pow(b, -1, p) % p


@lru_cache(maxsize=64)
def image(given: ExactPolynomial) -> nmod_poly:
    """A polynomial in its main symbol at one point, the same for all."""
    made: dict[int, int] = {}
    p, unit = field()
    point = Point(20)
    powers = [_powers(point.number(g)) for g in given.generators]
    for exponents, re, im in given.terms():
        value = (re + im * unit) % p
        for power, n in zip(powers, exponents[1:], strict=True):
            if n:
                value = value * power(n) % p
        made[exponents[0]] = (made.get(exponents[0], 0) + value) % p
    return nmod_poly([made.get(n, 0) for n in range(max(made, default=0) + 1)], p)


def _powers(x: int) -> Callable[[int], int]:
    return lru_cache(maxsize=None)(lambda n: pow(x, n, field()[0]))


def may_divide(part: ExactPolynomial, whole: ExactPolynomial) -> bool:
    """False only where `part` surely does not divide `whole` up to factors free of the main symbol.

    What divides does so at every point at which the degree of `part` stays; this is exact in one direction.
    """
    a, b = image(part), image(whole)
    return a.degree() != part.degree or not b or a.gcd(b).degree() == part.degree
