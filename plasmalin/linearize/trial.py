"""Random numbers for one audit: parameters that satisfy the background's conditions, a wave vector, amplitudes."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray
from sympy import Matrix, lambdify

if TYPE_CHECKING:
    from .linearized import LinearizedModel

Numbers = Mapping[Any, float]

LIBRARIES = ["scipy", "numpy"]
NEWTON_STEPS = 40
ORDINARY = (0.05, 20.0)
"""Sizes of parameters, of order one, at which the amplitude is small against every background."""


@dataclass(frozen=True)
class Trial:
    """Parameters, wave vector, frequency, and one complex amplitude per component of every field."""

    numbers: Numbers
    k: NDArray[Any]
    omega: float
    amplitudes: Mapping[tuple[str, tuple[int, ...]], complex]

    @property
    def mirrored(self) -> Trial:
        """The same real wave, written as exp[−i(k.x − omega t)]."""
        conjugate = {key: a.conjugate() for key, a in self.amplitudes.items()}
        return Trial(self.numbers, -self.k, -self.omega, conjugate)


def drawn(
    linear: LinearizedModel,
    along: Sequence[bool],
    balance: Callable[[Numbers], Numbers | None],
    random: np.random.Generator,
    *,
    signed: bool,
) -> tuple[Trial, bool]:
    """Numbers of order one, and whether they satisfy the conditions of the background.

    The wave vector has a component on each axis that `along` says; not positive parameters are of either sign if
    `signed`.
    """

    def number(positive: bool) -> float:
        return float(random.uniform(0.5, 1.5) * (1 if positive else random.choice([-1.0, 1.0])))

    size = len(linear.axes)
    found = {s: number(bool(s.is_positive) or not signed) for s in linear.symbols.values()}
    balanced = balance(found)
    amplitudes: dict[tuple[str, tuple[int, ...]], complex] = {}
    for f in linear.fields.values():
        for index in np.ndindex((size,) * f.rank):
            mirror = (f.name, index[::-1])
            known = f.symmetric and mirror in amplitudes
            made = amplitudes[mirror] if known else complex(*random.normal(size=2))
            amplitudes[f.name, index] = made
    k = np.array([number(False) if there else 0.0 for there in along])
    return Trial(balanced or found, k, number(False), amplitudes), balanced is not None


def balancing(linear: LinearizedModel) -> Callable[[Numbers], Numbers | None]:
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
