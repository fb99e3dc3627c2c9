"""All roots of a wave matrix for given numbers, each with an error radius and a status."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import replace
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.lib.mixins import NDArrayOperatorsMixin
from numpy.typing import NDArray

from ..errors import ValuesError
from .choice import chosen_problem
from .enclose import Enclosure, enclose, merge
from .family import Family
from .matrixfamily import MatrixFamily
from .parallel import Workers
from .solve import Problem, grid_of
from .values import Numbers, gather, with_defaults

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix


class Roots(NDArrayOperatorsMixin):
    """Roots omega, rad/s; behaves as a complex array of shape (..., degree).

    Attributes
    ----------
    omega : ndarray of complex128, shape (..., degree), rad/s
        Sorted by real part, then imaginary part.
    radius : ndarray of float64, shape (..., degree), rad/s
        A proven bound on the error of each root.
    growth_radius : ndarray of float64, shape (..., degree), rad/s
        The same for the imaginary part alone: a growth rate larger than this has its sign proven.
    method : str
        What was done, and at how many points.
    """

    def __init__(self, found: Enclosure, shape: tuple[int, ...]) -> None:
        self.omega = found.omega.reshape(shape)
        self.radius = found.radius.reshape(shape)
        self.growth_radius = found.growth_radius.reshape(shape)
        self._found, self.method = found, found.method

    @property
    def status(self) -> NDArray[np.str_]:
        """In words, shape (..., degree): "certified"; "zero" or "at infinity" (only at this point); "not certified"
        (infinite: beyond the range of doubles; NaN: a cluster too close to part); "masked" (an input is not finite, or every coefficient vanishes)."""
        return self._found.status.reshape(self.shape)

    def __array__(self, dtype: Any = None, copy: bool | None = None) -> NDArray[Any]:
        made = self.omega if dtype is None else self.omega.astype(dtype)
        return made.copy() if copy else made

    def __array_ufunc__(self, ufunc: Any, method: str, *inputs: Any, **kwargs: Any) -> Any:
        plain = (x.omega if isinstance(x, Roots) else x for x in inputs)
        return getattr(ufunc, method)(*plain, **kwargs)

    def __getitem__(self, index: Any) -> Any:
        return self.omega[index]

    def __len__(self) -> int:
        return len(self.omega)

    def __iter__(self) -> Iterator[Any]:
        return iter(self.omega)

    @property
    def shape(self) -> tuple[int, ...]:
        return self.omega.shape

    @property
    def ndim(self) -> int:
        return self.omega.ndim

    @property
    def size(self) -> int:
        return self.omega.size

    @property
    def dtype(self) -> np.dtype[np.complex128]:
        return self.omega.dtype

    @property
    def real(self) -> NDArray[np.float64]:
        """The frequencies, rad/s."""
        return self.omega.real

    @property
    def imag(self) -> NDArray[np.float64]:
        """The growth rates, rad/s."""
        return self.omega.imag

    def require(self) -> Roots:
        """These roots, if every one is certified; else an error with the first that is not.

        Raises
        ------
        ValuesError
            Naming the first point and root that is not certified, and why.
        """
        status = self.status
        good = np.isin(status, ("certified", "zero", "at infinity"))
        if not good.all():
            where = tuple(int(i) for i in np.argwhere(~good)[0])
            raise ValuesError(f"the root at index {where} is '{status[where]}': {self._why(where)}")
        return self

    def _why(self, where: tuple[int, ...]) -> str:
        if self.status[where] == "masked":
            return (
                "an input there is not finite, or every coefficient vanishes; leave the point out"
            )
        if np.isinf(self.omega[where]):
            return "it is beyond the range of doubles; choose larger units of time"
        return "it has a neighbor closer than the exact way can tell; move the point a little"

    def __repr__(self) -> str:
        return f"Roots({self.omega!r})"


def find_roots(wave: WaveMatrix, values: Mapping[Any, Any], waves: dict[str, Any]) -> Roots:
    """All roots; see `WaveMatrix.roots`."""
    zero_modes, workers = bool(waves.pop("zero_modes", False)), waves.pop("workers", 1)
    numbers = gather(wave, with_defaults(wave, values), waves)
    problem = chosen_problem(wave, numbers)
    found = solve(problem, numbers, zero_modes, workers)
    return Roots(found, (*numbers.shape, found.omega.shape[1]))


def solve(
    problem: Problem, numbers: Numbers, zero_modes: bool = False, workers: Workers = 1
) -> Enclosure:
    """Every factor enclosed and merged, with the exact zeros in their place."""
    points = int(np.prod(numbers.shape, dtype=np.int64))
    grid = grid_of(problem, numbers)
    families: list[Family | MatrixFamily] = [family for family, _ in problem.factors]
    families += problem.matrices
    parts = [enclose(family, grid, points=points, workers=workers) for family in families]
    extra = problem.zero_modes if zero_modes else 0
    found = merge(
        parts,
        [m for _, m in problem.factors] + [1] * len(problem.matrices),
        points=points,
        zeros=problem.zeros + extra,
        degree=problem.degree + extra,
    )
    return replace(found, method=f"{problem.choice}: {found.method}") if problem.choice else found
