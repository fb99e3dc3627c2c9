"""All complex roots of one polynomial with exact coefficients, by FLINT, with proven radii."""

from __future__ import annotations

from fractions import Fraction
from math import lcm
from typing import Any, TypeAlias

import flint

Root: TypeAlias = tuple[Fraction, Fraction, Fraction, int]
"""Real and imaginary part of the centre, radius, multiplicity."""


def complex_roots(coefficients: list[tuple[Fraction, Fraction]], digits: int = 30) -> list[Root]:
    """Roots of sum_n c_n z^n, each disc holding exactly `multiplicity` equal roots.

    Parameters
    ----------
    coefficients : list of (Fraction, Fraction)
        Real and imaginary parts, lowest power first; the last is not zero.
    digits : int
        Relative precision of the centres.

    Returns
    -------
    list of (Fraction, Fraction, Fraction, int)

    Raises
    ------
    ArithmeticError
        When the polynomial is zero.
    """
    if not any(re or im for re, im in coefficients):
        raise ArithmeticError("the zero polynomial has no roots to find")
    if any(im for _, im in coefficients):
        return _complex_coefficients(coefficients, digits)
    return _real_coefficients([re for re, _ in coefficients], digits)


def _real_coefficients(coefficients: list[Fraction], digits: int) -> list[Root]:
    poly = _integer_poly(coefficients)
    before = flint.ctx.prec
    try:
        flint.ctx.prec = _bits(digits)
        return [(*_centre(z), int(m)) for z, m in poly.complex_roots()]
    finally:
        flint.ctx.prec = before


def _integer_poly(coefficients: list[Fraction]) -> Any:
    scale = lcm(*(c.denominator for c in coefficients))
    return flint.fmpz_poly([int(c * scale) for c in coefficients])


def _bits(digits: int) -> int:
    return int(digits * 3.33) + 10


def _centre(z: Any) -> tuple[Fraction, Fraction, Fraction]:
    re, im = z.real, z.imag
    radius = _fraction(re.rad()) + _fraction(im.rad())
    return _fraction(re.mid()), _fraction(im.mid()), radius


def _fraction(exact: Any) -> Fraction:
    mantissa, exponent = exact.man_exp()
    return Fraction(int(mantissa)) * Fraction(2) ** int(exponent)


def _complex_coefficients(coefficients: list[tuple[Fraction, Fraction]], digits: int) -> list[Root]:
    """Square-free parts by exact division, then enclosures at rising precision."""
    return [
        (*centre, m) for part, m in _squarefree(coefficients) for centre in _simple_roots(part, digits)
    ]


def _simple_roots(
    coefficients: list[tuple[Fraction, Fraction]], digits: int
) -> list[tuple[Fraction, Fraction, Fraction]]:
    before, bits = flint.ctx.prec, 2 * _bits(digits) + 64
    try:
        while bits < 200_000:
            flint.ctx.prec = bits
            poly = flint.acb_poly([flint.acb(_arb(re), _arb(im)) for re, im in coefficients])
            try:
                found = [_centre(z) for z in poly.roots()]
            except ValueError:
                found = []
            if found and all(_tight(z, digits) for z in found):
                return found
            bits *= 2
    finally:
        flint.ctx.prec = before
    raise ArithmeticError("the roots could not be separated at 200,000 bits")


def _tight(z: tuple[Fraction, Fraction, Fraction], digits: int) -> bool:
    re, im, radius = z
    return radius <= max(abs(re), abs(im)) / Fraction(10) ** digits


def _arb(x: Fraction) -> Any:
    return flint.arb(flint.fmpq(x.numerator, x.denominator))


def _squarefree(
    coefficients: list[tuple[Fraction, Fraction]],
) -> list[tuple[list[tuple[Fraction, Fraction]], int]]:
    """Yun's square-free decomposition over the Gaussian rationals, z^m split off first."""
    from .gaussian_field import squarefree_parts

    return squarefree_parts(coefficients)
