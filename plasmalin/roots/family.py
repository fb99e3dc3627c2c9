"""One exact polynomial in omega for every point of a grid."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property
from typing import Any

import numpy as np
from numpy.typing import NDArray

Grid = Sequence[tuple[NDArray[Any], NDArray[Any]]]
"""The swept quantities, each as high and low part over the points; real or complex."""

Exact = tuple[Fraction, Fraction]
"""An exact complex number."""


@dataclass(frozen=True, eq=False)
class Family:
    """p(omega; g_1 ... g_G) = sum_t c_t omega^e_t0 prod_i g_i^e_ti.

    Attributes
    ----------
    exponents : ndarray of int64, shape (terms, 1 + G)
        The power of omega first.
    coefficients : tuple of (Fraction, Fraction)
        Exact real and imaginary parts.
    """

    exponents: NDArray[np.int64]
    coefficients: tuple[Exact, ...]

    @cached_property
    def degree(self) -> int:
        """In omega."""
        return int(self.exponents[:, 0].max())

    @cached_property
    def is_real(self) -> bool:
        return not any(im for _, im in self.coefficients)

    def at(self, grid: Grid, point: int) -> list[Exact]:
        """The exact coefficients at one grid point, lowest power of omega first."""
        return self.of([exact_value(hi[point], lo[point]) for hi, lo in grid])

    def scaled_by(self, binary: int, omega: int) -> Family:
        """Times 2^binary, with 2^omega times the unknown in place of omega."""
        factors = (Fraction(2) ** (binary + n * omega) for n in self.exponents[:, 0].tolist())
        scaled = ((re * f, im * f) for (re, im), f in zip(self.coefficients, factors, strict=True))
        return Family(self.exponents, tuple(scaled))

    def of(self, values: Sequence[Exact]) -> list[Exact]:
        """The exact coefficients for exact values of the swept quantities."""
        found: list[Exact] = [(Fraction(0), Fraction(0))] * (self.degree + 1)
        powers: dict[tuple[int, int], Exact] = {}
        for row, c in zip(self.exponents.tolist(), self.coefficients, strict=True):
            term = c
            for i, n in enumerate(row[1:]):
                if n:
                    if (i, n) not in powers:
                        powers[i, n] = _power(values[i], n)
                    term = times(term, powers[i, n])
            old = found[row[0]]
            found[row[0]] = old[0] + term[0], old[1] + term[1]
        return found


def exact_value(hi: Any, lo: Any) -> Exact:
    return (
        Fraction(float(hi.real)) + Fraction(float(lo.real)),
        Fraction(float(hi.imag)) + Fraction(float(lo.imag)),
    )


def times(a: Exact, b: Exact) -> Exact:
    if not a[1] and not b[1]:
        return a[0] * b[0], a[1]
    return a[0] * b[0] - a[1] * b[1], a[0] * b[1] + a[1] * b[0]


def _power(base: Exact, n: int) -> Exact:
    if not base[1]:
        return base[0] ** n, base[1]
    result: Exact = (Fraction(1), Fraction(0))
    for _ in range(n):
        result = times(result, base)
    return result
