"""A random place: a prime, and modulo it a value for every variable of a ring, so that all known relations hold.

Unlike the one prime field of `field`, in which unknowns are looked for, the prime is drawn until all roots exist in it.
"""

from __future__ import annotations

from collections.abc import Sequence
from random import Random
from typing import TypeAlias

from flint import fmpz, nmod_poly

from .gaussian import Gaussian

Relation: TypeAlias = tuple[int, int, Gaussian, Gaussian]
"""Variable, power n, and the ratio that its n-th power equals."""

BITS = 60
"""A matrix of rank r seems to have less with a chance of about (degree of a minor) / 2**BITS."""
TRIES = 20_000


def random_place(relations: Sequence[Relation], variables: int) -> tuple[int, list[int]]:
    """A prime, and modulo it a square root of -1 and a value for every variable, so that the relations hold.

    Primes differ in the roots that they have, so both prime and point are drawn until all roots exist.

    Raises
    ------
    ArithmeticError
        When no such point is found.
    """
    random = Random(7)
    for _ in range(TRIES):
        prime = _prime(random)
        point = _point(relations, variables, prime, random)
        if point:
            return prime, point
    raise ArithmeticError("no point was found at which the relations among the generators hold")


def in_main(p: Gaussian, point: Sequence[int], prime: int) -> list[int]:
    """The coefficients in variable 0, lowest power first, every other variable at its value."""
    unit, _, *x = point
    highest = max((int(part.degrees()[0]) for part in (p.re, p.im) if part), default=0)
    made = [0] * (1 + highest)
    for part, factor in ((p.re, 1), (p.im, unit)):
        for exponents, c in part.terms():
            value = int(c) * factor
            for base, n in zip(x, exponents[1:], strict=True):
                if n:
                    value = value * pow(base, int(n), prime) % prime
            made[int(exponents[0])] = (made[int(exponents[0])] + value) % prime
    return made


def _prime(random: Random) -> int:
    """A prime 1 above a multiple of 4, so that -1 has a square root."""
    while True:
        candidate = 4 * random.randrange(2 ** (BITS - 2), 2 ** (BITS - 1)) + 1
        if fmpz(candidate).is_prime():
            return candidate


def _point(
    relations: Sequence[Relation], variables: int, prime: int, random: Random
) -> list[int] | None:
    """A square root of -1 and a value for every variable; None when a root does not exist."""
    point = [_root(prime - 1, 2, prime) or 0]
    point += [random.randrange(1, prime) for _ in range(variables)]
    waiting = {i: (n, top, bottom) for i, n, top, bottom in relations}
    while waiting:
        i = next(
            i
            for i, (_, *parts) in waiting.items()
            if not any(p.holds(j) for p in parts for j in waiting)
        )
        n, top, bottom = waiting.pop(i)
        divisor = value_at(bottom, point, prime)
        root = (
            _root(value_at(top, point, prime) * pow(divisor, -1, prime), n, prime)
            if divisor
            else None
        )
        if root is None:
            return None
        point[i + 1] = root
    return point


def value_at(p: Gaussian, point: Sequence[int], prime: int) -> int:
    """A polynomial at a place."""
    unit, *x = point
    return (int(p.re(*x)) + unit * int(p.im(*x))) % prime


def _root(value: int, n: int, prime: int) -> int | None:
    roots = nmod_poly([-value % prime, *[0] * (n - 1), 1], prime).roots()
    return min((int(r) for r, _ in roots), default=None)
