"""One stage of a separator: water and gas brought towards equilibrium at given T and P.

Full entries of the sources named in brackets are in ``docs/reference/sources.md``.
"""

import math
from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from strata import ranges
from strata.compiled import compiled
from strata.constants import GAS_CONSTANT, ZERO_CELSIUS
from strata.errors import ComputationError, OutOfRangeError
from strata.gas import columns as at
from strata.gas.bubble import (
    CONDENSED,
    HIGHEST_PRESSURE,
    NOT_CONVERGED,
    bubble_of,
    checked_gases,
    liquid_side,
    saturated_vapour_ln_phi,
    water_volume,
)
from strata.gas.carbonate import carbonate_constants, free_co2, hydrogen_of_co2
from strata.gas.ions import ionic_strength_of
from strata.gas.laws import Laws, LawsLike
from strata.gas.mixture import LEAST_GAS_ROOT, attraction_roots, fugacity_rows
from strata.gas.table import gas_table
from strata.species import VAPOUR

Array = NDArray[np.float64]

BOILS = -3
#: Share of the pressure of ideal gases below which water gives off gas by any of the laws.
_SURE = 0.7
_ROUNDS = 200
_STEPS = 400


@compiled
def bound_carbon(co2, alk, k1, k2, kw):
    """Return bicarbonate plus carbonate [mol m-3] of water of that free CO2, and its slope."""
    h = hydrogen_of_co2(co2, alk, k1, k2, kw)
    q = alk + h - kw / h
    r = 2.0 * k2 / h
    hco3 = q / (1.0 + r)
    co3 = 0.5 * r * hco3
    dq = 1.0 + kw / (h * h)
    bend = q * r / (h * (1.0 + r) * (1.0 + r))
    dhco3 = dq / (1.0 + r) + bend
    dco3 = 0.5 * (dq * r / (1.0 + r) - bend)
    return hco3 + co3, (dhco3 + dco3) * k1 / (hco3 + h * dhco3)


@compiled
def _gas_amount(c, share, vapour, carbon, alk, k1, k2, kw, y):
    """Fill y; return the moles of gas per m3 of water for given K values.

    share_i c_i is the mole fraction over water of concentration c_i.  carbon is the column in
    which c is DIC in equilibrium with the alkalinity, or -1.  Newton's method on sum(y) = 1,
    kept inside its bracket.
    """
    n = c.size
    low, high = 0.0, math.inf
    feed = np.sum(c)
    gas = 0.0
    h = 1e-4
    for step in range(_STEPS):
        total = vapour
        slope = 0.0
        for i in range(n):
            spread = 1.0 + gas * share[i]
            left = c[i] / spread
            taken = 0.0
            if i == carbon:
                left, h = free_co2(c[i], alk, k1 / spread, k2, kw, h)
                left /= spread
                if left > 0.0:
                    _, taken = bound_carbon(left, alk, k1, k2, kw)
            y[i] = share[i] * left
            total += y[i]
            slope -= share[i] * y[i] / (spread + taken)
        y[n] = vapour
        f = total - 1.0
        if f > 0.0:
            low = gas
        else:
            high = gas
        if (step == 0 and f <= 0.0) or slope == 0.0:
            return 0.0
        new = gas - f / slope
        if not (low <= new <= high):
            new = 0.5 * (low + high) if high < math.inf else 2.0 * low + 1e-12
        if abs(new - gas) <= 1e-14 * (new + feed):
            return new
        gas = new
    return gas


@compiled
def _flash(t, s, alk, c, p, carbon, rows, pairs, laws, y, work):
    """Fill y with the gas at equilibrium; return its moles per m3 of water, and a code."""
    n = rows.shape[0] - 1
    henry, reference, roots, share, ln_phi, scratch, free = work
    rt = GAS_CONSTANT * (t + ZERO_CELSIUS)
    k1, k2, kw = 0.0, 0.0, 0.0
    free[:n] = c
    feed = np.sum(c)
    if carbon >= 0:
        k1, k2, kw = carbonate_constants(t, ionic_strength_of(s, alk, 0.0, 0.0), p)
        free[carbon], _ = free_co2(c[carbon], alk, k1, k2, kw, 1e-4)
    liquid_side(t, s, alk, free[:n], rows, laws, henry, reference)
    ideal, code = henry[n], 0  # what the gases press as ideal ones
    for i in range(n):
        y[i] = henry[i] * free[i]
        ideal += y[i]
    y[n] = henry[n]
    if p > _SURE * ideal:
        bubble, code = bubble_of(
            t, s, alk, free[:n], rows, pairs, laws, y, henry, reference, roots, scratch, ln_phi
        )
        if code == 0 and p >= bubble:
            y[:] = 0.0
            return 0.0, 0
        liquid_side(t, s, alk, free[:n], rows, laws, henry, reference)
    elif ideal > 0.0:
        y /= ideal
    real = laws[at.REAL_GAS] != 0.0
    if real:
        attraction_roots(t, rows, roots)
        henry[n] *= math.exp(saturated_vapour_ln_phi(t, rows, roots))
    exponent = laws[at.PRESSURE_TERM] / rt
    for i in range(n):
        henry[i] *= math.exp(rows[i, at.VOLUME] * (p - reference[i]) * exponent)
    henry[n] *= math.exp(water_volume(t) * (p - reference[n]) * exponent)
    z = 1.0
    ln_phi[:] = 0.0
    if real and code == 0:
        z = fugacity_rows(t, p, y, rows, roots, pairs, scratch, ln_phi)
    before = -1.0
    gas = 0.0
    for _ in range(_ROUNDS):
        for i in range(n):
            share[i] = henry[i] * math.exp(-ln_phi[i]) / p
        vapour = henry[n] * math.exp(-ln_phi[n]) / p
        if z < LEAST_GAS_ROOT:
            return 0.0, CONDENSED
        if vapour >= 1.0:
            return 0.0, BOILS
        gas = _gas_amount(c, share[:n], vapour, carbon, alk, k1, k2, kw, y)
        settled = abs(gas - before) <= 1e-13 * (gas + feed)
        if not real or (settled and gas > 0.0):
            return gas, 0
        before = gas
        total = 0.0
        for i in range(n + 1):
            total += y[i]
        for i in range(n + 1):
            y[i] /= total
        z = fugacity_rows(t, p, y, rows, roots, pairs, scratch, ln_phi)
    return gas, NOT_CONVERGED if gas > 0.0 else 0


@compiled
def flash_rows(t, s, p, alk, c, carbon, rows, pairs, laws, gas, y, code):
    """Flash every row: fill moles of gas per m3 of water, mole fractions and code.

    Codes: 0 done, -1 not converged, -2 the gas would be liquid, -3 the water boils.
    """
    m = rows.shape[0]
    work = (
        np.empty(m),
        np.empty(m),
        np.empty(m),
        np.empty(m),
        np.empty(m),
        np.empty(m),
        np.empty(m),
    )
    for k in range(t.size):
        column = carbon if alk[k] > 0.0 else -1
        gas[k], code[k] = _flash(
            t[k], s[k], alk[k], c[k], p[k], column, rows, pairs, laws, y[k], work
        )


@compiled
def _carbon_rows(t, s, p, alk, amount, to_total, out):
    """Turn free CO2 into DIC (or back) where there is alkalinity."""
    for i in range(t.size):
        out[i] = amount[i]
        if alk[i] > 0.0:
            strength = ionic_strength_of(s[i], alk[i], 0.0, 0.0)
            k1, k2, kw = carbonate_constants(t[i], strength, p[i])
            if to_total:
                bound, _ = bound_carbon(amount[i], alk[i], k1, k2, kw)
                out[i] += bound
            else:
                out[i], _ = free_co2(amount[i], alk[i], k1, k2, kw, 1e-4)


@dataclass(frozen=True)
class Flash:
    """What leaves the water and what stays [mol per m3 of feed water]."""

    released: dict[str, Array]  # gases without water vapour
    residual: dict[
        str, Array
    ]  # gases; with alkalinity "CO2" is the free gas and "DIC" its total
    composition: dict[str, Array]  # mole fractions of the gas, "H2O" with it; nil without gas
    vapour: Array  # water that leaves as vapour


def flash(
    temperature: ArrayLike,
    salinity: ArrayLike,
    dissolved: Mapping[str, ArrayLike],
    pressure: ArrayLike,
    approach: ArrayLike = 1.0,
    alkalinity: ArrayLike = 0.0,
    laws: LawsLike = None,
) -> Flash:
    r"""Return what gas water gives off at a pressure, and what it keeps.

    .. math:: y_i = K_i\,c_i,\quad c_i + n\,y_i = c_i^0,\quad \sum_i y_i + y_{H_2O} = 1,\qquad
              K_i = \frac{k_i}{\varphi_i P}\,
              \frac{e^{V_i (P-P_0)/RT}}{1 - \sum_j c^0_j V_j}

    solved for the moles of gas n per volume of water by Newton's method, in rounds with the
    fugacity coefficients.  Isothermal; the water carried off as vapour is not taken from its
    volume. Where there is alkalinity, CO2 that leaves is made up from bicarbonate [Plummer &
    Busenberg 1982].

    Parameters
    ----------
    temperature : array_like
        [degC], 0 to 40.
    salinity : array_like
        Mass of dissolved ions [g kg-1], 0 to 42.
    dissolved : mapping of str to array_like
        Gases of the feed [mol m-3].  "CO2" is the free gas; "DIC" may stand in its place.
    pressure : array_like
        Absolute, of gas and water [Pa], 100 Pa to 62 bar.
    approach : array_like, optional
        Share of the way from feed to equilibrium that every gas goes, 0 to 1.
    alkalinity : array_like, optional
        [eq m-3], 0 to 400; at nil CO2 is a gas like others.
    laws : Laws or mapping, optional
        Corrections by name; see :class:`strata.gas.Laws`.

    Raises
    ------
    strata.OutOfRangeError
        If a value is out of range, the water would boil, or the gas would be a liquid.
    strata.ComputationError
        If the solver does not converge.

    Examples
    --------
    >>> stage = flash(23.0, 5.0, {"CH4": 15.0, "CO2": 80.0}, 2e5)
    >>> round(float(stage.released["CH4"]), 2), round(float(stage.composition["CH4"]), 3)
    (14.17, 0.296)
    """
    given = dict(dissolved)
    total_given = "DIC" in given
    if total_given and "CO2" in given:
        raise OutOfRangeError("dissolved holds both CO2 and DIC; one of them is allowed")
    if total_given:
        given = {("CO2" if gas == "DIC" else gas): value for gas, value in given.items()}
    source = "Henry's law and Peng-Robinson"
    shaped = np.broadcast_arrays(
        *checked_gases(temperature, salinity, given),
        ranges.within("pressure", pressure, (100.0, HIGHEST_PRESSURE), "Pa", source),
        ranges.within("approach", approach, (0.0, 1.0), "", "a share"),
        ranges.within(
            "alkalinity", alkalinity, (0.0, 400.0), "eq/m3", "activities, Davies 1962"
        ),
    )
    shape = shaped[0].shape
    t, s, *amounts, p, share, alk = (np.array(part).ravel() for part in shaped)
    table = gas_table(given, Laws.of(laws))
    carbon = table.gases.index("CO2") if "CO2" in given else -1
    c = np.empty((t.size, len(amounts)))
    for i, amount in enumerate(amounts):
        c[:, i] = amount
    if carbon >= 0 and not total_given:
        _carbon_rows(t, s, p, alk, amounts[carbon], True, c[:, carbon])
    gas, y = np.empty(t.size), np.zeros((t.size, len(amounts) + 1))
    code = np.empty(t.size, dtype=np.int64)
    flash_rows(t, s, p, alk, c, carbon, table.rows, table.pairs, table.laws, gas, y, code)
    _refuse(code, t, p)
    y[gas == 0.0] = 0.0
    off = (share * gas)[:, None] * y
    left = c - off[:, :-1]
    residual = {name: left[:, i].reshape(shape) for i, name in enumerate(table.gases)}
    if carbon >= 0 and (total_given or np.any(alk > 0.0)):
        free = np.empty(t.size)
        _carbon_rows(t, s, p, alk, np.ascontiguousarray(left[:, carbon]), False, free)
        residual["DIC"] = residual["CO2"]
        residual["CO2"] = free.reshape(shape)
    return Flash(
        released={name: off[:, i].reshape(shape) for i, name in enumerate(table.gases)},
        residual=residual,
        composition={
            name: y[:, i].reshape(shape) for i, name in enumerate((*table.gases, VAPOUR))
        },
        vapour=off[:, -1].reshape(shape),
    )


def _refuse(code: NDArray[np.int64], temperature: Array, pressure: Array) -> None:
    """Say what went wrong in the first row that could not be flashed."""
    if not np.any(code):
        return
    row = int(np.argmax(code != 0))
    where = f"row {row}, {temperature[row]:g} degC and {pressure[row]:g} Pa"
    if code[row] == BOILS:
        raise OutOfRangeError(
            f"flash: water boils ({where}); pressure must exceed its vapour's"
        )
    if code[row] == CONDENSED:
        raise OutOfRangeError(f"flash: the gas would be a liquid ({where})")
    raise ComputationError(f"flash: no convergence ({where})")
