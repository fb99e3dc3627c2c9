"""All complex roots of one polynomial with exact coefficients, by FLINT, with proven radii."""

from __future__ import annotations

from fractions import Fraction
from math import lcm
from typing import Any, TypeAlias

import flint

from .clusters import Box, fraction, parted
from .gaussian import Gaussian
from .rational import times_i
from .yun import squarefree_parts

Root: TypeAlias = tuple[Fraction, Fraction, Fraction, int]
"""Real and imaginary part of the centre, radius, multiplicity."""

FAR_BITS = 1024
"""Roots that this precision does not part are a cluster."""


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
        When the polynomial is zero, or roots lie too close together to be told apart.
    """
    if not any(re or im for re, im in coefficients):
        raise ArithmeticError("the zero polynomial has no roots to find")
    for part in (0, 1):
        if not any(c[1 - part] for c in coefficients):
            return _real_coefficients([c[part] for c in coefficients], digits)
    return _complex_coefficients(coefficients, digits)


def _real_coefficients(coefficients: list[Fraction], digits: int) -> list[Root]:
    poly = _integer_poly(coefficients)
    if _near_each_other(poly):
        parts = _squarefree([(c, Fraction(0)) for c in coefficients])
        if len(parts) == 1 and parts[0][1] == 1:
            found = parted(lambda: flint.acb_poly(poly), lambda boxes: _real(boxes, digits))
            return [(*box, 1) for box in found]
        return [
            (*root[:3], m)
            for part, m in parts
            for root in _real_coefficients([re for re, _ in part], digits)
        ]
    before = flint.ctx.prec
    try:
        flint.ctx.prec = _bits(digits)
        return [(*_centre(z), int(m)) for z, m in poly.complex_roots()]
    finally:
        flint.ctx.prec = before


def _near_each_other(poly: Any) -> bool:
    """Whether roots are so close, or equal, that `complex_roots` might take ages."""
    before, bits = flint.ctx.prec, FAR_BITS // 8
    try:
        while bits <= FAR_BITS:
            flint.ctx.prec = bits
            if _isolated(flint.acb_poly(poly)):
                return False
            bits *= 2
    finally:
        flint.ctx.prec = before
    return True


def _real(found: list[Box], digits: int) -> list[Box] | None:
    """Discs of a real polynomial; the mirror image of a disc that meets no other holds the same, real root."""
    made: list[Box] = []
    for i, (re, im, radius) in enumerate(found):
        others = (box for j, box in enumerate(found) if j != i)
        real = abs(im) <= radius
        if real and any(max(abs(re - x), abs(im + y)) <= radius + r for x, y, r in others):
            return None
        box = re, Fraction(0) if real else im, radius
        if radius > _wanted(box[:2], digits):
            return None
        made.append(box)
    return made or None


def _tight(found: list[Box], digits: int) -> list[Box] | None:
    """Discs as small as wanted, parts that they do not tell from zero as zero."""
    if not all(radius <= _wanted((re, im), digits) for re, im, radius in found):
        return None
    return [_without_noise(*box) for box in found] or None


def _without_noise(re: Fraction, im: Fraction, reach: Fraction) -> Box:
    re, im = (x if abs(x) > reach else Fraction(0) for x in (re, im))
    return re, im, 3 * reach


def _integer_poly(coefficients: list[Fraction]) -> Any:
    scale = lcm(*(c.denominator for c in coefficients))
    return flint.fmpz_poly([int(c * scale) for c in coefficients])


def _bits(digits: int) -> int:
    return int(digits * 3.33) + 10


def _centre(z: Any) -> tuple[Fraction, Fraction, Fraction]:
    re, im = z.real, z.imag
    radius = fraction(re.rad()) + fraction(im.rad())
    return fraction(re.mid()), fraction(im.mid()), radius


def _complex_coefficients(coefficients: list[tuple[Fraction, Fraction]], digits: int) -> list[Root]:
    """Real in z = i s where that is so (damping without drift); else square-free parts, refined discs."""
    turned = _real_when_turned(coefficients)
    if turned:
        return [(-im, re, radius, m) for re, im, radius, m in _real_coefficients(turned, digits)]
    return [
        (*centre, m)
        for part, m in _squarefree(coefficients)
        for centre in _simple_roots(part, digits)
    ]


def _squarefree(
    coefficients: list[tuple[Fraction, Fraction]],
) -> list[tuple[list[tuple[Fraction, Fraction]], int]]:
    ring = flint.fmpz_mpoly_ctx.get(("x", 1), flint.Ordering.lex)
    scale = lcm(*(x.denominator for c in coefficients for x in c))
    parts = (
        ring.from_dict({(n,): int(c[i] * scale) for n, c in enumerate(coefficients) if c[i]})
        for i in (0, 1)
    )
    return [(_listed(p), m) for p, m in squarefree_parts(Gaussian(*parts))]


def _listed(p: Gaussian) -> list[tuple[Fraction, Fraction]]:
    degree = max(int(part.degrees()[0]) for part in (p.re, p.im) if part)
    return [(Fraction(int(p.re[(n,)])), Fraction(int(p.im[(n,)]))) for n in range(degree + 1)]


def _real_when_turned(coefficients: list[tuple[Fraction, Fraction]]) -> list[Fraction] | None:
    """Coefficients in s of the polynomial at z = i s, times a unit, when they are all real."""
    turned = [times_i(c, n) for n, c in enumerate(coefficients)]
    for unit in (0, 3):
        made = [times_i(c, unit) for c in turned]
        if not any(im for _, im in made):
            return [re for re, _ in made]
    return None


def _simple_roots(
    coefficients: list[tuple[Fraction, Fraction]], digits: int
) -> list[tuple[Fraction, Fraction, Fraction]]:
    """Roots isolated at rising precision, then refined by Newton steps.

    The disc about z of radius n |p(z) / p'(z)| holds a root (Laguerre).
    """

    def polynomial() -> Any:
        return flint.acb_poly([flint.acb(real_ball(re), real_ball(im)) for re, im in coefficients])

    before, bits = flint.ctx.prec, 2 * _bits(digits) + 64
    try:
        while bits <= FAR_BITS:
            flint.ctx.prec = bits
            poly = polynomial()
            boxes = _isolated(poly)
            found = [_refined(poly, boxes, i, digits) for i in range(len(boxes))]
            if len(found) == len(coefficients) - 1 and all(found):
                return [z for z in found if z]
            bits *= 2
    finally:
        flint.ctx.prec = before
    return parted(polynomial, lambda boxes: _tight(boxes, digits))


def _isolated(poly: Any) -> list[Any]:
    """Boxes with one root each; none where the precision that is set does not suffice."""
    try:
        return list(poly.roots(maxprec=flint.ctx.prec))
    except ValueError:
        return []


def _refined(
    poly: Any, boxes: list[Any], i: int, digits: int
) -> tuple[Fraction, Fraction, Fraction] | None:
    """The root in one box to the wanted digits, each part on its own; None when precision lacks.

    All roots lie in the boxes, one in each; so a disc that holds a root and meets no other box holds this one.
    """
    re, im, radius = _centre(boxes[i])
    if radius <= _wanted((re, im), digits):
        return re, im, radius
    slope = poly.derivative()
    z = boxes[i].mid()
    for _ in range(60):
        step = poly(z) / slope(z)
        distance = poly.degree() * abs(step)
        if not distance.is_finite():
            return None
        reach = fraction(distance.upper().mid()) + fraction(distance.rad())
        centre = fraction(z.real.mid()), fraction(z.imag.mid())
        if reach <= _wanted(centre, digits) and _meets_no_other(centre, reach, boxes, i):
            return _without_noise(*centre, reach)
        z = (z - step).mid()
    return None


def _wanted(centre: tuple[Fraction, Fraction], digits: int) -> Fraction:
    """Each part to so many digits, but no part beyond 30 more digits of the whole."""
    small, large = sorted(abs(x) for x in centre)
    wanted: Fraction = max(small / 10**digits, large / 10 ** (digits + 30))
    return wanted


def _meets_no_other(
    centre: tuple[Fraction, Fraction], reach: Fraction, boxes: list[Any], i: int
) -> bool:
    def apart(box: Any) -> bool:
        sides = zip(centre, (box.real, box.imag), strict=True)
        return any(abs(c - fraction(x.mid())) > reach + fraction(x.rad()) for c, x in sides)

    return all(apart(box) for j, box in enumerate(boxes) if j != i)


def real_ball(x: Fraction) -> Any:
    return flint.arb(flint.fmpq(x.numerator, x.denominator))
