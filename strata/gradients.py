"""Where the water is held apart: gradients of density, found and followed through time.

A gradient is a peak of the buoyancy frequency squared that stands out of its surroundings.
Its extent is where the smoothed profile exceeds a tenth of that peak, cut at the valley
towards a neighbour; its strength is the density step across the extent, its position the depth
at which half of that step is passed.  The main gradient is the strongest one below the surface
layer; once found it is followed by overlap, so that a stronger seasonal gradient cannot take
its name.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.ndimage import gaussian_filter1d
from scipy.signal import find_peaks

Array = NDArray[np.float64]

#: Turns stability into density steps; water departs from it by 0.3 % [kg m-3].
REFERENCE_DENSITY = 1000.0
#: Part of its peak above which water belongs to a gradient.
EDGE = 0.1
#: A peak that stands less than this share of its height above the valleys is a shoulder.
LEAST_PROMINENCE = 0.5
#: Peaks below this share of the largest are not reported.
LEAST_HEIGHT = 0.03
#: Standard deviation of the smoothing that finds the peaks [m].
SMOOTHING = 2.0
#: Spacing of the even grid on which gradients are found [m].
SPACING = 0.5


@dataclass(frozen=True)
class Gradient:
    """One gradient of a column.

    Parameters
    ----------
    depth : float
        Where half of the density step is passed [m].
    top, foot : float
        Extent [m].
    strength : float
        Density step from top to foot, compressibility taken out [kg m-3].
    thickness : float
        Sum of the depths in which the buoyancy frequency squared exceeds a tenth of its peak
        [m].
    peak : float
        Largest buoyancy frequency squared [s-2].
    """

    depth: float
    top: float
    foot: float
    strength: float
    thickness: float
    peak: float


class StabilityProfiles:
    """Buoyancy frequency squared of one column at many times, on an even fine grid.

    Parameters
    ----------
    depth : ndarray, shape (k,)
        Depth of the faces at which it is known [m].
    stability : ndarray, shape (time, k) or (k,)
        Buoyancy frequency squared [s-2].
    gravity : float
        [m s-2]
    """

    def __init__(self, depth: Array, stability: Array, gravity: float) -> None:
        stability = np.atleast_2d(stability)
        count = max(int(np.ceil((depth[-1] - depth[0]) / SPACING)), 1)
        self.depth = np.linspace(depth[0], depth[-1], count + 1)
        self.spacing = float(self.depth[1] - self.depth[0])
        upper = np.clip(np.searchsorted(depth, self.depth, "right") - 1, 0, len(depth) - 2)
        share = (self.depth - depth[upper]) / (depth[upper + 1] - depth[upper])
        self.raw = stability[:, upper] * (1 - share) + stability[:, upper + 1] * share
        self.smooth = gaussian_filter1d(self.raw, SMOOTHING / self.spacing, axis=1)
        slices = 0.5 * (self.raw[:, 1:] + self.raw[:, :-1]) * self.spacing
        self.step = np.zeros_like(self.raw)  # density passed from the top of the grid [kg m-3]
        np.cumsum(slices * (REFERENCE_DENSITY / gravity), axis=1, out=self.step[:, 1:])

    def measure(self, time: int, top: int, foot: int) -> Gradient:
        """Return the gradient between two points of the grid, both included."""
        raw = self.raw[time, top : foot + 1]
        passed = self.step[time, top : foot + 1]
        peak = float(raw.max())
        half = 0.5 * (passed[0] + passed[-1])
        middle = np.interp(half, np.maximum.accumulate(passed), self.depth[top : foot + 1])
        return Gradient(
            depth=float(middle),
            top=float(self.depth[top]),
            foot=float(self.depth[foot]),
            strength=float(passed[-1] - passed[0]),
            thickness=float(np.count_nonzero(raw > EDGE * peak) * self.spacing),
            peak=peak,
        )

    def gradients(self, time: int, below: float = 0.0) -> tuple[Gradient, ...]:
        """Return all gradients whose peak lies deeper than a depth [m], from the top down."""
        smooth = self.smooth[time]
        first = int(np.searchsorted(self.depth, below))
        largest = float(smooth[first:].max(initial=0.0))
        if largest <= 0.0:
            return ()
        # the grid ends in still water: a peak at the very top or floor counts too
        padded = np.concatenate(([0.0], smooth, [0.0]))
        peaks, found = find_peaks(padded, height=LEAST_HEIGHT * largest, prominence=0.0)
        keep = found["prominences"] >= LEAST_PROMINENCE * found["peak_heights"]
        peaks = peaks[keep] - 1
        gradients = []
        for number, peak in enumerate(peaks):
            if peak < first:
                continue
            upper = peaks[number - 1] if number > 0 else 0
            lower = peaks[number + 1] if number + 1 < len(peaks) else len(smooth) - 1
            top, foot = _extent(smooth, int(peak), int(upper), int(lower))
            gradients.append(self.measure(time, top, foot))
        return tuple(gradients)


def _extent(smooth: Array, peak: int, upper: int, lower: int) -> tuple[int, int]:
    """Return the first and last point of the gradient around a peak."""
    edge = EDGE * smooth[peak]
    top = upper + int(np.argmin(smooth[upper : peak + 1]))
    foot = peak + int(np.argmin(smooth[peak : lower + 1]))
    low_above = np.flatnonzero(smooth[top : peak + 1] < edge)
    low_below = np.flatnonzero(smooth[peak : foot + 1] < edge)
    top = top + int(low_above[-1]) if low_above.size else top
    foot = peak + int(low_below[0]) if low_below.size else foot
    return top, foot


def main_gradient(gradients: Sequence[Gradient]) -> Gradient | None:
    """Return the gradient with the largest density step, or None if there is none."""
    return max(gradients, key=lambda gradient: gradient.strength, default=None)


def follow(profiles: StabilityProfiles, surface_layer: Array) -> list[Gradient]:
    """Return the main gradient at every time.

    At the start it is the strongest below the surface layer.  From then on it is the strongest
    of those whose middle lies in its last extent, or else of those that overlap it, or else of
    those within one smoothing width and half its extent.  Where none is left, the density step
    across its last extent is reported.

    Parameters
    ----------
    profiles : StabilityProfiles
    surface_layer : ndarray, shape (time,)
        Depth of the layer that the season mixes [m].

    Raises
    ------
    ValueError
        If the column has no gradient below the surface layer at the start.
    """
    start = main_gradient(profiles.gradients(0, below=float(surface_layer[0])))
    if start is None:
        raise ValueError(
            f"no gradient of density lies below the surface layer ({surface_layer[0]:.0f} m)"
        )
    track = [start]
    for time in range(1, len(profiles.raw)):
        track.append(_next(profiles, time, track[-1]))
    return track


def _next(profiles: StabilityProfiles, time: int, last: Gradient) -> Gradient:
    """Return the gradient that carries on the last one."""
    found = profiles.gradients(time)
    overlapping = [g for g in found if g.top <= last.foot and g.foot >= last.top]
    inside = [g for g in overlapping if last.top <= g.depth <= last.foot]
    reach = SMOOTHING + 0.5 * (last.foot - last.top)
    near = [g for g in found if abs(g.depth - last.depth) <= reach]
    chosen = main_gradient(inside) or main_gradient(overlapping) or main_gradient(near)
    if chosen is not None:
        return chosen
    top, foot = np.searchsorted(profiles.depth, [last.top, last.foot])
    return profiles.measure(time, int(top), min(int(foot), len(profiles.depth) - 1))
