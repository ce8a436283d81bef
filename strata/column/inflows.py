"""How springs and rivers enter the column: as plumes, over an interval, or along the bed."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from strata.column import ledger
from strata.column.streams import Give, Source, Surroundings, follow
from strata.compiled import broadcast
from strata.lake.basin import Basin
from strata.lake.site import Mixing
from strata.water.density import parcel_density
from strata.water.intrusion import INTRUSION_COEFFICIENT, layer_shares

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Inflow:
    """A spring or a river with what it carries."""

    kind: int  # row of the ledger: SPRINGS or RIVERS
    source: Source
    carried: Array  # (m,) amount per second
    spread: Array | None = None  # (n,) share of each layer, where it seeps over an interval

    def enter(self, around: Surroundings, mixing: Mixing) -> Give:
        """Return the inflow as it enters the column now.

        A spring as a plume from its outlet or evenly over its interval; a river over the lake
        or under to its neutral level.
        """
        if self.spread is not None:
            given, entrained = self.spread, np.zeros_like(self.spread)
        elif self.kind == ledger.RIVERS:
            given, entrained = plunge(self.source, around, mixing.plunge_mixing)
        else:
            path = follow(self.source, around, mixing.overshoot)
            given, entrained = path.given, path.entrained
        return Give(self.kind, self.source.flow, self.carried, given, entrained)


def even_shares(between: tuple[float, float], basin: Basin) -> Array:
    """Return the share of each layer of what seeps in evenly between two depths [m]."""
    share = basin.overlap(*between) * basin.thickness
    return np.asarray(share / share.sum())


def plunge(source: Source, around: Surroundings, mixing: float) -> tuple[Array, Array]:
    """Return the shares in which a river ends in the layers, and what it takes along [m3 s-1].

    A river lighter than the lake's surface spreads over it, in the top layer.  A heavier one
    plunges, takes along ``mixing`` times its flow from the top layer as it does (0.1 to 1 and
    more after Akiyama & Stefan 1984, J. Hydraul. Eng. 110:484-499), and follows the bed as far
    as the first layer that is heavier than the mixture, over which it spreads as an intrusion.

    Parameters
    ----------
    source : Source
        The river at the surface.
    around : Surroundings
        The lake.
    mixing : float
        Flow taken along over that of the river.
    """
    lake = (around.temperature, around.salinity, around.gas_mass, around.gas_volume)
    own = (source.temperature, source.salinity, source.gas_mass, source.gas_volume)
    top = tuple(profile[0] for profile in lake)
    given, entrained = np.zeros_like(around.temperature), np.zeros_like(around.temperature)

    def density(water: Sequence[ArrayLike], pressure: ArrayLike) -> Array:
        theta, salt, mass, space = water
        return np.asarray(
            broadcast(parcel_density)(
                theta, salt, pressure, mass, space, around.haline_contraction
            )
        )

    surface = around.pressure[0]
    if source.flow <= 0.0 or density(own, surface) <= density(top, surface):
        given[0] = 1.0
        return given, entrained
    share = mixing / (1.0 + mixing)
    mixture = [part + share * (there - part) for part, there in zip(own, top, strict=True)]

    heavier = np.flatnonzero(
        density(lake, around.pressure) >= density(mixture, around.pressure)
    )
    entrained[0] = mixing * source.flow
    if len(heavier) == 0:
        given[-1] = 1.0
        return given, entrained
    flow = (1.0 + mixing) * source.flow
    level = float(around.basin.faces[heavier[0]])
    given = layer_shares(
        around.basin.faces, around.stability, level, flow, INTRUSION_COEFFICIENT
    )
    return given, entrained
