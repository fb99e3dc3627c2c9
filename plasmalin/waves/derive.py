"""From a wave matrix to its relation, or to the laws and unknowns for which there is none."""

from __future__ import annotations

from typing import TYPE_CHECKING

from ..errors import UndeterminedError
from ..exact.determinant import determinant, underdetermined_block
from .relation import Relation

if TYPE_CHECKING:
    from .matrix import WaveMatrix


def derive_relation(wave: WaveMatrix) -> Relation:
    """The determinant of a wave matrix as a relation."""
    size = len(wave.rows)
    exact = determinant(wave.entries, size, wave.omega)
    if exact.degree < 0:
        raise UndeterminedError(undetermined_message(wave))
    if exact.degree == 0:
        raise UndeterminedError(
            "no unknown changes in time: omega does not occur in the determinant; "
            "a law with a time derivative is missing"
        )
    return Relation(exact.primitive()[1], wave.linear.symbols, wave)


def undetermined_message(wave: WaveMatrix) -> str:
    """Which laws and unknowns make the determinant vanish."""
    rows, columns = underdetermined_block(wave.entries, len(wave.rows), wave.omega)
    laws = ", ".join(f"'{wave.rows[i]}'" for i in rows)
    unknowns = ", ".join(wave.columns[j].symbol.name for j in columns)
    return (
        f"the laws do not determine the waves for this wave vector: the determinant vanishes identically. "
        f"The equations {laws} are dependent, and {unknowns} stay free; "
        "replace one of these laws, or drop an unknown that nothing fixes"
    )
