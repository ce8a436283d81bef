"""Every key of the three files a user writes: lake, plan and limits.

A key is the name of the field it fills in ``strata.lake.site``, ``strata.plant.plan`` or
``strata.limits``, followed by its unit.  Defaults stay with those objects: a key left out here
is ``None`` and is not passed on.  All pressures are absolute.
"""

from datetime import date
from typing import Annotated, Literal

from pydantic import ConfigDict, Field

from strata.inputs.tables import Between, Table

DEEPEST = 2000.0  # m, no lake is deeper

Text = Annotated[str, Field(min_length=1)]
Share = Annotated[float, Between(0, 1)]
SomeShare = Annotated[float, Between(0, 1, above=True)]
Depth = Annotated[
    float, Between(0, DEEPEST, why="depth counts down from the lake surface, which is at 0")
]
Flow = Annotated[float, Between(0, 100_000)]
SomeFlow = Annotated[float, Between(0, 100_000, above=True)]
Temperature = Annotated[float, Between(0, 40)]
Salinity = Annotated[float, Between(0, 40)]
Dissolved = Annotated[float, Between(0, 1000)]
Pressure = Annotated[float, Between(0.05, 100, why="pressures are absolute")]


def _months(low: float, high: float) -> object:
    """Return the type of twelve monthly values, January first."""
    return Annotated[
        list[Annotated[float, Between(low, high)]], Field(min_length=12, max_length=12)
    ]


class SiteTable(Table):
    """``[site]``: where the lake lies and what its water is like."""

    name: Text
    air_pressure_bar: Annotated[float, Between(0.4, 1.1, why="mean at the lake surface")]
    latitude_deg: Annotated[float, Between(-90, 90)]
    start: date
    haline_contraction_per_g_kg: (
        Annotated[float, Between(0.70e-3, 0.83e-3, why="the ion mixes of lakes")] | None
    ) = None
    co2_molar_volume_cm3_mol: (
        Annotated[float, Between(31, 36.5, why="the published determinations")] | None
    ) = None
    magnesium_share: Share | None = None
    calcium_share: Share | None = None
    conductivity_factor_g_kg_per_mS_cm: Annotated[float, Between(0.4, 1.5)] | None = None


class BasinTable(Table):
    """``[basin]``: area against depth, in a file or here."""

    hypsography: Text | None = None
    depth_m: Annotated[list[Depth], Field(min_length=3)] | None = None
    area_km2: (
        Annotated[list[Annotated[float, Between(0, 1e5)]], Field(min_length=3)] | None
    ) = None


class CastTable(Table):
    """``[[cast]]``: one file of measurements."""

    file: Text
    gaps: bool = False
    error: dict[str, Annotated[float, Between(0, 1000)]] = Field(default_factory=dict)


class ClimateTable(Table):
    """``[climate]``: what the air does to the surface, month by month.

    Either how the surface answers (the first two keys), or the weather from which that
    follows.
    """

    equilibrium_temperature_degC: _months(-20, 45) | None = None  # type: ignore[valid-type]
    exchange_coefficient_W_m2_K: _months(1, 200) | None = None  # type: ignore[valid-type]
    air_temperature_degC: _months(0, 40) | None = None  # type: ignore[valid-type]
    dew_point_degC: _months(0, 35) | None = None  # type: ignore[valid-type]
    sun_W_m2: _months(0, 450) | None = None  # type: ignore[valid-type]
    cloud_share: _months(0, 1) | None = None  # type: ignore[valid-type]
    wind_speed_m_s: _months(0, 30)  # type: ignore[valid-type]
    rain_mm_day: _months(0, 100)  # type: ignore[valid-type]
    evaporation_mm_day: _months(0, 50) | None = None  # type: ignore[valid-type]
    trend_degC_per_yr: Annotated[float, Between(-0.2, 0.2)] | None = None
    temperature_variability_K: Annotated[float, Between(0, 5)] | None = None
    wind_variability_share: Annotated[float, Between(0, 0.5)] | None = None


class WaterTable(Table):
    """What entering water carries; one key for each dissolved tracer of the column."""

    temperature_degC: Temperature
    salinity_g_kg: Salinity
    DIC_mol_m3: Dissolved
    alkalinity_eq_m3: Dissolved
    calcium_mol_m3: Dissolved | None = None
    CH4_mol_m3: Dissolved | None = None
    N2_mol_m3: Dissolved | None = None
    O2_mol_m3: Dissolved | None = None
    H2S_mol_m3: Dissolved | None = None
    phosphate_mol_m3: Dissolved | None = None


class SpringTable(WaterTable):
    """``[[spring]]``: water that enters below the surface layer."""

    name: Text
    depth_m: Depth
    flow_m3_s: Flow
    ports: Annotated[int, Between(1, 100_000)] | None = None
    port_diameter_m: Annotated[float, Between(0.01, 100)] | None = None
    port_spacing_m: Annotated[float, Between(0.1, 10_000)] | None = None
    spread_m: Annotated[list[Depth], Field(min_length=2, max_length=2)] | None = None


class RiverTable(WaterTable):
    """``[[river]]``: water that enters the surface layer."""

    name: Text
    flow_m3_s: Flow


Carried = Literal[
    "heat", "salinity", "DIC", "alkalinity", "calcium", "CH4", "N2", "O2", "H2S", "phosphate"
]


class BedTable(Table):
    """``[[bed]]``: a steady flux out of the bed between two depths."""

    tracer: Carried
    top_m: Depth
    foot_m: Depth
    flux_W_m2: Annotated[float, Between(-10, 10)] | None = None
    flux_mol_m2_yr: Annotated[float, Between(-1000, 1000)] | None = None


class SourceTable(Table):
    """``[[source]]``: a tracer given off or lost in the water between two depths."""

    tracer: Carried
    top_m: Depth
    foot_m: Depth
    rate_mol_m3_yr: Annotated[float, Between(0, 1000)] | None = None
    rate_W_m3: Annotated[float, Between(0, 10)] | None = None
    decay_per_yr: Annotated[float, Between(0, 1000)] | None = None


class ConversionTable(Table):
    """``[[conversion]]``: free CO2 turned into methane between two depths."""

    top_m: Depth
    foot_m: Depth
    rate_per_yr: Annotated[float, Between(0, 10)]


class ReactionsTable(Table):
    """``[reactions]``: rates of what is made or used up in the water."""

    methane_oxidation_mmol_m3_day: Annotated[float, Between(0, 1000)] | None = None
    half_methane_mol_m3: Annotated[float, Between(0, 1, above=True)] | None = None
    half_oxygen_mol_m3: Annotated[float, Between(0, 1, above=True)] | None = None
    sulfide_oxidation_m3_mol_day: Annotated[float, Between(0, 1e5)] | None = None
    oxygen_demand_mmol_m3_day: Annotated[float, Between(0, 1000)] | None = None
    phosphate_removal_per_day: Annotated[float, Between(0, 10)] | None = None


class MixingTable(Table):
    """``[mixing]``: how the column mixes, by one of the laws of ``strata.column.laws``."""

    law: Literal["gargett", "hondzo-stefan", "given"] | None = None
    coefficient_m2_s2: (
        Annotated[
            float, Between(1e-11, 1e-6, why="such lakes lie near 3e-9, the ocean at 1e-7")
        ]
        | None
    ) = None
    area_factor: Annotated[float, Between(1e-6, 100)] | None = None
    given_depth_m: Annotated[list[Depth], Field(min_length=2)] | None = None
    given_m2_s: (
        Annotated[list[Annotated[float, Between(1e-12, 1e-1)]], Field(min_length=1)] | None
    ) = None
    least_m2_s: Annotated[float, Between(0, 1e-4)] | None = None
    most_m2_s: Annotated[float, Between(0, 1e-1, above=True)] | None = None
    bed_dissipation_mW_m2: Annotated[float, Between(0, 100)] | None = None
    staircase_step_m: Annotated[float, Between(0, 20, why="0 switches the staircase off")]
    staircase_window_m: Annotated[float, Between(0, 200)] | None = None
    wind_efficiency: Annotated[float, Between(0, 10)] | None = None
    convection_efficiency: Share | None = None
    drag_coefficient: Annotated[float, Between(1e-4, 1e-2)] | None = None
    plunge_mixing: Annotated[float, Between(0, 20)] | None = None
    overshoot: (
        Annotated[float, Between(0, 3, why="1 is the laboratory's entrainment")] | None
    ) = None


class ZoneTable(Table):
    """``[[grid.zone]]``: an interval with layers of its own."""

    top_m: Depth
    foot_m: Depth
    layer_m: Annotated[float, Between(0.1, 50)]


class GridTable(Table):
    """``[grid]``: thickness of the layers, and where it is another.

    ``automatic`` puts thin layers around the gradients that the casts show, ``thin_m`` on the
    way of the main one, which reaches ``way_above_m`` over and ``way_below_m`` under it.
    """

    layer_m: Annotated[float, Between(0.1, 50)]
    automatic: bool = False
    thin_m: Annotated[float, Between(0.1, 20)] | None = None
    way_above_m: Annotated[float, Between(0, 1000)] | None = None
    way_below_m: Annotated[float, Between(0, 1000)] | None = None
    zone: list[ZoneTable] = Field(default_factory=list)


class LawsTable(Table):
    """``[laws]``: corrections to the gas laws, switched by name as in ``strata.gas.laws``."""

    salting_out: Literal["weisenberger-schumpe", "generic", "none"] | None = None
    pressure_term: bool | None = None
    gas_phase: Literal["peng-robinson", "ideal"] | None = None
    k_ij: Annotated[float, Between(-0.5, 0.5)] | None = None
    water_vapour: bool | None = None


class LakeFile(Table):
    """A lake file."""

    site: SiteTable
    basin: BasinTable
    cast: Annotated[list[CastTable], Field(min_length=1)]
    climate: ClimateTable
    spring: list[SpringTable] = Field(default_factory=list)
    river: list[RiverTable] = Field(default_factory=list)
    bed: list[BedTable] = Field(default_factory=list)
    source: list[SourceTable] = Field(default_factory=list)
    conversion: list[ConversionTable] = Field(default_factory=list)
    reactions: ReactionsTable = Field(default_factory=ReactionsTable)
    mixing: MixingTable
    grid: GridTable
    laws: LawsTable = Field(default_factory=LawsTable)


class StageTable(Table):
    """``[[plant.stage]]``: one separator of the train, in the order of the water."""

    pressure_bar: Pressure
    approach_share: SomeShare | None = None
    residence_time_s: Annotated[float, Between(0, 1e5, above=True)] | None = None
    mass_transfer_per_s: Annotated[float, Between(0, 100, above=True)] | None = None
    carry_under_share: Share | None = None
    gas_to: Literal["product", "wash", "vent", "return"] | None = None


class LimeTable(Table):
    """``[plant.lime]``: CO2 bound as calcite before the separator, by dose or to a target."""

    dose_mol_m3: Annotated[float, Between(0, 300)] | None = None
    target_co2_mol_m3: Annotated[float, Between(0, 300)] | None = None
    approach_share: Share | None = None
    settled_share: Share | None = None


class WashTable(Table):
    """``[plant.wash]``: a counter-current water wash of the raw gas."""

    pressure_bar: Pressure
    water_flow_m3_s: SomeFlow
    water_depth_m: Depth
    stages: Annotated[int, Between(1, 50)] | None = None
    efficiency_share: SomeShare | None = None
    towers: Annotated[int, Between(1, 10)] | None = None


class ReturnTable(Table):
    """``[plant.return]``, ``[plant.wash_return]``: where a stream goes back into the lake."""

    depth_m: Depth
    ports: Annotated[int, Between(1, 100_000)] | None = None
    port_diameter_m: Annotated[float, Between(0.01, 10)] | None = None
    port_spacing_m: Annotated[float, Between(0.1, 1000)] | None = None
    port_angle_deg: (
        Annotated[float, Between(-90, 90, why="0 is level, -90 straight down")] | None
    ) = None
    temperature_change_K: Annotated[float, Between(-10, 10)] | None = None


class RiserTable(Table):
    """``[plant.riser]``: the pipes from the intake to the first separator."""

    bore_m: Annotated[float, Between(0.02, 10)]
    pipes: Annotated[int, Between(1, 1000)] | None = None
    roughness_mm: Annotated[float, Between(0, 10)] | None = None
    separator_height_m: Annotated[float, Between(-500, 100)] | None = None


class DeliveryTable(Table):
    """``[plant.delivery]``: what is done with the gas after the plant."""

    product_pressure_bar: Pressure | None = None
    compressor_stages: Annotated[int, Between(1, 20)] | None = None
    cooling_temperature_degC: Annotated[float, Between(0, 100)] | None = None
    auxiliary_power_kW: Annotated[float, Between(0, 1e6)] | None = None


class IntakeTable(Table):
    """``[[plant.intake]]``: one more depth that the plant draws from."""

    depth_m: Depth
    share: SomeShare


class OutageTable(Table):
    """``[[plant.outage]]``: a part out of order: "plant", "wash", "lime" or "stage 1"."""

    part: Text
    start: date
    stop: date


class ChangeTable(Table):
    """``[[plant.change]]``: from ``start`` on, keys of the plant have these values instead."""

    model_config = ConfigDict(extra="allow")

    start: date


class PlantTable(Table):
    """``[[plant]]``: what a plant takes, what it does to it, where it puts it, and when."""

    name: Text
    intake_depth_m: Depth
    flow_m3_s: SomeFlow
    start: date
    stop: date | None = None
    ramp_days: Annotated[float, Between(0, 3653)] | None = None
    availability_share: SomeShare | None = None
    monthly_availability_share: _months(0, 1) | None = None  # type: ignore[valid-type]
    least_feed_methane_mol_m3: Annotated[float, Between(0, 100)] | None = None
    pump_head_m: Annotated[float, Between(0, 500)] | None = None
    pump_efficiency_share: SomeShare | None = None
    compressor_efficiency_share: SomeShare | None = None
    electric_efficiency_share: Share | None = None
    stage: Annotated[list[StageTable], Field(min_length=1)]
    lime: LimeTable | None = None
    wash: WashTable | None = None
    return_water: ReturnTable = Field(alias="return")
    wash_return: ReturnTable | None = None
    riser: RiserTable | None = None
    delivery: DeliveryTable | None = None
    intake: list[IntakeTable] = Field(default_factory=list)
    outage: list[OutageTable] = Field(default_factory=list)
    change: list[ChangeTable] = Field(default_factory=list)


class PlanFile(Table):
    """A plan file."""

    name: Text
    plant: Annotated[list[PlantTable], Field(min_length=1)]


class LimitTable(Table):
    """``[[limit]]``: one bound, in the unit that ends the name of its quantity."""

    quantity: Text
    name: Text | None = None
    at_least: float | None = None
    at_most: float | None = None
    against: Literal["start", "baseline"] | None = None


class LimitsFile(Table):
    """A limits file; it says whether its limits were invented or whose they are."""

    name: Text
    invented: bool
    source: Text
    internal_wave_m: Annotated[float, Between(0, 200)] | None = None
    limit: Annotated[list[LimitTable], Field(min_length=1)]
