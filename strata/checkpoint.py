"""The state of a run on disk, to go on from with the same bytes.

A checkpoint is a flat table of float64 arrays and the fingerprint of what the run is made of;
one of another lake, plan, step or version is refused in words.
"""

from collections.abc import Mapping
from pathlib import Path
from zipfile import BadZipFile

import numpy as np
from numpy.typing import NDArray

from strata.errors import Fault, InputError
from strata.results import replacing

Array = NDArray[np.float64]

_FINGERPRINT = "fingerprint"


def save(path: Path, fingerprint: str, arrays: Mapping[str, Array]) -> None:
    """Write a checkpoint beside its final name, then rename it.

    Raises
    ------
    strata.InputError
        If it cannot be written; an earlier one stays as it was.
    """
    with replacing(path) as partial, partial.open("wb") as stream:
        np.savez(stream, allow_pickle=False, **{_FINGERPRINT: np.array(fingerprint)}, **arrays)


def load(path: Path, fingerprint: str) -> dict[str, Array]:
    """Return the arrays of a checkpoint.

    Raises
    ------
    strata.InputError
        If it is none, or of another run.
    """
    try:
        with np.load(path, allow_pickle=False) as stored:
            arrays = {name: stored[name] for name in stored.files}
        found = str(arrays.pop(_FINGERPRINT))
    except (OSError, ValueError, KeyError, EOFError, BadZipFile) as error:
        raise InputError([Fault(str(path), "", "is no checkpoint of strata")]) from error
    if found != fingerprint:
        message = (
            "is a checkpoint of another run (lake, casts, plan, step, horizon or version"
            " differ); take it away or name another file"
        )
        raise InputError([Fault(str(path), "", message)])
    return arrays
