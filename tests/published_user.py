"""Published fluid relations of very different kinds, each declared from its nonlinear laws as a user would.

As in ``published_own``: the polynomials in omega, highest power first, are typed from the published relations (all from memory;
the source stands in each docstring) and hold every root that is not zero; numbers are invented.
"""

import numpy as np
import sympy
from published_own import Case

import plasmalin as plin
from plasmalin import (
    advect,
    components,
    cross,
    curl,
    div,
    dot,
    grad,
    k_abs,
    laplacian,
    laws,
    multiplier,
    outer,
    partial_t,
)


def dust_charge_fluctuation():
    """M. R. Jana, A. Sen and P. K. Kaw 1993, Phys. Rev. E 48, 3930: dust whose charge relaxes at the rate eta toward what phi asks for."""
    model = plin.FluidModel("dust with a charge that relaxes", axes="x")
    m, n0, eta, beta, eps0, chi = model.parameters("m n_0 eta beta epsilon chi", positive=True)
    q0 = model.parameter("q_0")
    n, v, phi = model.scalar("n_d", background=n0), model.vector("v_d"), model.scalar("phi")
    q = model.scalar("q_d", background=q0)
    laws.continuity(model, n, v)
    model.law("dust momentum", m * (partial_t(v) + advect(v, v)), -q * grad(phi))
    laws.grain_charge(model, q, v, -eta * (q - q0), -beta * phi)
    model.law("Poisson", eps0 * laplacian(phi), chi * phi - q * n + q0 * n0)
    p = {"m": 2.0, "n_0": 0.7, "eta": 0.4, "beta": 0.3, "epsilon": 1.1, "chi": 0.9, "q_0": -1.3}
    k = 0.8
    held, drive = 1.1 * k**2 + 0.9, 1.3**2 * 0.7 * k**2 / 2.0
    polynomial = [-1j * held, held * 0.4 + 0.7 * 0.3, 1j * drive, -drive * 0.4]
    return Case(model.linearize().plane_wave("x"), p, {"k": k}, [polynomial])


def electron_positron_ion():
    """S. I. Popel, S. V. Vladimirov and P. K. Shukla 1995, Phys. Plasmas 2, 716: omega^2 = k^2 (1 − p)/(1 + p sigma + k^2), cold ions, normalized."""
    model = plin.FluidModel("cold ions in Boltzmann electrons and positrons", axes="x")
    p, sigma = model.parameters("p sigma", positive=True)
    n, v, phi = model.scalar("n", background=1 - p), model.vector("v"), model.scalar("phi")
    laws.continuity(model, n, v)
    laws.momentum(model, n, v, mass=1, force=-n * grad(phi))
    model.law("Poisson", laplacian(phi), sympy.exp(phi) - p * sympy.exp(-sigma * phi) - n)
    square = 0.9**2 * 0.8 / (1 + 0.2 * 1.5 + 0.9**2)
    wave = model.linearize().plane_wave("x")
    return Case(wave, {"p": 0.2, "sigma": 1.5}, {"k": 0.9}, [[1, 0, -square]])


def extended_mhd():
    """K. Kimura and P. J. Morrison 2014, Phys. Plasmas 21, 082101: (1 + K) omega^2 ∓ d_i k^2 omega − k^2 = 0 along B, K = k^2 d_e^2, in Alfven units."""
    model = plin.FluidModel("incompressible Hall MHD with electron inertia")
    d_i, d_e = model.parameters("d_i d_e", positive=True)
    v, b, p = model.vector("v"), model.vector("B", background=(0, 0, 1)), model.scalar("p")
    j = curl(b)
    star = b + d_e**2 * curl(j)
    model.law("incompressible", div(v))
    model.law("momentum", partial_t(v) + advect(v, v), cross(j, star) - grad(p))
    flux = cross(v, star) - d_i * cross(j, star) + d_e**2 * cross(j, curl(v))
    model.law("induction", partial_t(star), curl(flux))
    model.constraint("no monopoles", div(b))
    k, big_k = 1.4, 1.4**2 * 0.3**2
    polynomials = [[1 + big_k, s * 0.8 * k**2, -(k**2)] for s in (1, -1)]
    wave = model.linearize().plane_wave("z")
    return Case(wave, {"d_i": 0.8, "d_e": 0.3}, {"k": k}, polynomials)


def ion_neutral_alfven():
    """R. M. Kulsrud and W. P. Pearce 1969, Astrophys. J. 156, 445: omega (omega^2 − w^2) + i nu ((1 + epsilon) omega^2 − epsilon w^2) = 0, epsilon = rho_i/rho_n."""
    model = plin.FluidModel("ions frozen to B that rub on neutrals")
    rho_i, rho_n, nu, mu0, b0 = model.parameters("rho_i rho_n nu mu_0 B_0", positive=True)
    v, u, b = model.vector("v"), model.vector("u"), model.vector("B", background=(0, 0, b0))
    p, r = model.scalar("p"), model.scalar("r")
    rub = rho_i * nu * (v - u)
    model.law("ions incompressible", div(v))
    model.law("neutrals incompressible", div(u))
    force = laws.magnetic_force(b, mu0)
    model.law("ions", rho_i * (partial_t(v) + advect(v, v)), force - grad(p) - rub)
    model.law("neutrals", rho_n * (partial_t(u) + advect(u, u)), rub - grad(r))
    laws.induction(model, b, v)
    model.constraint("no monopoles", div(b))
    values = {"rho_i": 0.5, "rho_n": 2.0, "nu": 0.6, "mu_0": 1.0, "B_0": 1.1}
    k = 0.9
    square, share = k**2 * 1.1**2 / 0.5, 0.25
    cubic = [1, 0.6j * (1 + share), -square, -0.6j * share * square]
    return Case(model.linearize().plane_wave("z"), values, {"k": k}, [cubic] * 2)


def self_gravitating_dust():
    """K. Avinash and P. K. Shukla 1994, Phys. Lett. A 189, 470: omega^2 = omega_pd^2 k^2 lambda^2/(1 + k^2 lambda^2) − omega_J^2."""
    model = plin.FluidModel("heavy charged dust", axes="x")
    n0 = model.parameter("n_d0", positive=True, unit="m**-3", value=1e8)
    m, q = model.parameter("m_d", True, "kg", 4e-6), model.parameter("q_d", False, "C", -2e-16)
    lam = model.parameter("lambda_D", True, "cm", 3.0)
    eps0, big_g = model.constants("epsilon_0 G")
    n, v = model.scalar("n_d", n0, unit="m**-3"), model.vector("v_d", unit="m/s")
    phi, psi = model.scalar("phi", unit="V"), model.scalar("psi", unit="J/kg")
    laws.continuity(model, n, v)
    force = laws.gravity_force(m * n, potential=psi) - q * n * grad(phi)
    laws.momentum(model, n, v, mass=m, force=force)
    model.law("Poisson", eps0 * laplacian(phi), eps0 * phi / lam**2 - q * (n - n0))
    laws.self_gravity(model, psi, m * n, big_g=big_g)
    wave = model.linearize(assume=["self-gravity"]).plane_wave("x")
    k, c = 20.0, plin.constants
    plasma = 1e8 * 4e-32 / (c.epsilon_0 * 4e-6) * (k * 0.03) ** 2 / (1 + (k * 0.03) ** 2)
    return Case(wave, {}, {"k": k}, [[1, 0, 4 * np.pi * c.G * 1e8 * 4e-6 - plasma]])


def magnetostrophic():
    """B. Lehnert 1954, Astrophys. J. 119, 647: omega^2 ± 2 Omega cos(theta) omega − (k v_A cos(theta))^2 = 0, rotation along B."""
    model = plin.FluidModel("rotating conducting liquid")
    rho, mu0, spin, b0 = model.parameters("rho mu_0 Omega B_0", positive=True)
    v, b, p = model.vector("v"), model.vector("B", background=(0, 0, b0)), model.scalar("p")
    laws.incompressible(model, v)
    force = laws.magnetic_force(b, mu0) + laws.rotation_force(rho, v, components(0, 0, spin))
    laws.momentum(model, rho, v, mass=1, force=force, pressure=p)
    laws.induction(model, b, v)
    model.constraint("no monopoles", div(b))
    values, k, theta = {"rho": 2.0, "mu_0": 1.0, "Omega": 0.7, "B_0": 1.2}, 1.1, 0.6
    along = np.cos(theta)
    square = (k * along * 1.2) ** 2 / 2.0
    polynomials = [[1, s * 2 * 0.7 * along, -square] for s in (1, -1)]
    wave = model.linearize().plane_wave(angle="theta")
    return Case(wave, values, {"k": k, "theta": theta}, polynomials)


def relativistic_sound():
    """L. D. Landau and E. M. Lifshitz, Fluid Mechanics, sec. 134: sound at c/sqrt(3) added relativistically to the flow of a photon or hot pair gas, c = 1."""
    model = plin.FluidModel("radiation fluid that flows fast", axes="x")
    u = model.parameter("U")
    e, v = model.scalar("e", background="e_0"), model.vector("v", background=(u,))
    w = sympy.Rational(4, 3) * e / (1 - dot(v, v))
    model.law("energy", partial_t(w - e / 3) + div(w * v))
    model.law("momentum", partial_t(w * v) + div(w * outer(v, v)), -grad(e / 3))
    k, s, flow = 1.7, 3**-0.5, 0.8
    roots = [k * (flow + a) / (1 + flow * a) for a in (s, -s)]
    wave = model.linearize().plane_wave("x")
    return Case(wave, {"U": flow, "e_0": 2.5}, {"k": k}, [np.poly(roots)])


def radiating_sound():
    """G. G. Stokes 1851, Phil. Mag. 1, 305: omega^2 (omega + i q) = (p/rho) k^2 (gamma omega + i q), Newton's law of cooling at the rate q."""
    model = plin.FluidModel("gas that radiates")
    n0, t0, gamma, m, q = model.parameters("n_0 T_0 gamma m q", positive=True)
    n, t, v = model.scalar("n", n0), model.scalar("T", t0), model.vector("v")
    laws.continuity(model, n, v)
    laws.momentum(model, n, v, mass=m, pressure=n * t)
    laws.energy(model, t, n, v, gamma, heating=-n * q * (t - t0) / (gamma - 1))
    p, k = {"n_0": 1.5, "T_0": 0.8, "gamma": 1.4, "m": 2.0, "q": 0.5}, 1.3
    square = 0.8 / 2.0 * k**2
    polynomial = [1, 0.5j, -1.4 * square, -0.5j * square]
    return Case(model.linearize().plane_wave("x"), p, {"k": k}, [polynomial])


def attachment_and_detachment():
    """W. L. Nighan and W. J. Wiegand 1974, Phys. Rev. A 10, 922, at fixed electron temperature: two densities, the trace and determinant of their rates."""
    model = plin.FluidModel("electrons that attach and detach", axes="x")
    n0, d, big_d, nu_a, nu_d, r = model.parameters("n_0 D_e D_n nu_a nu_d r", positive=True)
    n, m = model.scalar("n_e", background=n0), model.scalar("n_n", background=n0 * nu_a / nu_d)
    made = laws.ionization(n, r * n0) + laws.recombination(n, n, r)
    swap = laws.attachment(n, nu_a) + nu_d * m
    model.law("electrons", partial_t(n), d * laplacian(n) + made + swap)
    model.law("negative ions", partial_t(m), big_d * laplacian(m) - swap)
    p = {"n_0": 2.0, "D_e": 0.9, "D_n": 0.05, "nu_a": 0.4, "nu_d": 0.7, "r": 0.3}
    k = 0.6
    rate_e, rate_n = 0.9 * k**2 + 0.3 * 2.0 + 0.4, 0.05 * k**2 + 0.7
    polynomial = [1, 1j * (rate_e + rate_n), -(rate_e * rate_n - 0.4 * 0.7)]
    return Case(model.linearize().plane_wave("x"), p, {"k": k}, [polynomial])


def viscoelastic_dust():
    """P. K. Kaw and A. Sen 1998, Phys. Plasmas 5, 3552: stress that relaxes in tau; shear waves omega (1 − i omega tau) = −i eta k^2/rho, and sound with it.

    Longitudinal: omega^2 = c^2 k^2 − i omega (4 eta/3 rho) k^2/(1 − i omega tau). Three stresses that no flow feels decay at 1/tau.
    """
    model = plin.FluidModel("strongly coupled dust, generalized hydrodynamics")
    rho0, c, eta, tau = model.parameters("rho_0 c eta tau", positive=True)
    rho, v, stress = model.scalar("rho", rho0), model.vector("v"), model.tensor("Pi")
    laws.continuity(model, rho, v)
    pressure = c**2 * rho * plin.identity + stress
    laws.momentum(model, rho, v, mass=1, pressure=pressure)
    rate = tau * (partial_t(stress) + advect(v, stress)) + stress
    model.law("relaxation", rate, -eta * laws.strain_rate(v))
    p, k = {"rho_0": 1.4, "c": 0.9, "eta": 0.6, "tau": 0.5}, 1.2
    nu = 0.6 / 1.4 * k**2
    shear = [0.5, 1j, -nu]
    sound = [0.5, 1j, -(4 / 3 * nu) - 0.5 * (0.9 * k) ** 2, -1j * (0.9 * k) ** 2]
    still = [[1, 2j]] * 3
    return Case(model.linearize().plane_wave("x"), p, {"k": k}, [shear, shear, sound, *still])


def quantum_two_stream():
    """F. Haas, G. Manfredi and M. Feix 2000, Phys. Rev. E 62, 2763: 1 = (1/2) sum 1/((omega ± k v)^2 − H^2 k^4/4), normalized."""
    model = plin.FluidModel("two quantum electron beams", axes="x")
    speed, h = model.parameters("v_0 H", positive=True)
    phi, charge = model.scalar("phi"), 0
    for name, u in (("a", speed), ("b", -speed)):
        n = model.scalar(f"n_{name}", background=sympy.Rational(1, 2))
        v = model.vector(f"v_{name}", background=(u,))
        laws.continuity(model, n, v)
        laws.momentum(model, n, v, mass=1, force=n * grad(phi) + laws.bohm_force(n, 1, h))
        charge += n
    model.law("Poisson", laplacian(phi), charge - 1)
    p, k = {"v_0": 1.0, "H": 0.7}, 0.8
    spread = 0.7**2 * k**4 / 4
    one, two = ([1, s * 2 * k, k**2 - spread] for s in (1, -1))
    polynomial = np.polysub(np.polymul(one, two), np.polyadd(one, two) / 2)
    return Case(model.linearize().plane_wave("x"), p, {"k": k}, [polynomial])


def conduction_along_b():
    """G. B. Field 1965, Astrophys. J. 142, 531, without losses and with S. I. Braginskii's heat flux along B: omega (omega^2 − gamma c^2 k^2) + i kappa (omega^2 − c^2 k^2) = 0."""
    model = plin.FluidModel("gas that conducts heat along a field line")
    n0, t0, gamma, m, big_k = model.parameters("n_0 T_0 gamma m K", positive=True)
    n, t, v = model.scalar("n", n0), model.scalar("T", t0), model.vector("v")
    laws.continuity(model, n, v)
    laws.momentum(model, n, v, mass=m, pressure=n * t)
    along = laws.field_aligned(big_k * (t / t0) ** sympy.Rational(5, 2), 0, components(0, 0, 1))
    laws.energy(model, t, n, v, gamma, conductivity=along)
    p = {"n_0": 1.5, "T_0": 0.8, "gamma": 5 / 3, "m": 2.0, "K": 0.5}
    k, theta = 1.3, 0.7
    square, kappa = 0.4 * k**2, (5 / 3 - 1) * 0.5 * (k * np.cos(theta)) ** 2 / 1.5
    polynomial = [1, 1j * kappa, -5 / 3 * square, -1j * kappa * square]
    wave = model.linearize().plane_wave(angle="theta")
    return Case(wave, p, {"k": k, "theta": theta}, [polynomial])


def odd_viscosity():
    """J. E. Avron 1998, J. Stat. Phys. 92, 543: omega^2 = c^2 k^2 + nu_o^2 k^4 in two dimensions."""
    model = plin.FluidModel("two-dimensional fluid with odd viscosity", axes="xy")
    rho0, c = model.parameters("rho_0 c", positive=True)
    nu = model.parameter("nu_o")
    rho, v = model.scalar("rho", rho0), model.vector("v")
    turned = dot(components((0, -1), (1, 0)), v)
    laws.continuity(model, rho, v)
    force = rho0 * nu * laplacian(turned)
    laws.momentum(model, rho, v, mass=1, force=force, pressure=c**2 * rho)
    k_x, k_y = 0.9, -1.3
    square = k_x**2 + k_y**2
    polynomial = [1, 0, -(0.7**2) * square - 0.4**2 * square**2]
    wave = model.linearize().plane_wave(("k_x", "k_y"))
    values = {"rho_0": 1.2, "c": 0.7, "nu_o": -0.4}
    return Case(wave, values, {"k_x": k_x, "k_y": k_y}, [polynomial])


def poincare_waves():
    """W. Thomson 1879, Proc. R. Soc. Edinburgh 10, 92: (omega − k_x U)^2 = f^2 + g H k^2 in a rotating shallow layer; the vortical mode goes with the flow U."""
    model = plin.FluidModel("rotating shallow water, the flow held by a slope", axes="xy")
    g, depth, f = model.parameters("g H f", positive=True)
    u = model.parameter("U")
    h, v = model.scalar("h", depth), model.vector("v", (u, 0))
    turned = dot(components((0, -1), (1, 0)), v)
    laws.continuity(model, h, v)
    slope = components(0, f * u)
    model.law("momentum", partial_t(v) + advect(v, v) + f * turned, -g * grad(h) + slope)
    values, k = {"g": 9.8, "H": 2.0, "f": 0.3, "U": 1.5}, {"k_x": 0.2, "k_y": 0.1}
    square = 0.3**2 + 9.8 * 2.0 * (0.2**2 + 0.1**2)
    polynomials = [[1, -2 * 0.3, 0.3**2 - square], [1, -0.3]]
    return Case(model.linearize().plane_wave(("k_x", "k_y")), values, k, polynomials)


def elastic_waves():
    """S. D. Poisson 1831, Mem. Acad. Sci. 10, 578: longitudinal (lambda + 2 mu)/rho and, twice, transverse mu/rho."""
    model = plin.FluidModel("elastic solid")
    rho = model.parameter("rho", True, "g/cm**3", 2.7)
    lam, mu = model.parameters("lambda mu", True, "GPa")
    xi = model.vector("xi", unit="mm")
    force = (lam + 2 * mu) * grad(div(xi)) - mu * curl(curl(xi))
    model.law("momentum", rho * partial_t(partial_t(xi)), force)
    wave = model.linearize().plane_wave(("k_x", "k_y", "k_z"))
    k = {"k_x": 30.0, "k_y": -20.0, "k_z": 15.0}
    square = sum(x**2 for x in k.values())
    fast, slow = (-s * 1e9 / 2.7e3 * square for s in (50 + 2 * 26, 26))
    polynomials = [[1, 0, fast], [1, 0, slow], [1, 0, slow]]
    return Case(wave, {"lambda": 50.0, "mu": 26.0}, k, polynomials)


def second_sound():
    """L. D. Landau 1941, J. Phys. USSR 5, 71: u^2 rho' = p', u^2 sigma' = (rho_s sigma^2/rho_n) T', which gives first and second sound with their coupling."""
    model = plin.FluidModel("superfluid", axes="x")
    rho0, s0, r, a, b, f = model.parameters("rho_0 sigma_0 r a b f", positive=True)
    rho, s = model.scalar("rho", rho0), model.scalar("sigma", s0)
    v, w = model.vector("v_n"), model.vector("v_s")
    p = a * (rho - rho0) + b * (s - s0)
    t = b / rho0**2 * (rho - rho0) + f * (s - s0)
    normal, superfluid = (1 - r) * rho, r * rho
    flow = normal * v + superfluid * w
    flux = normal * outer(v, v) + superfluid * outer(w, w)
    model.law("mass", partial_t(rho) + div(flow))
    model.law("entropy", partial_t(rho * s) + div(rho * s * v))
    model.law("momentum", partial_t(flow) + div(flux), -grad(p))
    model.law("superfluid", partial_t(w) + grad(dot(w, w) / 2), s * grad(t) - grad(p) / rho)
    p, k = {"rho_0": 1.5, "sigma_0": 0.6, "r": 0.7, "a": 2.0, "b": 0.3, "f": 0.8}, 1.1
    heat = 0.7 / 0.3 * 0.6**2
    trace, det = 2.0 + heat * 0.8, heat * (2.0 * 0.8 - 0.3**2 / 1.5**2)
    polynomial = [1, 0, -trace * k**2, 0, det * k**4]
    return Case(model.linearize().plane_wave("x"), p, {"k": k}, [polynomial])


def dusty_gas_sound():
    """P. G. Saffman 1962, J. Fluid Mech. 13, 120: omega^2 (1 + f − i omega tau) = c^2 k^2 (1 − i omega tau), with mass loading f."""
    model = plin.FluidModel("gas laden with dust", axes="x")
    rho0, sigma0, c, tau = model.parameters("rho_0 sigma_0 c tau", positive=True)
    rho, v = model.scalar("rho_g", rho0), model.vector("v_g")
    sigma, w = model.scalar("rho_d", sigma0), model.vector("v_d")
    laws.continuity(model, rho, v)
    laws.continuity(model, sigma, w)
    drag = sigma * (v - w) / tau
    laws.momentum(model, rho, v, mass=1, pressure=c**2 * rho, force=-drag)
    laws.momentum(model, sigma, w, mass=1, force=drag)
    p, k = {"rho_0": 1.3, "sigma_0": 0.5, "c": 0.8, "tau": 0.9}, 1.4
    square = (0.8 * k) ** 2
    polynomial = [-0.9j, 1 + 0.5 / 1.3, 0.9j * square, -square]
    return Case(model.linearize().plane_wave("x"), p, {"k": k}, [polynomial])


def cosmic_ray_sound():
    """V. S. Ptuskin 1981, Astrophys. Space Sci. 76, 265: (omega^2 − k^2 c^2)(omega + i kappa k^2) = omega k^2 gamma_c P_c/rho."""
    model = plin.FluidModel("gas with cosmic rays", axes="x")
    rho0, p0, big_p, g, gc, kappa = model.parameters("rho_0 p_0 P_0 g g_c kappa", positive=True)
    rho, p, cr = model.scalar("rho", rho0), model.scalar("p", p0), model.scalar("P_c", big_p)
    v = model.vector("v")
    laws.continuity(model, rho, v)
    laws.momentum(model, rho, v, mass=1, pressure=p + cr)
    laws.adiabatic_pressure(model, p, v, g)
    spread = kappa * laplacian(cr)
    model.law("cosmic rays", partial_t(cr) + advect(v, cr) + gc * cr * div(v), spread)
    p = {"rho_0": 1.2, "p_0": 0.7, "P_0": 0.5, "g": 5 / 3, "g_c": 4 / 3, "kappa": 0.4}
    k = 1.3
    sound, ray, rate = 5 / 3 * 0.7 / 1.2 * k**2, 4 / 3 * 0.5 / 1.2 * k**2, 0.4j * k**2
    polynomial = np.polysub(np.polymul([1, 0, -sound], [1, rate]), [ray, 0])
    return Case(model.linearize().plane_wave("x"), p, {"k": k}, [polynomial])


def inertia_gravity_waves():
    """V. Vaisala 1925, Soc. Sci. Fenn. Comm. Phys.-Math. 2, 19, and with rotation A. E. Gill, Atmosphere-Ocean Dynamics, sec. 8.4: omega^2 k^2 = N^2 k_x^2 + f^2 k_z^2."""
    model = plin.FluidModel("stratified rotating liquid, Boussinesq")
    big_n, f = model.parameters("N f", positive=True)
    v, p = model.vector("v"), model.scalar("p")
    b = model.scalar("b", gradient=(0, 0, big_n**2))
    up = components(0, 0, 1)
    laws.incompressible(model, v)
    model.law("momentum", partial_t(v) + advect(v, v) + f * cross(up, v), b * up - grad(p))
    model.law("buoyancy", partial_t(b) + advect(v, b))
    k = {"k_x": 1.1, "k_z": 0.4}
    square = (0.9**2 * 1.1**2 + 0.2**2 * 0.4**2) / (1.1**2 + 0.4**2)
    wave = model.linearize().plane_wave(("k_x", 0, "k_z"))
    return Case(wave, {"N": 0.9, "f": 0.2}, k, [[1, 0, -square]])


def salt_fingers():
    """M. E. Stern 1960, Tellus 12, 172: (s + nu k^2)(s + kT k^2)(s + kS k^2) + g a T' (s + kS k^2) − g b S' (s + kT k^2) = 0, s = −i omega, k across gravity."""
    model = plin.FluidModel("warm salty water over cold fresh water")
    g, a, b, nu, kt, ks = model.parameters("g alpha beta nu k_T k_S", positive=True)
    slope_t, slope_s = model.parameters("T_z S_z", positive=True)
    v, p = model.vector("v"), model.scalar("p")
    t, s = model.scalar("T", gradient=(0, 0, slope_t)), model.scalar("S", gradient=(0, 0, slope_s))
    lift = g * (a * t - b * s) * components(0, 0, 1)
    laws.incompressible(model, v)
    model.law("momentum", partial_t(v) + advect(v, v), lift - grad(p) + nu * laplacian(v))
    model.law("heat", partial_t(t) + advect(v, t), kt * laplacian(t))
    model.law("salt", partial_t(s) + advect(v, s), ks * laplacian(s))
    values = {"g": 9.8, "alpha": 0.2, "beta": 0.8, "nu": 1.0, "k_T": 0.14, "k_S": 0.0011}
    values |= {"T_z": 0.5, "S_z": 0.1}
    k = 0.9
    damp, heat, salt = ([1, d * k**2] for d in (1.0, 0.14, 0.0011))
    rates = np.polymul(np.polymul(damp, heat), salt)
    rates = np.polyadd(rates, 9.8 * 0.2 * 0.5 * np.array(salt))
    rates = np.polysub(rates, 9.8 * 0.8 * 0.1 * np.array(heat))
    cubic = rates * (-1j) ** np.arange(3, -1, -1)
    shear = [1, 1j * k**2]
    wave = model.linearize().plane_wave("x")
    return Case(wave, values, {"k": k}, [cubic, shear])


def cairns_ions():
    """R. A. Cairns et al. 1995, Geophys. Res. Lett. 22, 2709: omega^2 = k^2/(1 − beta + k^2), electrons (1 − beta phi + beta phi^2) exp(phi), normalized."""
    model = plin.FluidModel("cold ions in nonthermal electrons", axes="x")
    beta = model.parameter("beta", positive=True)
    n, v, phi = model.scalar("n", 1), model.vector("v"), model.scalar("phi")
    laws.continuity(model, n, v)
    laws.momentum(model, n, v, mass=1, force=-n * grad(phi))
    electrons = (1 - beta * phi + beta * phi**2) * sympy.exp(phi)
    model.law("Poisson", laplacian(phi), electrons - n)
    wave, k = model.linearize().plane_wave("x"), 0.7
    return Case(wave, {"beta": 0.3}, {"k": k}, [[1, 0, -(k**2) / (0.7 + k**2)]])


def deep_water():
    """V. E. Zakharov 1968, J. Appl. Mech. Tech. Phys. 9, 190, first order: omega^2 = g ``|k|`` + (sigma/rho) ``|k|``^3 by way of the operator ``|k|``."""
    model = plin.FluidModel("surface of deep water", axes="xy")
    g, ratio = model.parameters("g s", positive=True)
    h, psi = model.scalar("eta"), model.scalar("psi")
    model.law("surface", partial_t(h), multiplier(psi, k_abs))
    model.law(
        "Bernoulli", partial_t(psi) + dot(grad(psi), grad(psi)) / 2, ratio * laplacian(h) - g * h
    )
    k = {"k_x": 30.0, "k_y": -40.0}
    wave = model.linearize().plane_wave(("k_x", "k_y"))
    square = 9.8 * 50.0 + 7.3e-5 * 50.0**3
    return Case(wave, {"g": 9.8, "s": 7.3e-5}, k, [[1, 0, -square]])


CASES = {
    f.__name__: f
    for f in (
        dust_charge_fluctuation,
        electron_positron_ion,
        extended_mhd,
        ion_neutral_alfven,
        self_gravitating_dust,
        magnetostrophic,
        relativistic_sound,
        radiating_sound,
        attachment_and_detachment,
        viscoelastic_dust,
        quantum_two_stream,
        conduction_along_b,
        odd_viscosity,
        poincare_waves,
        elastic_waves,
        second_sound,
        dusty_gas_sound,
        cosmic_ray_sound,
        inertia_gravity_waves,
        salt_fingers,
        cairns_ions,
        deep_water,
    )
}
