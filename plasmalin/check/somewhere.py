"""Where a claim is right, though its author does not say so: values, an ordering, an expansion, a direction, a convention."""

from __future__ import annotations

import time
from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import Any

from sympy import Add, Pow, S, expand, pi

from ..declare.notation import paper
from .balances import leading_parts
from .case import Case
from .claim import Claim
from .compare import compare
from .convention import under_other_conventions
from .limit import LimitFound, find_limits, limits_about
from .series import series_order
from .sizes import SEARCHED
from .special import special_values
from .verdict import shown_conditions

LEADING = "its terms are a face of the Newton polytope of the derived relation"


@dataclass(frozen=True)
class Somewhere:
    """Where a claim is right, though its author does not say so.

    Attributes
    ----------
    kind, proof, conditions, notes
        As of the verdict.
    doubtful : bool
        Whether a located slip is the better answer: an ordering that nature does not have, or in part only.
    """

    kind: str
    proof: str
    conditions: Any
    notes: tuple[str, ...] = ()
    doubtful: bool = False

    @property
    def asks(self) -> int:
        """How much must hold: one parameter equal to another counts twice, as it is rarely meant."""
        if not isinstance(self.conditions, Mapping):
            return len(self.conditions)
        return sum(1 if value.is_number else 2 for value in self.conditions.values())

    def as_notes(self) -> tuple[str, ...]:
        where = shown_conditions(self.conditions)
        doubt = (
            "right in part or nowhere in nature" if self.doubtful else f"{self.kind} as well, where"
        )
        return (f"{doubt}: {', '.join(where)}",)


def where_right(case: Case) -> Somewhere | None:
    """Another convention; else the values or the ordering that asks least, values first where both ask as much."""
    found = _other_convention(case)
    if found is not None:
        return found
    if len(case.derived.polynomial) > SEARCHED:
        return None
    special = _special(case)
    if special is None or special.asks > 1:
        along = _direction(case)
        if along is not None:
            return along
    orders = (_series, _limit) if case.claim.solved else (_limit, _series)
    ordered = (answer for question in orders if (answer := question(case)) is not None)
    answers = [s for s in (special, next(ordered, None)) if s is not None]
    return min(answers, key=lambda s: (s.doubtful, s.asks)) if answers else _special_limit(case)


def _special_limit(case: Case) -> Somewhere | None:
    """Values of parameters and an ordering together."""
    degree = case.derived.numerator(case.claim.residual)[0].degree
    end = time.process_time() + case.time / 4
    for part in leading_parts(case.derived, degree, end):
        if time.process_time() > end:
            return None
        for values in special_values(case.claim, replace(case.derived, polynomial=part), 1.0):
            narrowed = case.derived.substituted(values)
            for limit in find_limits(case.whole, narrowed, case.values, 3.0):
                said = tuple(f"with {paper(s)} = {paper(v)}" for s, v in values.items())
                notes = (*said, *limit_notes(limit))
                return Somewhere("limit", LEADING, limit.groups, notes, not limit.physical)
    return None


def limit_notes(found: LimitFound) -> tuple[str, ...]:
    first = (f"first neglected: {paper(found.neglected)}",) if found.neglected != 0 else ()
    return (*first, *found.notes)


def _other_convention(case: Case) -> Somewhere | None:
    found = under_other_conventions(case.written, case.wave, case.convention)
    if not found:
        return None
    shown = tuple(c for c, _ in found)
    notes = ("not agreement: with damping or growth this may be a slip of sign",)
    return Somewhere("convention", found[0][1].proof, shown, notes)


def _special(case: Case) -> Somewhere | None:
    for values in special_values(case.claim, case.derived, case.time / 5):
        named = {s.name: v for s, v in values.items()}
        proof = "with these values the claim divides the derived relation exactly"
        return Somewhere("special", proof, named, (*case.used, *case.contradicted(named)))
    return None


def _direction(case: Case) -> Somewhere | None:
    """The direction of the wave, of which the claim says nothing, along or across an axis."""
    waves = case.wave.wave_symbols
    held = case.claim.residual.free_symbols
    for s in (s for s in waves if s not in held and len(waves) > 1):
        angle = s in case.derived.angles.forms
        for value in (S.Zero, pi / 2) if angle else (S.Zero,):
            there = replace(case, put_in={**case.put_in, s: value})
            found = compare(case.claim, there.derived)
            if found is not None:
                return Somewhere("special", found.proof, {s.name: value}, there.used)
    return None


def _limit(case: Case) -> Somewhere | None:
    claimed, _ = case.derived.numerator(case.claim.residual)
    if len(claimed) > len(case.derived.polynomial):
        return None  # a leading part is shorter than the whole
    given = case.whole, case.derived, case.values, case.time / 3
    for limit in find_limits(*given) or limits_about(*given):
        doubtful = bool(limit.besides) or not limit.physical  # right in part only, or nowhere
        return Somewhere("limit", LEADING, limit.groups, limit_notes(limit), doubtful)
    return None


def _series(case: Case) -> Somewhere | None:
    if _has_long_roots(case.claim):
        return None
    found = series_order(case.whole, case.derived, None, case.values, case.time / 4)
    if found is None:
        return None
    return Somewhere("series", found.proof, found.groups, found.notes)


def _has_long_roots(claim: Claim) -> bool:
    """Whether roots of long sums stand in a claim: no truncated expansion, and slow to expand."""
    roots = (p for p in claim.residual.atoms(Pow) if not p.exp.is_Integer)
    return any(len(Add.make_args(expand(p.base))) > 3 for p in roots)
