"""The result of a projection: one xarray.Dataset, and its NetCDF file.

A projection hands over a :class:`Record`; :func:`dataset` adds everything that is derived from
it, so that a result carries its margins.  Files follow CF-1.11 and are written beside their
final name, then renamed: no half files.
"""

import hashlib
import os
import re
from collections.abc import Iterator, Mapping
from contextlib import contextmanager, suppress
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import xarray as xr
from numpy.typing import NDArray

import strata
from strata import margins
from strata.caution import CAUTION
from strata.errors import Fault, InputError
from strata.gradients import StabilityProfiles, follow
from strata.lake.site import Lake
from strata.plant.plan import Plan
from strata.variables import COORDINATES, PLANT_SERIES, VARIABLES, Variable
from strata.water.stability import standard_gravity

Array = NDArray[np.float64]

ZONES = ("surface layer", "intermediate", "below main gradient")
NO_PLAN = "lake left alone"

#: In a file words may not bear the name of their dimension, as coordinates of a dataset do.
_LABELS = {name: f"{name}_name" for name in ("zone", "tracer", "ledger_term", "plant")}

#: The one tag that is no share.
_AGE = Variable(("time", "depth"), "365.25 d", "time since the water entered, or the start")
#: Variable of the dataset for each tracer of the state; tags become ``tag_<name>``.
_OF_TRACER = {
    "temperature": "potential_temperature",
    "salinity": "salinity",
    "DIC": "dissolved_inorganic_carbon",
    "alkalinity": "alkalinity",
    "calcium": "calcium",
    "CH4": "methane",
    "N2": "nitrogen",
    "O2": "oxygen",
    "H2S": "hydrogen_sulfide",
    "phosphate": "phosphate",
}


@dataclass(frozen=True)
class Record:
    """What a projection keeps of a run, before anything is derived from it.

    Parameters
    ----------
    time : ndarray of datetime64[s], shape (time,)
        Times of output, the start first.
    face_depth, face_area : ndarray, shape (layers + 1,)
        [m], [m2].
    volume, pressure : ndarray, shape (layers,)
        [m3]; absolute pressure at the middle of the layers [Pa].
    tracers : tuple of str
        Names of the columns of ``values``.
    values : ndarray, shape (time, layers, tracers)
    upward_flow, diffusivity : ndarray, shape (time, layers + 1)
        [m3 s-1]; of solutes [m2 s-1].
    mixed_layer_depth : ndarray, shape (time,)
        [m]
    ledger_terms : tuple of str
        "start" first.
    ledger : ndarray, shape (time, terms, tracers)
        Running sums since the start, into the lake positive; their sum is what is there.
    ledger_error : ndarray, shape (time, tracers)
        What the books do not explain, relative to start and throughput.
    plants : mapping
        Name of the plant -> name of the series (see ``strata.variables``) -> values.
    return_tags : tuple of str
        The tracers that mark return water.
    warnings : tuple of str
    options : mapping
        Settings of the run: step, seed, ...
    """

    time: NDArray[np.datetime64]
    face_depth: Array
    face_area: Array
    volume: Array
    pressure: Array
    tracers: tuple[str, ...]
    values: Array
    upward_flow: Array
    diffusivity: Array
    mixed_layer_depth: Array
    ledger_terms: tuple[str, ...]
    ledger: Array
    ledger_error: Array
    plants: Mapping[str, Mapping[str, Array]]
    return_tags: tuple[str, ...]
    warnings: tuple[str, ...]
    options: Mapping[str, object]

    def of(self, tracer: str) -> Array:
        """Return the values of one tracer, shape (time, layers)."""
        return np.ascontiguousarray(self.values[..., self.tracers.index(tracer)])

    @property
    def depth(self) -> Array:
        """Return the depth of the middle of the layers [m]."""
        return 0.5 * (self.face_depth[1:] + self.face_depth[:-1])


# Building -----------------------------------------------------------------------------------


def dataset(record: Record, lake: Lake, plan: Plan | None = None) -> xr.Dataset:
    """Return the result of a projection with everything derived from it.

    Parameters
    ----------
    record : Record
    lake : Lake
    plan : Plan, optional
        None for the lake left alone.
    """
    found = _profiles(record, lake)
    found |= _bubbling(record, lake, found)
    found |= _gradient(record, lake, found)
    found |= _amounts(record, found)
    found |= margins.cast_errors(lake, record.depth, record.volume, found)
    found |= {
        "ledger": np.moveaxis(record.ledger, 0, -1),
        "ledger_error": record.ledger_error.T,
    }
    table = {
        name: (VARIABLES[name].dims, value, VARIABLES[name].attributes)
        for name, value in found.items()
        if name in VARIABLES
    }
    for name in record.tracers:
        if name == "age":
            table[name] = (_AGE.dims, record.of(name), _AGE.attributes)
        elif name not in _OF_TRACER:
            words = Variable(("time", "depth"), "1", f"share of water from {name}")
            table[f"tag_{_identifier(name)}"] = (words.dims, record.of(name), words.attributes)
    table |= _plant_table(record)
    result = xr.Dataset(table, coords=_coordinates(record))
    result.attrs = _attributes(record, lake, plan)
    return result


def _profiles(record: Record, lake: Lake) -> dict[str, Array]:
    """Return the variables with a profile at every time."""
    found = {variable: record.of(name) for name, variable in _OF_TRACER.items()}
    found |= margins.water(
        record.values, record.tracers, record.depth, record.pressure, lake.site
    )
    found["pressure"], found["volume"] = record.pressure, record.volume
    found["area"] = record.face_area
    found["upward_flow"], found["diffusivity"] = record.upward_flow, record.diffusivity
    found["saturation"] = found["gas_pressure"] / record.pressure
    found["pressure_margin"] = record.pressure - found["gas_pressure"]
    found["lift_to_bubbling"] = margins.lift_to_bubbling(
        record.depth, record.pressure, found["gas_pressure"], lake.site.air_pressure
    )
    return found


def _bubbling(record: Record, lake: Lake, found: Mapping[str, Array]) -> dict[str, Array]:
    """Return the extremes below the surface layer, and the gases but air within it."""
    depth, mixed = record.depth, record.mixed_layer_depth
    surface = margins.surface_layer_depth(record.time, mixed)
    deep = margins.below(record.face_depth, surface)
    series = {"mixed_layer_depth": mixed, "surface_layer_depth": surface}
    for name, source, pick in (
        ("largest_saturation", "saturation", margins.largest),
        ("least_pressure_margin", "pressure_margin", margins.least),
        ("least_lift", "lift_to_bubbling", margins.least),
    ):
        series[name], series[f"{name}_depth"] = pick(found[source], depth, deep)
    reactive = found["reactive_gas_pressure"] / record.pressure
    series["surface_saturation"] = margins.largest(reactive, depth, ~deep)[0]
    series["oxic_depth"] = margins.oxic_depth(depth, found["oxygen"])
    return series


def _gradient(record: Record, lake: Lake, found: Mapping[str, Array]) -> dict[str, Array]:
    """Return the main gradient through time, and Schmidt stability."""
    gravity = standard_gravity(lake.site.latitude)
    profiles = StabilityProfiles(
        record.face_depth[1:-1], found["buoyancy_frequency_squared"][:, 1:-1], gravity
    )
    track = follow(profiles, found["surface_layer_depth"])
    return {
        "gradient_depth": np.array([one.depth for one in track]),
        "gradient_strength": np.array([one.strength for one in track]),
        "gradient_thickness": np.array([one.thickness for one in track]),
        "gradient_peak": np.array([one.peak for one in track]),
        "schmidt_stability": margins.schmidt_stability(
            record.face_depth,
            record.face_area,
            record.volume,
            found["potential_density"],
            gravity,
        ),
    }


def _amounts(record: Record, found: Mapping[str, Array]) -> dict[str, Array]:
    """Return gas in place, fluxes into the surface layer, and where methane and water went."""
    faces, volume = record.face_depth, record.volume
    surface, gradient = found["surface_layer_depth"], found["gradient_depth"]
    tops = np.array([0.0, surface[0], gradient[0]])
    shares = margins.share_between(faces, tops, np.append(tops[1:], faces[-1]))
    series: dict[str, Array] = {"zone_depth": tops}
    for gas in ("methane", "carbon_dioxide"):
        series[f"{gas}_in_place"] = margins.in_place(found[gas], volume)
        series[f"{gas}_in_zone"] = np.stack(
            [margins.in_place(found[gas], volume, share) for share in shares]
        )
    for gas in ("methane", "phosphate"):
        series[f"{gas}_flux_up"] = margins.upward_flux(
            record.depth,
            faces,
            record.face_area,
            found[gas],
            record.upward_flow,
            record.diffusivity,
            surface,
        )
    above = margins.share_between(faces, 0.0, gradient)
    in_surface = margins.share_between(faces, 0.0, surface)
    returned = sum((record.of(tag) for tag in record.return_tags), np.zeros_like(above))
    series["return_water_above_gradient"] = margins.in_place(returned, volume, above)
    series["return_water_in_surface_layer"] = margins.in_place(returned, volume, in_surface)
    series["methane_lost_to_upper_lake"] = margins.methane_lost_upward(
        margins.in_place(found["methane"], volume, above),
        removed=[-_book(record, term) for term in ("surface", "outlet", "reactions")],
        supplied=[_book(record, "rivers")],
    )
    nothing = np.zeros(len(record.time))
    for name, each in (("recovered", "recovered_CH4"), ("vented", "vented_CH4_total")):
        series[f"methane_{name}"] = sum((p[each] for p in record.plants.values()), nothing)
    return series


def _book(record: Record, term: str) -> Array:
    """Return the running sum of methane of one term of the ledger [mol]."""
    return record.ledger[:, record.ledger_terms.index(term), record.tracers.index("CH4")]


def _plant_table(record: Record) -> dict[str, tuple[tuple[str, ...], Array, dict[str, str]]]:
    """Return the series of the plants, stacked."""
    table = {}
    for series in sorted(set().union(*record.plants.values())):
        words = PLANT_SERIES[series]
        stacked = np.stack([plant[series] for plant in record.plants.values()])
        table[f"plant_{series}"] = (words.dims, stacked, words.attributes)
    return table


def _coordinates(record: Record) -> dict[str, tuple[object, ...]]:
    """Return coordinates with their attributes."""
    faces = record.face_depth
    down = {"positive": "down", "axis": "Z"}
    extra = {
        "time": {"axis": "T", "units_metadata": "leap_seconds: none"},
        "depth": {**down, "bounds": "depth_bounds"},
        "face": down,
    }
    values: dict[str, object] = {
        "time": record.time.astype("datetime64[s]"),
        "depth": record.depth,
        "face": faces,
        "zone": list(ZONES),
        "tracer": list(record.tracers),
        "ledger_term": list(record.ledger_terms),
    }
    if record.plants:
        values["plant"] = list(record.plants)
    coordinates: dict[str, tuple[object, ...]] = {}
    for name, value in values.items():
        words = COORDINATES[name]
        coordinates[name] = (words.dims, value, words.attributes | extra.get(name, {}))
    bounds = np.stack([faces[:-1], faces[1:]], axis=1)
    coordinates["depth_bounds"] = (("depth", "bound"), bounds, {})
    return coordinates


def _identifier(name: str) -> str:
    """Return a name that may stand in a variable's name."""
    return re.sub(r"\W+", "_", name).strip("_")


def _attributes(record: Record, lake: Lake, plan: Plan | None) -> dict[str, object]:
    """Return the global attributes: what it is, from what it was made, and the caution."""
    name = plan.name if plan else NO_PLAN
    program = f"strata {strata.__version__}"
    attributes: dict[str, object] = {
        "Conventions": "CF-1.11",
        "title": f"{lake.site.name}: {name}",
        "institution": "made by a user of strata",
        "source": f"{program}, one-dimensional column of {len(record.volume)} layers",
        "history": f"projected by {program}",
        "references": "strata, docs/theory",
        "comment": CAUTION,
        "strata_version": strata.__version__,
        "lake_name": lake.site.name,
        "plan_name": name,
        "air_pressure_Pa": lake.site.air_pressure,
        "gravity_m_s2": standard_gravity(lake.site.latitude),
        "warnings": "\n".join(record.warnings),
    }
    attributes |= {f"option_{key}": _plain(value) for key, value in record.options.items()}
    texts = {**lake.texts, **(plan.texts if plan else {})}
    for number, (file, text) in enumerate(texts.items(), start=1):
        attributes[f"input_{number}_name"] = file
        attributes[f"input_{number}_sha256"] = hashlib.sha256(text.encode()).hexdigest()
        attributes[f"input_{number}_text"] = text
    return attributes


def _plain(value: object) -> object:
    """Return a setting as an attribute can hold it."""
    if isinstance(value, bool) or value is None:
        return str(value).lower()
    return value if isinstance(value, int | float | str) else str(value)


def inputs_of(result: xr.Dataset) -> dict[str, str]:
    """Return the names of the files a result was made from and their SHA-256."""
    attributes = result.attrs
    numbers = range(1, 1 + sum(key.endswith("_sha256") for key in attributes))
    return {
        str(attributes[f"input_{number}_name"]): str(attributes[f"input_{number}_sha256"])
        for number in numbers
    }


# Files --------------------------------------------------------------------------------------


def _encoding(result: xr.Dataset) -> dict[str, dict[str, object]]:
    """Return how each variable is stored: profiles packed, everything else in full."""
    encoding: dict[str, dict[str, object]] = {}
    for name, variable in result.variables.items():
        if variable.dtype.kind not in "fM":
            continue
        encoding[str(name)] = {"_FillValue": None if name in result.coords else np.nan}
        if variable.dims in (("time", "depth"), ("time", "face")):
            block = (min(variable.shape[0], 128), variable.shape[1])
            encoding[str(name)] |= {
                "dtype": "float32",
                "_FillValue": np.float32(np.nan),
                "zlib": True,
                "complevel": 1,
                "shuffle": True,
                "chunksizes": block,
            }
    encoding["time"] = {
        "units": "seconds since 1970-01-01",
        "calendar": "standard",
        "dtype": "float64",
        "_FillValue": None,
    }
    return encoding


@contextmanager
def replacing(path: str | os.PathLike[str]) -> Iterator[Path]:
    """Give a name beside the final one to write to; rename it when all went well.

    Raises
    ------
    strata.InputError
        If the file cannot be written there; what was there before stays as it was.
    """
    path = Path(path)
    partial = path.with_name(f".{path.name}.{os.getpid()}.partial")
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        yield partial
        os.replace(partial, path)
    except OSError as error:
        reason = error.strerror or str(error)
        raise InputError([Fault(str(path), "", f"cannot be written: {reason}")]) from error
    finally:
        with suppress(OSError):
            partial.unlink(missing_ok=True)


def write(result: xr.Dataset, path: str | os.PathLike[str]) -> None:
    """Write a result as NetCDF-4, beside its final name, then rename it.

    Raises
    ------
    strata.InputError
        If the file cannot be written there.
    """
    labelled = [name for name in _LABELS if name in result.indexes]
    plain = result.reset_index(labelled).rename_vars(
        {name: _LABELS[name] for name in labelled}
    )
    with replacing(path) as partial:
        plain.to_netcdf(partial, engine="netcdf4", format="NETCDF4", encoding=_encoding(plain))


def read(path: str | os.PathLike[str]) -> xr.Dataset:
    """Return a result from its NetCDF file, in memory, times as ``datetime64[s]``.

    Raises
    ------
    strata.InputError
        If there is no such file or it is no result of strata.
    """
    clock = xr.coders.CFDatetimeCoder(time_unit="s")
    try:
        with xr.open_dataset(path, engine="netcdf4", decode_times=clock) as stored:
            result = stored.load()
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or str(error)
        raise InputError([Fault(str(path), "", f"cannot be read: {reason}")]) from error
    labelled = [name for name, label in _LABELS.items() if label in result]
    result = result.rename_vars({_LABELS[name]: name for name in labelled})
    for name in labelled:
        result = result.set_xindex(name)
    missing = {"time", "depth", "saturation", "gradient_depth"} - set(result.variables)
    if missing:
        reason = f"is no result of strata: it lacks {', '.join(sorted(missing))}"
        raise InputError([Fault(str(path), "", reason)])
    return result
