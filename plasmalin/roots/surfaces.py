"""Surfaces: roots labelled consistently over a grid of two quantities, wherever that is possible.

Labels go down the first column and from there along every row, each line tracked as branches are. Around a cell that
holds an exceptional point (a coalescence at one point of the plane) they come back permuted, so no labelling is
consistent; such cells are listed, and so are the edges across which labels then do not go on (a cut).
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from ..errors import ValuesError
from .axis import Axis, constants
from .enclose import ZERO, Enclosure, enclose
from .labelled import Labelled
from .solve import Problem, grid_of, pose
from .sweep import Sweep
from .values import Numbers, gather, left_out, with_defaults

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix


@dataclass(frozen=True)
class Exceptional:
    """A cell of the grid around which labels permute.

    Attributes
    ----------
    kind : str
        "exceptional point".
    cell : ((float, float), (float, float))
        Between which values of the two quantities.
    branches : tuple of int
        The labels that do not come back to themselves.
    """

    kind: str
    cell: tuple[tuple[float, float], tuple[float, float]]
    branches: tuple[int, ...]


@dataclass(frozen=True, eq=False)
class Surfaces(Labelled):
    """Labelled roots over a grid of two quantities.

    Attributes
    ----------
    names : (str, str)
        What varies.
    along : (ndarray, ndarray), shapes (n,) and (m,)
        Their values; rad/m for a wave number, for a parameter in the unit that it declares.
    omega : ndarray of complex128, shape (branch, n, m), rad/s
    radius : ndarray of float64, shape (branch, n, m), rad/s
        Proven error bounds.
    status : ndarray of str, shape (branch, n, m)
    factor : tuple of int
        For each branch the irreducible factor that it belongs to (−1: a zero mode).
    polynomials : tuple of ExactPolynomial
        These factors, with the fixed numbers put in.
    events : tuple of Exceptional
        Cells around which labels permute; empty where labels are consistent everywhere.
    cut : ndarray of bool, shape (branch, n - 1, m)
        Where a label does not go on from one value of the first quantity to the next.
    method : str

    Examples
    --------
    Two coupled modes, one drifting and damped; they coalesce at one point of the plane:

    >>> import numpy as np
    >>> import plasmalin as plin
    >>> from plasmalin import components, dot, grad, partial_t
    >>> model = plin.FluidModel("two coupled modes", axes="x")
    >>> u, nu, g = model.parameters("U nu g")
    >>> a, b = model.scalar("a"), model.scalar("b")
    >>> _ = model.law("a", partial_t(a) + u * dot(components(1), grad(a)) + nu * a, g * b)
    >>> _ = model.law("b", partial_t(b), -g * a)
    >>> wave = model.linearize().plane_wave("x")
    >>> axes = np.linspace(-1, 1, 10), np.linspace(0.5, 4, 12)
    >>> surfaces = wave.branches(("k", "nu"), axes, {"U": 1.0, "g": 1.0})
    >>> surfaces
    <Surfaces: 2 branches over k, nu, 10 x 12 points>
    >>> [event.kind for event in surfaces.events]
    ['exceptional point']
    """

    events: tuple[Exceptional, ...]
    names: tuple[str, str]
    along: tuple[NDArray[np.float64], NDArray[np.float64]]
    cut: NDArray[np.bool_]

    @property
    def axes(self) -> dict[str, NDArray[np.float64]]:
        """What varies, and its values."""
        return dict(zip(self.names, self.along, strict=True))

    def most_unstable(self) -> tuple[tuple[float, float], complex, int]:
        """The grid point of largest growth: (values of what varies, omega, branch).

        Raises
        ------
        ValuesError
            When no root is finite.
        """
        branch, i, j = self._fastest()
        point = float(self.along[0][i]), float(self.along[1][j])
        return point, complex(self.omega[branch, i, j]), branch

    def plot(
        self, branch: int | None = None, of: str | None = None, ax: Any = None, **mesh: Any
    ) -> Any:
        """A map of one branch, with exceptional cells as circles and cuts as lines.

        Parameters
        ----------
        branch : int, optional
            The one that grows most without.
        of : {"growth_rate", "frequency"}, optional
            What is drawn; without, the growth rate where the branch grows or is damped, else the frequency.
        ax : matplotlib Axes, optional
            A new figure without.
        **mesh
            Passed on to matplotlib's ``pcolormesh``.

        Returns
        -------
        matplotlib Axes

        Raises
        ------
        ValuesError
            For a branch or a quantity that there is not.
        """
        from ..present.maps import plot_surface

        return plot_surface(self, branch, of, ax, **mesh)

    def __repr__(self) -> str:
        shape = " x ".join(str(len(a)) for a in self.along)
        return f"<Surfaces: {len(self)} branches over {', '.join(self.names)}, {shape} points>"


def find_surfaces(
    wave: WaveMatrix,
    names: tuple[str, ...],
    along: Any,
    values: Mapping[Any, Any],
    waves: dict[str, Any],
) -> Surfaces:
    """All surfaces; see `WaveMatrix.branches`."""
    zero_modes = bool(waves.pop("zero_modes", False))
    pair = isinstance(along, tuple | list) and len(along) == 2
    if len(names) != 2 or not pair or names[0] == names[1]:
        raise ValuesError(
            "a grid takes two different names and, in the same order, the values of both"
        )
    left_out(names, waves)
    axes = [Axis.of(wave, n, a) for n, a in zip(names, along, strict=True)]
    for name, axis in zip(names, axes, strict=True):
        _require_rising(name, axis.given)
    x, y = (axis.shown for axis in axes)
    given = {names[0]: x[:, None], names[1]: y}
    numbers = gather(wave, {**with_defaults(wave, values), **given}, waves)
    if numbers.shape != (len(x), len(y)) or len(numbers.swept) > 2 + constants(numbers, names):
        raise ValuesError(
            "only two quantities vary over a grid; give single numbers for the others"
        )
    problem = pose(wave, numbers)
    parts, labels, factor = list[Enclosure](), list[NDArray[np.int64]](), list[int]()
    for number, (family, multiplicity) in enumerate(problem.factors):
        found = enclose(family, grid_of(problem, numbers), points=x.size * y.size)
        lines = _Lines(wave, problem, numbers, names, found.omega.reshape(len(x), len(y), -1))
        order, arrived = lines.labels(family)
        parts += [found.reordered(order.reshape(x.size * y.size, -1))] * multiplicity
        for _ in range(multiplicity):
            labels.append(arrived + len(factor))
            factor += [number] * found.omega.shape[1]
    zeros = problem.zeros + (problem.zero_modes if zero_modes else 0)
    parts.append(Enclosure.empty(x.size * y.size, zeros, ZERO))
    arrived = np.concatenate([*labels, _own(len(factor), zeros, (len(x) - 1, len(y)))], axis=2)
    factor += [-1] * zeros
    omega, radius, status = (
        np.concatenate([getattr(p, n) for p in parts], axis=1).T.reshape(-1, len(x), len(y))
        for n in ("omega", "radius", "status")
    )
    cut = np.moveaxis(arrived != np.arange(len(factor)), 2, 0)
    return Surfaces(
        wave, numbers, omega, radius, status, tuple(factor), parts[0].method, problem.polynomials,
        tuple(_exceptional(arrived, x, y)), (names[0], names[1]), (x, y), cut,
    )  # fmt: skip


def _require_rising(name: str, values: NDArray[np.float64]) -> None:
    rising = values.ndim == 1 and values.size > 0 and bool((np.diff(values) > 0).all())
    if not rising or not np.isfinite(values).all():
        raise ValuesError(
            f"the values of '{name}' must be finite, one-dimensional and increasing for a grid of two quantities"
        )


def _own(first: int, count: int, shape: tuple[int, int]) -> NDArray[np.int64]:
    """Labels that stay themselves."""
    return np.broadcast_to(np.arange(first, first + count), (*shape, count))


class _Lines:
    """The rows and columns of a grid, each tracked for itself."""

    def __init__(
        self,
        wave: WaveMatrix,
        problem: Problem,
        numbers: Numbers,
        names: tuple[str, ...],
        omega: NDArray[np.complex128],
    ) -> None:
        self.wave, self.problem, self.numbers, self.omega = wave, problem, numbers, omega
        self.symbols = [next(s for s in numbers.swept if s.name == n) for n in names]
        self.along = [numbers.swept[self.symbols[0]][:, 0], numbers.swept[self.symbols[1]][0]]

    def labels(self, family: Any) -> tuple[NDArray[np.int64], NDArray[np.int64]]:
        """Which root a label is, shape (n, m, d), and as which label it arrives in the next row, (n - 1, m, d)."""
        rows = np.stack([self._order(family, 1, i) for i in range(len(self.along[0]))])
        columns = np.stack([self._order(family, 0, j) for j in range(len(self.along[1]))], axis=1)
        starts = np.take_along_axis(np.argsort(rows[:, 0], axis=1), columns[:, 0], axis=1)
        order = np.take_along_axis(rows, starts[:, None, :], axis=2)
        track = np.take_along_axis(np.argsort(columns[:-1], axis=2), order[:-1], axis=2)
        reached = np.take_along_axis(columns[1:], track, axis=2)
        return order, np.take_along_axis(np.argsort(order[1:], axis=2), reached, axis=2)

    def _order(self, family: Any, axis: int, place: int) -> NDArray[np.int64]:
        """The roots of every branch along one line."""
        s, other = self.along[axis], self.along[1 - axis][place : place + 1]
        swept = {self.symbols[axis]: s, self.symbols[1 - axis]: np.broadcast_to(other, s.shape)}
        line = replace(self.numbers, swept=swept, shape=s.shape)
        sweep = Sweep(self.wave, self.problem, line, self.symbols[axis].name)
        omega = self.omega[place] if axis == 1 else self.omega[:, place]
        return sweep.order(family, s, omega)


def _exceptional(
    arrived: NDArray[np.int64], x: NDArray[np.float64], y: NDArray[np.float64]
) -> list[Exceptional]:
    """Cells on whose two sides the labels arrive differently."""
    turned = arrived[:, 1:] != arrived[:, :-1]
    return [
        Exceptional(
            "exceptional point",
            ((float(x[i]), float(x[i + 1])), (float(y[j]), float(y[j + 1]))),
            tuple(int(b) for b in np.flatnonzero(turned[i, j])),
        )
        for i, j in np.argwhere(turned.any(axis=2)).tolist()
    ]
