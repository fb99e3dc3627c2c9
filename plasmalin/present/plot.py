"""Figures of branches: frequency above, growth rate below, on one axis of what varies."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

if TYPE_CHECKING:
    from ..roots.branches import Branches
    from ..roots.labelled import Labelled

COLORS = ("#0072B2", "#D55E00", "#009E73", "#CC79A7", "#E69F00", "#56B4E9", "#000000")
"""Colors that color-blind readers tell apart (Okabe and Ito 2008, Color Universal Design)."""
STYLES = ("-", "--", "-.", ":")
WIDE = 30.0
"""A sweep over more than this ratio is drawn on a logarithmic axis."""
FLAT = 1e-12
"""Growth below this part of the largest |omega| is drawn as none."""


def plot_branches(branches: Branches, ax: Any = None, **line: Any) -> Any:
    """Draw all branches; see `Branches.plot`."""
    upper, lower = _axes() if ax is None else ax
    scale = np.nanmax(np.abs(branches.omega[np.isfinite(branches.omega)]), initial=0.0)
    for b in range(len(branches)):
        style = {
            "color": COLORS[b % len(COLORS)],
            "linestyle": STYLES[b // len(COLORS) % len(STYLES)],
            "linewidth": 1.4,
            **line,
        }
        finite = np.isfinite(branches.omega[b])
        upper.plot(branches.along, np.where(finite, branches.frequency[b], np.nan), **style)
        lower.plot(branches.along, np.where(finite, branches.growth_rate[b], np.nan), **style)
    _dress(branches, upper, lower, scale)
    return upper, lower


def _axes() -> Any:
    from matplotlib import pyplot

    figure, axes = pyplot.subplots(
        2, 1, sharex=True, figsize=(6.4, 6.0), height_ratios=(3, 2), layout="constrained"
    )
    del figure
    return axes


def _dress(branches: Branches, upper: Any, lower: Any, scale: float) -> None:
    s = branches.along[np.isfinite(branches.along)]
    if len(s) and s.min() > 0 and s.max() > WIDE * s.min():
        upper.set_xscale("log")
        lower.set_xscale("log")
    sizes = np.abs(branches.frequency[np.isfinite(branches.frequency) & (branches.frequency != 0)])
    if len(sizes) and sizes.max() > 1e3 * np.median(sizes):
        _signed_decades(upper, sizes)
    growth = branches.growth_rate[np.isfinite(branches.growth_rate)]
    if not len(growth) or np.abs(growth).max() <= FLAT * scale:
        lower.set_ylim(-1, 1)
        lower.text(
            0.5, 0.5, "no growth, no damping", transform=lower.transAxes, ha="center", va="bottom"
        )
    upper.set_ylabel(r"frequency $\mathrm{Re}\,\omega$ (rad/s)")
    lower.set_ylabel(r"growth rate $\mathrm{Im}\,\omega$ (rad/s)")
    lower.set_xlabel(axis_label(branches, branches.name))
    for axis in (upper, lower):
        axis.axhline(0.0, color="0.7", linewidth=0.6, zorder=0)


def axis_label(roots: Labelled, name: str) -> str:
    """The name of what varies, with its unit where it is known."""
    wave_numbers = {k.name for k in roots.wave.wave_symbols if "k" in k.name}
    declared = roots.wave.linear.units.get(name)
    unit = "rad/m" if name in wave_numbers else str(declared) if declared else ""
    return f"{name} ({unit})" if unit else name


def _signed_decades(axis: Any, sizes: Any) -> None:
    """Linear around zero up to the slow branches, decades beyond, with ticks that do not crowd."""
    low = int(np.floor(np.log10(np.percentile(sizes, 20))))
    high = int(np.ceil(np.log10(sizes.max())))
    step = max(1, (high - low) // 4)
    decades = [10.0**n for n in range(high, low, -step)]
    axis.set_yscale("symlog", linthresh=10.0**low)
    axis.set_yticks([*(-d for d in decades), 0.0, *decades])
