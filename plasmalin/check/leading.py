"""Parts of a claim as the leading terms of derived factors where some monomials are small."""

from __future__ import annotations

import time
from collections.abc import Collection, Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property

from sympy import Expr, Symbol

from ..declare.constants import CODATA
from ..declare.notation import paper
from ..exact.polynomial import ExactPolynomial
from .accuracy import Accuracy, with_one_term_changed
from .claim import Claim
from .cones import Vector
from .derived import Derived
from .faces import Face, Faces, Leading
from .monomials import Space, Wording, number_of, space_of
from .verdict import Small


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
    besides : tuple of Expr
        What must be small as well for terms of the claim beyond the leading order to stand.
    corrected : bool
        Whether there are such terms that do not stand so in the derived relation; the roots are right to their order.
    """

    groups: tuple[Small, ...]
    neglected: Expr
    notes: tuple[str, ...] = ()
    besides: tuple[Expr, ...] = ()
    corrected: bool = False

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
    waves: frozenset[Symbol]
    values: Mapping[str, float]
    derived: Derived

    @cached_property
    def others(self) -> tuple[ExactPolynomial, ...] | None:
        """The claim with another number on one of its terms, each; None where it is a product of several parts."""
        whole, _ = self.derived.numerator(self.claim.residual)
        if len(self.parts) != 1 or self.parts[0].degree != whole.degree:
            return None
        return with_one_term_changed(self.claim, self.derived)

    def small(self, group: Expr, physical: bool = True) -> Small:
        return Small(group, number_of(group, self.values, self.claim), physical)


def question(
    claim: Claim,
    derived: Derived,
    values: Mapping[str, float] | None,
    of_order_one: Collection[Symbol] = (),
) -> Question:
    """What is asked of a claim and a relation; symbols may be taken to be of order one."""
    polynomial, _ = derived.numerator(claim.residual)
    factors = tuple(f for f, _ in derived.factors)
    rest = polynomial.exact_div(polynomial.gcd(derived.polynomial))
    parts = tuple(f for f, _ in rest.factor()[1])
    used = {s for d in claim.definitions.values() for s in d.free_symbols} & derived.symbols
    space = space_of([*parts, *factors], used, of_order_one)
    wording = Wording(space, claim, CODATA)
    waves = derived.wave_symbols
    return Question(claim, parts, factors, space, wording, waves, values or {}, derived)


@dataclass(frozen=True)
class Checked:
    """A part that is leading under the conditions, where what is needed besides is small as well."""

    notes: tuple[str, ...]
    besides: tuple[Expr, ...]
    neglected: tuple[Expr, ...]
    needed: tuple[Vector, ...]
    reason: str
    faces: Faces
    led: tuple[tuple[Face, Leading], ...]
    corrected: bool = False


BEYOND = "beyond the leading order, "
"""How the reason begins where the leading part is right."""
UNLIKE = "under the stated conditions the derived relation has no such leading part"


def best_of(
    asked: Question, part: ExactPolynomial, cone: list[Vector], end: float
) -> Checked | str:
    """The part against every derived factor: what needs least, or the reason that says most."""
    answers = [verified(asked, part, f, cone, end) for f in asked.factors]
    checked = [a for a in answers if isinstance(a, Checked)]
    if checked:
        return min(checked, key=lambda a: len(a.needed))
    if time.process_time() > end:
        return "not decided within the time given"
    reasons = [a for a in answers if isinstance(a, str)]
    return max(reasons, key=lambda r: (r != UNLIKE, -len(r)), default=UNLIKE)


def verified(
    asked: Question, part: ExactPolynomial, factor: ExactPolynomial, cone: list[Vector], end: float
) -> Checked | str:
    """One part of the claim against one derived factor."""
    space = asked.space
    faces = Faces(space, space.terms(part), space.terms(factor), cone, end)
    notes: list[str] = []
    besides: list[Expr] = []
    neglected: list[Expr] = []
    needed: list[Vector] = []
    led: list[tuple[Face, Leading]] = []
    reason, corrected = "", False
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
        beyond = [v for v in faces.claimed if not any(v in f.on for f in found)]
        graded = {r: faces.correction(r, face, answer) for r in beyond}
        if None in graded.values():
            refused = next(r for r, ratios in graded.items() if ratios is None)
            stands = all(faces.stands(r, face, answer) for r in beyond)
            exact = asked.others and Accuracy(faces, found, asked.others)
            there = exact.competing(part, factor, face, answer, stands) if exact else None
            if there is None:
                return _unconfirmed(asked, faces, refused)
            corrected = True
            groups = competing(asked, there[1], there[0].zeros)
            besides += groups
            notes += [f"its corrections are confirmed where also {paper(g)} ≪ 1" for g in groups]
            continue
        for r, ratios in graded.items():
            groups = competing(asked, ratios or [], face.zeros)
            besides += groups
            shown = paper(space.term(r, faces.claimed[r]))
            notes += [f"the term {shown} is confirmed where also {paper(g)} ≪ 1" for g in groups]
    return Checked(
        tuple(notes),
        tuple(besides),
        tuple(neglected),
        tuple(needed),
        reason,
        faces,
        tuple(led),
        corrected,
    )


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
    return f"{BEYOND}the term {shown} is not in the derived relation in this form"


def competing(asked: Question, ratios: Sequence[Vector], zeros: Sequence[Vector]) -> list[Expr]:
    """A correction stands only where these are small: the terms left out are smaller still."""
    return list(dict.fromkeys(asked.wording.group(v, zeros) for v in ratios))


def largest(groups: Sequence[Small]) -> Expr:
    """The largest group at the given values, else the first."""
    known = [g for g in groups if g.value is not None]
    return max(known, key=lambda g: g.value or 0.0).group if known else groups[0].group


def apart(asked: Question, checked: Checked) -> list[str]:
    """What is needed besides where the terms that the claim keeps are of very different sizes."""
    groups = dict.fromkeys(
        asked.wording.group(v, f.zeros)
        for face, led in checked.led
        for v, f in checked.faces.apart(face, led)
    )
    return [
        f"where the terms that the claim keeps differ much in size, also {paper(g)} ≪ 1"
        for g in groups
        if g != 1
    ]
