"""Amplitudes of a mode: the null vector of the wave matrix at a root."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import TYPE_CHECKING, Any

import mpmath
import numpy as np
from numpy.typing import NDArray
from sympy import Expr, lambdify

from ..exact.nullvector import null_vector
from .solve import DIGITS
from .values import high_precision

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix
    from .values import Numbers

Entries = Mapping[tuple[int, int], Any]


def null_vectors(wave: WaveMatrix, numbers: Numbers, omega: NDArray[Any]) -> NDArray[np.complex128]:
    """Null vectors at every root over a one-dimensional sweep, shape (branch, n, amplitudes)."""
    size = len(wave.rows)
    symbols = sorted({*numbers.swept, *numbers.fixed}, key=str)
    entries = {ij: c.subs(numbers.solved) for ij, c in wave.entries.items()}
    evaluate = _evaluator([wave.omega, *symbols], entries)
    slopes = _evaluator(
        [wave.omega, *symbols],
        {ij: d for ij, c in entries.items() if (d := c.diff(wave.omega)) != 0},
    )
    made = np.full((*omega.shape, size), complex(np.nan, np.nan))
    with mpmath.workdps(DIGITS):
        for b, i in np.argwhere(np.isfinite(omega)):
            point = [high_precision(omega[b, i]), *(numbers.at(s, int(i)) for s in symbols)]
            made[b, i] = null_vector(evaluate(point), slopes(point), size)
    return made


def _evaluator(
    symbols: list[Any], entries: Mapping[tuple[int, int], Expr]
) -> Callable[[Any], Entries]:
    function = lambdify(symbols, list(entries.values()), "mpmath")
    return lambda point: dict(zip(entries, function(*point), strict=True))
