"""A plasma by its physical numbers: species in, an ordinary `FluidModel` out."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

from sympy import Expr, S, Symbol

from . import laws
from .constants import codata
from .equilibrium import Setting
from .fields import Field, components
from .model import FluidModel
from .quantities import in_unit
from .species import Species, as_tuple
from .units import read_unit


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
        as_tuple(in_unit(name, given, read_unit(unit)))
        for name, given, unit in (
            ("magnetic_field", magnetic_field, "T"),
            ("electric_field", electric_field, "V/m"),
            ("neutral_velocity", neutral_velocity, "m/s"),
        )
    )
    setting = Setting(tuple(species), field, axes, *vectors)
    setting.check()
    names = ", ".join(s.name for s in species)
    return _Builder(setting).build(title or f"{field} mixture of {names}")


@dataclass(frozen=True)
class _Builder:
    """Writes a setting that balances as a model."""

    setting: Setting

    def build(self, title: str) -> FluidModel:
        model = FluidModel(title, axes=self.setting.axes)
        e = model.constants("e")
        force_fields = self._force_fields(model)
        charge: Expr = S.Zero
        current: Expr = S.Zero
        for s in self.setting.species:
            q = self._charge(model, s, e)
            n, v = self._one(model, s, q, force_fields)
            charge, current = charge + q * n, current + q * n * v
        if self.setting.field == "electromagnetic":
            mu_0, eps_0 = model.constants("mu_0 epsilon_0")
            laws.maxwell(
                model, model.fields["E"], model.fields["B"], current, mu_0=mu_0, epsilon_0=eps_0
            )
        elif self.setting.field == "quasineutral":
            laws.quasineutrality(model, charge)
        else:
            laws.poisson(model, model.fields["phi"], charge, epsilon_0=model.constants("epsilon_0"))
        return model

    def _force_fields(self, model: FluidModel) -> dict[str, Any]:
        electric = self._parameters(model, "E", self.setting.electric, "0", unit="V/m")
        magnetic = self._parameters(model, "B", self.setting.magnetic, "0", unit="T")
        if self.setting.field == "electromagnetic":
            return {
                "electric": model.vector("E", background=electric, unit="V/m"),
                "magnetic": model.vector("B", background=magnetic, unit="T"),
            }
        made: dict[str, Any] = {"potential": model.scalar("phi", unit="V")}
        if any(self.setting.electric):
            made["electric"] = components(*electric)
        if any(self.setting.magnetic):
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
            for axis, x in zip(self.setting.axes, self.setting.vector(given), strict=True)
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
        drift = self._parameters(model, f"u_{s.name}", self.setting.drift(s), "", unit="m/s")
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
        if not any(self.setting.neutral):
            return 0
        return components(*self._parameters(model, "u_n", self.setting.neutral, "", unit="m/s"))
