"""Refusal of values outside the range of a source: said once, in one form."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from strata.errors import OutOfRangeError


def within(
    name: str,
    value: ArrayLike,
    allowed: tuple[float, float],
    unit: str,
    source: str,
) -> NDArray[np.float64]:
    """Return the value as a float64 array, or refuse it.

    Parameters
    ----------
    name : str
        What the value is, as the message shall say it.
    value : array_like
        Any shape; NaN is refused.
    allowed : tuple of float
        Smallest and largest allowed value, both included.
    unit : str
        Unit of value and bounds.
    source : str
        Whose limit it is.

    Raises
    ------
    strata.OutOfRangeError
        If any element is outside or not a number; the first offender is named.
    """
    array = np.asarray(value, dtype=np.float64)
    low, high = allowed
    bad = ~((array >= low) & (array <= high))
    if np.any(bad):
        worst = float(np.atleast_1d(array)[np.atleast_1d(bad)][0])
        raise OutOfRangeError(
            f"{name} is {worst:g} {unit}; {low:g} to {high:g} {unit} is allowed ({source})"
        )
    return array
