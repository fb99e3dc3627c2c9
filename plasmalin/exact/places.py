"""All real values of s at which roots of p(x, s) meet, or roots of two polynomials, as far as that is cheap."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from fractions import Fraction
from math import gcd, isqrt, log2
from typing import Any

import flint

from .eliminants import Bivariate, Eliminant, Term, square_free
from .rational import times_i
from .realroots import isolated, refined

BITS = 320
"""Binary digits to which a place is found."""
AFFORDABLE = 8e7
"""Squared degree times binary digits of the work; ten million take about 0.03 s, so this 0.3 s at most."""
BEYOND = Fraction(1, 2**20)
"""Part of the interval that is looked at beyond its ends, so that places at an end are found as any other."""

Interval = tuple[Fraction, Fraction]
Place = tuple[Fraction, Fraction]
"""A value, and how far it may be off."""


def meeting_places(terms: Sequence[Term], between: Interval) -> list[Place] | None:
    """Where two or more roots x of one polynomial coincide.

    Parameters
    ----------
    terms : sequence of (int, int, (Fraction, Fraction))
        Powers of x and s, and an exact complex coefficient; square-free, and no power of x divides it.
    between : (Fraction, Fraction)
        The values of s that matter.

    Returns
    -------
    list of (Fraction, Fraction)
        In order, every place once; at some, only roots at infinity may meet, or only complex values of a power of
        x. None where it would take long, or nothing is proven.

    Notes
    -----
    The degree of a discriminant and whether it is square-free are read from its image in one prime field of 62 bits.
    """
    (real,) = _real_forms([terms])
    step = gcd(*(t[0] for t in real)) or 1
    lowered = [(i // step, j, c) for i, j, c in real]
    found = list[Place]()
    if step > 1:
        found += _roots_of([(j, c) for i, j, c in real if i == 0], between)
    if max(t[0] for t in lowered) > 1:
        met = _places([lowered], between)
        if met is None:
            return None
        found += met
    return _different(found)


def shared_places(
    first: Sequence[Term], second: Sequence[Term], between: Interval
) -> list[Place] | None:
    """Where a root x of one polynomial is a root of another; as `meeting_places`."""
    pair = _real_forms([first, second])
    step = gcd(*(t[0] for terms in pair for t in terms)) or 1
    lowered = [[(i // step, j, c) for i, j, c in terms] for terms in pair]
    return _places(lowered, between)


def infinite_places(terms: Sequence[Term], between: Interval) -> list[Place]:
    """Where the coefficient of the highest power of x vanishes, so that a root goes to infinity; exact, as it is cheap."""
    highest = max(i for i, _, _ in terms)
    return _roots_of([(j, c) for i, j, c in terms if i == highest], between)


def _places(polynomials: list[list[Term]], between: Interval) -> list[Place] | None:
    """By the discriminant of one polynomial or the resultant of two, in s^2 where only that occurs."""
    even = all(j % 2 == 0 for terms in polynomials for _, j, _ in terms)
    if not even:
        return _eliminated(Eliminant(*map(Bivariate.of, polynomials)), between)
    halved = ([(i, j // 2, c) for i, j, c in terms] for terms in polynomials)
    found = _eliminated(Eliminant(*map(Bivariate.of, halved)), _squares(between))
    return None if found is None else _different(list(_square_roots(found, between)))


def _eliminated(eliminant: Eliminant, between: Interval) -> list[Place] | None:
    if eliminant.bound() ** 2 * 64 > AFFORDABLE:
        return None
    images = eliminant.modular()
    if images is None:
        return None
    lowest = min(_valuation(image) for image in images)
    common = images[0].gcd(images[1]).right_shift(lowest)
    at_zero = [(Fraction(0), Fraction(0))] if lowest and between[0] <= 0 <= between[1] else []
    if common.degree() < 1:
        return at_zero
    found = _real_roots(eliminant, common, lowest, between)
    return None if found is None else _different([*at_zero, *found])


def _real_roots(
    eliminant: Eliminant, image: Any, lowest: int, between: Interval
) -> list[Place] | None:
    """The real roots other than zero of a polynomial whose image in a prime field is known."""
    degree = image.degree()
    if eliminant.is_real and image.gcd(image.derivative()).degree() == 0:
        return _by_balls(
            lambda low, high: eliminant.on_interval(low, high, degree + lowest, lowest),
            degree,
            between,
        )
    if eliminant.bound() ** 2 * eliminant.height > AFFORDABLE:
        return None
    return _roots_exactly(eliminant.exact(), between)


def _roots_exactly(p: Any, between: Interval) -> list[Place] | None:
    """The real roots of a square-free polynomial with integer coefficients."""
    lowest = 1 if p[0] == 0 else 0
    p = flint.fmpz_poly(p.coeffs()[lowest:])
    at_zero = [(Fraction(0), Fraction(0))] if lowest and between[0] <= 0 <= between[1] else []

    def on_interval(low: Fraction, high: Fraction) -> Any:
        ends = (flint.arb(flint.fmpq(x.numerator, x.denominator)) for x in (low, high - low))
        return flint.arb_poly(p)(flint.arb_poly(list(ends)))

    found = _by_balls(on_interval, p.degree(), between)
    return None if found is None else [*at_zero, *found]


def _by_balls(
    on_interval: Callable[[Fraction, Fraction], Any], degree: int, between: Interval
) -> list[Place] | None:
    """Real roots on an interval in ball arithmetic, with more digits until they suffice or become too many."""
    if degree < 1:
        return []
    width = between[1] - between[0]
    beyond = [BEYOND * (min(abs(end), width) or BEYOND * width) for end in between]
    low, high = between[0] - beyond[0], between[1] + beyond[1]
    before, bits = flint.ctx.prec, _digits(degree, low, high)
    try:
        while degree**2 * bits <= AFFORDABLE:
            flint.ctx.prec = bits
            roots = _roots_between(on_interval(low, high), degree)
            if roots is not None:
                width = high - low
                found = [(low + width * t, width * off) for t, off in roots]
                return list(_within(found, between))
            bits = 3 * bits // 2
    finally:
        flint.ctx.prec = before
    return None


def _digits(degree: int, low: Fraction, high: Fraction) -> int:
    """A first guess: what interpolation loses, and what powers of s at the ends differ by."""
    small, large = sorted((abs(low), abs(high)))
    decades = log2(large / small) if low * high > 0 else 4
    return int(BITS + degree * (3 + 0.8 * decades)) + 64


def _roots_between(q: Any, degree: int) -> list[Place] | None:
    pieces = isolated(q, degree) if q is not None else None
    if pieces is None:
        return None
    found = [refined(q, left, width, BITS) for left, width in pieces]
    return [place for place in found if place] if all(found) else None


def _roots_of(coefficients: Sequence[tuple[int, Any]], between: Interval) -> list[Place]:
    """The real roots of a polynomial in s with exact complex coefficients."""
    (re, im) = (
        Bivariate.of([(0, j, (c[part], Fraction(0))) for j, c in coefficients]).parts[0][0]
        for part in (0, 1)
    )
    common = flint.fmpz_poly(re).gcd(flint.fmpz_poly(im))
    return _roots_exactly(square_free(common), between) or []


def _within(places: Sequence[Place], between: Interval) -> Iterator[Place]:
    """Those on the interval; one that is at an end as far as it is known counts."""
    for at, off in places:
        if between[0] - off <= at <= between[1] + off:
            yield at, off


def _different(places: Sequence[Place]) -> list[Place]:
    """In order, and what is the same as far as it is known, once."""
    kept: list[Place] = []
    for at, off in sorted(places):
        if not kept or at - kept[-1][0] > off + kept[-1][1]:
            kept.append((at, off))
    return kept


def _squares(between: Interval) -> Interval:
    ends = [x * x for x in between]
    return (Fraction(0) if between[0] <= 0 <= between[1] else min(ends)), max(ends)


def _square_roots(places: Sequence[Place], between: Interval) -> Iterator[Place]:
    """Both square roots where they are on the interval."""
    for at, off in places:
        if at <= off:
            both = [(Fraction(0), Fraction(0))] if at >= -off else []
        else:
            root = _root(at)
            both = [(sign * root, off / root + root / 2**BITS) for sign in (-1, 1)]
        yield from _within(both, between)


def _root(x: Fraction) -> Fraction:
    """To a relative 2^-BITS and better."""
    shift = max(0, 2 * BITS + 8 - (x.numerator.bit_length() - x.denominator.bit_length()))
    shift += shift % 2
    return Fraction(isqrt((x.numerator << shift) // x.denominator), 2 ** (shift // 2))


def _real_forms(polynomials: Sequence[Sequence[Term]]) -> list[list[Term]]:
    """In s with x = i s where that makes all of them real and they are not."""
    plain = [list(terms) for terms in polynomials]
    if all(not c[1] for terms in plain for _, _, c in terms):
        return plain
    turned = [_turned(terms) for terms in plain]
    return [t for t in turned if t] if all(turned) else plain


def _turned(terms: Sequence[Term]) -> list[Term] | None:
    for unit in (0, 3):
        made = [(i, j, times_i(c, i + unit)) for i, j, c in terms]
        if not any(c[1] for _, _, c in made):
            return made
    return None


def _valuation(image: Any) -> int:
    return next(n for n, c in enumerate(image.coeffs()) if int(c)) if image else 0
