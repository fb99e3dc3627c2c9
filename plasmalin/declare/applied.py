"""Names, functions and derivatives in typed mathematics: looked up, applied, or refused with what to write."""

from __future__ import annotations

import re
import unicodedata
from dataclasses import dataclass, replace
from typing import Any, NoReturn, cast

from sympy import Expr, Integer

from ..errors import AmbiguousText, PlasmalinError
from . import words
from .glyphs import CLOSING, LEIBNIZ, OPERAND_KINDS, ORDERED, Mark, marks
from .reader import Reader, Token
from .words import ADVICE, TYPED_FUNCTIONS, Step

ORDERS = tuple("12345678")
OPENING = ("(", "[", "{", "|(", "√")


@dataclass(frozen=True)
class Bare:
    """A function or derivative that was applied without parentheses, and where that is written."""

    linear: bool
    start: int
    head_end: int
    end: int


def _whole(order: str) -> int:
    """The number in ^2 or ², 1 where there is none."""
    return int(unicodedata.normalize("NFKC", order).strip("^") or 1)


def shown(sign: str) -> str:
    """A sign as it was typed: bars were told apart."""
    return "|" if "|" in sign else sign


class WordReader(Reader):
    """The part of the typed reader that begins with a word."""

    tokens: list[Mark]  # type: ignore[assignment]

    def _tokens(self) -> list[Mark]:  # type: ignore[override]
        self.bare: Bare | None = None
        return marks(self.text, self.names)

    def peek(self) -> Mark:
        return self.tokens[self.place]

    def take(self) -> Mark:
        return cast(Mark, super().take())

    @property
    def end(self) -> int:
        """Where the last token that was taken ends."""
        return self.tokens[self.place - 1].end if self.place else 0

    def ambiguous(self, what: str, position: int, *readings: str) -> NoReturn:
        raise AmbiguousText(what, self.text, position, readings)

    def typed(self, start: int, end: int) -> str:
        return self.text[start:end].strip()

    def follows(self) -> bool:
        """Whether an operand begins here, so that a product is implied."""
        at = self.peek()
        return at.text in OPENING or at.kind in OPERAND_KINDS

    def _grouped(self, closing: str) -> Expr:
        value = self.sum()
        self.bare = None
        if self.peek().text != closing:
            self.fail(f"'{shown(closing)}' is needed here")
        self.take()
        return value

    def _number(self, token: Token) -> Expr:
        whole, letter, rest = re.split(r"([eE])", token.text + "e", maxsplit=1)
        name = letter + rest.removesuffix("e")
        if name in self.names and name != "e":
            readings = (f"{whole}*10^{name[1:]}", f"{whole}*{name}")
            self.ambiguous(f"{token.text} with the name {name}", token.position, *readings)
        return super()._number(token)

    def _word(self, token: Mark) -> Expr:
        found = self._find(token)
        if isinstance(found, Expr):
            if words.plain(token.text) == "omega":
                self._not_a_function(token)
            return found
        steps = [found] if callable(found) else words.derivatives(token.text, self.names)
        if steps:
            return self._applied(token, steps)
        if token.text in TYPED_FUNCTIONS:
            return self._applied(token, [TYPED_FUNCTIONS[token.text]])
        return self._unfound(token)

    def _not_a_function(self, token: Mark) -> None:
        """Refuse ω(k), which says that ω depends on k as likely as it is a product."""
        bracket, name, closing = (self.tokens[self.place :] + [token] * 3)[:3]
        if (
            bracket.text == "("
            and not bracket.spaced
            and name.kind == "name"
            and closing.text == ")"
        ):
            readings = (f"{token.text}*{name.text}", token.text)
            typed = self.typed(token.position, closing.end)
            self.ambiguous(f"what {typed} says", token.position, *readings)

    def _find(self, token: Token) -> Any:
        """What a name stands for, by any of its spellings; None where nothing does."""
        keys = words.declared(token.text, self.names)
        if len(keys) > 1:
            self.ambiguous(f"the name {token.text}", token.position, *keys[:2])
        return self.names[keys[0]] if keys else words.number_named(token.text)

    def _applied(self, token: Mark, steps: list[Step]) -> Expr:
        """A function or operator, its power, and its argument with or without parentheses."""
        order, linear = self._order(token), words.is_linear(token.text)
        head_end = self.end
        arguments, enclosed = self._given(token)
        self.bare = None if enclosed else Bare(linear, token.position, head_end, self.end)
        if linear:
            return self._repeated(token, steps * order, arguments)
        value = self._call(token, steps[0], arguments)
        return value if order == 1 else self.raised(value, Integer(order), token)

    def _given(self, token: Mark) -> tuple[list[Expr], bool]:
        """The arguments, and whether they stand in brackets."""
        after = self.peek()
        if after.text == "(":
            return self._arguments(), True
        if after.text in CLOSING:
            self.take()
            return [self._grouped(CLOSING[after.text])], True
        if not self.follows():
            name = self.typed(token.position, self.end)
            self.fail(f"{name} needs its argument; write {name}(...)", after.position)
        self.deeper()
        argument = self.operand()
        self.depth -= 1
        return [argument], False

    def _order(self, token: Mark) -> int:
        at = self.peek()
        if at.kind == "raised":
            power = self.take().text
        elif at.text == "^":
            self.take()
            sign = self.take().text if self.peek().text in ("-", "+") else ""
            power = sign + self.take().text
        else:
            return 1
        if power in ORDERS:
            return int(power)
        name = token.text
        if power == "-1" and name in words.INVERTIBLE:
            readings = (f"1/{name}(...)", f"arc{name}(...)")
            self.ambiguous(f"{name}^-1", at.position, *readings)
        message = f"only a power from 1 to {ORDERS[-1]} may stand between {name} and its argument"
        self.fail(message, at.position)

    def _repeated(self, token: Mark, steps: list[Step], arguments: list[Expr]) -> Expr:
        value = self._call(token, steps[-1], arguments)
        for step in steps[-2::-1]:
            value = self._call(token, step, [value])
        return value

    def _call(self, token: Mark, function: Step, arguments: list[Expr]) -> Expr:
        self.bounded(function, arguments, token)
        try:
            return self.finite(function(*arguments), token)
        except PlasmalinError:
            raise
        except TypeError:
            self.fail(f"{token.text}() does not take {len(arguments)} arguments", token.position)

    def _leibniz(self, token: Mark) -> Expr:
        """∂²n/∂t², or ∂/∂t before what it acts on."""
        match = cast(re.Match[str], LEIBNIZ.fullmatch(self.text, token.position, token.end))
        letters = "".join(v * _whole(order) for v, order in ORDERED.findall(match["by"]))
        if len(letters) != _whole(match["order"]):
            self.fail("the orders above and below the line differ", token.position)
        token = replace(token, text=f"partial_{letters}")
        steps = words.derivatives(token.text, self.names)
        if not steps:
            self.fail(f"∂/∂{letters[0]} is not known here", token.position)
        if match["what"] is None:
            return self._applied(token, steps)
        named = replace(token, kind="name", text=match["what"], position=match.start("what"))
        return self._repeated(token, steps, [self._word(replace(named, end=match.end("what")))])

    def _unfound(self, token: Mark) -> Expr:
        """A name that nothing is known of: made by `unknown`, or refused with what to write."""
        typed, name = self.typed(token.position, token.end), words.plain(token.text)
        if token.kind != "name":
            self.fail(f"{typed} is not known here", token.position)
        pieces, called = words.split(name, self.names), self.peek().text == "("
        if name in ADVICE:
            self.fail(f"'{typed}' is not declared; {ADVICE[name]}", token.position)
        if self.unknown is not None and not pieces and not called:
            return self.unknown(name)
        hint = words.suggestion(name, self.names, pieces)
        hint += f" Write {typed}*(...) for a product." if called else ""
        self.fail(f"'{typed}' is not declared{hint} Define it in `where`.", token.position)
