"""The order in which the points of a grid follow each other closely, so that roots can be carried along."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray

Columns: TypeAlias = list[tuple[NDArray[np.float64], NDArray[np.float64]]]
"""Real swept quantities over the points, high and low part."""

FARTHEST = 64
"""Points from node to node at most."""


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
    """

    order: NDArray[np.int64]
    place: tuple[int, ...]
    s: NDArray[np.float64]
    breaks: NDArray[np.bool_]

    def stride(self, far: float) -> int:
        """How many points lie within a factor exp(far) of s, as a power of two."""
        within = far / self._step if self._step * FARTHEST > far else FARTHEST
        return int(2 ** np.floor(np.log2(max(within, 1.0))))

    @cached_property
    def _step(self) -> float:
        """The median of log s from point to point."""
        steps = np.abs(np.diff(np.log(np.abs(self.s))))
        steps = steps[np.isfinite(steps) & ~self.breaks[1:]]
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
    return Path(order, place, s, breaks)
