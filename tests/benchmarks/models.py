"""Models that the benchmarks share: warm magnetized species with Maxwell's laws. Numbers are invented."""

import plasmalin as plin
from plasmalin import advect, cross, curl, div, grad, partial_t

IONS = [(1, 1.0, 100.0), (1, 2.0, 80.0), (2, 4.0, 60.0), (6, 12.0, 50.0)]
SHARES = {2: [1.0], 3: [0.6, 0.4], 4: [0.5, 0.3, 0.1], 5: [0.4, 0.3, 0.1, 0.1 / 6]}


def electromagnetic(count, *, drift=False, friction=False, cold=False):
    """Electrons and `count` − 1 ion species in B along z, with Maxwell's laws."""
    model = plin.FluidModel(f"{count} magnetized species with Maxwell's laws")
    electric, magnetic = model.vector("E"), model.vector("B", background=(0, 0, "B_0"))
    mu0, eps0 = model.constants("mu_0 epsilon_0")
    current = 0
    for s in range(count):
        q = model.parameter(f"q_{s}")
        m, t, gamma, n0 = model.parameters(f"m_{s} T_{s} gamma_{s} n_{s}0", positive=True)
        u = (0, 0, model.parameter(f"u_{s}")) if drift else 0
        v = model.vector(f"v_{s}", background=u)
        if cold:
            n, pressure = n0, 0
        else:
            n = model.scalar(f"n_{s}", background=n0)
            pressure = grad(n0 * t * (n / n0) ** gamma)
            model.law(f"continuity {s}", partial_t(n) + div(n * v))
        force = q * n * (electric + cross(v, magnetic)) - pressure
        if friction:
            nu = model.parameter(f"nu_{s}", positive=True)
            force -= nu * m * n * (v - (v.background if drift else 0))
        model.law(f"momentum {s}", m * n * (partial_t(v) + advect(v, v)), force)
        current += q * n * v
    model.law("Faraday", partial_t(magnetic), -curl(electric))
    model.law("Ampere", curl(magnetic), mu0 * current + mu0 * eps0 * partial_t(electric))
    return model


def numbers(count, *, drift=False, friction=False, cold=False):
    """Values for `electromagnetic`: 1 T, 1e19 electrons per m^3, about 100 eV."""
    e, u = plin.constants.e, plin.constants.u
    species = [(-1, plin.constants.m_e / u, 100.0), *IONS[: count - 1]]
    shares = [1.0, *SHARES[count]]
    if count == 5:
        shares[4] = (1.0 - shares[1] - shares[2] - 2 * shares[3]) / 6
    values = {"B_0": 1.0}
    for s, ((z, mass, t), share) in enumerate(zip(species, shares, strict=True)):
        values[f"q_{s}"], values[f"m_{s}"] = z * e, mass * u
        if not cold:
            values[f"T_{s}"], values[f"gamma_{s}"] = t * e, 5 / 3
        values[f"n_{s}0"] = share * 1e19
        if friction:
            values[f"nu_{s}"] = 1e5 / (s + 1)
    if drift:
        speeds = [0.0] * count
        speeds[0], speeds[1] = 3e6, 3e6 / (shares[1] * species[1][0])
        values |= {f"u_{s}": u for s, u in enumerate(speeds)}
    return values


def dusty_numbers():
    """Electrons, ions and heavy grains with 10,000 charges each; invented."""
    e, values = plin.constants.e, {"B_0": 0.01}
    species = [
        (-1, plin.constants.m_e, 3.0, 1, 6e14),
        (1, 6.6335e-26, 0.03, 3, 1e15),
        (-10000, 1e-15, 0.03, 3, 4e10),
    ]
    for s, (z, m, t, gamma, n) in enumerate(species):
        values |= {f"q_{s}": z * e, f"m_{s}": m, f"T_{s}": t * e, f"gamma_{s}": gamma, f"n_{s}0": n}
    return values
