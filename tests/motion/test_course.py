"""Is the course of a stop the integrated motion, and does it end where the stop ends?"""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from hypothesis import assume, given, settings
from scipy.integrate import solve_ivp

from chartgen.motion import phases
from chartgen.motion.course import PHASES, Course, course
from chartgen.motion.friction_table import FrictionTable
from chartgen.motion.inverse import residual_speed
from chartgen.motion.limits import FloatArray
from chartgen.motion.stopping import stop
from tests.motion.laws import SITUATIONS, Situation
from tests.motion.reference import brake_force, friction_law

FALLING = FrictionTable(np.array([5.0, 15.0, 30.0]), np.array([0.7, 0.5, 0.4]))
ROADS: dict[str, dict[str, Any]] = {
    "constant": {"mu": 0.6},
    "falling": {"f60": 0.4, "sp_kmh": 120.0, "max_mu": 0.7},
    "limit": {"mu": 0.7, "max_deceleration_mps2": 4.5},
    "falling to a limit": {"f60": 0.5, "sp_kmh": 90.0, "max_deceleration_mps2": 4.5},
    "table": {"tables": (FALLING,), "table": 0},
    "table and limit": {"tables": (FALLING,), "table": 0, "max_deceleration_mps2": 5.0},
}
REACTION, LAG, RISE = 0.9, 0.5, 0.4


def integrated(speed: float, times: np.ndarray, road: str, grade: float) -> tuple[np.ndarray, np.ndarray]:
    """Place and speed at `times` by scipy, phase by phase, the forces written down again."""
    own = ROADS[road]
    law = (
        FALLING.at
        if "tables" in own
        else friction_law(**{k: v for k, v in own.items() if k != "max_deceleration_mps2"})
    )
    brake, slope = brake_force(lambda v: float(law(v)), grade=grade, limit=own.get("max_deceleration_mps2", math.inf))
    start = speed - slope * LAG
    ramp = brake(max(speed, start) + max(-slope, 0.0) * RISE if "tables" in own else start)
    places, speeds = speed * np.minimum(times, REACTION), np.full(len(times), speed)
    x, v, begin = speed * REACTION, speed, REACTION
    for duration, rate in (
        (LAG, lambda t, v: -slope),
        (RISE, lambda t, v: -slope - ramp * t / RISE),
        (60.0, lambda t, v: -slope - brake(max(v, 0.0))),
    ):

        def rests(t: float, y: np.ndarray) -> float:
            return float(y[1])

        rests.terminal, rests.direction = True, -1.0  # type: ignore[attr-defined]
        run = solve_ivp(
            lambda t, y, rate=rate: [y[1], rate(t, y[1])], (0.0, duration), [x, v], method="DOP853", events=rests,
            rtol=1e-12, atol=1e-12, max_step=0.01, dense_output=True,
        )  # fmt: skip
        inside = (times > begin) & (times <= begin + run.t[-1])
        places[inside], speeds[inside] = run.sol(times[inside] - begin)
        x, v, begin = run.y[0, -1], run.y[1, -1], begin + run.t[-1]
    places[times > begin], speeds[times > begin] = x, 0.0
    return places, speeds


@pytest.mark.parametrize("road", ROADS)
@pytest.mark.parametrize("grade", [-0.06, 0.0, 0.08])
def test_the_course_is_the_integrated_motion(road: str, grade: float) -> None:
    times = np.linspace(0.0, 8.0, 33)
    arguments = {"reaction_time_s": REACTION, "brake_lag_s": LAG, "build_up_s": RISE, "grade": grade, **ROADS[road]}
    out = course(24.0, times, **arguments)
    place, speed = integrated(24.0, times, road, grade)
    assert out.distance_m == pytest.approx(place, rel=1e-9)
    assert out.speed_mps == pytest.approx(speed, rel=1e-8, abs=1e-9)


def test_a_slope_left_out_is_found_out(monkeypatch: pytest.MonkeyPatch) -> None:
    """A planted mutant: gravity forgotten in the lag."""

    def lag(speed: FloatArray, *, lag_s: FloatArray, slope_mps2: FloatArray) -> phases.Phase:
        return phases.lag(speed, lag_s=lag_s, slope_mps2=0.0 * slope_mps2)

    monkeypatch.setattr("chartgen.motion.course.lag", lag)
    with pytest.raises(AssertionError):
        test_the_course_is_the_integrated_motion("constant", -0.06)


@settings(max_examples=300, deadline=None, derandomize=True, database=None)
@given(SITUATIONS)
def test_it_ends_where_the_stop_ends(situation: Situation) -> None:
    """Stops of every kind: the ends of the phases are those of the stop, and place and speed pass through them."""
    # Millionths of a second and of a slope: nothing smaller is ever stated.
    names = ("brake_lag_s", "build_up_s", "grade")
    arguments = situation | {name: round(situation[name], 6) for name in names}
    speed = arguments.pop("speed_mps")
    whole = stop(speed, **arguments)
    assume(bool(whole.stops))
    out = course(speed, points=41, **arguments)
    assert out.end_time_s[-1] == pytest.approx(float(whole.stopping_time_s), rel=1e-12)
    assert out.end_distance_m[-1] == out.distance_m[-1] == float(whole.stopping_distance_m)
    assert out.speed_mps[-1] == out.end_speed_mps[-1] == 0.0
    beginning = float(whole.reaction_distance_m + whole.lag_distance_m)
    assert out.end_distance_m[1] == pytest.approx(beginning, rel=1e-12)
    assert set(out.end_time_s) <= set(out.time_s)
    passes_through(out)
    assert (np.diff(out.distance_m) >= -1e-9).all()
    # The distance is the area under the speed: within the lowest and the highest of it between two neighbours.
    steps, low, high = (
        np.diff(out.time_s),
        *(f(out.speed_mps[:-1], out.speed_mps[1:]) for f in (np.minimum, np.maximum)),
    )
    slack = 1e-9 * (1.0 + out.distance_m[1:])
    assert (np.diff(out.distance_m) >= steps * low - slack).all()
    if arguments["grade"] >= 0.0:
        assert (np.diff(out.distance_m) <= steps * high + slack).all()


def passes_through(out: Course) -> None:
    """Raises AssertionError where a phase's end is not on the course."""
    at = [int(np.flatnonzero(out.time_s == t)[-1]) for t in out.end_time_s]
    assert out.distance_m[at] == pytest.approx(out.end_distance_m, rel=1e-9)
    fastest = float(out.speed_mps.max())
    assert out.speed_mps[at] == pytest.approx(out.end_speed_mps, rel=1e-9, abs=1e-7 * fastest)


@pytest.mark.parametrize("road", ROADS)
@pytest.mark.parametrize("grade", [-0.06, 0.0, 0.08])
def test_a_place_has_the_speed_that_is_asked_for_there(road: str, grade: float) -> None:
    """Time and distance are two ways to the same motion."""
    arguments = {"reaction_time_s": REACTION, "brake_lag_s": LAG, "build_up_s": RISE, "grade": grade, **ROADS[road]}
    out = course(27.0, np.linspace(0.0, 5.0, 50), **arguments)
    moving = out.speed_mps > 0.1
    there = residual_speed(27.0, out.distance_m, **arguments)
    assert there[moving] == pytest.approx(out.speed_mps[moving], rel=1e-10)


def test_rest_in_the_lag_and_in_the_build_up() -> None:
    """Uphill at a crawl: v²/(2·g·sinθ) in the lag, and no further."""
    slope = 9.80665 * math.sin(math.atan(0.2))
    out = course(1.0, [0.5, 0.7, 2.0], reaction_time_s=0.5, brake_lag_s=2.0, mu=0.8, grade=0.2)
    assert out.distance_m == pytest.approx([0.5, 0.5 + 0.2 - slope * 0.02, 0.5 + 0.5 / slope], rel=1e-12)
    assert out.speed_mps == pytest.approx([1.0, 1.0 - 0.2 * slope, 0.0], abs=1e-12)
    biting = course(0.5, reaction_time_s=0.5, build_up_s=2.0, mu=0.8)
    assert biting.end_time_s[2] == biting.end_time_s[3] < 2.5
    # v = b·τ²/(2·t_b) is gone after τ = sqrt(2·v·t_b/b).
    assert biting.end_time_s[2] == pytest.approx(0.5 + math.sqrt(2 * 0.5 * 2.0 / (0.8 * 9.80665)), rel=1e-12)


def test_a_vehicle_that_does_not_stop_is_followed_at_given_times() -> None:
    """Constant forces: faster by (slope less brakes) each second."""
    run = math.hypot(1.0, 0.12)
    pull = 9.80665 * (0.12 - 0.05) / run
    out = course(20.0, [1.0, 5.0, 11.0], reaction_time_s=1.0, mu=0.05, grade=-0.12)
    since = np.array([0.0, 4.0, 10.0])
    assert not out.stops
    assert out.speed_mps == pytest.approx(20.0 + pull * since, rel=1e-12)
    assert out.distance_m == pytest.approx(20.0 + 20.0 * since + pull * since**2 / 2, rel=1e-12)
    assert np.isnan(out.end_time_s).tolist() == [False, False, False, True]
    with pytest.raises(ValueError, match=r"^times_s, points: "):
        course(20.0, reaction_time_s=1.0, mu=0.05, grade=-0.12)


def test_beyond_what_the_source_speaks_of_the_course_ends() -> None:
    out = course(31.0, [0.5, 1.0, 1.2, 3.0], reaction_time_s=1.0, brake_lag_s=0.3, tables=(FALLING,), table=0)
    assert np.isnan(out.distance_m).tolist() == np.isnan(out.speed_mps).tolist() == [False, False, False, True]
    assert np.isnan(out.end_time_s).tolist() == [False, False, True, True]


def test_the_points_hold_the_ends_of_the_phases() -> None:
    out = course(20.0, points=5, reaction_time_s=1.0, brake_lag_s=0.2, build_up_s=0.3, max_deceleration_mps2=5.0)
    assert len(out.end_time_s) == len(PHASES)
    assert len(out.time_s) == 5 + 3  # rest is both an even time and an end
    assert (np.diff(out.time_s) > 0).all()
    with pytest.raises(ValueError, match="read-only"):
        out.speed_mps[0] = 1.0


@pytest.mark.parametrize(
    ("changes", "says"),
    [
        ({"times_s": [-0.1]}, "times_s"), ({"times_s": [math.nan]}, "times_s"), ({"times_s": [[1.0]]}, "times_s"),
        ({"points": 1}, "points"), ({"mu": [0.5, 0.6]}, "2 are given"), ({"mu": 0.0}, "mu"),
        ({"reaction_time_s": -1.0}, "reaction_time_s"),
    ],
)  # fmt: skip
def test_what_makes_no_sense_is_refused(changes: dict[str, Any], says: str) -> None:
    with pytest.raises(ValueError, match=says):
        course(20.0, **{"reaction_time_s": 1.0, "mu": 0.5, **changes})
