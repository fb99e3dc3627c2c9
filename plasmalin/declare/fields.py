"""The atoms of a law: fields, and what a field splits into (its background and its perturbation)."""

from __future__ import annotations

from typing import Any, ClassVar, cast

from sympy import AtomicExpr, Expr, S, Tuple
from sympy.printing.latex import LatexPrinter
from sympy.printing.printer import Printer

from ..errors import DeclarationError, RankError

AXES = "xyz"


class Components(Expr):  # type: ignore[misc]
    """A vector or rank-2 tensor given by its components along the model's axes.

    Make one with `components`; a tensor's arguments are its rows, as SymPy tuples.
    """

    is_commutative = True

    @property
    def rank(self) -> int:
        return 2 if isinstance(self.args[0], Tuple) else 1

    @property
    def size(self) -> int:
        """The number of axes that the components span."""
        return len(self.args)

    def entry(self, index: tuple[int, ...]) -> Expr:
        found: Any = self
        for i in index:
            found = found.args[i]
        return cast(Expr, found)

    def _sympystr(self, printer: Printer) -> str:
        return f"components({', '.join(printer._print(a) for a in self.args)})"

    def _latex(self, printer: LatexPrinter, exp: str | None = None) -> str:
        if self.rank == 2:
            rows = r" \\ ".join(
                " & ".join(printer._print(x) for x in row.args) for row in self.args
            )
            return rf"\begin{{pmatrix}} {rows} \end{{pmatrix}}"
        axes = getattr(printer, "axes", "")
        names = axes if len(axes) == self.size else axis_names(self.size)
        terms = [
            (
                rf"\hat{{\mathbf{{{axis}}}}}"
                if a == 1
                else rf"{printer.parenthesize(a, 50)}\,\hat{{\mathbf{{{axis}}}}}"
            )
            for a, axis in zip(self.args, names, strict=True)
            if a != 0
        ]
        return terms[0] if len(terms) == 1 else rf"\left({' + '.join(terms)}\right)"


def axis_names(size: int) -> str:
    """Names to print components with when the model is not at hand: x; x, z; x, y, z."""
    return {1: "x", 2: "xz", 3: "xyz"}[size]


def components(*entries: Any) -> Expr:
    """A vector built from scalars, one entry per axis of the model.

    Parameters
    ----------
    *entries : scalar expressions
        For a rank-2 tensor, one tuple of entries per row.

    Returns
    -------
    Expr
        A `Components` expression of rank 1 or 2 (0 where every entry is 0).

    Raises
    ------
    RankError
        When there are no entries or more than three, or rows of another length.

    Examples
    --------
    >>> import plasmalin as plin
    >>> plin.components(0, 0, 2)
    components(0, 0, 2)
    """
    if not 1 <= len(entries) <= 3:
        raise RankError(f"components() got {len(entries)} entries; give one per axis of the model")
    rows = [e for e in entries if isinstance(e, tuple | list | Tuple)]
    if rows:
        if len(rows) != len(entries) or any(len(r) != len(entries) for r in rows):
            raise RankError("components() of a tensor needs as many rows as columns, one per axis")
        made = [Tuple(*(exact(x) for x in row)) for row in rows]
        zero = all(x == 0 for row in made for x in row)
    else:
        made = [exact(x) for x in entries]
        zero = all(x == 0 for x in made)
    return cast(Expr, S.Zero if zero else Components(*made))


def exact(value: Any) -> Expr:
    """A number or SymPy expression as an expression; text is never evaluated."""
    from sympy import SympifyError, sympify

    if isinstance(value, str):
        raise RankError(
            f"text {value!r} stands where an expression is needed; "
            "declare the name with model.parameter(...) or give the whole law as one string"
        )
    try:
        made = sympify(value, strict=True)
    except SympifyError:
        raise RankError(f"{value!r} is not a SymPy expression or a number") from None
    if not isinstance(made, Expr):
        raise RankError(f"{value!r} is not a scalar or vector expression")
    if made.has(S.NaN, S.Infinity, S.NegativeInfinity, S.ComplexInfinity):
        raise DeclarationError(f"{value!r} holds a number that is not finite")
    return made


class FieldAtom(AtomicExpr):  # type: ignore[misc]
    """What fields, backgrounds and perturbations share: a name, a rank, no assumptions."""

    is_commutative = True
    _diff_wrt = True
    rank: int

    @property
    def free_symbols(self) -> set[Any]:
        return {self}

    @property
    def label(self) -> str:
        raise NotImplementedError

    def _hashable_content(self) -> tuple[Any, ...]:
        return tuple("" if x is None else x for x in self.__getnewargs__())

    def __getnewargs__(self) -> tuple[Any, ...]:
        raise NotImplementedError

    @classmethod
    def class_key(cls) -> tuple[int, int, str]:
        """Behind symbols, so that products print parameters first."""
        return 2, 1, cls.__name__

    def sort_key(self, order: Any = None) -> Any:
        return self.class_key(), (1, (self.label,)), S.One.sort_key(), S.One

    def _sympystr(self, printer: Printer) -> str:
        return self.label


class Field(FieldAtom):
    """A scalar, vector or tensor unknown of the nonlinear laws.

    Made by `FluidModel.scalar`, `FluidModel.vector` and `FluidModel.tensor`, never directly.

    Attributes
    ----------
    name : str
    rank : int
        0, 1 or 2.
    background : Expr
        The zeroth-order value: an expression in parameters, 0, or a `Components`.
    gradient : Expr
        Its uniform local gradient, 0 or a `Components`: of a scalar d_i n_0, of a vector d_i v_j.
    perturbation : Perturbation
        The first-order field, printed with a tilde.
    symmetric : bool
        Whether a rank-2 tensor equals its transpose.
    """

    __slots__ = ("background", "gradient", "latex_name", "name", "rank", "symmetric")
    name: str
    background: Expr
    gradient: Expr
    latex_name: str | None
    symmetric: bool

    def __new__(
        cls,
        name: str,
        rank: int,
        background: Expr,
        gradient: Expr = S.Zero,
        symmetric: bool = False,
        latex_name: str | None = None,
    ) -> Field:
        made = cast(Field, AtomicExpr.__new__(cls))
        made.name, made.rank, made.background, made.gradient = name, rank, background, gradient
        made.symmetric, made.latex_name = symmetric, latex_name
        return made

    def __getnewargs__(self) -> tuple[Any, ...]:
        return (
            self.name,
            self.rank,
            self.background,
            self.gradient,
            self.symmetric,
            self.latex_name,
        )

    @property
    def label(self) -> str:
        return self.name

    @property
    def perturbation(self) -> Perturbation:
        return cast(Perturbation, Perturbation(self))

    def _latex(self, printer: LatexPrinter, exp: str | None = None) -> str:
        return with_power(decorated(self), exp)


class Part(FieldAtom):
    """A part of a field: its `Background` or its `Perturbation`."""

    __slots__ = ("field",)
    field: Field
    mark: ClassVar[str]

    def __new__(cls, field: Field) -> Any:
        made = AtomicExpr.__new__(cls)
        made.field = field
        return made

    def __getnewargs__(self) -> tuple[Any, ...]:
        return (self.field,)

    @property
    def rank(self) -> int:  # type: ignore[override]
        return self.field.rank

    def _latex(self, printer: LatexPrinter, exp: str | None = None) -> str:
        return with_power(decorated(self.field, self.mark), exp)


class Background(Part):
    """The zeroth-order part of a field while a law is taken apart; its value is `value`."""

    mark = "0"

    @property
    def label(self) -> str:
        return f"{self.field.name}0"

    @property
    def value(self) -> Expr:
        return self.field.background


class Perturbation(Part):
    """The first-order part of a field, printed with a tilde."""

    mark = "~"

    @property
    def label(self) -> str:
        return f"~{self.field.name}"


GREEK = (
    "alpha beta gamma delta epsilon zeta eta theta iota kappa lambda mu nu xi omicron pi rho sigma "
    "tau upsilon phi chi psi omega Gamma Delta Theta Lambda Xi Pi Sigma Upsilon Phi Psi Omega"
).split()


def latex_word(word: str) -> str:
    """One name part in LaTeX: Greek by name, several letters upright."""
    if word in GREEK:
        return f"\\{word}"
    return word if len(word) <= 1 or word.isdigit() else rf"\mathrm{{{word}}}"


def decorated(field: Field, mark: str = "") -> str:
    """A field's LaTeX: bold for a vector, a tilde or a subscript 0 on request."""
    head, _, subscript = (field.latex_name or field.name).partition("_")
    stem = head if field.latex_name else latex_word(head)
    if field.rank == 1:
        stem = rf"\boldsymbol{{{stem}}}" if head in GREEK else rf"\mathbf{{{stem}}}"
    elif field.rank == 2:
        stem = rf"\mathsf{{{stem}}}"
    if mark == "~":
        stem = rf"\tilde{{{stem}}}"
    parts = [
        subscript if field.latex_name else ",".join(latex_word(p) for p in subscript.split("_"))
    ]
    low = "".join(p.strip("{}") if field.latex_name else p for p in parts) + (
        "0" if mark == "0" else ""
    )
    return f"{stem}_{{{low}}}" if low else stem


def with_power(text: str, exponent: str | None) -> str:
    return text if exponent is None else f"{text}^{{{exponent}}}"
