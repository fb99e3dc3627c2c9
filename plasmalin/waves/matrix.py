"""The wave matrix: rows are laws by component, columns are amplitudes."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING, Any, overload

from sympy import Expr, ImmutableDenseMatrix, Symbol, cos, expand, sin

from ..declare.fields import Field, decorated
from ..declare.notation import paper
from ..declare.operators import WAVE_SYMBOLS, Advect, Div, omega
from ..declare.reader import read_expression
from ..errors import BackgroundError, DeclarationError, UndeterminedError
from ..linearize.ledger import KEPT
from ..linearize.linearized import LinearizedModel, symmetric_law
from .equation import WaveEquation, wave_equation
from .lowering import Index, Wave, indices, lower
from .relation import Relation, derive_relation
from .response import Reduced, reduced
from .susceptibility import susceptibility

if TYPE_CHECKING:
    from ..roots.branches import Branches
    from ..roots.roots import Roots
    from ..roots.surfaces import Surfaces


@dataclass(frozen=True)
class Row:
    """One component equation: the law and the component's name ("" for a scalar law)."""

    law: str
    component: str

    def __str__(self) -> str:
        return f"{self.law}, {self.component}" if self.component else self.law


@dataclass(frozen=True)
class Amplitude:
    """One unknown: the field, the component's name ("" for a scalar) and its symbol."""

    field: Field
    component: str
    symbol: Symbol

    def _latex(self) -> str:
        suffix = f",{self.component}" if self.component else ""
        plain = decorated(Field(self.field.name, 0, self.field.background))
        head, _, low = plain.partition("_")
        low = low.strip("{}") + suffix
        return rf"\hat{{{head}}}_{{{low.lstrip(',')}}}" if low else rf"\hat{{{head}}}"


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
    """

    linear: LinearizedModel
    k: tuple[Expr, ...]
    rows: tuple[Row, ...]
    columns: tuple[Amplitude, ...]
    entries: Mapping[tuple[int, int], Expr]

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
        return susceptibility(self, species, fields or _default_fields(self))

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
            Parameter values, SI; defaults and constants need not be repeated.
        zero_modes : bool, default False
            Keyword. Whether to keep the identically zero modes.
        workers : int or map-like callable, default 1
            Keyword.
        **waves : array_like
            The wave numbers by name (k=, k_x=, theta= ...), rad/m; everything broadcasts.

        Returns
        -------
        Roots
            Complex array, shape (..., degree), sorted by real part, then imaginary part, rad/s.

        Raises
        ------
        ValuesError
            For an unknown or missing name, a number that is not finite, shapes that do not broadcast.
        BackgroundError
            When the values break a condition of the background.

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
            For a grid both increase.
        values : mapping of str to number, optional
        **waves : number
            The other wave numbers, by name.

        Returns
        -------
        Branches
            For two names `Surfaces`: labels over the grid, and the cells around which they permute.

        Raises
        ------
        ValuesError
            As `roots`; also when `along` is not one-dimensional.
        """
        from ..roots.branches import find_branches
        from ..roots.surfaces import find_surfaces

        if not isinstance(name, str):
            return find_surfaces(self, tuple(name), tuple(along), values or {}, waves)
        return find_branches(self, name, along, values or {}, waves)

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


def plane_wave(linear: LinearizedModel, direction: Any, angle: str | None) -> WaveMatrix:
    """Lower a linearized model for a wave vector; see `LinearizedModel.plane_wave`."""
    k = wave_vector(linear, direction, angle)
    _refuse_sheared_flow(linear, k)
    columns = _amplitudes(linear)
    symbols = {(c.field.name, _index(c, linear.axes)): c.symbol for c in columns}

    def amplitude(field: Field, index: Index) -> Symbol:
        return symbols[field.name, tuple(sorted(index)) if field.symmetric else index]

    wave = Wave(linear.axes, k, amplitude)
    number = {c.symbol: j for j, c in enumerate(columns)}
    rows: list[Row] = []
    entries: dict[tuple[int, int], Expr] = {}
    for row, form in _equations(linear, wave):
        entries |= {(len(rows), number[s]): c for s, c in form.items() if s is not None and c != 0}
        rows.append(row)
    if len(rows) != len(columns):
        raise UndeterminedError(f"{len(rows)} component equations for {len(columns)} unknowns")
    return WaveMatrix(linear, k, tuple(rows), columns, entries)


def _default_fields(wave: WaveMatrix) -> tuple[str, ...]:
    """E, or phi, or whatever single field belongs to no species."""
    names = {c.field.name for c in wave.columns}
    for usual in ("E", "phi"):
        if usual in names:
            return (usual,)
    raise DeclarationError("name the fields of the tensor: there is neither 'E' nor 'phi'")


def _refuse_sheared_flow(linear: LinearizedModel, k: tuple[Expr, ...]) -> None:
    """A flow whose part along k changes with position turns the wave vector: no plane wave is a solution."""
    for name, field in linear.fields.items():
        if field.rank != 1 or field.gradient == 0 or not _advects(linear, name):
            continue
        size = range(len(k))
        changes = (sum(field.gradient.entry((i, j)) * k[j] for j in size) for i in size)
        if any(expand(c) != 0 for c in changes):
            raise BackgroundError(
                f"the flow '{name}' along k changes with position, so that a plane wave does not exist; "
                "choose a wave vector across the sheared component, or leave the gradient out"
            )


def _advects(linear: LinearizedModel, name: str) -> bool:
    nodes = (n for law in linear.laws.values() for n in law.residual.atoms(Advect, Div))
    return any(f.name == name for n in nodes for f in n.args[0].atoms(Field))


def _index(column: Amplitude, axes: str) -> Index:
    return tuple(axes.index(a) for a in column.component)


def _amplitudes(linear: LinearizedModel) -> tuple[Amplitude, ...]:
    found = []
    for field in linear.fields.values():
        for index in indices(field.rank, len(linear.axes)):
            if field.symmetric and index != tuple(sorted(index)):
                continue
            component = "".join(linear.axes[i] for i in index)
            name = f"{field.name}_{component}" if component else field.name
            found.append(Amplitude(field, component, Symbol(name)))
    return tuple(found)


def _equations(linear: LinearizedModel, wave: Wave) -> Any:
    """Each component equation with its linear form (zero rows of a symmetric law left out)."""
    from sympy import Add

    for law in linear.laws.values():
        kept = [p for p in linear.ledger if p.law == law.name and p.fate == KEPT]
        residual = Add(*(p.value if p.side == "left" else -p.value for p in kept))
        form = lower(residual, wave)
        upper_only = law.rank == 2 and symmetric_law(law)
        for index in indices(law.rank, wave.size):
            if not (upper_only and index != tuple(sorted(index))):
                component = "".join(wave.axes[i] for i in index)
                yield Row(law.name, component), form.get(index, {})


def wave_vector(linear: LinearizedModel, direction: Any, angle: str | None) -> tuple[Expr, ...]:
    """The wave vector's components along the model's axes."""
    axes = linear.axes
    if (direction is None) == (angle is None):
        raise DeclarationError(
            'give either a direction ("x" or one entry per axis) or angle="theta"'
        )
    if angle is not None:
        if not {"x", "z"} <= set(axes):
            raise DeclarationError(f"angle= needs the axes x and z; the model has '{axes}'")
        k, theta = _wave_symbol(linear, "k"), _wave_symbol(linear, angle)
        along = {"x": k * sin(theta), "y": 0 * k, "z": k * cos(theta)}
        return tuple(along[a] for a in axes)
    if isinstance(direction, str):
        if direction not in tuple(axes):
            raise DeclarationError(
                f"direction {direction!r} is not an axis of the model ('{axes}')"
            )
        k = _wave_symbol(linear, "k")
        return tuple(k if a == direction else 0 * k for a in axes)
    if not isinstance(direction, tuple | list) or len(direction) != len(axes):
        raise DeclarationError(
            f"direction {direction!r} does not fit the axes '{axes}'; give one entry per axis"
        )
    made = tuple(_entry(linear, entry) for entry in direction)
    if all(c == 0 for c in made):
        raise DeclarationError("the wave vector is zero; give at least one component")
    return made


def _entry(linear: LinearizedModel, entry: Any) -> Expr:
    from sympy import Expr as AnyExpr
    from sympy import sympify

    names: dict[str, Any] = {**linear.symbols, **{s.name: s for s in WAVE_SYMBOLS}}
    if isinstance(entry, str):
        return read_expression(entry, names, unknown=lambda name: Symbol(name, real=True))
    made = sympify(entry, strict=True)
    if not isinstance(made, AnyExpr):
        raise DeclarationError(f"{entry!r} is not a component of a wave vector")
    return made


def _wave_symbol(linear: LinearizedModel, name: str) -> Symbol:
    if name in linear.symbols or not name.isidentifier():
        raise DeclarationError(
            f"'{name}' is a parameter or not a name; name the wave number otherwise, e.g. plane_wave(('q', 0, 0))"
        )
    return Symbol(name, real=True)
