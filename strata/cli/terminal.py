"""What goes to the terminal: results on standard output, all else on standard error."""

import json
import logging
import math
import sys
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from typing import Any

import click

from strata.caution import CAUTION


@contextmanager
def progress(label: str) -> Iterator[Callable[[float], None]]:
    """Show a bar on standard error; the value is a function that takes the share done."""
    scale = 1000
    with click.progressbar(
        length=scale, label=label, file=sys.stderr, show_pos=False, width=30
    ) as bar:

        def show(share: float) -> None:
            bar.update(max(0, round(share * scale) - bar.pos))

        yield show
        show(1.0)


def announce_compilation() -> None:
    """Say why the first run on a machine takes longer, where it will."""
    from strata.compiled import has_to_compile

    if has_to_compile():
        click.echo("first run: compiling for this machine takes about half a minute", err=True)


def show_warnings() -> None:
    """Send warnings of the library to standard error, one line each."""
    handler = logging.StreamHandler(sys.stderr)
    handler.setFormatter(logging.Formatter("warning: %(message)s"))
    logger = logging.getLogger("strata")
    logger.handlers = [handler]
    logger.setLevel(logging.WARNING)
    logger.propagate = False


def report(text: str) -> None:
    """Print a result for a reader, and the caution."""
    click.echo(text)
    click.echo()
    click.echo(CAUTION)


def report_json(numbers: dict[str, Any]) -> None:
    """Print a result for a script, the caution included."""
    click.echo(json_text(numbers))


def json_text(numbers: dict[str, Any]) -> str:
    """Return numbers as JSON, the caution included."""
    return json.dumps(_plain(numbers | {"caution": CAUTION}), indent=2)


def _plain(value: Any) -> Any:
    """Return a value as JSON knows it: numpy numbers as numbers, what is no number as null."""
    if isinstance(value, dict):
        return {str(key): _plain(inner) for key, inner in value.items()}
    if isinstance(value, list | tuple):
        return [_plain(inner) for inner in value]
    if hasattr(value, "tolist"):
        return _plain(value.tolist())
    if isinstance(value, float) and not math.isfinite(value):
        return None
    if value is None or isinstance(value, bool | int | float | str):
        return value
    return str(value)
