"""Claims in other systems of units and with the other sign of the phase.

The Gaussian forms are those of the NRL Plasma Formulary, the factors between systems those of Jackson, Classical
Electrodynamics, 3rd ed., appendix, table 3; both from memory.
"""

import published
import published_more
import pytest
import sympy

import plasmalin as plin
from plasmalin import advect, cross, div, dot, grad, laplacian, partial_t
from plasmalin.check.claim import make_claim
from plasmalin.check.compare import compare
from plasmalin.check.convention import Convention, in_si, under_other_conventions
from plasmalin.check.derived import derive
from plasmalin.check.roles import roles

GAUSSIAN = Convention(units="gaussian")
RATIONAL = Convention(units="heaviside-lorentz")
TURNED = Convention(phase="exp(+i omega t)")
VOLTS = "e Te_eV"

FORMULAS = {
    "langmuir-bohm-gross": (
        "omega^2 = wpe^2 (1 + gamma k^2 lD^2)",
        {"wpe": "sqrt(4 pi n0 e^2/me)", "lD": f"sqrt({VOLTS}/(4 pi n0 e^2))"},
    ),
    "upper-hybrid-warm": (
        "omega^2 = wpe^2 + Oe^2 + gamma kx^2 e Te_eV/me",
        {"wpe": "sqrt(4 pi n0 e^2/me)", "Oe": "e B0/(me c)"},
    ),
    "ideal-mhd-shear-fast-slow": (
        "omega^4 - omega^2 k^2 (cs^2 + vA^2) + k^2 kz^2 cs^2 vA^2 = 0",
        {"vA": "B0/sqrt(4 pi rho0)", "beta": "8 pi p0/B0^2", "cs": "vA sqrt(gamma beta/2)"},
    ),
    "resistive-mhd-alfven": (
        "omega^2 + i (eta c^2/(4 pi)) k^2 omega = k^2 vA^2",
        {"vA": "B0/sqrt(4 pi rho0)"},
    ),
    "r-and-l-waves": (
        "k^2 c^2/omega^2 = 1 - wpe^2/(omega (omega - Oe)) - wpi^2/(omega (omega + Oi))",
        {
            "wpe": "sqrt(4 pi n0 e^2/me)",
            "wpi": "sqrt(4 pi n0 e^2/mi)",
            "Oe": "e B0/(me c)",
            "Oi": "e B0/(mi c)",
        },
    ),
    "em-wave-unmagnetised": ("omega^2 = 4 pi n0 e^2/me + c^2 k^2", {}),
    "drift-acoustic-exact": (
        "omega^4 - (Oi^2 + cs^2 (ky^2 + kz^2)) omega^2 + Oi^2 ky vd omega + Oi^2 cs^2 kz^2 = 0",
        {"Oi": "e B0/(mi c)", "cs": f"sqrt({VOLTS}/mi)", "vd": "c Te_eV/(B0 Ln)"},
    ),
}  # fmt: skip
PUBLISHED = {**published.CASES, **published_more.CASES}


def match(wave, claim, where=None, convention=None):
    convention = convention or Convention()
    found = roles(wave)
    made = in_si(make_claim(wave, claim, where or {}), convention, found)
    return compare(made, derive(wave, made.residual.free_symbols, found.constants))


def others(wave, claim, where=None, declared=None):
    made = make_claim(wave, claim, where or {})
    found = under_other_conventions(made, wave, declared or Convention())
    return [(c.phase, c.units) for c, _ in found]


@pytest.mark.parametrize("name", FORMULAS)
def test_gaussian_formulas(name):
    wave = PUBLISHED[name]()
    assert match(wave, *FORMULAS[name], GAUSSIAN)
    assert match(wave, *FORMULAS[name]) is None
    assert others(wave, *FORMULAS[name]) == [("exp(-i omega t)", "gaussian")]


@pytest.mark.parametrize("name", FORMULAS)
def test_heaviside_lorentz_formulas(name):
    """The same without 4 pi."""
    claim, where = (
        FORMULAS[name][0].replace("4 pi", "1"),
        {
            n: t.replace("4 pi ", "").replace("8 pi ", "2 ").replace("c^2/(4 pi)", "c^2")
            for n, t in FORMULAS[name][1].items()
        },
    )
    claim = claim.replace("1 n0", "n0")
    wave = PUBLISHED[name]()
    assert match(wave, claim, where, RATIONAL)
    if name != "drift-acoustic-exact":  # holds no 4 pi
        assert match(wave, claim, where, GAUSSIAN) is None


def test_whistlers_in_a_model_with_mu_0_only():
    wave = published_more.whistler_electron_mhd()
    where = {"wpe": "sqrt(4 pi n0 e^2/me)", "Oe": "e B0/(me c)"}
    claim = "omega (1 + k^2 c^2/wpe^2) = Oe k kz c^2/wpe^2"
    assert match(wave, claim, where, GAUSSIAN).kind == "branch"
    assert match(wave, claim, where) is None


def test_electric_fields_and_magnetic_ones_are_told_apart():
    model = plin.FluidModel("tracer in an E x B drift", axes="xyz")
    n = model.scalar("n", background="n_0")
    electric = model.vector_parameter("E", ("E_0", 0, 0))
    magnetic = model.vector_parameter("B", (0, 0, "B_0"))
    drift = cross(electric, magnetic) / dot(magnetic, magnetic)
    model.law("continuity", partial_t(n) + advect(drift, n))
    wave = model.linearize().plane_wave("y")
    found = roles(wave)
    assert [s.name for s in found.electric] == ["E_0"]
    assert [s.name for s in found.magnetic] == ["B_0"]
    assert match(wave, "omega = -c k E_0/B_0", {}, GAUSSIAN).kind == "identical"
    assert match(wave, "omega = -k E_0/B_0").kind == "identical"


def test_charges_by_any_name():
    """The dust charge Q and the ion charge number Z are told apart by the laws."""
    model = plin.FluidModel("dust over Boltzmann ions", axes="x")
    e, eps0 = model.constants("e epsilon_0")
    charge, mass, t, z = model.parameters("Q M_d theta zeta_i", positive=True)
    n, v = model.scalar("n", background="n_0"), model.vector("v")
    phi = model.scalar("phi")
    ions = model.parameter("N", positive=True) * sympy.exp(-z * e * phi / t)
    model.law("continuity", partial_t(n) + div(n * v))
    model.law("momentum", mass * n * (partial_t(v) + advect(v, v)), charge * n * grad(phi))
    model.law("Poisson", eps0 * laplacian(phi), charge * n - z * e * ions)
    found = roles(model.linearize().plane_wave("x"))
    assert {s.name for s in found.charges} == {"e", "Q"}
    assert {s.name for s in found.charge} == {"e", "Q"}


def test_normalized_laws_have_no_units_to_change():
    for name in ("two-fluid-langmuir-ion-acoustic", "dust-acoustic", "cgl-firehose", "jeans"):
        found = roles(PUBLISHED[name]())
        assert not found.magnetic
        assert {s.name for s in found.charge} <= {"e"}


def damped():
    return published_more.resistive_mhd_alfven()


def test_damping_tells_the_phase():
    wave = damped()
    right = "omega^2 + i (eta/mu0) k^2 omega = k^2 B0^2/(mu0 rho0)"
    turned = right.replace("+ i", "- i")
    assert match(wave, right).kind == "factor"
    assert match(wave, turned) is None
    assert match(wave, turned, {}, TURNED).kind == "factor"
    assert others(wave, turned) == [("exp(+i omega t)", "SI")]
    assert others(wave, right, {}, TURNED) == [("exp(-i omega t)", "SI")]


def test_phase_and_units_at_once():
    claim, where = FORMULAS["resistive-mhd-alfven"]
    both = [("exp(+i omega t)", "gaussian")]
    assert others(damped(), claim.replace("+ i", "- i"), where) == both


def test_a_wave_equation_has_no_phase():
    """∂_t is a derivative in every convention."""
    wave = damped()
    right = "∂_t² B_y - (eta/mu0) ∂_t ∂_z² B_y = (B0^2/(mu0 rho0)) ∂_z² B_y"
    wrong = right.replace("- (eta", "+ (eta")
    assert match(wave, right).kind == match(wave, right, {}, TURNED).kind == "factor"
    assert others(wave, wrong) == []


@pytest.mark.parametrize(
    "claim",
    [
        "omega^2 = n0 e^2/(eps0 me) + 3 k^2 e Te_eV/me",
        "omega^2 = 2 n0 e^2/me + gamma k^2 e Te_eV/me",
        "omega^2 = gamma k^2 e Te_eV/me",
        "omega^2 = 4 pi n0 e^2/(eps0 me) + gamma k^2 e Te_eV/me",
    ],
)
def test_a_wrong_claim_is_wrong_in_every_convention(claim):
    assert others(PUBLISHED["langmuir-bohm-gross"](), claim) == []


def test_constants_by_either_spelling():
    wave = PUBLISHED["langmuir-bohm-gross"]()
    claim = "omega^2 = n0 e^2 mu_0 c^2/me + gamma k^2 e Te_eV/me"
    assert match(wave, claim.replace("mu_0 c^2", "(1/epsilon_0)")).kind == "identical"
    assert match(wave, claim).kind == "identical"


@pytest.mark.parametrize(
    ("given", "turned"),
    [
        ("exp(-i omega t)", False),
        ("exp(+i omega t)", True),
        ("exp[i(k·x − ωt)]", False),
        ("exp(-iωt + ik·x)", False),
        ("exp(i(ωt - k x))", True),
        ("e^{j omega t}", True),
        ("exp(-i*(k*x - omega*t))", True),
    ],
)
def test_spellings_of_the_phase(given, turned):
    assert Convention(phase=given).turned is turned


@pytest.mark.parametrize(
    ("options", "message"),
    [
        ({"phase": "cos(omega t)"}, "the time dependence of a plane wave"),
        ({"phase": "exp(i(k x + omega t))"}, "towards negative k"),
        ({"units": "imperial"}, "give one of SI, gaussian, heaviside-lorentz"),
    ],
)
def test_convention_at_fault(options, message):
    with pytest.raises(plin.DeclarationError, match=message):
        Convention(**options)


def test_conventions_in_words():
    assert str(Convention(units="CGS")) == "exp(-i omega t), gaussian units"
    assert Convention(units="Heaviside–Lorentz") == RATIONAL
    assert len(Convention().others) == 5
