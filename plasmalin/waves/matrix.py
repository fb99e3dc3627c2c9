"""The wave matrix: rows are laws by component, columns are amplitudes."""

from __future__ import annotations

from collections.abc import Mapping
from contextlib import suppress
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING, Any, overload

from sympy import Expr, ImmutableDenseMatrix, Symbol

from ..declare.dimensions import Dimensions
from ..declare.forms import has_dimension, of_dimension
from ..declare.notation import paper
from ..declare.operators import WAVE_SYMBOLS, omega
from ..declare.units import dimension
from ..errors import DeclarationError, UnitError
from ..exact.sample import shared_modes
from ..linearize.linearized import LinearizedModel
from .amplitudes import Amplitude, Row
from .constraints import Preserved
from .derive import derive_relation
from .equation import WaveEquation, wave_equation
from .labels import Modes, modes_of
from .relation import Relation
from .response import Reduced, reduced
from .susceptibility import susceptibility

if TYPE_CHECKING:
    from ..check.convention import Convention
    from ..check.verdict import Verdict
    from ..roots.branches import Branches
    from ..roots.roots import Roots
    from ..roots.surfaces import Surfaces
    from ..study.remark import Advice


@dataclass(frozen=True, eq=False)
class WaveMatrix:
    """The first-order laws for plane waves: ``matrix * amplitudes = 0``.

    Attributes
    ----------
    linear : LinearizedModel
    k : tuple of Expr
        The wave vector along the model's axes.
    rows : tuple of Row
    columns : tuple of Amplitude
    entries : dict of (int, int) to Expr
        The entries that are not zero.
    constraints : tuple of Preserved
        Every component of the model's constraints, with the proof that the laws preserve it.

    Notes
    -----
    `roots`, `branches` and `advice` take numbers in the same way. ``values`` is a mapping from parameter names to numbers
    or arrays: plain numbers in the unit that the parameter declares (SI without one), or quantity objects with a unit;
    defaults and constants need not be repeated. Wave numbers are given by name, ``k=``, ``k_x=``, ``theta=`` ..., in rad/m
    (angles in rad). All of them raise

    - `ValuesError` for an unknown or missing name, a number that is not finite, shapes that do not broadcast;
    - `UnitError` when a quantity object has another dimension than its parameter;
    - `BackgroundError` when the values break a condition of the background.
    """

    linear: LinearizedModel
    k: tuple[Expr, ...]
    rows: tuple[Row, ...]
    columns: tuple[Amplitude, ...]
    entries: Mapping[tuple[int, int], Expr]
    constraints: tuple[Preserved, ...] = ()

    @property
    def omega(self) -> Symbol:
        """The frequency symbol."""
        return omega

    @property
    def amplitudes(self) -> tuple[Symbol, ...]:
        """The unknowns, in the order of the columns."""
        return tuple(c.symbol for c in self.columns)

    @property
    def wave_symbols(self) -> tuple[Symbol, ...]:
        """The symbols of the wave vector (k, or k_x, k_z, theta ...), sorted by name."""
        found = {s for c in self.k for s in c.free_symbols} - set(self.linear.symbols.values())
        return tuple(sorted(found, key=lambda s: s.name))

    @cached_property
    def dimensions(self) -> Dimensions:
        """The dimensions of the parameters, and of the wave's own symbols: components of k are in 1/m."""
        found = self.linear.dimensions
        return self._with_wave(found if found.active else Dimensions(found.declared, active=True))

    @property
    def all_dimensions(self) -> Dimensions:
        """`dimensions` with the laws' requirements, also where no unit is declared and they are not checked yet."""
        found = self.linear.dimensions
        return self.dimensions if found.active else self._with_wave(found)

    def _with_wave(self, found: Dimensions) -> Dimensions:
        per_meter = of_dimension(dimension(-1))
        for s in set(self.wave_symbols) & set(WAVE_SYMBOLS):
            found = found.declare(s.name, dimension(-1), check=False)
        for c in self.k:
            with suppress(UnitError):  # a component with a number in it, "k + 1", tells nothing
                needed = has_dimension("the wave vector", c, per_meter, "k")
                found = found.require(needed if c.free_symbols & set(self.wave_symbols) else ())
        return found

    @cached_property
    def matrix(self) -> ImmutableDenseMatrix:
        """The matrix, shape (rows, amplitudes)."""
        size = len(self.rows)
        return ImmutableDenseMatrix(size, size, lambda i, j: self.entries.get((int(i), int(j)), 0))

    @cached_property
    def relation(self) -> Relation:
        """The exact dispersion relation (computed when first asked for).

        Raises
        ------
        UndeterminedError
            When the determinant vanishes identically, naming the laws and unknowns involved.
        NonPolynomialError
            When omega enters other than in polynomials and their ratios.
        """
        return derive_relation(self)

    def by_row(self) -> list[dict[int, Expr]]:
        """The entries of every row by column."""
        made: list[dict[int, Expr]] = [{} for _ in self.rows]
        for (i, j), c in self.entries.items():
            made[i][j] = c
        return made

    @cached_property
    def forbidden_modes(self) -> int:
        """How many zero modes of the determinant violate the model's constraints."""
        if not self.constraints:
            return 0
        declared = [c.form for c in self.constraints]
        ((whole, allowed),) = shared_modes(self.by_row(), omega, [omega], [(), declared])
        return whole - allowed

    @cached_property
    def modes(self) -> Modes:
        """What labels the modes: wave, constraint, entropy or vortical."""
        return modes_of(self)

    def column(self, name: str) -> list[int]:
        """The columns of a field by its name, or of one component by its amplitude's name.

        Raises
        ------
        DeclarationError
            When there is no such field or amplitude.
        """
        found = [j for j, c in enumerate(self.columns) if name in (c.field.name, c.symbol.name)]
        if not found:
            known = ", ".join(dict.fromkeys(c.field.name for c in self.columns))
            raise DeclarationError(f"no field or amplitude '{name}'; the fields are {known}")
        return found

    def reduce(self, *fields: str) -> Reduced:
        """Eliminate all other unknowns: the dispersion tensor of the named fields.

        Parameters
        ----------
        *fields : str
            Names of fields or of single amplitudes, for example ``"E"``.

        Returns
        -------
        Reduced
            ``.matrix`` (exact, in lowest terms) times ``.amplitudes`` is zero; ``.laws`` names the rows that stay.

        Raises
        ------
        DeclarationError
            When a name is unknown.
        UndeterminedError
            When the other unknowns are not determined by the other laws.
        """
        return reduced(self, fields)

    def susceptibility(self, species: str, *fields: str) -> Reduced:
        """One species' part of the dispersion tensor, per unit field.

        Parameters
        ----------
        species : str
            The ending of its field names: "e" for n_e, v_e.
        *fields : str, optional
            The fields of the tensor; "E" or else "phi" by default.

        Returns
        -------
        Reduced
            Without coupling between species, the tensor ``reduce("E")`` is that of empty space plus the sum of these.

        Raises
        ------
        DeclarationError
            When no field ends in ``_species``.

        Examples
        --------
        >>> import plasmalin as plin
        >>> wave = plin.load_example("electronegative-dusty-edge").linearize().plane_wave("x")
        >>> wave.susceptibility("e", "phi").matrix[0, 0]
        -e**2*n_e0/T_e
        """
        return susceptibility(self, species, fields)

    def wave_equation(self, field: str) -> WaveEquation:
        """The one constant-coefficient partial differential equation that a field obeys.

        Parameters
        ----------
        field : str
            A scalar field, or one amplitude such as ``"v_e_x"``.

        Returns
        -------
        WaveEquation
            Holds only the factors of the relation that move this field.

        Raises
        ------
        DeclarationError
            When the name is unknown, or names a vector of several components.
        NonPolynomialError
            When the wave numbers do not enter as a polynomial.
        """
        return wave_equation(self, field)

    def roots(self, values: Mapping[Any, Any] | None = None, **waves: Any) -> Roots:
        """All roots omega for given numbers.

        Parameters
        ----------
        values : mapping of str to number or array, optional
            Parameter values; see the notes of `WaveMatrix`.
        zero_modes : bool, default False
            Keyword. Whether to keep the identically zero modes.
        workers : int or map-like callable, default 1
            Keyword.
        **waves : array_like
            The wave numbers by name, rad/m; everything broadcasts.

        Returns
        -------
        Roots
            Complex array, shape (..., degree), sorted by real part, then imaginary part, rad/s.

        Raises
        ------
        ValuesError, UnitError, BackgroundError
            As in the notes of `WaveMatrix`.

        Examples
        --------
        >>> import plasmalin as plin
        >>> wave = plin.load_example("xenon-iodine-plume").linearize().plane_wave("x")
        >>> wave.roots(k=300.0).shape
        (8,)
        """
        from ..roots.roots import find_roots

        return find_roots(self, values or {}, waves)

    @overload
    def branches(
        self, name: str, along: Any, values: Mapping[Any, Any] | None = None, **waves: Any
    ) -> Branches: ...

    @overload
    def branches(
        self,
        name: tuple[str, str],
        along: tuple[Any, Any],
        values: Mapping[Any, Any] | None = None,
        **waves: Any,
    ) -> Surfaces: ...

    def branches(
        self, name: Any, along: Any, values: Mapping[Any, Any] | None = None, **waves: Any
    ) -> Branches | Surfaces:
        """All branches omega along a wave number or a parameter, tracked through crossings.

        Parameters
        ----------
        name : str, or tuple of two
            What varies: a wave number or any parameter; two of them for a grid.
        along : array_like, shape (n,), or tuple of two
            Rad/m for a wave number, else in the unit of the parameter. For a grid both increase.
        values : mapping of str to number, optional
            A value of what varies is set aside.
        **waves : number
            The other wave numbers, by name.

        Returns
        -------
        Branches
            For two names `Surfaces`: labels over the grid, and the cells around which they permute.

        Raises
        ------
        ValuesError, UnitError, BackgroundError
            As `roots`; also when `along` is not one-dimensional.
        """
        from ..roots.surfaces import find_surfaces
        from ..roots.sweep import find_branches

        if isinstance(name, tuple | list):
            names = tuple(str(getattr(n, "name", n)) for n in name)
            return find_surfaces(self, names, along, values or {}, waves)
        return find_branches(self, getattr(name, "name", name), along, values or {}, waves)

    def advice(self, values: Mapping[Any, Any] | None = None, **waves: Any) -> Advice:
        """Where the fluid description is outside its range at these numbers, in words.

        What a species is (mass, charge, temperature, drift, gyration) is read from its laws and the background, not
        from names; what cannot be identified is said.

        Parameters
        ----------
        values : mapping of str to number or array, optional
            As for `roots`; over arrays the worst point counts.
        **waves : array_like
            The wave numbers by name, rad/m. What needs one that is not given is left out and said.

        Returns
        -------
        Advice
            A sequence of remarks, each with the number and the rule it rests on; prints as text.

        Raises
        ------
        ValuesError, UnitError, BackgroundError
            As `roots`, but for missing wave numbers.

        Examples
        --------
        >>> import plasmalin as plin
        >>> wave = plin.load_example("xenon-iodine-plume").linearize().plane_wave("x")
        >>> for remark in wave.advice(k=3e3).about("λ_D"):
        ...     print(f"{remark.subject} = {remark.number:.3f}")
        k λ_D, species e = 0.526
        """
        from ..study.advice import advise

        return advise(self, values or {}, waves)

    def check(
        self,
        claim: Any,
        *,
        where: Mapping[Any, Any] | None = None,
        under: Any = None,
        convention: Convention | None = None,
        values: Mapping[Any, Any] | None = None,
        budget_s: float = 30.0,
    ) -> Verdict:
        """Judge a dispersion relation that was derived by hand, in its author's own symbols.

        Parameters
        ----------
        claim : str, SymPy equation or expression, or small matrix
            A relation as it is typed in a paper, ``"omega^2 = omega_pe^2 + 3 k^2 v_te^2"``, or solved for ω or for k;
            a matrix of at most four rows whose determinant vanishes, as text ``"[[a, b], [c, d]]"``, nested list or
            SymPy matrix; a wave equation for one field, ``"∂_t² n_e + omega_pe² n_e = 3 v_te² ∂_x² n_e"``. An
            expression is set equal to zero. Text is read, never evaluated.
        where : mapping of str to str, number or expression, optional
            What the author's shorthands stand for, ``{"v_te": "sqrt(T_e/m_e)"}``; may use one another.
        under : mapping or list of str, optional
            The conditions that the author states: ``{"gamma_e": 3}``, ``["m_e/m_i << 1", "T_i = 0"]``.
        convention : Convention, optional
            Phase and units of the claim; exp(−iωt) and SI by default.
        values : mapping of str to number, optional
            Numbers, SI, at which the size of what a limit neglects is given.
        budget_s : float, default 30.0
            Processor time that the search for conditions and slips may take, s; what was not decided then is said.

        Returns
        -------
        Verdict
            ``.kind``, ``.agrees``, ``.conditions``, ``.slips``, ``.proof`` and ``.reading``; prints as a short note.

        Raises
        ------
        ReadError
            When a text cannot be read or can be read in two ways, with the place.
        DeclarationError
            When a name is unknown, a shorthand takes the name of a parameter, or the claim holds no wave.

        Examples
        --------
        >>> import plasmalin as plin
        >>> model = plin.FluidModel("sound", axes="x")
        >>> rho = model.scalar("rho", background="rho_0")
        >>> v = model.vector("v")
        >>> p_0 = model.parameter("p_0", positive=True)
        >>> _ = model.law("continuity", plin.partial_t(rho) + plin.div(rho * v))
        >>> _ = model.law("momentum", rho * plin.partial_t(v), -p_0 * plin.grad(rho / model.symbols["rho_0"]))
        >>> wave = model.linearize().plane_wave("x")
        >>> wave.check("omega^2 = k^2 c_s^2", where={"c_s": "sqrt(p_0/rho_0)"}).kind
        'identical'
        """
        from ..check.judge import judge

        return judge(self, claim, where, under, convention, values, budget_s)

    def __str__(self) -> str:
        lines = [f"{self.linear.title}: plane waves, k = ({', '.join(paper(c) for c in self.k)})"]
        for i, row in enumerate(self.rows):
            terms = [
                f"[{paper(self.entries[i, j])}] {c.symbol.name}"
                for j, c in enumerate(self.columns)
                if (i, j) in self.entries
            ]
            lines.append(f"  {row}: {' + '.join(terms)} = 0")
        return "\n".join(lines)

    def __repr__(self) -> str:
        size = len(self.rows)
        return f"<WaveMatrix {self.linear.title!r}: {size} x {size}, {len(self.entries)} entries>"

    def _repr_latex_(self) -> str | None:
        from sympy import latex

        names = r" \\ ".join(c._latex() for c in self.columns)
        text = rf"{latex(self.matrix)} \begin{{pmatrix}} {names} \end{{pmatrix}} = 0"
        return f"$\\displaystyle {text}$" if len(text) < 4000 else None
