"""Sums of a few monomials from their values along powers of a point (Ben-Or and Tiwari 1988, STOC, 301)."""

from __future__ import annotations

from collections.abc import Sequence

from flint import nmod_mat, nmod_poly

from .field import field


def bases_of(sequence: Sequence[int], count: int) -> list[int] | None:
    """The bases b of a sequence that is a sum of so many geometric ones, ``sum(c * b**j)``; None where it is none.

    Parameters
    ----------
    sequence : sequence of int
        More than twice as many numbers as bases, so that the last confirm what the first tell.
    count : int
    """
    p = field()[0]
    known = nmod_mat(count, count, [sequence[i + j] for i in range(count) for j in range(count)], p)
    if known.rank() < count:
        return None
    next_ones = nmod_mat(count, 1, [-sequence[i + count] % p for i in range(count)], p)
    rule = [int(x) for x in known.solve(next_ones).entries()]
    for j in range(len(sequence) - count):
        expected = -sum(q * sequence[j + i] for i, q in enumerate(rule)) % p
        if expected != sequence[j + count]:
            return None
    roots = nmod_poly([*rule, 1], p).roots()
    return [int(r) for r, _ in roots] if len(roots) == count else None


def weights_of(sequence: Sequence[int], bases: Sequence[int]) -> list[int]:
    """The numbers c of a sequence ``sum(c * b**j)`` with known bases b."""
    p, n = field()[0], len(bases)
    powers = nmod_mat(n, n, [pow(b, j, p) for j in range(n) for b in bases], p)
    found = powers.solve(nmod_mat(n, 1, [x % p for x in sequence[:n]], p))
    return [int(x) for x in found.entries()]
