"""Does the step matter? The same run with its step halved, by everything a verdict uses."""

from collections.abc import Callable

import numpy as np
import xarray as xr

from strata.lake.site import Lake
from strata.limits import QUANTITIES, Limit, StepChange, series
from strata.plant.plan import Plan
from strata.studies import pool


def check_step(
    lake: Lake,
    plan: Plan | None = None,
    *,
    years: float = 50.0,
    step_days: float = 1.0,
    progress: Callable[[float], None] | None = None,
    workers: int | None = None,
) -> tuple[xr.Dataset, list[StepChange]]:
    """Return a projection and what halving its step would change.

    Parameters are those of :func:`strata.project`.
    """
    jobs = [
        pool.projection(lake, plan, years=years, step_days=step)
        for step in (step_days, 0.5 * step_days)
    ]
    whole, half = pool.run(jobs, progress, workers)
    changes = []
    for key, quantity in QUANTITIES.items():
        limit = Limit(key, 0.0, against="start" if quantity.against else "")
        coarse, fine = (series(result, limit, None)[0] for result in (whole, half))
        known = np.isfinite(coarse) & np.isfinite(fine)
        if not known.any():
            continue
        worst = np.max if quantity.sense == "most" else np.min
        changes.append(
            StepChange(
                key,
                quantity.words,
                quantity.unit,
                float(worst(coarse[known])),
                float(worst(fine[known])),
                float(np.abs(coarse - fine)[known].max()),
            )
        )
    return whole, changes
