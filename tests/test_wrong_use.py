"""Wrong use of what declares, linearizes and reads a relation: every mistake is named where it is made."""

import numpy as np
import pytest
import sympy

import plasmalin as plin
from plasmalin import DeclarationError, RankError, UndeterminedError, ValuesError, partial_t

NAN, INFINITE = float("nan"), float("inf")


def electrons(axes="x"):
    model = plin.FluidModel("warm electrons over fixed ions", axes=axes)
    n, v, phi = model.scalar("n_e", "n_0"), model.vector("v_e"), model.scalar("phi")
    e, eps0, m = model.constants("e epsilon_0 m_e")
    n0, t = model.parameters("n_0 T_e", positive=True)
    plin.laws.continuity(model, n, v)
    force = plin.laws.lorentz_force(n, -e, potential=phi)
    plin.laws.momentum(model, n, v, mass=m, force=force, pressure=n * t)
    plin.laws.poisson(model, phi, e * (n0 - n), epsilon_0=eps0)
    return model


@pytest.fixture
def model():
    return plin.FluidModel("plane", axes="xz")


@pytest.mark.parametrize(
    ("declare", "says"),
    [
        (lambda m: plin.FluidModel(None), "title=None"),
        (lambda m: plin.FluidModel("a", axes=3), "axes=3"),
        (lambda m: m.scalar(None), "None is not a name"),
        (lambda m: m.scalar("n", NAN), "nan holds a number that is not finite"),
        (lambda m: m.scalar("n", sympy.zoo), "not finite"),
        (lambda m: m.vector("v", (INFINITE, 0)), "not finite"),
        (lambda m: m.scalar("n", "n_0", "m**-3"), "the gradient 'm\\*\\*-3' does not fit the axes"),
        (lambda m: m.vector("v", gradient=(1, 2, 3)), "the gradient .* does not fit the axes"),
        (lambda m: m.vector_parameter("g", (1, 2, 3)), "the vector .* does not fit the axes"),
        (lambda m: m.scalar("n", latex=3), "latex=3 is not a text"),
        (lambda m: m.parameter("T", 3.0), "'T': positive=3.0 .* value="),
        (lambda m: m.parameters(None), "None holds no names"),
        (lambda m: m.parameters(""), "holds no names"),
        (lambda m: m.constants(""), "holds no names"),
        (lambda m: m.law(None, partial_t(m.scalar("n"))), "None is not a name for a law"),
        (lambda m: m.constraint(" ", m.scalar("n")), "not a name for a constraint"),
        (lambda m: m.law("a", m.scalar("n") * sympy.oo), "not finite"),
        (lambda m: electrons().linearize(assume=3), "assume=3"),
        (lambda m: electrons().linearize(assume="Poison"), "no law 'Poison'"),
    ],
)
def test_declarations(model, declare, says):
    with pytest.raises(DeclarationError, match=says):
        declare(model)


@pytest.mark.parametrize("value", ["2", NAN, INFINITE, 1j, True, np.array([1.0, 2.0])])
def test_a_default_is_a_finite_real_number(model, value):
    with pytest.raises(ValuesError, match=r"the default of 'T' is .* finite real number"):
        model.parameter("T", value=value)
    assert "T" not in model.symbols


@pytest.mark.parametrize("value", [0, -1.0])
def test_a_positive_default_is_positive(model, value):
    with pytest.raises(ValuesError, match="'T' is declared positive"):
        model.parameter("T", positive=True, value=value)


@pytest.mark.parametrize("power", [sympy.sqrt, sympy.log, lambda n: 1 / n])
def test_a_law_without_a_slope_on_the_background(model, power):
    n = model.scalar("n")
    model.law("growth", partial_t(n) + model.parameter("a") * power(n))
    with pytest.raises(plin.BackgroundError, match="law 'growth'"):
        model.linearize()


def test_a_model_without_laws(model):
    with pytest.raises(UndeterminedError, match="no laws"):
        model.linearize()


def test_a_law_repeats_another_up_to_a_parameter(model):
    n, a = model.scalar("n"), model.parameter("a")
    model.law("growth", partial_t(n) + a * n)
    with pytest.raises(DeclarationError, match="'again' repeats law 'growth'"):
        model.law("again", a**2 * partial_t(n) + a**3 * n)


@pytest.mark.parametrize(
    ("ask", "says"),
    [
        (lambda w: w.linear.ledger.of("Gauss"), "no law 'Gauss' in this ledger"),
        (lambda w: w.linear.ledger.with_fate("lost"), "no fate 'lost'"),
        (lambda w: w.linear.plane_wave((NAN,)), "nan is not a component"),
        (lambda w: w.linear.plane_wave((w.linear.fields["n_e"],)), "n_e is not a component"),
        (lambda w: w.linear.plane_wave(("omega",)), "'omega' is not a component"),
        (
            lambda w: electrons("xz").linearize().plane_wave(angle="k"),
            "the angle cannot be named k",
        ),
        (lambda w: electrons("xz").linearize().plane_wave(angle="T_e"), "'T_e' is a parameter"),
        (lambda w: w.reduce(), "name the fields that stay"),
        (lambda w: w.relation.substitute(None), "values must be a mapping"),
        (lambda w: w.relation.leading(None), "orders must be a mapping"),
        (
            lambda w: w.relation.normalise(time="1", length="1", where=["a"]),
            "where must be a mapping",
        ),
        (lambda w: w.relation.solve_for(None), "'None' is not in the relation"),
    ],
)
def test_questions(ask, says):
    wave = electrons().linearize().plane_wave("x")
    with pytest.raises(DeclarationError, match=says):
        ask(wave)


def test_values_of_a_substitution():
    relation = electrons().linearize().plane_wave("x").relation
    with pytest.raises(ValuesError, match="'T_e' = array"):
        relation.substitute({"T_e": np.array([1, 2])})
    assert str(relation.substitute({"T_e": "3*m_e"})) == "ω² − 3 k² − e² n_0/(ε_0 m_e) = 0"
    assert "ω does not occur" in str(relation.substitute({"m_e": 0}))


@pytest.mark.parametrize("seed", ["a", -1, 1.5])
def test_the_seed_of_an_audit(seed):
    with pytest.raises(ValuesError, match="seed="):
        electrons().linearize().audit(seed=seed)


@pytest.mark.parametrize(
    ("species", "says"),
    [
        (lambda: plin.Species(3, -1, 1.0, 1.0), "species 3"),
        (lambda: plin.mixture(["e", "i"]), "'e' is not a species"),
        (lambda: plin.mixture(pair(), axes="x", magnetic_field=0.02), "needs axes"),
        (lambda: plin.mixture(pair(), magnetic_field=0.02), "magnetic_field .* per axis"),
        (lambda: plin.mixture(pair(drift="north"), axes="x"), "drift='north'"),
    ],
)
def test_mixtures(species, says):
    with pytest.raises(DeclarationError, match=says):
        species()


def pair(**options):
    m_e, m_p = plin.constants.m_e, plin.constants.m_p
    return [plin.Species("e", -1, m_e, 1e16, 2.0, **options), plin.Species("p", 1, m_p, 1e16)]


def test_numbers_of_a_mixture_may_be_numpys():
    electrons = plin.Species("e", np.int64(-1), plin.constants.m_e, np.float64(1e16), 2.0)
    protons = plin.Species("p", 1, plin.constants.m_p, 1e16, drift=np.array([0, 0, 10.0]))
    field = np.array([0.0, 0.0, 0.02])
    model = plin.mixture([electrons, protons], magnetic_field=field)
    assert model.values["B_0z"] == 0.02
    assert model.values["u_p_z"] == 10.0


def test_a_file_that_cannot_be_written(tmp_path):
    with pytest.raises(FileNotFoundError, match=r"nowhere/model\.toml"):
        electrons().save(tmp_path / "nowhere" / "model.toml")


def test_text_where_an_expression_is_needed():
    with pytest.raises(RankError, match="declare the name"):
        partial_t("n")
