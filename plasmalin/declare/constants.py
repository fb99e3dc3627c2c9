"""Constants of nature by the names that laws use; the numbers are CODATA's, as SciPy ships them."""

from __future__ import annotations

import difflib

from ..errors import DeclarationError

CODATA = {
    "e": "elementary charge",
    "epsilon_0": "vacuum electric permittivity",
    "mu_0": "vacuum mag. permeability",
    "c": "speed of light in vacuum",
    "m_e": "electron mass",
    "m_p": "proton mass",
    "m_n": "neutron mass",
    "u": "atomic mass constant",
    "k_B": "Boltzmann constant",
    "h": "Planck constant",
    "hbar": "reduced Planck constant",
    "G": "Newtonian constant of gravitation",
    "N_A": "Avogadro constant",
    "R": "molar gas constant",
    "sigma_SB": "Stefan-Boltzmann constant",
    "alpha_fs": "fine-structure constant",
}
"""Name here -> CODATA name."""

UNITS = {
    "e": "C",
    "epsilon_0": "F/m",
    "mu_0": "H/m",
    "c": "m/s",
    "m_e": "kg",
    "m_p": "kg",
    "m_n": "kg",
    "u": "kg",
    "k_B": "J/K",
    "h": "J s",
    "hbar": "J s",
    "G": "m^3 kg^-1 s^-2",
    "N_A": "1/mol",
    "R": "J/(mol K)",
    "sigma_SB": "W m^-2 K^-4",
    "alpha_fs": "1",
}
"""Name here -> SI unit of the number."""


def codata(name: str) -> float:
    """The CODATA number of a constant, SI.

    Raises
    ------
    DeclarationError
        When the name is not known.
    """
    from scipy.constants import physical_constants

    if name not in CODATA:
        near = difflib.get_close_matches(name, CODATA, 3)
        hint = f"did you mean {' or '.join(near)}?" if near else f"known are {', '.join(CODATA)}"
        raise DeclarationError(f"'{name}' is not a known constant; {hint}")
    return float(physical_constants[CODATA[name]][0])
