"""Every ready law and term against the same law typed by hand, as text; closures that contradict."""

import pytest
import sympy

import plasmalin as plin
from plasmalin import laws
from plasmalin.declare.operators import rank_of

PARAMETERS = "n_0 T_0 gamma m_a m_b q e nu alpha beta S Q kappa_1 kappa_2 mu zeta eta mu_0 eps_0 c G hbar v_t I_e I_i Z"
SCALARS = "n n_a n_b p T T_a T_b p_1 p_2 phi psi rho q_d"
VECTORS = "v v_a v_b E B"


def kit():
    """A model with everything that the laws below are about, and its names."""
    model = plin.FluidModel("ready laws")
    model.parameters(PARAMETERS, positive=True)
    for name in SCALARS.split():
        model.scalar(name, background=f"{name}0")
    for name in VECTORS.split():
        model.vector(name, background=(f"{name}_x", 0, f"{name}_z"))
    model.vector_parameter("g", (0, 0, "-g_0"))
    model.vector_parameter("Omega", (0, 0, "Omega_0"))
    model.vector_parameter("r", ("r_0", 0, 0))
    names = type("Names", (), {**model.symbols, **model.fields, **model.vector_parameters})
    return model, names


W = "(grad(v) + transpose(grad(v)) - 2/3*identity*trace(grad(v)))"
MHD_FORCE = "cross(curl(B), B)/mu_0"

TERMS = {
    "electric force": (
        lambda x: laws.lorentz_force(x.n, x.q, electric=x.E, magnetic=x.B, v=x.v),
        "q*n*(E + cross(v, B))",
    ),
    "potential force": (
        lambda x: laws.lorentz_force(x.n, x.q, potential=x.phi),
        "-q*n*grad(phi)",
    ),
    "ionization": (lambda x: laws.ionization(x.n, x.nu), "nu*n"),
    "recombination": (lambda x: laws.recombination(x.n_a, x.n_b, x.beta), "-beta*n_a*n_b"),
    "attachment": (lambda x: laws.attachment(x.n, x.nu), "-nu*n"),
    "source momentum": (
        lambda x: laws.source_momentum(x.m_a, laws.ionization(x.n, x.nu), x.v_a, x.v_b),
        "-m_a*nu*n*(v_a - v_b)",
    ),
    "neutral friction": (
        lambda x: laws.neutral_friction(x.n, x.v, x.m_a, x.nu, x.r),
        "-m_a*n*nu*(v - r)",
    ),
    "friction": (
        lambda x: laws.friction(x.n_a, x.v_a, x.n_b, x.v_b, x.alpha / x.T**2),
        "-alpha*n_a*n_b*(v_a - v_b)/T^2",
    ),
    "frictional heat": (
        lambda x: laws.frictional_heat(
            x.n_a, x.v_a, x.n_b, x.v_b, x.alpha, x.m_b / (x.m_a + x.m_b)
        ),
        "m_b/(m_a + m_b)*alpha*n_a*n_b*dot(v_a - v_b, v_a - v_b)",
    ),
    "heat exchange": (
        lambda x: laws.heat_exchange(x.n_a, x.T_a, x.n_b, x.T_b, x.nu),
        "nu*n_a*n_b*(T_b - T_a)",
    ),
    "viscous force": (
        lambda x: laws.viscous_force(x.v, x.mu, x.zeta),
        "mu*laplacian(v) + (zeta + mu/3)*grad(div(v))",
    ),
    "viscous stress": (
        lambda x: laws.viscous_stress(x.v, x.mu, x.zeta),
        f"-mu*{W} - zeta*identity*div(v)",
    ),
    "viscous heat": (
        lambda x: laws.viscous_heat(x.v, x.mu, x.zeta),
        f"mu*ddot({W}, grad(v)) + zeta*div(v)^2",
    ),
    "gravity from a potential": (
        lambda x: laws.gravity_force(x.rho, potential=x.psi),
        "-rho*grad(psi)",
    ),
    "constant gravity": (lambda x: laws.gravity_force(x.rho, acceleration=x.g), "rho*g"),
    "Coriolis": (lambda x: laws.rotation_force(x.rho, x.v, x.Omega), "-2*rho*cross(Omega, v)"),
    "Coriolis and centrifugal": (
        lambda x: laws.rotation_force(x.rho, x.v, x.Omega, x.r),
        "-2*rho*cross(Omega, v) - rho*cross(Omega, cross(Omega, r))",
    ),
    "quantum potential": (
        lambda x: laws.bohm_force(x.n, x.m_a, x.hbar),
        "n*hbar^2/(2*m_a)*grad(laplacian(sqrt(n))/sqrt(n))",
    ),
    "isothermal": (lambda x: laws.isothermal_pressure(x.n, x.T), "n*T"),
    "polytropic": (
        lambda x: laws.polytropic_pressure(x.n, x.n_0, x.T_0, x.gamma),
        "n_0*T_0*(n/n_0)^gamma",
    ),
    "field-aligned": (
        lambda x: laws.field_aligned(x.p_1, x.p_2, x.B),
        "p_2*identity + (p_1 - p_2)*outer(B, B)/dot(B, B)",
    ),
    "Landau heat loss": (
        lambda x: laws.landau_heat_loss(x.T, x.n_0, x.v_t),
        "multiplier(T, sqrt(2)*n_0*v_t*k_abs/sqrt(pi))",
    ),
    "Boltzmann": (
        lambda x: laws.boltzmann_density(x.n_0, -x.e, x.T_0, x.phi),
        "n_0*exp(e*phi/T_0)",
    ),
    "magnetic force": (lambda x: laws.magnetic_force(x.B, x.mu_0), MHD_FORCE),
    "ohmic heat": (
        lambda x: laws.ohmic_heat(x.B, x.eta, x.mu_0),
        "eta*dot(curl(B), curl(B))/mu_0^2",
    ),
    "Hall field": (
        lambda x: laws.hall_field(x.B, x.n, e=x.e, mu_0=x.mu_0, electron_pressure=x.p),
        f"({MHD_FORCE} - grad(p))/(e*n)",
    ),
    "electrons to grains": (lambda x: laws.grain_sinks(x.n, x.I_e, x.I_i, x.e, x.Z)[0], "n*I_e/e"),
    "ions to grains": (
        lambda x: laws.grain_sinks(x.n, x.I_e, x.I_i, x.e, x.Z)[1],
        "-n*I_i/(Z*e)",
    ),
}


@pytest.mark.parametrize("name", TERMS)
def test_term_by_hand(name):
    ready, text = TERMS[name]
    model, x = kit()
    made = ready(x)
    carrier = {0: "T", 1: "E"}.get(rank_of(made))
    hand = model.law("hand", f"{carrier} = {text}" if carrier else f"outer(v, v) = {text}")
    assert sympy.expand(hand.rhs - made) == 0


MOMENTUM = "m_a*n*(partial_t(v) + advect(v, v))"
LAWS = {
    "continuity": (
        lambda m, x: laws.continuity(m, "n", "v", laws.ionization(x.n_a, x.nu)),
        ("partial_t(n) + div(n*v) = nu*n_a",),
    ),
    "momentum": (
        lambda m, x: laws.momentum(
            m, "n", "v", mass=x.m_a, force=x.n * x.g, pressure=x.p, collisions=x.nu * x.v_b
        ),
        (f"{MOMENTUM} = n*g - grad(p) + nu*v_b",),
    ),
    "tensor pressure": (
        lambda m, x: laws.momentum(m, x.n, x.v, mass=x.m_a, pressure=plin.outer(x.v, x.v)),
        (f"{MOMENTUM} = -div(outer(v, v))",),
    ),
    "massless": (
        lambda m, x: laws.momentum(
            m, x.n, x.v, mass=x.m_a, force=x.q * x.n * x.E, massless=True, pressure=x.p
        ),
        ("0 = q*n*E - grad(p)",),
    ),
    "relativistic": (
        lambda m, x: laws.relativistic_momentum(m, x.n, x.v, mass=x.m_a, c=x.c, force=x.n * x.g),
        (
            "m_a*n*(partial_t(v/sqrt(1 - dot(v, v)/c^2)) + advect(v, v/sqrt(1 - dot(v, v)/c^2))) = n*g",
        ),
    ),
    "adiabatic": (
        lambda m, x: laws.adiabatic_pressure(m, "p", "v", x.gamma, heating=x.Q, collisions=x.S),
        ("partial_t(p) + advect(v, p) + gamma*p*div(v) = (gamma - 1)*(Q + S)",),
    ),
    "energy": (
        lambda m, x: laws.energy(m, "T", "n", "v", x.gamma, conductivity=x.kappa_1, heating=x.Q),
        (
            "n/(gamma - 1)*(partial_t(T) + advect(v, T)) + n*T*div(v) = div(kappa_1*grad(T)) + Q",
        ),
    ),
    "energy along B": (
        lambda m, x: laws.energy(
            m, x.T, x.n, x.v, x.gamma, conductivity=laws.field_aligned(x.kappa_1, x.kappa_2, x.B)
        ),
        (
            "n/(gamma - 1)*(partial_t(T) + advect(v, T)) + n*T*div(v) = div(dot(kappa_2*identity + (kappa_1 - kappa_2)*outer(B, B)/dot(B, B), grad(T)))",
        ),
    ),
    "Poisson": (
        lambda m, x: laws.poisson(m, "phi", x.e * (x.n_a - x.n_b), epsilon_0=x.eps_0),
        ("-eps_0*laplacian(phi) = e*(n_a - n_b)",),
    ),
    "quasi-neutrality": (
        lambda m, x: laws.quasineutrality(m, x.e * (x.n_a - x.n_b)),
        ("e*(n_a - n_b) = 0",),
    ),
    "Maxwell": (
        lambda m, x: laws.maxwell(m, "E", "B", x.q * x.n * x.v, mu_0=x.mu_0, epsilon_0=x.eps_0),
        ("partial_t(B) = -curl(E)", "curl(B) = mu_0*q*n*v + mu_0*eps_0*partial_t(E)"),
    ),
    "Maxwell without displacement current": (
        lambda m, x: laws.maxwell(m, x.E, x.B, x.q * x.n * x.v, mu_0=x.mu_0),
        ("partial_t(B) = -curl(E)", "curl(B) = mu_0*q*n*v"),
    ),
    "self-gravity": (
        lambda m, x: laws.self_gravity(m, "psi", x.rho, big_g=x.G),
        ("laplacian(psi) = 4*pi*G*rho",),
    ),
    "MHD": (
        lambda m, x: laws.mhd(
            m,
            "rho",
            "v",
            "p",
            "B",
            gamma=x.gamma,
            mu_0=x.mu_0,
            resistivity=x.eta,
            shear=x.mu,
            hall=laws.hall_field(x.B, x.rho / x.m_a, e=x.e, mu_0=x.mu_0),
        ),
        (
            "partial_t(rho) + div(rho*v) = 0",
            f"rho*(partial_t(v) + advect(v, v)) = {MHD_FORCE} - grad(p) + mu*(laplacian(v) + grad(div(v))/3)",
            f"partial_t(p) + advect(v, p) + gamma*p*div(v) = (gamma - 1)*(eta*dot(curl(B), curl(B))/mu_0^2 + mu*ddot({W}, grad(v)))",
            f"partial_t(B) = curl(cross(v, B) - eta/mu_0*curl(B) - m_a*{MHD_FORCE}/(e*rho))",
        ),
    ),
    "incompressible": (lambda m, x: laws.incompressible(m, "v"), ("div(v) = 0",)),
    "grain charge": (
        lambda m, x: laws.grain_charge(m, "q_d", "v", -x.I_e * x.n_a, x.I_i * x.n_b),
        ("partial_t(q_d) + advect(v, q_d) = I_i*n_b - I_e*n_a",),
    ),
}  # fmt: skip


@pytest.mark.parametrize("name", LAWS)
def test_law_by_hand(name):
    """Side by side; linearized with the same background the pieces then agree as well."""
    ready, texts = LAWS[name]
    model, x = kit()
    made = ready(model, x)
    made = made if isinstance(made, tuple) else (made,)
    other, _ = kit()
    typed = [other.law(f"hand {i}", text) for i, text in enumerate(texts)]
    assert len(made) == len(typed)
    for mine, theirs in zip(made, typed, strict=True):
        assert _same(mine.residual, theirs.residual)


def _same(a, b):
    """Equal after products over sums are multiplied out, also inside operators."""
    return sympy.expand(a - b) == 0 or sympy.expand(_expanded(a) - _expanded(b)) == 0


def _expanded(expr):
    if not expr.args:
        return expr
    return sympy.expand(expr.func(*(_expanded(a) for a in expr.args)))


def test_double_adiabatic_by_hand():
    model, x = kit()
    tensor = laws.double_adiabatic(model, "n", "v", "B", "p_1", "p_2")
    other, _ = kit()
    across = other.law("1", "partial_t(p_2/(n*norm(B))) + advect(v, p_2/(n*norm(B))) = 0")
    along = other.law("2", "partial_t(p_1*norm(B)^2/n^3) + advect(v, p_1*norm(B)^2/n^3) = 0")
    assert model.laws["p_2 invariant"].residual == across.residual
    assert model.laws["p_1 invariant"].residual == along.residual
    assert tensor == laws.field_aligned(x.p_1, x.p_2, x.B)


def test_ready_laws_are_replaceable():
    model, x = kit()
    laws.adiabatic_pressure(model, "p", x.v, x.gamma)
    model.remove_law("p pressure")
    law = model.law("p pressure", "p = n*T_0")
    assert law.role is None


# Closures that contradict ------------------------------------------------------------------------


def test_two_closures_for_one_species():
    model, x = kit()
    laws.momentum(
        model, x.n, x.v, mass=x.m_a, pressure=laws.polytropic_pressure(x.n, x.n_0, x.T_0, x.gamma)
    )
    with pytest.raises(
        plin.DeclarationError,
        match=r"contradictory closures for 'v': law 'p pressure' evolves 'p', but the pressure in law 'v momentum'",
    ):
        laws.adiabatic_pressure(model, "p", x.v, x.gamma)
    assert list(model.laws) == ["v momentum"]
    laws.adiabatic_pressure(model, "p", x.v_a, x.gamma)
    with pytest.raises(
        plin.DeclarationError, match="law 'again' and law 'p pressure' both close 'p'"
    ):
        laws.adiabatic_pressure(model, "p", x.v_a, 2, name="again")
    with pytest.raises(plin.DeclarationError, match="both close its pressure; keep one"):
        laws.incompressible(model, x.v_a)
    with pytest.raises(
        plin.DeclarationError, match="evolves 'p', but the pressure in law 'v_a momentum' is T_a"
    ):
        laws.momentum(model, x.n_a, x.v_a, mass=x.m_a, pressure=x.T_a)


def test_closure_of_an_undeclared_field():
    model = plin.FluidModel("bare")
    v = model.vector("v")
    with pytest.raises(
        plin.DeclarationError,
        match=r"adiabatic_pressure needs a scalar field; 'p_e' is not declared as one; declare it first: "
        r"p_e = model\.scalar\('p_e', background=\"p_e_0\"\)",
    ):
        laws.adiabatic_pressure(model, "p_e", v, 2)
    with pytest.raises(
        plin.DeclarationError, match=r"induction needs a vector field; .* B = model\.vector\('B'"
    ):
        laws.induction(model, "B", v)
    with pytest.raises(
        plin.DeclarationError,
        match="energy needs a scalar field; T is not declared as one",
    ):
        laws.energy(model, sympy.Symbol("T"), 1, v, 2)
    with pytest.raises(plin.DeclarationError, match="needs a scalar field"):
        laws.poisson(model, None, 1, epsilon_0=1)
    n = model.scalar("n", background="n_0")
    with pytest.raises(plin.DeclarationError, match="polytropic_pressure: n_0 = n holds a field"):
        laws.polytropic_pressure(n, n, 1, 2)


@pytest.mark.parametrize(
    ("magnetic", "message"), [(0, "magnetic=0"), (plin.components(1), "needs three axes")]
)
def test_gyroviscosity_needs_a_field(magnetic, message):
    v = plin.FluidModel("bare").vector("v")
    with pytest.raises(plin.DeclarationError, match=message):
        laws.gyroviscous_stress(v, 1, magnetic, charge=1, mass=1)
