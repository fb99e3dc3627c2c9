"""How long a relation or a claim may be for each question that is asked of it.

Everything is exact, and an exact step is not interrupted; so what would not end within the time given is not begun. A
comparison itself has no such limit. Where a limit is met the note says so.
"""

from __future__ import annotations

SEARCHED = 1_000
"""Terms of a relation, or a claim, for values of parameters, orderings that are not stated, and expansions: beyond this a
remainder at one sample, or a relation shifted by a claim, takes seconds."""
ORDERED = 5_000
"""Terms of a relation whose leading part is sought under stated conditions: each term is a vector of fractions."""
WITH_CONDITIONS = 10_000
"""Terms of a relation that the conditions of the background are put into: the sum is multiplied out."""
MENDED = 20_000
"""Terms of a relation in which slips are searched for: it is evaluated at a point for each symbol, and factored."""
BALANCED = 600
"""Terms of a factor whose leading parts are listed, under every symbol and every pair of them."""
FACTORED = 1_000
"""Terms of a claim freed of its roots that is searched for repeated factors, and of a factor divided by a sum."""
MULTIPLIED = 40
"""Terms of a claim that is squared, or multiplied by its mirror image, for an ordering."""
DIVIDED = 200_000
"""Terms of a relation times monomials in the terms of a claim, of a degree of the steps of a division with rest."""

SHOWN_TERMS = 150
"""Terms of a relation whose coefficients are shown side by side."""
SHOWN = 400
"""Characters of a coefficient that is shown."""
SHOWN_BESIDE = 120
"""Characters of a sum that is shown within a sentence."""


def too_long(terms: int) -> tuple[str, ...]:
    """What is not asked of a relation with so many terms, in words."""
    limits = (
        (SEARCHED, "special values, orderings and expansions were not searched for"),
        (ORDERED, "the stated orderings were not verified"),
        (WITH_CONDITIONS, "the background's conditions were not used"),
        (MENDED, "slips were not searched for"),
    )
    left_out = [what for limit, what in limits if terms > limit]
    return (f"the derived relation has {terms} terms: {'; '.join(left_out)}",) if left_out else ()
