"""Models for the claims of ``test_check``, declared as a user would; each function returns a wave."""

import sympy

import plasmalin as plin
from plasmalin import advect, components, cross, curl, div, grad, laplacian, partial_t


def fluid(model, s, mass, charge, n0, field, t=None, gamma=None, drift=0, magnetic=None):
    """Continuity and momentum of one species; T (n/n_0)^gamma is its pressure."""
    n, v = model.scalar(f"n_{s}", background=n0), model.vector(f"v_{s}", background=drift)
    force = charge * n * field
    if magnetic is not None:
        force += charge * n * cross(v, magnetic)
    if t is not None:
        force -= grad(n0 * t * (n / n0) ** gamma)
    model.law(f"{s} continuity", partial_t(n) + div(n * v))
    model.law(f"{s} momentum", mass * n * (partial_t(v) + advect(v, v)), force)
    return n, v


def langmuir():
    model = plin.FluidModel("warm electrons over fixed ions", axes="x")
    e, eps, me = model.constants("e epsilon_0 m_e")
    n0, t, gamma = model.parameters("n_0 T_e gamma_e", positive=True)
    phi = model.scalar("phi")
    n, _ = fluid(model, "e", me, -e, n0, -grad(phi), t, gamma)
    model.law("Poisson", eps * laplacian(phi), e * (n - n0))
    return model.linearize().plane_wave("x")


def two_fluids():
    model = plin.FluidModel("electrons and ions of charge Z", axes="x")
    e, eps, me = model.constants("e epsilon_0 m_e")
    ne, ni, mi, te, ti, ge, gi, z = model.parameters(
        "n_e0 n_i0 m_i T_e T_i gamma_e gamma_i Z", positive=True
    )
    phi = model.scalar("phi")
    electrons, _ = fluid(model, "e", me, -e, ne, -grad(phi), te, ge)
    ions, _ = fluid(model, "i", mi, z * e, ni, -grad(phi), ti, gi)
    model.law("Poisson", eps * laplacian(phi), e * (electrons - z * ions))
    return model.linearize().plane_wave("x")


def ion_acoustic():
    model = plin.FluidModel("warm ions, Boltzmann electrons", axes="x")
    e, eps = model.constants("e epsilon_0")
    n0, mi, te, ti, gi = model.parameters("n_0 m_i T_e T_i gamma_i", positive=True)
    phi = model.scalar("phi")
    n, _ = fluid(model, "i", mi, e, n0, -grad(phi), ti, gi)
    model.law("Poisson", eps * laplacian(phi), e * (n0 * sympy.exp(e * phi / te) - n))
    return model.linearize().plane_wave("x")


def maxwell(model, current):
    c, eps = model.constants("c epsilon_0")
    electric, magnetic = model.fields["E"], model.fields["B"]
    model.law("Faraday", partial_t(magnetic), -curl(electric))
    model.law("Ampere", partial_t(electric), c**2 * curl(magnetic) - current / eps)


def cold(direction=None):
    model = plin.FluidModel("cold electrons and ions in a magnetic field")
    e, me = model.constants("e m_e")
    n0, mi, b0 = model.parameters("n_0 m_i B_0", positive=True)
    electric, magnetic = model.vector("E"), model.vector("B", background=(0, 0, b0))
    n, v = fluid(model, "e", me, -e, n0, electric, magnetic=magnetic)
    ions, w = fluid(model, "i", mi, e, n0, electric, magnetic=magnetic)
    maxwell(model, e * (ions * w - n * v))
    linear = model.linearize()
    return linear.plane_wave(direction) if direction else linear.plane_wave(angle="theta")


def cold_along():
    return cold("z")


def cold_across():
    return cold("x")


def light():
    model = plin.FluidModel("light in warm electrons")
    e, me = model.constants("e m_e")
    n0, t, gamma = model.parameters("n_0 T_e gamma_e", positive=True)
    electric, magnetic = model.vector("E"), model.vector("B")
    n, v = fluid(model, "e", me, -e, n0, electric, t, gamma, magnetic=magnetic)
    maxwell(model, -e * n * v)
    return model.linearize().plane_wave("x")


def upper_hybrid():
    model = plin.FluidModel("electrostatic waves across a magnetic field")
    e, eps, me = model.constants("e epsilon_0 m_e")
    n0, b0, t, gamma = model.parameters("n_0 B_0 T_e gamma_e", positive=True)
    phi, field = model.scalar("phi"), components(0, 0, b0)
    n, _ = fluid(model, "e", me, -e, n0, -grad(phi), t, gamma, magnetic=field)
    model.law("Poisson", eps * laplacian(phi), e * (n - n0))
    return model.linearize().plane_wave("x")


def mhd(direction=None, hall=False, resistive=False):
    model = plin.FluidModel("magnetohydrodynamics")
    mu, rho0, p0, gamma, b0 = model.parameters("mu_0 rho_0 p_0 gamma B_0", positive=True)
    rho, p = model.scalar("rho", background=rho0), model.scalar("p", background=p0)
    v, b = model.vector("v"), model.vector("B", background=(0, 0, b0))
    force, induced = cross(curl(b), b) / mu, cross(v, b)
    if hall:
        depth = model.parameter("d_i", positive=True)
        induced = induced - depth * sympy.sqrt(mu * rho0) / rho * force
    if resistive:
        induced = induced - model.parameter("eta", positive=True) * curl(b) / mu
    model.law("continuity", partial_t(rho) + div(rho * v))
    model.law("momentum", rho * (partial_t(v) + advect(v, v)), -grad(p) + force)
    model.law("energy", partial_t(p) + advect(v, p) + gamma * p * div(v))
    model.law("induction", partial_t(b), curl(induced))
    linear = model.linearize()
    return linear.plane_wave(direction) if direction else linear.plane_wave(angle="theta")


def hall():
    return mhd("z", hall=True)


def resistive():
    return mhd("z", resistive=True)


def beam(mobile=False):
    """A beam through electrons; mobile ions instead of a beam, through which the electrons drift."""
    model = plin.FluidModel("streams", axes="x")
    e, eps, me = model.constants("e epsilon_0 m_e")
    n0, other = model.parameters("n_0 m_i" if mobile else "n_0 n_b", positive=True)
    u, phi = model.parameter("u", positive=True), model.scalar("phi")
    if mobile:
        n, _ = fluid(model, "e", me, -e, n0, -grad(phi), drift=(u,))
        ions, _ = fluid(model, "i", other, e, n0, -grad(phi))
        charge = n - ions
    else:
        n, _ = fluid(model, "e", me, -e, n0, -grad(phi))
        more, _ = fluid(model, "beam", me, -e, other, -grad(phi), drift=(u,))
        charge = n + more - n0 - other
    model.law("Poisson", eps * laplacian(phi), e * charge)
    return model.linearize().plane_wave("x")


def buneman():
    return beam(mobile=True)


def dusty():
    model = plin.FluidModel("cold dust, Boltzmann electrons and ions", axes="x")
    e, eps = model.constants("e epsilon_0")
    ne, ni, nd, z, mass, te, ti = model.parameters("n_e0 n_i0 n_d0 Z_d m_d T_e T_i", positive=True)
    phi = model.scalar("phi")
    n, _ = fluid(model, "d", mass, -z * e, nd, -grad(phi))
    charge = ne * sympy.exp(e * phi / te) + z * n - ni * sympy.exp(-e * phi / ti)
    model.law("Poisson", eps * laplacian(phi), e * charge)
    return model.linearize().plane_wave("x")


def viscous():
    model = plin.FluidModel("viscous isothermal gas", axes="x")
    rho0, c, nu = model.parameters("rho_0 c_s nu", positive=True)
    rho, v = model.scalar("rho", background=rho0), model.vector("v")
    model.law("continuity", partial_t(rho) + div(rho * v))
    force = -(c**2) * grad(rho) + rho * nu * laplacian(v)
    model.law("momentum", rho * (partial_t(v) + advect(v, v)), force)
    return model.linearize().plane_wave("x")


def gas():
    model = plin.FluidModel("viscous, heat-conducting gas", axes="x")
    rho0, t0, r, cv, mu, kappa = model.parameters("rho_0 T_0 R c_v mu kappa", positive=True)
    rho, t = model.scalar("rho", background=rho0), model.scalar("T", background=t0)
    v, p = model.vector("v"), rho * r * t
    model.law("continuity", partial_t(rho) + div(rho * v))
    viscosity = sympy.Rational(4, 3) * mu * laplacian(v)
    model.law("momentum", rho * (partial_t(v) + advect(v, v)), -grad(p) + viscosity)
    model.law("heat", rho * cv * (partial_t(t) + advect(v, t)), -p * div(v) + kappa * laplacian(t))
    return model.linearize().plane_wave("x")


def jeans():
    model = plin.FluidModel("self-gravitating gas")
    big_g, rho0, c = model.parameters("G rho_0 c_s", positive=True)
    rho, psi, v = model.scalar("rho", background=rho0), model.scalar("psi"), model.vector("v")
    model.law("continuity", partial_t(rho) + div(rho * v))
    force = -(c**2) * grad(rho) - rho * grad(psi)
    model.law("momentum", rho * (partial_t(v) + advect(v, v)), force)
    model.law("gravity", laplacian(psi), 4 * sympy.pi * big_g * rho)
    return model.linearize(assume=["gravity"]).plane_wave("x")


def streams():
    model = plin.FluidModel("electrons through ions, normalized", axes="x")
    mass, speed = model.parameters("M V", positive=True)
    phi = model.scalar("phi")
    n, _ = fluid(model, "e", 1, -1, 1, -grad(phi), drift=(speed,))
    ions, _ = fluid(model, "i", mass, 1, 1, -grad(phi))
    model.law("Poisson", laplacian(phi), n - ions)
    return model.linearize().plane_wave("x")
