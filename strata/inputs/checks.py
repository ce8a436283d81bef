"""Checks that need physics: a cast that cannot stand, water that would bubble, thirsty plants.

The tolerances come from the errors that the surveyor states.
"""

import logging
from collections.abc import Iterator, Mapping
from itertools import groupby
from typing import Any, NamedTuple

import numpy as np
from numpy.typing import NDArray

from strata.column.start import first_day, hydrostatic_pressure, state_of
from strata.column.tracers import TRACERS
from strata.errors import Fault, InputError
from strata.inputs.casts import Origin
from strata.lake.basin import build_basin
from strata.lake.site import Lake, Profile, Site
from strata.margins import water
from strata.water.intrusion import SINK_COEFFICIENT, layer_shares
from strata.water.salinity import salinity_from_conductivity
from strata.water.stability import mixed_layer_depth, standard_gravity

Array = NDArray[np.float64]
log = logging.getLogger(__name__)

#: Standard deviations of the difference of two parcels that count as noise: the largest of
#: some hundred pairs of a neutral pool stays below it in all but one survey of a hundred.
NOISE = 4.0
#: Days in which a plant must not take more than the layer it draws from holds: the time for
#: which a projection holds what it knows of a plant's feed.
DAYS_OF_WATER = 30.0


def with_salinity(profiles: Mapping[str, Profile], factor: float) -> dict[str, Profile]:
    """Return profiles with salinity in place of conductivity [g/kg from mS/cm in situ]."""
    conductivity, temperature = profiles["conductivity"], profiles["temperature"]
    in_situ = np.interp(conductivity.depth, temperature.depth, temperature.value)
    salinity = salinity_from_conductivity(conductivity.value, in_situ, factor)
    above = salinity_from_conductivity(
        conductivity.value + conductivity.error, in_situ, factor
    )
    rest = {name: profile for name, profile in profiles.items() if name != "conductivity"}
    return rest | {"salinity": Profile(conductivity.depth, salinity, above - salinity)}


class Inversion(NamedTuple):
    """Water that is heavier than water below it."""

    depth: float  # m, of the lighter water
    heavier_at: float  # m, of the heavier water above
    size: float  # kg/m3
    noise: float  # kg/m3, what the stated errors explain


def refuse_impossible_column(lake: Lake, origins: Mapping[str, Origin]) -> None:
    """Refuse casts unstable beyond their errors or supersaturated below the mixed layer.

    Raises
    ------
    strata.InputError
        With one fault for each stretch of unstable water and each supersaturated sample.
    """
    depth = lake.cast.profiles["temperature"].depth
    measured = _at(lake.cast.profiles, depth)
    found = _water(measured, depth, lake.site)
    level = levelled_density(depth, found, lake.site)
    noise = _density_noise(lake, measured, found["density"], depth)
    file, column, _ = origins["temperature"]
    faults = []
    small = 0.0
    for inversion in inversions(depth, level, noise):
        if inversion.size > inversion.noise:
            row = origins["temperature"].rows[int(np.searchsorted(depth, inversion.depth))]
            message = (
                f"makes the water at {inversion.depth:g} m lighter than that at "
                f"{inversion.heavier_at:g} m by {inversion.size:.2g} kg/m3; "
                f"{inversion.noise:.2g} kg/m3 is allowed by the stated errors"
            )
            faults.append(Fault(file, f"row {row}, column {column}", message))
        else:
            small = max(small, inversion.size)
    faults += _supersaturated(lake, origins, float(mixed_layer_depth(depth, level)))
    if faults:
        raise InputError(faults)
    if small > 0:
        log.warning(
            "%s: inversions of up to %.2g kg/m3 lie within the stated errors; "
            "they are mixed at the start of a run",
            file,
            small,
        )


def _at(profiles: Mapping[str, Profile], depth: Array) -> dict[str, Array]:
    """Return what was measured at given depths, linear between measurements."""
    return {
        name: np.interp(depth, profile.depth, profile.value)
        for name, profile in profiles.items()
    }


def _water(measured: Mapping[str, Array], depth: Array, site: Site) -> dict[str, Array]:
    """Return density, stability and gas pressure of measured water."""
    values = state_of(measured, depth, site)
    return water(values, TRACERS, depth, hydrostatic_pressure(depth, site), site)


def levelled_density(depth: Array, found: Mapping[str, Array], site: Site) -> Array:
    """Return density freed from pressure [kg m-3], summed from steps at one pressure."""
    squared = found["buoyancy_frequency_squared"][1:-1]
    density = found["density"]
    steps = squared * 0.5 * (density[1:] + density[:-1]) * np.diff(depth)
    return density[0] + np.concatenate(([0.0], np.cumsum(steps))) / standard_gravity(
        site.latitude
    )


def _density_noise(
    lake: Lake, measured: Mapping[str, Array], density: Array, depth: Array
) -> Array:
    """Return the standard deviation of density that the stated errors give [kg m-3]."""
    variance = np.zeros_like(depth)
    for name, profile in lake.cast.profiles.items():
        error = np.interp(depth, profile.depth, profile.error)
        if np.any(error > 0):
            moved = {**measured, name: measured[name] + error}
            variance += (_water(moved, depth, lake.site)["density"] - density) ** 2
    return np.sqrt(variance)


def inversions(depth: Array, density: Array, noise: Array) -> list[Inversion]:
    """Return the worst pair of each stretch of water that is lighter than water above it.

    Parameters
    ----------
    depth, density, noise : ndarray, shape (n,)
        Depth [m], density freed from pressure and its standard deviation [kg m-3].
    """
    heaviest = np.maximum.accumulate(density)
    above = np.maximum.accumulate(np.where(density == heaviest, np.arange(len(density)), 0))
    size = heaviest - density
    allowed = NOISE * np.hypot(noise, noise[above])
    found = []
    for unstable, run in groupby(range(len(depth)), key=lambda place: bool(size[place] > 0)):
        if unstable:
            worst = max(run, key=lambda place: size[place] - allowed[place])
            heavier = depth[above[worst]]
            found.append(Inversion(depth[worst], heavier, size[worst], allowed[worst]))
    return found


def _supersaturated(
    lake: Lake, origins: Mapping[str, Origin], mixed_layer: float
) -> Iterator[Fault]:
    """Find samples below the mixed layer whose gases would form bubbles where they are."""
    depth = lake.cast.profiles["CH4"].depth
    found = _water(_at(lake.cast.profiles, depth), depth, lake.site)
    pressure = hydrostatic_pressure(depth, lake.site)
    file, column, rows = origins["CH4"]
    for place in np.flatnonzero((depth > mixed_layer) & (found["gas_pressure"] > pressure)):
        yield Fault(
            file,
            f"row {rows[place]}, column {column}",
            f"and the other gases make {found['gas_pressure'][place] / 1e5:.1f} bar; at most "
            f"the pressure there, {pressure[place] / 1e5:.1f} bar at {depth[place]:g} m, is "
            "allowed below the mixed layer",
        )


def withdrawal(plant: Mapping[str, Any], lake: Lake) -> Iterator[tuple[str, str]]:
    """Find a plant that takes more water than the layer it draws from can give."""
    depth, flow = plant.get("intake_depth_m"), plant.get("flow_m3_s")
    if depth is None or flow is None or depth >= lake.hypsography.depth[-1]:
        return
    basin = build_basin(lake.hypsography, lake.layer_faces)
    pressure = hydrostatic_pressure(basin.depth, lake.site)
    found = water(first_day(lake), TRACERS, basin.depth, pressure, lake.site)
    squared = np.ascontiguousarray(found["buoyancy_frequency_squared"][1:-1])
    shares = layer_shares(basin.faces, squared, float(depth), float(flow), SINK_COEFFICIENT)
    holds = float(basin.volume[shares > 0].sum())
    most = holds / (DAYS_OF_WATER * 86400.0)
    if flow > most:
        thickness = float(basin.thickness[shares > 0].sum())
        yield (
            "flow_m3_s",
            f"is {flow:g}; the layer of {thickness:.0f} m about the intake at {depth:g} m can "
            f"give at most {most:.3g} m3/s (its water in {DAYS_OF_WATER:g} days)",
        )
