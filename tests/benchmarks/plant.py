"""What plants cost a projection: one plume, one operation of each plant, their share of a run.

Run with ``python tests/benchmarks/plant.py [LAKE PLAN ...]``; prints, asserts nothing.
Processor time is counted, so that other work on the machine matters little.
"""

import sys
import time
from collections.abc import Callable
from dataclasses import replace
from unittest.mock import patch

import strata
from strata import coupling
from strata.column.streams import follow
from strata.inputs import demo_files
from strata.plant.operate import operate, outlets
from strata.studies.separate import setting_of


def time_of(call: Callable[[], object], repeats: int = 200) -> float:
    """Return the mean time of a warm call [s]."""
    call()
    begin = time.process_time()
    for _ in range(repeats):
        call()
    return (time.process_time() - begin) / repeats


def time_of_plant(lake: object, plan: object, plant: str) -> tuple[float, float]:
    """Return the time [s] of one solution of a plant and of one plume from it."""
    setting = setting_of(lake, plan, plant)

    def run() -> object:
        return operate(setting.plant, setting.feed, setting.wash_feed, lake.site)

    where, water = outlets(setting.plant, run())[0]
    source = coupling.source_of(plant, water, where, setting.column)

    def plume() -> object:
        return follow(source, setting.around, lake.mixing.overshoot)

    return time_of(run), time_of(plume)


def share_of_run(lake: object, plan: object, years: float = 50.0) -> tuple[float, float]:
    """Return the time of a warm projection [s] and what of it plants and their plumes take."""
    strata.project(lake, _at_once(plan, lake), years=0.2)
    spent = [0.0]
    honest = coupling.Fleet.work

    def timed(*args: object) -> object:
        begin = time.process_time()
        try:
            return honest(*args)
        finally:
            spent[0] += time.process_time() - begin

    with patch.object(coupling.Fleet, "work", timed):
        begin = time.process_time()
        strata.project(lake, plan, years=years)
        whole = time.process_time() - begin
    return whole, spent[0]


def _at_once(plan: object, lake: object) -> object:
    """Return a plan whose plants all start on the first day."""
    start = lake.site.start
    return replace(plan, plants=tuple(replace(plant, start=start) for plant in plan.plants))


def main() -> None:
    """Print the costs for the demo plans or those given."""
    paths = sys.argv[1:]
    if not paths:
        folder = demo_files()
        plans = sorted(p for p in folder.glob("*.toml") if p.stem not in ("lake", "limits"))
        paths = [str(folder / "lake.toml"), *map(str, plans)]
    lake = strata.load_lake(paths[0])
    for path in paths[1:]:
        plan = strata.load_plan(path)
        print(plan.name)
        for plant in plan.plants:
            took, plume = time_of_plant(lake, plan, plant.name)
            print(f"  {plant.name}: operate {1e3 * took:.2f} ms, plume {1e6 * plume:.0f} us")
        whole, spent = share_of_run(lake, plan)
        share = 100 * spent / whole
        print(f"  plants take {spent:.2f} of {whole:.2f} s in 50 years: {share:.0f} %")


if __name__ == "__main__":
    main()
