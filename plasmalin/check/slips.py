"""Where a claim is wrong: the one change, or the two, after which it is the derived relation."""

from __future__ import annotations

import time
from collections.abc import Iterable, Iterator
from dataclasses import dataclass, replace
from itertools import combinations, product
from typing import Any

from sympy import Add, Expr, Integer, Mul, Pow, S

from ..declare.notation import paper
from ..declare.operators import omega
from ..errors import PlasmalinError
from ..exact.polynomial import ExactPolynomial
from .balances import leading_parts
from .claim import Claim
from .compare import Match, compare, covered
from .derived import Derived
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
    powers,
)
from .search import Search, second, solve_one, solve_two, unknown
from .telling import cost, is_idle, shortened, told
from .verdict import Slip

MOST = 6
"""Repairs that are listed."""
DIVISIONS = ("over", "over twice", "more")
CONTORTED = 16.0
"""A change that costs so much is no repair: it replaces what the author wrote."""
WORSE = 3.0
"""How much less simple than the simplest a listed repair may be."""


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


def repairs(claim: Claim, derived: Derived, budget: float) -> list[Repair]:
    """Every repair found, simplest first.

    Parameters
    ----------
    claim : Claim
    derived : Derived
    budget : float
        Seconds.

    Returns
    -------
    list of Repair
        Each proved; empty where none was found.
    """
    deadline = time.monotonic() + budget
    found = _by_factors(claim, derived, deadline) or _whole(claim, derived, deadline)
    found = _distinct(sorted(found, key=lambda r: r.cost))
    return [r for r in found if r.cost <= found[0].cost + WORSE][:MOST]


def repairs_as_limit(claim: Claim, derived: Derived, budget: float) -> list[Repair]:
    """Repairs after which the claim is a leading part of the derived relation, one or two symbols scaling."""
    deadline = time.monotonic() + budget
    polynomial, _ = derived.numerator(claim.residual)
    shared: dict[Any, Any] = {}
    for target in leading_parts(derived, polynomial.degree, deadline):
        part = replace(derived, polynomial=target)
        search = Search(claim, part, target, deadline, shared)
        found = [*_single(search), *_divided(search)]
        if found or search.late:
            return sorted(found, key=lambda r: r.cost)[:MOST]
    return []


def _whole(claim: Claim, derived: Derived, deadline: float) -> list[Repair]:
    """The questions, cheapest first, for each factor that the claim lacks."""
    polynomial, _ = derived.numerator(claim.residual)
    shared: dict[Any, Any] = {}
    targets = _targets(polynomial, derived)
    searches = [Search(claim, derived, t, deadline, shared) for t in targets]
    for question in (
        _single,
        _divided,
        _by_shorthands,
        _wholesale,
        _missing,
        _alike,
        _double,
    ):
        found = [r for s in searches for r in question(s) if r.cost < CONTORTED]
        if found:
            return found
    return []


def _by_factors(claim: Claim, derived: Derived, deadline: float) -> list[Repair]:
    """A claim that is a product is repaired factor by factor."""
    product = claim.left - claim.right
    factors = [f for f in Mul.make_args(product) if claim.written_out(f).free_symbols]
    if len(factors) < 2 or not all(isinstance(f, Add | Pow) for f in factors):
        return []
    slips: list[Slip] = []
    cost, made = 0.0, S.One
    for f in factors:
        part = Claim(f, S.Zero, claim.definitions)
        if compare(part, derived) is None:
            found = _whole(part, derived, time.monotonic() + (deadline - time.monotonic()) / 3)
            if not found:
                return []
            best = min(found, key=lambda r: r.cost)
            slips += best.slips
            cost, made = cost + best.cost, made * (best.claim.left - best.claim.right)
        else:
            made = made * f
    whole = Claim(made, S.Zero, claim.definitions)
    match = compare(whole, derived)
    return [Repair(tuple(slips), whole, match, cost)] if match is not None and slips else []


def _targets(polynomial: ExactPolynomial, derived: Derived) -> list[ExactPolynomial]:
    """The irreducible factors that the claim lacks, those most like it in degree first."""
    missing = [f for f, _ in derived.factors if not covered(f, polynomial)]
    lacking = missing or [f for f, _ in derived.factors]
    return sorted(lacking, key=lambda f: abs(f.degree - polynomial.degree))


def _single(search: Search) -> Iterator[Repair]:
    """One factor or one term, a number times powers of symbols."""
    for edit in edits(search.claim):
        if edit.kind not in DIVISIONS and not search.late:
            yield from _repaired(search, edit)


def _divided(search: Search) -> Iterator[Repair]:
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
    values = solve_one(search, edit.changes(unknown))
    signs = [v for v in values if not (-v in values and v.could_extract_minus_sign())]
    yield from _known(search, edit, signs)


def _known(search: Search, edit: Edit, values: Iterable[Expr]) -> Iterator[Repair]:
    """What the unknown may be, in the author's symbols, proved."""
    inside = {part for part, _ in edit.spots} - {"left", "right"}
    for value in values:
        made = value if inside else shortened(search.claim, value)
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
    for edit in powers(search.claim):
        if not search.late and search.holds(edit.changes(S.One)):
            yield from _proved(search, edit.changes(S.One), (told(edit, S.One),), 1.2)


USUAL = (S.NegativeOne, Integer(2), S.Half)


def _alike(search: Search) -> Iterator[Repair]:
    """Two terms with the same usual slip."""
    for first, other in _pairs(search):
        for factor in USUAL:
            if search.late:
                return
            changes = dict.fromkeys([*first, *other], ("times", factor))
            if search.holds(changes):
                slips = tuple(_named(search, spots, factor) for spots in (first, other))
                yield from _proved(search, changes, slips, 2.0)


def _double(search: Search) -> Iterator[Repair]:
    """Two terms with any factors."""
    for pair in _pairs(search):
        if search.late:
            return
        for values in solve_two(search, _both(pair, (unknown, second))):
            if S.One in values:
                continue
            slips = tuple(_named(search, s, v) for s, v in zip(pair, values, strict=True))
            bare_numbers = sum(s.term.is_number for s in slips)
            size = 2.0 + sum(len(Mul.make_args(v)) for v in values) + bare_numbers
            yield from _proved(search, _both(pair, values), slips, size)


Pair = tuple[list[Spot], list[Spot]]


def _both(pair: Pair, values: tuple[Expr, Expr]) -> dict[Spot, tuple[str, Expr]]:
    return {s: ("times", v) for spots, v in zip(pair, values, strict=True) for s in spots}


def _pairs(search: Search) -> Iterator[Pair]:
    """Two terms, or groups of equal terms, neither inside the other."""
    for (first, _), (other, _) in combinations(grouped(search.claim), 2):
        if apart([*first, *other]):
            yield first, other


def _named(search: Search, spots: list[Spot], factor: Expr) -> Slip:
    where = "everywhere" if len(spots) > 1 else ""
    return told(Edit(at(search.claim, spots[0]), "times", where, tuple(spots)), factor)


def _distinct(found: Iterable[Repair]) -> list[Repair]:
    seen: set[Any] = set()
    kept = []
    for repair in found:
        key = tuple((s.term, s.multiplier) for s in repair.slips)
        if key not in seen:
            seen.add(key)
            kept.append(repair)
    return kept
