"""A front in uniform flow: the shape it should keep, and what the scheme makes of it."""

import numpy as np
from scipy.special import erfc

from strata.column.transport import advect, diffuse, face_weights

DAY, YEAR = 86400.0, 3.15576e7  # s


def carry(values, flow, volume, conductance, inflow, dt, steps):
    """Carry values on with an open foot (given inflow) and an open top."""
    count, tracers = values.shape
    weight, start = face_weights(volume)
    edge, flux = np.empty((count + 1, tracers)), np.empty((count + 1, tracers))
    work = np.empty((4, *values.shape))
    for _ in range(steps):
        gain = np.zeros_like(values)
        gain[0] -= flow[0] * values[0] * dt
        gain[-1] += flow[-1] * inflow * dt
        advect(values, flow, volume, weight, start, dt, gain, edge, flux)
        if conductance is not None:
            diffuse(values, conductance, volume, np.zeros_like(values), dt, work)


def layer_means_of(function, faces, points=40):
    """Return layer means of a function by a fine midpoint rule."""
    share = (np.arange(points) + 0.5) / points
    z = faces[:-1, None] + share * np.diff(faces)[:, None]
    return function(z).mean(axis=1)


def spread_of(values, depth):
    """Return the variance of the slope of a front about its middle [m2]."""
    slope, z = np.diff(values), 0.5 * (depth[1:] + depth[:-1])
    middle = np.sum(slope * z) / np.sum(slope)
    return np.sum(slope * (z - middle) ** 2) / np.sum(slope), middle


def front_run(faces, kappa, years=100.0, speed=1.0 / YEAR, width=2.0, at=220.0):
    """Carry an erf front up a cylinder; return it, what is exact, spurious K and shift."""
    volume, depth = np.diff(faces), 0.5 * (faces[1:] + faces[:-1])
    early = width**2 / (4 * kappa)

    def exact(time):
        return lambda z: (
            0.5 * erfc(-(z - (at - speed * time)) / np.sqrt(4 * kappa * (time + early)))
        )

    values = layer_means_of(exact(0.0), faces)[:, None].copy()
    flow = np.full(len(faces), speed)
    distance = np.concatenate([[1.0], np.diff(depth), [1.0]])
    conductance = (kappa / distance)[:, None]
    end = years * YEAR
    steps = round(end / DAY)
    carry(values, flow, volume, conductance, np.ones(1), end / steps, steps)
    wanted = layer_means_of(exact(end), faces)
    have, there = spread_of(values[:, 0], depth)
    should, where = spread_of(wanted, depth)
    return values[:, 0], wanted, (have - should) / (2 * end), there - where


def graded():
    """Return faces of 1 m layers on the way of the front, 4 m elsewhere, ratio 1.25."""
    thick = [4.0]
    while sum(thick) < 300:
        middle = sum(thick) + thick[-1] / 2
        goal = 1.0 if 95 < middle < 245 else 4.0
        thick.append(np.clip(goal, thick[-1] / 1.25, thick[-1] * 1.25))
    return np.concatenate([[0.0], np.cumsum(thick)])
