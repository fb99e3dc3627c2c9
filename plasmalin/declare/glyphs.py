"""The marks of ordinary typed mathematics: tokens, and the pairing of |."""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Container
from dataclasses import dataclass, replace
from functools import cache

from ..errors import AmbiguousText, ReadError
from .reader import Token

SUBSCRIPTS = "".join(
    chr(c)
    for c in (*range(0x1D62, 0x1D6B), *range(0x2080, 0x209D), 0x2C7C)
    if unicodedata.decomposition(chr(c)).startswith("<sub>") and chr(c) not in "₊₋₌₍₎"
)
TILDE = "\u0303"
SUPERSCRIPT_DIGITS = "⁰¹²³⁴⁵⁶⁷⁸⁹"

LETTER = rf"[^\W\d_{SUPERSCRIPT_DIGITS}{SUBSCRIPTS}½⅓⅔¼¾]"
TAIL = rf"(?:_\{{[\w,∥⊥]+\}}|[^\W{SUPERSCRIPT_DIGITS}½⅓⅔¼¾]|[{SUBSCRIPTS}{TILDE}]|(?<=_)[∥⊥])"
PRIME = "['′″‴’]"
NAME = rf"{LETTER}{TAIL}*(?:{PRIME}+(?:_{TAIL}+|[{SUBSCRIPTS}]+)?)?"
ORDER = "(?:\\^[1-9]|[²³⁴])?"
TOKEN = re.compile(
    r"(?P<space>\s+)"
    r"|(?P<number>[½⅓⅔¼¾]|(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]+)?)"
    rf"|(?P<raised>[⁺⁻]?[{SUPERSCRIPT_DIGITS}]+)"
    rf"|(?P<partial>∂(?:_\{{?[a-z]+\}}?|[{SUBSCRIPTS}]+))"
    r"|(?P<nabla>∇(?:²|\^2|\s?[·⋅.×])?)"
    rf"|(?P<name>{NAME})"
    r"|(?P<sign>\*\*|<<|>>|->|==|[-+*/^(){}\[\],=|<>≪≫→√∞±∓≡∝≤≥]|[·⋅∙∗×−–—∕÷⁄≈≃≅∼~])"
)
LEIBNIZ = re.compile(
    rf"(?P<leibniz>(?P<d>[∂d])(?P<order>{ORDER})\s*(?P<what>{NAME})?\s*/\s*"
    rf"(?P<by>(?P=d)\s?[txyz]{ORDER}(?:\s?(?P=d)\s?[txyz]{ORDER})*)(?![^\W{SUPERSCRIPT_DIGITS}]|\^))"
)
ORDERED = re.compile(rf"[∂d]\s?([txyz])({ORDER})")
MEANS = {"**": "^", "==": "=", "≪": "<<", "≫": ">>", "→": "->"}
MEANS |= dict.fromkeys("·⋅∙∗×", "*") | dict.fromkeys("−–—", "-") | dict.fromkeys("∕÷⁄", "/")
MEANS |= dict.fromkeys("≈≃≅∼~", "=")
NABLA = {"∇": "grad", "∇²": "laplacian", "∇^2": "laplacian", "∇×": "curl"}
NABLA |= dict.fromkeys(("∇·", "∇⋅", "∇."), "div")
CLOSING = {"(": ")", "[": "]", "{": "}"}
OPERAND_KINDS = ("number", "name", "partial", "nabla", "leibniz")
MOST_BARS = 40


@dataclass(frozen=True)
class Mark(Token):
    """A token whose text is in plain spelling; `position` and `end` are places in what was typed."""

    end: int
    spaced: bool = False
    """Whether a space stands before it."""


def marks(text: str, declared: Container[str] = ()) -> list[Mark]:
    """The tokens of a text, | told apart into |( and )|, ended by an "end" token.

    Where d, dn or dt are declared they are names, and dn/dt is a quotient.
    """
    found, position, spaced = [], 0, False
    while position < len(text):
        match = leibniz(text, position, declared) or TOKEN.match(text, position)
        if match is None:
            raise ReadError(unknown_character(text[position]), text, position)
        kind, raw = str(match.lastgroup), match.group()
        if kind != "space":
            found.append(Mark(kind, _plain(kind, raw), position, match.end(), spaced))
        position, spaced = match.end(), kind == "space"
    found.append(Mark("end", "", len(text), len(text), spaced))
    return paired(found, text)


def leibniz(text: str, position: int, declared: Container[str]) -> re.Match[str] | None:
    """A derivative written as a quotient, ∂²n/∂t² or d/dt, that begins here."""
    if text[position] not in "∂d":
        return None
    match = LEIBNIZ.match(text, position)
    if match is None or match["d"] == "∂":
        return match
    words = {"d", f"d{match['what'] or ''}", *re.findall("d[txyz]", match["by"])}
    return None if any(word in declared for word in words) else match


def unknown_character(character: str) -> str:
    """What is said of a character that no token begins with."""
    if character == "∂":
        return "∂ stands alone; write ∂_t n, ∂_x² n or ∂²n/∂t²"
    return f"the character {character!r} has no meaning here"


def _plain(kind: str, raw: str) -> str:
    if kind == "sign":
        return MEANS.get(raw, raw)
    if kind in ("raised", "number"):
        return unicodedata.normalize("NFKC", raw).replace("−", "-").replace("⁄", "/")
    if kind == "partial":
        return "partial_" + unicodedata.normalize("NFKC", raw[1:]).strip("_{}")
    if kind == "nabla":
        return NABLA[re.sub(r"\s", "", raw)]
    return raw


def paired(tokens: list[Mark], text: str) -> list[Mark]:
    """The tokens with every | marked as opening or closing.

    Raises
    ------
    AmbiguousText
        When the bars can be paired in two ways, with both.
    """
    out = list(tokens)
    for group in _groups(tokens):
        if len(group) > MOST_BARS:
            raise ReadError(f"more than {MOST_BARS} bars |", text, tokens[group[0]].position)
        ways = _two_ways(tokens, group)
        if not ways:
            raise ReadError("this | has no partner", text, tokens[group[0]].position)
        if len(ways) > 1:
            readings = (_grouped(text, tokens, group, w) for w in ways)
            raise AmbiguousText(
                "the bars | pair in two ways", text, tokens[group[0]].position, tuple(readings)
            )
        for i, opens in zip(group, ways[0], strict=True):
            out[i] = replace(tokens[i], kind="bar", text="|(" if opens else ")|")
    return out


def _groups(tokens: list[Mark]) -> list[list[int]]:
    """The places of the bars that can pair: inside the same brackets, between the same commas."""
    done: list[list[int]] = []
    open_groups: list[list[int]] = [[]]
    for i, token in enumerate(tokens):
        if token.text in CLOSING:
            open_groups.append([])
        elif token.text in CLOSING.values() and len(open_groups) > 1:
            done.append(open_groups.pop())
        elif token.text == "|":
            open_groups[-1].append(i)
        elif token.text in (",", "=", "<<", ">>", "->"):
            done.append(open_groups[-1])
            open_groups[-1] = []
    return [g for g in (*done, *open_groups) if g]


def _two_ways(tokens: list[Mark], group: list[int]) -> tuple[tuple[bool, ...], ...]:
    """At most two ways to pair the bars of a group; True opens."""

    @cache
    def ways(at: int, depth: int, before: bool) -> tuple[tuple[bool, ...], ...]:
        if at == len(group):
            return ((),) if depth == 0 else ()
        found: list[tuple[bool, ...]] = []
        for opens in _may(tokens, group[at], depth, before):
            rest = ways(at + 1, depth + (1 if opens else -1), opens)
            found += [(opens, *r) for r in rest]
        return tuple(found[:2])

    return ways(0, 0, True)


def _may(tokens: list[Mark], i: int, depth: int, before: bool) -> list[bool]:
    """Whether the bar at i may open and may close; `before` tells whether the bar before it opened."""
    left, right = tokens[i - 1] if i else None, tokens[i + 1]
    ended = left is not None and (not before if left.text == "|" else _ends_operand(left))
    if not ended:
        return [True]
    if depth == 0:
        return [True]
    starts = right.text == "|" or right.kind in OPERAND_KINDS
    if not starts and right.text not in ("(", "[", "{", "√"):
        return [False]
    spaces = (tokens[i].spaced, right.spaced)
    return {(True, False): [True], (False, True): [False]}.get(spaces, [False, True])


def _ends_operand(token: Mark) -> bool:
    return token.kind in ("number", "name", "raised", "leibniz") or token.text in (")", "]", "}")


def _grouped(text: str, tokens: list[Mark], group: list[int], way: tuple[bool, ...]) -> str:
    """The text with abs(...) for the bars, which shows how they were paired."""
    pieces, last = [], 0
    for i, opens in zip(group, way, strict=True):
        pieces += [text[last : tokens[i].position], " abs(" if opens else ") "]
        last = tokens[i].end
    return " ".join("".join([*pieces, text[last:]]).split())
