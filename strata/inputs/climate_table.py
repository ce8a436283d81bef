"""The climate of a lake file, given as the answer of the surface or as the weather over it."""

from collections.abc import Iterator, Mapping
from typing import Any

import numpy as np

from strata.errors import OutOfRangeError
from strata.inputs import units
from strata.inputs.schema import ClimateTable, SiteTable
from strata.inputs.tables import attributes, filled, keys
from strata.lake.climate import Air, cloud_of_sun, surface_exchange
from strata.lake.site import Climate

#: The two ways to say how the surface answers; the first ends with evaporation, which else
#: follows.
ANSWER = ("equilibrium_temperature_degC", "exchange_coefficient_W_m2_K", "evaporation_mm_day")
WEATHER = ("air_temperature_degC", "dew_point_degC", "sun_W_m2")


def climate_of(model: ClimateTable, site: SiteTable) -> Climate:
    """Return the frozen climate of a table; weather is turned into surface exchange.

    Raises
    ------
    strata.OutOfRangeError
        If no liquid water would be in balance with the weather.
    """
    given = {units.split(key)[0]: units.to_si(key, value) for key, value in filled(model)}
    values = attributes(model, Climate)
    if model.equilibrium_temperature_degC is None:
        pressure = float(units.to_si("air_pressure_bar", site.air_pressure_bar))
        sun = given["sun"]
        cloud = given.get("cloud")
        found = surface_exchange(
            Air(
                temperature=given["air_temperature"],
                dew_point=given["dew_point"],
                sun=sun,
                wind_speed=given["wind_speed"],
                cloud=cloud_of_sun(sun, site.latitude_deg) if cloud is None else cloud,
                pressure=pressure,
            )
        )
        values["equilibrium_temperature"] = found.equilibrium_temperature
        values["exchange_coefficient"] = found.coefficient
        values.setdefault("evaporation", found.evaporation)
    return Climate(**values)


def climate_faults(
    written: Any, sound: Mapping[str, Any], latitude: float | None
) -> Iterator[tuple[str, str]]:
    """Find what is wrong between the keys of a climate.

    Parameters
    ----------
    written : object
        The table as the user wrote it.
    sound : mapping
        What is left of it without faulty values.
    latitude : float or None
        Of the site, where that is sound.
    """
    if not isinstance(written, dict) or not written.keys() <= keys(ClimateTable).keys():
        return
    answer = [key for key in ANSWER[:2] if key in written]
    weather = [key for key in (*WEATHER, "cloud_share") if key in written]
    if answer and weather:
        yield (
            f"climate.{weather[0]}",
            f"stands beside {answer[0]}; give either the exchange of the surface or the "
            "weather",
        )
        return
    if not answer and not weather:
        yield (
            f"climate.{ANSWER[0]}",
            f"is missing; give {ANSWER[0]} and {ANSWER[1]}, or {', '.join(WEATHER[:2])} and"
            f" {WEATHER[2]}",
        )
        return
    for key in WEATHER if weather else ANSWER:
        if key not in written:
            yield f"climate.{key}", "is missing; a list of 12 monthly values is required"
    yield from _weather_faults(sound, latitude)


def _weather_faults(
    sound: Mapping[str, Any], latitude: float | None
) -> Iterator[tuple[str, str]]:
    """Find months whose weather cannot be."""
    air, dew = sound.get(WEATHER[0]), sound.get(WEATHER[1])
    if air is not None and dew is not None:
        for month, (warm, damp) in enumerate(zip(air, dew, strict=True), 1):
            if damp > warm:
                yield (
                    f"climate.{WEATHER[1]}.{month}",
                    f"is {damp:g}; at most the air temperature of the month, {warm:g} degC, is"
                    " allowed",
                )
    sun = sound.get(WEATHER[2])
    if sun is not None and latitude is not None and "cloud_share" not in sound:
        try:
            cloud_of_sun(np.asarray(sun, dtype=np.float64), latitude)
        except OutOfRangeError as error:
            yield f"climate.{WEATHER[2]}", f"gives no cloud: {error}"
