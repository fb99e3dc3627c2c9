"""Every factor of a term is background plus perturbation: the pieces of a term with their orders.

``split`` only enumerates. What a piece is worth on the background is the business of `settle`.
"""

from __future__ import annotations

from math import prod
from typing import Any

from sympy import Add, Dummy, Expr, Mul
from sympy.core.function import AppliedUndef, Derivative
from sympy.printing.latex import LatexPrinter
from sympy.printing.printer import Printer

from ..declare.fields import Background, Components, Field, Perturbation, components
from ..declare.operators import Dot, Multiplier, Norm, Operator
from ..errors import DeclarationError

Pieces = list[tuple[int, Expr]]
"""Pieces of an expression with the order of each; a `Remainder` counts as order 2 and holds all above."""


class Remainder(Expr):  # type: ignore[misc]
    """What a function or a long product leaves beyond first order: exact minus zeroth minus first order."""

    is_commutative = True
    rank = 0

    @property
    def exact(self) -> Expr:
        """The remainder written out."""
        whole, known = self.args
        return whole - known

    def _sympystr(self, printer: Printer) -> str:
        return f"O2[{printer._print(self.args[0])}]"

    def _latex(self, printer: LatexPrinter, exp: str | None = None) -> str:
        return rf"\mathcal{{O}}_2\!\left[{printer._print(self.args[0])}\right]"


def terms(expr: Expr) -> list[Expr]:
    """The additive terms of one side of a law, products of sums multiplied out."""
    if isinstance(expr, Add):
        return [t for a in expr.args for t in terms(a)]
    if isinstance(expr, Mul):
        sums = [a for a in expr.args if isinstance(a, Add) and a.atoms(Field)]
        if sums:
            rest = Mul(*(a for a in expr.args if a is not sums[0]))
            return [t for a in sums[0].args for t in terms(rest * a)]
    return [] if expr == 0 else [expr]


MANY = 64
"""Pieces of one term, beyond which those of second and higher order are left together in one `Remainder`."""


def split(expr: Expr) -> Pieces:
    """All pieces of an expression with their orders; together they sum to it exactly.

    Raises
    ------
    DeclarationError
        When a function of fields is not smooth.
    """
    if _count(expr) <= MANY:
        return _split(expr, ALL)
    low = _split(expr, 1)
    return [*low, (2, Remainder(expr, Add(*(x for _, x in low))))]


ALL = 1000
"""Above any order that a law reaches."""


def _count(expr: Expr) -> int:
    """How many pieces an expression has, or a little more."""
    if not expr.atoms(Field):
        return 1
    if isinstance(expr, Field):
        return 2
    if isinstance(expr, Norm):
        return 3
    counts = [_count(a) for a in expr.args]
    if isinstance(expr, Mul | Operator):
        return prod(counts)
    return sum(counts) + 1


def _split(expr: Expr, highest: int) -> Pieces:
    """The pieces up to an order."""
    if not expr.atoms(Field):
        return [(0, expr)]
    if isinstance(expr, Field):
        return [(0, Background(expr)), (1, Perturbation(expr))]
    if isinstance(expr, Add):
        return [piece for a in expr.args for piece in _split(a, highest)]
    if isinstance(expr, Mul):
        return _multilinear(Mul, expr.args, highest)
    if isinstance(expr, Norm):
        return _up_to(highest, _split_norm(expr))
    if isinstance(expr, Multiplier):
        return _split_multiplier(expr, highest)
    if isinstance(expr, Operator):
        return _multilinear(type(expr), expr.args, highest)
    if isinstance(expr, Components):
        return _split_components(expr, highest)
    return _up_to(highest, _taylor(expr))


def _up_to(highest: int, pieces: Pieces) -> Pieces:
    return [(order, x) for order, x in pieces if order <= highest]


def _multilinear(make: Any, args: tuple[Any, ...], highest: int) -> Pieces:
    """Products, and operators that are linear in each argument."""
    choices: list[tuple[int, tuple[Expr, ...]]] = [(0, ())]
    for a in args:
        parts = _split(a, highest)
        choices = [(o + p, (*c, x)) for o, c in choices for p, x in parts if o + p <= highest]
    made = ((order, make(*chosen)) for order, chosen in choices)
    return [(order, x) for order, x in made if x != 0]


def _split_multiplier(expr: Multiplier, highest: int) -> Pieces:
    """The zeroth order stays whole: a difference that vanishes there needs no value of the factor at k = 0."""
    f, g = expr.args
    parts = _split(f, highest)
    zeroth = Add(*(x for order, x in parts if order == 0))
    whole = [(0, zeroth), *((order, x) for order, x in parts if order > 0)]
    return [(order, Multiplier(x, g)) for order, x in whole if x != 0]


def _split_components(expr: Components, highest: int) -> Pieces:
    size, pieces = expr.size, []
    indices = [(i,) if expr.rank == 1 else (i, j) for i in range(size) for j in range(size)]
    for index in dict.fromkeys(indices):
        for order, x in _split(expr.entry(index), highest):
            pieces.append((order, _unit_component(x, index, size)))
    return [(order, x) for order, x in pieces if x != 0]


def _unit_component(x: Expr, index: tuple[int, ...], size: int) -> Expr:
    if len(index) == 1:
        return components(*(x if (i,) == index else 0 for i in range(size)))
    rows = (tuple(x if (i, j) == index else 0 for j in range(size)) for i in range(size))
    return components(*rows)


def _split_norm(expr: Norm) -> Pieces:
    """|v| = |v0| + v0.v~/|v0| + remainder; where v0 is zero, |v~| is of first order but not linear."""
    parts = _split(expr.args[0], 1)
    zeroth = Add(*(x for order, x in parts if order == 0))
    first = Add(*(x for order, x in parts if order == 1))
    length = Norm(zeroth)
    if _value_is_zero(zeroth):
        return [(0, length), (1, Norm(first)), (2, Remainder(expr, length + Norm(first)))]
    linear = Dot(zeroth, first) / length
    return [(0, length), (1, linear), (2, Remainder(expr, length + linear))]


def _value_is_zero(expr: Expr) -> bool:
    values: dict[Any, Any] = {b: b.value for b in expr.atoms(Background)}
    return bool(expr.xreplace(values) == 0)


def _taylor(expr: Expr) -> Pieces:
    """A smooth function of scalars, expanded about the zeroth order of its arguments."""
    slots = [a for a in expr.args if a.atoms(Field)]
    dummies = [Dummy() for _ in slots]
    shape = expr.func(*(dummies[slots.index(a)] if a in slots else a for a in expr.args))
    parts = [_split(a, 1) for a in slots]
    zeroth = {d: Add(*(x for o, x in p if o == 0)) for d, p in zip(dummies, parts, strict=True)}
    base = shape.xreplace(zeroth)
    pieces: Pieces = [(0, base)]
    known = base
    for d, part in zip(dummies, parts, strict=True):
        slope = _slope(expr, shape, d).xreplace(zeroth)
        for order, x in part:
            if order == 1:
                pieces.append((1, slope * x))
                known += slope * x
    return [*pieces, (2, Remainder(expr, known))]


def _slope(expr: Expr, shape: Expr, slot: Dummy) -> Expr:
    slope = shape.diff(slot)
    smooth = not (isinstance(expr, AppliedUndef) or slope.has(Derivative) or _has_kink(slope))
    if not smooth:
        raise DeclarationError(
            f"'{expr}' is not a smooth known function of its arguments; use powers, sqrt, exp, log and the like"
        )
    return slope


def _has_kink(slope: Expr) -> bool:
    return any(
        f.__name__ in ("sign", "Heaviside", "DiracDelta", "Piecewise")
        for f in map(type, slope.atoms(Expr))
    )


def first_order_factors(expr: Expr) -> int | None:
    """How many perturbations each term of an expression multiplies; None where it is not linear."""
    if isinstance(expr, Perturbation):
        return 1
    if not expr.atoms(Perturbation):
        return 0
    counts = [first_order_factors(a) for a in expr.args]
    if None in counts:
        return None
    if isinstance(expr, Add):
        return counts[0] if len(set(counts)) == 1 else None
    if isinstance(expr, Components):
        found = {c for c, a in zip(counts, expr.args, strict=True) if a != 0}
        return found.pop() if len(found) == 1 else None
    if isinstance(expr, Mul) or (isinstance(expr, Operator) and not isinstance(expr, Norm)):
        return sum(c for c in counts if c is not None)
    return None
