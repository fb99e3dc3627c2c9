"""A claim as the leading part of the derived relation, under an author's conditions or under those found.

Under an ordering of its symbols a polynomial keeps the terms on one face of its Newton polytope, and the leading roots
are those of that face (Newton; Puiseux 1850, J. Math. Pures Appl. 15, 365; Bruno, Power Geometry, Elsevier 2000; from
memory). A claim is a limit when it is such a face, up to factors that do not vanish at its roots.
"""

from __future__ import annotations

import time
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import replace
from itertools import combinations, product

from sympy import Add, Expr, S

from ..declare.notation import paper
from ..declare.operators import omega
from .claim import Claim
from .cones import weights
from .derived import Derived
from .leading import BEYOND, Checked, LimitFound, Question, apart, best_of, question
from .monomials import CHARGE_NUMBER, conditions
from .orderings import find_limits
from .reference import about, from_reference, references
from .sizes import ORDERED
from .verdict import Small

__all__ = ["LimitFound", "find_limits", "verify_limit"]


def verify_limit(
    claim: Claim,
    derived: Derived,
    ratios: Iterable[Expr],
    values: Mapping[str, float] | None = None,
    budget: float = 10.0,
) -> LimitFound | str:
    """The claim as the leading part wherever an author's ratios are small; or the reason why it is not.

    Where it is that in ω but not beyond, it may be one in the distance of ω from a frequency that it names.

    Parameters
    ----------
    claim : Claim
    derived : Derived
    ratios : iterable of Expr
        What is ≪ 1, in the author's or the model's symbols; may hold ω.
    values, budget
        As for `find_limits`.
    """
    given, end = list(ratios), time.process_time() + budget
    if len(derived.polynomial) > ORDERED:
        return "the derived relation is too long for its leading part to be sought"
    found = _with_charges(claim, derived, given, values, end)
    if isinstance(found, str) and found.startswith(BEYOND):
        for fewer in _fewer(given):
            wider = _with_charges(claim, derived, fewer, values, end)
            if not isinstance(wider, str):
                return replace(wider, groups=_groups(claim, derived, given, values))
    for reference in references(claim) if isinstance(found, str) else ():
        near = _near(claim, derived, reference, given, values, end)
        if near is not None:
            return near
    return found


def _groups(
    claim: Claim, derived: Derived, given: list[Expr], values: Mapping[str, float] | None
) -> tuple[Small, ...]:
    """The author's own conditions."""
    return tuple(map(question(claim, derived, values).small, given))


def _fewer(given: list[Expr]) -> Iterator[list[Expr]]:
    """The conditions without one of them or two: what is leading under fewer, a correction under all, is right."""
    for left_out in (1, 2):
        if left_out < len(given):
            yield from map(list, combinations(given, len(given) - left_out))


def _near(
    claim: Claim,
    derived: Derived,
    reference: Expr,
    given: list[Expr],
    values: Mapping[str, float] | None,
    end: float,
) -> LimitFound | None:
    """The same in the distance of ω from a reference frequency, where the claim is no wrong leading part in ω."""
    moved, there = about(claim, derived, reference)
    near = [from_reference(r, reference) for r in given]
    plain = [r for r in given if not _is_sum_with_omega(claim.written_out(r))]
    wide = _with_charges(claim, derived, plain, values, end)
    if isinstance(wide, str) and not wide.startswith(BEYOND):
        return None
    found = _with_charges(moved, there, near, values, end, reference)
    if isinstance(found, str):
        return None
    small = _groups(claim, derived, given, values)
    return replace(
        found, groups=small, notes=(f"in powers of ω − {paper(reference)}", *found.notes)
    )


def _is_near(asked: Question, answer: Checked, reference: Expr) -> bool:
    """Whether the distance from a reference frequency is small beside it wherever the claim balances."""
    small = conditions(asked.claim, asked.space, [omega / reference])
    if isinstance(small, str):
        return False
    return all(
        any(all(answer.faces.is_small(v, face) for v in case) for case in small)
        for face, _ in answer.led
    )


def _is_sum_with_omega(ratio: Expr) -> bool:
    """Whether a condition is on a distance from a frequency, which is no size in ω."""
    return any(a.has(omega) for a in ratio.atoms(Add))


def limits_about(
    claim: Claim, derived: Derived, values: Mapping[str, float] | None, budget: float
) -> Iterator[LimitFound]:
    """Orderings under which a claim is a leading part in the distance of ω from a frequency that it names."""
    end = time.process_time() + budget
    for reference in references(claim):
        moved, there = about(claim, derived, reference)
        for found in find_limits(moved, there, values, end - time.process_time()):
            groups = [g.group.xreplace({omega: omega - reference}) for g in found.groups]
            limit = verify_limit(claim, derived, groups, values, end - time.process_time())
            if not isinstance(limit, str):
                yield replace(limit, groups=found.groups)


def _with_charges(
    claim: Claim,
    derived: Derived,
    given: list[Expr],
    values: Mapping[str, float] | None,
    end: float,
    reference: Expr | None = None,
) -> LimitFound | str:
    """With charge numbers of any size, else of order one."""
    found = _verified(question(claim, derived, values), derived, given, end, reference)
    charges = sorted(
        (s for s in derived.symbols if CHARGE_NUMBER.match(s.name)), key=lambda s: s.name
    )
    if not isinstance(found, str) or not charges:
        return found
    wider = _verified(question(claim, derived, values, charges), derived, given, end, reference)
    if isinstance(wider, str):
        return found
    return replace(wider, notes=(*wider.notes, f"with {', '.join(map(paper, charges))} of order 1"))


def _verified(
    asked: Question, derived: Derived, given: list[Expr], end: float, reference: Expr | None = None
) -> LimitFound | str:
    claim = asked.claim
    ratios = (derived.using(claim.written_out(r)) for r in given)
    cones = conditions(claim, asked.space, [derived.angles.leading(r) for r in ratios])
    if isinstance(cones, str):
        return cones
    cones = [c for c in cones if weights(asked.space.sized, c) is not None]
    if not cones:
        return "the stated conditions contradict each other"
    notes: list[str] = []
    besides: list[Expr] = []
    left_out: list[Expr] = []
    corrected = False
    for part, cone in product(asked.parts, cones):
        answer = best_of(asked, part, cone, end)
        if isinstance(answer, str):
            return answer
        if answer.needed:
            return answer.reason
        if reference is not None and not _is_near(asked, answer, reference):
            return "its roots are not near the reference frequency"
        notes += answer.notes
        besides += answer.besides
        notes += apart(asked, answer)
        left_out += answer.neglected
        corrected = corrected or answer.corrected
    groups = tuple(asked.small(r) for r in given)
    neglected = left_out[0] if left_out else S.Zero
    said = tuple(dict.fromkeys(notes))
    return LimitFound(groups, neglected, said, tuple(besides), corrected)
