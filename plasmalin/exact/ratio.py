"""Ratios of exact polynomials in one ring."""

from __future__ import annotations

from dataclasses import dataclass

from .gaussian import Gaussian, gcd


@dataclass(frozen=True, slots=True)
class Ratio:
    """``top / bottom``, not always in lowest terms."""

    top: Gaussian
    bottom: Gaussian

    def __add__(self, other: Ratio) -> Ratio:
        if self.bottom == other.bottom:
            return Ratio(self.top + other.top, self.bottom)
        common = gcd(self.bottom, other.bottom)
        mine, theirs = other.bottom.over(common), self.bottom.over(common)
        return Ratio(self.top * mine + other.top * theirs, self.bottom * mine)

    def __mul__(self, other: Ratio) -> Ratio:
        return Ratio(self.top * other.top, self.bottom * other.bottom)

    def __pow__(self, n: int) -> Ratio:
        base = self if n >= 0 else Ratio(self.bottom, self.top)
        return Ratio(base.top ** abs(n), base.bottom ** abs(n))

    def lowest(self) -> Ratio:
        """In lowest terms, the denominator real and positive-leading where a unit can make it so."""
        if not self.top:
            one = self.top.re.context().constant(1)
            return Ratio(self.top, Gaussian(one, one - one))
        common = gcd(self.top, self.bottom)
        top, bottom = self.top.over(common), self.bottom.over(common)
        normal = bottom.normalized()
        turns = next(n for n in range(4) if bottom.turned(n) == normal)
        return Ratio(top.turned(turns), normal)
