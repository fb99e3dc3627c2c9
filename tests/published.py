"""The published cases, declared as a user would: each function returns a wave and the parameters' values.

The sources are named in the files of ``cases/``, field ``source``; most are cited from memory, as the files say.
"""

import tomllib
from pathlib import Path

import sympy

import plasmalin as plin
from plasmalin import advect, cross, curl, div, dot, grad, laplacian, partial_t

FOLDER = Path(__file__).parent / "cases"


def read(name):
    return tomllib.loads((FOLDER / f"{name}.toml").read_text(encoding="utf-8"))


def fluid(model, name, mass, density, background=0):
    """Density and velocity of one species, with its continuity law."""
    n = model.scalar(f"n_{name}", background=density)
    v = model.vector(f"v_{name}", background=background)
    model.law(f"{name} continuity", partial_t(n) + div(n * v))
    return n, v, mass * n * (partial_t(v) + advect(v, v))


def cold_plasma_oscillation_drift():
    model = plin.FluidModel("drifting cold electrons over fixed ions", axes="x")
    e, me, eps0, n0 = model.parameters("e me eps0 n0", positive=True)
    v0 = model.parameter("V0")
    phi = model.scalar("phi")
    n, _, inertia = fluid(model, "e", me, n0, (v0,))
    model.law("electron momentum", inertia, e * n * grad(phi))
    model.law("Poisson", eps0 * laplacian(phi), e * (n - n0))
    return model.linearize().plane_wave("x")


def langmuir_bohm_gross():
    model = plin.FluidModel("warm electrons over fixed ions", axes="x")
    model.parameters("e me eps0 n0 Te_eV gamma", positive=True)
    model.scalar("n", background="n0")
    model.vector("v")
    model.scalar("phi")
    model.law("continuity", "partial_t(n) + div(n*v) = 0")
    model.law(
        "momentum",
        "me*n*(partial_t(v) + advect(v, v)) = e*n*grad(phi) - grad(n0*e*Te_eV*(n/n0)^gamma)",
    )
    model.law("Poisson", "eps0*laplacian(phi) = e*(n - n0)")
    return model.linearize().plane_wave("x")


def ion_acoustic_boltzmann_debye():
    model = plin.FluidModel("warm ions, Boltzmann electrons", axes="x")
    e, eps0, mi, n0, te, ti, gi = model.parameters("e eps0 mi n0 Te_eV Ti_eV gi", positive=True)
    phi = model.scalar("phi")
    n, _, inertia = fluid(model, "i", mi, n0)
    model.law("ion momentum", inertia, -e * n * grad(phi) - grad(n0 * e * ti * (n / n0) ** gi))
    model.law("Poisson", eps0 * laplacian(phi), e * (n0 * sympy.exp(phi / te) - n))
    return model.linearize().plane_wave("x")


def two_fluid_langmuir_ion_acoustic():
    model = plin.FluidModel("two warm fluids, normalised", axes="x")
    mass, tau, ge, gi = model.parameters("M tau ge gi", positive=True)
    phi = model.scalar("phi")
    ne, _, electrons = fluid(model, "e", 1, 1)
    ni, _, ions = fluid(model, "i", mass, 1)
    model.law("electron momentum", electrons, ne * grad(phi) - grad(ne**ge))
    model.law("ion momentum", ions, -ni * grad(phi) - tau * grad(ni**gi))
    model.law("Poisson", laplacian(phi), ne - ni)
    return model.linearize().plane_wave("x")


def two_ion_species_acoustic():
    model = plin.FluidModel("two ion species, Boltzmann electrons", axes="x")
    te, gi = model.parameters("Te gi", positive=True)
    phi = model.scalar("phi")
    charge, at_rest = 0, 0
    for s in "12":
        n0, z, m, t = model.parameters(f"n{s} Z{s} m{s} T{s}", positive=True)
        n, _, inertia = fluid(model, s, m, n0)
        model.law(f"{s} momentum", inertia, -z * n * grad(phi) - grad(n0 * t * (n / n0) ** gi))
        charge, at_rest = charge + z * n, at_rest + z * n0
    model.law("Poisson", laplacian(phi), at_rest * sympy.exp(phi / te) - charge)
    return model.linearize().plane_wave("x")


def upper_hybrid_warm():
    model = plin.FluidModel("warm electrons across a magnetic field")
    e, me, eps0, n0, te, gamma = model.parameters("e me eps0 n0 Te_eV gamma", positive=True)
    b0 = model.parameter("B0")
    field = plin.components(0, 0, b0)
    phi = model.scalar("phi")
    n, v, inertia = fluid(model, "e", me, n0)
    pressure = n0 * e * te * (n / n0) ** gamma
    model.law("momentum", inertia, e * n * (grad(phi) - cross(v, field)) - grad(pressure))
    model.law("Poisson", eps0 * laplacian(phi), e * (n - n0))
    return model.linearize().plane_wave(("kx", 0, 0))


def maxwell(model, current, magnetic=0):
    c, eps0 = model.parameters("c eps0", positive=True)
    electric = model.fields["E"]
    magnetic = model.fields["B"]
    model.law("Faraday", partial_t(magnetic), -curl(electric))
    model.law("Ampere", partial_t(electric), c**2 * curl(magnetic) - current / eps0)


def em_wave_unmagnetised():
    model = plin.FluidModel("cold electrons and light")
    e, me, n0 = model.parameters("e me n0", positive=True)
    electric, magnetic = model.vector("E"), model.vector("B")
    n, v, inertia = fluid(model, "e", me, n0)
    model.law("momentum", inertia / n, -e * (electric + cross(v, magnetic)))
    maxwell(model, -e * n * v)
    return model.linearize().plane_wave("x")


def r_and_l_waves():
    model = plin.FluidModel("cold electrons and protons along B")
    e, me, mi, n0 = model.parameters("e me mi n0", positive=True)
    electric, magnetic = model.vector("E"), model.vector("B", background=(0, 0, "B0"))
    current = 0
    for name, mass, charge in (("e", me, -e), ("i", mi, e)):
        n, v, inertia = fluid(model, name, mass, n0)
        model.law(f"{name} momentum", inertia / n, charge * (electric + cross(v, magnetic)))
        current += charge * n * v
    maxwell(model, current)
    return model.linearize().plane_wave("z")


def counterstreaming_cold_beams():
    model = plin.FluidModel("two cold electron beams", axes="x")
    wp0, speed = model.parameters("wp0 V", positive=True)
    phi = model.scalar("phi")
    total = 0
    for name, u in (("a", speed), ("b", -speed)):
        n, _, inertia = fluid(model, name, 1, wp0**2, (u,))
        model.law(f"{name} momentum", inertia / n, grad(phi))
        total += n
    model.law("Poisson", laplacian(phi), total - 2 * wp0**2)
    return model.linearize().plane_wave("x")


def buneman_electron_ion():
    model = plin.FluidModel("cold electrons through cold ions", axes="x")
    mass, speed = model.parameters("M V", positive=True)
    phi = model.scalar("phi")
    ne, _, electrons = fluid(model, "e", 1, 1, (speed,))
    ni, _, ions = fluid(model, "i", mass, 1)
    model.law("electron momentum", electrons, ne * grad(phi))
    model.law("ion momentum", ions, -ni * grad(phi))
    model.law("Poisson", laplacian(phi), ne - ni)
    return model.linearize().plane_wave("x")


def ideal_mhd(model, gamma="gamma"):
    mu0, rho0, p0, g = model.parameters(f"mu0 rho0 p0 {gamma}", positive=True)
    rho, p = model.scalar("rho", background=rho0), model.scalar("p", background=p0)
    v, b = model.vector("v"), model.vector("B", background=(0, 0, "B0"))
    force = cross(curl(b), b) / mu0
    model.law("continuity", partial_t(rho) + div(rho * v))
    model.law("momentum", rho * (partial_t(v) + advect(v, v)), -grad(p) + force)
    model.law("energy", partial_t(p) + advect(v, p) + g * p * div(v))
    return rho, v, b, force


def ideal_mhd_shear_fast_slow():
    model = plin.FluidModel("ideal MHD")
    _, v, b, _ = ideal_mhd(model)
    model.law("induction", partial_t(b), curl(cross(v, b)))
    return model.linearize().plane_wave(("kx", 0, "kz"))


def hall_mhd_parallel():
    model = plin.FluidModel("Hall MHD, normalised")
    rho, v, b, force = ideal_mhd(model)
    di = model.parameter("di", positive=True)
    mu0, rho0 = model.symbols["mu0"], model.symbols["rho0"]
    hall = di * sympy.sqrt(mu0 * rho0) / rho * force
    model.law("induction", partial_t(b), curl(cross(v, b) - hall))
    return model.linearize().plane_wave("z")


def jeans():
    model = plin.FluidModel("self-gravitating gas")
    big_g, rho0, cs, gamma = model.parameters("G rho0 cs gamma", positive=True)
    rho, psi, v = model.scalar("rho", background=rho0), model.scalar("psi"), model.vector("v")
    pressure = cs**2 * rho0 / gamma * (rho / rho0) ** gamma
    model.law("continuity", partial_t(rho) + div(rho * v))
    model.law("momentum", rho * (partial_t(v) + advect(v, v)), -grad(pressure) - rho * grad(psi))
    model.law("gravity", laplacian(psi), 4 * sympy.pi * big_g * rho)
    return model.linearize(assume=["gravity"]).plane_wave("x")


def dust_acoustic():
    model = plin.FluidModel("cold dust, Boltzmann electrons and ions", axes="x")
    te, ti, ni0, nd0, zd, md = model.parameters("Te Ti ni0 nd0 Zd md", positive=True)
    phi = model.scalar("phi")
    n, _, inertia = fluid(model, "d", md, nd0)
    electrons = (ni0 - zd * nd0) * sympy.exp(phi / te)
    model.law("dust momentum", inertia / n, zd * grad(phi))
    model.law("Poisson", laplacian(phi), electrons + zd * n - ni0 * sympy.exp(-phi / ti))
    return model.linearize().plane_wave("x")


def kirchhoff_stokes_sound():
    model = plin.FluidModel("viscous, heat-conducting perfect gas")
    rho0, t0, rg, cv, mu, zeta, kappa = model.parameters(
        "rho0 T0 Rg cv mu zeta kappa", positive=True
    )
    rho, t = model.scalar("rho", background=rho0), model.scalar("T", background=t0)
    v = model.vector("v")
    p = rho * rg * t
    viscous = mu * laplacian(v) + (zeta + mu / 3) * grad(div(v))
    model.law("continuity", partial_t(rho) + div(rho * v))
    model.law("momentum", rho * (partial_t(v) + advect(v, v)), -grad(p) + viscous)
    model.law("heat", rho * cv * (partial_t(t) + advect(v, t)), -p * div(v) + kappa * laplacian(t))
    return model.linearize().plane_wave("x")


def drift_wave_hasegawa_mima():
    model = plin.FluidModel("drift wave in the local approximation")
    _, b0, length = model.parameters("mi B0 Ln", positive=True)
    e, te = model.parameters("e Te_eV", positive=True)
    mi = model.symbols["mi"]
    log_n, phi = model.scalar("N"), model.scalar("phi")
    slope = plin.components(-1 / length, 0, 0)
    z = plin.components(0, 0, 1)
    drift = cross(z, grad(phi)) / b0
    rate = partial_t(grad(phi)) + advect(drift, grad(phi))
    polarization = -mi / (e * b0**2) * rate
    model.law(
        "ion continuity", partial_t(log_n) + dot(drift, grad(log_n) + slope) + div(polarization)
    )
    model.law("Boltzmann electrons", log_n, phi / te)
    return model.linearize().plane_wave(("kx", "ky", 0))


CASES = {
    name.replace("_", "-"): function
    for name, function in globals().items()
    if (FOLDER / f"{name.replace('_', '-')}.toml").exists()
}
