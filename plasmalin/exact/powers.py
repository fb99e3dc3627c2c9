"""Powers taken apart: every generator is ``base**(unit/root)``.

``M**(3/2)`` is the third power of the generator ``M**(1/2)``; ``n**(gamma + 1)`` is ``n`` times the generator
``n**gamma``; ``exp(2*a)`` is the square of ``exp(a)``. Base and unit name the generator's family; its root is the least
common denominator of the powers that occur.
"""

from collections.abc import Iterator
from fractions import Fraction
from functools import lru_cache
from typing import TypeAlias

import sympy as sp

from .rational import exact_rational

Family: TypeAlias = tuple[sp.Expr, sp.Expr]

# Only prime factors below this are split off the base of a root.
SMALL_PRIMES = 2**15

# Roots beyond this are generators of their own, not powers of a root.
LARGEST_ROOT = 64


@lru_cache(maxsize=4096)
def split_power(expr: sp.Expr) -> tuple[tuple[Family, Fraction], ...]:
    """The families of an opaque expression and the power of each; compound bases are not opened."""
    base, exponent = expr.as_base_exp() if isinstance(expr, sp.Pow | sp.exp) else (expr, sp.S.One)
    return tuple(
        ((piece, unit), sign * power)
        for unit, power in _units(exponent)
        for piece, sign in (_primes(base) if unit == 1 else ((base, 1),))
    )


def is_plain(base: sp.Expr) -> bool:
    """Whether a base is itself a generator, rather than a sum, product or number of others."""
    return not isinstance(
        base, sp.Add | sp.Mul | sp.Pow | sp.Number | sp.core.numbers.ImaginaryUnit
    )


def generator(family: Family, root: int) -> sp.Expr:
    base, unit = family
    return sp.Pow(base, unit / sp.Integer(root))


def _units(exponent: sp.Expr) -> Iterator[tuple[sp.Expr, Fraction]]:
    for term in sp.Add.make_args(sp.expand(exponent)):
        power, unit = term.as_coeff_Mul()
        if power.is_Rational or power.is_Float:
            yield from _rational_units(unit, exact_rational(power))
        else:
            yield term, Fraction(1)


def _rational_units(unit: sp.Expr, power: Fraction) -> Iterator[tuple[sp.Expr, Fraction]]:
    """A power with a large denominator (a double such as 1.4) is its whole part and a unit of its own."""
    if power.denominator <= LARGEST_ROOT:
        yield unit, power
        return
    whole = power.numerator // power.denominator
    if whole:
        yield unit, Fraction(whole)
    rest = power - whole
    yield unit * sp.Rational(rest.numerator, rest.denominator), Fraction(1)


def _primes(base: sp.Expr) -> Iterator[tuple[sp.Expr, int]]:
    if not base.is_Rational or base.p < 0:
        yield base, 1
        return
    for number, sign in ((base.p, 1), (base.q, -1)):
        for piece, power in _split_off(int(number)):
            yield sp.Integer(piece), sign * power


def _split_off(number: int) -> Iterator[tuple[int, int]]:
    """The small primes of a positive number with their powers, and what is left.

    Factoring routines with a limit find larger primes now and then; the same number must always come apart the same.
    """
    for prime in _small_primes():
        power = 0
        while number % prime == 0:
            number, power = number // prime, power + 1
        if power:
            yield prime, power
        if number == 1:
            return
    yield number, 1


@lru_cache(maxsize=1)
def _small_primes() -> tuple[int, ...]:
    return tuple(sp.primerange(SMALL_PRIMES))
