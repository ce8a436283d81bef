"""How heavy lake water is: pure water, salt, dissolved gas, pressure and adiabatic heating.

Full entries of the sources named in brackets are in ``docs/reference/sources.md``.
"""

import math
from collections.abc import Mapping

import numpy as np
from numpy.typing import ArrayLike, NDArray

from strata import ranges
from strata.compiled import broadcast, compiled
from strata.constants import ATMOSPHERE
from strata.species import SPECIES

Array = NDArray[np.float64]

#: Contraction per g/kg of ions at 20 degC, 1 atm and 4 g/kg where a site gives none.
HALINE_CONTRACTION = 0.75e-3

TEMPERATURE_RANGE = (0.0, 40.0)  # degC, of [Tanaka et al. 2001]
PRESSURE_RANGE = (0.0, 6.2e6)  # Pa absolute, where compared with IAPWS-95
SALINITY_RANGE = (0.0, 20.0)  # g/kg, where the salt term was fitted
_SOURCE = "Tanaka et al. 2001 with the compressibility of UNESCO 1981"
_SALT_SOURCE = "salt term fitted to TEOS-10"


@compiled
def _bulk_modulus(t, q):
    """Return the bulk modulus [bar] of pure water at q bar above 1 atm [UNESCO 1981]."""
    k = 19652.21 + t * (148.4206 + t * (-2.327105 + t * (1.360477e-2 - t * 5.155288e-5)))
    a = 3.239908 + t * (1.43713e-3 + t * (1.16092e-4 - t * 5.77905e-7))
    b = 8.50935e-5 + t * (-6.12293e-6 + t * 5.2787e-8)
    return k + q * (a + q * b)


@compiled
def pure_water_density(t, p):
    """Return the density [kg m-3] of pure water; see :func:`density`."""
    q = (p - ATMOSPHERE) * 1e-5
    at_surface = 999.974950 * (
        1.0 - (t - 3.983035) * (t - 3.983035) * (t + 301.797) / (522528.9 * (t + 69.34881))
    )
    return at_surface / (1.0 - q / _bulk_modulus(t, q))


@compiled
def _pure_water_expansion(t, p):
    """Return the thermal expansion [1/K] of pure water: derivative of the density above."""
    q = (p - ATMOSPHERE) * 1e-5
    d = t - 3.983035
    f = (t + 301.797) / (522528.9 * (t + 69.34881))
    df = (69.34881 - 301.797) / (522528.9 * (t + 69.34881) * (t + 69.34881))
    of_surface = (2.0 * d * f + d * d * df) / (1.0 - d * d * f)
    k = _bulk_modulus(t, q)
    dk = 148.4206 + t * (-4.65421 + t * (4.081431e-2 - t * 2.0621152e-4))
    da = 1.43713e-3 + t * (2.32184e-4 - t * 1.733715e-6)
    db = -6.12293e-6 + t * 1.05574e-7
    return of_surface + q * (dk + q * (da + q * db)) / (k * (k - q))


@compiled
def salt_density_excess(t, s, p, haline_contraction):
    """Return what salt adds to the density of water, relative to it; see :func:`density`."""
    x = t - 20.0
    q = (p - ATMOSPHERE) * 1e-5
    shape = 1.0 + x * (-2.106938e-3 + x * (4.430692e-5 + x * (-4.955355e-7 + x * 2.34691e-8)))
    shape += q * (-1.330068e-4 + x * 1.73319e-6)
    shape += (math.sqrt(abs(s)) - 2.0) * (-2.10179e-3 + x * 3.073415e-5)
    return haline_contraction * s * shape


@compiled
def _salt_expansion(t, s, p, haline_contraction):
    """Return how far salt raises the thermal expansion [1/K]."""
    x = t - 20.0
    q = (p - ATMOSPHERE) * 1e-5
    slope = -2.106938e-3 + x * (8.861384e-5 + x * (-1.4866065e-6 + x * 9.38764e-8))
    slope += q * 1.73319e-6 + (math.sqrt(abs(s)) - 2.0) * 3.073415e-5
    return -haline_contraction * s * slope


@compiled
def specific_heat(t, s, p):
    """Return the isobaric specific heat [J kg-1 K-1]; see ``transport.heat_capacity``."""
    q = (p - ATMOSPHERE) * 1e-5
    c = 4217.4 + t * (-3.720283 + t * (0.1412855 + t * (-2.654387e-3 + t * 2.093236e-5)))
    c += s * (-7.643575 + t * (0.1072763 - t * 1.38385e-3))
    c += s * math.sqrt(abs(s)) * (0.1770383 + t * (-4.07718e-3 + t * 5.148e-5))
    a = -4.9592e-1 + t * (1.45747e-2 + t * (-3.13885e-4 + t * (2.0357e-6 + t * 1.7168e-8)))
    b = 2.4931e-4 + t * (-1.08645e-5 + t * 2.87533e-7)
    return c + q * (a + q * b)


@compiled
def lapse_rate(t, s, p):
    """Return the adiabatic lapse rate [K/Pa]; see :func:`adiabatic_lapse_rate`."""
    alpha = _pure_water_expansion(t, p) + _salt_expansion(t, s, p, HALINE_CONTRACTION)
    return alpha * (t + 273.15) / (pure_water_density(t, p) * specific_heat(t, s, p))


@compiled
def _adiabatic_warming(theta, p):
    """Return in-situ minus potential temperature [K].

    Polynomial for the integral of :func:`lapse_rate` of fresh water from 1 atm, within 2e-5 K
    of it over 0-40 degC and 1-60 bar.
    """
    q = (p - ATMOSPHERE) * 1e-5
    g = -4.38297841e-4 + theta * (
        1.15123000e-4
        + theta * (-1.37298610e-6 + theta * (1.97386678e-8 - theta * 1.25454246e-10))
    )
    h = 1.18896683e-6 + theta * (-3.54814811e-8 + theta * 2.93455481e-10)
    return q * (g + q * (h - q * 8.14105931e-11))


@compiled
def in_situ_temperature(theta, p):
    """Return the in-situ temperature [degC] of water of potential temperature theta.

    The potential temperature is that at 1 atm.  Warming of fresh water; salt of 6 g/kg would
    change it by less than 0.004 K at 50 bar.
    """
    return theta + _adiabatic_warming(theta, p)


@compiled
def potential_temperature(t, p):
    """Return the temperature [degC] that water would have at 1 atm: inverse of the above."""
    theta = t - _adiabatic_warming(t, p)
    theta = t - _adiabatic_warming(theta, p)
    theta = t - _adiabatic_warming(theta, p)
    theta = t - _adiabatic_warming(theta, p)
    return t - _adiabatic_warming(theta, p)


@compiled
def in_situ_density(t, s, p, gas_mass, gas_volume, haline_contraction):
    """Return the density [kg m-3] of lake water of in-situ temperature t; see :func:`density`.

    gas_mass [kg m-3] is the sum of c M of the dissolved gases, gas_volume that of c V.
    """
    water = pure_water_density(t, p) * (1.0 + salt_density_excess(t, s, p, haline_contraction))
    return water * (1.0 - gas_volume) + gas_mass


@compiled
def parcel_density(theta, s, p, gas_mass, gas_volume, haline_contraction):
    """Return the density [kg m-3] of a parcel of potential temperature theta brought to p."""
    t = in_situ_temperature(theta, p)
    return in_situ_density(t, s, p, gas_mass, gas_volume, haline_contraction)


def gas_mass_and_volume(
    dissolved: Mapping[str, ArrayLike] | None, co2_molar_volume: float | None = None
) -> tuple[Array, Array]:
    """Return mass [kg m-3] and volume [m3 m-3] of dissolved gases in a volume of water.

    Parameters
    ----------
    dissolved : mapping of str to array_like, or None
        Concentration [mol m-3] by gas; "CO2" is the free gas, not DIC.
    co2_molar_volume : float, optional
        Partial molar volume of CO2 [m3 mol-1] of the site, instead of the table's.
    """
    mass: Array = np.zeros(())
    volume: Array = np.zeros(())
    for gas, value in (dissolved or {}).items():
        row = ranges.named("dissolved gas", gas, SPECIES)
        amount = ranges.within(
            f"dissolved {gas}", value, (0.0, 3000.0), "mol/m3", "dilute solution"
        )
        molar_volume = row.molar_volume
        if gas == "CO2" and co2_molar_volume is not None:
            molar_volume = co2_molar_volume
        mass = mass + amount * row.molar_mass
        volume = volume + amount * molar_volume
    return mass, volume


def _checked(
    temperature: ArrayLike, salinity: ArrayLike, pressure: ArrayLike
) -> tuple[Array, ...]:
    """Return temperature, salinity and pressure inside the ranges of the density."""
    return (
        ranges.within("temperature", temperature, TEMPERATURE_RANGE, "degC", _SOURCE),
        ranges.within("salinity", salinity, SALINITY_RANGE, "g/kg", _SALT_SOURCE),
        ranges.within("pressure", pressure, PRESSURE_RANGE, "Pa", _SOURCE),
    )


def density(
    temperature: ArrayLike,
    salinity: ArrayLike,
    pressure: ArrayLike,
    dissolved: Mapping[str, ArrayLike] | None = None,
    haline_contraction: float = HALINE_CONTRACTION,
    co2_molar_volume: float | None = None,
) -> Array:
    r"""Return the density of lake water with salt and dissolved gas under pressure.

    .. math:: \rho = \rho_w(T,p)\,\bigl(1 + h\,S\,f(T,p,S)\bigr)
              \Bigl(1 - \sum_i c_i V_i\Bigr) + \sum_i c_i M_i

    :math:`\rho_w` is pure water at 1 atm [Tanaka et al. 2001] carried to pressure with the
    secant bulk modulus of [UNESCO 1981].  The salt term takes the contraction h of the site's
    ions, at 20 degC, 1 atm and 4 g/kg; how it changes with temperature, pressure and salinity
    (f = 1 at that point) is fitted to sea salt in TEOS-10 [Roquet et al. 2015].

    Parameters
    ----------
    temperature : array_like
        In situ [degC], 0 to 40.
    salinity : array_like
        Mass of dissolved ions per mass of water [g kg-1], 0 to 20.
    pressure : array_like
        Absolute [Pa], up to 62 bar.
    dissolved : mapping of str to array_like, optional
        Gas concentrations [mol m-3]; "CO2" is the free gas.
    haline_contraction : float, optional
        h [kg g-1]: 0.72e-3 (NaCl) to 0.81e-3 (magnesium bicarbonate); sea salt 0.7587e-3.
    co2_molar_volume : float, optional
        Partial molar volume of CO2 [m3 mol-1]; 31.4e-6 to 35.9e-6 in the literature.

    Raises
    ------
    strata.OutOfRangeError
        If any value lies outside the range of its source.

    Examples
    --------
    >>> round(float(density(25.0, 0.0, 101325.0)), 3)
    997.047
    """
    t, s, p = _checked(temperature, salinity, pressure)
    mass, volume = gas_mass_and_volume(dissolved, co2_molar_volume)
    result: Array = broadcast(in_situ_density)(t, s, p, mass, volume, haline_contraction)
    return result


def potential_density(
    temperature: ArrayLike,
    salinity: ArrayLike,
    pressure: ArrayLike,
    dissolved: Mapping[str, ArrayLike] | None = None,
    reference_pressure: ArrayLike = ATMOSPHERE,
    haline_contraction: float = HALINE_CONTRACTION,
    co2_molar_volume: float | None = None,
) -> Array:
    """Return the density [kg m-3] that water in situ would have at another pressure.

    The parcel is moved without exchange of heat, salt or gas; arguments as in :func:`density`.
    """
    t, s, p = _checked(temperature, salinity, pressure)
    to = ranges.within("reference pressure", reference_pressure, PRESSURE_RANGE, "Pa", _SOURCE)
    mass, volume = gas_mass_and_volume(dissolved, co2_molar_volume)
    theta = broadcast(potential_temperature)(t, p)
    result: Array = broadcast(parcel_density)(theta, s, to, mass, volume, haline_contraction)
    return result


@compiled
def _expansion(t, s, p, haline_contraction):
    """Return the thermal expansion [1/K] of salt water."""
    excess = salt_density_excess(t, s, p, haline_contraction)
    return _pure_water_expansion(t, p) + _salt_expansion(t, s, p, haline_contraction) / (
        1.0 + excess
    )


def thermal_expansion(
    temperature: ArrayLike,
    salinity: ArrayLike,
    pressure: ArrayLike,
    haline_contraction: float = HALINE_CONTRACTION,
) -> Array:
    """Return -(1/rho) d rho/dT [1/K] at constant pressure and salinity, T in situ.

    The exact derivative of :func:`density` of water without gas; arguments as there.
    """
    t, s, p = _checked(temperature, salinity, pressure)
    result: Array = broadcast(_expansion)(t, s, p, haline_contraction)
    return result


@compiled
def _contraction(t, s, p, haline_contraction):
    """Return the local haline contraction [kg/g]."""
    at_four = salt_density_excess(t, 4.0, p, haline_contraction) / 4.0
    of_root = haline_contraction * (-2.10179e-3 + (t - 20.0) * 3.073415e-5)
    slope = at_four + of_root * (1.5 * math.sqrt(abs(s)) - 2.0)
    return slope / (1.0 + salt_density_excess(t, s, p, haline_contraction))


def haline_contraction_at(
    temperature: ArrayLike,
    salinity: ArrayLike,
    pressure: ArrayLike,
    haline_contraction: float = HALINE_CONTRACTION,
) -> Array:
    """Return (1/rho) d rho/dS [kg g-1] at constant temperature and pressure.

    The exact derivative of :func:`density` of water without gas; arguments as there.
    """
    t, s, p = _checked(temperature, salinity, pressure)
    result: Array = broadcast(_contraction)(t, s, p, haline_contraction)
    return result


def adiabatic_lapse_rate(
    temperature: ArrayLike, salinity: ArrayLike, pressure: ArrayLike
) -> Array:
    r"""Return how fast a parcel warms on its way down [K/Pa].

    .. math:: \Gamma = \frac{\alpha\,(T + 273.15)}{\rho\,c_p}

    with the thermal expansion and density of this module and the specific heat of
    :func:`strata.water.heat_capacity`; ranges as in :func:`density`.
    """
    t, s, p = _checked(temperature, salinity, pressure)
    result: Array = broadcast(lapse_rate)(t, s, p)
    return result
