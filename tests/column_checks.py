"""Lakes so plain that their water can be followed on paper, and what the column makes of them.

Each case returns what the program found beside what is exact; tests hold the two together and
``scripts/validate_numerics.py`` tells how far apart they are.
"""

from dataclasses import dataclass, replace
from datetime import date

import numpy as np
from scipy.interpolate import PchipInterpolator

from strata.column.column import REFERENCE_DENSITY, REFERENCE_HEAT_CAPACITY, Column
from strata.column.tracers import ALKALINITY, DIC, SALINITY, TEMPERATURE, TRACERS
from strata.lake.climate import Weather
from strata.lake.site import (
    BedSource,
    Cast,
    Climate,
    Hypsography,
    Lake,
    Mixing,
    Reactions,
    River,
    Site,
    Spring,
)

DAY, YEAR = 86400.0, 3.15576e7  # s
PHOSPHATE, OXYGEN = TRACERS.index("phosphate"), TRACERS.index("O2")
AREA = 1e8  # m2
#: Nothing of the air reaches the water.
CALM = Weather(20.0, 0.0, 0.0, 0.0, 0.0)


def plain_lake(faces, area=(AREA, AREA, AREA), *, diffusivity=1e-5, reactions=None, **supply):
    """Return a lake without weather whose turbulent diffusivity is one number [m2 s-1]."""
    depth = np.linspace(0.0, faces[-1], len(area))
    months = np.ones(12)
    return Lake(
        site=Site("plain lake", 1.0e5, 45.0, date(2030, 1, 1)),
        hypsography=Hypsography(depth, np.array(area, dtype=float)),
        cast=Cast({}),
        climate=Climate(20 * months, 0 * months, 0 * months, 0 * months, 0 * months),
        springs=supply.get("springs", ()),
        rivers=supply.get("rivers", ()),
        bed=supply.get("bed", ()),
        reactions=reactions or Reactions(),
        mixing=Mixing(1e-30, diffusivity, diffusivity, 0.0),
        layer_faces=np.asarray(faces, dtype=float),
    )


def column_of(lake, salinity, temperature=20.0, **more):
    """Return a column that salinity (one value per layer, rising downward) keeps stable."""
    values = np.zeros((len(lake.layer_faces) - 1, len(TRACERS)))
    values[:, TEMPERATURE] = temperature
    values[:, SALINITY] = salinity
    values[:, DIC] = values[:, ALKALINITY] = 1.0
    for name, value in more.items():
        values[:, TRACERS.index(name)] = value
    return Column(lake, values)


class _NoAir:
    """Air that no gas goes into or comes from."""

    @staticmethod
    def exchange(wind_speed, surface, width):
        """Return that nothing is exchanged."""
        return np.zeros((width, 2))


def seal(column):
    """Let no gas pass the surface of a column."""
    column._air = _NoAir()


def run(column, seconds, dt, weather=CALM, visits=20, molecules=True):
    """Carry a column on, refreshing what is held a number of times."""
    steps = max(1, round(seconds / visits / dt))
    for _ in range(visits):
        column.refresh()
        if not molecules:
            still = np.zeros_like(column.slow.molecular)
            column.slow = replace(column.slow, molecular=still)
        gives = column.natural(column.surroundings())
        column.advance(weather, [], gives, steps, seconds / visits / steps)


def means_of(function, basin, points=40):
    """Return means over layers, weighted by volume."""
    share = (np.arange(points) + 0.5) / points
    z = basin.faces[:-1, None] + share * basin.thickness[:, None]
    area = basin.area[:-1, None] + share * np.diff(basin.area)[:, None]
    return (function(z) * area).sum(axis=1) / area.sum(axis=1)


def spring(name, depth, flow, layer, salinity=0.0, phosphate=0.0):
    """Return a spring that enters one layer of a given thickness, taking nothing along."""
    dissolved = {"DIC": 1.0, "alkalinity": 1.0, "phosphate": phosphate}
    return Spring(
        name,
        depth,
        flow,
        20.0,
        salinity,
        dissolved,
        spread=(depth - 0.5 * layer, depth + 0.5 * layer),
    )


@dataclass(frozen=True)
class Compared:
    """What came out beside what is exact, layer by layer."""

    depth: np.ndarray
    found: np.ndarray
    exact: np.ndarray

    @property
    def worst(self):
        """Return the largest difference."""
        return float(np.abs(self.found - self.exact).max())


def orders(errors, ratio):
    """Return the observed orders of errors, each with layers or steps finer by a ratio."""
    errors = np.asarray(errors)
    return np.log(errors[:-1] / errors[1:]) / np.log(ratio)


# Steady advection and diffusion with springs -----------------------------------------------


def two_springs(layers, dt_days):
    """Return the steady phosphate between two springs, and the exponential it should be.

    Below the upper spring w c - K c' carries what the lower one gives; above it the flow is
    that of both and nothing bounds it, so c is their mean.  With distance d below the upper
    spring c = c1 + (cm - c1) exp(-w d / K).
    """
    floor, at, flow, diffusivity = 100.0, 42.0, 20.0, 4e-6
    faces = np.linspace(0.0, floor, layers + 1)
    layer = floor / layers
    springs = (
        spring("deep", floor - 0.5 * layer, flow, layer, salinity=5.0, phosphate=1.0),
        spring("upper", at, flow, layer, salinity=1.0, phosphate=0.2),
    )
    column = column_of(
        plain_lake(faces, diffusivity=diffusivity, springs=springs),
        salinity=np.linspace(3.0, 5.0, layers),
        phosphate=0.6,
    )
    whole = diffusivity + column.slow.molecular[0, PHOSPHATE]
    length = whole / (flow / AREA)
    top, foot = faces[:-1] - at, faces[1:] - at
    below = np.where(
        top >= -1e-9,
        length / layer * (np.exp(-np.maximum(top, 0) / length) - np.exp(-foot / length)),
        1.0,
    )
    exact = 1.0 + (0.6 - 1.0) * below
    # what differs from the steady state of the scheme fades
    column.values[:, PHOSPHATE] = exact
    slowest = 4 * whole / (flow / AREA) ** 2
    run(column, 4 * slowest, dt_days * DAY)
    middle = column.basin.depth
    # at the springs themselves the layer that gets their water is no sheet
    away = (np.abs(middle - at) > 8.0) & (middle < floor - 8.0)
    return Compared(middle[away], column.values[away, PHOSPHATE], exact[away])


# A mixed box ------------------------------------------------------------------------------


def mixed_box(dt_days):
    """Return phosphate of a box that a storm keeps mixed, with inflow and decay, over time."""
    decay, flow, floor = 2e-8, 50.0, 20.0
    faces = np.linspace(0.0, floor, 11)
    river = River("river", flow, 20.0, 0.0, {"DIC": 1.0, "alkalinity": 1.0, "phosphate": 1.0})
    lake = plain_lake(faces, rivers=(river,), reactions=Reactions(phosphate_removal=decay))
    column = column_of(lake, salinity=0.0, phosphate=0.1)
    column.state.mixed_depth[0] = floor
    storm = Weather(20.0, 0.0, 25.0, 0.0, 0.0)
    exchange = flow / (AREA * floor)
    rate = exchange + decay
    time = np.arange(1, 6) * 0.5 * YEAR
    found = []
    for _ in time:
        run(column, 0.5 * YEAR, dt_days * DAY, storm, visits=1)
        assert np.ptp(column.values[:, PHOSPHATE]) < 1e-12
        found.append(column.values[0, PHOSPHATE])
    exact = exchange / rate + (0.1 - exchange / rate) * np.exp(-rate * time)
    return Compared(time, np.array(found), exact)


def breathing_box(dt_days):
    """Return oxygen of a box that a storm keeps mixed, taking up air, over time."""
    floor = 20.0
    faces = np.linspace(0.0, floor, 11)
    column = column_of(plain_lake(faces), salinity=0.0, O2=0.0)
    column.state.mixed_depth[0] = floor
    storm = Weather(20.0, 0.0, 10.0, 0.0, 0.0)
    exchange = column._air.exchange(storm.wind_speed, column.values[0], 12)
    rate, balance = exchange[OXYGEN]
    time = np.arange(1, 6) * 10 * DAY
    found = []
    for _ in time:
        run(column, 10 * DAY, dt_days * DAY, storm, visits=1)
        found.append(column.values[0, OXYGEN])
    return Compared(time, np.array(found), balance * (1 - np.exp(-rate / floor * time)))


# Heat out of the bed ----------------------------------------------------------------------


def bed_heat(layers):
    """Return the steady temperature over a bed that gives heat, and the line it should be.

    Through every depth passes what the bed below it gives, in proportion to the area there:
    the gradient is flux / (K rho c) in a basin of any shape.  A flux of salt out of the bed
    holds the water stable; a river carries it off.
    """
    floor, diffusivity, flux = 50.0, 2e-5, 1.0
    area = (AREA, 0.7 * AREA, 0.3 * AREA)
    bed = (
        BedSource("heat", 0.0, floor, flux),
        BedSource("salinity", 0.0, floor, 2e-6),
    )
    river = River("river", 2000.0, 20.0, 0.0, {"DIC": 1.0, "alkalinity": 1.0})
    faces = np.linspace(0.0, floor, layers + 1)
    lake = plain_lake(faces, area, diffusivity=diffusivity, bed=bed, rivers=(river,))
    depth = 0.5 * (faces[1:] + faces[:-1])
    column = column_of(lake, salinity=0.1 + 0.1 * depth, temperature=20.0 + 0.01 * depth)
    firm = Weather(20.0, 1e7, 0.0, 0.0, 0.0)  # the surface is held at 20 degC
    run(column, 12 * floor**2 / diffusivity / 2.467, DAY, firm, visits=60)
    slope = flux / (REFERENCE_DENSITY * REFERENCE_HEAT_CAPACITY)
    slope /= (
        diffusivity + column.slow.molecular[:, TEMPERATURE].mean()
    )  # molecular: 0.7 % of the whole, even to 1 %
    points = (np.arange(200) + 0.5) / 200
    z = faces[:-1, None] + points * np.diff(faces)[:, None]
    weight = PchipInterpolator(lake.hypsography.depth, lake.hypsography.area)(z)
    exact = slope * (weight * z).sum(axis=1) / weight.sum(axis=1)
    found = column.values[:, TEMPERATURE]
    # surface and floor give their heat to one layer, before it is conducted on within the
    # step: there the state after a step is off by half of what one step brings, q dt / (2 rho
    # c h)
    inner = (depth > 10.0) & (depth < 40.0)
    found, exact = found[inner], exact[inner]
    return Compared(depth[inner], found - found[0], exact - exact[0])


# A spring fills a layer -------------------------------------------------------------------


def _tagged(lake, salinity):
    """Return a column that follows the water of its one spring."""
    values = column_of(lake, salinity).values
    return Column(lake, np.pad(values, ((0, 0), (0, 1))), (f"spring_{lake.springs[0].name}",))


def filling(layers, years=10.0):
    """Return the tag of a spring that seeps in over an interval, and what it should be.

    In a lake with upright walls, water entering evenly over 4 m at Q / (4 m A) = s pushes up
    all above it at Q / A = w.  Inside, the tag is 1 - exp(-s t) at every depth; above, it is
    what it was inside when the water passed the top of the interval.
    """
    floor, top, foot, flow = 100.0, 58.0, 62.0, 4.0
    faces = np.linspace(0.0, floor, layers + 1)
    depth = 0.5 * (faces[1:] + faces[:-1])
    dissolved = {"DIC": 1.0, "alkalinity": 1.0}
    # as salty as the water under it: what enters later is heavier, so nothing overturns
    seep = Spring("seep", 60.0, flow, 20.0, 1.0 + 0.03 * foot, dissolved, spread=(top, foot))
    lake = plain_lake(faces, diffusivity=1e-14, springs=(seep,))
    column = _tagged(lake, 1.0 + 0.03 * depth)
    time = years * YEAR
    run(column, time, 5 * DAY, visits=20, molecules=False)
    speed = flow / AREA
    points = (np.arange(50) + 0.5) / 50
    z = faces[:-1, None] + points * np.diff(faces)[:, None]
    since = np.where(z < foot, time - np.maximum(top - z, 0.0) / speed, 0.0)
    exact = (1 - np.exp(-speed / (foot - top) * np.maximum(since, 0.0))).mean(axis=1)
    return Compared(depth, column.values[:, -1], exact), flow * time, column


def lifting(layers=200, years=5.0):
    """Return salinity over a plume that ends in its own layer, and the lifted profile.

    Wherever a spring of neutral water ends, all above rises by Q t / A and all below stays.
    """
    floor, at, flow = 100.0, 60.0, 4.0
    faces = np.linspace(0.0, floor, layers + 1)
    depth = 0.5 * (faces[1:] + faces[:-1])

    def salinity(z):
        return 1.0 + 0.03 * z

    dissolved = {"DIC": 1.0, "alkalinity": 1.0}
    gentle = Spring("neutral", at, flow, 20.0, salinity(at), dissolved, ports=400)
    lake = plain_lake(faces, diffusivity=1e-14, springs=(gentle,))
    column = _tagged(lake, salinity(depth))
    time = years * YEAR
    run(column, time, DAY, visits=round(12 * years), molecules=False)
    rise = flow / AREA * time
    # within 4 m of the outlet the plume takes in and gives back; at the surface the profile
    # ends and, with nothing to smooth it, sends a saw-tooth of some layers down
    far = (depth > 25.0) & (np.abs(depth - at + 0.5 * rise) > 4.0 + 0.5 * rise)
    exact = np.where(depth < at, salinity(depth + rise), salinity(depth))
    found = Compared(depth[far], column.values[far, SALINITY], exact[far])
    return found, flow * time, column


# A staircase ------------------------------------------------------------------------------


def staircase(layer, years=10.0, window=None):
    """Return the mean heat flux through the middle of a gradient with a staircase [W m-2].

    Warm salty water under cool fresh, density ratio 3.3, the gradient 20 m thick; nothing but
    double diffusion and molecules moves heat.
    """
    floor = 120.0
    faces = np.linspace(0.0, floor, round(floor / layer) + 1)
    lake = plain_lake(faces, diffusivity=1e-14)
    stairs = replace(lake.mixing, staircase_step=0.7, staircase_window=window)
    lake = replace(lake, mixing=stairs)

    def rise(z):
        return 0.5 * (1 + np.tanh((z - 60.0) / 8.0))

    column = column_of(lake, 0.0)
    column.values[:, SALINITY] = 2.0 + 1.0 * means_of(rise, column.basin)
    column.values[:, TEMPERATURE] = 23.0 + 1.0 * means_of(rise, column.basin)
    deep = column.basin.faces[:-1] >= 60.0 - 1e-9
    before = column.basin.volume[deep] @ column.values[deep, TEMPERATURE]
    run(column, years * YEAR, DAY, visits=round(12 * years))
    after = column.basin.volume[deep] @ column.values[deep, TEMPERATURE]
    return (before - after) * column.heat_capacity / (AREA * years * YEAR)


# Autumn -----------------------------------------------------------------------------------


def heat_lost_in_autumn(step_days):
    """Return the heat that a cooling lake loses in 90 days [K m3], overturned from the top.

    Diffusivity reaches 1e-4 m2/s where the water is neutral, diffusion number 2.2 in a step of
    a day.
    """
    lake = plain_lake(np.linspace(0.0, 100.0, 51))
    lake = replace(lake, mixing=Mixing(3e-9, 1e-9, 1e-4, 0.0))
    column = column_of(lake, np.linspace(1.0, 1.2, 50), np.linspace(25.0, 20.0, 50))
    before = column.inventory()[TEMPERATURE]
    run(column, 90 * DAY, step_days * DAY, Weather(18.0, 20.0, 0.0, 0.0, 0.0), visits=3)
    return before - column.inventory()[TEMPERATURE]


# A closed column --------------------------------------------------------------------------


def closed_column(steps):
    """Return the relative change of the inventories of a closed column that keeps mixing.

    Uneven layers, wind, overturning from a warm floor, diffusion; nothing passes its walls.
    """
    faces = np.concatenate([np.linspace(0, 60, 21), np.linspace(61, 100, 40)])
    lake = plain_lake(faces, (AREA, 0.6 * AREA, 0.1 * AREA), diffusivity=1e-6)
    depth = 0.5 * (faces[1:] + faces[:-1])
    rng = np.random.default_rng(5)
    more = {name: rng.uniform(0.1, 5.0, len(depth)) for name in TRACERS[4:]}
    column = column_of(lake, 1.0 + 0.02 * depth, 20.0 + 0.02 * depth, **more)
    seal(column)
    before = column.inventory()
    gusts = (0.0, 4.0, 9.0, 2.0)
    visits = 12
    for visit in range(visits):
        column.refresh()
        wind = Weather(20.0, 0.0, gusts[visit % len(gusts)], 0.0, 0.0)
        column.advance(wind, [], [], steps // visits, DAY)
    return np.abs(column.inventory() / before - 1.0)
