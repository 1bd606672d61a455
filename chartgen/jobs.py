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
import heapq
import multiprocessing
import os
import pickle
import signal
import sys
import traceback
import warnings
from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from datetime import date
from multiprocessing.connection import Connection, wait
from multiprocessing.process import BaseProcess
from typing import Any, Generic, TypeVar, cast

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


class Crew:
    """Workers that stay for several rounds of jobs. Made by `crew`.

    No threads and no shared queues: each worker has a pipe of its own and one job at a time, so that a worker that dies
    or is sent away can hold up nobody.
    """

    def __init__(self, workers: int, preload: Callable[[], None]) -> None:
        self._waiting: list[tuple[float, str, int]] = []
        self._jobs: dict[int, Job[Any]] = {}
        self._results: dict[int, tuple[bool, Any]] = {}
        self._done: dict[int, Callable[[Job[Any]], None]] = {}
        self._workers = [_hire(preload) for _ in range(workers)] if workers > 1 else []
        self._idle = list(self._workers)
        self._busy: dict[Connection, tuple[_Worker, int]] = {}

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
        tickets: dict[str, int] = {}
        for job in jobs:
            if job.key not in tickets:
                tickets[job.key] = ticket = len(self._jobs)
                self._jobs[ticket], self._done[ticket] = job, done
                # Longest first: the last to finish is then a short one. Among equals by key: a run can be repeated.
                # Alone it makes no difference, and errors are met in the order of the jobs.
                heapq.heappush(self._waiting, (-job.weight, job.key, ticket) if self._workers else (0.0, "", ticket))
        self._hand_out()

        def results() -> list[T]:
            while not all(ticket in self._results for ticket in tickets.values()):
                if self._workers:
                    self._take_in()
                else:
                    self._do_next()
            made = {key: self._results.pop(ticket) for key, ticket in tickets.items()}
            return [_opened(made[job.key]) for job in jobs]

        return results

    def _hand_out(self) -> None:
        while self._idle and self._waiting:
            worker, (_, _, ticket) = self._idle.pop(), heapq.heappop(self._waiting)
            job = self._jobs[ticket]
            try:
                worker.pipe.send((job.work, job.args))
            except OSError as error:
                raise _killed() from error
            self._busy[worker.pipe] = (worker, ticket)

    def _take_in(self) -> None:
        """Wait for any worker, keep what it has made and give it more to do."""
        for pipe in wait([*self._busy]):
            worker, ticket = self._busy.pop(cast("Connection", pipe))
            try:
                self._results[ticket] = worker.pipe.recv()
            except (EOFError, OSError) as error:
                raise _killed() from error
            self._idle.append(worker)
            self._hand_out()
            self._finished(ticket)

    def _do_next(self) -> None:
        ticket = heapq.heappop(self._waiting)[2]
        job = self._jobs[ticket]
        self._results[ticket] = (True, job.work(*job.args))
        self._finished(ticket)

    def _finished(self, ticket: int) -> None:
        if self._results[ticket][0]:
            self._done[ticket](self._jobs[ticket])

    def dismiss(self) -> None:
        """Send all workers away, whatever they are doing."""
        for worker in self._workers:
            worker.process.kill()
        for worker in self._workers:
            worker.process.join()
            worker.pipe.close()


@contextlib.contextmanager
def crew(workers: int, preload: Callable[[], None] = lambda: None) -> Iterator[Crew]:
    """`workers` processes (1: this process does it all) for the jobs within; gone at the end, whatever happens.

    They start at once, and each calls `preload` first: what they need is loaded while this process does its own part.
    """
    with rare_collections():
        team = Crew(workers, preload)
        try:
            yield team
        finally:
            team.dismiss()


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


@dataclass(frozen=True, slots=True)
class _Worker:
    process: BaseProcess
    pipe: Connection


def _hire(preload: Callable[[], None]) -> _Worker:
    # Elsewhere than on Linux system libraries do not survive a fork.
    if sys.platform == "linux":
        new_process: Callable[..., BaseProcess] = multiprocessing.get_context("fork").Process
    else:
        new_process = multiprocessing.get_context("spawn").Process
    ours, theirs = multiprocessing.Pipe()
    process = new_process(target=_work, args=(theirs, os.getpid(), preload), daemon=True)
    with warnings.catch_warnings():
        # Python warns of forking beside threads. The only ones there may be are a linear-algebra library's idle own,
        # which it stops and starts again around a fork itself.
        warnings.filterwarnings("ignore", message=".*multi-threaded.*fork", category=DeprecationWarning)
        process.start()
    theirs.close()
    return _Worker(process, ours)


def _work(pipe: Connection, parent: int, preload: Callable[[], None]) -> None:
    """The life of a worker: one job after another until the pipe is closed."""
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
    with contextlib.suppress(EOFError):
        while True:
            work, args = pipe.recv()
            pipe.send_bytes(_packed(work, args))


def _packed(work: Callable[..., object], args: tuple[Any, ...]) -> bytes:
    """The outcome of a job as the parent reads it: (True, result) or (False, error)."""
    try:
        return pickle.dumps((True, work(*args)))
    except Exception as error:  # noqa: BLE001  # whatever it is, it is raised again in the parent
        error.add_note(traceback.format_exc())
        with contextlib.suppress(Exception):
            packed = pickle.dumps((False, error))
            pickle.loads(packed)  # noqa: S301  # some errors can be packed but not unpacked
            return packed
        return pickle.dumps((False, RuntimeError(f"{type(error).__name__}: {error}")))


def _opened(outcome: tuple[bool, Any]) -> Any:
    made, value = outcome
    if not made:
        raise value
    return value


def _killed() -> MachineFault:
    return MachineFault(
        "A worker process was stopped by the system, most likely for want of memory.",
        "Close other programs, or run the same command again with --workers 1.",
    )
