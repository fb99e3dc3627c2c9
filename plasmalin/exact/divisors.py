"""Common divisors over Z[i] through one large prime field in which -1 has a square root.

A prime P = 1 mod 4 splits as pi * conj(pi), and Z[i]/pi is the field of P elements: i becomes an integer r with
r**2 = -1. FLINT takes the common divisor there; each coefficient is then lifted to the Gaussian integer of least size.
The caller checks the candidate by division and asks for the next one, from a larger prime, when it fails.
"""

from collections.abc import Iterator
from functools import lru_cache, reduce
from typing import TypeAlias

from flint import (
    fmpz,
    fmpz_mod_ctx,
    fmpz_mod_mpoly,
    fmpz_mod_mpoly_ctx,
    fmpz_mod_poly_ctx,
    fmpz_mpoly,
)

# 3 * 2**n + 1 is prime for these n; `_field` proves it again by Proth's theorem (from memory).
PROTH_EXPONENTS = (189, 534, 2208, 3912, 20909)

Pair: TypeAlias = tuple[fmpz_mpoly, fmpz_mpoly]


def gaussian_gcd(p: Pair, q: Pair) -> Iterator[Pair]:
    """Candidates for the common divisor, each from a larger prime."""
    names = p[0].context().names()
    for n in PROTH_EXPONENTS:
        prime, root, pi = _field(n)
        ring = fmpz_mod_mpoly_ctx.get(names, modulus=prime, ordering="lex")
        image = _image(p, ring, root).gcd(_image(q, ring, root))
        yield _lifted(image, _leading(p, root), prime, pi, p[0])


def proven_squarefree(p: Pair) -> bool:
    """Whether an image of p with numbers for all variables but the first has distinct roots: then so has p.

    False proves nothing.
    """
    prime, root, _ = _field(PROTH_EXPONENTS[0])
    coefficients: dict[int, int] = {}
    points = [pow(5, 3 + i, prime) for i in range(p[0].context().nvars())]
    for part, unit in zip(p, (1, root), strict=True):
        for exponents, c in part.terms():
            value = int(c) * unit
            for x, n in zip(points[1:], exponents[1:], strict=True):
                value = value * pow(x, int(n), prime) % prime
            degree = int(exponents[0])
            coefficients[degree] = (coefficients.get(degree, 0) + value) % prime
    ring = fmpz_mod_poly_ctx(fmpz_mod_ctx(prime))
    highest = max(coefficients)
    image = ring([coefficients.get(n, 0) for n in range(highest + 1)])
    return int(image.degree()) == highest and int(image.gcd(image.derivative()).degree()) == 0


@lru_cache
def _field(n: int) -> tuple[int, int, tuple[int, int]]:
    """A prime 3 * 2**n + 1, a square root of -1 modulo it, and a Gaussian prime above it."""
    prime = 3 * 2**n + 1
    powers = (int(pow(fmpz(a), prime // 4, fmpz(prime))) for a in range(2, 60))
    root = next(r for r in powers if r * r % prime == prime - 1)
    u, v = prime, root
    while u * u > prime:
        u, v = v, u % v
    return prime, root, (u, v if (u + v * root) % prime == 0 else -v)


def _image(p: Pair, ring: fmpz_mod_mpoly_ctx, root: int) -> fmpz_mod_mpoly:
    re, im = (ring.from_dict(part.to_dict()) for part in p)
    return re + im * root


def _leading(p: Pair, root: int) -> int:
    exponents = max(part.monomial(0) for part in p if part)
    return int(p[0][exponents]) + int(p[1][exponents]) * root


def _lifted(
    image: fmpz_mod_mpoly, scale: int, prime: int, pi: tuple[int, int], like: fmpz_mpoly
) -> Pair:
    """The primitive Gaussian polynomial of least size that is ``scale * image`` modulo pi."""
    found = {e: _least(int(c) * scale % prime, prime, pi) for e, c in image.to_dict().items()}
    a, b = reduce(integer_gcd, found.values())
    norm = a * a + b * b
    ring = like.context()
    re = ring.from_dict({e: (x * a + y * b) // norm for e, (x, y) in found.items()})
    im = ring.from_dict({e: (y * a - x * b) // norm for e, (x, y) in found.items()})
    return re, im


def integer_gcd(x: tuple[int, int], y: tuple[int, int]) -> tuple[int, int]:
    """A greatest common divisor of two Gaussian integers, by Euclid's algorithm."""
    (a, b), (c, d) = x, y
    while c or d:
        norm = c * c + d * d
        u = (2 * (a * c + b * d) + norm) // (2 * norm)
        v = (2 * (b * c - a * d) + norm) // (2 * norm)
        a, b, c, d = c, d, a - u * c + v * d, b - u * d - v * c
    return a, b


def _least(c: int, prime: int, pi: tuple[int, int]) -> tuple[int, int]:
    """The Gaussian integer c - pi * round(c / pi)."""
    u, v = pi
    a, b = (2 * c * u + prime) // (2 * prime), (-2 * c * v + prime) // (2 * prime)
    return c - (a * u - b * v), -(a * v + b * u)
