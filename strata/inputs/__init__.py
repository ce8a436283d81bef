"""The files a user writes: read, checked and turned into frozen objects.

Physics never imports this room, and no file that a user wrote is read anywhere else.
"""

from collections.abc import Callable, Iterable, Mapping, Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Any, TypeVar

from strata.errors import Fault, InputError, StrataError
from strata.fingerprint import canonical_hash
from strata.inputs.texts import Texts

if TYPE_CHECKING:
    from strata.lake.site import Lake
    from strata.limits import Limits
    from strata.plant.plan import Plan

__all__ = [
    "canonical_hash",
    "check",
    "demo_files",
    "load_all",
    "load_lake",
    "load_limits",
    "load_plan",
    "with_values",
]

T = TypeVar("T")


def load_lake(path: str | Path) -> "Lake":
    """Read a lake file with its hypsography and its casts.

    Raises
    ------
    strata.InputError
        With every fault of these files.
    """
    from strata.inputs.lake_file import build_lake

    return build_lake(Texts.of_file(path))


def load_plan(path: str | Path, lake: "Lake | None" = None) -> "Plan":
    """Read a plan file.

    Parameters
    ----------
    path : str or Path
    lake : Lake, optional
        Where given, depths, flows and dates are held against it.

    Raises
    ------
    strata.InputError
        With every fault of the file.
    """
    from strata.inputs.plan_file import build_plan

    return build_plan(Texts.of_file(path), lake)


def load_limits(path: str | Path) -> "Limits":
    """Read a limits file.

    Raises
    ------
    strata.InputError
        With every fault of the file.
    """
    from strata.inputs.limits_file import build_limits

    return build_limits(Texts.of_file(path))


def load_all(
    lake: str | Path, plans: Sequence[str | Path] = (), limits: str | Path | None = None
) -> "tuple[Lake, list[Plan], Limits | None]":
    """Read a lake with plans and limits for it.

    Raises
    ------
    strata.InputError
        With every fault of all files.
    """
    faults: list[Fault] = []
    basin = _collect(faults, load_lake, lake)
    found = [_collect(faults, load_plan, path, basin) for path in plans]
    rules = None if limits is None else _collect(faults, load_limits, limits)
    names = [plan.name for plan in found if plan is not None]
    for path, plan in zip(plans, found, strict=True):
        if plan is not None and names.count(plan.name) > 1:
            message = f'is "{plan.name}", which another plan bears; names must differ'
            faults.append(Fault(str(path), "name", message))
    if faults or basin is None:
        raise InputError(faults)
    return basin, [plan for plan in found if plan is not None], rules


def check(paths: Iterable[str | Path]) -> list[tuple[str, str]]:
    """Validate files of any kind; plans are held against the lake among them, if there is one.

    Returns
    -------
    list of (str, str)
        Each file and what it is: "lake", "plan" or "limits".

    Raises
    ------
    strata.InputError
        With every fault of all files.
    """
    faults: list[Fault] = []
    kinds = [(str(path), _collect(faults, _kind, path)) for path in paths]
    lakes = [_collect(faults, load_lake, path) for path, kind in kinds if kind == "lake"]
    lake = lakes[0] if len(lakes) == 1 else None
    for path, kind in kinds:
        if kind == "plan":
            _collect(faults, load_plan, path, lake)
        elif kind == "limits":
            _collect(faults, load_limits, path)
    if faults:
        raise InputError(faults)
    return [(path, kind) for path, kind in kinds if kind is not None]


def _collect(faults: list[Fault], load: Callable[..., T], *arguments: Any) -> T | None:
    """Return what a loader gives; where it refuses, keep its faults and return None."""
    try:
        return load(*arguments)
    except InputError as error:
        faults += error.faults
        return None


def _kind(path: str | Path) -> str:
    """Return which kind of file this is, by the table that only that kind has."""
    texts = Texts.of_file(path)
    document = texts.document()
    for table, kind in (("site", "lake"), ("plant", "plan"), ("limit", "limits")):
        if table in document:
            return kind
    message = "is no lake file ([site]), plan file ([[plant]]) or limits file ([[limit]])"
    raise InputError([Fault(texts.shown(texts.main), "", message)])


def with_values(thing: T, values: Mapping[str, Any], lake: "Lake | None" = None) -> T:
    """Return a lake, plan or limits with some values of its file changed, checked anew.

    Parameters
    ----------
    thing : Lake, Plan or Limits
        Loaded from a file; itself it stays as it is.
    values : mapping
        New values, in the units of the file, by dotted path of its keys.  An element of an
        array of tables is chosen by its name or its number from 1:
        ``mixing.coefficient_m2_s2``, ``plant.north.return.depth_m``,
        ``plant.north.stage.1.pressure_bar``.
    lake : Lake, optional
        Where a plan is changed: the lake to hold it against.

    Raises
    ------
    strata.InputError
        If a path leads nowhere or a value is not allowed.
    strata.StrataError
        If the object was not loaded from a file, or was changed by other means since.
    """
    if canonical_hash(_rebuilt(Texts.of_object(thing), thing, None)) != canonical_hash(thing):
        raise StrataError(
            f"this {type(thing).__name__.lower()} no longer agrees with its file; "
            "with_values would lose what was changed by other means"
        )
    texts = Texts.of_object(thing)
    texts.change(values)
    return _rebuilt(texts, thing, lake)


def _rebuilt(texts: Texts, thing: T, lake: "Lake | None") -> T:
    """Build an object of the same kind from texts."""
    rebuilt: Any
    match type(thing).__name__:
        case "Lake":
            from strata.inputs.lake_file import build_lake

            rebuilt = build_lake(texts)
        case "Plan":
            from strata.inputs.plan_file import build_plan

            rebuilt = build_plan(texts, lake)
        case "Limits":
            from strata.inputs.limits_file import build_limits

            rebuilt = build_limits(texts)
        case name:
            raise StrataError(f"with_values takes a lake, a plan or limits, not a {name}")
    return rebuilt


def demo_files() -> Path:
    """Return the folder of the demo lake and its plans; nothing is ever written there.

    It lies inside an installed package, and beside the package in a checkout.

    Raises
    ------
    strata.StrataError
        If it is in neither place.
    """
    package = Path(__file__).parent.parent
    for folder in (package / "profiles", package.parent / "profiles"):
        if (folder / "lake.toml").is_file():
            return folder
    raise StrataError("the files of the demo lake are missing from this installation")
