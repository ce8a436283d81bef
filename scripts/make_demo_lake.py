"""How the casts of the demo lake were made: its supply, run to a steady state, then measured.

Run from the checkout with ``python scripts/make_demo_lake.py``.  Starting from a rough guess,
the lake of ``profiles/lake.toml`` is brought to its steady state under its own climate,
springs and bed, until no tracer anywhere drifts by more than a small share of its range in a
century.  A survey is then drawn from that state as an instrument would see it: a CTD at 1 m
and water samples at some twenty depths, each with its noise.  Nothing in a projection pulls
the lake back to these casts.
"""

import argparse
import shutil
import tempfile
from itertools import pairwise
from pathlib import Path

import numpy as np
from scipy.interpolate import PchipInterpolator
from scipy.signal import find_peaks

import strata
from strata.column.column import Column
from strata.column.tracers import DIC, OXYGEN, SALINITY, TRACERS
from strata.compiled import broadcast
from strata.studies.steady import steady
from strata.water.density import in_situ_temperature
from strata.water.salinity import salinity_from_conductivity

HERE = Path(__file__).parent.parent / "profiles"
SEED = 20260101

#: A rough lake to begin with: foot of each body of water [m] and what it holds.
GUESS = [
    # foot, degC, g/kg, O2, CO2, alkalinity, CH4, N2, H2S, phosphate [mol or eq per m3]
    (50, 23.3, 1.15, 0.23, 0.02, 14.5, 0.0, 0.45, 0.0, 0.0005),
    (95, 22.7, 1.6, 0.0, 1.0, 20.0, 0.3, 0.55, 0.02, 0.005),
    (205, 23.0, 2.0, 0.0, 4.0, 25.0, 2.0, 0.6, 0.05, 0.01),
    (290, 24.2, 3.9, 0.0, 50.0, 48.0, 11.0, 0.7, 0.1, 0.03),
    (400, 25.4, 5.6, 0.0, 88.0, 70.0, 17.5, 0.8, 0.2, 0.05),
]
SAMPLES = ("CO2", "alkalinity", "CH4", "N2", "H2S", "phosphate")
#: Stated error of a sample: share of the value and least amount [mol or eq per m3], which is
#: also the least that the laboratory reports.
SAMPLE_ERROR = {
    "CO2": (0.012, 0.005),
    "alkalinity": (0.004, 0.02),
    "CH4": (0.015, 0.005),
    "N2": (0.015, 0.0),
    "H2S": (0.03, 0.0005),
    "phosphate": (0.02, 0.00005),
}
#: Most of a stated error is calibration, common to all depths; the rest differs by sample.
CALIBRATION, SCATTER = 0.8, 0.15
#: Errors of the probe, as the lake file states them.
TEMPERATURE_ERROR, CONDUCTIVITY_ERROR, OXYGEN_ERROR = (
    0.003,
    0.003,
    0.003,
)  # degC, mS/cm, mol/m3
FACTOR = 0.80  # g/kg per mS/cm at 25 degC, as the lake file states


def write_ctd(path: Path, depth, temperature, salinity, oxygen, day: str, rng=None) -> None:
    """Write a CTD cast, with the noise of the instrument where a generator is given."""
    conductivity = salinity / salinity_from_conductivity(
        np.ones_like(depth), temperature, FACTOR
    )
    if rng is not None:
        temperature = temperature + rng.normal(0, TEMPERATURE_ERROR, len(depth))
        conductivity = conductivity + rng.normal(0, CONDUCTIVITY_ERROR, len(depth))
        read = oxygen + rng.normal(0, OXYGEN_ERROR, len(depth))
        oxygen = np.where(read < 2 * OXYGEN_ERROR, 0.0, read)  # the optode's detection limit
    lines = [
        f"# Lake survey of {day}, invented: CTD lowered from the surface, averaged over 1 m",
        "# standard deviation of the instrument: see the lake file",
        "depth_m,temperature_degC,conductivity_mS_cm,O2_mol_m3",
    ]
    lines += [
        f"{z:g},{t:.4f},{c:.4f},{o:.4f}"
        for z, t, c, o in zip(depth, temperature, conductivity, oxygen, strict=True)
    ]
    path.write_text("\n".join(lines) + "\n")


def write_samples(path: Path, depth, values: dict[str, np.ndarray], day: str) -> None:
    """Write the water samples with the error of each."""
    units = {name: "eq_m3" if name == "alkalinity" else "mol_m3" for name in values}
    heads = ["depth_m"]
    for name in values:
        heads += [f"{name}_{units[name]}", f"{name}_error_{units[name]}"]
    lines = [
        f"# Lake survey of {day}, invented: water samples under pressure; CO2 is free CO2",
        ",".join(heads),
    ]
    for row, z in enumerate(depth):
        cells = [f"{z:g}"]
        for name, value in values.items():
            share, least = SAMPLE_ERROR[name]
            error = max(share * abs(value[row]), least)
            cells += [f"{value[row]:.4g}", f"{error:.2g}"]
        lines.append(",".join(cells))
    path.write_text("\n".join(lines) + "\n")


def write_guess(folder: Path, day: str) -> None:
    """Write casts of the rough lake, so that its file can be loaded."""
    depth = np.arange(0.0, 401.0, 1.0)
    feet = np.array([row[0] for row in GUESS])
    table = np.array([row[1:] for row in GUESS])
    profile = np.zeros((len(depth), table.shape[1])) + table[0]
    for upper, foot in enumerate(feet[:-1]):
        share = 0.5 * (1 + np.tanh((depth - foot) / 4.0))
        profile += share[:, None] * (table[upper + 1] - table[upper])
    write_ctd(folder / "ctd.csv", depth, *profile[:, :3].T, day)
    at = np.unique(
        np.r_[0.0, np.clip(np.r_[feet[:-1] - 8, feet[:-1], feet[:-1] + 8], 0, 400), 396]
    )
    samples = {name: np.interp(at, depth, profile[:, 3 + k]) for k, name in enumerate(SAMPLES)}
    write_samples(folder / "gas.csv", at, samples, day)


def sample_depths(column: Column) -> np.ndarray:
    """Return depths for water samples: across every gradient, and between them."""
    z, stability = column.basin.faces[1:-1], column.seen.stability[1:-1]
    peaks, _ = find_peaks(stability, prominence=1e-4, distance=5)
    wanted = [1.0, 20.0, 396.0]
    edges = []
    for peak in peaks:
        inside = np.flatnonzero(stability > 0.1 * stability[peak])
        near = inside[(inside > peak - 40) & (inside < peak + 40)]
        top, foot = z[near[0]], z[near[-1]]
        edges += [top, foot]
        wanted += [top - 2, z[peak] - 2, z[peak] + 2, foot + 2]
    edges = sorted([0.0, *edges, 400.0])
    wanted += [0.5 * (a + b) for a, b in pairwise(edges) if b - a > 25]
    depths = np.unique(np.round(np.clip(wanted, 1.0, 396.0)))
    keep = [depths[0]]
    for depth in depths[1:]:
        if depth - keep[-1] >= 3:
            keep.append(depth)
    return np.array(keep)


def survey(column: Column, folder: Path, day: str) -> None:
    """Draw the casts that a survey of a column would bring home."""
    rng = np.random.Generator(np.random.Philox(SEED))
    middle, values = column.basin.depth, column.values

    def at(depth, profile):
        return np.maximum(
            PchipInterpolator(middle, profile)(np.clip(depth, middle[0], middle[-1])), 0.0
        )

    depth = np.arange(0.0, 400.0, 1.0)
    in_situ = broadcast(in_situ_temperature)(values[:, 0], column.pressure)
    probe = [at(depth, of) for of in (in_situ, values[:, SALINITY], values[:, OXYGEN])]
    write_ctd(folder / "ctd.csv", depth, *probe, day, rng)
    where = sample_depths(column)
    taken = {}
    for name in SAMPLES:
        true = column.free_co2() if name == "CO2" else values[:, TRACERS.index(name)]
        share, least = SAMPLE_ERROR[name]
        exact = at(where, true)
        scale = 1.0 + CALIBRATION * share * rng.uniform(-1.0, 1.0)
        read = scale * exact + rng.normal(0, 1, len(where)) * SCATTER * np.maximum(
            share * exact, least
        )
        taken[name] = np.where(read < least, 0.0, read)
    write_samples(folder / "gas.csv", where, taken, day)


def main() -> None:
    """Make the casts of the demo lake."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--years", type=int, default=6000, help="longest spin-up")
    parser.add_argument("--out", type=Path, default=HERE, help="folder for the casts")
    parser.add_argument("--from", dest="state", type=Path, help="state (.npy) to go on from")
    parser.add_argument("--keep", type=Path, help="where to keep the steady state (.npy)")
    options = parser.parse_args()
    with tempfile.TemporaryDirectory() as folder:
        copy = Path(folder)
        shutil.copy(HERE / "lake.toml", copy)
        for extra in HERE.glob("*.csv"):
            shutil.copy(extra, copy)
        write_guess(copy, "2027-01-01")
        lake = strata.load_lake(copy / "lake.toml")
    start = np.load(options.state) if options.state else None
    found = steady(lake, most_years=options.years, tolerance=0.005, values=start)
    print(
        f"{found.years} years stand for {found.stands_for:.0f}; largest drift at the end"
        f" {100 * found.drift:.2f} % of a tracer's range per century"
    )
    column = Column(lake, found.values)
    if options.keep:
        np.save(options.keep, column.values)
    survey(column, options.out, lake.site.start.isoformat())
    print("DIC from", column.values[:, DIC].min(), "to", column.values[:, DIC].max(), "mol/m3")


if __name__ == "__main__":
    main()
