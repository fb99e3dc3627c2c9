"""The roots of a block of points, and what is known of each."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from enum import IntEnum
from typing import Any, TypeAlias

import numpy as np
from numpy.typing import NDArray

from .doubledouble import Array

Arrays: TypeAlias = tuple[NDArray[np.complex128], Array, Array, NDArray[np.int8]]
"""omega, radius, growth radius and state, of one shape."""


def listed(arrays: Arrays) -> list[NDArray[Any]]:
    return [arrays[0], arrays[1], arrays[2], arrays[3]]


def each(function: Callable[[NDArray[Any]], NDArray[Any]], arrays: Arrays) -> Arrays:
    """The function of every array."""
    omega, radius, growth_radius, state = map(function, listed(arrays))
    return omega, radius, growth_radius, state


def joined(parts: Sequence[Arrays], axis: int) -> Arrays:
    """End to end; one part is not copied."""
    if len(parts) == 1:
        return parts[0]
    omega, radius, growth_radius, state = (
        np.concatenate(p, axis=axis) for p in zip(*parts, strict=True)
    )
    return omega, radius, growth_radius, state


class Status(IntEnum):
    """Per root: proven, exactly zero or at infinity only at this point, not proven, or left out with its point."""

    CERTIFIED = 0
    ZERO = 1
    INFINITE = 2
    NOT_CERTIFIED = 3
    MASKED = 4

    @staticmethod
    def words() -> NDArray[np.str_]:
        """By code."""
        return np.array(["certified", "zero", "at infinity", "not certified", "masked"])


@dataclass(frozen=True)
class Solved:
    """Roots of one block, shape (points, roots) each, and how many points were solved exactly."""

    omega: NDArray[np.complex128]
    radius: Array
    growth_radius: Array
    state: NDArray[np.int8]
    exact: int = 0

    @classmethod
    def empty(cls, points: int, roots: int, exact: int = 0) -> Solved:
        """Room for roots."""
        shape = (points, roots)
        omega, state = np.empty(shape, np.complex128), np.empty(shape, np.int8)
        return cls(omega, np.empty(shape), np.empty(shape), state, exact)

    def mask(self, points: NDArray[np.int64] | slice) -> None:
        self.omega[points], self.state[points] = complex(np.nan, np.nan), Status.MASKED
        self.radius[points], self.growth_radius[points] = np.inf, np.inf

    def arrays(self) -> Arrays:
        return self.omega, self.radius, self.growth_radius, self.state

    def at(self, points: slice) -> Solved:
        return Solved(*each(lambda a: a[points], self.arrays()))

    def put(self, points: NDArray[np.int64], other: Solved) -> None:
        """Copy; points that follow each other as a slice, which is quicker."""
        place: Any = points
        if len(points) and bool((np.diff(points) == 1).all()):
            place = slice(int(points[0]), int(points[-1]) + 1)
        for mine, theirs in zip(listed(self.arrays()), listed(other.arrays()), strict=True):
            mine[place] = theirs
