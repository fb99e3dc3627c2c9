"""Further published cases, declared as a user would: each function returns a wave.

The sources are named in the files of ``cases_more/``, field ``source``; most are cited from memory, as the files say.
"""

import tomllib
from pathlib import Path

import sympy
from published import fluid, ideal_mhd, maxwell, r_and_l_waves

import plasmalin as plin
from plasmalin import (
    advect,
    cross,
    curl,
    div,
    dot,
    grad,
    identity,
    laplacian,
    norm,
    outer,
    partial_t,
)

FOLDER = Path(__file__).parent / "cases_more"


def read(name):
    return tomllib.loads((FOLDER / f"{name}.toml").read_text(encoding="utf-8"))


def alfven_from_two_fluids():
    """The laws of the file are those of R and L waves; only the published relation is a limit."""
    return r_and_l_waves()


def ambipolar_diffusion():
    model = plin.FluidModel("quasi-neutral drift and diffusion", axes="x")
    n0, mue, mui, de, di = model.parameters("n0 mue mui De Di", positive=True)
    n, phi = model.scalar("n", background=n0), model.scalar("phi")
    electrons = mue * n * grad(phi) - de * grad(n)
    ions = -mui * n * grad(phi) - di * grad(n)
    model.law("electron continuity", partial_t(n) + div(electrons))
    model.law("ion continuity", partial_t(n) + div(ions))
    return model.linearize().plane_wave("x")


def magnetized_cold_electrons(friction=None):
    model = plin.FluidModel("cold electrons at an angle to B")
    wp = model.parameter("wp", positive=True)
    electric, magnetic = model.vector("E"), model.vector("B", background=(0, 0, "Wc"))
    n, v, inertia = fluid(model, "e", 1, wp**2)
    drag = model.parameter(friction, positive=True) * v if friction else 0
    model.law("momentum", inertia / n, -(electric + cross(v, magnetic)) - drag)
    maxwell(model, -n * v)
    return model.linearize().plane_wave(("kx", 0, "kz"))


def appleton_hartree_collisionless():
    return magnetized_cold_electrons()


def appleton_hartree_collisional():
    return magnetized_cold_electrons(friction="nu")


def double_adiabatic():
    model = plin.FluidModel("double-adiabatic fluid")
    rho0 = model.parameter("rho0", positive=True)
    rho = model.scalar("rho", background=rho0)
    v, b = (
        model.vector("v"),
        model.vector("B", background=(0, 0, model.parameter("B0", positive=True))),
    )
    across, along = (
        model.scalar(f"p_{name}", background=model.parameter(f"p{name}", positive=True))
        for name in ("perp", "par")
    )
    pressure = across * identity + (along - across) * outer(b / norm(b), b / norm(b))
    model.law("continuity", partial_t(rho) + div(rho * v))
    model.law("momentum", rho * (partial_t(v) + advect(v, v)), -div(pressure) + cross(curl(b), b))
    model.law("induction", partial_t(b), curl(cross(v, b)))
    for name, invariant in (
        ("first invariant", across / (rho * norm(b))),
        ("second invariant", along * norm(b) ** 2 / rho**3),
    ):
        model.law(name, partial_t(invariant) + advect(v, invariant))
    return model.linearize().plane_wave(("kx", 0, "kz"))


def cgl_firehose():
    return double_adiabatic()


def cgl_mirror_threshold():
    return double_adiabatic()


def two_cold_species(direction):
    model = plin.FluidModel("cold electrons and ions in a constant magnetic field")
    e, me, mi, eps0, n0, b0 = model.parameters("e me mi eps0 n0 B0", positive=True)
    field = plin.components(0, 0, b0)
    phi = model.scalar("phi")
    total = 0
    for name, mass, charge in (("e", me, -e), ("i", mi, e)):
        n, v, inertia = fluid(model, name, mass, n0)
        model.law(f"{name} momentum", inertia / n, charge * (cross(v, field) - grad(phi)))
        total += charge * n
    model.law("Poisson", eps0 * laplacian(phi), -total)
    return model.linearize().plane_wave(direction)


def cold_electrostatic_oblique():
    return two_cold_species(("kx", 0, "kz"))


def lower_hybrid_perp():
    return two_cold_species(("kx", 0, 0))


def drift_acoustic_exact():
    model = plin.FluidModel("cold ions with a density gradient, Boltzmann electrons")
    e, mi, b0, te, length = model.parameters("e mi B0 Te_eV Ln", positive=True)
    log_n, v, phi = model.scalar("N"), model.vector("v"), model.scalar("phi")
    slope = plin.components(-1 / length, 0, 0)
    field = plin.components(0, 0, b0)
    model.law("ion continuity", partial_t(log_n) + dot(v, grad(log_n) + slope) + div(v))
    model.law("ion momentum", mi * (partial_t(v) + advect(v, v)), e * (cross(v, field) - grad(phi)))
    model.law("Boltzmann electrons", log_n, phi / te)
    return model.linearize().plane_wave((0, "ky", "kz"))


def drift_acoustic_limit():
    """The laws of the exact companion; only the published relation is a limit."""
    return drift_acoustic_exact()


def electrostatic_ion_cyclotron():
    model = plin.FluidModel("warm ions across B, Boltzmann electrons, quasi-neutral")
    te, ti, gi, wi = model.parameters("Te Ti gi Wi", positive=True)
    phi = model.scalar("phi")
    n, v, inertia = fluid(model, "i", 1, 1)
    force = n * (cross(v, plin.components(0, 0, wi)) - grad(phi))
    model.law("ion momentum", inertia, force - grad(ti * n**gi))
    model.law("quasi-neutrality", n, sympy.exp(phi / te))
    return model.linearize().plane_wave(("kx", 0, "kz"))


def filamentation_cold_beams():
    model = plin.FluidModel("two cold electron beams and light")
    wp, speed = model.parameters("wp V", positive=True)
    electric, magnetic = model.vector("E"), model.vector("B")
    current = 0
    for name, u in (("a", speed), ("b", -speed)):
        n, v, inertia = fluid(model, name, 1, wp**2 / 2, (0, 0, u))
        model.law(f"{name} momentum", inertia / n, -(electric + cross(v, magnetic)))
        current -= n * v
    maxwell(model, current)
    return model.linearize().plane_wave("x")


def ion_acoustic_neutral_drag():
    model = plin.FluidModel("ions with drag on neutrals, Boltzmann electrons", axes="x")
    e, eps0, mi, n0, te, ti, gi = model.parameters("e eps0 mi n0 Te_eV Ti_eV gi", positive=True)
    nu = model.parameter("nu", positive=True)
    phi = model.scalar("phi")
    n, v, inertia = fluid(model, "i", mi, n0)
    pressure = n0 * e * ti * (n / n0) ** gi
    model.law("ion momentum", inertia, -e * n * grad(phi) - grad(pressure) - mi * n * nu * v)
    model.law("Poisson", eps0 * laplacian(phi), e * (n0 * sympy.exp(phi / te) - n))
    return model.linearize().plane_wave("x")


def negative_ion_acoustic():
    model = plin.FluidModel("positive and negative ions, Boltzmann electrons", axes="x")
    te, gi = model.parameters("Te gi", positive=True)
    phi = model.scalar("phi")
    charge, at_rest = 0, 0
    for s, z in (("p", 1), ("n", -1)):
        n0, m, t = model.parameters(f"n{s} m{s} T{s}", positive=True)
        n, _, inertia = fluid(model, s, m, n0)
        model.law(f"{s} momentum", inertia, -z * n * grad(phi) - grad(n0 * t * (n / n0) ** gi))
        charge, at_rest = charge + z * n, at_rest + z * n0
    model.law("Poisson", laplacian(phi), at_rest * sympy.exp(phi / te) - charge)
    return model.linearize().plane_wave("x")


def o_and_x_modes():
    model = plin.FluidModel("cold electrons and light across B")
    e, me, n0, b0 = model.parameters("e me n0 B0", positive=True)
    electric, magnetic = model.vector("E"), model.vector("B", background=(0, 0, b0))
    n, v, inertia = fluid(model, "e", me, n0)
    model.law("momentum", inertia / n, -e * (electric + cross(v, magnetic)))
    maxwell(model, -e * n * v)
    return model.linearize().plane_wave(("kx", 0, 0))


def pair_plasma_electrostatic():
    model = plin.FluidModel("warm electrons and positrons", axes="x")
    wp, t, gamma = model.parameters("wp T gamma", positive=True)
    phi = model.scalar("phi")
    charge = 0
    for s, z in (("e", -1), ("p", 1)):
        n, _, inertia = fluid(model, s, 1, wp**2)
        pressure = wp**2 * t * (n / wp**2) ** gamma
        model.law(f"{s} momentum", inertia, -z * n * grad(phi) - grad(pressure))
        charge += z * n
    model.law("Poisson", laplacian(phi), -charge)
    return model.linearize().plane_wave("x")


def pair_plasma_em_parallel():
    model = plin.FluidModel("cold electrons and positrons along B")
    wp, wc = model.parameters("wp Wc", positive=True)
    electric, magnetic = model.vector("E"), model.vector("B", background=(0, 0, wc))
    current = 0
    for s, z in (("e", -1), ("p", 1)):
        n, v, inertia = fluid(model, s, 1, wp**2)
        model.law(f"{s} momentum", inertia / n, z * (electric + cross(v, magnetic)))
        current += z * n * v
    maxwell(model, current)
    return model.linearize().plane_wave("z")


def resistive_mhd_alfven():
    model = plin.FluidModel("resistive MHD")
    _, v, b, _ = ideal_mhd(model)
    eta = model.parameter("eta", positive=True)
    current = curl(b) / model.symbols["mu0"]
    model.law("induction", partial_t(b), curl(cross(v, b)) - curl(eta * current))
    return model.linearize().plane_wave("z")


def weak_beam_plasma():
    model = plin.FluidModel("weak cold beam in cold electrons", axes="x")
    eta, speed = model.parameters("eta V", positive=True)
    phi = model.scalar("phi")
    total = 0
    for name, density, u in (("p", 1, 0), ("b", eta, speed)):
        n, _, inertia = fluid(model, name, 1, density, (u,))
        model.law(f"{name} momentum", inertia / n, grad(phi))
        total += n
    model.law("Poisson", laplacian(phi), total - 1 - eta)
    return model.linearize().plane_wave("x")


def whistler_electron_mhd():
    model = plin.FluidModel("electron MHD with electron inertia")
    e, me, mu0, n0 = model.parameters("e me mu0 n0", positive=True)
    b = model.vector("B", background=(0, 0, model.parameter("B0", positive=True)))
    electrons = -curl(b) / (mu0 * n0 * e)
    frozen = b - me / (mu0 * n0 * e**2) * laplacian(b)
    model.law("frozen-in", partial_t(frozen), curl(cross(electrons, frozen)))
    return model.linearize().plane_wave(("kx", 0, "kz"))


CASES = {
    name.replace("_", "-"): function
    for name, function in globals().items()
    if (FOLDER / f"{name.replace('_', '-')}.toml").exists()
}
