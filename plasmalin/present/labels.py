"""Branches and surfaces as labelled data for xarray and pandas."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

if TYPE_CHECKING:
    from ..roots.labelled import Labelled

CONVENTION = "perturbations ~ exp[i(k.x - omega t)]; growth is Im omega > 0"


def to_xarray(roots: Labelled) -> Any:
    """A Dataset with dimensions branch and what varies."""
    try:
        import xarray
    except ImportError:
        raise ImportError("to_xarray() needs xarray: pip install 'plasmalin[labels]'") from None
    dims = ("branch", *roots.axes)
    attrs = {"units": "rad/s", "convention": CONVENTION}
    data = {
        "omega": (dims, roots.omega, attrs),
        "radius": (dims, roots.radius, {"units": "rad/s", "meaning": "proven error bound"}),
        "status": (dims, roots.status),
        "factor": ("branch", np.array(roots.factor)),
        "label": ("branch", np.array(roots.label)),
    }
    coords = {"branch": np.arange(len(roots)), **roots.axes}
    return xarray.Dataset(data, coords=coords, attrs={"title": roots.wave.linear.title})


def to_dataframe(roots: Labelled) -> Any:
    """One row per branch and point."""
    try:
        import pandas
    except ImportError:
        raise ImportError("to_dataframe() needs pandas: pip install 'plasmalin[labels]'") from None
    return pandas.DataFrame(dict(zip(columns(roots), rows(roots).T.tolist(), strict=True)))


def columns(roots: Labelled) -> list[str]:
    """Column names of `rows`."""
    return ["branch", *roots.axes, "frequency", "growth_rate", "radius"]


def rows(roots: Labelled) -> Any:
    """Branch number, what varies, frequency, growth rate, radius; one row per branch and point."""
    places = np.meshgrid(np.arange(len(roots)), *roots.axes.values(), indexing="ij")
    values = (*places, roots.frequency, roots.growth_rate, roots.radius)
    return np.column_stack([np.ravel(v) for v in values])
