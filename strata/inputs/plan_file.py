"""From a plan file to a frozen :class:`strata.plant.plan.Plan`."""

from collections.abc import Iterator, Mapping
from dataclasses import fields
from typing import Any, TypeVar

from strata.errors import Fault, InputError
from strata.inputs import checks, units
from strata.inputs.lake_file import same_names
from strata.inputs.schema import PlanFile, PlantTable
from strata.inputs.tables import Table, attributes, dotted, validate
from strata.inputs.texts import Texts, put
from strata.lake.site import Lake
from strata.plant import plan

T = TypeVar("T")

#: Tables of a plant in a file -> attribute of the frozen plant, where the names differ.
_ATTRIBUTES = {"return": "return_water", "wash_return": "return_wash", "stage": "stages",
               "intake": "further_intakes"}  # fmt: skip
#: Keys that a dated change cannot set, because they say what the plant is and when.
_FIXED = ("name", "stop", "ramp_days", "outage", "change")


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
    document = texts.document()
    model, sound, faults = validate(document, PlanFile, file)
    faults += [Fault(file, place, message) for place, message in _cross_checks(sound, lake)]
    if model is not None:
        faults += [Fault(file, *found) for found in _left_out(document)]
        faults += [Fault(file, *found) for found in _faults_of_changes(document, lake)]
    if faults or model is None:
        raise InputError(faults)
    return plan.Plan(
        name=model.name,
        plants=tuple(
            _plant(table, written)
            for table, written in zip(model.plant, document["plant"], strict=True)
        ),
        texts=texts.known,
    )


# Putting it together ------------------------------------------------------------------------


def _plant(table: PlantTable, written: Mapping[str, Any]) -> plan.Plant:
    """Build one plant; ``written`` is its table in the file, for its dated changes."""
    months = table.monthly_availability_share
    given = {
        "riser": _part(table.riser, plan.Riser),
        "lime": _part(table.lime, plan.Lime),
        "wash": _part(table.wash, plan.Wash),
        "return_wash": _part(table.wash_return, plan.Return),
        "delivery": _part(table.delivery, plan.Delivery),
        "monthly_availability": tuple(months) if months else None,
    }
    return plan.Plant(
        **attributes(
            table,
            plan.Plant,
            stages=_parts(table.stage, plan.Stage),
            return_water=plan.Return(**attributes(table.return_water, plan.Return)),
            further_intakes=_parts(table.intake, plan.Intake),
            outages=_parts(table.outage, plan.Outage),
            changes=tuple(
                plan.Change(change.start, _changed_values(written, changed))
                for change, changed in zip(
                    table.change, written.get("change", []), strict=True
                )
            ),
            **{name: value for name, value in given.items() if value is not None},
        )
    )


def _part(table: Table | None, target: type[T]) -> T | None:
    """Build a part of a plant that may be missing."""
    return None if table is None else target(**attributes(table, target))


def _parts(array: list[Any], target: type[T]) -> tuple[T, ...]:
    """Build an array of parts."""
    return tuple(target(**attributes(table, target)) for table in array)


# Dated changes ------------------------------------------------------------------------------


def _paths(change: Mapping[str, Any], before: str = "") -> Iterator[tuple[str, Any]]:
    """Yield dotted path and value of all that a change sets."""
    for key, value in change.items():
        if isinstance(value, Mapping):
            yield from _paths(value, f"{before}{key}.")
        elif before or key != "start":
            yield f"{before}{key}", value


def _changed(
    written: Mapping[str, Any], change: Mapping[str, Any]
) -> tuple[dict[str, Any], list[tuple[str, str]]]:
    """Return the table of a plant after a change, and paths in it that lead nowhere."""
    changed: dict[str, Any] = _deep_copy(written)
    del changed["change"]
    faults = []
    for path, value in _paths(change):
        if path.split(".")[0] in _FIXED:
            message = "cannot be changed on a date"
        else:
            message = put(changed, path, value)
        if message:
            faults.append((path, message))
    return changed, faults


def _deep_copy(value: Any) -> Any:
    if isinstance(value, Mapping):
        return {key: _deep_copy(inner) for key, inner in value.items()}
    return [_deep_copy(inner) for inner in value] if isinstance(value, list) else value


def _faults_of_changes(
    document: Mapping[str, Any], lake: Lake | None
) -> Iterator[tuple[str, str]]:
    """Find what is wrong with the dated changes of plants that are sound themselves."""
    for number, written in enumerate(document["plant"]):
        whole = dotted(document, ("plant", number))
        known = set(_plant_checks(written, lake))
        for count, change in enumerate(written.get("change", []), start=1):
            changed, faults = _changed(written, change)
            _, sound, more = validate(changed, PlantTable, "")
            faults += [(fault.place, fault.message) for fault in more]
            faults += [found for found in _plant_checks(sound, lake) if found not in known]
            for path, message in faults:
                yield f"{whole}.change.{count}.{path}", message


def _changed_values(
    written: Mapping[str, Any], change: Mapping[str, Any]
) -> dict[str, object]:
    """Return what a change sets, in SI, by attribute path of the frozen plant."""
    changed, _ = _changed(written, change)
    plant: Any = _plant(PlantTable.model_validate(changed), changed)
    values = {}
    for path, _ in _paths(change):
        names, here = [], plant
        for token in path.split("."):
            names.append(_attribute(token, here))
            here = (
                here[int(token) - 1] if isinstance(here, tuple) else getattr(here, names[-1])
            )
        values[".".join(names)] = here
    return values


def _attribute(token: str, holder: Any) -> str:
    """Return the attribute that a step of a path in a file means."""
    if isinstance(holder, tuple):
        return token
    known = {field.name for field in fields(holder)}
    name = _ATTRIBUTES.get(token, token)
    return name if name in known else units.split(token)[0]


# What several values say together -----------------------------------------------------------


def _cross_checks(sound: Mapping[str, Any], lake: Lake | None) -> Iterator[tuple[str, str]]:
    """Find what is wrong between sound values of the plan file, and against the lake."""
    yield from same_names(sound, "plant")
    for number, plant in enumerate(sound.get("plant", [])):
        place = dotted(sound, ("plant", number))
        for key, message in _plant_checks(plant, lake):
            yield f"{place}.{key}", message


def _plant_checks(plant: Mapping[str, Any], lake: Lake | None) -> Iterator[tuple[str, str]]:
    """Find what is wrong between the sound values of one plant."""
    yield from _dates(plant, lake)
    yield from _outages(plant)
    yield from _routes(plant)
    yield from _choices(plant)
    if lake is not None:
        yield from _depths(plant, lake)
        yield from checks.withdrawal(plant, lake)


def _dates(plant: Mapping[str, Any], lake: Lake | None) -> Iterator[tuple[str, str]]:
    """Find dates that contradict each other."""
    start, stop = plant.get("start"), plant.get("stop")
    if start and stop and stop <= start:
        yield "stop", f"is {stop}; a date after start ({start}) is required"
    if lake is not None and start and start < lake.site.start:
        yield (
            "start",
            f"is {start}; {lake.site.start}, the date of the casts, or later is required",
        )


def _outages(plant: Mapping[str, Any]) -> Iterator[tuple[str, str]]:
    """Find outages that end before they begin, or of parts that are not there."""
    parts = ["plant", *(part for part in ("wash", "lime") if part in plant)]
    parts += [f"stage {number + 1}" for number in range(len(plant.get("stage", [])))]
    for number, outage in enumerate(plant.get("outage", []), start=1):
        start, stop, part = (outage.get(key) for key in ("start", "stop", "part"))
        if start and stop and stop <= start:
            message = f"is {stop}; a date after start ({start}) is required"
            yield f"outage.{number}.stop", message
        if part is not None and part not in parts:
            message = f'is "{part}"; the parts of this plant are {", ".join(parts)}'
            yield f"outage.{number}.part", message


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


def _choices(plant: Mapping[str, Any]) -> Iterator[tuple[str, str]]:
    """Find settings of which only one may be given."""
    lime = plant.get("lime")
    if lime is not None:
        given = [key for key in ("dose_mol_m3", "target_co2_mol_m3") if key in lime]
        if len(given) == 2:
            yield "lime.target_co2_mol_m3", "stands beside dose_mol_m3; give one of them"
    for number, stage in enumerate(plant.get("stage", []), start=1):
        if "residence_time_s" in stage and "approach_share" in stage:
            message = "stands beside residence_time_s, from which it follows; give one of them"
            yield f"stage.{number}.approach_share", message
    shares = [intake["share"] for intake in plant.get("intake", []) if "share" in intake]
    if sum(shares) >= 1:
        message = f"adds up to {sum(shares):g}; less than 1 leaves some for intake_depth_m"
        yield "intake.share", message


def _left_out(document: Mapping[str, Any]) -> Iterator[tuple[str, str]]:
    """Find keys that are missing because another one is there, in a file sound by itself."""
    pair = ("residence_time_s", "mass_transfer_per_s")
    for number, plant in enumerate(document["plant"]):
        place = dotted(document, ("plant", number))
        lime = plant.get("lime")
        if lime is not None and not {"dose_mol_m3", "target_co2_mol_m3"} & lime.keys():
            message = "is missing; give dose_mol_m3 or target_co2_mol_m3"
            yield f"{place}.lime.dose_mol_m3", message
        for count, stage in enumerate(plant["stage"], start=1):
            given = [key for key in pair if key in stage]
            if len(given) == 1:
                missing = pair[1 - pair.index(given[0])]
                yield (
                    f"{place}.stage.{count}.{missing}",
                    f"is missing; it belongs to {given[0]}",
                )


def _depths(plant: Mapping[str, Any], lake: Lake) -> Iterator[tuple[str, str]]:
    """Find depths that lie below the lake floor."""
    floor = float(lake.hypsography.depth[-1])
    places = {
        "intake_depth_m": plant.get("intake_depth_m"),
        "return.depth_m": plant.get("return", {}).get("depth_m"),
        "wash.water_depth_m": plant.get("wash", {}).get("water_depth_m"),
        "wash_return.depth_m": plant.get("wash_return", {}).get("depth_m"),
    }
    for number, intake in enumerate(plant.get("intake", []), start=1):
        places[f"intake.{number}.depth_m"] = intake.get("depth_m")
    for key, depth in places.items():
        if depth is not None and depth >= floor:
            yield key, f"is {depth:g}; the lake floor is at {floor:g} m"
