"""What is derived from a column: saturation, lift to bubbling, gas in place, stability.

Every function takes one column or a whole run: ``layers`` is the last axis, and whatever axes
come before it (time) are kept.  Depth is positive down, pressures are absolute, and the
hydrostatic pressure of a layer is that at its middle.
"""

from collections.abc import Callable, Mapping, Sequence

import numpy as np
from numpy.typing import ArrayLike, NDArray

from strata.column.start import hydrostatic_pressure, state_of
from strata.column.tracers import DIC, METHANE, TRACERS
from strata.compiled import broadcast
from strata.constants import ATMOSPHERE, GAS_CONSTANT, ZERO_CELSIUS
from strata.gas import bubble_point, speciate
from strata.gas.air import argon_of_nitrogen
from strata.gradients import REFERENCE_DENSITY
from strata.lake.site import Lake, Profile, Site
from strata.species import SPECIES
from strata.water import thermal_expansion
from strata.water.density import gas_mass_and_volume, in_situ_temperature, parcel_density
from strata.water.stability import first_depth, standard_gravity

Array = NDArray[np.float64]

#: Volume of one mole of ideal gas at 0 degC and 1 atm [m3 mol-1].
NORMAL_MOLAR_VOLUME = GAS_CONSTANT * ZERO_CELSIUS / ATMOSPHERE
#: Dissolved oxygen below which water no longer counts as oxic: 2 mg/L, the usual bound of
#: hypoxia (Diaz & Rosenberg 2008, Science 321:926-929) [mol m-3].
OXIC = 2.0 / 31.998
YEAR = np.timedelta64(365, "D")


# What the water is --------------------------------------------------------------------------


def water(
    values: Array, tracers: Sequence[str], depth: Array, pressure: Array, site: Site
) -> dict[str, Array]:
    """Return what the state of the column means: density, free CO2, gas pressure, stability.

    Parameters
    ----------
    values : ndarray, shape (..., layers, tracers)
        Potential temperature, salinity and concentrations.
    tracers : sequence of str
        Names of the columns.
    depth, pressure : ndarray, shape (layers,)
        Of the middle of the layers [m], [Pa].
    site : Site

    Returns
    -------
    dict
        By name of the variable of a result; besides ``potential_density`` and
        ``reactive_gas_pressure``, that of CH4, CO2 and H2S alone.
    """
    potential, salinity, dic, alkalinity = (
        np.ascontiguousarray(values[..., tracers.index(name)])
        for name in ("temperature", "salinity", "DIC", "alkalinity")
    )
    temperature = broadcast(in_situ_temperature)(potential, pressure)
    carbonate = speciate(temperature, salinity, dic, alkalinity, pressure)
    gases = {gas: values[..., tracers.index(gas)] for gas in ("CH4", "N2", "O2", "H2S")}
    argon = argon_of_nitrogen(temperature, salinity)
    gases |= {"CO2": carbonate.co2, "Ar": argon * gases["N2"]}
    mass, volume = gas_mass_and_volume(gases, site.co2_molar_volume)

    def density_at(level: ArrayLike) -> Array:
        parcels = (potential, salinity, level, mass, volume, site.haline_contraction)
        return np.asarray(broadcast(parcel_density)(*parcels))

    bubble = bubble_point(temperature, salinity, gases, laws=site.laws)
    partial = {gas: bubble.composition[gas] * bubble.pressure for gas in ("CH4", "CO2", "H2S")}
    return {
        "temperature": temperature,
        "density": density_at(pressure),
        "potential_density": density_at(site.air_pressure),
        "buoyancy_frequency_squared": stability(
            potential, salinity, (mass, volume), depth, pressure, site
        ),
        "carbon_dioxide": carbonate.co2,
        "ph": carbonate.ph,
        "gas_pressure": bubble.pressure,
        "methane_partial_pressure": partial["CH4"],
        "carbon_dioxide_partial_pressure": partial["CO2"],
        "reactive_gas_pressure": sum(partial.values()),
    }


# How close to bubbling ----------------------------------------------------------------------


def stability(
    potential: Array,
    salinity: Array,
    load: tuple[Array, Array],
    depth: Array,
    pressure: Array,
    site: Site,
) -> Array:
    """Return buoyancy frequency squared at the faces [s-2]; NaN at the surface and the floor.

    Neighbouring parcels are brought to the pressure between them, so that the adiabatic lapse
    rate and compressibility are in it.

    Parameters
    ----------
    potential, salinity : ndarray, shape (..., layers)
        Potential temperature [degC], salinity [g kg-1].
    load : tuple of ndarray
        Mass [kg m-3] and volume [m3 m-3] of the dissolved gases.
    depth, pressure : ndarray, shape (layers,)
        Of the middle of the layers [m], [Pa].
    site : Site
    """
    between = 0.5 * (pressure[1:] + pressure[:-1])
    bring = broadcast(parcel_density)
    upper, lower = (
        bring(
            potential[..., part],
            salinity[..., part],
            between,
            load[0][..., part],
            load[1][..., part],
            site.haline_contraction,
        )
        for part in (slice(-1), slice(1, None))
    )
    faces = np.full((*potential.shape[:-1], len(depth) + 1), np.nan)
    gravity = standard_gravity(site.latitude)
    faces[..., 1:-1] = gravity * (lower - upper) / (0.5 * (lower + upper)) / np.diff(depth)
    return faces


def lift_to_bubbling(
    depth: Array, pressure: Array, gas_pressure: Array, surface: float
) -> Array:
    """Return how far each parcel must rise, unmixed, to form its first bubble [m].

    The parcel keeps its gas pressure (temperature, salinity and composition do not change on
    the way) and meets it where the hydrostatic pressure has fallen to it.  NaN where the
    parcel would reach the surface without bubbling; negative where it bubbles already.

    Parameters
    ----------
    depth, pressure : ndarray, shape (layers,)
        Middle of the layers [m] and hydrostatic pressure there [Pa].
    gas_pressure : ndarray, shape (..., layers)
        Total gas pressure [Pa].
    surface : float
        Air pressure on the lake [Pa].
    """
    depths = np.concatenate(([0.0], depth))
    pressures = np.concatenate(([surface], pressure))
    # below the deepest layer the last slope goes on, for water beyond saturation
    slope = (pressures[-1] - pressures[-2]) / (depths[-1] - depths[-2])
    meets = np.interp(gas_pressure, pressures, depths)
    beyond = np.maximum(gas_pressure - pressures[-1], 0.0) / slope
    return np.where(gas_pressure > surface, depth - meets - beyond, np.nan)


def below(face_depth: Array, level: ArrayLike) -> NDArray[np.bool_]:
    """Return which layers lie wholly below a depth [m], shape (..., layers)."""
    foot = np.asarray(level, dtype=np.float64)[..., np.newaxis]
    return np.asarray(face_depth[:-1] >= foot - 1e-6)


def largest(values: Array, depth: Array, where: NDArray[np.bool_]) -> tuple[Array, Array]:
    """Return the largest value among the chosen layers and its depth [m]; NaN without any."""
    masked = np.where(where & np.isfinite(values), values, -np.inf)
    index = np.argmax(masked, axis=-1)
    top = np.take_along_axis(masked, index[..., np.newaxis], axis=-1)[..., 0]
    found = np.isfinite(top)
    return np.where(found, top, np.nan), np.where(found, depth[index], np.nan)


def least(values: Array, depth: Array, where: NDArray[np.bool_]) -> tuple[Array, Array]:
    """Return the least value among the chosen layers and its depth [m]; NaN without any."""
    value, where_found = largest(-values, depth, where)
    return -value, where_found


# Gas in place -------------------------------------------------------------------------------


def in_place(concentration: Array, volume: Array, share: ArrayLike = 1.0) -> Array:
    """Return the amount in the given share of each layer [mol], summed over the layers."""
    return np.asarray(np.sum(concentration * volume * np.asarray(share), axis=-1))


def tonnes(amount: ArrayLike, gas: str) -> Array:
    """Return an amount of gas [mol] as mass [t]."""
    return np.asarray(amount, dtype=np.float64) * SPECIES[gas].molar_mass / 1000.0


def cubic_kilometres(amount: ArrayLike) -> Array:
    """Return an amount of gas [mol] as the volume it takes at 0 degC and 1 atm [km3]."""
    return np.asarray(amount, dtype=np.float64) * NORMAL_MOLAR_VOLUME / 1e9


def share_between(face_depth: Array, top: ArrayLike, foot: ArrayLike) -> Array:
    """Return the share of each layer's thickness between depths [m], shape (..., layers)."""
    top = np.asarray(top, dtype=np.float64)[..., np.newaxis]
    foot = np.asarray(foot, dtype=np.float64)[..., np.newaxis]
    inside = np.minimum(face_depth[1:], foot) - np.maximum(face_depth[:-1], top)
    return np.maximum(inside, 0.0) / np.diff(face_depth)


# Stability and work -------------------------------------------------------------------------


def schmidt_stability(
    face_depth: Array, face_area: Array, volume: Array, density: Array, gravity: float
) -> Array:
    r"""Return the work per lake area that would mix the lake, Schmidt stability [J m-2].

    .. math:: S = \frac{g}{A_0} \int_0^{z_m} (z - z_v)\,(\rho - \bar\rho)\,A\,dz

    with z_v the depth of the centre of volume and rho-bar the mean density (Idso 1973,
    Limnol. Oceanogr. 18:681-683).  Density is potential, so that compression is no stability.

    Parameters
    ----------
    face_depth, face_area : ndarray, shape (layers + 1,)
        [m], [m2].
    volume : ndarray, shape (layers,)
        [m3].
    density : ndarray, shape (..., layers)
        Potential density [kg m-3].
    gravity : float
        [m s-2].
    """
    middle = layer_centres(face_depth, face_area)
    arm = middle - np.sum(middle * volume) / np.sum(volume)
    mean = np.sum(density * volume, axis=-1, keepdims=True) / np.sum(volume)
    return np.asarray(
        gravity / face_area[0] * np.sum(arm * (density - mean) * volume, axis=-1)
    )


def layer_centres(face_depth: Array, face_area: Array) -> Array:
    """Return the depth of the centre of volume of each layer [m], area linear within it."""
    upper, lower = face_area[:-1], face_area[1:]
    share = (upper + 2.0 * lower) / (3.0 * (upper + lower))
    return np.asarray(face_depth[:-1] + share * np.diff(face_depth))


def lifting_energy(depth: Array, stability: Array, start: float, end: float) -> float:
    r"""Return the work that lifts water from one depth to another, unmixed [J m-3].

    .. math:: W = \rho \int_{end}^{start} N^2\,(z - z_{end})\,dz

    which is gravity times the excess of the parcel's density over that around it, summed over
    the way, with compression taken out.

    Parameters
    ----------
    depth, stability : ndarray
        Depth [m] and buoyancy frequency squared there [s-2].
    start, end : float
        Depths [m]; end above start.
    """
    inner = depth[(depth > end) & (depth < start)]
    points = np.concatenate(([end], inner, [start]))
    force = np.interp(points, depth, stability) * (points - end)
    return float(REFERENCE_DENSITY * np.trapezoid(force, points))


def of_the_year(
    time: NDArray[np.datetime64], values: Array, reduce: Callable[[Array], float]
) -> Array:
    """Return the mean, largest, ... value of the year that ends at each time.

    Within the first year it is that of the first year, so that it does not depend on the month
    of the start.
    """
    first_year = time <= time[0] + YEAR
    start = np.searchsorted(time, time - YEAR, side="right")
    reduced = np.array([reduce(values[i : last + 1]) for last, i in enumerate(start)])
    return np.where(first_year, reduce(values[first_year]), reduced)


def surface_layer_depth(time: NDArray[np.datetime64], mixed: Array) -> Array:
    """Return the deepest mixed layer of the year that ends at each time [m].

    This is the layer that the seasons mix.  Its water stays saturated with air between one
    mixing and the next, so extremes of all gases together are taken below it and not below the
    momentary mixed layer, which can be a metre thick on a calm day.
    """
    return of_the_year(time, mixed, np.max)


# Upward into the surface layer --------------------------------------------------------------


def upward_flux(
    depth: Array,
    face_depth: Array,
    face_area: Array,
    concentration: Array,
    flow: Array,
    diffusivity: Array,
    level: Array,
) -> Array:
    """Return the amount that crosses the first face at or below a level, upward [mol s-1].

    The flow carries the concentration below the face where it rises and that above it where it
    sinks; diffusion follows the difference across it.

    Parameters
    ----------
    depth : ndarray, shape (layers,)
    face_depth, face_area : ndarray, shape (layers + 1,)
    concentration : ndarray, shape (time, layers)
        [mol m-3].
    flow, diffusivity : ndarray, shape (time, layers + 1)
        Upward [m3 s-1]; [m2 s-1].
    level : ndarray, shape (time,)
        [m]
    """
    face = np.clip(np.searchsorted(face_depth, level - 1e-6), 1, len(depth) - 1)
    times = np.arange(len(level))
    upper, lower = concentration[times, face - 1], concentration[times, face]
    through = flow[times, face]
    carried = np.where(through > 0.0, through * lower, through * upper)
    slope = (lower - upper) / (depth[face] - depth[face - 1])
    return np.asarray(carried + diffusivity[times, face] * face_area[face] * slope)


def oxic_depth(depth: Array, oxygen: Array) -> Array:
    """Return the depth at which oxygen first falls below 2 mg/L [m]."""
    return first_depth(depth, oxygen, OXIC, rising=False)


def methane_lost_upward(
    above_gradient: Array, removed: Sequence[Array], supplied: Sequence[Array]
) -> Array:
    """Return the methane that has left the water below the main gradient upward [mol].

    Books of the water above it: what is there now, less what was there at the start, plus what
    has left it since, less what rivers brought.

    Parameters
    ----------
    above_gradient : ndarray, shape (time,)
        Methane above the main gradient of that time [mol].
    removed, supplied : sequences of ndarray, shape (time,)
        Running sums since the start, both positive [mol]: to the air, the outlet and
        oxidation; from rivers.
    """
    lost = above_gradient - above_gradient[0]
    return np.asarray(lost + sum(removed) - sum(supplied))


# How sure -----------------------------------------------------------------------------------


def cast_errors(
    lake: Lake, depth: Array, volume: Array, found: Mapping[str, Array]
) -> dict[str, Array]:
    """Return relative standard errors at the start that follow from those of the casts.

    Errors of one gas are taken as one calibration error at all depths, those of different
    gases as independent.  The density step has the error of two single readings.

    Parameters
    ----------
    lake : Lake
    depth, volume : ndarray, shape (layers,)
    found : mapping
        Variables of the result, the start first.
    """
    methane = _error(lake, "CH4", depth)
    carbon = _carbon_dioxide_error(lake, depth, found)
    pressing = _gas_pressure_error(methane, carbon, found)
    middle = int(np.searchsorted(depth, found["gradient_depth"][0]))
    reading = _density_error(lake, depth, found, methane, carbon)[middle]
    return {
        "gas_pressure_error": pressing / found["gas_pressure"][0],
        "methane_in_place_error": np.asarray(
            np.sum(methane * volume) / there
            if (there := found["methane_in_place"][0])
            else 0.0
        ),
        "gradient_strength_error": np.sqrt(2.0) * reading / found["gradient_strength"][0],
    }


def of_samples(lake: Lake) -> dict[str, Profile]:
    """Return what the water samples say by themselves, before any layer is made of them.

    At the depths at which methane was sampled (or CO2, or DIC); what was read at other depths
    is interpolated linearly to them.  Errors are those of CH4 and CO2, as in
    :func:`cast_errors`.

    Returns
    -------
    dict
        "gas_pressure" [Pa] and "saturation" [1].
    """
    profiles = lake.cast.profiles
    depth = next(profiles[name].depth for name in ("CH4", "CO2", "DIC") if name in profiles)
    read = {name: np.interp(depth, one.depth, one.value) for name, one in profiles.items()}
    values = state_of(read, depth, lake.site)[np.newaxis]
    pressure = hydrostatic_pressure(depth, lake.site)
    found = water(values, TRACERS, depth, pressure, lake.site)
    found["methane"] = values[..., METHANE]
    found["dissolved_inorganic_carbon"] = values[..., DIC]
    methane = _error(lake, "CH4", depth)
    error = _gas_pressure_error(methane, _carbon_dioxide_error(lake, depth, found), found)
    gas = found["gas_pressure"][0]
    return {
        "gas_pressure": Profile(depth, gas, error),
        "saturation": Profile(depth, gas / pressure, error / pressure),
    }


def _gas_pressure_error(methane: Array, carbon: Array, found: Mapping[str, Array]) -> Array:
    """Return the standard error of gas pressure [Pa] from those of CH4 and CO2 [mol m-3]."""
    partial = np.zeros(len(methane))
    for gas, error in (("methane", methane), ("carbon_dioxide", carbon)):
        amount = found[gas][0]
        relative = np.divide(error, amount, out=np.zeros_like(error), where=amount > 0.0)
        partial += (relative * found[f"{gas}_partial_pressure"][0]) ** 2
    return np.sqrt(partial)


def _error(lake: Lake, name: str, depth: Array) -> Array:
    """Return the standard error of a measured quantity on the layers; nil if not measured."""
    profile: Profile | None = lake.cast.profiles.get(name)
    if profile is None:
        return np.zeros(len(depth))
    return np.interp(depth, profile.depth, profile.error)


def _carbon_dioxide_error(lake: Lake, depth: Array, found: Mapping[str, Array]) -> Array:
    """Return the standard error of free CO2 [mol m-3].

    As measured; or as that of DIC less alkalinity; or, where pH was measured, with the slope
    of the first dissociation, d ln CO2 = (1 - CO2/DIC) ln 10 d pH.
    """
    if "CO2" in lake.cast.profiles:
        return _error(lake, "CO2", depth)
    free, total = found["carbon_dioxide"][0], found["dissolved_inorganic_carbon"][0]
    if "pH" in lake.cast.profiles:
        slope = free * (1.0 - free / total) * np.log(10.0)
        return np.hypot(
            _error(lake, "DIC", depth) * free / total, _error(lake, "pH", depth) * slope
        )
    return np.hypot(_error(lake, "DIC", depth), _error(lake, "alkalinity", depth))


def _density_error(
    lake: Lake, depth: Array, found: Mapping[str, Array], methane: Array, carbon: Array
) -> Array:
    """Return the standard error of the density of a single reading [kg m-3]."""
    temperature, salinity = found["temperature"][0], found["salinity"][0]
    density = found["density"][0]
    expansion = thermal_expansion(temperature, salinity, found["pressure"])
    parts = [
        density * expansion * _error(lake, "temperature", depth),
        density * lake.site.haline_contraction * _error(lake, "salinity", depth),
        (SPECIES["CH4"].molar_mass - density * SPECIES["CH4"].molar_volume) * methane,
        (SPECIES["CO2"].molar_mass - density * lake.site.co2_molar_volume) * carbon,
    ]
    return np.sqrt(sum(part**2 for part in parts))
