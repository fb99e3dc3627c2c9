"""Matrices whose determinant is too long to be written out: their blocks, and determinants number by number."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from fractions import Fraction
from math import gcd as integer_gcd
from math import lcm
from typing import TypeAlias

import sympy as sp
from flint import nmod_mat

from .determinant import Entries, Table, block_determinant, cleared_table
from .gaussian import Gaussian, gcd_of
from .matching import diagonal_blocks, maximum_matching
from .place import random_place
from .polynomial import ExactPolynomial
from .powers import is_plain
from .reader import Reader, ring_of
from .ring import SQUARES, Ring

Exact: TypeAlias = tuple[Fraction, Fraction]
Place: TypeAlias = tuple[int, int]
Circle: TypeAlias = tuple[sp.Expr, sp.Expr]
"""The sine and the cosine of one angle."""


@dataclass(frozen=True)
class Image:
    """Numbers of a random prime field at a random point where the relations among the generators hold.

    What does not vanish identically vanishes there with a chance of about its degree over 2^60 (Schwartz 1980,
    J. ACM 27, 701).

    Attributes
    ----------
    prime, unit : int
        The prime, and a square root of -1.
    values : dict of Expr to int
    """

    prime: int
    unit: int
    values: dict[sp.Expr, int]

    def number(self, c: Exact) -> int:
        re, im = (x.numerator * pow(x.denominator, -1, self.prime) for x in c)
        return (re + self.unit * im) % self.prime

    def determinant(self, entries: Mapping[Place, Mapping[int, int]], size: int) -> list[int]:
        """The determinant of a matrix of polynomials, images by power, from its values: lowest power first."""
        highest = [
            max((max(c) for (_, j), c in entries.items() if j == k), default=0) for k in range(size)
        ]
        places = range(1 + sum(highest))
        values, powers = (
            nmod_mat(len(places), 1, self.prime),
            nmod_mat(len(places), len(places), self.prime),
        )
        for x in places:
            made = nmod_mat(size, size, self.prime)
            for ij, c in entries.items():
                made[ij] = sum(v * pow(x, n, self.prime) for n, v in c.items()) % self.prime
            values[x, 0] = made.det()
            for n in places:
                powers[x, n] = pow(x, n, self.prime)
        found = [int(v) for v in powers.solve(values).entries()]
        while found and not found[-1]:
            found.pop()
        return found


@dataclass(frozen=True)
class Block:
    """A matrix of polynomials without denominators, real where phases of rows and columns can make it so.

    Attributes
    ----------
    entries : dict of (int, int) to ExactPolynomial
    turned : bool
        The main symbol stands for s, with omega = i s.
    image : Image
    """

    entries: dict[Place, ExactPolynomial]
    turned: bool
    image: Image


def diagonal_parts(entries: Entries, size: int) -> list[tuple[dict[Place, sp.Expr], int]]:
    """The irreducible diagonal blocks of the block-triangular form, each with its size; none of a singular pattern."""
    matching = maximum_matching(entries, size, size)
    if len(matching) < size:
        return []
    return [
        (
            {
                (a, b): entries[i, j]
                for a, i in enumerate(rows)
                for b, j in enumerate(columns)
                if (i, j) in entries
            },
            len(rows),
        )
        for rows, columns in diagonal_blocks(entries, matching)
    ]


def block_of(entries: Entries, main: sp.Symbol) -> Block | None:
    """A matrix ready for reduction: rows and columns freed of denominators and of divisors that do not hold `main`.

    Returns
    -------
    Block or None
        None where a denominator holds `main`.
    """
    ring = ring_of(entries.values(), main)
    cleared = cleared_table(entries, ring)
    if cleared.bottom.holds(0):
        return None
    table = _without_divisors(_without_divisors(cleared.table, ring, 0), ring, 1)
    prime, (unit, _, *values) = random_place(Reader(ring).relations, 1 + len(ring.generators))
    image = Image(prime, unit, dict(zip(ring.generators, values, strict=True)))
    return Block(
        {ij: ExactPolynomial(ring, p) for ij, p in table.items()}, bool(cleared.phase), image
    )


def _without_divisors(table: Table, ring: Ring, side: int) -> Table:
    """Every row (side 0) or column (side 1) divided by what divides it, if that is free of main."""
    lines: dict[int, list[Gaussian]] = {}
    for place, p in table.items():
        lines.setdefault(place[side], []).append(p)
    one = ring.constant(1)
    common = {line: gcd_of(found, ring.constant(0)) for line, found in lines.items()}
    common = {line: one if p.holds(0) else p for line, p in common.items()}
    return {place: p.over(common[place[side]]) for place, p in table.items()}


def circles_of(generators: Iterable[sp.Expr]) -> tuple[Circle, ...] | None:
    """The pairs of sine and cosine among generators; None where they hold relations of other kinds.

    |k| is of no other kind: for real k it is known exactly.
    """
    found = []
    for g in generators:
        base, power = g.as_base_exp()
        if not is_plain(base) or (power != 1 and base.func in {sp.Abs, sp.sin, *SQUARES}):
            return None
        if base.func in SQUARES:
            if base.func is not sp.cos:
                return None
            found.append((sp.sin(base.args[0]), base))
    return tuple(sorted(found, key=str))


def circle_point(sine: Fraction, cosine: Fraction) -> tuple[Fraction, Fraction]:
    """The rational point of the unit circle next to a sine and a cosine that are rounded.

    From the tangent of half the angle to the nearer axis, so that the smaller of the two stays as right, relative to
    itself, as it was.
    """
    if abs(cosine) < abs(sine):
        return circle_point(cosine, sine)[::-1]
    t = sine / (1 + abs(cosine))
    near = (1 - t * t) / (1 + t * t)
    return 2 * t / (1 + t * t), near if cosine > 0 else -near


def determinant_of(entries: Mapping[Place, list[Exact]], size: int) -> list[Exact]:
    """The determinant of a matrix of polynomials in one unknown, lowest power first, up to a factor.

    Parameters
    ----------
    entries : mapping of (int, int) to list of (Fraction, Fraction)
        Coefficients of each polynomial, lowest power first.
    size : int

    Returns
    -------
    list of (Fraction, Fraction)
        Empty for zero.
    """
    ring = Ring(sp.Symbol("x"), ())
    whole = {ij: c for ij, c in entries.items() if any(re or im for re, im in c)}
    matching = maximum_matching(whole, size, size)
    if len(matching) < size:
        return []
    table: Table = {}
    for row in range(size):
        table |= _integer_row({ij: c for ij, c in whole.items() if ij[0] == row}, ring)
    value = block_determinant(table, matching, ring)
    return [(Fraction(int(value.re[(n,)])), Fraction(int(value.im[(n,)]))) for n in _powers(value)]


def _integer_row(row: Mapping[Place, list[Exact]], ring: Ring) -> Table:
    """A row times the number that leaves whole coefficients without a common divisor."""
    numbers = [x for c in row.values() for pair in c for x in pair]
    scale = lcm(*(x.denominator for x in numbers))
    common = integer_gcd(*(int(x * scale) for x in numbers))
    factor = Fraction(scale, common)
    make = ring.context.from_dict
    return {
        ij: Gaussian(
            *(make({(n,): int(x[i] * factor) for n, x in enumerate(c) if x[i]}) for i in (0, 1))
        )
        for ij, c in row.items()
    }


def _powers(p: Gaussian) -> range:
    return range(1 + max((int(part.degrees()[0]) for part in (p.re, p.im) if part), default=-1))
