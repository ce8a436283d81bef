"""``strata compare``: plans side by side."""

from pathlib import Path

import click

from strata.cli import BREACHED, options


@click.command(name="compare")
@options.lake
@options.plans
@click.option(
    "-o",
    "--out",
    type=click.Path(path_type=Path),
    help="Folder for the dossier and the projections.",
)
@options.years
@options.step_days
@options.seed
@options.limits
@options.strict
@options.as_json
@click.pass_context
def command(
    ctx: click.Context,
    lake: Path,
    plans: tuple[Path, ...],
    out: Path | None,
    years: float,
    step_days: float,
    seed: int,
    limits: Path | None,
    strict: bool,
    as_json: bool,
) -> None:
    """Hold every PLAN against the limits and against LAKE left alone.

    With -o, a dossier in HTML and one NetCDF file for each projection are written.

    \b
    Example:
      strata compare strata-demo/lake.toml strata-demo/*-return.toml -o comparison
    """
    from strata.cli.comparing import run

    rules = options.limits_file(lake, limits)
    breached = run(lake, plans, rules, out, years, step_days, as_json, seed)
    if strict and breached:
        ctx.exit(BREACHED)
