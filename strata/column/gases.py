"""What dissolved gases mean for the layers: carbonate, free CO2, mass and volume."""

from strata.column.tracers import (
    ALKALINITY,
    DIC,
    METHANE,
    NITROGEN,
    OXYGEN,
    SALINITY,
    SULFIDE,
    TEMPERATURE,
)
from strata.compiled import compiled
from strata.gas.carbonate import carbonate_constants, free_co2
from strata.gas.ions import ionic_strength_of
from strata.water.density import in_situ_temperature


@compiled
def carbonate_rows(values, pressure, magnesium_share, calcium_share, constants):
    """Fill k1, k2 and kw of the carbonate system of every layer, (n, 3)."""
    for i in range(values.shape[0]):
        strength = ionic_strength_of(
            values[i, SALINITY], values[i, ALKALINITY], magnesium_share, calcium_share
        )
        in_situ = in_situ_temperature(values[i, TEMPERATURE], pressure[i])
        constants[i, 0], constants[i, 1], constants[i, 2] = carbonate_constants(
            in_situ, strength, pressure[i]
        )


@compiled
def refresh_co2(values, constants, hydrogen, layer):
    """Return free CO2 of a layer [mol m-3], refreshing its hydrogen ions."""
    co2, hydrogen[layer] = free_co2(
        values[layer, DIC],
        values[layer, ALKALINITY],
        constants[layer, 0],
        constants[layer, 1],
        constants[layer, 2],
        hydrogen[layer],
    )
    return co2


@compiled
def free_co2_rows(values, constants, hydrogen, co2):
    """Fill free CO2 of every layer [mol m-3], refreshing the hydrogen ions."""
    for i in range(values.shape[0]):
        co2[i] = refresh_co2(values, constants, hydrogen, i)


@compiled
def gas_load(values, constants, hydrogen, molar_mass, molar_volume, gas_mass, gas_volume):
    """Fill mass [kg m-3] and volume [m3 m-3] of the dissolved gases, refreshing free CO2."""
    for i in range(values.shape[0]):
        co2 = refresh_co2(values, constants, hydrogen, i)
        ch4, n2, o2, h2s = (
            values[i, METHANE],
            values[i, NITROGEN],
            values[i, OXYGEN],
            values[i, SULFIDE],
        )
        gas_mass[i] = (
            co2 * molar_mass[0]
            + ch4 * molar_mass[1]
            + n2 * molar_mass[2]
            + o2 * molar_mass[3]
            + h2s * molar_mass[4]
        )
        gas_volume[i] = (
            co2 * molar_volume[0]
            + ch4 * molar_volume[1]
            + n2 * molar_volume[2]
            + o2 * molar_volume[3]
            + h2s * molar_volume[4]
        )
