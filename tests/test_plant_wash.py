"""The wash tower: its dilute limit, reference columns, conservation."""

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import assume, settings
from hypothesis import given as drawn
from hypothesis import strategies as st

from strata.errors import ComputationError
from strata.gas import henry_constant
from strata.plant.plan import Wash
from strata.plant.streams import GasStream, WaterStream
from strata.plant.wash import wash_gas
from tests.plant_cases import ENGINE_SITE, PLAIN_SITE, SHALLOW, SITE, table

# Kremser 1930: share absorbed (A^(N+1) - A) / (A^(N+1) - 1), N / (N + 1) where A = 1; the
# three values are printed in textbooks.
KREMSER = {(1.4, 5): 0.9387, (2.0, 4): 0.96774, (1.0, 6): 6 / 7}


def kremser(factor, stages):
    if factor == 1.0:
        return stages / (stages + 1)
    return (factor ** (stages + 1) - factor) / (factor ** (stages + 1) - 1)


@pytest.mark.parametrize(("factor", "stages"), KREMSER)
def test_a_trace_of_co2_in_methane_follows_kremser(factor, stages):
    assert kremser(factor, stages) == pytest.approx(KREMSER[factor, stages], abs=5e-5)
    pressure, temperature, trace = 5e5, 23.0, 1e-9
    # water saturated with methane takes none, so the gas flow does not change
    methane = pressure / float(henry_constant("CH4", temperature))
    constant = float(henry_constant("CO2", temperature)) / pressure  # y / c
    gas = GasStream({"CH4": 10.0, "CO2": trace}, temperature, pressure)
    water = WaterStream(factor * constant * 10.0, temperature, 0.0, {"CH4": methane})
    out = wash_gas(Wash(pressure, 1.0, 0.0, stages), gas, water, PLAIN_SITE).gas
    assert 1.0 - out.of("CO2") / trace == pytest.approx(kremser(factor, stages), abs=1e-6)


def test_a_stage_of_some_efficiency_follows_the_same_balance():
    # One stage, efficiency E of Murphree: y1 = (1 - E) y0 + E K c, L c = G (y0 - y1), so that
    # y1 / y0 = (1 - E + E / A) / (1 + E / A).
    pressure, temperature, efficiency, factor = 5e5, 23.0, 0.6, 1.4
    methane = pressure / float(henry_constant("CH4", temperature))
    constant = float(henry_constant("CO2", temperature)) / pressure
    gas = GasStream({"CH4": 10.0, "CO2": 1e-9}, temperature, pressure)
    water = WaterStream(factor * constant * 10.0, temperature, 0.0, {"CH4": methane})
    wash = Wash(pressure, 1.0, 0.0, 1, efficiency=efficiency)
    out = wash_gas(wash, gas, water, PLAIN_SITE).gas
    expected = (1 - efficiency + efficiency / factor) / (1 + efficiency / factor)
    assert out.of("CO2") / 1e-9 == pytest.approx(expected, rel=1e-6)


def test_agrees_with_the_reference_columns():
    # f_wash_column: PHREEQC 3.8.6 with the CH4 constant of G7-04; gas out within 1 %, mole
    # fractions within 0.005.
    for row in table("f_wash_column.csv"):
        water = WaterStream(
            1e-3 / 0.9976,
            row["T_degC"],
            0.0,  # m3 that hold a kilogram of water
            {
                "CH4": 0.9976 * row["water_in_CH4_mmol_kgw"],
                "DIC": 0.9976 * row["water_in_CO2_mmol_kgw"],
                "alkalinity": 0.0,
            },
        )
        flows = {gas: 1e-3 * row[f"gas_in_{gas}_mmol_kgw"] for gas in ("CH4", "CO2")}
        gas = GasStream(flows, row["T_degC"], row["p_bar_abs"] * 1e5)
        wash = Wash(gas.pressure, 1.0, 0.0, int(row["stages"]))
        out = wash_gas(wash, gas, water, ENGINE_SITE).gas
        expected = row["gas_out_CH4_mmol_kgw"] + row["gas_out_CO2_mmol_kgw"]
        assert 1e3 * out.dry == pytest.approx(expected, rel=0.01), row
        assert out.of("CH4") / out.total == pytest.approx(row["y_out_CH4"], abs=0.005), row
        assert out.of("CO2") / out.total == pytest.approx(row["y_out_CO2"], abs=0.005), row


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
