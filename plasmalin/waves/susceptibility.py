"""One species' part of the dispersion tensor."""

from __future__ import annotations

from typing import TYPE_CHECKING

from sympy import S

from ..errors import DeclarationError
from ..exact.determinant import eliminate
from .response import Reduced, eliminate_for, rows_taken, rows_that_stay

if TYPE_CHECKING:
    from .matrix import WaveMatrix


def susceptibility(wave: WaveMatrix, species: str, fields: tuple[str, ...]) -> Reduced:
    """What one species adds to the tensor of the fields; see `WaveMatrix.susceptibility`.

    The other species are cut out of the equations that stay and of the field laws; the tensor without any species is
    subtracted.
    """
    fields = fields or _default_fields(wave)
    columns = list(dict.fromkeys(j for name in fields for j in wave.column(name)))
    own, others = species_columns(wave, species)
    rows = rows_that_stay(wave, columns)
    taken = rows_taken(wave, columns)
    field_rows = {*rows, *(i for j, i in taken.items() if j not in own | others)}
    parts = []
    for cut in (others, own | others):
        entries = {
            (i, j): c for (i, j), c in wave.entries.items() if not (i in field_rows and j in cut)
        }
        parts.append(eliminate_for(wave, entries, rows, columns))
    with_it, without = parts
    found = {ij: with_it.get(ij, S.Zero) - without.get(ij, S.Zero) for ij in {*with_it, *without}}
    size = range(len(columns))
    found = eliminate(found, wave.omega, len(columns), size, size)  # in lowest terms
    return Reduced(
        tuple(wave.amplitudes[j] for j in columns),
        tuple(str(wave.rows[i]) for i in rows),
        found,
    )


def species_columns(wave: WaveMatrix, species: str) -> tuple[set[int], set[int]]:
    """The columns of one species, fields named ``..._species``, and those of all other species."""
    tags = {
        c.field.name: c.field.name.rpartition("_")[2] for c in wave.columns if "_" in c.field.name
    }
    own = {j for j, c in enumerate(wave.columns) if tags.get(c.field.name) == species}
    if not own:
        known = ", ".join(dict.fromkeys(tags.values()))
        raise DeclarationError(
            f"no fields named '..._{species}'; the species are {known or 'not told apart by name'}"
        )
    return own, {j for j, c in enumerate(wave.columns) if c.field.name in tags} - own


def _default_fields(wave: WaveMatrix) -> tuple[str, ...]:
    """E, or phi, or whatever single field belongs to no species."""
    names = {c.field.name for c in wave.columns}
    for usual in ("E", "phi"):
        if usual in names:
            return (usual,)
    raise DeclarationError("name the fields of the tensor: there is neither 'E' nor 'phi'")
