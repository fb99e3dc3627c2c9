"""Closures against kinetic theory: finite Larmor radius and Landau damping."""

import numpy as np
import sympy
from scipy.special import wofz

import plasmalin as plin
from plasmalin import laws

# Gyroviscosity -----------------------------------------------------------------------------------


def test_gyroviscous_stress_by_components():
    """Braginskii 1965, eq. 2.21 with eta_3 = p/2 Omega, eta_4 = 2 eta_3 (from memory): B along z."""
    model = plin.FluidModel("gyroviscosity")
    p0, m, q, b = model.parameters("p_0 m q B_0", positive=True)
    v = model.vector("v")
    pi = model.tensor("Pi")
    ready = laws.gyroviscous_stress(v, p0, plin.components(0, 0, b), charge=q, mass=m)
    model.law("stress", pi, ready)
    model.law("velocity", plin.partial_t(v), -plin.div(pi))
    wave = model.linearize().plane_wave(("k_x", "k_y", "k_z"))
    k, amplitude = wave.k, [sympy.Symbol(f"v_{a}") for a in "xyz"]
    rate = [
        [sympy.I * (k[i] * amplitude[j] + k[j] * amplitude[i]) for j in range(3)] for i in range(3)
    ]
    eta = p0 * m / (2 * q * b)
    expected = {
        "xx": -eta * rate[0][1],
        "yy": eta * rate[0][1],
        "xy": eta / 2 * (rate[0][0] - rate[1][1]),
        "xz": -2 * eta * rate[1][2],
        "yz": 2 * eta * rate[0][2],
        "zz": 0,
    }
    columns = {c.symbol.name: j for j, c in enumerate(wave.columns)}
    names = {s.name: s for s in wave.linear.symbols.values()}
    for i, row in enumerate(wave.rows):
        if row.law == "stress":
            made = -sum(wave.matrix[i, columns[a.name]] * a for a in amplitude)
            assert sympy.expand(made - sympy.sympify(expected[row.component]).subs(names)) == 0


def response(gyroviscous):
    """−(T/q n_0) n~/phi~ of ions with a density gradient across B, k along the diamagnetic drift.

    Density as n_0 exp(N), so that an exponential profile is exact. In units of rho_i and Omega: k = sqrt(b),
    1/L = delta, omega = w omega_*i, and delta → 0.
    """
    model = plin.FluidModel("ions across B")
    q, b0, t, m, length, n0 = model.parameters("q B T m L n_0", positive=True)
    log_n, phi = model.scalar("N", gradient=(-1 / length, 0, 0)), model.scalar("phi")
    v = model.vector("v", background=(0, -t / (q * b0 * length), 0))
    n, b = n0 * sympy.exp(log_n), plin.components(0, 0, b0)
    pressure = n * t * plin.identity
    if gyroviscous:
        pressure += laws.gyroviscous_stress(v, n * t, b, charge=q, mass=m)
    laws.continuity(model, n, v)
    force = laws.lorentz_force(n, q, potential=phi, magnetic=b, v=v)
    laws.momentum(model, n, v, mass=m, force=force, pressure=pressure)
    model.law("given potential", phi, log_n)
    wave = model.linearize().plane_wave((0, "k", 0))
    j = [c.symbol.name for c in wave.columns].index("phi")
    others = [i for i in range(5) if i != j]
    solved = wave.matrix[:4, others].LUsolve(-wave.matrix[:4, j])[0] * t / q
    epsilon, delta, w = sympy.symbols("epsilon delta w", positive=True)
    (k,) = wave.wave_symbols
    scaled = {t: 1, m: 1, q: 1, b0: 1, n0: 1, length: 1 / delta, k: epsilon}
    scaled[wave.omega] = -w * delta * epsilon  # omega_*i = −k T/(q B L)
    limit = sympy.limit(sympy.simplify(-solved.subs(scaled)), delta, 0)
    return sympy.series(limit, epsilon, 0, 3).removeO(), epsilon, w


def test_diamagnetic_cancellation():
    """n~/n_0 = −(q phi/T) [1 − (1 − omega_*i/omega) Gamma_0(b)], Gamma_0 = 1 − b: the first term is b (omega − omega_*i)/omega.

    M. N. Rosenbluth, N. A. Krall and N. Rostoker 1962, Nucl. Fusion Suppl. 2, 143; K. V. Roberts and J. B. Taylor 1962,
    Phys. Rev. Lett. 8, 197 (from memory). Without the stress the factor would be squared.
    """
    with_stress, epsilon, w = response(gyroviscous=True)
    kinetic = 1 - (1 - 1 / w) * (1 - epsilon**2)
    assert sympy.expand(with_stress - kinetic) == 0
    without, epsilon, w = response(gyroviscous=False)
    assert sympy.expand(without - (1 / w + epsilon**2 * (1 - 1 / w) ** 2)) == 0


# Three moments against the kinetic response ------------------------------------------------------


def test_three_moments_against_the_kinetic_response():
    """The response of the density to a potential against 1 + zeta Z(zeta): both ends agree, between them it is near.

    The closure is chosen so that R(zeta) = 1 + i sqrt(pi) zeta + ... at low frequency; at high frequency
    −1/2 zeta^2 − 3/4 zeta^4. Hammett and Perkins (1990), Phys. Rev. Lett. 64, 3019 (from memory).
    """
    model = plin.FluidModel("three moments", axes="x")
    n0, t0, m = model.parameters("n_0 T_0 m", positive=True)
    n, v, t = model.scalar("n", background=n0), model.vector("v"), model.scalar("T", background=t0)
    phi = model.scalar("phi")
    force = laws.lorentz_force(n, 1, potential=phi)
    laws.continuity(model, n, v)
    laws.momentum(model, n, v, mass=m, pressure=n * t, force=force)
    loss = laws.landau_heat_loss(t, n0, sympy.sqrt(t0 / m))
    laws.energy(model, t, n, v, 3, heating=-loss)
    model.law("given potential", phi, n - n0)
    wave = model.linearize().plane_wave("x")
    (k,) = wave.wave_symbols
    zeta = sympy.Symbol("zeta", positive=True)
    units = wave.matrix.subs({n0: 1, t0: 1, m: 1, k: 1, wave.omega: zeta * sympy.sqrt(2)})
    j = [c.symbol.name for c in wave.columns].index("phi")
    others = [i for i in range(4) if i != j]
    solved = sympy.cancel(-units[:3, others].LUsolve(-units[:3, j])[0])
    slow = sympy.series(solved, zeta, 0, 2).removeO()
    assert sympy.simplify(slow - 1 - sympy.I * sympy.sqrt(sympy.pi) * zeta) == 0
    fast = sympy.series(solved, zeta, sympy.oo, 5).removeO()
    assert sympy.simplify(fast + 1 / (2 * zeta**2) + 3 / (4 * zeta**4)) == 0
    at = np.linspace(0.05, 6, 80)
    kinetic = 1 + at * 1j * np.sqrt(np.pi) * wofz(at)
    assert np.abs(sympy.lambdify(zeta, solved)(at + 0j) - kinetic).max() < 0.35


def test_gyroviscosity_of_a_field_that_moves():
    """Along B, omega^2 ± omega k^2 p/(rho Omega) = k^2 v_A^2 (N. Yajima 1966, Prog. Theor. Phys. 36, 1, from memory)."""
    model = plin.FluidModel("finite Larmor radius in one fluid")
    rho0, p0, b0, mu0, m, q = model.parameters("rho_0 p_0 B_0 mu_0 m q", positive=True)
    rho, p = model.scalar("rho", background=rho0), model.scalar("p", background=p0)
    v, b = model.vector("v"), model.vector("B", background=(0, 0, b0))
    stress = laws.gyroviscous_stress(v, p, b, charge=q, mass=m)
    laws.continuity(model, rho, v)
    pressure = p * plin.identity + stress
    laws.momentum(model, rho, v, mass=1, force=laws.magnetic_force(b, mu0), pressure=pressure)
    laws.adiabatic_pressure(model, p, v, 2)
    laws.induction(model, b, v)
    linear = model.linearize()
    assert len(linear.ledger) < 400  # what is of second order in so long a product is left together
    assert "O₂[" in str(linear.ledger)
    assert linear.audit().passed
    values = {"rho_0": 2.0, "p_0": 0.4, "B_0": 1.5, "mu_0": 1.0, "m": 0.3, "q": 1.0}
    k = 0.9
    turn, alfven = k**2 * 0.4 * 0.3 / (2.0 * 1.5), k**2 * 1.5**2 / 2.0
    found = linear.plane_wave("z").roots(values, k=k).omega
    for sign in (1, -1):
        for omega in np.roots([1, sign * turn, -alfven]):
            assert np.abs(found - omega).min() < 1e-12
