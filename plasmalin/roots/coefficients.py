"""The coefficients of one polynomial per point, in high and low part, with a bound on their size and error."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from .doubledouble import Array, Pair
from .path import Columns
from .scaling import Scaled
from .sums import Runs


@dataclass(frozen=True)
class Coefficients:
    """One polynomial of the unknown per point, lowest power first.

    Attributes
    ----------
    high, low : ndarray, shape (degree + 1, points)
        Real parts: their sum is the coefficient.
    high_imag, low_imag : ndarray or None
        Imaginary parts, None where all are real.
    size : ndarray, shape (degree + 1, points)
        Upper bounds, the sums of the sizes of all terms.
    noise : int
        Every coefficient is known to noise * UNIT^2 * size.
    """

    high: Array
    low: Array
    high_imag: Array | None
    low_imag: Array | None
    size: Array
    noise: int

    @property
    def degree(self) -> int:
        return len(self.high) - 1

    @property
    def points(self) -> int:
        return int(self.high.shape[1])

    @property
    def plain(self) -> NDArray[Any]:
        """To working precision, real or complex."""
        return self.high if self.high_imag is None else self.high + 1j * self.high_imag

    def real_pairs(self) -> list[Pair]:
        """Highest power first, as `horner` takes them."""
        return list(zip(self.high[::-1], self.low[::-1], strict=True))

    def imag_pairs(self) -> list[Pair] | None:
        if self.high_imag is None or self.low_imag is None:
            return None
        return list(zip(self.high_imag[::-1], self.low_imag[::-1], strict=True))

    def at(self, points: Any) -> Coefficients:
        """A selection of points."""
        return Coefficients(
            chosen(self.high, points),
            chosen(self.low, points),
            None if self.high_imag is None else chosen(self.high_imag, points),
            None if self.low_imag is None else chosen(self.low_imag, points),
            chosen(self.size, points),
            self.noise,
        )


def chosen(rows: NDArray[Any], points: NDArray[Any] | slice) -> NDArray[Any]:
    """rows[:, points] with rows in one piece; NumPy's own result has columns in one piece, which slows all that follows."""
    if isinstance(points, slice):
        return rows[:, points]
    return rows.compress(points, axis=1) if points.dtype == bool else rows.take(points, axis=1)


def coefficients(scaled: Scaled, degree: int, points: Any) -> Coefficients:
    """Evaluate the scaled table at some points, what is constant along runs of points once for every run."""
    columns = [(hi[points], lo[points]) for hi, lo in scaled.columns]
    slow, starts, run = _runs(columns)
    inner, outer = scaled.plans(slow)
    terms, noise = scaled.terms, 1 + outer.noise
    if inner:
        shared = [(hi[starts], lo[starts]) for hi, lo in columns[:slow]]
        terms, noise = inner.added(terms, None, shared), noise + inner.noise
    high, low, size = outer.added(terms, run, columns[slow:])
    if len(high) == degree + 1:
        return Coefficients(high, low, None, None, size, noise)
    re, im = slice(degree + 1), slice(degree + 1, None)
    return Coefficients(high[re], low[re], high[im], low[im], size[re] + size[im], noise)


def _runs(columns: Columns) -> tuple[int, Any, Runs]:
    """How many quantities, the slowest first, stay the same along runs, where these start, and the run of every point."""
    changed = np.ones(len(columns[0][0]), bool)
    changed[1:] = False
    best: tuple[int, Any, Runs] = 0, None, None
    for slow, (hi, lo) in enumerate(columns[:-1], 1):
        changed[1:] |= (hi[1:] != hi[:-1]) | (lo[1:] != lo[:-1])
        starts = np.flatnonzero(changed)
        if 2 * len(starts) > len(changed):
            break
        best = slow, starts, np.cumsum(changed) - 1
    return best
