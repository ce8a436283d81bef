"""The tables of a dossier, as text ready for the page."""

import hashlib
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
import xarray as xr

from strata.limits import BREACHED, KEPT, UNCERTAIN, Limits, Verdict, VerdictRow
from strata.margins import cubic_kilometres, tonnes
from strata.report.drawing import calendar_years, record_of
from strata.report.tables import (
    amount_text,
    digits,
    distance_text,
    end_numbers,
    ledger_worst,
)
from strata.results import inputs_of


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
