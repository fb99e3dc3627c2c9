"""The places of a claim where something can be wrong, and the claim with something else put there."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator, Mapping
from dataclasses import dataclass
from itertools import combinations, permutations

from sympy import Add, Expr, Mul, Pow, S, Symbol, cos, sin

from ..declare.operators import omega
from .claim import Claim

Path = tuple[int, ...]
Spot = tuple[str, Path]
"""A part of a claim ("left", "right" or a shorthand) and the way to a node of it."""


@dataclass(frozen=True)
class Edit:
    """One way to change a claim by an unknown.

    Attributes
    ----------
    term : Expr
        What stands there, in the author's symbols.
    kind : str
        "times": a factor on the term; "more": times one plus the unknown; "over", "over twice": divided by one plus
        the unknown or its square; "plus": a term more beside it; "plus in one": a term more in one of the equal
        factors of a power; "plus below": a term more in a denominator.
    where : str
        The shorthand whose definition it stands in; "" in the claim itself; "everywhere" for several places.
    changed : callable
        From the unknown to the changed claim.
    """

    term: Expr
    kind: str
    where: str
    changed: Callable[[Expr], Claim]


FACTORS: dict[str, Callable[[Expr, Expr], Expr]] = {
    "times": lambda node, u: u * node,
    "more": lambda node, u: node * (1 + u),
    "over": lambda node, u: node / (1 + u),
    "over twice": lambda node, u: node / (1 + u) ** 2,
}
ADDITIONS: dict[str, Callable[[Expr, Expr], Expr]] = {
    "plus": lambda node, u: node + u,
    "plus below": lambda node, u: 1 / (1 / node + u),
    "plus in one": lambda node, u: node * ((node.base + u) / node.base) ** (1 if node.exp > 0 else -1),
}  # fmt: skip


def edits(claim: Claim) -> list[Edit]:
    """Every factor on a term or on all equal terms, then every term that may be missing."""
    groups = grouped(claim)
    found = [e for spots, node in groups if len(spots) > 1 for e in _on(claim, spots, node)]
    found += [
        Edit(s, "times", "everywhere", _scaled(claim, s)) for s in sorted(_shared(claim), key=str)
    ]
    for spots, _ in groups:
        for spot in spots:
            found += _on(claim, [spot], at(claim, spot))
    for part, expr in parts(claim).items():
        for path, node, kind in _sums(claim, expr):
            make = ADDITIONS[kind]
            found.append(Edit(node, kind, _label(part), _put_all(claim, [(part, path)], make)))
    return found


def grouped(claim: Claim) -> list[tuple[list[Spot], Expr]]:
    """The terms of a claim; those that are equal up to their sign are taken together."""
    found: dict[Expr, list[Spot]] = {}
    for part, expr in parts(claim).items():
        for path, node in _terms(expr):
            found.setdefault(-node if -node in found else node, []).append((part, path))
    return [(spots, node) for node, spots in found.items()]


def multiplied(claim: Claim, factors: Mapping[Spot, Expr]) -> Claim:
    """The claim with a factor on each of several terms."""
    return _changed(claim, {spot: f * at(claim, spot) for spot, f in factors.items()})


def apart(spots: Iterable[Spot]) -> bool:
    """Whether no place lies inside another."""
    return not any(a[0] == b[0] and a[1] == b[1][: len(a[1])] for a, b in permutations(spots, 2))


def exchanges(claim: Claim) -> Iterator[tuple[Expr, Expr, Claim]]:
    """Two symbols exchanged throughout the claim."""
    leaves = sorted(_leaves(claim) - {omega}, key=str)
    angles = [(sin(a), cos(a)) for a in {f.args[0] for f in claim.residual.atoms(sin, cos)}]
    for a, b in [*combinations(leaves, 2), *angles]:
        swap = {a: b, b: a}
        yield a, b, claim.mapped(lambda e, swap=swap: e.xreplace(swap))


def powers(claim: Claim) -> Iterator[tuple[Expr, Expr, Claim]]:
    """Every sum, or power of one, to another power."""
    for part, expr in parts(claim).items():
        for path, node in _nodes(expr):
            if isinstance(node, Add) or (isinstance(node, Pow) and isinstance(node.base, Add)):
                for power in (S(2), S.NegativeOne, S.Half):
                    yield node, power, _put_all(claim, [(part, path)], lambda n, p: n**p)(power)


def additions(claim: Claim) -> list[tuple[Expr, Callable[[Expr], Claim], str]]:
    """Every sum of the claim with the way to add a term to it."""
    return [
        (node, _put_all(claim, [(part, path)], ADDITIONS["plus"]), _label(part))
        for part, expr in parts(claim).items()
        for path, node in _nodes(expr)
        if isinstance(node, Add) or (not path and node != 0)
    ]


def parts(claim: Claim) -> dict[str, Expr]:
    """Both sides and every definition."""
    named = {s.name: d for s, d in claim.definitions.items()}
    return {"left": claim.left, "right": claim.right, **named}


def at(claim: Claim, spot: Spot) -> Expr:
    """What stands at a place."""
    return _node(parts(claim)[spot[0]], spot[1])


def _on(claim: Claim, spots: list[Spot], node: Expr) -> list[Edit]:
    where = "everywhere" if len(spots) > 1 else _label(spots[0][0])
    several = isinstance(node, Mul | Pow) and any(isinstance(a, Add) for a in node.args)
    kinds = ("times", "over", "over twice", *(("more",) if several else ()))
    return [Edit(node, kind, where, _put_all(claim, spots, FACTORS[kind])) for kind in kinds]


def _put_all(
    claim: Claim, spots: list[Spot], make: Callable[[Expr, Expr], Expr]
) -> Callable[[Expr], Claim]:
    return lambda u: _changed(claim, {spot: make(at(claim, spot), u) for spot in spots})


def _changed(claim: Claim, new: Mapping[Spot, Expr]) -> Claim:
    """The claim with other expressions at some places."""
    made = {
        name: _put(expr, {path: e for (part, path), e in new.items() if part == name})
        for name, expr in parts(claim).items()
    }
    return Claim(made["left"], made["right"], {s: made[s.name] for s in claim.definitions})


def _label(part: str) -> str:
    return "" if part in ("left", "right") else part


def _nodes(expr: Expr, path: Path = ()) -> Iterator[tuple[Path, Expr]]:
    yield path, expr
    for i, a in enumerate(expr.args):
        if isinstance(a, Expr):
            yield from _nodes(a, (*path, i))


def _terms(expr: Expr) -> Iterator[tuple[Path, Expr]]:
    """Whole sides, terms of sums, and products that are the base of a power."""
    for path, node in _nodes(expr):
        parent = _node(expr, path[:-1]) if path else None
        base = isinstance(parent, Pow) and path[-1] == 0 and isinstance(node, Mul)
        if node != 0 and (parent is None or isinstance(parent, Add) or base):
            yield path, node


def _sums(claim: Claim, expr: Expr) -> Iterator[tuple[Path, Expr, str]]:
    """Where a term may be missing: whole sides, sums, frequencies, and one of the equal factors of a power."""
    for path, node in _nodes(expr):
        frequency = node.is_Symbol and claim.written_out(node).has(omega)
        if not path or isinstance(node, Add) or frequency:
            yield path, node, "plus"
        if isinstance(node, Pow) and node.exp.is_Integer and abs(node.exp) > 1:
            if isinstance(node.base, Add) or claim.written_out(node.base).has(omega):
                yield path, node, "plus in one"
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


def _scaled(claim: Claim, symbol: Symbol) -> Callable[[Expr], Claim]:
    return lambda factor: claim.mapped(lambda e: e.xreplace({symbol: factor * symbol}))


def _leaves(claim: Claim) -> set[Symbol]:
    found: set[Symbol] = (claim.left - claim.right).free_symbols
    return {s for d in claim.definitions.values() for s in d.free_symbols} | found


def _shared(claim: Claim) -> set[Symbol]:
    """Symbols, ω and shorthands of it aside, that stand in more than one place."""
    count: dict[Symbol, int] = {}
    for expr in parts(claim).values():
        for _, node in _nodes(expr):
            if node.is_Symbol:
                count[node] = count.get(node, 0) + 1
    several = {s for s, n in count.items() if n > 1}
    return {s for s in several if not claim.written_out(s).has(omega)}
