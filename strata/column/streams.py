"""Water that enters the column: from where, by which path, and as the kernel wants it.

Each stream is a *give*: some water with all it carries, what it takes along from the layers it
passes as a plume, and the layers it ends in.  Takes and gives of a visit are stacked into the
arrays of the kernel here.
"""

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from strata.compiled import compiled
from strata.errors import ComputationError
from strata.lake.basin import Basin
from strata.water.plume import follow_plume

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Surroundings:
    """The water that a plume meets: one value per layer."""

    basin: Basin
    temperature: Array  # potential, degC
    salinity: Array  # g/kg
    gas_mass: Array  # kg m-3
    gas_volume: Array  # m3 m-3
    pressure: Array  # Pa, at the middles
    stability: Array  # (n - 1,) buoyancy frequency squared at the inner faces, s-2
    haline_contraction: float
    gravity: float


@dataclass(frozen=True)
class Source:
    """Water at the mouth of an outlet."""

    name: str
    depth: float  # m
    flow: float  # m3/s
    temperature: float  # potential, degC
    salinity: float  # g/kg
    gas_mass: float  # kg m-3, suspended solids included
    gas_volume: float  # m3 m-3
    ports: int = 1
    port_diameter: float = 0.5  # m
    port_spacing: float = 10.0  # m
    port_angle: float = 0.0  # degrees upward


@dataclass(frozen=True)
class Path:
    """Where a plume took water along and where it ended."""

    entrained: Array  # (n,) m3/s
    given: Array  # (n,) share
    trap_depth: float  # m
    end_depth: float  # m, the furthest it reached
    dilution: float
    above_outlet: float  # share of the source that ends above its outlet


@dataclass(frozen=True)
class Take:
    """One withdrawal from the column."""

    draw: Array  # (n,) from each layer, m3/s
    sinks: Sequence[tuple[float, float]] = ()  # depth [m] and flow [m3/s] of what draws it


@dataclass(frozen=True)
class Give:
    """One stream into the column, as the kernel holds it."""

    kind: int  # row of the ledger
    water: float  # m3/s
    added: Array  # (m,) amount per second, besides what is linked to takes
    given: Array  # (n,)
    entrained: Array  # (n,)
    link: Mapping[int, Array] = field(default_factory=dict)  # take -> (m,) share passed on
    source: Source | None = None  # whose plume is followed anew within a visit


def not_followed(source: Source) -> ComputationError:
    """Return the error for a source whose plume did not end."""
    return ComputationError(
        f"the plume of {source.name} from {source.depth:g} m could not be followed"
    )


def follow(source: Source, around: Surroundings, overshoot: float) -> Path:
    """Return the path of the plume of a source through the column as it is.

    Raises
    ------
    strata.ComputationError
        If the plume cannot be integrated.
    """
    entrained, given, trap, end, dilution, code = follow_plume(
        around.basin.faces,
        around.temperature,
        around.salinity,
        around.gas_mass,
        around.gas_volume,
        around.pressure,
        around.stability,
        around.haline_contraction,
        around.gravity,
        source.depth,
        source.flow,
        source.temperature,
        source.salinity,
        source.gas_mass,
        source.gas_volume,
        float(source.ports),
        source.port_diameter,
        source.port_spacing,
        overshoot,
        math.radians(source.port_angle),
    )
    if code < 0:
        raise not_followed(source)
    above = float(given[around.basin.depth < source.depth].sum())
    return Path(entrained, given, trap, end, dilution, above)


@dataclass(frozen=True)
class Stacked:
    """Takes and gives as the arrays of the kernel."""

    take: Array
    link: Array
    added: Array
    water: Array
    entrained: Array
    given: Array
    sink: Array
    mouth: Array
    kind: NDArray[np.int64]
    take_span: NDArray[np.int64]
    plume_span: NDArray[np.int64]
    give_span: NDArray[np.int64]


@compiled
def fill_spans(shares, spans):
    """Fill the first column that is not zero, and the one behind the last, of every row."""
    for row in range(shares.shape[0]):
        spans[row, 0], spans[row, 1] = 0, 0
        for column in range(shares.shape[1]):
            if shares[row, column] != 0.0:
                if spans[row, 1] == 0:
                    spans[row, 0] = column
                spans[row, 1] = column + 1


def _mouth(source: Source | None) -> tuple[float, ...]:
    """Return what the kernel must know of a source to follow it; nothing of none."""
    if source is None:
        return (0.0,) * 7
    ports = (source.ports, source.depth, source.port_diameter, source.port_spacing)
    return (*ports, math.radians(source.port_angle), source.gas_mass, source.gas_volume)


def _spans(shares: Array) -> NDArray[np.int64]:
    """Return where the entries of each row that are not zero begin and end."""
    spans = np.empty((len(shares), 2), dtype=np.int64)
    fill_spans(shares, spans)
    return spans


def stack(takes: Sequence[Take], gives: Sequence[Give], layers: int, tracers: int) -> Stacked:
    """Return takes and gives as arrays; no take or give is an empty axis."""
    take = np.array([one.draw for one in takes]).reshape(len(takes), layers)
    sinks = [(row, *sink) for row, one in enumerate(takes) for sink in one.sinks]
    entrained = np.array([give.entrained for give in gives]).reshape(len(gives), layers)
    given = np.array([give.given for give in gives]).reshape(len(gives), layers)
    link = np.zeros((len(gives), len(takes), tracers))
    added = np.zeros((len(gives), tracers))
    for k, give in enumerate(gives):
        added[k, : len(give.added)] = give.added
        for j, share in give.link.items():
            link[k, j, : len(share)] = share
    return Stacked(
        take=take,
        link=link,
        added=added,
        water=np.array([give.water for give in gives], dtype=np.float64),
        entrained=entrained,
        given=given,
        sink=np.array(sinks, dtype=np.float64).reshape(-1, 3),
        mouth=np.array([_mouth(give.source) for give in gives]).reshape(-1, 7),
        kind=np.array([give.kind for give in gives], dtype=np.int64),
        take_span=_spans(take),
        plume_span=_spans(entrained),
        give_span=_spans(given),
    )
