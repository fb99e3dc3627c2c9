"""The questions asked of a claim, in order, until one is answered."""

from __future__ import annotations

import time
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, replace
from functools import partial
from typing import TYPE_CHECKING, Any

from sympy import Add, Pow, S, Symbol, cancel, expand, pi

from ..declare.notation import paper
from ..errors import NonPolynomialError
from ..waves.coefficients import normalized_coefficients
from .case import Case
from .claim import Claim, WaveNames, make_claim
from .compare import compare, covered, has_only_roots_of
from .convention import Convention, in_si, to_si, under_other_conventions
from .derived import half_tangent
from .limit import LimitFound, find_limits, verify_limit
from .roles import roles
from .series import series_order
from .slips import Repair, repairs, repairs_as_limit
from .special import MOST_TERMS, special_values
from .stated import read_stated
from .verdict import Verdict, shown_conditions

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix

LONGEST = 400
"""Characters of a coefficient that is shown."""

SIDE_BY_SIDE = 300
"""Terms of two relations whose coefficients are compared one by one."""


def judge(
    wave: WaveMatrix,
    claim: Any,
    where: Mapping[Any, Any] | None = None,
    under: Any = None,
    convention: Convention | None = None,
    values: Mapping[Any, Any] | None = None,
    budget_s: float = 30.0,
) -> Verdict:
    """Judge a claimed relation; see `WaveMatrix.check`."""
    deadline = time.monotonic() + budget_s
    written = make_claim(wave, claim, where or {})
    convention, model = convention or Convention(), roles(wave)
    held = written.residual.free_symbols
    meant = partial(to_si, convention=convention, found=model)
    stated = read_stated(WaveNames(wave, where or {}), under, held, meant)
    numbers = {**wave.linear.defaults, **{str(n): v for n, v in (values or {}).items()}}
    made = in_si(written, convention, model)
    case = Case(wave, written, made, stated, convention, model, numbers, deadline)
    try:
        return _answer(case)
    except NonPolynomialError as error:
        return case.verdict("undecided", f"the claim cannot be made polynomial: {error}")


def _answer(case: Case) -> Verdict:
    for question in (_same, _as_stated):
        found = question(case)
        if found is not None:
            return found
    case = case.as_stated()
    somewhere = _other_convention(case) or _where(case)
    repaired = _repairs(case, somewhere)
    slips = tuple(s for repair in repaired for s in repair.slips)
    notes = (*case.reasons, *case.used)
    if somewhere is not None and not (slips and _doubtful(somewhere, repaired)):
        return case.verdict(
            somewhere.kind,
            somewhere.proof,
            conditions=somewhere.conditions,
            notes=(*case.reasons, *somewhere.notes),
            slips=slips,
        )
    if slips:
        proof = "no common divisor takes up the claim; every repair was proved by exact division"
        doubt = () if somewhere is None else somewhere.as_notes()
        return case.verdict("differs", proof, slips=slips, notes=(*notes, *doubt))
    late = " within the time given" if case.time == 0 else ""
    if len(case.derived.polynomial) > MOST_TERMS:
        late += "; the relation is too long to be searched for special values and expansions"
    proof = f"no common divisor takes up the claim; no single repair was found{late}"
    return case.verdict("differs", proof, notes=(*notes, *(_almost(case) or side_by_side(case))))


def _almost(case: Case) -> tuple[str, ...]:
    """What is wrong with a claim that is wrong though all its roots are right."""
    if not has_only_roots_of(case.claim, case.derived):
        return ()
    return (
        "its roots are roots of the laws, but not as often, or with ω = 0 or no wave where the laws have one",
    )


def _where(case: Case) -> Somewhere | None:
    """Where the claim is right; a limit rather than several special values."""
    special = _special(case)
    if special is not None and len(special.conditions) == 1:
        return special
    along = _direction(case)
    if along is not None:
        return along
    limit = None if special is None else _limit(case)
    if limit is not None and not limit.doubtful:
        return limit
    return special or _series(case) or _limit(case)


def _doubtful(somewhere: Somewhere, repaired: list[Repair]) -> bool:
    """Whether a slip is the better answer: a sign or a number in one place makes the claim exact, as no truncation is."""
    numbers = (r.slips[0].multiplier for r in repaired if len(r.slips) == 1)
    exact = any(n.is_number and n not in (0, 1) for n in numbers)
    return somewhere.doubtful or (exact and somewhere.kind != "convention")


def _repairs(case: Case, somewhere: Somewhere | None) -> list[Repair]:
    found = repairs(case.claim, case.derived, case.time / 2)
    if found or case.time == 0 or (somewhere is not None and not somewhere.doubtful):
        return found
    return repairs_as_limit(case.claim, case.derived, case.time)


def _same(case: Case) -> Verdict | None:
    """Identical, a factor or a branch, with the conditions of the background where they are needed."""
    found = compare(case.claim, case.plain)
    if found is not None:
        notes = (*case.extra_zeros(case.plain), *case.unused)
        return case.verdict(found.kind, found.proof, agrees=True, notes=notes)
    if case.derived.conditions:
        found = compare(case.claim, case.derived)
        if found is not None:
            notes = (*case.used, *case.extra_zeros(case.derived), *case.unused)
            return case.verdict(found.kind, found.proof, agrees=True, notes=notes)
    return None


def _as_stated(case: Case) -> Verdict | None:
    """Right under the conditions that the author states."""
    stated = case.as_stated()
    values, ratios = case.stated.values, list(case.stated.ratios)
    named = {s.name: v for s, v in values.items()}
    if values:
        found = compare(stated.claim, stated.derived)
        if found is not None:
            notes = (*stated.used, *case.contradicted(named))
            return case.verdict("special", found.proof, agrees=True, conditions=named, notes=notes)
    if not ratios:
        return None
    also = tuple(f"with {name} = {paper(value)}" for name, value in named.items())
    also = (*also, *stated.used, *case.contradicted(named))
    limit = verify_limit(stated.claim, stated.derived, ratios, case.values, case.time / 3)
    if not isinstance(limit, str) and any("confirmed" in n and "tan(" in n for n in limit.notes):
        limit = "a term that the claim keeps is right in one direction only"
    if not isinstance(limit, str):
        notes = (*also, *_limit_notes(limit))
        return case.verdict("limit", LEADING, agrees=True, conditions=limit.groups, notes=notes)
    series = series_order(stated.claim, stated.derived, ratios, case.values, case.time / 3)
    if series is not None:
        notes = (*also, *series.notes)
        return case.verdict(
            "series", series.proof, agrees=True, conditions=series.groups, notes=notes
        )
    case.reasons.append(f"under the stated conditions: {limit}")
    return None


LEADING = "its terms are a face of the Newton polytope of the derived relation"


def _limit_notes(found: LimitFound) -> tuple[str, ...]:
    first = (f"first neglected: {paper(found.neglected)}",) if found.neglected != 0 else ()
    return (*first, *found.notes)


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

    def as_notes(self) -> tuple[str, ...]:
        where = shown_conditions(self.conditions)
        doubt = (
            "right in part or nowhere in nature" if self.doubtful else f"{self.kind} as well, where"
        )
        return (f"{doubt}: {', '.join(where)}",)


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
        angle = half_tangent(s) in case.derived.symbols
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
    for limit in find_limits(case.claim, case.derived, case.values, case.time / 3):
        in_part = any("confirmed" in note for note in limit.notes)
        doubtful = in_part or not limit.physical
        return Somewhere("limit", LEADING, limit.groups, _limit_notes(limit), doubtful)
    return None


def _series(case: Case) -> Somewhere | None:
    if _has_long_roots(case.claim) or len(case.derived.polynomial) > MOST_TERMS:
        return None
    found = series_order(case.claim, case.derived, None, case.values, case.time / 4)
    if found is None:
        return None
    return Somewhere("series", found.proof, found.groups, found.notes)


def _has_long_roots(claim: Claim) -> bool:
    """Whether roots of long sums stand in a claim: no truncated expansion, and slow to expand."""
    roots = (p for p in claim.residual.atoms(Pow) if not p.exp.is_Integer)
    return any(len(Add.make_args(expand(p.base))) > 3 for p in roots)


def side_by_side(case: Case) -> Iterator[str]:
    """The coefficients of every power of ω that differ, both normalized by the highest."""
    claimed, _ = case.derived.numerator(case.claim.residual)
    factors = [f for f, _ in case.derived.factors if not covered(f, claimed)]
    same = [f for f in factors if f.degree == claimed.degree] or [case.derived.polynomial]
    if len(same[0]) + len(claimed) > SIDE_BY_SIDE:
        yield f"of degree {same[0].degree} | {claimed.degree} in ω, too long to be shown side by side"
        return
    right, theirs = (normalized_coefficients(p) for p in (same[0], claimed))
    yield "coefficients of the powers of ω that differ, derived | claimed:"
    for power in sorted({*right, *theirs}, reverse=True):
        a, b = right.get(power, S.Zero), theirs.get(power, S.Zero)
        if cancel(a - b) != 0:
            shown = (text if len(text := paper(x)) < LONGEST else "a long sum" for x in (a, b))
            yield f"{paper(Symbol('omega') ** power)}: " + " | ".join(shown)
