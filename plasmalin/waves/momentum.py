"""One velocity's density and momentum law, and what they tell; see `species`."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from sympy import Add, Expr, Integer, Mul, Pow, S, cancel

from ..declare.fields import Background, Field, Perturbation
from ..declare.law import Law
from ..declare.operators import (
    Cross,
    Div,
    Dot,
    Grad,
    Laplacian,
    Multiplier,
    Norm,
    Operator,
    PartialT,
    rank_of,
)
from ..linearize.background import scalar_entries
from ..linearize.settle import settle
from .terms import Laws, Terms


@dataclass(frozen=True)
class Coupling:
    """How a fluid feels one field and acts back on it.

    Attributes
    ----------
    field : str
        The potential or the vector E.
    charge : Expr
        Force per particle and unit E, C.
    response : Expr or None
        n_0 q / epsilon_0 from the field's own law; None where that law does not tell (quasi-neutrality).
    """

    field: str
    charge: Expr
    response: Expr | None


class Momentum:
    """One velocity's density and momentum law, and what they tell."""

    def __init__(self, laws: Laws, v: Field) -> None:
        self.laws, self.v = laws, v
        self.inertial = self._inertial_law()
        self.density, self.volume = self._density()
        self.law = self.inertial or self._force_balance()
        self.terms: Terms = laws.terms[self.law] if self.law else {}
        self.sign = -1 if self._reference.could_extract_minus_sign() else 1
        self.per_volume = self._is_per_volume()

    # Which laws -----------------------------------------------------------------------------------

    def _inertial_law(self) -> str | None:
        rate = PartialT(self.v.perturbation)
        return next((name for name, terms in self.laws.of_rank(1) if rate in terms), None)

    def _force_balance(self) -> str | None:
        """Without inertia: a law that holds grad n and is no other fluid's momentum law."""
        if self.density is None:
            return None
        rates = [PartialT(v.perturbation) for v in self.laws.velocities]
        push = Grad(self.density.perturbation)
        for name, terms in self.laws.of_rank(1):
            if push in terms and not any(r in terms for r in rates):
                return name
        return None

    def _density(self) -> tuple[Field | None, Expr | None]:
        """The density, and what div v multiplies in its law: n_0, or 1 where the field is log n."""
        found = []
        for f, terms in self.laws.evolved(self.v).items():
            ratio = cancel(terms[Div(self.v.perturbation)] / terms[PartialT(f.perturbation)])
            if cancel(ratio - f.background) == 0 or (f.background == 0 and ratio == 1):
                found.append((f, ratio))
        weighing = self._raw_of_inertia().atoms(Background)
        found.sort(key=lambda pair: Background(pair[0]) not in weighing)
        return found[0] if found else (None, None)

    def _raw_of_inertia(self) -> Expr:
        rate = PartialT(self.v.perturbation)
        pieces = self.laws.kept.get(self.inertial or "", [])
        return Add(*(p.raw for p in pieces if p.value.has(rate)))

    @property
    def number(self) -> Expr | None:
        return self.density.background if self.density and self.density.background != 0 else None

    @property
    def _reference(self) -> Expr:
        """The coefficient whose sign says on which side the law's force stands."""
        inertia = self.terms.get(PartialT(self.v.perturbation))
        if inertia is not None:
            return inertia
        push = Grad(self.density.perturbation) if self.density else S.Zero
        return self.terms.get(push, S.One)

    def _is_per_volume(self) -> bool:
        if self.number is None:
            return False
        held = {b.field for b in self._raw_of_force().atoms(Background)}
        symbols = self.number.free_symbols
        return self.density in held or bool(symbols and symbols <= self._reference.free_symbols)

    @property
    def weight(self) -> Expr:
        """n_0 where the law is per volume, 1 where it is per particle."""
        return self.number if self.per_volume and self.number is not None else S.One

    def _raw_of_force(self) -> Expr:
        """The raw inertia, or without it the raw pieces that hold a potential or E."""
        if self.inertial:
            return self._raw_of_inertia()
        forces = {rest for _, rest, _ in self._forces()}
        pieces = self.laws.kept.get(self.law or "", [])
        return Add(*(p.raw for p in pieces if any(p.value.has(rest) for rest in forces)))

    def name(self) -> str:
        tag = self.v.name.rpartition("_")[2] if "_" in self.v.name else ""
        shared = self.density is not None and self.density.name.rpartition("_")[2] == tag
        return tag if tag and shared else self.v.name

    # What they tell -------------------------------------------------------------------------------

    def mass(self) -> Expr | None:
        return self._per_particle(self.terms.get(PartialT(self.v.perturbation)))

    def viscous(self) -> bool:
        return any(_second_derivative(rest, self.v) for rest in self.terms)

    def relativistic(self) -> bool:
        law = self.laws.linear.laws.get(self.law or "")
        return law is not None and _has_lorentz_factor(law, self.v)

    def _per_particle(self, coefficient: Expr | None) -> Expr | None:
        return None if coefficient is None else cancel(self.sign * coefficient / self.weight)

    def _forces(self) -> Iterator[tuple[Field, Expr, int]]:
        """Potentials under a gradient and vectors that are no velocity, with the sign of their force."""
        for rest in self.terms:
            inner = rest.args[0] if isinstance(rest, Grad) else rest
            if not isinstance(inner, Perturbation):
                continue
            f = inner.field
            if isinstance(rest, Grad) and f.rank == 0 and f not in self.laws.all_evolving:
                yield f, rest, 1
            elif rest is inner and f.rank == 1 and f not in self.laws.velocities:
                yield f, rest, -1

    def couplings(self) -> Iterator[Coupling]:
        for f, rest, sign in self._forces():
            charge = self._per_particle(sign * self.terms[rest])
            if charge is not None and charge != 0:
                yield Coupling(f.name, charge, self._response(f))

    def _response(self, f: Field) -> Expr | None:
        """From Poisson's law A lap phi + C n = 0, Gauss's F div E − C n = 0 or Ampere's F d_t E + D v = 0."""
        for terms in self.laws.terms.values():
            n = terms.get(self.density.perturbation) if self.density else None
            v = terms.get(self.v.perturbation)
            for key, source, factor in (
                (Laplacian(f.perturbation), n, self.volume),
                (PartialT(f.perturbation), v, S.One),
                (_divergence(f), n, None if self.volume is None else -self.volume),
            ):
                if key in terms and source is not None and factor is not None:
                    return cancel(factor * source / terms[key])
        return None

    def gyration(self) -> tuple[Expr, ...] | None:
        total: list[Expr] = []
        for rest, c in self.terms.items():
            if isinstance(rest, Cross) and rest.args[0] == self.v.perturbation:
                parts = [cancel(-self.sign * c * b / self.weight) for b in rest.args[1].args]
                total = [a + b for a, b in zip(total or [S.Zero] * 3, parts, strict=True)]
        return tuple(total) if any(total) else None

    def friction(self) -> Expr | None:
        inertia = self.terms.get(PartialT(self.v.perturbation))
        rub = self.terms.get(self.v.perturbation)
        return None if inertia is None or rub is None else cancel(rub / inertia)

    def temperature(self) -> Expr | None:
        """What stands under the gradient, at zeroth order and per particle."""
        parts = [self._pressure(p) for p in self._pressure_terms()]
        total = cancel(Add(*(x for x in parts if x is not None)) / self.weight)
        return total if total != 0 else None

    def _pressure_terms(self) -> dict[tuple[str, Expr], None]:
        pieces = self.laws.kept.get(self.law or "", [])
        return dict.fromkeys((p.side, p.term) for p in pieces)

    def _pressure(self, given: tuple[str, Expr]) -> Expr | None:
        side, term = given
        nodes = [a for a in Mul.make_args(term) if isinstance(a, Grad | Div)]
        if len(nodes) != 1 or rank_of(nodes[0].args[0]) not in (0, 2):
            return None
        node = nodes[0]
        inside = node.args[0].atoms(Field)
        if self.v in inside or not inside & self.laws.all_evolving | _tensors(inside):
            return None
        outside = Mul(*(a for a in Mul.make_args(term) if a is not node))
        if not self._of_force_density(outside):
            return None
        sign = self.sign if side == "left" else -self.sign
        return sign * _at_rest(outside) * self._mean(node.args[0])

    def _of_force_density(self, outside: Expr) -> bool:
        """Whether a gradient is that of a pressure: n grad(h) and a law per particle have an enthalpy there."""
        if self.density is None or self.number is None:
            return False
        if self.density in outside.atoms(Field):
            free = cancel(outside * (S.One if self.per_volume else self.density))
            return self.density not in free.atoms(Field)
        if not self.number.free_symbols:
            return self.per_volume
        flat = cancel(_at_rest(outside) * self.number / self.weight)
        return not bool(flat.free_symbols & self.number.free_symbols)

    def _mean(self, pressure: Expr) -> Expr:
        """A pressure at zeroth order; of a tensor the third of its trace."""
        if rank_of(pressure) == 0:
            return _at_rest(pressure)
        size = len(self.laws.linear.axes)
        whole = settle(pressure.xreplace({f: Background(f) for f in pressure.atoms(Field)}))
        entries = scalar_entries(whole, size)
        return Add(*entries[:: size + 1]) / size if len(entries) == size**2 else S.Zero

    def stiffness(self) -> Expr | None:
        parts = []
        for rest, c in self.terms.items():
            if isinstance(rest, Dot) and isinstance(rest.args[0], Grad):
                return None
            inner = rest.args[0] if isinstance(rest, Grad) else None
            if isinstance(inner, Perturbation) and inner.field in self.laws.all_evolving:
                rate = self.laws.rate(inner.field, self.v)
                if rate is None:
                    return None
                parts.append(c * rate)
        return self._per_particle(Add(*parts)) if parts else None

    def nonlocal_closure(self) -> bool:
        own = [*self.laws.evolved(self.v).values(), self.terms]
        return any(rest.atoms(Multiplier) for terms in own for rest in terms)


def _at_rest(expr: Expr) -> Expr:
    return expr.xreplace({f: f.background for f in expr.atoms(Field)})


def _tensors(fields: set[Field]) -> set[Field]:
    return {f for f in fields if f.rank == 2}


def _divergence(f: Field) -> Expr:
    return Div(f.perturbation) if f.rank == 1 else Integer(0)


def _second_derivative(rest: Expr, v: Field) -> bool:
    held = [node for node in rest.atoms(Operator) if node.derivative and node.has(v.perturbation)]
    spatial = [node for node in held if not isinstance(node, PartialT)]
    return len(spatial) > 1 or any(isinstance(node, Laplacian) for node in spatial)


def _has_lorentz_factor(law: Law, v: Field) -> bool:
    """Whether a square root of something with v.v stands in the law."""
    return any(
        not p.exp.is_Integer and p.base.has(Dot(v, v), Norm(v)) for p in law.residual.atoms(Pow)
    )
