"""What an author's symbols mean: the sign of the phase and the system of units."""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from typing import Any

from sympy import Expr, I, Symbol, pi, sqrt

from ..errors import DeclarationError

UNITS = ("SI", "gaussian", "heaviside-lorentz")


@dataclass(frozen=True)
class Convention:
    """The conventions of a paper, stated once and passed to every claim.

    Parameters
    ----------
    phase : str, default "exp(-i omega t)"
        The time dependence of a plane wave: "exp(-i omega t)", growth is Im ω > 0, or "exp(+i omega t)", growth is
        Im ω < 0. The wave runs towards positive k·x in both.
    units : str, default "SI"
        "SI", "gaussian" or "heaviside-lorentz".

    Raises
    ------
    DeclarationError
        When the phase or the units are not among these.

    Examples
    --------
    >>> import plasmalin as plin
    >>> plin.Convention(phase="exp(+i omega t)").phase
    'exp(+i omega t)'
    """

    phase: str = "exp(-i omega t)"
    units: str = "SI"

    def __post_init__(self) -> None:
        object.__setattr__(self, "phase", _phase(self.phase))
        known = {u.lower(): u for u in UNITS} | {"cgs": "gaussian", "lorentz": UNITS[2]}
        key = str(self.units).lower().replace("–", "-").replace(" ", "-")
        if key not in known:
            raise DeclarationError(f"units={self.units!r}: give one of {', '.join(UNITS)}")
        object.__setattr__(self, "units", known[key])

    @property
    def turned(self) -> bool:
        """Whether the phase has the other sign than the derived relation's."""
        return self.phase != "exp(-i omega t)"

    def others(self) -> Iterable[Convention]:
        """The conventions that differ from this one, nearest first."""
        phases = ("exp(-i omega t)", "exp(+i omega t)")
        made = (Convention(p, u) for u in UNITS for p in phases)
        return sorted(
            (c for c in made if c != self),
            key=lambda c: (c.phase != self.phase) + (c.units != self.units),
        )

    def __str__(self) -> str:
        return f"{self.phase}, {self.units} units"


def _phase(given: str) -> str:
    """Either spelling of the phase, whatever its spaces, stars and the letter of the unit."""
    text = re.sub(r"[\s*{}]|\\", "", str(given)).replace("−", "-").replace("ω", "omega")
    match = re.fullmatch(r"exp[(\[]?([+-]?)[ij][(\[]?(?:k[.·]?[xrz]|k_?xx)?([+-]?)omegat.*", text)
    if match is None:
        raise DeclarationError(
            f'phase={given!r}: give "exp(-i omega t)" or "exp(+i omega t)", the time dependence of a plane wave'
        )
    negative = (match[1] == "-") != (match[2] == "-")
    return "exp(-i omega t)" if negative else "exp(+i omega t)"


@dataclass(frozen=True)
class Roles:
    """Which symbols of a model are charges, magnetic fields, and the constants of electromagnetism."""

    charges: tuple[Symbol, ...]
    magnetic: tuple[Symbol, ...]
    electric: tuple[Symbol, ...]
    epsilon: Symbol
    mu: Symbol
    c: Symbol


def to_si(expr: Expr, convention: Convention, roles: Roles) -> Expr:
    """An expression in an author's convention, with the same symbols in SI and exp(−iωt).

    Charges, fields and moments change by the usual factors (Jackson, Classical Electrodynamics, 3rd ed., appendix,
    table 3; from memory): q → q/√(4π ε_0), E → √(4π ε_0) E, B → √(4π/μ_0) B in Gaussian units, without the 4π in
    Heaviside–Lorentz ones.
    """
    if convention.turned:
        expr = expr.xreplace({I: -I})
    factors = unit_factors(convention.units, roles)
    return expr.xreplace({s: s * f for s, f in factors.items()}) if factors else expr


def unit_factors(units: str, roles: Roles) -> Mapping[Symbol, Any]:
    """What every charge and field symbol is multiplied by."""
    if units == "SI":
        return {}
    rational = 4 * pi if units == "gaussian" else 1
    charge = 1 / sqrt(rational * roles.epsilon)
    magnetic = roles.c * sqrt(rational * roles.epsilon)  # = sqrt(rational / mu_0)
    return {
        **dict.fromkeys(roles.charges, charge),
        **dict.fromkeys(roles.electric, 1 / charge),
        **dict.fromkeys(roles.magnetic, magnetic),
    }
