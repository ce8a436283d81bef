"""Random numbers belong to seed, purpose and index, whatever was drawn before."""

import numpy as np
import pytest
from scipy.stats import kstest

from strata.randomness import generator


def test_the_same_key_gives_the_same_numbers_in_any_order():
    late_first = [generator(7, "members", k).random(3) for k in (5, 1, 0)]
    early_first = [generator(7, "members", k).random(3) for k in (0, 1, 5)]
    np.testing.assert_array_equal(late_first, early_first[::-1])


@pytest.mark.parametrize(
    "other", [(8, "members", 0), (7, "weather", 0), (7, "members", 1), (2**63, "members", 0)]
)
def test_another_seed_purpose_or_index_gives_other_numbers(other):
    assert not np.any(generator(7, "members", 0).random(50) == generator(*other).random(50))


def test_first_numbers_of_neighbouring_indices_are_independent_and_even():
    first = np.array([generator(1, "years", k).random() for k in range(4000)])
    assert kstest(first, "uniform").pvalue > 1e-3
    assert abs(np.corrcoef(first[:-1], first[1:])[0, 1]) < 4 / np.sqrt(4000)  # 4 sigma
