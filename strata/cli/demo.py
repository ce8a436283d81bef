"""``strata demo``: the demo lake, its plans, and their comparison."""

from pathlib import Path

import click

from strata.cli import options


@click.command(name="demo")
@click.argument(
    "folder", metavar="[DIR]", type=click.Path(path_type=Path), default=Path("strata-demo")
)
@options.years
@options.step_days
@options.as_json
def command(folder: Path, years: float, step_days: float, as_json: bool) -> None:
    """Write the demo lake and its plans to DIR (strata-demo), compare them, make a dossier.

    The lake, its plans and its limits are invented.  Input files that you have changed in DIR
    stay as they are and are used.

    \b
    Example:
      strata demo
    """
    from strata.cli import output
    from strata.cli.comparing import run
    from strata.inputs import demo_files

    output.writable_folder(folder)
    for source in sorted(demo_files().iterdir()):
        if source.is_file():
            kept = output.copy_unless_there(source, folder / source.name)
            if kept:
                click.echo(f"{kept}: differs from the demo's and is used as it is", err=True)
    run(
        folder / "lake.toml",
        [folder / f"{name}.toml" for name in PLANS],
        folder / "limits.toml",
        folder,
        years,
        step_days,
        as_json,
    )


#: Plans of the demo, in the order in which they are told.
PLANS = ("surface-return", "deep-return", "staged-lime")
