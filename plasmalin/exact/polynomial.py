"""Exact polynomials in one main symbol, with Gaussian integer coefficients in parameters."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from fractions import Fraction
from functools import cached_property
from typing import Any

import sympy as sp

from ..errors import NonPolynomialError
from .factors import all_factors, factors_in_main, main_turned, rest_of
from .gaussian import Gaussian, discriminant, gcd, gcd_of, integer_content, real
from .ratio import Ratio, composed
from .rational import exact_rational
from .reader import Reader, ring_of
from .ring import Ring, moved
from .univariate import Root, complex_roots
from .yun import squarefree_parts


class ExactPolynomial:
    """A polynomial in `main` whose coefficients are polynomials in `generators`.

    Attributes
    ----------
    main : Symbol
    generators : tuple of Expr
        Symbols and opaque expressions such as sin(theta), sqrt(M), pi or n_0**gamma, sorted by name.
    """

    def __init__(self, ring: Ring, value: Gaussian) -> None:
        self._ring, self._value = ring, value

    @property
    def main(self) -> sp.Symbol:
        return self._ring.main

    @property
    def generators(self) -> tuple[sp.Expr, ...]:
        return self._ring.generators

    @property
    def is_real(self) -> bool:
        return not self._value.im

    @property
    def has_real_form(self) -> bool:
        """Whether it is real in main, or in s with main = i s (damping without drift)."""
        return self.is_real or main_turned(self._value, 1).phase is not None

    @cached_property
    def degree(self) -> int:
        """The highest power of `main`; −1 for zero."""
        parts = [p.degrees()[0] for p in (self._value.re, self._value.im) if p]
        return int(max(parts, default=-1))

    @cached_property
    def lowest(self) -> int:
        """The lowest power of `main`; −1 for zero."""
        parts = (p for p in (self._value.re, self._value.im) if p)
        return min((int(p.term_content().degrees()[0]) for p in parts), default=-1)

    def __len__(self) -> int:
        return len(self._value)

    def terms(self) -> Iterator[tuple[tuple[int, ...], int, int]]:
        """Exponents (main first, then the generators), real and imaginary coefficient."""
        return self._value.terms()

    def coefficients(self) -> dict[int, sp.Expr]:
        """The coefficient of every power of `main` that occurs, highest first."""
        groups: dict[int, list[sp.Expr]] = {}
        for exponents, re, im in self.terms():
            number = sp.Integer(re) + sp.I * im if im else sp.Integer(re)
            powers = (g**n for g, n in zip(self.generators, exponents[1:], strict=True) if n)
            groups.setdefault(exponents[0], []).append(sp.Mul(number, *powers))
        return {power: sp.Add(*groups[power]) for power in sorted(groups, reverse=True)}

    def as_expr(self) -> sp.Expr:
        return sp.Add(*(c * self.main**p for p, c in self.coefficients().items()))

    def as_poly(self) -> sp.Poly:
        """A SymPy polynomial in `main`, its coefficients in the ring of the generators."""
        base = sp.ZZ if self.is_real else sp.ZZ_I
        domain = base[self.generators] if self.generators else base
        groups: dict[tuple[int, ...], Any] = {}
        for exponents, re, im in self.terms():
            number = base(re) if self.is_real else base(re, im)
            groups.setdefault((exponents[0],), {})[exponents[1:]] = number
        if not self.generators:
            plain = {power: next(iter(c.values())) for power, c in groups.items()}
            return sp.Poly.from_dict(plain, self.main, domain=domain)
        made = {power: domain.ring.from_dict(c) for power, c in groups.items()}
        return sp.Poly.from_dict(made, self.main, domain=domain)

    # Arithmetic --------------------------------------------------------------------------------

    def __eq__(self, other: object) -> bool:
        if not isinstance(other, ExactPolynomial) or self._ring != other._ring:
            return False
        return self._value == other._value

    def __hash__(self) -> int:
        return hash((self.main, self.generators, len(self), self.degree))

    def __reduce__(self) -> tuple[Any, ...]:
        return _restored, (self.main, self.generators, tuple(self.terms()))

    def _with(self, value: Gaussian) -> ExactPolynomial:
        return ExactPolynomial(self._ring, value)

    def _joined(self, other: ExactPolynomial) -> tuple[Ring, Gaussian, Gaussian]:
        if self._ring == other._ring:
            return self._ring, self._value, other._value
        ring = ring_of([*self.generators, *other.generators, self.main], self.main)
        return ring, moved(self._value, self._ring, ring), moved(other._value, other._ring, ring)

    def __mul__(self, other: ExactPolynomial) -> ExactPolynomial:
        ring, a, b = self._joined(other)
        return ExactPolynomial(ring, a * b)

    def gcd(self, other: ExactPolynomial) -> ExactPolynomial:
        """A greatest common divisor over the Gaussian rationals."""
        ring, a, b = self._joined(other)
        return ExactPolynomial(ring, gcd(a, b))

    def exact_div(self, other: ExactPolynomial) -> ExactPolynomial:
        """The quotient by a known divisor.

        Raises
        ------
        ArithmeticError
            When the division leaves a rest.
        """
        ring, a, b = self._joined(other)
        return ExactPolynomial(ring, a.over(b))

    def parts(self) -> tuple[ExactPolynomial, ExactPolynomial]:
        """The polynomials of the real and of the imaginary parts of the coefficients."""
        return self._with(real(self._value.re)), self._with(real(self._value.im))

    def pseudo_remainder(self, other: ExactPolynomial) -> tuple[ExactPolynomial, ExactPolynomial]:
        """The rest that `other` leaves of this times a power of the leading coefficient of `other`, and that power."""
        ring, a, b = self._joined(other)
        rest, divisor = ExactPolynomial(ring, a), ExactPolynomial(ring, b)
        lead = divisor._value.by_power(0)[divisor.degree]
        gen, scale = real(ring.context.gens()[0]), ring.constant(1)
        while rest.degree >= divisor.degree:
            top = rest._value.by_power(0)[rest.degree] * gen ** (rest.degree - divisor.degree)
            rest = ExactPolynomial(ring, rest._value * lead - top * b)
            scale = scale * lead
        return rest, ExactPolynomial(ring, scale)

    def primitive(self) -> tuple[ExactPolynomial, ExactPolynomial]:
        """The content, free of `main`, and the primitive part with its sign normalized."""
        parts = sorted(self._value.by_power(0).values(), key=lambda p: len(p.re) + len(p.im))
        content = gcd_of(parts, self._ring.constant(0))
        if not content:
            return self._with(self._ring.constant(1)), self
        part = self._value.over(content)
        if not self.is_real:
            number = integer_content(part)
            content, part = content * number, part.over(number)
        return self._with(content), self._with(part.normalized()).real_if_possible()

    def without_main(self) -> ExactPolynomial:
        """Divided by the powers of `main` that it holds."""
        gen = self._ring.context.gens()[0]
        power = self._with(real(gen**self.lowest))
        return self.exact_div(power)

    def turned_sign(self, symbol: sp.Expr) -> ExactPolynomial:
        """With `main` or a generator replaced by its negative."""
        i = 0 if symbol == self.main else 1 + self.generators.index(symbol)
        gens = list(self._ring.context.gens())
        gens[i] = -gens[i]
        parts = (p.compose(*gens, ctx=self._ring.context) for p in (self._value.re, self._value.im))
        return self._with(Gaussian(*parts))

    def reduced(self) -> ExactPolynomial:
        """With the known relations between generators used: cos^2 = 1 − sin^2, |k|^2 = k^2."""
        reader = Reader(self._ring)
        return self._with(reader.reduced(self._value)) if reader.relations else self

    def shorter(self) -> ExactPolynomial:
        """As it is, or with the known relations used where that takes fewer terms: for reading."""
        reduced = self.reduced()
        return reduced if len(reduced) < len(self) else self

    def real_if_possible(self) -> ExactPolynomial:
        """Times the power of i that makes it real, where there is one."""
        return (
            self._with(Gaussian(self._value.im, self._value.re)) if self._value.phase == 1 else self
        )

    def factor(self) -> tuple[ExactPolynomial, tuple[tuple[ExactPolynomial, int], ...]]:
        """The content and the factors that hold `main`, irreducible over the rationals, with multiplicity.

        Long polynomials with Gaussian coefficients are left in square-free parts.
        """
        content, primitive = self.primitive()
        found = [(self._with(p)._normal(), m) for p, m in factors_in_main(primitive._value)]
        return content, tuple(sorted(found, key=_factor_order))

    def squarefree(self) -> tuple[ExactPolynomial, tuple[tuple[ExactPolynomial, int], ...]]:
        """The content and square-free parts with their multiplicities (Yun 1976, SYMSAC).

        For Gaussian coefficients with many digits this takes a small part of the time of `factor`.
        """
        content, primitive = self.primitive()
        parts = squarefree_parts(primitive._value) if primitive.degree > 0 else []
        return content, tuple((self._with(p)._normal(), m) for p, m in parts)

    def factored_expr(self) -> sp.Expr:
        """The same polynomial as an expression, written as a product of its factors."""
        parts = factors_in_main(self._value)
        rest = self._with(rest_of(self._value, parts)).shorter().as_expr()
        return sp.Mul(rest, *(self._with(p).shorter().as_expr() ** m for p, m in parts))

    def product_expr(self) -> sp.Expr:
        """As a product of all its factors, those without `main` too, where it is real up to a power of i."""
        if self._value.phase is None:
            return self.as_expr()
        parts = all_factors(self._value)
        rest = self._with(rest_of(self._value, parts)).as_expr()
        return sp.Mul(rest, *(self._with(p).shorter().as_expr() ** m for p, m in parts))

    def _normal(self) -> ExactPolynomial:
        return self._with(self.shorter()._value.normalized()).real_if_possible()

    def substitute(self, values: Mapping[Any, Any]) -> ExactPolynomial:
        """With symbols replaced by exact numbers or expressions; floats are their binary rationals.

        Denominators are cleared, so the result is right up to a factor free of `main`.
        """
        known = {s: _exact_number(v) for s, v in values.items()}
        images = [x.xreplace(known) for x in (self.main, *self.generators)]
        ring = ring_of(images, self.main)
        reader = Reader(ring)
        ratios = [reader.ratio(x) for x in images]
        return ExactPolynomial(ring, reader.reduced(composed(self._value, ratios, ring)))._normal()

    def discriminant(self) -> ExactPolynomial:
        """The discriminant with respect to `main`."""
        return self._with(discriminant(self._value))

    def complex_roots(self, digits: int = 30) -> list[Root]:
        """All roots with proven radii, when no generators are left.

        Raises
        ------
        ArithmeticError
            When the polynomial still holds generators.
        """
        if self.generators:
            raise ArithmeticError(
                "complex_roots() needs numbers for all parameters; substitute them first"
            )
        slices = self._value.by_power(0)
        table = [slices.get(n, self._ring.constant(0)) for n in range(self.degree + 1)]
        return complex_roots(
            [(Fraction(int(_number(p.re))), Fraction(int(_number(p.im)))) for p in table], digits
        )

    def __repr__(self) -> str:
        return f"<ExactPolynomial in {self.main}: degree {self.degree}, {len(self)} terms>"


def _factor_order(factor: tuple[ExactPolynomial, int]) -> tuple[int, int, str]:
    polynomial, _ = factor
    text = str(polynomial.as_expr()) if len(polynomial) < 50 else ""
    return polynomial.degree, len(polynomial), text


def _number(p: Any) -> int:
    return int(p.leading_coefficient()) if p else 0


def _exact_number(value: Any) -> Any:
    if isinstance(value, sp.Basic) and not isinstance(value, sp.Float):
        return (
            value.replace(lambda x: isinstance(x, sp.Float), _exact_number)
            if value.atoms(sp.Float)
            else value
        )
    number = exact_rational(value)
    return sp.Rational(number.numerator, number.denominator)


def _restored(main: sp.Symbol, generators: tuple[sp.Expr, ...], terms: Any) -> ExactPolynomial:
    ring = Ring(main, generators)
    make = ring.context.from_dict
    value = Gaussian(make({e: a for e, a, _ in terms if a}), make({e: b for e, _, b in terms if b}))
    return ExactPolynomial(ring, value)


def ratio_expr(ratio: Ratio, ring: Ring) -> sp.Expr:
    """A ratio as a SymPy expression."""
    top, bottom = (ExactPolynomial(ring, p).factored_expr() for p in (ratio.top, ratio.bottom))
    return top / bottom


def polynomial(expr: sp.Expr, main: sp.Symbol) -> ExactPolynomial:
    """An expression as an exact polynomial, up to a denominator free of `main`.

    Raises
    ------
    NonPolynomialError
        When it is not a polynomial in `main`.
    """
    ring = ring_of([expr], main)
    ratio = Reader(ring).ratio(expr).lowest()
    if ratio.bottom.holds(0):
        raise NonPolynomialError(f"{expr} is a ratio in {main}; use its numerator")
    return ExactPolynomial(ring, ratio.top)


def numerator(expr: sp.Expr, main: sp.Symbol) -> ExactPolynomial:
    """The numerator of a ratio, in lowest terms."""
    ring = ring_of([expr], main)
    return ExactPolynomial(ring, Reader(ring).ratio(expr).lowest().top)
