"""Numbers that carry a unit: the quantity objects of the common unit libraries, known by what they can do.

Three ways of asking for SI are understood: ``to_base_units()`` with ``magnitude`` and ``units``; ``si`` with ``value``
and ``unit``; ``in_mks()`` with ``value`` and ``units``. The unit that is then left is read as text.
"""

from __future__ import annotations

import math
from fractions import Fraction
from numbers import Real
from typing import Any

import numpy as np
from sympy import Float, Rational

from ..errors import UnitError, ValuesError
from .dimensions import kelvin_hint
from .units import Dimension, Unit, dimension_text, product, read_unit


def in_si(
    name: str, value: Any, unit: Unit | None, needed: Dimension | None = None
) -> tuple[Any, Fraction]:
    """A value as a number or array, and the exact factor that takes it to SI.

    Parameters
    ----------
    name : str
        Of the parameter or wave number, for messages.
    value : number, array or quantity, or a list of quantities
        A plain number is in `unit`.
    unit : Unit or None
        What the parameter declares.
    needed : Dimension, optional
        What a quantity must have where no unit is declared.

    Returns
    -------
    (number or array, Fraction)

    Raises
    ------
    UnitError
        When a quantity has another dimension, or its unit is not understood.
    """
    scale = unit.scale if unit else Fraction(1)
    if isinstance(value, list | tuple) and any(_split(x) for x in value):
        parts = [in_si(name, x, unit, needed) for x in value]
        return np.array([number * float(factor) for number, factor in parts]), Fraction(1)
    found = _split(value)
    if found is None:
        return value, scale
    number, text = found
    given = _unit_of(name, text)
    _check(name, given.dimension, unit.dimension if unit else needed, unit)
    return number, given.scale


def plain_number(name: str, value: Any, unit: Unit | None, *, positive: bool = False) -> Any:
    """A default value as a number in the unit that its parameter declares.

    Raises
    ------
    UnitError
        As `in_si`.
    ValuesError
        When it is not a single finite real number, or not positive where it must be.
    """
    made = _default(name, value, unit)
    if isinstance(made, bool) or not isinstance(made, Real) or not math.isfinite(made):
        raise ValuesError(f"the default of '{name}' is {value!r}; give a finite real number")
    if positive and made <= 0:
        raise ValuesError(
            f"'{name}' is declared positive and its default is {value!r}; give a positive number, or declare it "
            "without positive=True"
        )
    return made


def in_unit(name: str, value: Any, unit: Unit | None) -> Any:
    """A quantity, or a list of them, as numbers in a unit; what carries no unit as it is.

    Raises
    ------
    UnitError
        As `in_si`.
    """
    if _split(value) is None and not isinstance(value, list | tuple):
        return value
    number, scale = in_si(name, value, unit)
    if number is value:
        return value
    factor = scale / (unit.scale if unit else 1)
    return number * float(factor) if np.ndim(number) else float(Fraction(float(number)) * factor)


def _default(name: str, value: Any, unit: Unit | None) -> Any:
    number = in_unit(name, value, unit)
    if number is not value and np.ndim(number):
        raise ValuesError(f"the default of '{name}' is an array; give a single number")
    return float(number) if isinstance(number, Rational | Float) else number


def _split(value: Any) -> tuple[Any, str] | None:
    """A quantity as a number and the text of its unit, in SI; None for what carries no unit."""
    if isinstance(value, int | float | complex | str) or type(value) is np.ndarray:
        return None
    if hasattr(value, "to_base_units") and hasattr(value, "magnitude"):
        base = value.to_base_units()
        return base.magnitude, str(base.units)
    if hasattr(value, "in_mks") and hasattr(value, "units"):
        base = value.in_mks()
        return _bare(base.value), str(base.units)
    if hasattr(value, "unit") and hasattr(value, "si"):
        return value.si.value, str(value.si.unit)
    return None


def _bare(number: Any) -> Any:
    return np.asarray(number) if isinstance(number, np.ndarray) else number


def _unit_of(name: str, text: str) -> Unit:
    try:
        return read_unit(text)
    except UnitError as error:
        raise UnitError(
            f"the value of '{name}' has a unit that is not understood ({error}); give a plain number"
        ) from None


def _check(name: str, given: Dimension, needed: Dimension | None, unit: Unit | None) -> None:
    if needed is None or given == needed:
        return
    wanted = f"{unit}" if unit else dimension_text(needed)
    raise UnitError(
        f"the value of '{name}' is in {dimension_text(given)}, but '{name}' is in {wanted}; "
        "give a value of that unit" + kelvin_hint(product(given, needed, -1))
    )
