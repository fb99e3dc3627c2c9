"""The exact way for single points: exact coefficients, square-free parts, proven discs by FLINT."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from ..exact.univariate import Root, complex_roots
from .family import Exact, Family, Grid
from .matrixfamily import MatrixFamily
from .solved import Solved, Status, listed

DIGITS = 25


def solved_exactly(family: Family | MatrixFamily, grid: Grid, points: NDArray[np.int64]) -> Solved:
    """The roots at some points, sorted; neighbors with the same values are solved once."""
    made = Solved.empty(len(points), family.degree, exact=len(points))
    made.mask(slice(None))
    last: tuple[object, ...] | None = None
    for row, point in enumerate(points.tolist()):
        key = tuple(part[point] for pair in grid for part in pair)
        if key == last:
            made.put(np.array([row]), made.at(slice(row - 1, row)))
        else:
            _fill(made, row, family.at(grid, point))
        last = key
    return made


def _fill(made: Solved, row: int, coefficients: list[Exact]) -> None:
    """Leading zeros are roots at infinity, trailing zeros roots at zero; all zeros leave the point masked."""
    present = [n for n, c in enumerate(coefficients) if c[0] or c[1]]
    if not present:
        return
    low, high = present[0], present[-1]
    try:
        roots = complex_roots(coefficients[low : high + 1], DIGITS) if high > low else []
    except ArithmeticError:
        made.state[row] = Status.NOT_CERTIFIED
        return
    rows = [(0j, 0.0, 0.0, Status.ZERO)] * low
    like_real = not (any(c[0] for c in coefficients) and any(c[1] for c in coefficients))
    for root in roots:
        rows += [_rounded(root, like_real)] * root[3]
    rows.sort(key=lambda r: (r[0].real, r[0].imag))
    rows += [(complex(np.inf, 0.0), np.inf, np.inf, Status.INFINITE)] * (
        len(coefficients) - 1 - high
    )
    for array, column in zip(listed(made.arrays()), zip(*rows, strict=True), strict=True):
        np.copyto(array[row], column)


def _rounded(root: Root, like_real: bool) -> tuple[complex, float, float, Status]:
    """As doubles. Of real coefficients an imaginary part of zero is proven; of others it is a number like any other."""
    re, im, radius, _ = root
    omega = complex(_double(re), _double(im))
    if not np.isfinite(omega):
        return omega, np.inf, np.inf, Status.NOT_CERTIFIED
    re_off, im_off = abs(Fraction(omega.real) - re), abs(Fraction(omega.imag) - im)
    growth = Fraction(0) if like_real and not im else im_off + radius
    return omega, _upward(re_off + im_off + radius), _upward(growth), Status.CERTIFIED


def _double(x: Fraction) -> float:
    """Rounded to nearest; infinite beyond the range of doubles."""
    try:
        return float(x)
    except OverflowError:
        return np.inf if x > 0 else -np.inf


def _upward(x: Fraction) -> float:
    return float(np.nextafter(_double(x), np.inf)) if x else 0.0
