"""Printed formulas of manuals against the tables and worked examples printed with them, at their own rounding."""

from __future__ import annotations

import inspect
import math

import numpy as np
import pytest
from scipy import constants

from chartgen.motion import limits, methods
from chartgen.motion.methods import METHOD_INPUTS, sight_metric, sight_us, slide_metric, slide_us
from chartgen.motion.stopping import Stop

from .reference import published

MPH, FOOT, KMH = 0.44704, 0.3048, 1 / 3.6


def nearest(value: float, step: float) -> float:
    """To the nearest step, a tie upward; what is a billionth below a tie counts as one."""
    return math.floor(value / step * (1 + 1e-9) + 0.5) * step


def up(value: float, step: float) -> float:
    return math.ceil(value / step * (1 - 1e-9)) * step


def test_conversions_are_those_of_scipy_constants() -> None:
    # scipy multiplies its foot and mile out of inches, and is a bit off the exact 0.3048 and 0.44704.
    assert pytest.approx(constants.mile / constants.hour, rel=1e-15) == methods.MPS_PER_MPH
    assert pytest.approx(constants.foot, rel=1e-15) == methods.M_PER_FT
    assert pytest.approx(1 / constants.kmh, rel=1e-15) == limits.KMH_PER_MPS
    assert constants.g == limits.GRAVITY_MPS2


@pytest.mark.parametrize("mph", [5.0, 15.0, 20.0, 30.0, 45.0, 55.0, 62.5, 70.0, 80.0])
def test_the_manuals_own_speed_comes_back(mph: float) -> None:
    assert mph * MPH / methods.MPS_PER_MPH == pytest.approx(mph, abs=1e-9)
    assert (mph / 3.6) * limits.KMH_PER_MPS == pytest.approx(mph, abs=1e-9)


def _green_book(rows: list[dict[str, str]], computed: list[tuple[float, float]], unit: str) -> list[tuple[str, str]]:
    """Cells that differ from the print: parts to the nearest 0.1, their sum, the design value up to 5."""
    differing = []
    for row, (reaction, braking) in zip(rows, computed, strict=True):
        speed = next(iter(row.values()))
        parts = nearest(reaction, 0.1), nearest(braking, 0.1)
        for name, value in (
            (f"brake_reaction_{unit}", parts[0]),
            (f"braking_level_{unit}", parts[1]),
            (f"ssd_calculated_{unit}", sum(parts)),
            (f"ssd_design_{unit}", up(sum(parts), 5.0)),
        ):
            if value != pytest.approx(float(row[name]), abs=1e-6):
                differing.append((speed, name))
    return differing


def test_sight_us_is_the_green_books_level_table() -> None:
    # AASHTO Green Book, Exhibit 3-1 (2001/2004) = Table 3-1 (2011/2018), US customary; tests/published says how each
    # row was seen.
    rows = published("aashto_ssd_level_us.csv")
    assert len(rows) == 14
    speed = np.array([float(row["design_speed_mph"]) for row in rows]) * MPH
    out = sight_us(speed, reaction_time_s=2.5, max_deceleration_mps2=11.2 * FOOT)
    computed = zip(out.reaction_distance_m / FOOT, out.braking_distance_m / FOOT, strict=True)
    assert _green_book(rows, list(computed), "ft") == []


def test_sight_metric_is_the_green_books_level_table() -> None:
    # The same table, metric half. One cell stays apart: at 130 km/h the book prints a braking distance of 193.8 m where
    # its own formula gives 193.85, which rounds to 193.9; the sum printed, 284.2, follows the printed cell. The design
    # value is not touched by it.
    rows = published("aashto_ssd_level_metric.csv")
    assert len(rows) == 12
    speed = np.array([float(row["design_speed_kmh"]) for row in rows]) * KMH
    out = sight_metric(speed, reaction_time_s=2.5, max_deceleration_mps2=3.4)
    computed = list(zip(out.reaction_distance_m, out.braking_distance_m, strict=True))
    assert _green_book(rows, computed, "m") == [("130", "braking_level_m"), ("130", "ssd_calculated_m")]
    assert computed[-1][1] == pytest.approx(193.852941, abs=1e-6)


def test_sight_us_is_the_handbooks_table_in_steps_of_1_mph() -> None:
    # Brockenbrough & Boedecker, Highway Engineering Handbook, Table 2.2 (a state's location and design manual).
    rows = published("handbook_ssd_1mph_steps.csv")
    assert len(rows) == 40
    for row in rows:
        out = sight_us(float(row["design_speed_mph"]) * MPH, reaction_time_s=2.5, max_deceleration_mps2=11.2 * FOOT)
        assert up(float(out.stopping_distance_m) / FOOT, 5.0) == float(row["ssd_design_ft"])


def test_worked_examples() -> None:
    rows = published("formulas_worked.csv")
    # 60 mph, t = 2.5 s, a/g rounded to 0.35 in the source, so a = 0.35 g with the formula's own g of 32.2 ft/s².
    assert rows[0]["published_result"] == "563.36 ft"
    assert rows[1]["published_result"] == "649.07 ft -> 650"
    limit = 0.35 * 32.2 * FOOT
    steep = sight_us(60 * MPH, reaction_time_s=2.5, max_deceleration_mps2=limit, grade=-0.07)
    assert float(steep.stopping_distance_m) / FOOT == pytest.approx(649.07, abs=0.005)
    for grade, feet in ((0.0, 563.36), (-0.07, 649.07)):
        out = slide_us(60 * MPH, reaction_time_s=2.5, mu=0.35, grade=grade)
        assert float(out.stopping_distance_m) / FOOT == pytest.approx(feet, abs=0.005)
    # 60 km/h, t = 2.5 s, f = 0.30: 0.6 at a brake efficiency of 50 %.
    assert rows[2]["published_result"].startswith("41.70+47.24=88.94 m")
    for road in ({"mu": 0.30}, {"mu": 0.6, "brake_efficiency": 0.5}):
        out = slide_metric(60 * KMH, reaction_time_s=2.5, **road)
        assert float(out.reaction_distance_m) == pytest.approx(41.70, abs=0.005)
        assert float(out.braking_distance_m) == pytest.approx(47.24, abs=0.005)


def test_printed_constants_to_the_last_digit() -> None:
    v, t, a, g = 97.0, 1.7, 3.1, -0.035
    level = sight_metric(v * KMH, reaction_time_s=t, max_deceleration_mps2=a)
    assert float(level.stopping_distance_m) == pytest.approx(0.278 * v * t + 0.039 * v**2 / a, rel=1e-13)
    graded = sight_metric(v * KMH, reaction_time_s=t, max_deceleration_mps2=a, grade=g)
    assert float(graded.braking_distance_m) == pytest.approx(v**2 / (254 * (a / 9.81 + g)), rel=1e-13)
    a_ft = a / FOOT
    level = sight_us(v * MPH, reaction_time_s=t, max_deceleration_mps2=a)
    assert float(level.stopping_distance_m) / FOOT == pytest.approx(1.47 * v * t + 1.075 * v**2 / a_ft, rel=1e-13)
    graded = sight_us(v * MPH, reaction_time_s=t, max_deceleration_mps2=a, grade=g)
    assert float(graded.braking_distance_m) / FOOT == pytest.approx(v**2 / (30 * (a_ft / 32.2 + g)), rel=1e-13)
    slide = slide_metric(v * KMH, reaction_time_s=t, mu=0.41, grade=g)
    assert float(slide.stopping_distance_m) == pytest.approx(0.278 * v * t + v**2 / (254 * (0.41 + g)), rel=1e-13)
    slide = slide_us(v * MPH, reaction_time_s=t, mu=0.41, grade=g)
    assert float(slide.stopping_distance_m) / FOOT == pytest.approx(1.47 * v * t + v**2 / (30 * (0.41 + g)), rel=1e-13)


def test_slide_takes_friction_at_the_initial_speed() -> None:
    v = 80.0
    f = 0.35 * math.exp((60 - v) / 110)
    out = slide_metric(v * KMH, reaction_time_s=1.0, f60=0.35, sp_kmh=110.0, brake_efficiency=0.8)
    assert float(out.braking_distance_m) == pytest.approx(v**2 / (254 * 0.8 * f), rel=1e-13)


@pytest.mark.parametrize("slide", [slide_metric, slide_us])
def test_slide_on_ice_downhill_does_not_stop(slide: object) -> None:
    assert callable(slide)
    out = slide([10.0, 10.0, 10.0], reaction_time_s=1.0, mu=[0.05, 0.095, 0.5], grade=-0.09)
    assert isinstance(out, Stop)
    assert out.reason.tolist() == ["never-at-rest", "too-little-friction", ""]
    assert np.isnan(out.braking_distance_m).tolist() == [True, True, False]
    assert out.reaction_distance_m == pytest.approx([10.0, 10.0, 10.0], rel=0.003)


@pytest.mark.parametrize("sight", [sight_metric, sight_us])
def test_sight_on_a_downgrade_steeper_than_the_deceleration(sight: object) -> None:
    assert callable(sight)
    out = sight(20.0, reaction_time_s=2.5, max_deceleration_mps2=[1.0, 3.4], grade=-0.2)
    assert out.reason.tolist() == ["never-at-rest", ""]


def test_time_is_that_of_an_even_deceleration() -> None:
    out = slide_metric(20.0, reaction_time_s=2.5, mu=0.4)
    assert float(out.stopping_time_s) == pytest.approx(2.5 + 2 * float(out.braking_distance_m) / 20.0, rel=1e-14)


def test_inputs_say_what_the_functions_take() -> None:
    """`METHOD_INPUTS` and the signatures name the same inputs; what has no default is required."""
    for name, inputs in METHOD_INPUTS.items():
        parameters = dict(inspect.signature(inputs.function).parameters)
        assert next(iter(parameters)) == "speed_mps"
        parameters.pop("speed_mps")
        friction = ("mu", "f60", "sp_kmh", "max_mu", "tables", "table")
        has_friction = all(parameters.pop(p, None) is not None for p in friction)
        assert has_friction == inputs.usable("friction")
        takes = set(inputs.required | inputs.optional) - {"friction"}
        assert set(parameters) == takes, name
        needs = {n for n, p in parameters.items() if p.default is inspect.Parameter.empty}
        assert needs == set(inputs.required) - {"friction"}, name
        assert inputs.source


def test_what_a_method_cannot_use() -> None:
    rules = {"square-metric", "square-half-metric", "square-feet"}
    assert set(METHOD_INPUTS) - rules == {"first-principles", "sight-metric", "sight-us", "slide-metric", "slide-us"}
    for name in rules:
        assert not METHOD_INPUTS[name].required | METHOD_INPUTS[name].optional
    for name in ("sight-metric", "sight-us", "slide-metric", "slide-us"):
        assert not METHOD_INPUTS[name].usable("brake_lag_s")
        assert not METHOD_INPUTS[name].usable("build_up_s")
    for name in ("slide-metric", "slide-us"):
        assert not METHOD_INPUTS[name].usable("max_deceleration_mps2")
    for name in ("sight-metric", "sight-us"):
        assert not METHOD_INPUTS[name].usable("friction")
        assert not METHOD_INPUTS[name].usable("brake_efficiency")


@pytest.mark.parametrize("value", [math.nan, math.inf, 0.0, -1.0])
@pytest.mark.parametrize("sight", [sight_metric, sight_us])
def test_a_sight_method_needs_its_deceleration(sight: object, value: float) -> None:
    assert callable(sight)
    with pytest.raises(ValueError, match=r"^max_deceleration_mps2: "):
        sight(20.0, reaction_time_s=2.5, max_deceleration_mps2=value)


@pytest.mark.parametrize("slide", [slide_metric, slide_us])
@pytest.mark.parametrize(
    ("name", "value"),
    [
        ("speed_mps", 0.0),
        ("speed_mps", math.nan),
        ("reaction_time_s", -1.0),
        ("reaction_time_s", math.inf),
        ("grade", 0.4),
        ("mu", 1.6),
        ("mu", math.nan),
        ("brake_efficiency", 1.2),
        ("brake_efficiency", math.nan),
    ],
)
def test_a_slide_method_refuses_by_name(slide: object, name: str, value: float) -> None:
    assert callable(slide)
    good = {"speed_mps": 20.0, "reaction_time_s": 2.5, "mu": 0.5}
    with pytest.raises(ValueError, match=rf"^{name}: "):
        slide(**(good | {name: value}))
