"""The only two things that pass between the units of a plant: water and gas, per second.

A unit maps streams to streams; :func:`element_flows` is what its balance is struck in.  Argon
is no tracer of the lake: water carries it in step with its nitrogen.
"""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace

from strata.constants import CALCITE_MASS, GAS_CONSTANT, ZERO_CELSIUS
from strata.species import SPECIES, VAPOUR

CALCITE_DENSITY = 2711.0  # kg/m3, Deer, Howie & Zussman 2013
NORMAL_PRESSURE = 101325.0  # Pa, of the normal cubic metre at 0 degC

#: What must come out as it went in: names of the flows in :func:`element_flows`.
ELEMENTS = ("CH4", "C", "Ca", "alkalinity", "N2", "O2", "H2S", "phosphate")


@dataclass(frozen=True)
class WaterStream:
    """Water with what is dissolved and suspended in it."""

    flow: float  # m3/s
    temperature: float  # potential, degC
    salinity: float  # g/kg
    dissolved: Mapping[str, float]  # mol/m3 (eq/m3) by tracer name
    solids: float = 0.0  # kg/m3 of calcite in suspension

    def of(self, tracer: str) -> float:
        """Return a concentration, 0 where the stream does not name it."""
        return self.dissolved.get(tracer, 0.0)

    def changed(self, **dissolved: float) -> "WaterStream":
        """Return the stream with some concentrations replaced."""
        return replace(self, dissolved={**self.dissolved, **dissolved})


@dataclass(frozen=True)
class GasStream:
    """Gas, water vapour included."""

    flows: Mapping[str, float]  # mol/s by gas; vapour as "H2O"
    temperature: float  # degC
    pressure: float  # Pa

    @property
    def total(self) -> float:
        """Return all gas and vapour [mol/s]."""
        return sum(self.flows.values())

    @property
    def dry(self) -> float:
        """Return all gas without the vapour [mol/s]."""
        return self.total - self.flows.get(VAPOUR, 0.0)

    def of(self, gas: str) -> float:
        """Return the flow of one gas [mol/s]."""
        return self.flows.get(gas, 0.0)

    def share(self, gas: str) -> float:
        """Return the mole fraction of a gas in the dry gas; 0 where there is no gas."""
        return self.of(gas) / self.dry if self.dry > 0.0 else 0.0

    @property
    def normal_flow(self) -> float:
        """Return the dry gas in normal cubic metres per second (0 degC, 1 atm, ideal)."""
        return self.dry * GAS_CONSTANT * ZERO_CELSIUS / NORMAL_PRESSURE

    @property
    def molar_mass(self) -> float:
        """Return the mean molar mass of the dry gas [kg/mol]; 0 where there is no gas."""
        mass = sum(
            flow * SPECIES[gas].molar_mass for gas, flow in self.flows.items() if gas != VAPOUR
        )
        return mass / self.dry if self.dry > 0.0 else 0.0


NO_GAS = GasStream({}, 0.0, NORMAL_PRESSURE)


def joined_gas(streams: Iterable[GasStream], pressure: float) -> GasStream:
    """Return gas streams together at one pressure, their temperatures weighted by amount."""
    parts = [stream for stream in streams if stream.total > 0.0]
    if not parts:
        return GasStream({}, 0.0, pressure)
    if len(parts) == 1:
        return replace(parts[0], pressure=pressure)
    flows: dict[str, float] = {}
    heat = 0.0
    for stream in parts:
        heat += stream.total * stream.temperature
        for gas, flow in stream.flows.items():
            flows[gas] = flows.get(gas, 0.0) + flow
    return GasStream(flows, heat / sum(flows.values()), pressure)


def joined_water(streams: Iterable[WaterStream]) -> WaterStream:
    """Return water streams mixed; every property mixes in proportion to volume."""
    parts = [stream for stream in streams if stream.flow > 0.0]
    if len(parts) == 1:
        return parts[0]
    flow = sum(part.flow for part in parts)
    names = sorted({name for part in parts for name in part.dissolved})

    def mean(values: Iterable[float]) -> float:
        return sum(p.flow * v for p, v in zip(parts, values, strict=True)) / flow

    return WaterStream(
        flow,
        mean(p.temperature for p in parts),
        mean(p.salinity for p in parts),
        {name: mean(p.of(name) for p in parts) for name in names},
        mean(p.solids for p in parts),
    )


def element_flows(
    water: Iterable[WaterStream] = (),
    gas: Iterable[GasStream] = (),
    calcite: float = 0.0,
    lime: float = 0.0,
) -> dict[str, float]:
    """Return what water, gas, calcite and lime [mol/s] carry of each element [mol/s].

    Suspended calcite counts with its carbon, calcium and two equivalents of alkalinity.
    """
    waters = list(water)
    gases = list(gas)
    out = dict.fromkeys(ELEMENTS, 0.0)
    solid = calcite
    for stream in waters:
        solid += stream.flow * stream.solids / CALCITE_MASS
        out["C"] += stream.flow * (stream.of("DIC") + stream.of("CH4"))
        out["Ca"] += stream.flow * stream.of("calcium")
        for name in ("CH4", "alkalinity", "N2", "O2", "H2S", "phosphate"):
            out[name] += stream.flow * stream.of(name)
    for part in gases:
        out["C"] += part.of("CO2") + part.of("CH4")
        for name in ("CH4", "N2", "O2", "H2S"):
            out[name] += part.of(name)
    out["C"] += solid
    out["Ca"] += solid + lime
    out["alkalinity"] += 2.0 * (solid + lime)
    return out


def imbalance(entering: Mapping[str, float], leaving: Mapping[str, float]) -> dict[str, float]:
    """Return per element (in - out) over what goes through; 0 where nothing does."""
    out = {}
    for name, flow in entering.items():
        through = max(abs(flow), abs(leaving[name]))
        out[name] = (flow - leaving[name]) / through if through > 0.0 else 0.0
    return out
