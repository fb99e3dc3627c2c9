"""Square-free parts of Gaussian polynomials in their first variable (Yun 1976, SYMSAC)."""

from __future__ import annotations

from typing import Any

from .divisors import proven_squarefree
from .gaussian import Gaussian, gcd


def squarefree_parts(p: Gaussian) -> list[tuple[Gaussian, int]]:
    """Square-free polynomials whose powers multiply to p, up to a factor free of the first variable."""
    p, lowest = _without_power(p)
    found = [(_variable(p), lowest)] if lowest else []
    if not p.holds(0):
        return found
    if proven_squarefree((p.re, p.im)):
        return [*found, (p, 1)]
    slope = _slope(p)
    common = gcd(p, slope)
    w, y = p.over(common), slope.over(common)
    multiplicity = 1
    while w.holds(0):
        z = y - _slope(w)
        part = gcd(w, z) if z else w
        if part.holds(0):
            found.append((part, multiplicity))
        w, y = w.over(part), z.over(part) if z else z
        multiplicity += 1
    return found


def _slope(p: Gaussian) -> Gaussian:
    return Gaussian(p.re.derivative(0), p.im.derivative(0))


def _variable(p: Gaussian) -> Gaussian:
    ring = p.re.context()
    return Gaussian(ring.gens()[0], ring.constant(0))


def _without_power(p: Gaussian) -> tuple[Gaussian, int]:
    """p divided by the power of the first variable that divides it, and that power."""
    parts = [part for part in (p.re, p.im) if part]
    lowest = min(int(part.term_content().degrees()[0]) for part in parts)

    def lowered(part: Any) -> Any:
        terms = {(int(e[0]) - lowest, *e[1:]): c for e, c in part.terms()}
        return part.context().from_dict(terms)

    return (Gaussian(lowered(p.re), lowered(p.im)), lowest) if lowest else (p, 0)
