"""What branches and surfaces share: labelled roots over one or two quantities."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from ..errors import ValuesError
from ..exact.polynomial import ExactPolynomial
from .labels import branch_labels
from .values import Numbers

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix


@dataclass(frozen=True, eq=False)
class Labelled:
    """Roots with labels, shape (branch, ...), over the quantities in `axes`.

    Attributes
    ----------
    omega : ndarray of complex128, shape (branch, ...), rad/s
    radius : ndarray of float64, shape (branch, ...), rad/s
        Proven error bounds.
    status : ndarray of str, shape (branch, ...)
    factor : tuple of int
        For each branch the irreducible factor that it belongs to (−1: a zero mode).
    method : str
    polynomials : tuple of ExactPolynomial
        These factors, with the fixed numbers put in.
    events : tuple
        Where branches meet.
    """

    wave: WaveMatrix
    numbers: Numbers
    omega: NDArray[np.complex128]
    radius: NDArray[np.float64]
    status: NDArray[Any]
    factor: tuple[int, ...]
    method: str
    polynomials: tuple[ExactPolynomial, ...]
    events: tuple[Any, ...]

    @property
    def axes(self) -> dict[str, NDArray[np.float64]]:
        """What varies, and its values, in the order of the arrays' dimensions after the branch."""
        raise NotImplementedError

    def __len__(self) -> int:
        return len(self.omega)

    @cached_property
    def label(self) -> tuple[str, ...]:
        """For each branch "wave", "constraint", "entropy" or "vortical" (see `plasmalin.waves.labels`)."""
        return branch_labels(self)

    @property
    def frequency(self) -> NDArray[np.float64]:
        """Re omega, rad/s, shape (branch, ...)."""
        return self.omega.real

    @property
    def growth_rate(self) -> NDArray[np.float64]:
        """Im omega, rad/s, shape (branch, ...); positive for growth."""
        return self.omega.imag

    def _fastest(self) -> tuple[int, ...]:
        """The indices of the largest growth, the branch first."""
        growth = np.where(np.isfinite(self.growth_rate), self.growth_rate, -np.inf)
        if not np.isfinite(growth).any():
            raise ValuesError(f"no finite root on this {'grid' if growth.ndim > 2 else 'sweep'}")
        return tuple(int(i) for i in np.unravel_index(int(growth.argmax()), growth.shape))

    def to_xarray(self) -> Any:
        """An xarray Dataset with dimensions branch and what varies; needs the extra ``labels``."""
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
        from ..present.archive import save_labelled

        save_labelled(self, path)
