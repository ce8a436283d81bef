"""A limits file becomes limits, and says whether they were invented."""

import pytest

from strata.errors import InputError
from strata.inputs import load_limits


def refusal(folder):
    with pytest.raises(InputError) as caught:
        load_limits(folder.limits)
    return str(caught.value).splitlines()


def test_sound_limits_arrive_with_their_sense(folder):
    folder.spoil(folder.limits, "invented = true", "invented = true\ninternal_wave_m = 4")
    limits = load_limits(folder.limits)
    saturation, sinking = limits.limits
    assert (saturation.quantity, saturation.bound, saturation.sense) == (
        "largest_saturation",
        0.9,
        "most",
    )
    assert sinking.bound == 20
    assert limits.wave_tilt == 4
    assert limits.note == "Invented limits, no law: made up for a test"


def test_limits_that_were_not_invented_name_their_source_alone(folder):
    folder.spoil(folder.limits, "invented = true", "invented = false")
    assert load_limits(folder.limits).note == "made up for a test"


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        (
            "invented = true\n",
            "",
            "limits.toml: invented is missing; true or false is allowed",
        ),
        (
            "at_most = 0.9\n",
            "",
            "limits.toml: limit.1.at_least is missing; give at_least or at_most, one of them",
        ),
        (
            "at_most = 0.9",
            "at_most = 0.9\nat_least = 0.1",
            "limits.toml: limit.1.at_least stands beside at_most; give at_least or at_most, one "
            "of them",
        ),
        (
            'quantity = "largest_saturation"',
            'quantity = "largest_staturation"',
            'limits.toml: limit.1.quantity is "largest_staturation", which is not known; the '
            "nearest known is largest_saturation",
        ),
        (
            "at_most = 0.9",
            'at_most = "high"',
            'limits.toml: limit.1.at_most is "high"; a number is required',
        ),
        (
            "at_most = 0.9",
            'at_most = 0.9\nagainst = "baseline"',
            "limits.toml: limit.1.against does not suit largest_saturation, which is a plain "
            "value",
        ),
    ],
)
def test_a_mistake_gets_one_message_with_its_key(folder, old, new, message):
    folder.spoil(folder.limits, old, new)
    assert refusal(folder) == [message]
