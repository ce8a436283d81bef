"""How much gas water holds: Henry's constants for the gases in the lake.

Pure water, then salting-out.  What pressure and a real gas phase change is in the modules of
the bubble point and the flash.  Full entries of the sources named in brackets are in
``docs/reference/sources.md``.
"""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from strata import ranges
from strata.compiled import compiled
from strata.gas.henry import HIGHEST, henry_of_row, salting_out_of_row
from strata.gas.laws import Laws, LawsLike
from strata.gas.table import gas_table
from strata.species import SPECIES

Array = NDArray[np.float64]

SALINITY_RANGE = (0.0, 42.0)  # g/kg, within the 2 mol/L of Weisenberger & Schumpe 1996


def lowest_temperature(gas: str) -> float:
    """Return the lowest temperature [degC] at which a gas has a Henry's constant."""
    row = ranges.named("gas", gas, SPECIES)
    return 0.0 if row.solubility is not None else row.henry_from


def checked_temperature(gas: str, temperature: ArrayLike) -> Array:
    """Return the temperature inside the range of the gas."""
    allowed = (lowest_temperature(gas), HIGHEST)
    source = f"Henry's constant of {gas}: {SPECIES[gas].henry_source}"
    return ranges.within("temperature", temperature, allowed, "degC", source)


@compiled
def _henry_rows(t, s, alk, row, laws, out):
    """Fill out with Henry's constants of one gas."""
    for i in range(t.size):
        out[i] = henry_of_row(t[i], row) * salting_out_of_row(t[i], s[i], alk, row, laws)


def henry_constant(
    gas: str, temperature: ArrayLike, salinity: ArrayLike = 0.0, laws: LawsLike = None
) -> Array:
    r"""Return Henry's constant of a gas in lake water.

    .. math:: \ln\frac{k_x}{p_s} = \frac{A}{T_r} + \frac{B\,(1-T_r)^{0.355}}{T_r}
              + C\,e^{1-T_r}\,T_r^{-0.41}, \qquad T_r = T/T_c, \qquad
              k = k_x \frac{M_w}{\rho_w} \cdot 10^{\sum_i (h_i + h_G)\,c_i}

    The first is [IAPWS G7-04] (CH4, N2, O2, Ar, H2S); CO2 is [Weiss 1974] throughout, and the
    species table says what stands in colder water.  The power of ten is the salting-out of
    [Weisenberger & Schumpe 1996], by the ions of a bicarbonate lake (``strata.gas.ions``).

    Parameters
    ----------
    gas : str
        A name in the species table: "CH4", "CO2", "N2", "Ar", "O2" or "H2S".
    temperature : array_like
        In situ [degC], 0 to 40.
    salinity : array_like, optional
        Mass of dissolved ions per mass of water [g kg-1], 0 to 42.
    laws : Laws or mapping, optional
        Only those of salting-out count here.

    Returns
    -------
    ndarray
        Fugacity over concentration at infinite dilution and at the vapour pressure of water
        (CO2: at 1 atm) [Pa m3 mol-1]; larger is less soluble.

    Raises
    ------
    strata.OutOfRangeError
        If any value lies outside the source's range for this gas.

    Examples
    --------
    >>> round(float(henry_constant("CH4", 25.0)) / 1e3, 1)
    71.3
    """
    t = checked_temperature(gas, temperature)
    s = ranges.within(
        "salinity",
        salinity,
        SALINITY_RANGE,
        "g/kg",
        "salting-out, Weisenberger & Schumpe 1996",
    )
    t, s = np.broadcast_arrays(t, s)
    table = gas_table([gas], Laws.of(laws))
    out = np.empty(t.size)
    _henry_rows(np.array(t).ravel(), np.array(s).ravel(), 0.0, table.rows[0], table.laws, out)
    return out.reshape(t.shape)


def salting_out(
    gas: str, temperature: ArrayLike, salinity: ArrayLike, laws: LawsLike = None
) -> Array:
    """Return what the ions of a salinity multiply Henry's constant by; see there."""
    return henry_constant(gas, temperature, salinity, laws) / henry_constant(gas, temperature)
