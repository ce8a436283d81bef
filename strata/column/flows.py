"""Streams through the column in one step: what is drawn and given, and the flow it drives.

Grid, held and seen are the named tuples of :mod:`strata.column.kernel`.
"""

import numpy as np

from strata.column.ledger import EVAPORATION, INTAKE, OUTLET, RAIN
from strata.column.streams import fill_spans
from strata.column.tracers import SALINITY, TEMPERATURE
from strata.compiled import compiled
from strata.water.intrusion import SINK_COEFFICIENT, layer_shares
from strata.water.plume import follow_plume

#: Share of its volume that a layer may give in a part of a step, and most parts of a step.
LARGEST_SHARE, MOST_PARTS = 0.5, 1000


@compiled
def face_flow(held, flow):
    """Fill the upward flow through the faces by continuity [m3 s-1].

    The lake level is fixed: what enters below a face and does not leave below it passes it.
    """
    count = held.take.shape[1]
    for f in range(count + 1):
        flow[f] = 0.0
    for j in range(held.take.shape[0]):
        for i in range(count):
            flow[i] -= held.take[j, i]
    for k in range(held.water.shape[0]):
        total = held.water[k] + held.entrained[k].sum()
        for i in range(count):
            flow[i] += held.given[k, i] * total - held.entrained[k, i]
    for i in range(count - 1, -1, -1):
        flow[i] += flow[i + 1]


@compiled
def route(grid, held, flow, dt):
    """Find the flow through the faces, and how many parts a step needs for it.

    Returns
    -------
    parts, layer : int
        No part where the layer would give more than it holds however a step is parted.
    outlet : float
        What leaves at the surface [m3 s-1].
    """
    face_flow(held, flow)
    outlet = flow[0] + (held.air[3] - held.air[4]) * grid.area[0]
    worst, where = 0.0, 0
    for i in range(grid.volume.shape[0]):
        out = max(flow[i], 0.0) if i > 0 else max(outlet, 0.0)
        out += max(-flow[i + 1], 0.0)
        for j in range(held.take.shape[0]):
            out += held.take[j, i]
        for k in range(held.entrained.shape[0]):
            out += held.entrained[k, i]
        if out / grid.volume[i] > worst:
            worst, where = out / grid.volume[i], i
    parts = int(np.ceil(worst * dt / LARGEST_SHARE))
    return 0 if parts > MOST_PARTS else max(parts, 1), where, outlet


@compiled
def fit_plants(values, gas_mass, gas_volume, grid, held, stability):
    """Let intakes draw, and returns rise or sink, by the column as it is.

    What returns carry follows from what is drawn; their gas is that of the last visit.
    Returns the number of the first plume that could not be followed, or -1.
    """
    count = values.shape[0]
    theta, salt = np.empty((2, count))
    for i in range(count):
        theta[i], salt[i] = values[i, TEMPERATURE], values[i, SALINITY]
    inner = stability[1:count]
    for q in range(held.sink.shape[0]):
        held.take[int(held.sink[q, 0])] = 0.0
    for q in range(held.sink.shape[0]):
        flow = held.sink[q, 2]
        shares = layer_shares(grid.face, inner, held.sink[q, 1], flow, SINK_COEFFICIENT)
        held.take[int(held.sink[q, 0])] += flow * shares
    for k in range(held.water.shape[0]):
        ports = held.mouth[k, 0]
        if ports == 0.0:
            continue
        warmth, salinity = held.added[k, TEMPERATURE], held.added[k, SALINITY]
        for j in range(held.take.shape[0]):
            warmth += held.link[k, j, TEMPERATURE] * (held.take[j] * theta).sum()
            salinity += held.link[k, j, SALINITY] * (held.take[j] * salt).sum()
        entrained, given, _, _, _, code = follow_plume(
            grid.face,
            theta,
            salt,
            gas_mass,
            gas_volume,
            grid.middle_pressure,
            inner,
            grid.physics[1],
            grid.physics[0],
            held.mouth[k, 1],
            held.water[k],
            warmth / held.water[k],
            salinity / held.water[k],
            held.mouth[k, 5],
            held.mouth[k, 6],
            ports,
            held.mouth[k, 2],
            held.mouth[k, 3],
            grid.physics[3],
            held.mouth[k, 4],
        )
        if code < 0:
            return k
        held.entrained[k], held.given[k] = entrained, given
    fill_spans(held.take, held.take_span)
    fill_spans(held.entrained, held.plume_span)
    fill_spans(held.given, held.give_span)
    return -1


@compiled
def exchange_with_streams(values, grid, held, dt, state, outlet, gain, withdrawn, carried):
    """Apply takes, gives, entrainment, outlet, rain and evaporation as one change of contents.

    ``gain`` (n, m), ``withdrawn`` (j, m) and ``carried`` (m) are workspace.
    """
    count, tracers = values.shape
    takes, gives = held.take.shape[0], held.water.shape[0]
    for i in range(count):
        for m in range(tracers):
            gain[i, m] = 0.0
    for j in range(takes):
        for m in range(tracers):
            withdrawn[j, m] = 0.0
        for i in range(held.take_span[j, 0], held.take_span[j, 1]):
            flow = held.take[j, i] * dt
            for m in range(tracers):
                amount = flow * values[i, m]
                withdrawn[j, m] += amount
                gain[i, m] -= amount
        for m in range(tracers):
            state.taken[j, m] += withdrawn[j, m]
            state.books[INTAKE, m] -= withdrawn[j, m]
    for k in range(gives):
        kind = held.kind[k]
        for m in range(tracers):
            carried[m] = held.added[k, m] * dt
            for j in range(takes):
                carried[m] += held.link[k, j, m] * withdrawn[j, m]
            state.books[kind, m] += carried[m]
        for i in range(held.plume_span[k, 0], held.plume_span[k, 1]):
            flow = held.entrained[k, i] * dt
            for m in range(tracers):
                amount = flow * values[i, m]
                carried[m] += amount
                gain[i, m] -= amount
        for i in range(held.give_span[k, 0], held.give_span[k, 1]):
            share = held.given[k, i]
            for m in range(tracers):
                gain[i, m] += share * carried[m]
    for m in range(tracers):
        amount = outlet * values[0, m] * dt
        gain[0, m] -= amount
        state.books[OUTLET, m] -= amount
    # rain and evaporation carry heat at the temperature of the surface and nothing else
    rain = held.air[3] * grid.area[0] * dt * values[0, TEMPERATURE]
    lost = held.air[4] * grid.area[0] * dt * values[0, TEMPERATURE]
    gain[0, TEMPERATURE] += rain - lost
    state.books[RAIN, TEMPERATURE] += rain
    state.books[EVAPORATION, TEMPERATURE] -= lost
