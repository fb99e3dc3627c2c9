"""Faces of a claim's Newton polytope that a cone of weights allows, and what of the derived relation lies on them."""

from __future__ import annotations

import time
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field
from fractions import Fraction
from itertools import combinations

from .cones import Quotient, Vector, extreme, implied, minus, plus, times, weights
from .forms import divided, initial, matched_shifts, product, slopes
from .monomials import Space, Terms


@dataclass(frozen=True)
class Face:
    """Terms of the claim that can balance; their differences have weight zero, the others lie higher."""

    on: tuple[Vector, ...]
    zeros: tuple[Vector, ...]
    above: tuple[Vector, ...]


@dataclass
class Leading:
    """How the derived relation begins on a face.

    Attributes
    ----------
    shifts : list of Vector
        Monomials by which the claim's terms are multiplied there, all columns.
    needed : list of (Vector, Vector)
        What else would have to be small, and the derived term that is too large without it.
    rays : list of Vector
        Relative sizes of terms left out, the fewest.
    """

    shifts: list[Vector]
    needed: list[tuple[Vector, Vector]] = field(default_factory=list)
    rays: list[Vector] = field(default_factory=list)


class Faces:
    """A claim's terms and a derived factor's in a cone of weights."""

    def __init__(
        self, space: Space, claimed: Terms, derived: Terms, cone: list[Vector], end: float
    ) -> None:
        self.space, self.claimed, self.derived = space, claimed, derived
        self.cone, self.end = cone, end

    def balanced(self) -> list[Face]:
        """The largest sets of terms with more than one power of ω that can be leading together."""
        found: list[Face] = []
        for a, b in combinations(self.claimed, 2):
            if time.process_time() > self.end:
                return []
            if a[0] == b[0] or any(a in f.on and b in f.on for f in found):
                continue
            face = self._largest(a, b)
            if face is not None:
                found.append(face)
        return found

    def plausible(self) -> bool:
        """Whether at one set of weights the derived relation begins with the claim's terms on each of its faces."""
        w = weights(self.space.sized, self.cone)
        if w is None:
            return False
        return all(self.begins(turned) for turned in slopes(self.claimed, w, self.space))

    def begins(self, w: Vector) -> bool:
        """Whether the derived relation begins with the claim's leading terms."""
        part = initial(self.claimed, w, self.space)
        return divided(initial(self.derived, w, self.space), part) is not None

    def _largest(self, a: Vector, b: Vector) -> Face | None:
        if self._weights(self._face((a, b))) is None:
            return None
        on: tuple[Vector, ...] = (a, b)
        for v in self.claimed:
            if v not in on and self._weights(self._face((*on, v))) is not None:
                on = (*on, v)
        return self._face(on)

    def _face(self, on: Sequence[Vector]) -> Face:
        first = self.space.order(on[0])
        zeros = tuple(minus(self.space.order(v), first) for v in on[1:])
        others = (v for v in self.claimed if v not in on)
        return Face(tuple(on), zeros, tuple(minus(self.space.order(v), first) for v in others))

    def inside(self, face: Face) -> Vector | None:
        """Sizes at which the terms of a face balance and all others of the claim are smaller."""
        return weights(self.space.sized, [*self.cone, *face.above], face.zeros)

    def can_be_small(self, v: Vector, face: Face) -> bool:
        """Whether a monomial is small at some sizes at which a face balances."""
        return weights(self.space.sized, [*self.cone, v], face.zeros, face.above) is not None

    def is_small(self, v: Vector, face: Face) -> bool:
        """Whether a monomial is small wherever a face balances under the conditions."""
        quotient = Quotient(face.zeros)
        cone, above = ([quotient.reduced(x) for x in xs] for xs in (self.cone, face.above))
        reduced = quotient.reduced(v)
        return any(reduced) and implied(reduced, cone, above)

    def _weights(self, face: Face, weak: Sequence[Vector] = ()) -> Vector | None:
        return weights(self.space.sized, self.cone, face.zeros, [*face.above, *weak])

    def leading(self, face: Face) -> Leading | None:
        """Whether the derived relation begins with the claim's terms wherever they balance; None: nowhere.

        Every set of weights that an exact proof does not exclude is tried; where the derived relation begins there
        with the claim times another monomial, that one joins, else its term is one that should be small.
        """
        part = {v: self.claimed[v] for v in face.on}
        starts = self._starts(face, part)
        answers = [a for start in starts if (a := self._followed(face, part, start)) is not None]
        return min(answers, key=lambda a: len(a.needed), default=None)

    def _starts(self, face: Face, part: Terms) -> list[list[Vector]]:
        """Monomials times the claim's terms with which the derived relation begins, or could begin."""
        w = self._weights(face)
        quotients = None if w is None else divided(initial(self.derived, w, self.space), part)
        if quotients is not None:
            return [list(quotients)]
        places = matched_shifts(part, self.derived)
        return [[minus(on[0], face.on[0])] for on in places if self._possible(face, on)]

    def _possible(self, face: Face, on: Sequence[Vector]) -> bool:
        """Whether further conditions could make these terms the leading ones."""
        first, kept = self.space.order(on[0]), set(on)
        off = {minus(self.space.order(v), first) for v in self.derived if v not in kept}
        small = [*self.cone, *off]
        return weights(self.space.sized, small, face.zeros, face.above) is not None

    def _followed(self, face: Face, part: Terms, start: list[Vector]) -> Leading | None:
        """From the weights tried so far to all that the conditions allow."""
        answer = Leading(list(start))
        quotient = Quotient(face.zeros)
        cone = [quotient.reduced(v) for v in self.cone]
        above = [quotient.reduced(v) for v in face.above]
        pending = self._ratios(face, answer, quotient, cone)
        while pending:
            shift, v, term = pending.pop(0)
            lower = [self._reduced(minus(s, shift), quotient) for s in answer.shifts if s != shift]
            if implied(v, [*cone, *(n for n, _ in answer.needed)], [*above, *lower]):
                continue
            if time.process_time() > self.end:
                return None
            w = self._weights(face, [tuple(-x for x in v), *lower])
            more = None if w is None else divided(initial(self.derived, w, self.space), part)
            new = [q for q in more or () if q not in answer.shifts]
            if new:
                answer.shifts += new
                answer.needed.clear()
                pending = self._ratios(face, answer, quotient, cone)
            else:
                answer.needed.append((v, term))
        answer.needed = _fewest(answer.needed)
        answer.rays = self._rays(face, answer, quotient)
        return answer

    def _rays(self, face: Face, answer: Leading, quotient: Quotient) -> list[Vector]:
        """The fewest relative sizes of what is left out, the largest first."""
        w = self._weights(face) or tuple(Fraction(0) for _ in range(self.space.sized))
        lowest = min(answer.shifts, key=lambda s: times(w, self.space.order(s)))
        ratios = self._ratios(face, answer, quotient, [])
        sizes = [v for shift, v, _ in ratios if shift == lowest]
        return extreme(
            sorted(dict.fromkeys(sizes), key=lambda v: (times(w, v), sum(map(abs, v)), v))
        )

    def _reduced(self, v: Vector, quotient: Quotient) -> Vector:
        return quotient.reduced(self.space.order(v))

    def _ratios(
        self, face: Face, answer: Leading, quotient: Quotient, cone: list[Vector]
    ) -> list[tuple[Vector, Vector, Vector]]:
        """For every shift, the sizes of the derived terms that the claim has not, relative to its first."""
        kept = {plus(s, v) for s in answer.shifts for v in face.on}
        kept |= {plus(s, v) for s in answer.shifts for v in self.claimed if self._same(s, v, face)}
        found = []
        for shift in answer.shifts:
            first = plus(shift, face.on[0])
            made: dict[Vector, Vector] = {}
            for v in self.derived:
                if v not in kept:
                    made.setdefault(self._reduced(minus(v, first), quotient), v)
            steps = [s for g in cone for s in (g, plus(g, g))]
            known = {*made, *(self._reduced(minus(v, first), quotient) for v in kept)}
            found += [
                (shift, v, term)
                for v, term in made.items()
                if not any(minus(v, s) in known for s in steps)
            ]
        return sorted(found, key=lambda f: (sum(map(abs, f[1])), f[1]))

    def _same(self, shift: Vector, term: Vector, face: Face) -> bool:
        """Whether a term of the claim stands in the derived relation with the same coefficient."""
        anchor = face.on[0]
        here = self.derived.get(plus(shift, term))
        there = self.derived.get(plus(shift, anchor))
        if here is None or there is None:
            return False
        return product(here, self.claimed[anchor]) == product(there, self.claimed[term])

    def pairs(self, face: Face) -> Iterator[Face]:
        """Where two terms of a face balance, with different powers of ω, and the others are smaller."""
        for a, b in combinations(face.on, 2) if len(face.on) > 2 else ():
            pair = self._face((a, b))
            if a[0] != b[0] and time.process_time() < self.end and self._weights(pair) is not None:
                yield pair

    def apart(self, face: Face, answer: Leading) -> list[tuple[Vector, Face]]:
        """What must be small besides where only two of the face's terms balance and the others are smaller."""
        found: list[tuple[Vector, Face]] = []
        for pair in self.pairs(face):
            part = {v: self.claimed[v] for v in pair.on}
            more = self._followed(pair, part, answer.shifts)
            found += [(v, pair) for v, _ in more.needed] if more else []
        return found

    def stands(self, term: Vector, face: Face, answer: Leading) -> bool:
        """Whether a claimed term beyond the face stands in the derived relation with its coefficient."""
        return all(self._same(s, term, face) for s in answer.shifts)

    def correction(self, term: Vector, face: Face, answer: Leading) -> list[Vector] | None:
        """Ratios that must be small for a claimed term beyond the face to stand; None where it is not plain that it does."""
        if not self.stands(term, face, answer):
            return None
        quotient = Quotient(face.zeros)
        cone = [quotient.reduced(v) for v in self.cone]
        above = [quotient.reduced(v) for v in face.above]
        size = self._reduced(minus(term, face.on[0]), quotient)
        ratios = {minus(v, size) for v in answer.rays}
        if any(not any(v) for v in ratios):
            return None
        return extreme(v for v in sorted(ratios) if not implied(v, cone, above))


def _fewest(needed: list[tuple[Vector, Vector]]) -> list[tuple[Vector, Vector]]:
    kept = extreme(v for v, _ in needed)
    return [n for n in needed if n[0] in kept]
