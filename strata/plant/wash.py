r"""The wash tower: raw gas rises against water that takes CO2 and H2S, and a little CH4.

Counter-current stages, numbered from the top, at one temperature and pressure.  The balance
and the equilibrium of each gas on each stage,

.. math:: g_{j+1} + L c_{j-1} = g_j + L c_j, \qquad
          y_j = (1 - E)\, y_{j+1} + E\, K_j\, (c_j - b_j), \qquad
          y_j = (1 - y_{H_2O}) \frac{g_j}{\sum g_j}

with the efficiency E of Murphree (1925) and what is bound in the water, b (bicarbonate and
carbonate of DIC; of sulphide, HS lowers K).  With the other gases held, that is one
tridiagonal system for a Newton step in the flows of one gas, CO2 being most of what changes
the gas flow; each gas in turn, then new fugacity coefficients and b, until nothing changes.
(To hold the gas flow instead, as the sum-rates method of Burningham & Otto (1967) does,
swings near the pinch of a tower.)  Water that enters the gas as vapour is not taken off L.
Absorption heats the water by less than 0.2 K, which is left out.
"""

import math
from dataclasses import dataclass, replace

import numpy as np

from strata.compiled import compiled
from strata.constants import GAS_CONSTANT, ZERO_CELSIUS
from strata.errors import ComputationError
from strata.gas import columns as at
from strata.gas.bubble import liquid_side, saturated_vapour_ln_phi, water_volume
from strata.gas.carbonate import carbonate_constants, free_co2
from strata.gas.ions import ionic_strength_of
from strata.gas.mixture import attraction_roots, fugacity_rows
from strata.lake.site import Site
from strata.plant.chemistry import CARBON, free_gases, table_of
from strata.plant.plan import Wash
from strata.plant.streams import GasStream, WaterStream, joined_water
from strata.species import LAKE_GASES, VAPOUR

_MOST_ROUNDS = 300
_SETTLED = 1e-13  # change of a flow over the gas that enters


@compiled
def _stage_balances(gas, i, vapour, gas_in, water, feed, bound, k, efficiency, work):
    """Take one Newton step in the flows of gas i on all stages, the other gases held.

    gas [mol/s] is (stages, gases); feed is what enters the top per m3 of water; bound what
    does not take part; k the equilibrium factor of each stage.  The mole fraction of a stage,
    ``y = (1 - vapour) g_i / sum(g)``, is its tangent in g_i; the steps make one tridiagonal
    system (Thomas algorithm).  Returns the largest change over the gas that enters.
    """
    n = gas.shape[0]
    upper, right = work
    entering = gas_in.sum()
    before, lower, above = water * feed, 0.0, 0.0  # what comes down from the stage above
    for j in range(n):
        dry = gas[j].sum()
        share = gas[j, i] / dry
        slope = (1.0 - vapour[j]) * (1.0 - share) / dry
        offset = (1.0 - vapour[j]) * share * share
        if j + 1 < n:
            dry = gas[j + 1].sum()
            share = gas[j + 1, i] / dry
            slope_below = (1.0 - vapour[j + 1]) * (1.0 - share) / dry
            offset -= (1.0 - efficiency) * (1.0 - vapour[j + 1]) * share * share
        else:
            slope_below = 1.0 / entering
        factor = water / (efficiency * k[j])
        held = water * bound[j] + factor * offset
        diagonal = -(1.0 + factor * slope) - above
        rhs = held - before
        before = held
        above_here = 1.0 + factor * (1.0 - efficiency) * slope_below
        if j + 1 == n:
            rhs -= above_here * gas_in[i]
        if j > 0:
            diagonal -= lower * upper[j - 1]
            rhs -= lower * right[j - 1]
        upper[j] = above_here / diagonal
        right[j] = rhs / diagonal
        above = factor * (1.0 - efficiency) * slope_below
        lower = factor * slope
    change, flow = 0.0, 0.0
    for j in range(n - 1, -1, -1):
        flow = right[j] - upper[j] * flow if j + 1 < n else right[j]
        old = gas[j, i]
        gas[j, i] = max(flow, 0.1 * old)  # a tangent may overshoot nil; the next one does not
        change = max(change, abs(gas[j, i] - old) / entering)
    return change


@compiled
def _equilibrium(t, s, alk, p, c, total_shares, rows, pairs, laws, k, work):
    """Fill k [m3/mol] of every gas over water of concentrations c; return y of vapour."""
    n = rows.shape[0] - 1
    henry, reference, roots, scratch, ln_phi = work
    liquid_side(t, s, alk, c, rows, laws, henry, reference)
    ln_phi[:] = 0.0
    if laws[at.REAL_GAS] != 0.0:
        attraction_roots(t, rows, roots)
        henry[n] *= math.exp(saturated_vapour_ln_phi(t, rows, roots))
        fugacity_rows(t, p, total_shares, rows, roots, pairs, scratch, ln_phi)
    exponent = laws[at.PRESSURE_TERM] / (GAS_CONSTANT * (t + ZERO_CELSIUS))
    for i in range(n):
        k[i] = (
            henry[i]
            / p
            * math.exp(rows[i, at.VOLUME] * (p - reference[i]) * exponent - ln_phi[i])
        )
    return henry[n] / p * math.exp(water_volume(t) * (p - reference[n]) * exponent - ln_phi[n])


@compiled
def _look_at_stages(
    t, s, alk, p, water, feed, sulfide, gas_in, carbon, acid, constants, table, state, work
):
    """Refresh what is bound and the equilibrium of every stage from the flows on it.

    state is (gas [mol/s], vapour share, bound, k), all by stage; table (rows, pairs, laws).
    Returns False where the water would boil.
    """
    gas, vapour, bound, k = state
    stages, n = gas.shape
    inner, concentration, y, one_k = work
    h = 1e-4
    for j in range(stages):
        dry = gas[j].sum()
        for i in range(n):
            below = gas[j + 1, i] if j + 1 < stages else gas_in[i]
            concentration[i] = max(feed[i] + (below - gas[0, i]) / water, 0.0)
            y[i] = (1.0 - vapour[j]) * gas[j, i] / dry
        y[n] = vapour[j]
        if alk > 0.0:
            free, h = free_co2(
                concentration[carbon], alk, constants[0], constants[1], constants[2], h
            )
            bound[carbon, j] = concentration[carbon] - free
            concentration[carbon] = free
        concentration[acid] *= 1.0 - sulfide
        vapour[j] = _equilibrium(
            t, s, alk, p, concentration, y, table[0], table[1], table[2], one_k, inner
        )
        if not vapour[j] < 1.0:
            return False
        one_k[acid] *= 1.0 - sulfide
        for i in range(n):
            k[i, j] = one_k[i]
    return True


@compiled
def _climb_tower(
    t, s, alk, p, water, feed, sulfide, gas_in, carbon, acid, efficiency, table, ions, gas
):
    """Fill gas (stages, gases) [mol/s]; return the vapour share at the top and rounds or -1.

    feed [mol m-3] is what enters with the water, totals of DIC and sulphide among it;
    sulfide is the share of sulphide that is HS and does not press.
    """
    stages, n = gas.shape
    m = n + 1
    inner = (np.empty(m), np.empty(m), np.empty(m), np.empty(m), np.empty(m))
    work = (inner, np.empty(n), np.empty(m), np.empty(n))
    sweep = (np.empty(stages), np.empty(stages))
    constants = carbonate_constants(t, ionic_strength_of(s, alk, ions[0], ions[1]), p)
    for j in range(stages):
        gas[j] = gas_in
    vapour = np.zeros(stages)
    state = (gas, vapour, np.zeros((n, stages)), np.empty((n, stages)))
    for rounds in range(_MOST_ROUNDS):
        if not _look_at_stages(
            t,
            s,
            alk,
            p,
            water,
            feed,
            sulfide,
            gas_in,
            carbon,
            acid,
            constants,
            table,
            state,
            work,
        ):
            return vapour[0], -1
        change = 0.0
        for i in range(n):
            one = _stage_balances(
                gas,
                i,
                vapour,
                gas_in,
                water,
                feed[i],
                state[2][i],
                state[3][i],
                efficiency,
                sweep,
            )
            change = max(change, one)
        if not gas[0].sum() > 1e-9 * gas_in.sum():
            return vapour[0], -1
        if change < _SETTLED:
            return vapour[0], rounds
    return vapour[0], -1


@dataclass(frozen=True)
class Washed:
    """What leaves the towers."""

    gas: GasStream
    water: WaterStream


def wash_gas(
    wash: Wash, gas: GasStream, water: WaterStream, site: Site, where: str = "wash"
) -> Washed:
    """Return gas and water that leave a wash; gas and water in equal gas and water out.

    Parameters
    ----------
    wash : Wash
    gas : GasStream
        Raw gas; it is taken to be at the pressure of the tower, its vapour dropped.
    water : WaterStream
        All the wash water; towers in series share it evenly.
    site : Site
    where : str
        Named if the wash cannot be solved.

    Raises
    ------
    strata.ComputationError
        If the water takes up all the gas, or the tower does not settle.
    """
    used = []
    for _ in range(wash.towers):
        each = replace(water, flow=water.flow / wash.towers)
        gas, out = _one_tower(wash, gas, each, site, where)
        used.append(out)
    return Washed(gas, joined_water(used))


def _one_tower(
    wash: Wash, gas: GasStream, water: WaterStream, site: Site, where: str
) -> tuple[GasStream, WaterStream]:
    """Solve one tower."""
    if gas.dry <= 0.0 or water.flow <= 0.0:
        return gas, water
    table = table_of(site)
    free = free_gases(water, site, wash.pressure)
    names = ["DIC" if name == "CO2" else name for name in LAKE_GASES]
    feed = np.array([free.gases["Ar"] if name == "Ar" else water.of(name) for name in names])
    gas_in = np.array([gas.of(name) for name in LAKE_GASES])
    flows = np.empty((wash.stages, len(LAKE_GASES)))
    vapour, rounds = _climb_tower(
        water.temperature,
        water.salinity,
        max(water.of("alkalinity"), 0.0),
        wash.pressure,
        water.flow,
        feed,
        1.0 - free.sulfide_share,
        gas_in,
        CARBON,
        LAKE_GASES.index("H2S"),
        wash.efficiency,
        (table.rows, table.pairs, table.laws),
        (site.magnesium_share, site.calcium_share),
        flows,
    )
    if rounds < 0:
        raise ComputationError(
            f"{where}: {water.flow:g} m3/s of water at {wash.pressure / 1e5:g} bar take up all"
            f" of {gas.dry:.3g} mol/s of gas, or the tower does not settle"
        )
    top = flows[0]
    taken = (gas_in - top) / water.flow
    dissolved = {
        name: water.of(name) + float(taken[i]) for i, name in enumerate(names) if name != "Ar"
    }
    out = {name: float(top[i]) for i, name in enumerate(LAKE_GASES)}
    out[VAPOUR] = float(top.sum() * vapour / (1.0 - vapour))
    return (
        GasStream(out, water.temperature, wash.pressure),
        water.changed(**dissolved),
    )
