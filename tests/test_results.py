"""A result carries its margins, and its file is complete, standard and safe."""

import subprocess
import sys
from pathlib import Path

import netCDF4
import numpy as np
import pytest
import synthetic
import xarray as xr

import strata
from strata import results
from strata.errors import InputError
from strata.variables import COORDINATES, PLANT_SERIES, VARIABLES


@pytest.fixture(scope="module")
def lake():
    return synthetic.lake(120)


@pytest.fixture(scope="module")
def record(lake):
    return synthetic.record(lake, years=6.0, sinking=0.6, drain=0.3)


@pytest.fixture(scope="module")
def result(lake, record):
    return results.dataset(record, lake, synthetic.plan())


@pytest.fixture(scope="module")
def stored(result, tmp_path_factory):
    path = tmp_path_factory.mktemp("results") / "run.nc"
    results.write(result, path)
    return path


def test_every_variable_of_the_table_is_in_a_result_with_its_words(result):
    for name, words in VARIABLES.items():
        assert result[name].dims == words.dims, name
        assert result[name].attrs["long_name"] == words.long_name
        assert result[name].attrs["units"] == words.unit


def test_tags_and_series_of_plants_are_in_a_result(result):
    assert result["tag_return_of_north"].dims == ("time", "depth")
    assert float(result["plant_flow"].sel(plant="north")[-1]) == 12.0
    known = {f"plant_{name}" for name in PLANT_SERIES}
    assert {str(name) for name in result if str(name).startswith("plant_")} <= known


def test_extremes_are_those_of_the_profiles_below_the_surface_layer(result):
    surface = result["surface_layer_depth"].values[:, np.newaxis]
    deep = result["face"].values[:-1] >= surface - 1e-6
    saturation = np.where(deep, result["saturation"].values, -1.0)
    np.testing.assert_array_equal(result["largest_saturation"], saturation.max(axis=1))
    margin = np.where(deep, result["pressure_margin"].values, np.inf)
    np.testing.assert_array_equal(result["least_pressure_margin"], margin.min(axis=1))
    assert (result["largest_saturation_depth"].values > 200.0).all()


def test_saturation_margin_and_gas_pressure_say_the_same(result):
    from_saturation = result["pressure"].values * (1.0 - result["saturation"].values)
    np.testing.assert_allclose(result["pressure_margin"], from_saturation, atol=1e-6)


def test_the_main_gradient_of_the_made_up_lake_is_found_and_followed(result):
    years = np.arange(73) / 12.0
    np.testing.assert_allclose(result["gradient_depth"], 205.0 + 0.6 * years, atol=0.6)


def test_zones_hold_all_the_gas(result):
    for gas in ("methane", "carbon_dioxide"):
        np.testing.assert_allclose(
            result[f"{gas}_in_zone"].sum("zone"), result[f"{gas}_in_place"], rtol=1e-12
        )


def test_the_books_in_the_result_add_up_to_what_is_there(result):
    there = result["ledger"].sum("ledger_term").sel(tracer="CH4")
    np.testing.assert_allclose(there, result["methane_in_place"], rtol=1e-12)


def test_cast_errors_reach_gas_pressure_in_proportion(lake, result):
    at = int(np.searchsorted(result["depth"], 320.0))
    partial = {
        gas: float(result[f"{gas}_partial_pressure"][0, at])
        for gas in ("methane", "carbon_dioxide")
    }
    methane = 0.03 + 0.02 / float(result["methane"][0, at])
    carbon = np.hypot(
        0.02 * float(result["dissolved_inorganic_carbon"][0, at]),
        0.01 * float(result["alkalinity"][0, at]),
    ) / float(result["carbon_dioxide"][0, at])
    whole = np.hypot(methane * partial["methane"], carbon * partial["carbon_dioxide"])
    expected = whole / float(result["gas_pressure"][0, at])
    assert float(result["gas_pressure_error"][at]) == pytest.approx(expected, rel=0.02)


def test_a_file_reads_back_as_it_was(result, stored):
    back = results.read(stored)
    assert set(back.variables) == set(result.variables)
    assert back["time"].dtype == np.dtype("datetime64[s]")
    np.testing.assert_array_equal(back["time"], result["time"])
    np.testing.assert_array_equal(back["ledger"], result["ledger"])  # in full, not packed
    np.testing.assert_allclose(back["methane"], result["methane"], rtol=1e-6, atol=1e-6)
    assert back.attrs == result.attrs
    assert back["zone"].values.tolist() == list(results.ZONES)


def test_xarray_alone_opens_a_file(result, stored):
    with xr.open_dataset(stored) as plain:
        assert plain["time"].values[0] == np.datetime64("2030-01-01")
        assert plain.sizes == result.sizes


def test_runs_past_the_year_2262_read_back(lake, tmp_path):
    record = synthetic.record(lake, years=2.0)
    late = (record.time + np.timedelta64(400 * 365, "D")).astype("datetime64[s]")
    far = results.dataset(
        type(record)(**{**record.__dict__, "time": late}), lake, synthetic.plan()
    )
    results.write(far, tmp_path / "far.nc")
    np.testing.assert_array_equal(results.read(tmp_path / "far.nc")["time"], late)


def test_time_depth_and_temperature_are_encoded_as_the_convention_asks(stored):
    with netCDF4.Dataset(stored) as file:
        assert file.data_model == "NETCDF4"
        assert file.Conventions == "CF-1.11"
        time = file["time"]
        assert time.dtype == np.float64
        assert time.units == "seconds since 1970-01-01"
        assert time.calendar == "standard"
        assert time.units_metadata == "leap_seconds: none"
        assert file["depth"].positive == "down"
        assert file["depth"].bounds == "depth_bounds"
        assert "featureType" not in file.ncattrs()
        assert file["temperature"].units == "degree_C"
        assert file["temperature"].units_metadata == "temperature: on_scale"
        assert file["methane"].dtype == np.float32
        for name in file.variables:
            if "sea_water" in getattr(file[name], "standard_name", ""):
                assert "lake water" in file[name].comment, name


def test_the_file_says_from_what_it_was_made_and_carries_the_caution(lake, stored):
    import hashlib

    attributes = results.read(stored).attrs
    assert attributes["comment"] == strata.CAUTION
    assert attributes["strata_version"] == strata.__version__
    assert attributes["option_seed"] == 0
    named = {attributes[f"input_{n}_name"]: n for n in (1, 2, 3)}
    for file, text in {**lake.texts, **synthetic.plan().texts}.items():
        number = named[file]
        assert attributes[f"input_{number}_text"] == text
        digest = hashlib.sha256(text.encode()).hexdigest()
        assert attributes[f"input_{number}_sha256"] == digest


def test_the_same_result_gives_the_same_bytes(result, stored, tmp_path):
    again = tmp_path / "again.nc"
    results.write(result, again)
    assert again.read_bytes() == Path(stored).read_bytes()


def test_a_failed_write_leaves_the_old_file_and_no_half_one(result, tmp_path, monkeypatch):
    path = tmp_path / "run.nc"
    path.write_text("old")

    def full(self, target, **kwargs):
        Path(target).write_text("half")
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(xr.Dataset, "to_netcdf", full)
    with pytest.raises(InputError, match="cannot be written: No space left on device"):
        results.write(result, path)
    assert path.read_text() == "old"
    assert [file.name for file in tmp_path.iterdir()] == ["run.nc"]


def test_what_is_no_result_is_refused_in_words(tmp_path):
    with pytest.raises(InputError, match="cannot be read"):
        results.read(tmp_path / "nowhere.nc")
    (tmp_path / "text.nc").write_text("not a dataset")
    with pytest.raises(InputError, match="cannot be read"):
        results.read(tmp_path / "text.nc")
    xr.Dataset({"wind": ("x", [1.0])}).to_netcdf(tmp_path / "other.nc")
    with pytest.raises(InputError, match="is no result of strata: it lacks"):
        results.read(tmp_path / "other.nc")


def test_the_checker_of_the_convention_has_no_finding(stored, tmp_path):
    report = tmp_path / "report.txt"
    checker = Path(sys.executable).with_name("compliance-checker")
    if not checker.exists():
        pytest.skip("compliance-checker is not installed")
    command = [
        checker,
        "--test=cf:1.11",
        "--criteria=strict",
        "-f",
        "text",
        "-o",
        report,
        stored,
    ]
    done = subprocess.run(command, capture_output=True, text=True, check=False)
    text = report.read_text()
    assert done.returncode == 0, text
    assert "All tests passed!" in text, text


def test_the_page_on_results_lists_every_variable():
    page = (Path(__file__).parent.parent / "docs/reference/results.md").read_text()
    for name in [*COORDINATES, *VARIABLES, *(f"plant_{name}" for name in PLANT_SERIES)]:
        assert f"`{name}`" in page, name
