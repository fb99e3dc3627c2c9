"""The exact dispersion relation: a polynomial in omega with integer coefficients in the parameters."""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction
from functools import cached_property
from typing import TYPE_CHECKING, Any

from sympy import Expr, Float, Poly, Rational, Symbol, SympifyError, sympify

from ..declare.dimensions import Dimensions
from ..declare.notation import paper
from ..declare.reader import read_expression
from ..errors import DeclarationError, UndeterminedError, ValuesError
from ..exact.polynomial import ExactPolynomial
from ..exact.rational import exact_rational
from .coefficients import latex_by_powers
from .factor import Factor, closed_forms
from .labels import Modes
from .ordering import LeadingBalance, leading_balances

if TYPE_CHECKING:
    from .matrix import WaveMatrix
    from .scales import NormalizedRelation

LONGEST_LATEX = 4000


class Relation:
    """A dispersion relation D(omega, k) = 0, exact.

    Made by `WaveMatrix.relation`. The content (all that does not hold omega) is divided out.

    Attributes
    ----------
    exact : ExactPolynomial
        Primitive in omega, integer (or Gaussian integer) coefficients in the parameters.
    """

    def __init__(
        self,
        exact: ExactPolynomial,
        symbols: Mapping[str, Symbol],
        wave: WaveMatrix | None = None,
        values: Mapping[Any, Any] | None = None,
    ) -> None:
        self.exact, self._symbols = exact, dict(symbols)
        self._wave, self._values = wave, dict(values or {})

    @property
    def forbidden_modes(self) -> int:
        """How many zero modes of the determinant violate a declared constraint.

        `exact`, `polynomial` and `factors` hold them; `zero_modes`, and roots and branches with ``zero_modes=True``, do not.
        """
        return 0 if self._wave is None else self._wave.forbidden_modes

    @cached_property
    def _modes(self) -> Modes | None:
        if self._wave is None:
            return None
        return self._wave.modes.put(lambda c: c.xreplace(self._values))

    @property
    def _dimensions(self) -> Dimensions:
        return Dimensions({}) if self._wave is None else self._wave.all_dimensions

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
        labels = iter(
            self._modes.labels(linear) if self._modes else [{"wave": m} for _, m in linear]
        )
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
            From symbols or names to numbers (floats are the exact rationals that they are), expressions or texts,
            ``{"n_e0": "Z*n_i0"}``.

        Returns
        -------
        Relation

        Raises
        ------
        DeclarationError
            When a name is not in the relation's model.
        ReadError
            When a text cannot be read.
        ValuesError
            When a value is neither a finite number nor an expression.
        UndeterminedError
            When nothing of the relation is left.
        """
        made = {
            self._symbol(key): self._meant(key, value)
            for key, value in named_pairs(values, "values").items()
        }
        replaced = self.exact.substitute(made)
        if replaced.degree < 0:
            raise UndeterminedError("with these values the relation vanishes identically")
        earlier = {s: x.xreplace(made) for s, x in self._values.items()}
        return Relation(replaced.primitive()[1], self._symbols, self._wave, {**made, **earlier})

    @property
    def _known(self) -> dict[str, Symbol]:
        held = {s.name: s for g in self.exact.generators for s in g.free_symbols}
        return {**held, **self._symbols}

    def _meant(self, key: Any, value: Any) -> Expr:
        if isinstance(value, str):
            return read_expression(value, self._known)
        try:
            return _in_rationals(value)
        except SympifyError:
            raise ValuesError(
                f"'{key}' = {value!r} is neither a number nor an expression"
            ) from None

    def _symbol(self, key: Any) -> Any:
        if isinstance(key, Expr):
            return key
        known = self._known
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
        target = self.exact.main if name in ("omega", self.exact.main) else self._symbol(name)
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
        for key, order in named_pairs(orders, "orders").items():
            if key in ("omega", self.exact.main):
                fixed = exact_rational(order)
            else:
                weights[self._symbol(key)] = exact_rational(order)
        return leading_balances(self.exact, weights, fixed)

    def normalise(
        self, *, time: str, length: str, where: Mapping[str, str] | None = None
    ) -> NormalizedRelation:
        """The relation in chosen scales, its parameters collected into dimensionless groups; exact.

        Parameters
        ----------
        time, length : str
            The scales in the model's names and those of `where`: "1/omega_pe", "lambda_De". A new bare name as
            `length` is a reference length, for laws that have none of their own.
        where : mapping of str to str, optional
            Definitions, each in the model's names and those before it.

        Returns
        -------
        NormalizedRelation
            ``.expr``, ``.polynomial``, ``.groups`` (symbol -> expression in the parameters), ``.waves``.

        Raises
        ------
        UnitError
            When a scale does not have the dimension of a time or a length, or a symbol of the relation has no unit.
        ReadError
            When a text cannot be read, or holds a name that is not known.

        Examples
        --------
        >>> import plasmalin as plin
        >>> m_e, m_p = plin.constants.m_e, plin.constants.m_p
        >>> plasma = plin.mixture(
        ...     [plin.Species("e", -1, m_e, 1e16, temperature_eV=2.0), plin.Species("i", 1, m_p, 1e16)], axes="x")
        >>> relation = plasma.linearize().plane_wave("x").relation.substitute({"n_i0": plasma.symbols["n_e0"]})
        >>> where = {"omega_pe": "sqrt(n_e0*e^2/(epsilon_0*m_e))", "lambda_De": "sqrt(epsilon_0*T_e/(n_e0*e^2))"}
        >>> relation.normalise(time="1/omega_pe", length="lambda_De", where=where).groups
        {mu: m_e/m_i, gamma_e: gamma_e}
        """
        from .scales import normalized

        return normalized(
            self, self._symbols, self._dimensions, time, length, named_pairs(where or {}, "where")
        )

    def __str__(self) -> str:
        lines = [str(f) for f in self.factors if f.polynomial.lowest == 0]
        if self.zero_modes:
            power = paper(self.exact.main**self.zero_modes)
            lines.append(f"{power} = 0: {_counted(self.zero_modes, self._allowed_labels)}")
        if self.forbidden_modes:
            lines.append(
                f"left out: {_counted(self.forbidden_modes, {})} that a constraint forbids"
            )
        return "\n".join(lines) or "ω does not occur: there is no wave"

    @property
    def _allowed_labels(self) -> dict[str, int]:
        left = self.zero_mode_labels.get("constraint", 0) - self.forbidden_modes
        return {label: n for label, n in {**self.zero_mode_labels, "constraint": left}.items() if n}

    def __repr__(self) -> str:
        return f"<Relation: degree {self.degree}, zero modes {self.zero_modes}, {len(self.exact)} terms>"

    def latex(self) -> str:
        """The relation as a product of its factors, set equal to zero."""
        shown = [(p, m - (self.forbidden_modes if p.lowest else 0)) for p, m in self._irreducible]
        shown = [(p, m) for p, m in shown if m]
        bare = len(shown) == 1 and shown[0][1] == 1
        parts = []
        for p, m in shown:
            power = f"^{{{m}}}" if m > 1 else ""
            body = latex_by_powers(p)
            parts.append(f"{body}{power}" if p.lowest or bare else rf"\left({body}\right){power}")
        return " ".join(parts) + " = 0"

    def _repr_latex_(self) -> str | None:
        if len(self.exact) > LONGEST_LATEX // 8:
            return None
        text = self.latex()
        return f"$\\displaystyle {text}$" if len(text) < LONGEST_LATEX else None


def named_pairs(given: Any, what: str) -> Mapping[Any, Any]:
    """What must be a mapping from names."""
    if not isinstance(given, Mapping):
        raise DeclarationError(f"{what} must be a mapping from names, not {given!r}")
    return given


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
