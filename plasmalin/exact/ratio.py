"""Ratios of exact polynomials in one ring."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from .gaussian import Gaussian, gcd
from .ring import Ring


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


def composed(value: Gaussian, images: Sequence[Ratio], ring: Ring) -> Gaussian:
    """A polynomial with every variable replaced by a ratio in a ring, its denominators cleared."""
    top = ring.constant(0)
    highest = [0] * len(images)
    for e, _, _ in value.terms():
        highest = [max(a, b) for a, b in zip(highest, e, strict=True)]
    powers = [_powers(r, n, ring) for r, n in zip(images, highest, strict=True)]
    for e, re, im in value.terms():
        term = ring.constant(re, im)
        for table, n in zip(powers, e, strict=True):
            term = term * table[n]
        top = top + term
    return top


def _powers(ratio: Ratio, highest: int, ring: Ring) -> list[Gaussian]:
    """top**n * bottom**(highest − n) for every n."""
    tops, bottoms = [ring.constant(1)], [ring.constant(1)]
    for _ in range(highest):
        tops.append(tops[-1] * ratio.top)
        bottoms.append(bottoms[-1] * ratio.bottom)
    return [tops[n] * bottoms[highest - n] for n in range(highest + 1)]
