"""Twice the working precision from ordinary doubles: split products, exact sums, compensated Horner steps.

A step takes value*x + c with the rounding error of the product and of the sum recovered exactly (Dekker 1971, Numer.
Math. 18, 224; Knuth, TAOCP vol. 2, 4.2.2). The errors travel along in a second array, as in the compensated Horner
scheme (Graillat, Langlois and Louvet 2009, Japan J. Indust. Appl. Math. 26, 191; from memory). ``high + low`` at the
end is as good as Horner in twice the precision; docs/certificate.md proves the bounds that the `noise` functions state.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any, TypeAlias

import numpy as np
from numpy.typing import NDArray

Array: TypeAlias = NDArray[np.float64]
Pair: TypeAlias = tuple[Any, Any]
"""High and low part, arrays or numbers: their sum, unevaluated."""

UNIT = 2.0**-53
SPLITTER = 2.0**27 + 1.0
LEADING = np.int64(-1 << 27)
"""Keeps sign, exponent and the 26 leading bits of a double."""


def real_noise(steps: int) -> int:
    """Error of `horner` in units of UNIT^2 sum |c_j x^j|."""
    return 8 * steps**2 + 12 * steps + 6


def complex_noise(steps: int) -> int:
    """The same for `complex_horner`."""
    return 36 * steps**2 + 48 * steps + 12


def split(a: Array) -> tuple[Array, Array]:
    """a = high + low exactly, each of at most 26 bits."""
    scaled = SPLITTER * a
    high = scaled - (scaled - a)
    return high, a - high


def two_sum(a: Array, b: Array) -> tuple[Array, Array]:
    """The rounded sum and its error, exactly."""
    total = a + b
    virtual = total - a
    return total, (a - (total - virtual)) + (b - virtual)


def quick_two_sum(a: Array, b: Array) -> tuple[Array, Array]:
    """The same for |b| <= |a|."""
    total = a + b
    return total, b - (total - a)


def two_product(a: Array, b: Array) -> tuple[Array, Array]:
    """The rounded product and its error, exactly."""
    product = a * b
    high, rest = np.empty_like(a), np.empty_like(a)
    error, work = np.empty_like(product), np.empty_like(product)
    cut(a, high, rest)
    product_error((high, rest), split(b), product, error, work)
    return product, error


def times(x: Pair, y: Pair) -> tuple[Array, Array]:
    """A product to a relative 8 UNIT^2."""
    product, error = two_product(x[0], y[0])
    for a, b in ((x[0], y[1]), (x[1], y[0])):
        error += a * b
    return quick_two_sum(product, error)


def plus(x: Pair, y: Pair) -> tuple[Any, Any]:
    """A sum to 4 UNIT^2 (|x| + |y|); also for complex numbers, part by part."""
    total, error = two_sum(x[0], y[0])
    return two_sum(total, error + (x[1] + y[1]))


def complex_times(x: Pair, y: Pair) -> tuple[Any, Any]:
    """A product of complex numbers, each part to 20 UNIT^2 |x| |y|."""
    (a, b), (c, d) = (((p[0].real, p[1].real), (p[0].imag, p[1].imag)) for p in (x, y))
    minus_b = -b[0], -b[1]
    re, im = plus(times(a, c), times(minus_b, d)), plus(times(a, d), times(b, c))
    return re[0] + 1j * im[0], re[1] + 1j * im[1]


def power(x: Pair, n: int) -> tuple[Array, Array]:
    """x^n for n >= 1, to a relative 8 (n - 1) UNIT^2."""
    result = x
    for _ in range(n - 1):
        result = times(result, x)
    return result


def cut(value: Array, high: Array, rest: Array) -> None:
    """value = high + rest, 26 and 27 bits."""
    np.bitwise_and(value.view(np.int64), LEADING, out=high.view(np.int64))
    np.subtract(value, high, out=rest)


def product_error(
    cut: tuple[Array, Array], x: tuple[Array, Array], product: Array, out: Array, work: Array
) -> None:
    """out = value * x - product; every partial sum is exact in this order."""
    high, rest = cut
    np.multiply(high, x[0], out=out)
    out -= product
    for half, factor in ((rest, x[0]), (high, x[1]), (rest, x[1])):
        np.multiply(half, factor, out=work)
        out += work


def sum_error(a: Array, b: Any, total: Array, out: Array, work: Array) -> None:
    """out = (a + b) - total, exactly."""
    np.subtract(total, a, out=work)
    np.subtract(total, work, out=out)
    np.subtract(a, out, out=out)
    np.subtract(b, work, out=work)
    out += work


def horner(coefficients: Sequence[Pair], x: Array) -> tuple[Array, Array]:
    """sum_j c_j x^j, highest power first, coefficients broadcast to the shape of x."""
    value, low, product, error, work, high, rest = (np.empty(x.shape) for _ in range(7))
    halves = split(x)
    value[...], low[...] = coefficients[0]
    for coefficient in coefficients[1:]:
        np.multiply(value, x, out=product)
        cut(value, high, rest)
        product_error((high, rest), halves, product, error, work)
        low *= x
        low += error
        np.add(product, coefficient[0], out=value)
        sum_error(product, coefficient[0], value, error, work)
        low += error
        low += coefficient[1]
    return value, low


def complex_horner(
    real: Sequence[Pair], imag: Sequence[Pair] | None, z: NDArray[np.complex128]
) -> tuple[tuple[Array, Array], tuple[Array, Array]]:
    """sum_j (a_j + i b_j) z^j, highest power first: real and imaginary part, each high and low."""
    shape, x, y = z.shape, z.real.copy(), z.imag.copy()
    re, im, re_high, re_rest, im_high, im_rest = (np.empty(shape) for _ in range(6))
    first, second, total, error, work = (np.empty(shape) for _ in range(5))
    re_low, im_low, old = np.empty(shape), np.empty(shape), np.empty(shape)
    x_halves, y_halves = split(x), split(y)
    re[...], re_low[...] = real[0]
    im[...], im_low[...] = imag[0] if imag else (0.0, 0.0)

    def rotate_low() -> None:
        """The errors so far, times z."""
        np.multiply(re_low, y, out=old)
        np.multiply(re_low, x, out=re_low)
        np.multiply(im_low, y, out=work)
        np.subtract(re_low, work, out=re_low)
        np.multiply(im_low, x, out=im_low)
        np.add(im_low, old, out=im_low)

    def product(cut: tuple[Array, Array], value: Array, factor: Array, out: Array) -> None:
        """out = value * factor; `error` what rounding took."""
        np.multiply(value, factor, out=out)
        product_error(cut, x_halves if factor is x else y_halves, out, error, work)

    def add(a: Array, b: Any, out: Array, low: Array) -> None:
        np.add(a, b, out=out)
        sum_error(a, b, out, error, work)
        np.add(low, error, out=low)

    for j in range(1, len(real)):
        rotate_low()
        cut(re, re_high, re_rest)
        cut(im, im_high, im_rest)
        product((im_high, im_rest), im, y, first)
        np.subtract(re_low, error, out=re_low)
        np.negative(first, out=second)
        product((re_high, re_rest), re, x, first)
        np.add(re_low, error, out=re_low)
        add(first, second, total, re_low)
        product((re_high, re_rest), re, y, first)
        np.add(im_low, error, out=im_low)
        product((im_high, im_rest), im, x, second)
        np.add(im_low, error, out=im_low)
        add(total, real[j][0], re, re_low)
        np.add(re_low, real[j][1], out=re_low)
        if imag:
            add(first, second, total, im_low)
            add(total, imag[j][0], im, im_low)
            np.add(im_low, imag[j][1], out=im_low)
        else:
            add(first, second, im, im_low)
    return (re, re_low), (im, im_low)
