"""Reading of CSV files: casts and hypsography, refused by file, row and column.

A line that starts with ``#`` is a comment.  The first other line holds the headings, each the
name of a quantity followed by its unit (``CH4_mol_m3``); ``CH4_error_mol_m3`` is one standard
deviation of it.  A row is counted as the line of the file that it is, comments included.
"""

import csv
import math
from collections.abc import Mapping
from typing import NamedTuple

import numpy as np

from strata.errors import Fault
from strata.inputs import units
from strata.inputs.schema import DEEPEST
from strata.inputs.tables import Between, nearest
from strata.lake.site import Profile

_CONCENTRATION = ("mol_m3", "mmol_L", "mmol_m3", "umol_L")


class Quantity(NamedTuple):
    """What a column may hold: its units, and its range in SI (conductivity in mS/cm)."""

    units: tuple[str, ...]
    range: Between


#: What a surveyor may measure.  The ranges are wide enough for the richest lakes known.
QUANTITIES = {
    "temperature": Quantity(("degC",), Between(0, 40)),
    "salinity": Quantity(("g_kg",), Between(0, 40)),
    "conductivity": Quantity(("mS_cm", "uS_cm"), Between(0, 50)),
    "DIC": Quantity(_CONCENTRATION, Between(0, 1000)),
    "CO2": Quantity(_CONCENTRATION, Between(0, 800)),
    "alkalinity": Quantity(("eq_m3", "meq_L"), Between(0, 500)),
    "pH": Quantity(("",), Between(3, 11)),
    "calcium": Quantity(_CONCENTRATION, Between(0, 200)),
    "CH4": Quantity(_CONCENTRATION, Between(0, 100)),
    "N2": Quantity(_CONCENTRATION, Between(0, 20)),
    "O2": Quantity(_CONCENTRATION, Between(0, 2)),
    "H2S": Quantity(_CONCENTRATION, Between(0, 100)),
    "phosphate": Quantity(_CONCENTRATION, Between(0, 10)),
}


class Row(NamedTuple):
    """A row of cells and the line of the file it stands on."""

    line: int
    cells: list[str]


class Sheet(NamedTuple):
    """A CSV file taken apart."""

    headings: list[str]
    rows: list[Row]


def heading(quantity: str, unit: str, error: bool = False) -> str:
    """Return the heading of a column."""
    return "_".join(part for part in (quantity, "error" if error else "", unit) if part)


def _known_headings() -> dict[str, tuple[str, str, bool]]:
    """Return all headings of casts: quantity, unit, and whether it is an error."""
    return {
        heading(quantity, unit, error): (quantity, unit, error)
        for quantity, row in QUANTITIES.items()
        for unit in row.units
        for error in (False, True)
    }


HEADINGS = _known_headings()


def read_sheet(text: str) -> Sheet:
    """Take a CSV file apart, without judging its cells."""
    numbered = [
        Row(number, [cell.strip() for cell in next(csv.reader([line]))])
        for number, line in enumerate(text.splitlines(), start=1)
        if line.strip() and not line.lstrip().startswith("#")
    ]
    return Sheet(numbered[0].cells if numbered else [], numbered[1:])


def _place(row: Row, column: str) -> str:
    return f"row {row.line}, column {column}"


def _number(
    cell: str, row: Row, column: str, gaps: bool, faults: list[Fault], file: str
) -> float:
    """Return the number in a cell, NaN where there is none; what is wrong goes into faults."""
    if cell == "":
        if not gaps:
            faults.append(Fault(file, _place(row, column), "is empty; a number is required"))
        return math.nan
    try:
        value = float(cell)
    except ValueError:
        faults.append(Fault(file, _place(row, column), f'is "{cell}"; a number is required'))
        return math.nan
    if not math.isfinite(value):
        faults.append(Fault(file, _place(row, column), f"is {cell}; a number is required"))
        return math.nan
    return value


def _column(
    sheet: Sheet, name: str, gaps: bool, file: str, faults: list[Fault]
) -> list[tuple[Row, float]]:
    """Return a column as numbers with their rows."""
    place = sheet.headings.index(name)
    return [
        (row, _number(row.cells[place], row, name, gaps, faults, file)) for row in sheet.rows
    ]


def _shape(sheet: Sheet, file: str) -> list[Fault]:
    """Find what is wrong with headings and the lengths of rows."""
    if not sheet.headings:
        return [Fault(file, "", "is empty; a line of headings is required")]
    faults = [
        Fault(file, f"column {name}", "stands twice")
        for name in dict.fromkeys(sheet.headings)
        if sheet.headings.count(name) > 1
    ]
    width = len(sheet.headings)
    faults += [
        Fault(file, f"row {row.line}", f"has {len(row.cells)} cells; the headings are {width}")
        for row in sheet.rows
        if len(row.cells) != width
    ]
    return faults


def _depths(
    sheet: Sheet, deepest: float | None, file: str, faults: list[Fault]
) -> list[float]:
    """Return the depths of the rows, which must rise and lie within the lake."""
    deepest = DEEPEST if deepest is None else deepest
    depths: list[float] = []
    last: tuple[Row, float] | None = None
    for row, depth in _column(sheet, "depth_m", False, file, faults):
        place = _place(row, "depth_m")
        if not 0 <= depth <= deepest and not math.isnan(depth):
            faults.append(Fault(file, place, f"is {depth:g}; 0 to {deepest:g} m is allowed"))
        elif last and depth == last[1]:
            message = f"is {depth:g}, as in row {last[0].line}; each depth may stand once"
            faults.append(Fault(file, place, message))
        elif last and depth < last[1]:
            message = f"is {depth:g}; more than {last[1]:g} m is required, as depths must rise"
            faults.append(Fault(file, place, message))
        if not math.isnan(depth):
            last = (row, depth)
        depths.append(depth)
    return depths


def _unknown_heading(name: str) -> str:
    """Word the fault of a heading that is not known."""
    for quantity, row in QUANTITIES.items():
        tail = name.removeprefix(quantity)
        if tail != name and (tail == "" or tail.startswith("_")):
            error = tail == "_error" or tail.startswith("_error_")
            right = " or ".join(heading(quantity, unit, error) for unit in row.units)
            trouble = "has no unit" if tail in ("", "_error") else "has an unknown unit"
            return f"{trouble}; write {right}"
    return f"is not known; {nearest(name, ['depth_m', *HEADINGS])}"


class Origin(NamedTuple):
    """Where a profile stands, for messages about it."""

    file: str
    column: str
    rows: tuple[int, ...]  # line of each value


class CastFile(NamedTuple):
    """What one cast file holds, by quantity and in SI, and what is wrong with it."""

    profiles: dict[str, Profile]
    origins: dict[str, Origin]
    faults: list[Fault]


def read_cast(
    text: str, file: str, deepest: float | None, gaps: bool, stated: Mapping[str, float]
) -> CastFile:
    """Read one cast.

    Parameters
    ----------
    text : str
        The CSV file.
    file : str
        Its name, for messages.
    deepest : float or None
        Depth of the lake floor [m], where it is known.
    gaps : bool
        Whether a cell may be empty because nothing was measured there.
    stated : mapping
        Error of quantities that have no error column, by heading: ``temperature_degC``.
    """
    sheet = read_sheet(text)
    faults = _shape(sheet, file)
    faults += [
        Fault(file, f"column {name}", _unknown_heading(name))
        for name in sheet.headings
        if name != "depth_m" and name not in HEADINGS
    ]
    if sheet.headings and "depth_m" not in sheet.headings:
        faults.append(Fault(file, "column depth_m", "is missing"))
    if faults:
        return CastFile({}, {}, faults)
    depths = _depths(sheet, deepest, file, faults)
    profiles: dict[str, Profile] = {}
    origins: dict[str, Origin] = {}
    for name in sheet.headings:
        quantity, unit, error = HEADINGS.get(name, ("", "", True))
        if not error and quantity in profiles:
            faults.append(Fault(file, f"column {name}", f"gives {quantity} a second time"))
        elif not error:
            found = _profile(sheet, name, depths, gaps, stated, file, faults)
            if found is not None:
                profiles[quantity], origins[quantity] = found
        elif name != "depth_m" and heading(quantity, unit) not in sheet.headings:
            wanted = heading(quantity, unit)
            faults.append(Fault(file, f"column {name}", f"has no column {wanted} beside it"))
    for name in stated:
        if name not in sheet.headings:
            faults.append(Fault(file, f"column {name}", "is missing; its error is stated"))
    for name in sheet.headings:
        if deepest is not None and name in HEADINGS and not HEADINGS[name][2]:
            faults += _reach(sheet, name, depths, deepest, file)
    return CastFile(profiles, origins, faults)


def _profile(
    sheet: Sheet,
    name: str,
    depths: list[float],
    gaps: bool,
    stated: Mapping[str, float],
    file: str,
    faults: list[Fault],
) -> tuple[Profile, Origin] | None:
    """Return the profile in a column, in SI, and where it stands."""
    quantity, unit, _ = HEADINGS[name]
    values = _column(sheet, name, gaps, file, faults)
    allowed = QUANTITIES[quantity].range
    factor = units.UNITS[unit].factor if unit else 1.0
    words = units.words(name)
    for row, value in values:
        if not math.isnan(value) and not allowed.accepts(value * factor):
            range_here = Between(allowed.low / factor, allowed.high / factor)
            message = f"is {value:g}; {range_here.words(words)}"
            faults.append(Fault(file, _place(row, name), message))
    errors = _errors(sheet, name, stated, [value for _, value in values], file, faults)
    kept = [
        (depth, value * factor, error * factor, row.line)
        for depth, (row, value), error in zip(depths, values, errors, strict=True)
        if not (math.isnan(depth) or math.isnan(value))
    ]
    if len(kept) < 3:
        faults.append(
            Fault(file, f"column {name}", f"has {len(kept)} values; 3 or more are required")
        )
        return None
    *parts, lines = zip(*kept, strict=True)
    return Profile(*(np.array(part) for part in parts)), Origin(file, name, lines)


def _errors(
    sheet: Sheet,
    name: str,
    stated: Mapping[str, float],
    values: list[float],
    file: str,
    faults: list[Fault],
) -> list[float]:
    """Return the error of each value of a column: its own column, or the one stated."""
    quantity, unit, _ = HEADINGS[name]
    own = heading(quantity, unit, error=True)
    if own in sheet.headings:
        errors = []
        column = _column(sheet, own, True, file, faults)
        for (row, error), value in zip(column, values, strict=True):
            if row.cells[sheet.headings.index(own)] == "" and not math.isnan(value):
                faults.append(Fault(file, _place(row, own), "is empty; a number is required"))
            elif error < 0:
                message = f"is {error:g}; 0 or more is allowed"
                faults.append(Fault(file, _place(row, own), message))
            errors.append(error)
        return errors
    if name not in stated:
        message = f"has no error; add a column {own}, or state error.{name} in the lake file"
        faults.append(Fault(file, f"column {name}", message))
    return [stated.get(name, 0.0)] * len(values)


def _reach(
    sheet: Sheet, name: str, depths: list[float], deepest: float, file: str
) -> list[Fault]:
    """Find whether a column leaves out the top or the deepest part of the lake."""
    place = sheet.headings.index(name)
    filled = [
        depth
        for row, depth in zip(sheet.rows, depths, strict=True)
        if row.cells[place] and not math.isnan(depth)
    ]
    if not filled:
        return []
    faults = []
    lowest, highest = deepest - max(5.0, 0.02 * deepest), max(10.0, 0.05 * deepest)
    if max(filled) < lowest:
        message = (
            f"stops at {max(filled):g} m; {lowest:g} m or more is required "
            f"(the lake floor is at {deepest:g} m)"
        )
        faults.append(Fault(file, f"column {name}", message))
    if min(filled) > highest:
        message = f"starts at {min(filled):g} m; {highest:g} m or less is required"
        faults.append(Fault(file, f"column {name}", message))
    return faults


def read_hypsography(text: str, file: str) -> tuple[list[float], list[float], list[Fault]]:
    """Read area against depth from a CSV file with the columns depth_m and area_km2."""
    sheet = read_sheet(text)
    faults = _shape(sheet, file)
    if sheet.headings:
        faults += [
            Fault(file, f"column {name}", "is missing")
            for name in ("depth_m", "area_km2")
            if name not in sheet.headings
        ]
        faults += [
            Fault(file, f"column {name}", "is not known; depth_m and area_km2 are allowed")
            for name in sheet.headings
            if name not in ("depth_m", "area_km2")
        ]
    if faults:
        return [], [], faults
    columns = [
        [value for _, value in _column(sheet, name, False, file, faults)]
        for name in ("depth_m", "area_km2")
    ]
    return columns[0], columns[1], faults
