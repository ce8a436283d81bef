"""From what was measured to layer means that keep the integral of each cast."""

import numpy as np
from numpy.typing import NDArray
from scipy.interpolate import PchipInterpolator

from strata.lake.site import Profile

Array = NDArray[np.float64]


def layer_means(profile: Profile, faces: Array) -> Array:
    """Return the mean of a measured profile over each layer.

    Monotone between the measurements (PCHIP, Fritsch & Carlson 1980) and constant beyond the first
    and last, integrated exactly, so that the layers together hold the integral of the cast.

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


def layer_errors(profile: Profile, depth: Array) -> Array:
    """Return the stated error of a profile at the middles of the layers (linear between)."""
    return np.interp(depth, profile.depth, profile.error)
