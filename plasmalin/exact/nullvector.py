"""Null vectors of a nearly singular matrix in multiprecision, by inverse iteration."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import flint

BITS = 256
STEPS = 2
AGREEMENT = 1e-6


def null_vector(
    matrix: Mapping[tuple[int, int], Any], slope: Mapping[tuple[int, int], Any], size: int
) -> list[complex]:
    """The vector that a matrix nearly annihilates.

    Parameters
    ----------
    matrix, slope : mapping of (int, int) to mpmath numbers
        The matrix at an approximate root, and its derivative with respect to omega.
    size : int

    Returns
    -------
    list of complex
        Scaled to a largest entry of 1. An entry on which two starts disagree is not moved by this mode, or not
        determined (a multiple root), and is 0; all are NaN where the matrix is exactly singular.

    Notes
    -----
    Inverse iteration x <- M^-1 M' x. In double precision the huge range of SI entries would spoil small components.
    """
    before = flint.ctx.prec
    try:
        flint.ctx.prec = BITS
        m, s = _table(matrix, size), _table(slope, size)
        first, second = (_iterated(m, s, size, start) for start in (1, -3))
        return [
            a if abs(a - b) <= AGREEMENT * abs(a) else 0j
            for a, b in zip(first, second, strict=True)
        ]
    except (ZeroDivisionError, ValueError):
        return [complex("nan")] * size
    finally:
        flint.ctx.prec = before


def _iterated(m: Any, s: Any, size: int, start: int) -> list[complex]:
    x = s * flint.acb_mat(size, 1, [1 + flint.acb(start * j * j + j) / size for j in range(size)])
    for _ in range(STEPS):
        x = m.solve(x)
        vector = x / _largest(x, size)
        x = s * vector
    return [complex(vector[j, 0]) for j in range(size)]


def _table(entries: Mapping[tuple[int, int], Any], size: int) -> Any:
    made = flint.acb_mat(size, size)
    for (i, j), value in entries.items():
        made[i, j] = flint.acb(value)
    return made


def _largest(x: Any, size: int) -> Any:
    return max((x[j, 0].mid() for j in range(size)), key=lambda z: float(abs(z).mid()))
