"""What bed, sources and slow reactions do to the layers, by tracer, as the kernel wants it."""

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from strata.column.tracers import AGE, TEMPERATURE
from strata.lake.basin import Basin
from strata.lake.site import Lake

Array = NDArray[np.float64]

YEAR = 365.25 * 86400.0  # s


@dataclass(frozen=True)
class Supply:
    """What is steady in the making and losing of tracers.

    Parameters
    ----------
    bed, sources : ndarray, shape (n, m)
        What each layer gets out of its bed and from sources in its water [amount per second].
    decay : ndarray, shape (n, m)
        Rates of loss [s-1]; no rows where nothing decays.
    conversion : ndarray, shape (n,)
        Rate at which free CO2 turns into methane [s-1]; empty where it does not.
    """

    bed: Array
    sources: Array
    decay: Array
    conversion: Array

    @cached_property
    def bed_total(self) -> Array:
        """Return what the bed gives in all, by tracer [amount per second]."""
        return np.asarray(self.bed.sum(axis=0))

    @cached_property
    def source_total(self) -> Array:
        """Return what the sources give in all, by tracer [amount per second]."""
        return np.asarray(self.sources.sum(axis=0))


def supply_of(
    lake: Lake, basin: Basin, tracers: Sequence[str], width: int, heat_capacity: float
) -> Supply:
    """Return the steady supply of a lake.

    Parameters
    ----------
    lake : Lake
    basin : Basin
    tracers : sequence of str
        Names of the columns of the state, tags included.
    width : int
        Number of columns, those that only fill up included.
    heat_capacity : float
        What turns heat into kelvin [J m-3 K-1].
    """

    def column_and_unit(tracer: str) -> tuple[int, float]:
        if tracer == "heat":
            return TEMPERATURE, heat_capacity
        return list(tracers).index(tracer), 1.0

    bed, sources, decay = (np.zeros((basin.layers, width)) for _ in range(3))
    for flux in lake.bed:
        column, unit = column_and_unit(flux.tracer)
        share = basin.overlap(flux.top, flux.foot)
        bed[:, column] += share * basin.bed_area * flux.flux / unit
    for source in lake.sources:
        column, unit = column_and_unit(source.tracer)
        share = basin.overlap(source.top, source.foot)
        sources[:, column] += share * basin.volume * source.rate / unit
        decay[:, column] += share * source.decay
    if AGE in tracers:  # water grows older by a year a year wherever it is
        sources[:, list(tracers).index(AGE)] = basin.volume / YEAR
    conversion = np.zeros(basin.layers)
    for change in lake.conversions:
        conversion += basin.overlap(change.top, change.foot) * change.rate
    return Supply(
        bed=bed,
        sources=sources,
        decay=decay if decay.any() else decay[:0],
        conversion=conversion if conversion.any() else conversion[:0],
    )
