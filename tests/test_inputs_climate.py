"""A climate is given as the answer of the surface or as the weather over it, never by halves."""

import numpy as np
import pytest

from strata.errors import InputError
from strata.inputs import load_lake

MONTHS = "[" + ", ".join(["{}"] * 12) + "]"


def months(value):
    """Return twelve equal months as a file holds them."""
    return MONTHS.format(*[value] * 12)


ANSWER = (
    f"equilibrium_temperature_degC = {months(23)}\n"
    f"exchange_coefficient_W_m2_K = {months(30)}\n"
)
WEATHER = (
    f"air_temperature_degC = {months(21.5)}\n"
    f"dew_point_degC = {months(17)}\n"
    f"sun_W_m2 = {months(215)}\n"
)
EVAPORATION = f"evaporation_mm_day = {months(4)}\n"


def refusal(folder):
    """Return the messages with which the lake is refused."""
    with pytest.raises(InputError) as caught:
        load_lake(folder.lake)
    return str(caught.value).splitlines()


def test_weather_gives_exchange_and_evaporation(folder):
    folder.spoil(folder.lake, ANSWER, WEATHER)
    folder.spoil(folder.lake, EVAPORATION, "")
    climate = load_lake(folder.lake).climate
    assert np.all((climate.equilibrium_temperature > 24) & (climate.equilibrium_temperature < 26))
    assert np.all((climate.exchange_coefficient > 25) & (climate.exchange_coefficient < 32))
    assert np.all((climate.evaporation > 3e-8) & (climate.evaporation < 7e-8))


def test_evaporation_that_is_given_is_kept(folder):
    folder.spoil(folder.lake, ANSWER, WEATHER + f"cloud_share = {months(0.2)}\n")
    np.testing.assert_allclose(load_lake(folder.lake).climate.evaporation, 4e-3 / 86400)


def test_variability_arrives(folder):
    folder.spoil(
        folder.lake,
        ANSWER,
        ANSWER + "temperature_variability_K = 0.3\nwind_variability_share = 0.1\n",
    )
    climate = load_lake(folder.lake).climate
    assert (climate.temperature_variability, climate.wind_variability) == (0.3, 0.1)


@pytest.mark.parametrize(
    ("old", "new", "messages"),
    [
        (
            ANSWER,
            ANSWER + WEATHER,
            [
                "lake.toml: climate.air_temperature_degC stands beside "
                "equilibrium_temperature_degC; give either the exchange of the surface or the "
                "weather"
            ],
        ),
        (
            ANSWER,
            "",
            [
                "lake.toml: climate.equilibrium_temperature_degC is missing; give "
                "equilibrium_temperature_degC and exchange_coefficient_W_m2_K, or "
                "air_temperature_degC, dew_point_degC and sun_W_m2"
            ],
        ),
        (
            EVAPORATION,
            "",
            [
                "lake.toml: climate.evaporation_mm_day is missing; a list of 12 monthly values "
                "is required"
            ],
        ),
        (
            ANSWER,
            WEATHER.replace("dew_point_degC", "dew_point"),
            ["lake.toml: climate.dew_point has no unit; write dew_point_degC"],
        ),
        (
            ANSWER,
            WEATHER.replace("dew_point_degC = [17", "dew_point_degC = [23"),
            [
                "lake.toml: climate.dew_point_degC.1 is 23; at most the air temperature of the "
                "month, 21.5 degC, is allowed"
            ],
        ),
        (
            ANSWER,
            WEATHER.replace("215", "415"),
            [
                "lake.toml: climate.sun_W_m2 gives no cloud: sun is 415 W/m2 in month 1; 25 to "
                "344 W/m2 is allowed at latitude 3 (sun above the air)"
            ],
        ),
        (
            ANSWER,
            WEATHER.replace("21.5", "2").replace("17", "0").replace("215", "20"),
            [
                "lake.toml: climate.sun_W_m2 gives no cloud: sun is 20 W/m2 in month 1; 25 to "
                "344 W/m2 is allowed at latitude 3 (sun above the air)"
            ],
        ),
        (
            ANSWER,
            WEATHER.replace("21.5", "1").replace("17", "0").replace("215", "20")
            + f"cloud_share = {months(0.5)}\n",
            [
                "lake.toml: climate cannot be: the weather of month 1 would bring the water below "
                "0 or above 60 degC; liquid water in between is allowed (heat balance of the "
                "surface)"
            ],
        ),
        (
            ANSWER,
            ANSWER + "wind_variability_share = 0.9\n",
            ["lake.toml: climate.wind_variability_share is 0.9; 0 to 0.5 is allowed"],
        ),
    ],
)
def test_a_climate_that_cannot_be_read_is_refused_in_words(folder, old, new, messages):
    folder.spoil(folder.lake, old, new)
    assert refusal(folder) == messages
