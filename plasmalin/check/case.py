"""A claim before its judges: what was claimed, what was stated, and the relation that it is held against."""

from __future__ import annotations

import time
from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from functools import cached_property
from math import isclose
from typing import TYPE_CHECKING, Any

from sympy import Expr, Symbol

from ..declare.notation import paper
from .claim import Claim
from .convention import Convention
from .derived import Derived, derive
from .monomials import number_of
from .roles import Roles
from .sizes import WITH_CONDITIONS, too_long
from .stated import Stated
from .verdict import Verdict

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix


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
        In processor time, so that a busy machine changes no verdict.
    reasons : tuple of str
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
    reasons: tuple[str, ...] = ()
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
        return max(self.deadline - time.process_time(), 0.0)

    @cached_property
    def plain(self) -> Derived:
        """The derived relation without the conditions of the background."""
        return self._derived(False)

    @cached_property
    def derived(self) -> Derived:
        """The derived relation with the conditions of the background used, unless it is too long for that."""
        if len(self.wave.relation.exact) > WITH_CONDITIONS:
            return self.plain
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
    def doubts(self) -> tuple[str, ...]:
        """Why a claim that is not right as it stands was not found right otherwise."""
        return (*self.reasons, *too_long(len(self.derived.polynomial)))

    @property
    def stated_values(self) -> tuple[str, ...]:
        """The author's values in words."""
        return tuple(f"with {paper(s)} = {paper(value)}" for s, value in self.stated.values.items())

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
