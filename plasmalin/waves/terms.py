"""The linearized laws taken apart: what acts on a perturbation, and its uniform coefficient."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from functools import cached_property

from sympy import Add, Expr, Mul, S, cancel

from ..declare.fields import Field, Perturbation
from ..declare.operators import Advect, Cross, Div, Grad, Laplacian, Outer, PartialT, rank_of
from ..linearize.ledger import KEPT, Piece
from ..linearize.linearized import LinearizedModel

Terms = Mapping[Expr, Expr]
"""A linearized law, left minus right: what acts on a perturbation -> its uniform coefficient."""


class Laws:
    """The linearized laws taken apart."""

    def __init__(self, linear: LinearizedModel) -> None:
        self.linear = linear
        self.kept = {
            name: [p for p in linear.ledger if p.law == name and p.fate == KEPT]
            for name in linear.laws
        }
        self.terms = {name: _terms(pieces) for name, pieces in self.kept.items()}

    def of_rank(self, rank: int) -> Iterator[tuple[str, Terms]]:
        return ((n, t) for n, t in self.terms.items() if self.linear.laws[n].rank == rank)

    @cached_property
    def velocities(self) -> list[Field]:
        vectors = [f for f in self.linear.fields.values() if f.rank == 1]
        return [v for v in vectors if self.evolved(v) or self._carries_itself(v)]

    def _carries_itself(self, v: Field) -> bool:
        pairs = (Advect(v, v), Outer(v, v))
        return any(law.residual.has(*pairs) for law in self.linear.laws.values())

    def evolved(self, v: Field) -> dict[Field, Terms]:
        """Scalars that a law changes in time by the divergence of a velocity, each with that law."""
        found: dict[Field, Terms] = {}
        for _, terms in self.of_rank(0):
            if Div(v.perturbation) in terms:
                for f in _evolving(terms):
                    if f.rank == 0:
                        found.setdefault(f, terms)
        return found

    @cached_property
    def all_evolving(self) -> set[Field]:
        return {f for _, terms in self.of_rank(0) for f in _evolving(terms)}

    def rate(self, f: Field, v: Field, above: tuple[Field, ...] = ()) -> Expr | None:
        """r in d_t f = −r div v, along the motion; from a law in d_t f, d_t of other scalars and div v."""
        moving = Div(v.perturbation)
        for _, terms in self.of_rank(0):
            own = terms.get(PartialT(f.perturbation))
            others = [g for g in _evolving(terms) if g is not f]
            if own is None or any(g.rank or g in above for g in others):
                continue
            rates = [self.rate(g, v, (*above, f)) for g in others]
            if None in rates or (not others and moving not in terms):
                continue
            rest = Add(
                *(
                    terms[PartialT(g.perturbation)] * r
                    for g, r in zip(others, rates, strict=True)
                    if r is not None
                )
            )
            return cancel((terms.get(moving, S.Zero) - rest) / own)
        return None


def _terms(pieces: list[Piece]) -> dict[Expr, Expr]:
    found: dict[Expr, list[Expr]] = {}
    for p in pieces:
        sign = 1 if p.side == "left" else -1
        for term in Add.make_args(p.value):
            coefficient, rest = _taken_apart(term)
            found.setdefault(rest, []).append(sign * coefficient)
    return {rest: Add(*cs) for rest, cs in found.items()}


def _taken_apart(term: Expr) -> tuple[Expr, Expr]:
    """A term as uniform scalar times the rest; a Laplacian under either of its names, a cross product v first."""
    factors = Mul.make_args(term)
    plain = [a for a in factors if not a.atoms(Perturbation) and rank_of(a) == 0]
    coefficient, rest = Mul(*plain), Mul(*(a for a in factors if a not in plain))
    if isinstance(rest, Div) and isinstance(rest.args[0], Grad):
        return coefficient, Laplacian(rest.args[0].args[0])
    if isinstance(rest, Cross) and isinstance(rest.args[1], Perturbation):
        return -coefficient, Cross(rest.args[1], rest.args[0])
    return coefficient, rest


def _evolving(terms: Terms) -> list[Field]:
    inner = (rest.args[0] for rest in terms if isinstance(rest, PartialT))
    return [x.field for x in inner if isinstance(x, Perturbation)]
