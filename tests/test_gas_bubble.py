"""Bubble point and gas phase: exact limits, properties over random water, refusals."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from strata import OutOfRangeError, gas
from strata.gas import PLAIN
from strata.species import LAKE_GASES

MIXTURE = {"CH4": 15.0, "CO2": 80.0, "N2": 0.5, "H2S": 0.1}
temperatures = st.floats(0.0, 40.0)
salinities = st.floats(0.0, 15.0)
amounts = st.fixed_dictionaries(
    {
        "CH4": st.floats(0.0, 40.0),
        "CO2": st.floats(0.0, 200.0),
        "N2": st.floats(0.0, 3.0),
        "Ar": st.floats(0.0, 0.1),
        "O2": st.floats(0.0, 0.5),
        "H2S": st.floats(0.0, 5.0),
    }
)


def test_plain_henry_of_one_gas_is_its_product():
    bubble = gas.bubble_point(23.0, 0.0, {"CH4": 12.0}, PLAIN)
    expected = 12.0 * float(gas.henry_constant("CH4", 23.0))
    assert float(bubble.pressure) == pytest.approx(expected, rel=1e-12)
    assert float(bubble.composition["CH4"]) == pytest.approx(1.0, rel=1e-15)
    assert float(bubble.composition["H2O"]) == 0.0


def test_plain_henry_of_many_gases_is_the_sum():
    bubble = gas.bubble_point(23.0, 0.0, MIXTURE, PLAIN)
    parts = {name: c * float(gas.henry_constant(name, 23.0)) for name, c in MIXTURE.items()}
    assert float(bubble.pressure) == pytest.approx(sum(parts.values()), rel=1e-12)
    for name, part in parts.items():
        assert float(bubble.composition[name]) == pytest.approx(part / sum(parts.values()))


def test_water_without_gas_has_its_vapour_pressure():
    bubble = gas.bubble_point(25.0, 0.0, {"CH4": 0.0})
    assert float(bubble.pressure) == pytest.approx(3169.9, rel=2e-3)  # IAPWS-95
    assert float(bubble.composition["H2O"]) == 1.0
    nothing = gas.bubble_point(25.0, 0.0, {"CH4": 0.0}, PLAIN)
    assert float(nothing.pressure) == 0.0


def test_a_bubble_is_at_equilibrium_with_its_water():
    bubble = gas.bubble_point(23.0, 4.0, MIXTURE)
    phi = gas.fugacity_coefficients(23.0, bubble.pressure, bubble.composition)
    from strata.species import SPECIES
    from strata.water import vapour_pressure

    taken = sum(c * SPECIES[name].molar_volume for name, c in MIXTURE.items())
    rt = 8.314462618 * 296.15
    for name, c in MIXTURE.items():
        reference = 101325.0 if name == "CO2" else float(vapour_pressure(23.0))
        rise = np.exp(SPECIES[name].molar_volume * (bubble.pressure - reference) / rt)
        water = c * gas.henry_constant(name, 23.0, 4.0) * rise / (1.0 - taken)
        bubble_side = bubble.composition[name] * phi[name] * bubble.pressure
        assert float(bubble_side) == pytest.approx(float(water), rel=1e-9)


@pytest.mark.parametrize(
    ("off", "raises"),
    [
        ({"salting_out": False}, False),
        ({"water_vapour": False}, False),
        ({"pressure_term": False}, False),
        ({"gas_phase": "ideal"}, False),
        ({"k_ij": 0.0}, True),
    ],
)
def test_every_law_can_be_switched_and_shows(off, raises):
    # interactions raise fugacity, so without them the pressure is higher
    every = float(gas.bubble_point(23.0, 5.0, MIXTURE).pressure)
    without = float(gas.bubble_point(23.0, 5.0, MIXTURE, off).pressure)
    assert without != every
    assert (without > every) == raises


@settings(max_examples=60, deadline=None)
@given(temperatures, salinities, amounts, st.sampled_from(LAKE_GASES), st.floats(1e-3, 5.0))
def test_pressure_rises_with_each_gas(temperature, salinity, dissolved, name, more):
    before = gas.bubble_point(temperature, salinity, dissolved)
    after = gas.bubble_point(
        temperature, salinity, {**dissolved, name: dissolved[name] + more}
    )
    assert after.pressure > before.pressure


@settings(max_examples=60, deadline=None)
@given(st.floats(0.0, 39.0), salinities, amounts, st.floats(0.01, 1.0))
def test_pressure_rises_with_temperature(temperature, salinity, dissolved, warmer):
    before = gas.bubble_point(temperature, salinity, dissolved)
    after = gas.bubble_point(temperature + warmer, salinity, dissolved)
    assert after.pressure > before.pressure


@settings(max_examples=60, deadline=None)
@given(temperatures, salinities, amounts)
def test_mole_fractions_are_fractions(temperature, salinity, dissolved):
    bubble = gas.bubble_point(temperature, salinity, dissolved)
    y = np.array(list(bubble.composition.values()))
    assert np.all((y >= 0.0) & (y <= 1.0))
    assert y.sum() == pytest.approx(1.0, abs=1e-12)


def test_traces_and_gaps_and_sixty_bar_all_converge():
    chance = np.random.default_rng(5)
    n = 5000
    scale = {"CH4": 40.0, "CO2": 300.0, "N2": 8.0, "Ar": 1.0, "O2": 1.0, "H2S": 10.0}
    dissolved = {
        name: most * 10.0 ** (-14.0 * chance.random(n) ** 4) * (chance.random(n) > 0.3)
        for name, most in scale.items()
    }
    bubble = gas.bubble_point(chance.uniform(0, 20, n), chance.uniform(0, 20, n), dissolved,
                              {"k_ij": 0.0919})  # fmt: skip
    assert np.all(np.isfinite(bubble.pressure))
    assert bubble.pressure.max() > 4e6


def test_many_rows_are_the_same_as_one_by_one():
    dissolved = {"CH4": np.linspace(0, 20, 7), "CO2": np.linspace(90, 0, 7)}
    together = gas.bubble_point(24.0, 3.0, dissolved)
    for i in range(7):
        alone = gas.bubble_point(24.0, 3.0, {name: c[i] for name, c in dissolved.items()})
        assert float(alone.pressure) == together.pressure[i]


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        ((50.0, 0.0, {"CH4": 1.0}), "temperature is 50 degC"),
        ((20.0, 0.0, {"CH4": -1.0}), "dissolved CH4 is -1 mol/m3"),
        ((20.0, 0.0, {"DIC": 1.0}), "gas 'DIC' is not known"),
        ((20.0, 0.0, {"N2": 300.0}), "above 62 bar"),
        ((20.0, 0.0, {"CH4": 1.0}, {"vapour": False}), "did you mean water_vapour?"),
    ],
)
def test_refuses_what_it_cannot_answer(arguments, words):
    with pytest.raises(OutOfRangeError) as refusal:
        gas.bubble_point(*arguments)
    assert words in str(refusal.value)


def test_a_mixture_that_would_be_liquid_is_refused():
    with pytest.raises(OutOfRangeError, match="no gas there"):
        gas.fugacity_coefficients(10.0, 6e6, {"CO2": 1.0})


def test_mole_fractions_that_do_not_add_up_are_refused():
    with pytest.raises(OutOfRangeError, match=r"add up to 0\.9"):
        gas.fugacity_coefficients(20.0, 1e5, {"CH4": 0.5, "CO2": 0.4})


def test_an_ideal_gas_has_coefficients_of_one():
    y = {"CH4": 0.3, "CO2": 0.7}
    phi = gas.fugacity_coefficients(20.0, 4e6, y, {"gas_phase": "ideal"})
    assert all(float(value) == 1.0 for value in phi.values())
    dilute = gas.fugacity_coefficients(20.0, 1e-3, y)
    assert all(float(value) == pytest.approx(1.0, abs=1e-9) for value in dilute.values())


def test_fugacities_obey_gibbs_and_duhem():
    # sum of y_i d ln phi_i along a change of composition at constant T and P is nil
    y, step = 0.37, 1e-5
    rise = [
        gas.fugacity_coefficients(15.0, 3e6, {"CH4": y + d, "CO2": 1 - y - d})
        for d in (-step, step)
    ]
    slope = {name: float(np.log(rise[1][name] / rise[0][name])) for name in rise[0]}
    assert y * slope["CH4"] + (1 - y) * slope["CO2"] == pytest.approx(0.0, abs=1e-12)


def test_agrees_with_coolprop_on_fresh_mixtures():
    coolprop = pytest.importorskip("CoolProp.CoolProp", reason="CoolProp is not installed")
    chance = np.random.default_rng(8)
    state = coolprop.AbstractState("HEOS", "Methane&CarbonDioxide")
    state.specify_phase(coolprop.iphase_gas)
    for _ in range(20):
        y, t, p = chance.uniform(0.05, 0.95), chance.uniform(15, 35), chance.uniform(1e5, 2e6)
        state.set_mole_fractions([y, 1 - y])
        state.update(coolprop.PT_INPUTS, p, t + 273.15)
        phi = gas.fugacity_coefficients(t, p, {"CH4": y, "CO2": 1 - y})
        for i, name in enumerate(("CH4", "CO2")):
            theirs = state.fugacity_coefficient(i)
            assert float(phi[name]) == pytest.approx(theirs, rel=0.013)  # to 20 bar


def test_the_kernel_is_compiled_once_for_all_callers():
    from strata.gas.bubble import bubble_rows

    for temperature in (20, 20.0, np.float32(20.0), np.linspace(10, 20, 9)[::2]):
        gas.bubble_point(temperature, 1, {"CH4": np.arange(5)})
    gas.bubble_point([[20.0], [21.0]], 1.0, {"CH4": [1.0, 2.0, 3.0]})
    # run as plain Python, it has no signatures
    assert len(getattr(bubble_rows, "signatures", [1])) == 1
