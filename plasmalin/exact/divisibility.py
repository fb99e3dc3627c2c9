"""What may divide what: exact polynomials at one point of the prime field, a quick test before exact division."""

from __future__ import annotations

from collections.abc import Callable
from functools import lru_cache

from flint import nmod_poly

from .field import field
from .finite import Point
from .polynomial import ExactPolynomial


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
