"""What a dossier says of today's plants is what the plants themselves say."""

from dataclasses import replace

import pytest
import synthetic

from strata.plant.plan import Lime
from strata.studies.today import accounts_today, separator_today, study_plant


@pytest.fixture(scope="module")
def lake():
    return synthetic.lake(100)


def test_every_plant_has_its_streams_and_what_enters_leaves(lake):
    plan = synthetic.plan("shallow")
    account = accounts_today(lake, [plan])["shallow, north"]
    named = {row["stream"]: row for row in account.streams()}
    feed, back, product = (named[name] for name in ("feed", "return water", "product"))
    taken = feed["flow_m3_s"] * feed["CH4_mol_m3"]
    returned = back["flow_m3_s"] * back["CH4_mol_m3"]
    delivered = product["flow_mol_s"] * product["CH4_share"]
    assert delivered + returned == pytest.approx(taken, rel=1e-9)


def test_the_sweep_is_of_the_plant_that_binds_carbon_dioxide(lake):
    plain = synthetic.plan("plain")
    bound = synthetic.plan("bound")
    limed = replace(bound.plants[0], name="limed", lime=Lime(dose=30.0))
    bound = replace(bound, plants=(bound.plants[0], limed))
    (name,) = separator_today(lake, [plain, bound])
    assert name == "bound, limed"
    (name,) = separator_today(lake, [plain])
    assert name == "plain, north"
    assert separator_today(lake, []) == {}


def test_a_study_holds_the_plant_as_planned_and_a_sweep_of_each_setting(lake):
    done = []
    study = study_plant(lake, synthetic.plan("plain"), progress=done.append)
    assert list(study.sweeps) == ["pressure", "two pressures", "lime", "outlets"]
    assert done == [0.25, 0.5, 0.75, 1.0]
    planned = study.account.plant.stages[0].pressure
    nearest = study.sweeps["pressure"].sel(case="CO2 free").interp(pressure=planned)
    recovery = study.account.operation.recovery
    assert float(nearest["recovery"]) == pytest.approx(recovery, abs=2e-3)
