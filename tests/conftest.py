"""Small files of an invented lake, written afresh for each test that spoils them."""

from pathlib import Path

import numpy as np
import pytest

LAKE = """\
[site]
name = "Test lake"
air_pressure_bar = 0.86
latitude_deg = 3.0
start = 2027-01-01

[basin]
depth_m = [0, 100, 200, 300, 400]
area_km2 = [900, 700, 530, 330, 0]

[[cast]]
file = "ctd.csv"
error.temperature_degC = 0.005
error.salinity_g_kg = 0.005

[[cast]]
file = "gas.csv"

[climate]
equilibrium_temperature_degC = [23, 23, 23, 23, 23, 23, 23, 23, 23, 23, 23, 23]
exchange_coefficient_W_m2_K = [30, 30, 30, 30, 30, 30, 30, 30, 30, 30, 30, 30]
wind_speed_m_s = [3, 3, 3, 3, 3, 3, 3, 3, 3, 3, 3, 3]
rain_mm_day = [3, 3, 3, 3, 3, 3, 3, 3, 3, 3, 3, 3]
evaporation_mm_day = [4, 4, 4, 4, 4, 4, 4, 4, 4, 4, 4, 4]

[[spring]]
name = "deep"
depth_m = 386
flow_m3_s = 3.0
temperature_degC = 25.8
salinity_g_kg = 5.8
DIC_mol_m3 = 164
alkalinity_eq_m3 = 72
CH4_mol_m3 = 15.5

[[river]]
name = "rivers"
flow_m3_s = 60.0
temperature_degC = 22.0
salinity_g_kg = 0.3
DIC_mol_m3 = 3.0
alkalinity_eq_m3 = 3.0

[[bed]]
tracer = "heat"
top_m = 0
foot_m = 400
flux_W_m2 = 0.04

[mixing]
coefficient_m2_s2 = 2.8e-9
least_m2_s = 1e-9
most_m2_s = 1e-6
staircase_step_m = 0.7

[grid]
layer_m = 8.0

[[grid.zone]]
top_m = 180
foot_m = 240
layer_m = 4.0
"""

PLAN = """\
name = "test plan"

[[plant]]
name = "north"
intake_depth_m = 345
flow_m3_s = 6.0
start = 2028-01-01

[[plant.stage]]
pressure_bar = 2.0

[plant.return]
depth_m = 275
ports = 100
"""

LIMITS = """\
name = "test limits"
invented = true
source = "made up for a test"

[[limit]]
quantity = "largest_saturation"
at_most = 0.9

[[limit]]
quantity = "gradient_sinking_m"
at_most = 20
"""


def step(depth, middle, width):
    """Return a smooth step from 0 to 1."""
    return 0.5 * (1 + np.tanh((depth - middle) / width))


def write_casts(folder: Path) -> None:
    """Write casts of a lake that stands firm and is half saturated at depth."""
    z = np.arange(0.0, 401.0, 2.0)
    temperature = 23.4 - 0.8 * step(z, 62, 6) + 2.1 * step(z, 205, 5) + 0.9 * step(z, 290, 6)
    salinity = (
        1.2 + 2e-4 * z + 0.5 * step(z, 62, 6) + 0.3 * step(z, 95, 6)
        + 2.0 * step(z, 205, 5) + 1.6 * step(z, 290, 6)
    )  # fmt: skip
    rows = [f"{a:g},{b:.4f},{c:.4f}" for a, b, c in zip(z, temperature, salinity, strict=True)]
    head = "# CTD of the test lake\ndepth_m,temperature_degC,salinity_g_kg"
    (folder / "ctd.csv").write_text("\n".join([head, *rows]) + "\n")
    z = np.array([0, 20, 40, 60, 80, 100, 130, 160, 190, 200, 210, 220, 250, 280, 290, 300])
    z = np.append(z, [320, 350, 380, 398.0])
    columns = {
        "CH4_mol_m3": 2 * step(z, 95, 10) + 8 * step(z, 205, 6) + 6 * step(z, 290, 8),
        "DIC_mol_m3": 15 + 9 * step(z, 95, 10) + 70 * step(z, 205, 6) + 55 * step(z, 290, 8),
        "alkalinity_eq_m3": 15 + 6 * step(z, 95, 10) + 26 * step(z, 205, 6)
        + 20 * step(z, 290, 8),
    }  # fmt: skip
    head = ["depth_m"]
    cells = [[f"{value:g}" for value in z]]
    for name, values in columns.items():
        quantity, unit = name.split("_", 1)
        head += [name, f"{quantity}_error_{unit}"]
        cells += [[f"{v:.4f}" for v in values], [f"{0.03 * v:.4f}" for v in values]]
    lines = [",".join(row) for row in zip(*cells, strict=True)]
    (folder / "gas.csv").write_text("\n".join([",".join(head), *lines]) + "\n")


class Folder:
    """A folder with a lake, its casts, a plan and limits, to spoil by replacing text."""

    def __init__(self, path: Path) -> None:
        self.path = path
        self.lake = path / "lake.toml"
        self.plan = path / "plan.toml"
        self.limits = path / "limits.toml"
        self.ctd = path / "ctd.csv"
        self.gas = path / "gas.csv"
        self.lake.write_text(LAKE)
        self.plan.write_text(PLAN)
        self.limits.write_text(LIMITS)
        write_casts(path)

    @staticmethod
    def spoil(file: Path, old: str, new: str) -> None:
        """Replace the first occurrence of a text that must be there."""
        text = file.read_text()
        assert old in text, f"{old!r} is not in {file.name}"
        file.write_text(text.replace(old, new, 1))

    @staticmethod
    def rewrite(file: Path, line: int, new: str | None) -> None:
        """Replace or (None) take out a line, counted from 1."""
        lines = file.read_text().splitlines()
        lines[line - 1 : line] = [] if new is None else [new]
        file.write_text("\n".join(lines) + "\n")


@pytest.fixture
def folder(tmp_path, monkeypatch):
    """Return a sound set of input files; messages name them without their folder."""
    monkeypatch.chdir(tmp_path)
    return Folder(Path())


@pytest.fixture(scope="session")
def sound_lake(tmp_path_factory):
    """Return the test lake, loaded once."""
    from strata.inputs import load_lake

    return load_lake(Folder(tmp_path_factory.mktemp("lake")).lake)
