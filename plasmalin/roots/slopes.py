"""How fast roots move: d omega/d s = −p_s / p_omega from the polynomial itself."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from math import gcd
from typing import Any

import numpy as np
from numpy.typing import NDArray

from .family import Family
from .scaling import in_binary

BATCH = 1024
"""Points at a time, so that the work stays in cache."""


@dataclass(frozen=True)
class _Terms:
    """A family as arrays.

    Attributes
    ----------
    step : int
        Only powers of omega^step occur.
    monomials : ndarray of int, shape (m, G)
        The powers of the swept quantities that occur together.
    parts : ndarray, shape (2, degree / step + 1, m)
        Real and imaginary parts, times 2^exponents.
    exponents : ndarray of int, of the same shape
    """

    step: int
    monomials: NDArray[np.int64]
    parts: NDArray[np.float64]
    exponents: NDArray[np.int64]


@lru_cache(maxsize=64)
def _terms(family: Family) -> _Terms:
    rows = family.exponents.tolist()
    step = gcd(*(row[0] for row in rows)) or 1
    places: dict[tuple[int, ...], int] = {}
    place = [(row[0] // step, places.setdefault(tuple(row[1:]), len(places))) for row in rows]
    parts = np.zeros((2, family.degree // step + 1, len(places)))
    exponents = np.zeros(parts.shape, np.int64)
    for at, c in zip(place, family.coefficients, strict=True):
        for part, number in enumerate(c):
            if number:
                parts[part, *at], _, exponents[part, *at] = in_binary(number)
    monomials = np.array(list(places), np.int64).reshape(len(places), -1)
    return _Terms(step, monomials, parts, exponents)


class ScaledFamily:
    """A family in doubles, omega and the swept quantities scaled by powers of two."""

    def __init__(self, family: Family, omega: NDArray[Any], grid: list[NDArray[Any]]) -> None:
        self.terms = _terms(family)
        self.scales = [_power_of_two(omega), *(_power_of_two(g) for g in grid)]
        self.coefficients = self._coefficients()

    def _coefficients(self) -> NDArray[Any]:
        terms = self.terms
        powers = self.scales[0] * terms.step * np.arange(terms.parts.shape[1])
        scale = terms.exponents + powers[:, None] + terms.monomials @ np.array(self.scales[1:], int)
        largest = int(scale[terms.parts != 0].max())
        re, im = np.ldexp(terms.parts, np.maximum(scale - largest, -2000))
        return np.asarray(re + 1j * im if im.any() else re)

    def slope(
        self, omega: NDArray[np.complex128], grid: list[NDArray[Any]], rates: list[NDArray[Any]]
    ) -> NDArray[np.complex128]:
        """d omega / d s, shape (points, roots); `rates` are d g_i / d s, shape (points,)."""
        g = [np.ldexp(1.0, -s) * x for s, x in zip(self.scales[1:], grid, strict=True)]
        ds = [np.ldexp(1.0, -s) * x for s, x in zip(self.scales[1:], rates, strict=True)]
        slopes = np.empty_like(omega)
        for first in range(0, len(omega), BATCH):
            part = slice(first, first + BATCH)
            z = omega[part].T
            with np.errstate(all="ignore"):
                z = np.ldexp(1.0, -self.scales[0]) * (z if z.imag.any() else z.real)
                slope = self._mirrored_slope(z, [x[part] for x in g], [x[part] for x in ds])
                slope[~np.isfinite(slope)] = 0.0
            slopes[part] = slope.T
        slopes *= np.ldexp(1.0, self.scales[0])
        return slopes

    def _mirrored_slope(
        self, z: NDArray[Any], g: list[NDArray[Any]], ds: list[NDArray[Any]]
    ) -> NDArray[Any]:
        """Shape (roots, points); where roots come as omega and −omega, half of them are enough."""
        half = len(z) // 2
        paired = self.terms.step % 2 == 0 and 2 * half == len(z)
        if not paired or bool((z[:half] != -z[: -half - 1 : -1]).any()):
            return self._scaled_slope(z, g, ds)
        upper = self._scaled_slope(z[half:], g, ds)
        return np.concatenate([-upper[::-1], upper])

    def _scaled_slope(
        self, z: NDArray[Any], g: list[NDArray[Any]], ds: list[NDArray[Any]]
    ) -> NDArray[Any]:
        """By Horner schemes in the power of z in which the polynomial is one; shape (roots, points)."""
        step = self.terms.step
        terms, rates = self.polynomials(g, ds)
        x = z**step
        p_s, p_x = np.zeros((2, *x.shape), np.result_type(x, terms, rates))
        p_s += rates[-1]
        p_x += (len(terms) - 1) * terms[-1]
        for n in range(len(terms) - 2, -1, -1):
            p_s *= x
            p_s += rates[n]
            if n:
                p_x *= x
                p_x += n * terms[n]
        return np.asarray(-p_s / (p_x * (step * z ** (step - 1))))

    def polynomials(
        self, g: list[NDArray[Any]], ds: list[NDArray[Any]]
    ) -> tuple[NDArray[Any], NDArray[Any]]:
        """The coefficients of every power of omega^step over the points, and their derivatives along the sweep."""
        powers = [power_table(x, n) for x, n in zip(g, self.terms.monomials.T, strict=True)]
        whole = np.prod([part for part, _ in powers], axis=0)
        change: Any = 0.0
        for i, dx in enumerate(ds):
            factors = [rate if i == j else part for j, (part, rate) in enumerate(powers)]
            change = change + np.prod(factors, axis=0) * dx
        # Not by BLAS, whose sums may depend on the number of threads.
        terms, rates = (np.einsum("jm,mn->jn", self.coefficients, a) for a in (whole, change))
        return terms, rates


def power_table(x: NDArray[Any], exponents: NDArray[np.int64]) -> tuple[NDArray[Any], NDArray[Any]]:
    """x to all exponents, and the derivatives, shape (exponents, points) each."""
    table = np.ones((int(exponents.max()) + 1, len(x)), x.dtype)
    for n in range(len(table) - 1):
        np.multiply(table[n], x, out=table[n + 1])
    return table[exponents], exponents[:, None] * table[np.maximum(exponents - 1, 0)]


def _power_of_two(values: NDArray[Any]) -> int:
    """The exponent that brings the largest finite size near 1."""
    sizes = np.abs(values[np.isfinite(values)])
    largest = float(sizes.max(initial=0.0))
    return int(np.frexp(largest)[1]) if largest else 0
