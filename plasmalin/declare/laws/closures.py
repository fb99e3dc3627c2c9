"""What ready laws check before they add a law: that a field is declared, and that a species has one closure."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any, cast

from sympy import Expr, Symbol

from ...errors import DeclarationError
from ..fields import Field
from ..law import Law
from ..model import FluidModel
from ..role import Role

MAKERS = {0: ("scalar", 'background="{}_0"'), 1: ("vector", "background=0")}


def declared(model: FluidModel, given: Any, rank: int, what: str) -> Any:
    """The field that is meant by itself, by an expression in fields or by its name.

    Raises
    ------
    DeclarationError
        When the model has no such field, with the call that declares it.
    """
    if isinstance(given, Expr) and not isinstance(given, Symbol):
        return given  # a field of another model or rank is refused by the law
    name = str(given)
    found = model.fields.get(name)
    if found is not None and found.rank == rank:
        return found
    word, background = MAKERS[rank]
    shown = name if given is not None and name.isidentifier() else "f"
    how = f"{shown} = model.{word}({shown!r}, {background.format(shown)})"
    raise DeclarationError(
        f"{what} needs a {word} field; {given!r} is not declared as one; declare it first: {how}"
    )


def named(model: FluidModel, given: Any, rank: int, what: str) -> Any:
    """The field where a name is given, else what is given."""
    return declared(model, given, rank, what) if isinstance(given, str) else given


def ready_law(model: FluidModel, name: str, lhs: Expr, rhs: Any, role: Role) -> Law:
    """Add a law with its role.

    Raises
    ------
    DeclarationError
        When it closes the pressure of a species that is closed otherwise already.
    """
    roles = {n: law.role for n, law in model.laws.items() if law.role is not None}
    _check_closures(name, role, roles)
    model.law(name, lhs, rhs)
    model._assign(name, role)
    return model.laws[name]


def _check_closures(name: str, role: Role, roles: Mapping[str, Role]) -> None:
    """No pressure closed twice, and the momentum law must feel every closure of its species."""
    for other, theirs in roles.items():
        if _label(theirs.velocity) == _label(role.velocity):
            _check_twice(name, role, other, theirs)
            _check_felt(name, role, other, theirs)
            _check_felt(other, theirs, name, role)


def _check_twice(name: str, role: Role, other: str, theirs: Role) -> None:
    if role.closes is None or theirs.closes is None:
        return
    twice = {_label(f) for f in role.closes} & {_label(f) for f in theirs.closes}
    if twice or not role.closes or not theirs.closes:
        raise DeclarationError(
            f"contradictory closures for '{role.velocity}': law '{name}' and law '{other}' both close "
            f"{', '.join(map(repr, sorted(twice))) or 'its pressure'}; keep one (model.remove_law({other!r}))"
        )


def _check_felt(name: str, closure: Role, other: str, momentum: Role) -> None:
    if not closure.closes or momentum.pressure is None or momentum.pressure == 0:
        return
    felt = {f.name for f in momentum.pressure.atoms(Field)}
    unfelt = [_label(f) for f in closure.closes if _label(f) not in felt]
    if unfelt:
        raise DeclarationError(
            f"contradictory closures for '{closure.velocity}': law '{name}' evolves "
            f"{', '.join(map(repr, unfelt))}, but the pressure in law '{other}' is {momentum.pressure}, without it; "
            "put the field into pressure= or leave the law out"
        )


def _label(field: Expr) -> str:
    return cast(str, getattr(field, "name", str(field)))
