"""What is printed reads as in a paper and is the same expression."""

import published
import published_more
import pytest
from sympy import simplify

import plasmalin as plin
from plasmalin import div, dot, grad, outer, partial_t
from plasmalin.declare.notation import by_dyads, latex, paper
from plasmalin.waves.coefficients import normalized_coefficients, printed_coefficients


def diffusion():
    model = plin.FluidModel("diffusion")
    n = model.scalar("n", background="n_0")
    d = model.parameter("D", positive=True)
    model.law("diffusion", partial_t(n) - d * div(grad(n)))
    return model.linearize()


def test_divergence_of_a_gradient_is_a_laplacian():
    linear = diffusion()
    assert str(linear.equations) == "diffusion   ∂_t ñ − D ∇²ñ = 0"
    assert "−D ∇²n_0" in str(linear.ledger)
    assert r"\nabla^2 \tilde{n}" in linear.equations.latex("diffusion")
    assert "div(grad(n))" in str(linear.laws["diffusion"])


def test_a_dyad_is_printed_as_one():
    linear = published_more.cgl_firehose().linear
    text = str(linear.equations)
    assert "(∇p̃_perp)·(ẑ⊗ẑ)" in text
    assert "[0, 0, 0;" not in text
    assert r"\hat{\mathbf{z}}\,\hat{\mathbf{z}}" in linear.equations.latex("momentum")
    assert "pmatrix" not in linear.equations.latex("momentum")


def test_dyads_of_general_vectors_and_tensors_that_are_none():
    model = plin.FluidModel("dyads")
    a, b, c = model.parameters("a b c", positive=True)
    p = model.scalar("p")
    shear = plin.components((a * b, 0, a * c), (0, 0, 0), (c * b, 0, c**2))
    assert paper(by_dyads(shear)) == "(a x̂ + c ẑ)⊗(b x̂ + c ẑ)"
    assert paper(dot(grad(p), b * shear)) == "b (∇p)·((a x̂ + c ẑ)⊗(b x̂ + c ẑ))"
    diagonal = plin.components((a, 0, 0), (0, a, 0), (0, 0, b))
    assert by_dyads(diagonal) == diagonal
    assert "pmatrix" in latex(diagonal)
    assert paper(outer(plin.components(0, 0, 1), plin.components(1, 0, 0))) == "ẑ⊗x̂"


def test_coefficients_are_factored_where_that_is_shorter():
    """Fast and slow waves: omega^4 − k^2 (c_A^2 + c_s^2) omega^2 + k^2 kz^2 c_A^2 c_s^2 (case ideal-mhd-shear-fast-slow)."""
    relation = published.ideal_mhd_shear_fast_slow().relation
    assert "− ((B0² + γ mu0 p0) (kx² + kz²)/(mu0 rho0)) ω²" in str(relation)
    assert str(relation).count("(kx² + kz²)") == 2
    assert r"\left(kx^{2} + kz^{2}\right)" in relation.latex()
    drag = published.ion_acoustic_boltzmann_debye().relation
    assert str(drag).startswith("mi (Te_eV eps0 k² + e n0) ω² − e k² (")


def test_sums_that_do_not_gain_stay():
    text = str(published.upper_hybrid_warm().relation)
    assert text.startswith("ω² − B0² e²/me² − Te_eV e γ kx²/me − e² n0/(eps0 me) = 0")


@pytest.mark.parametrize(
    ("module", "name"), [(m, n) for m in (published, published_more) for n in m.CASES]
)
def test_printed_coefficients_are_the_same(module, name):
    for factor in module.CASES[name]().relation.factors:
        plain = normalized_coefficients(factor.polynomial)
        shown = printed_coefficients(factor.polynomial)
        assert all(simplify(plain[p] - shown[p]) == 0 for p in plain)
        assert all(len(paper(shown[p])) <= len(paper(plain[p])) for p in plain)


def test_long_coefficients_are_left_as_they_are():
    wave = plin.load_example("xenon-iodine-plume").linearize().plane_wave(("k_x", "k_z"))
    (factor,) = (f for f in wave.relation.factors if f.degree > 2)
    plain, shown = (f(factor.polynomial) for f in (normalized_coefficients, printed_coefficients))
    long = [p for p, c in plain.items() if len(c.args) > 40]
    assert long
    assert all(shown[p] == plain[p] for p in long)


def test_a_zero_background_is_named_at_any_order():
    """n~ v_0 . grad v~ with v_0 = 0 is nothing at all; n~ v~ . grad v~ is what is neglected."""
    model = plin.FluidModel("at rest", axes="x")
    n, v = model.scalar("n", background="n_0"), model.vector("v")
    model.law("continuity", partial_t(n) + div(n * v))
    model.law("momentum", n * (partial_t(v) + plin.advect(v, v)) + grad(n))
    ledger = model.linearize().ledger.of("momentum")
    second = {str(p.raw): p.fate_text for p in ledger if p.order > 1}
    zero = [fate for raw, fate in second.items() if "v0" in raw]
    assert zero
    assert set(zero) == {"vanishes: the background is zero"}
    rest = {fate for raw, fate in second.items() if "v0" not in raw}
    assert rest == {"dropped: product of perturbations"}
