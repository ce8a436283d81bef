"""One separator stage: exact limits, conservation, agreement with the bubble point."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from strata import OutOfRangeError, gas
from strata.gas import PLAIN

FEED = {"CH4": 15.0, "CO2": 80.0, "N2": 0.5}


@pytest.mark.parametrize("pressure", [2e4, 1e5, 5e5, 1.2e6])
def test_plain_henry_of_one_gas_leaves_p_over_h_c(pressure):
    henry = float(gas.henry_constant("CH4", 23.0))
    stage = gas.flash(23.0, 0.0, {"CH4": 18.0}, pressure, laws=PLAIN)
    recovery = float(stage.released["CH4"]) / 18.0
    assert recovery == pytest.approx(1.0 - pressure / (henry * 18.0), abs=1e-9)


feeds = st.fixed_dictionaries(
    {
        "CH4": st.floats(0.0, 25.0),
        "CO2": st.floats(0.0, 120.0),
        "N2": st.floats(0.0, 1.0),
        "H2S": st.floats(0.0, 1.0),
    }
)


@settings(max_examples=80, deadline=None)
@given(st.floats(0.0, 40.0), st.floats(0.0, 10.0), feeds, st.floats(1e4, 5e6), st.floats(0, 1))
def test_every_gas_is_conserved(temperature, salinity, feed, pressure, approach):
    stage = gas.flash(temperature, salinity, feed, pressure, approach)
    for name, amount in feed.items():
        back = float(stage.released[name] + stage.residual[name])
        assert back == pytest.approx(amount, rel=1e-12, abs=1e-15)
        assert 0.0 <= float(stage.released[name]) <= amount


@settings(max_examples=40, deadline=None)
@given(st.floats(15.0, 30.0), st.floats(1e4, 1e6), st.floats(1.0, 80.0), st.floats(0.1, 100.0))
def test_carbon_is_conserved_where_there_is_alkalinity(temperature, pressure, alkalinity, co2):
    feed = {"CH4": 10.0, "CO2": co2}
    stage = gas.flash(temperature, 3.0, feed, pressure, alkalinity=alkalinity)
    dic = float(stage.released["CO2"] + stage.residual["DIC"])
    same = gas.flash(
        temperature, 3.0, {"CH4": 10.0, "DIC": dic}, pressure, alkalinity=alkalinity
    )
    assert float(same.residual["CO2"]) == pytest.approx(float(stage.residual["CO2"]), rel=1e-9)
    assert float(same.released["CH4"]) == pytest.approx(float(stage.released["CH4"]), rel=1e-9)
    # bicarbonate makes up for some of the gas that leaves
    assert float(stage.residual["CO2"]) >= co2 - float(stage.released["CO2"]) - 1e-9


def test_residual_water_is_saturated_at_the_stage_pressure():
    stage = gas.flash(23.0, 4.0, FEED, 2e5)
    bubble = gas.bubble_point(23.0, 4.0, stage.residual)
    # the feed's own gas volume, 0.3 %, is gone from the residual water
    assert float(bubble.pressure) == pytest.approx(2e5, rel=4e-3)
    for name, share in stage.composition.items():
        assert float(bubble.composition[name]) == pytest.approx(float(share), abs=2e-3)


def test_residual_water_is_saturated_exactly_without_volumes():
    laws = {"pressure_term": False}
    stage = gas.flash(23.0, 4.0, FEED, 2e5, laws=laws)
    bubble = gas.bubble_point(23.0, 4.0, stage.residual, laws)
    # Raoult's law counts the gases of the feed in one and of the residue in the other
    assert float(bubble.pressure) == pytest.approx(2e5, rel=1e-4)


def test_nothing_leaves_above_the_bubble_pressure_and_little_just_below():
    pressure = float(gas.bubble_point(23.0, 4.0, FEED).pressure)
    above = gas.flash(23.0, 4.0, FEED, pressure * (1 + 1e-9))
    assert all(float(value) == 0.0 for value in above.released.values())
    assert all(float(value) == 0.0 for value in above.composition.values())
    below = gas.flash(23.0, 4.0, FEED, pressure * (1 - 1e-6))
    assert 0.0 < float(below.released["CH4"]) < 1e-4


def test_approach_scales_what_is_released():
    whole, half = (gas.flash(23.0, 4.0, FEED, 2e5, share) for share in (1.0, 0.5))
    for name, released in whole.released.items():
        assert float(half.released[name]) == pytest.approx(0.5 * float(released), rel=1e-14)


def test_recovery_falls_and_purity_rises_with_pressure():
    pressure = np.geomspace(3e4, 1.2e6, 12)
    stage = gas.flash(23.0, 4.0, FEED, pressure)
    assert np.all(np.diff(stage.released["CH4"]) < 0)
    dry = 1.0 - stage.composition["H2O"]
    assert np.all(np.diff(stage.composition["CH4"] / dry) > 0)


def test_water_vapour_can_be_switched_off():
    stage = gas.flash(23.0, 4.0, FEED, 2e5, laws={"water_vapour": False})
    assert float(stage.vapour) == 0.0
    assert float(gas.flash(23.0, 4.0, FEED, 2e5).vapour) > 0.1


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        ((23.0, 4.0, FEED, 1500.0), "water boils"),
        ((23.0, 4.0, {"CO2": 1.0, "DIC": 2.0}, 1e5), "both CO2 and DIC"),
        ((23.0, 4.0, FEED, 9e6), "pressure is 9e+06 Pa"),
        ((23.0, 4.0, FEED, 1e5, 1.5), "approach is 1.5"),
        ((23.0, 4.0, FEED, 1e5, 1.0, -1.0), "alkalinity is -1 eq/m3"),
        ((23.0, 4.0, {"phosphate": 1.0}, 1e5), "gas 'phosphate' is not known"),
    ],
)
def test_refuses_what_it_cannot_answer(arguments, words):
    with pytest.raises(OutOfRangeError) as refusal:
        gas.flash(*arguments)
    assert words in str(refusal.value)


def test_agrees_with_the_engine_on_fresh_conditions():
    phreeqc = pytest.importorskip("phreeqc", reason="phreeqc is not installed")
    from engine import CORRECTED_METHANE, run
    from property_checks import ENGINE, kilograms

    from strata.species import SPECIES

    chance = np.random.default_rng(19)
    n = 8
    t, p = chance.uniform(20, 28, n), chance.uniform(0.5, 3.0, n)
    ch4, co2 = chance.uniform(10, 25, n), chance.uniform(20, 100, n)
    blocks = [
        f"SOLUTION {i}\ntemp {t[i]}\nunits mmol/kgw\npH 7 charge\nC(4) {co2[i]}\n"
        f"Mtg {ch4[i]}\nGAS_PHASE {i}\n-fixed_pressure\n-pressure {p[i] / 1.01325}\n"
        f"-temperature {t[i]}\n-volume 1e-8\nMtg(g) 0\nCO2(g) 0\nH2O(g) 0\nEND"
        for i in range(n)
    ]
    punch = '-start\n10 PUNCH GAS("Mtg(g)")*1e3, GAS("CO2(g)")*1e3\n-end'
    found = run(phreeqc, blocks, ["ch4", "co2"], punch, CORRECTED_METHANE, gas_only=True)
    volume = 1e-3 / kilograms(t) + 1e-6 * (
        1e3 * (ch4 * SPECIES["CH4"].molar_volume + co2 * SPECIES["CO2"].molar_volume)
    )
    feed = {"CH4": 1e-3 * ch4 / volume, "CO2": 1e-3 * co2 / volume}
    stage = gas.flash(t, 0.0, feed, p * 1e5, laws=ENGINE)
    # 0.5 %: the feed's CO2 is given as a total here, of which 0.5 % is ion and dimer
    np.testing.assert_allclose(stage.released["CH4"] * volume * 1e3, found["ch4"], rtol=5e-3)
