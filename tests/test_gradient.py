"""Local gradients of the background, against published drift waves and the stratified gas."""

import dataclasses

import numpy as np
import pytest
import sympy
from published import read

import plasmalin as plin
from plasmalin import advect, cross, curl, div, dot, grad, laplacian, laws, partial_t
from plasmalin.linearize.ledger import Ledger


def drift_wave():
    """Hasegawa and Mima (1978) in density, with gradient= instead of a constant vector."""
    model = plin.FluidModel("drift wave")
    e, mi, b0, te, length, n0 = model.parameters("e mi B0 Te_eV Ln n0", positive=True)
    n = model.scalar("n", background=n0, gradient=(-n0 / length, 0, 0))
    phi = model.scalar("phi")
    drift = cross(plin.components(0, 0, 1), grad(phi)) / b0
    polarization = -mi / (e * b0**2) * (partial_t(grad(phi)) + advect(drift, grad(phi)))
    model.law("ion continuity", partial_t(n) + advect(drift, n) + n0 * div(polarization))
    model.law("Boltzmann electrons", n - n0 * phi / te, n0)
    return model


def test_drift_wave_from_a_gradient():
    """The roots of the published case (source in its file, from memory)."""
    case = read("drift-wave-hasegawa-mima")
    linear = drift_wave().linearize()
    wave = linear.plane_wave(("kx", "ky", 0))
    for point in case["points"]:
        found = wave.roots({**case["parameters"], "n0": 1e19}, kx=point["kx"], ky=point["ky"]).omega
        assert np.allclose(found, point["omega_re"], rtol=1e-12)


def test_gradient_terms_have_their_own_fate():
    ledger = drift_wave().linearize().ledger
    kept = [p for p in ledger if p.reason == "background gradient, O(1/kL)"]
    assert len(kept) == 1
    assert "kept: background gradient, O(1/kL)" in str(ledger)


def product_rules():
    """Every operator on a product of backgrounds that change along two axes."""
    model = plin.FluidModel("product rules")
    a = model.scalar("a", background="a_0", gradient=("a_1", "a_2", 0))
    s, t = model.scalar("s"), model.scalar("t")
    v = model.vector("v", background=(0, "u", 0), gradient=((0, "w", 0), (0, 0, 0), (0, 0, 0)))
    r = model.vector("r")
    model.law("s", partial_t(s), laplacian(a**2 * s) + div(a * r) + dot(v, grad(a * s)))
    model.law("t", partial_t(t), dot(grad(a), grad(s)) + div(s * v) + a * laplacian(a) * t)
    model.law("r", partial_t(r), grad(a * s) + curl(a * r) + advect(r, v) + curl(s * v))
    model.law("a", partial_t(a), t)
    model.law("v", partial_t(v), r)
    return model.linearize(assume=["s", "t", "r"])


def test_product_rules():
    """Against SymPy's own derivatives of the affine background."""
    x, y, z = sympy.symbols("x y z")
    linear = product_rules()
    wave = linear.plane_wave(("k_x", 0, "k_z"))
    kx, kz = wave.wave_symbols
    p = linear.symbols
    n = p["a_0"] + p["a_1"] * x + p["a_2"] * y
    flow = sympy.Matrix([0, p["u"] + p["w"] * x, 0])
    phase = sympy.exp(sympy.I * (kx * x + kz * z))
    place = {c.symbol.name: j for j, c in enumerate(wave.columns)}
    row = {str(name): i for i, name in enumerate(wave.rows)}

    def at_origin(f):
        return sympy.simplify((f / phase).subs({x: 0, y: 0, z: 0}))

    def gradient(f):
        return sympy.Matrix([f.diff(q) for q in (x, y, z)])

    def lap(f):
        return sum(f.diff(q, 2) for q in (x, y, z))

    def entry(law, unknown):
        return -wave.matrix[row[law], place[unknown]].subs(wave.omega, 0)

    expected = at_origin(lap(n**2 * phase) + flow.dot(gradient(n * phase)))
    assert sympy.expand(entry("s", "s") - expected) == 0
    assert sympy.expand(entry("s", "r_y") - at_origin((n * phase).diff(y))) == 0
    expected = at_origin(
        gradient(n).dot(gradient(phase))
        + sum((phase * flow[i]).diff(q) for i, q in enumerate((x, y, z)))
    )
    assert sympy.expand(entry("t", "s") - expected) == 0
    assert (
        sympy.expand(
            entry("r, y", "r_x") - at_origin((n * phase).diff(z) + phase * flow[1].diff(x))
        )
        == 0
    )
    assert sympy.expand(entry("r, z", "r_x") - at_origin(-(n * phase).diff(y))) == 0
    assert (
        sympy.expand(
            entry("r, z", "s") - at_origin((n * phase).diff(z) + (phase * flow[1]).diff(x))
        )
        == 0
    )


def test_flow_that_changes_along_k_is_refused():
    model = plin.FluidModel("shear flow")
    rho, v = (
        model.scalar("rho", background="rho_0"),
        model.vector("v", background=(0, "u", 0), gradient=((0, "s", 0), (0, 0, 0), (0, 0, 0))),
    )
    laws.continuity(model, rho, v)
    laws.momentum(model, rho, v, mass=1, pressure=rho)
    linear = model.linearize()
    assert linear.plane_wave(("k_x", 0, "k_z")).relation.degree > 0
    with pytest.raises(plin.BackgroundError, match="flow 'v' along k changes with position"):
        linear.plane_wave("y")


def stratified(logarithmic):
    """An isothermal gas in gravity −g z, density ~ exp(−z/H), H = T/(m g)."""
    model = plin.FluidModel("stratified gas", axes="z")
    c, h, gamma = model.parameters("c H gamma", positive=True)
    g = plin.components(-(c**2) / (gamma * h))
    v = model.vector("v")
    if logarithmic:
        rho = model.scalar("lnrho", background=0, gradient=(-1 / h,))
        p = model.scalar("lnp", background=0, gradient=(-1 / h,))
        model.law("continuity", partial_t(rho) + advect(v, rho) + div(v))
        model.law(
            "momentum",
            partial_t(v) + advect(v, v),
            -(c**2 / gamma) * sympy.exp(p - rho) * grad(p) + g,
        )
        model.law("pressure", partial_t(p) + advect(v, p) + gamma * div(v))
    else:
        rho0 = model.parameter("rho_0", positive=True)
        p0 = rho0 * c**2 / gamma
        rho = model.scalar("rho", background=rho0, gradient=(-rho0 / h,))
        p = model.scalar("p", background=p0, gradient=(-p0 / h,))
        laws.continuity(model, rho, v)
        laws.momentum(model, rho, v, mass=1, pressure=p, force=rho * g)
        laws.adiabatic_pressure(model, p, v, gamma)
    return model.linearize()


def test_stratified_gas_with_logarithmic_fields():
    """H. Lamb (1909), Proc. Lond. Math. Soc. 7, 122: with k = κ − i/2H (a velocity ~ exp(z/2H)) omega² = c² (κ² + 1/4H²), exactly."""
    wave = stratified(True).plane_wave("z")
    c, h, kappa = 340.0, 8000.0, 3e-4
    roots = wave.roots({"c": c, "H": h, "gamma": 1.4}, k=kappa - 0.5j / h)
    expected = c * np.sqrt(kappa**2 + 1 / (4 * h**2))
    assert np.allclose(roots.omega, [-expected, expected], rtol=1e-12)


def test_chosen_variables_matter_at_that_order():
    """Plain density and pressure give the same relation only up to terms of order 1/(kL)²."""
    wave = stratified(False).plane_wave("z")
    values = {"c": 340.0, "H": 8000.0, "gamma": 1.4, "rho_0": 1.2}
    for kappa in (1e-2, 1e-1):
        expected = 340.0 * kappa
        roots = wave.roots(values, k=kappa).omega
        error = abs(roots[-1] - expected) / expected
        assert 0 < error < 1.0 / (kappa * 8000.0)


def curved():
    """Smooth functions of backgrounds that change along two axes, and of a flow that changes across itself."""
    model = plin.FluidModel("curved", axes="xz")
    n = model.scalar("n", background="n_0", gradient=("a", "b"))
    v = model.vector("v", background=(0, "w"), gradient=((0, "s"), (0, 0)))
    model.parameters("n_0", positive=True)
    model.law("n", partial_t(n), laplacian(sympy.exp(-n) + sympy.sqrt(n)) + div(n**3 * v))
    model.law("v", partial_t(v), advect(v, v) + grad(laplacian(n**2)) / n + plin.norm(v) * v)
    return model.linearize(assume=["n", "v"])


LOCAL = {
    "drift wave": lambda: drift_wave().linearize(),
    "stratified": lambda: stratified(False),
    "logarithmic": lambda: stratified(True),
    "product rules": product_rules,
    "curved": curved,
}


@pytest.mark.parametrize("build", LOCAL.values(), ids=list(LOCAL))
def test_right_linearizations_pass_the_audit(build):
    for seed in range(2):
        audit = build().audit(seed=seed)
        assert audit.passed, str(audit)


@pytest.mark.parametrize("build", LOCAL.values(), ids=list(LOCAL))
def test_the_audit_finds_a_spoilt_gradient(build):
    linear = build()
    local = [p for p in linear.ledger if p.reason == "background gradient, O(1/kL)"]
    assert local
    for piece in local:
        wrong = dataclasses.replace(piece, value=sympy.Rational(1001, 1000) * piece.value)
        pieces = [wrong if p is piece else p for p in linear.ledger]
        audit = dataclasses.replace(linear, ledger=Ledger(pieces, linear.axes)).audit()
        assert {r.law for r in audit.rows if not r.passed} == {piece.law}, f"{piece}\n{audit}"


def test_no_audit_where_there_is_no_plane_wave():
    model = plin.FluidModel("flow that widens", axes="z")
    n, v = model.scalar("n", background="n_0"), model.vector("v", gradient=(("s",),))
    laws.continuity(model, n, v)
    model.law("v", partial_t(v) + advect(v, v), -grad(n))
    with pytest.raises(plin.BackgroundError, match="flow 'v' along k changes with position"):
        model.linearize(assume=["n continuity", "v"]).audit()
