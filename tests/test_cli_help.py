"""Help is quick, complete, and each command says how to call it."""

import re
import subprocess
import sys
from pathlib import Path

import pytest
from click.testing import CliRunner

import strata
from strata import __version__
from strata.caution import CAUTION
from strata.cli import COMMANDS, help_text, main
from strata.cli.group import group

HEAVY = ("click", "typing", "numpy", "numba", "scipy", "xarray", "pydantic", "matplotlib")


def flat(text):
    """Return text without the line breaks and columns of help."""
    return re.sub(r"\s+", " ", text)


def test_help_lists_every_command_and_carries_the_caution():
    result = CliRunner().invoke(group, ["--help"])
    assert result.exit_code == 0
    assert result.output == help_text() + "\n"
    for name, line in COMMANDS.items():
        assert name in result.output
        assert line in flat(result.output)
    assert CAUTION in flat(result.output)
    assert "2 bad input" in flat(result.output)


def test_help_imports_nothing_heavy():
    code = (
        "import sys\nfrom strata.cli import main\n"
        "sys.argv = ['strata', '--help']\nmain()\n"
        f"print([name for name in {HEAVY} if name in sys.modules], file=sys.stderr)"
    )
    done = subprocess.run(
        [sys.executable, "-S", "-c", code],
        capture_output=True,
        text=True,
        check=True,
        env={"PYTHONPATH": str(Path(strata.__file__).parent.parent)},
    )
    assert done.stderr.strip() == "[]"
    assert done.stdout == help_text() + "\n"


@pytest.mark.parametrize("name", COMMANDS)
def test_help_of_a_command_has_an_example_that_begins_with_strata(name):
    result = CliRunner().invoke(group, [name, "--help"])
    assert result.exit_code == 0
    assert re.search(rf"Example:\n\s+strata {name}", result.output)


def test_version_is_that_of_the_package():
    assert CliRunner().invoke(group, ["--version"]).output == f"strata {__version__}\n"


def test_no_command_at_all_is_answered_with_help(monkeypatch, capsys):
    monkeypatch.setattr(sys, "argv", ["strata"])
    main()
    assert capsys.readouterr().out == help_text() + "\n"


def test_an_unknown_command_or_option_is_bad_input():
    for arguments in (["prophesy"], ["check", "--depth", "x"], ["project", "--years", "none"]):
        result = CliRunner().invoke(group, arguments)
        assert result.exit_code == 2
        assert "Error" in result.stderr
        assert "Traceback" not in result.stderr
