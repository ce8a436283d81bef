"""Carrying and spreading tracers: monotone advection and implicit diffusion in finite volumes.

Advection is the piecewise parabolic method [CW84] in the volume coordinate: water that moves
up the basin moves through volume, so a changing area needs no extra term.  The value at a face
comes from the six nearest layers, by the derivative of the polynomial through their summed
contents (fourth order where ``points=4``); weights are worked out once for uneven layers.
Diffusion is implicit and solved for the increment, which keeps the drift of mass at round-off.

[B85] Bank et al. 1985, IEEE Trans. Comput.-Aided Des. 4:436-451.
[CW84] Colella & Woodward 1984, J. Comput. Phys. 54:174-201.
"""

import math

import numpy as np
from numpy.typing import NDArray

from strata.compiled import compiled

Array = NDArray[np.float64]

#: Share of the step that the trapezoidal part of TR-BDF2 takes: both parts then have one
#: matrix.
GAMMA = 2.0 - math.sqrt(2.0)
#: Largest diffusion number K dt / dz^2 at which TR-BDF2 is used.  It makes nothing negative up
#: to 3, but beyond 1.5 a pulse in the top layer would leave the second one ahead of the first.
DIFFUSION_NUMBER = 1.5


def face_weights(volume: Array, points: int = 6) -> tuple[Array, NDArray[np.int64]]:
    """Return the weights that turn layer means into values at the faces.

    Parameters
    ----------
    volume : ndarray, shape (n,)
        Volume of the layers [m3].
    points : int
        Layers in the stencil; even.  The order of the face value on any grid.

    Returns
    -------
    weight : ndarray, shape (n + 1, points)
        Row f gives the value at face f as ``weight[f] @ mean[start[f] : start[f] + points]``.
    start : ndarray of int, shape (n + 1,)
        First layer of each stencil; stencils lean inward near the ends.
    """
    count = len(volume)
    points = min(points, count)
    weight = np.zeros((count + 1, points))
    start = np.zeros(count + 1, dtype=np.int64)
    for face in range(count + 1):
        first = int(np.clip(face - points // 2, 0, count - points))
        start[face] = first
        nodes = np.concatenate([[0.0], np.cumsum(volume[first : first + points])])
        scale = nodes[-1]
        slopes = _lagrange_slopes(nodes / scale, face - first)
        # contents up to node k are the sum of volume * mean of the layers before it
        for layer in range(points):
            weight[face, layer] = volume[first + layer] / scale * slopes[layer + 1 :].sum()
    return weight, start


def _lagrange_slopes(nodes: Array, at: int) -> Array:
    """Return the derivatives at node ``at`` of the Lagrange polynomials of all nodes."""
    slopes = np.zeros_like(nodes)
    for k in range(len(nodes)):
        others = np.delete(nodes, [k, at] if k != at else [k])
        if k == at:
            slopes[k] = np.sum(1.0 / (nodes[at] - others))
        else:
            slopes[k] = np.prod((nodes[at] - others) / (nodes[k] - others)) / (
                nodes[k] - nodes[at]
            )
    return slopes


@compiled
def advect(values, flow, volume, weight, start, dt, gain, edge, flux):
    """Move every tracer by the upward volume flow through the inner faces for one step.

    ``values`` (n, m) is changed in place; ``flow`` (n + 1) [m3 s-1] is upward through the
    faces, of which only the inner ones are used; ``gain`` (n, m) is the amount that each layer
    gains besides; ``edge`` and ``flux`` (n + 1, m) are workspace.  The flow out of a layer in
    one step must not exceed its volume.
    """
    count, tracers = values.shape
    points = weight.shape[1]
    for m in range(tracers):
        edge[0, m] = values[0, m]
        edge[count, m] = values[count - 1, m]
        flux[0, m] = 0.0
        flux[count, m] = 0.0
    for f in range(1, count):
        first = start[f]
        for m in range(tracers):
            edge[f, m] = 0.0
        for k in range(points):
            w = weight[f, k]
            for m in range(tracers):
                edge[f, m] += w * values[first + k, m]
        for m in range(tracers):
            low = min(values[f - 1, m], values[f, m])
            high = max(values[f - 1, m], values[f, m])
            edge[f, m] = min(max(edge[f, m], low), high)
    for f in range(1, count):
        moved = flow[f] * dt
        up = moved > 0.0
        donor = f if up else f - 1
        share = abs(moved) / volume[donor]
        near_face = f
        far_face = f + 1 if up else f - 1
        for m in range(tracers):
            mean = values[donor, m]
            near = edge[near_face, m]
            far = edge[far_face, m]
            rise = far - near
            bend = 6.0 * (mean - 0.5 * (near + far))
            extremum = (far - mean) * (mean - near) <= 0.0
            too_far = rise * bend > rise * rise
            too_near = rise * bend < -rise * rise
            near_limited = 3.0 * mean - 2.0 * far if too_far else near
            far_limited = 3.0 * mean - 2.0 * near if too_near else far
            near = mean if extremum else near_limited
            far = mean if extremum else far_limited
            rise = far - near
            bend = 6.0 * (mean - 0.5 * (near + far))
            flux[f, m] = moved * (
                near + 0.5 * share * (rise + (1.0 - 2.0 / 3.0 * share) * bend)
            )
    for i in range(count):
        per_volume = 1.0 / volume[i]
        for m in range(tracers):
            values[i, m] += (flux[i + 1, m] - flux[i, m] + gain[i, m]) * per_volume


@compiled
def _prepare(values, conductance, volume, source, part, ratio, pivot, gain):
    """Eliminate downward in ``volume + part * conduction``, and fill what is brought.

    ``ratio`` and ``pivot`` are for :func:`_substitute`; ``gain`` is the amount that conduction
    and sources bring to each layer over ``part`` seconds from the values as they are.
    """
    count, tracers = values.shape
    for m in range(tracers):
        below = part * conductance[1, m]
        pivot[0, m] = 1.0 / (volume[0] + below)
        ratio[0, m] = below * pivot[0, m]
        gain[0, m] = part * source[0, m] + below * (values[1, m] - values[0, m])
    for i in range(1, count - 1):
        for m in range(tracers):
            above = part * conductance[i, m]
            below = part * conductance[i + 1, m]
            pivot[i, m] = 1.0 / (volume[i] + above * (1.0 - ratio[i - 1, m]) + below)
            ratio[i, m] = below * pivot[i, m]
            gain[i, m] = (
                part * source[i, m]
                + below * (values[i + 1, m] - values[i, m])
                - above * (values[i, m] - values[i - 1, m])
            )
    i = count - 1
    for m in range(tracers):
        above = part * conductance[i, m]
        pivot[i, m] = 1.0 / (volume[i] + above * (1.0 - ratio[i - 1, m]))
        ratio[i, m] = 0.0
        gain[i, m] = part * source[i, m] - above * (values[i, m] - values[i - 1, m])


@compiled
def _substitute(conductance, part, ratio, pivot, change):
    """Turn amounts in ``change`` into the change of the values that they make."""
    count, tracers = change.shape
    for m in range(tracers):
        change[0, m] *= pivot[0, m]
    for i in range(1, count):
        for m in range(tracers):
            passed = part * conductance[i, m] * change[i - 1, m]
            change[i, m] = (change[i, m] + passed) * pivot[i, m]
    for i in range(count - 2, -1, -1):
        for m in range(tracers):
            change[i, m] += ratio[i, m] * change[i + 1, m]


@compiled
def diffuse(values, conductance, volume, source, dt, work):
    """Spread every tracer, and what sources give, for one step.

    TR-BDF2 [B85], of second order, while the largest diffusion number is at most 1.5, where no
    pulse of a layer undershoots and one in the top layer falls off downward; backward Euler
    beyond.
    ``conductance`` (n + 1, m) is area times diffusivity over distance [m3 s-1] at the faces;
    only inner ones are used.  ``source`` (n, m) is the amount that each layer is given per
    second while it is spread; ``work`` (4, n, m) is workspace.
    """
    count, tracers = values.shape
    ratio, pivot, gain, change = work[0], work[1], work[2], work[3]
    largest = 0.0
    for f in range(1, count):
        most = conductance[f, 0]
        for m in range(1, tracers):
            most = max(most, conductance[f, m])
        largest = max(largest, most / min(volume[f - 1], volume[f]))
    euler = largest * dt > DIFFUSION_NUMBER
    part = dt if euler else 0.5 * GAMMA * dt
    _prepare(values, conductance, volume, source, part, ratio, pivot, gain)
    first = 1.0 if euler else 2.0
    for i in range(count):
        for m in range(tracers):
            change[i, m] = first * gain[i, m]
    _substitute(conductance, part, ratio, pivot, change)
    if not euler:
        weight = 1.0 / (GAMMA * (2.0 - GAMMA))
        for i in range(count):
            for m in range(tracers):
                change[i, m] = weight * volume[i] * change[i, m] + gain[i, m]
        _substitute(conductance, part, ratio, pivot, change)
    for i in range(count):
        for m in range(tracers):
            values[i, m] += change[i, m]
