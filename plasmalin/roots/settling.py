"""Rough starts brought near the roots by simultaneous steps in working precision, before the one that proves.

The steps are those of `discs.py`, p(z_i) / (c_n prod_j (z_i - z_j)), without the proof.
"""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import NDArray

from .coefficients import Coefficients, chosen
from .discs import Guess, spread
from .doubledouble import Array

ROUGH_STEPS, LONGEST = 6, 0.4
"""Steps in working precision at most, and the share of the distance to the nearest other root that one may take."""
SHORT = 2.0**-18
"""Steps end when they are this short against that distance: the square of one is out of sight."""


def settled(c: Coefficients, guess: Guess) -> Guess:
    """After simultaneous steps in working precision, kept inside the gaps.

    Points drop out once their steps are short or, because of rounding, do not become shorter.
    """
    plain, x, z = c.plain, guess.x.copy(), guess.z.copy()
    active, before = np.arange(c.points), np.full(c.points, np.inf)
    for _ in range(ROUGH_STEPS):
        everything = len(active) == c.points
        here = guess if everything else guess.at(active)
        apart = spread(here)
        x[:, active], x_share = _stepped(plain, here.x, apart.x_product, apart.x_gap)
        z[:, active], z_share = _stepped(plain, here.z, apart.z_product, apart.z_gap)
        share = np.maximum(x_share, z_share)
        going = (share > SHORT) & ((share < 0.5 * before) | (share > LONGEST))
        active, plain, before = active[going], chosen(plain, going), share[going]
        if not len(active):
            break
        guess = Guess(x, z, guess.mirrored)
    return Guess(x, z, guess.mirrored)


def _stepped(
    plain: NDArray[Any], z: NDArray[Any], product: NDArray[Any], gap: Array
) -> tuple[NDArray[Any], Array]:
    """The next numbers, and the largest step at every point as a share of the gap."""
    if not len(z):
        return z, np.zeros(z.shape[1])
    step = _plain(plain, z) / (plain[-1] * product)
    share = np.abs(step) / gap
    if share.max(initial=0.0) > LONGEST:
        step = np.where(share <= LONGEST, step, step * (LONGEST / share))
    return z - step, np.asarray(share.max(axis=0, initial=0.0))


def _plain(plain: NDArray[Any], z: NDArray[Any]) -> NDArray[Any]:
    value = np.empty(z.shape, np.result_type(plain, z))
    value[...] = plain[-1]
    for row in plain[-2::-1]:
        value *= z
        value += row
    return value
