"""Scalings: symbols as powers of a small ε, and the order in ε of expressions."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from fractions import Fraction
from itertools import permutations, product

from sympy import (
    Add,
    Expr,
    I,
    Mul,
    Pow,
    Symbol,
    binomial,
)

from ..declare.constants import CODATA
from ..declare.notation import paper
from ..declare.operators import omega
from .derived import Derived
from .monomials import ELECTRON_MASS, PURE_NUMBER

Weights = dict[Expr, Fraction]

TAYLOR = 4
SCALES = (1, 4)


def paths(
    terms: Sequence[Expr],
    symbols: set[Symbol],
    derived: Derived,
    ratios: Sequence[Expr] | None,
    main: Symbol = omega,
) -> Iterator[Weights]:
    """Powers of ε for symbols but the one that is solved for, under which the claim's terms are of different order."""
    if ratios is None:
        found = _single(terms, symbols - {main}, derived)
    else:
        found = _stated(ratios, derived, main)
    for weights in found:
        if not terms or len({order(t, weights) for t in terms}) > 1:
            yield weights


def _single(terms: Sequence[Expr], symbols: set[Symbol], derived: Derived) -> Iterator[Weights]:
    """One symbol small or large: wave numbers, what only corrections hold, then two such, then any other."""
    free = [
        s
        for s in symbols
        if not PURE_NUMBER.match(s.name) and (s.name not in CODATA or s.name in ELECTRON_MASS)
    ]
    free.sort(key=lambda s: (s not in derived.wave_symbols, s.name))
    real = [t.free_symbols for t in terms if not is_imaginary(t)]
    usual = [
        s
        for s in free
        if s in derived.wave_symbols
        or s.name in ELECTRON_MASS
        or (real and not any(s in held for held in real))
    ]
    signs = (Fraction(1), Fraction(-1))
    for s, sign in product(usual, signs):
        yield {s: sign}
    for (a, b), x, y in product(permutations(usual, 2), signs, signs):
        yield {a: x, b: y * SCALES[1]}
    for s, sign in product(free, signs):
        if s not in usual:
            yield {s: sign}


def _stated(ratios: Sequence[Expr], derived: Derived, main: Symbol) -> Iterator[Weights]:
    """For every ratio one of its symbols scales; several ratios are of one size, or one is smaller still."""
    choices = [_carriers(r, derived, main) for r in ratios]
    scales = dict.fromkeys(
        p for base in ((1,) * len(ratios), *_mixed(len(ratios))) for p in permutations(base)
    )
    for scale, chosen in product(scales, product(*choices)):
        made: Weights = {}
        for size, (symbol, power) in zip(scale, chosen, strict=True):
            made[symbol] = made.get(symbol, Fraction(0)) + size / power
        yield made


def _mixed(count: int) -> Iterator[tuple[int, ...]]:
    for i in range(1, count):
        yield (SCALES[0],) * i + (SCALES[1],) * (count - i)


def _carriers(ratio: Expr, derived: Derived, main: Symbol) -> list[tuple[Symbol, Fraction]]:
    """The symbols of a ratio with their powers, wave numbers and ω first, then those above the line."""
    symbols = sorted(ratio.free_symbols - {main}, key=lambda s: s.name)
    powers = {s: order(ratio, {s: Fraction(1)}) for s in symbols}
    made = [(s, n) for s, n in powers.items() if n]
    waves = {omega, *derived.wave_symbols}
    return sorted(made, key=lambda m: (m[0] not in waves, m[1] < 0))


def order(expr: Expr, weights: Weights) -> Fraction:
    """The lowest power of ε in an expression whose leading terms do not cancel."""
    if expr in weights:
        return weights[expr]
    if isinstance(expr, Add):
        return min(order(a, weights) for a in expr.args)
    if isinstance(expr, Mul):
        return sum((order(a, weights) for a in expr.args), Fraction(0))
    if isinstance(expr, Pow) and expr.exp.is_Rational:
        return order(expr.base, weights) * Fraction(int(expr.exp.p), int(expr.exp.q))
    return Fraction(0)


def even(expr: Expr, weights: Weights) -> Expr:
    """Roots of sums whose terms have different orders, expanded (binomial series)."""
    if not expr.args:
        return expr
    made = expr.func(*(even(a, weights) for a in expr.args))
    if not (isinstance(made, Pow) and isinstance(made.base, Add)) or made.exp.is_Integer:
        return made
    low = order(made.base, weights)
    lead = Add(*(t for t in made.base.args if order(t, weights) == low))
    rest = made.base - lead
    return Add(*(binomial(made.exp, j) * lead ** (made.exp - j) * rest**j for j in range(TAYLOR)))


def is_imaginary(term: Expr) -> bool:
    """Whether a term of a sum in real symbols is imaginary."""
    return bool(term.has(I))


def scaled(weights: Weights) -> str:
    """A scaling in words."""
    return ", ".join(f"{paper(s)} ~ ε^({n})" for s, n in weights.items())
