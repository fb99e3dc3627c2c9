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
    parts = scaled.high.shape[1] // (degree + 1)
    # Real and imaginary part of a power side by side, so that columns with the same powers are neighbors.
    beside = np.arange(parts * (degree + 1)).reshape(parts, -1).T.ravel()
    table = scaled.high[:, beside], scaled.low[:, beside]
    high, low, size = _nested(scaled.exponents, table, columns)
    count = len(columns[0][0]) if columns else 1
    high, low, size = (np.broadcast_to(a, (len(a), count)) for a in (high, low, size))
    noise = _noise(scaled.exponents)
    if parts == 1:
        return Coefficients(high, low, None, None, size, noise)
    re, im = slice(0, None, 2), slice(1, None, 2)
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
    that share them, for all powers of the last one together.
    """
    if not columns:
        high, low = (part.sum(axis=0)[:, None] for part in table)
        return high, low, np.abs(high)
    *earlier, x = columns
    starts, run = _runs(earlier, len(x[0]))
    shared = [(hi[starts], lo[starts]) for hi, lo in earlier]
    step, width = _step(exponents[:, -1]), table[0].shape[1]
    inner, terms = _by_power(exponents, table, step)
    reached = _reached(terms[0])
    flat = terms[0].reshape(len(inner), -1), terms[1].reshape(len(inner), -1)
    high, low, size = (
        _levels(part.reshape(-1, width, len(starts)), reached, run)
        for part in _nested(inner, flat, shared)
    )
    # Written out for every row: broadcasting takes nearly twice the time.
    x_high, x_low = (np.tile(part, (width, 1)) for part in power(x, step))
    pairs = list(zip(high, low, strict=True))
    value, error = horner(pairs, x_high, x_high.shape, x_low, reached)
    return (*two_sum(value, error), _size(size, np.abs(x_high), reached))


def _levels(part: Array, reached: list[slice], run: NDArray[np.int64] | None) -> list[Array]:
    """The coefficients of every power at every point, in the columns that it reaches."""
    levels = [level[columns] for level, columns in zip(part, reached, strict=True)]
    return levels if run is None else [level.take(run, axis=1) for level in levels]


def _by_power(
    exponents: NDArray[np.int64], table: tuple[Array, Array], step: int
) -> tuple[NDArray[np.int64], list[Array]]:
    """The exponents of the earlier quantities, and the terms by these and the power of the last, highest first."""
    places: dict[tuple[int, ...], int] = {}
    place = [places.setdefault(tuple(e), len(places)) for e in exponents[:, :-1].tolist()]
    last = exponents[:, -1] // step
    shape = len(places), int(last.max()) + 1, table[0].shape[1]
    parts = [np.zeros(shape), np.zeros(shape)]
    for part, terms in zip(parts, table, strict=True):
        part[place, last.max() - last] = terms
    return np.array(list(places), np.int64).reshape(len(places), -1), parts


def _reached(by_power: Array) -> list[slice]:
    """For every power the columns from the first to the last that it or a higher one holds."""
    held = np.logical_or.accumulate((by_power != 0).any(axis=0), axis=0)
    ends = (np.flatnonzero(row) for row in held)
    return [slice(int(e[0]), int(e[-1]) + 1) if len(e) else slice(0, 0) for e in ends]


def _size(levels: list[Any], x: Array, reached: list[slice]) -> Array:
    """sum_j size_j x^j, highest power first."""
    total = np.zeros(x.shape)
    for rows, level in zip(reached, levels, strict=True):
        total[rows] *= x[rows]
        total[rows] += level
    return total


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
