"""The clock of a projection: taken up again, and stopped by what must not go on."""

import os
import resource
import signal
import subprocess
import sys
import time
from datetime import date

import numpy as np
import pytest

import strata
from strata import clock, projection
from strata.column.column import Column
from strata.column.start import first_day
from strata.coupling import Fleet
from strata.errors import ComputationError, InputError
from strata.lake.climate import weather

RUN = """
import sys, strata
from strata import projection, results
projection.KEEP_EVERY = 0.0
lake = strata.load_lake(strata.demo_files() / "lake.toml")
plan = strata.load_plan(strata.demo_files() / "surface-return.toml", lake)
result = strata.project(lake, plan, years=4, checkpoint=sys.argv[1])
results.write(result, sys.argv[2])
"""


@pytest.fixture(scope="module")
def lake():
    return strata.load_lake(strata.demo_files() / "lake.toml")


@pytest.fixture(scope="module")
def plan(lake):
    return strata.load_plan(strata.demo_files() / "surface-return.toml", lake)


def same(first, second):
    """Hold two results against each other, bit for bit."""
    assert set(first.data_vars) == set(second.data_vars)
    for name in first.data_vars:
        assert np.array_equal(
            first[name].values, second[name].values, equal_nan=first[name].dtype.kind == "f"
        ), name


def test_a_run_killed_at_any_moment_goes_on_with_the_same_bytes(lake, plan, tmp_path):
    kept, out = tmp_path / "run.checkpoint", tmp_path / "run.nc"
    child = subprocess.Popen([sys.executable, "-c", RUN, str(kept), str(out)])
    deadline = time.monotonic() + 300
    while not kept.exists() and child.poll() is None and time.monotonic() < deadline:
        time.sleep(0.005)
    time.sleep(0.05)
    child.send_signal(signal.SIGKILL)
    child.wait()
    assert kept.exists()
    assert not out.exists()
    resumed = strata.project(lake, plan, years=4, checkpoint=kept)
    same(resumed, strata.project(lake, plan, years=4))
    assert [path.name for path in tmp_path.iterdir() if path.suffix != ".partial"] == [
        kept.name
    ]


def test_a_run_taken_up_at_every_month_in_turn_gives_the_same_bytes(
    lake, plan, tmp_path, monkeypatch
):
    monkeypatch.setattr(projection, "KEEP_EVERY", 0.0)
    kept = tmp_path / "run.checkpoint"

    class Stop(Exception):
        pass

    def stop(_):
        raise Stop

    while True:
        try:
            stepwise = strata.project(
                lake, plan, years=1.2, step_days=5, checkpoint=kept, progress=stop
            )
            break
        except Stop:
            pass
    same(stepwise, strata.project(lake, plan, years=1.2, step_days=5))


def test_a_checkpoint_of_another_run_is_refused_in_words(lake, plan, tmp_path):
    kept = tmp_path / "run.checkpoint"
    strata.project(lake, plan, years=0.2, checkpoint=kept)
    with pytest.raises(InputError, match="checkpoint of another run"):
        strata.project(lake, plan, years=0.2, step_days=5, checkpoint=kept)
    kept.write_bytes(b"something else")
    with pytest.raises(InputError, match="is no checkpoint"):
        strata.project(lake, plan, years=0.2, checkpoint=kept)
    assert kept.read_bytes() == b"something else"


def test_a_full_disk_loses_nothing_and_is_named(lake, tmp_path):
    kept = tmp_path / "run.checkpoint"
    pid = os.fork()
    if pid == 0:  # a child, since the limit on file size stays with a process
        signal.signal(signal.SIGXFSZ, signal.SIG_IGN)
        resource.setrlimit(resource.RLIMIT_FSIZE, (4096, 4096))
        try:
            strata.project(lake, years=0.2, step_days=5, checkpoint=kept)
        except InputError as error:
            os._exit(0 if "cannot be written" in str(error) else 3)
        finally:
            os._exit(4)
    assert os.waitstatus_to_exitcode(os.waitpid(pid, 0)[1]) == 0
    assert list(tmp_path.iterdir()) == []


def test_a_value_that_is_no_number_stops_the_run_with_date_depth_and_tracer(lake):
    values = first_day(lake)
    column = Column(lake, values)
    layer = column.basin.layer_at(250.0)
    column.values[layer, 5] = np.nan
    span = clock.Span(date(2030, 3, 1), date(2030, 4, 1), True)
    with pytest.raises(ComputationError, match=r"CH4 at 2\d\d\.\d m is no longer a number"):
        projection.carry_on(column, Fleet(None, lake), span, lake.site.start, 1.0)


def test_the_date_stands_in_the_message_of_a_run_that_stops(lake, monkeypatch):
    def spoil(climate, day, begin, seed=0):
        found = weather(climate, day, begin, seed)
        return (
            found
            if day < date(2027, 4, 1)
            else type(found)(**{**vars(found), "wind_speed": np.nan})
        )

    monkeypatch.setattr(projection, "weather", spoil)
    with pytest.raises(
        ComputationError, match=r"2027-04-01 to 2027-05-01: .* no longer a number"
    ):
        strata.project(lake, years=1, step_days=5)


@pytest.mark.parametrize(("years", "step"), [(0, 1), (-1, 1), (5000, 1), (1, 0), (1, 60)])
def test_horizons_and_steps_out_of_range_are_refused(lake, years, step):
    with pytest.raises(strata.OutOfRangeError, match="are allowed"):
        strata.project(lake, years=years, step_days=step)


def test_months_are_calendar_months_and_years_are_whole():
    begin = date(2028, 1, 1)
    spans = clock.spans(begin, clock.add_years(begin, 4), [date(2028, 2, 10)])
    assert sum(span.days for span in spans) == 4 * 365 + 1
    assert [span.end for span in spans[:3]] == [
        date(2028, 2, 1), date(2028, 2, 10), date(2028, 3, 1)
    ]  # fmt: skip
    assert [span.output for span in spans[:3]] == [True, False, True]
    assert clock.add_years(date(2028, 2, 29), 1) == date(2029, 3, 1)


@pytest.mark.long
def test_a_run_of_five_centuries_closes_its_books(lake):
    result = strata.project(lake, years=500, step_days=31)
    assert str(result["time"].values[-1])[:4] == "2527"
    assert result["ledger_error"].values.max() <= 1e-10
