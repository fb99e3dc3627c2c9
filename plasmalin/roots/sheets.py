"""All roots at many points in canonical order, proven point by point."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from .coefficients import Coefficients, chosen
from .discs import Discs, Guess, discs
from .doubledouble import Array
from .settling import settled
from .starts import cold_starts, eigenvalues, similar_starts

ATTEMPTS = 6
PATIENCE = 3
"""After so many attempts discs that are fair but not sharp are taken."""
NEARLY_REAL = 2.0**-30
"""Relative imaginary part below which a cold start is first taken as real."""
UNKNOWN = -1


@dataclass(frozen=True)
class Sheet:
    """Roots of the unknown over points.

    With real coefficients the rows hold the real roots, ascending, then those in the upper half plane, then their
    conjugates; with complex coefficients all roots, and `real` is 0.

    Attributes
    ----------
    re, im, radius : ndarray, shape (degree, points)
    real : ndarray of int, shape (points,)
        How many roots are real; UNKNOWN where there are no roots yet.
    """

    re: Array
    im: Array
    radius: Array
    real: NDArray[np.int64]

    @classmethod
    def unknown(cls, degree: int, points: int) -> Sheet:
        re, im, radius = (np.zeros((degree, points)) for _ in range(3))
        return cls(re, im, radius, np.full(points, UNKNOWN))

    def guess(self, real: int, mirrored: bool, points: NDArray[np.int64] | slice) -> Guess:
        """The points with that many real roots, as numbers near the roots."""
        rest = len(self.re) - real
        others = slice(real, real + rest // 2 if mirrored else None)
        re = chosen(self.re[others], points)
        z = np.empty(re.shape, np.complex128)
        z.real, z.imag = re, chosen(self.im[others], points)
        return Guess(chosen(self.re[:real], points), z, mirrored)

    def put(self, points: NDArray[np.int64] | slice, guess: Guess, found: Discs) -> None:
        """Store corrected roots with their radii."""
        x, z, real = guess.x - found.x_step, guess.z - found.z_step, len(guess.x)
        self.re[:real, points], self.im[:real, points] = x.real, 0.0
        self.radius[:real, points] = found.x_radius
        upper = slice(real, real + len(z))
        for rows, sign in ((upper, 1.0), (slice(real + len(z), None), -1.0)):
            if rows is upper or guess.mirrored:
                self.re[rows, points], self.im[rows, points] = z.real, sign * z.imag
                self.radius[rows, points] = found.z_radius
        self.real[points] = real

    @property
    def kinds(self) -> list[int]:
        """The numbers of real roots that occur."""
        return [int(n) for n in np.flatnonzero(np.bincount(self.real - UNKNOWN)[1:])]

    def at(self, points: NDArray[Any] | slice) -> Sheet:
        re, im, radius = (chosen(rows, points) for rows in (self.re, self.im, self.radius))
        return Sheet(re, im, radius, self.real[points])

    def copy_from(self, other: Sheet, points: NDArray[Any]) -> None:
        for mine, theirs in zip(
            (self.re, self.im, self.radius), (other.re, other.im, other.radius), strict=True
        ):
            mine[:, points] = theirs
        self.real[points] = other.real


def proven(c: Coefficients, start: Sheet, rough: bool = False) -> Sheet:
    """The roots near the starts, with their discs; UNKNOWN where nothing is proven.

    Rough starts take steps in working precision first.
    """
    made = Sheet.unknown(c.degree, c.points)
    _prove(c, start, c.high_imag is None, made, rough)
    return made


def from_nothing(c: Coefficients) -> Sheet:
    """The same without starts: from eigenvalues where all are real, which is cheap, else from `cold_starts`."""
    near = eigenvalues(c)
    if c.high_imag is not None:
        return proven(c, _free(cold_starts(c, near)))
    start = _canonical(_free(near))
    start.real[start.real < c.degree] = UNKNOWN
    made = proven(c, start, True)
    left = made.real == UNKNOWN
    if left.any():
        made.copy_from(_from_cold(c.at(left), chosen(near, left)), left)
    return made


def from_similar(c: Coefficients, near: Sheet) -> Sheet:
    """From the proven roots of similar polynomials; where that fails from nothing."""
    made = Sheet.unknown(c.degree, c.points)
    real = near.real == c.degree
    for mine, z in ((real, near.re), (~real, near.re + 1j * near.im)):
        if mine.any():
            here = c.at(mine)
            start = _free(similar_starts(here, chosen(z, mine)))
            canonical = _canonical(start) if c.high_imag is None else start
            made.copy_from(proven(here, canonical, True), mine)
    left = made.real == UNKNOWN
    if left.any():
        made.copy_from(from_nothing(c.at(left)), left)
    return made


def _free(z: NDArray[Any]) -> Sheet:
    return Sheet(z.real.copy(), z.imag.copy(), NEARLY_REAL * np.abs(z), np.zeros(z.shape[1], int))


def _from_cold(c: Coefficients, near: NDArray[np.complex128]) -> Sheet:
    """From cold starts: those that are nearly real taken as real, then all as if the coefficients were complex.

    The latter tells close real roots from a pair.
    """
    start = _free(cold_starts(c, near))
    made = proven(c, _canonical(start))
    left = made.real == UNKNOWN
    if left.any():
        here, apart = c.at(left), Sheet.unknown(c.degree, int(left.sum()))
        _prove(here, start.at(left), False, apart, False)
        made.copy_from(proven(here, _canonical(apart)), left)
    return made


def _prove(c: Coefficients, start: Sheet, mirrored: bool, made: Sheet, rough: bool) -> None:
    """Points with the same number of real roots go together."""
    for real in start.kinds:
        points = np.flatnonzero(start.real == real)
        everything = len(points) == c.points
        guess = start.guess(real, mirrored, slice(None) if everything else points)
        here = c if everything else c.at(points)
        _polish(here, settled(here, guess) if rough else guess, points, made)


def _polish(c: Coefficients, guess: Guess, points: NDArray[np.int64], made: Sheet) -> None:
    """Steps until every disc is sharp; points that are done drop out."""
    for attempt in range(ATTEMPTS):
        found = discs(c, guess)
        done = found.sharp if attempt < PATIENCE else found.fair
        if done.all():
            made.put(slice(None) if len(points) == len(made.real) else points, guess, found)
            return
        made.put(points[done], guess.at(done), found.at(done))
        guess = Guess(guess.x - found.x_step, guess.z - found.z_step, guess.mirrored)
        alive = ~done & np.isfinite(guess.x).all(axis=0) & np.isfinite(guess.z).all(axis=0)
        c, guess, points = c.at(alive), guess.at(alive), points[alive]
        if not len(points):
            return


def _canonical(found: Sheet) -> Sheet:
    """Starts in canonical order; where a disc meets the real axis a real root is likely, and proven or not later."""
    im = np.where(np.abs(found.im) <= found.radius, 0.0, found.im)
    half = np.sign(im) % 3
    order = np.lexsort((found.re, half), axis=0)
    re, im, radius = (np.take_along_axis(a, order, axis=0) for a in (found.re, im, found.radius))
    real = (half == 0).sum(axis=0)
    matched = (half == 1).sum(axis=0) == (half == 2).sum(axis=0)
    return Sheet(re, im, radius, np.where(matched & (found.real != UNKNOWN), real, UNKNOWN))
