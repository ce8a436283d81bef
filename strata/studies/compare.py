"""Plans side by side with the lake left alone, each held against the limits."""

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path

import xarray as xr

from strata.errors import StrataError
from strata.lake.site import Lake
from strata.limits import Limits, Verdict, judge
from strata.plant.plan import Plan
from strata.results import NO_PLAN
from strata.studies import pool


@dataclass(frozen=True)
class Comparison:
    """What became of the lake under each plan.

    Parameters
    ----------
    results : dict
        Name of the plan -> projection; the lake left alone comes first.
    verdicts : dict
        Name of the plan -> verdict; empty without limits.
    """

    results: dict[str, xr.Dataset]
    verdicts: dict[str, Verdict]

    @property
    def breached(self) -> bool:
        """Whether any plan breaches a limit; the lake left alone does not count."""
        return any(v.breached for name, v in self.verdicts.items() if name != NO_PLAN)


def _plants(plan: Plan | None) -> int:
    """Return how many plants a plan has."""
    return 0 if plan is None else len(plan.plants)


def compare(
    lake: Lake,
    plans: Sequence[Plan],
    limits: Limits | None = None,
    *,
    years: float = 50.0,
    step_days: float = 1.0,
    seed: int = 0,
    tags: Sequence[str] = (),
    alone: bool = True,
    checkpoint: Path | None = None,
    progress: Callable[[float], None] | None = None,
    workers: int | None = None,
) -> Comparison:
    """Project a lake alone and under each plan, and judge all of it.

    Parameters
    ----------
    lake : Lake
    plans : sequence of Plan
        Their names must differ.
    limits : Limits, optional
    years, step_days, seed, tags
        As in :func:`strata.project`.
    alone : bool
        Whether the lake left alone is projected too; limits need it.
    checkpoint : Path, optional
        File that the last of the projections is kept in, and goes on from if it is there.
    progress : callable, optional
        Called with the share of all work done.
    workers : int, optional
        Number of processes.

    Raises
    ------
    strata.StrataError
        If two plans bear one name.
    """
    cases = [None, *plans] if alone or limits is not None else list(plans)
    names = [plan.name if plan else NO_PLAN for plan in cases]
    if len(set(names)) < len(names):
        raise StrataError("the plans of a comparison must bear different names")
    common = {"years": years, "step_days": step_days, "seed": seed, "tags": tags}
    jobs = [pool.projection(lake, plan, **common) for plan in cases[:-1]]
    jobs.append(pool.projection(lake, cases[-1], **common, checkpoint=checkpoint))
    # many plants take longest: begun first, they do not keep a processor waiting at the end
    order = sorted(range(len(cases)), key=lambda k: -_plants(cases[k]))
    ran = pool.run([jobs[k] for k in order], progress, workers)
    done = {names[k]: result for k, result in zip(order, ran, strict=True)}
    results = {name: done[name] for name in names}
    verdicts = {}
    if limits is not None:
        baseline = results[NO_PLAN]
        verdicts = {name: judge(found, limits, baseline) for name, found in results.items()}
    return Comparison(results, verdicts)
