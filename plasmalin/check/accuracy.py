"""What a claim asserts beyond its leading part, and whether its roots are as near to the derived ones as that.

A typed term asserts a correction where the claim begins alike whatever number the term has, wherever its author's
conditions hold. A term that is leading somewhere asserts none: 1/(ω_pi² + Ω_i²) holds for either, and what arises with it when denominators are
cleared is of no importance. The roots of the claim are off by the rest that its polynomial leaves of the derived one.
"""

from __future__ import annotations

import time
from collections.abc import Sequence
from math import comb

from sympy import Integer

from ..errors import PlasmalinError
from ..exact.polynomial import ExactPolynomial
from .claim import Claim
from .cones import Quotient, Vector, extreme, implied, minus, plus, times
from .derived import Derived
from .faces import Face, Faces, Leading
from .forms import divided, initial, product
from .monomials import Terms
from .places import addends, changed
from .sizes import DIVIDED

OTHER = Integer(7)
"""By what a term is multiplied to see where it counts: no number that makes it cancel another."""


def with_one_term_changed(claim: Claim, derived: Derived) -> tuple[ExactPolynomial, ...]:
    """The claim with another number on one of its typed terms, for each of them.

    It has as many roots and the same denominators as the claim, which it would not have without the term.
    """
    made: list[ExactPolynomial] = []
    for spot in addends(claim):
        try:
            other = changed(claim, {spot: ("times", OTHER)})
            made.append(derived.numerator(other.residual)[0])
        except (PlasmalinError, ArithmeticError, ValueError):
            continue  # where it stands alone below a line it counts
    return tuple(made)


class Accuracy:
    """How exact a claim means to be on the faces of its polytope, and is.

    Parameters
    ----------
    faces : Faces
    found : sequence of Face
        All faces on which it can balance.
    others : sequence of ExactPolynomial
        The claim with another number on one of its terms, each.
    """

    def __init__(
        self, faces: Faces, found: Sequence[Face], others: Sequence[ExactPolynomial]
    ) -> None:
        self.faces, self.space = faces, faces.space
        terms = [self.space.terms(p) for p in others if self.space.holds(p)]
        self.corrected = [t for t in terms if all(self._begins(t, f) is not None for f in found)]

    def _begins(self, terms: Terms, face: Face) -> Vector | None:
        """By what monomial the claim's leading part is multiplied where another polynomial begins with it."""
        w = self.faces.inside(face)
        part = {v: self.faces.claimed[v] for v in face.on}
        quotient = None if w is None else divided(initial(terms, w, self.space), part)
        return next(iter(quotient), None) if quotient else None

    def competing(
        self,
        part: ExactPolynomial,
        factor: ExactPolynomial,
        face: Face,
        answer: Leading,
        stands: bool,
    ) -> tuple[Face, list[Vector]] | None:
        """What must be small for the corrections that the claim asserts to stand.

        Parameters
        ----------
        part, factor : ExactPolynomial
            Of the claim and of the relation.
        face : Face
        answer : Leading
        stands : bool
            Whether all terms of the claim are derived with their coefficients, so that others can only be missing. Then
            it is enough that nothing is missing where two terms balance and the others are smaller.

        Returns
        -------
        (Face, list of Vector) or None
            Where they stand, and what must be small there: nothing where no correction is asserted. None where one is
            not derived.
        """
        asserted = self._asserted(face)
        if not asserted:
            return face, []
        steps = _steps(factor, part)
        if steps < 1 or len(factor) * comb(steps + len(part), steps) > DIVIDED:
            return None
        rest, scale = (self.space.terms(p) for p in factor.pseudo_remainder(part))
        first, power = plus(answer.shifts[0], face.on[0]), self._multiplicity(face)
        for there in (face, *(self.faces.pairs(face) if stands else ())):
            w = self.faces.inside(there)
            if w is not None:
                lead = next(iter(initial(scale, w, self.space)))
                errors = [minus(v, plus(first, lead)) for v in rest]
                needed = self._needed(there, w, asserted, errors, power)
                if needed is not None:
                    return there, needed
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

    def _needed(
        self,
        there: Face,
        w: Vector,
        asserted: list[list[Vector]],
        errors: list[Vector],
        power: int,
    ) -> list[Vector] | None:
        """The errors over the corrections that need not be small under the conditions; None where one cannot be.

        Where several derived roots begin alike, an error moves them by its root of that index.
        """
        quotient = Quotient(there.zeros)
        cone = [quotient.reduced(v) for v in self.faces.cone]
        above = [quotient.reduced(v) for v in there.above]
        corrections = {self._largest(sizes, w, quotient) for sizes in asserted}
        reduced = dict.fromkeys(quotient.reduced(self.space.order(v)) for v in errors)
        ratios = {plus(e, c, -power) for e in reduced for c in corrections}
        needed: list[Vector] = []
        for v in sorted(ratios, key=lambda v: (times(w, v), v)):
            if any(v) and implied(v, [*cone, *needed], above):
                continue
            late = time.process_time() > self.faces.end
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
