"""CODATA constants as plain SI numbers: ``plin.constants.m_e``, ``plin.constants.u``.

The names are those that `FluidModel.constants` takes.

For example:

>>> import plasmalin as plin
>>> plin.constants.c
299792458.0
"""

from __future__ import annotations

from .declare.constants import CODATA, codata

__all__ = list(CODATA)


def __getattr__(name: str) -> float:
    if name not in CODATA:
        raise AttributeError(f"no constant '{name}'; known are {', '.join(CODATA)}")
    return codata(name)


def __dir__() -> list[str]:
    return __all__
