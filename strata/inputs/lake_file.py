"""From a lake file and its casts to a frozen :class:`strata.lake.site.Lake`."""

import math
from collections.abc import Iterator, Mapping
from itertools import pairwise
from typing import Any

import numpy as np
from numpy.typing import NDArray

from strata.errors import Fault, InputError, OutOfRangeError
from strata.inputs import casts, checks, units
from strata.inputs.climate_table import climate_faults, climate_of
from strata.inputs.grid_table import grid_faults, with_chosen_layers
from strata.inputs.mixing_table import mixing_faults, mixing_of
from strata.inputs.schema import GridTable, LakeFile, WaterTable
from strata.inputs.tables import Place, attributes, dotted, filled, show, validate
from strata.inputs.texts import Texts
from strata.lake import site

FEWEST_LAYERS, MOST_LAYERS = 10, 2000
#: What a set of casts must hold: one of each group, and never two that say the same.
_NEEDED = (
    ("temperature",),
    ("salinity", "conductivity"),
    ("DIC", "CO2"),
    ("alkalinity", "pH"),
    ("CH4",),
)

#: Arrays of tables that speak of an interval of depth.
_WITH_INTERVAL = ("bed", "source", "conversion")
#: Keys of the site that the gas laws know too.
_IONS = ("magnesium_share", "calcium_share")

Basin = tuple[list[float], list[float]]  # depth [m], area [km2]


def build_lake(texts: Texts) -> site.Lake:
    """Build a lake from its texts.

    Raises
    ------
    strata.InputError
        With every fault of the lake file, its hypsography and its casts.
    """
    document = texts.document()
    file = texts.shown(texts.main)
    model, sound, faults = validate(document, LakeFile, file)
    basin, more = _basin(document.get("basin"), sound.get("basin", {}), texts)
    faults += more
    floor = basin[0][-1] if basin else None
    faults += [Fault(file, place, message) for place, message in _cross_checks(sound, floor)]
    latitude = sound.get("site", {}).get("latitude_deg")
    faults += [
        Fault(file, place, message)
        for place, message in climate_faults(
            document.get("climate"), sound.get("climate", {}), latitude
        )
    ]
    faults += [Fault(file, place, message) for place, message in _rates(document, sound)]
    faults += [
        Fault(file, place, message)
        for place, message in mixing_faults(document.get("mixing"), sound.get("mixing", {}))
    ]
    profiles, origins, more = _casts(sound, texts, floor)
    faults += more
    if faults or model is None or basin is None:
        raise InputError(faults)
    try:
        climate = climate_of(model.climate, model.site)
    except OutOfRangeError as error:
        raise InputError([Fault(file, "climate", f"cannot be: {error}")]) from error
    lake = _assemble(model, basin, profiles, climate, texts)
    checks.refuse_impossible_column(lake, origins)
    return _choose_layers(lake, model.grid, file) if model.grid.automatic else lake


def _choose_layers(lake: site.Lake, grid: GridTable, file: str) -> site.Lake:
    """Return a lake with layers chosen from its casts."""
    chosen = with_chosen_layers(lake, grid)
    if chosen is None:
        message = "finds no gradient in the casts; give zones instead"
        raise InputError([Fault(file, "grid.automatic", message)])
    faults = [
        Fault(file, place, message)
        for place, message in _layer_count(len(chosen.layer_faces) - 1, grid.layer_m)
    ]
    if faults:
        raise InputError(faults)
    return chosen


# What the basin is --------------------------------------------------------------------------


def _basin(
    written: Any, sound: Mapping[str, Any], texts: Texts
) -> tuple[Basin | None, list[Fault]]:
    """Return area against depth from the lake file or the file it names."""
    if not isinstance(written, dict):
        return None, []
    file = texts.shown(texts.main)
    if "hypsography" in written:
        inline = [key for key in ("depth_m", "area_km2") if key in written]
        if inline:
            message = f"stands beside {inline[0]}; give the areas in one way"
            return None, [Fault(file, "basin.hypsography", message)]
        if "hypsography" not in sound:
            return None, []
        name = sound["hypsography"]
        try:
            depth, area, faults = casts.read_hypsography(texts.read(name), texts.shown(name))
        except InputError as error:
            return None, list(error.faults)
        shown, prefix = texts.shown(name), "column "
    else:
        missing = [key for key in ("depth_m", "area_km2") if key not in written]
        message = "is missing; give hypsography, or depth_m and area_km2"
        faults = [Fault(file, f"basin.{key}", message) for key in missing]
        if faults or not {"depth_m", "area_km2"} <= sound.keys():
            return None, faults
        depth, area = sound["depth_m"], sound["area_km2"]
        shown, prefix = file, "basin."
    if not faults:
        found = _basin_trouble(depth, area)
        faults = [Fault(shown, prefix + key, message) for key, message in found]
    return (None if faults else (depth, area)), faults


def _basin_trouble(depth: list[float], area: list[float]) -> Iterator[tuple[str, str]]:
    """Find what makes area against depth impossible."""
    if len(depth) != len(area):
        yield "area_km2", f"has {len(area)} values; {len(depth)} are required, as in depth_m"
        return
    if len(depth) < 3:
        yield "depth_m", f"has {len(depth)} values; 3 or more are required"
        return
    if depth[0] != 0:
        yield "depth_m", f"starts at {depth[0]:g}; 0, the lake surface, is required"
    for upper, lower in pairwise(depth):
        if lower <= upper:
            yield "depth_m", f"has {lower:g} after {upper:g}; depths must rise"
    for upper, lower in pairwise(area):
        if lower > upper:
            yield "area_km2", f"has {lower:g} after {upper:g}; areas must not grow with depth"
    if min(area[:-1]) <= 0:
        yield "area_km2", "has 0 above the floor; only the last area may be 0"


# What several values say together -----------------------------------------------------------


def _cross_checks(sound: Mapping[str, Any], floor: float | None) -> Iterator[tuple[str, str]]:
    """Find what is wrong between sound values of the lake file."""
    yield from same_names(sound, "spring")
    yield from same_names(sound, "river")
    if floor is not None:
        yield from _below_floor(sound, floor)
    yield from _intervals(sound)
    ions = sound.get("site", {})
    shares = [ions.get(key, 0.0) for key in _IONS]
    if sum(shares) > 1:
        yield (
            "site.calcium_share",
            f"is {shares[1]:g}; with magnesium_share at most 1 is allowed",
        )
    grid = sound.get("grid", {})
    yield from grid_faults(grid)
    if floor is not None and "layer_m" in grid and not grid.get("automatic", False):
        faces = layer_faces(floor, grid["layer_m"], _zones(grid))
        yield from _layer_count(len(faces) - 1, grid["layer_m"])


def _layer_count(count: int, thickness: float) -> Iterator[tuple[str, str]]:
    """Find whether there are too few layers, or too many."""
    if not FEWEST_LAYERS <= count <= MOST_LAYERS:
        yield (
            "grid.layer_m",
            f"is {thickness:g} and gives {count} layers; {FEWEST_LAYERS} to "
            f"{MOST_LAYERS} layers are allowed",
        )


def same_names(document: Mapping[str, Any], array: str) -> Iterator[tuple[str, str]]:
    """Find elements of an array of tables that bear a name already taken."""
    seen: set[str] = set()
    for number, item in enumerate(document.get(array, [])):
        name = item.get("name")
        if name in seen:
            yield (
                f"{array}.{number + 1}.name",
                f'is "{name}", which is taken; names must differ',
            )
        elif name is not None:
            seen.add(name)


def _below_floor(sound: Mapping[str, Any], floor: float) -> Iterator[tuple[str, str]]:
    """Find depths that lie below the lake floor."""
    places: list[tuple[Place, Any]] = [
        (("spring", number, key), item.get(key))
        for number, item in enumerate(sound.get("spring", []))
        for key in ("depth_m", "spread_m")
    ]
    places += [
        ((array, number, key), item.get(key))
        for array in _WITH_INTERVAL
        for number, item in enumerate(sound.get(array, []))
        for key in ("top_m", "foot_m")
    ]
    places += [
        (("grid", "zone", number, key), item.get(key))
        for number, item in enumerate(sound.get("grid", {}).get("zone", []))
        for key in ("top_m", "foot_m")
    ]
    for place, value in places:
        deepest = max(value) if isinstance(value, list) and value else value
        if isinstance(deepest, int | float) and deepest > floor:
            yield dotted(sound, place), f"is {deepest:g}; the lake floor is at {floor:g} m"


def _intervals(sound: Mapping[str, Any]) -> Iterator[tuple[str, str]]:
    """Find intervals of depth that end above where they begin, and zones that overlap."""
    for number, item in enumerate(sound.get("spring", [])):
        top, foot = (*item.get("spread_m", ()), None, None)[:2]
        if top is not None and foot is not None and foot <= top:
            place = dotted(sound, ("spring", number, "spread_m"))
            yield place, f"is {top:g} to {foot:g}; the first depth must be the smaller"
    tables: list[tuple[Place, Any]] = [
        ((array, number), item)
        for array in _WITH_INTERVAL
        for number, item in enumerate(sound.get(array, []))
    ]
    zones = sound.get("grid", {}).get("zone", [])
    tables += [(("grid", "zone", number), item) for number, item in enumerate(zones)]
    for whole, item in tables:
        top, foot = item.get("top_m"), item.get("foot_m")
        if top is not None and foot is not None and foot <= top:
            yield (
                dotted(sound, (*whole, "foot_m")),
                f"is {foot:g}; more than top_m ({top:g}) is required",
            )
    ends = sorted((z["top_m"], z["foot_m"]) for z in zones if {"top_m", "foot_m"} <= z.keys())
    for (_, foot), (top, _) in pairwise(ends):
        if top < foot:
            yield "grid.zone", f"overlaps itself: {top:g} m lies above {foot:g} m"


def _rates(document: Mapping[str, Any], sound: Mapping[str, Any]) -> Iterator[tuple[str, str]]:
    """Find fluxes of the bed and sources in the water whose rate does not suit the tracer."""
    for array, check in (("bed", _bed_flux), ("source", _source_rate)):
        for number, source in enumerate(sound.get(array, [])):
            # a rate that is itself faulty is there all the same
            written = {**document[array][number], "tracer": source.get("tracer")}
            if written["tracer"] is not None:
                yield from check(dotted(sound, (array, number)), written)


def _bed_flux(place: str, source: Mapping[str, Any]) -> Iterator[tuple[str, str]]:
    """Find whether a bed source has the one flux that belongs to its tracer."""
    right, wrong = "flux_mol_m2_yr", "flux_W_m2"
    if source["tracer"] == "heat":
        right, wrong = wrong, right
    if wrong in source:
        yield f"{place}.{wrong}", f"does not suit {show(source['tracer'])}; write {right}"
    elif right not in source:
        yield f"{place}.{right}", "is missing; a number is required"


def _source_rate(place: str, source: Mapping[str, Any]) -> Iterator[tuple[str, str]]:
    """Find whether a source in the water has the one rate that belongs to it."""
    right, wrong = "rate_mol_m3_yr", "rate_W_m3"
    if source["tracer"] == "heat":
        right, wrong = wrong, right
    given = [key for key in (right, "decay_per_yr") if key in source]
    if wrong in source:
        yield f"{place}.{wrong}", f"does not suit {show(source['tracer'])}; write {right}"
    elif not given:
        yield f"{place}.{right}", "is missing; give it, or decay_per_yr for a loss"
    elif len(given) == 2:
        yield f"{place}.decay_per_yr", f"stands beside {right}; give one in each table"


def _zones(grid: Mapping[str, Any]) -> list[tuple[float, float, float]]:
    """Return the sound zones of a grid as top, foot and thickness."""
    wanted = ("top_m", "foot_m", "layer_m")
    zones = [zone for zone in grid.get("zone", []) if all(key in zone for key in wanted)]
    return [tuple(zone[key] for key in wanted) for zone in zones]


def layer_faces(
    floor: float, thickness: float, zones: list[tuple[float, float, float]]
) -> NDArray[np.float64]:
    """Return the faces of layers of about one thickness, and of another inside zones.

    Every zone begins and ends at a face; its layers are even and no thicker than asked for.
    """
    ends = {0.0, floor}
    for top, foot, _ in zones:
        ends |= {min(top, floor), min(foot, floor)}
    faces = [0.0]
    for upper, lower in pairwise(sorted(ends)):
        middle = 0.5 * (upper + lower)
        here = next((layer for top, foot, layer in zones if top < middle < foot), thickness)
        count = math.ceil((lower - upper) / here - 1e-9)
        faces += list(np.linspace(upper, lower, count + 1)[1:])
    return np.array(faces)


# What was measured --------------------------------------------------------------------------


def _casts(
    sound: Mapping[str, Any], texts: Texts, floor: float | None
) -> tuple[dict[str, site.Profile], dict[str, casts.Origin], list[Fault]]:
    """Return all profiles by quantity, where each came from, and what is wrong with them."""
    profiles: dict[str, site.Profile] = {}
    origins: dict[str, casts.Origin] = {}
    faults: list[Fault] = []
    complete = "cast" in sound
    for entry in sound.get("cast", []):
        if "file" not in entry:
            complete = False
            continue
        name = entry["file"]
        shown = texts.shown(name)
        try:
            text = texts.read(name)
        except InputError as error:
            faults += error.faults
            complete = False
            continue
        cast = casts.read_cast(
            text, shown, floor, entry.get("gaps", False), entry.get("error", {})
        )
        faults += cast.faults
        complete = complete and not cast.faults
        for quantity, profile in cast.profiles.items():
            if quantity in origins:
                message = (
                    f"is given by {origins[quantity].file} too; one cast of each is allowed"
                )
                faults.append(Fault(shown, f"column {quantity}", message))
            profiles[quantity], origins[quantity] = profile, cast.origins[quantity]
    if complete:
        faults += _needed(profiles, origins, sound, texts.shown(texts.main))
    return profiles, origins, faults


def _needed(
    profiles: Mapping[str, site.Profile],
    origins: Mapping[str, casts.Origin],
    sound: Mapping[str, Any],
    file: str,
) -> Iterator[Fault]:
    """Find what the casts leave out or say twice."""
    for group in _NEEDED:
        found = [quantity for quantity in group if quantity in profiles]
        if not found:
            yield Fault(file, "cast", f"has no column for {' or '.join(group)}")
        elif len(found) > 1:
            other = origins[found[1]].file
            yield Fault(other, f"column {found[1]}", f"stands beside {found[0]}; give one")
    key = "conductivity_factor_g_kg_per_mS_cm"
    if "conductivity" in profiles and "site" in sound and key not in sound["site"]:
        yield Fault(file, f"site.{key}", "is missing; the cast gives conductivity")


# Putting it together ------------------------------------------------------------------------


def _assemble(
    model: LakeFile,
    basin: Basin,
    profiles: dict[str, site.Profile],
    climate: site.Climate,
    texts: Texts,
) -> site.Lake:
    """Build the frozen lake from what was found sound."""
    depth, area = (np.asarray(part, dtype=np.float64) for part in basin)
    ions = {key: value for key, value in filled(model.site) if key in _IONS}
    laws = dict(filled(model.laws)) | ions
    factor = model.site.conductivity_factor_g_kg_per_mS_cm
    if "conductivity" in profiles and factor is not None:
        profiles = checks.with_salinity(profiles, factor)
    zones = [(zone.top_m, zone.foot_m, zone.layer_m) for zone in model.grid.zone]
    return site.Lake(
        site=site.Site(**attributes(model.site, site.Site, laws=laws)),
        hypsography=site.Hypsography(depth, units.to_si("area_km2", area)),
        cast=site.Cast(profiles),
        climate=climate,
        springs=tuple(
            site.Spring(
                **attributes(
                    spring,
                    site.Spring,
                    dissolved=_dissolved(spring),
                    spread=spring.spread_m and (spring.spread_m[0], spring.spread_m[1]),
                )
            )
            for spring in model.spring
        ),
        rivers=tuple(
            site.River(**attributes(river, site.River, dissolved=_dissolved(river)))
            for river in model.river
        ),
        bed=tuple(
            site.BedSource(**attributes(source, site.BedSource)) for source in model.bed
        ),
        reactions=site.Reactions(**attributes(model.reactions, site.Reactions)),
        conversions=tuple(
            site.Conversion(**attributes(change, site.Conversion))
            for change in model.conversion
        ),
        sources=tuple(
            site.WaterSource(**attributes(source, site.WaterSource)) for source in model.source
        ),
        mixing=mixing_of(model.mixing),
        layer_faces=layer_faces(float(depth[-1]), model.grid.layer_m, zones),
        texts=texts.known,
    )


def _dissolved(water: WaterTable) -> dict[str, float]:
    """Return what entering water carries, by tracer, as far as the file says."""
    return {
        units.split(key)[0]: value
        for key, value in filled(water)
        if units.split(key)[1] in ("mol_m3", "eq_m3")
    }
