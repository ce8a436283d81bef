"""Buoyancy frequency squared: exact cases, conventions, and a fresh cast against gsw."""

import numpy as np
import pytest

from strata import OutOfRangeError, water
from strata.constants import ATMOSPHERE
from strata.water.density import in_situ_temperature, potential_temperature


def test_a_well_mixed_adiabatic_column_is_neutral():
    depth = np.linspace(0.0, 400.0, 41)
    pressure = ATMOSPHERE + 9780.0 * depth
    temperature = [in_situ_temperature(24.0, p) for p in pressure]
    squared, middle = water.buoyancy_frequency_squared(depth, temperature, 3.0, pressure)
    np.testing.assert_allclose(squared, 0.0, atol=1e-14)
    np.testing.assert_array_equal(middle, 0.5 * (depth[1:] + depth[:-1]))


def test_an_isothermal_column_is_stable_because_of_its_lapse_rate():
    depth = np.array([0.0, 100.0])
    pressure = ATMOSPHERE + 9780.0 * depth
    squared, _ = water.buoyancy_frequency_squared(depth, 24.0, 0.0, pressure)
    # alpha g Gamma rho g at 24 degC: 2.5e-4 x 9.8 x 1.77e-8 x 9780
    assert float(squared[0]) == pytest.approx(4.3e-7, rel=0.05)


def test_heavier_water_on_top_is_unstable():
    squared, _ = water.buoyancy_frequency_squared([0, 10], 20.0, [2.0, 1.0], [1e5, 2e5])
    assert squared[0] < 0


def test_dissolved_gas_counts():
    place = ([0.0, 10.0], 24.0, 3.0, [1e5, 2e5])
    plain, _ = water.buoyancy_frequency_squared(*place)
    heavy, _ = water.buoyancy_frequency_squared(*place, {"CO2": [0.0, 20.0]})
    light, _ = water.buoyancy_frequency_squared(*place, {"CH4": [0.0, 20.0]})
    assert light[0] < plain[0] < heavy[0]


def test_potential_temperature_at_the_middle_pressure_is_what_is_compared():
    depth, pressure = np.array([100.0, 120.0]), np.array([1.1e6, 1.3e6])
    theta = [potential_temperature(24.0, 1.1e6), potential_temperature(24.1, 1.3e6)]
    there = [in_situ_temperature(value, 1.2e6) for value in theta]
    upper, lower = water.density(there, [2.0, 2.5], 1.2e6)
    squared, _ = water.buoyancy_frequency_squared(
        depth, [24.0, 24.1], [2.0, 2.5], pressure, gravity=9.8
    )
    expected = 9.8 * (lower - upper) / (0.5 * (lower + upper) * 20.0)
    assert float(squared[0]) == pytest.approx(float(expected), rel=1e-9)


@pytest.mark.parametrize("depth", [[0.0], [0.0, 0.0], [10.0, 0.0], [0.0, np.nan]])
def test_depths_that_do_not_rise_are_refused(depth):
    with pytest.raises(OutOfRangeError, match="rise strictly"):
        water.buoyancy_frequency_squared(depth, 20.0, 1.0, 1e5)


def test_gravity_follows_the_latitude():
    # normal gravity of the 1980 ellipsoid at the equator and the pole
    assert water.standard_gravity(0.0) == pytest.approx(9.780327, abs=1e-6)
    assert water.standard_gravity(90.0) == pytest.approx(9.832186, abs=1e-5)


def test_agrees_with_gsw_on_a_fresh_cast():
    gsw = pytest.importorskip("gsw", reason="gsw is not installed")
    chance = np.random.default_rng(77)
    depth = np.arange(0.0, 400.0, 8.0)
    middles = np.sort(chance.uniform(40, 360, 4))
    steps = sum(1 / (1 + np.exp(-(depth - m) / 6.0)) for m in middles)
    salinity, temperature = 1.0 + 1.1 * steps, 23.0 + 0.6 * steps
    sea = 0.98 * depth  # dbar
    ct = gsw.CT_from_t(salinity, temperature, sea)
    theirs, _ = gsw.Nsquared(salinity, ct, sea, lat=-2.0)
    ours, _ = water.buoyancy_frequency_squared(
        depth,
        temperature,
        salinity,
        ATMOSPHERE + 1e4 * sea,
        haline_contraction=0.7586512e-3,
        gravity=water.standard_gravity(-2.0),
    )
    # gsw turns dbar into metres by its own density: hydrostatic pressure, not 0.98 dbar/m
    spacing = np.diff(sea) * 1e4 / (np.diff(depth) * water.standard_gravity(-2.0) * 999.0)
    np.testing.assert_allclose(ours / spacing, theirs, rtol=0, atol=0.02 * theirs.max())
