"""A claim against the derived relation, by common divisors: identical, some of its factors, one of its sheets."""

from __future__ import annotations

from dataclasses import dataclass

from sympy import Add, Mul

from ..declare.operators import omega
from ..exact.polynomial import ExactPolynomial
from .claim import Claim
from .derived import Derived


@dataclass(frozen=True)
class Match:
    """A claim all of whose roots are roots of the derived relation.

    Attributes
    ----------
    kind : str
        "identical", "factor" or "branch".
    proof : str
        How the polynomials compare.
    """

    kind: str
    proof: str


def compare(claim: Claim, derived: Derived) -> Match | None:
    """How a claim agrees with the derived relation, or None where it does not."""
    polynomial, sheets = derived.numerator(claim.residual)
    found = match(polynomial, sheets, derived, claim.solved)
    return None if found and found.kind != "identical" and loses_a_mode(claim) else found


def loses_a_mode(claim: Claim) -> bool:
    """Whether the claim is a product with a factor, a sum that holds no ω, which then is no wave."""
    factors = (claim.written_out(f) for f in Mul.make_args(claim.left - claim.right))
    return any(isinstance(f, Add) and not f.has(omega) for f in factors)


def match(
    polynomial: ExactPolynomial, sheets: int, derived: Derived, solved: bool = False
) -> Match | None:
    """As `compare`, for the polynomial of a claim freed of its roots."""
    if polynomial.degree < 1 or not covered(polynomial, derived.polynomial):
        return None
    whole = polynomial.degree == derived.polynomial.degree
    if sheets > 1:
        return Match("branch", "freed of its roots, the claim has only factors of the derived relation")
    if whole:
        return Match("identical", "both are the same polynomial up to a factor free of ω")
    if has_partner(polynomial, derived.polynomial, solved):
        return Match("branch", "the claim divides the derived relation; the same with a sign changed does too")
    return Match("factor", "every factor of the claim divides the derived relation")


def covered(part: ExactPolynomial, whole: ExactPolynomial) -> bool:
    """Whether `part` divides `whole`, factors free of ω aside."""
    return part.gcd(whole).degree == part.degree


def has_partner(part: ExactPolynomial, whole: ExactPolynomial, solved: bool) -> bool:
    """Whether the claim is one sheet of a pair: with one symbol's sign changed it is another divisor of `whole`."""
    if not solved and part.degree > 1:
        turned = part.turned_sign(part.main)
        return not covered(part, turned) and covered(turned, whole)
    for symbol in (part.main, *part.generators):
        turned = part.turned_sign(symbol)
        if not covered(part, turned) and covered(turned, whole):
            return True
    return False
