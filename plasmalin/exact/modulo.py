"""Polynomials in one unknown over the prime field, modulo one of them: inverses, quotients of low degree, factors."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from flint import nmod_poly

from .finite import split, univariate


def linear_root(top: Any, modulus: nmod_poly, place: int) -> nmod_poly | None:
    """The residue u with ``a + b*u = 0``, for a polynomial in a main unknown (place 0) and one more, linear in it."""
    parts = {n: univariate(p, 0) for n, p in split(top, place).items()}
    if not set(parts) <= {0, 1} or 1 not in parts:
        return None
    inverse = inverted(parts[1], modulus)
    if inverse is None:
        return None
    return -parts.get(0, modulus * 0) * inverse % modulus


def inverted(value: nmod_poly, modulus: nmod_poly) -> nmod_poly | None:
    """The inverse of a residue; None where it has none."""
    common, inverse, _ = (value % modulus).xgcd(modulus)
    return inverse % modulus if common.degree() == 0 else None


def reconstructed(value: nmod_poly, modulus: nmod_poly) -> tuple[nmod_poly, nmod_poly] | None:
    """The one quotient of polynomials of low degrees that a residue is, by the extended algorithm of Euclid.

    None where numerator and denominator together leave less than one degree to confirm it.
    """
    zero = value * 0
    a, b, u, v = modulus, value, zero, zero + 1
    best: tuple[int, nmod_poly, nmod_poly] | None = None
    while b:
        size = b.degree() + v.degree()
        if best is None or size < best[0]:
            best = size, b, v
        q, rest = divmod(a, b)
        a, b, u, v = b, rest, v, u - q * v
    if best is None or best[0] > modulus.degree() - 2:
        return None
    return best[1], best[2]


def divided_out(value: nmod_poly, bases: Sequence[nmod_poly]) -> tuple[list[int], nmod_poly]:
    """How often each of some polynomials divides another, one after the other, and what is left."""
    powers = []
    for base in bases:
        n = 0
        while base.degree() > 0 and value.degree() >= base.degree():
            q, rest = divmod(value, base)
            if rest:
                break
            value, n = q, n + 1
        powers.append(n)
    return powers, value
