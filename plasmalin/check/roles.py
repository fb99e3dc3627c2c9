"""Which symbols of a model carry electric and magnetic units, found from its laws.

The terms of a law have one dimension. This fixes the powers of charge and of time in the unit of every symbol once
masses and densities, which hold neither, are told by their place in the laws. In the unit of charge a charge counts 1,
every field −1; a magnetic field is told from an electric one by the power of time, −1 against −2.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING, Any

from sympy import Add, Expr, Mul, Pow, Symbol

from ..declare.fields import Components, Field
from ..declare.operators import Advect, Div, Identity, Operator, PartialT, omega

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix

Form = dict[Any, Fraction]
"""A linear form in unknown powers; the key None stands for 1."""

SPELLINGS = {"eps0": "epsilon_0", "mu0": "mu_0", "eps_0": "epsilon_0", "epsilon0": "epsilon_0"}
KNOWN = {
    "e": (1, 0), "epsilon_0": (2, 2), "mu_0": (-2, 0), "c": (0, -1), "k_B": (0, -2), "G": (0, -2),
    "h": (0, -1), "hbar": (0, -1), "m_e": (0, 0), "m_p": (0, 0), "m_n": (0, 0), "u": (0, 0),
}  # fmt: skip
"""Powers of charge and of time in the units of the constants of nature."""
USUAL: tuple[tuple[str, tuple[int, int]], ...] = (
    (r"(e|q)(_\w*|\d)?", (1, 0)),
    (r"m([_a-z]\w*)?|mass\w*|n_?\w?_?0?|rho\w*|L(_?\w*)", (0, 0)),
    (r"(w|omega|Omega|nu)([_a-z]\w*)?", (0, -1)),
    (r"(E|phi|Phi)(_?\w?0?)", (-1, -2)),
    (r"(B|A)(_?\w?0?)", (-1, -1)),
    (r"T(_\w*|[a-z]\d?)?", (0, -2)),
)
"""Where the laws leave a choice: charges; masses, densities, lengths; frequencies; fields; temperatures."""


@dataclass(frozen=True)
class Roles:
    """What a change of electromagnetic units does to the symbols of a model.

    Attributes
    ----------
    charge : mapping of Symbol to Fraction
        The power of charge in the unit of each symbol, where it is not zero; those of the vacuum left out.
    magnetic : frozenset of Symbol
        Magnetic fields and vector potentials.
    epsilon, mu, c : Symbol
        The model's own, or new symbols of the usual names.
    own : frozenset of Symbol
        Which of these three the model has.
    """

    charge: Mapping[Symbol, Fraction]
    magnetic: frozenset[Symbol]
    epsilon: Symbol
    mu: Symbol
    c: Symbol
    own: frozenset[Symbol]

    @property
    def constants(self) -> tuple[Symbol, Symbol, Symbol]:
        """c, ε_0 and μ_0, which are related by c² ε_0 μ_0 = 1."""
        return self.c, self.epsilon, self.mu

    @property
    def charges(self) -> tuple[Symbol, ...]:
        """The symbols of unit charge."""
        return tuple(s for s, power in self.charge.items() if power == 1)

    @property
    def electric(self) -> tuple[Symbol, ...]:
        """Electric fields, potentials, and temperatures given in volts."""
        return tuple(s for s, p in self.charge.items() if p == -1 and s not in self.magnetic)


def roles(wave: WaveMatrix) -> Roles:
    """The roles of a model's symbols in a change of electromagnetic units."""
    symbols = wave.linear.symbols
    charge, time = _powers(wave)
    vacuum = [constant(symbols, name) for name in ("epsilon_0", "mu_0", "c")]
    carrying = {
        s: p for s in symbols.values() if (p := charge.get(s, Fraction(0))) != 0 and s not in vacuum
    }
    magnetic = frozenset(s for s, p in carrying.items() if p == -1 and _is_magnetic(s, time))
    if "e" not in symbols:
        carrying[constant(symbols, "e")] = Fraction(1)
    epsilon, mu, c = vacuum
    own = frozenset(set(vacuum) & set(symbols.values()))
    return Roles(carrying, magnetic, epsilon, mu, c, own)


def constant(symbols: Mapping[str, Symbol], name: str) -> Symbol:
    """A constant of nature: the model's symbol by any spelling, or else a new one."""
    for spelling in (name, *(s for s, means in SPELLINGS.items() if means == name)):
        if spelling in symbols:
            return symbols[spelling]
    return Symbol(name, positive=True)


def _is_magnetic(symbol: Symbol, time: Mapping[Any, Fraction] | None) -> bool:
    if time is None:  # laws in normalized units: only the name is left
        return symbol.name[0] in "BA"
    return time.get(symbol) == -1


def _powers(wave: WaveMatrix) -> tuple[Mapping[Any, Fraction], Mapping[Any, Fraction] | None]:
    """The powers of charge and of time in every unit; no powers of time where the laws have no consistent ones."""
    laws = [law.residual for law in wave.linear.laws.values()]
    fields = list(wave.linear.fields.values())
    mechanical = list(dict.fromkeys(_inertial(laws)))
    charge = Homogeneity(0).took(laws, fields)
    if not charge.consistent:
        return {}, None
    _settle(charge, mechanical, 0)
    powers = charge.powers()
    time = Homogeneity(-1).took(laws, fields)
    if not time.consistent:
        return powers, None
    _settle(time, [*mechanical, *(a for a, power in powers.items() if power == 1)], 1)
    return powers, time.powers()


def _settle(system: Homogeneity, neutral: Iterable[Any], unit: int) -> None:
    """Choices where the laws leave one, the surest first; where the laws say otherwise they win."""
    names = [(a, SPELLINGS.get(str(a), str(a))) for a in system.atoms]
    choices = [(a, KNOWN[n][unit]) for a, n in names if n in KNOWN and isinstance(a, Symbol)]
    choices += [(a, 0) for a in neutral]
    choices += [(a, p[unit]) for pattern, p in USUAL for a, n in names if re.fullmatch(pattern, n)]
    for atom, power in (*choices, *((a, 0) for a in system.atoms)):
        system.use({atom: Fraction(1), None: Fraction(-power)})


def _inertial(laws: list[Expr]) -> Iterator[Any]:
    """Masses and densities: what multiplies the acceleration of a velocity, and what a velocity carries away."""
    velocities = {
        n.args[0] for law in laws for n in law.atoms(Advect) if isinstance(n.args[0], Field)
    }
    carried = [n.args[0] for law in laws for n in law.atoms(Div) if isinstance(n.args[0], Mul)]
    velocities |= {
        f for product in carried for f in product.args if isinstance(f, Field) and f.rank == 1
    }
    for law in laws:
        for node in law.atoms(Mul):
            moved = [a for a in node.args if isinstance(a, PartialT) and a.args[0] in velocities]
            if moved or any(_holds_acceleration(a, velocities) for a in node.args):
                plain = (a for a in node.args if not a.atoms(Operator))
                yield from (s for a in plain for s in a.atoms(Symbol, Field))
    for product in carried:
        yield from (f for f in product.args if isinstance(f, Field) and f.rank == 0)


def _holds_acceleration(expr: Expr, velocities: set[Any]) -> bool:
    return isinstance(expr, Add) and any(
        isinstance(a, PartialT) and a.args[0] in velocities for a in expr.args
    )


class Homogeneity:
    """Every sum has terms of one dimension: linear equations for the power of one base unit in each symbol.

    Parameters
    ----------
    rate : int
        The power that a derivative in time brings.
    """

    def __init__(self, rate: int) -> None:
        self.rate = rate
        self.solved: dict[Any, Form] = {}
        self.atoms: dict[Any, None] = {}
        self.consistent = True

    def took(self, laws: Iterable[Expr], fields: Iterable[Field]) -> Homogeneity:
        """With all laws used, and the backgrounds that have the units of their fields."""
        for law in laws:
            self.of(law)
        for field in fields:
            if field.background != 0:
                self._same([self.of(field), self.of(field.background)])
        return self

    def of(self, expr: Any) -> Form:
        """The power in an expression's unit; what its sums and functions demand is used on the way."""
        if expr == omega:
            return {None: Fraction(self.rate)}
        if isinstance(expr, Symbol | Field):
            self.atoms[expr] = None
            return {expr: Fraction(1)}
        if isinstance(expr, Identity) or not expr.args:
            return {}
        if isinstance(expr, Pow):
            return self._power(expr)
        parts = [self.of(a) for a in expr.args if a != 0]
        if isinstance(expr, Add | Components) or type(expr).__name__ == "Tuple":
            return self._same(parts)
        if isinstance(expr, PartialT):
            return _plus([*parts, {None: Fraction(self.rate)}])
        if isinstance(expr, Mul | Operator) or type(expr).__name__ == "Abs":
            return _plus(parts)
        self._same([*parts, {}])
        return {}

    def _power(self, expr: Pow) -> Form:
        base = self.of(expr.base)
        if expr.exp.is_Rational:
            return {key: c * Fraction(int(expr.exp.p), int(expr.exp.q)) for key, c in base.items()}
        self._same([base, self.of(expr.exp), {}])
        return {}

    def _same(self, parts: list[Form]) -> Form:
        for other in parts[1:]:
            self.consistent &= self.use(_plus([parts[0], _times(other, Fraction(-1))]))
        return parts[0]

    def use(self, form: Form) -> bool:
        """Let a form be zero; False where what is known contradicts it."""
        left = self._known(form)
        free = [key for key in left if key is not None]
        if not free:
            return not left
        pivot = free[0]
        value = {key: -c / left[pivot] for key, c in left.items() if key != pivot}
        for key, known in self.solved.items():
            if pivot in known:
                rest = {k: c for k, c in known.items() if k != pivot}
                self.solved[key] = _plus([rest, _times(value, known[pivot])])
        self.solved[pivot] = value
        return True

    def _known(self, form: Form) -> Form:
        return _plus(
            [_times(self.solved.get(key, {key: Fraction(1)}), c) for key, c in form.items()]
        )

    def powers(self) -> dict[Any, Fraction]:
        """The powers by symbol and field, once all are settled."""
        return {a: self._known({a: Fraction(1)}).get(None, Fraction(0)) for a in self.atoms}


def _plus(forms: Iterable[Form]) -> Form:
    total: Form = {}
    for form in forms:
        for key, c in form.items():
            total[key] = total.get(key, Fraction(0)) + c
    return {key: c for key, c in total.items() if c != 0}


def _times(form: Form, factor: Fraction) -> Form:
    return {key: c * factor for key, c in form.items()}
