"""What the plants of some plans would do with the water of today."""

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass

import xarray as xr

from strata.column.column import Column
from strata.lake.site import Lake
from strata.plant.account import Account
from strata.plant.operate import operate
from strata.plant.plan import Plan
from strata.studies.outlet import vary_outlets
from strata.studies.separate import (
    column_today,
    separate,
    separate_by_lime,
    separate_by_wash,
    separate_in_two,
    setting_of,
)


def account_today(
    lake: Lake, plan: Plan, plant: str | None = None, column: Column | None = None
) -> Account:
    """Return what a plant of a plan (the first, or by name) does today at full load."""
    today = setting_of(lake, plan, plant, column)
    run = operate(today.plant, today.feed, today.wash_feed, lake.site)
    return Account(today.plant, run, lake.site)


def accounts_today(lake: Lake, plans: Sequence[Plan]) -> dict[str, Account]:
    """Return the accounts of all plants, by plan and plant."""
    column = column_today(lake)
    return {
        f"{plan.name}, {plant.name}": account_today(lake, plan, plant.name, column)
        for plan in plans
        for plant in plan.plants
    }


def separator_today(lake: Lake, plans: Sequence[Plan]) -> dict[str, xr.Dataset]:
    """Return the pressure sweep of one plant: the first that binds CO2, or the first."""
    pairs = [(plan, plant) for plan in plans for plant in plan.plants]
    if not pairs:
        return {}
    plan, plant = next((pair for pair in pairs if pair[1].lime is not None), pairs[0])
    return {f"{plan.name}, {plant.name}": separate(lake, plan, plant.name)}


@dataclass(frozen=True)
class PlantStudy:
    """A plant as planned, and its settings varied one by one.

    Parameters
    ----------
    plan : str
    account : Account
        As planned.
    sweeps : mapping
        "pressure", "two pressures", "wash" (where there is one), "lime" and "outlets" ->
        what comes of it (see :mod:`strata.studies.separate`, :mod:`strata.studies.outlet`).
    """

    plan: str
    account: Account
    sweeps: Mapping[str, xr.Dataset]


def study_plant(
    lake: Lake,
    plan: Plan,
    plant: str | None = None,
    progress: Callable[[float], None] = lambda share: None,
) -> PlantStudy:
    """Return a plant of a plan (the first, or by name) with all its sweeps.

    Parameters
    ----------
    lake : Lake
    plan : Plan
    plant : str, optional
    progress : callable
        Called with the share of the work done.
    """
    account = account_today(lake, plan, plant)
    studies: dict[str, Callable[..., xr.Dataset]] = {
        "pressure": separate,
        "two pressures": separate_in_two,
    }
    if account.plant.wash is not None:
        studies["wash"] = separate_by_wash
    studies |= {"lime": separate_by_lime, "outlets": vary_outlets}
    sweeps = {}
    for number, (name, study) in enumerate(studies.items(), start=1):
        sweeps[name] = study(lake, plan, account.plant.name)
        progress(number / len(studies))
    return PlantStudy(plan.name, account, sweeps)
