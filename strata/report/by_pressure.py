"""Drawings over the pressure of a separator."""

import numpy as np
import xarray as xr
from matplotlib.artist import Artist
from matplotlib.axes import Axes
from matplotlib.ticker import FuncFormatter

from strata.report.drawing import (
    BAR,
    plan_style,
)

#: Outcomes of which most is best, so that the best is marked.
MOST = ("recovery", "heating_value", "net_energy", "return_density_excess")


def separator_sweep(
    sweep: xr.Dataset, variable: str, ax: Axes, factor: float = 1.0, label: str = ""
) -> list[Artist]:
    """Draw one outcome of a separator against its pressure, CO2 free beside CO2 bound.

    Parameters
    ----------
    sweep : xarray.Dataset
        With dimensions ``case`` ("CO2 free", "CO2 bound") and ``pressure`` [Pa].
    variable : str
        "recovery", "purity", "net_energy", ...
    ax : Axes
    factor : float
        Divides the values.
    label : str
        Of the axis; the long name of the variable if empty.
    """
    artists: list[Artist] = []
    pressure = sweep["pressure"].values / BAR
    bests = []
    for number, case in enumerate(sweep["case"].values):
        values = sweep[variable].sel(case=case).values / factor
        style = plan_style(number + 1)
        artists += ax.plot(pressure, values, **style, label=str(case))
        if variable in MOST and np.isfinite(values).any():
            best = int(np.nanargmax(values))
            dot = {"color": style["color"], "markersize": 6, "linestyle": "none"}
            artists += ax.plot(pressure[best], values[best], "o", **dot)
            bests.append(f"{str(case).removeprefix('CO2 ')} {pressure[best]:.2g}")
    if bests:
        ax.set_title(f"best: {', '.join(bests)} bar", loc="left", fontsize="medium")
    ax.set_xscale("log")
    ax.xaxis.set_major_formatter(FuncFormatter(lambda value, _: f"{value:g}"))
    ax.set_xlabel("separator pressure [bar]")
    ax.set_ylabel(label or sweep[variable].attrs.get("long_name", variable))
    return artists
