"""A claim as the leading part of the derived relation, under an author's conditions or under those found.

Under an ordering of its symbols a polynomial keeps the terms on one face of its Newton polytope, and the leading roots
are those of that face (Newton; Puiseux 1850, J. Math. Pures Appl. 15, 365; Bruno, Power Geometry, Elsevier 2000; from
memory). A claim is a limit when it is such a face, up to factors that do not vanish at its roots.
"""

from __future__ import annotations

import time
from collections.abc import Iterable, Mapping
from dataclasses import replace
from itertools import product

from sympy import Expr, S

from ..declare.notation import paper
from .claim import Claim
from .cones import weights
from .derived import Derived
from .leading import LimitFound, Question, apart, best_of, question
from .monomials import CHARGE_NUMBER, conditions
from .orderings import find_limits

__all__ = ["LimitFound", "find_limits", "verify_limit"]


def verify_limit(
    claim: Claim,
    derived: Derived,
    ratios: Iterable[Expr],
    values: Mapping[str, float] | None = None,
    budget: float = 10.0,
) -> LimitFound | str:
    """The claim as the leading part wherever an author's ratios are small; or the reason why it is not.

    Parameters
    ----------
    claim : Claim
    derived : Derived
    ratios : iterable of Expr
        What is ≪ 1, in the author's or the model's symbols; may hold ω.
    values, budget
        As for `find_limits`.
    """
    given, end = list(ratios), time.monotonic() + budget
    found = _verified(question(claim, derived, values), derived, given, end)
    charges = sorted(
        (s for s in derived.symbols if CHARGE_NUMBER.match(s.name)), key=lambda s: s.name
    )
    if not isinstance(found, str) or not charges:
        return found
    wider = _verified(question(claim, derived, values, charges), derived, given, end)
    if isinstance(wider, str):
        return found
    return replace(wider, notes=(*wider.notes, f"with {', '.join(map(paper, charges))} of order 1"))


def _verified(asked: Question, derived: Derived, given: list[Expr], end: float) -> LimitFound | str:
    claim = asked.claim
    cones = conditions(claim, asked.space, [derived.using(claim.written_out(r)) for r in given])
    if isinstance(cones, str):
        return cones
    cones = [c for c in cones if weights(asked.space.sized, c) is not None]
    if not cones:
        return "the stated conditions contradict each other"
    notes: list[str] = []
    besides: list[Expr] = []
    left_out: list[Expr] = []
    for part, cone in product(asked.parts, cones):
        answer = best_of(asked, part, cone, end)
        if isinstance(answer, str):
            return answer
        if answer.needed:
            return answer.reason
        notes += answer.notes
        besides += answer.besides
        notes += apart(asked, answer)
        left_out += answer.neglected
    groups = tuple(asked.small(r) for r in given)
    neglected = left_out[0] if left_out else S.Zero
    return LimitFound(groups, neglected, tuple(dict.fromkeys(notes)), tuple(besides))
