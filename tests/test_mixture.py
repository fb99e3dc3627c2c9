"""A mix by its physical numbers: identical relations, equilibria that balance, errors that say what does not."""

import numpy as np
import pytest
import sympy
from published import read
from test_declared_twice import same_relation

import plasmalin as plin
from plasmalin import Species

E, ME, U = plin.constants.e, plin.constants.m_e, plin.constants.u


def test_warm_electrons_and_ions_by_hand():
    plasma = plin.mixture(
        [Species("e", -1, ME, 1e16, 3.0), Species("i", 1, 40 * U, 1e16, 0.1, 3)], axes="x"
    )
    hand = plin.FluidModel("by hand", axes="x")
    e, eps0 = hand.constants("e epsilon_0")
    phi, rho = hand.scalar("phi"), 0
    for s, q in (("e", -e), ("i", e)):
        m, n0, t, gamma = hand.parameters(f"m_{s} n_{s}0 T_{s} gamma_{s}", positive=True)
        n, v = hand.scalar(f"n_{s}", background=n0), hand.vector(f"v_{s}")
        hand.law(f"{s} c", plin.partial_t(n) + plin.div(n * v))
        pressure = n0 * t * (n / n0) ** gamma
        inertia = m * n * (plin.partial_t(v) + plin.advect(v, v))
        hand.law(f"{s} m", inertia, -q * n * plin.grad(phi) - plin.grad(pressure))
        rho += q * n
    hand.law("Poisson", eps0 * plin.laplacian(phi) + rho)
    waves = [m.linearize().plane_wave("x") for m in (plasma, hand)]
    assert same_relation(*waves)
    assert np.array_equal(waves[0].roots(k=1e3).omega, waves[1].roots(plasma.values, k=1e3).omega)


def test_r_and_l_waves_from_numbers():
    """The roots of the published case, from the mixture's numbers (source in the case's file)."""
    case = read("r-and-l-waves")
    p = case["parameters"]
    plasma = plin.mixture(
        [Species("e", -1, p["me"], p["n0"]), Species("p", 1, p["mi"], p["n0"])],
        field="electromagnetic",
        magnetic_field=(0, 0, p["B0"]),
    )
    wave = plasma.linearize().plane_wave("z")
    values = {"e": p["e"], "epsilon_0": p["eps0"], "mu_0": 1 / (p["eps0"] * p["c"] ** 2)}
    for point in case["points"]:
        found = wave.roots(values, k=point["k"]).omega
        for omega in point["omega_re"]:
            assert np.abs(found - omega).min() <= 1e-9 * abs(omega)


def test_from_numbers_to_branches_in_fifteen_lines():
    """Electrons, H+, O− and charged dust at 20 mT (invented numbers)."""
    plasma = plin.mixture(
        [
            Species("e", -1, ME, 4e15, temperature_eV=2.0),
            Species("H", 1, 1.00728 * U, 1.06e16, temperature_eV=0.1, gamma=3),
            Species("O", -1, 15.995 * U, 6e15, temperature_eV=0.05, gamma=3),
            Species("d", -600, 1e-16, 1e12, temperature_eV=0.03, gamma=3, collision_frequency=10.0),
        ],
        magnetic_field=(0, 0, 0.02),
    )
    wave = plasma.linearize().plane_wave(angle="theta")
    branches = wave.branches("k", np.geomspace(10, 1e4, 30), theta=0.5)
    assert set(branches.status.ravel()) == {"certified"}
    assert branches.growth_rate.max() <= 0
    assert plasma.linearize().audit().passed


def test_pedersen_and_hall_drift():
    """A magnetized ion rubbing on neutrals in a crossed electric field (Chapman 1956, Nuovo Cimento 4, 1385, from memory)."""
    nu, b, field = 2e3, 5e-5, 0.01
    gyro = E * b / (16 * U)
    ion = Species("i", 1, 16 * U, 1e11, drift="balance", collision_frequency=nu)
    electron = Species("e", -1, ME, 1e11, drift="balance", collision_frequency=0.0)
    plasma = plin.mixture([ion, electron], magnetic_field=(0, 0, b), electric_field=(field, 0, 0))
    scale = (E / (16 * U)) * field / (nu**2 + gyro**2)
    assert plasma.values["u_i_x"] == pytest.approx(nu * scale, rel=1e-12)
    assert plasma.values["u_i_y"] == pytest.approx(-gyro * scale, rel=1e-12)
    assert plasma.values["u_e_y"] == pytest.approx(-field / b, rel=1e-12)
    linear = plasma.linearize()
    assert "i momentum" in str(linear.background)
    assert linear.plane_wave(("k", 0, 0)).roots(k=10.0).shape[0] > 0


def test_drift_along_the_field_by_friction():
    ion = Species("i", 1, 40 * U, 1e14, drift="balance", collision_frequency=1e4)
    electron = Species("e", -1, ME, 1e14, drift="balance", collision_frequency=1e8)
    plasma = plin.mixture(
        [ion, electron], axes="x", electric_field=(100.0,), neutral_velocity=(50.0,)
    )
    assert plasma.values["u_i_x"] == pytest.approx(50.0 + E * 100.0 / (40 * U * 1e4), rel=1e-12)
    plasma.linearize().plane_wave("x").roots(k=1e3).require()


def test_unmagnetized_species():
    ion = Species("i", 1, 40 * U, 1e14, drift=(0, 500.0, 0), magnetised=False)
    plasma = plin.mixture([ion, Species("e", -1, ME, 1e14)], magnetic_field=(0, 0, 0.01))
    assert "cross" not in str(plasma.laws["i momentum"])
    assert "cross" in str(plasma.laws["e momentum"])
    plasma.linearize()


def test_quasineutral_sound():
    """omega² = k² (T_e + 3 T_i) / (m_i + m_e), elementary algebra."""
    plasma = plin.mixture(
        [Species("e", -1, ME, 1e16, 3.0), Species("i", 1, 40 * U, 1e16, 0.1, 3)],
        field="quasineutral",
        axes="x",
    )
    roots = plasma.linearize().plane_wave("x").roots(k=7.0).omega
    speed = np.sqrt((3.0 + 0.3) * E / (40 * U + ME))
    assert np.allclose(roots, [-7 * speed, 7 * speed], rtol=1e-13)


def test_charge_number_becomes_a_parameter():
    plasma = plin.mixture([Species("d", -600, 1e-16, 1e12), Species("p", 1, U, 6e14)], axes="x")
    assert plasma.values["Z_d"] == -600
    assert sympy.Symbol("Z_d", real=True) in plasma.laws["Poisson"].residual.free_symbols


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"mass": 0.0}, "species 'e': mass = 0.0; give a finite positive number"),
        ({"density": -1.0}, "species 'e': density = -1.0"),
        ({"temperature_eV": -1.0}, "temperature_eV = -1.0; give a finite zero or positive"),
        ({"gamma": float("nan")}, "gamma = nan"),
        ({"charge_number": float("inf")}, "charge_number = inf"),
        ({"drift": "fast"}, "drift='fast'"),
        ({"name": "e-"}, "must be an identifier"),
    ],
)
def test_species_at_fault(change, message):
    given = {"name": "e", "charge_number": -1, "mass": ME, "density": 1e16, **change}
    with pytest.raises(plin.DeclarationError, match=message):
        Species(**given)


PAIR = [Species("e", -1, ME, 1e16), Species("i", 1, U, 1e16)]


@pytest.mark.parametrize(
    ("options", "error", "message"),
    [
        ({"field": "magnetic"}, plin.DeclarationError, "field='magnetic'; give one of"),
        ({"field": "electromagnetic", "axes": "x"}, plin.DeclarationError, "needs axes='xyz'"),
        (
            {"axes": "x", "magnetic_field": (1.0,)},
            plin.DeclarationError,
            "magnetic field needs axes",
        ),
        ({"magnetic_field": (1.0,)}, plin.DeclarationError, "one finite number per axis"),
        (
            {"electric_field": (1.0, 0, 0)},
            plin.BackgroundError,
            r"momentum law of 'e' leaves 1.602\S* N per particle along x",
        ),
    ],
)
def test_setting_at_fault(options, error, message):
    with pytest.raises(error, match=message):
        plin.mixture(PAIR, **options)


def test_charge_current_and_drift_must_balance():
    with pytest.raises(plin.BackgroundError, match=r"net charge of .*\(3 % of the largest term\)"):
        plin.mixture([PAIR[0], Species("i", 1, U, 0.97e16)])
    drifting = Species("e", -1, ME, 1e16, drift=(0, 0, 1e5))
    with pytest.raises(
        plin.BackgroundError,
        match=r"Ampere's law: a net current of -160\S* A/m\^2 along z .*return drift",
    ):
        plin.mixture([drifting, PAIR[1]], field="electromagnetic")
    plin.mixture([drifting, PAIR[1]]).linearize()
    across = Species("e", -1, ME, 1e16, drift=(1e5, 0, 0))
    with pytest.raises(
        plin.BackgroundError, match=r"momentum law of 'e' .* along y .*magnetised=False"
    ):
        plin.mixture([across, PAIR[1]], magnetic_field=(0, 0, 0.01))
    free = Species("e", -1, ME, 1e16, drift="balance")
    with pytest.raises(
        plin.BackgroundError, match="nothing holds species 'e' against the electric field"
    ):
        plin.mixture([free, PAIR[1]], electric_field=(1.0, 0, 0))
    with pytest.raises(plin.BackgroundError, match="along the magnetic field"):
        plin.mixture([free, PAIR[1]], electric_field=(0, 0, 1.0), magnetic_field=(0, 0, 1.0))
    with pytest.raises(plin.DeclarationError, match="species names must differ"):
        plin.mixture([PAIR[0], PAIR[0]])
    with pytest.raises(plin.DeclarationError, match="at least one species"):
        plin.mixture([])
