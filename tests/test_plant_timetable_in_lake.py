"""Whole runs with a timetable: ramps, seasons, outages, dated changes, cut-off, retirement."""

from datetime import date

import numpy as np
import pytest

import strata
from strata.plant.plan import Change, Outage, Plan, Plant, Return, Stage, Wash

MONTHS = (1.0, 1.0, 1.0, 1.0, 1.0, 0.9, 0.8, 0.8, 0.9, 1.0, 1.0, 1.0)
PLANT = Plant(
    "north",
    345.0,
    6.0,
    (Stage(3e5, gas_to="wash"), Stage(1e5)),
    Return(275.0, 100, 0.2),
    date(2027, 3, 1),
    stop=date(2030, 1, 1),
    ramp_days=180.0,
    availability=0.9,
    monthly_availability=MONTHS,
    wash=Wash(6e5, 2.0, 60.0),
    outages=(
        Outage("wash", date(2028, 2, 1), date(2028, 5, 1)),
        Outage("plant", date(2028, 10, 1), date(2028, 12, 1)),
        Outage("stage 2", date(2029, 2, 1), date(2029, 4, 1)),
    ),
    changes=(
        Change(date(2029, 6, 1), {"flow": 8.0, "stages.2.pressure": 0.5e5}),
        Change(date(2029, 9, 1), {"return_water.depth": 190.0}),
    ),
)
#: A small plant that takes its own water: methane at its intake falls until it stops.
DRY = Plant(
    "dry", 384.0, 1.5, (Stage(1e5),), Return(380.0, 20, 0.3), date(2027, 1, 1),
    least_feed_methane=15.9,
)  # fmt: skip


@pytest.fixture(scope="module")
def run(sound_lake):
    return strata.project(sound_lake, Plan("busy", (PLANT, DRY)), years=4, step_days=5)


def series(run, name, plant="north"):
    months = [str(time)[:7] for time in run["time"].values]
    values = run[f"plant_{name}"].sel(plant=plant).values
    return {month: float(value) for month, value in zip(months, values, strict=True)}


def test_the_flow_is_that_of_ramp_season_availability_and_outage(run):
    flow = series(run, "flow")
    # a record shows what held up to its date: the first of a month the month before
    assert flow["2027-03"] == 0.0  # starts that day
    ramp = [flow[f"2027-{month:02d}"] for month in range(4, 9)]
    assert (np.diff(ramp) > 0.0).all()
    day = (date(2027, 6, 1) - PLANT.start).days
    # held for a twelfth of the ramp at a time, at the mean of that part
    assert flow["2027-06"] == pytest.approx(6.0 * 0.9 * day / 180, abs=6.0 * 0.9 / 24)
    assert flow["2028-01"] == pytest.approx(6.0 * 0.9)
    assert flow["2028-07"] == pytest.approx(6.0 * 0.9 * 0.9)  # June
    assert flow["2028-08"] == pytest.approx(6.0 * 0.9 * 0.8)
    assert flow["2028-11"] == flow["2028-12"] == 0.0  # the whole plant is out
    assert flow["2029-01"] == pytest.approx(6.0 * 0.9)


def test_a_plant_is_retired_on_its_day(run):
    flow = series(run, "flow")
    assert flow["2030-01"] == pytest.approx(8.0 * 0.9)
    assert max(value for month, value in flow.items() if month > "2030-01") == 0.0


def test_without_its_wash_a_plant_burns_raw_gas_and_loses_no_methane_to_the_water(run):
    purity, recovery = series(run, "product_purity"), series(run, "recovery")
    assert purity["2028-03"] < 0.8 * purity["2028-02"]
    assert recovery["2028-03"] > 1.1 * recovery["2028-02"]
    assert purity["2028-06"] == pytest.approx(purity["2028-02"], rel=0.01)


def test_without_its_second_stage_a_plant_recovers_less(run):
    recovery = series(run, "recovery")
    assert recovery["2029-03"] < recovery["2029-02"] - 0.05
    assert recovery["2029-05"] == pytest.approx(recovery["2029-02"], rel=0.01)


def test_dated_changes_take_hold_on_their_day_and_stay(run):
    flow, recovery, depth = (series(run, name) for name in ("flow", "recovery", "trap_depth"))
    assert flow["2029-07"] == pytest.approx(8.0 * 0.9 * 0.9)  # June, at the new flow
    assert flow["2029-12"] == pytest.approx(8.0 * 0.9)
    assert recovery["2029-07"] > recovery["2029-06"] + 0.02  # deeper vacuum in stage 2
    assert depth["2029-09"] > 260.0
    assert 190.0 <= depth["2029-10"] < 220.0


def test_a_plant_whose_feed_has_too_little_methane_stops(run):
    flow, feed = series(run, "flow", "dry"), series(run, "feed_CH4", "dry")
    assert flow["2027-06"] == pytest.approx(1.5)
    stopped = [month for month, value in flow.items() if value == 0.0]
    assert stopped
    # the feed is looked at when it has changed by half a per cent, or after 30 days
    for month, value in flow.items():
        if value > 0.0:
            assert feed[month] > 0.995 * DRY.least_feed_methane, month


def test_what_was_delivered_is_what_the_plants_made_day_by_day(run):
    days = np.diff(run["time"].values) / np.timedelta64(1, "s")
    made = run["plant_product_CH4"].sum("plant").values[1:]
    # a month's record stands for the month: seasons and changes fall on its first day
    assert float(run["methane_recovered"][-1]) == pytest.approx(float(made @ days), rel=0.02)
    assert float(np.abs(run["ledger_error"]).max()) < 1e-10


def test_water_that_ends_in_the_surface_layer_is_a_finding_told_once(sound_lake):
    shallow = Plant("shallow", 60.0, 2.0, (Stage(1e5),), Return(3.0), date(2027, 1, 1))
    deep = Plant("deep", 345.0, 2.0, (Stage(1e5),), Return(275.0), date(2027, 1, 1))
    told = strata.project(sound_lake, Plan("two", (shallow, deep)), years=0.5, step_days=5)
    lines = [line for line in told.attrs["warnings"].splitlines() if "surface layer" in line]
    assert len(lines) == 1
    assert lines[0].startswith("shallow, from 2027-")
    assert "of the water of outlet 1" in lines[0]
