"""The questions asked of a claim, in order, until one is answered."""

from __future__ import annotations

import time
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field, replace
from functools import cached_property, partial
from math import isclose
from typing import TYPE_CHECKING, Any

from sympy import Add, Expr, Rational, S, Symbol, cancel, factor, sqrt

from ..declare.notation import paper
from ..errors import NonPolynomialError
from ..waves.coefficients import normalized_coefficients
from .balances import leading_parts
from .claim import Claim, WaveNames, make_claim, make_rate
from .compare import compare, covered
from .convention import Convention, in_si, to_si, under_other_conventions
from .derived import Derived, derive
from .limit import LimitFound, find_limits, verify_limit
from .monomials import number_of
from .rates import rate_order
from .roles import Roles, roles
from .series import series_order, series_slip
from .slips import repairs, repairs_as_limit
from .special import special_values
from .stated import Stated, read_stated
from .verdict import Slip, Verdict, shown_conditions

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix

SHOWN = 150
"""Terms of a relation whose coefficients are shown side by side."""
LONG = 800
"""Terms of a relation in which special values and orderings are searched for."""
ASIDE = 4.0
"""Seconds for the slips of a claim that is right somewhere."""
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
    whole : Claim
        The same with every shorthand of `where`, to word conditions in.
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
    put_in : mapping of Symbol to Expr
        Stated values that are put into the claim and the relation.
    """

    wave: WaveMatrix
    written: Claim
    claim: Claim
    whole: Claim
    stated: Stated
    convention: Convention
    roles: Roles
    values: Mapping[str, Any]
    deadline: float
    reasons: list[str] = field(default_factory=list)
    put_in: Mapping[Symbol, Expr] = field(default_factory=dict)

    def as_stated(self) -> Case:
        """With the values that the author states put into the claim and the relation."""
        values = dict(self.stated.values)
        if not values:
            return self
        claim, whole = (c.mapped(lambda e: e.xreplace(values)) for c in (self.claim, self.whole))
        return replace(self, claim=claim, whole=whole, put_in=values)

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
        constants, given = self.roles.constants, self.put_in
        return derive(self.wave, self._claimed, constants, conditions=conditions, values=given)

    @property
    def fitting(self) -> Derived:
        """The derived relation in symbols of the claim: conditions used where the claim lacks a symbol."""
        known = self._claimed | self.plain.wave_symbols
        return self.plain if self.plain.symbols <= known else self.derived

    @property
    def _claimed(self) -> set[Symbol]:
        ratios = (self.whole.written_out(r) for r in self.stated.ratios)
        return {s for e in (self.claim.residual, *ratios) for s in e.free_symbols}

    @property
    def used(self) -> tuple[str, ...]:
        """The conditions of the background that were used, in words."""
        return in_words(self.fitting)

    @property
    def unused(self) -> tuple[str, ...]:
        """That a claim which is right as it stands needs no conditions."""
        return ("right without the stated conditions",) if self.stated else ()

    def extra_zeros(self, derived: Derived) -> tuple[str, ...]:
        """That the claim has ω = 0 more often than the laws."""
        found, sheets = derived.with_zeros(self.claim.residual)
        laws = self.wave.relation.zero_modes
        if sheets > 1 or found.lowest <= laws:
            return ()
        return (f"ω = 0 is {found.lowest}-fold in the claim, {laws}-fold in the laws",)

    def contradicted(self, stated: Mapping[str, Expr]) -> tuple[str, ...]:
        """Where the given values are not those for which the claim is right."""
        found = []
        for name, value in stated.items():
            needed = number_of(value, self.values, self.claim)
            given = number_of(Symbol(name), self.values, self.claim)
            if (
                needed is not None
                and given is not None
                and not isclose(needed, given, rel_tol=1e-9)
            ):
                found.append(f"at the given values {name} = {given:.6g}, not {needed:.6g}")
        return tuple(found)

    def verdict(self, kind: str, proof: str, *, agrees: bool = False, **more: Any) -> Verdict:
        return Verdict(kind, agrees, proof, self.written.reading, **more)


def in_words(derived: Derived) -> tuple[str, ...]:
    """The conditions of the background that a relation uses."""
    return tuple(f"using {paper(c.symbol)} = {paper(c.value)}" for c in derived.conditions)


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
    names = WaveNames(wave, where or {})
    rate = make_rate(names, claim)
    written = rate or make_claim(wave, claim, where or {})
    convention, model = convention or Convention(), roles(wave)
    held = written.residual.free_symbols
    meant = partial(to_si, convention=convention, found=model)
    stated = read_stated(WaveNames(wave, where or {}), under, held, meant)
    numbers = {**wave.linear.defaults, **{str(n): v for n, v in (values or {}).items()}}
    made, whole = (
        in_si(c, convention, model)
        for c in (written, replace(written, definitions=names.definitions))
    )
    case = Case(wave, written, made, whole, stated, convention, model, numbers, deadline)
    try:
        return _answer(case) if rate is None else _rate(case)
    except NonPolynomialError as error:
        return case.verdict("undecided", f"the claim cannot be made polynomial: {error}")


def _answer(case: Case) -> Verdict:
    for question in (_same, _as_stated):
        found = question(case)
        if found is not None:
            return found
    case = case.as_stated()
    somewhere = _other_convention(case) or _where_right(case)
    slips, exact = _slips(case, somewhere)
    notes = (*case.reasons, *case.used)
    doubtful = somewhere is not None and (
        somewhere.doubtful or (exact and somewhere.kind != "convention")
    )
    if somewhere is not None and not (slips and doubtful):
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


def _slips(case: Case, somewhere: Somewhere | None) -> tuple[tuple[Slip, ...], bool]:
    """Repairs of the relation, of an expansion's later term, or of a leading part.

    The second tells that a sign or a number in one place makes the claim exact, as no truncation is mended.
    """
    if case.claim.solved and somewhere is None and (later := _later_term(case)):
        return later, False
    answered = somewhere is not None and not somewhere.doubtful
    budget = min(case.time / 2, ASIDE) if answered else case.time / 2
    found = repairs(case.claim, case.fitting, budget)
    numbers = (r.slips[0].multiplier for r in found if len(r.slips) == 1)
    exact = any(n.is_number and n not in (0, 1) for n in numbers)
    if not found and (somewhere is None or somewhere.doubtful):
        found = repairs_as_limit(case.claim, case.fitting, case.time / 2)
    if not found and not case.claim.solved:
        return _later_term(case), False
    return tuple(s for repair in found for s in repair.slips), exact


def _later_term(case: Case) -> tuple[Slip, ...]:
    """The term of an expansion that is wrong where the terms before it are right."""
    ratios = list(case.stated.ratios) or None
    found = series_slip(case.whole, case.derived, ratios, case.time / 5)
    if found is None or found.term == 0:
        return ()
    multiplier = factor(cancel(found.should_be / case.whole.written_out(found.term)))
    if multiplier.has(Add):
        return ()
    words = f"{paper(found.term)} should be {paper(found.should_be)}, the terms before it are right"
    return (Slip(found.term, multiplier, words),)


def _rate(case: Case) -> Verdict:
    """A growth or damping rate given by itself."""
    stated = case.as_stated()
    ratios = list(case.stated.ratios) or None
    value = stated.whole.right
    found = rate_order(value, stated.whole, stated.derived, ratios, case.values, case.time / 2)
    if found is not None:
        notes = (*_values_in_words(case), *case.used)
        stated_so = ratios is not None
        return case.verdict(
            "series", found.proof, agrees=stated_so, conditions=found.groups, notes=notes
        )
    for number in RATE_SLIPS:
        if case.time < 1:
            break
        right = number * value
        if rate_order(right, stated.whole, stated.derived, ratios, case.values, case.time / 4):
            words = f"the rate should carry the factor {paper(number)}"
            slip = Slip(case.written.right, number, words)
            return case.verdict("differs", "the repaired rate was proved", slips=(slip,))
    proof = "it is no leading imaginary part of a derived root in the orderings that were tried"
    return case.verdict("differs", proof)


RATE_SLIPS = [
    S(n) for n in (-1, 2, S.Half, sqrt(2), 1 / sqrt(2), 2 ** Rational(1, 3), 2 ** Rational(-1, 3))
] + [2 ** Rational(2, 3), 2 ** Rational(-2, 3), sqrt(3), 1 / sqrt(3), S(4) / 3, S(3) / 4]


def _same(case: Case) -> Verdict | None:
    """Identical, a factor or a branch, with the conditions of the background where they are needed."""
    found = compare(case.claim, case.plain)
    if found is not None:
        notes = (*case.extra_zeros(case.plain), *case.unused)
        return case.verdict(found.kind, found.proof, agrees=True, notes=notes)
    if case.derived.conditions:
        found = compare(case.claim, case.derived)
        if found is not None:
            notes = (*in_words(case.derived), *case.extra_zeros(case.derived), *case.unused)
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
    also = (*_values_in_words(case), *stated.used, *case.contradicted(named))
    limit = verify_limit(stated.whole, stated.derived, ratios, case.values, case.time / 3)
    if not isinstance(limit, str):
        notes = (*also, *_limit_notes(limit))
        return case.verdict("limit", LEADING, agrees=True, conditions=limit.groups, notes=notes)
    series = series_order(stated.whole, stated.derived, ratios, case.values, case.time / 3)
    if series is not None:
        notes = (*also, *series.notes)
        return case.verdict(
            "series", series.proof, agrees=True, conditions=series.groups, notes=notes
        )
    case.reasons.append(f"under the stated conditions: {limit}")
    return None


def _values_in_words(case: Case) -> tuple[str, ...]:
    return tuple(f"with {paper(s)} = {paper(value)}" for s, value in case.stated.values.items())


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


def _other_convention(case: Case) -> Somewhere | None:
    found = under_other_conventions(case.written, case.wave, case.convention)
    if not found:
        return None
    shown = tuple(c for c, _ in found)
    notes = ("not agreement: with damping or growth this may be a slip of sign",)
    return Somewhere("convention", found[0][1].proof, shown, notes)


def _where_right(case: Case) -> Somewhere | None:
    """The values or the ordering that asks least; values stand first where both ask as much."""
    if len(case.derived.polynomial) > LONG:
        case.reasons.append(
            f"the derived relation has {len(case.derived.polynomial)} terms: "
            "special values and orderings were not searched for"
        )
        return None
    orders = (_series, _limit) if case.claim.solved else (_limit, _series)
    ordered = (answer for question in orders if (answer := question(case)) is not None)
    found = [s for s in (_special(case), next(ordered, None)) if s is not None]
    return min(found, key=lambda s: (s.doubtful, s.asks)) if found else _special_limit(case)


def _special_limit(case: Case) -> Somewhere | None:
    """Values of parameters and an ordering together."""
    degree = case.derived.numerator(case.claim.residual)[0].degree
    end = time.monotonic() + case.time / 4
    for part in leading_parts(case.derived, degree, end):
        if time.monotonic() > end:
            return None
        for values in special_values(case.claim, replace(case.derived, polynomial=part), 1.0):
            narrowed = case.derived.substituted(values)
            for limit in find_limits(case.whole, narrowed, case.values, 3.0):
                said = tuple(f"with {paper(s)} = {paper(v)}" for s, v in values.items())
                notes = (*said, *_limit_notes(limit))
                return Somewhere("limit", LEADING, limit.groups, notes, not limit.physical)
    return None


def _special(case: Case) -> Somewhere | None:
    for values in special_values(case.claim, case.derived, case.time / 5):
        named = {s.name: v for s, v in values.items()}
        proof = "with these values the claim divides the derived relation exactly"
        return Somewhere("special", proof, named, (*case.used, *case.contradicted(named)))
    return None


def _limit(case: Case) -> Somewhere | None:
    for limit in find_limits(case.whole, case.derived, case.values, case.time / 3):
        in_part = any("confirmed" in note for note in limit.notes)
        doubtful = in_part or not limit.physical
        return Somewhere("limit", LEADING, limit.groups, _limit_notes(limit), doubtful)
    return None


def _series(case: Case) -> Somewhere | None:
    found = series_order(case.whole, case.derived, None, case.values, case.time / 4)
    if found is None:
        return None
    return Somewhere("series", found.proof, found.groups, found.notes)


def side_by_side(case: Case) -> Iterator[str]:
    """The coefficients of every power of ω that differ, both normalized by the highest."""
    claimed, _ = case.derived.numerator(case.claim.residual)
    factors = [f for f, _ in case.derived.factors if not covered(f, claimed)]
    same = [f for f in factors if f.degree == claimed.degree] or [case.derived.polynomial]
    if max(len(same[0]), len(claimed)) > SHOWN:
        yield f"the derived relation has {len(same[0])} terms, the claim {len(claimed)}"
        return
    right, theirs = (normalized_coefficients(p) for p in (same[0], claimed))
    yield "coefficients of the powers of ω that differ, derived | claimed:"
    for power in sorted({*right, *theirs}, reverse=True):
        a, b = right.get(power, S.Zero), theirs.get(power, S.Zero)
        if cancel(a - b) != 0:
            shown = (text if len(text := paper(x)) < LONGEST else "a long sum" for x in (a, b))
            yield f"{paper(Symbol('omega') ** power)}: " + " | ".join(shown)
