"""Tables of plants, for the terminal and the dossier: series, streams, figures, sweeps."""

from collections.abc import Mapping
from textwrap import fill

import numpy as np
import xarray as xr

from strata.constants import GAS_CONSTANT, ZERO_CELSIUS
from strata.plant.account import Account
from strata.plant.power import METHANE_WARMING
from strata.plant.streams import NORMAL_PRESSURE
from strata.report import riser
from strata.report.blocks import Table
from strata.report.drawing import calendar_years, record_of
from strata.report.tables import aligned, digits
from strata.variables import PLANT_SERIES

BAR = 1e5
#: J per mole of methane in a kWh per normal m3 of it.
_KWH_PER_M3 = 3.6e6 * GAS_CONSTANT * ZERO_CELSIUS / NORMAL_PRESSURE

_STREAMS = (
    ("flow", 1.0, "m³/s", 1),
    ("feed_CH4", 1.0, "mol/m³", 2),
    ("recovery", 1.0, "1", 3),
    ("product_CH4", 1.0, "mol/s", 1),
    ("product_CO2", 1.0, "mol/s", 1),
    ("product_purity", 1.0, "1", 3),
    ("heating_value", 1e6, "MJ/m³", 1),
    ("vented_CH4", 1.0, "mol/s", 2),
    ("vented_CO2", 1.0, "mol/s", 1),
    ("returned_CH4", 1.0, "mol/s", 1),
    ("lime", 1.0, "mol/s", 1),
    ("solids", 1.0, "mol/s", 1),
    ("electric_power", 1e6, "MW", 2),
    ("pump_power", 1e6, "MW", 2),
    ("vacuum_power", 1e6, "MW", 2),
    ("compression_power", 1e6, "MW", 2),
    ("net_power", 1e6, "MW", 2),
    ("return_density_excess", 1.0, "kg/m³", 3),
    ("trap_depth", 1.0, "m", 1),
    ("dilution", 1.0, "1", 1),
    ("upper_reach", 1.0, "1", 3),
)


#: Series left out where a plan has none of it.
_SILENT = ("lime", "solids", "pump_power", "vacuum_power", "compression_power")


def plant_tables(results: Mapping[str, xr.Dataset]) -> list[Table]:
    """Return one table per plan: what goes in and out of its plants, early and at the end."""
    tables = []
    for name, result in results.items():
        if "plant" not in result.coords:
            continue
        running = result["plant_flow"].values > 0.0
        columns: list[tuple[str, int, int]] = []
        for number, plant in enumerate(result["plant"].values):
            times = np.flatnonzero(running[number])
            if times.size == 0:
                continue
            year = calendar_years(result)
            # a year into operation, so that ramps are over, and the last record it runs in
            early = record_of(result, float(year[times[0]] - year[0]) + 1.0)
            for time in dict.fromkeys((min(early, int(times[-1])), int(times[-1]))):
                columns.append((f"{plant} {year[time]:.0f}", number, time))
        rows = []
        for series, factor, unit, places in _STREAMS:
            if f"plant_{series}" not in result:
                continue
            values = result[f"plant_{series}"].values / factor
            chosen = [float(values[number, time]) for _, number, time in columns]
            if series in _SILENT and not any(chosen):
                continue
            cells = [digits(value, places) for value in chosen]
            rows.append([PLANT_SERIES[series].long_name, unit, *cells])
        headings = ["stream or power", "unit", *(label for label, _, _ in columns)]
        tables.append(
            Table(
                f"{name}: plants a year after their start and at the end.", headings, rows, 2
            )
        )
    return tables


_WATER = (
    ("flow_m3_s", "flow", "m³/s", 2),
    ("temperature_degC", "temperature", "°C", 2),
    ("pressure_bar", "pressure", "bar", 2),
    ("pH", "pH", "1", 2),
    ("density_kg_m3", "density at air pressure", "kg/m³", 2),
    ("salinity_g_kg", "salinity", "g/kg", 2),
    ("solids_kg_m3", "solids", "kg/m³", 3),
    ("CH4_mol_m3", "CH4", "mol/m³", 2),
    ("CO2_mol_m3", "free CO2", "mol/m³", 2),
    ("N2_mol_m3", "N2", "mol/m³", 3),
    ("H2S_mol_m3", "H2S", "mol/m³", 3),
    ("DIC_mol_m3", "DIC", "mol/m³", 2),
    ("alkalinity_mol_m3", "alkalinity", "eq/m³", 2),
    ("calcium_mol_m3", "calcium", "mol/m³", 2),
)
_GAS = (
    ("flow_mol_s", "flow", "mol/s", 1),
    ("normal_flow_m3_h", "flow at 0 °C, 1 atm", "m³/h", 0),
    ("temperature_degC", "temperature", "°C", 2),
    ("pressure_bar", "pressure", "bar", 2),
    ("density_kg_m3", "density", "kg/m³", 3),
    ("CH4_share", "CH4", "1", 4),
    ("CO2_share", "CO2", "1", 4),
    ("N2_share", "N2", "1", 4),
    ("H2S_share", "H2S", "1", 5),
    ("H2O_share", "water vapour", "1", 4),
)


def streams(plant: str, account: Account) -> list[Table]:
    """Return two tables of a plant, its water and its gas, a column per stream."""
    tables = []
    listed = account.streams()
    for kind, shown in (("water", _WATER), ("gas", _GAS)):
        flow = shown[0][0]
        some = [row for row in listed if row["kind"] == kind and float(row[flow]) > 0.0]
        if not some:
            continue
        rows = [
            [name, unit, *(digits(float(row.get(key, np.nan)), places) for row in some)]
            for key, name, unit, places in shown
        ]
        headings = [kind, "unit", *(str(row["stream"]) for row in some)]
        tables.append(
            Table(f"{plant}: streams of {kind} with today's feed.", headings, rows, 2)
        )
    return tables


_FIGURES = (
    ("recovery", "methane recovered", "1", 3),
    ("purity", "CH4 in the dry product", "1", 3),
    ("normal_flow_m3_h", "product at 0 °C, 1 atm, dry", "m³/h", 0),
    ("heating_value_MJ_m3", "lower heating value", "MJ/m³", 2),
    ("wobbe_index_MJ_m3", "lower Wobbe index", "MJ/m³", 2),
    ("dew_point_degC", "dew point of its water", "°C", 1),
    ("thermal_power_MW", "thermal power", "MW", 2),
    ("electric_power_MW", "electric power made", "MW", 2),
    ("used_power_MW", "electric power used", "MW", 2),
    ("net_power_MW", "net electric power", "MW", 2),
    ("specific_power_kWh_m3", "used per m³ of CH4", "kWh/m³", 3),
    ("net_energy_GWh_a", "net energy", "GWh/a", 1),
    ("lime_t_a", "lime", "t/a", 0),
    ("calcite_t_a", "calcite taken out", "t/a", 0),
    ("CH4_vented_t_a", "CH4 vented", "t/a", 0),
    ("CO2_vented_t_a", "CO2 vented", "t/a", 0),
    ("CO2_product_burnt_t_a", "CO2 of the product, burnt", "t/a", 0),
    ("CO2_kiln_t_a", "CO2 of the lime kiln", "t/a", 0),
    ("CO2_equivalent_t_a", "all to the air", "t CO2-eq/a", 0),
)


def figures(plant: str, account: Account) -> Table:
    """Return what a plant makes, uses and lets go at full load with today's feed."""
    found = account.figures()
    rows = [
        [name, unit, digits(found[key], places)]
        for key, name, unit, places in _FIGURES
        if found[key] != 0.0
    ]
    caption = (
        f"{plant}: product, power and air at full load with today's feed; a tonne of CH4 "
        f"counts as {METHANE_WARMING:g} t CO2 (IPCC AR6, 100 years), lime with the CO2 given "
        "off in its making (IPCC 2006), without the kiln's fuel."
    )
    return Table(caption, ["figure", "unit", "a year or at full load"], rows, 2)


# Sweeps -------------------------------------------------------------------------------------

_SHOWN = (
    ("recovery", "recovered [1]", 1.0, 3),
    ("purity", "purity [1]", 1.0, 3),
    ("specific_power", "used [kWh/m³]", _KWH_PER_M3, 3),
    ("net_energy", "net [MJ/m³]", 1e6, 2),
    ("return_density", "return [kg/m³]", 1.0, 2),
    ("return_density_excess", "excess [kg/m³]", 1.0, 2),
    ("return_ph", "pH", 1.0, 2),
)
_MEANING = (
    "Purity is CH4 in the dry gas; used: energy per normal m³ of CH4; net: energy per m³ of "
    "feed; return: density at the outlet, excess: over the lake there."
)
_HEADINGS = [heading for _, heading, _, _ in _SHOWN]


def _cells(point: xr.Dataset) -> list[str]:
    """Return the outcomes of one setting as cells."""
    return [digits(float(point[name]) / unit, places) for name, _, unit, places in _SHOWN]


def _spread(count: int, shown: int) -> list[int]:
    """Return so many indices, evenly spread from the first to the last."""
    return [int(at) for at in np.unique(np.linspace(0, count - 1, shown).astype(int))]


def by_pressure(sweep: xr.Dataset) -> list[Table]:
    """Return outcomes at chosen pressures, and the best pressure for every aim with why."""
    pressures = sweep["pressure"].values
    rows = []
    for case in sweep["case"].values:
        one = sweep.sel(case=case)
        best = one["best_pressure"].sel(aim="net energy").values
        chosen = {*_spread(len(pressures), 7), *np.flatnonzero(pressures == best).tolist()}
        rows += [
            [str(case), digits(float(pressures[at]) / BAR, 2), *_cells(one.isel(pressure=at))]
            for at in sorted(chosen)
        ]
    bests = [
        [
            str(aim),
            str(case),
            digits(float(sweep["best_pressure"].sel(case=case, aim=aim)) / BAR, 2),
            str(sweep["why"].sel(case=case, aim=aim).item()),
        ]
        for aim in sweep["aim"].values
        for case in sweep["case"].values
    ]
    return [
        Table(
            "One separator, CO2 left free and CO2 bound as calcite; the pressure of the best "
            f"net energy is among those shown. {_MEANING}",
            ["case", "pressure [bar]", *_HEADINGS],
            rows,
        ),
        Table(
            "Best pressure of one separator, by what is aimed at.",
            ["aim", "case", "best [bar]", "why"],
            bests,
            left=4,
        ),
    ]


#: Aim -> outcome, for sweeps without a choice of their own.
_AIMS = {
    "recovery": "recovery",
    "heating value": "heating_value",
    "net energy": "net_energy",
    "return density": "return_density_excess",
}


def by_two_pressures(sweep: xr.Dataset) -> Table:
    """Return the best pair of pressures for every aim."""
    rows = []
    for aim, name in _AIMS.items():
        values = sweep[name].values
        first, second = np.unravel_index(int(np.nanargmax(values)), values.shape)
        point = sweep.isel(first_pressure=first, second_pressure=second)
        pair = (point["first_pressure"], point["second_pressure"])
        rows.append([aim, *(digits(float(p) / BAR, 2) for p in pair), *_cells(point)])
    return Table(
        "Two separators: best pair of pressures, by what is aimed at.",
        ["aim", "first [bar]", "second [bar]", *_HEADINGS],
        rows,
    )


def by_wash(sweep: xr.Dataset) -> Table:
    """Return outcomes at chosen amounts of wash water."""
    ratios = sweep["wash_ratio"].values
    rows = [
        [digits(float(ratios[at]), 3), *_cells(sweep.isel(wash_ratio=at))]
        for at in _spread(len(ratios), 9)
    ]
    return Table("Wash water, the rest as planned.", ["m³ per m³ feed", *_HEADINGS], rows, 0)


def by_lime(sweep: xr.Dataset) -> Table:
    """Return outcomes at chosen doses of lime."""
    doses = sweep["dose"].values
    rows = [
        [digits(float(doses[at]), 1), *_cells(sweep.isel(dose=at))]
        for at in _spread(len(doses), 9)
    ]
    return Table("Lime, the rest as planned.", ["mol per m³ feed", *_HEADINGS], rows, 0)


_OUTLETS = (
    ("trap_depth", "spreads at [m]", 1.0, 1),
    ("end_depth", "reaches [m]", 1.0, 1),
    ("dilution", "dilution [1]", 1.0, 1),
    ("density_excess", "excess [kg/m³]", 1.0, 3),
    ("port_speed", "ports [m/s]", 1.0, 2),
    ("upper_reach", "above it [1]", 1.0, 3),
)


def by_outlet(sweep: xr.Dataset) -> Table:
    """Return where the water of every outlet goes, as planned and varied."""
    rows = [
        [
            str(outlet),
            str(variation),
            *(
                digits(float(sweep[name].sel(variation=variation)[at]) / unit, places)
                for name, _, unit, places in _OUTLETS
            ),
        ]
        for at, outlet in enumerate(sweep["outlet"].values)
        for variation in sweep["variation"].values
    ]
    headings = ["outlet", "variation", *(heading for _, heading, _, _ in _OUTLETS)]
    caption = (
        "Where the returned water goes today, and what moves it: excess of density over the "
        "lake at the outlet, speed in the ports, share that ends above the outlet."
    )
    return Table(caption, headings, rows, 2)


def of_study(name: str, account: Account, sweeps: Mapping[str, xr.Dataset]) -> list[Table]:
    """Return all tables of a plant and its sweeps (``strata.studies.today.PlantStudy``)."""
    tables = [*by_pressure(sweeps["pressure"]), by_two_pressures(sweeps["two pressures"])]
    if "wash" in sweeps:
        tables.append(by_wash(sweeps["wash"]))
    tables += [by_lime(sweeps["lime"]), by_outlet(sweeps["outlets"])]
    of_plant = [figures(name, account), *streams(name, account), *riser.tables(name, account)]
    return [*of_plant, *tables]


def text(table: Table) -> str:
    """Return a table for the terminal; one whose last column gives reasons as paragraphs."""
    caption = fill(table.caption, 95)
    if table.headings[-1] != "why":
        return f"{caption}\n\n{aligned(table.headings, table.rows, table.left)}"
    lines = [
        fill(f"{', '.join(words)}: {best} bar, {why}", 95,
             subsequent_indent="    ")
        for *words, best, why in table.rows
    ]  # fmt: skip
    return "\n".join([caption, "", *lines])
