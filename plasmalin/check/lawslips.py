"""What is wrong in a claimed law, term by term, in the ledger's words."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from typing import TYPE_CHECKING, Any

from sympy import Add, Expr, Mul, S, cancel, factor

from ..declare.fields import Components, Perturbation
from ..declare.operators import Operator
from ..linearize.ledger import BALANCE, VANISHES, Piece
from .cells import Cells, Group, vanishes
from .lawclaim import Term
from .verdict import Slip

if TYPE_CHECKING:
    from .laws import Comparison


def slips_of(whole: Comparison, group: Group) -> list[Slip]:
    """What is wrong in a group: by the structure of its terms, or as a whole where that says less."""
    found = list(_by_structure(whole, group))
    ratio = group.factor
    if ratio is None or len(found) == 1:
        return found
    terms = [t for t, _ in group.claimed]
    return [_wrong_factor(whole, terms, cancel(whole.scale / ratio), group.derived)]


def _by_structure(whole: Comparison, group: Group) -> Iterator[Slip]:
    claimed: dict[Expr, list[Term]] = {}
    for term, _ in group.claimed:
        claimed.setdefault(_structure(term.signed)[1], []).append(term)
    derived: dict[Expr, list[tuple[Piece, Expr, Cells]]] = {}
    for item in group.derived:
        derived.setdefault(_structure(item[1])[1], []).append(item)
    for rest in dict.fromkeys((*claimed, *derived)):
        yield from _unlike(whole, *_unpaired(whole, claimed.get(rest, []), derived.get(rest, [])))


def _unpaired(
    whole: Comparison, mine: list[Term], theirs: list[Any]
) -> tuple[list[Term], list[Any]]:
    """Terms of one structure without those that have their equal on the other side."""
    left, over = list(theirs), []
    for term in mine:
        given = _coefficient(whole, [term.signed])
        for item in left:
            wanted = whole.scale * _coefficient(whole, [_signed(*item[:2])])
            if vanishes(wanted - given):
                left.remove(item)
                break
        else:
            over.append(term)
    return over, left


def _unlike(whole: Comparison, mine: list[Term], theirs: list[Any]) -> Iterator[Slip]:
    """The slips of terms of one structure."""
    given = _coefficient(whole, (t.signed for t in mine))
    wanted = whole.scale * _coefficient(whole, (_signed(p, v) for p, v, _ in theirs))
    if vanishes(wanted - given):
        return
    if vanishes(given):
        yield from (_missing(whole, p, value) for p, value, _ in theirs)
    elif vanishes(wanted):
        yield from (superfluous(whole, t) for t in mine)
    else:
        yield _wrong_factor(whole, mine, factor(cancel(wanted / given)), theirs)


def _signed(piece: Piece, value: Expr) -> Expr:
    return value if piece.side == "left" else -value


def _coefficient(whole: Comparison, terms: Iterable[Expr]) -> Expr:
    changes = {c.symbol: c.value for c in whole.used}
    return Add(*(whole.made.claim.written_out(_structure(t)[0]).xreplace(changes) for t in terms))


def _structure(term: Expr) -> tuple[Expr, Expr]:
    """A term as its coefficient times an operator on a first-order field."""
    kinds = Perturbation, Operator, Components
    parts: tuple[list[Expr], list[Expr]] = ([], [])
    for a in Mul.make_args(term):
        parts[bool(a.atoms(*kinds))].append(a)
    return Mul(*parts[0]), Mul(*parts[1])


def _wrong_factor(
    whole: Comparison, terms: list[Term], multiplier: Expr, source: Iterable[Any]
) -> Slip:
    side = terms[0].side
    term = Add(*(t.value if t.side == side else -t.value for t in terms))
    shown, right = whole.show(term), whole.show(_times(multiplier, term))
    why = _origin(whole, source)
    if multiplier == -1:
        return Slip(term, multiplier, f"{shown} should have the other sign, {right}: {why}")
    text = f"{shown} should carry the factor {whole.show(multiplier)}, {right}: {why}"
    return Slip(term, multiplier, text)


def _times(multiplier: Expr, term: Expr) -> Expr:
    return Add(*(multiplier * a for a in Add.make_args(term)))


def _missing(whole: Comparison, piece: Piece, value: Expr) -> Slip:
    term = whole.scale * value
    text = f"{whole.show(term)} is missing on the {piece.side}: {_origin(whole, [(piece,)])}"
    return Slip(term, S.One, text)


def _origin(whole: Comparison, source: Iterable[Any]) -> str:
    """Which terms of the nonlinear law it comes from, in the ledger's words."""
    pieces = list(dict.fromkeys(item[0] for item in source))
    shown = " and ".join(dict.fromkeys(whole.show(p.term) for p in pieces))
    reasons = "; ".join(dict.fromkeys(p.reason for p in pieces if p.reason))
    return f"first order of {shown}" + (f" ({reasons})" if reasons else "")


def superfluous(whole: Comparison, term: Term) -> Slip:
    shown = whole.show(term.value)
    if term.order > 1:
        why = "dropped: product of perturbations"
    elif term.order == 0:
        why = _zeroth_fate(whole, term)
    else:
        why = "no term of the law has such a first-order part"
    return Slip(term.value, S.Zero, f"{shown} is one term too many: {why}")


def _zeroth_fate(whole: Comparison, term: Term) -> str:
    for p in whole.pieces:
        if p.order == 0 and p.fate in (BALANCE, VANISHES) and p.value == term.value:
            return f"of zeroth order, {p.fate_text}"
    return "it holds no first-order field"
