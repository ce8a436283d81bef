"""The carbonate system of lake water by its parts, with ion pairs of magnesium and calcium.

Full entries of the sources named in brackets are in ``docs/reference/sources.md``.
"""

import math
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from strata import ranges
from strata.compiled import compiled
from strata.constants import ATMOSPHERE, ZERO_CELSIUS
from strata.errors import ComputationError, OutOfRangeError
from strata.gas.carbonate import (
    dilute_constants,
    free_co2,
    ln_activity_of_co2,
    ln_activity_of_one,
    ln_aragonite_product,
    ln_calcite_product,
    ln_second_constant,
    ln_sulfide_constant,
    with_activities,
)
from strata.gas.ions import equivalents_of
from strata.water.density import pure_water_density

Array = NDArray[np.float64]

_LN10 = math.log(10.0)
_ROUNDS = 300
SETTLED = 1e-9  # relative change of ions and pairs in the last round
_SOURCE = "carbonate constants, Plummer & Busenberg 1982"
_DAVIES = "activities, Davies 1962"

# Columns of what the solver fills
PH, CO2, HCO3, CO3, FREE_HCO3, FREE_CO3, H, OH, HS, FREE_CA, STRENGTH, CALCITE, ARAGONITE = (
    range(13)
)
COLUMNS = 13


@compiled
def _pair_constants(t):
    """Return the constants [kg/mol] of MgHCO3+, MgCO3, CaHCO3+ and CaCO3 as ions meet.

    Magnesium: [Siebert & Hostetler 1977] as compiled by [Nordstrom et al. 1990]; CaCO3:
    [Plummer & Busenberg 1982]; CaHCO3+: [Parkhurst & Appelo 2013], weaker than that of 1982.
    """
    kelvin = t + ZERO_CELSIUS
    lg = math.log10(kelvin)
    mg_hco3 = -59.215 + 2537.455 / kelvin + 20.92298 * lg
    mg_co3 = 0.991 + 0.00667 * kelvin
    ca_hco3 = -6.009 + 0.03377 * kelvin + 2044.0 / kelvin
    ca_hco3 += ln_second_constant(t, ATMOSPHERE) / _LN10
    ca_co3 = -1228.732 - 0.299444 * kelvin + 35512.75 / kelvin + 485.818 * lg
    return 10.0**mg_hco3, 10.0**mg_co3, 10.0**ca_hco3, 10.0**ca_co3


@compiled
def _sulfide_ion(dic, alk, k1, k2, kw, sulfide, split, h):
    """Return HS- [mol m-3]: what of the sulfide the hydrogen ion leaves, by bisection."""
    low, high = 0.0, sulfide
    if split == 0.0:
        return 0.0
    for _ in range(_ROUNDS):
        hs = 0.5 * (low + high)
        if hs in (low, high):
            break
        _, h = free_co2(dic, alk - hs, k1, k2, kw, h)
        if sulfide * split / (split + h) > hs:
            low = hs
        else:
            high = hs
    return 0.5 * (low + high)


@compiled
def solve_carbonate(t, p, dic, alk, mono, magnesium, calcium, sulfide, h, out):
    """Fill out with the species [mol m-3] of water of known DIC and alkalinity.

    mono is the sum of cations other than magnesium and calcium; anions other than those of
    alkalinity balance the charge.  Rounds of the plain solution with what pairs and activities
    make of the constants.  Returns the last relative change of ions and pairs.
    """
    water = pure_water_density(t, p)
    dilute = dilute_constants(t, p)
    cations = mono + 2.0 * (magnesium + calcium)
    anions = max(0.0, cations - alk)
    free_mg, free_ca, hs = magnesium, calcium, 0.0
    strength = 0.5e-3 * (mono + 4.0 * (magnesium + calcium) + max(alk, 0.0) + anions)
    paired = magnesium > 0.0 or calcium > 0.0
    pairs = _pair_constants(t) if paired else (0.0, 0.0, 0.0, 0.0)
    ln_sulfide = ln_sulfide_constant(t, p) if sulfide > 0.0 else 0.0
    change = 1.0
    for _ in range(_ROUNDS):
        ln_one = ln_activity_of_one(t, strength)
        two = math.exp(4.0 * ln_one) if paired else 1.0
        k1, k2, kw = with_activities(dilute, ln_one, ln_activity_of_co2(t, strength), water)
        of_hco3 = 1.0
        of_co3 = 1.0
        if paired:
            of_hco3 += (pairs[0] * free_mg + pairs[2] * free_ca) * two / water
            of_co3 += (pairs[1] * free_mg + pairs[3] * free_ca) * two * two / water
        of_sulfide = 0.0
        if sulfide > 0.0:
            of_sulfide = water * math.exp(ln_sulfide - 2.0 * ln_one)
        first, second = k1 * of_hco3, k2 * of_co3 / of_hco3
        hs = _sulfide_ion(dic, alk, first, second, kw, sulfide, of_sulfide, h)
        co2, h = free_co2(dic, alk - hs, first, second, kw, h)
        hco3 = k1 * co2 / h  # free of pairs
        co3 = k2 * hco3 / h
        if change < 1e-11:
            break
        before = strength + free_mg + free_ca + hs
        if paired:
            free_mg = magnesium / (
                1.0 + two / water * (pairs[0] * hco3 + pairs[1] * two * co3)
            )
            free_ca = calcium / (1.0 + two / water * (pairs[2] * hco3 + pairs[3] * two * co3))
        single = mono + hco3 * of_hco3 + kw / h + h + hs + anions
        strength = 0.5e-3 * (single + 4.0 * (free_mg + free_ca + co3))
        change = abs(strength + free_mg + free_ca + hs - before) / (before + 1e-30)
    out[PH] = -(math.log(h / water) + ln_one) / _LN10
    out[CO2] = co2
    out[HCO3] = hco3 * of_hco3
    out[CO3] = co3 * of_co3
    out[FREE_HCO3] = hco3
    out[FREE_CO3] = co3
    out[H] = h
    out[OH] = kw / h
    out[HS] = hs
    out[FREE_CA] = free_ca
    out[STRENGTH] = strength
    out[CALCITE] = -math.inf
    out[ARAGONITE] = -math.inf
    if free_ca * co3 > 0.0:
        ln_product = math.log(free_ca * co3 / (water * water)) + 8.0 * ln_one
        out[CALCITE] = (ln_product - ln_calcite_product(t, p)) / _LN10
        out[ARAGONITE] = (ln_product - ln_aragonite_product(t, p)) / _LN10
    return change


@compiled
def _rows(t, s, p, dic, alk, magnesium, calcium, sulfide, out):
    """Solve every row; return the first that did not settle, or -1."""
    bad = -1
    h = 1e-4
    for i in range(t.size):
        mono = max(
            0.0, equivalents_of(s[i], alk[i], 0.0, 0.0) - 2.0 * (magnesium[i] + calcium[i])
        )
        change = solve_carbonate(
            t[i], p[i], dic[i], alk[i], mono, magnesium[i], calcium[i], sulfide[i], h, out[i]
        )
        h = out[i, H]
        if not change < SETTLED and bad < 0:
            bad = i
    return bad


@dataclass(frozen=True)
class Speciation:
    """What carbonate there is [mol m-3], and what follows from it."""

    ph: Array  # -log10 of the activity of the hydrogen ion
    co2: Array  # free
    hco3: Array  # bicarbonate, ion pairs included
    co3: Array  # carbonate, ion pairs included
    hco3_free: Array
    co3_free: Array
    h: Array
    oh: Array
    hs: Array
    dic: Array
    alkalinity: Array
    ionic_strength: Array  # mol/L
    calcite_saturation: Array  # log10(IAP / K); -inf without calcium
    aragonite_saturation: Array


def checked_water(
    temperature: ArrayLike,
    salinity: ArrayLike,
    pressure: ArrayLike,
    dic: ArrayLike,
    alkalinity: ArrayLike,
) -> tuple[Array, ...]:
    """Return water, in this order, within the ranges in which its carbonate is known."""
    reaction = "reaction volumes, Millero 1983"
    return (
        ranges.within("temperature", temperature, (0.0, 40.0), "degC", _SOURCE),
        ranges.within("salinity", salinity, (0.0, 42.0), "g/kg", _DAVIES),
        ranges.within("pressure", pressure, (0.0, 6.2e6), "Pa", reaction),
        ranges.within("DIC", dic, (0.0, 3000.0), "mol/m3", "dilute solution"),
        ranges.within("alkalinity", alkalinity, (-100.0, 400.0), "eq/m3", _DAVIES),
    )


def checked_total(name: str, amount: ArrayLike, most: float = 200.0) -> Array:
    """Return the total of something dissolved [mol m-3], within what activities hold for."""
    return ranges.within(name, amount, (0.0, most), "mol/m3", _DAVIES)


def check_strength(out: Array) -> None:
    """Refuse solved rows whose ionic strength exceeds that of the law of activities."""
    ranges.within("ionic strength", out[:, STRENGTH], (0.0, 0.5), "mol/L", _DAVIES)


def speciate(
    temperature: ArrayLike,
    salinity: ArrayLike,
    dic: ArrayLike,
    alkalinity: ArrayLike,
    pressure: ArrayLike = ATMOSPHERE,
    *,
    magnesium: ArrayLike = 0.0,
    calcium: ArrayLike = 0.0,
    sulfide: ArrayLike = 0.0,
) -> Speciation:
    """Return the carbonate species of water from DIC and alkalinity.

    Equations and sources stand at the head of ``strata.gas.carbonate``.  The ionic strength is
    that of the species found, where salinity and alkalinity give the cations by the rule of
    ``strata.gas.ions``; magnesium and calcium, where given, form pairs with bicarbonate and
    carbonate.

    Parameters
    ----------
    temperature : array_like
        In situ [degC], 0 to 40.
    salinity : array_like
        Mass of dissolved ions [g kg-1], 0 to 42.
    dic, alkalinity : array_like
        Dissolved inorganic carbon [mol m-3], 0 to 3000; alkalinity [eq m-3], -100 to 400.
    pressure : array_like, optional
        Absolute [Pa], up to 62 bar.
    magnesium, calcium, sulfide : array_like, optional
        Totals [mol m-3]; sulfide is H2S + HS-.

    Raises
    ------
    strata.OutOfRangeError
        If a value is out of range, or the ionic strength exceeds the 0.5 mol/L of Davies.

    Examples
    --------
    >>> water = speciate(23.0, 5.0, 110.0, 60.0)
    >>> f"pH {float(water.ph):.2f}, {float(water.co2):.1f} mol/m3 of free CO2"
    'pH 6.34, 50.0 mol/m3 of free CO2'
    """
    shaped = np.broadcast_arrays(
        *checked_water(temperature, salinity, pressure, dic, alkalinity),
        checked_total("magnesium", magnesium),
        checked_total("calcium", calcium),
        checked_total("sulfide", sulfide),
    )
    shape = shaped[0].shape
    flat = [np.array(part).ravel() for part in shaped]
    out = np.empty((flat[0].size, COLUMNS))
    bad = _rows(*flat, out)
    if bad >= 0:
        raise ComputationError(f"carbonate: the ion pairs of row {bad} do not settle")
    check_strength(out)
    column = [out[:, i].reshape(shape) for i in range(COLUMNS)]
    return Speciation(
        ph=column[PH],
        co2=column[CO2],
        hco3=column[HCO3],
        co3=column[CO3],
        hco3_free=column[FREE_HCO3],
        co3_free=column[FREE_CO3],
        h=column[H],
        oh=column[OH],
        hs=column[HS],
        dic=flat[3].reshape(shape),
        alkalinity=flat[4].reshape(shape),
        ionic_strength=column[STRENGTH],
        calcite_saturation=column[CALCITE],
        aragonite_saturation=column[ARAGONITE],
    )


def dic_of(
    temperature: ArrayLike,
    salinity: ArrayLike,
    alkalinity: ArrayLike,
    *,
    co2: ArrayLike | None = None,
    ph: ArrayLike | None = None,
    pressure: ArrayLike = ATMOSPHERE,
    magnesium: ArrayLike = 0.0,
    calcium: ArrayLike = 0.0,
) -> Array:
    """Return the DIC [mol m-3] of water from its alkalinity and free CO2 [mol m-3], or pH.

    The inverse of :func:`speciate` by bisection: free CO2 rises with DIC and pH falls.  pH
    must be one that some DIC up to 3000 mol m-3 gives.
    """
    if co2 is not None and ph is None:
        aim = ranges.within("free CO2", co2, (0.0, 2500.0), "mol/m3", "dilute solution")
    elif ph is not None and co2 is None:
        aim = -ranges.within("pH", ph, (2.0, 13.0), "", _SOURCE)
    else:
        raise OutOfRangeError("give either free CO2 or pH with alkalinity")

    def found(dic: Array) -> Array:
        water = speciate(t, salinity, dic, alk, pressure, magnesium=magnesium, calcium=calcium)
        return water.co2 if co2 is not None else -water.ph

    t, alk, aim, *_ = np.broadcast_arrays(
        np.asarray(temperature, float), np.asarray(alkalinity, float), aim, salinity, pressure
    )
    return _bisect(found, aim, 3000.0, "DIC")


def alkalinity_of(
    temperature: ArrayLike,
    salinity: ArrayLike,
    dic: ArrayLike,
    *,
    ph: ArrayLike,
    pressure: ArrayLike = ATMOSPHERE,
) -> Array:
    """Return the alkalinity [eq m-3] of water from its DIC [mol m-3] and pH.

    The inverse of :func:`speciate` by bisection: pH rises with alkalinity, sought in 0 to 400.
    """
    aim = ranges.within("pH", ph, (2.0, 13.0), "", _SOURCE)

    def found(alkalinity: Array) -> Array:
        return speciate(t, salinity, carbon, alkalinity, pressure).ph

    t, carbon, aim, *_ = np.broadcast_arrays(
        np.asarray(temperature, float), np.asarray(dic, float), aim, salinity, pressure
    )
    return _bisect(found, aim, 400.0, "alkalinity")


def _bisect(found: Callable[[Array], Array], aim: Array, highest: float, what: str) -> Array:
    """Return where a rising function of 0 to highest meets its aim."""
    low, high = np.zeros(aim.shape), np.full(aim.shape, highest)
    if np.any(found(low) > aim) or np.any(found(high) < aim):
        raise OutOfRangeError(
            f"no {what} from 0 to {highest:g} mol/m3 agrees with the rest of the carbonate"
        )
    for _ in range(60):
        middle = 0.5 * (low + high)
        above = found(middle) > aim
        high = np.where(above, middle, high)
        low = np.where(above, low, middle)
    return 0.5 * (low + high)
