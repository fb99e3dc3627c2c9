"""The coefficients of one polynomial per point, in high and low part, with a bound on their size and error."""

from __future__ import annotations

from dataclasses import dataclass
from math import gcd
from typing import Any

import numpy as np
from numpy.typing import NDArray

from .doubledouble import Array, Pair, horner, pair_noise, power, two_sum
from .path import Columns
from .scaling import Scaled


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
            self.high[:, points],
            self.low[:, points],
            None if self.high_imag is None else self.high_imag[:, points],
            None if self.low_imag is None else self.low_imag[:, points],
            self.size[:, points],
            self.noise,
        )


def coefficients(scaled: Scaled, degree: int, points: Any) -> Coefficients:
    """Evaluate the scaled table at some points by nested Horner schemes, one per swept quantity."""
    columns = [(hi[points], lo[points]) for hi, lo in scaled.columns]
    high, low, size = _nested(scaled.exponents, (scaled.high, scaled.low), columns)
    count = len(columns[0][0]) if columns else 1
    high, low, size = (np.broadcast_to(a, (len(a), count)) for a in (high, low, size))
    noise = _noise(scaled.exponents)
    if len(high) == degree + 1:
        return Coefficients(high, low, None, None, size, noise)
    re, im = slice(0, degree + 1), slice(degree + 1, None)
    return Coefficients(high[re], low[re], high[im], low[im], size[re] + size[im], noise)


def _noise(exponents: NDArray[np.int64]) -> int:
    """In units of UNIT^2: rounding of the stored terms, every Horner scheme with its powers, every final sum."""
    total = 1
    for column in exponents.T:
        step = _step(column)
        steps = int(column.max()) // step
        total += pair_noise(steps) + 8 * steps * step + 2
    return total


def _step(exponents: NDArray[np.int64]) -> int:
    """The power of one quantity in which the terms are polynomials."""
    return gcd(*exponents.tolist()) or 1


def _nested(
    exponents: NDArray[np.int64], table: tuple[Array, Array], columns: Columns
) -> tuple[Array, Array, Array]:
    """Rows of coefficients over the points: high, low and the sum of sizes.

    The last quantity is outermost. What depends on the earlier ones only is evaluated once for each run of points
    that share them.
    """
    if not columns:
        high, low = (part.sum(axis=0)[:, None] for part in table)
        return high, low, np.abs(high)
    *earlier, x = columns
    starts, run = _runs(earlier, len(x[0]))
    shared = [(hi[starts], lo[starts]) for hi, lo in earlier]
    step = _step(exponents[:, -1])
    x_high, x_low = power(x, step)
    parts: list[tuple[Any, Any, Any]] = []
    for n in range(int(exponents[:, -1].max()), -1, -step):
        rows = exponents[:, -1] == n
        if rows.any():
            inner = _nested(exponents[rows, :-1], (table[0][rows], table[1][rows]), shared)
            high, low, size = (a if run is None else a.take(run, axis=1) for a in inner)
            parts.append((high, low, size))
        else:
            parts.append((0.0, 0.0, 0.0))
    shape = (table[0].shape[1], len(x_high))
    value, error = horner([p[:2] for p in parts], x_high, shape, x_low)
    total, magnitude = np.broadcast_to(parts[0][2], shape).copy(), np.abs(x_high)
    for part in parts[1:]:
        total *= magnitude
        total += part[2]
    return (*two_sum(value, error), total)


def _runs(columns: Columns, points: int) -> tuple[NDArray[np.int64], NDArray[np.int64] | None]:
    """Where runs of equal values start, and the run of every point (None where it is not worth it)."""
    if not columns:
        return np.zeros(1, np.int64), None
    changed = np.ones(points, bool)
    changed[1:] = False
    for hi, lo in columns:
        changed[1:] |= (hi[1:] != hi[:-1]) | (lo[1:] != lo[:-1])
    starts = np.flatnonzero(changed)
    if 2 * len(starts) > points:
        return np.arange(points), None
    return starts, np.cumsum(changed) - 1
