"""Amplitudes of a mode: the null vector of the wave matrix at a root."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix
    from .values import Numbers

SWEEPS = 20


def null_vectors(wave: WaveMatrix, numbers: Numbers, omega: NDArray[Any]) -> NDArray[np.complex128]:
    """Null vectors at every root, shape (branch, n, amplitudes); rows and columns are equilibrated by powers of two."""
    matrix = (
        np.stack([_matrix(wave, numbers, w) for w in omega])
        if len(omega)
        else np.zeros((0, 0, 0, 0))
    )
    bad = ~np.isfinite(matrix).all(axis=(-2, -1))
    matrix[bad] = 0.0
    rows, columns = _equilibrated(np.abs(matrix))
    scaled = matrix * rows[..., :, None] * columns[..., None, :]
    vectors = np.linalg.svd(scaled)[2][..., -1, :].conj() * columns
    vectors[bad] = np.nan
    return np.asarray(vectors, np.complex128)


def _matrix(wave: WaveMatrix, numbers: Numbers, omega: NDArray[Any]) -> NDArray[np.complex128]:
    """The wave matrix over the points of one branch, shape (n, rows, columns)."""
    from sympy import lambdify

    size = len(wave.rows)
    made = np.zeros((len(omega), size, size), complex)
    symbols = sorted({*numbers.swept, *numbers.fixed}, key=str)
    values = [numbers.swept[s] if s in numbers.swept else float(numbers.fixed[s]) for s in symbols]
    entries = [c.subs(numbers.solved) for c in wave.entries.values()]
    with np.errstate(all="ignore"):
        columns = lambdify([wave.omega, *symbols], entries, "numpy")(omega, *values)
    for (i, j), value in zip(wave.entries, columns, strict=True):
        made[:, i, j] = value
    return made


def _equilibrated(size: NDArray[np.float64]) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    rows, columns = np.ones(size.shape[:-1]), np.ones((*size.shape[:-2], size.shape[-1]))
    for _ in range(SWEEPS):
        scaled = size * rows[..., :, None] * columns[..., None, :]
        rows = rows * _inverse_size(scaled.max(axis=-1))
        scaled = size * rows[..., :, None] * columns[..., None, :]
        columns = columns * _inverse_size(scaled.max(axis=-2))
    return rows, columns


def _inverse_size(largest: NDArray[np.float64]) -> NDArray[np.float64]:
    return np.where(
        largest > 0, np.ldexp(1.0, -np.frexp(np.where(largest > 0, largest, 1.0))[1]), 1.0
    )
