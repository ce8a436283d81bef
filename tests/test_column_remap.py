"""A column on other layers keeps what it holds and makes no new extreme."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from strata.column.remap import remap
from strata.errors import OutOfRangeError
from strata.lake.basin import Basin, build_basin
from strata.lake.site import Hypsography

LAKE = Hypsography(
    np.array([0.0, 50, 100, 200, 300, 400]), np.array([900.0, 800, 700, 530, 330, 0]) * 1e6
)


def random_faces(rng, count):
    """Return uneven layers of the lake; neighbours may differ by a factor of four."""
    thickness = rng.uniform(0.5, 2.0, count)
    return np.concatenate([[0.0], np.cumsum(thickness)]) * 400.0 / thickness.sum()


def box(faces):
    """Return layers of a lake with upright walls."""
    return Basin(faces, np.ones(len(faces)), np.diff(faces))


@given(st.integers(0, 10_000))
@settings(max_examples=60, deadline=None)
def test_any_column_on_any_layers_keeps_its_inventories_and_its_range(seed):
    rng = np.random.default_rng(seed)
    old = build_basin(LAKE, random_faces(rng, int(rng.integers(10, 300))))
    new = build_basin(LAKE, random_faces(rng, int(rng.integers(10, 300))))
    values = rng.uniform(-5, 20, (old.layers, 3))
    values[:, 1] = 1000.0 + 1e-3 * values[:, 1]
    values[:, 2] = 0.0
    found = remap(values, old, new)
    held = old.volume @ np.abs(values)
    assert np.all(np.abs(new.volume @ found - old.volume @ values) <= 1e-13 * held)
    span = np.ptp(values, axis=0)
    # round-off of the volumes, which are differences of an integral
    assert np.all(found >= values.min(axis=0) - 1e-10 * span)
    assert np.all(found <= values.max(axis=0) + 1e-10 * span)


def test_the_same_layers_give_the_same_values():
    rng = np.random.default_rng(1)
    basin = build_basin(LAKE, random_faces(rng, 200))
    values = rng.uniform(0, 20, (200, 4))
    # the last layer is a millionth of the lake, whose sums carry the round-off
    np.testing.assert_allclose(remap(values, basin, basin), values, rtol=1e-10)


def test_finer_layers_inside_the_old_ones_give_the_old_means_back():
    rng = np.random.default_rng(2)
    coarse_faces = random_faces(rng, 60)
    fine_faces = np.unique(np.concatenate([coarse_faces, random_faces(rng, 150)]))
    coarse, fine = build_basin(LAKE, coarse_faces), build_basin(LAKE, fine_faces)
    values = rng.uniform(0, 20, (60, 2))
    back = remap(remap(values, coarse, fine), fine, coarse)
    np.testing.assert_allclose(back, values, rtol=1e-10)


def test_a_monotone_profile_stays_monotone():
    rng = np.random.default_rng(3)
    old, new = (build_basin(LAKE, random_faces(rng, n)) for n in (80, 190))
    values = np.sort(rng.uniform(0, 20, (80, 1)) ** 3, axis=0)
    assert np.diff(remap(values, old, new)[:, 0]).min() >= -1e-9 * values.max()


def test_a_smooth_profile_is_met_with_third_order_or_better():
    errors = []
    for count in (40, 80, 160):
        old = box(np.linspace(0, 1, count + 1))
        new = box(np.linspace(0, 1, int(1.37 * count) + 1))

        def means(basin):
            sums = -np.cos(3 * basin.faces) / 3  # integral of sin(3 z), monotone on half of it
            return (np.diff(sums) / basin.thickness)[:, None]

        inner = slice(6, -6)  # a limiter flattens the extremum; look where it does not act
        away = np.abs(new.depth - np.pi / 6) > 0.1
        error = np.abs(remap(means(old), old, new) - means(new))[:, 0]
        errors.append(error[inner][away[inner]].max())
    orders = np.log2(np.array(errors[:-1]) / errors[1:])
    print("observed order of the remap:", orders)
    assert orders.min() > 2.7


def test_another_lake_is_refused():
    small, large = box(np.linspace(0, 10, 11)), box(np.linspace(0, 12, 11))
    with pytest.raises(OutOfRangeError, match="10 m3, as in the old"):
        remap(np.ones((10, 1)), small, large)
