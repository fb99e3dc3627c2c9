"""The one partial differential equation that a chosen field obeys."""

from __future__ import annotations

import unicodedata
from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction
from random import Random
from typing import TYPE_CHECKING, Any

from sympy import Add, Derivative, Expr, Function, I, Integer, Poly, Symbol, cancel, expand, latex

from ..declare.fields import decorated
from ..declare.notation import SUPERSCRIPT, paper
from ..errors import DeclarationError, NonPolynomialError, UndeterminedError
from ..exact.determinant import determinant
from ..exact.polynomial import ExactPolynomial, polynomial

if TYPE_CHECKING:
    from .matrix import WaveMatrix

Orders = tuple[int, ...]


@dataclass(frozen=True)
class WaveEquation:
    """A linear equation with constant coefficients for one field.

    Attributes
    ----------
    name : str
        The field (or amplitude).
    axes : str
        The axes along which it varies.
    terms : dict of tuple to Expr
        Coefficients by orders of differentiation, time first, then along `axes`.
    """

    name: str
    axes: str
    terms: Mapping[Orders, Expr]
    latex_name: str

    @property
    def expr(self) -> Expr:
        """The left-hand side as a SymPy expression in derivatives of ``name(t, x, ...)``."""
        variables = (Symbol("t"), *(Symbol(a) for a in self.axes))
        f = Function(self.name)(*variables)
        return Add(
            *(
                c * (Derivative(f, *pairs) if (pairs := _pairs(variables, orders)) else f)
                for orders, c in self.terms.items()
            )
        )

    def __str__(self) -> str:
        name = with_tilde(self.name)
        parts = []
        for orders, c in self.terms.items():
            d = "".join(_partial_text(v, n) for v, n in zip("t" + self.axes, orders, strict=True))
            parts.append((f"{d} {name}" if d else name, c))
        return _joined(parts, paper) + " = 0"

    def __repr__(self) -> str:
        return str(self)

    def _repr_latex_(self) -> str:
        parts = []
        for orders, c in self.terms.items():
            d = "".join(_partial_latex(v, n) for v, n in zip("t" + self.axes, orders, strict=True))
            parts.append((f"{d} {self.latex_name}", c))
        return f"$\\displaystyle {_joined(parts, latex)} = 0$"


def with_tilde(name: str) -> str:
    """A perturbation's name as it is printed."""
    head = paper(Symbol(name))
    return unicodedata.normalize("NFC", f"{head[0]}\u0303{head[1:]}")


def _pairs(variables: tuple[Symbol, ...], orders: Orders) -> list[tuple[Symbol, int]]:
    return [(v, n) for v, n in zip(variables, orders, strict=True) if n]


def _partial_text(variable: str, order: int) -> str:
    return (
        ""
        if not order
        else f"∂_{variable}" + (str(order).translate(SUPERSCRIPT) if order > 1 else "")
    )


def _partial_latex(variable: str, order: int) -> str:
    return "" if not order else rf"\partial_{variable}" + (f"^{{{order}}}" if order > 1 else "")


def _joined(parts: list[tuple[str, Expr]], show: Any) -> str:
    out = ""
    for text, c in parts:
        negative = c.could_extract_minus_sign()
        size = -c if negative else c
        body = (
            text
            if size == 1
            else f"({show(size)}) {text}"
            if size.is_Add
            else f"{show(size)} {text}"
        )
        out += (" − " if negative else " + ") + body if out else ("−" if negative else "") + body
    return out


def wave_equation(wave: WaveMatrix, name: str) -> WaveEquation:
    """The equation of one field; see `WaveMatrix.wave_equation`."""
    columns = wave.column(name)
    if len(columns) > 1:
        options = ", ".join(wave.columns[j].symbol.name for j in columns)
        raise DeclarationError(f"'{name}' has several components; name one of {options}")
    general, axes = _general(wave)
    moving = moving_part(general, columns[0])
    symbols = [s for s in general.k if s != 0]
    terms = _derivatives(moving, symbols)
    return WaveEquation(
        name, axes, terms, rf"\tilde{{{decorated(wave.columns[columns[0]].field)}}}"
    )


def _general(wave: WaveMatrix) -> tuple[WaveMatrix, str]:
    """The same wave with its components as independent symbols."""
    from .plane import plane_wave

    axes = wave.linear.axes
    names = tuple(f"k_{a}" if c != 0 else 0 for a, c in zip(axes, wave.k, strict=True))
    along = "".join(a for a, c in zip(axes, wave.k, strict=True) if c != 0)
    return plane_wave(wave.linear, names, None), along


def moving_part(wave: WaveMatrix, column: int) -> ExactPolynomial:
    """The factors of the determinant that move one unknown.

    The response of unknown j to a source in law i is cofactor_ij / det; a factor that all cofactors share does not
    move j. Whether they share it is read off at a random exact point, where a false answer has negligible probability
    (Schwartz 1980, J. ACM 27, 701).
    """
    size = len(wave.rows)
    whole = determinant(wave.entries, size, wave.omega)
    if whole.degree < 0:
        from .derive import undetermined_message

        raise UndeterminedError(undetermined_message(wave))
    point = _random_point(wave)
    minors = [
        determinant(_without(wave.entries, row, column), size - 1, wave.omega, values=point)
        for row in range(size)
    ]
    responding = [m for m in minors if m.degree >= 0]
    moving = polynomial(Integer(1), wave.omega)
    for factor, multiplicity in whole.factor()[1]:
        image = factor.substitute(point)
        shared = min(
            (_times_dividing(m, image, multiplicity) for m in responding), default=multiplicity
        )
        for _ in range(multiplicity - shared):
            moving = moving * factor
    if moving.degree < 1:
        raise UndeterminedError(
            f"no wave moves '{wave.columns[column].symbol.name}': it has no equation"
        )
    return moving.primitive()[1]


def _random_point(wave: WaveMatrix) -> dict[Any, Fraction]:
    symbols = {s for c in wave.entries.values() for s in c.free_symbols} - {wave.omega}
    random = Random(11)
    return {
        s: Fraction(random.randint(10**4, 10**5), random.randint(10**3, 10**4))
        for s in sorted(symbols, key=str)
    }


def _times_dividing(p: ExactPolynomial, divisor: ExactPolynomial, most: int) -> int:
    """How often a univariate polynomial divides another, counted up to `most`."""
    count = 0
    while count < most and p.gcd(divisor).degree == divisor.degree:
        p, count = p.exact_div(divisor), count + 1
    return count


def _without(
    entries: Mapping[tuple[int, int], Expr], row: int, column: int
) -> dict[tuple[int, int], Expr]:
    return {
        (i - (i > row), j - (j > column)): c
        for (i, j), c in entries.items()
        if i != row and j != column
    }


def _derivatives(moving: ExactPolynomial, symbols: list[Any]) -> dict[Orders, Expr]:
    """omega -> i d_t and k -> −i d_x, divided by the coefficient of the leading time derivative."""
    for g in moving.generators:
        if not g.is_Symbol and g.free_symbols & set(symbols):
            raise NonPolynomialError(
                f"the wave number enters through {g}, not as a polynomial, so there is no differential equation"
            )
    terms: dict[Orders, Expr] = {}
    for power, coefficient in moving.coefficients().items():
        for exponents, c in _in_wave_numbers(coefficient, symbols):
            unit = I**power * (-I) ** sum(exponents)
            terms[(power, *exponents)] = expand(unit * c)
    ranked = sorted(terms, key=lambda o: (-o[0], sum(o[1:]), o))
    lead = terms[ranked[0]]
    return {orders: _divided(terms[orders], lead) for orders in ranked}


def _divided(coefficient: Expr, lead: Expr) -> Expr:
    """A coefficient over the leading one: term by term over a single product, else in lowest terms."""
    if isinstance(lead, Add):
        return cancel(coefficient / lead)
    return Add(*(t / lead for t in Add.make_args(coefficient)))


def _in_wave_numbers(coefficient: Expr, symbols: list[Any]) -> list[tuple[Orders, Expr]]:
    return list(Poly(coefficient, *symbols).terms()) if symbols else [((), coefficient)]
