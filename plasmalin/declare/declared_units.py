"""The units that a model's names declare, and the dimensions that follow."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator
from contextlib import contextmanager
from fractions import Fraction

from sympy import Expr, Rational, Symbol, Tuple

from ..errors import UnitError
from .dimensions import Dimensions
from .fields import Components, Field
from .forms import Requirement, has_dimension, of_dimension, per_length
from .units import NONE, Unit, read_unit

Implied = Callable[[str], bool]
"""Whether a name was only implied by a background, so that it takes the unit of what it stands in."""


class DeclaredUnits:
    """Units by name, and the dimensions that they and the laws give; grows with the model.

    Attributes
    ----------
    of : dict of str to Unit
    dimensions : Dimensions
    """

    def __init__(self) -> None:
        self.of: dict[str, Unit] = {}
        self.dimensions = Dimensions({})

    @contextmanager
    def unless_wrong(self) -> Iterator[None]:
        """Takes back the units of a declaration that fails."""
        before = self.dimensions, dict(self.of)
        try:
            yield
        except UnitError:
            self.dimensions, self.of = before
            raise

    def put(self, name: str, unit: Unit, *, check: bool = True) -> None:
        self.dimensions = self.dimensions.declare(name, unit.dimension, check=check)
        self.of[name] = unit

    def require(self, required: Iterable[Requirement]) -> None:
        self.dimensions = self.dimensions.require(required)

    def forget(self, where: str) -> None:
        """Without what one law requires."""
        self.dimensions = self.dimensions.forget(where)

    def refuse_other(self, name: str, unit: Unit) -> None:
        before = self.of.get(name)
        if before is not None and before.dimension != unit.dimension:
            raise UnitError(f"'{name}' is in {before} already, and {unit} is another dimension")

    def moved(self, name: str, number: float | None, unit: Unit | None) -> float | None:
        """A number that was given before, in the unit that is declared now."""
        before = self.of.get(name)
        scale = (before.scale if before else 1) / unit.scale if unit else Fraction(1)
        return number if number is None or scale == 1 else float(Fraction(number) * scale)

    def field(self, field: Field, unit: str | None, implied: Implied) -> Field:
        """A field with its unit, if any; its background and gradient must have that dimension.

        Its numbers are in its unit, and so are the names that declare no unit of their own.
        """
        if unit is not None:
            made = read_unit(unit)
            args = list(field.__getnewargs__())
            for place, own in ((2, made), (3, read_unit(f"({made})/m"))):
                args[place] = self._numbers_in(own, field.name, args[place], implied)
            self.put(field.name, made)
            field = Field(*args)
        mine = {field.name: Fraction(1)}
        where, named = f"field '{field.name}'", f"the field {field.name}"
        slope = has_dimension(where, field.gradient, per_length(mine), f"the gradient of {named}")
        self.require((*has_dimension(where, field.background, mine, named), *slope))
        return field

    def vector(self, name: str, vector: Expr, unit: str, implied: Implied) -> None:
        """A constant vector: every entry must have the dimension of its unit."""
        made = read_unit(unit)
        self._numbers_in(made, name, vector, implied)
        _refuse_numbers(name, vector, made)
        form = of_dimension(made.dimension)
        self.require(has_dimension(f"vector '{name}'", vector, form, f"the vector {name}"))

    def _numbers_in(self, unit: Unit, owner: str, value: Expr, implied: Implied) -> Expr:
        if isinstance(value, Components | Tuple):
            return value.func(*(self._numbers_in(unit, owner, a, implied) for a in value.args))
        factor, rest = value.as_coeff_Mul()
        if rest == 1:
            return factor * Rational(unit.scale.numerator, unit.scale.denominator)
        if isinstance(rest, Symbol) and rest.name not in self.of:
            self._name_in(unit, owner, rest.name, implied)
        return value

    def _name_in(self, unit: Unit, owner: str, name: str, implied: Implied) -> None:
        if implied(name):
            self.put(name, unit)
        elif unit.scale != 1:
            raise UnitError(
                f"'{owner}' is in {unit}, but '{name}', of its background, declares no unit and so counts in SI; "
                f"declare it first: model.parameter({name!r}, unit={unit.text!r})"
            )


def _refuse_numbers(name: str, vector: Expr, unit: Unit) -> None:
    """A vector is written out in the laws, where a number no longer shows its unit."""
    bare = [a for a in vector.args if a.is_number and a != 0]
    if bare and unit.dimension != NONE:
        raise UnitError(
            f"the vector '{name}' in {unit} has the entry {bare[0]}; name it with a parameter of that unit, "
            f"as in model.vector_parameter({name!r}, (0, 0, '-{name}_0'), unit={unit.text!r})"
        )
