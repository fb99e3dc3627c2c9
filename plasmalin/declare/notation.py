"""How an expression is printed: one-line text as in a paper, and LaTeX.

Plain ``str`` gives the grammar that laws are read in; `paper` gives what a person reads.
"""

from __future__ import annotations

import html
import unicodedata
from collections.abc import Iterable, Mapping
from typing import Any, cast

from sympy import Add, Expr, Integer, Mul, Pow, Rational, Symbol, cancel, gcd_list
from sympy.core.function import Function
from sympy.printing.latex import LatexPrinter
from sympy.printing.str import StrPrinter

from .fields import GREEK, Background, Components, Field, FieldAtom, Perturbation, components
from .operators import (
    Advect,
    Ddot,
    Div,
    Dot,
    Grad,
    Identity,
    Laplacian,
    Multiplier,
    Operator,
    Outer,
    PartialT,
    k_abs,
)

SUPERSCRIPT = str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")
UNIT_STREAMS = {"∂_x", "∂_y", "∂_z"}
HATS = {"x": "x̂", "y": "ŷ", "z": "ẑ"}
DEFAULT_AXES = {1: "x", 2: "xz", 3: "xyz"}
GREEK_LETTER = {
    name: unicodedata.lookup(
        f"GREEK {'CAPITAL' if name[0].isupper() else 'SMALL'} LETTER {name.upper().replace('LAMBDA', 'LAMDA')}"
    )
    for name in GREEK
}
SIGNS = {
    "grad": "∇",
    "div": "∇·",
    "curl": "∇×",
    "laplacian": "∇²",
    "partial_t": "∂_t ",
    "dot": "·",
    "cross": "×",
    "outer": "⊗",
    "ddot": ":",
}


def paper(expr: Any, axes: str = "") -> str:
    """An expression on one line as a paper would print it, e.g. ``n_0 ∇·ṽ_e``."""
    return TextPrinter(axes).show(by_dyads(expr))


def latex(expr: Any, axes: str = "") -> str:
    """An expression in LaTeX, time derivatives first."""
    return cast(str, PaperLatex(axes).doprint(by_dyads(expr)))


def equation_table(title: str, equations: Mapping[str, str]) -> str:
    """Named equations in LaTeX as a table in HTML, for a notebook."""
    cell = '<td style="text-align:left">'
    rows = "".join(
        f"<tr>{cell}{html.escape(name)}</td>{cell}$\\displaystyle {html.escape(text)}$</td></tr>"
        for name, text in equations.items()
    )
    head = f"<p>{html.escape(title)}</p>" if title else ""
    return f"{head}<table>{rows}</table>"


def by_dyads(expr: Any) -> Any:
    """Tensors known by their components as dyads a b where they are such, their scalar out of inner products."""
    if not isinstance(expr, Expr) or not any(c.rank == 2 for c in expr.atoms(Components)):
        return expr
    if isinstance(expr, Components):
        return _dyad(expr)
    args = [by_dyads(a) for a in expr.args]
    if not isinstance(expr, Dot | Ddot):
        return expr.func(*args)
    parts = [
        a.as_independent(Operator, Components, FieldAtom, Identity, as_Add=False) for a in args
    ]
    return Mul(*(scalar for scalar, _ in parts), expr.func(*(rest for _, rest in parts)))


def _dyad(tensor: Components) -> Expr:
    """The tensor as scalar times outer(a, b), itself where its rows are not all multiples of one."""
    size = range(tensor.size)
    i, j = next((i, j) for i in size for j in size if tensor.entry((i, j)) != 0)
    column = [tensor.entry((m, j)) for m in size]
    row = [tensor.entry((i, m)) for m in size]
    pivot = tensor.entry((i, j))
    if any(cancel(column[p] * row[q] - pivot * tensor.entry((p, q))) for p in size for q in size):
        return tensor
    (first, a), (second, b) = (_primitive(column), _primitive(row))
    return cancel(first * second / pivot) * Outer(components(*a), components(*b))


def _primitive(entries: list[Any]) -> tuple[Any, list[Any]]:
    """The common factor of a vector's components and what it leaves."""
    common = gcd_list(entries)
    return common, [cancel(x / common) for x in entries]


def name_text(name: str) -> str:
    """A name with its Greek letters: omega_pe becomes ω_pe, and khat becomes k̂; ω_pi is of plasma ions."""
    if name == k_abs.name:
        return "|k|"
    first, *more = name.split("_")
    return "_".join([_letter(first), *(p if p == "pi" else _letter(p) for p in more)])


def _letter(part: str) -> str:
    stem = part.removesuffix("hat")
    mark = "\u0302" if stem and stem != part else ""
    plain = stem if mark else part
    return unicodedata.normalize("NFC", GREEK_LETTER.get(plain, plain) + mark)


def term_order(term: Expr) -> tuple[int, str]:
    """Sort key of the terms of a sum: time derivatives first, then as SymPy prints them."""
    return (0 if term.atoms(PartialT) else 1, str(term).lstrip("-"))


def in_order(terms: Iterable[Expr]) -> list[Expr]:
    """The terms of a sum as they are printed: γ − 1 rather than −1 + γ."""
    found = sorted(terms, key=term_order)
    first = found[0]
    positive = next((t for t in found if not t.could_extract_minus_sign()), None)
    if first.is_number and first.could_extract_minus_sign() and positive is not None:
        found.remove(positive)
        found.insert(0, positive)
    return found


class TextPrinter:
    """Recursive printer; levels of binding: 0 sum, 1 product, 2 operand."""

    def __init__(self, axes: str) -> None:
        self.axes = axes

    def show(self, expr: Any, level: int = 0) -> str:
        text, binding = self._text(expr)
        return f"({text})" if binding < level else text

    def _text(self, expr: Any) -> tuple[str, int]:
        if isinstance(expr, Add):
            return self._sum(expr), 0
        if isinstance(expr, Mul):
            return self._product(expr)
        if isinstance(expr, Pow):
            return self._power(expr)
        if isinstance(expr, Components):
            return self._components(expr)
        if isinstance(expr, Operator):
            return self._operator(expr)
        return self._atom(expr)

    def _atom(self, expr: Any) -> tuple[str, int]:
        if isinstance(expr, Perturbation):
            text = name_text(expr.field.name)
            return unicodedata.normalize("NFC", f"{text[0]}\u0303{text[1:]}"), 3
        if isinstance(expr, Background):
            name = name_text(expr.field.name)
            return f"{name}0" if "_" in name else f"{name}_0", 3
        if isinstance(expr, Field | Symbol):
            return name_text(expr.name), 3
        if isinstance(expr, Identity):
            return "I", 3
        if isinstance(expr, Function):
            return f"{expr.func.__name__}({', '.join(self.show(a) for a in expr.args)})", 3
        if isinstance(expr, Rational) and not isinstance(expr, Integer):
            return str(expr), 1
        if expr.is_Number:
            return str(expr).replace("-", "−"), 0 if expr < 0 else 3
        if type(expr).__name__ == "Remainder":
            return f"O₂[{self.show(expr.args[0])}]", 3
        return {"pi": "π", "I": "i"}.get(str(expr), str(expr)), 3

    def _sum(self, expr: Add) -> str:
        out = ""
        for term in in_order(expr.args):
            text = self.show(term, 0)
            negative = text.startswith("−")
            joint = (" − " if negative else " + ") if out else ("−" if negative else "")
            out += joint + text.removeprefix("−")
        return out

    def _product(self, expr: Mul) -> tuple[str, int]:
        number, rest = expr.as_coeff_Mul()
        above, below = _fraction(rest)
        sign = "−" if number < 0 else ""
        size = abs(number)
        top = ([] if size.p == 1 else [str(size.p)]) if size.is_Rational else [str(size)]
        bottom = [str(size.q)] if size.is_Rational and size.q != 1 else []
        top += self._factors(above)
        bottom += [self.show(f, 1 if isinstance(f, Pow | Symbol) else 2) for f in below]
        last = self._factors([f for f in above if _place(f) > 1])
        if bottom and last:
            head, binding = self._product_text(sign, top[: len(top) - len(last)] or ["1"], bottom)
            return " ".join([head, *last]), binding
        return self._product_text(sign, top or ["1"], bottom)

    def _factors(self, factors: list[Any]) -> list[str]:
        """Factors side by side; an operator that others follow is bracketed, lest it seem to act on them."""
        shown = []
        for f in factors:
            followed = isinstance(f, Operator) and f is not factors[-1]
            shown.append(self.show(f, 3 if followed else 2 if isinstance(f, Add) else 1))
        return shown

    def _product_text(self, sign: str, top: list[str], bottom: list[str]) -> tuple[str, int]:
        text = sign + " ".join(top)
        if bottom:
            low = " ".join(bottom)
            text += f"/({low})" if len(bottom) > 1 else f"/{low}"
        return text, 0 if sign else 1

    def _power(self, expr: Pow) -> tuple[str, int]:
        base, exponent = expr.args
        if exponent == Rational(1, 2):
            return f"√({self.show(base)})", 3
        if exponent.could_extract_minus_sign() and exponent.is_number:
            return f"1/{self.show(Pow(base, -exponent), 2)}", 1
        head = self.show(base, 3)
        if isinstance(exponent, Integer):
            return head + str(exponent).translate(SUPERSCRIPT), 3
        return f"{head}^{self.show(exponent, 3)}", 3

    def _components(self, expr: Components) -> tuple[str, int]:
        names = self.axes if len(self.axes) == expr.size else DEFAULT_AXES[expr.size]
        if expr.rank == 2:
            rows = (", ".join(self.show(x) for x in row.args) for row in expr.args)
            return f"[{'; '.join(rows)}]", 3
        parts = [
            HATS[name] if a == 1 else f"{self.show(a, 1)} {HATS[name]}"
            for a, name in zip(expr.args, names, strict=True)
            if a != 0
        ]
        if len(parts) == 1:
            return parts[0], 3 if parts[0] in HATS.values() else 1
        return " + ".join(parts), 0

    def _operator(self, expr: Operator) -> tuple[str, int]:
        if isinstance(expr, Advect):
            stream, shown = self._stream(expr.args[0]), self.show(expr.args[1], 3)
            return f"{stream} {shown}" if stream in UNIT_STREAMS else f"({stream}){shown}", 2
        if isinstance(expr, Multiplier):
            return f"[{self.show(expr.args[1])}]{self.show(expr.args[0], 3)}", 2
        if expr.word == "norm":
            return f"|{self.show(expr.args[0])}|", 3
        if expr.word in ("transpose", "trace"):
            inner = self.show(expr.args[0], 3)
            return (f"{inner}ᵀ", 3) if expr.word == "transpose" else (f"tr {inner}", 2)
        if isinstance(expr, Div) and isinstance(expr.args[0], Grad):
            return self._operator(Laplacian(*expr.args[0].args))
        sign = SIGNS[expr.word]
        if len(expr.args) == 1:
            return sign + self.show(expr.args[0], 2), 2
        return sign.join(self.show(a, 3) for a in expr.args), 1

    def _stream(self, v: Any) -> str:
        """v.grad inside parentheses; along known components as d_x, d_y, d_z."""
        if not isinstance(v, Components):
            return f"{self.show(v, 2)}·∇"
        names = self.axes if len(self.axes) == v.size else DEFAULT_AXES[v.size]
        parts = [
            f"∂_{n}" if a == 1 else f"{self.show(a, 1)} ∂_{n}"
            for a, n in zip(v.args, names, strict=True)
            if a != 0
        ]
        return " + ".join(parts)


def _fraction(expr: Any) -> tuple[list[Any], list[Any]]:
    """Factors above and below the line, scalars before operators."""
    above, below = [], []
    for f in Mul.make_args(expr):
        if isinstance(f, Pow) and f.exp.is_number and f.exp.is_negative:
            below.append(Pow(f.base, -f.exp))
        else:
            above.append(f)
    above.sort(key=lambda f: (_place(f), not f.is_number, isinstance(f, Add), str(f)))
    return [f for f in above if f != 1], sorted(below, key=str)


def _place(factor: Any) -> int:
    """Parameters, then scalar fields, operators, and unit vectors last."""
    if isinstance(factor, Components):
        return 3
    if isinstance(factor, Operator) or (isinstance(factor, FieldAtom) and factor.rank > 0):
        return 2
    if isinstance(factor, Add) and factor.atoms(FieldAtom):
        return 1
    return 1 if isinstance(factor, FieldAtom) else 0


class PaperLatex(LatexPrinter):  # type: ignore[misc]
    """SymPy's LaTeX with time derivatives first and unit vectors along the model's axes."""

    def __init__(self, axes: str) -> None:
        super().__init__({"mul_symbol": r"\,"})
        self.axes = axes

    def _print_Symbol(self, expr: Any, style: str = "plain") -> str:
        return r"\left|k\right|" if expr == k_abs else cast(str, super()._print_Symbol(expr, style))

    def _as_ordered_terms(self, expr: Any, order: Any = None) -> list[Any]:
        return in_order(Add.make_args(expr))


class LawPrinter(StrPrinter):  # type: ignore[misc]
    """Text that the law reader takes back, time derivatives first."""

    def _as_ordered_terms(self, expr: Any, order: Any = None) -> list[Any]:
        return sorted(Add.make_args(expr), key=term_order)

    def _print_Exp1(self, expr: Any) -> str:
        return "exp(1)"

    def _print_ImaginaryUnit(self, expr: Any) -> str:
        return "i"


def law_text(expr: Expr) -> str:
    """An expression in the grammar that laws are read in."""
    return cast(str, LawPrinter().doprint(expr))
