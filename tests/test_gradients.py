"""Gradients are found where they are put, measured as they are, and followed."""

import numpy as np
import pytest

from strata.gradients import REFERENCE_DENSITY, StabilityProfiles, follow, main_gradient

GRAVITY = 9.78
DEPTH = np.arange(1.0, 400.0, 1.0)


def bell(depth: float, width: float, step: float) -> np.ndarray:
    """Stability of an error-function step of density: a Gaussian of that deviation."""
    shape = np.exp(-0.5 * ((DEPTH - depth) / width) ** 2) / (width * np.sqrt(2 * np.pi))
    return GRAVITY / REFERENCE_DENSITY * step * shape


def test_an_error_function_step_has_its_own_depth_strength_and_thickness():
    (found,) = StabilityProfiles(DEPTH, bell(205.3, 5.0, 1.2), GRAVITY).gradients(0)
    assert found.depth == pytest.approx(205.3, abs=0.1)
    # a Gaussian exceeds a tenth of its peak over 2 sqrt(2 ln 10) = 4.292 deviations ...
    assert found.thickness == pytest.approx(4.292 * 5.0, abs=0.5)
    # ... which hold 96.8 % of the step; smoothing widens the extent a little
    assert 0.968 * 1.2 < found.strength < 1.2
    assert found.peak == pytest.approx(bell(205.0, 5.0, 1.2).max(), rel=0.01)


def test_all_gradients_are_reported_and_the_main_one_has_the_largest_step():
    stability = bell(62, 3, 0.4) + bell(95, 4, 0.3) + bell(205, 5, 1.0) + bell(290, 4, 0.5)
    found = StabilityProfiles(DEPTH, stability, GRAVITY).gradients(0)
    np.testing.assert_allclose([g.depth for g in found], [62, 95, 205, 290], atol=0.7)
    assert main_gradient(found).depth == pytest.approx(205, abs=0.5)


def test_a_thin_sharp_gradient_is_not_main_when_a_broad_one_has_the_larger_step():
    stability = bell(100, 2, 0.4) + bell(220, 8, 1.0)
    found = StabilityProfiles(DEPTH, stability, GRAVITY).gradients(0)
    assert main_gradient(found).depth == pytest.approx(220, abs=0.5)


def test_noise_does_not_split_a_gradient():
    noise = np.random.default_rng(4).normal(0.0, 0.15, len(DEPTH))
    stability = bell(205, 6, 1.0) * (1 + noise)
    found = main_gradient(StabilityProfiles(DEPTH, stability, GRAVITY).gradients(0))
    assert found.depth == pytest.approx(205, abs=1.0)
    assert found.strength == pytest.approx(1.0, rel=0.06)


def test_a_sinking_gradient_is_followed_though_a_seasonal_one_grows_stronger():
    years = np.arange(0, 50, 1 / 12)
    sinking = 205 + 0.6 * years
    season = 1.5 * (1 + np.sin(2 * np.pi * years))
    stability = np.array(
        [bell(z, 5, 1.0) + bell(25, 3, s) for z, s in zip(sinking, season, strict=True)]
    )
    profiles = StabilityProfiles(DEPTH, stability, GRAVITY)
    track = follow(profiles, np.full(len(years), 60.0))
    np.testing.assert_allclose([g.depth for g in track], sinking, atol=0.3)
    np.testing.assert_allclose([g.strength for g in track], 0.98, atol=0.02)


def test_what_is_left_of_a_destroyed_gradient_is_measured_where_it_was():
    stability = np.array([bell(205, 5, 1.0), 0.2 * bell(205, 5, 1.0), 0.0 * DEPTH])
    track = follow(StabilityProfiles(DEPTH, stability, GRAVITY), np.full(3, 60.0))
    np.testing.assert_allclose([g.strength for g in track], [0.98, 0.196, 0.0], atol=0.01)


def test_a_column_without_any_gradient_is_refused():
    profiles = StabilityProfiles(DEPTH, np.zeros((2, len(DEPTH))), GRAVITY)
    with pytest.raises(ValueError, match="no gradient of density"):
        follow(profiles, np.full(2, 60.0))
