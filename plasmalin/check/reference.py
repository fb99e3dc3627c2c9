"""A claim on the distance of ω from a reference frequency, as δ³ = (n_b/2n_0) ω_p³ with δ = ω − ω_p.

The powers of δ say what is leading there; written in ω they are lost in sums that cancel.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace

from sympy import Add, Expr

from ..declare.operators import omega
from .claim import Claim
from .derived import Derived, bare
from .places import nodes, parts

MOST = 3
"""Reference frequencies that are tried."""


def references(claim: Claim) -> list[Expr]:
    """What is subtracted from ω in the claim, in the author's symbols."""
    used = {s.name for s in claim.used}
    sums = (
        node
        for part, expr in parts(claim).items()
        if part in ("left", "right", *used)
        for _, node in nodes(expr)
        if isinstance(node, Add)
    )
    return list(dict.fromkeys(_reference(claim, sums)))[:MOST]


def _reference(claim: Claim, sums: Iterator[Add]) -> Iterator[Expr]:
    for node in sums:
        for term in node.args:
            rest = node - term
            if term in (omega, -omega) and not claim.written_out(rest).has(omega):
                yield -rest if term == omega else rest


def about(claim: Claim, derived: Derived, reference: Expr) -> tuple[Claim, Derived]:
    """A claim and a relation with ω for what it is above a reference frequency."""
    moved = claim.mapped(lambda e: from_reference(e, reference))
    value = derived.rational(claim.written_out(reference))
    shifted = derived.polynomial.substitute({omega: value + omega})
    return moved, replace(derived, polynomial=bare(shifted))


def from_reference(expr: Expr, reference: Expr) -> Expr:
    """An expression in ω with reference + ω for it."""
    return expr.xreplace({omega: reference + omega})
