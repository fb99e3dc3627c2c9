"""Claims of Re ω and Im ω by themselves.

Relations from memory: O'Neil, Winfrey and Malmberg 1971, Phys. Fluids 14, 1204 (weak beam); Buneman 1959, Phys. Rev. 115, 503;
Stokes 1845, Trans. Camb. Phil. Soc. 8, 287 (viscous sound); Alfven 1942, Nature 150, 405; Jeans 1902, Phil. Trans. A 199, 1.
"""

import check_models
import pytest
import sympy
from test_check import BEAM, LANGMUIR, MHD, PE

import plasmalin as plin

WEAK, BUNEMAN = ["n_b << n_0", "k u = omega_pe"], ["m_e << m_i", "k u = omega_pe"]
SLOW = "nu k/c_s << 1"


@pytest.fixture(scope="module")
def check():
    waves = {}

    def judged(model, claim, where=None, under=None):
        if model not in waves:
            waves[model] = getattr(check_models, model)()
        return waves[model].check(claim, where=where or {}, under=under)

    return judged


@pytest.mark.parametrize(
    ("model", "claim", "where", "under", "kind"),
    [
        ("viscous", "omega_r = k c_s", {}, SLOW, "limit"),
        ("viscous", "Re(omega) = k c_s", {}, SLOW, "limit"),
        ("viscous", "Re ω = k c_s", {}, SLOW, "limit"),
        ("viscous", "omega_r^2 = k^2 c_s^2", {}, SLOW, "limit"),
        ("viscous", "omega_r = k c_s - nu^2 k^3/(8 c_s)", {}, SLOW, "series"),
        ("viscous", "omega_r = sqrt(k^2 c_s^2 - nu^2 k^4/4)", {}, None, "branch"),
        ("viscous", "omega_r^2 = k^2 c_s^2 - nu^2 k^4/4", {}, None, "branch"),
        ("viscous", "gamma = -nu k^2/2", {}, None, "branch"),
        ("beam", "omega_r = omega_pe - (1/2) (n_b/(2 n_0))^(1/3) omega_pe", BEAM | PE, WEAK, "series"),
        ("beam", "ω_r = omega_pe (1 + (n_b/(2 n_0))^(1/3))", BEAM | PE, WEAK, "series"),
        ("beam", "gamma = (sqrt(3)/2) (n_b/(2 n_0))^(1/3) omega_pe", BEAM | PE, WEAK, "series"),
        ("buneman", "omega_r = (m_e/(2 m_i))^(1/3) omega_pe/2", PE, BUNEMAN, "series"),
        ("buneman", "omega_r = -(m_e/(2 m_i))^(1/3) omega_pe", PE, BUNEMAN, "limit"),
        ("langmuir", "omega_r = sqrt(omega_pe^2 + gamma_e k^2 v_te^2)", LANGMUIR, None, "branch"),
        ("langmuir", "omega_r^2 = omega_pe^2 + 3 k^2 v_te^2", LANGMUIR, ["gamma_e = 3"], "special"),
        ("resistive", "omega_r = k v_A", MHD, ["eta k/(mu_0 v_A) << 1"], "limit"),
        ("resistive", "Im(omega) = -eta k^2/(2 mu_0)", MHD, None, "branch"),
        ("jeans", "gamma^2 = 4 pi G rho_0 - k^2 c_s^2", {}, None, "branch"),
    ],
)  # fmt: skip
def test_right_claims(check, model, claim, where, under, kind):
    verdict = check(model, claim, where, under)
    assert (verdict.kind, verdict.agrees) == (kind, True), str(verdict)
    assert verdict.reading.startswith((r"\omega_{", r"\gamma"))


@pytest.mark.parametrize(
    ("model", "claim", "where", "under"),
    [
        ("viscous", "omega_r = 2 k c_s", {}, SLOW),
        ("viscous", "omega_r = k c_s - nu^2 k^3/(4 c_s)", {}, SLOW),
        ("viscous", "omega_r = k c_s + nu^2 k^3/(8 c_s)", {}, SLOW),
        ("viscous", "omega_r = sqrt(k^2 c_s^2 + nu^2 k^4/4)", {}, None),
        ("viscous", "gamma = -nu k^2", {}, None),
        ("beam", "omega_r = omega_pe - (n_b/(2 n_0))^(1/3) omega_pe", BEAM | PE, WEAK),
        ("beam", "omega_r = omega_pe - (1/2) (n_b/n_0)^(1/3) omega_pe", BEAM | PE, WEAK),
        ("beam", "omega = omega_pe - (1/2) (n_b/n_0)^(1/3) omega_pe", BEAM | PE, WEAK),
        ("buneman", "omega_r = (m_e/(2 m_i))^(1/3) omega_pe", PE, BUNEMAN),
        ("langmuir", "omega_r^2 = omega_pe^2 + 3 k^2 v_te^2", LANGMUIR, None),
        ("jeans", "gamma^2 = 4 pi G rho_0 + k^2 c_s^2", {}, None),
    ],
)
def test_wrong_claims(check, model, claim, where, under):
    assert not check(model, claim, where, under).agrees


def test_the_number_of_a_real_frequency_is_repaired(check):
    (slip,) = check("buneman", "omega_r = (m_e/m_i)^(1/3) omega_pe/2", PE, BUNEMAN).slips
    assert slip.multiplier == 2 ** sympy.Rational(-1, 3)
    assert "the frequency should carry" in slip.text


def test_an_author_may_define_the_name_otherwise(check):
    claim = "omega_r^2 = omega_pe^2 + gamma_e k^2 v_te^2"
    assert check("langmuir", claim, LANGMUIR | {"omega_r": "omega"}).kind == "identical"
    with pytest.raises(plin.DeclarationError, match="'omega_s' is not a symbol"):
        check("langmuir", claim.replace("omega_r", "omega_s"), LANGMUIR)
