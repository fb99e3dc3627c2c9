"""The eigenvalues of a matrix known in twice the working precision, one proven disc each.

With eigenvectors V and their approximate inverse Y, H is similar to B + E, E = V^-1 (H V - V B): B holds the
eigenvalues, E is small and known to its first digits, since the residual H V - V B is taken in twice the working
precision. Gerschgorin's theorem on B + E with its rows and columns scaled once for every eigenvalue puts that one into
a disc of second order in E. docs/certificate.md, section 9, has the proof with all rounding.

A real H has real V and B; a pair of complex eigenvalues a +- i b is a block ((a, b), (-b, a)) of B.
"""

from __future__ import annotations

from typing import Any, NamedTuple

import numpy as np
from numpy.typing import NDArray

from .discs import FAIR
from .doubledouble import UNIT, Array, two_product, two_sum
from .replay import ABOVE, TINY, Ball
from .sheets import UNKNOWN, Sheet

LEAST = 2.0**-300
"""The smallest share of one eigenvector that is scaled for in another: far below all that occurs, but not zero."""
CLOSE = FAIR / 4
"""Eigenvalues so near each other, relative to their size, are proven together."""
ATTEMPTS = 2
CONTRACTION = 0.25
"""The most that I - Y V may be."""


class Basis(NamedTuple):
    """Per point the eigenvalues a + i b, columns V for them, and the place of the other one of a pair.

    For a real matrix the columns of a pair are the real and the imaginary part of an eigenvector, and a real
    eigenvalue is its own partner; for a complex matrix every eigenvalue is.
    """

    a: Array
    b: Array
    vectors: NDArray[Any]
    partner: NDArray[np.int64]

    @property
    def paired(self) -> Array:
        """1 for one of a pair, else 0."""
        return np.asarray(self.partner != np.arange(self.partner.shape[1]), float)


class Uncertain(NamedTuple):
    """Numbers, and bounds on their errors."""

    value: NDArray[Any]
    bound: Array


@np.errstate(all="ignore")
def eigen_sheet(h: Ball, places: NDArray[np.int64], size: int) -> Sheet:
    """The eigenvalues at every point; UNKNOWN where they are not proven.

    Parameters
    ----------
    h : Ball
        The entries that are not zero, shape (points, entries).
    places : ndarray of int, shape (entries, 2)
        Row and column of each, row by row.
    size : int
    """
    made = Sheet.unknown(size, len(h.high))
    known = np.isfinite(h.bound).all(axis=1) & np.isfinite(h.high).all(axis=1)
    points = np.flatnonzero(known)
    _put(made, points, Ball(*(part[points] for part in h)), places)
    return made


def _put(made: Sheet, points: NDArray[np.int64], h: Ball, places: NDArray[np.int64]) -> None:
    """Halved where LAPACK gives up on one of many matrices, which says so for all of them."""
    matrix = np.zeros((len(h.high), len(made.re), len(made.re)), h.high.dtype)
    matrix[:, places[:, 0], places[:, 1]] = h.high
    try:
        _prove(made, points, h, places, basis_of(matrix))
    except np.linalg.LinAlgError:
        middle = len(points) // 2
        for half in (slice(middle), slice(middle, None)) if middle else ():
            _put(made, points[half], Ball(*(part[half] for part in h)), places)


def _prove(
    made: Sheet,
    points: NDArray[np.int64],
    h: Ball,
    places: NDArray[np.int64],
    basis: Basis,
    attempts: int = ATTEMPTS,
) -> None:
    """Discs from eigenvectors; points without a proof again from the eigenvectors corrected."""
    e = similar(basis, residual(h, places, basis))
    found = discs_of(basis, e, not np.iscomplexobj(h.high))
    made.copy_from(found, points)
    left = (found.real == UNKNOWN) & np.isfinite(e.bound).all(axis=(1, 2))
    if attempts > 1 and left.any():
        again = Basis(*(x[left] for x in basis)), Uncertain(*(x[left] for x in e))
        rest = Ball(*(x[left] for x in h))
        _prove(made, points[left], rest, places, corrected(*again), attempts - 1)


def basis_of(matrix: NDArray[Any]) -> Basis:
    """From LAPACK, which returns the conjugate of an eigenvalue of a real matrix next to it."""
    values, vectors = np.linalg.eig(matrix)
    partner = np.broadcast_to(np.arange(values.shape[1]), values.shape)
    if np.iscomplexobj(matrix):
        return Basis(values.real, values.imag, vectors, partner)
    lower = values.imag[:, None, :] < 0
    real = np.where(lower, -vectors.imag, vectors.real)
    step = np.sign(np.nan_to_num(values.imag)).astype(np.int64)
    partner = np.clip(partner + step, 0, values.shape[1] - 1)
    return Basis(values.real, values.imag, real, partner)


def corrected(basis: Basis, e: Uncertain) -> Basis:
    """Eigenvalues and eigenvectors of B + E to first order in E."""
    v, shift = basis.vectors, np.einsum("pii->pi", e.value)
    centre = basis.a + shift.real + 1j * (basis.b + shift.imag)
    gap = centre[:, None, :] - centre[:, :, None]
    share = np.where(np.abs(gap) > CLOSE * np.abs(centre[:, None, :]), e.value / gap, 0.0)
    if not np.iscomplexobj(v):
        other = np.take_along_axis(v, basis.partner[:, None, :], axis=2)
        v = v + 1j * other * basis.paired[:, None, :]
    better = v + v @ share
    kept = better if np.iscomplexobj(basis.vectors) else better.real
    return Basis(centre.real, centre.imag, kept, basis.partner)


def residual(h: Ball, places: NDArray[np.int64], basis: Basis) -> Uncertain:
    """H V - V B."""
    v, a, b = basis.vectors, basis.a[:, None, :], basis.b[:, None, :]
    if np.iscomplexobj(v):
        other = v
        re, im = Ball(h.high.real, h.low.real, h.bound), Ball(h.high.imag, h.low.imag, h.bound)
        minus = Ball(-im.high, -im.low, im.bound)
        x, y = v.real.copy(), v.imag.copy()
        value = accurate([(re, x), (minus, y)], [(-a, x), (b, y)], places) + 1j * accurate(
            [(re, y), (im, x)], [(-a, y), (-b, x)], places
        )
    else:
        other = np.take_along_axis(v, basis.partner[:, None, :], axis=2)
        value = accurate([(h, v)], [(-a, v), (b, other)], places)
    terms = 2 * (1 + np.bincount(places[:, 0]).max())
    noise = 12 * (terms + 2) ** 2 * UNIT**2
    size = np.zeros(v.shape)
    size[:, places[:, 0], places[:, 1]] = h.bound + noise * np.abs(h.high)
    bound = _product(size, np.abs(v))
    bound += noise * (np.abs(a) + np.abs(b)) * (np.abs(v) + np.abs(other))
    return Uncertain(value, (bound + 2 * UNIT * np.abs(value)) * ABOVE)


def accurate(
    sparse: list[tuple[Ball, Array]], more: list[tuple[Array, Array]], places: NDArray[np.int64]
) -> Array:
    """A sum of sparse matrices times full ones and of products of full ones, entry by entry, as if in twice the working precision.

    All products and sums with their errors (Ogita, Rump and Oishi 2005, SIAM J. Sci. Comput. 26, 1955; from memory).
    """
    total, error = two_product(*more[0])

    def add(rows: Any, product: Array, rest: Array) -> None:
        total[:, rows], lost = two_sum(total[:, rows], product)
        error[:, rows] += lost + rest

    for x, y in more[1:]:
        add(slice(None), *two_product(x, y))
    rows, columns = places.T
    turn = np.arange(len(rows)) - np.searchsorted(rows, rows)
    for h, v in sparse:
        for t in range(turn.max() + 1):
            chosen = np.flatnonzero(turn == t)
            high, low = h.high[:, chosen, None], h.low[:, chosen, None]
            taken = v[:, columns[chosen]]
            product, rest = two_product(high, taken)
            add(rows[chosen], product, rest + low * taken)
    return np.asarray(total + error)


def similar(basis: Basis, rest: Uncertain) -> Uncertain:
    """E = V^-1 (H V - V B) for eigenvalues one by one; NaN where V is too near a singular matrix."""
    v = basis.vectors
    size = v.shape[1]
    rounding = 4 * (size + 4) * UNIT
    inverse = np.linalg.inv(v)
    first = inverse @ rest.value
    doubt = _product(np.abs(inverse), rest.bound + rounding * np.abs(rest.value))
    off = np.abs(np.eye(size) - inverse @ v) + rounding * _product(np.abs(inverse), np.abs(v))
    scale = off.sum(axis=2, keepdims=True) * ABOVE
    shrink = (_product(off, scale) / scale).max(axis=1, keepdims=True) * ABOVE
    second = _product(off, np.abs(first) + doubt)
    beyond = (second / scale).max(axis=1, keepdims=True) * scale * shrink * (4 / 3 * ABOVE)
    bound = (doubt + second + beyond) * ABOVE
    bound[~(shrink <= CONTRACTION)[:, 0, 0]] = np.nan
    return _one_by_one(basis, Uncertain(first, bound))


def _one_by_one(basis: Basis, e: Uncertain) -> Uncertain:
    """From real and imaginary parts of eigenvectors to the eigenvectors themselves."""
    s = basis.paired
    if not s.any():
        return e
    row, column = basis.partner[:, :, None], basis.partner[:, None, :]
    mine, theirs = s[:, :, None], s[:, None, :]
    half = 1 / (1 + mine)

    def at(x: NDArray[Any]) -> tuple[NDArray[Any], NDArray[Any], NDArray[Any]]:
        across = np.take_along_axis(x, column, axis=2) * theirs
        below = np.take_along_axis(x, row, axis=1) * mine
        return across, below, np.take_along_axis(across, row, axis=1) * mine

    across, below, both = at(e.value)
    value = half * (e.value + both) + 1j * (half * (across - below))
    sizes = np.abs(e.value)
    bound = e.bound + 8 * UNIT * sizes
    return Uncertain(value, half * (bound + sum(at(bound))) * ABOVE)


def discs_of(basis: Basis, e: Uncertain, is_real: bool) -> Sheet:
    """One disc about every a + i b + E_ii, and all of them disjoint; UNKNOWN where that is not proven."""
    shift = np.einsum("pii->pi", e.value)
    re, im = basis.a + shift.real, basis.b + shift.imag
    near, far = _distances(basis, shift)
    size = np.hypot(re, im)
    together = far <= CLOSE * np.minimum(size[:, :, None], size[:, None, :])
    diagonal = np.eye(size.shape[1], dtype=bool)
    together |= diagonal
    weight = e.bound + np.where(diagonal, 0.0, np.abs(e.value))
    scale = np.where(together, 1.0, 2 * weight / near)
    scale = np.where(together, 1.0, 2 * _product(weight, scale) / near + LEAST)
    reach = _product(weight, scale)
    radius = np.where(together, far + reach, 0.0).max(axis=1) * ABOVE
    mine, theirs = radius[:, None, :], radius[:, :, None]
    apart = (reach <= scale * (near - mine) * (1 - 2.0**-40)) & (near > 6 * (mine + theirs))
    pair = [np.take_along_axis(x, basis.partner, axis=1) for x in (basis.a, basis.b)]
    alike = (pair[0] == basis.a) & ((pair[1] == -basis.b) | (basis.paired == 0))
    good = (
        alike.all(axis=1)
        & (apart | together).all(axis=(1, 2))
        & (radius <= FAIR * size).all(axis=1)
    )
    if together.sum() > together.shape[0] * together.shape[1]:
        links = together.astype(float)
        good &= ((links @ links > 0) == together).all(axis=(1, 2))
    alone = together.sum(axis=1) == 1
    exact = alone & (np.abs(im) <= radius) & is_real
    return _sheet(re, np.where(exact, 0.0, im), radius, exact, good)


def _distances(basis: Basis, shift: NDArray[Any]) -> tuple[Array, Array]:
    """Lower and upper bounds of all distances between the centres."""

    def differences(x: Array) -> Array:
        return np.asarray(x[:, :, None] - x[:, None, :])

    distance = np.hypot(
        differences(basis.a) + differences(shift.real),
        differences(basis.b) + differences(shift.imag),
    )
    size = np.abs(shift)
    doubt = 2.0**-50 * (distance + size[:, :, None] + size[:, None, :])
    return distance - doubt, distance + doubt


def _sheet(
    re: Array, im: Array, radius: Array, exact: NDArray[np.bool_], good: NDArray[np.bool_]
) -> Sheet:
    """Roots that are exactly real first, ascending."""
    order = np.lexsort((re, ~exact), axis=1)
    re, im, radius = (np.take_along_axis(x, order, axis=1).T for x in (re, im, radius))
    return Sheet(re, im, radius, np.where(good, exact.sum(axis=1), UNKNOWN))


def _product(x: Array, y: Array) -> Array:
    """A bound on a product of matrices without negative entries."""
    return np.asarray((x @ y) * ABOVE + TINY)
