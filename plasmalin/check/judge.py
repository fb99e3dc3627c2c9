"""The questions asked of a claim, in order, until one is answered."""

from __future__ import annotations

import time
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING, Any

from sympy import S, Symbol, cancel

from ..declare.notation import paper
from ..errors import NonPolynomialError, UndeterminedError
from ..waves.coefficients import normalized_coefficients
from .claim import Claim, Names, make_claim
from .compare import compare, covered
from .convention import Convention, roles, to_si, under_other_conventions
from .derived import Derived, derive
from .limit import LimitFound, find_limits, verify_limit
from .series import series_order
from .slips import repairs
from .special import special_values
from .stated import Stated, read_stated
from .verdict import Slip, Verdict

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix

LONGEST = 400
"""Characters of a coefficient that is shown."""
CONSTANTS = {"c", "epsilon_0", "mu_0", "eps0", "mu0"}


@dataclass(frozen=True, eq=False)
class Case:
    """A claim before its judges.

    Attributes
    ----------
    wave : WaveMatrix
    claim : Claim
        In the derived relation's convention.
    stated : Stated
    convention : Convention
        The declared one.
    values : dict of str to number
    deadline : float
        On the monotonic clock.
    """

    wave: WaveMatrix
    claim: Claim
    written: Claim
    stated: Stated
    convention: Convention
    values: Mapping[str, float]
    deadline: float

    @property
    def left(self) -> float:
        return self.deadline - time.monotonic()

    @cached_property
    def plain(self) -> Derived:
        """The derived relation without the conditions of the background."""
        return derive(self.wave, self._claimed, self._constants, conditions=False)

    @cached_property
    def derived(self) -> Derived:
        """The derived relation with the conditions of the background used."""
        return derive(self.wave, self._claimed, self._constants)

    @property
    def _claimed(self) -> set[Symbol]:
        return set(self.claim.residual.free_symbols)

    @property
    def _constants(self) -> set[Symbol]:
        known = self._claimed | set(self.wave.linear.symbols.values())
        return {s for s in known if s.name in CONSTANTS}

    def verdict(self, kind: str, agrees: bool, proof: str, **more: Any) -> Verdict:
        return Verdict(kind, agrees, proof, self.written.reading, **more)


def judge(
    wave: WaveMatrix,
    claim: Any,
    where: Mapping[Any, Any] | None = None,
    under: Any = None,
    convention: Convention | None = None,
    values: Mapping[str, Any] | None = None,
    budget_s: float = 30.0,
) -> Verdict:
    """Judge a claimed relation; see `WaveMatrix.check`."""
    deadline = time.monotonic() + budget_s
    convention = convention or Convention()
    written = make_claim(wave, claim, where or {})
    stated = read_stated(Names(wave, where or {}), under)
    made = written
    if convention != Convention():
        known = roles(wave)
        made = written.mapped(lambda e: to_si(e, convention, known))
    numbers = {**wave.linear.defaults, **(values or {})}
    case = Case(wave, made, written, stated, convention, numbers, deadline)
    try:
        return _answer(case)
    except NonPolynomialError as error:
        return case.verdict("undecided", False, f"the claim cannot be made polynomial: {error}")
    except UndeterminedError as error:
        return case.verdict("undecided", False, str(error))


def _answer(case: Case) -> Verdict:
    for question in (_same, _as_stated, _other_convention):
        found = question(case)
        if found is not None:
            return found
    found = _special(case) or _limit(case) or _series(case)
    slips, notes = _slips(case)
    if found is not None:
        return Verdict(
            found.kind, False, found.proof, found.reading, found.conditions, slips, found.notes
        )
    return case.verdict("differs", False, _differs(slips, case), slips=slips, notes=notes)


def _same(case: Case) -> Verdict | None:
    """Identical, a factor or a branch, with the conditions of the background where they are needed."""
    found = compare(case.claim, case.plain)
    if found is not None:
        return case.verdict(found.kind, True, found.proof)
    if case.derived.conditions:
        found = compare(case.claim, case.derived)
        if found is not None:
            return case.verdict(found.kind, True, found.proof, notes=_used(case.derived))
    return None


def _used(derived: Derived) -> tuple[str, ...]:
    return tuple(f"using {paper(c.symbol)} = {paper(c.value)}" for c in derived.conditions)


def _as_stated(case: Case) -> Verdict | None:
    """Right under the conditions that the author states."""
    values = case.stated.values
    derived = case.derived.substituted(values) if values else case.derived
    claim = case.claim.mapped(lambda e: e.xreplace(dict(values)))
    if values:
        found = compare(claim, derived)
        if found is not None:
            named = {s.name: v for s, v in values.items()}
            return case.verdict("special", True, found.proof, conditions=named)
    if not case.stated:
        return None
    reason = ""
    if case.stated.ratios:
        found = verify_limit(claim, derived, list(case.stated.ratios), case.values)
        if isinstance(found, LimitFound):
            return case.verdict(
                "limit", True, found.proof, conditions=found.groups, notes=found.notes
            )
        reason = found
    series = series_order(claim, derived, list(case.stated.ratios) or None, case.values)
    if series is not None:
        return case.verdict(
            "series", True, series.proof, conditions=series.groups, notes=series.notes
        )
    return None


def _other_convention(case: Case) -> Verdict | None:
    for convention, found in under_other_conventions(case.written, case.wave, case.convention):
        notes = ("in a model with damping this may be a slip of sign",)
        return case.verdict("convention", False, found.proof, conditions=(convention,), notes=notes)
    return None


def _special(case: Case) -> Verdict | None:
    for values in special_values(case.claim, case.derived, case.left / 4):
        named = {s.name: v for s, v in values.items()}
        proof = "with these values both are the same polynomial, or the claim is a part of it"
        return case.verdict("special", False, proof, conditions=named)
    return None


def _limit(case: Case) -> Verdict | None:
    for found in find_limits(case.claim, case.derived, case.values, case.left / 3):
        return case.verdict("limit", False, found.proof, conditions=found.groups, notes=found.notes)
    return None


def _series(case: Case) -> Verdict | None:
    found = series_order(case.claim, case.derived, None, case.values)
    if found is None:
        return None
    return case.verdict("series", False, found.proof, conditions=found.groups, notes=found.notes)


def _slips(case: Case) -> tuple[tuple[Slip, ...], tuple[str, ...]]:
    """Repairs, and the coefficients side by side where there are none."""
    found = repairs(case.written, case.derived, max(case.left, 1.0))
    slips = tuple(s for repair in found for s in repair.slips)
    return slips, () if slips else tuple(side_by_side(case))


def _differs(slips: tuple[Slip, ...], case: Case) -> str:
    if slips:
        return "no factor is common to all of the claim; every repair was proved by exact division"
    late = " within the time given" if case.left < 0 else ""
    return f"the claim does not divide the derived relation; no single repair was found{late}"


def side_by_side(case: Case) -> Iterator[str]:
    """The coefficients of every power of ω that differ, both normalized by the highest."""
    claimed, _ = case.derived.numerator(case.claim.residual)
    factors = [f for f, _ in case.derived.factors if not covered(f, claimed)]
    same = [f for f in factors if f.degree == claimed.degree] or [case.derived.polynomial]
    right, theirs = (normalized_coefficients(p) for p in (same[0], claimed))
    yield "coefficients of the powers of ω that differ, derived and claimed:"
    for power in sorted({*right, *theirs}, reverse=True):
        a, b = right.get(power, S.Zero), theirs.get(power, S.Zero)
        if cancel(a - b) != 0:
            shown = (text if len(text := paper(x)) < LONGEST else "a long sum" for x in (a, b))
            yield f"ω^{power}: " + "   |   ".join(shown)
