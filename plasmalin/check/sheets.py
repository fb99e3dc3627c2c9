"""On which sheet of its roots a claim can hold.

A claim is freed of its roots by a norm, which holds on every sheet. Its author means the principal roots, and these have
no negative real part: sqrt(ω² − ω_p²) = −k v has no solution where k and v are positive. Signs decide that exactly.
"""

from __future__ import annotations

from dataclasses import dataclass

from sympy import Expr, Mul, cancel

from ..declare.notation import paper
from ..declare.operators import omega
from ..exact.polynomial import ExactPolynomial, numerator
from ..exact.radicals import LinearInRoots, linear_in_roots
from .claim import Claim
from .derived import Derived
from .monomials import base_and_power
from .sizes import SHOWN_BESIDE

NOWHERE = "a principal root has no negative real part, so the claim as written has no solution"
OPEN = "signs do not decide which of its roots lie on the principal sheet"


@dataclass(frozen=True)
class Sheet:
    """Whether a claim can hold with the principal values of its roots.

    Attributes
    ----------
    possible : bool
        False where the signs of positive symbols exclude it.
    notes : tuple of str
        Which of its solutions lie on the principal sheet, where not all do.
    """

    possible: bool = True
    notes: tuple[str, ...] = ()


@dataclass(frozen=True)
class Sign:
    """The sign of a sum: a number, 1 or −1, times symbols that may be negative; ω is real where it enters."""

    number: int = 1
    symbols: frozenset[Expr] = frozenset()

    def __mul__(self, other: Sign) -> Sign:
        return Sign(self.number * other.number, self.symbols ^ other.symbols)


def sheet_of(claim: Claim, derived: Derived) -> Sheet:
    """What the signs of its terms say of a claim with roots of ω."""
    found = linear_in_roots(derived.rational(claim.residual), omega)
    if found is None:
        return Sheet()
    if found.rest is None:
        return Sheet(notes=(OPEN,))
    if not found.rest:
        return Sheet()
    signs = Signs(found, derived)
    rest = signs.of(found.rest)
    roots = [signs.of(part) for part in found.parts]
    if rest is not None and all(r == rest for r in roots):
        free = all(p.degree == 0 for p in (found.rest, *found.parts))
        possible = not free and not signs.only_real(derived.numerator(claim.residual)[0])
        if not possible:
            return Sheet(possible=False)
        return Sheet(notes=("with the principal root it holds for no real frequency",))
    if len(roots) > 1:
        return Sheet(notes=(OPEN,))
    return Sheet(notes=_where(rest, roots[0], found.rest, found.parts[0]))


def _where(
    one: Sign | None, other: Sign | None, rest: ExactPolynomial, part: ExactPolynomial
) -> tuple[str, ...]:
    """What must be positive for the one root to be principal."""
    if one is not None and other is not None:
        sign = one * other * Sign(-1)
        side = f"{paper(Mul(*sign.symbols))} {'>' if sign.number > 0 else '<'} 0"
        return (f"with the principal root it holds for {side}",) if sign.symbols else ()
    value = paper(cancel(-rest.as_expr() / part.as_expr()))
    if len(value) > SHOWN_BESIDE or "_root" in value:
        return (OPEN,)
    return (f"with the principal root it holds where the real part of {value} is positive",)


class Signs:
    """Signs of sums in which declared positive symbols, roots of positive sums and a single wave number are positive."""

    def __init__(self, found: LinearInRoots, derived: Derived) -> None:
        self.angles = derived.angles
        lengths = derived.wave_symbols - self.angles.symbols - set(self.angles.forms)
        self.positive: set[Expr] = set(lengths) if len(lengths) == 1 else set()
        self.unknown: set[Expr] = {r.symbol for r in found.radicals}
        for radical in found.radicals:
            if not radical.base.has(omega) and self._is_positive(radical.base):
                self.unknown.discard(radical.symbol)

    def of(self, part: ExactPolynomial) -> Sign | None:
        """The sign that all terms of a sum share, if they do."""
        found = {self._of_term(part, *term) for term in part.terms()}
        return found.pop() if len(found) == 1 else None

    def _of_term(
        self, part: ExactPolynomial, exponents: tuple[int, ...], re: int, im: int
    ) -> Sign | None:
        if im:
            return None
        odd: set[Expr] = {omega} if exponents[0] % 2 else set()
        for g, n in zip(part.generators, exponents[1:], strict=True):
            if n == 0 or self._is_plain(g):
                continue
            if g in self.unknown or not g.is_real:
                return None
            odd |= {g} if n % 2 else set()
        return Sign(1 if re > 0 else -1, frozenset(odd))

    def _is_plain(self, generator: Expr) -> bool:
        """Whether it is positive."""
        base, _ = base_and_power(generator)
        known = base in self.positive or base.is_positive
        return bool(known) and generator not in self.unknown

    def _is_positive(self, base: Expr) -> bool:
        if any(base == 1 - s**2 for s in self.angles.symbols):
            return True
        top, bottom = base.as_numer_denom()
        above, below = (self.of(numerator(e, omega)) for e in (top, bottom))
        return above is not None and below is not None and above * below == Sign()

    def only_real(self, claimed: ExactPolynomial) -> bool:
        """Whether a polynomial in ω has real zeros only, which is told where it is linear or ω² = a positive sum."""
        found = claimed.coefficients()
        if not claimed.is_real or claimed.degree > 2 or (claimed.degree == 2 and 1 in found):
            return False
        if claimed.degree < 2 or 0 not in found:
            return True
        low, high = (self.of(numerator(found[n], omega)) for n in (0, 2))
        return low is not None and high is not None and low * high == Sign(-1)
