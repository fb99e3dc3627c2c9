"""Units of measure as text: a small strict grammar of our own, never evaluated as code.

    unit     = factor { ["*" | "·"] factor } { "/" factor }
    factor   = "1" | name [ ["^" | "**"] exponent ] | "(" unit ")"
    exponent = [ "+" | "-" ] digits | "(" [ "+" | "-" ] digits [ "/" digits ] ")"

Nothing but a further "/" follows a "/", so that "kg/m s" cannot be misread. Names are SI units with SI prefixes, and
the units of `OTHERS`. Angles are dimensionless. "G" is gauss to some and giga to others: write gauss, or GHz.
"""

from __future__ import annotations

import difflib
import math
import re
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from typing import Any, NoReturn

from ..errors import UnitError
from .constants import codata

BASE = ("m", "kg", "s", "A", "K", "mol", "cd")
Dimension = tuple[Fraction, ...]
"""The powers of the seven base units, in the order of `BASE`."""

LONGEST = 120
LARGEST_POWER = 24
PREFIXES = {
    "Q": 30, "R": 27, "Y": 24, "Z": 21, "E": 18, "P": 15, "T": 12, "G": 9, "M": 6, "k": 3, "h": 2, "da": 1,
    "d": -1, "c": -2, "m": -3, "u": -6, "µ": -6, "μ": -6, "n": -9, "p": -12, "f": -15, "a": -18, "z": -21,
    "y": -24, "r": -27, "q": -30,
}  # fmt: skip
SI: dict[str, tuple[int, ...]] = {
    "m": (1,), "s": (0, 0, 1), "A": (0, 0, 0, 1), "K": (0, 0, 0, 0, 1), "mol": (0, 0, 0, 0, 0, 1),
    "cd": (0, 0, 0, 0, 0, 0, 1), "rad": (), "sr": (), "Hz": (0, 0, -1), "N": (1, 1, -2), "Pa": (-1, 1, -2),
    "J": (2, 1, -2), "W": (2, 1, -3), "C": (0, 0, 1, 1), "V": (2, 1, -3, -1), "F": (-2, -1, 4, 2),
    "ohm": (2, 1, -3, -2), "Ω": (2, 1, -3, -2), "S": (-2, -1, 3, 2), "Wb": (2, 1, -2, -1), "T": (0, 1, -2, -1), "H": (2, 1, -2, -2),
}  # fmt: skip
"""SI units of scale 1 by their powers of the base units; each takes prefixes."""
OTHERS = {
    "g": (Fraction(1, 1000), "kg"), "gauss": (Fraction(1, 10**4), "T"), "bar": (Fraction(10**5), "Pa"),
    "torr": (Fraction(101325, 760), "Pa"), "Torr": (Fraction(101325, 760), "Pa"), "erg": (Fraction(1, 10**7), "J"),
    "dyn": (Fraction(1, 10**5), "N"), "eV": (Fraction("1.602176634e-19"), "J"),
}  # fmt: skip
"""Other units that take prefixes, by scale and SI unit (torr = atm/760; the electronvolt by the SI of 2019)."""
PLAIN = {
    "kg": (Fraction(1), "kg"), "min": (Fraction(60), "s"), "atm": (Fraction(101325), "Pa"),
    "angstrom": (Fraction(1, 10**10), "m"), "Td": (Fraction(1, 10**21), "V m^2"), "dimensionless": (Fraction(1), "1"),
}  # fmt: skip
"""Units that take no prefix; so do the atomic mass unit (u, Da, amu) and the degree (deg)."""
WORDS = {
    "meter": "m", "metre": "m", "gram": "g", "kilogram": "kg", "second": "s", "ampere": "A", "kelvin": "K", "mole": "mol",
    "candela": "cd", "radian": "rad", "steradian": "sr", "hertz": "Hz", "newton": "N", "pascal": "Pa", "joule": "J",
    "watt": "W", "coulomb": "C", "volt": "V", "farad": "F", "siemens": "S", "weber": "Wb", "tesla": "T", "henry": "H",
    "Ohm": "ohm", "Å": "angstrom", "Gauss": "gauss", "Da": "u", "amu": "u", "degree": "deg",
}  # fmt: skip
SUPERSCRIPTS = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻", "0123456789-")
NAMED = {
    (2, 1, -2): "J", (1, 1, -2): "N", (-1, 1, -2): "Pa", (2, 1, -3): "W", (0, 0, 1, 1): "C", (2, 1, -3, -1): "V",
    (1, 1, -3, -1): "V/m", (0, 1, -2, -1): "T", (-2, 1, -2): "N/m^3", (-1, 1, -3): "W/m^3", (-3, 0, 1, 1): "C/m^3",
    (-2, 0, 0, 1): "A/m^2", (-3, -1, 4, 2): "F/m", (1, 1, -2, -2): "H/m", (2, 1, -2, 0, -1): "J/K",
}  # fmt: skip
"""Familiar names, shown behind the base units in a message."""

TOKEN = re.compile(
    r"\s*(?:(?P<name>[^\W\d_]+(?:_[^\W\d_]+)*)|(?P<number>\d+)|(?P<sign>\*\*|[-+*·/^()]))\s*"
)


@dataclass(frozen=True)
class Unit:
    """A unit of measure.

    Attributes
    ----------
    text : str
        As it was written.
    scale : Fraction
        How many SI units it is, exactly.
    dimension : tuple of Fraction, length 7
        Powers of m, kg, s, A, K, mol, cd.
    """

    text: str
    scale: Fraction
    dimension: Dimension

    def __str__(self) -> str:
        return self.text


def dimension(*powers: Any) -> Dimension:
    """Powers of m, kg, s, A, K, mol, cd, the last ones left out where they are 0."""
    return tuple(Fraction(p) for p in (*powers, *(0,) * (len(BASE) - len(powers))))


NONE = dimension()


def product(a: Dimension, b: Dimension, power: Any = 1) -> Dimension:
    """The dimension of a * b**power."""
    return tuple(x + y * power for x, y in zip(a, b, strict=True))


def dimension_text(powers: Dimension) -> str:
    """A dimension in base units, "kg m^-3 s^-1", with the familiar name where there is one."""
    order = [(1, "kg"), (0, "m"), *list(enumerate(BASE))[2:]]
    shown = " ".join(_power_text(unit, powers[i]) for i, unit in order if powers[i])
    familiar = next((name for key, name in NAMED.items() if dimension(*key) == powers), "")
    return f"{shown} ({familiar})" if familiar else shown or "1"


def _power_text(unit: str, power: Fraction) -> str:
    if power == 1:
        return unit
    return f"{unit}^{power}" if power.denominator == 1 else f"{unit}^({power})"


@lru_cache(maxsize=512)
def read_unit(text: str) -> Unit:
    """The unit that a text names.

    Parameters
    ----------
    text : str
        For example "m**-3", "kg m/s**2", "eV", "1", "rad/s", "GHz".

    Raises
    ------
    UnitError
        When the text cannot be read, saying what is wrong with it.

    Examples
    --------
    >>> read_unit("cm**-3").scale
    Fraction(1000000, 1)
    >>> print(dimension_text(read_unit("V/m").dimension))
    kg m s^-3 A^-1 (V/m)
    """
    if not isinstance(text, str):
        raise UnitError(f"a unit is given as text such as 'm**-3' or 'eV', not as {text!r}")
    scale, powers = _Reader(text).whole()
    return Unit(text.strip() or "1", scale, powers)


Value = tuple[Fraction, Dimension]


class _Reader:
    """One pass over the text of a unit."""

    def __init__(self, text: str) -> None:
        self.text = text
        if len(text) > LONGEST:
            raise UnitError(f"a unit of {len(text)} characters is not read; at most {LONGEST} are")
        self.tokens: list[str] = []
        self.close_by: list[bool] = []
        self._split(text.translate(SUPERSCRIPTS))
        self.place = 0

    def _split(self, text: str) -> None:
        """Tokens, and whether each follows the one before without a space."""
        position = 0
        while position < len(text.rstrip()):
            match = TOKEN.match(text, position)
            if match is None:
                self.fail(f"the character {text[position]!r} has no meaning here")
            self.tokens.append(match.group().strip())
            self.close_by.append(not (match.group()[0].isspace() or text[position - 1].isspace()))
            position = match.end()

    def fail(self, message: str) -> NoReturn:
        raise UnitError(f"unit '{self.text}': {message}")

    def peek(self) -> str:
        return self.tokens[self.place] if self.place < len(self.tokens) else ""

    def take(self) -> str:
        self.place += 1
        return self.tokens[self.place - 1]

    def whole(self) -> Value:
        value = self.product() if self.tokens else (Fraction(1), NONE)
        if self.peek():
            self.fail(f"'{self.peek()}' is not expected")
        return value

    def product(self) -> Value:
        value, divided = self.factor(), False
        while self.peek() not in ("", ")"):
            divides = self.peek() == "/"
            if divided and not divides:
                self.fail(
                    "a factor after '/' can be read in two ways; put it before, or use parentheses"
                )
            if self.peek() in ("*", "·", "/"):
                self.take()
            divided = divides
            scale, powers = self.factor()
            sign = -1 if divides else 1
            value = value[0] * scale**sign, product(value[1], powers, sign)
        return value

    def factor(self) -> Value:
        token = self.take() if self.peek() else self.fail("a unit is missing at the end")
        if token == "(":
            value = self.product()
            self.close()
            return value
        if token == "1":
            return Fraction(1), NONE
        if token.isdigit():
            self.fail("a number other than 1 is not a unit; put it into the value")
        if not token[0].isalpha():
            self.fail(f"'{token}' stands where a unit is needed")
        return self.powered(*self.named(token))

    def close(self) -> None:
        if self.peek() != ")":
            self.fail("a ')' is missing")
        self.take()

    def adjacent(self) -> bool:
        return self.close_by[self.place]

    def powered(self, scale: Fraction, powers: Dimension) -> Value:
        marked = self.peek() in ("^", "**")
        if marked:
            self.take()
        elif not (self.peek().isdigit() or self.peek() in ("-", "+")) or not self.adjacent():
            return scale, powers
        exponent = self.exponent(marked)
        if abs(exponent) > LARGEST_POWER or exponent.denominator > LARGEST_POWER:
            self.fail(f"a power beyond {LARGEST_POWER} is not read")
        return self.root(scale, exponent), product(NONE, powers, exponent)

    def exponent(self, marked: bool) -> Fraction:
        if marked and self.peek() == "(":
            self.take()
            value = self.signed()
            if self.peek() == "/":
                self.take()
                value /= self.digits() or self.fail("division by zero")
            self.close()
            return value
        return self.signed()

    def signed(self) -> Fraction:
        sign = self.take() if self.peek() in ("-", "+") else "+"
        return Fraction(-self.digits() if sign == "-" else self.digits())

    def digits(self) -> int:
        if not self.peek().isdigit():
            self.fail("a power is a whole number, or a fraction in parentheses")
        return int(self.take())

    def root(self, scale: Fraction, exponent: Fraction) -> Fraction:
        """A power of a scale, where it is rational."""
        whole = scale**exponent.numerator
        top, bottom = (_whole_root(n, exponent.denominator) for n in whole.as_integer_ratio())
        if top is None or bottom is None:
            self.fail("this root has no exact scale; use SI units under a root")
        return Fraction(top, bottom)

    def named(self, name: str) -> Value:
        name = WORDS.get(name, name)
        found = _known(name)
        if found is None and (name in ("G", "Gs") or (name[-1] == "G" and name[:-1] in PREFIXES)):
            self.fail("'G' is gauss to some and giga to others; write gauss (kgauss), or GHz, GW")
        if found is None:
            names = [*SI, *OTHERS, *PLAIN, *WORDS, "u", "deg"]
            near = [n for n in names if n.lower() == name.lower()]
            near = near or difflib.get_close_matches(name, names, 3)
            hint = (
                f"did you mean {' or '.join(near)}?" if near else "use SI units, eV, u, gauss ..."
            )
            self.fail(f"'{name}' is not a known unit; {hint}")
        return found


def _known(name: str) -> Value | None:
    """A unit's scale and dimension by its name, with or without a prefix."""
    if name == "u":
        return Fraction(repr(codata("u"))), dimension(0, 1)
    if name == "deg":
        return Fraction(math.pi) / 180, NONE
    if name in PLAIN or name in OTHERS or name in SI:
        return _unprefixed(name)
    for prefix, power in PREFIXES.items():
        stem = name[len(prefix) :]
        if name.startswith(prefix) and (stem in SI or stem in OTHERS):
            scale, powers = _unprefixed(stem)
            return scale * Fraction(10) ** power, powers
    return None


def _unprefixed(name: str) -> Value:
    if name in SI:
        return Fraction(1), dimension(*SI[name])
    scale, text = (PLAIN | OTHERS)[name]
    return scale, dimension(0, 1) if text == "kg" else read_unit(text).dimension


def _whole_root(n: int, degree: int) -> int | None:
    guess = round(n ** (1 / degree)) if degree > 1 else n
    return next((g for g in (guess - 1, guess, guess + 1) if g >= 0 and g**degree == n), None)
