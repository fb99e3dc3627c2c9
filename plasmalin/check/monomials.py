"""Polynomials as exponents and coefficients, for orderings; monomials written in an author's own symbols."""

from __future__ import annotations

import re
from collections.abc import Collection, Iterable, Mapping
from dataclasses import dataclass, field
from fractions import Fraction
from typing import TypeAlias

from sympy import (
    Add,
    Expr,
    Float,
    I,
    Integer,
    Mul,
    Pow,
    Rational,
    Symbol,
    expand,
    powdenest,
    powsimp,
)

from ..declare.operators import omega
from ..exact.polynomial import ExactPolynomial
from .claim import Claim
from .cones import Quotient, Vector, minus, plus, primitive, shortest

Coefficient: TypeAlias = tuple[int, int]
Terms: TypeAlias = dict[Vector, Coefficient]

PURE_NUMBER = re.compile(r"gamma(_?\w+)?$|g[a-z]$|gamma")
CHARGE_NUMBER = re.compile(r"[Zz](_?\w+)?$")
ELECTRON_MASS = ("m_e", "me", "m_electron")
MASS = re.compile(r"(m|M)(_?(?!u\d?_?)\w+)?$")
ORDINARY, NATURE, SHORTHAND = 1.0, 1.05, 1.1


@dataclass(frozen=True)
class Space:
    """The symbols that have sizes, ω first, then those that are pure numbers, whose size is one."""

    columns: tuple[Expr, ...]
    sized: int
    _known: dict[int, tuple[ExactPolynomial, Terms]] = field(
        default_factory=dict, compare=False, repr=False
    )

    def order(self, v: Vector) -> Vector:
        """The exponents of the symbols that have sizes."""
        return v[: self.sized]

    def terms(self, polynomial: ExactPolynomial) -> Terms:
        """Exponents, all columns, and the Gaussian integer coefficient of every term."""
        if id(polynomial) not in self._known:
            self._known[id(polynomial)] = polynomial, self._terms(polynomial)
        return self._known[id(polynomial)][1]

    def _terms(self, polynomial: ExactPolynomial) -> Terms:
        place = {c: i for i, c in enumerate(self.columns)}
        images = [(place[omega], Fraction(1))]
        images += [(place[b], p) for b, p in map(base_and_power, polynomial.generators)]
        made: Terms = {}
        for e, re_, im in polynomial.terms():
            v = [Fraction(0)] * len(self.columns)
            for (i, power), n in zip(images, e, strict=True):
                v[i] += power * n
            made[tuple(v)] = (re_, im)
        return made

    def holds(self, polynomial: ExactPolynomial) -> bool:
        """Whether all that a polynomial is made of has a column."""
        return {base_and_power(g)[0] for g in polynomial.generators} <= set(self.columns)

    def exponents(self, monomial: Expr) -> Vector | None:
        """Exponents of a product of powers of the columns (a number in front is dropped); None for anything else."""
        place = {c: i for i, c in enumerate(self.columns)}
        v = [Fraction(0)] * len(self.columns)
        for factor in Mul.make_args(monomial):
            if factor.is_number and not factor.free_symbols and factor not in place:
                continue
            base, power = factor.as_base_exp()
            if base not in place or not power.is_Rational:
                return None
            v[place[base]] += Fraction(int(power.p), int(power.q))
        return tuple(v)

    def monomial(self, v: Vector) -> Expr:
        """The product of powers that a vector stands for, pure numbers left out."""
        pairs = zip(self.columns[: self.sized], v, strict=False)
        return Mul(*(Pow(c, Rational(n.numerator, n.denominator)) for c, n in pairs if n))

    def term(self, v: Vector, coefficient: Coefficient) -> Expr:
        """A term of a polynomial as an expression."""
        number = Integer(coefficient[0]) + I * coefficient[1]
        powers = (
            Pow(c, Rational(n.numerator, n.denominator))
            for c, n in zip(self.columns, v, strict=True)
            if n
        )
        return Mul(number, *powers)


def base_and_power(generator: Expr) -> tuple[Expr, Fraction]:
    """sqrt(M) is M to the power 1/2; any other expression is itself."""
    base, power = generator.as_base_exp()
    if power.is_Rational:
        return base, Fraction(int(power.p), int(power.q))
    return generator, Fraction(1)


def space_of(
    polynomials: Iterable[ExactPolynomial],
    more: Iterable[Symbol] = (),
    of_order_one: Collection[Symbol] = (),
) -> Space:
    """The columns of several polynomials; numbers such as π and dimensionless adiabatic exponents come last."""
    made = list(polynomials)
    bases = {base_and_power(g)[0] for p in made for g in p.generators} | set(more)
    bases -= {omega}
    ordered = sorted(bases, key=str)
    whole = Space((omega, *ordered), len(ordered) + 1)
    pure = {c for c in ordered if not c.free_symbols or c in of_order_one} | _pure(whole, made)
    sized = [c for c in ordered if c not in pure]
    return Space((omega, *sized, *(c for c in ordered if c in pure)), len(sized) + 1)


def _pure(space: Space, polynomials: list[ExactPolynomial]) -> set[Expr]:
    """Adiabatic exponents, by their name, unless the relation adds them to ω, as it adds a rate."""
    named = [c for c in space.columns if isinstance(c, Symbol) and PURE_NUMBER.match(c.name)]
    if not named:
        return set()
    quotient = Quotient(_differences(space, polynomials))
    rate = {c: space.exponents(c / omega) for c in named}
    return {c for c, v in rate.items() if v is not None and any(quotient.reduced(v))}


def _differences(space: Space, polynomials: list[ExactPolynomial]) -> Iterable[Vector]:
    for p in polynomials:
        first, *rest = space.terms(p)
        yield from (minus(v, first) for v in rest)


class Wording:
    """Writes monomials as short groups in the symbols of the author: shorthands where they make it shorter."""

    def __init__(self, space: Space, claim: Claim, nature: Iterable[str]) -> None:
        self.space, self.claim = space, claim
        self.shorthands: list[tuple[Symbol, Vector]] = []
        for symbol in claim.definitions:
            meaning = claim.written_out(symbol)
            single = meaning != symbol and not meaning.has(Add)
            v = space.exponents(_one_monomial(meaning)) if single else None
            if v is not None and any(space.order(v)):
                self.shorthands.append((symbol, space.order(v)))
        fixed = set(nature)
        own = [NATURE if str(c) in fixed else ORDINARY for c in space.columns[: space.sized]]
        self.costs = [
            c + 0.001 * i for i, c in enumerate([*own, *(SHORTHAND for _ in self.shorthands)])
        ]

    def group(self, v: Vector, zeros: Iterable[Vector]) -> Expr:
        """The shortest group equal to `v` in size, where monomials `zeros` are of size one; ω is eliminated."""
        extra = len(self.shorthands)
        wide = [(*z, *[Fraction(0)] * extra) for z in zeros]
        for i, (_, meaning) in enumerate(self.shorthands):
            unit = [Fraction(int(i == j)) for j in range(extra)]
            wide.append((*(-x for x in meaning), *unit))
        found = primitive(shortest((*v, *[Fraction(0)] * extra), wide, self.costs, 0))
        powers = zip(self.symbols, found, strict=True)
        return Mul(*(Pow(s, Rational(x.numerator, x.denominator)) for s, x in powers if x))

    def vector(self, v: Vector, zeros: Iterable[Vector]) -> Vector:
        """The exponents of the group that `v` is written as."""
        return self.exponents(self.group(v, zeros)) or v

    def exponents(self, group: Expr) -> Vector | None:
        """The exponents of a group, its shorthands written out."""
        made = self.space.exponents(_one_monomial(self.claim.written_out(group)))
        return None if made is None else self.space.order(made)

    @property
    def symbols(self) -> tuple[Expr, ...]:
        return (*self.space.columns[: self.space.sized], *(s for s, _ in self.shorthands))


def _one_monomial(expr: Expr) -> Expr:
    """An expression with the roots of products drawn apart."""
    return powdenest(powsimp(expr, force=True).expand(power_base=True, force=True), force=True)


def number_of(group: Expr, values: Mapping[str, float], claim: Claim) -> float | None:
    """A group's value, when all its symbols are known."""
    meaning = claim.written_out(group)
    known = {s: values[s.name] for s in meaning.free_symbols if s.name in values}
    if set(known) != meaning.free_symbols:
        return None
    try:
        numbers = {s: Float(float(x)) for s, x in known.items()}
    except (TypeError, ValueError):
        return None  # an array, or a quantity with a unit
    found = meaning.xreplace(numbers).evalf()
    return float(abs(found)) if found.is_number and found.is_finite else None


def conditions(claim: Claim, space: Space, ratios: Iterable[Expr]) -> list[list[Vector]] | str:
    """What must be small, as alternatives of lists of monomials; or why it cannot be read."""
    alternatives: list[list[Vector]] = [[]]
    for ratio in ratios:
        cases = _cases(claim.written_out(ratio), space)
        if cases is None:
            return f"{ratio} is not a ratio of products or sums of the relation's symbols"
        alternatives = [[*a, *c] for a in alternatives for c in cases]
    return alternatives


def _cases(ratio: Expr, space: Space) -> list[list[Vector]] | None:
    """Every term above must be small beside one of those below: a list of cases."""
    tops, bottoms = [tuple([Fraction(0)] * space.sized)], [tuple([Fraction(0)] * space.sized)]
    factors: list[Expr] = []
    if isinstance(ratio, Add):
        parts = [_cases(t, space) for t in ratio.args]
        if any(p is None for p in parts):
            return None
        joined: list[list[Vector]] = [[]]
        for p in parts:
            joined = [[*a, *c] for a in joined for c in p or []]
        return joined
    factors = list(Mul.make_args(ratio))
    for factor in factors:
        base, power = factor.as_base_exp()
        if isinstance(base, Mul):
            base = expand(base)
        if not power.is_Rational:
            return None
        terms = []
        for t in Add.make_args(expand(base) if base.is_Add else base):
            v = space.exponents(_one_monomial(t))
            if v is None:
                return None
            terms.append(space.order(v))
        n = Fraction(int(power.p), int(power.q))
        if len(terms) == 1 or n > 0:
            tops = [plus(a, b, n) for a in tops for b in dict.fromkeys(terms)]
        else:
            bottoms = [plus(a, b, -n) for a in bottoms for b in dict.fromkeys(terms)]
    return [[minus(t, b) for t in tops] for b in bottoms]
