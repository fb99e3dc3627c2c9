"""Ready laws: small functions that add ordinary, printable, replaceable laws to a model, and the terms they are made of.

A function that takes a model adds a law to it and returns the law; the others return terms (expressions) for the
user's own laws. Everything is coordinate-free and in SI units, temperatures as energies (J), densities in 1/m^3.
Where a law is about a field, the field or its name is taken; ``name=`` names the law, else it is named by its field. What is
not declared, and a second closure of the same pressure, is a `DeclarationError`.

For example:

>>> import plasmalin as plin
>>> model = plin.FluidModel("electrons", axes="x")
>>> n, v, phi = model.scalar("n", background="n_0"), model.vector("v"), model.scalar("phi")
>>> e, eps0, m = model.constants("e epsilon_0 m_e")
>>> n_0, T = model.symbols["n_0"], model.parameter("T", positive=True)
>>> print(plin.laws.continuity(model, n, v))
partial_t(n) + div(n*v) = 0
>>> force = plin.laws.lorentz_force(n, -e, potential=phi)
>>> _ = plin.laws.momentum(model, n, v, mass=m, force=force, pressure=n * T)
>>> print(plin.laws.poisson(model, phi, e * (n_0 - n), epsilon_0=eps0))
-epsilon_0*laplacian(phi) = e*(-n + n_0)
"""

from .collisions import attachment as attachment
from .collisions import friction as friction
from .collisions import frictional_heat as frictional_heat
from .collisions import heat_exchange as heat_exchange
from .collisions import ionization as ionization
from .collisions import neutral_friction as neutral_friction
from .collisions import recombination as recombination
from .collisions import source_momentum as source_momentum
from .dust import grain_charge as grain_charge
from .dust import grain_sinks as grain_sinks
from .electromagnetic import ampere as ampere
from .electromagnetic import boltzmann_density as boltzmann_density
from .electromagnetic import faraday as faraday
from .electromagnetic import maxwell as maxwell
from .electromagnetic import poisson as poisson
from .electromagnetic import quasineutrality as quasineutrality
from .electromagnetic import self_gravity as self_gravity
from .one_fluid import hall_field as hall_field
from .one_fluid import incompressible as incompressible
from .one_fluid import induction as induction
from .one_fluid import magnetic_force as magnetic_force
from .one_fluid import mhd as mhd
from .one_fluid import ohmic_heat as ohmic_heat
from .pressure import adiabatic_pressure as adiabatic_pressure
from .pressure import double_adiabatic as double_adiabatic
from .pressure import energy as energy
from .pressure import field_aligned as field_aligned
from .pressure import isothermal_pressure as isothermal_pressure
from .pressure import landau_heat_loss as landau_heat_loss
from .pressure import polytropic_pressure as polytropic_pressure
from .pressure import pressure_tensor as pressure_tensor
from .species import bohm_force as bohm_force
from .species import continuity as continuity
from .species import gravity_force as gravity_force
from .species import lorentz_force as lorentz_force
from .species import momentum as momentum
from .species import pressure_gradient as pressure_gradient
from .species import relativistic_momentum as relativistic_momentum
from .species import rotation_force as rotation_force
from .viscosity import gyroviscous_stress as gyroviscous_stress
from .viscosity import strain_rate as strain_rate
from .viscosity import viscous_force as viscous_force
from .viscosity import viscous_heat as viscous_heat
from .viscosity import viscous_stress as viscous_stress

__all__ = [
    "continuity",
    "momentum",
    "relativistic_momentum",
    "lorentz_force",
    "pressure_gradient",
    "gravity_force",
    "rotation_force",
    "bohm_force",
    "ionization",
    "recombination",
    "attachment",
    "source_momentum",
    "neutral_friction",
    "friction",
    "frictional_heat",
    "heat_exchange",
    "viscous_force",
    "viscous_stress",
    "viscous_heat",
    "strain_rate",
    "gyroviscous_stress",
    "isothermal_pressure",
    "polytropic_pressure",
    "adiabatic_pressure",
    "energy",
    "field_aligned",
    "landau_heat_loss",
    "double_adiabatic",
    "pressure_tensor",
    "boltzmann_density",
    "poisson",
    "quasineutrality",
    "faraday",
    "ampere",
    "maxwell",
    "self_gravity",
    "mhd",
    "magnetic_force",
    "induction",
    "hall_field",
    "ohmic_heat",
    "incompressible",
    "grain_charge",
    "grain_sinks",
]
