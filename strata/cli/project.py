"""``strata project``: one projection."""

from pathlib import Path

import click

from strata.cli import BREACHED, options


@click.command(name="project")
@options.lake
@options.plan
@click.option("-o", "--out", type=click.Path(path_type=Path), help="NetCDF file to write.")
@options.years
@options.step_days
@options.seed
@options.follow
@options.check_step
@options.checkpoint
@options.limits
@options.strict
@options.as_json
@click.pass_context
def command(
    ctx: click.Context,
    lake: Path,
    plan: Path | None,
    out: Path | None,
    years: float,
    step_days: float,
    seed: int,
    follow: tuple[str, ...],
    check_step: bool,
    checkpoint: Path | None,
    limits: Path | None,
    strict: bool,
    as_json: bool,
) -> None:
    """Project LAKE over decades under PLAN; without PLAN, the lake left alone.

    With --limits or --strict the projection is judged, for which the lake left alone is
    projected beside it.

    \b
    Example:
      strata project strata-demo/lake.toml strata-demo/deep-return.toml -o deep.nc
    """
    from strata import results
    from strata.cli import numbers, output, terminal
    from strata.inputs import load_all
    from strata.projection import followed
    from strata.report import tables
    from strata.studies import step
    from strata.studies.compare import compare

    terminal.show_warnings()
    terminal.announce_compilation()
    if out:
        output.writable_file(out)
    rules_file = options.limits_file(lake, limits) if strict else limits
    site, plans, rules = load_all(lake, [plan] if plan else [], rules_file)
    if check_step:
        with terminal.progress(f"projecting {years:g} years twice") as progress:
            _, changes = step.check_step(
                site,
                plans[0] if plans else None,
                years=years,
                step_days=step_days,
                progress=progress,
            )
        if as_json:
            terminal.report_json({"step_check": [vars(change) for change in changes]})
        else:
            terminal.report(f"{site.site.name}\n\n{tables.step_changes(changes)}")
        return
    with terminal.progress(f"projecting {years:g} years") as progress:
        comparison = compare(
            site,
            plans,
            rules,
            years=years,
            step_days=step_days,
            alone=not plans,
            seed=seed,
            tags=followed(site, follow),
            checkpoint=checkpoint,
            progress=progress,
        )
    name, found = list(comparison.results.items())[-1]
    verdict = comparison.verdicts.get(name)
    if out:
        results.write(found, out)
        if checkpoint:
            checkpoint.unlink(missing_ok=True)
    if as_json:
        rows = verdict.as_dicts() if verdict else None
        terminal.report_json(numbers.outcome(found) | {"verdict": rows})
    else:
        table = tables.comparison({name: found}, {name: verdict} if verdict else {})
        kept = f"\n\n{out}: written" if out else "\n\n-o FILE keeps the whole result"
        terminal.report(f"{site.site.name}, {table}\n\n{tables.ledger_line(found)}{kept}")
    if strict and verdict and verdict.breached:
        ctx.exit(BREACHED)
