"""The order in which the points of a grid follow each other closely, so that roots can be carried along."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray

Columns: TypeAlias = list[tuple[NDArray[np.float64], NDArray[np.float64]]]
"""Real swept quantities over the points, high and low part."""

FARTHEST, FEWEST = 64, 32
"""Points from node to node at most; intervals between nodes at least."""
SMALL = 2.0**-100


@dataclass(frozen=True)
class Path:
    """Points in order.

    Attributes
    ----------
    order : ndarray of int, shape (n,)
        Which point comes when.
    place : tuple of int
        The swept quantities, the slowest first.
    s : ndarray, shape (n,)
        The quantity that grows along the path.
    breaks : ndarray of bool, shape (n,)
        Whether the path jumps before this point.
    change : ndarray, shape (n - 1,)
        How far the logarithm of any quantity moves from point to point, at most.
    """

    order: NDArray[np.int64]
    place: tuple[int, ...]
    s: NDArray[np.float64]
    breaks: NDArray[np.bool_]
    change: NDArray[np.float64]

    def stride(self, far: float) -> int:
        """How many points lie within a factor exp(far) of all quantities, as a power of two."""
        most = min(FARTHEST, len(self.order) / FEWEST)
        within = far / self._step if self._step * most > far else most
        return int(2 ** np.floor(np.log2(max(within, 1.0))))

    @cached_property
    def _step(self) -> float:
        """The median change from point to point."""
        steps = self.change[np.isfinite(self.change) & ~self.breaks[1:]]
        return float(np.median(steps)) if len(steps) else 0.0

    def nodes(self, stride: int) -> NDArray[np.int64]:
        """Every stride-th point, and both ends of every stretch without a jump."""
        chosen = self.breaks.copy()
        chosen[::stride] = True
        chosen[:-1] |= self.breaks[1:]
        chosen[-1] = True
        return np.flatnonzero(chosen)


def path_of(columns: Columns) -> Path:
    """Sorted by the quantities, those with the fewest values first."""
    points = len(columns[0][0])
    counts = [len(np.unique(hi)) if len(columns) > 1 else points for hi, _ in columns]
    place = tuple(int(i) for i in np.argsort(counts, kind="stable"))
    order = np.lexsort([columns[i][0] for i in reversed(place)])
    s = np.arange(points, dtype=float)
    new = np.zeros(points, bool)
    for i in place:
        values = columns[i][0][order]
        if counts[i] > 1:
            s = values
        new[1:] |= values[1:] != values[:-1]
        if new[1:].all():
            break
    breaks = np.zeros(points, bool)
    breaks[1:] = np.diff(s) < 0
    change = np.max([np.abs(np.diff(_logarithm(hi[order]))) for hi, _ in columns], axis=0)
    return Path(order, place, s, breaks, change)


def nearest(
    columns: Columns, points: NDArray[np.int64], to: NDArray[np.int64]
) -> NDArray[np.int64]:
    """For every point the place in `to` of that among those which is nearest in all logarithms."""
    square = np.zeros((len(points), len(to)))
    for hi, _ in columns:
        square += (_logarithm(hi[points])[:, None] - _logarithm(hi[to])) ** 2
    return np.asarray(square.argmin(axis=1))


def _logarithm(values: NDArray[np.float64]) -> NDArray[np.float64]:
    """Of the size; scaled quantities are near 1, and much smaller ones are all alike."""
    return np.asarray(np.log(np.maximum(np.abs(values), SMALL)))
