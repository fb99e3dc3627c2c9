"""The questions asked of a claim, in order, until one is answered."""

from __future__ import annotations

import time
from collections.abc import Iterator, Mapping
from dataclasses import replace
from functools import partial
from typing import TYPE_CHECKING, Any

from sympy import Add, Expr, Rational, S, Symbol, cancel, expand, factor, sqrt

from ..declare.notation import paper
from ..declare.operators import omega
from ..errors import NonPolynomialError
from ..exact.polynomial import ExactPolynomial
from ..waves.coefficients import normalized_coefficients
from .case import Case, in_words
from .claim import REAL_PART, WaveNames, make_claim, make_part
from .compare import compare, covered, has_only_roots_of
from .convention import Convention, in_si, to_si
from .derived import Derived
from .limit import LimitFound, verify_limit
from .places import changed, sign_edits
from .rates import RateFound, is_exact, rate_order
from .roles import roles
from .series import series_order, series_slip
from .sheets import NOWHERE, sheet_of
from .sizes import MENDED, SHOWN, SHOWN_TERMS
from .slips import repairs, repairs_as_limit
from .somewhere import LEADING, Somewhere, limit_notes, where_right
from .stated import read_stated
from .telling import cost, told
from .verdict import Slip, Verdict

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix

EXACT_PART = (
    "with this part of ω the real and the imaginary part of the derived relation have a common zero"
)
ASIDE = 4.0
"""Seconds for the slips of a claim that is right somewhere."""
RATE_SLIPS = [
    S(n) for n in (-1, 2, S.Half, sqrt(2), 1 / sqrt(2), 2 ** Rational(1, 3), 2 ** Rational(-1, 3))
] + [2 ** Rational(2, 3), 2 ** Rational(-2, 3), sqrt(3), 1 / sqrt(3), S(4) / 3, S(3) / 4]


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
    deadline = time.process_time() + budget_s
    names = WaveNames(wave, where or {})
    part = make_part(names, claim)
    written = part or make_claim(wave, claim, where or {})
    convention, model = convention or Convention(), roles(wave)
    held = written.residual.free_symbols
    meant = partial(to_si, convention=convention, found=model)
    stated = read_stated(names, under, held, meant)
    numbers = {**wave.linear.defaults, **{str(n): v for n, v in (values or {}).items()}}
    made, whole = (
        in_si(c, convention, model)
        for c in (written, replace(written, definitions=names.definitions))
    )
    case = Case(wave, written, made, whole, stated, convention, model, numbers, deadline)
    try:
        return _answer(case) if part is None else _part(case)
    except NonPolynomialError as error:
        return case.verdict("undecided", f"the claim cannot be made polynomial: {error}")


def _answer(case: Case) -> Verdict:
    found = _same(case) or _on_no_sheet(case) or _as_stated(case)
    if isinstance(found, Verdict):
        return found
    case = replace(case.as_stated(), reasons=(found,) if found else ())
    somewhere = where_right(case)
    slips, exact = _slips(case, somewhere)
    notes = (*case.doubts, *case.used)
    doubtful = somewhere is not None and (
        somewhere.doubtful or (exact and somewhere.kind != "convention")
    )
    if somewhere is not None and not (slips and doubtful):
        return case.verdict(
            somewhere.kind,
            somewhere.proof,
            conditions=somewhere.conditions,
            notes=(*case.doubts, *somewhere.notes),
            slips=slips,
        )
    if slips:
        proof = "no common divisor takes up the claim; every repair was proved by exact division"
        doubt = () if somewhere is None else somewhere.as_notes()
        return case.verdict("differs", proof, slips=slips, notes=(*notes, *doubt))
    late = " within the time given" if case.time == 0 else ""
    proof = f"no common divisor takes up the claim; no single repair was found{late}"
    return case.verdict("differs", proof, notes=(*notes, *(_almost(case) or side_by_side(case))))


def _on_no_sheet(case: Case) -> Verdict | None:
    """A claim that has no solution with the principal values of its roots, with the sign that gives it one."""
    stated = case.as_stated()
    if sheet_of(stated.claim, stated.fitting).possible:
        return None
    slips = []
    for edit in sign_edits(case.whole):
        turned = changed(case.whole, edit.changes(S.NegativeOne))
        there = replace(case, claim=turned, whole=turned)
        if _same(there) or isinstance(_as_stated(there), Verdict):
            slips.append((cost(edit, S.NegativeOne), told(edit, S.NegativeOne)))
    if not slips:
        slips = [
            (r.cost, s) for r in repairs(case.claim, case.fitting, case.time / 2) for s in r.slips
        ]
    found = tuple(s for _, s in sorted(slips, key=lambda s: s[0]))
    return case.verdict("differs", NOWHERE, slips=found, notes=case.used)


def _almost(case: Case) -> tuple[str, ...]:
    """What is wrong with a claim that is wrong though all its roots are right."""
    if len(case.derived.polynomial) > MENDED or not has_only_roots_of(case.claim, case.derived):
        return ()
    return (
        "its roots are roots of the laws, but not as often, or with ω = 0 or no wave where the laws have one",
    )


def _slips(case: Case, somewhere: Somewhere | None) -> tuple[tuple[Slip, ...], bool]:
    """Repairs of the relation, of an expansion's later term, or of a leading part.

    The second tells that a sign or a number in one place makes the claim exact, as no truncation is mended.
    """
    if len(case.derived.polynomial) > MENDED:
        return (), False
    solved = case.claim.solved_for({omega, *case.derived.wave_symbols})
    if solved and somewhere is None and (later := _later_term(case)):
        return later, False
    answered = somewhere is not None and not somewhere.doubtful
    budget = min(case.time / 2, ASIDE) if answered else case.time / 2
    found = repairs(case.claim, case.fitting, budget)
    numbers = (r.slips[0].multiplier for r in found if len(r.slips) == 1)
    exact = any(n.is_number and n not in (0, 1) for n in numbers)
    if not found and case.time > 0 and not answered:
        found = repairs_as_limit(case.claim, case.fitting, case.time / 2)
    if not found and not answered and not solved:
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


def _part(case: Case) -> Verdict:
    """A growth or damping rate, or a real frequency, given by itself; where all of ω is real that is ω."""
    real = case.written.left == REAL_PART
    if not real:
        return _rate(case, real)
    claim, whole = (replace(c, left=omega) for c in (case.claim, case.whole))
    there = replace(case, claim=claim, whole=whole)
    whole_frequency = _same(there) or _on_no_sheet(there) or _as_stated(there)
    if isinstance(whole_frequency, Verdict) and whole_frequency.agrees:
        return whole_frequency
    found = _rate(case, real)
    return found if found.agrees or found.slips else _answer(there)


def _rate(case: Case, real: bool) -> Verdict:
    """The imaginary or the real part of a root."""
    stated = case.as_stated()
    ratios = list(case.stated.ratios) or None

    def found(value: Expr, budget: float) -> RateFound | None:
        return rate_order(value, stated.whole, stated.derived, ratios, case.values, budget, real)

    value = stated.whole.right
    if is_exact(value, stated.whole, stated.derived, real):
        values = {s.name: v for s, v in case.stated.values.items()}
        kind = "special" if values else "branch"
        return case.verdict(kind, EXACT_PART, agrees=True, conditions=values, notes=case.used)
    right = found(value, case.time / 2)
    if right is not None:
        notes = (*case.stated_values, *case.used)
        agrees = ratios is not None
        return case.verdict(
            "series", right.proof, agrees=agrees, conditions=right.groups, notes=notes
        )
    what = "frequency" if real else "rate"
    for number in () if isinstance(value, Add) else RATE_SLIPS:
        if case.time < 1:
            break
        if found(number * value, case.time / 4):
            words = f"the {what} should carry the factor {paper(number)}"
            slip = Slip(case.written.right, number, words)
            return case.verdict("differs", f"the repaired {what} was proved", slips=(slip,))
    part = "real" if real else "imaginary"
    proof = f"it is no leading {part} part of a derived root in the orderings that were tried"
    return case.verdict("differs", proof)


def _same(case: Case) -> Verdict | None:
    """Identical, a factor or a branch, with the conditions of the background where they are needed."""
    found = compare(case.claim, case.plain)
    if found is not None:
        notes = (*found.notes, *case.extra_zeros(case.plain), *case.unused)
        return case.verdict(found.kind, found.proof, agrees=True, notes=notes)
    if case.derived.conditions:
        found = compare(case.claim, case.derived)
        if found is not None:
            zeros = case.extra_zeros(case.derived)
            notes = (*found.notes, *in_words(case.derived), *zeros, *case.unused)
            return case.verdict(found.kind, found.proof, agrees=True, notes=notes)
    return None


def _as_stated(case: Case) -> Verdict | str:
    """Right under the conditions that the author states, or why not."""
    stated = case.as_stated()
    values, ratios = case.stated.values, list(case.stated.ratios)
    named = {s.name: v for s, v in values.items()}
    if values:
        found = compare(stated.claim, stated.derived)
        if found is not None:
            notes = (*found.notes, *stated.used, *case.contradicted(named))
            return case.verdict("special", found.proof, agrees=True, conditions=named, notes=notes)
    if not ratios:
        return ""
    also = (*case.stated_values, *stated.used, *case.contradicted(named))
    limit = verify_limit(stated.whole, stated.derived, ratios, case.values, case.time / 3)
    angles = stated.derived.angles.symbols
    if not isinstance(limit, str) and any(g.free_symbols & angles for g in limit.besides):
        limit = "a term that the claim keeps is right in one direction only"
    if not isinstance(limit, str) and not limit.corrected:
        return _limit(case, limit, also)
    series = series_order(stated.whole, stated.derived, ratios, case.values, case.time / 3)
    if series is not None:
        notes = (*also, *series.notes)
        return case.verdict(
            "series", series.proof, agrees=True, conditions=series.groups, notes=notes
        )
    if not isinstance(limit, str):
        return _limit(case, limit, also)
    return f"under the stated conditions: {limit}"


def _limit(case: Case, limit: LimitFound, also: tuple[str, ...]) -> Verdict:
    notes = (*also, *limit_notes(limit))
    return case.verdict("limit", LEADING, agrees=True, conditions=limit.groups, notes=notes)


def _shown(polynomial: ExactPolynomial, derived: Derived) -> dict[int, Expr]:
    """Normalized coefficients in the symbols of the laws."""
    if not derived.angles.conics:
        return normalized_coefficients(polynomial)
    powers = polynomial.coefficients()
    lead = powers[max(powers)]
    return {n: expand(derived.angles.restored(cancel(c / lead))) for n, c in powers.items()}


def side_by_side(case: Case) -> Iterator[str]:
    """The coefficients of every power of ω that differ, both normalized by the highest."""
    if len(case.derived.polynomial) > MENDED:
        return
    claimed, _ = case.derived.numerator(case.claim.residual)
    factors = [f for f, _ in case.derived.factors if not covered(f, claimed)]
    same = [f for f in factors if f.degree == claimed.degree] or [case.derived.polynomial]
    if max(len(same[0]), len(claimed)) > SHOWN_TERMS:
        yield f"the derived relation has {len(same[0])} terms, the claim {len(claimed)}"
        return
    right, theirs = (_shown(p, case.derived) for p in (same[0], claimed))
    yield "coefficients of the powers of ω that differ, derived | claimed:"
    for power in sorted({*right, *theirs}, reverse=True):
        a, b = right.get(power, S.Zero), theirs.get(power, S.Zero)
        if cancel(a - b) != 0:
            shown = (text if len(text := paper(x)) < SHOWN else "a long sum" for x in (a, b))
            yield f"{paper(Symbol('omega') ** power)}: " + " | ".join(shown)
