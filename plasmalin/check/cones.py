"""Orderings by linear programming: weights of symbols, the cones that conditions leave them, the groups they need.

A symbol of size ε**w has the weight w, a monomial with exponents v the weight w·v; it is small where w·v > 0. Every
answer of the numerical solver is turned into fractions and proved by exact arithmetic, or not used.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from fractions import Fraction
from math import gcd, lcm
from typing import TypeAlias

import numpy as np
from scipy.optimize import linprog

Vector: TypeAlias = tuple[Fraction, ...]

LARGEST_DENOMINATOR = 720


def minus(a: Vector, b: Vector) -> Vector:
    return tuple(x - y for x, y in zip(a, b, strict=True))


def plus(a: Vector, b: Vector, times: Fraction | int = 1) -> Vector:
    return tuple(x + times * y for x, y in zip(a, b, strict=True))


def times(a: Vector, b: Vector) -> Fraction:
    """The weight of a monomial."""
    return sum((x * y for x, y in zip(a, b, strict=True) if x and y), Fraction(0))


def primitive(v: Vector) -> Vector:
    """The smallest multiple with whole exponents, when the vector has fractions."""
    scale = lcm(*(x.denominator for x in v)) if v else 1
    return tuple(x * scale for x in v)


def smallest(v: Vector) -> Vector:
    """The vector of its direction with the smallest whole exponents."""
    whole = primitive(v)
    common = gcd(*(int(x) for x in whole))
    return tuple(x / common for x in whole) if common else whole


class Quotient:
    """Vectors modulo those of weight zero: each has one form in which the pivots are zero."""

    def __init__(self, zeros: Iterable[Vector]) -> None:
        self.basis: list[tuple[int, Vector]] = []
        for v in zeros:
            self._add(v)

    def reduced(self, v: Vector) -> Vector:
        for pivot, row in self.basis:
            if v[pivot]:
                v = plus(v, row, -v[pivot])
        return v

    def _add(self, v: Vector) -> None:
        v = self.reduced(v)
        pivot = next((i for i, x in enumerate(v) if x), None)
        if pivot is None:
            return
        row = tuple(x / v[pivot] for x in v)
        self.basis = [(p, plus(r, row, -r[pivot])) for p, r in self.basis]
        self.basis.append((pivot, row))


def weights(
    width: int,
    small: Sequence[Vector],
    zero: Sequence[Vector] = (),
    weak: Sequence[Vector] = (),
) -> Vector | None:
    """The smallest weights with at least 1 for every vector of `small`, 0 for `zero` and at least 0 for `weak`."""
    if any(not any(v) for v in small):
        return None
    cost = np.ones(2 * width)
    rows = [*small, *weak]
    upper = -_split(rows, width) if rows else None
    equal = _split(zero, width) if zero else None
    found = linprog(
        cost,
        A_ub=upper,
        b_ub=None if upper is None else -np.array([1.0] * len(small) + [0.0] * len(weak)),
        A_eq=equal,
        b_eq=None if equal is None else np.zeros(len(zero)),
        bounds=(0, None),
        method="highs",
    )
    if not found.success or found.x is None:
        return None
    w = _fractions(found.x[:width] - found.x[width:])
    exact = all(times(w, v) > 0 for v in small) and all(times(w, v) >= 0 for v in weak)
    exact = exact and not any(times(w, v) for v in zero)
    return w if exact else None


def multipliers(v: Vector, rays: Sequence[Vector], weak: Sequence[Vector] = ()) -> Vector | None:
    """Non-negative numbers by which `rays` and then `weak` add up to `v`, those of `rays` as large as they can be.

    Their existence proves that `v` is small wherever `rays` are and `weak` are not large.
    """
    columns = [*rays, *weak]
    if not columns:
        return None if any(v) else ()
    matrix = np.array(columns, dtype=float).T
    cost = np.array([-1.0] * len(rays) + [0.0] * len(weak))
    limit = 4.0 * (1 + max(abs(float(x)) for x in v))
    found = linprog(
        cost, A_eq=matrix, b_eq=np.array(v, dtype=float), bounds=(0, limit), method="highs"
    )
    if not found.success or found.x is None:
        return None
    numbers = _fractions(found.x)
    total = tuple(Fraction(0) for _ in v)
    for n, column in zip(numbers, columns, strict=True):
        total = plus(total, column, n) if n else total
    return numbers if total == v and all(n >= 0 for n in numbers) else None


def implied(v: Vector, rays: Sequence[Vector], weak: Sequence[Vector] = ()) -> bool:
    """Whether `v` is small wherever all of `rays` are small and none of `weak` is large."""
    found = multipliers(v, rays, weak)
    return found is not None and any(found[: len(rays)])


def extreme(vectors: Iterable[Vector]) -> list[Vector]:
    """The fewest of the vectors, in the order given, of which the others are products of powers."""
    known = list(dict.fromkeys(vectors))
    seen = set(known)
    rays: list[Vector] = []
    for v in known:
        if any(minus(v, r) in seen for r in rays) or implied(v, rays):
            continue
        rays.append(v)
    kept = list(rays)
    for r in reversed(rays):
        others = [x for x in kept if x != r]
        if others and implied(r, others):
            kept = others
    return kept


def shortest(
    v: Vector, zeros: Sequence[Vector], costs: Sequence[float], gone: int | None
) -> Vector:
    """The member of `v` modulo `zeros` with the smallest exponents, the one at `gone` zero where it can be."""
    if not zeros:
        return v
    width, n = len(v), len(zeros)
    basis = np.array(zeros, dtype=float).T
    # v + basis m = a - b with a, b >= 0 of the smallest cost
    equal = np.hstack([basis, -np.eye(width), np.eye(width)])
    bounds: list[tuple[float | None, float | None]] = [(None, None)] * n + [(0, None)] * (2 * width)
    if gone is not None:
        bounds[n + gone] = bounds[n + width + gone] = (0, 0)
    cost = np.concatenate([np.zeros(n), costs, np.array(costs) * 1.0001])
    found = linprog(cost, A_eq=equal, b_eq=-np.array(v, dtype=float), bounds=bounds, method="highs")
    if not found.success or found.x is None:
        return shortest(v, zeros, costs, None) if gone is not None else v
    made = v
    for number, z in zip(_fractions(found.x[:n]), zeros, strict=True):
        made = plus(made, z, number) if number else made
    return made


def _split(vectors: Sequence[Vector], width: int) -> np.ndarray:
    made = np.array(vectors, dtype=float).reshape(len(vectors), width)
    return np.hstack([made, -made])


def _fractions(numbers: np.ndarray) -> Vector:
    return tuple(Fraction(float(x)).limit_denominator(LARGEST_DENOMINATOR) for x in numbers)
