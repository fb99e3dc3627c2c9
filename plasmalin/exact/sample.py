"""A matrix at a random point of a random prime field, as polynomials in main, and what it tells about its solutions.

The solutions of M x = 0 that satisfy further rows S x = 0 are those of the tall matrix (M, S). The order to which the
common divisor of its maximal minors vanishes at a root counts them, chains of generalized solutions among them (the
local Smith form; Gohberg, Lancaster and Rodman 1982, Matrix Polynomials, from memory). That divisor is the one of
det(M + R S) over all constant R, by the formula of Cauchy and Binet, so that one random R shows its order at a root.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from functools import reduce
from itertools import pairwise
from random import Random
from typing import Any, TypeAlias

import sympy as sp
from flint import nmod_mat, nmod_poly

from .gaussian import Gaussian, lcm
from .place import in_main, random_place
from .reader import Reader, ring_of
from .ring import Ring

Row: TypeAlias = Mapping[int, sp.Expr]


def put_in(row: Row, values: Mapping[Any, sp.Expr]) -> dict[int, sp.Expr]:
    """A row with symbols replaced, without its zeros."""
    filled = {j: c.xreplace(values) for j, c in row.items()} if values else dict(row)
    return {j: c for j, c in filled.items() if c != 0}


class Sample:
    """Rows of expressions at a random point, each row cleared of denominators, its entries polynomials in main.

    Parameters
    ----------
    rows : sequence of mapping of int to Expr
        What is not zero, by column.
    main : Symbol
    others : sequence of Expr
        Further expressions (factors) that are wanted at the same point.
    """

    def __init__(
        self, rows: Sequence[Row], main: sp.Symbol, others: Sequence[sp.Expr] = ()
    ) -> None:
        ring = ring_of([*(c for row in rows for c in row.values()), *others, main], main)
        reader = Reader(ring)
        tops = [_cleared(row, reader, ring) for row in rows]
        self.prime, self._point = random_place(reader.relations, len(ring.generators) + 1)
        self.rows = [{j: self._image(p) for j, p in row.items()} for row, _ in tops]
        self.bottoms = [self._image(bottom) for _, bottom in tops]
        self.others = [self._image(reader.ratio(x).top) for x in others]

    def _image(self, p: Gaussian) -> nmod_poly:
        """A polynomial in main; every other variable at its value."""
        return nmod_poly(in_main(p, self._point, self.prime), self.prime)

    def matrix(self, rows: Sequence[int], columns: int, at: int) -> nmod_mat:
        """Some rows in numbers, main at a number too."""
        made = nmod_mat(len(rows), columns, self.prime)
        for a, i in enumerate(rows):
            for j, p in self.rows[i].items():
                made[a, j] = p(at)
        return made

    def common(self, size: int, extra: Sequence[int]) -> nmod_poly:
        """The common divisor of the maximal minors of the first `size` rows M and the rows `extra`."""
        whole = self.stacked(size, ())
        return whole.gcd(self.stacked(size, extra)) if extra else whole

    def stacked(self, size: int, extra: Sequence[int]) -> nmod_poly:
        """det(M + R S) for a random constant R: M is the first `size` rows, S the rows `extra`."""
        random = Random(29)
        mixing = nmod_mat(size, max(1, len(extra)), self.prime)
        for i in range(size):
            for a in range(len(extra)):
                mixing[i, a] = random.randrange(1, self.prime)
        values = []
        for at in range(self._most(size, extra) + 1):
            whole = self.matrix(range(size), size, at)
            if extra:
                whole = whole + mixing * self.matrix(extra, size, at)
            values.append(int(whole.det()))
        return _through(values, self.prime)

    def _most(self, size: int, extra: Sequence[int]) -> int:
        """A bound on the degree of a stacked determinant."""
        highest = [max((p.degree() for p in row.values()), default=0) for row in self.rows]
        most = max((highest[i] for i in extra), default=0)
        return sum(max(highest[i], most) for i in range(size))


def shared_modes(
    rows: Sequence[Row],
    main: sp.Symbol,
    factors: Sequence[sp.Expr],
    tests: Sequence[Sequence[Row]],
) -> list[list[int]]:
    """How many solutions at the root of each factor satisfy each set of further rows.

    Parameters
    ----------
    rows : sequence of mapping of int to Expr
        The rows of a square matrix.
    main : Symbol
    factors : sequence of Expr
        Each of first degree in main.
    tests : sequence of sequences of rows

    Returns
    -------
    list of list of int
        By factor and test; all zero where the matrix is singular or has a pole at the root.
    """
    sample, found = _commons(rows, main, tests, factors)
    poles = reduce(lambda a, b: a * b, sample.bottoms[: len(rows)])
    return [[0 if _order(poles, f) else _order(p, f) for p in found] for f in sample.others]


def modes_off_zero(
    rows: Sequence[Row], main: sp.Symbol, tests: Sequence[Sequence[Row]]
) -> list[int]:
    """How many solutions with main ≠ 0 satisfy each set of further rows; all zero where the matrix is singular."""
    _, found = _commons(rows, main, tests)
    return [len(p.coeffs()) - 1 - _lowest(p) if p else 0 for p in found]


def _commons(
    rows: Sequence[Row],
    main: sp.Symbol,
    tests: Sequence[Sequence[Row]],
    factors: Sequence[sp.Expr] = (),
) -> tuple[Sample, list[nmod_poly]]:
    """For each test the polynomial whose roots are the modes that satisfy it; zero for a singular matrix."""
    size = len(rows)
    sample = Sample([*rows, *(row for test in tests for row in test)], main, factors)
    ends = [size + sum(map(len, tests[:n])) for n in range(len(tests) + 1)]
    found = [sample.common(size, range(a, b)) for a, b in pairwise(ends)]
    if not sample.stacked(size, ()):
        found = [nmod_poly([0], sample.prime) for _ in tests]
    return sample, found


def holds_off_zero(rows: Sequence[Row], main: sp.Symbol, extra: Sequence[Row]) -> bool | None:
    """Whether every solution with main ≠ 0 satisfies further rows; None where the matrix is singular.

    Both answers are right but for a negligible chance. Roots at which an entry has a pole are not looked at.
    """
    size = len(rows)
    sample = Sample([*rows, *extra], main)
    whole = sample.stacked(size, ())
    if not whole:
        return None
    rest = whole // sample.common(size, range(size, size + len(extra)))
    for bottom in sample.bottoms:
        while (shared := rest.gcd(bottom)).degree() > 0:
            rest = rest // shared
    return bool(rest.degree() == _lowest(rest))


def support(
    rows: Sequence[Row], main: sp.Symbol, target: Row
) -> tuple[list[int], list[int]] | None:
    """Rows that combine to the target, and as many columns in which they are independent; None where there are none."""
    columns = 1 + max((j for row in (*rows, target) for j in row), default=0)
    sample = Sample([*rows, target], main)
    matrix = sample.matrix(range(len(rows) + 1), columns, Random(31).randrange(1, sample.prime))
    reduced, rank = matrix.transpose().rref()
    lines = [[j for j in range(len(rows) + 1) if int(reduced[i, j])] for i in range(rank)]
    if any(line[0] == len(rows) for line in lines):
        return None
    chosen = sorted(line[0] for line in lines if line[-1] == len(rows))
    kept = nmod_mat(len(chosen), columns, sample.prime)
    for a, i in enumerate(chosen):
        for j in range(columns):
            kept[a, j] = matrix[i, j]
    echelon, rank = kept.rref()
    pivots = [next(j for j in range(columns) if int(echelon[i, j])) for i in range(rank)]
    return chosen, pivots


def _cleared(row: Row, reader: Reader, ring: Ring) -> tuple[dict[int, Gaussian], Gaussian]:
    ratios = {j: reader.ratio(c) for j, c in row.items()}
    bottom = reduce(lcm, (r.bottom for r in ratios.values()), ring.constant(1))
    tops = {j: r.top * bottom.over(r.bottom) for j, r in ratios.items()}
    return {j: p for j, p in tops.items() if p}, bottom


def _lowest(p: nmod_poly) -> int:
    """The lowest power of main."""
    return next(n for n, c in enumerate(p.coeffs()) if int(c))


def _order(p: nmod_poly, linear: nmod_poly) -> int:
    """How often a linear polynomial divides another."""
    count = 0
    while p and p.degree() > 0:
        quotient, rest = divmod(p, linear)
        if rest:
            break
        p, count = quotient, count + 1
    return count


def _through(values: Sequence[int], prime: int) -> nmod_poly:
    """The polynomial that takes these values at 0, 1, 2, ... (Newton's divided differences)."""
    table: list[Any] = list(values)
    for step in range(1, len(table)):
        inverse = pow(step, -1, prime)
        for i in range(len(table) - 1, step - 1, -1):
            table[i] = (table[i] - table[i - 1]) * inverse % prime
    made = nmod_poly([0], prime)
    for at in range(len(table) - 1, -1, -1):
        made = made * nmod_poly([-at % prime, 1], prime) + table[at]
    return made
