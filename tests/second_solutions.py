"""The same equation solved in two other ways: by lines, and by layers that move along.

One tracer in a bowl with springs, written from the equation with nothing of the program but
the way a layer mean is told.
"""

from dataclasses import dataclass

import numpy as np
from column_checks import (
    DAY,
    PHOSPHATE,
    YEAR,
    Compared,
    column_of,
    means_of,
    plain_lake,
    run,
    spring,
)
from scipy.integrate import solve_ivp
from scipy.interpolate import PchipInterpolator
from scipy.linalg import solve_banded
from scipy.sparse import csc_matrix, diags

from strata.lake.site import BedSource, Spring

#: A basin like a lake's, with a flat floor.
BOWL = np.array([9.0, 7.5, 6.0, 4.5, 3.0]) * 1e8
FLOOR = 200.0  # m


def bowl_with_springs(layers, years, dt_days, diffusivity=2e-7):
    """Return phosphate of a lake with two springs, bed flux and diffusion, by the column."""
    faces = np.linspace(0.0, FLOOR, layers + 1)
    depth = 0.5 * (faces[1:] + faces[:-1])
    bed = (BedSource("phosphate", *BOWL_BED_BETWEEN, BOWL_BED),)
    lake = plain_lake(faces, BOWL, diffusivity=diffusivity, springs=bowl_springs(), bed=bed)
    column = column_of(lake, 1.0 + 0.02 * depth)
    column.values[:, PHOSPHATE] = means_of(bowl_start, column.basin)
    start = column.values[:, PHOSPHATE].copy()
    run(column, years * YEAR, dt_days * DAY, visits=10)
    return column, start


#: Name, interval [m], flow [m3/s], salinity [g/kg], phosphate [mol/m3].
BOWL_SPRINGS = (
    ("deep", (180.0, 200.0), 30.0, 4.9, 1.0),
    ("upper", (80.0, 100.0), 20.0, 2.9, 0.1),
)
BOWL_BED = 1e-8  # mol m-2 s-1
BOWL_BED_BETWEEN = (100.0, 200.0)  # m


def bowl_springs():
    """Return the springs of the bowl, which seep in evenly over their intervals."""
    return tuple(
        Spring(
            name,
            sum(between) / 2,
            flow,
            20.0,
            salinity,
            {"DIC": 1.0, "alkalinity": 1.0, "phosphate": phosphate},
            spread=between,
        )
        for name, between, flow, salinity, phosphate in BOWL_SPRINGS
    )


def bowl_start(depth):
    """Return the phosphate that the bowl starts with."""
    return 0.2 + 0.5 / (1 + np.exp(-(depth - 140.0) / 6.0))


@dataclass(frozen=True)
class Lines:
    """The bowl cut into even layers, for solutions by lines.

    Written from the equation, with nothing of the program but the areas: A dc/dt = d/dz (A K
    dc/dz) + d/dz (Q c) + s c_in + bed flux (-dA/dz), Q rising from the floor as springs enter.
    """

    faces: np.ndarray  # (n + 1,) m
    area: np.ndarray  # (n + 1,) m2
    volume: np.ndarray  # (n,) m3
    flow: np.ndarray  # (n + 1,) m3/s, upward
    springs: np.ndarray  # (springs, n) m3/s of each that enters each layer
    bed: np.ndarray  # (n,) m2

    @property
    def depth(self):
        """Return the depth of the middle of each layer [m]."""
        return 0.5 * (self.faces[1:] + self.faces[:-1])

    def conductance(self, diffusivity):
        """Return area times diffusivity over distance at the faces [m3 s-1]."""
        spread = self.area * diffusivity / (self.faces[1] - self.faces[0])
        spread[0] = spread[-1] = 0.0
        return spread

    def matrix(self, diffusivity):
        """Return M of dc/dt = M c + what enters over the volume [s-1]."""
        spread, flow = self.conductance(diffusivity), self.flow
        lower, upper = spread[:-1].copy(), spread[1:].copy()  # to the neighbours
        middle = -(spread[:-1] + spread[1:])
        # half of what passes a face comes from either side; at the top the outlet takes c
        middle[1:] -= 0.5 * flow[1:-1]
        middle[:-1] += 0.5 * flow[1:-1]
        lower[1:] -= 0.5 * flow[1:-1]
        upper[:-1] += 0.5 * flow[1:-1]
        middle[0] -= flow[0]
        bands = diags([lower[1:], middle, upper[:-1]], [-1, 0, 1])
        return csc_matrix(bands.multiply(1 / self.volume[:, None]))


def lines_of_bowl(layers):
    """Return the bowl with its springs, cut for solutions by lines."""
    area_at = PchipInterpolator(np.linspace(0.0, FLOOR, len(BOWL)), BOWL)
    faces = np.linspace(0.0, FLOOR, layers + 1)
    area = area_at(faces)
    flow, springs = np.zeros(layers + 1), np.zeros((len(BOWL_SPRINGS), layers))
    for water, (_, (top, foot), total, _, _) in zip(springs, BOWL_SPRINGS, strict=True):
        flow += total * np.clip((foot - faces) / (foot - top), 0.0, 1.0)
        inside = np.minimum(faces[1:], foot) - np.maximum(faces[:-1], top)
        water[:] = total * np.clip(inside, 0, None) / (foot - top)
    bed = area[:-1] - area[1:]
    bed[-1] += area[-1]
    volume = np.diff(area_at.antiderivative()(faces))
    return Lines(faces, area, volume, flow, springs, bed)


def by_lines(layers, years, diffusivity):
    """Return phosphate of the same lake by lines: central differences, BDF in time [scipy]."""
    lines = lines_of_bowl(layers)
    matrix, depth = lines.matrix(diffusivity), lines.depth
    entering = np.array([phosphate for *_, phosphate in BOWL_SPRINGS]) @ lines.springs
    entering += BOWL_BED * lines.bed * (depth > BOWL_BED_BETWEEN[0])
    solved = solve_ivp(
        lambda _, c: matrix @ c + entering / lines.volume,
        (0.0, years * YEAR),
        bowl_start(depth),
        method="BDF",
        jac=matrix,
        rtol=1e-7,
        atol=1e-9,
        t_eval=[years * YEAR],
    )
    return depth, solved.y[:, -1], lines.volume


def against_lines(layers, years=30.0, dt_days=2.0, diffusivity=2e-7):
    """Return the column beside the solution by lines, and the part of its own layers."""
    column, _ = bowl_with_springs(layers, years, dt_days, diffusivity)
    whole = diffusivity + column.slow.molecular[0, PHOSPHATE]
    fine = 8 * layers
    _, values, volume = by_lines(fine, years, whole)
    content = (values * volume).reshape(layers, 8).sum(axis=1)
    exact = content / volume.reshape(layers, 8).sum(axis=1)
    return Compared(column.basin.depth, column.values[:, PHOSPHATE], exact)


def moving_front(layers, years, diffusivity):
    """Return a front that a spring at the floor lifts through a bowl, by column and by layers
    that move with the water.

    Layers of the second solution hold their water: springs add new ones at the floor, the
    outlet takes from the uppermost, and only diffusion passes between them, backward in time.
    """
    floor, flow, at = 200.0, 25.0, 150.0
    faces = np.linspace(0.0, floor, layers + 1)
    depth = 0.5 * (faces[1:] + faces[:-1])
    layer = floor / layers
    springs = (spring("floor", floor - 0.5 * layer, flow, layer, 1.0 + 0.02 * floor, 1.0),)
    lake = plain_lake(faces, BOWL, diffusivity=diffusivity, springs=springs)
    column = column_of(lake, 1.0 + 0.02 * depth)

    def front(z):
        return 0.5 * (1 + np.tanh((z - at) / 2.0))

    column.values[:, PHOSPHATE] = means_of(front, column.basin)
    whole = diffusivity + column.slow.molecular[0, PHOSPHATE]
    run(column, years * YEAR, DAY, visits=20)
    found = column.values[:, PHOSPHATE]
    exact = _layers_that_move(front, flow, whole, years * YEAR, column.basin)
    return Compared(depth, found, exact)


def _layers_that_move(front, flow, diffusivity, seconds, basin):
    """Return the means over a basin's layers of a front carried by layers of its own water."""
    table = np.linspace(0.0, basin.faces[-1], 20001)
    area_at = PchipInterpolator(np.linspace(0.0, basin.faces[-1], len(BOWL)), BOWL)
    sums = area_at.antiderivative()(table)
    below = sums[-1] - sums  # volume below each depth of the table
    deep = np.linspace(0.0, basin.faces[-1], 801)  # 0.25 m
    nodes = np.interp(deep, table, below)[::-1]  # from the floor up: volume below each node
    z = 0.5 * (deep[1:] + deep[:-1])[::-1]
    values = front(z)
    steps = 2000
    dt = seconds / steps
    for _ in range(steps):
        # what entered is one new layer at the floor; all others now lie higher
        nodes = np.concatenate([[0.0], nodes + flow * dt])
        values = np.concatenate([[1.0], values])
        keep = nodes[:-1] < below[0]
        values, nodes = values[keep], np.append(nodes[:-1][keep], below[0])
        level = np.interp(nodes, below[::-1], table[::-1])
        middle = 0.5 * (level[1:] + level[:-1])
        volume = np.diff(nodes)
        conductance = area_at(level[1:-1]) * diffusivity / (middle[:-1] - middle[1:])
        bands = np.zeros((3, len(values)))
        bands[0, 1:] = bands[2, :-1] = -dt * conductance
        bands[1] = volume
        bands[1, 1:] += dt * conductance
        bands[1, :-1] += dt * conductance
        values = solve_banded((1, 1), bands, volume * values)
    content = np.concatenate([[0.0], np.cumsum(values * np.diff(nodes))])
    at_faces = np.interp(np.interp(basin.faces, table, below), nodes, content)
    return -np.diff(at_faces) / basin.volume
