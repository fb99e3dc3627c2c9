"""Linear laws by their coefficients: one for each component, amplitude and power of ω and k."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from typing import Any

from sympy import Add, Expr, Poly, PolynomialError, Symbol, cancel, factor

from ..declare.fields import Field
from ..declare.operators import PartialT, k_x, k_y, k_z, omega
from ..exact.radicals import rational_numerator
from ..linearize.ledger import Piece
from ..waves.lowering import Index, Wave, lower
from .angles import Angles
from .lawclaim import Term

Cell = tuple[Index, Symbol, Any]
Cells = dict[Cell, Expr]
WAVES = (omega, k_x, k_y, k_z)


def cells_of(expr: Expr, wave: Wave, index: Index | None, changes: Mapping[Any, Any]) -> Cells:
    """The coefficients of one first-order term; of one component where an index is given."""
    found: Cells = {}
    for i, row in lower(expr, wave).items():
        if index is None or i == index:
            for amplitude, c in row.items():
                for power, part in _by_powers(c.xreplace(changes)):
                    found[i if index is None else (), amplitude, power] = part
    return {cell: c for cell, c in found.items() if not vanishes(c)}


def _by_powers(coefficient: Expr) -> Iterator[tuple[Any, Expr]]:
    """Coefficients of the powers of ω and k; the whole where it is no polynomial in them."""
    try:
        yield from Poly(coefficient, *WAVES).terms()
    except PolynomialError:
        yield None, coefficient


def vanishes(expr: Expr) -> bool:
    """Whether an expression is identically zero, by exact algebra."""
    return expr == 0 or len(rational_numerator(Angles({}).rational(expr), omega)[0]) == 0


def general_wave(axes: str) -> Wave:
    along = {"x": k_x, "y": k_y, "z": k_z}

    def amplitude(field: Field, index: Index) -> Symbol:
        place = tuple(sorted(index)) if field.symmetric else index
        component = "".join(axes[i] for i in place)
        return Symbol(f"{field.name}[{component}]")

    return Wave(axes, tuple(along[a] for a in axes), amplitude)


def _total(parts: Iterable[Cells]) -> Cells:
    total: dict[Cell, list[Expr]] = {}
    for part in parts:
        for cell, c in part.items():
            total.setdefault(cell, []).append(c)
    summed = {cell: Add(*cs) for cell, cs in total.items()}
    return {cell: c for cell, c in summed.items() if not vanishes(c)}


@dataclass(frozen=True)
class Group:
    """Terms of the claim and of the law that share cells."""

    claimed: tuple[tuple[Term, Cells], ...]
    derived: tuple[tuple[Piece, Expr, Cells], ...]

    @property
    def factor(self) -> Expr | None:
        """Claim over law where one factor holds for all cells; None where none does."""
        mine, theirs = _total(c for _, c in self.claimed), _total(c for *_, c in self.derived)
        if not mine or set(mine) != set(theirs):
            return None
        first = next(iter(mine))
        ratio = factor(cancel(mine[first] / theirs[first]))
        even = all(vanishes(mine[c] - ratio * theirs[c]) for c in mine)
        return ratio if even and not ratio.free_symbols & set(WAVES) else None

    @property
    def empty(self) -> bool:
        """Whether the claim's terms and the law's cancel, each among themselves."""
        return not _total(c for _, c in self.claimed) and not _total(c for *_, c in self.derived)

    @property
    def of_time(self) -> bool:
        return any(t.value.atoms(PartialT) for t, _ in self.claimed)
