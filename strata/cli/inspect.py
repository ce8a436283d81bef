"""``strata inspect``: the column of today."""

from pathlib import Path

import click

from strata.cli import options


@click.command(name="inspect")
@options.lake
@click.option("-o", "--out", type=click.Path(path_type=Path), help="NetCDF file to write.")
@click.option("--figure", type=click.Path(path_type=Path), help="Figure to write (PNG).")
@options.as_json
def command(lake: Path, out: Path | None, figure: Path | None, as_json: bool) -> None:
    """Show the state of LAKE today: gas in place, saturation, stability, gradients.

    With --figure, profiles with the readings of the casts as points: temperature, salinity,
    density, stability, gas, gas pressure beside the hydrostatic pressure, saturation.

    \b
    Example:
      strata inspect strata-demo/lake.toml --figure today.png
    """
    from strata import results
    from strata.cli import numbers, output, terminal
    from strata.inputs import load_lake
    from strata.projection import today
    from strata.report import figures, tables

    terminal.show_warnings()
    terminal.announce_compilation()
    if out:
        output.writable_file(out)
    if figure:
        output.writable_figure(figure)
    site = load_lake(lake)
    found = today(site)
    if out:
        results.write(found, out)
    if figure:
        with figures.house_style():
            figures.save(figures.today(found, site), figure)
    if as_json:
        terminal.report_json(numbers.state(found))
    else:
        where = f"figure: {figure}" if figure else "--figure FILE.png draws it"
        terminal.report(f"{tables.inspect(found)}\n\n{where}")
