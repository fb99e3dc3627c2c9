"""Claims as an author types them: ordinary mathematics with implicit products, read exactly or refused.

Beside the grammar of laws (`reader`) this one takes `3 k^2 v_te^2`, `k² λ_De²`, `(a + b)(c + d)`, `sin^2 theta`,
`|k v - omega|`, `∂_t² n`, `∂²n/∂t²` and brackets of three kinds. What can be read in two ways, such as `a/b c` or
`sin 2 theta`, is never guessed: `AmbiguousText` shows both readings.
"""

from __future__ import annotations

import difflib
import re
import unicodedata
from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace
from typing import Any, Literal, NoReturn, cast

import sympy
from sympy import Expr, Integer, S, Symbol

from ..errors import AmbiguousText, ReadError
from .fields import FieldAtom, latex_word
from .glyphs import CLOSING, LEIBNIZ, OPERAND_KINDS, ORDERED, Mark, marks, spellings
from .notation import PaperLatex
from .operators import Operator
from .reader import FUNCTIONS, NAMED_NUMBERS, Reader, Token

Names = Mapping[str, Any]
Unknown = Callable[[str], Expr] | None

TYPED_FUNCTIONS: dict[str, Callable[[Any], Any]] = FUNCTIONS | {
    "ln": sympy.log,
    "abs": sympy.Abs,
    "Abs": sympy.Abs,
    "cot": sympy.cot,
    "coth": sympy.coth,
    "sec": sympy.sec,
    "csc": sympy.csc,
    "arctan": sympy.atan,
}
SIDE_BY_SIDE = set(TYPED_FUNCTIONS) - {"sqrt", "abs", "Abs", "exp"}
"""Functions that end the argument of the one before them: sin theta cos theta is a product."""
TYPED_NUMBERS = NAMED_NUMBERS | {"I": S.ImaginaryUnit}
INFINITY = {"∞", "infinity", "inf", "oo"}
ADVICE = {
    "e": "write exp(...) for the exponential, or define e in `where`",
    "j": "write i for the imaginary unit",
}
SIGN_ADVICE = {
    "±": "state the branches ± as two claims",
    "∓": "state the branches ∓ as two claims",
    "≡": "≡ is not read; write =",
    "∝": "a proportionality is not a relation; write = with its factor",
} | dict.fromkeys(
    ("<", ">", "≤", "≥", "<<", ">>", "->"),
    "a relation has '='; a condition belongs in `under`, as in under=['m_e/m_i << 1']",
)
DIRECTIONS = {"perp": r"\perp", "parallel": r"\parallel", "par": r"\parallel"}
LONGEST_SPLIT = 40
HIGHEST_DERIVATIVE = 8


def read_claim(text: str, names: Names, unknown: Unknown = None) -> tuple[Expr, Expr]:
    """The two sides of a claimed relation; the right one is 0 where there is no "=" (or ≈, ~).

    Parameters
    ----------
    text : str
        For example ``"omega^2 = omega_pe^2 + 3 k^2 v_te^2"``.
    names : mapping of str to Expr or callable
        What each name stands for; a callable is an operator, as ``partial_t``.
    unknown : callable, optional
        Makes an expression for a name that is neither found nor a run of known names.

    Returns
    -------
    (Expr, Expr)
        Built without expanding or simplifying; numbers are exact.

    Raises
    ------
    AmbiguousText
        When there are two readings, with both.
    ReadError
        When the text cannot be read, with the place and what to write.

    Examples
    --------
    >>> from sympy.abc import k, v, omega
    >>> read_claim("ω² = 3 k²v²", {"omega": omega, "k": k, "v": v})
    (omega**2, 3*k**2*v**2)
    """
    reader = TypedReader(text, names, unknown)
    sides = reader.sides()
    reader.finish()
    return sides


def read_typed(text: str, names: Names, unknown: Unknown = None) -> Expr:
    """One expression, such as the right side of a `where` definition; see `read_claim`."""
    reader = TypedReader(text, names, unknown)
    found = reader.sum()
    reader.finish()
    return found


def read_matrix(text: str, names: Names, unknown: Unknown = None) -> list[list[Expr]]:
    """The rows of a claimed wave matrix, ``[[a, b], [c, d]]`` or ``det [[a, b], [c, d]] = 0``."""
    reader = TypedReader(text, names, unknown)
    rows = reader.matrix()
    reader.finish()
    return rows


@dataclass(frozen=True)
class Condition:
    """An author's stated condition: left/right ≪ 1, left = right, or left → right."""

    kind: Literal["small", "equal", "limit"]
    left: Expr
    right: Expr

    @property
    def ratio(self) -> Expr:
        """What is small, for the kind "small"."""
        return cast(Expr, self.left / self.right)


def read_condition(text: str, names: Names, unknown: Unknown = None) -> Condition:
    """A condition: ``m_e/m_i << 1``, ``omega >> nu``, ``T_i = 0`` or ``nu -> 0``; see `read_claim`."""
    reader = TypedReader(text, names, unknown)
    found = reader.condition()
    reader.finish()
    return found


def latex_reading(lhs: Expr, rhs: Expr) -> str:
    """A claim in LaTeX, as it was understood."""
    printer = ClaimLatex("")
    return f"{printer.doprint(lhs)} = {printer.doprint(rhs)}"


class ClaimLatex(PaperLatex):
    """LaTeX in which primes, perp, parallel and subscripts of several letters print as in a paper."""

    def _print_Symbol(self, expr: Symbol, style: str = "plain") -> str:
        name, primes = expr.name.replace("'", ""), expr.name.count("'")
        stem, _, low = name.partition("_")
        head = super()._print_Symbol(Symbol(stem if low else name), style)
        parts = [DIRECTIONS.get(part) or latex_word(part) for part in low.split("_") if part]
        return head + (f"_{{{','.join(parts)}}}" if parts else "") + "'" * primes  # type: ignore[no-any-return]


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


class TypedReader(Reader):
    """The reader of laws with implicit products, glyphs, |...| and functions without parentheses."""

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

    def follows(self, token: Mark | None = None) -> bool:
        """Whether an operand begins here, so that a product is implied."""
        at = token or self.peek()
        opens = at.text in ("(", "[", "{", "|(", "√")
        return opens or at.kind in OPERAND_KINDS

    def finish(self) -> None:
        token = self.peek()
        if token.text in SIGN_ADVICE:
            self.fail(SIGN_ADVICE[token.text])
        if token.text == "^" or token.kind == "raised":
            self.fail("a power of a power; write (a^b)^c or a^(b c)")
        super().finish()

    def sides(self) -> tuple[Expr, Expr]:
        left = self.sum()
        if self.peek().text != "=":
            return left, S.Zero
        self.take()
        return left, self.sum()

    def matrix(self) -> list[list[Expr]]:
        named = self.peek().text == "det"
        if named:
            self.take()
        wrapped = self.peek().text == "("
        if wrapped:
            self.take()
        rows = self._rows()
        if wrapped:
            self.expect(")")
        if self.peek().text == "=":
            self.take()
            if self.sum() != 0:
                self.fail("a matrix claim ends with '= 0'")
        return rows

    def _rows(self) -> list[list[Expr]]:
        start = self.peek().position
        rows = self._listed(lambda: self._listed(self.sum))
        if any(len(row) != len(rows) for row in rows):
            sizes = " and ".join(str(len(row)) for row in rows)
            self.fail(f"a wave matrix is square; {len(rows)} rows have {sizes} entries", start)
        return rows

    def _listed(self, entry: Callable[[], Any]) -> list[Any]:
        self.expect("[")
        found = [entry()]
        while self.peek().text == ",":
            self.take()
            found.append(entry())
        self.expect("]")
        return found

    def condition(self) -> Condition:
        left, sign = self.sum(), self.take()
        if sign.text not in ("<<", ">>", "=", "->"):
            self.fail("a condition reads a << b, a >> b, a = b or a -> 0", sign.position)
        if sign.text == "->" and self.peek().text in INFINITY:
            self.take()
            return Condition("limit", left, S.Infinity)
        right = self.sum()
        if sign.text == ">>":
            left, right = right, left
        if sign.text in ("<<", ">>") and S.Zero in (left, right):
            self.fail("nothing is small against 0; write a -> 0 or a = 0", sign.position)
        kinds: dict[str, Literal["equal", "limit"]] = {"=": "equal", "->": "limit"}
        return Condition(kinds.get(sign.text, "small"), left, right)

    def product(self) -> Expr:
        factors = [self.unary()]
        while self.peek().text in ("*", "/") or self.follows():
            before, self.bare = self.bare, None
            token = self.peek()
            if token.text in ("*", "/"):
                self.take()
            first = self.peek()
            if token.kind == "number":
                self._number_after_factor(token)
            factor = self.unary()
            if before is not None:
                self._after_bare(before, first, factor)
            if token.text == "/":
                factor = self._below(factor, token, first)
            factors.append(factor)
        return self.multiplied(factors)

    def _number_after_factor(self, token: Mark) -> NoReturn:
        last = self.tokens[self.place - 1]
        if last.kind == "number":
            self.fail("two numbers side by side; write * for a product", token.position)
        base = self.typed(last.position, last.end)
        number = self.typed(token.position, token.end)
        if last.kind == "name":
            readings = (f"{base}^{number}", f"{base}*{number}")
            self.ambiguous("a number after a factor", token.position, *readings)
        self.fail("a number after a factor; write * for a product or ^ for a power", token.position)

    def _below(self, factor: Expr, token: Mark, first: Mark) -> Expr:
        """One over a factor; what stands beside it would be above or below the line."""
        below_end = self.end
        if self.follows():
            while self.follows():
                self.unary()
            above = self._numerator(token)
            below, more = self.typed(first.position, below_end), self.typed(below_end, self.end)
            gap = "" if more.startswith(("(", "[", "{")) else " "
            readings = (f"{above}/({below}{gap}{more})", f"({above}/{below}){gap}{more}")
            self.ambiguous("what follows a division", below_end, *readings)
        return self.below(factor, token)

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
        base = self.operand()
        token = self.peek()
        if token.kind != "raised" and token.text != "^":
            return base
        self.take()
        if token.kind == "raised":
            self._bare_power()
            return self.raised(base, Integer(token.text), token)
        first, before = self.peek(), self.bare
        exponent = self.unary()
        if before is not None:
            self._two_arguments(before, self.end)
        self._exponent_ends(start, token, first)
        self.bare = None
        return self.raised(base, exponent, token)

    def _bare_power(self) -> None:
        if self.bare is not None:
            self._two_arguments(self.bare, self.end)

    def _exponent_ends(self, start: int, token: Mark, first: Mark) -> None:
        """Refuse a^2b, a^b(c) and a^1/2, whose exponents may end in two places."""
        last, after = self.tokens[self.place - 1], self.peek()
        simple = last is first or (
            first.text in ("+", "-") and self.tokens[self.place - 2] is first
        )
        joined = self.follows() and not after.spaced
        wide = last.kind == "number" and after.text in ("(", "[", "{", "|(")
        root = (
            last.text == "1" and after.text == "/" and self.tokens[self.place + 1].kind == "number"
        )
        if not simple or not ((joined and not wide) or root):
            return
        base, low = self.typed(start, token.end), self.typed(first.position, last.end)
        if root:
            self.take()
        self.unary()
        more = self.typed(last.end, self.end)
        gap = "" if root else " "
        readings = (f"{base}({low}{gap}{more})", f"({base}{low}){gap}{more}")
        self.ambiguous("where the exponent ends", last.end, *readings)

    def operand(self) -> Expr:
        token = self.take()
        if token.text in CLOSING:
            return self._grouped(CLOSING[token.text])
        if token.text == "|(":
            value = self._grouped(")|")
            return cast(Expr, sympy.Abs(value))
        if token.text == "√":
            return self._applied(token, [sympy.sqrt], linear=False)
        if token.kind == "number":
            return self._number(token)
        if token.kind == "leibniz":
            return self._leibniz(token)
        if token.kind in OPERAND_KINDS:
            return self._word(token)
        if token.text in SIGN_ADVICE:
            self.fail(SIGN_ADVICE[token.text], token.position)
        what = (
            "the text ends"
            if token.kind == "end"
            else f"'{token.text.strip('()') or token.text}' stands"
        )
        self.fail(f"{what} where a number, a name or '(' is needed", token.position)

    def _grouped(self, closing: str) -> Expr:
        value = self.sum()
        self.bare = None
        if self.peek().text != closing:
            self.fail(f"'{closing.strip(')') or closing}' is needed here")
        self.take()
        return value

    def _number(self, token: Token) -> Expr:
        whole, letter, rest = re.fullmatch(r"([^eE]*)([eE]?)(.*)", token.text).groups()  # type: ignore[union-attr]
        if letter and letter + rest in self.names:
            readings = (f"{whole}*10^{rest}", f"{whole}*{letter}{rest}")
            self.ambiguous(f"{token.text} with the name {letter}{rest}", token.position, *readings)
        return super()._number(token)

    def _word(self, token: Mark) -> Expr:
        found = self._find(token)
        if isinstance(found, Expr):
            return found
        if callable(found):
            return self._applied(token, [found], linear=True)
        steps = self._derivatives(token)
        if steps:
            return self._applied(token, steps, linear=True)
        if token.text in TYPED_FUNCTIONS:
            return self._applied(token, [TYPED_FUNCTIONS[token.text]], linear=False)
        return self._unfound(token)

    def _find(self, token: Token) -> Any:
        """What a name stands for, by any of its spellings; None where nothing does."""
        if token.text in self.names:
            return self.names[token.text]
        keys = [s for s in spellings(token.text) if s in self.names] or self._glyph_keys(token.text)
        if len({id(self.names[key]) for key in keys}) > 1:
            self.ambiguous(f"the name {token.text}", token.position, *keys[:2])
        if keys:
            return self.names[keys[0]]
        return next((TYPED_NUMBERS[s] for s in spellings(token.text) if s in TYPED_NUMBERS), None)

    def _glyph_keys(self, name: str) -> list[str]:
        """Declared names that are themselves written with glyphs."""
        plain = set(spellings(name))
        return [key for key in self.names if not key.isascii() and plain & set(spellings(key))]

    def _derivatives(self, token: Mark) -> list[Callable[[Any], Any]]:
        """The steps of ∂_t, d_t, ∂_xx ..., by the callables that `names` has for them."""
        match = re.fullmatch(r"(?:d|partial)_([a-z]+)", token.text)
        if match is None:
            return []
        keys = [f"partial_{letter}" for letter in match[1]]
        if all(callable(self.names.get(key)) for key in keys):
            return [self.names[key] for key in keys]
        return []

    def _applied(self, token: Mark, steps: list[Callable[[Any], Any]], linear: bool) -> Expr:
        """A function or operator, its power, and its argument with or without parentheses."""
        order = self._order(token)
        head_end = self.end
        if self.peek().text == "(":
            arguments = self._arguments()
            self.bare = None
        else:
            if not self.follows() or self.peek().text in CLOSING:
                name = self.typed(token.position, head_end)
                self.fail(f"{name} needs its argument; write {name}(...)", self.peek().position)
            self.deeper()
            arguments = [self.operand()]
            self.depth -= 1
            self.bare = Bare(linear, token.position, head_end, self.end)
        if linear:
            return self._repeated(token, steps * order, arguments)
        value = self._call(token, steps[0], arguments)
        return value if order == 1 else self.raised(value, Integer(order), token)

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
        if re.fullmatch(r"\d{1,2}", power) and 0 < int(power) <= HIGHEST_DERIVATIVE:
            return int(power)
        name = token.text
        if power == "-1" and name in TYPED_FUNCTIONS:
            readings = (f"1/{name}(...)", f"arc{name}(...)")
            self.ambiguous(f"{name}^-1", at.position, *readings)
        self.fail(
            f"only a small whole power may stand between {name} and its argument", at.position
        )

    def _repeated(
        self, token: Mark, steps: list[Callable[[Any], Any]], arguments: list[Expr]
    ) -> Expr:
        value = self._call(token, steps[-1], arguments)
        for step in steps[-2::-1]:
            value = self._call(token, step, [value])
        return value

    def _call(self, token: Mark, function: Callable[..., Any], arguments: list[Expr]) -> Expr:
        self.bounded(function, arguments, token)
        try:
            return self.finite(function(*arguments), token)
        except (TypeError, ValueError) as error:
            if isinstance(error, ReadError) or type(error).__module__.startswith("plasmalin"):
                raise
            self.fail(f"{token.text}() does not take {len(arguments)} arguments", token.position)

    def _leibniz(self, token: Mark) -> Expr:
        """∂²n/∂t², or ∂/∂t before what it acts on."""
        match = cast(re.Match[str], LEIBNIZ.fullmatch(self.text, token.position, token.end))
        letters = "".join(v * _whole(order) for v, order in ORDERED.findall(match["by"]))
        if len(letters) != _whole(match["order"]):
            self.fail("the orders above and below the line differ", token.position)
        steps = self._derivatives(replace(token, text=f"partial_{letters}"))
        if not steps:
            self.fail(f"∂/∂{letters[0]} is not known here", token.position)
        if match["what"] is None:
            return self._applied(token, steps, linear=True)
        named = replace(token, kind="name", text=match["what"], position=match.start("what"))
        return self._repeated(token, steps, [self._word(replace(named, end=match.end("what")))])

    def _unfound(self, token: Mark) -> Expr:
        """A name that nothing is known of: made by `unknown`, or refused with what to write."""
        name = token.text
        if token.kind != "name":
            self.fail(f"{self.typed(token.position, token.end)} is not known here", token.position)
        pieces = self._split(spellings(name)[-1])
        if pieces:
            self.fail(f"'{name}' is not declared; did you mean {'*'.join(pieces)}?", token.position)
        if self.unknown is not None and name not in ADVICE and self.peek().text != "(":
            return self.unknown(spellings(name)[-1])
        if name in ADVICE:
            self.fail(f"'{name}' is not declared; {ADVICE[name]}", token.position)
        near = difflib.get_close_matches(spellings(name)[-1], [*self.names, *TYPED_FUNCTIONS], 3)
        hint = f"; did you mean {' or '.join(near)}?" if near else "."
        if self.peek().text == "(":
            hint += f" Write {name}*(...) for a product."
        self.fail(f"'{name}' is not declared{hint} Define it in `where`.", token.position)

    def _split(self, name: str) -> list[str]:
        """The name as a product of known names, in the fewest pieces; [] where it is none."""
        if len(name) > LONGEST_SPLIT:
            return []
        best: list[list[str] | None] = [[]]
        for end in range(1, len(name) + 1):
            ways = [
                [*head, name[start:end]]
                for start, head in enumerate(best)
                if head is not None and self._is_known(name[start:end])
            ]
            best.append(min(ways, key=len) if ways else None)
        return best[-1] or []

    def _is_known(self, piece: str) -> bool:
        return piece in TYPED_NUMBERS or isinstance(self.names.get(piece), Expr)
