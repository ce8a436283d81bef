"""The dossier: one HTML page with the verdict first, then the evidence, then how to rerun.

The page holds its pictures, fetches nothing and needs no script.  The same runs give the same
bytes, but for the date.
"""

import base64
import datetime
import io
import os
import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import jinja2
import xarray as xr
from matplotlib.figure import Figure

from strata.caution import CAUTION
from strata.lake.site import Lake
from strata.limits import Limits, Verdict
from strata.plant.account import Account
from strata.plant.plan import Plan
from strata.report import blocks, figures, plant_tables, riser, sweeps, words
from strata.report.diagram import diagram
from strata.results import replacing

_DPI = 110
_PATH, _DECIMALS = re.compile(r' d="[^"]*"'), re.compile(r"(\.\d\d)\d+")


@dataclass(frozen=True)
class Picture:
    """A figure as the page holds it, with the table that gives its numbers."""

    source: str
    alt: str
    finding: str
    reading: str
    width: int
    height: int
    tables: tuple[blocks.Table, ...] = ()


def dossier(
    results: Mapping[str, xr.Dataset],
    verdicts: Mapping[str, Verdict],
    limits: Limits,
    path: str | os.PathLike[str],
    *,
    lake: Lake | None = None,
    plans: Mapping[str, Plan] | None = None,
    separate: Mapping[str, xr.Dataset] | None = None,
    accounts: Mapping[str, Account] | None = None,
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
    accounts : mapping, optional
        Name of a plant -> what it does with today's water, for its diagram and tables.
    date : datetime.date, optional
        Today if not given.
    command : str
        How to run it again.

    Raises
    ------
    strata.InputError
        If the file cannot be written.
    """
    text = page(
        results,
        verdicts,
        limits,
        lake,
        plans or {},
        separate or {},
        accounts or {},
        date,
        command,
    )
    with replacing(path) as partial:
        partial.write_text(text, encoding="utf-8")


def page(
    results: Mapping[str, xr.Dataset],
    verdicts: Mapping[str, Verdict],
    limits: Limits,
    lake: Lake | None,
    plans: Mapping[str, Plan],
    separate: Mapping[str, xr.Dataset],
    accounts: Mapping[str, Account],
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
        plants = [_of_plant(name, account, first) for name, account in accounts.items()]
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
        verdict_rows=blocks.verdict_rows(limits, verdicts, names),
        summary_tables=[blocks.summary(results)],
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
        plant_tables=plant_tables.plant_tables(results),
        plant_figures=plants,
        ledger_table=blocks.ledger(results),
        warnings={
            name: [line for line in str(result.attrs["warnings"]).split("\n") if line]
            for name, result in results.items()
        },
        inputs_table=blocks.input_files(results, limits),
        command=command or "strata compare LAKE PLAN...",
        program=f"strata {first.attrs['strata_version']}",
        settings=blocks.settings(first),
        date=(date or datetime.date.today()).isoformat(),
    )


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
    figure: Figure,
    said: tuple[str, str],
    reading: str = "",
    tables: Sequence[blocks.Table] = (),
) -> Picture:
    source, width, height = _embedded(figure)
    finding, alt = said
    return Picture(source, alt, finding, reading, width, height, tuple(tables))


def _of_plant(name: str, account: Account, baseline: xr.Dataset) -> Picture:
    """Return the diagram of a plant with its tables."""
    floor, gradient = float(baseline["face"][-1]), float(baseline["gradient_depth"][0])
    return _picture(
        diagram(account, floor, gradient),
        words.diagram_caption(name, account),
        "Numbers stand for the streams listed below the drawing; solid is water, dashed is "
        "gas; pipes end at their true depths.",
        [
            plant_tables.figures(name, account),
            *plant_tables.streams(name, account),
            *riser.tables(name, account),
        ],
    )


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
    years = blocks.chosen_years(baseline)
    shown = ("methane", "carbon_dioxide", "saturation", "temperature", "salinity")
    drawn = [
        _picture(
            figures.main_gradient(results, limits, baseline),
            words.gradient_caption(results),
            "Thick dashed lines are limits.",
            [blocks.gradient_table(results)],
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
            [blocks.saturation_table(results)],
        ),
        _picture(
            figures.methane(results),
            words.methane_caption(results),
            "Above: methane by zone, bounds as at the start; below: where it went, in per "
            "cent of "
            "the start.",
            [blocks.methane_table(results)],
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
        reading = "Lines are means of a year, bands its least and largest month."
        said = words.plant_caption(with_plants)
        drawn.append(_picture(figures.plants(with_plants), said, reading))
    for name, sweep in separate.items():
        drawn.append(
            _picture(
                sweeps.separator(sweep),
                words.separator_caption(sweep),
                f"Separator of {name}; binding CO2 lowers what is recovered at a given "
                "pressure, "
                "raises the purity, and so moves the best pressure.",
                plant_tables.by_pressure(sweep),
            )
        )
    if lake is not None:
        drawn.append(_picture(figures.today(baseline, lake), words.today_caption(baseline)))
    return drawn
