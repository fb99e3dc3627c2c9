"""How fast roots move: d omega/d s = −p_s / p_omega from the polynomial itself."""

from __future__ import annotations

from fractions import Fraction
from typing import Any

import numpy as np
from numpy.typing import NDArray

from .family import Family


class ScaledFamily:
    """A family in doubles, omega and the swept quantities scaled by powers of two."""

    def __init__(self, family: Family, omega: NDArray[Any], grid: list[NDArray[Any]]) -> None:
        self.exponents = family.exponents
        self.scales = [_power_of_two(omega), *(_power_of_two(g) for g in grid)]
        self.coefficients = self._coefficients(family)

    def _coefficients(self, family: Family) -> NDArray[np.complex128]:
        factors = [Fraction(2) ** s for s in self.scales]
        scaled = []
        for row, (re, im) in zip(family.exponents.tolist(), family.coefficients, strict=True):
            size = Fraction(1)
            for factor, n in zip(factors, row, strict=True):
                size *= factor**n
            scaled.append((re * size, im * size))
        largest = max(abs(x) for pair in scaled for x in pair)
        return np.array([complex(float(a / largest), float(b / largest)) for a, b in scaled])

    def slope(
        self, omega: NDArray[np.complex128], grid: list[NDArray[Any]], rates: list[NDArray[Any]]
    ) -> NDArray[np.complex128]:
        """d omega / d s, shape (points, roots); `rates` are d g_i / d s, shape (points,)."""
        z = np.ldexp(1.0, -self.scales[0]) * omega
        g = [np.ldexp(1.0, -s) * x for s, x in zip(self.scales[1:], grid, strict=True)]
        ds = [np.ldexp(1.0, -s) * x for s, x in zip(self.scales[1:], rates, strict=True)]
        p_omega, p_s = np.zeros_like(z), np.zeros_like(z)
        with np.errstate(all="ignore"):
            for row, c in zip(self.exponents.tolist(), self.coefficients, strict=True):
                term, rate = _monomial(c, row[1:], g, ds)
                if row[0]:
                    p_omega += (row[0] * term)[:, None] * z ** (row[0] - 1)
                p_s += rate[:, None] * z ** row[0]
            slope = -p_s / p_omega
        slope[~np.isfinite(slope)] = 0.0
        return np.asarray(np.ldexp(1.0, self.scales[0]) * slope)


def _monomial(
    c: complex, powers: list[int], g: list[NDArray[Any]], ds: list[NDArray[Any]]
) -> tuple[NDArray[Any], NDArray[Any]]:
    """A coefficient over the points and its derivative along the sweep."""
    size = len(g[0]) if g else 1
    term, rate = np.full(size, c), np.zeros(size, complex)
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
