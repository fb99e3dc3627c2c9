"""Simplified relations as published, found as limits of fuller ones; sources beside each are from memory."""

from dataclasses import replace
from math import gcd

import published
import published_more
import pytest
from sympy import Integer, Rational, S, cancel, ilcm, powdenest

import plasmalin as plin
from plasmalin import advect, cross, div, grad, laplacian, partial_t
from plasmalin.check.claim import WaveNames, make_claim
from plasmalin.check.derived import derive
from plasmalin.check.limit import LimitFound, find_limits, verify_limit
from plasmalin.check.rates import rate_order
from plasmalin.check.series import series_order, series_slip
from plasmalin.check.special import holds_under, special_values

CASES = {**published.CASES, **published_more.CASES}


def two_fluids(direction="x", friction=False, magnetic=False):
    """Warm electrons and ions, with friction between them or a magnetic field along z if wanted."""
    model = plin.FluidModel("two warm fluids", axes="x" if direction == "x" else "xyz")
    e, eps0, me = model.constants("e epsilon_0 m_e")
    mi, n0 = model.parameters("m_i n_0", positive=True)
    phi = model.scalar("phi")
    nu = model.parameter("nu", positive=True) if friction else 0
    field = plin.components(0, 0, model.parameter("B_0", positive=True)) if magnetic else None
    density, speed = {}, {}
    for s in "ei":
        density[s] = model.scalar(f"n_{s}", background=n0)
        speed[s] = model.vector(f"v_{s}")
    for s, mass, charge in (("e", me, -e), ("i", mi, e)):
        n, v = density[s], speed[s]
        t, gamma = model.parameters(f"T_{s} gamma_{s}", positive=True)
        force = -charge * n * grad(phi) - grad(n0 * t * (n / n0) ** gamma)
        if magnetic:
            force += charge * n * cross(v, field)
        if friction:
            force += -n * me * nu * (v - speed["i" if s == "e" else "e"])
        model.law(f"{s} continuity", partial_t(n) + div(n * v))
        model.law(f"{s} momentum", mass * n * (partial_t(v) + advect(v, v)), force)
    model.law("Poisson", eps0 * laplacian(phi), e * (density["e"] - density["i"]))
    return model.linearize().plane_wave(direction)


WHERE = {
    "lambda_De": "sqrt(epsilon_0*T_e/(n_0*e^2))",
    "omega_pe": "sqrt(n_0*e^2/(epsilon_0*m_e))",
    "omega_pi": "sqrt(n_0*e^2/(epsilon_0*m_i))",
    "c_s": "sqrt((gamma_e*T_e + gamma_i*T_i)/m_i)",
}
COLD = {
    "w_pe": "sqrt(n0*e^2/(eps0*me))",
    "w_pi": "sqrt(n0*e^2/(eps0*mi))",
    "O_e": "e*B0/me",
    "O_i": "e*B0/mi",
}


def prepared(wave, text, where=None):
    """The claim, all shorthands known, and the derived relation."""
    made = make_claim(wave, text, where or {})
    claim = replace(made, definitions=WaveNames(wave, where or {}).definitions)
    return claim, derive(wave, made.residual.free_symbols, ())


def direction(group, claim):
    """Exponents of a group, up to a common positive factor."""
    flat = powdenest(claim.written_out(group), force=True).expand(power_base=True, force=True)
    powers = {}
    for base, n in flat.as_powers_dict().items():
        if base.free_symbols:
            inner, m = base.as_base_exp()
            powers[inner] = powers.get(inner, S.Zero) + n * m
    scale = ilcm(1, *(p.q for p in powers.values()))
    whole = {s: int(p * scale) for s, p in powers.items() if p}
    common = gcd(*whole.values())
    return frozenset((s.name, n // common) for s, n in whole.items())


def directions(groups, claim):
    return {direction(g, claim) for g in groups}


def expected(texts, wave, where, claim):
    names = WaveNames(wave, where or {})
    return directions((names.expression(t, "test") for t in texts), claim)


LIMITS = {
    # Tonks and Langmuir 1929, Phys. Rev. 33, 195: the ion-acoustic wave
    "ion acoustic": (two_fluids, WHERE, "omega^2 = k^2*c_s^2", ["m_e/m_i", "k*lambda_De"]),
    # Bohm and Gross 1949, Phys. Rev. 75, 1851: immobile ions
    "Bohm-Gross": (
        two_fluids,
        WHERE,
        "omega^2 = omega_pe^2 + gamma_e*k^2*T_e/m_e",
        ["m_e/m_i"],
    ),
    # Tonks and Langmuir 1929: cold electrons over fixed ions
    "Langmuir": (
        two_fluids,
        WHERE,
        "omega^2 = omega_pe^2",
        ["m_e/m_i", "k^2*lambda_De^2"],
    ),
    # Boltzmann electrons for inertial ones, Chen 2016, Introduction to Plasma Physics 4.6
    "Boltzmann electrons": (
        two_fluids,
        WHERE,
        "omega^2 = k^2*gamma_i*T_i/m_i + k^2*gamma_e*T_e/m_i/(1 + gamma_e*k^2*lambda_De^2)",
        ["m_e/m_i"],
    ),
    # Stix 1992, Waves in Plasmas, ch. 2: the lower hybrid frequency, then in a dense plasma
    "lower hybrid": (
        published_more.lower_hybrid_perp,
        COLD,
        "omega^2 = w_pi^2/(1 + w_pe^2/O_e^2)",
        ["me/mi"],
    ),
    "dense lower hybrid": (
        published_more.lower_hybrid_perp,
        COLD,
        "omega^2 = O_e*O_i",
        ["me/mi", "O_e^2/w_pe^2"],
    ),
    "upper hybrid": (
        published_more.lower_hybrid_perp,
        COLD,
        "omega^2 = w_pe^2 + O_e^2",
        ["me/mi"],
    ),
    # Stix 1992, ch. 2: the lower hybrid wave at a small angle to the plane across B
    "oblique lower hybrid": (
        published_more.cold_electrostatic_oblique,
        COLD,
        "omega^2 = w_pi^2/(1 + w_pe^2/O_e^2)*(1 + mi*kz^2/(me*kx^2))",
        ["me/mi"],
    ),
    # Storey 1953, Phil. Trans. R. Soc. A 246, 113; Helliwell 1965, Whistlers, ch. 3
    "whistler": (
        published.r_and_l_waves,
        COLD,
        "c^2*k^2/omega^2 = w_pe^2/(omega*(O_e - omega))",
        ["me/mi", "O_e^2/w_pe^2"],
    ),
    "electron cyclotron": (
        published.r_and_l_waves,
        COLD,
        "omega = O_e",
        ["w_pe^2/(c^2*k^2)"],
    ),
    "ion cyclotron": (
        published.r_and_l_waves,
        COLD,
        "omega = O_i",
        ["w_pi^2/(c^2*k^2)"],
    ),
    # Alfven 1942, Nature 150, 405: in a dense plasma, one sheet
    "Alfven": (
        published.r_and_l_waves,
        COLD,
        "omega = k*B0/sqrt(n0*mi/(eps0*c^2))",
        ["me/mi", "c^2*k^2/w_pi^2", "O_i^2/w_pi^2"],
    ),
    "light": (
        published.r_and_l_waves,
        COLD,
        "omega = c*k",
        ["w_pe^2/(c^2*k^2)", "w_pi^2/(c^2*k^2)"],
    ),
    # Lighthill 1960, Phil. Trans. R. Soc. A 252, 397: ideal MHD from Hall MHD, and the whistler end
    "Hall to ideal": (
        published.hall_mhd_parallel,
        {},
        "omega^2 = k^2*B0^2/(mu0*rho0)",
        ["k*di"],
    ),
    "Hall whistler": (
        published.hall_mhd_parallel,
        {},
        "omega = k^2*di*B0/sqrt(mu0*rho0)",
        ["1/(k*di)"],
    ),
    # Rao, Shukla and Yu 1990, Planet. Space Sci. 38, 543
    "dust acoustic": (
        published.dust_acoustic,
        {},
        "omega^2 = k^2*Zd^2*nd0/(md*((ni0 - Zd*nd0)/Te + ni0/Ti))",
        ["Te*k^2/ni0"],
    ),
    # Lieberman and Lichtenberg 2005, ch. 5: ambipolar diffusion with ion-neutral friction
    "ambipolar": (
        published_more.ion_acoustic_neutral_drag,
        {},
        "omega = -I*k^2*e*(Te_eV + gi*Ti_eV)/(mi*nu)",
        ["Te_eV*eps0*k^2/(e*n0)", "Te_eV*e*k^2/(mi*nu^2)"],
    ),
    # Jeans 1902, Phil. Trans. R. Soc. A 199, 1: free fall, and sound
    "free fall": (published.jeans, {}, "omega = I*sqrt(4*pi*G*rho0)", ["cs^2*k^2/(G*rho0)"]),
    "sound over gravity": (published.jeans, {}, "omega = cs*k", ["G*rho0/(cs^2*k^2)"]),
    # Braginskii 1965: resistive decay, overdamped and weak
    "strong damping": (
        published_more.resistive_mhd_alfven,
        {},
        "omega = -I*eta*k^2/mu0",
        ["B0^2*mu0/(eta^2*k^2*rho0)"],
    ),
    "weak damping": (
        published_more.resistive_mhd_alfven,
        {},
        "omega^2 = k^2*B0^2/(mu0*rho0)",
        ["eta^2*k^2*rho0/(B0^2*mu0)"],
    ),
    # Legendy 1964, Phys. Rev. 135, A1713: the helicon
    "helicon": (
        published_more.whistler_electron_mhd,
        {},
        "omega = sqrt(kx^2 + kz^2)*kz*B0/(mu0*n0*e)",
        ["kx^2*me/(e^2*mu0*n0)"],
    ),
    # Kadomtsev 1965: the drift wave with long waves across and along B
    "drift wave": (
        published.drift_wave_hasegawa_mima,
        {},
        "omega = ky*Te_eV/(B0*Ln)",
        ["Te_eV*ky^2*mi/(B0^2*e)", "Te_eV*kx^2*mi/(B0^2*e)"],
    ),
    "drift acoustic": (
        published_more.drift_acoustic_exact,
        {},
        published_more.read("drift-acoustic-limit")["relation"],
        ["1/(ky*Ln)"],
    ),
    # D'Angelo and Motley 1962, Phys. Fluids 5, 633: the electrostatic ion cyclotron wave
    "ion cyclotron, electrostatic": (
        published_more.electrostatic_ion_cyclotron,
        {},
        "omega^2 = Wi^2 + kx^2*(Te + gi*Ti)",
        ["kz/kx"],
    ),
    # Kadomtsev 1965: magnetosonic waves in weak pressure
    "fast": (
        published.ideal_mhd_shear_fast_slow,
        {},
        "omega^2 = (kx^2 + kz^2)*B0^2/(mu0*rho0)",
        ["mu0*p0/B0^2"],
    ),
    "warm upper hybrid, cold": (
        published.upper_hybrid_warm,
        {},
        "omega^2 = n0*e^2/(eps0*me) + (e*B0/me)^2",
        ["Te_eV*eps0*kx^2/(e*n0)"],
    ),
    # Buneman 1959, Phys. Rev. 115, 503: the electrons' beam mode over heavy ions
    "beam over heavy ions": (
        published.buneman_electron_ion,
        {},
        "1 = 1/(omega - k*V)^2",
        ["1/M"],
    ),
}


@pytest.mark.parametrize("name", LIMITS)
def test_a_published_limit_is_found_with_its_groups(name):
    make, where, text, groups = LIMITS[name]
    wave = make()
    claim, derived = prepared(wave, text, where)
    found = find_limits(claim, derived)
    wanted = expected(groups, wave, where, claim)
    assert wanted in [directions((g.group for g in f.groups), claim) for f in found]
    assert found[0].physical


@pytest.mark.parametrize("name", LIMITS)
def test_a_published_limit_holds_under_its_own_groups(name):
    make, where, text, groups = LIMITS[name]
    wave = make()
    claim, derived = prepared(wave, text, where)
    names = WaveNames(wave, where)
    ratios = [names.expression(g, "under") for g in groups]
    assert isinstance(verify_limit(claim, derived, ratios), LimitFound)


@pytest.mark.parametrize("name", [n for n, row in LIMITS.items() if len(row[3]) == 2])
def test_one_condition_too_few_is_named(name):
    make, where, text, groups = LIMITS[name]
    wave = make()
    claim, derived = prepared(wave, text, where)
    ratio = WaveNames(wave, where).expression(groups[0], "under")
    reason = verify_limit(claim, derived, [ratio])
    assert isinstance(reason, str)


# What is no limit, and what nature does not have --------------------------------------------------

WRONG = {
    "coefficient": (two_fluids, WHERE, "omega^2 = k^2*(3*T_e + gamma_i*T_i)/m_i"),
    "sign": (two_fluids, WHERE, "omega^2 = omega_pe^2 - gamma_e*k^2*T_e/m_e"),
    "half of gravity": (published.jeans, {}, "omega^2 = -2*pi*G*rho0"),
    "twice the mass": (published.r_and_l_waves, COLD, "omega^2*(1 + 2*w_pi^2/O_i^2) = c^2*k^2"),
    "damping twice too strong": (
        published_more.resistive_mhd_alfven,
        {},
        "omega = -2*I*eta*k^2/mu0",
    ),
    "wrong power of k": (published.hall_mhd_parallel, {}, "omega = k*B0/sqrt(mu0*rho0)*di/2"),
}


@pytest.mark.parametrize("name", WRONG)
def test_a_wrong_claim_is_no_limit(name):
    make, where, text = WRONG[name]
    claim, derived = prepared(make(), text, where)
    assert find_limits(claim, derived) == []


def test_an_ordering_with_heavy_electrons_is_unphysical():
    wave = published.r_and_l_waves()
    text = "omega^2*(1 + n0*me/(eps0*B0^2)) = c^2*k^2"
    (found,) = find_limits(*prepared(wave, text))
    assert not found.physical
    assert any(str(g) == "mi/me ≪ 1, an unphysical ordering" for g in found.groups)


def test_groups_have_their_values():
    claim, derived = prepared(two_fluids(), "omega^2 = k^2*c_s^2", WHERE)
    values = {"k": 10.0, "n_0": 1e16, "T_e": 4.8e-19, "T_i": 1.6e-20, "m_e": 9.1e-31}
    values |= {"m_i": 2.2e-25, "e": 1.6e-19, "epsilon_0": 8.85e-12}
    (found,) = find_limits(claim, derived, values)
    numbers = sorted(g.value for g in found.groups)
    assert numbers == pytest.approx(
        sorted([9.1e-31 / 2.2e-25, 100 * 8.85e-12 * 4.8e-19 / 1e16 / 1.6e-19**2])
    )
    assert all(g.holds for g in found.groups)


REASONS = {
    "the further group is named": (["m_e/m_i"], "k² λ_De² ≪ 1"),
    "the masses are named": (["k*lambda_De"], "m_e/m_i ≪ 1"),
    "a contradiction": (["m_e/m_i", "m_i/m_e"], "contradict"),
    "what is no ratio": (["exp(T_e)"], "not a ratio"),
}


@pytest.mark.parametrize("name", REASONS)
def test_why_stated_conditions_do_not_make_a_limit(name):
    given, words = REASONS[name]
    wave = two_fluids()
    claim, derived = prepared(wave, "omega^2 = k^2*c_s^2", WHERE)
    names = WaveNames(wave, WHERE)
    reason = verify_limit(claim, derived, [names.expression(g, "under") for g in given])
    assert isinstance(reason, str)
    assert words in reason


def test_a_correction_is_confirmed_with_the_ratio_that_decides():
    wave = two_fluids()
    where = {n: d for n, d in WHERE.items() if n != "omega_pi"}
    claim, derived = prepared(wave, "omega^2 = omega_pe^2 + gamma_e*k^2*T_e/m_e", where)
    names = WaveNames(wave, where)
    ratios = [names.expression(g, "under") for g in ("k*lambda_De", "m_e/m_i")]
    found = verify_limit(claim, derived, ratios)
    assert isinstance(found, LimitFound)
    assert any("m_e/(k² λ_De² m_i) ≪ 1" in n for n in found.notes)


def test_a_wrong_correction_is_not_confirmed():
    wave = two_fluids()
    claim, derived = prepared(wave, "omega^2 = omega_pe^2 + 3/2*gamma_e*k^2*T_e/m_e", WHERE)
    ratio = [WaveNames(wave, WHERE).expression(g, "under") for g in ("k*lambda_De", "m_e/m_i")]
    reason = verify_limit(claim, derived, ratio)
    assert isinstance(reason, str)
    assert "beyond the leading order" in reason


def test_terms_of_very_different_size_are_noted():
    """The lower hybrid frequency in a thin plasma needs its ions' plasma frequency above the gyrofrequency."""
    wave = published_more.lower_hybrid_perp()
    claim, derived = prepared(wave, "omega^2 = w_pi^2/(1 + w_pe^2/O_e^2)", COLD)
    found = verify_limit(claim, derived, [WaveNames(wave, COLD).expression("me/mi", "under")])
    assert isinstance(found, LimitFound)
    assert any("O_e O_i/w_pe² ≪ 1" in n for n in found.notes)


# Values of parameters -----------------------------------------------------------------------------

BOTH = "1 = omega_pe^2/(omega^2 - {}*k^2*T_e/m_e) + omega_pi^2/(omega^2 - {})"
VALUES = {
    "adiabatic exponents": (
        two_fluids,
        WHERE,
        BOTH.format(3, "3*k^2*T_i/m_i"),
        "gamma_e=3 gamma_i=3",
    ),
    "cold ions": (two_fluids, WHERE, BOTH.format(3, "0"), "T_i=0 gamma_e=3"),
    "one temperature": (
        two_fluids,
        WHERE,
        BOTH.format(3, "5/3*k^2*T_e/m_i"),
        "T_i=T_e gamma_e=3 gamma_i=5/3",
    ),
    "cold plasma": (two_fluids, WHERE, "omega^2 = omega_pe^2 + omega_pi^2", "T_e=0 T_i=0"),
    "units": (
        published.langmuir_bohm_gross,
        {},
        "omega^2 = n0*e^2/me + 3*k^2*e*Te_eV/me",
        "eps0=1 gamma=3",
    ),
    "no field": (
        published.upper_hybrid_warm,
        {},
        "omega^2 = n0*e^2/(eps0*me) + gamma*kx^2*e*Te_eV/me",
        "B0=0",
    ),
    "no friction": (
        published_more.ion_acoustic_neutral_drag,
        {},
        "omega^2 = k^2*e*Te_eV/mi/(1 + k^2*eps0*Te_eV/(n0*e)) + 3*k^2*e*Ti_eV/mi",
        "gi=3 nu=0",
    ),
    "single charges": (
        published.two_ion_species_acoustic,
        {},
        "1 + (n1 + n2)/(Te*k^2) = n1/(m1*omega^2) + n2/(m2*omega^2)",
        "T1=0 T2=0 Z1=1 Z2=1",
    ),
}


@pytest.mark.parametrize("name", VALUES)
def test_values_that_make_a_claim_right(name):
    make, where, text, values = VALUES[name]
    claim, derived = prepared(make(), text, where)
    found = special_values(claim, derived)
    assert found
    assert " ".join(sorted(f"{s}={v}" for s, v in found[0].items())) == values


@pytest.mark.parametrize(
    ("make", "text"),
    [
        (published.jeans, "omega^2 = cs^2*k^2 - 2*pi*G*rho0"),
        (two_fluids, "omega^2 = n_0*e^2/(epsilon_0*m_e)"),  # T = 0 and heavy ions: a limit
        (published_more.whistler_electron_mhd, "omega = sqrt(kx^2 + kz^2)*kz*B0/(mu0*n0*e)"),
        (published.dust_acoustic, "omega^2 = k^2*Zd^2*nd0/md/(k^2 + ni0/Te)"),
    ],
)
def test_no_values_where_there_are_none(make, text):
    assert special_values(*prepared(make(), text)) == []


def test_stated_values_are_put_into_both():
    wave = published.langmuir_bohm_gross()
    claim, derived = prepared(wave, "omega^2 = n0*e^2/(eps0*me) + 3*k^2*e*Te_eV/me")
    gamma = wave.linear.symbols["gamma"]
    assert holds_under(claim, derived, {gamma: Integer(3)}).kind == "identical"
    assert holds_under(claim, derived, {gamma: Rational(5, 3)}) is None


# Expansions ---------------------------------------------------------------------------------------

LANGMUIR = {"w_p": "sqrt(n0*e^2/(eps0*me))", "l_D": "sqrt(eps0*Te_eV/(n0*e))"}
SOUND = {
    "c_0": "sqrt(Rg*T0*(1 + Rg/cv))",
    "nu_S": "(4*mu/3 + zeta + kappa*(1/cv - 1/(cv + Rg)))/rho0",
}
SERIES = {
    # Bohm and Gross 1949, as usually expanded
    "Bohm-Gross": (
        published.langmuir_bohm_gross,
        LANGMUIR,
        "omega = w_p*(1 + gamma/2*k^2*l_D^2)",
        ["k^2*l_D^2"],
    ),
    "Bohm-Gross, two fluids": (
        two_fluids,
        WHERE,
        "omega = omega_pe*(1 + gamma_e/2*k^2*lambda_De^2)",
        ["k^2*lambda_De^2", "m_e/(k^2*lambda_De^2*m_i)"],
    ),
    # Stokes 1845; Kirchhoff 1868: the damping of sound
    "Stokes-Kirchhoff": (
        published.kirchhoff_stokes_sound,
        SOUND,
        "omega = c_0*k - I*k^2*nu_S/2",
        None,
    ),
    # Alfven waves with resistivity: Im omega = -eta k^2/(2 mu0)
    "resistive Alfven": (
        published_more.resistive_mhd_alfven,
        {},
        "omega = k*B0/sqrt(mu0*rho0) - I*eta*k^2/(2*mu0)",
        ["eta^2*k^2*rho0/(B0^2*mu0)"],
    ),
    "weakly dispersive ion sound": (
        published.ion_acoustic_boltzmann_debye,
        {},
        "omega^2 = k^2*e*(Te_eV + gi*Ti_eV)/mi - k^4*eps0*Te_eV^2/(n0*mi)",
        None,
    ),
    "Hall": (
        published.hall_mhd_parallel,
        {},
        "omega = k*B0/sqrt(mu0*rho0)*(1 + k*di/2 + k^2*di^2/8)",
        ["k*di"],
    ),
    "gravity on sound": (
        published.jeans,
        {},
        "omega = cs*k - 2*pi*G*rho0/(cs*k)",
        ["G*rho0/(cs^2*k^2)"],
    ),
    "light in a thin plasma": (
        published.r_and_l_waves,
        COLD,
        "omega = c*k + w_pe^2/(2*c*k)",
        ["w_pe^2/(c^2*k^2)", "O_e/(c*k)"],
    ),
}


@pytest.mark.parametrize("name", SERIES)
def test_an_expansion_is_right_to_its_order(name):
    make, where, text, groups = SERIES[name]
    wave = make()
    claim, derived = prepared(wave, text, where)
    found = series_order(claim, derived)
    assert found is not None
    assert found.next is not None
    if groups is not None:
        wanted = expected(groups, wave, where, claim)
        assert directions((g.group for g in found.groups), claim) == wanted


SLIPS = {
    "half": (
        published.langmuir_bohm_gross,
        LANGMUIR,
        "omega = w_p*(1 + gamma*k^2*l_D^2)",
        "gamma/2*k^2*l_D^2*w_p",
    ),
    "sign of damping": (
        published_more.resistive_mhd_alfven,
        {},
        "omega = k*B0/sqrt(mu0*rho0) + I*eta*k^2/(2*mu0)",
        "-I*eta*k^2/(2*mu0)",
    ),
    "twice the damping": (
        published_more.resistive_mhd_alfven,
        {},
        "omega = k*B0/sqrt(mu0*rho0) - I*eta*k^2/mu0",
        "-I*eta*k^2/(2*mu0)",
    ),
    "second order": (
        published.hall_mhd_parallel,
        {},
        "omega = k*B0/sqrt(mu0*rho0)*(1 + k*di/2 - k^2*di^2/8)",
        "k^3*di^2*B0/sqrt(mu0*rho0)/8",
    ),
    "square": (
        published.ion_acoustic_boltzmann_debye,
        {},
        "omega^2 = k^2*e*(Te_eV + gi*Ti_eV)/mi - k^4*eps0*Te_eV^2/(2*n0*mi)",
        "-k^4*eps0*Te_eV^2/(n0*mi)",
    ),
}


@pytest.mark.parametrize("name", SLIPS)
def test_a_wrong_term_of_an_expansion_is_no_series_and_is_named(name):
    make, where, text, right = SLIPS[name]
    wave = make()
    claim, derived = prepared(wave, text, where)
    assert series_order(claim, derived) is None
    slip = series_slip(claim, derived)
    wanted = claim.written_out(WaveNames(wave, where).expression(right, "test"))
    assert cancel(slip.should_be - wanted) == 0


def test_stated_ratios_choose_the_scaling():
    wave = two_fluids()
    claim, derived = prepared(wave, "omega = omega_pe*(1 + gamma_e/2*k^2*lambda_De^2)", WHERE)
    names = WaveNames(wave, WHERE)
    both = [names.expression(r, "under") for r in ("k*lambda_De", "m_e/m_i")]
    assert series_order(claim, derived, both) is not None
    assert series_order(claim, derived, both[:1]) is None


# Rates ------------------------------------------------------------------------------------------------

RATES = {
    # Bohm and Gross 1949, Phys. Rev. 75, 1864; O'Neil, Winfrey and Malmberg 1971, Phys. Fluids 14, 1204
    "weak beam": (published_more.weak_beam_plasma, "sqrt(3)/2^(4/3)*eta^(1/3)", "1/V", ["eta"]),
    # Buneman 1959, Phys. Rev. 115, 503
    "Buneman": (published.buneman_electron_ion, "sqrt(3)/2^(4/3)*M^(-1/3)", "1/V", ["1/M"]),
    # two equal beams at the maximum: half the plasma frequency of one
    "two streams": (
        published.counterstreaming_cold_beams,
        "wp0/2",
        "sqrt(3)*wp0/(2*V)",
        ["wp0"],
    ),
    # Jeans 1902
    "free fall": (published.jeans, "sqrt(4*pi*G*rho0)", None, ["cs^2*k^2/(G*rho0)"]),
    "drag": (
        published_more.ion_acoustic_neutral_drag,
        "-nu/2",
        None,
        ["nu/(k*sqrt(e*Te_eV/mi))"],
    ),
    # Stokes 1845; Kirchhoff 1868
    "sound": (
        published.kirchhoff_stokes_sound,
        "-k^2/(2*rho0)*(4*mu/3 + zeta + kappa*(1/cv - 1/(cv + Rg)))",
        None,
        ["k*mu/(rho0*sqrt(Rg*T0))"],
    ),
}


def found_rate(name, factor=1):
    make, text, resonance, ratios = RATES[name]
    wave = make()
    names = WaveNames(wave, {})
    value = names.expression(text, "claim")
    claim = make_claim(wave, "omega = 1", {})
    derived = derive(wave, value.free_symbols, ())
    if resonance is not None:
        derived = derived.substituted({names.names["k"]: names.expression(resonance, "under")})
    return rate_order(
        factor * value, claim, derived, [names.expression(r, "under") for r in ratios]
    )


@pytest.mark.parametrize("name", RATES)
def test_a_published_rate_is_the_leading_imaginary_part(name):
    assert found_rate(name) is not None


@pytest.mark.parametrize("name", RATES)
def test_a_rate_with_another_number_is_none(name):
    assert found_rate(name, 2) is None
    assert found_rate(name, Rational(2) ** Rational(1, 3)) is None
