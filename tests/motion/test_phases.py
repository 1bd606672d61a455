"""Lag and build-up, each on its own: closed forms, rest inside the phase, top speed."""

from __future__ import annotations

import math

import numpy as np
import pytest

from chartgen.motion.friction import Brake
from chartgen.motion.phases import build_up, lag

from .reference import step_by_step

ONE = np.ones(1)


def even_brake(force: float, slope: float) -> Brake:
    return Brake(at_zero=force * ONE, fall_per_mps=0 * ONE, cap=math.inf * ONE, slope=slope * ONE)


@pytest.mark.parametrize("slope", [-2.5, -0.88, 0.0, 0.5, 2.8])
@pytest.mark.parametrize("time", [0.2, 1.0, 3.0])
def test_lag_is_the_textbook_formula(slope: float, time: float) -> None:
    out = lag(25.0 * ONE, lag_s=time * ONE, slope_mps2=slope * ONE)
    assert out.distance_m[0] == pytest.approx(25.0 * time - slope * time**2 / 2, rel=1e-14)
    assert out.end_speed_mps[0] == pytest.approx(25.0 - slope * time, rel=1e-14)
    assert out.top_speed_mps[0] == pytest.approx(max(25.0, 25.0 - slope * time), rel=1e-14)


def test_rest_inside_the_lag() -> None:
    out = lag(2.0 * ONE, lag_s=3.0 * ONE, slope_mps2=1.0 * ONE)
    assert (out.distance_m[0], out.time_s[0], out.end_speed_mps[0]) == (2.0, 2.0, 0.0)


@pytest.mark.parametrize("slope", [-2.5, -0.88, 0.0, 0.5, 2.8])
@pytest.mark.parametrize("time", [0.05, 0.3, 1.5])
@pytest.mark.parametrize("force", [0.4, 5.0, 9.0])
def test_build_up_is_the_textbook_formula(slope: float, time: float, force: float) -> None:
    out = build_up(25.0 * ONE, build_up_s=time * ONE, brake=even_brake(force, slope))
    distance = 25.0 * time - slope * time**2 / 2 - force * time**2 / 6
    assert out.distance_m[0] == pytest.approx(distance, rel=1e-14)
    assert out.end_speed_mps[0] == pytest.approx(25.0 - slope * time - force * time / 2, rel=1e-14)


@pytest.mark.parametrize("slope", [-2.5, -0.88, 0.0, 0.5, 2.8])
@pytest.mark.parametrize("speed", [0.02, 0.4, 1.9])
def test_rest_inside_the_build_up_against_the_integration(slope: float, speed: float) -> None:
    out = build_up(speed * ONE, build_up_s=3.0 * ONE, brake=even_brake(7.0, slope))
    by_steps = step_by_step(speed, reaction_time=0, lag=0, build_up=3.0, brake=lambda v: 7.0, slope=slope)
    assert by_steps["full"] == 0.0
    assert out.end_speed_mps[0] == 0.0
    assert out.distance_m[0] == pytest.approx(by_steps["build_up"], rel=1e-8)
    assert out.time_s[0] == pytest.approx(by_steps["time"], rel=1e-8)


@pytest.mark.parametrize("slope", [-2.5, -0.88, -0.1])
@pytest.mark.parametrize("force", [0.5, 3.0])
def test_top_speed_on_a_downgrade_is_the_highest_of_the_ramp(slope: float, force: float) -> None:
    out = build_up(20.0 * ONE, build_up_s=1.2 * ONE, brake=even_brake(force, slope))
    moments = np.linspace(0.0, 1.2, 200_001)
    speeds = 20.0 - slope * moments - force * moments**2 / 2.4
    assert out.top_speed_mps[0] == pytest.approx(speeds.max(), rel=1e-10)


def test_no_time_is_no_phase() -> None:
    for out in (
        lag(20 * ONE, lag_s=0 * ONE, slope_mps2=-ONE),
        build_up(20 * ONE, build_up_s=0 * ONE, brake=even_brake(5.0, -1.0)),
    ):
        assert (out.distance_m[0], out.time_s[0], out.end_speed_mps[0]) == (0.0, 0.0, 20.0)


def test_rows_with_and_without_a_build_up_side_by_side() -> None:
    both = build_up(np.array([20.0, 20.0]), build_up_s=np.array([0.0, 0.6]), brake=even_brake(5.0, -0.5))
    alone = build_up(20.0 * ONE, build_up_s=0.6 * ONE, brake=even_brake(5.0, -0.5))
    assert both.distance_m.tolist() == [0.0, alone.distance_m[0]]
    assert both.end_speed_mps.tolist() == [20.0, alone.end_speed_mps[0]]
