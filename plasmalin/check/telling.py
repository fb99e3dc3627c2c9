"""How a repair is told: the term at fault with its multiplier, in words, and how far it is from simple."""

from __future__ import annotations

from sympy import Add, Expr, I, Mul, Pow, S, Symbol, cancel, sqrt

from ..declare.notation import paper
from ..declare.operators import omega
from .claim import Claim
from .places import POWERS, Edit
from .verdict import Slip

KIND_COST = {
    "times": 0.0, "more": 1.0, "over": 0.8, "over twice": 0.9, "plus": 0.6, "plus in one": 0.7,
    "plus in one below": 0.7, "plus below": 0.9, "plus to half": 0.7,
}  # fmt: skip


DEPENDS = 3.0
"""More for a factor that depends on ω, and twice for one that holds a sum."""
RESONANCE = 2.0
"""For a denominator that vanishes at a frequency, which terms of a dispersion relation have."""


def told(edit: Edit, value: Expr) -> Slip:
    """An edit and what its unknown is, as a slip."""
    return Slip(*_slip(edit, value), _words(edit, value))


def is_idle(edit: Edit, value: Expr) -> bool:
    """Whether a change is none, or is told better as the change of another term."""
    if edit.kind == "times":
        odd = edit.where == "everywhere" and edit.term.is_Symbol
        return bool(
            value == 1 or (odd and (value.has(I) or (value == -1 and edit.term.is_positive)))
        )
    if value == 0:
        return True
    if edit.kind == "plus":
        return any((value / t).is_number for t in Add.make_args(edit.term) if t != 0)
    return edit.kind in ("over", "over twice", "more") and bool(value.is_number)


def shortened(claim: Claim, value: Expr) -> Expr:
    """An expression with the claim's shorthands where they make it shorter."""
    if isinstance(value, Add):
        return value.func(*(shortened(claim, t) for t in value.args))
    named = [(n**p, claim.written_out(n) ** p) for n in claim.definitions for p in (2, 1, -1, -2)]
    rests = [(name, _over(value, meaning)) for name, meaning in named]
    name, rest = min(rests, key=lambda r: _length(r[1]), default=(S.One, value))
    return name * shortened(claim, rest) if _length(rest) + 1 < _length(value) else value


def _over(value: Expr, meaning: Expr) -> Expr:
    return cancel(value / meaning) if meaning.has(Add) else value / meaning


def _length(value: Expr) -> int:
    """How many factors it has, sums by their terms, roots twice."""
    factors = [f for f in Mul.make_args(value) if not f.is_number]
    return sum(len(Add.make_args(f)) + (not _power(f).is_Integer) for f in factors)


def _power(factor: Expr) -> Expr:
    return factor.exp if isinstance(factor, Pow) else S.One


def _slip(edit: Edit, value: Expr) -> tuple[Expr, Expr]:
    """The term at fault and its multiplier; a missing term is itself, once."""
    made = {
        "times": value,
        "more": 1 + value,
        "over": 1 / (1 + value),
        "over twice": (1 + value) ** -2,
        "plus to half": S.Half + value / edit.term if edit.term != 0 else value,
        "inverted": edit.term**-2 if edit.term != 0 else value,
        "squared": edit.term,
        "once more": _base(edit.term),
        "once less": 1 / _base(edit.term) if edit.term != 0 else value,
        "twice more": _base(edit.term) ** 2,
        "twice less": _base(edit.term) ** -2 if edit.term != 0 else value,
    }
    if edit.kind in made:
        return edit.term, made[edit.kind]
    return value, S.One


def _base(node: Expr) -> Expr:
    return node.base if isinstance(node, Pow) else node


def _words(edit: Edit, value: Expr) -> str:
    inside = f" in the definition of {paper(Symbol(edit.where))}"
    place = {"": "", "everywhere": " everywhere"}.get(edit.where, inside)
    term = paper(edit.term)
    if edit.kind == "plus to half":
        return f"one of the two terms {paper(edit.term / 2)}{place} should be {paper(value)}"
    if edit.kind.startswith("plus in one"):
        base = paper(edit.term.base)
        return f"the term {paper(value)} is missing in one of the factors {base} of {term}{place}"
    if edit.kind.startswith("plus"):
        beside = "" if edit.term == 0 else f" beside {term}"
        return f"the term {paper(value)} is missing{beside}{place}"
    factor = _slip(edit, value)[1]
    if edit.kind.startswith("over") or _divides(value):
        return f"{term}{place} should be divided by {paper(1 / factor)}"
    if edit.kind == "times" and value in (0, -1):
        wrong = f"the term {term} does not belong" if value == 0 else f"the sign of {term} is wrong"
        return f"{wrong}{place}"
    if edit.kind in POWERS or is_power(edit, value):
        return f"{term}{place} should be {paper(edit.term * factor)}"
    depends = ", which depends on ω" if value.has(omega) else ""
    made = paper(factor * edit.term)
    return f"{term}{place} should carry the factor {paper(factor)}{depends}, which makes it {made}"


def _divides(value: Expr) -> bool:
    """Whether a factor is one over a sum, or over a power of it."""
    return isinstance(value, Pow) and isinstance(value.base, Add) and bool(value.exp.is_negative)


def is_power(edit: Edit, value: Expr) -> bool:
    """Whether the change makes a square of the term, or a root."""
    several = len(Mul.make_args(edit.term)) > 1
    return edit.kind == "times" and several and value in (edit.term, 1 / sqrt(edit.term))


def cost(edit: Edit, value: Expr) -> float:
    """How far a repair is from what a referee would write: a number, a sign, one symbol, at the term itself."""
    terms = Add.make_args(value)
    size = 1.0 if is_power(edit, value) else len(terms) - 1 + sum(map(_size, terms))
    if edit.kind == "times" and value.has(omega):
        size += DEPENDS * (2 if value.atoms(Add) else 1)
    return size + _place_cost(edit, value) + KIND_COST[edit.kind] + 0.01 * len(str(edit.term))


def _size(term: Expr) -> float:
    number, rest = term.as_independent(*term.free_symbols)
    return _number_cost(number) + sum(map(_weight, Mul.make_args(rest)))


def _number_cost(number: Expr) -> float:
    if number in (S.One, S.NegativeOne):
        return 0.0 if number == 1 else 0.1
    return 1.0 if number.is_Rational else 2.0


def _weight(factor: Expr) -> float:
    """How far one factor of a repair is from simple."""
    if factor == 1:
        return 0.0
    base = _base(factor)
    if isinstance(base, Add) and _is_resonance(base, _power(factor)):
        return RESONANCE
    if isinstance(base, Add):
        return max(3.5, len(base.args) - 1 + sum(map(_size, base.args)))
    depends = 1.5 if factor.has(omega) else 0.0
    high = 0.4 if abs(_power(factor)) > 1 else 0.0
    return 1.0 + depends + high + (not _power(factor).is_Integer)


def _is_resonance(base: Expr, power: Expr) -> bool:
    return bool(power.is_negative) and base.has(omega) and len(base.args) == 2


def _place_cost(edit: Edit, value: Expr) -> float:
    """More for what is changed everywhere or in a definition, for ω and for what is a number alone."""
    if edit.where == "everywhere":
        return 1.0 if edit.term.is_Symbol else 0.4
    found = 0.3 if edit.where else 0.0
    number, rest = edit.term.as_coeff_Mul()
    if edit.kind == "times":
        healed = number != 1 and number * value in (S.One, S.NegativeOne)
        found += -0.5 if healed else 0.5 if rest == 1 or _base(edit.term) == omega else 0.0
    return found
