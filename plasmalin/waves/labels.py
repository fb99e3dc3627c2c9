"""Labels of modes: wave, constraint, entropy or vortical, told by what the solutions at a root move.

Only a factor of first degree in omega (or omega itself) can hold anything but waves. All its solutions, generalized
ones included, are counted exactly at a random point of a prime field, where a false answer has negligible probability
(Schwartz 1980, J. ACM 27, 701):

constraint
    Solutions that violate a declared constraint, or, where the laws imply them, div B = 0 or Gauss's law (`implied`).
entropy
    Those left that move scalars only: no vector, no tensor, no potential (vanishing flow in a model that has one).
vortical
    Those left that move flow velocities only, with k.v = 0: no scalar, no other field.
wave
    The rest.

The modes of a gas: Kovasznay 1953, J. Aeronaut. Sci. 20, 657 (from memory). Which field is what:

flow velocity
    A vector v with d_t f and advect(v, f), dot(v, grad(f)) or div(f*v) of the same f in one law.
potential
    A scalar without background that no flow carries in this sense (phi, psi).
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING, Any

from sympy import Add, Expr, S, Symbol

from ..declare.fields import Field
from ..declare.law import Law
from ..declare.operators import Advect, Div, Dot, Grad, PartialT
from ..exact.combination import row_combination
from ..exact.sample import Row, modes_off_zero, put_in, shared_modes
from ..linearize.split import terms

if TYPE_CHECKING:
    from .matrix import WaveMatrix

LABELS = ("wave", "constraint", "entropy", "vortical")


@dataclass(frozen=True, eq=False)
class Modes:
    """What it takes to label the modes of a wave matrix.

    Attributes
    ----------
    rows : tuple of mapping of int to Expr
        The wave matrix by row and column.
    omega : Symbol
    forbidden : tuple of rows
        The constraints, declared or implied: a mode that violates them is labeled "constraint".
    no_flow, only_flow : tuple of rows
        Satisfied by entropy and by vortical modes; empty where the model has no flow velocity.
    """

    rows: tuple[Row, ...]
    omega: Symbol
    forbidden: tuple[Row, ...]
    no_flow: tuple[Row, ...]
    only_flow: tuple[Row, ...]

    def put(self, value: Callable[[Expr], Expr]) -> Modes:
        """The same with a function applied to every entry, such as numbers put in."""

        def new(rows: Sequence[Row]) -> tuple[Row, ...]:
            made = ({j: value(c) for j, c in row.items()} for row in rows)
            return tuple({j: c for j, c in row.items() if c != 0} for row in made)

        groups = (self.forbidden, self.no_flow, self.only_flow)
        return Modes(new(self.rows), self.omega, *map(new, groups))

    def labels(self, factors: Sequence[tuple[Expr, int | None]]) -> list[dict[str, int]]:
        """For factors of first degree in omega with their multiplicities: how many modes of each label.

        None stands for the multiplicity that the matrix has there.
        """
        if not factors:
            return []
        found = shared_modes(self.rows, self.omega, [f for f, _ in factors], self._tests())
        return [_split(counts, m) for counts, (_, m) in zip(found, factors, strict=True)]

    def _tests(self) -> list[Sequence[Row]]:
        tests: list[Sequence[Row]] = [(), self.forbidden]
        if self.only_flow:
            tests += [(*self.forbidden, *self.no_flow), (*self.forbidden, *self.only_flow)]
        return tests

    @cached_property
    def only_waves(self) -> bool:
        """Whether every mode with omega ≠ 0 is labeled "wave"."""
        whole, allowed, *rest = modes_off_zero(self.rows, self.omega, self._tests())
        return whole == allowed and not any(rest)


def _split(counts: Sequence[int], multiplicity: int | None) -> dict[str, int]:
    """By label what is not zero; waves where the count does not fit the factor (a singular matrix)."""
    whole, allowed, *rest = counts
    if multiplicity is not None and whole != multiplicity:
        return {"wave": multiplicity}
    entropy, vortical = rest or (0, 0)
    made = (allowed - entropy - vortical, whole - allowed, entropy, vortical)
    return {label: n for label, n in zip(LABELS, made, strict=True) if n}


def modes_of(wave: WaveMatrix) -> Modes:
    """The rows that tell the modes of a wave matrix apart."""
    laws = wave.linear.laws.values()
    moving, carried = flows(laws), set(carried_scalars(laws))
    declared = tuple(c.form for c in wave.constraints)
    no_flow, only_flow = [], []
    for j, column in enumerate(wave.columns):
        field = column.field
        potential = field.rank == 0 and field.background == 0 and field.name not in carried
        if field.rank > 0 or potential:
            no_flow.append({j: S.One})
        if field.name not in moving:
            only_flow.append({j: S.One})
    only_flow += [_along(wave, name) for name in sorted(moving)]
    return Modes(
        tuple(wave.by_row()),
        wave.omega,
        (*declared, *implied(wave, moving)),
        tuple(no_flow) if moving else (),
        tuple(only_flow) if moving else (),
    )


def _along(wave: WaveMatrix, name: str) -> dict[int, Expr]:
    """k . v as a row."""
    return {j: c for j, c in zip(wave.column(name), wave.k, strict=True) if c != 0}


# Which field is what -----------------------------------------------------------------------------


def flows(laws: Any) -> set[str]:
    """The flow velocities: vectors that carry something."""
    return {v.name for law in laws for v, _ in _carriage(law)}


def carried_scalars(laws: Any) -> set[str]:
    """The scalars that a flow carries."""
    return {f.name for law in laws for _, f in _carriage(law) if f.rank == 0}


def _carriage(law: Law) -> Iterator[tuple[Field, Field]]:
    """Pairs (flow, what it carries) of a law."""
    timed = {f for node in law.residual.atoms(PartialT) for f in node.atoms(Field)}
    for carriers, carried in _pairs(law.residual):
        for f in carried & timed:
            yield from ((v, f) for v in carriers if v.rank == 1)


def _pairs(expr: Expr) -> Iterator[tuple[set[Field], set[Field]]]:
    for node in expr.atoms(Advect):
        yield node.args[0].atoms(Field), node.args[1].atoms(Field)
    for node in expr.atoms(Dot):
        for v, g in (node.args, node.args[::-1]):
            if isinstance(g, Grad):
                yield v.atoms(Field), g.atoms(Field)
    for node in expr.atoms(Div):
        for term in terms(node.args[0]):
            factors = [f for f in term.atoms(Field) if f.rank < 2]
            if sum(f.rank for f in factors) == 1:
                yield set(factors), {f for f in factors if f.rank == 0}


# Constraints that nobody declared ----------------------------------------------------------------


def implied(wave: WaveMatrix, moving: set[str]) -> Iterator[Row]:
    """div B = 0 and Gauss's law, where the laws imply them.

    A vector B that is no flow and whose law has a divergence that holds k.B only: (f(omega) k.B = 0). A vector E that is
    no flow and whose law has a divergence that multiples of the continuity laws of its currents complete to omega times
    k.E + (scalars), in one way only; a law that gives a current as an unknown of its own takes part.
    """
    divergences = _divergences(wave)
    for name, whole in divergences.items():
        for field in _evolved(wave, whole) - moving:
            row = _along(wave, field)
            found = row_combination([row], wave.omega, whole)
            gauss = None if found else _gauss(wave, name, row, divergences)
            if found or gauss:
                yield gauss or row


def _divergences(wave: WaveMatrix) -> dict[str, dict[int, Expr]]:
    """The divergence of every vector law."""
    rows, found = wave.by_row(), {}
    for name, law in wave.linear.laws.items():
        if law.rank == 1:
            mine = [rows[i] for i, row in enumerate(wave.rows) if row.law == name]
            found[name] = _combined(list(zip(mine, wave.k, strict=True)))
    return found


def _evolved(wave: WaveMatrix, row: Row) -> set[str]:
    """The vectors whose components stand with omega in a row."""
    fields = (wave.columns[j].field for j, c in row.items() if c.has(wave.omega))
    return {f.name for f in fields if f.rank == 1}


def _combined(parts: Sequence[tuple[Row, Expr]]) -> dict[int, Expr]:
    columns = {j for row, c in parts if c != 0 for j in row}
    made = {j: Add(*(c * row[j] for row, c in parts if j in row)).expand() for j in columns}
    return {j: c for j, c in made.items() if c != 0}


def _gauss(
    wave: WaveMatrix, name: str, along: Row, divergences: Mapping[str, Row]
) -> dict[int, Expr] | None:
    """Gauss's law from the divergence of the law that evolves E; None where it is not told exactly."""
    at_rest: dict[Any, Any] = {wave.omega: S.Zero}
    laws, whole = wave.linear.laws, divergences[name]
    static = [
        n for n, row in divergences.items() if not any(c.has(wave.omega) for c in row.values())
    ]
    giving = [n for n in static if _vectors(laws[n]) & _vectors(laws[name])]
    products = {p for n in (name, *giving) for p in _products(laws[n].residual)}
    rows = [
        row
        for row, place in zip(wave.by_row(), wave.rows, strict=True)
        if _fluxes(laws[place.law]) & products
    ]
    rows += [dict(divergences[n]) for n in giving]
    still = [put_in(row, at_rest) for row in rows]
    target = put_in(whole, at_rest)
    found = row_combination(still, wave.omega, target) if target else {}
    dependent = any(
        row_combination([r for r in still if r is not row], wave.omega, row) is not None
        for row in still
    )
    if found is None or dependent:
        return None
    parts = [(whole, S.One), *((rows[i], -c) for i, c in found.items())]
    rate = {j: c.diff(wave.omega) for j, c in _combined(parts).items()}
    made = {j: c for j, c in rate.items() if c != 0}
    vectors = {j: c for j, c in made.items() if wave.columns[j].field.rank > 0}
    proper = not any(c.has(wave.omega) for c in made.values()) and bool(
        row_combination([along], wave.omega, vectors)
    )
    return made if proper else None


def _vectors(law: Law) -> set[Field]:
    return {f for f in law.residual.atoms(Field) if f.rank == 1}


def _products(expr: Expr) -> set[frozenset[Field]]:
    """The fields that stand together in each term."""
    return {frozenset(t.atoms(Field)) for t in terms(expr) if t.atoms(Field)}


def _fluxes(law: Law) -> set[frozenset[Field]]:
    """The fields of the fluxes n*v of a scalar law."""
    nodes = law.residual.atoms(Div) if law.rank == 0 else ()
    return {p for node in nodes for p in _products(node.args[0])}
