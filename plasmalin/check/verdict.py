"""What is said of a claim: the verdict, its conditions and its slips, as a short referee's note."""

from __future__ import annotations

import html
import unicodedata
from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

from sympy import Expr

from ..declare.notation import SUPERSCRIPT, latex, paper
from ..declare.words import GREEK_NAME

KINDS = (
    "identical", "factor", "branch", "special", "limit", "series", "convention", "differs", "undecided",
)  # fmt: skip
STATED = ("special", "limit", "series")
WORDS = {
    "identical": "the claim is right; the laws give the same",
    "factor": "the claim is right; the derived relation has further factors",
    "branch": "the claim is right; it is one branch of the derived relation",
    "special": "the claim is right only where",
    "limit": "the claim is the leading order of the derived relation where",
    "series": "the claim is a truncated expansion of the derived relation where",
    "convention": "the claim is wrong in the declared convention; it is right in",
    "differs": "the claim does not agree with what the laws give",
    "undecided": "whether the claim is right was not decided",
}
SUPERSCRIPTS = {chr(sign): chr(plain) for plain, sign in SUPERSCRIPT.items()}
UNSTATED = "the author does not state this: name it in under=..., or correct the claim"


@dataclass(frozen=True)
class Slip:
    """One repair that makes a claim right.

    Attributes
    ----------
    term : Expr
        The term of the claim at fault, in the author's symbols.
    multiplier : Expr
        What it should be multiplied by: −1 for a wrong sign, 0 for a term too many, 1 for a term that is missing.
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
        large = "" if self.holds is not False else ", not small"
        number = "" if self.value is None else f" (here {self.value:.3g}{large})"
        return f"{paper(self.group)} ≪ 1{number}" + (
            "" if self.physical else ", an unphysical ordering"
        )


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
        Repairs that make the claim right, simplest first: each alone for a relation, all together for a law.
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

    def _lines(self) -> list[str]:
        shown = shown_conditions(self.conditions)
        words = WORDS[self.kind] if shown else WORDS[self.kind].removesuffix(" where")
        lines = [f"{self.kind}: {words}{':' if shown else '.'}"]
        lines += [f"  {c}" for c in shown]
        lines += [f"  {UNSTATED}"] if self.kind in STATED and not self.agrees else []
        lines += [f"  repair: {s}" for s in self.slips]
        lines += [f"  {n}" for n in self.notes]
        return [*lines, *([f"  proof: {self.proof}"] if self.proof else [])]

    def __str__(self) -> str:
        return "\n".join(self._lines())

    def latex(self) -> str:
        """The note in LaTeX, the claim as it was understood first; compiles without further packages."""
        items = [rf"claim: \( {self.reading} \)", *(text_in_latex(line) for line in self._lines())]
        items += [rf"\( {_repair(s)} \)" for s in self.slips]
        return "\n".join([r"\begin{itemize}", *(rf"\item {i}" for i in items), r"\end{itemize}"])

    def _repr_latex_(self) -> str | None:
        return f"$\\displaystyle {self.reading}$" if len(self.reading) < 4000 else None

    def _repr_html_(self) -> str:
        head, *rest = (html.escape(line.strip()) for line in self._lines())
        items = "".join(f"<li>{line}</li>" for line in rest)
        claim = f"$\\displaystyle {html.escape(self.reading)}$"
        return f"<p>{claim}</p><p><b>{head}</b></p><ul>{items}</ul>"


def shown_conditions(conditions: Any) -> list[str]:
    """The conditions of a verdict, one text for each."""
    if isinstance(conditions, Mapping):
        return [f"{name} = {value}" for name, value in conditions.items()]
    given = conditions if isinstance(conditions, tuple) else (conditions,)
    return [str(c) for c in given]


def _repair(slip: Slip) -> str:
    if slip.multiplier == 1:
        return latex(slip.term) + r" \quad\mbox{missing}"
    right = "0" if slip.multiplier == 0 else latex(slip.multiplier * slip.term)
    return rf"{latex(slip.term)} \;\to\; {right}"


ESCAPED = {c: rf"\{c}" for c in "&%$#_{}"} | {
    "\\": r"\textbackslash{}",
    "^": r"\^{}",
    "~": r"\~{}",
}
SIGNS = {
    "−": "-", "∂": r"\partial", "∇": r"\nabla", "·": r"\cdot", "×": r"\times", "⊗": r"\otimes", "√": r"\surd",
    "≪": r"\ll", "π": r"\pi", "→": r"\to", "ᵀ": r"{}^{\mathsf T}", "₂": "{}_2", "λ": r"\lambda", "Λ": r"\Lambda",
}  # fmt: skip
ACCENTS = {"\u0303": "tilde", "\u0302": "hat"}


def text_in_latex(text: str) -> str:
    """A line of plain text for LaTeX: its signs escaped, what is beyond ASCII as mathematics."""
    out: list[str] = []
    for c in unicodedata.normalize("NFD", text.strip()):
        if c in ACCENTS and out:
            out.append(rf"\({chr(92)}{ACCENTS[c]}{{{_bare(out.pop())}}}\)")
        else:
            out.append(c if c.isascii() and c not in ESCAPED else _sign(c))
    return "".join(out).replace(r"\)\(", " ")


def _bare(sign: str) -> str:
    return sign.removeprefix(r"\(").removesuffix(r"\)")


def _sign(c: str) -> str:
    if c in ESCAPED:
        return ESCAPED[c]
    if c in SUPERSCRIPTS:
        return rf"\({{}}^{SUPERSCRIPTS[c]}\)"
    sign = SIGNS.get(c) or (rf"\{GREEK_NAME[c]}" if c in GREEK_NAME else "")
    return rf"\({sign}\)" if sign else c
