"""How a table of an input file is described, checked and worded.

A :class:`Table` is one TOML table.  Every number in it carries a :class:`Between`, which both
checks it and says in a message what is allowed.  :func:`validate` returns all faults of a
document at once, together with what is left of it when the faulty values are taken out, so
that checks that look at several values can still run.
"""

import difflib
import types
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, fields
from datetime import date
from typing import Annotated, Any, Literal, TypeVar, Union, get_args, get_origin

from pydantic import BaseModel, ConfigDict, GetCoreSchemaHandler, ValidationError
from pydantic_core import CoreSchema, PydanticCustomError, core_schema

from strata.errors import Fault
from strata.inputs import units

Place = tuple[str | int, ...]


class Table(BaseModel):
    """One table of an input file; unknown keys, text for numbers and NaN are refused."""

    model_config = ConfigDict(extra="forbid", strict=True, frozen=True, allow_inf_nan=False)


AnyTable = TypeVar("AnyTable", bound=Table)


@dataclass(frozen=True)
class Between:
    """The range a number must lie in.

    Parameters
    ----------
    low, high : float
        Smallest and largest allowed value.
    above : bool
        Whether ``low`` itself is refused.
    why : str
        Whose limit it is, where that helps.
    """

    low: float
    high: float
    above: bool = False
    why: str = ""

    def accepts(self, value: float) -> bool:
        """Tell whether a value lies in the range."""
        return (self.low < value if self.above else self.low <= value) and value <= self.high

    def words(self, unit: str) -> str:
        """Say what is allowed; ``unit`` comes with a blank before it."""
        span = f"more than {self.low:g} and up to" if self.above else f"{self.low:g} to"
        why = f" ({self.why})" if self.why else ""
        return f"{span} {self.high:g}{unit} is allowed{why}"

    def _check(self, value: float) -> float:
        if not self.accepts(value):
            raise PydanticCustomError("out_of_range", "out of range")
        return value

    def __get_pydantic_core_schema__(
        self, source: Any, handler: GetCoreSchemaHandler
    ) -> CoreSchema:
        """Let pydantic check the range after the type."""
        return core_schema.no_info_after_validator_function(self._check, handler(source))


def show(value: Any) -> str:
    """Return a value as a message shows it."""
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, str):
        return f'"{value}"'
    if isinstance(value, float):
        return f"{value:g}"
    if isinstance(value, Mapping):
        return "a table"
    if isinstance(value, list):
        return "a list"
    return str(value)


def element(array: list[Any], token: str | int) -> int | None:
    """Return the place of an element in an array of tables, by name or number from 1."""
    for number, item in enumerate(array):
        if isinstance(item, Mapping) and item.get("name") == token:
            return number
    if str(token).isdigit() and 1 <= int(token) <= len(array):
        return int(token) - 1
    return None


def dotted(document: Mapping[str, Any], place: Place) -> str:
    """Return a place in a document as a user writes it, elements by name or from 1."""
    tokens: list[str] = []
    here: Any = document
    for token in place:
        here = _inner(here, token)
        name = here.get("name") if isinstance(here, Mapping) else None
        if isinstance(token, int):
            tokens.append(name if isinstance(name, str) and name else str(token + 1))
        else:
            tokens.append(token)
    return ".".join(tokens)


def _inner(value: Any, token: str | int) -> Any:
    """Return what lies one step further in a document, or None."""
    try:
        return value[token]
    except (KeyError, IndexError, TypeError):
        return None


def keys(model: type[Table]) -> dict[str, Any]:
    """Return the keys of a table as its users write them, with their types."""
    return {
        field.alias or name: Annotated[(field.annotation, *field.metadata)]
        if field.metadata
        else field.annotation
        for name, field in model.model_fields.items()
    }


def plain_type(kind: Any) -> tuple[Any, tuple[Any, ...]]:
    """Return a type without ``| None``, and what is said about it."""
    notes: tuple[Any, ...] = ()
    while True:
        if get_origin(kind) is Annotated:
            kind, *more = get_args(kind)
            notes += tuple(more)
        elif get_origin(kind) in (Union, types.UnionType):
            (kind,) = (part for part in get_args(kind) if part is not type(None))
        else:
            return kind, notes


def _kind_at(model: type[Table], place: Place) -> Any:
    """Return the type that a place in a document must have."""
    kind: Any = model
    for token in place:
        plain, _ = plain_type(kind)
        if isinstance(plain, type) and issubclass(plain, Table):
            kind = keys(plain)[str(token)]
        else:
            kind = get_args(plain)[-1]
    return kind


def allowed(kind: Any, unit: str) -> str:
    """Say what a value of a type may be."""
    plain, notes = plain_type(kind)
    for note in notes:
        if isinstance(note, Between):
            number = "a whole number from " if plain is int else "a number from "
            return number + note.words(unit) if not note.above else note.words(unit)
    if get_origin(plain) is Literal:
        return " or ".join(f'"{choice}"' for choice in get_args(plain)) + " is allowed"
    if get_origin(plain) in (list, tuple):
        return "a list is required"
    if get_origin(plain) is dict or (isinstance(plain, type) and issubclass(plain, Table)):
        return "a table is required"
    words = {
        str: "text in quotes is required",
        bool: "true or false is allowed",
        float: "a number is required",
        date: "a date such as 2027-01-31, without quotes, is required",
    }
    return words.get(plain, "another kind of value is required")


def nearest(name: str, known: list[str]) -> str:
    """Return advice on an unknown name: the nearest known one, or all of them."""
    close = difflib.get_close_matches(name, known, n=1, cutoff=0.5)
    if close:
        return f"the nearest known is {close[0]}"
    return "known are " + ", ".join(sorted(known))


def _without_unit(key: str, known: list[str]) -> str | None:
    """Return the known key that an unknown one meant, where only the unit is wrong."""
    for candidate in known:
        name, unit = units.split(candidate)
        if unit and (key == name or key.startswith(name + "_")):
            return candidate
    return None


def _unknown(key: str, known: list[str]) -> str:
    """Word the fault of a key that a table does not have."""
    meant = _without_unit(key, known)
    if meant is None:
        return f"is not known; {nearest(key, known)}"
    name, _ = units.split(meant)
    trouble = "has no unit" if key == name else "is in a unit that is not taken here"
    return f"{trouble}; write {meant}"


def _message(error: Any, model: type[Table], place: Place) -> str:
    """Word one finding of pydantic."""
    kind = error["type"]
    key = next((str(token) for token in reversed(place) if isinstance(token, str)), "")
    if kind == "extra_forbidden":
        table, _ = plain_type(_kind_at(model, place[:-1]))
        return _unknown(str(place[-1]), list(keys(table)))
    target = _kind_at(model, place)
    unit = units.words(key)
    if kind == "missing":
        return f"is missing; {allowed(target, unit)}"
    if kind in ("too_short", "too_long"):
        wanted = error["ctx"].get("min_length", error["ctx"].get("max_length"))
        return f"has {error['ctx']['actual_length']} values; {wanted} are required"
    if kind == "string_too_short":
        return "is empty; text in quotes is required"
    if kind == "out_of_range":
        between = next(note for note in plain_type(target)[1] if isinstance(note, Between))
        return f"is {show(error['input'])}; {between.words(unit)}"
    return f"is {show(error['input'])}; {allowed(target, unit)}"


def _drop(document: Any, place: Place) -> None:
    """Take a faulty value out of a document; a faulty element takes its whole list along."""
    for number, token in enumerate(place):
        inner = _inner(document, token)
        if number == len(place) - 1 or not isinstance(inner, dict | list):
            if isinstance(document, dict):
                document.pop(token, None)
            return
        if isinstance(inner, list) and not all(isinstance(item, dict) for item in inner):
            document.pop(token, None)
            return
        document = inner


def _copy(value: Any) -> Any:
    """Return a copy of a document that can be taken apart."""
    if isinstance(value, dict):
        return {key: _copy(inner) for key, inner in value.items()}
    if isinstance(value, list):
        return [_copy(inner) for inner in value]
    return value


def validate(
    document: dict[str, Any], model: type[AnyTable], file: str
) -> tuple[AnyTable | None, dict[str, Any], list[Fault]]:
    """Check a document against its table.

    Returns
    -------
    model or None
        The table, where nothing was wrong.
    dict
        The document without its faulty values.
    list of Fault
        Everything that was wrong, one fault for each mistake.
    """
    try:
        return model.model_validate(document), document, []
    except ValidationError as error:
        findings = error.errors(include_url=False)
    sound = _copy(document)
    meant: set[Place] = set()  # keys that are missing only because they were misspelt
    for finding in findings:
        if finding["type"] == "extra_forbidden":
            *table, key = finding["loc"]
            known = list(keys(plain_type(_kind_at(model, tuple(table)))[0]))
            right = _without_unit(str(key), known)
            close = difflib.get_close_matches(str(key), known, n=1, cutoff=0.5)
            meant |= {(*table, name) for name in (right, *close) if name}
    faults = []
    for finding in findings:
        place = finding["loc"]
        if finding["type"] == "missing" and place in meant:
            continue
        faults.append(Fault(file, dotted(document, place), _message(finding, model, place)))
        _drop(sound, place)
    return None, sound, faults


def attributes(table: Table, target: type, **given: Any) -> dict[str, Any]:
    """Return the values of a table in SI, by the names of the fields of a frozen object.

    What the table leaves out is left out here, so that the default stays with the object;
    values in ``given`` win.
    """
    wanted = {field.name for field in fields(target)}
    found: dict[str, Any] = {}
    for key, value in filled(table):
        name = key if key in wanted else units.split(key)[0]
        if name in wanted and not isinstance(value, Table):
            found[name] = (
                value if isinstance(value, str | bool | date) else _number(key, value)
            )
    return found | given


def filled(table: Table) -> Iterator[tuple[str, Any]]:
    """Yield key and value of all that a table gives."""
    for name, field in type(table).model_fields.items():
        value = getattr(table, name)
        if value is not None:
            yield field.alias or name, value


def _number(key: str, value: Any) -> Any:
    """Return a number, or a list of them, in SI; whole numbers stay whole."""
    if isinstance(value, int):
        return value
    converted = units.to_si(key, value)
    return float(converted) if converted.ndim == 0 else converted
