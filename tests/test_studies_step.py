"""The step check and the checkpoint, through the command line on the small lake."""

import json

from click.testing import CliRunner

from strata.cli.group import group
from strata.inputs import load_lake
from strata.limits import QUANTITIES
from strata.studies.step import check_step


def run(*words):
    """Run a command and return its result."""
    return CliRunner().invoke(group, [str(word) for word in words])


def test_halving_the_step_is_reported_for_every_quantity_of_a_verdict(folder):
    done = run("project", folder.lake, folder.plan, "--years", 1, "--check-step", "--json")
    assert done.exit_code == 0, done.output
    found = json.loads(done.stdout)["step_check"]
    named = {row["quantity"] for row in found}
    assert named <= set(QUANTITIES)
    assert {"largest_saturation", "gradient_sinking_m", "methane_lost_share"} <= named
    table = run("project", folder.lake, "--years", 0.2, "--check-step")
    assert "half the step" in table.stdout
    assert "Caution" in table.stdout


def test_a_coarser_step_changes_more(folder):
    lake = load_lake(folder.lake)
    change = []
    for step in (2.0, 8.0):
        _, rows = check_step(lake, years=1, step_days=step, workers=1)
        change.append({row.quantity: row.change for row in rows}["oxic_depth_m"])
    assert change[0] <= change[1]


def test_a_checkpoint_is_kept_until_the_result_is_written(folder):
    kept = folder.path / "run.checkpoint"
    words = ("project", folder.lake, folder.plan, "--years", 0.3, "--checkpoint", kept)
    assert run(*words).exit_code == 0
    assert kept.exists()
    refused = run(*words, "--step-days", 5)
    assert refused.exit_code == 2
    assert "checkpoint of another run" in refused.stderr
    assert run(*words, "-o", folder.path / "out.nc").exit_code == 0
    assert not kept.exists()
    assert (folder.path / "out.nc").exists()
