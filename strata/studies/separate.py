"""How a plant's outcome follows from its settings: pressure, two pressures, wash water, lime.

One lake, as its casts stand, one plant, and sweeps of one or two of its settings.  The sweep
of pressure puts CO2 left free beside CO2 bound as calcite: bound, recovery is lower at a given
pressure, the gas purer, and the best pressure turns from high to low.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from typing import Any

import numpy as np
import xarray as xr
from numpy.typing import NDArray

from strata import ranges
from strata.column.column import Column
from strata.column.start import first_day
from strata.column.streams import Surroundings
from strata.coupling import excess_density, source_of, stream_of
from strata.errors import OutOfRangeError
from strata.gas import bubble_point, speciate
from strata.lake.site import Lake
from strata.plant import power
from strata.plant.chemistry import density_of, free_gases, laws_of
from strata.plant.intake import plant_weights
from strata.plant.operate import Operation, operate
from strata.plant.plan import Intake, Lime, Plan, Plant, Stage
from strata.plant.streams import WaterStream

Array = NDArray[np.float64]

FREE, BOUND = "CO2 free", "CO2 bound"

#: Outcome -> (unit, long name); every sweep holds all of them.
OUTCOMES = {
    "recovery": ("1", "methane in the product over methane in the feed"),
    "purity": ("1", "mole fraction of methane in the dry product"),
    "carbon_dioxide_share": ("1", "mole fraction of CO2 in the dry product"),
    "nitrogen_share": ("1", "mole fraction of N2 in the dry product"),
    "heating_value": ("J m-3", "lower heating value of the dry product, normal m3"),
    "wobbe_index": ("J m-3", "lower Wobbe index of the dry product, normal m3"),
    "net_energy": ("J m-3", "electric energy left per m3 of feed"),
    "electric_energy": ("J m-3", "electric energy made per m3 of feed"),
    "pump_energy": ("J m-3", "pumping per m3 of feed"),
    "vacuum_energy": ("J m-3", "compression up to the pressure of the air per m3 of feed"),
    "compression_energy": (
        "J m-3",
        "compression above the pressure of the air per m3 of feed",
    ),
    "specific_power": ("J mol-1", "energy used per mole of methane in the product"),
    "return_density": ("kg m-3", "density of the return water at its outlet"),
    "return_density_excess": ("kg m-3", "density of the return water over the lake's there"),
    "return_ph": ("1", "pH of the return water"),
    "lime": ("mol m-3", "lime used per m3 of feed"),
}
#: Aim -> the outcome of which there should be most.
AIMS = {
    "recovery": "recovery",
    "heating value": "heating_value",
    "net energy": "net_energy",
    "return density": "return_density_excess",
}


@dataclass(frozen=True)
class Setting:
    """A plant in its lake as the casts stand."""

    plant: Plant
    feed: WaterStream
    wash_feed: WaterStream | None
    column: Column
    around: Surroundings


def column_today(lake: Lake) -> Column:
    """Return the column of a lake as its casts stand."""
    column = Column(lake, first_day(lake))
    column.refresh()
    return column


def setting_of(
    lake: Lake, plan: Plan, plant: str | None = None, column: Column | None = None
) -> Setting:
    """Return a plant of a plan (the first, or by name) with the water that it draws today.

    A column of :func:`column_today` may be given, to serve several plants.

    Raises
    ------
    strata.OutOfRangeError
        If the plan has no plant of that name.
    """
    by_name = {one.name: one for one in plan.plants}
    chosen = ranges.named("plant", plant, by_name) if plant else plan.plants[0]
    now = column or column_today(lake)

    def drawn(intakes: Sequence[Intake], flow: float) -> WaterStream:
        weights = plant_weights(now.basin.faces, now.seen.stability[1:-1], intakes, flow)
        return stream_of(weights @ now.values, flow)

    wash = chosen.wash
    wash_feed = None
    if wash is not None:
        wash_feed = drawn([Intake(wash.water_depth, 1.0)], wash.water_flow)
    feed = drawn(chosen.intakes, chosen.flow)
    return Setting(chosen, feed, wash_feed, now, now.surroundings())


def outcome(setting: Setting, plant: Plant) -> dict[str, float]:
    """Return the outcomes of a plant, set as given, with the feeds of a setting."""
    site = setting.column.lake.site
    wash_feed = None if plant.wash is None else setting.wash_feed
    if plant.wash is not None and wash_feed is not None:
        wash_feed = replace(wash_feed, flow=plant.wash.water_flow)
    run = operate(plant, setting.feed, wash_feed, site)
    used = run.power
    per_volume = 1.0 / setting.feed.flow
    methane = run.product.of("CH4")
    some = run.product.dry > 0.0
    taken = sum(watts for name, watts in used.items() if name not in ("electric", "net"))
    return {
        "recovery": run.recovery,
        "purity": run.product.share("CH4") if some else np.nan,
        "carbon_dioxide_share": run.product.share("CO2") if some else np.nan,
        "nitrogen_share": run.product.share("N2") if some else np.nan,
        "heating_value": power.heating_value(run.product) if some else np.nan,
        "wobbe_index": power.wobbe_index(run.product) if some else np.nan,
        "net_energy": used["net"] * per_volume,
        "electric_energy": used["electric"] * per_volume,
        "pump_energy": used["pump"] * per_volume,
        "vacuum_energy": used.get("vacuum", 0.0) * per_volume,
        "compression_energy": used.get("compression", 0.0) * per_volume,
        "specific_power": taken / methane if methane > 0.0 else np.nan,
        "lime": run.lime * per_volume,
        **_of_return(setting, plant, run),
    }


def _of_return(setting: Setting, plant: Plant, run: Operation) -> dict[str, float]:
    """Return density, excess over the lake and pH of the return water."""
    water, column = run.returned, setting.column
    depth = plant.return_water.depth
    site = column.lake.site
    source = source_of(plant.name, water, plant.return_water, column)
    ph = speciate(
        water.temperature,
        water.salinity,
        water.of("DIC"),
        water.of("alkalinity"),
        site.air_pressure,
    ).ph
    return {
        "return_density": density_of(water, site, column.pressure_at(depth)),
        "return_density_excess": excess_density(source, setting.around),
        "return_ph": float(ph),
    }


def _dataset(
    shape: tuple[int, ...],
    dims: tuple[str, ...],
    coords: Mapping[str, Any],
    found: Sequence[Mapping[str, float]],
    name: str,
) -> xr.Dataset:
    """Return outcomes, given in C order, as a dataset."""
    variables = {
        key: (
            dims,
            np.array([one[key] for one in found]).reshape(shape),
            {"units": unit, "long_name": words},
        )
        for key, (unit, words) in OUTCOMES.items()
    }
    return xr.Dataset(variables, coords, {"plant": name})


def default_pressures(setting: Setting, count: int = 60) -> Array:
    """Return pressures [Pa] from 0.05 bar to just below where gas comes out, or 10 bar.

    That of the air is among them, as vacuum pumps begin below it and pumping above.
    """
    site, feed = setting.column.lake.site, setting.feed
    gases = free_gases(feed, site).gases
    onset = float(bubble_point(feed.temperature, feed.salinity, gases, laws_of(site)).pressure)
    highest = min(10e5, 0.95 * onset)
    if highest <= 0.06e5:
        raise OutOfRangeError(
            f"plant {setting.plant.name}: its feed has {onset / 1e5:.2f} bar of gas pressure;"
            " there is nothing to separate"
        )
    pressures = np.geomspace(0.05e5, highest, count)
    if site.air_pressure < highest:
        nearest = int(np.argmin(np.abs(np.log(pressures / site.air_pressure))))
        pressures[nearest] = site.air_pressure
    return pressures


def _one_stage(plant: Plant, pressure: float, lime: Lime | None) -> Plant:
    """Return a plant with a single separator, its gas delivered unwashed."""
    stage = replace(plant.stages[0], pressure=pressure, gas_to="product")
    return replace(plant, stages=(stage,), wash=None, lime=lime)


def binding(setting: Setting) -> Lime:
    """Return the lime that binds CO2: that of the plan, else as much as there is free CO2."""
    if setting.plant.lime is not None:
        return setting.plant.lime
    free = free_gases(setting.feed, setting.column.lake.site).gases["CO2"]
    return Lime(dose=free)


def separate(
    lake: Lake,
    plan: Plan,
    plant: str | None = None,
    *,
    pressures: Sequence[float] | Array | None = None,
) -> xr.Dataset:
    """Return what one separator makes of a plant's feed at any pressure, CO2 free and bound.

    The train is taken as its first stage alone and the gas as it leaves it, so that pressure
    is all that differs.  CO2 is bound by the plan's lime, or by as much as there is free CO2.

    Parameters
    ----------
    lake : Lake
    plan : Plan
    plant : str, optional
        Name of one of its plants; the first by default.
    pressures : sequence of float, optional
        Absolute [Pa]; 0.05 bar to where gas comes out (10 bar at most) by default.

    Returns
    -------
    xarray.Dataset
        :data:`OUTCOMES` over ``case`` ("CO2 free", "CO2 bound") and ``pressure``, with
        ``best_pressure`` and ``why`` over ``case`` and ``aim``.
    """
    setting = setting_of(lake, plan, plant)
    swept = default_pressures(setting) if pressures is None else np.asarray(pressures, float)
    limes = {FREE: None, BOUND: binding(setting)}
    found = [
        outcome(setting, _one_stage(setting.plant, float(pressure), lime))
        for lime in limes.values()
        for pressure in swept
    ]
    coords = {
        "case": list(limes),
        "pressure": ("pressure", swept, {"units": "Pa", "long_name": "separator pressure"}),
    }
    sweep = _dataset(
        (len(limes), len(swept)), ("case", "pressure"), coords, found, setting.plant.name
    )
    best = _best(sweep, setting.column.lake.site.air_pressure)
    return sweep.merge(best, combine_attrs="override")


def _best(sweep: xr.Dataset, air_pressure: float) -> xr.Dataset:
    """Return the best pressure of each case for each aim, and why it is best."""
    pressures = sweep["pressure"].values
    best = np.full((sweep.sizes["case"], len(AIMS)), np.nan)
    why = np.full(best.shape, "", dtype=object)
    for i, case in enumerate(sweep["case"].values):
        one = sweep.sel(case=case)
        for k, (aim, name) in enumerate(AIMS.items()):
            values = one[name].values
            if not np.isfinite(values).any():
                continue
            at = int(np.nanargmax(values))
            best[i, k] = pressures[at]
            where = "that of the air" if pressures[at] == air_pressure else _where(at, values)
            why[i, k] = f"{where}: {_REASONS[aim](one, at)}{_flat(values, at)}"
    return xr.Dataset(
        {
            "best_pressure": (
                ("case", "aim"),
                best,
                {"units": "Pa", "long_name": "best separator pressure"},
            ),
            "why": (("case", "aim"), why.astype(str), {"long_name": "why it is best"}),
        },
        {"aim": list(AIMS)},
    )


def _where(at: int, values: Array) -> str:
    """Say where in the range the best lies."""
    if at == 0:
        return "lowest looked at"
    return "highest looked at" if at == len(values) - 1 else "inside the range"


def _flat(values: Array, at: int) -> str:
    """Say so where pressure makes next to no difference."""
    spread = float(np.nanmax(values) - np.nanmin(values))
    if spread < 0.02 * abs(float(values[at])):
        return f"; it matters little, by {100 * spread / abs(values[at]):.1f} % over the range"
    return ""


def _why_recovery(case: xr.Dataset, at: int) -> str:
    """Say what methane stays in the water."""
    left = 100.0 * (1.0 - case["recovery"].values)
    return (
        f"the lower the pressure, the less methane stays in the water ({left[at]:.1f} %;"
        f" {left[-1]:.0f} % at the highest)"
    )


def _why_heating_value(case: xr.Dataset, at: int) -> str:
    """Say what dilutes the gas."""
    carbon, nitrogen = (
        100.0 * case[f"{gas}_share"].values for gas in ("carbon_dioxide", "nitrogen")
    )
    return (
        "pressure keeps CO2 in the water longer than methane, and nitrogen less long: the gas"
        f" holds {carbon[at]:.0f} % CO2 and {nitrogen[at]:.1f} % N2 there,"
        f" {carbon[0]:.0f} and {nitrogen[0]:.1f} at the lowest,"
        f" {carbon[-1]:.0f} and {nitrogen[-1]:.1f} at the highest"
    )


def _why_net_energy(case: xr.Dataset, at: int) -> str:
    """Say what is lost on either side."""
    made = case["electric_energy"].values / 1e6
    used = made - case["net_energy"].values / 1e6
    return (
        "vacuum pumps cost more below, methane left in the water and pumping more above"
        f" (made {made[at]:.2f}, used {used[at]:.2f} MJ/m3 there; {made[0]:.2f} and"
        f" {used[0]:.2f} at the lowest, {made[-1]:.2f} and {used[-1]:.2f} at the highest)"
    )


def _why_return_density(case: xr.Dataset, at: int) -> str:
    """Say what makes the return water heavy or light."""
    excess = case["return_density_excess"].values
    return (
        "CO2 kept in the water makes it heavy, methane kept makes it light, and evaporation"
        f" under vacuum cools it ({excess[at]:+.2f} kg/m3 against the lake at its outlet;"
        f" {excess[0]:+.2f} at the lowest, {excess[-1]:+.2f} at the highest)"
    )


_REASONS = {
    "recovery": _why_recovery,
    "heating value": _why_heating_value,
    "net energy": _why_net_energy,
    "return density": _why_return_density,
}


def separate_in_two(
    lake: Lake,
    plan: Plan,
    plant: str | None = None,
    *,
    pressures: Sequence[float] | Array | None = None,
) -> xr.Dataset:
    """Return the map of outcomes over the pressures of two stages, their gas unwashed.

    Lime is as the plan has it.  Where the second pressure is above the first there is no
    second stage, and the outcome is nan.  Arguments as :func:`separate`; dimensions
    ``first_pressure`` and ``second_pressure`` [Pa].
    """
    setting = setting_of(lake, plan, plant)
    swept = (
        default_pressures(setting, 24) if pressures is None else np.asarray(pressures, float)
    )
    base = replace(setting.plant, wash=None)
    missing = dict.fromkeys(OUTCOMES, np.nan)

    def pair(first: float, second: float) -> dict[str, float]:
        if second > first:
            return missing
        stages = [replace(_stage(base, n), gas_to="product") for n in (0, 1)]
        two = (replace(stages[0], pressure=first), replace(stages[1], pressure=second))
        return outcome(setting, replace(base, stages=two))

    found = [pair(float(first), float(second)) for first in swept for second in swept]
    names = ("first_pressure", "second_pressure")
    coords = {
        name: (name, swept, {"units": "Pa", "long_name": f"pressure of the {name[:-9]} stage"})
        for name in names
    }
    return _dataset((len(swept), len(swept)), names, coords, found, setting.plant.name)


def _stage(plant: Plant, number: int) -> Stage:
    """Return a stage of a plant by its number, or its last."""
    return plant.stages[min(number, len(plant.stages) - 1)]


def separate_by_wash(
    lake: Lake,
    plan: Plan,
    plant: str | None = None,
    *,
    ratios: Sequence[float] | Array | None = None,
) -> xr.Dataset:
    """Return outcomes over the wash water per feed water (``wash_ratio``), else as planned.

    Raises
    ------
    strata.OutOfRangeError
        If the plant has no wash.
    """
    setting = setting_of(lake, plan, plant)
    wash = setting.plant.wash
    if wash is None:
        raise OutOfRangeError(f"plant {setting.plant.name} has no wash whose water could vary")
    planned = wash.water_flow / setting.plant.flow
    swept = (
        planned * np.linspace(0.3, 1.5, 25) if ratios is None else np.asarray(ratios, float)
    )
    found = [
        outcome(
            setting,
            replace(
                setting.plant,
                wash=replace(wash, water_flow=float(ratio) * setting.plant.flow),
            ),
        )
        for ratio in swept
    ]
    attributes = {"units": "1", "long_name": "wash water over feed water"}
    coords = {"wash_ratio": ("wash_ratio", swept, attributes)}
    return _dataset((len(swept),), ("wash_ratio",), coords, found, setting.plant.name)


def separate_by_lime(
    lake: Lake,
    plan: Plan,
    plant: str | None = None,
    *,
    doses: Sequence[float] | Array | None = None,
) -> xr.Dataset:
    """Return outcomes over the dose of lime (``dose`` [mol per m3 of feed]), else as planned.

    By default from none to a fifth more than the free CO2 of the feed, so that over-dosing
    shows.
    """
    setting = setting_of(lake, plan, plant)
    lime = setting.plant.lime or Lime()
    free = free_gases(setting.feed, setting.column.lake.site).gases["CO2"]
    swept = np.linspace(0.0, 1.2 * free, 25) if doses is None else np.asarray(doses, float)
    found = [
        outcome(
            setting,
            replace(setting.plant, lime=replace(lime, dose=float(dose), target_co2=None)),
        )
        for dose in swept
    ]
    attributes = {"units": "mol m-3", "long_name": "lime per feed water"}
    coords = {"dose": ("dose", swept, attributes)}
    return _dataset((len(swept),), ("dose",), coords, found, setting.plant.name)
