"""When gas comes out of solution: the pressure at which the first bubble would form.

The total gas pressure of a parcel is that of a bubble in equilibrium with all its dissolved
gases and with water vapour.  Full entries of the sources named in brackets are in
``docs/reference/sources.md``.
"""

import math
from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from strata import ranges
from strata.compiled import compiled
from strata.constants import ATMOSPHERE, GAS_CONSTANT, WATER_MASS, ZERO_CELSIUS
from strata.errors import ComputationError, OutOfRangeError
from strata.gas import columns as at
from strata.gas.henry import HIGHEST, henry_of_row, salting_out_of_row
from strata.gas.laws import Laws, LawsLike
from strata.gas.mixture import LEAST_GAS_ROOT, attraction_roots, fugacity_rows
from strata.gas.solubility import (
    SALINITY_RANGE,
    checked_temperature,
    lowest_temperature,
)
from strata.gas.table import gas_table
from strata.species import VAPOUR
from strata.water.density import TEMPERATURE_RANGE, pure_water_density
from strata.water.transport import vapour_pressure_at

Array = NDArray[np.float64]

_CONVERGED = 1e-11  # relative change of the pressure
_ITERATIONS = 200
NOT_CONVERGED = -1
CONDENSED = -2

HIGHEST_PRESSURE = 6.2e6  # Pa, to which Peng-Robinson and Henry's law are compared here


@compiled
def liquid_side(t, s, alk, c, rows, laws, henry, reference):
    """Fill henry and reference of every gas and of water.

    A bubble is at equilibrium when

        y_i phi_i P = henry_i c_i exp(V_i (P - reference_i) / RT)

    with c of water taken as one.  henry [Pa m3 mol-1], reference [Pa].
    """
    n = rows.shape[0] - 1
    saturated = vapour_pressure_at(t)
    taken = 0.0
    moles = 0.0
    for i in range(n):
        taken += c[i] * rows[i, at.VOLUME]
        moles += c[i]
    for i in range(n):
        henry[i] = henry_of_row(t, rows[i]) * salting_out_of_row(t, s, alk, rows[i], laws)
        reference[i] = ATMOSPHERE if rows[i, at.JOIN_AT] > HIGHEST else saturated
        if laws[at.PRESSURE_TERM] != 0.0:
            henry[i] /= 1.0 - taken
    # Raoult's law for the solvent, with the ions
    moles += laws[at.ION_NUMBER] * max(s / laws[at.ION_MASS], alk)
    solvent = pure_water_density(t, ATMOSPHERE) / WATER_MASS
    henry[n] = saturated * solvent / (solvent + moles) * laws[at.WATER_VAPOUR]
    reference[n] = saturated


@compiled
def water_volume(t):
    """Return the molar volume of liquid water [m3/mol]."""
    return WATER_MASS / pure_water_density(t, ATMOSPHERE)


@compiled
def saturated_vapour_ln_phi(t, rows, roots):
    """Return ln of the fugacity coefficient of saturated water vapour, from its virial."""
    n = rows.shape[0] - 1
    rt = GAS_CONSTANT * (t + ZERO_CELSIUS)
    virial = rows[n, at.CO_VOLUME] - roots[n] * roots[n] / rt
    return virial * vapour_pressure_at(t) / rt


@compiled
def bubble_of(t, s, alk, c, rows, pairs, laws, y, henry, reference, roots, work, ln_phi):
    """Fill y; return the bubble pressure [Pa] and a code; the last five are scratch."""
    n = rows.shape[0] - 1
    rt = GAS_CONSTANT * (t + ZERO_CELSIUS)
    liquid_side(t, s, alk, c, rows, laws, henry, reference)
    real = laws[at.REAL_GAS] != 0.0
    exponent = 0.0
    if laws[at.PRESSURE_TERM] != 0.0:
        exponent = 1.0 / rt
    if real:
        attraction_roots(t, rows, roots)
        henry[n] *= math.exp(saturated_vapour_ln_phi(t, rows, roots))
    of_water = water_volume(t)
    pressure = henry[n]
    for i in range(n):
        work[i] = henry[i] * c[i]
        pressure += work[i]
    if pressure == 0.0:
        y[:] = 0.0
        return 0.0, 0
    for i in range(n):
        y[i] = work[i] / pressure
        henry[i] = work[i]
    y[n] = henry[n] / pressure
    ln_phi[:] = 0.0
    before = 0.0
    gap_before = 0.0
    z = 1.0
    for step in range(_ITERATIONS):
        if real:
            z = fugacity_rows(t, pressure, y, rows, roots, pairs, work, ln_phi)
        total = 0.0
        for i in range(n + 1):
            volume = of_water
            if i < n:
                volume = rows[i, at.VOLUME]
            y[i] = henry[i] * math.exp(
                volume * (pressure - reference[i]) * exponent - ln_phi[i]
            )
            total += y[i]
        for i in range(n + 1):
            y[i] /= total
        gap = total - pressure
        if abs(gap) <= _CONVERGED * pressure:
            if z < LEAST_GAS_ROOT:
                return total, CONDENSED
            return total, 0
        new = total
        if step > 1 and gap != gap_before:
            secant = pressure - gap * (pressure - before) / (gap - gap_before)
            if abs(secant - pressure) < 3.0 * abs(gap):
                new = secant
        if not (new < 1e9):
            return new, CONDENSED
        before = pressure
        gap_before = gap
        pressure = new
    return pressure, NOT_CONVERGED


@compiled
def bubble_rows(t, s, c, rows, pairs, laws, pressure, y, code):
    """Find the bubble point of every row.

    Parameters
    ----------
    t, s : float64[n]
        In-situ temperature [degC], salinity [g/kg].
    c : float64[n, gases]
        Concentrations [mol m-3], columns in the order of the table.
    rows, pairs, laws : arrays
        Of :func:`strata.gas.table.gas_table`.
    pressure : float64[n]
        Filled with the bubble pressure [Pa].
    y : float64[n, gases + 1]
        Filled with mole fractions, water vapour last.
    code : int64[n]
        Filled with 0, or what went wrong: -1 not converged, -2 the gas would be liquid.
    """
    m = rows.shape[0]
    henry, reference = np.empty(m), np.empty(m)
    roots, work, ln_phi = np.empty(m), np.empty(m), np.empty(m)
    for k in range(t.size):
        pressure[k], code[k] = bubble_of(
            t[k],
            s[k],
            0.0,
            c[k],
            rows,
            pairs,
            laws,
            y[k],
            henry,
            reference,
            roots,
            work,
            ln_phi,
        )


@dataclass(frozen=True)
class Bubble:
    """The first bubble of a parcel."""

    pressure: Array  # Pa, total gas pressure
    composition: dict[str, Array]  # mole fractions, water vapour as "H2O"


def checked_gases(
    temperature: ArrayLike, salinity: ArrayLike, dissolved: Mapping[str, ArrayLike]
) -> list[Array]:
    """Return temperature, salinity and the gases in their order, checked and of one shape."""
    t = ranges.within(
        "temperature", temperature, TEMPERATURE_RANGE, "degC", "Henry's constants"
    )
    s = ranges.within(
        "salinity",
        salinity,
        SALINITY_RANGE,
        "g/kg",
        "salting-out, Weisenberger & Schumpe 1996",
    )
    amounts = []
    for gas, value in dissolved.items():
        if lowest_temperature(gas) > TEMPERATURE_RANGE[0]:
            checked_temperature(gas, t)
        source = "dilute solution"
        amounts.append(
            ranges.within(f"dissolved {gas}", value, (0.0, 3000.0), "mol/m3", source)
        )
    return list(np.broadcast_arrays(t, s, *amounts))


def bubble_point(
    temperature: ArrayLike,
    salinity: ArrayLike,
    dissolved: Mapping[str, ArrayLike],
    laws: LawsLike = None,
) -> Bubble:
    r"""Return the total gas pressure of water and the composition of its first bubble.

    .. math:: y_i\,\varphi_i\,P = k_i\,c_i\,\frac{e^{V_i (P - P_0)/RT}}{1 - \sum_j c_j V_j},
              \qquad \sum_i y_i = 1

    over all gases given and water vapour, whose fugacity is that of saturation by Raoult's law
    with the Poynting factor.  Solved for the pressure by the secant method on the sum.

    Parameters
    ----------
    temperature : array_like
        In situ [degC], 0 to 40.
    salinity : array_like
        Mass of dissolved ions [g kg-1], 0 to 42.
    dissolved : mapping of str to array_like
        Concentrations [mol m-3] of the gases themselves: "CO2" is the free gas, not DIC, and
        "H2S" the molecular form.
    laws : Laws or mapping, optional
        Corrections by name; see :class:`strata.gas.Laws`.

    Returns
    -------
    Bubble
        ``pressure`` [Pa] and ``composition``.  Water without gas has its vapour pressure;
        without gas and without the law of water vapour, nil and an empty composition of zeros.

    Raises
    ------
    strata.OutOfRangeError
        If a value is out of range, or the bubble would lie above 62 bar or be a liquid.
    strata.ComputationError
        If the solver does not converge.

    Examples
    --------
    >>> bubble = bubble_point(23.0, 5.0, {"CH4": 15.0, "CO2": 80.0, "N2": 0.5})
    >>> f"{float(bubble.pressure) / 1e5:.1f} bar, {float(bubble.composition['CH4']):.2f} CH4"
    '14.6 bar, 0.77 CH4'
    """
    t, s, *amounts = checked_gases(temperature, salinity, dissolved)
    in_force = Laws.of(laws)
    table = gas_table(dissolved, in_force)
    shape, n = t.shape, t.size
    c = np.empty((n, len(amounts)))
    for i, amount in enumerate(amounts):
        c[:, i] = amount.ravel()
    pressure, y = np.empty(n), np.empty((n, len(amounts) + 1))
    code = np.empty(n, dtype=np.int64)
    flat_t, flat_s = np.array(t).ravel(), np.array(s).ravel()
    bubble_rows(flat_t, flat_s, c, table.rows, table.pairs, table.laws, pressure, y, code)
    _refuse(code, pressure, flat_t)
    composition = {gas: y[:, i].reshape(shape) for i, gas in enumerate((*table.gases, VAPOUR))}
    return Bubble(pressure.reshape(shape), composition)


def _refuse(code: NDArray[np.int64], pressure: Array, temperature: Array) -> None:
    """Say what went wrong in the first row that has no bubble point."""
    if np.any(code == NOT_CONVERGED):
        row = int(np.argmax(code == NOT_CONVERGED))
        raise ComputationError(
            f"bubble point: no convergence in row {row} at {temperature[row]:g} degC"
        )
    bad = (code == CONDENSED) | (pressure > HIGHEST_PRESSURE)
    if np.any(bad):
        row = int(np.argmax(bad))
        raise OutOfRangeError(
            f"bubble pressure of row {row} at {temperature[row]:g} degC lies above "
            f"{HIGHEST_PRESSURE / 1e5:g} bar or in the liquid; Peng-Robinson and Henry's law "
            "are not compared there"
        )
