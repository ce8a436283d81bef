r"""What the air does to the lake: heat exchange as it follows from weather, month by month.

The net heat through the surface is written as K (E - T) [E68, E74]: E is the temperature at
which gain and loss balance, K the slope of the loss there.  Gain and loss of water at T under
air of temperature T_a, dew point T_d and wind W:

.. math:: H(T) = (1-a)\,S + (1-r)\,\varepsilon_a\sigma T_a^4 - \varepsilon\sigma T^4
          - f(W)\,[e_s(T) - e_a] - c_B\,f(W)\,(T - T_a)

with S the sun on a level surface, a its reflected share, r = 0.03 that of long waves,
emissivity of water 0.97 [E74]; f(W) = 9.2 + 0.46 W^2 W m-2 per mmHg, W at 7 m [BGG69]; c_B =
0.47 mmHg/K at one atmosphere, in proportion to air pressure [B26]; emissivity of the clear air
by [Br75], raised by 1 + 0.17 C^2 under a share C of cloud [TVA72].  Cloud follows from sun by
[A24] where it is not given.

[E68] Edinger, Duttweiler & Geyer 1968, Water Resour. Res. 4:1137-1143.
[E74] Edinger, Brady & Geyer 1974, Heat exchange and transport in the environment, EPRI
74-049-00-3.
[BGG69] Brady, Graves & Geyer 1969, Surface heat exchange at power plant cooling lakes, EEI
69-901.
[B26] Bowen 1926, Phys. Rev. 27:779-787.
[Br75] Brutsaert 1975, Water Resour. Res. 11:742-744: 1.24 (e_a / T_a)^(1/7), e_a in hPa.
[TVA72] Tennessee Valley Authority 1972, Heat and mass transfer between a water surface and the
atmosphere, Report 14.
[A24] Angstrom 1924, Q. J. R. Meteorol. Soc. 50:121-126, with the shares of Allen et al. 1998
(FAO
Irrigation and Drainage Paper 56): S / S_0 = 0.25 + 0.50 (1 - C), S_0 the sun above the air.
"""

import math
from dataclasses import dataclass
from datetime import date

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import brentq

from strata.constants import ATMOSPHERE, ZERO_CELSIUS
from strata.errors import OutOfRangeError
from strata.lake.site import Climate
from strata.randomness import generator
from strata.water.transport import vapour_pressure

Array = NDArray[np.float64]

STEFAN_BOLTZMANN = 5.670374e-8  # W m-2 K-4 (CODATA)
WATER_EMISSIVITY = 0.97
REFLECTED_SUN = 0.06  # Anderson 1954, USGS Prof. Paper 269
REFLECTED_LONG_WAVES = 0.03
MMHG = 133.322  # Pa
BOWEN = 0.47 * MMHG / ATMOSPHERE  # per K and Pa of air pressure
SOLAR_CONSTANT = 1366.7  # W m-2, 0.0820 MJ m-2 min-1 of Allen et al. 1998
#: Shares of the sun above the air that come through full cloud, and through a clear sky
#: besides.
OVERCAST, CLEAR = 0.25, 0.50
#: More than this share of the sun above the air reaches no lake, high mountains included.
MOST_SUN = 0.85
#: Daily mean above the air [W m-2] below which it says nothing about cloud.
NO_SUN = 10.0
#: Monthly means stand for the middle of the month.
MID_MONTH = np.array(
    [15, 46, 74, 105, 135, 166, 196, 227, 258, 288, 319, 349]
)  # day of the year
#: Where the balance is looked for [degC].
_BRACKET = (0.0, 60.0)
WATER_DENSITY = 998.0  # kg m-3, turns evaporated mass into depth
#: Wind at 7 m over wind at 10 m: logarithmic profile over open water of roughness 0.2 mm.
_TO_7_M = math.log(7.0 / 2e-4) / math.log(10.0 / 2e-4)


@dataclass(frozen=True)
class Weather:
    """What the air does during one visit of the clock."""

    equilibrium_temperature: float  # degC
    exchange_coefficient: float  # W m-2 K-1
    wind_speed: float  # m/s
    rain: float  # m/s
    evaporation: float  # m/s


def weather(climate: Climate, day: date, begin: date, seed: int = 0) -> Weather:
    """Return the weather of the month that a day lies in.

    Trend since ``begin`` and the year's own anomaly are included: every calendar year draws
    one deviation of the equilibrium temperature and one factor of the wind (log-normal, mean
    1), each by its seed and year alone.

    Parameters
    ----------
    climate : Climate
    day, begin : date
        Of the weather, and of the start of the run, from which the trend counts.
    seed : int
        Which of all the sequences of years with this variability.
    """
    month = day.month - 1
    years = (day - begin).days / 365.25
    warmer, windier = 0.0, 1.0
    if climate.temperature_variability > 0.0 or climate.wind_variability > 0.0:
        warmth, wind = generator(seed, "weather of a year", day.year).standard_normal(2)
        warmer = climate.temperature_variability * float(warmth)
        spread = math.sqrt(math.log1p(climate.wind_variability**2))
        windier = math.exp(spread * float(wind) - 0.5 * spread**2)
    return Weather(
        equilibrium_temperature=float(climate.equilibrium_temperature[month])
        + climate.trend * years
        + warmer,
        exchange_coefficient=float(climate.exchange_coefficient[month]),
        wind_speed=float(climate.wind_speed[month]) * windier,
        rain=float(climate.rain[month]),
        evaporation=float(climate.evaporation[month]),
    )


@dataclass(frozen=True)
class Air:
    """Monthly means over the lake; arrays of one length."""

    temperature: Array  # degC
    dew_point: Array  # degC
    sun: Array  # W m-2 on a level surface, before reflection
    wind_speed: Array  # m/s at 10 m
    cloud: Array  # share of the sky
    pressure: float  # Pa


@dataclass(frozen=True)
class SurfaceExchange:
    """How the surface answers to the air, month by month."""

    equilibrium_temperature: Array  # degC
    coefficient: Array  # W m-2 K-1
    evaporation: Array  # m/s, of water at the equilibrium temperature


def surface_exchange(air: Air) -> SurfaceExchange:
    """Return equilibrium temperature, exchange coefficient and evaporation from weather.

    Raises
    ------
    strata.OutOfRangeError
        If water would have to be colder than 0 or warmer than 60 degC, or the air is colder
        than the vapour pressure curve of liquid water goes.
    """
    months = range(len(air.temperature))
    balance = np.array([_balance_temperature(air, month) for month in months])
    return SurfaceExchange(balance, heat_slope(balance, air), evaporation(balance, air))


def _balance_temperature(air: Air, month: int) -> float:
    """Return the temperature of no net exchange in one month [degC]."""

    def gain(temperature: float) -> float:
        return float(heat_gain(np.full_like(air.temperature, temperature), air)[month])

    low, high = _BRACKET
    if gain(low) < 0.0 or gain(high) > 0.0:
        raise OutOfRangeError(
            f"the weather of month {month + 1} would bring the water below {low:g} or above"
            f" {high:g} degC; liquid water in between is allowed (heat balance of the surface)"
        )
    return float(brentq(gain, low, high, xtol=1e-10))


def heat_gain(temperature: Array, air: Air) -> Array:
    """Return the net heat into water of a surface temperature [W m-2]; see the module."""
    vapour = vapour_pressure(air.dew_point)
    kelvin = air.temperature + ZERO_CELSIUS
    clear = 1.24 * (vapour / 100.0 / kelvin) ** (1.0 / 7.0)
    from_air = (1.0 - REFLECTED_LONG_WAVES) * clear * (1.0 + 0.17 * air.cloud**2)
    long_waves = STEFAN_BOLTZMANN * (
        from_air * kelvin**4 - WATER_EMISSIVITY * (temperature + ZERO_CELSIUS) ** 4
    )
    turbulent = wind_function(air.wind_speed) * (
        vapour_pressure(temperature)
        - vapour
        + BOWEN * air.pressure * (temperature - air.temperature)
    )
    return np.asarray((1.0 - REFLECTED_SUN) * air.sun + long_waves - turbulent)


def heat_slope(temperature: Array, air: Air) -> Array:
    """Return how much more heat is lost per kelvin of surface temperature [W m-2 K-1]."""
    half = 0.01  # K, half the step of the central difference of the vapour pressure
    rise = (vapour_pressure(temperature + half) - vapour_pressure(temperature - half)) / (
        2 * half
    )
    radiation = 4.0 * WATER_EMISSIVITY * STEFAN_BOLTZMANN * (temperature + ZERO_CELSIUS) ** 3
    return np.asarray(
        radiation + wind_function(air.wind_speed) * (rise + BOWEN * air.pressure)
    )


def evaporation(temperature: Array, air: Air) -> Array:
    """Return how fast water of a surface temperature evaporates [m/s]; dew is negative.

    Latent heat 2.501e6 - 2361 T J/kg (Stull 1988, An introduction to boundary layer
    meteorology).
    """
    heat = wind_function(air.wind_speed) * (
        vapour_pressure(temperature) - vapour_pressure(air.dew_point)
    )
    return np.asarray(heat / ((2.501e6 - 2361.0 * temperature) * WATER_DENSITY))


def wind_function(wind_speed: Array) -> Array:
    """Return the heat of evaporation per vapour pressure difference [W m-2 Pa-1], [BGG69]."""
    return np.asarray((9.2 + 0.46 * (_TO_7_M * wind_speed) ** 2) / MMHG)


def sun_above_the_air(latitude: float, day_of_year: Array) -> Array:
    """Return the daily mean sun above the air [W m-2] on a level (Allen et al. 1998)."""
    angle = 2.0 * math.pi * np.asarray(day_of_year, dtype=np.float64) / 365.0
    nearness = 1.0 + 0.033 * np.cos(angle)
    declination = 0.409 * np.sin(angle - 1.39)
    phi = math.radians(latitude)
    # beyond the polar circles the sun stays up or down: the arc ends at half the day or at
    # none
    sunset = np.arccos(np.clip(-math.tan(phi) * np.tan(declination), -1.0, 1.0))
    arc = sunset * math.sin(phi) * np.sin(declination)
    arc += math.cos(phi) * np.cos(declination) * np.sin(sunset)
    return np.asarray(SOLAR_CONSTANT / math.pi * nearness * arc)


def cloud_of_sun(sun: Array, latitude: float) -> Array:
    """Return the share of the sky under cloud, from twelve monthly means of sun [W m-2].

    By the relation of [A24]; a month darker than its full cloud or brighter than its clear sky
    counts as the one or the other.

    Raises
    ------
    strata.OutOfRangeError
        If a month has more sun than comes through any air, less than a quarter of what full
        cloud lets through, or hardly any above the air.
    """
    above = sun_above_the_air(latitude, MID_MONTH)
    for month, (given, whole) in enumerate(zip(sun, above, strict=True), 1):
        if whole < NO_SUN:
            raise OutOfRangeError(
                f"the sun of month {month} at latitude {latitude:g} is too low to tell cloud"
                " from; give the share of cloud itself"
            )
        low, high = 0.25 * OVERCAST * whole, MOST_SUN * whole
        if not low <= given <= high:
            raise OutOfRangeError(
                f"sun is {given:g} W/m2 in month {month}; {low:.0f} to {high:.0f} W/m2 is"
                f" allowed at latitude {latitude:g} (sun above the air)"
            )
    return np.asarray(np.clip(1.0 - (sun / above - OVERCAST) / CLEAR, 0.0, 1.0))
