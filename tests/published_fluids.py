"""Published waves and instabilities of one fluid, as in ``published_own``: gravity, rotation, magnetic fields, heat."""

import numpy as np
import sympy
from published_own import Case

import plasmalin as plin
from plasmalin import (
    advect,
    components,
    k_abs,
    laws,
    multiplier,
    partial_t,
)


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
    )


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
    return Case(model.linearize().plane_wave(("k", 0, 0)), p, {"k": k}, [[1, 0, -square]])


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
    return Case(model.linearize().plane_wave("z"), values, {"k": k}, [polynomial])


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
        rayleigh_taylor,
        toomre,
        rotating_jeans,
        visco_resistive_alfven,
        resistive_whistler,
        magnetorotational,
        thermal_instability,
    )
}
