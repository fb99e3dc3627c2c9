"""Which way roots are found: by the polynomial in omega and all swept quantities while it is short, else by matrices."""

from __future__ import annotations

from collections.abc import Sequence
from functools import lru_cache
from typing import TYPE_CHECKING

import numpy as np
from sympy import Abs, Expr

from ..errors import UndeterminedError
from ..exact.determinant import determinant
from ..exact.minors import TooLong
from ..exact.pencil import Block, Circle, block_of, circles_of, diagonal_parts
from ..exact.polynomial import ExactPolynomial
from .circular import filled_up
from .matrixfamily import MatrixFamily
from .solve import (
    LONGEST,
    VANISHES,
    Fixed,
    Problem,
    Solved,
    factors_of,
    family_of,
    filled_in,
    general_degree,
    pose,
    short_problem,
    what_is_known,
)

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix
    from .values import Numbers


def chosen_problem(wave: WaveMatrix, numbers: Numbers) -> Problem:
    """The determinant written out if it has at most `LONGEST` terms; else the matrix itself, block by block.

    Raises
    ------
    UndeterminedError
        When the determinant vanishes identically, in general or for these numbers.
    """
    known = what_is_known(numbers)
    whole = short_problem(wave, *known)
    is_real = not any(np.iscomplexobj(v) for v in numbers.swept.values())
    return whole or by_blocks(wave, *known, is_real) or pose(wave, numbers)


@lru_cache(maxsize=16)
def by_blocks(
    wave: WaveMatrix, fixed: Fixed, solved: Solved, is_real: bool, longest: float = LONGEST
) -> Problem | None:
    """The diagonal blocks of the matrix, those with a short determinant written out; None where there is no way.

    That is where entries have omega in denominators, or are joined by relations that numbers in twice the working
    precision do not keep: roots of sums, hyperbolic functions, sines or |k| of complex numbers.
    """
    written: list[ExactPolynomial] = []
    blocks: list[tuple[Block, int]] = []
    for entries, size in diagonal_parts(filled_in(wave, fixed, solved), len(wave.rows)):
        try:
            written.append(determinant(entries, size, wave.omega, longest=longest))
        except TooLong:
            block = block_of(entries, wave.omega)
            if block is None:
                return None
            blocks.append((block, size))
    held = {g for block, _ in blocks for g in block.image.values}
    circles = circles_of(held)
    if circles is None or (not is_real and (circles or any(g.has(Abs) for g in held))):
        return None
    kept: list[tuple[ExactPolynomial, int]] = []
    zeros = 0
    for whole in written:
        factors, lowest = factors_of(whole)
        kept, zeros = kept + factors, zeros + lowest
    held |= {g for p, _ in kept for g in p.generators}
    swept = tuple(sorted((g for g in held if g.free_symbols), key=str))
    matrices = tuple(_matrix(block, size, circles, swept) for block, size in blocks)
    degree, zero_modes = general_degree(wave)
    return Problem(
        tuple((filled_up(family_of(p, swept), swept), m) for p, m in kept),
        swept,
        zeros + sum(m.zeros for m in matrices) - zero_modes,
        degree,
        zero_modes - wave.forbidden_modes,
        tuple(p for p, _ in kept),
        tuple(m for m in matrices if m.degree),
        f"the determinant has more than {longest:,} terms in the "
        f"{len({s for g in swept for s in g.free_symbols})} swept quantities",
    )


def _matrix(
    block: Block, size: int, circles: Sequence[Circle], swept: Sequence[Expr]
) -> MatrixFamily:
    entries = {ij: family_of(p, tuple(swept)) for ij, p in block.entries.items()}
    places = tuple((swept.index(s), swept.index(c)) for s, c in circles)
    images = tuple(block.image.values.get(g, 1) for g in swept)
    made = MatrixFamily(entries, size, block.turned, places, block.image, images)
    if not made.determinant:
        raise UndeterminedError(VANISHES)
    return made
