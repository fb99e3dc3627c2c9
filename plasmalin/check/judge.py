"""The questions asked of a claim, in order, until one is answered."""

from __future__ import annotations

import time
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field, replace
from functools import cached_property
from typing import TYPE_CHECKING, Any

from sympy import S, Symbol, cancel

from ..declare.notation import paper
from ..errors import NonPolynomialError
from ..waves.coefficients import normalized_coefficients
from .claim import Claim, WaveNames, make_claim
from .compare import compare, covered
from .convention import Convention, in_si, under_other_conventions
from .derived import Derived, derive
from .limit import LimitFound, find_limits, verify_limit
from .questions import Repair
from .roles import Roles, roles
from .series import series_order
from .slips import repairs, repairs_as_limit
from .special import special_values
from .stated import Stated, read_stated
from .verdict import Verdict

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix

LONGEST = 400
"""Characters of a coefficient that is shown."""


@dataclass(frozen=True, eq=False)
class Case:
    """A claim before its judges.

    Attributes
    ----------
    wave : WaveMatrix
    written : Claim
        As its author wrote it.
    claim : Claim
        In SI and exp(−iωt).
    stated : Stated
        The author's conditions.
    convention : Convention
        The declared one.
    roles : Roles
    values : mapping of str to number
    deadline : float
        On the monotonic clock.
    reasons : list of str
        Why the author's own conditions do not make the claim right.
    """

    wave: WaveMatrix
    written: Claim
    claim: Claim
    stated: Stated
    convention: Convention
    roles: Roles
    values: Mapping[str, Any]
    deadline: float
    reasons: list[str] = field(default_factory=list)

    def as_stated(self) -> Case:
        """With the values that the author states put into the claim and the relation."""
        values = dict(self.stated.values)
        if not values:
            return self
        claim = self.claim.mapped(lambda e: e.xreplace(values))
        made = replace(self, claim=claim)
        made.__dict__["derived"] = self.derived.substituted(values)
        return made

    @property
    def time(self) -> float:
        """Seconds that are left."""
        return max(self.deadline - time.monotonic(), 0.0)

    @cached_property
    def plain(self) -> Derived:
        """The derived relation without the conditions of the background."""
        return self._derived(False)

    @cached_property
    def derived(self) -> Derived:
        """The derived relation with the conditions of the background used."""
        return self._derived(True)

    def _derived(self, conditions: bool) -> Derived:
        claimed = self.claim.residual.free_symbols
        return derive(self.wave, claimed, self.roles.constants, conditions=conditions)

    @property
    def used(self) -> tuple[str, ...]:
        """The conditions of the background that were used, in words."""
        conditions = self.derived.conditions
        return tuple(f"using {paper(c.symbol)} = {paper(c.value)}" for c in conditions)

    def verdict(self, kind: str, proof: str, *, agrees: bool = False, **more: Any) -> Verdict:
        return Verdict(kind, agrees, proof, self.written.reading, **more)


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
    stated = read_stated(WaveNames(wave, where or {}), under)
    convention, model = convention or Convention(), roles(wave)
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
    somewhere = _other_convention(case) or _special(case) or _series(case) or _limit(case)
    repaired = _repairs(case, somewhere)
    slips = tuple(s for repair in repaired for s in repair.slips)
    notes = (*case.reasons, *case.used)
    if somewhere is not None and not (slips and somewhere.doubtful):
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
    proof = f"no common divisor takes up the claim; no single repair was found{late}"
    return case.verdict("differs", proof, notes=(*notes, *side_by_side(case)))


def _repairs(case: Case, somewhere: Somewhere | None) -> list[Repair]:
    found = repairs(case.claim, case.derived, case.time / 2)
    if found or (somewhere is not None and not somewhere.doubtful):
        return found
    return repairs_as_limit(case.claim, case.derived, case.time)


def _same(case: Case) -> Verdict | None:
    """Identical, a factor or a branch, with the conditions of the background where they are needed."""
    found = compare(case.claim, case.plain)
    if found is not None:
        return case.verdict(found.kind, found.proof, agrees=True)
    if case.derived.conditions:
        found = compare(case.claim, case.derived)
        if found is not None:
            return case.verdict(found.kind, found.proof, agrees=True, notes=case.used)
    return None


def _as_stated(case: Case) -> Verdict | None:
    """Right under the conditions that the author states."""
    stated = case.as_stated()
    values, ratios = case.stated.values, list(case.stated.ratios)
    named = {s.name: v for s, v in values.items()}
    if values:
        found = compare(stated.claim, stated.derived)
        if found is not None:
            return case.verdict("special", found.proof, agrees=True, conditions=named)
    if not ratios:
        return None
    also = tuple(f"with {name} = {paper(value)}" for name, value in named.items())
    limit = verify_limit(stated.claim, stated.derived, ratios, case.values, case.time / 3)
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
        return (f"right in part or nowhere in nature: {', '.join(map(str, self.conditions))}",)


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
        return Somewhere("special", proof, named, case.used)
    return None


def _limit(case: Case) -> Somewhere | None:
    for limit in find_limits(case.claim, case.derived, case.values, case.time / 3):
        in_part = any("confirmed" in note for note in limit.notes)
        doubtful = in_part or not limit.physical
        return Somewhere("limit", LEADING, limit.groups, _limit_notes(limit), doubtful)
    return None


def _series(case: Case) -> Somewhere | None:
    found = series_order(case.claim, case.derived, None, case.values, case.time / 4)
    if found is None:
        return None
    return Somewhere("series", found.proof, found.groups, found.notes)


def side_by_side(case: Case) -> Iterator[str]:
    """The coefficients of every power of ω that differ, both normalized by the highest."""
    claimed, _ = case.derived.numerator(case.claim.residual)
    factors = [f for f, _ in case.derived.factors if not covered(f, claimed)]
    same = [f for f in factors if f.degree == claimed.degree] or [case.derived.polynomial]
    right, theirs = (normalized_coefficients(p) for p in (same[0], claimed))
    yield "coefficients of the powers of ω that differ, derived | claimed:"
    for power in sorted({*right, *theirs}, reverse=True):
        a, b = right.get(power, S.Zero), theirs.get(power, S.Zero)
        if cancel(a - b) != 0:
            shown = (text if len(text := paper(x)) < LONGEST else "a long sum" for x in (a, b))
            yield f"{paper(Symbol('omega') ** power)}: " + " | ".join(shown)
