"""Figures of a plant's settings varied: pressure, two pressures, wash water, lime.

The best setting for an aim is a dot with its value, the setting of the plan a vertical line;
CO2 left free and CO2 bound as calcite share their axes.
"""

from collections.abc import Mapping
from typing import Any

import numpy as np
import xarray as xr
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.ticker import FuncFormatter, NullFormatter

from strata.plant.account import Account
from strata.report import plot
from strata.report.figures import grid, legend

BAR = 1e5

#: Outcome -> (words of its axis, what its SI value is divided by).
_SHOWN: Mapping[str, tuple[str, float]] = {
    "recovery": ("CH$_4$ recovered [1]", 1.0),
    "purity": ("CH$_4$ in the gas [1]", 1.0),
    "net_energy": ("net energy [MJ/m³ feed]", 1e6),
    "heating_value": ("heating value [MJ/m³]", 1e6),
    "specific_power": ("used [kJ per mol of CH$_4$]", 1e3),
    "return_density_excess": ("return over lake [kg/m³]", 1.0),
    "return_ph": ("pH of the return water [1]", 1.0),
}


def separator(sweep: xr.Dataset) -> Figure:
    """Return outcomes of one separator against its pressure, CO2 free and bound together."""
    names = ("recovery", "purity", "net_energy", "heating_value", "specific_power",
             "return_density_excess")  # fmt: skip
    figure, axes = grid(2, 3, 5.6, wspace=0.3, hspace=0.36)
    for ax, name in zip(axes.flat, names, strict=True):
        label, factor = _SHOWN[name]
        plot.separator_sweep(sweep, name, ax, factor, label=label)
    for ax in axes[0, :2]:
        ax.set_ylim(0.0, 1.02)
    axes[0, 2].margins(y=0.15)
    # pumps and compressors of a riser may have nothing to do between vacuum and pressure
    axes[1, 1].set_yscale("symlog", linthresh=10.0)
    axes[1, 1].set_ylim(bottom=0.0)
    axes[1, 1].yaxis.set_major_formatter(FuncFormatter(lambda value, _: f"{value:g}"))
    legend(figure, axes[0, 0])
    return figure


def two_pressures(sweep: xr.Dataset, account: Account) -> Figure:
    """Return maps over the pressures of two separators, with the best pair of each."""
    names = ("net_energy", "recovery", "purity", "return_density_excess")
    figure, axes = grid(
        2, 2, 7.2, sharex=True, sharey=True, wspace=0.26, hspace=0.16, right=0.95
    )
    stages = account.plant.stages
    planned = [stage.pressure / BAR for stage in stages[:2]] if len(stages) > 1 else None
    for number, (ax, name) in enumerate(zip(axes.flat, names, strict=True)):
        pressure_map(sweep, name, ax, planned)
        ax.set_xlabel("first separator [bar]" if number > 1 else "")
        ax.set_ylabel("second separator [bar]" if number % 2 == 0 else "")
    legend(figure, axes[0, 0])
    return figure


def pressure_map(
    sweep: xr.Dataset, name: str, ax: Axes, planned: list[float] | None = None
) -> list[Any]:
    """Draw one outcome over two pressures: filled contours, its best and the plan's pair."""
    label, factor = _SHOWN[name]
    x, y = (sweep[f"{which}_pressure"].values / BAR for which in ("first", "second"))
    values = sweep[name].values.T / factor  # second pressure upward
    ax.grid(False)
    drawn = ax.contourf(x, y, values, 12, cmap="cividis")
    levels = np.asarray(drawn.levels)[::2]
    lines = ax.contour(x, y, values, levels, colors="white", linewidths=0.6)
    ax.clabel(lines, fontsize=7.5, fmt="%.3g")
    bar = ax.figure.colorbar(drawn, ax=ax, pad=0.02)
    bar.set_label(label)
    bar.outline.set_visible(False)
    second, first = np.unravel_index(int(np.nanargmax(values)), values.shape)
    words = f"best: {x[first]:.2g} and {y[second]:.2g} bar"
    style: dict[str, Any] = {"color": "white", "markeredgecolor": "black", "linestyle": "none"}
    style |= {"zorder": 4, "clip_on": False}
    artists = ax.plot(x[first], y[second], "o", markersize=8, **style, label="best pair")
    if planned is not None:
        artists += ax.plot(*planned, "D", markersize=7, **style, label="as planned")
    for axis in (ax.xaxis, ax.yaxis):
        _logarithmic(axis)
    ax.set_title(words, loc="left")
    return [drawn, *artists]


def _logarithmic(axis: Any) -> None:
    """Make an axis of pressures logarithmic, its numbers plain."""
    getattr(axis.axes, f"set_{axis.axis_name}scale")("log")
    axis.set_major_formatter(FuncFormatter(lambda value, _: f"{value:g}"))
    axis.set_minor_formatter(NullFormatter())


def wash(sweep: xr.Dataset, account: Account) -> Figure:
    """Return outcomes against wash water, the plan's amount marked."""
    names = ("recovery", "purity", "net_energy")
    figure, (row,) = grid(1, 3, 3.3, wspace=0.3)
    washing = account.plant.wash
    assert washing is not None
    planned = washing.water_flow / account.plant.flow
    for ax, name in zip(row, names, strict=True):
        swept(sweep, "wash_ratio", name, ax, planned)
        ax.set_xlabel("wash water [m³ per m³ of feed]")
    legend(figure, row[0])
    return figure


def lime(sweep: xr.Dataset, account: Account) -> Figure:
    """Return outcomes against lime, the plan's dose marked."""
    names = ("recovery", "purity", "net_energy", "return_density_excess", "return_ph")
    figure, axes = grid(2, 3, 5.6, wspace=0.3, hspace=0.36)
    operation = account.operation
    feed = operation.streams["feed"].flow  # type: ignore[union-attr]
    for ax, name in zip(axes.flat, names, strict=False):
        swept(sweep, "dose", name, ax, operation.lime / feed)
        ax.set_xlabel("lime [mol per m³ of feed]")
    axes[1, 2].set_axis_off()
    legend(figure, axes[0, 0])
    return figure


def swept(sweep: xr.Dataset, over: str, name: str, ax: Axes, planned: float) -> list[Any]:
    """Draw one outcome against one setting, and the plan's as a vertical line."""
    label, factor = _SHOWN[name]
    style = plot.plan_style(1)
    artists: list[Any] = ax.plot(sweep[over], sweep[name] / factor, **style, label="varied")
    line: dict[str, Any] = {"color": "0.3", "linestyle": (0, (1, 1.2)), "linewidth": 1.4}
    artists.append(ax.axvline(planned, **line, label="as planned"))
    ax.set_ylabel(label)
    return artists
