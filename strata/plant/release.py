"""What comes out of water in a pipe as its pressure falls, at equilibrium all the way."""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from strata.compiled import compiled
from strata.constants import GAS_CONSTANT, WATER_MASS, ZERO_CELSIUS
from strata.errors import ComputationError, OutOfRangeError
from strata.gas import Laws
from strata.gas import columns as at
from strata.gas.bubble import bubble_rows
from strata.gas.flash import BOILS, flash_rows
from strata.gas.mixture import attraction_roots, fugacity_rows
from strata.gas.table import gas_table
from strata.plant.plan import Riser
from strata.species import SPECIES
from strata.water.density import HALINE_CONTRACTION, in_situ_density
from strata.water.transport import dynamic_viscosity_at

Array = NDArray[np.float64]

POINTS = 121  # pressures at which the pipe is looked at, for its profile


@dataclass(frozen=True)
class Train:
    """What comes out of the water as pressure falls, and the pipe it comes out in."""

    pressure: Array  # falling, from where gas first comes out to that of the separator
    gas_volume: Array  # m3 of gas per m3 of water
    gas_density: Array
    water_density: float
    viscosity: float
    gravity: float
    bore: float
    roughness: float
    foot_pressure: float  # Pa in the lake at the intake
    length: float


@compiled
def _release(t, s, amounts, outlet, masses, rows, pairs, laws, pressure, volume, weight):
    """Fill what comes out of water as pressure falls from its bubble point to the outlet.

    amounts is (1, gases) [mol m-3]; pressure [Pa] falls in even ratios; volume is m3 of gas
    per m3 of water, weight the density of the gas; where nothing comes out, of the first
    bubble.  Returns the bubble pressure and a code of the flash.
    """
    n, m = pressure.size, rows.shape[0]
    one, code = np.zeros(1), np.zeros(1, dtype=np.int64)
    first = np.zeros((1, m))
    bubble_rows(np.full(1, t), np.full(1, s), amounts, rows, pairs, laws, one, first, code)
    if code[0] != 0:
        return one[0], code[0]
    ratio = max(one[0] / outlet, 1.0 + 1e-7) ** (1.0 / (n - 1))
    for k in range(n):
        pressure[k] = outlet * ratio ** (n - 1 - k)
    moles, y, codes = np.zeros(n), np.zeros((n, m)), np.zeros(n, dtype=np.int64)
    feed = np.empty((n, m - 1))
    feed[:] = amounts[0]
    flash_rows(
        np.full(n, t),
        np.full(n, s),
        pressure,
        np.zeros(n),
        feed,
        -1,
        rows,
        pairs,
        laws,
        moles,
        y,
        codes,
    )
    roots, work, ln_phi = np.empty(m), np.empty(m), np.empty(m)
    attraction_roots(t, rows, roots)
    for k in range(n):
        if codes[k] != 0:
            return one[0], codes[k]
        if moles[k] <= 0.0:
            y[k] = first[0]
        z = 1.0
        if laws[at.REAL_GAS] != 0.0:
            z = fugacity_rows(t, pressure[k], y[k], rows, roots, pairs, work, ln_phi)
        mass, total = 0.0, 0.0
        for i in range(m):
            mass += y[k, i] * masses[i]
            total += y[k, i]
        molar_volume = z * GAS_CONSTANT * (t + ZERO_CELSIUS) / pressure[k]
        volume[k] = moles[k] * molar_volume
        weight[k] = mass / max(total, 1e-300) / molar_volume
    return one[0], 0


def train_of(
    riser: Riser,
    temperature: float,
    salinity: float,
    gases: Mapping[str, float],
    outlet: float,
    foot: float,
    length: float,
    gravity: float,
    laws: Laws | None,
    points: int = POINTS,
) -> tuple[Train, float]:
    """Return what comes out below the bubble point, and the bubble pressure."""
    table = gas_table(gases, Laws.of(laws))
    amounts = np.array([[float(amount) for amount in gases.values()]])
    masses = [SPECIES[gas].molar_mass for gas in table.gases]
    pressure, volume, weight = np.empty(points), np.empty(points), np.empty(points)
    bubble, code = _release(
        temperature,
        salinity,
        amounts,
        outlet,
        np.array([*masses, WATER_MASS]),
        table.rows,
        table.pairs,
        table.laws,
        pressure,
        volume,
        weight,
    )
    if code == BOILS:
        raise OutOfRangeError(
            f"riser: outlet pressure is {outlet:g} Pa; water of {temperature:.1f} degC boils"
        )
    if code != 0:
        raise ComputationError(
            f"riser: no equilibrium found between {outlet:g} Pa and {bubble:g} Pa"
        )
    water = in_situ_density(temperature, salinity, outlet, 0.0, 0.0, HALINE_CONTRACTION)
    train = Train(
        pressure,
        volume,
        weight,
        float(water),
        float(dynamic_viscosity_at(temperature)),
        gravity,
        riser.bore,
        riser.roughness,
        foot,
        length,
    )
    return train, bubble
