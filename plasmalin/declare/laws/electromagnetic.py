"""Laws of the fields: potentials, Maxwell's laws, self-gravity."""

from __future__ import annotations

from typing import Any

from sympy import Expr, exp, pi

from ..law import Law
from ..model import FluidModel
from ..operators import curl, laplacian, partial_t
from .closures import declared


def boltzmann_density(n_0: Any, charge: Any, temperature: Any, potential: Expr) -> Expr:
    """n_0 exp(−q phi / T), 1/m^3, the density of an inertialess isothermal species (Gouy 1910; Debye and Hückel 1923)."""
    return n_0 * exp(-charge * potential / temperature)


def poisson(
    model: FluidModel,
    potential: Any,
    charge_density: Expr,
    *,
    epsilon_0: Any,
    name: str = "Poisson",
) -> Law:
    """−epsilon_0 lap phi = rho_q, C/m^3 (Jackson, Classical Electrodynamics, sec. 1.7)."""
    potential = declared(model, potential, 0, "poisson")
    return model.law(name, -epsilon_0 * laplacian(potential), charge_density)


def quasineutrality(
    model: FluidModel, charge_density: Expr, *, name: str = "quasi-neutrality"
) -> Law:
    """rho_q = 0, C/m^3; the potential is then determined by the momentum laws."""
    return model.law(name, charge_density)


def faraday(model: FluidModel, electric: Any, magnetic: Any, *, name: str = "Faraday") -> Law:
    """d_t B = −curl E, T/s."""
    electric = declared(model, electric, 1, "faraday")
    magnetic = declared(model, magnetic, 1, "faraday")
    return model.law(name, partial_t(magnetic), -curl(electric))


def ampere(
    model: FluidModel,
    electric: Any,
    magnetic: Any,
    current: Expr,
    *,
    mu_0: Any,
    epsilon_0: Any = 0,
    name: str = "Ampere",
) -> Law:
    """curl B = mu_0 J + mu_0 epsilon_0 d_t E, T/m; without `epsilon_0` the displacement current is left out."""
    electric = declared(model, electric, 1, "ampere")
    magnetic = declared(model, magnetic, 1, "ampere")
    return model.law(name, curl(magnetic), mu_0 * current + mu_0 * epsilon_0 * partial_t(electric))


def maxwell(
    model: FluidModel,
    electric: Any,
    magnetic: Any,
    current: Expr,
    *,
    mu_0: Any,
    epsilon_0: Any = 0,
) -> tuple[Law, Law]:
    """`faraday` and `ampere` (Jackson, Classical Electrodynamics, sec. 6.1)."""
    return faraday(model, electric, magnetic), ampere(
        model, electric, magnetic, current, mu_0=mu_0, epsilon_0=epsilon_0
    )


def self_gravity(
    model: FluidModel, potential: Any, rho: Expr, *, big_g: Any, name: str = "self-gravity"
) -> Law:
    """lap psi = 4 pi G rho, 1/s^2; over a uniform medium only with ``linearize(assume=[name])``.

    J. H. Jeans (1902), Phil. Trans. R. Soc. A 199, 1.
    """
    potential = declared(model, potential, 0, "self_gravity")
    return model.law(name, laplacian(potential), 4 * pi * big_g * rho)
