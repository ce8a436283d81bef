"""Mixing laws, sources and conversion arrive in SI, or what is wrong with them is said in words."""

import numpy as np
import pytest

from strata.errors import InputError
from strata.inputs import load_lake

GARGETT = "coefficient_m2_s2 = 2.8e-9\nleast_m2_s = 1e-9\nmost_m2_s = 1e-6\n"
BOUNDS = "least_m2_s = 1e-9\nmost_m2_s = 1e-6\n"
GIVEN = 'law = "given"\ngiven_depth_m = [0, 200, 400]\ngiven_m2_s = [1e-5, 1e-8, 1e-7]\n'
SOURCE = """
[[source]]
tracer = "N2"
top_m = 100
foot_m = 200
rate_mol_m3_yr = 0.3

[[source]]
tracer = "phosphate"
top_m = 0
foot_m = 50
decay_per_yr = 2.0

[[source]]
tracer = "heat"
top_m = 300
foot_m = 400
rate_W_m3 = 1e-4

[[conversion]]
top_m = 200
foot_m = 400
rate_per_yr = 1e-4

[grid]
"""
YEAR = 365.25 * 86400.0


def refusal(folder):
    """Return the messages with which the lake is refused."""
    with pytest.raises(InputError) as caught:
        load_lake(folder.lake)
    return str(caught.value).splitlines()


def test_a_law_brings_its_own_keys(folder):
    folder.spoil(folder.lake, GARGETT, GIVEN)
    mixing = load_lake(folder.lake).mixing
    assert mixing.law == "given"
    np.testing.assert_allclose(mixing.given, [1e-5, 1e-8, 1e-7])
    np.testing.assert_allclose(mixing.given_depth, [0, 200, 400])
    folder.spoil(folder.lake, GIVEN, 'law = "hondzo-stefan"\narea_factor = 0.01\n' + BOUNDS)
    mixing = load_lake(folder.lake).mixing
    assert (mixing.law, mixing.area_factor, mixing.least) == ("hondzo-stefan", 0.01, 1e-9)


def test_other_keys_of_mixing_arrive(folder):
    folder.spoil(
        folder.lake,
        GARGETT,
        GARGETT + "bed_dissipation_mW_m2 = 0.5\nstaircase_window_m = 7\nplunge_mixing = 1.5\n",
    )
    mixing = load_lake(folder.lake).mixing
    assert mixing.bed_dissipation == pytest.approx(5e-4)
    assert (mixing.staircase_window, mixing.plunge_mixing) == (7.0, 1.5)


def test_sources_and_conversion_arrive_in_si(folder):
    folder.spoil(folder.lake, "\n[grid]\n", SOURCE)
    lake = load_lake(folder.lake)
    given, lost, warm = lake.sources
    assert (given.tracer, given.top, given.foot, given.decay) == ("N2", 100, 200, 0.0)
    assert given.rate == pytest.approx(0.3 / YEAR)
    assert (lost.rate, lost.decay) == (0.0, pytest.approx(2.0 / YEAR))
    assert (warm.tracer, warm.rate) == ("heat", 1e-4)
    (conversion,) = lake.conversions
    assert conversion.rate == pytest.approx(1e-4 / YEAR)


@pytest.mark.parametrize(
    ("old", "new", "messages"),
    [
        (
            GARGETT,
            'law = "gargett"\n' + BOUNDS,
            [
                "lake.toml: mixing.coefficient_m2_s2 is missing; a number from 1e-11 to 1e-06 "
                "m2/s2 is allowed (such lakes lie near 3e-9, the ocean at 1e-7)"
            ],
        ),
        (
            GARGETT,
            'law = "hondzo-stefan"\n' + GARGETT,
            [
                'lake.toml: mixing.coefficient_m2_s2 does not belong to law "hondzo-stefan"; '
                "take it out"
            ],
        ),
        (
            GARGETT,
            'law = "garget"\n' + GARGETT,
            [
                'lake.toml: mixing.law is "garget"; "gargett" or "hondzo-stefan" or "given" is '
                "allowed"
            ],
        ),
        (
            GARGETT,
            'law = "given"\n',
            ["lake.toml: mixing.given_m2_s is missing; a list is required"],
        ),
        (
            GARGETT,
            GIVEN.replace("[0, 200, 400]", "[0, 400, 200]"),
            ["lake.toml: mixing.given_depth_m has 200 after 400; depths must rise"],
        ),
        (
            GARGETT,
            GIVEN.replace(", 1e-7]", "]"),
            ["lake.toml: mixing.given_m2_s has 2 values; 3 are required, as in given_depth_m"],
        ),
        (
            GARGETT,
            GIVEN.replace("given_depth_m = [0, 200, 400]\n", ""),
            [
                "lake.toml: mixing.given_depth_m is missing; given_m2_s has 3 values, each at a "
                "depth"
            ],
        ),
        (
            GARGETT,
            GARGETT + "bed_dissipation_mW_m2 = -1\n",
            ["lake.toml: mixing.bed_dissipation_mW_m2 is -1; 0 to 100 mW/m2 is allowed"],
        ),
        (
            "\n[grid]\n",
            SOURCE.replace("foot_m = 200", "foot_m = 80"),
            ["lake.toml: source.1.foot_m is 80; more than top_m (100) is required"],
        ),
        (
            "\n[grid]\n",
            SOURCE.replace("rate_mol_m3_yr = 0.3", "rate_W_m3 = 0.3"),
            ['lake.toml: source.1.rate_W_m3 does not suit "N2"; write rate_mol_m3_yr'],
        ),
        (
            "\n[grid]\n",
            SOURCE.replace("rate_mol_m3_yr = 0.3", ""),
            [
                "lake.toml: source.1.rate_mol_m3_yr is missing; give it, or decay_per_yr for a "
                "loss"
            ],
        ),
        (
            "\n[grid]\n",
            SOURCE.replace("rate_mol_m3_yr = 0.3", "rate_mol_m3_yr = 0.3\ndecay_per_yr = 1"),
            [
                "lake.toml: source.1.decay_per_yr stands beside rate_mol_m3_yr; give one in each "
                "table"
            ],
        ),
        (
            "\n[grid]\n",
            SOURCE.replace("rate_mol_m3_yr = 0.3", "rate_mol_m3_yr = -0.3"),
            ["lake.toml: source.1.rate_mol_m3_yr is -0.3; 0 to 1000 mol/m3/yr is allowed"],
        ),
        (
            "\n[grid]\n",
            SOURCE.replace(
                "top_m = 200\nfoot_m = 400\nrate", "top_m = 200\nfoot_m = 500\nrate"
            ),
            ["lake.toml: conversion.1.foot_m is 500; the lake floor is at 400 m"],
        ),
    ],
)
def test_what_cannot_be_is_refused_in_words(folder, old, new, messages):
    folder.spoil(folder.lake, old, new)
    assert refusal(folder) == messages
