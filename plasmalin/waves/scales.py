"""A relation in chosen scales of time and length, its parameters collected into dimensionless groups.

Every factor of a relation is homogeneous: its terms have one dimension. So each term is one and the same monomial times
a dimensionless monomial, and the latter is a product of powers of groups. Nothing is approximated, and substituting the
groups back gives the relation times a monomial.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from sympy import Expr, Poly, Symbol, latex

from ..declare.dimensions import Dimensions
from ..declare.notation import name_text, paper
from ..declare.operators import omega
from ..declare.reader import read_expression
from ..declare.units import Dimension, dimension, dimension_text
from ..errors import DeclarationError, UnitError
from ..exact.polynomial import ExactPolynomial, polynomial
from .groups import chosen_groups
from .monomials import under_one_root
from .splitting import OMEGA, Splitter, SymbolDimensions

if TYPE_CHECKING:
    from .relation import Relation


@dataclass(frozen=True, eq=False)
class NormalizedRelation:
    """A dispersion relation in chosen scales; exactly the original one.

    Attributes
    ----------
    relation : Relation
        In omegahat = omega * time, khat = k * length and the groups.
    time, length : Expr
        The scales, in the model's parameters.
    waves : dict of Symbol to Expr
        What omegahat, khat ... stand for.
    groups : dict of Symbol to Expr
        What every other symbol stands for: dimensionless groups, and dimensionless parameters as themselves.
    meanings : dict of Symbol to str
        What a group is called, "omega_pe/Omega_e", where it has such a name.
    """

    relation: Relation
    time: Expr
    length: Expr
    waves: Mapping[Symbol, Expr]
    groups: Mapping[Symbol, Expr]
    meanings: Mapping[Symbol, str]

    @property
    def expr(self) -> Expr:
        """The whole relation as an expression in the normalized symbols."""
        return self.relation.as_expr()

    @property
    def polynomial(self) -> Poly:
        """The whole relation as a SymPy polynomial in omegahat."""
        return self.relation.polynomial

    def restore(self) -> Expr:
        """The expression with scales and groups put back: the original relation times what holds no wave symbol."""
        back: dict[Any, Any] = {**self.waves, **self.groups}
        return self.expr.subs(back, simultaneous=True)

    def _definitions(self) -> list[tuple[Symbol, Expr]]:
        shown = [(s, e) for s, e in self.groups.items() if s != e]
        return [(s, under_one_root(e)) for s, e in (*self.waves.items(), *shown)]

    def __str__(self) -> str:
        lines = [str(self.relation), "with"]
        for symbol, expr in self._definitions():
            called = self.meanings.get(symbol)
            note = (
                f"  ({'/'.join(name_text(part) for part in called.split('/'))})" if called else ""
            )
            lines.append(f"  {paper(symbol)} = {paper(expr)}{note}")
        return "\n".join(lines)

    def __repr__(self) -> str:
        names = ", ".join(s.name for s in self.groups)
        return f"<NormalizedRelation: degree {self.relation.degree}, groups {names or 'none'}>"

    def latex(self) -> str:
        """The relation, then what its symbols stand for."""
        parts = [f"{latex(s)} = {latex(e)}" for s, e in self._definitions()]
        return rf"{self.relation.latex()} \qquad {', '.join(parts)}"

    def _repr_latex_(self) -> str | None:
        from .relation import LONGEST_LATEX

        if len(self.relation.exact) > LONGEST_LATEX // 8:
            return None
        text = self.latex()
        return f"$\\displaystyle {text}$" if len(text) < LONGEST_LATEX else None


def normalized(
    relation: Relation,
    symbols: Mapping[str, Symbol],
    dimensions: Dimensions,
    time: str,
    length: str,
    where: Mapping[str, str],
) -> NormalizedRelation:
    """A relation in chosen scales; see `Relation.normalise`."""
    known = SymbolDimensions(dimensions.checked(), set(symbols.values()))
    names = _names(symbols, where)
    reference = known.reference(length, names)
    scale = {
        "time": _scale("time", time, {**names, **reference}, known, dimension(0, 0, 1)),
        "length": _scale("length", length, {**names, **reference}, known, dimension(1)),
    }
    work = Splitter(known, *scale.values())
    factors = [(work.factor(f.polynomial), f.multiplicity) for f in relation.factors]
    taken = {s.name for expr, _ in factors for s in expr.free_symbols} | {"omega"}
    taken |= {s.name for s in symbols.values()}
    kinds = {p: d for p, d in known.found.items() if p != omega and p not in work.hats}
    groups = chosen_groups(work.places, kinds, work.scales, taken)
    images = work.images(groups)
    made = _multiplied([(polynomial(e.xreplace(images), OMEGA), m) for e, m in factors])
    held = {s for g in made.generators for s in g.free_symbols}
    listed = {g.symbol: g.expr for g in groups}
    listed |= {s: s for s in sorted(held - set(listed), key=str) if s in known.parameters}
    waves = {OMEGA: omega * scale["time"]}
    waves |= {hat: k * scale["length"] for k, hat in work.hats.items()}
    meanings = {g.symbol: g.meaning for g in groups if g.meaning}
    from .relation import Relation as Made

    inner = Made(made.primitive()[1], {s.name: s for s in held})
    return NormalizedRelation(inner, scale["time"], scale["length"], waves, listed, meanings)


def _multiplied(factors: list[tuple[ExactPolynomial, int]]) -> ExactPolynomial:
    whole = [p for p, m in factors for _ in range(m)]
    made = whole[0]
    for p in whole[1:]:
        made = made * p
    return made


# The scales --------------------------------------------------------------------------------------


def _names(symbols: Mapping[str, Symbol], where: Mapping[str, str]) -> dict[str, Any]:
    """The model's parameters, and the names that `where` defines, each by those before."""
    names: dict[str, Any] = dict(symbols)
    for name, text in where.items():
        if not isinstance(text, str):
            raise DeclarationError(f"where: give the definition of '{name}' as text, not {text!r}")
        names[name] = read_expression(text, names)
    return names


def _scale(
    what: str, text: str, names: Mapping[str, Any], known: SymbolDimensions, needed: Dimension
) -> Expr:
    if not isinstance(text, str):
        raise DeclarationError(f"{what}={text!r}: give the scale as text in the model's names")
    expr = read_expression(text, names)
    if expr == 0:
        raise UnitError(f"{what}={text!r} is zero; give a {what}")
    found = known.of(expr)
    if found != needed:
        raise UnitError(
            f"{what}={text!r} is {paper(expr)} in {dimension_text(found)}, not a {what}; "
            f"give an expression in {dimension_text(needed)}"
        )
    return expr
