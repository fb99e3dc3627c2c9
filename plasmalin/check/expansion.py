"""A claim that gives ω or a wave number, or the square of it, as a sum, and the derived factors for what it gives."""

from __future__ import annotations

from dataclasses import dataclass

from sympy import Add, Expr, Symbol, expand

from ..declare.operators import omega
from ..errors import NonPolynomialError
from ..exact.polynomial import ExactPolynomial, polynomial
from .claim import Claim
from .derived import Derived
from .sizes import SEARCHED


@dataclass(frozen=True)
class Expansion:
    """The claimed sum, as an author writes its terms too, and the derived factors, both for what it gives.

    That is ω or a wave number, `main`, or the square of it.
    """

    claim: Claim
    derived: Derived
    main: Symbol
    value: Expr
    terms: tuple[Expr, ...]
    written: tuple[Expr, ...]
    factors: tuple[ExactPolynomial, ...]

    @property
    def symbols(self) -> set[Symbol]:
        held: set[Symbol] = {s for f in self.factors for g in f.generators for s in g.free_symbols}
        return held.union(self.value.free_symbols)


def expansion_of(claim: Claim, derived: Derived) -> Expansion | None:
    """The claim solved for ω or ω², else for a wave number or its square, its value expanded into terms."""
    if len(derived.polynomial) > SEARCHED:
        return None
    angles = {*derived.angles.symbols, *derived.angles.forms}
    waves = sorted(derived.wave_symbols - angles, key=str)
    return next((e for main in (omega, *waves) if (e := _solved(claim, derived, main))), None)


def _solved(claim: Claim, derived: Derived, main: Symbol) -> Expansion | None:
    for left, right in ((claim.left, claim.right), (claim.right, claim.left)):
        held, value = claim.written_out(left), claim.written_out(right)
        power = next((n for n in (1, 2) if not (held / main**n).has(main)), None)
        if power is None or value.has(main) or not held.has(main):
            continue
        made = expand(derived.rational(value * main**power / held))
        short = Add.make_args(expand(right * main**power / held))
        parts_of = (_in_power(p, main, power) for p, _ in derived.factors)
        factors = tuple(f for f in parts_of if f is not None)
        terms = Add.make_args(made)
        return Expansion(claim, derived, main, made, terms, short, factors) if factors else None
    return None


def _in_power(factor: ExactPolynomial, main: Symbol, power: int) -> ExactPolynomial | None:
    """The factor as a polynomial in a power of ω or of a wave number, where it is one."""
    if main == omega and power == 1:
        return factor
    try:
        solved = factor if main == omega else polynomial(factor.as_expr(), main)
    except NonPolynomialError:
        return None
    coefficients = solved.coefficients()
    if solved.degree < 1 or any(n % power for n in coefficients):
        return None
    return polynomial(Add(*(c * main ** (n // power) for n, c in coefficients.items())), main)
