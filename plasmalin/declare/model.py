"""The user's plasma: fields, parameters and nonlinear laws."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from contextlib import contextmanager
from dataclasses import dataclass, replace
from fractions import Fraction
from typing import TYPE_CHECKING, Any

import numpy as np
from sympy import Add, Equality, Expr, Float, Rational, S, Symbol, Tuple, expand

from ..errors import DeclarationError, RankError, UnitError
from .constants import UNITS, codata
from .dimensions import Dimensions
from .fields import AXES, Components, Field, FieldAtom, components, exact
from .forms import has_dimension, of_dimension, per_length, requirements
from .notation import equation_table, latex, law_text, paper
from .operators import (
    OPERATORS,
    WAVE_SYMBOLS,
    WORDS,
    Cross,
    Curl,
    Multiplier,
    Operator,
    identity,
    rank_of,
)
from .quantities import plain_number
from .reader import read_expression, read_law
from .role import Role
from .units import NONE, Unit, read_unit

if TYPE_CHECKING:
    from ..linearize.linearized import LinearizedModel

RESERVED = {s.name for s in WAVE_SYMBOLS} | {"i", "identity", "components", "sqrt", "exp"}


@dataclass(frozen=True)
class Law:
    """One nonlinear law, ``lhs = rhs``, of rank 0, 1 or 2."""

    name: str
    lhs: Expr
    rhs: Expr
    rank: int
    role: Role | None = None
    """What it is for, where it is a ready law."""

    @property
    def residual(self) -> Expr:
        return self.lhs - self.rhs

    def __str__(self) -> str:
        return f"{law_text(self.lhs)} = {law_text(self.rhs)}"

    def paper(self, axes: str = "") -> str:
        """The law on one line, as a paper prints it."""
        return f"{paper(self.lhs, axes)} = {paper(self.rhs, axes)}"

    def latex(self, axes: str = "") -> str:
        """The law in LaTeX, without dollar signs."""
        return f"{latex(self.lhs, axes)} = {latex(self.rhs, axes)}"

    def _repr_latex_(self) -> str:
        return f"$\\displaystyle {self.latex()}$"


@dataclass(frozen=True)
class Parameter:
    """A declared parameter: its symbol, its default number (in its unit) and whether it was only implied."""

    symbol: Symbol
    value: float | None = None
    implied: bool = False


class FluidModel:
    """A set of nonlinear fluid laws for one plasma.

    Parameters
    ----------
    title : str
        What the model describes, in words.
    axes : str, default "xyz"
        The components that a vector has: "x", "xz", "xyz" or another selection in this order.

    Raises
    ------
    DeclarationError
        When the axes are not a selection of x, y, z in order.

    Examples
    --------
    >>> import plasmalin as plin
    >>> model = plin.FluidModel("cold electrons", axes="x")
    >>> n = model.scalar("n_e", background="n_0")
    >>> v = model.vector("v_e")
    >>> law = model.law("continuity", plin.partial_t(n) + plin.div(n * v))
    >>> print(law)
    partial_t(n_e) + div(n_e*v_e) = 0
    """

    def __init__(self, title: str, axes: str = "xyz") -> None:
        described: tuple[Any, Any] = (title, axes)
        if not all(isinstance(text, str) for text in described):
            raise DeclarationError(f"title={title!r} and axes={axes!r} are to be texts")
        if not axes or "".join(a for a in AXES if a in axes) != axes:
            raise DeclarationError(
                f"axes={axes!r}: give 'x', 'xz', 'xyz' or another selection of x, y, z in order"
            )
        self.title, self.axes = title, axes
        self._fields: dict[str, Field] = {}
        self._parameters: dict[str, Parameter] = {}
        self._vectors: dict[str, Expr] = {}
        self._laws: dict[str, Law] = {}
        self._constraints: dict[str, Law] = {}
        self._units: dict[str, Unit] = {}
        self._dimensions = Dimensions({})

    def __str__(self) -> str:
        laws, redundant = self.laws, self.constraints
        lines = [self.title, *(f"  {n}: {law.paper(self.axes)}" for n, law in laws.items())]
        lines += [f"  {n}: {law.paper(self.axes)}  (constraint)" for n, law in redundant.items()]
        return "\n".join(lines)

    def _repr_html_(self) -> str:
        return equation_table(
            self.title,
            {n: law.latex(self.axes) for n, law in {**self.laws, **self.constraints}.items()},
        )

    def __repr__(self) -> str:
        return (
            f"<FluidModel {self.title!r}: axes {self.axes}, {len(self._fields)} fields, "
            f"{len(self._laws)} laws>"
        )

    # What has been declared --------------------------------------------------------------------

    @property
    def fields(self) -> dict[str, Field]:
        """The fields by name, in the order of declaration."""
        return dict(self._fields)

    @property
    def laws(self) -> dict[str, Law]:
        """The laws by name, in the order of declaration."""
        return {name: self._current_law(law) for name, law in self._laws.items()}

    @property
    def constraints(self) -> dict[str, Law]:
        """The redundant laws by name, in the order of declaration."""
        return {name: self._current_law(law) for name, law in self._constraints.items()}

    @property
    def symbols(self) -> dict[str, Symbol]:
        """The parameters' symbols by name."""
        return {name: p.symbol for name, p in self._parameters.items()}

    @property
    def values(self) -> dict[str, float]:
        """The default numbers by parameter name, constants of nature among them.

        Each is in the unit that its parameter declares (SI where none is declared), just as the numbers that
        `roots` and `branches` take.
        """
        return {n: p.value for n, p in self._parameters.items() if p.value is not None}

    @property
    def units(self) -> dict[str, Unit]:
        """The declared units of fields and parameters by name, those of constants of nature among them."""
        return dict(self._units)

    @property
    def dimensions(self) -> Dimensions:
        """The dimensions that are declared, and those that the laws require."""
        return self._dimensions

    @property
    def vector_parameters(self) -> dict[str, Expr]:
        """The vector parameters by name."""
        return dict(self._vectors)

    # Fields ------------------------------------------------------------------------------------

    def scalar(
        self,
        name: str,
        background: Any = 0,
        gradient: Any = None,
        unit: str | None = None,
        latex: str | None = None,
    ) -> Field:
        """Declare a scalar field.

        Parameters
        ----------
        name : str
            Any identifier; E, N, S, I, beta, gamma, lambda are ordinary names.
        background : 0, str or expression, default 0
            The zeroth-order value. A name that is not yet a parameter becomes one.
        gradient : tuple, optional
            The uniform gradient of the background in the local approximation, one entry per axis. What such terms
            give depends on the chosen variables at order 1/kL: with log n as the field an exponential profile is exact.
        unit : str, optional
            Such as "m**-3", "kg m/s**2", "eV", "1". With it laws are checked term by term; a background that is a
            number, or a name that declares no unit, is in this unit.
        latex : str, optional
            How to print the name in LaTeX.

        Returns
        -------
        Field
            With ``.background`` and ``.perturbation``.

        Raises
        ------
        DeclarationError
            When the name is taken, or the background holds a field.
        UnitError
            When the unit cannot be read, or the background has another.
        """
        name = self._new_name(name)
        value, slope = self._value(background), self._vector(name, gradient, "gradient")
        return self._declare(Field(name, 0, value, slope, latex_name=latex), unit)

    def vector(
        self,
        name: str,
        background: Any = 0,
        gradient: Any = None,
        unit: str | None = None,
        latex: str | None = None,
    ) -> Field:
        """Declare a vector field.

        Parameters
        ----------
        name : str
        background : 0 or tuple, default 0
            One entry per axis of the model, each 0, a name or an expression in parameters.
        gradient : tuple of tuples, optional
            The uniform gradient d_i v_j of the background: one row per direction i of change. A wave for which the
            flow along k changes does not exist; `plane_wave` refuses it.
        unit : str, optional
            As in `scalar`.
        latex : str, optional
            How to print the name in LaTeX (it is set bold).

        Returns
        -------
        Field

        Raises
        ------
        DeclarationError
            When the name is taken, or the background does not fit the axes.
        UnitError
            As in `scalar`.
        """
        name = self._new_name(name)
        value, slope = self._vector(name, background), self._tensor(name, gradient, "gradient")
        return self._declare(Field(name, 1, value, slope, latex_name=latex), unit)

    def tensor(
        self,
        name: str,
        background: Any = 0,
        *,
        symmetric: bool = True,
        unit: str | None = None,
        latex: str | None = None,
    ) -> Field:
        """Declare a rank-2 tensor field.

        Parameters
        ----------
        name : str
        background : 0 or tuple of tuples, default 0
            One row per axis; entries as in `scalar`.
        symmetric : bool, default True
            Whether the tensor equals its transpose: six unknowns in three axes instead of nine.
        unit : str, optional
            As in `scalar`.
        latex : str, optional

        Returns
        -------
        Field

        Raises
        ------
        DeclarationError
            When the name is taken, or the background does not fit the axes or the symmetry.
        UnitError
            As in `scalar`.
        """
        name = self._new_name(name)
        value = self._tensor(name, background)
        if symmetric and isinstance(value, Components):
            size = range(len(self.axes))
            if any(value.entry((i, j)) != value.entry((j, i)) for i in size for j in size):
                raise DeclarationError(f"tensor '{name}': the background is not symmetric")
        return self._declare(Field(name, 2, value, symmetric=symmetric, latex_name=latex), unit)

    def _declare(self, field: Field, unit: str | None) -> Field:
        if not isinstance(field.latex_name, str | None):
            raise DeclarationError(f"'{field.name}': latex={field.latex_name!r} is not a text")
        with self._units_as_before():
            if unit is not None:
                field = self._in_unit(field, read_unit(unit))
            mine = {field.name: Fraction(1)}
            where, named = f"field '{field.name}'", f"the field {field.name}"
            slope = has_dimension(
                where, field.gradient, per_length(mine), f"the gradient of {named}"
            )
            self._dimensions = self._dimensions.require(
                (*has_dimension(where, field.background, mine, named), *slope)
            )
        self._fields[field.name] = field
        return field

    # Units -------------------------------------------------------------------------------------

    @contextmanager
    def _units_as_before(self) -> Iterator[None]:
        """Takes back the units of a declaration that fails."""
        before = self._dimensions, dict(self._units)
        try:
            yield
        except UnitError:
            self._dimensions, self._units = before
            raise

    def _in_unit(self, field: Field, unit: Unit) -> Field:
        """A field whose numbers are in its unit, and so are the names that declare no unit of their own."""
        args = list(field.__getnewargs__())
        for place, own in ((2, unit), (3, read_unit(f"({unit})/m"))):
            args[place] = self._numbers_in(own, field.name, args[place])
        self._set_unit(field.name, unit)
        return Field(*args)

    def _numbers_in(self, unit: Unit, owner: str, value: Expr) -> Expr:
        if isinstance(value, Components | Tuple):
            return value.func(*(self._numbers_in(unit, owner, a) for a in value.args))
        factor, rest = value.as_coeff_Mul()
        if rest == 1:
            return factor * Rational(unit.scale.numerator, unit.scale.denominator)
        if isinstance(rest, Symbol) and rest.name not in self._units:
            self._name_in(unit, owner, rest.name)
        return value

    def _name_in(self, unit: Unit, owner: str, name: str) -> None:
        if self._parameters[name].implied:
            self._set_unit(name, unit)
        elif unit.scale != 1:
            raise UnitError(
                f"'{owner}' is in {unit}, but '{name}', of its background, declares no unit and so counts in SI; "
                f"declare it first: model.parameter({name!r}, unit={unit.text!r})"
            )

    def _set_unit(self, name: str, unit: Unit, *, check: bool = True) -> None:
        self._dimensions = self._dimensions.declare(name, unit.dimension, check=check)
        self._units[name] = unit

    def _new_name(self, name: Any) -> str:
        if not isinstance(name, str) or not name.isidentifier() or name.startswith("_"):
            raise DeclarationError(
                f"{name!r} is not a name: use letters, digits and _, starting with a letter"
            )
        if name in RESERVED or name in OPERATORS:
            raise DeclarationError(f"the name '{name}' is reserved; choose another")
        if name in self._fields:
            raise DeclarationError(f"a field '{name}' is declared already; choose another name")
        if name in self._parameters or name in self._vectors:
            raise DeclarationError(f"a parameter '{name}' is declared already; choose another name")
        return name

    def _value(self, given: Any) -> Expr:
        """A background or a component: 0, a name, a text or an expression in parameters."""
        if isinstance(given, str):
            return read_expression(given, self._names(), unknown=self._imply)
        value = self._canonical(exact(given))
        if value.atoms(FieldAtom):
            raise DeclarationError(f"the background '{value}' holds a field; use parameters only")
        if rank_of(value) > 0:
            raise RankError(f"the background '{value}' is not a scalar; give one entry per axis")
        return value

    def _vector(self, name: str, given: Any, what: str = "background") -> Expr:
        given = given.args if isinstance(given, Components) else _listed(given)
        if _nothing(given):
            return S.Zero
        if not _sequence(given) or len(given) != len(self.axes):
            raise DeclarationError(
                f"'{name}': the {what} {given!r} does not fit the axes '{self.axes}'; "
                f"give 0 or a tuple with {len(self.axes)} entries"
            )
        return components(*(self._value(entry) for entry in given))

    def _tensor(self, name: str, given: Any, what: str = "background") -> Expr:
        if isinstance(given, Components) and given.rank == 2:
            given = tuple(row.args for row in given.args)
        given = _listed(given)
        if _nothing(given):
            return S.Zero
        size = len(self.axes)
        if not _sequence(given) or [len(r) if _sequence(r) else 0 for r in given] != [size] * size:
            raise DeclarationError(
                f"'{name}': the {what} {given!r} does not fit the axes '{self.axes}'; "
                f"give 0 or {size} rows of {size} entries"
            )
        return components(*(tuple(self._value(entry) for entry in row) for row in given))

    # Parameters --------------------------------------------------------------------------------

    def parameter(
        self,
        name: str,
        positive: bool = False,
        unit: str | None = None,
        value: Any = None,
    ) -> Symbol:
        """Declare a real parameter.

        Parameters
        ----------
        name : str
        positive : bool, default False
            Whether it is known to be positive; a number that is not is then refused.
        unit : str, optional
            Such as "eV", "cm**-3", "GHz". Plain numbers for this parameter are in this unit, here and in `values`;
            without it they are SI. Temperatures in the equations are energies.
        value : float or quantity, optional
            A default number in this unit, used where `values` gives none.

        Returns
        -------
        Symbol

        Raises
        ------
        DeclarationError
            When the name is taken by a field or by a parameter declared otherwise.
        UnitError
            When the unit cannot be read, or contradicts another unit or a law.
        ValuesError
            When the default is not a finite real number, or not positive although declared so.

        Examples
        --------
        >>> import plasmalin as plin
        >>> model = plin.FluidModel("warm", axes="x")
        >>> T = model.parameter("T_e", positive=True, unit="eV", value=2.0)
        >>> model.values
        {'T_e': 2.0}
        """
        made = None if unit is None else read_unit(unit)
        if not isinstance(positive, bool):
            raise DeclarationError(
                f"'{name}': positive={positive!r} is neither True nor False; a number is given as value=..., "
                "a unit as unit=..."
            )
        known = self._parameters.get(name)
        if known is None:
            self._new_name(name)
        elif not known.implied and bool(known.symbol.is_positive) != positive:
            raise DeclarationError(f"the parameter '{name}' is declared already, otherwise")
        symbol = Symbol(name, positive=True) if positive else Symbol(name, real=True)
        own = made or self._units.get(name)
        number = None if value is None else plain_number(name, value, own, positive=positive)
        if value is None and known:
            number = self._moved(name, known.value, made)
        if made is not None:
            self._refuse_other(name, made)
            self._set_unit(name, made)
        self._parameters[name] = Parameter(symbol, number)
        return symbol

    def _moved(self, name: str, number: float | None, unit: Unit | None) -> float | None:
        """A number that was given before, in the unit that is declared now."""
        before = self._units.get(name)
        scale = (before.scale if before else 1) / unit.scale if unit else Fraction(1)
        return number if number is None or scale == 1 else float(Fraction(number) * scale)

    def _refuse_other(self, name: str, unit: Unit) -> None:
        before = self._units.get(name)
        if before is not None and before.dimension != unit.dimension:
            raise UnitError(f"'{name}' is in {before} already, and {unit} is another dimension")

    def parameters(
        self, names: str | Iterable[str], positive: bool = False, unit: str | None = None
    ) -> Any:
        """Declare several parameters: ``n0, T = model.parameters("n_0 T_e", positive=True)``.

        Parameters
        ----------
        names : str or iterable of str
            Names separated by spaces or commas.
        positive : bool, default False
        unit : str, optional
            The one unit of them all.

        Returns
        -------
        Symbol or tuple of Symbol
            One symbol for one name, else a tuple.

        Raises
        ------
        DeclarationError
            As `parameter`.
        """
        listed = _listed_names(names)
        made = tuple(self.parameter(name, positive=positive, unit=unit) for name in listed)
        return made[0] if len(made) == 1 else made

    def constants(self, names: str | Iterable[str]) -> Any:
        """Declare constants of nature; their CODATA numbers and SI units come with them.

        Parameters
        ----------
        names : str or iterable of str
            Among those of `plasmalin.constants`: e, epsilon_0, mu_0, c, m_e, m_p, u, k_B, G ...

        Returns
        -------
        Symbol or tuple of Symbol

        Raises
        ------
        DeclarationError
            When a name is not a known constant.
        """
        listed = _listed_names(names)
        made = tuple(self._constant(name) for name in listed)
        return made[0] if len(made) == 1 else made

    def _constant(self, name: str) -> Symbol:
        number, unit = Fraction(codata(name)), read_unit(UNITS[name])
        self._refuse_other(name, unit)
        own = self._units.get(name, unit)
        symbol = self.parameter(name, positive=True, value=float(number / own.scale))
        self._set_unit(name, own, check=False)
        return symbol

    def vector_parameter(self, name: str, entries: Any, *, unit: str | None = None) -> Expr:
        """Declare a constant vector: ``g = model.vector_parameter("g", (0, 0, "-g_0"))``.

        Parameters
        ----------
        name : str
            The name by which laws in text refer to it.
        entries : tuple
            One entry per axis: a number, a name or an expression in parameters.
        unit : str, optional
            Of every entry; names that declare no unit are in this unit.

        Returns
        -------
        Expr
            The vector, written by its components.

        Raises
        ------
        DeclarationError
            When the name is taken or the entries do not fit the axes.
        UnitError
            When the unit cannot be read, or an entry has another.
        """
        name = self._new_name(name)
        vector = self._vector(name, entries, "vector")
        if unit is not None:
            made = read_unit(unit)
            form = of_dimension(made.dimension)
            with self._units_as_before():
                self._numbers_in(made, name, vector)
                _refuse_numbers(name, vector, made)
                required = has_dimension(f"vector '{name}'", vector, form, f"the vector {name}")
                self._dimensions = self._dimensions.require(required)
        self._vectors[name] = vector
        return vector

    def _imply(self, name: str) -> Expr:
        """A background names a parameter that is not declared yet."""
        self._new_name(name)
        symbol = Symbol(name, real=True)
        self._parameters[name] = Parameter(symbol, implied=True)
        return symbol

    # Laws --------------------------------------------------------------------------------------

    def law(self, name: str, lhs: Any, rhs: Any = 0) -> Law:
        """Add a law ``lhs = rhs``.

        Parameters
        ----------
        name : str
            What the law is called in the ledger and in messages.
        lhs, rhs : expressions, or one string or SymPy equation for `lhs`
            A string holds the whole law, "partial_t(n_e) + div(n_e*v_e) = 0"; its names are looked up among
            what is declared, ``^`` and ``**`` both mean power, nothing is evaluated as code.

        Returns
        -------
        Law

        Raises
        ------
        ReadError
            When a text cannot be read.
        RankError
            When ranks do not fit.
        DeclarationError
            When the name or the law is there already, a symbol is not declared, no field is in the law,
            or a cross product or curl leaves the model's axes.
        UnitError
            When units are declared and two terms have different ones; what declares none is left open.
        """
        self._laws[name] = self._new_law(name, lhs, rhs, "law")
        return self._laws[name]

    def constraint(self, name: str, lhs: Any, rhs: Any = 0) -> Law:
        """Add a redundant law ``lhs = rhs``, one that follows from the others once it holds at the start.

        Gauss's law beside those of Ampere and continuity, div B = 0 beside Faraday's law, quasi-neutrality beside
        continuity and Ampere's law without displacement current. It is linearized like a law and its zeroth order is
        checked against the background, but it determines no unknown. `LinearizedModel.plane_wave` proves by exact
        algebra that the laws preserve it; the zero modes that violate it are then left out.

        Parameters
        ----------
        name : str
            Not the name of a law.
        lhs, rhs : expressions, or one string for `lhs`
            As in `law`.

        Returns
        -------
        Law

        Raises
        ------
        ReadError, RankError, DeclarationError
            As `law`. (Whether it is preserved is seen later: `ConstraintError`.)

        Examples
        --------
        >>> import plasmalin as plin
        >>> model = plin.FluidModel("vacuum")
        >>> E, B = model.vector("E"), model.vector("B")
        >>> c = model.constants("c")
        >>> _ = model.law("Faraday", plin.partial_t(B), -plin.curl(E))
        >>> _ = model.law("Ampere", plin.partial_t(E), c**2 * plin.curl(B))
        >>> _ = model.constraint("no monopoles", plin.div(B))
        >>> model.linearize().plane_wave("x").relation.zero_modes
        1
        """
        self._constraints[name] = self._new_law(name, lhs, rhs, "constraint")
        return self._constraints[name]

    def _new_law(self, name: Any, lhs: Any, rhs: Any, kind: str) -> Law:
        if not isinstance(name, str) or not name.strip():
            raise DeclarationError(f"{name!r} is not a name for a {kind}; give a text")
        for known, others in (("law", self._laws), ("constraint", self._constraints)):
            if name in others:
                raise DeclarationError(
                    f"a {known} '{name}' is declared already; choose another name"
                )
        try:
            law = self._made_law(name, lhs, rhs, kind)
        except RankError as error:
            raise RankError(f"{kind} '{name}': {error}") from None
        needed = requirements(f"{kind} '{name}'", law.lhs, law.rhs)
        self._dimensions = self._dimensions.require(needed)
        return law

    def _made_law(self, name: str, lhs: Any, rhs: Any, kind: str) -> Law:
        if isinstance(lhs, str):
            if not (isinstance(rhs, int) and rhs == 0):
                raise DeclarationError(
                    f"{kind} '{name}': as text, give the whole of it as one string"
                )
            left, right = read_law(lhs, self._names())
        elif isinstance(lhs, Equality) and rhs == 0:
            left, right = lhs.args
        else:
            left, right = exact(lhs), exact(rhs)
        left, right = (self._checked(f"{kind} '{name}'", side) for side in (left, right))
        rank = _common_rank(left, right)
        law = Law(name, left, right, rank)
        if not law.residual.atoms(Field):
            raise DeclarationError(f"{kind} '{name}' holds no field: {law}")
        for known, others in (("law", self._laws), ("constraint", self._constraints)):
            for other in others.values():
                if _same(law, other):
                    raise DeclarationError(
                        f"{kind} '{name}' repeats {known} '{other.name}': leave one out"
                    )
        return law

    def _checked(self, where: str, expr: Expr) -> Expr:
        try:
            expr = self._canonical(expr)
        except DeclarationError as error:
            raise DeclarationError(f"{where}: {error}") from None
        loose = _outside_multipliers(expr).free_symbols & set(WAVE_SYMBOLS)
        if loose:
            raise DeclarationError(
                f"{where}: {', '.join(sorted(s.name for s in loose))} stands outside multiplier(f, g); a law is "
                "written in space and time, and the wave enters only as the second argument of multiplier"
            )
        if len(self.axes) < 3:
            for node in expr.atoms(Cross, Curl):
                raise DeclarationError(
                    f"{where}: {node} leaves the axes '{self.axes}' of the model; "
                    "declare it with axes='xyz'"
                )
        for node in expr.atoms(Components):
            if node.size != len(self.axes):
                raise RankError(f"{node} has {node.size} entries, the model has axes '{self.axes}'")
        return expr

    def remove_law(self, name: str) -> None:
        """Take a law out of the model, for example to put another in its place.

        Raises
        ------
        DeclarationError
            When there is no such law.
        """
        if name not in self._laws:
            raise DeclarationError(f"no law '{name}'; there are: {', '.join(self._laws)}")
        del self._laws[name]
        self._dimensions = self._dimensions.forget(f"law '{name}'")

    def remove_field(self, name: str) -> None:
        """Take a field out of the model that no law holds any more.

        Raises
        ------
        DeclarationError
            When there is no such field, or a law still holds it.
        """
        if name not in self._fields:
            raise DeclarationError(f"no field '{name}'; there are: {', '.join(self._fields)}")
        field = self._fields[name]
        held = [
            n
            for n, law in {**self.laws, **self.constraints}.items()
            if self._refreshed(field) in law.residual.atoms(Field)
        ]
        if held:
            raise DeclarationError(
                f"the field '{name}' is in law {', '.join(map(repr, held))}; remove that first"
            )
        del self._fields[name]

    def _current_law(self, law: Law) -> Law:
        role = law.role and law.role.mapped(self._canonical)
        return replace(law, lhs=self._canonical(law.lhs), rhs=self._canonical(law.rhs), role=role)

    def _assign(self, name: str, role: Role) -> None:
        self._laws[name] = replace(self._laws[name], role=role)

    def _canonical(self, expr: Expr) -> Expr:
        """The expression in the model's own symbols and fields; a decimal is that decimal, exactly."""
        replaced: dict[Any, Any] = {x: Rational(repr(float(x))) for x in expr.atoms(Float)}
        for atom in expr.atoms(Symbol, Field):
            own = self._own(atom)
            if own is not atom:
                replaced[atom] = own
        return expr.xreplace(replaced) if replaced else expr

    def _own(self, atom: Any) -> Any:
        if isinstance(atom, Field):
            if atom.name not in self._fields or self._fields[atom.name].rank != atom.rank:
                raise DeclarationError(f"the field '{atom.name}' belongs to another model")
            return self._refreshed(self._fields[atom.name])
        if atom in WAVE_SYMBOLS:
            return atom
        if atom.name not in self._parameters:
            raise DeclarationError(
                f"'{atom.name}' is not declared; use model.parameter({atom.name!r}) first"
            )
        return self._parameters[atom.name].symbol

    def _refreshed(self, field: Field) -> Field:
        """The field with its background in symbols that were declared after it."""
        background, gradient = (self._canonical(x) for x in (field.background, field.gradient))
        if (background, gradient) == (field.background, field.gradient):
            return field
        args = list(field.__getnewargs__())
        args[2:4] = background, gradient
        self._fields[field.name] = Field(*args)
        return self._fields[field.name]

    def _names(self) -> Mapping[str, Any]:
        """What a text may refer to."""
        symbols = {s.name: s for s in WAVE_SYMBOLS}
        special = {"identity": identity, "components": components}
        return {**symbols, **special, **OPERATORS, **self.symbols, **self._vectors, **self._fields}

    # The road ----------------------------------------------------------------------------------

    def linearize(self, assume: Iterable[str] = ()) -> LinearizedModel:
        """Split every field into background and perturbation and keep the first order.

        Parameters
        ----------
        assume : str or iterable of str, optional
            Names of laws that a fixed external source balances, as typed.

        Returns
        -------
        LinearizedModel

        Raises
        ------
        BackgroundError
            When a law contradicts the background.
        UndeterminedError
            When laws and unknowns do not match in number, naming what is undetermined.
        DeclarationError
            When `assume` names no law.

        Examples
        --------
        >>> import plasmalin as plin
        >>> model = plin.FluidModel("free streaming", axes="x")
        >>> n = model.scalar("n", background="n_0")
        >>> v = model.vector("v")
        >>> _ = model.law("continuity", plin.partial_t(n) + plin.div(n * v))
        >>> _ = model.law("momentum", plin.partial_t(v) + plin.advect(v, v))
        >>> linear = model.linearize()
        """
        from ..linearize.linearized import linearize

        given: Any = (assume,) if isinstance(assume, str) else assume
        if not isinstance(given, Iterable):
            raise DeclarationError(f"assume={assume!r}: give the name of a law, or a list of names")
        return linearize(self, tuple(given))

    def save(self, path: Any) -> None:
        """Write the model as a TOML file that `plasmalin.load` reads back.

        Parameters
        ----------
        path : path-like
        """
        from .writing import save_model

        save_model(self, path)


def _outside_multipliers(expr: Expr) -> Expr:
    """The expression with every multiplier's function of the wave taken away."""
    if not expr.atoms(Multiplier):
        return expr
    if isinstance(expr, Multiplier):
        return _outside_multipliers(expr.args[0])
    return Add(*(_outside_multipliers(a) for a in expr.args if isinstance(a, Expr)))


def _refuse_numbers(name: str, vector: Expr, unit: Unit) -> None:
    """A vector is written out in the laws, where a number no longer shows its unit."""
    bare = [a for a in vector.args if a.is_number and a != 0]
    if bare and unit.dimension != NONE:
        raise UnitError(
            f"the vector '{name}' in {unit} has the entry {bare[0]}; name it with a parameter of that unit, "
            f"as in model.vector_parameter({name!r}, (0, 0, '-{name}_0'), unit={unit.text!r})"
        )


def _sequence(given: Any) -> bool:
    return isinstance(given, tuple | list)


def _listed_names(names: Any) -> list[Any]:
    """Names separated by spaces or commas, or in an iterable."""
    found = names.replace(",", " ").split() if isinstance(names, str) else names
    if not isinstance(found, Iterable) or not (listed := list(found)):
        raise DeclarationError(f'{names!r} holds no names; give them as text, "n_0 T_e", or a list')
    return listed


def _listed(given: Any) -> Any:
    """An array as a list of numbers, everything else as it is."""
    return given.tolist() if isinstance(given, np.ndarray) else given


def _nothing(given: Any) -> bool:
    return given is None or (not isinstance(given, str) and not _sequence(given) and given == 0)


def _common_rank(left: Expr, right: Expr) -> int:
    ranks = {rank_of(side) for side in (left, right) if side != 0}
    if len(ranks) == 2:
        low, high = sorted(ranks)
        raise RankError(
            f"one side is a {WORDS[low]}, the other a {WORDS[high]}; both sides need the same rank"
        )
    return ranks.pop() if ranks else 0


def _same(law: Law, other: Law) -> bool:
    """Whether two laws differ by a constant factor at most."""
    if law.rank != other.rank or law.residual.atoms(Field) != other.residual.atoms(Field):
        return False
    mine, theirs = expand(law.residual), expand(other.residual)
    ratios = (Add.make_args(mine)[0] / term for term in Add.make_args(theirs))
    return any(
        not r.has(FieldAtom, Operator, Components) and expand(mine - r * theirs) == 0
        for r in ratios
    )
