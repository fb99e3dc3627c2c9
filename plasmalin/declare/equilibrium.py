"""The equilibrium of a mixture in numbers: whether charge, current and forces balance, and the drifts that they need."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from ..errors import BackgroundError, DeclarationError
from .constants import codata
from .species import Species, is_finite

FIELDS = ("electrostatic", "electromagnetic", "quasineutral")
BREACH = 1e-6
"""Largest net charge, current or force, relative to its largest term, that counts as rounding of the given numbers."""


@dataclass(frozen=True)
class Setting:
    """Species in their fields, SI; vectors have one entry per axis, or none."""

    species: tuple[Species, ...]
    field: str
    axes: str
    magnetic: Sequence[float]
    electric: Sequence[float]
    neutral: Sequence[float]

    def check(self) -> None:
        """Refuses what cannot be meant, and what does not balance."""
        if self.field not in FIELDS:
            raise DeclarationError(f"field={self.field!r}; give one of {', '.join(FIELDS)}")
        if not self.species:
            raise DeclarationError("a mixture needs at least one species")
        for s in self.species:
            if not isinstance(s, Species):
                raise DeclarationError(f"{s!r} is not a species; give plin.Species(name, ...)")
        names = [s.name for s in self.species]
        if len(set(names)) < len(names):
            raise DeclarationError(f"species names must differ; given are {', '.join(names)}")
        self._fits("magnetic_field", self.magnetic)
        self._fits("electric_field", self.electric)
        self._fits("neutral_velocity", self.neutral)
        if self.field == "electromagnetic" and self.axes != "xyz":
            raise DeclarationError("field='electromagnetic' needs axes='xyz'")
        if any(self.magnetic) and self.axes != "xyz":
            raise DeclarationError("a magnetic field needs axes='xyz'")
        for s in self.species:
            if not isinstance(s.drift, str):
                self._fits(f"drift of '{s.name}'", s.drift)
        self._check_charge()
        for s in self.species:
            self._check_force(s)
        if self.field == "electromagnetic":
            self._check_current()

    def _fits(self, what: str, given: Sequence[float]) -> None:
        fits = isinstance(given, tuple | list) and len(given) in (0, len(self.axes))
        if not fits or not all(is_finite(x) for x in given):
            raise DeclarationError(
                f"{what} = {given!r}: give one finite number per axis of '{self.axes}'"
            )

    def vector(self, given: Sequence[float]) -> list[float]:
        """One number per axis."""
        return [float(x) for x in given] or [0.0] * len(self.axes)

    def _check_charge(self) -> None:
        parts = [s.charge_number * s.density for s in self.species]
        total, largest = sum(parts), max(map(abs, parts))
        if abs(total) > BREACH * largest:
            raise BackgroundError(
                f"the densities leave a net charge of {total:.6g} elementary charges per m^3 "
                f"({100 * abs(total) / largest:.3g} % of the largest term); change a density or add a species"
            )

    def drift(self, s: Species) -> list[float]:
        """The drift that is given, or the one that balances the momentum law."""
        if not isinstance(s.drift, str):
            return self.vector(s.drift)
        q, nu = s.charge_number * codata("e") / s.mass, s.collision_frequency
        gyro = [q * b for b in self._field_on(s)]
        push = [
            q * e + nu * v
            for e, v in zip(self.vector(self.electric), self.vector(self.neutral), strict=True)
        ]
        return _balanced(push, gyro, nu, s.name)

    def _field_on(self, s: Species) -> list[float]:
        given = self.vector(self.magnetic) if s.magnetised else []
        return given if len(given) == 3 else [0.0, 0.0, 0.0]

    def _check_force(self, s: Species) -> None:
        """q (E + u x B) − m nu (u − u_n) per particle must vanish."""
        u, b = self.drift(s), self._field_on(s)
        q = s.charge_number * codata("e")
        turn = _cross(u, b) if len(u) == 3 else [0.0] * len(u)
        rub = [
            -s.mass * s.collision_frequency * (x - y)
            for x, y in zip(u, self.vector(self.neutral), strict=True)
        ]
        push = [q * e for e in self.vector(self.electric)]
        total = [sum(x) for x in zip(push, [q * t for t in turn], rub, strict=True)]
        largest = max(map(abs, (*push, *(q * t for t in turn), *rub)))
        worst = max(map(abs, total))
        if worst > BREACH * largest:
            axis = self.axes[max(range(len(total)), key=lambda i: abs(total[i]))]
            raise BackgroundError(
                f"the momentum law of '{s.name}' leaves {worst:.6g} N per particle along {axis} "
                f'({100 * worst / largest:.3g} % of its largest term); give drift="balance", another electric_field '
                "or neutral_velocity, or magnetised=False"
            )

    def _check_current(self) -> None:
        parts = [[s.charge_number * s.density * u for u in self.drift(s)] for s in self.species]
        largest = max(abs(x) for p in parts for x in p)
        for axis, *along in zip(self.axes, *parts, strict=True):
            if abs(sum(along)) > BREACH * largest:
                current = sum(along) * codata("e")
                raise BackgroundError(
                    f"Ampere's law: a net current of {current:.6g} A/m^2 along {axis} "
                    f"({100 * abs(sum(along)) / largest:.3g} % of the largest part) has no magnetic field to balance it; give a species a "
                    "return drift, or use field='electrostatic' for a current-driven model"
                )


def _cross(a: Sequence[float], b: Sequence[float]) -> list[float]:
    return [a[i] * b[j] - a[j] * b[i] for i, j in ((1, 2), (2, 0), (0, 1))]


def _balanced(push: list[float], gyro: list[float], nu: float, name: str) -> list[float]:
    """u from push + u x gyro − nu u = 0: along the field by friction, across it by drift and friction."""
    size = len(push)
    square = sum(g * g for g in gyro)
    if size < 3 or square == 0:
        if nu == 0 and any(push):
            raise BackgroundError(
                f"drift=\"balance\": nothing holds species '{name}' against the electric field; "
                "give it a collision_frequency or a magnetic field"
            )
        return [p / nu if nu else 0.0 for p in push]
    along = sum(p * g for p, g in zip(push, gyro, strict=True)) / square
    if nu == 0 and abs(along) * math.sqrt(square) > BREACH * max(map(abs, push)):
        raise BackgroundError(
            f"drift=\"balance\": nothing holds species '{name}' along the magnetic field; "
            "give it a collision_frequency or an electric_field across the magnetic one"
        )
    turn = _cross(push, gyro)
    lengthwise = [along * g / nu if nu else 0.0 for g in gyro]
    across = [p - along * g for p, g in zip(push, gyro, strict=True)]
    return [
        lo + (nu * a + t) / (nu * nu + square)
        for lo, a, t in zip(lengthwise, across, turn, strict=True)
    ]
