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


def time_of_lapack(rows: int, repeats: int = 2000) -> float:
    """Return the median time of one dgtsv call [s]."""
    rng = np.random.default_rng(1)
    lower, upper = -rng.random(rows - 1), -rng.random(rows - 1)
    middle, right = 3.0 + rng.random(rows), rng.random((rows, 1))
    times = []
    for _ in range(repeats):
        begin = time.perf_counter()
        lapack.dgtsv(lower, middle, upper, right)
        times.append(time.perf_counter() - begin)
    return float(np.median(times))


def time_of_step(lake, plan, years: int = 5) -> tuple[float, int, int]:
    """Return the processor time of one warm step, visits included [s], layers and tracers."""
    fleet = Fleet(plan, lake)
    first = first_day(lake)
    column = Column(lake, np.pad(first, ((0, 0), (0, len(fleet.tags)))), fleet.tags)
    begin = lake.site.start
    end = clock.add_years(begin, years + 1)
    todo = clock.spans(begin, end, fleet.dates(begin, end))
    warm = [span for span in todo if span.end <= clock.add_years(begin, 1)]
    for span in warm:
        carry_on(column, fleet, span, begin, 1.0)
    days, started = 0, time.process_time()
    for span in todo[len(warm) :]:
        carry_on(column, fleet, span, begin, 1.0)
        days += span.days
    return (time.process_time() - started) / days, *column.values.shape


def main() -> None:
    """Print microseconds per step and the ratio to LAPACK."""
    folder = demo_files()
    names = sys.argv[1:] or [str(folder / "lake.toml"), str(folder / "deep-return.toml")]
    lake = strata.load_lake(names[0])
    for plan in (None, strata.load_plan(names[1])):
        step, layers, tracers = time_of_step(lake, plan)
        solve = time_of_lapack(layers * tracers)
        print(
            f"{'with' if plan else 'without'} plant: {layers} layers, {tracers} tracers:"
            f" {1e6 * step:.1f} us a step, {1e6 * solve:.1f} us a dgtsv of"
            f" {layers * tracers} rows, ratio {step / solve:.2f}"
        )


if __name__ == "__main__":
    main()
