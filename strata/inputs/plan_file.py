"""From a plan file to a frozen :class:`strata.plant.plan.Plan`."""

from collections.abc import Iterator, Mapping
from typing import Any

from strata.errors import Fault, InputError
from strata.inputs import checks
from strata.inputs.lake_file import same_names
from strata.inputs.schema import PlanFile, PlantTable
from strata.inputs.tables import attributes, dotted, validate
from strata.inputs.texts import Texts
from strata.lake.site import Lake
from strata.plant import plan


def build_plan(texts: Texts, lake: Lake | None = None) -> plan.Plan:
    """Build a plan from its texts.

    Parameters
    ----------
    texts : Texts
    lake : Lake, optional
        The lake it is meant for; without one, depths and dates are not held against it.

    Raises
    ------
    strata.InputError
        With every fault of the plan file.
    """
    file = texts.shown(texts.main)
    model, sound, faults = validate(texts.document(), PlanFile, file)
    faults += [Fault(file, place, message) for place, message in _cross_checks(sound, lake)]
    if faults or model is None:
        raise InputError(faults)
    return plan.Plan(
        name=model.name,
        plants=tuple(_plant(table) for table in model.plant),
        texts=texts.known,
    )


def _plant(table: PlantTable) -> plan.Plant:
    """Build one plant."""
    return plan.Plant(
        **attributes(
            table,
            plan.Plant,
            stages=tuple(plan.Stage(**attributes(stage, plan.Stage)) for stage in table.stage),
            lime=table.lime and plan.Lime(**attributes(table.lime, plan.Lime)),
            wash=table.wash and plan.Wash(**attributes(table.wash, plan.Wash)),
            return_water=plan.Return(**attributes(table.return_water, plan.Return)),
            return_wash=table.wash_return
            and plan.Return(**attributes(table.wash_return, plan.Return)),
        )
    )


def _cross_checks(sound: Mapping[str, Any], lake: Lake | None) -> Iterator[tuple[str, str]]:
    """Find what is wrong between sound values of the plan file, and against the lake."""
    yield from same_names(sound, "plant")
    for number, plant in enumerate(sound.get("plant", [])):
        place = dotted(sound, ("plant", number))
        for key, message in (*_dates(plant, lake), *_routes(plant)):
            yield f"{place}.{key}", message
        if lake is not None:
            for key, message in (*_depths(plant, lake), *checks.withdrawal(plant, lake)):
                yield f"{place}.{key}", message


def _dates(plant: Mapping[str, Any], lake: Lake | None) -> Iterator[tuple[str, str]]:
    """Find dates that contradict each other."""
    start, stop = plant.get("start"), plant.get("stop")
    if start and stop and stop <= start:
        yield "stop", f"is {stop}; a date after start ({start}) is required"
    if lake is not None and start and start < lake.site.start:
        yield (
            "start",
            f"is {start}; the casts stand for {lake.site.start}, a plant starts later",
        )


def _routes(plant: Mapping[str, Any]) -> Iterator[tuple[str, str]]:
    """Find gas sent to a wash that is not there, and a wash that gets none."""
    stages = plant.get("stage", [])
    to_wash = [n for n, stage in enumerate(stages, 1) if stage.get("gas_to") == "wash"]
    if to_wash and "wash" not in plant:
        yield f"stage.{to_wash[0]}.gas_to", 'is "wash"; the plant has no table [plant.wash]'
    if "wash" in plant and stages and not to_wash:
        yield "wash", 'gets no gas; set gas_to = "wash" in a stage'
    if "wash_return" in plant and "wash" not in plant:
        yield "wash_return", "belongs to a table [plant.wash], which is missing"


def _depths(plant: Mapping[str, Any], lake: Lake) -> Iterator[tuple[str, str]]:
    """Find depths that lie below the lake floor."""
    floor = float(lake.hypsography.depth[-1])
    places = {
        "intake_depth_m": plant.get("intake_depth_m"),
        "return.depth_m": plant.get("return", {}).get("depth_m"),
        "wash.water_depth_m": plant.get("wash", {}).get("water_depth_m"),
        "wash_return.depth_m": plant.get("wash_return", {}).get("depth_m"),
    }
    for key, depth in places.items():
        if depth is not None and depth >= floor:
            yield key, f"is {depth:g}; the lake floor is at {floor:g} m"
