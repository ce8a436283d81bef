"""What a site gives: the frozen description of a lake that all physics is handed.

Built by ``strata.inputs`` from a lake file; nothing here reads a file.  Units are SI with
temperature in degC, salinity in g/kg, concentrations in mol m-3 and depth in m, positive down.
"""

from collections.abc import Mapping
from dataclasses import dataclass, field
from datetime import date

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Site:
    """Where the lake lies and what its water is like."""

    name: str
    air_pressure: float  # Pa, mean at the lake surface
    latitude: float  # degrees north; sets gravity
    start: date  # the day the casts stand for; a projection begins here
    haline_contraction: float = 0.75e-3  # per g/kg
    co2_molar_volume: float = 33e-6  # m3/mol, partial molar volume of CO2
    magnesium_share: float = 0.0  # of the cation equivalents, for ion pairs
    calcium_share: float = 0.0  # of the cation equivalents, for ion pairs and calcite
    laws: Mapping[str, object] = field(default_factory=dict)  # corrections switched by name


@dataclass(frozen=True)
class Hypsography:
    """Area against depth, from the surface to the deepest point."""

    depth: Array  # m, rising from 0
    area: Array  # m2, falling


@dataclass(frozen=True)
class Profile:
    """One measured quantity on its own depths."""

    depth: Array  # m, rising
    value: Array
    error: Array  # one standard deviation, same unit as the value


@dataclass(frozen=True)
class Cast:
    """What the surveyor measured.

    Keys of ``profiles``: "temperature" (in situ), "salinity", "DIC" or "CO2" (free),
    "alkalinity" or "pH", "calcium", "CH4", "N2", "O2", "H2S", "phosphate".
    """

    profiles: Mapping[str, Profile]


@dataclass(frozen=True)
class Spring:
    """Water that enters below the surface layer, with all that it carries."""

    name: str
    depth: float  # m, of the outlet
    flow: float  # m3/s
    temperature: float  # degC, in situ
    salinity: float  # g/kg
    dissolved: Mapping[str, float]  # mol/m3 by tracer: DIC, alkalinity, CH4, phosphate, ...
    ports: int = 1  # number of outlets it leaves by, each an entraining plume
    port_diameter: float = 1.0  # m
    port_spacing: float = 50.0  # m
    spread: tuple[float, float] | None = None  # m, enters evenly over this interval instead


@dataclass(frozen=True)
class River:
    """Surface water that enters the surface layer."""

    name: str
    flow: float  # m3/s
    temperature: float  # degC
    salinity: float  # g/kg
    dissolved: Mapping[str, float]


@dataclass(frozen=True)
class BedSource:
    """A steady flux of one tracer out of the lake bed between two depths."""

    tracer: str  # a tracer name, or "heat"
    top: float  # m
    foot: float  # m
    flux: float  # mol m-2 s-1 of bed area (W m-2 for heat); negative takes up


@dataclass(frozen=True)
class Climate:
    """What the air does to the surface, month by month (12 values each)."""

    equilibrium_temperature: Array  # degC (Edinger et al. 1968)
    exchange_coefficient: Array  # W m-2 K-1
    wind_speed: Array  # m/s at 10 m
    rain: Array  # m/s over the lake surface
    evaporation: Array  # m/s
    trend: float = 0.0  # degC per year, added to the equilibrium temperature
    temperature_variability: float = 0.0  # K, standard deviation of a year's anomaly
    wind_variability: float = 0.0  # share, standard deviation of a year's wind over its mean


@dataclass(frozen=True)
class Reactions:
    """Rates of what is made or used up in the water."""

    methane_oxidation: float = 0.0  # mol m-3 s-1, largest rate (Monod)
    half_methane: float = 0.005  # mol/m3
    half_oxygen: float = 0.02  # mol/m3
    sulfide_oxidation: float = 0.0  # m3 mol-1 s-1, second order
    oxygen_demand: float = 0.0  # mol m-3 s-1 where oxygen is ample
    phosphate_removal: float = 0.0  # s-1, uptake and sinking in the surface layer


@dataclass(frozen=True)
class Conversion:
    """Free CO2 turned into methane between two depths, first order."""

    top: float  # m
    foot: float  # m
    rate: float  # s-1


@dataclass(frozen=True)
class WaterSource:
    """One tracer given off or lost in the water between two depths."""

    tracer: str  # a tracer name, or "heat"
    top: float  # m
    foot: float  # m
    rate: float = 0.0  # mol m-3 s-1 (W m-3 for heat) given off
    decay: float = 0.0  # s-1, share lost


@dataclass(frozen=True)
class Mixing:
    """How the column mixes; the laws stand in ``strata.column.laws``."""

    coefficient: float  # m2 s-2, a in K = a / N; 0 where another law is chosen
    least: float  # m2/s, bounds of the turbulent part
    most: float
    staircase_step: float  # m, H of the double-diffusive staircase; 0 switches it off
    wind_efficiency: float = 1.25  # of the wind's stirring (Kraus & Turner 1967)
    convection_efficiency: float = 0.2  # of the energy set free by cooling
    drag_coefficient: float = 1.3e-3
    law: str = "gargett"  # or "hondzo-stefan", "given"
    area_factor: float = 1.0  # times the published coefficient of that law
    given_depth: Array | None = None  # m, of a given profile
    given: Array | None = None  # m2/s, a given profile; one value: the same everywhere
    bed_dissipation: float = 0.0  # W per m2 of bed, power that currents lose there
    #: m, height over which its gradients are told; 0: a pair of layers; None: ten steps
    staircase_window: float | None = None
    plunge_mixing: float = 0.5  # m3 of surface water that a plunging river takes along per m3
    overshoot: float = 1.0  # times the laboratory's entrainment in overshoot (Baines 1975)


@dataclass(frozen=True)
class Lake:
    """A site with basin, casts, climate, supply and mixing: all that a projection needs."""

    site: Site
    hypsography: Hypsography
    cast: Cast
    climate: Climate
    springs: tuple[Spring, ...]
    rivers: tuple[River, ...]
    bed: tuple[BedSource, ...]
    reactions: Reactions
    mixing: Mixing
    layer_faces: Array  # m, faces of the layers from 0 to the deepest point
    conversions: tuple[Conversion, ...] = ()
    sources: tuple[WaterSource, ...] = ()
    texts: Mapping[str, str] = field(default_factory=dict)  # input file -> text
