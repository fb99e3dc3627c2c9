"""Which fluids a linearized model holds, and what each is made of, read from its laws and its background.

Nothing goes by name. A fluid is a velocity that a density follows (d_t n + n_0 div v in one law) or that carries
itself (advect(v, v)); its momentum law is the one that holds d_t v, or without inertia the one that holds grad n.
There the mass is the coefficient of d_t v, the charge that of E or −grad(phi), the magnetic force that of v x B, the
friction that of v; the pressure is what stands under the gradient. What is not found is None, never a guess.
"""

from __future__ import annotations

from dataclasses import dataclass

from sympy import Expr, cancel

from ..declare.fields import Field
from ..declare.operators import (
    Laplacian,
)
from ..linearize.linearized import LinearizedModel
from .momentum import Coupling, Momentum
from .terms import Laws


@dataclass(frozen=True)
class Fluid:
    """One fluid by its laws; expressions in the parameters, None where the laws do not tell.

    Attributes
    ----------
    name : str
        The ending that density and velocity share, else the velocity's name.
    velocity : Field
    density : Field or None
    number : Expr or None
        Background of the density, 1/m^3.
    mass : Expr or None
        kg, if the momentum law is one of force.
    couplings : tuple of Coupling
    gyration : tuple of Expr or None
        q B along the axes, N s/m.
    friction : Expr or None
        Collision frequency in the momentum law, 1/s.
    temperature : Expr or None
        Background pressure per particle, J.
    stiffness : Expr or None
        gamma T: the change of pressure per particle and relative change of density, J.
    viscous, relativistic, nonlocal_closure : bool
        Whether the laws hold second derivatives of the velocity, a Lorentz factor, a multiplier.
    """

    name: str
    velocity: Field
    density: Field | None
    number: Expr | None
    mass: Expr | None
    couplings: tuple[Coupling, ...]
    gyration: tuple[Expr, ...] | None
    friction: Expr | None
    temperature: Expr | None
    stiffness: Expr | None
    viscous: bool
    relativistic: bool
    nonlocal_closure: bool


def fluids(linear: LinearizedModel) -> tuple[Fluid, ...]:
    """The fluids of a model, in the order of their velocities' declaration."""
    laws = Laws(linear)
    return tuple(_fluid(Momentum(laws, v)) for v in laws.velocities)


def screening(linear: LinearizedModel) -> tuple[Expr, ...]:
    """Per potential the square of the inverse Debye length of those that follow it without inertia, 1/m^2.

    It is read from the field's own law, epsilon_0 lap phi = ... + (n_0 e^2/T) phi.
    """
    found = []
    for terms in Laws(linear).terms.values():
        for rest, c in terms.items():
            if isinstance(rest, Laplacian) and rest.args[0] in terms:
                found.append(cancel(-terms[rest.args[0]] / c))
    return tuple(found)


def _fluid(found: Momentum) -> Fluid:
    return Fluid(
        name=found.name(),
        velocity=found.v,
        density=found.density,
        number=found.number,
        mass=found.mass(),
        couplings=tuple(found.couplings()),
        gyration=found.gyration(),
        friction=found.friction(),
        temperature=found.temperature(),
        stiffness=found.stiffness(),
        viscous=found.viscous(),
        relativistic=found.relativistic(),
        nonlocal_closure=found.nonlocal_closure(),
    )
