"""What is derived from a column follows its definition and, where published, its number."""

from dataclasses import replace
from itertools import pairwise

import numpy as np
import pytest
import synthetic

from strata import margins
from strata.gas import air_equilibrium, bubble_point, speciate
from strata.gas.air import argon_of_nitrogen, sea_water_equilibrium
from strata.lake.site import Cast
from strata.water import buoyancy_frequency_squared
from strata.water.stability import mixed_layer_depth, standard_gravity

DEPTH = np.arange(0.5, 400.0, 1.0)
FACES = np.arange(0.0, 401.0, 1.0)
SURFACE = 0.86e5
PRESSURE = SURFACE + 9800.0 * DEPTH


def test_schmidt_stability_of_a_cylinder_of_two_layers_is_the_worked_number():
    # a cylinder 10 m deep, 997 kg/m3 above 4 m and 999 below: 24.0 kg/m x 9.81 = 235.44 J/m2
    # (definition of Idso 1973, worked by hand)
    faces = np.linspace(0.0, 10.0, 51)
    area = np.full(51, 5e6)
    volume = area[0] * np.diff(faces)
    density = np.where(faces[1:] <= 4.0 + 1e-9, 997.0, 999.0)
    found = margins.schmidt_stability(faces, area, volume, density, 9.81)
    assert found == pytest.approx(235.44, rel=1e-9)


def test_schmidt_stability_of_a_cone_does_not_depend_on_the_layers():
    def cone(layers: int) -> float:
        faces = np.linspace(0.0, 30.0, layers + 1)
        area = 1e6 * (1.0 - faces / 30.0) ** 2
        whole = 1e7 * (1.0 - (1.0 - faces / 30.0) ** 3)
        density = np.where(faces[1:] <= 10.0 + 1e-9, 998.0, 1000.0)
        return float(margins.schmidt_stability(faces, area, np.diff(whole), density, 9.81))

    # exact: g (rho2 - rho1) V1 / A0 (z_v - z_1), with the centres of volume of cone and cap
    share = 19.0 / 27.0  # of the volume of the cone above a third of its height from the top
    cap = 1e7 * share
    centre, below = 7.5, 10.0 + 20.0 / 4.0
    above = (centre - (1 - share) * below) / share
    exact = 9.81 * 2.0 * cap / 1e6 * (centre - above)
    assert cone(300) == pytest.approx(exact, rel=2e-5)
    assert cone(30) == pytest.approx(exact, rel=2e-3)


def test_lift_to_bubbling_ends_where_hydrostatic_pressure_equals_gas_pressure():
    gas = 0.5 * PRESSURE
    lift = margins.lift_to_bubbling(DEPTH, PRESSURE, gas, SURFACE)
    bubbles = gas > SURFACE
    there = SURFACE + 9800.0 * (DEPTH - lift)[bubbles]
    np.testing.assert_allclose(there, gas[bubbles], rtol=1e-12)


def test_water_that_may_surface_has_no_lift_and_supersaturated_water_a_negative_one():
    gas = np.where(DEPTH < 100.0, 0.5e5, 1.1 * PRESSURE)
    lift = margins.lift_to_bubbling(DEPTH, PRESSURE, gas, SURFACE)
    assert np.isnan(lift[DEPTH < 100.0]).all()
    np.testing.assert_allclose(
        lift[DEPTH > 100.0], (PRESSURE - gas)[DEPTH > 100.0] / 9800.0, rtol=1e-9
    )


def test_extremes_are_taken_among_the_chosen_layers_only():
    values = np.array([[9.0, 2.0, 5.0, 1.0], [9.0, 8.0, 7.0, 6.0]])
    depth = np.array([1.0, 3.0, 5.0, 7.0])
    deep = margins.below(np.array([0.0, 2.0, 4.0, 6.0, 8.0]), np.array([2.0, 3.0]))
    np.testing.assert_array_equal(
        deep, [[False, True, True, True], [False, False, True, True]]
    )
    largest, where = margins.largest(values, depth, deep)
    np.testing.assert_array_equal(largest, [5.0, 7.0])
    np.testing.assert_array_equal(where, [5.0, 5.0])
    least, where = margins.least(values, depth, deep)
    np.testing.assert_array_equal(least, [1.0, 6.0])
    np.testing.assert_array_equal(where, [7.0, 7.0])


def test_nothing_to_choose_from_is_not_a_number():
    nothing = np.zeros(3, dtype=bool)
    value, depth = margins.largest(np.ones(3), np.arange(3.0), nothing)
    assert np.isnan(value)
    assert np.isnan(depth)


def test_a_mole_of_gas_takes_22_414_litres():
    # molar volume of ideal gas at 273.15 K and 101325 Pa, CODATA 2018: 22.41396954e-3 m3/mol
    assert margins.cubic_kilometres(1e12) == pytest.approx(22.41396954, rel=1e-9)
    assert margins.tonnes(1e6, "CH4") == pytest.approx(16.0425, rel=1e-4)  # IUPAC molar mass


def test_zones_add_up_to_the_whole_whatever_their_bounds():
    generator = np.random.default_rng(3)
    volume = generator.uniform(1.0, 2.0, len(DEPTH))
    amount = generator.uniform(0.0, 5.0, (7, len(DEPTH)))
    bounds = np.array([0.0, 61.3, 204.9, 400.0])
    zones = [
        margins.in_place(amount, volume, margins.share_between(FACES, top, foot))
        for top, foot in pairwise(bounds)
    ]
    np.testing.assert_allclose(sum(zones), margins.in_place(amount, volume), rtol=1e-13)


def test_lifting_through_linear_stratification_works_against_a_spring():
    # rho rises by 0.01 kg/m3 per m: work = g * 0.01 * 50^2 / 2
    stability = np.full(len(DEPTH), 9.8 * 0.01 / 1000.0)
    assert margins.lifting_energy(DEPTH, stability, 300.0, 250.0) == pytest.approx(
        9.8 * 0.01 * 50.0**2 / 2.0, rel=1e-9
    )


def test_lifting_across_a_step_costs_its_weight_over_the_way_above_it():
    stability = np.where(np.abs(DEPTH - 200.5) < 0.1, 9.8 * 1.2 / 1000.0, 0.0)  # 1.2 kg/m3
    assert margins.lifting_energy(DEPTH, stability, 250.0, 150.0) == pytest.approx(
        9.8 * 1.2 * 50.5, rel=1e-9
    )


def test_mixed_layer_ends_where_density_has_risen_by_the_step():
    density = 998.0 + np.where(DEPTH > 40.0, 0.01 * (DEPTH - 40.0), 0.0)
    assert mixed_layer_depth(DEPTH, density) == pytest.approx(43.0, abs=0.02)


def test_oxic_layer_ends_at_two_milligrams_a_litre():
    oxygen = np.interp(DEPTH, [0.0, 50.0, 60.0], [0.25, 0.25, 0.0])
    expected = 50.0 + 10.0 * (1.0 - (2.0 / 31.998) / 0.25)
    assert margins.oxic_depth(DEPTH, oxygen) == pytest.approx(expected, abs=1e-6)
    assert margins.oxic_depth(DEPTH, 0.0 * DEPTH) == 0.0
    assert margins.oxic_depth(DEPTH, 0.25 + 0.0 * DEPTH) == DEPTH[-1]


def test_upward_flux_is_what_flow_and_diffusion_carry():
    rising = np.full((1, len(FACES)), 7.0)
    mixing = np.full((1, len(FACES)), 2e-6)
    area = np.full(len(FACES), 5e8)
    ramp = (0.1 + 0.002 * DEPTH)[np.newaxis]
    found = margins.upward_flux(DEPTH, FACES, area, ramp, rising, mixing, np.array([60.0]))
    assert found == pytest.approx(7.0 * ramp[0, 60] + 2e-6 * 5e8 * 0.002)
    sinking = margins.upward_flux(
        DEPTH, FACES, area, ramp, -rising, 0.0 * mixing, np.array([60.0])
    )
    assert sinking == pytest.approx(-7.0 * ramp[0, 59])


def test_the_surface_layer_is_the_deepest_mixing_of_the_year():
    days = (np.arange(0, 1500) * 86400).astype("timedelta64[s]")
    time = np.datetime64("2030-01-01", "s") + days
    mixed = 40.0 + 20.0 * np.cos(2 * np.pi * np.arange(1500) / 365.0)
    mixed[800:] -= 10.0
    deepest = margins.surface_layer_depth(time, mixed)
    np.testing.assert_allclose(deepest[:800], 60.0, atol=0.01)
    np.testing.assert_allclose(deepest[1200:], 50.0, atol=0.01)


def test_methane_lost_upward_is_the_balance_of_the_water_above():
    above = np.array([10.0, 12.0, 15.0])
    air, outlet = np.array([0.0, 3.0, 7.0]), np.array([0.0, 1.0, 2.0])
    rivers = np.array([0.0, 0.5, 1.0])
    lost = margins.methane_lost_upward(above, [air, outlet], [rivers])
    np.testing.assert_allclose(lost, [0.0, 2.0 + 4.0 - 0.5, 5.0 + 9.0 - 1.0])


def test_state_gives_what_the_formulas_give_for_the_same_water():
    lake = synthetic.lake(80)
    record = synthetic.record(lake, years=1.0)
    found = margins.water(
        record.values, record.tracers, record.depth, record.pressure, lake.site
    )
    layer = 60
    water = (found["temperature"][0, layer], record.of("salinity")[0, layer])
    share = argon_of_nitrogen(*water)
    nitrogen = record.of("N2")[0, layer]
    gases = {
        "CH4": record.of("CH4")[0, layer],
        "CO2": found["carbon_dioxide"][0, layer],
        "N2": nitrogen,
        "Ar": share * nitrogen,
        "O2": record.of("O2")[0, layer],
        "H2S": record.of("H2S")[0, layer],
    }
    alone = bubble_point(*water, gases)
    assert found["gas_pressure"][0, layer] == pytest.approx(float(alone.pressure), rel=1e-12)
    # free CO2 is what alkalinity leaves of DIC, within carbonate ion and molecules of water
    excess = record.of("DIC")[0, layer] - record.of("alkalinity")[0, layer]
    assert found["carbon_dioxide"][0, layer] == pytest.approx(excess, rel=0.01)


def test_stability_agrees_with_the_formula_for_casts():
    lake = synthetic.lake(200)
    record = synthetic.record(lake, years=1.0)
    found = margins.water(
        record.values, record.tracers, record.depth, record.pressure, lake.site
    )
    gases = {
        "CH4": record.of("CH4")[0],
        "CO2": found["carbon_dioxide"][0],
        "N2": record.of("N2")[0],
        "O2": record.of("O2")[0],
        "H2S": record.of("H2S")[0],
    }
    expected, _ = buoyancy_frequency_squared(
        record.depth,
        found["temperature"][0],
        record.of("salinity")[0],
        record.pressure,
        gases,
        co2_molar_volume=lake.site.co2_molar_volume,
    )
    inner = found["buoyancy_frequency_squared"][0, 1:-1]
    # gravity of the latitude, and argon, are the only differences
    np.testing.assert_allclose(inner, expected, atol=0.004 * expected.max())


def test_argon_goes_with_nitrogen_in_the_step_that_the_air_sets():
    # Hamme & Emerson 2004 for fresh water; the Ar of G7-04 is up to 0.9 % more soluble
    water = np.array([5.0, 15.0, 25.0]), 0.0
    ratio = sea_water_equilibrium("Ar", *water) / sea_water_equilibrium("N2", *water)
    np.testing.assert_allclose(argon_of_nitrogen(*water), ratio, rtol=0.011)


def test_samples_give_by_themselves_the_gas_pressure_of_their_own_water():
    lake = synthetic.lake(100)
    found = margins.of_samples(lake)
    casts = lake.cast.profiles
    gas = casts["CH4"]
    k = 15
    depth = gas.depth[k]
    temperature, salinity = (
        np.interp(depth, casts[name].depth, casts[name].value)
        for name in ("temperature", "salinity")
    )
    pressure = lake.site.air_pressure + 1000.0 * standard_gravity(-2.0) * depth
    water = speciate(
        temperature, salinity, casts["DIC"].value[k], casts["alkalinity"].value[k], pressure
    )
    nitrogen = air_equilibrium("N2", temperature, salinity, lake.site.air_pressure)
    argon = argon_of_nitrogen(temperature, salinity)
    amounts = {"CH4": gas.value[k], "CO2": water.co2, "N2": nitrogen, "Ar": argon * nitrogen}
    expected = float(bubble_point(temperature, salinity, amounts).pressure)
    assert found["gas_pressure"].value[k] == pytest.approx(expected, rel=1e-6)
    assert found["saturation"].value[k] == pytest.approx(expected / pressure, rel=1e-6)
    np.testing.assert_array_equal(found["saturation"].depth, gas.depth)


def test_more_error_of_methane_makes_that_of_the_gas_pressure_of_samples_larger():
    lake = synthetic.lake(100)
    casts = dict(lake.cast.profiles)
    methane = casts["CH4"]
    casts["CH4"] = replace(methane, error=2.0 * methane.error)
    worse = margins.of_samples(replace(lake, cast=Cast(casts)))["gas_pressure"].error
    error = margins.of_samples(lake)["gas_pressure"].error
    assert np.all(worse > error)
    assert np.all(worse < 2.0 * error)  # that of CO2 has not changed
