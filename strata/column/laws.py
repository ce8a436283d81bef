"""Turbulent mixing laws a site may choose, brought to one form: c N^(-2 p) at every face.

``"gargett"``: K = a / N, the form of [G84], a being the site's.
``"hondzo-stefan"``: K = 8.17e-4 A^0.56 (N^2)^-0.43 cm2/s with the area A of the lake in km2
[HS93], times a factor of the site; found on lakes of up to some hundred km2.
``"given"``: a profile of the site, log-linear between its depths, whatever the stability.

Currents along a sloping bed lose power there and mix the lake from its sides [Go97]: per
volume of water at a depth the lost power is D (-dA/dz) / A for D per area of bed, and K =
mixing efficiency times that over density and N^2 [O80].

[G84] Gargett 1984, J. Mar. Res. 42:359-393.
[HS93] Hondzo & Stefan 1993, J. Hydraul. Eng. 119:1251-1273.
[Go97] Goudsmit, Peeters, Gloor & Wuest 1997, J. Geophys. Res. 102:27903-27914.
[O80] Osborn 1980, J. Phys. Oceanogr. 10:83-89: mixing efficiency 0.2.
"""

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from strata.lake.basin import Basin
from strata.lake.site import Mixing

Array = NDArray[np.float64]

#: Names of the laws.
LAWS = ("gargett", "hondzo-stefan", "given")
MIXING_EFFICIENCY = 0.2
#: Steps of a staircase over which its gradients are told.
STEPS_IN_WINDOW = 10.0
AREA_COEFFICIENT, AREA_POWER, STABILITY_POWER = 8.17e-8, 0.56, 0.43  # m2/s, km2, s-2


class Law(NamedTuple):
    """A law in the one form, for the faces of a basin."""

    coefficient: Array  # (n + 1,)
    power: float  # p of c (N^2)^-p
    least: float  # m2/s
    most: float  # m2/s


def law_of(mixing: Mixing, basin: Basin) -> Law:
    """Return the turbulent law of a site at the faces of its layers."""
    even = np.ones(basin.layers + 1)
    if mixing.law == "hondzo-stefan":
        whole = AREA_COEFFICIENT * (basin.area[0] / 1e6) ** AREA_POWER
        each = mixing.area_factor * whole * even
        return Law(each, STABILITY_POWER, mixing.least, mixing.most)
    if mixing.law == "given":
        assert mixing.given is not None
        if mixing.given_depth is None:
            profile = mixing.given[0] * even
        else:
            profile = np.exp(np.interp(basin.faces, mixing.given_depth, np.log(mixing.given)))
        return Law(profile, 0.0, 0.0, max(mixing.most, float(profile.max())))
    return Law(mixing.coefficient * even, 0.5, mixing.least, mixing.most)


def bed_coefficient(mixing: Mixing, basin: Basin, density: float) -> Array:
    """Return what currents along the bed add, times N^2, at the faces [m2 s-3].

    Parameters
    ----------
    mixing : Mixing
    basin : Basin
    density : float
        Of water [kg m-3].
    """
    slope = np.zeros(basin.layers + 1)
    around = basin.area[:-2] - basin.area[2:]
    slope[1:-1] = around / (basin.faces[2:] - basin.faces[:-2]) / basin.area[1:-1]
    return np.asarray(MIXING_EFFICIENCY * mixing.bed_dissipation * slope / density)


def staircase_window(basin: Basin, mixing: Mixing) -> tuple[NDArray[np.int64], Array]:
    """Return where the mean gradients about each face are told from.

    The ends of the window lie half of it over and under the face, between the middles of
    layers or, near surface and floor, at the last of them; a window thinner than the layers is
    the pair of layers at the face.  Where the site gives none it holds ten steps of its
    staircase, so that the flux does not hang on the layers.

    Returns
    -------
    window : ndarray of int, shape (n + 1, 2)
        The layer over the upper and over the lower end.
    reach : ndarray, shape (n + 1, 3)
        Shares of the way from there to the next layer, and the span between the ends [m].
    """
    window = mixing.staircase_window
    if window is None:
        window = STEPS_IN_WINDOW * mixing.staircase_step
    middle, last = basin.depth, basin.layers - 2
    pair = np.concatenate([[0.0], np.diff(middle), [0.0]])
    inside = np.clip(basin.faces, middle[0], middle[-1])
    upper = np.maximum(inside - 0.5 * window, middle[0])
    lower = np.minimum(inside + 0.5 * window, middle[-1])
    thin = lower - upper < pair
    upper[1:-1] = np.where(thin[1:-1], middle[:-1], upper[1:-1])
    lower[1:-1] = np.where(thin[1:-1], middle[1:], lower[1:-1])
    ends = (upper, lower)
    layers = [np.clip(np.searchsorted(middle, end, "right") - 1, 0, last) for end in ends]
    shares = [
        (end - middle[layer]) / (middle[layer + 1] - middle[layer])
        for end, layer in zip(ends, layers, strict=True)
    ]
    return np.stack(layers, axis=1), np.stack([*shares, lower - upper], axis=1)
