r"""The gas phase: fugacity coefficients of a mixture by the equation of Peng & Robinson 1976.

.. math:: P = \frac{RT}{v-b} - \frac{a}{v(v+b)+b(v-b)}, \qquad
          a = \sum_{ij} y_i y_j \sqrt{a_i a_j}\,(1-k_{ij}), \qquad b = \sum_i y_i b_i

Water vapour is a component with the k_ij of [Soreide & Whitson 1992]; CH4 with CO2 has 0.0919
[Knapp et al. 1982]; other pairs have none.
"""

import math
from collections.abc import Mapping

import numpy as np
from numpy.typing import ArrayLike, NDArray

from strata import ranges
from strata.compiled import compiled
from strata.constants import GAS_CONSTANT, ZERO_CELSIUS
from strata.errors import OutOfRangeError
from strata.gas import columns as at
from strata.gas.laws import Laws, LawsLike
from strata.gas.table import gas_table
from strata.species import VAPOUR

Array = NDArray[np.float64]

_ROOT_EIGHT = 2.8284271247461903
_UPPER = 2.414213562373095
_LOWER = -0.41421356237309503
#: Compressibility factor below which a root is that of a liquid, not of a gas.
LEAST_GAS_ROOT = 0.30


@compiled
def attraction_roots(t, rows, roots):
    """Fill roots with the square root of a [Pa1/2 m3 mol-1] of each component at t [degC]."""
    kelvin = t + ZERO_CELSIUS
    for i in range(rows.shape[0]):
        f = 1.0 + rows[i, at.ALPHA] * (1.0 - math.sqrt(kelvin / rows[i, at.CRITICAL]))
        roots[i] = rows[i, at.ROOT_A] * f


@compiled
def _gas_root(a, b):
    """Return the largest root Z of the cubic: Newton from above, where it is convex."""
    z = 1.0 + b
    c2 = b - 1.0
    c1 = a - b * (3.0 * b + 2.0)
    c0 = b * (b * (1.0 + b) - a)
    for _ in range(100):
        f = c0 + z * (c1 + z * (c2 + z))
        slope = c1 + z * (2.0 * c2 + 3.0 * z)
        step = f / slope
        z -= step
        if abs(step) < 1e-14:
            break
    return z


@compiled
def fugacity_rows(t, p, y, rows, roots, pairs, work, ln_phi):
    """Fill ln_phi with ln of the fugacity coefficients of gas y at p [Pa]; return Z.

    The roots come from :func:`attraction_roots`; work is scratch of the same length.  An empty
    gas (p = 0) has coefficients of one.
    """
    n = rows.shape[0]
    rt = GAS_CONSTANT * (t + ZERO_CELSIUS)
    total_b = 0.0
    total_a = 0.0
    for i in range(n):
        pull = 0.0
        for j in range(n):
            pull += y[j] * roots[j] * pairs[i, j]
        work[i] = pull * roots[i]
        total_a += y[i] * work[i]
        total_b += y[i] * rows[i, at.CO_VOLUME]
    if total_b == 0.0 or p == 0.0:
        ln_phi[:] = 0.0
        return 1.0
    a = total_a * p / (rt * rt)
    b = total_b * p / rt
    z = _gas_root(a, b)
    repulsion = math.log(z - b)
    attraction = a / (_ROOT_EIGHT * b) * math.log((z + _UPPER * b) / (z + _LOWER * b))
    for i in range(n):
        share = rows[i, at.CO_VOLUME] / total_b
        ln_phi[i] = (
            share * (z - 1.0) - repulsion - attraction * (2.0 * work[i] / total_a - share)
        )
    return z


@compiled
def _mixture_rows(t, p, y, rows, pairs, phi, z):
    """Fill phi and z row by row."""
    n = rows.shape[0]
    roots, work = np.empty(n), np.empty(n)
    for k in range(t.size):
        attraction_roots(t[k], rows, roots)
        z[k] = fugacity_rows(t[k], p[k], y[k], rows, roots, pairs, work, phi[k])
        for i in range(n):
            phi[k, i] = math.exp(phi[k, i])


def _gas_state(
    temperature: ArrayLike,
    pressure: ArrayLike,
    composition: Mapping[str, ArrayLike],
    laws: LawsLike,
) -> tuple[tuple[str, ...], Array, Array]:
    """Return the names, fugacity coefficients (..., names) and compressibility factor."""
    source = "gas phase, Peng & Robinson 1976"
    t = ranges.within("temperature", temperature, (-50.0, 250.0), "degC", source)
    p = ranges.within("pressure", pressure, (0.0, 6.2e6), "Pa", source)
    gases = tuple(gas for gas in composition if gas != VAPOUR)
    shares = [
        ranges.within(
            f"mole fraction of {gas}", composition.get(gas, 0.0), (0.0, 1.0), "", source
        )
        for gas in (*gases, VAPOUR)
    ]
    t, p, *shares = np.broadcast_arrays(t, p, *shares)
    y = np.stack(shares, axis=-1).reshape(-1, len(shares))
    total = y.sum(axis=-1)
    if np.any(np.abs(total - 1.0) > 1e-6):
        worst = total[np.argmax(np.abs(total - 1.0))]
        raise OutOfRangeError(f"mole fractions add up to {worst:g}; they must add up to 1")
    in_force = Laws.of(laws)
    phi, z = np.ones(y.shape), np.ones(t.size)
    if in_force.gas_phase != "ideal":
        table = gas_table(gases, in_force)
        flat = (np.ascontiguousarray(t).ravel(), np.ascontiguousarray(p).ravel(), y)
        _mixture_rows(*flat, table.rows, table.pairs, phi, z)
        if np.any(z < LEAST_GAS_ROOT):
            worst = int(np.argmin(z))
            raise OutOfRangeError(
                f"pressure is {flat[1][worst]:g} Pa at {flat[0][worst]:g} degC; "
                f"the mixture is no gas there ({source})"
            )
    return (*gases, VAPOUR), phi.reshape(*t.shape, -1), z.reshape(t.shape)


def fugacity_coefficients(
    temperature: ArrayLike,
    pressure: ArrayLike,
    composition: Mapping[str, ArrayLike],
    laws: LawsLike = None,
) -> dict[str, Array]:
    r"""Return the fugacity coefficient of every component of a gas.

    .. math:: \ln\varphi_i = \frac{b_i}{b}(Z-1) - \ln(Z-B) - \frac{A}{2\sqrt2 B}
              \Bigl(\frac{2\sum_j y_j a_{ij}}{a} - \frac{b_i}{b}\Bigr)
              \ln\frac{Z+(1+\sqrt2)B}{Z+(1-\sqrt2)B}

    [Peng & Robinson 1976] on the gas root; see the module for the interactions.

    Parameters
    ----------
    temperature : array_like
        [degC], -50 to 250.
    pressure : array_like
        Absolute [Pa], 0 to 62 bar.
    composition : mapping of str to array_like
        Mole fractions that add up to one; water vapour is "H2O".
    laws : Laws or mapping, optional
        Corrections by name; only ``gas_phase`` and ``k_ij`` count here.

    Raises
    ------
    strata.OutOfRangeError
        If a value is out of range, the fractions do not add up, or the mixture is a liquid.

    Examples
    --------
    >>> phi = fugacity_coefficients(25.0, 20e5, {"CH4": 0.8, "CO2": 0.2})
    >>> round(float(phi["CH4"]), 3)
    0.958
    """
    names, phi, _ = _gas_state(temperature, pressure, composition, laws)
    return {name: phi[..., i] for i, name in enumerate(names) if name in composition}


def compressibility_factor(
    temperature: ArrayLike,
    pressure: ArrayLike,
    composition: Mapping[str, ArrayLike],
    laws: LawsLike = None,
) -> Array:
    """Return Z = P v / (R T) of a gas; arguments as :func:`fugacity_coefficients`."""
    return _gas_state(temperature, pressure, composition, laws)[2]
