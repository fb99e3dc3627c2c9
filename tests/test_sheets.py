"""On which sheet of its roots a claim holds: a principal root has no negative real part.

Relations from memory: Bohm and Gross 1949, Phys. Rev. 75, 1851; Stix, Waves in Plasmas, 1992 (n² = R, light in a plasma);
Buneman 1959, Phys. Rev. 115, 503 (streams); Rao, Shukla and Yu 1990, Planet. Space Sci. 38, 543 (dust).
"""

import check_models
import pytest
from sympy import S
from test_check import COLD, DUST, LANGMUIR, PE

NO_SHEET = "no negative real part"


@pytest.fixture(scope="module")
def waves():
    names = "langmuir light cold_along streams dusty mhd"
    return {name: getattr(check_models, name)() for name in names.split()}


@pytest.mark.parametrize(
    ("model", "claim", "where", "under", "term"),
    [
        ("langmuir", "sqrt(omega^2 - omega_pe^2) = -k v", {"v": "sqrt(gamma_e) v_te"}, None, "-k*v"),
        ("langmuir", "k v = -sqrt(omega^2 - omega_pe^2)", {"v": "sqrt(gamma_e) v_te"}, None, "-sqrt(omega**2 - omega_pe**2)"),
        ("light", "c k + sqrt(omega^2 - omega_pe^2) = 0", {}, None, "c*k"),
        ("light", "1/sqrt(omega^2 - omega_pe^2) = -1/(c k)", {}, None, "-1/(c*k)"),
        ("dusty", "sqrt(omega^2) = -k C_DA", DUST, ["k lambda_D << 1"], "-C_DA*k"),
        ("dusty", "|omega| = -k C_DA", DUST, ["k lambda_D << 1"], "-C_DA*k"),
    ],
)  # fmt: skip
def test_a_claim_without_a_solution_is_refused(waves, model, claim, where, under, term):
    verdict = waves[model].check(
        claim, where={**LANGMUIR, **where} if model != "dusty" else where, under=under
    )
    assert (verdict.kind, verdict.agrees) == ("differs", False), str(verdict)
    assert (str(verdict.slips[0].term), verdict.slips[0].multiplier) == (term, S.NegativeOne)
    assert NO_SHEET in verdict.proof


@pytest.mark.parametrize(
    ("model", "claim", "where", "note"),
    [
        ("langmuir", "sqrt(omega^2 - omega_pe^2) = sqrt(gamma_e) k v_te", LANGMUIR, None),
        ("light", "k = sqrt(omega^2 - omega_pe^2)/c", PE, None),
        ("light", "omega = -sqrt(omega_pe^2 + c^2 k^2)", PE, None),
        ("dusty", "|omega| = k C_DA/sqrt(1 + k^2 lambda_D^2)", DUST, None),
        ("cold_along", "n = sqrt(R)", COLD, "ω > 0"),
        ("cold_along", "n = -sqrt(R)", COLD, "ω < 0"),
        ("cold_along", "sqrt(R) = c k/omega", COLD, "ω > 0"),
        ("streams", "k V = omega - omega/sqrt(omega^2 - 1/M)", {}, "where the real part of −ω/(V k − ω)"),
        ("streams", "|omega - k V| = omega/sqrt(omega^2 - 1/M)", {}, "signs do not decide"),
    ],
)  # fmt: skip
def test_right_claims_with_roots_of_omega(waves, model, claim, where, note):
    verdict = waves[model].check(claim, where=where)
    assert (verdict.kind, verdict.agrees) == ("branch", True), str(verdict)
    sheet = [n for n in verdict.notes if "principal" in n]
    assert len(sheet) == (note is not None)
    assert note is None or note in sheet[0]


def test_a_wave_number_that_may_be_negative_decides_nothing():
    wave = check_models.mhd(("kx", 0, "kz"))
    claim = "sqrt(omega^2) = -kz B_0/sqrt(mu_0 rho_0)"
    verdict = wave.check(claim)
    assert verdict.agrees
    assert any("kz < 0" in n for n in verdict.notes)


def test_the_sign_of_a_root_is_found_beside_another_slip(waves):
    """Both the sign and the adiabatic exponent are wrong: the claim differs, and nothing that is offered is idle."""
    verdict = waves["langmuir"].check("sqrt(omega^2 - omega_pe^2) = -2 k v_te", where=LANGMUIR)
    assert verdict.kind == "differs"
    assert all(s.multiplier != 1 for s in verdict.slips)
