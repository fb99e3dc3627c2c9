"""A plasma by its physical numbers: species in, an ordinary `FluidModel` out."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from numbers import Real
from typing import Any

import numpy as np
from sympy import Expr, S, Symbol

from ..errors import BackgroundError, DeclarationError
from . import laws
from .constants import codata
from .fields import Field, components
from .model import FluidModel
from .quantities import in_unit
from .units import read_unit

FIELDS = ("electrostatic", "electromagnetic", "quasineutral")
BREACH = 1e-6
"""Largest net charge, current or force, relative to its largest term, that counts as rounding of the given numbers."""


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
            object.__setattr__(self, what, _listed(given) if what == "drift" else given)
        for what, least, strict in (
            ("mass", 0.0, True),
            ("density", 0.0, True),
            ("gamma", 0.0, True),
            ("temperature_eV", 0.0, False),
            ("collision_frequency", 0.0, False),
        ):
            value = getattr(self, what)
            if not _finite(value) or value < least or (strict and value == least):
                bound = "positive" if strict else "zero or positive"
                raise DeclarationError(
                    f"species '{self.name}': {what} = {value!r}; give a finite {bound} number"
                )
        if not _finite(self.charge_number):
            raise DeclarationError(
                f"species '{self.name}': charge_number = {self.charge_number!r} is not a finite number"
            )
        if isinstance(self.drift, str) and self.drift != "balance":
            raise DeclarationError(
                f"species '{self.name}': drift={self.drift!r}; give one number per axis or \"balance\""
            )


def mixture(
    species: Sequence[Species],
    *,
    field: str = "electrostatic",
    axes: str = "xyz",
    magnetic_field: Sequence[float] = (),
    electric_field: Sequence[float] = (),
    neutral_velocity: Sequence[float] = (),
    title: str = "",
) -> FluidModel:
    """An ordinary model of a mix of species, its numbers as defaults.

    Parameters
    ----------
    species : sequence of Species
    field : {"electrostatic", "electromagnetic", "quasineutral"}
    axes : str, default "xyz"
    magnetic_field : sequence of float, T, one entry per axis
        Needs axes="xyz".
    electric_field : sequence of float, V/m, one entry per axis
    neutral_velocity : sequence of float, m/s, one entry per axis
    title : str, optional

    Returns
    -------
    FluidModel
        ``.values`` are the numbers by parameter name, SI (temperatures in J); every law can be printed, removed or replaced.

    Raises
    ------
    DeclarationError
        For numbers that cannot be meant, or shapes that do not fit the axes.
    UnitError
        When a quantity object has another dimension.
    BackgroundError
        When charge, current (with Ampere's law) or the force on a drifting species does not balance, with the size
        of the breach and the ways out.

    Examples
    --------
    >>> import plasmalin as plin
    >>> me, u = plin.constants.m_e, plin.constants.u
    >>> plasma = plin.mixture(
    ...     [plin.Species("e", -1, me, 2e16, temperature_eV=3.0),
    ...      plin.Species("Xe", +1, 131.293 * u, 2e16, temperature_eV=0.1, gamma=3)],
    ...     axes="x")
    >>> plasma.linearize().plane_wave("x").roots(k=1e3).shape
    (4,)
    """
    vectors = (
        _listed(in_unit(name, given, read_unit(unit)))
        for name, given, unit in (
            ("magnetic_field", magnetic_field, "T"),
            ("electric_field", electric_field, "V/m"),
            ("neutral_velocity", neutral_velocity, "m/s"),
        )
    )
    setting = _Setting(tuple(species), field, axes, *vectors)
    setting.check()
    names = ", ".join(s.name for s in species)
    return setting.build(title or f"{field} mixture of {names}")


@dataclass(frozen=True)
class _Setting:
    species: tuple[Species, ...]
    field: str
    axes: str
    magnetic: Sequence[float]
    electric: Sequence[float]
    neutral: Sequence[float]

    # The equilibrium in numbers ------------------------------------------------------------------

    def check(self) -> None:
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
        if not fits or not all(_finite(x) for x in given):
            raise DeclarationError(
                f"{what} = {given!r}: give one finite number per axis of '{self.axes}'"
            )

    def vector(self, given: Sequence[float]) -> list[float]:
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

    # The model -----------------------------------------------------------------------------------

    def build(self, title: str) -> FluidModel:
        model = FluidModel(title, axes=self.axes)
        e = model.constants("e")
        force_fields = self._force_fields(model)
        charge: Expr = S.Zero
        current: Expr = S.Zero
        for s in self.species:
            q = self._charge(model, s, e)
            n, v = self._one(model, s, q, force_fields)
            charge, current = charge + q * n, current + q * n * v
        if self.field == "electromagnetic":
            mu_0, eps_0 = model.constants("mu_0 epsilon_0")
            laws.maxwell(
                model, model.fields["E"], model.fields["B"], current, mu_0=mu_0, epsilon_0=eps_0
            )
        elif self.field == "quasineutral":
            laws.quasineutrality(model, charge)
        else:
            laws.poisson(model, model.fields["phi"], charge, epsilon_0=model.constants("epsilon_0"))
        return model

    def _force_fields(self, model: FluidModel) -> dict[str, Any]:
        electric = self._parameters(model, "E", self.electric, "0", unit="V/m")
        magnetic = self._parameters(model, "B", self.magnetic, "0", unit="T")
        if self.field == "electromagnetic":
            return {
                "electric": model.vector("E", background=electric, unit="V/m"),
                "magnetic": model.vector("B", background=magnetic, unit="T"),
            }
        made: dict[str, Any] = {"potential": model.scalar("phi", unit="V")}
        if any(self.electric):
            made["electric"] = components(*electric)
        if any(self.magnetic):
            made["magnetic"] = components(*magnetic)
        return made

    def _parameters(
        self, model: FluidModel, stem: str, given: Sequence[float], mark: str, *, unit: str
    ) -> tuple[Any, ...]:
        """One parameter per component that is not zero."""
        return tuple(
            model.parameter(
                f"{stem}_{mark}{axis}" if mark else f"{stem}_{axis}", unit=unit, value=x
            )
            if x
            else 0
            for axis, x in zip(self.axes, self.vector(given), strict=True)
        )

    def _charge(self, model: FluidModel, s: Species, e: Symbol) -> Expr:
        if abs(s.charge_number) in (0, 1):
            return int(s.charge_number) * e
        return model.parameter(f"Z_{s.name}", unit="1", value=float(s.charge_number)) * e

    def _one(
        self, model: FluidModel, s: Species, q: Expr, fields: dict[str, Any]
    ) -> tuple[Field, Field]:
        def positive(name: str, unit: str, value: float) -> Symbol:
            return model.parameter(name, positive=True, unit=unit, value=float(value))

        m = positive(f"m_{s.name}", "kg", s.mass)
        n_0 = positive(f"n_{s.name}0", "m**-3", s.density)
        drift = self._parameters(model, f"u_{s.name}", self.drift(s), "", unit="m/s")
        n = model.scalar(f"n_{s.name}", background=n_0, unit="m**-3")
        v = model.vector(f"v_{s.name}", background=drift if any(drift) else 0, unit="m/s")
        force = self._force(model, s, q, n, v, m, fields)
        pressure: Expr = S.Zero
        if s.temperature_eV > 0:
            t = positive(f"T_{s.name}", "J", s.temperature_eV * codata("e"))
            gamma = positive(f"gamma_{s.name}", "1", s.gamma)
            pressure = laws.polytropic_pressure(n, n_0, t, gamma)
        laws.continuity(model, n, v, name=f"{s.name} continuity")
        laws.momentum(
            model, n, v, mass=m, force=force, pressure=pressure, name=f"{s.name} momentum"
        )
        return n, v

    def _force(
        self,
        model: FluidModel,
        s: Species,
        q: Expr,
        n: Field,
        v: Field,
        m: Symbol,
        fields: dict[str, Any],
    ) -> Expr:
        known = {key: f for key, f in fields.items() if key != "magnetic"}
        if "magnetic" in fields and s.magnetised:
            known |= {"magnetic": fields["magnetic"], "v": v}
        force = laws.lorentz_force(n, q, **known) if q != 0 else S.Zero
        if s.collision_frequency:
            nu = model.parameter(
                f"nu_{s.name}", positive=True, unit="1/s", value=float(s.collision_frequency)
            )
            wind = self._wind(model)
            force = force + laws.neutral_friction(n, v, m, nu, wind)
        return force

    def _wind(self, model: FluidModel) -> Any:
        if not any(self.neutral):
            return 0
        return components(*self._parameters(model, "u_n", self.neutral, "", unit="m/s"))


def _finite(x: Any) -> bool:
    return not isinstance(x, bool) and isinstance(x, Real) and math.isfinite(x)


def _listed(given: Any) -> Any:
    """A vector as a tuple: of an array, of one number, of None (no entries)."""
    if given is None or isinstance(given, Real):
        return () if given is None else (given,)
    return tuple(given.tolist()) if isinstance(given, np.ndarray) and given.ndim == 1 else given


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
