"""Drawings with time running right: limits, gas in place, plants."""

from collections.abc import Mapping
from typing import Any

import numpy as np
import xarray as xr
from matplotlib.artist import Artist
from matplotlib.axes import Axes

from strata.limits import MILLION, Limit, series
from strata.report.drawing import (
    Array,
    calendar_years,
    label_of,
    limit_line,
    plan_style,
    yearly,
)
from strata.variables import PLANT_SERIES


def through_time(
    results: Mapping[str, xr.Dataset], variable: str, ax: Axes, factor: float = 1.0
) -> list[Artist]:
    """Draw a whole-lake series of every plan, the lake left alone first."""
    artists: list[Artist] = []
    for number, (name, result) in enumerate(results.items()):
        values = result[variable].values / factor
        artists += ax.plot(calendar_years(result), values, **plan_style(number), label=name)
    ax.set_xlabel("year")
    ax.set_ylabel(label_of(variable))
    return artists


def worst_of_year(result: xr.Dataset, values: Array, upward: bool) -> tuple[Array, Array]:
    """Return calendar years and the largest (least) value in each; short runs as they are."""
    years = calendar_years(result)
    if years[-1] - years[0] < 4:
        return years, values
    whole = np.floor(years - years[0])
    first = np.flatnonzero(np.diff(whole, prepend=-1.0) > 0)
    known = np.where(np.isfinite(values), values, -np.inf if upward else np.inf)
    worst = (np.maximum if upward else np.minimum).reduceat(known, first)
    return years[first], np.where(np.isfinite(worst), worst, np.nan)


def against_limit(
    results: Mapping[str, xr.Dataset],
    limit: Limit,
    ax: Axes,
    baseline: xr.Dataset | None = None,
) -> list[Artist]:
    """Draw what a limit is set on for every plan, the worst of each year, with the limit.

    Parameters
    ----------
    results : mapping
        Name of the plan -> result, the lake left alone first.
    limit : Limit
    ax : Axes
    baseline : xarray.Dataset, optional
        The lake left alone, for limits set against it.
    """
    artists: list[Artist] = []
    upward = (limit.sense or limit.subject.sense) == "most"
    large = abs(limit.bound) >= MILLION
    factor = MILLION if large else 1.0
    bound = limit.bound / factor
    for number, (name, result) in enumerate(results.items()):
        values, _ = series(result, limit, baseline)
        worst = worst_of_year(result, values / factor, upward)
        artists += ax.plot(*worst, **plan_style(number), label=name)
    artists += limit_line(ax, bound, f"limit: {limit.rule}")
    low, high = ax.get_ylim()
    room = 0.08 * max(high - low, abs(bound - low), abs(bound - high))
    ax.set_ylim(min(low, bound - room), max(high, bound + 2 * room))
    ax.set_title(limit.words, loc="left", fontsize="medium")
    ax.set_ylabel(f"[million {limit.subject.unit}]" if large else f"[{limit.subject.unit}]")
    ax.set_xlabel("year")
    if limit.quantity in ("gradient_depth_m", "gradient_sinking_m", "oxic_depth_m"):
        ax.invert_yaxis()
    return artists


def gas_in_place(result: xr.Dataset, ax: Axes, gas: str = "methane") -> list[Artist]:
    """Draw the gas in each zone through time, stacked [km3 at 0 degC, 1 atm]."""
    from strata.margins import cubic_kilometres

    thin = yearly(result)
    zones = thin[f"{gas}_in_zone"].transpose("time", "zone")
    years = calendar_years(thin)
    amounts = cubic_kilometres(zones.values)
    order = range(amounts.shape[1] - 1, -1, -1)
    colours = ["#4B6A9B", "#9FB8D9", "#DCE6F2"]
    artists: list[Artist] = []
    floor = np.zeros(len(years))
    for number, zone in enumerate(order):
        artists.append(
            ax.fill_between(
                years,
                floor,
                floor + amounts[:, zone],
                facecolor=colours[number % 3],
                edgecolor="0.2",
                linewidth=0.6,
                label=str(zones["zone"].values[zone]),
            )
        )
        floor = floor + amounts[:, zone]
    ax.set_xlim(years[0], years[-1])
    ax.set_ylim(0.0, float(floor.max()) * 1.08)
    ax.set_ylabel("CH$_4$ in place [km³]" if gas == "methane" else "CO$_2$ in place [km³]")
    ax.set_xlabel("year")
    return artists


def methane_fate(result: xr.Dataset, ax: Axes) -> list[Artist]:
    """Draw methane delivered, vented and lost upward since the start, in per cent."""
    start = float(result["methane_in_place"].values[0])
    years = calendar_years(result)
    shown = (
        ("methane_recovered", "delivered", "#0072B2", "-"),
        ("methane_lost_to_upper_lake", "lost upward", "#D55E00", (0, (5, 1.5))),
        ("methane_vented", "vented", "#555555", (0, (1, 1.2))),
    )
    artists: list[Artist] = []
    for variable, label, colour, dashes in shown:
        share = 100.0 * result[variable].values / start
        artists += ax.plot(years, share, color=colour, linestyle=dashes, label=label)
    ax.set_ylabel("of CH$_4$ at the start [%]")
    ax.set_xlabel("year")
    return artists


def by_year(years: Array, values: Array) -> tuple[Array, Array, Array, Array]:
    """Return the middle of every calendar year, and mean, least and largest value in it.

    Runs shorter than four years stay as they are; years without a value have none.
    """
    if years[-1] - years[0] < 4.0:
        return years, values, values, values
    whole = np.floor(years + 1e-6)
    found = []
    for year in np.unique(whole)[:-1]:  # the last record alone begins a year
        known = values[(whole == year) & np.isfinite(values)]
        spread = (known.mean(), known.min(), known.max()) if known.size else 3 * (np.nan,)
        found.append((year + 0.5, *spread))
    return tuple(np.array(found).T)


def plant_series(
    result: xr.Dataset, name: str, ax: Axes, factor: float = 1.0, unit: str = ""
) -> list[Artist]:
    """Draw one series of every plant of a result: its means by year, their range as a band.

    Parameters
    ----------
    result : xarray.Dataset
    name : str
        As in ``strata.variables.PLANT_SERIES``.
    ax : Axes
    factor : float
        Divides the values.
    unit : str
        Of the values after that; the variable's own if empty.
    """
    artists: list[Artist] = []
    words = PLANT_SERIES[name]
    if f"plant_{name}" in result:
        for number, plant in enumerate(result["plant"].values):
            values = result[f"plant_{name}"].sel(plant=plant).values / factor
            style = plan_style(number + 1)
            years, mean, low, high = by_year(calendar_years(result), values)
            artists += ax.plot(years, mean, **style, label=str(plant))
            band = {"color": style["color"], "alpha": 0.25, "linewidth": 0.0}
            artists.append(ax.fill_between(years, low, high, **band))
    ax.set_xlabel("year")
    ax.set_ylabel(f"{words.long_name} [{unit or words.unit}]")
    return artists


def trap_depth(result: xr.Dataset, ax: Axes) -> list[Artist]:
    """Draw where the return water of every plant spreads, and the main gradient with it."""
    artists = plant_series(result, "trap_depth", ax)
    years, gradient = calendar_years(result), result["gradient_depth"].values
    line: dict[str, Any] = {"color": "0.35", "linewidth": 1.0, "linestyle": (0, (6, 3))}
    artists += ax.plot(years, gradient, **line, label="main gradient")
    ax.set_ylabel("return water spreads at [m]")
    return artists
