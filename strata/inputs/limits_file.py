"""From a limits file to a frozen :class:`strata.limits.Limits`."""

from collections.abc import Iterator, Mapping
from typing import Any

from strata.errors import Fault, InputError
from strata.inputs.schema import LimitsFile, LimitTable
from strata.inputs.tables import dotted, nearest, validate
from strata.inputs.texts import Texts
from strata.limits import QUANTITIES, Limit, Limits

_SENSES = {"at_most": "most", "at_least": "least"}


def build_limits(texts: Texts) -> Limits:
    """Build limits from their texts.

    Raises
    ------
    strata.InputError
        With every fault of the limits file.
    """
    file = texts.shown(texts.main)
    document = texts.document()
    model, sound, faults = validate(document, LimitsFile, file)
    faults += [
        Fault(file, place, message) for place, message in _cross_checks(document, sound)
    ]
    if faults or model is None:
        raise InputError(faults)
    return Limits(
        name=model.name,
        limits=tuple(_limit(table) for table in model.limit),
        wave_tilt=model.internal_wave_m or 0.0,
        note=("Invented limits, no law: " if model.invented else "") + model.source,
        texts=texts.known,
    )


def _limit(table: LimitTable) -> Limit:
    """Build one limit."""
    key = "at_most" if table.at_most is not None else "at_least"
    return Limit(
        quantity=table.quantity,
        bound=getattr(table, key),
        sense=_SENSES[key],
        against=table.against or "",
        name=table.name or "",
    )


def _cross_checks(
    written: Mapping[str, Any], sound: Mapping[str, Any]
) -> Iterator[tuple[str, str]]:
    """Find quantities that are not known, and bounds that are missing or doubled."""
    for number, limit in enumerate(sound.get("limit", [])):
        place = dotted(sound, ("limit", number))
        quantity = limit.get("quantity")
        if quantity is not None and quantity not in QUANTITIES:
            advice = nearest(quantity, list(QUANTITIES))
            yield f"{place}.quantity", f'is "{quantity}", which is not known; {advice}'
        bounds = [key for key in _SENSES if key in limit]
        if len(bounds) != 1 and limit == written["limit"][number]:
            trouble = "stands beside at_most" if bounds else "is missing"
            yield f"{place}.at_least", f"{trouble}; give at_least or at_most, one of them"
        known = QUANTITIES.get(quantity) if quantity else None
        if known and "against" in limit and not known.against:
            yield f"{place}.against", f"does not suit {quantity}, which is a plain value"
