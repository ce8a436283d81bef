"""When a plant runs, how hard, and with which settings.

A plant's settings are a function of the day: dated changes and outages turn one frozen plant
into another.  Its load is the product of ramp, availability and season.
"""

from collections.abc import Iterable
from dataclasses import fields, is_dataclass, replace
from datetime import date, timedelta
from typing import Any

from strata.errors import StrataError
from strata.plant.plan import Plant

RAMP_STEPS = 12  # events along a ramp; between them the load is held


def load_factor(plant: Plant, day: date) -> float:
    """Return the share of its full flow that a plant takes on a day.

    The ramp rises evenly from the start; availability and the month's availability multiply
    it. A plant that is down as a whole takes nothing.
    """
    if day < plant.start or (plant.stop is not None and day >= plant.stop):
        return 0.0
    if any(o.part == "plant" and o.start <= day < o.stop for o in plant.outages):
        return 0.0
    load = plant.availability
    if plant.monthly_availability:
        load *= plant.monthly_availability[day.month - 1]
    if plant.ramp_days > 0.0:
        # half a ramp step is added: the load is held at its mean until the next event
        held = 0.5 * plant.ramp_days / RAMP_STEPS
        load *= min(1.0, ((day - plant.start).days + held) / plant.ramp_days)
    return load


def event_dates(plant: Plant, begin: date, end: date) -> list[date]:
    """Return the days between begin and end on which load or settings of a plant change."""
    days = {plant.start}
    if plant.stop is not None:
        days.add(plant.stop)
    if plant.ramp_days > 0.0:
        for step in range(1, RAMP_STEPS + 1):
            days.add(plant.start + timedelta(days=plant.ramp_days * step / RAMP_STEPS))
    for outage in plant.outages:
        days.update((outage.start, outage.stop))
    days.update(change.start for change in plant.changes)
    if plant.monthly_availability:
        days.update(
            date(year, month, 1)
            for year in range(begin.year, end.year + 1)
            for month in range(1, 13)
        )
    return sorted(day for day in days if begin < day < end)


def plant_on(plant: Plant, day: date) -> Plant:
    """Return a plant as it is set on a day: dated changes made, parts out of order taken out.

    Without its wash the raw gas bypasses the tower; without lime the feed goes as it is;
    without a stage the water goes on to the next.
    """
    for change in sorted(plant.changes, key=lambda change: change.start):
        if change.start <= day:
            for path, value in change.values.items():
                plant = with_value(plant, path, value)
    parts = {o.part for o in plant.outages if o.start <= day < o.stop} - {"plant"}
    stages = plant.stages
    for number in range(len(stages), 0, -1):
        if f"stage {number}" in parts:
            stages = stages[: number - 1] + stages[number:]
    if "wash" in parts:
        stages = tuple(
            replace(stage, gas_to="product") if stage.gas_to == "wash" else stage
            for stage in stages
        )
    if not parts:
        return plant
    return replace(
        plant,
        stages=stages,
        wash=None if "wash" in parts else plant.wash,
        lime=None if "lime" in parts else plant.lime,
    )


def set_anew(plant: Plant, day: date) -> bool:
    """Return whether a plant starts on a day, or is set differently from the day before."""
    before = day - timedelta(days=1)
    return load_factor(plant, before) <= 0.0 or plant_on(plant, day) != plant_on(plant, before)


def runs_on_feed(plant: Plant, methane: float) -> bool:
    """Return whether the feed holds enough methane [mol/m3] for the plant to go on."""
    return methane >= plant.least_feed_methane


def with_value(item: Any, path: str, value: object) -> Any:
    """Return a frozen object with one attribute, named by a dotted path, replaced.

    Members of a tuple are named by their number from 1: ``stages.1.pressure``.
    """
    return _with(item, path.split("."), value, path)


def _with(item: Any, names: Iterable[str], value: object, path: str) -> Any:
    """Replace what is named by the rest of a path."""
    name, *rest = names
    if isinstance(item, tuple) and name.isdigit() and 1 <= int(name) <= len(item):
        index = int(name) - 1
        new = _with(item[index], rest, value, path) if rest else value
        return (*item[:index], new, *item[index + 1 :])
    if is_dataclass(item) and name in {field.name for field in fields(item)}:
        new = _with(getattr(item, name), rest, value, path) if rest else value
        return replace(item, **{name: new})  # type: ignore[type-var]
    raise StrataError(f"a plant has no setting {path!r}")
