"""What the names in a claim stand for: symbols, the author's shorthands, constants of nature."""

from __future__ import annotations

import difflib
from collections.abc import Callable, Collection, Mapping
from typing import Any

from sympy import Expr, I, MatrixBase, Symbol, expand_trig, sympify
from sympy.core.function import AppliedUndef

from ..declare.constants import CODATA
from ..declare.latex import typed_text
from ..declare.typed import read_typed
from ..errors import DeclarationError, ReadError
from .roles import SPELLINGS, constant


class Names:
    """Names with their meanings; shorthands stay symbols and keep what they are defined as beside them.

    Parameters
    ----------
    symbols : mapping of str to Expr or callable
        What is known.
    fixed : collection of str
        Those that no shorthand may take.
    where : mapping
        Shorthands, as their author defines them: name or Symbol to text, number or SymPy expression.
    implied : mapping of str to Expr
        Shorthands that need no definition.

    Raises
    ------
    DeclarationError
        When a shorthand takes a fixed name, is defined through itself, or holds a name that nothing is known of.
    """

    def __init__(
        self,
        symbols: Mapping[str, Any],
        fixed: Collection[str],
        where: Mapping[Any, Any],
        implied: Mapping[str, Expr],
    ) -> None:
        given = {_name(key): value for key, value in where.items()}
        for name in given:
            if name in fixed:
                raise DeclarationError(
                    f"where: '{name}' is a symbol of the model already; choose another name for the shorthand"
                )
        own = {n: s for n, s in symbols.items() if isinstance(s, Symbol)}
        nature = {n: constant(own, n) for n in CODATA}
        nature |= {n: constant(own, means) for n, means in SPELLINGS.items()}
        shorthands = {n: Symbol(n) for n in (*implied, *given)}
        self.names: dict[str, Any] = {"i": I, "I": I, **nature, **symbols, **shorthands}
        self.definitions: dict[Symbol, Expr] = {
            shorthands[n]: e for n, e in implied.items() if n not in given
        }
        for name, value in given.items():
            self.definitions[shorthands[name]] = self.expression(value, f"where: {name}")
        self._refuse_circles()

    def expression(self, given: Any, place: str) -> Expr:
        """One expression from text, a number or SymPy."""
        if isinstance(given, str):
            return self.read(read_typed, given, place)
        try:
            made = sympify(given, strict=True)
        except (TypeError, ValueError):
            made = None
        if not isinstance(made, Expr) or made.atoms(MatrixBase) or isinstance(made, MatrixBase):
            raise DeclarationError(
                f"{place}: {given!r} is not an expression; give a text, a SymPy expression or a number"
            )
        return expand_trig(made.xreplace(self.meanings(made, place)))

    def read(
        self,
        reader: Callable[..., Any],
        text: str,
        place: str,
        more: Mapping[str, Any] | None = None,
    ) -> Any:
        """A text by one of the readers of typed mathematics, with more names than those of `where`."""
        try:
            return reader(text, {**self.names, **(more or {})}, self.unknown)
        except ReadError as error:
            error.message = f"{place}: {error.message}"
            raise

    def meanings(self, expr: Expr, place: str) -> dict[Any, Any]:
        """For every symbol of an expression, whatever its assumptions, what its name stands for."""
        found = {}
        for atom in expr.atoms(Symbol, AppliedUndef):
            name = getattr(atom, "name", str(atom))
            if name not in self.names:
                self.unknown(name, place)
            found[atom] = self.names[name]
        return found

    def unknown(self, name: str, place: str = "claim") -> Expr:
        """Refuse a name that nothing is known of."""
        near = difflib.get_close_matches(name, self.names, 3)
        hint = f" (did you mean {' or '.join(near)}?)" if near else ""
        raise DeclarationError(
            f"{place}: '{name}' is not a symbol of the model{hint}; "
            f"say what it stands for, where={{'{name}': \"...\"}}"
        )

    def used(self, expr: Expr) -> dict[Symbol, Expr]:
        """The definitions that an expression needs, in the order given."""
        needed: set[Symbol] = set()
        stack = [expr]
        while stack:
            new = stack.pop().free_symbols & set(self.definitions) - needed
            needed |= new
            stack += [self.definitions[s] for s in new]
        return {s: d for s, d in self.definitions.items() if s in needed}

    def _refuse_circles(self) -> None:
        for symbol, meaning in self.definitions.items():
            if symbol in meaning.free_symbols or symbol in self.used(meaning):
                raise DeclarationError(
                    f"where: '{symbol}' is defined through itself; define it in symbols of the model"
                )


def _name(key: Any) -> str:
    return key.name if isinstance(key, Symbol) else typed_text(str(key))
