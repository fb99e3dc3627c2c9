"""Sines and cosines of doubles in high and low part, by ball arithmetic."""

from __future__ import annotations

import math
from collections.abc import Iterable

import flint

BITS = 160
ENOUGH = 110
"""Bits that the two doubles need; an infinite angle has none."""


def on_circle(function: str, angles: Iterable[float]) -> list[tuple[float, float]]:
    """The "sin" or "cos" of every angle, as two doubles whose sum is right to their 32 digits; NaN where it is infinite."""
    before = flint.ctx.prec
    try:
        flint.ctx.prec = BITS
        return [_parts(getattr(flint.arb(angle), function)()) for angle in angles]
    finally:
        flint.ctx.prec = before


def _parts(value: flint.arb) -> tuple[float, float]:
    if value.rel_accuracy_bits() < ENOUGH:
        return math.nan, math.nan
    high = float(value.mid())
    return high, float((value - high).mid())
