"""The background: what must hold at zeroth order, and what balances what."""

from __future__ import annotations

import html
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from functools import cached_property
from typing import Any, cast

from sympy import Add, Eq, Expr, S, Symbol, expand, factor_terms

from ..declare.fields import Components, Field, components
from ..declare.law import Law
from ..declare.notation import name_text, paper
from ..declare.operators import identity
from ..errors import BackgroundError
from .flows import Source, drifts, sources
from .ledger import BALANCE, Ledger
from .settle import _combined, settle


@dataclass(frozen=True)
class Balance:
    """One law at zeroth order.

    Attributes
    ----------
    law : str
    left, right : tuple of Expr
        The terms of each side at zeroth order.
    residuals : tuple of Expr
        left − right, one entry per component that does not vanish identically.
    assumed : bool
        Whether a fixed external source is assumed to balance it.
    """

    law: str
    left: tuple[Expr, ...]
    right: tuple[Expr, ...]
    residuals: tuple[Expr, ...]
    assumed: bool

    def text(self, axes: str) -> str:
        if not self.left and not self.right:
            return f"{self.law}: every zeroth-order term vanishes"
        if self.assumed and self.residuals:
            source = paper(Add(*self.left) - Add(*self.right), axes)
            return f"{self.law}: {source} is balanced by an assumed external source"
        sides = f"{_side(self.left, axes)} = {_side(self.right, axes)}"
        return f"{self.law}: {sides}" + ("" if self.residuals else ", satisfied identically")


def _side(terms: tuple[Expr, ...], axes: str) -> str:
    """The terms as they stand, not added up, so that it shows what cancels what."""
    return " + ".join(paper(t, axes) for t in terms).replace("+ −", "− ") or "0"


class Equilibrium:
    """The background in words: the fields, in each law what balances what, drifts, net charge and current.

    Attributes
    ----------
    balances : tuple of Balance
    fields : dict of str to Expr
        The backgrounds that are not zero.
    gradients : dict of str to Expr
        Their uniform local gradients that are not zero.
    sources : tuple of Source
        Net charge and current, as the laws of the fields have them.
    drifts : dict of Symbol to Expr
        Components of background flows that the momentum laws give, e.g. E x B and Pedersen drifts.
    """

    def __init__(
        self,
        balances: tuple[Balance, ...],
        fields: Mapping[str, Field],
        axes: str,
        laws: Mapping[str, Law] | None = None,
    ) -> None:
        self.balances, self._axes, self._laws = balances, axes, laws or {}
        self.fields = {n: f.background for n, f in fields.items() if f.background != 0}
        self.gradients = {n: f.gradient for n, f in fields.items() if f.gradient != 0}

    def __str__(self) -> str:
        shown = ((name_text(n), paper(value, self._axes)) for n, value in self.fields.items())
        named = [f"{name} = {value}" for name, value in shown]
        named += [f"∇{name_text(n)} = {paper(g, self._axes)}" for n, g in self.gradients.items()]
        lines = ["Background: " + (", ".join(named) or "everything is zero")]
        lines += [f"  {b.text(self._axes)}" for b in self.balances]
        lines += [f"  {text}" for text in (*self._drift_texts(), *self._source_texts())]
        lines += self.warnings
        return "\n".join(lines)

    @cached_property
    def sources(self) -> tuple[Source, ...]:
        return sources(self._laws)

    @cached_property
    def drifts(self) -> dict[Symbol, Expr]:
        return drifts(self._laws, {b.law: b.residuals for b in self.balances if not b.assumed})

    def _drift_texts(self) -> Iterator[str]:
        for symbol, value in self.drifts.items():
            held = (b.law for b in self.balances if any(r.has(symbol) for r in b.residuals))
            laws = ", ".join(n for n in held if self._laws[n].rank == 1)
            yield f"Drift {name_text(symbol.name)} = {paper(value, self._axes)} (balanced in {laws})"

    def _source_texts(self) -> Iterator[str]:
        for s in self.sources:
            yield f"Net {s.what} (in {s.law}): {paper(s.value, self._axes)}"

    @property
    def warnings(self) -> list[str]:
        assumed = [b.law for b in self.balances if b.assumed and b.residuals]
        if not assumed:
            return []
        return [
            (
                f"Warning: an external source is assumed to balance {', '.join(repr(n) for n in assumed)} as typed. "
                "The result then depends on how that law is written: multiplying a law by a field leaves the "
                "relation unchanged if and only if the background satisfies the law."
            )
        ]

    def __repr__(self) -> str:
        return str(self)

    def _repr_html_(self) -> str:
        return f"<pre>{html.escape(str(self))}</pre>"


def balance(law: Law, ledger: Ledger, assumed: bool, size: int, kind: str = "law") -> Balance:
    """The zeroth order of one law or constraint (`kind`, for messages).

    Raises
    ------
    BackgroundError
        When the background cannot satisfy the law and no source is assumed.
    """
    pieces = [p for p in ledger if p.fate == BALANCE]
    left = tuple(p.value for p in pieces if p.side == "left")
    right = tuple(p.value for p in pieces if p.side == "right")
    whole = scalar_entries(Add(*left) - Add(*right), size)
    residuals = tuple(_tidy(r) for r in whole if expand(r) != 0)
    for r in residuals:
        if not assumed and cannot_vanish(r):
            raise BackgroundError(
                f"{kind} '{law.name}' leaves {paper(r)} on the background, which is not zero; "
                "change a background, add what balances it (a field, a species, a constant source), "
                f"or linearize(assume=[{law.name!r}]) if a fixed external source does"
            )
    return Balance(law.name, left, right, residuals, assumed)


def _tidy(residual: Expr) -> Expr:
    return cast(Expr, factor_terms(expand(residual)))


def scalar_entries(value: Expr, size: int) -> list[Expr]:
    """The components of a uniform expression, one for a scalar."""
    unit = components(*(tuple(int(i == j) for j in range(size)) for i in range(size)))
    known: dict[Any, Any] = {identity: unit}
    value = settle(value.xreplace(known))
    if not value.atoms(Components):
        return [value]
    if max(c.rank for c in value.atoms(Components)) == 1:
        return list(cast(Any, _combined(value)).args or ())
    pairs = [(i, j) for i in range(size) for j in range(size)]
    return [Add(*(_entry(term, ij) for term in Add.make_args(value))) for ij in pairs]


def _entry(term: Expr, index: tuple[int, int]) -> Expr:
    made = S.One
    for a in term.args if not isinstance(term, Components) else (term,):
        made *= a.entry(index) if isinstance(a, Components) else a
    return made


def cannot_vanish(residual: Expr) -> bool:
    """Whether a residual is not zero for any numbers but zeros of the declared parameters.

    A single product vanishes only if a parameter is zero, and then it should not be declared; a
    sum of terms of one sign never does.
    """
    whole = expand(residual)
    return not isinstance(whole, Add) or bool(whole.is_positive or whole.is_negative)


def conditions(balances: tuple[Balance, ...]) -> tuple[Eq, ...]:
    """What the parameters must satisfy, each equation once."""
    found: dict[Expr, None] = {}
    for b in balances:
        if not b.assumed:
            for r in b.residuals:
                if -r not in found:
                    found.setdefault(r)
    return tuple(cast(Eq, Eq(r, 0, evaluate=False)) for r in found)
