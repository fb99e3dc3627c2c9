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
    """Real and imaginary parts with their errors, shape (roots, points) each; no imaginary ones where all are real."""

    re: Array
    im: Array | None
    re_error: Array
    im_error: Array | None


def in_omega(sheet: Sheet, structure: Structure, unknown: int, made: Solved) -> None:
    """Fill in the roots omega, sorted by (Re, Im), with all rounding in the radii."""
    parts = _rounded(sheet)
    if structure.step == 2:
        parts = _both_square_roots(parts)
    if structure.turned:
        parts = _turned(parts)
    scale = 2.0 ** (unknown // structure.step)
    lost = _lost(sheet, structure, scale)
    _assemble(parts, scale, lost, structure.lowest, made)


def _lost(sheet: Sheet, structure: Structure, scale: float) -> NDArray[np.bool_]:
    """Points without a proof, and those where omega comes near the ends of the range of doubles."""
    ends = UNIT**-1 * sheet.radius.min(axis=0), SPREAD * sheet.radius.max(axis=0)
    low, high = (scale * (np.sqrt(end) if structure.step == 2 else end) for end in ends)
    return np.asarray((sheet.real == UNKNOWN) | ~((low >= TINY) & (high <= HUGE)))


def _rounded(sheet: Sheet) -> Parts:
    """Stored parts; an imaginary part that its disc does not tell from zero becomes zero."""
    re_error = sheet.radius + UNIT * np.abs(sheet.re)
    if (sheet.real == len(sheet.re)).all():
        return Parts(sheet.re, None, re_error, None)
    im = np.where(np.abs(sheet.im) <= sheet.radius, 0.0, sheet.im)
    im_error = 2 * sheet.radius + UNIT * np.abs(im)
    im_error[np.arange(len(im))[:, None] < sheet.real] = 0.0
    return Parts(sheet.re, im, re_error, im_error)


def _both_square_roots(square: Parts) -> Parts:
    """Both signs; in ascending order where all squares are positive."""
    if square.im is None and (square.re > 0).all():
        root = np.sqrt(square.re)
        error = square.re_error / root + 2 * UNIT * root
        return Parts(_doubled(root, -1), None, _doubled(error, 1), None)
    upper = _square_root(_complete(square))
    return Parts(*(_doubled(part, sign) for part, sign in zip(upper, (-1, -1, 1, 1), strict=True)))


def _doubled(rows: Array, sign: int) -> Array:
    """Rows in descending order with a sign, then as they are."""
    made = np.empty((2 * len(rows), rows.shape[1]))
    np.multiply(rows[::-1], sign, out=made[: len(rows)])
    made[len(rows) :] = rows
    return made


def _turned(parts: Parts) -> Parts:
    """Times i."""
    re, im, re_error, im_error = _complete(parts)
    return Parts(-im, re, im_error, re_error)


def _complete(parts: Parts) -> tuple[Array, Array, Array, Array]:
    zero = np.zeros_like(parts.re)
    im = zero if parts.im is None else parts.im
    return parts.re, im, parts.re_error, zero if parts.im_error is None else parts.im_error


def _square_root(square: tuple[Array, Array, Array, Array]) -> tuple[Array, Array, Array, Array]:
    """The root with a positive real part (or positive imaginary one), both parts to full relative accuracy.

    d omega = conj(omega) d(omega^2) / (2 |omega|^2) bounds the errors part by part; twice that and the square of
    the error cover what is of higher order.
    """
    re_square, im_square, re_off, im_off = square
    size = np.hypot(re_square, im_square)
    large = np.sqrt(0.5 * (size + np.abs(re_square)))
    small = np.abs(im_square) / (2 * large)
    ahead = re_square >= 0
    re, im = np.where(ahead, large, small), np.where(ahead, small, large)
    exact = (im_square == 0) & (im_off == 0)
    # Quotients first: products of small numbers and errors could underflow.
    curved = np.where(exact, 0.0, 2 * (re_off / size) * ((re_off + im_off) / large))
    along, across = re / size, im / size
    re_error = along * re_off + across * im_off + curved + 4 * UNIT * re
    im_error = across * re_off + along * im_off + curved + 4 * UNIT * im
    return re, np.where(im_square < 0, -im, im), re_error, im_error


def _assemble(
    parts: Parts, scale: float, lost: NDArray[np.bool_], zeros: int, made: Solved
) -> None:
    """Real roots come in order; others are sorted."""
    grown = scale * (1 + 16 * UNIT)
    re, im, total, growth = parts
    if im is not None and growth is not None:
        total = np.hypot(total, growth)
    place = slice(zeros, None)
    for part, factor, into in (
        (re, scale, made.omega.real),
        (im, scale, made.omega.imag),
        (total, grown, made.radius),
        (growth, grown, made.growth_radius),
    ):
        into[:, :zeros] = 0.0
        # Adding 0.0 turns -0.0 into 0.0.
        into[:, place] = 0.0 if part is None else (part * factor + 0.0).T
    made.state[:, :zeros], made.state[:, place] = Status.ZERO, Status.CERTIFIED
    made.state[lost] = Status.NOT_CERTIFIED
    if im is not None or zeros:
        order = np.argsort(made.omega, axis=1, kind="stable")
        for array in (made.omega, made.radius, made.growth_radius, made.state):
            array[...] = np.take_along_axis(array, order, axis=1)
