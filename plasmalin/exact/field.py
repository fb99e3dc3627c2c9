"""The prime field in which unknowns are looked for: its prime, and the small numbers and powers that its numbers stand for."""

from __future__ import annotations

from collections.abc import Iterable
from fractions import Fraction
from functools import lru_cache

import sympy as sp

ROOT = 12
"""Every symbol is a twelfth power, so that its square, cube and fourth roots are in the field."""

LARGEST = 4096
"""The largest numerator and denominator that a number is recognized with."""


@lru_cache
def field() -> tuple[int, int]:
    """A prime of 61 bits in which -1, 2, 3, 5 and 7 have square roots and 2 and 3 cube roots, and the root of -1."""
    p = 2**61 + 1 - (2**61 % 24)
    while True:
        p -= 24
        if not sp.isprime(p) or any(pow(a, (p - 1) // 2, p) != 1 for a in (2, 3, 5, 7)):
            continue
        if all(pow(a, (p - 1) // 3, p) == 1 for a in (2, 3)):
            root = next(r for a in range(2, 60) if pow(r := pow(a, p // 4, p), 2, p) == p - 1)
            return p, root


def quotient(a: int, b: int) -> int:
    """a / b in the field."""
    p = field()[0]
    if b % p == 0:
        raise ZeroDivisionError("division by zero in the field")
    return a * pow(b, -1, p) % p


@lru_cache(maxsize=256)
def numeric_root(value: int, index: int) -> int | None:
    """The root that is taken for a number, always the same one; None where the field has none."""
    root = sp.ntheory.residue_ntheory.nthroot_mod(value, index, field()[0])
    return None if root is None else int(root)


def small_rational(value: int) -> sp.Rational | None:
    """The rational number of small numerator and denominator that a value is, or None.

    By the half-extended algorithm of Euclid (Wang 1981, SYMSAC, 212).
    """
    p = field()[0]
    a, b, u, v = p, value % p, 0, 1
    while b > LARGEST:
        q = a // b
        a, b, u, v = b, a - q * b, v, u - q * v
    if v == 0 or abs(v) > LARGEST:
        return None
    return sp.Rational(b, v)


def power_of_scale(ratio: int, scale: int, powers: Iterable[Fraction]) -> Fraction | None:
    """The power n for which ``scale**(12 n)`` is a ratio of two values."""
    p = field()[0]
    for n in powers:
        if pow(scale, int(n * ROOT), p) == ratio:
            return n
    return None
