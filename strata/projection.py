"""The clock: steps column and plants together from the day of the casts to the horizon."""

import time
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from datetime import date
from pathlib import Path

import numpy as np
import xarray as xr
from numpy.typing import NDArray

from strata import checkpoint as checkpoint_file
from strata import clock, results
from strata.column import ledger
from strata.column.column import Column
from strata.column.start import first_day
from strata.column.tracers import followed
from strata.coupling import SERIES, Fleet
from strata.errors import ComputationError, OutOfRangeError
from strata.fingerprint import canonical_hash
from strata.lake.climate import weather
from strata.lake.site import Lake
from strata.plant.plan import Plan

Array = NDArray[np.float64]

#: Longest projection [years] that the calendar and the files are made for.
LONGEST = 1000.0
#: Seconds of work between two checkpoints.
KEEP_EVERY = 10.0


@dataclass
class _Track:
    """What is noted down at every output: one array a time under each name."""

    notes: dict[str, list[Array]] = field(default_factory=dict)

    def note(self, day: date, column: Column, fleet: Fleet) -> None:
        """Note the column and the plants as they are on a day."""
        now = {
            "time": np.datetime64(day, "s").astype(np.int64),
            "values": column.values.copy(),
            "flow": column.seen.flow.copy(),
            "diffusivity": column.seen.diffusivity.copy(),
            "mixed": column.state.mixed_depth[0],
            "ledger": np.vstack([column.start, column.books]),
            "error": column.ledger_error(),
            "plants": fleet.series(),
        }
        for name, value in now.items():
            self.notes.setdefault(name, []).append(np.asarray(value))

    def to_arrays(self) -> dict[str, Array]:
        """Return all notes, time first."""
        return {f"note_{name}": np.array(notes) for name, notes in self.notes.items()}

    def from_arrays(self, arrays: Mapping[str, Array]) -> None:
        """Take up what :meth:`to_arrays` gave."""
        for name, notes in arrays.items():
            if name.startswith("note_"):
                self.notes[name.removeprefix("note_")] = list(notes)


def carry_on(
    column: Column,
    fleet: Fleet,
    span: clock.Span,
    begin: date,
    step_days: float,
    seed: int = 0,
) -> None:
    """Carry column and plants through one span, solving plants again as their feed changes."""
    steps, dt = span.steps(step_days)
    air = weather(column.lake.climate, span.begin, begin, seed)
    january = span.begin.month == 1
    while steps:
        column.refresh(slow=january)
        around = column.surroundings()
        working = fleet.work(column, around, span.begin)
        gives = column.natural(around) + working.gives
        _, done = column.advance(air, working.takes, gives, steps, dt, working.reference)
        fleet.book(column, done * dt)
        steps -= done


def project(
    lake: Lake,
    plan: Plan | None = None,
    *,
    years: float = 50.0,
    step_days: float = 1.0,
    seed: int = 0,
    tags: Sequence[str] = (),
    values: Array | None = None,
    checkpoint: str | Path | None = None,
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
    seed : int
        Of the year-to-year variability of the climate, where the lake has any.
    tags : sequence of str
        Names of springs and rivers whose water is followed, and ``"age"`` for the years
        since water entered (or since the start).
    values : ndarray, shape (n, 10), optional
        Start from these tracers instead of the casts.
    checkpoint : path, optional
        File that the state is kept in every ten seconds and at the end; if it is there, the
        run goes on from it, with the same bytes as if it had never stopped.
    progress : callable, optional
        Called with the share done, 0 to 1.

    Returns
    -------
    xarray.Dataset
        ``time`` x ``depth`` with margins and ledger; see ``docs/reference/results.md``.

    Raises
    ------
    strata.OutOfRangeError
        If years or step are out of range, or nothing of a name enters the lake.
    strata.InputError
        If the checkpoint is of another run, or cannot be written.
    strata.ComputationError
        If the books do not close, or the column cannot be carried on; with the date.
    """
    if not 0 < years <= LONGEST or not 0 < step_days <= 31:
        raise OutOfRangeError(
            f"years is {years:g} and step_days {step_days:g};"
            f" up to {LONGEST:g} years in steps of up to 31 days are allowed"
        )
    fleet = Fleet(plan, lake)
    column = _column(lake, values, (*fleet.tags, *followed(lake, tags)))
    begin = lake.site.start
    end = clock.add_years(begin, years)
    todo = clock.spans(begin, end, fleet.dates(begin, end))
    options = {"step_days": step_days, "years": years, "seed": seed}
    keeper = _Keeper(checkpoint, column, fleet, options, (lake, plan, list(tags), values))
    for number, span in enumerate(todo[keeper.done :], keeper.done):
        try:
            if number == 0:
                _first_note(keeper.track, column, fleet, begin, seed)
            carry_on(column, fleet, span, begin, step_days, seed)
        except ComputationError as error:
            raise ComputationError(f"{span.begin} to {span.end}: {error}") from error
        if span.output:
            keeper.track.note(span.end, column, fleet)
        keeper.keep(number + 1, last=number + 1 == len(todo))
        if progress is not None:
            progress((number + 1) / len(todo))
    column.check_ledger()
    return results.dataset(_record(keeper.track, column, fleet, options), lake, plan)


class _Keeper:
    """Keeps a run on disk, if it is asked to, and takes it up again."""

    def __init__(
        self,
        path: str | Path | None,
        column: Column,
        fleet: Fleet,
        options: Mapping[str, object],
        parts: tuple[object, ...],
    ) -> None:
        self.path = None if path is None else Path(path)
        self.column, self.fleet = column, fleet
        self.track = _Track()
        self.done = 0
        self._last = time.monotonic()
        if self.path is None:
            return
        self.fingerprint = canonical_hash(*parts, **options)
        if self.path.exists():
            arrays = checkpoint_file.load(self.path, self.fingerprint)
            self.done = int(arrays["done"])
            for part in (column, fleet, self.track):
                part.from_arrays(arrays)

    def keep(self, done: int, last: bool) -> None:
        """Write the state after so many spans if it is time to."""
        if self.path is None or not (last or time.monotonic() - self._last >= KEEP_EVERY):
            return
        self._last = time.monotonic()
        arrays = {"done": np.array(done)}
        for part in (self.column, self.fleet, self.track):
            arrays |= part.to_arrays()
        checkpoint_file.save(self.path, self.fingerprint, arrays)


def today(lake: Lake) -> xr.Dataset:
    """Return the column on the day of the casts: a result with one time."""
    column, track, fleet = _column(lake, None, ()), _Track(), Fleet(None, lake)
    _first_note(track, column, fleet, lake.site.start, 0)
    return results.dataset(_record(track, column, fleet, {}), lake, None)


def _column(lake: Lake, values: Array | None, tags: Sequence[str]) -> Column:
    """Return the column of a lake on its first day, its tags still without water."""
    first = first_day(lake) if values is None else values
    return Column(lake, np.pad(first, ((0, 0), (0, len(tags)))), tags)


def _first_note(track: _Track, column: Column, fleet: Fleet, day: date, seed: int) -> None:
    """Note the first day, with flows and diffusivities as the first visit finds them."""
    around = column.surroundings()
    working = fleet.work(column, around, day)
    column.advance(
        weather(column.lake.climate, day, day, seed),
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
    notes = {name: np.array(notes) for name, notes in track.notes.items()}
    plants = {
        plant.name: dict(zip(SERIES, notes["plants"][:, number].T, strict=True))
        for number, plant in enumerate(fleet.plants)
    }
    return results.Record(
        time=notes["time"].astype("datetime64[s]"),
        face_depth=column.basin.faces,
        face_area=column.basin.area,
        volume=column.basin.volume,
        pressure=column.pressure,
        tracers=column.tracers,
        values=notes["values"],
        upward_flow=notes["flow"],
        diffusivity=notes["diffusivity"],
        mixed_layer_depth=notes["mixed"],
        ledger_terms=("start", *ledger.LEDGER_TERMS),
        ledger=notes["ledger"],
        ledger_error=notes["error"],
        plants=plants,
        return_tags=fleet.tags,
        warnings=fleet.warnings,
        options=options,
    )
