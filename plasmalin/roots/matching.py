"""Which root at one end of an interval is which at the other, as far as slopes tell."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

CLEAR = 0.1
"""A match is clear when it is this much nearer than the next one."""
COINCIDE = 2.0**-44
"""Relative distance of two roots below which rounding decides which is which."""


@dataclass(frozen=True)
class Ends:
    """Roots and slopes at one end of some intervals: s of shape (m,), the others (m, roots).

    `mirrored` says that roots are real or come as pairs of conjugates, so that none leaves or crosses the real axis without
    meeting another.
    """

    s: NDArray[np.float64]
    omega: NDArray[np.complex128]
    slope: NDArray[np.complex128]
    mirrored: bool = False

    def at(self, which: Any) -> Ends:
        return Ends(self.s[which], self.omega[which], self.slope[which], self.mirrored)

    @property
    def real(self) -> bool:
        """Whether all roots and slopes are."""
        return not (self.omega.imag.any() or self.slope.imag.any())

    def and_then(self, other: Ends) -> Ends:
        return Ends(
            np.concatenate([self.s, other.s]),
            np.concatenate([self.omega, other.omega]),
            np.concatenate([self.slope, other.slope]),
            self.mirrored,
        )


def coincide(omega: NDArray[np.complex128]) -> NDArray[np.bool_]:
    """Whether two roots of a point are the same within rounding; they come sorted."""
    with np.errstate(invalid="ignore"):
        square = _square(omega[:, 1:] - omega[:, :-1])
        return np.asarray((square <= COINCIDE**2 * _square(omega[:, 1:])).any(axis=1))


def pairwise_clear(left: Ends, right: Ends) -> NDArray[np.bool_]:
    """The clear intervals among those where the matching would change nothing."""
    real = left.real and right.real
    ahead, back = (
        np.ascontiguousarray((a.real if real else a).T) for a in _to_the_middle(left, right)
    )
    with np.errstate(invalid="ignore", over="ignore"):
        own, nearest = (_real_distances if real else _distances)(ahead, back)
        clear = (own <= CLEAR**2 * nearest[0]) & (own < nearest[1])
        clear &= nearest[0] > COINCIDE**2 * _square(ahead)
    return np.asarray(clear.all(axis=0) & ~_ranks_change(left, right))


def _distances(ahead: NDArray[Any], back: NDArray[Any]) -> tuple[NDArray[Any], NDArray[Any]]:
    """Squares of the distances to the partner in the same place, and to the nearest other on either side."""
    nearest = np.full((2, *ahead.shape), np.inf)
    for i in range(len(ahead)):
        square = _square(ahead[i] - back)
        square[i] = np.inf
        square.min(axis=0, out=nearest[0, i])
        np.minimum(nearest[1], square, out=nearest[1])
    return _square(ahead - back), nearest


def _real_distances(ahead: NDArray[Any], back: NDArray[Any]) -> tuple[NDArray[Any], NDArray[Any]]:
    """The same for real numbers, whose nearest others come next in order; where they are out of order, zero."""
    nearest = np.full((2, *ahead.shape), np.inf)
    up, down = _square(ahead[1:] - back[:-1]), _square(back[1:] - ahead[:-1])
    nearest[0, 1:], nearest[1, :-1] = up, up
    np.minimum(nearest[0, :-1], down, out=nearest[0, :-1])
    np.minimum(nearest[1, 1:], down, out=nearest[1, 1:])
    ordered = (ahead[1:] >= ahead[:-1]) & (back[1:] >= back[:-1])
    nearest[:, :, ~ordered.all(axis=0)] = 0.0
    return _square(ahead - back), nearest


def _to_the_middle(left: Ends, right: Ends) -> tuple[NDArray[Any], NDArray[Any]]:
    half = 0.5 * (right.s - left.s)[:, None]
    return left.omega + half * left.slope, right.omega - half * right.slope


def _square(z: NDArray[Any]) -> NDArray[np.float64]:
    return np.asarray(z.real**2 + z.imag**2 if np.iscomplexobj(z) else z * z)


def _ranks_change(
    left: Ends, right: Ends, step: NDArray[np.int64] | None = None
) -> NDArray[np.bool_]:
    """Whether branches that are real at both ends swap their order across an interval, or one changes its side."""
    after = right.omega if step is None else np.take_along_axis(right.omega, step, axis=1)
    if left.mirrored:
        sides = (np.sign(left.omega.imag) != np.sign(after.imag)).any(axis=1)
        return np.asarray(sides | _order_changes(left.omega, after))
    return _order_changes(left.omega, after)


def _order_changes(
    before: NDArray[np.complex128], after: NDArray[np.complex128]
) -> NDArray[np.bool_]:
    real = (before.imag == 0) & (after.imag == 0)
    ends = [np.where(real, w.real, np.inf) for w in (before, after)]
    if all((w[:, 1:] >= w[:, :-1]).all() for w in ends):
        return np.zeros(len(real), bool)
    ranks = (np.argsort(np.argsort(w, axis=1), axis=1) for w in ends)
    return np.asarray((real & (next(ranks) != next(ranks))).any(axis=1))


def matched(left: Ends, right: Ends) -> tuple[NDArray[np.int64], NDArray[np.bool_]]:
    """For each interval the nearest partners, and whether they are clear."""
    ahead, back = _to_the_middle(left, right)
    gap = np.abs(ahead[:, :, None] - back[:, None, :])
    gap = np.where(np.isfinite(gap), gap, np.inf)
    gap[~np.isfinite(left.omega)[:, :, None] & ~np.isfinite(right.omega)[:, None, :]] = 0.0
    step, from_right = gap.argmin(axis=2), gap.argmin(axis=1)
    mutual = np.take_along_axis(from_right, step, axis=1) == np.arange(gap.shape[1])
    best = np.take_along_axis(gap, step[:, :, None], axis=2)[:, :, 0]
    np.put_along_axis(gap, step[:, :, None], np.inf, axis=2)
    rest = gap.min(axis=2, initial=np.inf)
    clear = mutual & (best <= CLEAR * rest) & ~(rest <= COINCIDE * np.abs(left.omega))
    return step, clear.all(axis=1) & ~_ranks_change(left, right, step)
