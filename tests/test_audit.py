"""The audit: an independent numerical path that passes what is right and names the row that is wrong."""

import ast
import dataclasses
import inspect
import itertools

import numpy as np
import pytest
import sympy

import plasmalin as plin
from plasmalin import (
    advect,
    components,
    cross,
    curl,
    ddot,
    div,
    dot,
    grad,
    identity,
    laplacian,
    multiplier,
    norm,
    outer,
    partial_t,
    trace,
    transpose,
)  # fmt: skip
from plasmalin.linearize import audit as audit_module
from plasmalin.linearize import evaluation, trial
from plasmalin.linearize.ledger import Ledger


def warm_electrons():
    model = plin.FluidModel("warm electrons", axes="x")
    e, eps0, m = model.constants("e epsilon_0 m_e")
    n0, t, gamma = model.parameters("n_0 T_e gamma_e", positive=True)
    n, v, phi = model.scalar("n_e", background=n0), model.vector("v_e"), model.scalar("phi")
    model.law("continuity", partial_t(n) + div(n * v))
    pressure = n0 * t * (n / n0) ** gamma
    inertia = m * n * (partial_t(v) + advect(v, v))
    model.law("momentum", inertia, e * n * grad(phi) - grad(pressure))
    model.law("Poisson", eps0 * laplacian(phi), e * (n - n0))
    return model.linearize()


def magnetohydrodynamics():
    model = plin.FluidModel("ideal MHD with a flow and an oblique field")
    rho0, p0, gamma, mu0 = model.parameters("rho_0 p_0 gamma mu_0", positive=True)
    rho, p = model.scalar("rho", background=rho0), model.scalar("p", background=p0)
    v, b = (
        model.vector("v", background=("u", 0, "w")),
        model.vector("B", background=("B_x", 0, "B_z")),
    )
    model.law("continuity", partial_t(rho) + div(rho * v))
    force = cross(curl(b), b) / mu0 - grad(p)
    model.law("momentum", rho * (partial_t(v) + advect(v, v)), force)
    model.law("induction", partial_t(b), curl(cross(v, b)))
    model.law("energy", partial_t(p / rho**gamma) + dot(v, grad(p / rho**gamma)))
    return model.linearize()


def relativistic_beam():
    model = plin.FluidModel("relativistic beam", axes="xz")
    e, m, c, eps0, n0 = model.parameters("e m c eps_0 n_0", positive=True)
    n, phi = model.scalar("n", background=n0), model.scalar("phi")
    v = model.vector("v", background=(0, "u"))
    momentum = m * v / sympy.sqrt(1 - dot(v, v) / c**2)
    model.law("continuity", partial_t(n) + div(n * v))
    model.law("momentum", partial_t(momentum) + advect(v, momentum), e * grad(phi))
    model.law("Poisson", eps0 * laplacian(phi), e * (n - n0))
    return model.linearize()


def quadratic_drag():
    """Drag as |v|v, and on another species by |v − V|, balanced by a uniform field: a condition on parameters."""
    model = plin.FluidModel("quadratic drag with a drift")
    a, b, n0 = model.parameters("a b n_0", positive=True)
    n = model.scalar("n", background=n0)
    v = model.vector("v", background=("u", 0, "w"))
    wind = model.vector_parameter("V", ("V_x", 0, "V_z"))
    field = model.vector_parameter("g", ("g_x", 0, "g_z"))
    drag = -a * norm(v) * v - b * n * norm(v - wind) * (v - wind)
    model.law("continuity", partial_t(n) + div(n * v))
    model.law("momentum", partial_t(v) + advect(v, v), drag + field)
    return model.linearize()


def bohm_potential():
    model = plin.FluidModel("quantum fluid")
    n0, h, t = model.parameters("n_0 h T", positive=True)
    n, v = model.scalar("n", background=n0), model.vector("v")
    root = sympy.sqrt(n)
    model.law("continuity", partial_t(n) + div(n * v))
    model.law(
        "momentum", partial_t(v) + advect(v, v), h * grad(laplacian(root) / root) - t * grad(n) / n
    )
    return model.linearize()


def pressure_tensor():
    model = plin.FluidModel("ten moments with a sheared tensor")
    n0 = model.parameter("n_0", positive=True)
    n, v = model.scalar("n", background=n0), model.vector("v", background=(0, "u", 0))
    rows = (("p_1", "s", 0), ("s", "p_1", 0), (0, 0, "p_2"))
    p = model.tensor("P", background=rows)
    flux = dot(p, grad(v))
    model.law("continuity", partial_t(n) + div(n * v))
    model.law("momentum", partial_t(n * v) + div(n * outer(v, v)) + div(p))
    model.law("pressure", partial_t(p) + advect(v, p) + p * div(v) + flux + transpose(flux))
    return model.linearize()


def tensor_algebra():
    """A tensor that is not symmetric, with every tensor word in a nonlinear place."""
    model = plin.FluidModel("tensor algebra", axes="xz")
    t = model.tensor("T", background=(("a", "b"), ("c", "d")), symmetric=False)
    v = model.vector("v", background=("u", "w"))
    model.law(
        "T",
        partial_t(t),
        transpose(t) * trace(t) + identity * ddot(t, t) + dot(t, t) + outer(v, dot(t, v)),
    )
    model.law("v", partial_t(v), dot(v, t) + components(dot(v, v), trace(t)) + div(t) * trace(t))
    return model.linearize(assume=["T", "v"])


def drifting_species():
    """Charge balance and a drag that balances a field: conditions that are not linear in the parameters."""
    model = plin.FluidModel("drifting species", axes="xz")
    e, eps0, nu = model.parameters("e eps_0 nu", positive=True)
    phi, charge = model.scalar("phi"), 0
    push = model.vector_parameter("E_0", (0, "E_z"))
    for name, number in (("e", -1), ("i", 1), ("d", -3)):
        m, t, n0 = model.parameters(f"m_{name} T_{name} n_{name}0", positive=True)
        n = model.scalar(f"n_{name}", background=n0)
        v = model.vector(f"v_{name}", background=(0, f"u_{name}"))
        model.law(f"{name} continuity", partial_t(n) + div(n * v))
        force = number * e * n * (push - grad(phi)) - t * grad(n) - nu * m * n * v
        model.law(f"{name} momentum", m * n * (partial_t(v) + advect(v, v)), force)
        charge += number * e * n
    model.law("Poisson", -eps0 * laplacian(phi), charge)
    return model.linearize()


def smooth_functions():
    model = plin.FluidModel("smooth functions", axes="x")
    n = model.scalar("n", background="n_0")
    s = model.scalar("s", background="s_0")
    model.law(
        "n",
        partial_t(n),
        laplacian(sympy.exp(-s) * sympy.log(n) + sympy.sin(s * n) + sympy.cosh(s) ** 2),
    )
    model.law(
        "s", partial_t(s), laplacian(sympy.tan(s / 4) + sympy.erf(n) + sympy.asinh(n * s) + n**s)
    )
    return model.linearize()


def closures():
    """Fourier multipliers: |k|, an inverse that has no mean, memory in time, and one that acts on a product."""
    model = plin.FluidModel("closures")
    n, t = model.scalar("n", background="n_0"), model.scalar("T", background="T_0")
    phi, tau = model.scalar("phi"), model.parameter("tau", positive=True)
    model.law("n", partial_t(n), -multiplier(n * t, plin.k_abs))
    model.law(
        "T",
        partial_t(t),
        multiplier(n * div(grad(phi)), 1 / plin.k_abs) + n * multiplier(phi, sympy.I * plin.k_y),
    )
    model.law(
        "phi",
        multiplier(phi, 1 / (1 - sympy.I * plin.omega * tau)),
        multiplier(n * t, plin.k_x**2 + plin.k_z**2),
    )
    return model.linearize()


def complex_envelope():
    model = plin.FluidModel("complex envelope", axes="x")
    psi, n = model.scalar("psi"), model.scalar("n", background="n_0")
    model.law("wave", "i*partial_t(psi) + laplacian(psi) = n*psi")
    model.law("plasma", partial_t(n), laplacian(n + psi**2))
    return model.linearize()


def high_derivatives():
    """Rounding of the background must not pass for a remainder: a linear law of sixth order."""
    model = plin.FluidModel("surface diffusion", axes="x")
    n = model.scalar("n", background="n_0")
    model.law("diffusion", partial_t(n), laplacian(laplacian(laplacian(n))))
    return model.linearize()


def electromagnetic_electrons():
    """Laws with the constraints that they preserve."""
    model = plin.FluidModel("electrons with Gauss's law")
    e, m, mu0, eps0 = model.parameters("e m mu_0 eps_0", positive=True)
    n, v = model.scalar("n", background="n_0"), model.vector("v")
    electric, magnetic = model.vector("E"), model.vector("B", background=(0, 0, "B_0"))
    model.law("continuity", partial_t(n) + div(n * v))
    force = -e * n * (electric + cross(v, magnetic))
    model.law("momentum", m * n * (partial_t(v) + advect(v, v)), force)
    model.law("Faraday", partial_t(magnetic), -curl(electric))
    rate = mu0 * eps0 * partial_t(electric)
    model.law("Ampere", curl(magnetic), rate - mu0 * e * n * v)
    model.constraint("Gauss", eps0 * div(electric), e * (model.symbols["n_0"] - n))
    model.constraint("no monopoles", div(magnetic))
    return model.linearize()


MODELS = (
    warm_electrons, magnetohydrodynamics, relativistic_beam, quadratic_drag, bohm_potential, pressure_tensor,
    tensor_algebra, drifting_species, smooth_functions, closures, complex_envelope, high_derivatives,
    electromagnetic_electrons,
)  # fmt: skip
every_model = pytest.mark.parametrize("build", MODELS, ids=lambda f: f.__name__)


def corrupted(linear, spoilt, factor):
    """The linearization with one kept piece of the ledger scaled."""
    wrong = dataclasses.replace(spoilt, value=factor * spoilt.value)
    pieces = [wrong if p is spoilt else p for p in linear.ledger]
    return dataclasses.replace(linear, ledger=Ledger(pieces, linear.axes))


@every_model
def test_right_linearizations_pass(build):
    linear = build()
    for seed in range(4):
        audit = linear.audit(seed=seed)
        assert audit.passed, str(audit)
        assert max(r.error for r in audit.rows) < 1e-9
        # The remainder is of second order: a part of order a of what is kept, a quarter at half of a.
        falls = np.array([r.fall for r in audit.rows])
        assert np.all(np.isnan(falls) | (falls > 3.9))
        assert max(r.remainder for r in audit.rows) < 200 * audit.amplitude


@every_model
def test_any_spoilt_piece_is_found_and_named(build):
    linear = build()
    factors = itertools.cycle((0, -1, 1 + sympy.Rational(1, 10**5)))
    for piece, factor in zip(linear.ledger.with_fate("kept"), factors, strict=False):
        audit = corrupted(linear, piece, factor).audit()
        assert {r.law for r in audit.rows if not r.passed} == {piece.law}, f"{piece}\n{audit}"


def test_constraints_have_rows():
    audit = electromagnetic_electrons().audit()
    assert [str(r) for r in audit.rows][-2:] == ["Gauss", "no monopoles"]
    assert "no monopoles" in str(audit)


def test_component_is_named():
    linear = magnetohydrodynamics()
    kept = [p for p in linear.ledger.of("momentum") if p.fate == "kept"]
    pressure = next(p for p in kept if str(p.value) == "-grad(~p)")
    wrong = Ledger(
        [
            dataclasses.replace(p, value=components(0, 0, dot(components(0, 0, 1), p.value)))
            if p is pressure
            else p
            for p in linear.ledger
        ],
        linear.axes,
    )
    audit = dataclasses.replace(linear, ledger=wrong).audit()
    failed = [(r.law, r.component) for r in audit.rows if not r.passed]
    assert failed == [("momentum", "x"), ("momentum", "y")]


def test_spoilt_row_has_a_first_order_remainder():
    linear = warm_electrons()
    piece = next(p for p in linear.ledger.of("continuity") if p.fate == "kept")
    row = corrupted(linear, piece, 2).audit().rows[0]
    assert row.law == "continuity"
    assert row.error > 1e-2
    assert row.fall == pytest.approx(2, abs=0.1)


@pytest.mark.parametrize("build", [quadratic_drag, drifting_species])
def test_parameters_satisfy_the_conditions(build):
    """Every law vanishes at zeroth order, because the random parameters were made to satisfy the conditions."""
    linear = build()
    assert linear.conditions
    assert all(r.zeroth < 1e-12 for r in linear.audit().rows)


def test_forgotten_condition_is_found():
    linear = drifting_species()
    balances = tuple(
        dataclasses.replace(b, residuals=()) if b.law == "Poisson" else b
        for b in linear.background.balances
    )
    background = type(linear.background)(balances, linear.fields, linear.axes)
    audit = dataclasses.replace(linear, background=background).audit()
    assert [r.law for r in audit.rows if not r.passed] == ["Poisson"]


def test_condition_without_a_solution_is_data():
    """Two laws that ask for different drifts have no background; the audit says so and raises nothing."""
    model = plin.FluidModel("impossible", axes="x")
    nu, _ = model.parameters("nu g_0", positive=True)
    g = model.vector_parameter("g", ("g_0",))
    v, w = model.vector("v", background=("u",)), model.vector("w", background=("u",))
    model.law("v", partial_t(v) + advect(w, v), g - nu * v)
    model.law("w", partial_t(w) + advect(v, w), 2 * g - nu * w)
    audit = model.linearize().audit()
    assert not audit.passed
    assert max(r.error for r in audit.rows) < 1e-9
    assert max(r.zeroth for r in audit.rows) > 1e-2


def test_assumed_laws_lose_their_zeroth_order():
    audit = tensor_algebra().audit()
    assert audit.passed
    assert all(np.isnan(r.zeroth) for r in audit.rows)
    assert "assumed" in str(audit)


def test_remainder_against_a_closed_form():
    """Continuity of a fluid at rest: what is dropped is div(n~ v~), known from the amplitudes alone."""
    linear = warm_electrons()
    random = np.random.default_rng(5)
    numbers, _ = trial.drawn(linear, [True], trial.balancing(linear), random, signed=True)
    n, v = numbers.amplitudes["n_e", ()], numbers.amplitudes["v_e", (0,)]
    a = 1e-3
    law = evaluation.Evaluation(linear, numbers, a).law(linear.laws["continuity"])
    phase, k, n0 = evaluation.PHASE, numbers.k[0], numbers.numbers[linear.symbols["n_0"]]
    kept = a * ((-1j * numbers.omega * n + 1j * k * n0 * v) * phase).real
    dropped = a**2 * (1j * k * n * v * phase**2).real
    assert np.allclose(law, kept + dropped, rtol=0, atol=1e-15)


def test_component_without_first_order_passes():
    model = plin.FluidModel("one component of second order", axes="xz")
    n, s, v = model.scalar("n"), model.scalar("s"), model.vector("v")
    model.law("v", partial_t(v), -grad(n))
    model.law("pair", components(n * s, partial_t(n) + div(v) + s))
    linear = model.linearize()
    audit = linear.audit()
    assert audit.passed, str(audit)
    rows = {(r.law, r.component): r for r in audit.rows}
    assert rows["pair", "x"].fall == pytest.approx(4)


def test_same_seed_same_audit_and_seeds_differ():
    linear = quadratic_drag()
    assert linear.audit(seed=3) == linear.audit(seed=3)
    assert linear.audit(seed=3).rows[0].remainder != linear.audit(seed=4).rows[0].remainder


def test_table():
    linear = magnetohydrodynamics()
    text = str(linear.audit(seed=1))
    assert text.startswith("Audit with seed 1: passed")
    assert "induction, z" in text
    piece = next(p for p in linear.ledger.of("energy") if p.fate == "kept")
    failed = corrupted(linear, piece, 0).audit()
    marked = [line for line in str(failed).splitlines() if line.endswith("<- differs")]
    assert len(marked) == 1
    assert marked[0].startswith("energy")
    assert "FAILED" in failed._repr_html_()
    assert "&lt;- differs" in failed._repr_html_()


def test_audit_shares_no_code_with_the_symbolic_path():
    ours = {"evaluation", "exchange", "linearized", "trial"}
    declared = {"declare.fields", "declare.law", "declare.operators", "errors"}
    imported = {
        node.module
        for module in (audit_module, evaluation, trial)
        for node in ast.walk(ast.parse(inspect.getsource(module)))
        if isinstance(node, ast.ImportFrom) and node.level
    }
    assert imported == ours | declared
