"""A column on other layers: every inventory kept, no new extreme made.

Each old layer holds a parabola of the volume above it, with the face values and the limiter of
the piecewise parabolic method [CW84] that carries the tracers; its integral over each new
layer is exact, so that what the lake holds of every tracer is what it held.

[CW84] Colella & Woodward 1984, J. Comput. Phys. 54:174-201.
"""

import numpy as np
from numpy.typing import NDArray

from strata.column.transport import face_weights
from strata.errors import OutOfRangeError
from strata.lake.basin import Basin

Array = NDArray[np.float64]

#: Two basins are the same lake if their volumes agree by this share.
SAME = 1e-9


def remap(values: Array, old: Basin, new: Basin) -> Array:
    """Return layer means on new layers from means on old ones.

    Parameters
    ----------
    values : ndarray, shape (n, m)
        Means over the old layers.
    old, new : Basin
        The same lake in different layers.

    Returns
    -------
    ndarray, shape (k, m)
        Means over the new layers; within the range of the old, inventories equal to round-off.

    Raises
    ------
    strata.OutOfRangeError
        If the two basins hold different volumes.
    """
    above_old = np.concatenate([[0.0], np.cumsum(old.volume)])
    above_new = np.concatenate([[0.0], np.cumsum(new.volume)])
    if abs(above_new[-1] - above_old[-1]) > SAME * above_old[-1]:
        raise OutOfRangeError(
            f"the new layers hold {above_new[-1]:.6g} m3; {above_old[-1]:.6g} m3, as in the"
            " old ones, is allowed"
        )
    above_new *= above_old[-1] / above_new[-1]
    top, foot = _edges(values, old.volume)
    layer = np.clip(np.searchsorted(above_old, above_new, "right") - 1, 0, old.layers - 1)
    share = ((above_new - above_old[layer]) / old.volume[layer])[:, None]
    middle = values.mean(axis=0)  # set apart, so that a nearly uniform tracer keeps its digits
    values, top, foot = values - middle, top - middle, foot - middle
    sums = np.cumsum(values * old.volume[:, None], axis=0)
    whole = np.concatenate([np.zeros((1, values.shape[1])), sums])
    part = _content_down_to(share, values[layer], top[layer], foot[layer])
    content = whole[layer] + part * old.volume[layer][:, None]
    return np.asarray(middle + np.diff(content, axis=0) / np.diff(above_new)[:, None])


def _edges(values: Array, volume: Array) -> tuple[Array, Array]:
    """Return the values of each layer's parabola at its top and its foot, limited."""
    count = len(values)
    weight, start = face_weights(volume)
    stencil = start[:, None] + np.arange(weight.shape[1])
    face = np.einsum("fk,fkm->fm", weight, values[stencil])
    face[0], face[-1] = values[0], values[-1]
    inner = slice(1, count)
    pair = np.stack([values[:-1], values[1:]])
    face[inner] = np.clip(face[inner], pair.min(axis=0), pair.max(axis=0))
    top, foot = face[:-1].copy(), face[1:].copy()
    extremum = (foot - values) * (values - top) <= 0.0
    rise = foot - top
    bend = 6.0 * (values - 0.5 * (top + foot))
    steep_top = rise * bend > rise * rise
    steep_foot = rise * bend < -rise * rise
    limited_top = np.where(steep_top, 3.0 * values - 2.0 * foot, top)
    limited_foot = np.where(steep_foot, 3.0 * values - 2.0 * top, foot)
    return np.where(extremum, values, limited_top), np.where(extremum, values, limited_foot)


def _content_down_to(share: Array, mean: Array, top: Array, foot: Array) -> Array:
    """Return the integral of a layer's parabola from its top to a share of its volume."""
    bend = 6.0 * (mean - 0.5 * (top + foot))
    return np.asarray(share * (top + share * (0.5 * (foot - top + bend) - share * bend / 3.0)))
