"""How long a million stops from first principles take beside one numpy evaluation of v²/(2a).

    python benchmarks/figures_rate.py [ROWS] [ROUNDS]

The friction falls with speed; speed, friction, speed constant, reaction time and grade differ from row to row.
`v**2 / (2*a)` is evaluated out of place, on the same speeds and the decelerations that the stops begin with; one
thread.

Much of the evaluation's time is that of getting fresh memory for its arrays, so it is measured twice. "In turn": each
round times one evaluation and one run of the stops, each with the memory it is given. "Memory at hand": the evaluation
is repeated until its arrays lie in memory that is ready, and the least of that is taken; the stops, whose arrays are
larger, get no such help. The aim, 25 times on the level and on a mix of grades, is held to the first; the second shows
what is left when nothing but arithmetic counts for the evaluation.
"""

from __future__ import annotations

import os
import statistics
import sys
import time
from collections.abc import Callable
from typing import Any

os.environ.setdefault("OMP_NUM_THREADS", "1")

import numpy as np
from numpy.typing import NDArray

from chartgen.motion.stopping import Stop, stop

FloatArray = NDArray[np.float64]

AIM = 25.0
EVALUATIONS = 4
"""Of which the least counts as that with memory at hand."""


def roads(rows: int) -> dict[str, FloatArray]:
    """Speeds of 15 to 130 km/h, friction of 0.25 to 0.75 at 60 km/h, speed constants of smooth to coarse roads."""
    chance = np.random.default_rng(60)
    return {
        "speed_mps": chance.uniform(15.0, 130.0, rows) / 3.6,
        "f60": chance.uniform(0.25, 0.75, rows),
        "sp_kmh": chance.uniform(40.0, 300.0, rows),
        "reaction_time_s": chance.uniform(0.7, 2.5, rows),
    }


def cases(rows: int) -> dict[str, dict[str, Any]]:
    """What is measured, by name."""
    chance = np.random.default_rng(61)
    level = roads(rows)
    grades = chance.choice([-0.12, -0.08, -0.06, -0.03, 0.0, 0.0, 0.03, 0.06, 0.08, 0.12], rows)
    vehicle = {
        "brake_lag_s": chance.choice([0.0, 0.2, 0.4], rows),
        "build_up_s": chance.choice([0.2, 0.3, 0.6], rows),
        "max_deceleration_mps2": chance.choice([4.5, 6.0, 8.0], rows),
    }
    return {
        "level": level,
        "mix of grades": level | {"grade": grades},
        "every grade between -12 % and 12 %": level | {"grade": chance.uniform(-0.12, 0.12, rows)},
        "mix of grades, cap on friction": level | {"grade": grades, "max_mu": np.full(rows, 0.8)},
        "mix of grades, lag, build-up and limit": level | {"grade": grades} | vehicle,
    }


def timed(work: Callable[[], object]) -> float:
    """Seconds of one run."""
    start = time.perf_counter()
    work()
    return time.perf_counter() - start


def measure(name: str, given: dict[str, Any], rounds: int) -> None:
    """Prints one line of ratios and times."""

    def stops() -> Stop:
        return stop(given["speed_mps"], **{name: x for name, x in given.items() if name != "speed_mps"})

    first = stops()
    speed, slowing = given["speed_mps"], np.array(first.full_deceleration_mps2)
    stopping = first.stops.mean()
    del first
    once, ready, ours = [], [], []
    for _ in range(rounds):
        once.append(timed(lambda: speed**2 / (2 * slowing)))
        ready.append(min(timed(lambda: speed**2 / (2 * slowing)) for _ in range(EVALUATIONS)))
        ours.append(timed(stops))
    print(
        f"{name:40} in turn: {ratios(ours, once)}   memory at hand: {ratios(ours, ready)}   stops {milliseconds(ours)}"
        f"   v²/(2a) {milliseconds(once)}, at hand {milliseconds(ready)}   {stopping:.1%} stop"
    )


def ratios(ours: list[float], theirs: list[float]) -> str:
    """Least and median of the rounds' ratios."""
    each = [b / a for a, b in zip(theirs, ours, strict=True)]
    return f"least {min(each):4.1f} median {statistics.median(each):4.1f}"


def milliseconds(times: list[float]) -> str:
    """Least and median."""
    return f"{1e3 * min(times):.1f}/{1e3 * statistics.median(times):.1f} ms"


def main() -> None:
    """Measures every case."""
    rows = int(sys.argv[1]) if len(sys.argv) > 1 else 1_000_000
    rounds = int(sys.argv[2]) if len(sys.argv) > 2 else 25
    print(f"{rows} rows, {rounds} rounds, one thread, numpy {np.__version__}; the aim is {AIM:g}")
    for name, given in cases(rows).items():
        measure(name, given, rounds)


if __name__ == "__main__":
    main()
