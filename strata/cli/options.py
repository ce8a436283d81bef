"""Options and arguments that several commands share, each said once."""

from pathlib import Path

import click

from strata.errors import StrataError

_FILE = click.Path(path_type=Path)

lake = click.argument("lake", type=_FILE)
plans = click.argument("plans", metavar="PLAN...", nargs=-1, required=True, type=_FILE)
plan = click.argument("plan", metavar="[PLAN]", required=False, type=_FILE)

years = click.option(
    "--years",
    type=click.FloatRange(0, 1000, min_open=True),
    default=50,
    show_default=True,
    help="How far to look ahead.",
)
step_days = click.option(
    "--step-days",
    type=click.FloatRange(0, 30, min_open=True),
    default=1,
    show_default=True,
    help="Length of a step of the column; 5 is enough for a survey.",
)
seed = click.option(
    "--seed",
    type=click.IntRange(0, 2**63 - 1),
    default=0,
    show_default=True,
    help="Which years to draw, where the climate varies from year to year.",
)
follow = click.option(
    "--follow",
    multiple=True,
    metavar="NAME",
    help="Follow the water of a spring or river, or its age (age); may be given again.",
)
checkpoint = click.option(
    "--checkpoint",
    type=_FILE,
    help="File to keep the run in; if it is there, the run goes on from it.",
)
check_step = click.option(
    "--check-step",
    is_flag=True,
    help="Run again with half the step and show what changes.",
)
limits = click.option(
    "--limits",
    type=_FILE,
    help="Limits file; without it, limits.toml beside LAKE if there is one.",
)
strict = click.option("--strict", is_flag=True, help="Exit with 1 if a limit is breached.")
as_json = click.option("--json", "as_json", is_flag=True, help="Print numbers as JSON.")


def limits_file(lake: Path, given: Path | None) -> Path:
    """Return the limits file to use: the one given, or the one that lies beside the lake file.

    Raises
    ------
    strata.StrataError
        If there is neither.
    """
    beside = lake.parent / "limits.toml"
    if given is None and not beside.is_file():
        raise StrataError(f"{beside}: does not exist; name a limits file with --limits")
    return given or beside
