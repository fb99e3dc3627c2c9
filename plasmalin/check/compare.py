"""A claim against the derived relation, by common divisors: identical, some of its factors, one of its sheets."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import reduce
from operator import mul

from sympy import Add, Expr, Mul, Pow, S, cancel

from ..declare.notation import paper
from ..declare.operators import omega
from ..errors import DeclarationError
from ..exact.divisibility import may_divide
from ..exact.polynomial import ExactPolynomial
from .claim import Claim
from .derived import Derived, bare
from .sheets import Sheet, sheet_of
from .sizes import FACTORED, SHOWN_BESIDE


@dataclass(frozen=True)
class Match:
    """A claim all of whose roots are roots of the derived relation.

    Attributes
    ----------
    kind : str
        "identical", "factor" or "branch".
    proof : str
        How the polynomials compare.
    notes : tuple of str
        Which of a claim's solutions lie on the principal sheet of its roots, where not all do.
    """

    kind: str
    proof: str
    notes: tuple[str, ...] = ()


def compare(claim: Claim, derived: Derived) -> Match | None:
    """How a claim agrees with the derived relation, or None where it does not.

    A claim with roots stands for their principal values, and does not agree where it has no solution with them.

    Raises
    ------
    DeclarationError
        When both sides of the claim are the same.
    """
    found, sheets = derived.with_zeros(claim.residual)
    if found.degree < 0:
        raise DeclarationError("claim: both sides are the same, so it says nothing of a wave")
    polynomial, poles = without_poles(found, claim, derived)
    if sheets > 1 and len(polynomial) < FACTORED:
        polynomial = without_repeats(polynomial)
    made = match(bare(polynomial), sheets, derived, claim.solved)
    if made is None or (made.kind != "identical" and _loses(claim, polynomial, derived)):
        return None
    sheet = sheet_of(claim, derived) if sheets > 1 else Sheet()
    if not sheet.possible:
        return None
    return replace(made, proof=made.proof + _poles_in_words(poles), notes=sheet.notes)


def _poles_in_words(poles: Sequence[ExactPolynomial]) -> str:
    if not poles:
        return ""
    texts = (f"{paper(p.as_expr())} = 0" for p in poles)
    shown = dict.fromkeys(t if len(t) < SHOWN_BESIDE else "zeros of a long sum" for t in texts)
    return f"; {', '.join(shown)}: there the claim as arranged is infinite on both sides, no wave"


def without_poles(
    polynomial: ExactPolynomial, claim: Claim, derived: Derived
) -> tuple[ExactPolynomial, list[ExactPolynomial]]:
    """The claim without roots that are poles of parts of it, and what vanishes at these.

    1/A = 1/B holds where A and B are both infinite: such roots come with the arrangement.
    """
    taken: list[ExactPolynomial] = []
    if polynomial.degree < 1 or covered(polynomial, derived.polynomial):
        return polynomial, taken
    poles = {p.base for e in _expressions(claim) for p in e.atoms(Pow) if p.exp.is_negative}
    for base in poles:
        if not base.has(omega) or base == omega:
            continue
        pole, _ = derived.numerator(base)
        while pole.degree > 0:
            common = polynomial.gcd(pole)
            if common.degree < 1 or not derived.polynomial.gcd(common).degree < 1:
                break
            polynomial = polynomial.exact_div(common)
            taken += [common] if common not in taken else []
    return polynomial, taken


def without_repeats(polynomial: ExactPolynomial) -> ExactPolynomial:
    """Every factor once: the sheets of several roots may meet."""
    factors = polynomial.factor()[1]
    if all(n == 1 for _, n in factors):
        return polynomial
    return reduce(mul, (f for f, _ in factors))


def _expressions(claim: Claim) -> list[Expr]:
    return [claim.written_out(e) for e in (claim.left, claim.right)]


def _loses(claim: Claim, polynomial: ExactPolynomial, derived: Derived) -> bool:
    """Whether the claim has no wave, or zero frequency, where the laws have a wave."""
    lacking = [f for f, _ in derived.factors if not covered(f, polynomial)]
    zeros = polynomial.lowest
    if zeros > 0 and any(f.degree == zeros for f in lacking):
        return True
    return any(
        not f.is_nonzero or any(_is_rest_of(derived.rational(f), p) for p in lacking)
        for f in still_factors(claim)
    )


def still_factors(claim: Claim) -> list[Expr]:
    """The sums without ω that a claim, a product, has as factors."""
    factors = (claim.written_out(f) for f in Mul.make_args(claim.left - claim.right))
    return [f for f in factors if isinstance(f, Add) and not f.has(omega)]


def _is_rest_of(still: Expr, factor: ExactPolynomial) -> bool:
    """Whether a sum is what a factor of the relation leaves without its powers of ω."""
    rest = factor.coefficients().get(0, S.Zero)
    return rest != 0 and len(factor) < FACTORED and not cancel(rest / still).has(Add)


def has_only_roots_of(claim: Claim, derived: Derived) -> bool:
    """Whether every root of a claim but ω = 0 is one of the derived relation, however often."""
    factors = derived.numerator(claim.residual)[0].factor()[1]
    return bool(factors) and all(covered(f, derived.polynomial) for f, _ in factors)


def match(
    polynomial: ExactPolynomial, sheets: int, derived: Derived, solved: bool = False
) -> Match | None:
    """As `compare`, for the polynomial of a claim freed of its roots."""
    if polynomial.degree < 1 or not covered(polynomial, derived.polynomial):
        return None
    whole = polynomial.degree == derived.polynomial.degree
    if sheets > 1:
        return Match(
            "branch", "freed of its roots, the claim has only factors of the derived relation"
        )
    if whole:
        return Match("identical", "both are the same polynomial up to a factor free of ω")
    if has_partner(polynomial, derived.polynomial, solved):
        return Match(
            "branch",
            "the claim divides the derived relation; the same with a sign changed does too",
        )
    return Match("factor", "every factor of the claim divides the derived relation")


def covered(part: ExactPolynomial, whole: ExactPolynomial) -> bool:
    """Whether `part` divides `whole`, factors free of ω aside; what does not at one point needs no common divisor."""
    return may_divide(part, whole) and part.gcd(whole).degree == part.degree


def has_partner(part: ExactPolynomial, whole: ExactPolynomial, solved: bool) -> bool:
    """Whether the claim is one sheet of a pair: with one symbol's sign changed it is another divisor of `whole`."""
    if not solved and part.degree > 1:
        return False
    for symbol in (part.main, *part.generators):
        turned = part.turned_sign(symbol)
        if not covered(part, turned) and covered(turned, whole):
            return True
    return False
