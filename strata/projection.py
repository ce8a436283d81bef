"""The clock: steps column and plants together from the day of the casts to the horizon."""

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from datetime import date

import numpy as np
import xarray as xr
from numpy.typing import NDArray

from strata import clock, results
from strata.column import kernel
from strata.column.column import Column, Weather
from strata.column.start import first_day
from strata.coupling import Fleet, collect
from strata.errors import ComputationError, OutOfRangeError
from strata.lake.site import Climate, Lake
from strata.plant.plan import Plan

Array = NDArray[np.float64]

#: Longest projection [years] that the calendar and the files are made for.
LONGEST = 1000.0


@dataclass
class _Track:
    """What is noted down at every output."""

    time: list[np.datetime64] = field(default_factory=list)
    values: list[Array] = field(default_factory=list)
    flow: list[Array] = field(default_factory=list)
    diffusivity: list[Array] = field(default_factory=list)
    mixed: list[float] = field(default_factory=list)
    ledger: list[Array] = field(default_factory=list)
    error: list[Array] = field(default_factory=list)
    plants: list[dict[str, dict[str, float]]] = field(default_factory=list)

    def note(self, day: date, column: Column, fleet: Fleet) -> None:
        """Note the column and the plants as they are on a day."""
        self.time.append(np.datetime64(day, "s"))
        self.values.append(column.values.copy())
        self.flow.append(column.seen.flow.copy())
        self.diffusivity.append(column.seen.diffusivity.copy())
        self.mixed.append(float(column.state.mixed_depth[0]))
        self.ledger.append(np.vstack([column.start, column.books]))
        self.error.append(column.ledger_error())
        self.plants.append(fleet.series())


def weather_of(climate: Climate, day: date, begin: date) -> Weather:
    """Return the weather of the month a day lies in, trend since ``begin`` included."""
    month = day.month - 1
    years = (day - begin).days / 365.25
    return Weather(
        equilibrium_temperature=float(climate.equilibrium_temperature[month])
        + climate.trend * years,
        exchange_coefficient=float(climate.exchange_coefficient[month]),
        wind_speed=float(climate.wind_speed[month]),
        rain=float(climate.rain[month]),
        evaporation=float(climate.evaporation[month]),
    )


def carry_on(
    column: Column, fleet: Fleet, span: clock.Span, begin: date, step_days: float
) -> None:
    """Carry column and plants through one span, solving plants again as their feed changes."""
    steps, dt = span.steps(step_days)
    weather = weather_of(column.lake.climate, span.begin, begin)
    while steps:
        column.refresh()
        around = column.surroundings()
        working = fleet.work(column, around, span.begin)
        gives = column.natural(around) + working.gives
        _, done = column.advance(weather, working.takes, gives, steps, dt, working.reference)
        fleet.book(column, done * dt)
        steps -= done


def project(
    lake: Lake,
    plan: Plan | None = None,
    *,
    years: float = 50.0,
    step_days: float = 1.0,
    tags: Sequence[str] = (),
    values: Array | None = None,
    progress: Callable[[float], None] | None = None,
) -> xr.Dataset:
    """Project a lake forward, alone or with the plants of a plan.

    Parameters
    ----------
    lake : Lake
        Site, basin, casts, climate, supply and mixing.
    plan : Plan, optional
        Plants and their timetable; without it the lake is left alone.
    years : float
        Horizon, up to 1,000.
    step_days : float
        Longest step of the column [d].
    tags : sequence of str
        ``"spring_<name>"`` to follow the water of a spring.
    values : ndarray, shape (n, 10), optional
        Start from these tracers instead of the casts.
    progress : callable, optional
        Called with the share done, 0 to 1.

    Returns
    -------
    xarray.Dataset
        ``time`` x ``depth`` with margins and ledger; see ``docs/reference/results.md``.

    Raises
    ------
    strata.ComputationError
        If the books do not close, or the column cannot be carried on; with the date.
    """
    if not 0 < years <= LONGEST or not 0 < step_days <= 31:
        raise OutOfRangeError(
            f"years is {years:g} and step_days {step_days:g};"
            f" up to {LONGEST:g} years in steps of up to 31 days are allowed"
        )
    fleet = Fleet(plan, lake)
    column = _column(lake, values, (*fleet.tags, *tags))
    begin = lake.site.start
    end = clock.add_years(begin, years)
    track = _Track()
    todo = clock.spans(begin, end, fleet.dates(begin, end))
    for number, span in enumerate(todo):
        try:
            if number == 0:
                _first_note(track, column, fleet, begin)
            carry_on(column, fleet, span, begin, step_days)
            if span.output:
                track.note(span.end, column, fleet)
        except ComputationError as error:
            raise ComputationError(f"{span.begin} to {span.end}: {error}") from error
        if progress is not None:
            progress((number + 1) / len(todo))
    column.check_ledger()
    options = {"step_days": step_days, "years": years}
    return results.dataset(_record(track, column, fleet, options), lake, plan)


def today(lake: Lake) -> xr.Dataset:
    """Return the column on the day of the casts: a result with one time."""
    column, track, fleet = _column(lake, None, ()), _Track(), Fleet(None, lake)
    _first_note(track, column, fleet, lake.site.start)
    return results.dataset(_record(track, column, fleet, {}), lake, None)


def _column(lake: Lake, values: Array | None, tags: Sequence[str]) -> Column:
    """Return the column of a lake on its first day, its tags still without water."""
    first = first_day(lake) if values is None else values
    return Column(lake, np.pad(first, ((0, 0), (0, len(tags)))), tags)


def _first_note(track: _Track, column: Column, fleet: Fleet, day: date) -> None:
    """Note the first day, with flows and diffusivities as the first visit finds them."""
    around = column.surroundings()
    working = fleet.work(column, around, day)
    column.advance(
        weather_of(column.lake.climate, day, day),
        working.takes,
        column.natural(around) + working.gives,
        0,
        clock.DAY,
        working.reference,
    )
    track.note(day, column, fleet)


def _record(
    track: _Track, column: Column, fleet: Fleet, options: Mapping[str, object]
) -> results.Record:
    """Return what was noted as the record that a dataset is made of."""
    return results.Record(
        time=np.array(track.time),
        face_depth=column.basin.faces,
        face_area=column.basin.area,
        volume=column.basin.volume,
        pressure=column.pressure,
        tracers=column.tracers,
        values=np.array(track.values),
        upward_flow=np.array(track.flow),
        diffusivity=np.array(track.diffusivity),
        mixed_layer_depth=np.array(track.mixed),
        ledger_terms=("start", *kernel.LEDGER_TERMS),
        ledger=np.array(track.ledger),
        ledger_error=np.array(track.error),
        plants=collect(track.plants),
        return_tags=fleet.tags,
        warnings=tuple(fleet.warnings),
        options=options,
    )
