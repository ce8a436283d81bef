"""The mixing of a lake file: one of several laws, each with keys of its own."""

import math
from collections.abc import Iterator, Mapping
from itertools import pairwise
from typing import Any

from strata.inputs import units
from strata.inputs.schema import MixingTable
from strata.inputs.tables import allowed, attributes, keys
from strata.lake.site import Mixing

#: Law -> the keys it needs; those of the others do not belong beside it.
NEEDS = {
    "gargett": ("coefficient_m2_s2", "least_m2_s", "most_m2_s"),
    "hondzo-stefan": ("least_m2_s", "most_m2_s"),
    "given": ("given_m2_s",),
}
#: Law -> keys that it may have besides.
TAKES = {"gargett": (), "hondzo-stefan": ("area_factor",), "given": ("given_depth_m",)}


def mixing_of(model: MixingTable) -> Mixing:
    """Return the frozen mixing of a table; what its law does not have is 0."""
    absent = {"coefficient": 0.0, "least": 0.0, "most": 0.0}
    return Mixing(**(absent | attributes(model, Mixing)))


def mixing_faults(written: Any, sound: Mapping[str, Any]) -> Iterator[tuple[str, str]]:
    """Find what is wrong between the keys of a mixing.

    Parameters
    ----------
    written : object
        The table as the user wrote it.
    sound : mapping
        What is left of it without faulty values.
    """
    if not isinstance(written, dict) or ("law" in written and "law" not in sound):
        return
    law = sound.get("law", "gargett")
    own = (*NEEDS[law], *TAKES[law])
    kinds = keys(MixingTable)
    for key in NEEDS[law]:
        if key not in written and not _misspelt(key, written):
            yield f"mixing.{key}", f"is missing; {allowed(kinds[key], units.words(key))}"
    others = {key for name in NEEDS for key in (*NEEDS[name], *TAKES[name])} - {*own}
    for key in kinds:
        if key in sound and key in others:
            yield f"mixing.{key}", f'does not belong to law "{law}"; take it out'
    least, most = sound.get("least_m2_s", 0.0), sound.get("most_m2_s", math.inf)
    if least > most:
        yield "mixing.least_m2_s", f"is {least:g}; at most most_m2_s ({most:g}) is allowed"
    if law == "given":
        yield from _profile_faults(written, sound)


def _misspelt(key: str, written: Mapping[str, Any]) -> bool:
    """Tell whether a missing key was meant by an unknown one, of which there is a fault."""
    name = key.split("_")[0]
    known = MixingTable.model_fields
    return any(other.startswith(name) and other not in known for other in written)


def _profile_faults(
    written: Mapping[str, Any], sound: Mapping[str, Any]
) -> Iterator[tuple[str, str]]:
    """Find what is wrong with a given profile."""
    values, depths = sound.get("given_m2_s"), sound.get("given_depth_m")
    if depths is not None:
        for upper, lower in pairwise(depths):
            if lower <= upper:
                yield (
                    "mixing.given_depth_m",
                    f"has {lower:g} after {upper:g}; depths must rise",
                )
        if values is not None and len(values) != len(depths):
            yield (
                "mixing.given_m2_s",
                f"has {len(values)} values; {len(depths)} are required, as in given_depth_m",
            )
    elif values is not None and len(values) > 1 and "given_depth_m" not in written:
        yield (
            "mixing.given_depth_m",
            f"is missing; given_m2_s has {len(values)} values, each at a depth",
        )
