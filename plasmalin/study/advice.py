"""Advice: where a fluid description is outside its range at given numbers."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from typing import TYPE_CHECKING, Any

import numpy as np

from .plasma import Plasma, measure
from .remark import Advice, Remark
from .rule import PRACTICE, known, largest, smallest
from .species_rules import SPECIES_RULES
from .wave_rules import WAVE_RULES

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix


def advise(wave: WaveMatrix, values: Mapping[Any, Any], waves: Mapping[str, Any]) -> Advice:
    """All remarks on one wave; see `WaveMatrix.advice`."""
    with np.errstate(all="ignore"):
        plasma = measure(wave, values, waves)
        sloped = (name for name, f in wave.linear.fields.items() if f.gradient != 0)
        return _apply(plasma, [name for name in sloped if name not in plasma.gradients])


def _apply(plasma: Plasma, without_length: Iterable[str]) -> Advice:
    remarks: list[Remark] = []
    looked: dict[str, list[str]] = {}
    lacking: dict[str, list[str]] = {reason: [] for reason in _unseen(plasma)}
    for name in without_length:
        lacking[
            f"the gradient of {name} has no length: its background is zero or has no number"
        ] = []
    for rule in (*WAVE_RULES, *SPECIES_RULES):
        for kind in plasma.kinds:
            lack = rule.lack(kind, plasma)
            if not rule.applies(kind, plasma):
                continue
            if lack:
                lacking.setdefault(lack, []).append(rule.title)
            else:
                looked.setdefault(rule.title, []).append(kind.name)
                remarks += rule.check(kind, plasma)
    if plasma.gradients:
        looked["wavelength against gradient length"] = list(plasma.gradients)
    remarks += gradients(plasma)
    return Advice(tuple(remarks), tuple(_named(looked)), tuple(_named(lacking)))


def _named(found: Mapping[str, list[str]]) -> Iterator[str]:
    """Each key with what belongs to it in parentheses, once."""
    for key, entries in found.items():
        yield f"{key} ({', '.join(dict.fromkeys(entries))})" if entries else key


def _unseen(plasma: Plasma) -> Iterator[str]:
    if not plasma.kinds:
        yield "no fluid was found: no law changes a density by the divergence of a velocity"
    if plasma.screened:
        yield (
            "ω/k against the thermal speed of those that follow the potential at once: they have no mass in the laws"
        )


def gradients(plasma: Plasma) -> Iterator[Remark]:
    """What the local approximation leaves open."""
    for name, size in plasma.gradients.items():
        k = plasma.wave_number
        if k is not None and smallest(k * size) < 10:
            yield Remark(
                f"k L, field {name}",
                "the wavelength is not short against the length of the background's gradient, which the local "
                "approximation takes as uniform",
                smallest(k * size),
                f"{PRACTICE}: above 10",
            )
        yield Remark(
            f"gradient length in m, field {name}" if k is None else f"1/(k L), field {name}",
            "terms of this order depend on the chosen variables (a density or its logarithm): two ways to write the "
            "same laws differ by as much",
            largest(size) if k is None else largest(1 / (k * size)),
            "order of the local approximation",
        )
        yield from _gyroviscosity(plasma, name)


def _gyroviscosity(plasma: Plasma, field: str) -> Iterator[Remark]:
    for kind in plasma.kinds:
        if kind.larmor_radius is not None and not kind.fluid.viscous:
            yield Remark(
                f"ρ_L/L, species {kind.name}, field {field}",
                "beside a gradient gyroviscosity is of the order of the diamagnetic drift (it cancels the advection by "
                "it), and no viscous term is in the law",
                largest(known(kind.larmor_radius) / plasma.gradients[field]),
                "Hinton and Horton 1971, Phys. Fluids 14, 116, from memory",
            )
