"""One pool for all studies: results in order, one progress, errors whole."""

from functools import partial

import pytest

from strata.errors import Fault, InputError, StrataError
from strata.studies import pool
from strata.studies.compare import compare


def job(value, report):
    report(0.5)
    report(1.0)
    return value * value


def refuse(report):
    raise InputError([Fault("a.toml", "b", "is 1"), Fault("a.toml", "c", "is 2")])


@pytest.mark.parametrize("workers", [1, 2])
def test_results_come_in_the_order_of_the_jobs(workers):
    assert pool.run([partial(job, n) for n in range(5)], workers=workers) == [0, 1, 4, 9, 16]


@pytest.mark.parametrize("workers", [1, 2])
def test_progress_is_that_of_all_jobs_together(workers):
    seen = []
    pool.run([partial(job, n) for n in range(3)], seen.append, workers)
    assert seen[-1] == pytest.approx(1.0)
    assert sorted(seen) == seen
    assert len(seen) == 6


@pytest.mark.parametrize("workers", [1, 2])
def test_an_error_of_a_job_keeps_all_its_faults(workers):
    with pytest.raises(InputError) as caught:
        pool.run([partial(job, 1), refuse], workers=workers)
    assert [fault.place for fault in caught.value.faults] == ["b", "c"]


def test_no_more_processes_than_jobs_are_started(monkeypatch):
    monkeypatch.setattr(
        pool, "_run_in_processes", lambda *_: pytest.fail("a process for one job")
    )
    assert pool.run([partial(job, 3)], workers=8) == [9]


def test_a_comparison_needs_different_names(folder, sound_lake):
    from strata.inputs import load_plan

    plan = load_plan(folder.plan)
    with pytest.raises(StrataError, match="must bear different names"):
        compare(sound_lake, [plan, plan])


def test_a_comparison_is_the_same_on_one_processor_and_on_two(folder, sound_lake):
    from strata.inputs import load_limits, load_plan

    plan, limits = load_plan(folder.plan), load_limits(folder.limits)
    options = {"years": 0.25, "step_days": 5}
    one = compare(sound_lake, [plan], limits, workers=1, **options)
    two = compare(sound_lake, [plan], limits, workers=2, **options)
    assert list(one.results) == list(two.results) == ["lake left alone", "test plan"]
    for name, result in one.results.items():
        assert result.identical(two.results[name])
    assert one.verdicts == two.verdicts
    assert not one.breached
