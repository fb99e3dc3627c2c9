"""Sines and cosines of doubles in high and low part, by ball arithmetic."""

from __future__ import annotations

import math
from collections.abc import Iterable

import flint

BITS = 160


def on_circle(function: str, angles: Iterable[float]) -> list[tuple[float, float]]:
    """The "sin" or "cos" of every angle, as two doubles whose sum is right to their 32 digits; NaN for an infinite one."""
    before = flint.ctx.prec
    try:
        flint.ctx.prec = BITS
        return [_parts(getattr(flint.arb(angle), function)()) for angle in angles]
    finally:
        flint.ctx.prec = before


def _parts(value: flint.arb) -> tuple[float, float]:
    if not value.is_finite():
        return math.nan, math.nan
    high = float(value.mid())
    return high, float((value - high).mid())
