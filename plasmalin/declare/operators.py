"""The vector calculus that laws are written in.

Operators are coordinate-free. Rank-2 index order: (grad v)_ij = d_i v_j; ``div`` contracts the first index, so
div(outer(a, b)) = (a.grad) b + b div a; dot(v, T)_j = v_i T_ij, dot(T, v)_i = T_ij v_j and
dot(v, grad(u)) = advect(v, u).
"""

from __future__ import annotations

from typing import Any, ClassVar, cast

from sympy import Add, AtomicExpr, Expr, Mul, Pow, S, Symbol, Tuple
from sympy.printing.latex import LatexPrinter
from sympy.printing.printer import Printer

from ..errors import DeclarationError, RankError
from .fields import Components, Field, FieldAtom, exact

WORDS = {0: "scalar", 1: "vector", 2: "rank-2 tensor"}

omega = Symbol("omega")
k_x, k_y, k_z = (Symbol(name, real=True) for name in ("k_x", "k_y", "k_z"))
k_abs = Symbol("k_abs", nonnegative=True)
WAVE_SYMBOLS = (omega, k_x, k_y, k_z, k_abs)


def rank_of(expr: Any) -> int:
    """The rank of an expression: 0 scalar, 1 vector, 2 rank-2 tensor.

    Raises
    ------
    RankError
        When a sum mixes ranks, two vectors are multiplied without `dot`, `cross` or `outer`, or
        a vector stands in a power or a function.
    """
    if isinstance(expr, Operator | FieldAtom | Components | Identity):
        return expr.rank
    if isinstance(expr, Add):
        return _rank_of_sum(expr)
    if isinstance(expr, Mul):
        ranked = [a for a in expr.args if rank_of(a) > 0]
        if len(ranked) > 1:
            raise RankError(
                f"'{ranked[0]}' and '{ranked[1]}' are multiplied as if they were scalars; "
                "use dot(a, b), cross(a, b) or outer(a, b)"
            )
        return rank_of(ranked[0]) if ranked else 0
    if isinstance(expr, Tuple):
        raise RankError(f"{expr} is a bare tuple; write components{expr}")
    for a in expr.args:
        if rank_of(a) > 0:
            what = "a power" if isinstance(expr, Pow) else f"{type(expr).__name__}(...)"
            raise RankError(
                f"the {WORDS[rank_of(a)]} '{a}' stands in {what}, which takes scalars only; "
                "use dot(v, v) for v^2 and norm(v) for |v|"
            )
    return 0


def _rank_of_sum(expr: Add) -> int:
    ranks = [rank_of(a) for a in expr.args]
    if len(set(ranks)) > 1:
        low, high = expr.args[ranks.index(min(ranks))], expr.args[ranks.index(max(ranks))]
        raise RankError(
            f"a {WORDS[min(ranks)]} ('{low}') is added to a {WORDS[max(ranks)]} ('{high}'); "
            "every term of a sum needs the same rank"
        )
    return ranks[0]


class Operator(Expr):  # type: ignore[misc]
    """A linear or bilinear operation on fields; its rank is fixed when it is made."""

    is_commutative = True
    word: ClassVar[str]
    derivative: ClassVar[bool] = False
    """Whether the operator differentiates its last argument."""
    takes: ClassVar[tuple[tuple[int, ...], ...]]
    """For each argument the ranks that it may have."""

    def __new__(cls, *args: Any) -> Any:
        made = tuple(exact(a) for a in args)
        ranks = tuple(rank_of(a) for a in made)
        if any(a == 0 for a in made):
            return S.Zero
        for a, rank, allowed in zip(made, ranks, cls.takes, strict=True):
            if rank not in allowed:
                wanted = " or ".join(WORDS[r] for r in allowed)
                raise RankError(
                    f"{cls.word}() got the {WORDS[rank]} '{a}' where it takes a {wanted}"
                )
        if not 0 <= cls.result(*ranks) <= 2:
            raise RankError(f"{cls.word}({', '.join(map(str, made))}) would have rank above 2")
        return Expr.__new__(cls, *made)

    @classmethod
    def result(cls, *ranks: int) -> int:
        """The rank of the result from the ranks of the arguments."""
        return ranks[-1]

    @property
    def rank(self) -> int:
        return self.result(*(rank_of(a) for a in self.args))

    def _sympystr(self, printer: Printer) -> str:
        return f"{self.word}({', '.join(printer._print(a) for a in self.args)})"

    def _latex(self, printer: LatexPrinter, exp: str | None = None) -> str:
        text = self.latex(*(_tight(printer, a) for a in self.args))
        return text if exp is None else rf"\left({text}\right)^{{{exp}}}"

    def latex(self, *args: str) -> str:
        raise NotImplementedError


def _tight(printer: LatexPrinter, expr: Any) -> str:
    """LaTeX of an operand, in parentheses unless it is a single factor."""
    text = cast(str, printer._print(expr))
    single = isinstance(expr, FieldAtom | Components | Symbol) or (expr.is_Number and expr >= 0)
    return text if single else rf"\left({text}\right)"


class PartialT(Operator):
    word, takes, derivative = "partial_t", ((0, 1, 2),), True

    def latex(self, *args: str) -> str:
        return rf"\partial_t {args[0]}"


class Grad(Operator):
    word, takes, derivative = "grad", ((0, 1),), True

    @classmethod
    def result(cls, *ranks: int) -> int:
        return ranks[0] + 1

    def latex(self, *args: str) -> str:
        return rf"\nabla {args[0]}"


class Div(Operator):
    word, takes, derivative = "div", ((1, 2),), True

    @classmethod
    def result(cls, *ranks: int) -> int:
        return ranks[0] - 1

    def latex(self, *args: str) -> str:
        return rf"\nabla\cdot {args[0]}"

    def _latex(self, printer: LatexPrinter, exp: str | None = None) -> str:
        (inner,) = self.args
        if isinstance(inner, Grad):
            return cast(str, Laplacian(*inner.args)._latex(printer, exp))
        return super()._latex(printer, exp)


class Curl(Operator):
    word, takes, derivative = "curl", ((1,),), True

    def latex(self, *args: str) -> str:
        return rf"\nabla\times {args[0]}"


class Laplacian(Operator):
    word, takes, derivative = "laplacian", ((0, 1, 2),), True

    def latex(self, *args: str) -> str:
        return rf"\nabla^2 {args[0]}"


class Advect(Operator):
    word, takes, derivative = "advect", ((1,), (0, 1, 2)), True

    def latex(self, *args: str) -> str:
        return rf"\left({args[0]}\cdot\nabla\right) {args[1]}"


class Dot(Operator):
    word, takes = "dot", ((1, 2), (1, 2))

    @classmethod
    def result(cls, *ranks: int) -> int:
        return ranks[0] + ranks[1] - 2

    def latex(self, *args: str) -> str:
        return rf"{args[0]}\cdot {args[1]}"


class Cross(Operator):
    word, takes = "cross", ((1, 2), (1, 2))

    @classmethod
    def result(cls, *ranks: int) -> int:
        return sum(ranks) - 1

    def latex(self, *args: str) -> str:
        return rf"{args[0]}\times {args[1]}"


class Outer(Operator):
    word, takes = "outer", ((1,), (1,))

    @classmethod
    def result(cls, *ranks: int) -> int:
        return 2

    def latex(self, *args: str) -> str:
        return f"{args[0]}\\,{args[1]}"


class Ddot(Operator):
    word, takes = "ddot", ((2,), (2,))

    @classmethod
    def result(cls, *ranks: int) -> int:
        return 0

    def latex(self, *args: str) -> str:
        return f"{args[0]}:{args[1]}"


class Transpose(Operator):
    word, takes = "transpose", ((2,),)

    def latex(self, *args: str) -> str:
        return rf"{args[0]}^{{\mathsf T}}"


class Trace(Operator):
    word, takes = "trace", ((2,),)

    @classmethod
    def result(cls, *ranks: int) -> int:
        return 0

    def latex(self, *args: str) -> str:
        return rf"\operatorname{{tr}} {args[0]}"


class Norm(Operator):
    word, takes = "norm", ((1,),)

    @classmethod
    def result(cls, *ranks: int) -> int:
        return 0

    def latex(self, *args: str) -> str:
        return rf"\left|{args[0]}\right|"


class Multiplier(Operator):
    """A Fourier multiplier: its second argument is a function of k and omega."""

    word, takes = "multiplier", ((0, 1, 2), (0,))

    @classmethod
    def result(cls, *ranks: int) -> int:
        return ranks[0]

    def latex(self, *args: str) -> str:
        return rf"\left[{args[1]}\right] {args[0]}"


class Identity(AtomicExpr):  # type: ignore[misc]
    """The unit tensor."""

    is_commutative = True
    rank = 2

    def _sympystr(self, printer: Printer) -> str:
        return "identity"

    def _latex(self, printer: LatexPrinter, exp: str | None = None) -> str:
        return r"\mathsf{I}"


identity = Identity()


def partial_t(f: Any) -> Expr:
    """The partial time derivative of a scalar, vector or tensor."""
    return cast(Expr, PartialT(f))


def grad(f: Any) -> Expr:
    """The gradient of a scalar (a vector) or of a vector: (grad v)_ij = d_i v_j."""
    return cast(Expr, Grad(f))


def div(f: Any) -> Expr:
    """The divergence of a vector, or of a tensor over its first index."""
    return cast(Expr, Div(f))


def curl(v: Any) -> Expr:
    """The curl of a vector."""
    return cast(Expr, Curl(v))


def laplacian(f: Any) -> Expr:
    """The Laplacian of a scalar, vector or tensor."""
    return cast(Expr, Laplacian(f))


def advect(v: Any, f: Any) -> Expr:
    """The advective derivative (v . grad) f."""
    return cast(Expr, Advect(v, f))


def dot(a: Any, b: Any) -> Expr:
    """The inner product: a.b, a_i T_ij or T_ij b_j."""
    return cast(Expr, Dot(a, b))


def cross(a: Any, b: Any) -> Expr:
    """The vector product a x b; with a tensor (T x b)_ij = e_jkl T_ik b_l and (a x T)_ij = e_ikl a_k T_lj."""
    return cast(Expr, Cross(a, b))


def outer(a: Any, b: Any) -> Expr:
    """The outer product a_i b_j of two vectors."""
    return cast(Expr, Outer(a, b))


def ddot(a: Any, b: Any) -> Expr:
    """The double contraction A:B = A_ij B_ij of two tensors."""
    return cast(Expr, Ddot(a, b))


def transpose(t: Any) -> Expr:
    """The transpose of a tensor."""
    return cast(Expr, Transpose(t))


def trace(t: Any) -> Expr:
    """The trace of a tensor."""
    return cast(Expr, Trace(t))


def norm(v: Any) -> Expr:
    """The length |v| of a vector; smooth only where the background of v is not zero."""
    return cast(Expr, Norm(v))


def multiplier(f: Any, g: Any) -> Expr:
    """A Fourier multiplier: f times g(k, omega) in Fourier space.

    Parameters
    ----------
    f : expression
        What is multiplied: a scalar, vector or tensor.
    g : expression
        In ``plin.k_x``, ``plin.k_y``, ``plin.k_z``, ``plin.k_abs``, ``plin.omega`` and parameters, no fields.

    Raises
    ------
    DeclarationError
        When `g` holds a field.

    Examples
    --------
    >>> import plasmalin as plin
    >>> model = plin.FluidModel("closure", axes="x")
    >>> T = model.scalar("T", background="T_0")
    >>> plin.multiplier(T, -plin.k_abs)
    multiplier(T, -k_abs)
    """
    symbol = exact(g)
    if symbol.atoms(Field):
        raise DeclarationError(
            f"multiplier(..., {symbol}): the second argument depends on the wave only, "
            "it cannot hold a field"
        )
    return cast(Expr, Multiplier(f, symbol))


OPERATORS: dict[str, Any] = {
    f.__name__: f
    for f in (
        partial_t,
        grad,
        div,
        curl,
        laplacian,
        advect,
        dot,
        cross,
        outer,
        ddot,
        transpose,
        trace,
        norm,
        multiplier,
    )
}
"""The operators by the word that a law in text uses."""
