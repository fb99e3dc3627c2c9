"""Declaring: every mistake is caught where it is made, by name."""

import pickle

import pytest
import sympy

import plasmalin as plin
from plasmalin import advect, cross, curl, div, dot, grad, norm, outer, partial_t


@pytest.fixture
def model():
    return plin.FluidModel("two fields", axes="xyz")


@pytest.fixture
def n(model):
    return model.scalar("n", background="n_0")


@pytest.fixture
def v(model):
    return model.vector("v")


def test_axes_in_order():
    with pytest.raises(plin.DeclarationError, match="axes='zx'"):
        plin.FluidModel("x", axes="zx")


def test_scalar_added_to_vector(model, n, v):
    with pytest.raises(plin.RankError, match=r"law 'sum'.*scalar \('n'\).*vector \('v'\)"):
        model.law("sum", n + v)


def test_sides_of_different_rank(model, n, v):
    with pytest.raises(plin.RankError, match="one side is a scalar, the other a vector"):
        model.law("sides", partial_t(n), grad(n))


def test_product_of_vectors(model, v):
    with pytest.raises(plin.RankError, match="use dot"):
        model.law("product", v * partial_t(v))


def test_vector_in_a_function(model, n, v):
    with pytest.raises(plin.RankError, match="takes scalars only"):
        model.law("function", n * sympy.exp(v))
    with pytest.raises(plin.RankError, match=r"dot\(v, v\)"):
        model.law("power", n * v**2)


def test_operator_on_the_wrong_rank(n):
    with pytest.raises(plin.RankError, match=r"div\(\) got the scalar 'n'"):
        div(n)


def test_duplicate_names(model, n):
    with pytest.raises(plin.DeclarationError, match="field 'n' is declared already"):
        model.scalar("n")
    with pytest.raises(plin.DeclarationError, match="parameter 'n_0' is declared already"):
        model.vector("n_0")


def test_duplicate_laws(model, n, v):
    model.law("continuity", partial_t(n) + div(n * v))
    with pytest.raises(plin.DeclarationError, match="law 'continuity' is declared already"):
        model.law("continuity", partial_t(n))
    with pytest.raises(plin.DeclarationError, match="law 'again' repeats law 'continuity'"):
        model.law("again", -2 * div(n * v), 2 * partial_t(n))


def test_law_without_field(model):
    model.parameters("a b")
    with pytest.raises(plin.DeclarationError, match="law 'nothing' holds no field"):
        model.law("nothing", "a = b")


def test_undeclared_symbol(model, n):
    with pytest.raises(plin.DeclarationError, match="law 'L': 'T' is not declared"):
        model.law("L", partial_t(n), sympy.Symbol("T") * n)


@pytest.mark.parametrize("symbol", [plin.k_x, plin.k_abs, plin.omega])
def test_wave_symbols_belong_into_multipliers(model, n, symbol):
    model.law("inside", partial_t(n), plin.multiplier(n, symbol**2) * n)
    with pytest.raises(plin.DeclarationError, match=f"law 'L': {symbol} stands outside multiplier"):
        model.law("L", partial_t(n), symbol * n + plin.multiplier(n, symbol))
    with pytest.raises(plin.DeclarationError, match="stands outside multiplier"):
        model.law("L", f"partial_t(n) = {symbol}*n")


def test_field_of_another_model(model, n):
    other = plin.FluidModel("other")
    with pytest.raises(plin.DeclarationError, match="belongs to another model"):
        other.law("L", partial_t(n))


@pytest.mark.parametrize("axes", ["x", "xz"])
def test_cross_and_curl_leave_the_axes(axes):
    model = plin.FluidModel("flat", axes=axes)
    v = model.vector("v")
    with pytest.raises(plin.DeclarationError, match="leaves the axes"):
        model.law("curl", partial_t(v), curl(v))
    with pytest.raises(plin.DeclarationError, match="leaves the axes"):
        model.law("cross", partial_t(v), cross(v, grad(dot(v, v))))


def test_components_of_the_wrong_size():
    model = plin.FluidModel("flat", axes="xz")
    v = model.vector("v")
    with pytest.raises(plin.RankError, match="3 entries"):
        model.law("L", partial_t(v), plin.components(0, 0, dot(v, v)))


def test_background_does_not_fit(model, n):
    with pytest.raises(plin.DeclarationError, match=r"'u'.*does not fit the axes 'xyz'"):
        model.vector("u", background=(1, 2))
    with pytest.raises(plin.DeclarationError, match="holds a field"):
        model.scalar("m", background=2 * n)
    with pytest.raises(plin.DeclarationError, match="not symmetric"):
        model.tensor("P", background=((0, "p", 0), (0, 0, 0), (0, 0, 0)))


def test_text_is_not_an_expression(n):
    with pytest.raises(plin.RankError, match="text 'n'"):
        grad("n")


def test_unknown_constant(model):
    with pytest.raises(plin.DeclarationError, match="'m_x' is not a known constant"):
        model.constants("m_x")


def test_ordinary_names():
    model = plin.FluidModel("names", axes="x")
    for name in ("E", "N", "S", "I", "beta", "gamma", "lambda", "pi"):
        model.scalar(name, background=1)
    law = model.law("all", "partial_t(E) = N*S*I*beta*gamma*lambda*pi")
    assert {f.name for f in law.residual.atoms(type(model.fields["E"]))} == set(model.fields)


def test_implied_background_may_be_declared_later():
    model = plin.FluidModel("order", axes="x")
    n = model.scalar("n", background="n_0")
    n_0 = model.parameter("n_0", positive=True)
    v = model.vector("v")
    model.law("continuity", partial_t(n) + div(n * v))
    model.law("momentum", partial_t(v), -grad((n / n_0) ** 2))
    entries = model.linearize().plane_wave("x").matrix
    assert entries.free_symbols <= {n_0, plin.omega, sympy.Symbol("k", real=True)}


def test_index_order_of_tensors():
    """div(outer(a, b)) = (a.grad) b + b div a, and dot(v, grad(u)) = advect(v, u)."""
    model = plin.FluidModel("order")
    a = model.vector("a", background=("a_x", "a_y", "a_z"))
    b = model.vector("b", background=("b_x", "b_y", "b_z"))
    model.law("tensor form", partial_t(a), div(outer(a, b)) + dot(a, grad(b)))
    model.law("vector form", partial_t(b), 2 * advect(a, b) + b * div(a))
    wave = model.linearize().plane_wave(("k_x", "k_y", "k_z"))
    first, second = (wave.matrix[i : i + 3, :].subs(wave.omega, 0).expand() for i in (0, 3))
    assert first == second


def test_nodes_pickle(n, v):
    law = partial_t(n * v) + div(outer(n * v, v)) - n * norm(v) * v
    assert pickle.loads(pickle.dumps(law)) == law


def test_constants_are_codata():
    assert plin.constants.c == 299792458.0
    assert plin.constants.e == 1.602176634e-19
    with pytest.raises(AttributeError, match="no constant 'm_x'"):
        _ = plin.constants.m_x


def test_public_names_are_listed():
    public = {name for name in vars(plin) if not name.startswith("_")}
    rooms = {
        "declare",
        "linearize",
        "waves",
        "exact",
        "roots",
        "check",
        "study",
        "present",
        "errors",
        "cli",
    }
    assert public - rooms == set(plin.__all__)


def test_remove_law(model, n, v):
    model.law("continuity", partial_t(n) + div(n * v))
    model.remove_law("continuity")
    assert not model.laws
    with pytest.raises(plin.DeclarationError, match="no law 'continuity'"):
        model.remove_law("continuity")


def test_remove_field(model, n, v):
    model.law("continuity", plin.partial_t(n) + plin.div(n * v))
    with pytest.raises(plin.DeclarationError, match="is in law 'continuity'; remove that first"):
        model.remove_field(v.name)
    model.remove_law("continuity")
    model.remove_field(v.name)
    assert v.name not in model.fields
    with pytest.raises(plin.DeclarationError, match="no field"):
        model.remove_field(v.name)
