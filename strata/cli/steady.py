"""``strata steady``: the state that a site's own supply would hold."""

from pathlib import Path

import click

from strata.cli import options


@click.command(name="steady")
@options.lake
@click.option(
    "-o", "--out", type=click.Path(path_type=Path), help="CSV file of all layers to write."
)
@click.option(
    "--most-years",
    type=click.IntRange(200, 20_000),
    default=3000,
    show_default=True,
    help="Years to compute at most.",
)
@click.option(
    "--tolerance",
    type=click.FloatRange(0, 0.5, min_open=True),
    default=0.01,
    show_default=True,
    help="Drift that counts as none: share of a tracer's range per century.",
)
@options.as_json
def command(
    lake: Path, out: Path | None, most_years: int, tolerance: float, as_json: bool
) -> None:
    """Bring LAKE to the steady state of its own supply; show how far its casts are from it.

    Trend and year-to-year variability of the climate are left out. What differs by more than
    the lake's own wobble tells of a lake that still changes, or of a supply or mixing that is
    not this lake's.

    \b
    Example:
      strata steady strata-demo/lake.toml -o steady.csv
    """
    from strata.cli import output, terminal
    from strata.inputs import load_lake
    from strata.report import steady_table
    from strata.results import replacing
    from strata.studies.steady import rows, steady

    terminal.show_warnings()
    terminal.announce_compilation()
    if out:
        output.writable_file(out)
    site = load_lake(lake)
    with terminal.progress("years to the steady state") as progress:
        found = steady(site, most_years=most_years, tolerance=tolerance, progress=progress)
    headline = (
        f"{site.site.name}: {found.years} years computed, which stand for"
        f" {found.stands_for:.0f}; at the end no layer drifts by more than"
        f" {100 * found.drift:.1f} % of a tracer's range per century"
    )
    if out:
        with replacing(out) as partial:
            partial.write_text(steady_table.csv_text(found.layers, headline))
    if as_json:
        terminal.report_json(
            {
                "years": found.years,
                "stands_for_years": found.stands_for,
                "drift_share_per_century": found.drift,
                "tracers": list(rows(found)),
                "layers": {
                    name: found.layers[name].values for name in ("depth", "cast", "steady")
                },
            }
        )
    else:
        written = f"\n\n{out}: written" if out else "\n\n-o FILE keeps every layer"
        terminal.report(
            f"{headline}\n\n{steady_table.tracer_table(found.layers)}\n\n"
            f"{steady_table.layer_table(found.layers)}{written}"
        )
