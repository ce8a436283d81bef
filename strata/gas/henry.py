"""Henry's constants and salting-out as compiled formulas on one row of the table of gases.

The public functions are in ``solubility.py``.  Full entries of the sources named in brackets
are in ``docs/reference/sources.md``.
"""

import math

from strata.compiled import compiled
from strata.constants import ATMOSPHERE, WATER_MASS, ZERO_CELSIUS
from strata.gas import columns as at
from strata.species import Species
from strata.water.density import pure_water_density
from strata.water.transport import vapour_pressure_at

HIGHEST = 40.0  # degC, of the sea-water style fits and of the density of water


@compiled
def _ln_of_guideline(t, a, b, c):
    """Return ln of Henry's constant [Pa m3 mol-1] by the three numbers of [IAPWS G7-04]."""
    x = (t + ZERO_CELSIUS) / 647.096
    ln_of_fraction = math.log(vapour_pressure_at(t)) + (
        a / x + b * (1.0 - x) ** 0.355 / x + c * math.exp(1.0 - x) * x**-0.41
    )
    return ln_of_fraction + math.log(WATER_MASS / pure_water_density(t, ATMOSPHERE))


@compiled
def _ln_solubility(t, a1, a2, a3):
    """Return ln of a solubility in the form of [Weiss 1974]."""
    hundreds = (t + ZERO_CELSIUS) / 100.0
    return a1 + a2 / hundreds + a3 * math.log(hundreds)


@compiled
def henry_of_row(t, row):
    """Return Henry's constant [Pa m3 mol-1] in pure water from one row of the table."""
    if t >= row[at.JOIN_AT]:
        return math.exp(_ln_of_guideline(t, row[0], row[1], row[2]))
    ln_solubility = _ln_solubility(t, row[3], row[4], row[5])
    if row[at.JOIN_AT] > HIGHEST:
        return ATMOSPHERE * math.exp(-ln_solubility) / pure_water_density(t, ATMOSPHERE)
    return math.exp(row[at.JOIN] - ln_solubility)


@compiled
def salting_out_of_row(t, s, alk, row, laws):
    """Return what ions multiply Henry's constant by; see :mod:`strata.gas.solubility`."""
    if laws[at.SALTING_MODE] == 0.0:
        return 1.0
    equivalents = 1e-3 * max(s * (0.998 + 0.75e-3 * s) / laws[at.ION_MASS], alk)
    if laws[at.SALTING_MODE] == 1.0:
        of_gas = row[at.SALTING] + row[at.SALTING_SLOPE] * (t - 25.0)
        return 10.0 ** (equivalents * (laws[at.SALTING_PART] + laws[at.ION_NUMBER] * of_gas))
    water_share = (1.0 + 0.75e-3 * s) * (1.0 - 1e-3 * s)
    strength = laws[at.ION_STRENGTH] * equivalents
    return 10.0 ** (row[at.SALTING_GENERIC] * strength) / water_share


def join_of(row: Species) -> float:
    """Return what ties the cold fit of a gas to its value at the foot of the guideline."""
    if row.henry is None or row.solubility is None:
        return 0.0
    t = row.henry_from
    return float(_ln_of_guideline(t, *row.henry) + _ln_solubility(t, *row.solubility))
