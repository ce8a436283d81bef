r"""Dissolved carbonate: from DIC and alkalinity to free CO2, pH and calcite.

.. math:: K_1 = \frac{a_H\,a_{HCO_3}}{a_{CO_2}}, \quad K_2 = \frac{a_H\,a_{CO_3}}{a_{HCO_3}},
          \quad K_w = a_H\,a_{OH}, \qquad
          A = [HCO_3^-] + 2[CO_3^{2-}] + [HS^-] + [OH^-] - [H^+]

Constants of [Plummer & Busenberg 1982] with the effect of pressure after [Millero 1983], ion
activities after [Davies 1962], that of CO2 after [Weisenberger & Schumpe 1996].  Compiled
formulas are here, the public functions in ``speciation.py``.  Water is free of borate,
silicate and phosphate as far as alkalinity goes.
"""

import math

from strata.compiled import compiled
from strata.constants import ATMOSPHERE, GAS_CONSTANT, ZERO_CELSIUS
from strata.water.density import pure_water_density

_LN10 = 2.302585092994046
_STEPS = 200


@compiled
def _pressure_effect(t, q, volume, compressibility):
    """Return ln K(p) - ln K(1 atm) of a volume [cm3/mol] and compressibility [cm3/mol/bar]."""
    rt = 10.0 * GAS_CONSTANT * (t + ZERO_CELSIUS)  # cm3 bar mol-1
    return q * (-volume + 0.5 * compressibility * q) / rt


@compiled
def ln_first_constant(t, p):
    """Return ln K1 of carbonic acid [mol/kg]."""
    kelvin = t + ZERO_CELSIUS
    lg = -356.3094 - 0.06091964 * kelvin + 21834.37 / kelvin
    lg += 126.8339 / _LN10 * math.log(kelvin) - 1684915.0 / (kelvin * kelvin)
    volume = -30.54 + t * (0.1849 - t * 2.3366e-3)
    compressibility = 1e-3 * (-6.22 + t * (0.1368 - t * 1.233e-3))
    return _LN10 * lg + _pressure_effect(t, (p - ATMOSPHERE) * 1e-5, volume, compressibility)


@compiled
def ln_second_constant(t, p):
    """Return ln K2 of carbonic acid [mol/kg]."""
    kelvin = t + ZERO_CELSIUS
    lg = -107.8871 - 0.03252849 * kelvin + 5151.79 / kelvin
    lg += 38.92561 / _LN10 * math.log(kelvin) - 563713.9 / (kelvin * kelvin)
    volume = -29.81 + t * (0.1150 - t * 1.816e-3)
    compressibility = 1e-3 * (-5.74 + t * (0.093 - t * 1.896e-3))
    return _LN10 * lg + _pressure_effect(t, (p - ATMOSPHERE) * 1e-5, volume, compressibility)


@compiled
def ln_water_constant(t, p):
    """Return ln Kw of water [mol2/kg2], [Ball & Nordstrom 1991]."""
    kelvin = t + ZERO_CELSIUS
    lg = -283.971 - 0.05069842 * kelvin + 13323.0 / kelvin
    lg += 102.24447 / _LN10 * math.log(kelvin) - 1119669.0 / (kelvin * kelvin)
    volume = -25.60 + t * (0.2324 - t * 3.6246e-3)
    compressibility = 1e-3 * (-7.33 + t * (0.1368 - t * 1.233e-3))
    return _LN10 * lg + _pressure_effect(t, (p - ATMOSPHERE) * 1e-5, volume, compressibility)


@compiled
def ln_sulfide_constant(t, p):
    """Return ln K of H2S = HS- + H+ [mol/kg], [Millero 1986] at no salinity."""
    kelvin = t + ZERO_CELSIUS
    ln_k = 225.838 - 13275.3 / kelvin - 34.6435 * math.log(kelvin)
    volume = -11.07 + t * (-0.009 - t * 0.942e-3)
    compressibility = 1e-3 * (-2.89 + t * 0.054)
    return ln_k + _pressure_effect(t, (p - ATMOSPHERE) * 1e-5, volume, compressibility)


@compiled
def ln_calcite_product(t, p):
    """Return ln of the solubility product of calcite [mol2/kg2]; pressure [Millero 1995]."""
    kelvin = t + ZERO_CELSIUS
    lg = -171.9065 - 0.077993 * kelvin + 2839.319 / kelvin + 71.595 / _LN10 * math.log(kelvin)
    volume = -48.76 + 0.5304 * t
    compressibility = 1e-3 * (-11.76 + 0.3692 * t)
    return _LN10 * lg + _pressure_effect(t, (p - ATMOSPHERE) * 1e-5, volume, compressibility)


@compiled
def ln_aragonite_product(t, p):
    """Return ln of the solubility product of aragonite [mol2/kg2]; pressure [Millero 1995]."""
    kelvin = t + ZERO_CELSIUS
    lg = -171.9773 - 0.077993 * kelvin + 2903.293 / kelvin + 71.595 / _LN10 * math.log(kelvin)
    volume = -45.96 + 0.5304 * t
    compressibility = 1e-3 * (-11.76 + 0.3692 * t)
    return _LN10 * lg + _pressure_effect(t, (p - ATMOSPHERE) * 1e-5, volume, compressibility)


@compiled
def ln_activity_of_one(t, ionic_strength):
    """Return ln of the activity coefficient of a singly charged ion [Davies 1962].

    That of a doubly charged one is four times it.  The permittivity of water is that of
    [Malmberg & Maryott 1956].
    """
    permittivity = 87.740 + t * (-0.40008 + t * (9.398e-4 - t * 1.410e-6))
    x = permittivity * (t + ZERO_CELSIUS)
    root = math.sqrt(ionic_strength)
    shape = root / (1.0 + root) - 0.3 * ionic_strength
    return -_LN10 * 1.82e6 / (x * math.sqrt(x)) * shape


@compiled
def ln_activity_of_co2(t, ionic_strength):
    """Return ln of the activity coefficient of CO2 in sodium bicarbonate of that strength."""
    of_gas = -0.0172 - 0.338e-3 * (t - 25.0)
    return _LN10 * ionic_strength * (0.1143 + 0.0967 + 2.0 * of_gas)


@compiled
def dilute_constants(t, p):
    """Return ln K1, ln K2 and ln Kw without ions [mol/kg]."""
    return ln_first_constant(t, p), ln_second_constant(t, p), ln_water_constant(t, p)


@compiled
def with_activities(dilute, ln_one, ln_co2, water):
    """Return k1, k2, kw of dilute constants, activities and kg of water per m3."""
    k1 = water * math.exp(dilute[0] + ln_co2 - 2.0 * ln_one)
    k2 = water * math.exp(dilute[1] - 4.0 * ln_one)
    kw = water * water * math.exp(dilute[2] - 2.0 * ln_one)
    return k1, k2, kw


@compiled
def carbonate_constants(t, ionic_strength, p):
    """Return k1, k2 [mol m-3] and kw [mol2 m-6] for concentrations: activities are folded in.

    Parameters
    ----------
    t : float
        In situ [degC].
    ionic_strength : float
        [mol/L], see ``strata.gas.ions``; Davies stands to 0.5.
    p : float
        Absolute [Pa].
    """
    ln_one = ln_activity_of_one(t, ionic_strength)
    ln_co2 = ln_activity_of_co2(t, ionic_strength)
    return with_activities(dilute_constants(t, p), ln_one, ln_co2, pure_water_density(t, p))


@compiled
def free_co2(dic, alk, k1, k2, kw, h_guess):
    """Return free CO2 and the hydrogen ion [mol m-3] of water.

    The alkalinity written as a quartic in h has one positive root (one change of sign) and is
    convex above it, so Newton's method comes down to it from any guess that is large enough; a
    guess that is not is raised.

    Parameters
    ----------
    dic, alk : float
        [mol m-3].
    k1, k2, kw : float
        Of :func:`carbonate_constants`.
    h_guess : float
        Hydrogen ion to start from [mol m-3], positive: that of the last step, or 1e-4.
    """
    h = h_guess
    c3 = alk + k1
    c2 = k1 * (alk - dic + k2) - kw
    c1 = k1 * (k2 * (alk - 2.0 * dic) - kw)
    c0 = -kw * k1 * k2
    for _ in range(_STEPS):
        f = c0 + h * (c1 + h * (c2 + h * (c3 + h)))
        slope = c1 + h * (2.0 * c2 + h * (3.0 * c3 + 4.0 * h))
        step = f / slope
        if slope > 0.0 and step < h:
            h -= step
            if abs(step) <= 1e-6 * h:  # Newton's error is the square of its step
                break
        else:
            h *= 8.0
    return dic * h * h / (h * h + k1 * (h + k2)), h


@compiled
def hydrogen_of_co2(co2, alk, k1, k2, kw):
    """Return the hydrogen ion [mol m-3] of water of a given free CO2 and alkalinity.

    Newton's method on the cubic h3 + A h2 - (k1 c + kw) h - 2 k1 k2 c, which has one change of
    sign.
    """
    linear = k1 * co2 + kw
    last = 2.0 * k1 * k2 * co2
    h = 1.0 + math.sqrt(linear) + last ** (1.0 / 3.0)
    if alk > 0.0:
        h = min(h, 2.0 * (linear / alk + math.sqrt(last / alk)) + 1e-30)
    for _ in range(_STEPS):
        f = h * (h * (h + alk) - linear) - last
        slope = h * (3.0 * h + 2.0 * alk) - linear
        step = f / slope
        if slope > 0.0 and step < h:
            h -= step
            if abs(step) <= 1e-14 * h:
                break
        else:
            h *= 8.0
    return h
