"""What a dossier says of today's plants is what the plants themselves say."""

from dataclasses import replace

import pytest
import synthetic

from strata.plant.plan import Lime
from strata.studies.today import separator_today, streams_today


@pytest.fixture(scope="module")
def lake():
    return synthetic.lake(100)


def test_every_plant_has_its_streams_and_what_enters_leaves(lake):
    plan = synthetic.plan("shallow")
    streams = streams_today(lake, [plan])["shallow, north"]
    named = {row["stream"]: row for row in streams}
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
