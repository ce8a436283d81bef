"""How water carries heat, salt and momentum: heat capacity, viscosity, conductivity, vapour.

Full entries of the sources named in brackets are in ``docs/reference/sources.md``.
"""

import math

import numpy as np
from numpy.typing import ArrayLike, NDArray

from strata import ranges
from strata.compiled import broadcast, compiled
from strata.constants import ATMOSPHERE, GAS_CONSTANT, ZERO_CELSIUS
from strata.water.density import pure_water_density, specific_heat

Array = NDArray[np.float64]

_LIQUID = (0.0, 40.0)  # degC
_LIQUID_SOURCE = "IAPWS SR6-08, liquid water near 1 atm"


@compiled
def vapour_pressure_at(t):
    """Return the vapour pressure [Pa] of pure water; see :func:`vapour_pressure`."""
    kelvin = t + ZERO_CELSIUS
    x = 1.0 - kelvin / 647.096
    root = math.sqrt(x)
    x3 = x * x * x
    series = x * (-7.85951783 + 1.84408259 * root)
    series += x3 * (-11.7866497 + 22.6807411 * root)
    series += x3 * x * (-15.9618719 + 1.80122502 * x3 * root)
    return 22.064e6 * math.exp(647.096 / kelvin * series)


def vapour_pressure(temperature: ArrayLike) -> Array:
    r"""Return the saturated vapour pressure of pure water [Pa], 0 to 100 degC.

    .. math:: \ln\frac{p}{p_c} = \frac{T_c}{T}\sum_i a_i (1-T/T_c)^{n_i}

    [Wagner & Pruss 1993], the equation that the guideline [IAPWS G7-04] builds on.
    """
    t = ranges.within(
        "temperature",
        temperature,
        (0.0, 100.0),
        "degC",
        "vapour pressure, Wagner & Pruss 1993",
    )
    result: Array = broadcast(vapour_pressure_at)(t)
    return result


@compiled
def dynamic_viscosity_at(t):
    """Return the viscosity [Pa s] of pure water; see :func:`dynamic_viscosity`."""
    x = (t + ZERO_CELSIUS) / 300.0
    return 1e-6 * (
        280.68 * x**-1.9 + 511.45 * x**-7.7 + 61.131 * x**-19.6 + 0.45903 * x**-40.0
    )


def dynamic_viscosity(temperature: ArrayLike) -> Array:
    r"""Return the dynamic viscosity of pure water near 1 atm [Pa s], 0 to 40 degC.

    .. math:: \mu = 10^{-6} \sum_i a_i (T/300)^{b_i}

    [IAPWS SR6-08].  Pressure up to 60 bar changes it by less than 0.8 %.
    """
    t = ranges.within("temperature", temperature, _LIQUID, "degC", _LIQUID_SOURCE)
    result: Array = broadcast(dynamic_viscosity_at)(t)
    return result


@compiled
def kinematic_viscosity_at(t):
    """Return the viscosity over the density [m2/s] of pure water at 1 atm."""
    return dynamic_viscosity_at(t) / pure_water_density(t, ATMOSPHERE)


def kinematic_viscosity(temperature: ArrayLike) -> Array:
    """Return :func:`dynamic_viscosity` over the density at 1 atm [m2/s], 0 to 40 degC."""
    t = ranges.within("temperature", temperature, _LIQUID, "degC", _LIQUID_SOURCE)
    result: Array = broadcast(kinematic_viscosity_at)(t)
    return result


@compiled
def _conductivity(t):
    """Return the thermal conductivity; see :func:`thermal_conductivity`."""
    x = (t + ZERO_CELSIUS) / 300.0
    return 1.6630 * x**-1.15 - 1.7781 * x**-3.4 + 1.1567 * x**-6.0 - 0.432115 * x**-7.6


def thermal_conductivity(temperature: ArrayLike) -> Array:
    r"""Return the thermal conductivity of pure water near 1 atm [W m-1 K-1], 0 to 40 degC.

    .. math:: \lambda = \sum_i c_i (T/300)^{d_i}

    [IAPWS SR6-08].  Pressure up to 60 bar raises it by less than 0.9 %.
    """
    t = ranges.within("temperature", temperature, _LIQUID, "degC", _LIQUID_SOURCE)
    result: Array = broadcast(_conductivity)(t)
    return result


def heat_capacity(
    temperature: ArrayLike, salinity: ArrayLike = 0.0, pressure: ArrayLike = ATMOSPHERE
) -> Array:
    """Return the specific heat of lake water at constant pressure [J kg-1 K-1].

    Polynomials in temperature, salinity and pressure of [Fofonoff & Millard 1983], which rest
    on [Millero, Perron & Desnoyers 1973]; 0 to 40 degC, 0 to 42 g/kg, up to 62 bar.
    """
    source = "specific heat of Fofonoff & Millard 1983"
    t = ranges.within("temperature", temperature, _LIQUID, "degC", source)
    s = ranges.within("salinity", salinity, (0.0, 42.0), "g/kg", source)
    p = ranges.within("pressure", pressure, (0.0, 6.2e6), "Pa", source)
    result: Array = broadcast(specific_heat)(t, s, p)
    return result


@compiled
def heat_diffusivity(t):
    """Return the thermal diffusivity [m2/s] of fresh water at 1 atm, for the time loop.

    Quartic for conductivity over density and specific heat, within 0.001 % of their quotient
    over 0-40 degC; see :func:`thermal_diffusivity`.
    """
    return 1e-7 * (
        1.31772741
        + t * (7.1526202e-3 + t * (-9.3853460e-5 + t * (1.37925967e-6 - t * 1.01606847e-8)))
    )


def thermal_diffusivity(temperature: ArrayLike) -> Array:
    r"""Return the thermal diffusivity of fresh water at 1 atm [m2/s], 0 to 40 degC.

    .. math:: \kappa = \frac{\lambda}{\rho\,c_p}

    of the conductivity, density and specific heat of this room, by a quartic.
    """
    t = ranges.within("temperature", temperature, _LIQUID, "degC", _LIQUID_SOURCE)
    result: Array = broadcast(heat_diffusivity)(t)
    return result


@compiled
def salt_diffusivity(t):
    """Return the diffusivity [m2/s] of sodium bicarbonate; see :func:`salt_diffusion`."""
    return 1.2505e-9 * math.exp(
        -18970.0 / GAS_CONSTANT * (1.0 / (t + ZERO_CELSIUS) - 1.0 / 298.15)
    )


def salt_diffusion(temperature: ArrayLike) -> Array:
    r"""Return the mutual diffusivity of dilute sodium bicarbonate [m2/s], 0 to 40 degC.

    .. math:: D = \frac{2 D_+ D_-}{D_+ + D_-}\quad\text{at 25 degC},\qquad
              D \propto e^{-E_a/RT},\ E_a = 18.97\ \mathrm{kJ/mol}

    Nernst-Hartley relation with the ion diffusivities of [Robinson & Stokes 1959]; the
    activation energy is that of the same relation between 5 and 30 degC.  Magnesium and
    calcium bicarbonate are 20 % slower, sodium chloride 29 % faster.
    """
    t = ranges.within("temperature", temperature, _LIQUID, "degC", "Nernst-Hartley relation")
    result: Array = broadcast(salt_diffusivity)(t)
    return result
