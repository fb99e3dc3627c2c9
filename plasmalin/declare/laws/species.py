"""One species: density, momentum, and the forces from fields."""

from __future__ import annotations

from typing import Any

from sympy import Expr, S, sqrt

from ...errors import DeclarationError
from ..fields import exact
from ..law import Law
from ..model import FluidModel
from ..operators import advect, cross, div, dot, grad, laplacian, partial_t, rank_of
from ..role import Role
from .closures import declared, named, ready_law


def continuity(
    model: FluidModel, n: Any, v: Expr, source: Any = 0, *, name: str | None = None
) -> Law:
    """Density: d_t n + div(n v) = source, 1/(m^3 s) (Landau and Lifshitz, Fluid Mechanics, sec. 1).

    Parameters
    ----------
    model : FluidModel
    n : Field or its name, or a scalar expression
        Density, 1/m^3 (or mass density, kg/m^3); n_0 exp(N) with the field N makes exponential profiles exact.
    v : vector expression, m/s
    source : scalar expression, default 0
        A sum of `ionization`, `recombination`, `attachment`, `grain_sinks`, 1/(m^3 s).
    name : str, optional

    Returns
    -------
    Law
    """
    n, v = declared(model, n, 0, "continuity"), named(model, v, 1, "continuity")
    return model.law(name or f"{n} continuity", partial_t(n) + div(n * v), source)


def momentum(
    model: FluidModel,
    n: Expr,
    v: Any,
    *,
    mass: Any,
    force: Any = 0,
    pressure: Any = 0,
    collisions: Any = 0,
    massless: bool = False,
    name: str | None = None,
) -> Law:
    """Momentum: m n (d_t v + (v.grad) v) = force − grad p + collisions, N/m^3; − div P for a tensor.

    Braginskii (1965), Reviews of Plasma Physics 1, 205 (from memory).

    Parameters
    ----------
    model : FluidModel
    n : scalar expression, 1/m^3
    v : Field or its name, m/s
    mass : scalar expression, kg
    force : vector expression, N/m^3
        A sum of terms: `lorentz_force`, `neutral_friction`, `viscous_force`, `source_momentum`, ...
    pressure : scalar or rank-2 expression, Pa
        0 is cold. A stress is added to ``p * plin.identity``.
    collisions : vector expression, N/m^3
        `friction` with the other species; `audit` sums it, and the work it does, over the species.
    massless : bool, default False
        Leave inertia out.
    name : str, optional

    Returns
    -------
    Law

    Raises
    ------
    DeclarationError
        When v is not declared, or another law closes the pressure of the species otherwise.
    """
    n, v = named(model, n, 0, "momentum"), declared(model, v, 1, "momentum")
    inertia = S.Zero if massless else mass * n * (partial_t(v) + advect(v, v))
    right = force + collisions - pressure_gradient(pressure)
    role = Role(v, pressure=exact(pressure), exchange=exact(collisions))
    return ready_law(model, name or f"{v} momentum", inertia, right, role)


def relativistic_momentum(
    model: FluidModel,
    n: Expr,
    v: Any,
    *,
    mass: Any,
    c: Any,
    force: Any = 0,
    name: str | None = None,
) -> Law:
    """Cold relativistic momentum: m n (d_t + v.grad)(gamma v) = force, N/m^3, gamma = (1 − v^2/c^2)^(−1/2).

    The effective mass is gamma^3 m along the flow and gamma m across it (Akhiezer and Polovin 1956, Sov. Phys. JETP
    3, 696, from memory).

    Parameters
    ----------
    model, n, v, mass, force, name
        As in `momentum`.
    c : scalar expression, m/s

    Returns
    -------
    Law
    """
    n = named(model, n, 0, "relativistic_momentum")
    v = declared(model, v, 1, "relativistic_momentum")
    u = v / sqrt(1 - dot(v, v) / c**2)
    return model.law(name or f"{v} momentum", mass * n * (partial_t(u) + advect(v, u)), force)


def lorentz_force(
    n: Expr,
    charge: Any,
    *,
    electric: Any = None,
    potential: Any = None,
    magnetic: Any = None,
    v: Any = None,
) -> Expr:
    """q n (E + v x B), N/m^3, with E = −grad(potential) where a potential is given (both add).

    Parameters
    ----------
    n : scalar expression, 1/m^3
    charge : scalar expression, C
    electric : vector expression, V/m
    potential : scalar expression, V
    magnetic : vector expression, T
    v : vector expression, m/s
        The velocity, needed with `magnetic`.

    Raises
    ------
    DeclarationError
        When `magnetic` is given without `v`.
    """
    if (magnetic is None) != (v is None):
        raise DeclarationError("lorentz_force: the magnetic force needs both magnetic= and v=")
    field = (electric if electric is not None else 0) - (
        grad(potential) if potential is not None else 0
    )
    if magnetic is not None:
        field = field + cross(v, magnetic)
    return charge * n * field


def pressure_gradient(pressure: Any) -> Expr:
    """grad p of a scalar, div P of a tensor, N/m^3."""
    if pressure == 0:
        return S.Zero
    return div(pressure) if rank_of(pressure) == 2 else grad(pressure)


def gravity_force(rho: Expr, *, potential: Any = None, acceleration: Any = None) -> Expr:
    """−rho grad psi, or rho g, N/m^3, with psi in J/kg and g in m/s^2 (Jeans 1902, Phil. Trans. R. Soc. A 199, 1)."""
    force: Any = S.Zero
    if potential is not None:
        force -= rho * grad(potential)
    return force if acceleration is None else force + rho * acceleration


def rotation_force(rho: Expr, v: Expr, rotation: Expr, position: Any = None) -> Expr:
    """−2 rho Omega x v − rho Omega x (Omega x r), N/m^3: Coriolis and centrifugal force in a frame that turns with Omega, 1/s.

    Without `position` the centrifugal force is left out, as where it is taken up in the potential of gravity. With it, r (m)
    is the constant vector from the axis to the place of the wave (Landau and Lifshitz, Mechanics, sec. 39).
    """
    coriolis = -2 * rho * cross(rotation, v)
    if position is None:
        return coriolis
    return coriolis - rho * cross(rotation, cross(rotation, position))


def bohm_force(n: Expr, mass: Any, hbar: Any) -> Expr:
    """n (hbar^2/2m) grad(lap sqrt(n) / sqrt(n)), N/m^3 (Manfredi 2005, Fields Inst. Commun. 46, 263, from memory)."""
    return n * hbar**2 / (2 * mass) * grad(laplacian(sqrt(n)) / sqrt(n))
