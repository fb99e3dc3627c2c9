"""Straight-line programs in twice the working precision, every number with a bound on its error: made, and replayed.

A number is (high, low, bound): high + low is off by at most `bound`. The rules are proven in docs/certificate.md,
section 9. Complex numbers go by the same rules, which are stated for them.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from enum import IntEnum
from fractions import Fraction
from typing import Any, NamedTuple

import numpy as np
from numpy.typing import NDArray

from ..exact.pencil import Image
from .doubledouble import UNIT, complex_times, plus, times
from .family import Exact
from .scaling import in_binary

ONE: Exact = Fraction(1), Fraction(0)
ZERO: Exact = Fraction(0), Fraction(0)

MINUS_ERROR, QUOTIENT_ERROR = 48 * UNIT**2, 300 * UNIT**2
"""What rounding adds, relative to |a| + |b c| and to |a / b|."""
TINY = 2.0**-1060
"""More than underflow adds to one operation."""
ABOVE = 1 + 2.0**-40
"""Covers the rounding of a bound itself."""


class Ball(NamedTuple):
    """Numbers, real or complex, in high and low part, and bounds on their errors."""

    high: NDArray[Any]
    low: NDArray[Any]
    bound: NDArray[np.float64]


def minus_product(a: Ball, b: Ball, c: Ball) -> Ball:
    """a - b c."""
    inexact = np.iscomplexobj(b.high) or np.iscomplexobj(c.high)
    product = (complex_times if inexact else times)((-b.high, -b.low), (c.high, c.low))
    high, low = plus((a.high, a.low), product)
    sizes = np.abs(b.high), np.abs(c.high)
    bound = a.bound + sizes[0] * c.bound + (sizes[1] + c.bound) * b.bound
    bound += MINUS_ERROR * (np.abs(a.high) + sizes[0] * sizes[1]) + TINY
    return Ball(high, low, bound * ABOVE)


def quotient(a: Ball, b: Ball) -> Ball:
    """a / b, with an infinite bound where b is not told from zero."""
    first = a.high / b.high
    zero = np.zeros_like(a.bound)
    rest = minus_product(Ball(a.high, a.low, zero), Ball(first, zero, zero), b)
    high, low = plus((first, zero), (rest.high / b.high, zero))
    size = np.abs(b.high)
    bound = QUOTIENT_ERROR * np.abs(a.high) + a.bound + np.abs(high) * b.bound + TINY
    bound = np.where(size > 2 * b.bound, bound / (size - b.bound), np.inf)
    return Ball(high, low, bound * ABOVE + TINY)


class Step(IntEnum):
    """a - b c, and a / b."""

    MINUS = 0
    OVER = 1


@dataclass(frozen=True)
class Program:
    """Numbers, then the swept quantities, then the result of every step, in registers one after another.

    Attributes
    ----------
    numbers : tuple of Ball
        One value each.
    steps : tuple of (Step, int, int, int)
        The operation and the registers that it takes.
    results : tuple of int
        Registers of what is wanted.
    """

    numbers: tuple[Ball, ...]
    steps: tuple[tuple[int, int, int, int], ...]
    results: tuple[int, ...]

    @np.errstate(all="ignore")
    def run(self, swept: Sequence[Ball]) -> list[Ball]:
        """The results for arrays of the swept quantities."""
        registers = [*self.numbers, *swept]
        for step in self.steps:
            registers.append(done(step, registers))
        return [registers[i] for i in self.results]


def done(step: tuple[int, int, int, int], registers: Sequence[Ball]) -> Ball:
    kind, a, b, c = step
    if kind == Step.OVER:
        return quotient(registers[a], registers[b])
    return minus_product(registers[a], registers[b], registers[c])


class Tape:
    """Records steps as they are made.

    Every register, be it a number, an input or the result of a step, has its image in a prime field, which tells what
    vanishes identically, and its values at some sample points, which tell what is small.

    Parameters
    ----------
    image : Image
    inputs : sequence of int
        The images of the swept quantities.
    samples : sequence of Ball
        Their values at the sample points.
    """

    def __init__(self, image: Image, inputs: Sequence[int], samples: Sequence[Ball]) -> None:
        self._prime, self._field = image.prime, image
        self._images: list[int] = []
        self._values: list[Ball] = []
        self._bits: list[NDArray[np.float64]] = []
        self._lost: list[NDArray[np.float64]] = []
        self._inputs, self._points = len(inputs), samples[0].high.shape
        for register in zip(inputs, samples, strict=True):
            self._register(*register)
        self._numbers: dict[Exact, int] = {}
        self._steps: dict[tuple[int, int, int, int], int] = {}

    def number(self, value: Exact) -> int:
        if value not in self._numbers:
            image = self._field.number(value)
            self._numbers[value] = self._register(image, rounded(value))
        return self._numbers[value]

    def minus(self, a: int, b: int, c: int) -> int:
        """The register of a - b c."""
        return self._done(
            (Step.MINUS, a, b, c), self._images[a] - self._images[b] * self._images[c]
        )

    def over(self, a: int, b: int) -> int:
        """The register of a / b."""
        inverse = pow(self._images[b], -1, self._prime)
        return self._done((Step.OVER, a, b, b), self._images[a] * inverse)

    def _done(self, step: tuple[int, int, int, int], image: int) -> int:
        if step not in self._steps:
            with np.errstate(all="ignore"):
                value = done(step, self._values)
            self._steps[step] = self._register(image, value)
        return self._steps[step]

    def _register(self, image: int, value: Ball) -> int:
        self._images.append(image % self._prime)
        self._values.append(value)
        with np.errstate(all="ignore"):
            bits = np.log2(np.abs(value.high))
            lost = np.log2(value.bound) - bits - 2 * np.log2(UNIT)
        self._bits.append(np.broadcast_to(bits, self._points))
        self._lost.append(np.broadcast_to(lost, self._points))
        return len(self._images) - 1

    def image(self, register: int) -> int:
        return self._images[register]

    def bits(self, registers: Sequence[int]) -> NDArray[np.float64]:
        """The binary logarithms of the sizes, shape (registers, sample points)."""
        return np.array([self._bits[r] for r in registers])

    def largest(self, registers: Sequence[int]) -> NDArray[np.float64]:
        return np.asarray(self.bits(registers).max(axis=0))

    def lost(self, registers: Sequence[int]) -> NDArray[np.float64]:
        """How many bits of twice the working precision are lost."""
        return np.array([self._lost[r] for r in registers])

    def program(self, results: Sequence[int]) -> Program:
        """The steps that the results need."""
        needed, kept = set(results), []
        for step, register in reversed(self._steps.items()):
            if register in needed:
                kept.append((step, register))
                needed |= set(step[1:])
        numbers = [r for r in self._numbers.values() if r in needed]
        order = [*numbers, *range(self._inputs), *(r for _, r in reversed(kept))]
        place = {register: n for n, register in enumerate(order)}
        return Program(
            tuple(self._values[r] for r in numbers),
            tuple((k, place[a], place[b], place[c]) for (k, a, b, c), _ in reversed(kept)),
            tuple(place[r] for r in results),
        )


def rounded(value: Exact) -> Ball:
    """An exact number in high and low part, with its error; real if it is."""
    parts = [_part(x) for x in value]
    high, low = (np.array([parts[0][i] + (1j * parts[1][i] if value[1] else 0.0)]) for i in (0, 1))
    return Ball(high, low, np.array([parts[0][2] + parts[1][2]]))


def _part(x: Fraction) -> tuple[float, float, float]:
    if not x:
        return 0.0, 0.0, 0.0
    high, low, exponent = in_binary(x)
    scale = 2.0**exponent
    exact = (Fraction(high) + Fraction(low)) * Fraction(2) ** exponent == x
    return high * scale, low * scale, 0.0 if exact else abs(high) * scale * 2 * UNIT**2
