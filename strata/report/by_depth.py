"""Drawings with depth running down: sections through time, profiles, gas pressure."""

from collections.abc import Sequence
from typing import Any

import numpy as np
import xarray as xr
from matplotlib.artist import Artist
from matplotlib.axes import Axes

from strata.lake.site import Profile
from strata.report.drawing import (
    BAR,
    GAS_COLOURS,
    LIMIT_STYLE,
    SHOWN,
    calendar_years,
    depth_axis,
    label_of,
    record_of,
    scaled,
    yearly,
)


def colour_limits(results: Sequence[xr.Dataset], variable: str) -> tuple[float, float]:
    """Return one pair of colour limits for a variable in all results."""
    if variable == "saturation":
        largest = [float(np.nanmax(result["largest_saturation"])) for result in results]
        return 0.0, max(largest)
    arrays = [scaled(result, variable) for result in results]
    return (
        float(min(np.nanmin(array) for array in arrays)),
        float(max(np.nanmax(array) for array in arrays)),
    )


def section(
    result: xr.Dataset,
    variable: str,
    ax: Axes,
    limits: tuple[float, float] | None = None,
    baseline: xr.Dataset | None = None,
) -> list[Artist]:
    """Draw a variable over time and depth, with the main gradient as a line.

    With a baseline the difference to it is drawn instead, its zero as a line.

    Parameters
    ----------
    result : xarray.Dataset
    variable : str
        With dimensions time and depth.
    ax : Axes
    limits : pair of float, optional
        Of the colours, in the unit shown; give the same ones to every plan.
    baseline : xarray.Dataset, optional

    Returns
    -------
    list of Artist
        The coloured mesh first.
    """
    thin = yearly(result)
    values = scaled(thin, variable)
    colours = SHOWN[variable][3] if variable in SHOWN else "viridis"
    if baseline is not None:
        values = values - scaled(yearly(baseline), variable)[: len(values)]
        reach = float(np.nanmax(np.abs(values))) or 1.0
        limits, colours = limits or (-reach, reach), "PuOr"
    if variable == "saturation":  # near the surface it is at one by nature
        mixed = thin["surface_layer_depth"].values[:, np.newaxis]
        values = np.where(thin["face"].values[:-1] >= mixed - 1e-6, values, np.nan)
        ax.set_facecolor("0.8")
    years = calendar_years(thin)
    edges = np.concatenate(
        ([years[0]], 0.5 * (years[1:] + years[:-1]), [years[-1]])  # half a record at the ends
    )
    low, high = limits or colour_limits([thin], variable)
    mesh = ax.pcolormesh(
        edges,
        thin["face"].values,
        values.T,
        cmap=colours,
        vmin=low,
        vmax=high,
        rasterized=True,
        shading="flat",
    )
    artists: list[Artist] = [mesh]
    line_colour = "white" if baseline is None else "black"
    all_years = calendar_years(result)
    artists += ax.plot(
        all_years, result["gradient_depth"].values, color=line_colour, linewidth=1.2
    )
    if baseline is not None:
        # round-off around nought has no sign worth a line
        signed = np.where(np.abs(values) < 0.01 * high, 0.01 * high, values)
        zero: dict[str, Any] = {"colors": "0.2", "linewidths": 0.7, "linestyles": "dotted"}
        artists.append(ax.contour(years, thin["depth"].values, signed.T, [0.0], **zero))
    depth_axis(ax, float(thin["face"].values[-1]))
    ax.set_xlabel("year")
    ax.set_xlim(years[0], years[-1])
    return artists


def profiles(
    result: xr.Dataset,
    variable: str,
    ax: Axes,
    years: Sequence[float] = (0,),
    measured: Profile | None = None,
) -> list[Artist]:
    """Draw profiles of a variable at chosen years after the start; later is darker.

    Parameters
    ----------
    result : xarray.Dataset
    variable : str
    ax : Axes
    years : sequence of float
    measured : Profile, optional
        Readings of a cast in the unit shown, drawn as points with their errors.
    """
    values = scaled(result, variable)
    depth = result["depth"].values
    artists: list[Artist] = []
    shades = np.linspace(0.75, 0.0, len(years)) if len(years) > 1 else [0.15]
    dashes = ["-", (0, (5, 1.5)), (0, (5, 1.2, 1, 1.2)), (0, (1, 1.2))]
    start = calendar_years(result)[0]
    for number, year in enumerate(years):
        artists += ax.plot(
            values[record_of(result, year)],
            depth,
            color=str(shades[number]),
            linestyle=dashes[::-1][number % 4] if number < len(years) - 1 else "-",
            linewidth=1.4,
            label=f"{start + year:.0f}",
        )
    if measured is not None:
        artists += measured_points(measured, ax)
    depth_axis(ax, float(result["face"].values[-1]))
    ax.set_xlabel(label_of(variable))
    return artists


def measured_points(measured: Profile, ax: Axes) -> list[Artist]:
    """Draw the readings of a cast as points with their standard errors."""
    few = len(measured.depth) <= 60
    step = 1 if few else max(len(measured.depth) // 60, 1)
    points = ax.errorbar(
        measured.value[::step],
        measured.depth[::step],
        xerr=measured.error[::step],
        fmt="o",
        markersize=3.2 if few else 2.2,
        markerfacecolor="white",
        markeredgecolor="#D55E00",
        ecolor="#D55E00",
        elinewidth=0.8,
        linewidth=0,
        label="measured",
        zorder=4,
    )
    return list(points.get_children())


def gas_pressure(
    result: xr.Dataset, ax: Axes, year: float = 0, compare: float | None = None
) -> list[Artist]:
    """Draw total gas pressure against depth with the hydrostatic line.

    Parameters
    ----------
    result : xarray.Dataset
    ax : Axes
    year : float
        Years after the start.
    compare : float, optional
        A second year, drawn as a thin dashed line.

    Returns
    -------
    list of Artist
        Gas pressure, hydrostatic pressure, bands of CH4, CO2 and the rest, and the other year.
    """
    depth = result["depth"].values
    at = result.isel(time=record_of(result, year))
    start = calendar_years(result)[0]
    total, hydrostatic = at["gas_pressure"].values / BAR, result["pressure"].values / BAR
    rest = (
        at["gas_pressure"]
        - at["methane_partial_pressure"]
        - at["carbon_dioxide_partial_pressure"]
    ).values / BAR
    bands = {
        "other": rest,
        "CO2": at["carbon_dioxide_partial_pressure"].values / BAR,
        "CH4": at["methane_partial_pressure"].values / BAR,
    }
    names = {"other": "air and vapour", "CO2": "CO$_2$", "CH4": "CH$_4$"}
    hatches = {"other": "", "CO2": "---", "CH4": "///"}
    artists: list[Artist] = []
    left = np.zeros_like(total)
    fills: list[Artist] = []
    for gas, part in bands.items():
        fills.append(
            ax.fill_betweenx(
                depth,
                left,
                left + part,
                facecolor=GAS_COLOURS[gas],
                hatch=hatches[gas],
                edgecolor="white",
                linewidth=0.0,
                alpha=0.75,
                label=names[gas],
            )
        )
        left = left + part
    label = f"gas pressure {start + year:.0f}"
    artists += ax.plot(total, depth, color="black", linewidth=1.6, label=label)
    line = {**LIMIT_STYLE, "linewidth": 2.0}
    artists += ax.plot(hydrostatic, depth, **line, label="hydrostatic pressure")
    artists += fills
    if compare is not None:
        other = result["gas_pressure"].values[record_of(result, compare)] / BAR
        label = f"gas pressure {start + compare:.0f}"
        artists += ax.plot(other, depth, color="#D55E00", linestyle="-", lw=1.0, label=label)
    depth_axis(ax, float(result["face"].values[-1]))
    ax.set_xlim(0.0, float(hydrostatic[-1]) * 1.03)
    ax.set_xlabel("pressure [bar]")
    return artists


def stability(result: xr.Dataset, ax: Axes, year: float = 0) -> list[Artist]:
    """Draw buoyancy frequency squared against depth; gaps where water is not stable."""
    squared = result["buoyancy_frequency_squared"].values[record_of(result, year)]
    shown = np.where(squared > 0.0, squared, np.nan)
    start = calendar_years(result)[0]
    line: dict[str, Any] = {"color": "0.15", "linewidth": 1.4, "label": f"{start + year:.0f}"}
    artists: list[Artist] = list(ax.plot(shown, result["face"].values, **line))
    ax.set_xscale("log")
    depth_axis(ax, float(result["face"].values[-1]))
    ax.set_xlabel("N² [1/s²]")
    return artists
