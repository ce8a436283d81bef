"""Surface exchange from weather, and the weather of a month, against published numbers."""

from dataclasses import replace
from datetime import date

import numpy as np
import pytest

from strata.errors import OutOfRangeError
from strata.lake.climate import (
    Air,
    cloud_of_sun,
    evaporation,
    heat_gain,
    heat_slope,
    sun_above_the_air,
    surface_exchange,
    weather,
)
from strata.lake.site import Climate


def air(temperature=21.5, dew_point=17.0, sun=215.0, wind=2.5, cloud=0.45, pressure=0.86e5):
    """Return a year of equal months in a tropical highland."""
    return Air(*(np.full(12, v) for v in (temperature, dew_point, sun, wind, cloud)), pressure)


def climate(**more):
    """Return a climate of uneven months."""
    month = np.arange(12.0)
    return Climate(
        23 + 0.1 * month, 28 + month, 2 + 0.1 * month, 1e-8 * month, 2e-8 * month, **more
    )


def test_sun_above_the_air_is_that_of_the_worked_example():
    # Allen et al. 1998 (FAO 56), example 8: 3 September at 20 degrees south, 32.2 MJ m-2 per
    # day
    found = sun_above_the_air(-20.0, np.array([246]))[0] * 86400e-6
    assert found == pytest.approx(32.2, abs=0.05)  # printed to one decimal


def test_cloud_is_none_under_a_clear_sky_and_whole_under_the_darkest():
    above = sun_above_the_air(
        3.0, np.array([15, 46, 74, 105, 135, 166, 196, 227, 258, 288, 319, 349])
    )
    assert np.all(cloud_of_sun(0.75 * above, 3.0) < 1e-12)
    np.testing.assert_allclose(cloud_of_sun(0.50 * above, 3.0), 0.5, rtol=1e-12)
    np.testing.assert_allclose(cloud_of_sun(0.25 * above, 3.0), 1.0, rtol=1e-12)


@pytest.mark.parametrize(("sun", "latitude"), [(400.0, 3.0), (5.0, 3.0), (100.0, 80.0)])
def test_sun_that_no_air_lets_through_is_refused(sun, latitude):
    with pytest.raises(OutOfRangeError, match="month"):
        cloud_of_sun(np.full(12, sun), latitude)


def test_nothing_is_exchanged_at_the_equilibrium_and_beside_it_k_times_the_difference():
    weather_over = air()
    found = surface_exchange(weather_over)
    balance = found.equilibrium_temperature
    assert np.abs(heat_gain(balance, weather_over)).max() < 1e-6
    for away in (-1.0, 1.0):
        exact = heat_gain(balance + away, weather_over)
        linear = -found.coefficient * away
        np.testing.assert_allclose(exact, linear, rtol=0.05)  # the balance bends by 4 % per K


@pytest.mark.parametrize("wind", [1.0, 2.5, 6.0])
@pytest.mark.parametrize("damp", [12.0, 17.0, 20.0])
def test_the_balance_agrees_with_the_published_shortcut(wind, damp):
    # Brady, Graves & Geyer 1969, as in Edinger, Brady & Geyer 1974, W m-2, degC, mmHg: K = 4.5
    # +
    # 0.05 E + (beta + 0.47) f, beta = 0.35 + 0.015 t + 0.0012 t^2 at the mean of E and dew
    # point,
    # f = 9.2 + 0.46 W^2 at 7 m, E = dew point + absorbed sun / K; made for sea level, where
    # the air is about 3 K warmer than its dew point
    weather_over = air(temperature=damp + 3.0, dew_point=damp, wind=wind, pressure=101325.0)
    found = surface_exchange(weather_over)
    f = 9.2 + 0.46 * (wind * np.log(7 / 2e-4) / np.log(10 / 2e-4)) ** 2
    balance = damp
    for _ in range(100):
        t = 0.5 * (balance + damp)
        beta = 0.35 + 0.015 * t + 0.0012 * t * t
        k = 4.5 + 0.05 * balance + (beta + 0.47) * f
        balance = damp + 0.94 * 215.0 / k
    print(f"wind {wind}: {found.equilibrium_temperature[0]:.2f} {balance:.2f} degC")
    # they call the shortcut good to a degree or two; its K is a chord, ours the tangent
    assert found.equilibrium_temperature[0] == pytest.approx(balance, abs=1.5)
    assert found.coefficient[0] == pytest.approx(k, rel=0.15)


def test_the_coefficient_is_the_slope_of_the_balance():
    weather_over = air()
    at = np.full(12, 24.0)
    slope = (heat_gain(at - 0.05, weather_over) - heat_gain(at + 0.05, weather_over)) / 0.1
    np.testing.assert_allclose(heat_slope(at, weather_over), slope, rtol=1e-5)


def test_water_at_the_dew_point_does_not_evaporate():
    weather_over = air()
    np.testing.assert_allclose(
        evaporation(weather_over.dew_point, weather_over), 0, atol=1e-20
    )
    # Bowen 1926: in the balance of a warm lake some 4 mm/day leave as vapour
    found = surface_exchange(weather_over).evaporation * 86400e3
    assert 3.0 < found[0] < 5.5


def test_weather_that_would_freeze_the_water_is_refused():
    with pytest.raises(OutOfRangeError, match="month 1 "):
        surface_exchange(air(temperature=1.0, dew_point=0.0, sun=20.0, cloud=0.0))


def test_the_weather_of_a_month_is_the_given_one_with_its_trend():
    given = climate(trend=0.02)
    found = weather(given, date(2037, 3, 15), date(2027, 1, 1), seed=5)
    years = (date(2037, 3, 15) - date(2027, 1, 1)).days / 365.25
    assert found.equilibrium_temperature == pytest.approx(23.2 + 0.02 * years, rel=1e-12)
    assert (found.exchange_coefficient, found.wind_speed) == (30.0, pytest.approx(2.2))
    assert (found.rain, found.evaporation) == (2e-8, 4e-8)


def test_every_month_of_a_year_shares_its_anomaly_and_order_does_not_matter():
    given = climate(temperature_variability=0.5, wind_variability=0.1)
    begin = date(2027, 1, 1)

    def anomaly(year, month, seed=3):
        found = weather(given, date(year, month, 1), begin, seed)
        calm = weather(climate(), date(year, month, 1), begin, seed)
        return (
            found.equilibrium_temperature - calm.equilibrium_temperature,
            found.wind_speed / calm.wind_speed,
        )

    late = anomaly(2090, 5)
    assert anomaly(2030, 2) == pytest.approx(anomaly(2030, 11), rel=1e-9)
    assert anomaly(2090, 5) == late
    assert anomaly(2090, 5) != pytest.approx(anomaly(2091, 5))
    assert anomaly(2090, 5) != pytest.approx(anomaly(2090, 5, seed=4))


def test_many_years_have_the_stated_spread_and_the_stated_mean():
    given = replace(climate(), temperature_variability=0.5, wind_variability=0.15)
    begin, count = date(2027, 1, 1), 3000
    years = [weather(given, date(2000 + k, 1, 1), begin, 11) for k in range(count)]
    warm = np.array([w.equilibrium_temperature for w in years])
    wind = np.array([w.wind_speed for w in years])
    assert warm.mean() == pytest.approx(23.0, abs=4 * 0.5 / np.sqrt(count))  # 4 sigma
    assert warm.std() == pytest.approx(0.5, rel=4 / np.sqrt(2 * count))
    assert wind.mean() == pytest.approx(2.0, rel=4 * 0.15 / np.sqrt(count))
    assert wind.std() / wind.mean() == pytest.approx(0.15, rel=0.08)
    assert wind.min() > 0
