"""Dependent rows and columns of a singular matrix, found at a random point of a random prime field."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from flint import nmod_mat

from .gaussian import Gaussian
from .place import Relation, random_place, value_at


def field_image(
    table: Mapping[tuple[int, int], Gaussian], size: int, relations: Sequence[Relation]
) -> nmod_mat:
    """The matrix at a random point where every relation among the generators holds."""
    variables = len(next(iter(table.values())).re.degrees()) if table else 0
    prime, point = random_place(relations, variables)
    made = nmod_mat(size, size, prime)
    for (i, j), p in table.items():
        made[i, j] = value_at(p, point, prime)
    return made


def null_support(matrix: nmod_mat) -> tuple[int, ...]:
    """The columns of the shortest null vector of the reduced echelon form.

    None of these vectors holds the columns of a shorter dependence.
    """
    reduced, rank = matrix.rref()
    filled = [[j for j in range(matrix.ncols()) if int(reduced[i, j])] for i in range(rank)]
    pivots = [row[0] for row in filled]
    free = (j for j in range(matrix.ncols()) if j not in pivots)
    supports = [tuple(sorted([j, *(row[0] for row in filled if j in row)])) for j in free]
    return min(supports, key=len, default=())
