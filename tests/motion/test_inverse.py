"""Is the speed at a place that of the motion, and the greatest speed the last one that is slow enough?"""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from hypothesis import assume, given, settings
from scipy.integrate import solve_ivp

from chartgen.motion.friction_table import FrictionTable
from chartgen.motion.gap import gap_seconds
from chartgen.motion.inverse import greatest_speed, greatest_speed_in_gap, residual_speed
from chartgen.motion.stopping import stop
from tests.motion.laws import between
from tests.motion.reference import brake_force, friction_law

TABLE = FrictionTable(np.array([5.0, 15.0, 30.0]), np.array([0.7, 0.5, 0.4]))
ROADS: dict[str, dict[str, Any]] = {
    "constant": {"mu": 0.6},
    "falling": {"f60": 0.4, "sp_kmh": 120.0, "max_mu": 0.7},
    "limit": {"mu": 0.7, "max_deceleration_mps2": 4.5},
    "table": {"tables": (TABLE,), "table": 0},
}
LAG, RISE = 0.5, 0.4


def followed(speed: float, place: float, road: str, grade: float) -> float:
    """Speed at `place` by integrating the motion with scipy, phase by phase."""
    given = ROADS[road]
    law = (
        TABLE.at
        if road == "table"
        else friction_law(**{k: v for k, v in given.items() if k != "max_deceleration_mps2"})
    )
    brake, slope = brake_force(lambda v: float(law(v)), grade=grade, limit=given.get("max_deceleration_mps2", math.inf))
    x, v = speed * 1.0, speed
    if place <= x:
        return speed
    start = v - slope * LAG
    # Under a table the build-up rises to the least force at any speed it may pass, lag included; this falls with speed.
    ramp = brake(max(v, start) + max(-slope, 0.0) * RISE if road == "table" else start)
    phases = (
        (LAG, lambda t, v: -slope),
        (RISE, lambda t, v: -slope - ramp * t / RISE),
        (400.0, lambda t, v: -slope - brake(max(v, 0.0))),
    )
    for duration, law_ in phases:

        def reached(t: float, y: np.ndarray, at: float = place) -> float:
            return float(y[0]) - at

        def rests(t: float, y: np.ndarray) -> float:
            return float(y[1])

        reached.terminal = rests.terminal = True  # type: ignore[attr-defined]
        rests.direction = -1.0  # type: ignore[attr-defined]
        run = solve_ivp(
            lambda t, y, law_=law_: [y[1], law_(t, y[1])], (0.0, duration), [x, v], method="DOP853",
            events=(reached, rests), rtol=1e-13, atol=1e-13, max_step=0.02,
        )  # fmt: skip
        x, v = run.y[:, -1]
        if run.status == 1:
            return 0.0 if len(run.t_events[1]) else float(v)
    raise AssertionError("neither there nor at rest")


@pytest.mark.parametrize("road", ROADS)
@pytest.mark.parametrize("grade", [-0.06, 0.0, 0.08])
@pytest.mark.parametrize("share", [0.2, 0.45, 0.55, 0.7, 0.9, 0.99])
def test_residual_speed_is_that_of_the_motion(road: str, grade: float, share: float) -> None:
    speed, arguments = 26.0, {"brake_lag_s": LAG, "build_up_s": RISE, "grade": grade, **ROADS[road]}
    whole = float(stop(speed, reaction_time_s=1.0, **arguments).stopping_distance_m)
    found = float(residual_speed(speed, share * whole, reaction_time_s=1.0, **arguments))
    assert found == pytest.approx(followed(speed, share * whole, road, grade), rel=1e-9)


@settings(max_examples=200, deadline=None)
@given(
    speed=between(2.0, 60.0), grade=between(-0.12, 0.12), lag=between(0.0, 1.5), rise=between(0.0, 1.5),
    mu=between(0.15, 1.0), share=between(0.0, 1.2),
)  # fmt: skip
def test_the_rest_of_the_way_is_what_the_residual_speed_still_needs(
    speed: float, grade: float, lag: float, rise: float, mu: float, share: float
) -> None:
    """Full braking from the residual speed takes just the rest of the way, wherever full braking has begun."""
    # Millionths of a second and of a slope: nothing smaller is ever stated.
    lag, rise, grade = (round(x, 6) for x in (lag, rise, grade))
    arguments = {"brake_lag_s": lag, "build_up_s": rise, "grade": grade, "mu": mu}
    out = stop(speed, reaction_time_s=0.9, **arguments)
    assume(bool(out.stops))
    whole = float(out.stopping_distance_m)
    found = float(residual_speed(speed, share * whole, reaction_time_s=0.9, **arguments))
    if share >= 1.0:
        assert found == 0.0
        return
    assert found >= 0.0
    full = stop(max(found, 1e-9), reaction_time_s=0.0, grade=grade, mu=mu)
    rest = (1.0 - share) * whole
    # Before full braking the vehicle has less brakes than that, so the rest is at least as long.
    assert rest >= float(full.stopping_distance_m) * (1.0 - 1e-9) - 1e-9


HUMP = FrictionTable(np.array([5.0, 15.0, 30.0, 45.0]), np.array([0.3, 0.5, 0.4, 0.6]))
"""Friction that rises with speed here and there."""


@pytest.mark.parametrize("grade", [-0.09, -0.03, 0.0, 0.06])
@pytest.mark.parametrize("road", [{"tables": (HUMP,), "table": 0}, {"f60": 0.35, "sp_kmh": 60.0, "max_mu": 1.1}])
def test_it_moves_until_it_has_stopped(road: dict[str, Any], grade: float) -> None:
    """Just before its place of rest a vehicle is as fast as its last deceleration makes it, and never at rest."""
    arguments = {"reaction_time_s": 1.0, "brake_lag_s": 0.4, "build_up_s": 0.8, "grade": grade, **road}
    speeds = np.array([8.0, 14.0, 17.0, 22.0, 28.0])
    whole = stop(speeds, **arguments).stopping_distance_m
    last = stop(1e-6, **(arguments | {"reaction_time_s": 0.0, "brake_lag_s": 0.0, "build_up_s": 0.0}))
    left = 1e-5
    expected = math.sqrt(2.0 * left * float(last.full_deceleration_mps2))
    assert residual_speed(speeds, whole - left, **arguments) == pytest.approx(expected, rel=5e-4)
    assert not residual_speed(speeds, whole, **arguments).any()


def test_residual_speed_never_rises_with_the_distance_on_the_level() -> None:
    places = np.linspace(0.0, 120.0, 400)
    found = residual_speed(25.0, places, reaction_time_s=1.0, brake_lag_s=0.4, build_up_s=0.3, mu=0.5)
    assert (np.diff(found) <= 0.0).all()
    assert found[0] == 25.0
    assert found[-1] == 0.0


def test_a_vehicle_that_never_stops_has_a_speed_too() -> None:
    """Constant forces: v² = v₀² + 2·s·x, faster and faster downhill."""
    slope = 9.80665 * 0.12 / math.hypot(1.0, 0.12)
    brakes = 0.05 * 9.80665 / math.hypot(1.0, 0.12)
    found = float(residual_speed(20.0, 20.0 + 100.0, reaction_time_s=1.0, mu=0.05, grade=-0.12))
    assert found == pytest.approx(math.sqrt(400.0 + 2 * (slope - brakes) * 100.0), rel=1e-12)


NEVER: dict[str, tuple[dict[str, Any], float, float]] = {
    "faster beyond the cap": ({"f60": 0.10, "sp_kmh": 60.0, "max_mu": 0.11}, -0.12, 13.0),
    "to an even speed": (
        {"tables": (FrictionTable(np.array([5.0, 40.0]), np.array([0.05, 0.3])),), "table": 0}, -0.12, 30.0,
    ),
    "limit and table": (
        {"tables": (FrictionTable(np.array([5.0, 20.0, 40.0]), np.array([0.05, 0.3, 0.2])),), "table": 0,
         "max_deceleration_mps2": 1.6}, -0.12, 38.0,
    ),
    "hardly slower": ({"f60": 0.125, "sp_kmh": 4000.0}, -0.12, 20.0),
}  # fmt: skip


@pytest.mark.parametrize("name", NEVER)
@pytest.mark.parametrize("way", [3.0, 40.0, 700.0])
def test_what_never_stops_moves_as_the_forces_have_it(name: str, way: float) -> None:
    road, grade, speed = NEVER[name]
    arguments = {"reaction_time_s": 0.0, "grade": grade, **road}
    assert not bool(stop(speed, **arguments).stops)
    limit = road.get("max_deceleration_mps2", math.inf)
    law = (
        road["tables"][0].at
        if "tables" in road
        else friction_law(**{k: v for k, v in road.items() if k != "max_deceleration_mps2"})
    )
    brake, slope = brake_force(lambda v: float(law(v)), grade=grade, limit=limit)
    run = solve_ivp(
        lambda x, w: [-slope - brake(math.sqrt(2.0 * max(w[0], 0.0)))], (0.0, way), [speed * speed / 2.0],
        method="DOP853", rtol=1e-13, atol=1e-13, max_step=0.25,
    )  # fmt: skip
    assert float(residual_speed(speed, way, **arguments)) == pytest.approx(math.sqrt(2.0 * run.y[0, -1]), rel=1e-9)


def test_a_vehicle_that_leaves_what_the_source_speaks_of_has_no_speed_there() -> None:
    """Faster and faster downhill: 20 m/s, then beyond 21 m/s."""
    found = residual_speed(20.0, [1.0, 30.0, 300.0], reaction_time_s=0.0, mu=0.05, grade=-0.12, valid_to_mps=21.0)
    assert np.isnan(found).tolist() == [False, False, True]


def test_beyond_what_the_source_speaks_of_there_is_no_speed() -> None:
    found = residual_speed([20.0, 31.0], 60.0, reaction_time_s=1.0, tables=(TABLE,), table=0)
    assert np.isnan(found).tolist() == [False, True]


@pytest.mark.parametrize("place", [-1.0, math.nan, math.inf])
def test_a_place_that_is_none_is_refused(place: float) -> None:
    with pytest.raises(ValueError, match=r"^distance_m: "):
        residual_speed(20.0, place, reaction_time_s=1.0, mu=0.5)


@pytest.mark.parametrize("road", ROADS)
@pytest.mark.parametrize("grade", [-0.06, 0.0, 0.08])
def test_the_greatest_speed_just_stops(road: str, grade: float) -> None:
    arguments = {"reaction_time_s": 1.2, "brake_lag_s": LAG, "build_up_s": RISE, "grade": grade, **ROADS[road]}
    found = greatest_speed([15.0, 50.0, 90.0], top_mps=29.0, **arguments)
    for speed, reach, at_top in zip(found.speed_mps, (15.0, 50.0, 90.0), found.at_top, strict=True):
        assert float(stop(speed, **arguments).stopping_distance_m) <= reach
        if not at_top:
            assert float(stop(speed * (1 + 1e-9), **arguments).stopping_distance_m) > reach


def test_closed_form_of_the_greatest_speed() -> None:
    """v·t + v²/(2a) = D has the root a·(sqrt(t² + 2D/a) - t)."""
    reach = np.array([10.0, 40.0, 160.0])
    found = greatest_speed(reach, top_mps=60.0, reaction_time_s=1.5, max_deceleration_mps2=4.0)
    assert found.speed_mps == pytest.approx(4.0 * (np.sqrt(1.5**2 + reach / 2.0) - 1.5), rel=1e-9)


def test_the_top_is_told_and_nothing_is_nothing() -> None:
    fast = greatest_speed(500.0, top_mps=20.0, reaction_time_s=1.0, mu=0.7)
    assert (float(fast.speed_mps), bool(fast.at_top)) == (20.0, True)
    ice = greatest_speed(500.0, top_mps=20.0, reaction_time_s=1.0, mu=0.05, grade=-0.09)
    assert (float(ice.speed_mps), bool(ice.at_top)) == (0.0, False)


def test_the_gap_is_held_from_rest_up() -> None:
    """Within a fixed gap T: v·t + v²/(2a) <= v·T up to 2a·(T - t); the cautious reading, the vehicle ahead dead."""
    found = greatest_speed_in_gap(
        {"fixed_s": 2.0}, top_mps=50.0, reaction_time_s=[0.8, 1.9, 2.5], max_deceleration_mps2=5.0
    )
    assert found.speed_mps == pytest.approx([12.0, 1.0, 0.0], abs=1e-6)


def test_a_gap_that_grows_at_a_threshold_does_not_excuse_the_speeds_below_it() -> None:
    rule = {"fixed_s": 2.0, "extra_s": 5.0, "extra_above_mps": 20.0}
    arguments = {"reaction_time_s": 1.0, "max_deceleration_mps2": 5.0}
    found = float(greatest_speed_in_gap(rule, top_mps=30.0, **arguments).speed_mps)
    assert found == pytest.approx(10.0, rel=1e-9)
    above = float(stop(25.0, **arguments).stopping_distance_m)
    assert above < 25.0 * float(gap_seconds(25.0, **rule))  # 25 m/s would do, but 15 m/s does not


@pytest.mark.parametrize("threshold", [10.001, 10.05, 10.3, 12.0])
@pytest.mark.parametrize("top", [11.0, 13.0, 50.0])
def test_a_narrow_stretch_below_the_threshold_is_seen(threshold: float, top: float) -> None:
    """2 s less 1 s of reaction at 5 m/s² hold up to 10 m/s; from just above it to the threshold they do not."""
    rule = {"fixed_s": 2.0, "extra_s": 5.0, "extra_above_mps": threshold}
    found = greatest_speed_in_gap(rule, top_mps=top, reaction_time_s=1.0, max_deceleration_mps2=5.0)
    assert float(found.speed_mps) == pytest.approx(10.0, rel=1e-9)
    assert not found.at_top


def test_a_crawl_on_a_downgrade_is_not_asked_about() -> None:
    """The vehicle rolls in the lag whatever its speed: near rest no gap in seconds holds that."""
    arguments = {"reaction_time_s": 1.0, "brake_lag_s": 0.4, "max_deceleration_mps2": 5.0, "grade": -0.09}
    assert float(stop(0.01, **arguments).stopping_distance_m) > 0.01 * 2.5
    found = greatest_speed_in_gap({"fixed_s": 2.5}, top_mps=50.0, **arguments)
    speed = float(found.speed_mps)
    assert speed > 5.0
    assert float(stop(speed, **arguments).stopping_distance_m) <= 2.5 * speed
    assert float(stop(speed * (1 + 1e-9), **arguments).stopping_distance_m) > 2.5 * speed
    some = np.linspace(1.0 / 3.6, speed, 2000)
    assert (stop(some, **arguments).stopping_distance_m <= 2.5 * some * (1 + 1e-12)).all()


@pytest.mark.parametrize("top", [0.0, -1.0, 201.0, math.nan])
def test_a_top_speed_that_is_none_is_refused(top: float) -> None:
    with pytest.raises(ValueError, match=r"^top_mps: "):
        greatest_speed(50.0, top_mps=top, reaction_time_s=1.0, mu=0.5)


def test_shapes_broadcast() -> None:
    found = greatest_speed(np.array([[30.0], [60.0]]), top_mps=40.0, reaction_time_s=np.array([1.0, 1.5, 2.0]), mu=0.6)
    assert found.speed_mps.shape == (2, 3)
    assert residual_speed(np.array([20.0, 25.0]), 30.0, reaction_time_s=1.0, mu=0.6).shape == (2,)
