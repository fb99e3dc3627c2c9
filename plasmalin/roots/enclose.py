"""Every root of a family at every point, with a proven radius.

The certified path that is right for every model: the exact coefficients at a point, exact square-free factors, and
proven discs that FLINT separates in ball arithmetic. Where a coefficient vanishes only at a point, the root stays in
its place with the status "zero" or "at infinity".
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ..exact.univariate import complex_roots
from .family import Exact, Family, Grid

CERTIFIED, ZERO, INFINITE, MASKED = "certified", "zero", "at infinity", "masked"
STATUS = (CERTIFIED, ZERO, INFINITE, MASKED)
DIGITS = 25


@dataclass(frozen=True)
class Enclosure:
    """Roots over a grid.

    Attributes
    ----------
    omega : ndarray of complex128, shape (points, roots), rad/s
    radius : ndarray of float64, shape (points, roots), rad/s
        The true root is not farther away.
    status : ndarray of str, shape (points, roots)
    method : str
    """

    omega: NDArray[np.complex128]
    radius: NDArray[np.float64]
    status: NDArray[Any]
    method: str

    @classmethod
    def empty(cls, points: int, roots: int, status: str = CERTIFIED, method: str = "") -> Enclosure:
        shape = (points, roots)
        return cls(np.zeros(shape, complex), np.zeros(shape), np.full(shape, status, "U16"), method)

    def reordered(self, order: NDArray[np.int64]) -> Enclosure:
        """The roots of every point in another order."""
        omega, radius, status = (
            np.take_along_axis(a, order, axis=1) for a in (self.omega, self.radius, self.status)
        )
        return Enclosure(omega, radius, status, self.method)


def enclose(family: Family, grid: Grid, *, points: int) -> Enclosure:
    """All roots of one family, `family.degree` at every point, unsorted."""
    method = "exact coefficients and proven discs at every point (FLINT ball arithmetic)"
    made = Enclosure.empty(points, family.degree, method=method)
    usable = np.ones(points, bool)
    for hi, _ in grid:
        usable &= np.isfinite(hi)
    made.omega[~usable], made.radius[~usable], made.status[~usable] = np.nan, np.inf, MASKED
    last: tuple[Any, ...] = ()
    for point in np.flatnonzero(usable):
        key = tuple(part[point] for pair in grid for part in pair)
        if point and key == last:
            for array in (made.omega, made.radius, made.status):
                array[point] = array[point - 1]
        else:
            _fill(made, int(point), family.at(grid, int(point)))
        last = key
    return made


def _fill(made: Enclosure, point: int, coefficients: list[Exact]) -> None:
    """The roots at one point; leading zeros are roots at infinity, trailing zeros roots at zero."""
    size = len(coefficients) - 1
    present = [n for n, c in enumerate(coefficients) if c[0] or c[1]]
    if not present:
        made.omega[point], made.radius[point], made.status[point] = np.nan, np.inf, MASKED
        return
    low, high = present[0], present[-1]
    made.status[point, :low] = ZERO
    place = low
    for re, im, radius, multiplicity in _roots(coefficients[low : high + 1]):
        omega = complex(float(re), float(im))
        rounding = abs(Fraction(omega.real) - re) + abs(Fraction(omega.imag) - im)
        made.omega[point, place : place + multiplicity] = omega
        made.radius[point, place : place + multiplicity] = _upward(rounding + radius)
        place += multiplicity
    made.omega[point, place:size] = complex(np.inf, 0.0)
    made.radius[point, place:size] = np.inf
    made.status[point, place:size] = INFINITE


def _roots(coefficients: list[Exact]) -> list[tuple[Fraction, Fraction, Fraction, int]]:
    return complex_roots(coefficients, DIGITS) if len(coefficients) > 1 else []


def _upward(x: Fraction) -> float:
    return float(np.nextafter(float(x), np.inf)) if x else 0.0


def merge(
    parts: Sequence[Enclosure],
    multiplicities: Sequence[int],
    *,
    points: int,
    zeros: int,
    degree: int,
) -> Enclosure:
    """The roots of all factors with their multiplicities and exact zeros, sorted by (Re, Im).

    Fewer than `degree` roots in all means that the missing ones are at infinity for these numbers.
    """
    columns = [p for p, m in zip(parts, multiplicities, strict=True) for _ in range(m)]
    columns.append(Enclosure.empty(points, zeros, ZERO))
    missing = degree - sum(c.omega.shape[1] for c in columns)
    if missing > 0:
        far = Enclosure.empty(points, missing, INFINITE)
        far.omega[:], far.radius[:] = complex(np.inf, 0.0), np.inf
        columns.append(far)
    omega, radius, status = (
        np.concatenate([getattr(c, name) for c in columns], axis=1)
        for name in ("omega", "radius", "status")
    )
    methods = dict.fromkeys(p.method for p in parts)
    whole = Enclosure(omega, radius, status, "; ".join(methods))
    return whole.reordered(np.lexsort((omega.imag, omega.real), axis=1))
