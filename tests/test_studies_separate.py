"""Sweeps of a plant's settings on an invented lake, and outlets varied."""

from dataclasses import replace
from datetime import date

import numpy as np
import pytest

import strata
from strata.errors import OutOfRangeError
from strata.plant.plan import Lime, Plan, Plant, Return, Stage, Wash
from strata.studies.outlet import VARIATIONS, vary_outlets
from strata.studies.separate import (
    AIMS,
    OUTCOMES,
    separate,
    separate_by_lime,
    separate_by_wash,
    separate_in_two,
)
from tests import synthetic

LAKE = synthetic.lake(100)
PLANT = Plant(
    "north", 345.0, 8.0, (Stage(2e5, 0.95), Stage(0.8e5, 0.95)),
    Return(190.0, 40, 0.3), date(2031, 1, 1),
)  # fmt: skip
PLAN = Plan("one", (PLANT, replace(PLANT, name="south", intake_depth=300.0)))


@pytest.fixture(scope="module")
def sweep():
    return separate(LAKE, PLAN, pressures=np.geomspace(0.06e5, 7e5, 25))


def test_a_sweep_holds_every_outcome_for_both_cases(sweep):
    assert set(OUTCOMES) <= set(sweep.data_vars)
    assert list(sweep["case"].values) == ["CO2 free", "CO2 bound"]
    for name, (unit, _) in OUTCOMES.items():
        assert sweep[name].dims == ("case", "pressure")
        assert sweep[name].attrs["units"] == unit
        assert np.isfinite(sweep[name]).all()


def test_binding_lowers_recovery_and_raises_purity_at_every_pressure(sweep):
    free, bound = sweep.sel(case="CO2 free"), sweep.sel(case="CO2 bound")
    assert (bound["recovery"] < free["recovery"]).all()
    assert (bound["purity"] > free["purity"]).all()
    assert (np.diff(free["recovery"]) < 0).all()
    assert (np.diff(free["purity"]) > 0).all()


def test_the_best_pressure_for_net_energy_lies_inside_the_range_and_says_why(sweep):
    assert list(sweep["aim"].values) == list(AIMS)
    for case in ("CO2 free", "CO2 bound"):
        best = float(sweep["best_pressure"].sel(case=case, aim="net energy"))
        assert sweep["pressure"].values[0] < best < sweep["pressure"].values[-1]
        why = str(sweep["why"].sel(case=case, aim="net energy").values)
        assert "vacuum pumps cost more below" in why
        assert float(sweep["best_pressure"].sel(case=case, aim="recovery")) == 0.06e5
    value = sweep["best_pressure"].sel(aim="heating value")
    assert float(value.sel(case="CO2 free")) == 7e5
    net = sweep["best_pressure"].sel(aim="net energy")
    assert float(net.sel(case="CO2 bound")) < float(net.sel(case="CO2 free"))


def test_every_best_pressure_is_that_of_most_of_its_aim_with_a_reason(sweep):
    for aim, name in AIMS.items():
        for case in ("CO2 free", "CO2 bound"):
            best = sweep["best_pressure"].sel(case=case, aim=aim)
            values = sweep[name].sel(case=case)
            assert float(values.sel(pressure=best)) == float(values.max())
            assert len(str(sweep["why"].sel(case=case, aim=aim).values)) > 40


def test_energies_add_up(sweep):
    used = sum(sweep[f"{part}_energy"] for part in ("pump", "vacuum", "compression"))
    np.testing.assert_allclose(
        sweep["net_energy"], sweep["electric_energy"] - used, rtol=1e-9, atol=1.0
    )


def test_pressures_reach_from_a_twentieth_of_a_bar_to_where_gas_comes_out():
    pressures = separate(LAKE, PLAN, "south")["pressure"].values
    assert pressures[0] == pytest.approx(0.05e5)
    assert LAKE.site.air_pressure in pressures  # where vacuum ends and pumping begins
    assert (np.diff(pressures) > 0).all()
    assert 2e5 < pressures[-1] <= 10e5


def test_a_second_stage_recovers_more_than_the_first_alone():
    pressures = [0.3e5, 1e5, 3e5]
    two = separate_in_two(LAKE, PLAN, pressures=pressures)
    assert np.isnan(two["recovery"].sel(first_pressure=1e5, second_pressure=3e5))
    one = separate(LAKE, PLAN, pressures=[3e5])["recovery"].sel(case="CO2 free").item()
    assert two["recovery"].sel(first_pressure=3e5, second_pressure=1e5).item() > one


def test_wash_water_makes_the_gas_purer_and_less():
    washed = replace(
        PLANT, stages=(Stage(2e5, 0.95, gas_to="wash"),), wash=Wash(8e5, 3.0, 60.0, 4)
    )
    found = separate_by_wash(LAKE, Plan("washed", (washed,)), ratios=[0.2, 0.4, 0.6])
    assert (np.diff(found["recovery"]) < 0).all()
    # at first it takes CO2, then the nitrogen that it brings makes the gas poorer again
    assert found["purity"][1] > found["purity"][0]
    with pytest.raises(OutOfRangeError, match="plant north has no wash"):
        separate_by_wash(LAKE, PLAN)


def test_more_lime_gives_purer_gas_and_a_higher_ph_of_the_return():
    found = separate_by_lime(LAKE, PLAN)
    assert (np.diff(found["purity"]) > 0).all()
    assert (np.diff(found["return_ph"]) > 0).all()
    assert found["lime"].values == pytest.approx(found["dose"].values)
    planned = replace(PLANT, lime=Lime(target_co2=1.0))
    assert np.isfinite(separate_by_lime(LAKE, Plan("p", (planned,)))["purity"]).all()


def test_an_unknown_plant_is_refused_with_the_nearest_name():
    with pytest.raises(OutOfRangeError, match="did you mean north"):
        separate(LAKE, PLAN, "nord")


def test_outlets_are_varied_by_a_kelvin_and_by_their_ports():
    # wide ports, so that buoyancy and not the speed of the jets decides
    wide = replace(PLANT, return_water=Return(190.0, 100, 1.5))
    found = vary_outlets(LAKE, Plan("wide", (wide,)))
    assert list(found["variation"].values) == list(VARIATIONS)
    excess = found["density_excess"].isel(outlet=0)
    # one kelvin is 0.26 kg/m3 near 25 degC by the thermal expansion of water
    step = float(excess.sel(variation="1 K cooler") - excess.sel(variation="as planned"))
    assert step == pytest.approx(0.26, abs=0.02)
    dilution = found["dilution"].isel(outlet=0)
    assert float(dilution.sel(variation="four times the ports")) > float(
        dilution.sel(variation="a quarter of the ports")
    )


@pytest.mark.parametrize("name", ["surface-return", "washed-return", "staged-lime"])
def test_the_best_pressure_for_net_energy_lies_inside_the_range_for_the_demos_plans(name):
    lake = strata.load_lake(strata.demo_files() / "lake.toml")
    plan = strata.load_plan(strata.demo_files() / f"{name}.toml", lake)
    for plant in plan.plants:
        sweep = separate(lake, plan, plant.name)
        best = sweep["best_pressure"].sel(aim="net energy")
        free, bound = (float(best.sel(case=case)) for case in ("CO2 free", "CO2 bound"))
        assert sweep["pressure"].values[1] < bound < free < sweep["pressure"].values[-2]
