"""The user's plasma: fields, parameters and nonlinear laws."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace
from typing import TYPE_CHECKING, Any

from sympy import Expr, Symbol

from ..errors import DeclarationError
from .dimensions import Dimensions
from .fields import AXES, Components, Field
from .forms import requirements
from .law import Law, made_law, same_law
from .names import Names, listed_names
from .notation import equation_table
from .role import Role
from .units import Unit

if TYPE_CHECKING:
    from ..linearize.linearized import LinearizedModel


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

    Notes
    -----
    What holds for everything that is declared:

    Names
        Any identifier; E, N, S, I, beta, gamma, lambda are ordinary names. ``latex=`` says how to print one; the
        symbol of a vector is set bold.
    Units
        ``unit=`` is a text such as "m**-3", "kg m/s**2", "eV", "1". Plain numbers for what declares a unit are in this
        unit, and so are names in a background or a vector that declare none; without a unit they are SI. Temperatures
        in the equations are energies. As soon as one unit is declared, laws are checked term by term. A `UnitError`
        says that a unit cannot be read, or contradicts another unit or a law.
    Backgrounds
        ``background=`` is the zeroth-order value: 0, a name, or an expression in parameters, as text or SymPy. A name
        that is not yet a parameter becomes one.
    Gradients
        ``gradient=`` is the uniform gradient of the background in the local approximation. What such terms give depends on
        the chosen variables at order 1/kL: with log n as the field an exponential profile is exact.

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
        self._names = Names(axes)
        self._laws: dict[str, Law] = {}
        self._constraints: dict[str, Law] = {}

    def __str__(self) -> str:
        laws, redundant = self.laws, self.constraints
        lines = [self.title, *(f"  {n}: {law.paper(self.axes)}" for n, law in laws.items())]
        lines += [f"  {n}: {law.paper(self.axes)}  (constraint)" for n, law in redundant.items()]
        return "\n".join(lines)

    def _repr_html_(self) -> str:
        laws = {**self.laws, **self.constraints}
        return equation_table(self.title, {n: law.latex(self.axes) for n, law in laws.items()})

    def __repr__(self) -> str:
        return (
            f"<FluidModel {self.title!r}: axes {self.axes}, {len(self._names.fields)} fields, "
            f"{len(self._laws)} laws>"
        )

    # What has been declared --------------------------------------------------------------------

    @property
    def fields(self) -> dict[str, Field]:
        """The fields by name, in the order of declaration."""
        return dict(self._names.fields)

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
        return self._names.symbols

    @property
    def values(self) -> dict[str, float]:
        """The default numbers by parameter name, constants of nature among them.

        Each is in the unit that its parameter declares, just as the numbers that `roots` and `branches` take.
        """
        known = self._names.parameters.items()
        return {n: p.value for n, p in known if p.value is not None}

    @property
    def units(self) -> dict[str, Unit]:
        """The declared units of fields and parameters by name, those of constants of nature among them."""
        return dict(self._names.units.of)

    @property
    def dimensions(self) -> Dimensions:
        """The dimensions that are declared, and those that the laws require."""
        return self._names.units.dimensions

    @property
    def vector_parameters(self) -> dict[str, Expr]:
        """The vector parameters by name."""
        return dict(self._names.vectors)

    # Fields ------------------------------------------------------------------------------------

    def scalar(
        self,
        name: str,
        background: Any = 0,
        gradient: Any = None,
        unit: str | None = None,
        latex: str | None = None,
    ) -> Field:
        """Declare a scalar field; the notes of `FluidModel` say what the arguments have in common.

        Parameters
        ----------
        name : str
        background : 0, str or expression, default 0
        gradient : tuple, optional
            One entry per axis.
        unit, latex : str, optional

        Returns
        -------
        Field
            With ``.background`` and ``.perturbation``.

        Raises
        ------
        DeclarationError
            When the name is taken, or the background holds a field or does not fit the axes.
        UnitError
            When the unit cannot be read, or the background has another.
        """
        names = self._names
        name = names.fresh(name)
        value, slope = names.scalar(background), names.vector(name, gradient, "gradient")
        return names.add_field(Field(name, 0, value, slope, latex_name=latex), unit)

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
            One entry per axis.
        gradient : tuple of tuples, optional
            d_i v_j: one row per direction i of change. A wave for which the flow along k changes does not exist;
            `plane_wave` refuses it.
        unit, latex : str, optional

        Returns
        -------
        Field

        Raises
        ------
        DeclarationError, UnitError
            As `scalar`.
        """
        names = self._names
        name = names.fresh(name)
        value, slope = names.vector(name, background), names.tensor(name, gradient, "gradient")
        return names.add_field(Field(name, 1, value, slope, latex_name=latex), unit)

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
            One row per axis.
        symmetric : bool, default True
            Whether the tensor equals its transpose: six unknowns in three axes instead of nine.
        unit, latex : str, optional

        Returns
        -------
        Field

        Raises
        ------
        DeclarationError, UnitError
            As `scalar`; also when the background is not symmetric where the tensor is.
        """
        name = self._names.fresh(name)
        value = self._names.tensor(name, background)
        if symmetric and isinstance(value, Components):
            size = range(len(self.axes))
            if any(value.entry((i, j)) != value.entry((j, i)) for i in size for j in size):
                raise DeclarationError(f"tensor '{name}': the background is not symmetric")
        made = Field(name, 2, value, symmetric=symmetric, latex_name=latex)
        return self._names.add_field(made, unit)

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
            without it they are SI.
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
        return self._names.add_parameter(name, positive, unit, value)

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
        DeclarationError, UnitError
            As `parameter`.
        """
        return _one_or_all(self.parameter(n, positive, unit) for n in listed_names(names))

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
        return _one_or_all(self._names.add_constant(n) for n in listed_names(names))

    def vector_parameter(self, name: str, entries: Any, *, unit: str | None = None) -> Expr:
        """Declare a constant vector: ``g = model.vector_parameter("g", (0, 0, "-g_0"))``.

        Parameters
        ----------
        name : str
            The name by which laws in text refer to it.
        entries : tuple
            One entry per axis: a number, a name or an expression in parameters.
        unit : str, optional
            Of every entry; a number other than 0 is then to be named.

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
        return self._names.add_vector(name, entries, unit)

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
        self._laws[name] = self._new_law("law", name, lhs, rhs)
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
        ReadError, RankError, DeclarationError, UnitError
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
        self._constraints[name] = self._new_law("constraint", name, lhs, rhs)
        return self._constraints[name]

    def _new_law(self, kind: str, name: Any, lhs: Any, rhs: Any) -> Law:
        if not isinstance(name, str) or not name.strip():
            raise DeclarationError(f"{name!r} is not a name for a {kind}; give a text")
        declared = {"law": self._laws, "constraint": self._constraints}
        for known, others in declared.items():
            if name in others:
                raise DeclarationError(
                    f"a {known} '{name}' is declared already; choose another name"
                )
        law = made_law(self._names, kind, name, lhs, rhs)
        for known, others in declared.items():
            for other in others.values():
                if same_law(law, other):
                    raise DeclarationError(
                        f"{kind} '{name}' repeats {known} '{other.name}': leave one out"
                    )
        self._names.units.require(requirements(f"{kind} '{name}'", law.lhs, law.rhs))
        return law

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
        self._names.units.forget(f"law '{name}'")

    def remove_field(self, name: str) -> None:
        """Take a field out of the model that no law holds any more.

        Raises
        ------
        DeclarationError
            When there is no such field, or a law still holds it.
        """
        fields = self._names.fields
        if name not in fields:
            raise DeclarationError(f"no field '{name}'; there are: {', '.join(fields)}")
        laws, field = {**self.laws, **self.constraints}, self._names.refreshed(fields[name])
        held = [n for n, law in laws.items() if field in law.residual.atoms(Field)]
        if held:
            raise DeclarationError(
                f"the field '{name}' is in law {', '.join(map(repr, held))}; remove that first"
            )
        del fields[name]

    def _current_law(self, law: Law) -> Law:
        now = self._names.canonical
        role = law.role and law.role.mapped(now)
        return replace(law, lhs=now(law.lhs), rhs=now(law.rhs), role=role)

    def _assign(self, name: str, role: Role) -> None:
        self._laws[name] = replace(self._laws[name], role=role)

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


def _one_or_all(made: Iterable[Symbol]) -> Any:
    symbols = tuple(made)
    return symbols[0] if len(symbols) == 1 else symbols
