"""What lake water is like: density, stability of a parcel pair, transport, salinity.

Pure functions of numbers or arrays.  Temperature in situ [degC], salinity [g kg-1], pressure
absolute [Pa], concentrations [mol m-3].
"""

from strata.water.density import (
    adiabatic_lapse_rate,
    density,
    haline_contraction_at,
    potential_density,
    thermal_expansion,
)
from strata.water.salinity import (
    conductivity_at_25,
    salinity_from_conductivity,
    salt_from_ions,
)
from strata.water.stability import buoyancy_frequency_squared, standard_gravity
from strata.water.transport import (
    dynamic_viscosity,
    heat_capacity,
    kinematic_viscosity,
    salt_diffusion,
    thermal_conductivity,
    thermal_diffusivity,
    vapour_pressure,
)

__all__ = [
    "adiabatic_lapse_rate",
    "buoyancy_frequency_squared",
    "conductivity_at_25",
    "density",
    "dynamic_viscosity",
    "haline_contraction_at",
    "heat_capacity",
    "kinematic_viscosity",
    "potential_density",
    "salinity_from_conductivity",
    "salt_diffusion",
    "salt_from_ions",
    "standard_gravity",
    "thermal_conductivity",
    "thermal_diffusivity",
    "thermal_expansion",
    "vapour_pressure",
]
