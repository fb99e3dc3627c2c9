"""Advice: what the laws tell of each species, and where the fluid description is outside its range.

Numbers of the NRL Plasma Formulary are those of cases/handbook-numbers.toml (most from memory, as the file says).
"""

import numpy as np
import published
import published_more
import pytest
import sympy

import plasmalin as plin
from plasmalin import Species, advect, cross, div, dot, grad, identity, laplacian, outer, partial_t
from plasmalin.waves.species import fluids, screening

E, ME, MP, U = plin.constants.e, plin.constants.m_e, plin.constants.m_p, plin.constants.u
HANDBOOK = {
    entry["name"].split(",")[0]: entry for entry in published.read("handbook-numbers")["numbers"]
}


def subjects(advice, words):
    return [r.subject for r in advice.about(words)]


def electrons(*, direction="x", axes="x", n=1e6, t=1.0, gamma=3, **options):
    """Electrons over protons of the same density, numbers as in the handbook's formulas by default."""
    drift = options.pop("drift", ())
    friction = options.pop("collision_frequency", 0.0)
    plasma = plin.mixture(
        [
            Species("e", -1, ME, n, t, gamma, drift, friction),
            Species("p", 1, MP, n, 0.01 * t, 3),
        ],
        axes=axes,
        **options,
    )
    return plasma.linearize().plane_wave(direction)


# What the laws tell ------------------------------------------------------------------------------


def test_species_are_read_from_the_laws_not_from_names():
    """Odd names, a law per particle with its sign turned, an energy law for the pressure."""
    model = plin.FluidModel("odd names")
    q, mass, w0, p0 = model.parameters("q mass w0 p0", positive=True)
    b = model.parameter("b")
    w, s = model.scalar("w", background=w0), model.scalar("s", background=p0)
    a, z = model.vector("a", background=(0, 0, "a0")), model.scalar("z")
    model.law("one", partial_t(w) + div(w * a))
    model.law(
        "two",
        q * (grad(z) + cross(plin.components(0, 0, b), a)) + grad(s) / w,
        -mass * (partial_t(a) + advect(a, a)),
    )
    model.law("three", partial_t(s) + advect(a, s) + sympy.Rational(5, 3) * s * div(a))
    model.law("four", laplacian(z), -3 * q * (w - w0))
    (found,) = fluids(model.linearize())
    assert (found.name, found.velocity, found.density) == ("a", a, w)
    assert (found.number, found.mass) == (w0, mass)
    assert [(c.field, c.charge, c.response) for c in found.couplings] == [("z", q, 3 * q * w0)]
    assert found.gyration == (0, 0, q * b)
    assert found.temperature == p0 / w0
    assert sympy.simplify(found.stiffness / found.temperature) == sympy.Rational(5, 3)


def test_law_divided_by_the_mass_is_told_from_the_field_law():
    """d_t v = (e/m) grad phi − (T/m) grad n / n: the charge follows from Poisson's law, the mass from it."""
    model = plin.FluidModel("per mass", axes="x")
    e, m, eps0 = model.constants("e m_e epsilon_0")
    n0, t = model.parameters("n0 temp", positive=True)
    n, v, phi = model.scalar("n", background=n0), model.vector("v"), model.scalar("phi")
    model.law("c", partial_t(n) + div(n * v))
    model.law("m", partial_t(v) + advect(v, v), e / m * grad(phi) - t / m * grad(n) / n)
    model.law("p", laplacian(phi), e / eps0 * (n - n0))
    wave = model.linearize().plane_wave("x")
    advice = wave.advice({"n0": 1e30, "temp": E}, k=1.0)
    fermi = 3.646e-15 * (1e24) ** (2 / 3)  # eV with n per cm^3, the constant from memory
    (remark,) = advice.about("Fermi")
    assert remark.number == pytest.approx(1 / fermi, rel=1e-3)


def test_pressure_and_temperature_by_many_ways():
    """n grad of an enthalpy tells gamma T only; a tensor gives its mean; a temperature field gives gamma by its law."""
    n0, t, g = (sympy.Symbol(x, positive=True) for x in ("n0", "t", "g"))

    def only(pressure_force, extra=lambda model, n, v: None):
        model = plin.FluidModel("pressures")
        model.parameters("n0 t g m", positive=True)
        n, v = model.scalar("n", background="n0"), model.vector("v")
        model.law("c", partial_t(n) + div(n * v))
        extra(model, n, v)
        m = model.symbols["m"]
        model.law("m", m * n * (partial_t(v) + advect(v, v)), -pressure_force(model, n))
        (found,) = fluids(model.linearize())
        assert found.couplings == ()
        return found.temperature, found.stiffness

    assert only(lambda model, n: t * grad(n)) == (t, t)
    assert only(lambda model, n: grad(n0 * t * (n / n0) ** g)) == (t, g * t)
    assert only(lambda model, n: n * grad(t * g / (g - 1) * (n / n0) ** (g - 1))) == (None, g * t)
    assert only(lambda model, n: div(n * t * identity))[0] == t

    def heat(model, n, v):
        temperature = model.scalar("tau", background="t")
        model.law("h", partial_t(temperature) + advect(v, temperature) + 2 * temperature * div(v))

    both = only(lambda model, n: grad(n * model.fields["tau"]), heat)
    assert both == (t, 3 * t)


def test_massless_species_and_those_without_a_velocity():
    linear = plin.load_example("electronegative-dusty-edge").linearize()
    electrons, *others = fluids(linear)
    assert electrons.mass is None
    assert str(electrons.temperature) == "T_e"
    assert [str(c.charge) for c in electrons.couplings] == ["-e"]
    assert [str(f.friction) for f in others] == ["nu_p", "nu_m", "nu_d"]
    wave = published.ion_acoustic_boltzmann_debye()
    assert [str(x) for x in screening(wave.linear)] == ["e*n0/(Te_eV*eps0)"]


def test_gravity_is_no_charge():
    wave = published.jeans()
    advice = wave.advice({"G": 6.7e-11, "rho0": 1e-18, "cs": 2e2, "gamma": 5 / 3}, k=1e-16)
    assert any("no charge could be identified for species v" in x for x in advice.not_looked_at)
    assert "λ_D" not in " ".join(r.subject for r in advice)


# Every rule, on and off --------------------------------------------------------------------------


def test_debye_length_of_the_handbook():
    """lambda_D = 7.43 m at 1 eV and 1 per cm^3: k lambda_D is 0.372 at k = 0.05, 0.223 at k = 0.03."""
    length = HANDBOOK["Debye length"]["value"]
    (remark,) = electrons().advice(k=0.05).about("k λ_D, species e")
    assert remark.number == pytest.approx(0.05 * length, rel=1e-3)
    assert "Landau" in remark.rule
    assert "common practice" in remark.rule
    assert not subjects(electrons().advice(k=0.03), "k λ_D, species e")


def test_quasineutrality():
    """The remark needs lambda_D although no law holds epsilon_0."""
    wave = electrons(field="quasineutral")
    (remark,) = wave.advice(k=0.05).about("quasi-neutrality, species e")
    assert remark.number == pytest.approx(0.372, rel=1e-3)
    assert not subjects(wave.advice(k=0.005), "quasi-neutrality")
    assert not subjects(electrons().advice(k=0.05), "quasi-neutrality")


def test_landau_damping_by_speed():
    """omega^2 = omega_pe^2 + 3 k^2 v^2 (Bohm and Gross 1949): omega/(k v) = sqrt(3 + 1/(k lambda_D)^2)."""
    (remark,) = electrons().advice(k=0.06).about("ω/(k v_th), species e")
    assert remark.number == pytest.approx(np.sqrt(3 + 1 / (0.06 * 7.433942) ** 2), rel=2e-3)
    assert not electrons().advice(k=0.03).about("ω/(k v_th), species e")


def test_drift_shifts_the_resonance():
    """A wave that is slow to electrons at rest passes streaming ones at their drift, 5e5/4.19e5 thermal speeds."""
    still, moving = (electrons(drift=(u,)).advice(k=0.02) for u in (0.0, 5e5))
    (slow,) = still.about("ω/(k v_th) for γ, species e")
    assert slow.number < 0.05
    (passed,) = moving.about("ω/(k v_th), species e")
    assert passed.number == pytest.approx(5e5 / 419382.8812, rel=0.05)


def test_gamma_against_phase_speed():
    """gamma = 1 in Langmuir waves at k lambda_D = 0.2; gamma = 3 in the slow ion wave."""
    fast = electrons(gamma=1).advice(k=0.027).about("ω/(k v_th) for γ, species e")
    assert [r.number for r in fast] == [pytest.approx(np.sqrt(1 + 1 / 0.2007**2), rel=2e-3)]
    assert "outruns" in fast[0].statement
    (slow,) = electrons(gamma=3).advice(k=0.027).about("ω/(k v_th) for γ, species e")
    assert slow.number < 0.05
    assert "overtake" in slow.statement
    assert not electrons(gamma=1).advice(k=0.005).about("for γ")


def test_friction_against_frequency_and_wavelength():
    """At n = 1 per cm^3 omega_pe = 5.64e4 rad/s; k v_th = 4.19e5 m/s times k."""
    often = electrons(collision_frequency=2e5).advice(k=0.01)
    assert next(r.number for r in often.about("ν/ω, species e")) > 2e5 / 5.7e4
    assert (
        subjects(electrons(gamma=5 / 3, collision_frequency=2e5).advice(k=0.01), "ν/ω, species e")
        == []
    )
    near = electrons(collision_frequency=4e3).advice(k=0.01).about("k v_th/ν, species e")
    assert [r.number for r in near] == [pytest.approx(419382.8812 * 0.01 / 4e3, rel=1e-6)]
    assert not electrons(collision_frequency=4e4).advice(k=0.01).about("k v_th/ν, species e")
    (free,) = electrons(gamma=5 / 3).advice(k=0.01).about("k v_th/ν, species e")
    assert "Coulomb" in free.statement


def test_coulomb_collisions_of_the_handbook():
    """nu_e = 2.91e-6 n lnΛ T^(-3/2) 1/s for electrons on ions, 1/sqrt(2) of it on themselves; n per cm^3, T in eV.

    NRL Plasma Formulary, from memory.
    """
    from plasmalin.study.plasma import measure

    plasma = measure(electrons(n=1e18, t=10.0), {}, {})
    kind = plasma.kinds[0]
    logarithm = np.log(12 * np.pi * 1e18 * kind.debye_length**3)
    assert kind.coulomb_collisions == pytest.approx(
        2.91e-6 / np.sqrt(2) * 1e12 * logarithm * 10**-1.5, rel=3e-3
    )
    assert plasma.omega is None


def magnetized(b, **options):
    return electrons(axes="xyz", magnetic_field=(0, 0, b), direction=("kx", 0, "kz"), **options)


def test_larmor_radius_of_the_handbook():
    """r_e = 2.38 cm at 1 eV in 1 gauss (NRL Plasma Formulary, from memory): k across B counts, along it not."""
    wave = magnetized(1e-4)
    (remark,) = wave.advice(kx=20.0, kz=1.0).about("k ρ_L, species e")
    assert remark.number == pytest.approx(20 * 2.38e-2, rel=3e-3)
    assert not wave.advice(kx=0.1, kz=20.0).about("k ρ_L, species e")


def test_gamma_across_the_field():
    wave = magnetized(1e-2)
    (remark,) = wave.advice(kx=3.0, kz=4.0).about("γ = 3 across B, species e")
    assert remark.number == pytest.approx(0.6)
    assert not wave.advice(kx=0.1, kz=4.0).about("γ = 3 across B")
    assert (
        not magnetized(1e-2, gamma=5 / 3).advice(kx=3.0, kz=4.0).about("γ = 3 across B, species e")
    )


def test_light_speed():
    fast = electrons(drift=(0.2 * plin.constants.c,))
    (remark,) = fast.advice().about("drift over c")
    assert remark.number == pytest.approx(0.2)
    assert "non-relativistic" in remark.statement
    (remark,) = fast.advice({"u_e_x": 4e8}).about("drift over c")
    assert "m/s?" in remark.statement
    assert not electrons(drift=(1e7,)).advice().about("over c")
    (remark,) = electrons(t=2e4).advice().about("thermal speed over c, species e")
    assert remark.number == pytest.approx(np.sqrt(2e4 / 510998.95), rel=1e-6)


def test_relativistic_momentum_is_seen():
    model = plin.FluidModel("relativistic", axes="x")
    e, m, eps0, c = model.constants("e m_e epsilon_0 c")
    n0 = model.parameter("n0", positive=True)
    n, v, phi = (
        model.scalar("n", background=n0),
        model.vector("v", background=("u",)),
        model.scalar("phi"),
    )
    plin.laws.continuity(model, n, v)
    plin.laws.relativistic_momentum(
        model, n, v, mass=m, c=c, force=plin.laws.lorentz_force(n, -e, potential=phi)
    )
    plin.laws.poisson(model, phi, e * (n0 - n), epsilon_0=eps0)
    advice = model.linearize().plane_wave("x").advice({"n0": 1e15, "u": 2e8}, k=1.0)
    assert not advice.about("drift over c")
    assert any(x.startswith("drift against light speed (v") for x in advice.looked_at)


def test_degeneracy_and_plasma_parameter():
    """E_F = 7.03 eV for copper's 8.47e28 conduction electrons per m^3 (Ashcroft and Mermin, table 2.1, from memory)."""
    metal = electrons(n=8.47e28, t=0.025).advice()
    (remark,) = metal.about("Fermi energy, species e")
    assert remark.number == pytest.approx(0.025 / 7.03, rel=3e-3)
    (remark,) = metal.about("n λ_D³, species e")
    assert remark.number < 1
    thin = electrons(n=1e16, t=3.0).advice()
    assert not thin.about("Fermi")
    assert not thin.about("n λ_D³")


def test_values_in_another_unit():
    """2.0 for 2 eV, 1e6 for 1e6 per cm^3, 200 for 200 gauss, 40 for 40 u."""
    wave = magnetized(0.02, n=1e16)
    assert not [r for r in wave.advice() if " in " in r.subject]
    (remark,) = wave.advice({"T_e": 2.0}).about("temperature in eV, species e")
    assert remark.number == pytest.approx(2.0 / E)
    assert len(wave.advice({"n_e0": 1e6, "n_p0": 1e6}).about("density in 1/m³")) == 2
    (remark, _) = wave.advice({"B_0z": 200.0}).about("magnetic field in T")
    assert remark.number == pytest.approx(200.0)
    (remark,) = wave.advice({"m_p": 40.0}).about("mass in kg, species p")
    assert remark.number == 40.0


def local_gradient(**options):
    model = plin.FluidModel("warm ions beside a gradient")
    e, eps0 = model.constants("e epsilon_0")
    n0, m, t, te = model.parameters("n0 m t te", positive=True)
    n = model.scalar("n", background=n0, gradient=("-n0/L", 0, 0))
    v, phi = model.vector("v"), model.scalar("phi")
    b = plin.components(0, 0, model.parameter("b"))
    model.law("c", partial_t(n) + div(n * v))
    inertia = m * n * (partial_t(v) + advect(v, v))
    viscous = model.parameter("mu", positive=True) * laplacian(v) if options.get("viscous") else 0
    model.law("m", inertia + t * grad(n - n0) - viscous, e * n * (cross(v, b) - grad(phi)))
    model.law("p", eps0 * laplacian(phi), e * (n0 * sympy.exp(phi / te) - n))
    return model.linearize(assume=["m"]).plane_wave((0, "ky", 0))


VALUES = {"n0": 1e16, "m": 40 * U, "t": 0.1 * E, "te": 3.0, "b": 0.1, "L": 0.05}


def test_gradients():
    wave = local_gradient()
    advice = wave.advice(VALUES, ky=50.0)
    (remark,) = advice.about("k L, field n")[:1]
    assert remark.number == pytest.approx(2.5)
    assert [r.number for r in advice.about("1/(k L)")] == [pytest.approx(0.4)]
    (remark,) = advice.about("ρ_L/L")
    assert remark.number == pytest.approx(np.sqrt(0.1 * E * 40 * U) / (E * 0.1) / 0.05, rel=1e-9)
    assert next(r.subject for r in wave.advice(VALUES, ky=500.0).about("field n")).startswith(
        "1/(k L)"
    )
    assert wave.advice(VALUES).about("gradient length in m")[0].number == pytest.approx(0.05)
    viscous = local_gradient(viscous=True).advice({**VALUES, "mu": 1e-6}, ky=50.0)
    assert not viscous.about("ρ_L/L")


# The value that comes back -----------------------------------------------------------------------


def test_nothing_found_says_what_was_looked_at_and_what_was_not():
    wave = published.cold_plasma_oscillation_drift()
    p = published.read("cold-plasma-oscillation-drift")["parameters"]
    values = {"e": E, "me": ME, "eps0": plin.constants.epsilon_0, "n0": 1e16, "V0": 1e5}
    assert p
    advice = wave.advice(values, k=100.0)
    assert len(advice) == 0
    text = str(advice)
    assert text.startswith("Nothing outside the range was found.\nLooked at:")
    assert "drift against light speed (e)" in text
    assert "no temperature could be identified for species e (k λ_D" in text
    assert "no temperature could be identified" in advice._repr_html_()


def test_advice_is_an_immutable_sequence():
    advice = electrons().advice(k=0.05)
    assert advice[0] in advice
    assert list(advice[:1]) == [advice[0]]
    assert str(advice[0]) in str(advice)
    assert f"{advice[0].number:.3g}" in advice._repr_html_()
    with pytest.raises(AttributeError):
        advice.remarks = ()
    with pytest.raises(AttributeError):
        advice[0].number = 0.0


def test_without_a_wave_number_it_gives_what_it_can():
    advice = electrons(n=8.47e28, t=0.025).advice()
    assert advice.about("Fermi")
    assert any("no value was given for the wave vector (k λ_D" in x for x in advice.not_looked_at)


def test_arrays_give_their_worst_point():
    ks = np.array([0.01, 0.05, 0.03])
    (remark,) = electrons().advice(k=ks).about("k λ_D, species e")
    assert remark.number == pytest.approx(0.05 * 7.433942, rel=1e-6)


def test_scaled_models_are_not_taken_for_si():
    wave = published.two_fluid_langmuir_ion_acoustic()
    advice = wave.advice({"M": 1836.0, "tau": 0.1, "ge": 3, "gi": 3}, k=0.4)
    assert [r.number for r in advice.about("k λ_D, species e")] == [pytest.approx(0.4)]
    assert any("are not told to be SI" in x for x in advice.not_looked_at)
    assert not [r for r in advice if " in " in r.subject]


def test_bad_values_raise_as_for_roots():
    wave = electrons()
    with pytest.raises(plin.ValuesError, match="'kk' is not a parameter or wave number"):
        wave.advice(kk=1.0)
    with pytest.raises(plin.BackgroundError, match="Poisson"):
        wave.advice({"n_e0": 2e6}, k=1.0)
    with pytest.raises(plin.ValuesError, match="no value for"):
        published.jeans().advice({"G": 1.0})


def points(module, name):
    case = module.read(name)
    return case.get("parameters", {}), case.get("points", [])


@pytest.mark.parametrize(
    ("module", "name"), [(m, n) for m in (published, published_more) for n in m.CASES]
)
def test_published_cases_take_advice(module, name):
    """Every published case, at its own numbers: advice prints and never fails."""
    wave = module.CASES[name]()
    random = np.random.default_rng(1)
    known = {**wave.linear.symbols, **{s.name: s for s in wave.wave_symbols}}
    given, listed = points(module, name)
    flat = {
        k: v
        for k, v in {**given, **(listed[0] if listed else {})}.items()
        if k in known and isinstance(v, int | float)
    }
    missing = {n: random.uniform(0.5, 2.0) for n in known if n not in flat}
    advice = wave.advice({**missing, **flat})
    assert str(advice).count("\n") >= 1
    assert len(advice.looked_at) + len(advice.not_looked_at) > 0


@pytest.mark.parametrize("name", ["xenon-iodine-plume", "electronegative-dusty-edge"])
def test_examples_take_advice(name):
    wave = plin.load_example(name).linearize().plane_wave("x")
    assert str(wave.advice(k=np.geomspace(50, 2e4, 5)))


def test_anisotropic_pressure_and_momentum_flux():
    """div of n m v v is inertia and no pressure; the double-adiabatic tensor gives (p_par + 2 p_perp)/3."""
    (found,) = fluids(published_more.cgl_firehose().linear)
    assert str(found.temperature) == "(ppar + 2*pperp)/(3*rho0)"
    model = plin.FluidModel("flux form")
    m, n0, t = model.parameters("m n0 t", positive=True)
    n, v = model.scalar("n", background=n0), model.vector("v", background=(0, 0, "u"))
    model.law("c", partial_t(n) + div(n * v))
    model.law("m", partial_t(m * n * v) + div(m * n * outer(v, v)) + dot(identity, grad(n)) * t)
    (found,) = fluids(model.linearize())
    assert found.mass == m
