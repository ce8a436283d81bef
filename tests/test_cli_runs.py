"""Whole runs through the command line, on a small lake and for a short time."""

import json
from pathlib import Path

import pytest
from click.testing import CliRunner

from strata import results
from strata.caution import CAUTION
from strata.cli.group import group

SHORT = ("--years", "1", "--step-days", "5")


def run(*arguments):
    return CliRunner().invoke(group, [str(argument) for argument in arguments])


def test_inspect_shows_the_lake_of_today(folder):
    result = run("inspect", folder.lake)
    assert result.exit_code == 0, result.stderr
    assert "largest saturation" in result.stdout
    assert CAUTION in result.stdout
    numbers = json.loads(run("inspect", folder.lake, "--json").stdout)
    assert numbers["date"] == "2027-01-01"
    assert 0.3 < numbers["largest_saturation"] < 0.7  # half saturated, as the casts are made
    assert 195 < numbers["gradient_depth_m"] < 215  # the step of the casts lies at 205 m
    assert numbers["caution"] == CAUTION


def test_project_writes_a_result_that_reads_back(folder):
    out = folder.path / "deep" / "run.nc"
    result = run("project", folder.lake, folder.plan, "-o", out, *SHORT)
    assert result.exit_code == 0, result.stderr
    assert "ledger of test plan" in result.stdout
    assert f"{out}: written" in result.stdout
    assert CAUTION in result.stdout
    found = results.read(out)
    assert found.attrs["plan_name"] == "test plan"
    assert found.sizes["time"] == 13
    assert [path.name for path in out.parent.iterdir()] == ["run.nc"]
    again = run("project", folder.lake, folder.plan, "-o", out, *SHORT)
    assert again.exit_code == 0, again.stderr  # its own file may be written again


def test_project_without_a_plan_is_the_lake_left_alone(folder):
    result = run("project", folder.lake, "--json", *SHORT)
    assert result.exit_code == 0, result.stderr
    numbers = json.loads(result.stdout)
    assert numbers["plan"] == "lake left alone"
    assert numbers["methane_recovered_mol"] == 0
    assert max(numbers["ledger_error"].values()) < 1e-10
    assert numbers["verdict"] is None


def test_strict_turns_a_breach_into_code_1(folder):
    folder.spoil(folder.limits, "at_most = 0.9", "at_most = 0.1")
    strict = run("compare", folder.lake, folder.plan, "--strict", *SHORT)
    assert strict.exit_code == 1, strict.stderr
    assert "breached" in strict.stdout
    assert run("compare", folder.lake, folder.plan, *SHORT).exit_code == 0
    assert run("project", folder.lake, folder.plan, "--strict", *SHORT).exit_code == 1


def test_compare_writes_a_dossier_and_every_projection(folder):
    out = folder.path / "comparison"
    result = run("compare", folder.lake, folder.plan, "-o", out, *SHORT)
    assert result.exit_code == 0, result.stderr
    assert sorted(path.name for path in out.iterdir()) == [
        "dossier.html",
        "lake-left-alone.nc",
        "test-plan.nc",
    ]
    assert CAUTION in (out / "dossier.html").read_text()
    assert f"dossier: {out}/dossier.html" in result.stdout
    assert CAUTION in result.stdout


def test_compare_gives_a_script_the_verdicts(folder):
    result = run("compare", folder.lake, folder.plan, "--json", *SHORT)
    numbers = json.loads(result.stdout)
    assert list(numbers["plans"]) == ["lake left alone", "test plan"]
    row = numbers["plans"]["test plan"]["verdict"][0]
    assert (row["quantity"], row["bound"], row["status"]) == (
        "largest_saturation",
        0.9,
        "kept",
    )
    assert numbers["dossier"] is None


def test_nothing_is_overwritten_and_nothing_run_where_output_is_in_the_way(folder):
    mine = folder.path / "mine.nc"
    mine.write_text("not of strata")
    result = run("project", folder.lake, "-o", mine, *SHORT)
    assert result.exit_code == 2
    assert (
        result.stderr == "mine.nc: exists and was not written by strata; choose another name\n"
    )
    assert mine.read_text() == "not of strata"
    result = run("compare", folder.lake, folder.plan, "-o", folder.path / "mine.nc", *SHORT)
    assert result.exit_code == 2
    assert result.stderr == "mine.nc: cannot be written (File exists)\n"


def test_bad_input_stops_a_run_before_it_begins(folder):
    folder.spoil(folder.lake, "depth_m = 386", "depth = 386")
    for command in ("inspect", "project"):
        result = run(command, folder.lake)
        assert (result.exit_code, result.stdout) == (2, "")
        assert result.stderr == "lake.toml: spring.deep.depth has no unit; write depth_m\n"


def test_compare_without_limits_says_where_it_looked(folder):
    folder.limits.unlink()
    result = run("compare", folder.lake, folder.plan)
    assert result.exit_code == 2
    assert result.stderr == "limits.toml: does not exist; name a limits file with --limits\n"


@pytest.mark.long
def test_the_demo_runs_and_runs_again(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    first = run("demo", *SHORT)
    assert first.exit_code == 0, first.stderr
    assert "strata-demo/dossier.html" in first.stdout
    lake = Path("strata-demo/lake.toml")
    lake.write_text(lake.read_text() + "# my own remark\n")
    again = run("demo", *SHORT)
    assert again.exit_code == 0, again.stderr
    assert "lake.toml: differs from the demo's and is used as it is" in again.stderr
    assert lake.read_text().endswith("# my own remark\n")


def test_compare_draws_the_years_of_a_seed(folder):
    folder.spoil(folder.lake, "[climate]", "[climate]\nwind_variability_share = 0.3")

    def thickness(seed):
        result = run("compare", folder.lake, folder.plan, "--json", "--seed", seed, *SHORT)
        assert result.exit_code == 0, result.stderr
        return json.loads(result.stdout)["plans"]["lake left alone"]

    assert thickness(1) == thickness(1)
    assert thickness(1) != thickness(2)
