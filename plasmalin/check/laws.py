"""A linearized law derived by hand, held against the ledger term by term.

Claim and law are lowered for a general wave vector; the coefficients of their cells decide. Terms that share cells form
a group, which holds a slip or none.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING, Any

from sympy import Add, Expr, S

from ..declare.fields import Components
from ..declare.notation import paper
from ..declare.operators import Operator
from ..errors import DeclarationError, RankError
from ..linearize.ledger import KEPT, Piece
from ..waves.lowering import Index, indices
from .cells import Cell, Cells, Group, cells_of, general_wave, vanishes
from .derived import Condition, solve_conditions
from .lawclaim import LawClaim, Term, read_law_claim
from .lawslips import slips_of, superfluous
from .verdict import Slip, Verdict

if TYPE_CHECKING:
    from ..linearize.linearized import LinearizedModel

PROOF = "exact: every coefficient was compared for a general wave vector"


def check_law(
    linear: LinearizedModel, name: str, claim: Any, where: Mapping[Any, Any] | None = None
) -> Verdict:
    """Judge a linearized law; see `LinearizedModel.check`."""
    law, component = _law(linear, name)
    made = read_law_claim(linear, claim, where or {})
    pieces = [p for p in linear.ledger if p.law == law]
    best: Comparison | None = None
    for index in _components(linear, law, component, made.rank):
        found = _compared(linear, pieces, made, index)
        if best is None or found.merit > best.merit:
            best = found
    assert best is not None
    return best.verdict()


def _law(linear: LinearizedModel, name: str) -> tuple[str, str]:
    """The law, and the component where the name ends in one: "momentum, x"."""
    if name in linear.laws:
        return name, ""
    head, _, component = str(name).rpartition(", ")
    if head in linear.laws and component and set(component) <= set(linear.axes):
        return head, component
    raise DeclarationError(f"no law '{name}'; there are: {', '.join(linear.laws)}")


def _components(
    linear: LinearizedModel, law: str, component: str, rank: int
) -> Iterable[Index | None]:
    """Which components a claim may be; None for the whole law."""
    whole = linear.laws[law].rank
    if rank == whole and not component:
        return [None]
    words = ("scalar", "vector", "rank-2 tensor")
    if rank != 0 or (component and len(component) != whole):
        raise RankError(
            f"the claim is a {words[rank]}, the law '{law}' a {words[whole]}; "
            "give the whole law or one of its components"
        )
    if component:
        return [tuple(linear.axes.index(a) for a in component)]
    return list(indices(whole, len(linear.axes)))


@dataclass(frozen=True)
class Comparison:
    """A claim held against a law, or against one component of it."""

    made: LawClaim
    pieces: list[Piece]
    groups: list[Group]
    others: list[Term]
    scale: Expr
    used: list[Condition]

    @property
    def merit(self) -> tuple[int, int]:
        """More is nearer to agreement: few slips, many groups right."""
        return -len(self.slips), sum(self._right(g) for g in self.groups)

    def _right(self, group: Group) -> bool:
        found = group.factor
        return group.empty or (found is not None and vanishes(found - self.scale))

    @cached_property
    def slips(self) -> list[Slip]:
        made = [s for g in self.groups if not self._right(g) for s in slips_of(self, g)]
        return [*made, *(superfluous(self, t) for t in self.others)]

    def show(self, expr: Expr) -> str:
        return paper(expr, self.made.axes)

    def verdict(self) -> Verdict:
        """The verdict, with what was used."""
        slips = sorted(self.slips, key=lambda s: (s.multiplier != -1, s.multiplier.count_ops()))
        kind = "differs" if slips else "identical"
        notes = [f"using {self.show(c.equation.lhs)} = 0" for c in self.used]
        notes += ["the repairs are needed together"] if len(slips) > 1 else []
        proof = PROOF
        if self.scale not in (1, -1) and not slips:
            proof += (
                f", both sides being multiplied by {self.show(self.scale)}, which must not vanish"
            )
        return Verdict(kind, not slips, proof, self.made.reading, (), tuple(slips), tuple(notes))


def _compared(
    linear: LinearizedModel, pieces: list[Piece], made: LawClaim, index: Index | None
) -> Comparison:
    """Without the background's conditions, and with them where that is not enough."""
    plain = _comparison(linear, pieces, made, index, [])
    if plain.slips and linear.conditions:
        symbols = made.claim.residual.free_symbols
        needed = symbols.union(*(p.value.free_symbols for p in pieces if p.fate == KEPT))
        used = solve_conditions(list(linear.conditions), symbols, needed)
        modulo = _comparison(linear, pieces, made, index, used)
        return modulo if modulo.merit > plain.merit else plain
    return plain


def _comparison(
    linear: LinearizedModel,
    pieces: list[Piece],
    made: LawClaim,
    index: Index | None,
    used: list[Condition],
) -> Comparison:
    wave = general_wave(linear.axes)
    changes: dict[Any, Any] = {}
    for c in reversed(used):
        changes = {c.symbol: c.value.xreplace(changes), **changes}

    def cells(expr: Expr, part: Index | None) -> Cells:
        return cells_of(made.claim.written_out(expr), wave, part, changes)

    claimed = [(t, cells(t.signed, None)) for t in made.terms if t.order == 1]
    derived = [
        (p, value, cells(value if p.side == "left" else -value, index))
        for p in pieces
        if p.fate == KEPT
        for value in Add.make_args(p.value)
    ]
    groups = _grouped([c for c in claimed if c[1]], [d for d in derived if d[2]])
    others = [t for t in made.terms if t.order != 1]
    if vanishes(_zeroth(others, changes, made)):
        others = [t for t in others if t.order]
    return Comparison(made, pieces, groups, others, _scale(groups), used)


def _zeroth(terms: list[Term], changes: Mapping[Any, Any], made: LawClaim) -> Expr:
    """The sum of the terms without a first-order field; one of vectors counts as not zero."""
    total = Add(*(t.signed for t in terms if t.order == 0))
    plain = made.claim.written_out(total).xreplace(dict(changes))
    return S.One if plain.atoms(Components, Operator) else plain


def _grouped(claimed: list[Any], derived: list[Any]) -> list[Group]:
    """Connected through the cells that they share."""
    groups: list[tuple[set[Cell], list[Any], list[Any]]] = []
    for kind, items in ((1, claimed), (2, derived)):
        for item in items:
            mine = set(item[-1])
            joined = [g for g in groups if g[0] & mine]
            groups = [g for g in groups if not g[0] & mine]
            made: Any = (mine.union(*(g[0] for g in joined)), [], [])
            for g in joined:
                made[1].extend(g[1])
                made[2].extend(g[2])
            made[kind].append(item)
            groups.append(made)
    return [Group(tuple(c), tuple(d)) for _, c, d in groups]


def _scale(groups: list[Group]) -> Expr:
    """The factor between claim and law that most groups have: first none or a sign, then that of ∂_t."""
    found: list[tuple[Expr, Group]] = [(f, g) for g in groups if (f := g.factor) is not None]
    distinct: list[Expr] = []
    for f, _ in found:
        if not any(vanishes(f - d) for d in distinct):
            distinct.append(f)
    if not distinct:
        return S.One
    count: Counter[Expr] = Counter()
    leads: Counter[Expr] = Counter()
    for f, g in found:
        same = next(d for d in distinct if vanishes(f - d))
        count[same] += 1
        leads[same] += g.of_time
    return max(distinct, key=lambda d: (count[d], d == 1, d == -1, leads[d], -d.count_ops()))
