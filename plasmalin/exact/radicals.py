"""Relations with roots in them: each root becomes a symbol, and a norm frees the polynomial of it.

The norm over r with r**q = b multiplies a polynomial by its q - 1 conjugates; it is the determinant of the
multiplication by that polynomial on 1, r, ..., r**(q-1).
"""

from __future__ import annotations

from dataclasses import dataclass

import sympy as sp

from .gaussian import Gaussian, gcd
from .minors import minors_determinant
from .polynomial import ExactPolynomial
from .ratio import Ratio
from .reader import Reader, ring_of
from .ring import Ring


@dataclass(frozen=True)
class Radical:
    """A symbol that stands for ``base**(1/index)``; the base may hold symbols of earlier radicals."""

    symbol: sp.Symbol
    index: int
    base: sp.Expr


@dataclass(frozen=True)
class LinearInRoots:
    """A sum of coefficients times roots that hold the main symbol.

    Attributes
    ----------
    rest : ExactPolynomial or None
        What stands without such a root; None where a power or a product of them occurs.
    parts : tuple of ExactPolynomial
        The coefficient of each of these roots.
    radicals : tuple of Radical
        All roots of the expression; those without the main symbol stand in the coefficients.
    """

    rest: ExactPolynomial | None
    parts: tuple[ExactPolynomial, ...]
    radicals: tuple[Radical, ...]


def isolated(
    expr: sp.Expr, *mains: sp.Symbol, numbers: bool = False
) -> tuple[sp.Expr, list[Radical]]:
    """The expression with compound radicals, roots of `mains`, and absolute values as symbols.

    Roots of other symbols and, unless asked for, of numbers stay: they are generators of a ring as they are.
    """
    found: dict[tuple[sp.Expr, int], Radical] = {}
    seen: dict[sp.Expr, sp.Expr] = {}

    def symbol(base: sp.Expr, index: int) -> sp.Symbol:
        name = f"_root{len(found)}"
        return found.setdefault(
            (base, index), Radical(sp.Symbol(name, positive=True), index, base)
        ).symbol

    def visit(node: sp.Expr) -> sp.Expr:
        if node not in seen:
            seen[node] = made(node)
        return seen[node]

    def made(node: sp.Expr) -> sp.Expr:
        if not node.args:
            return node
        if isinstance(node, sp.Abs):
            return symbol(visit(node.args[0]) ** 2, 2)
        if isinstance(node, sp.Pow) and node.exp.is_Rational and not node.exp.is_Integer:
            number = node.base.is_number and not numbers
            if node.base in mains or not (node.base.is_Symbol or number):
                power, index = int(node.exp.p), int(node.exp.q)
                base, whole = visit(node.base), int(power / index)
                return base**whole * symbol(base, index) ** (power - whole * index)
            return node
        if isinstance(node, sp.Pow) and not node.exp.is_Integer:
            return node
        if isinstance(node, sp.Add | sp.Mul | sp.Pow):
            return node.func(*(visit(a) for a in node.args))
        return node

    plain = visit(expr)
    return plain, list(found.values())


def rational_numerator(
    expr: sp.Expr, main: sp.Symbol, numbers: bool = False
) -> tuple[ExactPolynomial, int]:
    """The numerator of an expression with roots, also of numbers if asked, freed of them, and on how many sheets it stands.

    Returns
    -------
    polynomial : ExactPolynomial
        Its zeros in `main` are those of the expression on every sheet of its roots.
    sheets : int
        1 where no root had to be removed.
    """
    plain, radicals = isolated(expr, main, numbers=numbers)
    reader = _reader(plain, radicals, main)
    ring = reader.ring
    value = reader.ratio(plain).lowest().top
    sheets = 1
    for radical in reversed(radicals):
        if radical.symbol not in ring.generators:
            continue
        variable = 1 + ring.generators.index(radical.symbol)
        if value.holds(variable):
            value = _norm(value, variable, radical.index, reader.ratio(radical.base).lowest(), ring)
            sheets *= radical.index if value.holds(0) else 1
    return ExactPolynomial(_without(ring, radicals), _moved(value, ring, radicals)), sheets


def linear_in_roots(expr: sp.Expr, main: sp.Symbol) -> LinearInRoots | None:
    """The numerator of an expression that holds roots of `main`; None where it holds none."""
    plain, radicals = isolated(expr, main)
    holding: set[sp.Symbol] = {main}
    for radical in radicals:
        holding |= {radical.symbol} if radical.base.free_symbols & holding else set()
    reader = _reader(plain, radicals, main)
    rest = reader.ratio(plain).lowest().top
    names = reader.ring.generators
    places = [1 + names.index(s) for s in holding if s in names]
    parts: list[Gaussian] = []
    for place in (p for p in places if rest.holds(p)):
        slices = rest.by_power(place)
        if not set(slices) <= {0, 1} or any(slices[1].holds(p) for p in places):
            return LinearInRoots(None, (), tuple(radicals))
        parts.append(slices[1])
        rest = slices.get(0, reader.ring.constant(0))
    made = [ExactPolynomial(reader.ring, p) for p in (rest, *parts)]
    return LinearInRoots(made[0], tuple(made[1:]), tuple(radicals)) if parts else None


def _reader(plain: sp.Expr, radicals: list[Radical], main: sp.Symbol) -> Reader:
    return Reader(ring_of([plain, *(r.base for r in radicals)], main))


def _norm(value: Gaussian, variable: int, index: int, base: Ratio, ring: Ring) -> Gaussian:
    """The product over the conjugates, with common factors of the parts taken out first."""
    parts = _lowered(value.by_power(variable), index, base)
    parts = {j: p for j, p in parts.items() if p}
    if set(parts) <= {0}:
        return parts.get(0, ring.constant(0))
    common = ring.constant(0)
    for p in parts.values():
        common = gcd(common, p)
    inner = {j: p.over(common) for j, p in parts.items()}
    low = min(inner)
    if low and base.top.holds(0):
        common = common * base.top
    inner = {j - low: p for j, p in inner.items()}
    # with s = bottom r: s**index = top bottom**(index-1), and r**j = s**j / bottom**j
    power = base.top * base.bottom ** (index - 1)
    scaled = {j: p * base.bottom ** (index - 1 - j) for j, p in inner.items()}
    rows: list[dict[int, Gaussian]] = []
    for i in range(index):
        row = {}
        for j, p in scaled.items():
            at = i + j
            row[at % index] = p * power if at >= index else p
        rows.append(row)
    return common * minors_determinant(rows, ring) if len(inner) > 1 else common * inner[0]


def _lowered(parts: dict[int, Gaussian], index: int, base: Ratio) -> dict[int, Gaussian]:
    """Powers of the root below its index, the denominators of its base cleared."""
    highest = max(parts, default=0) // index
    found: dict[int, Gaussian] = {}
    for n, p in parts.items():
        whole, rest = divmod(n, index)
        term = p * base.top**whole * base.bottom ** (highest - whole)
        found[rest] = found[rest] + term if rest in found else term
    return found


def _without(ring: Ring, radicals: list[Radical]) -> Ring:
    gone = {r.symbol for r in radicals}
    return Ring(ring.main, tuple(g for g in ring.generators if g not in gone))


def _moved(value: Gaussian, ring: Ring, radicals: list[Radical]) -> Gaussian:
    gone = {1 + i for i, g in enumerate(ring.generators) if g in {r.symbol for r in radicals}}
    make = _without(ring, radicals).context.from_dict
    parts = (
        {tuple(n for i, n in enumerate(e) if i not in gone): c for e, c in part.terms()}
        for part in (value.re, value.im)
    )
    return Gaussian(*map(make, parts))
