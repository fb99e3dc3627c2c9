"""Exact determinants of sparse matrices of SymPy expressions, by memoised minors in FLINT.

The imaginary unit leaves the ring where row and column phases can remove it, with the main symbol taken as it is
or as i times a new one; else entries are Gaussian pairs. Denominators are cleared row by row.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction
from functools import reduce
from itertools import product
from math import inf
from typing import Any, TypeAlias

import sympy as sp

from ..errors import UndeterminedError
from .dependence import field_image, null_support
from .gaussian import Gaussian, gcd, lcm
from .matching import diagonal_blocks, maximum_matching
from .minors import TooLong, minors_determinant
from .polynomial import ExactPolynomial, ratio_expr
from .ratio import Ratio
from .reader import Reader, ring_of
from .ring import Ring

Entries: TypeAlias = Mapping[tuple[int, int], sp.Expr]
Table: TypeAlias = dict[tuple[int, int], Gaussian]


def determinant(
    entries: Entries,
    size: int,
    main: sp.Symbol,
    values: Mapping[Any, Fraction | sp.Expr] | None = None,
    longest: float = inf,
) -> ExactPolynomial:
    """The numerator of a determinant, in lowest terms, up to a unit.

    Parameters
    ----------
    entries : mapping of (int, int) to Expr
        What is not zero.
    size : int
    main : Symbol
        The symbol that the result is a polynomial in.
    values : mapping, optional
        Exact numbers or expressions put in first.
    longest : float
        How many terms a minor may have.

    Returns
    -------
    ExactPolynomial
        The zero polynomial where the matrix is singular. Known relations between generators are not used up, so
        that it factors; `ExactPolynomial.reduced` uses them.

    Raises
    ------
    NonPolynomialError
        When `main` enters other than in polynomials and their ratios.
    TooLong
        When a minor or the whole has more than `longest` terms.
    """
    filled = _filled(entries, values or {})
    ring = ring_of(filled.values(), main)
    ratio = exact_determinant(filled, range(size), range(size), ring, longest)
    top = ratio.top
    if top and ratio.bottom.holds(0):
        top = top.over(gcd(top, ratio.bottom))
    return _as_free_as_it_may(ExactPolynomial(ring, top).real_if_possible())


def _as_free_as_it_may(raw: ExactPolynomial) -> ExactPolynomial:
    """Relations such as sin^2 + cos^2 = 1 are left for later, since a reduced product no longer shows its factors.

    Only where they change the powers of main that occur are they used at once.
    """
    reduced = raw.reduced()
    same = reduced is raw or (raw.degree, raw.lowest) == (reduced.degree, reduced.lowest)
    return raw if same else reduced


def _filled(entries: Entries, values: Mapping[Any, Any]) -> dict[tuple[int, int], sp.Expr]:
    known = {
        s: sp.Rational(v.numerator, v.denominator) if isinstance(v, Fraction) else sp.sympify(v)
        for s, v in values.items()
    }
    filled = {ij: c.xreplace(known) if known else c for ij, c in entries.items()}
    return {ij: c for ij, c in filled.items() if c != 0}


@dataclass(frozen=True)
class Cleared:
    """A matrix with its denominators and its phases taken out: entry = i**(rows+columns) * table / bottoms."""

    table: Table
    turns: int
    bottom: Gaussian
    phase: int


def exact_determinant(
    entries: Entries,
    rows: Sequence[int],
    columns: Sequence[int],
    ring: Ring,
    longest: float = inf,
) -> Ratio:
    """The determinant of a square submatrix, exactly, main written as itself."""
    zero, one = ring.constant(0), ring.constant(1)
    place = {i: a for a, i in enumerate(rows)}, {j: b for b, j in enumerate(columns)}
    inside = {
        (place[0][i], place[1][j]): c
        for (i, j), c in entries.items()
        if i in place[0] and j in place[1]
    }
    matching = maximum_matching(inside, len(rows), len(columns))
    if len(matching) < len(rows):
        return Ratio(zero, one)
    cleared = cleared_table(inside, ring)
    top = block_determinant(cleared.table, matching, ring, longest)
    top = top.turned(cleared.turns)
    return Ratio(_unphased(top, cleared.phase), _unphased(cleared.bottom, cleared.phase))


def block_determinant(
    table: Table, matching: Mapping[int, int], ring: Ring, longest: float = inf
) -> Gaussian:
    """The determinant from those of the irreducible diagonal blocks."""
    blocks = diagonal_blocks(table, matching)
    sign = _parity([i for rows, _ in blocks for i in rows]) * _parity(
        [j for _, cs in blocks for j in cs]
    )
    result = ring.constant(sign)
    for rows, columns in blocks:
        lines = [{b: table[i, j] for b, j in enumerate(columns) if (i, j) in table} for i in rows]
        factor = minors_determinant(lines, ring, longest)
        if len(result) * len(factor) > longest * longest:
            raise TooLong
        result = result * factor
        if len(result) > longest:
            raise TooLong
    return result


def _parity(order: list[int]) -> int:
    sign, seen = 1, set[int]()
    for start in range(len(order)):
        length, at = 0, start
        while at not in seen:
            seen.add(at)
            at, length = order[at], length + 1
        sign *= -1 if length and length % 2 == 0 else 1
    return sign


def polynomial_rows(entries: Entries, main: sp.Symbol) -> dict[tuple[int, int], ExactPolynomial]:
    """The matrix with every row times its common denominator, which leaves the null vectors as they are."""
    ring = ring_of(entries.values(), main)
    reader = Reader(ring)
    table, _ = _without_denominators({ij: reader.ratio(c) for ij, c in entries.items()}, ring)
    return {ij: ExactPolynomial(ring, p) for ij, p in table.items()}


def cleared_table(entries: Entries, ring: Ring) -> Cleared:
    """The matrix without denominators, real if main = omega or main = i s allows."""
    first = None
    for phase in (0, 1):
        reader = Reader(ring, phase)
        table, bottom = _without_denominators(
            {ij: reader.ratio(c) for ij, c in entries.items()}, ring
        )
        turns = _phases(table)
        if turns is not None:
            real = {(i, j): p.turned(-turns[0][i] - turns[1][j]) for (i, j), p in table.items()}
            return Cleared(real, sum(turns[0].values()) + sum(turns[1].values()), bottom, phase)
        first = first or Cleared(table, 0, bottom, 0)
    if first is None:
        raise ArithmeticError("an empty matrix has no table")
    return first


def _without_denominators(
    ratios: Mapping[tuple[int, int], Ratio], ring: Ring
) -> tuple[Table, Gaussian]:
    table: Table = {}
    bottom = ring.constant(1)
    for row in {i for i, _ in ratios}:
        inside = {ij: r for ij, r in ratios.items() if ij[0] == row}
        common = reduce(lcm, (r.bottom for r in inside.values()))
        bottom = bottom * common
        for ij, r in inside.items():
            top = r.top * common.over(r.bottom)
            if top:
                table[ij] = top
    return table, bottom


def _phases(table: Table) -> tuple[dict[int, int], dict[int, int]] | None:
    """Powers of i for rows and columns that make every entry real; None where there are none."""
    rows: dict[int, int] = {}
    columns: dict[int, int] = {}
    near: dict[tuple[str, int], list[tuple[str, int, int]]] = {}
    for (i, j), p in table.items():
        if p.phase is None:
            return None
        near.setdefault(("row", i), []).append(("column", j, p.phase))
        near.setdefault(("column", j), []).append(("row", i, p.phase))
    sides = {"row": rows, "column": columns}
    for start in near:
        if start[1] in sides[start[0]]:
            continue
        sides[start[0]][start[1]] = 0
        stack = [start]
        while stack:
            side, index = stack.pop()
            for other, at, phase in near[side, index]:
                turn = (phase - sides[side][index]) % 2
                if at not in sides[other]:
                    sides[other][at] = turn
                    stack.append((other, at))
                elif sides[other][at] != turn:
                    return None
    return rows, columns


def _unphased(p: Gaussian, phase: int) -> Gaussian:
    """With main = i s, the polynomial in s written in main again: s = −i main."""
    if not phase or not p:
        return p
    parts: tuple[dict[Any, Any], dict[Any, Any]] = ({}, {})
    for source, part in enumerate((p.re, p.im)):
        for exponents, c in part.terms():
            turn = (source - exponents[0]) % 4
            into = parts[turn % 2]
            into[exponents] = into.get(exponents, 0) + (-c if turn > 1 else c)
    ring = p.re.context()
    return Gaussian(ring.from_dict(parts[0]), ring.from_dict(parts[1]))


def eliminate(
    entries: Entries,
    main: sp.Symbol,
    size: int,
    keep_rows: Sequence[int],
    keep_columns: Sequence[int],
) -> dict[tuple[int, int], sp.Expr]:
    """The Schur complement on some rows and columns, exact and in lowest terms.

    Each entry is a bordered determinant over the determinant of the eliminated block.

    Raises
    ------
    UndeterminedError
        When the eliminated block is singular.
    """
    ring = ring_of(entries.values(), main)
    rows = [i for i in range(size) if i not in keep_rows]
    columns = [j for j in range(size) if j not in keep_columns]
    inner = exact_determinant(entries, rows, columns, ring)
    if not inner.top:
        raise UndeterminedError(
            "the unknowns to be eliminated are not determined by the other laws"
        )
    found = {}
    for (a, i), (b, j) in product(enumerate(keep_rows), enumerate(keep_columns)):
        border = exact_determinant(entries, [*rows, i], [*columns, j], ring)
        if border.top:
            found[a, b] = ratio_expr((border * inner**-1).lowest(), ring)
    return found


def underdetermined_block(
    entries: Entries, size: int, main: sp.Symbol
) -> tuple[tuple[int, ...], tuple[int, ...]]:
    """Rows that are dependent and columns that stay free in a singular matrix, found at a random point.

    Returns
    -------
    (rows, columns) : tuple of tuple of int
        The supports of the shortest null vectors found on the left and on the right; empty when regular.
    """
    ring = ring_of(entries.values(), main)
    reader = Reader(ring)
    table, _ = _without_denominators({ij: reader.ratio(c) for ij, c in entries.items()}, ring)
    matrix = field_image(table, size, reader.relations)
    return null_support(matrix.transpose()), null_support(matrix)
