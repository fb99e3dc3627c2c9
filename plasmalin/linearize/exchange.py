"""What collisions take from one species and give to another: whether the sums vanish to first order."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray
from sympy import Expr

from ..declare.law import Law
from ..declare.operators import dot, rank_of

CONSERVED = 1e-6
"""Largest sum, relative to its largest part, that counts as none; the rest of the extrapolation stays below."""

Values = Callable[[Expr, float], NDArray[Any]]
"""An expression in numbers over the phases, at an amplitude."""


@dataclass(frozen=True)
class Exchange:
    """The sum over species of what their collision terms give.

    Attributes
    ----------
    what : str
        "momentum" or "energy".
    laws : tuple of str
        The laws that were given ``collisions=``.
    error : float
        The sum at zeroth and first order, relative to its largest part.
    """

    what: str
    laws: tuple[str, ...]
    error: float

    @property
    def conserved(self) -> bool:
        return self.error <= CONSERVED

    def __str__(self) -> str:
        outcome = "conserved to first order" if self.conserved else "NOT conserved"
        return f"collisions: sum of {self.what} over {', '.join(self.laws)}: {outcome} ({self.error:.1e} of the largest)"


def exchanges(laws: Mapping[str, Law], values: Values) -> tuple[Exchange, ...]:
    """Momentum, and energy where an energy law takes part, summed over the laws with collisions.

    The energy of a momentum law is the work that the force does.
    """
    given = {n: law.role for n, law in laws.items() if law.role and law.role.exchange != 0}
    forces = {n: r.exchange for n, r in given.items() if rank_of(r.exchange) == 1}
    heats = {n: r.exchange for n, r in given.items() if n not in forces}
    works = {n: dot(force, given[n].velocity) for n, force in forces.items()}
    found = [("momentum", forces), ("energy", works | heats if heats else {})]
    return tuple(Exchange(what, tuple(p), _sum(list(p.values()), values)) for what, p in found if p)


def _sum(parts: list[Expr], values: Values) -> float:
    at = {a: np.array([values(p, a) for p in parts]) for a in (0, 0.5, -0.5, 1, -1)}
    first = (8 * (at[0.5] - at[-0.5]) - (at[1] - at[-1])) / 6
    return max(_relative(at[0], at[0]), _relative(first, at[1] - at[0]))


def _relative(parts: NDArray[Any], size: NDArray[Any]) -> float:
    largest = np.abs(size).max()
    return float(np.abs(parts.sum(axis=0)).max() / largest) if largest > 0 else 0.0
