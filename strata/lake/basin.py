"""The basin: area against depth, fixed layers and their exact volumes.

Area is monotone between the given points (PCHIP, Fritsch & Carlson 1980); the volume of a
layer is the exact integral of that curve, and its bed area is the area at its top less the
area at its foot, with the floor in the last layer.
"""

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray
from scipy.interpolate import PchipInterpolator

from strata.lake.site import Hypsography

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Basin:
    """Layers of a lake, from the surface down.

    Parameters
    ----------
    faces : ndarray, shape (n + 1,)
        Depth of the faces of the layers [m], from 0 to the deepest point.
    area : ndarray, shape (n + 1,)
        Area at the faces [m2].
    volume : ndarray, shape (n,)
        Volume of the layers [m3].
    """

    faces: Array
    area: Array
    volume: Array

    @property
    def layers(self) -> int:
        """Return the number of layers."""
        return len(self.volume)

    @cached_property
    def depth(self) -> Array:
        """Return the depth of the middle of each layer [m]."""
        return 0.5 * (self.faces[1:] + self.faces[:-1])

    @cached_property
    def thickness(self) -> Array:
        """Return the thickness of each layer [m]."""
        return np.diff(self.faces)

    @cached_property
    def bed_area(self) -> Array:
        """Return the bed area of each layer [m2]; the floor belongs to the last."""
        bed = self.area[:-1] - self.area[1:]
        bed[-1] += self.area[-1]
        return bed

    def layer_at(self, depth: float) -> int:
        """Return the index of the layer that holds a depth [m]."""
        return int(
            np.clip(np.searchsorted(self.faces, depth, "right") - 1, 0, self.layers - 1)
        )

    def overlap(self, top: float, foot: float) -> Array:
        """Return the share of each layer's thickness that lies between two depths [m]."""
        inside = np.minimum(self.faces[1:], foot) - np.maximum(self.faces[:-1], top)
        return np.maximum(inside, 0.0) / self.thickness


def build_basin(hypsography: Hypsography, faces: Array) -> Basin:
    """Return the basin of a hypsography cut at the given faces [m]."""
    area = PchipInterpolator(hypsography.depth, hypsography.area)
    return Basin(
        faces=np.array(faces, dtype=np.float64),
        area=np.asarray(area(faces), dtype=np.float64),
        volume=np.diff(area.antiderivative()(faces)),
    )
