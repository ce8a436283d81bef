"""A lake is brought to the state its supply holds, in fewer years than it needs itself."""

import json
from dataclasses import replace

import numpy as np
import pytest
from click.testing import CliRunner
from column_checks import AREA, YEAR, plain_lake

from strata.caution import CAUTION
from strata.cli.group import group
from strata.column.tracers import TRACERS
from strata.lake.site import Cast, Profile, Spring
from strata.studies.steady import JUDGED, steady


@pytest.fixture(scope="module")
def slow():
    """Return a mixed lake that one spring of salty water fills anew in 600 years."""
    flow = 100.0 * AREA / (600.0 * YEAR)
    water = {"DIC": 3.0, "alkalinity": 3.0, "phosphate": 0.2, "calcium": 1.0}
    lake = plain_lake(
        np.linspace(0, 100, 21),
        diffusivity=1e-3,
        springs=(Spring("salt", 95.0, flow, 20.0, 3.0, water, spread=(90.0, 100.0)),),
    )
    depth = np.array([0.0, 50.0, 100.0])
    cast = {
        "temperature": np.full(3, 20.0),
        "salinity": np.array([1.0, 1.0, 1.01]),
        "DIC": np.ones(3),
        "alkalinity": np.ones(3),
        "CH4": np.zeros(3),
    }
    profiles = {name: Profile(depth, value, 0.01 * value) for name, value in cast.items()}
    return replace(lake, cast=Cast(profiles))


def test_a_slow_lake_is_sent_ahead_and_ends_where_its_spring_leads(slow):
    shares = []
    found = steady(slow, most_years=1500, tolerance=0.002, progress=shares.append)
    values = found.values
    # everything becomes water of the spring; a plain run of these years would lack a tenth
    assert values[:, TRACERS.index("salinity")] == pytest.approx(3.0, rel=0.01)
    assert values[:, TRACERS.index("phosphate")] == pytest.approx(0.2, rel=0.01)
    assert values[:, TRACERS.index("alkalinity")] == pytest.approx(3.0, rel=0.01)
    print(f"{found.years} years stand for {found.stands_for:.0f}")
    assert found.stands_for > 2 * found.years
    assert found.years <= 1500
    assert shares == sorted(shares)
    difference = found.layers["difference"].sel(tracer="salinity")
    assert difference.values == pytest.approx(2.0, rel=0.02)


def test_a_lake_at_rest_stays_where_it_is(slow):
    still = replace(slow, springs=())
    found = steady(still, most_years=400)
    salinity = found.layers.sel(tracer="salinity")
    assert np.abs(salinity["difference"].values).max() < 0.01  # its casts only level out
    assert found.drift < 0.01


def test_stages_tell_how_the_way_went(slow):
    found = steady(slow, most_years=400)
    years = [stage.years for stage in found.stages]
    assert years == sorted(years)
    assert found.stages[-1].name == "all layers, steps of a day"
    assert np.isnan(found.stages[0].drift)
    assert all(stage.stands_for >= stage.years for stage in found.stages)
    assert set(JUDGED) < set(TRACERS)


def test_the_command_tells_every_layer(folder):
    out = folder.path / "steady.csv"
    arguments = ["steady", str(folder.lake), "--most-years", "200", "-o", str(out)]
    done = CliRunner().invoke(group, arguments)
    assert done.exit_code == 0, done.stderr
    assert "steady state less casts" in done.stdout
    assert CAUTION in done.stdout
    lines = [line for line in out.read_text().splitlines() if not line.startswith("#")]
    assert len(lines) == 1 + 58  # layers of the test lake
    assert lines[0].startswith("depth_m,temperature_cast_degC,temperature_steady_degC")
    again = CliRunner().invoke(group, [*arguments[:-2], "--json"])
    numbers = json.loads(again.stdout)
    assert len(numbers["layers"]["depth"]) == 58
    assert [row["tracer"] for row in numbers["tracers"]] == list(TRACERS)
    assert numbers["years"] <= 200


def test_too_few_years_are_bad_input(folder):
    done = CliRunner().invoke(group, ["steady", str(folder.lake), "--most-years", "10"])
    assert done.exit_code == 2
    assert "10 is not in the range" in done.stderr
