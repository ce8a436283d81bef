"""A verdict says kept, breached or uncertain, from when, and by how much."""

from datetime import date

import numpy as np
import pytest
import synthetic
import xarray as xr

from strata import results
from strata.errors import StrataError
from strata.limits import (
    BREACHED,
    COVERAGE,
    KEPT,
    QUANTITIES,
    UNCERTAIN,
    Limit,
    Limits,
    judge,
    series,
)


@pytest.fixture(scope="module")
def lake():
    return synthetic.lake(120)


@pytest.fixture(scope="module")
def alone(lake):
    return results.dataset(synthetic.record(lake, years=12.0, plants=()), lake)


@pytest.fixture(scope="module")
def planned(lake):
    record = synthetic.record(lake, years=12.0, sinking=1.0, drain=0.3)
    return results.dataset(record, lake, synthetic.plan())


def judged(result, limit, tilt=0.0, baseline=None):
    (row,) = judge(result, Limits("test", (limit,), tilt), baseline).rows
    return row


def with_series(result: xr.Dataset, **values) -> xr.Dataset:
    return result.assign({name: ("time", np.asarray(value)) for name, value in values.items()})


def ramp(result, start, end):
    return np.linspace(start, end, result.sizes["time"])


def test_a_limit_is_breached_on_the_day_its_bound_is_first_passed(planned):
    result = with_series(planned, gradient_depth=ramp(planned, 200.0, 212.0))
    row = judged(result, Limit("gradient_sinking_m", 6.0))
    assert row.status == BREACHED
    # 12 m in 144 months: past 6 m after 72 of them
    assert row.first_date == result["time"].values[73].astype("datetime64[D]").astype(date)
    assert row.least_distance == pytest.approx(-6.0)
    assert row.worst_value == pytest.approx(12.0)
    assert row.worst_date == result["time"].values[-1].astype("datetime64[D]").astype(date)


def test_a_limit_that_is_kept_has_no_first_date(planned):
    row = judged(planned, Limit("largest_saturation", 0.9))
    assert (row.status, row.first_date) == (KEPT, None)
    assert row.least_distance == pytest.approx(
        0.9 - float(planned["largest_saturation"].max())
    )


def test_a_margin_that_a_wave_would_take_is_uncertain_from_that_day(planned):
    result = with_series(planned, gradient_depth=ramp(planned, 200.0, 212.0))
    limit = Limit("gradient_sinking_m", 15.0)
    assert judged(result, limit, tilt=2.9).status == KEPT
    row = judged(result, limit, tilt=6.0)
    assert row.status == UNCERTAIN
    assert row.uncertainty == 6.0
    assert row.first_date == result["time"].values[109].astype("datetime64[D]").astype(date)
    assert row.least_distance == pytest.approx(3.0)


def test_cast_error_makes_a_saturation_uncertain(planned):
    worst = float(planned["largest_saturation"].max())
    at = int(planned["largest_saturation"].argmax(...)["time"])
    depth = float(planned["largest_saturation_depth"][at])
    error = float(np.interp(depth, planned["depth"], planned["gas_pressure_error"]))
    inside = Limit("largest_saturation", worst * (1.0 + 0.95 * COVERAGE * error))
    outside = Limit("largest_saturation", worst * (1.0 + 1.05 * COVERAGE * error))
    assert judged(planned, inside).status == UNCERTAIN
    assert judged(planned, outside).status == KEPT


def test_a_wave_raises_saturation_as_lifted_water_has_it(planned):
    quiet, tilted = (
        QUANTITIES["largest_saturation"].uncertainty(
            planned, planned["largest_saturation"].values, tilt
        )
        for tilt in (0.0, 8.0)
    )
    depth = planned["largest_saturation_depth"].values
    pressure = np.interp(depth, planned["depth"], planned["pressure"])
    gas = planned["largest_saturation"].values * pressure
    lifted = gas / (pressure - 9786.0 * 8.0)
    np.testing.assert_allclose(
        tilted - quiet, lifted - planned["largest_saturation"].values, rtol=1e-6
    )


def test_a_wave_takes_its_height_off_lift_and_its_pressure_off_the_margin(planned):
    for quantity, taken in (
        ("least_lift_m", 8.0),
        ("least_pressure_margin_bar", 8.0 * 0.09786),
    ):
        subject = QUANTITIES[quantity]
        values = subject.value(planned, None)
        quiet, tilted = (subject.uncertainty(planned, values, tilt) for tilt in (0.0, 8.0))
        np.testing.assert_allclose(tilted - quiet, taken, rtol=1e-6)


def test_shares_are_against_the_start_or_the_lake_left_alone_as_asked(planned, alone):
    weak = with_series(planned, gradient_strength=ramp(planned, 2.0, 1.0))
    aging = with_series(alone, gradient_strength=ramp(alone, 2.0, 1.6))
    start, said = series(weak, Limit("gradient_strength_share", 0.5, against="start"), aging)
    assert said == "start"
    assert start[-1] == pytest.approx(0.5)
    beside, said = series(
        weak, Limit("gradient_strength_share", 0.5, against="baseline"), aging
    )
    assert said == "baseline"
    assert beside[-1] == pytest.approx(1.0 / 1.6)


def test_methane_lost_is_what_the_plan_adds_to_natural_loss(planned, alone):
    start = float(planned["methane_in_place"][0])
    plan = with_series(planned, methane_lost_to_upper_lake=ramp(planned, 0.0, 0.05 * start))
    nature = with_series(alone, methane_lost_to_upper_lake=ramp(alone, 0.0, 0.02 * start))
    limit = Limit("methane_lost_share", 0.04)
    assert judged(plan, limit, baseline=nature).worst_value == pytest.approx(0.03)
    assert judged(plan, limit).worst_value == pytest.approx(0.05)
    assert judged(plan, limit).status == BREACHED


def test_seasonal_fluxes_are_judged_by_their_year(planned, alone):
    season = 1.0 + 0.8 * np.sin(2 * np.pi * np.arange(planned.sizes["time"]) / 12.0)
    wavy = with_series(planned, phosphate_flux_up=season)
    calm = with_series(alone, phosphate_flux_up=np.ones(alone.sizes["time"]))
    values, _ = series(wavy, Limit("phosphate_flux_share", 1.2), calm)
    np.testing.assert_allclose(values, 1.0, atol=0.07)


def test_a_limit_against_the_lake_left_alone_needs_it(planned):
    limit = Limit("gradient_strength_share", 0.5, against="baseline")
    with pytest.raises(StrataError, match="give its projection as the baseline"):
        judged(planned, limit)


def test_a_baseline_shorter_than_the_plan_is_refused(planned, alone):
    with pytest.raises(StrataError, match="covers less time"):
        judged(
            planned, Limit("schmidt_stability_share", 0.5), baseline=alone.isel(time=slice(9))
        )


def test_water_that_cannot_bubble_keeps_every_limit_on_lift(planned):
    none = with_series(planned, least_lift=np.full(planned.sizes["time"], np.nan))
    assert judged(none, Limit("least_lift_m", 100.0)).status == KEPT


def test_the_sense_of_a_limit_can_be_turned(planned):
    result = with_series(planned, gradient_depth=ramp(planned, 205.0, 195.0))
    assert judged(result, Limit("gradient_depth_m", 200.0, sense="least")).status == BREACHED
    assert judged(result, Limit("gradient_depth_m", 206.0)).status == KEPT


@pytest.mark.parametrize("quantity", list(QUANTITIES))
def test_every_quantity_can_be_judged(quantity, planned, alone):
    rows = [judged(planned, Limit(quantity, 1.0), 5.0, base) for base in (None, alone)]
    for row in rows:
        assert row.status in (KEPT, BREACHED, UNCERTAIN)
        assert row.uncertainty >= 0.0
        assert row.unit == QUANTITIES[quantity].unit


def test_the_verdict_is_as_bad_as_its_worst_limit_and_can_be_written_down(planned, alone):
    limits = Limits(
        "test",
        (Limit("largest_saturation", 0.9), Limit("gradient_sinking_m", 3.0)),
        5.0,
        "note",
    )
    verdict = judge(planned, limits, alone)
    assert verdict.breached
    assert verdict.status == BREACHED
    rows = verdict.as_dicts()
    assert [row["status"] for row in rows] == [KEPT, BREACHED]
    assert str(rows[1]["first_date"]).startswith("2033")  # 1 m a year, 3 m allowed, from 2030
    assert not judge(alone, limits, alone).breached
