"""Branches on disk: a JSON header and plain arrays, no pickles; files appear whole or not at all."""

from __future__ import annotations

import io
import json
import os
from typing import TYPE_CHECKING

import numpy as np

from ..declare.writing import write_whole
from .labels import CONVENTION, columns, rows

if TYPE_CHECKING:
    from ..roots.branches import Branches


def save_branches(branches: Branches, path: str | os.PathLike[str]) -> None:
    """Write an npz archive; see `Branches.save`."""
    buffer = io.BytesIO()
    np.savez_compressed(
        buffer,
        header=np.array(json.dumps(header(branches))),
        along=branches.along,
        omega=branches.omega,
        radius=branches.radius,
        status=branches.status,
        factor=np.array(branches.factor, np.int64),
        label=np.array(branches.label),
    )
    write_whole(path, buffer.getvalue())


def header(branches: Branches) -> dict[str, object]:
    """What was solved: laws, wave vector, numbers; enough to run it again."""
    from .. import __version__

    linear, numbers = branches.wave.linear, branches.numbers
    scales = {name: unit.scale for name, unit in linear.units.items()}
    return {
        "plasmalin": __version__,
        "title": linear.title,
        "convention": CONVENTION,
        "units": "SI, or as in parameter_units; omega in rad/s",
        "laws": {name: str(law) for name, law in linear.laws.items()},
        "constraints": {name: str(law) for name, law in linear.redundant.items()},
        "backgrounds": {n: str(f.background) for n, f in linear.fields.items()},
        "wave_vector": [str(c) for c in branches.wave.k],
        "varies": branches.name,
        "values": {s.name: float(v / scales.get(s.name, 1)) for s, v in numbers.fixed.items()},
        "parameter_units": {n: u.text for n, u in linear.units.items() if n in linear.symbols},
        "solved": {s.name: str(e) for s, e in numbers.solved.items()},
        "method": branches.method,
    }


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
