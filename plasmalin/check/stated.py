"""The author's own conditions: parameters with stated values, and ratios stated to be small."""

from __future__ import annotations

from collections.abc import Callable, Collection, Mapping
from dataclasses import dataclass
from typing import Any

from sympy import Eq, Expr, S, Symbol, oo

from ..declare.notation import paper
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


def read_stated(
    names: WaveNames,
    under: Any,
    held: Collection[Symbol] = (),
    in_si: Callable[[Expr], Expr] = lambda e: e,
) -> Stated:
    """The conditions of a claim.

    Parameters
    ----------
    names : WaveNames
    under : None, mapping, text or sequence of texts and SymPy equations
        ``{"gamma_e": 3}``, ``["m_e/m_i << 1", "k*lambda_De << 1", "T_i = 0"]``.
    held : collection of Symbol
        What the claim holds: what it holds and what tends to zero is small there, what it does not hold is zero.
    in_si : callable
        Says the author's expressions in SI.

    Raises
    ------
    DeclarationError
        When a condition is of none of these forms, or an equation cannot be solved for a parameter.
    """
    values: dict[Symbol, Expr] = {}
    ratios: list[Expr] = []
    for left, right, small in _each(names, under, held):
        if small:
            ratios.append(in_si(left / right))
        else:
            one, other = (in_si(_written(names, e)).xreplace(values) for e in (left, right))
            found = _solved(names, one, other, f"{paper(left)} = {paper(right)}")
            if found is None:
                continue
            symbol, value = found
            values = {s: v.xreplace({symbol: value}) for s, v in values.items()} | {symbol: value}
    return Stated(values, tuple(r.xreplace(values) for r in ratios))


def _each(names: WaveNames, under: Any, held: Collection[Symbol]) -> list[tuple[Expr, Expr, bool]]:
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
    return [_one(names, c, held) for c in listed]


def _one(names: WaveNames, condition: Any, held: Collection[Symbol]) -> tuple[Expr, Expr, bool]:
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
        meaning = _written(names, read.left)
        small = read.right == 0 and (not meaning.is_Symbol or meaning in held)
        return read.left, S.One if small else read.right, small
    return read.left, read.right, read.kind == "small"


def _written(names: WaveNames, expr: Expr) -> Expr:
    return Claim(expr, S.Zero, names.definitions).written_out(expr)


def _solved(names: WaveNames, left: Expr, right: Expr, shown: str) -> tuple[Symbol, Expr] | None:
    """An equation solved for one symbol: a side where it is one, else what it is linear in; None for 0 = 0."""
    residual = left - right
    if residual == 0:
        return None
    for plain, other in ((left, right), (right, left)):
        if plain.is_Symbol and plain != omega and not other.has(plain):
            return plain, _possible(plain, other)
    if not residual.free_symbols:
        raise DeclarationError(f"under: {shown} contradicts the other conditions")
    waves = names.wave.wave_symbols
    order = sorted(residual.free_symbols - {omega}, key=lambda s: (s not in waves, s.name))
    for symbol in order:
        value = linear_solution(residual, symbol)
        if value is not None and not value.has(omega):
            return symbol, _possible(symbol, value)
    raise DeclarationError(
        f"under: {shown} cannot be solved for a parameter or a wave number; write it so that one stands alone"
    )


def _possible(symbol: Symbol, value: Expr) -> Expr:
    """The value; zero is a limit of what is positive, less is not."""
    if value.is_infinite or (symbol.is_positive and value.is_negative):
        kind = "positive" if symbol.is_positive else "finite"
        raise DeclarationError(f"under: {symbol} = {value} cannot be; {symbol} is {kind}")
    return value
