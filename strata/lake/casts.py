"""From what was measured to layer means that keep the integral of each cast."""

import numpy as np
from numpy.typing import NDArray
from scipy.interpolate import PchipInterpolator

from strata.lake.site import Profile

Array = NDArray[np.float64]

#: Step of salinity between two samples, over its standard error, from which on it leads the
#: way.
SIGNAL = 5.0


def layer_means(profile: Profile, faces: Array) -> Array:
    """Return the mean of a measured profile over each layer.

    Monotone between the measurements (PCHIP, Fritsch & Carlson 1980) and constant beyond the
    first and last, integrated exactly, so that the layers together hold the integral of the
    cast.

    Parameters
    ----------
    profile : Profile
        At least two depths.
    faces : ndarray, shape (n + 1,)
        Faces of the layers [m].

    Returns
    -------
    ndarray, shape (n,)
        Means in the unit of the profile.
    """
    first, last = profile.depth[0], profile.depth[-1]
    sum_to = PchipInterpolator(profile.depth, profile.value).antiderivative()
    inside = sum_to(np.clip(faces, first, last))
    above = profile.value[0] * np.minimum(faces - first, 0.0)
    below = profile.value[-1] * np.maximum(faces - last, 0.0)
    return np.diff(inside + above + below) / np.diff(faces)


def between_samples(samples: Profile, salinity: Profile) -> Profile:
    """Return water samples filled in by what the probe saw between them.

    Dissolved substances mix with the water that carries them: between two samples a quantity
    goes from the one to the other as salinity does, and steps where salinity steps.  Where
    salinity does not tell the two apart, by less than ``SIGNAL`` times its stated error, it
    goes evenly with depth.

    Parameters
    ----------
    samples : Profile
        Any quantity.
    salinity : Profile
        Of a probe, on its own depths.

    Returns
    -------
    Profile
        At the samples and at the depths of the probe between them, errors linear between
        samples.
    """
    inside = (salinity.depth > samples.depth[0]) & (salinity.depth < samples.depth[-1])
    depth = np.union1d(samples.depth, salinity.depth[inside])
    at_depth = np.interp(depth, salinity.depth, salinity.value)
    at_sample = np.interp(samples.depth, salinity.depth, salinity.value)
    noise = np.interp(samples.depth, salinity.depth, salinity.error)
    upper = np.clip(np.searchsorted(samples.depth, depth, "right") - 1, 0, len(at_sample) - 2)
    rise = at_sample[upper + 1] - at_sample[upper]
    told = np.abs(rise) > SIGNAL * np.hypot(noise[upper], noise[upper + 1])
    by_depth = (depth - samples.depth[upper]) / np.diff(samples.depth)[upper]
    by_salinity = (at_depth - at_sample[upper]) / np.where(told, rise, 1.0)
    share = np.where(told, np.clip(by_salinity, 0.0, 1.0), by_depth)
    value = samples.value[upper] + share * np.diff(samples.value)[upper]
    return Profile(depth, value, np.interp(depth, samples.depth, samples.error))
