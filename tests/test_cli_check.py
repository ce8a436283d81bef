"""``strata check`` says what is sound and what is not, without running anything."""

import json

from click.testing import CliRunner

from strata.caution import CAUTION
from strata.cli.group import group


def run(*arguments):
    return CliRunner().invoke(group, ["check", *map(str, arguments)])


def test_sound_files_are_named_with_their_kind(folder):
    result = run(folder.lake, folder.plan, folder.limits)
    assert result.exit_code == 0
    assert result.stdout.splitlines() == [
        "lake.toml: sound lake file",
        "plan.toml: sound plan file",
        "limits.toml: sound limits file",
        "",
        CAUTION,
    ]
    assert result.stderr == ""


def test_a_script_gets_json(folder):
    result = run(folder.plan, "--json")
    assert json.loads(result.stdout) == {
        "files": [{"file": "plan.toml", "kind": "plan"}],
        "caution": CAUTION,
    }


def test_faults_go_to_standard_error_one_line_each_and_the_code_is_2(folder):
    folder.spoil(folder.plan, "flow_m3_s = 6.0", "flow_m3_s = -6.0")
    folder.spoil(folder.plan, "intake_depth_m = 345", "intake_depth_m = 430")
    result = run(folder.lake, folder.plan)
    assert result.exit_code == 2
    assert result.stdout == ""
    assert result.stderr.splitlines() == [
        "plan.toml: plant.north.flow_m3_s is -6; more than 0 and up to 100000 m3/s is allowed",
        "plan.toml: plant.north.intake_depth_m is 430; the lake floor is at 400 m",
    ]


def test_a_missing_file_is_bad_input(folder):
    result = run("nowhere.toml")
    assert (result.exit_code, result.stderr) == (2, "nowhere.toml does not exist\n")


def test_a_plan_alone_is_not_held_against_a_lake(folder):
    folder.spoil(folder.plan, "intake_depth_m = 345", "intake_depth_m = 430")
    assert run(folder.plan).exit_code == 0
