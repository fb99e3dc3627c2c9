"""One species by its physical numbers."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from numbers import Real
from typing import Any

import numpy as np

from ..errors import DeclarationError
from .quantities import in_unit
from .units import read_unit

UNITS = {
    "charge_number": "1",
    "mass": "kg",
    "density": "m**-3",
    "temperature_eV": "eV",
    "gamma": "1",
    "drift": "m/s",
    "collision_frequency": "1/s",
}
"""The units of a species' numbers."""


@dataclass(frozen=True)
class Species:
    """One species by its numbers, each plain in the unit given here or a quantity object with a unit.

    Parameters
    ----------
    name : str
        Fields are named n_name, v_name; parameters n_name0, m_name, T_name, gamma_name, nu_name, u_name_x ...
    charge_number : float
        −1 for electrons; large and negative for dust.
    mass : float, kg
    density : float, 1/m^3
    temperature_eV : float, default 0
        0 leaves the pressure out.
    gamma : float, default 1
        Exponent of p ~ n^gamma.
    drift : tuple of float or "balance", m/s, default none
        One entry per axis. "balance" solves it from the momentum law.
    collision_frequency : float, 1/s, default 0
        With the neutrals.
    magnetised : bool, default True
        Whether the magnetic force acts on it.

    Raises
    ------
    DeclarationError
        When the name is not an identifier, or a number cannot be meant.
    UnitError
        When a quantity object has another dimension.
    """

    name: str
    charge_number: float
    mass: float
    density: float
    temperature_eV: float = 0.0
    gamma: float = 1.0
    drift: Sequence[float] | str = ()
    collision_frequency: float = 0.0
    magnetised: bool = True

    def __post_init__(self) -> None:
        name: Any = self.name
        if not isinstance(name, str) or not name.isidentifier():
            raise DeclarationError(f"species {self.name!r}: the name must be an identifier")
        for what, unit in UNITS.items():
            given = in_unit(f"{what} of {self.name}", getattr(self, what), read_unit(unit))
            object.__setattr__(self, what, as_tuple(given) if what == "drift" else given)
        for what, least, strict in (
            ("mass", 0.0, True),
            ("density", 0.0, True),
            ("gamma", 0.0, True),
            ("temperature_eV", 0.0, False),
            ("collision_frequency", 0.0, False),
        ):
            value = getattr(self, what)
            if not is_finite(value) or value < least or (strict and value == least):
                bound = "positive" if strict else "zero or positive"
                raise DeclarationError(
                    f"species '{self.name}': {what} = {value!r}; give a finite {bound} number"
                )
        if not is_finite(self.charge_number):
            raise DeclarationError(
                f"species '{self.name}': charge_number = {self.charge_number!r} is not a finite number"
            )
        if isinstance(self.drift, str) and self.drift != "balance":
            raise DeclarationError(
                f"species '{self.name}': drift={self.drift!r}; give one number per axis or \"balance\""
            )


def is_finite(x: Any) -> bool:
    return not isinstance(x, bool) and isinstance(x, Real) and math.isfinite(x)


def as_tuple(given: Any) -> Any:
    """A vector as a tuple: of an array, of one number, of None (no entries)."""
    if given is None or isinstance(given, Real):
        return () if given is None else (given,)
    return tuple(given.tolist()) if isinstance(given, np.ndarray) and given.ndim == 1 else given
