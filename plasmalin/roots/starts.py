"""Numbers near all roots, for any polynomial: eigenvalues of the companion matrix, then Ehrlich-Aberth iteration.

Where roots span so much that eigenvalues lose the small ones, which their sizes from the Newton polygon tell, the
iteration starts from these sizes in all directions; with the roots of a similar polynomial at hand, from those.
Starting radii: Bini 1996, Numer. Algorithms 13, 179; the iteration: Aberth 1973, Math. Comp. 27, 339 (from memory).
Working precision only: what follows proves or rejects the result.
"""

from __future__ import annotations

from contextlib import suppress
from typing import Any

import numpy as np
from numpy.typing import NDArray

from .coefficients import Coefficients, chosen
from .doubledouble import UNIT, Array

GOLDEN = np.pi * (3 - np.sqrt(5))
"""Turns by this angle spread any number of directions evenly."""
SWEEPS = 60
LIKELY = 2.0**8
"""Sizes of eigenvalues and those from the polygon agree to this factor, or the eigenvalues are not taken."""
ASIDE = 2.0**-20
"""So far starts are moved in all directions: real ones could not leave the axis, equal ones not part."""

Complex = NDArray[np.complex128]


def cold_starts(c: Coefficients, near: Complex) -> Complex:
    """Near all roots of every point, shape (degree, points), from what `eigenvalues` found."""
    plain = np.asarray(c.plain, np.complex128)
    return _iterated(plain, _starts(plain, near))


def similar_starts(c: Coefficients, z: NDArray[Any]) -> NDArray[Any]:
    """The same from the roots of similar polynomials: real numbers remain real, complex ones are free."""
    if np.iscomplexobj(z) or c.high_imag is not None:
        return _iterated(np.asarray(c.plain, np.complex128), z * (1 + ASIDE * _turns(len(z))))
    return _iterated(c.high, z.copy())


def eigenvalues(c: Coefficients) -> Complex:
    """Of the companion matrices, shape (degree, points); NaN where there are none. Small ones may be lost."""
    return _eigenvalues(np.asarray(c.plain, np.complex128))


def _turns(n: int) -> Complex:
    """Directions all around, shape (n, 1)."""
    return np.asarray(np.exp(1j * (0.5 + GOLDEN * np.arange(n)))[:, None])


def _polygon_radii(c: Complex) -> Array:
    """Sizes of the roots: slopes of the least concave majorant of log2 |c_j|, shape (degree, points)."""
    n = len(c) - 1
    logs, place = np.maximum(np.log2(np.abs(c)), -1e5), np.arange(n + 1)
    length = (place[None, :] - place[:, None])[:, :, None]
    rise = logs[None, :] - logs[:, None]
    slopes = np.where(length > 0, rise / np.maximum(length, 1), -np.inf)
    # Of the slope from a to b the largest over b >= i, then the smallest over a < i.
    steepest = np.maximum.accumulate(slopes[:, ::-1], axis=1)[:, ::-1]
    steepest = np.minimum.accumulate(steepest, axis=0)[place[:-1], place[1:]]
    return np.asarray(np.exp2(np.clip(-steepest, -900, 900)))


def _eigenvalues(c: Complex) -> Complex:
    """Of the companion matrices, shape (degree, points); NaN where there are none."""
    n = len(c) - 1
    column = -(c[:-1] / c[-1]).T
    usable = np.isfinite(column).all(axis=1)
    real = not c.imag.any()
    matrices = np.zeros((int(usable.sum()), n, n), float if real else complex)
    matrices[:, np.arange(1, n), np.arange(n - 1)] = 1
    matrices[:, :, -1] = column[usable].real if real else column[usable]
    found = np.full((n, c.shape[1]), complex(np.nan, np.nan))
    with suppress(np.linalg.LinAlgError):  # one that does not converge stops all
        found[:, usable] = np.linalg.eigvals(matrices).T
    return found


def _starts(c: Complex, near: Complex) -> Complex:
    """Eigenvalues where their sizes are likely, else polygon radii in all directions."""
    radii, turns = _polygon_radii(c), _turns(len(near))
    ratio = np.sort(np.abs(near), axis=0) / np.sort(radii, axis=0)
    likely = ((ratio > 1 / LIKELY) & (ratio < LIKELY)).all(axis=0)
    return np.asarray(np.where(likely, near * (1 + ASIDE * turns), radii * turns))


def _iterated(c: NDArray[Any], z: NDArray[Any]) -> NDArray[Any]:
    """Ehrlich-Aberth steps, real or complex, until they are short or the values rounding noise; each point for itself."""
    active = np.arange(c.shape[1])
    for _ in range(SWEEPS):
        whole = len(active) == c.shape[1]
        here = z if whole else chosen(z, active)
        step, quiet = _aberth_step(c if whole else chosen(c, active), here)
        z[:, active] = here - step
        active = active[~quiet]
        if not len(active):
            break
    return z


def _aberth_step(c: NDArray[Any], z: NDArray[Any]) -> tuple[NDArray[Any], NDArray[np.bool_]]:
    value, slope, size = _with_slope(c, z)
    pull = np.zeros_like(z)
    for i in range(len(z) - 1):
        inverse = 1 / (z[i] - z[i + 1 :])
        pull[i] += inverse.sum(axis=0)
        pull[i + 1 :] -= inverse
    newton = value / slope
    step = newton / (1 - newton * pull)
    noise = np.abs(value) <= 8 * len(z) * UNIT * size
    step[~np.isfinite(step) | (value == 0)] = 0.0
    small = np.abs(step) <= 2.0**-44 * np.abs(z)
    return step, np.asarray((noise | small).all(axis=0))


def _with_slope(c: NDArray[Any], z: NDArray[Any]) -> tuple[NDArray[Any], NDArray[Any], Array]:
    """p(z), p'(z) and sum_j |c_j z^j|."""
    value, slope = np.broadcast_to(c[-1], z.shape).copy(), np.zeros_like(z)
    size, magnitude = np.abs(value), np.abs(z)
    for row, row_size in zip(c[-2::-1], np.abs(c[-2::-1]), strict=True):
        slope *= z
        slope += value
        value *= z
        value += row
        size *= magnitude
        size += row_size
    return value, slope, size
