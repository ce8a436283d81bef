"""What all drawings share: colours and dashes, names and units, axes of depth and of years."""

from collections.abc import Mapping
from typing import Any

import numpy as np
import xarray as xr
from matplotlib.artist import Artist
from matplotlib.axes import Axes
from numpy.typing import NDArray

from strata.variables import VARIABLES

Array = NDArray[np.float64]

BAR = 1e5
YEAR = 365.2425  # days

#: Colours that stay apart for all eyes and in grey (Okabe & Ito 2008), each with its own
#: dashes.
PLAN_STYLES: tuple[dict[str, Any], ...] = (
    {"color": "#555555", "linestyle": (0, (1, 1.2)), "linewidth": 2.2},
    {"color": "#0072B2", "linestyle": "-", "linewidth": 1.6},
    {"color": "#D55E00", "linestyle": (0, (5, 1.5)), "linewidth": 1.6},
    {"color": "#009E73", "linestyle": (0, (5, 1.2, 1, 1.2)), "linewidth": 1.6},
    {"color": "#CC79A7", "linestyle": (0, (3, 1, 1, 1, 1, 1)), "linewidth": 1.6},
    {"color": "#56B4E9", "linestyle": (0, (8, 2)), "linewidth": 1.6},
)
LIMIT_STYLE: dict[str, Any] = {"color": "black", "linestyle": (0, (6, 3)), "linewidth": 2.4}
GAS_COLOURS = {"CH4": "#E69F00", "CO2": "#56B4E9", "other": "#999999"}

#: How a profile variable is shown: name, unit, factor, colour map.
SHOWN: Mapping[str, tuple[str, str, float, str]] = {
    "temperature": ("temperature", "°C", 1.0, "viridis"),
    "salinity": ("salinity", "g/kg", 1.0, "viridis"),
    "methane": ("CH$_4$", "mol/m³", 1.0, "cividis"),
    "carbon_dioxide": ("free CO$_2$", "mol/m³", 1.0, "cividis"),
    "saturation": ("saturation", "1", 1.0, "viridis"),
    "density": ("density", "kg/m³", 1.0, "viridis"),
    "potential_density": ("density at air pressure", "kg/m³", 1.0, "viridis"),
    "oxygen": ("O$_2$", "mol/m³", 1.0, "cividis"),
    "phosphate": ("phosphate", "mmol/m³", 1e-3, "cividis"),
    "hydrogen_sulfide": ("H$_2$S", "mol/m³", 1.0, "cividis"),
    "ph": ("pH", "1", 1.0, "viridis"),
    "gas_pressure": ("gas pressure", "bar", BAR, "viridis"),
    "pressure_margin": ("pressure margin", "bar", BAR, "viridis"),
}


def plan_style(number: int) -> dict[str, Any]:
    """Return the line style of a plan by its place; number 0 is the lake left alone."""
    return dict(PLAN_STYLES[number % len(PLAN_STYLES)])


def calendar_years(result: xr.Dataset) -> Array:
    """Return the times of a result as calendar years with their fraction."""
    days = result["time"].values.astype("datetime64[D]").astype(float)
    return np.asarray(1970.0 + days / YEAR)


def record_of(result: xr.Dataset, year: float) -> int:
    """Return the index of the record nearest to a number of years after the start."""
    passed = calendar_years(result)
    return int(np.argmin(np.abs(passed - passed[0] - year)))


def label_of(variable: str) -> str:
    """Return name and unit of a variable as an axis bears them."""
    if variable in SHOWN:
        name, unit, _, _ = SHOWN[variable]
        return f"{name} [{unit}]"
    row = VARIABLES[variable]
    return f"{row.long_name} [{row.unit}]"


def scaled(result: xr.Dataset, variable: str) -> Array:
    """Return a variable in the unit in which it is shown."""
    factor = SHOWN[variable][2] if variable in SHOWN else 1.0
    return np.asarray(result[variable].values / factor)


def depth_axis(ax: Axes, deepest: float, label: bool = True) -> None:
    """Let depth run down from the surface to the deepest point."""
    ax.set_ylim(deepest, 0.0)
    if label:
        ax.set_ylabel("depth [m]")


def limit_line(ax: Axes, bound: float, name: str) -> list[Artist]:
    """Draw a limit as a thick dashed line with its name on it."""
    line = ax.axhline(bound, **LIMIT_STYLE, zorder=3)
    text = ax.annotate(
        name,
        (0.02, bound),
        xycoords=("axes fraction", "data"),
        ha="left",
        va="bottom",
        xytext=(0, 3),
        textcoords="offset points",
        fontsize="small",
        bbox={"facecolor": "white", "alpha": 0.75, "edgecolor": "none", "pad": 0.8},
        zorder=4,
    )
    return [line, text]


def yearly(result: xr.Dataset) -> xr.Dataset:
    """Return the records nearest to whole years after the start: one season, few to draw."""
    passed = calendar_years(result)
    whole = np.arange(0.0, passed[-1] - passed[0] + 1e-6)
    if len(whole) < 4:
        return result
    nearest = [int(np.argmin(np.abs(passed - passed[0] - year))) for year in whole]
    return result.isel(time=np.unique(nearest))
