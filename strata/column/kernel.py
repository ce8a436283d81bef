"""The compiled time loop: all that happens to the column between two visits of the clock.

One step: surface exchange, reactions, springs, plants and the flow they drive, diffusion, then
the overturning of whatever became unstable.  What changes slowly (constants of the carbonate
system, expansion, molecular diffusivities, plumes, plant factors) is held between visits.
"""

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from strata.column.flows import exchange_with_streams, fit_plants, route
from strata.column.gases import gas_load, refresh_co2
from strata.column.ledger import BED, REACTIONS, SOURCES, SURFACE
from strata.column.mixing import (
    pair_stability,
    pool,
    staircase_diffusivity,
    turbulent_diffusivity,
)
from strata.column.reactions import decay, react, reduce_carbon
from strata.column.surface import deepen
from strata.column.tracers import DIC, METHANE, TEMPERATURE
from strata.column.transport import advect, diffuse
from strata.compiled import compiled

Array = NDArray[np.float64]

#: Why the kernel came back.
DONE, FEED_CHANGED, NOT_FINITE, OVERDRAWN, NOT_FOLLOWED = range(5)

#: Seconds after which intakes and returns are fitted to the column anew.  In water that is
#: nearly neutral a return changes its own surroundings within days: held for a month it keeps
#: from the feed what it does to it, and the deep return of the demo would deliver 5 % too much
#: methane in 50 years; three days leave 0.9 % of that, a day 0.2 %.
FOLLOW_EVERY = 3 * 86400.0
#: Feed changes by more than this share: the plant is solved again.
FEED_TOLERANCE = 0.005


class Grid(NamedTuple):
    """What never changes in a run."""

    volume: Array  # (n,) m3
    area: Array  # (n + 1,) m2
    face: Array  # (n + 1,) m
    depth: Array  # (n,) m
    distance: Array  # (n + 1,) m between the middles of the layers at a face
    weight: Array  # (n + 1, points) of the face values
    start: NDArray[np.int64]  # (n + 1,)
    pressure: Array  # (n + 1,) Pa at the faces
    middle_pressure: Array  # (n,) Pa
    physics: Array  # gravity, haline contraction, convection efficiency, overshoot
    mixing: Array  # power of the turbulent law, least, most
    turbulent: Array  # (n + 1,) coefficient of the turbulent law
    at_bed: Array  # (n + 1,) of what currents along the bed add, m2 s-3
    window: NDArray[np.int64]  # (n + 1, 2) layer over each end of the staircase's window
    reach: Array  # (n + 1, 3) shares of the way to the next layer; span of the window, m
    rates: Array  # of the reactions, see there
    steady: Array  # (n, m) what bed and sources give each layer, amount per second
    decay: Array  # (n, m) rates of loss, s-1; no rows where nothing decays
    conversion: Array  # (n,) rate of CO2 to methane, s-1; empty where there is none
    molar_mass: Array  # CO2, CH4, N2, O2, H2S, kg/mol
    molar_volume: Array  # the same, m3/mol


class Held(NamedTuple):
    """What is held between two visits of the clock; draws and plumes of plants for less."""

    constants: Array  # (n, 3) k1, k2, kw of the carbonate system
    molecular: Array  # (n + 1, m) molecular diffusivity, m2/s
    expansion: Array  # (n + 1,) thermal expansion, 1/K
    drive: Array  # (n + 1,) of the staircase, see there
    air: Array  # equilibrium temperature, K A / (rho cp), wind power, rain, evaporation; SI
    exchange: Array  # (m, 2) transfer velocity m/s and concentration at equilibrium with air
    take: Array  # (j, n) withdrawal from each layer, m3/s
    link: Array  # (k, j, m) share of take j that goes into give k
    added: Array  # (k, m) amount added to give k, per second
    water: Array  # (k,) m3/s: flow of give k but for what it entrains
    entrained: Array  # (k, n) m3/s taken along on the way
    given: Array  # (k, n) share of give k that each layer gets
    sink: Array  # (q, 3) take that it feeds, depth m, flow m3/s
    mouth: Array  # (k, 7) ports, depth, width, spacing, angle; gas mass, gas volume
    take_span: NDArray[np.int64]  # (j, 2) first layer of take j, and the one behind its last
    plume_span: NDArray[np.int64]  # (k, 2) the same of what give k takes along
    give_span: NDArray[np.int64]  # (k, 2) and of where it ends
    from_bed: Array  # (m,) what the bed gives in all, amount per second
    from_sources: Array  # (m,) what the sources give in all, amount per second
    kind: NDArray[np.int64]  # (k,) row of the ledger
    reference: Array  # (j, m) concentration at which the factors were found; NaN: none


class State(NamedTuple):
    """What the run carries on."""

    values: Array  # (n, m)
    hydrogen: Array  # (n,) last concentration of hydrogen ions, mol/m3
    mixed_depth: Array  # (1,) m
    books: Array  # (terms, m) running sums since the start
    taken: Array  # (j, m) what each take took in this visit


class Seen(NamedTuple):
    """Filled for whoever asks after a visit: faces of the last step."""

    flow: Array  # (n + 1,) upward, m3/s
    diffusivity: Array  # (n + 1,) of solutes, m2/s
    stability: Array  # (n + 1,) buoyancy frequency squared, s-2


@compiled
def breathe(values, grid, held, state, dt):
    """Exchange heat and gases with the air for one step.

    Heat goes into the top layer, from where cooling overturns it and wind carries it down;
    gases into the whole mixed layer, which is uniform.  Both are implicit in the mixed layer.
    """
    foot, mixed = 0, 0.0
    while foot < values.shape[0] and (
        foot == 0 or grid.face[foot + 1] <= state.mixed_depth[0]
    ):
        mixed += grid.volume[foot]
        foot += 1
    pull = held.air[1] * dt
    heat = pull * (held.air[0] - values[0, TEMPERATURE]) / (1.0 + pull / mixed)
    values[0, TEMPERATURE] += heat / grid.volume[0]
    state.books[SURFACE, TEMPERATURE] += heat
    for m in range(held.exchange.shape[0]):
        if held.exchange[m, 0] <= 0.0:
            continue
        share = 1.0
        if m == DIC:
            co2 = refresh_co2(values, held.constants, state.hydrogen, 0)
            share = co2 / values[0, DIC]
        pull = held.exchange[m, 0] * grid.area[0] * dt
        amount = (
            pull * (held.exchange[m, 1] - share * values[0, m]) / (1.0 + pull * share / mixed)
        )
        for i in range(foot):
            values[i, m] += amount / mixed
        state.books[SURFACE, m] += amount


@compiled
def advance(state, grid, held, seen, steps, dt):
    """Carry the column on by ``steps`` steps of ``dt`` [s].

    Returns
    -------
    code, steps done, layer, tracer
        Code DONE, FEED_CHANGED (the plant is to be solved again), NOT_FINITE (at the layer and
        tracer named), OVERDRAWN (more than a layer holds would leave it in a step) or
        NOT_FOLLOWED (the plume of the give named in place of a layer).
    """
    values = state.values
    count, tracers = values.shape
    edge = np.empty((count + 1, tracers))
    flux = np.empty((count + 1, tracers))
    conductance = np.zeros((count + 1, tracers))
    work = np.empty((4, count, tracers))
    gain = np.empty((count, tracers))
    carried = np.empty(tracers)
    withdrawn = np.empty((held.take.shape[0], tracers))
    gas_mass = np.empty(count)
    gas_volume = np.empty(count)
    lift = np.empty(count)
    _load(state, grid, held, gas_mass, gas_volume)
    _compare(values, grid, gas_mass, gas_volume, seen)
    _conduct(values, grid, held, seen, conductance, lift)
    parts, layer, outlet = route(grid, held, seen.flow, dt)
    since = 0.0
    for step in range(steps):
        if since >= FOLLOW_EVERY and len(held.sink) > 0:
            lost = fit_plants(values, gas_mass, gas_volume, grid, held, seen.stability)
            if lost >= 0:
                return NOT_FOLLOWED, step, lost, 0
            parts, layer, outlet = route(grid, held, seen.flow, dt)
            since = 0.0
        if parts == 0:
            return OVERDRAWN, step, layer, 0
        since += dt
        breathe(values, grid, held, state, dt)
        react(
            values,
            grid.rates,
            state.mixed_depth[0],
            grid.face,
            grid.volume,
            dt,
            state.books[REACTIONS],
        )
        if grid.decay.shape[0] > 0:
            decay(values, grid.decay, grid.volume, dt, state.books[REACTIONS])
        if grid.conversion.shape[0] > 0:
            reduce_carbon(
                values,
                grid.conversion,
                held.constants,
                state.hydrogen,
                grid.volume,
                dt,
                state.books[REACTIONS],
            )
        for _ in range(parts):
            part = dt / parts
            exchange_with_streams(
                values, grid, held, part, state, outlet, gain, withdrawn, carried
            )
            advect(
                values, seen.flow, grid.volume, grid.weight, grid.start, part, gain, edge, flux
            )
        _conduct(values, grid, held, seen, conductance, lift)
        diffuse(values, conductance, grid.volume, grid.steady, dt, work)
        for m in range(tracers):
            state.books[BED, m] += dt * held.from_bed[m]
            state.books[SOURCES, m] += dt * held.from_sources[m]
        _load(state, grid, held, gas_mass, gas_volume)
        state.mixed_depth[0] = deepen(
            values,
            gas_mass,
            gas_volume,
            grid.volume,
            grid.depth,
            grid.face,
            grid.pressure,
            grid.physics,
            held.air[2] * grid.area[0] * dt,
        )
        if _compare(values, grid, gas_mass, gas_volume, seen) > 0:
            pool(
                values,
                gas_mass,
                gas_volume,
                grid.volume,
                grid.pressure,
                grid.physics[1],
                seen.stability,
            )
        layer, tracer = _not_finite(values, carried)
        if layer >= 0:
            return NOT_FINITE, step + 1, layer, tracer
        if _feed_changed(values, held):
            return FEED_CHANGED, step + 1, 0, 0
    return DONE, steps, 0, 0


@compiled
def _load(state, grid, held, gas_mass, gas_volume):
    """Refresh the dissolved gases that density needs."""
    gas_load(
        state.values,
        held.constants,
        state.hydrogen,
        grid.molar_mass,
        grid.molar_volume,
        gas_mass,
        gas_volume,
    )


@compiled
def _compare(values, grid, gas_mass, gas_volume, seen):
    """Refresh buoyancy frequency squared at the faces; return how many are unstable."""
    return pair_stability(
        values,
        gas_mass,
        gas_volume,
        grid.pressure,
        grid.distance,
        grid.physics,
        seen.stability,
    )


@compiled
def _conduct(values, grid, held, seen, conductance, lift):
    """Fill the conductance of every inner face for every tracer [m3 s-1].

    The staircase answers to the mean gradients over its window; ``lift`` (n) is workspace for
    the buoyancy passed from the top down [m s-2].
    """
    count, tracers = values.shape
    lift[0] = 0.0
    for i in range(1, count):
        lift[i] = lift[i - 1] + seen.stability[i] * grid.distance[i]
    for f in range(1, count):
        turbulent = turbulent_diffusivity(
            seen.stability[f],
            grid.turbulent[f],
            grid.at_bed[f],
            grid.mixing[0],
            grid.mixing[1],
            grid.mixing[2],
        )
        up, down = grid.window[f, 0], grid.window[f, 1]
        up_share, down_share, span = grid.reach[f, 0], grid.reach[f, 1], grid.reach[f, 2]
        warming = values[down, TEMPERATURE] - values[up, TEMPERATURE]
        warming += down_share * (values[down + 1, TEMPERATURE] - values[down, TEMPERATURE])
        warming -= up_share * (values[up + 1, TEMPERATURE] - values[up, TEMPERATURE])
        rise = lift[down] - lift[up] + down_share * (lift[down + 1] - lift[down])
        rise -= up_share * (lift[up + 1] - lift[up])
        heat, solute = staircase_diffusivity(
            rise / span,
            warming / span,
            held.expansion[f],
            grid.physics[0],
            held.drive[f],
        )
        seen.diffusivity[f] = turbulent + solute
        over = grid.area[f] / grid.distance[f]
        for m in range(tracers):
            conductance[f, m] = over * (turbulent + solute + held.molecular[f, m])
        conductance[f, TEMPERATURE] += over * (heat - solute)


@compiled
def _not_finite(values, sums):
    """Return layer and tracer of the first value that is no number, (-1, -1) if all are."""
    count, tracers = values.shape
    for m in range(tracers):
        sums[m] = 0.0
    for i in range(count):
        for m in range(tracers):
            sums[m] += values[i, m]
    if np.isfinite(sums.sum()):
        return -1, -1
    for i in range(count):
        for m in range(tracers):
            if not np.isfinite(values[i, m]):
                return i, m
    return -1, -1


@compiled
def _feed_changed(values, held):
    """Return whether methane or DIC at any intake moved past the tolerance of its factors."""
    for j in range(held.take.shape[0]):
        for m in (METHANE, DIC):
            reference = held.reference[j, m]
            if not reference > 0.0:
                continue
            total, amount = 0.0, 0.0
            for i in range(values.shape[0]):
                total += held.take[j, i]
                amount += held.take[j, i] * values[i, m]
            if abs(amount - reference * total) > FEED_TOLERANCE * reference * total:
                return True
    return False
