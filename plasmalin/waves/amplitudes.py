"""What the rows and columns of a wave matrix stand for: component equations and amplitudes."""

from __future__ import annotations

from dataclasses import dataclass

from sympy import Symbol

from ..declare.fields import Field, decorated


@dataclass(frozen=True)
class Row:
    """One component equation: the law and the component's name ("" for a scalar law)."""

    law: str
    component: str

    def __str__(self) -> str:
        return f"{self.law}, {self.component}" if self.component else self.law


@dataclass(frozen=True)
class Amplitude:
    """One unknown: the field, the component's name ("" for a scalar) and its symbol."""

    field: Field
    component: str
    symbol: Symbol

    def _latex(self) -> str:
        suffix = f",{self.component}" if self.component else ""
        plain = decorated(Field(self.field.name, 0, self.field.background))
        head, _, low = plain.partition("_")
        low = low.strip("{}") + suffix
        return rf"\hat{{{head}}}_{{{low.lstrip(',')}}}" if low else rf"\hat{{{head}}}"
