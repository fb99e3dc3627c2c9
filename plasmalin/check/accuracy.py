"""What a claim asserts beyond its leading part, and whether its roots are as near to the derived ones as that.

A typed term asserts a correction where the claim begins alike without it wherever its author's conditions hold. A term
that is leading somewhere asserts none: 1/(ω_pi² + Ω_i²) holds for either, and what arises with it when denominators are
cleared is of no importance. The roots of the claim are off by the rest that its polynomial leaves of the derived one.
"""

from __future__ import annotations

import time
from collections.abc import Sequence
from functools import reduce
from math import comb
from operator import mul

from sympy import S

from ..errors import PlasmalinError
from ..exact.polynomial import ExactPolynomial
from .claim import Claim
from .cones import Quotient, Vector, extreme, implied, minus, plus, times
from .derived import Derived
from .faces import Face, Faces, Leading, divided, initial, product
from .monomials import Terms
from .places import addends, changed

MOST_WORK = 200_000
"""Terms of the relation times monomials in the terms of the claim, of a degree of the steps of the division."""


def without_one_term(claim: Claim, derived: Derived) -> tuple[ExactPolynomial, ...] | None:
    """The claim without one of its typed terms, for each of them; None where that cannot be compared with the claim.

    A radical may go with a term: then the claim without it is taken to the power that has as many roots.
    """
    whole, sheets = derived.numerator(claim.residual)
    made: list[ExactPolynomial] = []
    for spot in addends(claim):
        try:
            shorter = changed(claim, {spot: ("times", S.Zero)})
            found, _ = derived.numerator(shorter.residual)
        except (PlasmalinError, ArithmeticError, ValueError):
            continue  # without it the claim is none, so it is leading
        if found.degree < 1:
            continue
        times_more, rest = divmod(whole.degree, found.degree)
        if sheets > 1 and rest:
            return None
        made.append(reduce(mul, [found] * times_more) if sheets > 1 and times_more > 1 else found)
    return tuple(made)


class Accuracy:
    """How exact a claim means to be on the faces of its polytope, and is.

    Parameters
    ----------
    faces : Faces
    found : sequence of Face
        All faces on which it can balance.
    shorter : sequence of ExactPolynomial
        The claim without one of its terms, each.
    """

    def __init__(
        self, faces: Faces, found: Sequence[Face], shorter: Sequence[ExactPolynomial]
    ) -> None:
        self.faces, self.space = faces, faces.space
        terms = [self.space.terms(p) for p in shorter if self.space.holds(p)]
        self.corrected = [t for t in terms if all(self._begins(t, f) is not None for f in found)]

    def _begins(self, terms: Terms, face: Face) -> Vector | None:
        """By what monomial the claim's leading part is multiplied where another polynomial begins with it."""
        w = self.faces.inside(face)
        part = {v: self.faces.claimed[v] for v in face.on}
        quotient = None if w is None else divided(initial(terms, w, self.space), part)
        return next(iter(quotient), None) if quotient else None

    def competing(
        self, part: ExactPolynomial, factor: ExactPolynomial, face: Face, answer: Leading
    ) -> tuple[Face, list[Vector]] | None:
        """What must be small for the corrections that the claim asserts to stand, at least where two terms balance.

        Returns
        -------
        (Face, list of Vector) or None
            Nothing where no correction is asserted; None where one is not derived.
        """
        asserted = self._asserted(face)
        if not asserted:
            return face, []
        steps = _steps(factor, part)
        if steps < 1 or len(factor) * comb(steps + len(part), steps) > MOST_WORK:
            return None
        rest, scale = (self.space.terms(p) for p in factor.pseudo_remainder(part))
        power = self._multiplicity(face)
        first = plus(answer.shifts[0], face.on[0])
        for there in (face, *self.faces.pairs(face)):
            w = self.faces.inside(there)
            if w is None:
                continue
            lead = next(iter(initial(scale, w, self.space)))
            errors = [minus(v, plus(first, lead)) for v in rest]
            ratios = self._ratios(there, w, asserted, errors, power)
            if ratios is not None:
                return there, ratios
        return None

    def _multiplicity(self, face: Face) -> int:
        """How often the derived relation begins with the claim's leading part: its roots meet there."""
        w = self.faces.inside(face)
        part = {v: self.faces.claimed[v] for v in face.on}
        begun = {} if w is None else initial(self.faces.derived, w, self.space)
        rest, count = divided(begun, part) if begun else None, 0
        while rest:
            rest, count = divided(rest, part), count + 1
        return max(count, 1)

    def _asserted(self, face: Face) -> list[list[Vector]]:
        """For each asserted correction the terms by which it changes the claim, relative to its first."""
        shifts = [(t, self._begins(t, face)) for t in self.corrected]
        made = [self._differences(t, shift, face) for t, shift in shifts if shift is not None]
        return [m for m in made if m]

    def _differences(self, terms: Terms, shift: Vector, face: Face) -> list[Vector]:
        claimed, anchor = self.faces.claimed, face.on[0]
        moved = {minus(v, shift): c for v, c in terms.items()}
        one, other = claimed[anchor], moved[anchor]
        zero = (0, 0)
        return [
            minus(v, anchor)
            for v in {**claimed, **moved}
            if product(claimed.get(v, zero), other) != product(moved.get(v, zero), one)
        ]

    def _ratios(
        self,
        there: Face,
        w: Vector,
        asserted: list[list[Vector]],
        errors: list[Vector],
        power: int,
    ) -> list[Vector] | None:
        """The largest errors over the asserted corrections that need not be small; None where one cannot be.

        Where several derived roots begin alike, an error moves them by its root of that index.
        """
        quotient = Quotient(there.zeros)
        cone = [quotient.reduced(v) for v in self.faces.cone]
        above = [quotient.reduced(v) for v in there.above]
        corrections = {self._largest(sizes, w, quotient) for sizes in asserted}
        reduced = dict.fromkeys(quotient.reduced(self.space.order(v)) for v in errors)
        found = {plus(e, c, -power) for e in reduced for c in corrections}
        needed: list[Vector] = []
        for v in sorted(found, key=lambda v: (times(w, v), v)):
            if any(v) and implied(v, [*cone, *needed], above):
                continue
            late = time.monotonic() > self.faces.end
            if late or not any(v) or not self.faces.can_be_small(v, there):
                return None
            needed.append(v)
        return extreme(needed)

    def _largest(self, sizes: list[Vector], w: Vector, quotient: Quotient) -> Vector:
        reduced = (quotient.reduced(self.space.order(v)) for v in sizes)
        return min(reduced, key=lambda v: (times(w, v), sum(map(abs, v)), v))


def _steps(factor: ExactPolynomial, part: ExactPolynomial) -> int:
    """How often the highest power of ω is taken away in the division."""
    powers = {n for p in (factor, part) for n in p.coefficients()}
    stride = 2 if all(n % 2 == 0 for n in powers) else 1
    return (factor.degree - part.degree) // stride + 1
