"""Ready laws: small functions that add ordinary, printable, replaceable laws to a model, and the terms they are made of.

A function that takes a model adds a law to it and returns the law; the others return terms (expressions) for the
user's own laws. Everything is coordinate-free and in SI units, temperatures as energies (J), densities in 1/m^3.

For example:

>>> import plasmalin as plin
>>> model = plin.FluidModel("electrons", axes="x")
>>> n, v, phi = model.scalar("n", background="n_0"), model.vector("v"), model.scalar("phi")
>>> e, eps0, m = model.constants("e epsilon_0 m_e")
>>> n_0, T = model.symbols["n_0"], model.parameter("T", positive=True)
>>> print(plin.laws.continuity(model, n, v))
partial_t(n) + div(n*v) = 0
>>> _ = plin.laws.momentum(model, n, v, mass=m, force=plin.laws.lorentz_force(n, -e, potential=phi), pressure=n * T)
>>> print(plin.laws.poisson(model, phi, e * (n_0 - n), epsilon_0=eps0))
-epsilon_0*laplacian(phi) = e*(-n + n_0)
"""

from __future__ import annotations

from typing import Any

from sympy import Expr, Rational, S, exp, pi, sqrt

from ..errors import DeclarationError
from .fields import Field
from .model import FluidModel, Law
from .operators import (
    advect,
    cross,
    curl,
    div,
    dot,
    grad,
    identity,
    k_abs,
    laplacian,
    multiplier,
    norm,
    outer,
    partial_t,
    rank_of,
    trace,
    transpose,
)

# Species -----------------------------------------------------------------------------------------


def continuity(
    model: FluidModel, n: Field, v: Expr, source: Any = 0, *, name: str | None = None
) -> Law:
    """Density: d_t n + div(n v) = source.

    Parameters
    ----------
    model : FluidModel
    n : Field
        Density, 1/m^3 (or mass density, kg/m^3).
    v : vector expression, m/s
    source : scalar expression, default 0
        Ionization nu_i n_e, recombination −beta n_e n_i, attachment −nu_a n_e ..., 1/(m^3 s).
    name : str, optional

    Returns
    -------
    Law
    """
    return model.law(name or f"{n.name} continuity", partial_t(n) + div(n * v), source)


def momentum(
    model: FluidModel,
    n: Expr,
    v: Field,
    *,
    mass: Any,
    force: Any = 0,
    pressure: Any = 0,
    massless: bool = False,
    name: str | None = None,
) -> Law:
    """Momentum: m n (d_t v + (v.grad) v) = force − grad p, or − div P for a tensor.

    Parameters
    ----------
    model : FluidModel
    n : scalar expression, 1/m^3
    v : Field, m/s
    mass : scalar expression, kg
    force : vector expression, N/m^3
        A sum of terms: `lorentz_force`, `neutral_friction`, `friction`, `viscous_force`, ...
    pressure : scalar or rank-2 expression, Pa
    massless : bool, default False
        Leave inertia out.
    name : str, optional

    Returns
    -------
    Law
    """
    inertia = S.Zero if massless else mass * n * (partial_t(v) + advect(v, v))
    return model.law(name or f"{v.name} momentum", inertia, force - pressure_gradient(pressure))


def relativistic_momentum(
    model: FluidModel,
    n: Expr,
    v: Field,
    *,
    mass: Any,
    c: Any,
    force: Any = 0,
    name: str | None = None,
) -> Law:
    """Cold relativistic momentum: m n (d_t + v.grad)(gamma v) = force, gamma = (1 − v^2/c^2)^(−1/2).

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
    u = v / sqrt(1 - dot(v, v) / c**2)
    return model.law(name or f"{v.name} momentum", mass * n * (partial_t(u) + advect(v, u)), force)


# Forces, N/m^3 -----------------------------------------------------------------------------------


def lorentz_force(
    n: Expr,
    charge: Any,
    *,
    electric: Any = None,
    potential: Any = None,
    magnetic: Any = None,
    v: Any = None,
) -> Expr:
    """q n (E + v x B), with E = −grad(potential) where a potential is given (both add).

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
    """grad p of a scalar, div P of a tensor."""
    if pressure == 0:
        return S.Zero
    return div(pressure) if rank_of(pressure) == 2 else grad(pressure)


def neutral_friction(n: Expr, v: Expr, mass: Any, rate: Any, neutral_velocity: Any = 0) -> Expr:
    """Friction on neutrals: −m nu n (v − v_n); `rate` is the collision frequency, 1/s."""
    return -mass * rate * n * (v - neutral_velocity)


def friction(n_s: Expr, v_s: Expr, n_t: Expr, v_t: Expr, alpha: Any) -> Expr:
    """Friction of species s on t: −alpha n_s n_t (v_s − v_t); the force on t is the same with s and t exchanged.

    `alpha` (N s m^2) may depend on temperatures and on ``|v_s − v_t|``; it must be the same in both.
    """
    return -alpha * n_s * n_t * (v_s - v_t)


def frictional_heat(n_s: Expr, v_s: Expr, n_t: Expr, v_t: Expr, alpha: Any) -> Expr:
    """Heat from `friction` of a pair in all, alpha n_s n_t ``|v_s − v_t|^2``, W/m^3; share it between the energy laws."""
    return alpha * n_s * n_t * dot(v_s - v_t, v_s - v_t)


def source_momentum(mass: Any, source: Any, v: Expr, source_velocity: Any = 0) -> Expr:
    """Momentum exchange of a density source S: −m S (v − v_source)."""
    return -mass * source * (v - source_velocity)


def viscous_force(v: Expr, shear: Any, bulk: Any = 0) -> Expr:
    """mu lap v + (zeta + mu/3) grad div v for uniform viscosities, Pa s (Landau and Lifshitz, Fluid Mechanics, sec. 15)."""
    return shear * laplacian(v) + (bulk + shear / 3) * grad(div(v))


def gravity_force(rho: Expr, *, potential: Any = None, acceleration: Any = None) -> Expr:
    """−rho grad psi, or rho g."""
    force: Any = S.Zero
    if potential is not None:
        force -= rho * grad(potential)
    return force if acceleration is None else force + rho * acceleration


def rotation_force(rho: Expr, v: Expr, rotation: Expr) -> Expr:
    """Coriolis force −2 rho Omega x v (the centrifugal force is taken up in the potential of gravity)."""
    return -2 * rho * cross(rotation, v)


def bohm_force(n: Expr, mass: Any, hbar: Any) -> Expr:
    """n (hbar^2/2m) grad(lap sqrt(n) / sqrt(n)) (Manfredi 2005, Fields Inst. Commun. 46, 263, from memory)."""
    return n * hbar**2 / (2 * mass) * grad(laplacian(sqrt(n)) / sqrt(n))


# Pressure ----------------------------------------------------------------------------------------


def polytropic_pressure(n: Expr, n_0: Any, temperature: Any, gamma: Any) -> Expr:
    """p = n_0 T (n/n_0)^gamma, Pa; gamma = 1 is isothermal, 3 one-dimensional, 5/3 three-dimensional compression."""
    return n_0 * temperature * (n / n_0) ** gamma


def adiabatic_pressure(
    model: FluidModel, p: Field, v: Expr, gamma: Any, *, heating: Any = 0, name: str | None = None
) -> Law:
    """d_t p + (v.grad) p + gamma p div v = (gamma − 1) heating, W/m^3."""
    rate = partial_t(p) + advect(v, p) + gamma * p * div(v)
    return model.law(name or f"{p.name} pressure", rate, (gamma - 1) * heating)


def energy(
    model: FluidModel,
    temperature: Field,
    n: Expr,
    v: Expr,
    gamma: Any,
    *,
    conductivity: Any = 0,
    heating: Any = 0,
    name: str | None = None,
) -> Law:
    """n/(gamma − 1) (d_t T + v.grad T) + n T div v = kappa lap T + heating, with T an energy and kappa in 1/(m s)."""
    rate = n / (gamma - 1) * (partial_t(temperature) + advect(v, temperature))
    right = conductivity * laplacian(temperature) + heating
    return model.law(name or f"{temperature.name} energy", rate + n * temperature * div(v), right)


def landau_heat_loss(temperature: Expr, n_0: Any, thermal_speed: Any) -> Expr:
    """div q of the three-moment closure: sqrt(8/pi) n_0 v_t ``|k|`` T in Fourier space, v_t = sqrt(T_0/m).

    Hammett and Perkins (1990), Phys. Rev. Lett. 64, 3019 (from memory).
    """
    return multiplier(temperature, sqrt(8 / pi) * n_0 * thermal_speed * k_abs)


def double_adiabatic(
    model: FluidModel, n: Expr, v: Expr, magnetic: Expr, parallel: Field, perpendicular: Field
) -> Expr:
    """The two laws d/dt(p_perp / n B) = 0 and d/dt(p_par B^2 / n^3) = 0; returns the pressure tensor.

    G. F. Chew, M. L. Goldberger and F. E. Low (1956), Proc. R. Soc. A 236, 112.
    """
    strength = norm(magnetic)
    for p, invariant in (
        (perpendicular, perpendicular / (n * strength)),
        (parallel, parallel * strength**2 / n**3),
    ):
        model.law(f"{p.name} invariant", partial_t(invariant) + advect(v, invariant))
    along = outer(magnetic, magnetic) / dot(magnetic, magnetic)
    return perpendicular * identity + (parallel - perpendicular) * along


def strain_rate(v: Expr) -> Expr:
    """The traceless rate of strain, grad v + (grad v)^T − (2/3) I div v, 1/s."""
    return grad(v) + transpose(grad(v)) - Rational(2, 3) * identity * trace(grad(v))


# Fields ------------------------------------------------------------------------------------------


def boltzmann_density(n_0: Any, charge: Any, temperature: Any, potential: Expr) -> Expr:
    """n_0 exp(−q phi / T), the density of an inertialess isothermal species."""
    return n_0 * exp(-charge * potential / temperature)


def poisson(
    model: FluidModel,
    potential: Field,
    charge_density: Expr,
    *,
    epsilon_0: Any,
    name: str = "Poisson",
) -> Law:
    """−epsilon_0 lap phi = rho_q, C/m^3."""
    return model.law(name, -epsilon_0 * laplacian(potential), charge_density)


def quasineutrality(
    model: FluidModel, charge_density: Expr, *, name: str = "quasi-neutrality"
) -> Law:
    """rho_q = 0; the potential is then determined by the momentum laws."""
    return model.law(name, charge_density)


def faraday(model: FluidModel, electric: Field, magnetic: Field, *, name: str = "Faraday") -> Law:
    """d_t B = −curl E."""
    return model.law(name, partial_t(magnetic), -curl(electric))


def ampere(
    model: FluidModel,
    electric: Field,
    magnetic: Field,
    current: Expr,
    *,
    mu_0: Any,
    epsilon_0: Any = 0,
    name: str = "Ampere",
) -> Law:
    """curl B = mu_0 J + mu_0 epsilon_0 d_t E; without `epsilon_0` the displacement current is left out."""
    return model.law(name, curl(magnetic), mu_0 * current + mu_0 * epsilon_0 * partial_t(electric))


def maxwell(
    model: FluidModel,
    electric: Field,
    magnetic: Field,
    current: Expr,
    *,
    mu_0: Any,
    epsilon_0: Any = 0,
) -> tuple[Law, Law]:
    """`faraday` and `ampere`."""
    return faraday(model, electric, magnetic), ampere(
        model, electric, magnetic, current, mu_0=mu_0, epsilon_0=epsilon_0
    )


def self_gravity(
    model: FluidModel, potential: Field, rho: Expr, *, big_g: Any, name: str = "self-gravity"
) -> Law:
    """lap psi = 4 pi G rho; over a uniform medium only with ``linearize(assume=[name])`` (Jeans 1902)."""
    return model.law(name, laplacian(potential), 4 * pi * big_g * rho)


# One fluid ---------------------------------------------------------------------------------------


def magnetic_force(magnetic: Expr, mu_0: Any) -> Expr:
    """(curl B) x B / mu_0."""
    return cross(curl(magnetic), magnetic) / mu_0


def induction(
    model: FluidModel,
    magnetic: Field,
    v: Expr,
    *,
    resistivity: Any = 0,
    mu_0: Any = 1,
    hall: Any = 0,
    name: str = "induction",
) -> Law:
    """d_t B = curl(v x B − eta curl B / mu_0 − hall).

    Parameters
    ----------
    model, magnetic, v, name
    resistivity : scalar expression, Ohm m
    mu_0 : scalar expression, H/m
    hall : vector expression, V/m
        ((curl B) x B / mu_0 − grad p_e) / (e n): the Hall term and the electron pressure.

    Returns
    -------
    Law
    """
    return model.law(
        name,
        partial_t(magnetic),
        curl(cross(v, magnetic) - resistivity / mu_0 * curl(magnetic) - hall),
    )


def incompressible(model: FluidModel, v: Expr, *, name: str = "incompressible") -> Law:
    """div v = 0; the pressure is its multiplier."""
    return model.law(name, div(v))


# Dust --------------------------------------------------------------------------------------------


def grain_charge(
    model: FluidModel,
    charge: Field,
    v: Expr,
    electron_current: Expr,
    ion_current: Expr,
    *,
    name: str | None = None,
) -> Law:
    """The charge of one grain: d_t q_d + (v.grad) q_d = I_e + I_i, A.

    Total charge is conserved when the electron and ion continuity laws have the sources of `grain_sinks`
    (Melandsø, Aslaksen and Havnes 1993, Planet. Space Sci. 41, 321, from memory).
    """
    return model.law(
        name or f"{charge.name} charging",
        partial_t(charge) + advect(v, charge),
        electron_current + ion_current,
    )


def grain_sinks(n_d: Expr, electron_current: Expr, ion_current: Expr, e: Any) -> tuple[Expr, Expr]:
    """Sources of electrons and of singly charged ions that match the currents to the grains, 1/(m^3 s)."""
    return n_d * electron_current / e, -n_d * ion_current / e
