"""The label of every branch, from the modes of the factor that it belongs to."""

from __future__ import annotations

from collections import Counter
from typing import TYPE_CHECKING, Any

import numpy as np
from sympy import Expr, lambdify

from ..exact.polynomial import ExactPolynomial
from .solve import in_numbers

if TYPE_CHECKING:
    from ..waves.labels import Modes
    from .labelled import Labelled


def branch_labels(branches: Labelled) -> tuple[str, ...]:
    """For each branch its label; see `Branches.label`.

    The modes at the root of a factor are counted for the branches' own numbers. Where a factor was left in square-free
    parts, its factors of first degree are looked for, and each is given to the nearest branches.
    """
    modes = branches.wave.modes.put(in_numbers(branches.numbers))
    found = ["wave"] * len(branches)
    for number, polynomial in enumerate(branches.polynomials):
        mine = [b for b, f in enumerate(branches.factor) if f == number]
        multiplicity = len(mine) // polynomial.degree
        for linear in _linear(polynomial, modes):
            for b, label in zip(
                _nearest(branches, mine, linear),
                _told(modes, linear.as_expr(), multiplicity),
                strict=False,
            ):
                found[b] = label
    at_zero = [b for b, f in enumerate(branches.factor) if f == -1]
    for b, label in zip(at_zero, _at_zero(branches, modes, len(at_zero)), strict=True):
        found[b] = label
    return tuple(found)


def _linear(polynomial: ExactPolynomial, modes: Modes) -> list[ExactPolynomial]:
    """The factors of first degree that may hold other modes than waves."""
    if modes.only_waves:
        return []
    if polynomial.degree == 1 or polynomial.has_real_form:
        return [polynomial] if polynomial.degree == 1 else []
    return [p for p, _ in polynomial.factor()[1] if p.degree == 1]


def _told(modes: Modes, factor: Expr, multiplicity: int) -> list[str]:
    (labels,) = modes.labels([(factor, multiplicity)])
    return list(Counter(labels).elements())


def _nearest(branches: Labelled, mine: list[int], linear: ExactPolynomial) -> list[int]:
    """Branches of a factor, those nearest to the root of one of its factors first."""
    if len(mine) == 1 or linear in branches.polynomials:
        return mine
    powers = linear.coefficients()
    root = -powers.get(0, 0) / powers[1]
    symbols: list[Any] = sorted(root.free_symbols, key=str)
    columns = (branches.numbers.doubles(s) for s in symbols)
    omega = np.broadcast_to(lambdify(symbols, root, "numpy")(*columns), branches.omega.shape[1:])
    return sorted(mine, key=lambda b: np.nanmax(np.abs(branches.omega[b] - omega), initial=0.0))


def _at_zero(branches: Labelled, modes: Modes, count: int) -> list[str]:
    """Zero modes that are kept, and those that only these numbers bring."""
    wave = branches.wave
    here, in_general = (Counter(m.labels([(wave.omega, None)])[0]) for m in (modes, wave.modes))
    always = count >= sum(here.values()) - wave.forbidden_modes
    here -= Counter({"constraint": wave.forbidden_modes}) if always else in_general
    return [*here.elements(), *["wave"] * count][:count]
