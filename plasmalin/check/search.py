"""What an unknown in a claim must be, so that a factor of the derived relation divides the claim.

The unknown is solved for at a random point of a large prime field and kept when it is a number times powers of the
symbols, which points with one symbol doubled tell. What is found here is a candidate: it is proved elsewhere.
"""

from __future__ import annotations

import time
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from fractions import Fraction
from functools import cached_property
from typing import Any

from sympy import Dummy, Expr, Mul, Rational, S, pi

from ..declare.operators import omega
from ..errors import PlasmalinError
from ..exact import finite
from ..exact.field import ROOT, power_of_scale, quotient
from ..exact.field import field as prime_field
from ..exact.polynomial import ExactPolynomial
from .claim import Claim
from .derived import Derived
from .places import Changes
from .pointwise import ClaimAtPoint

POWERS: tuple[Fraction, ...] = tuple(
    Fraction(n, 2) for n in (0, 2, -2, 4, -4, 1, -1, 3, -3, 6, -6, 8, -8)
)
POWERS += Fraction(1, 4), Fraction(-1, 4)
SEED = 20

unknown = Dummy("unknown", positive=True)
second = Dummy("second", positive=True)


@dataclass(frozen=True, eq=False)
class Search:
    """A claim, what it should have been, and until when to look.

    Attributes
    ----------
    claim : Claim
    derived : Derived
    target : ExactPolynomial
        The factor of the derived relation that the claim should have and does not.
    deadline : float
        In processor time, so that a busy machine changes no verdict.
    shared : dict
        The claim at points, for all searches of it.
    """

    claim: Claim
    derived: Derived
    target: ExactPolynomial
    deadline: float
    shared: dict[Any, ClaimAtPoint] = field(default_factory=dict)
    _targets: dict[Any, Any] = field(default_factory=dict)

    @cached_property
    def symbols(self) -> list[Expr]:
        """What a repair may be made of."""
        claimed = self.derived.rational(self.claim.residual).free_symbols - {omega}
        return [*sorted(claimed | self.derived.symbols, key=str), pi]

    @property
    def late(self) -> bool:
        return time.process_time() > self.deadline

    def claim_at(self, doubled: Any = None, step: int = 0) -> ClaimAtPoint:
        """The claim at the point, or at the one with a symbol doubled, or so many steps further."""
        place = doubled, step
        if place not in self.shared:
            point = finite.Point(SEED, doubled, step)
            unknowns = [unknown, second]
            self.shared[place] = ClaimAtPoint(self.claim, self.derived, point, unknowns)
        return self.shared[place]

    def target_at(self, doubled: Any = None, step: int = 0) -> Any:
        place = doubled, step
        if place not in self._targets:
            at = self.claim_at(doubled, step)
            self._targets[place] = at.point.polynomial(self.target, at.ring)
        return self._targets[place]

    def modulus_at(self, doubled: Any = None, step: int = 0) -> Any:
        """The target as a polynomial in ω alone."""
        return finite.univariate(self.target_at(doubled, step), 0)

    def conditions(self, changes: Changes, doubled: Any = None, step: int = 0) -> list[Any]:
        """The polynomials in the unknowns that must vanish at a point."""
        top = self.claim_at(doubled, step).numerator(changes)
        return finite.remainders(top, self.target_at(doubled, step), 0)

    def holds(self, changes: Changes) -> bool:
        """Whether the target divides the changed claim, which holds no unknown, at the point."""
        try:
            return not self.conditions(changes)
        except (ArithmeticError, PlasmalinError):
            return False

    def holds_for(self, claim: Claim) -> bool:
        """Whether the target divides another claim at the point."""
        try:
            at = ClaimAtPoint(claim, self.derived, finite.Point(SEED), [])
            target = at.point.polynomial(self.target, at.ring)
            return not finite.remainders(at.numerator({}), target, 0)
        except (ArithmeticError, PlasmalinError):
            return False


def solve_one(search: Search, changes: Changes) -> list[Expr]:
    """What the unknown may be: numbers times powers of symbols."""

    def zeros(doubled: Any = None) -> list[int]:
        rests = search.conditions(changes, doubled)
        return finite.common_zeros(rests, search.claim_at(doubled).ring, unknown) or []

    try:
        made = [monomial(search, v, zeros) for v in zeros()]
    except (ArithmeticError, PlasmalinError):
        return []
    return [m for m in made if m is not None]


def solve_two(search: Search, changes: Changes) -> list[tuple[Expr, Expr]]:
    """As `solve_one`, for two unknowns at once."""
    seen: dict[Any, list[tuple[int, int]]] = {}

    def pairs(doubled: Any = None) -> list[tuple[int, int]]:
        if doubled not in seen:
            rests = search.conditions(changes, doubled)
            ring = search.claim_at(doubled).ring
            seen[doubled] = finite.common_pairs(rests, ring, unknown, second)
        return seen[doubled]

    found = []
    try:
        for value in pairs():
            one = monomial(search, value[0], lambda d: [p[0] for p in pairs(d)])
            other = monomial(search, value[1], lambda d: [p[1] for p in pairs(d)])
            if one is not None and other is not None:
                found.append((one, other))
    except (ArithmeticError, PlasmalinError):
        return []
    return found


def monomial(search: Search, value: int, values: Callable[[Any], Sequence[int]]) -> Expr | None:
    """A value of the field as a number times powers of symbols, by its values with one symbol doubled."""
    if value == 0:
        return S.Zero
    powers: dict[Expr, Fraction] = {}
    for symbol in search.symbols:
        ratios = (quotient(v, value) for v in values(symbol))
        steps = (power_of_scale(r, 2, POWERS) for r in ratios)
        power = next((s for s in steps if s is not None), None)
        if power is None:
            return None
        powers[symbol] = power
    return product(search, value, powers)


def product(search: Search, value: int, powers: Mapping[Expr, Fraction]) -> Expr | None:
    """A number times known powers of symbols, whose value is given; None where the number is not a simple one."""
    point = search.claim_at().point
    for symbol, power in powers.items():
        root = point.root_of(symbol)
        value = quotient(value, pow(root, int(power * ROOT), prime_field()[0]))
    number = point.recognized(value)
    if number is None:
        return None
    return number * Mul(*(s ** Rational(n.numerator, n.denominator) for s, n in powers.items()))
