"""From linearized laws to a wave matrix: a wave vector along the axes, amplitudes, and laws lowered to components."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from typing import Any

import numpy as np
from sympy import Expr, Float, Rational, Symbol, cos, expand, sin

from ..declare.fields import Components, Field, FieldAtom, exact
from ..declare.law import Law
from ..declare.operators import WAVE_SYMBOLS, Advect, Div
from ..declare.reader import read_expression
from ..errors import BackgroundError, DeclarationError, RankError, UndeterminedError
from ..linearize.ledger import KEPT
from ..linearize.linearized import LinearizedModel, symmetric_law
from .amplitudes import Amplitude, Row
from .constraints import preserved
from .lowering import Index, Wave, indices, lower
from .matrix import WaveMatrix

NOT_A_NAME = {"omega", "k_abs"}


def plane_wave(linear: LinearizedModel, direction: Any, angle: Any) -> WaveMatrix:
    """Lower a linearized model for a wave vector; see `LinearizedModel.plane_wave`."""
    wave, constraints = lowered(linear, wave_vector(linear, direction, angle))
    return replace(wave, constraints=preserved(wave, constraints))


def lowered(
    linear: LinearizedModel, k: tuple[Expr, ...]
) -> tuple[WaveMatrix, list[tuple[Row, dict[int, Expr]]]]:
    """The wave matrix, and every component of the constraints as a linear form that is not proved yet."""
    _refuse_sheared_flow(linear, k)
    columns = _amplitudes(linear)
    symbols = {(c.field.name, _index(c, linear.axes)): c.symbol for c in columns}

    def amplitude(field: Field, index: Index) -> Symbol:
        return symbols[field.name, tuple(sorted(index)) if field.symmetric else index]

    wave = Wave(linear.axes, k, amplitude)
    number = {c.symbol: j for j, c in enumerate(columns)}

    def by_column(form: Any) -> dict[int, Expr]:
        return {number[s]: c for s, c in form.items() if s is not None and c != 0}

    equations = [(row, by_column(form)) for row, form in _equations(linear, linear.laws, wave)]
    rows = tuple(row for row, _ in equations)
    if len(rows) != len(columns):
        raise UndeterminedError(f"{len(rows)} component equations for {len(columns)} unknowns")
    entries = {(i, j): c for i, (_, form) in enumerate(equations) for j, c in form.items()}
    made = WaveMatrix(linear, k, rows, columns, entries)
    redundant = _equations(linear, linear.redundant, wave)
    return made, [(row, by_column(form)) for row, form in redundant]


def _refuse_sheared_flow(linear: LinearizedModel, k: tuple[Expr, ...]) -> None:
    """A flow whose part along k changes with position turns the wave vector: no plane wave is a solution."""
    for name, field in linear.fields.items():
        if field.rank != 1 or field.gradient == 0 or not _advects(linear, name):
            continue
        size = range(len(k))
        changes = (sum(field.gradient.entry((i, j)) * k[j] for j in size) for i in size)
        if any(expand(c) != 0 for c in changes):
            raise BackgroundError(
                f"the flow '{name}' along k changes with position, so that a plane wave does not exist; "
                "choose a wave vector across the sheared component, or leave the gradient out"
            )


def _advects(linear: LinearizedModel, name: str) -> bool:
    nodes = (n for law in linear.laws.values() for n in law.residual.atoms(Advect, Div))
    return any(f.name == name for n in nodes for f in n.args[0].atoms(Field))


def _index(column: Amplitude, axes: str) -> Index:
    return tuple(axes.index(a) for a in column.component)


def _amplitudes(linear: LinearizedModel) -> tuple[Amplitude, ...]:
    found = []
    for field in linear.fields.values():
        for index in indices(field.rank, len(linear.axes)):
            if field.symmetric and index != tuple(sorted(index)):
                continue
            component = "".join(linear.axes[i] for i in index)
            name = f"{field.name}_{component}" if component else field.name
            found.append(Amplitude(field, component, Symbol(name)))
    return tuple(found)


def _equations(linear: LinearizedModel, laws: Mapping[str, Law], wave: Wave) -> Any:
    """Each component equation with its linear form (zero rows of a symmetric law left out)."""
    from sympy import Add

    for law in laws.values():
        kept = [p for p in linear.ledger if p.law == law.name and p.fate == KEPT]
        residual = Add(*(p.value if p.side == "left" else -p.value for p in kept))
        form = lower(residual, wave)
        upper_only = law.rank == 2 and symmetric_law(law)
        for index in indices(law.rank, wave.size):
            if not (upper_only and index != tuple(sorted(index))):
                component = "".join(wave.axes[i] for i in index)
                yield Row(law.name, component), form.get(index, {})


def wave_vector(linear: LinearizedModel, direction: Any, angle: Any) -> tuple[Expr, ...]:
    """The wave vector's components along the model's axes."""
    axes = linear.axes
    if (direction is None) == (angle is None):
        raise DeclarationError(
            'give either a direction ("x" or one entry per axis) or angle="theta"'
        )
    if angle is not None:
        if not {"x", "z"} <= set(axes):
            raise DeclarationError(f"angle= needs the axes x and z; the model has '{axes}'")
        k = _wave_symbol(linear, "k")
        theta = _wave_symbol(linear, angle) if isinstance(angle, str) else _entry(linear, angle)
        if theta == k:
            raise DeclarationError(
                "the angle cannot be named k, which is the wave number; name it theta"
            )
        along = {"x": k * sin(theta), "y": 0 * k, "z": k * cos(theta)}
        return tuple(along[a] for a in axes)
    if isinstance(direction, str):
        if direction not in tuple(axes):
            raise DeclarationError(
                f"direction {direction!r} is not an axis of the model ('{axes}')"
            )
        k = _wave_symbol(linear, "k")
        return tuple(k if a == direction else 0 * k for a in axes)
    if isinstance(direction, np.ndarray):
        direction = direction.tolist()
    if not isinstance(direction, tuple | list) or len(direction) != len(axes):
        raise DeclarationError(
            f"direction {direction!r} does not fit the axes '{axes}'; give one entry per axis"
        )
    made = tuple(_entry(linear, entry) for entry in direction)
    if all(c == 0 for c in made):
        raise DeclarationError("the wave vector is zero; give at least one component")
    return made


def _entry(linear: LinearizedModel, entry: Any) -> Expr:
    names: dict[str, Any] = {**linear.symbols, **{s.name: s for s in WAVE_SYMBOLS}}
    try:
        made = (
            read_expression(entry, names, unknown=lambda name: Symbol(name, real=True))
            if isinstance(entry, str)
            else exact(entry)
        )
    except (RankError, DeclarationError):
        raise _no_component(entry) from None
    made = made.xreplace({x: Rational(repr(float(x))) for x in made.atoms(Float)})
    if made.atoms(FieldAtom, Components) or {s.name for s in made.free_symbols} & NOT_A_NAME:
        raise _no_component(entry)
    return made.xreplace(
        {s: names.get(s.name, Symbol(s.name, real=True)) for s in made.free_symbols}
    )


def _no_component(entry: Any) -> DeclarationError:
    return DeclarationError(
        f"{entry!r} is not a component of a wave vector; give names, finite numbers or scalar expressions"
    )


def _wave_symbol(linear: LinearizedModel, name: str) -> Symbol:
    if name in linear.symbols or not name.isidentifier() or name in NOT_A_NAME:
        raise DeclarationError(
            f"'{name}' is a parameter or has another meaning; name the wave number otherwise, e.g. plane_wave(('q', 0, 0))"
        )
    return Symbol(name, real=True)
