"""Closures: what the pressure of a species is, or the law that it obeys."""

from __future__ import annotations

from typing import Any

from sympy import Expr, pi, sqrt

from ...errors import DeclarationError
from ..fields import FieldAtom, exact
from ..law import Law
from ..model import FluidModel
from ..operators import (
    advect,
    cross,
    div,
    dot,
    grad,
    identity,
    k_abs,
    multiplier,
    norm,
    outer,
    partial_t,
    rank_of,
    transpose,
)
from ..role import Role
from .closures import declared, named, ready_law


def isothermal_pressure(n: Expr, temperature: Any) -> Expr:
    """p = n T, Pa, with T in J: a constant for an isothermal species, a field with `energy`."""
    return n * temperature


def polytropic_pressure(n: Expr, n_0: Any, temperature: Any, gamma: Any) -> Expr:
    """p = n_0 T (n/n_0)^gamma, Pa; gamma = 1 is isothermal, 3 one-dimensional, 5/3 three-dimensional compression.

    n_0 and T are constants, the values at one place: then grad p = gamma T (n/n_0)^(gamma−1) grad n also where
    the background density has a gradient, whose temperature follows n^(gamma−1). For another profile of temperature use
    `adiabatic_pressure` (Emden 1907, Gaskugeln).

    Raises
    ------
    DeclarationError
        When n_0 holds a field.
    """
    if exact(n_0).atoms(FieldAtom):
        raise DeclarationError(
            f"polytropic_pressure: n_0 = {n_0} holds a field; give the constant density at which the "
            "temperature is given, e.g. the background's name"
        )
    return n_0 * temperature * (n / n_0) ** gamma


def adiabatic_pressure(
    model: FluidModel,
    p: Any,
    v: Expr,
    gamma: Any,
    *,
    heating: Any = 0,
    collisions: Any = 0,
    name: str | None = None,
) -> Law:
    """d_t p + (v.grad) p + gamma p div v = (gamma − 1)(heating + collisions), Pa/s.

    Landau and Lifshitz, Fluid Mechanics, sec. 2 and 49.

    Parameters
    ----------
    model : FluidModel
    p : Field or its name, Pa
    v : vector expression, m/s
    gamma : scalar expression
    heating : scalar expression, W/m^3
    collisions : scalar expression, W/m^3
        `frictional_heat` and `heat_exchange`; `audit` sums it over the species.
    name : str, optional

    Returns
    -------
    Law

    Raises
    ------
    DeclarationError
        When p is not declared, or the species is closed otherwise already.
    """
    p = declared(model, p, 0, "adiabatic_pressure")
    v = named(model, v, 1, "adiabatic_pressure")
    rate = partial_t(p) + advect(v, p) + gamma * p * div(v)
    role = Role(v, closes=(p,), exchange=exact(collisions))
    return ready_law(
        model, name or f"{p} pressure", rate, (gamma - 1) * (heating + collisions), role
    )


def energy(
    model: FluidModel,
    temperature: Any,
    n: Expr,
    v: Expr,
    gamma: Any,
    *,
    conductivity: Any = 0,
    heating: Any = 0,
    collisions: Any = 0,
    name: str | None = None,
) -> Law:
    """n/(gamma − 1) (d_t T + v.grad T) + n T div v = div(kappa grad T) + heating + collisions, W/m^3, with T an energy.

    Braginskii (1965), Reviews of Plasma Physics 1, 205 (from memory).

    Parameters
    ----------
    temperature : Field or its name, J
    n : scalar expression, 1/m^3
    conductivity : scalar or rank-2 expression, 1/(m s)
        May vary; `field_aligned` makes the tensor of a magnetized species.
    model, v, gamma, heating, collisions, name
        As in `adiabatic_pressure`.

    Returns
    -------
    Law

    Raises
    ------
    DeclarationError
        As `adiabatic_pressure`.
    """
    temperature = declared(model, temperature, 0, "energy")
    n, v = named(model, n, 0, "energy"), named(model, v, 1, "energy")
    rate = n / (gamma - 1) * (partial_t(temperature) + advect(v, temperature))
    work = n * temperature * div(v)
    right = _conducted(conductivity, temperature) + heating + collisions
    role = Role(v, closes=(temperature,), exchange=exact(collisions))
    return ready_law(model, name or f"{temperature} energy", rate + work, right, role)


def _conducted(conductivity: Any, temperature: Expr) -> Expr:
    slope = grad(temperature)
    tensor = rank_of(exact(conductivity)) == 2
    return div(dot(conductivity, slope) if tensor else conductivity * slope)


def field_aligned(parallel: Any, perpendicular: Any, magnetic: Expr) -> Expr:
    """The tensor perpendicular I + (parallel − perpendicular) b b, b = B/``|B|``: a conductivity or a pressure along B.

    Braginskii (1965), Reviews of Plasma Physics 1, 205 (from memory).
    """
    along = outer(magnetic, magnetic) / dot(magnetic, magnetic)
    return perpendicular * identity + (parallel - perpendicular) * along


def landau_heat_loss(temperature: Expr, n_0: Any, thermal_speed: Any) -> Expr:
    """div q of the three-moment closure: sqrt(2/pi) n_0 v_t ``|k|`` T in Fourier space, W/m^3, v_t = sqrt(T_0/m).

    For `energy` or `adiabatic_pressure` with gamma = 3 along the wave, as ``heating=-landau_heat_loss(...)``. Here q is the
    flux of energy, half of the third moment that Hammett and Perkins close (1990, Phys. Rev. Lett. 64, 3019, from memory), so
    that the response of the density is 1 + i sqrt(pi) zeta + ... at low frequency, as it is in kinetic theory.
    """
    return multiplier(temperature, sqrt(2 / pi) * n_0 * thermal_speed * k_abs)


def double_adiabatic(
    model: FluidModel, n: Expr, v: Expr, magnetic: Expr, parallel: Any, perpendicular: Any
) -> Expr:
    """The two laws d/dt(p_perp / n B) = 0 and d/dt(p_par B^2 / n^3) = 0; returns the pressure tensor, Pa.

    G. F. Chew, M. L. Goldberger and F. E. Low (1956), Proc. R. Soc. A 236, 112.
    """
    n = named(model, n, 0, "double_adiabatic")
    v, magnetic = (named(model, f, 1, "double_adiabatic") for f in (v, magnetic))
    strength = norm(magnetic)
    parallel = declared(model, parallel, 0, "double_adiabatic")
    perpendicular = declared(model, perpendicular, 0, "double_adiabatic")
    for p, invariant in (
        (perpendicular, perpendicular / (n * strength)),
        (parallel, parallel * strength**2 / n**3),
    ):
        rate = partial_t(invariant) + advect(v, invariant)
        ready_law(model, f"{p} invariant", rate, 0, Role(v, closes=(p,)))
    return field_aligned(parallel, perpendicular, magnetic)


def pressure_tensor(
    model: FluidModel,
    pressure: Any,
    v: Expr,
    magnetic: Any = 0,
    *,
    charge: Any = 0,
    mass: Any = 1,
    heat_loss: Any = 0,
    name: str | None = None,
) -> Law:
    """The law of a full pressure tensor, the ten-moment closure without a heat flux:

    partial_t(P) + advect(v, P) + P div(v) + S + transpose(S) = (charge/mass) (P x B + transpose(P x B)) - heat_loss,

    with S = dot(P, grad(v)). H. Grad (1949), Comm. Pure Appl. Math. 2, 331, with the heat flux left out (from memory).

    Parameters
    ----------
    pressure : field or str
        A symmetric tensor field, Pa.
    v, magnetic : vector expressions, m/s and T
    charge, mass : scalar expressions, C and kg
    heat_loss : tensor expression, Pa/s
        The divergence of a heat flux, or what collisions take.
    name : str, optional
        Of the law; else ``"P pressure"`` for a tensor P.

    Raises
    ------
    DeclarationError
        When the model has no such tensor, or the pressure is closed already.

    Examples
    --------
    >>> import plasmalin as plin
    >>> model = plin.FluidModel("ten moments")
    >>> p = model.tensor("P", background=(("p_0", 0, 0), (0, "p_0", 0), (0, 0, "p_1")))
    >>> plin.laws.pressure_tensor(model, p, model.vector("v")).name
    'P pressure'
    """
    tensor = declared(model, pressure, 2, "pressure_tensor")
    v, magnetic = (
        named(model, v, 1, "pressure_tensor"),
        named(model, magnetic, 1, "pressure_tensor"),
    )
    strained = dot(tensor, grad(v))
    rate = partial_t(tensor) + advect(v, tensor) + tensor * div(v) + strained + transpose(strained)
    turned = cross(tensor, magnetic)
    change = charge / exact(mass) * (turned + transpose(turned)) - heat_loss
    return ready_law(model, name or f"{tensor} pressure", rate, change, Role(v, closes=(tensor,)))
