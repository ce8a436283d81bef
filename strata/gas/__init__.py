"""Gas in lake water: solubility, gas phase, bubble point, carbonate, lime, flash.

Pure functions of numbers or arrays.  Temperature in situ [degC], salinity [g kg-1], pressure
absolute [Pa], concentrations [mol m-3].  ``laws`` switches corrections by name, see
:class:`Laws`.
"""

from strata.gas.air import equilibrium as air_equilibrium
from strata.gas.air import sea_water_equilibrium
from strata.gas.bubble import Bubble, bubble_point
from strata.gas.diffusivity import gas_diffusivity, schmidt_number
from strata.gas.flash import Flash, flash
from strata.gas.laws import PLAIN, Laws
from strata.gas.lime import Limed, dose_lime
from strata.gas.mixture import compressibility_factor, fugacity_coefficients
from strata.gas.solubility import henry_constant, salting_out
from strata.gas.speciation import Speciation, alkalinity_of, dic_of, speciate

__all__ = [
    "PLAIN",
    "Bubble",
    "Flash",
    "Laws",
    "Limed",
    "Speciation",
    "air_equilibrium",
    "alkalinity_of",
    "bubble_point",
    "compressibility_factor",
    "dic_of",
    "dose_lime",
    "flash",
    "fugacity_coefficients",
    "gas_diffusivity",
    "henry_constant",
    "salting_out",
    "schmidt_number",
    "sea_water_equilibrium",
    "speciate",
]
