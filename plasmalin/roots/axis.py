"""The values of a quantity that varies, as they were given, in SI and in the unit in which they are shown."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from ..errors import ValuesError
from .values import Numbers, scaled, to_si

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix


@dataclass(frozen=True)
class Axis:
    """What varies.

    Attributes
    ----------
    given : ndarray of float64
        Plain numbers.
    factor : Fraction
        What takes them to SI.
    unit : Fraction
        The declared unit of the quantity in SI units.
    """

    given: NDArray[np.float64]
    factor: Fraction
    unit: Fraction

    @classmethod
    def of(cls, wave: WaveMatrix, name: str, values: Any) -> Axis:
        """
        Raises
        ------
        ValuesError
            When the values are not real numbers.
        UnitError
            When they are quantities of another dimension.
        """
        number, factor = to_si(wave, name, values)
        try:
            array = np.asarray(number)
            if np.iscomplexobj(array) or array.dtype == bool:
                raise TypeError
            array = array.astype(float)
        except (TypeError, ValueError):
            raise ValuesError(
                f"the values of '{name}', which varies, must be real numbers, not {values!r}"
            ) from None
        unit = wave.linear.units.get(name)
        return cls(array, factor, Fraction(1) if unit is None else Fraction(unit.scale))

    @property
    def si(self) -> NDArray[np.float64]:
        return scaled(self.given, self.factor)

    @property
    def shown(self) -> NDArray[np.float64]:
        """In the declared unit."""
        return scaled(self.given, self.factor / self.unit)


def constants(numbers: Numbers, names: Iterable[str]) -> int:
    """How many complex wave numbers are kept among the swept though they do not vary."""
    others = (a for s, a in numbers.swept.items() if s.name not in names)
    return sum(bool((a == a.flat[0]).all()) for a in others)
