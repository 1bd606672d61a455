"""Do the rules of thumb give what their teachers print? Examples: tests/published/rules_of_thumb.csv."""

from __future__ import annotations

import pytest

from chartgen.motion.methods import METHOD_INPUTS
from chartgen.motion.thumb import IMPLIED_REACTION_S, square_feet, square_half_metric, square_metric
from tests.motion.reference import published

KMH, MPH, FOOT = 1 / 3.6, 0.44704, 0.3048


def test_the_published_examples() -> None:
    rows = {(r["country"], r["quantity"]): r["example"] for r in published("rules_of_thumb.csv")}
    assert rows["Germany", "reaction"] == "100 -> 30"
    assert float(square_metric(100 * KMH).reaction_distance_m) == pytest.approx(30.0)
    assert rows["Germany", "normal braking"] == "50 -> 25; total 40"
    assert float(square_metric(50 * KMH).braking_distance_m) == pytest.approx(25.0)
    assert float(square_metric(50 * KMH).stopping_distance_m) == pytest.approx(40.0)
    assert rows["Germany", "emergency braking"] == "50 -> 12.5"
    assert float(square_half_metric(50 * KMH).braking_distance_m) == pytest.approx(12.5)
    assert rows["UK", "total ft"] == "50 -> 175 ft"
    assert float(square_feet(50 * MPH).stopping_distance_m) / FOOT == pytest.approx(175.0)


@pytest.mark.parametrize("name", IMPLIED_REACTION_S)
def test_the_reaction_time_lies_in_the_rule(name: str) -> None:
    speed = 17.0
    out = METHOD_INPUTS[name].function(speed)
    assert float(out.reaction_distance_m) / speed == pytest.approx(IMPLIED_REACTION_S[name])
    assert bool(out.stops)
    assert not out.lag_distance_m.any()


@pytest.mark.parametrize("name", IMPLIED_REACTION_S)
def test_nothing_but_the_speed_can_be_used(name: str) -> None:
    """Every input of first principles, each of which an edition may state, is a fault beside such a rule."""
    whole, rule = METHOD_INPUTS["first-principles"], METHOD_INPUTS[name]
    assert [given for given in whole.required | whole.optional if rule.usable(given)] == []


def test_the_values_that_lie_in_the_rules() -> None:
    """1.08 s and 0.6818 s; 3.858 and 7.716 m/s² (worked out from the rules)."""
    assert IMPLIED_REACTION_S["square-metric"] == pytest.approx(1.08)
    assert IMPLIED_REACTION_S["square-feet"] == pytest.approx(15 / 22)
    assert float(square_metric(20.0).full_deceleration_mps2) == pytest.approx(3.858, abs=5e-4)
    assert float(square_half_metric(20.0).full_deceleration_mps2) == pytest.approx(7.716, abs=5e-4)


@pytest.mark.parametrize("speed", [0.0, -1.0, 201.0, float("nan")])
def test_a_speed_that_is_none_is_refused(speed: float) -> None:
    with pytest.raises(ValueError, match="speed_mps"):
        square_metric(speed)
