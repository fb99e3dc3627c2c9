"""One factor of a relation: how it is shown, and its roots in closed form."""

from __future__ import annotations

from dataclasses import dataclass

from sympy import Add, Expr, Poly, Symbol, roots, sqrt

from ..errors import DeclarationError
from ..exact.polynomial import ExactPolynomial
from .coefficients import by_powers, latex_by_powers, normalized_coefficients


@dataclass(frozen=True, repr=False)
class Factor:
    """An irreducible factor of the relation, with the modes of one label that it holds.

    Attributes
    ----------
    expr : Expr
        The factor, a polynomial in omega.
    multiplicity : int
    degree : int
        In omega.
    label : str
        "wave", "constraint", "entropy" or "vortical"; see `plasmalin.waves.labels`.
    """

    polynomial: ExactPolynomial
    multiplicity: int
    label: str = "wave"

    @property
    def expr(self) -> Expr:
        return self.polynomial.as_expr()

    def __repr__(self) -> str:
        return f"<Factor: {self}>"

    def _repr_latex_(self) -> str:
        return f"$\\displaystyle {latex_by_powers(self.polynomial)} = 0$"

    @property
    def degree(self) -> int:
        return self.polynomial.degree

    def __str__(self) -> str:
        power = f"multiplicity {self.multiplicity}" if self.multiplicity > 1 else ""
        label = self.label if self.label != "wave" else ""
        said = ", ".join(x for x in (power, label) if x)
        return f"{by_powers(self.polynomial)} = 0" + (f"  ({said})" if said else "")


def closed_forms(factor: ExactPolynomial, target: Symbol) -> list[Expr]:
    """Roots of one factor in radicals."""
    poly = Poly(_collected(factor), target)
    if poly.degree() == 0:
        return []
    even = all(m[0] % 2 == 0 for m in poly.monoms())
    reduced = Poly({(m[0] // 2,): c for m, c in poly.terms()}, target) if even else poly
    if reduced.degree() > (2 if even else 4):
        raise DeclarationError(
            f"the factor of degree {poly.degree()} in {target} has no closed form; use wave.roots(...) for numbers"
        )
    found = [x for x, m in roots(reduced).items() for _ in range(m)]
    return [s * sqrt(x) for x in found for s in (1, -1)] if even else found


def _collected(polynomial: ExactPolynomial) -> Expr:
    """A polynomial by powers of omega, divided by what the leading term allows."""
    coefficients = normalized_coefficients(polynomial)
    return Add(*(c * polynomial.main**p for p, c in coefficients.items()))
