"""Sines and cosines of the wave's angles, and roots of 1 ± (s/a)², made rational, so that polynomials compare without
relations between them."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from sympy import Abs, Expr, Symbol, cos, expand_trig, sin, sqrt
from sympy import tan as tangent

from ..declare.operators import omega
from ..exact.polynomial import ExactPolynomial
from .conics import Conic, conics_of


@dataclass(frozen=True)
class Angles:
    """How each angle is written.

    Attributes
    ----------
    forms : mapping of Expr to str
        "cos" or "sin" where a relation holds even powers of the other one only, which then is a square root; "half",
        the tangent of the half angle, where it is even in neither.
    conics : tuple of Conic
        For the relation's square roots, such as Lorentz factors.
    """

    forms: Mapping[Expr, str]
    conics: tuple[Conic, ...] = ()

    def rational(self, expr: Expr) -> Expr:
        """An expression with every angle and root in its form; |k| as k, which is positive."""
        if expr.atoms(tangent):
            expr = expr.replace(tangent, lambda a: sin(a) / cos(a))
        replaced: dict[Any, Any] = {}
        for f in expr.atoms(sin, cos):
            plain = f if f.args[0] in self.forms or f.args[0].is_Symbol else expand_trig(f)
            replaced[f] = plain.xreplace({g: self._image(g) for g in plain.atoms(sin, cos)})
        for a in expr.atoms(Abs):
            replaced[a] = a.args[0] if a.args[0].is_Symbol and a.args[0] != omega else a
        made = expr.xreplace(replaced) if replaced else expr
        for conic in self.conics:
            made = conic.rational(made)
        return made

    def leading(self, ratio: Expr) -> Expr:
        """A small ratio with the symbols of the roots by their parameters, which they are in proportion to there."""
        return ratio.xreplace({c.symbol: 2 * c.size * c.parameter for c in self.conics})

    def restored(self, ratio: Expr) -> Expr:
        """A ratio of polynomials with its square roots written as such again; angles stay."""
        for conic in reversed(self.conics):
            ratio = conic.restored(ratio)
        return ratio

    def written(self, expr: Expr) -> Expr:
        """An expression with the sine or the cosine of an angle for what stands for it."""
        functions = {"sin": sin, "cos": cos}
        return expr.xreplace(
            {symbol_of(a, f): functions[f](a) for a, f in self.forms.items() if f in functions}
        )

    def _image(self, function: Expr) -> Expr:
        angle = function.args[0]
        form = self.forms.get(angle, "half")
        if form == "half":
            t = symbol_of(angle, form)
            return (2 * t if isinstance(function, sin) else 1 - t**2) / (1 + t**2)
        kept = symbol_of(angle, form)
        return kept if isinstance(function, sin) == (form == "sin") else sqrt(1 - kept**2)

    @property
    def symbols(self) -> frozenset[Symbol]:
        """What stands for the angles."""
        return frozenset(symbol_of(a, form) for a, form in self.forms.items())


def angles_of(polynomial: ExactPolynomial) -> Angles:
    """The forms in which a relation is rational in its angles with the fewest terms."""
    angles = {g.args[0] for g in polynomial.generators if isinstance(g, sin | cos)}
    forms = {a: _form(polynomial.reduced(), a) for a in angles} if angles else {}
    return Angles(forms, conics_of(polynomial.generators))


def _form(reduced: ExactPolynomial, angle: Expr) -> str:
    for f, form in ((cos(angle), "sin"), (sin(angle), "cos")):
        if f not in reduced.generators or reduced.turned_sign(f) == reduced:
            return form
    return "half"


def symbol_of(angle: Expr, form: str) -> Symbol:
    """The symbol for sin, cos or tan of half of an angle."""
    name = f"tan({angle}/2)" if form == "half" else f"{form}({angle})"
    return Symbol(name, real=True)
