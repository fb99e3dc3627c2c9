"""What a piece is worth on the background: values put in, derivatives of uniform backgrounds gone.

The result is a sum of terms, each a coefficient of the background times an operator on one perturbation, written as
an author would: div(n0 v~) becomes n0 div v~, div(u0 n~) becomes (u0 . grad) n~.

A background with a gradient is affine in position while the operators are worked out (product rule), and position is
then set to zero: the local approximation.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import Any, cast

from sympy import Add, Dummy, Expr, Mul, S, expand, sqrt

from ..declare.fields import (
    Background,
    Components,
    Field,
    Perturbation,
    axis_names,
    components,
)
from ..declare.operators import (
    WAVE_SYMBOLS,
    Advect,
    Cross,
    Curl,
    Ddot,
    Div,
    Dot,
    Grad,
    Identity,
    Laplacian,
    Multiplier,
    Norm,
    Operator,
    Outer,
    PartialT,
    Trace,
    Transpose,
    k_abs,
    rank_of,
)
from ..errors import BackgroundError


def is_uniform(expr: Expr) -> bool:
    """Whether an expression with values put in is of the background, no perturbation in it."""
    return not expr.atoms(Perturbation)


def settle(expr: Expr) -> Expr:
    """A raw piece (of order 0 or 1) with the background's values put in, as a sum of plain terms.

    Every background counts as uniform; `from_gradients` has the rest.
    """
    return _settled(expr, False)


def from_gradients(expr: Expr) -> Expr:
    """What the gradients of the backgrounds in a raw piece add to it."""
    if all(b.field.gradient == 0 for b in expr.atoms(Background)):
        return S.Zero
    value = _settled(expr, True)
    here: dict[Any, Any] = dict.fromkeys(value.free_symbols & ALL_POSITIONS, S.Zero)
    terms = Add.make_args(expand(_settled(value.xreplace(here), False)))
    return Add(*(t for t in terms if t.has(STEEP))).xreplace({STEEP: S.One})


def _settled(expr: Expr, sloped: bool) -> Expr:
    if isinstance(expr, Background):
        return _affine(expr.field) if sloped and expr.field.gradient != 0 else expr.value
    if not expr.args or not expr.atoms(Background, Operator):
        return expr
    args = [_settled(a, sloped) for a in expr.args]
    if isinstance(expr, Mul):
        return _product(args)
    if isinstance(expr, Components):
        made = components(*args) if expr.rank == 1 else components(*(r.args for r in args))
        return _by_unit_vectors(made)
    if isinstance(expr, Operator):
        return S.Zero if any(a == 0 for a in args) else _distributed(type(expr), args)
    return expr.func(*args)


POSITIONS = {size: tuple(Dummy(axis) for axis in axis_names(size)) for size in (1, 2, 3)}
"""Position along the axes of a model with so many axes."""
ALL_POSITIONS = {x for places in POSITIONS.values() for x in places}
STEEP = Dummy("steep", positive=True)
"""A factor of every gradient, by which its terms are told."""


def _affine(field: Field) -> Expr:
    """A background with its gradient: value + x.gradient, a vector by unit vectors."""
    slope = field.gradient
    places = [STEEP * x for x in POSITIONS[slope.size]]
    if field.rank == 0:
        return field.background + Add(*(x * g for x, g in zip(places, slope.args, strict=True)))
    size = range(slope.size)
    base = field.background if field.background != 0 else None
    entries = [
        (base.entry((j,)) if base is not None else S.Zero)
        + Add(*(places[i] * slope.entry((i, j)) for i in size))
        for j in size
    ]
    return _by_unit_vectors(components(*entries))


def _by_unit_vectors(vector: Expr) -> Expr:
    """A vector that changes with position as scalars times unit vectors, so that the product rule sees them."""
    if not vector.free_symbols & ALL_POSITIONS:
        return vector
    size = range(vector.size)
    units = (components(*(int(i == j) for j in size)) for i in size)
    return Add(*(entry * unit for entry, unit in zip(vector.args, units, strict=True)))


def _slope(coefficient: Expr) -> Expr:
    """The gradient of a scalar of the background; 0 where it is uniform."""
    places = coefficient.free_symbols & ALL_POSITIONS
    if not places:
        return S.Zero
    axes = next(p for p in POSITIONS.values() if places & set(p))
    return _by_unit_vectors(components(*(coefficient.diff(x) for x in axes)))


def _dotted(a: Expr, b: Expr) -> Expr:
    return S.Zero if a == 0 or b == 0 else _distributed(Dot, [a, b])


def _product(args: list[Expr]) -> Expr:
    """A product, multiplied out over the factors that hold a perturbation."""
    total = [S.One]
    for a in args:
        parts = Add.make_args(a) if not is_uniform(a) or rank_of(a) > 0 else (a,)
        total = [t * x for t in total for x in parts]
    return Add(*total)


def _distributed(kind: type[Operator], args: list[Expr]) -> Expr:
    """Linear in the one argument that varies; the other arguments are uniform."""
    if kind is Multiplier:
        return Add(*(_multiplier(x, args[1]) for x in Add.make_args(args[0])))
    if kind is Norm:
        return _norm(args[0])
    total: list[tuple[Expr, ...]] = [()]
    for a in args:
        total = [(*t, x) for t in total for x in Add.make_args(a)]
    return Add(*(RULES[kind](*choice) for choice in total))


def _factored(term: Expr) -> tuple[Expr, Expr]:
    """A term as uniform scalar coefficient times the rest (a perturbation, operator or vector)."""
    rest: list[Expr] = []
    scalars: list[Expr] = []
    for a in Mul.make_args(term):
        plain = is_uniform(a) and not isinstance(a, Components | Identity | Operator)
        (scalars if plain else rest).append(a)
    return Mul(*scalars), Mul(*rest)


def _vector_times_scalar(rest: Expr) -> tuple[Expr, Expr] | None:
    """A uniform vector or tensor times a varying scalar, as that pair."""
    args = Mul.make_args(rest)
    fixed = [a for a in args if isinstance(a, Components | Identity)]
    if len(fixed) != 1 or len(args) < 2:
        return None
    return fixed[0], Mul(*(a for a in args if a is not fixed[0]))


def _partial_t(x: Expr) -> Expr:
    if is_uniform(x):
        return S.Zero
    coefficient, rest = _factored(x)
    pair = _vector_times_scalar(rest)
    if pair:
        return coefficient * pair[0] * PartialT(pair[1])
    return coefficient * PartialT(rest)


def _laplacian(x: Expr) -> Expr:
    coefficient, rest = _factored(x)
    slope = _slope(coefficient)
    curved = _distributed(Div, [slope]) * rest if slope != 0 else S.Zero
    if is_uniform(x):
        return curved
    pair = _vector_times_scalar(rest)
    plain = pair[0] * Laplacian(pair[1]) if pair else Laplacian(rest)
    along = 2 * _distributed(Advect, [slope, rest]) if slope != 0 else S.Zero
    return coefficient * plain + along + curved


def _grad(x: Expr) -> Expr:
    coefficient, rest = _factored(x)
    slope = _slope(coefficient)
    extra = S.Zero
    if slope != 0:
        extra = _distributed(Outer, [slope, rest]) if rank_of(rest) else _product([slope, rest])
    if is_uniform(x):
        return extra
    pair = _vector_times_scalar(rest)
    if pair and isinstance(pair[0], Components):
        return coefficient * Outer(Grad(pair[1]), pair[0]) + extra
    return coefficient * Grad(rest) + extra


def _div(x: Expr) -> Expr:
    coefficient, rest = _factored(x)
    extra = _dotted(_slope(coefficient), rest)
    return extra if is_uniform(x) else coefficient * _plain_div(rest) + extra


def _plain_div(rest: Expr) -> Expr:
    pair = _vector_times_scalar(rest)
    if pair and isinstance(pair[0], Identity):
        return Grad(pair[1])
    if pair and pair[0].rank == 1:
        return Advect(pair[0], pair[1])
    if pair:
        return Dot(Grad(pair[1]), pair[0])
    if isinstance(rest, Outer):
        a, b = rest.args
        return Advect(a, b) if is_uniform(a) else b * Div(a)
    return Div(rest)


def _curl(x: Expr) -> Expr:
    coefficient, rest = _factored(x)
    slope = _slope(coefficient)
    extra = _distributed(Cross, [slope, rest]) if slope != 0 else S.Zero
    if is_uniform(x):
        return extra
    pair = _vector_times_scalar(rest)
    plain = Cross(Grad(pair[1]), pair[0]) if pair else Curl(rest)
    return coefficient * plain + extra


def _advect(a: Expr, x: Expr) -> Expr:
    (ca, ra), (cx, rx) = _factored(a), _factored(x)
    extra = _product([_dotted(ra, _slope(cx)), ca * rx])
    if is_uniform(x):
        return extra
    pair = _vector_times_scalar(rx)
    plain = pair[0] * Advect(ra, pair[1]) if pair else Advect(ra, rx)
    return ca * cx * plain + extra


def _bilinear(kind: type[Operator]) -> Callable[..., Expr]:
    """Rule for products of vectors and tensors: scalars come out, uniform pairs are worked out."""

    def rule(a: Expr, b: Expr) -> Expr:
        (ca, ra), (cb, rb) = _scalar_out(a), _scalar_out(b)
        if isinstance(ra, Components) and isinstance(rb, Components):
            return ca * cb * worked_out(kind, ra, rb)
        if kind is Dot and isinstance(rb, Components) and ra.rank == rb.rank == 1:
            ra, rb = rb, ra  # so that the two parts of dot(v, v) are one
        return ca * cb * kind(ra, rb)

    return rule


def _scalar_out(term: Expr) -> tuple[Expr, Expr]:
    """A term as scalar factor (uniform or not) times its one vector or tensor."""
    args = Mul.make_args(term)
    ranked = [a for a in args if rank_of(a) > 0]
    return Mul(*(a for a in args if a is not ranked[0])), ranked[0]


def worked_out(kind: type[Operator], a: Components, b: Components) -> Expr:
    """A product of two vectors or tensors that are known by their components."""
    size = range(a.size)
    if kind is Cross and a.rank == 2:
        return components(*(_turned(row.args, b.args) for row in a.args))
    if kind is Cross and b.rank == 2:
        columns = zip(*(row.args for row in b.args), strict=True)
        return components(*zip(*(_turned(a.args, c) for c in columns), strict=True))
    if kind is Cross:
        return components(*_turned(a.args, b.args))
    if kind is Outer:
        return components(*(tuple(p * q for q in b.args) for p in a.args))
    if kind is Ddot:
        return Add(*(a.entry((i, j)) * b.entry((i, j)) for i in size for j in size))
    if a.rank == 1 and b.rank == 1:
        return Add(*(a.entry((i,)) * b.entry((i,)) for i in size))
    if a.rank == 1:
        return components(*(Add(*(a.entry((i,)) * b.entry((i, j)) for i in size)) for j in size))
    if b.rank == 1:
        return components(*(Add(*(a.entry((i, j)) * b.entry((j,)) for j in size)) for i in size))
    return components(
        *(
            tuple(Add(*(a.entry((i, m)) * b.entry((m, j)) for m in size)) for j in size)
            for i in size
        )
    )


def _turned(x: Sequence[Expr], y: Sequence[Expr]) -> tuple[Expr, ...]:
    return tuple(x[i] * y[j] - x[j] * y[i] for i, j in ((1, 2), (2, 0), (0, 1)))


def _transpose(x: Expr) -> Expr:
    scalar, tensor = _scalar_out(x)
    if isinstance(tensor, Components):
        return scalar * components(*zip(*(row.args for row in tensor.args), strict=True))
    symmetric = isinstance(tensor, Identity) or getattr(
        getattr(tensor, "field", None), "symmetric", False
    )
    return scalar * (tensor if symmetric else Transpose(tensor))


def _trace(x: Expr) -> Expr:
    scalar, tensor = _scalar_out(x)
    if isinstance(tensor, Components):
        return scalar * Add(*(tensor.entry((i, i)) for i in range(tensor.size)))
    if isinstance(tensor, Outer):
        return scalar * Dot(*tensor.args)
    return scalar * Trace(tensor)


def _norm(x: Expr) -> Expr:
    if not is_uniform(x):
        return Norm(x)
    values = _combined(x)
    return sqrt(Add(*(v**2 for v in values.args)))


def _combined(x: Expr) -> Components:
    """A uniform vector as one set of components."""
    parts = [_scalar_out(term) for term in Add.make_args(x)]
    size = range(parts[0][1].size)
    made = components(*(Add(*(s * v.entry((i,)) for s, v in parts)) for i in size))
    return cast(Components, made)


def _multiplier(x: Expr, g: Expr) -> Expr:
    """On a uniform background the multiplier acts by its value at k = 0, omega = 0."""
    if not is_uniform(x):
        coefficient, rest = _factored(x)
        return coefficient * Multiplier(rest, g)
    if x.free_symbols & ALL_POSITIONS:
        raise BackgroundError(
            f"multiplier({x}, {g}) acts on a background with a gradient, which is not a sum of waves; "
            "let it act on a perturbation only"
        )
    at_rest = g.subs({s: 0 for s in WAVE_SYMBOLS if s is not k_abs}).subs(k_abs, 0)
    if at_rest.is_finite is False or at_rest.has(S.NaN, S.ComplexInfinity):
        raise BackgroundError(
            f"multiplier({x}, {g}): the factor has no value at k = 0, where the uniform background sits; "
            "let it act on a perturbation only, e.g. on a field whose background is 0"
        )
    return at_rest * x


RULES: dict[Any, Callable[..., Expr]] = {
    PartialT: _partial_t,
    Laplacian: _laplacian,
    Grad: _grad,
    Div: _div,
    Curl: _curl,
    Advect: _advect,
    Dot: _bilinear(Dot),
    Cross: _bilinear(Cross),
    Outer: _bilinear(Outer),
    Ddot: _bilinear(Ddot),
    Transpose: _transpose,
    Trace: _trace,
}
