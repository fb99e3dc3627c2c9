r"""Formulas of a manuscript in LaTeX: read as the same claim typed by hand, or refused with the place."""

import pytest
import sympy as sp

import plasmalin as plin
from plasmalin import advect, div, grad, laplacian, partial_t
from plasmalin.declare.latex import typed_text
from plasmalin.declare.typed import read_claim, read_typed

SYMBOLS = {
    n: sp.Symbol(n)
    for n in "omega omega_pe omega_p k k_x k_z c v_th theta gamma_e T_e m_e m_i n_0 a b lambda_D rho_s Omega_e".split()
} | {"i": sp.I, "v_the": sp.Symbol("v_the"), "k_perp": sp.Symbol("k_perp"), "k_parallel": sp.Symbol("k_parallel")}  # fmt: skip

PAIRS = [
    (r"\omega^2 = \omega_{pe}^2 + \gamma_e k^2 \frac{T_e}{m_e}", "omega^2 = omega_pe^2 + gamma_e k^2 (T_e/m_e)"),
    (r"$\omega^2_{\rm pe} = 3k^2v_{th}^2$", "omega_pe^2 = 3 k^2 v_th^2"),
    (r"1 = \dfrac{\omega_{\mathrm{pe}}^{2}}{\omega^{2} - 3k^2v_{\text{th}}^2}.", "1 = omega_pe^2/(omega^2 - 3 k^2 v_th^2)"),
    (r"\left(\frac{kc}{\omega}\right)^2 = 1", "(k c/omega)^2 = 1"),
    (r"\omega = k_\parallel \sqrt{1+k_{\perp}^2\rho_s^2}", "omega = k_parallel sqrt(1 + k_perp^2 rho_s^2)"),
    (r"\begin{equation}\label{eq:a_1}\omega = \tfrac12 k\,v_{th}\end{equation}", "omega = (1/2) k v_th"),
    (r"\omega &= a \nonumber \\ &+ b", "omega = a + b"),
    (r"\omega \simeq \Omega_e\cos\theta\,\sin^{2}\theta", "omega = Omega_e cos(theta) sin(theta)^2"),
    (r"\sqrt[3]{a} = \left\{ a - \left[b\right] \right\}", "a^(1/3) = a - b"),
    (r"\left|\omega\right| = |a|^{1/2}", "|omega| = |a|^(1/2)"),
    (r"k_zk_x = -\mathrm{i}\,a^{-1}b", "k_z k_x = -i a^(-1) b"),
    (r"\mathbf{k}\cdot a \approx 2\pi b", "k*a = 2 pi b"),
]  # fmt: skip


@pytest.mark.parametrize(("latex", "typed"), PAIRS)
def test_latex_and_typed_mathematics_are_the_same_claim(latex, typed):
    assert read_claim(latex, SYMBOLS) == read_claim(typed, SYMBOLS)


def test_other_text_stays():
    for text in ("omega^2 = 3 k^2", "ω² = e^{-b}", ""):
        assert typed_text(text) == text


def test_tildes_and_primes_belong_to_the_name():
    assert typed_text(r"\tilde{n}_{e}") == "n\u0303_e"
    assert typed_text(r"\omega'^2") == "omega'^2"


@pytest.mark.parametrize(
    ("latex", "message"),
    [
        (r"\foo a", r"\\foo is not read"),
        (r"\frac{a}{b", "brace is not closed"),
        (r"\frac{a}", "ends where something is needed"),
        (r"\omega = a}", "closes nothing"),
        (r"(\omega)_a", "a subscript stands alone"),
        (r"\begin{pmatrix} a & b \end{pmatrix}", "matrix as"),
        ("\frac{a}{b}", "a backslash is lost"),
        (r"\omega^23", "two numbers side by side"),
        (r"\pm a", "two claims"),
        (r"\omega_{\foo}", "not read in a subscript"),
        (r"\omega_{a", "ends where something is needed"),
    ],
)
def test_refused_with_what_to_write(latex, message):
    with pytest.raises(plin.ReadError, match=message):
        read_typed(latex, SYMBOLS)


def test_what_is_ambiguous_in_print_stays_so():
    with pytest.raises(plin.AmbiguousText):
        read_typed(r"\omega/a b", SYMBOLS)


def test_a_manuscript_is_checked_as_it_stands():
    """Bohm and Gross 1949, Phys. Rev. 75, 1851 (from memory), names, definitions and conditions all in LaTeX."""
    model = plin.FluidModel("warm electrons", axes="x")
    n, v, phi = model.scalar("n_e", background="n_0"), model.vector("v_e"), model.scalar("phi")
    e, eps0, m = model.constants("e epsilon_0 m_e")
    n0, temperature, gamma = model.parameters("n_0 T_e gamma_e", positive=True)
    model.law("continuity", partial_t(n) + div(n * v))
    force = e * n * grad(phi) - grad(n0 * temperature * (n / n0) ** gamma)
    model.law("momentum", m * n * (partial_t(v) + advect(v, v)), force)
    model.law("Poisson", eps0 * laplacian(phi), e * (n - n0))
    linear = model.linearize()
    where = {
        r"\omega_{\mathrm{pe}}": r"\sqrt{\frac{n_0 e^2}{\epsilon_0 m_e}}",
        r"v_{\rm th}": r"\sqrt{T_e/m_e}",
    }
    wave, claim = linear.plane_wave("x"), r"\omega^2 = \omega_{pe}^2 + 3k^2v_{th}^2"
    assert wave.check(claim, where=where).kind == "special"
    assert wave.check(claim, where=where, under=[r"\gamma_e = 3"]).agrees
    assert not wave.check(claim.replace("3k", "k"), where=where, under=[r"\gamma_e = 3"]).agrees
    law = r"m_e n_0 \frac{\partial v_e}{\partial t} = e n_0 \nabla\phi - \gamma_e T_e \nabla n_e"
    assert linear.check("momentum", law).kind == "identical"
