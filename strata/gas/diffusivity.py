"""How fast dissolved gas spreads by molecules, and its Schmidt number."""

import math

import numpy as np
from numpy.typing import ArrayLike, NDArray

from strata import ranges
from strata.compiled import broadcast, compiled
from strata.constants import GAS_CONSTANT, ZERO_CELSIUS
from strata.species import SPECIES
from strata.water.transport import kinematic_viscosity

Array = NDArray[np.float64]


@compiled
def diffusivity_at(t, d0, activation):
    """Return D0 exp(-Ea / RT) [m2/s] at t [degC], two numbers of the species table."""
    return d0 * math.exp(-activation / (GAS_CONSTANT * (t + ZERO_CELSIUS)))


def gas_diffusivity(gas: str, temperature: ArrayLike) -> Array:
    r"""Return the molecular diffusivity of a dissolved gas [m2/s], 0 to 40 degC.

    .. math:: D = D_0\,e^{-E_a/RT}

    [Jaehne, Heinz & Dietrich 1987] for CO2 and CH4; the species table names the others'
    source.
    """
    row = ranges.named("gas", gas, SPECIES)
    t = ranges.within("temperature", temperature, (0.0, 40.0), "degC", row.diffusivity_source)
    result: Array = broadcast(diffusivity_at)(t, *row.diffusivity)
    return result


def schmidt_number(gas: str, temperature: ArrayLike) -> Array:
    """Return the Schmidt number of a gas in fresh water.

    The cubic of [Wanninkhof 1992], 0 to 30 degC, for CO2, CH4, N2 and O2; for gases that it
    leaves out, kinematic viscosity over diffusivity, 0 to 40 degC.
    """
    row = ranges.named("gas", gas, SPECIES)
    if row.schmidt is None:
        return kinematic_viscosity(temperature) / gas_diffusivity(gas, temperature)
    source = f"Schmidt number of {gas}, Wanninkhof 1992"
    t = ranges.within("temperature", temperature, (0.0, 30.0), "degC", source)
    a, b, c, d = row.schmidt
    return np.asarray(a + t * (b + t * (c + t * d)))
