"""Properties at the faces that follow temperature so slowly that a year's hold is enough.

A kelvin changes a molecular diffusivity by 2.5 %; the deep water of such lakes moves by
hundredths of a kelvin a year, its surface by less than a kelvin through the seasons.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from strata.column.air import AT_SURFACE
from strata.column.mixing import staircase_drive
from strata.column.tracers import DIC, SALINITY, TEMPERATURE
from strata.compiled import broadcast
from strata.gas.diffusivity import gas_diffusivity
from strata.water.density import in_situ_temperature, thermal_expansion
from strata.water.transport import kinematic_viscosity, salt_diffusion, thermal_diffusivity

Array = NDArray[np.float64]


@dataclass(frozen=True)
class SlowProperties:
    """What is held for a year at the faces of the layers."""

    molecular: Array  # (n + 1, m) molecular diffusivity of each tracer, m2/s
    expansion: Array  # (n + 1,) thermal expansion, 1/K
    drive: Array  # (n + 1,) of the staircase, see there


def slow_properties(
    values: Array, co2: Array, face_pressure: Array, gravity: float, staircase_step: float
) -> SlowProperties:
    """Return the slow properties of a column.

    DIC moves as free CO2 and bicarbonate, by their shares; ions, phosphate and tags as salt.

    Parameters
    ----------
    values : ndarray, shape (n, m)
        Tracers of the layers.
    co2 : ndarray, shape (n,)
        Free CO2 [mol m-3].
    face_pressure : ndarray, shape (n + 1,)
        [Pa]
    gravity, staircase_step : float
        [m s-2], [m].
    """
    temperature = broadcast(in_situ_temperature)(
        at_faces(values[:, TEMPERATURE]), face_pressure
    )
    expansion = thermal_expansion(temperature, at_faces(values[:, SALINITY]), face_pressure)
    heat = thermal_diffusivity(temperature)
    salt = salt_diffusion(temperature)
    molecular = np.repeat(salt[:, None], values.shape[1], axis=1)
    molecular[:, TEMPERATURE] = heat
    for column, gas in AT_SURFACE.items():
        molecular[:, column] = gas_diffusivity(gas, temperature)
    share = at_faces(co2 / np.maximum(values[:, DIC], 1e-30))
    molecular[:, DIC] = share * molecular[:, DIC] + (1.0 - share) * salt
    drive = broadcast(staircase_drive)(
        expansion, gravity, heat, kinematic_viscosity(temperature), staircase_step
    )
    return SlowProperties(molecular, expansion, drive)


def at_faces(layers: Array) -> Array:
    """Return values at the faces: the mean of the layers there, at the ends the layer."""
    return np.concatenate([layers[:1], 0.5 * (layers[1:] + layers[:-1]), layers[-1:]])
