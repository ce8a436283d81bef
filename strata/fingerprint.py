"""One number that stands for what a run was made of."""

import hashlib
import json
from collections.abc import Mapping
from dataclasses import fields, is_dataclass
from datetime import date
from typing import Any

import numpy as np

from strata import __version__


def canonical_hash(*parts: Any, **options: Any) -> str:
    """Return the SHA-256 of inputs, options and the version of the program.

    Values count, not how a file is worded: comments, order of keys and units may change.

    Parameters
    ----------
    *parts
        Lakes, plans, limits; None for one that is not there.
    **options
        What else decides the result: years, step_days, seed.
    """
    plain = _plain({"version": __version__, "parts": list(parts), "options": options})
    text = json.dumps(plain, sort_keys=True, separators=(",", ":"))
    return hashlib.sha256(text.encode()).hexdigest()


def _plain(value: Any) -> Any:
    """Return a value as JSON can hold it, floats to the last bit, texts of files left out."""
    if is_dataclass(value):
        named = {
            f.name: _plain(getattr(value, f.name)) for f in fields(value) if f.name != "texts"
        }
        return {"kind": type(value).__name__, **named}
    if isinstance(value, np.ndarray):
        return [_plain(item) for item in value.tolist()]
    if isinstance(value, Mapping):
        return {str(key): _plain(inner) for key, inner in value.items()}
    if isinstance(value, list | tuple):
        return [_plain(item) for item in value]
    if isinstance(value, np.generic):
        return _plain(value.item())
    if isinstance(value, float):
        return value.hex()
    if isinstance(value, date):
        return value.isoformat()
    if value is None or isinstance(value, bool | int | str):
        return value
    raise TypeError(f"a {type(value).__name__} has no canonical form")
