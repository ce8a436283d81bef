"""How thick a layer water fills where it leaves, or is drawn from, still stratified water.

A point sink draws from, and a point source spreads into, a layer whose half-thickness balances
the inertia of the flow against the stratification, ``(Q / N)^(1/3)`` (the inertial point sink
of Imberger 1980).  The half above and the half below are found each from its own
stratification, so a layer that would be thick because N is small ends where a stronger
gradient begins.
"""

import numpy as np

from strata.compiled import compiled

# Half-thickness over (Q / N)^(1/3).  The inertial balance leaves a number of order one open: a
# sink is given 1.  Water that spreads far from its source thins as it goes, and what is left
# of its thickness is taken as half that of the sink; both are assumptions, to be varied.
SINK_COEFFICIENT = 1.0
INTRUSION_COEFFICIENT = 0.5
LEAST_THICKNESS = 1e-3  # m, so that a vanishing flow still goes somewhere


@compiled
def _half_thickness(face_depth, stability, depth, inertia, downward):
    """Return the half-thickness [m] above or below a depth.

    With ``B`` the integral of N2 over the thickness ``d`` the mean N is ``(B / d)^(1/2)``, so
    that ``d = c (Q / N)^(1/3)`` reads ``d^5 B = (c^3 Q)^2 = inertia``.
    """
    n = len(face_depth) - 1
    if inertia <= 0.0:
        return 0.0
    thickness = 0.0
    difference = 0.0
    for step in range(n + 1):
        # segments run between layer centres, where N2 of the face between them holds
        k = step if downward else n - step  # segment above centre k; 0 and n touch the ends
        above = face_depth[0] if k == 0 else 0.5 * (face_depth[k - 1] + face_depth[k])
        below = face_depth[n] if k == n else 0.5 * (face_depth[k] + face_depth[k + 1])
        start = max(depth, above)
        end = below if downward else min(depth, below)
        length = end - start if downward else end - above
        if length <= 0.0:
            continue
        slope = 0.0 if k in (0, n) else max(stability[k - 1], 0.0)
        far = thickness + length
        if far**5 * (difference + slope * length) >= inertia:
            # Newton's method from the far end: the function is convex and rising
            x = length
            for _ in range(60):
                d = thickness + x
                b = difference + slope * x
                change = (d**5 * b - inertia) / (5.0 * d**4 * b + d**5 * slope)
                x -= change
                if abs(change) < 1e-10 * d:
                    break
            return thickness + max(x, 0.0)
        thickness = far
        difference += slope * length
    return thickness


@compiled
def _share_within(distance, thickness):
    """Return the share of a half layer's flow within a distance: u ~ (1 - (x / d)^2)^2."""
    x = min(distance / thickness, 1.0)
    return 1.875 * x - 1.25 * x**3 + 0.375 * x**5


@compiled
def layer_shares(face_depth, stability, depth, flow, coefficient):
    """Return how a point source or sink is shared among layers.

    Parameters
    ----------
    face_depth : ndarray, shape (n + 1,)
        Depths of the layer faces [m], rising.
    stability : ndarray, shape (n - 1,)
        Buoyancy frequency squared [s-2] at the inner faces; negative values count as zero.
    depth : float
        Of the source or sink [m], within the faces.
    flow : float
        Of one source or sink [m3 s-1].
    coefficient : float
        Half-thickness over (Q / N)^(1/3).

    Returns
    -------
    ndarray, shape (n,)
        Shares of the flow, sum 1.
    """
    n = len(face_depth) - 1
    inertia = (coefficient**3 * flow) ** 2
    upper = _half_thickness(face_depth, stability, depth, inertia, False)
    lower = _half_thickness(face_depth, stability, depth, inertia, True)
    upper = max(upper, LEAST_THICKNESS)
    lower = max(lower, LEAST_THICKNESS)
    shares = np.zeros(n)
    total = 0.0
    for i in range(n):
        top = face_depth[i] - depth
        foot = face_depth[i + 1] - depth
        if foot <= -upper or top >= lower:
            continue
        share = 0.0
        if top < 0.0:
            share += upper * (
                _share_within(-top, upper) - _share_within(max(-foot, 0.0), upper)
            )
        if foot > 0.0:
            share += lower * (_share_within(foot, lower) - _share_within(max(top, 0.0), lower))
        shares[i] = share
        total += share
    return shares / total
