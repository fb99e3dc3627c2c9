"""Redundant laws: declared, linearized, proven to be preserved, or refused with the law that breaks them."""

import pickle

import numpy as np
import pytest
import sympy
from hypothesis import given, settings
from hypothesis import strategies as st

import plasmalin as plin
from plasmalin import advect, components, cross, curl, div, dot, grad, laplacian, partial_t

OBLIQUE = ("kx", 0, "kz")


def two_fluids(*, ionization=(0, 0), current=1, error=None, displacement=1, drift=True):
    """Warm electrons and ions in B along z with Maxwell's laws; what can go wrong are options."""
    model = plin.FluidModel("two fluids with Maxwell's laws")
    e, eps0, mu0, me, mi = model.constants("e epsilon_0 mu_0 m_e m_p")
    nu, eta = model.parameters("nu_i eta", positive=True)
    electric, magnetic = model.vector("E"), model.vector("B", background=(0, 0, "B_0"))
    moved = 0
    for s, q, m, source in (("e", -e, me, ionization[0]), ("i", e, mi, ionization[1])):
        n0, t = model.parameters(f"n_{s}0 T_{s}", positive=True)
        n = model.scalar(f"n_{s}", background=n0)
        v = model.vector(f"v_{s}", background=(0, 0, f"u_{s}") if drift else 0)
        born = source * nu * (model.fields["n_e"] - model.symbols["n_e0"])
        model.law(f"{s} continuity", partial_t(n) + div(n * v), born)
        force = q * n * (electric + cross(v, magnetic)) - t * grad(n)
        model.law(f"{s} momentum", m * n * (partial_t(v) + advect(v, v)), force)
        moved += q * n * v
    wrong = 0 if error is None else error(model, eta)
    model.law("Faraday", partial_t(magnetic), -curl(electric) + wrong)
    rate = displacement * mu0 * eps0 * partial_t(electric)
    model.law("Ampere", curl(magnetic), current * mu0 * moved + rate)
    return model


def with_gauss(model):
    f, s = model.fields, model.symbols
    model.constraint("Gauss", s["epsilon_0"] * div(f["E"]), s["e"] * (f["n_i"] - f["n_e"]))
    return model


def wave_of(model, direction=OBLIQUE):
    return model.linearize().plane_wave(direction)


# Declared ----------------------------------------------------------------------------------------


def test_a_constraint_is_kept_apart_from_the_laws():
    model = with_gauss(at_rest())
    text = model.constraint("no monopoles", "div(B) = 0")
    assert list(model.constraints) == ["Gauss", "no monopoles"]
    assert "Gauss" not in model.laws
    assert str(text) == "div(B) = 0"
    linear = model.linearize()
    assert "Gauss" not in linear.equations
    assert str(linear.constraints) == (
        "Gauss          ε_0 ∇·Ẽ = −e ñ_e + e ñ_i\nno monopoles   ∇·B̃ = 0"
    )
    assert [p.fate for p in linear.ledger.of("Gauss")].count("kept") == 3
    assert len(wave_of(model).rows) == 14
    assert "ε_0 ∇·Ẽ" in linear.report()


def test_its_zeroth_order_is_a_condition():
    e, ne, ni = (two_fluids().symbols[n] for n in ("e", "n_e0", "n_i0"))
    conditions = [c.lhs for c in with_gauss(two_fluids()).linearize().conditions]
    assert any(sympy.expand(c - e * (ni - ne)) == 0 or sympy.expand(c + e * (ni - ne)) == 0 for c in conditions)  # fmt: skip
    assert len(two_fluids().linearize().conditions) == len(conditions) - 1


def electrons_alone():
    model = plin.FluidModel("electrons without ions")
    n, v, electric = model.scalar("n", background="n_0"), model.vector("v"), model.vector("E")
    e, eps0 = model.constants("e epsilon_0")
    model.law("continuity", partial_t(n) + div(n * v))
    model.law("momentum", partial_t(v), -e * electric)
    model.law("Ampere", eps0 * partial_t(electric), e * n * v)
    model.constraint("Gauss", eps0 * div(electric), -e * n)
    return model


def test_a_background_that_contradicts_it():
    with pytest.raises(plin.BackgroundError, match="constraint 'Gauss' leaves"):
        electrons_alone().linearize()
    linear = electrons_alone().linearize(assume=["Gauss"])
    assert linear.conditions == ()
    assert linear.plane_wave("x").relation.zero_modes == 0  # Gauss forbids the only one


def test_one_that_says_nothing_of_waves():
    model = two_fluids()
    model.constraint("no power", dot(model.fields["E"], model.fields["E"]))
    with pytest.raises(plin.UndeterminedError, match="constraint 'no power' has no first-order"):
        model.linearize()


@pytest.mark.parametrize(
    ("name", "text", "error", "message"),
    [
        ("Gauss", "div(E) = 0", plin.DeclarationError, "a constraint 'Gauss' is declared already"),
        ("Ampere", "div(B) = 0", plin.DeclarationError, "a law 'Ampere' is declared already"),
        ("again", "partial_t(B) + curl(E)", plin.DeclarationError, "constraint 'again' repeats law 'Faraday'"),
        ("rank", "div(E) = B", plin.RankError, "constraint 'rank'"),
        ("name", "div(D) = 0", plin.ReadError, "D"),
        ("loose", "k_x*n_e = 0", plin.DeclarationError, "constraint 'loose': k_x stands outside"),
        ("empty", "e = 0", plin.DeclarationError, "constraint 'empty' holds no field"),
    ],
)  # fmt: skip
def test_mistakes_are_named(name, text, error, message):
    model = with_gauss(two_fluids())
    with pytest.raises(error, match=message):
        model.constraint(name, text)


def test_a_law_cannot_take_its_name_nor_repeat_it():
    model = with_gauss(two_fluids())
    with pytest.raises(plin.DeclarationError, match="a constraint 'Gauss' is declared already"):
        model.law("Gauss", "div(B) = 0")
    with pytest.raises(plin.DeclarationError, match="law 'charge' repeats constraint 'Gauss'"):
        model.law("charge", "epsilon_0*div(E) = e*(n_i - n_e)")
    with pytest.raises(plin.DeclarationError, match="give the whole of it as one string"):
        model.constraint("two strings", "div(B)", "0")


def test_it_is_saved_and_loaded(tmp_path):
    model = with_gauss(two_fluids())
    model.save(tmp_path / "model.toml")
    again = plin.load(tmp_path / "model.toml")
    assert {n: str(c) for n, c in again.constraints.items()} == {
        n: str(c) for n, c in model.constraints.items()
    }
    assert wave_of(again).relation.zero_modes == 1


def test_a_bad_entry_in_a_file(tmp_path):
    two_fluids().save(tmp_path / "model.toml")
    with (tmp_path / "model.toml").open("a") as file:
        file.write('\n[[constraint]]\nname = "Gauss"\ntxt = "div(B) = 0"\n')
    with pytest.raises(plin.ModelFileError, match="did you mean 'text'"):
        plin.load(tmp_path / "model.toml")


# Proven ------------------------------------------------------------------------------------------


def at_random(wave):
    """Numbers for every symbol of the wave matrix that satisfy charge and current balance."""
    random = np.random.default_rng(3)
    symbols = {s for c in wave.entries.values() for s in c.free_symbols}
    numbers = {s: random.uniform(0.5, 1.5) for s in sorted(symbols, key=str)}
    by_name = {s.name: s for s in symbols}
    for a, b in (("n_e0", "n_i0"), ("u_e", "u_i")):
        if a in by_name and b in by_name:
            numbers[by_name[a]] = numbers[by_name[b]]
    return numbers


def error_of_the_identity(wave, proof):
    """omega**power * form against the sum of multipliers times rows, in floating point."""
    numbers = at_random(wave)
    rows = {str(row): i for i, row in enumerate(wave.rows)}
    matrix = np.array(wave.matrix.subs(numbers).evalf().tolist(), complex)
    r = np.zeros(len(rows), complex)
    for name, c in proof.multipliers.items():
        r[rows[name]] = complex(c.subs(numbers))
    form = np.zeros(len(rows), complex)
    for j, c in proof.form.items():
        form[j] = complex(sympy.sympify(c).subs(numbers))
    return np.abs(numbers[wave.omega] ** proof.power * form - r @ matrix).max()


def test_the_proof_is_an_identity():
    model = with_gauss(two_fluids())
    model.constraint("no monopoles", div(model.fields["B"]))
    for wave in (wave_of(model), model.linearize().plane_wave(angle="theta")):
        assert [p.power for p in wave.constraints] == [1, 1]
        for proof in wave.constraints:
            assert error_of_the_identity(wave, proof) < 1e-12
    assert "[Ampere, x]" in str(wave.constraints[0])
    assert not wave.constraints[0].using


def test_quasi_neutrality_without_displacement_current():
    model = two_fluids(displacement=0)
    before = wave_of(model).relation.zero_modes
    model.constraint("quasi-neutrality", "n_i = n_e")
    wave = wave_of(model)
    assert wave.relation.zero_modes == before - 1
    assert error_of_the_identity(wave, wave.constraints[0]) < 1e-12


def one_flow(balanced=True):
    """Two densities carried by one flow: their difference stays zero if it is zero in the background."""
    model = plin.FluidModel("two densities in one flow", axes="x")
    t, mass = model.parameters("T m", positive=True)
    a, b, v = model.scalar("n_a", "n_a0"), model.scalar("n_b", "n_b0"), model.vector("v")
    model.law("a", partial_t(a) + div(a * v))
    model.law("b", partial_t(b) + div(b * v))
    model.law("momentum", mass * a * (partial_t(v) + advect(v, v)), -t * grad(a))
    model.constraint("same", a - b)
    return model.linearize(assume=() if balanced else ["same"])


def test_a_proof_that_needs_a_condition():
    (proof,) = one_flow().plane_wave("x").constraints
    assert [c.lhs for c in proof.using] == [c.lhs for c in one_flow().conditions]
    assert "using n_a0 − n_b0 = 0" in str(proof)
    with pytest.raises(plin.ConstraintError, match="'same' is not preserved"):
        one_flow(balanced=False).plane_wave("x")


def test_a_consequence_of_the_laws_forbids_nothing():
    """div of Ampere's law without displacement current: it holds at every omega."""
    model = two_fluids(displacement=0)
    before = wave_of(model).relation.zero_modes
    model.constraint("closed currents", "div(n_i*v_i - n_e*v_e) = 0")
    wave = wave_of(model)
    assert [p.power for p in wave.constraints] == [0]
    assert wave.relation.zero_modes == before


def test_components_that_vanish_for_the_wave_vector_need_no_proof():
    model = plin.FluidModel("irrotational cold gas")
    v = model.vector("v")
    model.law("momentum", partial_t(v) + advect(v, v))
    model.constraint("no vorticity", curl(v))
    wave = wave_of(model, "x")
    assert [p.name for p in wave.constraints] == ["no vorticity, y", "no vorticity, z"]
    assert wave.relation.zero_modes == 1


def test_singular_laws_are_said_to_be_so():
    model = plin.FluidModel("light without a longitudinal law")
    electric, magnetic = model.vector("E"), model.vector("B")
    model.law("Faraday", curl(magnetic), -curl(electric))
    model.law("Ampere", partial_t(electric), curl(magnetic))
    model.constraint("no monopoles", div(magnetic))
    with pytest.raises(plin.UndeterminedError, match="determinant vanishes identically"):
        wave_of(model, "x")


@settings(max_examples=60, deadline=None)
@given(
    st.lists(st.integers(-2, 2), min_size=9, max_size=9),
    st.lists(st.integers(-2, 2), min_size=3, max_size=3),
)
def test_preserved_if_and_only_if_the_row_dies(entries, row):
    """d_t x = A x keeps every wave with omega ≠ 0 off the constraint c x if and only if c A^3 = 0."""
    a, c = np.reshape(entries, (3, 3)), np.array(row)
    model = plin.FluidModel("linear system", axes="x")
    x = [model.scalar(f"x_{i}") for i in range(3)]
    for i in range(3):
        model.law(f"law {i}", partial_t(x[i]), sum(int(a[i, j]) * x[j] for j in range(3)))
    if not c.any():
        return
    model.constraint("c", sum(int(c[i]) * x[i] for i in range(3)))
    if (c @ a @ a @ a).any():
        with pytest.raises(plin.ConstraintError):
            wave_of(model, "x")
        return
    chain = np.linalg.matrix_rank(np.array([c, c @ a, c @ a @ a]))  # what the constraint sees
    wave = wave_of(model, "x")
    assert wave.forbidden_modes == chain
    assert wave.relation.exact.lowest - wave.relation.zero_modes == chain


# Refused -----------------------------------------------------------------------------------------


def refused(model):
    with pytest.raises(plin.ConstraintError) as caught:
        wave_of(model)
    return caught.value


def test_ionization_that_only_electrons_have():
    error = refused(with_gauss(two_fluids(ionization=(1, 0))))
    assert (error.constraint, error.laws) == ("Gauss", ("e continuity",))
    assert "leaves e ν_i ñ_e from 'e continuity'" in str(error)
    assert wave_of(with_gauss(two_fluids(ionization=(1, 1)))).forbidden_modes == 1


def test_a_current_of_the_wrong_sign():
    error = refused(with_gauss(two_fluids(current=-1)))
    assert error.laws == ("Ampere",)
    assert "'e continuity', 'i continuity' do not cancel" in str(error)


def test_a_species_whose_charge_gauss_forgets():
    model = two_fluids()
    model.constraint("Gauss", "epsilon_0*div(E) = e*(n_i - n_e/2 - n_i0 + n_e0/2)")
    error = refused(model)
    assert set(error.laws) == {"e continuity", "Ampere"}  # their electron currents no longer cancel


def test_quasi_neutrality_with_one_source():
    model = two_fluids(displacement=0, ionization=(1, 0))
    model.constraint("quasi-neutrality", "n_i = n_e")
    assert refused(model).laws == ("e continuity",)


@pytest.mark.parametrize(
    ("error", "wave"),
    [
        (lambda m, eta: -eta * (m.fields["B"] - components(0, 0, m.symbols["B_0"])), "ω = −i η"),
        (lambda m, eta: eta * laplacian(m.fields["B"]), "ω = −i η kx² − i η kz²"),
        (lambda m, eta: eta * laplacian(m.fields["E"]), None),
    ],
    ids=["decay", "diffusion", "resistive field"],
)
def test_an_error_in_faradays_law(error, wave):
    model = two_fluids(error=error)
    model.constraint("no monopoles", div(model.fields["B"]))
    said = refused(model)
    assert said.laws == ("Faraday",)
    assert (wave or "leaves") in str(said)
    assert ("Once zero it stays zero" in str(said)) == (wave is not None)


def test_resistivity_that_keeps_the_divergence():
    model = two_fluids(error=lambda m, eta: -curl(eta * curl(m.fields["B"])))
    model.constraint("no monopoles", div(model.fields["B"]))
    assert wave_of(model).forbidden_modes == 1


def test_a_local_gradient_is_named_as_the_reason():
    """n0 changes in div(n v) but not under the divergence of Ampere's current."""
    model = plin.FluidModel("electrons with a density gradient")
    e, eps0, c = model.parameters("e epsilon_0 c", positive=True)
    electric, magnetic = model.vector("E"), model.vector("B")
    n, v = model.scalar("n", "n_0", gradient=("g", 0, 0)), model.vector("v")
    model.law("continuity", partial_t(n) + div(n * v))
    model.law("momentum", partial_t(v), -e * electric)
    model.law("Faraday", partial_t(magnetic), -curl(electric))
    model.law("Ampere", partial_t(electric), c**2 * curl(magnetic) + e * n * v / eps0)
    model.constraint("Gauss", eps0 * div(electric), e * (model.symbols["n_0"] - n))
    error = refused(model)
    assert error.laws == ("continuity",)
    assert "leaves −e g ṽ_x from 'continuity'" in str(error)
    assert "gradient of a background is local" in str(error)


def test_a_field_that_no_law_evolves():
    error = refused(with_gauss(two_fluids(displacement=0)))
    assert "No law gives the time derivative of 'E'" in str(error)


def test_the_error_survives_pickling():
    error = refused(with_gauss(two_fluids(ionization=(1, 0))))
    again = pickle.loads(pickle.dumps(error))
    assert (str(again), again.laws) == (str(error), error.laws)


# What it forbids ---------------------------------------------------------------------------------

VALUES = {"n_e0": 1e16, "n_i0": 1e16, "B_0": 0.1, "T_e": 3e-19, "T_i": 3e-20}


def at_rest():
    return two_fluids(drift=False)


def test_forbidden_zero_modes_are_dropped():
    plain = wave_of(at_rest(), "x")
    model = with_gauss(at_rest())
    model.constraint("no monopoles", div(model.fields["B"]))
    wave = wave_of(model, "x")
    assert wave.relation.exact == plain.relation.exact
    assert plain.relation.zero_modes - wave.relation.zero_modes == wave.forbidden_modes == 2
    assert wave.relation.degree == plain.relation.degree
    assert "left out: 2 zero modes that a constraint forbids" in str(wave.relation)
    assert np.array_equal(wave.roots(VALUES, k=30.0).omega, plain.roots(VALUES, k=30.0).omega)
    all_modes = [w.roots(VALUES, zero_modes=True, k=30.0).shape[0] for w in (plain, wave)]
    assert all_modes == [14, 12]
    assert len(wave.branches("k", [30.0, 31.0], VALUES, zero_modes=True)) == 12


def test_one_of_two_is_dropped():
    wave = wave_of(with_gauss(at_rest()), "x")
    assert wave.relation.zero_mode_labels["constraint"] == 2
    assert wave.relation.zero_modes == wave.relation.exact.lowest - 1
    assert "ω⁵ = 0: 5 zero modes (3 wave, 1 constraint, 1 vortical)" in str(wave.relation)
    assert wave.relation.latex().endswith(r"\omega^{5} = 0")
    sweep = wave.branches("k", [30.0, 31.0], VALUES, zero_modes=True)
    assert sweep.label.count("constraint") == 1


def test_the_written_derivation_shows_the_proof(tmp_path):
    from plasmalin.present.report import derivation

    model = with_gauss(at_rest())
    text = derivation(wave_of(model, "x"), None)
    assert "## Constraints" in text
    assert "ω [Gauss] = " in text
    assert "zero modes, 1 more that a constraint forbids" in text


def test_a_memory_closure_beside_it():
    """Rows with a denominator in omega; and a law that is such a factor times another one."""
    for factor in (lambda x: x, lambda x: plin.multiplier(x, 1 / (plin.omega + 2 * sympy.I))):
        model = plin.FluidModel("light with memory")
        electric, magnetic = model.vector("E"), model.vector("B")
        nu = model.parameter("nu", positive=True)
        memory = plin.multiplier(electric, 1 / (plin.omega + sympy.I * nu))
        model.law("Faraday", factor(partial_t(magnetic) + curl(electric)))
        model.law("Ampere", partial_t(electric), curl(magnetic) - memory)
        model.constraint("no monopoles", div(magnetic))
        wave = wave_of(model)
        assert wave.forbidden_modes == 1
        assert error_of_the_identity(wave, wave.constraints[0]) < 1e-12
