"""Layers chosen by the program: thin where asked for, growing evenly, never too thick."""

from types import SimpleNamespace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from strata.errors import InputError
from strata.inputs import load_lake
from strata.lake.grid import BESIDE, Zone, graded_faces, zones_of


def ratios(faces):
    """Return how much thicker the thicker of two neighbours is."""
    thickness = np.diff(faces)
    return np.maximum(thickness[1:] / thickness[:-1], thickness[:-1] / thickness[1:])


@given(st.integers(0, 10_000))
@settings(max_examples=50, deadline=None)
def test_layers_are_thin_in_zones_and_grow_evenly_beyond(seed):
    rng = np.random.default_rng(seed)
    floor, thickest = rng.uniform(50, 800), rng.uniform(2, 10)
    ends = np.sort(rng.uniform(0, floor, (3, 2)), axis=1)
    zones = [Zone(top, foot, rng.uniform(0.5, 3)) for top, foot in ends]
    faces = graded_faces(floor, thickest, zones)
    thickness, middle = np.diff(faces), 0.5 * (faces[1:] + faces[:-1])
    assert (faces[0], faces[-1]) == (0.0, floor)
    assert thickness.min() > 0
    assert thickness.max() <= thickest * (1 + 1e-9)
    assert ratios(faces).max() < 1.26  # 1.25 and the step of the integration
    for zone in zones:
        inside = thickness[(middle > zone.top) & (middle < zone.foot)]
        assert inside.max(initial=0.0) <= zone.layer * 1.125  # a layer may straddle the edge


def test_far_from_a_zone_layers_have_the_thickness_asked_for():
    faces = graded_faces(400.0, 4.0, [Zone(180.0, 300.0, 1.0)])
    thickness, middle = np.diff(faces), 0.5 * (faces[1:] + faces[:-1])
    # thickness grows by ln 1.25 per metre: 4 m layers start 13.4 m away
    np.testing.assert_allclose(thickness[(middle < 160) | (middle > 320)], 4.0, rtol=0.05)
    np.testing.assert_allclose(thickness[(middle > 181) & (middle < 299)], 1.0, rtol=0.05)


def test_the_way_of_the_main_gradient_is_thin_and_others_have_a_zone_of_their_own():
    main, other = SimpleNamespace(top=200, foot=212), SimpleNamespace(top=380, foot=396)
    found = zones_of([main, other], main, 1.0, 25.0, 75.0, 400.0)
    assert found == [Zone(175, 287, 1.0), Zone(380 - BESIDE, 400, 2.0)]


def test_a_lake_file_may_leave_the_layers_to_the_program(folder):
    folder.spoil(folder.lake, "layer_m = 8.0", "layer_m = 8.0\nautomatic = true")
    zone = "top_m = {}\nfoot_m = {}\nlayer_m = {}"
    folder.spoil(folder.lake, zone.format(180, 240, "4.0"), zone.format(20, 30, "0.5"))
    faces = load_lake(folder.lake).layer_faces
    thickness, middle = np.diff(faces), 0.5 * (faces[1:] + faces[:-1])
    # the casts of this lake step at 62, 95, 205 (the main one) and 290 m
    assert thickness[(middle > 195) & (middle < 275)].max() <= 1.0 + 1e-9
    for gradient in (62, 95, 290):
        assert np.interp(gradient, middle, thickness) <= 2.0 + 1e-9
    assert np.interp(25, middle, thickness) <= 0.5 + 1e-9  # the user's own zone
    assert thickness.max() > 4.0
    assert ratios(faces).max() < 1.26


@pytest.mark.parametrize(
    ("new", "messages"),
    [
        (
            "layer_m = 8.0\nthin_m = 1.0",
            ["lake.toml: grid.thin_m asks for automatic = true, with which it belongs"],
        ),
        (
            "layer_m = 8.0\nautomatic = true\nthin_m = 9",
            ["lake.toml: grid.thin_m is 9; at most layer_m (8) is allowed"],
        ),
        (
            'layer_m = 8.0\nautomatic = "yes"',
            ['lake.toml: grid.automatic is "yes"; true or false is allowed'],
        ),
        (
            "layer_m = 8.0\nautomatic = true\nthin_m = 0.1\nway_above_m = 900\n"
            "way_below_m = 900",
            [
                "lake.toml: grid.layer_m is 8 and gives 4000 layers; 10 to 2000 layers are "
                "allowed"
            ],
        ),
    ],
)
def test_a_grid_that_cannot_be_is_refused_in_words(folder, new, messages):
    folder.spoil(folder.lake, "layer_m = 8.0", new)
    with pytest.raises(InputError) as caught:
        load_lake(folder.lake)
    assert str(caught.value).splitlines() == messages
