"""Write ``docs/validation/plant.md``: every unit against its source of truth, and its cost.

Run from the top of the checkout: ``python scripts/validate_plant.py``.
"""

import sys
from pathlib import Path

TOP = Path(__file__).resolve().parent.parent
sys.path[:0] = [str(TOP), str(TOP / "tests"), str(TOP / "tests" / "benchmarks")]

import plant as benchmark  # noqa: E402
from validate_properties import rows  # noqa: E402

import strata  # noqa: E402
from tests import plant_checks  # noqa: E402

HEAD = """\
# The plant: what was compared, and what came out

Written by `scripts/validate_plant.py` in one run; the comparisons are those of
`tests/plant_checks.py`, which the tests hold to the tolerances below. Errors are ours minus
theirs, or relative where the unit is %. "IPhreeqc" is an independent aqueous-geochemistry
engine; its CH4 constant was refitted to IAPWS G7-04, and for these rows our gas phase and
salting-out are set to its own (k_ij = 0, generic rule).
"""

COST = """\
## What plants cost a projection

Processor time in the plants and their plumes over that of a whole warm run of 50 years with a
step of a day; at most 30 % is the aim. A plant is solved again at its events, when its feed
has changed, and after 30 days.

| plan | plants | one solution [ms] | one plume [µs] | of the run [s] | in plants [s] | share |
| --- | --- | ---: | ---: | ---: | ---: | ---: |
"""

TAIL = """
## Where it falls short

- **Near the onset of degassing** the share released magnifies any error of Henry's constant.
- **Riser.** One published pipe is all there is to compare with, and its bore is recalled. The
  pipe is at one temperature, and gas comes out at equilibrium: water that has to find nuclei
  first gives its gas later and lifts less.
- **Lime** is held to sodium water. With magnesium the engine's own databases differ by more
  than the tolerance; above pH 11 the activities do not hold.
- **Wash tower.** The columns of the engine have pure water; bicarbonate in the wash water and
  H2S are covered by balances and by a single stage against the separator only. Absorption
  heats the water by less than 0.2 K, which is left out.
- **Separators** approach equilibrium by one share for all gases; a packed vessel would strip
  nitrogen and methane faster than CO2.
- **Plumes** are held to the laboratory's laws for still water. The entrainment over an
  overshoot is known to a factor of two and is a parameter (`mixing.overshoot`); a lake's
  currents, and ports that blow into each other, are not in it.
"""


def cost() -> str:
    """Return the lines of the table of costs for the plans of the demo."""
    folder = strata.demo_files()
    lake = strata.load_lake(folder / "lake.toml")
    names = ("surface-return", "deep-return", "washed-return", "staged-lime")
    lines = []
    for name in names:
        plan = strata.load_plan(folder / f"{name}.toml", lake)
        once = [benchmark.time_of_plant(lake, plan, plant.name) for plant in plan.plants]
        whole, spent = benchmark.share_of_run(lake, plan)
        operate, plume = (max(values) for values in zip(*once, strict=True))
        lines.append(
            f"| {plan.name} | {len(plan.plants)} | {1e3 * operate:.2f} | {1e6 * plume:.0f} "
            f"| {whole:.2f} | {spent:.2f} | {100 * spent / whole:.0f} % |"
        )
    return "\n".join(lines) + "\n"


def main() -> None:
    """Write the page."""
    page = TOP / "docs" / "validation" / "plant.md"
    parts = [HEAD]
    for name, checks in plant_checks.EVERY.items():
        parts += [f"## {name}\n", "\n".join(rows(checks)) + "\n"]
    page.write_text("\n".join(parts) + "\n" + COST + cost() + TAIL)
    print(page.relative_to(TOP))


if __name__ == "__main__":
    main()
