"""Which column of the state is which tracer, said once.

Potential temperature [degC] and salinity [g/kg] come first, then concentrations [mol m-3]
(alkalinity in equivalents), then any number of passive tags [share of the water].
"""

from collections.abc import Sequence

from strata import ranges
from strata.lake.site import Lake

TEMPERATURE = 0
SALINITY = 1
DIC = 2
ALKALINITY = 3
CALCIUM = 4
METHANE = 5
NITROGEN = 6
OXYGEN = 7
SULFIDE = 8
PHOSPHATE = 9

#: Names of the tracers every column carries, in the order of its columns.
TRACERS = (
    "temperature",
    "salinity",
    "DIC",
    "alkalinity",
    "calcium",
    "CH4",
    "N2",
    "O2",
    "H2S",
    "phosphate",
)
#: The tag that is no share of the water but its age, in years since it entered or the start.
AGE = "age"


def names(tags: Sequence[str] = ()) -> tuple[str, ...]:
    """Return the names of all columns of a state that carries the given tags."""
    return TRACERS + tuple(tags)


def index(name: str, tags: Sequence[str] = ()) -> int:
    """Return the column of a tracer or tag.

    Raises
    ------
    ValueError
        If there is no such tracer.
    """
    return names(tags).index(name)


def followed(lake: Lake, wanted: Sequence[str]) -> tuple[str, ...]:
    """Return the tags that follow what a user names.

    Parameters
    ----------
    lake : Lake
    wanted : sequence of str
        Names of springs and rivers (``"spring_<name>"``, ``"river_<name>"`` where both have
        one of that name), and ``"age"`` for the age of the water.

    Raises
    ------
    strata.OutOfRangeError
        If nothing of a name enters the lake; with the nearest known one.
    """
    springs = [spring.name for spring in lake.springs]
    rivers = [river.name for river in lake.rivers]
    known = {f"spring_{name}": f"spring_{name}" for name in springs}
    known |= {f"river_{name}": f"river_{name}" for name in rivers} | {AGE: AGE}
    known |= {name: f"spring_{name}" for name in springs if name not in rivers}
    known |= {name: f"river_{name}" for name in rivers if name not in springs}
    found = (ranges.named("water to follow", name, known) for name in wanted)
    return tuple(dict.fromkeys(found))
