"""Irreducible factors over the rationals."""

from __future__ import annotations

from functools import reduce
from math import gcd
from random import Random
from typing import Any

from flint import Ordering, fmpq, fmpq_mpoly_ctx, fmpz, fmpz_mpoly, fmpz_mpoly_ctx, nmod_poly

TRIES = 12
"""Images in prime fields before a polynomial is factored in earnest."""
PRIMES = 2**19, 2**20
LARGEST = 1000
"""Values of the other variables lie below."""


def irreducible_factors(p: fmpz_mpoly) -> list[tuple[fmpz_mpoly, int]]:
    """Primitive integer factors with multiplicity.

    They are taken over the rationals: python-flint 0.9 orders integer factors by machine integers, which large
    coefficients overflow.
    """
    ring = p.context()
    content = p.term_content()
    rest = p / content
    if is_irreducible(rest):
        powers = zip(ring.gens(), content.degrees(), strict=True)
        return [*((x, int(n)) for x, n in powers if n), (rest, 1)]
    rational = fmpq_mpoly_ctx.get(("x", ring.nvars()), Ordering.lex)
    whole = rational.from_dict({e: fmpq(c) for e, c in p.terms()})
    return [(_integer(f, ring), int(m)) for f, m in whole.factor()[1]]


def _integer(factor: Any, ring: fmpz_mpoly_ctx) -> fmpz_mpoly:
    terms = dict(factor.terms())
    scale = 1
    for c in terms.values():
        scale = scale * int(c.q) // gcd(scale, int(c.q))
    return ring.from_dict({e: int(c * scale) for e, c in terms.items()})


def is_irreducible(p: fmpz_mpoly) -> bool:
    """Whether images in prime fields prove that p, as a polynomial in the first variable, has no factors.

    A factor keeps its degree in every image of the same degree as p, where it is a product of the image's factors. False
    where nothing is proven. For long polynomials this takes a small part of the time that factoring takes.
    """
    degree, random = int(p.degrees()[0]), Random(11)
    if degree < 1 or not _is_primitive(p):
        return False
    possible = (1 << degree + 1) - 1
    for _ in range(TRIES):
        image = _image(p, degree, random)
        if image.degree() == degree:
            possible &= _degrees(image)
        if possible == 1 << degree | 1:
            return True
    return False


def _is_primitive(p: fmpz_mpoly) -> bool:
    """Whether nothing free of the first variable divides it."""
    slices: dict[int, dict[Any, Any]] = {}
    for e, c in p.terms():
        slices.setdefault(int(e[0]), {})[(0, *e[1:])] = c
    parts = sorted(slices.values(), key=len)
    return bool(reduce(lambda a, b: a.gcd(b), map(p.context().from_dict, parts)).is_one())


def _image(p: fmpz_mpoly, degree: int, random: Random) -> nmod_poly:
    """The polynomial in the first variable at a random point, in a random prime field."""
    prime = random.randrange(*PRIMES)
    while not fmpz(prime).is_prime():
        prime = random.randrange(*PRIMES)
    at_point = p.subs({i: random.randrange(1, LARGEST) for i in range(1, len(p.degrees()))})
    values = [0] * (degree + 1)
    for e, c in at_point.terms():
        values[int(e[0])] = int(c) % prime
    return nmod_poly(values, prime)


def _degrees(image: nmod_poly) -> int:
    """The degrees of all products of its factors, as bits."""
    found = 1
    for factor, multiplicity in image.factor()[1]:
        for _ in range(int(multiplicity)):
            found |= found << factor.degree()
    return found
