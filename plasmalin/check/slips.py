"""Where a claim is wrong: the one change, or the two, after which it is the derived relation."""

from __future__ import annotations

import time
from collections.abc import Iterable
from dataclasses import replace
from typing import Any

from sympy import Add, Mul, Pow, S

from ..exact.polynomial import ExactPolynomial
from .balances import leading_parts
from .claim import Claim
from .compare import compare, covered
from .derived import Derived
from .questions import QUESTIONS, Repair, divided, single
from .search import Search
from .verdict import Slip

MOST = 6
"""Repairs that are listed."""
CLEAR = 2.5
"""Where a change costs less, no other kind of change is looked for."""
CONTORTED = 16.0
"""A change that costs so much is no repair: it replaces what the author wrote."""
WORSE = 3.0
"""How much less simple than the simplest a listed repair may be."""


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
    deadline = time.process_time() + budget
    found = _by_factors(claim, derived, deadline) or _whole(claim, derived, deadline)
    found = _distinct(sorted(found, key=lambda r: r.cost))
    return [r for r in found if r.cost <= found[0].cost + WORSE][:MOST]


def repairs_as_limit(claim: Claim, derived: Derived, budget: float) -> list[Repair]:
    """Repairs after which the claim is a leading part of the derived relation, one or two symbols scaling."""
    deadline = time.process_time() + budget
    polynomial, _ = derived.numerator(claim.residual)
    shared: dict[Any, Any] = {}
    for target in leading_parts(derived, polynomial.degree, deadline):
        part = replace(derived, polynomial=target)
        search = Search(claim, part, target, deadline, shared)
        found = [*single(search), *divided(search)]
        if found or search.late:
            return sorted(found, key=lambda r: r.cost)[:MOST]
    return []


def _whole(claim: Claim, derived: Derived, deadline: float) -> list[Repair]:
    """The questions, cheapest first, for each factor that the claim lacks."""
    polynomial, _ = derived.numerator(claim.residual)
    shared: dict[Any, Any] = {}
    targets = _targets(polynomial, derived)
    searches = [Search(claim, derived, t, deadline, shared) for t in targets]
    found: list[Repair] = []
    for questions in QUESTIONS:
        for question in questions:
            found += [r for s in searches for r in question(s) if r.cost < CONTORTED]
            if any(r.cost < CLEAR for r in found):
                return found
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
            found = _whole(
                part, derived, time.process_time() + (deadline - time.process_time()) / 3
            )
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


def _distinct(found: Iterable[Repair]) -> list[Repair]:
    seen: set[Any] = set()
    kept = []
    for repair in found:
        key = tuple((s.term, s.multiplier) for s in repair.slips)
        if key not in seen:
            seen.add(key)
            kept.append(repair)
    return kept
