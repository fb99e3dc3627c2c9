"""How fast roots move: d omega/d s = −p_s / p_omega from the polynomial itself."""

from __future__ import annotations

from fractions import Fraction
from math import gcd
from typing import Any

import numpy as np
from numpy.typing import NDArray

from .family import Family

BATCH = 1024
"""Points at a time, so that the work stays in cache."""


class ScaledFamily:
    """A family in doubles, omega and the swept quantities scaled by powers of two."""

    def __init__(self, family: Family, omega: NDArray[Any], grid: list[NDArray[Any]]) -> None:
        self.exponents = family.exponents
        self.scales = [_power_of_two(omega), *(_power_of_two(g) for g in grid)]
        self.coefficients = self._coefficients(family)

    def _coefficients(self, family: Family) -> NDArray[Any]:
        factors = [Fraction(2) ** s for s in self.scales]
        scaled = []
        for row, (re, im) in zip(family.exponents.tolist(), family.coefficients, strict=True):
            size = Fraction(1)
            for factor, n in zip(factors, row, strict=True):
                size *= factor**n
            scaled.append((re * size, im * size))
        largest = max(abs(x) for pair in scaled for x in pair)
        made = np.array([complex(float(a / largest), float(b / largest)) for a, b in scaled])
        return made if made.imag.any() else made.real

    def slope(
        self, omega: NDArray[np.complex128], grid: list[NDArray[Any]], rates: list[NDArray[Any]]
    ) -> NDArray[np.complex128]:
        """d omega / d s, shape (points, roots); `rates` are d g_i / d s, shape (points,)."""
        g = [np.ldexp(1.0, -s) * x for s, x in zip(self.scales[1:], grid, strict=True)]
        ds = [np.ldexp(1.0, -s) * x for s, x in zip(self.scales[1:], rates, strict=True)]
        slopes = np.empty_like(omega)
        for first in range(0, len(omega), BATCH):
            part = slice(first, first + BATCH)
            z = np.ldexp(1.0, -self.scales[0]) * omega[part].T
            if not z.imag.any():
                z = z.real.copy()
            with np.errstate(all="ignore"):
                slope = self._scaled_slope(z, [x[part] for x in g], [x[part] for x in ds])
            slopes[part] = np.where(np.isfinite(slope), slope, 0.0).T
        slopes *= np.ldexp(1.0, self.scales[0])
        return slopes

    def _scaled_slope(
        self, z: NDArray[Any], g: list[NDArray[Any]], ds: list[NDArray[Any]]
    ) -> NDArray[Any]:
        """By Horner schemes in the power of z in which the polynomial is one; shape (roots, points)."""
        terms, rates = self._by_power_of_omega(g, ds)
        step = gcd(*terms) or 1
        x, top = z**step, max(terms)
        p_s, p_x = np.zeros((2, *x.shape), np.result_type(x, *terms.values(), *rates.values()))
        p_s += rates[top]
        p_x += top // step * terms[top]
        for n in range(top - step, -1, -step):
            p_s *= x
            p_s += rates.get(n, 0.0)
            if n:
                p_x *= x
                p_x += n // step * terms.get(n, 0.0)
        return np.asarray(-p_s / (p_x * (step * z ** (step - 1))))

    def _by_power_of_omega(
        self, g: list[NDArray[Any]], ds: list[NDArray[Any]]
    ) -> tuple[dict[int, NDArray[Any]], dict[int, NDArray[Any]]]:
        """Every coefficient over the points, and its derivative along the sweep."""
        terms: dict[int, NDArray[Any]] = {}
        rates: dict[int, NDArray[Any]] = {}
        for row, c in zip(self.exponents.tolist(), self.coefficients, strict=True):
            term, rate = _monomial(c, row[1:], g, ds)
            terms[row[0]] = terms.get(row[0], 0.0) + term
            rates[row[0]] = rates.get(row[0], 0.0) + rate
        return terms, rates


def _monomial(
    c: complex, powers: list[int], g: list[NDArray[Any]], ds: list[NDArray[Any]]
) -> tuple[NDArray[Any], NDArray[Any]]:
    """A coefficient over the points and its derivative along the sweep."""
    size = len(g[0]) if g else 1
    term, rate = np.full(size, c), np.zeros(size)
    for n, x, dx in zip(powers, g, ds, strict=True):
        if n:
            rate = rate * x**n + term * n * x ** (n - 1) * dx
            term = term * x**n
    return term, rate


def _power_of_two(values: NDArray[Any]) -> int:
    """The exponent that brings the largest finite size near 1."""
    sizes = np.abs(values[np.isfinite(values)])
    largest = float(sizes.max(initial=0.0))
    return int(np.frexp(largest)[1]) if largest else 0
