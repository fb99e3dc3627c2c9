"""Branches found: every factor solved and tracked along one quantity."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace
from itertools import combinations
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from ..errors import ValuesError
from .axis import Axis, constants
from .branches import Branches
from .crossings import seen_crossings
from .enclose import ZERO, Enclosure, enclose
from .events import Event, joined_events
from .family import Family
from .meetings import all_crossings, all_meetings, all_poles, placed
from .slopes import ScaledFamily
from .solve import Problem, grid_of, pose, rates_of
from .solved import Status, joined
from .tracking import Solve, track
from .values import Numbers, gather, left_out, with_defaults

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix


def find_branches(
    wave: WaveMatrix, name: str, along: Any, values: Mapping[Any, Any], waves: dict[str, Any]
) -> Branches:
    """All branches; see `WaveMatrix.branches`."""
    zero_modes = bool(waves.pop("zero_modes", False))
    left_out((name,), waves)
    axis = Axis.of(wave, name, along)
    points = axis.si
    if points.ndim != 1 or not len(points):
        raise ValuesError(
            f"the values of '{name}' have shape {points.shape}; give one dimension, not empty"
        )
    numbers = gather(wave, {**with_defaults(wave, values), name: along}, waves)
    if numbers.shape != points.shape or len(numbers.swept) > 1 + constants(numbers, (name,)):
        raise ValuesError(
            "only one quantity varies along branches; give single numbers for the others"
        )
    found = Sweep(wave, pose(wave, numbers), numbers, name).branches(points, zero_modes)
    return found if axis.unit == 1 else _in_unit(found, axis)


def _in_unit(branches: Branches, axis: Axis) -> Branches:
    """What varies, and the slopes along it, in the declared unit."""
    size = float(axis.unit)
    events = tuple(
        replace(e, at=e.at / size, radius=e.radius / size + float(np.spacing(abs(e.at / size))))
        for e in branches.events
    )
    return replace(branches, along=axis.shown, slope=branches.slope * size, events=events)


@dataclass(frozen=True)
class Track:
    """The branches of one factor, shape (n, d), what solves it elsewhere, and its meetings: are they proven to be all."""

    found: Enclosure
    slope: NDArray[np.complex128]
    solve: Solve
    events: list[Event]
    complete: bool


class Sweep:
    """Solves and tracks every factor along one quantity."""

    def __init__(self, wave: WaveMatrix, problem: Problem, numbers: Numbers, name: str) -> None:
        self.wave, self.problem, self.numbers, self.name = wave, problem, numbers, name
        self.symbol = next(s for s in numbers.swept if s.name == name)

    def at(self, s: NDArray[np.float64]) -> Numbers:
        others = {k: np.broadcast_to(a.flat[0], s.shape) for k, a in self.numbers.swept.items()}
        return replace(self.numbers, swept={**others, self.symbol: s}, shape=s.shape)

    def branches(self, points: NDArray[np.float64], zero_modes: bool) -> Branches:
        finite = np.isfinite(points)
        # Points that are not finite are masked in the end; until then any value does.
        known = np.where(finite, points, points[finite][0] if finite.any() else 1.0)
        s, place = np.unique(known, return_inverse=True)
        tracks = [self._factor(family, s) for family, _ in self.problem.factors]
        times = [m for _, m in self.problem.factors]
        parts = [t.found for t, m in zip(tracks, times, strict=True) for _ in range(m)]
        slopes = [t.slope for t, m in zip(tracks, times, strict=True) for _ in range(m)]
        factor = [n for n, t in enumerate(tracks) for _ in range(t.slope.shape[1] * times[n])]
        zeros = self.problem.zeros + (self.problem.zero_modes if zero_modes else 0)
        parts.append(Enclosure.empty(len(s), zeros, ZERO))
        slopes.append(np.zeros((len(s), zeros), complex))
        factor += [-1] * zeros
        omega, radius, _, state = joined([p.arrays() for p in parts], 1)
        first = np.lexsort((omega[0].imag, omega[0].real))
        arrays = omega, radius, state, np.concatenate(slopes, axis=1)
        omega, radius, state, slope = (_placed(a, place, first) for a in arrays)
        omega[:, ~finite] = slope[:, ~finite] = complex(np.nan, np.nan)
        radius[:, ~finite], state[:, ~finite] = np.inf, Status.MASKED
        events, complete = self._events(tracks, s)
        return Branches(
            self.wave, self.numbers, omega, radius, Status.words()[state], tuple(factor[b] for b in first),
            parts[0].method, self.problem.polynomials, events, self.name, points, slope, complete,
        )  # fmt: skip

    @property
    def _plain(self) -> bool:
        """Whether what varies enters the factors as it is."""
        return self.problem.generators in {(self.symbol,), ()}

    def _mirrored(self, family: Family) -> bool:
        """Whether roots are real or come as pairs of conjugates."""
        return family.is_real and not any(map(np.iscomplexobj, self.numbers.swept.values()))

    def _factor(self, family: Family, s: NDArray[np.float64]) -> Track:
        found = self._enclosed(family, s)
        known = all_meetings(family, s, largest(found.omega)) if self._plain else None
        places = None if known is None else [*known, *all_poles(family, s)]
        solve, slopes = self._solver(family, s, found.omega)
        slope = slopes(found.omega, s)
        order, events = track(solve, s, found.omega, slope, places, mirrored=self._mirrored(family))
        if known is not None:
            events = known
        elif events and self._plain:
            events = placed(family, events, (largest(found.omega), float(np.abs(s).max())))
        if not (order == np.arange(order.shape[1])).all():
            found, slope = found.reordered(order), np.take_along_axis(slope, order, axis=1)
        return Track(found, slope, solve, events, known is not None)

    def _events(
        self, tracks: list[Track], s: NDArray[np.float64]
    ) -> tuple[tuple[Event, ...], bool]:
        """Those of all factors and between them, and whether they are proven to be all."""
        families = [family for family, _ in self.problem.factors]
        size = max((largest(t.found.omega) for t in tracks), default=0.0)
        between = all_crossings(families, s, size) if self._plain else None
        complete = between is not None and all(t.complete for t in tracks)
        if between is None:
            parts = [(t.found.omega, t.slope, t.solve) for t in tracks]
            between = [e for a, b in combinations(parts, 2) for e in seen_crossings(s, a, b)]
        inside = [e for t in tracks for e in t.events]
        return tuple(joined_events(inside, between)), complete

    def order(
        self, family: Family, s: NDArray[np.float64], omega: NDArray[np.complex128]
    ) -> NDArray[np.int64]:
        """The roots of every branch."""
        solve, slopes = self._solver(family, s, omega)
        return track(solve, s, omega, slopes(omega, s), mirrored=self._mirrored(family))[0]

    def _solver(
        self, family: Family, s: NDArray[np.float64], omega: NDArray[np.complex128]
    ) -> tuple[Solve, Callable[..., NDArray[np.complex128]]]:
        """What gives roots and slopes at other points, and slopes alone."""
        scaled_family = ScaledFamily(family, omega, self._grid(s))

        def slopes(roots: NDArray[Any], points: NDArray[np.float64]) -> NDArray[Any]:
            rates = rates_of(self.problem, self.at(points), self.symbol)
            return scaled_family.slope(roots, self._grid(points), rates)

        def solve(points: NDArray[np.float64]) -> tuple[NDArray[Any], NDArray[Any]]:
            between = self._enclosed(family, points).omega
            return between, slopes(between, points)

        return solve, slopes

    def _grid(self, s: NDArray[np.float64]) -> list[NDArray[Any]]:
        return [hi for hi, _ in grid_of(self.problem, self.at(s))]

    def _enclosed(self, family: Family, s: NDArray[np.float64]) -> Enclosure:
        return enclose(family, grid_of(self.problem, self.at(s)), points=len(s))


def largest(omega: NDArray[np.complex128]) -> float:
    """The largest finite |omega|."""
    return float(np.abs(omega[np.isfinite(omega)]).max(initial=0.0))


def _placed(
    array: NDArray[Any], place: NDArray[np.int64], first: NDArray[np.int64]
) -> NDArray[Any]:
    """Points and branches in another order, shape (branch, n); where the order stays nothing is gathered."""
    for axis, order in ((0, place), (1, first)):
        if not np.array_equal(order, np.arange(array.shape[axis])):
            array = array.take(order, axis=axis)
    return array.T.copy()
