"""All real roots of a square-free polynomial on an interval, from coefficients that are balls.

A polynomial q on (0, 1) has no more roots there than the coefficients of (1 + u)^n q(1 / (1 + u)) change their sign,
and as many where they do so once or never (Descartes' rule; Collins and Akritas 1976, SYMSAC; from memory). Intervals
with more changes are split.
"""

from __future__ import annotations

from fractions import Fraction
from itertools import pairwise
from typing import Any

import flint

from .clusters import fraction

SPLIT = Fraction(125, 256)
"""Where an interval is split: off its middle, since roots like to sit on round numbers."""
ONE_MORE = flint.arb_poly([1, 1])
PIECES = 400
"""Intervals after which nothing is told."""
STEPS = 300


def isolated(q: Any, degree: int) -> list[tuple[Fraction, Fraction]] | None:
    """Intervals in (0, 1) with one root each, which is simple.

    Parameters
    ----------
    q : flint.arb_poly
    degree : int
        Not below that of q.

    Returns
    -------
    list of (Fraction, Fraction)
        Left ends and widths; None where the balls are too wide to tell a sign.
    """
    found: list[tuple[Fraction, Fraction]] = []
    pieces = [(q, Fraction(0), Fraction(1))]
    for _ in range(PIECES):
        if not pieces:
            return sorted(found)
        part, left, width = pieces.pop()
        changes, sure = _sign_changes(part, degree)
        if changes > 1:
            near, far = _split(part)
            pieces.append((far, left + width * SPLIT, width * (1 - SPLIT)))
            pieces.append((near, left, width * SPLIT))
        elif not sure:
            return None
        elif changes:
            found.append((left, width))
    return None


def _split(q: Any) -> tuple[Any, Any]:
    """q(a t) and q(a + (1 - a) t), with shifts by one only, which are quick."""
    near = _scaled(q, _ball(SPLIT))
    return near, _scaled(near(ONE_MORE), _ball(1 / SPLIT - 1))


def _scaled(q: Any, factor: Any) -> Any:
    power, coefficients = flint.arb(1), []
    for c in q.coeffs():
        coefficients.append(c * power)
        power *= factor
    return flint.arb_poly(coefficients)


def _sign_changes(q: Any, degree: int) -> tuple[int, bool]:
    """How often signs that are certain change, and whether all are."""
    coefficients = q.coeffs()
    coefficients += [flint.arb(0)] * (degree + 1 - len(coefficients))
    signs = [_sign(c) for c in flint.arb_poly(coefficients[::-1])(ONE_MORE).coeffs()]
    certain = [s for s in signs if s]
    changes = sum(a != b for a, b in pairwise(certain))
    return changes, len(certain) == degree + 1


def _sign(c: Any) -> int:
    return 1 if c > 0 else -1 if c < 0 else 0


def refined(q: Any, left: Fraction, width: Fraction, bits: int) -> tuple[Fraction, Fraction] | None:
    """The one simple root in an interval, and how far it may be off: `width` over 2^bits.

    Newton steps that stay between points of different sign, halving else; None where the balls are too wide.
    """
    low, high, wanted = left, left + width, width / 2**bits
    slope, before = q.derivative(), _sign(q(_ball(low)))
    point = (low + high) / 2
    for _ in range(STEPS):
        value = q(_ball(point))
        guess = point - _step(value, slope(_ball(point)))
        if not _sign(value) or (abs(guess - point) < wanted / 4 and low < guess < high):
            ends = (_sign(q(_ball(guess + side))) for side in (-wanted, wanted))
            return (guess, wanted) if next(ends) * next(ends) < 0 else None
        low, high = (point, high) if _sign(value) == before else (low, point)
        point = _shortened(guess if low < guess < high else (low + high) / 2, wanted)
    return None


def _step(value: Any, slope: Any) -> Fraction:
    """Newton's; zero where the slope is."""
    return fraction((value.mid() / slope.mid()).mid()) if slope.mid() != 0 else Fraction(0)


def _shortened(x: Fraction, wanted: Fraction) -> Fraction:
    """x to an eighth of what is wanted, in a fraction that is not longer than that needs."""
    digits = (8 * wanted.denominator // max(wanted.numerator, 1)).bit_length()
    return Fraction(round(x * 2**digits), 2**digits)


def _ball(x: Fraction) -> Any:
    return flint.arb(flint.fmpq(x.numerator, x.denominator))
