"""Layers that are thin where the water changes fast, and grow evenly from there.

A thickness is wanted inside zones and another elsewhere; away from a zone it may grow from one
layer to the next by a set ratio at most, so that the scheme that carries tracers keeps its
order (1.25 in ``tests/test_column_transport.py``).
"""

import math
from collections.abc import Sequence
from typing import NamedTuple, Protocol

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

#: Largest ratio of the thicknesses of two neighbours.
GROWTH = 1.25
#: Water beside a gradient that belongs to its zone [m]: it widens and wanders.
BESIDE = 8.0
#: Thickness at a gradient that is not the main one, over that on the way of the main one.
COARSER = 2.0


class Zone(NamedTuple):
    """An interval of depth with thin layers."""

    top: float  # m
    foot: float  # m
    layer: float  # m, thickness of its layers


class Extent(Protocol):
    """A gradient, as far as layers care."""

    @property
    def top(self) -> float:
        """Return where it begins [m]."""

    @property
    def foot(self) -> float:
        """Return where it ends [m]."""


def zones_of(
    gradients: Sequence[Extent],
    main: Extent,
    thin: float,
    above: float,
    below: float,
    floor: float,
) -> list[Zone]:
    """Return the zones that the gradients of a lake ask for.

    The main gradient may be carried up by springs and down by what plants take and put back:
    thin layers reach from ``above`` over its top to ``below`` under its foot.  Other gradients
    get layers ``COARSER`` times as thick, with ``BESIDE`` of water on both sides.

    Parameters
    ----------
    gradients : sequence
        All gradients of the casts.
    main : object
        The main one among them.
    thin : float
        Thickness on the way of the main gradient [m].
    above, below : float
        How far that way reaches beyond the main gradient of today [m].
    floor : float
        Largest depth [m].
    """
    zones = [Zone(max(main.top - above, 0.0), min(main.foot + below, floor), thin)]
    for gradient in gradients:
        if gradient is not main:
            top, foot = max(gradient.top - BESIDE, 0.0), min(gradient.foot + BESIDE, floor)
            zones.append(Zone(top, foot, COARSER * thin))
    return zones


def graded_faces(
    floor: float, thickness: float, zones: Sequence[Zone], growth: float = GROWTH
) -> Array:
    """Return faces of layers as thin as zones ask, growing evenly to ``thickness`` beyond.

    The wanted thickness rises from each zone in proportion to the distance, at the slope
    ln(growth) at which neighbours differ by that ratio; faces lie at equal steps of the
    integral of its inverse, so that no layer is thicker than wanted.

    Parameters
    ----------
    floor : float
        Largest depth [m].
    thickness : float
        Largest thickness [m].
    zones : sequence of Zone
        May overlap; the thinnest layer counts.
    growth : float
        Largest ratio of neighbours.
    """
    finest = min([thickness, *(zone.layer for zone in zones)])
    depth = np.linspace(0.0, floor, 1 + math.ceil(floor / finest) * 16)
    wanted = np.full_like(depth, thickness)
    for zone in zones:
        away = np.maximum(np.maximum(zone.top - depth, depth - zone.foot), 0.0)
        wanted = np.minimum(wanted, zone.layer + math.log(growth) * away)
    slices = 0.5 * (1.0 / wanted[1:] + 1.0 / wanted[:-1]) * np.diff(depth)
    passed = np.concatenate([[0.0], np.cumsum(slices)])
    count = math.ceil(passed[-1] - 1e-9)
    faces = np.interp(np.linspace(0.0, passed[-1], count + 1), passed, depth)
    faces[0], faces[-1] = 0.0, floor
    return np.asarray(faces)
