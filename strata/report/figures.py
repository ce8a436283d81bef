"""Figures of a dossier: several axes each, with the same colours and limits for every plan."""

from collections.abc import Iterable, Iterator, Mapping, Sequence
from contextlib import contextmanager
from pathlib import Path
from typing import Any

import numpy as np
import xarray as xr
from matplotlib import rc_context
from matplotlib.figure import Figure
from matplotlib.ticker import MaxNLocator

from strata import __version__, margins
from strata.caution import CAUTION
from strata.lake.site import Lake, Profile
from strata.limits import Limits
from strata.report import plot
from strata.report.drawing import BAR, LIMIT_STYLE, SHOWN
from strata.results import replacing
from strata.water import potential_density

STYLE: dict[str, Any] = {
    "font.size": 9.0,
    "axes.titlesize": 9.5,
    "axes.labelsize": 9.0,
    "axes.spines.top": False,
    "axes.spines.right": False,
    "axes.grid": True,
    "grid.color": "0.88",
    "grid.linewidth": 0.6,
    "axes.axisbelow": True,
    "legend.frameon": False,
    "legend.fontsize": 8.5,
    "xtick.labelsize": 8.5,
    "ytick.labelsize": 8.5,
    "hatch.linewidth": 0.4,
    "svg.fonttype": "path",
    "svg.hashsalt": "strata",
    "path.simplify": True,
}
WIDTH = 9.6  # inches
_DPI = 150


@contextmanager
def house_style() -> Iterator[None]:
    """Draw in the style of the dossier."""
    with rc_context(STYLE):  # type: ignore[arg-type]
        yield


def save(figure: Figure, path: Path) -> None:
    """Write a figure as PNG that carries the caution, by which strata knows its own files.

    Raises
    ------
    strata.InputError
        If the file cannot be written.
    """
    words = {"Description": CAUTION, "Software": f"strata {__version__}"}
    with replacing(path) as partial:
        figure.savefig(partial, format="png", dpi=_DPI, metadata=words)


def grid(rows: int, columns: int, height: float, **options: Any) -> tuple[Figure, np.ndarray]:
    """Return a figure with an array of axes, the legend's room on top."""
    figure = Figure(figsize=(WIDTH, height))
    top = 1.0 - 0.62 / height
    axes = figure.subplots(
        rows,
        columns,
        squeeze=False,
        gridspec_kw={
            "left": 0.075,
            "right": options.pop("right", 0.985),
            "bottom": 0.5 / height,
            "top": options.pop("top", top),
            "wspace": options.pop("wspace", 0.28),
            "hspace": options.pop("hspace", 0.42),
        },
        **options,
    )
    for ax in axes.flat:
        ax.xaxis.set_major_locator(MaxNLocator(5, steps=[1, 2, 2.5, 5, 10]))
        ax.yaxis.set_major_locator(MaxNLocator(5, steps=[1, 2, 2.5, 5, 10]))
    return figure, axes


def legend(figure: Figure, source: Any, columns: int = 6) -> None:
    """Put one legend for all axes on top."""
    handles, labels = source.get_legend_handles_labels()
    figure.legend(handles, labels, loc="upper left", ncols=columns, bbox_to_anchor=(0.06, 1.0))


def outer_labels(axes: np.ndarray, names: Iterable[str] = ()) -> None:
    """Leave the names of axes on the outer ones alone; name each column on top."""
    for ax in axes[:, 1:].flat:
        ax.set_ylabel("")
    for ax in axes[:-1].flat:
        ax.set_xlabel("")
    for ax, name in zip(axes[0], names, strict=False):
        ax.set_title(name, loc="left")


def limits_through_time(
    results: Mapping[str, xr.Dataset], limits: Limits, baseline: xr.Dataset | None
) -> Figure:
    """Return one small drawing per limit, every plan in it."""
    columns = 3
    rows = -(-len(limits.limits) // columns)
    figure, axes = grid(rows, columns, 0.9 + 2.1 * rows, hspace=0.55)
    for ax, limit in zip(axes.flat, limits.limits, strict=False):
        plot.against_limit(results, limit, ax, baseline)
    for ax in axes.flat[len(limits.limits) :]:
        ax.set_axis_off()
    legend(figure, axes.flat[0])
    return figure


def main_gradient(
    results: Mapping[str, xr.Dataset], limits: Limits, baseline: xr.Dataset | None
) -> Figure:
    """Return depth and strength of the main gradient of every plan, with their limits."""
    figure, ((left, right),) = grid(1, 2, 3.3, wspace=0.22)
    plot.through_time(results, "gradient_depth", left)
    plot.through_time(results, "gradient_strength", right)
    first = next(iter(results.values()))
    start_depth = float(first["gradient_depth"][0])
    start_strength = float(first["gradient_strength"][0])
    for limit in limits.limits:
        if limit.quantity == "gradient_depth_m":
            plot.limit_line(left, limit.bound, f"limit: {limit.rule}")
        elif limit.quantity == "gradient_sinking_m" and limit.against != "baseline":
            plot.limit_line(left, start_depth + limit.bound, f"limit: sinks {limit.rule}")
        elif limit.quantity == "gradient_strength_share" and limit.against != "baseline":
            text = f"limit: {100 * limit.bound:.0f} % of the start"
            plot.limit_line(right, limit.bound * start_strength, text)
    left.invert_yaxis()
    right.set_ylim(bottom=0.0)
    left.set_ylabel("depth of the main gradient [m]")
    right.set_ylabel("density step [kg/m³]")
    legend(figure, left)
    return figure


def gas_pressure(results: Mapping[str, xr.Dataset]) -> Figure:
    """Return gas pressure against depth at the end of every plan, the start as a thin line."""
    figure, axes = grid(1, len(results), 3.9, sharey=True, wspace=0.08)
    for ax, result in zip(axes[0], results.values(), strict=True):
        years = plot.calendar_years(result)
        plot.gas_pressure(result, ax, year=float(years[-1] - years[0]), compare=0.0)
    outer_labels(axes, results)
    legend(figure, axes[0, 0])
    return figure


def sections(results: Mapping[str, xr.Dataset], variables: Sequence[str]) -> Figure:
    """Return depth-time sections: a row per variable, a column per plan, one scale per row."""
    limits = [plot.colour_limits(list(results.values()), variable) for variable in variables]
    return _sections(results, variables, limits)


def differences(
    results: Mapping[str, xr.Dataset], baseline: xr.Dataset, variables: Sequence[str]
) -> Figure:
    """Return sections of plan less lake left alone: a row per variable, a column per plan."""
    limits = []
    for variable in variables:
        alone = baseline[variable].values[-1]
        changes = [np.abs(one[variable].values[-1] - alone) for one in results.values()]
        reach = max(float(np.nanmax(change)) for change in changes) / SHOWN[variable][2]
        limits.append((-reach, reach))
    return _sections(results, variables, limits, baseline, "change of ")


def _sections(
    results: Mapping[str, xr.Dataset],
    variables: Sequence[str],
    limits: Sequence[tuple[float, float]],
    baseline: xr.Dataset | None = None,
    words: str = "",
) -> Figure:
    """Return sections with the limits of their colours by row; words go before its name."""
    rows = len(variables)
    height = 0.7 + 1.95 * rows
    figure, axes = grid(
        rows,
        len(results),
        height,
        sharex=True,
        sharey=True,
        right=0.90,
        wspace=0.08,
        hspace=0.14,
        top=1.0 - 0.28 / height,
    )
    for row, variable, bounds in zip(axes, variables, limits, strict=True):
        for ax, result in zip(row, results.values(), strict=True):
            ax.grid(False)
            mesh = plot.section(result, variable, ax, bounds, baseline)[0]
        _colour_bar(figure, mesh, row[-1], variable, words)
    outer_labels(axes, results)
    return figure


def _colour_bar(figure: Figure, mesh: Any, ax: Any, variable: str, words: str = "") -> None:
    """Put a colour bar with name and unit to the right of a row."""
    box = ax.get_position()
    room = figure.add_axes((0.915, box.y0, 0.012, box.height))
    bar = figure.colorbar(mesh, cax=room)
    name, unit, _, _ = SHOWN[variable]
    bar.set_label(f"{words}{name} [{unit}]")
    if words:
        room.axhline(0.0, color="0.2", linewidth=1.0, linestyle="dotted")
    bar.outline.set_visible(False)


def profiles(results: Mapping[str, xr.Dataset], years: Sequence[float]) -> Figure:
    """Return profiles at chosen years: a row per plan, a column per variable."""
    variables = ("temperature", "salinity", "methane", "carbon_dioxide")
    rows = len(results)
    figure, axes = grid(
        rows,
        len(variables),
        0.8 + 2.3 * rows,
        sharex="col",
        sharey=True,
        wspace=0.1,
        hspace=0.2,
    )
    for row, (name, result) in zip(axes, results.items(), strict=True):
        for ax, variable in zip(row, variables, strict=True):
            plot.profiles(result, variable, ax, years)
        row[0].set_title(name, loc="left")
    outer_labels(axes)
    legend(figure, axes[0, 0])
    return figure


def methane(results: Mapping[str, xr.Dataset]) -> Figure:
    """Return methane in place by zone, and where it went, for every plan."""
    figure, axes = grid(
        2, len(results), 4.9, sharex=True, sharey="row", wspace=0.1, hspace=0.42
    )
    for (above, below), result in zip(axes.T, results.values(), strict=True):
        plot.gas_in_place(result, above)
        plot.methane_fate(result, below)
    outer_labels(axes, results)
    legend(figure, axes[0, 0])
    handles, labels = axes[1, 0].get_legend_handles_labels()
    figure.legend(handles, labels, loc="upper left", ncols=3, bbox_to_anchor=(0.06, 0.505))
    return figure


def plants(results: Mapping[str, xr.Dataset]) -> Figure:
    """Return power, purity of the product and trap depth of every plant, a column per plan."""
    figure, axes = grid(
        3, len(results), 6.6, sharex=True, sharey="row", wspace=0.1, hspace=0.15
    )
    for (power, purity, depth), result in zip(axes.T, results.values(), strict=True):
        plot.plant_series(result, "net_power", power, 1e6, "MW")
        plot.plant_series(result, "product_purity", purity)
        *_, gradient = plot.trap_depth(result, depth)
        power.set_ylabel("net power [MW]")
        purity.set_ylabel("CH$_4$ in the product [1]")
        purity.set_ylim(0.0, 1.02)
        power.legend(loc="best")
    outer_labels(axes, results)
    axes[2, 0].invert_yaxis()
    axes[2, 0].legend(handles=[gradient], loc="best")
    return figure


#: Gas -> variable of a result.
_GASES = {
    "CH4": "methane",
    "CO2": "carbon_dioxide",
    "N2": "nitrogen",
    "O2": "oxygen",
    "H2S": "hydrogen_sulfide",
}


def today(result: xr.Dataset, lake: Lake) -> Figure:
    """Return today's column: profiles and gas with what the casts read, and stability."""
    figure, axes = grid(2, 4, 7.6, sharey=True, wspace=0.12, hspace=0.24)
    (heat, salt, weight, stable), (methane, carbon, pressing, saturated) = axes
    first = result.isel(time=slice(0, 1))
    first = first.assign(potential_density=_potential_density(first, lake))
    sampled = margins.of_samples(lake)
    for ax, variable, reading in (
        (heat, "temperature", _reading(lake, "temperature")),
        (salt, "salinity", _reading(lake, "salinity")),
        (weight, "potential_density", None),
        (methane, "methane", _reading(lake, "CH4")),
        (carbon, "carbon_dioxide", _reading(lake, "CO2")),
        (saturated, "saturation", sampled["saturation"]),
    ):
        plot.profiles(first, variable, ax, (0,), reading)
    plot.stability(first, stable)
    plot.gas_pressure(first, pressing)
    plot.measured_points(_scaled(sampled["gas_pressure"], BAR), pressing)
    saturated.axvline(1.0, **LIMIT_STYLE)
    saturated.annotate(
        "bubbles",
        (1.0, 0.98),
        xycoords=("data", "axes fraction"),
        xytext=(-4, 0),
        textcoords="offset points",
        ha="right",
        va="top",
        rotation=90,
        fontsize="small",
    )
    saturated.set_xlim(0.0, 1.05 * max(1.0, float(sampled["saturation"].value.max())))
    for ax in axes.flat:
        ax.axhspan(*_main_extent(first), color="0.85", zorder=0, label="main gradient")
    for ax in axes[:, 1:].flat:
        ax.set_ylabel("")
    named: dict[str, Any] = {}
    for ax in (heat, pressing):
        handles, labels = ax.get_legend_handles_labels()
        named |= dict(zip(labels, handles, strict=True))
    figure.legend(
        named.values(),
        named,
        loc="upper left",
        ncols=len(named),
        bbox_to_anchor=(0.06, 1.0),
        columnspacing=1.1,
        handlelength=1.6,
        handletextpad=0.5,
    )
    return figure


def _potential_density(result: xr.Dataset, lake: Lake) -> xr.DataArray:
    """Return what the water would weigh at the surface [kg m-3]."""
    gases = {gas: result[name].values for gas, name in _GASES.items()}
    found = potential_density(
        result["temperature"].values,
        result["salinity"].values,
        result["pressure"].values,
        gases,
        lake.site.air_pressure,
        lake.site.haline_contraction,
        lake.site.co2_molar_volume,
    )
    return result["density"].copy(data=found)


def _scaled(profile: Profile, factor: float) -> Profile:
    """Return readings in another unit."""
    return Profile(profile.depth, profile.value / factor, profile.error / factor)


def _main_extent(result: xr.Dataset) -> tuple[float, float]:
    middle = float(result["gradient_depth"][0])
    half = 0.5 * float(result["gradient_thickness"][0])
    return middle - half, middle + half


def _reading(lake: Lake, name: str) -> Profile | None:
    return lake.cast.profiles.get(name)
