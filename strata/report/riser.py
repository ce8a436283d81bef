"""The riser of a plant for a reader: a sentence, two tables and a figure."""

from typing import Any

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure

from strata.plant.account import Account
from strata.plant.riser import RiserFlow
from strata.report import plot
from strata.report.blocks import Table
from strata.report.figures import grid
from strata.report.tables import digits

BAR = 1e5

_ROWS = (
    ("flow_m3_s", "water asked for", "m³/s", 2),
    ("self_lifted_m3_s", "water its gas lifts alone", "m³/s", 2),
    ("pump_pressure_bar", "pressure a pump adds (− throttled)", "bar", 2),
    ("pump_power_MW", "power of that pump", "MW", 3),
    ("startup_pressure_bar", "pressure to start a still pipe", "bar", 2),
    ("bubble_depth_m", "first bubble at", "m", 1),
    ("bubble_pressure_bar", "gas pressure of the water", "bar", 2),
    ("foot_velocity_m_s", "water at the foot", "m/s", 2),
    ("top_pressure_bar", "pressure at the top", "bar", 2),
    ("top_void", "gas in the section at the top", "1", 3),
    ("top_gas_share_of_flow", "gas in the volume flow at the top", "1", 3),
    ("top_water_velocity_m_s", "water at the top", "m/s", 2),
    ("top_gas_velocity_m_s", "gas at the top", "m/s", 2),
)
#: Shares of the way from the first bubble to the top that are tabled: most happens near it.
_SHARES = np.array([0.0, 0.25, 0.5, 0.7, 0.85, 0.95, 1.0])


def words(account: Account) -> str:
    """Return in plain words whether the gas lifts the water, and what a pump must do."""
    found = account.riser_figures()
    asked, alone = found["flow_m3_s"], found["self_lifted_m3_s"]
    pump, start = found["pump_pressure_bar"], found["startup_pressure_bar"]
    separator = f"{account.plant.stages[0].pressure / BAR:g} bar of the first separator"
    lifts = (
        f"Its gas alone lifts {alone:.2f} m³/s up to the {separator}."
        if alone > 0.0
        else f"It does not lift itself: without a pump no water comes up to the {separator}."
    )
    if pump > 0.0:
        does = (
            f"For the {asked:g} m³/s asked for a pump adds {pump:.2f} bar, "
            f"{found['pump_power_MW']:.2f} MW."
        )
    else:
        does = f"For the {asked:g} m³/s asked for no pump runs; {-pump:.2f} bar is throttled."
    starts = (
        f"To start it from a still pipe takes {start:.2f} bar."
        if start > 0.0
        else "It starts from a still pipe without a pump."
    )
    said = [lifts, does, starts]
    if found["bubble_depth_m"] == 0.0:
        said.append("No gas comes out on the way.")
    flow = account.riser()
    if flow is not None and flow.choked:
        said.append("The outflow is choked: no lower pressure can be reached at the top.")
    return " ".join(said)


def tables(name: str, account: Account) -> list[Table]:
    """Return how the riser of a plant works and what goes on along it; none without one."""
    flow, pipe = account.riser(), account.plant.riser
    if flow is None or pipe is None:
        return []
    found = account.riser_figures()
    rows = [[label, unit, digits(found[key], places)] for key, label, unit, places in _ROWS]
    if flow.bubble_depth == 0.0:
        rows = [["first bubble at", "m", "–"] if row[1] == "m" else row for row in rows]
    pipes = "1 pipe" if pipe.pipes == 1 else f"{pipe.pipes} pipes"
    caption = f"{name}: riser, {pipes} of {pipe.bore:g} m, with today's feed. {words(account)}"
    along = [
        [digits(depth, 1), digits(pressure / BAR, 2), digits(void, 3),
         digits(water, 2), digits(gas if void > 0.0 else np.nan, 2)]
        for depth, pressure, void, water, gas in _along(flow)
    ]  # fmt: skip
    headings = ["depth [m]", "pressure [bar]", "gas [1]", "water [m/s]", "gas [m/s]"]
    return [
        Table(caption, ["riser", "unit", "at full load"], rows, 2),
        Table(
            f"{name}: along the riser, from its foot to its top; gas as a share of the "
            "section, velocities of water and gas.",
            headings,
            along,
            0,
        ),
    ]


def _along(flow: RiserFlow) -> list[tuple[float, ...]]:
    """Return depth, pressure, void and velocities at the foot and from the first bubble up."""
    foot, top = float(flow.depth[0]), float(flow.depth[-1])
    first = flow.bubble_depth or foot
    depths = np.unique([-foot, *(-first + _SHARES * (first - top))]) * -1.0
    columns = (flow.pressure, flow.void, flow.water_velocity, flow.gas_velocity)
    upward = [np.interp(-depths, -flow.depth, column) for column in columns]
    return list(zip(depths.tolist(), *(column.tolist() for column in upward), strict=True))


def figure(account: Account) -> Figure:
    """Return pressure, gas and velocities against depth along the riser of a plant."""
    flow = account.riser()
    assert flow is not None
    drawn, (row,) = grid(1, 3, 3.9, sharey=True, wspace=0.1, top=0.96)
    for ax, draw in zip(row, (pressure, void, velocity), strict=True):
        draw(flow, ax)
        plot.depth_axis(ax, float(flow.depth[0]) * 1.02, label=ax is row[0])
        ax.set_ylim(top=min(0.0, float(flow.depth[-1])))
        first_bubble(flow, ax, named=ax is row[1])
    row[0].legend(loc="lower left")
    row[2].legend(loc="lower right")
    return drawn


def first_bubble(flow: RiserFlow, ax: Axes, named: bool = True) -> list[Any]:
    """Draw where gas first comes out; nothing where none does."""
    if flow.bubble_depth == 0.0:
        return []
    dots: dict[str, Any] = {"color": "0.35", "linestyle": (0, (1, 1.2)), "linewidth": 1.2}
    artists: list[Any] = [ax.axhline(flow.bubble_depth, **dots)]
    if named:
        words = f"first bubble, {flow.bubble_depth:.0f} m"
        at: dict[str, Any] = {
            "xycoords": ("axes fraction", "data"),
            "textcoords": "offset points",
        }
        place = (0.97, flow.bubble_depth)
        artists.append(ax.annotate(words, place, (0, -4), ha="right", va="top", **at))
    return artists


def pressure(flow: RiserFlow, ax: Axes) -> list[Any]:
    """Draw pressure in the pipe and, for its foot, that of the lake outside."""
    style = plot.plan_style(1)
    artists: list[Any] = ax.plot(flow.pressure / BAR, flow.depth, **style, label="in the pipe")
    mark: dict[str, Any] = {"marker": "|", "color": "black", "markersize": 14}
    mark |= {"markeredgewidth": 1.8, "linestyle": "none", "label": "lake at the intake"}
    artists += ax.plot(flow.foot_pressure / BAR, flow.depth[0], **mark)
    ax.set_xlim(left=0.0)
    ax.set_xlabel("pressure [bar]")
    return artists


def void(flow: RiserFlow, ax: Axes) -> list[Any]:
    """Draw which share of the section is gas."""
    artists: list[Any] = ax.plot(flow.void, flow.depth, **plot.plan_style(1))
    ax.set_xlim(0.0, max(0.1, 1.08 * float(flow.void.max())))
    ax.set_xlabel("gas in the section [1]")
    return artists


def velocity(flow: RiserFlow, ax: Axes) -> list[Any]:
    """Draw how fast water goes up, and gas where there is some."""
    artists: list[Any] = ax.plot(
        flow.water_velocity, flow.depth, **plot.plan_style(1), label="water"
    )
    gas = np.where(flow.void > 0.0, flow.gas_velocity, np.nan)
    artists += ax.plot(gas, flow.depth, **plot.plan_style(2), label="gas")
    ax.set_xlim(0.0, 1.08 * max(flow.water_velocity.max(), flow.gas_velocity.max()))
    ax.set_xlabel("velocity [m/s]")
    return artists
