"""Carbonate and lime: exact balances, published constants, kernels, refusals."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from strata import OutOfRangeError, gas
from strata.constants import ATMOSPHERE
from strata.gas.carbonate import (
    carbonate_constants,
    free_co2,
    hydrogen_of_co2,
    ln_first_constant,
    ln_second_constant,
    ln_sulfide_constant,
    ln_water_constant,
)
from strata.gas.ions import ionic_strength_of

LN10 = np.log(10.0)


@pytest.mark.parametrize(
    ("celsius", "first", "second"),
    # log10 K of Plummer & Busenberg 1982 at 1 atm
    [(0, -6.5786, -10.6286), (10, -6.4633, -10.4879), (20, -6.3819, -10.3756),
     (25, -6.3519, -10.3289)],
)  # fmt: skip
def test_constants_are_those_of_plummer_and_busenberg(celsius, first, second):
    assert ln_first_constant(float(celsius), ATMOSPHERE) / LN10 == pytest.approx(
        first, abs=6e-5
    )
    assert ln_second_constant(float(celsius), ATMOSPHERE) / LN10 == pytest.approx(
        second, abs=6e-5
    )


def test_water_and_sulfide_have_their_constants_at_25_degrees():
    # pKw 13.995; pK of H2S 6.98 to 7.05 in the literature
    assert -ln_water_constant(25.0, ATMOSPHERE) / LN10 == pytest.approx(13.995, abs=0.01)
    assert -ln_sulfide_constant(25.0, ATMOSPHERE) / LN10 == pytest.approx(7.0, abs=0.05)


waters = {
    "temperature": st.floats(0.0, 40.0),
    "salinity": st.floats(0.0, 10.0),
    "dic": st.floats(1e-3, 400.0),
    "alkalinity": st.floats(0.0, 120.0),
}


@settings(max_examples=80, deadline=None)
@given(**waters, magnesium=st.floats(0.0, 20.0), calcium=st.floats(0.0, 5.0),
       sulfide=st.floats(0.0, 2.0))  # fmt: skip
def test_species_add_up_to_dic_and_alkalinity(
    temperature, salinity, dic, alkalinity, magnesium, calcium, sulfide
):
    water = gas.speciate(
        temperature, salinity, dic, alkalinity,
        magnesium=magnesium, calcium=calcium, sulfide=sulfide,
    )  # fmt: skip
    carbon = float(water.co2 + water.hco3 + water.co3)
    assert carbon == pytest.approx(dic, rel=1e-10)
    charge = float(water.hco3 + 2 * water.co3 + water.hs + water.oh - water.h)
    assert charge == pytest.approx(
        alkalinity, rel=1e-10, abs=1e-10 * float(water.h + water.oh)
    )


@settings(max_examples=60, deadline=None)
@given(**waters, more=st.floats(0.01, 10.0))
def test_free_carbon_dioxide_rises_with_dic_and_falls_with_alkalinity(
    temperature, salinity, dic, alkalinity, more
):
    before = gas.speciate(temperature, salinity, dic, alkalinity).co2
    assert gas.speciate(temperature, salinity, dic + more, alkalinity).co2 > before
    assert gas.speciate(temperature, salinity, dic, alkalinity + more).co2 < before


@settings(max_examples=100, deadline=None)
@given(st.floats(1e-6, 3000.0), st.floats(-10.0, 300.0), st.floats(-16, 5))
def test_the_kernel_finds_the_same_root_from_any_guess(dic, alkalinity, guess):
    k1, k2, kw = carbonate_constants(23.0, 0.05, 2e6)
    co2, h = free_co2(dic, alkalinity, k1, k2, kw, 10.0**guess)
    other, _ = free_co2(dic, alkalinity, k1, k2, kw, 1e-4)
    assert co2 == pytest.approx(other, rel=1e-9)
    hco3, co3 = k1 * co2 / h, k1 * k2 * co2 / h**2
    assert hco3 + 2 * co3 + kw / h - h == pytest.approx(alkalinity, rel=1e-9, abs=1e-9)


@settings(max_examples=60, deadline=None)
@given(st.floats(1e-6, 1000.0), st.floats(0.0, 300.0))
def test_hydrogen_of_free_carbon_dioxide_is_consistent(co2, alkalinity):
    k1, k2, kw = carbonate_constants(23.0, 0.05, 2e6)
    h = hydrogen_of_co2(co2, alkalinity, k1, k2, kw)
    dic = co2 * (1 + k1 / h + k1 * k2 / h**2)
    again, h_again = free_co2(dic, alkalinity, k1, k2, kw, 1e-4)
    assert again == pytest.approx(co2, rel=1e-8)
    assert h_again == pytest.approx(h, rel=1e-8)


def test_the_kernel_agrees_with_the_public_function_in_lake_water():
    # the kernel takes the ionic strength by rule, the public function from what it finds
    strength = ionic_strength_of(4.0, 45.0, 0.0, 0.0)
    k1, k2, kw = carbonate_constants(24.0, strength, 3e6)
    co2, _ = free_co2(110.0, 45.0, k1, k2, kw, 1e-4)
    ours = gas.speciate(24.0, 4.0, 110.0, 45.0, 3e6)
    assert co2 == pytest.approx(float(ours.co2), rel=1e-5)


def test_dic_follows_from_free_carbon_dioxide_or_ph():
    dic = gas.dic_of(23.0, 4.0, 50.0, co2=[0.5, 40.0], pressure=2e6)
    water = gas.speciate(23.0, 4.0, dic, 50.0, 2e6)
    np.testing.assert_allclose(water.co2, [0.5, 40.0], rtol=1e-9)
    np.testing.assert_allclose(gas.dic_of(23.0, 4.0, 50.0, ph=water.ph, pressure=2e6), dic,
                               rtol=1e-9)  # fmt: skip
    alkalinity = gas.alkalinity_of(23.0, 4.0, dic, ph=water.ph, pressure=2e6)
    np.testing.assert_allclose(alkalinity, 50.0, rtol=1e-8)


def test_dic_needs_one_other_quantity():
    with pytest.raises(OutOfRangeError, match="either free CO2 or pH"):
        gas.dic_of(23.0, 4.0, 50.0, co2=1.0, ph=7.0)


def test_a_ph_that_no_dic_gives_is_refused():
    with pytest.raises(OutOfRangeError, match="no DIC"):
        gas.dic_of(23.0, 4.0, 0.0, ph=12.0)


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        ((45.0, 1.0, 2.0, 1.0), "Plummer & Busenberg 1982"),
        ((20.0, 1.0, 2.0, 500.0), "Davies 1962"),
        ((20.0, 42.0, 50.0, 40.0), "ionic strength"),
        ((20.0, 1.0, -2.0, 1.0), "DIC is -2 mol/m3"),
        ((20.0, 1.0, 2.0, 1.0, 9e6), "Millero 1983"),
    ],
)
def test_refuses_what_lies_outside_its_source(arguments, words):
    with pytest.raises(OutOfRangeError) as refusal:
        gas.speciate(*arguments)
    assert words in str(refusal.value)


def test_lime_conserves_carbon_calcium_and_charge():
    dose = np.linspace(0.0, 60.0, 13)
    water = gas.dose_lime(22.0, 4.0, 100.0, 45.0, dose, 2.0, magnesium=5.0)
    np.testing.assert_allclose(water.dic + water.calcite, 100.0, rtol=1e-12)
    np.testing.assert_allclose(water.calcium + water.calcite, 2.0 + dose, rtol=1e-12)
    balance = 45.0 + 2 * dose - 2 * water.calcite
    np.testing.assert_allclose(water.alkalinity, balance, rtol=1e-12)


def test_lime_brings_calcite_to_saturation_and_no_further():
    water = gas.dose_lime(22.0, 4.0, 100.0, 45.0, [5.0, 20.0, 50.0])
    np.testing.assert_allclose(water.calcite_saturation, 0.0, atol=1e-6)
    half = gas.dose_lime(22.0, 4.0, 100.0, 45.0, 20.0, approach=0.5)
    assert half.calcite_saturation > 0.5
    assert float(half.calcite) == pytest.approx(0.5 * float(water.calcite[1]), rel=1e-9)


def test_unsaturated_water_forms_no_calcite():
    water = gas.dose_lime(22.0, 0.1, 3.0, 1.0, 0.01)
    assert float(water.calcite) == 0.0
    assert water.calcite_saturation < 0


def test_lime_beyond_the_activities_is_refused():
    with pytest.raises(OutOfRangeError, match=r"ionic strength is .* Davies 1962"):
        gas.dose_lime(22.0, 4.0, 20.0, 300.0, 300.0)


def test_overdose_is_flagged_where_lime_exceeds_free_carbon_dioxide():
    free = float(gas.speciate(22.0, 4.0, 100.0, 45.0).co2)
    water = gas.dose_lime(22.0, 4.0, 100.0, 45.0, [0.9 * free, 1.1 * free])
    assert water.overdosed.tolist() == [False, True]
    assert water.ph[0] < 8.3 < water.ph[1]


def test_agrees_with_the_engine_on_fresh_water():
    phreeqc = pytest.importorskip("phreeqc", reason="phreeqc is not installed")
    from engine import run

    chance = np.random.default_rng(3)
    t, alk = chance.uniform(15, 30, 12), chance.uniform(5, 60, 12)
    dic = alk * chance.uniform(1.25, 3.0, 12)
    blocks = [
        f"SOLUTION {i}\ntemp {t[i]}\nunits mmol/kgw\nNa {alk[i]}\nC(4) {dic[i]}\n"
        "pH 7 charge\nEND"
        for i in range(12)
    ]
    punch = '-start\n10 PUNCH -LA("H+"), MOL("CO2")*1e3, MOL("(CO2)2")*1e3\n-end'
    found = run(phreeqc, blocks, ["ph", "co2", "dimer"], punch)
    from property_checks import kilograms

    litre = kilograms(t)
    ours = gas.speciate(t, 0.0, dic * litre, alk * litre)
    np.testing.assert_allclose(ours.ph, found["ph"], rtol=0, atol=0.05)
    np.testing.assert_allclose(ours.co2 / litre, found["co2"] + 2 * found["dimer"], rtol=5e-3)
