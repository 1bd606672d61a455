"""The question of this file: do jobs give the same, in order, whoever does them, and does a failure come back whole?"""

from __future__ import annotations

import gc
import multiprocessing
import os
import signal
import subprocess
import sys
import time
from datetime import date
from pathlib import Path

import pytest

from chartgen import jobs
from chartgen.edition.model import Source
from chartgen.errors import EditionFaults, Fault, Finding, MachineFault, ProductFaults
from chartgen.jobs import Job

ROOT = Path(__file__).parents[1]


def late(number: int) -> tuple[int, int]:
    time.sleep(0.02 * (3 - number % 3))
    return number, os.getpid()


def counted(folder: str, name: str) -> str:
    (Path(folder) / f"{name}-{os.getpid()}-{time.monotonic_ns()}").touch()
    return name


def faulty(number: int) -> int:
    if number == 1:
        raise EditionFaults((Fault(file="a.toml", key="speeds", problem="None.", near="speed"), Fault("b", "", "c")))
    if number == 2:
        raise ProductFaults((Finding("digits", "a.pdf", "23 is not in the table"),))
    return number


def dies(number: int) -> int:
    if number == 1:
        os.kill(os.getpid(), signal.SIGKILL)
    return number


@pytest.mark.parametrize("workers", [1, 2, 3])
def test_results_come_in_the_order_asked_for(workers: int) -> None:
    with jobs.crew(workers) as crew:
        results = crew.run([Job(name=str(n), key=str(n), work=late, args=(n,), weight=n) for n in range(7)])
        again = crew.run([Job(name="one", key="one", work=late, args=(7,))])
    assert [n for n, _ in results] == list(range(7))
    assert again[0][0] == 7
    assert len({pid for _, pid in results} - {os.getpid()}) == (0 if workers == 1 else workers)


@pytest.mark.parametrize("workers", [1, 2])
def test_equal_jobs_are_done_once(tmp_path: Path, workers: int) -> None:
    finished = []
    work = [Job(name=n, key=jobs.content_key("counted", n), work=counted, args=(str(tmp_path), n)) for n in "abcaab"]
    with jobs.crew(workers) as crew:
        assert crew.run(work, lambda job: finished.append(job.name)) == list("abcaab")
    assert sorted(finished) == ["a", "b", "c"]
    assert len(list(tmp_path.iterdir())) == 3


@pytest.mark.parametrize("workers", [1, 2])
def test_the_first_failure_in_the_order_of_the_jobs_comes_back_with_its_facts(workers: int) -> None:
    with pytest.raises(EditionFaults) as caught, jobs.crew(workers) as crew:
        crew.run([Job(name="", key=str(n), work=faulty, args=(n,), weight=n) for n in range(4)])
    assert caught.value.faults[0] == Fault(file="a.toml", key="speeds", problem="None.", near="speed")
    assert len(caught.value.faults) == 2
    assert caught.value.exit_code == 2
    assert multiprocessing.active_children() == []


class Stubborn(Exception):
    """An error that can be packed but not unpacked."""

    def __init__(self, one: int, two: int) -> None:
        super().__init__(f"{one} and {two}")


def stubborn(number: int) -> int:
    raise Stubborn(number, number)


def test_an_error_that_cannot_travel_is_told_all_the_same() -> None:
    with pytest.raises(RuntimeError, match="Stubborn: 1 and 1"), jobs.crew(2) as crew:
        crew.run([Job(name="", key="", work=stubborn, args=(1,))])


def large(data: bytes) -> bytes:
    if len(data) > 3_000_000:
        os.kill(os.getpid(), signal.SIGKILL)
    return data


def test_a_worker_killed_while_much_is_on_the_way_holds_up_nobody() -> None:
    """More than a pipe holds, to and from each worker, and one of them dies."""
    sizes = (2_000_000, 2_000_001, 4_000_000, 2_000_002, 2_000_003)
    with pytest.raises(MachineFault), jobs.crew(2) as crew:
        crew.run([Job(name="", key=str(n), work=large, args=(bytes(n),)) for n in sizes])
    assert multiprocessing.active_children() == []


def test_a_worker_killed_by_the_system_is_a_fault_of_the_machine() -> None:
    with pytest.raises(MachineFault) as caught, jobs.crew(2) as crew:
        crew.run([Job(name="", key=str(n), work=dies, args=(n,)) for n in range(4)])
    assert caught.value.problem == "A worker process was stopped by the system, most likely for want of memory."
    assert multiprocessing.active_children() == []


def broken() -> None:
    raise ModuleNotFoundError("matplotlib")


def test_a_worker_that_cannot_load_something_works_on_until_it_needs_it(capfd: pytest.CaptureFixture[str]) -> None:
    with jobs.crew(2, broken) as crew:
        assert len(crew.run([Job(name=str(n), key=str(n), work=late, args=(n,)) for n in range(3)])) == 3
    assert capfd.readouterr() == ("", "")


def meets(folder: str, mine: str, other: str) -> bool:
    (Path(folder) / mine).touch()
    until = time.monotonic() + 20
    while not (Path(folder) / other).exists() and time.monotonic() < until:
        time.sleep(0.01)
    return (Path(folder) / other).exists()


def test_jobs_that_are_begun_run_beside_each_other(tmp_path: Path) -> None:
    with jobs.crew(2) as crew:
        pairs = (("a", "b"), ("b", "a"))
        waits = [crew.start([Job(name=a, key=a, work=meets, args=(str(tmp_path), a, b))]) for a, b in pairs]
        assert [wait() for wait in waits] == [[True], [True]]


PARENT = """
import os, sys, time
from pathlib import Path
from chartgen import jobs
def work(folder, n):
    (Path(folder) / str(os.getpid())).touch()
    time.sleep(60)
with jobs.crew(2) as crew:
    crew.run([jobs.Job(name="", key=str(n), work=work, args=(sys.argv[1], n)) for n in range(4)])
"""


@pytest.mark.parametrize("how", [signal.SIGINT, signal.SIGKILL])
def test_no_worker_outlives_its_parent(tmp_path: Path, how: signal.Signals) -> None:
    parent = subprocess.Popen([sys.executable, "-c", PARENT, str(tmp_path)], cwd=ROOT, stderr=subprocess.DEVNULL)
    until = time.monotonic() + 20
    while len(list(tmp_path.iterdir())) < 2 and time.monotonic() < until:
        time.sleep(0.02)
    parent.send_signal(how)
    assert parent.wait(timeout=20) == -how
    workers = [int(p.name) for p in tmp_path.iterdir()]
    assert len(workers) == 2
    while any(Path(f"/proc/{pid}").exists() for pid in workers) and time.monotonic() < until:
        time.sleep(0.02)
    assert not any(Path(f"/proc/{pid}").exists() for pid in workers)


def test_keys_tell_different_contents_apart_and_equal_ones_not() -> None:
    different = [
        ("ab", "c"), ("a", "bc"), (b"ab", "c"), (1,), (1.0,), (True,), ("1",), (None,), (("a",), "b"), (("a", "b"),),
        ({"a": 1},), ({"a": 2},), (date(2026, 1, 2),), (Source(text="a"),), (Source(text="a", kind="measured"),),
        (0.1 + 0.2,), (0.3,),
    ]  # fmt: skip
    assert len({jobs.content_key(*parts) for parts in different}) == len(different)
    assert jobs.content_key({"a": 1, "b": 2}) == jobs.content_key({"b": 2, "a": 1})
    assert jobs.content_key(Source(text="a")) == jobs.content_key(Source(text="a"))
    with pytest.raises(TypeError, match="no content key for a object"):
        jobs.content_key(object())


def test_the_collector_is_as_before_afterwards() -> None:
    before = gc.get_threshold()
    with jobs.rare_collections():
        assert gc.get_threshold()[0] == 100_000
        assert gc.get_freeze_count() > 0
    assert gc.get_threshold() == before
    assert gc.get_freeze_count() == 0
