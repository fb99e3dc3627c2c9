"""Branches: continuous through crossings, avoided crossings and coalescences; what they print and write."""

import json

import numpy as np
import pytest
from published import CASES, read

import plasmalin as plin
from plasmalin import components, curl, dot, grad, partial_t
from plasmalin.roots.tracking import track


@pytest.fixture(scope="module")
def parallel():
    """R, L and Langmuir waves of two warm species along B: true crossings between factors."""
    case = read("r-and-l-waves")
    wave = CASES["r-and-l-waves"]()
    return wave.branches("k", np.geomspace(1.0, 1000.0, 301), case["parameters"])


def test_plain_crossing_between_factors(parallel):
    """The Langmuir oscillation of cold species does not depend on k: its branch stays flat through the light waves."""
    p = read("r-and-l-waves")["parameters"]
    plasma = np.sqrt(p["n0"] * p["e"] ** 2 / p["eps0"] * (1 / p["me"] + 1 / p["mi"]))
    flat = [b for b in parallel.omega if np.allclose(b, plasma, rtol=1e-12)]
    assert len(flat) == 1
    crossed = [b for b in parallel.frequency if b[0] < plasma < b[-1]]
    assert len(crossed) == 1
    assert [e.kind for e in parallel.events] == ["crossing", "crossing"]
    assert [abs(e.omega) for e in parallel.events] == pytest.approx([plasma] * 2, rel=1e-12)


def test_branches_are_continuous(parallel):
    step = np.diff(parallel.along)
    predicted = 0.5 * (parallel.slope[:, 1:] + parallel.slope[:, :-1]) * step
    gap = np.abs(np.diff(parallel.omega, axis=1) - predicted)
    assert (gap <= 1e-3 * np.abs(parallel.omega[:, 1:])).all()


def test_crossing_inside_one_factor():
    """(omega − k)(omega + k − 2) + eps² with eps = 0 has a true crossing at k = 1, else an avoided one."""
    for eps, crosses in ((0.0, True), (1e-3, False), (1e-6, False)):

        def solve(k, eps=eps):
            root = np.sqrt((k - 1) ** 2 + eps**2)
            omega = np.stack([1 - root, 1 + root], axis=1).astype(complex)
            rate = np.divide(k - 1, root, out=np.ones_like(k), where=root > 0)
            return omega, np.stack([-rate, rate], axis=1).astype(complex)

        k = np.linspace(0.0, 2.1, 8)
        omega, slope = solve(k)
        order, events = track(solve, k, omega, slope)
        branch = np.take_along_axis(omega, order, axis=1)[:, 0].real
        assert (branch[-1] > 1.5) == crosses
        assert [e.kind for e in events] == (["crossing"] if crosses else [])


def test_order_of_the_sweep_does_not_matter():
    wave, values = CASES["counterstreaming-cold-beams"](), {"wp0": 1.0, "V": 1.0}
    k = np.array([0.3, 0.1, 2.0, 0.2, 0.2])
    mixed = wave.branches("k", k, values)
    ordered = wave.branches("k", np.unique(k), values)
    place = np.searchsorted(np.unique(k), k)
    assert np.array_equal(mixed.omega, ordered.omega[:, place])
    one = wave.branches("k", [0.3], values)
    assert one.omega.shape == (4, 1)


def test_points_that_are_not_finite_are_masked():
    wave = CASES["counterstreaming-cold-beams"]()
    branches = wave.branches("k", [0.1, np.nan, 0.3], {"wp0": 1.0, "V": 1.0})
    assert np.isnan(branches.omega[:, 1]).all()
    assert np.isfinite(branches.omega[:, [0, 2]]).all()
    assert (branches.status[:, 1] == "masked").all()
    none = wave.branches("k", [np.nan, np.inf], {"wp0": 1.0, "V": 1.0})
    assert (none.status == "masked").all()
    with pytest.raises(plin.ValuesError, match="no finite root on this sweep"):
        none.most_unstable()


def test_any_parameter_may_vary():
    wave = CASES["counterstreaming-cold-beams"]()
    branches = wave.branches("V", np.linspace(0.1, 3.0, 40), {"wp0": 1.0}, k=1.0)
    assert branches.name == wave.branches(wave.linear.symbols["V"], [1.0], {"wp0": 1.0}, k=1.0).name
    assert branches.events[0].at == pytest.approx(np.sqrt(2), rel=1e-9)
    with pytest.raises(plin.ValuesError, match="group_velocity needs a sweep over a wave number"):
        _ = branches.group_velocity


def test_velocities():
    wave = CASES["langmuir-bohm-gross"]()
    p = read("langmuir-bohm-gross")["parameters"]
    branches = wave.branches("k", np.array([2e3, 4e3]), p)
    thermal = p["gamma"] * p["e"] * p["Te_eV"] / p["me"]
    assert np.allclose(branches.phase_velocity * branches.group_velocity, thermal, rtol=1e-9)


def test_slopes_follow_sin_and_cos():
    wave = plin.load_example("xenon-iodine-plume").linearize().plane_wave(angle="phase_angle")
    theta = np.linspace(1.40, 1.40001, 3)
    branches = wave.branches("phase_angle", theta, k=3e3)
    difference = (branches.omega[:, 2] - branches.omega[:, 0]) / (theta[2] - theta[0])
    assert np.allclose(
        branches.slope[:, 1], difference, rtol=1e-3, atol=1e-3 * np.abs(difference).max()
    )


def test_amplitudes_solve_the_equations():
    wave = CASES["langmuir-bohm-gross"]()
    p = read("langmuir-bohm-gross")["parameters"]
    branches = wave.branches("k", np.array([1e3, 4e3]), p)
    ratio = branches.amplitudes("v", per="n")
    assert np.allclose(ratio, branches.omega / (branches.along * p["n0"]), rtol=1e-9)
    with pytest.raises(plin.DeclarationError, match="no field or amplitude 'w'"):
        branches.amplitudes("w", per="n")


def test_amplitudes_of_vectors():
    """Right- and left-hand circular polarization: E_y / E_x = ±i."""
    case = read("r-and-l-waves")
    branches = CASES["r-and-l-waves"]().branches("k", np.array([100.0]), case["parameters"])
    ratio = branches.amplitudes("E", per="E_x")
    assert ratio.shape == (10, 1, 3)
    circular = ratio[np.isfinite(ratio[:, 0, 1]), 0, 1]
    assert len(circular) == 8, "the two longitudinal branches do not move E_x"
    assert np.allclose(np.abs(circular.imag), 1.0, rtol=1e-12)
    assert np.allclose(circular.real, 0.0, atol=1e-12)
    with pytest.raises(plin.DeclarationError, match="name one of E_x, E_y, E_z"):
        branches.amplitudes("E", per="E")


def test_zero_modes_on_request():
    case = read("upper-hybrid-warm")
    wave = CASES["upper-hybrid-warm"]()
    branches = wave.branches("kx", np.array([1e3, 2e3]), case["parameters"], zero_modes=True)
    assert branches.omega.shape == (4, 2)
    assert sorted(branches.factor)[:2] == [-1, -1]


@pytest.mark.parametrize(
    ("along", "values", "message"),
    [
        ([[1.0]], {}, "give one dimension"),
        ([], {}, "not empty"),
        (["a"], {}, "the values of 'k', which varies, must be real numbers"),
        ([1.0, 2j], {}, "the values of 'k', which varies, must be real numbers"),
        ([1.0, 2.0], {"V": np.array([1.0, 2.0])}, "only one quantity varies"),
    ],
)
def test_refused(along, values, message):
    wave = CASES["counterstreaming-cold-beams"]()
    with pytest.raises(plin.ValuesError, match=message):
        wave.branches("k", along, {"wp0": 1.0, "V": 1.0, **values})


def test_what_varies_goes_before_a_value_of_its_name():
    wave = CASES["counterstreaming-cold-beams"]()
    values, speeds = {"wp0": 1.0, "V": 1.0}, np.array([0.5, 2.0])
    branches = wave.branches("V", speeds, values, k=1.0)
    alone = wave.branches("V", speeds, {"wp0": 1.0}, k=1.0)
    assert np.array_equal(branches.omega, alone.omega)
    grid = wave.branches(("k", "V"), ([1.0], speeds), values)
    assert np.array_equal(np.sort(grid.omega[:, 0], axis=0), np.sort(alone.omega, axis=0))
    with pytest.raises(plin.ValuesError, match="'k' is what varies"):
        wave.branches("k", [1.0], values, k=2.0)


def test_plot_returns_axes():
    import matplotlib

    matplotlib.use("Agg")
    from matplotlib import pyplot

    wave = CASES["counterstreaming-cold-beams"]()
    branches = wave.branches("k", np.linspace(0.1, 2, 20), {"wp0": 1.0, "V": 1.0})
    upper, lower = branches.plot()
    assert len(upper.lines) == len(lower.lines) == 5
    assert "rad/s" in upper.get_ylabel()
    assert "rad/s" in lower.get_ylabel()
    assert lower.get_xlabel() == "k (rad/m)"
    assert "no growth" not in "".join(t.get_text() for t in lower.texts)
    given = pyplot.subplots(2)[1]
    assert branches.plot(given, color="k")[0] is given[0]
    stable = CASES["langmuir-bohm-gross"]()
    values = read("langmuir-bohm-gross")["parameters"]
    _, lower = stable.branches("k", np.geomspace(1e3, 1e5, 5), values).plot()
    assert "no growth" in lower.texts[0].get_text()
    pyplot.close("all")


def test_labelled_data():
    pytest.importorskip("xarray")
    pytest.importorskip("pandas")
    wave = CASES["counterstreaming-cold-beams"]()
    branches = wave.branches("k", np.linspace(0.1, 2, 5), {"wp0": 1.0, "V": 1.0})
    data = branches.to_xarray()
    assert data.omega.dims == ("branch", "k")
    assert data.omega.attrs["units"] == "rad/s"
    assert np.array_equal(data.omega.values, branches.omega)
    frame = branches.to_dataframe()
    assert list(frame.columns) == ["branch", "k", "frequency", "growth_rate", "radius"]
    assert len(frame) == 20


def test_archive_holds_no_pickles(tmp_path):
    wave = CASES["counterstreaming-cold-beams"]()
    branches = wave.branches("k", np.linspace(0.1, 2, 5), {"wp0": 1.0, "V": 1.0})
    branches.save(tmp_path / "run.npz")
    with np.load(tmp_path / "run.npz", allow_pickle=False) as data:
        assert np.array_equal(data["omega"], branches.omega)
        header = json.loads(str(data["header"]))
    assert header["values"] == {"V": 1.0, "wp0": 1.0}
    assert header["varies"] == "k"
    assert "a continuity" in header["laws"]
    assert [f.name for f in tmp_path.iterdir()] == ["run.npz"]


def test_closure_with_absolute_wave_number():
    """A damping chi |k| is the same for both signs of k."""
    model = plin.FluidModel("damped", axes="x")
    t, chi = model.scalar("T"), model.parameter("chi", positive=True)
    model.law("heat", partial_t(t), -plin.multiplier(t, chi * plin.k_abs))
    branches = model.linearize().plane_wave("x").branches("k", [-2.0, -1.0, 1.0, 2.0], {"chi": 0.5})
    assert np.allclose(branches.omega, [[-1j, -0.5j, -0.5j, -1j]])
    assert np.allclose(branches.slope, [[0.5j, 0.5j, -0.5j, -0.5j]])


def test_true_crossing_of_three_factors():
    model = plin.FluidModel("light in vacuum")
    electric, magnetic = model.vector("E"), model.vector("B")
    c = model.constants("c")
    model.law("Faraday", partial_t(magnetic), -curl(electric))
    model.law("Ampere", partial_t(electric), c**2 * curl(magnetic))
    wave = model.linearize().plane_wave("z")
    assert [(f.degree, f.multiplicity) for f in wave.relation.factors] == [(1, 2), (1, 2), (1, 2)]
    branches = wave.branches("k", [-1.0, 1.0])
    assert np.allclose(branches.omega[:, 0], -branches.omega[:, 1])


@pytest.fixture(scope="module")
def coupled():
    """Two modes, one drifting and damped: (omega - k U + i nu) omega = g^2, invented."""
    model = plin.FluidModel("two coupled modes")
    u, nu, g = model.parameters("U nu g")
    a, b = model.scalar("a", background=0), model.scalar("b", background=0)
    model.law("a", partial_t(a) + dot(components(u, 0, 0), grad(a)) + nu * a, g * b)
    model.law("b", partial_t(b), -g * a)
    return model.linearize().plane_wave(("k", 0, 0))


def test_labels_are_consistent_where_no_exceptional_point_is_encircled(coupled):
    """The two roots coalesce where (k U - i nu)^2 + 4 g^2 = 0: at k = 0, nu = 2 g only (nu > 0)."""
    k, nu = np.linspace(-1, 1, 10), np.linspace(0.5, 4, 12)
    whole = coupled.branches(("k", "nu"), (k, nu), {"U": 1.0, "g": 1.0})
    (event,) = whole.events
    (left, right), (low, high) = event.cell
    assert (event.kind, event.branches) == ("exceptional point", (0, 1))
    assert left < 0 < right
    assert low < 2 < high
    assert whole.cut.any()
    beyond = coupled.branches(("k", "nu"), (k, nu[nu > 2.5]), {"U": 1.0, "g": 1.0})
    assert beyond.events == ()
    assert not beyond.cut.any()
    jumps = [np.abs(np.diff(beyond.omega, axis=axis)).max() for axis in (1, 2)]
    assert max(jumps) < 0.5 < np.abs(beyond.omega[0] - beyond.omega[1]).min()
    assert (beyond.status == "certified").all()
    assert repr(beyond) == "<Surfaces: 2 branches over k, nu, 10 x 5 points>"


def test_surfaces_follow_branches(coupled):
    """A row of a grid is what a sweep along it gives, and growth is where the formula has it."""
    k, nu = np.linspace(0.2, 1, 5), np.linspace(0.5, 4, 6)
    grid = coupled.branches(("k", "nu"), (k, nu), {"U": 1.0, "g": 1.0}, zero_modes=True)
    sweep = coupled.branches("nu", nu, {"U": 1.0, "g": 1.0}, k=0.2)
    assert np.array_equal(grid.omega[:, 0], sweep.omega)
    shift = k[:, None] - 1j * nu
    product = (grid.omega - shift) * grid.omega
    assert np.allclose(product, 1.0, rtol=1e-12)
    assert np.array_equal(grid.growth_rate, grid.omega.imag)
    assert np.array_equal(grid.frequency, grid.omega.real)
    assert len(grid) == len(grid.factor) == 2


@pytest.mark.parametrize(
    ("names", "along", "values", "message"),
    [
        (("k", "nu"), ([1.0, 0.5], [1.0]), {}, "must be finite, one-dimensional and increasing"),
        (("k", "nu", "g"), ([1.0], [1.0], [1.0]), {}, "a grid takes two different names"),
        (("k", "k"), ([1.0], [1.0]), {}, "a grid takes two different names"),
        (("k", "nu"), ([1.0], ["a"]), {}, "must be real numbers, not"),
        (("k", "nu"), ([0.5, 1.0], [1.0, 2.0]), {"U": [1.0, 2.0]}, "only two quantities vary"),
    ],
)
def test_bad_grids_of_branches(coupled, names, along, values, message):
    with pytest.raises(plin.ValuesError, match=message):
        coupled.branches(names, along, {"U": 1.0, "g": 1.0, **values})


def test_surfaces_are_labelled_data(coupled, tmp_path):
    """What branches give, with one dimension more."""
    pytest.importorskip("xarray")
    pytest.importorskip("pandas")
    k, nu = np.linspace(-1, 1, 6), np.linspace(0.5, 4, 5)
    surfaces = coupled.branches(("k", "nu"), (k, nu), {"U": 1.0, "g": 1.0})
    assert surfaces.label == ("wave", "wave")
    (at, damping), omega, branch = surfaces.most_unstable()
    assert omega == surfaces.omega[branch, list(k).index(at), list(nu).index(damping)]
    assert omega.imag == surfaces.growth_rate.max()
    data = surfaces.to_xarray()
    assert data.omega.dims == ("branch", "k", "nu")
    assert np.array_equal(data.omega.values, surfaces.omega)
    frame = surfaces.to_dataframe()
    assert list(frame.columns) == ["branch", "k", "nu", "frequency", "growth_rate", "radius"]
    last = frame[(frame.branch == 1) & (frame.k == k[2]) & (frame.nu == nu[4])]
    assert last.frequency.item() == surfaces.frequency[1, 2, 4]
    surfaces.save(tmp_path / "grid.npz")
    with np.load(tmp_path / "grid.npz", allow_pickle=False) as archive:
        assert np.array_equal(archive["omega"], surfaces.omega)
        assert np.array_equal(archive["along_2"], nu)
        assert np.array_equal(archive["cut"], surfaces.cut)
        header = json.loads(str(archive["header"]))
    assert header["varies"] == ["k", "nu"]
    assert [e["kind"] for e in header["events"]] == ["exceptional point"]


def test_maps_of_surfaces(coupled):
    import matplotlib

    matplotlib.use("Agg")
    from matplotlib import pyplot

    k, nu = np.linspace(-1, 1, 10), np.linspace(0.5, 4, 12)
    surfaces = coupled.branches(("k", "nu"), (k, nu), {"U": 1.0, "g": 1.0})
    ax = surfaces.plot()
    assert (ax.get_xlabel(), ax.get_ylabel()) == ("k (rad/m)", "nu")
    assert [t.get_text() for t in ax.get_legend().get_texts()] == ["cut", "exceptional point"]
    (place,) = np.transpose(ax.lines[0].get_data())
    assert np.allclose(place, [np.mean(sides) for sides in surfaces.events[0].cell])
    cuts = ax.collections[1].get_segments()
    assert len(cuts) == surfaces.cut[surfaces.most_unstable()[2]].sum()
    given = pyplot.subplots()[1]
    assert surfaces.plot(1, "frequency", given, cmap="gray") is given
    mesh = given.collections[0].get_array()
    assert np.array_equal(mesh.reshape(12, 10).T, surfaces.frequency[1])
    with pytest.raises(plin.ValuesError, match="there is no branch 2; there are 2, from 0"):
        surfaces.plot(2)
    with pytest.raises(plin.ValuesError, match="give one of growth_rate, frequency"):
        surfaces.plot(0, "phase")
    pyplot.close("all")


def test_grids_in_declared_units():
    """A temperature in eV and wave numbers: what is shown is in eV, what is solved in SI."""
    model = plin.FluidModel("ion sound", axes="x")
    n, v = model.scalar("n", background="n_0"), model.vector("v")
    t = model.parameter("T", unit="eV", positive=True)
    m = model.parameter("m", unit="kg", positive=True)
    model.law("continuity", partial_t(n) + plin.div(n * v))
    model.law("momentum", m * n * (partial_t(v) + plin.advect(v, v)), -grad(t * n))
    wave = model.linearize().plane_wave("x")
    k, temperature = np.array([1.0, 2.0]), np.array([1.0, 4.0, 9.0])
    surfaces = wave.branches(("k", "T"), (k, temperature), {"m": 1e-27, "n_0": 1.0})
    assert np.array_equal(surfaces.along[1], temperature)
    speed = np.sqrt(temperature * plin.constants.e / 1e-27)
    assert np.allclose(surfaces.omega[1], k[:, None] * speed, rtol=1e-14)
    branches = wave.branches("T", temperature, {"m": 1e-27, "n_0": 1.0}, k=2.0)
    assert np.array_equal(branches.omega, surfaces.omega[:, 1])
    assert np.allclose(branches.slope[1], branches.omega[1] / (2 * temperature), rtol=1e-14)
