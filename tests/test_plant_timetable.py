"""When plants run, with which settings; and where they draw from."""

from datetime import date, timedelta
from itertools import pairwise

import numpy as np
import pytest

from strata.errors import StrataError
from strata.plant.intake import plant_weights, withdrawal_weights
from strata.plant.plan import Change, Intake, Lime, Outage, Plant, Return, Stage, Wash
from strata.plant.timetable import (
    event_dates,
    load_factor,
    plant_on,
    runs_on_feed,
    with_value,
)

START = date(2030, 3, 1)


def plant(**settings):
    return Plant(
        "p",
        345.0,
        10.0,
        (Stage(2e5), Stage(1e5, gas_to="wash")),
        Return(190.0),
        START,
        **settings,
    )


def test_a_plant_runs_from_its_start_to_its_stop():
    p = plant(stop=date(2040, 1, 1), availability=0.9)
    assert load_factor(p, START - timedelta(1)) == 0.0
    assert load_factor(p, START) == 0.9
    assert load_factor(p, date(2039, 12, 31)) == 0.9
    assert load_factor(p, date(2040, 1, 1)) == 0.0


def test_the_load_held_between_events_of_a_ramp_is_that_of_an_even_rise():
    p = plant(ramp_days=360.0)
    days = [START, *event_dates(p, START, START + timedelta(720))]
    days.append(START + timedelta(720))
    taken = sum(load_factor(p, a) * (b - a).days for a, b in pairwise(days))
    # an even rise over 360 days, then full: 180 + 360 days
    assert taken == pytest.approx(540.0, rel=0.01)
    assert load_factor(p, START + timedelta(361)) == 1.0


def test_seasons_multiply_the_availability():
    months = (0.5,) * 6 + (1.0,) * 6
    p = plant(availability=0.8, monthly_availability=months)
    assert load_factor(p, date(2031, 3, 10)) == pytest.approx(0.4)
    assert load_factor(p, date(2031, 9, 10)) == pytest.approx(0.8)
    assert date(2031, 7, 1) in event_dates(p, START, date(2032, 1, 1))


def test_changes_and_outages_turn_one_plant_into_another():
    p = plant(
        lime=Lime(dose=10.0),
        wash=Wash(8e5, 3.0, 60.0),
        changes=(
            Change(date(2035, 1, 1), {"intake_depth": 320.0, "stages.1.pressure": 3e5}),
            Change(date(2033, 1, 1), {"return_water.depth": 210.0, "flow": 12.0}),
        ),
        outages=(
            Outage("wash", date(2031, 1, 1), date(2031, 2, 1)),
            Outage("lime", date(2031, 1, 15), date(2031, 2, 1)),
            Outage("stage 1", date(2036, 1, 1), date(2036, 2, 1)),
            Outage("plant", date(2037, 1, 1), date(2037, 2, 1)),
        ),
    )
    assert plant_on(p, date(2030, 6, 1)) == p
    without = plant_on(p, date(2031, 1, 20))
    assert without.wash is None
    assert without.lime is None
    assert [stage.gas_to for stage in without.stages] == ["product", "product"]
    later = plant_on(p, date(2034, 1, 1))
    assert (later.flow, later.return_water.depth, later.intake_depth) == (12.0, 210.0, 345.0)
    last = plant_on(p, date(2036, 1, 10))
    assert last.intake_depth == 320.0
    assert [stage.pressure for stage in last.stages] == [1e5]  # stage 1, changed, is out
    assert load_factor(p, date(2037, 1, 10)) == 0.0
    events = event_dates(p, START, date(2050, 1, 1))
    assert {date(2031, 1, 15), date(2035, 1, 1), date(2037, 2, 1)} <= set(events)
    assert START not in events


def test_a_setting_that_is_not_there_is_refused_in_words():
    with pytest.raises(StrataError, match=r"no setting 'stages\.3\.pressure'"):
        with_value(plant(), "stages.3.pressure", 1e5)
    with pytest.raises(StrataError, match="no setting 'depth'"):
        with_value(plant(), "depth", 1.0)


def test_a_plant_stops_below_its_least_methane():
    p = plant(least_feed_methane=5.0)
    assert runs_on_feed(p, 5.0)
    assert not runs_on_feed(p, 4.9)


FACES = np.linspace(0.0, 400.0, 401)
EVEN = np.full(399, 1e-4)


def test_an_intake_draws_evenly_above_and_below_in_even_stratification():
    weights = withdrawal_weights(FACES, EVEN, 300.0, 8.0)
    assert weights.sum() == pytest.approx(1.0, abs=1e-12)
    middle = 0.5 * (FACES[1:] + FACES[:-1])
    assert float(weights @ middle) == pytest.approx(300.0, abs=1e-6)
    # (Q / N)^(1/3) = 9.28 m on each side (Imberger 1980), plus a part of a layer
    assert np.count_nonzero(weights) == pytest.approx(2 * 9.28, abs=1.5)


def test_several_intakes_share_the_flow():
    p = plant(further_intakes=(Intake(280.0, 0.25),))
    assert [(i.depth, i.share) for i in p.intakes] == [(345.0, 0.75), (280.0, 0.25)]
    weights = plant_weights(FACES, EVEN, p.intakes, p.flow)
    assert weights.sum() == pytest.approx(1.0, abs=1e-12)
    middle = 0.5 * (FACES[1:] + FACES[:-1])
    assert weights[middle < 310].sum() == pytest.approx(0.25, abs=1e-9)


def test_an_intake_at_the_bottom_draws_from_above_only():
    weights = withdrawal_weights(FACES, EVEN, 400.0, 8.0)
    assert weights.sum() == pytest.approx(1.0, abs=1e-12)
    assert weights[-1] == weights.max()
