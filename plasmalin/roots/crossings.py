"""Crossings between the branches of two factors, seen where no resultant tells them: changes of order, refined."""

from __future__ import annotations

from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray

from .events import Event, distinct
from .tracking import Solve

STEPS = 6
"""Newton steps after cubic interpolation; each doubles the digits."""

Tracked: TypeAlias = tuple[NDArray[np.complex128], NDArray[np.complex128], Solve]
"""Branches and slopes of a factor, shape (n, d), and what gives its roots and slopes elsewhere."""


def seen_crossings(s: NDArray[np.float64], first: Tracked, second: Tracked) -> list[Event]:
    """Where two branches of two factors, both real or both purely imaginary, change their order from point to point."""
    pairs = _pairs(first, second)
    if not len(pairs):
        return []
    interval, i, j = pairs.T
    low, high = s[interval], s[interval + 1]
    ends = np.array(
        [
            [(w[interval + n, b], v[interval + n, b]) for n in (0, 1)]
            for (w, v, _), b in ((first, i), (second, j))
        ]
    )
    part = _cubic_zero(low, high, (ends[0] - ends[1]))
    at = low + part * (high - low)
    guess = _cubic(part, high - low, ends[0])
    for _ in range(STEPS):
        (a, rate), (b, other) = (_nearest(solve, at, guess) for *_, solve in (first, second))
        with np.errstate(divide="ignore", invalid="ignore"):
            step = np.real((a - b) / (rate - other))
        at = np.clip(at - np.where(np.isfinite(step), step, 0.0), low, high)
        guess = a - step * rate if np.isfinite(step).all() else a
    return distinct(Event("crossing", float(x), complex(w)) for x, w in zip(at, a, strict=True))


def _pairs(first: Tracked, second: Tracked) -> NDArray[np.int64]:
    """(interval, branch of the first, branch of the second) of every change of order, shape (m, 3)."""
    found = [np.empty((0, 3), np.int64)]
    a, b = first[0], second[0]
    for shown, hidden in (("real", "imag"), ("imag", "real")):
        flat = [
            (getattr(w, hidden) == 0) & np.isfinite(w) & (getattr(w, shown) != 0) for w in (a, b)
        ]
        for i in range(a.shape[1]):
            difference = getattr(a, shown)[:, i, None] - getattr(b, shown)
            both = flat[0][:, i, None] & flat[1]
            sign = np.where(both, np.sign(difference), np.nan)
            changed = (sign[:-1] * sign[1:] < 0) | (
                (sign[1:] == 0) & (np.roll(sign, 1, 0)[1:] != 0) & both[:-1]
            )
            n, j = np.nonzero(changed)
            found.append(np.stack([n, np.full_like(n, i), j], axis=1))
    return np.concatenate(found)


def _cubic(
    t: NDArray[np.float64], width: NDArray[np.float64], ends: NDArray[np.complex128]
) -> NDArray[np.complex128]:
    """Between two values with slopes, of shape (2, 2, m): end, then value and slope."""
    (a, p), (b, q) = ends
    p, q = p * width, q * width
    return np.asarray(
        a * (1 + 2 * t) * (1 - t) ** 2
        + b * t * t * (3 - 2 * t)
        + t * (1 - t) * (p * (1 - t) - q * t)
    )


def _cubic_zero(
    low: NDArray[np.float64], high: NDArray[np.float64], ends: NDArray[np.complex128]
) -> NDArray[np.float64]:
    """Where the interpolated difference vanishes, as a part of the interval, by halving."""
    left, right = np.zeros(len(low)), np.ones(len(low))
    ends = np.where(np.abs(ends[0, 0].real) > 0, ends.real, ends.imag)
    sign = np.sign(ends[0, 0])
    for _ in range(40):
        middle = 0.5 * (left + right)
        before = np.sign(_cubic(middle, high - low, ends)) == sign
        left, right = np.where(before, middle, left), np.where(before, right, middle)
    return np.asarray(0.5 * (left + right))


def _nearest(
    solve: Solve, at: NDArray[np.float64], guess: NDArray[np.complex128]
) -> tuple[NDArray[np.complex128], NDArray[np.complex128]]:
    """The root next to each guess, and its slope."""
    omega, slope = solve(at)
    place = np.nanargmin(np.abs(omega - guess[:, None]), axis=1)[:, None]
    return np.take_along_axis(omega, place, 1)[:, 0], np.take_along_axis(slope, place, 1)[:, 0]
