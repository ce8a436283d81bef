"""The command line: a command parses, calls one function of the library, and reports.

Commands are imported when they are asked for, so that ``strata --help`` pays for none of them.
"""

from importlib import import_module

import click

from strata import __version__
from strata.caution import CAUTION
from strata.errors import ComputationError, StrataError

DONE, BREACHED, BAD_INPUT, GAVE_UP = 0, 1, 2, 3

#: Every command, in the order of the help, with its line there; its module bears its name.
COMMANDS = {
    "demo": "Write the demo lake and its plans, compare them, make a dossier.",
    "inspect": "Show today's column: gas in place, saturation, stability.",
    "project": "Project a lake over decades, with a plan or left alone.",
    "compare": "Hold plans against limits and against the lake left alone.",
    "check": "Validate input files without running anything.",
}


class Commands(click.Group):
    """The commands of the table above, and the one place where errors become exit codes."""

    def list_commands(self, ctx: click.Context) -> list[str]:
        """List the commands without importing them."""
        return list(COMMANDS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:
        """Import a command."""
        if cmd_name not in COMMANDS:
            return None
        command: click.Command = import_module(f"strata.cli.{cmd_name}").command
        return command

    def format_commands(self, ctx: click.Context, formatter: click.HelpFormatter) -> None:
        """Write the table of commands."""
        with formatter.section("Commands"):
            formatter.write_dl(list(COMMANDS.items()))

    def invoke(self, ctx: click.Context) -> object:
        """Run a command; what strata refuses to do ends in a message and a code."""
        try:
            return super().invoke(ctx)
        except StrataError as error:
            for line in str(error).splitlines():
                click.echo(line, err=True)
            ctx.exit(GAVE_UP if isinstance(error, ComputationError) else BAD_INPUT)


@click.command(
    cls=Commands,
    context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 95},
    epilog=f"{CAUTION}\n\nExit codes: 0 done, 1 a limit is breached (with --strict), "
    "2 bad input, 3 the computation refused to go on.",
)
@click.version_option(__version__, prog_name="strata", message="%(prog)s %(version)s")
def main() -> None:
    """See what gas extraction does to a gas-rich stratified lake over decades.

    \b
    Example:
      strata demo
    """
