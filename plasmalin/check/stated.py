"""The author's own conditions: parameters with stated values, and ratios stated to be small."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from sympy import Eq, Expr, S, Symbol, oo

from ..declare.operators import omega
from ..declare.typed import read_condition
from ..errors import DeclarationError
from .claim import Claim, WaveNames
from .derived import linear_solution


@dataclass(frozen=True)
class Stated:
    """What an author states.

    Attributes
    ----------
    values : dict of Symbol to Expr
        γ_e = 3, T_i = 0, k V = ω_p (solved for one symbol).
    ratios : tuple of Expr
        What is small against one, in the author's symbols.
    """

    values: dict[Symbol, Expr]
    ratios: tuple[Expr, ...]

    def __bool__(self) -> bool:
        return bool(self.values or self.ratios)


def read_stated(names: WaveNames, under: Any) -> Stated:
    """The conditions of a claim.

    Parameters
    ----------
    names : WaveNames
    under : None, mapping, text or sequence of texts and SymPy equations
        ``{"gamma_e": 3}``, ``["m_e/m_i << 1", "k*lambda_De << 1", "T_i = 0"]``.

    Raises
    ------
    DeclarationError
        When a condition is of none of these forms, or an equation cannot be solved for a parameter.
    """
    values: dict[Symbol, Expr] = {}
    ratios: list[Expr] = []
    for left, right, small in _each(names, under):
        if small:
            ratios.append(left / right)
        else:
            symbol, value = _solved(names, left, right)
            values = {s: v.xreplace({symbol: value}) for s, v in values.items()} | {symbol: value}
    return Stated(values, tuple(ratios))


def _each(names: WaveNames, under: Any) -> list[tuple[Expr, Expr, bool]]:
    if under is None:
        return []
    if isinstance(under, Mapping):
        return [
            (names.expression(k, "under"), names.expression(v, f"under: {k}"), False)
            for k, v in under.items()
        ]
    listed = [under] if isinstance(under, str | Eq) else under
    if not isinstance(listed, list | tuple | set):
        raise DeclarationError(f"under={under!r}: give a mapping or a list of conditions")
    return [_one(names, c) for c in listed]


def _one(names: WaveNames, condition: Any) -> tuple[Expr, Expr, bool]:
    if isinstance(condition, Eq):
        return (
            names.expression(condition.lhs, "under"),
            names.expression(condition.rhs, "under"),
            False,
        )
    if not isinstance(condition, str):
        raise DeclarationError(
            f'under: {condition!r} is not a condition; write "m_e/m_i << 1" or "gamma_e = 3"'
        )
    read = read_condition(condition, names.names, names.unknown)
    if read.kind == "limit":
        if read.right in (oo, -oo):
            return 1 / read.left, S.One, True
        return read.left, read.right, False
    return read.left, read.right, read.kind == "small"


def _written(names: WaveNames, expr: Expr) -> Expr:
    return Claim(expr, S.Zero, names.definitions).written_out(expr)


def _solved(names: WaveNames, left: Expr, right: Expr) -> tuple[Symbol, Expr]:
    """An equation solved for one symbol: the left side where it is one, else what it is linear in."""
    residual = _written(names, left - right)
    plain = _written(names, left)
    if plain.is_Symbol and not _written(names, right).has(plain):
        return plain, _written(names, right)
    waves = names.wave.wave_symbols
    order = sorted(
        residual.free_symbols - {omega}, key=lambda s: (s != plain, s not in waves, s.name)
    )
    for symbol in order:
        value = linear_solution(residual, symbol)
        if value is not None:
            return symbol, value
    raise DeclarationError(f"under: {left} = {right} cannot be solved for a symbol of the model")
