"""The proof that no root is missing: one disc per root, centre and radius from one evaluation.

For distinct z_1 ... z_n let W_i = p(z_i) / (c_n prod_j (z_i - z_j)). The roots of p are the eigenvalues of
diag(z) - e W^T (Smith 1970, J. ACM 17, 137; Börsch-Supan 1963, Numer. Math. 5, 113; from memory), and Gerschgorin's
theorem on that matrix with column j scaled down puts exactly one root in each disc

    |omega - (z_j - W_j)| <= 2 (n - 1) t |W_j|,   t = max_i |W_i| / (distance of z_i to its nearest neighbour),

once t <= 1 / (2n + 4). The radius is of second order in |W|. docs/certificate.md has the proof with all rounding.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from .coefficients import Coefficients, chosen
from .doubledouble import UNIT, Array, complex_horner, complex_noise, horner, real_noise

FAIR, SHARP = 2.0**-53, 2.0**-56
"""Radii relative to a root that are good enough, and that leave it right to the last digit."""
LEAST = 1.25
"""A radius of so many times what the error of the coefficients makes it cannot become much smaller."""
SMALLEST_PART = 2.0**-24
"""Real and imaginary part are made right one by one down to this share of the root."""
LEADING = 2.0**-150, 2.0**200
LOWEST, BOTTOM, LARGEST, DEGREE = 2.0**-300, 2.0**-100, 2.0**500, 70
"""Bounds on c_n, size_0, c_n prod(z_i - z_j) and sum_j size_j |z|^j and n within which no underflow hides an error."""


@dataclass(frozen=True)
class Guess:
    """n numbers near the roots, per point.

    Attributes
    ----------
    x : ndarray of float64, shape (real, points)
        Real ones, ascending.
    z : ndarray of complex128, shape (others, points)
    mirrored : bool
        Whether the conjugates of all z are meant too.
    """

    x: Array
    z: NDArray[np.complex128]
    mirrored: bool

    @property
    def degree(self) -> int:
        return len(self.x) + len(self.z) * (2 if self.mirrored else 1)

    def at(self, points: NDArray[Any]) -> Guess:
        return Guess(chosen(self.x, points), chosen(self.z, points), self.mirrored)


@dataclass(frozen=True)
class Spread:
    """prod_j (z_i - z_j) and the distance to the nearest other, for both kinds of roots."""

    x_product: Array
    z_product: NDArray[np.complex128]
    x_gap: Array
    z_gap: Array


def spread(guess: Guess) -> Spread:
    """All differences, each taken once."""
    x, z = guess.x, guess.z
    product, z_product = np.ones_like(x), np.ones_like(z)
    for i in range(len(x) - 1):
        difference = x[i] - x[i + 1 :]
        _share(product, i, difference, difference)
    np.negative(product[1::2], out=product[1::2])
    gap, z_square = _neighbors(x), np.full(z.shape, np.inf)
    for i in range(len(z)):
        if guess.mirrored:
            _against_real(i, guess, product, z_product, gap, z_square)
        difference = z[i] - z[i + 1 :]
        _apart(z_product, z_square, i, difference, difference)
        if guess.mirrored:
            # Up to its sign z_j - conj(z_i) is the conjugate of z_i - conj(z_j).
            difference = z[i] - z[i + 1 :].conj()
            _apart(z_product, z_square, i, difference, difference.conj())
    if not guess.mirrored:
        np.negative(z_product[1::2], out=z_product[1::2])
    return Spread(product, z_product, gap, np.sqrt(z_square))


def _share(product: NDArray[Any], i: int, mine: NDArray[Any], theirs: NDArray[Any]) -> None:
    """The differences of root i to the later ones multiplied into both products, the signs of theirs left out."""
    product[i] *= mine.prod(axis=0)
    product[i + 1 :] *= theirs


def _neighbors(x: Array) -> Array:
    """The smaller distance to the next one above and below; negative where the order is broken."""
    gap = np.full(x.shape, np.inf)
    if len(x) > 1:
        steps = np.diff(x, axis=0)
        gap[:-1] = steps
        np.minimum(gap[1:], steps, out=gap[1:])
    return gap


def _against_real(
    i: int,
    guess: Guess,
    product: Array,
    z_product: NDArray[np.complex128],
    gap: Array,
    z_square: Array,
) -> None:
    """The differences of z_i to all real roots and to its own mirror image."""
    z = guess.z[i]
    z_product[i] *= 2j * z.imag
    np.minimum(z_square[i], 4 * z.imag**2, out=z_square[i])
    if len(guess.x):
        difference = z - guess.x
        square = _square(difference)
        z_product[i] *= difference.prod(axis=0)
        product *= square
        np.minimum(gap, np.sqrt(square), out=gap)
        np.minimum(z_square[i], square.min(axis=0), out=z_square[i])


def _apart(
    product: NDArray[np.complex128],
    nearest: Array,
    i: int,
    mine: NDArray[np.complex128],
    theirs: NDArray[np.complex128],
) -> None:
    """The same for z_i and the later ones, with the squares of the distances."""
    if len(mine):
        square = _square(mine)
        np.minimum(nearest[i], square.min(axis=0), out=nearest[i])
        np.minimum(nearest[i + 1 :], square, out=nearest[i + 1 :])
        _share(product, i, mine, theirs)


def _square(z: NDArray[np.complex128]) -> Array:
    return np.asarray(z.real**2 + z.imag**2)


@dataclass(frozen=True)
class Discs:
    """Steps, radii about ``guess - step``, and for every point whether one root lies in every disc.

    `fair` discs are small against the root; `sharp` ones against its real and its imaginary part, or as small as
    the error of the coefficients lets them be.
    """

    x_step: Array
    z_step: NDArray[np.complex128]
    x_radius: Array
    z_radius: Array
    fair: NDArray[np.bool_]
    sharp: NDArray[np.bool_]

    def at(self, points: NDArray[np.bool_]) -> Discs:
        return Discs(
            chosen(self.x_step, points),
            chosen(self.z_step, points),
            chosen(self.x_radius, points),
            chosen(self.z_radius, points),
            self.fair[points],
            self.sharp[points],
        )


def discs(c: Coefficients, guess: Guess) -> Discs:
    """The discs that one evaluation at the guess proves."""
    n = guess.degree
    apart = spread(guess)
    x_value, x_error, x_fits = _real_values(c, guess.x)
    z_value, z_error, z_fits = _complex_values(c, guess.z)
    x_bottom, z_bottom = c.high[n] * apart.x_product, c.plain[n] * apart.z_product
    x_step, z_step = x_value / x_bottom, z_value / z_bottom
    x_doubt = _doubt(x_value, x_error, x_bottom, n)
    z_doubt = _doubt(z_value, z_error, z_bottom, n)
    x_large, z_large = np.abs(x_step) + x_doubt, np.abs(z_step) + z_doubt
    t = np.maximum(_largest(x_large / apart.x_gap), _largest(z_large / apart.z_gap))
    t *= 1 + 2.0**-40
    proven = (t <= 1 / (2 * n + 4)) & x_fits & z_fits & _in_range(c)
    proven &= _smallest(apart.x_gap) > 0
    proven &= _smallest(np.abs(x_bottom)) >= BOTTOM
    proven &= _smallest(np.abs(z_bottom)) >= BOTTOM
    second = 2 * (n - 1) * t * (1 + 2.0**-40)
    x_radius, z_radius = second * x_large + x_doubt, second * z_large + z_doubt
    x, z = guess.x - x_step, guess.z - z_step
    fair = proven & _within(x_radius, FAIR * np.abs(x)) & _within(z_radius, FAIR * np.abs(z))
    x_limit = np.maximum(SHARP * np.abs(x), LEAST * x_error / np.abs(x_bottom))
    z_limit = np.maximum(SHARP * _part(z), LEAST * z_error / np.abs(z_bottom))
    sharp = fair & _within(x_radius, x_limit) & _within(z_radius, z_limit)
    return Discs(x_step, z_step, x_radius, z_radius, fair, sharp)


def _largest(a: Array) -> Array:
    return np.asarray(a.max(axis=0, initial=0.0))


def _smallest(a: Array) -> Array:
    return np.asarray(a.min(axis=0, initial=np.inf))


def _real_values(c: Coefficients, x: Array) -> tuple[Array, Array, NDArray[np.bool_]]:
    if not len(x):
        return x, x, np.ones(x.shape[1], bool)
    value = np.add(*horner(c.real_pairs(), x))
    return value, *_error(c, np.abs(x), real_noise(c.degree))


def _complex_values(
    c: Coefficients, z: NDArray[np.complex128]
) -> tuple[NDArray[np.complex128], Array, NDArray[np.bool_]]:
    if not len(z):
        return z, z.real, np.ones(z.shape[1], bool)
    value = np.empty(z.shape, np.complex128)
    re, im = complex_horner(c.real_pairs(), c.imag_pairs(), z)
    np.add(*re, out=value.real)
    np.add(*im, out=value.imag)
    return value, *_error(c, np.abs(z), complex_noise(c.degree))


def _error(c: Coefficients, magnitude: Array, noise: int) -> tuple[Array, NDArray[np.bool_]]:
    """The error of the values, and whether they are far from overflow."""
    total = np.empty(magnitude.shape)
    total[...] = c.size[-1]
    for size in c.size[-2::-1]:
        total *= magnitude
        total += size
    fits = _largest(total) <= LARGEST
    total *= (c.noise + noise) * (UNIT**2 * (1 + 2.0**-40))
    return total, fits


def _doubt(value: NDArray[Any], error: Array, bottom: NDArray[Any], n: int) -> Array:
    """How far the step may be off: error of the value, and rounding in the product and the quotient."""
    rounding = (4 * n + 16) * UNIT
    return np.asarray((error + rounding * np.abs(value)) / np.abs(bottom) * (1 + 2.0**-40))


def _in_range(c: Coefficients) -> NDArray[np.bool_]:
    """Whether the ends of the polynomial are neither lost in rounding nor near underflow."""
    lead = np.abs(c.plain[-1])
    known = c.noise * UNIT * c.size[-1] <= lead
    fits = (lead >= LEADING[0]) & (lead <= LEADING[1]) & (c.size[0] >= LOWEST)
    return np.asarray(fits & known & (c.degree <= DEGREE))


def _within(radius: Array, limit: Array) -> NDArray[np.bool_]:
    return np.asarray((radius <= limit).all(axis=0))


def _part(z: NDArray[np.complex128]) -> Array:
    """The smaller of the two parts, but no less than a share of the whole."""
    part = np.minimum(np.abs(z.real), np.abs(z.imag))
    return np.asarray(np.maximum(part, SMALLEST_PART * np.abs(z)))
