"""The command line: ``plasmalin derive FILE|EXAMPLE [--out DIR]``, ``plasmalin check FILE [--out DIR]`` and
``plasmalin example [NAME]``.
"""

from __future__ import annotations

import argparse
import io
import sys
from collections.abc import Sequence
from pathlib import Path
from typing import Any

import numpy as np
from numpy.typing import NDArray

from . import __version__
from .check.convention import Convention
from .check.verdict import Verdict
from .declare.files import (
    ModelFile,
    StatedClaim,
    Sweep,
    example_names,
    example_path,
    read_model_file,
)
from .declare.writing import write_whole
from .errors import ModelFileError, PlasmalinError
from .linearize.linearized import LinearizedModel
from .present.archive import csv_text, save_labelled
from .present.report import (
    CAUTION,
    branch_table,
    claim_note,
    derivation,
    growth_text,
    relation_text,
)
from .roots.branches import Branches
from .waves.matrix import WaveMatrix


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command line.

    Returns
    -------
    int
        0 done, and every claim agrees; 1 the input is at fault, or a claim does not agree; 2 the command is at fault.
    """
    options = _parser().parse_args(arguments)
    try:
        return int(options.run(options))
    except PlasmalinError as error:
        print(f"plasmalin: {error}", file=sys.stderr)
    except OSError as error:
        print(f"plasmalin: {error.filename}: {error.strerror}", file=sys.stderr)
    return 1


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="plasmalin", description="From fluid laws to dispersion relations."
    )
    parser.add_argument("--version", action="version", version=f"plasmalin {__version__}")
    commands = parser.add_subparsers(required=True, metavar="COMMAND")
    derive = commands.add_parser("derive", help="derive, solve, plot and write the derivation")
    derive.add_argument(
        "source", metavar="FILE|EXAMPLE", help="a TOML model file, or the name of a shipped example"
    )
    derive.add_argument(
        "--out",
        type=Path,
        metavar="DIR",
        help="write derivation.md, branches.csv, .npz and .png here",
    )
    derive.set_defaults(run=_derive)
    check = commands.add_parser("check", help="judge the claims that a model file lists")
    check.add_argument("source", metavar="FILE", help="a TOML model file with sections [[claim]]")
    check.add_argument(
        "--out", type=Path, metavar="DIR", help="write one note per claim here: claim-1.md, ..."
    )
    check.set_defaults(run=_check)
    example = commands.add_parser("example", help="list the shipped examples, or print one")
    example.add_argument("name", nargs="?", metavar="NAME")
    example.add_argument(
        "--out", type=Path, metavar="FILE", help="copy it to this file instead of printing it"
    )
    example.set_defaults(run=_example)
    return parser


def _example(options: argparse.Namespace) -> int:
    if options.name is None:
        for name in example_names():
            print(f"{name}: {read_model_file(example_path(name)).model.title}")
        return 0
    text = example_path(options.name).read_text(encoding="utf-8")
    if options.out is None:
        print(text, end="")
    else:
        write_whole(options.out, text.encode())
    return 0


def _derive(options: argparse.Namespace) -> int:
    file = read_model_file(_source(options.source))
    wave = _wave(file, file.model.linearize(assume=file.assume), options.source)
    branches = _swept(wave, file)
    _print(wave, branches)
    if options.out is not None:
        _write(options.out, wave, branches)
        print(
            f"\nwritten to {options.out}: derivation.md"
            + (", branches.csv, .npz, .png" if branches else "")
        )
    return 0


def _wave(file: ModelFile, linear: LinearizedModel, source: str) -> WaveMatrix:
    if not file.wave:
        raise ModelFileError(
            f'{source}: no section [wave]; give direction = "x" or one entry per axis'
        )
    return linear.plane_wave(**file.wave)


def _check(options: argparse.Namespace) -> int:
    file = read_model_file(_source(options.source))
    if not file.claims:
        raise ModelFileError(f'{options.source}: no section [[claim]]; give text = "omega^2 = ..."')
    linear = file.model.linearize(assume=file.assume)
    relations = any(claim.law is None for claim in file.claims)
    wave = _wave(file, linear, options.source) if relations else None
    verdicts = [_judged(linear, wave, claim, i) for i, claim in enumerate(file.claims, 1)]
    for i, (claim, verdict) in enumerate(zip(file.claims, verdicts, strict=True), 1):
        print(f"claim {i}: {claim.law + ': ' if claim.law else ''}{claim.text}\n{verdict}\n")
    if options.out is not None:
        options.out.mkdir(parents=True, exist_ok=True)
        for i, (claim, verdict) in enumerate(zip(file.claims, verdicts, strict=True), 1):
            note = claim_note(linear.title, claim, verdict)
            write_whole(options.out / f"claim-{i}.md", note.encode())
    agreed = sum(v.agrees for v in verdicts)
    print(f"{agreed} of {len(verdicts)} claims agree")
    return 0 if agreed == len(verdicts) else 1


def _judged(
    linear: LinearizedModel, wave: WaveMatrix | None, claim: StatedClaim, number: int
) -> Verdict:
    """The verdict on one claim of a file; an error says which claim is at fault."""
    try:
        if wave is None or claim.law is not None:
            return linear.check(claim.law or "", claim.text, claim.where)
        return wave.check(
            claim.text,
            where=claim.where,
            under=claim.under,
            convention=Convention(**claim.convention),
            values=linear.defaults,
        )
    except PlasmalinError as error:
        raise ModelFileError(f"[[claim]] {number}: {error}") from error


def _source(name: str) -> Path:
    path = Path(name)
    if path.suffix == ".toml" or path.exists():
        return path
    return example_path(name)


def _swept(wave: WaveMatrix, file: ModelFile) -> Branches | None:
    if file.sweep is None:
        return None
    fixed: dict[str, Any] = {name: x for name, x in file.numbers.items() if name != file.sweep.name}
    absent = {s.name for s in wave.wave_symbols} - {file.sweep.name, *fixed}
    if absent:
        names = ", ".join(sorted(absent))
        raise ModelFileError(
            f"[sweep] {file.sweep.name}: no value for {names}; give it as a number in [wave]"
        )
    return wave.branches(file.sweep.name, _points(file.sweep), **fixed)


def _points(sweep: Sweep) -> NDArray[np.float64]:
    spread = np.geomspace if sweep.logarithmic else np.linspace
    return spread(sweep.start, sweep.stop, sweep.points)


def _print(wave: WaveMatrix, branches: Branches | None) -> None:
    print(
        f"{wave.linear.title}\n\nLinearized laws\n{wave.linear.equations}\n\n{wave.linear.background}\n"
    )
    print(f"Dispersion relation\n{relation_text(wave)}")
    if branches is not None:
        print(f"\nBranches\n{branch_table(branches)}\n\n{growth_text(branches)}\n{CAUTION}")


def _write(folder: Path, wave: WaveMatrix, branches: Branches | None) -> None:
    folder.mkdir(parents=True, exist_ok=True)
    write_whole(folder / "derivation.md", derivation(wave, branches).encode())
    if branches is not None:
        write_whole(folder / "branches.csv", csv_text(branches).encode())
        save_labelled(branches, folder / "branches.npz")
        write_whole(folder / "branches.png", _figure(branches))


def _figure(branches: Branches) -> bytes:
    import matplotlib

    matplotlib.use("Agg")
    from matplotlib import pyplot

    upper, _ = branches.plot()
    upper.set_title(branches.wave.linear.title, fontsize="medium")
    buffer = io.BytesIO()
    upper.figure.savefig(buffer, dpi=150)
    pyplot.close(upper.figure)
    return buffer.getvalue()


if __name__ == "__main__":
    raise SystemExit(main())
