"""Which layers an intake draws from.

A point sink in stratified water draws from a layer of half-thickness (Q / N)^(1/3), each half
by its own stratification (Imberger 1980); see :mod:`strata.water.intrusion`.
"""

from collections.abc import Iterable

import numpy as np
from numpy.typing import ArrayLike, NDArray

from strata.plant.plan import Intake
from strata.water.intrusion import SINK_COEFFICIENT, layer_shares


def withdrawal_weights(
    face_depth: ArrayLike, buoyancy_frequency_squared: ArrayLike, depth: float, flow: float
) -> NDArray[np.float64]:
    """Return the share of an intake's flow that comes from each layer.

    Parameters
    ----------
    face_depth : array_like, shape (n + 1,)
        Depths of the layer faces [m], rising.
    buoyancy_frequency_squared : array_like, shape (n - 1,)
        At the inner faces [s-2]; negative values count as neutral.
    depth, flow : float
        Of the intake [m], [m3 s-1].

    Returns
    -------
    ndarray, shape (n,)
        Weights that sum to 1.  They reach no further than the stratification lets them: where
        N is small the layer is thick, and ends at the neighbouring gradients.
    """
    return layer_shares(
        np.ascontiguousarray(face_depth, dtype=np.float64),
        np.ascontiguousarray(buoyancy_frequency_squared, dtype=np.float64),
        float(depth),
        float(flow),
        SINK_COEFFICIENT,
    )


def plant_weights(
    face_depth: ArrayLike,
    buoyancy_frequency_squared: ArrayLike,
    intakes: Iterable[Intake],
    flow: float,
) -> NDArray[np.float64]:
    """Return the share of a plant's flow that comes from each layer, by all its intakes."""
    return sum(  # type: ignore[return-value]
        intake.share
        * withdrawal_weights(
            face_depth, buoyancy_frequency_squared, intake.depth, flow * intake.share
        )
        for intake in intakes
        if intake.share > 0.0
    )
