"""Irreducible factors over the rationals."""

from __future__ import annotations

from math import gcd
from typing import Any

from flint import Ordering, fmpq, fmpq_mpoly_ctx, fmpz_mpoly, fmpz_mpoly_ctx


def irreducible_factors(p: fmpz_mpoly) -> list[tuple[fmpz_mpoly, int]]:
    """Primitive integer factors with multiplicity.

    They are taken over the rationals: python-flint 0.9 orders integer factors by machine integers, which large
    coefficients overflow.
    """
    ring = p.context()
    rational = fmpq_mpoly_ctx.get(("x", ring.nvars()), Ordering.lex)
    whole = rational.from_dict({e: fmpq(c) for e, c in p.terms()})
    return [(_integer(f, ring), int(m)) for f, m in whole.factor()[1]]


def _integer(factor: Any, ring: fmpz_mpoly_ctx) -> fmpz_mpoly:
    terms = dict(factor.terms())
    scale = 1
    for c in terms.values():
        scale = scale * int(c.q) // gcd(scale, int(c.q))
    return ring.from_dict({e: int(c * scale) for e, c in terms.items()})
