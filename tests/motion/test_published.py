"""The mechanics against published distances, with a rounding of their own: the claims of tests/published use the
program's, so that one fault in it could hide there. And fifty measured stops."""

from __future__ import annotations

import math

import numpy as np
import pytest

from chartgen.motion.stopping import stop

from .reference import published

MPH, FOOT = 0.44704, 0.3048


def nearest(value: float) -> int:
    return math.floor(value * (1 + 1e-9) + 0.5)


@pytest.mark.parametrize(
    ("reaction_time", "deceleration"),
    [
        (0.6818, 6.557),
        # The rule itself: thinking distance in ft = speed in mph, braking distance in ft = speed² / 20.
        (FOOT / MPH, MPH**2 * 20 / (2 * FOOT)),
    ],
)
def test_highway_code_rule_126(reaction_time: float, deceleration: float) -> None:
    # The Highway Code (UK, DVSA), rule 126, typical stopping distances. Parts to the nearest metre; the totals printed
    # are the sums of the rounded parts (at 40 mph the total rounded once would be 37 m; 36 m is printed).
    rows = published("uk_highway_code_126.csv")
    assert [int(row["speed_mph"]) for row in rows] == [20, 30, 40, 50, 60, 70]
    speed = np.array([float(row["speed_mph"]) for row in rows]) * MPH
    out = stop(speed, reaction_time_s=reaction_time, max_deceleration_mps2=deceleration)
    for row, thinking, braking in zip(rows, out.reaction_distance_m, out.braking_distance_m, strict=True):
        parts = nearest(float(thinking)), nearest(float(braking))
        assert (*parts, sum(parts)) == (int(row["thinking_m"]), int(row["braking_m"]), int(row["total_m"]))


def test_ezekiels_cars() -> None:
    # Ezekiel, Methods of Correlation Analysis (1930), the 50 stops known as the `cars` data set. The straight line is
    # the one printed with the data set everywhere (from memory): dist = -17.579 + 3.932 speed. The coefficients through
    # the origin were computed from the same rows elsewhere, with their standard errors.
    rows = published("cars50_ezekiel.csv")
    assert len(rows) == 50
    speed = np.array([float(row["speed"]) for row in rows])
    distance = np.array([float(row["dist"]) for row in rows])
    line = np.linalg.lstsq(np.column_stack([np.ones(50), speed]), distance)[0]
    assert line == pytest.approx([-17.57909, 3.932409], abs=5e-6)
    through_origin = np.column_stack([speed, speed**2])
    (a, b), residual = np.linalg.lstsq(through_origin, distance)[:2]
    assert a == pytest.approx(1.23903, abs=5e-6)
    assert b == pytest.approx(0.0901388, abs=5e-8)
    assert float(residual[0]) == pytest.approx(10831.117, abs=5e-4)
    spread = np.sqrt(float(residual[0]) / 48 * np.diag(np.linalg.inv(through_origin.T @ through_origin)))
    assert spread == pytest.approx([0.55997, 0.0293892], abs=5e-6)
    # The fit is a stop: 0.845 s and 11.93 ft/s² (0.371 g), and the mechanics with these give the fitted curve.
    seconds, slowing = a * FOOT / MPH, MPH**2 / (2 * b * FOOT)
    assert seconds == pytest.approx(0.845, abs=5e-4)
    assert slowing / FOOT == pytest.approx(11.93, abs=5e-3)
    assert slowing / 9.80665 == pytest.approx(0.371, abs=5e-4)
    out = stop(speed * MPH, reaction_time_s=seconds, max_deceleration_mps2=slowing)
    assert out.stopping_distance_m / FOOT == pytest.approx(a * speed + b * speed**2, rel=1e-12)
