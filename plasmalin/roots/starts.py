"""Numbers near all roots, for any polynomial: radii from the Newton polygon, then Ehrlich-Aberth iteration.

Starting radii: Bini 1996, Numer. Algorithms 13, 179; the iteration: Aberth 1973, Math. Comp. 27, 339 (from memory).
Working precision only: what follows proves or rejects the result.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from .coefficients import Coefficients
from .doubledouble import UNIT, Array

GOLDEN = np.pi * (3 - np.sqrt(5))
"""Turns by this angle spread any number of directions evenly."""
SWEEPS = 60

Complex = NDArray[np.complex128]


def cold_starts(c: Coefficients) -> Complex:
    """Near all roots of every point, shape (degree, points)."""
    return _aberth(np.asarray(c.plain, np.complex128))


def _polygon_radii(c: Complex) -> Array:
    """Sizes of the roots: slopes of the least concave majorant of log2 |c_j|, shape (degree, points)."""
    n = len(c) - 1
    logs = np.maximum(np.log2(np.abs(c)), -1e5)
    slopes = np.empty((n, c.shape[1]))
    for i in range(1, n + 1):
        steepest = np.full((i, c.shape[1]), -np.inf)
        for a in range(i):
            for b in range(i, n + 1):
                np.maximum(steepest[a], (logs[b] - logs[a]) / (b - a), out=steepest[a])
        slopes[i - 1] = steepest.min(axis=0)
    return np.asarray(np.exp2(np.clip(-slopes, -900, 900)))


def _aberth(c: Complex) -> Complex:
    """Iterated until the values are rounding noise; each point stops on its own."""
    n = len(c) - 1
    turns = np.exp(1j * (0.5 + GOLDEN * np.arange(n)))[:, None]
    z = _polygon_radii(c) * turns
    active = np.arange(c.shape[1])
    for _ in range(SWEEPS):
        step, quiet = _aberth_step(c[:, active], z[:, active])
        z[:, active] -= step
        active = active[~quiet]
        if not len(active):
            break
    return np.asarray(z)


def _aberth_step(c: Complex, z: Complex) -> tuple[Complex, NDArray[np.bool_]]:
    value, slope, size = _with_slope(c, z)
    apart = z[:, None] - z[None, :]
    apart[np.arange(len(z)), np.arange(len(z))] = np.inf
    newton = value / slope
    step = newton / (1 - newton * (1 / apart).sum(axis=1))
    noise = np.abs(value) <= 8 * len(z) * UNIT * size
    step[~np.isfinite(step) | (value == 0)] = 0.0
    small = np.abs(step) <= 2.0**-44 * np.abs(z)
    return step, np.asarray((noise | small).all(axis=0))


def _with_slope(c: Complex, z: Complex) -> tuple[Complex, Complex, Array]:
    """p(z), p'(z) and sum_j |c_j z^j|."""
    value, slope = np.broadcast_to(c[-1], z.shape).copy(), np.zeros_like(z)
    size, magnitude = np.abs(value), np.abs(z)
    for row in c[-2::-1]:
        slope *= z
        slope += value
        value *= z
        value += row
        size *= magnitude
        size += np.abs(row)
    return value, slope, size
