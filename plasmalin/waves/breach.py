"""Which law breaks a constraint: what the laws leave of its time derivative after the best combination."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from itertools import combinations
from typing import TYPE_CHECKING

from sympy import Add, Eq, Expr, I, S, expand

from ..declare.notation import paper
from ..errors import ConstraintError
from ..exact.combination import row_combination
from ..exact.polynomial import numerator
from ..exact.sample import Row, put_in
from .equation import with_tilde

if TYPE_CHECKING:
    from .matrix import WaveMatrix

Terms = dict[tuple[int, Expr], Expr]
"""By column and monomial: a number times the monomial."""


def broken(wave: WaveMatrix, law: str, form: Row, idle: Sequence[Eq]) -> ConstraintError:
    """The error for a constraint that is not preserved; `idle` are conditions that the proof could not use."""
    by_law = _leftover(wave, form)
    guilty = _guilty(by_law) if by_law else _laws_that_hold(wave, form)
    said = _said(wave, form, by_law, guilty) if by_law else _unsaid(wave, form, guilty)
    if any(f.gradient != 0 for f in wave.linear.fields.values()):
        said += (
            ". The gradient of a background is local here: it enters where it is differentiated as typed, div(n*v), but not "
            "the divergence of another law, so that what holds exactly may fail by O(1/kL)"
        )
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
    rest = [put_in(row, {omega: S.Zero}) for row in rows]
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
