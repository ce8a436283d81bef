r"""Water that leaves a port and rises or sinks, taking in lake water as it goes.

The top-hat plume of Morton, Taylor & Turner (1956), followed in time along its path so that
the turning point at its top is not singular.  With volume flow Q, momentum (Mx, Mz), speed
U = M / Q, cross-section A = Q / U and reduced gravity g' against the lake at the same depth

.. math:: \dot Q = \alpha P U^2, \qquad \dot M_x = 0, \qquad \dot M_z = Q g', \qquad
          \dot z = M_z / Q,

and every dissolved thing mixes in proportion to volume.  The perimeter P is the smaller of
that of n round plumes and that of the one slot (with round ends) which has swallowed them all,

.. math:: P = 2\,[\min(n \pi A,\; L^2 + \pi A)]^{1/2}, \qquad L = (n - 1)\,s,

so that close ports merge to a line plume and that, far away, to one round plume, with no jump.

Where the plume shoots past its neutral level into a gradient it takes in at least what Baines
(1975) found for a plume that strikes a density interface, in proportion to the cube of the
Froude number, with the saturation of Kumagai (1984): ``Qe / Q = c Fr^3 / (1 + 3.1 Fr^2 +
1.8 Fr^3)``.  What has been taken in spreads at the level of its own density
(``strata.water.intrusion``).

The lake is interpolated linearly between layer centres; what is taken from each layer is
shared by the overlap of the layer with the depths passed, so that nothing jumps when a profile
changes a little.  A jet without buoyancy ends when stratification would have stopped an
infinitesimally buoyant one, after half a buoyancy period (no longer than that of N = 1e-4
s-1).
"""

import math

import numpy as np

from strata.compiled import compiled
from strata.water.density import parcel_density
from strata.water.intrusion import INTRUSION_COEFFICIENT, layer_shares

# MTT (1956) use 0.093 with Gaussian profiles; the top-hat value is sqrt(2) times it.
ENTRAINMENT_COEFFICIENT = 0.093 * math.sqrt(2.0)
LEAST_FREQUENCY = 1e-4  # s-1, stratification that ends a jet in perfectly mixed water
IDLE = 0.05  # of the momentum per 1 / N: a force that leaves a jet as it is
GROWTH_PER_STEP = 0.15  # of the flow
FALL_PER_STEP = 0.3  # of the buoyant time (b / g')^(1/2)
PHASE_PER_STEP = 0.15  # of 1 / N
DEPTH_PER_STEP = 1.0  # m
MOST_STEPS = 20_000


@compiled
def _segment(face_depth, depth, start):
    """Return i such that the depth lies between the centres of layers i and i + 1."""
    last = len(face_depth) - 3
    i = min(max(start, 0), last)
    while i < last and depth > 0.5 * (face_depth[i + 1] + face_depth[i + 2]):
        i += 1
    while i > 0 and depth < 0.5 * (face_depth[i] + face_depth[i + 1]):
        i -= 1
    return i


@compiled
def _ambient(face_depth, lake, depth, start):
    """Return (theta, salinity, gas mass, gas volume, pressure, segment) at a depth."""
    if len(face_depth) == 2:
        return lake[0][0], lake[1][0], lake[2][0], lake[3][0], lake[4][0], 0
    i = _segment(face_depth, depth, start)
    upper = 0.5 * (face_depth[i] + face_depth[i + 1])
    lower = 0.5 * (face_depth[i + 1] + face_depth[i + 2])
    x = min(max((depth - upper) / (lower - upper), 0.0), 1.0)
    y = 1.0 - x
    return (
        y * lake[0][i] + x * lake[0][i + 1],
        y * lake[1][i] + x * lake[1][i + 1],
        y * lake[2][i] + x * lake[2][i + 1],
        y * lake[3][i] + x * lake[3][i + 1],
        y * lake[4][i] + x * lake[4][i + 1],
        i,
    )


@compiled
def _heaviness(face_depth, lake, water, depth, start, haline_contraction):
    """Return (relative excess density of water brought to a depth, ambient theta, ...)."""
    theta, salt, mass, volume, pressure, i = _ambient(face_depth, lake, depth, start)
    around = parcel_density(theta, salt, pressure, mass, volume, haline_contraction)
    inside = parcel_density(
        water[0], water[1], pressure, water[2], water[3], haline_contraction
    )
    return (inside - around) / around, theta, salt, mass, volume, i


@compiled
def _cross_section(flow, speed, ports, row_length):
    """Return (perimeter [m], half-width [m]) of round plumes or of the slot they merged to."""
    area = flow / speed
    separate = ports * math.pi * area
    merged = row_length * row_length + math.pi * area
    if separate <= merged:
        return 2.0 * math.sqrt(separate), math.sqrt(area / (ports * math.pi))
    return 2.0 * math.sqrt(merged), (math.sqrt(merged) - row_length) / math.pi


@compiled
def _take_in(face_depth, entrained, top, foot, flow, hint):
    """Share a flow among the layers between two depths by overlap."""
    n = len(face_depth) - 1
    top = min(max(top, face_depth[0]), face_depth[n])
    foot = min(max(foot, face_depth[0]), face_depth[n])
    i = min(max(hint, 0), n - 1)
    while i > 0 and face_depth[i] > top:
        i -= 1
    while i < n - 1 and face_depth[i + 1] <= top:
        i += 1
    thickness = foot - top
    if thickness <= 1e-9:
        entrained[i] += flow
        return
    while i < n and face_depth[i] < foot:
        overlap = min(foot, face_depth[i + 1]) - max(top, face_depth[i])
        entrained[i] += flow * overlap / thickness
        i += 1


@compiled
def _neutral_depth(face_depth, lake, water, depth, haline_contraction):
    """Return the depth [m] where water is first neutral on its way down or up from a start."""
    n = len(face_depth) - 1
    excess, _, _, _, _, i = _heaviness(face_depth, lake, water, depth, 0, haline_contraction)
    if excess == 0.0 or n == 1:
        return depth
    downward = excess > 0.0
    here = depth
    k = i + 1 if downward else i
    while 0 <= k < n:
        there = 0.5 * (face_depth[k] + face_depth[k + 1])
        if (there > here) == downward and there != here:
            next_excess = _heaviness(face_depth, lake, water, there, k, haline_contraction)[0]
            if (next_excess > 0.0) != downward:
                return here + (there - here) * excess / (excess - next_excess)
            here = there
            excess = next_excess
        k += 1 if downward else -1
    return face_depth[n] if downward else face_depth[0]


@compiled
def _rates(place, depth, flow, down, content, hint):
    """Return how fast a plume changes, and what it meets.

    ``place`` is (face depths, lake, haline contraction, row); row is (ports, length of the
    row, entrainment coefficient, gravity, level momentum); ``content`` is flow times (theta,
    salinity, gas mass, gas volume).

    Returns
    -------
    tuple
        Rate of taking in [m3 s-2], force [m4 s-3], half-width [m], ambient theta, salinity,
        gas mass, gas volume, segment.
    """
    face_depth, lake, haline_contraction, row = place
    water = (content[0] / flow, content[1] / flow, content[2] / flow, content[3] / flow)
    excess, theta, salt, mass, volume, i = _heaviness(
        face_depth, lake, water, depth, hint, haline_contraction
    )
    speed = max(math.sqrt(row[4] * row[4] + down * down) / flow, 1e-9)
    perimeter, width = _cross_section(flow, speed, row[0], row[1])
    taking = row[2] * perimeter * speed * speed
    return taking, flow * row[3] * excess, width, theta, salt, mass, volume, i


@compiled
def _half_way(place, depth, flow, down, content, first, half):
    """Return the rates half a time step ahead, and flow and downward momentum there."""
    taken = half * first[0]
    middle_flow = flow + taken
    middle_down = down + half * first[1]
    mixed = _mixed(content, taken, first[3], first[4], first[5], first[6])
    middle_depth = depth + half * down / flow
    second = _rates(place, middle_depth, middle_flow, middle_down, mixed, first[7])
    return second, middle_flow, middle_down


@compiled
def _up_to_the_ends(face_depth, depth, fall, share):
    """Return the share of a step that stays within the faces, and what it meets (code)."""
    top, foot = face_depth[0], face_depth[-1]
    if depth + share * fall < top:
        return min(share, max((top - depth) / fall, 0.0)) if fall < 0.0 else 0.0, 1
    if depth + share * fall > foot:
        return min(share, max((foot - depth) / fall, 0.0)) if fall > 0.0 else 0.0, 2
    return share, -1


@compiled
def _step_length(taking, force, flow, down, width, frequency):
    """Return a time step [s] short against growth, fall, oscillation and depth passed."""
    step = PHASE_PER_STEP / frequency
    step = min(step, GROWTH_PER_STEP * flow / taking)
    if force != 0.0:
        step = min(step, FALL_PER_STEP * math.sqrt(width * flow / abs(force)))
    if down != 0.0:
        step = min(step, DEPTH_PER_STEP * flow / abs(down))
    return step


@compiled
def _mixed(content, taken, theta, salt, mass, volume):
    """Return content after a flow of ambient water has been taken in."""
    return (
        content[0] + taken * theta,
        content[1] + taken * salt,
        content[2] + taken * mass,
        content[3] + taken * volume,
    )


@compiled
def _falls_past(place, content, flow, source_depth, pull):
    """Return whether a jet that its own weight has turned goes on past its port."""
    water = (content[0] / flow, content[1] / flow, content[2] / flow, content[3] / flow)
    excess = _heaviness(place[0], place[1], water, source_depth, 0, place[2])[0]
    return excess * pull > 0.0


@compiled
def _interface_share(work, work_width, opposing, coefficient):
    """Return lake water taken in at an interface over the flow that strikes it.

    Baines (1975) for small, Kumagai (1984) for all Froude numbers (both recalled), with Fr^2 =
    w^2 / (g' b): the square of the speed lost to buoyancy, the width where it was lost, and
    the reduced gravity at the furthest point.
    """
    if work <= 0.0 or opposing <= 0.0 or work_width <= 0.0:
        return 0.0
    square = 2.0 * work * work / (opposing * work_width)
    cube = square * math.sqrt(square)
    return coefficient * cube / (1.0 + 3.1 * square + 1.8 * cube)


@compiled
def _beyond(struck, opposing, flow, coefficient):
    """Return what an overshoot takes in beyond what its sides did; see the head of the module.

    ``struck`` is (flow, depth, work, work times width) since weight turned against the plume.
    """
    share = _interface_share(struck[2], struck[3], opposing, coefficient)
    return max(struck[0] * share - (flow - struck[0]), 0.0)


@compiled
def _climb(place, stability, water, depth, flow, down, overshoot_coefficient, entrained):
    """Follow a plume to its end, filling ``entrained``; see :func:`follow_plume`.

    Returns
    -------
    tuple
        Furthest depth [m], number of separate plumes that spread, code.
    """
    face_depth, row = place[0], place[3]
    source_depth, pull, phase, separate = depth, 0.0, 0.0, row[0]
    content = (flow * water[0], flow * water[1], flow * water[2], flow * water[3])
    struck = (flow, depth, 0.0, 0.0)
    hint, code = 0, -1
    for count in range(MOST_STEPS):
        first = _rates(place, depth, flow, down, content, hint)
        hint = first[7]
        if count == 0 and down * first[1] < 0.0:
            pull = first[1]  # the weight that has to turn the jet first
        square = stability[hint] if len(stability) > 0 else 0.0
        frequency = math.sqrt(max(square, LEAST_FREQUENCY * LEAST_FREQUENCY))
        step = _step_length(first[0], first[1], flow, down, first[2], frequency)
        level = abs(depth - source_depth) <= 0.01 * first[2]
        if level:
            step = min(step, max(math.pi - phase, 0.0) / frequency + 1e-6)
        second, middle_flow, middle_down = _half_way(
            place, depth, flow, down, content, first, 0.5 * step
        )
        fall = step * middle_down / middle_flow
        turning = down * (down + step * second[1]) < 0.0
        share = -down / (step * second[1]) if turning else 1.0
        share, code = _up_to_the_ends(face_depth, depth, fall, share)
        here = depth
        taken = share * step * second[0]
        depth += share * fall
        flow += taken
        content = _mixed(content, taken, second[3], second[4], second[5], second[6])
        gaining = second[1] * down >= 0.0
        down = 0.0 if turning else down + share * step * second[1]
        phase += share * step * frequency
        speed = max(math.sqrt(row[4] * row[4] + middle_down * middle_down), 1e-30)
        reach = second[2] * row[4] / speed
        upper, lower = min(here, depth) - reach, max(here, depth) + reach
        _take_in(face_depth, entrained, upper, lower, taken, hint)
        if gaining or pull != 0.0:
            struck = (flow, depth, 0.0, 0.0)
            area = middle_flow * middle_flow / speed
            separate = min(row[0], 1.0 + row[1] * row[1] / (math.pi * area))
        else:
            lost = abs(second[1]) / middle_flow * abs(share * fall)
            struck = (struck[0], struck[1], struck[2] + lost, struck[3] + lost * second[2])
        if code > 0:
            return face_depth[0] if code == 1 else face_depth[-1], separate, code
        if turning and pull != 0.0 and _falls_past(place, content, flow, source_depth, pull):
            pull = 0.0
        elif turning:
            code = 0
            break
        idle = frequency <= LEAST_FREQUENCY and abs(second[1]) < IDLE * frequency * speed
        if phase >= math.pi and (level or idle):
            code = 0
            break
    extra = _beyond(struck, abs(second[1]) / flow, flow, overshoot_coefficient)
    upper, lower = min(struck[1], depth), max(struck[1], depth)
    _take_in(face_depth, entrained, upper, lower, extra, hint)
    return depth, separate, code


@compiled
def _mixture(lake, water, flow, entrained):
    """Return what the source and the water taken in from the layers make, and its flow."""
    total = flow
    t, s, m, v = flow * water[0], flow * water[1], flow * water[2], flow * water[3]
    for i in range(len(entrained)):
        q = entrained[i]
        total += q
        t += q * lake[0][i]
        s += q * lake[1][i]
        m += q * lake[2][i]
        v += q * lake[3][i]
    return (t / total, s / total, m / total, v / total), total


@compiled
def follow_plume(
    face_depth,
    theta,
    salinity,
    gas_mass,
    gas_volume,
    pressure,
    stability,
    haline_contraction,
    gravity,
    depth,
    flow,
    theta0,
    salinity0,
    gas_mass0,
    gas_volume0,
    ports,
    port_diameter,
    port_spacing,
    overshoot_coefficient,
    port_angle=0.0,
    entrainment_coefficient=ENTRAINMENT_COEFFICIENT,
):
    """Follow water from its ports to where it comes to rest and spreads.

    Parameters
    ----------
    face_depth : ndarray, shape (n + 1,)
        Depths of the layer faces [m], rising.
    theta, salinity, gas_mass, gas_volume, pressure : ndarray, shape (n,)
        The lake: potential temperature [degC], salinity [g kg-1], mass [kg m-3] and partial
        volume [m3 m-3] of dissolved gas, pressure [Pa].
    stability : ndarray, shape (n - 1,)
        Its buoyancy frequency squared at the inner faces [s-2].
    haline_contraction : float
        Per g/kg.
    gravity : float
        [m s-2]
    depth, flow : float
        Of the ports [m] and of all the water that leaves them [m3 s-1].
    theta0, salinity0, gas_mass0, gas_volume0 : float
        The water that leaves.
    ports, port_diameter, port_spacing : float
        How many ports [-], how wide [m] and how far apart in their row [m].
    overshoot_coefficient : float
        c of the interface entrainment; 1 is the laboratory value, 0 leaves it out.
    port_angle : float
        Upward inclination of the ports [rad]; 0 is level, -pi/2 straight down.
    entrainment_coefficient : float
        Top-hat alpha.

    Returns
    -------
    entrained : ndarray, shape (n,)
        Lake water taken in from each layer [m3 s-1].
    given : ndarray, shape (n,)
        Share of source and entrained water that each layer gets; sum 1.
    trap_depth, end_depth : float
        Where the water spreads, and the furthest that it got [m].
    dilution : float
        Water that spreads over water that left the ports.
    code : int
        0 came to rest in the water, 1 reached the top face, 2 the lowest, -1 did not end.
    """
    n = len(face_depth) - 1
    lake = (theta, salinity, gas_mass, gas_volume, pressure)
    water = (theta0, salinity0, gas_mass0, gas_volume0)
    entrained = np.zeros(n)
    ports = float(ports)
    momentum = flow * flow / (ports * 0.25 * math.pi * port_diameter * port_diameter)
    across = momentum * math.cos(port_angle)
    if abs(across) < 1e-9 * momentum:
        across = 0.0
    row = (ports, (ports - 1.0) * port_spacing, entrainment_coefficient, gravity, across)
    end_depth, separate, code = _climb(
        (face_depth, lake, haline_contraction, row),
        stability,
        water,
        depth,
        flow,
        -momentum * math.sin(port_angle),
        overshoot_coefficient,
        entrained,
    )
    mixture, total = _mixture(lake, water, flow, entrained)
    trap_depth = _neutral_depth(face_depth, lake, mixture, end_depth, haline_contraction)
    each = total / separate
    given = layer_shares(face_depth, stability, trap_depth, each, INTRUSION_COEFFICIENT)
    return entrained, given, trap_depth, end_depth, total / flow, code
