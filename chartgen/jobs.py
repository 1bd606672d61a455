"""Who does the work: pieces of work with a key from their content, spread over the cores.

In: functions and their arguments. Out: their results, in the order asked for, whoever finished first.
It must not know what the work is.

Equal pieces of work are done once. Results do not depend on the number of workers.
"""

from __future__ import annotations

import contextlib
import ctypes
import dataclasses
import gc
import hashlib
import multiprocessing
import os
import signal
import sys
import warnings
from collections.abc import Callable, Iterator, Mapping, Sequence
from concurrent.futures import Future, ProcessPoolExecutor, as_completed
from concurrent.futures.process import BrokenProcessPool
from dataclasses import dataclass
from datetime import date
from typing import Any, Generic, TypeVar

from chartgen.errors import MachineFault

T = TypeVar("T")
_PR_SET_PDEATHSIG = 1
# Layout makes millions of small objects and drops them by count, not by cycle: looking for cycles less often makes the
# PDFs a quarter to a third faster at half as much memory again (measured; see benchmarks/build_time.py).
_COLLECT_AFTER = 100_000


@dataclass(frozen=True, slots=True, kw_only=True)
class Job(Generic[T]):
    """One piece of work: ``work(*args)``. `key`: the `content_key` of all that the result depends on; equal keys give
    equal results. `weight`: how long it takes beside the others; long ones start first."""

    name: str
    key: str
    work: Callable[..., T]
    args: tuple[Any, ...]
    weight: float = 1.0


def content_key(*parts: object) -> str:
    """SHA-256 of plain values: text, bytes, numbers, dates, None, sequences, mappings, dataclasses. Else TypeError."""
    hasher = hashlib.sha256()
    _feed(hasher.update, parts)
    return hasher.hexdigest()


def _feed(update: Callable[[bytes], None], value: object) -> None:
    # Kind and length before each value, so that no two different values make the same stream of bytes.
    if isinstance(value, bytes | str):
        data = value if isinstance(value, bytes) else value.encode()
        update(f"{type(value).__name__}{len(data)}:".encode() + data)
    elif value is None or isinstance(value, bool | int | float | date):
        update(f"{type(value).__name__}:{value!r};".encode())
    elif isinstance(value, tuple | list):
        update(f"sequence{len(value)}:".encode())
        for item in value:
            _feed(update, item)
    elif isinstance(value, Mapping):
        update(f"mapping{len(value)}:".encode())
        for name in sorted(value):
            _feed(update, name)
            _feed(update, value[name])
    elif dataclasses.is_dataclass(value) and not isinstance(value, type):
        update(f"record:{type(value).__qualname__};".encode())
        for part in dataclasses.fields(value):
            _feed(update, getattr(value, part.name))
    else:
        raise TypeError(f"no content key for a {type(value).__name__}")


def cores() -> int:
    """How many processes this one may keep busy."""
    if hasattr(os, "sched_getaffinity"):
        return len(os.sched_getaffinity(0))
    return os.cpu_count() or 1


@dataclass(slots=True)
class Crew:
    """Workers that stay for several rounds of jobs. Made by `crew`."""

    workers: int
    _pool: ProcessPoolExecutor | None

    def run(self, jobs: Sequence[Job[T]], done: Callable[[Job[T]], None] = lambda _job: None) -> list[T]:
        """The results of `jobs`, in their order; `done` is called as each is finished.

        An error of a job is raised here as it was raised there, the first in the order of the jobs. MachineFault where
        a worker was killed.
        """
        return self.start(jobs, done)()

    def start(
        self, jobs: Sequence[Job[T]], done: Callable[[Job[T]], None] = lambda _job: None
    ) -> Callable[[], list[T]]:
        """As `run`, but the jobs are only begun: what comes back waits for their results and returns them."""
        keys = [job.key for job in jobs]
        first: dict[str, Job[T]] = {}
        for key, job in zip(keys, jobs, strict=True):
            first.setdefault(key, job)
        finish = _one_by_one(first, done) if self._pool is None else _spread(self._pool, first, done)

        def results() -> list[T]:
            made = finish()
            return [made[key] for key in keys]

        return results


def _one_by_one(jobs: Mapping[str, Job[T]], done: Callable[[Job[T]], None]) -> Callable[[], dict[str, T]]:
    def finish() -> dict[str, T]:
        made = {}
        for key, job in jobs.items():
            made[key] = job.work(*job.args)
            done(job)
        return made

    return finish


def _spread(
    pool: ProcessPoolExecutor, jobs: Mapping[str, Job[T]], done: Callable[[Job[T]], None]
) -> Callable[[], dict[str, T]]:
    # Longest first: the last to finish is then a short one. Among equals by key, so that a run can be repeated.
    order = sorted(jobs, key=lambda key: (-jobs[key].weight, key))
    try:
        running: dict[str, Future[T]] = {key: pool.submit(jobs[key].work, *jobs[key].args) for key in order}
    except BrokenProcessPool as error:
        raise _killed() from error

    def finish() -> dict[str, T]:
        names = {future: key for key, future in running.items()}
        for future in as_completed(names):
            if future.exception() is None:
                done(jobs[names[future]])
        try:
            return {key: running[key].result() for key in jobs}
        except BrokenProcessPool as error:
            raise _killed() from error

    return finish


@contextlib.contextmanager
def crew(workers: int, preload: Callable[[], None] = lambda: None) -> Iterator[Crew]:
    """`workers` processes (1: this process does it all) for the jobs within; gone at the end, whatever happens.

    They start at once, and each calls `preload` first: what they need is loaded while this process does its own part.
    """
    before = set(multiprocessing.active_children())
    pool = _pool(workers, preload) if workers > 1 else None
    with rare_collections():
        try:
            yield Crew(workers, pool)
        except BaseException:
            for worker in set(multiprocessing.active_children()) - before:
                worker.kill()
            raise
        finally:
            if pool is not None:
                pool.shutdown(cancel_futures=True)


@contextlib.contextmanager
def rare_collections() -> Iterator[None]:
    """Within: what is loaded is never looked at again by the cycle collector, and it looks seldom."""
    before = gc.get_threshold()
    gc.freeze()
    gc.set_threshold(_COLLECT_AFTER, 50, 50)
    try:
        yield
    finally:
        gc.set_threshold(*before)
        gc.unfreeze()


def _pool(workers: int, preload: Callable[[], None]) -> ProcessPoolExecutor:
    # Elsewhere than on Linux system libraries do not survive a fork.
    context = multiprocessing.get_context("fork" if sys.platform == "linux" else "spawn")
    pool = ProcessPoolExecutor(workers, context, _start_worker, (os.getpid(), preload))
    with warnings.catch_warnings():
        # Python warns of forking beside threads. The only ones there may be are a linear-algebra library's idle own,
        # which it stops and starts again around a fork itself.
        warnings.filterwarnings("ignore", message=".*multi-threaded.*fork", category=DeprecationWarning)
        pool.submit(os.getpid)  # with the first job all workers are forked
    return pool


def _start_worker(parent: int, preload: Callable[[], None]) -> None:
    # Ctrl-C goes to all processes of a terminal; the parent alone decides what becomes of it.
    signal.signal(signal.SIGINT, signal.SIG_IGN)
    signal.signal(signal.SIGTERM, signal.SIG_DFL)
    if sys.platform == "linux":
        # A worker must not outlive a parent that was killed outright.
        ctypes.CDLL(None).prctl(_PR_SET_PDEATHSIG, signal.SIGKILL)
        if os.getppid() != parent:
            os._exit(1)
    # What cannot be loaded is told by the first job that needs it, in this program's own way.
    with contextlib.suppress(Exception):
        preload()
    gc.freeze()
    gc.set_threshold(_COLLECT_AFTER, 50, 50)


def _killed() -> MachineFault:
    return MachineFault(
        "A worker process was stopped by the system, most likely for want of memory.",
        "Close other programs, or run the same command again with --workers 1.",
    )
