"""Orderings found: the groups that must be small for a claim to be the leading part of the derived relation."""

from __future__ import annotations

import time
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from fractions import Fraction
from functools import reduce
from itertools import chain, combinations, permutations, product
from operator import mul

from sympy import Expr, Symbol

from ..declare.constants import CODATA
from ..exact.polynomial import ExactPolynomial
from .claim import Claim
from .compare import covered
from .cones import Quotient, Vector, extreme, implied, minus, smallest, times, weights
from .derived import Derived
from .faces import Faces
from .forms import divided, initial, matched_shifts, slopes
from .leading import Checked, LimitFound, Question, apart, best_of, largest, question, verified
from .monomials import ELECTRON_MASS, MASS, Space, Terms
from .sizes import MULTIPLIED
from .verdict import Small

MOST_TERMS, MOST_RATIOS, MOST_FOUND = 40, 60, 4


SEARCH = 3.0
"""Seconds for trying single groups."""


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
    end = time.process_time() + budget
    longest = max(map(len, asked.factors))
    if not asked.parts or any(len(p) > max(MULTIPLIED, longest - 1) for p in asked.parts):
        return []  # a face has fewer terms than the whole
    found = _together(asked, asked.parts, end)
    if not found and len(asked.parts) > 1:
        found = _together(asked, (reduce(mul, asked.parts),), end)
    if not found:
        found = list(_scaled(asked, min(end, time.process_time() + SEARCH)))
    if not found:
        found = list(_searched(asked, min(end, time.process_time() + SEARCH)))
    found.sort(key=_simplicity)
    late = min(end, time.process_time() + 3 * SEARCH)
    pruned = [_irredundant(asked, f, late) for f in found[:MOST_FOUND]]
    widest = sorted(_widest(asked, pruned), key=_simplicity)
    return [_noted(asked, f, min(end, time.process_time() + SEARCH)) for f in widest[:1]] + widest[
        1:
    ]


def _noted(asked: Question, found: LimitFound, end: float) -> LimitFound:
    """With what is needed besides where the claim's terms differ much in size."""
    cone = [v for g in found.groups if (v := asked.wording.exponents(g.group)) is not None]
    answers = [best_of(asked, p, cone, end) for p in asked.parts] if cone else []
    checked = [a for a in answers if isinstance(a, Checked)]
    notes = [n for c in checked for n in (*c.notes, *apart(asked, c))]
    besides = (*found.besides, *(g for c in checked for g in c.besides))
    return replace(found, notes=tuple(dict.fromkeys((*found.notes, *notes))), besides=besides)


def _simplicity(found: LimitFound) -> tuple[bool, int, int]:
    return not found.physical, len(found.groups), len(str(found.groups))


def _irredundant(asked: Question, found: LimitFound, end: float) -> LimitFound:
    """Without the groups that need not be small, as where a wave of another kind only joins as a factor."""
    kept = list(found.groups)
    for small in found.groups if len(kept) > 1 else ():
        rest = [asked.wording.exponents(g.group) for g in kept if g is not small]
        cone = [v for v in rest if v is not None]
        answers = [_checked(asked, p, cone, end) for p in asked.parts] if cone else [None]
        if time.process_time() > end:
            return found
        if all(a is not None and not a.needed for a in answers):
            kept.remove(small)
    return replace(found, groups=tuple(kept), neglected=largest(kept))


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
            if time.process_time() > end:
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
    if len(part) > MULTIPLIED:
        return
    turned = part.turned_sign(part.main)
    if not covered(part, turned):
        yield part * turned
    yield part * part


def _scaled(asked: Question, end: float) -> Iterator[LimitFound]:
    """Scalings of few symbols under which the derived factors begin with the claim times other modes."""
    space = asked.space
    for w in _scalings(asked):
        orderings = [_begun(space, p, asked.factors, w) for p in asked.parts]
        if time.process_time() > end:
            return
        made = [o for o in orderings if o is not None]
        found = _joined(asked, made) if len(made) == len(orderings) else None
        if found is not None:
            yield found


def _begun(
    space: Space, part: ExactPolynomial, factors: Sequence[ExactPolynomial], w: Vector
) -> Ordering | None:
    """The face at some weights, when it is all of the part times another polynomial."""
    claimed = space.terms(part)
    turned = next(iter(slopes(claimed, w, space)), None)
    if turned is None or initial(claimed, turned, space) != claimed:
        return None
    for factor in factors:
        terms = space.terms(factor)
        on = initial(terms, turned, space)
        if divided(on, claimed) is not None:
            return _ordering(space, list(on), terms)
    return None


def _scalings(asked: Question) -> Iterator[Vector]:
    """Wave numbers together or one symbol small or large, with light electrons and fast light or without."""
    space = asked.space
    names = {str(c): i for i, c in enumerate(space.columns[: space.sized])}
    light = {i: 1 for n, i in names.items() if n in ELECTRON_MASS}
    heavy = {i: -1 for n, i in names.items() if MASS.match(n) and n not in ELECTRON_MASS}
    usual = [d for d in (light, heavy) if d]
    usual += [{names["c"]: -1}] if "c" in names else []
    asides = [dict(p for d in chosen for p in d.items()) for chosen in _subsets(usual)]
    waves = [i for i, c in enumerate(space.columns) if c in asked.waves]
    ones = [waves, *([i] for n, i in names.items() if i and n not in CODATA)]
    for indices, sign, aside in product(ones, (1, -1), asides):
        made = aside | dict.fromkeys(indices, sign)
        yield tuple(Fraction(made.get(i, 0)) for i in range(space.sized))


def _subsets(items: list[dict[int, int]]) -> Iterator[tuple[dict[int, int], ...]]:
    return chain.from_iterable(combinations(items, n) for n in range(len(items) + 1))


def _searched(asked: Question, end: float) -> Iterator[LimitFound]:
    """One small group at a time, taken from the terms of the derived factors, and what it needs besides."""
    for v in _ratios(asked):
        answers = [_checked(asked, p, [v], end) for p in asked.parts]
        if time.process_time() > end:
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
        besides = tuple(g for c in checked for g in c.besides)
        yield LimitFound(made, largest(made), tuple(notes), besides)


def _checked(
    asked: Question, part: ExactPolynomial, cone: list[Vector], end: float
) -> Checked | None:
    """The part where some groups are small, first at one set of weights, then at all."""
    space = asked.space
    for factor in asked.factors:
        faces = Faces(space, space.terms(part), space.terms(factor), cone, end)
        if faces.plausible():
            answer = verified(asked, part, factor, cone, end)
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
    return LimitFound(made, largest(made), ())


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
