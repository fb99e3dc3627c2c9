"""Where roots of p(x, s) meet, to any number of digits: Newton steps, then a proof in ball arithmetic.

Two roots coalesce where p = p_x = 0; branches cross where p_x = p_s = 0. Both are two equations F = 0 for x and s. If
m - J(X)^-1 F(m) lies inside the box X about m, where J(X) encloses the derivatives of F over X, there is exactly one
solution in X (the interval Newton step of Moore 1966, Interval Analysis; from memory).
"""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction
from typing import Any, TypeAlias

import flint

from .clusters import fraction
from .eliminants import Term
from .univariate import real_ball

Point: TypeAlias = tuple[Fraction, Fraction]
"""Real and imaginary part."""

BITS = 400
STEPS = 40
SETTLED, BOX = 200, 100
"""Binary digits of x and s after which Newton steps end, and to which the solution is proven."""
EQUATIONS = {"onset": ((0, 0), (1, 0)), "crossing": ((1, 0), (0, 1))}
"""How often p is differentiated by x and by s."""


def meeting(
    terms: Sequence[Term], kind: str, start: tuple[complex, complex], sizes: tuple[float, float]
) -> tuple[Point, Point, Fraction] | None:
    """The solution near some x and s.

    Parameters
    ----------
    terms : sequence of (int, int, (Fraction, Fraction))
    kind : str
        "onset" or "crossing".
    start : (complex, complex)
        About where: x and s.
    sizes : (float, float)
        What errors of x and s are measured against.

    Returns
    -------
    (Fraction, Fraction), (Fraction, Fraction), Fraction
        x, s, and how far the real part of s may be off; None where nothing is proven, as when more than two meet.
    """
    before = flint.ctx.prec
    try:
        flint.ctx.prec = BITS
        system = _System(terms, EQUATIONS[kind])
        found = _newton(system, [flint.acb(z) for z in start], sizes)
        if found and _proven(system, found, sizes):
            x, s = ((fraction(z.real), fraction(z.imag)) for z in found)
            return x, s, Fraction(sizes[1]) / 2**BOX
        return None
    finally:
        flint.ctx.prec = before


class _System:
    """Two derivatives of p, and theirs."""

    def __init__(self, terms: Sequence[Term], equations: Sequence[tuple[int, int]]) -> None:
        self.terms = [(i, j, flint.acb(*map(real_ball, c))) for i, j, c in terms]
        self.equations = equations

    def values(self, point: list[Any]) -> Any:
        return flint.acb_mat([[self._derivative(a, b, point)] for a, b in self.equations])

    def slopes(self, point: list[Any]) -> Any:
        rows = [[(a + 1, b), (a, b + 1)] for a, b in self.equations]
        return flint.acb_mat([[self._derivative(a, b, point) for a, b in row] for row in rows])

    def _derivative(self, a: int, b: int, point: list[Any]) -> Any:
        """p differentiated a times by x and b times by s."""
        total = flint.acb(0)
        for i, j, c in self.terms:
            if i >= a and j >= b:
                factor = _falling(i, a) * _falling(j, b)
                total += c * factor * point[0] ** (i - a) * point[1] ** (j - b)
        return total


def _falling(n: int, times: int) -> int:
    product = 1
    for m in range(times):
        product *= n - m
    return product


def _newton(system: _System, point: list[Any], sizes: tuple[float, float]) -> list[Any] | None:
    """Centres of balls after steps that became short; None where they do not."""
    for _ in range(STEPS):
        try:
            step = system.slopes(point).solve(system.values(point)).mid()
        except ZeroDivisionError:
            return None
        point = [(z - step[i, 0]).mid() for i, z in enumerate(point)]
        lengths = (abs(step[i, 0]) * 2**SETTLED < size for i, size in enumerate(sizes))
        if all(lengths):
            return point
    return None


def _proven(system: _System, point: list[Any], sizes: tuple[float, float]) -> bool:
    sides = [flint.arb(0, size) * flint.arb(2) ** -BOX for size in sizes]
    box = [z + flint.acb(side, side) for z, side in zip(point, sides, strict=True)]
    try:
        step = system.slopes(box).solve(system.values(point))
    except ZeroDivisionError:
        return False
    return all(box[i].contains_interior(z - step[i, 0]) for i, z in enumerate(point))
