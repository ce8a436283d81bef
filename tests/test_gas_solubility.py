"""Henry's constants, salting-out, the table of gases, air-saturated water, diffusivities."""

import numpy as np
import pytest

from strata import OutOfRangeError, gas, water
from strata.constants import ATMOSPHERE, WATER_MASS
from strata.gas.henry import _ln_solubility
from strata.gas.solubility import lowest_temperature
from strata.species import LAKE_GASES, SPECIES, Species


def test_matches_the_check_value_printed_in_g7_04():
    # table of ln(k_H / 1 GPa) for checking a program, CH4 at 300 K; printed to four decimals
    constant = gas.henry_constant("CH4", 26.85) * water.density(26.85, 0, ATMOSPHERE)
    ln_of_fraction = np.log(float(constant) / WATER_MASS / 1e9)
    assert ln_of_fraction == pytest.approx(1.4034, abs=6e-5)


@pytest.mark.parametrize(
    ("name", "celsius", "bunsen"),
    [
        # Bunsen coefficients in fresh water: Wiesenburg & Guinasso 1979
        ("CH4", 0.0, 5.73853e-2),
        ("CH4", 10.0, 4.34042e-2),
        ("CH4", 25.0, 3.15095e-2),
    ],
)
def test_the_cold_fits_are_those_of_the_literature(name, celsius, bunsen):
    assert np.exp(_ln_solubility(celsius, *SPECIES[name].solubility)) == pytest.approx(
        bunsen, rel=2e-6
    )


def test_the_cold_course_of_nitrogen_is_that_of_weiss_1970():
    # Bunsen coefficients in fresh water at 0 and 10 degC; a compilation's misprint of A2
    # shifts both by 0.36 % and their ratio by 0.01 %, so the ratio is what is compared
    ours = [np.exp(_ln_solubility(t, *SPECIES["N2"].solubility)) for t in (0.0, 10.0)]
    assert ours[0] / ours[1] == pytest.approx(2.38249e-2 / 1.88765e-2, rel=2e-4)


@pytest.mark.parametrize("name", LAKE_GASES)
def test_nothing_jumps_between_two_fits(name):
    foot = SPECIES[name].henry_from
    if SPECIES[name].solubility is None or SPECIES[name].henry is None:
        return
    below, above = gas.henry_constant(name, [foot - 1e-9, foot + 1e-9])
    assert above == pytest.approx(below, rel=1e-9)


@pytest.mark.parametrize("name", LAKE_GASES)
def test_gas_is_less_soluble_in_warmer_water(name):
    constants = gas.henry_constant(name, np.linspace(lowest_temperature(name), 40.0, 200))
    assert np.all(np.diff(constants) > 0)


def test_salting_out_follows_weisenberger_and_schumpe():
    # 0.15 mol/L of sodium bicarbonate at 25 degC, from the ions' parameters by hand
    salinity = 12.52
    assert float(gas.salting_out("CH4", 25.0, salinity)[()]) == pytest.approx(1.077, abs=5e-4)
    assert float(gas.salting_out("CO2", 25.0, salinity)[()]) == pytest.approx(1.063, abs=5e-4)


def test_magnesium_and_calcium_salt_out_by_their_own_parameters():
    # half an equivalent each of Mg and Ca instead of Na: h = 0.1694/4 + 0.1762/4 + 0.0967,
    # 1.5 ions per equivalent, 0.08295 kg per equivalent
    laws = {"magnesium_share": 0.5, "calcium_share": 0.5}
    salinity = 8.0
    mass = 0.5 * 0.5 * (24.305 + 40.078) + 61.017
    equivalents = salinity * (0.998 + 0.75e-3 * salinity) / mass
    power = equivalents * ((0.1694 + 0.1762) / 4 + 0.0967 + 1.5 * 0.0022)
    ours = float(gas.salting_out("CH4", 25.0, salinity, laws)[()])
    assert ours == pytest.approx(10.0**power, rel=1e-9)


def test_salting_out_can_be_switched_off():
    plain = gas.henry_constant("CH4", 20.0)
    assert gas.henry_constant("CH4", 20.0, 6.0, {"salting_out": False}) == plain
    weaker = gas.henry_constant("CH4", 20.0, 6.0, {"salting_out": "generic"})
    assert plain < weaker < gas.henry_constant("CH4", 20.0, 6.0)


def test_a_gas_is_added_by_one_row(monkeypatch):
    helium = Species(
        molar_mass=4.0026e-3,
        molar_volume=29.7e-6,
        critical_temperature=5.19,
        critical_pressure=2.27e5,
        acentric_factor=-0.39,
        water_interaction=0.0,
        diffusivity=(0.818e-6, 11700.0),
        diffusivity_source="Jaehne, Heinz & Dietrich 1987",
        salting_out=(-0.0353, 0.464e-3),
        henry=(-3.52839, 7.12983, 4.47770),
        henry_from=0.06,
    )
    monkeypatch.setitem(SPECIES, "He", helium)
    # Weiss 1971: Bunsen coefficient of helium in fresh water of 25 degC is 0.00867
    solubility = ATMOSPHERE / float(gas.henry_constant("He", 25.0))  # mol/m3
    assert solubility * 0.022426 == pytest.approx(0.00867, rel=0.02)
    without = gas.bubble_point(23.0, 3.0, {"CH4": 10.0})
    with_it = gas.bubble_point(23.0, 3.0, {"CH4": 10.0, "He": 0.02})
    assert with_it.pressure > without.pressure
    # helium is the less soluble, so more of it leaves
    released = gas.flash(23.0, 3.0, {"CH4": 10.0, "He": 0.02}, 1e5).released
    assert float(released["CH4"]) / 10.0 < float(released["He"]) / 0.02 < 1.0
    assert water.density(20.0, 0.0, 1e5, {"He": 1.0}) < water.density(20.0, 0.0, 1e5)
    assert gas.gas_diffusivity("He", 25.0) > gas.gas_diffusivity("CH4", 25.0)
    assert gas.schmidt_number("He", 20.0) < gas.schmidt_number("CH4", 20.0)


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (
            ("CH4", -0.5),
            "temperature is -0.5 degC; 0 to 40 degC is allowed (Henry's constant of",
        ),
        (("CO2", 41.0), "Weiss 1974"),
        (("CH4", 20.0, 50.0), "salting-out, Weisenberger & Schumpe 1996"),
        (("CH3", 20.0), "gas 'CH3' is not known; did you mean CH4?"),
        (("CH4", np.nan), "nan"),
    ],
)
def test_refuses_what_lies_outside_its_source(arguments, words):
    with pytest.raises(OutOfRangeError) as refusal:
        gas.henry_constant(*arguments)
    assert words in str(refusal.value)


@pytest.mark.parametrize(
    ("laws", "words"),
    [
        ({"salting": False}, "law 'salting' is not known; did you mean salting_out?"),
        (
            {"gas_phase": "peng-robinsn"},
            "law gas_phase 'peng-robinsn' is not known; did you mean peng-robinson?",
        ),
        ({"pressure_term": 1}, "true or false"),
        ({"k_ij": 3.0}, "law k_ij is 3"),
        (
            {"magnesium_share": 0.7, "calcium_share": 0.6},
            "magnesium_share + calcium_share is 1.3",
        ),
    ],
)
def test_laws_that_are_not_known_are_refused(laws, words):
    with pytest.raises(OutOfRangeError) as refusal:
        gas.Laws.of(laws)
    assert words in str(refusal.value)


def test_laws_take_false_for_off_and_give_themselves_back():
    laws = gas.Laws.of({"salting_out": False, "gas_phase": False, "water_vapour": False})
    assert (laws.salting_out, laws.gas_phase, laws.water_vapour) == ("none", "ideal", False)
    assert gas.Laws.of(laws.as_mapping()) == laws
    assert gas.Laws.of(None) == gas.Laws()


def test_air_saturated_water_has_the_gas_pressure_of_the_air():
    dissolved = {name: gas.air_equilibrium(name, 20.0, 0.5, 9e4) for name in
                 ("N2", "O2", "Ar", "CO2")}  # fmt: skip
    bubble = gas.bubble_point(20.0, 0.5, dissolved)
    # real gas and dissolved volume are worth some 0.2 % here
    assert float(bubble.pressure) == pytest.approx(9e4, rel=4e-3)


def test_air_has_no_methane_unless_told():
    assert float(gas.air_equilibrium("CH4", 20.0, 0.0, 1e5)) == 0.0
    assert 2e-6 < float(gas.air_equilibrium("CH4", 20.0, 0.0, 1e5, 1.9e-6)) < 3e-6


def test_schmidt_numbers_are_600_near_20_degrees_for_carbon_dioxide():
    # Wanninkhof 1992: CO2 in fresh water at 20 degC
    assert float(gas.schmidt_number("CO2", 20.0)) == pytest.approx(600.0, abs=1.5)
    # for a gas that he leaves out, viscosity over diffusivity, here near that of oxygen
    assert float(gas.schmidt_number("Ar", 20.0)) == pytest.approx(530.0, rel=0.15)
