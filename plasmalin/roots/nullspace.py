"""Null vectors at many roots at once, by Newton's method on (M + d M') x = 0, c x = 1 in twice the working precision.

The steps use one inverse in working precision per root; only the residual is computed in twice that precision, as in
iterative refinement (Moler 1967, J. ACM 14, 316; Wilkinson 1965, The Algebraic Eigenvalue Problem; from memory). A
component is taken where the last step changes it by no more than rounding; else the vector counts as not found.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from .doubledouble import Pair, complex_times, plus
from .family import Family, Grid
from .scaling import in_binary

Complex = NDArray[np.complex128]

STEPS = 6
SWEEPS = 8
SHARP = 2.0**-44
"""The last step against a component that is taken."""
NOTHING = 2.0**-100
"""Components this small against the largest one, rows and columns scaled, are zero: the mode does not move them."""
FAR = 2.0**-30
"""A root whose correction is larger, relative to it, is not the root that it was meant to be."""
WIDEST = 2**9
"""Exponents of two that the terms of one row may span, and those of the entries."""


@dataclass(frozen=True)
class Rows:
    """A square matrix of polynomials as arrays.

    Attributes
    ----------
    size : int
    place : ndarray of int, shape (2, entries)
        Row and column of every entry.
    monomials : ndarray of int, shape (m, G)
    high, low : ndarray, shape (powers of omega, entries, m), highest power first
        Every row is divided by a power of two.
    """

    size: int
    place: NDArray[np.int64]
    monomials: NDArray[np.int64]
    high: Complex
    low: Complex


def rows_of(entries: Mapping[tuple[int, int], Family], size: int) -> Rows | None:
    """The entries as arrays; None where the terms of a row differ too much in size."""
    places: dict[tuple[int, ...], int] = {}
    top = max(f.degree for f in entries.values())
    terms = []
    for e, ((i, _), family) in enumerate(entries.items()):
        for row, c in zip(family.exponents.tolist(), family.coefficients, strict=True):
            at = top - row[0], e, places.setdefault(tuple(row[1:]), len(places))
            terms += [(i, at, u, in_binary(x)) for u, x in zip((1, 1j), c, strict=True) if x]
    largest = {i: max(x[2] for n, _, _, x in terms if n == i) for i in range(size)}
    high, low = np.zeros((2, top + 1, len(entries), len(places)), complex)
    for i, at, unit, (a, b, exponent) in terms:
        if exponent < largest[i] - WIDEST:
            return None
        scale = 2.0 ** (exponent - largest[i])
        high[at] += unit * a * scale
        low[at] += unit * b * scale
    monomials = np.array(list(places), np.int64).reshape(len(places), -1)
    return Rows(size, np.array(list(entries)).T, monomials, high, low)


@np.errstate(all="ignore")
def null_vectors_at(
    rows: Rows, grid: Grid, omega: Complex, points: NDArray[np.int64]
) -> tuple[Complex, NDArray[np.bool_]]:
    """The null vectors at some roots, shape (roots, size), and which of them are found.

    Parameters
    ----------
    rows : Rows
    grid : sequence of (high, low)
    omega : ndarray, shape (roots,)
    points : ndarray of int, shape (roots,)
        The grid point of every root.
    """
    vectors, found = np.zeros((len(omega), rows.size), complex), omega != 0
    whole, slope = _values(rows, grid, omega, points)
    size = np.abs(whole[0])
    held = (size > 2.0**-WIDEST) & (size < 2.0**WIDEST) | (size == 0)
    found &= held.all(axis=0)
    made, good = _vectors(rows, *(part[:, found] for part in (*whole, slope * omega)))
    vectors[found] = made
    found[found] = good
    return vectors, found


def _vectors(
    rows: Rows, high: Complex, low: Complex, slope: Complex
) -> tuple[Complex, NDArray[np.bool_]]:
    """The same from the entries, in two parts, and their derivatives times omega."""
    by_row, by_column = _equilibrated(rows, np.abs(high))
    both = np.ldexp(1.0, by_row[rows.place[0]] + by_column[rows.place[1]])
    matrix = _Matrix(rows, high * both, low * both, slope * both)
    try:
        x, last, change = _refined(matrix, _start(matrix))
    except np.linalg.LinAlgError:  # one that is singular stops all
        middle = high.shape[1] // 2
        if not middle:
            return np.zeros((1, rows.size), complex), np.zeros(1, bool)
        halves = (slice(None, middle), slice(middle, None))
        parts = [_vectors(rows, *(part[:, h] for part in (high, low, slope))) for h in halves]
        return np.concatenate([v for v, _ in parts]), np.concatenate([f for _, f in parts])
    largest, length = np.abs(x).max(axis=0), np.abs(last)
    small = np.abs(x) <= NOTHING * largest
    limit = np.where(small, NOTHING * largest, SHARP * np.abs(x))
    found = (length <= limit).all(axis=0) & (np.abs(change) <= FAR)
    made = np.ldexp(1.0, by_column) * np.where(small, 0.0, x)
    at = np.abs(made).argmax(axis=0)
    return (made / made[at, np.arange(len(at))]).T, found


@dataclass(frozen=True)
class _Matrix:
    """High and low part of the entries, and of M' omega the high part; shape (entries, roots)."""

    rows: Rows
    high: Complex
    low: Complex
    slope: Complex

    def dense(self, entries: Complex) -> Complex:
        made = np.zeros((entries.shape[1], self.rows.size, self.rows.size), complex)
        made[:, self.rows.place[0], self.rows.place[1]] = entries.T
        return made

    def times(self, x: Pair, change: Complex) -> Complex:
        """(M + change M' omega) x; of the sums in twice the working precision what is left of them."""
        row, column = self.rows.place
        products = complex_times((self.high, self.low), (x[0][column], x[1][column]))
        products = plus(products, (change * self.slope * x[0][column], 0.0))
        total: Any = np.zeros((2, *x[0].shape), complex)
        for entries in _one_a_row(row):
            here = row[entries]
            total[:, here] = plus(
                (total[0, here], total[1, here]), (products[0][entries], products[1][entries])
            )
        return np.asarray(total[0] + total[1])


def _one_a_row(row: NDArray[np.int64]) -> list[NDArray[np.int64]]:
    """The entries in groups that hold at most one of every row."""
    order = np.argsort(row, kind="stable")
    nth = np.arange(len(row)) - np.searchsorted(row[order], row[order])
    return [order[nth == n] for n in range(int(nth.max()) + 1)]


def _values(
    rows: Rows, grid: Grid, omega: Complex, points: NDArray[np.int64]
) -> tuple[Pair, Complex]:
    """The entries at the roots in two parts, and their derivatives with respect to omega."""
    few, back = np.unique(points, return_inverse=True)
    high, low = _coefficients(rows, [(hi[few], lo[few]) for hi, lo in grid], len(few))
    unknown, value = (omega, np.zeros_like(omega)), (high[0][:, back], low[0][:, back])
    slope = np.zeros_like(value[0])
    for a, b in zip(high[1:], low[1:], strict=True):
        slope = slope * omega + value[0]
        value = plus(complex_times(value, unknown), (a[:, back], b[:, back]))
    return value, slope


def _coefficients(rows: Rows, grid: Grid, points: int) -> Pair:
    """Of every power of omega in every entry, shape (powers, entries, points)."""
    shape = (*rows.high.shape[:2], points)
    total: Pair = np.zeros(shape, complex), np.zeros(shape, complex)
    for m, exponents in enumerate(rows.monomials.tolist()):
        monomial: Pair = np.ones(points, complex), np.zeros(points, complex)
        for n, (hi, lo) in zip(exponents, grid, strict=True):
            for _ in range(n):
                monomial = complex_times(monomial, (hi + 0j, lo + 0j))
        here = (rows.high[:, :, m] != 0).any(axis=0)
        term = complex_times((rows.high[:, here, m, None], rows.low[:, here, m, None]), monomial)
        total[0][:, here], total[1][:, here] = plus((total[0][:, here], total[1][:, here]), term)
    return total


def _equilibrated(
    rows: Rows, size: NDArray[np.float64]
) -> tuple[NDArray[np.int64], NDArray[np.int64]]:
    """Exponents of two for every row and column, shape (size, roots), that bring the largest entries near 1."""
    logs = np.where(size > 0, np.log2(size), -np.inf)
    scales = np.zeros((2, rows.size, size.shape[1]))
    for sweep in range(SWEEPS):
        side = sweep % 2
        here = logs + scales[1 - side][rows.place[1 - side]]
        largest = np.full(scales[0].shape, -np.inf)
        np.maximum.at(largest, rows.place[side], here)
        scales[side] = np.where(np.isfinite(largest), -largest, 0.0)
    by_row, by_column = np.rint(scales).astype(np.int64)
    return by_row, by_column


def _start(matrix: _Matrix) -> Complex:
    """Near the null vectors, shape (size, roots): the bordered matrix with a fixed border is hardly ever singular."""
    n, turns = matrix.rows.size, np.exp(1j * np.arange(matrix.rows.size) ** 2)
    border = np.broadcast_to(turns / np.sqrt(n), (matrix.high.shape[1], n))
    bordered = _bordered(matrix.dense(matrix.high), border, border)
    x = np.linalg.solve(bordered, np.eye(n + 1, 1, -n)[None] + 0j)[:, :n, 0].T
    return np.asarray(x / np.abs(x).max(axis=0))


def _bordered(matrix: Complex, column: Complex, row: Complex) -> Complex:
    made = np.zeros((len(matrix), matrix.shape[1] + 1, matrix.shape[1] + 1), complex)
    made[:, :-1, :-1], made[:, :-1, -1], made[:, -1, :-1] = matrix, column, row
    return made


def _refined(matrix: _Matrix, x: Complex) -> tuple[Complex, Complex, Complex]:
    """The null vectors, the last step, and the relative change of omega that makes them null vectors."""
    row = (x.conj() / (np.abs(x) ** 2).sum(axis=0)).T
    column = np.einsum("pij,jp->pi", matrix.dense(matrix.slope), x)
    inverse = np.linalg.inv(_bordered(matrix.dense(matrix.high), column, row))
    value: Pair = x, np.zeros_like(x)
    change, step = np.zeros(x.shape[1], complex), x
    for _ in range(STEPS):
        # The border is met at the start, and steps along it are zero.
        residual = matrix.times(value, change)
        moved = -np.einsum("pij,jp->ip", inverse[:, :, :-1], residual)
        step, change = moved[:-1], change + moved[-1]
        value = plus(value, (step, np.zeros_like(step)))
        if (np.abs(step) <= 2.0**-4 * NOTHING).all():
            break
    return value[0], step, change
