"""Help is quick, complete, and each command says how to call it."""

import re
import subprocess
import sys

import pytest
from click.testing import CliRunner

from strata import __version__
from strata.caution import CAUTION
from strata.cli import COMMANDS, main

HEAVY = ("numpy", "numba", "scipy", "xarray", "pydantic", "matplotlib", "jinja2", "netCDF4")


def flat(text):
    """Return text without line breaks and hyphens at them, as wrapped help has them."""
    return re.sub(r"\s+", " ", re.sub(r"-\n\s*", "-", text))


def test_help_lists_every_command_and_carries_the_caution():
    result = CliRunner().invoke(main, ["--help"])
    assert result.exit_code == 0
    for name, line in COMMANDS.items():
        assert name in result.output
        assert line in flat(result.output)
    assert CAUTION in flat(result.output)
    assert "2 bad input" in result.output


def test_help_imports_nothing_heavy():
    code = (
        "import sys\nfrom strata.cli import main\n"
        "try:\n    main(['--help'])\nexcept SystemExit:\n    pass\n"
        f"print([name for name in {HEAVY} if name in sys.modules], file=sys.stderr)"
    )
    done = subprocess.run(
        [sys.executable, "-c", code], capture_output=True, text=True, check=True
    )
    assert done.stderr.strip() == "[]"


@pytest.mark.parametrize("name", COMMANDS)
def test_help_of_a_command_has_an_example_that_begins_with_strata(name):
    result = CliRunner().invoke(main, [name, "--help"])
    assert result.exit_code == 0
    assert re.search(rf"Example:\n\s+strata {name}", result.output)


def test_version_is_that_of_the_package():
    assert CliRunner().invoke(main, ["--version"]).output == f"strata {__version__}\n"


def test_an_unknown_command_or_option_is_bad_input():
    for arguments in (["prophesy"], ["check", "--depth", "x"], ["project", "--years", "none"]):
        result = CliRunner().invoke(main, arguments)
        assert result.exit_code == 2
        assert "Error" in result.stderr
        assert "Traceback" not in result.stderr
