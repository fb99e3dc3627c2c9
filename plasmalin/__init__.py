"""plasmalin: from your own nonlinear fluid laws to the exact dispersion relation and all its roots.

Conventions, everywhere: SI units (plain numbers in the unit that a parameter declares), temperatures in the equations as energies; plane waves exp[i(k.x − omega t)],
so that growth is Im omega > 0; right-handed axes x, y, z; wave numbers in rad/m, frequencies in rad/s.
"""

from . import constants as constants
from .check.convention import Convention as Convention
from .declare import laws as laws
from .declare.fields import components as components
from .declare.files import load as load
from .declare.files import load_example as load_example
from .declare.mixture import mixture as mixture
from .declare.model import FluidModel as FluidModel
from .declare.operators import advect as advect
from .declare.operators import cross as cross
from .declare.operators import curl as curl
from .declare.operators import ddot as ddot
from .declare.operators import div as div
from .declare.operators import dot as dot
from .declare.operators import grad as grad
from .declare.operators import identity as identity
from .declare.operators import k_abs as k_abs
from .declare.operators import k_x as k_x
from .declare.operators import k_y as k_y
from .declare.operators import k_z as k_z
from .declare.operators import laplacian as laplacian
from .declare.operators import multiplier as multiplier
from .declare.operators import norm as norm
from .declare.operators import omega as omega
from .declare.operators import outer as outer
from .declare.operators import partial_t as partial_t
from .declare.operators import trace as trace
from .declare.operators import transpose as transpose
from .declare.species import Species as Species
from .errors import AmbiguousText as AmbiguousText
from .errors import BackgroundError as BackgroundError
from .errors import ConstraintError as ConstraintError
from .errors import DeclarationError as DeclarationError
from .errors import ModelFileError as ModelFileError
from .errors import NonPolynomialError as NonPolynomialError
from .errors import PlasmalinError as PlasmalinError
from .errors import RankError as RankError
from .errors import ReadError as ReadError
from .errors import UndeterminedError as UndeterminedError
from .errors import UnitError as UnitError
from .errors import ValuesError as ValuesError

__version__ = "0.1.0"

__all__ = [
    "FluidModel",
    "Species",
    "mixture",
    "load",
    "load_example",
    "partial_t",
    "grad",
    "div",
    "curl",
    "laplacian",
    "advect",
    "dot",
    "cross",
    "outer",
    "ddot",
    "transpose",
    "trace",
    "norm",
    "identity",
    "components",
    "multiplier",
    "omega",
    "k_x",
    "k_y",
    "k_z",
    "k_abs",
    "constants",
    "laws",
    "Convention",
    "PlasmalinError",
    "DeclarationError",
    "RankError",
    "ReadError",
    "AmbiguousText",
    "ModelFileError",
    "BackgroundError",
    "ConstraintError",
    "UndeterminedError",
    "NonPolynomialError",
    "ValuesError",
    "UnitError",
]
