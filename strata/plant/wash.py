r"""The wash tower: raw gas rises against water that takes CO2 and H2S, and a little CH4.

Counter-current stages, numbered from the top, at one temperature and pressure.  With the gas
flow G on each stage held, the balances of each gas are one tridiagonal system (the sum-rates
method of Burningham & Otto 1967),

.. math:: g_{j+1} + L c_{j-1} = g_j + L c_j, \qquad
          \frac{g_j}{G_j} = (1 - E) \frac{g_{j+1}}{G_{j+1}} + E\, K_j\, (c_j - b_j)

with the efficiency E of Murphree (1925) and what is bound in the water, b (bicarbonate and
carbonate of DIC, HS of sulphide).  The sums give new G, the composition new fugacity
coefficients, the DIC new b, until nothing changes.  Water that enters the gas as vapour is not
taken off L.  Absorption heats the water by less than 0.2 K, which is left out.
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

_MOST_ROUNDS = 2000
_SETTLED = 1e-13


@compiled
def _stage_balances(gas, total, feed_gas, feed_total, water, feed, bound, k, efficiency, work):
    """Solve the flows of one gas on all stages for held totals (Thomas algorithm).

    gas [mol/s] is filled; total are gas flows of stages; feed is what enters the top per m3 of
    water; bound what does not take part; k the equilibrium factor of each stage.
    """
    n = gas.size
    upper, right = work[0], work[1]
    for j in range(n):
        a = water / (efficiency * k[j] * total[j])
        below = total[j + 1] if j + 1 < n else feed_total
        b = water * (1.0 - efficiency) / (efficiency * k[j] * below)
        lower = 0.0
        diagonal = -(1.0 + a)
        rhs = water * bound[j]
        if j == 0:
            rhs -= water * feed
        else:
            lower = water / (efficiency * k[j - 1] * total[j - 1])
            diagonal -= water * (1.0 - efficiency) / (efficiency * k[j - 1] * total[j])
            rhs -= water * bound[j - 1]
        above = 1.0 + b
        if j + 1 == n:
            rhs -= above * feed_gas
        if j > 0:
            diagonal -= lower * upper[j - 1]
            rhs -= lower * right[j - 1]
        upper[j] = above / diagonal
        right[j] = rhs / diagonal
    gas[n - 1] = right[n - 1]
    for j in range(n - 2, -1, -1):
        gas[j] = right[j] - upper[j] * gas[j + 1]


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

    state is (gas [mol/s], total, vapour share, bound, k), all by stage; table (rows, pairs,
    laws).  Returns False where the water would boil.
    """
    gas, total, vapour, bound, k = state
    stages, n = gas.shape
    inner, concentration, y, one_k = work
    h = 1e-4
    for j in range(stages):
        around = 1.0
        for i in range(n):
            below = gas[j + 1, i] if j + 1 < stages else gas_in[i]
            concentration[i] = max(feed[i] + (below - gas[0, i]) / water, 0.0)
            y[i] = gas[j, i] / total[j]
            around -= y[i]
        y[n] = max(around, 0.0)
        if alk > 0.0:
            free, h = free_co2(
                concentration[carbon], alk, constants[0], constants[1], constants[2], h
            )
            bound[carbon, j] = concentration[carbon] - free
            concentration[carbon] = free
        bound[acid, j] = concentration[acid] * sulfide
        concentration[acid] -= bound[acid, j]
        vapour[j] = _equilibrium(
            t, s, alk, p, concentration, y, table[0], table[1], table[2], one_k, inner
        )
        if not vapour[j] < 1.0:
            return False
        for i in range(n):
            k[i, j] = one_k[i]
    return True


@compiled
def _climb_tower(
    t, s, alk, p, water, feed, sulfide, gas_in, carbon, acid, efficiency, table, ions, gas
):
    """Fill gas (stages, gases) [mol/s]; return the vapour share at the top and rounds or -1.

    feed [mol m-3] is what enters with the water, totals of DIC and sulphide among it;
    sulfide is the share of sulphide that is HS and takes no part.
    """
    stages, n = gas.shape
    total, vapour = np.empty(stages), np.zeros(stages)
    bound, k = np.zeros((n, stages)), np.empty((n, stages))
    m = n + 1
    inner = (np.empty(m), np.empty(m), np.empty(m), np.empty(m), np.empty(m))
    work = (inner, np.empty(n), np.empty(m), np.empty(n))
    sweep = (np.empty(stages), np.empty(stages))
    flows = np.empty(stages)
    constants = carbonate_constants(t, ionic_strength_of(s, alk, ions[0], ions[1]), p)
    feed_total = gas_in.sum()
    total[:] = feed_total
    for j in range(stages):
        gas[j] = gas_in
    state = (gas, total, vapour, bound, k)
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
        for i in range(n):
            _stage_balances(
                flows,
                total,
                gas_in[i],
                feed_total,
                water,
                feed[i],
                bound[i],
                k[i],
                efficiency,
                sweep,
            )
            gas[:, i] = flows
        change = 0.0
        for j in range(stages):
            new = gas[j].sum() / (1.0 - vapour[j])
            if not new > 0.0:
                return vapour[0], -1
            change = max(change, abs(new - total[j]) / total[j])
            total[j] = new
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
