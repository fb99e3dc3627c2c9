"""Viscous and gyroviscous stress; a stress is added to the pressure that `momentum` takes."""

from __future__ import annotations

from typing import Any

from sympy import Add, Expr, Rational

from ...errors import DeclarationError
from ..fields import Components, components
from ..operators import (
    cross,
    ddot,
    div,
    dot,
    grad,
    identity,
    laplacian,
    norm,
    outer,
    trace,
    transpose,
)


def viscous_force(v: Expr, shear: Any, bulk: Any = 0) -> Expr:
    """mu lap v + (zeta + mu/3) grad div v, N/m^3, for uniform viscosities in Pa s (Landau and Lifshitz, Fluid Mechanics, sec. 15)."""
    return shear * laplacian(v) + (bulk + shear / 3) * grad(div(v))


def strain_rate(v: Expr) -> Expr:
    """The traceless rate of strain, grad v + (grad v)^T − (2/3) I div v, 1/s."""
    return grad(v) + transpose(grad(v)) - Rational(2, 3) * identity * trace(grad(v))


def viscous_stress(v: Expr, shear: Any, bulk: Any = 0) -> Expr:
    """The stress −mu W − zeta I div v, Pa, to add to the pressure; W is `strain_rate`, the viscosities (Pa s) may vary.

    Landau and Lifshitz, Fluid Mechanics, sec. 15. The pressure it is added to must be a tensor: ``p * plin.identity``.
    """
    stress = -shear * strain_rate(v)
    return stress if bulk == 0 else stress - bulk * identity * div(v)


def viscous_heat(v: Expr, shear: Any, bulk: Any = 0) -> Expr:
    """Heat from viscosity, mu W:grad v + zeta (div v)^2, W/m^3 (Landau and Lifshitz, Fluid Mechanics, sec. 49)."""
    heat = shear * ddot(strain_rate(v), grad(v))
    return heat if bulk == 0 else heat + bulk * div(v) ** 2


def gyroviscous_stress(v: Expr, pressure: Any, magnetic: Expr, *, charge: Any, mass: Any) -> Expr:
    """The collisionless stress of a magnetized species, Pa, to add to the pressure.

    Pi = (p/4 Omega) [(b x W).(I + 3 b b) + transpose], Omega = q B/m, b = B/``|B|``, W = grad v + (grad v)^T
    (Braginskii 1965, Reviews of Plasma Physics 1, 205: eta_3 = p/2 Omega, eta_4 = p/Omega; from memory). It does no work and
    cancels the advection by the diamagnetic drift, so that finite Larmor radius enters as b (omega − omega_*i)/omega to first
    order in b = k^2 rho_i^2 (Roberts and Taylor 1962, Phys. Rev. Lett. 8, 197, from memory).

    Parameters
    ----------
    v : vector expression, m/s
    pressure : scalar expression, Pa
        The pressure across the field.
    magnetic : vector expression, T
        A field with a background, or a constant vector, in a model with axes="xyz".
    charge, mass : scalar expression, C and kg

    Raises
    ------
    DeclarationError
        When `magnetic` is 0 or has not three axes.
    """
    if magnetic == 0:
        raise DeclarationError("gyroviscous_stress: magnetic=0; it is for a magnetized species")
    if isinstance(magnetic, Components) and magnetic.size != 3:
        raise DeclarationError("gyroviscous_stress: magnetic needs three axes; use axes='xyz'")
    strength = norm(magnetic)
    along = magnetic / strength
    turned = dot(_turning(along), grad(v) + transpose(grad(v)))
    half = dot(turned, identity + 3 * outer(along, along))
    return pressure * mass / (4 * charge * strength) * (half + transpose(half))


def _turning(b: Expr) -> Expr:
    """The tensor that turns a vector: dot(turning, a) = b x a."""
    units = (components(1, 0, 0), components(0, 1, 0), components(0, 0, 1))
    return Add(*(outer(cross(b, unit), unit) for unit in units))
