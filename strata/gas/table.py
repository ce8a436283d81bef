"""The species table as arrays, in the form in which compiled rows read it."""

from collections.abc import Iterable
from dataclasses import dataclass
from functools import cache

import numpy as np
from numpy.typing import NDArray

from strata import ranges
from strata.constants import GAS_CONSTANT
from strata.gas import columns as at
from strata.gas import laws as names
from strata.gas.henry import join_of
from strata.gas.ions import mass_per_equivalent, salting_of_ions
from strata.gas.laws import Laws
from strata.species import SPECIES, WATER_CRITICAL, Species

_MODES = {names.NO_SALTING_OUT: 0.0, names.WEISENBERGER_SCHUMPE: 1.0, names.GENERIC: 2.0}


@dataclass(frozen=True)
class GasTable:
    """Gases by row (water vapour last), their pair interactions and the laws in force."""

    gases: tuple[str, ...]
    rows: NDArray[np.float64]  # (gases + 1, at.WIDTH)
    pairs: NDArray[np.float64]  # (gases + 1, gases + 1), 1 - k_ij
    laws: NDArray[np.float64]  # (at.LAWS,)


def _peng_robinson(temperature: float, pressure: float, factor: float) -> list[float]:
    """Return four numbers of a component from its critical point [Peng & Robinson 1976]."""
    root_a = np.sqrt(0.45723553) * GAS_CONSTANT * temperature / np.sqrt(pressure)
    alpha = 0.37464 + factor * (1.54226 - 0.26992 * factor)
    return [root_a, alpha, temperature, 0.07779607 * GAS_CONSTANT * temperature / pressure]


def _row(row: Species) -> list[float]:
    """Return one gas as numbers."""
    values = [0.0] * at.WIDTH
    if row.henry is not None:
        values[at.IAPWS : at.IAPWS + 3] = row.henry
        values[at.JOIN_AT] = row.henry_from if row.solubility is not None else -1e3
    else:
        values[at.JOIN_AT] = 1e3
    if row.solubility is not None:
        values[at.WEISS : at.WEISS + 3] = row.solubility
    values[at.JOIN] = join_of(row)
    values[at.VOLUME] = row.molar_volume
    values[at.SALTING : at.SALTING_GENERIC + 1] = [*row.salting_out, row.salting_out_generic]
    values[at.ROOT_A :] = _peng_robinson(
        row.critical_temperature, row.critical_pressure, row.acentric_factor
    )
    return values


def gas_table(gases: Iterable[str], laws: Laws) -> GasTable:
    """Return the arrays for some gases under some laws.

    Parameters
    ----------
    gases : iterable of str
        Names in the species table, in the order of the columns of concentrations.
    laws : Laws
        Corrections in force.
    """
    order = tuple(gases)
    return _table(order, tuple(ranges.named("gas", gas, SPECIES) for gas in order), laws)


@cache
def _table(order: tuple[str, ...], species: tuple[Species, ...], laws: Laws) -> GasTable:
    """Return the arrays; kept, because a plant asks for the same ones at every stage."""
    water = [0.0] * at.WIDTH
    water[at.ROOT_A :] = _peng_robinson(*WATER_CRITICAL)
    pairs = np.ones((len(order) + 1, len(order) + 1))
    for i, row in enumerate(species):
        pairs[i, -1] = pairs[-1, i] = 1.0 - row.water_interaction
    if "CH4" in order and "CO2" in order:
        i, j = order.index("CH4"), order.index("CO2")
        pairs[i, j] = pairs[j, i] = 1.0 - laws.k_ij
    part, number = salting_of_ions(laws.magnesium_share, laws.calcium_share)
    vector = np.zeros(at.LAWS)
    vector[at.SALTING_MODE] = _MODES[laws.salting_out]
    vector[at.SALTING_PART] = part
    vector[at.ION_NUMBER] = number
    vector[at.ION_MASS] = mass_per_equivalent(laws.magnesium_share, laws.calcium_share)
    vector[at.ION_STRENGTH] = 1.0 + 0.5 * (laws.magnesium_share + laws.calcium_share)
    vector[at.PRESSURE_TERM] = laws.pressure_term
    vector[at.REAL_GAS] = laws.gas_phase == names.PENG_ROBINSON
    vector[at.WATER_VAPOUR] = laws.water_vapour
    return GasTable(order, np.array([*map(_row, species), water]), pairs, vector)
