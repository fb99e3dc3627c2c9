"""What happens at a place where roots meet: which roots of p(x, s) do, and whether as branches that cross."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from fractions import Fraction
from itertools import combinations, takewhile
from math import log
from typing import Any

import flint

from .clusters import fraction
from .eliminants import Term
from .univariate import complex_roots, real_ball

Point = tuple[Fraction, Fraction]
"""Real and imaginary part."""

BITS = 600
STEPS = 200
"""Newton steps at most; to nearly double roots they get only half as near with each."""
SETTLED = 2**200
NEAR = Fraction(1, 2**70)
"""Roots at a place, which is known to 2^-320, that are closer than this part of a typical root meet there."""
NOTHING = 2**120
"""A sum is zero when it is smaller than its terms by this."""
BESIDE = Fraction(1, 2**60)
"""How far beside a place, as a part of the interval, the power law of a meeting is read."""


class Local:
    """A polynomial near its places.

    Parameters
    ----------
    terms : sequence of (int, int, (Fraction, Fraction))
        Powers of x and s, and an exact complex coefficient.
    size : Fraction
        That of a typical root.
    width : Fraction
        That of the interval of s.
    """

    def __init__(self, terms: Sequence[Term], size: Fraction, width: Fraction) -> None:
        self.near, self.width = NEAR * size, width
        with _precision():
            parts = [(i, j, flint.acb(*map(real_ball, c))) for i, j, c in terms]
            self.rows = _rows(parts)
            self.sizes = _rows([(i, j, flint.acb(abs(c))) for i, j, c in parts])

    def meetings(self, at: Fraction) -> list[tuple[Point, int, str]]:
        """The roots that meet at a place, how many do at each, and whether they cross or coalesce."""
        with _precision():
            found = self._double(at)
            if found is None:
                return [(x, n, self._kind(at, x, n)) for x, n in self._multiple(at)]
            return [(x, 2, self._kind(at, x, 2)) for x in found]

    def _double(self, at: Fraction) -> list[Point] | None:
        """The double roots, as simple roots of the derivative; None when one may be of more than second order."""
        s = real_ball(at)
        p, sizes = _at(self.rows, s), _at(self.sizes, abs(s))
        try:
            turning = _simple_roots(p.derivative())
        except ValueError:
            return None
        met = [x for x in turning if _vanishes(p(x), sizes(abs(x)))]
        return [self._mean([_point(x)]) for x in met] or None

    def _multiple(self, at: Fraction) -> list[tuple[Point, int]]:
        """Roots that are as close as if they were one."""
        groups: list[list[Point]] = []
        for x in self.roots(at):
            joined = [g for g in groups if any(_distance(x, y) <= self.near for y in g)]
            groups = [g for g in groups if g not in joined]
            groups.append([y for g in joined for y in g] + [x])
        return [(self._mean(g), len(g)) for g in groups if len(g) > 1]

    def _kind(self, at: Fraction, x: Point, count: int) -> str:
        """Beside the place, roots are away from their mean by a power of the distance.

        It is one half where two coalesce and p_s is not zero; else it is read from the roots.
        """
        if count == 2 and not self._is_flat(at, x):
            return "onset"
        away = [self._deviation(at + n * BESIDE * self.width, x, count) for n in (1, 4)]
        if not all(away):
            return "crossing"
        power = log(float(away[1] / away[0]), 4)
        return "crossing" if abs(power - round(power)) < 0.2 else "onset"

    def _is_flat(self, at: Fraction, x: Point) -> bool:
        """Whether p_s is zero."""
        s, z = real_ball(at), flint.acb(*map(real_ball, x))
        slope = _at([row.derivative() for row in self.rows], s)(z)
        return _vanishes(slope, _at([row.derivative() for row in self.sizes], abs(s))(abs(z)))

    def _deviation(self, s: Fraction, x: Point, count: int) -> Fraction:
        """The largest distance of the nearest `count` roots from their mean."""
        group = sorted(self.roots(s), key=lambda z: _distance(z, x))[:count]
        middle = self._mean(group)
        return max(_distance(z, middle) for z in group)

    def roots(self, s: Fraction) -> list[Point]:
        """All finite ones."""
        p = _at(self.rows, real_ball(s))
        try:
            return [_point(x) for x in _simple_roots(p)]
        except ValueError:
            table = [_point(c) for c in p.coeffs()]
            while table and not any(table[-1]):
                table.pop()
            found = complex_roots(table, 60) if len(table) > 1 else []
            return [(re, im) for re, im, _, m in found for _ in range(m)]

    def infinite(self, at: Fraction) -> int:
        """How many roots go to infinity at a place."""
        with _precision():
            s = real_ball(at)
            tops = zip(self.rows[:0:-1], self.sizes[:0:-1], strict=True)
            return len(list(takewhile(lambda top: _vanishes(top[0](s), top[1](abs(s))), tops)))

    def count(self, at: Fraction, x: Point) -> int:
        """How many roots are at a point."""
        with _precision():
            return sum(_distance(x, y) <= self.near for y in self.roots(at))

    def shared(self, other: Local, at: Fraction) -> list[Point]:
        """The roots that are roots of another polynomial, at a place."""
        with _precision():
            ours, theirs = self.roots(at), other.roots(at)
        return [self._mean([x]) for x in ours if any(_distance(x, y) <= self.near for y in theirs)]

    def _mean(self, group: Sequence[Point]) -> Point:
        """A part that is nothing but rounding is zero."""
        re, im = (sum((x[part] for x in group), Fraction(0)) / len(group) for part in (0, 1))
        return _cut(re, self.near), _cut(im, self.near)


def _cut(x: Fraction, near: Fraction) -> Fraction:
    return x if abs(x) > near else Fraction(0)


@contextmanager
def _precision() -> Iterator[None]:
    before = flint.ctx.prec
    try:
        flint.ctx.prec = BITS
        yield
    finally:
        flint.ctx.prec = before


def _rows(parts: Sequence[tuple[int, int, Any]]) -> list[Any]:
    """For each power of x a polynomial in s."""
    rows, columns = (1 + max(powers) for powers in zip(*((i, j) for i, j, _ in parts), strict=True))
    table = [[flint.acb(0)] * columns for _ in range(rows)]
    for i, j, c in parts:
        table[i][j] = c
    return [flint.acb_poly(row) for row in table]


def _at(rows: Sequence[Any], s: Any) -> Any:
    return flint.acb_poly([row(s) for row in rows])


def _simple_roots(p: Any) -> list[Any]:
    """FLINT tells them apart, Newton steps give all digits.

    Raises
    ------
    ValueError
        When they are not told apart at this precision.
    """
    boxes, slope = p.roots(), p.derivative()
    if any(a.overlaps(b) for a, b in combinations(boxes, 2)):
        raise ValueError("the roots are not told apart")
    return [_polished(p, slope, box) for box in boxes]


def _polished(p: Any, slope: Any, box: Any) -> Any:
    x = box.mid()
    for _ in range(STEPS):
        step = p(x) / slope(x)
        if not box.contains(x - step.mid()):
            break
        x = (x - step).mid()
        if abs(step) * SETTLED < abs(x):
            break
    return x


def _vanishes(total: Any, size: Any) -> bool:
    return bool(abs(total).mid() * NOTHING <= abs(size).mid())


def _point(z: Any) -> Point:
    return fraction(z.real.mid()), fraction(z.imag.mid())


def _distance(x: Point, y: Point) -> Fraction:
    return max(abs(x[0] - y[0]), abs(x[1] - y[1]))
