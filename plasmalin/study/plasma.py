"""A wave's fluids in numbers, with the wave vector and the roots where they are known."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING, Any

import numpy as np
from sympy import Expr, lambdify

from ..errors import NonPolynomialError, UndeterminedError
from ..roots.roots import find_roots
from ..roots.values import Numbers, gather, with_defaults
from ..waves.species import Fluid, fluids, screening
from .kind import Array, Kind, length, positive

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix


class Values:
    """What an expression is worth: an array over the grid, or None where a number is missing."""

    def __init__(self, numbers: Numbers, unknown: set[Any]) -> None:
        self._numbers = numbers
        self._known = (set(numbers.fixed) | set(numbers.swept)) - unknown

    def __call__(self, expr: Expr | None) -> Array | None:
        if expr is None:
            return None
        filled = expr.subs(self._numbers.solved) if self._numbers.solved else expr
        symbols = sorted(filled.free_symbols, key=str)
        if not set(symbols) <= self._known:
            return None
        doubles = (self._numbers.doubles(s) for s in symbols)
        found = np.asarray(lambdify(symbols, filled, "numpy")(*doubles))
        return found if np.isfinite(found).any() else None

    def vector(self, entries: Any) -> list[Array] | None:
        found = [self(c) for c in entries]
        return None if any(c is None for c in found) else [c for c in found if c is not None]


@dataclass(frozen=True, eq=False)
class Plasma:
    """A wave's fluids in numbers, with the wave vector and the roots where they are known.

    Attributes
    ----------
    kinds : tuple of Kind
    k : list of array or None
        The wave vector along the axes, rad/m.
    omega : array or None, shape (..., degree), rad/s
    no_roots : str
        Why there are none.
    screened : tuple of array
        Debye lengths of those that follow a potential without inertia, m.
    gradients : dict of str to array
        Per field with a background and its gradient their length, value over gradient, m.
    """

    kinds: tuple[Kind, ...]
    k: list[Array] | None
    omega: Array | None
    no_roots: str
    screened: tuple[Array, ...]
    gradients: Mapping[str, Array]

    @cached_property
    def wave_number(self) -> Array | None:
        return None if self.k is None else length(self.k)


def measure(wave: WaveMatrix, values: Mapping[Any, Any], waves: Mapping[str, Any]) -> Plasma:
    """The numbers of a wave; a wave number that is not given leaves what needs it out."""
    given = with_defaults(wave, values)
    named = {getattr(key, "name", str(key)) for key in given} | set(waves)
    absent = [s for s in wave.wave_symbols if s.name not in named]
    numbers = gather(wave, given, {**waves, **{s.name: 1.0 for s in absent}})
    value = Values(numbers, set(absent))
    omega, why = (None, "") if absent else _roots(wave, values, waves)
    if absent:
        why = f"no value was given for {', '.join(s.name for s in absent)}"
    return Plasma(
        tuple(_kind(f, value, len(wave.k)) for f in fluids(wave.linear)),
        value.vector(wave.k),
        omega,
        why,
        tuple(
            1 / np.sqrt(x) for e in screening(wave.linear) if (x := positive(value(e))) is not None
        ),
        dict(_gradients(wave, value)),
    )


def _roots(
    wave: WaveMatrix, values: Mapping[Any, Any], waves: Mapping[str, Any]
) -> tuple[Array | None, str]:
    try:
        return find_roots(wave, values, dict(waves)).omega, ""
    except (NonPolynomialError, UndeterminedError) as error:
        return None, f"there are no roots: {error}"


def _kind(fluid: Fluid, value: Values, size: int) -> Kind:
    charge, response = _electric(fluid, value)
    drift, stiffness = fluid.velocity.background, value(fluid.stiffness)
    return Kind(
        fluid,
        inertia=value(fluid.mass),
        charge=charge,
        energy=positive(value(fluid.temperature) if fluid.temperature is not None else stiffness),
        stiffness=positive(stiffness),
        response=response,
        number=positive(value(fluid.number)),
        friction=positive(value(fluid.friction)),
        drift=value.vector(drift.args) if drift != 0 else [np.zeros(())] * size,
        gyration=value.vector(fluid.gyration) if fluid.gyration else None,
    )


def _electric(fluid: Fluid, value: Values) -> tuple[Array | None, Array | None]:
    """Charge and response of the first coupling in which like charges repel: not that of gravity."""
    for c in fluid.couplings:
        charge, response = value(c.charge), value(c.response)
        if charge is None or not np.any(charge):
            continue
        if c.response is None or (response is not None and np.all(charge * response > 0)):
            return charge, response
    return None, None


def _gradients(wave: WaveMatrix, value: Values) -> Iterator[tuple[str, Array]]:
    for name, f in wave.linear.fields.items():
        if f.gradient == 0:
            continue
        base = f.background.args if f.rank else (f.background,)
        entries = f.gradient.args if f.rank == 0 else [x for row in f.gradient.args for x in row]
        size, slope = value.vector(base or (f.background,)), value.vector(entries)
        if size is not None and slope is not None and np.all(length(size) > 0):
            yield name, length(size) / length(slope)
