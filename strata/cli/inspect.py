"""``strata inspect``: the column of today."""

from pathlib import Path

import click

from strata.cli import options


@click.command(name="inspect")
@options.lake
@click.option("-o", "--out", type=click.Path(path_type=Path), help="NetCDF file to write.")
@options.as_json
def command(lake: Path, out: Path | None, as_json: bool) -> None:
    """Show the state of LAKE today: gas in place, saturation, stability, gradients.

    \b
    Example:
      strata inspect strata-demo/lake.toml
    """
    from strata import results
    from strata.cli import numbers, output, terminal
    from strata.inputs import load_lake
    from strata.projection import today
    from strata.report import tables

    terminal.show_warnings()
    terminal.announce_compilation()
    if out:
        output.writable_file(out)
    found = today(load_lake(lake))
    if out:
        results.write(found, out)
    if as_json:
        terminal.report_json(numbers.state(found))
    else:
        terminal.report(tables.inspect(found))
