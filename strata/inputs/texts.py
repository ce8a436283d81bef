"""Reading of input files: text once, kept with what was built from it.

Everything is built from texts by name, so an object that was loaded can be built again, with
some values changed, on any machine and without its files.
"""

import json
import tomllib
from collections.abc import Mapping
from pathlib import Path, PurePath
from typing import Any

from strata.errors import Fault, InputError, StrataError
from strata.inputs import tables

#: Name under which values changed by ``with_values`` are kept beside the texts of the files.
CHANGES = "changed values"


class Texts:
    """The text of an input file and of the files it names.

    Parameters
    ----------
    main : str
        Name of the main file, without its folder.
    folder : str
        Folder of the main file as the user gave it; other files are relative to it.
    known : mapping, optional
        Texts by name; files are not touched for these.
    """

    def __init__(self, main: str, folder: str = "", known: Mapping[str, str] | None = None):
        self.main = main
        self.folder = folder
        self.known = dict(known or {})

    @classmethod
    def of_file(cls, path: str | Path) -> "Texts":
        """Return the texts of a file that has not been read yet."""
        pure = PurePath(path)
        folder = "" if str(pure.parent) == "." else str(pure.parent)
        return cls(pure.name, folder)

    @classmethod
    def of_object(cls, thing: Any) -> "Texts":
        """Return the texts that an object was built from.

        Raises
        ------
        strata.StrataError
            If it was not built from a file.
        """
        if not thing.texts:
            raise StrataError(
                f"this {type(thing).__name__.lower()} was not loaded from a file; "
                "with_values needs one that was"
            )
        return cls(next(iter(thing.texts)), known=thing.texts)

    def shown(self, name: str) -> str:
        """Return the name of a file as messages show it."""
        return str(PurePath(self.folder, name))

    def read(self, name: str) -> str:
        """Return the text of a file.

        Raises
        ------
        strata.InputError
            If it cannot be read.
        """
        if name not in self.known:
            try:
                self.known[name] = Path(self.folder, name).read_text(encoding="utf-8-sig")
            except FileNotFoundError:
                self._refuse(name, "does not exist")
            except IsADirectoryError:
                self._refuse(name, "is a folder; a file is required")
            except UnicodeDecodeError:
                self._refuse(name, "is not text in UTF-8")
            except OSError as error:
                self._refuse(name, f"cannot be read ({error.strerror})")
        return self.known[name]

    def _refuse(self, name: str, message: str) -> None:
        raise InputError([Fault(self.shown(name), "", message)])

    def document(self) -> dict[str, Any]:
        """Return the main file as nested tables, with changed values put in.

        Raises
        ------
        strata.InputError
            If it is not TOML, or a changed value has no place in it.
        """
        text = self.read(self.main)
        try:
            document = tomllib.loads(text)
        except tomllib.TOMLDecodeError as error:
            raise InputError(
                [Fault(self.shown(self.main), "", f"is not valid TOML: {error}")]
            ) from None
        faults = []
        for path, value in self.changes().items():
            message = put(document, path, value)
            if message:
                faults.append(Fault(self.shown(self.main), path, message))
        if faults:
            raise InputError(faults)
        return document

    def changes(self) -> dict[str, Any]:
        """Return the values changed since the files were read, by dotted path."""
        return dict(json.loads(self.known.get(CHANGES, "{}")))

    def change(self, values: Mapping[str, Any]) -> None:
        """Keep further changed values."""
        merged = self.changes() | dict(values)
        self.known[CHANGES] = json.dumps(merged, sort_keys=True, default=str)


def put(document: dict[str, Any], path: str, value: Any) -> str:
    """Put a value at a dotted path, elements of arrays by name or counted from 1.

    Returns
    -------
    str
        What is wrong with the path; empty if nothing is.  Whether the last key is known is
        left to the schema.
    """
    *steps, key = path.split(".")
    here: Any = document
    for step in steps:
        if isinstance(here, list):
            number = tables.element(here, step)
            if number is None:
                named = [str(item.get("name", i + 1)) for i, item in enumerate(here)]
                return f"is not there; {tables.nearest(step, named)}"
            here = here[number]
        elif isinstance(here, dict) and step in here:
            here = here[step]
        elif isinstance(here, dict):
            return f"is not there; {tables.nearest(step, [str(name) for name in here])}"
        else:
            return f"is not there; {step} lies in something that is no table"
    if not isinstance(here, dict):
        return "is not there; the path must end in a key"
    here[key] = value
    return ""
