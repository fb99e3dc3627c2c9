"""Monomials in parameters, and the coordinates of one in a basis of others."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

from sympy import Expr, Mul, Pow, Rational, S, Symbol

Monomial = Mapping[Expr, Fraction]
"""Powers of parameters."""


@dataclass(frozen=True)
class Group:
    """A dimensionless group: its name, a number times a monomial, and what it is called."""

    name: str
    powers: Monomial
    number: Expr = S.One
    meaning: str = ""

    @property
    def expr(self) -> Expr:
        return self.number * as_expr(self.powers)

    @property
    def symbol(self) -> Symbol:
        positive = all(p.is_positive for p in self.powers)
        return Symbol(self.name, positive=True) if positive else Symbol(self.name, real=True)


def times(a: Monomial, b: Monomial, power: Any = 1) -> dict[Expr, Fraction]:
    """The monomial a * b**power."""
    made = dict(a)
    for key, n in b.items():
        made[key] = made.get(key, Fraction(0)) + n * Fraction(power)
        if not made[key]:
            del made[key]
    return made


def as_expr(powers: Monomial) -> Expr:
    return Mul(*(p ** Rational(n.numerator, n.denominator) for p, n in powers.items()))


def under_one_root(expr: Expr) -> Expr:
    """A product for print: its square roots of parameters as one."""
    factors = [f.as_base_exp() for f in Mul.make_args(expr)]
    roots = [(b, n) for b, n in factors if b.is_positive and n.is_Rational and n.q == 2]
    if len(roots) < 2:
        return expr
    whole = [(b, n) for b, n in factors if b.is_Symbol and b.is_positive and n.is_Integer and n < 0]
    inside = Mul(*(b ** (2 * n) for b, n in roots + whole))
    outside = [b**n for b, n in factors if (b, n) not in roots + whole]
    return Mul(*outside, Pow(inside, Rational(1, 2), evaluate=False), evaluate=False)


class Basis:
    """Groups chosen one after the other, and the coordinates of monomials in them."""

    def __init__(self) -> None:
        self.groups: list[Group] = []
        self._rows: list[tuple[Expr, dict[Any, Fraction]]] = []

    def reduced(self, powers: Monomial) -> dict[Any, Fraction]:
        """What is left of a monomial, with minus its coordinates under the groups' numbers."""
        rest: dict[Any, Fraction] = dict(powers)
        for pivot, row in self._rows:
            if pivot in rest:
                rest = times(rest, row, -rest[pivot] / row[pivot])
        return rest

    def add(self, group: Group) -> bool:
        """Take a group in, unless it depends on those before."""
        rest = self.reduced(group.powers)
        pivot = next((p for p in rest if not isinstance(p, int)), None)
        if pivot is None:
            return False
        rest[len(self.groups)] = Fraction(1)
        self._rows.append((pivot, rest))
        self.groups.append(group)
        return True

    def coordinates(self, powers: Monomial) -> dict[int, Fraction] | None:
        """The powers of the groups whose product (numbers aside) is a monomial; None outside their span."""
        rest = self.reduced(powers)
        return (
            None if any(not isinstance(p, int) for p in rest) else {j: -c for j, c in rest.items()}
        )
