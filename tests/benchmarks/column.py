"""How fast the column steps, against one LAPACK tridiagonal solve timed in the same run.

Run with ``python tests/benchmarks/column.py [LAKE PLAN]``; prints, asserts nothing.
"""

import sys
import time

import numpy as np
from scipy.linalg import lapack

import strata
from strata import clock
from strata.column.column import Column
from strata.column.start import first_day
from strata.coupling import Fleet
from strata.inputs import demo_files
from strata.projection import carry_on

#: Length of the run that is timed.
YEARS = 100


def dgtsv_seconds(rows: int, repeats: int) -> list[float]:
    """Return the time of single dgtsv calls [s]."""
    rng = np.random.default_rng(1)
    lower, upper = -rng.random(rows - 1), -rng.random(rows - 1)
    middle, right = 3.0 + rng.random(rows), rng.random((rows, 1))
    times = []
    for _ in range(repeats):
        begin = time.perf_counter()
        lapack.dgtsv(lower, middle, upper, right)
        times.append(time.perf_counter() - begin)
    return times


def step_against_dgtsv(lake, plan, years: int) -> tuple[float, float, tuple[int, int]]:
    """Return medians of a warm step, visits included, and of a dgtsv [s]; layers and tracers.

    Every year of one run is timed, and calls of dgtsv after it, so that both medians see the
    same machine.
    """
    fleet = Fleet(plan, lake)
    first = first_day(lake)
    column = Column(lake, np.pad(first, ((0, 0), (0, len(fleet.tags)))), fleet.tags)
    begin = lake.site.start
    rows = column.values.size
    steps, solves = [], []
    for year in range(years + 1):
        since, until = clock.add_years(begin, year), clock.add_years(begin, year + 1)
        spans = clock.spans(since, until, fleet.dates(since, until))
        started = time.perf_counter()
        for span in spans:
            carry_on(column, fleet, span, begin, 1.0)
        spent = time.perf_counter() - started
        if year > 0:  # the first compiles
            steps.append(spent / sum(span.days for span in spans))
            solves += dgtsv_seconds(rows, 50)
    return float(np.median(steps)), float(np.median(solves)), column.values.shape


def main() -> None:
    """Print microseconds per step and the ratio to LAPACK."""
    folder = demo_files()
    names = sys.argv[1:] or [str(folder / "lake.toml"), str(folder / "deep-return.toml")]
    lake = strata.load_lake(names[0])
    for plan in (None, strata.load_plan(names[1])):
        step, solve, (layers, tracers) = step_against_dgtsv(lake, plan, YEARS)
        print(
            f"{'with' if plan else 'without'} plant: {layers} layers, {tracers} tracers,"
            f" {YEARS} years: {1e6 * step:.1f} us a step, {1e6 * solve:.1f} us a dgtsv of"
            f" {layers * tracers} rows, ratio {step / solve:.2f}"
        )


if __name__ == "__main__":
    main()
