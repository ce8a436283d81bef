"""Draw ``docs/figures/warming.png``: a century of warming over the demo lake left alone.

Run from the checkout: ``python scripts/figure_warming.py``.  The lake is projected twice over
100 years, as its climate is and with 0.2 degC per decade on the equilibrium temperature.
"""

import logging
import sys
from dataclasses import replace
from pathlib import Path

import matplotlib
import numpy as np

TOP = Path(__file__).resolve().parent.parent
sys.path.insert(0, str(TOP))
matplotlib.use("Agg")

from matplotlib import pyplot as plt  # noqa: E402

import strata  # noqa: E402

TREND = 0.02  # degC per year
YEARS = 100


def yearly(result, name, reduce):
    """Return a series reduced over every whole year."""
    values = result[name].values[1:]
    return reduce(values[: len(values) // 12 * 12].reshape(-1, 12), axis=1)


def main() -> None:
    """Project, draw, and print the numbers of the caption."""
    logging.getLogger("strata").setLevel(logging.ERROR)
    lake = strata.load_lake(TOP / "profiles" / "lake.toml")
    warming = replace(lake, climate=replace(lake.climate, trend=TREND))
    as_now, warmer = (strata.project(one, years=YEARS) for one in (lake, warming))
    time = (as_now["time"] - as_now["time"][0]).values / np.timedelta64(1, "D") / 365.25
    depth = as_now["depth"].values
    figure, axes = plt.subplots(2, 2, figsize=(11, 8), layout="constrained")

    axis = axes[0, 0]
    change = (warmer["temperature"] - as_now["temperature"]).transpose("depth", "time").values
    yearly_change = change[:, 1:].reshape(len(depth), -1, 12).mean(axis=2)
    middle = time[1:].reshape(-1, 12).mean(axis=1)
    most = float(np.abs(yearly_change).max())
    mesh = axis.pcolormesh(
        middle, depth, yearly_change, cmap="PuOr_r", vmin=-most, vmax=most, rasterized=True
    )
    lines = axis.contour(
        middle, depth, yearly_change, levels=[0.1, 0.5, 1.0, 1.5], colors="k", linewidths=0.7
    )
    axis.clabel(lines, fmt="%g", fontsize=8)
    figure.colorbar(mesh, ax=axis, label="warmer by [K], yearly mean")
    axis.set(
        title="Warming stays above the upper gradient", xlabel="years", ylabel="depth [m]"
    )
    axis.invert_yaxis()

    axis = axes[0, 1]
    year = np.arange(YEARS) + 0.5
    styles = (("as now", as_now, "C0", "-"), ("0.2 degC per decade", warmer, "C1", "--"))
    for label, result, color, line in styles:
        deepest = yearly(result, "mixed_layer_depth", np.max)
        axis.plot(year, deepest, line, color=color, label=label)
    axis.set(title="Deepest mixing of each year", xlabel="years", ylabel="depth [m]")
    axis.invert_yaxis()
    axis.legend()

    axis = axes[1, 0]
    for label, result, color, line in styles:
        last = result["saturation"].transpose("time", "depth").values[-12:].mean(axis=0)
        axis.plot(last, depth, line, color=color, label=label)
    axis.set(
        title="Saturation rises where mixing no longer comes",
        xlabel="saturation, mean of the last year",
        ylabel="depth [m]",
        ylim=(200.0, 0.0),
    )
    axis.legend()

    axis = axes[1, 1]
    for name, label, line in (
        ("methane_in_place", "methane in place", "-"),
        ("carbon_dioxide_in_place", "carbon dioxide in place", "-."),
        ("largest_saturation", "largest saturation", ":"),
    ):
        ratio = 100.0 * (warmer[name].values / as_now[name].values - 1.0)
        axis.plot(time, ratio, line, label=label)
    axis.axhline(0.0, color="k", linewidth=0.8)
    axis.set(title="Gas: warmer over as now", xlabel="years", ylabel="difference [%]")
    axis.legend()

    target = TOP / "docs" / "figures" / "warming.png"
    target.parent.mkdir(exist_ok=True)
    figure.suptitle(f"{lake.site.name} (invented), left alone for a century")
    figure.savefig(target, dpi=120, metadata={"Software": None})
    print(target.relative_to(TOP))
    for z in (10, 50, 70, 100, 200, 300, 390):
        print(f"{z} m: {np.interp(z, depth, yearly_change[:, -1]):+.2f} K")
    for label, result, _, _ in styles:
        deepest = yearly(result, "mixed_layer_depth", np.max)
        oxic = yearly(result, "oxic_depth", np.max)
        print(
            f"{label}: deepest mixing {deepest[:10].mean():.1f} m in the first ten years and"
            f" {deepest[-10:].mean():.1f} m in the last; oxygen to {oxic[:10].mean():.1f} m"
            f" and {oxic[-10:].mean():.1f} m; methane"
            f" {result['methane_in_place'].values[-1]:.4g}"
            f" mol; saturation {result['largest_saturation'].values[-1]:.3f}"
        )


if __name__ == "__main__":
    main()
