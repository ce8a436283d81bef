"""What an operator plans: the frozen description of plants and their timetable.

Built by ``strata.inputs`` from a plan file; nothing here reads a file.  SI units, pressures
absolute, temperature in degC, concentrations in mol m-3, depth in m, positive down.
"""

from collections.abc import Mapping
from dataclasses import dataclass, field
from datetime import date


@dataclass(frozen=True)
class Stage:
    """One separator of a train."""

    pressure: float  # Pa absolute
    approach: float = 1.0  # share of the way to equilibrium
    gas_to: str = "product"  # "product", "wash" or "vent"


@dataclass(frozen=True)
class Lime:
    """Ca(OH)2 put into the feed so that CO2 is bound as calcite."""

    dose: float  # mol Ca(OH)2 per m3 of feed
    approach: float = 1.0  # share of the calcite that equilibrium would form
    settled: float = 1.0  # share of the calcite taken out as solids; the rest goes with the return


@dataclass(frozen=True)
class Wash:
    """A counter-current water wash of the raw gas."""

    pressure: float  # Pa
    water_flow: float  # m3/s
    water_depth: float  # m
    stages: int = 4


@dataclass(frozen=True)
class Return:
    """Where a stream goes back into the lake."""

    depth: float  # m
    ports: int = 1
    port_diameter: float = 0.5  # m
    port_spacing: float = 10.0  # m
    temperature_change: float = 0.0  # K against the water that enters the plant


@dataclass(frozen=True)
class Plant:
    """One plant: what it takes, what it does to it, where it puts it back, and when."""

    name: str
    intake_depth: float  # m
    flow: float  # m3/s at full load
    stages: tuple[Stage, ...]
    return_water: Return
    start: date
    stop: date | None = None  # None: runs to the end of the projection
    ramp_days: float = 0.0  # from nothing to full flow
    availability: float = 1.0  # mean share of the time on load
    lime: Lime | None = None
    wash: Wash | None = None
    return_wash: Return | None = None  # where wash water goes; with the return water if None
    pump_efficiency: float = 0.75
    compressor_efficiency: float = 0.70
    electric_efficiency: float = 0.40
    least_feed_methane: float = 0.0  # mol/m3, the plant stops below


@dataclass(frozen=True)
class Plan:
    """A named set of plants."""

    name: str
    plants: tuple[Plant, ...]
    texts: Mapping[str, str] = field(default_factory=dict)  # input file name -> text, for the record
