"""The one pool: independent jobs on the processors of this machine."""

import os
import sys
import threading
from collections.abc import Callable, Mapping, Sequence
from concurrent.futures import Future, ProcessPoolExecutor
from functools import partial
from multiprocessing import get_context
from typing import Any, TypeVar

import xarray as xr

from strata.lake.site import Lake
from strata.plant.plan import Plan
from strata.projection import project

T = TypeVar("T")

#: A job takes a function to report its share done, and returns its result.
Job = Callable[[Callable[[float], None]], T]

_reports: Any = None  # in a worker: the queue that progress goes to


def run(
    jobs: Sequence[Job[T]],
    progress: Callable[[float], None] | None = None,
    workers: int | None = None,
) -> list[T]:
    """Run jobs and return their results in their order.

    Parameters
    ----------
    jobs : sequence of callable
        Each can be pickled (``functools.partial`` of a function of a module) and takes a
        function that it may call with its share done.
    progress : callable, optional
        Called with the share of all work done, 0 to 1.
    workers : int, optional
        Number of processes; as many as processors by default, with 1 the jobs run here.
    """
    shares = [0.0] * len(jobs)

    def note(number: int, share: float) -> None:
        shares[number] = share
        if progress is not None:
            progress(sum(shares) / len(shares))

    workers = min(workers or usable_processors(), len(jobs))
    if workers <= 1:
        return [job(_Reporter(note, number)) for number, job in enumerate(jobs)]
    return _run_in_processes(jobs, note, workers)


def projection(lake: Lake, plan: Plan | None, **options: Any) -> Job[xr.Dataset]:
    """Return a projection as a job: :func:`strata.project` with these options."""
    return partial(_project, lake, plan, options)


def _project(
    lake: Lake,
    plan: Plan | None,
    options: Mapping[str, Any],
    progress: Callable[[float], None],
) -> xr.Dataset:
    return project(lake, plan, progress=progress, **options)


def usable_processors() -> int:
    """Return the number of processors this process may use."""
    if hasattr(os, "sched_getaffinity"):
        return len(os.sched_getaffinity(0))
    return os.cpu_count() or 1


class _Reporter:
    """Reports the share done of one job."""

    def __init__(self, note: Callable[[int, float], None], number: int) -> None:
        self._note, self._number = note, number

    def __call__(self, share: float) -> None:
        self._note(self._number, share)


def _run_in_processes(
    jobs: Sequence[Job[T]], note: Callable[[int, float], None], workers: int
) -> list[T]:
    """Run jobs in processes, and pass their progress on from a thread."""
    context = get_context(_start_method())
    queue = context.Queue()

    def listen() -> None:
        while (report := queue.get()) is not None:
            note(*report)

    listener = threading.Thread(target=listen, daemon=True)
    try:
        with ProcessPoolExecutor(
            workers, mp_context=context, initializer=_receive, initargs=(queue,)
        ) as pool:
            futures: list[Future[T]] = [
                pool.submit(_work, job, number) for number, job in enumerate(jobs)
            ]
            listener.start()
            try:
                return [future.result() for future in futures]
            except BaseException:
                pool.shutdown(wait=False, cancel_futures=True)
                raise
    finally:
        queue.put(None)
        if listener.is_alive():
            listener.join(timeout=5)


def _start_method() -> str:
    """Return how workers begin: as copies where that is safe, clean otherwise.

    A copy has all that is imported and compiled at hand, which saves seconds; a process with
    more threads than one must not be copied.
    """
    alone = threading.active_count() == 1
    return "fork" if alone and sys.platform == "linux" else "spawn"


def _receive(queue: Any) -> None:
    """Keep the queue of the pool in a new worker."""
    global _reports
    _reports = queue


def _work(job: Job[T], number: int) -> T:
    """Run one job in a worker."""
    return job(_Reporter(lambda place, share: _reports.put((place, share)), number))
