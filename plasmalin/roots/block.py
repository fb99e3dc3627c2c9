"""One block of points: nodes solved first, their roots carried to the points between, every root proven."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from .carry import Carrier
from .coefficients import coefficients
from .omega import in_omega
from .path import Columns, Path, nearest, path_of
from .scaling import Scaled, Table, scaled
from .sheets import UNKNOWN, Sheet, from_nothing, from_similar, proven
from .solved import Solved, Status

NEAR, FAR = 0.02, 0.8
"""Logarithmic distance between nodes: where one step should do, and where several may be needed."""
DENSE = 4
"""Points from node to node that make near nodes worth while."""
ALONE = 48
"""So few points are solved from nothing."""
WORK = 24576
"""Numbers in one work array: enough to outweigh the cost of a call, few enough to stay near in cache."""
COLD = 256
"""So many points at most are solved from nothing; more of them start from these."""
TERMS = 2**21
"""Terms times points at a time, which bounds the memory of polynomials with very many terms."""


@np.errstate(all="ignore")
def solve_block(table: Table, columns: Columns, points: NDArray[np.int64], made: Solved) -> None:
    """All roots at all points of the columns, put where `points` says; NOT_CERTIFIED where nothing is proven.

    Points that span too much for one scale are halved. Numbers that overflow on the way prove nothing, so
    floating-point warnings are off.
    """
    near = scaled(table, columns)
    if near is not None:
        for chosen, sheet in _sheets(near, table.degree, True):
            made.put(points[chosen], in_omega(sheet, table.structure, near.unknown))
    elif len(points) == 1:
        made.state[points] = Status.NOT_CERTIFIED
    else:
        order, middle = path_of(columns).order, len(points) // 2
        for part in (order[:middle], order[middle:]):
            half = [(hi[part], lo[part]) for hi, lo in columns]
            solve_block(table, half, points[part], made)


def _sheets(near: Scaled, degree: int, dense: bool) -> Iterator[tuple[NDArray[np.int64], Sheet]]:
    """Batch by batch the points and their roots; what cannot be carried comes again at the end, from nothing.

    The nodes of the path are solved the same way, along a path of their own: on a grid of two quantities that one
    runs across.
    """
    points = len(near.columns[0][0])
    size = max(64, min(WORK // degree, TERMS // len(near.terms.high)))
    path = path_of(near.columns)
    ordered = near.along(path)
    stride = path.stride(NEAR) if dense else 1
    rough = stride < DENSE
    if rough:
        stride = path.stride(FAR)
    rest = [np.arange(points)]
    if stride > 1 and points > ALONE:
        carrier = _carrier(ordered, path, path.nodes(stride), degree)
        yield path.order[carrier.nodes], carrier.sheet
        rest.clear()
        between = np.delete(np.arange(points), carrier.nodes)
        for chosen in _batches(between, size):
            sheet = proven(coefficients(ordered, degree, chosen), carrier.starts(chosen), rough)
            known = sheet.real != UNKNOWN
            rest.append(chosen[~known])
            if known.all():
                yield path.order[chosen], sheet
            else:
                yield path.order[chosen[known]], sheet.at(known)
    left = np.concatenate(rest)
    if len(left):
        for chosen, sheet in _scattered(ordered, degree, left, size):
            yield path.order[chosen], sheet


def _scattered(
    near: Scaled, degree: int, points: NDArray[np.int64], size: int
) -> Iterator[tuple[NDArray[np.int64], Sheet]]:
    """Some points from nothing, the others from the roots of the nearest of these."""
    every = -(-len(points) // COLD)
    seeds = points[::every]
    solved = from_nothing(coefficients(near, degree, seeds))
    yield seeds, solved
    known = np.flatnonzero(solved.real != UNKNOWN)
    for chosen in _batches(np.delete(points, slice(None, None, every)), size):
        c = coefficients(near, degree, chosen)
        if len(known):
            beside = known[nearest(near.columns, chosen, seeds[known])]
            yield chosen, from_similar(c, solved.at(beside))
        else:
            yield chosen, from_nothing(c)


def _batches(points: NDArray[np.int64], size: int) -> Iterator[NDArray[np.int64]]:
    return (points[first : first + size] for first in range(0, len(points), size))


def _carrier(ordered: Scaled, path: Path, nodes: NDArray[np.int64], degree: int) -> Carrier:
    sheet = Sheet.unknown(degree, len(nodes))
    for chosen, part in _sheets(ordered.at(nodes), degree, False):
        sheet.copy_from(part, chosen)
    return Carrier.of(ordered, path, nodes, sheet)
