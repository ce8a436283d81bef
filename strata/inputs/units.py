"""The units that keys and column headings may end in, and what they are in SI.

A key is the name of a quantity followed by its unit: ``depth_m``, ``flow_m3_s``.  The name is
the one that the frozen objects of the program use, so a key says where its value goes; the
unit says by what it is multiplied on the way.
"""

from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike, NDArray

_DAY = 86400.0
_YEAR = 365.25 * _DAY


class Unit(NamedTuple):
    """A unit as a user writes it."""

    factor: float  # SI value of one such unit
    words: str  # as messages and tables print it


#: Ending of a key -> the unit.  Alkalinity counts in equivalents, which SI has no name for.
UNITS = {
    "m": Unit(1.0, "m"),
    "mm": Unit(1e-3, "mm"),
    "km2": Unit(1e6, "km2"),
    "deg": Unit(1.0, "deg"),
    "degC": Unit(1.0, "degC"),
    "K": Unit(1.0, "K"),
    "bar": Unit(1e5, "bar"),
    "m3_s": Unit(1.0, "m3/s"),
    "m_s": Unit(1.0, "m/s"),
    "s": Unit(1.0, "s"),
    "per_s": Unit(1.0, "per s"),
    "mm_day": Unit(1e-3 / _DAY, "mm/day"),
    "m2_s": Unit(1.0, "m2/s"),
    "m2_s2": Unit(1.0, "m2/s2"),
    "g_kg": Unit(1.0, "g/kg"),
    "per_g_kg": Unit(1.0, "per g/kg"),
    "g_kg_per_mS_cm": Unit(1.0, "g/kg per mS/cm"),
    "mol_m3": Unit(1.0, "mol/m3"),
    "mmol_L": Unit(1.0, "mmol/L"),
    "mmol_m3": Unit(1e-3, "mmol/m3"),
    "umol_L": Unit(1e-3, "umol/L"),
    "eq_m3": Unit(1.0, "eq/m3"),
    "meq_L": Unit(1.0, "meq/L"),
    "mS_cm": Unit(1.0, "mS/cm"),
    "uS_cm": Unit(1e-3, "uS/cm"),
    "cm3_mol": Unit(1e-6, "cm3/mol"),
    "kW": Unit(1e3, "kW"),
    "W_m2": Unit(1.0, "W/m2"),
    "mW_m2": Unit(1e-3, "mW/m2"),
    "W_m3": Unit(1.0, "W/m3"),
    "W_m2_K": Unit(1.0, "W/m2/K"),
    "mol_m2_yr": Unit(1.0 / _YEAR, "mol/m2/yr"),
    "mol_m3_yr": Unit(1.0 / _YEAR, "mol/m3/yr"),
    "mol_m3_day": Unit(1.0 / _DAY, "mol/m3/day"),
    "mmol_m3_day": Unit(1e-3 / _DAY, "mmol/m3/day"),
    "m3_mol_day": Unit(1.0 / _DAY, "m3/mol/day"),
    "per_yr": Unit(1.0 / _YEAR, "per year"),
    "per_day": Unit(1.0 / _DAY, "per day"),
    "degC_per_yr": Unit(1.0, "degC per year"),
    "days": Unit(1.0, "days"),
    "share": Unit(1.0, "(share, 0 to 1)"),
}
_LONGEST_FIRST = sorted(UNITS, key=len, reverse=True)


def split(key: str) -> tuple[str, str]:
    """Return the quantity and the unit of a key; the unit is empty where there is none.

    Examples
    --------
    >>> split("flow_m3_s")
    ('flow', 'm3_s')
    >>> split("ports")
    ('ports', '')
    """
    for ending in _LONGEST_FIRST:
        if key.endswith("_" + ending):
            return key[: -len(ending) - 1], ending
    return key, ""


def words(key: str) -> str:
    """Return the unit of a key as messages print it, with a blank before it, or nothing."""
    _, ending = split(key)
    return f" {UNITS[ending].words}" if ending and ending != "share" else ""


def to_si(key: str, value: ArrayLike) -> NDArray[np.float64]:
    """Return the value of a key in SI."""
    _, ending = split(key)
    factor = UNITS[ending].factor if ending else 1.0
    return np.asarray(value, dtype=np.float64) * factor
