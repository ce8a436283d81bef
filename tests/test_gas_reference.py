"""The gas room against tables of independent libraries; the list argues tolerances."""

import numpy as np
import property_checks
import pytest


@pytest.mark.parametrize("check", property_checks.GAS, ids=lambda c: f"{c.function}: {c.span}")
def test_agrees_with_its_source_of_truth(check):
    errors = np.asarray(check.errors())
    assert errors.size > 0
    assert np.all(np.isfinite(errors))
    assert np.abs(errors).max() <= check.tolerance, check.source
