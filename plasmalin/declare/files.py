"""Model files read: a FluidModel, its numbers, a wave and a sweep as TOML (`writing` writes them)."""

from __future__ import annotations

import difflib
import math
import os
import re
import tomllib
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from importlib import resources
from pathlib import Path
from typing import Any

from ..errors import ModelFileError, PlasmalinError, UnitError
from .constants import CODATA
from .fields import Field
from .model import FluidModel
from .units import read_unit

LARGEST = 1_000_000
NAME = re.compile(r"[^\W\d]\w*")
MISTAKABLE = {"u", "h", "G", "R"}
"""Constants of nature that a file names in [model] constants: their letters mean other things as well."""

KEYS: dict[str, set[str]] = {
    "file": {"model", "scalar", "vector", "tensor", "parameters", "vector_parameter", "law", "constraint", "wave", "sweep", "claim"},
    "[model]": {"title", "axes", "constants", "assume"},
    "[[scalar]]": {"name", "background", "gradient", "unit", "latex"},
    "[[vector]]": {"name", "background", "gradient", "unit", "latex"},
    "[[tensor]]": {"name", "background", "unit", "latex", "symmetric"},
    "[[vector_parameter]]": {"name", "entries", "unit"},
    "[[law]]": {"name", "text"},
    "[[constraint]]": {"name", "text"},
    "[wave]": {"direction", "angle"},
    "[parameters] entry": {"value", "unit", "positive"},
    "[sweep] entry": {"from", "to", "points", "spacing"},
    "[[claim]]": {"text", "law", "where", "under", "phase", "units"},
}  # fmt: skip


@dataclass(frozen=True)
class Sweep:
    """What varies, from where to where."""

    name: str
    start: float
    stop: float
    points: int
    logarithmic: bool


@dataclass(frozen=True)
class StatedClaim:
    """A claim as a file states it.

    Attributes
    ----------
    text : str
        The claimed relation, or the linearized law where `law` names one.
    law : str or None
    where : mapping of str to str or number
        Shorthands.
    under : mapping of str to str or number, or tuple of str, or None
        The conditions that the author states.
    convention : mapping of str to str
        ``phase`` and ``units`` where they are given.
    """

    text: str
    law: str | None
    where: Mapping[str, Any]
    under: Mapping[str, Any] | tuple[str, ...] | None
    convention: Mapping[str, str]


@dataclass(frozen=True)
class ModelFile:
    """A model file as read.

    Attributes
    ----------
    model : FluidModel
        With the file's numbers as defaults.
    wave : dict
        Keyword arguments of `LinearizedModel.plane_wave`.
    numbers : dict of str to float
        Wave numbers and angles that do not vary, rad/m and rad.
    sweep : Sweep or None
    assume : tuple of str
        Laws that an external source balances.
    claims : tuple of StatedClaim
        Claimed relations and laws.
    """

    model: FluidModel
    wave: Mapping[str, Any]
    numbers: Mapping[str, float]
    sweep: Sweep | None
    assume: tuple[str, ...]
    claims: tuple[StatedClaim, ...]


def load(path: str | os.PathLike[str]) -> FluidModel:
    """Read a model from a TOML file.

    Parameters
    ----------
    path : path-like

    Returns
    -------
    FluidModel
        The file's numbers are its defaults.

    Raises
    ------
    ModelFileError
        When the file cannot be read, naming the section and the entry at fault.
    """
    return read_model_file(path).model


def load_example(name: str) -> FluidModel:
    """A shipped example by its name, such as "xenon-iodine-plume".

    Parameters
    ----------
    name : str

    Returns
    -------
    FluidModel

    Raises
    ------
    ModelFileError
        When there is no such example.
    """
    return read_model_file(example_path(name)).model


def example_names() -> list[str]:
    """The names of the shipped examples."""
    folder = resources.files("plasmalin") / "examples"
    return sorted(
        f.name.removesuffix(".toml") for f in folder.iterdir() if f.name.endswith(".toml")
    )


def example_path(name: str) -> Path:
    """Where a shipped example lies."""
    if name not in example_names():
        raise ModelFileError(f"no example '{name}'; there are {', '.join(example_names())}")
    return Path(str(resources.files("plasmalin") / "examples" / f"{name}.toml"))


def read_model_file(path: str | os.PathLike[str]) -> ModelFile:
    """Read a whole model file.

    Raises
    ------
    ModelFileError
        When it cannot be read or does not describe a model.
    """
    data = _parsed(Path(path))
    try:
        return _built(data)
    except ModelFileError as error:
        raise ModelFileError(f"{Path(path).name}: {error}") from None
    except PlasmalinError as error:
        raise ModelFileError(f"{Path(path).name}: {error}") from error


def _parsed(path: Path) -> dict[str, Any]:
    try:
        if path.stat().st_size > LARGEST:
            raise ModelFileError(f"{path.name}: larger than {LARGEST} bytes, not a model file")
        return tomllib.loads(path.read_text(encoding="utf-8"))
    except OSError as error:
        raise ModelFileError(f"cannot read {path}: {error.strerror}") from None
    except (UnicodeDecodeError, tomllib.TOMLDecodeError, RecursionError) as error:
        raise ModelFileError(f"{path.name} is not a TOML file: {error}") from None


def _built(data: dict[str, Any]) -> ModelFile:
    _known(data, "file")
    head = _table(data, "model")
    _known(head, "[model]")
    model = FluidModel(_text(head, "title", "[model]"), axes=_text(head, "axes", "[model]", "xyz"))
    _parameters(model, head, _table(data, "parameters"), _constants_in_laws(data))
    for kind in ("scalar", "vector", "tensor"):
        for entry in _list(data, kind):
            _field(model, kind, entry)
    for entry in _list(data, "vector_parameter"):
        _known(entry, "[[vector_parameter]]")
        entries, name = _plain(entry.get("entries")), _text(entry, "name", "[[vector_parameter]]")
        model.vector_parameter(name, entries, unit=_unit(entry, f"[[vector_parameter]] {name}"))
    for kind, add in (("law", model.law), ("constraint", model.constraint)):
        for entry in _list(data, kind):
            _known(entry, f"[[{kind}]]")
            add(_text(entry, "name", f"[[{kind}]]"), _text(entry, "text", f"[[{kind}]]"))
    assume = head.get("assume", [])
    if not isinstance(assume, list) or any(not isinstance(n, str) for n in assume):
        raise ModelFileError("[model] assume: give a list of law names")
    return ModelFile(
        model,
        *_wave(_table(data, "wave")),
        _sweep(_table(data, "sweep")),
        tuple(assume),
        tuple(_claim(entry, number) for number, entry in enumerate(_list(data, "claim"), 1)),
    )


def _known(table: Mapping[str, Any], section: str) -> None:
    for key in table:
        if key not in KEYS[section]:
            near = difflib.get_close_matches(key, KEYS[section], 1)
            hint = (
                f"did you mean '{near[0]}'?"
                if near
                else f"known are {', '.join(sorted(KEYS[section]))}"
            )
            raise ModelFileError(f"{section}: unknown entry '{key}'; {hint}")


def _table(data: Mapping[str, Any], name: str) -> dict[str, Any]:
    found = data.get(name, {})
    if not isinstance(found, dict):
        raise ModelFileError(f"'{name}' must be a section [{name}]")
    return found


def _list(data: Mapping[str, Any], name: str) -> list[dict[str, Any]]:
    found = data.get(name, [])
    if not isinstance(found, list) or any(not isinstance(e, dict) for e in found):
        raise ModelFileError(f"'{name}' must be a list of sections [[{name}]]")
    return found


def _text(table: Mapping[str, Any], key: str, section: str, default: str | None = None) -> str:
    found = table.get(key, default)
    if not isinstance(found, str):
        raise ModelFileError(f"{section}: '{key}' must be a text, not {found!r}")
    return found


def _number(value: Any, where: str) -> float:
    if isinstance(value, bool) or not isinstance(value, int | float) or not math.isfinite(value):
        raise ModelFileError(f"{where}: {value!r} is not a finite number")
    return float(value)


def _plain(value: Any) -> Any:
    return tuple(_plain(v) for v in value) if isinstance(value, list) else value


def _constants_in_laws(data: Mapping[str, Any]) -> list[str]:
    """Constants of nature that the laws name and nothing in the file declares, in the order of `CODATA`."""
    told = [entry.get("text") for kind in ("law", "constraint") for entry in _list(data, kind)]
    used = {name for text in told if isinstance(text, str) for name in NAME.findall(text)}
    kinds = ("scalar", "vector", "tensor", "vector_parameter")
    entries = [entry for kind in kinds for entry in _list(data, kind)]
    declared = {*_table(data, "parameters"), *(str(entry.get("name")) for entry in entries)}
    given = [entry.get(key) for entry in entries for key in ("background", "gradient", "entries")]
    declared |= {n for x in _flat(_plain(given)) if isinstance(x, str) for n in NAME.findall(x)}
    return [name for name in CODATA if name in used - declared - MISTAKABLE]


def _parameters(
    model: FluidModel, head: Mapping[str, Any], table: Mapping[str, Any], implied: list[str]
) -> None:
    constants = head.get("constants", [])
    if not isinstance(constants, list) or any(not isinstance(n, str) for n in constants):
        raise ModelFileError("[model] constants: give a list of names")
    constants = [*constants, *implied]
    if constants:
        model.constants(constants)
    for name, given in table.items():
        entry = given if isinstance(given, dict) else {"value": given}
        _known(entry, "[parameters] entry")
        where = f"[parameters] {name}"
        value = _number(entry["value"], where) if "value" in entry else None
        positive = entry.get("positive", name in constants or (value is not None and value > 0))
        if not isinstance(positive, bool):
            raise ModelFileError(f"{where}: 'positive' must be true or false")
        model.parameter(name, positive=positive, unit=_unit(entry, where), value=value)


def _unit(entry: Mapping[str, Any], where: str) -> str | None:
    """The unit of an entry as text, known to be readable."""
    given = entry.get("unit")
    if given is None:
        return None
    try:
        return read_unit(given).text
    except UnitError as error:
        raise ModelFileError(f"{where}: {error}") from None


def _field(model: FluidModel, kind: str, entry: Mapping[str, Any]) -> None:
    section = f"[[{kind}]]"
    _known(entry, section)
    name = _text(entry, "name", section)
    options: dict[str, Any] = {key: entry[key] for key in ("latex", "symmetric") if key in entry}
    options["unit"] = _unit(entry, f"{section} {name}")
    declare: Callable[..., Field] = getattr(model, kind)
    for key in ("background", "gradient"):
        if key not in entry:
            continue
        options[key] = _plain(entry[key])
        for x in _flat(options[key]):
            if not isinstance(x, str | int | float) or isinstance(x, bool):
                raise ModelFileError(f"{section} {name}: the {key} {x!r} is not a number or a text")
    declare(name, **options)


def _flat(value: Any) -> list[Any]:
    return [x for v in value for x in _flat(v)] if isinstance(value, tuple) else [value]


def _wave(table: Mapping[str, Any]) -> tuple[dict[str, Any], dict[str, float]]:
    """What `plane_wave` takes, and the numbers that are given for names in it."""
    made = {key: _plain(value) for key, value in table.items() if key in KEYS["[wave]"]}
    numbers = {key: value for key, value in table.items() if key not in made}
    _known({k: v for k, v in numbers.items() if not isinstance(v, int | float)}, "[wave]")
    return made, {key: _number(value, f"[wave] {key}") for key, value in numbers.items()}


def _sweep(table: Mapping[str, Any]) -> Sweep | None:
    if not table:
        return None
    if len(table) != 1:
        raise ModelFileError(f"[sweep]: one quantity varies, {len(table)} are given")
    name, entry = next(iter(table.items()))
    if not isinstance(entry, dict):
        raise ModelFileError(f"[sweep] {name}: give {{ from = ..., to = ..., points = ... }}")
    _known(entry, "[sweep] entry")
    start, stop = (_number(entry.get(key), f"[sweep] {name} {key}") for key in ("from", "to"))
    points = entry.get("points", 200)
    if not isinstance(points, int) or not 1 <= points <= 1_000_000:
        raise ModelFileError(
            f"[sweep] {name}: points = {points!r} is not a whole number from 1 to 1000000"
        )
    spacing = entry.get("spacing", "linear")
    if spacing not in ("linear", "log"):
        raise ModelFileError(f'[sweep] {name}: spacing = {spacing!r}; give "linear" or "log"')
    if spacing == "log" and not (start > 0 and stop > 0):
        raise ModelFileError(f"[sweep] {name}: a log spacing needs positive ends")
    return Sweep(name, start, stop, points, spacing == "log")


def _claim(entry: Mapping[str, Any], number: int) -> StatedClaim:
    section = "[[claim]]"
    _known(entry, section)
    place = f"{section} {number}"
    text = _text(entry, "text", place)
    law = _text(entry, "law", place) if "law" in entry else None
    convention = {key: _text(entry, key, place) for key in ("phase", "units") if key in entry}
    under = entry.get("under")
    if law is not None and (convention or under is not None):
        raise ModelFileError(f"{place}: a claimed law takes 'where' only")
    where = _meanings(entry.get("where", {}), f"{place} where")
    if isinstance(under, list) and all(isinstance(u, str) for u in under):
        return StatedClaim(text, law, where, tuple(under), convention)
    stated = None if under is None else _meanings(under, f"{place} under")
    return StatedClaim(text, law, where, stated, convention)


def _meanings(given: Any, place: str) -> Mapping[str, Any]:
    """A table of texts and numbers."""
    if not isinstance(given, dict):
        raise ModelFileError(f'{place}: give {{ name = "..." }}, or for `under` a list of texts')
    for name, value in given.items():
        if not isinstance(value, str):
            _number(value, f"{place} {name}")
    return given
