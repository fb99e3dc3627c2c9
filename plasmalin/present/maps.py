"""Maps of surfaces: one branch's growth rate or frequency over two quantities."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from ..errors import ValuesError
from .plot import FLAT, WIDE, axis_label

if TYPE_CHECKING:
    from ..roots.surfaces import Surfaces

DRAWN = {
    "growth_rate": r"growth rate $\mathrm{Im}\,\omega$ (rad/s)",
    "frequency": r"frequency $\mathrm{Re}\,\omega$ (rad/s)",
}
DECADES = 1e3
"""Values that reach beyond this many times their median are colored by decades."""


def plot_surface(
    surfaces: Surfaces, branch: int | None, of: str | None, ax: Any = None, **mesh: Any
) -> Any:
    """Draw one branch; see `Surfaces.plot`."""
    branch = surfaces.most_unstable()[2] if branch is None else _checked(branch, len(surfaces))
    of = _most_telling(surfaces, branch) if of is None else of
    if of not in DRAWN:
        raise ValuesError(f"of={of!r} is not known; give one of {', '.join(DRAWN)}")
    if ax is None:
        ax = _axes()
    x, y = surfaces.along
    values = getattr(surfaces, of)[branch]
    shown = np.ma.masked_invalid(np.where(np.isfinite(surfaces.omega[branch]), values, np.nan))
    wide = [_is_wide(a) for a in (x, y)]
    edges = [_edges(a, w) for a, w in zip((x, y), wide, strict=True)]
    drawn = ax.pcolormesh(*edges, shown.T, **{**_colors(shown, of), "rasterized": True, **mesh})
    for logarithmic, scale in zip(wide, (ax.set_xscale, ax.set_yscale), strict=True):
        scale("log" if logarithmic else "linear")
    _mark_cuts(surfaces, branch, edges, ax)
    _mark_events(surfaces, branch, wide, ax)
    ax.set_xlabel(axis_label(surfaces, surfaces.names[0]))
    ax.set_ylabel(axis_label(surfaces, surfaces.names[1]))
    ax.set_title(f"branch {branch}, {surfaces.label[branch]}", fontsize="medium")
    ax.figure.colorbar(drawn, ax=ax, label=DRAWN[of])
    return ax


def _checked(branch: int, count: int) -> int:
    if not -count <= branch < count:
        raise ValuesError(f"there is no branch {branch}; there are {count}, from 0")
    return branch % count


def _most_telling(surfaces: Surfaces, branch: int) -> str:
    omega = surfaces.omega[branch][np.isfinite(surfaces.omega[branch])]
    grows = np.abs(omega.imag).max(initial=0.0) > FLAT * np.abs(omega).max(initial=0.0)
    return "growth_rate" if grows else "frequency"


def _axes() -> Any:
    from matplotlib import pyplot

    return pyplot.subplots(figsize=(6.4, 5.0), layout="constrained")[1]


def _is_wide(values: NDArray[np.float64]) -> bool:
    """Whether values reach over decades and are spaced accordingly."""
    low, middle, high = (float(v) for v in (values[0], np.median(values), values[-1]))
    return (
        low > 0 and high > WIDE * low and middle < np.sqrt(np.sqrt(low * high) * (low + high) / 2)
    )


def _edges(values: NDArray[np.float64], logarithmic: bool) -> NDArray[np.float64]:
    """Midway between values, and as far beyond the outermost."""
    at = np.log(values) if logarithmic else values
    step = np.diff(at) if len(at) > 1 else np.array([1e-3 * abs(at[0]) or 1.0])
    inner = at[:-1] + step / 2 if len(at) > 1 else at[:0]
    edges = np.concatenate([[at[0] - step[0] / 2], inner, [at[-1] + step[-1] / 2]])
    return np.exp(edges) if logarithmic else edges


def _colors(values: Any, of: str) -> dict[str, Any]:
    """White at zero where both signs occur, by decades where the values need it; growth always from zero."""
    from matplotlib.colors import CenteredNorm, LogNorm, Normalize, SymLogNorm

    finite = values.compressed() if values.count() else np.zeros(1)
    low, high = float(finite.min()), float(finite.max())
    sizes = np.abs(finite[finite != 0])
    largest = float(sizes.max(initial=0.0)) or 1.0
    wide = bool(len(sizes)) and largest > DECADES * float(np.median(sizes))
    signed = low < 0 < high
    small = max(float(np.percentile(sizes, 20)), 1e-8 * largest) if wide else largest
    if of == "growth_rate":
        low, high = min(low, 0.0), max(high, 0.0)
    if wide and (signed or high <= 0):
        norm: Any = SymLogNorm(small, vmin=-largest, vmax=largest if signed else 0.0)
    elif wide:
        norm = LogNorm(small, largest)
    elif signed:
        norm = CenteredNorm(halfrange=largest)
    else:
        norm = Normalize(low, high if high > low else low + largest)
    return {"cmap": "RdBu_r" if signed else "viridis", "norm": norm}


def _mark_cuts(surfaces: Surfaces, branch: int, edges: list[NDArray[np.float64]], ax: Any) -> None:
    """Lines between neighbors along the first quantity across which the label does not go on."""
    from matplotlib.collections import LineCollection

    x, y = edges
    lines = [[(x[i + 1], y[j]), (x[i + 1], y[j + 1])] for i, j in np.argwhere(surfaces.cut[branch])]
    if lines:
        ax.add_collection(
            LineCollection(lines, colors="black", linewidths=1.4, label="cut"), autolim=False
        )


def _mark_events(surfaces: Surfaces, branch: int, wide: list[bool], ax: Any) -> None:
    """Circles at the middle of the exceptional cells of this branch."""
    cells = [e.cell for e in surfaces.events if branch in e.branches]
    if not cells:
        return
    places = [
        [np.sqrt(a * b) if w else (a + b) / 2 for (a, b), w in zip(cell, wide, strict=True)]
        for cell in cells
    ]
    ax.plot(
        *np.transpose(places), "o", markersize=7, markerfacecolor="white", markeredgecolor="black",
        markeredgewidth=1.4, label="exceptional point",
    )  # fmt: skip
    handles, labels = ax.get_legend_handles_labels()
    ax.legend(handles, labels, loc="best", fontsize="small")
