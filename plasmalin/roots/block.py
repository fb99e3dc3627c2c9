"""One block of points: nodes solved first, their roots carried to the points between, every root proven."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from .carry import Carrier
from .coefficients import coefficients
from .omega import in_omega
from .path import Columns, nearest, path_of
from .scaling import Scaled, Table, scaled
from .sheets import UNKNOWN, Sheet, from_nothing, from_similar, proven
from .solved import Solved, Status

NEAR, FAR = 0.02, 0.8
"""Logarithmic distance between nodes: where one step should do, and where several may be needed."""
DENSE = 4
"""Points from node to node that make near nodes worth while."""
ALONE = 48
"""So few points are solved from nothing."""
WORK = 49152
"""Numbers in one work array: enough to outweigh the cost of a call, few enough to stay near in cache."""
COLD = 256
"""So many points at least are solved from nothing before others start from these."""
TERMS = 2**21
"""Terms times points at a time, which bounds the memory of polynomials with very many terms."""


@np.errstate(all="ignore")
def solve_block(table: Table, columns: Columns) -> Solved:
    """All roots at all points of the columns; NOT_CERTIFIED where nothing is proven.

    Points that span too much for one scale are halved. Numbers that overflow on the way prove nothing, so
    floating-point warnings are off.
    """
    points = len(columns[0][0])
    made, near = Solved.empty(points, table.roots), scaled(table, columns)
    if near is not None:
        sheet = _sheet(near, table.degree, True)
        size = max(64, WORK // table.degree)
        for first in range(0, points, size):
            here = slice(first, first + size)
            in_omega(sheet.at(here), table.structure, near.unknown, made.at(here))
    elif points == 1:
        made.state[:] = Status.NOT_CERTIFIED
    else:
        order, middle = path_of(columns).order, points // 2
        for half in (order[:middle], order[middle:]):
            made.put(half, solve_block(table, [(hi[half], lo[half]) for hi, lo in columns]))
    return made


def _sheet(near: Scaled, degree: int, dense: bool) -> Sheet:
    """The roots at all points; those that cannot be carried along the path are solved at the end.

    The nodes of the path are solved the same way, along a path of their own: on a grid of two quantities that one
    runs across.
    """
    points = len(near.columns[0][0])
    size = max(64, min(WORK // degree, TERMS // len(near.terms.high)))
    path = path_of(near.columns)
    ordered, made = near.along(path), Sheet.unknown(degree, points)
    stride = path.stride(NEAR) if dense else 1
    rough = stride < DENSE
    if rough:
        stride = path.stride(FAR)
    left, nodes = np.arange(points), path.nodes(stride)
    if points > ALONE and 2 * len(nodes) <= points:  # jumps everywhere leave nothing between nodes
        sheet = _sheet(ordered.at(nodes), degree, False)
        made.copy_from(sheet, path.order[nodes])
        carrier = Carrier.of(ordered, path, nodes, sheet)
        for chosen in _batches(np.delete(left, nodes), size):
            c = coefficients(ordered, degree, chosen)
            made.copy_from(proven(c, carrier.starts(chosen), rough), path.order[chosen])
        left = np.flatnonzero(made.real[path.order] == UNKNOWN)
    if len(left):
        _scattered(ordered, degree, left, path.order, made, size)
    return made


def _scattered(
    near: Scaled,
    degree: int,
    points: NDArray[np.int64],
    places: NDArray[np.int64],
    made: Sheet,
    size: int,
) -> None:
    """Some points from nothing, the others from the roots of the nearest of these."""
    every = max(len(points) // COLD, 1)
    seeds = points[::every]
    solved = from_nothing(coefficients(near, degree, seeds))
    made.copy_from(solved, places[seeds])
    known = np.flatnonzero(solved.real != UNKNOWN)
    for chosen in _batches(np.delete(points, slice(None, None, every)), size):
        c = coefficients(near, degree, chosen)
        if len(known):
            beside = known[nearest(near.columns, chosen, seeds[known])]
            found = from_similar(c, solved.at(beside))
        else:
            found = from_nothing(c)
        made.copy_from(found, places[chosen])


def _batches(points: NDArray[np.int64], size: int) -> Iterator[NDArray[np.int64]]:
    return (points[first : first + size] for first in range(0, len(points), size))
