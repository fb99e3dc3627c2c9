"""Amplitudes of a mode: the null vector of the wave matrix at a root."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import TYPE_CHECKING, Any

import mpmath
import numpy as np
from numpy.typing import NDArray
from sympy import Expr, lambdify

from ..exact.determinant import polynomial_rows
from ..exact.nullvector import null_vector
from .nullspace import null_vectors_at, rows_of
from .solve import DIGITS, family_of, in_numbers, swept_values
from .values import high_precision

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix
    from .values import Numbers

Entries = Mapping[tuple[int, int], Any]

BATCH = 512
"""Roots at a time."""


def null_vectors(wave: WaveMatrix, numbers: Numbers, omega: NDArray[Any]) -> NDArray[np.complex128]:
    """Null vectors at every root over a one-dimensional sweep, shape (branch, n, amplitudes)."""
    made = np.full((*omega.shape, len(wave.rows)), complex(np.nan, np.nan))
    points, branches = np.nonzero(np.isfinite(omega.T))
    vectors, found = _in_doubles(wave, numbers, omega[branches, points], points)
    made[branches[found], points[found]] = vectors[found]
    _in_multiprecision(wave, numbers, omega, np.stack([branches, points], 1)[~found], made)
    return made


def _in_doubles(
    wave: WaveMatrix, numbers: Numbers, omega: NDArray[Any], points: NDArray[np.int64]
) -> tuple[NDArray[np.complex128], NDArray[np.bool_]]:
    """The vectors, and which of them are right in every component."""
    fill, size = in_numbers(numbers), len(wave.rows)
    entries = {ij: c for ij, e in wave.entries.items() if (c := fill(e)) != 0}
    exact = polynomial_rows(entries, wave.omega)
    swept = tuple(g for g in next(iter(exact.values())).generators if g.free_symbols)
    rows = rows_of({ij: family_of(p, swept) for ij, p in exact.items()}, size)
    vectors, found = np.zeros((len(omega), size), complex), np.zeros(len(omega), bool)
    if rows is not None:
        grid = [swept_values(g, numbers) for g in swept]
        for first in range(0, len(omega), BATCH):
            part = slice(first, first + BATCH)
            vectors[part], found[part] = null_vectors_at(rows, grid, omega[part], points[part])
    return vectors, found


def _in_multiprecision(
    wave: WaveMatrix,
    numbers: Numbers,
    omega: NDArray[Any],
    places: NDArray[np.int64],
    made: NDArray[np.complex128],
) -> None:
    """One by one, put where they belong."""
    size = len(wave.rows)
    symbols = sorted({*numbers.swept, *numbers.fixed}, key=str)
    entries = {ij: c.subs(numbers.solved) for ij, c in wave.entries.items()}
    evaluate = _evaluator([wave.omega, *symbols], entries)
    slopes = _evaluator(
        [wave.omega, *symbols],
        {ij: d for ij, c in entries.items() if (d := c.diff(wave.omega)) != 0},
    )
    with mpmath.workdps(DIGITS):
        for b, i in places:
            point = [high_precision(omega[b, i]), *(numbers.at(s, int(i)) for s in symbols)]
            made[b, i] = null_vector(evaluate(point), slopes(point), size)


def _evaluator(
    symbols: list[Any], entries: Mapping[tuple[int, int], Expr]
) -> Callable[[Any], Entries]:
    function = lambdify(symbols, list(entries.values()), "mpmath")
    return lambda point: dict(zip(entries, function(*point), strict=True))
