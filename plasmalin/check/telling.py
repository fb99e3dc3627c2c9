"""How a repair is told: the term at fault with its multiplier, in words, and how far it is from simple."""

from __future__ import annotations

from sympy import Add, Expr, I, Mul, Pow, S, Symbol

from ..declare.notation import paper
from ..declare.operators import omega
from .places import Edit
from .verdict import Slip


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


def _slip(edit: Edit, value: Expr) -> tuple[Expr, Expr]:
    """The term at fault and its multiplier; a missing term is itself, once."""
    made = {
        "times": value,
        "more": 1 + value,
        "over": 1 / (1 + value),
        "over twice": (1 + value) ** -2,
        "plus to half": S.Half + value / edit.term,
        "inverted": edit.term**-2,
        "squared": edit.term,
        "once more": _base(edit.term),
        "once less": 1 / _base(edit.term),
    }
    if edit.kind in made:
        return edit.term, made[edit.kind]
    return value, S.One


def _words(edit: Edit, value: Expr) -> str:
    place = {"": "", "everywhere": " everywhere"}.get(
        edit.where, f" in the definition of {paper(Symbol(edit.where))}"
    )
    term = paper(edit.term)
    if edit.kind in ("squared", "inverted"):
        return (
            f"{term}{place} should be {paper(edit.term ** (2 if edit.kind == 'squared' else -1))}"
        )
    if edit.kind.startswith("plus in one"):
        base = paper(edit.term.base)
        return f"the term {paper(value)} is missing in one of the factors {base} of {term}{place}"
    if edit.kind.startswith("plus"):
        beside = "" if edit.term == 0 else f" beside {term}"
        return f"the term {paper(value)} is missing{beside}{place}"
    if edit.kind.startswith("over"):
        return f"{term}{place} should be divided by {paper(1 / _slip(edit, value)[1])}"
    if value == 0:
        return f"the term {term} does not belong{place}"
    if value == -1 and edit.kind == "times":
        return f"the sign of {term} is wrong{place}"
    factor = _slip(edit, value)[1]
    depends = ", which depends on ω" if value.has(omega) else ""
    made = paper(factor * edit.term)
    return f"{term}{place} should carry the factor {paper(factor)}{depends}, which makes it {made}"


def _base(node: Expr) -> Expr:
    return node.base if isinstance(node, Pow) else node


KIND_COST = {
    "times": 0.0, "more": 1.0, "over": 0.8, "over twice": 0.9, "plus": 0.6, "plus in one": 0.7, "plus in one below": 0.7, "plus below": 0.9, "plus to half": 0.7,
}  # fmt: skip


def cost(edit: Edit, value: Expr) -> float:
    terms = Add.make_args(value)
    size = len(terms) - 1 + sum(_weight(f) for t in terms for f in Mul.make_args(t))
    roots = sum(1.0 for p in value.atoms(Pow) if not p.exp.is_Integer)
    place = {"": 0.0, "everywhere": 0.4}.get(edit.where, 0.3)
    return size + roots + place + KIND_COST[edit.kind] + 0.01 * len(str(edit.term))


def _weight(factor: Expr) -> float:
    """How far one factor of a repair is from simple."""
    if factor in (S.One, S.NegativeOne):
        return 0.0
    base = factor.base if isinstance(factor, Pow) else factor
    return 1.0 + (2.5 if isinstance(base, Add) else 1.5 if factor.has(omega) else 0.0)
