"""An independent check of the linearization: the nonlinear laws themselves, evaluated in numbers.

Every field is its background plus a small plane wave (`evaluation`). What a law answers at the wave's own harmonic must be
its row of the wave matrix times the amplitudes; what is left over in the maximum norm must fall as the square of the
amplitude. A constraint is held to its linear form in the same way.
"""

from __future__ import annotations

import html
from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray
from sympy import lambdify

from ..errors import BackgroundError, ValuesError
from .evaluation import PHASE, Evaluation
from .exchange import Exchange, exchanges
from .trial import LIBRARIES, Trial, balancing, drawn

if TYPE_CHECKING:
    from .linearized import LinearizedModel

Array = NDArray[Any]

AMPLITUDE = 3e-4
PARTS = (1, -1, 0.5, -0.5, 0.25, -0.25, 0)
"""The amplitudes at which laws are evaluated, in units of `AMPLITUDE`."""
TOLERANCE = 1e-8
"""Largest relative error of a row that passes; the response is extrapolated to fourth order in the amplitude."""
FALL = 3.5
"""Halving the amplitude must divide the remainder by four, or more where it is of higher order (common practice)."""
NOISE = 1e-11
"""A remainder below this part of the law's terms is rounding: the law is linear in this wave."""
MILD = 0.005
"""The part that is even in the amplitude, beside the odd one; the fourth power of it is what an error is left with."""
DRAWS = 60

Lowered = Callable[[tuple[Any, ...]], tuple[Any, Iterable[tuple[Any, Mapping[int, Any]]]]]
"""From a wave vector to the wave matrix, and to every component of the constraints with its linear form."""


@dataclass(frozen=True)
class AuditRow:
    """The check of one component of a law or a constraint.

    Attributes
    ----------
    law, component : str
        The component is "" for a scalar law.
    error : float
        Difference of the law's response and its linear form (a row of the wave matrix), relative to the larger terms.
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
class Expected:
    """A row's linear form in numbers: times the amplitudes, over the phases, its largest term."""

    row: complex
    wave: Array
    size: float


def audit(linear: LinearizedModel, lowered: Lowered, *, seed: Any = 0) -> Audit:
    """Compare the nonlinear laws with their linear forms; see `LinearizedModel.audit`."""
    if not isinstance(seed, int | np.integer) or seed < 0:
        raise ValuesError(f"seed={seed!r} is not a whole number from 0")
    wave, constraints = _lowered(linear, lowered)
    rows = [*zip(wave.rows, wave.by_row(), strict=True), *constraints]
    along = [c != 0 for c in wave.k]
    random = np.random.default_rng(int(seed))
    balance, predict = balancing(linear), _predict(wave, [form for _, form in rows])
    best = -1
    with np.errstate(all="ignore"):
        for attempt in range(DRAWS):
            trial, balanced = drawn(linear, along, balance, random, signed=attempt < DRAWS // 2)
            found = {a: _answers(linear, trial, a, [row for row, _ in rows]) for a in PARTS}
            forms = predict(trial)
            defined = bool(np.isfinite([*found.values()]).all())
            defined = defined and bool(np.isfinite([e.row for e in forms]).all())
            quality = defined + balanced + (defined and _is_mild(found))
            if quality > best:
                best, values, expected, setting = quality, found, forms, trial
            if best == 3:
                break
        assumed = {b.law for b in linear.background.balances if b.assumed}
        judged = tuple(
            _judged(row, {a: v[i] for a, v in values.items()}, expected[i], row.law in assumed)
            for i, (row, _) in enumerate(rows)
        )
        exchanged = exchanges(linear.laws, lambda expr, a: _evaluated(linear, setting, a, expr))
    return Audit(judged, int(seed), AMPLITUDE, exchanged)


def _lowered(linear: LinearizedModel, lowered: Lowered) -> tuple[Any, list[Any]]:
    """For a wave vector in every direction, or across flows that change along it."""
    try:
        wave, constraints = lowered(tuple(f"k_{axis}" for axis in linear.axes))
    except BackgroundError:
        slopes = [f.gradient for f in linear.fields.values() if f.rank == 1 and f.gradient != 0]
        size = range(len(linear.axes))
        still = [all(s.entry((i, j)) == 0 for s in slopes for i in size) for j in size]
        k = tuple(f"k_{a}" if s else 0 for a, s in zip(linear.axes, still, strict=True))
        if not any(still):
            raise
        wave, constraints = lowered(k)
    return wave, list(constraints)


def _evaluated(linear: LinearizedModel, trial: Trial, part: float, expr: Any) -> Array:
    evaluation = Evaluation(linear, trial, part * AMPLITUDE)
    return evaluation.here(evaluation.value(expr))


def _answers(linear: LinearizedModel, trial: Trial, part: float, rows: Iterable[Any]) -> Array:
    """What the law of every row leaves of that component over the phases, shape (rows, phases)."""
    evaluation = Evaluation(linear, trial, part * AMPLITUDE)
    whole = {n: evaluation.law(law) for n, law in {**linear.laws, **linear.redundant}.items()}
    return np.array([whole[r.law][tuple(map(linear.axes.index, r.component))] for r in rows])


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


def _predict(wave: Any, forms: list[Mapping[int, Any]]) -> Callable[[Trial], list[Expected]]:
    """Linear forms in numbers; a law that is not real answers otherwise at the mirrored harmonic."""
    axes, parameters = wave.linear.axes, list(wave.linear.symbols.values())
    along = [i for i, c in enumerate(wave.k) if c != 0]
    symbols = [wave.omega, *(wave.k[i] for i in along), *parameters]
    numerical = lambdify(symbols, [list(form.values()) for form in forms], LIBRARIES)
    keys = [(c.field.name, tuple(axes.index(a) for a in c.component)) for c in wave.columns]

    def terms(t: Trial) -> list[list[complex]]:
        values = numerical(t.omega, *t.k[along], *(t.numbers[p] for p in parameters))
        return [
            [0j, *(complex(v) * t.amplitudes[keys[j]] for j, v in zip(form, row, strict=True))]
            for form, row in zip(forms, values, strict=True)
        ]

    def expected(t: Trial) -> list[Expected]:
        return [
            Expected(sum(a), 0.5 * (sum(a) * PHASE + sum(b) / PHASE), max(map(abs, a)))
            for a, b in zip(terms(t), terms(t.mirrored), strict=True)
        ]

    return expected
