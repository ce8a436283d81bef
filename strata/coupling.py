"""How plants and column meet: feeds drawn from the layers, factors held, returns put back.

A plant turns its feed into transfer factors: for gases and DIC the share that goes back, for all
else the amount added.  The kernel withdraws the actual water and applies the held factors, so what
is produced is exactly what was withdrawn and added less what was returned.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from datetime import timedelta

import numpy as np
from numpy.typing import NDArray

from strata import clock
from strata.column import kernel
from strata.column.column import Column
from strata.column.streams import Give, Path, Source, Surroundings, follow
from strata.column.tracers import SALINITY, TEMPERATURE, TRACERS, index
from strata.lake.site import Lake
from strata.plant import timetable
from strata.plant.intake import withdrawal_weights
from strata.plant.operate import Operation, operate
from strata.plant.plan import Plan, Plant, Return
from strata.plant.streams import WaterStream

Array = NDArray[np.float64]

#: The tag of water that any plant has put back.
RETURN_TAG = "return_water"
#: Tracers of which a share goes back; of the others an amount is added.
_BY_SHARE = ("DIC", "CH4", "N2", "O2", "H2S")
#: Density of calcite, to give suspended solids their volume [kg m-3] (common handbook value).
CALCITE_DENSITY = 2710.0


@dataclass(frozen=True)
class Working:
    """What the plants do during a visit, as the column wants it."""

    takes: list[Array]
    gives: list[Give]
    reference: Array  # (takes, m)


@dataclass
class _Running:
    """One plant at work: what it drew, made and put back."""

    plant: Plant
    feed: WaterStream
    operation: Operation
    takes: tuple[int, ...]  # rows of its takes
    paths: dict[str, Path]
    excess: dict[str, float]  # density of each return above the lake at its outlet, kg m-3


@dataclass
class Fleet:
    """All plants of a plan; none for a lake left alone."""

    plan: Plan | None
    lake: Lake
    running: list[_Running] = field(default_factory=list)
    totals: dict[str, dict[str, float]] = field(default_factory=dict)
    warnings: list[str] = field(default_factory=list)

    @property
    def plants(self) -> tuple[Plant, ...]:
        """Return the plants of the plan."""
        return self.plan.plants if self.plan is not None else ()

    @property
    def tags(self) -> tuple[str, ...]:
        """Return the tags that the plants need."""
        return (RETURN_TAG,) if self.plants else ()
