"""A claim at a random point, with something else at some of its places: only what a change touches is made anew."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from functools import reduce
from operator import add, mul
from typing import Any

from sympy import Abs, Add, Expr, Mul, Pow, Symbol, cos, sin
from sympy import tan as tangent

from ..declare.operators import omega
from ..exact.finite import Point, Quotient, Ring, without_root
from .claim import Claim
from .derived import Derived
from .places import WAYS, Changes, Path, Spot, parts

ROOTS = 2
"""How often a root that the claim holds may stand in it with different bases."""

Roots = dict[Symbol, tuple[Quotient, int]]
"""What the unknowns that stand for roots are: the base and the index of each."""


class ClaimAtPoint:
    """The values of all parts of a claim, rational functions of ω and of unknowns.

    Parameters
    ----------
    claim : Claim
    derived : Derived
        Whose conditions of the background hold.
    point : Point
        Where the symbols have their values.
    unknowns : sequence of Symbol
    """

    def __init__(
        self, claim: Claim, derived: Derived, point: Point, unknowns: Sequence[Symbol]
    ) -> None:
        self.claim, self.derived, self.point = claim, derived, point
        self.parts = parts(claim)
        self.conditions = {c.symbol: c.value for c in derived.conditions}
        roots = _count_roots([*self.parts.values(), claim.residual, *self.conditions.values()])
        self.slots = [Symbol(f"root{i}") for i in range(ROOTS * roots)]
        self.ring = Ring([omega, *unknowns, *self.slots])
        self.known: dict[Expr, Quotient] = {}
        self.roots: Roots = {}
        self.symbols: dict[Expr, frozenset[Symbol]] = {}
        for expr in self.parts.values():
            self.value(expr)

    def numerator(self, changes: Changes) -> Any:
        """The numerator of left minus right, a polynomial in ω and the unknowns, freed of roots by norms."""
        for _, what in changes.values():
            self.value(what)
        values = _Changed(self, changes)
        sides = [values.of(part, self.parts[part], ()) for part in ("left", "right")]
        top = (sides[0] + -sides[1]).top
        return self._freed(self._freed(top, values.roots), self.roots)

    def value(self, node: Expr) -> Quotient:
        """The value of a part that does not change."""
        if node not in self.known:
            self.known[node] = self._value(node)
        return self.known[node]

    def _value(self, node: Expr) -> Quotient:
        if node in self.ring.gens:
            return self.ring.gen(node)
        if self._is_prepared(node):
            made = self.derived.rational(self.claim.written_out(node))
            if made != node:
                return self.value(made)
        return self.joined(node, [self.value(a) for a in _operands(node)], None)

    def _is_prepared(self, node: Expr) -> bool:
        """Whether SymPy may make it simpler when shorthands, conditions and angles are put in."""
        base = node.base if isinstance(node, Pow) else node
        named = base in self.claim.definitions or base in self.conditions
        named |= any(base == c.symbol for c in self.derived.angles.conics)
        return named or _is_root(node) or isinstance(node, sin | cos | tangent | Abs)

    def joined(self, node: Expr, operands: list[Quotient], passing: Roots | None) -> Quotient:
        """The value of a node from those of its operands; new roots are kept, or put to the passing ones."""
        if isinstance(node, Add | Mul):
            return reduce(add if isinstance(node, Add) else mul, operands)
        if isinstance(node, Abs):
            return self._root(operands[0] ** 2, 2, passing)
        if isinstance(node, Pow) and operands:
            power, index = int(node.exp.p), int(node.exp.q)
            if index == 1:
                return operands[0] ** power
            return self._root(operands[0], index, passing) ** power
        return self.ring.constant(self.point.number(node))

    def _root(self, base: Quotient, index: int, passing: Roots | None) -> Quotient:
        held = {**self.roots, **(passing or {})}
        for slot, root in held.items():
            if root == (base, index):
                return self.ring.gen(slot)
        free = next((s for s in self.slots if s not in held), None)
        if free is None:
            raise ArithmeticError("more roots in the claim than can be told apart")
        (self.roots if passing is None else passing)[free] = base, index
        return self.ring.gen(free)

    def _freed(self, top: Any, roots: Roots) -> Any:
        """Roots go in the reverse of the order in which they came, since the later may hold the earlier."""
        for slot, (base, index) in reversed(roots.items()):
            place = self.ring.names.index(slot)
            top = without_root(top, place, index, base, self.ring.gens[slot])
        return top

    def free_symbols(self, node: Expr) -> frozenset[Symbol]:
        if node not in self.symbols:
            self.symbols[node] = frozenset(node.free_symbols)
        return self.symbols[node]


class _Changed:
    """The values of the parts of a claim that some changes touch."""

    def __init__(self, whole: ClaimAtPoint, changes: Changes) -> None:
        self.whole, self.changes = whole, changes
        self.roots: Roots = {}
        self.above: set[Spot] = {
            (part, path[:n]) for part, path in changes for n in range(len(path))
        }
        self.names = _touched_names(whole.claim, {part for part, _ in changes})
        self.known: dict[Symbol, Quotient] = {}

    def of(self, part: str, node: Expr, path: Path) -> Quotient:
        change = self.changes.get((part, path))
        if change is None:
            return self._inside(part, node, path)
        kind, what = change
        value = self._inside(part, node, path)
        base = self.of(part, node.base, (*path, 0)) if isinstance(node, Pow) else value
        made: Quotient = WAYS[kind](value, base, self.whole.value(what))
        return made

    def _inside(self, part: str, node: Expr, path: Path) -> Quotient:
        if not self._is_touched(part, node, path):
            return self.whole.value(node)
        if node in self.names:
            return self._defined(node)
        inner = _operands(node) or (node.args[:1] if _is_root(node) else ())
        if not inner:
            raise ArithmeticError(f"a change inside {node.func} leaves no rational function")
        operands = [self.of(part, a, (*path, i)) for i, a in enumerate(inner)]
        return self.whole.joined(node, operands, self.roots)

    def _is_touched(self, part: str, node: Expr, path: Path) -> bool:
        names = self.names
        return (part, path) in self.above or bool(names and names & self.whole.free_symbols(node))

    def _defined(self, name: Any) -> Quotient:
        if name not in self.known:
            self.known[name] = self.of(name.name, self.whole.claim.definitions[name], ())
        return self.known[name]


def _touched_names(claim: Claim, changed: Iterable[str]) -> set[Symbol]:
    """The shorthands whose meaning changes, by themselves or through others."""
    found = {s for s in claim.definitions if s.name in set(changed)}
    for _ in claim.definitions:
        found |= {s for s, d in claim.definitions.items() if d.free_symbols & found}
    return found


def _operands(node: Expr) -> tuple[Expr, ...]:
    """What a node is computed from; nothing for what has a value of its own."""
    if isinstance(node, Add | Mul | Abs):
        return tuple(a for a in node.args if isinstance(a, Expr))
    if isinstance(node, Pow) and node.exp.is_Rational:
        plain = node.exp.is_Integer or not (node.base.is_Symbol or node.base.is_number)
        return (node.base,) if plain or node.base == omega else ()
    return ()


def _is_root(node: Expr) -> bool:
    return isinstance(node, Pow) and bool(node.exp.is_Rational) and not node.exp.is_Integer


def _count_roots(expressions: Iterable[Expr]) -> int:
    found = set().union(*(e.atoms(Pow, Abs) for e in expressions))
    return sum(_is_root(a) or isinstance(a, Abs) for a in found)
