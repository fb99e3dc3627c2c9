"""Remarks on where a model is outside its range, and the sum of them."""

from __future__ import annotations

import html
from collections.abc import Sequence
from dataclasses import dataclass
from typing import overload


@dataclass(frozen=True)
class Remark:
    """One statement about the range of the fluid description.

    Attributes
    ----------
    subject : str
        What was compared, and for which species: "k λ_D, species e".
    statement : str
    number : float
        The number that the statement rests on, the worst of the grid where there is one.
    rule : str
        Where the border lies and who drew it; "common practice" where nobody in particular did.
    """

    subject: str
    statement: str
    number: float
    rule: str

    def __str__(self) -> str:
        return f"{self.subject} = {self.number:.3g}: {self.statement} [{self.rule}]"


@dataclass(frozen=True, repr=False)
class Advice(Sequence[Remark]):
    """Remarks in the order of the rules; prints as text.

    Attributes
    ----------
    remarks : tuple of Remark
    looked_at : tuple of str
        What was compared.
    not_looked_at : tuple of str
        What could not be, and why.
    """

    remarks: tuple[Remark, ...]
    looked_at: tuple[str, ...]
    not_looked_at: tuple[str, ...]

    @overload
    def __getitem__(self, index: int) -> Remark: ...
    @overload
    def __getitem__(self, index: slice) -> tuple[Remark, ...]: ...
    def __getitem__(self, index: int | slice) -> Remark | tuple[Remark, ...]:
        return self.remarks[index]

    def __len__(self) -> int:
        return len(self.remarks)

    def about(self, words: str) -> tuple[Remark, ...]:
        """The remarks whose subject holds some words: "λ_D", "species e"."""
        return tuple(r for r in self.remarks if words in r.subject)

    def __str__(self) -> str:
        lines = [str(r) for r in self.remarks] or ["Nothing outside the range was found."]
        for head, entries in self._lists():
            lines += [head, *(f"  {entry}" for entry in entries)]
        return "\n".join(lines)

    def __repr__(self) -> str:
        return str(self)

    def _lists(self) -> list[tuple[str, tuple[str, ...]]]:
        both = (
            ("Looked at:", self.looked_at),
            ("Could not be looked at:", self.not_looked_at),
        )
        return [(head, entries) for head, entries in both if entries]

    def _repr_html_(self) -> str:
        cells = ((r.subject, f"{r.number:.3g}", r.statement, r.rule) for r in self.remarks)
        rows = (
            "".join(f'<td style="text-align:left">{html.escape(c)}</td>' for c in row)
            for row in cells
        )
        table = "".join(f"<tr>{row}</tr>" for row in rows)
        shown = (
            f"<table>{table}</table>" if table else "<p>Nothing outside the range was found.</p>"
        )
        for head, entries in self._lists():
            shown += (
                f"<p>{head}</p><ul>{''.join(f'<li>{html.escape(e)}</li>' for e in entries)}</ul>"
            )
        return shown
