"""Salinity: from conductivity, and from a list of ions with its haline contraction.

Full entries of the sources named in brackets are in ``docs/reference/sources.md``.
"""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from strata import ranges
from strata.compiled import broadcast
from strata.constants import (
    ATMOSPHERE,
    BICARBONATE_MASS,
    CALCIUM_MASS,
    CHLORIDE_MASS,
    MAGNESIUM_MASS,
    POTASSIUM_MASS,
    SODIUM_MASS,
    SULFATE_MASS,
)
from strata.errors import OutOfRangeError
from strata.water.density import pure_water_density, salt_density_excess

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Ion:
    """Charge, molar mass [kg/mol] and partial molar volume at 25 degC [m3/mol] of an ion."""

    charge: int
    mass: float
    volume: float  # conventional, the proton nil [Millero 1971]


IONS = {
    "Na": Ion(1, SODIUM_MASS, -1.21e-6),
    "K": Ion(1, POTASSIUM_MASS, 9.02e-6),
    "Mg": Ion(2, MAGNESIUM_MASS, -21.17e-6),
    "Ca": Ion(2, CALCIUM_MASS, -17.85e-6),
    "Cl": Ion(-1, CHLORIDE_MASS, 17.83e-6),
    "SO4": Ion(-2, SULFATE_MASS, 13.98e-6),
    "HCO3": Ion(-1, BICARBONATE_MASS, 24.6e-6),  # [Tanger & Helgeson 1988]
}

#: Debye-Hueckel slope of apparent molal volumes at 25 degC [m3 kg^1/2 mol^-3/2].
VOLUME_SLOPE = 1.868e-6


def conductivity_at_25(
    conductivity: ArrayLike, temperature: ArrayLike, coefficient: float = 0.0191
) -> Array:
    r"""Return the conductivity that water would have at 25 degC [mS/cm].

    .. math:: \kappa_{25} = \frac{\kappa}{1 + a\,(T - 25)}

    Parameters
    ----------
    conductivity : array_like
        In situ [mS/cm], 0 to 60.
    temperature : array_like
        [degC], 0 to 35.
    coefficient : float, optional
        a [1/K]: 0.0191 for natural water [ISO 7888], 0.018 to 0.022 by composition.
    """
    c = ranges.within("conductivity", conductivity, (0.0, 60.0), "mS/cm", "natural water")
    t = ranges.within("temperature", temperature, (0.0, 35.0), "degC", "ISO 7888")
    a = ranges.within(
        "temperature coefficient", coefficient, (0.015, 0.025), "1/K", "ISO 7888"
    )
    return np.asarray(c / (1.0 + a * (t - 25.0)))


def salinity_from_conductivity(
    conductivity: ArrayLike,
    temperature: ArrayLike,
    factor: float,
    coefficient: float = 0.0191,
) -> Array:
    """Return the salinity [g kg-1] of water of known conductivity.

    The conductivity at 25 degC times the factor of the site.

    Parameters
    ----------
    conductivity : array_like
        In situ [mS/cm], the unit of the instruments; 1 mS/cm is 0.1 S/m.
    temperature : array_like
        [degC].
    factor : float
        Of the site, from water of known ions [g/kg per mS/cm at 25 degC], 0.4 to 1.5.
    coefficient : float, optional
        Of temperature; see :func:`conductivity_at_25`.
    """
    allowed = (0.4, 1.5)
    ranges.within(
        "conductivity factor", factor, allowed, "g/kg per mS/cm", "ions of natural water"
    )
    return np.asarray(factor * conductivity_at_25(conductivity, temperature, coefficient))


@dataclass(frozen=True)
class Salt:
    """What a list of ions amounts to."""

    salinity: Array  # g/kg
    haline_contraction: Array  # kg/g at 20 degC and 1 atm, what a site is given
    ionic_strength: Array  # mol per kg of water
    charge_balance: Array  # (cations - anions) / (cations + anions), in equivalents


def salt_from_ions(ions: Mapping[str, ArrayLike]) -> Salt:
    r"""Return salinity and haline contraction of water from its ions.

    .. math:: S = \frac{\sum m_i M_i}{1 + \sum m_i M_i}, \qquad
              \varphi_V = \sum_i m_i \bigl(V_i^0 + \tfrac12 z_i^2\,S_v\sqrt I\bigr), \qquad
              \rho = \frac{1 + \sum m_i M_i}{1/\rho_w + \varphi_V}

    with the partial molar volumes of the ions at 25 degC [Millero 1971], the Debye-Hueckel
    slope S_v and the ionic strength I = 1/2 sum(m z^2).  The contraction is that of this
    density at 25 degC, carried to the standard point of 20 degC and 4 g/kg by the salt term of
    the density.

    Parameters
    ----------
    ions : mapping of str to array_like
        Amounts [mol per kg of water] of "Na", "K", "Mg", "Ca", "Cl", "SO4" and "HCO3" (give
        the alkalinity), 0 to 0.5 each.

    Raises
    ------
    strata.OutOfRangeError
        If an ion is not known, an amount is out of range, or the charges differ by more than
        10 %.

    Examples
    --------
    >>> salt = salt_from_ions({"Na": 0.04, "HCO3": 0.04})
    >>> f"{float(salt.salinity):.2f} g/kg, {float(salt.haline_contraction) * 1e3:.2f}e-3"
    '3.35 g/kg, 0.73e-3'
    """
    if not ions:
        raise OutOfRangeError("the list of ions is empty")
    rows = [ranges.named("ion", name, IONS) for name in ions]
    amounts = [
        ranges.within(f"amount of {name}", value, (0.0, 0.5), "mol/kg", "Millero 1971")
        for name, value in ions.items()
    ]
    pairs = list(zip(rows, amounts, strict=True))
    mass = sum((m * ion.mass for ion, m in pairs), np.zeros(()))
    if np.any(mass <= 0.0):
        raise OutOfRangeError("the list of ions adds up to no salt")
    strength = sum((0.5 * m * ion.charge**2 for ion, m in pairs), np.zeros(()))
    cations = sum((m * ion.charge for ion, m in pairs if ion.charge > 0), np.zeros(()))
    anions = sum((-m * ion.charge for ion, m in pairs if ion.charge < 0), np.zeros(()))
    balance = (cations - anions) / (cations + anions)
    if np.any(np.abs(balance) > 0.1):
        worst = float(np.atleast_1d(balance)[np.argmax(np.abs(balance))])
        raise OutOfRangeError(
            f"charges of the ions differ by {100 * worst:+.0f} %; 10 % is allowed"
        )
    volume = sum((m * ion.volume for ion, m in pairs), np.zeros(()))
    volume = volume + strength * VOLUME_SLOPE * np.sqrt(strength)
    water = float(pure_water_density(25.0, ATMOSPHERE))
    density = (1.0 + mass) / (1.0 / water + volume)
    salinity = 1e3 * mass / (1.0 + mass)
    per_unit = broadcast(salt_density_excess)(25.0, salinity, ATMOSPHERE, 1.0)
    return Salt(
        salinity=np.asarray(salinity),
        haline_contraction=np.asarray((density / water - 1.0) / per_unit),
        ionic_strength=np.asarray(strength),
        charge_balance=np.asarray(balance),
    )
