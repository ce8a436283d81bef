"""Write the tables of docs/reference that the program itself knows: keys, options, functions.

A table stands between two marks, such as ``<!-- keys: SpringTable -->`` and ``<!-- end -->``.
What the schema knows (key, unit, what is allowed, default) is written anew; the last column,
what a key means and where its default comes from, is written by hand in the page and kept.
A new key appears with an empty last column, which the tests refuse.  Options of commands come
with their help, functions with the first line of their docstring.

    python scripts/write_key_tables.py
"""

import inspect
import re
from collections.abc import Callable, Iterator, Mapping
from dataclasses import MISSING, fields
from datetime import date
from importlib import import_module
from pathlib import Path
from types import ModuleType
from typing import Any, Literal, get_args, get_origin

import click

from strata.cli.group import group
from strata.gas.laws import Laws
from strata.inputs import casts, grid_table, schema, units
from strata.inputs.tables import Between, Table, keys, plain_type
from strata.lake import site
from strata.limits import QUANTITIES, Limits
from strata.plant import plan

PAGES = Path(__file__).parent.parent / "docs" / "reference"
MARKED = re.compile(
    r"(<!-- (?P<kind>\w+): (?P<name>[\w.]+) -->\n)(?P<table>.*?)(<!-- end -->)", re.S
)
NOTHING = "–"
#: An upper bound beyond this is one of the machine's, and not worth a word.
MOST_SHOWN = 1e15

#: Table of a file -> the frozen object that holds its defaults.
HOLDERS: Mapping[type[Table], type] = {
    schema.SiteTable: site.Site,
    schema.ClimateTable: site.Climate,
    schema.SpringTable: site.Spring,
    schema.RiverTable: site.River,
    schema.BedTable: site.BedSource,
    schema.SourceTable: site.WaterSource,
    schema.ConversionTable: site.Conversion,
    schema.ReactionsTable: site.Reactions,
    schema.MixingTable: site.Mixing,
    schema.LawsTable: Laws,
    schema.StageTable: plan.Stage,
    schema.LimeTable: plan.Lime,
    schema.WashTable: plan.Wash,
    schema.ReturnTable: plan.Return,
    schema.RiserTable: plan.Riser,
    schema.DeliveryTable: plan.Delivery,
    schema.IntakeTable: plan.Intake,
    schema.OutageTable: plan.Outage,
    schema.PlantTable: plan.Plant,
    schema.LimitsFile: Limits,
}
#: Defaults that stand elsewhere, by key.
ELSEWHERE: Mapping[type[Table], Mapping[str, float]] = {
    schema.GridTable: grid_table.CHOICES,
    schema.LimitsFile: {"internal_wave_m": Limits("", ()).wave_tilt},
}


# What the schema says -----------------------------------------------------------------------


def allowed(kind: Any) -> str:
    """Say what a key takes."""
    plain, notes = plain_type(kind)
    between = next((note for note in notes if isinstance(note, Between)), None)
    if between is not None:
        number = "whole number, " if plain is int else ""
        return number + _span(between.low, between.high, between.above)
    if get_origin(plain) is Literal:
        return ", ".join(f'`"{choice}"`' for choice in get_args(plain))
    if get_origin(plain) is list:
        return _list(get_args(plain)[0], notes)
    if get_origin(plain) is dict:
        return f"table of numbers, {allowed(get_args(plain)[1])}"
    if isinstance(plain, type) and issubclass(plain, Table):
        return "table"
    return {str: "text", bool: "true or false", float: "number", date: "date"}[plain]


def _span(low: float | None, high: float | None, above: bool) -> str:
    """Say what range a number lies in."""
    if high is None or high > MOST_SHOWN:
        return f"above {low:g}" if above else f"{low:g} or more"
    return f"above {low:g}, up to {high:g}" if above else f"{low:g} to {high:g}"


def _list(kind: Any, notes: tuple[Any, ...]) -> str:
    """Say what a list holds, and how much of it."""
    sizes = [size for note in notes for size in (note, *getattr(note, "metadata", ()))]
    least = max((getattr(size, "min_length", 0) for size in sizes), default=0)
    most = max((getattr(size, "max_length", 0) for size in sizes), default=0)
    count = str(least) if least == most != 0 else f"{least} or more"
    plain, _ = plain_type(kind)
    if isinstance(plain, type) and issubclass(plain, Table):
        return f"{count} tables"
    return f"{count} numbers, {allowed(kind)}"


def default(model: type[Table], key: str) -> str:
    """Say what holds where a key is left out."""
    field = next(f for name, f in model.model_fields.items() if (f.alias or name) == key)
    if field.is_required():
        return "required"
    if field.default_factory is not None:
        return NOTHING
    if field.default is not None:
        return _shown(field.default)
    if key in ELSEWHERE.get(model, {}):
        return _shown(ELSEWHERE[model][key])
    quantity, unit = units.split(key)
    for held in fields(HOLDERS[model]) if model in HOLDERS else ():
        if held.name in (key, quantity) and held.default is not MISSING:
            scale = units.UNITS[unit].factor if unit and held.name == quantity else 1.0
            return _shown(held.default, scale)
    return NOTHING


def _shown(value: Any, scale: float = 1.0) -> str:
    """Return a default as a user would write it."""
    if value is None or value in ((), ""):
        return NOTHING
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, str):
        return f'`"{value}"`'
    return f"{value / scale:.6g}" if isinstance(value, int | float) else NOTHING


def unit_words(key: str) -> str:
    """Return the unit of a key, or a dash."""
    _, ending = units.split(key)
    if ending == "share":
        return "1"
    return units.UNITS[ending].words if ending else NOTHING


# Tables -------------------------------------------------------------------------------------


def _keys(name: str) -> tuple[list[str], Iterator[list[str]]]:
    """Return heading and rows of the keys that a table itself brings."""
    model: type[Table] = getattr(schema, name)
    own = [model.model_fields[field].alias or field for field in model.__annotations__
           if field in model.model_fields]  # fmt: skip
    types = keys(model)
    rows = (
        [f"`{key}`", unit_words(key), allowed(types[key]), default(model, key)] for key in own
    )
    return ["key", "unit", "allowed", "default", "meaning"], rows


def _headings(_: str) -> tuple[list[str], Iterator[list[str]]]:
    """Return heading and rows of the columns of a cast."""
    rows = (
        [
            ", ".join(f"`{casts.heading(quantity, unit)}`" for unit in row.units),
            f"{row.range.low:g} to {row.range.high:g}",
        ]
        for quantity, row in casts.QUANTITIES.items()
    )
    return ["heading", "allowed, in the first unit", "meaning"], rows


def _quantities(_: str) -> tuple[list[str], Iterator[list[str]]]:
    """Return heading and rows of what a limit can be set on."""
    rows = (
        [f"`{key}`", row.unit, f"`at_{row.sense}`", row.against or NOTHING]
        for key, row in QUANTITIES.items()
    )
    return ["quantity", "unit", "usual bound", "against, unless said", "what it is"], rows


# Options of commands ------------------------------------------------------------------------


def _options(name: str) -> tuple[list[str], Iterator[list[str]]]:
    """Return heading and rows of the options of a command, with the words of its help."""
    command = group.get_command(click.Context(group), name)
    assert command is not None, f"there is no command {name}"
    rows = (
        [
            f"`{', '.join(option.opts)}`",
            _value(option),
            _option_default(option),
            option.help or "",
        ]
        for option in command.params
        if isinstance(option, click.Option)
    )
    return ["option", "value", "default", "what it does"], rows


def _value(option: click.Option) -> str:
    """Say what an option takes."""
    kind = option.type
    if option.is_flag:
        return NOTHING
    if isinstance(kind, click.FloatRange | click.IntRange):
        return _span(kind.min, kind.max, kind.min_open)
    if isinstance(kind, click.Choice):
        return ", ".join(f"`{choice}`" for choice in kind.choices)
    return {"path": "path", "text": "text", "integer": "whole number", "float": "number"}[
        kind.name
    ]


def _option_default(option: click.Option) -> str:
    """Say what holds where an option is left out."""
    plain = option.default if isinstance(option.default, int | float | str) else None
    return NOTHING if option.is_flag or plain is None else f"{plain}"


# Functions ----------------------------------------------------------------------------------


def _functions(name: str) -> tuple[list[str], Iterator[list[str]]]:
    """Return heading and rows of the functions that a room gives to a notebook."""
    room = import_module(name)
    names = getattr(room, "__all__", None) or _of_its_own(room)
    rows = (
        [
            f"`{name}.{one}{_signature(function)}`",
            (inspect.getdoc(function) or "").split("\n")[0],
        ]
        for one in names
        if inspect.isfunction(function := getattr(room, one))
    )
    return ["function", "what it does"], (
        [call, re.sub(r":\w+:`(\w+)`", r"`\1`", words)] for call, words in rows
    )


def _of_its_own(room: ModuleType) -> list[str]:
    """Return the public functions that a module defines; of figures, those that draw."""
    own = [
        name
        for name, one in vars(room).items()
        if inspect.isfunction(one) and one.__module__ == room.__name__ and name[0] != "_"
    ]
    draw = [name for name in own if "ax" in inspect.signature(getattr(room, name)).parameters]
    return draw or own


def _signature(function: Callable[..., Any]) -> str:
    """Return the parameters of a function without their types."""
    whole = inspect.signature(function)
    bare = [p.replace(annotation=p.empty) for p in whole.parameters.values()]
    return str(whole.replace(parameters=bare, return_annotation=whole.empty))


# Pages --------------------------------------------------------------------------------------


KINDS: Mapping[str, Callable[[str], tuple[list[str], Iterator[list[str]]]]] = {
    "keys": _keys,
    "columns": _headings,
    "quantities": _quantities,
    "options": _options,
    "functions": _functions,
}


def meanings(table: str) -> dict[str, str]:
    """Return the last cell of each row of a table by its first."""
    rows = [line.strip().strip("|").split(" | ") for line in table.splitlines()]
    return {row[0].strip(): row[-1].strip() for row in rows if len(row) > 1}


def rewritten(page: str) -> str:
    """Return a page with every marked table as the schema says it today."""

    def table(found: re.Match[str]) -> str:
        heading, rows = KINDS[found["kind"]](found["name"])
        words = meanings(found["table"])
        lines = [heading, ["---"] * len(heading)]
        for row in rows:
            lines.append(row if len(row) == len(heading) else [*row, words.get(row[0], "")])
        text = "".join(f"| {' | '.join(line)} |\n" for line in lines)
        return f"{found[1]}{text}{found[5]}"

    return MARKED.sub(table, page)


def main() -> None:
    for page in sorted(PAGES.glob("*.md")):
        before = page.read_text(encoding="utf-8")
        after = rewritten(before)
        if after != before:
            page.write_text(after, encoding="utf-8")
            print(f"{page.name}: tables of keys written anew")


if __name__ == "__main__":
    main()
