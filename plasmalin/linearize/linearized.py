"""The linearized model: equations with tildes, ledger, background."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from functools import cached_property
from typing import TYPE_CHECKING, Any, cast

from sympy import Add, Eq, Expr, Symbol

from ..declare.dimensions import Dimensions
from ..declare.fields import Field, Perturbation
from ..declare.law import Law
from ..declare.model import FluidModel
from ..declare.notation import equation_table, latex, paper
from ..declare.units import Unit
from ..errors import DeclarationError, UndeterminedError
from ..exact.matching import maximum_matching
from .background import Equilibrium, balance, conditions
from .ledger import KEPT, Ledger, entries

if TYPE_CHECKING:
    from ..check.verdict import Verdict
    from ..waves.matrix import WaveMatrix
    from .audit import Audit


class Equations(dict[str, Eq]):
    """Linearized laws by name; prints in vector form."""

    def __init__(self, given: Mapping[str, Eq], axes: str) -> None:
        super().__init__(given)
        self._axes = axes

    def __str__(self) -> str:
        width = max(map(len, self), default=0)
        return "\n".join(
            f"{name:<{width}}   {paper(eq.lhs, self._axes)} = {paper(eq.rhs, self._axes)}"
            for name, eq in self.items()
        )

    def latex(self, name: str) -> str:
        """One equation in LaTeX, without dollar signs."""
        return f"{latex(self[name].lhs, self._axes)} = {latex(self[name].rhs, self._axes)}"

    def _repr_html_(self) -> str:
        return equation_table("", {name: self.latex(name) for name in self})


@dataclass(frozen=True, eq=False)
class LinearizedModel:
    """The first-order laws of a model, with the account of every term.

    Attributes
    ----------
    title, axes : str
    fields : mapping of str to Field
    laws : mapping of str to Law
        The nonlinear laws as declared.
    symbols : mapping of str to Symbol
        The parameters by name.
    defaults : mapping of str to float
        Default numbers, each in the unit that its parameter declares (SI without one).
    units : mapping of str to Unit
        The declared units of parameters and fields.
    dimensions : Dimensions
        What is declared, and what the laws require of the rest.
    ledger : Ledger
        Every piece of every term: order, fate, reason.
    background : Equilibrium
        The equilibrium in words.
    redundant : mapping of str to Law
        The nonlinear constraints as declared.
    vectors : mapping of str to Expr
        The vector parameters by name.
    """

    title: str
    axes: str
    fields: Mapping[str, Field]
    laws: Mapping[str, Law]
    symbols: Mapping[str, Symbol]
    defaults: Mapping[str, float]
    units: Mapping[str, Unit]
    dimensions: Dimensions
    ledger: Ledger
    background: Equilibrium
    redundant: Mapping[str, Law] = field(default_factory=dict)
    vectors: Mapping[str, Expr] = field(default_factory=dict)

    @cached_property
    def equations(self) -> Equations:
        """The linearized laws by name, in vector form, first-order fields with a tilde."""
        return self._first_order(self.laws)

    @cached_property
    def constraints(self) -> Equations:
        """The linearized constraints by name, in vector form."""
        return self._first_order(self.redundant)

    def _first_order(self, names: Mapping[str, Law]) -> Equations:
        sides = {name: (self._side(name, "left"), self._side(name, "right")) for name in names}
        made = {name: cast(Eq, Eq(a, b, evaluate=False)) for name, (a, b) in sides.items()}
        return Equations(made, self.axes)

    def _side(self, law: str, side: str) -> Expr:
        kept = (p.value for p in self.ledger if p.law == law and p.side == side and p.fate == KEPT)
        return Add(*kept)

    @property
    def conditions(self) -> tuple[Eq, ...]:
        """What the background must satisfy, e.g. ``Eq(e*(n_e0 - n_i0), 0)``."""
        return conditions(self.background.balances)

    def plane_wave(self, direction: Any = None, *, angle: Any = None) -> WaveMatrix:
        """Put in plane waves exp[i(k.x − omega t)].

        Parameters
        ----------
        direction : str or tuple
            An axis ("x": wave number k along it), or one entry per axis: names, numbers or expressions,
            ``("k_x", 0, "k_z")``.
        angle : str, number or expression, optional
            Instead of `direction`: the angle θ from z in the x-z plane, k (sin θ, 0, cos θ), by name ("theta") or by
            value, rad.

        Returns
        -------
        WaveMatrix

        Raises
        ------
        DeclarationError
            When the direction does not fit the model's axes, or a name is a parameter already.

        Examples
        --------
        >>> import plasmalin as plin
        >>> model = plin.FluidModel("sound", axes="x")
        >>> rho = model.scalar("rho", background="rho_0")
        >>> v = model.vector("v")
        >>> p_0 = model.parameter("p_0")
        >>> _ = model.law("continuity", plin.partial_t(rho) + plin.div(rho * v))
        >>> _ = model.law("momentum", rho * plin.partial_t(v), -p_0 * plin.grad(rho))
        >>> wave = model.linearize().plane_wave("x")
        """
        from ..waves.plane import plane_wave

        return plane_wave(self, direction, angle)

    def check(self, law: str, claim: Any, where: Mapping[Any, Any] | None = None) -> Verdict:
        """Judge a linearized law that was derived by hand.

        Parameters
        ----------
        law : str
            The law's name; "momentum, x" for one component of a vector law.
        claim : str or SymPy expression or equation
            The linearized law. The name of a field is its first-order part, ``n_e`` for ñ_e; backgrounds are written
            by their parameters. In text, as in ``"m_e n_0 ∂_t v_e = e n_0 grad(phi) - T_e grad(n_e)"``, vectors may
            be written by component, ``v_e_x`` and ``∂_x phi``.
        where : mapping of str to str or expression, optional
            Shorthands of the claim, such as ``{"c_s": "sqrt(T_e/m_i)"}``.

        Returns
        -------
        Verdict
            ``identical`` up to a factor free of the wave and modulo the background's conditions, else ``differs``
            with the wrong, missing and superfluous terms.

        Raises
        ------
        DeclarationError
            When there is no such law, a name is unknown, or a term is not of a linear law.
        ReadError
            When a text cannot be read.
        RankError
            When ranks do not fit.

        Examples
        --------
        >>> import plasmalin as plin
        >>> linear = plin.load_example("electronegative-dusty-edge").linearize()
        >>> name = next(iter(linear.laws))
        >>> linear.check(name, str(linear.laws[name])).kind
        'differs'
        """
        from ..check.laws import check_law

        return check_law(self, law, claim, where)

    def audit(self, *, seed: int = 0) -> Audit:
        """Check the linearization by an independent numerical path.

        The nonlinear laws and constraints are evaluated as declared on a periodic Fourier grid for small plane waves, and
        compared with their linear forms (the rows of the wave matrix); the remainder must fall as the square of the
        amplitude. A background with a gradient is affine in position, and all is compared at one place.

        Parameters
        ----------
        seed : int, default 0
            Seed of the random parameters, wave vectors and amplitudes.

        Returns
        -------
        Audit
            Prints as a table; ``.passed`` tells the outcome.

        Raises
        ------
        ValuesError
            When the seed is not a whole number from 0.
        BackgroundError
            When flows change along every axis, so that there is no plane wave.
        """
        from ..waves.plane import lowered, wave_vector
        from .audit import audit

        return audit(self, lambda k: lowered(self, wave_vector(self, k, None)), seed=seed)

    def report(self) -> str:
        """Equations, background and ledger as plain text."""
        redundant = ["Constraints", str(self.constraints), ""] if self.redundant else []
        parts = [
            self.title,
            "",
            str(self.equations),
            "",
            *redundant,
            str(self.background),
            "",
            str(self.ledger),
        ]
        return "\n".join(parts)

    def __str__(self) -> str:
        return f"{self.title}\n{self.equations}"

    def __repr__(self) -> str:
        return f"<LinearizedModel {self.title!r}: {len(self.laws)} laws, {len(self.fields)} fields>"

    def _repr_html_(self) -> str:
        return equation_table(self.title, {n: self.equations.latex(n) for n in self.equations})


def linearize(model: FluidModel, assume: tuple[str, ...] = ()) -> LinearizedModel:
    """Linearize a model; see `FluidModel.linearize`."""
    laws, redundant = model.laws, model.constraints
    if not laws:
        raise UndeterminedError("the model has no laws; add them with model.law(name, lhs, rhs)")
    for name in assume:
        if name not in laws and name not in redundant:
            raise DeclarationError(
                f"assume: no law '{name}'; there are: {', '.join([*laws, *redundant])}"
            )
    pieces, balances = [], []
    for law in (*laws.values(), *redundant.values()):
        assumed = law.name in assume
        kind = "law" if law.name in laws else "constraint"
        ledger = Ledger(list(entries(law, assumed)), model.axes)
        balances.append(balance(law, ledger, assumed, len(model.axes), kind))
        pieces += list(ledger)
    whole = Ledger(pieces, model.axes)
    _check_determined(model.fields, laws, whole, model.axes)
    for name in redundant:
        if not _unknowns(whole, name):
            raise UndeterminedError(
                f"constraint '{name}' has no first-order part on this background; leave it out"
            )
    background = Equilibrium(tuple(balances), model.fields, model.axes, laws)
    return LinearizedModel(
        model.title,
        model.axes,
        model.fields,
        laws,
        model.symbols,
        model.values,
        model.units,
        model.dimensions,
        whole,
        background,
        redundant,
        model.vector_parameters,
    )


def entry_count(rank: int, size: int, symmetric: bool = False) -> int:
    """How many components something of a rank has."""
    return size * (size + 1) // 2 if rank == 2 and symmetric else size**rank


def _check_determined(
    fields: Mapping[str, Field], laws: Mapping[str, Law], ledger: Ledger, axes: str
) -> None:
    """As many component equations as unknown components, each unknown determined by some law."""
    occurs = {name: _unknowns(ledger, name) for name in laws}
    for name, found in occurs.items():
        if not found:
            raise UndeterminedError(
                f"law '{name}' has no first-order part on this background; leave it out or change the background"
            )
    rows = [n for n, law in laws.items() for _ in range(_equation_count(law, axes))]
    columns = [
        n for n, f in fields.items() for _ in range(entry_count(f.rank, len(axes), f.symmetric))
    ]
    pairs = [(i, j) for i, r in enumerate(rows) for j, c in enumerate(columns) if c in occurs[r]]
    matched = maximum_matching(pairs, len(rows), len(columns))
    count = f"{len(rows)} component equations for {len(columns)} unknown components"
    free = sorted({columns[j] for j in range(len(columns)) if j not in matched.values()})
    if free:
        raise UndeterminedError(
            f"{count}: nothing determines {', '.join(repr(n) for n in free)}; add a law that holds it or drop the field"
        )
    spare = sorted({rows[i] for i in range(len(rows)) if i not in matched})
    if spare:
        raise UndeterminedError(
            f"{count}: law {', '.join(repr(n) for n in spare)} is one too many; "
            "leave out what follows from the other laws or declare the missing field"
        )


def _equation_count(law: Law, axes: str) -> int:
    return entry_count(law.rank, len(axes), law.rank == 2 and symmetric_law(law))


def symmetric_law(law: Law) -> bool:
    """Whether a rank-2 law is for a symmetric tensor: its fields of rank 2 are all symmetric."""
    tensors = [f for f in law.residual.atoms(Field) if f.rank == 2]
    return bool(tensors) and all(f.symmetric for f in tensors)


def _unknowns(ledger: Ledger, law: str) -> set[str]:
    kept = (p.value for p in ledger if p.law == law and p.fate == KEPT)
    return {x.field.name for value in kept for x in value.atoms(Perturbation)}
