"""The roots of a matrix over a grid: reduced to an eigenvalue problem once, replayed and proven at every point."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from .deflation import Standard, standard
from .eigendiscs import eigen_sheet
from .family import Grid
from .matrixfamily import MatrixFamily
from .omega import in_omega
from .replay import Ball
from .scaling import Structure
from .solved import Solved, Status

SAMPLES = 12
"""Points at which pivots are looked at."""
CHUNK = 64
"""Matrices at a time: enough to outweigh the cost of a call, few enough to stay near in cache."""
GOLDEN = 0.6180339887498949


@dataclass(frozen=True)
class ReducedWay:
    """Discs about the eigenvalues of the reduced matrix; nothing is proven where there is none."""

    family: MatrixFamily
    standard: Standard | None
    block: int = 1024

    @classmethod
    def of(cls, family: MatrixFamily, grid: Grid, points: NDArray[np.int64]) -> ReducedWay:
        """Ready for a grid, pivots chosen by size at some of these points, which are spread over all."""
        if not len(points):
            return cls(family, None)
        spread = (np.arange(min(SAMPLES, len(points))) * GOLDEN % 1 * len(points)).astype(int)
        chosen = np.sort(points[spread])
        return cls(family, standard(family, [(hi[chosen], lo[chosen]) for hi, lo in grid]))

    @property
    def words(self) -> str:
        left, size = self.family.degree, self.family.size
        return (
            f"reduced pencil ({left} of {size} unknowns left), "
            "certified discs in twice the working precision"
        )

    def prove(self, grid: Grid) -> Solved:
        points = len(grid[0][0])
        made = Solved.empty(points, self.family.degree)
        if self.standard is None:
            made.state[:] = Status.NOT_CERTIFIED
            return made
        whole = self.standard.entries(self.family.balls(grid), points)
        is_real = not np.iscomplexobj(whole.high)
        structure = Structure(0, 1, self.family.turned, is_real)
        for first in range(0, points, CHUNK):
            here = slice(first, first + CHUNK)
            sheet = eigen_sheet(
                Ball(*(part[here] for part in whole)), self.standard.places, self.family.degree
            )
            in_omega(sheet, structure, self.standard.unknown, made.at(here))
        return made
