"""What the air does: heat, gas and wind at the surface, and how deep they mix.

Heat follows the equilibrium-temperature method [E68]; gases cross by the transfer velocity of
[CC98] scaled with their Schmidt numbers [W92]; the surface layer deepens as far as the energy
of the wind and part of what cooling sets free can lift the water below it [KT67].

[E68] Edinger, Duttweiler & Geyer 1968, Water Resour. Res. 4:1137-1143.
[CC98] Cole & Caraco 1998, Limnol. Oceanogr. 43:647-656: k600 = 2.07 + 0.215 U^1.7 cm/h.
[W92] Wanninkhof 1992, J. Geophys. Res. 97:7373-7382.
[KT67] Kraus & Turner 1967, Tellus 19:98-106.
"""

from strata.column.mixing import settle
from strata.compiled import compiled
from strata.gas.diffusivity import diffusivity_at
from strata.gas.henry import henry_of_row, salting_out_of_row
from strata.water.density import parcel_density
from strata.water.transport import kinematic_viscosity_at, vapour_pressure_at

AIR_DENSITY = 1.2  # kg m-3, near 25 degC at 1 bar (ideal gas)


@compiled
def transfer_velocity(wind_speed, schmidt):
    """Return the gas transfer velocity [m s-1] of [CC98] for a wind [m s-1 at 10 m]."""
    return (2.07 + 0.215 * wind_speed**1.7) / 360000.0 * (schmidt / 600.0) ** -0.5


@compiled
def air_exchange(wind_speed, t, s, air_pressure, rows, laws, shares, schmidt, diffusion, out):
    """Fill transfer velocity [m s-1] and equilibrium with air [mol m-3] of every gas.

    ``rows`` and ``laws`` are those of the table of gases, ``shares`` the mole fractions of dry
    air; ``schmidt`` (gases, 4) are the cubics of [W92], all nil where there is none and
    viscosity over ``diffusion`` (gases, 2) stands in.
    """
    for g in range(len(shares)):
        number = kinematic_viscosity_at(t) / diffusivity_at(
            t, diffusion[g, 0], diffusion[g, 1]
        )
        if schmidt[g, 0] != 0.0:
            number = schmidt[g, 0] + t * (
                schmidt[g, 1] + t * (schmidt[g, 2] + t * schmidt[g, 3])
            )
        henry = henry_of_row(t, rows[g]) * salting_out_of_row(t, s, 0.0, rows[g], laws)
        out[g, 0] = transfer_velocity(wind_speed, number)
        out[g, 1] = shares[g] * (air_pressure - vapour_pressure_at(t)) / henry


@compiled
def wind_power(wind_speed, efficiency, drag, water_density):
    """Return the power of stirring by the wind per area [W m-2], after [KT67].

    Efficiency times water density times the cube of the friction velocity in the water.
    """
    friction_squared = AIR_DENSITY * drag * wind_speed**2 / water_density
    return efficiency * water_density * friction_squared**1.5


@compiled
def deepen(values, gas_mass, gas_volume, volume, depth, face, pressure, physics, energy):
    """Mix the surface layer as deep as its energy reaches; return its depth [m].

    ``energy`` [J] is what the wind brings in the step; ``physics`` is (gravity, haline
    contraction, convection efficiency).  A layer lighter than the mixed water above it gives
    the efficiency times its energy to the budget; a heavier one costs the work of lifting it,
    and the last is taken in by the share that the energy pays for.
    """
    gravity, contraction, efficiency = physics[0], physics[1], physics[2]
    count, tracers = values.shape
    total = volume[0]
    middle = depth[0]
    foot = 0
    theta, salt = values[0, 0], values[0, 1]
    mass, space = gas_mass[0], gas_volume[0]
    share = 0.0
    while foot + 1 < count:
        nxt = foot + 1
        p = pressure[nxt]
        block = parcel_density(theta, salt, p, mass, space, contraction)
        other = parcel_density(
            values[nxt, 0], values[nxt, 1], p, gas_mass[nxt], gas_volume[nxt], contraction
        )
        both = total + volume[nxt]
        work = gravity * total * volume[nxt] / both * (other - block) * (depth[nxt] - middle)
        if work > energy:
            share = energy / work
            break
        energy -= work if work > 0.0 else efficiency * work
        part = volume[nxt] / both
        theta += part * (values[nxt, 0] - theta)
        salt += part * (values[nxt, 1] - salt)
        mass += part * (gas_mass[nxt] - mass)
        space += part * (gas_volume[nxt] - space)
        middle += part * (depth[nxt] - middle)
        total = both
        foot = nxt
    settle(values, gas_mass, gas_volume, volume, 0, foot)
    if share > 0.0 and foot + 1 < count:
        nxt = foot + 1
        moved = total * share * volume[nxt] / (total + share * volume[nxt])
        for m in range(tracers):
            exchange = moved * (values[nxt, m] - values[0, m])
            values[nxt, m] -= exchange / volume[nxt]
            gain = exchange / total
            for i in range(foot + 1):
                values[i, m] += gain
        for array in (gas_mass, gas_volume):
            exchange = moved * (array[nxt] - array[0])
            array[nxt] -= exchange / volume[nxt]
            for i in range(foot + 1):
                array[i] += exchange / total
        return face[nxt] + share * (face[nxt + 1] - face[nxt])
    return face[foot + 1]
