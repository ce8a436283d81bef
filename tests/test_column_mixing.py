"""Diffusivities, pooling and the surface layer against published numbers and promises."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from strata.column.mixing import (
    kelley_factor,
    kelley_flux_ratio,
    pair_stability,
    pool,
    staircase_diffusivity,
    staircase_drive,
    turbulent_diffusivity,
)
from strata.column.surface import deepen, transfer_velocity, wind_power

GRAVITY, CONTRACTION = 9.81, 0.75e-3


def stability_of(values, mass, space, pressure, distance):
    """Return buoyancy frequency squared at the faces and how many are unstable."""
    stability = np.zeros(len(values) + 1)
    physics = np.array([GRAVITY, CONTRACTION])
    unstable = pair_stability(values, mass, space, pressure, distance, physics, stability)
    return stability, unstable


def random_column(rng, count):
    """Return a column in no order at all."""
    values = np.column_stack(
        [rng.uniform(20, 28, count), rng.uniform(0, 6, count), rng.uniform(0, 100, count)]
    )
    mass, space = rng.uniform(0, 4, count), rng.uniform(0, 3e-3, count)
    volume = rng.uniform(0.5, 3.0, count) * 1e8
    pressure = 0.9e5 + 9810.0 * np.arange(count + 1)
    return values, mass, space, volume, pressure


def test_the_flux_law_of_kelley_gives_its_published_flux():
    # Kelley 1990: density ratio 3, step 10 mK, alpha 2.6e-4, kappa 1.46e-7, nu 9e-7 give
    # 0.100 W m-2 and a flux ratio of 0.171 (worked from the printed law)
    alpha, kappa, nu, ratio = 2.6e-4, 1.46e-7, 9e-7, 3.0
    step, jump = 0.7, 0.010
    warming = jump / step
    stability = (ratio - 1) * 9.81 * alpha * warming
    drive = staircase_drive(alpha, 9.81, kappa, nu, step)
    heat, solute = staircase_diffusivity(stability, warming, alpha, 9.81, drive)
    assert heat * warming * 998.0 * 4182.0 == pytest.approx(0.100, abs=0.001)
    assert kelley_flux_ratio(ratio) == pytest.approx(0.171, abs=0.0005)
    # flux ratio = beta F_S / (alpha F_T) = K_S R / K_T
    assert solute * ratio / heat == pytest.approx(kelley_flux_ratio(ratio), rel=1e-12)
    assert kelley_factor(2.0) > kelley_factor(3.0) > kelley_factor(9.0)


def test_double_diffusion_acts_only_where_the_law_holds():
    drive = staircase_drive(2.6e-4, 9.81, 1.46e-7, 9e-7, 0.7)
    assert staircase_diffusivity(1e-6, 1e-3, 2.6e-4, 9.81, drive)[0] > 0
    for stability, warming, push in (
        (1e-6, -1e-3, drive),
        (1e-3, 1e-3, drive),
        (1e-6, 1e-3, 0.0),
    ):
        assert staircase_diffusivity(stability, warming, 2.6e-4, 9.81, push) == (0.0, 0.0)


def test_turbulent_diffusivity_is_a_over_n_within_its_bounds():
    within = turbulent_diffusivity(1e-4, 2.8e-9, 0.0, 0.5, 1e-12, 1e-6)
    assert within == pytest.approx(2.8e-7, rel=1e-12)
    assert turbulent_diffusivity(1e-4, 2.8e-9, 0.0, 0.5, 1e-6, 1e-5) == 1e-6
    assert turbulent_diffusivity(0.0, 2.8e-9, 0.0, 0.5, 1e-9, 1e-6) == 1e-6
    assert turbulent_diffusivity(-1e-9, 2.8e-9, 0.0, 0.5, 1e-9, 1e-6) == 1e-6


@given(st.integers(0, 10_000))
@settings(max_examples=40, deadline=None)
def test_pooling_leaves_no_overturn_and_loses_nothing(seed):
    rng = np.random.default_rng(seed)
    count = int(rng.integers(3, 60))
    values, mass, space, volume, pressure = random_column(rng, count)
    held = volume @ values
    ranges = values.min(axis=0), values.max(axis=0)
    distance = np.ones(count + 1)
    before, _ = stability_of(values, mass, space, pressure, distance)
    pool(values, mass, space, volume, pressure, CONTRACTION, before)
    stability, _ = stability_of(values, mass, space, pressure, distance)
    # equal neighbours may differ in the last digit of their density
    assert stability[1:-1].min() > -1e-14
    np.testing.assert_allclose(volume @ values, held, rtol=1e-13)
    assert np.all(values >= ranges[0] - 1e-12)
    assert np.all(values <= ranges[1] + 1e-12)


def test_pooling_does_nothing_to_a_stable_column():
    values = np.column_stack([np.linspace(26, 22, 40), np.linspace(1, 6, 40)])
    before, gas, pressure = values.copy(), np.zeros(40), np.linspace(1e5, 5e5, 41)
    stability, unstable = stability_of(values, gas, gas, pressure, np.ones(41))
    assert unstable == 0
    assert pool(values, gas, gas, np.ones(40), pressure, CONTRACTION, stability) == 0
    assert np.array_equal(values, before)


def test_pooling_ends_where_stability_is_negative_by_round_off_alone():
    # two layers that differ by less than their density can tell: no block grows from there
    values = np.column_stack([np.full(4, 24.0), [1.0, 2.0, 2.0, 3.0]])
    stability = np.array([0.0, 1e-4, -1e-19, 1e-4, 0.0])
    before = values.copy()
    pressure = np.linspace(1e5, 2e5, 5)
    still = np.zeros(4)
    pool(values, still, still.copy(), np.ones(4), pressure, CONTRACTION, stability)
    assert np.array_equal(values, before)


def energy_of(values, mass, space, volume, depth, pressure):
    """Return the potential energy [J] of a column that is compared at one pressure."""
    from strata.water.density import parcel_density

    rho = [
        parcel_density(values[i, 0], values[i, 1], pressure, mass[i], space[i], CONTRACTION)
        for i in range(len(values))
    ]
    return -GRAVITY * np.sum(np.array(rho) * volume * depth)


@pytest.mark.parametrize("energy", [1.0, 40.0, 150.0, 700.0])
def test_wind_lifts_just_the_water_its_energy_pays_for(energy):
    # a warm layer over a linear salt gradient; density mixes linearly to 0.1 % here
    count = 60
    values = np.column_stack([np.full(count, 24.0), np.linspace(1.0, 2.0, count)])
    mass, space, volume = np.zeros(count), np.zeros(count), np.ones(count)
    face = np.arange(count + 1.0)
    depth, pressure = face[:-1] + 0.5, np.full(count + 1, 1e5)
    before = energy_of(values, mass, space, volume, depth, 1e5)
    held = volume @ values
    reached = deepen(
        values,
        mass,
        space,
        volume,
        depth,
        face,
        pressure,
        np.array([GRAVITY, CONTRACTION, 0.2]),
        energy,
    )
    gained = energy_of(values, mass, space, volume, depth, 1e5) - before
    # whole layers cost exactly their work; the part of the last layer to a few per cent
    assert gained == pytest.approx(energy, rel=0.05)
    assert 0 < reached < count
    np.testing.assert_allclose(volume @ values, held, rtol=1e-13)


def test_cooling_deepens_the_surface_layer_and_spends_only_part_of_its_energy():
    count = 40
    face = np.arange(count + 1.0)
    reached = []
    for efficiency in (0.0, 0.5):
        values = np.column_stack([np.linspace(25.0, 22.0, count), np.full(count, 1.0)])
        values[0, 0] = 20.0
        reached.append(
            deepen(
                values,
                np.zeros(count),
                np.zeros(count),
                np.ones(count),
                face[:-1] + 0.5,
                face,
                np.full(count + 1, 1e5),
                np.array([GRAVITY, CONTRACTION, efficiency]),
                0.0,
            )
        )
    assert 1.0 < reached[0] < reached[1] < count


def test_gas_transfer_follows_cole_and_caraco():
    # Cole & Caraco 1998: k600 = 2.07 + 0.215 U^1.7 cm/h; at 3 m/s 3.46 cm/h
    assert transfer_velocity(3.0, 600.0) * 360000.0 == pytest.approx(3.46, abs=0.01)
    assert transfer_velocity(3.0, 2400.0) == pytest.approx(transfer_velocity(3.0, 600.0) / 2)


def test_wind_power_grows_with_the_cube_of_the_wind():
    assert wind_power(6.0, 1.0, 1.3e-3, 998.0) == pytest.approx(
        8 * wind_power(3.0, 1.0, 1.3e-3, 998.0), rel=1e-12
    )
