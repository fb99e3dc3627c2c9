"""Redundant laws: the proof that the other laws preserve them.

With the wave matrix M(omega) and one component c of a constraint, the row r = c M^-1 of multipliers is unique. Every
solution with omega ≠ 0 satisfies the constraint if and only if r has no pole but at omega = 0; then omega**p c = r' M
with multipliers r' that are finite there, for example −i omega (Gauss) = i k . (Ampere) + e (continuity).
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from sympy import Add, Eq, Expr, Symbol, cancel, expand, gcd

from ..declare.notation import SUPERSCRIPT, paper
from ..errors import UndeterminedError
from ..exact.combination import power_below, row_combination
from ..exact.sample import Row, holds_off_zero, put_in
from .breach import broken
from .derive import undetermined_message

if TYPE_CHECKING:
    from .matrix import WaveMatrix


@dataclass(frozen=True)
class Preserved:
    """One component of a constraint with the proof that the laws preserve it.

    Attributes
    ----------
    name : str
        The constraint, and the component where it is a vector.
    form : mapping of int to Expr
        The constraint as a linear form: coefficients by column of the wave matrix.
    power : int
        omega**power * form = sum of multiplier * row of the wave matrix.
    multipliers : mapping of str to Expr
        By row, finite at every omega.
    using : tuple of Eq
        The background's conditions that the proof needs.
    """

    name: str
    form: Row
    power: int
    multipliers: Mapping[str, Expr]
    using: tuple[Eq, ...]

    def __str__(self) -> str:
        power = "" if self.power < 2 else str(self.power).translate(SUPERSCRIPT)
        head = f"ω{power} [{self.name}]" if self.power else f"[{self.name}]"
        parts = " + ".join(f"({paper(c)}) [{row}]" for row, c in self.multipliers.items())
        needed = ", ".join(f"{paper(c.lhs)} = 0" for c in self.using)
        return f"{head} = {parts or '0'}" + (f", using {needed}" if needed else "")


def preserved(wave: WaveMatrix, forms: Iterable[tuple[Any, Row]]) -> tuple[Preserved, ...]:
    """The proof for every component (row, form); what vanishes for this wave vector is left out.

    Raises
    ------
    ConstraintError
        When the laws do not preserve a constraint.
    UndeterminedError
        When the laws do not determine the waves.
    """
    return tuple(_proof(wave, row, form) for row, form in forms if form)


def _proof(wave: WaveMatrix, row: Any, form: Row) -> Preserved:
    for known, using in _attempts(wave.linear.conditions):
        rows = [put_in(line, known) for line in wave.by_row()]
        here = put_in(form, known)
        holds = holds_off_zero(rows, wave.omega, [here])
        if holds is None:
            raise UndeterminedError(undetermined_message(wave))
        found = row_combination(rows, wave.omega, here) if holds else None
        powers = [power_below(c, wave.omega) for c in found.values()] if found is not None else []
        if found is not None and None not in powers:
            power = max((p for p in powers if p is not None), default=0)
            multipliers = {
                str(wave.rows[i]): cancel(c * wave.omega**power) for i, c in found.items()
            }
            return Preserved(str(row), form, power, multipliers, using)
    conditions = wave.linear.conditions
    raise broken(wave, row.law, form, [c for c in conditions if c not in eliminated(conditions)[1]])


# Conditions of the background --------------------------------------------------------------------


def _attempts(conditions: tuple[Eq, ...]) -> Iterator[tuple[dict[Any, Any], tuple[Eq, ...]]]:
    """No condition, each alone, all together: what they eliminate."""
    yield {}, ()
    for some in [(c,) for c in conditions] + ([conditions] if len(conditions) > 1 else []):
        known, used = eliminated(some)
        if known:
            yield known, used


def eliminated(conditions: tuple[Eq, ...]) -> tuple[dict[Any, Expr], tuple[Eq, ...]]:
    """One parameter of every condition that is linear in it, in terms of the others; and those conditions."""
    known: dict[Any, Expr] = {}
    used = []
    for condition in conditions:
        residual = expand(condition.lhs.xreplace(known))
        found = next(_solutions(residual), None)
        if found:
            symbol, value = found
            known = {s: v.xreplace({symbol: value}) for s, v in known.items()} | {symbol: value}
            used.append(condition)
    return known, tuple(used)


def _solutions(residual: Expr) -> Iterator[tuple[Symbol, Expr]]:
    for symbol in sorted(residual.free_symbols, key=str):
        slope = residual.diff(symbol)
        rest = expand(residual - slope * symbol)
        linear = not (slope.has(symbol) or rest.has(symbol)) and slope != 0 and rest != 0
        if linear and not isinstance(gcd(slope, rest), Add):
            value = cancel(-rest / slope)
            if not (symbol.is_positive and value.is_nonpositive):
                yield symbol, value
