"""The exact dispersion relation: a polynomial in omega with integer coefficients in the parameters."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property
from typing import TYPE_CHECKING, Any

from sympy import Add, Expr, Float, Poly, Rational, S, Symbol, latex, sympify

from ..declare.notation import SUPERSCRIPT, paper
from ..errors import DeclarationError, UndeterminedError
from ..exact.determinant import determinant, underdetermined_block
from ..exact.polynomial import ExactPolynomial
from ..exact.rational import exact_rational
from .labels import Modes
from .ordering import LeadingBalance, leading_balances

if TYPE_CHECKING:
    from .matrix import WaveMatrix

LONGEST_LATEX = 4000


@dataclass(frozen=True)
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

    @property
    def degree(self) -> int:
        return self.polynomial.degree

    def __str__(self) -> str:
        power = f"multiplicity {self.multiplicity}" if self.multiplicity > 1 else ""
        label = self.label if self.label != "wave" else ""
        said = ", ".join(x for x in (power, label) if x)
        return f"{_by_powers(self.polynomial)} = 0" + (f"  ({said})" if said else "")


class Relation:
    """A dispersion relation D(omega, k) = 0, exact.

    Made by `WaveMatrix.relation`. The content (all that does not hold omega) is divided out.

    Attributes
    ----------
    exact : ExactPolynomial
        Primitive in omega, integer (or Gaussian integer) coefficients in the parameters.
    """

    def __init__(
        self, exact: ExactPolynomial, wave: WaveMatrix, values: Mapping[Any, Any] | None = None
    ) -> None:
        self.exact, self._wave, self._values = exact, wave, dict(values or {})

    @property
    def forbidden_modes(self) -> int:
        """How many zero modes of the determinant violate a declared constraint.

        `exact`, `polynomial` and `factors` hold them; `zero_modes`, and roots and branches with ``zero_modes=True``, do not.
        """
        return self._wave.forbidden_modes

    @cached_property
    def _modes(self) -> Modes:
        return self._wave.modes.put(lambda c: c.xreplace(self._values))

    @property
    def zero_modes(self) -> int:
        """The multiplicity of omega = 0, without the modes that a declared constraint forbids."""
        return self.exact.lowest - self.forbidden_modes

    @cached_property
    def zero_mode_labels(self) -> dict[str, int]:
        """How many of all zero modes have each label, those that a declared constraint forbids among "constraint"."""
        return {f.label: f.multiplicity for f in self.factors if f.polynomial.lowest > 0}

    @property
    def degree(self) -> int:
        """The number of roots in omega that are not identically zero, with multiplicity."""
        return self.exact.degree - self.exact.lowest

    @cached_property
    def factors(self) -> tuple[Factor, ...]:
        """The irreducible factors that hold omega, the zero modes (omega itself) last.

        A factor whose modes have several labels stands once for each of them, with so many modes as its multiplicity.
        """
        linear = [(p.as_expr(), m) for p, m in self._irreducible if p.degree == 1]
        labels = iter(self._modes.labels(linear))
        found = []
        for p, m in self._irreducible:
            parts = next(labels) if p.degree == 1 else {"wave": m}
            found += [Factor(p, n, label) for label, n in parts.items()]
        return tuple(found)

    @cached_property
    def _irreducible(self) -> tuple[tuple[ExactPolynomial, int], ...]:
        return tuple(sorted(self.exact.factor()[1], key=lambda f: f[0].lowest > 0))

    @cached_property
    def polynomial(self) -> Poly:
        """The whole relation as a SymPy polynomial in omega, zero modes included."""
        return self.exact.reduced().as_poly()

    def as_expr(self) -> Expr:
        """The whole relation as an expression, its factors multiplied out."""
        return self.exact.reduced().as_expr()

    def substitute(self, values: Mapping[Any, Any]) -> Relation:
        """The relation with parameters replaced by numbers or expressions, exactly.

        Parameters
        ----------
        values : mapping
            From symbols or names to numbers (floats are the exact rationals that they are) or expressions.

        Returns
        -------
        Relation

        Raises
        ------
        DeclarationError
            When a name is not in the relation's model.
        UndeterminedError
            When nothing of the relation is left.
        """
        made = {self._symbol(key): _in_rationals(value) for key, value in values.items()}
        replaced = self.exact.substitute(made)
        if replaced.degree < 0:
            raise UndeterminedError("with these values the relation vanishes identically")
        earlier = {s: x.xreplace(made) for s, x in self._values.items()}
        return Relation(replaced.primitive()[1], self._wave, {**made, **earlier})

    def _symbol(self, key: Any) -> Any:
        if not isinstance(key, str):
            return key
        known = {
            **{s.name: s for g in self.exact.generators for s in g.free_symbols},
            **self._wave.linear.symbols,
        }
        if key not in known:
            raise DeclarationError(
                f"'{key}' is not in the relation; it holds {', '.join(sorted(known))}"
            )
        return known[key]

    def solve_for(self, name: str) -> list[Expr]:
        """Closed forms, where the degree allows.

        Parameters
        ----------
        name : str
            "omega", or any symbol of the relation.

        Returns
        -------
        list of Expr
            Every root with its multiplicity; zero modes are left out for omega.

        Raises
        ------
        DeclarationError
            When a factor has no closed form: degree above 4, or above 2 in the square.
        """
        target = self.exact.main if name == "omega" else self._symbol(name)
        found: list[Expr] = []
        for polynomial, multiplicity in self._irreducible:
            if target is self.exact.main and polynomial.lowest > 0:
                continue
            found += closed_forms(polynomial, target) * multiplicity
        return found

    def leading(self, orders: Mapping[Any, Any]) -> list[LeadingBalance]:
        """The leading balances when parameters scale with powers of a small number epsilon.

        Parameters
        ----------
        orders : mapping of symbol or name to number
            The power of epsilon of each parameter or wave number, ``{"m_e": 1, "k": 1}``; those not named are of
            order one. Give "omega" to fix its scaling.

        Returns
        -------
        list of LeadingBalance
            One per scaling of omega, the fastest roots last.

        Raises
        ------
        DeclarationError
            When a name is not in the relation.

        Examples
        --------
        >>> import plasmalin as plin
        >>> model = plin.FluidModel("damped oscillator", axes="x")
        >>> x = model.scalar("x")
        >>> nu, w = model.parameters("nu w_0", positive=True)
        >>> _ = model.law("x", plin.partial_t(plin.partial_t(x)) + nu * plin.partial_t(x) + w**2 * x)
        >>> for balance in model.linearize().plane_wave("x").relation.leading({"w_0": 1}):
        ...     print(balance)
        ω ~ ε^(2): i ν ω − w_0² = 0
        ω ~ ε^(0): i ν + ω = 0
        """
        fixed = None
        weights: dict[Expr, Fraction] = {}
        for key, order in orders.items():
            if key in ("omega", self.exact.main):
                fixed = exact_rational(order)
            else:
                weights[self._symbol(key)] = exact_rational(order)
        return leading_balances(self.exact, weights, fixed)

    def __str__(self) -> str:
        lines = [str(f) for f in self.factors if f.polynomial.lowest == 0]
        if self.zero_modes:
            power = (
                "ω" if self.zero_modes == 1 else f"ω{str(self.zero_modes).translate(SUPERSCRIPT)}"
            )
            lines.append(f"{power} = 0: {_counted(self.zero_modes, self._allowed_labels)}")
        if self.forbidden_modes:
            lines.append(
                f"left out: {_counted(self.forbidden_modes, {})} that a constraint forbids"
            )
        return "\n".join(lines)

    @property
    def _allowed_labels(self) -> dict[str, int]:
        left = self.zero_mode_labels.get("constraint", 0) - self.forbidden_modes
        return {label: n for label, n in {**self.zero_mode_labels, "constraint": left}.items() if n}

    def __repr__(self) -> str:
        return f"<Relation: degree {self.degree}, zero modes {self.zero_modes}, {len(self.exact)} terms>"

    def latex(self) -> str:
        """The relation as a product of its factors, set equal to zero."""
        parts = []
        for p, whole in self._irreducible:
            m = whole - (self.forbidden_modes if p.lowest else 0)
            power = f"^{{{m}}}" if m > 1 else ""
            body = latex(collected(p))
            parts += [f"{body}{power}" if p.lowest else rf"\left({body}\right){power}"] if m else []
        return " ".join(parts) + " = 0"

    def _repr_latex_(self) -> str | None:
        if len(self.exact) > LONGEST_LATEX // 8:
            return None
        text = self.latex()
        return f"$\\displaystyle {text}$" if len(text) < LONGEST_LATEX else None


def _in_rationals(value: Any) -> Expr:
    """A value as an expression, floats in it as the binary rationals that they are."""
    made = sympify(value, strict=True)
    floats = ((x, exact_rational(x)) for x in made.atoms(Float))
    return made.xreplace({x: Rational(q.numerator, q.denominator) for x, q in floats})


def _counted(count: int, labels: Mapping[str, int]) -> str:
    """Zero modes in words, with what they are unless all are waves."""
    told = ", ".join(f"{n} {label}" for label, n in labels.items())
    plural = "" if count == 1 else "s"
    return f"{count} zero mode{plural}" + (f" ({told})" if set(labels) - {"wave"} else "")


def _by_powers(polynomial: ExactPolynomial) -> str:
    """Text with the highest power of omega first."""
    out = ""
    for power, c in normalized_coefficients(polynomial).items():
        term = paper(c * polynomial.main**power) if not isinstance(c, Add) else _bracketed(c, power)
        joint = (
            (" − " if term.startswith("−") else " + ")
            if out
            else ("−" if term.startswith("−") else "")
        )
        out += joint + term.removeprefix("−")
    return out


def _bracketed(coefficient: Expr, power: int) -> str:
    unit = paper(Symbol("omega") ** power)
    return paper(coefficient) if power == 0 else f"({paper(coefficient)}) {unit}"


def normalized_coefficients(polynomial: ExactPolynomial) -> dict[int, Expr]:
    """Coefficients by power, highest first, divided by a leading one that is a single product."""
    powers = polynomial.coefficients()
    lead = powers[max(powers)]
    scale = lead if not isinstance(lead, Add) else S.One
    return {p: Add(*(t / scale for t in Add.make_args(c))) for p, c in powers.items()}


def collected(polynomial: ExactPolynomial) -> Expr:
    """A polynomial as it is printed: by powers of omega, divided by what the leading term allows."""
    coefficients = normalized_coefficients(polynomial)
    return Add(*(c * polynomial.main**p for p, c in coefficients.items()))


def closed_forms(factor: ExactPolynomial, target: Symbol) -> list[Expr]:
    """Roots of one factor in radicals."""
    from sympy import roots, sqrt

    poly = Poly(collected(factor), target)
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


def derive_relation(wave: WaveMatrix) -> Relation:
    """The determinant of a wave matrix as a relation."""
    size = len(wave.rows)
    exact = determinant(wave.entries, size, wave.omega)
    if exact.degree < 0:
        raise UndeterminedError(undetermined_message(wave))
    if exact.degree == 0:
        raise UndeterminedError(
            "no unknown changes in time: omega does not occur in the determinant; "
            "a law with a time derivative is missing"
        )
    return Relation(exact.primitive()[1], wave)


def undetermined_message(wave: WaveMatrix) -> str:
    """Which laws and unknowns make the determinant vanish."""
    rows, columns = underdetermined_block(wave.entries, len(wave.rows), wave.omega)
    laws = ", ".join(f"'{wave.rows[i]}'" for i in rows)
    unknowns = ", ".join(wave.columns[j].symbol.name for j in columns)
    return (
        f"the laws do not determine the waves for this wave vector: the determinant vanishes identically. "
        f"The equations {laws} are dependent, and {unknowns} stay free; "
        "replace one of these laws, or drop an unknown that nothing fixes"
    )
