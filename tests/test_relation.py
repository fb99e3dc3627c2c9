"""The wave matrix, the exact relation, elimination and wave equations."""

import pytest
import sympy

import plasmalin as plin
from plasmalin import advect, cross, curl, div, grad, laplacian, multiplier, partial_t


def langmuir(axes="x"):
    model = plin.FluidModel("warm electrons", axes=axes)
    n, v, phi = model.scalar("n_e", background="n_0"), model.vector("v_e"), model.scalar("phi")
    e, eps0, m = model.constants("e epsilon_0 m_e")
    n0, t, gamma = model.parameters("n_0 T_e gamma_e", positive=True)
    model.law("continuity", partial_t(n) + div(n * v))
    model.law(
        "momentum",
        m * n * (partial_t(v) + advect(v, v)),
        e * n * grad(phi) - grad(n0 * t * (n / n0) ** gamma),
    )
    model.law("Poisson", eps0 * laplacian(phi), e * (n - n0))
    return model.linearize()


def numbers(relation):
    return {s.name: s for g in relation.exact.generators for s in g.free_symbols}


def test_bohm_gross_exactly():
    """D. Bohm and E. P. Gross (1949), Phys. Rev. 75, 1851, with general gamma."""
    wave = langmuir().plane_wave("x")
    relation = wave.relation
    s = {**wave.linear.symbols, "k": wave.wave_symbols[0]}
    expected = s["epsilon_0"] * s["m_e"] * wave.omega**2 - s["n_0"] * s["e"] ** 2
    expected -= s["epsilon_0"] * s["gamma_e"] * s["T_e"] * s["k"] ** 2
    assert sympy.expand(relation.as_expr() - expected) == 0
    assert (relation.degree, relation.zero_modes) == (2, 0)
    assert relation.polynomial.gens == (wave.omega,)
    plus, minus = relation.solve_for("omega")
    assert sympy.simplify(plus + minus) == 0
    assert sympy.simplify(plus**2 - sympy.solve(expected, wave.omega)[0] ** 2) == 0
    assert relation.latex().endswith("= 0")


def test_three_ways_to_give_the_wave_vector():
    linear = langmuir("xz")
    along = linear.plane_wave("z")
    general = linear.plane_wave(("k_x", "k_z"))
    angle = linear.plane_wave(angle="theta")
    assert [c != 0 for c in along.k] == [False, True]
    k, theta = angle.wave_symbols
    assert angle.k == (k * sympy.sin(theta), k * sympy.cos(theta))
    kx, kz = general.wave_symbols
    substituted = general.relation.substitute({kx: 0, kz: along.wave_symbols[0]})
    assert sympy.expand(substituted.as_expr() - along.relation.as_expr()) == 0
    # Electrostatic waves of a plasma without a magnetic field do not see the direction of k.
    assert not angle.relation.factors[0].expr.has(theta)
    oblique = linear.plane_wave(("3*q", "4*q"))
    (q,) = oblique.wave_symbols
    fivefold = along.relation.substitute({along.wave_symbols[0]: 5 * q})
    assert sympy.expand(oblique.relation.as_expr() - fivefold.as_expr()) == 0


@pytest.mark.parametrize(
    ("direction", "message"),
    [("y", "not an axis"), (("k",), "one entry per axis"), ((0, 0), "is zero"), (None, "either a direction")],
)  # fmt: skip
def test_direction_that_does_not_fit(direction, message):
    with pytest.raises(plin.DeclarationError, match=message):
        langmuir("xz").plane_wave(direction)


def test_angle_needs_x_and_z():
    with pytest.raises(plin.DeclarationError, match="needs the axes x and z"):
        langmuir("x").plane_wave(angle="theta")


def test_wave_number_named_like_a_parameter():
    model = plin.FluidModel("named k", axes="x")
    n = model.scalar("n", background="k")
    model.law("L", partial_t(n), laplacian(n) * n)
    with pytest.raises(plin.DeclarationError, match="'k' is a parameter"):
        model.linearize().plane_wave("x")
    assert model.linearize().plane_wave(("q",)).relation.degree == 1


def test_wave_equation_as_an_author_prints_it():
    equation = langmuir().plane_wave("x").wave_equation("n_e")
    assert list(equation.terms) == [(2, 0), (0, 0), (0, 2)]
    assert str(equation).startswith("∂_t² ñ_e + ")
    assert "∂_x² ñ_e = 0" in str(equation)
    assert r"\partial_t^{2} \tilde{n_{e}}" in equation._repr_latex_()
    t, x = sympy.symbols("t x")
    f = sympy.Function("n_e")(t, x)
    assert equation.expr.coeff(f.diff(t, 2)) == 1


def sound_with_friction():
    model = plin.FluidModel("sound with friction", axes="xz")
    rho, v = model.scalar("rho", background="rho_0"), model.vector("v")
    cs, nu = model.parameters("c_s nu", positive=True)
    model.law("continuity", partial_t(rho) + div(rho * v))
    model.law("momentum", rho * partial_t(v), -(cs**2) * grad(rho) - nu * rho * v)
    return model.linearize()


def test_wave_equation_holds_only_what_moves_the_field():
    """Density follows the telegraph equation; the vortical damping moves the velocity alone."""
    wave = sound_with_friction().plane_wave(("k_x", "k_z"))
    assert wave.relation.degree == 3
    density = wave.wave_equation("rho")
    assert set(density.terms) == {(2, 0, 0), (1, 0, 0), (0, 2, 0), (0, 0, 2)}
    assert density.terms[1, 0, 0] == wave.linear.symbols["nu"]
    assert max(o[0] for o in wave.wave_equation("v_x").terms) == 3
    with pytest.raises(plin.DeclarationError, match="several components; name one of v_x, v_z"):
        wave.wave_equation("v")
    with pytest.raises(plin.DeclarationError, match="no field or amplitude 'w'"):
        wave.wave_equation("w")


def test_wave_equation_needs_polynomial_wave_numbers():
    model = plin.FluidModel("non-local", axes="x")
    n = model.scalar("n")
    model.law("L", partial_t(n), -multiplier(n, plin.k_abs))
    with pytest.raises(plin.NonPolynomialError, match="no differential equation"):
        model.linearize().plane_wave("x").wave_equation("n")


def test_memory_closure():
    """A conductivity with memory 1/(1 − i omega tau) adds one root and no spurious one."""
    model = plin.FluidModel("memory", axes="x")
    electric, current = model.vector("E"), model.vector("J")
    tau, sigma, eps0 = model.parameters("tau sigma epsilon_0", positive=True)
    memory = 1 / (1 - sympy.I * plin.omega * tau)
    model.law("Ampere", eps0 * partial_t(electric), -current)
    model.law("Ohm", current, sigma * multiplier(electric, memory))
    wave = model.linearize().plane_wave("x")
    assert wave.relation.degree == 2
    expected = eps0 * (-sympy.I * wave.omega) * (1 - sympy.I * wave.omega * tau) + sigma
    ratio = sympy.cancel(wave.relation.as_expr() / sympy.expand(expected))
    assert not ratio.free_symbols


def test_not_polynomial_in_omega():
    model = plin.FluidModel("delay", axes="x")
    n, tau = model.scalar("n"), model.parameter("tau")
    model.law("L", partial_t(n), -multiplier(n, sympy.exp(plin.omega * tau)))
    with pytest.raises(plin.NonPolynomialError, match=r"exp\(omega\*tau\)"):
        _ = model.linearize().plane_wave("x").relation


def test_singular_system_names_laws_and_unknowns():
    model = plin.FluidModel("gauge", axes="xyz")
    a, b = model.vector("A"), model.vector("B")
    model.law("B from A", b, curl(a))
    model.law("curl", curl(b), b * 0 + curl(curl(a)) + 0 * partial_t(a))
    with pytest.raises(
        plin.UndeterminedError, match=r"determinant vanishes identically.*'curl, x'"
    ):
        _ = model.linearize().plane_wave(("k_x", "k_y", "k_z")).relation


def test_no_time_derivative():
    model = plin.FluidModel("static", axes="x")
    n = model.scalar("n")
    model.law("L", laplacian(n), n)
    with pytest.raises(plin.UndeterminedError, match="omega does not occur"):
        _ = model.linearize().plane_wave("x").relation


def cold_magnetized():
    model = plin.FluidModel("cold magnetized electrons and ions")
    electric, magnetic = model.vector("E"), model.vector("B", background=(0, 0, "B_0"))
    c, eps0, e = model.constants("c epsilon_0 e")
    current = 0
    for s, sign in (("e", -1), ("i", 1)):
        m, n0 = model.parameters(f"m_{s} n_{s}", positive=True)
        v = model.vector(f"v_{s}")
        model.law(
            f"{s} momentum",
            m * (partial_t(v) + advect(v, v)),
            sign * e * (electric + cross(v, magnetic)),
        )
        current += sign * e * n0 * v
    model.law("Faraday", partial_t(magnetic), -curl(electric))
    model.law("Ampere", partial_t(electric), c**2 * curl(magnetic) - current / eps0)
    return model.linearize()


def test_cold_dispersion_tensor_is_the_classical_one():
    """T. H. Stix (1992), Waves in Plasmas, ch. 1 (from memory): n²-form with S, D and P, for one sign convention."""
    wave = cold_magnetized().plane_wave(("k_x", 0, "k_z"))
    reduced = wave.reduce("E")
    w, s = wave.omega, wave.linear.symbols
    kx, kz = wave.wave_symbols
    s_sum, d_sum, p_sum = sympy.Integer(1), sympy.Integer(0), sympy.Integer(1)
    for name, sign in (("e", -1), ("i", 1)):
        wp2 = s[f"n_{name}"] * s["e"] ** 2 / (s["epsilon_0"] * s[f"m_{name}"])
        gyro = sign * s["e"] * s["B_0"] / s[f"m_{name}"]
        s_sum -= wp2 / (w**2 - gyro**2)
        d_sum += gyro * wp2 / (w * (w**2 - gyro**2))
        p_sum -= wp2 / w**2
    n2 = (s["c"] / w) ** 2
    tensor = sympy.Matrix(
        [
            [s_sum - n2 * kz**2, -sympy.I * d_sum, n2 * kx * kz],
            [sympy.I * d_sum, s_sum - n2 * (kx**2 + kz**2), 0],
            [n2 * kx * kz, 0, p_sum - n2 * kx**2],
        ]
    )
    assert [a.name for a in reduced.amplitudes] == ["E_x", "E_y", "E_z"]
    assert reduced.laws == ("Ampere, x", "Ampere, y", "Ampere, z")
    values = {
        x: sympy.Rational(p, 7)
        for x, p in zip(
            sorted({*s.values(), kx, kz, w}, key=str),
            (3, 5, 11, 13, 17, 19, 23, 29, 31, 37, 41),
            strict=False,
        )
    }
    difference = (reduced.matrix / (-sympy.I * w) - tensor).subs(values)
    assert sympy.simplify(difference) == sympy.zeros(3, 3)


def test_reduction_keeps_the_relation():
    wave = langmuir().plane_wave("x")
    (entry,) = wave.reduce("phi").matrix
    top, _ = sympy.fraction(sympy.together(entry))
    ratio = sympy.cancel(top / wave.relation.as_expr())
    assert wave.omega not in ratio.free_symbols


def test_substitute():
    relation = langmuir().plane_wave("x").relation
    isothermal = relation.substitute({"gamma_e": 1, "n_0": 0.5})
    assert "gamma_e" not in numbers(isothermal)
    with pytest.raises(plin.DeclarationError, match="'T_i' is not in the relation"):
        relation.substitute({"T_i": 1})


def test_closed_forms_stop_where_radicals_stop():
    wave = plin.load_example("xenon-iodine-plume").linearize().plane_wave(("k", 0))
    with pytest.raises(plin.DeclarationError, match="no closed form"):
        wave.relation.solve_for("omega")
    assert langmuir().plane_wave("x").relation.solve_for("T_e")


def test_printing():
    wave = langmuir().plane_wave("x")
    assert "momentum, x" in str(wave)
    assert wave._repr_latex_().startswith("$")
    assert "ω²" in str(wave.relation)
    assert "degree 2" in repr(wave.relation)
    parallel = cold_magnetized().plane_wave("z").relation
    assert parallel.zero_modes > 0
    assert "zero modes" in str(parallel)


def test_leading_balances_of_two_fluids():
    """m_e, k small: ion-acoustic waves at omega ~ k and the plasma oscillation of the electrons (Krall and Trivelpiece
    1973, ch. 4, from memory)."""
    model = plin.FluidModel("two fluids", axes="x")
    e, eps0, me, mi, te, n0 = model.parameters("e eps0 m_e m_i T_e n_0", positive=True)
    phi = model.scalar("phi")
    densities = {}
    for s, mass, charge, t in (("e", me, -e, te), ("i", mi, e, 0)):
        n = densities[s] = model.scalar(f"n_{s}", background=n0)
        v = model.vector(f"v_{s}")
        model.law(f"{s} continuity", partial_t(n) + div(n * v))
        model.law(f"{s} momentum", mass * n * partial_t(v), -charge * n * grad(phi) - t * grad(n))
    model.law("Poisson", eps0 * laplacian(phi), e * (densities["e"] - densities["i"]))
    wave = model.linearize().plane_wave("x")
    slow, fast = wave.relation.leading({"m_e": 2, "k": 1})
    (k,) = wave.wave_symbols
    w = wave.omega
    assert (slow.scaling, slow.roots, fast.scaling, fast.roots) == (1, 2, -1, 2)
    assert sympy.simplify(sympy.solve(slow.expr, w**2)[0] - k**2 * te / mi) == 0
    assert sympy.simplify(sympy.solve(fast.expr, w**2)[0] - n0 * e**2 / (eps0 * me)) == 0
    (fixed,) = wave.relation.leading({"m_e": 2, "k": 1, "omega": -1})
    assert fixed.expr == fast.expr
    assert "ω ~ ε^(-1)" in str(fixed)
    with pytest.raises(plin.DeclarationError, match="'T_x' is not in the relation"):
        wave.relation.leading({"T_x": 1})


def test_susceptibilities_sum_to_the_tensor():
    """vacuum + chi_e + chi_i = the dispersion tensor; chi_s xx is −wp²/(w² − W²) (T. H. Stix 1992, from memory)."""
    wave = cold_magnetized().plane_wave(("k_x", 0, "k_z"))
    tensor = wave.reduce("E").matrix
    parts = [wave.susceptibility(s).matrix for s in "ei"]
    s, w = wave.linear.symbols, wave.omega
    vacuum = tensor - parts[0] - parts[1]
    assert not vacuum.applyfunc(sympy.simplify).free_symbols & {s["m_e"], s["m_i"], s["B_0"]}
    for name, part in zip("ei", parts, strict=True):
        wp2 = s[f"n_{name}"] * s["e"] ** 2 / (s["epsilon_0"] * s[f"m_{name}"])
        gyro = s["e"] * s["B_0"] / s[f"m_{name}"]
        chi = part[0, 0] / (-sympy.I * w)
        assert sympy.simplify(chi + wp2 / (w**2 - gyro**2)) == 0
    with pytest.raises(
        plin.DeclarationError, match=r"no fields named '\.\.\._x'; the species are e, i"
    ):
        wave.susceptibility("x")


def test_electrostatic_susceptibility():
    """epsilon_0 k² (1 + chi_e) phi = 0 with chi_e = −wp²/(w² − gamma k² T/m)."""
    wave = langmuir().plane_wave("x")
    s, w, (k,) = wave.linear.symbols, wave.omega, wave.wave_symbols
    chi = wave.susceptibility("e").matrix[0, 0]
    wp2 = s["n_0"] * s["e"] ** 2 / (s["epsilon_0"] * s["m_e"])
    warm = s["gamma_e"] * k**2 * s["T_e"] / s["m_e"]
    vacuum = -s["epsilon_0"] * k**2
    assert sympy.simplify(chi / vacuum + wp2 / (w**2 - warm)) == 0
