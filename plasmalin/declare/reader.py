"""Laws as text: a small grammar of our own. Nothing is ever evaluated as code.

    law        = sum "=" sum
    sum        = ["+" | "-"] product { ("+" | "-") product }
    product    = unary { ("*" | "/") unary }
    unary      = ("+" | "-") unary | power
    power      = operand [ ("^" | "**") unary ]
    operand    = number | name | name "(" argument { "," argument } ")" | "(" sum ")"
    argument   = sum | "(" sum "," sum { "," sum } ")", a row of a tensor's components

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
from sympy import Add, Expr, Integer, Mul, Rational, S, cosh, exp, log, sinh, sqrt

from ..errors import RankError, ReadError
from .fields import components
from .operators import OPERATORS, Operator, rank_of

LONGEST = 20_000
DEEPEST = 60
LARGEST_POWER = 64
LARGEST_EXPONENT = 400
LARGEST_BITS = 100_000
LARGEST_ROOT = 1_400  # bits of a number under a root

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


def bits(value: Expr) -> int:
    """The length of the number that an expression is multiplied by."""
    number = value.as_coeff_Mul()[0]
    return max(number.p.bit_length(), number.q.bit_length()) if number.is_Rational else 1


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

    def deeper(self) -> None:
        self.depth += 1
        if self.depth > DEEPEST:
            self.fail(f"more than {DEEPEST} levels of nesting")

    def sum(self) -> Expr:
        self.deeper()
        terms = [self.product()]
        while self.peek().text in ("+", "-"):
            negative = self.take().text == "-"
            term = self.product()
            terms.append(-term if negative else term)
        self.depth -= 1
        return cast(Expr, Add(*terms)) if len(terms) > 1 else terms[0]

    def product(self) -> Expr:
        factors = [self.unary()]
        while self.peek().text in ("*", "/"):
            token = self.take()
            factor = self.unary()
            factors.append(self.below(factor, token) if token.text == "/" else factor)
        return self.multiplied(factors)

    def multiplied(self, factors: list[Expr]) -> Expr:
        if len(factors) == 1:
            return factors[0]
        if sum(bits(factor) for factor in factors) > LARGEST_BITS:
            self.fail("a number this large is not read")
        return cast(Expr, Mul(*factors))

    def below(self, factor: Expr, token: Token) -> Expr:
        """One over a factor; the token is the sign of division."""
        if factor == 0:
            self.fail("division by zero", token.position)
        if rank_of(factor) > 0:
            self.fail(f"division by the vector '{factor}'", token.position)
        return cast(Expr, 1 / factor)

    def unary(self) -> Expr:
        self.deeper()
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
        self.small_exponent(exponent, LARGEST_POWER, token)
        if base == 0 and exponent.is_number and not (exponent.is_Rational and exponent > 0):
            self.fail("zero to a power that is not positive", token.position)
        whole = exponent.is_Integer or not exponent.is_number
        size = bits(base) * (abs(exponent) if exponent.is_Integer else 1)
        if size > (LARGEST_BITS if whole else LARGEST_ROOT):
            self.fail("a number this large is not read", token.position)
        return self.finite(base**exponent, token)

    def bounded(self, function: Any, arguments: list[Expr], token: Token) -> None:
        """The bounds of `raised`, for the functions that are powers."""
        if function in (exp, sinh, cosh):
            self.small_exponent(arguments[0], LARGEST_EXPONENT, token)
        elif function is sqrt and bits(arguments[0]) > LARGEST_ROOT:
            self.fail("a number this large is not read", token.position)

    def small_exponent(self, exponent: Expr, limit: int, token: Token) -> None:
        """SymPy works out 9^n, and exp(n log 9) too; towers of numbers are bounded at each level."""
        for term in Add.make_args(exponent):
            number, rest = term.as_coeff_Mul()
            numeric = term.is_number and not term.has(Operator)
            size = term.evalf(5) if numeric else number if rest.has(log) else S.Zero
            if not bool(abs(size) <= limit):
                self.fail(f"a power beyond ±{limit} is not read", token.position)

    def finite(self, value: Expr, token: Token) -> Expr:
        if value in (S.ComplexInfinity, S.NaN, S.Infinity, S.NegativeInfinity):
            self.fail("this has no finite value", token.position)
        if bits(value) > LARGEST_BITS:
            self.fail("a number this large is not read", token.position)
        return value

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
        arguments = self._arguments(rows=function is components)
        self.bounded(function, arguments, token)
        try:
            return self.finite(function(*arguments), token)
        except RankError:
            raise
        except TypeError:
            self.fail(f"{token.text}() does not take {len(arguments)} arguments", token.position)

    def _arguments(self, *, rows: bool = False) -> list[Any]:
        """What stands in parentheses, between commas; of a tensor's components the rows in parentheses of their own."""
        self.expect("(")
        found: list[Any] = []
        while not found or self.peek().text == ",":
            if found:
                self.take()
            row = rows and self._row_begins()
            found.append(tuple(self._arguments()) if row else self.sum())
        self.expect(")")
        return found

    def _row_begins(self) -> bool:
        """Whether the parenthesis that opens here holds a comma of its own."""
        depth = 0
        for token in self.tokens[self.place :]:
            depth += (token.text == "(") - (token.text == ")")
            if depth == 0 or (depth == 1 and token.text == ","):
                return depth == 1
        return False
