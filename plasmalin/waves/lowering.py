"""From vector calculus to components: each law becomes a linear form in the amplitudes.

A form maps a component index to {amplitude: coefficient}; the amplitude None stands for the constant 1, so
that coefficients (vectors of the background) and first-order terms share one recursion. Nothing is expanded.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from itertools import product
from typing import Any, TypeAlias

from sympy import Abs, Add, Expr, I, Integer, Mul, Pow, S, Symbol, sqrt

from ..declare.fields import Components, Field, Perturbation
from ..declare.operators import (
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
    k_x,
    k_y,
    k_z,
    omega,
)

Index = tuple[int, ...]
Key: TypeAlias = Symbol | None
Form = dict[Index, dict[Key, Expr]]

CYCLIC = ((0, 1, 2), (1, 2, 0), (2, 0, 1))


@dataclass(frozen=True)
class Wave:
    """A plane wave: the wave vector along the model's axes, and the amplitude symbols."""

    axes: str
    k: tuple[Expr, ...]
    amplitude: Callable[[Field, Index], Symbol]

    @property
    def size(self) -> int:
        return len(self.axes)

    @property
    def length(self) -> Expr:
        """|k|."""
        present = [c for c in self.k if c != 0]
        return Abs(present[0]) if len(present) == 1 else sqrt(Add(*(c**2 for c in present)))

    def symbol_values(self) -> dict[Any, Any]:
        """What k_x, k_y, k_z and k_abs in a multiplier stand for."""
        along = dict(zip(self.axes, self.k, strict=True))
        named = {"x": k_x, "y": k_y, "z": k_z}
        values: dict[Any, Any] = {symbol: along.get(axis, S.Zero) for axis, symbol in named.items()}
        return {**values, k_abs: self.length}


def indices(rank: int, size: int) -> Iterator[Index]:
    return product(range(size), repeat=rank)


def lower(expr: Expr, wave: Wave) -> Form:
    """The components of a settled first-order (or uniform) expression."""
    if isinstance(expr, Add):
        return _sum([lower(a, wave) for a in expr.args])
    if isinstance(expr, Mul):
        return _product_of(expr.args, wave)
    if isinstance(expr, Perturbation):
        field = expr.field
        return {i: {wave.amplitude(field, i): S.One} for i in indices(field.rank, wave.size)}
    if isinstance(expr, Components):
        found = {i: lower(expr.entry(i), wave).get((), {}) for i in indices(expr.rank, wave.size)}
        return {i: row for i, row in found.items() if row}
    if isinstance(expr, Identity):
        return {(i, i): {None: S.One} for i in range(wave.size)}
    if isinstance(expr, Operator):
        return _operator(expr, wave)
    if isinstance(expr, Pow) and expr.exp == 1:
        return lower(expr.base, wave)
    return {(): {None: expr}} if expr != 0 else {}


def _operator(expr: Operator, wave: Wave) -> Form:
    if isinstance(expr, Multiplier):
        factor = expr.args[1].xreplace(wave.symbol_values())
        return _scaled(lower(expr.args[0], wave), factor)
    if isinstance(expr, Norm):
        inner = lower(expr.args[0], wave)
        return {(): {None: sqrt(Add(*(row[None] ** 2 for row in inner.values())))}}
    return LOWERED[type(expr)](*(lower(a, wave) for a in expr.args), wave)


# Forms -----------------------------------------------------------------------------------------


def _accumulate(forms: Iterator[tuple[Index, dict[Key, Expr]]]) -> Form:
    gathered: dict[Index, dict[Key, list[Expr]]] = {}
    for index, row in forms:
        into = gathered.setdefault(index, {})
        for key, c in row.items():
            into.setdefault(key, []).append(c)
    return {
        index: {key: cs[0] if len(cs) == 1 else Add(*cs) for key, cs in row.items()}
        for index, row in gathered.items()
    }


def _sum(forms: list[Form]) -> Form:
    return _accumulate((index, row) for form in forms for index, row in form.items())


def _scaled(form: Form, factor: Expr) -> Form:
    if factor == 0:
        return {}
    return {i: {key: factor * c for key, c in row.items()} for i, row in form.items()}


def _row_product(a: dict[Key, Expr], b: dict[Key, Expr]) -> dict[Key, Expr]:
    """One of the two is a constant: every kept term holds one first-order factor."""
    if set(b) == {None}:
        a, b = b, a
    return {key: a[None] * c for key, c in b.items()}


def _product_of(args: tuple[Any, ...], wave: Wave) -> Form:
    plain = [a for a in args if not a.atoms(Perturbation, Components, Identity, Operator)]
    form: Form = {(): {None: Mul(*plain)}}
    for a in args:
        if a not in plain:
            other = lower(a, wave)
            form = {i + j: _row_product(x, y) for i, x in form.items() for j, y in other.items()}
    return form


def _contracted(a: Form, b: Form) -> Form:
    """Sum over the last index of `a` and the first of `b`."""
    return _accumulate(
        (i[:-1] + j[1:], _row_product(x, y))
        for i, x in a.items()
        for j, y in b.items()
        if i[-1] == j[0]
    )


def _cross(a: Form, b: Form, wave: Wave) -> Form:
    """The last index of a and the first of b are taken together."""

    def parts() -> Iterator[tuple[Index, dict[Key, Expr]]]:
        for (*before, p), x in a.items():
            for (q, *after), y in b.items():
                for i, j, m in CYCLIC:
                    if {p, q} == {j, m}:
                        sign = 1 if (p, q) == (j, m) else -1
                        row = {key: sign * c for key, c in _row_product(x, y).items()}
                        yield (*before, i, *after), row

    return _accumulate(parts())


def _outer(a: Form, b: Form, wave: Wave) -> Form:
    return {i + j: _row_product(x, y) for i, x in a.items() for j, y in b.items()}


def _nabla(wave: Wave) -> Form:
    """i k as a constant vector."""
    return {(i,): {None: I * c} for i, c in enumerate(wave.k) if c != 0}


def _along(v: Form, f: Form, wave: Wave) -> Form:
    rate = _contracted(v, _nabla(wave)).get((), {})
    return _scaled(f, rate.get(None, S.Zero))


def _trace(a: Form, wave: Wave) -> Form:
    return _accumulate(((), row) for (i, j), row in a.items() if i == j)


LOWERED: dict[Any, Callable[..., Form]] = {
    PartialT: lambda f, wave: _scaled(f, -I * omega),
    Grad: lambda f, wave: _outer(_nabla(wave), f, wave),
    Div: lambda f, wave: _contracted(_nabla(wave), f),
    Curl: lambda f, wave: _cross(_nabla(wave), f, wave),
    Laplacian: lambda f, wave: _scaled(f, Add(*(Integer(-1) * c**2 for c in wave.k))),
    Advect: _along,
    Dot: lambda a, b, wave: _contracted(a, b),
    Cross: _cross,
    Outer: _outer,
    Ddot: lambda a, b, wave: _accumulate(
        ((), _row_product(x, b[i])) for i, x in a.items() if i in b
    ),
    Transpose: lambda a, wave: {(j, i): row for (i, j), row in a.items()},
    Trace: _trace,
}
