"""A growth or damping rate given by itself: the leading imaginary part of one derived root."""

from __future__ import annotations

import time
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from fractions import Fraction

from sympy import Expr, I, Pow, Rational, S, cancel, expand, pi, powdenest, sin
from sympy import factor as factored

from ..errors import PlasmalinError
from ..exact.polynomial import ExactPolynomial
from .claim import Claim
from .corrections import edges, parts
from .derived import Derived
from .monomials import number_of
from .scalings import Weights, paths, scaled
from .verdict import Small

DEEPEST = 3


@dataclass(frozen=True)
class RateFound:
    """A rate that is the leading imaginary part of a derived root.

    Attributes
    ----------
    groups : tuple of Small
        The author's ratios.
    scaling : dict of Expr to Fraction
        The powers of ε with which symbols scaled in the proof.
    """

    groups: tuple[Small, ...]
    scaling: Weights

    @property
    def proof(self) -> str:
        return (
            f"with {scaled(self.scaling)} the claim is the leading imaginary part of a root of the derived relation "
            "(Newton polygon, exact)"
        )


@dataclass(frozen=True)
class Rate:
    """An imaginary part s c**(1/index) with one of the numbers s: its power `index` is exact."""

    power: Expr
    index: int
    sines: tuple[Expr, ...]

    def equals(self, claimed: Expr) -> bool:
        """Whether a claimed rate is one of the values; the sign of c is taken as it must be."""
        signs = (1,) if self.index < 3 else (1, -1)
        powers = [expand((claimed / s) ** self.index) for s in self.sines]
        return any(cancel(p - sign * self.power) == 0 for p in powers for sign in signs)


def rate_order(
    value: Expr,
    claim: Claim,
    derived: Derived,
    ratios: Iterable[Expr] | None = None,
    values: Mapping[str, float] | None = None,
    budget: float = 5.0,
) -> RateFound | None:
    """A claimed Im ω as the leading imaginary part of a derived root.

    Parameters
    ----------
    value : Expr
        The rate, shorthands allowed.
    claim : Claim
        For its shorthands.
    derived : Derived
        With the author's equations such as k V = ω_p put in (`Derived.substituted`).
    ratios : iterable of Expr, optional
        What is small; else single symbols are tried.
    values, budget
        As for `series_order`.

    Returns
    -------
    RateFound or None
    """
    end = time.monotonic() + budget
    rate = derived.rational(claim.written_out(value))
    given = None if ratios is None else [claim.written_out(r) for r in ratios]
    for weights in paths((), derived.symbols, derived, given):
        for factor in (f for f, _ in derived.factors):
            if time.monotonic() > end:
                return None
            if any(r.equals(rate) for r in _rates(factor, weights, S.Zero, None, 0)):
                groups = [] if ratios is None else list(ratios)
                small = tuple(Small(g, number_of(g, values or {}, claim)) for g in groups)
                return RateFound(small, weights)
    return None


def _rates(
    factor: ExactPolynomial, weights: Weights, value: Expr, at: Fraction | None, depth: int
) -> Iterator[Rate]:
    """The leading imaginary parts of the roots that begin with a real value."""
    if depth == DEEPEST:
        return
    try:
        found = [e for e in edges(factor, value, weights) if at is None or e[0] > at]
    except (PlasmalinError, ArithmeticError, RecursionError):
        return
    for slope, edge in found:
        for part, _ in edge.factor()[1]:
            for piece in _pieces(part):
                if isinstance(piece, Rate):
                    yield piece
                else:
                    yield from _rates(factor, weights, value + piece, slope, depth + 1)


def _pieces(part: ExactPolynomial) -> Iterator[Rate | Expr]:
    """Imaginary parts of the roots of an irreducible polynomial, or the roots themselves where they are real."""
    coefficients = part.coefficients()
    degree, lead = part.degree, coefficients[part.degree]
    if degree == 1:
        root = cancel(-coefficients.get(0, S.Zero) / lead)
        real, imaginary = parts(root)
        yield Rate(imaginary, 1, (S.One,)) if imaginary != 0 else real
    elif set(coefficients) == {0, degree}:
        power = cancel(-coefficients[0] / lead)
        if power.has(I):
            return
        negative = power.could_extract_minus_sign()
        sines = {sin(Rational(2 * j + negative, degree) * pi) for j in range(degree)} - {S.Zero}
        if sines:
            yield Rate(-power if negative and degree == 2 else power, degree, tuple(sines))
        if not negative:
            root = _real_root(power, degree)
            yield root
            if degree % 2 == 0:
                yield -root
    elif degree == 2 and part.is_real:
        linear = cancel(coefficients[1] / lead / 2)
        yield Rate(cancel(coefficients[0] / lead - linear**2), 2, (S.One,))


def _real_root(power: Expr, index: int) -> Expr:
    """A root without a denominator under it."""
    top, bottom = power.as_numer_denom()
    whole = factored(expand(top * bottom ** (index - 1)))
    return powdenest(Pow(whole, Rational(1, index)), force=True) / bottom
