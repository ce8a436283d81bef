"""What the gas is worth and what moving water and gas costs.

Heating value and Wobbe index of the product; pumps; compressors, isentropic with an
efficiency, in stages with cooling between them.  Gas is compressed along the isentrope of a
virial gas: its heat capacities are polynomials, its second virial coefficient is Pitzer's.
Sources in full are in ``docs/reference/sources.md``.
"""

import math
from collections.abc import Mapping

import numpy as np

from strata.compiled import compiled
from strata.constants import GAS_CONSTANT, ZERO_CELSIUS
from strata.plant.streams import GasStream
from strata.species import SPECIES, VAPOUR, WATER_CRITICAL

#: Lower heating values at 25 degC from enthalpies of formation [J/mol].
HEATING_VALUES = {"CH4": 802_584.0, "H2S": 518_010.0}
AIR_MASS = 28.9647e-3  # kg/mol
SECONDS_PER_YEAR = 365.25 * 86400.0
#: t CO2-eq per t CH4 over 100 years, IPCC AR6 WG1 table 7.SM.7 (no carbon-cycle credit).
METHANE_WARMING = 27.9

# Cp / R of the ideal gas, a0 + a1 T + ... + a4 T^4 with T in K, 50 or 200 to 1000 K (Poling,
# Prausnitz & O'Connell 2001, recalled; the tests compare them with reference equations).
_HEAT_CAPACITY = {
    "CH4": (4.568, -8.975e-3, 3.631e-5, -3.407e-8, 1.091e-11),
    "CO2": (3.259, 1.356e-3, 1.502e-5, -2.374e-8, 1.056e-11),
    "N2": (3.539, -0.261e-3, 0.007e-5, 0.157e-8, -0.099e-11),
    "Ar": (2.5, 0.0, 0.0, 0.0, 0.0),
    "O2": (3.630, -1.794e-3, 0.658e-5, -0.601e-8, 0.179e-11),
    "H2S": (4.266, -3.438e-3, 1.319e-5, -1.331e-8, 0.488e-11),
    VAPOUR: (4.395, -4.186e-3, 1.405e-5, -1.564e-8, 0.632e-11),
}
_NAMES = tuple(_HEAT_CAPACITY)
_CRITICAL = np.array(
    [
        (row.critical_temperature, row.critical_pressure, row.acentric_factor)
        for row in map(SPECIES.get, _NAMES)
        if row is not None
    ]
    + [WATER_CRITICAL]
)
# with the cube root of Tc / Pc, to which a volume goes
_CRITICAL = np.column_stack([_CRITICAL, np.cbrt(_CRITICAL[:, 0] / _CRITICAL[:, 1])])
_COEFFICIENTS = np.array([_HEAT_CAPACITY[g] for g in _NAMES])


@compiled
def _virial(t, y, critical):
    """Return the second virial coefficient [m3/mol] of a mixture and its slope with T [K].

    Pitzer's correlation as fitted by Abbott (Smith, Van Ness & Abbott 2005), mixed with
    geometric critical temperatures and mean factors.
    """
    b, slope = 0.0, 0.0
    for i in range(len(y)):
        if y[i] <= 0.0:
            continue
        for j in range(i + 1):
            if y[j] <= 0.0:
                continue
            tc = math.sqrt(critical[i, 0] * critical[j, 0])
            # RTc/Pc of each by cube roots of volume
            scale = GAS_CONSTANT * (0.5 * (critical[i, 3] + critical[j, 3])) ** 3
            omega = 0.5 * (critical[i, 2] + critical[j, 2])
            x = t / tc
            first, second = 0.422 * x**-1.6, 0.172 * x**-4.2
            weight = y[i] * y[j] * scale * (1.0 if i == j else 2.0)
            b += weight * (0.083 - first + omega * (0.139 - second))
            slope += weight * (1.6 * first + omega * 4.2 * second) / t
    return b, slope


@compiled
def _isentropic(y, coefficients, critical, t1, p1, p2):
    """Return the work [J/mol] and end temperature [K] of compression at constant entropy."""
    c = np.zeros(5)
    for i in range(len(y)):
        for k in range(5):
            c[k] += y[i] * coefficients[i, k]
    b1, slope1 = _virial(t1, y, critical)
    t2 = t1 * (p2 / p1) ** (1.0 / (c[0] + t1 * (c[1] + t1 * (c[2] + t1 * (c[3] + t1 * c[4])))))
    b2, slope2 = b1, slope1
    for _ in range(50):
        b2, slope2 = _virial(t2, y, critical)
        entropy = c[0] * math.log(t2 / t1) - math.log(p2 / p1)
        for k in range(1, 5):
            entropy += c[k] * (t2**k - t1**k) / k
        entropy -= (p2 * slope2 - p1 * slope1) / GAS_CONSTANT
        heat = c[0] + t2 * (c[1] + t2 * (c[2] + t2 * (c[3] + t2 * c[4])))
        step = t2 * entropy / heat
        t2 -= step
        if abs(step) < 1e-9 * t2:
            break
    work = 0.0
    for k in range(5):
        work += GAS_CONSTANT * c[k] * (t2 ** (k + 1) - t1 ** (k + 1)) / (k + 1)
    return work + p2 * (b2 - t2 * slope2) - p1 * (b1 - t1 * slope1), t2


def isentropic_work(
    composition: Mapping[str, float], temperature: float, start: float, end: float
) -> tuple[float, float]:
    """Return the work [J/mol] and the end temperature [degC] of isentropic compression.

    Parameters
    ----------
    composition : mapping
        Mole fractions or flows by gas, vapour as "H2O"; vapour stays vapour.
    temperature : float
        At the start [degC].
    start, end : float
        Pressures [Pa]; up to 10 bar the virial gas is within 0.5 % of reference equations.
    """
    y = np.array([composition.get(gas, 0.0) for gas in _NAMES])
    work, t2 = _isentropic(
        y / y.sum(), _COEFFICIENTS, _CRITICAL, temperature + ZERO_CELSIUS, start, end
    )
    return float(work), float(t2) - ZERO_CELSIUS


def compression_power(
    gas: GasStream, pressure: float, efficiency: float, stages: int = 1, cooling: float = 30.0
) -> float:
    """Return the power [W] to bring a gas stream up to a pressure; nil where it is there.

    Parameters
    ----------
    gas : GasStream
    pressure : float
        To be reached [Pa].
    efficiency : float
        Isentropic, of a compressor.
    stages : int
        Of equal pressure ratio, with cooling between them; condensing vapour is left in, which
        errs on the side of more power.
    cooling : float
        Temperature [degC] at the entry of every stage but the first.
    """
    if pressure <= gas.pressure or gas.total <= 0.0:
        return 0.0
    ratio = (pressure / gas.pressure) ** (1.0 / stages)
    work, at, temperature = 0.0, gas.pressure, gas.temperature
    for stage in range(stages):
        end = pressure if stage == stages - 1 else at * ratio
        work += isentropic_work(gas.flows, temperature, at, end)[0]
        at, temperature = end, cooling
    return gas.total * work / efficiency


def pump_power(flow: float, pressure_rise: float, efficiency: float) -> float:
    """Return the power [W] to raise the pressure of a flow [m3/s]; nil for a fall."""
    return flow * max(pressure_rise, 0.0) / efficiency


def heating_value(gas: GasStream) -> float:
    """Return the lower heating value of the dry gas [J per normal m3]; 0 for no gas."""
    if gas.dry <= 0.0:
        return 0.0
    return thermal_power(gas) / gas.normal_flow


def thermal_power(gas: GasStream) -> float:
    """Return the lower heating value that a stream carries [W]."""
    return sum(gas.of(name) * value for name, value in HEATING_VALUES.items())


def wobbe_index(gas: GasStream) -> float:
    """Return the lower Wobbe index [J per normal m3], heating value over root of density."""
    if gas.dry <= 0.0:
        return 0.0
    return heating_value(gas) / math.sqrt(gas.molar_mass / AIR_MASS)


def carbon_dioxide_equivalent(gas: GasStream) -> float:
    """Return what a stream does to the climate if let go [kg CO2-eq per second], 100 years."""
    carbon = gas.of("CO2") * SPECIES["CO2"].molar_mass
    return carbon + METHANE_WARMING * gas.of("CH4") * SPECIES["CH4"].molar_mass
