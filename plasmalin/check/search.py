"""What an unknown in a claim must be, so that a factor of the derived relation divides the claim.

The unknown is solved for at a random point of a large prime field and kept when it is a number times powers of the
symbols, which points with one symbol doubled tell. What is found here is a candidate: it is proved elsewhere.
"""

from __future__ import annotations

import time
from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from fractions import Fraction
from functools import cached_property
from typing import Any

from sympy import Add, Dummy, Expr, Integer, S, Symbol, pi

from ..declare.operators import omega
from ..errors import PlasmalinError
from ..exact import finite
from ..exact.polynomial import ExactPolynomial
from .claim import Claim
from .derived import Derived

POWERS = tuple(Fraction(n, 2) for n in (0, 2, -2, 4, -4, 1, -1, 3, -3, 6, -6, 8, -8))
MOST_SUMS = 8

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
        On the monotonic clock.
    """

    claim: Claim
    derived: Derived
    target: ExactPolynomial
    deadline: float
    points: dict[Any, finite.Point] = field(default_factory=dict)

    @cached_property
    def symbols(self) -> list[Expr]:
        """What a repair may be made of."""
        claimed = self.derived.rational(self.claim.residual).free_symbols - {omega}
        return [*sorted(claimed | self.derived.symbols, key=str), pi]

    @cached_property
    def scales(self) -> list[Expr]:
        """What the unknown may be a multiple of, beyond symbols: powers of ω, sums that the claim holds."""
        sums = {self.claim.written_out(a) for a in _sums_of(self.claim)} | {self.derived.square}
        sums = {a for a in sums if isinstance(a, Add)}
        turned = {a.args[0] - a.args[1] for a in sums if len(a.args) == 2}
        kept = sorted(sums | turned, key=lambda a: (a.count_ops(), str(a)))[:MOST_SUMS]
        return [
            omega, 1 / omega, omega**2, omega**-2, *(a**n for a in kept for n in (1, -1)),
        ]  # fmt: skip

    @property
    def late(self) -> bool:
        return time.monotonic() > self.deadline

    def point(self, doubled: Any = None) -> finite.Point:
        if doubled not in self.points:
            self.points[doubled] = finite.Point(20, doubled)
        return self.points[doubled]

    def conditions(self, claim: Claim, doubled: Any, unknowns: Sequence[Symbol]) -> Any:
        """The polynomials in the unknowns that must vanish at a point, and their ring."""
        point = self.point(doubled)
        expr = self.derived.rational(claim.residual)
        top, ring = finite.numerator(expr, point, [omega, *unknowns])
        target = point.polynomial(self.target, ring)
        return finite.remainders(top, target, ring, omega), ring

    def vanishes(self, claim: Claim) -> bool:
        """Whether the target divides a claim without unknowns, at one point."""
        try:
            return not self.conditions(claim, None, [])[0]
        except (ArithmeticError, PlasmalinError):
            return False


def solve_one(search: Search, changed: Callable[[Expr], Claim], scale: Expr = S.One) -> list[Expr]:
    """The multiples of `scale` that the unknown may be: numbers times powers of symbols."""

    def zeros(doubled: Any = None) -> list[int]:
        rests, ring = search.conditions(changed(unknown * scale), doubled, [unknown])
        return finite.common_zeros(rests, ring, unknown) or []

    try:
        made = [_monomial(search, v, zeros) for v in zeros()]
    except (ArithmeticError, PlasmalinError):
        return []
    return [m * scale for m in made if m is not None]


def solve_two(search: Search, changed: Callable[[Expr, Expr], Claim]) -> list[tuple[Expr, Expr]]:
    """As `solve_one`, for two unknowns at once."""
    seen: dict[Any, list[tuple[int, int]]] = {}

    def pairs(doubled: Any = None) -> list[tuple[int, int]]:
        if doubled not in seen:
            rests, ring = search.conditions(changed(unknown, second), doubled, [unknown, second])
            seen[doubled] = finite.common_pairs(rests, ring, unknown, second)
        return seen[doubled]

    found = []
    try:
        for value in pairs():
            one = _monomial(search, value[0], lambda d: [p[0] for p in pairs(d)])
            other = _monomial(search, value[1], lambda d: [p[1] for p in pairs(d)])
            if one is not None and other is not None:
                found.append((one, other))
    except (ArithmeticError, PlasmalinError):
        return []
    return found


def _monomial(search: Search, value: int, zeros: Callable[[Any], list[int]]) -> Expr | None:
    """A value of the field as a number times powers of symbols."""
    if value == 0:
        return S.Zero
    parts, rest = S.One, value
    for symbol in search.symbols:
        ratios = (finite.quotient(v, value) for v in zeros(symbol))
        steps = (finite.power_of_scale(r, 2, POWERS) for r in ratios)
        power = next((s for s in steps if s is not None), None)
        if power is None:
            return None
        if power:
            parts *= symbol ** (Integer(power.numerator) / power.denominator)
            root = search.point().root_of(symbol)
            rest = finite.quotient(rest, pow(root, int(power * finite.ROOT), finite.field()[0]))
    number = finite.recognized(rest)
    return None if number is None else number * parts


def _sums_of(claim: Claim) -> set[Expr]:
    expressions = [claim.left, claim.right, *claim.definitions.values()]
    return set().union(*(e.atoms(Add) for e in expressions))
