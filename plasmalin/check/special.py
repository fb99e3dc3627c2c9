"""Values of parameters for which a claim is right: γ_e = 3, T_i = 0, T_i = T_e.

Candidates come from remainders of the derived relation by the claim at prime numbers put for every other symbol, so that
a value that equals another parameter shows by its prime; each is then proved by exact algebra with the symbols themselves.
"""

from __future__ import annotations

import time
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from itertools import product
from typing import Any

from sympy import (
    QQ,
    QQ_I,
    Add,
    Expr,
    Integer,
    Mul,
    Poly,
    Rational,
    Symbol,
    factor_list,
    im,
    prime,
    re,
)
from sympy import I as IMAGINARY
from sympy.polys.matrices import DomainMatrix

from ..declare.constants import CODATA
from ..declare.operators import omega
from ..errors import PlasmalinError
from ..exact.polynomial import ExactPolynomial
from .claim import Claim
from .compare import Match, compare, covered, still_factors
from .derived import Derived
from .monomials import MASS, PURE_NUMBER, base_and_power
from .sizes import SEARCHED

Values = dict[Symbol, Expr]

MOST_VALUES = 4
MOST_UNKNOWNS = 12
FIRST_PRIME = 30
LARGEST_NUMBER = 100
SAMPLES = 8
NATURE = ("eps0", "epsilon0", "mu0", "me", "c", "e", "kB")
"""Constants of nature by other names: they may be 1 in an author's units, nothing else."""


def special_values(claim: Claim, derived: Derived, budget: float = 3.0) -> list[Values]:
    """The fewest parameters, and their values, that make a claim right.

    Parameters
    ----------
    claim : Claim
    derived : Derived
    budget : float, s
        Time after which the search ends with what it has.

    Returns
    -------
    list of dict of Symbol to Expr
        Each proved, the simplest first; a value is a number or another parameter of its kind. Empty when
        the claim is right for no such values. Values that change the number of modes are no values but limits.
    """
    polynomial, _ = derived.numerator(claim.residual)
    long = max(map(len, (polynomial, derived.polynomial))) > SEARCHED
    if polynomial.degree < 1 or still_factors(claim) or long:
        return []
    end = time.process_time() + budget
    unknown = _unknown(polynomial, derived)
    found: list[Values] = []
    for values in sorted(_candidates(polynomial, derived, unknown, end), key=_simplicity):
        if any(f.items() <= values.items() for f in found) or time.process_time() > end:
            continue
        if holds_under(claim, derived, values) is not None and _same_degree(derived, values):
            found.append(values)
    return [f for f in found if len(f) == len(found[0])]


def holds_under(claim: Claim, derived: Derived, values: Mapping[Symbol, Any]) -> Match | None:
    """How the claim agrees with the derived relation at stated values, or None where it does not.

    The values are put into both: an author may write a parameter and state its value beside.
    """
    try:
        special = derived.substituted(dict(values))
        return compare(claim.mapped(lambda e: e.xreplace(dict(values))), special)
    except (PlasmalinError, ArithmeticError):
        return None


def _same_degree(derived: Derived, values: Values) -> bool:
    """Whether no mode goes to infinity at these values."""
    made = derived.polynomial.substitute({s: derived.rational(v) for s, v in values.items()})
    return made.degree == derived.polynomial.degree


def _unknown(polynomial: ExactPolynomial, derived: Derived) -> list[Symbol]:
    """Parameters of the derived relation that the claim does not hold; no wave numbers, no constants of nature."""
    held = {s for g in polynomial.generators for s in g.free_symbols}
    free = derived.symbols - held - derived.wave_symbols
    plain = [s for s in free if s.name not in CODATA and _is_plain(s, derived.polynomial)]
    return sorted(plain, key=lambda s: s.name)


def _is_plain(symbol: Symbol, polynomial: ExactPolynomial) -> bool:
    """Whether it enters by its whole powers only, not by roots or within functions."""
    return all(g == symbol for g in polynomial.generators if g.has(symbol))


def _simplicity(values: Values) -> tuple[Any, ...]:
    width = sum(len(v.free_symbols) for v in values.values())
    size = sum(abs(v) for v in values.values() if v.is_Rational)
    return len(values), width, size, sorted(s.name for s in values), str(values)


# Candidates --------------------------------------------------------------------------------------


@dataclass(frozen=True)
class Sample:
    """Prime numbers put for all symbols but the unknown ones; wave numbers have others in every sample."""

    numbers: Mapping[Expr, Integer]
    names: Mapping[int, Expr]

    def named(self, value: Expr) -> Expr:
        """A number, or the parameter that it stands for."""
        return self.names.get(int(value), value) if value.is_Integer else value


def _candidates(
    polynomial: ExactPolynomial, derived: Derived, unknown: Sequence[Symbol], end: float
) -> Iterator[Values]:
    """Values for which the remainder of a derived factor by each part of the claim vanishes at the samples."""
    if not 0 < len(unknown) <= MOST_UNKNOWNS:
        return
    parts = [p for p, _ in polynomial.factor()[1] if not covered(p, derived.polynomial)]
    factors = [f for f, _ in derived.factors]
    polynomials = [*parts, *factors]
    samples = [_sample(polynomials, unknown, derived.wave_symbols, i) for i in range(SAMPLES)]
    systems = [
        [
            [e for s in samples for e in _system(p, f, unknown, s)]
            for f in factors
            if f.degree >= p.degree
        ]
        for p in parts
    ]
    for choice in product(*systems):
        equations = [e for system in choice for e in system]
        for numbers in _solutions(equations, unknown, samples[0], end):
            values = _named(numbers, samples[0])
            if values:
                yield values


def _sample(
    polynomials: Sequence[ExactPolynomial],
    unknown: Sequence[Symbol],
    waves: frozenset[Symbol],
    turn: int,
) -> Sample:
    """Primes, to the powers that make roots of the symbols whole."""
    generators = sorted({g for p in polynomials for g in p.generators}, key=str)
    roots: dict[Expr, int] = {}
    for g in generators:
        base, power = base_and_power(g)
        if base not in unknown:
            roots[base] = max(roots.get(base, 1), power.denominator)
    primes = {b: prime(FIRST_PRIME + 3 * i) for i, b in enumerate(roots)}
    turned = {
        b: p if b not in waves else prime(FIRST_PRIME + 300 * (turn + 1) + p % 97)
        for b, p in primes.items()
    }
    numbers = {b: Integer(p) ** roots[b] for b, p in turned.items()}
    names = {int(numbers[b]): b for b in roots if b not in waves}
    return Sample(numbers, names)


def _system(
    part: ExactPolynomial, factor: ExactPolynomial, unknown: Sequence[Symbol], sample: Sample
) -> list[Poly]:
    """The remainder of the factor by the part, as equations for the unknown parameters."""
    real = part.is_real and factor.is_real
    domain = (QQ if real else QQ_I)[tuple(unknown)]
    a, b = (_at(p, sample, domain) for p in (factor, part))
    rest = [c for c in a.rem(b).all_coeffs() if c != 0]
    if real:
        return [Poly(c, *unknown, domain=QQ) for c in rest]
    pieces = [_piece(c, unknown, take) for c in rest for take in (re, im)]
    return [Poly(p, *unknown, domain=QQ) for p in pieces if p != 0]


def _piece(expr: Expr, unknown: Sequence[Symbol], take: Any) -> Expr:
    """The real or imaginary part of a polynomial in real symbols."""
    terms = Poly(expr, *unknown, domain=QQ_I).terms()
    pieces = (take(c) * Mul(*(s**n for s, n in zip(unknown, e, strict=True))) for e, c in terms)
    return Add(*pieces)


def _at(polynomial: ExactPolynomial, sample: Sample, domain: Any) -> Poly:
    """A polynomial in ω with numbers for all but the unknown parameters."""
    images = [_image(g, sample) for g in polynomial.generators]
    made: dict[tuple[int, ...], list[Expr]] = {}
    for e, a, b in polynomial.terms():
        powers = (x**n for x, n in zip(images, e[1:], strict=True) if n)
        made.setdefault(e[:1], []).append((Integer(a) + IMAGINARY * b) * Mul(*powers))
    plain = {k: domain.from_sympy(Add(*v).expand()) for k, v in made.items()}
    return Poly.from_dict(plain, omega, domain=domain)


def _image(generator: Expr, sample: Sample) -> Expr:
    base, power = base_and_power(generator)
    number = sample.numbers.get(base)
    return generator if number is None else number ** Rational(power.numerator, power.denominator)


def _solutions(
    equations: Sequence[Poly], unknown: Sequence[Symbol], sample: Sample, end: float
) -> Iterator[dict[Symbol, Expr]]:
    """Triangular solutions: one factor of the shortest equation at a time, with backtracking."""
    stack: list[tuple[list[Poly], dict[Symbol, Expr]]] = [(_echelon(equations, unknown), {})]
    seen: set[frozenset[Any]] = set()
    while stack and time.process_time() < end:
        left, numbers = stack.pop(0)
        key = frozenset(numbers.items())
        if key in seen or any(e.is_ground for e in left):
            continue
        seen.add(key)
        if not left:
            yield numbers
            continue
        if len(numbers) == MOST_VALUES:
            continue
        shortest = min(left, key=lambda e: (len(e.free_symbols), len(e.terms()), e.total_degree()))
        for symbol, value in _choices(shortest, sample):
            if not _possible(symbol, sample.named(value)):
                continue
            made = _echelon([_put(e, symbol, value) for e in left], unknown)
            known = {s: v.xreplace({symbol: value}) for s, v in numbers.items()}
            stack.append((made, {**known, symbol: value}))


def _echelon(equations: Sequence[Poly], unknown: Sequence[Symbol]) -> list[Poly]:
    """The same equations with as many monomials eliminated as there are equations, high degrees first."""
    kept = [e for e in equations if not e.is_zero]
    monomials = sorted({m for e in kept for m in e.monoms()}, key=lambda m: (-sum(m), m))
    if not kept or any(e.is_ground for e in kept):
        return kept[:1] if not kept else [e for e in kept if e.is_ground]
    rows = [
        [QQ.convert(d.get(m, 0)) for m in monomials] for d in (e.as_dict(native=True) for e in kept)
    ]
    reduced, pivots = DomainMatrix(rows, (len(rows), len(monomials)), QQ).rref()
    made = reduced.to_list()[: len(pivots)]
    dicts = ({m: c for m, c in zip(monomials, row, strict=True) if c} for row in made)
    return [Poly.from_dict(d, *unknown, domain=QQ) for d in dicts]


def _put(equation: Poly, symbol: Symbol, value: Expr) -> Poly:
    made = equation.as_expr().xreplace({symbol: value}).expand()
    return Poly(made, *equation.gens, domain=QQ)


def _choices(equation: Poly, sample: Sample) -> Iterator[tuple[Symbol, Expr]]:
    """What one parameter may be for an equation to lose a factor: a number, or another parameter's value."""
    for factor, _ in factor_list(equation.as_expr())[1]:
        symbols = sorted(factor.free_symbols, key=lambda s: s.name)
        for s in symbols:
            poly = Poly(factor, s)
            if len(symbols) > 1:
                yield from ((s, v) for v in _usual(s, sample))
            if poly.degree() == 1 and len(symbols) < 3:
                value = -poly.nth(0) / poly.nth(1)
                if value.is_number or value.is_Symbol:
                    yield s, value


def _usual(symbol: Symbol, sample: Sample) -> Iterator[Expr]:
    """Values that authors give parameters: 0, 1, adiabatic exponents, another parameter of the same kind."""
    yield from map(Integer, (0, 1))
    if PURE_NUMBER.match(symbol.name):
        yield from (Integer(3), Rational(5, 3), Integer(2))
    else:
        yield from (Integer(n) for n, s in sample.names.items() if _possible(symbol, s))


def _named(numbers: Mapping[Symbol, Expr], sample: Sample) -> Values | None:
    """The values with names for the primes among them, when all are possible."""
    known = {s: sample.named(v) for s, v in numbers.items()}
    return known if all(_possible(s, v) for s, v in known.items()) else None


def _possible(symbol: Symbol, value: Expr) -> bool:
    """Whether a parameter can have a value: no mass or adiabatic exponent of 0, no other kind of parameter put for it."""
    if value.is_Symbol:
        return bool(value.name[0] == symbol.name[0]) and value.name not in (*NATURE, *CODATA)
    if not value.is_Rational or (symbol.is_positive and value < 0):
        return False
    if symbol.name in NATURE:
        return bool(value == 1)
    if value != 0:
        return bool(max(value.p, value.q) < LARGEST_NUMBER)
    return not MASS.match(symbol.name) and not PURE_NUMBER.match(symbol.name)
