"""Where output goes: tried before a long run, never on top of what strata did not write."""

import os
import tempfile
from pathlib import Path

from strata.caution import MARK
from strata.errors import StrataError


def written_by_strata(path: Path) -> bool:
    """Tell whether strata wrote a file: all that it writes carries the caution."""
    with path.open("rb") as file:
        return MARK.encode() in file.read()


def writable_folder(folder: Path) -> Path:
    """Make a folder, parents included, and find out whether files can be put there.

    Raises
    ------
    strata.StrataError
        If not.
    """
    try:
        folder.mkdir(parents=True, exist_ok=True)
        with tempfile.TemporaryFile(dir=folder):
            pass
    except OSError as error:
        raise StrataError(f"{folder}: cannot be written ({error.strerror})") from None
    return folder


def writable_file(path: Path) -> Path:
    """Find out whether a file can be written without loss of something else.

    Raises
    ------
    strata.StrataError
        If its folder cannot be written, or it exists and is not strata's.
    """
    writable_folder(path.parent)
    if path.is_dir():
        raise StrataError(f"{path}: is a folder; the name of a file is required")
    if path.exists() and not written_by_strata(path):
        raise StrataError(f"{path}: exists and was not written by strata; choose another name")
    return path


def writable_figure(path: Path) -> Path:
    """Find out whether a figure can be written; see :func:`writable_file`.

    Raises
    ------
    strata.StrataError
        Also if its name promises something other than PNG.
    """
    if path.suffix.lower() != ".png":
        raise StrataError(f"{path}: figures are written as PNG; a name in .png is required")
    return writable_file(path)


def copy_unless_there(source: Path, target: Path) -> Path | None:
    """Copy a file; one that is there already stays as it is.

    Returns
    -------
    Path or None
        The target, where something else stands there.

    Raises
    ------
    strata.StrataError
        If it cannot be written.
    """
    content = source.read_bytes()
    try:
        if target.exists():
            return None if target.read_bytes() == content else target
        partial = target.with_name(f".{target.name}.{os.getpid()}.part")
        partial.write_bytes(content)
        partial.replace(target)
    except OSError as error:
        raise StrataError(f"{target}: cannot be written ({error.strerror})") from None
    return None
