"""How cost grows: with layers, with years, with members on two processes, and in memory.

Run with ``python tests/benchmarks/scaling.py``; prints ratios from one run, asserts nothing.
"""

import resource
import time
from dataclasses import replace

import numpy as np

import strata
from strata.inputs import demo_files
from strata.studies import pool


def cost(lake, years: float) -> float:
    """Return the processor time of a projection [s], the best of three."""
    best = np.inf
    for _ in range(3):
        begin = time.process_time()
        strata.project(lake, years=years, step_days=1.0)
        best = min(best, time.process_time() - begin)
    return best


def on_layers(lake, count: int):
    """Return a lake cut into even layers."""
    return replace(lake, layer_faces=np.linspace(0.0, lake.layer_faces[-1], count + 1))


def main() -> None:
    """Print the growth of cost."""
    lake = strata.load_lake(demo_files() / "lake.toml")
    strata.project(lake, years=0.2)
    few, many = cost(on_layers(lake, 100), 4.0), cost(on_layers(lake, 500), 4.0)
    print(f"layers 100 -> 500: cost x {many / few:.2f} (linear: 5)")
    short, long = cost(lake, 4.0), cost(lake, 16.0)
    print(f"years 4 -> 16: cost x {long / short:.2f} (linear: 4)")
    jobs = [pool.projection(lake, None, years=4.0) for _ in range(16)]
    begin = time.perf_counter()
    pool.run(jobs[:4], workers=1)
    alone = (time.perf_counter() - begin) / 4
    workers = min(2, pool.usable_processors())
    begin = time.perf_counter()
    pool.run(jobs, workers=workers)
    together = time.perf_counter() - begin
    ideal = len(jobs) * alone / workers
    print(
        f"{len(jobs)} members on {workers} processes: {together / ideal:.2f} x the ideal"
        f" (members x one member / processes)"
    )
    peak = max(
        resource.getrusage(who).ru_maxrss
        for who in (resource.RUSAGE_SELF, resource.RUSAGE_CHILDREN)
    )
    print(f"peak memory of one process: {peak / 1024:.0f} MB")


if __name__ == "__main__":
    main()
