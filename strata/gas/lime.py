"""CO2 bound as calcite: what a dose of slaked lime does to water.

Ca(OH)2 + CO2 = CaCO3 + H2O until the free CO2 is used up; beyond that it turns bicarbonate
into carbonate and then leaves free hydroxide.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from strata import ranges
from strata.compiled import compiled
from strata.constants import ATMOSPHERE
from strata.errors import ComputationError
from strata.gas import speciation as at
from strata.gas.ions import equivalents_of
from strata.gas.speciation import (
    SETTLED,
    check_strength,
    checked_total,
    checked_water,
    solve_carbonate,
)

Array = NDArray[np.float64]

_HALVINGS = 60


@compiled
def _saturation(t, p, dic, alk, mono, magnesium, calcium, solid, out):
    """Return log10 of the calcite saturation once some solid [mol m-3] has formed."""
    h = out[at.H]
    solve_carbonate(
        t, p, dic - solid, alk - 2.0 * solid, mono, magnesium, calcium - solid, 0.0, h, out
    )
    return out[at.CALCITE]


@compiled
def _dose_rows(t, s, p, dic, alk, dose, calcium, magnesium, approach, out, calcite, free):
    """Dose every row; return the first that did not settle, or -1."""
    bad = -1
    for i in range(t.size):
        row = out[i]
        row[at.H] = 1e-4
        mono = equivalents_of(s[i], alk[i], 0.0, 0.0) - 2.0 * (magnesium[i] + calcium[i])
        mono = max(mono, 0.0)
        solve_carbonate(
            t[i], p[i], dic[i], alk[i], mono, magnesium[i], calcium[i], 0.0, 1e-4, row
        )
        free[i] = row[at.CO2]
        after, lime = alk[i] + 2.0 * dose[i], calcium[i] + dose[i]
        solid = 0.0
        if _saturation(t[i], p[i], dic[i], after, mono, magnesium[i], lime, 0.0, row) > 0.0:
            low, high = 0.0, min(dic[i], lime)
            for _ in range(_HALVINGS):
                solid = 0.5 * (low + high)
                if solid in (low, high):
                    break
                if (
                    _saturation(
                        t[i], p[i], dic[i], after, mono, magnesium[i], lime, solid, row
                    )
                    > 0
                ):
                    low = solid
                else:
                    high = solid
        calcite[i] = approach[i] * solid
        part = calcite[i]
        change = solve_carbonate(
            t[i],
            p[i],
            dic[i] - part,
            after - 2.0 * part,
            mono,
            magnesium[i],
            lime - part,
            0.0,
            row[at.H],
            row,
        )
        if not change < SETTLED and bad < 0:
            bad = i
    return bad


@dataclass(frozen=True)
class Limed:
    """Water after a dose of lime; amounts in mol per m3 of water."""

    ph: Array
    co2: Array  # free
    calcite: Array  # formed
    dic: Array
    alkalinity: Array
    calcium: Array
    overdosed: NDArray[np.bool_]  # more lime than free CO2 to bind
    calcite_saturation: Array  # log10; above nil where the approach is below one


def dose_lime(
    temperature: ArrayLike,
    salinity: ArrayLike,
    dic: ArrayLike,
    alkalinity: ArrayLike,
    dose: ArrayLike,
    calcium: ArrayLike = 0.0,
    *,
    magnesium: ArrayLike = 0.0,
    approach: ArrayLike = 1.0,
    pressure: ArrayLike = ATMOSPHERE,
) -> Limed:
    r"""Return what Ca(OH)2 does to water in which calcite then comes to equilibrium.

    .. math:: DIC = DIC_0 - x,\quad A = A_0 + 2d - 2x,\quad Ca = Ca_0 + d - x,\qquad
              a_{Ca}\,a_{CO_3} = K_{calcite}

    with the dose d and the calcite formed x, sought by bisection between none and all; water
    that is not saturated forms none.  Closed to gas; no other mineral forms (water with much
    magnesium would form brucite above pH 10).  Carbonate system as in
    :func:`strata.gas.speciate`.

    Parameters
    ----------
    temperature : array_like
        [degC], 0 to 40.
    salinity : array_like
        Mass of dissolved ions before dosing [g kg-1], 0 to 42.
    dic, alkalinity : array_like
        [mol m-3], [eq m-3] before dosing.
    dose : array_like
        Ca(OH)2 [mol m-3], 0 to 300.
    calcium, magnesium : array_like, optional
        Totals before dosing [mol m-3].
    approach : array_like, optional
        Share of the calcite of equilibrium that forms in the time at hand, 0 to 1.
    pressure : array_like, optional
        Absolute [Pa].

    Returns
    -------
    Limed
        ``overdosed`` is true where the dose exceeds the free CO2 before it: further lime binds
        none, but raises pH towards that of lime water.

    Examples
    --------
    >>> water = dose_lime(20.0, 3.3, 60.0, 40.0, 15.0)
    >>> f"{float(water.co2):.1f} mol/m3 of CO2 left, {float(water.calcite):.1f} of calcite"
    '4.7 mol/m3 of CO2 left, 14.7 of calcite'
    """
    shaped = np.broadcast_arrays(
        *checked_water(temperature, salinity, pressure, dic, alkalinity),
        checked_total("lime dose", dose, 300.0),
        checked_total("calcium", calcium),
        checked_total("magnesium", magnesium),
        ranges.within("approach", approach, (0.0, 1.0), "", "a share"),
    )
    shape = shaped[0].shape
    flat = [np.array(part).ravel() for part in shaped]
    n = flat[0].size
    out, calcite, free = np.empty((n, at.COLUMNS)), np.empty(n), np.empty(n)
    bad = _dose_rows(*flat, out, calcite, free)
    if bad >= 0:
        raise ComputationError(f"lime: the ion pairs of row {bad} do not settle")
    check_strength(out)
    carbon, alk, lime, ca = flat[3], flat[4], flat[5], flat[6]
    return Limed(
        ph=out[:, at.PH].reshape(shape),
        co2=out[:, at.CO2].reshape(shape),
        calcite=calcite.reshape(shape),
        dic=(carbon - calcite).reshape(shape),
        alkalinity=(alk + 2.0 * lime - 2.0 * calcite).reshape(shape),
        calcium=(ca + lime - calcite).reshape(shape),
        overdosed=(lime > free).reshape(shape),
        calcite_saturation=out[:, at.CALCITE].reshape(shape),
    )
