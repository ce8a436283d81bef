"""Where the water a plant returns would go if its temperature or its ports were different."""

import math
from dataclasses import replace

import numpy as np
import xarray as xr

from strata.column.streams import follow
from strata.coupling import excess_density, source_of
from strata.lake.site import Lake
from strata.plant.operate import operate, outlets
from strata.plant.plan import Plan
from strata.studies.separate import setting_of

#: Variation -> (change of temperature [K], factor on the number of ports).
VARIATIONS = {
    "as planned": (0.0, 1.0),
    "1 K cooler": (-1.0, 1.0),
    "1 K warmer": (1.0, 1.0),
    "a quarter of the ports": (0.0, 0.25),
    "four times the ports": (0.0, 4.0),
}
_OUTCOMES = {
    "trap_depth": ("m", "depth at which the return water spreads"),
    "end_depth": ("m", "furthest depth that its plume reaches"),
    "dilution": ("1", "water that spreads over water returned"),
    "density_excess": ("kg m-3", "density over the lake's at the outlet"),
    "port_speed": ("m s-1", "speed of the water in the ports"),
    "upper_reach": ("1", "share of the water returned that spreads above its outlet"),
}


def vary_outlets(lake: Lake, plan: Plan, plant: str | None = None) -> xr.Dataset:
    """Return where the water of each outlet of a plant goes today, as planned and varied.

    Parameters
    ----------
    lake : Lake
    plan : Plan
    plant : str, optional
        Name of one of its plants; the first by default.

    Returns
    -------
    xarray.Dataset
        ``trap_depth``, ``end_depth``, ``dilution``, ``density_excess``, ``port_speed`` and
        ``upper_reach`` over ``outlet`` and ``variation`` (:data:`VARIATIONS`).
    """
    setting = setting_of(lake, plan, plant)
    run = operate(setting.plant, setting.feed, setting.wash_feed, lake.site)
    found = outlets(setting.plant, run)
    table = np.empty((len(_OUTCOMES), len(found), len(VARIATIONS)))
    for i, (where, water) in enumerate(found):
        for k, (kelvin, factor) in enumerate(VARIATIONS.values()):
            source = source_of(
                setting.plant.name,
                replace(water, temperature=water.temperature + kelvin),
                replace(where, ports=max(1, round(where.ports * factor))),
                setting.column,
            )
            path = follow(source, setting.around, lake.mixing.overshoot)
            table[:, i, k] = (
                path.trap_depth,
                path.end_depth,
                path.dilution,
                excess_density(source, setting.around),
                source.flow / (source.ports * 0.25 * math.pi * source.port_diameter**2),
                path.above_outlet,
            )
    names = [f"{where.depth:g} m" for where, _ in found]
    return xr.Dataset(
        {
            name: (("outlet", "variation"), table[n], {"units": unit, "long_name": words})
            for n, (name, (unit, words)) in enumerate(_OUTCOMES.items())
        },
        {"outlet": names, "variation": list(VARIATIONS)},
        {"plant": setting.plant.name},
    )
