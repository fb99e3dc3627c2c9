"""What an author's symbols mean: the sign of the phase and the system of units."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

from sympy import Expr, I, Symbol, pi, sqrt

from ..errors import DeclarationError
from .claim import Claim
from .compare import Match, compare
from .derived import derive
from .roles import Roles, roles

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix

UNITS = ("SI", "gaussian", "heaviside-lorentz")
PHASES = ("exp(-i omega t)", "exp(+i omega t)")


@dataclass(frozen=True)
class Convention:
    """The conventions of a paper, stated once and passed to every claim.

    Parameters
    ----------
    phase : str, default "exp(-i omega t)"
        The time dependence of a plane wave: "exp(-i omega t)", growth is Im ω > 0, or "exp(+i omega t)", growth is
        Im ω < 0. The wave runs towards positive k·x in both.
    units : str, default "SI"
        "SI", "gaussian" or "heaviside-lorentz". Temperatures are energies in all of them.

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
        known = {u.lower(): u for u in UNITS} | {"cgs": "gaussian", "lorentz-heaviside": UNITS[2]}
        key = re.sub(r"[\s–_]", "-", str(self.units).lower())
        if key not in known:
            raise DeclarationError(f"units={self.units!r}: give one of {', '.join(UNITS)}")
        object.__setattr__(self, "units", known[key])

    @property
    def turned(self) -> bool:
        """Whether the phase has the other sign than the derived relation's."""
        return self.phase != PHASES[0]

    @property
    def others(self) -> list[Convention]:
        """The conventions that differ from this one, nearest first."""
        made = [Convention(p, u) for p in PHASES for u in UNITS]
        return sorted((c for c in made if c != self), key=self.distance)

    def distance(self, other: Convention) -> int:
        """In how many of phase and units two conventions differ."""
        return (other.phase != self.phase) + (other.units != self.units)

    def __str__(self) -> str:
        return f"{self.phase}, {self.units} units"


def _phase(given: str) -> str:
    """Either phase from any usual spelling: exp(-iωt), exp[i(k·x − ωt)], e^{-i omega t} ..."""
    text = re.sub(r"[\s*{}\[\]()^\\.·]|vec|bf", "", str(given))
    text = text.replace("−", "-").replace("–", "-").replace("ω", "omega")
    body = re.fullmatch(r"(?:exp|e)(.*)", text)
    signs = _signs(body[1]) if body else {}
    if "omegat" not in signs:
        raise DeclarationError(
            f'phase={given!r}: give "{PHASES[0]}" or "{PHASES[1]}", the time dependence of a plane wave'
        )
    if signs.get("kx") == signs["omegat"]:
        raise DeclarationError(
            f"phase={given!r} runs towards negative k; reverse k in the claim and state exp(±i(k.x − omega t))"
        )
    return PHASES[signs["omegat"] == "+"]


def _signs(body: str) -> dict[str, str]:
    """The signs of iωt and of ik·x in an exponent; empty where anything else stands there."""
    terms = re.findall(r"([+-]?)([^+-]+)", body)
    outer = re.fullmatch(r"([+-]?)[ij](.*)", body)
    reverse = False
    if outer and not all(term[0] in "ij" for _, term in terms):  # one i before the bracket
        terms, reverse = re.findall(r"([+-]?)([^+-]+)", outer[2]), outer[1] == "-"
    else:
        terms = [(sign, term[1:]) for sign, term in terms if term[0] in "ij"]
    found: dict[str, str] = {}
    for sign, term in terms:
        name = "kx" if re.fullmatch(r"k_?[xyzr]{1,2}", term) else term
        found[name] = "-" if (sign == "-") != reverse else "+"
    return found if set(found) <= {"kx", "omegat"} else {}


def in_si(claim: Claim, convention: Convention, found: Roles) -> Claim:
    """A claim in its author's convention, said in SI and exp(−iωt); a wave equation holds no phase."""
    if claim.of_field:
        convention = Convention(units=convention.units)
    return claim.mapped(lambda expr: to_si(expr, convention, found))


def to_si(expr: Expr, convention: Convention, found: Roles) -> Expr:
    """An expression in an author's convention, with the same symbols in SI and exp(−iωt).

    Charges and fields change by the usual factors (Jackson, Classical Electrodynamics, 3rd ed., appendix, table 3;
    from memory): q → q/√(4π ε_0), E → √(4π ε_0) E, B → √(4π/μ_0) B, resistivity η → 4π ε_0 η in Gaussian units,
    without the 4π in Heaviside–Lorentz ones.
    """
    if convention.turned:
        expr = expr.xreplace({I: -I})
    factors = unit_factors(convention.units, found)
    return expr.xreplace({s: s * f for s, f in factors.items()}) if factors else expr


def unit_factors(units: str, found: Roles) -> Mapping[Symbol, Expr]:
    """What every symbol that holds charge in its unit is multiplied by.

    All is written in c and the one vacuum constant that the model has, so that roots of both never meet.
    """
    if units == "SI":
        return {}
    rational = 4 * pi if units == "gaussian" else 1
    if found.mu in found.own and found.epsilon not in found.own:
        charge, magnetic = found.c * sqrt(found.mu / rational), sqrt(rational / found.mu)
    else:
        charge = 1 / sqrt(rational * found.epsilon)
        magnetic = found.c / charge
    return {
        s: magnetic if s in found.magnetic else charge**power for s, power in found.charge.items()
    }


def under_other_conventions(
    claim: Claim, wave: WaveMatrix, declared: Convention
) -> list[tuple[Convention, Match]]:
    """The conventions other than the declared one under which a claim agrees, nearest first.

    Parameters
    ----------
    claim : Claim
        As its author wrote it.
    wave : WaveMatrix
    declared : Convention
        Under which the claim does not agree; what reads the same under another is not tried again.
    """
    found: list[tuple[Convention, Match]] = []
    model = roles(wave)
    seen = {in_si(claim, declared, model).residual}
    rational = bool(claim.residual.free_symbols & {model.epsilon, model.mu})
    for other in declared.others:
        if rational and other.units != "SI":
            continue  # ε_0 and μ_0 are in no formula of other units
        made = in_si(claim, other, model)
        if made.residual in seen or any(
            declared.distance(c) < declared.distance(other) for c, _ in found
        ):
            continue
        seen.add(made.residual)
        match = compare(made, derive(wave, made.residual.free_symbols, model.constants))
        found += [(other, match)] if match else []
    return found
