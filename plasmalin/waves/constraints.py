"""Redundant laws: the proof that the other laws preserve them, or which law breaks them.

With the wave matrix M(omega) and one component c of a constraint, the row r = c M^-1 of multipliers is unique. Every
solution with omega ≠ 0 satisfies the constraint if and only if r has no pole but at omega = 0; then omega**p c = r' M
with multipliers r' that are finite there, for example −i omega (Gauss) = i k . (Ampere) + e (continuity).
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from itertools import combinations
from typing import TYPE_CHECKING, Any

from sympy import Add, Eq, Expr, I, S, Symbol, cancel, expand, gcd

from ..declare.notation import SUPERSCRIPT, paper
from ..errors import ConstraintError, UndeterminedError
from ..exact.combination import power_below, row_combination
from ..exact.polynomial import numerator
from ..exact.sample import Row, holds_off_zero
from .equation import with_tilde
from .relation import undetermined_message

if TYPE_CHECKING:
    from .matrix import WaveMatrix

Terms = dict[tuple[int, Expr], Expr]
"""By column and monomial: a number times the monomial."""


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
        rows = [_filled(line, known) for line in wave.by_row()]
        here = _filled(form, known)
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
    raise _broken(wave, row.law, form)


def _filled(row: Row, known: Mapping[Any, Any]) -> dict[int, Expr]:
    filled = {j: c.xreplace(known) for j, c in row.items()} if known else dict(row)
    return {j: c for j, c in filled.items() if c != 0}


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


# What breaks a constraint ------------------------------------------------------------------------


def _broken(wave: WaveMatrix, law: str, form: Row) -> ConstraintError:
    by_law = _leftover(wave, form)
    guilty = _guilty(by_law) if by_law else _laws_that_hold(wave, form)
    said = _said(wave, form, by_law, guilty) if by_law else _unsaid(wave, form, guilty)
    idle = [c for c in wave.linear.conditions if c not in eliminated(wave.linear.conditions)[1]]
    unused = "".join(f". The condition {paper(c.lhs)} = 0 could not be used" for c in idle)
    return ConstraintError(
        f"constraint '{law}' is not preserved: {said}{unused}", law, tuple(guilty)
    )


def _said(wave: WaveMatrix, form: Row, by_law: Mapping[str, Terms], guilty: list[str]) -> str:
    shown = "; ".join(f"{_shown(wave, by_law[name])} from '{name}'" for name in guilty)
    others = [name for name in by_law if name not in guilty]
    beside = f", which {_listed(others)} {_verb(others, 'does', 'do')} not cancel" if others else ""
    return (
        f"{_listed(guilty)} {_verb(guilty, 'breaks', 'break')} it. By the laws its time derivative leaves "
        f"{shown}{beside}.{_closed(wave, form, by_law)} Correct what is left, give it its counterpart in another law (a "
        "source of one species needs one of another), or leave the constraint out"
    )


def _unsaid(wave: WaveMatrix, form: Row, held: list[str]) -> str:
    evolved = {j for (_, j), c in wave.entries.items() if c.has(wave.omega)}
    still = dict.fromkeys(wave.columns[j].field.name for j in form if j not in evolved)
    why = "".join(f" No law gives the time derivative of '{name}'." for name in still)
    return (
        f"there are waves with ω ≠ 0 that obey every law and violate it.{why} Its fields stand in {_listed(held)}; "
        "correct these, or leave the constraint out"
    )


def _verb(names: list[str], one: str, many: str) -> str:
    return one if len(names) == 1 else many


def _leftover(wave: WaveMatrix, form: Row) -> dict[str, Terms]:
    """What the laws leave of d_t of a constraint, by law, after the best combination; empty where no law evolves it.

    The laws that hold omega give the time derivatives of the constraint's fields; those without are then combined so
    that as few fields as possible are left.
    """
    omega = wave.omega
    rows = wave.by_row()
    rates = [{j: d for j, c in row.items() if (d := c.diff(omega)) != 0} for row in rows]
    if any(d.has(omega) for rate in rates for d in rate.values()):
        return {}
    rest = [_filled(row, {omega: S.Zero}) for row in rows]
    evolving = [i for i, rate in enumerate(rates) if rate]
    found = row_combination([rates[i] for i in evolving], omega, form)
    if found is None:
        return {}
    parts = {evolving[i]: _times(rest[evolving[i]], I * c) for i, c in found.items()}
    still = [i for i, rate in enumerate(rates) if not rate]
    parts |= _help(wave, [rest[i] for i in still], still, _total(parts))
    return _uncancelled(wave, parts)


def _times(row: Row, factor: Expr) -> dict[int, Expr]:
    return {j: factor * c for j, c in row.items()}


def _total(parts: Mapping[int, Row]) -> dict[int, Expr]:
    columns = {j for row in parts.values() for j in row}
    whole = {j: expand(Add(*(row[j] for row in parts.values() if j in row))) for j in columns}
    return {j: c for j, c in whole.items() if c != 0}


def _help(
    wave: WaveMatrix, rows: list[dict[int, Expr]], numbers: list[int], total: Row
) -> dict[int, dict[int, Expr]]:
    """Multiples of the laws without omega that cancel all of a form but the columns of one field, or two."""
    names = list(dict.fromkeys(wave.columns[j].field.name for j in total))
    for kept in [c for count in (1, 2) for c in combinations(names, count)] if rows else []:
        outside = [
            {j: c for j, c in row.items() if wave.columns[j].field.name not in kept}
            for row in (*rows, total)
        ]
        found = row_combination(outside[:-1], wave.omega, outside[-1])
        if found:
            return {numbers[i]: _times(rows[i], -c) for i, c in found.items()}
    return {}


def _uncancelled(wave: WaveMatrix, parts: Mapping[int, Row]) -> dict[str, Terms]:
    """By law, the terms that do not cancel."""
    by_law: dict[str, Terms] = {}
    total: Terms = {}
    zero = {j for j, c in _total(parts).items() if numerator(c, wave.omega).reduced().degree < 0}
    for i, row in parts.items():
        terms = by_law.setdefault(wave.rows[i].law, {})
        for j, c in row.items():
            for term in Add.make_args(expand(c)) if j not in zero else ():
                number, monomial = _number_and_rest(term)
                terms[j, monomial] = terms.get((j, monomial), S.Zero) + number
                total[j, monomial] = total.get((j, monomial), S.Zero) + number
    left = {key for key, c in total.items() if expand(c) != 0}
    kept = {
        law: {key: c for key, c in terms.items() if key in left and c != 0}
        for law, terms in by_law.items()
    }
    return {law: terms for law, terms in kept.items() if terms}


def _number_and_rest(term: Expr) -> tuple[Expr, Expr]:
    number, rest = term.as_independent(*term.free_symbols) if term.free_symbols else (term, S.One)
    return number, rest


def _guilty(by_law: Mapping[str, Terms]) -> list[str]:
    """The fewest laws that hold every leftover term; all of them where several laws do alike."""
    left = {key for terms in by_law.values() for key in terms}
    for count in range(1, len(by_law) + 1):
        covers = [
            some
            for some in combinations(by_law, count)
            if left <= {key for law in some for key in by_law[law]}
        ]
        if covers:
            return list(dict.fromkeys(law for some in covers for law in some))
    return list(by_law)


def _closed(wave: WaveMatrix, form: Row, by_law: Mapping[str, Terms]) -> str:
    """A word where what is left is a multiple of the constraint itself."""
    total: dict[int, Expr] = {}
    for terms in by_law.values():
        for (j, monomial), number in terms.items():
            total[j] = total.get(j, S.Zero) + number * monomial
    found = row_combination([form], wave.omega, total)
    if not found:
        return ""
    return (
        f" Once zero it stays zero, but ω = {paper(expand(I * found[0]))} is a wave that violates it; write the law so that "
        "this drops out, such as -curl(eta*curl(B)) for eta*laplacian(B)."
    )


def _laws_that_hold(wave: WaveMatrix, form: Row) -> list[str]:
    rows = (str(wave.rows[i].law) for (i, j) in wave.entries if j in form)
    return list(dict.fromkeys(rows))


def _listed(names: list[str]) -> str:
    quoted = [f"'{n}'" for n in names]
    return f"law {quoted[0]}" if len(quoted) == 1 else f"laws {', '.join(quoted)}"


def _shown(wave: WaveMatrix, terms: Terms) -> str:
    columns: dict[int, Expr] = {}
    for (j, monomial), number in terms.items():
        columns[j] = columns.get(j, S.Zero) + number * monomial
    parts = []
    for j, c in sorted(columns.items()):
        text = f"({paper(c)})" if isinstance(c, Add) else paper(c)
        parts.append(f"{text} {with_tilde(wave.columns[j].symbol.name)}")
    return " + ".join(parts).replace("+ −", "− ")
