"""Where a claim is wrong: the one change, or the two, after which it is the derived relation."""

from __future__ import annotations

import time
from collections.abc import Iterable, Iterator
from dataclasses import dataclass, replace
from fractions import Fraction
from itertools import combinations
from typing import Any

from sympy import Add, Expr, I, Integer, Mul, Pow, S, Symbol

from ..declare.notation import paper
from ..declare.operators import omega
from ..errors import PlasmalinError
from ..exact.polynomial import ExactPolynomial
from ..exact.polynomial import polynomial as read_exact
from ..waves.ordering import leading_balances
from .claim import Claim
from .compare import Match, compare, covered
from .derived import Derived, bare
from .places import (
    Edit,
    Spot,
    additions,
    apart,
    at,
    edits,
    exchanges,
    grouped,
    multiplied,
    powers,
)  # fmt: skip
from .search import Search, solve_one, solve_two
from .verdict import Slip

MOST_PARTS = 40
"""Leading parts of the derived relation that are tried."""
MOST = 6
"""Repairs that are listed."""
DIVISIONS = ("over", "over twice", "more")
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
    for target in leading_parts(derived, polynomial.degree, deadline):
        part = replace(derived, polynomial=target)
        search = Search(claim, part, target, deadline)
        found = [*_single(search), *_divided(search)]
        if found or search.late:
            return sorted(found, key=lambda r: r.cost)[:MOST]
    return []


def leading_parts(derived: Derived, degree: int, deadline: float) -> list[ExactPolynomial]:
    """The leading balances of a degree in ω under one symbol, or two, becoming small or large."""
    found: dict[Expr, ExactPolynomial] = {}
    for factor, _ in derived.factors:
        if factor.degree <= degree:
            continue
        plain = [g for g in factor.generators if g.is_Symbol]
        single = [{g: Fraction(w)} for g in plain for w in (1, -1)]
        double = [{**a, **b} for a, b in combinations(single, 2) if set(a) != set(b)]
        for weights in (*single, *double):
            if time.monotonic() > deadline:
                return []
            for balance in leading_balances(factor, weights, None):
                if balance.roots == degree and balance.expr not in found:
                    found[balance.expr] = bare(read_exact(balance.expr, omega))
    return sorted(found.values(), key=lambda p: -len(p))[:MOST_PARTS]


def _whole(claim: Claim, derived: Derived, deadline: float) -> list[Repair]:
    """The questions, cheapest first, for each factor that the claim lacks."""
    polynomial, _ = derived.numerator(claim.residual)
    targets = _targets(polynomial, derived)
    for question in (
        _single,
        _divided,
        _wholesale,
        _split,
        _alike,
        _other_species,
        _scaled,
        _double,
    ):
        for target in targets:
            found = list(question(Search(claim, derived, target, deadline)))
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
            yield from _repaired(search, edit, S.One)


def _divided(search: Search) -> Iterator[Repair]:
    """One term divided or multiplied by one plus a number times powers of symbols."""
    for edit in edits(search.claim):
        if edit.kind in DIVISIONS and not search.late:
            yield from _repaired(search, edit, S.One)


def _scaled(search: Search) -> Iterator[Repair]:
    """One factor or one term that holds ω or a sum."""
    listed = [e for e in edits(search.claim) if e.kind in ("times", "plus", "over", "over twice")]
    for scale in search.scales:
        for edit in listed:
            if search.late:
                return
            yield from _repaired(search, edit, scale)


def _repaired(search: Search, edit: Edit, scale: Expr) -> Iterator[Repair]:
    for value in solve_one(search, edit.changed, scale):
        if _idle(edit, value):
            continue
        claim = edit.changed(value)
        slip = Slip(*_slip(edit, value), _words(edit, value))
        yield from _proved(search, (slip,), claim, _cost(edit, value))


def _proved(search: Search, slips: tuple[Slip, ...], claim: Claim, cost: float) -> Iterator[Repair]:
    try:
        found = compare(claim, search.derived)
    except (ArithmeticError, PlasmalinError):
        return
    if found is not None:
        yield Repair(slips, claim, found, cost)


def _wholesale(search: Search) -> Iterator[Repair]:
    """Symbols exchanged throughout, and powers of sums."""
    for a, b, claim in exchanges(search.claim):
        if not search.late and search.vanishes(claim):
            slip = Slip(a, b / a, f"{paper(a)} and {paper(b)} are exchanged")
            yield from _proved(search, (slip,), claim, 1.5)
    for node, power, claim in powers(search.claim):
        if not search.late and search.vanishes(claim):
            text = f"{paper(node)} should be {paper(node**power)}"
            yield from _proved(search, (Slip(node, node ** (power - 1), text),), claim, 1.2)


def _split(search: Search) -> Iterator[Repair]:
    """A term that is there several times should be there once with a symbol's sign turned."""
    for spots, node in grouped(search.claim):
        count, rest = node.as_coeff_Mul()
        if len(spots) != 1 or not count.is_Integer or abs(count) < 2:
            continue
        for symbol in sorted(rest.free_symbols - {omega}, key=str):
            twin = count / abs(count) * (rest.xreplace({symbol: -symbol}) - rest)
            claim = multiplied(search.claim, {spots[0]: 1 + twin / node})
            if not search.late and search.vanishes(claim):
                text = f"in one of the {abs(count)} terms {paper(rest)} the sign of {paper(symbol)} is wrong"
                slip = Slip(node, (1 + twin / node), text)
                yield from _proved(search, (slip,), claim, 1.5)


def _other_species(search: Search) -> Iterator[Repair]:
    """A term of another species is missing: one that is there, with that species' symbols."""
    for node, changed, where in additions(search.claim):
        for term in Add.make_args(node):
            for new in _cousins(search, term):
                for value in (new, -new):
                    if search.late:
                        return
                    if search.vanishes(changed(value)):
                        edit = Edit(node, "plus", where, changed)
                        slip = Slip(value, S.One, _words(edit, value))
                        yield from _proved(search, (slip,), changed(value), 2.0)


def _cousins(search: Search, term: Expr) -> list[Expr]:
    """A term with one species' symbols replaced by another's, gyration in either sense."""
    own = {s.name: s for s in search.claim.written_out(term).free_symbols - {omega}}
    known = {s.name: s for s in search.symbols if isinstance(s, Symbol)}
    endings = {n[-1] for n in own if len(n) > 1}
    new = {n[-1] for n in known if len(n) > 1} - {""}
    found = []
    for old, other in ((a, b) for a in endings for b in new if a != b):
        swap = {
            own[n]: known[n[:-1] + other] for n in own if n[-1] == old and n[:-1] + other in known
        }
        if not swap:
            continue
        made = search.claim.written_out(term).xreplace(swap)
        found.append(made)
        turned = made.xreplace({omega: -omega})
        if turned != made:
            found.append(turned)
    return found


USUAL = (S.NegativeOne, Integer(2), S.Half)


def _alike(search: Search) -> Iterator[Repair]:
    """Two terms with the same usual slip."""
    for first, other in _pairs(search):
        for factor in USUAL:
            if search.late:
                return
            claim = multiplied(search.claim, dict.fromkeys([*first, *other], factor))
            if search.vanishes(claim):
                slips = tuple(_named(search, spots, factor) for spots in (first, other))
                yield from _proved(search, slips, claim, 2.0)


def _double(search: Search) -> Iterator[Repair]:
    """Two terms with any factors."""
    for pair in _pairs(search):
        if search.late:
            return

        def changed(u: Expr, v: Expr, pair: Any = pair) -> Claim:
            return multiplied(
                search.claim, {**dict.fromkeys(pair[0], u), **dict.fromkeys(pair[1], v)}
            )

        for values in solve_two(search, changed):
            if S.One in values:
                continue
            slips = tuple(_named(search, s, v) for s, v in zip(pair, values, strict=True))
            bare_numbers = sum(s.term.is_number for s in slips)
            cost = 2.0 + sum(len(Mul.make_args(v)) for v in values) + bare_numbers
            yield from _proved(search, slips, changed(*values), cost)


def _pairs(search: Search) -> Iterator[tuple[list[Spot], list[Spot]]]:
    """Two terms, or groups of equal terms, neither inside the other."""
    for (first, _), (other, _) in combinations(grouped(search.claim), 2):
        if apart([*first, *other]):
            yield first, other


def _named(search: Search, spots: list[Spot], factor: Expr) -> Slip:
    where = "everywhere" if len(spots) > 1 else ""
    edit = Edit(at(search.claim, spots[0]), "times", where, lambda _: search.claim)
    return Slip(edit.term, factor, _words(edit, factor))


def _idle(edit: Edit, value: Expr) -> bool:
    """Whether a change is none, or is told better as the change of another term."""
    if edit.kind == "times":
        odd = edit.where == "everywhere" and edit.term.is_Symbol
        return bool(
            value == 1 or (odd and (value.has(I) or (value == -1 and edit.term.is_positive)))
        )
    if value == 0:
        return True
    if edit.kind == "plus":
        return any((value / t).is_number for t in Add.make_args(edit.term) if t != 0)
    return edit.kind in ("over", "over twice", "more") and bool(value.is_number)


def _slip(edit: Edit, value: Expr) -> tuple[Expr, Expr]:
    """The term at fault and its multiplier; a missing term is itself, once."""
    made = {
        "times": value,
        "more": 1 + value,
        "over": 1 / (1 + value),
        "over twice": (1 + value) ** -2,
    }
    if edit.kind in made:
        return edit.term, made[edit.kind]
    return value, S.One


def _words(edit: Edit, value: Expr) -> str:
    place = {"": "", "everywhere": " everywhere"}.get(
        edit.where, f" in the definition of {paper(Symbol(edit.where))}"
    )
    term = paper(edit.term)
    if edit.kind == "plus in one":
        base = paper(edit.term.base)
        return f"the term {paper(value)} is missing in one of the factors {base} of {term}{place}"
    if edit.kind.startswith("plus"):
        beside = "" if edit.term == 0 else f" beside {term}"
        return f"the term {paper(value)} is missing{beside}{place}"
    if edit.kind.startswith("over"):
        return f"{term}{place} should be divided by {paper(1 / _slip(edit, value)[1])}"
    if value == 0:
        return f"the term {term} does not belong{place}"
    if value == -1 and edit.kind == "times":
        return f"the sign of {term} is wrong{place}"
    factor = _slip(edit, value)[1]
    depends = ", which depends on ω" if value.has(omega) else ""
    made = paper(factor * edit.term)
    return f"{term}{place} should carry the factor {paper(factor)}{depends}, which makes it {made}"


KIND_COST = {
    "times": 0.0, "more": 1.0, "over": 0.8, "over twice": 0.9, "plus": 0.6, "plus in one": 0.7, "plus below": 0.9,
}  # fmt: skip


def _cost(edit: Edit, value: Expr) -> float:
    size = sum(map(_weight, Mul.make_args(value)))
    roots = sum(1.0 for p in value.atoms(Pow) if not p.exp.is_Integer)
    place = {"": 0.0, "everywhere": 0.4}.get(edit.where, 0.3)
    return size + roots + place + KIND_COST[edit.kind] + 0.01 * len(str(edit.term))


def _weight(factor: Expr) -> float:
    """How far one factor of a repair is from simple."""
    if factor in (S.One, S.NegativeOne):
        return 0.0
    base = factor.base if isinstance(factor, Pow) else factor
    return 1.0 + (2.5 if isinstance(base, Add) else 1.5 if factor.has(omega) else 0.0)


def _distinct(found: Iterable[Repair]) -> list[Repair]:
    seen: set[Any] = set()
    kept = []
    for repair in found:
        key = tuple((s.term, s.multiplier) for s in repair.slips)
        if key not in seen:
            seen.add(key)
            kept.append(repair)
    return kept
