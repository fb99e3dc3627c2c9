"""The words of typed mathematics: how names are spelled and found, functions, and what to write instead."""

from __future__ import annotations

import difflib
import re
import unicodedata
from collections.abc import Callable, Mapping
from typing import Any

import sympy
from sympy import Expr, S

from .glyphs import SUBSCRIPTS, TILDE
from .notation import GREEK_LETTER
from .reader import FUNCTIONS, NAMED_NUMBERS

Names = Mapping[str, Any]
Step = Callable[..., Any]

GREEK_NAME = {glyph: name for name, glyph in GREEK_LETTER.items()}
GREEK_NAME |= {"ϵ": "epsilon", "ϕ": "phi", "ϑ": "theta", "ϱ": "rho", "ϰ": "kappa", "ς": "sigma"}
GREEK_NAME |= {"µ": "mu", "\u2126": "Omega", "ℏ": "hbar", "∥": "parallel", "⊥": "perp"}
PRIMES = {"′": "'", "″": "''", "‴": "'''", "’": "'"}

TYPED_FUNCTIONS: dict[str, Step] = FUNCTIONS | {
    "ln": sympy.log,
    "abs": sympy.Abs,
    "Abs": sympy.Abs,
    "cot": sympy.cot,
    "coth": sympy.coth,
    "sec": sympy.sec,
    "csc": sympy.csc,
    "arcsin": sympy.asin,
    "arccos": sympy.acos,
    "arctan": sympy.atan,
}
SIDE_BY_SIDE = set(TYPED_FUNCTIONS) - {"sqrt", "abs", "Abs", "exp"}
"""Functions that end the argument of the one before them: sin theta cos theta is a product."""
INVERTIBLE = ("sin", "cos", "tan")
LINEAR = ("grad", "div", "curl", "laplacian")
TYPED_NUMBERS = NAMED_NUMBERS | {"I": S.ImaginaryUnit}
INFINITY = ("∞", "infinity", "inf", "oo")
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
LONGEST_SPLIT = 40


def plain(name: str) -> str:
    """A typed name in plain spelling: Greek written out, ω₀ as omega_0, no braces, no tilde."""
    return _spelled(_untilded(name), "_")


def spellings(name: str) -> list[str]:
    """The spellings that a typed name may be declared under, the likeliest first.

    Unicode subscripts follow an underscore or none: B₀ is B_0 or B0.
    """
    whole = unicodedata.normalize("NFC", name)
    both = (whole, _untilded(whole))
    found = [_spelled(text, joint) for text in both for joint in ("_", "")]
    return list(dict.fromkeys([name, whole, *found]))


def _untilded(name: str) -> str:
    """ñ_e, as first-order fields are printed, is the field n_e."""
    return unicodedata.normalize("NFC", unicodedata.normalize("NFD", name).replace(TILDE, ""))


def _spelled(name: str, joint: str) -> str:
    text = re.sub(r"_\{([^}]*)\}", lambda m: "_" + m[1].replace(",", ""), name)
    text = re.sub(f"([{SUBSCRIPTS}]+)", rf"{joint}\1", text)
    lowered = (unicodedata.normalize("NFKC", c) if c in SUBSCRIPTS else c for c in text)
    return "".join(PRIMES.get(c, GREEK_NAME.get(c, c)) for c in lowered)


def declared(name: str, names: Names) -> list[str]:
    """The keys that a typed name stands for; more than one where its spelling leaves them open."""
    if name in names:
        return [name]
    keys = [s for s in spellings(name) if s in names] or _glyph_keys(name, names)
    different = {id(names[key]): key for key in reversed(keys)}
    return [key for key in keys if key in different.values()]


def _glyph_keys(name: str, names: Names) -> list[str]:
    """Declared names that are themselves written with glyphs."""
    spelled = set(spellings(name))
    return [key for key in names if not key.isascii() and spelled & set(spellings(key))]


def number_named(name: str) -> Expr | None:
    """π and i (or I), where these are not declared."""
    return next((TYPED_NUMBERS[s] for s in spellings(name) if s in TYPED_NUMBERS), None)


def derivatives(name: str, names: Names) -> list[Step]:
    """The steps of partial_t, d_t, partial_xx ..., by the callables partial_x in `names`."""
    match = re.fullmatch(r"(?:d|partial)_([a-z]+)", name)
    steps = [names.get(f"partial_{letter}") for letter in match[1]] if match else []
    return [step for step in steps if step is not None] if all(map(callable, steps)) else []


def is_linear(name: str) -> bool:
    """Whether a callable is a derivative, which constants pass."""
    return name in LINEAR or name.startswith(("partial_", "d_"))


def split(name: str, names: Names) -> list[str]:
    """The name as a product of known names, in the fewest pieces; [] where it is none."""
    if len(name) > LONGEST_SPLIT:
        return []
    best: list[list[str] | None] = [[]]
    for end in range(1, len(name) + 1):
        ways = [
            [*head, name[start:end]]
            for start, head in enumerate(best)
            if head is not None and _is_factor(name[start:end], names)
        ]
        best.append(min(ways, key=len) if ways else None)
    return best[-1] or []


def _is_factor(piece: str, names: Names) -> bool:
    return piece in TYPED_NUMBERS or isinstance(names.get(piece), Expr)


def suggestion(name: str, names: Names, pieces: list[str]) -> str:
    """What may have been meant by a name that is not declared."""
    near = difflib.get_close_matches(name, [*names, *TYPED_FUNCTIONS], 3)
    if pieces:
        joined = [n for n in near if n.replace("_", "") == name]
        near = ["*".join(pieces), *joined]
    return f"; did you mean {' or '.join(near)}?" if near else "."
