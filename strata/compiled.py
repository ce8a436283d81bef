"""The one decorator for compiled code, and how a compiled formula meets arrays.

The cache of the compiler does not notice an edited callee or constant in another file, so its
folder is named by a digest of every compiled source together with the constants and the
species table.  Where no folder can be written the code compiles uncached.  With
``NUMBA_DISABLE_JIT=1`` everything runs, slowly, as plain Python.
"""

import hashlib
import os
import tempfile
from collections.abc import Callable
from functools import cache
from pathlib import Path
from typing import Any

import numba
import numpy as np

_PACKAGE = Path(__file__).parent


def _digest() -> str:
    """Return the SHA-256 of all sources that compiled code depends on."""
    digest = hashlib.sha256(numba.__version__.encode())
    for path in sorted(_PACKAGE.rglob("*.py")):
        text = path.read_bytes()
        if b"strata.compiled" in text or path.name in ("constants.py", "species.py"):
            digest.update(path.relative_to(_PACKAGE).as_posix().encode())
            digest.update(text)
    return digest.hexdigest()[:16]


@cache
def _cache_folder() -> str | None:
    """Return a folder that can be written for this state of the sources, or None."""
    base = os.environ.get("XDG_CACHE_HOME") or (Path.home() / ".cache")
    folder = Path(base) / "strata" / _digest()
    try:
        (folder / "arrays").mkdir(parents=True, exist_ok=True)
        with tempfile.TemporaryFile(dir=folder):
            return str(folder)
    except OSError:
        return None


def has_to_compile() -> bool:
    """Tell whether nothing is cached yet for this state of the sources."""
    folder = _cache_folder()
    return folder is None or next(Path(folder).rglob("*.nbi"), None) is None


def _in_folder(folder: str | None, build: Callable[[bool], Any]) -> Any:
    """Run ``build(use_cache)`` with the compiler's cache in the given folder."""
    if folder is None:
        return build(False)
    before = numba.config.CACHE_DIR
    numba.config.CACHE_DIR = folder
    try:
        return build(True)
    finally:
        numba.config.CACHE_DIR = before


def compiled(function: Callable[..., Any]) -> Any:
    """Compile a function on its first call: no lock held, IEEE rules kept, cached on disk."""
    return _in_folder(
        _cache_folder(),
        lambda use: numba.njit(nogil=True, error_model="numpy", cache=use)(function),
    )


@cache
def broadcast(scalar: Any) -> Callable[..., Any]:
    """Return a compiled scalar function of floats as one that broadcasts over arrays.

    Parameters
    ----------
    scalar : function decorated with :func:`compiled`
        Takes floats and returns one float.
    """
    plain = getattr(scalar, "py_func", scalar)
    if numba.config.DISABLE_JIT:
        return np.vectorize(plain, otypes=[np.float64])
    count = plain.__code__.co_argcount
    signature = numba.float64(*[numba.float64] * count)
    folder = _cache_folder()
    # a folder of its own: the compiler files both forms under the function's name
    return _in_folder(
        folder and os.path.join(folder, "arrays"),
        lambda use: numba.vectorize([signature], nopython=True, cache=use)(plain),
    )
