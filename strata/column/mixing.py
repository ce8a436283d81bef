"""How strongly the column mixes, and what happens where it is unstable.

Turbulent diffusivity c N^(-2 p) within bounds, which holds the laws that a site may choose
(:mod:`strata.column.laws`); what currents along the bed add; double diffusion through a
staircase where warm salty water lies under cool fresh [K90]; layers that are heavier than the
one below are pooled with it until neutral.

[K90] Kelley 1990, J. Geophys. Res. 95:3365-3371: flux F_H / (rho c_p) = C kappa
(alpha g / (kappa nu))^(1/3) dT^(4/3) over a step dT of the staircase, C = 0.0032 exp(4.8 /
R^0.72), density ratio R = beta S_z / (alpha T_z), flux ratio
(R + 1.4 (R - 1)^1.5) / (1 + 14 (R - 1)^1.5).
"""

import math

import numpy as np

from strata.compiled import compiled
from strata.water.density import parcel_density

#: Density ratios between which a staircase is taken to exist.
STAIRCASE_RANGE = (1.1, 10.0)


@compiled
def turbulent_diffusivity(stability, coefficient, at_bed, power, least, most):
    """Return coefficient N^(-2 power) + at_bed / N^2 within bounds [m2 s-1].

    ``stability`` is N^2 [s-2]; the upper bound where the pair is not stable, but for a power
    of 0, which asks nothing of stability.
    """
    if power == 0.0 and at_bed == 0.0:
        return min(max(coefficient, least), most)
    if stability <= 0.0:
        return most
    if power == 0.5:
        inner = coefficient / math.sqrt(stability)
    elif power == 0.0:
        inner = coefficient
    else:
        inner = coefficient * stability ** (-power)
    return min(max(inner + at_bed / stability, least), most)


@compiled
def kelley_factor(density_ratio):
    """Return C of the flux law of [K90]."""
    return 0.0032 * math.exp(4.8 / density_ratio**0.72)


@compiled
def kelley_flux_ratio(density_ratio):
    """Return the ratio of the buoyancy fluxes of salt and heat of [K90]."""
    excess = (density_ratio - 1.0) * math.sqrt(density_ratio - 1.0)
    return (density_ratio + 1.4 * excess) / (1.0 + 14.0 * excess)


@compiled
def staircase_drive(expansion, gravity, heat_diffusivity, viscosity, step):
    """Return kappa (alpha g / (kappa nu))^(1/3) H^(4/3) of the flux law of [K90]."""
    lift = (expansion * gravity / (heat_diffusivity * viscosity)) ** (1.0 / 3.0)
    return heat_diffusivity * lift * step ** (4.0 / 3.0)


@compiled
def staircase_diffusivity(stability, warming, expansion, gravity, drive):
    """Return the effective diffusivities of heat and of solutes through a staircase [m2 s-1].

    ``stability`` is buoyancy frequency squared [s-2], ``warming`` the rise of potential
    temperature with depth [K m-1], ``drive`` that of :func:`staircase_drive`: the jump over a
    step is its height times the warming, whatever the layers of the model.  Zero outside the
    range of the law.
    """
    if warming <= 0.0 or stability <= 0.0 or drive <= 0.0:
        return 0.0, 0.0
    ratio = 1.0 + stability / (gravity * expansion * warming)
    if ratio < STAIRCASE_RANGE[0] or ratio > STAIRCASE_RANGE[1]:
        return 0.0, 0.0
    heat = kelley_factor(ratio) * drive * warming ** (1.0 / 3.0)
    return heat, heat * kelley_flux_ratio(ratio) / ratio


@compiled
def _densities(theta, salt, gas_mass, gas_volume, pressure, contraction, out):
    """Fill the densities of parcels brought to given pressures [kg m-3]; all (n,)."""
    for i in range(len(out)):
        out[i] = parcel_density(
            theta[i], salt[i], pressure[i], gas_mass[i], gas_volume[i], contraction
        )


@compiled
def pair_stability(
    values, gas_mass, gas_volume, face_pressure, face_distance, site, stability
):
    """Fill buoyancy frequency squared [s-2] at the inner faces; return how many overturn.

    The two layers at a face are brought to its pressure; ``site`` is (gravity, haline
    contraction).
    """
    count = values.shape[0]
    gravity, contraction = site[0], site[1]
    theta, salt, at_top, at_foot = np.empty((4, count))
    for i in range(count):
        theta[i], salt[i] = values[i, 0], values[i, 1]
    top, foot = face_pressure[:count], face_pressure[1:]
    _densities(theta, salt, gas_mass, gas_volume, top, contraction, at_top)
    _densities(theta, salt, gas_mass, gas_volume, foot, contraction, at_foot)
    unstable = 0
    for f in range(1, count):
        upper, lower = at_foot[f - 1], at_top[f]
        stability[f] = gravity * (lower - upper) / (0.5 * (lower + upper)) / face_distance[f]
        unstable += lower < upper
    return unstable


@compiled
def _heavier(theta, salt, mass, space, other, values, gas_mass, gas_volume, p, contraction):
    """Return how much heavier a block is than layer ``other`` at a pressure [kg m-3]."""
    return parcel_density(theta, salt, p, mass, space, contraction) - parcel_density(
        values[other, 0], values[other, 1], p, gas_mass[other], gas_volume[other], contraction
    )


@compiled
def pool(values, gas_mass, gas_volume, volume, face_pressure, contraction, stability):
    """Mix layers that lie heavier on lighter, exactly and conservatively, until none does.

    ``stability`` is that of :func:`pair_stability` on this state.  A block grows by one layer,
    down or up, as long as it is unstable against it at the pressure of the face between them.
    Returns the number of blocks mixed.
    """
    count = values.shape[0]
    blocks = 0
    f = 1
    while f < count:
        if stability[f] >= 0.0:
            f += 1
            continue
        blocks += 1
        top, foot = f - 1, f - 1
        total = volume[top]
        theta, salt = values[top, 0], values[top, 1]
        mass, space = gas_mass[top], gas_volume[top]
        growing = True
        while growing:
            growing = False
            for sign in (1, -1):
                nxt = foot + 1 if sign > 0 else top - 1
                while 0 <= nxt < count:
                    p = face_pressure[nxt if sign > 0 else nxt + 1]
                    excess = _heavier(
                        theta,
                        salt,
                        mass,
                        space,
                        nxt,
                        values,
                        gas_mass,
                        gas_volume,
                        p,
                        contraction,
                    )
                    if sign * excess <= 0.0:
                        break
                    total += volume[nxt]
                    share = volume[nxt] / total
                    theta += share * (values[nxt, 0] - theta)
                    salt += share * (values[nxt, 1] - salt)
                    mass += share * (gas_mass[nxt] - mass)
                    space += share * (gas_volume[nxt] - space)
                    if sign > 0:
                        foot = nxt
                    else:
                        top = nxt
                    nxt += sign
                    growing = True
        settle(values, gas_mass, gas_volume, volume, top, foot)
        # where stability was below nought by round-off alone, or by what a block took in,
        # no block grew: the next face is looked at all the same
        f = max(foot, f) + 1
    return blocks


@compiled
def settle(values, gas_mass, gas_volume, volume, top, foot):
    """Give the layers ``top`` to ``foot`` their common mean, summed from what each holds."""
    tracers = values.shape[1]
    total = 0.0
    for i in range(top, foot + 1):
        total += volume[i]
    for m in range(tracers):
        base = values[top, m]
        content = 0.0
        for i in range(top, foot + 1):
            content += (values[i, m] - base) * volume[i]
        mean = base + content / total
        for i in range(top, foot + 1):
            values[i, m] = mean
    for array in (gas_mass, gas_volume):
        content = 0.0
        for i in range(top, foot + 1):
            content += array[i] * volume[i]
        for i in range(top, foot + 1):
            array[i] = content / total
