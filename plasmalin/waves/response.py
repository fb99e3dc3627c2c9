"""Elimination of unknowns: the dispersion tensor of chosen fields."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

from sympy import Expr, ImmutableDenseMatrix, Symbol

from ..declare.notation import paper
from ..errors import DeclarationError, UndeterminedError
from ..exact.determinant import eliminate
from ..exact.matching import maximum_matching

if TYPE_CHECKING:
    from .matrix import WaveMatrix


@dataclass(frozen=True, eq=False)
class Reduced:
    """A wave matrix after the other unknowns have been eliminated.

    Attributes
    ----------
    amplitudes : tuple of Symbol
        The unknowns that stay.
    laws : tuple of str
        The equations that stay, one per row.
    entries : dict of (int, int) to Expr
        Exact ratios in lowest terms.
    """

    amplitudes: tuple[Symbol, ...]
    laws: tuple[str, ...]
    entries: Mapping[tuple[int, int], Expr]

    @cached_property
    def matrix(self) -> ImmutableDenseMatrix:
        """``matrix * amplitudes = 0``, shape (kept, kept)."""
        size = len(self.amplitudes)
        return ImmutableDenseMatrix(size, size, lambda i, j: self.entries.get((int(i), int(j)), 0))

    def _repr_latex_(self) -> str | None:
        from sympy import latex

        text = latex(self.matrix)
        return f"$\\displaystyle {text}$" if len(text) < 4000 else None

    def __str__(self) -> str:
        size = range(len(self.amplitudes))
        lines = []
        for i in size:
            row = ((self.entries.get((i, j)), self.amplitudes[j]) for j in size)
            shown = " + ".join(f"[{paper(c)}] {s.name}" for c, s in row if c)
            lines.append(f"{self.laws[i]}: {shown or 0} = 0")
        return "\n".join(lines)

    def __repr__(self) -> str:
        names = ", ".join(s.name for s in self.amplitudes)
        return f"<Reduced to {names}: rows {'; '.join(self.laws)}>"


def reduced(wave: WaveMatrix, fields: tuple[str, ...]) -> Reduced:
    """The Schur complement on the named fields; see `WaveMatrix.reduce`."""
    if not fields:
        raise DeclarationError('name the fields that stay, as in reduce("E")')
    columns = list(dict.fromkeys(j for name in fields for j in wave.column(name)))
    rows = rows_that_stay(wave, columns)
    entries = eliminate_for(wave, wave.entries, rows, columns)
    return Reduced(
        tuple(wave.amplitudes[j] for j in columns), tuple(str(wave.rows[i]) for i in rows), entries
    )


def eliminate_for(
    wave: WaveMatrix, entries: Mapping[tuple[int, int], Expr], rows: list[int], columns: list[int]
) -> dict[tuple[int, int], Expr]:
    """The Schur complement of (changed) entries of a wave matrix."""
    return eliminate(entries, wave.omega, len(wave.rows), rows, columns)


def rows_that_stay(wave: WaveMatrix, columns: list[int]) -> list[int]:
    """Rows left over when every other unknown takes an equation."""
    used = set(rows_taken(wave, columns).values())
    return [i for i in range(len(wave.rows)) if i not in used]


def rows_taken(wave: WaveMatrix, columns: list[int]) -> dict[int, int]:
    """The equation that every other unknown takes, by column.

    An unknown takes the law that evolves it where it can; laws that hold many unknowns, such as Poisson's and Ampere's,
    are taken last, so that they stay.
    """
    others = [j for j in range(len(wave.rows)) if j not in columns]
    pairs = [(i, j) for (i, j) in wave.entries if j in others]
    count = {i: sum(row == i for row, _ in pairs) for i in range(len(wave.rows))}
    ranked = sorted(count, key=lambda i: (count[i], i))
    place = {i: r for r, i in enumerate(ranked)}
    evolving = [(j, place[i]) for i, j in pairs if wave.entries[i, j].has(wave.omega)]
    size = len(wave.rows)
    taken = maximum_matching(evolving, size, size)
    taken = maximum_matching([(j, place[i]) for i, j in pairs], size, size, start=taken)
    if len(taken) < len(others):
        names = ", ".join(wave.columns[j].symbol.name for j in others if j not in taken)
        raise UndeterminedError(
            f"{names} cannot be eliminated: no law is left that determines them"
        )
    return {j: ranked[r] for j, r in taken.items()}
