"""Determinants by memoised minors: every set of used columns is expanded once."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from math import inf
from typing import Any

from .gaussian import Gaussian
from .ring import Ring


class TooLong(ArithmeticError):
    """A determinant is not written out, since it has more terms than asked for."""


def minors_determinant(
    rows: Sequence[Mapping[int, Gaussian]], ring: Ring, longest: float = inf
) -> Gaussian:
    """The determinant of a square table of polynomials, given row by row.

    Where every entry is real the expansion runs on plain FLINT polynomials.

    Raises
    ------
    TooLong
        When a minor has more than `longest` terms.
    """
    order = row_order(rows)
    sign = permutation_sign(order)
    if all(not p.im for row in rows for p in row.values()):
        plain = [{j: p.re for j, p in rows[i].items()} for i in order]
        value = _expand(plain, ring.context.constant(1), ring.context.constant(0), longest)
        return Gaussian(sign * value, ring.context.constant(0))
    gaussian = [dict(rows[i]) for i in order]
    whole: Gaussian = _expand(gaussian, ring.constant(1), ring.constant(0), longest)
    return whole if sign > 0 else -whole


def row_order(rows: Sequence[Mapping[int, Gaussian]]) -> list[int]:
    """Rows that bring the fewest new columns first, so that few sets of columns ever arise."""
    left, seen, order = set(range(len(rows))), set[int](), []
    while left:
        best = min(left, key=lambda i: (len(set(rows[i]) - seen), _terms(rows[i]), i))
        order.append(best)
        left.remove(best)
        seen |= set(rows[best])
    return order


def _terms(row: Mapping[int, Gaussian]) -> int:
    return sum(map(len, row.values()))


def permutation_sign(order: Sequence[int]) -> int:
    inversions = sum(a > b for n, a in enumerate(order) for b in order[n + 1 :])
    return -1 if inversions % 2 else 1


def _expand(rows: Sequence[Mapping[int, Any]], one: Any, zero: Any, longest: float) -> Any:
    """Expansion along the rows in order; columns that no later row uses must be used now."""
    size = len(rows)
    last = {j: n for n, row in enumerate(rows) for j in row}
    memo: dict[int, Any] = {}

    def minor(n: int, used: int) -> Any:
        if n == size:
            return one
        if used not in memo:
            memo[used] = total(n, used)
        return memo[used]

    def total(n: int, used: int) -> Any:
        row = rows[n]
        free = [j for j in row if not used >> j & 1]
        due = [j for j in free if last[j] == n]
        if len(due) > 1:
            return zero
        found = zero
        for j in due or free:
            below = minor(n + 1, used | 1 << j)
            if below:
                odd = (j - (used & ((1 << j) - 1)).bit_count()) % 2
                found = found - row[j] * below if odd else found + row[j] * below
        if len(found) > longest:
            raise TooLong
        return found

    return minor(0, 0)
