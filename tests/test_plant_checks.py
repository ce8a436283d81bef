"""Every unit of a plant is within its tolerance of its source of truth."""

import numpy as np
import pytest

from tests import plant_checks

CHECKS = [check for checks in plant_checks.EVERY.values() for check in checks]


@pytest.mark.parametrize("check", CHECKS, ids=lambda c: f"{c.function}: {c.source}, {c.span}")
def test_a_unit_is_within_its_tolerance_of_its_source(check):
    errors = np.abs(check.errors())
    assert errors.size > 0
    assert np.all(np.isfinite(errors))
    assert errors.max() <= check.tolerance, f"{errors.max():.3g} {check.unit}"
