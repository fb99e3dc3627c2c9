"""Univariate polynomials over the Gaussian rationals: square-free parts by Yun's algorithm."""

from __future__ import annotations

from fractions import Fraction
from typing import TypeAlias

Number: TypeAlias = tuple[Fraction, Fraction]
Poly: TypeAlias = list[Number]

ONE, ZERO = (Fraction(1), Fraction(0)), (Fraction(0), Fraction(0))


def squarefree_parts(p: Poly) -> list[tuple[Poly, int]]:
    """Square-free polynomials whose powers multiply to p up to a number (Yun 1976, SYMSAC)."""
    p = _trimmed(p)
    lowest = next(n for n, c in enumerate(p) if c != ZERO)
    found: list[tuple[Poly, int]] = [([ZERO, ONE], lowest)] if lowest else []
    p = p[lowest:]
    if len(p) < 2:
        return found
    slope = _derivative(p)
    common = _gcd(p, slope)
    w, y = _divmod(p, common)[0], _divmod(slope, common)[0]
    multiplicity = 1
    while len(w) > 1:
        z = _minus(y, _derivative(w))
        part = _gcd(w, z) if any(c != ZERO for c in z) else w
        if len(part) > 1:
            found.append((part, multiplicity))
        w, y = _divmod(w, part)[0], _divmod(z, part)[0] if z else z
        multiplicity += 1
    return found


def _mul(a: Number, b: Number) -> Number:
    return a[0] * b[0] - a[1] * b[1], a[0] * b[1] + a[1] * b[0]


def _inverse(a: Number) -> Number:
    size = a[0] ** 2 + a[1] ** 2
    return a[0] / size, -a[1] / size


def _trimmed(p: Poly) -> Poly:
    size = max((n + 1 for n, c in enumerate(p) if c != ZERO), default=0)
    return p[:size]


def _derivative(p: Poly) -> Poly:
    return [(n * re, n * im) for n, (re, im) in enumerate(p)][1:]


def _minus(p: Poly, q: Poly) -> Poly:
    size = max(len(p), len(q))
    a, b = (x + [ZERO] * (size - len(x)) for x in (p, q))
    return _trimmed([(u[0] - v[0], u[1] - v[1]) for u, v in zip(a, b, strict=True)])


def _divmod(p: Poly, q: Poly) -> tuple[Poly, Poly]:
    rest, inverse = list(p), _inverse(q[-1])
    quotient = [ZERO] * max(len(p) - len(q) + 1, 0)
    for n in range(len(quotient) - 1, -1, -1):
        quotient[n] = _mul(rest[n + len(q) - 1], inverse)
        for m, c in enumerate(q):
            step = _mul(quotient[n], c)
            rest[n + m] = (rest[n + m][0] - step[0], rest[n + m][1] - step[1])
    return quotient, _trimmed(rest[: len(q) - 1])


def _gcd(p: Poly, q: Poly) -> Poly:
    """The monic common divisor."""
    while q:
        p, q = q, _divmod(p, q)[1]
    inverse = _inverse(p[-1])
    return [_mul(c, inverse) for c in p]
