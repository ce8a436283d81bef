"""Density of lake water: exact relations, published points, refusals, live checks."""

import numpy as np
import pytest

from strata import OutOfRangeError, water
from strata.constants import ATMOSPHERE
from strata.species import SPECIES
from strata.water.density import in_situ_density as compiled_density
from strata.water.density import in_situ_temperature, parcel_density, potential_temperature


def test_fresh_lake_water_agrees_with_chen_and_millero_1986():
    # Density at 1 atm for S = 0 and 4 of sea salt; their salinity is 0.4 % smaller
    printed = {0: 999.8395, 4: 999.9719, 10: 999.6997, 20: 998.2041, 25: 997.0449}
    for temperature, value in printed.items():
        # the scale of 1948 against that of 1990 is worth 0.002 kg/m3 at 25 degC
        assert float(water.density(temperature, 0.0, ATMOSPHERE)) == pytest.approx(
            value, abs=0.004
        )
    salty = {4: 1003.1859, 10: 1002.8379, 20: 1001.2478, 25: 1000.0563}
    for temperature, value in salty.items():
        ours = water.density(
            temperature, 4.0 * 1.00472, ATMOSPHERE, haline_contraction=0.7586512e-3
        )
        # the two descriptions of sea salt are 0.014 kg/m3 apart in the cold
        assert float(ours) == pytest.approx(value, abs=0.02)


def test_a_gas_adds_its_mass_and_takes_its_volume():
    plain = water.density(22.0, 3.0, 2e6)
    row = SPECIES["CO2"]
    ours = water.density(22.0, 3.0, 2e6, {"CO2": 100.0})
    exact = plain * (1 - 100.0 * row.molar_volume) + 100.0 * row.molar_mass
    assert float(ours) == pytest.approx(float(exact), rel=1e-15)


def test_carbon_dioxide_makes_water_heavier_and_methane_lighter():
    plain = water.density(22.0, 3.0, 2e6)
    assert water.density(22.0, 3.0, 2e6, {"CO2": 50.0}) > plain
    assert water.density(22.0, 3.0, 2e6, {"CH4": 15.0}) < plain


def test_the_molar_volume_of_carbon_dioxide_is_the_sites():
    light = water.density(22.0, 3.0, 2e6, {"CO2": 100.0}, co2_molar_volume=35.9e-6)
    heavy = water.density(22.0, 3.0, 2e6, {"CO2": 100.0}, co2_molar_volume=31.4e-6)
    # 100 mol/m3 times 4.5 cm3/mol of water of 1000 kg/m3
    assert float(heavy - light) == pytest.approx(0.45, abs=0.005)


def test_thermal_expansion_and_contraction_are_the_derivatives_of_the_density():
    t, s, p = np.meshgrid([1.0, 8.0, 23.0, 38.0], [0.5, 4.0, 12.0], [1e5, 4e6], indexing="ij")
    step = 1e-3
    slope = (water.density(t + step, s, p) - water.density(t - step, s, p)) / (2 * step)
    expansion = -slope / water.density(t, s, p)
    np.testing.assert_allclose(water.thermal_expansion(t, s, p), expansion, rtol=0, atol=1e-9)
    slope = (water.density(t, s + step, p) - water.density(t, s - step, p)) / (2 * step)
    contraction = slope / water.density(t, s, p)
    np.testing.assert_allclose(water.haline_contraction_at(t, s, p), contraction, rtol=1e-7)


def test_potential_temperature_is_the_inverse_of_the_temperature_in_situ():
    for theta in np.linspace(0.0, 40.0, 9):
        for pressure in (2e4, ATMOSPHERE, 3e6, 6e6):
            there = in_situ_temperature(theta, pressure)
            assert potential_temperature(there, pressure) == pytest.approx(theta, abs=1e-12)


def test_the_adiabat_follows_the_lapse_rate():
    # integrated in small steps; the polynomial states 2e-5 K
    for theta in (2.0, 12.0, 24.0, 36.0):
        temperature, pressure, step = theta, ATMOSPHERE, 2e4
        while pressure < 5e6:
            middle = temperature + 0.5 * step * float(
                water.adiabatic_lapse_rate(temperature, 0.0, pressure)
            )
            rate = float(water.adiabatic_lapse_rate(middle, 0.0, pressure + 0.5 * step))
            temperature, pressure = temperature + step * rate, pressure + step
        assert in_situ_temperature(theta, pressure) == pytest.approx(temperature, abs=5e-5)


def test_the_public_density_is_the_compiled_one():
    ours = float(water.density(23.0, 4.0, 3e6, {"CH4": 10.0}))
    row = SPECIES["CH4"]
    mass, volume = 10.0 * row.molar_mass, 10.0 * row.molar_volume
    assert ours == compiled_density(23.0, 4.0, 3e6, mass, volume, 0.75e-3)
    theta = potential_temperature(23.0, 3e6)
    again = parcel_density(theta, 4.0, 3e6, mass, volume, 0.75e-3)
    assert again == pytest.approx(ours, rel=1e-14)


def test_potential_density_of_a_parcel_in_place_is_its_density():
    there = water.potential_density(23.0, 4.0, 3e6, reference_pressure=3e6)
    assert float(there) == pytest.approx(float(water.density(23.0, 4.0, 3e6)), rel=1e-14)
    assert water.potential_density(23.0, 4.0, 3e6) < there


def test_arrays_broadcast_and_scalars_stay_scalar():
    grid = water.density(np.array([10.0, 20.0])[:, None], np.array([1.0, 2.0, 3.0]), 1e5)
    assert grid.shape == (2, 3)
    assert np.ndim(water.density(10.0, 1.0, 1e5)) == 0


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        ((41.0, 0.0, 1e5), "temperature is 41 degC; 0 to 40 degC is allowed (Tanaka"),
        ((20.0, 25.0, 1e5), "salinity is 25 g/kg; 0 to 20 g/kg is allowed (salt term"),
        ((20.0, 0.0, 8e6), "pressure is 8e+06 Pa; 0 to 6.2e+06 Pa is allowed"),
        ((np.nan, 0.0, 1e5), "temperature is nan"),
        (
            (20.0, 0.0, 1e5, {"CH5": 1.0}),
            "dissolved gas 'CH5' is not known; did you mean CH4?",
        ),
        ((20.0, 0.0, 1e5, {"CH4": -1.0}), "dissolved CH4 is -1 mol/m3"),
    ],
)
def test_refuses_what_lies_outside_its_source(arguments, words):
    with pytest.raises(OutOfRangeError) as refusal:
        water.density(*arguments)
    assert words in str(refusal.value)


def test_agrees_with_gsw_on_fresh_conditions():
    gsw = pytest.importorskip("gsw", reason="gsw is not installed")
    chance = np.random.default_rng(20240607)
    t, s, bar = (chance.uniform(*ends, 300) for ends in ((1, 38), (0, 10), (1.02, 60)))
    sea = (bar - 1.01325) * 10.0
    theirs = gsw.rho(s, gsw.CT_from_t(s, t, sea), sea)
    ours = water.density(t, s, bar * 1e5, haline_contraction=0.7586512e-3)
    np.testing.assert_allclose(ours, theirs, rtol=0, atol=0.01)  # of another equation
    rate = gsw.adiabatic_lapse_rate_from_CT(s, gsw.CT_from_t(s, t, sea), sea)
    # 6e-6 K/bar near the largest density, 1 % elsewhere
    gap = np.abs(water.adiabatic_lapse_rate(t, s, bar * 1e5) - rate)
    assert np.all(gap <= np.maximum(6e-11, 0.01 * np.abs(rate)))


def test_agrees_with_coolprop_on_fresh_conditions():
    coolprop = pytest.importorskip("CoolProp.CoolProp", reason="CoolProp is not installed")
    chance = np.random.default_rng(11)
    t, p = chance.uniform(0.1, 39.9, 100), chance.uniform(1e5, 6e6, 100)

    def theirs(what):
        return coolprop.PropsSI(what, "T", t + 273.15, "P", p, "Water")

    np.testing.assert_allclose(water.density(t, 0, p), theirs("D"), rtol=0, atol=0.005)
    np.testing.assert_allclose(water.heat_capacity(t, 0, p), theirs("C"), rtol=1e-3)
    np.testing.assert_allclose(water.dynamic_viscosity(t), theirs("V"), rtol=0.01)
    np.testing.assert_allclose(water.thermal_conductivity(t), theirs("L"), rtol=0.01)
    expansion = theirs("ISOBARIC_EXPANSION_COEFFICIENT")
    np.testing.assert_allclose(water.thermal_expansion(t, 0, p), expansion, rtol=0, atol=2e-6)
