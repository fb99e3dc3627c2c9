"""The names of a model: what fields, parameters and vectors are declared, and how a background is read with them."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

import numpy as np
from sympy import Expr, Float, Rational, S, Symbol

from ..errors import DeclarationError, RankError
from .constants import UNITS, codata
from .declared_units import DeclaredUnits
from .fields import Components, Field, FieldAtom, components, exact
from .operators import OPERATORS, WAVE_SYMBOLS, identity, rank_of
from .quantities import plain_number
from .reader import read_expression
from .units import read_unit

WAVES = {s.name: s for s in WAVE_SYMBOLS}
SPECIAL = {"identity": identity, "components": components}
RESERVED = {*WAVES, *SPECIAL, *OPERATORS, "i", "sqrt", "exp"}


@dataclass(frozen=True)
class Parameter:
    """A declared parameter: its symbol, its default number (in its unit) and whether it was only implied."""

    symbol: Symbol
    value: float | None = None
    implied: bool = False


class Names:
    """Everything that a model's laws can be written in; grows with the model.

    Attributes
    ----------
    axes : str
    fields : dict of str to Field
    parameters : dict of str to Parameter
    vectors : dict of str to Expr
        Constant vectors.
    units : DeclaredUnits
    """

    def __init__(self, axes: str) -> None:
        self.axes = axes
        self.fields: dict[str, Field] = {}
        self.parameters: dict[str, Parameter] = {}
        self.vectors: dict[str, Expr] = {}
        self.units = DeclaredUnits()

    @property
    def symbols(self) -> dict[str, Symbol]:
        return {name: p.symbol for name, p in self.parameters.items()}

    def in_text(self) -> Mapping[str, Any]:
        """What a text may refer to."""
        own = {**self.symbols, **self.vectors, **self.fields}
        return {**WAVES, **SPECIAL, **OPERATORS, **own}

    def fresh(self, name: Any) -> str:
        """A name that nothing has yet."""
        if not isinstance(name, str) or not name.isidentifier() or name.startswith("_"):
            raise DeclarationError(
                f"{name!r} is not a name: use letters, digits and _, starting with a letter"
            )
        if name in RESERVED:
            raise DeclarationError(f"the name '{name}' is reserved; choose another")
        if name in self.fields:
            raise DeclarationError(f"a field '{name}' is declared already; choose another name")
        if name in self.parameters or name in self.vectors:
            raise DeclarationError(f"a parameter '{name}' is declared already; choose another name")
        return name

    # What is declared --------------------------------------------------------------------------

    def add_field(self, field: Field, unit: Any) -> Field:
        if not isinstance(field.latex_name, str | None):
            raise DeclarationError(f"'{field.name}': latex={field.latex_name!r} is not a text")
        with self.units.unless_wrong():
            field = self.units.field(field, unit, self._implied)
        self.fields[field.name] = field
        return field

    def add_vector(self, name: Any, entries: Any, unit: Any) -> Expr:
        name = self.fresh(name)
        vector = self.vector(name, entries, "vector")
        if unit is not None:
            with self.units.unless_wrong():
                self.units.vector(name, vector, unit, self._implied)
        self.vectors[name] = vector
        return vector

    def add_parameter(self, name: Any, positive: Any, unit: Any, value: Any) -> Symbol:
        made = None if unit is None else read_unit(unit)
        if not isinstance(positive, bool):
            raise DeclarationError(
                f"'{name}': positive={positive!r} is neither True nor False; a number is given as value=..., "
                "a unit as unit=..."
            )
        known = self.parameters.get(name) if isinstance(name, str) else None
        if known is None:
            self.fresh(name)
        elif not known.implied and bool(known.symbol.is_positive) != positive:
            raise DeclarationError(f"the parameter '{name}' is declared already, otherwise")
        symbol = Symbol(name, positive=True) if positive else Symbol(name, real=True)
        own = made or self.units.of.get(name)
        number = None if value is None else plain_number(name, value, own, positive=positive)
        if value is None and known:
            number = self.units.moved(name, known.value, made)
        if made is not None:
            self.units.refuse_other(name, made)
            self.units.put(name, made)
        self.parameters[name] = Parameter(symbol, number)
        return symbol

    def add_constant(self, name: Any) -> Symbol:
        """A constant of nature, in SI or in the unit that it declares already."""
        number, unit = Fraction(codata(name)), read_unit(UNITS[name])
        self.units.refuse_other(name, unit)
        own = self.units.of.get(name, unit)
        symbol = self.add_parameter(name, True, None, float(number / own.scale))
        self.units.put(name, own, check=False)
        return symbol

    def _imply(self, name: str) -> Expr:
        """A background names a parameter that is not declared yet."""
        self.parameters[self.fresh(name)] = Parameter(Symbol(name, real=True), implied=True)
        return self.parameters[name].symbol

    def _implied(self, name: str) -> bool:
        return self.parameters[name].implied

    # What a background is given by -------------------------------------------------------------

    def scalar(self, given: Any) -> Expr:
        """A background or a component: 0, a name, a text or an expression in parameters."""
        if isinstance(given, str):
            return read_expression(given, self.in_text(), unknown=self._imply)
        value = self.canonical(exact(given))
        if value.atoms(FieldAtom):
            raise DeclarationError(f"the background '{value}' holds a field; use parameters only")
        if rank_of(value) > 0:
            raise RankError(f"the background '{value}' is not a scalar; give one entry per axis")
        return value

    def vector(self, name: str, given: Any, what: str = "background") -> Expr:
        given = given.args if isinstance(given, Components) else _listed(given)
        if _nothing(given):
            return S.Zero
        if not _sequence(given) or len(given) != len(self.axes):
            raise self._unfit(name, what, given, f"a tuple with {len(self.axes)} entries")
        return components(*(self.scalar(entry) for entry in given))

    def tensor(self, name: str, given: Any, what: str = "background") -> Expr:
        if isinstance(given, Components) and given.rank == 2:
            given = tuple(row.args for row in given.args)
        given = _listed(given)
        if _nothing(given):
            return S.Zero
        size = len(self.axes)
        if not _sequence(given) or [len(r) if _sequence(r) else 0 for r in given] != [size] * size:
            raise self._unfit(name, what, given, f"{size} rows of {size} entries")
        return components(*(tuple(self.scalar(entry) for entry in row) for row in given))

    def _unfit(self, name: str, what: str, given: Any, needed: str) -> DeclarationError:
        return DeclarationError(
            f"'{name}': the {what} {given!r} does not fit the axes '{self.axes}'; give 0 or {needed}"
        )

    # One symbol for one name -------------------------------------------------------------------

    def canonical(self, expr: Expr) -> Expr:
        """The expression in the model's own symbols and fields; a decimal is that decimal, exactly."""
        replaced: dict[Any, Any] = {x: Rational(repr(float(x))) for x in expr.atoms(Float)}
        for atom in expr.atoms(Symbol, Field):
            own = self._own(atom)
            if own is not atom:
                replaced[atom] = own
        return expr.xreplace(replaced) if replaced else expr

    def _own(self, atom: Any) -> Any:
        if isinstance(atom, Field):
            if atom.name not in self.fields or self.fields[atom.name].rank != atom.rank:
                raise DeclarationError(f"the field '{atom.name}' belongs to another model")
            return self.refreshed(self.fields[atom.name])
        if atom in WAVE_SYMBOLS:
            return atom
        if atom.name not in self.parameters:
            raise DeclarationError(
                f"'{atom.name}' is not declared; use model.parameter({atom.name!r}) first"
            )
        return self.parameters[atom.name].symbol

    def refreshed(self, field: Field) -> Field:
        """The field with its background in symbols that were declared after it."""
        background, gradient = (self.canonical(x) for x in (field.background, field.gradient))
        if (background, gradient) == (field.background, field.gradient):
            return field
        args = list(field.__getnewargs__())
        args[2:4] = background, gradient
        self.fields[field.name] = Field(*args)
        return self.fields[field.name]


def listed_names(names: Any) -> list[Any]:
    """Names separated by spaces or commas, or in an iterable."""
    found = names.replace(",", " ").split() if isinstance(names, str) else names
    if not isinstance(found, Iterable) or not (listed := list(found)):
        raise DeclarationError(f'{names!r} holds no names; give them as text, "n_0 T_e", or a list')
    return listed


def _listed(given: Any) -> Any:
    """An array as a list of numbers, everything else as it is."""
    return given.tolist() if isinstance(given, np.ndarray) else given


def _sequence(given: Any) -> bool:
    return isinstance(given, tuple | list)


def _nothing(given: Any) -> bool:
    return given is None or (not isinstance(given, str) and not _sequence(given) and given == 0)
