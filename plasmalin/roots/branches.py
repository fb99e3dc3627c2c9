"""Branches: roots that are continuous along a wave number or a parameter."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ..errors import DeclarationError, ValuesError
from .events import Event
from .labelled import Labelled
from .polarization import null_vectors


@dataclass(frozen=True, eq=False)
class Branches(Labelled):
    """Tracked roots along one quantity.

    Attributes
    ----------
    name : str
        What varies.
    along : ndarray of float64, shape (n,)
        Its values; rad/m for a wave number, for a parameter in the unit that it declares.
    omega : ndarray of complex128, shape (branch, n), rad/s
    radius : ndarray of float64, shape (branch, n), rad/s
        Proven error bounds.
    status : ndarray of str, shape (branch, n)
    slope : ndarray of complex128, shape (branch, n)
        d omega / d(what varies).
    factor : tuple of int
        For each branch the irreducible factor that it belongs to (−1: a zero mode).
    polynomials : tuple of ExactPolynomial
        These factors, with the fixed numbers put in.
    events : tuple of Event
        Where branches meet, in order.
    events_complete : bool
        Whether it is proven that no other branches meet from the least to the largest value.
    """

    events: tuple[Event, ...]
    name: str
    along: NDArray[np.float64]
    slope: NDArray[np.complex128]
    events_complete: bool

    @property
    def axes(self) -> dict[str, NDArray[np.float64]]:
        """What varies, and its values."""
        return {self.name: self.along}

    @cached_property
    def wave_number(self) -> NDArray[Any]:
        """|k| along the sweep, rad/m, shape (n,)."""
        from sympy import Add, sqrt

        value = self.numbers.value(sqrt(Add(*(c**2 for c in self.wave.k))))
        return np.broadcast_to(value, self.along.shape)

    @property
    def phase_velocity(self) -> NDArray[np.float64]:
        """Re omega over the length of k, m/s, shape (branch, n)."""
        with np.errstate(divide="ignore", invalid="ignore"):
            return np.asarray(self.frequency / self.wave_number)

    @property
    def group_velocity(self) -> NDArray[np.float64]:
        """Re d omega/dk along the sweep, m/s, shape (branch, n).

        Raises
        ------
        ValuesError
            When what varies is not a wave number.
        """
        if self.name not in {s.name for s in self.wave.wave_symbols}:
            raise ValuesError(
                f"group_velocity needs a sweep over a wave number, this one is over '{self.name}'"
            )
        return self.slope.real

    def most_unstable(self) -> tuple[float, complex, int]:
        """The grid point of largest growth: (value of what varies, omega, branch).

        Raises
        ------
        ValuesError
            When no root is finite.
        """
        branch, point = self._fastest()
        return float(self.along[point]), complex(self.omega[branch, point]), branch

    @cached_property
    def _vectors(self) -> NDArray[np.complex128]:
        """The amplitudes of every mode, shape (branch, n, amplitudes)."""
        return null_vectors(self.wave, self.numbers, self.omega)

    def amplitudes(self, field: str, per: str) -> NDArray[np.complex128]:
        """The polarization: a field's amplitude per unit of another.

        Parameters
        ----------
        field : str
            A field, or one amplitude such as "v_e_x".
        per : str
            A scalar field, or one amplitude.

        Returns
        -------
        ndarray of complex128, shape (branch, n) or (branch, n, component)
            NaN where the mode does not move `per`.

        Raises
        ------
        DeclarationError
            When a name is unknown, or `per` has several components.
        """
        unit = self.wave.column(per)
        if len(unit) > 1:
            names = ", ".join(self.wave.columns[j].symbol.name for j in unit)
            raise DeclarationError(f"per={per!r} has several components; name one of {names}")
        vectors = self._vectors
        chosen = vectors[:, :, self.wave.column(field)]
        with np.errstate(divide="ignore", invalid="ignore"):
            ratio = np.where(
                vectors[:, :, unit] != 0, chosen / vectors[:, :, unit], complex(np.nan, np.nan)
            )
        scalar = len(self.wave.column(field)) == 1
        return ratio[:, :, 0] if scalar else ratio

    def plot(self, ax: Any = None, **line: Any) -> Any:
        """Frequency and growth rate on one axis of what varies.

        Parameters
        ----------
        ax : pair of matplotlib Axes, optional
            For frequency and growth; a new figure without.
        **line
            Line properties, passed on to matplotlib.

        Returns
        -------
        pair of matplotlib Axes
        """
        from ..present.plot import plot_branches

        return plot_branches(self, ax, **line)

    def __repr__(self) -> str:
        return f"<Branches: {len(self)} branches along {self.name}, {len(self.along)} points>"
