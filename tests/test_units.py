"""Units: read from text, checked in every law term by term, and kept with every number."""

import math
from fractions import Fraction

import numpy as np
import pytest
import scipy.constants
import sympy
from hypothesis import given, settings
from hypothesis import strategies as st

import plasmalin as plin
from plasmalin import advect, curl, div, dot, grad, laplacian, multiplier, outer, partial_t
from plasmalin.declare.constants import CODATA, UNITS
from plasmalin.declare.units import BASE, PREFIXES, SI, dimension, dimension_text, read_unit

E = plin.constants.e


def powers(**given):
    return tuple(Fraction(given.get(base, 0)) for base in BASE)


# Text --------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("text", "scale", "expected"),
    [
        ("m**-3", 1, powers(m=-3)),
        ("m^-3", 1, powers(m=-3)),
        ("m⁻³", 1, powers(m=-3)),
        ("m-3", 1, powers(m=-3)),
        ("cm**-3", 10**6, powers(m=-3)),
        ("eV", Fraction("1.602176634e-19"), powers(m=2, kg=1, s=-2)),
        ("keV", Fraction("1.602176634e-16"), powers(m=2, kg=1, s=-2)),
        ("kg m/s**2", 1, powers(m=1, kg=1, s=-2)),
        ("kg m^-3 s^-1", 1, powers(m=-3, kg=1, s=-1)),
        ("T", 1, powers(kg=1, s=-2, A=-1)),
        ("gauss", Fraction(1, 10**4), powers(kg=1, s=-2, A=-1)),
        ("V/m", 1, powers(m=1, kg=1, s=-3, A=-1)),
        ("1", 1, powers()),
        ("rad/s", 1, powers(s=-1)),
        ("GHz", 10**9, powers(s=-1)),
        ("mTorr", Fraction(101325, 760000), powers(m=-1, kg=1, s=-2)),
        ("1/m**3", 1, powers(m=-3)),
        ("J/(mol K)", 1, powers(m=2, kg=1, s=-2, mol=-1, K=-1)),
        ("cm^(1/2)", Fraction(1, 10), powers(m=Fraction(1, 2))),
        ("kilogram * meter ** 2 / ampere / second ** 3", 1, powers(m=2, kg=1, s=-3, A=-1)),
        ("kg m2 / (s3 A)", 1, powers(m=2, kg=1, s=-3, A=-1)),
        ("um", Fraction(1, 10**6), powers(m=1)),
        ("Pa", 1, powers(m=-1, kg=1, s=-2)),
        ("kΩ", 1000, powers(m=2, kg=1, s=-3, A=-2)),
    ],
)
def test_units_as_written(text, scale, expected):
    unit = read_unit(text)
    assert (unit.scale, unit.dimension) == (scale, expected)


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("G", "gauss to some and giga to others"),
        ("kG", "gauss to some and giga to others"),
        ("ev", "did you mean eV"),
        ("furlong", "not a known unit"),
        ("kg/m s", "two ways"),
        ("m^", "whole number, or a fraction"),
        ("m^99", "beyond 24"),
        ("3 m", "number other than 1"),
        ("m*", "missing at the end"),
        ("kg//m", "'/' stands where a unit is needed"),
        ("(m", r"a '\)' is missing"),
        ("m)", r"'\)' is not expected"),
        ("m$", "no meaning here"),
        ("m^(1/0)", "division by zero"),
        ("kg g^(1/2)", "no exact scale"),
        ("m" * 200, "200 characters"),
        ("__import__('os')", "no meaning here"),
    ],
)
def test_units_that_cannot_be_read(text, message):
    with pytest.raises(plin.UnitError, match=message):
        read_unit(text)


def test_a_unit_that_is_not_text():
    with pytest.raises(plin.UnitError, match="given as text"):
        plin.FluidModel("x").parameter("a", unit=1.0)


@settings(deadline=None)
@given(
    st.lists(
        st.tuples(
            st.sampled_from(sorted(SI)), st.sampled_from(["", *PREFIXES]), st.integers(-2, 2)
        ),
        min_size=1,
        max_size=3,
    )
)
def test_products_of_units_multiply(factors):
    text = " ".join(f"{prefix}{name}^{power}" for name, prefix, power in factors)
    unit = read_unit(text)
    scale = math.prod(Fraction(10) ** (PREFIXES.get(p, 0) * n) for _, p, n in factors)
    total = [Fraction(0)] * 7
    for name, _, n in factors:
        total = [a + b * n for a, b in zip(total, dimension(*SI[name]), strict=True)]
    assert (unit.scale, unit.dimension) == (scale, tuple(total))
    assert read_unit(dimension_text(unit.dimension).partition(" (")[0]).dimension == unit.dimension


@pytest.mark.parametrize("name", list(CODATA))
def test_constants_have_the_units_of_the_codata_table(name):
    listed = read_unit(scipy.constants.physical_constants[CODATA[name]][1])
    assert (read_unit(UNITS[name]).dimension, listed.scale) == (listed.dimension, 1)


# Laws --------------------------------------------------------------------------------------------


@pytest.fixture
def model():
    """Warm electrons over fixed ions; n_0 has its unit from the field whose background it is."""
    made = plin.FluidModel("warm electrons", axes="x")
    made.scalar("n_e", background="n_0", unit="m**-3")
    made.vector("v_e", unit="m/s")
    made.scalar("phi", unit="V")
    made.constants("e epsilon_0 m_e")
    made.parameter("T_e", positive=True, unit="eV", value=2.0)
    made.parameter("gamma_e", positive=True, value=1.0)
    made.parameter("n_0", positive=True, value=1e16)
    return made


LAWS = {
    "continuity": "partial_t(n_e) + div(n_e*v_e) = 0",
    "momentum": "m_e*n_e*(partial_t(v_e) + advect(v_e, v_e)) = e*n_e*grad(phi) - grad(n_0*T_e*(n_e/n_0)^gamma_e)",
    "Poisson": "epsilon_0*laplacian(phi) = e*(n_e - n_0)",
}


@pytest.fixture
def wave(model):
    for name, text in LAWS.items():
        model.law(name, text)
    return model.linearize().plane_wave("x")


def test_right_laws_pass_and_open_units_follow(wave):
    assert wave.linear.dimensions.of("gamma_e") == powers()
    assert wave.linear.dimensions.of("n_0") == powers(m=-3)


@pytest.mark.parametrize(
    ("text", "message"),
    [
        (
            "epsilon_0*laplacian(phi) = n_e - n_0",
            r"law 'bad': 'epsilon_0\*laplacian\(phi\)' is in .*C/m\^3.*'-?n_",
        ),
        ("partial_t(n_e) + grad(phi) = 0", "scalar"),
        (
            "m_e*n_e*partial_t(v_e) = -grad(T_e)",
            r"'m_e\*n_e\*partial_t\(v_e\)'.*'-grad\(T_e\)' is in kg m s\^-2 \(N\)",
        ),
        (
            "epsilon_0*laplacian(phi) = e*n_0*exp(phi/T_e) - e*n_0",
            r"'phi/T_e' must be dimensionless.*argument of exp",
        ),
        ("partial_t(n_e) = n_e^T_e", "'T_e' must be dimensionless, as it is the exponent of n_e"),
        ("partial_t(n_e) = n_0*n_e^gamma_e", r"m\^\(-3\*gamma_e - 3\)"),
        ("partial_t(n_e) = -multiplier(n_e, k_abs)", r"'-multiplier\(n_e, k_abs\)' is in m\^-4"),
        ("partial_t(n_e) = n_e + 1", "dimensionless"),
        ("m_e*partial_t(v_e) = e*grad(phi - 3)", "a number that carries a unit needs a name"),
        ("partial_t(n_e) = n_e*dot(v_e, grad(n_e))", r"m\^-6 s\^-1"),
    ],
)
def test_mismatches_by_name(model, text, message):
    before = dict(model.laws)
    with pytest.raises((plin.UnitError, plin.RankError), match=message):
        model.law("bad", text)
    assert model.laws == before


def test_unit_error_is_one_of_ours_and_a_value_error():
    assert issubclass(plin.UnitError, plin.PlasmalinError)
    assert issubclass(plin.UnitError, ValueError)


def test_powers_that_belong_together(model):
    """n_0^(1 - gamma) n^gamma is a density whatever gamma is; C n^gamma a pressure for some C."""
    model.law("split", "partial_t(n_0^(1 - gamma_e)*n_e^gamma_e) = -n_0*div(v_e)")
    model.parameter("C")
    model.law("polytrope", "m_e*n_e*partial_t(v_e) = -grad(C*n_e^gamma_e)")


def test_every_operator():
    model = plin.FluidModel("operators")
    v, b = model.vector("v", unit="m/s"), model.vector("b", unit="T")
    t = model.tensor("t", unit="Pa")
    given = {"rho": "kg/m^3", "mu_0": "H/m", "nu": "m^2/s"}
    rho, mu, nu = (model.parameter(name, unit=unit) for name, unit in given.items())
    terms = [
        rho * partial_t(v), rho * advect(v, v), div(t), div(rho * outer(v, v)), rho * nu * laplacian(v),
        plin.cross(curl(b), b) / mu, grad(plin.trace(t)), grad(dot(b, b) / mu), div(plin.transpose(t)),
        rho * nu * grad(div(v)), div(rho * nu * plin.transpose(grad(v))), grad(plin.norm(b) ** 2 / mu),
        div(plin.identity * plin.ddot(t, t) / plin.trace(t)), multiplier(rho * v, plin.omega),
        multiplier(rho * nu * v, plin.k_x * plin.k_abs), grad(sympy.sqrt(dot(b, b)) * plin.norm(b) / mu),
        rho * plin.norm(v) * v * model.parameter("K", unit="1/m"),
    ]  # fmt: skip
    model.law("force", sympy.Add(*terms))
    for extra in (v, 2 * rho * v, rho * curl(v), grad(dot(b, b))):
        with pytest.raises(plin.UnitError, match="law 'wrong'"):
            model.law("wrong", sympy.Add(*terms) + extra)


def test_ready_laws_have_the_units_that_their_docstrings_say():
    model, laws = plin.FluidModel("every ready law"), plin.laws
    n, rho, p, p_par, p_perp, temperature, phi, psi, q = (
        model.scalar(name, unit=unit, background=f"{name}_0")
        for name, unit in {
            "n": "m^-3", "rho": "kg/m^3", "p": "Pa", "p_par": "Pa", "p_perp": "Pa", "T": "eV", "phi": "V", "psi": "m^2/s^2", "q": "C",
        }.items()
    )  # fmt: skip
    v, w, electric, magnetic = (
        model.vector(name, unit=unit)
        for name, unit in {"v": "m/s", "w": "m/s", "E": "V/m", "B": "T"}.items()
    )
    mass, nu, eta, mu, kappa, gamma, alpha, v_t, current, source = (
        model.parameter(name, positive=True, unit=unit)
        for name, unit in {
            "mass": "kg", "nu": "1/s", "eta": "ohm m", "mu": "Pa s", "kappa": "1/(m s)", "gamma": "1",
            "alpha": "N s m^2", "v_t": "m/s", "I_e": "A", "S": "m^-3 s^-1",
        }.items()
    )  # fmt: skip
    e, eps_0, mu_0, c, hbar, big_g = model.constants("e epsilon_0 mu_0 c hbar G")
    n_0, t_0 = model.symbols["n_0"], model.symbols["T_0"]
    spin = model.vector_parameter("spin", (0, 0, "Omega"), unit="rad/s")
    lorentz = laws.lorentz_force(n, e, electric=electric, potential=phi, magnetic=magnetic, v=v)
    drag = laws.neutral_friction(n, v, mass, nu) + laws.friction(n, v, n, w, alpha)
    other = (
        laws.source_momentum(mass, source, v)
        + laws.viscous_force(v, mu)
        + laws.bohm_force(n, mass, hbar)
    )
    pressure = p + n * temperature + laws.polytropic_pressure(n, n_0, t_0, gamma) + p_par + p_perp
    laws.continuity(model, n, v, source)
    laws.momentum(model, n, v, mass=mass, force=lorentz + drag + other, pressure=pressure)
    laws.relativistic_momentum(model, n, w, mass=mass, c=c, force=e * n * electric)
    body = laws.gravity_force(rho, potential=psi) + laws.rotation_force(rho, v, spin)
    model.law("MHD", rho * partial_t(v), laws.magnetic_force(magnetic, mu_0) + body)
    model.law("viscous", rho * partial_t(v), div(mu * laws.strain_rate(v)))
    laws.adiabatic_pressure(model, p, v, gamma, heating=laws.frictional_heat(n, v, n, w, alpha))
    loss = laws.landau_heat_loss(temperature, n_0, v_t)
    laws.energy(model, temperature, n, v, gamma, conductivity=kappa, heating=-loss)
    laws.double_adiabatic(model, n, v, magnetic, p_par, p_perp)
    laws.poisson(model, phi, e * (n - laws.boltzmann_density(n_0, e, t_0, phi)), epsilon_0=eps_0)
    laws.maxwell(model, electric, magnetic, e * n * v, mu_0=mu_0, epsilon_0=eps_0)
    laws.self_gravity(model, psi, rho, big_g=big_g)
    hall = (laws.magnetic_force(magnetic, mu_0) - grad(p)) / (e * n)
    laws.induction(model, magnetic, v, resistivity=eta, mu_0=mu_0, hall=hall)
    laws.grain_charge(model, q, v, current, 2 * current)
    with pytest.raises(plin.UnitError, match="law 'wrong'"):
        laws.continuity(model, n, w, nu, name="wrong")


def test_no_units_no_check():
    model = plin.FluidModel("normalized", axes="x")
    model.scalar("n", background=1)
    model.vector("v")
    model.law("continuity", "partial_t(n) + div(n*v) = 0.5*n")
    model.law("momentum", "partial_t(v) = -grad(n) - 3*v")


def test_open_units_give_no_false_alarm(model):
    """With some units declared, the others are solved for; numbers stay dimensionless."""
    model.parameters("nu D S")
    model.law("continuity", "partial_t(n_e) + div(n_e*v_e) = S - nu*n_e + D*laplacian(n_e)")
    found = [model.dimensions.of(n) for n in ("nu", "D", "S")]
    assert found == [powers(s=-1), powers(m=2, s=-1), powers(m=-3, s=-1)]


def test_contradiction_between_laws_names_what_follows(model):
    model.parameter("X")
    model.law("one", "partial_t(n_e) = X*n_e")
    with pytest.raises(
        plin.UnitError, match=r"law 'two'.*X in s\^-1: this follows from the other laws"
    ):
        model.law("two", "n_e*partial_t(v_e) = X*grad(n_e)")
    with pytest.raises(plin.UnitError, match="law 'one'"):
        model.parameter("X", unit="m/s")
    model.remove_law("one")
    model.parameter("X", unit="m^2/s^2")
    model.law("two", "n_e*partial_t(v_e) = X*grad(n_e)")


def test_units_declared_late_are_checked():
    late = plin.FluidModel("late", axes="x")
    late.scalar("n")
    late.parameter("a")
    late.law("decay", "partial_t(n) = -a*n")
    with pytest.raises(plin.UnitError, match="law 'decay'"):
        late.parameter("a", unit="m")
    late.parameter("a", unit="1/s")


def test_kelvin_for_an_energy(model):
    model.parameter("T_K", unit="K")
    with pytest.raises(
        plin.UnitError, match=r"a temperature in the equations is an energy.*k_B\*T"
    ):
        model.law("momentum", "m_e*n_e*partial_t(v_e) = -T_K*grad(n_e)")
    model.constants("k_B")
    model.law("momentum", "m_e*n_e*partial_t(v_e) = -k_B*T_K*grad(n_e)")


def test_backgrounds(model):
    with pytest.raises(
        plin.UnitError, match=r"field 'p': 'T_e\*n_0' is in .*Pa.*'the field p' is in .*\(V\)"
    ):
        model.scalar("p", background="n_0*T_e", unit="V")
    assert "p" not in model.units
    model.scalar("p", background="n_0*T_e", unit="Pa")
    model.scalar("q", background=3, unit="mT")
    assert model.fields["q"].background == sympy.Rational(3, 1000)
    model.vector("u", background=("u_0",), gradient=(("a",),), unit="km/s")
    assert model.units["u_0"].text == "km/s"
    assert model.dimensions.of("a") == powers(s=-1)


def test_a_background_name_that_would_be_read_in_another_unit(model):
    model.parameter("n_1")
    with pytest.raises(plin.UnitError, match=r"model.parameter\('n_1', unit='cm\*\*-3'\)"):
        model.scalar("n_i", background="n_1", unit="cm**-3")


def test_vector_parameters(model):
    g = model.vector_parameter("g", ("-g_0",), unit="m/s^2")
    assert model.units["g_0"].text == "m/s^2"
    model.law("fall", partial_t(model.fields["v_e"]), g)
    with pytest.raises(plin.UnitError, match="name it with a parameter"):
        model.vector_parameter("h", (9.81,), unit="m/s^2")


# Numbers -----------------------------------------------------------------------------------------


def test_plain_numbers_are_in_the_declared_unit(wave):
    """Bohm and Gross 1949 (from memory): omega^2 = omega_pe^2 + gamma k^2 T/m, with T = 2 eV."""
    omega = np.sqrt(
        1e16 * E**2 / plin.constants.epsilon_0 / plin.constants.m_e
        + 1e8 * 2 * E / plin.constants.m_e
    )
    defaults = wave.linear.defaults
    assert defaults["T_e"] == 2.0
    for values in ({}, {"T_e": 2.0}, defaults, {"T_e": np.array(2.0)}):
        assert np.asarray(wave.roots(values, k=1e4)) == pytest.approx([-omega, omega], rel=1e-14)
    assert np.asarray(wave.roots({"T_e": [1.0, 2.0]}, k=1e4))[1] == pytest.approx(
        [-omega, omega], rel=1e-14
    )


def test_a_model_s_values_go_back_as_they_are():
    plasma = plin.mixture(
        [
            plin.Species("e", -1, plin.constants.m_e, 2e16, temperature_eV=3.0),
            plin.Species("Xe", 1, 131.293 * plin.constants.u, 2e16, temperature_eV=0.1, gamma=3),
        ],
        axes="x",
    )
    wave = plasma.linearize().plane_wave("x")
    assert plasma.values["T_e"] == pytest.approx(3 * E)
    assert np.all(wave.roots(plasma.values, k=1e3).omega == wave.roots(k=1e3).omega)


def test_branches_along_a_parameter_in_its_unit(wave):
    branches = wave.branches("T_e", [1.99, 2.0, 2.01], k=1e4)
    assert list(branches.along) == [1.99, 2.0, 2.01]
    assert branches.omega[:, 1] == pytest.approx(wave.roots(k=1e4).omega)
    rise = (branches.omega[1, 2] - branches.omega[1, 0]) / 0.02
    assert branches.slope[1, 1] == pytest.approx(rise, rel=1e-3)


def test_redeclaring_a_unit_moves_the_number(model):
    model.parameter("T_e", positive=True, unit="keV")
    assert model.values["T_e"] == pytest.approx(0.002)
    with pytest.raises(plin.UnitError, match="'T_e' is in keV already"):
        model.parameter("T_e", positive=True, unit="K")


def test_files_keep_units(model, wave, tmp_path):
    model.scalar("B", background=3, unit="mT")
    model.save(tmp_path / "m.toml")
    again = plin.load(tmp_path / "m.toml")
    assert again.values == model.values
    assert again.units == model.units
    assert again.fields["B"].background == sympy.Rational(3, 1000)
    text = (tmp_path / "m.toml").read_text()
    (tmp_path / "bad.toml").write_text(text.replace('unit = "V"', 'unit = "volts"'))
    with pytest.raises(plin.ModelFileError, match=r"\[\[scalar\]\] phi: unit 'volts'"):
        plin.load(tmp_path / "bad.toml")
    (tmp_path / "bad.toml").write_text(text.replace('unit = "V"', 'unit = "V/m"'))
    with pytest.raises(plin.ModelFileError, match="law 'momentum'"):
        plin.load(tmp_path / "bad.toml")


# Quantity objects --------------------------------------------------------------------------------


class Magnitude:
    """Quantities that answer to_base_units(), magnitude, units."""

    def __init__(self, magnitude, units):
        self.magnitude, self.units = magnitude, units

    def to_base_units(self):
        unit = read_unit(self.units)
        return Magnitude(self.magnitude * float(unit.scale), LONG[unit.dimension])


class Si:
    """Quantities that answer si, value, unit."""

    def __init__(self, value, unit):
        self.value, self.unit = value, unit

    @property
    def si(self):
        unit = read_unit(self.unit)
        return Si(self.value * float(unit.scale), SHORT[unit.dimension])


class Mks(np.ndarray):
    """Arrays that answer in_mks(), value, units."""

    def __new__(cls, value, units):
        made = np.asarray(value, float).view(cls)
        made.units = units
        return made

    @property
    def value(self):
        return np.asarray(self)

    def in_mks(self):
        unit = read_unit(self.units)
        return Mks(self.value * float(unit.scale), STARS[unit.dimension])


ENERGY, PER_METER, KELVIN, DENSITY = (read_unit(x).dimension for x in ("J", "1/m", "K", "m^-3"))
MASS, SPEED, RATE, FIELD = (read_unit(x).dimension for x in ("kg", "m/s", "1/s", "T"))
LONG = {
    ENERGY: "kilogram * meter ** 2 / second ** 2",
    PER_METER: "1 / meter",
    KELVIN: "kelvin",
    DENSITY: "1 / meter ** 3",
    MASS: "kilogram",
    SPEED: "meter / second",
    RATE: "1 / second",
    FIELD: "kilogram / ampere / second ** 2",
}
SHORT = {ENERGY: "kg m2 / s2", PER_METER: "1 / m", KELVIN: "K", DENSITY: "1 / m3"}
SHORT |= {MASS: "kg", SPEED: "m / s", RATE: "1 / s", FIELD: "kg / (A s2)"}
STARS = {ENERGY: "kg*m**2/s**2", PER_METER: "m**(-1)", KELVIN: "K", DENSITY: "m**(-3)"}
STARS |= {MASS: "kg", SPEED: "m/s", RATE: "s**(-1)", FIELD: "kg/(A*s**2)"}


@pytest.mark.parametrize("kind", [Magnitude, Si, Mks])
def test_quantities_of_the_common_kinds(wave, kind):
    expected = wave.roots({"T_e": 3.0}, k=1e4).omega
    assert wave.roots({"T_e": kind(3.0, "eV")}, k=kind(100.0, "1/cm")).omega == pytest.approx(
        expected
    )
    grid = kind(np.array([100.0, 200.0]), "1/cm")
    assert wave.roots({"T_e": kind(0.003, "keV")}, k=grid).omega[0] == pytest.approx(expected)
    assert wave.branches("k", grid, {"T_e": 3.0}).along == pytest.approx([1e4, 2e4])
    assert wave.branches("T_e", kind(np.array([3.0, 4.0]), "eV"), k=1e4).along == pytest.approx(
        [3, 4]
    )
    several = [kind(3.0, "eV"), kind(4.0, "eV")]
    assert wave.roots({"T_e": several}, k=1e4).omega[0] == pytest.approx(expected)


@pytest.mark.parametrize("kind", [Magnitude, Si, Mks])
def test_quantities_of_the_wrong_dimension(wave, kind):
    with pytest.raises(plin.UnitError, match=r"value of 'T_e' is in K.*in eV.*is an energy"):
        wave.roots({"T_e": kind(3.0, "K")}, k=1e4)
    with pytest.raises(
        plin.UnitError, match=r"value of 'k' is in kg m\^2 s\^-2 \(J\), but 'k' is in m\^-1"
    ):
        wave.roots(k=kind(3.0, "eV"))
    with pytest.raises(plin.UnitError, match="value of 'gamma_e' is in K"):
        wave.roots({"gamma_e": kind(3.0, "K")}, k=1e4)


def test_a_quantity_as_default(model):
    model.parameter("T_i", unit="eV", value=Si(0.003, "keV"))
    model.parameter("T_d", value=Si(2.0, "eV"))
    assert model.values["T_i"] == pytest.approx(3.0)
    assert model.values["T_d"] == pytest.approx(2 * E)
    with pytest.raises(plin.UnitError, match="is in K"):
        model.parameter("T_j", unit="eV", value=Si(300.0, "K"))
    with pytest.raises(plin.ValuesError, match="single number"):
        model.parameter("T_j", unit="eV", value=Si(np.ones(2), "eV"))


@pytest.mark.parametrize("kind", [Magnitude, Si, Mks])
def test_a_mixture_of_quantities(kind):
    """The same plasma by quantity objects and by plain numbers in the documented units."""
    shared = {"axes": "xyz", "field": "electrostatic"}
    plain = plin.mixture(
        [
            plin.Species("e", -1, 9e-31, 2e16, 3.0, drift=(0, 0, 1e5)),
            plin.Species("i", 1, 6e-26, 2e16, 0.1, collision_frequency=2e3),
        ],
        magnetic_field=(0, 0, 0.02),
        **shared,
    )
    drift = [kind(x, "km/s") for x in (0.0, 0.0, 100.0)]
    given = plin.mixture(
        [
            plin.Species(
                "e", -1, kind(9e-28, "g"), kind(2e10, "cm^-3"), kind(3.0, "eV"), drift=drift
            ),
            plin.Species(
                "i",
                1,
                kind(6e-26, "kg"),
                kind(2e16, "m^-3"),
                kind(1e-4, "keV"),
                collision_frequency=kind(2.0, "kHz"),
            ),
        ],
        magnetic_field=kind(np.array([0.0, 0.0, 200.0]), "gauss"),
        **shared,
    )
    assert given.values == pytest.approx(plain.values, rel=1e-14)
    assert type(given.values["m_e"]) is float


def test_a_mixture_of_the_wrong_quantities():
    with pytest.raises(plin.UnitError, match=r"temperature_eV of e' is in K.*is an energy"):
        plin.Species("e", -1, 9e-31, 1e16, Si(300.0, "K"))
    with pytest.raises(plin.UnitError, match=r"mass of e' is in kg m\^2"):
        plin.Species("e", -1, Si(5.0, "keV"), 1e16)
    with pytest.raises(plin.DeclarationError, match=r"density = .*give a finite positive number"):
        plin.Species("e", -1, 9e-31, Si(np.ones(2), "m^-3"))
    with pytest.raises(plin.UnitError, match="value of 'magnetic_field' is in K"):
        plin.mixture([plin.Species("e", 1, 9e-31, 1e16)], magnetic_field=Si(np.ones(3), "K"))


def test_a_foreign_unit_that_is_not_understood(wave):
    strange = Si(1.0, "J")
    SHORT_BEFORE = dict(SHORT)
    SHORT[ENERGY] = "parsec"
    try:
        with pytest.raises(plin.UnitError, match="'T_e' has a unit that is not understood"):
            wave.roots({"T_e": strange}, k=1.0)
    finally:
        SHORT.update(SHORT_BEFORE)


# Any part of the right units -----------------------------------------------------------------------

RIGHT = {
    "n_e": "m^-3", "v_e": "m/s", "phi": "V", "q": "C", "eps": "F/m", "M": "kg", "T_e": "keV", "gamma_e": "1",
    "n_0": "cm^-3", "nu": "1/s",
}  # fmt: skip
TEXTS = (
    "partial_t(n_e) + div(n_e*v_e) = nu*n_e",
    "M*n_e*(partial_t(v_e) + advect(v_e, v_e)) = q*n_e*grad(phi) - grad(n_0*T_e*(n_e/n_0)^gamma_e)",
    "eps*laplacian(phi) = q*n_0*(exp(phi*q/T_e) - 1) + q*(n_e - n_0)",
)


def declared(units, order):
    model = plin.FluidModel("part of the units", axes="x")
    model.scalar("n_e", unit=units.get("n_e"))
    model.vector("v_e", unit=units.get("v_e"))
    model.scalar("phi", unit=units.get("phi"))
    names = [n for n in RIGHT if n not in ("n_e", "v_e", "phi")]
    early, late = names[: len(names) // 2], names[len(names) // 2 :]
    for name in names:
        model.parameter(name, positive=True, unit=units.get(name) if name in early else None)
    for i in order:
        model.law(f"law {i}", TEXTS[i])
    for name in late:
        model.parameter(name, positive=True, unit=units.get(name))
    return model


@settings(max_examples=30, deadline=None)
@given(st.sets(st.sampled_from(sorted(RIGHT))), st.permutations(range(3)))
def test_no_part_of_the_right_units_is_an_alarm(names, order):
    model = declared({n: RIGHT[n] for n in names}, order)
    for name, unit in RIGHT.items():
        found = model.dimensions.of(name)
        assert found in (None, read_unit(unit).dimension)


@settings(max_examples=20, deadline=None)
@given(st.sampled_from(sorted(RIGHT)), st.sampled_from(["m", "K", "s/kg", "A^2"]), st.permutations(range(3)))  # fmt: skip
def test_one_wrong_unit_is_always_found(name, wrong, order):
    with pytest.raises(plin.UnitError, match="law 'law"):
        declared({**RIGHT, name: wrong}, order)
