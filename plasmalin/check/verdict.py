"""What is said of a claim: the verdict, its conditions and its slips, as a short referee's note."""

from __future__ import annotations

import html
from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

from sympy import Expr, latex

from ..declare.notation import paper

KINDS = (
    "identical", "factor", "branch", "special", "limit", "series", "convention", "differs", "undecided",
)  # fmt: skip
ALWAYS = ("identical", "factor", "branch")
STATED = ("special", "limit", "series")
WORDS = {
    "identical": "The claim is right: it is the derived relation.",
    "factor": "The claim is right: it is a part of the derived relation.",
    "branch": "The claim is right: it is one sheet of the derived relation.",
    "special": "The claim is right for these values of the parameters",
    "limit": "The claim is the leading part of the derived relation where these are small",
    "series": "The claim is an expansion of the derived relation",
    "convention": "The claim is right in another convention than the declared one",
    "differs": "The claim differs from the derived relation.",
    "undecided": "Not decided.",
}


@dataclass(frozen=True)
class Slip:
    """One repair that makes a claim right.

    Attributes
    ----------
    term : Expr
        The term of the claim at fault, in the author's symbols.
    multiplier : Expr
        What it should be multiplied by: −1 for a wrong sign, 0 for a term too many.
    text : str
        The repair in words.
    """

    term: Expr
    multiplier: Expr
    text: str

    def __str__(self) -> str:
        return self.text


@dataclass(frozen=True)
class Small:
    """A dimensionless group that must be small for a limit to hold.

    Attributes
    ----------
    group : Expr
    value : float or None
        At the given values.
    physical : bool
        False for an ordering that nature does not have, such as electrons heavier than ions.
    """

    group: Expr
    value: float | None = None
    physical: bool = True

    @property
    def holds(self) -> bool | None:
        """Whether it is below a tenth (common practice) at the given values."""
        return None if self.value is None else abs(self.value) < 0.1

    def __str__(self) -> str:
        number = "" if self.value is None else f" (here {self.value:.3g})"
        return f"{paper(self.group)} ≪ 1{number}" + ("" if self.physical else " — unphysical")


@dataclass(frozen=True)
class Verdict:
    """The judgement of a claim.

    Attributes
    ----------
    kind : str
        identical, factor, branch, special, limit, series, convention, differs or undecided.
    agrees : bool
        True for identical, factor, branch; for special, limit, series only when `under` states the conditions.
    conditions : dict or tuple
        special: the parameters' values by name; limit and series: the groups that must be small (`Small`);
        convention: the convention under which the claim is right.
    slips : tuple of Slip
        Repairs that make the claim right, simplest first.
    proof : str
        How it was decided.
    reading : str
        The claim as it was understood, in LaTeX.
    notes : tuple of str
        What else an author should know: conditions of the background used, the first neglected term, what was tried.
    """

    kind: str
    agrees: bool
    proof: str
    reading: str
    conditions: Any = ()
    slips: tuple[Slip, ...] = ()
    notes: tuple[str, ...] = field(default=())

    def _conditions(self) -> list[str]:
        if isinstance(self.conditions, Mapping):
            return [f"{name} = {value}" for name, value in self.conditions.items()]
        given = self.conditions if isinstance(self.conditions, tuple) else (self.conditions,)
        return [str(c) for c in given]

    def _lines(self) -> list[str]:
        words = WORDS[self.kind]
        shown = self._conditions()
        lines = [f"{self.kind}: {words}" + (":" if shown and words[-1] != "." else "")]
        lines += [f"  {c}" for c in shown]
        lines += [f"  repair: {s}" for s in self.slips]
        lines += [f"  {n}" for n in self.notes]
        return [*lines, f"  proof: {self.proof}"]

    def __str__(self) -> str:
        return "\n".join(self._lines())

    def latex(self) -> str:
        """The note in LaTeX, the claim as it was understood first."""
        items = [rf"Claim: \( {self.reading} \)", *(_plain(line) for line in self._lines())]
        items += [
            rf"\( {latex(s.term)} \;\to\; {latex(s.multiplier * s.term)} \)" for s in self.slips
        ]
        return "\n".join([r"\begin{itemize}", *(rf"\item {i}" for i in items), r"\end{itemize}"])

    def _repr_html_(self) -> str:
        lines = "".join(f"<li>{html.escape(line.strip())}</li>" for line in self._lines())
        return f"<p>$\\displaystyle {html.escape(self.reading)}$</p><ul>{lines}</ul>"


def _plain(text: str) -> str:
    """Text with LaTeX's signs escaped."""
    for sign in "\\&%$#_{}^~":
        text = text.replace(sign, rf"\{sign}" if sign in "&%$#_{}" else rf"\char`\{sign}{{}}")
    return text.strip()
