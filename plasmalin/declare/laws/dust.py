"""Grains whose charge changes with the currents that they collect."""

from __future__ import annotations

from typing import Any

from sympy import Expr

from ..law import Law
from ..model import FluidModel
from ..operators import advect, partial_t
from .closures import declared, named


def grain_charge(
    model: FluidModel,
    charge: Any,
    v: Expr,
    electron_current: Expr,
    ion_current: Expr,
    *,
    name: str | None = None,
) -> Law:
    """The charge of one grain: d_t q_d + (v.grad) q_d = I_e + I_i, A.

    Total charge is conserved when the electron and ion continuity laws have the sources of `grain_sinks`
    (Melandsø, Aslaksen and Havnes 1993, Planet. Space Sci. 41, 321, from memory).
    """
    charge = declared(model, charge, 0, "grain_charge")
    v = named(model, v, 1, "grain_charge")
    rate = partial_t(charge) + advect(v, charge)
    return model.law(name or f"{charge} charging", rate, electron_current + ion_current)


def grain_sinks(
    n_d: Expr, electron_current: Expr, ion_current: Expr, e: Any, ion_charge_number: Any = 1
) -> tuple[Expr, Expr]:
    """Sources of electrons and of ions that match the currents to the grains, 1/(m^3 s): n_d I_e/e and −n_d I_i/(Z e).

    Source as `grain_charge`.
    """
    return n_d * electron_current / e, -n_d * ion_current / (ion_charge_number * e)
