"""The layers of a lake file: given by zones, or chosen around what its casts show."""

from collections.abc import Iterator, Mapping
from dataclasses import replace
from typing import Any

import numpy as np

from strata.column.start import first_day, hydrostatic_pressure
from strata.column.tracers import TRACERS
from strata.gradients import StabilityProfiles, main_gradient
from strata.inputs.schema import GridTable
from strata.lake.basin import build_basin
from strata.lake.grid import Zone, graded_faces, zones_of
from strata.lake.site import Lake
from strata.margins import water
from strata.water.stability import standard_gravity

#: Thickness of the even layers on which gradients are looked for [m].
LOOK = 2.0
#: What a grid that is chosen by the program may say besides; defaults in metres.
CHOICES = {"thin_m": 1.0, "way_above_m": 25.0, "way_below_m": 75.0}


def grid_faults(sound: Mapping[str, Any]) -> Iterator[tuple[str, str]]:
    """Find what is wrong between the keys of a grid."""
    if not sound.get("automatic", False):
        for key in CHOICES:
            if key in sound:
                yield f"grid.{key}", "asks for automatic = true, with which it belongs"
    elif "layer_m" in sound and sound.get("thin_m", CHOICES["thin_m"]) > sound["layer_m"]:
        thin = sound.get("thin_m", CHOICES["thin_m"])
        yield "grid.thin_m", f"is {thin:g}; at most layer_m ({sound['layer_m']:g}) is allowed"


def with_chosen_layers(lake: Lake, grid: GridTable) -> Lake | None:
    """Return a lake with layers around its gradients, or None if its casts show none.

    Thin layers on the way of the main gradient, twice as thick ones about the others, whatever
    the zones of the file ask for besides, and growth of at most a quarter between neighbours.
    """
    floor = float(lake.hypsography.depth[-1])
    even = np.linspace(0.0, floor, 1 + max(20, round(floor / LOOK)))
    basin = build_basin(lake.hypsography, even)
    pressure = hydrostatic_pressure(basin.depth, lake.site)
    values = first_day(replace(lake, layer_faces=even))
    found = water(values, TRACERS, basin.depth, pressure, lake.site)
    squared = found["buoyancy_frequency_squared"][1:-1]
    gravity = standard_gravity(lake.site.latitude)
    gradients = StabilityProfiles(basin.faces[1:-1], squared, gravity).gradients(0)
    main = main_gradient(gradients)
    if main is None:
        return None
    thin, above, below = (
        default if getattr(grid, key) is None else getattr(grid, key)
        for key, default in CHOICES.items()
    )
    zones = zones_of(gradients, main, thin, above, below, floor)
    zones += [Zone(zone.top_m, zone.foot_m, zone.layer_m) for zone in grid.zone]
    return replace(lake, layer_faces=graded_faces(floor, grid.layer_m, zones))
