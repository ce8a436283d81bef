"""Sites, streams and tables that the tests of the plant share."""

import csv
import math
from datetime import date
from pathlib import Path

from strata.gas import PLAIN
from strata.lake.site import Site
from strata.plant.plan import Plant, Return, Stage
from strata.plant.streams import WaterStream

DAY = date(2027, 1, 1)
SITE = Site("test", 0.86e5, 2.0, DAY)
#: Henry's law for the ideal dry gas, and nothing else.
PLAIN_SITE = Site("plain", 0.86e5, 2.0, DAY, laws=PLAIN.as_mapping())
#: The laws of the engine that the reference tables come from: no k_ij, generic salting-out.
ENGINE_SITE = Site("engine", 0.86e5, 2.0, DAY, laws={"k_ij": 0.0, "salting_out": "generic"})

DEEP = WaterStream(
    12.0,
    24.9,
    4.6,
    {
        "DIC": 130.0,
        "alkalinity": 57.0,
        "calcium": 2.0,
        "CH4": 16.0,
        "N2": 0.5,
        "O2": 0.0,
        "H2S": 0.05,
        "phosphate": 0.08,
    },
)
SHALLOW = WaterStream(
    6.0,
    23.4,
    1.2,
    {
        "DIC": 12.0,
        "alkalinity": 11.5,
        "calcium": 0.5,
        "CH4": 0.0,
        "N2": 0.45,
        "O2": 0.2,
        "H2S": 0.0,
        "phosphate": 0.001,
    },
)


def simple_plant(*stages: Stage, **settings: object) -> Plant:
    """Return a plant with an intake at 345 m and a return at 190 m."""
    return Plant("north", 345.0, 12.0, stages or (Stage(2e5),), Return(190.0), DAY, **settings)


def table(name: str) -> list[dict[str, float | str]]:
    """Return the rows of a reference table; text stays text, empty cells are nan."""
    path = Path(__file__).parent / "reference" / name
    lines = [line for line in path.read_text().splitlines() if not line.startswith("#")]

    def value(cell: str) -> float | str:
        try:
            return float(cell) if cell else math.nan
        except ValueError:
            return cell

    return [{k: value(v) for k, v in row.items()} for row in csv.DictReader(lines)]
