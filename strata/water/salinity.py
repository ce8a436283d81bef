"""Salinity from what a probe measures."""

import numpy as np
from numpy.polynomial import polynomial
from numpy.typing import ArrayLike, NDArray

from strata import ranges

Array = NDArray[np.float64]

# Conductivity at 20 degC over that in situ, for bicarbonate lake water [Buehrer & Ambuehl 1975]
_TO_20 = (1.72118, -0.0541369, 1.14842e-3, -1.222651e-5)
_SOURCE = "Buehrer & Ambuehl 1975, as used by Wuest et al. 1996"


def conductivity_at_25(conductivity: ArrayLike, temperature: ArrayLike) -> Array:
    r"""Return the conductivity that water would have at 25 degC.

    .. math:: \kappa_{25} = \kappa\,\frac{f(T)}{f(25)}, \qquad
              f(T) = 1.72118 - 0.0541369\,T + 1.14842\cdot10^{-3}\,T^2
                     - 1.222651\cdot10^{-5}\,T^3

    ``f`` brings conductivity to 20 degC [Buehrer & Ambuehl 1975; Wuest et al. 1996].

    Parameters
    ----------
    conductivity : array_like
        In situ, in any unit.
    temperature : array_like
        In situ [degC], 0 to 30.

    Raises
    ------
    strata.OutOfRangeError
        If a temperature lies outside the range of the source.

    Examples
    --------
    >>> round(float(conductivity_at_25(1.0, 20.0)), 3)
    1.118
    """
    t = ranges.within("temperature", temperature, (0.0, 30.0), "degC", _SOURCE)
    measured = np.asarray(conductivity, dtype=np.float64)
    return np.asarray(
        measured * polynomial.polyval(t, _TO_20) / polynomial.polyval(25.0, _TO_20)
    )


def salinity_from_conductivity(
    conductivity: ArrayLike, temperature: ArrayLike, factor: float
) -> Array:
    """Return salinity [g kg-1], proportional to conductivity at 25 degC.

    Parameters
    ----------
    conductivity : array_like
        In situ [mS cm-1].
    temperature : array_like
        In situ [degC], 0 to 30.
    factor : float
        The site's, from its ions [g kg-1 per mS cm-1 at 25 degC].

    Raises
    ------
    strata.OutOfRangeError
        If a temperature lies outside the range of the source.
    """
    return np.asarray(factor * conductivity_at_25(conductivity, temperature))
