"""What water holds in equilibrium with the air.

:func:`equilibrium` follows from the Henry's constants that the rest of the room uses, so that
air-saturated water has the gas pressure of the air.  The sea-water fits are the literature's
own, for comparison.  Full entries of the sources named in brackets are in
``docs/reference/sources.md``.
"""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from strata import ranges
from strata.constants import DRY_AIR
from strata.gas.solubility import henry_constant
from strata.water.transport import vapour_pressure

Array = NDArray[np.float64]

# A0, A1, ... in Ts; B0, B1, ... in S Ts; C in S^2, for umol/kg at 1 atm of moist air
_SEA_WATER = {
    "N2": (
        (6.42931, 2.92704, 4.32531, 4.69149),
        (-7.44129e-3, -8.02566e-3, -1.46775e-2),
        0.0,
        "Hamme & Emerson 2004",
    ),
    "Ar": (
        (2.79150, 3.17609, 4.13116, 4.90379),
        (-6.96233e-3, -7.66670e-3, -1.16888e-2),
        0.0,
        "Hamme & Emerson 2004",
    ),
    "O2": (
        (5.80871, 3.20291, 4.17887, 5.10006, -9.86643e-2, 3.80369),
        (-7.01577e-3, -7.70028e-3, -1.13864e-2, -9.51519e-3),
        -2.75915e-7,
        "Garcia & Gordon 1992",
    ),
}


def equilibrium(
    gas: str,
    temperature: ArrayLike,
    salinity: ArrayLike,
    air_pressure: ArrayLike,
    mole_fraction: float | None = None,
) -> Array:
    r"""Return the concentration of a gas in water at equilibrium with moist air [mol m-3].

    .. math:: c = \frac{x\,(P - p_{H_2O})}{k(T, S)}

    Parameters
    ----------
    gas : str
        "N2", "O2", "Ar" or "CO2"; another gas has nil unless its share is given.
    temperature : array_like
        Of the water [degC], 0 to 40.
    salinity : array_like
        [g kg-1], 0 to 42.
    air_pressure : array_like
        At the lake surface [Pa], 30 to 110 kPa.
    mole_fraction : float, optional
        In dry air; by default that of the standard atmosphere (CO2: 420 ppm).

    Examples
    --------
    >>> round(float(equilibrium("N2", 20.0, 0.0, 101325.0)), 3)
    0.538
    """
    pressure = ranges.within(
        "air pressure", air_pressure, (3e4, 1.1e5), "Pa", "the atmosphere near the ground"
    )
    share = DRY_AIR.get(gas, 0.0) if mole_fraction is None else mole_fraction
    ranges.within("mole fraction in dry air", share, (0.0, 1.0), "", "a share")
    result: Array = np.asarray(
        share
        * (pressure - vapour_pressure(temperature))
        / henry_constant(gas, temperature, salinity)
    )
    return result


def argon_of_nitrogen(temperature: ArrayLike, salinity: ArrayLike = 0.0) -> Array:
    r"""Return the ratio Ar to N2 [mol/mol] of water at equilibrium with air of any pressure.

    .. math:: \frac{x_{Ar}\,k_{N_2}(T, S)}{x_{N_2}\,k_{Ar}(T, S)}

    Lakes are sampled for nitrogen and not for argon; everywhere in strata argon goes in this
    step with the nitrogen.
    """
    henry = [henry_constant(gas, temperature, salinity) for gas in ("N2", "Ar")]
    return np.asarray(DRY_AIR["Ar"] / DRY_AIR["N2"] * henry[0] / henry[1])


def sea_water_equilibrium(gas: str, temperature: ArrayLike, salinity: ArrayLike) -> Array:
    r"""Return a gas in equilibrium with moist air at 1 atm by the fits for sea water [mol/kg].

    .. math:: \ln C = \sum_i A_i T_s^i + S \sum_i B_i T_s^i + C_0 S^2,\qquad
              T_s = \ln\frac{298.15 - t}{273.15 + t}

    N2 and Ar after [Hamme & Emerson 2004], O2 after [Garcia & Gordon 1992]; 0 to 40 degC, sea
    salt of 0 to 42.
    """
    a, b, c, source = ranges.named("gas", gas, _SEA_WATER)
    t = ranges.within("temperature", temperature, (0.0, 40.0), "degC", source)
    s = ranges.within("salinity", salinity, (0.0, 42.0), "g/kg", source)
    if gas == "O2":
        t = 1.00024 * t  # that fit is in the temperature scale of 1968
    scaled = np.log((298.15 - t) / (273.15 + t))
    polynomial = np.polynomial.polynomial.polyval
    ln_c = polynomial(scaled, a) + s * polynomial(scaled, b) + c * s * s
    return np.asarray(1e-6 * np.exp(ln_c))
