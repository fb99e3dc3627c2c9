"""Branches: roots that are continuous along a wave number or a parameter."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from fractions import Fraction
from functools import cached_property
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from ..errors import DeclarationError, ValuesError
from ..exact.polynomial import ExactPolynomial
from .enclose import ZERO, Enclosure, enclose
from .family import Family
from .labels import branch_labels
from .meetings import placed
from .polarization import null_vectors
from .slopes import ScaledFamily
from .solve import Problem, grid_of, pose, rates_of
from .solved import Status, joined
from .tracking import Event, track
from .values import Numbers, gather, left_out, scaled, to_si, with_defaults

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix


@dataclass(frozen=True, eq=False)
class Branches:
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
        Where branches of one factor meet, in order, the place with a proven radius where what varies enters the factor
        as it is.
    """

    wave: WaveMatrix
    numbers: Numbers
    name: str
    along: NDArray[np.float64]
    omega: NDArray[np.complex128]
    radius: NDArray[np.float64]
    status: NDArray[Any]
    slope: NDArray[np.complex128]
    factor: tuple[int, ...]
    events: tuple[Event, ...]
    method: str
    polynomials: tuple[ExactPolynomial, ...]

    def __len__(self) -> int:
        return len(self.omega)

    @cached_property
    def label(self) -> tuple[str, ...]:
        """For each branch "wave", "constraint", "entropy" or "vortical" (see `plasmalin.waves.labels`)."""
        return branch_labels(self)

    @property
    def frequency(self) -> NDArray[np.float64]:
        """Re omega, rad/s, shape (branch, n)."""
        return self.omega.real

    @property
    def growth_rate(self) -> NDArray[np.float64]:
        """Im omega, rad/s, shape (branch, n); positive for growth."""
        return self.omega.imag

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
        growth = np.where(np.isfinite(self.growth_rate), self.growth_rate, -np.inf)
        if not np.isfinite(growth).any():
            raise ValuesError("no finite root on this sweep")
        branch, point = np.unravel_index(int(growth.argmax()), growth.shape)
        return float(self.along[point]), complex(self.omega[branch, point]), int(branch)

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

    def to_xarray(self) -> Any:
        """An xarray Dataset with dimensions (branch, name); needs the extra ``labels``."""
        from ..present.labels import to_xarray

        return to_xarray(self)

    def to_dataframe(self) -> Any:
        """A pandas DataFrame, one row per branch and point; needs the extra ``labels``."""
        from ..present.labels import to_dataframe

        return to_dataframe(self)

    def save(self, path: Any) -> None:
        """Write arrays and the model's description to an npz archive (no pickles).

        Parameters
        ----------
        path : path-like
            Ending in ``.npz``.
        """
        from ..present.archive import save_branches

        save_branches(self, path)

    def __repr__(self) -> str:
        return f"<Branches: {len(self)} branches along {self.name}, {len(self.along)} points>"


def find_branches(
    wave: WaveMatrix, name: str, along: Any, values: Mapping[Any, Any], waves: dict[str, Any]
) -> Branches:
    """All branches; see `WaveMatrix.branches`."""
    zero_modes = bool(waves.pop("zero_modes", False))
    left_out((name,), values, waves)
    number, factor = to_si(wave, name, along)
    points = scaled(np.asarray(number, dtype=float), factor)
    if points.ndim != 1 or not len(points):
        raise ValuesError(
            f"the values of '{name}' have shape {points.shape}; give one dimension, not empty"
        )
    numbers = gather(wave, with_defaults(wave, {**values, name: along}), waves)
    if numbers.shape != points.shape or len(numbers.swept) > 1 + _complex_scalars(numbers, name):
        raise ValuesError(
            "only one quantity varies along branches; give single numbers for the others"
        )
    found = Sweep(wave, pose(wave, numbers), numbers, name).branches(points, zero_modes)
    unit = wave.linear.units.get(name)
    if unit is None or unit.scale == 1:
        return found
    return _in_unit(found, scaled(np.asarray(number, float), factor / unit.scale), unit.scale)


def _in_unit(branches: Branches, along: NDArray[np.float64], scale: Fraction) -> Branches:
    """What varies, and the slopes along it, in a unit that is `scale` SI units."""
    size = float(scale)
    events = (replace(e, at=e.at / size, radius=e.radius / size) for e in branches.events)
    return replace(branches, along=along, slope=branches.slope * size, events=tuple(events))


def _complex_scalars(numbers: Numbers, name: str) -> int:
    """Complex wave numbers are kept among the swept though they do not vary."""
    return sum(s.name != name and bool((a == a.flat[0]).all()) for s, a in numbers.swept.items())


def _placed(
    array: NDArray[Any], place: NDArray[np.int64], first: NDArray[np.int64]
) -> NDArray[Any]:
    """Points and branches in another order, shape (branch, n); where the order stays nothing is gathered."""
    for axis, order in ((0, place), (1, first)):
        if not np.array_equal(order, np.arange(array.shape[axis])):
            array = array.take(order, axis=axis)
    return array.T.copy()


class Sweep:
    """Solves and tracks every factor along one quantity."""

    def __init__(self, wave: WaveMatrix, problem: Problem, numbers: Numbers, name: str) -> None:
        self.wave, self.problem, self.numbers, self.name = wave, problem, numbers, name
        self.symbol = next(s for s in numbers.swept if s.name == name)

    def at(self, s: NDArray[np.float64]) -> Numbers:
        others = {k: np.broadcast_to(a.flat[0], s.shape) for k, a in self.numbers.swept.items()}
        return replace(self.numbers, swept={**others, self.symbol: s}, shape=s.shape)

    def branches(self, points: NDArray[np.float64], zero_modes: bool) -> Branches:
        s = np.unique(points[np.isfinite(points)])
        place = np.searchsorted(s, np.where(np.isfinite(points), points, s[0] if len(s) else 0.0))
        tracks: list[Enclosure] = []
        slopes, factor, events = [], [], list[Event]()
        for number, (family, multiplicity) in enumerate(self.problem.factors):
            found, slope, met = self._factor(family, s)
            tracks += [found] * multiplicity
            slopes += [slope] * multiplicity
            factor += [number] * (found.omega.shape[1] * multiplicity)
            events += met
        zeros = self.problem.zeros + (self.problem.zero_modes if zero_modes else 0)
        tracks.append(Enclosure.empty(len(s), zeros, ZERO))
        slopes.append(np.zeros((len(s), zeros), complex))
        factor += [-1] * zeros
        omega, radius, _, state = joined([t.arrays() for t in tracks], 1)
        first = np.lexsort((omega[0].imag, omega[0].real)) if len(s) else np.arange(len(factor))
        arrays = omega, radius, state, np.concatenate(slopes, axis=1)
        omega, radius, state, slope = (_placed(a, place, first) for a in arrays)
        omega[:, ~np.isfinite(points)], radius[:, ~np.isfinite(points)] = np.nan, np.inf
        return Branches(
            self.wave, self.numbers, self.name, points, omega, radius, Status.words()[state], slope,
            tuple(factor[b] for b in first), tuple(sorted(events, key=lambda e: e.at)),
            tracks[0].method, self.problem.polynomials,
        )  # fmt: skip

    def _factor(self, family: Family, s: NDArray[np.float64]) -> tuple[Enclosure, Any, list[Event]]:
        found = self._enclosed(family, s)
        order, slope, events = self.tracked(family, s, found.omega)
        if events and self.problem.generators == (self.symbol,):
            largest = float(np.abs(found.omega[np.isfinite(found.omega)]).max())
            events = placed(family, events, (largest, float(np.abs(s).max())))
        if not (order == np.arange(order.shape[1])).all():
            found, slope = found.reordered(order), np.take_along_axis(slope, order, axis=1)
        return found, slope, events

    def tracked(
        self, family: Family, s: NDArray[np.float64], omega: NDArray[np.complex128]
    ) -> tuple[NDArray[np.int64], NDArray[np.complex128], list[Event]]:
        """The roots of every branch, the slopes of the roots, and where branches meet."""
        scaled = ScaledFamily(family, omega, [hi for hi, _ in grid_of(self.problem, self.at(s))])

        def slopes(roots: NDArray[Any], points: NDArray[np.float64]) -> NDArray[Any]:
            numbers = self.at(points)
            grid = [hi for hi, _ in grid_of(self.problem, numbers)]
            return scaled.slope(roots, grid, rates_of(self.problem, numbers, self.symbol))

        def solve(points: NDArray[np.float64]) -> tuple[NDArray[Any], NDArray[Any]]:
            between = self._enclosed(family, points).omega
            return between, slopes(between, points)

        slope = slopes(omega, s)
        order, events = track(solve, s, omega, slope)
        return order, slope, events

    def _enclosed(self, family: Family, s: NDArray[np.float64]) -> Enclosure:
        return enclose(family, grid_of(self.problem, self.at(s)), points=len(s))
