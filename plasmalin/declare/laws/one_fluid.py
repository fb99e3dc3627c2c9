"""One conducting fluid and its magnetic field: ideal, resistive, viscous, Hall, incompressible."""

from __future__ import annotations

from typing import Any

from sympy import Expr, S

from ..law import Law
from ..model import FluidModel
from ..operators import cross, curl, div, dot, grad, partial_t
from ..role import Role
from .closures import declared, named, ready_law
from .pressure import adiabatic_pressure
from .species import continuity, momentum
from .viscosity import viscous_force, viscous_heat


def magnetic_force(magnetic: Expr, mu_0: Any) -> Expr:
    """(curl B) x B / mu_0, N/m^3 (Alfvén 1942, Nature 150, 405)."""
    return cross(curl(magnetic), magnetic) / mu_0


def ohmic_heat(magnetic: Expr, resistivity: Any, mu_0: Any) -> Expr:
    """eta ``|curl B|^2`` / mu_0^2, W/m^3, with eta in Ohm m (Landau and Lifshitz, Electrodynamics of Continuous Media, sec. 65)."""
    return resistivity / mu_0**2 * dot(curl(magnetic), curl(magnetic))


def hall_field(magnetic: Expr, n: Expr, *, e: Any, mu_0: Any, electron_pressure: Any = 0) -> Expr:
    """((curl B) x B / mu_0 − grad p_e) / (e n), V/m: the electric field that electrons without mass need beyond −v x B.

    `n` is the density of electrons, 1/m^3. Lighthill (1960), Phil. Trans. R. Soc. A 252, 397 (from memory).
    """
    force = magnetic_force(magnetic, mu_0)
    if electron_pressure != 0:
        force = force - grad(electron_pressure)
    return force / (e * n)


def induction(
    model: FluidModel,
    magnetic: Any,
    v: Expr,
    *,
    resistivity: Any = 0,
    mu_0: Any = 1,
    hall: Any = 0,
    name: str = "induction",
) -> Law:
    """d_t B = curl(v x B − eta curl B / mu_0 − hall), T/s (Landau and Lifshitz, Electrodynamics of Continuous Media, sec. 65).

    Parameters
    ----------
    model : FluidModel
    magnetic : Field or its name, T
    v : vector expression, m/s
    resistivity : scalar expression, Ohm m
    mu_0 : scalar expression, H/m
    hall : vector expression, V/m
        `hall_field`: the Hall term and the electron pressure.
    name : str, optional

    Returns
    -------
    Law
    """
    magnetic, v = declared(model, magnetic, 1, "induction"), named(model, v, 1, "induction")
    electric = cross(v, magnetic) - resistivity / mu_0 * curl(magnetic) - hall
    return model.law(name, partial_t(magnetic), curl(electric))


def mhd(
    model: FluidModel,
    rho: Any,
    v: Any,
    p: Any,
    magnetic: Any,
    *,
    gamma: Any,
    mu_0: Any,
    resistivity: Any = 0,
    shear: Any = 0,
    bulk: Any = 0,
    hall: Any = 0,
    force: Any = 0,
) -> tuple[Law, Law, Law, Law]:
    """The four laws of one conducting fluid: ideal, or with resistivity, viscosity and the Hall term.

    `continuity`, `momentum` with `magnetic_force` and `viscous_force`, `adiabatic_pressure` with the heat of both losses
    (so that energy is conserved), `induction`.

    Parameters
    ----------
    model : FluidModel
    rho, v, p, magnetic : Field or its name, kg/m^3, m/s, Pa, T
    gamma : scalar expression
    mu_0 : scalar expression, H/m
    resistivity : scalar expression, Ohm m
    shear, bulk : scalar expression, Pa s
        Uniform.
    hall : vector expression, V/m
        `hall_field`.
    force : vector expression, N/m^3
        Gravity, rotation ...

    Returns
    -------
    tuple of Law

    Notes
    -----
    Landau and Lifshitz, Electrodynamics of Continuous Media, sec. 65 and 66.

    Examples
    --------
    >>> import plasmalin as plin
    >>> model = plin.FluidModel("ideal MHD")
    >>> rho, p = model.scalar("rho", background="rho_0"), model.scalar("p", background="p_0")
    >>> v, B = model.vector("v"), model.vector("B", background=(0, 0, "B_0"))
    >>> gamma, mu_0 = model.parameters("gamma mu_0", positive=True)
    >>> for law in plin.laws.mhd(model, rho, v, p, B, gamma=gamma, mu_0=mu_0):
    ...     print(law.name)
    rho continuity
    v momentum
    p pressure
    induction
    """
    rho, p = (declared(model, f, 0, "mhd") for f in (rho, p))
    v, magnetic = (declared(model, f, 1, "mhd") for f in (v, magnetic))
    heating: Expr = S.Zero
    if resistivity != 0:
        heating += ohmic_heat(magnetic, resistivity, mu_0)
    if shear != 0 or bulk != 0:
        force, heating = (
            force + viscous_force(v, shear, bulk),
            heating + viscous_heat(v, shear, bulk),
        )
    return (
        continuity(model, rho, v),
        momentum(model, rho, v, mass=1, force=magnetic_force(magnetic, mu_0) + force, pressure=p),
        adiabatic_pressure(model, p, v, gamma, heating=heating),
        induction(model, magnetic, v, resistivity=resistivity, mu_0=mu_0, hall=hall),
    )


def incompressible(model: FluidModel, v: Expr, *, name: str = "incompressible") -> Law:
    """div v = 0, 1/s; the pressure is its multiplier, so no other law may close it."""
    v = declared(model, v, 1, "incompressible")
    return ready_law(model, name, div(v), 0, Role(v, closes=()))
