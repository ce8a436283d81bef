"""How firmly water is layered: neighbouring parcels brought to one pressure."""

from collections.abc import Mapping

import numpy as np
from numpy.typing import ArrayLike, NDArray

from strata import ranges
from strata.compiled import broadcast
from strata.errors import OutOfRangeError
from strata.water.density import (
    HALINE_CONTRACTION,
    density,
    gas_mass_and_volume,
    parcel_density,
    potential_temperature,
)

Array = NDArray[np.float64]

#: Density above that at the surface at which a cast leaves its mixed layer
#: (de Boyer Montegut et al. 2004, J. Geophys. Res. 109:C12003) [kg m-3].
MIXED_LAYER_STEP = 0.03


def standard_gravity(latitude: float = 45.0) -> float:
    r"""Return gravity at sea level [m s-2] at a latitude in degrees [Moritz 1980].

    .. math:: g = 9.780327\,(1 + 5.2792\cdot10^{-3}\sin^2\phi + 2.32\cdot10^{-5}\sin^4\phi)
    """
    degrees = float(ranges.within("latitude", latitude, (-90.0, 90.0), "degrees", "the globe"))
    square = np.sin(np.radians(degrees)) ** 2
    return float(9.780327 * (1.0 + 5.2792e-3 * square + 2.32e-5 * square**2))


def buoyancy_frequency_squared(
    depth: ArrayLike,
    temperature: ArrayLike,
    salinity: ArrayLike,
    pressure: ArrayLike,
    dissolved: Mapping[str, ArrayLike] | None = None,
    haline_contraction: float = HALINE_CONTRACTION,
    co2_molar_volume: float | None = None,
    gravity: float = 9.80665,
) -> tuple[Array, Array]:
    r"""Return the square of the buoyancy frequency between neighbouring depths.

    .. math:: N^2 = \frac{g}{\bar\rho}\,
              \frac{\rho_{i+1}(\bar p) - \rho_i(\bar p)}{z_{i+1} - z_i}

    Both parcels are brought adiabatically to the pressure halfway, so that the lapse rate and
    the compressibility are in it.  Negative where the water is unstable.

    Parameters
    ----------
    depth : array_like
        Positive down [m], rising strictly along the last axis, at least two.
    temperature : array_like
        In situ [degC].
    salinity : array_like
        Mass of dissolved ions [g kg-1].
    pressure : array_like
        Absolute [Pa].
    dissolved : mapping of str to array_like, optional
        Gas concentrations [mol m-3] at the same depths.
    haline_contraction, co2_molar_volume : float, optional
        As in :func:`strata.water.density`.
    gravity : float, optional
        [m s-2].

    Returns
    -------
    tuple of ndarray
        Buoyancy frequency squared [s-2] and the depth halfway [m], one fewer than depths.

    Examples
    --------
    >>> squared, middle = buoyancy_frequency_squared([0, 10], [24, 24], [1, 2], [1e5, 2e5])
    >>> f"{squared[0]:.1e} at {middle[0]:.0f} m"
    '7.3e-04 at 5 m'
    """
    z = np.asarray(depth, dtype=np.float64)
    if z.ndim == 0 or z.shape[-1] < 2 or not np.all(np.diff(z, axis=-1) > 0.0):
        raise OutOfRangeError("depth must hold at least two values that rise strictly")
    density(temperature, salinity, pressure)  # refuses what is out of range
    mass, volume = gas_mass_and_volume(dissolved, co2_molar_volume)
    t, s, p, mass, volume, z = np.broadcast_arrays(
        temperature, salinity, pressure, mass, volume, z, subok=False
    )
    theta = broadcast(potential_temperature)(t, p)
    halfway = 0.5 * (p[..., 1:] + p[..., :-1])

    def at_halfway(part: slice) -> Array:
        of = (theta[..., part], s[..., part], halfway, mass[..., part], volume[..., part])
        result: Array = broadcast(parcel_density)(*of, haline_contraction)
        return result

    upper, lower = at_halfway(slice(None, -1)), at_halfway(slice(1, None))
    step = np.diff(z, axis=-1)
    squared = gravity * (lower - upper) / (0.5 * (lower + upper) * step)
    return squared, 0.5 * (z[..., 1:] + z[..., :-1])


def mixed_layer_depth(depth: Array, density: Array) -> Array:
    """Return where potential density first exceeds that at the surface by a set step [m].

    For a cast, which says nothing about mixing; a projection knows its own mixed layer.

    Parameters
    ----------
    depth : ndarray, shape (layers,)
    density : ndarray, shape (..., layers)
        Potential density [kg m-3].
    """
    excess = density - density[..., :1]
    return first_depth(depth, excess, MIXED_LAYER_STEP, rising=True)


def first_depth(depth: Array, values: Array, bound: float, rising: bool) -> Array:
    """Return the depth at which a profile first passes a bound [m]; the last one if never."""
    signed = values - bound if rising else bound - values
    past = signed > 0.0
    index = np.argmax(past, axis=-1)
    ever = np.any(past, axis=-1)
    after = np.take_along_axis(signed, index[..., np.newaxis], axis=-1)[..., 0]
    previous = np.maximum(index - 1, 0)
    before = np.take_along_axis(signed, previous[..., np.newaxis], axis=-1)[..., 0]
    step = np.where(index > 0, after - before, 1.0)
    share = np.where(index > 0, -before / np.where(step == 0.0, 1.0, step), 0.0)
    passed = depth[previous] + share * (depth[index] - depth[previous])
    passed = np.where(index > 0, passed, 0.0)
    return np.where(ever, passed, depth[-1])
