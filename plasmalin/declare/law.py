"""One nonlinear law: what a user typed, read and checked."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from sympy import Add, Equality, Expr, expand

from ..errors import DeclarationError, RankError
from .fields import Components, Field, FieldAtom, exact
from .names import Names
from .notation import latex, law_text, paper
from .operators import WAVE_SYMBOLS, WORDS, Cross, Curl, Multiplier, Operator, rank_of
from .reader import read_law
from .role import Role


@dataclass(frozen=True)
class Law:
    """One nonlinear law, ``lhs = rhs``, of rank 0, 1 or 2."""

    name: str
    lhs: Expr
    rhs: Expr
    rank: int
    role: Role | None = None
    """What it is for, where it is a ready law."""

    @property
    def residual(self) -> Expr:
        return self.lhs - self.rhs

    def __str__(self) -> str:
        return f"{law_text(self.lhs)} = {law_text(self.rhs)}"

    def paper(self, axes: str = "") -> str:
        """The law on one line, as a paper prints it."""
        return f"{paper(self.lhs, axes)} = {paper(self.rhs, axes)}"

    def latex(self, axes: str = "") -> str:
        """The law in LaTeX, without dollar signs."""
        return f"{latex(self.lhs, axes)} = {latex(self.rhs, axes)}"

    def _repr_latex_(self) -> str:
        return f"$\\displaystyle {self.latex()}$"


def made_law(names: Names, kind: str, name: str, lhs: Any, rhs: Any) -> Law:
    """A law, or a constraint, from a text, an equation or two sides.

    Raises
    ------
    ReadError, RankError, DeclarationError
        As `FluidModel.law`, whatever other laws there are.
    """
    where = f"{kind} '{name}'"
    try:
        left, right = (_checked(names, where, s) for s in _sides(names, where, lhs, rhs))
        law = Law(name, left, right, _common_rank(left, right))
    except RankError as error:
        raise RankError(f"{where}: {error}") from None
    if not law.residual.atoms(Field):
        raise DeclarationError(f"{where} holds no field: {law}")
    return law


def _sides(names: Names, where: str, lhs: Any, rhs: Any) -> tuple[Expr, Expr]:
    if isinstance(lhs, str):
        if not (isinstance(rhs, int) and rhs == 0):
            raise DeclarationError(f"{where}: as text, give the whole of it as one string")
        return read_law(lhs, names.in_text())
    if isinstance(lhs, Equality) and rhs == 0:
        left, right = lhs.args
        return left, right
    return exact(lhs), exact(rhs)


def _checked(names: Names, where: str, expr: Expr) -> Expr:
    try:
        expr = names.canonical(expr)
    except DeclarationError as error:
        raise DeclarationError(f"{where}: {error}") from None
    loose = _outside_multipliers(expr).free_symbols & set(WAVE_SYMBOLS)
    if loose:
        raise DeclarationError(
            f"{where}: {', '.join(sorted(s.name for s in loose))} stands outside multiplier(f, g); a law is "
            "written in space and time, and the wave enters only as the second argument of multiplier"
        )
    if len(names.axes) < 3:
        for node in expr.atoms(Cross, Curl):
            raise DeclarationError(
                f"{where}: {node} leaves the axes '{names.axes}' of the model; "
                "declare it with axes='xyz'"
            )
    for node in expr.atoms(Components):
        if node.size != len(names.axes):
            raise RankError(f"{node} has {node.size} entries, the model has axes '{names.axes}'")
    return expr


def _outside_multipliers(expr: Expr) -> Expr:
    """The expression with every multiplier's function of the wave taken away."""
    if not expr.atoms(Multiplier):
        return expr
    if isinstance(expr, Multiplier):
        return _outside_multipliers(expr.args[0])
    return Add(*(_outside_multipliers(a) for a in expr.args if isinstance(a, Expr)))


def _common_rank(left: Expr, right: Expr) -> int:
    ranks = {rank_of(side) for side in (left, right) if side != 0}
    if len(ranks) == 2:
        low, high = sorted(ranks)
        raise RankError(
            f"one side is a {WORDS[low]}, the other a {WORDS[high]}; both sides need the same rank"
        )
    return ranks.pop() if ranks else 0


def same_law(law: Law, other: Law) -> bool:
    """Whether two laws differ by a constant factor at most."""
    if law.rank != other.rank or law.residual.atoms(Field) != other.residual.atoms(Field):
        return False
    mine, theirs = expand(law.residual), expand(other.residual)
    ratios = (Add.make_args(mine)[0] / term for term in Add.make_args(theirs))
    return any(
        not r.has(FieldAtom, Operator, Components) and expand(mine - r * theirs) == 0
        for r in ratios
    )
