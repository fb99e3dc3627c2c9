"""The ledger: every piece of every term, its order, its fate and the reason.

The linearized law is the sum of the pieces that the ledger marks as kept; nothing else is computed.
"""

from __future__ import annotations

import html
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import Any, overload

from sympy import Expr, S

from ..declare.fields import Background, Perturbation
from ..declare.law import Law
from ..declare.notation import latex, paper, term_order
from ..declare.operators import Norm, Operator
from ..errors import BackgroundError, DeclarationError
from .settle import from_gradients, settle
from .split import Remainder, first_order_factors, split, terms

KEPT = "kept"
DROPPED = "dropped"
VANISHES = "vanishes"
BALANCE = "balance"
FATES = (KEPT, DROPPED, VANISHES, BALANCE)
ZERO_BACKGROUND = "the background is zero"


@dataclass(frozen=True)
class Piece:
    """One piece of one term of a law.

    Attributes
    ----------
    law : str
    side : str
        "left" or "right" of the equals sign.
    term : Expr
        The nonlinear term that it comes from, with its sign on that side.
    raw : Expr
        The piece as enumerated, in backgrounds and perturbations.
    value : Expr
        What it is worth on the background; for dropped pieces the raw form.
    order : int
        0, 1, 2 ... ; a remainder counts as 2 and holds all higher orders.
    fate : str
        "kept", "dropped", "vanishes" or "balance".
    reason : str
    """

    law: str
    side: str
    term: Expr
    raw: Expr
    value: Expr
    order: int
    fate: str
    reason: str

    @property
    def shown(self) -> Expr:
        """The form that the ledger prints: kept pieces by value, others with backgrounds named."""
        if self.fate == KEPT:
            return self.value
        named: dict[Any, Any] = {b: b.value for b in self.raw.atoms(Background) if b.value != 0}
        return self.raw.xreplace(named) if named else self.raw

    @property
    def order_text(self) -> str:
        return f"{self.order}+" if self.raw.atoms(Remainder) else str(self.order)

    @property
    def fate_text(self) -> str:
        return f"{self.fate}: {self.reason}" if self.reason else self.fate


class Ledger(Sequence[Piece]):
    """All pieces of all laws, in the order of the laws; prints grouped by law and term.

    Parameters
    ----------
    pieces : iterable of Piece
    axes : str
        The model's axes, for printing.
    """

    def __init__(self, pieces: Sequence[Piece], axes: str) -> None:
        self._pieces, self._axes = tuple(pieces), axes

    @overload
    def __getitem__(self, index: int) -> Piece: ...
    @overload
    def __getitem__(self, index: slice) -> tuple[Piece, ...]: ...
    def __getitem__(self, index: int | slice) -> Piece | tuple[Piece, ...]:
        return self._pieces[index]

    def __len__(self) -> int:
        return len(self._pieces)

    def of(self, law: str) -> Ledger:
        """The part of the ledger that belongs to one law."""
        if law not in (known := {p.law: None for p in self._pieces}):
            raise DeclarationError(f"no law {law!r} in this ledger; there are: {', '.join(known)}")
        return Ledger([p for p in self._pieces if p.law == law], self._axes)

    def with_fate(self, fate: str) -> Ledger:
        """The pieces of one fate: "kept", "dropped", "vanishes" or "balance"."""
        if fate not in FATES:
            raise DeclarationError(f"no fate {fate!r}; there are: {', '.join(FATES)}")
        return Ledger([p for p in self._pieces if p.fate == fate], self._axes)

    def _groups(self) -> Iterator[tuple[str, Expr, list[Piece]]]:
        groups: dict[tuple[str, str, Expr], list[Piece]] = {}
        for p in self._pieces:
            groups.setdefault((p.law, p.side, p.term), []).append(p)
        for (law, _, term), pieces in groups.items():
            yield law, term, pieces

    def __str__(self) -> str:
        lines: list[str] = []
        law = None
        for name, term, pieces in self._groups():
            if name != law:
                lines.append(name)
                law = name
            lines.append(f"  {paper(term, self._axes)}")
            for p in pieces:
                shown = paper(p.shown, self._axes)
                lines.append(f"      {shown:<34}  order {p.order_text:<3} {p.fate_text}")
        return "\n".join(lines)

    def __repr__(self) -> str:
        kept = sum(p.fate == KEPT for p in self._pieces)
        return f"<Ledger: {len(self)} pieces, {kept} kept; print it to read it>"

    def _repr_html_(self) -> str:
        rows = []
        law = None
        for name, term, pieces in self._groups():
            if name != law:
                rows.append(
                    f'<tr><th colspan="3" style="text-align:left">{html.escape(name)}</th></tr>'
                )
                law = name
            rows.append(
                f'<tr><td colspan="3" style="text-align:left">${html.escape(latex(term, self._axes))}$</td></tr>'
            )
            rows += [_html_row(p, self._axes) for p in pieces]
        return f"<table>{''.join(rows)}</table>"


def _html_row(piece: Piece, axes: str) -> str:
    style = "" if piece.fate == KEPT else ' style="color:gray"'
    shown = html.escape(latex(piece.shown, axes))
    return (
        f'<tr{style}><td style="text-align:left;padding-left:3em">${shown}$</td>'
        f"<td>order {piece.order_text}</td>"
        f'<td style="text-align:left">{html.escape(piece.fate_text)}</td></tr>'
    )


def entries(law: Law, assumed: bool) -> Iterator[Piece]:
    """The ledger of one law."""
    for side, expr in (("left", law.lhs), ("right", law.rhs)):
        for term in sorted(terms(expr), key=term_order):
            for order, raw in split(term):
                yield from _judged(law.name, side, term, raw, order, assumed)


def _judged(
    law: str, side: str, term: Expr, raw: Expr, order: int, assumed: bool
) -> Iterator[Piece]:
    """The piece, and beside it what the gradient of a background adds."""
    if order > 1:
        fate, reason = (
            (VANISHES, ZERO_BACKGROUND)
            if _holds_zero_background(raw)
            else (DROPPED, "product of perturbations")
        )
        yield Piece(law, side, term, raw, raw, order, fate, reason)
        return
    value = settle(raw)
    if value.has(S.NaN, S.Infinity, S.NegativeInfinity, S.ComplexInfinity):
        raise BackgroundError(
            f"law '{law}': {paper(term)} has no finite value or slope on the background; "
            "give the field in it a background that is not zero"
        )
    added = from_gradients(raw)
    if value == 0 and added == 0:
        yield Piece(law, side, term, raw, value, order, VANISHES, _why_nothing(raw))
    source = "by an assumed external source" if assumed else ""
    for part, why in ((value, ""), (added, "background gradient, O(1/kL)")):
        if part != 0 and order == 0:
            yield Piece(law, side, term, raw, part, order, BALANCE, source)
        elif part != 0:
            _assert_linear(law, term, part)
            yield Piece(law, side, term, raw, part, order, KEPT, why)


def _holds_zero_background(raw: Expr) -> bool:
    """Whether a piece is nothing because a background in it is zero."""
    absent: dict[Any, Any] = {b: b.value for b in raw.atoms(Background) if b.value == 0}
    return bool(absent and raw.xreplace(absent) == 0)


def _why_nothing(raw: Expr) -> str:
    if _holds_zero_background(raw):
        return ZERO_BACKGROUND
    derivatives = (node for node in raw.atoms(Operator) if node.derivative)
    if any(not node.args[-1].atoms(Perturbation) for node in derivatives):
        return "derivative of a uniform background"
    return "the background gives zero"


def _assert_linear(law: str, term: Expr, value: Expr) -> None:
    """The invariant of the whole stage: every kept term holds exactly one first-order factor."""
    if value.atoms(Norm):
        raise BackgroundError(
            f"law '{law}': '{term}' is not smooth where the vector inside norm() has no background, "
            "so it has no first-order part; give that field a background or drop the term"
        )
    if first_order_factors(value) != 1:
        raise AssertionError(f"law '{law}': kept piece {value} of {term} is not of first order")
