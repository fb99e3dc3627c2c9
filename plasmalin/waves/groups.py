"""Dimensionless groups: a readable basis of the monomials that a relation in chosen scales is made of.

E. Buckingham (1914), Phys. Rev. 4, 345: a complete set of dimensionless groups is a basis of the null space of the
dimension matrix. Only the part of it that occurs in the relation is spanned here, by ratios of like parameters first,
then parameters in the chosen scales, then familiar numbers (beta, omega_p/Omega, v/c ...), then whatever is left.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from fractions import Fraction
from itertools import product as choices
from typing import Any

from sympy import Abs, Expr, Integer, Rational, S, Symbol

from ..declare.fields import GREEK
from ..declare.units import Dimension, dimension, read_unit
from ..errors import UnitError
from .monomials import Basis, Group, Monomial, as_expr, times

MASS, ENERGY, CHARGE, FIELD, EPSILON, MU, SPEED, DENSITY, MASS_DENSITY, PRESSURE, RESISTIVITY = (
    read_unit(text).dimension
    for text in ("kg", "J", "C", "T", "F/m", "H/m", "m/s", "m^-3", "kg/m^3", "Pa", "ohm m")
)
LETTERS = {
    MASS: "mu", ENERGY: "tau", DENSITY: "delta", MASS_DENSITY: "delta", CHARGE: "zeta", FIELD: "b", PRESSURE: "pi"
}  # fmt: skip
"""What ratios of like parameters are called."""


@dataclass(frozen=True)
class Scales:
    """The monomials of the time and length scale, and their dimensionless factors (None where they are not monomials)."""

    time: Monomial
    length: Monomial
    time_number: Expr | None
    length_number: Expr | None


def chosen_groups(
    needed: Iterable[Monomial],
    dimensions: Mapping[Expr, Dimension],
    scales: Scales,
    taken: Iterable[str],
) -> list[Group]:
    """Readable groups that span the needed monomials, with whole powers where a sign could be lost.

    Raises
    ------
    UnitError
        When a root of a parameter of unknown sign cannot be avoided.
    """
    needed = [m for m in needed if m]
    span = Basis()
    for i, m in enumerate(needed):
        span.add(Group(f"{i}", m))
    rank = len(span.groups)
    basis, names = Basis(), set(taken)
    kinds = {p: dimensions[p] for p in sorted(dimensions, key=str)}
    for group in (*_candidates(kinds, scales), *_generic(needed)):
        if len(basis.groups) == rank:
            break
        if group.powers and span.coordinates(group.powers) is not None:
            name = _free_name(group.name, names)
            if basis.add(Group(name, group.powers, group.number, group.meaning)):
                names.add(name)
    return [_rooted(j, basis, needed) for j in range(rank)]


def _rooted(j: int, basis: Basis, needed: list[Monomial]) -> Group:
    """The group, or its root where parts of it occur whose sign the whole does not tell."""
    group = basis.groups[j]
    if all(p.is_positive for p in group.powers):
        return group
    parts = ((basis.coordinates(m) or {}).get(j, Fraction(0)) for m in needed)
    root = math.lcm(*(c.denominator for c in parts))
    powers = {p: n / root for p, n in group.powers.items()}
    for p, n in powers.items():
        if n.denominator != 1 and not p.is_positive:
            raise UnitError(
                f"a root of '{p}', whose sign is not known, would stand in the scaled relation; "
                f"declare it positive: model.parameter('{p}', positive=True)"
            )
    return Group(group.name, powers, group.number ** Rational(1, root), group.meaning)


def _free_name(name: str, taken: set[str]) -> str:
    numbered = (f"{name}{'' if '_' in name else '_'}{i}" for i in range(1, 1000))
    return next(n for n in (name, *numbered) if n not in taken)


# Candidates --------------------------------------------------------------------------------------


def tag(parameter: Any) -> str:
    """The species that a name speaks of: n_e0 and T_e of "e", n_0 of none."""
    name = str(parameter.args[0] if isinstance(parameter, Abs) else parameter)
    return name.partition("_")[2].strip("0123456789xyz")


def _candidates(kinds: Mapping[Expr, Dimension], scales: Scales) -> Iterator[Group]:
    yield from _ratios(kinds)
    yield from _kinematic(kinds, scales)
    quantities = list(_characteristic(kinds))
    yield from _betas(kinds)
    yield from _familiar(quantities)
    yield from _in_scales(quantities, scales)


def _ratios(kinds: Mapping[Expr, Dimension]) -> Iterator[Group]:
    """Mass, temperature, density ratios ...: light over heavy, cold over electron temperature."""
    for kind, letter in LETTERS.items():
        alike = [p for p, d in kinds.items() if d == kind]
        electrons = [p for p in alike if tag(p) == "e"]
        others = [p for p in alike if tag(p) != "e"]
        order = others + electrons if kind == MASS else electrons + others
        for i, below in enumerate(order):
            for above in order[i + 1 :]:
                name = letter if len(alike) == 2 else f"{letter}_{tag(above) or above}"
                yield Group(name, {above: Fraction(1), below: Fraction(-1)})


def _scaled(powers: Monomial, kind: Dimension, scales: Scales) -> tuple[Monomial, Expr] | None:
    """A quantity of lengths and times only in the chosen scales."""
    length, time = kind[0], kind[2]
    if any(kind[i] for i in (1, 3, 4, 5, 6)) or not (length or time):
        return None
    number: Expr = S.One
    made = times(times(powers, scales.length, -length), scales.time, -time)
    for n, power in ((scales.length_number, length), (scales.time_number, time)):
        if power and n is None:
            return None
        number *= (n or S.One) ** Rational(-power.numerator, power.denominator)
    return made, number


def _hatted(name: str) -> str:
    stem, mark, rest = name.partition("_")
    return f"{stem}hat{mark}{rest}"


def _kinematic(kinds: Mapping[Expr, Dimension], scales: Scales) -> Iterator[Group]:
    """Rates, speeds, lengths in the chosen scales."""
    for p, kind in kinds.items():
        found = _scaled({p: Fraction(1)}, kind, scales)
        if found and isinstance(p, Symbol):
            yield Group(_hatted(p.name), *found)


@dataclass(frozen=True)
class Quantity:
    """A characteristic frequency, speed or length of one species."""

    stem: str
    species: str
    powers: Monomial
    kind: Dimension

    @property
    def name(self) -> str:
        joined = f"{self.stem}{self.species}"
        greek = self.species and joined.rpartition("_")[2] in GREEK
        return f"{self.stem}_{self.species}" if greek else joined


def _picks(kinds: Mapping[Expr, Dimension], *wanted: Dimension) -> Iterator[tuple[Any, ...]]:
    """One parameter of each kind, of one species as far as names tell; the species comes last."""
    for found in choices(*([p for p, d in kinds.items() if d == w] for w in wanted)):
        tags = {tag(p) for p, w in zip(found, wanted, strict=True) if w in (MASS, DENSITY, ENERGY)}
        tags.discard("")
        if len(tags) < 2:
            yield *found, next(iter(tags), "")


def _characteristic(kinds: Mapping[Expr, Dimension]) -> Iterator[Quantity]:
    half, rate, long = Fraction(1, 2), dimension(0, 0, -1), dimension(1)
    one = Fraction(1)
    for n, q, eps, m, s in _picks(kinds, DENSITY, CHARGE, EPSILON, MASS):
        yield Quantity("omega_p", s, {n: half, q: one, eps: -half, m: -half}, rate)
    for q, b, m, s in _picks(kinds, CHARGE, FIELD, MASS):
        yield Quantity("Omega_", s, {q: one, b: one, m: -one}, rate)
    for t, m, s in _picks(kinds, ENERGY, MASS):
        yield Quantity("v_t", s, {t: half, m: -half}, SPEED)
    for b, mu, n, m, s in _picks(kinds, FIELD, MU, DENSITY, MASS):
        yield Quantity("v_A", s, {b: one, mu: -half, n: -half, m: -half}, SPEED)
    for b, mu, rho, s in _picks(kinds, FIELD, MU, MASS_DENSITY):
        yield Quantity("v_A", s, {b: one, mu: -half, rho: -half}, SPEED)
    for p, rho, s in _picks(kinds, PRESSURE, MASS_DENSITY):
        yield Quantity("c_s", s, {p: half, rho: -half}, SPEED)
    for mu, eps, s in _picks(kinds, MU, EPSILON):
        yield Quantity("c", s, {mu: -half, eps: -half}, SPEED)
    for t, eps, n, q, s in _picks(kinds, ENERGY, EPSILON, DENSITY, CHARGE):
        yield Quantity("lambda_D", s, {t: half, eps: half, n: -half, q: -one}, long)
    for eta, mu, _ in _picks(kinds, RESISTIVITY, MU):
        yield Quantity(str(eta), "", {eta: one, mu: -one}, dimension(2, 0, -1))
    for p, kind in kinds.items():
        if kind == SPEED and str(p) == "c":
            yield Quantity("c", "", {p: one}, SPEED)


def _betas(kinds: Mapping[Expr, Dimension]) -> Iterator[Group]:
    one, two = Fraction(1), Integer(2)
    for mu, n, t, b, s in _picks(kinds, MU, DENSITY, ENERGY, FIELD):
        powers = {mu: one, n: one, t: one, b: -2 * one}
        yield Group(f"beta_{s}".strip("_"), powers, two, "thermal over magnetic pressure")
    for mu, p, b, _ in _picks(kinds, MU, PRESSURE, FIELD):
        yield Group("beta", {mu: one, p: one, b: -2 * one}, two, "thermal over magnetic pressure")


def _familiar(quantities: list[Quantity]) -> Iterator[Group]:
    """omega_p/Omega of one species, speeds over c, thermal over Alfvén speed."""
    pairs = (
        ("omega_p", "Omega_", "w"),
        ("v_A", "c", "s_A"),
        ("v_t", "c", "s_t"),
        ("c_s", "v_A", "s"),
    )
    for upper, lower, name in pairs:
        for a in quantities:
            for b in quantities:
                if (a.stem, b.stem) == (upper, lower) and b.species in ("", a.species):
                    mark = "" if "_" in name or not a.species else "_"
                    whole = f"{name}{mark}{a.species}"
                    meaning = f"{a.name}/{b.name}".strip("_")
                    yield Group(whole, times(a.powers, b.powers, -1), S.One, meaning)


def _in_scales(quantities: list[Quantity], scales: Scales) -> Iterator[Group]:
    for q in quantities:
        found = _scaled(q.powers, q.kind, scales)
        if found:
            name = q.name.strip("_")
            yield Group(_hatted(name), *found, name if q.species or q.stem == "c" else "")


def _generic(needed: Iterable[Monomial]) -> Iterator[Group]:
    """The monomials themselves, with whole powers."""
    for m in sorted(needed, key=lambda m: (len(m), str(as_expr(m)))):
        least = math.lcm(*(n.denominator for n in m.values()))
        common = math.gcd(*(int(n * least) for n in m.values()))
        first = m[min(m, key=str)]
        sign = 1 if first > 0 else -1
        yield Group("Pi", {p: n * least * sign / common for p, n in m.items()})
