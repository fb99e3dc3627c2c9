"""What the documentation of the interface promises word for word: names, places and forms of arguments, what prints."""

import numpy as np
import pytest
import sympy

import plasmalin as plin
from plasmalin import advect, div, dot, grad, laplacian, partial_t
from plasmalin.cli import main


def test_arguments_by_place():
    model = plin.FluidModel("plane", "xz")
    n = model.scalar("n", "n_0", None, "m**-3", "N")
    v = model.vector("v", 0, None, "m/s", "V")
    t = model.parameter("T", True, "eV", 2.0)
    assert (n.latex_name, v.latex_name) == ("N", "V")
    assert t.is_positive
    assert model.values == {"T": 2.0}
    assert {name: u.text for name, u in model.units.items()} == {
        "n": "m**-3",
        "n_0": "m**-3",
        "v": "m/s",
        "T": "eV",
    }


def test_no_gradient():
    model = plin.FluidModel("line", axes="x")
    assert model.scalar("n", background="n_0", gradient=None).gradient == 0
    assert model.vector("v", background=np.array([2.0]), gradient=None).background.args == (2,)


def sound(axes="xz"):
    model = plin.FluidModel("sound", axes=axes)
    rho, v = model.scalar("rho", background="rho_0"), model.vector("v")
    c = model.parameter("c", positive=True)
    model.law("continuity", sympy.Eq(partial_t(rho) + div(rho * v), 0))
    model.law("momentum", sympy.Eq(rho * (partial_t(v) + advect(v, v)), -(c**2) * grad(rho)))
    return model


def test_a_law_as_an_equation():
    assert str(sound().laws["momentum"]) == "rho*(partial_t(v) + advect(v, v)) = -c**2*grad(rho)"


def test_one_law_assumed_by_its_name():
    model = plin.FluidModel("held", axes="x")
    n = model.scalar("n", "n_0")
    model.law("growth", partial_t(n), model.parameter("a", positive=True) * n)
    wave = model.linearize(assume="growth").plane_wave("x")
    assert str(wave.relation) == "ω − i a = 0"


@pytest.mark.parametrize("angle", [0.3, sympy.pi / 3, "theta"])
def test_an_angle_by_name_or_value(angle):
    relation = sound().linearize().plane_wave(angle=angle).relation
    assert str(relation).startswith("ω² − c² k² = 0")


def test_symbols_of_a_wave_vector_are_known_by_name():
    k, a = sympy.symbols("k alpha")
    wave = sound().linearize().plane_wave(("k*cos(alpha)", k * sympy.sin(a)))
    assert str(wave.relation).startswith("ω² − c² k² = 0")
    assert [s.name for s in wave.wave_symbols] == ["alpha", "k"]


def test_every_stage_prints_and_shows_in_a_notebook():
    model = sound("x")
    linear = model.linearize()
    wave = linear.plane_wave("x")
    assert "  momentum: ρ (∂_t v + (v·∇)v) = −c² ∇ρ" in str(model)
    assert str(wave.reduce("rho")).startswith("continuity: [")
    assert repr(wave.relation.factors) == "(<Factor: ω − c k = 0>, <Factor: ω + c k = 0>)"
    assert wave.relation.latex() == r"\left(\omega - c k\right) \left(\omega + c k\right) = 0"
    assert r"\partial_t" in model._repr_html_()
    assert "Background" in linear.background._repr_html_()
    assert r"\omega - c k = 0" in wave.relation.factors[0]._repr_latex_()
    assert model.laws["momentum"]._repr_latex_().startswith(r"$\displaystyle")


def test_a_susceptibility_in_lowest_terms():
    model = plin.FluidModel("electrons", axes="x")
    n, v, phi = model.scalar("n_e", "n_0"), model.vector("v_e"), model.scalar("phi")
    q, m, t, eps = model.parameters("q m T epsilon", positive=True)
    plin.laws.continuity(model, n, v)
    force = plin.laws.lorentz_force(n, q, potential=phi)
    plin.laws.momentum(model, n, v, mass=m, force=force, pressure=n * t)
    plin.laws.poisson(model, phi, q * (n - model.symbols["n_0"]), epsilon_0=eps)
    (entry,) = model.linearize().plane_wave("x").susceptibility("e").matrix
    assert sympy.count_ops(entry) < 16
    k, omega = sympy.Symbol("k", real=True), plin.omega
    n0 = model.symbols["n_0"]
    assert sympy.simplify(entry + q**2 * k**2 * n0 / (m * omega**2 - t * k**2)) == 0


def test_paper_order_of_numbers():
    model = plin.FluidModel("order", axes="xy")
    g, gamma = model.parameters("G gamma", positive=True)
    n = model.scalar("n", "n_0")
    turned = dot(plin.components((0, -1), (1, 0)), model.vector("v"))
    law = model.law("a", partial_t(n) - 4 * sympy.pi * g * (gamma - 1) * n + div(turned))
    assert law.paper() == "∂_t n − 4 π G (γ − 1) n + ∇·([0, −1; 1, 0]·v) = 0"
    memory = plin.multiplier(n, plin.k_abs)
    assert model.law("b", partial_t(n) + memory).paper() == "∂_t n + [|k|]n = 0"


FILE = """
[model]
title = "warm electrons"
axes = "x"

[[scalar]]
name = "n_e"
background = "n_0"
gradient = ["n_0/L"]

[[scalar]]
name = "phi"

[[vector]]
name = "v_e"

[parameters]
n_0 = 2e15
T_e = { value = 2.0, unit = "eV" }

[[law]]
name = "electron continuity"
text = "partial_t(n_e) + div(n_e*v_e) = 0"

[[law]]
name = "electron momentum"
text = "m_e*n_e*(partial_t(v_e) + advect(v_e, v_e)) = e*n_e*grad(phi) - 3*T_e*grad(n_e - n_0)"

[[law]]
name = "Poisson"
text = "epsilon_0*laplacian(phi) = e*(n_e - n_0)"
"""


def test_a_file_knows_constants_of_nature_and_gradients(tmp_path):
    (tmp_path / "a.toml").write_text(FILE, encoding="utf-8")
    model = plin.load(tmp_path / "a.toml")
    assert model.values["m_e"] == plin.constants.m_e
    assert set(model.symbols) == {"e", "epsilon_0", "m_e", "n_0", "T_e", "L"}
    assert (model.values["T_e"], model.units["T_e"].text) == (2.0, "eV")
    assert str(model.fields["n_e"].gradient) == "components(n_0/L)"
    model.save(tmp_path / "b.toml")
    assert str(plin.load(tmp_path / "b.toml").fields["n_e"].gradient) == "components(n_0/L)"


def test_letters_that_mean_other_things_are_no_constants(tmp_path):
    text = FILE.replace("3*T_e", "u*T_e")
    (tmp_path / "a.toml").write_text(text, encoding="utf-8")
    with pytest.raises(plin.ModelFileError, match="'u' is not declared"):
        plin.load(tmp_path / "a.toml")


def test_a_sweep_at_an_angle(tmp_path, capsys):
    model = plin.FluidModel("sound", axes="xz")
    rho, v = model.scalar("rho", background="rho_0"), model.vector("v")
    c = model.parameter("c", positive=True, value=340.0)
    model.parameter("rho_0", positive=True, value=1.2, unit="kg/m**3")
    plin.laws.continuity(model, rho, v)
    plin.laws.momentum(model, rho, v, mass=1, pressure=c**2 * rho)
    file = tmp_path / "sound.toml"
    model.save(file)
    text = file.read_text(encoding="utf-8")
    sweep = "[sweep]\nk = { from = 1.0, to = 2.0, points = 3 }\n"
    for wave in ('angle = "theta"\ntheta = 0.4', "angle = 0.4", 'direction = ["k", "q"]\nq = 0.5'):
        file.write_text(f"{text}\n[wave]\n{wave}\n{sweep}", encoding="utf-8")
        assert main(["derive", str(file), "--out", str(tmp_path / "out")]) == 0
    assert "1.2 kg/m**3" in (tmp_path / "out" / "derivation.md").read_text(encoding="utf-8")
    for wave, says in (('angle = "theta"', "no value for theta"), ('angel = "theta"', "'angle'?")):
        file.write_text(f"{text}\n[wave]\n{wave}\n{sweep}", encoding="utf-8")
        assert main(["derive", str(file)]) == 1
        assert says in capsys.readouterr().err


def test_a_scale_that_holds_a_charge_number():
    """The friction of dust in units of the dust plasma frequency, Z_d in it, is one group; nothing is approximated."""
    model = plin.FluidModel("dust", axes="x")
    e, eps0 = model.constants("e epsilon_0")
    n0, m = model.parameter("n_d0", True, "m**-3"), model.parameter("m_d", True, "kg")
    z, nu = model.parameter("Z_d", True, "1"), model.parameter("nu", True, "1/s")
    lam = model.parameter("lambda_D", True, "m")
    n, v = model.scalar("n_d", n0, unit="m**-3"), model.vector("v_d", unit="m/s")
    phi = model.scalar("phi", unit="V")
    plin.laws.continuity(model, n, v)
    force = plin.laws.lorentz_force(n, -z * e, potential=phi)
    force += plin.laws.neutral_friction(n, v, m, nu)
    plin.laws.momentum(model, n, v, mass=m, force=force)
    model.law("Poisson", eps0 * laplacian(phi), eps0 * phi / lam**2 + z * e * (n - n0))
    relation = model.linearize().plane_wave("x").relation
    where = {"omega_pd": "sqrt(n_d0*Z_d^2*e^2/(epsilon_0*m_d))"}
    scaled = relation.normalise(time="1/omega_pd", length="lambda_D", where=where)
    (group,) = (g for name, g in scaled.groups.items() if name.name == "nuhat")
    assert sympy.simplify(group - nu * sympy.sqrt(eps0 * m / n0) / (z * e)) == 0
    made = sympy.Poly(scaled.restore(), plin.omega).monic()
    assert sympy.simplify((made - relation.polynomial.monic()).as_expr()) == 0
