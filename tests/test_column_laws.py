"""Mixing laws, the staircase on any layers, rivers that plunge, sources, decay and age."""

from dataclasses import replace

import numpy as np
import pytest
from column_checks import (
    AREA,
    DAY,
    YEAR,
    Compared,
    column_of,
    orders,
    plain_lake,
    run,
    seal,
    spring,
    staircase,
)

from strata.column.column import REFERENCE_DENSITY, Column
from strata.column.laws import MIXING_EFFICIENCY, bed_coefficient, law_of, staircase_window
from strata.column.ledger import LEDGER_TERMS
from strata.column.mixing import turbulent_diffusivity
from strata.column.tracers import DIC, METHANE, TEMPERATURE, TRACERS, index
from strata.lake.basin import build_basin
from strata.lake.climate import Weather
from strata.lake.site import Conversion, Hypsography, Mixing, River, WaterSource

BASIN = build_basin(
    Hypsography(np.array([0.0, 50.0, 100.0]), np.array([100.0, 60.0, 5.0]) * 1e6),
    np.linspace(0, 100, 51),
)


def diffusivity(mixing, stability):
    """Return the turbulent diffusivity of a law at the middle of the basin [m2 s-1]."""
    law = law_of(mixing, BASIN)
    return turbulent_diffusivity(
        stability, law.coefficient[25], 0.0, law.power, law.least, law.most
    )


def test_the_law_of_hondzo_and_stefan_has_its_published_numbers():
    # Hondzo & Stefan 1993: K = 8.17e-4 A^0.56 (N^2)^-0.43 cm2/s, A in km2; for 100 km2 and
    # N^2 = 1e-4 s-2 that is 8.17e-4 * 13.18 * 52.48 = 0.565 cm2/s
    mixing = Mixing(0.0, 1e-12, 1e-2, 0.0, law="hondzo-stefan")
    assert diffusivity(mixing, 1e-4) == pytest.approx(5.65e-5, rel=1e-3)
    less = replace(mixing, area_factor=0.01)
    assert diffusivity(less, 1e-4) == pytest.approx(5.65e-7, rel=1e-3)
    assert diffusivity(replace(less, most=1e-7), 1e-4) == 1e-7


def test_the_law_of_gargett_falls_with_the_root_of_stability():
    mixing = Mixing(2.8e-9, 1e-12, 1e-2, 0.0)
    assert diffusivity(mixing, 1e-4) == pytest.approx(2.8e-7)
    assert diffusivity(mixing, 1e-6) == pytest.approx(2.8e-6)


def test_a_given_profile_holds_whatever_the_stability():
    table = Mixing(0, 0, 0, 0.0, law="given", given_depth=np.array([0.0, 100.0]),
                   given=np.array([1e-4, 1e-8]))  # fmt: skip
    for stability in (1e-3, 1e-8, 0.0, -1e-6):
        assert diffusivity(table, stability) == pytest.approx(1e-6)  # log-linear
    constant = replace(table, given_depth=None, given=np.array([3e-7]))
    assert diffusivity(constant, -1.0) == pytest.approx(3e-7)


def test_a_given_profile_is_what_the_column_mixes_with():
    lake = plain_lake(np.linspace(0, 100, 51))
    mixing = Mixing(0, 0, 0, 0.0, law="given", given=np.array([2e-6]))
    column = column_of(replace(lake, mixing=mixing), np.linspace(1.0, 3.0, 50))
    column.advance(Weather(20, 0, 0, 0, 0), [], [], 1, DAY)
    np.testing.assert_allclose(column.seen.diffusivity[1:-1], 2e-6)


def test_currents_along_the_bed_give_just_the_power_they_lose():
    # K rho N^2 over the efficiency is power per volume: over the lake, what the bed takes
    mixing = Mixing(0, 0, 1.0, 0.0, bed_dissipation=1e-3)
    times_stability = bed_coefficient(mixing, BASIN, REFERENCE_DENSITY)
    per_volume = times_stability * REFERENCE_DENSITY / MIXING_EFFICIENCY
    power = np.sum(0.5 * (per_volume[1:] + per_volume[:-1])[1:-1] * BASIN.volume[1:-1])
    slopes = BASIN.area[1] - BASIN.area[-2]
    assert power == pytest.approx(1e-3 * slopes, rel=0.05)  # two layers lie at the ends
    assert turbulent_diffusivity(1e-5, 1e-12, times_stability[25], 0.5, 0.0, 1.0) == (
        pytest.approx(1e-12 / 1e-5**0.5 + times_stability[25] / 1e-5)
    )


def test_a_staircase_passes_the_same_heat_through_layers_of_any_thickness():
    flux = {layer: staircase(layer) for layer in (0.5, 1.0, 2.0, 4.0)}
    print("staircase over a window of 7 m:", {k: f"{v:.4f} W/m2" for k, v in flux.items()})
    # goal of the design: within 10 % from 0.5 to 4 m
    assert max(flux.values()) <= 1.10 * min(flux.values())


def test_the_window_of_a_staircase_is_the_pair_of_layers_where_it_is_thinner():
    mixing = Mixing(1e-9, 1e-9, 1e-6, 0.7, staircase_window=0.0)
    window, reach = staircase_window(BASIN, mixing)
    at = BASIN.depth[window[1:-1]] + reach[1:-1, :2] * np.diff(BASIN.depth)[window[1:-1]]
    np.testing.assert_allclose(at[:, 0], BASIN.depth[:-1])
    np.testing.assert_allclose(at[:, 1], BASIN.depth[1:])
    # where the site gives none, ten steps
    mixing = Mixing(1e-9, 1e-9, 1e-6, 1.0)
    window, reach = staircase_window(BASIN, mixing)
    at = BASIN.depth[window] + reach[:, :2] * np.diff(BASIN.depth)[window]
    np.testing.assert_allclose(at[10:40], BASIN.faces[10:40, None] + [-5.0, 5.0])
    np.testing.assert_allclose(at[:, 1] - at[:, 0], reach[:, 2])


# Rivers -----------------------------------------------------------------------------------


def river_lake(salinity, plunge=0.5):
    """Return a column of salinity 1 to 3 g/kg with one river, followed by a tag."""
    water = {"DIC": 1.0, "alkalinity": 1.0}
    lake = plain_lake(
        np.linspace(0, 100, 51),
        rivers=(River("Ulm", 10.0, 20.0, salinity, water),),
        diffusivity=1e-12,
    )
    lake = replace(lake, mixing=replace(lake.mixing, plunge_mixing=plunge))
    values = column_of(lake, np.linspace(1.0, 3.0, 50)).values
    return Column(lake, np.pad(values, ((0, 0), (0, 1))), ("river_Ulm",))


def test_a_light_river_stays_on_top_and_takes_nothing_along():
    column = river_lake(0.5)
    (give,) = column.natural(column.surroundings())
    assert give.given[0] == 1.0
    assert give.entrained.sum() == 0.0


@pytest.mark.parametrize("mixing", [0.0, 1.0, 3.0])
def test_a_heavy_river_plunges_to_the_level_of_its_mixture(mixing):
    column = river_lake(2.0, mixing)
    (give,) = column.natural(column.surroundings())
    neutral = 1.0 + (2.0 - 1.0) / (1.0 + mixing)  # g/kg, with surface water of 1 g/kg
    assert give.entrained[0] == pytest.approx(10.0 * mixing)
    salinity = np.linspace(1.0, 3.0, 50)
    assert give.given @ salinity == pytest.approx(neutral, abs=0.06)  # a layer is 0.04 g/kg
    assert give.given.sum() == pytest.approx(1.0)


def test_a_river_heavier_than_all_ends_on_the_floor():
    column = river_lake(9.0)
    (give,) = column.natural(column.surroundings())
    assert give.given[-1] == 1.0


def test_river_water_is_followed_and_booked():
    column = river_lake(2.0)
    run(column, 0.5 * YEAR, DAY)
    tag = index("river_Ulm", column.tags)
    inside = column.inventory()[tag]
    assert inside == pytest.approx(10.0 * 0.5 * YEAR, rel=0.05)  # hardly any has left
    assert column.books[LEDGER_TERMS.index("rivers"), tag] == pytest.approx(5.0 * YEAR)
    assert column.ledger_error().max() < 1e-12


# Sources, decay, conversion, age ----------------------------------------------------------


def test_sources_add_what_they_say_where_they_say_it():
    sources = (
        WaterSource("N2", 20.0, 50.0, rate=1e-9),
        WaterSource("heat", 50.0, 100.0, rate=1e-4),
    )
    lake = replace(plain_lake(np.linspace(0, 100, 34)), sources=sources)
    column = column_of(lake, np.linspace(1.0, 3.0, 33))
    seal(column)
    before = column.inventory()
    run(column, YEAR, DAY)
    gained = column.inventory() - before
    assert gained[TRACERS.index("N2")] == pytest.approx(1e-9 * YEAR * 30.0 * AREA, rel=1e-12)
    joules = gained[TEMPERATURE] * column.heat_capacity
    assert joules == pytest.approx(1e-4 * YEAR * 50.0 * AREA, rel=1e-9)
    booked = column.books[LEDGER_TERMS.index("sources")]
    np.testing.assert_allclose(booked, gained, rtol=1e-9, atol=1e-3)


def test_decay_follows_its_exponential():
    lake = replace(
        plain_lake(np.linspace(0, 100, 11)),
        sources=(WaterSource("phosphate", 0.0, 100.0, decay=1.0 / YEAR),),
    )
    errors = []
    for dt in (8.0, 4.0, 2.0):
        column = column_of(lake, np.linspace(1.0, 3.0, 10), phosphate=0.4)
        run(column, 2 * YEAR, dt * DAY, visits=1)
        errors.append(abs(column.values[5, -1] - 0.4 * np.exp(-2.0)))
        assert column.ledger_error().max() < 1e-13
    print(f"decay: errors {errors}, orders {orders(errors, 2)}")
    assert orders(errors, 2).min() > 0.9


def test_free_co2_turns_into_methane_and_no_carbon_is_lost():
    still = plain_lake(np.linspace(0, 100, 11), diffusivity=1e-12)
    lake = replace(still, conversions=(Conversion(50.0, 100.0, 0.1 / YEAR),))
    column = column_of(lake, np.linspace(1.0, 3.0, 10), DIC=40.0, alkalinity=20.0)
    seal(column)
    carbon = column.values[:, DIC] + column.values[:, METHANE]
    free = column.free_co2()[-1]
    run(column, YEAR, DAY)
    after = column.values[:, DIC] + column.values[:, METHANE]
    np.testing.assert_allclose(after.sum(), carbon.sum(), rtol=1e-13)
    # bicarbonate barely answers to CO2 taken off, so free CO2 itself decays
    made = column.values[-1, METHANE]
    assert made == pytest.approx(free * (1 - np.exp(-0.1)), rel=0.01)
    assert column.values[0, METHANE] < 1e-6


def test_the_age_of_a_mixed_box_is_what_inflow_leaves_it():
    floor, flow = 20.0, 100.0
    water = {"DIC": 1.0, "alkalinity": 1.0}
    lake = plain_lake(np.linspace(0, floor, 11), rivers=(River("r", flow, 20.0, 0.0, water),))
    values = column_of(lake, 0.0).values
    column = Column(lake, np.pad(values, ((0, 0), (0, 1))), ("age",))
    storm = Weather(20.0, 0.0, 25.0, 0.0, 0.0)
    stay = AREA * floor / flow / YEAR  # years
    for years in (0.3, 0.6, 1.5):
        run(column, 0.3 * YEAR * (1 if years < 1 else 3), DAY, storm, visits=4)
        found = Compared(None, column.values[:, -1], stay * (1 - np.exp(-years / stay)))
        assert found.worst < 0.003 * stay
    assert column.ledger_error().max() < 1e-12


def test_the_age_over_a_spring_is_the_time_the_water_took():
    faces, flow = np.linspace(0, 100, 101), 100.0
    deep = spring("deep", 99.5, flow, 1.0, salinity=3.0)
    lake = plain_lake(faces, springs=(deep,), diffusivity=1e-14)
    values = column_of(lake, np.linspace(1.0, 3.0, 100)).values
    column = Column(lake, np.pad(values, ((0, 0), (0, 1))), ("age",))
    run(column, 2 * YEAR, DAY)
    risen = (99.0 - column.basin.depth) * AREA / flow / YEAR  # to the middle of each layer
    passed = slice(60, 98)  # the first water has come to 37 m
    # water stays some in the layer that the spring enters
    late = AREA * 1.0 / flow / YEAR
    np.testing.assert_allclose(column.values[passed, -1], risen[passed] + late, rtol=0.02)
    np.testing.assert_allclose(column.values[:30, -1], 2.0, rtol=1e-3)  # was there before
