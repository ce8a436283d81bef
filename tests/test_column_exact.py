"""The whole column against solutions on paper and against two other ways to solve the same."""

import numpy as np
import pytest
from column_checks import (
    bed_heat,
    breathing_box,
    closed_column,
    filling,
    lifting,
    mixed_box,
    orders,
    two_springs,
)
from scipy.integrate import solve_ivp
from second_solutions import against_lines, moving_front

from strata.column.reactions import react
from strata.column.tracers import ALKALINITY, DIC, METHANE, OXYGEN, SULFIDE, TRACERS


def test_between_two_springs_the_steady_profile_is_exponential():
    # streams and diffusion take turns in a step, which is off by the flow of a step over the
    # layer of a spring; steps so short that only the layers tell
    errors = [two_springs(25, 0.4).worst, two_springs(75, 0.1).worst]
    print(f"exponential profile: errors {errors}, order {orders(errors, 3)}")
    assert errors[1] < 1e-4  # of a range of 0.4
    assert orders(errors, 3)[0] > 1.7  # second order


@pytest.mark.parametrize("case", [mixed_box, breathing_box])
def test_a_mixed_box_fills_and_decays_as_its_exponential(case):
    errors = [case(dt).worst for dt in (4.0, 2.0, 1.0)]
    print(f"{case.__name__}: errors {errors}, orders {orders(errors, 2)}")
    # both end near 0.3-0.6; a step of a day takes 0.2 to 2 % of what is left to do
    assert errors[-1] < 0.01
    assert orders(errors, 2).min() > 0.9  # first order, as the parts of a step take turns


def methane_and_oxygen(steps, seconds=40 * 86400.0):
    """Return methane, oxygen, DIC, sulfide and alkalinity of one layer after many steps."""
    values = np.zeros((1, len(TRACERS)))
    values[0, [METHANE, OXYGEN, SULFIDE, DIC, ALKALINITY]] = 0.10, 0.25, 0.02, 1.0, 1.0
    books = np.zeros(len(TRACERS))
    for _ in range(steps):
        react(values, RATES, 0.0, np.array([0.0, 1.0]), np.ones(1), seconds / steps, books)
    return values[0, [METHANE, OXYGEN, DIC, SULFIDE, ALKALINITY]], books


#: Oxidation up to 4 mmol/m3/day, half rates, sulfide, demand of 1 mmol/m3/day, no removal.
RATES = np.array([4e-3 / 86400, 0.005, 0.02, 5.0 / 86400, 1e-3 / 86400, 0.0])


def test_oxidation_runs_as_its_rate_equations():
    def rate(_, now):
        methane, oxygen, _, sulfide, _ = now
        air = oxygen / (RATES[2] + oxygen)
        first = RATES[0] * methane / (RATES[1] + methane) * air
        second = RATES[3] * sulfide * oxygen
        third = RATES[4] * oxygen / (0.005 + oxygen)
        return [-first, -2 * first - 2 * second - third, first + third, -second, -2 * second]

    exact = solve_ivp(
        rate, (0, 40 * 86400.0), [0.10, 0.25, 1.0, 0.02, 1.0], rtol=1e-10, atol=1e-13
    ).y[:, -1]
    errors = [np.abs(methane_and_oxygen(n)[0] - exact).max() for n in (40, 80, 160)]
    print(f"oxidation: errors {errors}, orders {orders(errors, 2)}")
    assert errors[0] < 1e-3  # mol/m3, with steps of a day
    assert orders(errors, 2).min() > 0.9


@pytest.mark.parametrize("steps", [1, 3, 40])
def test_no_reaction_overdraws_however_long_its_step(steps):
    (methane, oxygen, dic, sulfide, alkalinity), books = methane_and_oxygen(steps, 3e8)
    assert min(methane, oxygen, sulfide) >= 0.0
    # 2 O2 for each CH4 and H2S, 1 for each DIC that no methane made
    spent = 2 * (0.10 - methane) + 2 * (0.02 - sulfide) + (dic - 1.0 - (0.10 - methane))
    assert 0.25 - oxygen == pytest.approx(spent, abs=1e-13)
    assert alkalinity - 1.0 == pytest.approx(-2 * (0.02 - sulfide), abs=1e-13)
    assert books[METHANE] == pytest.approx(methane - 0.10, abs=1e-14)


@pytest.mark.parametrize("layers", [16, 32, 64])
def test_heat_of_the_bed_is_conducted_along_a_straight_line(layers):
    found = bed_heat(layers)
    print(f"bed heat, {layers} layers: {found.worst:.1e} of {np.ptp(found.exact):.3f} K")
    # the molecular part of the diffusivity, 0.7 %, is taken as one number on paper
    assert found.worst < 1e-3 * np.ptp(found.exact)


def test_a_seeping_spring_fills_its_layer_and_pushes_up_what_lies_above():
    cases = [filling(n) for n in (50, 100, 200)]
    errors = [np.abs(c.found - c.exact).mean() for c, _, _ in cases]
    print(f"filling: mean errors {errors}, orders {orders(errors, 2)}")
    for _, entered, column in cases:
        assert column.inventory()[-1] == pytest.approx(entered, rel=1e-12)
    assert errors[-1] < 5e-4
    assert orders(errors, 2).min() > 1.3  # the profile has a kink, which allows 1.5


def test_a_spring_of_neutral_water_lifts_all_above_it_and_nothing_below():
    found, entered, column = lifting()
    print(f"lifted by 6.3 m: salinity off by {found.worst:.1e} g/kg")
    assert column.inventory()[-1] == pytest.approx(entered, rel=1e-12)
    assert found.worst < 3e-5  # g/kg, a millimetre of the lifting


def test_the_column_agrees_with_the_method_of_lines():
    cases = [against_lines(n) for n in (50, 100, 200)]
    errors = [np.abs(c.found - c.exact).mean() / np.ptp(c.exact) for c in cases]
    worst = [c.worst / np.ptp(c.exact) for c in cases]
    print(f"by lines: mean {errors}, largest {worst}, orders {orders(errors, 2)}")
    # two springs, bed flux and diffusion for 30 years; the largest lies in the last layer
    assert worst[-1] < 2e-3
    assert errors[-1] < 1e-4
    assert orders(errors, 2).min() > 1.5


@pytest.mark.parametrize(("diffusivity", "most"), [(1e-8, 1e-3), (1e-9, 5e-3)])
def test_the_column_agrees_with_layers_that_move_with_the_water(diffusivity, most):
    coarse, fine = (moving_front(n, 30.0, diffusivity) for n in (100, 200))
    errors = f"{coarse.worst:.1e} at 2 m, {fine.worst:.1e} at 1 m layers"
    print(f"moving layers, K {diffusivity:g}: {errors}")
    # a front of 2 m, carried 40 m: the scheme alone widens it, the other does not
    assert fine.worst < most
    assert fine.worst < coarse.worst / 3


def test_a_closed_column_keeps_what_it_holds_for_a_century():
    drift = closed_column(36_525)  # steps of a day; goal of the design: 1e-12
    print("drift of the inventories in 36,525 steps:", dict(zip(TRACERS, drift, strict=True)))
    assert drift.max() <= 1e-12
