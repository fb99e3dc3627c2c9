"""What the background carries: net charge, net current, and the drifts that the laws give.

Charges are found where the laws have them: beside lap(phi) or div(E), or where quasi-neutrality sums densities. Each moves
with the flux of its own continuity law. A current also stands beside curl(B).
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import Any, cast

from sympy import Add, Dummy, Expr, Mul, S, Symbol, expand, linsolve
from sympy.polys.polyerrors import PolynomialError
from sympy.solvers.solveset import NonlinearError

from ..declare.fields import Background, Components, Field, components
from ..declare.law import Law
from ..declare.operators import Advect, Curl, Div, Grad, Laplacian, Operator, PartialT
from .settle import _combined, settle
from .split import terms


@dataclass(frozen=True)
class Source:
    """What drives a field.

    Attributes
    ----------
    law, field : str
        The law, and the potential or field that it is for; "" where quasi-neutrality leaves none.
    what : str
        "charge", "mass" (where like attracts like) or "current".
    density : Expr
        In fields, as the law has it: charges may come over epsilon_0, currents times mu_0.
    value : Expr
        The same on the background.
    """

    law: str
    field: str
    what: str
    density: Expr

    @property
    def value(self) -> Expr:
        return on_background(self.density)


def on_background(expr: Expr) -> Expr:
    """An expression in fields with their backgrounds put in."""
    parts: dict[Any, Any] = {f: Background(f) for f in expr.atoms(Field)}
    value = settle(expr.xreplace(parts))
    if not value.atoms(Components):
        return cast(Expr, expand(value))
    entries = _combined(value).args  # none where the vectors cancel
    return components(*(expand(x) for x in entries)) if entries else S.Zero


def sources(laws: Mapping[str, Law]) -> tuple[Source, ...]:
    """The charge, mass and current in the laws of the fields."""
    fluxes = dict(_fluxes(laws))
    found = [s for law in laws.values() for s in _sources_of(law, laws, fluxes)]
    return (*found, *_carried(found, fluxes))


def _sources_of(
    law: Law, laws: Mapping[str, Law], fluxes: Mapping[Field, Expr]
) -> Iterator[Source]:
    parts = [t for t in terms(law.residual) if law.rank == 0 or not t.atoms(PartialT)]
    steep = [t for t in parts if any(o.derivative for o in t.atoms(Operator))]
    rest = Add(*(t for t in parts if t not in steep))
    if not steep and law.rank == 0 and rest.atoms(Field) and rest.atoms(Field) <= set(fluxes):
        yield Source(law.name, "", "charge", rest)
    if len(steep) != 1 or rest == 0:
        return
    (operator,) = steep[0].atoms(Operator) if len(steep[0].atoms(Operator)) == 1 else (None,)
    field = operator.args[0] if operator is not None else None
    if not isinstance(field, Field):
        return
    driven = rest if (steep[0] / operator).could_extract_minus_sign() else -rest
    if isinstance(operator, Laplacian) and field.rank == 0:
        forces = _forces(field, laws)
        if forces:
            mass = any(_attracts(f, driven) for f in forces)
            yield Source(law.name, field.name, *(("mass", driven) if mass else ("charge", -driven)))
    elif isinstance(operator, Div) and law.rank == 0 and field.rank == 1:
        yield Source(law.name, field.name, "charge", driven)
    elif isinstance(operator, Curl):
        yield Source(law.name, field.name, "current", driven)


def _forces(potential: Field, laws: Mapping[str, Law]) -> list[Expr]:
    """The factors of grad(potential) on the right side of vector laws."""
    gradient = Grad(potential)
    return [
        -t / gradient
        for law in laws.values()
        if law.rank == 1
        for t in terms(law.residual)
        if gradient in Mul.make_args(t)
    ]


def _attracts(force: Expr, driven: Expr) -> bool:
    """Whether a density that drives lap(potential) is drawn to itself, as in gravity."""
    scalars = {f for f in (force * driven).atoms(Field) if f.rank == 0}
    positive = {f: Dummy(positive=True) for f in scalars}
    pull, drive = force.xreplace(positive), driven.xreplace(positive)
    return any((pull * drive.diff(positive[n])).is_negative for n in force.atoms(Field) & scalars)


def _fluxes(laws: Mapping[str, Law]) -> Iterator[tuple[Field, Expr]]:
    """What is conserved, d_t f + div F = ..., and its flux."""
    for law in laws.values():
        parts = terms(law.residual)
        rates = [t for t in parts if t.atoms(PartialT)]
        if law.rank == 0 and len(rates) == 1:
            (rate,) = rates[0].atoms(PartialT)
            f, scale = rate.args[0], rates[0] / rate
            flows = [t for t in parts if any(isinstance(x, Div) for x in Mul.make_args(t))]
            if isinstance(f, Field) and not scale.atoms(Field) and flows:
                yield f, Add(*(_undone(t) / scale for t in flows))


def _undone(term: Expr) -> Expr:
    """c div F as c F."""
    return Mul(*(a.args[0] if isinstance(a, Div) else a for a in Mul.make_args(term)))


def _carried(found: list[Source], fluxes: Mapping[Field, Expr]) -> Iterator[Source]:
    """The current of each charge density by the fluxes of what it is made of."""
    for s in found:
        if s.what == "charge":
            dummies = {f: Dummy() for f in s.density.atoms(Field) & set(fluxes)}
            shape, back = s.density.xreplace(dummies), {d: f for f, d in dummies.items()}
            flows = [shape.diff(d).xreplace(back) * fluxes[f] for f, d in dummies.items()]
            if flows:
                yield Source(s.law, s.field, "current", Add(*flows))


# Drifts ------------------------------------------------------------------------------------------

READABLE = 4
"""Components of flows that hang together, beyond which their closed form fills pages; they stay conditions."""

Group = tuple[list[Expr], set[Symbol]]
"""Equations that hang together, and the unknowns in them."""


def drifts(
    laws: Mapping[str, Law], residuals: Mapping[str, tuple[Expr, ...]]
) -> dict[Symbol, Expr]:
    """Components of background flows that the vector laws give, where these are linear in the flows.

    Parameters
    ----------
    laws : mapping of str to Law
    residuals : mapping of str to tuple of Expr
        What each law leaves on the background.
    """
    given = [v.background for law in laws.values() for v in _flows(law.residual)]
    entries = {x for b in given if isinstance(b, Components) for x in b.args}
    unknown = {x for x in entries if isinstance(x, Symbol)}
    balances = [r for n, law in laws.items() if law.rank == 1 for r in residuals.get(n, ())]
    groups = _groups([r for r in balances if r.free_symbols & unknown], unknown)
    found = [pair for g in groups if len(g[1]) <= READABLE for pair in _solved(*g)]
    return dict(sorted(found, key=str))


def _flows(expr: Expr) -> Iterator[Field]:
    """The velocities of a law: those that advect, and those in the flux of a density."""
    fluxes = [o.args[0] for o in expr.atoms(Div) if o.rank == 0]
    held = {f for flux in fluxes if not isinstance(flux, Field) for f in flux.atoms(Field)}
    held |= {o.args[0] for o in expr.atoms(Advect)}
    yield from (f for f in held if isinstance(f, Field) and f.rank == 1)


def _groups(equations: list[Expr], unknown: set[Symbol]) -> list[Group]:
    groups: list[Group] = []
    for equation in equations:
        symbols = equation.free_symbols & unknown
        joined = [g for g in groups if g[1] & symbols]
        together = [e for g in joined for e in g[0]]
        groups = [g for g in groups if g not in joined]
        groups.append(([*together, equation], symbols.union(*(g[1] for g in joined))))
    return groups


def _solved(equations: list[Expr], symbols: set[Symbol]) -> list[tuple[Symbol, Expr]]:
    unknown = sorted(symbols, key=str)
    try:
        solved = linsolve(equations, unknown)
    except (NonlinearError, PolynomialError):
        return []
    return [(u, x) for values in solved for u, x in zip(unknown, values, strict=True) if u != x]
