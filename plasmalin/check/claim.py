"""A claim: what an author says the dispersion relation is, in the author's own symbols."""

from __future__ import annotations

import difflib
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING, Any

from sympy import (
    Add,
    Basic,
    Eq,
    Expr,
    I,
    Matrix,
    MatrixBase,
    Symbol,
    expand_trig,
    latex,
    sqrt,
    sympify,
)
from sympy.core.function import AppliedUndef

from ..declare.constants import CODATA
from ..declare.operators import omega
from ..declare.typed import read_claim, read_matrix, read_typed
from ..errors import DeclarationError, ReadError
from .roles import SPELLINGS, constant

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix

DEEPEST = 30


@dataclass(frozen=True)
class Claim:
    """Two sides of an equation, with the shorthands that they use.

    Attributes
    ----------
    left, right : Expr
        As written; shorthands are symbols.
    definitions : mapping of Symbol to Expr
        What each shorthand that is used stands for; may hold other shorthands.
    of_field : Symbol or None
        For a wave equation the amplitude that it is for; it was divided by it.
    """

    left: Expr
    right: Expr
    definitions: Mapping[Symbol, Expr]
    of_field: Symbol | None = None

    @cached_property
    def residual(self) -> Expr:
        """Left minus right, every shorthand written out."""
        return self.written_out(self.left - self.right)

    def written_out(self, expr: Expr) -> Expr:
        """An expression with the shorthands replaced by what they stand for."""
        for _ in range(DEEPEST):
            if not expr.free_symbols & set(self.definitions):
                break
            expr = expr.xreplace(dict(self.definitions))
        return expr

    def mapped(self, change: Any) -> Claim:
        """The claim with a function applied to both sides and to every definition."""
        made = {s: change(d) for s, d in self.definitions.items()}
        return Claim(change(self.left), change(self.right), made, self.of_field)

    @property
    def solved(self) -> bool:
        """Whether it gives ω itself, alone on one side."""
        sides = (self.left, self.right), (self.right, self.left)
        return any(a == omega and not self.written_out(b).has(omega) for a, b in sides)

    @property
    def reading(self) -> str:
        """The claim as it was understood, in LaTeX, with its definitions."""
        parts = [f"{latex(self.left)} = {latex(self.right)}"]
        parts += [f"{latex(s)} = {latex(d)}" for s, d in self.definitions.items()]
        return r",\quad ".join(parts)


def make_claim(wave: WaveMatrix, claim: Any, where: Mapping[Any, Any]) -> Claim:
    """A claim in text or SymPy, its names looked up in the model, the wave and `where`.

    Raises
    ------
    ReadError
        When a text cannot be read, is ambiguous, or holds an unknown name.
    DeclarationError
        When `where` redefines what the model has, or defines in a circle; when the claim holds a symbol that nothing
        is known of, or neither ω nor a wave number.
    """
    book = Names(wave, where)
    left, right = book.sides(claim)
    made = Claim(left, right, book.used(left - right), book.field)
    if not made.residual.free_symbols & {omega, *wave.wave_symbols}:
        raise DeclarationError(
            "claim: it holds neither omega nor a wave number, so it says nothing of a wave; "
            "give a relation such as omega^2 = ..."
        )
    return made


class Names:
    """What the names of a claim mean: the model's symbols, the wave's, shorthands and constants of nature."""

    def __init__(self, wave: WaveMatrix, where: Mapping[Any, Any]) -> None:
        self.wave = wave
        self.field: Symbol | None = None
        self.symbols: dict[str, Any] = {
            **{n: constant(wave.linear.symbols, n) for n in CODATA},
            **{n: constant(wave.linear.symbols, m) for n, m in SPELLINGS.items()},
            **wave.linear.symbols,
            **{s.name: s for c in wave.k for s in c.free_symbols},
            "omega": omega,
        }
        self.implied = _implied(wave, self.symbols)
        self.given = {_name(key): value for key, value in where.items()}
        for name in self.given:
            if name in wave.linear.symbols or name == "omega" or name in _wave_names(wave):
                raise DeclarationError(
                    f"where: '{name}' is a symbol of the model already; choose another name for the shorthand"
                )
        shorthands = {n: Symbol(n) for n in (*self.implied, *self.given)}
        self.names = {**self.symbols, **shorthands, "i": I, "I": self.symbols.get("I", I)}
        self.definitions: dict[Symbol, Expr] = {
            shorthands[n]: e for n, e in self.implied.items() if n not in self.given
        }
        for name, value in self.given.items():
            self.definitions[shorthands[name]] = self.expression(value, f"where: {name}")
        self._refuse_circles()

    def expression(self, given: Any, place: str) -> Expr:
        """One expression from text, a number or SymPy."""
        if isinstance(given, str):
            try:
                return read_typed(given, self.names, self._unknown)
            except ReadError as error:
                error.message = f"{place}: {error.message}"
                raise
        try:
            made = sympify(given, strict=True)
        except (TypeError, ValueError):
            made = None
        if not isinstance(made, Expr) or made.has(MatrixBase):
            raise DeclarationError(
                f"{place}: {given!r} is not an expression; give a text, a SymPy expression or a number"
            )
        return self._own(made, place)

    def sides(self, claim: Any) -> tuple[Expr, Expr]:
        """The two sides of a claim; a matrix is its determinant, an expression is set equal to zero."""
        if isinstance(claim, str):
            if "[[" in claim.replace(" ", ""):
                return _determinant(read_matrix(claim, self.names, self._unknown)), sympify(0)
            names = {**self.names, **derivatives(self.wave)}
            return self._without_field(*read_claim(claim, names, self._unknown))
        if isinstance(claim, MatrixBase | list | tuple):
            rows = claim.tolist() if isinstance(claim, MatrixBase) else claim
            made = [[self.expression(x, "claim") for x in row] for row in rows]
            return _determinant(made), sympify(0)
        if isinstance(claim, Eq):
            return self.expression(claim.lhs, "claim"), self.expression(claim.rhs, "claim")
        return self.expression(claim, "claim"), sympify(0)

    def used(self, expr: Expr) -> dict[Symbol, Expr]:
        """The definitions that an expression needs, in the order given."""
        needed: set[Symbol] = set()
        stack = [expr]
        while stack:
            new = stack.pop().free_symbols & set(self.definitions) - needed
            needed |= new
            stack += [self.definitions[s] for s in new]
        return {s: d for s, d in self.definitions.items() if s in needed}

    def _own(self, expr: Expr, place: str) -> Expr:
        replaced: dict[Any, Any] = {}
        for atom in expr.free_symbols | expr.atoms(AppliedUndef):
            name = getattr(atom, "name", str(atom))
            if name not in self.names:
                self._unknown(name, place)
            replaced[atom] = self.names[name]
        return expand_trig(expr.xreplace(replaced))

    def _unknown(self, name: str, place: str = "claim") -> Expr:
        near = difflib.get_close_matches(name, self.names, 3)
        hint = f" (did you mean {' or '.join(near)}?)" if near else ""
        raise DeclarationError(
            f"{place}: '{name}' is not a symbol of the model{hint}; say what it stands for, where={{'{name}': \"...\"}}"
        )

    def _refuse_circles(self) -> None:
        for symbol, meaning in self.definitions.items():
            expr = meaning
            for _ in range(DEEPEST):
                expr = expr.xreplace(self.definitions)
            if expr.free_symbols & set(self.definitions):
                raise DeclarationError(
                    f"where: '{symbol}' is defined through itself; define it in symbols of the model"
                )

    def _without_field(self, left: Expr, right: Expr) -> tuple[Expr, Expr]:
        """A wave equation for one field is divided by that field's amplitude."""
        fields = {s for s in (left - right).free_symbols if s in set(self.wave.amplitudes)}
        fields -= set(self.names.values())
        if not fields:
            return left, right
        if len(fields) > 1:
            raise DeclarationError(
                f"claim: a wave equation is for one field; it holds {', '.join(sorted(map(str, fields)))}"
            )
        (field,) = fields
        parts = [(e.diff(field), e.xreplace({field: sympify(0)})) for e in (left, right)]
        if any(rest != 0 or slope.has(field) for slope, rest in parts):
            raise DeclarationError(
                f"claim: every term of a wave equation holds its field once; {field} stands otherwise here"
            )
        self.field = field
        return parts[0][0], parts[1][0]


def derivatives(wave: WaveMatrix) -> dict[str, Any]:
    """For claimed wave equations: amplitudes by name, and what derivatives do to a plane wave."""
    square = Add(*(c**2 for c in wave.k))
    along = {f"partial_{a}": _times(I * c) for a, c in zip(wave.linear.axes, wave.k, strict=True)}
    amplitudes = {s.name: s for s in wave.amplitudes if s.name not in wave.linear.symbols}
    if len(wave.linear.axes) == 1:  # a vector has one component, and needs no index
        amplitudes |= {c.field.name: c.symbol for c in wave.columns}
    return {
        **amplitudes,
        **along,
        "partial_t": _times(-I * omega),
        "laplacian": _times(-square),
    }


def _times(factor: Expr) -> Any:
    return lambda f: factor * f


def _implied(wave: WaveMatrix, symbols: Mapping[str, Any]) -> dict[str, Expr]:
    """Usual names of the wave vector that the wave itself does not use: k = |k| and its components."""
    found = {
        f"k_{a}": c
        for a, c in zip(wave.linear.axes, wave.k, strict=True)
        if f"k_{a}" not in symbols
    }
    square = Add(*(c**2 for c in wave.k))
    single = [c for c in wave.k if c != 0]
    size = single[0] if len(single) == 1 else sqrt(square)
    found |= {n: size for n in ("k", "k_abs") if n not in symbols}
    return found


def _wave_names(wave: WaveMatrix) -> set[str]:
    return {s.name for c in wave.k for s in c.free_symbols}


def _name(key: Any) -> str:
    return key.name if isinstance(key, Symbol) else str(key)


def _determinant(rows: list[list[Expr]]) -> Expr:
    if len({len(r) for r in rows} | {len(rows)}) != 1 or len(rows) > 4:
        raise DeclarationError("claim: a matrix must be square, with at most four rows")
    found: Basic = Matrix(rows).det(method="berkowitz")
    return found
