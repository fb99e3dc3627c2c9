"""Numbers taken as the exact rationals they are."""

import math
from fractions import Fraction
from numbers import Rational
from typing import SupportsFloat, TypeAlias

import sympy as sp

from ..errors import ValuesError

Real: TypeAlias = int | float | Fraction | SupportsFloat


def exact_rational(x: Real) -> Fraction:
    """The rational number that ``x`` is, without rounding.

    Parameters
    ----------
    x : int, float, Fraction, NumPy scalar or SymPy number
        A float stands for its binary value, not for the decimal it was written as.

    Returns
    -------
    Fraction

    Raises
    ------
    ValuesError
        When ``x`` is not finite, or is not a real number.

    Examples
    --------
    >>> exact_rational(0.5)
    Fraction(1, 2)
    """
    if isinstance(x, sp.Float):
        return _binary(x)
    if isinstance(x, Rational):
        return Fraction(int(x.numerator), int(x.denominator))
    if isinstance(x, sp.Rational):
        return Fraction(int(x.p), int(x.q))
    try:
        value = math.nan if isinstance(x, str) else float(x)
    except (TypeError, ValueError):
        raise ValuesError(
            f"{x!r} is not a real number; give an int, a float or a Fraction."
        ) from None
    if not math.isfinite(value):
        raise ValuesError(f"{x!r} is not finite; give a finite number.")
    return Fraction(value)


def _binary(x: sp.Float) -> Fraction:
    if not x.is_finite:
        raise ValuesError(f"{x} is not finite; give a finite number.")
    sign, mantissa, exponent, _ = x._mpf_
    value = Fraction(int(mantissa)) * Fraction(2) ** int(exponent)
    return -value if sign else value


def times_i(c: tuple[Fraction, Fraction], power: int) -> tuple[Fraction, Fraction]:
    """A complex number, real and imaginary part, times i^power."""
    re, im = c
    return ((re, im), (-im, re), (-re, -im), (im, -re))[power % 4]
