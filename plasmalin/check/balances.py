"""Leading parts of the derived relation that a claim may have been meant as."""

from __future__ import annotations

import time
from collections.abc import Iterator, Mapping
from fractions import Fraction
from itertools import combinations

from sympy import Expr

from ..declare.operators import omega
from ..exact.polynomial import ExactPolynomial
from ..exact.polynomial import polynomial as read_exact
from ..waves.ordering import leading_balances
from .derived import Derived, bare
from .sizes import BALANCED

MOST_PARTS = 40
"""Leading parts that are tried."""


def leading_parts(derived: Derived, degree: int, deadline: float) -> list[ExactPolynomial]:
    """The leading balances of a degree in ω under one symbol, or two, becoming small or large, the longest first."""
    found: dict[Expr, ExactPolynomial] = {}
    for factor, _ in derived.factors:
        if factor.degree <= degree or len(factor) > BALANCED:
            continue
        for weights in _weightings(factor):
            if time.process_time() > deadline:
                break
            for balance in leading_balances(factor, weights, None):
                if balance.roots == degree and balance.expr not in found:
                    found[balance.expr] = bare(read_exact(balance.expr, omega))
    return sorted(found.values(), key=lambda p: -len(p))[:MOST_PARTS]


def _weightings(factor: ExactPolynomial) -> Iterator[Mapping[Expr, Fraction]]:
    plain = [g for g in factor.generators if g.is_Symbol]
    single = [{g: Fraction(w)} for g in plain for w in (1, -1)]
    yield from single
    yield from ({**a, **b} for a, b in combinations(single, 2) if set(a) != set(b))
