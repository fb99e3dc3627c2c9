"""The places of a claim where something can be wrong, and the claim with something else put there."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator, Mapping
from dataclasses import dataclass
from itertools import combinations, permutations
from typing import Any

from sympy import Add, Expr, Mul, Pow, Symbol, cos, sin

from ..declare.operators import omega
from .claim import Claim

Path = tuple[int, ...]
Spot = tuple[str, Path]
"""A part of a claim ("left", "right" or a shorthand) and the way to a node of it."""
Changes = Mapping[Spot, tuple[str, Expr]]
"""For places of a claim, none inside another: how what stands there changes (one of `WAYS`), and by what."""

WAYS: dict[str, Callable[[Any, Any, Any], Any]] = {
    "times": lambda node, base, u: node * u,
    "more": lambda node, base, u: node * (1 + u),
    "over": lambda node, base, u: node / (1 + u),
    "over twice": lambda node, base, u: node / (1 + u) ** 2,
    "plus": lambda node, base, u: node + u,
    "plus below": lambda node, base, u: 1 / (1 / node + u),
    "plus in one": lambda node, base, u: node * (base + u) / base,
    "plus in one below": lambda node, base, u: node * base / (base + u),
    "plus to half": lambda node, base, u: node / 2 + u,
    "inverted": lambda node, base, u: 1 / node,
    "squared": lambda node, base, u: node**2,
    "once more": lambda node, base, u: node * base,
    "once less": lambda node, base, u: node / base,
    "twice more": lambda node, base, u: node * base**2,
    "twice less": lambda node, base, u: node / base**2,
}
"""What stands at a place (where it is a power, with its base) and the unknown, to what should stand there.

They are made of +, *, / and whole powers only, so that they hold for expressions and for numbers of a field alike.
"""


@dataclass(frozen=True)
class Edit:
    """One way to change a claim by an unknown.

    Attributes
    ----------
    term : Expr
        What stands there, in the author's symbols.
    kind : str
        One of `WAYS`.
    where : str
        The shorthand whose definition it stands in; "" in the claim itself; "everywhere" for several places.
    spots : tuple of Spot
    """

    term: Expr
    kind: str
    where: str
    spots: tuple[Spot, ...]

    def changes(self, what: Expr) -> dict[Spot, tuple[str, Expr]]:
        """With something for the unknown."""
        return dict.fromkeys(self.spots, (self.kind, what))


def edits(claim: Claim) -> list[Edit]:
    """Every factor on a term or on all equal terms, then every term that may be missing."""
    groups = grouped(claim)
    found = [e for spots, node in groups if len(spots) > 1 for e in _on(spots, node)]
    found += [Edit(s, "times", "everywhere", spots) for s, spots in _shared(claim)]
    for spots, _ in groups:
        for spot in spots:
            found += _on([spot], at(claim, spot))
    for part, expr in parts(claim).items():
        for path, node, kind in _sums(claim, expr):
            found.append(Edit(node, kind, _label(part), ((part, path),)))
    return found


def addends(claim: Claim) -> Iterator[Spot]:
    """The sides, and every term of a sum in them and in the definitions that they use."""
    used = {n.name for n in claim.used}
    yield from ((part, ()) for part in ("left", "right") if parts(claim)[part] != 0)
    for part, expr in parts(claim).items():
        for path, node in nodes(expr) if part in ("left", "right", *used) else ():
            if isinstance(node, Add):
                yield from ((part, (*path, i)) for i in range(len(node.args)))


def sign_edits(claim: Claim) -> list[Edit]:
    """Every term of a side, with another factor."""
    return [e for e in edits(claim) if e.kind == "times" and _is_term_of_side(e)]


def _is_term_of_side(edit: Edit) -> bool:
    return all(part in ("left", "right") and len(path) < 2 for part, path in edit.spots)


def grouped(claim: Claim) -> list[tuple[list[Spot], Expr]]:
    """The terms of a claim; those that are equal up to their sign are taken together."""
    found: dict[Expr, list[Spot]] = {}
    for part, expr in parts(claim).items():
        for path, node in _terms(expr):
            found.setdefault(-node if -node in found else node, []).append((part, path))
    return [(spots, node) for node, spots in found.items()]


def apart(spots: Iterable[Spot]) -> bool:
    """Whether no place lies inside another."""
    return not any(a[0] == b[0] and a[1] == b[1][: len(a[1])] for a, b in permutations(spots, 2))


def exchanges(claim: Claim) -> Iterator[tuple[Expr, Expr, Claim]]:
    """Two symbols exchanged throughout the claim."""
    leaves = sorted(_leaves(claim) - {omega}, key=str)
    angles = [(sin(a), cos(a)) for a in {f.args[0] for f in claim.residual.atoms(sin, cos)}]
    for a, b in [*combinations(leaves, 2), *angles]:
        if {a, b} & {*_leaves_of(claim, a), *_leaves_of(claim, b)}:
            continue  # a shorthand and what it is defined by: the exchange would define it in a circle
        swap = {a: b, b: a}
        yield a, b, claim.mapped(lambda e, swap=swap: e.xreplace(swap))


POWERS = ("inverted", "squared", "once more", "once less", "twice more", "twice less")


def powers_of_sums(claim: Claim) -> Iterator[Edit]:
    """Every sum or shorthand of one, or power of it, with another power; not a whole side that is set equal to zero."""
    vanishes = claim.left == 0 or claim.right == 0
    for part, path, node, base in _bases(claim):
        whole = vanishes and not path and part in ("left", "right")
        is_sum = isinstance(base, Add) or (
            base in claim.definitions and claim.written_out(base).has(Add)
        )
        if is_sum and not whole:
            for kind in POWERS[:2] if node == base else POWERS[:4]:
                yield Edit(node, kind, _label(part), ((part, path),))


def powers_of_sines(claim: Claim) -> Iterator[Edit]:
    """Every sine or cosine, or power of one, with another power; that of a symbol is a factor on its term."""
    for part, path, node, base in _bases(claim):
        if isinstance(base, sin | cos):
            for kind in POWERS[2:]:
                yield Edit(node, kind, _label(part), ((part, path),))


def _bases(claim: Claim) -> Iterator[tuple[str, Path, Expr, Expr]]:
    """Every node that is no base of a power, with its part, its path, and its own base where it is a power."""
    for part, expr in parts(claim).items():
        for path, node in nodes(expr):
            above = _node(expr, path[:-1]) if path else None
            if not isinstance(above, Pow) or isinstance(node, Add):
                yield part, path, node, node.base if isinstance(node, Pow) else node


def parts(claim: Claim) -> dict[str, Expr]:
    """Both sides and every definition."""
    named = {s.name: d for s, d in claim.definitions.items()}
    return {"left": claim.left, "right": claim.right, **named}


def at(claim: Claim, spot: Spot) -> Expr:
    """What stands at a place."""
    return _node(parts(claim)[spot[0]], spot[1])


def changed(claim: Claim, changes: Changes) -> Claim:
    """The claim with other expressions at some places."""

    def made(part: str, expr: Expr) -> Expr:
        new = {p: _made(_node(expr, p), *c) for (name, p), c in changes.items() if name == part}
        return _put(expr, new)

    definitions = {s: made(s.name, d) for s, d in claim.definitions.items()}
    return Claim(made("left", claim.left), made("right", claim.right), definitions)


def nodes(expr: Expr, path: Path = ()) -> Iterator[tuple[Path, Expr]]:
    """Every part of an expression, the whole first, with the way to it."""
    yield path, expr
    for i, a in enumerate(expr.args):
        if isinstance(a, Expr):
            yield from nodes(a, (*path, i))


def _made(node: Expr, kind: str, what: Expr) -> Expr:
    return WAYS[kind](node, node.base if isinstance(node, Pow) else node, what)


def _on(spots: list[Spot], node: Expr) -> list[Edit]:
    where = "everywhere" if len(spots) > 1 else _label(spots[0][0])
    several = isinstance(node, Mul | Pow) and any(isinstance(a, Add) for a in node.args)
    kinds = ("times", "over", "over twice", *(("more",) if several else ()))
    made = [Edit(node, kind, where, tuple(spots)) for kind in kinds]
    if len(spots) == 1 and node.as_coeff_Mul()[0] % 2 == 0:
        made.append(Edit(node, "plus to half", where, tuple(spots)))
    return made


def _label(part: str) -> str:
    return "" if part in ("left", "right") else part


def _terms(expr: Expr) -> Iterator[tuple[Path, Expr]]:
    """Whole sides, terms of sums, and products that are the base of a power."""
    for path, node in nodes(expr):
        parent = _node(expr, path[:-1]) if path else None
        base = isinstance(parent, Pow) and path[-1] == 0 and isinstance(node, Mul)
        if node != 0 and (parent is None or isinstance(parent, Add) or base):
            yield path, node


def _sums(claim: Claim, expr: Expr) -> Iterator[tuple[Path, Expr, str]]:
    """Where a term may be missing: whole sides, sums, frequencies, and one of the equal factors of a power."""
    for path, node in nodes(expr):
        frequency = node.is_Symbol and claim.written_out(node).has(omega)
        if not path or isinstance(node, Add) or frequency:
            yield path, node, "plus"
        if isinstance(node, Pow) and node.exp.is_Integer and abs(node.exp) > 1:
            if isinstance(node.base, Add) or claim.written_out(node.base).has(omega):
                yield path, node, "plus in one" if node.exp > 0 else "plus in one below"
            if node.exp < 0 and node.base == omega:
                yield path, node, "plus below"


def _node(expr: Expr, path: Path) -> Expr:
    for i in path:
        expr = expr.args[i]
    return expr


def _put(expr: Expr, new: Mapping[Path, Expr]) -> Expr:
    if not new:
        return expr
    if () in new:
        return new[()]
    args = [
        _put(a, {path[1:]: e for path, e in new.items() if path[0] == i})
        for i, a in enumerate(expr.args)
    ]
    return expr.func(*args)


def _leaves(claim: Claim) -> set[Symbol]:
    found: set[Symbol] = (claim.left - claim.right).free_symbols
    return {s for d in claim.definitions.values() for s in d.free_symbols} | found


def _leaves_of(claim: Claim, symbol: Expr) -> set[Symbol]:
    """What a shorthand is defined by, through other shorthands too; nothing for a symbol."""
    found: set[Symbol] = set()
    if symbol not in claim.definitions:
        return found
    for s in claim.definitions[symbol].free_symbols:
        found |= {s} | _leaves_of(claim, s)
    return found


def _shared(claim: Claim) -> list[tuple[Symbol, tuple[Spot, ...]]]:
    """Symbols, ω and shorthands of it aside, that stand in more than one place, with these places."""
    found: dict[Symbol, list[Spot]] = {}
    for part, expr in parts(claim).items():
        for path, node in nodes(expr):
            if node.is_Symbol and not claim.written_out(node).has(omega):
                found.setdefault(node, []).append((part, path))
    return sorted(((s, tuple(p)) for s, p in found.items() if len(p) > 1), key=str)
