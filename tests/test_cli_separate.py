"""``strata separate`` on a small lake: tables, numbers, files, refusals."""

import json
import subprocess
import sys
from pathlib import Path

import pytest
import xarray as xr
from click.testing import CliRunner

from strata.caution import CAUTION
from strata.cli.group import group

WASHED = """
[plant.wash]
pressure_bar = 8
water_flow_m3_s = 2
water_depth_m = 60
"""


RISER = """
[plant.riser]
bore_m = 0.8
pipes = 4
"""


def run(*arguments):
    return CliRunner().invoke(group, ["separate", *map(str, arguments)])


def washed(folder):
    folder.spoil(folder.plan, "pressure_bar = 2.0", 'pressure_bar = 2.0\ngas_to = "wash"')
    folder.plan.write_text(folder.plan.read_text() + WASHED)


def test_every_sweep_is_told_with_the_caution(folder):
    washed(folder)
    result = run(folder.lake, folder.plan)
    assert result.exit_code == 0, result.stderr
    text = " ".join(result.stdout.split())
    for part in ("product, power and air", "streams of water", "CO2 free", "CO2 bound",
                 "Best pressure of one separator", "best pair of pressures", "Wash water",
                 "Lime, the rest as planned", "1 K cooler", "a quarter of the ports"):  # fmt: skip
        assert part in text
    assert CAUTION in result.stdout
    longest = max(result.stdout.splitlines()[:-1], key=len)
    assert len(longest) < 140, longest


def test_a_script_gets_every_number_with_its_unit(folder):
    numbers = json.loads(run(folder.lake, folder.plan, "--json").stdout)
    (plant,) = numbers["plants"]
    assert (numbers["plan"], plant["plant"]) == ("test plan", "north")
    sweeps = plant["sweeps"]
    assert list(sweeps) == ["pressure", "two_pressures", "lime", "outlets"]
    assert sweeps["pressure"]["pressure_Pa"]["dimensions"] == ["pressure"]
    pressures = sweeps["pressure"]["pressure_Pa"]["values"]
    free, bound = sweeps["pressure"]["net_energy_J_m3"]["values"]
    for values in (free, bound):  # the best lies strictly inside
        assert 0 < values.index(max(values)) < len(pressures) - 1
    assert pressures[bound.index(max(bound))] < pressures[free.index(max(free))]
    assert max(map(abs, plant["balance"].values())) < 1e-10
    assert plant["streams"][0]["flow_m3_s"] == pytest.approx(6.0)
    assert numbers["caution"] == CAUTION


def risen(folder, pressure):
    """Return text and numbers of the plant with a riser to a separator at a pressure [bar]."""
    folder.spoil(folder.plan, "pressure_bar = 2.0", f"pressure_bar = {pressure}")
    folder.plan.write_text(folder.plan.read_text() + RISER)
    text = run(folder.lake, folder.plan, "-o", "out").stdout
    numbers = json.loads(Path("out/separate.json").read_text())
    return " ".join(text.split()), numbers["plants"][0]


def test_a_riser_that_lifts_itself_is_told_with_its_numbers(folder):
    text, plant = risen(folder, 0.5)
    riser = plant["riser"]
    assert "test plan, north: riser, 4 pipes of 0.8 m, with today's feed." in text
    assert riser["self_lifted_m3_s"] > 6.0 > 0.0 > riser["pump_pressure_bar"]
    assert (
        f"Its gas alone lifts {riser['self_lifted_m3_s']:.2f} m³/s up to the 0.5 bar" in text
    )
    assert f"no pump runs; {-riser['pump_pressure_bar']:.2f} bar is throttled" in text
    assert f"first bubble at m {riser['bubble_depth_m']:.1f}" in text
    assert riser["pump_power_MW"] == 0.0
    along = riser["along"]
    assert along["depth_m"][0] == 345.0
    assert along["depth_m"][-1] == pytest.approx(0.0, abs=1e-6)
    assert along["pressure_Pa"][-1] == pytest.approx(0.5e5)
    assert along["void"][-1] == riser["top_void"] > along["void"][0] == 0.0
    # what the table shows last is the top of the pipe
    shown = f"0.0 0.50 {riser['top_void']:.3f} {riser['top_water_velocity_m_s']:.2f}"
    assert shown in text


def test_a_riser_that_cannot_lift_itself_is_told_in_plain_words(folder):
    text, plant = risen(folder, 4.0)
    riser = plant["riser"]
    assert riser["self_lifted_m3_s"] == 0.0
    assert (
        "It does not lift itself: without a pump no water comes up to the 4 bar of the first"
        f" separator. For the 6 m³/s asked for a pump adds {riser['pump_pressure_bar']:.2f} bar,"
    ) in text
    assert (
        f"To start it from a still pipe takes {riser['startup_pressure_bar']:.2f} bar" in text
    )
    # the plant's pumps do that and, with a last stage above the air, nothing else
    assert plant["power_W"]["pump"] / 1e6 == pytest.approx(riser["pump_power_MW"], rel=2e-3)


def test_a_plant_without_a_riser_has_none_to_show(folder):
    assert "riser" not in run(folder.lake, folder.plan, "-o", "out").stdout
    numbers = json.loads(Path("out/separate.json").read_text())
    assert numbers["plants"][0]["riser"] is None
    assert not Path("out/north-riser.png").exists()


def test_figures_sweeps_and_numbers_are_written_and_may_be_written_again(folder):
    washed(folder)
    folder.plan.write_text(folder.plan.read_text() + RISER)
    for _ in range(2):
        result = run(folder.lake, folder.plan, "-o", "out")
        assert result.exit_code == 0, result.stderr
    swept = ("lime", "pressure", "two-pressures", "wash")
    names = {f"north-{name}.{kind}" for name in swept for kind in ("png", "nc")}
    names |= {"north-diagram.png", "north-riser.png", "north-outlets.nc", "separate.json"}
    assert {path.name for path in Path("out").iterdir()} == names
    for path in Path("out").iterdir():
        assert CAUTION.encode() in path.read_bytes()
    numbers = json.loads(Path("out/separate.json").read_text())
    stored = xr.open_dataset("out/north-pressure.nc")
    sweep = numbers["plants"][0]["sweeps"]["pressure"]
    assert stored["recovery"].values.tolist() == sweep["recovery"]["values"]
    assert stored["case"].values.tolist() == ["CO2 free", "CO2 bound"]


def test_written_sweeps_follow_the_cf_conventions(folder):
    checker = Path(sys.executable).with_name("compliance-checker")
    if not checker.exists():
        pytest.skip("compliance-checker is not installed")
    assert run(folder.lake, folder.plan, "-o", "out").exit_code == 0
    files = sorted(map(str, Path("out").glob("*.nc")))
    command = [checker, "--test=cf:1.11", "--criteria=strict", *files]
    done = subprocess.run(command, capture_output=True, text=True, check=False)
    assert done.stdout.count("All tests passed!") == len(files) == 4, done.stdout


def test_one_plant_is_chosen_by_its_name_and_an_unknown_one_refused(folder):
    second = folder.plan.read_text().replace('name = "test plan"', "")
    second = second.replace('name = "north"', 'name = "south"')
    folder.plan.write_text(folder.plan.read_text() + second)
    numbers = json.loads(run(folder.lake, folder.plan, "--plant", "south", "--json").stdout)
    assert [plant["plant"] for plant in numbers["plants"]] == ["south"]
    result = run(folder.lake, folder.plan, "--plant", "sooth")
    assert (result.exit_code, result.stdout) == (2, "")
    assert "did you mean south" in result.stderr


def test_bad_input_and_output_in_the_way_are_refused_before_any_sweep(folder):
    mine = Path("out/north-pressure.png")
    mine.parent.mkdir()
    mine.write_text("mine")
    result = run(folder.lake, folder.plan, "-o", "out")
    assert result.exit_code == 2
    assert "north-pressure.png: exists and was not written by strata" in result.stderr
    assert mine.read_text() == "mine"
    folder.spoil(folder.plan, "intake_depth_m = 345", "intake_depth_m = 445")
    result = run(folder.lake, folder.plan)
    assert (result.exit_code, result.stdout) == (2, "")
    message = "plan.toml: plant.north.intake_depth_m is 445; the lake floor is at 400 m"
    assert message in result.stderr
    assert run(folder.lake, "nowhere.toml").exit_code == 2
    assert "Traceback" not in run(folder.lake, "nowhere.toml").stderr
