"""Claims as an author types them: ordinary mathematics with implicit products, read exactly or refused.

Beside the grammar of laws (`reader`) this one takes `3 k^2 v_te^2`, `k² λ_De²`, `(a + b)(c + d)`, `sin^2 theta`,
`|k v - omega|`, `∂_t² n`, `∂²n/∂t²`, `3/2 k^2` and brackets of three kinds. What can be read in two ways, such as `a/b c` or
`sin 2 theta`, is never guessed: `AmbiguousText` shows both readings.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any, Literal

from sympy import Expr, S, Symbol

from .fields import latex_word
from .mathematics import TypedReader
from .notation import PaperLatex
from .words import INFINITY, Names

Unknown = Callable[[str], Expr] | None
DIRECTIONS = {"perp": r"\perp", "parallel": r"\parallel", "par": r"\parallel"}


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
    left: Expr = reader.checked()
    right: Expr = S.Zero
    if reader.peek().text == "=":
        reader.take()
        right = reader.checked()
    reader.finish()
    return left, right


def read_typed(text: str, names: Names, unknown: Unknown = None) -> Expr:
    """One expression, such as the right side of a `where` definition; see `read_claim`."""
    reader = TypedReader(text, names, unknown)
    found = reader.checked()
    reader.finish()
    return found


def read_matrix(text: str, names: Names, unknown: Unknown = None) -> list[list[Expr]]:
    """The rows of a claimed wave matrix, ``[[a, b], [c, d]]`` or ``det [[a, b], [c, d]] = 0``."""
    reader = TypedReader(text, names, unknown)
    if reader.peek().text == "det":
        reader.take()
    wrapped = reader.peek().text == "("
    if wrapped:
        reader.take()
    rows = _rows(reader)
    if wrapped:
        reader.expect(")")
    if reader.peek().text == "=":
        sign = reader.take()
        if reader.sum() != 0:
            reader.fail("a matrix claim ends with '= 0'", sign.position)
    reader.finish()
    return rows


def _rows(reader: TypedReader) -> list[list[Expr]]:
    start = reader.peek().position
    rows = _listed(reader, lambda: _listed(reader, reader.checked))
    if any(len(row) != len(rows) for row in rows):
        sizes = " and ".join(str(len(row)) for row in rows)
        reader.fail(f"a wave matrix is square; {len(rows)} rows have {sizes} entries", start)
    return rows


def _listed(reader: TypedReader, entry: Callable[[], Any]) -> list[Any]:
    reader.expect("[")
    found = [entry()]
    while reader.peek().text == ",":
        reader.take()
        found.append(entry())
    reader.expect("]")
    return found


@dataclass(frozen=True)
class Condition:
    """An author's stated condition: left/right ≪ 1, left = right, or left → right."""

    kind: Literal["small", "equal", "limit"]
    left: Expr
    right: Expr

    @property
    def ratio(self) -> Expr:
        """What is small, for the kind "small"."""
        return self.left / self.right


def read_condition(text: str, names: Names, unknown: Unknown = None) -> Condition:
    """A condition: ``m_e/m_i << 1``, ``omega >> nu``, ``T_i = 0`` or ``nu -> 0``; see `read_claim`."""
    reader = TypedReader(text, names, unknown)
    left, sign = reader.checked(), reader.take()
    if sign.text not in ("<<", ">>", "=", "->"):
        reader.fail("a condition reads a << b, a >> b, a = b or a -> 0", sign.position)
    right = _infinity(reader) if sign.text == "->" else None
    right = reader.checked() if right is None else right
    reader.finish()
    if sign.text in ("=", "->"):
        return Condition("equal" if sign.text == "=" else "limit", left, right)
    if S.Zero in (left, right):
        reader.fail("nothing is small against 0; write a -> 0 or a = 0", sign.position)
    return Condition("small", *((left, right) if sign.text == "<<" else (right, left)))


def _infinity(reader: TypedReader) -> Expr | None:
    if reader.peek().text not in INFINITY:
        return None
    reader.take()
    return S.Infinity


def latex_reading(lhs: Expr, rhs: Expr) -> str:
    """A claim in LaTeX, as it was understood."""
    printer = ClaimLatex("")
    return f"{printer.doprint(lhs)} = {printer.doprint(rhs)}"


class ClaimLatex(PaperLatex):
    """LaTeX in which primes, perp, parallel and subscripts of several letters print as in a paper."""

    def _print_Symbol(self, expr: Symbol, style: str = "plain") -> str:
        given: str = expr.name
        name, primes = given.replace("'", ""), "'" * given.count("'")
        stem, _, low = name.partition("_")
        head: str = super()._print_Symbol(Symbol(stem if low else name), style)
        parts = [DIRECTIONS.get(part) or latex_word(part) for part in low.split("_") if part]
        low = f"_{{{','.join(parts)}}}" if parts else ""
        return f"{head}{low}{primes}"
