"""Write ``docs/validation/numerics.md``: the column against what can be known without it.

Run from the top of the checkout: ``python scripts/validate_numerics.py`` (two minutes on a
machine that does nothing else: it times the program as well).
"""

import os
import subprocess
import sys
from pathlib import Path

import numpy as np

TOP = Path(__file__).resolve().parent.parent
sys.path[:0] = [str(TOP), str(TOP / "tests")]

import column_checks as paper  # noqa: E402
import front_checks as fronts  # noqa: E402
import second_solutions as others  # noqa: E402

from strata.column.tracers import TRACERS  # noqa: E402

HEAD = """\
# The column: what was compared, and what came out

Written by `scripts/validate_numerics.py` in one run; the cases are those of
`tests/column_checks.py`, `tests/front_checks.py` and `tests/second_solutions.py`, which the
tests hold to their tolerances. Goals are those that the design set.
"""

SPEED = """\
## Speed

What the benchmarks printed on the machine that wrote this page; seconds belong to it, ratios
less so. The goals: a step, visits and plants included, at most 1.5 times one tridiagonal
solve of LAPACK over all layers and tracers; 20 times the speed of `solve_ivp` BDF at equal
error in the seasons and 5 times where all is smooth; members on processes within 1.2 of the
ideal and in 300 MB and 50 KB a member; cost linear in layers and years.

"""

TAIL = """\
## Where it falls short

- **A step costs more than the goal**: see above. The parts of it, for the demo lake left
  alone: advection and diffusion a quarter each, then conductance, stability, carbonate; what
  is found anew once a month adds a tenth, with a plant a third.
- **`solve_ivp` is quicker where all is smooth.** With a diffusivity that nothing changes, BDF
  with an exact Jacobian crosses thirty years in some hundred evaluations, whatever the column
  does in daily steps; where K follows stability the column gains from steps of five days on.
  Its error at a day is that of its layers, so a survey of a smooth lake may take long steps.
- **First order in time** where parts of a step take turns: streams and advection, then
  diffusion with the sources of the bed, then the surface. A spring that enters one thin layer
  leaves an error of the order of its flow in a step over that layer. `--check-step` shows
  what halving the step changes.
- **A saw-tooth under the open surface** where nothing at all mixes: 3 % of the step between
  two layers, some 15 layers deep. Any diffusivity of a lake removes it.
- **The staircase by pairs of layers** (`staircase_window_m` = 0) is not independent of layers
  under 1 m: the published law makes steps of the size of the layers where its density ratio is
  small. A window of some ten steps makes it independent, as above.
"""


def table(headings: list[str], rows: list[list[object]]) -> str:
    """Return a table in Markdown."""
    lines = [headings, ["---"] * len(headings), *rows]
    return "".join("| " + " | ".join(map(str, line)) + " |\n" for line in lines)


def order_text(errors: list[float], ratio: float) -> str:
    """Return observed orders as text."""
    return ", ".join(f"{order:.1f}" for order in paper.orders(errors, ratio))


def exact_rows() -> list[list[object]]:
    """Return a row for each case with a solution on paper."""
    rows: list[list[object]] = []

    def add(name: str, over: str, errors: list[float], ratio: float, unit: str) -> None:
        told = ", ".join(f"{error:.1e}" for error in errors)
        rows.append([name, over, told, unit, order_text(errors, ratio)])

    springs = [paper.two_springs(25, 0.4).worst, paper.two_springs(75, 0.1).worst]
    add("exponential profile between two springs", "25, 75 layers", springs, 3, "of 0.4")
    boxes = [paper.mixed_box(dt).worst for dt in (4.0, 2.0, 1.0)]
    add("mixed box, inflow and decay", "steps of 4, 2, 1 d", boxes, 2, "of 0.5")
    air = [paper.breathing_box(dt).worst for dt in (4.0, 2.0, 1.0)]
    add("mixed box, gas from the air", "steps of 4, 2, 1 d", air, 2, "mol/m3, of 0.28")
    cases = [paper.filling(n)[0] for n in (50, 100, 200)]
    mean = [float(np.abs(c.found - c.exact).mean()) for c in cases]
    add("layer filled by a seeping spring, mean error", "50, 100, 200 layers", mean, 2, "of 1")
    lines = [others.against_lines(n) for n in (50, 100, 200)]
    mean = [float(np.abs(c.found - c.exact).mean() / np.ptp(c.exact)) for c in lines]
    add("method of lines, BDF, mean difference", "50, 100, 200 layers", mean, 2, "of range")
    for diffusivity in (1e-8, 1e-9):
        moving = [others.moving_front(n, 30.0, diffusivity).worst for n in (100, 200)]
        name = f"layers that move with the water, K = {diffusivity:g} m2/s"
        add(name, "2 m, 1 m layers", moving, 2, "of 1")
    return rows


def front_rows() -> list[list[object]]:
    """Return a row for each front carried 100 m in 100 years."""
    cases = [
        ("even, 1 m", np.arange(0.0, 301.0, 1.0), 1e-9, 1e-10),
        ("even, 2 m", np.arange(0.0, 302.0, 2.0), 1e-8, 5e-11),
        ("1 m on its way, growing by 1.25 to 4 m", fronts.graded(), 1e-9, 1e-10),
    ]
    rows: list[list[object]] = []
    for name, faces, kappa, goal in cases:
        values, wanted, spurious, _ = fronts.front_run(faces, kappa)
        beyond = max(-values.min(), values.max() - 1.0, 0.0)
        worst = np.abs(values - wanted).max()
        rows.append(
            [
                name,
                f"{kappa:g}",
                f"{spurious:.1e}",
                f"{goal:g}",
                f"{worst:.1e}",
                f"{beyond:.0e}",
            ]
        )
    return rows


def speed() -> str:
    """Return what the benchmarks print."""
    paths = os.pathsep.join([str(TOP), str(TOP / "tests")])
    told = ""
    for name in ("column", "ode", "scaling"):
        script = TOP / "tests" / "benchmarks" / f"{name}.py"
        done = subprocess.run(
            [sys.executable, str(script)],
            env={**os.environ, "PYTHONPATH": paths},
            capture_output=True,
            text=True,
            check=True,
        )
        told += f"`tests/benchmarks/{name}.py`\n\n"
        told += "".join(f"- {line}\n" for line in done.stdout.splitlines()) + "\n"
    return SPEED + told


def main() -> None:
    """Write the page."""
    drift = paper.closed_column(36_525)
    worst = int(np.argmax(drift))
    heat = paper.bed_heat(64)
    flux = {layer: paper.staircase(layer) for layer in (0.5, 1.0, 2.0, 4.0)}
    pairs = {layer: paper.staircase(layer, window=0.0) for layer in (0.5, 1.0, 2.0, 4.0)}
    parts = [
        HEAD,
        "## Solutions on paper and by other ways\n",
        table(["case", "over", "largest error", "unit", "observed order"], exact_rows()),
        f"Steady heat of the bed: the straight line is met to {heat.worst:.1e} K of"
        f" {np.ptp(heat.exact):.2f} K. Diffusion in a cylinder and in a basin of linear area,"
        " and the order of the face values, stand in `tests/test_column_transport.py`.\n",
        "## A front carried 100 m in 100 years\n",
        table(
            ["layers", "K, m2/s", "spurious K, m2/s", "goal", "largest error", "new extreme"],
            front_rows(),
        ),
        "## Books\n",
        "A closed column that is stirred, overturned and diffused on uneven layers in 36,525"
        f" steps of a day changes no inventory by more than {drift[worst]:.1e}"
        f" ({TRACERS[worst]}); the goal is 1e-12.\n",
        "## The staircase on layers of any thickness\n",
        "Mean heat through a gradient 20 m thick over ten years, W/m2, density ratio 3.3,"
        " steps of 0.7 m:\n",
        table(
            ["layers, m", *(f"{layer:g}" for layer in flux), "largest over least"],
            [
                [
                    name,
                    *(f"{v:.4f}" for v in one.values()),
                    f"{max(one.values()) / min(one.values()):.2f}",
                ]
                for name, one in (("window of ten steps", flux), ("pairs of layers", pairs))
            ],
        ),
        speed(),
        TAIL,
    ]
    page = TOP / "docs" / "validation" / "numerics.md"
    page.write_text("\n".join(parts))
    print(page.relative_to(TOP))


if __name__ == "__main__":
    main()
