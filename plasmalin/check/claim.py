"""A claim: what an author says the dispersion relation is, in the author's own symbols."""

from __future__ import annotations

import re
from collections.abc import Collection, Mapping
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
    Pow,
    Symbol,
    sqrt,
    sympify,
)

from ..declare.latex import typed_text
from ..declare.operators import omega
from ..declare.typed import latex_reading, read_claim, read_matrix
from ..errors import DeclarationError
from .names import Names

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix

PART_NAMES = {"gamma": "gamma", "Imomega": "gamma", "omega_r": "omega_r", "Reomega": "omega_r"}
"""How Im ω and Re ω are written where they stand alone."""
REAL_PART = Symbol("omega_r")


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
        return expr.xreplace(self._meanings)

    @cached_property
    def _meanings(self) -> dict[Symbol, Expr]:
        """Every shorthand written out, each once; within itself, as a tried repair may put it, it stays."""
        found: dict[Symbol, Expr] = {}

        def meaning(symbol: Symbol) -> Expr:
            if symbol not in found:
                own = found[symbol] = self.definitions[symbol]
                used = own.free_symbols & set(self.definitions)
                found[symbol] = own.xreplace({s: meaning(s) for s in used})
            return found[symbol]

        for symbol in self.definitions:
            meaning(symbol)
        return found

    @property
    def used(self) -> set[Symbol]:
        """The shorthands that the sides hold, by themselves or through others."""
        found: set[Symbol] = set()
        new = (self.left - self.right).free_symbols & set(self.definitions)
        while new:
            found |= new
            new = {s for n in new for s in self.definitions[n].free_symbols}
            new = new & set(self.definitions) - found
        return found

    def mapped(self, change: Any) -> Claim:
        """The claim with a function applied to both sides and to every definition."""
        made = {s: change(d) for s, d in self.definitions.items()}
        return Claim(change(self.left), change(self.right), made, self.of_field)

    @property
    def solved(self) -> bool:
        """Whether it gives ω itself, alone on one side."""
        return self.solved_for({omega})

    def solved_for(self, symbols: Collection[Expr]) -> bool:
        """Whether it gives one of some symbols, alone on one side."""
        sides = (self.left, self.right), (self.right, self.left)
        return any(a in symbols and not self.written_out(b).has(a) for a, b in sides)

    @property
    def reading(self) -> str:
        """The claim as it was understood, in LaTeX, with its definitions."""
        parts = [latex_reading(self.left, self.right)]
        parts += [latex_reading(s, d) for s, d in self.definitions.items()]
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
    book = WaveNames(wave, where)
    left, right = book.sides(claim)
    made = Claim(left, right, book.used(left - right), book.field)
    if made.residual == 0:
        raise DeclarationError("claim: both sides are the same, so it says nothing of a wave")
    if not made.residual.free_symbols & {omega, *wave.wave_symbols}:
        raise DeclarationError(
            "claim: it holds neither omega nor a wave number, so it says nothing of a wave; "
            "give a relation such as omega^2 = ..."
        )
    return made


def make_part(names: WaveNames, claim: Any) -> Claim | None:
    """A claim that gives Im ω or Re ω alone, or squared, "gamma = ..." or "Re(omega)^2 = ..."; None for any other.

    The names gamma and omega_r mean these only where neither the model nor `where` has them.
    """
    if isinstance(claim, Eq) and isinstance(claim.lhs, Symbol | Pow):
        left, value = str(claim.lhs), claim.rhs
    elif isinstance(claim, str) and claim.count("=") == 1:
        left, value = (part.strip() for part in typed_text(claim).split("="))
    else:
        return None
    plain = re.sub(r"[\s()*]", "", left.replace("**", "^"))
    for glyph, name in (("ω", "omega"), ("γ", "gamma"), ("ᵣ", "_r"), ("{r}", "r")):
        plain = plain.replace(glyph, name)
    plain, squared = re.sub(r"(\^2|²)$", "", plain), plain.endswith(("^2", "²"))
    if plain not in PART_NAMES or plain in names.names:
        return None
    right = names.expression(value, "claim")
    right = sqrt(right) if squared else right
    return Claim(Symbol(PART_NAMES[plain]), right, names.used(right))


class WaveNames(Names):
    """The names of a claim on a wave."""

    def __init__(self, wave: WaveMatrix, where: Mapping[Any, Any]) -> None:
        self.wave = wave
        self.field: Symbol | None = None
        waves = {s.name: s for c in wave.k for s in c.free_symbols}
        symbols = {**wave.linear.symbols, **waves, "omega": omega}
        super().__init__(symbols, symbols, where, _implied(wave, symbols))

    def sides(self, claim: Any) -> tuple[Expr, Expr]:
        """The two sides of a claim; a matrix is its determinant, an expression is set equal to zero."""
        if isinstance(claim, str):
            if "[[" in claim.replace(" ", ""):
                return _determinant(self.read(read_matrix, claim, "claim")), sympify(0)
            both = self.read(read_claim, claim, "claim", self._of_fields())
            return self._without_field(*both)
        if isinstance(claim, MatrixBase | list | tuple):
            rows = claim.tolist() if isinstance(claim, MatrixBase) else claim
            made = [[self.expression(x, "claim") for x in row] for row in rows]
            return _determinant(made), sympify(0)
        if isinstance(claim, Eq):
            return self.expression(claim.lhs, "claim"), self.expression(claim.rhs, "claim")
        return self.expression(claim, "claim"), sympify(0)

    def _of_fields(self) -> dict[str, Any]:
        """Amplitudes and derivatives; a shorthand of the author goes before an amplitude of its name."""
        known = derivatives(self.wave).items()
        return {n: meaning for n, meaning in known if Symbol(n) not in self.definitions}

    def _without_field(self, left: Expr, right: Expr) -> tuple[Expr, Expr]:
        """A wave equation for one field is divided by that field's amplitude."""
        fields = {s for s in (left - right).free_symbols if s in set(self.wave.amplitudes)}
        fields -= set(self.names.values())
        if not fields:
            return left, right
        if len(fields) > 1:
            raise DeclarationError(
                f"claim: a wave equation is for one field; it holds {', '.join(sorted(map(str, fields)))}; "
                "say in where=... what a name stands for that is meant as no field"
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


def _determinant(rows: list[list[Expr]]) -> Expr:
    if {len(r) for r in rows} != {len(rows)} or len(rows) > 4:
        raise DeclarationError("claim: a matrix must be square, with at most four rows")
    found: Basic = Matrix(rows).det(method="berkowitz")
    return found
