"""Factors of Gaussian polynomials that hold the first variable, irreducible over the rationals or the Gaussian ones."""

from __future__ import annotations

from typing import Any

from flint import fmpz_mpoly

from .factoring import irreducible_factors
from .gaussian import Gaussian, gcd, real
from .yun import squarefree_parts

LONGEST_NORM = 250
"""Terms of a Gaussian polynomial whose norm is still factored."""

Factors = list[tuple[Gaussian, int]]


def factors_in_main(value: Gaussian) -> Factors:
    """The factors that hold the first variable, with multiplicity; relations between generators are not used.

    A polynomial that is real in i times that variable (damping without drift) is factored there; one with Gaussian
    coefficients through the factors of its norm; beyond `LONGEST_NORM` terms, whose norm would be too large, its
    square-free parts.
    """
    if not value.holds(0):
        return []
    if not value.im:
        return [(real(p), m) for p, m in _in_main(value.re)]
    turned = main_turned(value, 1)
    if turned.phase is not None:
        return [(main_turned(real(p), 3), m) for p, m in _in_main(turned.part)]
    divisor = real(value.re.gcd(value.im))
    if divisor.holds(0):  # a divisor of both parts; the rest has no real factor
        return [*factors_in_main(divisor), *factors_in_main(value.over(divisor))]
    return squarefree_parts(value) if len(value) > LONGEST_NORM else _through_norm(value)


def all_factors(value: Gaussian) -> Factors:
    """The factors of a polynomial that is real or imaginary, those without the first variable too."""
    return [(real(p), m) for p, m in irreducible_factors(value.part)]


def rest_of(value: Gaussian, factors: Factors) -> Gaussian:
    """What is left beside some factors."""
    for p, m in factors:
        value = value.over(p**m)
    return value


def main_turned(value: Gaussian, power: int) -> Gaussian:
    """With the first variable replaced by i**power times itself."""
    parts: tuple[dict[Any, Any], dict[Any, Any]] = ({}, {})
    for e, re, im in value.terms():
        for c, source in ((re, 0), (im, 1)):
            turn = (source + power * e[0]) % 4
            if c:
                into = parts[turn % 2]
                into[e] = into.get(e, 0) + (-c if turn > 1 else c)
    return Gaussian(*map(value.re.context().from_dict, parts))


def _in_main(p: fmpz_mpoly) -> list[tuple[fmpz_mpoly, int]]:
    return [(f, m) for f, m in irreducible_factors(p) if _holds_main(f)]


def _holds_main(p: fmpz_mpoly) -> bool:
    return bool(p) and int(p.degrees()[0]) > 0


def _through_norm(rest: Gaussian) -> Factors:
    found: Factors = []
    for factor, _ in irreducible_factors(rest.norm()):
        multiplicity, last = 0, None
        while _holds_main(factor):
            common = gcd(rest, real(factor))
            if not common.holds(0):
                break
            rest = rest.over(common)
            if last is not None and common != last:
                found.append((last, multiplicity))
                multiplicity = 0
            last, multiplicity = common, multiplicity + 1
        if last is not None:
            found.append((last, multiplicity))
    return found
