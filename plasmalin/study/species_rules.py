"""Rules on the numbers of one species alone, and on numbers that look like another unit."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from ..declare.constants import codata
from .kind import Array, Kind, length
from .plasma import Plasma
from .remark import Remark
from .rule import PRACTICE, Rule, known, largest, remark, smallest

# Numbers of the species --------------------------------------------------------------------------


def drift(s: Kind, p: Plasma) -> Iterator[Remark]:
    x = largest(length(s.drift or [])) / codata("c")
    if x > 0.1 and not s.fluid.relativistic:
        yield remark(
            f"drift over c, species {s.name}",
            x,
            "the drift is faster than light; is it in m/s?"
            if x >= 1
            else "momentum is non-relativistic in the model; along the flow mass grows as γ³",
            f"{PRACTICE}: below 0.1, where γ³ is 1.5 % above 1",
        )


def thermal(s: Kind, p: Plasma) -> Iterator[Remark]:
    x = largest(known(s.thermal_speed)) / codata("c")
    if x > 0.1:
        yield remark(
            f"thermal speed over c, species {s.name}",
            x,
            "pressure and inertia are non-relativistic in the model",
            f"{PRACTICE}: sqrt(T/m) below 0.1 c, T below 1 % of m c²",
        )


def fermi_energy(s: Kind) -> Array:
    """hbar^2 (3 pi^2 n)^(2/3) / 2m of particles of spin 1/2, J."""
    inner = 3 * np.pi**2 * known(s.number)
    return np.asarray(codata("hbar") ** 2 * inner ** (2 / 3) / (2 * known(s.mass)))


def degeneracy(s: Kind, p: Plasma) -> Iterator[Remark]:
    x = smallest(known(s.temperature) / fermi_energy(s))
    if x < 3:
        yield remark(
            f"T over Fermi energy, species {s.name}",
            x,
            "the pressure of a degenerate gas is larger than n T",
            "ideal Fermi gas of spin 1/2: above 3 its pressure is less than 2.6 % above n T",
        )


def coupling(s: Kind, p: Plasma) -> Iterator[Remark]:
    x = smallest(known(s.number) * known(s.debye_length) ** 3)
    if x < 10:
        yield remark(
            f"n λ_D³, species {s.name}",
            x,
            "few particles in a Debye cube: neighbors are correlated, and neither n T nor Coulomb collisions as a small "
            "effect hold",
            f"{PRACTICE}: above 10, λ_D and n of this species",
        )


# Values that look like another unit --------------------------------------------------------------


def temperature_unit(s: Kind, p: Plasma) -> Iterator[Remark]:
    t = known(s.temperature)
    low, high = smallest(t) / codata("e"), largest(t) / codata("e")
    for x, out in ((high, high > 1e6), (low, low < 1e-4)):
        if out:
            yield remark(
                f"temperature in eV, species {s.name}",
                x,
                f"T is {x * codata('e'):.3g} J; temperatures in the equations are energies in J, so a number in eV is "
                "multiplied by e, one in K by k_B",
                f"{PRACTICE}: between 1e-4 and 1e6 eV",
            )


def density_unit(s: Kind, p: Plasma) -> Iterator[Remark]:
    x = smallest(known(s.number))
    if x < 1e9 and largest(known(s.mass)) < 1e-24:
        yield remark(
            f"density in 1/m³, species {s.name}",
            x,
            "only space between planets and beyond is as thin; a number per cm³ is multiplied by 1e6",
            f"{PRACTICE}: above 1e9 per m³ in the laboratory and in ionospheres",
        )


def mass_unit(s: Kind, p: Plasma) -> Iterator[Remark]:
    x = largest(known(s.mass))
    if not 9e-31 <= x <= 1e-6:
        yield remark(
            f"mass in kg, species {s.name}",
            x,
            "no particle or grain has this mass; a number in atomic units is multiplied by u",
            "between the electron mass and a microgram of dust, " + PRACTICE,
        )


def field_unit(s: Kind, p: Plasma) -> Iterator[Remark]:
    x = largest(known(s.magnetic_field))
    if x > 50:
        yield remark(
            f"magnetic field in T, species {s.name}",
            x,
            "stronger than any steady magnet; a number in gauss is multiplied by 1e-4",
            f"{PRACTICE}: below 50 T outside of pulsed fields and stars",
        )


def _charged(s: Kind, p: Plasma) -> bool:
    return s.charge is not None


def _magnetized(s: Kind, p: Plasma) -> bool:
    return s.gyration is not None and bool(np.any(length(s.gyration)))


SPECIES_RULES = (
    Rule("drift against light speed", ("SI", "drift"), drift),
    Rule("thermal speed against light speed", ("SI", "temperature", "mass"), thermal),
    Rule(
        "T against Fermi energy",
        ("SI", "temperature", "mass", "density"),
        degeneracy,
        applies=_charged,
    ),
    Rule("n λ_D³", ("charge", "temperature", "SI", "density", "debye"), coupling),
    Rule("temperature unit", ("SI", "temperature"), temperature_unit),
    Rule("density unit", ("SI", "density", "mass"), density_unit),
    Rule("mass unit", ("SI", "mass"), mass_unit),
    Rule("magnetic field unit", ("charge", "SI"), field_unit, applies=_magnetized),
)
