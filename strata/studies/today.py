"""What the plants of some plans would do with the water of today, for the dossier."""

from collections.abc import Sequence

import xarray as xr

from strata.lake.site import Lake
from strata.plant.account import Row, stream_rows
from strata.plant.operate import operate
from strata.plant.plan import Plan
from strata.studies.separate import separate, setting_of


def streams_today(lake: Lake, plans: Sequence[Plan]) -> dict[str, list[Row]]:
    """Return the streams of every plant at full load, by plan and plant."""
    streams = {}
    for plan in plans:
        for plant in plan.plants:
            today = setting_of(lake, plan, plant.name)
            run = operate(plant, today.feed, today.wash_feed, lake.site)
            streams[f"{plan.name}, {plant.name}"] = stream_rows(run, lake.site)
    return streams


def separator_today(lake: Lake, plans: Sequence[Plan]) -> dict[str, xr.Dataset]:
    """Return the pressure sweep of one plant: the first that binds CO2, or the first."""
    pairs = [(plan, plant) for plan in plans for plant in plan.plants]
    if not pairs:
        return {}
    plan, plant = next((pair for pair in pairs if pair[1].lime is not None), pairs[0])
    return {f"{plan.name}, {plant.name}": separate(lake, plan, plant.name)}
