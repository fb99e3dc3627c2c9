"""From the scaled unknown back to omega: square roots, the turn by i, exact zeros; errors part by part."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from .doubledouble import UNIT, Array
from .scaling import Structure
from .sheets import UNKNOWN, Sheet
from .solved import Solved, Status

TINY, HUGE = 2.0**-800, 2.0**800
"""Sizes of omega between which neither a part of it nor an error is lost to underflow or overflow."""
SPREAD = 2.0**180
"""A proven root is at most so many of its radii in size, and at least 2^53."""


class Parts(NamedTuple):
    """Real and imaginary parts with their errors, shape (roots, points) each."""

    re: Array
    im: Array
    re_error: Array
    im_error: Array


def in_omega(sheet: Sheet, structure: Structure, unknown: int) -> Solved:
    """The roots omega of a block, sorted by (Re, Im), with all rounding in the radii."""
    in_order = bool((sheet.real == len(sheet.re)).all())
    parts = _rounded(sheet)
    if structure.step == 2:
        in_order &= bool((parts.re > 0).all())
        parts = _both_square_roots(parts, in_order)
    if structure.turned:
        in_order = False
        parts = Parts(-parts.im, parts.re, parts.im_error, parts.re_error)
    scale = 2.0 ** (unknown // structure.step)
    lost = _lost(sheet, structure, scale)
    return _assembled(parts, scale, lost, structure.lowest, in_order)


def _lost(sheet: Sheet, structure: Structure, scale: float) -> NDArray[np.bool_]:
    """Points without a proof, and those where omega comes near the ends of the range of doubles."""
    ends = UNIT**-1 * sheet.radius.min(axis=0), SPREAD * sheet.radius.max(axis=0)
    low, high = (scale * (np.sqrt(end) if structure.step == 2 else end) for end in ends)
    return np.asarray((sheet.real == UNKNOWN) | ~((low >= TINY) & (high <= HUGE)))


def _rounded(sheet: Sheet) -> Parts:
    """Stored parts; an imaginary part that its disc does not tell from zero becomes zero."""
    re_error = sheet.radius + UNIT * np.abs(sheet.re)
    if (sheet.real == len(sheet.re)).all():
        return Parts(sheet.re, sheet.im, re_error, sheet.im)
    im = np.where(np.abs(sheet.im) <= sheet.radius, 0.0, sheet.im)
    im_error = 2 * sheet.radius + UNIT * np.abs(im)
    im_error[np.arange(len(im))[:, None] < sheet.real] = 0.0
    return Parts(sheet.re, im, re_error, im_error)


def _both_square_roots(square: Parts, all_positive: bool) -> Parts:
    """Both signs; in ascending order where all squares are positive."""
    if all_positive:
        root = np.sqrt(square.re)
        zero = np.zeros_like(root)
        upper = Parts(root, zero, square.re_error / root + 2 * UNIT * root, zero)
    else:
        upper = _square_root(square)
    return Parts(
        np.concatenate([-upper.re[::-1], upper.re]),
        np.concatenate([-upper.im[::-1], upper.im]),
        np.concatenate([upper.re_error[::-1], upper.re_error]),
        np.concatenate([upper.im_error[::-1], upper.im_error]),
    )


def _square_root(square: Parts) -> Parts:
    """The root with a positive real part (or positive imaginary one), both parts to full relative accuracy.

    d omega = conj(omega) d(omega^2) / (2 |omega|^2) bounds the errors part by part; twice that and the square of
    the error cover what is of higher order.
    """
    size = np.hypot(square.re, square.im)
    large = np.sqrt(0.5 * (size + np.abs(square.re)))
    small = np.abs(square.im) / (2 * large)
    ahead = square.re >= 0
    re, im = np.where(ahead, large, small), np.where(ahead, small, large)
    total = square.re_error + square.im_error
    exact = (square.im == 0) & (square.im_error == 0)
    # Quotients first: products of small numbers and errors could underflow.
    curved = np.where(exact, 0.0, 2 * (square.re_error / size) * (total / large))
    along, across = re / size, im / size
    re_error = along * square.re_error + across * square.im_error + curved + 4 * UNIT * re
    im_error = across * square.re_error + along * square.im_error + curved + 4 * UNIT * im
    return Parts(re, np.where(square.im < 0, -im, im), re_error, im_error)


def _assembled(
    parts: Parts, scale: float, lost: NDArray[np.bool_], zeros: int, in_order: bool
) -> Solved:
    roots, points = parts.re.shape
    made = Solved.empty(points, zeros + roots)
    place = slice(zeros, None)
    made.omega[:, :zeros] = 0.0
    for part, into in ((parts.re, made.omega.real), (parts.im, made.omega.imag)):
        np.multiply(part.T, scale, out=into[:, place])
        np.add(into, 0.0, out=into)  # turns -0.0 into 0.0
    grown = scale * (1 + 16 * UNIT)
    total = parts.re_error if in_order else np.hypot(parts.re_error, parts.im_error)
    made.radius[:, :zeros], made.radius[:, place] = 0.0, grown * total.T
    made.growth_radius[:, :zeros], made.growth_radius[:, place] = 0.0, grown * parts.im_error.T
    made.state[:, :zeros], made.state[:, place] = Status.ZERO, Status.CERTIFIED
    made.state[lost] = Status.NOT_CERTIFIED
    if not in_order or zeros:
        order = np.argsort(made.omega, axis=1, kind="stable")
        for array in (made.omega, made.radius, made.growth_radius, made.state):
            array[...] = np.take_along_axis(array, order, axis=1)
    return made
