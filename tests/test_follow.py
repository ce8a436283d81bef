"""Water of springs and rivers, and its age, followed from the command line and in Python."""

import json

import numpy as np
import pytest
from click.testing import CliRunner

from strata import project, results
from strata.cli.group import group
from strata.column.tracers import followed
from strata.errors import OutOfRangeError


def test_names_of_springs_rivers_and_age_are_known(sound_lake):
    tags = followed(sound_lake, ["deep", "rivers", "age", "spring_deep"])
    assert tags == ("spring_deep", "river_rivers", "age")


def test_an_unknown_name_is_refused_with_the_nearest(sound_lake):
    with pytest.raises(OutOfRangeError, match=r"'depe' is not known; did you mean deep\?"):
        followed(sound_lake, ["depe"])
    with pytest.raises(OutOfRangeError, match="water to follow"):
        project(sound_lake, years=1, tags=["depe"])


def test_followed_water_is_in_the_file(folder):
    out = folder.path / "followed.nc"
    arguments = [
        "project", str(folder.lake), "-o", str(out), "--years", "1", "--step-days", "5",
        "--follow", "deep", "--follow", "rivers", "--follow", "age", "--seed", "3",
    ]  # fmt: skip
    done = CliRunner().invoke(group, arguments)
    assert done.exit_code == 0, done.stderr
    found = results.read(out)
    volume = found["volume"].values
    days = (found["time"].values[-1] - found["time"].values[0]) / np.timedelta64(1, "D")
    for name, flow in (("tag_spring_deep", 3.0), ("tag_river_rivers", 60.0)):
        inside = found[name].values[-1] @ volume
        assert (
            0.5 * flow * days * 86400 < inside <= flow * days * 86400 * (1 + 1e-6)
        )  # float32 on disk
    age = found["age"].values[-1]
    assert 0.0 < age.min() < age.max() <= days / 365.25 + 1e-6
    assert found["age"].attrs["units"] == "365.25 d"


def test_a_wrong_name_ends_with_bad_input(folder):
    done = CliRunner().invoke(group, ["project", str(folder.lake), "--follow", "river"])
    assert done.exit_code == 2
    assert "'river' is not known; did you mean rivers?" in done.stderr
    assert "Traceback" not in done.stderr


def test_a_seed_chooses_the_years(folder):
    months = "[" + ", ".join(["23"] * 12) + "]"
    folder.spoil(
        folder.lake,
        f"equilibrium_temperature_degC = {months}",
        f"equilibrium_temperature_degC = {months}\ntemperature_variability_K = 1.0",
    )
    short = ["project", str(folder.lake), "--years", "1", "--step-days", "10", "--json"]
    runs = [
        json.loads(CliRunner().invoke(group, [*short, "--seed", seed]).stdout)
        for seed in ("1", "1", "2")
    ]
    assert runs[0] == runs[1]
    assert runs[0] != runs[2]
