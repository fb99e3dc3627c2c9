"""A family made ready for doubles: its structure in omega, and its coefficients scaled by powers of two.

Where only even powers of omega occur, the unknown is omega^2; where the coefficients are real in s (omega = i s:
damping without drift), it is s. Real coefficients halve the work and let real roots be proven real. A complex swept
quantity x + i y counts as two real ones, so that every coefficient is a real polynomial in real quantities.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from functools import cached_property, lru_cache
from math import comb, gcd

import numpy as np
from numpy.typing import NDArray

from ..exact.rational import times_i
from .family import Exact, Family, Grid
from .path import Columns, Path
from .sums import Plan, Terms

SMALLEST, LARGEST = -900, 600
"""Exponents of two between which scaled coefficients must lie."""
WIDEST, FARTHEST = 300, 900
"""The largest ones of a monomial of scaled quantities, and of the scale of the unknown."""
POWERS, TERMS = 2000, 2**16
"""The degree and the number of monomials up to which rounding is as docs/certificate.md counts it."""


@dataclass(frozen=True)
class Structure:
    """What the powers of omega and the phases of the coefficients allow.

    Attributes
    ----------
    lowest : int
        Power of omega that divides the polynomial.
    step : int
        2 when the unknown is the square.
    turned : bool
        The unknown is made from s, omega = i s.
    real : bool
        All coefficients of the unknown are real.
    """

    lowest: int
    step: int
    turned: bool
    real: bool


def structure_of(family: Family, real_grid: bool) -> Structure:
    """The most that exponents and phases allow."""
    powers = family.exponents[:, 0].tolist()
    lowest = min(powers)
    step = 2 if gcd(*(p - lowest for p in powers)) % 2 == 0 else 1
    for turned in (False, True):
        turns = [(p - lowest) if turned else 0 for p in powers]
        phases = {_phase(times_i(c, n)) for c, n in zip(family.coefficients, turns, strict=True)}
        if real_grid and len(phases) == 1 and phases != {None}:
            return Structure(lowest, step, turned, True)
    return Structure(lowest, step, False, False)


def _phase(c: Exact) -> int | None:
    """0 for a real number, 1 for an imaginary one."""
    return 0 if not c[1] else 1 if not c[0] else None


@dataclass(frozen=True, eq=False)
class Table:
    """The terms of a family as arrays: row t, column j is the term of unknown^j with the exponents t.

    For complex coefficients the columns hold the real parts, then the imaginary ones. A coefficient is
    (high + low) 2^binary to a relative UNIT^2, high between 1/2 and 2.
    """

    structure: Structure
    degree: int
    exponents: NDArray[np.int64]
    high: NDArray[np.float64]
    low: NDArray[np.float64]
    binary: NDArray[np.int64]

    @property
    def roots(self) -> int:
        """How many omega there are per point."""
        return self.structure.lowest + self.structure.step * self.degree


def columns_of(grid: Grid) -> Columns:
    """The grid with every complex quantity as two real ones."""
    columns: Columns = []
    for hi, lo in grid:
        columns.append((np.ascontiguousarray(hi.real), np.ascontiguousarray(lo.real)))
        if np.iscomplexobj(hi):
            columns.append((np.ascontiguousarray(hi.imag), np.ascontiguousarray(lo.imag)))
    return columns


def table_of(family: Family, grid: Grid) -> Table:
    """The table that belongs to `columns_of(grid)`."""
    return _table(family, tuple(i for i, (hi, _) in enumerate(grid) if np.iscomplexobj(hi)))


@lru_cache(maxsize=64)
def _table(family: Family, complex_places: tuple[int, ...]) -> Table:
    structure = structure_of(family, not complex_places)
    degree = (family.degree - structure.lowest) // structure.step
    gathered: dict[tuple[int, ...], dict[int, Exact]] = {}
    for row, c in zip(family.exponents.tolist(), family.coefficients, strict=True):
        power = row[0] - structure.lowest
        turned = times_i(c, power if structure.turned else 0)
        for exponents, value in _in_real_quantities(row[1:], turned, complex_places):
            into = gathered.setdefault(exponents, {})
            old = into.get(power // structure.step, (Fraction(0), Fraction(0)))
            into[power // structure.step] = old[0] + value[0], old[1] + value[1]
    parts = 1 if structure.real else 2
    high, low = (np.zeros((len(gathered), parts * (degree + 1))) for _ in range(2))
    binary = np.zeros(high.shape, np.int64)
    for t, terms in enumerate(gathered.values()):
        for j, value in terms.items():
            shown = (value[0] or value[1],) if structure.real else value
            for part, number in enumerate(shown):
                place = t, j + part * (degree + 1)
                high[place], low[place], binary[place] = in_binary(number)
    places = np.array(list(gathered), np.int64).reshape(len(gathered), -1)
    return Table(structure, degree, places, high, low, binary)


def _in_real_quantities(
    exponents: list[int], c: Exact, complex_places: tuple[int, ...]
) -> list[tuple[tuple[int, ...], Exact]]:
    """The monomial with (x + i y)^n expanded at every complex place."""
    terms: list[tuple[tuple[int, ...], Exact]] = [((), c)]
    for i, n in enumerate(exponents):
        if i in complex_places:
            terms = [
                ((*e, n - m, m), times_i((comb(n, m) * v[0], comb(n, m) * v[1]), m))
                for e, v in terms
                for m in range(n + 1)
            ]
        else:
            terms = [((*e, n), v) for e, v in terms]
    return terms


def in_binary(number: Fraction) -> tuple[float, float, int]:
    """number = (high + low) 2^binary, high between 1/2 and 2; int / int rounds correctly."""
    above, below = number.numerator, number.denominator
    exponent = abs(above).bit_length() - below.bit_length()
    above, below = above << max(-exponent, 0), below << max(exponent, 0)
    high = above / below
    rest = (above << 53) - int(high * 2.0**53) * below
    return high, rest / (below << 53), exponent


@lru_cache(maxsize=64)
def _plans(table: Table, place: tuple[int, ...], slow: int) -> tuple[Plan | None, Plan]:
    """How to evaluate the table: in the first `slow` quantities (if any), then in the others."""
    row, column = np.nonzero(table.high)
    exponents = table.exponents[row][:, place]
    if not slow:
        return None, Plan(exponents, column, table.high.shape[1])
    rest, sums = np.unique(np.c_[column, exponents[:, slow:]], axis=0, return_inverse=True)
    inner = Plan(exponents[:, :slow], sums.reshape(-1), len(rest))
    return inner, Plan(rest[:, 1:], rest[:, 0], table.high.shape[1])


@dataclass(frozen=True)
class Scaled:
    """A table and its swept quantities near 1, the unknown divided by 2^unknown.

    Attributes
    ----------
    table : Table
    place : tuple of int
        Which of its quantities comes where.
    high, low : ndarray, shape (terms, coefficients)
    columns : list of (high, low), the swept quantities
    unknown : int
    """

    table: Table
    place: tuple[int, ...]
    high: NDArray[np.float64]
    low: NDArray[np.float64]
    columns: Columns
    unknown: int

    @cached_property
    def exponents(self) -> NDArray[np.int64]:
        return self.table.exponents[:, self.place]

    @cached_property
    def terms(self) -> Terms:
        """Those that are not zero."""
        held = np.nonzero(self.table.high)
        high, low = self.high[held][:, None], self.low[held][:, None]
        return Terms(high, low, np.abs(high))

    def plans(self, slow: int) -> tuple[Plan | None, Plan]:
        """How to add them up, `slow` quantities first."""
        return _plans(self.table, self.place, slow)

    def along(self, path: Path) -> Scaled:
        """The same with the points and the quantities in the order of the path."""
        place = tuple(self.place[i] for i in path.place)
        arranged = replace(self, place=place, columns=[self.columns[i] for i in path.place])
        return arranged.at(path.order)

    def at(self, points: NDArray[np.int64]) -> Scaled:
        return replace(self, columns=[(hi[points], lo[points]) for hi, lo in self.columns])


def scaled(table: Table, columns: Columns) -> Scaled | None:
    """Scaled for these points; None where they span so much that doubles could overflow."""
    shifts = np.array([_middle(hi) for hi, _ in columns], np.int64)
    near = [
        (hi * np.ldexp(1.0, -s), lo * np.ldexp(1.0, -s))
        for (hi, lo), s in zip(columns, shifts, strict=True)
    ]
    binary = table.binary + (table.exponents @ shifts)[:, None]
    sizes = np.where(table.high != 0, binary, -(2**40)).max(axis=0)
    sizes = sizes.reshape(-1, table.degree + 1).max(axis=0)
    even = table.structure.step
    unknown = even * round((sizes[0] - sizes[-1]) / (even * table.degree))
    powers = np.tile(np.arange(table.degree + 1), table.high.shape[1] // (table.degree + 1))
    binary = np.where(table.high != 0, binary + unknown * powers - sizes[0], 0)
    fits = binary.min() >= SMALLEST and binary.max() <= LARGEST and abs(unknown) <= FARTHEST
    highest = table.exponents.max(axis=0, initial=0)
    fits = fits and highest.sum() <= POWERS and len(table.exponents) <= TERMS
    if not fits or _span(highest, columns, shifts) > WIDEST:
        return None
    high, low = np.ldexp(table.high, binary), np.ldexp(table.low, binary)
    return Scaled(table, tuple(range(len(near))), high, low, near, unknown)


def _middle(values: NDArray[np.float64]) -> int:
    """The mean exponent of two of the sizes that are not zero."""
    exponents = np.frexp(values[values != 0])[1]
    return round(float(exponents.mean())) if exponents.size else 0


def _span(highest: NDArray[np.int64], columns: Columns, shifts: NDArray[np.int64]) -> float:
    """The exponent of two of the largest monomial, above or below 1; before scaling, which may lose a small value."""
    total = 0.0
    for power, (hi, _), shift in zip(highest, columns, shifts, strict=True):
        sizes = np.abs(hi[hi != 0])
        if sizes.size:
            ends = np.log2([sizes.min(), sizes.max()]) - shift
            total += float(power * np.abs(ends).max())
    return total
