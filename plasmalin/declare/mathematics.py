"""The reader behind `typed`: laws' grammar with implicit products, |...| and functions without parentheses.

    product    = unary { ["*" | "/"] unary }
    operand    = number | name | "|" sum "|" | ("(" | "[" | "{") sum (")" | "]" | "}")
               | function [ power ] ( "(" sum { "," sum } ")" | operand )

A tight fraction of two whole numbers with a blank behind it is a coefficient: 3/2 k^2 is (3/2) k^2.

Refused as ambiguous: any other factor beside a denominator, what is joined to a bare exponent, and whatever may
belong to the argument of a function without parentheses.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import NoReturn, cast

import sympy
from sympy import Expr

from .applied import OPENING, Bare, WordReader, shown
from .fields import FieldAtom
from .glyphs import CLOSING, OPERAND_KINDS, Mark
from .latex import typed_text
from .operators import Operator, rank_of
from .words import SIDE_BY_SIDE, SIGN_ADVICE, Names

BEFORE_A_TERM = ("+", "-", "*", "=", "(", "[", "{", "|(", ",", "<<", ">>", "->")


class TypedReader(WordReader):
    """The reader of laws with implicit products, glyphs, |...| and functions without parentheses."""

    def __init__(
        self, text: str, names: Names, unknown: Callable[[str], Expr] | None = None
    ) -> None:
        super().__init__(typed_text(text), names, unknown)

    def finish(self) -> None:
        token = self.peek()
        if token.text in SIGN_ADVICE:
            self.fail(SIGN_ADVICE[token.text])
        if token.text == "^" or token.kind == "raised":
            self.fail("a power of a power; write (a^b)^c or a^(b c)")
        super().finish()

    def checked(self) -> Expr:
        """A sum whose terms and factors have ranks that fit."""
        value = self.sum()
        rank_of(value)
        return value

    def product(self) -> Expr:
        factors = [self.unary()]
        while self.peek().text in ("*", "/") or self.follows():
            before, self.bare = self.bare, None
            token = self.peek()
            if token.text in ("*", "/"):
                self.take()
            else:
                self._no_number()
            first = self.peek()
            factor = self.unary()
            if before is not None:
                self._after_bare(before, first, factor)
            if token.text == "/":
                factor = self._below(factor, token, first)
            factors.append(factor)
        return self.multiplied(factors)

    def _no_number(self) -> None:
        """Refuse a number beside the factor before it: v 2 is a lost ^ as likely as a product."""
        last, token = self.tokens[self.place - 1], self.peek()
        if token.kind != "number":
            return
        if last.kind == "number":
            self.fail("two numbers side by side; write * for a product")
        if last.kind != "name":
            self.fail("a number after a factor; write * for a product or ^ for a power")
        base, number = (self.typed(t.position, t.end) for t in (last, token))
        readings = (f"{base}^{number}", f"{base}*{number}")
        self.ambiguous("a number after a factor", token.position, *readings)

    def _below(self, factor: Expr, token: Mark, first: Mark) -> Expr:
        """One over a factor; what stands beside it would be above or below the line."""
        below_end = self.end
        if self.follows() and not self._is_coefficient(token):
            while self.follows():
                self._no_number()
                self.unary()
            above = self._numerator(token)
            below, more = self.typed(first.position, below_end), self.typed(below_end, self.end)
            gap = "" if more.startswith(("(", "[", "{")) else " "
            readings = (f"{above}/({below}{gap}{more})", f"({above}/{below}){gap}{more}")
            self.ambiguous("what follows a division", below_end, *readings)
        return self.below(factor, token)

    def _is_coefficient(self, slash: Mark) -> bool:
        """Whether a tight fraction of two whole numbers ends here before a blank, as in 3/2 k^2: (3/2) k^2 in print."""
        at = self.tokens.index(slash)
        above, below, after = self.tokens[at - 1], self.tokens[at + 1], self.peek()
        whole = above.text.isdigit() and below.text.isdigit() and self.place == at + 2
        tight = above.end == slash.position and slash.end == below.position and after.spaced
        before = [t.text for t in self.tokens[max(at - 3, 0) : at - 1]]
        first = not before or (before[-1] in BEFORE_A_TERM and before[0] != "^")
        return whole and tight and first

    def _numerator(self, slash: Mark) -> str:
        """What stands above the line: back from the slash to where its term begins."""
        at, depth = self.tokens.index(slash) - 1, 0
        while at >= 0:
            text = self.tokens[at].text
            depth += (text in (")", "]", "}", ")|")) - (text in ("(", "[", "{", "|("))
            if depth < 0 or (depth == 0 and text in ("+", "-", "=", ",", "<<", ">>", "->")):
                break
            at -= 1
        return self.typed(self.tokens[at + 1].position, slash.position)

    def _after_bare(self, bare: Bare, first: Mark, factor: Expr) -> None:
        """What follows `sin a` or `∂_t n`: refused unless both readings agree."""
        if bare.linear and not factor.has(FieldAtom, Operator):
            return
        if not bare.linear and first.text in SIDE_BY_SIDE and self._find(first) is None:
            return
        self._two_arguments(bare, self.end)

    def _two_arguments(self, bare: Bare, end: int) -> NoReturn:
        head = self.typed(bare.start, bare.head_end)
        inner, more = self.typed(bare.head_end, bare.end), self.text[bare.end : end].rstrip()
        readings = (f"{head}({inner}{more})", f"{head}({inner}){more}")
        self.ambiguous(f"how far {head} reaches", bare.end, *readings)

    def power(self) -> Expr:
        self.bare = None
        start = self.peek().position
        base, bare = self.operand(), self.bare
        token = self.peek()
        if token.kind != "raised" and token.text != "^":
            return base
        self.take()
        first = self.peek()
        exponent = self._number(token) if token.kind == "raised" else self.unary()
        if bare is not None:
            self._two_arguments(bare, self.end)
        if token.text == "^":
            self._exponential(start, token, exponent)
            self._exponent_ends(start, token, first)
        self.bare = None
        return self.raised(base, exponent, token)

    def _exponential(self, start: int, token: Mark, exponent: Expr) -> None:
        """The charge e is seldom raised to an expression, which is what exp is."""
        if self.text[start : token.position].strip() != "e" or exponent.is_number:
            return
        power = self.typed(token.end, self.end)
        if power[0] not in OPENING:
            power = f"({power})"
        self.ambiguous("e to a power", start, f"exp{power}", f"(e)^{power}")

    def _exponent_ends(self, start: int, token: Mark, first: Mark) -> None:
        """Refuse a^2b, a^b(c) and a^1/2, whose exponents may end in two places."""
        last, after = self.tokens[self.place - 1], self.peek()
        signed = first.text in ("+", "-") and self.tokens[self.place - 2] is first
        if last is not first and not signed:
            return
        root = last.text == "1" and after.text == "/" and self._later().kind == "number"
        plain = last.kind == "number" and after.text in OPENING and after.text != "√"
        if not root and (not self.follows() or after.spaced or plain):
            return
        if root:
            self.take()
        self.unary()
        base, low = self.typed(start, token.end), self.typed(first.position, last.end)
        gap, more = "" if root else " ", self.typed(last.end, self.end)
        readings = (f"{base}({low}{gap}{more})", f"({base}{low}){gap}{more}")
        self.ambiguous("where the exponent ends", last.end, *readings)

    def _later(self) -> Mark:
        return self.tokens[min(self.place + 1, len(self.tokens) - 1)]

    def operand(self) -> Expr:
        token = self.take()
        if token.text in CLOSING:
            return self._grouped(CLOSING[token.text])
        if token.text == "|(":
            return cast(Expr, sympy.Abs(self._grouped(")|")))
        if token.text == "√":
            return self._applied(token, [sympy.sqrt])
        if token.kind == "number":
            return self._number(token)
        if token.kind == "leibniz":
            return self._leibniz(token)
        if token.kind in OPERAND_KINDS:
            return self._word(token)
        if token.text in SIGN_ADVICE:
            self.fail(SIGN_ADVICE[token.text], token.position)
        what = "the text ends" if token.kind == "end" else f"'{shown(token.text)}' stands"
        self.fail(f"{what} where a number, a name or '(' is needed", token.position)
