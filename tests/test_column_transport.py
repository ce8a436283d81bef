"""Advection and diffusion of the column against exact solutions and their own promises."""

import numpy as np
import pytest
from column_checks import heat_lost_in_autumn
from front_checks import front_run, graded, layer_means_of
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.linalg import expm
from scipy.special import j0, jn_zeros

from strata.column.transport import DIFFUSION_NUMBER, advect, diffuse, face_weights


@pytest.mark.parametrize(
    ("step", "kappa", "most"),
    # goals of the design: a gradient carried 100 m in 100 years keeps its shape
    [(1.0, 1e-9, 1e-10), (2.0, 1e-8, 5e-11)],
)
def test_a_front_carried_for_a_century_spreads_by_its_own_diffusivity_alone(step, kappa, most):
    values, _, spurious, shift = front_run(np.arange(0.0, 300.0 + step, step), kappa)
    assert abs(spurious) <= most
    assert abs(shift) < 1e-6  # m; a finite-volume scheme moves the first moment exactly
    assert values.min() >= -1e-12
    assert values.max() <= 1 + 1e-12


def test_a_front_keeps_its_shape_across_layers_that_change_thickness():
    # 1 m layers on the path of the front, 4 m elsewhere, changing by at most 1.25 from one to
    # the next; same goal as on even layers
    faces = graded()
    values, wanted, spurious, _ = front_run(faces, 1e-9)
    assert abs(spurious) <= 1e-10
    assert np.abs(values - wanted).max() < 0.03  # of the step of 1
    assert values.min() >= -1e-12
    assert values.max() <= 1 + 1e-12


def test_face_values_are_of_sixth_order_on_uneven_layers():
    errors = []
    for count in (20, 40, 80):
        raw = np.linspace(0, 1, count + 1) + 0.2 / count * np.sin(np.arange(count + 1) * 1.7)
        faces = (raw - raw[0]) / (raw[-1] - raw[0]) * 2 * np.pi
        mean = (np.cos(faces[:-1]) - np.cos(faces[1:])) / np.diff(faces)
        weight, start = face_weights(np.diff(faces))
        value = np.array([weight[f] @ mean[start[f] : start[f] + 6] for f in range(count + 1)])
        errors.append(np.abs(value - np.sin(faces)).max())
    orders = np.log2(np.array(errors[:-1]) / errors[1:])
    print("observed order of the face values:", orders)
    assert orders.min() > 5.0  # one-sided at the ends, where the largest error is


def test_diffusion_in_a_closed_cylinder_follows_the_cosine_solution():
    errors = []
    height, kappa = 100.0, 1e-6
    for count in (25, 50, 100):
        faces = np.linspace(0, height, count + 1)
        time = height**2 / kappa / 20
        steps = 100 * (count // 25)  # second order in time and in space
        values = layer_means_of(lambda z: 1 + np.cos(np.pi * z / height), faces)[:, None]
        conductance = np.full((count + 1, 1), kappa / (height / count))
        work, still = np.empty((4, *values.shape)), np.zeros_like(values)
        for _ in range(steps):
            diffuse(values, conductance, np.diff(faces), still, time / steps, work)
        fade = np.exp(-kappa * (np.pi / height) ** 2 * time)
        exact = layer_means_of(
            lambda z, fade=fade: 1 + fade * np.cos(np.pi * z / height), faces
        )
        errors.append(np.abs(values[:, 0] - exact).max())
    orders = np.log2(np.array(errors[:-1]) / errors[1:])
    print("observed order of diffusion in space:", orders)
    assert orders.min() > 1.9  # second order


def test_diffusion_in_a_basin_of_linear_area_follows_the_bessel_solution():
    # with x = 1 - z/h and area A0 x, A dc/dt = d/dz(A K dc/dz) is Bessel's equation in x: the
    # modes without flux through the surface are J0(j x), J1(j) = 0, and fade at K j^2 / h^2
    height, kappa = 100.0, 1e-6
    root = float(jn_zeros(1, 1)[0])
    errors = []
    for count in (25, 50, 100):
        faces = np.linspace(0, height, count + 1)
        x = 1 - faces / height
        volume = height * (x[:-1] ** 2 - x[1:] ** 2) / 2
        middle = 0.5 * (faces[1:] + faces[:-1])
        values = j0(root * (1 - middle / height))[:, None].copy()
        time = height**2 / kappa / root**2
        steps = 240 * (count // 25)
        conductance = (x * kappa / (height / count))[:, None].copy()
        work, still = np.empty((4, *values.shape)), np.zeros_like(values)
        for _ in range(steps):
            diffuse(values, conductance, volume, still, time / steps, work)
        exact = np.exp(-1) * j0(root * (1 - middle / height))
        inner = slice(0, count - 2)  # the tip holds no water to speak of
        errors.append(np.abs(values[inner, 0] - exact[inner]).max())
    orders = np.log2(np.array(errors[:-1]) / errors[1:])
    print("observed order of diffusion in a cone of linear area:", orders)
    assert orders.min() > 1.7


@given(st.integers(0, 10_000))
@settings(max_examples=30, deadline=None)
def test_random_fields_make_no_new_extreme_and_lose_nothing(seed):
    rng = np.random.default_rng(seed)
    count = int(rng.integers(8, 60))
    volume = rng.uniform(0.2, 5.0, count)
    values = rng.uniform(0.0, 20.0, (count, 3))
    low, high, held = values.min(axis=0), values.max(axis=0), volume @ values
    flow = rng.uniform(-1.0, 1.0) * np.ones(count + 1)
    flow[0] = flow[-1] = 0.0
    weight, start = face_weights(volume)
    edge, flux = np.empty((count + 1, 3)), np.empty((count + 1, 3))
    before = values.copy()
    still = np.zeros_like(values)
    advect(values, flow, volume, weight, start, 0.15, still, edge, flux)
    np.testing.assert_allclose(volume @ values, held, rtol=1e-13)
    # away from the ends, where water piles up against the closed faces
    inner = slice(1, -1)
    span = high - low
    assert np.all(values[inner] >= before.min(axis=0) - 1e-12 * span)
    assert np.all(values[inner] <= before.max(axis=0) + 1e-12 * span)
    conductance = 10 ** rng.uniform(-6, 6, (count + 1, 3))
    values = before.copy()
    work = np.empty((4, *values.shape))
    diffuse(values, conductance, volume, still, 1.0, work)
    np.testing.assert_allclose(volume @ values, held, rtol=1e-11)
    assert np.all(values >= low - 1e-12 * span)
    assert np.all(values <= high + 1e-12 * span)


@pytest.mark.parametrize("number", [0.1, 0.8, DIFFUSION_NUMBER, 1.01 * DIFFUSION_NUMBER, 30.0])
def test_a_pulse_in_the_top_layer_falls_off_downward(number):
    # at 2 the second layer would be 5 % of the pulse ahead of the first
    values = np.zeros((40, 1))
    values[0] = 1.0
    conductance = np.full((41, 1), number)
    diffuse(values, conductance, np.ones(40), np.zeros((40, 1)), 1.0, np.empty((4, 40, 1)))
    assert np.all(np.diff(values[:, 0]) <= 1e-15)
    assert np.all(values >= 0.0)


def test_a_cooling_lake_loses_the_same_heat_in_steps_of_a_day_and_of_hours():
    daily, hourly = heat_lost_in_autumn(1.0), heat_lost_in_autumn(0.125)
    print(f"heat lost in steps of 1 d over that in steps of 3 h: {daily / hourly:.4f}")
    assert daily == pytest.approx(hourly, rel=0.01)  # first order in the step: 0.3 % a day


def test_what_sources_give_is_spread_as_it_comes_to_second_order():
    # against the exponential of the same layers: u' = A u + s
    count, time = 20, 30.0
    conductance = np.full((count + 1, 1), 1.0)
    inner = np.full(count - 1, 1.0)
    matrix = np.diag(inner, 1) + np.diag(inner, -1)
    matrix -= np.diag(matrix.sum(axis=1))
    source = np.zeros((count, 1))
    source[-1], source[5] = 1.0, -0.3
    whole = np.zeros((count + 1, count + 1))
    whole[:count, :count], whole[:count, count] = matrix, source[:, 0]
    exact = expm(time * whole)[:count, count]
    errors = []
    for steps in (30, 60, 120):
        values = np.zeros((count, 1))
        work = np.empty((4, count, 1))
        for _ in range(steps):
            diffuse(values, conductance, np.ones(count), source, time / steps, work)
        assert values.sum() == pytest.approx(0.7 * time, rel=1e-12)
        errors.append(np.abs(values[:, 0] - exact).max())
    orders = np.log2(np.array(errors[:-1]) / errors[1:])
    print("observed order of sources in diffusion:", orders, errors)
    assert orders.min() > 1.8
