"""How far casts and steady state of a lake differ: tables for the terminal and for a file."""

import numpy as np
import xarray as xr

from strata.caution import CAUTION
from strata.report.tables import aligned, digits

#: Tracer -> unit as a table prints it, and decimals.
UNITS = {
    "temperature": ("degC", 3),
    "salinity": ("g/kg", 3),
    "DIC": ("mol/m3", 2),
    "alkalinity": ("eq/m3", 2),
    "calcium": ("mol/m3", 3),
    "CH4": ("mol/m3", 3),
    "N2": ("mol/m3", 3),
    "O2": ("mol/m3", 4),
    "H2S": ("mol/m3", 4),
    "phosphate": ("mol/m3", 5),
}
#: Tracers told layer by layer in the terminal, and about how many layers.
SHOWN, ROWS = ("temperature", "salinity", "DIC", "CH4"), 24


def tracer_table(layers: xr.Dataset) -> str:
    """Return for each tracer how far casts and steady state differ, and where most."""
    rows = []
    for name in layers["tracer"].values:
        one = layers.sel(tracer=name)
        difference, steady = one["difference"].values, one["steady"].values
        worst = int(np.abs(difference).argmax())
        span = float(np.ptp(steady))
        unit, places = UNITS[name]
        share = 100.0 * abs(difference[worst]) / span if span > 0.0 else np.nan
        rows.append(
            [
                f"{name} [{unit}]",
                digits(span, places),
                digits(float(difference[worst]), places, sign=True),
                digits(float(one["depth"].values[worst]), 0),
                digits(share, 1),
                digits(float(np.sqrt(np.mean(difference**2))), places),
                digits(float(one["wobble"].max()), places),
            ]
        )
    headings = [
        "steady state less casts",
        "range",
        "largest",
        "at m",
        "% of range",
        "rms",
        "own wobble",
    ]
    return aligned(headings, rows)


def layer_table(layers: xr.Dataset) -> str:
    """Return casts and steady state of some two dozen layers, side by side."""
    depth = layers["depth"].values
    chosen = np.unique(np.linspace(0, len(depth) - 1, ROWS).round().astype(int))
    headings = ["depth m"]
    for name in SHOWN:
        headings += [f"{name} [{UNITS[name][0]}]", "steady", "less"]
    rows = []
    for place in chosen:
        row = [digits(float(depth[place]), 1)]
        for name in SHOWN:
            one = layers.sel(tracer=name).isel(depth=place)
            places = UNITS[name][1]
            row += [
                digits(float(one["cast"]), places),
                digits(float(one["steady"]), places),
                digits(float(one["difference"]), places, sign=True),
            ]
        rows.append(row)
    return aligned(headings, rows, left=0)


def csv_text(layers: xr.Dataset, headline: str) -> str:
    """Return casts and steady state of every layer and tracer as a CSV file."""
    names = list(layers["tracer"].values)
    units = {name: UNITS[name][0].replace("/", "_") for name in names}
    heads = ["depth_m"] + [
        f"{name}_{kind}_{units[name]}" for name in names for kind in ("cast", "steady")
    ]
    lines = [f"# {headline}", f"# {CAUTION}", ",".join(heads)]
    table = layers[["cast", "steady"]].to_array().transpose("depth", "tracer", "variable")
    for depth, row in zip(layers["depth"].values, table.values, strict=True):
        lines.append(",".join([f"{depth:g}", *(f"{value:.7g}" for value in row.ravel())]))
    return "\n".join(lines) + "\n"
