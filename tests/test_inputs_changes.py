"""Values are changed by name and checked anew; the hash tells inputs apart by what they mean."""

import dataclasses
import os
import pickle

import numpy as np
import pytest

from strata.errors import InputError, StrataError
from strata.inputs import (
    canonical_hash,
    check,
    demo_files,
    load_all,
    load_lake,
    load_limits,
    load_plan,
    with_values,
)


def test_a_value_is_changed_in_the_unit_of_its_file(folder, sound_lake):
    plan = load_plan(folder.plan)
    changed = with_values(
        plan, {"plant.north.return.depth_m": 210, "plant.north.stage.1.pressure_bar": 3}
    )
    assert changed.plants[0].return_water.depth == 210
    assert changed.plants[0].stages[0].pressure == pytest.approx(3e5)
    assert plan.plants[0].return_water.depth == 275  # itself it stays as it is
    lake = with_values(
        sound_lake, {"mixing.coefficient_m2_s2": 4e-9, "spring.deep.flow_m3_s": 5}
    )
    assert lake.mixing.coefficient == pytest.approx(4e-9)
    assert lake.springs[0].flow == 5
    np.testing.assert_array_equal(
        lake.cast.profiles["CH4"].value, sound_lake.cast.profiles["CH4"].value
    )


def test_changes_add_up(folder):
    once = with_values(load_plan(folder.plan), {"plant.north.flow_m3_s": 8})
    twice = with_values(once, {"plant.1.return.depth_m": 200})
    assert (twice.plants[0].flow, twice.plants[0].return_water.depth) == (8, 200)


def test_a_value_that_the_file_leaves_to_its_default_can_be_set(folder):
    changed = with_values(load_plan(folder.plan), {"plant.north.ramp_days": 30.0})
    assert changed.plants[0].ramp_days == 30


def test_limits_can_be_changed_too(folder):
    changed = with_values(load_limits(folder.limits), {"limit.1.at_most": 0.5})
    assert changed.limits[0].bound == 0.5


def test_no_file_is_needed_any_more(folder):
    lake = load_lake(folder.lake)
    for file in (folder.lake, folder.ctd, folder.gas):
        os.unlink(file)
    again = with_values(pickle.loads(pickle.dumps(lake)), {"site.latitude_deg": -2.0})
    assert again.site.latitude == -2


@pytest.mark.parametrize(
    ("path", "value", "message"),
    [
        (
            "plant.south.flow_m3_s",
            5,
            "plan.toml: plant.south.flow_m3_s is not there; the nearest known is north",
        ),
        (
            "plant.north.reurn.depth_m",
            5,
            "plan.toml: plant.north.reurn.depth_m is not there; the nearest known is return",
        ),
        (
            "plant.north.flow",
            5,
            "plan.toml: plant.north.flow has no unit; write flow_m3_s",
        ),
        (
            "plant.north.flow_m3_s",
            -5,
            "plan.toml: plant.north.flow_m3_s is -5; more than 0 and up to 100000 m3/s is allowed",
        ),
        (
            "plant.2.flow_m3_s",
            5,
            "plan.toml: plant.2.flow_m3_s is not there; known are north",
        ),
    ],
)
def test_a_path_that_leads_nowhere_or_a_value_out_of_range_is_refused(
    folder, path, value, message
):
    with pytest.raises(InputError) as caught:
        with_values(load_plan(folder.plan), {path: value})
    assert str(caught.value) == message


def test_what_was_changed_by_other_means_is_not_lost_in_silence(folder):
    plan = load_plan(folder.plan)
    by_hand = dataclasses.replace(plan, name="other")
    with pytest.raises(StrataError, match=r"no longer agrees with its file"):
        with_values(by_hand, {"plant.north.flow_m3_s": 5})
    without_file = dataclasses.replace(plan, texts={})
    with pytest.raises(StrataError, match=r"was not loaded from a file"):
        with_values(without_file, {"plant.north.flow_m3_s": 5})


def test_the_hash_tells_meaning_apart_and_not_wording(folder):
    before = canonical_hash(load_plan(folder.plan), years=50)
    folder.spoil(folder.plan, "flow_m3_s = 6.0", "flow_m3_s = 6  # cubic metres")
    assert canonical_hash(load_plan(folder.plan), years=50) == before
    assert canonical_hash(load_plan(folder.plan), years=51) != before
    folder.spoil(folder.plan, "flow_m3_s = 6 ", "flow_m3_s = 6.000000000000001 ")
    assert canonical_hash(load_plan(folder.plan), years=50) != before


def test_the_hash_of_a_lake_covers_its_casts(folder, sound_lake):
    assert canonical_hash(load_lake(folder.lake)) == canonical_hash(sound_lake)
    cells = folder.gas.read_text().splitlines()[3].split(",")
    folder.rewrite(folder.gas, 4, ",".join([cells[0], "0.0123", *cells[2:]]))
    assert canonical_hash(load_lake(folder.lake)) != canonical_hash(sound_lake)


def test_faults_of_all_files_come_at_once(folder):
    folder.spoil(folder.lake, "least_m2_s = 1e-9", "least = 1e-9")
    folder.spoil(folder.plan, "flow_m3_s = 6.0", "flow_m3_s = -6.0")
    folder.spoil(folder.limits, "at_most = 0.9", "at_mots = 0.9")
    expected = [
        "lake.toml: mixing.least has no unit; write least_m2_s",
        "plan.toml: plant.north.flow_m3_s is -6; more than 0 and up to 100000 m3/s is allowed",
        "limits.toml: limit.1.at_mots is not known; the nearest known is at_most",
    ]
    with pytest.raises(InputError) as caught:
        load_all(folder.lake, [folder.plan], folder.limits)
    assert str(caught.value).splitlines() == expected
    with pytest.raises(InputError) as caught:
        check([folder.lake, folder.plan, folder.limits])
    assert str(caught.value).splitlines() == expected


def test_plans_of_a_comparison_must_bear_different_names(folder):
    other = folder.path / "other.toml"
    other.write_text(folder.plan.read_text())
    with pytest.raises(InputError) as caught:
        load_all(folder.lake, [folder.plan, other])
    assert str(caught.value).splitlines() == [
        f'{name}: name is "test plan", which another plan bears; names must differ'
        for name in ("plan.toml", "other.toml")
    ]


def test_a_file_of_no_kind_is_refused(folder):
    strange = folder.path / "strange.toml"
    strange.write_text("name = 1\n")
    with pytest.raises(InputError) as caught:
        check([strange])
    assert str(caught.value) == (
        "strange.toml is no lake file ([site]), plan file ([[plant]]) or limits file ([[limit]])"
    )


def test_the_demo_files_are_found():
    assert (demo_files() / "limits.toml").is_file()


def test_an_error_keeps_its_faults_between_processes(folder):
    folder.spoil(folder.plan, "flow_m3_s = 6.0", "flow = 6.0")
    with pytest.raises(InputError) as caught:
        load_plan(folder.plan)
    again = pickle.loads(pickle.dumps(caught.value))
    assert again.faults == caught.value.faults
    assert str(again) == str(caught.value)
