"""Sums of terms c x^a y^b ... at many points in twice the working precision, every term taken once.

What is added, and in which order, is planned from the exponents alone. Monomials come from tables of powers, each from
one with a quantity less; their products with the coefficients and the sums are taken with exact errors, which travel
along in a second array. docs/certificate.md proves the bound that `Plan.noise` states.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from math import gcd
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from .doubledouble import Array, Pair, cut, power, product_error, split, sum_error, times, two_sum
from .path import Columns

MONOMIALS, WORK = 64, 2**17
"""So many monomials are held at a time, as so many numbers: tables do not grow with the terms or the points."""

Runs = NDArray[np.int64] | None
"""The run of every point: terms are the same along a run. None where they are constant."""


class Terms(NamedTuple):
    """Coefficients or sums in high and low part with a bound on their size; shape (terms, runs or 1)."""

    high: Array
    low: Array
    size: Array

    def at(self, rows: NDArray[np.int64]) -> Terms:
        return Terms(*(kind.take(rows, axis=0) for kind in self))


class Link(NamedTuple):
    """Monomials of some quantities from those of one less: which of these, times which power of the new one."""

    shorter: NDArray[np.int64]
    power: NDArray[np.int64]


@dataclass(frozen=True)
class Part:
    """Terms that share few monomials.

    Attributes
    ----------
    sums : ndarray of int
        The sums they belong to, that with the most terms first.
    terms : ndarray of int
        The first term of every sum, then the second of all that have two ...
    monomials : list of ndarray of int
        Those of the first terms, of the second ones ...
    chain : list of Link
        How the monomials are made, quantity by quantity.
    """

    sums: NDArray[np.int64]
    terms: NDArray[np.int64]
    monomials: list[NDArray[np.int64]]
    chain: list[Link]


@dataclass(frozen=True)
class Plan:
    """How to add up terms.

    Attributes
    ----------
    exponents : ndarray of int64, shape (terms, quantities)
    sums : ndarray of int64, shape (terms,)
        The sum that each term belongs to.
    count : int
        How many sums there are.
    """

    exponents: NDArray[np.int64]
    sums: NDArray[np.int64]
    count: int

    @cached_property
    def noise(self) -> int:
        """Error of the sums in units of UNIT^2 sum |c x^a y^b ...|, for exact terms."""
        most = int(np.bincount(self.sums).max())
        degree = int(self.exponents.sum(axis=1).max())
        return 2 * most**2 + 3 * most + 5 + 8 * max(degree - 1, 0)

    @cached_property
    def used(self) -> list[int]:
        """The quantities that occur; one at least."""
        return np.flatnonzero(self.exponents.any(axis=0)).tolist() or [0]

    @cached_property
    def steps(self) -> list[int]:
        """Of every one of these only such powers occur."""
        return [gcd(*self.exponents[:, i].tolist()) or 1 for i in self.used]

    @cached_property
    def largest(self) -> list[int]:
        """Their largest powers."""
        return [int(self.exponents[:, i].max()) for i in self.used]

    @cached_property
    def parts(self) -> list[Part]:
        """All terms, sorted by their monomials."""
        powers = self.exponents[:, self.used] // np.array(self.steps)
        monomials, which = np.unique(powers, axis=0, return_inverse=True)
        which, parts = which.reshape(-1), []
        for first in range(0, len(monomials), MONOMIALS):
            mine = np.flatnonzero((which >= first) & (which < first + MONOMIALS))
            chain = _chain(monomials[first : first + MONOMIALS])
            parts.append(_part(mine, self.sums[mine], which[mine] - first, chain))
        return parts

    def added(self, terms: Terms, run: Runs, columns: Columns) -> Terms:
        """All sums at all points of the columns."""
        points = len(columns[0][0])
        total = Terms(*(np.zeros((self.count, points)) for _ in range(3)))
        size = WORK // max(len(part.chain[-1].power) for part in self.parts)
        for first in range(0, points, size):
            here = slice(first, first + size)
            near = [(columns[i][0][here], columns[i][1][here]) for i in self.used]
            runs = None if run is None else run[here]
            self._add(terms, runs, near, Terms(*(kind[:, here] for kind in total)))
        return total

    def _add(self, terms: Terms, run: Runs, columns: Columns, total: Terms) -> None:
        powers = [_powers(*each) for each in zip(columns, self.steps, self.largest, strict=True)]
        for n, part in enumerate(self.parts):
            found = _sums(part, terms.at(part.terms), run, _monomials(part.chain, powers))
            more = _merged(total.at(part.sums), found) if n else found
            for mine, kind in zip(more, total, strict=True):
                kind[part.sums] = mine
        total.high[...], total.low[...] = two_sum(total.high, total.low)


def _part(
    terms: NDArray[np.int64],
    sums: NDArray[np.int64],
    monomials: NDArray[np.int64],
    chain: list[Link],
) -> Part:
    names, place, counts = np.unique(sums, return_inverse=True, return_counts=True)
    longest = np.argsort(-counts, kind="stable")
    place = np.argsort(longest)[place]
    order = np.lexsort((monomials, place))
    turn = np.arange(len(order)) - np.searchsorted(place[order], place[order])
    order = order[np.argsort(turn, kind="stable")]
    ends = np.cumsum(np.bincount(turn))[:-1]
    return Part(names[longest], terms[order], np.split(monomials[order], ends), chain)


def _chain(monomials: NDArray[np.int64]) -> list[Link]:
    """For monomials in lexicographic order, so that those that start alike are neighbors."""
    chain, shorter = [], np.zeros(len(monomials), np.int64)
    new = np.zeros(len(monomials), bool)
    new[0] = True
    for powers in monomials.T:
        new[1:] |= powers[1:] != powers[:-1]
        chain.append(Link(shorter[new], powers[new]))
        shorter = np.cumsum(new) - 1
    return chain


def _powers(x: Pair, step: int, largest: int) -> Pair:
    """1, x^step, x^(2 step) ... up to x^largest in rows, each the product of two before it."""
    count = largest // step + 1
    high, low = (np.zeros((count, len(x[0]))) for _ in range(2))
    high[0] = 1.0
    if count > 1:
        high[1], low[1] = power(x, step)
    done = 1
    while done + 1 < count:
        more = slice(1, min(done, count - 1 - done) + 1)
        into = slice(done + 1, done + more.stop)
        high[into], low[into] = times((high[more], low[more]), (high[done], low[done]))
        done = into.stop - 1
    return high, low


def _monomials(chain: list[Link], powers: list[Pair]) -> list[Array]:
    """High part, its two halves and low part, shape (monomials, points) each."""
    high, low = (part.take(chain[0].power, axis=0) for part in powers[0])
    for link, table in zip(chain[1:], powers[1:], strict=True):
        shorter = high.take(link.shorter, axis=0), low.take(link.shorter, axis=0)
        factor = table[0].take(link.power, axis=0), table[1].take(link.power, axis=0)
        high, low = times(shorter, factor)
    return [high, *split(high), low]


def _sums(part: Part, terms: Terms, run: Runs, monomials: list[Array]) -> Terms:
    """One term for every sum, then one more for all that have two, and so on; terms as `part` orders them."""
    shape, done = (len(part.sums), monomials[0].shape[1]), 0
    sums, work = Terms(*(np.empty(shape) for _ in range(3))), [np.empty(shape) for _ in range(10)]
    for which in part.monomials:
        rows, here = slice(len(which)), slice(done, done + len(which))
        space = [w[rows] for w in work]
        # Written out for every sum and point: broadcasting takes nearly twice the time.
        for kind, out in zip(terms, space[:3], strict=True):
            out[...] = kind[here] if run is None else kind[here].take(run, axis=1)
        for kind, out in zip(monomials, space[3:7], strict=True):
            kind.take(which, axis=0, out=out, mode="clip")
        _multiply(space)
        if done:
            _one_more(Terms(*(kind[rows] for kind in sums)), space)
        else:
            sums.high[...], sums.low[...], sums.size[...] = space[7], space[8], space[2]
        done = here.stop
    return sums


def _multiply(space: list[Array]) -> None:
    """The product of a term and its monomial, and all that it lacks, as arrays 7 and 8; its size as array 2."""
    value, low, size, m, head, tail, m_low, product, error, work = space
    np.multiply(value, m, out=product)
    low *= m
    m_low *= value
    low += m_low
    size *= np.abs(m, out=m)
    high, rest = m, m_low
    cut(value, high, rest)
    product_error((high, rest), (head, tail), product, error, work)
    error += low


def _one_more(sums: Terms, space: list[Array]) -> None:
    """Sums and products, the rounding errors added to the second array."""
    total, exact, size, *_, product, error, work = space
    sums.low[...] += error
    np.add(sums.high, product, out=total)
    sum_error(sums.high, product, total, exact, work)
    sums.low[...] += exact
    sums.high[...] = total
    sums.size[...] += size


def _merged(sums: Terms, more: Terms) -> Terms:
    high, error = two_sum(sums.high, more.high)
    return Terms(high, sums.low + more.low + error, sums.size + more.size)
