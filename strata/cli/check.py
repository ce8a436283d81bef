"""``strata check``: validate input files."""

from pathlib import Path

import click

from strata.cli import options


@click.command(name="check")
@click.argument(
    "files", metavar="FILE...", nargs=-1, required=True, type=click.Path(path_type=Path)
)
@options.as_json
def command(files: tuple[Path, ...], as_json: bool) -> None:
    """Validate lake, plan and limits files without running anything.

    Plans are held against the lake file among FILE, if there is one.  Every fault of every
    file is reported at once.

    \b
    Example:
      strata check strata-demo/lake.toml strata-demo/deep-return.toml
    """
    from strata.cli import terminal
    from strata.inputs import check

    terminal.show_warnings()
    sound = check(files)
    if as_json:
        terminal.report_json({"files": [{"file": f, "kind": kind} for f, kind in sound]})
    else:
        terminal.report("\n".join(f"{file}: sound {kind} file" for file, kind in sound))
