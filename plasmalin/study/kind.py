"""One fluid in numbers: thermal speed, Debye length, Larmor radius and the like, SI."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ..declare.constants import codata
from ..waves.species import Fluid

Array = NDArray[Any]

CHARGES = (0.9, 1e7)
"""Charges in elementary charges that a particle or a grain can have: what tells coulombs from scaled numbers."""
MASSES = (9e-31, 1e-6)
"""Masses of particles and grains, kg."""


@dataclass(frozen=True, eq=False)
class Kind:
    """One fluid in numbers; None where its laws or the values do not tell.

    Attributes
    ----------
    fluid : Fluid
    inertia, charge, energy, stiffness : array or None
        Mass, charge, temperature (gamma T where only that is told) and gamma T as the momentum law has them, up to one
        common factor.
    response : array or None
        n q / epsilon_0 by the field's law, V/m^2.
    number, friction : array or None
        1/m^3, 1/s.
    drift, gyration : list of array or None
        m/s along the axes; q B, up to the common factor.
    """

    fluid: Fluid
    inertia: Array | None
    charge: Array | None
    energy: Array | None
    stiffness: Array | None
    response: Array | None
    number: Array | None
    friction: Array | None
    drift: list[Array] | None
    gyration: list[Array] | None

    @property
    def name(self) -> str:
        return self.fluid.name

    @cached_property
    def unit(self) -> Array | None:
        """What the momentum law must be multiplied by to be one of newtons; None where that cannot be told.

        1 where its charge is one of coulombs; else the charge follows from the field's law with epsilon_0.
        """
        if self.charge is None:
            given = self.inertia
            return None if given is None or not _within(given, MASSES) else np.ones_like(given)
        e = codata("e")
        if _within(self.charge / e, CHARGES):
            return np.ones_like(self.charge)
        if self.response is None or self.number is None:
            return None
        q = codata("epsilon_0") * self.response / self.number
        return q / self.charge if _within(q / e, CHARGES) else None

    @cached_property
    def temperature(self) -> Array | None:
        """J."""
        return _times(self.energy, self.unit)

    @cached_property
    def mass(self) -> Array | None:
        """kg."""
        return _times(self.inertia, self.unit)

    @cached_property
    def coulombs(self) -> Array | None:
        return _times(self.charge, self.unit)

    @cached_property
    def gamma(self) -> Array | None:
        if self.energy is None or self.stiffness is None or self.fluid.temperature is None:
            return None
        return self.stiffness / self.energy

    @cached_property
    def thermal_speed(self) -> Array | None:
        """sqrt(T/m), m/s."""
        return _root(self.energy, self.inertia)

    @cached_property
    def debye_length(self) -> Array | None:
        """sqrt(T / (q · n q/epsilon_0)), m."""
        response = self.response
        if response is None and self.unit is not None and self.charge is not None:
            response = _times(self.number, self.unit * self.charge / codata("epsilon_0"))
        return _root(self.energy, _times(self.charge, response))

    @cached_property
    def gyrofrequency(self) -> Array | None:
        """``|q B| / m``, rad/s."""
        if self.gyration is None or self.inertia is None:
            return None
        return length(self.gyration) / np.abs(self.inertia)

    @cached_property
    def larmor_radius(self) -> Array | None:
        """Thermal speed over gyrofrequency, m."""
        if self.thermal_speed is None or self.gyrofrequency is None:
            return None
        return self.thermal_speed / self.gyrofrequency

    @cached_property
    def magnetic_field(self) -> Array | None:
        """``|B|``, T."""
        if self.gyration is None or self.charge is None or self.unit is None:
            return None
        return length(self.gyration) / np.abs(self.charge)

    @cached_property
    def coulomb_collisions(self) -> Array | None:
        """The rate at which a species scatters on itself, 1/s.

        4 sqrt(pi) n q^4 L / (3 (4 pi epsilon_0)^2 sqrt(m) T^(3/2)) with the Coulomb logarithm L = ln(12 pi n λ_D^3),
        (Spitzer 1962, Physics of Fully Ionized Gases, ch. 5; NRL Plasma Formulary; from memory). None where n λ_D^3 is
        below 1: the formula is for weak coupling.
        """
        t, m, q, n = self.temperature, self.mass, self.coulombs, self.number
        if t is None or m is None or q is None or n is None or self.debye_length is None:
            return None
        cube = n * self.debye_length**3
        if np.any(cube < 1):
            return None
        logarithm = np.log(12 * np.pi * cube)
        strength = (q**2 / (4 * np.pi * codata("epsilon_0"))) ** 2
        return np.asarray(4 * np.sqrt(np.pi) / 3 * n * strength * logarithm / (np.sqrt(m) * t**1.5))


def length(vector: list[Array]) -> Array:
    """The length of a vector, complex entries by their size."""
    return np.asarray(np.sqrt(sum(np.abs(c) ** 2 for c in vector)))


def positive(x: Array | None) -> Array | None:
    return x if x is not None and np.all(np.real(x) > 0) else None


def _within(x: Array, bounds: tuple[float, float]) -> bool:
    return bool(np.all((np.abs(x) >= bounds[0]) & (np.abs(x) <= bounds[1])))


def _times(a: Array | None, b: Array | None) -> Array | None:
    return None if a is None or b is None else a * b


def _root(above: Array | None, below: Array | None) -> Array | None:
    """sqrt(above/below) where both are known and the ratio is positive."""
    if above is None or below is None or not np.all(below):
        return None
    ratio = positive(above / below)
    return None if ratio is None else np.asarray(np.sqrt(ratio))
