"""The nonlinear laws in numbers, for backgrounds with a small plane wave on them; nothing is shared with the symbolic path.

What a law holds is a function of the wave's phase k.x − omega t and, where backgrounds have a gradient, of position
beside it. The phase runs over a periodic grid with spectral derivatives. Position runs over a circle around 0 in the
complex plane, one for each axis along which a background changes: there the derivatives of an analytic function come from
its Fourier coefficients (Lyness and Moler 1967, SIAM J. Numer. Anal. 4, 202, from memory), and its mean is the value at 0.
"""

from __future__ import annotations

from collections.abc import Callable
from functools import cache
from math import prod
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray
from sympy import Add, Dummy, Expr, Mul, Pow, lambdify

from ..declare.fields import Components, Field
from ..declare.law import Law
from ..declare.operators import Identity, Multiplier, Operator, k_abs, k_x, k_y, k_z, omega
from .trial import LIBRARIES, Trial

if TYPE_CHECKING:
    from .linearized import LinearizedModel

Array = NDArray[Any]

PHASES = 16
PHASE = np.exp(2j * np.pi * np.arange(PHASES) / PHASES)
HARMONICS = np.fft.fftfreq(PHASES, 1 / PHASES)
CLEAN = 1e-14
"""Harmonics below this part of the largest are rounding, which high derivatives would amplify."""
PLACES = 16
LEVI_CIVITA = np.cross(np.eye(3)[:, None], np.eye(3)[None, :])
"""The last index is that of the product."""
POWERS = np.where(np.arange(PLACES) < 12, np.arange(PLACES), 0)
"""The powers of position by their place in the spectrum; the highest are rounding, which products would fold back."""
CIRCLE = 0.05 * np.exp(2j * np.pi * np.arange(PLACES) / PLACES)
"""Small against lengths of order one over which backgrounds change, and large enough for second derivatives."""


@cache
def _numerical(kind: Any, count: int) -> Callable[..., Any]:
    """A smooth function of scalars by its numerical namesake."""
    slots = [Dummy() for _ in range(count)]
    made: Callable[..., Any] = lambdify(slots, kind(*slots), LIBRARIES)
    return made


def _entries(value: Expr, rank: int, size: int) -> list[Any]:
    """The components of a constant, in the order of `np.ndindex`."""
    every = np.ndindex((size,) * rank)
    return [value.entry(i) if isinstance(value, Components) else value for i in every]


class Evaluation:
    """A model with a plane wave of an amplitude on its background, in numbers.

    Arrays have the axes of the tensor, then positions (one axis for each along which a background changes), then phases.
    """

    def __init__(self, linear: LinearizedModel, trial: Trial, amplitude: float) -> None:
        self.trial, self.size, self.axes = trial, len(linear.axes), linear.axes
        fields = linear.fields.values()
        slopes = {f.name: self._slope(f) for f in fields if f.gradient != 0}
        self.changing = [i for i in range(self.size) if any(s[i].any() for s in slopes.values())]
        self.grid = (PLACES,) * len(self.changing) + (PHASES,)
        self.fields: dict[str, Array] = {}
        for f in fields:
            shape = (self.size,) * f.rank
            waves = [trial.amplitudes[f.name, i] * PHASE for i in np.ndindex(shape)]
            wave = amplitude * np.reshape(waves, (*shape, *self._beside(PHASES, -1))).real
            self.fields[f.name] = wave + self.value(f.background)
            for i in self.changing if f.name in slopes else ():
                slope = np.reshape(slopes[f.name][i], (*shape, *(1 for _ in self.grid)))
                self.fields[f.name] = self.fields[f.name] + slope * self._position(i)

    def law(self, law: Law) -> Array:
        """Every component of what a law leaves at position 0, shape (size,)*rank + (phases,)."""
        return np.broadcast_to(
            self.here(self.value(law.lhs) - self.value(law.rhs)),
            (*(self.size,) * law.rank, PHASES),
        )

    def here(self, f: Any) -> Array:
        """A value at position 0, over the phases."""
        places = tuple(range(-len(self.grid), -1))
        return np.asarray(self._spread(f).mean(places)) if places else self._spread(f)

    def value(self, expr: Any) -> Any:
        if isinstance(expr, Field):
            return self.fields[expr.name]
        if isinstance(expr, Components):
            shape = (self.size,) * expr.rank
            entries = [self._spread(self.value(expr.entry(i))) for i in np.ndindex(shape)]
            return np.reshape(entries, (*shape, *self.grid))
        if isinstance(expr, Identity):
            return np.reshape(np.eye(self.size), (self.size, self.size, *(1 for _ in self.grid)))
        if isinstance(expr, Multiplier):
            return self._multiplied(self.value(expr.args[0]), expr.args[1])
        if isinstance(expr, Operator):
            return getattr(self, f"_{expr.word}")(*(self.value(a) for a in expr.args))
        if isinstance(expr, Add):
            return sum(self.value(a) for a in expr.args)
        if isinstance(expr, Mul):
            return prod(self.value(a) for a in expr.args)
        if isinstance(expr, Pow):
            return np.asarray(self.value(expr.base)) ** self.value(expr.exp)
        if expr.is_Symbol:
            return self.trial.numbers[expr]
        if expr.is_number:
            return complex(expr) if expr.is_real is False else float(expr)
        return _numerical(expr.func, len(expr.args))(*(self.value(a) for a in expr.args))

    # Phase and position ------------------------------------------------------------------------

    def _beside(self, length: int, axis: int) -> list[int]:
        """The shape of what varies along one axis of the grid only."""
        shape = [1 for _ in self.grid]
        shape[axis] = length
        return shape

    def _place(self, i: int) -> int:
        """The axis of the grid for position along axis i of the model, counted from the end."""
        return self.changing.index(i) - len(self.grid)

    def _position(self, i: int) -> Array:
        return np.reshape(CIRCLE, self._beside(PLACES, self._place(i)))

    def _slope(self, field: Field) -> Array:
        """The gradient of a background, direction first."""
        numbers = [self.value(x) for x in _entries(field.gradient, 1 + field.rank, self.size)]
        return np.reshape(numbers, (self.size,) * (1 + field.rank))

    def _spread(self, f: Any) -> Array:
        """Constants spread over the grid."""
        lead = np.shape(f)[: max(np.ndim(f) - len(self.grid), 0)]
        return np.broadcast_to(f, (*lead, *self.grid))

    def _filtered(self, f: Any, factor: Callable[[Array], Any]) -> Array:
        """A function of the phase with each harmonic that it holds multiplied by a factor."""
        spectrum = np.fft.fft(self._spread(f))
        rounding = np.abs(spectrum) <= CLEAN * np.abs(spectrum).max(initial=0.0)  # NaN stays
        made = np.fft.ifft(np.where(rounding, 0, spectrum * factor(HARMONICS)))
        real = np.isrealobj(f) and np.abs(made.imag).max() <= 1e-12 * np.abs(made).max()
        return made.real if real else made

    def _by_phase(self, f: Array) -> Array:
        """The derivative with respect to the phase; the highest harmonic of the grid has none."""
        return self._filtered(f, lambda m: 1j * np.where(np.abs(m) == PHASES // 2, 0, m))

    def _by_position(self, f: Array, i: int) -> Array:
        """The derivative with respect to position beside the phase."""
        place = self._place(i)
        spectrum = np.fft.fft(self._spread(f), axis=place)
        powers = np.reshape(POWERS, self._beside(PLACES, place))
        return np.asarray(np.fft.ifft(spectrum * powers, axis=place) / self._position(i))

    def _multiplied(self, f: Array, g: Expr) -> Array:
        along = dict(zip(self.axes, self.trial.k, strict=True))
        at = {s: along.get(a, 0.0) for s, a in ((k_x, "x"), (k_y, "y"), (k_z, "z"))}
        at[omega] = self.trial.omega
        length = float(np.linalg.norm(self.trial.k))
        number = lambdify([*at, k_abs, *self.trial.numbers], g, LIBRARIES)

        def factor(m: Array) -> Any:
            waves = [m * one for one in at.values()]
            made = number(*waves, np.abs(m) * length, *self.trial.numbers.values())
            mean_left_out = (m == 0) & ~np.isfinite(made)  # by an inverse, as usual
            return np.where(mean_left_out, 0, made)

        return self._filtered(f, factor)

    # The operators, each by its word -----------------------------------------------------------

    def _partial_t(self, f: Array) -> Array:
        return -self.trial.omega * self._by_phase(f)

    def _grad(self, f: Array) -> Array:
        steep = self._by_phase(f)
        made = [self._spread(k * steep) for k in self.trial.k]
        for i in self.changing:
            made[i] = made[i] + self._by_position(f, i)
        return np.stack(made)

    def _div(self, f: Array) -> Array:
        return np.asarray(np.trace(self._grad(f)))

    def _curl(self, f: Array) -> Array:
        d = self._grad(f)
        return np.stack([d[1, 2] - d[2, 1], d[2, 0] - d[0, 2], d[0, 1] - d[1, 0]])

    def _laplacian(self, f: Array) -> Array:
        return self._div(self._grad(f))

    def _advect(self, v: Array, f: Array) -> Array:
        return self._dot(v, self._grad(f))

    def _dot(self, a: Array, b: Array) -> Array:
        a, b = self._spread(a), self._spread(b)
        left = "ab"[: a.ndim - len(self.grid)]
        right = left[-1] + "c"[: b.ndim - len(self.grid) - 1]
        return np.asarray(np.einsum(f"{left}...,{right}...->{left[:-1]}{right[1:]}...", a, b))

    def _cross(self, a: Array, b: Array) -> Array:
        left = "ab"[: a.ndim - len(self.grid)]
        right = "cd"[: b.ndim - len(self.grid)]
        made = f"{left[:-1]}e{right[1:]}"
        return np.asarray(
            np.einsum(f"{left}...,{right}...,{left[-1]}ce->{made}...", a, b, LEVI_CIVITA)
        )

    def _outer(self, a: Array, b: Array) -> Array:
        return np.asarray(a[:, None] * b[None, :])

    def _ddot(self, a: Array, b: Array) -> Array:
        return np.asarray((a * b).sum((0, 1)))

    def _transpose(self, a: Array) -> Array:
        return np.swapaxes(a, 0, 1)

    def _trace(self, a: Array) -> Array:
        return np.asarray(np.trace(a))

    def _norm(self, v: Array) -> Array:
        return np.asarray(np.sqrt((v * v).sum(0)))
