"""A claim as the leading part of the derived relation, under an author's conditions or under those found.

Under an ordering of its symbols a polynomial keeps the terms on one face of its Newton polytope, and the leading roots
are those of that face (Newton; Puiseux 1850, J. Math. Pures Appl. 15, 365; Bruno, Power Geometry, Elsevier 2000; from
memory). A claim is a limit when it is such a face, up to factors that do not vanish at its roots.
"""

from __future__ import annotations

import time
from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from functools import reduce
from itertools import permutations, product
from operator import mul

from sympy import Expr, Symbol

from ..declare.constants import CODATA
from ..declare.notation import paper
from ..exact.polynomial import ExactPolynomial
from .claim import Claim
from .compare import covered
from .cones import Quotient, Vector, extreme, implied, minus, smallest, times, weights
from .derived import Derived
from .faces import Face, Faces, Leading, matched_shifts
from .monomials import ELECTRON_MASS, MASS, Space, Terms, Wording, conditions, number_of, space_of
from .verdict import Small

MOST_TERMS, MOST_RATIOS, MOST_FOUND = 40, 60, 4
SEARCH = 3.0
"""Seconds for trying single groups."""


@dataclass(frozen=True)
class LimitFound:
    """An ordering under which a claim is the leading part of the derived relation.

    Attributes
    ----------
    groups : tuple of Small
        What must be small, none of them a product of powers of others.
    neglected : Expr
        The relative size of the largest term left out; 0 where none is.
    notes : tuple of str
        Where two small groups compete, the ratio that decides.
    """

    groups: tuple[Small, ...]
    neglected: Expr
    notes: tuple[str, ...] = ()

    @property
    def proof(self) -> str:
        return (
            "the claim is the leading part of the derived relation: with symbols as powers of a small number, every "
            "other term is of higher order (linear programming, its answers checked exactly)"
        )

    @property
    def physical(self) -> bool:
        """Whether nature has such an ordering."""
        return all(g.physical for g in self.groups)


@dataclass(frozen=True)
class Question:
    """A claim's factors that are not exact, the derived factors, and the symbols to be ordered."""

    claim: Claim
    parts: tuple[ExactPolynomial, ...]
    factors: tuple[ExactPolynomial, ...]
    space: Space
    wording: Wording
    values: Mapping[str, float]

    def small(self, group: Expr, physical: bool = True) -> Small:
        return Small(group, number_of(group, self.values, self.claim), physical)


def question(claim: Claim, derived: Derived, values: Mapping[str, float] | None) -> Question:
    """What is asked of a claim and a relation."""
    polynomial, _ = derived.numerator(claim.residual)
    factors = tuple(f for f, _ in derived.factors)
    parts = tuple(f for f, _ in polynomial.factor()[1] if not covered(f, derived.polynomial))
    used = {s for d in claim.definitions.values() for s in d.free_symbols} & derived.symbols
    space = space_of([*parts, *factors], used)
    wording = Wording(space, claim, CODATA)
    return Question(claim, parts, factors, space, wording, values or {})


# An ordering found -------------------------------------------------------------------------------


def find_limits(
    claim: Claim,
    derived: Derived,
    values: Mapping[str, float] | None = None,
    budget: float = 10.0,
) -> list[LimitFound]:
    """Every ordering under which the claim is the leading part of the derived relation.

    Parameters
    ----------
    claim : Claim
    derived : Derived
    values : mapping of str to float, optional
        Numbers by name, for the values of the groups.
    budget : float, s
        Time after which the search ends with what it has.

    Returns
    -------
    list of LimitFound
        Physical ones first, then those with fewer groups; empty when the claim is no limit.
    """
    asked = question(claim, derived, values)
    end = time.monotonic() + budget
    if not asked.parts:
        return []
    found = _together(asked, asked.parts, end)
    if not found and len(asked.parts) > 1:
        found = _together(asked, (reduce(mul, asked.parts),), end)
    if not found:
        found = list(_searched(asked, min(end, time.monotonic() + SEARCH)))
    found.sort(key=_simplicity)
    pruned = [_irredundant(asked, f, end) for f in found[:MOST_FOUND]]
    return sorted(_widest(asked, pruned), key=_simplicity)


def _simplicity(found: LimitFound) -> tuple[bool, int, int]:
    return not found.physical, len(found.groups), len(str(found.groups))


def _irredundant(asked: Question, found: LimitFound, end: float) -> LimitFound:
    """Without the groups that need not be small, as where a wave of another kind only joins as a factor."""
    kept = list(found.groups)
    for small in found.groups if len(kept) > 1 else ():
        rest = [asked.wording.exponents(g.group) for g in kept if g is not small]
        cone = [v for v in rest if v is not None]
        answers = [_checked(asked, p, cone, end) for p in asked.parts] if cone else [None]
        if time.monotonic() > end:
            return found
        if all(a is not None and not a.needed for a in answers):
            kept.remove(small)
    return replace(found, groups=tuple(kept), neglected=_largest(kept))


def _widest(asked: Question, found: Sequence[LimitFound]) -> list[LimitFound]:
    """Without the orderings that are part of another."""
    cones = [
        [v for g in f.groups if (v := asked.wording.exponents(g.group)) is not None] for f in found
    ]
    return [
        f
        for i, f in enumerate(found)
        if not any(
            all(implied(v, cones[i]) for v in other) and (other != cones[i] or j < i)
            for j, other in enumerate(cones)
            if j != i and not (j > i and all(implied(v, other) for v in cones[i]))
        )
    ]


def _together(asked: Question, parts: Sequence[ExactPolynomial], end: float) -> list[LimitFound]:
    """Orderings in which every part is a face of a derived factor."""
    found = [list(_orderings(asked, p, end)) for p in parts]
    made = (_joined(asked, choice) for choice in product(*found))
    return [m for m in made if m is not None]


@dataclass(frozen=True)
class Ordering:
    """The rays of small monomials, and the differences that have weight zero."""

    rays: tuple[Vector, ...]
    zeros: tuple[Vector, ...]


def _orderings(asked: Question, part: ExactPolynomial, end: float) -> Iterator[Ordering]:
    """Faces of the derived factors that are the part times a factor free of its roots."""
    space = asked.space
    seen: set[tuple[Vector, ...]] = set()
    for claimed, factor in product(_multiples(part), asked.factors):
        terms = space.terms(factor)
        for on in matched_shifts(space.terms(claimed), terms):
            if time.monotonic() > end:
                return
            ordering = _ordering(space, on, terms)
            if ordering is not None and ordering.rays not in seen:
                seen.add(ordering.rays)
                yield ordering
        if seen and factor is asked.factors[-1]:
            return


def _multiples(part: ExactPolynomial) -> Iterator[ExactPolynomial]:
    """The part, with its mirror image −ω, and squared: what a relation may begin with where it holds the part."""
    yield part
    turned = part.turned_sign(part.main)
    if not covered(part, turned):
        yield part * turned
    yield part * part


def _searched(asked: Question, end: float) -> Iterator[LimitFound]:
    """One small group at a time, taken from the terms of the derived factors, and what it needs besides."""
    for v in _ratios(asked):
        answers = [_checked(asked, p, [v], end) for p in asked.parts]
        if time.monotonic() > end:
            return
        if any(a is None for a in answers):
            continue
        checked = [a for a in answers if a is not None]
        vectors = extreme([v, *(n for c in checked for n in c.needed)])
        if weights(asked.space.sized, vectors) is None:
            continue
        ordering = Ordering(tuple(vectors), ())
        groups = [asked.wording.group(x, ()) for x in vectors]
        made = tuple(asked.small(g, _physical(asked.space, ordering, g)) for g in groups)
        notes = dict.fromkeys(n for c in checked for n in c.notes)
        yield LimitFound(made, _largest(made), tuple(notes))


def _checked(
    asked: Question, part: ExactPolynomial, cone: list[Vector], end: float
) -> Checked | None:
    """The part where some groups are small, first at one set of weights, then at all."""
    space = asked.space
    for factor in asked.factors:
        faces = Faces(space, space.terms(part), space.terms(factor), cone, end)
        if faces.plausible():
            answer = _verified(asked, part, factor, cone, end)
            if isinstance(answer, Checked):
                return answer
    return None


def _ratios(asked: Question) -> list[Vector]:
    """Ratios of two terms of one derived factor that hold no ω, and those of wave numbers; the shortest first."""
    space = asked.space
    found: dict[Vector, None] = {}
    for factor in asked.factors:
        terms = sorted({space.order(v) for v in space.terms(factor)})[:MOST_TERMS]
        for a, b in permutations(terms, 2):
            if a[0] == b[0] and a != b:
                found[smallest(minus(a, b))] = None
    return sorted(found, key=lambda v: (sum(map(abs, v)), v))[:MOST_RATIOS]


def _ordering(space: Space, on: Sequence[Vector], terms: Terms) -> Ordering | None:
    """What keeps exactly the terms `on`, if anything does."""
    first, *others = [space.order(v) for v in on]
    kept = set(on)
    zeros = [minus(v, first) for v in others]
    quotient = Quotient(zeros)
    off = [quotient.reduced(minus(space.order(v), first)) for v in terms if v not in kept]
    off = list(dict.fromkeys(off))
    w = weights(space.sized, off, zeros)
    if w is None or not off:
        return None
    rays = extreme(sorted(off, key=lambda v: (times(w, v), sum(map(abs, v)), v)))
    return Ordering(tuple(rays), tuple(zeros))


def _joined(asked: Question, orderings: Sequence[Ordering]) -> LimitFound | None:
    """The groups of the orderings of all parts, when they can be small together."""
    groups: dict[Expr, Small] = {}
    for ordering in orderings:
        for v in ordering.rays:
            group = asked.wording.group(v, ordering.zeros)
            groups.setdefault(group, asked.small(group, _physical(asked.space, ordering, group)))
    orders = [o for g in groups if (o := asked.wording.exponents(g)) is not None]
    if len(orderings) > 1 and weights(asked.space.sized, orders) is None:
        return None
    made = tuple(groups.values())
    return LimitFound(made, _largest(made), ())


def _largest(groups: Sequence[Small]) -> Expr:
    """The largest group at the given values, else the first."""
    known = [g for g in groups if g.value is not None]
    return max(known, key=lambda g: g.value or 0.0).group if known else groups[0].group


def _physical(space: Space, ordering: Ordering, group: Expr) -> bool:
    """Whether a group can be small without electrons that are heavier than other particles."""
    powers = group.as_powers_dict()
    if isinstance(group, Symbol) and MASS.match(group.name):
        return False  # in units of the lightest
    names = [c for c in space.columns[: space.sized] if isinstance(c, Symbol)]
    for electron in (c for c in names if c.name in ELECTRON_MASS):
        for other in (c for c in names if MASS.match(c.name) and c != electron):
            v = space.exponents(other / electron)
            heavy = v is not None and implied(
                Quotient(ordering.zeros).reduced(space.order(v)), ordering.rays
            )
            if heavy and (powers.get(electron, 0) < 0 or powers.get(other, 0) > 0):
                return False
    return True


# An author's conditions --------------------------------------------------------------------------


def verify_limit(
    claim: Claim,
    derived: Derived,
    ratios: Iterable[Expr],
    values: Mapping[str, float] | None = None,
    budget: float = 10.0,
) -> LimitFound | str:
    """The claim as the leading part wherever an author's ratios are small; or the reason why it is not.

    Parameters
    ----------
    claim : Claim
    derived : Derived
    ratios : iterable of Expr
        What is ≪ 1, in the author's or the model's symbols; may hold ω.
    values, budget
        As for `find_limits`.
    """
    asked = question(claim, derived, values)
    given = list(ratios)
    cones = conditions(claim, asked.space, given)
    if isinstance(cones, str):
        return cones
    cones = [c for c in cones if weights(asked.space.sized, c) is not None]
    if not cones:
        return "the stated conditions contradict each other"
    end = time.monotonic() + budget
    notes: list[str] = []
    left_out: list[Expr] = []
    for part, cone in product(asked.parts, cones):
        answer = _best_of(asked, part, cone, end)
        if isinstance(answer, str):
            return answer
        if answer.needed:
            return answer.reason
        notes += answer.notes
        notes += [n for f, led in answer.led for n in _apart(asked, answer.faces, f, led)]
        left_out += answer.neglected
    groups = tuple(asked.small(r) for r in given)
    neglected = asked.space.monomial(()) * 0 if not left_out else left_out[0]
    return LimitFound(groups, neglected, tuple(dict.fromkeys(notes)))


@dataclass(frozen=True)
class Checked:
    """A part that is leading under the conditions, where what is needed besides is small as well."""

    notes: tuple[str, ...]
    neglected: tuple[Expr, ...]
    needed: tuple[Vector, ...]
    reason: str
    faces: Faces
    led: tuple[tuple[Face, Leading], ...]


UNLIKE = "under the stated conditions the derived relation has no such leading part"


def _best_of(
    asked: Question, part: ExactPolynomial, cone: list[Vector], end: float
) -> Checked | str:
    """The part against every derived factor: what needs least, or the reason that says most."""
    answers = [_verified(asked, part, f, cone, end) for f in asked.factors]
    checked = [a for a in answers if isinstance(a, Checked)]
    if checked:
        return min(checked, key=lambda a: len(a.needed))
    reasons = [a for a in answers if isinstance(a, str)]
    return max(reasons, key=lambda r: (r != UNLIKE, -len(r)), default=UNLIKE)


def _verified(
    asked: Question, part: ExactPolynomial, factor: ExactPolynomial, cone: list[Vector], end: float
) -> Checked | str:
    """One part of the claim against one derived factor."""
    space = asked.space
    faces = Faces(space, space.terms(part), space.terms(factor), cone, end)
    notes: list[str] = []
    neglected: list[Expr] = []
    needed: list[Vector] = []
    led: list[tuple[Face, Leading]] = []
    reason = ""
    found = faces.balanced()
    if not found:
        return "the terms of the claim cannot balance under the stated conditions"
    for face in found:
        answer = faces.leading(face)
        if answer is None:
            return UNLIKE
        if answer.needed:
            reason = reason or _needed(asked, answer.needed, face.zeros, factor)
            needed += [asked.wording.vector(v, face.zeros) for v, _ in answer.needed]
        led.append((face, answer))
        neglected += [asked.wording.group(v, face.zeros) for v in answer.rays[:1]]
        for r in (v for v in faces.claimed if not any(v in f.on for f in found)):
            graded = faces.correction(r, face, answer)
            if graded is None:
                return _unconfirmed(asked, faces, r)
            notes += _competing(asked, faces, r, graded, face.zeros)
    return Checked(tuple(notes), tuple(neglected), tuple(needed), reason, faces, tuple(led))


def _needed(
    asked: Question,
    needed: Sequence[tuple[Vector, Vector]],
    zeros: Sequence[Vector],
    factor: ExactPolynomial,
) -> str:
    """The terms that are not small, and the groups that would make them so."""
    groups = dict.fromkeys(asked.wording.group(v, zeros) for v, _ in needed)
    terms = asked.space.terms(factor)
    shown = paper(asked.space.term(needed[0][1], terms[needed[0][1]]))
    wanted = ", ".join(f"{paper(g)} ≪ 1" for g in groups)
    return (
        f"the term {shown} of the derived relation is not small under the stated conditions; "
        f"further needed: {wanted}"
    )


def _unconfirmed(asked: Question, faces: Faces, term: Vector) -> str:
    shown = paper(asked.space.term(term, faces.claimed[term]))
    return f"beyond the leading order, the term {shown} is not in the derived relation in this form"


def _apart(asked: Question, faces: Faces, face: Face, answer: Leading) -> list[str]:
    """What is needed besides where the terms that the claim keeps are of very different sizes."""
    groups = dict.fromkeys(asked.wording.group(v, f.zeros) for v, f in faces.apart(face, answer))
    return [
        f"where the terms that the claim keeps differ much in size, also {paper(g)} ≪ 1"
        for g in groups
    ]


def _competing(
    asked: Question,
    faces: Faces,
    term: Vector,
    ratios: Sequence[Vector],
    zeros: Sequence[Vector],
) -> list[str]:
    """A correction stands only where the terms left out are smaller still."""
    groups = dict.fromkeys(asked.wording.group(v, zeros) for v in ratios)
    shown = paper(asked.space.term(term, faces.claimed[term]))
    return [f"the term {shown} is confirmed where also {paper(g)} ≪ 1" for g in groups]
