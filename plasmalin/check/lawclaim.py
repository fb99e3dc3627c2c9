"""A linearized law as its author writes it: read, and taken apart into terms."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from sympy import Add, Eq, Expr, Mul, S

from ..declare.fields import Background, Components, Field, FieldAtom, Perturbation, components
from ..declare.notation import latex, paper
from ..declare.operators import (
    OPERATORS,
    WAVE_SYMBOLS,
    Cross,
    Curl,
    advect,
    ddot,
    dot,
    identity,
    outer,
    rank_of,
)
from ..declare.typed import read_claim
from ..errors import DeclarationError, RankError
from ..linearize.settle import settle
from ..linearize.split import first_order_factors
from .claim import Claim
from .names import Names

if TYPE_CHECKING:
    from ..linearize.linearized import LinearizedModel


@dataclass(frozen=True)
class Term:
    """One term of a claimed law.

    Attributes
    ----------
    side : str
        "left" or "right" of the equals sign.
    value : Expr
        As it stands on that side.
    order : int
        How many first-order fields it multiplies.
    """

    side: str
    value: Expr
    order: int

    @property
    def signed(self) -> Expr:
        """The term brought to the left."""
        return self.value if self.side == "left" else -self.value


@dataclass(frozen=True)
class LawClaim:
    """A claimed linearized law.

    Attributes
    ----------
    claim : Claim
        Its sides, with the shorthands that they use.
    rank : int
    terms : tuple of Term
    axes : str
    """

    claim: Claim
    rank: int
    terms: tuple[Term, ...]
    axes: str

    @property
    def reading(self) -> str:
        """The claim as it was understood, in LaTeX, first-order fields with a tilde."""
        shown = [f"{latex(self.claim.left, self.axes)} = {latex(self.claim.right, self.axes)}"]
        shown += [f"{latex(s)} = {latex(d)}" for s, d in self.claim.definitions.items()]
        return r",\quad ".join(shown)


def read_law_claim(linear: LinearizedModel, claim: Any, where: Mapping[Any, Any]) -> LawClaim:
    """A claimed linearized law in text or SymPy, names of fields standing for their first-order parts."""
    book = LawNames(linear, where)
    left, right = book.sides(claim)
    rank = _rank(left, right)
    _refuse_leaving(left - right, linear.axes)
    terms = (*_terms("left", left), *_terms("right", right))
    return LawClaim(Claim(left, right, book.used(left - right)), rank, terms, linear.axes)


class LawNames(Names):
    """The names of a claimed law: parameters, first-order fields, backgrounds, operators."""

    def __init__(self, linear: LinearizedModel, where: Mapping[Any, Any]) -> None:
        self.axes = linear.axes
        own = {**linear.vectors, **linear.symbols}
        fields = {name: field.perturbation for name, field in linear.fields.items()}
        symbols: dict[str, Any] = {
            **{s.name: s for s in WAVE_SYMBOLS},
            **_named_backgrounds(linear),
            **dict(_entries(linear)),
            **{f"partial_{a}": _along(u) for a, u in _units(linear.axes).items()},
            **OPERATORS,
            "identity": identity,
            "components": components,
            **own,
            **fields,
        }
        super().__init__(symbols, {*own, *fields, *OPERATORS}, where, {})

    def sides(self, claim: Any) -> tuple[Expr, Expr]:
        """The two sides; an expression is set equal to zero."""
        if isinstance(claim, str):
            left, right = self.read(read_claim, claim, "claim")
            return left, right
        if isinstance(claim, Eq):
            return self._given(claim.lhs), self._given(claim.rhs)
        return self._given(claim), S.Zero

    def _given(self, expr: Any) -> Expr:
        """A side in SymPy, with the fields of the model or their first-order parts."""
        if not isinstance(expr, Expr):
            raise DeclarationError(
                f"claim: {expr!r} is not a law; give a text, or a SymPy expression or equation"
            )
        found = self.meanings(expr, "claim")
        for atom in expr.atoms(FieldAtom):
            field = atom if isinstance(atom, Field) else atom.field
            if field.name not in self.names:
                self.unknown(field.name)
            found[atom] = (
                field.background if isinstance(atom, Background) else self.names[field.name]
            )
        return expr.xreplace(found)


def _along(unit: Expr) -> Any:
    return lambda f: advect(unit, f)


def _units(axes: str) -> dict[str, Expr]:
    return {a: components(*(int(a == b) for b in axes)) for a in axes}


def _named_backgrounds(linear: LinearizedModel) -> dict[str, Expr]:
    """Backgrounds by the names that the ledger prints: B_0, v_e0."""
    return {
        f"{name}0" if "_" in name else f"{name}_0": f.background
        for name, f in linear.fields.items()
    }


def _entries(linear: LinearizedModel) -> Iterator[tuple[str, Expr]]:
    """Components of first-order fields by their names: v_e_x, P_xz."""
    units = _units(linear.axes)
    for name, field in linear.fields.items():
        if field.rank == 1:
            yield from ((f"{name}_{a}", dot(u, field.perturbation)) for a, u in units.items())
        if field.rank == 2:
            pairs = ((a, b) for a in units for b in units)
            yield from (
                (f"{name}_{a}{b}", ddot(outer(units[a], units[b]), field.perturbation))
                for a, b in pairs
            )


def _rank(left: Expr, right: Expr) -> int:
    try:
        ranks = {rank_of(side) for side in (left, right) if side != 0}
    except RankError as error:
        raise RankError(f"claim: {error}") from None
    if not (left - right).atoms(Perturbation):
        raise DeclarationError(
            "claim: it holds no first-order field; n_e stands for the first order of n_e"
        )
    if len(ranks) != 1:
        raise RankError("claim: both sides need the same rank, scalar or vector or tensor")
    return ranks.pop()


def _refuse_leaving(expr: Expr, axes: str) -> None:
    for node in expr.atoms(Cross, Curl) if len(axes) < 3 else ():
        raise DeclarationError(f"claim: {paper(node, axes)} leaves the axes '{axes}' of the model")
    for node in expr.atoms(Components):
        if node.size != len(axes):
            raise RankError(f"claim: {node} has {node.size} entries, the model has axes '{axes}'")


def _terms(side: str, expr: Expr) -> Iterator[Term]:
    """The terms of a side, operators worked out as in the ledger."""
    for part in _parts(expr):
        for value in _parts(settle(part)):
            order = first_order_factors(value)
            if order is None:
                raise DeclarationError(
                    f"claim: {paper(value)} is not linear in first-order fields; write its first order out"
                )
            yield Term(side, value, order)


def _parts(expr: Expr) -> list[Expr]:
    """The terms of an expression, products with sums of fields multiplied out."""
    if isinstance(expr, Add):
        return [t for a in expr.args for t in _parts(a)]
    if isinstance(expr, Mul):
        sums = [a for a in expr.args if isinstance(a, Add) and a.atoms(Perturbation)]
        if sums:
            rest = Mul(*(a for a in expr.args if a is not sums[0]))
            return [t for a in sums[0].args for t in _parts(rest * a)]
    return [] if expr == 0 else [expr]
