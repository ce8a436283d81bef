"""What an operator plans: the frozen description of plants and their timetable.

Built by ``strata.inputs`` from a plan file; nothing here reads a file.  SI units, pressures
absolute, temperature in degC, concentrations in mol m-3, depth in m, positive down.  All but
the intake, the flow, the stages, the return and the start has a default that keeps a simple
plan simple.
"""

from collections.abc import Mapping
from dataclasses import dataclass, field
from datetime import date


@dataclass(frozen=True)
class Intake:
    """One more depth that a plant draws from."""

    depth: float  # m
    share: float  # of the plant's flow


@dataclass(frozen=True)
class Riser:
    """The pipes from the intake to the first separator."""

    bore: float  # m, inner diameter
    pipes: int = 1
    roughness: float = 5e-5  # m
    separator_height: float = 0.0  # m above the lake surface; negative lies below it


@dataclass(frozen=True)
class Stage:
    """One separator of a train."""

    pressure: float  # Pa
    approach: float = 1.0  # share of the way to equilibrium
    gas_to: str = "product"  # "product", "wash", "vent" or "return" (dissolved again at depth)
    residence_time: float | None = None  # s; with mass_transfer it sets the approach instead
    mass_transfer: float | None = None  # s-1, k_L a
    carry_under: float = 0.0  # share of the released gas that goes on with the water


@dataclass(frozen=True)
class Lime:
    """Ca(OH)2 put into the feed so that CO2 is bound as calcite: by dose or to a target."""

    dose: float | None = None  # mol Ca(OH)2 per m3 of feed
    target_co2: float | None = None  # mol/m3 of free CO2 to be left, instead of a dose
    approach: float = 1.0  # share of the calcite that equilibrium would form
    settled: float = 1.0  # share of the calcite taken out as solids; the rest is returned


@dataclass(frozen=True)
class Wash:
    """A counter-current water wash of the raw gas: one tower, or several one after another."""

    pressure: float  # Pa
    water_flow: float  # m3/s, of all towers
    water_depth: float  # m
    stages: int = 4  # equilibrium stages of a tower
    efficiency: float = 1.0  # of a stage: share of the way to equilibrium
    towers: int = 1  # in series for the gas, each with its equal share of fresh water


@dataclass(frozen=True)
class Return:
    """Where a stream goes back into the lake."""

    depth: float  # m
    ports: int = 1
    port_diameter: float = 0.5  # m
    port_spacing: float = 10.0  # m
    port_angle: float = 0.0  # degrees upward; -90 is straight down
    temperature_change: float = 0.0  # K, beyond what the plant's own units do


@dataclass(frozen=True)
class Delivery:
    """What is done with the gas after the plant, and with what efficiency."""

    product_pressure: float | None = None  # Pa; None: as it comes, or air's
    compressor_stages: int = 1  # of the product compressor
    cooling_temperature: float = 30.0  # degC, between compressor stages
    auxiliary_power: float = 0.0  # W, of all else


@dataclass(frozen=True)
class Outage:
    """A part of a plant that is out of order for a while."""

    part: str  # "plant", "wash", "lime", or "stage 1", "stage 2", ...
    start: date
    stop: date


@dataclass(frozen=True)
class Change:
    """New values of a plant's settings from a day on."""

    start: date
    values: Mapping[str, object]  # attribute path ("return_water.depth", "stages.1.pressure")


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
    monthly_availability: tuple[float, ...] = ()  # January first; multiplies availability
    further_intakes: tuple[Intake, ...] = ()  # intake_depth gives what they do not
    riser: Riser | None = None  # None: single-phase pipe of the pump head given below
    lime: Lime | None = None
    wash: Wash | None = None
    return_wash: Return | None = None  # where wash water goes; with the return water if None
    delivery: Delivery = Delivery()
    pump_head: float = 5.0  # m of water, where there is no riser to compute it from
    pump_efficiency: float = 0.75
    compressor_efficiency: float = 0.70
    electric_efficiency: float = 0.40
    least_feed_methane: float = 0.0  # mol/m3, the plant stops below
    outages: tuple[Outage, ...] = ()
    changes: tuple[Change, ...] = ()

    @property
    def intakes(self) -> tuple[Intake, ...]:
        """Return all depths drawn from with their shares of the flow."""
        rest = 1.0 - sum(intake.share for intake in self.further_intakes)
        return (Intake(self.intake_depth, rest), *self.further_intakes)


@dataclass(frozen=True)
class Plan:
    """A named set of plants."""

    name: str
    plants: tuple[Plant, ...]
    texts: Mapping[str, str] = field(default_factory=dict)  # input file name -> its text
