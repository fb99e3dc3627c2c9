"""A claim that gives ω or ω², or k or k², as a sum of terms of falling size: an expansion of one derived branch.

With ω = f + δ the derived relation is a polynomial in δ. When symbols scale with powers of a small ε, the lower edge of
its Newton polygon at the constant term gives the order and the leading part of the smallest δ exactly (Newton; Puiseux
1850, J. Math. Pures Appl. 15, 365; from memory). The claim is right when δ is of higher order than its last term.
"""

from __future__ import annotations

import time
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace
from fractions import Fraction

from sympy import (
    Abs,
    Add,
    Expr,
    I,
    Mul,
    S,
    cancel,
    expand,
    powsimp,
)
from sympy import factor as factored

from ..declare.constants import CODATA
from ..declare.notation import paper
from ..declare.operators import omega
from ..errors import PlasmalinError
from ..exact.polynomial import ExactPolynomial
from .claim import Claim
from .cones import extreme
from .corrections import correction, parts
from .derived import Derived
from .expansion import Expansion, expansion_of
from .monomials import PURE_NUMBER, Wording, number_of, space_of
from .scalings import Weights, even, is_imaginary, order, paths, scaled
from .verdict import Small

MOST_STEPS = 4
SECOND_THOUGHTS = 1.0
"""Seconds for other scalings once one has shown a slip."""


@dataclass(frozen=True)
class SeriesFound:
    """An expansion that is right to the order of its last term.

    Attributes
    ----------
    groups : tuple of Small
        The sizes of the claim's terms relative to its first, or the author's own ratios; they must be small.
    next : Expr or None
        The first correction beyond the claim, to what the claim gives (ω or ω²); None where several roots share it.
    scaling : dict of Expr to Fraction
        The powers of ε with which symbols scaled in the proof.
    """

    groups: tuple[Small, ...]
    next: Expr | None
    scaling: Weights

    @property
    def proof(self) -> str:
        return (
            f"with {scaled(self.scaling)} the derived relation, shifted by the claim, has its smallest root beyond the claim's last "
            "term (Newton polygon, exact)"
        )

    @property
    def notes(self) -> tuple[str, ...]:
        return () if self.next is None else (f"the next correction is {paper(self.next)}",)


@dataclass(frozen=True)
class SeriesSlip:
    """An expansion that is right to leading order and has one later term wrong.

    Attributes
    ----------
    term : Expr
        The claim's term of that order in the author's symbols, 0 where it has none.
    should_be : Expr
        In the symbols of the model.
    order : Fraction
        The power of ε of the term.
    """

    term: Expr
    should_be: Expr
    order: Fraction


def series_order(
    claim: Claim,
    derived: Derived,
    ratios: Iterable[Expr] | None = None,
    values: Mapping[str, float] | None = None,
    budget: float = 5.0,
) -> SeriesFound | None:
    """The claim as an expansion of one derived branch.

    Parameters
    ----------
    claim : Claim
        With ω, or ω², times a factor free of ω, alone on one side; else with a wave number so.
    derived : Derived
    ratios : iterable of Expr, optional
        What the author says is small; else every wave number and parameter is tried, small and large.
    values : mapping of str to float, optional
        Numbers by name, for the values of the groups.
    budget : float, s

    Returns
    -------
    SeriesFound or None
        None when the claim is no sum of terms of different size, or is wrong before or at its last term.
    """
    expansion = expansion_of(claim, derived)
    found = _searched(expansion, claim, derived, ratios, budget)
    if expansion is None or not isinstance(found, SeriesFound):
        return None
    groups = _sizes(expansion, found) if ratios is None else list(ratios)
    small = tuple(Small(g, number_of(g, values or {}, claim)) for g in groups)
    return replace(found, groups=small)


def series_slip(
    claim: Claim,
    derived: Derived,
    ratios: Iterable[Expr] | None = None,
    budget: float = 5.0,
) -> SeriesSlip | None:
    """The term of an expansion that is right to leading order and wrong later; None where there is none.

    Parameters are those of `series_order`.
    """
    found = _searched(expansion_of(claim, derived), claim, derived, ratios, budget)
    return found if isinstance(found, SeriesSlip) else None


def _searched(
    expansion: Expansion | None,
    claim: Claim,
    derived: Derived,
    ratios: Iterable[Expr] | None,
    budget: float,
) -> SeriesFound | SeriesSlip | None:
    """The first scaling under which the claim is right, else the first that shows a slip.

    An author's ratios may be small in several ways; then no term of the claim may be wrong in any of them. Where
    only a term is missing that another ratio makes larger, two small quantities compete, and that is no slip.
    """
    if expansion is None or len(expansion.terms) < 2:
        return None
    end = time.process_time() + budget
    slips: list[SeriesSlip] = []
    right: SeriesFound | None = None
    given = None if ratios is None else [derived.using(claim.written_out(r)) for r in ratios]
    for weights in paths(expansion.terms, expansion.symbols, derived, given, expansion.main):
        here: list[SeriesSlip] = []
        for f in expansion.factors:
            found = _judged(expansion, f, weights, end)
            if isinstance(found, SeriesFound):
                right = right or found
                break
            here += [] if found is None else [found]
        else:
            last = max(here, key=lambda s: s.order, default=None)
            if last is not None and last.term != 0 and given is not None:
                return last
        if right is not None and given is None:
            return right
        if here and not slips:
            end = min(end, time.process_time() + SECOND_THOUGHTS)
        slips += [max(here, key=lambda s: s.order)] if here else []
        if time.process_time() > end:
            break
    return right if right is not None else slips[0] if slips else None


def _judged(
    expansion: Expansion, factor: ExactPolynomial, weights: Weights, end: float
) -> SeriesFound | SeriesSlip | None:
    """Corrections to real and imaginary part one after the other, until both are beyond the claim's last terms."""
    last = _last_orders(expansion, weights)
    first = min(order(t, weights) for t in expansion.terms)
    value = even(expansion.value, weights)
    found: list[Expr | None] = [None, None]
    for _ in range(MOST_STEPS):
        if time.process_time() > end:
            return None
        try:
            step = correction(factor, value, weights)
        except (PlasmalinError, ArithmeticError, RecursionError):
            return None
        if step is None or step.order <= first:
            return None
        if step.value is None:
            return SeriesFound((), None, weights) if step.order > max(last) else None
        sides = parts(step.value)
        for i, side in enumerate(sides):
            if side != 0 and found[i] is None:
                if step.order <= last[i]:
                    return _slip(expansion, weights, step.order, i, side)
                found[i] = side
        if step.order > max(last):
            break
        value = value + step.value
    else:
        return None
    real, imaginary = found
    beyond = factored(real) if real is not None else I * factored(imaginary)
    return SeriesFound((), beyond, weights)


def _last_orders(expansion: Expansion, weights: Weights) -> tuple[Fraction, Fraction]:
    """The highest orders among the real and the imaginary terms; a side without terms has the other's."""
    real = [order(t, weights) for t in expansion.terms if not is_imaginary(t)]
    imaginary = [order(t, weights) for t in expansion.terms if is_imaginary(t)]
    return max(real or imaginary), max(imaginary or real)


def _slip(
    expansion: Expansion, weights: Weights, at: Fraction, side: int, missing: Expr
) -> SeriesSlip:
    """The claim's term of an order, and what it should be."""
    unit = I if side else S.One
    same = [t for t in expansion.terms if is_imaginary(t) == bool(side) and order(t, weights) == at]
    should = factored(cancel(Add(*same) + unit * missing))
    named = [
        t
        for t in expansion.written
        if len(expansion.written) == len(expansion.terms)
        and is_imaginary(t) == bool(side)
        and order(expansion.claim.written_out(t), weights) == at
    ]
    return SeriesSlip(Add(*(named or same)), should, at)


def _sizes(expansion: Expansion, found: SeriesFound) -> list[Expr]:
    """The claim's later terms relative to its first, and the next correction to its last, numbers left out."""
    meaning = expansion.claim.written_out
    ordered = sorted(expansion.written, key=lambda t: (order(meaning(t), found.scaling), str(t)))
    first = ordered[0]
    low = order(meaning(first), found.scaling)
    sizes = [t / first for t in ordered if order(meaning(t), found.scaling) > low]
    if len(found.scaling) > 1 and found.next is not None:
        side = [t for t in ordered if is_imaginary(t) == is_imaginary(found.next)] or ordered
        top, bottom = found.next.as_numer_denom()
        sizes += [t / bottom / side[-1] for t in Add.make_args(expand(top))]
    relation = (f for f, _ in expansion.derived.factors)
    space = space_of(relation, expansion.symbols - {omega})
    wording = Wording(space, expansion.claim, CODATA)
    vectors = [wording.exponents(_positive(s)) for s in sizes]
    groups = [wording.group(v, ()) for v in extreme(v for v in vectors if v is not None and any(v))]
    compound = [_bare(_positive(s)) for s, v in zip(sizes, vectors, strict=True) if v is None]
    return [*groups, *dict.fromkeys(compound)]


def _positive(expr: Expr) -> Expr:
    """For wave numbers above zero."""
    return expr.xreplace({a: a.args[0] for a in expr.atoms(Abs)})


def _bare(ratio: Expr) -> Expr:
    """A ratio without numbers and adiabatic exponents in front."""
    plain = factored(powsimp(cancel(ratio), force=True))
    return Mul(*(f for f in Mul.make_args(plain) if f.free_symbols and not _is_pure(f)))


def _is_pure(expr: Expr) -> bool:
    return all(PURE_NUMBER.match(s.name) for s in expr.free_symbols)
