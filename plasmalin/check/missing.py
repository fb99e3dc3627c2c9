"""What is missing in a claim where it is more than a number times powers of symbols: sums, and functions of ω.

Where the unknown enters linearly, it is a residue modulo the factor of the derived relation: it is known up to
multiples of that factor. Of all functions of ω with this residue the one is taken that has few zeros and poles, those
of sums that the claim has or would have for another species, and sums of a few monomials for coefficients.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass, field
from functools import cached_property
from typing import Any

from sympy import Add, Expr, Mul, Pow, Symbol, expand, factor

from ..declare.operators import omega
from ..errors import PlasmalinError
from ..exact.field import power_of_scale, quotient
from ..exact.finite import common_zeros, univariate
from ..exact.modulo import divided_out, inverted, linear_root, reconstructed
from ..exact.sparse import bases_of, weights_of
from .places import Edit, nodes, parts
from .search import POWERS, Search, product, unknown

MOST_TERMS = 6
"""Monomials in a coefficient."""
MOST_SUMS = 16
"""Sums with ω that a missing term may have for factors or denominators."""

MOST_SHAPES = 4
"""Functions of ω that are tried for one place."""

ValueAt = Callable[[Any, int], int]
"""A number with one symbol doubled (None for none) and so many steps further."""
Shape = Mapping[int, int]
"""Which of the sums have which powers in a function of ω."""


def missing(search: Search, edit: Edit, shapes: Shapes) -> Iterator[Expr]:
    """What the unknown of an edit may be: a constant first, then functions of ω."""
    try:
        residue = Residue(search, edit, shapes)
        linear = residue.at(None, 0) is not None
        found = map(residue.made, residue.shapes()) if linear else [_constant(search, edit)]
        yield from (collected(x) for x in found if x is not None)
    except (ArithmeticError, PlasmalinError):
        return


@dataclass(frozen=True, eq=False)
class Shapes:
    """Sums with ω, as polynomials in ω at points.

    Attributes
    ----------
    search : Search
    """

    search: Search
    known: dict[Any, Any] = field(default_factory=dict)

    @cached_property
    def sums(self) -> list[Expr]:
        """ω itself, the sums of the claim that hold it, and these with the symbols of other species."""
        claim = self.search.claim
        own = {n: None for e in parts(claim).values() for _, n in nodes(e) if isinstance(n, Add)}
        own = {n: None for n in own if claim.written_out(n).has(omega) and self._is_polynomial(n)}
        near = [c for n in own for c in (*_turned(n), *cousins(self.search, n))]
        near = [c for c in dict.fromkeys(near) if self._is_polynomial(c)]
        ordered = (sorted(found, key=lambda n: (n.count_ops(), str(n))) for found in (own, near))
        return [omega, *(n for found in ordered for n in found)][: MOST_SUMS + 1]

    @cached_property
    def usual(self) -> list[Shape]:
        """The functions that are tried first: small powers of ω and of one sum."""
        plain = [{0: n} for n in (0, 1, -1, 2, -2)]
        more = [{i: n} for i in range(1, len(self.sums)) for n in (1, -1, 2, -2)]
        both = [{0: m, i: n} for i in range(1, len(self.sums)) for n in (1, -1) for m in (1, -1)]
        return [*plain, *more, *both]

    def at(self, i: int, doubled: Any, step: int) -> Any:
        """A sum as a polynomial in ω."""
        key = i, doubled, step
        if key not in self.known:
            value = self.search.claim_at(doubled, step).value(self.sums[i])
            self.known[key] = univariate(value.top, 0) * (1 / univariate(value.bottom, 0)[0])
        return self.known[key]

    def value(self, shape: Shape, modulus: Any, doubled: Any, step: int) -> Any:
        """A function of ω as a residue."""
        made = modulus * 0 + 1
        for i, n in shape.items():
            made = made * self._power(i, n, modulus, doubled, step) % modulus
        return made

    def _power(self, i: int, n: int, modulus: Any, doubled: Any, step: int) -> Any:
        key = i, n, doubled, step
        if key not in self.known:
            base = self.at(i, doubled, step)
            factor = base if n >= 0 else inverted(base, modulus)
            if factor is None:
                raise ZeroDivisionError("a sum shares a zero with the derived relation")
            self.known[key] = factor ** abs(n) % modulus
        return self.known[key]

    def expr(self, shape: Shape) -> Expr:
        return Mul(*(self.sums[i] ** n for i, n in shape.items()))

    def _is_polynomial(self, node: Expr) -> bool:
        value = self.search.claim_at().value(node)
        return bool(value.bottom.is_constant()) and value.top.total_degree() == max(
            value.top.degrees()[0], 1
        )


@dataclass(frozen=True, eq=False)
class Residue:
    """The unknown of an edit modulo the factor of the derived relation, at points."""

    search: Search
    edit: Edit
    known_shapes: Shapes
    known: dict[Any, Any] = field(default_factory=dict)

    def at(self, doubled: Any, step: int) -> Any:
        """None where the unknown does not enter linearly, or nothing will do."""
        if (doubled, step) not in self.known:
            top = self.search.claim_at(doubled, step).numerator(self.edit.changes(unknown))
            modulus = self.search.modulus_at(doubled, step)
            self.known[doubled, step] = linear_root(top, modulus, 1)
        return self.known[doubled, step]

    def over(self, shape: Shape, doubled: Any, step: int) -> Any:
        """Divided by a function of ω."""
        modulus = self.search.modulus_at(doubled, step)
        inverse = {i: -n for i, n in shape.items()}
        value = self.at(doubled, step)
        if value is None:
            raise ZeroDivisionError("the unknown enters otherwise at a special point")
        return value * self.known_shapes.value(inverse, modulus, doubled, step) % modulus

    def shapes(self) -> Iterator[Shape]:
        """The functions of ω that the unknown may be a constant or a short polynomial times."""
        usual = [s for s in self.known_shapes.usual if self.over(s, None, 0).degree() == 0]
        yield from usual[:MOST_SHAPES]
        if not usual:
            yield from self._reconstructed()

    def _reconstructed(self) -> Iterator[Shape]:
        found = self.quotient(None, 0)
        if found is None:
            return
        above, below, rest = found
        powers = {i: a - b for i, (a, b) in enumerate(zip(above, below, strict=True)) if a != b}
        if rest.degree() == 0:
            yield powers
            return
        power = self._pole(None, 0)[1]
        pole = self._polynomial(lambda d, s: self._pole(d, s)[0])
        if pole is not None:
            self.known_shapes.sums.append(pole)
            yield {**powers, len(self.known_shapes.sums) - 1: -power}

    def quotient(self, doubled: Any, step: int) -> tuple[list[int], list[int], Any] | None:
        """Powers of the known sums above and below, and the denominator that is left."""
        found = reconstructed(self.at(doubled, step), self.search.modulus_at(doubled, step))
        if found is None:
            return None
        count = range(len(self.known_shapes.sums))
        bases = [self.known_shapes.at(i, doubled, step) for i in count]
        above, _ = divided_out(found[0], bases)
        return above, *divided_out(found[1], bases)

    def _pole(self, doubled: Any, step: int) -> tuple[Any, int]:
        """The one sum, with its power, that the denominator is which no known sum divides."""
        found = self.quotient(doubled, step)
        parts = [] if found is None else found[2].factor_squarefree()[1]
        if len(parts) != 1:
            raise ArithmeticError("no single pole")
        part, power = parts[0]
        return part * (1 / part.leading_coefficient()), power

    def made(self, shape: Shape) -> Expr | None:
        """The unknown in symbols."""
        top = self._polynomial(lambda d, s: self.over(shape, d, s))
        return None if top is None else top * self.known_shapes.expr(shape)

    def _polynomial(self, value: Callable[[Any, int], Any]) -> Expr | None:
        """A polynomial in ω in symbols, by its values at points."""
        terms = []
        for n, here in enumerate(value(None, 0).coeffs()):
            if here:
                number = few_terms(self.search, _coefficient(value, n))
                if number is None:
                    return None
                terms.append(number * omega**n)
        return Add(*terms)


def _coefficient(value: Callable[[Any, int], Any], n: int) -> ValueAt:
    return lambda doubled, step: int(value(doubled, step)[n])


def _constant(search: Search, edit: Edit) -> Expr | None:
    """The unknown where it enters otherwise than linearly, and holds no ω."""

    def value(doubled: Any, step: int) -> int:
        rests = search.conditions(edit.changes(unknown), doubled, step)
        zeros = common_zeros(rests, search.claim_at(doubled, step).ring, unknown) or []
        if len(zeros) != 1:
            raise ArithmeticError("nothing or several things will do")
        return zeros[0]

    return few_terms(search, value)


def few_terms(search: Search, value: ValueAt) -> Expr | None:
    """A number as a sum of a few monomials in the symbols, or as one over such a sum."""
    found = _sum(search, value)
    if found is None:
        below = _sum(search, lambda d, s: quotient(1, value(d, s)))
        found = None if below is None else 1 / collected(below)
    return found


def collected(value: Expr) -> Expr:
    """A sum as a product or as a power of a sum, where that is shorter."""
    made = factor(value) if isinstance(value, Add) else value
    top, bottom = made.as_numer_denom()
    if isinstance(top, Pow) and isinstance(top.base, Add):
        return expand(top.base / bottom ** (1 / top.exp)) ** top.exp
    plain = any(t.is_number for t in Add.make_args(value))  # 1 + a + b reads best as it is
    return made if not plain and made.count_ops() < value.count_ops() else value


def _sum(search: Search, value: ValueAt) -> Expr | None:
    sequence = [value(None, 0)]
    bases: list[int] | None = None
    for count in range(1, MOST_TERMS + 1):
        sequence += [value(None, j) for j in range(len(sequence), 2 * count + 1)]
        bases = bases_of(sequence, count)
        if bases is not None:
            break
    if bases is None:
        return None
    weights = weights_of(sequence, bases)
    powers: list[dict[Expr, Any]] = [{} for _ in bases]
    for symbol in search.symbols:
        doubled = weights_of([value(symbol, j) for j in range(len(bases))], bases)
        for own, before, after in zip(powers, weights, doubled, strict=True):
            own[symbol] = power_of_scale(quotient(after, before), 2, POWERS)
    if any(None in own.values() for own in powers):
        return None
    terms = [product(search, w, own) for w, own in zip(weights, powers, strict=True)]
    return None if None in terms else Add(*terms)


def _turned(node: Expr) -> list[Expr]:
    """A sum with one symbol's sign turned."""
    symbols = sorted(node.free_symbols - {omega}, key=str)
    return [m for s in symbols if (m := node.xreplace({s: -s})) != node]


def cousins(search: Search, node: Expr) -> list[Expr]:
    """A part of a claim with one species' symbols replaced by another's, gyration in either sense."""
    own = {s.name: s for s in search.claim.written_out(node).free_symbols - {omega}}
    known = {s.name: s for s in search.symbols if isinstance(s, Symbol)}
    endings = {n[-1] for n in own if len(n) > 1}
    new = {n[-1] for n in known if len(n) > 1}
    found = []
    for old, other in ((a, b) for a in endings for b in new if a != b):
        swap = {
            own[n]: known[n[:-1] + other] for n in own if n[-1] == old and n[:-1] + other in known
        }
        if swap:
            made = search.claim.written_out(node).xreplace(swap)
            found += [made, made.xreplace({omega: -omega})]
    return list(dict.fromkeys(found))
