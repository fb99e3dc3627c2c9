"""Roots so close together that an iteration from afar would take ages to part them.

Ehrlich-Aberth iteration; numbers that stay together start anew about the middle of their cluster, with sizes from the
Newton polygon there (starting radii: Bini 1996, Numer. Algorithms 13, 179; from memory). How they were found proves
nothing: the theorem in section 1 of docs/certificate.md does, in ball arithmetic.
"""

from __future__ import annotations

from collections.abc import Callable
from fractions import Fraction
from typing import Any

import flint
import numpy as np

Box = tuple[Fraction, Fraction, Fraction]
"""Real and imaginary part of a centre, and the radius of a disc that holds one root."""

ROUNDS, SWEEPS = 8, 12
"""New starts at most for one precision, and steps after each."""
APART = 16
"""A cluster is so many times narrower than the way to the next root."""
MOST_BITS = 2**14


def parted(
    polynomial: Callable[[], Any], settled: Callable[[list[Box]], list[Box] | None]
) -> list[Box]:
    """Discs about all roots of a square-free polynomial, each with one root in it.

    Parameters
    ----------
    polynomial : callable
        Makes the polynomial, free of the root zero, in the precision that FLINT is set to.
    settled : callable
        The discs as they are wanted, or None where they are too large for that.

    Raises
    ------
    ArithmeticError
        Where `MOST_BITS` are too few.
    """
    before, bits = flint.ctx.prec, 1024
    z: list[Any] = []
    try:
        while bits <= MOST_BITS:
            flint.ctx.prec = bits
            poly = polynomial()
            z = _approached(poly, z or _about(flint.acb(0), _sizes(list(poly))))
            found = settled(_discs(poly, z))
            if found:
                return found
            bits *= 2
    finally:
        flint.ctx.prec = before
    raise ArithmeticError(f"roots lie closer together than {MOST_BITS} bits can tell")


def _approached(poly: Any, z: list[Any]) -> list[Any]:
    for _ in range(ROUNDS):
        quiet = _swept(poly, z)
        clusters = [] if quiet else _clusters(z)
        for members in clusters:
            _start_anew(poly, z, members)
        if quiet:
            break
    return z


def _swept(poly: Any, z: list[Any]) -> bool:
    """Ehrlich-Aberth steps in place; whether all have come to rest."""
    slope, active = poly.derivative(), set(range(len(z)))
    for _ in range(SWEEPS):
        for i in sorted(active):
            newton = poly(z[i]) / slope(z[i])
            pull = sum((1 / (z[i] - other) for j, other in enumerate(z) if j != i), flint.acb(0))
            step = newton / (1 - newton * pull)
            if not step.is_finite() or step.mid() == 0:
                active.discard(i)
                continue
            if abs(step).rad() >= abs(step).mid():
                active.discard(i)  # nothing but rounding
            z[i] = (z[i] - step).mid()
        if not active:
            return True
    return False


def _clusters(z: list[Any]) -> list[list[int]]:
    """The smallest groups of numbers that lie close together against the way to all others."""
    apart = np.array([[_log2(a - b) for b in z] for a in z])
    found: list[list[int]] = []
    for i in range(len(z)):
        order = np.argsort(apart[i], kind="stable")  # i itself comes first
        for m in range(2, len(z) + 1):
            members = sorted(order[:m].tolist())
            wide = apart[np.ix_(members, members)].max()
            rest = np.delete(np.arange(len(z)), members)
            way = apart[np.ix_(members, rest)].min(initial=np.inf)
            if m < len(z) and wide + np.log2(APART) <= way:
                found.append(members)
                break
    return [list(m) for m in {tuple(m) for m in found}]


def _start_anew(poly: Any, z: list[Any], members: list[int]) -> None:
    """Numbers in the sizes that the Newton polygon about the middle of the cluster tells, where these are smaller."""
    m = len(members)
    slope, middle = poly, (sum(z[i] for i in members) / m).mid()
    for _ in range(m - 1):
        slope = slope.derivative()
    rate = slope.derivative()
    for _ in range(12):  # the derivative that vanishes once in the middle of m roots
        step = slope(middle) / rate(middle)
        if not step.is_finite() or step.mid() == 0:
            break
        middle = (middle - step).mid()
    sizes = _sizes(list(poly(flint.acb_poly([middle, 1]))))
    wide = max(_log2(z[i] - middle) for i in members)
    if sizes[m - 1] + np.log2(APART) <= min(sizes[m], wide):
        for i, start in zip(members, _about(middle, sizes[:m]), strict=True):
            z[i] = start


def _about(middle: Any, sizes: list[float]) -> list[Any]:
    turn = flint.acb(0, 2.399963229728653)
    return [
        (middle + (turn * (k + 0.3)).exp() * flint.arb(2) ** flint.arb(size)).mid()
        for k, size in enumerate(sizes)
    ]


def _sizes(coefficients: list[Any]) -> list[float]:
    """log2 of the sizes of the roots, ascending: slopes of the upper hull of log2 |c_j|."""
    logs = [_log2(c) for c in coefficients]
    sizes: list[float] = []
    here = 0
    while here < len(logs) - 1:
        ahead = range(here + 1, len(logs))
        there = max(ahead, key=lambda j: ((logs[j] - logs[here]) / (j - here), j))
        sizes += [(logs[here] - logs[there]) / (there - here)] * (there - here)
        here = there
    return sizes


def _log2(x: Any) -> float:
    """Of an upper bound of its size; very small for zero."""
    mantissa, exponent = abs(x).upper().mid().man_exp()
    size = abs(int(mantissa))
    return float(size.bit_length() + int(exponent)) if size else -1e9


def _discs(poly: Any, z: list[Any]) -> list[Box]:
    """The discs of the theorem; none where it does not hold."""
    n, lead = len(z), poly[len(z)]
    steps, gaps = [], []
    for i, mine in enumerate(z):
        product, gap = lead, flint.arb("inf")
        for j, other in enumerate(z):
            if j != i:
                product = product * (mine - other)
                gap = gap.min(abs(mine - other).lower())
        steps.append(poly(mine) / product)
        gaps.append(gap)
    t = flint.arb(0)
    for step, gap in zip(steps, gaps, strict=True):
        t = t.max((abs(step).upper() / gap).upper())
    if not t <= flint.arb(1) / (2 * n + 4):
        return []
    found = []
    for mine, step in zip(z, steps, strict=True):
        root, reach = mine - step, (2 * (n - 1) * t * abs(step).upper()).upper()
        rest = sum(map(fraction, (reach.mid(), root.real.rad(), root.imag.rad())), Fraction(0))
        found.append((fraction(root.real.mid()), fraction(root.imag.mid()), rest))
    return found


def fraction(exact: Any) -> Fraction:
    """An exact ball as the number that it is."""
    mantissa, exponent = exact.man_exp()
    return Fraction(int(mantissa)) * Fraction(
        2 ** max(int(exponent), 0), 2 ** max(-int(exponent), 0)
    )
