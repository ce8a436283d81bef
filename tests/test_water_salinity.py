"""Salinity from conductivity."""

import numpy as np
import pytest

from strata.errors import OutOfRangeError
from strata.water.salinity import conductivity_at_25, salinity_from_conductivity


def test_conductivity_at_its_reference_stays_as_it_is():
    assert conductivity_at_25(3.0, 25.0) == pytest.approx(3.0, rel=1e-15)


def test_compensation_agrees_with_the_usual_two_percent_per_kelvin():
    # ISO 7888 and common practice: 1.9 to 2.2 % per kelvin near 25 degC in natural waters
    slope = (conductivity_at_25(1.0, 24.0) - conductivity_at_25(1.0, 26.0)) / 2
    assert 0.019 < slope < 0.023


def test_the_cubic_is_one_at_its_own_reference_of_20_degrees():
    # the printed cubic must return the reading at 20 degC; five digits are printed
    ratio = conductivity_at_25(1.0, 25.0) / conductivity_at_25(1.0, 20.0)
    cubic_at_25 = 1.72118 - 0.0541369 * 25 + 1.14842e-3 * 25**2 - 1.222651e-5 * 25**3
    assert ratio == pytest.approx(cubic_at_25, rel=2e-5)


def test_salinity_is_proportional_and_broadcasts():
    found = salinity_from_conductivity([[2.0], [4.0]], [20.0, 25.0], 0.8)
    assert found.shape == (2, 2)
    np.testing.assert_allclose(found[1], 2 * found[0])
    assert found[0, 1] == pytest.approx(1.6)


def test_water_warmer_than_the_source_is_refused():
    with pytest.raises(OutOfRangeError, match=r"temperature is 35 degC.*Ambuehl"):
        conductivity_at_25(1.0, 35.0)
