"""One exact matrix of polynomials in omega for every point of a grid."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property

import numpy as np

from ..exact.pencil import Image, Place, circle_point, determinant_of
from ..exact.rational import times_i
from .family import Exact, Family, Grid, exact_value
from .replay import TINY, Ball
from .scaling import in_binary

ROUNDED = 2.0**-103
"""A sine and a cosine in high and low part are off by no more, relatively, from their point of the unit circle."""


@dataclass(frozen=True, eq=False)
class MatrixFamily:
    """det A(omega; g_1 ... g_G) with polynomials as entries, where that determinant would be too long to write out.

    Attributes
    ----------
    entries : dict of (int, int) to Family
    size : int
    turned : bool
        The unknown is s, omega = i s.
    circles : tuple of (int, int)
        Swept quantities that are sine and cosine of one angle. Their exact values are the rational point of the unit
        circle next to the values of the grid.
    image : Image
    images : tuple of int
        The images of the swept quantities.
    """

    entries: dict[Place, Family]
    size: int
    turned: bool
    circles: tuple[tuple[int, int], ...]
    image: Image
    images: tuple[int, ...]

    @cached_property
    def determinant(self) -> list[int]:
        """The image of the determinant, lowest power first; empty where it vanishes identically."""
        entries = {ij: self._image(entry) for ij, entry in self.entries.items()}
        return self.image.determinant(entries, self.size)

    def _image(self, entry: Family) -> dict[int, int]:
        prime, made = self.image.prime, dict[int, int]()
        for (power, *exponents), c in zip(
            entry.exponents.tolist(), entry.coefficients, strict=True
        ):
            value = self.image.number(c)
            for base, n in zip(self.images, exponents, strict=True):
                value = value * pow(base, n, prime) % prime
            made[power] = (made.get(power, 0) + value) % prime
        return made

    @cached_property
    def zeros(self) -> int:
        """Roots that vanish identically."""
        return next(n for n, c in enumerate(self.determinant) if c)

    @cached_property
    def degree(self) -> int:
        """How many others there are in general."""
        return len(self.determinant) - 1 - self.zeros

    def at(self, grid: Grid, point: int) -> list[Exact]:
        """The exact polynomial of these others at one grid point, lowest power of omega first."""
        values = [exact_value(hi[point], lo[point]) for hi, lo in grid]
        for sine, cosine in self.circles:
            s, c = circle_point(values[sine][0], values[cosine][0])
            values[sine], values[cosine] = (s, values[sine][1]), (c, values[cosine][1])
        entries = {ij: entry.of(values) for ij, entry in self.entries.items()}
        found = determinant_of(entries, self.size)[self.zeros :]
        found += [(Fraction(0), Fraction(0))] * (self.degree + 1 - len(found))
        return [times_i(c, 3 * n if self.turned else 0) for n, c in enumerate(found)]

    def balls(self, grid: Grid) -> list[Ball]:
        """The swept quantities with their errors."""
        rounded = {place for circle in self.circles for place in circle}
        made = []
        for place, (hi, lo) in enumerate(grid):
            bound = ROUNDED * np.abs(hi) + TINY if place in rounded else np.zeros(hi.shape)
            made.append(Ball(hi, lo, bound))
        return made

    def balanced(self, grid: Grid) -> tuple[dict[Place, Family], int]:
        """Rows, columns and omega times powers of two that bring the entries near 1, by least squares.

        Returns
        -------
        (entries, unknown)
            omega is 2^unknown times what stands for it.
        """
        with np.errstate(divide="ignore"):
            swept = np.log2([np.abs(hi) for hi, _ in grid])
        swept[~np.isfinite(swept)] = 0.0
        rows, bits = [], []
        for (i, j), entry in self.entries.items():
            for (power, *exponents), c in zip(entry.exponents, entry.coefficients, strict=True):
                row = np.zeros(2 * self.size + 1)
                row[i] = row[self.size + j] = 1
                row[-1] = power
                rows.append(row)
                bits.append(-_bits(c) - float(exponents @ swept.mean(axis=1)))
        found = np.rint(np.linalg.lstsq(np.array(rows), np.array(bits))[0])
        *shifts, unknown = found.astype(int).tolist()
        near = {
            (i, j): entry.scaled_by(shifts[i] + shifts[self.size + j], unknown)
            for (i, j), entry in self.entries.items()
        }
        return near, unknown


def _bits(c: Exact) -> int:
    """The exponent of two of the larger part."""
    return max(in_binary(abs(x))[2] for x in c if x)
