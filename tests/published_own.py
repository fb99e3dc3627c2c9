"""Published instabilities and waves of streaming and drifting plasmas, declared as a user would: each returns a wave, numbers and polynomials.

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
    laplacian,
    laws,
    outer,
    partial_t,
    transpose,
)


@dataclass
class Case:
    """A wave, the numbers to put in, and the published polynomials."""

    wave: object
    values: dict
    k: dict
    polynomials: list


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
    return Case(model.linearize().plane_wave(("k_x", "k_y", "k_z")), p, k, [polynomial])


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
    return Case(model.linearize().plane_wave((0, "k", 0)), p, {"k": k}, [polynomial])


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


CASES = {
    f.__name__: f
    for f in (
        farley_buneman,
        hasegawa_wakatani,
        simon_hoh,
        ion_ion_streaming,
        relativistic_beam,
        weibel,
        modified_two_stream,
    )
}
