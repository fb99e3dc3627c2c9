"""Roots: accuracy against independent arithmetic, statuses, values, and physical invariances."""

import itertools
from fractions import Fraction

import mpmath
import numpy as np
import pytest
import sympy
from hypothesis import given, settings
from hypothesis import strategies as st
from published import CASES, read

import plasmalin as plin
from plasmalin import advect, cross, curl, div, grad, laplacian, partial_t
from plasmalin.exact.determinant import determinant

E, ME, MP = plin.constants.e, plin.constants.m_e, plin.constants.m_p


def species_laws(model, name, mass, charge, u, force, gamma=3):
    """One warm species with symbols of its own; returns density and velocity."""
    n0, t = model.parameters(f"n_{name}0 T_{name}", positive=True)
    n = model.scalar(f"n_{name}", background=n0)
    v = model.vector(f"v_{name}", background=u)
    model.law(f"{name} continuity", partial_t(n) + div(n * v))
    inertia = mass * n * (partial_t(v) + advect(v, v))
    model.law(f"{name} momentum", inertia, charge * n * force(v) - grad(n0 * t * (n / n0) ** gamma))
    return n, v


def electrostatic(drift="u"):
    model = plin.FluidModel("two drifting warm species", axes="x")
    e, eps0, me, mp = model.constants("e epsilon_0 m_e m_p")
    u = model.parameter(drift)
    w = model.parameter("w")
    phi = model.scalar("phi")
    ne, _ = species_laws(model, "e", me, -e, (u + w,), lambda v: -grad(phi))
    ni, _ = species_laws(model, "i", mp, e, (w,), lambda v: -grad(phi))
    model.law("Poisson", eps0 * laplacian(phi), e * (ne - ni))
    return model


SI = {"n_e0": 1e16, "T_e": 2 * E, "T_i": 0.05 * E, "u": 2e5, "w": 0.0}


@pytest.fixture(scope="module")
def beam():
    return electrostatic().linearize().plane_wave("x")


def reference_roots(wave, values, k, digits=60):
    """Roots of SymPy's own determinant with exact rationals, by mpmath: no code of ours."""
    exact = {s: sympy.Rational(Fraction(values[s.name])) for s in wave.linear.symbols.values()}
    exact[wave.wave_symbols[0]] = sympy.Rational(Fraction(k))
    matrix = wave.matrix.subs(exact)
    p = sympy.Poly(sympy.expand(matrix.det(method="berkowitz")), wave.omega)
    with mpmath.workdps(digits):
        coefficients = [mpmath.mpmathify(sympy.N(c, digits)) for c in p.all_coeffs()]
        scale = mpmath.mpf(10) ** 9
        scaled = [c * scale ** (len(coefficients) - 1 - i) for i, c in enumerate(coefficients)]
        roots = mpmath.polyroots(scaled, maxsteps=2000, extraprec=2000)
        return [complex(z * scale) for z in roots]


def assert_same(found, expected, tolerance):
    left = list(np.asarray(found))
    assert len(left) == len(expected)
    for z in expected:
        nearest = min(left, key=lambda x: abs(x - z))
        assert abs(nearest - z) <= tolerance * abs(z)
        left.remove(nearest)


@pytest.mark.parametrize("k", [1.0, 1e2, 1e4, 1e6])
def test_accuracy_in_si_units(beam, k):
    values = {**beam.linear.defaults, **SI, "n_i0": 1e16}
    roots = beam.roots(values, k=k)
    assert_same(roots, reference_roots(beam, values, k), 1e-14)
    assert (roots.radius <= 1e-15 * np.abs(roots.omega)).all()


def test_forty_decades():
    """Roots from 1e-22 to 1e18 rad/s out of one matrix, against their closed forms."""
    model = plin.FluidModel("decades", axes="x")
    rates = 10.0 ** np.arange(-22, 19, 4)
    for i, rate in enumerate(rates):
        f = model.scalar(f"f_{i}")
        model.parameter(f"r_{i}", value=float(rate))
        previous = model.fields[f"f_{i - 1}"] if i else 0
        model.law(f"L_{i}", partial_t(f), grad(f) * 0 - model.symbols[f"r_{i}"] * f + previous)
    roots = model.linearize().plane_wave("x").roots()
    assert np.allclose(np.sort(-roots.imag), rates, rtol=1e-15, atol=0)
    assert (roots.real == 0).all()


def test_conservative_roots_are_exactly_real(beam):
    roots = beam.roots({**SI, "u": 0.0}, k=np.geomspace(1, 1e6, 30))
    assert (roots.imag == 0).all()
    assert (roots.status == "certified").all()


def test_roots_behave_as_an_array(beam):
    k = np.array([[1e3, 2e3, 3e3]])
    roots = beam.roots({**SI, "T_e": np.array([[E], [2 * E]])}, k=k)
    assert roots.shape == (2, 3, 4)
    assert roots.size == 24
    assert roots.ndim == 3
    assert np.asarray(roots).dtype == np.complex128
    assert (np.diff(roots.real, axis=-1) >= 0).all()
    assert np.allclose(roots * 2, 2 * roots.omega)
    assert np.array_equal(roots[0, 1], beam.roots({**SI, "T_e": E}, k=2e3).omega)
    assert len(list(roots)) == len(roots) == 2
    assert roots.require() is roots


def test_polynomial_order_does_not_matter(beam):
    """Sweeping k or T_e or both gives bit-identical roots."""
    k, t = np.array([1e2, 1e3]), np.array([E, 3 * E])
    both = beam.roots({**SI, "T_e": t[:, None]}, k=k).omega
    for (i, a), (j, b) in itertools.product(enumerate(t), enumerate(k)):
        assert np.array_equal(both[i, j], beam.roots({**SI, "T_e": a}, k=b).omega)


def test_missing_density_follows_from_neutrality(beam):
    given = beam.roots({**SI, "n_i0": 1e16}, k=1e3).omega
    assert np.array_equal(beam.roots(SI, k=1e3).omega, given)


def test_statuses_at_special_points():
    model = plin.FluidModel("special points", axes="x")
    a, b = model.scalar("a"), model.scalar("b")
    r, m = model.parameters("r m")
    model.law("a", partial_t(a), -r * a)
    model.law("b", m * partial_t(b), -b)
    wave = model.linearize().plane_wave("x")
    roots = wave.roots({"r": [0.0, 1.0, 1.0, np.nan], "m": [1.0, 1.0, 0.0, 1.0]})
    assert wave.relation.degree == 2
    assert sorted(roots.status[0]) == ["certified", "zero"]
    assert set(roots.status[1]) == {"certified"}
    assert sorted(roots.status[2]) == ["at infinity", "certified"]
    assert set(roots.status[3]) == {"masked"}
    with pytest.raises(plin.ValuesError, match=r"index \(3, 0\) is 'masked'"):
        roots.require()
    assert wave.roots({"r": 0.0, "m": 1.0}).status.tolist() == ["certified", "zero"]
    assert wave.roots({"r": 1.0, "m": 0.0}).status.tolist() == ["certified", "at infinity"]


def test_zero_modes_on_request():
    wave = CASES["upper-hybrid-warm"]()
    values = read("upper-hybrid-warm")["parameters"]
    assert wave.relation.zero_modes == 2
    assert wave.roots(values, kx=10.0).shape == (2,)
    everything = wave.roots(values, kx=10.0, zero_modes=True)
    assert everything.shape == (4,)
    assert (np.asarray(everything) == 0).sum() == 2


def test_complex_wave_numbers(beam):
    k = 1e3 * (1 + 0.1j)
    roots = beam.roots(SI, k=k)
    matrix = beam.matrix.subs(
        {beam.linear.symbols[n]: v for n, v in {**beam.linear.defaults, **SI, "n_i0": 1e16}.items()}
    )
    for z in roots:
        det = [
            complex(sympy.N(matrix.subs({beam.wave_symbols[0]: k, beam.omega: x}).det(), 30))
            for x in (z, 1.001 * z)
        ]
        assert abs(det[0]) < 1e-9 * abs(det[1])


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"T_x": 1.0}, r"'T_x' is not a parameter.*did you mean T_[ei] or T_[ei]"),
        ({"T_e": np.nan}, "'T_e' = nan is not finite"),
        ({"T_e": "hot"}, "is not a number"),
        ({"T_e": 1j}, "real parameter but its value is complex"),
        ({"T_e": -1.0}, "declared positive but its value is -1"),
        ({"T_e": np.ones((2, 3))}, "do not broadcast"),
        ({"k": 3.0}, "k given twice"),
    ],
)
def test_values_that_are_refused(beam, change, message):
    with pytest.raises(plin.ValuesError, match=message):
        beam.roots({**SI, **change}, k=np.array([1.0, 2.0]))


def test_missing_values_are_named(beam):
    with pytest.raises(plin.ValuesError, match="no value for T_e, k"):
        beam.roots({n: v for n, v in SI.items() if n != "T_e"})
    with pytest.raises(plin.ValuesError, match="must be a mapping"):
        beam.roots([1.0], k=1.0)


def test_breach_of_neutrality_is_measured(beam):
    with pytest.raises(
        plin.BackgroundError,
        match=r"law 'Poisson' leaves .* \(3 % of its largest term\); change one of n_[ei]0, n_[ei]0",
    ):
        beam.roots({**SI, "n_i0": 0.97e16}, k=1.0)


def test_singular_for_these_values():
    model = plin.FluidModel("vanishing", axes="x")
    n, m = model.scalar("n"), model.parameter("m")
    model.law("L", m * partial_t(n), m * laplacian(n))
    wave = model.linearize().plane_wave("x")
    with pytest.raises(plin.UndeterminedError, match="for these values the determinant vanishes"):
        wave.roots({"m": 0.0}, k=1.0)


# Constraints of any index, against closed forms -----------------------------------------------------


def test_quasi_neutral_pair_with_multiplier():
    """No Poisson law: the potential is a multiplier of the constraint n_e = n_i (index 3)."""
    model = plin.FluidModel("quasi-neutral", axes="x")
    e, me, mi = model.parameters("e m_e m_i", positive=True)
    phi = model.scalar("phi")
    ne, _ = species_laws(model, "e", me, -e, 0, lambda v: -grad(phi), gamma=1)
    ni, _ = species_laws(model, "i", mi, e, 0, lambda v: -grad(phi), gamma=1)
    model.law("neutrality", ne - ni)
    roots = (
        model.linearize()
        .plane_wave("x")
        .roots({"e": E, "m_e": ME, "m_i": MP, "n_e0": 1e18, "T_e": 5 * E, "T_i": E}, k=10.0)
    )
    speed = np.sqrt(6 * E / (ME + MP))
    assert np.allclose(roots.omega, [-10 * speed, 10 * speed], rtol=1e-14)


def test_incompressible_magnetized_fluid():
    """Pressure as multiplier of div v = 0 (index 2): two shear Alfven pairs, H. Alfven (1942)."""
    model = plin.FluidModel("incompressible")
    v, b, p = model.vector("v"), model.vector("B", background=(0, 0, "B_0")), model.scalar("p")
    rho, mu0 = model.parameters("rho mu_0", positive=True)
    model.law("momentum", rho * (partial_t(v) + advect(v, v)), -grad(p) + cross(curl(b), b) / mu0)
    model.law("induction", partial_t(b), curl(cross(v, b)))
    model.law("incompressible", div(v))
    wave = model.linearize().plane_wave(("k_x", 0, "k_z"))
    roots = wave.roots({"rho": 1e-12, "mu_0": 1.25e-6, "B_0": 1e-3}, k_x=1e-5, k_z=3e-5)
    alfven = 3e-5 * 1e-3 / np.sqrt(1e-12 * 1.25e-6)
    assert np.allclose(roots.omega, [-alfven, -alfven, alfven, alfven], rtol=1e-14)


def test_second_time_derivative():
    """Klein-Gordon form: omega² = c² k² + m², typed with partial_t twice."""
    model = plin.FluidModel("second order", axes="x")
    f, (c, m) = model.scalar("f"), model.parameters("c m", positive=True)
    model.law("wave", partial_t(partial_t(f)), c**2 * laplacian(f) - m**2 * f)
    roots = model.linearize().plane_wave("x").roots({"c": 3.0, "m": 4.0}, k=1.0)
    assert np.array_equal(roots.omega, [-5.0, 5.0])


# Invariances -----------------------------------------------------------------------------------------


@settings(max_examples=15, deadline=None)
@given(st.permutations(range(5)), st.sampled_from([-3, sympy.Rational(1, 7), 10**9]))
def test_order_and_scale_of_laws_do_not_matter(order, factor):
    model = electrostatic()
    laws = list(model.laws.values())
    shuffled = plin.FluidModel("shuffled", axes="x")
    for name, symbol in model.symbols.items():
        shuffled.parameter(name, positive=bool(symbol.is_positive), value=model.values.get(name))
    for f in model.fields.values():
        background = f.background.args if f.rank and f.background != 0 else f.background
        (shuffled.vector if f.rank else shuffled.scalar)(f.name, background=background)
    for i in order:
        shuffled.law(laws[i].name, factor * laws[i].lhs, factor * laws[i].rhs)
    waves = [m.linearize().plane_wave("x") for m in (model, shuffled)]
    first, second = (w.relation.as_expr() for w in waves)
    assert sympy.expand(first - second) == 0
    assert np.array_equal(*(w.roots(SI, k=1e3).omega for w in waves))


def test_names_do_not_matter(beam):
    """Field and parameter names that sort otherwise give the same bits."""
    names = {
        "e": "zeta",
        "epsilon_0": "a",
        "m_e": "N",
        "m_p": "S",
        "T_e": "beta",
        "n_e0": "q",
        "T_i": "I",
        "u": "E",
        "w": "gamma",
        "n_i0": "c",
    }
    text = {
        str(s): sympy.Symbol(names[str(s)], positive=s.is_positive, real=True)
        for s in beam.linear.symbols.values()
    }
    entries = {
        ij: c.subs({s: text[s.name] for s in beam.linear.symbols.values()}, simultaneous=True)
        for ij, c in beam.entries.items()
    }
    values = {**beam.linear.defaults, **SI, "n_i0": SI["n_e0"]}
    exact = {text[n]: Fraction(v) for n, v in values.items()} | {
        beam.wave_symbols[0]: Fraction(1000)
    }
    renamed = determinant(entries, len(beam.rows), beam.omega, values=exact)
    found = [
        complex(float(re), float(im)) for re, im, _, m in renamed.complex_roots() for _ in range(m)
    ]
    assert_same(found, list(beam.roots(SI, k=1e3).omega), 1e-15)


def test_units_do_not_matter(beam):
    """Lengths in millimeters, times in microseconds, masses in grams: roots scale by 1e-6."""
    length, time, mass = 1e3, 1e6, 1e3
    charge = 1.0
    scaled = {
        "e": E * charge,
        "epsilon_0": plin.constants.epsilon_0 * charge**2 * time**2 / (mass * length**3),
        "m_e": ME * mass,
        "m_p": MP * mass,
        "n_e0": SI["n_e0"] / length**3,
        "T_e": SI["T_e"] * mass * length**2 / time**2,
        "T_i": SI["T_i"] * mass * length**2 / time**2,
        "u": SI["u"] * length / time,
        "w": 0.0,
    }
    assert np.allclose(
        beam.roots(scaled, k=1.0).omega * time, beam.roots(SI, k=1e3).omega, rtol=1e-12
    )


@settings(max_examples=20, deadline=None)
@given(st.floats(-1e6, 1e6), st.floats(1.0, 1e5))
def test_galilean_shift_of_an_electrostatic_set(w, k):
    wave = GALILEAN
    moved, at_rest = (wave.roots({**SI, "w": x}, k=k).omega for x in (w, 0.0))
    assert_same(moved, at_rest + k * w, 1e-9)


GALILEAN = electrostatic().linearize().plane_wave("x")


def test_galilean_shift_exactly():
    """omega -> omega + k w in the relation itself, for electrostatic, quasi-neutral and magnetohydrodynamic sets."""
    wave = GALILEAN
    w, k = wave.linear.symbols["w"], wave.wave_symbols[0]
    moved = wave.relation.as_expr().subs(wave.omega, wave.omega + k * w)
    assert sympy.expand(moved - wave.relation.as_expr().subs(w, 0)) == 0

    model = plin.FluidModel("moving quasi-neutral pair", axes="x")
    phi, w = model.scalar("phi"), model.parameter("w")
    ne, _ = species_laws(model, "e", 1, -1, (w,), lambda v: -grad(phi))
    ni, _ = species_laws(model, "i", 1836, 1, (w,), lambda v: -grad(phi))
    model.law("neutrality", ne - ni)
    wave = model.linearize().plane_wave("x")
    moved = wave.relation.as_expr().subs(wave.omega, wave.omega + wave.wave_symbols[0] * w)
    assert sympy.expand(moved - wave.relation.as_expr().subs(w, 0)) == 0

    model = plin.FluidModel("moving ideal fluid")
    rho, p = model.scalar("rho", background="rho_0"), model.scalar("p", background="p_0")
    v, b = (
        model.vector("v", background=("w", 0, "u")),
        model.vector("B", background=("B_x", 0, "B_z")),
    )
    model.law("continuity", partial_t(rho) + div(rho * v))
    model.law("momentum", rho * (partial_t(v) + advect(v, v)), -grad(p) + cross(curl(b), b))
    model.law("energy", partial_t(p) + advect(v, p) + 2 * p * div(v))
    model.law("induction", partial_t(b), curl(cross(v, b)))
    linear = model.linearize()
    wave = linear.plane_wave(("k_x", 0, "k_z"))
    s, (kx, kz) = linear.symbols, wave.wave_symbols
    # The one zero mode, of div B = 0, is not carried along: curl(v x B) has no divergence.
    assert wave.relation.zero_modes == 1
    waves = sympy.cancel(wave.relation.as_expr() / wave.omega)
    moved = waves.subs(wave.omega, wave.omega + kx * s["w"] + kz * s["u"])
    assert sympy.expand(moved - waves.subs({s["w"]: 0, s["u"]: 0})) == 0


@pytest.mark.parametrize("kind", ["friction", "displacement current"])
def test_galilean_shift_fails_where_it_must(kind):
    model = plin.FluidModel(kind)
    e, me, eps0, c, nu = model.parameters("e m_e epsilon_0 c nu", positive=True)
    w = model.parameter("w")
    if kind == "friction":
        phi = model.scalar("phi")
        n, _ = species_laws(model, "e", me, -e, (w, 0, 0), lambda v: -grad(phi) + me * nu / e * v)
        model.law("Poisson", eps0 * laplacian(phi), e * (n - model.symbols["n_e0"]))
        linear = model.linearize(assume=["e momentum"])
    else:
        electric, magnetic = model.vector("E"), model.vector("B")
        n, v = species_laws(model, "e", me, -e, (w, 0, 0), lambda v: electric + cross(v, magnetic))
        model.law("Faraday", partial_t(magnetic), -curl(electric))
        model.law("Ampere", partial_t(electric), c**2 * curl(magnetic) + e * n * v / eps0)
        linear = model.linearize(assume=["Ampere"])
    wave = linear.plane_wave("x")
    values = {"e": 1.0, "m_e": 1.0, "epsilon_0": 1.0, "c": 3.0, "nu": 0.3, "n_e0": 1.0, "T_e": 0.1}
    values = {n: x for n, x in values.items() if n in linear.symbols}
    moved = wave.roots({**values, "w": 0.5}, k=1.0).omega
    at_rest = wave.roots({**values, "w": 0.0}, k=1.0, zero_modes=False).omega
    shifted = at_rest + 0.5
    gaps = [np.abs(moved - z).min() for z in shifted]
    assert max(gaps) > 1e-3


@settings(max_examples=15, deadline=None)
@given(st.integers(0, 10**6))
def test_roots_are_eigenvalues(seed):
    """For random numbers of order one the roots are the generalized eigenvalues that SciPy finds."""
    from scipy.linalg import eigvals

    random = np.random.default_rng(seed)
    wave = GALILEAN
    names = ["e", "epsilon_0", "m_e", "m_p", "n_e0", "T_e", "T_i", "u", "w"]
    values = dict(zip(names, random.uniform(0.5, 2.0, len(names)), strict=True))
    roots = wave.roots(values, k=1.3)
    exact = {wave.linear.symbols[n]: v for n, v in {**values, "n_i0": values["n_e0"]}.items()}
    matrix = np.array(
        wave.matrix.subs({**exact, wave.wave_symbols[0]: 1.3, wave.omega: 0}).tolist(), complex
    )
    slope = np.array(
        wave.matrix.diff(wave.omega).subs({**exact, wave.wave_symbols[0]: 1.3}).tolist(), complex
    )
    found = eigvals(matrix, -slope)
    finite = found[np.isfinite(found) & (np.abs(found) < 1e8)]
    assert_same(finite, list(roots.omega), 1e-6)


def test_functions_of_numbers():
    """exp, sqrt, pi and powers with doubles as exponents, fixed and swept, against plain arithmetic."""
    model = plin.FluidModel("functions", axes="x")
    f = model.scalar("f", background="f_0")
    g = model.scalar("g")
    a, b, gamma = model.parameters("a b gamma", positive=True)
    model.law("f", partial_t(f), g)
    model.law(
        "g",
        partial_t(g),
        sympy.sqrt(b) * sympy.pi * laplacian(f)
        - sympy.exp(-a) * laplacian(laplacian(f**gamma))
        + sympy.cos(a) * laplacian(f),
    )
    wave = model.linearize().plane_wave("x")
    b_values = np.array([1.0, 2.0, 3.5])
    f_0, expo, k, alpha = 2.0, 1.4, 0.7, 0.3
    square = k**2 * (np.sqrt(b_values) * np.pi + np.cos(alpha)) + k**4 * np.exp(
        -alpha
    ) * expo * f_0 ** (expo - 1)
    roots = wave.roots({"a": alpha, "b": b_values, "gamma": expo, "f_0": f_0}, k=k)
    assert np.allclose(roots.omega[:, 1], np.sqrt(square), rtol=1e-14)
    swept = wave.roots({"a": alpha, "b": 2.0, "gamma": [1.4, 1.5], "f_0": f_0}, k=k)
    assert np.allclose(swept.omega[0], roots.omega[1], rtol=1e-14)
    both = wave.roots({"a": alpha, "b": 2.0, "gamma": 1.4, "f_0": [2.0, 3.0]}, k=k)
    assert np.allclose(both.omega[0], roots.omega[1], rtol=1e-14)


def test_workers_give_the_same_bits(beam):
    """Chunking and processes do not change a single bit; a map-like callable serves too."""
    k = np.geomspace(1.0, 1e5, 40_000)
    one = beam.roots(SI, k=k)
    assert set(np.unique(one.status)) == {"certified"}
    for workers in (2, map):
        other = beam.roots(SI, k=k, workers=workers)
        assert np.array_equal(one.omega, other.omega)
        assert np.array_equal(one.radius, other.radius)
    assert np.array_equal(one.omega[::1000], beam.roots(SI, k=k[::1000]).omega)
    with pytest.raises(plin.ValuesError, match="workers=0"):
        beam.roots(SI, k=k, workers=0)


@pytest.mark.parametrize("drift", [0.0, 2e5])
def test_fast_and_exact_paths_agree_within_the_radii(beam, drift):
    from plasmalin.roots.pointwise import solved_exactly
    from plasmalin.roots.solve import grid_of, pose
    from plasmalin.roots.values import gather, with_defaults

    k = np.geomspace(1.0, 1e6, 600)
    values = {**SI, "u": drift}
    roots = beam.roots(values, k=k)
    numbers = gather(beam, with_defaults(beam, values), {"k": k})
    problem = pose(beam, numbers)
    ((family, _),) = problem.factors
    exact = solved_exactly(family, grid_of(problem, numbers), np.arange(0, 600, 7))
    gap = np.abs(roots.omega[::7] - exact.omega)
    assert (gap <= roots.radius[::7] + exact.radius).all()
    assert (roots.radius <= 1e-15 * np.abs(roots.omega)).all()
