"""All roots of a wave matrix for given numbers, each with an error radius and a status."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.lib.mixins import NDArrayOperatorsMixin
from numpy.typing import NDArray

from ..errors import ValuesError
from .enclose import Enclosure, enclose, merge
from .solve import Problem, grid_of, pose
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
    status : ndarray of str, shape (..., degree)
        "certified", "cluster of m", "zero" or "at infinity" (only at this point), "not certified", "masked".
    method : str
        What was chosen, and why.
    """

    def __init__(
        self,
        omega: NDArray[np.complex128],
        radius: NDArray[np.float64],
        status: NDArray[Any],
        method: str,
    ) -> None:
        self.omega, self.radius, self.status, self.method = omega, radius, status, method

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
            Naming the first point and root that is not certified.
        """
        good = np.isin(self.status, ("certified", "zero", "at infinity"))
        if not good.all():
            where = tuple(int(i) for i in np.argwhere(~good)[0])
            raise ValuesError(f"the root at index {where} is '{self.status[where]}', not certified")
        return self

    def __repr__(self) -> str:
        return f"Roots({self.omega!r})"


def find_roots(wave: WaveMatrix, values: Mapping[Any, Any], waves: dict[str, Any]) -> Roots:
    """All roots; see `WaveMatrix.roots`."""
    zero_modes = bool(waves.pop("zero_modes", False))
    numbers = gather(wave, with_defaults(wave, values), waves)
    problem = pose(wave, numbers)
    found = solve(problem, numbers, zero_modes)
    shape = (*numbers.shape, found.omega.shape[1])
    return Roots(
        found.omega.reshape(shape),
        found.radius.reshape(shape),
        found.status.reshape(shape),
        found.method,
    )


def solve(problem: Problem, numbers: Numbers, zero_modes: bool) -> Enclosure:
    """Every factor enclosed and merged, with the exact zeros in their place."""
    points = int(np.prod(numbers.shape, dtype=np.int64))
    grid = grid_of(problem, numbers)
    parts = [enclose(family, grid, points=points) for family, _ in problem.factors]
    extra = problem.zero_modes if zero_modes else 0
    return merge(
        parts,
        [m for _, m in problem.factors],
        points=points,
        zeros=problem.zeros + extra,
        degree=problem.degree + extra,
    )
