"""How cost grows: with layers, with years, with members on all processes, and in memory.

Run with ``python tests/benchmarks/scaling.py [MEMBERS YEARS]``; prints ratios from one run,
asserts nothing.  Members are the demo lake left alone, each reduced to a few numbers where it
was run, as a study of many would.
"""

import resource
import sys
import time
from dataclasses import replace
from functools import partial

import numpy as np

import strata
from strata.inputs import demo_files
from strata.studies import pool

#: Members and years of each, unless told.
MEMBERS, YEARS = 40, 10.0


def costs(lakes, years) -> list[float]:
    """Return processor times of projections [s], each the least of three taken in turn."""
    best = [np.inf] * len(lakes)
    for _ in range(3):
        for k, (lake, length) in enumerate(zip(lakes, years, strict=True)):
            begin = time.process_time()
            strata.project(lake, years=length, step_days=1.0)
            best[k] = min(best[k], time.process_time() - begin)
    return best


def on_layers(lake, count: int):
    """Return a lake cut into even layers."""
    return replace(lake, layer_faces=np.linspace(0.0, lake.layer_faces[-1], count + 1))


def member(lake, years: float, seed: int, progress) -> dict[str, float]:
    """Return a few numbers of one member, and the memory its process has taken [MB]."""
    result = strata.project(lake, years=years, seed=seed)
    kept = {name: float(result[name][-1]) for name in ("methane_in_place", "gradient_depth")}
    return kept | {"memory": resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024}


def main() -> None:
    """Print the growth of cost."""
    count, years = MEMBERS, YEARS
    if len(sys.argv) > 2:
        count, years = int(sys.argv[1]), float(sys.argv[2])
    lake = strata.load_lake(demo_files() / "lake.toml")
    few, many = on_layers(lake, 100), on_layers(lake, 500)
    costs([few, many], [0.1, 0.1])
    ends = costs([few, many], [4.0, 4.0])
    print(f"layers 100 -> 500: cost x {ends[1] / ends[0]:.2f} (linear: 5)")
    ends = costs([lake, lake], [4.0, 16.0])
    print(f"years 4 -> 16: cost x {ends[1] / ends[0]:.2f} (linear: 4)")
    workers = min(2, pool.usable_processors())
    jobs = [partial(member, lake, years, seed) for seed in range(count)]
    alone = []
    for job in jobs[:3]:
        begin = time.perf_counter()
        pool.run([job], workers=1)
        alone.append(time.perf_counter() - begin)
    begin = time.perf_counter()
    kept = pool.run(jobs, workers=workers)
    together = time.perf_counter() - begin
    ideal = count * float(np.median(alone)) / workers
    print(
        f"{count} members of {years:g} years on {workers} processes: {together / ideal:.2f} x"
        f" (members x one member / processes), {together:.0f} s"
    )
    memory = max(one["memory"] for one in kept)
    print(f"peak memory of one process: {memory:.0f} MB (goal: {300 + 0.05 * count:.0f} MB)")


if __name__ == "__main__":
    main()
