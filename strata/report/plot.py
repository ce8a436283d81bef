"""Drawings of one axes each: data and an ``Axes`` in, artists out; nothing is saved.

    import matplotlib.pyplot as plt
    import strata
    figure, ax = plt.subplots()
    strata.plot.gas_pressure(result, year=20, ax=ax)

Depth runs down, time runs right, limits are thick dashed lines with their names, measured
values are points and model values lines.  Plans differ by colour and by dashes.
"""

from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np
import xarray as xr
from matplotlib.artist import Artist
from matplotlib.axes import Axes
from matplotlib.ticker import FuncFormatter
from numpy.typing import NDArray

from strata.lake.site import Profile
from strata.limits import MILLION, Limit, series
from strata.variables import PLANT_SERIES, VARIABLES

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


def _label(variable: str) -> str:
    if variable in SHOWN:
        name, unit, _, _ = SHOWN[variable]
        return f"{name} [{unit}]"
    row = VARIABLES[variable]
    return f"{row.long_name} [{row.unit}]"


def _scaled(result: xr.Dataset, variable: str) -> Array:
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


# Sections and profiles ----------------------------------------------------------------------


def colour_limits(results: Sequence[xr.Dataset], variable: str) -> tuple[float, float]:
    """Return one pair of colour limits for a variable in all results."""
    if variable == "saturation":
        largest = [float(np.nanmax(result["largest_saturation"])) for result in results]
        return 0.0, max(largest)
    arrays = [_scaled(result, variable) for result in results]
    return (
        float(min(np.nanmin(array) for array in arrays)),
        float(max(np.nanmax(array) for array in arrays)),
    )


def _yearly(result: xr.Dataset) -> xr.Dataset:
    """Return the records nearest to whole years after the start: one season, few to draw."""
    passed = calendar_years(result)
    whole = np.arange(0.0, passed[-1] - passed[0] + 1e-6)
    if len(whole) < 4:
        return result
    nearest = [int(np.argmin(np.abs(passed - passed[0] - year))) for year in whole]
    return result.isel(time=np.unique(nearest))


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
    thin = _yearly(result)
    values = _scaled(thin, variable)
    colours = SHOWN[variable][3] if variable in SHOWN else "viridis"
    if baseline is not None:
        values = values - _scaled(_yearly(baseline), variable)[: len(values)]
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
    values = _scaled(result, variable)
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
    ax.set_xlabel(_label(variable))
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


# Through time -------------------------------------------------------------------------------


def through_time(
    results: Mapping[str, xr.Dataset], variable: str, ax: Axes, factor: float = 1.0
) -> list[Artist]:
    """Draw a whole-lake series of every plan, the lake left alone first."""
    artists: list[Artist] = []
    for number, (name, result) in enumerate(results.items()):
        values = result[variable].values / factor
        artists += ax.plot(calendar_years(result), values, **plan_style(number), label=name)
    ax.set_xlabel("year")
    ax.set_ylabel(_label(variable))
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

    thin = _yearly(result)
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


# Separator ----------------------------------------------------------------------------------


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
