"""The wash tower: its dilute limit, reference columns, conservation."""

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import assume, settings
from hypothesis import given as drawn
from hypothesis import strategies as st

from strata.errors import ComputationError
from strata.plant.plan import Wash
from strata.plant.streams import GasStream
from strata.plant.wash import wash_gas
from tests.plant_cases import SHALLOW, SITE

RAW = GasStream(
    {"CH4": 170.0, "CO2": 300.0, "N2": 5.0, "Ar": 0.1, "H2S": 0.5, "O2": 0.0}, 25.0, 8e5
)


@settings(max_examples=60, deadline=None)
@drawn(
    methane=st.floats(50.0, 300.0),
    carbon=st.floats(0.0, 800.0),
    flow=st.floats(0.2, 8.0),
    pressure=st.floats(2e5, 10e5),
    stages=st.integers(1, 12),
    efficiency=st.floats(0.3, 1.0),
    alkalinity=st.floats(0.0, 40.0),
    excess=st.floats(0.0, 3.0),
)
def test_gas_and_water_in_equal_gas_and_water_out(
    methane, carbon, flow, pressure, stages, efficiency, alkalinity, excess
):
    water = replace(
        SHALLOW,
        flow=flow,
        dissolved={**SHALLOW.dissolved, "DIC": alkalinity + excess, "alkalinity": alkalinity},
    )
    gas = replace(RAW, flows={**RAW.flows, "CH4": methane, "CO2": carbon})
    try:
        done = wash_gas(Wash(pressure, 1.0, 0.0, stages, efficiency), gas, water, SITE)
    except ComputationError:
        assume(False)  # a lot of water for little gas takes up all of it; refused elsewhere
    for name in ("CH4", "DIC", "N2", "H2S", "O2"):
        species = "CO2" if name == "DIC" else name
        entering = gas.of(species) + water.flow * water.of(name)
        leaving = done.gas.of(species) + done.water.flow * done.water.of(name)
        assert leaving == pytest.approx(entering, rel=1e-12, abs=1e-12)
        assert done.gas.of(species) >= -1e-10 * gas.of(species)  # the tower's own tolerance
        assert done.water.of(name) >= -1e-9
    assert done.water.of("alkalinity") == alkalinity


def test_the_stage_solution_satisfies_equilibrium_between_the_gas_and_water_of_one_stage():
    # Independent of the tower's own solution: one stage is a flash of gas and water together.
    from strata.gas import flash

    water = replace(SHALLOW, flow=3.0, salinity=1.2)
    done = wash_gas(Wash(8e5, 1.0, 0.0, 1), RAW, water, SITE)
    both = {name: water.of(name) + RAW.of(name) / 3.0 for name in ("CH4", "N2", "O2")}
    both["DIC"] = water.of("DIC") + RAW.of("CO2") / 3.0
    stage = flash(
        water.temperature, water.salinity, both, 8e5, alkalinity=water.of("alkalinity")
    )
    for name in ("CH4", "N2"):
        # 0.5 %: argon and sulphide are left out of the flash here
        assert done.gas.of(name) / 3.0 == pytest.approx(float(stage.released[name]), rel=5e-3)
    assert done.gas.of("CO2") / 3.0 == pytest.approx(float(stage.released["CO2"]), rel=1e-2)


def test_more_stages_take_more_co2_and_sulphide_than_methane():
    runs = [wash_gas(Wash(8e5, 1.0, 0.0, n), RAW, SHALLOW, SITE).gas for n in (1, 2, 4, 8)]
    for gas in ("CO2", "H2S"):
        left = np.array([run.of(gas) / RAW.of(gas) for run in runs])
        assert np.all(np.diff(left) < 0.0)
    # 6 m3/s at 8 bar hold at most 8e5 / 71e3 * 6 = 68 of the 170 mol/s of methane
    assert all(run.of("CH4") / RAW.of("CH4") > 1 - 68 / 170 for run in runs)
    assert runs[2].of("H2S") / RAW.of("H2S") < 0.05


def test_two_towers_with_half_the_water_each_are_two_washes():
    one = Wash(8e5, 1.0, 0.0, 3, towers=2)
    both = wash_gas(one, RAW, SHALLOW, SITE)
    half = replace(SHALLOW, flow=3.0)
    first = wash_gas(Wash(8e5, 1.0, 0.0, 3), RAW, half, SITE)
    second = wash_gas(Wash(8e5, 1.0, 0.0, 3), first.gas, half, SITE)
    assert both.gas.of("CO2") == pytest.approx(second.gas.of("CO2"), rel=1e-12)
    assert both.water.of("CH4") == pytest.approx(
        0.5 * (first.water.of("CH4") + second.water.of("CH4")), rel=1e-12
    )


@pytest.mark.parametrize("stages", [2, 6, 20])
def test_a_tower_is_solved_through_its_pinch(stages):
    # where the water just takes the CO2 (here 3.5 m3/s) all stages hang together; up to there
    # more water leaves less gas, beyond it takes little more than methane
    raw = GasStream({"CH4": 200.0, "CO2": 750.0, "N2": 6.0, "H2S": 0.5}, 24.0, 8e5)
    flows = np.linspace(0.5, 8.0, 31)
    left = [
        wash_gas(Wash(8e5, 1.0, 60.0, stages), raw, replace(SHALLOW, flow=flow), SITE).gas
        for flow in flows
    ]
    assert (np.diff([gas.dry for gas in left]) < 0).all()
    assert (np.diff([gas.of("CH4") for gas in left]) < 0).all()


def test_water_that_takes_up_all_the_gas_is_refused_in_words():
    with pytest.raises(ComputationError, match="take up all"):
        wash_gas(Wash(10e5, 1.0, 0.0, 4), replace(RAW, flows={"CO2": 1.0}), SHALLOW, SITE)
