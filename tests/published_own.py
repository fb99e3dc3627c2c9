"""Published instabilities and waves of many kinds, declared as a user would: each returns a wave, numbers and polynomials.

The polynomials in omega, highest power first, are typed from the published relations (all from memory; the source stands in
each docstring) and hold every root that is not zero; numbers are invented.
"""

from dataclasses import dataclass

import numpy as np
import sympy

import plasmalin as plin
from plasmalin import (
    advect,
    components,
    cross,
    div,
    dot,
    grad,
    k_abs,
    laplacian,
    laws,
    multiplier,
    outer,
    partial_t,
    transpose,
)


@dataclass
class Case:
    """A wave, the numbers to put in, the published polynomials, and whether the background has a gradient (no audit then)."""

    wave: object
    values: dict
    k: dict
    polynomials: list
    sloped: bool = False


def farley_buneman():
    """D. T. Farley 1963, J. Geophys. Res. 68, 6083; O. Buneman 1963, Phys. Rev. Lett. 10, 285.

    omega (1 + Psi) = k u + i (Psi/nu_i)(omega^2 − k^2 c_s^2), Psi = nu_e nu_i/(Omega_e Omega_i), up to nu_e^2/Omega_e^2,
    which is kept here. The drifts follow from the momentum laws.
    """
    model = plin.FluidModel("electrojet")
    e, me, mi, n0, te, ti, nue, nui = model.parameters(
        "e m_e m_i n_0 T_e T_i nu_e nu_i", positive=True
    )
    b0, e0 = model.parameters("B_0 E_0", positive=True)
    phi, electric = model.scalar("phi"), components(e0, 0, 0)
    n_e, n_i = model.scalar("n_e", background=n0), model.scalar("n_i", background=n0)
    v_e, v_i = (
        model.vector("v_e", background=("u_x", "u_y", 0)),
        model.vector("v_i", background=("w_x", 0, 0)),
    )
    force = laws.lorentz_force(
        n_e, -e, electric=electric, potential=phi, magnetic=components(0, 0, b0), v=v_e
    )
    force += laws.neutral_friction(n_e, v_e, me, nue)
    laws.continuity(model, n_e, v_e)
    laws.momentum(model, n_e, v_e, mass=me, force=force, pressure=n_e * te, massless=True)
    force = laws.lorentz_force(n_i, e, electric=electric, potential=phi)
    force += laws.neutral_friction(n_i, v_i, mi, nui)
    laws.continuity(model, n_i, v_i)
    laws.momentum(model, n_i, v_i, mass=mi, force=force, pressure=n_i * ti)
    laws.quasineutrality(model, n_i - n_e)
    p = {
        "e": 1.0,
        "m_e": 1e-3,
        "m_i": 1.0,
        "n_0": 1.0,
        "T_e": 0.5,
        "T_i": 0.5,
        "nu_e": 20.0,
        "nu_i": 2.0,
        "B_0": 0.1,
        "E_0": 0.3,
    }
    gyro, k = p["B_0"] / p["m_e"], 0.8
    across = p["nu_e"] / (p["m_e"] * (p["nu_e"] ** 2 + gyro**2))
    drift = -p["E_0"] * gyro / (p["m_e"] * (p["nu_e"] ** 2 + gyro**2))
    # omega − k u = i (nu_e m_i/m_e)/(nu_e^2 + Omega_e^2) [omega (omega + i nu_i) − k^2 c_s^2]
    polynomial = [1j * across, -across * p["nu_i"] - 1, k * drift - 1j * across * k**2]
    across_k = [1, 1j * p["nu_i"]]  # ion velocity across k is only rubbed away
    wave = model.linearize().plane_wave((0, "k", 0))
    return Case(wave, p, {"k": k}, [polynomial, across_k, across_k])


def hasegawa_wakatani():
    """A. Hasegawa and M. Wakatani 1983, Phys. Rev. Lett. 50, 682: omega^2 + i omega a (1 + k^2)/k^2 − i a kappa k_y/k^2 = 0, a = C k_z^2."""
    model = plin.FluidModel("resistive drift wave")
    kappa, c = model.parameters("kappa C", positive=True)
    n, phi = model.scalar("n", background=0, gradient=(-kappa, 0, 0)), model.scalar("phi")
    z = components(0, 0, 1)
    flow = cross(z, grad(phi))
    across = lambda f: laplacian(f) - dot(z, grad(dot(z, grad(f))))
    current = -c * dot(z, grad(dot(z, grad(phi - n))))
    model.law("vorticity", partial_t(across(phi)) + advect(flow, across(phi)), current)
    model.law("density", partial_t(n) + advect(flow, n), current)
    p, (kx, ky, kz) = {"kappa": 1.3, "C": 2.0}, (0.4, 0.9, 0.5)
    a, square = p["C"] * kz**2, kx**2 + ky**2
    polynomial = [1, 1j * a * (1 + square) / square, -1j * a * p["kappa"] * ky / square]
    k = {"k_x": kx, "k_y": ky, "k_z": kz}
    return Case(
        model.linearize().plane_wave(("k_x", "k_y", "k_z")), p, k, [polynomial], sloped=True
    )


def simon_hoh():
    """A. Simon 1963, Phys. Fluids 6, 382; F. C. Hoh 1963, Phys. Fluids 6, 1184, without collisions.

    Y. Sakawa et al. 1993, Phys. Fluids B 5, 1681: omega_*/(omega − omega_0) = k^2 c_s^2/omega^2, omega_0 = k u_ExB.
    """
    model = plin.FluidModel("electrons that drift across a gradient, ions without field")
    mi, n0, b0, length = model.parameters("m_i n_0 B_0 L", positive=True)
    e0 = model.parameter("E_0")
    slope = (-n0 / length, 0, 0)
    n_e = model.scalar("n_e", background=n0, gradient=slope)
    n_i = model.scalar("n_i", background=n0)
    v_i, phi = model.vector("v_i"), model.scalar("phi")
    drift = cross(components(e0, 0, 0) - grad(phi), components(0, 0, b0)) / b0**2
    laws.continuity(model, n_e, drift)
    laws.continuity(model, n_i, v_i)
    laws.momentum(model, n_i, v_i, mass=mi, force=laws.lorentz_force(n_i, 1, potential=phi))
    laws.quasineutrality(model, n_i - n_e)
    p, k = {"m_i": 1.0, "n_0": 1.0, "B_0": 2.0, "L": 0.5, "E_0": 0.7}, 1.5
    star, rest = (
        k / (p["B_0"] * p["L"]),
        -k * p["E_0"] / p["B_0"],
    )  # n~_e/n_0 = omega_* phi/(omega − omega_0)
    polynomial = [star, -(k**2) / p["m_i"], k**2 / p["m_i"] * rest]
    return Case(model.linearize().plane_wave((0, "k", 0)), p, {"k": k}, [polynomial], sloped=True)


def rayleigh_taylor():
    """M. Kruskal and M. Schwarzschild 1954, Proc. R. Soc. A 223, 348; S. Chandrasekhar 1961, sec. 97, in the local approximation.

    omega^2 = k_z^2 B^2/(mu_0 rho) − g/L, B along z, heavy above light. The other Alfven polarization is not buoyant.
    """
    model = plin.FluidModel("heavy on light across B")
    rho0, g, length, mu0 = model.parameters("rho_0 g L mu_0", positive=True)
    rho = model.scalar("rho", background=rho0, gradient=(rho0 / length, 0, 0))
    p = model.scalar("p", background="p_0", gradient=(-rho0 * g, 0, 0))
    v, b = model.vector("v"), model.vector("B", background=(0, 0, "B_0"))
    model.law("mass", partial_t(rho) + advect(v, rho))
    laws.incompressible(model, v)
    force = laws.magnetic_force(b, mu0) + laws.gravity_force(rho, acceleration=components(-g, 0, 0))
    laws.momentum(model, rho, v, mass=1, force=force, pressure=p)
    laws.induction(model, b, v)
    values, kz = {"rho_0": 2.0, "g": 9.0, "L": 0.5, "mu_0": 1.0, "B_0": 1.0, "p_0": 5.0}, 1.1
    alfven = kz**2 / 2.0
    k = {"k_y": 3.0, "k_z": kz}
    return Case(
        model.linearize().plane_wave((0, "k_y", "k_z")),
        values,
        k,
        [[1, 0, 9.0 / 0.5 - alfven], [1, 0, -alfven]],
        sloped=True,
    )


def ion_ion_streaming():
    """T. E. Stringer 1964, J. Nucl. Energy C 6, 267: 1 + 1/k^2 lambda_e^2 = sum of omega_pb^2/((omega − k u_b)^2 − 3 k^2 T_b/m_b)."""
    model = plin.FluidModel("two ion beams in Boltzmann electrons", axes="x")
    te, m, t, u = model.parameters("T_e m T_i u", positive=True)
    phi, charge = model.scalar("phi"), 0
    for name, speed in (("a", u), ("b", -u)):
        n = model.scalar(f"n_{name}", background=sympy.Rational(1, 2))
        v = model.vector(f"v_{name}", background=(speed,))
        laws.continuity(model, n, v)
        pressure = laws.polytropic_pressure(n, sympy.Rational(1, 2), t, 3)
        laws.momentum(
            model, n, v, mass=m, force=laws.lorentz_force(n, 1, potential=phi), pressure=pressure
        )
        charge += n
    laws.poisson(model, phi, charge - laws.boltzmann_density(1, -1, te, phi), epsilon_0=1)
    p, k = {"T_e": 1.0, "m": 4.0, "T_i": 0.02, "u": 0.3}, 0.6
    a = np.polysub(np.polymul([1, -k * 0.3], [1, -k * 0.3]), [3 * k**2 * 0.02 / 4])
    b = np.polysub(np.polymul([1, k * 0.3], [1, k * 0.3]), [3 * k**2 * 0.02 / 4])
    polynomial = np.polysub((1 + 1 / k**2) * np.polymul(a, b), np.polyadd(a, b) / 8)
    return Case(model.linearize().plane_wave("x"), p, {"k": k}, [polynomial])


def relativistic_beam():
    """S. A. Bludman, K. M. Watson and M. N. Rosenbluth 1960, Phys. Fluids 3, 747: 1 = omega_p^2/omega^2 + omega_b^2/(gamma^3 (omega − k V)^2)."""
    model = plin.FluidModel("relativistic beam in a plasma", axes="x")
    eta, c = model.parameters("eta c", positive=True)
    phi, density = model.scalar("phi"), 0
    for name, n0, u in (("p", 1, 0), ("b", eta, "V")):
        n = model.scalar(f"n_{name}", background=n0)
        v = model.vector(f"v_{name}", background=(u,))
        laws.continuity(model, n, v)
        laws.relativistic_momentum(
            model, n, v, mass=1, c=c, force=laws.lorentz_force(n, -1, potential=phi)
        )
        density += n
    laws.poisson(model, phi, 1 + eta - density, epsilon_0=1)
    p, k = {"eta": 0.05, "c": 1.0, "V": 0.9}, 1.05
    gamma = (1 - 0.81) ** -0.5
    beam = np.polymul([1, -k * 0.9], [1, -k * 0.9])
    polynomial = np.polysub(
        np.polymul([1, 0, 0], beam), np.polyadd(beam, 0.05 / gamma**3 * np.array([1, 0, 0]))
    )
    return Case(model.linearize().plane_wave("x"), p, {"k": k}, [polynomial])


def weibel():
    """E. S. Weibel 1959, Phys. Rev. Lett. 2, 83, by ten moments (B. Basu 2002, Phys. Plasmas 9, 5131).

    (omega^2 − c^2 k^2)(omega^2 − k^2 T_z/m) = omega_p^2 (omega^2 + k^2 (T_x − T_z)/m), k along z, E along x; along y the same
    with T_y = T_z, and along z the plasma oscillation omega^2 = omega_p^2 + 3 k^2 T_z/m.
    """
    model = plin.FluidModel("ten moments")
    c, tx, tz = model.parameters("c T_x T_z", positive=True)
    electric, magnetic = model.vector("E"), model.vector("B")
    n, v = model.scalar("n", background=1), model.vector("v")
    p = model.tensor("P", background=((tx, 0, 0), (0, tz, 0), (0, 0, tz)))
    laws.continuity(model, n, v)
    force = laws.lorentz_force(n, -1, electric=electric, magnetic=magnetic, v=v)
    laws.momentum(model, n, v, mass=1, force=force, pressure=p)
    squeezed = dot(p, grad(v))
    units = [components(*(int(i == j) for j in range(3))) for i in range(3)]
    turned = sum(outer(dot(p, u), cross(u, magnetic)) for u in units)  # P x B, by columns
    model.law(
        "pressure",
        partial_t(p) + advect(v, p) + p * div(v) + squeezed + transpose(squeezed),
        -(turned + transpose(turned)),
    )
    laws.maxwell(model, electric, magnetic, -n * v, mu_0=1 / c**2, epsilon_0=1)
    values, k = {"c": 3.0, "T_x": 1.0, "T_z": 0.05}, 0.4

    def transverse(t):
        left = np.polymul([1, 0, -((3.0 * k) ** 2)], [1, 0, -(k**2) * 0.05])
        return np.polysub(left, [1, 0, k**2 * (t - 0.05)])

    polynomials = [transverse(1.0), transverse(0.05), [1, 0, -1 - 3 * k**2 * 0.05]]
    return Case(model.linearize().plane_wave("z"), values, {"k": k}, polynomials)


def modified_two_stream():
    """J. B. McBride, E. Ott, J. P. Boris and J. H. Orens 1972, Phys. Fluids 15, 2367, whole cold relation; by a mixture.

    1 = omega_pi^2/(omega − k_x V)^2 + (k_x^2/k^2) omega_pe^2/(omega^2 − Omega_e^2) + (k_z^2/k^2) omega_pe^2/omega^2.
    """
    c = plin.constants
    mass, density, drift, b0 = 40 * c.u, 1e16, 2e3, 0.01
    plasma = plin.mixture(
        [
            plin.Species("e", -1, c.m_e, density),
            plin.Species("i", 1, mass, density, drift=(drift, 0, 0), magnetised=False),
        ],
        magnetic_field=(0, 0, b0),
    )
    kx, kz = 4e4, 40.0
    pe2, pi2 = (density * c.e**2 / (c.epsilon_0 * m) for m in (c.m_e, mass))
    square = kx**2 + kz**2
    scale = np.sqrt(pi2)  # polynomials in omega/omega_pi
    doppler = np.polymul([1, -kx * drift / scale], [1, -kx * drift / scale])
    gyro = [1, 0, -((c.e * b0 / c.m_e / scale) ** 2)]
    whole = np.polymul(np.polymul(doppler, gyro), [1, 0, 0])
    for part in (
        np.polymul(gyro, [1, 0, 0]),
        kx**2 / square * pe2 / pi2 * np.polymul(doppler, [1, 0, 0]),
        kz**2 / square * pe2 / pi2 * np.polymul(doppler, gyro),
    ):
        whole = np.polysub(whole, part)
    polynomial = whole * scale ** -np.arange(len(whole) - 1, -1, -1.0)
    wave = plasma.linearize().plane_wave(("k_x", 0, "k_z"))
    free = [1, -kx * drift]  # two components of ion velocity across k stream freely
    return Case(wave, {}, {"k_x": kx, "k_z": kz}, [polynomial, free, free])


def toomre():
    """A. Toomre 1964, Astrophys. J. 139, 1217: omega^2 = kappa^2 − 2 pi G Sigma ``|k|`` + c^2 k^2, kappa^2 = 2 Omega (2 Omega + S)."""
    model = plin.FluidModel("thin rotating disk, local")
    big_g, sigma0, c, spin = model.parameters("G Sigma_0 c Omega", positive=True)
    shear = model.parameter("S")
    sigma, psi = model.scalar("Sigma", background=sigma0), model.scalar("psi")
    v = model.vector("v", gradient=((0, shear, 0), (0, 0, 0), (0, 0, 0)))
    laws.continuity(model, sigma, v)
    force = laws.gravity_force(sigma, potential=psi)
    force += laws.rotation_force(sigma, v, components(0, 0, spin))
    laws.momentum(model, sigma, v, mass=1, force=force, pressure=c**2 * sigma)
    model.law("thin disk", psi, multiplier(sigma - sigma0, -2 * sympy.pi * big_g / k_abs))
    p, k = {"G": 1.0, "Sigma_0": 0.3, "c": 0.5, "Omega": 1.0, "S": -1.5}, 2.2
    square = 2 * (2 - 1.5) - 2 * np.pi * 0.3 * k + (0.5 * k) ** 2
    return Case(
        model.linearize().plane_wave(("k", 0, 0)), p, {"k": k}, [[1, 0, -square]], sloped=True
    )


def rotating_jeans():
    """S. Chandrasekhar 1961, Hydrodynamic and Hydromagnetic Stability, sec. 120: omega^4 − (4 Omega^2 + s) omega^2 + 4 Omega^2 s cos^2(theta) = 0, s = c^2 k^2 − 4 pi G rho."""
    model = plin.FluidModel("rotating self-gravitating gas")
    big_g, rho0, c, spin = model.parameters("G rho_0 c Omega", positive=True)
    rho, psi, v = model.scalar("rho", background=rho0), model.scalar("psi"), model.vector("v")
    force = laws.gravity_force(rho, potential=psi)
    force += laws.rotation_force(rho, v, components(0, 0, spin))
    laws.continuity(model, rho, v)
    laws.momentum(model, rho, v, mass=1, force=force, pressure=c**2 * rho)
    laws.self_gravity(model, psi, rho, big_g=big_g)
    wave = model.linearize(assume=["self-gravity"]).plane_wave(angle="theta")
    p, k, theta = {"G": 1.0, "rho_0": 0.7, "c": 0.5, "Omega": 0.6}, 1.9, 0.8
    s = (0.5 * k) ** 2 - 4 * np.pi * 0.7
    polynomial = [1, 0, -4 * 0.36 - s, 0, 4 * 0.36 * s * np.cos(theta) ** 2]
    return Case(wave, p, {"k": k, "theta": theta}, [polynomial])


def visco_resistive_alfven():
    """S. Chandrasekhar 1961, sec. 39: (omega + i nu k^2)(omega + i eta k^2/mu_0) = k^2 B^2/(mu_0 rho), twice; beside it viscous sound.

    Sound along B: omega (omega + i (zeta + 4 mu/3) k^2/rho) = gamma p k^2/rho. Two modes rest: entropy and div B.
    """
    model = plin.FluidModel("viscous and resistive fluid")
    rho0, p0, gamma, mu0, eta, mu, zeta = model.parameters(
        "rho_0 p_0 gamma mu_0 eta mu zeta", positive=True
    )
    model.scalar("rho", background=rho0)
    model.scalar("p", background=p0)
    model.vector("v")
    model.vector("B", background=(0, 0, "B_0"))
    laws.mhd(
        model, "rho", "v", "p", "B", gamma=gamma, mu_0=mu0, resistivity=eta, shear=mu, bulk=zeta
    )
    p = {
        "rho_0": 2.0,
        "p_0": 0.6,
        "gamma": 5 / 3,
        "mu_0": 1.5,
        "eta": 0.3,
        "mu": 0.2,
        "zeta": 0.1,
        "B_0": 1.2,
    }
    k = 0.9
    alfven = np.polysub(np.polymul([1, 0.1j * k**2], [1, 0.2j * k**2]), [k**2 * 1.44 / 3.0])
    sound = [1, 1j * (0.1 + 0.8 / 3) * k**2 / 2.0, -(5 / 3) * 0.3 * k**2]
    return Case(model.linearize().plane_wave("z"), p, {"k": k}, [alfven, alfven, sound])


def resistive_whistler():
    """J. A. Lehane and P. C. Thonemann 1965, Proc. Phys. Soc. 85, 301; J. P. Klozenberg, B. McNamara and P. C. Thonemann 1965, J. Fluid Mech. 21, 545.

    omega = ±k k_z B/(mu_0 n e) − i eta k^2/mu_0.
    """
    model = plin.FluidModel("electron MHD with resistivity")
    e, n0, mu0, eta = model.parameters("e n_0 mu_0 eta", positive=True)
    b = model.vector("B", background=(0, 0, model.parameter("B_0", positive=True)))
    hall = laws.hall_field(b, n0, e=e, mu_0=mu0)
    laws.induction(model, b, 0, resistivity=eta, mu_0=mu0, hall=hall)
    p, (kx, kz) = {"e": 1.0, "n_0": 2.0, "mu_0": 1.0, "eta": 0.05, "B_0": 3.0}, (0.7, 1.1)
    k = np.hypot(kx, kz)
    turn, damping = k * kz * 3.0 / 2.0, 1j * 0.05 * k**2
    polynomial = np.polymul([1, damping - turn], [1, damping + turn])
    return Case(
        model.linearize().plane_wave(("k_x", 0, "k_z")), p, {"k_x": kx, "k_z": kz}, [polynomial]
    )


def magnetorotational():
    """E. P. Velikhov 1959, Sov. Phys. JETP 9, 995; S. Chandrasekhar 1960, Proc. Natl Acad. Sci. 46, 253; local form of Balbus and Hawley 1991, Astrophys. J. 376, 214.

    omega^4 − omega^2 (kappa^2 + 2 w) + w (w + 2 Omega S) = 0, w = (k B)^2/(mu_0 rho), kappa^2 = 2 Omega (2 Omega + S); k and B along z.
    """
    model = plin.FluidModel("magnetized shearing fluid, local")
    rho0, mu0, spin, b0 = model.parameters("rho_0 mu_0 Omega B_0", positive=True)
    shear = model.parameter("S")
    v = model.vector("v", gradient=((0, shear, 0), (0, 0, 0), (0, 0, 0)))
    b, p = model.vector("B", background=(0, 0, b0)), model.scalar("p")
    laws.incompressible(model, v)
    force = laws.magnetic_force(b, mu0) + laws.rotation_force(rho0, v, components(0, 0, spin))
    laws.momentum(model, rho0, v, mass=1, force=force, pressure=p)
    laws.induction(model, b, v)
    values, k = {"rho_0": 1.0, "mu_0": 1.0, "Omega": 1.0, "B_0": 1.0, "S": -1.5}, 0.9
    w = k**2
    polynomial = [1, 0, -(2 * 0.5 + 2 * w), 0, w * (w - 3.0)]
    return Case(model.linearize().plane_wave("z"), values, {"k": k}, [polynomial], sloped=True)


def thermal_instability():
    """G. B. Field 1965, Astrophys. J. 142, 531: s^3 + c (k_T + k^2/k_K) s^2 + c^2 k^2 s + (c^3 k^2/gamma)(k_T − k_rho + k^2/k_K) = 0, s = −i omega.

    Heat loss per mass L = A rho T^a − H. With T as an energy per mass: k_T = (gamma − 1) L_T/c, k_rho = (gamma − 1) rho_0 L_rho/(c T_0),
    k_K = c rho_0/((gamma − 1) K).
    """
    model = plin.FluidModel("gas that heats and cools", axes="x")
    rho0, t0, gamma, big_a, a, conduction, heat = model.parameters(
        "rho_0 T_0 gamma A a K H", positive=True
    )
    rho, t = model.scalar("rho", background=rho0), model.scalar("T", background=t0)
    v = model.vector("v")
    laws.continuity(model, rho, v)
    laws.momentum(model, rho, v, mass=1, pressure=rho * t)
    loss = rho * (big_a * rho * t**a - heat)
    laws.energy(model, t, rho, v, gamma, conductivity=conduction, heating=-loss)
    p, k = (
        {"rho_0": 1.2, "T_0": 0.8, "gamma": 5 / 3, "A": 0.5, "a": 0.5, "K": 0.03},
        0.4,
    )  # H follows
    c = np.sqrt(5 / 3 * 0.8)
    k_t = (2 / 3) * 0.5 * 1.2 * 0.5 * 0.8**-0.5 / c
    k_rho = (2 / 3) * 1.2 * 0.5 * 0.8**0.5 / (c * 0.8)
    conducted = k**2 * (2 / 3) * 0.03 / (c * 1.2)
    cubic = [
        1,
        c * (k_t + conducted),
        (c * k) ** 2,
        c**3 * k**2 / (5 / 3) * (k_t - k_rho + conducted),
    ]
    polynomial = np.array(cubic) * (-1j) ** np.arange(3, -1, -1)
    return Case(model.linearize().plane_wave("x"), p, {"k": k}, [polynomial])


CASES = {
    f.__name__: f
    for f in (
        farley_buneman,
        hasegawa_wakatani,
        simon_hoh,
        rayleigh_taylor,
        ion_ion_streaming,
        relativistic_beam,
        weibel,
        modified_two_stream,
        toomre,
        rotating_jeans,
        visco_resistive_alfven,
        resistive_whistler,
        magnetorotational,
        thermal_instability,
    )
}
