"""The column on its first day: layer means of the casts, made consistent with each other."""

from collections.abc import Mapping

import numpy as np
from numpy.typing import NDArray

from strata.column.tracers import (
    ALKALINITY,
    CALCIUM,
    DIC,
    METHANE,
    NITROGEN,
    OXYGEN,
    PHOSPHATE,
    SALINITY,
    SULFIDE,
    TEMPERATURE,
    TRACERS,
)
from strata.compiled import broadcast
from strata.gas import air
from strata.gas.speciation import alkalinity_of, dic_of
from strata.lake.basin import build_basin
from strata.lake.casts import between_samples, layer_means
from strata.lake.site import Lake, Site
from strata.water.density import potential_temperature
from strata.water.stability import standard_gravity

Array = NDArray[np.float64]

#: Tracers that a cast may leave out, and what stands for them then.
_SIMPLE = {
    "alkalinity": ALKALINITY,
    "calcium": CALCIUM,
    "CH4": METHANE,
    "O2": OXYGEN,
    "H2S": SULFIDE,
    "phosphate": PHOSPHATE,
}


def first_day(lake: Lake) -> Array:
    """Return the tracers of the layers on the day of the casts, (n, 10)."""
    basin = build_basin(lake.hypsography, lake.layer_faces)
    profiles = lake.cast.profiles
    salinity = profiles["salinity"]
    means = {
        name: layer_means(
            profile
            if len(profile.depth) >= len(salinity.depth)
            else between_samples(profile, salinity),
            basin.faces,
        )
        for name, profile in profiles.items()
    }
    return state_of(means, basin.depth, lake.site)


def hydrostatic_pressure(depth: Array, site: Site) -> Array:
    """Return the pressure at depths [Pa] in water of 1000 kg m-3."""
    return np.asarray(site.air_pressure + 1000.0 * standard_gravity(site.latitude) * depth)


def state_of(measured: Mapping[str, Array], depth: Array, site: Site) -> Array:
    """Return the tracers of water of which some quantities were measured, (n, 10).

    Nitrogen that no cast gives is at equilibrium with the air at the temperature in place; DIC
    follows from free CO2 where that was measured.

    Parameters
    ----------
    measured : mapping
        By the names of :class:`strata.lake.site.Cast`, each of n values.
    depth : ndarray, shape (n,)
    site : Site
    """
    pressure = hydrostatic_pressure(depth, site)
    in_situ, salinity = measured["temperature"], measured["salinity"]
    values = np.zeros((len(depth), len(TRACERS)))
    values[:, TEMPERATURE] = broadcast(potential_temperature)(in_situ, pressure)
    values[:, SALINITY] = salinity
    for name, column in _SIMPLE.items():
        if name in measured:
            values[:, column] = measured[name]
    if "N2" in measured:
        values[:, NITROGEN] = measured["N2"]
    else:
        values[:, NITROGEN] = air.equilibrium("N2", in_situ, salinity, site.air_pressure)
    if "alkalinity" not in measured:
        values[:, ALKALINITY] = alkalinity_of(
            in_situ, salinity, measured["DIC"], ph=measured["pH"], pressure=pressure
        )
    if "DIC" in measured:
        values[:, DIC] = measured["DIC"]
    else:
        known = {name.lower(): measured[name] for name in ("CO2", "pH") if name in measured}
        values[:, DIC] = dic_of(
            in_situ, salinity, measured["alkalinity"], pressure=pressure, **known
        )
    return values
