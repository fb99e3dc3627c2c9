"""The derived relation made ready for comparison: conditions of the background used, angles made rational."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field, replace
from functools import cached_property
from typing import TYPE_CHECKING, Any

from sympy import (
    Add,
    Eq,
    Expr,
    Mul,
    Poly,
    PolynomialError,
    S,
    Symbol,
    cancel,
    factor_terms,
    sympify,
)

from ..declare.operators import omega
from ..exact.polynomial import ExactPolynomial
from ..exact.radicals import rational_numerator
from .angles import Angles, angles_of
from .roles import SPELLINGS

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix


@dataclass(frozen=True)
class Condition:
    """A condition of the background, and the symbol that it was solved for."""

    equation: Eq
    symbol: Symbol
    value: Expr


@dataclass(frozen=True, eq=False)
class Derived:
    """What a claim is held against.

    Attributes
    ----------
    polynomial : ExactPolynomial
        The relation without its zero modes.
    conditions : tuple of Condition
        Used in it, and to be used in every claim.
    square : Expr
        k·k.
    wave_symbols : frozenset of Symbol
        Wave numbers and angles, which are no parameters.
    angles : Angles
        How sines and cosines are written.
    """

    polynomial: ExactPolynomial
    conditions: tuple[Condition, ...]
    square: Expr
    wave_symbols: frozenset[Symbol] = frozenset()
    angles: Angles = field(default_factory=lambda: Angles({}))

    @cached_property
    def factors(self) -> tuple[tuple[ExactPolynomial, int], ...]:
        """The irreducible factors with their multiplicities."""
        return self.polynomial.factor()[1]

    @property
    def symbols(self) -> set[Symbol]:
        return {s for g in self.polynomial.generators for s in g.free_symbols}

    def rational(self, expr: Expr) -> Expr:
        """An expression with the conditions used, angles made rational, |k| for k > 0."""
        return self.angles.rational(self.using(expr))

    def using(self, expr: Expr) -> Expr:
        """An expression with the conditions of the background used."""
        for c in self.conditions:
            expr = expr.xreplace({c.symbol: c.value})
        return expr

    def numerator(self, expr: Expr) -> tuple[ExactPolynomial, int]:
        """The zeros of an expression as a polynomial without powers of ω or content, and its sheets."""
        found, sheets = self.with_zeros(expr)
        return bare(found), sheets

    def with_zeros(self, expr: Expr) -> tuple[ExactPolynomial, int]:
        """As `numerator`, powers of ω kept."""
        own = any(g.is_number and g.is_algebraic for g in self.polynomial.generators)
        found, sheets = rational_numerator(self.rational(expr), omega, numbers=not own)
        return found.primitive()[1], sheets

    def substituted(self, values: dict[Any, Any]) -> Derived:
        """With parameters replaced by numbers or expressions."""
        made = self.polynomial.substitute({s: self.rational(sympify(v)) for s, v in values.items()})
        return replace(self, polynomial=bare(made))


def derive(
    wave: WaveMatrix,
    symbols: Iterable[Symbol],
    constants: Iterable[Symbol],
    *,
    conditions: bool = True,
    values: Mapping[Symbol, Expr] | None = None,
) -> Derived:
    """The relation of a wave for a claim in certain symbols.

    Parameters
    ----------
    wave : WaveMatrix
    symbols : iterable of Symbol
        Those of the claim: conditions of the background are solved for others where possible.
    constants : iterable of Symbol
        The claim's and the model's symbols for c, epsilon_0 and mu_0, related by c² ε_0 μ_0 = 1.
    conditions : bool, default True
        Whether to use the conditions of the background.
    values : mapping of Symbol to Expr, optional
        Put in for wave numbers, angles and parameters.
    """
    raw = wave.relation.exact
    equations = [*wave.linear.conditions, *_light(constants)] if conditions else []
    used = solve_conditions(equations, set(symbols), set(raw.generators))
    given = dict(values or {})
    angles = angles_of(raw)
    images = {a: angles.rational(a.xreplace(given)) for a in raw.generators}
    changes: list[dict[Any, Expr]] = [
        {a: image for a, image in images.items() if a != image},
        *({c.symbol: c.value} for c in used),
        {s: angles.rational(v) for s, v in given.items()},
    ]
    made = raw
    for change in changes:
        made = made.substitute(change) if change else made
    waves = angles.symbols.union(*(c.free_symbols for c in wave.k))
    return Derived(bare(made), tuple(used), Add(*(c**2 for c in wave.k)), waves, angles)


def bare(polynomial: ExactPolynomial) -> ExactPolynomial:
    """Without content and without powers of ω."""
    part = polynomial.primitive()[1]
    return part.without_main() if part.lowest > 0 else part


def _light(constants: Iterable[Symbol]) -> list[Eq]:
    found = {SPELLINGS.get(s.name, s.name): s for s in constants}
    if {"c", "epsilon_0", "mu_0"} <= set(found):
        return [Eq(found["c"] ** 2 * found["epsilon_0"] * found["mu_0"], 1, evaluate=False)]
    return []


def solve_conditions(
    equations: list[Eq], claimed: set[Symbol], needed: set[Any]
) -> list[Condition]:
    """Each condition solved for one symbol that enters it linearly, rather one that the claim does not use."""
    used: list[Condition] = []
    for equation in equations:
        residual = equation.lhs - equation.rhs
        for c in used:
            residual = residual.xreplace({c.symbol: c.value})
        order = sorted(
            residual.free_symbols,
            key=lambda s: (
                s in claimed,
                s.name == "c",
                s.name not in ("mu_0", "mu0"),
                s.name[0] in "Zz",  # a charge number is known sooner than a density
                s.name,
            ),
        )
        for symbol in order:
            value = linear_solution(residual, symbol)
            if value is not None:
                used.append(Condition(equation, symbol, value))
                break
    return [c for i, c in enumerate(used) if _matters(c, used[i + 1 :], claimed | needed)]


def _matters(condition: Condition, later: list[Condition], seen: set[Any]) -> bool:
    return condition.symbol in seen or any(condition.symbol in c.value.free_symbols for c in later)


def linear_solution(residual: Expr, symbol: Symbol) -> Expr | None:
    """What makes an expression vanish, where a symbol enters it linearly."""
    top = _essential(residual)
    try:
        poly = Poly(top, symbol)
    except PolynomialError:
        return None
    if poly.degree() != 1:
        return None
    slope, rest = poly.all_coeffs()
    return Mul(-1, rest, 1 / slope)


def _essential(residual: Expr) -> Expr:
    """The one factor that must vanish: e (Z n_i0 − n_e0) = 0 is no condition on e. 1 where it is not known which."""
    factors = Mul.make_args(factor_terms(cancel(residual).as_numer_denom()[0]))
    sums = [f for f in factors if isinstance(f, Add)]
    found = sums or [f for f in factors if not f.is_number and not f.is_nonzero]
    return found[0] if len(found) == 1 else S.One
