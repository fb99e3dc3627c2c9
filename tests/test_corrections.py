"""Terms beyond the leading order: what a claim asserts with them, and what only stands there by its arrangement.

Relations from memory: Stix, The Theory of Plasma Waves, 1962 (lower hybrid resonance at any density); O'Neil, Winfrey and Malmberg
1971, Phys. Fluids 14, 1204 (weak beam: the frequency shift scales as (n_b/2n_0)^(1/3)); Heald and Wharton, Plasma Diagnostics
with Microwaves, 1965 (phase of an interferometer); Tonks and Langmuir 1929, Phys. Rev. 33, 195 (ion sound); Stokes 1845,
Trans. Camb. Phil. Soc. 8, 287 (attenuation of sound); Bohm and Gross 1949, Phys. Rev. 75, 1851.
"""

import check_models
import published_more
import pytest
from test_check import BEAM, COLD, ION, LANGMUIR, PE, TWO

HYBRID = {
    "w_pi": "sqrt(n0 e^2/(eps0 mi))",
    "w_pe": "sqrt(n0 e^2/(eps0 me))",
    "O_e": "e B0/me",
    "O_i": "e B0/mi",
}
LOWER = "1/omega^2 = 1/(omega_pi^2 + Omega_i^2) + 1/(Omega_e Omega_i)"
SHORT_WAVES = ["m_e << m_i", "omega_pe << c k", "Omega_e << c k"]
RESONANT = BEAM | PE | {"delta": "omega - omega_pe"}
WEAK = ["n_b << n_0", "k u = omega_pe"]
COLD_IONS = ["T_i = 0", "omega << omega_pi"]
WARM = ION | {"c_s": "sqrt((T_e + gamma_i T_i)/m_i)"}


@pytest.fixture(scope="module")
def check():
    waves = {"lower_hybrid": published_more.lower_hybrid_perp()}

    def judged(model, claim, where, under):
        if model not in waves:
            waves[model] = getattr(check_models, model)()
        return waves[model].check(claim, where=where, under=under)

    return judged


@pytest.mark.parametrize(
    ("model", "claim", "where", "under", "kind"),
    [
        ("lower_hybrid", "1/omega^2 = 1/(w_pi^2 + O_i^2) + 1/(O_e O_i)", HYBRID, "me << mi", "limit"),
        ("lower_hybrid", "1/omega^2 = 1/(w_pi^2 + O_i^2) + 1/(O_e O_i)", HYBRID, ["me << mi", "O_i << omega", "omega << O_e"], "limit"),
        ("cold_across", LOWER, COLD, SHORT_WAVES, "limit"),
        ("cold_across", LOWER, COLD, [*SHORT_WAVES, "Omega_i << omega_pi"], "limit"),
        ("cold", LOWER, COLD, ["theta = pi/2", *SHORT_WAVES], "limit"),
        ("beam", "delta^3 = (n_b/(2 n_0)) omega_pe^3", RESONANT, WEAK, "limit"),
        ("beam", "(omega - omega_pe)^3 = n_b omega_pe^3/(2 n_0)", PE, WEAK, "limit"),
        ("beam", "(delta/omega_pe)^3 = n_b/(2 n_0)", RESONANT, [*WEAK, "delta << omega_pe"], "limit"),
        ("langmuir", "omega - omega_pe = gamma_e k^2 v_te^2/(2 omega_pe)", LANGMUIR, "k lambda_De << 1", "limit"),
        ("langmuir", "delta = gamma_e k^2 v_te^2/(2 omega_pe)", LANGMUIR | {"delta": "omega - omega_pe"}, "k lambda_De << 1", "limit"),
        ("light", "k = (omega/c) (1 - omega_pe^2/(2 omega^2))", PE, "omega_pe << omega", "series"),
        ("light", "n = 1 - omega_pe^2/(2 omega^2)", PE | {"n": "c k/omega"}, "omega_pe << omega", "series"),
        ("ion_acoustic", "k = (omega/c_s) (1 + omega^2/(2 omega_pi^2))", ION, COLD_IONS, "series"),
        ("ion_acoustic", "k^2 = (omega^2/c_s^2) (1 + omega^2/omega_pi^2)", ION, COLD_IONS, "series"),
        ("viscous", "k = omega/c_s + i nu omega^2/(2 c_s^3)", {}, "nu omega/c_s^2 << 1", "series"),
        ("two_fluids", "omega^2 = k^2 c_s^2/(1 + gamma_e k^2 lambda_De^2)", TWO, ["m_e << m_i", "T_i << T_e"], "limit"),
        ("ion_acoustic", "omega^2 = k^2 c_s^2/(1 + k^2 lambda_De^2)", WARM, ["k lambda_De << 1", "T_i << T_e"], "limit"),
    ],
)  # fmt: skip
def test_right_claims(check, model, claim, where, under, kind):
    verdict = check(model, claim, where, under)
    assert (verdict.kind, verdict.agrees) == (kind, True), str(verdict)
    assert verdict.slips == ()


@pytest.mark.parametrize(
    ("model", "claim", "where", "under"),
    [
        ("lower_hybrid", "1/omega^2 = 1/(w_pi^2 + 2 O_i^2) + 1/(O_e O_i)", HYBRID, ["me << mi"]),
        ("lower_hybrid", "1/omega^2 = 1/(w_pi^2 + 2 O_i^2) + 1/(O_e O_i)", HYBRID, ["me << mi", "O_i << omega", "omega << O_e"]),
        ("lower_hybrid", "1/omega^2 = 1/(w_pi^2 + O_i^2) + 2/(O_e O_i)", HYBRID, ["me << mi"]),
        ("lower_hybrid", "1/omega^2 = 1/O_i^2 + 1/(O_e O_i)", HYBRID, ["me << mi"]),
        ("cold_across", LOWER.replace("Omega_e Omega_i", "Omega_e^2"), COLD, SHORT_WAVES),
        ("cold_across", LOWER, COLD, ["m_e << m_i"]),
        ("beam", "delta^3 = (n_b/n_0) omega_pe^3", RESONANT, WEAK),
        ("beam", "1 = omega_p^2/omega^2 + omega_b^2/(omega (omega - k u))", BEAM, "n_b << n_0"),
        ("beam", "1 = omega_p^2/omega^2 + 2 omega_b^2/(omega - k u)^2", BEAM, "n_b << n_0"),
        ("beam", "delta^3 = -(n_b/(2 n_0)) omega_pe^3", RESONANT, WEAK),
        ("beam", "delta^3 = (n_b/(2 n_0))^2 omega_pe^3", RESONANT, WEAK),
        ("beam", "delta^3 = (n_b/(2 n_0)) omega_pe^3", RESONANT, ["k u = omega_pe"]),
        ("langmuir", "delta = gamma_e k^2 v_te^2/omega_pe", LANGMUIR | {"delta": "omega - omega_pe"}, "k lambda_De << 1"),
        ("light", "k = (omega/c) (1 - omega_pe^2/omega^2)", PE, "omega_pe << omega"),
        ("light", "k = (omega/c) (1 + omega_pe^2/(2 omega^2))", PE, "omega_pe << omega"),
        ("ion_acoustic", "k = (omega/c_s) (1 - omega^2/(2 omega_pi^2))", ION, COLD_IONS),
        ("viscous", "k = omega/c_s - i nu omega^2/(2 c_s^3)", {}, "nu omega/c_s^2 << 1"),
        ("two_fluids", "omega^2 = k^2 c_s^2/(1 + 2 gamma_e k^2 lambda_De^2)", TWO, ["m_e << m_i", "T_i << T_e"]),
        ("two_fluids", "omega^2 = k^2 c_s^2/(1 + gamma_e k^2 lambda_De^2)", TWO | {"c_s": "sqrt((Z gamma_e T_e + 2 gamma_i T_i)/m_i)"}, ["m_e << m_i", "T_i << T_e"]),
        ("ion_acoustic", "omega^2 = k^2 c_s^2/(1 + 2 k^2 lambda_De^2)", WARM, ["k lambda_De << 1", "T_i << T_e"]),
        ("ion_acoustic", "omega^2 = k^2 c_s^2/(1 - k^2 lambda_De^2)", WARM, ["k lambda_De << 1"]),
    ],
)  # fmt: skip
def test_wrong_claims(check, model, claim, where, under):
    assert not check(model, claim, where, under).agrees


def test_the_wrong_term_of_an_expansion_in_k_is_located(check):
    (slip,) = check(
        "ion_acoustic", "k = omega/c_s - omega^3/(2 c_s omega_pi^2)", ION, COLD_IONS
    ).slips
    assert (str(slip.term), slip.multiplier) == ("-omega**3/(2*c_s*omega_pi**2)", -1)


def test_an_incomplete_correction_is_graded(check):
    """k² λ² is right in a claim with warm ions only where these are colder than the electrons."""
    claim = "omega^2 = k^2 c_s^2/(1 + k^2 lambda_De^2)"
    notes = check("ion_acoustic", claim, WARM, ["k lambda_De << 1"]).notes
    assert "its corrections are confirmed where also T_i/T_e ≪ 1" in notes


def test_the_reference_frequency_is_said(check):
    verdict = check("beam", "delta^3 = (n_b/(2 n_0)) omega_pe^3", RESONANT, WEAK)
    assert "in powers of ω − ω_pe" in verdict.notes
    assert [str(c) for c in verdict.conditions] == ["n_b/n_0 ≪ 1"]


def test_an_unstated_weak_beam_is_a_limit(check):
    claim = "delta^3 = (n_b/(2 n_0)) omega_pe^3"
    verdict = check("beam", claim, RESONANT, ["k u = omega_pe"])
    assert (verdict.kind, [str(c) for c in verdict.conditions]) == ("limit", ["n_b/n_0 ≪ 1"])
