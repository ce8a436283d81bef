"""Drawings of one axes each: data and an ``Axes`` in, artists out; nothing is saved.

    import matplotlib.pyplot as plt
    import strata
    figure, ax = plt.subplots()
    strata.plot.gas_pressure(result, year=20, ax=ax)

Depth runs down, time runs right, limits are thick dashed lines with their names, measured
values are points and model values lines.  Plans differ by colour and by dashes.  The drawings
are in the modules named here; this one gathers them under one name.
"""

from strata.report.by_depth import (
    colour_limits,
    gas_pressure,
    measured_points,
    profiles,
    section,
    stability,
)
from strata.report.by_pressure import (
    separator_sweep,
)
from strata.report.by_time import (
    against_limit,
    by_year,
    gas_in_place,
    methane_fate,
    plant_series,
    through_time,
    trap_depth,
    worst_of_year,
)
from strata.report.drawing import (
    calendar_years,
    depth_axis,
    limit_line,
    plan_style,
    record_of,
)

__all__ = [
    "against_limit",
    "by_year",
    "calendar_years",
    "colour_limits",
    "depth_axis",
    "gas_in_place",
    "gas_pressure",
    "limit_line",
    "measured_points",
    "methane_fate",
    "plan_style",
    "plant_series",
    "profiles",
    "record_of",
    "section",
    "separator_sweep",
    "stability",
    "through_time",
    "trap_depth",
    "worst_of_year",
]
