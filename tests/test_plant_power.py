"""Heating values, compression and pumping."""

import math

import numpy as np
import pytest

from strata.plant import power
from strata.plant.streams import GasStream
from strata.species import VAPOUR


@pytest.mark.parametrize(
    ("gas", "fluid"),
    [
        ("CH4", "Methane"),
        ("CO2", "CarbonDioxide"),
        ("N2", "Nitrogen"),
        ("O2", "Oxygen"),
        ("H2S", "HydrogenSulfide"),
        ("Ar", "Argon"),
        (VAPOUR, "Water"),
    ],
)
def test_heat_capacities_are_those_of_reference_equations(gas, fluid):
    coolprop = pytest.importorskip("CoolProp.CoolProp", reason="CoolProp is not installed")
    for kelvin in (280.0, 350.0, 450.0):
        ours = 8.314462618 * np.polyval(power._HEAT_CAPACITY[gas][::-1], kelvin)
        theirs = coolprop.PropsSI("CP0MOLAR", "T", kelvin, "P", 100.0, fluid)
        assert ours == pytest.approx(theirs, rel=0.006)  # the polynomials are good to half a %


def test_wobbe_index_of_methane():
    # 35.81 MJ/Nm3 over (16.0425 / 28.9647)^1/2 = 0.7442
    gas = GasStream({"CH4": 1.0}, 25.0, 1e5)
    assert power.wobbe_index(gas) == pytest.approx(
        35.807e6 / math.sqrt(16.0425 / 28.9647), rel=1e-3
    )


def test_cooling_between_stages_saves_power():
    gas = GasStream({"CH4": 10.0, "CO2": 20.0}, 20.0, 0.2e5)
    one, two, four = (power.compression_power(gas, 8e5, 0.7, n, 20.0) for n in (1, 2, 4))
    isothermal = 30.0 * 8.314 * 293.15 * math.log(40.0) / 0.7
    assert one > two > four > 0.95 * isothermal


def test_nothing_is_paid_for_a_fall_of_pressure():
    gas = GasStream({"CH4": 10.0}, 20.0, 5e5)
    assert power.compression_power(gas, 2e5, 0.7) == 0.0
    assert power.pump_power(3.0, -1e5, 0.7) == 0.0
    assert power.pump_power(3.0, 2e5, 0.75) == pytest.approx(8e5)


def test_methane_to_the_air_counts_for_what_the_ipcc_says():
    # IPCC AR6 WG1 table 7.SM.7: 27.9 over 100 years
    gas = GasStream({"CH4": 1.0 / 16.0425e-3, "CO2": 1.0 / 44.0095e-3}, 20.0, 1e5)
    assert power.carbon_dioxide_equivalent(gas) == pytest.approx(28.9, rel=1e-6)
