"""What collisions and charging conserve, and that the audit shows it."""

import pytest
import sympy

import plasmalin as plin
from plasmalin import laws

# Conservation ------------------------------------------------------------------------------------


def colliding(heat_of_a=True, force_on_b=True, drift=True):
    """Two species with friction that depends on temperature and speed, and energy laws."""
    model = plin.FluidModel("two colliding species")
    alpha, chi, gamma = model.parameters("alpha chi gamma", positive=True)
    made = []
    for s in "ab":
        n0, t0 = model.parameters(f"n_{s}0 T_{s}0", positive=True)
        flow = (0, 0, f"u_{s}") if drift else 0
        made.append(
            (
                model.scalar(f"n_{s}", background=n0),
                model.vector(f"v_{s}", background=flow),
                model.scalar(f"T_{s}", background=t0),
                model.parameter(f"m_{s}", positive=True),
            )
        )
    (na, va, ta, ma), (nb, vb, tb, mb) = made
    rubbing = alpha * ta ** sympy.Rational(-3, 2) * (1 + plin.norm(va - vb))
    for n, v, t, m, o_n, o_v, o_t, o_m in (
        (na, va, ta, ma, nb, vb, tb, mb),
        (nb, vb, tb, mb, na, va, ta, ma),
    ):
        force = laws.friction(n, v, o_n, o_v, rubbing)
        heat = laws.frictional_heat(n, v, o_n, o_v, rubbing, o_m / (m + o_m))
        heat += laws.heat_exchange(n, t, o_n, o_t, chi)
        if n is na and not heat_of_a:
            heat = 2 * heat
        if n is nb and not force_on_b:
            force = 2 * force
        laws.continuity(model, n, v)
        laws.momentum(model, n, v, mass=m, pressure=n * t, collisions=force)
        laws.energy(model, t, n, v, gamma, collisions=heat)
    names = [name for name in model.laws if "momentum" in name or "energy" in name]
    return model.linearize(assume=names if drift else [])


@pytest.mark.parametrize("drift", [True, False])
def test_audit_shows_what_collisions_conserve(drift):
    audit = colliding(drift=drift).audit()
    assert audit.passed
    assert audit.conserved
    assert [e.what for e in audit.exchanges] == ["momentum", "energy"]
    assert audit.exchanges[0].laws == ("v_a momentum", "v_b momentum")
    assert str(audit).count("conserved to first order") == 2


def test_audit_shows_what_collisions_lose():
    lopsided = colliding(force_on_b=False).audit()
    assert lopsided.passed
    assert not lopsided.conserved
    assert "sum of momentum over v_a momentum, v_b momentum: NOT conserved" in str(lopsided)
    heated = colliding(heat_of_a=False).audit()
    assert [e.conserved for e in heated.exchanges] == [True, False]


def test_charge_continuity_of_dust_follows_from_the_laws():
    """The charge-weighted sum of the linearized laws is d_t rho~ + div J~ = 0: sinks and grain current match."""
    model = plin.FluidModel("charging dust", axes="x")
    e, a, b = model.parameters("e a b", positive=True)
    q = model.scalar("q_d", background=model.parameter("q_0"))
    n, v = {}, {}
    for s in "eid":
        n[s] = model.scalar(f"n_{s}", background=model.parameter(f"n_{s}0", positive=True))
        v[s] = model.vector(f"v_{s}")
    into_e, into_i = -a * n["e"] * sympy.exp(q), b * n["i"]
    sinks = dict(zip("eid", (*laws.grain_sinks(n["d"], into_e, into_i, e), 0), strict=True))
    for s in "eid":
        laws.continuity(model, n[s], v[s], sinks[s])
        laws.momentum(model, n[s], v[s], mass=1, pressure=n[s])
    laws.grain_charge(model, q, v["d"], into_e, into_i)
    wave = model.linearize(assume=["n_e continuity", "n_i continuity", "q_d charging"]).plane_wave(
        "x"
    )
    at = {row.law: wave.matrix.row(i) for i, row in enumerate(wave.rows)}
    p, (k,) = wave.linear.symbols, wave.wave_symbols
    total = (
        -p["e"] * at["n_e continuity"]
        + p["e"] * at["n_i continuity"]
        + p["q_0"] * at["n_d continuity"]
        + p["n_d0"] * at["q_d charging"]
    )
    charge = {"n_e": -p["e"], "n_i": p["e"], "n_d": p["q_0"], "q_d": p["n_d0"]}
    flux = {"v_e": -p["e"] * p["n_e0"], "v_i": p["e"] * p["n_i0"], "v_d": p["q_0"] * p["n_d0"]}
    for j, column in enumerate(wave.columns):
        expected = -sympy.I * wave.omega * charge.get(column.field.name, 0)
        expected += sympy.I * k * flux.get(column.field.name, 0)
        if (
            column.field.name == "n_d"
        ):  # where the background charges its grains, new grains do so too
            expected += p["b"] * p["n_i0"] - p["a"] * p["n_e0"] * sympy.exp(p["q_0"])
        assert sympy.expand(total[j] - expected) == 0
