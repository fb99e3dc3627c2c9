"""An independent check of the linearization: the nonlinear laws themselves, evaluated in numbers.

Every field is its background plus a small plane wave on a periodic grid of the phase k.x − omega t, where derivatives are
spectral. What a law answers at the wave's own harmonic must be its row of the wave matrix times the amplitudes; what is
left over in the maximum norm must fall as the square of the amplitude. Nothing here is shared with the symbolic path.
"""

from __future__ import annotations

import html
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from math import prod
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray
from sympy import Add, Expr, Mul, Pow, lambdify

from ..declare.fields import Components, Field
from ..declare.operators import Identity, Multiplier, Operator, k_abs, k_x, k_y, k_z, omega
from ..errors import BackgroundError

if TYPE_CHECKING:
    from .linearized import LinearizedModel

Array = NDArray[Any]

PHASES = 32
AMPLITUDE = 1e-3
TOLERANCE = 1e-8
"""Largest relative error of a row that passes; the response is extrapolated to fourth order in the amplitude."""
FALL = 3.5
"""Halving the amplitude must divide the remainder by four, or more where it is of higher order (common practice)."""
NOISE = 1e-11
"""A remainder below this part of the law's terms is rounding: the law is linear in this wave."""
DRAWS = 40

FUNCTIONS: dict[str, Callable[[Any], Any]] = {
    "exp": np.exp, "log": np.log, "sin": np.sin, "cos": np.cos, "tan": np.tan, "atan": np.arctan,
    "sinh": np.sinh, "cosh": np.cosh, "tanh": np.tanh, "Abs": np.abs,
}  # fmt: skip


@dataclass(frozen=True)
class AuditRow:
    """The check of one component equation.

    Attributes
    ----------
    law : str
        With the component's name where there is one.
    error : float
        Difference of the law's response and its row of the wave matrix, relative to the larger terms.
    fall : float
        Remainder at the amplitude over the remainder at half of it; 4 for a second-order remainder, NaN
        where the remainder is rounding.
    remainder : float
        The remainder in the maximum norm, relative to the kept terms; of the order of the amplitude.
    passed : bool
    """

    law: str
    error: float
    fall: float
    remainder: float
    passed: bool


@dataclass(frozen=True)
class Audit:
    """The outcome of `LinearizedModel.audit`.

    Attributes
    ----------
    rows : tuple of AuditRow
    seed : int
    amplitude : float
    """

    rows: tuple[AuditRow, ...]
    seed: int
    amplitude: float

    @property
    def passed(self) -> bool:
        """Whether every row passed."""
        return all(row.passed for row in self.rows)

    def __str__(self) -> str:
        width = max(len(r.law) for r in self.rows)
        lines = [
            f"Audit with seed {self.seed}: {'passed' if self.passed else 'FAILED'}",
            f"{'law':<{width}}  {'error':>9}  {'remainder':>9}  at half the amplitude",
        ]
        for r in self.rows:
            fall = "rounding only" if np.isnan(r.fall) else f"1/{r.fall:.3f}"
            mark = "" if r.passed else "   <- differs"
            lines.append(f"{r.law:<{width}}  {r.error:9.1e}  {r.remainder:9.1e}  {fall}{mark}")
        return "\n".join(lines)

    def _repr_html_(self) -> str:
        return f"<pre>{html.escape(str(self))}</pre>"


@dataclass(frozen=True)
class Setting:
    """Random numbers of one audit: parameters, wave vector, frequency, one complex amplitude per unknown."""

    numbers: Mapping[Any, float]
    k: Array
    omega: float
    amplitudes: Mapping[tuple[str, tuple[int, ...]], complex]


def audit(linear: LinearizedModel, *, seed: int = 0) -> Audit:
    """Compare the nonlinear laws with the wave matrix; see `LinearizedModel.audit`."""
    sloped = [f.name for f in linear.fields.values() if f.gradient != 0]
    if sloped:
        raise BackgroundError(
            f"the audit takes periodic backgrounds; that of {', '.join(sloped)} has a gradient: "
            "audit the model without gradient="
        )
    wave = linear.plane_wave(tuple(f"k_{axis}" for axis in linear.axes))
    random = np.random.default_rng(seed)
    for _ in range(DRAWS):
        setting = _drawn(linear, random)
        with np.errstate(all="ignore"):
            values = {a: _laws(linear, setting, a * AMPLITUDE) for a in (1, -1, 0.5, -0.5, 0)}
        if all(np.isfinite(v).all() for v in values.values()):
            break
    expected = _rows_of(wave, setting)
    names = [str(row) for row in wave.rows]
    return Audit(
        tuple(_judged(names[i], i, values, expected[i]) for i in range(len(names))), seed, AMPLITUDE
    )


def _drawn(linear: LinearizedModel, random: np.random.Generator) -> Setting:
    numbers = {s: float(random.uniform(0.5, 1.5)) for s in linear.symbols.values()}
    size = len(linear.axes)
    amplitudes = {
        (f.name, index): complex(*random.normal(size=2))
        for f in linear.fields.values()
        for index in np.ndindex((size,) * f.rank)
    }
    symmetric = {f.name for f in linear.fields.values() if f.symmetric and f.rank == 2}
    for (name, index), _ in list(amplitudes.items()):
        if name in symmetric:
            amplitudes[name, index] = amplitudes[name, tuple(sorted(index))]
    k = random.uniform(0.5, 1.5, size) * random.choice([-1.0, 1.0], size)
    return Setting(numbers, k, float(random.uniform(0.5, 1.5)), amplitudes)


def _judged(
    name: str, i: int, values: Mapping[float, Array], expected: tuple[complex, float]
) -> AuditRow:
    row, size = expected
    phase = np.exp(2j * np.pi * np.arange(PHASES) / PHASES)

    def response(a: float) -> complex:
        odd = 0.5 * (values[a][i] - values[-a][i])
        return complex(2 * np.mean(odd / phase) / (a * AMPLITUDE))

    def remainder(a: float) -> float:
        linear = a * AMPLITUDE * (row * phase).real
        return float(np.abs(values[a][i] - values[0][i] - linear).max())

    found = (4 * response(0.5) - response(1)) / 3
    scale = max(size, abs(found), 1e-300)
    error = abs(found - row) / scale
    whole, half = remainder(1), remainder(0.5)
    noise = NOISE * max(AMPLITUDE * scale, 1e-6 * float(np.abs(values[0][i]).max()), 1e-300)
    fall = float("nan") if whole <= noise or half == 0 else whole / half
    passed = error <= TOLERANCE and (np.isnan(fall) or fall >= FALL or whole <= 10 * noise)
    return AuditRow(name, float(error), fall, whole / (AMPLITUDE * scale), bool(passed))


def _rows_of(wave: Any, setting: Setting) -> list[tuple[complex, float]]:
    """Row times amplitudes from the wave matrix, and the size of the largest term."""
    symbols = [wave.omega, *wave.k, *setting.numbers]
    numbers = [setting.omega, *setting.k, *setting.numbers.values()]
    axes = wave.linear.axes
    keys = [(c.field.name, tuple(axes.index(a) for a in c.component)) for c in wave.columns]
    rows = [[0j] for _ in wave.rows]
    values = lambdify(symbols, list(wave.entries.values()), "numpy")(*numbers)
    for (i, j), value in zip(wave.entries, values, strict=True):
        rows[i].append(complex(value) * setting.amplitudes[keys[j]])
    return [(sum(terms), max(map(abs, terms))) for terms in rows]


# The nonlinear laws in numbers -------------------------------------------------------------------


def _laws(linear: LinearizedModel, setting: Setting, amplitude: float) -> Array:
    """Every component of every law over the phases, shape (rows, phases)."""
    evaluate = _Evaluator(linear, setting, amplitude)
    rows = []
    for law in linear.laws.values():
        size = len(linear.axes)
        value = np.broadcast_to(
            evaluate.value(law.lhs) - evaluate.value(law.rhs), (*(size,) * law.rank, PHASES)
        )
        tensors = [f for f in law.residual.atoms(Field) if f.rank == 2]
        upper = law.rank == 2 and bool(tensors) and all(f.symmetric for f in tensors)
        for index in np.ndindex((size,) * law.rank):
            if not (upper and index != tuple(sorted(index))):
                rows.append(value[index])
    return np.array(rows)


class _Evaluator:
    """Arrays over the phase: scalars (phases,), vectors (axes, phases), tensors (axes, axes, phases)."""

    def __init__(self, linear: LinearizedModel, setting: Setting, amplitude: float) -> None:
        self.setting, self.axes = setting, linear.axes
        self.harmonics = np.fft.fftfreq(PHASES, 1 / PHASES)
        phase = np.exp(2j * np.pi * np.arange(PHASES) / PHASES)
        size = len(linear.axes)
        self.fields: dict[str, Array] = {}
        for f in linear.fields.values():
            shape = (size,) * f.rank
            wave = np.zeros((*shape, PHASES))
            for index in np.ndindex(shape):
                wave[index] = amplitude * (setting.amplitudes[f.name, index] * phase).real
            background = self.value(f.background) if f.background != 0 else np.float64(0.0)
            self.fields[f.name] = wave + background

    def value(self, expr: Any) -> Any:
        if isinstance(expr, Field):
            return self.fields[expr.name]
        if isinstance(expr, Components):
            return self._components(expr)
        if isinstance(expr, Identity):
            return np.eye(len(self.axes))[:, :, None]
        if isinstance(expr, Multiplier):
            return self._multiplied(self.value(expr.args[0]), expr.args[1])
        if isinstance(expr, Operator):
            return getattr(self, f"_{expr.word}")(*(self.value(a) for a in expr.args))
        if isinstance(expr, Add):
            return sum(self.value(a) for a in expr.args)
        if isinstance(expr, Mul):
            return prod(self.value(a) for a in expr.args)
        if isinstance(expr, Pow):
            return np.asarray(self.value(expr.base), float) ** self.value(expr.exp)
        if expr.is_Symbol:
            return self.setting.numbers[expr]
        if expr.is_number:
            return float(expr)
        return FUNCTIONS[type(expr).__name__](*(self.value(a) for a in expr.args))

    def _components(self, expr: Components) -> Array:
        size = len(self.axes)
        made = np.zeros((*(size,) * expr.rank, PHASES))
        for index in np.ndindex((size,) * expr.rank):
            made[index] = self.value(expr.entry(index))
        return made

    def _d(self, f: Array) -> Array:
        """The derivative with respect to the phase."""
        f = np.broadcast_to(f, (*np.shape(f)[:-1], PHASES))
        rate = 1j * np.where(np.abs(self.harmonics) == PHASES // 2, 0, self.harmonics)
        return np.fft.ifft(np.fft.fft(f) * rate).real

    def _multiplied(self, f: Array, g: Expr) -> Array:
        f = np.broadcast_to(f, (*np.shape(f)[:-1], PHASES))
        spectrum = np.fft.fft(f)
        spectrum[np.abs(spectrum) < 1e-15 * np.abs(spectrum).max(initial=0.0)] = 0
        along = dict(zip(self.axes, self.setting.k, strict=True))
        for place, m in enumerate(self.harmonics):
            if np.any(spectrum[..., place]):
                numbers = {
                    s: m * along.get(a, 0.0) for s, a in ((k_x, "x"), (k_y, "y"), (k_z, "z"))
                }
                length = abs(m) * float(np.linalg.norm(self.setting.k))
                known = {
                    **self.setting.numbers,
                    **numbers,
                    k_abs: length,
                    omega: m * self.setting.omega,
                }
                factor = lambdify(list(known), g, "numpy")(*known.values())
                spectrum[..., place] *= factor
        return np.fft.ifft(spectrum).real

    def _partial_t(self, f: Array) -> Array:
        return -self.setting.omega * self._d(f)

    def _grad(self, f: Array) -> Array:
        return np.stack([k * self._d(f) for k in self.setting.k])

    def _div(self, f: Array) -> Array:
        return np.tensordot(self.setting.k, self._d(f), 1)

    def _curl(self, f: Array) -> Array:
        return np.cross(self.setting.k, self._d(f), axisb=0).T

    def _laplacian(self, f: Array) -> Array:
        return np.asarray(self.setting.k @ self.setting.k * self._d(self._d(f)))

    def _advect(self, v: Array, f: Array) -> Array:
        return np.asarray(np.tensordot(self.setting.k, v, 1) * self._d(f))

    def _dot(self, a: Array, b: Array) -> Array:
        left, right = "ij"[-(a.ndim - 1) :], "jk"[: b.ndim - 1]
        rule = f"{left}p,{right}p->{(left + right).replace('j', '')}p"
        return np.asarray(np.einsum(rule, _spread(a), _spread(b)))

    def _cross(self, a: Array, b: Array) -> Array:
        return np.cross(a, b, axis=0)

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


def _spread(f: Array) -> Array:
    """Constants spread over the phases."""
    return np.broadcast_to(f, (*np.shape(f)[:-1], PHASES))
