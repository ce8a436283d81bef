"""All commands in one group; here a refusal becomes a message and an exit code."""

from importlib import import_module

import click

from strata import __version__
from strata.cli import BAD_INPUT, COMMANDS, GAVE_UP, help_text
from strata.errors import ComputationError, StrataError


class Commands(click.Group):
    """The commands of the table, each imported when it is asked for."""

    def list_commands(self, ctx: click.Context) -> list[str]:
        """List the commands without importing them."""
        return list(COMMANDS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:
        """Import a command."""
        if cmd_name not in COMMANDS:
            return None
        command: click.Command = import_module(f"strata.cli.{cmd_name}").command
        return command

    def get_help(self, ctx: click.Context) -> str:
        """Return the help that is there without this module, too."""
        return help_text()

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
    no_args_is_help=True,
    context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 95},
)
@click.version_option(__version__, prog_name="strata", message="%(prog)s %(version)s")
def group() -> None:
    """Gather the commands."""
