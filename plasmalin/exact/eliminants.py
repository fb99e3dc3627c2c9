"""Discriminants and resultants in x of polynomials p(x, y) with Gaussian coefficients, as polynomials in y.

Three ways, each where the ones before do not do: an image in a prime field tells the degree and which roots are
multiple; values in ball arithmetic at as many points as the degree needs tell the polynomial on an interval; FLINT's
exact polynomial, whose coefficients have tens of thousands of digits, is for small ones.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property
from math import cos, floor, gcd, lcm, pi
from typing import Any, TypeAlias

import flint

from .gaussian import Gaussian, discriminant

Term: TypeAlias = tuple[int, int, tuple[Fraction, Fraction]]
"""Powers of x and y, and an exact complex coefficient."""

PRIME = 29 * 2**57 + 1
UNIT = pow(3, (PRIME - 1) // 4, PRIME)
"""A square root of -1 in the prime field, of which 3 generates all units."""
SHIFT = pow(3, 1234567, PRIME)
"""Values of y are roots of unity times this, at which no polynomial that one writes vanishes by design."""


@dataclass(frozen=True)
class Bivariate:
    """p(x, y) = sum_ij (re_ij + i im_ij) x^i y^j.

    Attributes
    ----------
    parts : two lists of lists of int
        re and im, by powers of x, then of y.
    """

    parts: tuple[list[list[int]], list[list[int]]]

    @classmethod
    def of(cls, terms: Sequence[Term]) -> Bivariate:
        """Denominators and common factors left out."""
        numbers = [x for _, _, c in terms for x in c if x]
        scale = Fraction(
            lcm(*(x.denominator for x in numbers)), gcd(*(x.numerator for x in numbers)) or 1
        )
        rows, columns = (
            1 + max(powers) for powers in zip(*((i, j) for i, j, _ in terms), strict=True)
        )
        re, im = ([[0] * columns for _ in range(rows)] for _ in (0, 1))
        for i, j, c in terms:
            re[i][j], im[i][j] = (int(x * scale) for x in c)
        return cls((re, im))

    @property
    def degree(self) -> int:
        return len(self.parts[0]) - 1

    @cached_property
    def is_real(self) -> bool:
        return not any(map(any, self.parts[1]))

    @cached_property
    def height(self) -> int:
        """Binary digits of the largest coefficient."""
        return max(abs(c) for part in self.parts for row in part for c in row).bit_length()

    def highest(self) -> dict[int, int]:
        """The highest power of y beside each power of x that occurs."""
        both = (
            [j for j, c in enumerate(zip(*rows, strict=True)) if any(c)]
            for rows in zip(*self.parts, strict=True)
        )
        return {i: js[-1] for i, js in enumerate(both) if js}

    def modular(self, y: Sequence[int], unit: int) -> list[Any]:
        """The images in x at some y, with the imaginary unit a given element of the prime field."""
        rows = [
            flint.nmod_poly([(a + unit * b) % PRIME for a, b in zip(*row, strict=True)], PRIME)
            for row in zip(*self.parts, strict=True)
        ]
        return [flint.nmod_poly([int(row(v)) for row in rows], PRIME) for v in y]

    @cached_property
    def rows(self) -> list[Any]:
        """The real coefficients of the powers of x, exact whatever the precision."""
        return [flint.arb_poly([flint.arb(c) for c in row]) for row in self.parts[0]]

    def flint(self) -> Gaussian:
        ring = flint.fmpz_mpoly_ctx.get(("x", 2), flint.Ordering.lex)
        return Gaussian(
            *(
                ring.from_dict(
                    {(i, j): c for i, row in enumerate(p) for j, c in enumerate(row) if c}
                )
                for p in self.parts
            )
        )


@dataclass(frozen=True)
class Eliminant:
    """The discriminant of one polynomial, or the resultant of two."""

    first: Bivariate
    second: Bivariate | None = None

    @property
    def is_real(self) -> bool:
        return self.first.is_real and (self.second is None or self.second.is_real)

    @property
    def weight(self) -> int:
        """How many coefficients each term of it multiplies."""
        n = self.first.degree
        return 2 * n - 2 if self.second is None else n + self.second.degree

    @property
    def height(self) -> int:
        """Binary digits of the coefficients in the exact form, about."""
        n, other = self.first, self.second
        if other is None:
            return self.weight * n.height
        return n.degree * other.height + other.degree * n.height

    def bound(self) -> int:
        """A degree in y that it does not exceed: the least over weights of x (a Newton polygon's edges)."""
        each = [p.highest() for p in (self.first, self.second) if p]
        slopes = {
            Fraction(b[1] - a[1], b[0] - a[0])
            for e in each
            for a in e.items()
            for b in e.items()
            if a < b
        }
        return min((floor(self._bound(each, s)) for s in slopes), default=0)

    def _bound(self, each: Sequence[dict[int, int]], slope: Fraction) -> Fraction:
        lifted = [max(d - slope * i for i, d in e.items()) for e in each]
        n = self.first.degree
        if self.second is None:
            return lifted[0] * self.weight + slope * n * (n - 1)
        m = self.second.degree
        return lifted[0] * m + lifted[1] * n + slope * n * m

    def modular(self) -> tuple[Any, Any] | None:
        """Its images for both square roots of -1; None where the prime field does not show it."""
        size = 1 << self.bound().bit_length()
        step = pow(3, (PRIME - 1) // size, PRIME)
        units = [pow(step, j, PRIME) for j in range(size)]
        images = []
        for unit in (UNIT,) if self.is_real else (UNIT, PRIME - UNIT):
            values = self._modular_values([SHIFT * u % PRIME for u in units], unit)
            if values is None:
                return None
            images.append(_interpolated(values, units))
        return images[0], images[-1]

    def _modular_values(self, y: Sequence[int], unit: int) -> list[int] | None:
        firsts = self.first.modular(y, unit)
        if any(p.degree() < self.first.degree for p in firsts):
            return None
        if self.second is None:
            return [int(p.discriminant()) for p in firsts]
        seconds = self.second.modular(y, unit)
        if any(q.degree() < self.second.degree for q in seconds):
            return None
        return [int(p.resultant(q)) for p, q in zip(firsts, seconds, strict=True)]

    def on_interval(self, low: Fraction, high: Fraction, degree: int, lowest: int) -> Any | None:
        """As a polynomial in t, where y = low + t (high - low), divided by y^lowest, in balls; for real ones.

        Chebyshev's nodes keep the interpolation from losing more digits than it must. One more node than needed
        confirms the degree.
        """
        count = degree - lowest + 1
        nodes = [_node(n, count + 1) for n in range(count + 1)]
        values = []
        for t in nodes:
            y = _rational(low + t * (high - low))
            value = self._ball_value(flint.arb(y))
            if not value.is_finite():
                return None
            values.append(value / flint.arb(y) ** lowest)
        points = [flint.arb(_rational(t)) for t in nodes]
        extra = count // 2
        found = flint.arb_poly.interpolate(
            points[:extra] + points[extra + 1 :], values[:extra] + values[extra + 1 :]
        )
        return found if found(points[extra]).overlaps(values[extra]) else None

    def _ball_value(self, y: Any) -> Any:
        p = _at(self.first, y)
        if self.second is None:
            n = self.first.degree
            return (-1) ** (n * (n - 1) // 2) * _resultant(p, p.derivative()) / p[n]
        return _resultant(p, _at(self.second, y))

    def exact(self) -> Any:
        """The square-free real polynomial in y, with integer coefficients, whose real roots are its real roots."""
        if self.second is None:
            found = discriminant(self.first.flint())
        else:
            found = _gaussian_resultant(self.first, self.second)
        common = _univariate(found.re).gcd(_univariate(found.im))
        return square_free(common)


def square_free(p: Any) -> Any:
    """The product of the different irreducible factors of an integer polynomial, up to a constant."""
    return p if p.degree() < 1 else p // p.gcd(p.derivative())


def _interpolated(values: Sequence[int], units: Sequence[int]) -> Any:
    """The polynomial that takes these values at SHIFT times the powers of a root of unity."""
    size = len(values)
    transform = flint.nmod_poly(list(values), PRIME)
    inverse, back = pow(size, -1, PRIME), pow(SHIFT, -1, PRIME)
    coefficients, scale = [], inverse
    for j in range(size):
        coefficients.append(int(transform(units[-j])) * scale % PRIME)
        scale = scale * back % PRIME
    return flint.nmod_poly(coefficients, PRIME)


def _node(n: int, count: int) -> Fraction:
    return Fraction(round((1 - cos(pi * (n + 0.5) / count)) * 2**29), 2**30)


def _rational(x: Fraction) -> Any:
    return flint.fmpq(x.numerator, x.denominator)


def _at(p: Bivariate, y: Any) -> Any:
    """The polynomial in x at one y, in balls."""
    return flint.arb_poly([row(y) for row in p.rows])


def _resultant(p: Any, q: Any) -> Any:
    """By Euclid's algorithm, which is short; not finite where a leading coefficient may be zero."""
    product = flint.arb(1)
    try:
        while q.degree() > 0:
            rest = p % q
            odd = p.degree() % 2 and q.degree() % 2
            product *= (-1 if odd else 1) * q[q.degree()] ** (p.degree() - rest.degree())
            p, q = q, rest
    except ZeroDivisionError:
        return flint.arb("nan")
    return product * q[0] ** p.degree()


def _univariate(p: Any) -> Any:
    """A polynomial in y alone, in the ring of x and y."""
    found = [0] * (1 + max((int(e[1]) for e in p.monoms()), default=0))
    for e, c in p.terms():
        found[int(e[1])] = int(c)
    return flint.fmpz_poly(found)


def _gaussian_resultant(p: Bivariate, q: Bivariate) -> Gaussian:
    """The imaginary unit is a variable more until its powers are lowered."""
    wide = flint.fmpz_mpoly_ctx.get(("x", 3), flint.Ordering.lex)
    x, y, unit = wide.gens()
    a, b = (
        g.re.compose(x, y, ctx=wide) + unit * g.im.compose(x, y, ctx=wide)
        for g in (p.flint(), q.flint())
    )
    parts: tuple[dict[Any, int], dict[Any, int]] = ({}, {})
    for e, c in a.resultant(b, 0).terms():
        turn, key = int(e[2]) % 4, (0, int(e[1]))
        parts[turn % 2][key] = parts[turn % 2].get(key, 0) + int(-c if turn > 1 else c)
    ring = flint.fmpz_mpoly_ctx.get(("x", 2), flint.Ordering.lex)
    return Gaussian(*map(ring.from_dict, parts))
