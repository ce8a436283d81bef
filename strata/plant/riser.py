r"""The pipe from the intake to the first separator, where gas comes out and lifts the water.

Steady drift-flux flow (Zuber & Findlay 1965): water and the gas that has come out of it so
far, at equilibrium with each other at every pressure, share the pipe with

.. math:: \alpha = \frac{j_g}{C_0 (j_g + j_l) + v_{gj}}, \qquad C_0 = 1.2, \qquad
          v_{gj} = 1.53 \left(\frac{\sigma g}{\rho_l}\right)^{1/4}

Everything in the pipe is then a function of the pressure P alone, and the height at which a
pressure is reached is one integral

.. math:: z(P) = \int_P^{P_0} \frac{1 + dG/dP'}{\rho_m g + f \rho_l j_l j / 2D}\, dP', \qquad
          G = \frac{\rho_l j_l^2}{1 - \alpha} + \frac{\rho_g j_g^2}{\alpha}

with G the flux of momentum, f by Haaland (1983).  Where 1 + dG/dP falls to nil the flow is
choked: with that flow no lower pressure and no greater height can be reached.  The self-lifted
flow is the largest that just reaches the separator.  The pipe is all at one temperature.
"""

import math
from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import brentq

from strata.compiled import compiled
from strata.errors import ComputationError
from strata.gas import Laws
from strata.gas.bubble import checked_gases
from strata.plant.plan import Riser
from strata.plant.release import POINTS, Train, train_of
from strata.water.density import density

Array = NDArray[np.float64]

DISTRIBUTION = 1.2  # C0 of Zuber & Findlay 1965 for round pipes
DRIFT_FACTOR = 1.53  # of the rise velocity in churning flow, same source
SURFACE_TENSION = 0.072  # N/m, water at 25 degC (IAPWS R1-76)
ENTRY_LOSS = 0.5  # velocity heads lost where water enters a pipe with a sharp edge
FEW_POINTS = 16  # for the pressure of a pump alone, which is within 300 Pa with them
SLOWEST, FASTEST = 0.02, 30.0  # m/s of water at the foot, between which a flow is sought


@dataclass(frozen=True)
class RiserFlow:
    """How water and gas go up the pipe."""

    flow: float  # m3/s of water, all pipes
    self_lifted: float  # m3/s that the gas lifts without a pump; 0 where it lifts none
    pump_pressure: (
        float  # Pa to be added at the foot for this flow; negative is throttled away
    )
    foot_pressure: float  # Pa in the lake at the intake
    choked: bool  # whether the outflow is critical
    outlet_pressure: float  # Pa
    outlet_void: float  # share of the section that is gas
    outlet_gas_share: float  # of the volume flow
    bubble_pressure: float  # Pa
    bubble_depth: float  # m, where gas first comes out; 0 where none does
    startup_pressure: (
        float  # Pa, to bring deep water up to where gas comes out, from a still pipe
    )
    depth: Array  # m, along the pipe
    pressure: Array  # Pa
    void: Array
    water_velocity: Array  # m/s
    gas_velocity: Array  # m/s


@compiled
def _friction_factor(reynolds, roughness):
    """Return the Darcy friction factor of Haaland 1983, or that of laminar flow.

    roughness is over the bore.
    """
    if reynolds < 2300.0:
        return 64.0 / max(reynolds, 1.0)
    return (-1.8 * math.log10((roughness / 3.7) ** 1.11 + 6.9 / reynolds)) ** -2.0


@dataclass(frozen=True)
class _Course:
    """The two-phase part of the pipe for one flow."""

    height: Array  # m above where gas first comes out
    void: Array
    water_speed: Array
    gas_speed: Array
    end: int  # index of the lowest pressure that is reached
    choked: bool


@compiled
def _slope(values, step, found):
    """Fill the slope at even steps by differences of fourth order, at the ends too."""
    n = values.size
    for k in range(2, n - 2):
        found[k] = values[k - 2] - 8.0 * values[k - 1] + 8.0 * values[k + 1] - values[k + 2]
    for end, way in ((0, 1), (n - 1, -1)):
        v0, v1, v2 = values[end], values[end + way], values[end + 2 * way]
        v3, v4 = values[end + 3 * way], values[end + 4 * way]
        found[end] = way * (-25.0 * v0 + 48.0 * v1 - 36.0 * v2 + 16.0 * v3 - 3.0 * v4)
        found[end + way] = way * (-3.0 * v0 - 10.0 * v1 + 18.0 * v2 - 6.0 * v3 + v4)
    for k in range(n):
        found[k] /= 12.0 * step


@compiled
def _running_integral(values, step, found):
    """Fill the integral up to every one of even steps, by cubics through four points."""
    n = values.size
    found[0] = 0.0
    for k in range(n - 1):
        if 0 < k < n - 2:
            part = 13.0 * (values[k] + values[k + 1]) - values[k - 1] - values[k + 2]
        elif k == 0:
            part = 9.0 * values[0] + 19.0 * values[1] - 5.0 * values[2] + values[3]
        else:
            part = 9.0 * values[-1] + 19.0 * values[-2] - 5.0 * values[-3] + values[-4]
        found[k + 1] = found[k] + part * step / 24.0


@compiled
def _rise(
    speed,
    pressure,
    gas_volume,
    gas_density,
    water,
    viscosity,
    gravity,
    bore,
    roughness,
    height,
    void,
):
    """Fill height and void along the falling pressures for one velocity of the water [m/s].

    Returns the index of the lowest pressure reached, and whether the flow is choked there.
    """
    n = pressure.size
    step = math.log(pressure[1] / pressure[0])  # even in the logarithm of pressure
    drift = DRIFT_FACTOR * (SURFACE_TENSION * gravity / water) ** 0.25
    momentum, stretch, slope = np.empty(n), np.empty(n), np.empty(n)
    for k in range(n):
        gas = speed * gas_volume[k]
        of_gas = DISTRIBUTION * (speed + gas) + drift  # velocity of the gas
        void[k] = gas / of_gas
        momentum[k] = water * speed**2 / (1.0 - void[k]) + gas_density[k] * gas * of_gas
    _slope(momentum, step, stretch)
    end, choked = n - 1, False
    for k in range(n):
        stretch[k] = 1.0 + stretch[k] / pressure[k]
        if stretch[k] <= 0.0 and not choked:
            end, choked = k, True
        both = speed * (1.0 + gas_volume[k])
        friction = _friction_factor(water * both * bore / viscosity, roughness / bore)
        drag = friction * water * speed * both / (2.0 * bore)
        weight = (void[k] * gas_density[k] + (1.0 - void[k]) * water) * gravity
        slope[k] = -max(stretch[k], 0.0) / (weight + drag) * pressure[k]
    _running_integral(slope, step, height)
    return end, choked


def _course(speed: float, train: Train) -> _Course:
    """Follow the pressure down for one superficial velocity of the water [m/s]."""
    height, void = np.empty_like(train.pressure), np.empty_like(train.pressure)
    end, choked = _rise(
        speed,
        train.pressure,
        train.gas_volume,
        train.gas_density,
        train.water_density,
        train.viscosity,
        train.gravity,
        train.bore,
        train.roughness,
        height,
        void,
    )
    gas = speed * train.gas_volume
    gas_speed = np.divide(gas, void, out=np.zeros_like(gas), where=void > 0.0)
    return _Course(height, void, speed / (1.0 - void), gas_speed, end, choked)


def _single_phase(speed: float, train: Train) -> tuple[float, float]:
    """Return pressure lost per metre of full water [Pa/m] and at the entry [Pa]."""
    head = 0.5 * train.water_density * speed**2
    reynolds = train.water_density * speed * train.bore / train.viscosity
    drag = _friction_factor(reynolds, train.roughness / train.bore) * head / train.bore
    return train.water_density * train.gravity + drag, (1.0 + ENTRY_LOSS) * head


def _pump_pressure(speed: float, train: Train, course: _Course | None = None) -> float:
    """Return what must be added at the foot [Pa] to bring the flow to the separator."""
    course = course or _course(speed, train)
    per_metre, entry = _single_phase(speed, train)
    below = train.length - course.height[course.end]
    if below >= 0.0:
        return train.pressure[0] + below * per_metre + entry - train.foot_pressure
    # gas comes out below the intake already: only part of the course is in the pipe
    within = np.interp(
        train.length, course.height[: course.end + 1], train.pressure[: course.end + 1]
    )
    outlet = train.pressure[course.end]
    return float(outlet - within) + entry


def _self_lifted_speed(train: Train) -> float:
    """Return the largest velocity [m/s] that needs no pump; 0 where there is none."""
    speeds = np.geomspace(SLOWEST, FASTEST, 60)
    needs = np.array([_pump_pressure(speed, train) for speed in speeds])
    free = np.flatnonzero(needs <= 0.0)
    if free.size == 0:
        return 0.0
    last = int(free[-1])
    if last == len(speeds) - 1:
        raise ComputationError(
            f"riser: more than {FASTEST:g} m/s of water lifted by its own gas"
        )
    return float(
        brentq(_pump_pressure, speeds[last], speeds[last + 1], args=(train,), xtol=1e-6)
    )


def lift(
    riser: Riser,
    depth: float,
    temperature: float,
    salinity: float,
    gases: Mapping[str, float],
    outlet_pressure: float,
    foot_pressure: float,
    flow: float | None = None,
    *,
    gravity: float = 9.81,
    laws: Laws | None = None,
) -> RiserFlow:
    """Return how a riser works: by its own gas, or with a pump for a demanded flow.

    Parameters
    ----------
    riser : Riser
    depth : float
        Of the intake [m].
    temperature, salinity : float
        Of the water, in situ [degC], [g kg-1].
    gases : mapping
        Dissolved gases [mol m-3], "CO2" being the free gas.
    outlet_pressure : float
        In the separator [Pa].
    foot_pressure : float
        In the lake at the intake [Pa].
    flow : float, optional
        Demanded of all pipes together [m3 s-1]; the self-lifted flow if not given.

    Raises
    ------
    strata.ComputationError
        If no flow is demanded and the gas lifts none.
    """
    checked_gases(temperature, salinity, gases)
    length = depth + riser.separator_height
    train, bubble = train_of(
        riser,
        temperature,
        salinity,
        gases,
        outlet_pressure,
        foot_pressure,
        length,
        gravity,
        laws,
    )
    section = riser.pipes * 0.25 * math.pi * riser.bore**2
    own = _self_lifted_speed(train)
    if flow is None and own == 0.0:
        raise ComputationError(
            f"riser: the gas of water from {depth:g} m lifts no flow up {length:g} m of pipe"
        )
    speed = own if flow is None else flow / section
    course = _course(speed, train)
    end = course.end
    below = length - float(course.height[end])
    gas = speed * train.gas_volume[end]
    depths, pressure, void, of_water, of_gas = _profile(speed, train, course, depth)
    return RiserFlow(
        flow=speed * section,
        self_lifted=own * section,
        pump_pressure=0.0 if flow is None else _pump_pressure(speed, train),
        foot_pressure=foot_pressure,
        choked=course.choked,
        outlet_pressure=float(train.pressure[end]),
        outlet_void=float(course.void[end]),
        outlet_gas_share=float(gas / (gas + speed)),
        bubble_pressure=bubble,
        bubble_depth=max(0.0, depth - max(below, 0.0)) if bubble > outlet_pressure else 0.0,
        startup_pressure=_startup_pressure(train, bubble, temperature, salinity, gases),
        depth=depths,
        pressure=pressure,
        void=void,
        water_velocity=of_water,
        gas_velocity=of_gas,
    )


def _profile(speed: float, train: Train, course: _Course, depth: float) -> tuple[Array, ...]:
    """Return depth, pressure, void, velocities of water and gas from the foot to the top."""
    reached = slice(course.end + 1)
    height = course.height[reached]
    columns = [train.pressure, course.void, course.water_speed, course.gas_speed]
    rows = [column[reached] for column in columns]
    below = train.length - float(height[-1])  # of the pipe full of water
    if below >= 0.0:
        per_metre, _ = _single_phase(speed, train)
        foot = [train.pressure[0] + below * per_metre, 0.0, speed, 0.0]
    else:  # gas comes out below the intake already: only part of the course is in the pipe
        foot = [float(np.interp(-below, height, row)) for row in rows]
    inside = below + height > 0.0
    depths = np.concatenate([[depth], depth - below - height[inside]])
    return depths, *(
        np.concatenate([[first], row[inside]]) for first, row in zip(foot, rows, strict=True)
    )


def pump_pressure(
    riser: Riser,
    depth: float,
    temperature: float,
    salinity: float,
    gases: Mapping[str, float],
    outlet_pressure: float,
    foot_pressure: float,
    flow: float,
    *,
    gravity: float = 9.81,
    laws: Laws | None = None,
) -> float:
    """Return what a pump must add [Pa] for a demanded flow; arguments as :func:`lift`.

    Negative where the gas lifts more and the flow is throttled.
    """
    length = depth + riser.separator_height
    speed = flow / (riser.pipes * 0.25 * math.pi * riser.bore**2)
    water = (temperature, salinity, gases)
    for points in (FEW_POINTS, POINTS):
        train, _ = train_of(
            riser, *water, outlet_pressure, foot_pressure, length, gravity, laws, points
        )
        course = _course(speed, train)
        if not course.choked:
            break  # where it chokes takes the finer look
    return _pump_pressure(speed, train, course)


def _startup_pressure(
    train: Train,
    bubble: float,
    temperature: float,
    salinity: float,
    gases: Mapping[str, float],
) -> float:
    """Return what a pump must add to a still pipe [Pa] until gas comes out and helps.

    The pipe is filled with deep water up to where its pressure is that of the first bubble,
    and above that with water of the density without gas; nil where the lake's pressure lifts
    that.
    """
    heavy = float(density(temperature, salinity, bubble, dict(gases)))
    filled = min(
        train.length, max(0.0, (train.foot_pressure - bubble) / (heavy * train.gravity))
    )
    column = heavy * filled + train.water_density * (train.length - filled)
    return max(0.0, train.pressure[-1] + column * train.gravity - train.foot_pressure)
