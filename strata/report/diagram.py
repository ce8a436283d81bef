"""A diagram of a plant: its units as boxes over a section of the lake, every stream numbered.

Water runs from left to right in the lower row, gas above it; pipes go down into the lake to
their true depths.  Each number stands in the table below the drawing with flow, temperature,
pressure, density and composition of the stream.
"""

from collections.abc import Sequence
from textwrap import wrap
from typing import Any

from matplotlib.artist import Artist
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.patches import Rectangle

from strata.plant.account import Account, Row
from strata.plant.plan import Plant, Return, Stage
from strata.plant.power import heating_value, thermal_power
from strata.plant.separator import approach_of

BAR = 1e5

# The drawing's own unit is a hundredth of its width.
_WATER, _GAS, _LAKE = "#0072B2", "#B5470A", "#E4EEF6"
_BOX: dict[str, Any] = {"facecolor": "white", "edgecolor": "black", "linewidth": 1.1}
_TEXT: dict[str, Any] = {"fontsize": 8.5, "ha": "center", "va": "center"}
_SURFACE, _FLOOR = 25.0, 2.0  # of the lake's section
_ROW = 34.0  # middle of the row of water
_HEIGHT = 11.0  # of a box
_LINE, _CHARACTER, _BOLD = 2.15, 0.75, 0.86  # height of a line, mean width of a character
_HEADERS = {"return": 43.5, "wash": 46.5, "product": 53.0, "vent": 57.0}
_TOP = 61.0
_LEFT, _RIGHT = 9.0, 84.0  # of the row of units


class _Sketch:
    """An axes with the pieces a diagram is made of, and the numbers given to streams."""

    def __init__(self, ax: Axes, account: Account, floor: float) -> None:
        self.ax, self.account, self.floor = ax, account, floor
        self.rows = [row for row in account.streams() if _flow(row) > 0.0]
        self.numbers = {str(row["stream"]): n for n, row in enumerate(self.rows, start=1)}
        self.artists: list[Artist] = []

    def depth(self, metres: float) -> float:
        """Return the height in the drawing of a depth in the lake."""
        return _SURFACE - (_SURFACE - _FLOOR) * metres / self.floor

    def box(
        self, x: float, y: float, size: tuple[float, float], name: str, *settings: str
    ) -> None:
        """Draw a unit around a point, its name in bold above what it is set to."""
        width, height = size
        corner = (x - 0.5 * width, y - 0.5 * height)
        self.artists.append(self.ax.add_patch(Rectangle(corner, width, height, **_BOX)))
        bold = wrap(name, round(width / _BOLD), break_long_words=False)
        room = round(width / _CHARACTER)
        plain = [wrap(each, room, break_long_words=False) for each in settings]
        lines = sum(plain, start=bold)
        y += 0.5 * _LINE * (len(lines) - 1)
        for number, line in enumerate(lines):
            weight = "bold" if number < len(bold) else "normal"
            self.ax.text(x, y - _LINE * number, line, fontweight=weight, **_TEXT)

    def pipe(
        self, points: Sequence[tuple[float, float]], colour: str, arrow: bool = True
    ) -> None:
        """Draw a pipe along points, an arrow at its end; gas is dashed."""
        style: dict[str, Any] = {"color": colour, "linewidth": 1.5, "zorder": 1}
        if colour == _GAS:
            style["linestyle"] = (0, (5, 1.5))
        xs, ys = zip(*points, strict=True)
        self.artists += self.ax.plot(xs, ys, **style, solid_capstyle="butt")
        if arrow:
            (x0, y0), (x1, y1) = points[-2], points[-1]
            length = max(abs(x1 - x0) + abs(y1 - y0), 1e-9)
            back = (x1 - (x1 - x0) / length * 0.9, y1 - (y1 - y0) / length * 0.9)
            head = {"arrowstyle": "-|>", "color": colour, "linewidth": 1.5, "shrinkA": 0,
                    "shrinkB": 0, "mutation_scale": 11}  # fmt: skip
            self.ax.annotate("", (x1, y1), xytext=back, arrowprops=head, zorder=2)

    def mark(self, stream: str, x: float, y: float) -> None:
        """Put the number of a stream on its pipe, if it flows."""
        if stream in self.numbers:
            colour = _WATER if self.rows[self.numbers[stream] - 1]["kind"] == "water" else _GAS
            ring = {"boxstyle": "circle,pad=0.22", "facecolor": "white", "edgecolor": colour,
                    "linewidth": 1.2}  # fmt: skip
            style: dict[str, Any] = {**_TEXT, "fontweight": "bold", "bbox": ring, "zorder": 4}
            self.ax.text(x, y, str(self.numbers[stream]), **style)

    def note(self, x: float, y: float, words: str, **style: Any) -> None:
        """Write a few words."""
        self.ax.text(x, y, words, **{**_TEXT, **style})


def _flow(row: Row) -> float:
    """Return the flow of a stream, water or gas."""
    return float(row["flow_m3_s" if row["kind"] == "water" else "flow_mol_s"])


def diagram(account: Account, floor: float, gradient: float | None = None) -> Figure:
    """Return the diagram of a plant with the table of its streams.

    Parameters
    ----------
    account : Account
    floor : float
        Depth of the lake [m].
    gradient : float, optional
        Depth of the main gradient [m], drawn if given.
    """
    lines = len([row for row in account.streams() if _flow(row) > 0.0]) + 1
    table = 0.195 * lines + 0.12
    width, drawing = 9.6, 9.6 * 0.63
    figure = Figure(figsize=(width, drawing + table))
    ax = figure.add_axes((0.0, table / (drawing + table), 1.0, drawing / (drawing + table)))
    ax.set_axis_off()
    ax.set_xlim(0.0, 100.0)
    ax.set_ylim(0.0, 63.0)
    sketch = _Sketch(ax, account, floor)
    _draw_lake(sketch, gradient)
    _draw_plant(sketch)
    _draw_power(sketch)
    below = figure.add_axes((0.0, 0.0, 1.0, table / (drawing + table)))
    _draw_table(below, sketch)
    return figure


def _draw_lake(sketch: _Sketch, gradient: float | None) -> None:
    """Draw the section of the lake with its scale of depth."""
    ax = sketch.ax
    ax.fill_between([7.0, 99.0], _FLOOR, _SURFACE, color=_LAKE, linewidth=0, zorder=0)
    ax.plot([7.0, 99.0], [_SURFACE] * 2, color=_WATER, linewidth=2.0, zorder=0)
    ax.plot([7.0, 99.0], [_FLOOR] * 2, color="0.25", linewidth=2.0, zorder=0)
    step = 100.0 if sketch.floor > 150.0 else 20.0
    at = 0.0
    while at <= sketch.floor + 1e-9:
        y = sketch.depth(at)
        ax.plot([6.2, 7.0], [y, y], color="0.25", linewidth=0.9)
        sketch.note(5.8, y, f"{at:g}", ha="right")
        at += step
    sketch.note(1.6, 0.5 * (_FLOOR + _SURFACE), "depth [m]", rotation=90)
    if gradient is not None:
        y = sketch.depth(gradient)
        dashes: dict[str, Any] = {"linestyle": (0, (6, 3)), "linewidth": 1.0, "zorder": 0}
        ax.plot([7.0, 99.0], [y, y], color="0.35", **dashes)
        words = f"main gradient, {gradient:.0f} m"
        sketch.note(98.5, y + 1.3, words, ha="right", color="0.25")


def _names_of(plant: Plant) -> list[str]:
    """Return the units in the row of water, in order."""
    stages = [f"stage {number}" for number in range(1, len(plant.stages) + 1)]
    return ["lift", *(["lime"] if plant.lime is not None else []), *stages]


def _draw_plant(sketch: _Sketch) -> None:
    """Draw the units, the pipes between them and those into the lake."""
    plant = sketch.account.plant
    names = _names_of(plant)
    pitch, width = _widths(plant)
    place = {name: _LEFT + pitch * (k + 0.5) for k, name in enumerate(names)}
    out = _LEFT + pitch * len(names) + 0.12 * pitch  # where the return water goes down
    _draw_water(sketch, place, width, out)
    tower = None
    if plant.wash is not None:
        tower = _LEFT + pitch * (len(names) + 1)
        _draw_tower(sketch, tower, width, out)
    _draw_gas(sketch, place, tower, out)


def _draw_water(sketch: _Sketch, place: dict[str, float], width: float, out: float) -> None:
    """Draw intake, the row of units and the return."""
    plant, account = sketch.account.plant, sketch.account
    first = place["lift"]
    for intake in plant.intakes:
        y = sketch.depth(intake.depth)
        sketch.pipe([(first - 2.2, y), (first, y), (first, _ROW - 0.5 * _HEIGHT)], _WATER)
        share = "" if len(plant.intakes) == 1 else f", {100 * intake.share:.0f} %"
        sketch.note(first + 1.0, y, f"{intake.depth:g} m{share}", ha="left")
    sketch.mark("feed", first, _SURFACE - 5.0)
    lift = ["pump", f"{plant.pump_head:g} m head"]
    if plant.riser is not None:
        pipes = "pipe" if plant.riser.pipes == 1 else "pipes"
        lift = ["riser", f"{plant.riser.pipes} {pipes}", f"of {plant.riser.bore:g} m"]
    sketch.box(first, _ROW, (width, _HEIGHT), *lift)
    before = first
    for name, x in list(place.items())[1:]:
        sketch.pipe([(before + 0.5 * width, _ROW), (x - 0.5 * width, _ROW)], _WATER)
        if name == "lime":
            used = account.operation.lime / account.operation.streams["feed"].flow  # type: ignore[union-attr]
            settled = f"{account.operation.solids:.0f} mol/s out"
            sketch.box(x, _ROW, (width, _HEIGHT), "lime", f"{used:.0f} mol/m³", settled)
        else:
            number = int(name.split()[1])
            lines = _stage_lines(number, plant.stages[number - 1])
            sketch.box(x, _ROW, (width, _HEIGHT), *lines)
        before = x
    if "lime" in place:
        gap = place["stage 1"] - place["lime"] - width
        up = 0.0 if gap > 5.0 else 3.0  # beside the pipe where there is no room on it
        sketch.mark("limed feed", place["lime"] + 0.5 * (gap + width), _ROW + up)
    y = sketch.depth(plant.return_water.depth)
    sketch.pipe([(before + 0.5 * width, _ROW), (out, _ROW), (out, y), (out + 3.0, y)], _WATER)
    sketch.mark("return water", out, _SURFACE - 5.0)
    sketch.note(out + 3.8, y, _outlet_words(plant.return_water), ha="left")


def _stage_lines(number: int, stage: Stage) -> list[str]:
    """Return what is written in a separator."""
    approach = f"approach {approach_of(stage):.2f}"
    return [f"stage {number}", f"{stage.pressure / BAR:.3g} bar", approach]


def _outlet_words(outlet: Return) -> str:
    """Return depth and ports of an outlet."""
    ports = "port" if outlet.ports == 1 else "ports"
    return f"{outlet.depth:g} m, {outlet.ports} {ports} of {outlet.port_diameter:g} m"


def _draw_tower(sketch: _Sketch, x: float, width: float, out: float) -> None:
    """Draw the wash tower with its water."""
    plant = sketch.account.plant
    wash = plant.wash
    assert wash is not None
    foot, head = _ROW - 0.5 * _HEIGHT, 49.5
    name = "wash tower" if wash.towers == 1 else f"{wash.towers} wash towers"
    lines = [name, f"{wash.pressure / BAR:.3g} bar", f"{wash.stages} stages"]
    if wash.efficiency < 1.0:
        lines.append(f"efficiency {wash.efficiency:.2f}")
    sketch.box(x, 0.5 * (foot + head), (width, head - foot), *lines)
    side = x + 0.5 * width + 3.0
    y = sketch.depth(wash.water_depth)
    into = [(side, head - 2.0), (x + 0.5 * width, head - 2.0)]
    sketch.pipe([(side + 2.2, y), (side, y), *into], _WATER)
    sketch.note(side + 2.8, y, f"{wash.water_depth:g} m", ha="left")
    sketch.mark("wash water", side, _SURFACE + 3.0)
    if plant.return_wash is None:
        sketch.pipe([(x, foot), (x, _SURFACE + 2.0), (out, _SURFACE + 2.0)], _WATER)
        sketch.mark("used wash water", 0.5 * (x + out), _SURFACE + 2.0)
    else:
        y = sketch.depth(plant.return_wash.depth)
        sketch.pipe([(x, foot), (x, y), (x + 3.0, y)], _WATER)
        sketch.mark("used wash water", x, _SURFACE - 5.0)
        sketch.note(x + 3.8, y, _outlet_words(plant.return_wash), ha="left")


def _draw_gas(
    sketch: _Sketch, place: dict[str, float], tower: float | None, out: float
) -> None:
    """Draw the gas of every separator to where it goes."""
    plant = sketch.account.plant
    end, top = 92.0, _ROW + 0.5 * _HEIGHT
    ends = {
        "product": [(end - 6.5, _HEADERS["product"])],
        "vent": [(end - 6.5, _HEADERS["vent"])],
        "return": [(out, _HEADERS["return"]), (out, _ROW + 0.3)],
    }
    if tower is not None:
        side = tower - 0.5 * _widths(plant)[1]
        ends["wash"] = [(side, _HEADERS["wash"])]
        sketch.pipe([(tower, 49.5), (tower, _HEADERS["product"]), *ends["product"]], _GAS)
    joined: dict[str, tuple[float, float]] = {}
    if tower is not None:
        joined["product"] = (tower, _HEADERS["product"])
    for number, stage in reversed(list(enumerate(plant.stages, start=1))):
        x, level = place[f"stage {number}"], _HEADERS[stage.gas_to]
        sketch.mark(f"gas of stage {number}", x, top + 1.9)
        way = [(x, top), (x, level)]
        if stage.gas_to in joined:  # on to the pipe of the next one that goes there
            sketch.pipe([*way, joined[stage.gas_to]], _GAS, arrow=False)
        else:
            sketch.pipe([*way, *ends[stage.gas_to]], _GAS)
        joined[stage.gas_to] = (x, level)
    if "product" in joined:
        _draw_product(sketch, end)
    if "vent" in joined:
        sketch.mark("vent", end - 9.0, _HEADERS["vent"])
        sketch.note(end, _HEADERS["vent"], "to the air", fontweight="bold")


def _draw_product(sketch: _Sketch, x: float) -> None:
    """Draw what leaves the plant as gas."""
    product = sketch.account.operation.product
    lines = [
        "product",
        f"CH₄ {100 * product.share('CH4'):.0f} % of dry",
        f"{heating_value(product) / 1e6:.1f} MJ/m³",
        f"{thermal_power(product) / 1e6:.1f} MW",
    ]
    sketch.box(x, _HEADERS["product"] - 4.0, (14.0, _HEIGHT), *lines)
    sketch.mark("product", x - 9.6, _HEADERS["product"])


def _widths(plant: Plant) -> tuple[float, float]:
    """Return the distance of the units of a plant from each other, and their width."""
    columns = len(_names_of(plant)) + 1 + (1 if plant.wash is not None else 0)
    pitch = min((_RIGHT - _LEFT) / columns, 21.0)
    return pitch, min(0.74 * pitch, 14.5)


_USES = {
    "pump": "pumping",
    "vacuum": "vacuum",
    "compression": "compression",
    "auxiliary": "all else",
}


def _draw_power(sketch: _Sketch) -> None:
    """Write what power is made and used."""
    power = sketch.account.operation.power
    made = power["electric"]
    lines = [("electric power made", made)]
    lines += [(_USES[name], -power[name]) for name in _USES if power.get(name, 0.0) > 0.0]
    lines.append(("net", power["net"]))
    y = _TOP - 0.5
    sketch.note(1.5, y, "power [MW]", ha="left", fontweight="bold")
    for name, watts in lines:
        y -= 2.4
        weight = "bold" if name == "net" else "normal"
        sketch.note(1.5, y, name, ha="left", fontweight=weight)
        text = f"{watts / 1e6:+.2f}".replace("-", "−")
        sketch.note(25.0, y, text, ha="right", fontweight=weight)


_COLUMNS = (
    ("", 2.6, "center"),
    ("stream", 5.0, "left"),
    ("flow", 32.0, "right"),
    ("T [°C]", 43.0, "right"),
    ("P [bar]", 52.0, "right"),
    ("density [kg/m³]", 67.0, "right"),
    ("CH₄", 80.0, "right"),
    ("CO₂", 94.0, "right"),
)


def _draw_table(ax: Axes, sketch: _Sketch) -> None:
    """Write the streams below the drawing, a line each."""
    ax.set_axis_off()
    ax.set_xlim(0.0, 100.0)
    lines = len(sketch.rows) + 1
    ax.set_ylim(lines + 0.3, -0.3)
    cells = [[heading for heading, _, _ in _COLUMNS]]
    cells += [[str(n), *_cells(row)] for n, row in enumerate(sketch.rows, start=1)]
    for number, line in enumerate(cells):
        weight = "bold" if number == 0 else "normal"
        for (_, x, align), cell in zip(_COLUMNS, line, strict=True):
            style: dict[str, Any] = {**_TEXT, "ha": align, "fontweight": weight}
            ax.text(x, number + 0.5, cell, **style)
        colour = "0.3" if number == 0 else "0.85"
        ax.axhline(number + 1, 0.01, 0.96, color=colour, linewidth=0.7)


def _cells(row: Row) -> list[str]:
    """Return a stream as the table has it: free gases of water, mole fractions of gas."""
    start = [str(row["stream"])]
    end = [f"{row['temperature_degC']:.1f}", f"{row['pressure_bar']:.2f}"]
    if row["kind"] == "water":
        flow = f"{row['flow_m3_s']:.2f} m³/s"
        parts = [f"{row[f'{gas}_mol_m3']:.2f} mol/m³" for gas in ("CH4", "CO2")]
        return [*start, flow, *end, f"{row['density_kg_m3']:.2f}", *parts]
    flow = f"{row['flow_mol_s']:.0f} mol/s"
    parts = [f"{100 * float(row[f'{gas}_share']):.1f} %" for gas in ("CH4", "CO2")]
    return [*start, flow, *end, f"{row['density_kg_m3']:.3f}", *parts]
