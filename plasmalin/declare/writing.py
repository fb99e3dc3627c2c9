"""A model, and claims on it, as the text of a TOML file; files that appear whole or not at all."""

from __future__ import annotations

import os
import tempfile
from collections.abc import Iterable, Mapping
from pathlib import Path
from typing import Any

from sympy import Rational, Tuple

from ..errors import DeclarationError
from .constants import CODATA, codata
from .fields import Components, Field
from .files import StatedClaim
from .model import FluidModel
from .units import Unit


def save_model(
    model: FluidModel, path: str | os.PathLike[str], claims: Iterable[StatedClaim] = ()
) -> None:
    """Write a model, and claims on it, as a TOML file; it appears whole or not at all."""
    text = model_text(model) + "".join(f"\n{claim_text(c)}\n" for c in claims)
    write_whole(path, text.encode())


def claim_text(claim: StatedClaim) -> str:
    """A claim as a section of a TOML file."""
    lines = ["[[claim]]", f"text = {_quoted(claim.text)}"]
    lines += [f"law = {_quoted(claim.law)}"] if claim.law is not None else []
    lines += [f"where = {_inline(claim.where)}"] if claim.where else []
    if isinstance(claim.under, Mapping):
        lines.append(f"under = {_inline(claim.under)}")
    elif claim.under is not None:
        lines.append(f"under = [{', '.join(map(_quoted, claim.under))}]")
    return "\n".join([*lines, *(f"{k} = {_quoted(v)}" for k, v in claim.convention.items())])


def _inline(table: Mapping[str, Any]) -> str:
    shown = (
        f"{_quoted(n)} = {_quoted(v) if isinstance(v, str) else repr(v)}" for n, v in table.items()
    )
    return f"{{ {', '.join(shown)} }}"


def model_text(model: FluidModel) -> str:
    """A model as the text of a TOML file."""
    constants = [n for n, value in model.values.items() if n in CODATA and value == codata(n)]
    units = {name: unit.text for name, unit in model.units.items()}
    lines = ["[model]", f"title = {_quoted(model.title)}", f"axes = {_quoted(model.axes)}"]
    if constants:
        lines.append(f"constants = [{', '.join(map(_quoted, constants))}]")
    lines += ["", "[parameters]"]
    for name, symbol in model.symbols.items():
        if name not in constants:
            value = f"value = {model.values[name]!r}, " if name in model.values else ""
            unit = f"unit = {_quoted(units[name])}, " if name in units else ""
            positive = str(bool(symbol.is_positive)).lower()
            lines.append(f"{name} = {{ {value}{unit}positive = {positive} }}")
    for kind, fields in _by_kind(model).items():
        for field in fields:
            lines += [
                "",
                f"[[{kind}]]",
                f"name = {_quoted(field.name)}",
                f"background = {_value(field.background, model.units.get(field.name))}",
            ]
            if field.gradient != 0:
                lines.append(f"gradient = {_value(field.gradient, model.units.get(field.name))}")
            lines += [f"unit = {_quoted(units[field.name])}"] if field.name in units else []
            lines += [f"latex = {_quoted(field.latex_name)}"] if field.latex_name else []
            lines += ["symmetric = false"] if field.rank == 2 and not field.symmetric else []
    for name, vector in model.vector_parameters.items():
        lines += [
            "",
            "[[vector_parameter]]",
            f"name = {_quoted(name)}",
            f"entries = {_value(vector)}",
        ]
    for kind, laws in (("law", model.laws), ("constraint", model.constraints)):
        for law in laws.values():
            lines += ["", f"[[{kind}]]", f"name = {_quoted(law.name)}"]
            lines += [f"text = {_quoted(str(law))}"]
    return "\n".join(lines) + "\n"


def _by_kind(model: FluidModel) -> dict[str, list[Field]]:
    kinds = {"scalar": 0, "vector": 1, "tensor": 2}
    return {kind: [f for f in model.fields.values() if f.rank == r] for kind, r in kinds.items()}


def _value(value: Any, unit: Unit | None = None) -> str:
    """A background or vector; a bare number is written in the field's unit, in which it is read back."""
    if isinstance(value, Components | Tuple):
        return f"[{', '.join(_value(a, unit) for a in value.args)}]"
    if value.is_number and unit is not None:
        value = value * Rational(unit.scale.denominator, unit.scale.numerator)
    return "0" if value == 0 else _quoted(str(value))


def _quoted(text: str) -> str:
    escaped = (
        text.replace("\\", "\\\\").replace('"', '\\"').replace("\n", "\\n").replace("\t", "\\t")
    )
    if any(ord(c) < 32 for c in escaped):
        raise DeclarationError(
            f"{text!r} holds a control character and cannot be written to a file"
        )
    return f'"{escaped}"'


def write_whole(path: str | os.PathLike[str], content: bytes) -> None:
    """Write a file by way of a temporary one beside it, so that it appears whole or not at all."""
    target = Path(path)
    try:
        _write_whole(target, content)
    except OSError as error:  # it names the temporary file
        if error.errno is None:
            raise
        raise type(error)(error.errno, error.strerror, str(target)) from None


def _write_whole(target: Path, content: bytes) -> None:
    handle, temporary = tempfile.mkstemp(dir=target.parent, prefix=".", suffix=target.suffix)
    try:
        with os.fdopen(handle, "wb") as file:
            file.write(content)
        Path(temporary).chmod(0o644)
        Path(temporary).replace(target)
    except BaseException:
        Path(temporary).unlink(missing_ok=True)
        raise
