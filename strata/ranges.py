"""Refusal of values outside the range of a source: said once, in one form."""

from collections.abc import Mapping
from difflib import get_close_matches
from typing import TypeVar

import numpy as np
from numpy.typing import ArrayLike, NDArray

from strata.errors import OutOfRangeError

T = TypeVar("T")


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
    good = (array >= low) & (array <= high)
    if good.all():
        return array
    worst = float(np.atleast_1d(array)[~np.atleast_1d(good)][0])
    of = f" {unit}" if unit else ""
    raise OutOfRangeError(
        f"{name} is {worst:g}{of}; {low:g} to {high:g}{of} is allowed ({source})"
    )


def named(what: str, name: object, known: Mapping[str, T]) -> T:
    """Return the entry of a mapping by its name, or refuse it with the nearest known one.

    Parameters
    ----------
    what : str
        What the name stands for, as the message shall say it.
    name : object
        The name given.
    known : mapping
        What is allowed.

    Raises
    ------
    strata.OutOfRangeError
        If the name is not known.
    """
    if isinstance(name, str) and name in known:
        return known[name]
    near = get_close_matches(str(name), list(known), n=1)
    hint = f"did you mean {near[0]}?" if near else "known: " + ", ".join(known)
    raise OutOfRangeError(f"{what} {name!r} is not known; {hint}")
