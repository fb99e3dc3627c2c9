"""The dimension of an expression as a `Form`, and what an expression requires of the dimensions of its names.

A form holds powers of the base units and of names. They are rational numbers, or rational functions of the parameters
in exponents: n**gamma counts gamma times n. So two terms of equal dimension are one linear equation.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

from sympy import Abs, Add, Expr, Max, Min, Mul, Pow, Symbol, Tuple, cancel, expand, sign
from sympy.core.function import Function

from .fields import Components, Field
from .notation import law_text
from .operators import (
    WAVE_SYMBOLS,
    Advect,
    Curl,
    Div,
    Grad,
    Identity,
    Laplacian,
    Operator,
    PartialT,
    omega,
)
from .units import BASE, Dimension

Form = Mapping[Any, Any]
"""From a name, or a base unit by its index, to its power: a Fraction, or an expression in exponents."""

METER, SECOND = BASE.index("m"), BASE.index("s")
PER: dict[type[Operator], Form] = {
    PartialT: {SECOND: Fraction(-1)},
    **{kind: {METER: Fraction(-1)} for kind in (Grad, Div, Curl, Advect)},
    Laplacian: {METER: Fraction(-2)},
}
"""What an operator brings beside the dimensions of its arguments."""


@dataclass(frozen=True)
class Requirement:
    """Two dimensions that must be equal; `right` is None where a dimensionless `left` is needed.

    Attributes
    ----------
    where : str
        "law 'Poisson'", or another thing that a message can name.
    left, right : Expr or str
        The terms.
    reason : tuple
        Why `left` must be dimensionless: words and an expression.
    difference : Form
        Of the two dimensions.
    """

    where: str
    left: Any
    right: Any
    reason: tuple[Any, ...]
    left_form: Form
    right_form: Form

    @property
    def difference(self) -> Form:
        return combined(self.left_form, self.right_form, Fraction(-1))


def combined(a: Form, b: Form, times: Any = Fraction(1)) -> Form:
    """The form of a * b**times."""
    made = dict(a)
    for key, value in b.items():
        made[key] = _plain(made.get(key, Fraction(0)) + times * value)
        if made[key] == 0:
            del made[key]
    return made


def _plain(power: Any) -> Any:
    """A power as a Fraction where it is a number."""
    if isinstance(power, Fraction):
        return power
    made = power
    if isinstance(made, Add | Mul):
        fractions = any(p.exp.is_negative for p in made.atoms(Pow))
        made = cancel(made) if fractions else expand(made)
    return Fraction(int(made.p), int(made.q)) if made.is_Rational else made


def of_dimension(powers: Dimension) -> Form:
    """A known dimension as a form."""
    return {i: p for i, p in enumerate(powers) if p}


def per_length(form: Form) -> Form:
    """The form of a gradient."""
    return combined(form, {METER: Fraction(-1)})


def known(form: Form) -> Dimension | None:
    """The dimension that a form is, when it holds base units only."""
    if any(isinstance(key, str) or not isinstance(p, Fraction) for key, p in form.items()):
        return None
    return tuple(form.get(i, Fraction(0)) for i in range(len(BASE)))


class Terms:
    """Walks an expression and collects what its sums, powers and functions require."""

    def __init__(self, where: str) -> None:
        self.where = where
        self.required: list[Requirement] = []

    def form(self, expr: Any) -> Form:
        if isinstance(expr, Symbol | Field):
            return self._atom(expr)
        if isinstance(expr, Add):
            return self.equal(expr.args)
        if isinstance(expr, Mul):
            return self._together(expr.args)
        if isinstance(expr, Pow):
            return self._power(*expr.args)
        if isinstance(expr, Components | Tuple):
            return self.equal([entry for entry in expr.args if not _zero(entry)])
        if isinstance(expr, Operator):
            return combined(self._together(expr.args), PER.get(type(expr), {}))
        if isinstance(expr, Abs | Max | Min):
            return self.equal(expr.args)
        if isinstance(expr, sign):
            return {}
        if isinstance(expr, Function):
            return self._function(expr)
        if expr.is_number or isinstance(expr, Identity):
            return {}
        return {str(expr): Fraction(1)}

    def equal(self, terms: Iterable[Any]) -> Form:
        """The common form of terms that are added or compared."""
        forms = [(term, self.form(term)) for term in terms if term != 0]
        for (a, first), (b, other) in zip(forms[:1] * len(forms), forms[1:], strict=False):
            if first != other:
                self._require(a, b, (), first, other)
        return forms[0][1] if forms else {}

    def dimensionless(self, expr: Any, reason: tuple[Any, ...]) -> None:
        form = self.form(expr)
        if form:
            self._require(expr, None, reason, form, {})

    def _require(self, left: Any, right: Any, reason: tuple[Any, ...], a: Form, b: Form) -> None:
        self.required.append(Requirement(self.where, left, right, reason, a, b))

    def _atom(self, atom: Any) -> Form:
        if atom in WAVE_SYMBOLS:
            return {SECOND if atom is omega else METER: Fraction(-1)}
        return {atom.name: Fraction(1)}

    def _together(self, args: Iterable[Any]) -> Form:
        total: Form = {}
        for a in args:
            total = combined(total, self.form(a))
        return total

    def _power(self, base: Any, exponent: Any) -> Form:
        below = self.form(base)
        if not exponent.is_Rational:
            self.dimensionless(exponent, ("it is the exponent of", base))
        return combined({}, below, _plain(exponent)) if below else {}

    def _function(self, expr: Any) -> Form:
        for a in expr.args:
            self.dimensionless(a, ("it is the argument of", f"{expr.func.__name__}(...)"))
        return {}


def _zero(entry: Any) -> bool:
    return not isinstance(entry, Tuple) and bool(entry == 0)


def term_text(expr: Any) -> str:
    """A term as a law would have it."""
    return law_text(expr) if isinstance(expr, Expr) else str(expr)


def requirements(where: str, *terms: Any) -> tuple[Requirement, ...]:
    """What it takes for terms (sums are taken apart) to have one dimension."""
    walk = Terms(where)
    walk.equal([part for term in terms for part in Add.make_args(term)])
    return tuple(walk.required)


def has_dimension(where: str, expr: Any, powers: Form, named: str) -> tuple[Requirement, ...]:
    """What it takes for a value (its entries, if a vector) to have a given form; `named` says what has it.

    An entry that is a number requires nothing: it is in the unit of what it is given for.
    """
    if isinstance(expr, Components | Tuple):
        return tuple(r for a in expr.args for r in has_dimension(where, a, powers, named))
    if expr.is_number:
        return ()
    walk = Terms(where)
    form = walk.equal(Add.make_args(expr))
    same = () if form == powers else (Requirement(where, expr, named, (), form, powers),)
    return (*walk.required, *same)
