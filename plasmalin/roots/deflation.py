"""A matrix polynomial in omega reduced to a standard eigenvalue problem, once for all points of a grid.

Rows without omega are constraints: each eliminates an unknown, until the part with omega is regular (any index). The
same with the two parts exchanged removes roots that are identically zero. What is left is H x = omega x. Every step
leaves the determinant as it is, up to its pivot, so that no root is lost or made.

Pivots are chosen by size at some points of the grid and by sparsity; a `Tape` records the steps.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Collection
from dataclasses import dataclass
from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray

from ..exact.pencil import Place
from .family import Family, Grid
from .matrixfamily import MatrixFamily
from .replay import ONE, ZERO, Ball, Program, Tape

GROWTH, LOST = 8.0, 16.0
"""A pivot is large enough if entries grow by so many bits at most, and accurate if it lost so many of its own."""
MOST = 64.0
"""One that is worse by so many bits at a sample point is as bad there as one that vanishes."""

Line: TypeAlias = dict[int, int]
"""Registers by column."""
Leaves: TypeAlias = dict[tuple[int, int, int], int]
"""Registers of the coefficients, by row, column and power of omega."""


class Pencil:
    """A x = omega B x: registers of a tape by row and column.

    Parameters
    ----------
    tape : Tape
    a, b : dict of int to Line
    """

    def __init__(self, tape: Tape, a: dict[int, Line], b: dict[int, Line]) -> None:
        self.tape, self.parts = tape, (a, b)
        self._zero, self._one = tape.number(ZERO), tape.number(ONE)

    def standard(self) -> tuple[dict[Place, int], int]:
        """H, and how many roots vanish identically."""
        self._deflate(1)
        zeros = self._deflate(0)
        self._deflate(1)
        pivots = self._diagonal()
        place = {j: n for n, j in enumerate(pivots.values())}
        a, b = self.parts
        made = {
            (n, place[j]): self.tape.over(register, b[i][pivots[i]])
            for n, i in enumerate(pivots)
            for j, register in a[i].items()
        }
        return made, zeros

    def _deflate(self, level: int) -> int:
        """Eliminates unknowns until one part is regular: how many."""
        removed, (lead, rest) = 0, (self.parts[level], self.parts[1 - level])
        while dependent := self._dependent(lead):
            for i, row in [(i, self._combined(rest, c)) for i, c in dependent.items()]:
                lead[i], rest[i] = {}, row
            while dependent:
                i, j = self._pivot(dependent, rest, lead)
                self._substitute(i, j, rest)
                del dependent[i]
                removed += 1
        return removed

    def _dependent(self, lines: dict[int, Line]) -> dict[int, Line]:
        """Rows of which a combination with other rows vanishes, and that combination.

        By elimination on a copy, so that all other rows stay as sparse as they are.
        """
        left = {i: dict(line) for i, line in lines.items()}
        combinations = {i: {i: self._one} for i in lines}
        found: dict[int, Line] = {}
        while True:
            found |= {i: combinations[i] for i, line in left.items() if not line}
            left = {i: line for i, line in left.items() if line}
            if not left:
                return found
            i, j = self._pivot(left, left)
            row = left.pop(i)
            for q, line in left.items():
                if j in line:
                    factor = self.tape.over(line.pop(j), row[j])
                    self._subtract(line, factor, row, j)
                    self._subtract(combinations[q], factor, combinations[i])

    def _combined(self, lines: dict[int, Line], combination: Line) -> Line:
        """Minus the combination of the rows."""
        made: Line = {}
        for q, factor in combination.items():
            self._subtract(made, factor, lines[q])
        return made

    def _diagonal(self) -> dict[int, int]:
        """Gauss and Jordan on a regular B, A carried along: the column of every row."""
        pivots: dict[int, int] = {}
        lines = self.parts[1]
        while left := [i for i in lines if i not in pivots]:
            i, j = self._pivot(left, lines, self.parts[0])
            pivots[i] = j
            for q in lines:
                if q != i and j in lines[q]:
                    factor = self.tape.over(lines[q].pop(j), lines[i][j])
                    self._subtract(lines[q], factor, lines[i], j)
                    self._subtract(self.parts[0][q], factor, self.parts[0][i])
        return pivots

    def _substitute(self, i: int, j: int, lines: dict[int, Line]) -> None:
        """Row i, all of whose entries are among these, gives the unknown j."""
        row = lines[i]
        for part in self.parts:
            del part[i]
            for line in part.values():
                if j in line:
                    self._subtract(line, self.tape.over(line.pop(j), row[j]), row, j)

    def _subtract(self, line: Line, factor: int, row: Line, but: int | None = None) -> None:
        """line -= factor row, without what vanishes identically."""
        for j, register in row.items():
            if j != but:
                made = self.tape.minus(line.pop(j, self._zero), factor, register)
                if self.tape.image(made):
                    line[j] = made

    def _pivot(
        self, rows: Collection[int], lines: dict[int, Line], *more: dict[int, Line]
    ) -> Place:
        """Among the entries of some rows one that is large at the sample points, then one that fills little.

        What it fills is among these lines and some more with the same rows.
        """
        across: dict[int, list[int]] = defaultdict(list)
        below: dict[int, list[int]] = defaultdict(list)
        for part in (lines, *more):
            for i, line in part.items():
                for j, register in line.items():
                    across[i].append(register)
                    below[j].append(register)
        chosen = sorted((i, j) for i in rows for j in lines[i])
        others = np.array([(len(across[i]) - 1, len(below[j]) - 1) for i, j in chosen])
        row = {i: self.tape.largest(across[i]) for i in rows}
        column = {j: self.tape.largest(below[j]) for _, j in chosen}
        pivots = [lines[i][j] for i, j in chosen]
        with np.errstate(invalid="ignore"):
            growth = np.array([row[i] + column[j] for i, j in chosen]) - self.tape.bits(pivots)
        bad = np.rint(
            (_beyond(growth, GROWTH) + _beyond(self.tape.lost(pivots), LOST)).mean(axis=1)
        )
        bad[others[:, 1] == 0] = 0  # nothing is divided by it
        return chosen[int(np.lexsort((others.prod(axis=1), bad))[0])]


def _beyond(bits: NDArray[np.float64], limit: float) -> NDArray[np.float64]:
    """By how much, NaN (a pivot that vanishes among entries that do) being the worst."""
    return np.fmin(np.maximum(bits - limit, 0.0), MOST)


@dataclass(frozen=True)
class Standard:
    """H x = x omega / 2^unknown.

    Attributes
    ----------
    program : Program
        Makes the entries of H from the swept quantities.
    places : ndarray of int, shape (entries, 2)
        Row and column of each, row by row.
    unknown : int
    """

    program: Program
    places: NDArray[np.int64]
    unknown: int

    def entries(self, swept: list[Ball], points: int) -> Ball:
        """H at every point, shape (points, entries)."""
        balls = self.program.run(swept)
        return Ball(
            *(
                np.stack([np.broadcast_to(x, points) for x in parts], axis=1)
                for parts in zip(*balls, strict=True)
            )
        )


def standard(family: MatrixFamily, samples: Grid) -> Standard:
    """The reduction, with pivots that are good at some points.

    Parameters
    ----------
    family : MatrixFamily
    samples : Grid
        The swept quantities at these points.

    Raises
    ------
    ArithmeticError
        When the image of the result does not have the determinant of the whole.
    """
    near, unknown = family.balanced(samples)
    tape = Tape(family.image, family.images, family.balls(samples))
    leaves = {
        (*ij, power): register
        for ij, entry in near.items()
        for power, register in _coefficients(tape, entry).items()
    }
    made, zeros = Pencil(tape, *_linear(tape, leaves, family.size)).standard()
    images = {ij: {0: -tape.image(register)} for ij, register in made.items()}
    for n in range(family.degree):
        images.setdefault((n, n), {0: 0})[1] = 1
    reached = family.image.determinant(images, family.degree)
    if zeros != family.zeros or not _same_roots(family, reached, unknown):
        raise ArithmeticError("the reduced matrix does not have the determinant of the whole")
    places = sorted(made)
    return Standard(tape.program([made[p] for p in places]), np.array(places), unknown)


def _same_roots(family: MatrixFamily, reached: list[int], unknown: int) -> bool:
    """Whether the image of the determinant, freed of its zeros, is that of det(omega - H) times a constant."""
    prime = family.image.prime
    step = pow(2, unknown % (prime - 1), prime)
    whole = [c * pow(step, n, prime) for n, c in enumerate(family.determinant[family.zeros :])]
    same = all((a - whole[-1] * b) % prime == 0 for a, b in zip(whole, reached, strict=True))
    return len(reached) == family.degree + 1 and same


def _coefficients(tape: Tape, family: Family) -> dict[int, int]:
    """The register of the coefficient of every power of omega, its sign turned beyond the constant one.

    Products come from a - b c with a = 0, so each turns the sign.
    """
    found: dict[int, int] = {}
    zero, one = tape.number(ZERO), tape.number(ONE)
    for row, (re, im) in zip(family.exponents.tolist(), family.coefficients, strict=True):
        factors = [place for place, n in enumerate(row[1:]) for _ in range(n)]
        sign = (-1) ** (len(factors) + (row[0] > 0))
        term = tape.number((sign * re, sign * im))
        for place in factors[:-1]:
            term = tape.minus(zero, term, place)
        if factors:
            found[row[0]] = tape.minus(found.get(row[0], zero), term, factors[-1])
        elif row[0] in found:
            found[row[0]] = tape.minus(found[row[0]], tape.number((-sign * re, -sign * im)), one)
        else:
            found[row[0]] = term
    return found


def _linear(tape: Tape, leaves: Leaves, size: int) -> tuple[dict[int, Line], dict[int, Line]]:
    """A and B of A x = omega B x: for an unknown with higher powers also omega x, omega^2 x ... are unknowns."""
    a, b = ({i: Line() for i in range(size)} for _ in range(2))
    beyond: dict[tuple[int, int], int] = {}
    for _, j, power in leaves:
        for p in range(1, power):
            if (j, p) not in beyond:
                beyond[j, p] = size + len(beyond)
    for (i, j, power), register in leaves.items():
        if power:
            b[i][beyond.get((j, power - 1), j)] = register
        else:
            a[i][j] = register
    for (j, p), i in beyond.items():
        a[i], b[i] = {i: tape.number(ONE)}, {beyond.get((j, p - 1), j): tape.number(ONE)}
    return a, b
