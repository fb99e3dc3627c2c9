"""The coefficients of a polynomial in omega as they are printed."""

from __future__ import annotations

from collections.abc import Mapping

from sympy import Add, Expr, S, Symbol, latex

from ..declare.notation import paper
from ..exact.polynomial import ExactPolynomial
from ..exact.polynomial import polynomial as read_exact


def normalized_coefficients(polynomial: ExactPolynomial) -> dict[int, Expr]:
    """Coefficients by power, highest first, divided by a leading one that is a single product."""
    powers = polynomial.coefficients()
    return {p: _divided(c, _scale(powers)) for p, c in powers.items()}


def _scale(powers: Mapping[int, Expr]) -> Expr:
    lead = powers[max(powers)]
    return lead if not isinstance(lead, Add) else S.One


def _divided(coefficient: Expr, scale: Expr) -> Expr:
    return Add(*(t / scale for t in Add.make_args(coefficient)))


LONGEST_FACTORED, LONGEST_PRINTED = 40, 400
"""Terms of a coefficient, and of a whole factor, up to which printing looks for something shorter."""


def printed_coefficients(polynomial: ExactPolynomial) -> dict[int, Expr]:
    """Normalized coefficients, each as the product of its factors where that is shorter to read."""
    if len(polynomial) > LONGEST_PRINTED:
        return normalized_coefficients(polynomial)
    powers = polynomial.coefficients()
    return {p: _shortest(c, _scale(powers), polynomial.main) for p, c in powers.items()}


def _shortest(coefficient: Expr, scale: Expr, main: Symbol) -> Expr:
    plain = _divided(coefficient, scale)
    if not 1 < len(Add.make_args(coefficient)) <= LONGEST_FACTORED:
        return plain
    factored = read_exact(coefficient, main).product_expr() / scale
    return min(plain, factored, key=lambda c: len(paper(c)))


def by_powers(polynomial: ExactPolynomial) -> str:
    """Text with the highest power of omega first."""
    out = ""
    for power, c in printed_coefficients(polynomial).items():
        term = _term_text(c, polynomial.main, power)
        joint = (
            (" − " if term.startswith("−") else " + ")
            if out
            else ("−" if term.startswith("−") else "")
        )
        out += joint + term.removeprefix("−")
    return out


def latex_by_powers(polynomial: ExactPolynomial) -> str:
    """LaTeX with the highest power of omega first."""
    out = ""
    for power, c in printed_coefficients(polynomial).items():
        unit = latex(polynomial.main**power)
        whole = rf"\left({latex(c)}\right) {unit}"
        term = whole if power and isinstance(c, Add) else latex(c * polynomial.main**power)
        out += term if not out else (f" {term}" if term.startswith("-") else f" + {term}")
    return out


def _term_text(coefficient: Expr, main: Symbol, power: int) -> str:
    unit, text = paper(main**power), paper(coefficient)
    if power == 0:
        return text
    if isinstance(coefficient, Add):
        return f"({text}) {unit}"
    if not coefficient.has(Add):
        return paper(coefficient * main**power)
    sign, size = ("−", text[1:]) if text.startswith("−") else ("", text)
    return f"{sign}({size}) {unit}" if "/" in size else f"{sign}{size} {unit}"
