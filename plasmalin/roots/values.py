"""Numbers for a wave matrix: looked up, completed from the background's conditions, and checked."""

from __future__ import annotations

import difflib
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from typing import TYPE_CHECKING, Any

import mpmath
import numpy as np
from numpy.typing import NDArray
from sympy import Expr, Symbol, lambdify

from ..declare.operators import WAVE_SYMBOLS
from ..declare.quantities import in_si
from ..errors import BackgroundError, ValuesError
from ..exact.rational import exact_rational

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix

BREACH = 1e-9
"""Largest residual of a background condition, relative to its largest term, that counts as rounding."""


@dataclass(frozen=True)
class Numbers:
    """What every symbol of a wave matrix is worth.

    Attributes
    ----------
    fixed : dict of Symbol to Fraction
        Single real numbers, as the exact binary rationals that they are.
    swept : dict of Symbol to array
        Arrays (and complex numbers), broadcast to `shape`.
    solved : dict of Symbol to Expr
        Parameters that were not given and follow from the background's conditions.
    shape : tuple of int
    """

    fixed: dict[Symbol, Fraction]
    swept: dict[Symbol, NDArray[Any]]
    solved: dict[Symbol, Expr]
    shape: tuple[int, ...]

    def doubles(self, symbol: Symbol) -> Any:
        """A symbol's array or its one number, in double precision."""
        return self.swept[symbol] if symbol in self.swept else float(self.fixed[symbol])

    def value(self, expression: Expr) -> NDArray[Any]:
        """An expression's array or one number, in double precision."""
        function, symbols = _compiled(expression)
        return np.asarray(function(*(self.doubles(s) for s in symbols)))

    def at(self, symbol: Symbol, point: int) -> Any:
        """A symbol's number at one point of the flattened grid, for mpmath at its working precision."""
        if symbol in self.swept:
            return high_precision(self.swept[symbol].flat[point])
        value = self.fixed[symbol]
        return mpmath.mpf(value.numerator) / value.denominator


@lru_cache(maxsize=512)
def _compiled(expression: Expr) -> tuple[Callable[..., Any], list[Symbol]]:
    """The same few expressions are evaluated in every call."""
    symbols = sorted(expression.free_symbols, key=str)
    return lambdify(symbols, expression, "numpy"), symbols


def high_precision(value: Any) -> Any:
    """A double or complex double as mpmath's exact equal."""
    return mpmath.mpmathify(complex(value) if np.iscomplexobj(value) else float(value))


def gather(wave: WaveMatrix, values: Mapping[Any, Any], waves: Mapping[str, Any]) -> Numbers:
    """Numbers for every symbol that the wave matrix holds.

    Raises
    ------
    ValuesError
        For unknown, missing or doubled names, numbers that are not finite or of the wrong kind, and shapes
        that do not broadcast.
    BackgroundError
        When the numbers break a condition of the background.
    """
    symbols = {**wave.linear.symbols, **{s.name: s for s in wave.wave_symbols}}
    given = _given(symbols, values, waves)
    plain = {n: to_si(wave, n, v) for n, v in given.items()}
    arrays = {
        symbols[n]: _array(n, v, symbols[n] in wave.wave_symbols) for n, (v, _) in plain.items()
    }
    shape = _broadcast(arrays)
    fixed, swept = {}, {}
    for symbol, array in arrays.items():
        scale = plain[symbol.name][1]
        if array.ndim == 0 and not np.iscomplexobj(array):
            fixed[symbol] = exact_rational(float(array)) * scale
        else:
            swept[symbol] = np.broadcast_to(scaled(array, scale), shape)
    solved = _solve_missing(wave, set(arrays))
    numbers = Numbers(fixed, swept, solved, shape)
    _check_conditions(wave, numbers)
    return numbers


def to_si(wave: WaveMatrix, name: str, value: Any) -> tuple[Any, Fraction]:
    """A value as a plain number or array, and the exact factor that takes it to SI.

    A plain number is in the unit that the parameter declares, SI where it declares none; a quantity with a unit
    is in its own.

    Raises
    ------
    UnitError
        When a quantity does not have the dimension that the parameter has.
    """
    unit = wave.linear.units.get(name)
    needed = None
    if unit is None and not isinstance(value, int | float):
        needed = wave.dimensions.of(name)
    return in_si(name, value, unit, needed)


def scaled(array: NDArray[Any], scale: Fraction) -> NDArray[Any]:
    """An array times an exact factor, with one rounding where the factor or its inverse is a whole number."""
    if scale == 1:
        return array
    return array / float(1 / scale) if scale.numerator == 1 else array * float(scale)


def _given(
    symbols: dict[str, Symbol], values: Mapping[Any, Any], waves: Mapping[str, Any]
) -> dict[str, Any]:
    named = {key.name if isinstance(key, Symbol) else str(key): v for key, v in values.items()}
    twice = sorted(set(named) & set(waves))
    if twice:
        raise ValuesError(f"{', '.join(twice)} given twice: in the values and as a keyword")
    given = {**named, **waves}
    for name in given:
        if name not in symbols:
            near = difflib.get_close_matches(name, symbols, 3)
            hint = (
                f"did you mean {' or '.join(near)}?" if near else f"known are {', '.join(symbols)}"
            )
            raise ValuesError(f"'{name}' is not a parameter or wave number of this model; {hint}")
    return given


def _array(name: str, value: Any, is_wave: bool) -> NDArray[Any]:
    try:
        array = np.asarray(value)
        array = array.astype(np.complex128 if np.iscomplexobj(array) else np.float64)
    except (TypeError, ValueError):
        raise ValuesError(f"'{name}' = {value!r} is not a number or an array of numbers") from None
    if np.iscomplexobj(array):
        if not np.any(array.imag):
            array = array.real
        elif not is_wave:
            raise ValuesError(f"'{name}' is a real parameter but its value is complex")
    if array.ndim == 0 and not np.isfinite(array):
        raise ValuesError(f"'{name}' = {value!r} is not finite; give a finite number")
    return array


def _broadcast(arrays: Mapping[Symbol, NDArray[Any]]) -> tuple[int, ...]:
    try:
        return np.broadcast_shapes(*(a.shape for a in arrays.values()))
    except ValueError:
        shapes = ", ".join(f"{s.name}: {a.shape}" for s, a in arrays.items() if a.ndim)
        raise ValuesError(f"the shapes of the values do not broadcast together: {shapes}") from None


def with_defaults(wave: WaveMatrix, values: Mapping[Any, Any]) -> dict[Any, Any]:
    """The values with the model's own defaults for what is not given.

    Raises
    ------
    ValuesError
        When `values` is not a mapping.
    """
    if not isinstance(values, Mapping):
        raise ValuesError(
            f"values must be a mapping from names to numbers, not {type(values).__name__}"
        )
    named = {key.name if isinstance(key, Symbol) else key for key in values}
    defaults = {n: v for n, v in wave.linear.defaults.items() if n not in named}
    return {**defaults, **values}


def left_out(names: tuple[str, ...], waves: Mapping[str, Any]) -> None:
    """Raises where what varies is also among the other wave numbers."""
    for name in set(waves).intersection(names):
        raise ValuesError(f"'{name}' is what varies; leave it out of the other wave numbers")


def needed_symbols(wave: WaveMatrix) -> set[Symbol]:
    """The symbols that the wave matrix holds, omega left out."""
    found: set[Any] = set()
    for entry in wave.entries.values():
        found |= entry.free_symbols
    return found - set(WAVE_SYMBOLS[:1])


def _solve_missing(wave: WaveMatrix, known: set[Symbol]) -> dict[Symbol, Expr]:
    """Parameters that are not given, from the conditions that hold them."""
    from sympy import solve

    missing = needed_symbols(wave) - known
    solved: dict[Symbol, Expr] = {}
    pending = [c.lhs.xreplace({}) for c in wave.linear.conditions]
    progress = True
    while missing and progress:
        progress = False
        for condition in pending:
            unknown = condition.free_symbols - known - set(solved)
            if len(unknown) == 1:
                symbol = unknown.pop()
                found = solve(condition.subs(solved), symbol)
                if len(found) == 1:
                    solved[symbol] = found[0]
                    missing.discard(symbol)
                    progress = True
    for symbol, value in wave.linear.background.drifts.items() if missing else ():
        if symbol in missing and value.free_symbols <= known | set(solved):
            solved[symbol] = value.subs(solved)  # components that only hang together
            missing.discard(symbol)
    if missing:
        names = ", ".join(sorted(s.name for s in missing))
        raise ValuesError(
            f"no value for {names}; give it in values= (or as a keyword for a wave number)"
        )
    return solved


def _check_conditions(wave: WaveMatrix, numbers: Numbers) -> None:
    known = set(numbers.fixed) | set(numbers.swept)
    for symbol in known:
        _check_sign(symbol, numbers)
    for balance in wave.linear.background.balances:
        for residual in () if balance.assumed else balance.residuals:
            if residual.free_symbols <= known:
                _check_residual(balance.law, residual, numbers)


def _check_sign(symbol: Symbol, numbers: Numbers) -> None:
    if symbol.is_positive:
        value = numbers.swept.get(symbol)
        worst = numbers.fixed[symbol] if value is None else np.nanmin(value, initial=np.inf)
        if worst <= 0:
            raise ValuesError(
                f"'{symbol.name}' is declared positive but its value is {float(worst):.6g}"
            )


def _check_residual(law: str, residual: Expr, numbers: Numbers) -> None:
    from sympy import Add, expand

    terms = Add.make_args(expand(residual))
    symbols = sorted(residual.free_symbols, key=str)
    with np.errstate(all="ignore"):
        parts = [np.abs(numbers.value(t)) for t in terms]
        total = np.abs(numbers.value(Add(*terms)))
        largest = np.max([np.broadcast_to(p, numbers.shape) for p in parts], axis=0)
        breach = np.max(np.nan_to_num(total / np.where(largest > 0, largest, 1.0)), initial=0.0)
    if breach > BREACH:
        names = ", ".join(s.name for s in symbols if s.name not in NATURE)
        raise BackgroundError(
            f"law '{law}' leaves {residual} = {float(np.nanmax(total)):.6g} on the background "
            f"({100 * float(breach):.3g} % of its largest term); change one of {names}, "
            "or leave one out and it is solved for"
        )


NATURE = {"e", "epsilon_0", "mu_0", "c", "m_e", "m_p", "k_B", "G"}
"""Names that a user does not change to restore a balance."""
