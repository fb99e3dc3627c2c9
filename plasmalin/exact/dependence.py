"""Dependent rows and columns of a singular matrix, found at a random point of a random prime field."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from random import Random
from typing import TypeAlias

from flint import fmpz, nmod_mat, nmod_poly

from .gaussian import Gaussian

Relation: TypeAlias = tuple[int, int, Gaussian, Gaussian]

# A matrix of rank r seems to have less with a chance of about (degree of a minor) / 2**BITS.
BITS = 60
TRIES = 20_000


def field_image(
    table: Mapping[tuple[int, int], Gaussian], size: int, relations: Sequence[Relation]
) -> nmod_mat:
    """The matrix at a random point where every relation among the generators holds."""
    variables = len(next(iter(table.values())).re.degrees()) if table else 0
    prime, point = random_place(relations, variables)
    made = nmod_mat(size, size, prime)
    for (i, j), p in table.items():
        made[i, j] = _value(p, point, prime)
    return made


def random_place(relations: Sequence[Relation], variables: int) -> tuple[int, list[int]]:
    """A prime, and modulo it a square root of -1 and a value for every variable, so that the relations hold.

    Primes differ in the roots that they have, so both prime and point are drawn until all roots exist.
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


def null_support(matrix: nmod_mat) -> tuple[int, ...]:
    """The columns of the shortest null vector of the reduced echelon form.

    None of these vectors holds the columns of a shorter dependence.
    """
    reduced, rank = matrix.rref()
    filled = [[j for j in range(matrix.ncols()) if int(reduced[i, j])] for i in range(rank)]
    pivots = [row[0] for row in filled]
    free = (j for j in range(matrix.ncols()) if j not in pivots)
    supports = [tuple(sorted([j, *(row[0] for row in filled if j in row)])) for j in free]
    return min(supports, key=len, default=())


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
        divisor = _value(bottom, point, prime)
        root = (
            _root(_value(top, point, prime) * pow(divisor, -1, prime), n, prime)
            if divisor
            else None
        )
        if root is None:
            return None
        point[i + 1] = root
    return point


def _value(p: Gaussian, point: Sequence[int], prime: int) -> int:
    unit, *x = point
    return (int(p.re(*x)) + unit * int(p.im(*x))) % prime


def _root(value: int, n: int, prime: int) -> int | None:
    roots = nmod_poly([-value % prime, *[0] * (n - 1), 1], prime).roots()
    return min((int(r) for r, _ in roots), default=None)
