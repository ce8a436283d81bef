"""The tables of a dossier, as text ready for the page."""

import hashlib
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
import xarray as xr

from strata.limits import BREACHED, KEPT, UNCERTAIN, Limits, Verdict, VerdictRow
from strata.margins import cubic_kilometres, tonnes
from strata.report.plot import calendar_years, record_of
from strata.report.tables import (
    amount_text,
    digits,
    distance_text,
    end_numbers,
    ledger_worst,
)
from strata.results import inputs_of
from strata.variables import PLANT_SERIES


@dataclass(frozen=True)
class Table:
    """A table of text; the first ``left`` columns are words, the others numbers."""

    caption: str
    headings: Sequence[str]
    rows: Sequence[Sequence[str]]
    left: int = 1


_KINDS = {KEPT: ("kept", "✓"), UNCERTAIN: ("unsure", "±"), BREACHED: ("breached", "✗")}
#: What a share (True) or a change (False) is measured against, in words.
_REFERENCES = {
    ("start", True): " of the start",
    ("start", False): " since the start",
    ("baseline", True): " against the lake left alone",
    ("baseline", False): " more than in the lake left alone",
}


def _cell(row: VerdictRow) -> dict[str, str]:
    kind, sign = _KINDS[row.status]
    since = {BREACHED: "first on", UNCERTAIN: "first within the error on"}
    when = f"{since[row.status]} {row.first_date}" if row.first_date else ""
    distance = f"least distance {distance_text(row)}"
    if row.uncertainty > 0.0:
        distance += f", error {amount_text(row.uncertainty, row)}"
    return {
        "kind": kind,
        "sign": sign,
        "status": row.status,
        "when": when,
        "distance": distance,
    }


def verdict_rows(
    limits: Limits, verdicts: Mapping[str, Verdict], names: Sequence[str]
) -> list[dict[str, object]]:
    """Return one row per limit with a cell per plan: status, first date, least distance."""
    rows: list[dict[str, object]] = []
    for number, limit in enumerate(limits.limits):
        against = {verdicts[name].rows[number].against for name in names} - {""}
        share = limit.subject.unit == "1"
        said = _REFERENCES[against.pop(), share] if len(against) == 1 else ""
        cells = [_cell(verdicts[name].rows[number]) for name in names]
        rows.append({"limit": limit.words, "rule": limit.rule + said, "cells": cells})
    return rows


def summary(results: Mapping[str, xr.Dataset]) -> Table:
    """Return what every run comes to."""
    numbers = {name: end_numbers(result) for name, result in results.items()}
    headings = ["run", *next(iter(numbers.values()))]
    rows = [
        [
            name,
            *(
                digits(value, 3 if key == "largest saturation" else 1, sign=key == "moved [m]")
                for key, value in row.items()
            ),
        ]
        for name, row in numbers.items()
    ]
    caption = (
        "At the end of the runs; methane in per cent of what was there at the start, net "
        "power "
        "averaged over the whole time, largest saturation over the whole time."
    )
    return Table(caption, headings, rows)


def ledger(results: Mapping[str, xr.Dataset]) -> Table:
    """Return the largest gap in the books of every run and tracer."""
    first = next(iter(results.values()))
    tracers = [str(tracer) for tracer in first["tracer"].values]
    rows = []
    for name, result in results.items():
        worst = np.abs(result["ledger_error"].values).max(axis=1)
        known = dict(zip(result["tracer"].values, worst, strict=True))
        extra = [float(value) for key, value in known.items() if key not in tracers]
        cells = [
            f"{float(known[tracer]):.0e}" if tracer in known else "–" for tracer in tracers
        ]
        rows.append([name, *cells, f"{max(extra):.0e}" if extra else "–"])
    worst_of_all = max(ledger_worst(result)[1] for result in results.values())
    return Table(
        f"Largest gap in the books of every run; none above {worst_of_all:.1e}.",
        ["run", *tracers, "tags"],
        rows,
    )


def input_files(results: Mapping[str, xr.Dataset], limits: Limits) -> Table:
    """Return the files all was made from, and their SHA-256."""
    files: dict[tuple[str, str], list[str]] = {}
    for name, result in results.items():
        for file, digest in inputs_of(result).items():
            files.setdefault((file, digest), []).append(name)
    for file, text in limits.texts.items():
        digest = hashlib.sha256(text.encode()).hexdigest()
        files.setdefault((file, digest), []).append("limits")
    rows = [
        [file, "all" if len(used) == len(results) else ", ".join(used), digest]
        for (file, digest), used in files.items()
    ]
    return Table(
        "Input files and their SHA-256.", ["file", "used by", "SHA-256"], rows, left=3
    )


def settings(result: xr.Dataset) -> str:
    """Return the settings of a run in words."""
    options = {
        key.removeprefix("option_"): value
        for key, value in result.attrs.items()
        if key.startswith("option_")
    }
    return ", ".join(f"{key.replace('_', ' ')} {value}" for key, value in options.items())


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
    ("CH4_share", "CH4", "1", 4),
    ("CO2_share", "CO2", "1", 4),
    ("N2_share", "N2", "1", 4),
    ("H2S_share", "H2S", "1", 5),
    ("H2O_share", "water vapour", "1", 4),
)


def stream_tables(
    streams: Mapping[str, Sequence[Mapping[str, float | str]]],
) -> list[Table]:
    """Return two tables for each plant, its water and its gas, a column per stream."""
    tables = []
    for plant, listed in streams.items():
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


def chosen_years(result: xr.Dataset) -> list[float]:
    """Return the years after the start at which profiles and tables stand."""
    passed = calendar_years(result)
    length = float(passed[-1] - passed[0])
    years = (0.0, float(round(length / 5)), float(round(length / 2)), length)
    return list(dict.fromkeys(years))


def _by_year(
    results: Mapping[str, xr.Dataset],
    caption: str,
    variables: Sequence[tuple[str, str, float, int]],
) -> Table:
    """Return a table of series at chosen years, each by variable, heading, factor, places."""
    first = next(iter(results.values()))
    years = chosen_years(first)
    start = calendar_years(first)[0]
    headings = ["run", "quantity", *(f"{start + year:.0f}" for year in years)]
    rows = []
    for name, result in results.items():
        for number, (variable, heading, factor, places) in enumerate(variables):
            values = result[variable].values / factor
            cells = [digits(float(values[record_of(result, year)]), places) for year in years]
            rows.append([name if number == 0 else "", heading, *cells])
    return Table(caption, headings, rows, left=2)


def gradient_table(results: Mapping[str, xr.Dataset]) -> Table:
    """Return the main gradient at chosen years."""
    return _by_year(
        results,
        "The main gradient at chosen years.",
        [
            ("gradient_depth", "depth [m]", 1.0, 1),
            ("gradient_strength", "density step [kg/m³]", 1.0, 3),
            ("gradient_thickness", "thickness [m]", 1.0, 1),
        ],
    )


def saturation_table(results: Mapping[str, xr.Dataset]) -> Table:
    """Return how close to bubbling the water is at chosen years."""
    return _by_year(
        results,
        "How close to bubbling, below the surface layer, at chosen years.",
        [
            ("largest_saturation", "largest saturation [1]", 1.0, 3),
            ("largest_saturation_depth", "at depth [m]", 1.0, 0),
            ("least_pressure_margin", "least pressure margin [bar]", 1e5, 2),
            ("least_lift", "least lift to bubbling [m]", 1.0, 1),
        ],
    )


def methane_table(results: Mapping[str, xr.Dataset]) -> Table:
    """Return methane in place, delivered and lost at chosen years."""
    per_tonne = 1e6 / float(tonnes(1.0, "CH4"))
    per_volume = 1.0 / float(cubic_kilometres(1.0))
    return _by_year(
        results,
        "Methane at chosen years; km³ at 0 °C and 1 atm.",
        [
            ("methane_in_place", "in place [Mt]", per_tonne, 2),
            ("methane_in_place", "in place [km³]", per_volume, 2),
            ("methane_recovered", "delivered [Mt]", per_tonne, 2),
            ("methane_lost_to_upper_lake", "lost upward [Mt]", per_tonne, 2),
            ("methane_vented", "vented [Mt]", per_tonne, 3),
        ],
    )


def separator_tables(sweep: xr.Dataset) -> list[Table]:
    """Return outcomes at chosen pressures, and the best pressure for every aim with why."""
    pressures = sweep["pressure"].values
    chosen = np.unique(np.linspace(0, len(pressures) - 1, 7).astype(int))
    rows = [
        [
            str(case),
            digits(float(pressures[at]) / 1e5, 2),
            *(
                digits(float(sweep[name].sel(case=case)[at]) / factor, 3)
                for name, factor in (("recovery", 1.0), ("purity", 1.0), ("net_energy", 1e6))
            ),
        ]
        for case in sweep["case"].values
        for at in chosen
    ]
    headings = ["case", "pressure [bar]", "recovery [1]", "purity [1]", "net energy [MJ/m³]"]
    tables = [Table("Separator at chosen pressures.", headings, rows)]
    if "best_pressure" in sweep:
        best = [
            [
                str(case),
                str(aim),
                digits(float(sweep["best_pressure"].sel(case=case, aim=aim)) / 1e5, 2),
                str(sweep["why"].sel(case=case, aim=aim).item()),
            ]
            for aim in sweep["aim"].values
            for case in sweep["case"].values
        ]
        headings = ["case", "aim", "best pressure [bar]", "why"]
        tables.append(Table("Best pressure by what is aimed at.", headings, best, left=4))
    return tables
