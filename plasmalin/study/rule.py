"""What a rule of advice is: it names what it needs, and where that is not known the reason is reported instead."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass

import numpy as np

from .kind import Array, Kind
from .plasma import Plasma
from .remark import Remark

NEEDS: dict[str, tuple[Callable[[Kind, Plasma], bool], str]] = {
    "k": (lambda s, p: p.k is not None, "no value was given for the wave vector"),
    "roots": (lambda s, p: p.omega is not None, "{why}"),
    "temperature": (
        lambda s, p: s.energy is not None,
        "no temperature could be identified for species {name}",
    ),
    "gamma": (lambda s, p: s.gamma is not None, "no gamma could be identified for species {name}"),
    "mass": (lambda s, p: s.inertia is not None, "no mass could be identified for species {name}"),
    "charge": (
        lambda s, p: s.charge is not None,
        "no charge could be identified for species {name}",
    ),
    "density": (
        lambda s, p: s.number is not None,
        "no density could be identified for species {name}",
    ),
    "SI": (
        lambda s, p: s.unit is not None,
        "the numbers of species {name} are not told to be SI by its charge or mass",
    ),
    "debye": (
        lambda s, p: s.debye_length is not None,
        "no Debye length could be made for species {name}: neither its field's law nor SI numbers tell n q/epsilon_0",
    ),
    "drift": (
        lambda s, p: s.drift is not None,
        "no value was given for the drift of species {name}",
    ),
    "collisions": (
        lambda s, p: bool(collisions(s)),
        "no collision frequency could be identified for species {name}",
    ),
}
"""What a rule can need: whether it is there, and what is said where it is not."""

PRACTICE = "common practice"


def remark(subject: str, number: float, statement: str, rule: str) -> Remark:
    """A remark with its number beside what it is a number of."""
    return Remark(subject, statement, number, rule)


@dataclass(frozen=True)
class Rule:
    """One comparison.

    Attributes
    ----------
    title : str
    needs : tuple of str
        Keys of `NEEDS`, in the order in which their lack is reported.
    check : callable
        Remarks of one fluid.
    applies : callable
        Whether the comparison has a meaning for the fluid; it is passed over in silence where not.
    """

    title: str
    needs: tuple[str, ...]
    check: Callable[[Kind, Plasma], Iterator[Remark]]
    applies: Callable[[Kind, Plasma], bool] = lambda s, p: True

    def lack(self, s: Kind, p: Plasma) -> str | None:
        """Why it cannot be applied, None where it can."""
        for need in self.needs:
            there, reason = NEEDS[need]
            if not there(s, p):
                return reason.format(name=s.name, why=p.no_roots)
        return None


def known(x: Array | None) -> Array:
    """A number that the rule's needs have made sure of."""
    if x is None:
        raise AssertionError("a rule uses a number that it does not name in its needs")
    return x


def largest(x: Array) -> float:
    finite = np.asarray(x)[np.isfinite(x)]
    return float(finite.max()) if finite.size else 0.0


def smallest(x: Array) -> float:
    finite = np.asarray(x)[np.isfinite(x)]
    return float(finite.min()) if finite.size else float("inf")


def collisions(s: Kind) -> list[tuple[Array, str]]:
    """Collision frequencies with where they come from."""
    both = (
        (s.friction, "the friction in its momentum law"),
        (s.coulomb_collisions, "Coulomb collisions with itself, handbook estimate"),
    )
    return [(x, name) for x, name in both if x is not None]


def most_frequent(s: Kind) -> tuple[Array, str]:
    return max(collisions(s), key=lambda pair: largest(pair[0]))
