"""The questions asked of a claim, in order, until one is answered."""

from __future__ import annotations

from collections.abc import Mapping
from typing import TYPE_CHECKING, Any

from .claim import Claim, make_claim
from .compare import compare
from .convention import Convention
from .derived import Derived, derive
from .verdict import Verdict

if TYPE_CHECKING:
    from ..waves.matrix import WaveMatrix


def judge(wave, claim, where=None, under=None, convention=None, values=None, budget_s=30.0):
    made = make_claim(wave, claim, where or {})
    derived = derive(wave, made.residual.free_symbols, ())
    found = compare(made, derived)
    if found is not None:
        return Verdict(found.kind, True, found.proof, made.reading)
    return Verdict("differs", False, "", made.reading)
