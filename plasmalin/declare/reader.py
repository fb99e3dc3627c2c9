"""Laws as text: a small grammar of our own. Nothing is ever evaluated as code.

    law        = sum "=" sum
    sum        = ["+" | "-"] product { ("+" | "-") product }
    product    = unary { ("*" | "/") unary }
    unary      = ("+" | "-") unary | power
    power      = operand [ ("^" | "**") unary ]
    operand    = number | name | name "(" sum { "," sum } ")" | "(" sum ")"

Names are looked up among what was declared, so E, N, S, I, beta, gamma and lambda are ordinary names.
Length, nesting and numeric powers are bounded, so that hostile text fails at once.
"""

from __future__ import annotations

import difflib
import re
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any, NoReturn, cast

import sympy
from sympy import Expr, Integer, Rational, S

from ..errors import RankError, ReadError
from .operators import OPERATORS

LONGEST = 20_000
DEEPEST = 60
LARGEST_POWER = 64
LARGEST_EXPONENT = 400

FUNCTIONS: dict[str, Callable[[Any], Any]] = {
    name: getattr(sympy, name)
    for name in ("sqrt", "exp", "log", "sin", "cos", "tan", "sinh", "cosh", "tanh", "atan")
}
NAMED_NUMBERS = {"pi": S.Pi, "i": S.ImaginaryUnit}

TOKEN = re.compile(
    r"(?P<space>\s+)"
    r"|(?P<number>(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?)"
    r"|(?P<name>[^\W\d]\w*)"
    r"|(?P<sign>\*\*|[-+*/^(),=])"
)


@dataclass(frozen=True)
class Token:
    kind: str
    text: str
    position: int


def read_law(text: str, names: Mapping[str, Any]) -> tuple[Expr, Expr]:
    """The two sides of a law, "lhs = rhs"; without "=" the right side is 0.

    Raises
    ------
    ReadError
        When the text cannot be read, with the place.
    RankError
        When ranks do not fit.
    """
    reader = Reader(text, names, None)
    left = reader.sum()
    right: Expr = S.Zero
    if reader.peek().text == "=":
        reader.take()
        right = reader.sum()
    reader.finish()
    return left, right


def read_expression(
    text: str, names: Mapping[str, Any], unknown: Callable[[str], Expr] | None = None
) -> Expr:
    """An expression; a name that is not found is made by `unknown`, or is an error.

    Raises
    ------
    ReadError
        When the text cannot be read, with the place.
    """
    reader = Reader(text, names, unknown)
    found = reader.sum()
    reader.finish()
    return found


class Reader:
    """One pass over the tokens of a text, by recursive descent."""

    def __init__(
        self, text: str, names: Mapping[str, Any], unknown: Callable[[str], Expr] | None
    ) -> None:
        self.text, self.names, self.unknown = text, names, unknown
        if len(text) > LONGEST:
            raise ReadError(f"the text has {len(text)} characters; at most {LONGEST} are read")
        self.tokens = self._tokens()
        self.place = self.depth = 0

    def _tokens(self) -> list[Token]:
        found, position = [], 0
        while position < len(self.text):
            match = TOKEN.match(self.text, position)
            if match is None:
                self.fail(f"the character {self.text[position]!r} has no meaning here", position)
            if match.lastgroup != "space":
                found.append(Token(str(match.lastgroup), match.group(), position))
            position = match.end()
        return [*found, Token("end", "", len(self.text))]

    def fail(self, message: str, position: int | None = None) -> NoReturn:
        raise ReadError(message, self.text, self.peek().position if position is None else position)

    def peek(self) -> Token:
        return self.tokens[self.place]

    def take(self) -> Token:
        token = self.tokens[self.place]
        self.place += 1
        return token

    def expect(self, sign: str) -> None:
        if self.peek().text != sign:
            self.fail(f"'{sign}' is needed here")
        self.take()

    def finish(self) -> None:
        token = self.peek()
        if token.text == "=":
            self.fail("a second '=' is one too many")
        if token.kind in ("name", "number") or token.text == "(":
            self.fail("a sign is missing here; write * for a product")
        if token.kind != "end":
            self.fail(f"'{token.text}' is not expected here")

    def sum(self) -> Expr:
        self.depth += 1
        if self.depth > DEEPEST:
            self.fail(f"more than {DEEPEST} levels of nesting")
        total = self.product()
        while self.peek().text in ("+", "-"):
            sign = self.take().text
            term = self.product()
            total = total + term if sign == "+" else total - term
        self.depth -= 1
        return total

    def product(self) -> Expr:
        value = self.unary()
        while self.peek().text in ("*", "/"):
            token = self.take()
            factor = self.unary()
            if token.text == "*":
                value = value * factor
            elif factor == 0:
                self.fail("division by zero", token.position)
            else:
                value = self._quotient(value, factor, token)
        return value

    def _quotient(self, value: Expr, factor: Expr, token: Token) -> Expr:
        from .operators import rank_of

        if rank_of(factor) > 0:
            self.fail(f"division by the vector '{factor}'", token.position)
        return cast(Expr, value / factor)

    def unary(self) -> Expr:
        self.depth += 1
        if self.depth > DEEPEST:
            self.fail(f"more than {DEEPEST} levels of nesting")
        sign = self.take().text if self.peek().text in ("+", "-") else ""
        value = self.unary() if sign else self.power()
        self.depth -= 1
        return -value if sign == "-" else value

    def power(self) -> Expr:
        base = self.operand()
        if self.peek().text in ("^", "**"):
            token = self.take()
            return self.raised(base, self.unary(), token)
        return base

    def raised(self, base: Expr, exponent: Expr, token: Token) -> Expr:
        """base**exponent, within the bounds on numbers; the token is where errors point."""
        if exponent.is_number and not abs(exponent) <= LARGEST_POWER:
            self.fail(f"a power beyond ±{LARGEST_POWER} is not read", token.position)
        if base == 0 and exponent.is_number and exponent <= 0:
            self.fail("zero to a power that is not positive", token.position)
        if base.is_number and exponent.is_number and len(str(base)) > LARGEST_EXPONENT:
            self.fail("a number this large is not read", token.position)
        return cast(Expr, base**exponent)

    def operand(self) -> Expr:
        token = self.take()
        if token.kind == "number":
            return self._number(token)
        if token.kind == "name":
            return self._called(token) if self.peek().text == "(" else self._named(token)
        if token.text == "(":
            value = self.sum()
            self.expect(")")
            return value
        what = "the text ends" if token.kind == "end" else f"'{token.text}' stands"
        self.fail(f"{what} where a number, a name or '(' is needed", token.position)

    def _number(self, token: Token) -> Expr:
        exponent = re.search(r"[eE]([+-]?\d+)", token.text)
        too_long = exponent and (len(exponent[1]) > 5 or abs(int(exponent[1])) > LARGEST_EXPONENT)
        if too_long or len(token.text) > LARGEST_EXPONENT:
            self.fail(f"the number {token.text[:20]} is beyond what is read", token.position)
        return Integer(token.text) if token.text.isdigit() else Rational(token.text)

    def _named(self, token: Token) -> Expr:
        name = token.text
        if name in self.names:
            found = self.names[name]
            if callable(found) and not isinstance(found, Expr):
                self.fail(f"{name} needs its arguments, {name}(...)", token.position)
            return cast(Expr, found)
        if name in NAMED_NUMBERS:
            return cast(Expr, NAMED_NUMBERS[name])
        if self.unknown is not None:
            return self.unknown(name)
        self.fail(self._unknown_message(name), token.position)

    def _unknown_message(self, name: str) -> str:
        near = difflib.get_close_matches(name, [*self.names, *FUNCTIONS], 3)
        hint = f"; did you mean {' or '.join(near)}?" if near else ""
        return f"'{name}' is not declared{hint or '.'} Declare it as a field or a parameter first."

    def _called(self, token: Token) -> Expr:
        function = self.names.get(token.text, FUNCTIONS.get(token.text))
        if function is None:
            near = difflib.get_close_matches(token.text, [*OPERATORS, *FUNCTIONS], 3)
            hint = f"; did you mean {' or '.join(near)}?" if near else ""
            self.fail(f"there is no operator or function '{token.text}'{hint}", token.position)
        if isinstance(function, Expr):
            self.fail(
                f"'{token.text}' is a field or a parameter; write {token.text}*(...) for a product",
                token.position,
            )
        arguments = self._arguments()
        try:
            return cast(Expr, function(*arguments))
        except RankError:
            raise
        except TypeError:
            self.fail(f"{token.text}() does not take {len(arguments)} arguments", token.position)

    def _arguments(self) -> list[Expr]:
        self.expect("(")
        found = [self.sum()]
        while self.peek().text == ",":
            self.take()
            found.append(self.sum())
        self.expect(")")
        return found
