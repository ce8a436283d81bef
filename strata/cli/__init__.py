"""The command line: a command parses, calls one function of the library, and reports.

This module alone is imported for ``strata --help``, and imports next to nothing, so that help
is as quick as the interpreter.  All else waits in ``strata.cli.group`` for a command.
"""

import sys

from strata.caution import CAUTION

#: Every command, in the order of the help, with its line there; its module bears its name.
COMMANDS = {
    "demo": "Write the demo lake and its plans, compare them, make a dossier.",
    "inspect": "Show today's column: gas in place, saturation, stability.",
    "project": "Project a lake over decades, with a plan or left alone.",
    "compare": "Hold plans against limits and against the lake left alone.",
    "steady": "Bring a lake to its own steady state; compare it with the casts.",
    "separate": "Show what the plants of a plan make of their feed; vary their settings.",
    "check": "Validate input files without running anything.",
}

#: Exit codes.
DONE, BREACHED, BAD_INPUT, GAVE_UP = 0, 1, 2, 3

_WIDTH = 79


def main() -> None:
    """Run the command line."""
    if sys.argv[1:] in ([], ["-h"], ["--help"]):
        print(help_text())
    else:
        from strata.cli.group import group

        group(prog_name="strata")


def help_text() -> str:
    """Return what ``strata --help`` says."""
    column = max(map(len, COMMANDS)) + 2
    return "\n".join(
        [
            "Usage: strata [OPTIONS] COMMAND [ARGS]...",
            "",
            "What gas extraction does to a gas-rich stratified lake over decades.",
            "",
            "Example:",
            "  strata demo",
            "",
            "Commands (strata COMMAND --help says more):",
            *(f"  {name:{column}}{line}" for name, line in COMMANDS.items()),
            "",
            "Options:",
            "  --version   Show the version.",
            "  -h, --help  Show this text.",
            "",
            "Exit codes:",
            f"  {DONE}  done",
            f"  {BREACHED}  a limit is breached, with --strict",
            f"  {BAD_INPUT}  bad input",
            f"  {GAVE_UP}  the computation refused to go on",
            "",
            *_wrapped(CAUTION),
        ]
    )


def _wrapped(text: str) -> list[str]:
    """Return a paragraph as lines."""
    lines = [""]
    for word in text.split():
        if len(lines[-1]) + len(word) >= _WIDTH:
            lines.append("")
        lines[-1] = f"{lines[-1]} {word}".strip()
    return lines
