"""A row as an exact combination of other rows: the multipliers, proven by an identity of polynomials."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from functools import reduce
from operator import add

import sympy as sp

from .determinant import exact_determinant
from .polynomial import ratio_expr
from .ratio import Ratio
from .reader import Reader, ring_of
from .ring import Ring
from .sample import Row, support


def row_combination(rows: Sequence[Row], main: sp.Symbol, target: Row) -> dict[int, sp.Expr] | None:
    """Multipliers with sum(multiplier * row) = target, as ratios in lowest terms.

    Parameters
    ----------
    rows : sequence of mapping of int to Expr
    main : Symbol
    target : mapping of int to Expr

    Returns
    -------
    dict of int to Expr or None
        By row, what is not zero; None where the target is no combination of the rows.

    Notes
    -----
    Which rows take part is seen at a random point of a prime field. The multipliers follow by Cramer's rule from as
    many columns, and the identity is then checked exactly in every column.
    """
    found = support(rows, main, target)
    if found is None:
        return None
    chosen, columns = found
    if not chosen:
        return {}
    inside = [rows[i] for i in chosen]
    ring = ring_of([main, *(c for row in (*inside, target) for c in row.values())], main)
    ratios = _by_cramer(inside, target, columns, ring)
    if not _identical(inside, ratios, target, ring):
        return None
    made = {i: ratio_expr(r.lowest(), ring) for i, r in zip(chosen, ratios, strict=True)}
    return {i: c for i, c in made.items() if c != 0}


def _by_cramer(rows: Sequence[Row], target: Row, columns: Sequence[int], ring: Ring) -> list[Ratio]:
    count = range(len(rows))
    whole = exact_determinant(_table(rows), count, columns, ring)
    replaced = ([target if i == n else row for i, row in enumerate(rows)] for n in count)
    return [exact_determinant(_table(made), count, columns, ring) * whole**-1 for made in replaced]


def _table(rows: Sequence[Row]) -> Mapping[tuple[int, int], sp.Expr]:
    return {(i, j): c for i, row in enumerate(rows) for j, c in row.items() if c != 0}


def _identical(rows: Sequence[Row], multipliers: Sequence[Ratio], target: Row, ring: Ring) -> bool:
    """Whether the combination equals the target in every column, known relations used."""
    reader = Reader(ring)
    minus = Ratio(ring.constant(-1), ring.constant(1))
    for j in {j for row in (*rows, target) for j in row}:
        terms = [
            m * reader.ratio(row[j]) for m, row in zip(multipliers, rows, strict=True) if j in row
        ]
        terms += [minus * reader.ratio(target[j])] if j in target else []
        if reader.reduced(reduce(add, terms).top):
            return False
    return True


def power_below(expr: sp.Expr, main: sp.Symbol) -> int | None:
    """The power of main that divides the denominator of a ratio; None where it has other zeros in main."""
    ring = ring_of([expr, main], main)
    bottom = Reader(ring).ratio(expr).lowest().bottom
    powers = {int(e[0]) for part in (bottom.re, bottom.im) for e in part.monoms()}
    return powers.pop() if len(powers) == 1 else None
