"""Gas-rich stratified lakes: what gas extraction does to the column over decades.

The names a notebook needs are here and are imported when first used, so that ``import strata``
costs nothing.
"""

TYPE_CHECKING = False  # as in typing, whose import alone would double the time of --help
if TYPE_CHECKING:
    from strata import gas, results, water
    from strata.caution import CAUTION
    from strata.errors import ComputationError, InputError, OutOfRangeError, StrataError
    from strata.inputs import demo_files, load_lake, load_limits, load_plan, with_values
    from strata.limits import judge
    from strata.projection import project
    from strata.report import plot

__version__ = "0.1.0"

_HOME = {
    "CAUTION": "strata.caution",
    "ComputationError": "strata.errors",
    "InputError": "strata.errors",
    "OutOfRangeError": "strata.errors",
    "StrataError": "strata.errors",
    "demo_files": "strata.inputs",
    "judge": "strata.limits",
    "load_lake": "strata.inputs",
    "load_limits": "strata.inputs",
    "load_plan": "strata.inputs",
    "project": "strata.projection",
    "with_values": "strata.inputs",
}
_ROOMS = {
    "gas": "strata.gas",
    "plot": "strata.report.plot",
    "results": "strata.results",
    "water": "strata.water",
}

__all__ = [
    "CAUTION",
    "ComputationError",
    "InputError",
    "OutOfRangeError",
    "StrataError",
    "__version__",
    "demo_files",
    "gas",
    "judge",
    "load_lake",
    "load_limits",
    "load_plan",
    "plot",
    "project",
    "results",
    "water",
    "with_values",
]


def __getattr__(name: str) -> object:
    """Import a public name from its room when it is first asked for."""
    from importlib import import_module

    value: object
    if name in _ROOMS:
        value = import_module(_ROOMS[name])
    elif name in _HOME:
        value = getattr(import_module(_HOME[name]), name)
    else:
        raise AttributeError(f"module 'strata' has no attribute {name!r}")
    globals()[name] = value
    return value


def __dir__() -> list[str]:
    """List the lazy names too."""
    return sorted({*globals(), *__all__})
