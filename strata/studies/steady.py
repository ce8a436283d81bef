"""The state that a site's own supply would hold for good, and how far its casts are from it.

A lake with springs of a few m3/s needs centuries to forget how it began.  Three things shorten
the way: at first layers are merged in pairs and steps are a month long, then the layers are
those of the site and steps ten days, at last a day, as in a projection; each stage ends when
the means of two blocks of years no longer differ, or differ by no less than a lake that keeps
overturning differs from itself; and where two blocks moved the column the same way, it is
sent ahead along that way by the sum of the geometric series that they begin (a secant step),
which stands for the blocks it saves.
"""

import math
from collections.abc import Callable, Iterator
from dataclasses import dataclass, replace

import numpy as np
import xarray as xr
from numpy.typing import NDArray

from strata import clock
from strata.column.column import Column
from strata.column.remap import remap
from strata.column.start import first_day
from strata.column.tracers import TRACERS
from strata.coupling import Fleet
from strata.lake.basin import build_basin
from strata.lake.site import Lake
from strata.projection import carry_on

Array = NDArray[np.float64]

#: Years of a block, whose mean is compared with that of the next.
BLOCK = 50
#: Cosine between the moves of two blocks from which on they count as one way.
ALIGNED = 0.95
#: Share of the rest of the way that a secant step goes.
AHEAD = 0.9
#: A block must bring the drift below this share of the best before, or it counts as stalled.
FALLING = 0.8
#: So many stalled blocks end a stage.
STALLED = 4
#: Tracers that a steady state is told by; oxygen and calcium live by the surface alone.
JUDGED = ("temperature", "salinity", "DIC", "alkalinity", "CH4", "N2", "H2S", "phosphate")


@dataclass(frozen=True)
class Stage:
    """One block of years on the way.

    Parameters
    ----------
    name : str
    years : int
        Computed since the start of the spin-up.
    stands_for : float
        Years that a plain run would have needed to come as far.
    drift : float
        Largest change of a layer between the means of two blocks, of the tracer's range, per
        century; NaN after the first block of a stage.
    """

    name: str
    years: int
    stands_for: float
    drift: float


@dataclass(frozen=True)
class Steady:
    """A steady state, and what led to it.

    Parameters
    ----------
    values : ndarray, shape (n, 10)
        Tracers of the layers on the day of the casts, to start a projection from.
    layers : xarray.Dataset
        ``cast``, ``steady``, ``difference`` and ``wobble`` over (tracer, depth): how the last
        block's years differed among themselves.
    stages : tuple of Stage
    """

    values: Array
    layers: xr.Dataset
    stages: tuple[Stage, ...]

    @property
    def drift(self) -> float:
        """Return the drift at the end, of the range of the worst tracer per century."""
        return self.stages[-1].drift

    @property
    def years(self) -> int:
        """Return the years that were computed."""
        return self.stages[-1].years

    @property
    def stands_for(self) -> float:
        """Return the years of a plain run that they stand for."""
        return self.stages[-1].stands_for


def steady(
    lake: Lake,
    *,
    most_years: int = 3000,
    tolerance: float = 0.01,
    values: Array | None = None,
    progress: Callable[[float], None] | None = None,
) -> Steady:
    """Return the steady state of a lake left alone under its own mean climate.

    Parameters
    ----------
    lake : Lake
        Trend and variability of its climate are left out.
    most_years : int
        To compute at most.
    tolerance : float
        Drift of any judged tracer in any layer that counts as none, of its range per century.
    values : ndarray, shape (n, 10), optional
        Start from these tracers instead of the casts.
    progress : callable, optional
        Called with the share done, 0 to 1.
    """
    climate = replace(
        lake.climate, trend=0.0, temperature_variability=0.0, wind_variability=0.0
    )
    lake = replace(lake, climate=climate)
    cast = first_day(lake)
    runner = _Runner(most_years, tolerance, progress)
    now = cast if values is None else values[:, : len(TRACERS)]
    if len(lake.layer_faces) > 80:
        merged = np.append(lake.layer_faces[:-1:2], lake.layer_faces[-1])
        fine = build_basin(lake.hypsography, lake.layer_faces)
        pairs = build_basin(lake.hypsography, merged)
        coarse = Column(replace(lake, layer_faces=merged), remap(now, fine, pairs))
        runner.settle(coarse, "paired layers, steps of a month", 31.0, most_years // 2)
        now = remap(coarse.values, pairs, fine)
    column = Column(lake, now)
    runner.settle(column, "all layers, steps of ten days", 10.0, most_years - 2 * BLOCK)
    mean, wobble = runner.settle(
        column, "all layers, steps of a day", 1.0, runner.years + 2 * BLOCK, jumps=False
    )
    return Steady(
        values=column.values.copy(),
        layers=_layers(column, cast, mean, wobble),
        stages=tuple(runner.stages),
    )


class _Runner:
    """Carries columns on by blocks of years and writes down how they settle."""

    def __init__(
        self, most_years: int, tolerance: float, progress: Callable[[float], None] | None
    ) -> None:
        self.most_years, self.tolerance = most_years, tolerance
        self.progress = progress
        self.years, self.stands_for = 0, 0.0
        self.stages: list[Stage] = []

    def settle(
        self, column: Column, name: str, step_days: float, until: int, jumps: bool = True
    ) -> tuple[Array, Array]:
        """Carry a column on until it settles; return mean and wobble of the last block."""
        before: Array | None = None
        last: Array | None = None
        best, stalled = math.inf, 0
        while True:
            start = column.values.copy()
            mean, wobble = self._block(column, step_days)
            drift = math.nan if before is None else _drift(column, mean - before)
            self.stages.append(Stage(name, self.years, self.stands_for, drift))
            stalled = 0 if not drift >= FALLING * best else stalled + 1
            best = min(best, drift) if drift == drift else best
            done = drift < self.tolerance or stalled >= STALLED
            if done or self.years + BLOCK > until:
                return mean, wobble
            move = column.values - start
            before = mean
            if jumps and last is not None and self._jump(column, last, move):
                before, last = None, None
            else:
                last = move

    def _block(self, column: Column, step_days: float) -> tuple[Array, Array]:
        """Carry a column through a block of years; return mean and spread of their ends."""
        alone = Fleet(None, column.lake)
        begin = column.lake.site.start
        year = clock.spans(begin, clock.add_years(begin, 1), [])
        ends = []
        for _ in range(BLOCK):
            for span in year:
                carry_on(column, alone, span, begin, step_days)
            ends.append(column.values.copy())
            self.years += 1
            self.stands_for += 1
            if self.progress is not None:
                self.progress(min(self.years / self.most_years, 1.0))
        return np.mean(ends, axis=0), np.ptp(ends, axis=0)

    def _jump(self, column: Column, last: Array, move: Array) -> bool:
        """Send a column ahead if its last two moves lie one way; tell whether it was sent."""
        first, second = _scaled(column, last), _scaled(column, move)
        both = float(np.sum(first * second))
        size = float(np.sum(first * first))
        if size == 0.0 or both <= 0.0:
            return False
        ratio = both / size
        if both < ALIGNED * math.sqrt(size * np.sum(second * second)) or ratio >= 1.0:
            return False
        ahead = AHEAD * ratio / (1.0 - ratio)
        # no amount may be sent below half of what is there
        falling = move < 0.0
        if falling.any():
            ahead = min(ahead, float((0.5 * column.values[falling] / -move[falling]).min()))
        if ahead < 1.0:
            return False
        column.values[...] += ahead * move
        saved = math.log1p(-ahead * (1.0 - ratio) / ratio) / math.log(ratio)
        self.stands_for += saved * BLOCK
        return True


def _scaled(column: Column, change: Array) -> Array:
    """Return a change as share of each tracer's range, weighted by volume."""
    span = np.ptp(column.values, axis=0)
    weight = np.sqrt(column.basin.volume / column.basin.volume.sum())
    share = change / np.where(span > 0.0, span, 1.0) * weight[:, None]
    return share[:, [TRACERS.index(name) for name in JUDGED]]


def _drift(column: Column, change: Array) -> float:
    """Return the largest change between two blocks, of each tracer's range, per century."""
    shares = [
        np.abs(change[:, k]).max() / span
        for k, name in enumerate(TRACERS)
        if name in JUDGED and (span := np.ptp(column.values[:, k])) > 0.0
    ]
    return float(max(shares, default=0.0) * 100.0 / BLOCK)


def _layers(column: Column, cast: Array, mean: Array, wobble: Array) -> xr.Dataset:
    """Return casts and steady state layer by layer."""
    dims = ("tracer", "depth")
    return xr.Dataset(
        {
            "cast": (dims, cast.T),
            "steady": (dims, mean.T),
            "difference": (dims, (mean - cast).T),
            "wobble": (dims, wobble.T),
        },
        coords={"tracer": list(TRACERS), "depth": column.basin.depth},
    )


def rows(found: Steady) -> Iterator[dict[str, float | str]]:
    """Yield for each tracer how far casts and steady state differ, and where most."""
    layers = found.layers
    for name in TRACERS:
        one = layers.sel(tracer=name)
        span = float(one["steady"].max() - one["steady"].min())
        worst = int(np.abs(one["difference"].values).argmax())
        yield {
            "tracer": name,
            "range": span,
            "largest_difference": float(one["difference"].values[worst]),
            "at_depth_m": float(one["depth"].values[worst]),
            "share_of_range": float(abs(one["difference"].values[worst]) / span)
            if span
            else 0.0,
            "rms_difference": float(np.sqrt((one["difference"] ** 2).mean())),
            "wobble": float(one["wobble"].max()),
        }
