"""How plants and column meet: feeds drawn from the layers, factors held, returns put back.

A plant turns its feed into transfer factors: for gases and DIC the share that goes back, for
all else the amount added.  The kernel withdraws the actual water and applies the held factors,
so what is produced is exactly what was withdrawn and added less what was returned.
"""

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field
from datetime import date

import numpy as np
from numpy.typing import NDArray

from strata.column import ledger
from strata.column.column import Column
from strata.column.streams import Give, Path, Source, Surroundings, Take, follow
from strata.column.tracers import METHANE, SALINITY, TEMPERATURE, TRACERS
from strata.lake.site import Lake
from strata.plant import timetable
from strata.plant.intake import plant_weights
from strata.plant.operate import Operation, operate, outlets
from strata.plant.plan import Intake, Plan, Plant, Return
from strata.plant.power import heating_value
from strata.plant.streams import CALCITE_DENSITY, WaterStream
from strata.water.density import parcel_density

Array = NDArray[np.float64]

#: The tag of water that any plant has put back.
RETURN_TAG = "return_water"
#: Tracers of which a share goes back; of the others an amount is added.
_BY_SHARE = ("DIC", "CH4", "N2", "O2", "H2S")


@dataclass(frozen=True)
class Working:
    """What the plants do during a visit, as the column wants it."""

    takes: list[Take]
    gives: list[Give]
    reference: Array  # (takes, m)


@dataclass
class _Running:
    """One plant at work: what it drew, made and put back."""

    plant: Plant
    feed: WaterStream
    operation: Operation
    takes: list[int]  # rows of its takes: the feed, then the wash water
    gives: list[Give] = field(default_factory=list)
    paths: list[Path] = field(default_factory=list)
    excess: list[float] = field(default_factory=list)  # of each outlet over the lake, kg m-3


class Fleet:
    """All plants of a plan, as the clock sees them; none for a lake left alone."""

    def __init__(self, plan: Plan | None, lake: Lake) -> None:
        self.lake = lake
        self.plants = plan.plants if plan is not None else ()
        self.tags = (RETURN_TAG,) if self.plants else ()
        self.running: list[_Running] = []
        self.totals = {
            plant.name: {"recovered_CH4": 0.0, "vented_CH4_total": 0.0}
            for plant in self.plants
        }
        self._told: dict[str, str] = {}  # plant and kind of finding -> its first text

    def dates(self, begin: date, end: date) -> list[date]:
        """Return every day between two on which a plant changes load or settings."""
        return [d for plant in self.plants for d in timetable.event_dates(plant, begin, end)]

    def work(self, column: Column, around: Surroundings, day: date) -> Working:
        """Return what the plants take and give from a day on, by the column as it is."""
        self.running = []
        takes: list[Take] = []
        gives: list[Give] = []
        reference: list[Array] = []
        for planned in self.plants:
            load = timetable.load_factor(planned, day)
            if load <= 0.0:
                continue
            plant = timetable.plant_on(planned, day)
            draws = [_draw(column, plant.intakes, load * plant.flow)]
            if plant.wash is not None:
                intake = [Intake(plant.wash.water_depth, 1.0)]
                draws.append(_draw(column, intake, load * plant.wash.water_flow))
            flows = [float(take.draw.sum()) for take in draws]
            means = [
                take.draw @ column.values / flow
                for take, flow in zip(draws, flows, strict=True)
            ]
            feeds = [stream_of(*fed) for fed in zip(means, flows, strict=True)]
            if not timetable.runs_on_feed(plant, feeds[0].of("CH4")):
                continue
            operation = operate(
                plant, feeds[0], feeds[1] if len(feeds) > 1 else None, self.lake.site
            )
            rows = list(range(len(takes), len(takes) + len(draws)))
            running = _Running(plant, feeds[0], operation, rows)
            self._put_back(running, feeds, column, around)
            takes += draws
            gives += running.gives
            reference += means
            self.running.append(running)
            self._tell(plant.name, day, _surfacing(running, column))
            if day.month == 1 or timetable.set_anew(planned, day):
                self._tell(plant.name, day, operation.findings)
        return Working(
            takes, gives, np.array(reference).reshape(len(takes), len(column.tracers))
        )

    def _put_back(
        self,
        running: _Running,
        feeds: list[WaterStream],
        column: Column,
        around: Surroundings,
    ) -> None:
        """Follow what each outlet of a plant puts back to where it ends."""
        operation = running.operation
        streams = [operation.returned]
        if operation.wash_returned is not None:
            streams.append(operation.wash_returned)
        found = outlets(running.plant, operation)
        for number, (where, water) in enumerate(found):
            source = source_of(
                f"{running.plant.name}, outlet {number + 1}", water, where, column
            )
            path = follow(source, around, self.lake.mixing.overshoot)
            link: dict[int, Array] = {}
            added = np.zeros(len(column.tracers))
            parts = range(len(streams)) if len(found) == 1 else [number]
            for part in parts:
                link[running.takes[part]], more = factors(
                    feeds[part], streams[part], column.tracers, by_share=part == 0
                )
                added += more
            running.gives.append(
                Give(
                    ledger.RETURN, water.flow, added, path.given, path.entrained, link, source
                )
            )
            running.paths.append(path)
            running.excess.append(excess_density(source, around))

    def _tell(self, name: str, day: date, findings: Mapping[str, str]) -> None:
        """Keep each kind of finding of a plant once, with the numbers of its first day."""
        for kind, text in findings.items():
            self._told.setdefault(f"{name}: {kind}", f"{name}, from {day}: {text}")

    @property
    def warnings(self) -> tuple[str, ...]:
        """Return what the plants warned of, in the order of its first day."""
        return tuple(self._told.values())

    def book(self, column: Column, seconds: float) -> None:
        """Add the methane that left the lake during a visit to the totals of each plant."""
        taken = column.state.taken
        for running in self.running:
            left = sum(taken[row, METHANE] for row in running.takes)
            for give in running.gives:
                left -= seconds * give.added[METHANE]
                left -= sum(
                    share[METHANE] * taken[row, METHANE] for row, share in give.link.items()
                )
            made = running.operation.product.of("CH4")
            vented = running.operation.vented.of("CH4")
            totals = self.totals[running.plant.name]
            if made + vented > 0.0:
                totals["recovered_CH4"] += left * made / (made + vented)
                totals["vented_CH4_total"] += left * vented / (made + vented)

    def to_arrays(self) -> dict[str, Array]:
        """Return the totals of every plant."""
        return {
            "totals": np.array([list(totals.values()) for totals in self.totals.values()]),
            "warnings": np.array([*self._told.items()], dtype=np.str_).reshape(-1, 2),
        }

    def from_arrays(self, arrays: Mapping[str, Array]) -> None:
        """Take up what :meth:`to_arrays` gave."""
        for totals, row in zip(self.totals.values(), arrays["totals"], strict=True):
            totals.update(zip(totals, row.tolist(), strict=True))
        self._told = {str(kind): str(line) for kind, line in arrays["warnings"]}

    def series(self) -> Array:
        """Return what every plant does now, (plants, SERIES)."""
        found = {plant.name: dict(_IDLE) for plant in self.plants}
        for running in self.running:
            found[running.plant.name] = _series_of(running)
        rows = [[(found[name] | self.totals[name])[key] for key in SERIES] for name in found]
        return np.array(rows).reshape(len(rows), len(SERIES))


#: Series of a plant that does not run: nothing flows, and ratios have no value.
_IDLE = dict.fromkeys(
    (
        "flow",
        "product_CH4",
        "product_CO2",
        "vented_CH4",
        "vented_CO2",
        "returned_CH4",
        "lime",
        "solids",
        "electric_power",
        "net_power",
        "pump_power",
        "compression_power",
        "vacuum_power",
    ),
    0.0,
) | dict.fromkeys(
    (
        "feed_CH4",
        "recovery",
        "product_purity",
        "heating_value",
        "return_density_excess",
        "trap_depth",
        "dilution",
        "upper_reach",
    ),
    np.nan,
)


#: Series of a plant in the order of :meth:`Fleet.series`.
SERIES = (*_IDLE, "recovered_CH4", "vented_CH4_total")


def _series_of(running: _Running) -> dict[str, float]:
    """Return the series of a plant at work."""
    operation, feed, path = running.operation, running.feed, running.paths[0]
    product, used = operation.product, operation.power
    return {
        "flow": feed.flow,
        "feed_CH4": feed.of("CH4"),
        "recovery": operation.recovery,
        "product_CH4": product.of("CH4"),
        "product_CO2": product.of("CO2"),
        "product_purity": product.share("CH4") if product.dry > 0.0 else np.nan,
        "heating_value": heating_value(product) if product.dry > 0.0 else np.nan,
        "vented_CH4": operation.vented.of("CH4"),
        "vented_CO2": operation.vented.of("CO2"),
        "returned_CH4": operation.returned.flow * operation.returned.of("CH4"),
        "lime": operation.lime,
        "solids": operation.solids,
        "electric_power": used["electric"],
        "net_power": used["net"],
        "pump_power": used["pump"],
        "compression_power": used.get("compression", 0.0),
        "vacuum_power": used.get("vacuum", 0.0),
        "return_density_excess": running.excess[0],
        "trap_depth": path.trap_depth,
        "dilution": path.dilution,
        "upper_reach": path.above_outlet,
    }


def _draw(column: Column, intakes: Iterable[Intake], flow: float) -> Take:
    """Return what intakes draw, a flow in all [m3 s-1]."""
    sinks = [(intake.depth, flow * intake.share) for intake in intakes if intake.share > 0.0]
    weights = plant_weights(column.basin.faces, column.seen.stability[1:-1], intakes, flow)
    return Take(flow * weights, sinks)


def stream_of(mean: Array, flow: float) -> WaterStream:
    """Return water of given tracers (m,) that flows [m3 s-1] as a stream."""
    dissolved = {
        name: float(mean[k])
        for k, name in enumerate(TRACERS)
        if k not in (TEMPERATURE, SALINITY)
    }
    return WaterStream(flow, float(mean[TEMPERATURE]), float(mean[SALINITY]), dissolved)


def _surfacing(running: _Running, column: Column) -> dict[str, str]:
    """Return which outlets send water into the surface layer now, by their number."""
    mixed = float(column.state.mixed_depth[0])
    above = column.basin.faces[1:] <= mixed
    found = {}
    for number, (path, give) in enumerate(zip(running.paths, running.gives, strict=True), 1):
        share = float(path.given[above].sum())
        if share > 0.0:
            found[f"surfacing at outlet {number}"] = (
                f"{100 * share:.0f} % of the water of outlet {number} ({give.water:.3g} m3/s,"
                f" diluted {path.dilution:.1f} times) ends in the surface layer, mixed to"
                f" {mixed:.0f} m"
            )
    return found


def factors(
    feed: WaterStream, back: WaterStream, tracers: Sequence[str], by_share: bool
) -> tuple[Array, Array]:
    """Return the share of each tracer of a feed that goes back, and what is added [1/s].

    A share for dissolved gases and DIC where ``by_share`` or where some is taken out (an
    amount could take more than the water of a later day holds), an amount on top of all for
    the rest. Tags of return water are given anew; other tags go along with the water.
    """
    link, added = np.ones(len(tracers)), np.zeros(len(tracers))
    for k, name in enumerate(tracers):
        if name == RETURN_TAG:
            link[k], added[k] = 0.0, back.flow
        elif name in TRACERS:
            before, after = _value(feed, name), _value(back, name)
            if name in _BY_SHARE and before > 0.0 and (by_share or after < before):
                link[k] = after / before
            else:
                added[k] = (after - before) * back.flow
    return link, added


def _value(stream: WaterStream, tracer: str) -> float:
    """Return one tracer of a stream."""
    if tracer in ("temperature", "salinity"):
        return float(getattr(stream, tracer))
    return stream.of(tracer)


def source_of(name: str, water: WaterStream, where: Return, column: Column) -> Source:
    """Return a stream at the mouth of its outlet; suspended calcite weighs it down."""
    _, mass, volume = column.parcel(
        water.temperature, water.salinity, water.dissolved, where.depth
    )
    return Source(
        name=name,
        depth=where.depth,
        flow=water.flow,
        temperature=water.temperature,
        salinity=water.salinity,
        gas_mass=mass + water.solids,
        gas_volume=volume + water.solids / CALCITE_DENSITY,
        ports=where.ports,
        port_diameter=where.port_diameter,
        port_spacing=where.port_spacing,
        port_angle=where.port_angle,
    )


def excess_density(source: Source, around: Surroundings) -> float:
    """Return how much heavier a source is than the lake at its outlet [kg m-3]."""
    middle = around.basin.depth
    pressure = float(np.interp(source.depth, middle, around.pressure))

    def density(theta: float, salinity: float, mass: float, volume: float) -> float:
        return float(
            parcel_density(theta, salinity, pressure, mass, volume, around.haline_contraction)
        )

    lake = [
        float(np.interp(source.depth, middle, profile))
        for profile in (
            around.temperature,
            around.salinity,
            around.gas_mass,
            around.gas_volume,
        )
    ]
    own = (source.temperature, source.salinity, source.gas_mass, source.gas_volume)
    return density(*own) - density(*lake)
