"""The dimensions of a model: what is declared, and what the laws require of the rest.

What has no declared unit is an unknown of a linear system, one equation for each pair of terms that must agree. The
units match when the equations of all laws together have a solution.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace
from fractions import Fraction
from typing import Any

from ..errors import UnitError
from .forms import Form, Requirement, combined, known, of_dimension, term_text
from .units import BASE, NONE, Dimension, dimension, dimension_text, product

NUMBER = re.compile(r"-?\d+(/\d+)?")
KELVIN_PER_JOULE = product(dimension(0, 0, 0, 0, 1), dimension(2, 1, -2), -1)


@dataclass(frozen=True)
class Dimensions:
    """The declared dimensions of a model, and what its laws require.

    Nothing is refused before a unit has been declared by the user: normalized laws, with numbers for what has a
    dimension, are no mistake.

    Attributes
    ----------
    declared : mapping of str to Dimension
    required : tuple of Requirement
    active : bool
        Whether a unit has been declared, so that requirements are checked.
    solved : mapping of str to Form
        Unknowns in terms of base units and of other unknowns.
    """

    declared: Mapping[str, Dimension]
    required: tuple[Requirement, ...] = ()
    active: bool = False
    solved: Mapping[str, Form] | None = None

    def declare(self, name: str, powers: Dimension, *, check: bool = True) -> Dimensions:
        """With the dimension of a name; without `check` a constant of nature, which does not start the check.

        Raises
        ------
        UnitError
            When it contradicts what has been declared before.
        """
        made = replace(
            self, declared={**self.declared, name: powers}, active=self.active or check, solved=None
        )
        met = any(name in r.left_form or name in r.right_form for r in self.required)
        return replace(made, solved=self.solved) if self.active and not met else made._solve()

    def require(self, required: Iterable[Requirement]) -> Dimensions:
        """With more requirements.

        Raises
        ------
        UnitError
            When they contradict those before.
        """
        new = tuple(required)
        made = replace(self, required=self.required + new)
        return replace(made, solved=made._with(new, self.solved or {})) if self.active else made

    def forget(self, where: str) -> Dimensions:
        """Without the requirements of one law."""
        kept = tuple(r for r in self.required if r.where != where)
        return replace(self, required=kept)._solve()

    def checked(self) -> Dimensions:
        """With the requirements checked though the user declared no unit."""
        return self if self.active else replace(self, active=True)._solve()

    def of(self, name: str) -> Dimension | None:
        """The dimension of a name, declared or required by the laws; None where they leave it open."""
        return known(self.reduced({name: Fraction(1)}))

    def reduced(self, form: Form) -> Form:
        """A form with the declared and the solved names put in."""
        return self._reduced(form, self.solved or {})

    def _reduced(self, form: Form, solved: Mapping[str, Form]) -> Form:
        total: Form = {}
        for name, value in form.items():
            if name in self.declared:
                total = combined(total, of_dimension(self.declared[name]), value)
            else:
                total = combined(total, solved.get(name, {name: Fraction(1)}), value)
        return total

    def _solve(self) -> Dimensions:
        solved = self._with(self.required, {}) if self.active else None
        return replace(self, solved=solved)

    def _with(
        self, required: Iterable[Requirement], solved: Mapping[str, Form]
    ) -> Mapping[str, Form]:
        """Gauss-Jordan elimination, one equation more at a time."""
        made = dict(solved)
        for one in required:
            row = dict(self._reduced(one.difference, made))
            if not row:
                continue
            pivot = next((key for key in row if isinstance(key, str)), None)
            if pivot is None:
                raise UnitError(self._message(one, made))
            scale = -1 / row.pop(pivot)
            image = combined({}, row, scale)
            made = {key: _replaced(form, pivot, image) for key, form in made.items()}
            made[pivot] = image
        return made

    # Messages ------------------------------------------------------------------------------------

    def _message(self, one: Requirement, solved: Mapping[str, Form]) -> str:
        left, right = (self._reduced(f, solved) for f in (one.left_form, one.right_form))
        rest = combined(left, right, Fraction(-1))
        first, second = term_text(one.left), term_text(one.right)
        if one.right is None:
            reason = " ".join(map(term_text, one.reason))
            text = (
                f"{one.where}: '{first}' must be dimensionless, as {reason}, "
                f"but it is in {form_text(left)}; divide it by a quantity of that unit"
            )
        else:
            text = (
                f"{one.where}: '{first}' is in {form_text(left)}, but '{second}' is in {form_text(right)}; "
                "correct one of them, or the unit that one of their names declares"
            )
        return text + self._inferred(one, solved) + kelvin_hint(rest) + _number_hint(one)

    def _inferred(self, one: Requirement, solved: Mapping[str, Form]) -> str:
        names = {*one.left_form, *one.right_form}
        loose = sorted(n for n in names if isinstance(n, str) and n not in self.declared)
        found = ((n, self._reduced({n: Fraction(1)}, solved)) for n in loose)
        shown = [f"{n} in {form_text(f)}" for n, f in found if known(f) is not None]
        return (
            f" (no unit is declared for {', '.join(shown)}: this follows from the other laws)"
            if shown
            else ""
        )


def _number_hint(one: Requirement) -> str:
    if not any(NUMBER.fullmatch(term_text(x)) for x in (one.left, one.right)):
        return ""
    return "; a number that carries a unit needs a name, model.parameter(..., unit=...)"


def _replaced(form: Form, key: str, image: Form) -> Form:
    if key not in form:
        return form
    rest = {k: v for k, v in form.items() if k != key}
    return combined(rest, image, form[key])


def form_text(form: Form) -> str:
    """A form as text: base units, then names whose unit is open, in brackets."""
    plain = {k: v for k, v in form.items() if isinstance(k, int) and isinstance(v, Fraction)}
    shown = [dimension_text(known(plain) or NONE)] if plain else []
    shown += [
        _powered(f"[{key}]" if isinstance(key, str) else BASE[key], power)
        for key, power in form.items()
        if key not in plain
    ]
    return " ".join(shown) or "1 (dimensionless)"


def _powered(base: str, power: Any) -> str:
    text = str(power)
    return base if text == "1" else f"{base}^{text if text.isalnum() else f'({text})'}"


def kelvin_hint(rest: Form | Dimension) -> str:
    """What to say when two dimensions differ by kelvin for joule."""
    powers = known(rest) if isinstance(rest, Mapping) else rest
    count = powers[BASE.index("K")] if powers else 0
    if not count or powers != product(NONE, KELVIN_PER_JOULE, count):
        return ""
    return (
        "; a temperature in the equations is an energy: declare it in eV or J, "
        "or write k_B*T with a temperature in K"
    )
