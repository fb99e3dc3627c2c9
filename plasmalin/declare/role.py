"""What a ready law is for, kept beside the law so that ready laws can be held against each other."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

from sympy import Expr, S


@dataclass(frozen=True)
class Role:
    """The part a ready law plays for one species.

    Attributes
    ----------
    velocity : Expr
        The velocity, by which the species is known.
    pressure : Expr or None
        In a momentum law, the pressure that acts.
    closes : tuple of Expr or None
        In a closure, the pressure or temperature fields that it evolves; empty where it leaves the pressure to be the
        multiplier of a constraint.
    exchange : Expr
        What collisions with other species give it, N/m^3 in a momentum law, W/m^3 in an energy law.
    """

    velocity: Expr
    pressure: Expr | None = None
    closes: tuple[Expr, ...] | None = None
    exchange: Expr = S.Zero

    def mapped(self, change: Callable[[Expr], Expr]) -> Role:
        """The same with every expression changed."""

        def each(value: Any) -> Any:
            return None if value is None else change(value)

        closes = None if self.closes is None else tuple(map(change, self.closes))
        return Role(change(self.velocity), each(self.pressure), closes, change(self.exchange))
