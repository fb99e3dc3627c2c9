"""From a wave matrix and numbers to the exact polynomials whose roots are wanted.

The determinant is taken with every fixed number put in as an exact rational; what is swept stays symbolic.
Each irreducible factor is a `Family`: one polynomial in omega for every grid point.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from math import inf
from random import Random
from typing import TYPE_CHECKING, Any, TypeAlias

import mpmath
import numpy as np
from numpy.typing import NDArray
from sympy import Abs, Dummy, Expr, Rational, Symbol, cos, lambdify, sin, sqrt

from ..errors import UndeterminedError
from ..exact.determinant import determinant
from ..exact.minors import TooLong
from ..exact.polynomial import ExactPolynomial
from ..exact.sines import on_circle
from .circular import filled_up, with_partners
from .family import Family, Grid
from .matrixfamily import MatrixFamily
from .values import high_precision

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix
    from .values import Numbers

LONGEST = 1000
"""Terms of a determinant beyond which a reduced pencil takes less time; measured in docs/speed.md."""
VANISHES = (
    "for these values the determinant vanishes identically; a value such as a zero wave number, "
    "density or mass takes a law away: change it or leave that law out"
)

Fixed: TypeAlias = frozenset[tuple[Symbol, Fraction]]
Solved: TypeAlias = frozenset[tuple[Symbol, Expr]]

DIGITS = 45
"""Decimal digits to which sin(theta), sqrt(M) and other functions of numbers are evaluated."""


@dataclass(frozen=True)
class Problem:
    """The exact polynomials of one call.

    Attributes
    ----------
    factors : tuple of (Family, int)
        Irreducible factors that hold omega other than as omega itself, with multiplicity.
    generators : tuple of Expr
        The swept quantities, in the order of the families' exponents: symbols, sin(theta), |k| ...
    zeros : int
        Roots at zero that these numbers bring beyond the identically zero modes.
    degree : int
        How many roots the relation has in general, zero modes left out.
    zero_modes : int
        Those that no declared constraint forbids.
    polynomials : tuple of ExactPolynomial
        The factors as polynomials, in the order of `factors`.
    matrices : tuple of MatrixFamily
        Factors that are too long to be written out.
    choice : str
        Why they are not; empty where there are none.
    """

    factors: tuple[tuple[Family, int], ...]
    generators: tuple[Expr, ...]
    zeros: int
    degree: int
    zero_modes: int
    polynomials: tuple[ExactPolynomial, ...]
    matrices: tuple[MatrixFamily, ...] = ()
    choice: str = ""


def pose(wave: WaveMatrix, numbers: Numbers) -> Problem:
    """The exact problem for a wave matrix and its numbers, its determinant written out.

    Raises
    ------
    UndeterminedError
        When the determinant vanishes identically, in general or for these numbers.
    """
    return _posed(wave, *what_is_known(numbers))


def what_is_known(numbers: Numbers) -> tuple[Fixed, Solved]:
    """What a problem depends on beside the wave matrix."""
    return frozenset(numbers.fixed.items()), frozenset(numbers.solved.items())


@lru_cache(maxsize=16)
def _posed(wave: WaveMatrix, fixed: Fixed, solved: Solved) -> Problem:
    """The same problem serves every grid, so the last few are kept."""
    return short_problem(wave, fixed, solved) or _written_out(wave, fixed, solved, inf)


@lru_cache(maxsize=16)
def short_problem(wave: WaveMatrix, fixed: Fixed, solved: Solved) -> Problem | None:
    """The problem if its determinant has at most `LONGEST` terms."""
    try:
        return _written_out(wave, fixed, solved, LONGEST)
    except TooLong:
        return None


def _written_out(wave: WaveMatrix, fixed: Fixed, solved: Solved, longest: float) -> Problem:
    degree, zero_modes = general_degree(wave)
    filled = filled_in(wave, fixed, solved)
    whole = determinant(filled, len(wave.rows), wave.omega, longest=longest)
    kept, lowest = factors_of(whole)
    swept = with_partners(g for g in whole.generators if g.free_symbols)
    factors = tuple((filled_up(family_of(p, swept), swept), m) for p, m in kept)
    zeros, allowed = lowest - zero_modes, zero_modes - wave.forbidden_modes
    return Problem(factors, swept, zeros, degree, allowed, tuple(p for p, _ in kept))


def filled_in(wave: WaveMatrix, fixed: Fixed, solved: Solved) -> dict[tuple[int, int], Expr]:
    """The entries with all numbers put in, without those that vanish."""
    fill = _filling(dict(fixed), dict(solved))
    return {ij: c for ij, e in wave.entries.items() if (c := fill(e)) != 0}


def factors_of(whole: ExactPolynomial) -> tuple[list[tuple[ExactPolynomial, int]], int]:
    """The factors that hold omega other than as omega itself, and the power of that.

    Raises
    ------
    UndeterminedError
        When the polynomial is zero.
    """
    if whole.degree < 0:
        raise UndeterminedError(VANISHES)
    whole = whole.primitive()[1]
    parts = whole.factor()[1] if whole.has_real_form else whole.squarefree()[1]
    return [(p, m) for p, m in parts if p.lowest == 0], whole.lowest


def in_numbers(numbers: Numbers) -> Callable[[Expr], Expr]:
    """What puts the fixed numbers in, sines and cosines of numbers as rationals on the unit circle."""
    return _filling(numbers.fixed, numbers.solved)


def _filling(
    fixed: Mapping[Symbol, Fraction], solved: Mapping[Symbol, Expr]
) -> Callable[[Expr], Expr]:
    known = {s: Rational(v.numerator, v.denominator) for s, v in fixed.items()}

    def filled(entry: Expr) -> Expr:
        made = (entry.subs(solved) if solved else entry).xreplace(known)
        angles = {a for a in made.atoms(sin, cos) if not a.free_symbols}
        return made.xreplace({a: _on_circle(a) for a in angles}) if angles else made

    return filled


@lru_cache
def _on_circle(function: Expr) -> Rational:
    """sin a or cos a from a rational tan(a/2), so that sin^2 + cos^2 = 1 stays exact."""
    half = _rational((function.args[0] / 2).evalf(DIGITS + 5))
    with mpmath.workdps(DIGITS + 5):
        t = _fraction(mpmath.tan(mpmath.mpf(half.numerator) / half.denominator))
    value = 2 * t / (1 + t * t) if isinstance(function, sin) else (1 - t * t) / (1 + t * t)
    return Rational(value.numerator, value.denominator)


def grid_of(problem: Problem, numbers: Numbers) -> Grid:
    """The swept quantities over the flattened grid, in double-double."""
    return [swept_values(g, numbers) for g in problem.generators]


@lru_cache(maxsize=64)
def general_degree(wave: WaveMatrix) -> tuple[int, int]:
    """The degree and the zero modes of the relation, from one random exact evaluation.

    A polynomial that is not zero vanishes at random points with negligible probability (Schwartz 1980, J. ACM
    27, 701), so both are those of the symbolic relation.

    Raises
    ------
    UndeterminedError
        When the determinant vanishes identically.
    """
    random = Random(20)
    symbols: set[Any] = set()
    for entry in wave.entries.values():
        symbols |= entry.free_symbols
    values = {
        s: Fraction(random.randint(10**3, 10**4), random.randint(10**2, 10**3))
        for s in sorted(symbols - {wave.omega}, key=str)
    }
    sample = determinant(wave.entries, len(wave.rows), wave.omega, values=values)
    if sample.degree < 0:
        from ..waves.derive import undetermined_message

        raise UndeterminedError(undetermined_message(wave))
    return sample.degree - sample.lowest, sample.lowest


def family_of(polynomial: ExactPolynomial, swept: tuple[Expr, ...]) -> Family:
    """Numbers such as pi or sqrt(2) are folded into the coefficients; the swept stay."""
    places = [
        polynomial.generators.index(g) + 1 if g in polynomial.generators else None for g in swept
    ]
    constants = {
        i: _rational(g) for i, g in enumerate(polynomial.generators, 1) if not g.free_symbols
    }
    gathered: dict[tuple[int, ...], list[Fraction]] = {}
    for exponents, re, im in polynomial.terms():
        scale = Fraction(1)
        for i, value in constants.items():
            scale *= value ** exponents[i]
        key = (exponents[0], *(exponents[p] if p else 0 for p in places))
        into = gathered.setdefault(key, [Fraction(0), Fraction(0)])
        into[0] += re * scale
        into[1] += im * scale
    kept = {key: (re, im) for key, (re, im) in gathered.items() if re or im}
    table = np.array(list(kept), dtype=np.int64).reshape(len(kept), 1 + len(swept))
    return Family(table, tuple(kept.values()))


def _rational(number: Expr) -> Fraction:
    return _fraction(number.evalf(DIGITS))


def _fraction(value: Any) -> Fraction:
    """An mpmath or SymPy float as the binary rational that it is."""
    sign, mantissa, exponent, _ = value._mpf_
    return Fraction(-int(mantissa) if sign else int(mantissa)) * Fraction(2) ** int(exponent)


def swept_values(generator: Expr, numbers: Numbers) -> tuple[NDArray[Any], NDArray[Any]]:
    """A swept quantity over the flattened grid: plain arrays exactly, functions of them in double-double."""
    size = int(np.prod(numbers.shape, dtype=np.int64))
    if isinstance(generator, Symbol):
        hi = numbers.swept[generator].reshape(size)
        return hi, np.zeros_like(hi)
    values = _angle(generator, numbers)
    if values is None:
        return _evaluated(generator, numbers, size)
    different, place = np.unique(values.reshape(size), return_inverse=True)
    kind = "sin" if isinstance(generator, sin) else "cos"
    parts = np.array(on_circle(kind, different.tolist())).reshape(-1, 2)
    return parts[place, 0], parts[place, 1]


def _angle(generator: Expr, numbers: Numbers) -> NDArray[np.float64] | None:
    """The real angles of a sine or cosine of something swept."""
    if isinstance(generator, sin | cos) and isinstance(generator.args[0], Symbol):
        values = numbers.swept[generator.args[0]]
        return None if np.iscomplexobj(values) else values
    return None


def _evaluated(generator: Expr, numbers: Numbers, size: int) -> tuple[NDArray[Any], NDArray[Any]]:
    symbols = sorted(generator.free_symbols, key=str)
    loose = [Dummy(s.name) for s in symbols]
    renamed = generator.subs(list(zip(symbols, loose, strict=True)))
    function = lambdify(loose, _analytic(renamed), "mpmath")
    with mpmath.workdps(DIGITS):
        values = [function(*(numbers.at(s, i) for s in symbols)) for i in range(size)]
        whole = any(getattr(v, "imag", 0) != 0 for v in values)
        rounded: Callable[[Any], Any] = complex if whole else lambda v: float(v.real)
        hi = [rounded(v) for v in values]
        low = [rounded(v - high_precision(h)) for v, h in zip(values, hi, strict=True)]
    return np.array(hi), np.array(low)


def _analytic(generator: Expr) -> Expr:
    """|k| as sqrt(k^2), which continues it to complex k with positive real part."""
    return generator.replace(Abs, lambda a: sqrt(a**2))


def rates_of(problem: Problem, numbers: Numbers, symbol: Symbol) -> list[NDArray[Any]]:
    """How fast each swept quantity changes with one symbol, in doubles."""
    size = int(np.prod(numbers.shape, dtype=np.int64))
    rates = []
    for generator in problem.generators:
        value = numbers.value(_loose_slope(generator, symbol))
        rates.append(np.broadcast_to(value, numbers.shape).reshape(size))
    return rates


def _loose_slope(generator: Expr, symbol: Symbol) -> Expr:
    """The derivative, with sign(k) for |k| as k / sqrt(k^2)."""
    loose = Dummy(symbol.name)
    slope = _analytic(generator.subs(symbol, loose)).diff(loose)
    return slope.subs(loose, symbol)
