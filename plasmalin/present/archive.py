"""Branches and surfaces on disk: a JSON header and plain arrays, no pickles; files appear whole or not at all."""

from __future__ import annotations

import io
import json
import os
from dataclasses import asdict
from typing import TYPE_CHECKING, Any

import numpy as np

from ..declare.writing import write_whole
from ..roots.surfaces import Surfaces
from .labels import CONVENTION, columns, rows

if TYPE_CHECKING:
    from ..roots.branches import Branches
    from ..roots.labelled import Labelled


def save_labelled(roots: Labelled, path: str | os.PathLike[str]) -> None:
    """Write an npz archive; see `Branches.save`."""
    names = ("along",) if len(roots.axes) == 1 else ("along_1", "along_2")
    arrays: dict[str, Any] = dict(zip(names, roots.axes.values(), strict=True))
    if isinstance(roots, Surfaces):
        arrays["cut"] = roots.cut
    buffer = io.BytesIO()
    np.savez_compressed(
        buffer,
        header=np.array(json.dumps(header(roots))),
        omega=roots.omega,
        radius=roots.radius,
        status=roots.status,
        factor=np.array(roots.factor, np.int64),
        label=np.array(roots.label),
        **arrays,
    )
    write_whole(path, buffer.getvalue())


def header(roots: Labelled) -> dict[str, object]:
    """What was solved: laws, wave vector, numbers; enough to run it again."""
    from .. import __version__

    linear, numbers, names = roots.wave.linear, roots.numbers, list(roots.axes)
    scales = {name: unit.scale for name, unit in linear.units.items()}
    return {
        "plasmalin": __version__,
        "title": linear.title,
        "convention": CONVENTION,
        "units": "SI, or as in parameter_units; omega in rad/s",
        "laws": {name: str(law) for name, law in linear.laws.items()},
        "constraints": {name: str(law) for name, law in linear.redundant.items()},
        "backgrounds": {n: str(f.background) for n, f in linear.fields.items()},
        "wave_vector": [str(c) for c in roots.wave.k],
        "varies": names[0] if len(names) == 1 else names,
        "values": {s.name: float(v / scales.get(s.name, 1)) for s, v in numbers.fixed.items()},
        "parameter_units": {n: u.text for n, u in linear.units.items() if n in linear.symbols},
        "solved": {s.name: str(e) for s, e in numbers.solved.items()},
        "method": roots.method,
        "events": [_plain(event) for event in roots.events],
    }


def _plain(event: object) -> dict[str, object]:
    """An event for JSON, omega as its two parts, a radius that is not known left out."""
    found = asdict(event)  # type: ignore[call-overload]
    if "omega" in found:
        found["omega"] = [found["omega"].real, found["omega"].imag]
    return {k: v for k, v in found.items() if v != float("inf")}


def csv_text(branches: Branches) -> str:
    """The rows of the branches as comma-separated values, 17 digits."""
    buffer = io.StringIO()
    np.savetxt(
        buffer,
        rows(branches),
        fmt=["%d"] + ["%.17g"] * 4,
        delimiter=",",
        header=",".join(columns(branches)),
        comments="",
    )
    return buffer.getvalue()
