"""Following gaps in time and in distance."""

from __future__ import annotations

import math

import numpy as np
import pytest

from chartgen.motion.gap import gap_distance_m, gap_seconds

MPH, FOOT = 0.44704, 0.3048


def test_two_seconds_doubled_in_the_wet() -> None:
    # The Highway Code (UK), rule 126: a two-second gap, at least doubled on wet roads, up to ten times on ice.
    assert gap_seconds(30.0, fixed_s=2.0, factor=[1.0, 2.0, 10.0]).tolist() == [2.0, 4.0, 20.0]


def test_a_second_for_every_ten_feet_and_one_more_above_40_mph() -> None:
    # Commercial Driver License Manual, section 2.7.1 (from memory): one second for each 10 ft of vehicle below 40 mph,
    # at greater speeds one second more: a 40-foot vehicle 4 s, and 5 s above 40 mph; 60 ft and over 40 mph: 7 s.
    rule = {"per_length_s_per_m": 1 / (10 * FOOT), "extra_s": 1.0, "extra_above_mps": 40 * MPH}
    speed = np.array([35.0, 45.0]) * MPH
    assert gap_seconds(speed, length_m=40 * FOOT, **rule) == pytest.approx([4.0, 5.0], rel=1e-12)
    assert float(gap_seconds(55 * MPH, length_m=60 * FOOT, **rule)) == pytest.approx(7.0, rel=1e-12)


@pytest.mark.parametrize("mph", [40.0, 40.0 * (1 - 1e-12), 40.0 * (1 + 1e-12)])
def test_at_the_threshold_the_longer_gap(mph: float) -> None:
    assert float(gap_seconds(mph * MPH, fixed_s=3.0, extra_s=1.0, extra_above_mps=40 * MPH)) == 4.0


def test_just_below_the_threshold() -> None:
    assert float(gap_seconds(39.99 * MPH, fixed_s=3.0, extra_s=1.0, extra_above_mps=40 * MPH)) == 3.0


def test_fixed_and_by_length_add_up() -> None:
    assert float(gap_seconds(20.0, fixed_s=2.0, per_length_s_per_m=0.1, length_m=15.0)) == 3.5


def test_absent_parts_may_be_none_or_nan() -> None:
    nan = np.nan
    assert float(gap_seconds(20.0, fixed_s=2.0, per_length_s_per_m=None, length_m=None)) == 2.0
    assert gap_seconds(20.0, fixed_s=[2.0, nan], per_length_s_per_m=[nan, 0.5], length_m=[nan, 10.0]).tolist() == [
        2.0,
        5.0,
    ]


def test_distance() -> None:
    # The Highway Code's rule of thumb: at 30 m/s two seconds are 60 m.
    assert gap_distance_m([15.0, 30.0], 2.0).tolist() == [30.0, 60.0]


@pytest.mark.parametrize(
    ("given", "says"),
    [
        ({}, "fixed_s, per_length_s_per_m: a rule needs at least one of them"),
        ({"per_length_s_per_m": 0.3}, "length_m: a rule by length needs the vehicle's length"),
        ({"fixed_s": -1.0}, "fixed_s: -1.0 is not accepted; it must be at least 0 s and at most 60 s"),
        ({"fixed_s": math.inf}, "fixed_s: inf is not accepted; it must be at least 0 s and at most 60 s"),
        ({"fixed_s": 2.0, "factor": 0.5}, "factor: 0.5 is not accepted; it must be at least 1 and at most 20"),
        ({"fixed_s": 2.0, "factor": math.nan}, "factor: nan is not accepted; it must be at least 1 and at most 20"),
        (
            {"fixed_s": 2.0, "extra_s": math.nan},
            "extra_s: nan is not accepted; it must be at least 0 s and at most 60 s",
        ),
        (
            {"fixed_s": 2.0, "extra_above_mps": math.nan},
            "extra_above_mps: nan is not accepted; it must be at least 0 m/s",
        ),
        (
            {"per_length_s_per_m": 0.3, "length_m": 0.0},
            "length_m: 0.0 is not accepted; it must be more than 0 m and at most 100 m",
        ),
        (
            {"speed_mps": 0.0, "fixed_s": 2.0},
            "speed_mps: 0.0 is not accepted; it must be more than 0 m/s and at most 200 m/s",
        ),
    ],
)
def test_faulty_rules_are_refused_by_name(given: dict[str, float], says: str) -> None:
    with pytest.raises(ValueError) as raised:  # noqa: PT011  # the whole message is compared below
        gap_seconds(**({"speed_mps": 20.0} | given))
    assert str(raised.value) == says


@pytest.mark.parametrize("gap", [-1.0, math.nan, math.inf])
def test_gap_distance_refuses_by_name(gap: float) -> None:
    with pytest.raises(ValueError, match=r"^gap_s: "):
        gap_distance_m(20.0, gap)
