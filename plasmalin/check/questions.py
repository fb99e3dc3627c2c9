"""The kinds of changes that may make a claim right, each looked for in a prime field and proved by exact algebra."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from itertools import combinations, product

from sympy import Expr, Integer, S

from ..declare.notation import paper
from ..declare.operators import omega
from ..errors import PlasmalinError
from .claim import Claim
from .compare import Match, compare
from .missing import Shapes, missing
from .places import (
    Changes,
    Edit,
    Spot,
    apart,
    at,
    changed,
    edits,
    exchanges,
    grouped,
    powers_of_sines,
    powers_of_sums,
)
from .search import Search, second, solve_one, solve_two, unknown
from .telling import cost, is_idle, shortened, told
from .verdict import Slip

DIVISIONS = ("over", "over twice", "more")
USUAL = (S.NegativeOne, Integer(2), S.Half)
"""The slips that are made alike in two terms."""


@dataclass(frozen=True)
class Repair:
    """A change that was proved to make the claim right.

    Attributes
    ----------
    slips : tuple of Slip
        One, or two that were made together.
    claim : Claim
        The repaired claim.
    match : Match
        How it agrees with the derived relation.
    cost : float
        How far it is from simple.
    """

    slips: tuple[Slip, ...]
    claim: Claim
    match: Match
    cost: float


def single(search: Search) -> Iterator[Repair]:
    """One factor or one term, a number times powers of symbols."""
    for edit in edits(search.claim):
        if edit.kind not in DIVISIONS and not search.late:
            yield from _repaired(search, edit)


def divided(search: Search) -> Iterator[Repair]:
    """One term divided or multiplied by one plus a number times powers of symbols."""
    for edit in edits(search.claim):
        if edit.kind in DIVISIONS and not search.late:
            yield from _repaired(search, edit)


def _missing(search: Search) -> Iterator[Repair]:
    """A term that is missing, or a factor on one, that is a sum or depends on ω."""
    shapes = Shapes(search)
    for kind in ("plus", "times"):
        for edit in edits(search.claim):
            if edit.kind.startswith(kind) and not search.late:
                yield from _known(search, edit, missing(search, edit, shapes))


def _by_shorthands(search: Search) -> Iterator[Repair]:
    """A factor that is a shorthand which depends on ω."""
    names = [s for s in search.claim.definitions if search.claim.written_out(s).has(omega)]
    listed = [e for e in edits(search.claim) if e.kind == "times" and names]
    for edit, name, power in product(listed, names, (1, -1)):
        if not search.late and search.holds(edit.changes(name**power)):
            yield from _known(search, edit, [name**power])


def _repaired(search: Search, edit: Edit) -> Iterator[Repair]:
    """Of two values that differ in sign, as they do under a square, the plain one if it will do."""
    values = solve_one(search, edit.changes(unknown))
    done: set[Expr] = set()
    for value in sorted(values, key=lambda v: bool(v.could_extract_minus_sign())):
        if -value not in done:
            found = list(_known(search, edit, [value]))
            done |= {value} if found or value == 1 else set()
            yield from found


def _known(search: Search, edit: Edit, values: Iterable[Expr]) -> Iterator[Repair]:
    """What the unknown may be, in the author's symbols, proved."""
    inside = {part for part, _ in edit.spots} - {"left", "right"}
    for value in values:
        plain = search.derived.angles.written(value)
        made = plain if inside else shortened(search.claim, plain)
        if not is_idle(edit, made):
            slips = (told(edit, made),)
            yield from _proved(search, edit.changes(made), slips, cost(edit, made))


def _proved(
    search: Search, changes: Changes, slips: tuple[Slip, ...], size: float
) -> Iterator[Repair]:
    yield from _proved_claim(search, changed(search.claim, changes), slips, size)


def _proved_claim(
    search: Search, claim: Claim, slips: tuple[Slip, ...], size: float
) -> Iterator[Repair]:
    try:
        found = compare(claim, search.derived)
    except (ArithmeticError, PlasmalinError):
        return
    if found is not None:
        yield Repair(slips, claim, found, size)


def _wholesale(search: Search) -> Iterator[Repair]:
    """Symbols exchanged throughout, and powers of sums."""
    for a, b, claim in exchanges(search.claim):
        if not search.late and search.holds_for(claim):
            slip = Slip(a, b / a, f"{paper(a)} and {paper(b)} are exchanged")
            yield from _proved_claim(search, claim, (slip,), 1.5)
    yield from _raised(search, powers_of_sums(search.claim))


def _sines(search: Search) -> Iterator[Repair]:
    """Powers of sines and cosines."""
    yield from _raised(search, powers_of_sines(search.claim))


def _raised(search: Search, listed: Iterator[Edit]) -> Iterator[Repair]:
    for edit in listed:
        if not search.late and search.holds(edit.changes(S.One)):
            yield from _proved(search, edit.changes(S.One), (told(edit, S.One),), 1.2)


def _alike(search: Search) -> Iterator[Repair]:
    """Two terms with the same usual slip."""
    for first, other in _pairs(search):
        for factor in USUAL:
            if search.late:
                return
            changes = dict.fromkeys([*first, *other], ("times", factor))
            if search.holds(changes):
                both = [_named(search, spots) for spots in (first, other)]
                size = 1.0 + sum(cost(edit, factor) for edit in both)
                yield from _proved(search, changes, tuple(told(e, factor) for e in both), size)


def _double(search: Search) -> Iterator[Repair]:
    """Two terms with any factors."""
    for pair in _pairs(search):
        if search.late:
            return
        for values in solve_two(search, _both(pair, (unknown, second))):
            if S.One in values:
                continue
            both = [(_named(search, s), v) for s, v in zip(pair, values, strict=True)]
            size = 2.0 + sum(cost(e, v) for e, v in both)
            slips = tuple(told(e, v) for e, v in both)
            yield from _proved(search, _both(pair, values), slips, size)


Pair = tuple[list[Spot], list[Spot]]


def _both(pair: Pair, values: tuple[Expr, Expr]) -> dict[Spot, tuple[str, Expr]]:
    return {s: ("times", v) for spots, v in zip(pair, values, strict=True) for s in spots}


def _pairs(search: Search) -> Iterator[Pair]:
    """Two terms, or groups of equal terms, neither inside the other."""
    for (first, _), (other, _) in combinations(grouped(search.claim), 2):
        if apart([*first, *other]):
            yield first, other


def _named(search: Search, spots: list[Spot]) -> Edit:
    where = "everywhere" if len(spots) > 1 else ""
    return Edit(at(search.claim, spots[0]), "times", where, tuple(spots))


QUESTIONS = (
    (single, _sines, divided, _by_shorthands, _wholesale),
    (_missing,),
    (_alike,),
    (_double,),
)
"""What may be wrong, the simplest first; those of one group are weighed against each other."""
