"""What plants cost a projection: one plume, one operation of each plant, their share of a run.

Run with ``python tests/benchmarks/plant.py [LAKE PLAN ...]``; prints, asserts nothing.
"""

import sys
import time
from collections.abc import Callable
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
    begin = time.perf_counter()
    for _ in range(repeats):
        call()
    return (time.perf_counter() - begin) / repeats


def share_of_run(lake: object, plan: object, years: float = 10.0) -> tuple[float, float]:
    """Return the time of a warm projection [s] and what of it plants and their plumes take."""
    strata.project(lake, plan, years=0.1)
    spent = [0.0]
    honest = coupling.Fleet.work

    def timed(*args: object) -> object:
        begin = time.perf_counter()
        try:
            return honest(*args)
        finally:
            spent[0] += time.perf_counter() - begin

    with patch.object(coupling.Fleet, "work", timed):
        begin = time.perf_counter()
        strata.project(lake, plan, years=years)
        whole = time.perf_counter() - begin
    return whole, spent[0]


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
            setting = setting_of(lake, plan, plant.name)

            def run(setting: object = setting) -> object:
                return operate(setting.plant, setting.feed, setting.wash_feed, lake.site)

            where, water = outlets(setting.plant, run())[0]
            source = coupling.source_of(plant.name, water, where, setting.column)

            def plume(source: object = source, around: object = setting.around) -> object:
                return follow(source, around, lake.mixing.overshoot)

            took = 1e3 * time_of(run), 1e6 * time_of(plume)
            print(f"  {plant.name}: operate {took[0]:.2f} ms, plume {took[1]:.0f} us")
        whole, spent = share_of_run(lake, plan)
        share = 100 * spent / whole
        print(f"  plants take {spent:.2f} of {whole:.2f} s in 10 years: {share:.0f} %")


if __name__ == "__main__":
    main()
