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
        self._processes, self._idle = _hire(workers, preload) if workers > 1 else ([], [])
        self._busy: dict[Connection, int] = {}
        self._alone = not self._idle

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
                heapq.heappush(self._waiting, (0.0, "", ticket) if self._alone else (-job.weight, job.key, ticket))
        self._hand_out()

        def results() -> list[T]:
            while not all(ticket in self._results for ticket in tickets.values()):
                if self._alone:
                    self._do_next()
                else:
                    self._take_in()
            made = {key: self._results.pop(ticket) for key, ticket in tickets.items()}
            return [_opened(made[job.key]) for job in jobs]

        return results

    def _hand_out(self) -> None:
        while self._idle and self._waiting:
            pipe, (_, _, ticket) = self._idle.pop(), heapq.heappop(self._waiting)
            job = self._jobs[ticket]
            try:
                pipe.send((job.work, job.args))
            except OSError as error:
                raise _killed() from error
            self._busy[pipe] = ticket

    def _take_in(self) -> None:
        """Wait for any worker, keep what it has made and give it more to do."""
        for pipe in cast("list[Connection]", wait([*self._busy])):
            ticket = self._busy.pop(pipe)
            try:
                self._results[ticket] = pipe.recv()
            except (EOFError, OSError) as error:
                raise _killed() from error
            self._idle.append(pipe)
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
        for process in self._processes:
            process.kill()
        for process in self._processes:
            process.join()


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


def _hire(count: int, preload: Callable[[], None]) -> tuple[Sequence[BaseProcess], list[Connection]]:
    """The processes to be killed at the end, and a pipe to each worker."""
    ours, theirs = map(list, zip(*(multiprocessing.Pipe() for _ in range(count)), strict=True))
    if sys.platform == "linux":
        fork = multiprocessing.get_context("fork").Process
        processes: list[BaseProcess] = [fork(target=_lead, args=(theirs, ours, os.getpid(), preload), daemon=True)]
    else:  # elsewhere system libraries do not survive a fork
        spawn = multiprocessing.get_context("spawn").Process
        processes = [spawn(target=_start_alone, args=(pipe, preload), daemon=True) for pipe in theirs]
    with _forking_beside_idle_threads():
        for process in processes:
            process.start()
    for pipe in theirs:
        pipe.close()
    return processes, ours


def _lead(theirs: Sequence[Connection], ours: Sequence[Connection], parent: int, preload: Callable[[], None]) -> None:
    """The foreman: loads once what all workers need, becomes their parent, and lives as long as they do."""
    _die_with(parent)
    for pipe in ours:
        pipe.close()
    _load(preload)
    this = os.getpid()
    for number, pipe in enumerate(theirs):
        with _forking_beside_idle_threads():
            child = os.fork()
        if child == 0:
            try:
                _die_with(this)
                for other in theirs[number + 1 :]:
                    other.close()  # else nobody would see it closed when its worker dies
                _work(pipe)
            finally:
                os._exit(0)
        pipe.close()
    with contextlib.suppress(ChildProcessError):
        while True:
            os.wait()


def _start_alone(pipe: Connection, preload: Callable[[], None]) -> None:
    _load(preload)
    _work(pipe)


def _load(preload: Callable[[], None]) -> None:
    # What cannot be loaded is told by the first job that needs it, in this program's own way.
    with contextlib.suppress(Exception):
        preload()
    gc.freeze()
    gc.set_threshold(_COLLECT_AFTER, 50, 50)


def _die_with(parent: int) -> None:
    # Ctrl-C goes to all processes of a terminal; the parent alone decides what becomes of it. When it is killed
    # outright, the system kills this one.
    signal.signal(signal.SIGINT, signal.SIG_IGN)
    signal.signal(signal.SIGTERM, signal.SIG_DFL)
    ctypes.CDLL(None).prctl(_PR_SET_PDEATHSIG, signal.SIGKILL)
    if os.getppid() != parent:
        os._exit(1)


@contextlib.contextmanager
def _forking_beside_idle_threads() -> Iterator[None]:
    with warnings.catch_warnings():
        # Python warns of forking beside threads. The only ones there may be are a linear-algebra library's idle own,
        # which it stops and starts again around a fork itself.
        warnings.filterwarnings("ignore", message=".*multi-threaded.*fork", category=DeprecationWarning)
        yield


def _work(pipe: Connection) -> None:
    """The life of a worker: one job after another until the pipe is closed."""
    with contextlib.suppress(EOFError, OSError):
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
