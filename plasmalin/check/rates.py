"""A growth or damping rate, or a real frequency, given by itself: the leading part of one derived root."""

from __future__ import annotations

import time
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass, replace
from fractions import Fraction

from sympy import Expr, I, Pow, Rational, S, cancel, cos, expand, pi, powdenest, sin
from sympy import factor as factored

from ..declare.operators import omega
from ..errors import PlasmalinError
from ..exact.polynomial import ExactPolynomial
from .claim import Claim
from .corrections import edges, parts
from .derived import Derived
from .monomials import number_of
from .scalings import Weights, paths, scaled
from .sizes import ORDERED, SEARCHED
from .verdict import Small

DEEPEST = 3


@dataclass(frozen=True)
class RateFound:
    """A rate that is the leading imaginary part of a derived root, or a frequency that is its real part.

    Attributes
    ----------
    part : str
        "imaginary" or "real".
    groups : tuple of Small
        The author's ratios.
    scaling : dict of Expr to Fraction
        The powers of ε with which symbols scaled in the proof.
    """

    part: str
    groups: tuple[Small, ...]
    scaling: Weights

    @property
    def proof(self) -> str:
        return (
            f"with {scaled(self.scaling)} the claim is the leading {self.part} part of a root of the derived relation "
            "(Newton polygon, exact)"
        )


@dataclass(frozen=True)
class Rate:
    """An imaginary or real part s c**(1/index) with one of the numbers s, beyond a real value: the power is exact."""

    power: Expr
    index: int
    numbers: tuple[Expr, ...]
    beyond: Expr = S.Zero
    signs: tuple[int, ...] = (1,)

    def equals(self, claimed: Expr) -> bool:
        """Whether a claimed rate is one of the values; where the sign of c is not known it is taken as it must be."""
        powers = [expand(((claimed - self.beyond) / s) ** self.index) for s in self.numbers]
        return any(cancel(p - sign * self.power) == 0 for p in powers for sign in self.signs)


def rate_order(
    value: Expr,
    claim: Claim,
    derived: Derived,
    ratios: Iterable[Expr] | None = None,
    values: Mapping[str, float] | None = None,
    budget: float = 5.0,
    real: bool = False,
) -> RateFound | None:
    """A claimed Im ω, or Re ω, as the leading imaginary or real part of a derived root.

    Parameters
    ----------
    value : Expr
        The rate or the frequency, shorthands allowed.
    claim : Claim
        For its shorthands.
    derived : Derived
        With the author's equations such as k V = ω_p put in (`Derived.substituted`).
    ratios : iterable of Expr, optional
        What is small; else single symbols are tried.
    values, budget
        As for `series_order`.
    real : bool, default False
        Whether it is Re ω, to the order of its last term.

    Returns
    -------
    RateFound or None
    """
    if len(derived.polynomial) > ORDERED:
        return None
    end = time.process_time() + budget
    rate = derived.rational(claim.written_out(value))
    given = None if ratios is None else [claim.written_out(r) for r in ratios]
    for weights in paths((), derived.symbols, derived, given):
        for factor in (f for f, _ in derived.factors):
            if time.process_time() > end:
                return None
            if any(r.equals(rate) for r in _rates(factor, weights, S.Zero, None, 0, real)):
                groups = [] if ratios is None else list(ratios)
                small = tuple(Small(g, number_of(g, values or {}, claim)) for g in groups)
                return RateFound("real" if real else "imaginary", small, weights)
    return None


def is_exact(value: Expr, claim: Claim, derived: Derived, real: bool) -> bool:
    """Whether a root has exactly this imaginary, or real, part, whatever the other one is.

    With ω = x + iγ the real and the imaginary part of the derived relation have a common zero in the other part.
    """
    if len(derived.polynomial) > SEARCHED:
        return False
    given = derived.rational(claim.written_out(value))
    root = given + I * omega if real else omega + I * given
    for factor, _ in derived.factors:
        along, across = factor.substitute({omega: root}).parts()
        if along.gcd(across).degree > 0:
            return True
    return False


def _rates(
    factor: ExactPolynomial,
    weights: Weights,
    value: Expr,
    at: Fraction | None,
    depth: int,
    real: bool,
) -> Iterator[Rate]:
    """The leading imaginary parts of the roots that begin with a real value, or their real parts to any order."""
    if depth == DEEPEST:
        return
    try:
        found = [e for e in edges(factor, value, weights) if at is None or e[0] > at]
    except (PlasmalinError, ArithmeticError, RecursionError):
        return
    for slope, edge in found:
        for part, _ in edge.factor()[1]:
            for piece in _pieces(part, real):
                if isinstance(piece, Rate):
                    yield replace(piece, beyond=parts(value)[0] if real else S.Zero)
                else:
                    yield from _rates(factor, weights, value + piece, slope, depth + 1, real)


def _pieces(part: ExactPolynomial, real: bool) -> Iterator[Rate | Expr]:
    """Imaginary or real parts of the roots of an irreducible polynomial, and the roots themselves to go on from."""
    coefficients = part.coefficients()
    degree, lead = part.degree, coefficients[part.degree]
    if degree == 1:
        root = cancel(-coefficients.get(0, S.Zero) / lead)
        along, across = parts(root)
        if (along if real else across) != 0:
            yield Rate(along if real else across, 1, (S.One,))
        if across == 0 or real:
            yield root
    elif set(coefficients) == {0, degree}:
        power = cancel(-coefficients[0] / lead)
        if power.has(I):
            return
        negative = power.could_extract_minus_sign()
        turn = cos if real else sin
        angles = (Rational(2 * j + negative, degree) * pi for j in range(degree))
        numbers = {turn(a) for a in angles} - {S.Zero}
        if numbers:
            size = -power if negative else power
            signs = (1,) if degree < 3 or size.is_positive else (1, -1)
            yield Rate(size, degree, tuple(numbers), signs=signs)
        if not negative:
            root = _real_root(power, degree)
            yield root
            if degree % 2 == 0:
                yield -root
    elif degree == 2 and part.is_real:
        linear = cancel(coefficients[1] / lead / 2)
        yield (
            Rate(-linear, 1, (S.One,))
            if real
            else Rate(cancel(coefficients[0] / lead - linear**2), 2, (S.One,))
        )


def _real_root(power: Expr, index: int) -> Expr:
    """A root without a denominator under it."""
    top, bottom = power.as_numer_denom()
    whole = factored(expand(top * bottom ** (index - 1)))
    return powdenest(Pow(whole, Rational(1, index)), force=True) / bottom
