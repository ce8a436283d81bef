"""What the units of a plant ask of water and gas: equilibrium, heat, density, by streams.

The laws are those of ``strata.gas``; here they meet a stream with its DIC, alkalinity and
sulphide.  Every public function of this module is a function of streams and a site.
"""

import math
from collections.abc import Mapping
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

import numpy as np

from strata.compiled import compiled
from strata.constants import ATMOSPHERE, GAS_CONSTANT, ZERO_CELSIUS
from strata.errors import ComputationError, OutOfRangeError
from strata.gas import Laws
from strata.gas.air import argon_of_nitrogen
from strata.gas.bubble import bubble_rows
from strata.gas.carbonate import (
    carbonate_constants,
    free_co2,
    ln_activity_of_one,
    ln_sulfide_constant,
)
from strata.gas.flash import BOILS, flash_rows
from strata.gas.henry import henry_of_row
from strata.gas.ions import ionic_strength_of
from strata.gas.table import GasTable, gas_table
from strata.lake.site import Site
from strata.plant.streams import CALCITE_DENSITY, GasStream, WaterStream
from strata.species import LAKE_GASES, SPECIES, VAPOUR
from strata.water.density import (
    in_situ_density,
    in_situ_temperature,
    pure_water_density,
    specific_heat,
)
from strata.water.transport import vapour_pressure_at

CARBON = LAKE_GASES.index("CO2")
_TEMPERATURE_STEP = 1e-3  # K, of the numerical slope of ln of Henry's constant
_ROUNDS = 30
_SETTLED = 1e-7  # K, of the temperature of the water that leaves


@lru_cache(maxsize=8)
def _table_of(
    magnesium: float, calcium: float, named: tuple[tuple[str, Any], ...]
) -> tuple[Laws, GasTable]:
    """Return the laws by name for water of some ions, and the lake's gases under them."""
    laws = Laws.of({"magnesium_share": magnesium, "calcium_share": calcium, **dict(named)})
    return laws, gas_table(LAKE_GASES, laws)


def laws_of(site: Site) -> Laws:
    """Return the laws of a site, with its ions."""
    return _table_of(site.magnesium_share, site.calcium_share, tuple(site.laws.items()))[0]


def table_of(site: Site) -> GasTable:
    """Return the table of the lake's gases under the laws of a site."""
    return _table_of(site.magnesium_share, site.calcium_share, tuple(site.laws.items()))[1]


@lru_cache(maxsize=256)
def _argon(tenths: int) -> float:
    """Return argon per nitrogen at tenths of a degree, between which it changes by 0.02 %."""
    return float(argon_of_nitrogen(0.1 * tenths))


@compiled
def _free_parts(t, s, p, dic, alk, mg_share, ca_share):
    """Return free CO2 [mol m-3] and the share of sulphide that is H2S."""
    strength = ionic_strength_of(s, alk, mg_share, ca_share)
    k1, k2, kw = carbonate_constants(t, strength, p)
    co2, h = free_co2(dic, alk, k1, k2, kw, 1e-4)
    split = pure_water_density(t, p) * math.exp(
        ln_sulfide_constant(t, p) - 2.0 * ln_activity_of_one(t, strength)
    )
    return co2, h / (h + split)


@dataclass(frozen=True)
class Free:
    """The molecular part of what is dissolved [mol m-3], argon included."""

    gases: Mapping[str, float]
    sulfide_share: float  # of sulphide that is H2S


def free_gases(water: WaterStream, site: Site, pressure: float = ATMOSPHERE) -> Free:
    """Return the gases proper in a stream: free CO2 of its DIC, H2S of its sulphide."""
    co2, share = _free_parts(
        water.temperature,
        water.salinity,
        pressure,
        water.of("DIC"),
        water.of("alkalinity"),
        site.magnesium_share,
        site.calcium_share,
    )
    nitrogen = water.of("N2")
    return Free(
        {
            "CH4": water.of("CH4"),
            "CO2": co2,
            "N2": nitrogen,
            "Ar": nitrogen * _argon(round(10.0 * water.temperature)),
            "O2": water.of("O2"),
            "H2S": water.of("H2S") * share,
        },
        share,
    )


def density_of(water: WaterStream, site: Site, pressure: float) -> float:
    """Return the density [kg m-3] of a stream at a pressure, gases and solids included."""
    mass, volume = gas_load(water, site, pressure)
    t = in_situ_temperature(water.temperature, pressure)
    clear = in_situ_density(t, water.salinity, pressure, mass, volume, site.haline_contraction)
    return float(clear + water.solids * (1.0 - clear / CALCITE_DENSITY))


def gas_load(water: WaterStream, site: Site, pressure: float) -> tuple[float, float]:
    """Return mass [kg m-3] and partial volume [m3 m-3] of the dissolved gases of a stream."""
    gases = free_gases(water, site, pressure).gases
    mass = sum(c * SPECIES[gas].molar_mass for gas, c in gases.items())
    volume = sum(
        c * (site.co2_molar_volume if gas == "CO2" else SPECIES[gas].molar_volume)
        for gas, c in gases.items()
    )
    return mass, volume


def gas_pressure(water: WaterStream, site: Site, pressure: float) -> float:
    """Return the total gas pressure [Pa] of a stream whose CO2 is free as at a pressure.

    Raises
    ------
    strata.ComputationError
        If the bubble point is not found.
    """
    table = table_of(site)
    free = free_gases(water, site, pressure).gases
    c = np.array([[free[gas] for gas in LAKE_GASES]])
    found, y, code = (
        np.zeros(1),
        np.zeros((1, len(LAKE_GASES) + 1)),
        np.zeros(1, dtype=np.int64),
    )
    one = np.array([water.temperature]), np.array([water.salinity])
    bubble_rows(*one, c, table.rows, table.pairs, table.laws, found, y, code)
    if code[0] != 0:
        raise ComputationError(
            f"no bubble point of water of {water.temperature:.1f} degC found"
        )
    return float(found[0])


def desorption_enthalpy(gas: str, temperature: float, site: Site) -> float:
    r"""Return the heat taken up as a gas leaves water [J/mol]: ``R T^2 d ln k_H / dT``."""
    row = table_of(site).rows[LAKE_GASES.index(gas)]
    return float(_desorption(temperature, row))


@compiled
def _desorption(t, row):
    """Return R T2 d ln k_H / dT [J/mol] by a central difference."""
    upper = math.log(henry_of_row(t + 0.5 * _TEMPERATURE_STEP, row))
    lower = math.log(henry_of_row(t - 0.5 * _TEMPERATURE_STEP, row))
    return GAS_CONSTANT * (t + ZERO_CELSIUS) ** 2 * (upper - lower) / _TEMPERATURE_STEP


@compiled
def evaporation_enthalpy(t):
    """Return the heat of evaporation [J/mol] that goes with the vapour pressure used here."""
    upper = math.log(vapour_pressure_at(t + 0.5 * _TEMPERATURE_STEP))
    lower = math.log(vapour_pressure_at(t - 0.5 * _TEMPERATURE_STEP))
    return GAS_CONSTANT * (t + ZERO_CELSIUS) ** 2 * (upper - lower) / _TEMPERATURE_STEP


@compiled
def _part(t, s, p, alk, c, approach, cooling, carbon, rows, pairs, laws, gas, y, code, one):
    """Flash one row with the heat taken from the water; return the temperature at its end.

    Fills gas[0], y[0] and code[0].  The heat of desorption and evaporation at the end
    temperature equals what the water gives up in cooling to it.
    """
    end, last, before = t, t, 0.0
    for count in range(_ROUNDS):
        one[0] = end
        flash_rows(
            one[0:1], one[1:2], one[2:3], one[3:4], c, carbon, rows, pairs, laws, gas, y, code
        )
        if code[0] != 0 or not cooling:
            return end
        heat = gas[0] * y[0, -1] * evaporation_enthalpy(end)
        for i in range(c.shape[1]):
            heat += gas[0] * y[0, i] * _desorption(end, rows[i])
        capacity = pure_water_density(end, p) * specific_heat(end, s, p)
        gap = t - approach * heat / capacity - end
        if abs(gap) < _SETTLED:
            return end + gap
        step = gap
        if count > 0 and gap != before:  # secant
            step = gap * (end - last) / (before - gap)
        last, before = end, gap
        end += step
    return end


@dataclass(frozen=True)
class Parted:
    """Water and gas that left each other."""

    water: WaterStream
    gas: GasStream


def part(
    water: WaterStream,
    pressure: float,
    site: Site,
    approach: float = 1.0,
    cooling: bool = True,
    where: str = "separator",
) -> Parted:
    """Return the water that stays and the gas that leaves it at a pressure.

    Heat of desorption and evaporation comes out of the water, which cools.  Bicarbonate makes
    up free CO2 that leaves; of sulphide, the part that is H2S in the feed can leave.  Argon
    goes with the gas and is forgotten in the water.

    Parameters
    ----------
    water : WaterStream
    pressure : float
        Absolute [Pa].
    site : Site
    approach : float
        Share of the way to equilibrium that every gas goes.
    cooling : bool
        False keeps the temperature of the feed.
    where : str
        Named if it cannot be done.
    """
    table = table_of(site)
    alk = max(water.of("alkalinity"), 0.0)
    free = free_gases(water, site, pressure)
    c = np.array([[free.gases[gas] for gas in LAKE_GASES]])
    c[0, CARBON] = water.of("DIC")
    gas, y, code = np.zeros(1), np.zeros((1, len(LAKE_GASES) + 1)), np.zeros(1, dtype=np.int64)
    one = np.array([water.temperature, water.salinity, pressure, alk])
    t = _part(
        water.temperature,
        water.salinity,
        pressure,
        alk,
        c,
        approach,
        cooling,
        CARBON,
        table.rows,
        table.pairs,
        table.laws,
        gas,
        y,
        code,
        one,
    )
    if code[0] == BOILS:
        raise OutOfRangeError(
            f"{where}: pressure is {pressure:g} Pa; water of {t:.1f} degC boils there"
        )
    if code[0] != 0:
        raise ComputationError(f"{where}: no equilibrium found at {pressure:g} Pa")
    off = approach * gas[0] * y[0]
    names = ("DIC" if name == "CO2" else name for name in LAKE_GASES)
    left = {
        name: water.of(name) - float(off[i]) for i, name in enumerate(names) if name != "Ar"
    }
    dissolved = {**water.dissolved, **left}
    flows = {name: water.flow * float(off[i]) for i, name in enumerate((*LAKE_GASES, VAPOUR))}
    return Parted(
        WaterStream(water.flow, float(t), water.salinity, dissolved, water.solids),
        GasStream(flows, float(t), pressure),
    )
