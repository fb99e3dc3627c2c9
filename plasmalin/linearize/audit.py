"""An independent check of the linearization: the nonlinear laws themselves, evaluated in numbers.

Every field is its background plus a small plane wave on a periodic grid of the phase k.x − omega t, where derivatives are
spectral. What a law answers at the wave's own harmonic must be its row of the wave matrix times the amplitudes; what is
left over in the maximum norm must fall as the square of the amplitude. Nothing here is shared with the symbolic path.
"""

from __future__ import annotations

import html
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from functools import cache
from math import prod
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray
from sympy import Add, Dummy, Expr, Matrix, Mul, Pow, lambdify

from ..declare.fields import Components, Field
from ..declare.operators import Identity, Multiplier, Operator, k_abs, k_x, k_y, k_z, omega
from ..errors import BackgroundError, ValuesError
from .exchange import Exchange, exchanges

if TYPE_CHECKING:
    from .linearized import LinearizedModel

Array = NDArray[Any]

PHASES = 16
PHASE = np.exp(2j * np.pi * np.arange(PHASES) / PHASES)
HARMONICS = np.fft.fftfreq(PHASES, 1 / PHASES)
AMPLITUDE = 3e-4
TOLERANCE = 1e-8
"""Largest relative error of a row that passes; the response is extrapolated to fourth order in the amplitude."""
FALL = 3.5
"""Halving the amplitude must divide the remainder by four, or more where it is of higher order (common practice)."""
NOISE = 1e-11
"""A remainder below this part of the law's terms is rounding: the law is linear in this wave."""
CLEAN = 1e-14
"""Harmonics below this part of the largest are rounding, which high derivatives would amplify."""
MILD = 0.005
"""The part that is even in the amplitude, beside the odd one; the fourth power of it is what an error is left with."""
DRAWS = 60
NEWTON_STEPS = 40
ORDINARY = (0.05, 20.0)
"""Sizes of parameters, of order one, at which the amplitude is small against every background."""
LIBRARIES = ["scipy", "numpy"]


@dataclass(frozen=True)
class AuditRow:
    """The check of one component equation.

    Attributes
    ----------
    law, component : str
        The component is "" for a scalar law.
    error : float
        Difference of the law's response and its row of the wave matrix, relative to the larger terms.
    fall : float
        Remainder at the amplitude over the remainder at half of it; 4 for a second-order remainder, NaN
        where the remainder is rounding.
    remainder : float
        The remainder in the maximum norm, relative to the kept terms; of the order of the amplitude.
    zeroth : float
        What the law leaves on the background, relative to the kept terms; NaN where an external source
        is assumed to balance it.
    passed : bool
    """

    law: str
    component: str
    error: float
    fall: float
    remainder: float
    zeroth: float
    passed: bool

    def __str__(self) -> str:
        return f"{self.law}, {self.component}" if self.component else self.law


@dataclass(frozen=True)
class Audit:
    """The outcome of `LinearizedModel.audit`.

    Attributes
    ----------
    rows : tuple of AuditRow
    seed : int
    amplitude : float
    exchanges : tuple of Exchange
        Momentum and energy summed over the species, where ready laws were given ``collisions=``.
    """

    rows: tuple[AuditRow, ...]
    seed: int
    amplitude: float
    exchanges: tuple[Exchange, ...] = ()

    @property
    def passed(self) -> bool:
        """Whether every row passed."""
        return all(row.passed for row in self.rows)

    @property
    def conserved(self) -> bool:
        """Whether collisions between species conserve momentum and energy to first order."""
        return all(e.conserved for e in self.exchanges)

    def __str__(self) -> str:
        width = max(len(str(r)) for r in self.rows)
        lines = [
            f"Audit with seed {self.seed}: {'passed' if self.passed else 'FAILED'}",
            f"{'law':<{width}}  {'error':>9}  {'zeroth':>9}  {'remainder':>9}  at half the amplitude",
        ]
        for r in self.rows:
            fall = "rounding only" if np.isnan(r.fall) else f"1/{r.fall:.3f}"
            zeroth = "assumed" if np.isnan(r.zeroth) else f"{r.zeroth:.1e}"
            mark = "" if r.passed else "   <- differs"
            lines.append(
                f"{r!s:<{width}}  {r.error:9.1e}  {zeroth:>9}  {r.remainder:9.1e}  {fall}{mark}"
            )
        return "\n".join([*lines, *map(str, self.exchanges)])

    def _repr_html_(self) -> str:
        return f"<pre>{html.escape(str(self))}</pre>"


@dataclass(frozen=True)
class Setting:
    """Random numbers of one audit: parameters, wave vector, frequency, one complex amplitude per unknown."""

    numbers: Mapping[Any, float]
    k: Array
    omega: float
    amplitudes: Mapping[tuple[str, tuple[int, ...]], complex]

    @property
    def mirrored(self) -> Setting:
        """The same real wave, written as exp[−i(k.x − omega t)]."""
        conjugate = {key: a.conjugate() for key, a in self.amplitudes.items()}
        return Setting(self.numbers, -self.k, -self.omega, conjugate)


@dataclass(frozen=True)
class Expected:
    """One row of the wave matrix in numbers: times the amplitudes, over the phases, its largest term."""

    row: complex
    wave: Array
    size: float


def audit(linear: LinearizedModel, *, seed: Any = 0) -> Audit:
    """Compare the nonlinear laws with the wave matrix; see `LinearizedModel.audit`."""
    if not isinstance(seed, int | np.integer) or seed < 0:
        raise ValuesError(f"seed={seed!r} is not a whole number from 0")
    sloped = [f.name for f in linear.fields.values() if f.gradient != 0]
    if sloped:
        raise BackgroundError(
            f"the audit takes periodic backgrounds; that of {', '.join(sloped)} has a gradient: "
            "audit the model without gradient="
        )
    wave = linear.plane_wave(tuple(f"k_{axis}" for axis in linear.axes))
    seed = int(seed)
    random = np.random.default_rng(seed)
    balance, predict = _balance(linear), _predict(wave)
    best = -1
    with np.errstate(all="ignore"):
        for attempt in range(DRAWS):
            drawn, balanced = _drawn(linear, balance, random, signed=attempt < DRAWS // 2)
            found = {
                a: _laws(linear, drawn, a * AMPLITUDE) for a in (1, -1, 0.5, -0.5, 0.25, -0.25, 0)
            }
            rows_found = predict(drawn)
            defined = bool(np.isfinite([*found.values()]).all())
            defined = defined and bool(np.isfinite([e.row for e in rows_found]).all())
            quality = defined + balanced + (defined and _is_mild(found))
            if quality > best:
                best, values, expected, setting = quality, found, rows_found, drawn
            if best == 3:
                break
        assumed = {b.law for b in linear.background.balances if b.assumed}
        rows = tuple(
            _judged(row, {a: v[i] for a, v in values.items()}, expected[i], row.law in assumed)
            for i, row in enumerate(wave.rows)
        )
        exchanged = exchanges(linear.laws, _values(linear, setting))
    return Audit(rows, seed, AMPLITUDE, exchanged)


def _values(linear: LinearizedModel, setting: Setting) -> Callable[[Expr, float], Array]:
    return lambda expr, a: _spread(_Evaluator(linear, setting, a * AMPLITUDE).value(expr))


def _is_mild(values: Mapping[float, Array]) -> bool:
    """Whether no law is so near a singularity that the amplitude is not small."""
    even = np.abs(values[1] + values[-1] - 2 * values[0]).max(axis=1)
    odd = np.abs(values[1] - values[-1]).max(axis=1)
    return bool((even <= MILD * odd).all())


def _judged(row: Any, values: Mapping[float, Array], expected: Expected, assumed: bool) -> AuditRow:
    def response(a: float) -> complex:
        odd = 0.5 * (values[a] - values[-a])
        return complex(2 * np.mean(odd / PHASE) / (a * AMPLITUDE))

    def remainder(a: float) -> float:
        return float(np.abs(values[a] - values[0] - a * AMPLITUDE * expected.wave).max())

    # Free of the terms in a (a law with |v| v about rest has one) and a^2.
    found = (8 * response(0.25) - 6 * response(0.5) + response(1)) / 3
    whole_law = float(np.abs(values[1]).max())  # matters only where nothing is of first order
    scale = max(expected.size, abs(found), whole_law, 1e-300)
    error = abs(found - expected.row) / scale
    left = float(np.abs(values[0]).max())
    zeroth = float("nan") if assumed else left / scale
    whole, half = remainder(1), remainder(0.5)
    noise = NOISE * max(AMPLITUDE * scale, 1e-6 * left)
    fall = float("nan") if whole <= noise or half == 0 else whole / half
    falls = np.isnan(fall) or fall >= FALL or whole <= 10 * noise
    passed = error <= TOLERANCE and falls and (assumed or zeroth <= TOLERANCE)
    relative = whole / (AMPLITUDE * scale)
    return AuditRow(row.law, row.component, float(error), fall, relative, zeroth, bool(passed))


# Random numbers ----------------------------------------------------------------------------------


Numbers = Mapping[Any, float]


def _drawn(
    linear: LinearizedModel,
    balance: Callable[[Numbers], Numbers | None],
    random: np.random.Generator,
    *,
    signed: bool,
) -> tuple[Setting, bool]:
    """Numbers of order one, and whether they satisfy the conditions of the background."""

    def number(positive: bool) -> float:
        return float(random.uniform(0.5, 1.5) * (1 if positive else random.choice([-1.0, 1.0])))

    size = len(linear.axes)
    drawn = {s: number(bool(s.is_positive) or not signed) for s in linear.symbols.values()}
    balanced = balance(drawn)
    amplitudes: dict[tuple[str, tuple[int, ...]], complex] = {}
    for f in linear.fields.values():
        for index in np.ndindex((size,) * f.rank):
            mirror = (f.name, index[::-1])
            known = f.symmetric and mirror in amplitudes
            made = amplitudes[mirror] if known else complex(*random.normal(size=2))
            amplitudes[f.name, index] = made
    k = np.array([number(False) for _ in range(size)])
    return Setting(balanced or drawn, k, number(False), amplitudes), balanced is not None


def _balance(linear: LinearizedModel) -> Callable[[Numbers], Numbers | None]:
    """What moves numbers to the nearest ones that satisfy the conditions, by Gauss-Newton; None if it fails.

    Steps of positive parameters are relative, so that they stay positive.
    """
    symbols = list(linear.symbols.values())
    residuals = Matrix([c.lhs - c.rhs for c in linear.conditions])
    if not residuals:
        return lambda numbers: numbers
    value = lambdify(symbols, list(residuals), LIBRARIES)
    slope = lambdify(symbols, residuals.jacobian(symbols), LIBRARIES)
    positive = np.array([bool(s.is_positive) for s in symbols])

    def nearest(numbers: Numbers) -> Numbers | None:
        x = np.array([numbers[s] for s in symbols])
        for _ in range(NEWTON_STEPS):
            f = np.array(value(*x), complex)
            if not np.isfinite(f).all():
                return None
            if np.abs(f).max() < 1e-14:
                break
            steep = np.array(slope(*x), complex) * np.where(positive, x, 1.0)
            real_rows = np.concatenate([steep.real, steep.imag])
            step = np.linalg.lstsq(real_rows, np.concatenate([f.real, f.imag]), rcond=1e-12)[0]
            step = np.clip(step, -0.5, 0.5)
            x = np.where(positive, x * np.exp(-step), x - step)
        ordinary = (np.abs(x) > ORDINARY[0]) & (np.abs(x) < ORDINARY[1])
        solved = ordinary.all() and np.abs(value(*x)).max() < 1e-12
        return dict(zip(symbols, x.tolist(), strict=True)) if solved else None

    return nearest


def _predict(wave: Any) -> Callable[[Setting], list[Expected]]:
    """The rows of the wave matrix in numbers; a law that is not real answers otherwise at the mirrored harmonic."""
    axes, parameters = wave.linear.axes, list(wave.linear.symbols.values())
    entries = lambdify([wave.omega, *wave.k, *parameters], list(wave.entries.values()), LIBRARIES)
    keys = [(c.field.name, tuple(axes.index(a) for a in c.component)) for c in wave.columns]

    def terms(s: Setting) -> list[list[complex]]:
        rows = [[0j] for _ in wave.rows]
        values = entries(s.omega, *s.k, *(s.numbers[p] for p in parameters))
        for (i, j), value in zip(wave.entries, values, strict=True):
            rows[i].append(complex(value) * s.amplitudes[keys[j]])
        return rows

    def expected(s: Setting) -> list[Expected]:
        return [
            Expected(sum(a), 0.5 * (sum(a) * PHASE + sum(b) / PHASE), max(map(abs, a)))
            for a, b in zip(terms(s), terms(s.mirrored), strict=True)
        ]

    return expected


# The nonlinear laws in numbers -------------------------------------------------------------------


def _laws(linear: LinearizedModel, setting: Setting, amplitude: float) -> Array:
    """Every component of every law over the phases, shape (rows, phases)."""
    evaluate = _Evaluator(linear, setting, amplitude)
    size = len(linear.axes)
    rows = []
    for law in linear.laws.values():
        difference = evaluate.value(law.lhs) - evaluate.value(law.rhs)
        value = np.broadcast_to(difference, (*(size,) * law.rank, PHASES))
        tensors = [f for f in law.residual.atoms(Field) if f.rank == 2]
        upper = law.rank == 2 and bool(tensors) and all(f.symmetric for f in tensors)
        for index in np.ndindex((size,) * law.rank):
            if not (upper and index != tuple(sorted(index))):
                rows.append(value[index])
    return np.array(rows)


@cache
def _numerical(kind: Any, count: int) -> Callable[..., Any]:
    """A smooth function of scalars by its numerical namesake."""
    slots = [Dummy() for _ in range(count)]
    made: Callable[..., Any] = lambdify(slots, kind(*slots), LIBRARIES)
    return made


def _spread(f: Any) -> Array:
    """Constants spread over the phases."""
    return np.broadcast_to(f, (*np.shape(f)[:-1], PHASES))


def _filtered(f: Any, factor: Callable[[Array], Any]) -> Array:
    """A function of the phase with each harmonic that it holds multiplied by a factor."""
    spectrum = np.fft.fft(_spread(f))
    rounding = np.abs(spectrum) <= CLEAN * np.abs(spectrum).max(initial=0.0)  # NaN stays
    made = np.fft.ifft(np.where(rounding, 0, spectrum * factor(HARMONICS)))
    real = np.isrealobj(f) and np.abs(made.imag).max() <= 1e-12 * np.abs(made).max()
    return made.real if real else made


class _Evaluator:
    """Arrays over the phase: scalars (phases,), vectors (axes, phases), tensors (axes, axes, phases)."""

    def __init__(self, linear: LinearizedModel, setting: Setting, amplitude: float) -> None:
        self.setting, self.axes = setting, linear.axes
        self.fields: dict[str, Array] = {}
        for f in linear.fields.values():
            shape = (len(linear.axes),) * f.rank
            waves = [setting.amplitudes[f.name, i] * PHASE for i in np.ndindex(shape)]
            wave = amplitude * np.reshape(waves, (*shape, PHASES)).real
            self.fields[f.name] = wave + self.value(f.background)

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
            return np.asarray(self.value(expr.base)) ** self.value(expr.exp)
        if expr.is_Symbol:
            return self.setting.numbers[expr]
        if expr.is_number:
            return complex(expr) if expr.is_real is False else float(expr)
        return _numerical(expr.func, len(expr.args))(*(self.value(a) for a in expr.args))

    def _components(self, expr: Components) -> Array:
        shape = (len(self.axes),) * expr.rank
        entries = [_spread(self.value(expr.entry(i))) for i in np.ndindex(shape)]
        return np.reshape(entries, (*shape, PHASES))

    def _d(self, f: Array) -> Array:
        """The derivative with respect to the phase; the highest harmonic of the grid has none."""
        return _filtered(f, lambda m: 1j * np.where(np.abs(m) == PHASES // 2, 0, m))

    def _multiplied(self, f: Array, g: Expr) -> Array:
        along = dict(zip(self.axes, self.setting.k, strict=True))
        at = {s: along.get(a, 0.0) for s, a in ((k_x, "x"), (k_y, "y"), (k_z, "z"))}
        at[omega] = self.setting.omega
        length = float(np.linalg.norm(self.setting.k))
        number = lambdify([*at, k_abs, *self.setting.numbers], g, LIBRARIES)

        def factor(m: Array) -> Any:
            waves = [m * one for one in at.values()]
            made = number(*waves, np.abs(m) * length, *self.setting.numbers.values())
            mean_left_out = (m == 0) & ~np.isfinite(made)  # by an inverse, as usual
            return np.where(mean_left_out, 0, made)

        return _filtered(f, factor)

    def _partial_t(self, f: Array) -> Array:
        return -self.setting.omega * self._d(f)

    def _grad(self, f: Array) -> Array:
        return np.stack([k * self._d(f) for k in self.setting.k])

    def _div(self, f: Array) -> Array:
        return np.tensordot(self.setting.k, self._d(f), 1)

    def _curl(self, f: Array) -> Array:
        return np.cross(self.setting.k[:, None], self._d(f), axis=0)

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
