"""The dossier: one HTML page with the verdict first, then the evidence, then how to rerun.

The page holds its pictures, fetches nothing and needs no script.  The same runs give the same
bytes, but for the date.
"""

import base64
import datetime
import hashlib
import io
import os
import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import jinja2
import numpy as np
import xarray as xr
from matplotlib.figure import Figure

from strata.caution import CAUTION
from strata.lake.site import Lake
from strata.limits import BREACHED, KEPT, UNCERTAIN, Limits, Verdict, VerdictRow
from strata.margins import cubic_kilometres, tonnes
from strata.plant.plan import Plan
from strata.report import figures, words
from strata.report.plot import calendar_years, record_of
from strata.report.tables import (
    amount_text,
    digits,
    distance_text,
    end_numbers,
    ledger_worst,
)
from strata.results import inputs_of, replacing
from strata.variables import PLANT_SERIES

_KINDS = {KEPT: ("kept", "✓"), UNCERTAIN: ("unsure", "±"), BREACHED: ("breached", "✗")}
_DPI = 110
_PATH, _DECIMALS = re.compile(r' d="[^"]*"'), re.compile(r"(\.\d\d)\d+")
#: What a share (True) or a change (False) is measured against, in words.
_REFERENCES = {
    ("start", True): " of the start",
    ("start", False): " since the start",
    ("baseline", True): " against the lake left alone",
    ("baseline", False): " more than in the lake left alone",
}


@dataclass(frozen=True)
class Table:
    """A table of text; the first ``left`` columns are words, the others numbers."""

    caption: str
    headings: Sequence[str]
    rows: Sequence[Sequence[str]]
    left: int = 1


@dataclass(frozen=True)
class Picture:
    """A figure as the page holds it, with the table that gives its numbers."""

    source: str
    alt: str
    finding: str
    reading: str
    width: int
    height: int
    tables: tuple[Table, ...] = ()


def dossier(
    results: Mapping[str, xr.Dataset],
    verdicts: Mapping[str, Verdict],
    limits: Limits,
    path: str | os.PathLike[str],
    *,
    lake: Lake | None = None,
    plans: Mapping[str, Plan] | None = None,
    separate: Mapping[str, xr.Dataset] | None = None,
    date: datetime.date | None = None,
    command: str = "",
) -> None:
    """Write the dossier of a comparison.

    Parameters
    ----------
    results : mapping
        Name of the plan -> projection; the lake left alone first.
    verdicts : mapping
        Name of the plan -> verdict under the limits.
    limits : Limits
    path : path
        HTML file to write; written beside it, then renamed.
    lake : Lake, optional
        For the casts' readings in the figure of today's column.
    plans : mapping, optional
        Name of the plan -> Plan, for the words on what its plants do.
    separate : mapping, optional
        Name -> separator sweep (``strata.studies.separate``).
    date : datetime.date, optional
        Today if not given.
    command : str
        How to run it again.

    Raises
    ------
    strata.InputError
        If the file cannot be written.
    """
    text = page(results, verdicts, limits, lake, plans or {}, separate or {}, date, command)
    with replacing(path) as partial:
        partial.write_text(text, encoding="utf-8")


def page(
    results: Mapping[str, xr.Dataset],
    verdicts: Mapping[str, Verdict],
    limits: Limits,
    lake: Lake | None,
    plans: Mapping[str, Plan],
    separate: Mapping[str, xr.Dataset],
    date: datetime.date | None,
    command: str,
) -> str:
    """Return the page; arguments as in :func:`dossier`."""
    environment = jinja2.Environment(
        loader=jinja2.PackageLoader("strata.report"),
        autoescape=True,
        trim_blocks=True,
        undefined=jinja2.StrictUndefined,
    )
    first = next(iter(results.values()))
    baseline_name = next(iter(results))
    start, end = words.span(first)
    names = list(results)
    with figures.house_style():
        pictures = _pictures(results, verdicts, limits, lake, separate)
    return environment.get_template("dossier.html").render(
        title=f"{first.attrs['lake_name']}: what gas extraction does to it, {start} to {end}",
        subtitle=f"{len(results) - 1} plans beside the lake left alone, under the limits of "
        f"“{limits.name}”.",
        caution=CAUTION,
        note=limits.note,
        plans=names,
        verdict_caption="Least distance: how near the bound a run comes at its worst, "
        "negative "
        f"beyond it. Uncertain: kept by less than the casts' error (95 %) and an internal "
        "wave "
        f"of {limits.wave_tilt:g} m would take.",
        verdict_rows=_verdict_rows(limits, verdicts, names),
        summary_tables=[_summary(results)],
        stories=[
            {
                "name": name,
                "sentences": words.plan_story(
                    result,
                    verdicts[name],
                    plans.get(name),
                    None if name == baseline_name else first,
                ),
            }
            for name, result in results.items()
        ],
        figures=pictures,
        stream_tables=_streams(results),
        ledger_table=_ledger(results),
        warnings={
            name: [line for line in str(result.attrs["warnings"]).split("\n") if line]
            for name, result in results.items()
        },
        inputs_table=_inputs(results, limits),
        command=command or "strata compare LAKE PLAN...",
        program=f"strata {first.attrs['strata_version']}",
        settings=_settings(first),
        date=(date or datetime.date.today()).isoformat(),
    )


# Tables -------------------------------------------------------------------------------------


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


def _verdict_rows(
    limits: Limits, verdicts: Mapping[str, Verdict], names: Sequence[str]
) -> list[dict[str, object]]:
    rows: list[dict[str, object]] = []
    for number, limit in enumerate(limits.limits):
        against = {verdicts[name].rows[number].against for name in names} - {""}
        share = limit.subject.unit == "1"
        said = _REFERENCES[against.pop(), share] if len(against) == 1 else ""
        cells = [_cell(verdicts[name].rows[number]) for name in names]
        rows.append({"limit": limit.words, "rule": limit.rule + said, "cells": cells})
    return rows


def _summary(results: Mapping[str, xr.Dataset]) -> Table:
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


def _ledger(results: Mapping[str, xr.Dataset]) -> Table:
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


def _inputs(results: Mapping[str, xr.Dataset], limits: Limits) -> Table:
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


def _settings(result: xr.Dataset) -> str:
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


def _streams(results: Mapping[str, xr.Dataset]) -> list[Table]:
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


# Pictures -----------------------------------------------------------------------------------


def _embedded(figure: Figure) -> tuple[str, int, int]:
    """Return a figure as a data address of an SVG without a date, and its size in pixels."""
    buffer = io.BytesIO()
    figure.savefig(
        buffer, format="svg", dpi=_DPI, metadata={"Date": None, "Creator": "strata"}
    )
    width, height = (round(96 * inches) for inches in figure.get_size_inches())
    # a hundredth of a point is finer than any screen or printer
    svg = _PATH.sub(lambda path: _DECIMALS.sub(r"\1", path[0]), buffer.getvalue().decode())
    code = base64.b64encode(svg.encode()).decode("ascii")
    return f"data:image/svg+xml;base64,{code}", width, height


def _picture(
    figure: Figure, said: tuple[str, str], reading: str = "", tables: Sequence[Table] = ()
) -> Picture:
    source, width, height = _embedded(figure)
    finding, alt = said
    return Picture(source, alt, finding, reading, width, height, tuple(tables))


def _pictures(
    results: Mapping[str, xr.Dataset],
    verdicts: Mapping[str, Verdict],
    limits: Limits,
    lake: Lake | None,
    separate: Mapping[str, xr.Dataset],
) -> list[Picture]:
    """Return all figures in the order of the page."""
    baseline = next(iter(results.values()))
    planned = dict(list(results.items())[1:])
    with_plants = {name: one for name, one in planned.items() if "plant" in one.coords}
    years = _chosen_years(baseline)
    shown = ("methane", "carbon_dioxide", "saturation", "temperature", "salinity")
    drawn = [
        _picture(
            figures.main_gradient(results, limits, baseline),
            words.gradient_caption(results),
            "Thick dashed lines are limits.",
            [_gradient_table(results)],
        ),
        _picture(
            figures.limits_through_time(results, limits, baseline),
            words.limits_caption(verdicts, limits),
            "One drawing per limit; shares are against the start or the lake left alone, as "
            "the "
            "verdict table says.",
        ),
        _picture(
            figures.gas_pressure(results),
            words.pressure_caption(results),
            "Black: total gas pressure at the end, made up of the shaded gases; orange: at "
            "the "
            "start; dashed: hydrostatic pressure.",
            [_saturation_table(results)],
        ),
        _picture(
            figures.methane(results),
            words.methane_caption(results),
            "Above: methane by zone, bounds as at the start; below: where it went, in per "
            "cent of "
            "the start.",
            [_methane_table(results)],
        ),
        _picture(
            figures.sections(results, shown), words.section_caption(results, ", ".join(shown))
        ),
    ]
    if planned:
        drawn.append(
            _picture(
                figures.differences(planned, baseline, ("methane", "salinity")),
                words.difference_caption(planned, baseline),
                "Purple is more, orange less than in the lake left alone; dotted is zero, "
                "where less than a hundredth of the scale counts as none; black is the "
                "main gradient.",
            )
        )
    drawn.append(
        _picture(
            figures.profiles(results, years),
            words.profile_caption(results),
            "Later profiles are darker.",
        )
    )
    if with_plants:
        drawn.append(_picture(figures.plants(with_plants), words.plant_caption(with_plants)))
    for name, sweep in separate.items():
        drawn.append(
            _picture(
                figures.separator(sweep),
                words.separator_caption(sweep),
                f"Separator of {name}; binding CO2 lowers what is recovered at a given "
                "pressure, "
                "raises the purity, and so moves the best pressure.",
                [_separator_table(sweep)],
            )
        )
    if lake is not None:
        drawn.append(_picture(figures.today(baseline, lake), words.today_caption(baseline)))
    return drawn


def _chosen_years(result: xr.Dataset) -> list[float]:
    passed = calendar_years(result)
    length = float(passed[-1] - passed[0])
    return [0.0, round(length / 5), round(length / 2), length]


def _by_year(
    results: Mapping[str, xr.Dataset],
    caption: str,
    variables: Sequence[tuple[str, str, float, int]],
) -> Table:
    """Return a table of series at chosen years, each by variable, heading, factor, places."""
    first = next(iter(results.values()))
    years = _chosen_years(first)
    start = calendar_years(first)[0]
    headings = ["run", "quantity", *(f"{start + year:.0f}" for year in years)]
    rows = []
    for name, result in results.items():
        for number, (variable, heading, factor, places) in enumerate(variables):
            values = result[variable].values / factor
            cells = [digits(float(values[record_of(result, year)]), places) for year in years]
            rows.append([name if number == 0 else "", heading, *cells])
    return Table(caption, headings, rows, left=2)


def _gradient_table(results: Mapping[str, xr.Dataset]) -> Table:
    return _by_year(
        results,
        "The main gradient at chosen years.",
        [
            ("gradient_depth", "depth [m]", 1.0, 1),
            ("gradient_strength", "density step [kg/m³]", 1.0, 3),
            ("gradient_thickness", "thickness [m]", 1.0, 1),
        ],
    )


def _saturation_table(results: Mapping[str, xr.Dataset]) -> Table:
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


def _methane_table(results: Mapping[str, xr.Dataset]) -> Table:
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


def _separator_table(sweep: xr.Dataset) -> Table:
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
    return Table("Separator at chosen pressures.", headings, rows)
