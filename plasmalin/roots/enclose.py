"""Every root of a family at every point, with a proven radius.

The grid is cut into fixed blocks, each solved on its own, so that the result does not depend on how many workers
share them. In a block of a polynomial, roots are found from nothing at a few nodes, carried along the path, and proven
at every point by the discs of `discs.py`; in one of a matrix they are the eigenvalues of its reduced form
(`reduced.py`). Points that these do not prove (multiple roots, a leading or lowest coefficient that vanishes) are
solved exactly, one by one.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import Any, Protocol

import numpy as np
from numpy.typing import NDArray

from .block import solve_block
from .family import Family, Grid
from .matrixfamily import MatrixFamily
from .parallel import Workers, mapped
from .pointwise import solved_exactly
from .reduced import ReducedWay
from .scaling import Table, columns_of, table_of
from .solved import Arrays, Solved, Status, each, joined, listed

ZERO = Status.ZERO
BLOCK = 32768
KEPT = 31 * 2**17
"""Doubles in 31 MiB."""
FEW = 8
"""So few points are solved exactly as quickly."""


@dataclass(frozen=True)
class Enclosure:
    """Roots over a grid.

    Attributes
    ----------
    omega : ndarray of complex128, shape (points, roots), rad/s
    radius : ndarray of float64, shape (points, roots), rad/s
        The true root is not farther away.
    growth_radius : ndarray of float64, shape (points, roots), rad/s
        The same for the imaginary part alone: a growth rate larger than this has its sign proven.
    state : ndarray of int8, shape (points, roots)
        Codes of `Status`.
    method : str
        What was done, and at how many points.
    """

    omega: NDArray[np.complex128]
    radius: NDArray[np.float64]
    growth_radius: NDArray[np.float64]
    state: NDArray[np.int8]
    method: str

    @classmethod
    def empty(
        cls, points: int, roots: int, status: Status = Status.CERTIFIED, method: str = ""
    ) -> Enclosure:
        """Zeros, exact."""
        shape = (points, roots)
        omega, state = np.zeros(shape, np.complex128), np.full(shape, status, np.int8)
        return cls(omega, np.zeros(shape), np.zeros(shape), state, method)

    @property
    def status(self) -> NDArray[np.str_]:
        """The state of every root in words."""
        return Status.words()[self.state]

    def arrays(self) -> Arrays:
        return self.omega, self.radius, self.growth_radius, self.state

    def reordered(self, order: NDArray[np.int64]) -> Enclosure:
        """The roots of every point in another order."""
        taken = each(lambda a: np.take_along_axis(a, order, axis=1), self.arrays())
        return Enclosure(*taken, self.method)

    def sorted(self) -> Enclosure:
        """By real part, then imaginary part."""
        return self.reordered(np.argsort(self.omega, axis=1, kind="stable"))


class Way(Protocol):
    """How roots are proven: points in one task, what it is called, and the work for a grid without gaps."""

    @property
    def block(self) -> int: ...

    @property
    def words(self) -> str: ...

    def prove(self, grid: Grid) -> Solved:
        """The roots at all points; NOT_CERTIFIED where nothing is proven."""


@dataclass(frozen=True)
class PolynomialWay:
    """Discs from the values of one polynomial."""

    table: Table
    block: int = BLOCK
    words: str = "certified discs in twice the working precision"

    def prove(self, grid: Grid) -> Solved:
        return solve_block(self.table, columns_of(grid))


def _way(family: Family | MatrixFamily, grid: Grid) -> Way:
    if isinstance(family, Family):
        return PolynomialWay(table_of(family, grid))
    points = np.flatnonzero(_usable(grid))
    return ReducedWay.of(family, grid, points if len(points) >= FEW else points[:0])


def enclose(
    family: Family | MatrixFamily, grid: Grid, *, points: int, workers: Workers = 1
) -> Enclosure:
    """All roots of one family, `family.degree` at every point, sorted by (Re, Im).

    Parameters
    ----------
    family : Family or MatrixFamily
        Square-free: a factor that is repeated belongs into `merge`.
    grid : sequence of (high, low)
        The swept quantities, each part of shape (points,), real or complex.
    points : int
        How many points there are (a family without swept quantities has no grid to tell).
    workers : int or callable
        Processes, or a callable like `map`; the result is the same, bit by bit.

    Returns
    -------
    Enclosure
    """
    if not grid:
        one = solved_exactly(family, [], np.zeros(1, np.int64))
        repeated = each(lambda a: np.repeat(a, points, axis=0), one.arrays())
        return Enclosure(*repeated, _method(PolynomialWay.words, points, repeated[3]))
    way = _way(family, grid)
    blocks = _blocks(family, way, grid, workers)
    if 0 < points <= way.block:
        (made,) = blocks
        return Enclosure(*made.arrays(), _method(way.words, made.exact, made.state))
    made, first, exact = Solved.empty(points, family.degree), 0, 0
    for block in blocks:
        made.put(np.arange(first, first + len(block.omega)), block)
        first, exact = first + len(block.omega), exact + block.exact
    return Enclosure(*made.arrays(), _method(way.words, exact, made.state))


def enclosed_blocks(
    family: Family | MatrixFamily, grid: Grid, *, workers: Workers = 1
) -> Iterator[Solved]:
    """The same, block by block in the order of the points, for grids whose roots would not fit in memory."""
    return _blocks(family, _way(family, grid), grid, workers)


def _blocks(
    family: Family | MatrixFamily, way: Way, grid: Grid, workers: Workers
) -> Iterator[Solved]:
    points, size = len(grid[0][0]), way.block
    tasks = (
        (family, way, [(hi[b : b + size], lo[b : b + size]) for hi, lo in grid])
        for b in range(0, points, size)
    )
    for *arrays, exact in mapped(_block, tasks, workers if points > size else 1):
        omega, radius, growth_radius, state = arrays
        yield Solved(omega, radius, growth_radius, state, int(exact))


def _block(task: tuple[Family | MatrixFamily, Way, Grid]) -> list[NDArray[Any]]:
    """One block: masked points left out, the rest solved; those without a proof exactly, and how many they are."""
    family, way, grid = task
    _keep_freed_memory()
    made = Solved.empty(len(grid[0][0]), family.degree)
    usable = _usable(grid)
    points = np.flatnonzero(usable)
    made.mask(np.flatnonzero(~usable))
    if len(points) >= FEW:
        found = way.prove([(hi[points], lo[points]) for hi, lo in grid])
        if len(points) == len(usable):
            made = found
        else:
            made.put(points, found)
        left = made.state == Status.NOT_CERTIFIED
        points = np.flatnonzero(left.any(axis=1)) if left.any() else points[:0]
    if len(points):
        made.put(points, solved_exactly(family, grid, points))
    exact = int((made.state[points, 0] != Status.MASKED).sum())
    return [*listed(made.arrays()), np.array(exact)]


def _usable(grid: Grid) -> NDArray[np.bool_]:
    """Points at which every quantity is finite."""
    finite = [np.isfinite(hi) & np.isfinite(lo) for hi, lo in grid]
    return np.asarray(np.logical_and.reduce(finite))


def _keep_freed_memory() -> None:
    """After one large array was taken and freed, glibc's allocator keeps what is freed up to its size.

    Else work arrays go back to the system and come as new, empty pages every time, which takes up to a third longer.
    """
    np.empty(KEPT)


def _method(words: str, exact: int, state: NDArray[np.int8]) -> str:
    points, masked = len(state), int((state == Status.MASKED).any(axis=1).sum())
    failed = int((state == Status.NOT_CERTIFIED).any(axis=1).sum())
    return (
        f"{words} at {points - exact - masked} of {points} points, exact ball arithmetic at {exact}"
        + (f" ({failed} of them without a proof)" if failed else "")
        + (f", {masked} left out" if masked else "")
    )


def merge(
    parts: Sequence[Enclosure],
    multiplicities: Sequence[int],
    *,
    points: int,
    zeros: int,
    degree: int,
) -> Enclosure:
    """The roots of all factors with their multiplicities and exact zeros, sorted by (Re, Im).

    Fewer than `degree` roots in all means that the missing ones are at infinity for these numbers.
    """
    columns = [p for p, m in zip(parts, multiplicities, strict=True) for _ in range(m)]
    missing = degree - zeros - sum(c.omega.shape[1] for c in columns)
    if len(columns) == 1 and not zeros and missing <= 0:
        return columns[0]
    columns.append(Enclosure.empty(points, zeros, Status.ZERO))
    if missing > 0:
        far = Enclosure.empty(points, missing, Status.INFINITE)
        far.omega[:], far.radius[:], far.growth_radius[:] = complex(np.inf, 0.0), np.inf, np.inf
        columns.append(far)
    methods = dict.fromkeys(p.method for p in parts)
    return Enclosure(*joined([c.arrays() for c in columns], 1), "; ".join(methods)).sorted()
