"""Labels of modes against the modes that are known: sound, entropy, vorticity, div B, Gauss."""

import pickle

import numpy as np
import published
import published_more
import pytest
import sympy

import plasmalin as plin
from plasmalin import advect, cross, curl, div, dot, grad, laplacian, partial_t

CASES = {**published.CASES, **published_more.CASES}
OBLIQUE = ("k_x", "k_y", "k_z")


def gas(axes="xyz", *, drift=True, force=0):
    """A perfect gas with a pressure law; `force` is a function of model and velocity."""
    model = plin.FluidModel("neutral gas", axes=axes)
    rho0, p0, gamma = model.parameters("rho_0 p_0 gamma", positive=True)
    rho, p = model.scalar("rho", background=rho0), model.scalar("p", background=p0)
    v = model.vector("v", background=tuple(f"u_{a}" for a in axes) if drift else 0)
    added = force(model, v) if force else 0
    model.law("continuity", partial_t(rho) + div(rho * v))
    model.law("momentum", rho * (partial_t(v) + advect(v, v)), -grad(p) + added)
    model.law("energy", partial_t(p) + advect(v, p) + gamma * p * div(v))
    return model.linearize()


def viscous(model, v):
    return model.parameter("mu", positive=True) * laplacian(v)


def told(relation):
    return [(f.degree, f.multiplicity, f.label) for f in relation.factors]


# A neutral gas: Kovasznay 1953, J. Aeronaut. Sci. 20, 657 (from memory) --------------------------


def test_the_modes_of_a_gas_in_a_wind():
    relation = gas().plane_wave(OBLIQUE).relation
    assert told(relation) == [(1, 1, "entropy"), (1, 2, "vortical"), (2, 1, "wave")]
    k, u = sympy.symbols("k_x k_y k_z", real=True), sympy.symbols("u_x u_y u_z", real=True)
    doppler = relation.exact.main - sum(a * b for a, b in zip(k, u, strict=True))
    sound, rho = relation.factors[-1].expr, sympy.Symbol("rho_0", positive=True)
    p, gamma = sympy.symbols("p_0 gamma", positive=True)
    square = gamma * p * sum(a**2 for a in k)
    assert sympy.expand(relation.factors[0].expr - doppler) == 0
    assert sympy.expand(sound - (rho * doppler**2 - square)) == 0


def test_the_modes_of_a_gas_at_rest():
    relation = gas(drift=False).plane_wave("x").relation
    assert relation.zero_mode_labels == {"entropy": 1, "vortical": 2}
    assert "ω³ = 0: 3 zero modes (1 entropy, 2 vortical)" in str(relation)


@pytest.mark.parametrize(("axes", "vortical"), [("x", 0), ("xz", 1), ("xyz", 2)])
def test_one_vortical_mode_less_per_axis(axes, vortical):
    direction = ("k_x", "k_z", "k_y")[: len(axes)]
    factors = gas(axes).plane_wave(direction).relation.factors
    assert sum(f.multiplicity for f in factors if f.label == "vortical") == vortical
    assert sum(f.multiplicity for f in factors if f.label == "entropy") == 1


def test_viscosity_damps_vorticity_and_spares_entropy():
    """ω = k.u − i μ k²/ρ, twice (Kovasznay 1953)."""
    relation = gas(force=viscous).plane_wave(OBLIQUE).relation
    assert told(relation) == [(1, 1, "entropy"), (1, 2, "vortical"), (2, 1, "wave")]
    assert "(multiplicity 2, vortical)" in str(relation)


def test_rotation_leaves_no_vortical_mode():
    """Inertial waves take their place: ω = ± 2 Ω k_z / k in an incompressible fluid (Kelvin 1880, from memory)."""

    def coriolis(model, v):
        return model.symbols["rho_0"] * cross(v, plin.components(0, 0, model.parameter("f")))

    relation = gas(force=coriolis, drift=False).plane_wave(("k_x", 0, "k_z")).relation
    assert relation.zero_mode_labels == {"entropy": 1}


def test_heat_conduction_makes_the_entropy_mode_a_wave_of_higher_degree():
    relation = CASES["kirchhoff-stokes-sound"]().relation
    assert told(relation) == [(1, 2, "vortical"), (3, 1, "wave")]


def test_a_closure_in_temperature_has_the_same_entropy_mode():
    """p = n T as a law of its own: p is a scalar with a background, no potential."""
    model = plin.FluidModel("gas with a law of state")
    n0, t0, m = model.parameters("n_0 T_0 m", positive=True)
    n, t, v = model.scalar("n", n0), model.scalar("T", t0), model.vector("v")
    p = model.scalar("p", n0 * t0)
    model.law("continuity", partial_t(n) + div(n * v))
    model.law("momentum", m * n * (partial_t(v) + dot(v, grad(v))), -grad(p))
    model.law("heat", partial_t(t) + dot(v, grad(t)), -sympy.Rational(2, 3) * t * div(v))
    model.law("state", p, n * t)
    relation = model.linearize().plane_wave("x").relation
    assert relation.zero_mode_labels == {"entropy": 1, "vortical": 2}


# Fields ------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("name", "labels"),
    [
        ("ideal-mhd-shear-fast-slow", {"constraint": 1, "entropy": 1}),
        ("resistive-mhd-alfven", {"constraint": 1, "entropy": 1}),
        ("whistler-electron-mhd", {"constraint": 1}),
        ("appleton-hartree-collisional", {"constraint": 2}),
        ("em-wave-unmagnetised", {"wave": 2, "constraint": 2}),
        ("jeans", {"vortical": 2}),
    ],
)
def test_zero_modes_of_published_models(name, labels):
    """div B, and with Maxwell's laws Gauss too, are told from the laws though nobody declared them."""
    relation = CASES[name]().relation
    assert relation.zero_mode_labels == labels
    assert relation.zero_modes == sum(labels.values())


def mhd(induction):
    model = plin.FluidModel("MHD with magnetic tension typed out")
    rho0, p0, gamma, mu0, eta = model.parameters("rho_0 p_0 gamma mu_0 eta", positive=True)
    rho, p = model.scalar("rho", rho0), model.scalar("p", p0)
    v, b = model.vector("v"), model.vector("B", background=(0, 0, "B_0"))
    tension = advect(b, b) / mu0
    model.law("continuity", partial_t(rho) + div(rho * v))
    model.law("momentum", rho * (partial_t(v) + advect(v, v)), tension - grad(p + dot(b, b) / (2 * mu0)))  # fmt: skip
    model.law("energy", partial_t(p) + advect(v, p) + gamma * p * div(v))
    model.law("induction", partial_t(b) + advect(v, b), induction(v, b, eta))
    return model.linearize().plane_wave(("k_x", 0, "k_z"))


def test_a_field_under_advect_is_no_flow():
    """(B.grad) B and (B.grad) v: B carries nothing that is under a time derivative there."""
    relation = mhd(lambda v, b, eta: advect(b, v) - b * div(v)).relation
    assert relation.zero_mode_labels == {"constraint": 1, "entropy": 1}


def test_a_divergence_that_diffuses_is_a_constraint_mode():
    """With η∇²B instead of −curl(η curl B) div B decays as ω = −i η k²."""
    relation = mhd(lambda v, b, eta: advect(b, v) - b * div(v) + eta * laplacian(b)).relation
    assert (1, 1, "constraint") in told(relation)
    assert relation.zero_mode_labels == {"entropy": 1}


def electrons_with_a_pressure_law():
    model = plin.FluidModel("warm electrons over fixed ions, with Maxwell's laws")
    e, eps0, c, m, n0, p0 = model.parameters("e epsilon_0 c m n_0 p_0", positive=True)
    electric, magnetic = model.vector("E"), model.vector("B")
    n, p, v = model.scalar("n", n0), model.scalar("p", p0), model.vector("v")
    model.law("continuity", partial_t(n) + div(n * v))
    model.law("energy", partial_t(p) + div(3 * p * v) - 2 * advect(v, p))
    model.law("momentum", m * n * (partial_t(v) + advect(v, v)), -e * n * (electric + cross(v, magnetic)) - grad(p))  # fmt: skip
    model.law("Faraday", partial_t(magnetic), -curl(electric))
    model.law("Ampere", partial_t(electric), c**2 * curl(magnetic) + e * n * v / eps0)
    return model


def test_a_current_that_is_an_unknown_does_not_hide_gauss():
    model = plin.FluidModel("cold electrons with their current as a field")
    e, eps0, c, m, n0 = model.parameters("e epsilon_0 c m n_0", positive=True)
    electric, magnetic, current = model.vector("E"), model.vector("B"), model.vector("J")
    n, v = model.scalar("n", n0), model.vector("v")
    model.law("continuity", partial_t(n) + div(n * v))
    model.law("momentum", m * (partial_t(v) + advect(v, v)), -e * (electric + cross(v, magnetic)))
    model.law("current", current, -e * n * v)
    model.law("Faraday", partial_t(magnetic), -curl(electric))
    model.law("Ampere", partial_t(electric), c**2 * curl(magnetic) - current / eps0)
    relation = model.linearize().plane_wave("x").relation
    assert relation.zero_mode_labels == {"wave": 2, "constraint": 2}  # as without the field J


def test_gauss_is_told_from_the_continuity_law_of_its_current():
    """The energy law too has a divergence of a flux, which is not the current's."""
    model = electrons_with_a_pressure_law()
    plain = model.linearize().plane_wave("x")
    model.constraint("Gauss", "epsilon_0*div(E) = e*(n_0 - n)")
    declared = model.linearize().plane_wave("x")
    assert plain.relation.zero_mode_labels == declared.relation.zero_mode_labels
    assert plain.relation.zero_mode_labels["constraint"] == 2
    assert (plain.relation.zero_modes - declared.relation.zero_modes) == 1


# Every published case ----------------------------------------------------------------------------


@pytest.mark.parametrize("name", CASES)
def test_labels_add_up(name):
    relation = CASES[name]().relation
    assert sum(relation.zero_mode_labels.values()) == relation.zero_modes == relation.exact.lowest
    assert sum(f.degree * f.multiplicity for f in relation.factors) == relation.exact.degree
    assert all(f.label == "wave" for f in relation.factors if f.degree > 1)
    assert {f.label for f in relation.factors} <= {"wave", "constraint", "entropy", "vortical"}


def null_space(matrix):
    _, sizes, vectors = np.linalg.svd(matrix)
    return vectors[np.count_nonzero(sizes > 1e-9 * sizes[0]) :].conj().T


@pytest.mark.parametrize("name", CASES)
def test_zero_modes_in_floating_point(name):
    """Static solutions by singular values: those in scalars alone, those in flows across k alone, all of them."""
    wave = CASES[name]()
    labels = wave.relation.zero_mode_labels
    random = np.random.default_rng(5)
    symbols = {s for c in (*wave.entries.values(), *wave.k) for s in c.free_symbols} - {wave.omega}
    numbers = {s: random.uniform(0.5, 1.5) for s in sorted(symbols, key=str)}
    matrix = np.array(wave.matrix.subs({**numbers, wave.omega: 0}).evalf().tolist(), complex)
    static = null_space(matrix)
    growing = (
        static.shape[1] < wave.relation.zero_modes
    )  # static once, linear in time the next time
    rank = [c.field.rank for c in wave.columns]
    name_of = [c.field.name for c in wave.columns]
    flow = [r == 1 and n.startswith("v") for r, n in zip(rank, name_of, strict=True)]
    across = np.zeros((len(set(name_of)), len(flow)))
    for j, column in enumerate(wave.columns):
        if flow[j]:
            axis = wave.linear.axes.index(column.component)
            across[sorted(set(name_of)).index(name_of[j]), j] = float(wave.k[axis].subs(numbers))
    outside = np.eye(len(flow))[[j for j, f in enumerate(flow) if not f]]
    vortical = null_space(np.vstack([matrix, outside, across])).shape[1]
    assert labels.get("vortical", 0) == vortical or (growing and labels["vortical"] > vortical)
    vectors = np.eye(len(flow))[
        [j for j, r in enumerate(rank) if r or name_of[j] in ("phi", "psi")]
    ]
    scalars = null_space(np.vstack([matrix, vectors])).shape[1]
    assert labels.get("entropy", 0) <= scalars or growing  # Gauss's law forbids some of them


# Branches ----------------------------------------------------------------------------------------

WIND = {"rho_0": 1.2, "p_0": 1e5, "gamma": 1.4, "u_x": 20.0, "u_y": 5.0, "u_z": 0.0}


def test_branches_carry_labels():
    wave = gas().plane_wave(OBLIQUE)
    branches = wave.branches("k_x", np.linspace(1.0, 2.0, 4), WIND, k_y=1.0, k_z=0.5)
    assert sorted(branches.label) == ["entropy", "vortical", "vortical", "wave", "wave"]
    for omega, label in zip(branches.omega, branches.label, strict=True):
        doppler = 20.0 * branches.along + 5.0
        assert np.allclose(omega, doppler) == (label != "wave")


def test_branches_that_are_zero_only_at_these_numbers():
    wave = gas().plane_wave(OBLIQUE)
    still = {**WIND, "u_x": 0.0, "u_y": 0.0}
    branches = wave.branches("k_x", [1.0, 2.0], still, k_y=1.0, k_z=0.5)
    assert [f for f, x in zip(branches.factor, branches.label, strict=True) if x != "wave"] == [-1] * 3  # fmt: skip
    assert sorted(branches.label) == ["entropy", "vortical", "vortical", "wave", "wave"]


def test_labels_inside_a_square_free_part():
    """Drift and viscosity together: the factors are not all told apart, the labels are."""
    wave = gas(force=viscous).plane_wave(OBLIQUE)
    values = {**WIND, "mu": 40.0}
    branches = wave.branches("k_x", np.linspace(1.0, 2.0, 4), values, k_y=1.0, k_z=0.5)
    doppler = 20.0 * branches.along + 5.0
    damping = 40.0 / 1.2 * (branches.along**2 + 1.25)
    expected = {"entropy": doppler, "vortical": doppler - 1j * damping}
    for omega, label in zip(branches.omega, branches.label, strict=True):
        assert label == "wave" or np.allclose(omega, expected[label])
    assert sorted(branches.label) == ["entropy", "vortical", "vortical", "wave", "wave"]


def test_kept_zero_modes_are_labeled():
    wave = CASES["ideal-mhd-shear-fast-slow"]()
    values = {"gamma": 1.6, "mu0": 1.0, "rho0": 1.0, "p0": 0.3, "B0": 1.0}
    branches = wave.branches("kx", [1.0, 2.0], values, kz=1.0, zero_modes=True)
    assert sorted(branches.label) == ["constraint", "entropy", *["wave"] * 6]


def test_labels_are_written(tmp_path):
    wave = gas("x").plane_wave("x")
    branches = wave.branches(
        "k", [1.0, 2.0], {n: WIND[n] for n in ("rho_0", "p_0", "gamma", "u_x")}
    )
    branches.save(tmp_path / "run.npz")
    with np.load(tmp_path / "run.npz", allow_pickle=False) as data:
        assert tuple(data["label"]) == branches.label == ("wave", "entropy", "wave")
    xarray = pytest.importorskip("xarray")
    data = branches.to_xarray()
    assert isinstance(data, xarray.Dataset)
    assert tuple(data["label"].values) == branches.label
    from plasmalin.present.report import branch_table

    assert "1 entropy" in " ".join(branch_table(branches).split())


# Manners -----------------------------------------------------------------------------------------


def test_substituted_relations_keep_their_labels():
    relation = gas().plane_wave("x").relation.substitute({"u_x": 0})
    assert relation.zero_mode_labels == {"entropy": 1, "vortical": 2}
    assert relation.zero_modes == 3


def test_a_relation_whose_matrix_is_gone_is_all_waves():
    """p_0 = 0 leaves a determinant, gamma p_0 → 0; where the matrix itself is singular nothing can be told."""
    model = plin.FluidModel("one law that a number takes away", axes="x")
    a = model.parameter("a")
    x, y = model.scalar("x"), model.scalar("y")
    model.law("x", a * partial_t(x) + a * y)
    model.law("y", partial_t(y))
    relation = model.linearize().plane_wave("x").relation
    assert relation.substitute({"a": 0}).zero_mode_labels == {"wave": 2}


def test_labels_cost_nothing_until_they_are_wanted(monkeypatch):
    from plasmalin.waves import matrix

    def refuse(wave):
        raise AssertionError("labels were not asked for")

    monkeypatch.setattr(matrix, "modes_of", refuse)
    wave = gas().plane_wave("x")
    assert (wave.relation.degree, wave.relation.zero_modes) == (5, 0)
    values = {"rho_0": 1.2, "p_0": 1e5, "gamma": 1.4, "u_x": 20.0}
    assert wave.roots(values, k=1.0).shape == (5,)
    assert len(wave.branches("k", [1.0, 2.0], values)) == 5
    with pytest.raises(AssertionError, match="not asked"):
        _ = wave.relation.factors


def test_relations_survive_pickling():
    relation = gas().plane_wave("x").relation
    again = pickle.loads(pickle.dumps(relation))
    assert told(again) == told(relation)


def test_an_angle_given_as_a_number():
    wave = mhd(lambda v, b, eta: advect(b, v) - b * div(v)).linear.plane_wave(angle="theta")
    relation = wave.relation.substitute({"theta": 0.3, "B_0": 0.7})
    assert relation.zero_mode_labels == {"constraint": 1, "entropy": 1}
