"""Branches as labelled data for xarray and pandas."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

if TYPE_CHECKING:
    from ..roots.branches import Branches

CONVENTION = "perturbations ~ exp[i(k.x - omega t)]; growth is Im omega > 0"


def to_xarray(branches: Branches) -> Any:
    """A Dataset with dimensions (branch, what varies)."""
    try:
        import xarray
    except ImportError:
        raise ImportError("to_xarray() needs xarray: pip install 'plasmalin[labels]'") from None
    dims = ("branch", branches.name)
    attrs = {"units": "rad/s", "convention": CONVENTION}
    data = {
        "omega": (dims, branches.omega, attrs),
        "radius": (dims, branches.radius, {"units": "rad/s", "meaning": "proven error bound"}),
        "status": (dims, branches.status),
        "factor": ("branch", np.array(branches.factor)),
        "label": ("branch", np.array(branches.label)),
    }
    coords = {"branch": np.arange(len(branches)), branches.name: branches.along}
    return xarray.Dataset(data, coords=coords, attrs={"title": branches.wave.linear.title})


def to_dataframe(branches: Branches) -> Any:
    """One row per branch and point."""
    try:
        import pandas
    except ImportError:
        raise ImportError("to_dataframe() needs pandas: pip install 'plasmalin[labels]'") from None
    return pandas.DataFrame(dict(zip(columns(branches), rows(branches).T.tolist(), strict=True)))


def columns(branches: Branches) -> list[str]:
    """Column names of `rows`."""
    return ["branch", branches.name, "frequency", "growth_rate", "radius"]


def rows(branches: Branches) -> Any:
    """Branch number, what varies, frequency, growth rate, radius; shape (branches * n, 5)."""
    count, n = branches.omega.shape
    return np.column_stack(
        [
            np.repeat(np.arange(count), n),
            np.tile(branches.along, count),
            branches.frequency.ravel(),
            branches.growth_rate.ravel(),
            branches.radius.ravel(),
        ]
    )
