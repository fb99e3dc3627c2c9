"""Polynomials with Gaussian integer coefficients, as pairs of FLINT polynomials."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from functools import reduce

from flint import Ordering, fmpz_mpoly, fmpz_mpoly_ctx

from .residues import gaussian_gcd, integer_gcd


@dataclass(frozen=True, slots=True)
class Gaussian:
    """``re + i im``; both parts live in one FLINT context."""

    re: fmpz_mpoly
    im: fmpz_mpoly

    def __add__(self, other: Gaussian) -> Gaussian:
        return Gaussian(self.re + other.re, self.im + other.im)

    def __sub__(self, other: Gaussian) -> Gaussian:
        return Gaussian(self.re - other.re, self.im - other.im)

    def __neg__(self) -> Gaussian:
        return Gaussian(-self.re, -self.im)

    def __mul__(self, other: Gaussian) -> Gaussian:
        a, b, c, d = self.re, self.im, other.re, other.im
        if not b and not d:
            return Gaussian(a * c, b)
        if not b or not d:
            return Gaussian(a * c - b * d, a * d + b * c)
        ac, bd = a * c, b * d
        return Gaussian(ac - bd, (a + b) * (c + d) - ac - bd)

    def __pow__(self, n: int) -> Gaussian:
        if not self.im:
            return Gaussian(self.re**n, self.im)
        result = Gaussian(self.re.context().constant(1), self.re.context().constant(0))
        for bit in bin(n)[2:]:
            result = result * result
            if bit == "1":
                result = result * self
        return result

    def __bool__(self) -> bool:
        return bool(self.re) or bool(self.im)

    def __len__(self) -> int:
        """The terms of both parts."""
        return len(self.re) + len(self.im)

    @property
    def is_constant(self) -> bool:
        return self.re.is_constant() and self.im.is_constant()

    def holds(self, variable: int) -> bool:
        """Whether a variable occurs."""
        return any(int(part.degrees()[variable]) > 0 for part in (self.re, self.im))

    @property
    def phase(self) -> int | None:
        """0 when real, 1 when imaginary, None when neither."""
        if not self.im:
            return 0
        return None if self.re else 1

    @property
    def part(self) -> fmpz_mpoly:
        """The one nonzero part of a real or imaginary polynomial."""
        return self.re if self.re else self.im

    def turned(self, power: int) -> Gaussian:
        """Times ``i**power``."""
        a, b = self.re, self.im
        return (self, Gaussian(-b, a), Gaussian(-a, -b), Gaussian(b, -a))[power % 4]

    def conjugate(self) -> Gaussian:
        return Gaussian(self.re, -self.im)

    def norm(self) -> fmpz_mpoly:
        return self.re * self.re + self.im * self.im

    def leading(self) -> tuple[tuple[int, ...], int, int]:
        """Exponents and the Gaussian coefficient of the first term; not for zero."""
        exponents = max(part.monomial(0) for part in (self.re, self.im) if part)
        return exponents, int(self.re[exponents]), int(self.im[exponents])

    def normalized(self) -> Gaussian:
        """Times the unit that puts the leading coefficient at angle [0, 90) degrees."""
        if not self:
            return self
        _, a, b = self.leading()
        turns = 0 if a > 0 and b >= 0 else 3 if a <= 0 < b else 2 if a < 0 else 1
        return self.turned(turns)

    def divided(self, other: Gaussian) -> Gaussian | None:
        """The exact quotient, or None when ``other`` does not divide."""
        phase = other.phase
        if phase is None:
            top, bottom = self * other.conjugate(), other.norm()
        else:
            top, bottom = self.turned(-phase), other.part
        re, rest_re = divmod(top.re, bottom) if top.re else (top.re, 0)
        im, rest_im = divmod(top.im, bottom) if top.im else (top.im, 0)
        return None if rest_re or rest_im else Gaussian(re, im)

    def over(self, other: Gaussian) -> Gaussian:
        """The quotient by a known divisor."""
        quotient = self.divided(other)
        if quotient is None:
            raise ArithmeticError("the division of two polynomials was expected to be exact")
        return quotient


def gcd(p: Gaussian, q: Gaussian) -> Gaussian:
    """A greatest common divisor over the Gaussian rationals, normalized."""
    if not p or not q:
        return (p if p else q).normalized()
    if p.phase is not None and q.phase is not None:
        return _real(p.part.gcd(q.part))
    if (
        any(x.phase is not None and len(x.part) == 1 for x in (p, q))
        or p.is_constant
        or q.is_constant
    ):
        return _real(reduce(lambda a, b: a.gcd(b), (p.re, p.im, q.re, q.im)))
    return _gaussian_gcd(p, q)


def lcm(a: Gaussian, b: Gaussian) -> Gaussian:
    """A least common multiple."""
    return a if a == b else a * b.over(gcd(a, b))


def gcd_of(polynomials: Iterable[Gaussian], start: Gaussian) -> Gaussian:
    """The common divisor of many, stopping once it is a unit."""
    result = start
    for p in polynomials:
        if result and result.phase == 0 and result.re.is_one():
            break
        result = gcd(result, p)
    return result


def integer_content(p: Gaussian) -> Gaussian:
    """The Gaussian integer that divides every coefficient; not for zero."""
    parts = [{e: int(c) for e, c in part.terms()} for part in (p.re, p.im)]
    a, b = reduce(
        integer_gcd, ((parts[0].get(e, 0), parts[1].get(e, 0)) for e in set().union(*parts))
    )
    ring = p.re.context()
    return Gaussian(ring.constant(a), ring.constant(b))


def discriminant(p: Gaussian) -> Gaussian:
    """With respect to the first variable; the unit is a variable more until its powers are lowered."""
    ring = p.re.context()
    count = ring.nvars()
    wide = fmpz_mpoly_ctx.get(("x", count + 1), Ordering.lex)
    *gens, unit = wide.gens()
    whole = p.re.compose(*gens, ctx=wide) + unit * p.im.compose(*gens, ctx=wide)
    parts: tuple[dict[tuple[int, ...], int], dict[tuple[int, ...], int]] = ({}, {})
    for exponents, c in whole.discriminant(0).terms():
        turn, rest = int(exponents[count]) % 4, exponents[:count]
        parts[turn % 2][rest] = parts[turn % 2].get(rest, 0) + int(-c if turn > 1 else c)
    return Gaussian(*map(ring.from_dict, parts))


def _real(p: fmpz_mpoly) -> Gaussian:
    return Gaussian(p, p.context().constant(0)).normalized()


def _gaussian_gcd(p: Gaussian, q: Gaussian) -> Gaussian:
    for re, im in gaussian_gcd((p.re, p.im), (q.re, q.im)):
        candidate = Gaussian(re, im)
        if p.divided(candidate) is not None and q.divided(candidate) is not None:
            return candidate.normalized()
    raise ArithmeticError("no prime in the table was large enough for this common divisor")
