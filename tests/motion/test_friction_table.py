"""Is friction by a table the monotone curve of scipy, and a stop under it that of a step-by-step integration?"""

from __future__ import annotations

import math
from functools import partial
from itertools import pairwise

import numpy as np
import pytest
from scipy.interpolate import PchipInterpolator
from scipy.optimize import brentq

from chartgen.motion import stopping
from chartgen.motion.friction import friction_at, penn_state, speed_constant
from chartgen.motion.friction_table import FrictionTable
from chartgen.motion.stopping import stop
from tests.motion.reference import brake_force, by_quadrature, step_by_step

TABLE = FrictionTable(np.array([4.0, 10.0, 18.0, 27.0, 36.0]), np.array([0.72, 0.60, 0.52, 0.47, 0.45]))


def test_the_curve_is_that_of_scipy() -> None:
    chance = np.random.default_rng(11)
    for _ in range(300):
        count = int(chance.integers(2, 12))
        speeds = np.cumsum(chance.uniform(0.2, 8.0, count))
        values = chance.uniform(0.05, 1.2, count)
        at = chance.uniform(speeds[0], speeds[-1], 40)
        table = FrictionTable(speeds, values)
        assert table.at(at) == pytest.approx(PchipInterpolator(speeds, values)(at), abs=1e-14)


def test_the_curve_never_overshoots() -> None:
    at = np.linspace(4.0, 36.0, 3000)
    assert (np.diff(TABLE.at(at)) <= 0.0).all()


def test_below_the_first_speed_its_value_and_beyond_the_last_none() -> None:
    assert TABLE.at([0.0, 3.9, 4.0]).tolist() == [0.72, 0.72, 0.72]
    assert np.isnan(TABLE.at([36.0, 36.0 * (1 + 1e-10), 36.1])).tolist() == [False, False, True]


@pytest.mark.parametrize("grade", [-0.08, 0.0, 0.1])
@pytest.mark.parametrize("limit", [math.inf, 5.2])
@pytest.mark.parametrize("speed", [3.0, 15.0, 33.0])
def test_a_stop_is_that_of_the_motion(grade: float, limit: float, speed: float) -> None:
    brake, slope = brake_force(lambda v: float(TABLE.at(max(v, 0.0))), grade=grade, brake_efficiency=0.9, limit=limit)
    other = step_by_step(speed, reaction_time=1.0, lag=0.3, build_up=0.0, brake=brake, slope=slope)
    out = stop(
        speed, reaction_time_s=1.0, brake_lag_s=0.3, grade=grade, brake_efficiency=0.9, max_deceleration_mps2=limit,
        tables=(TABLE,), table=0,
    )  # fmt: skip
    assert float(out.stopping_distance_m) == pytest.approx(other["stopping"], rel=1e-7)
    assert float(out.stopping_time_s) == pytest.approx(other["time"], rel=1e-6)


def _friction(speed: float, table: FrictionTable) -> float:
    return float(table.at(speed))


def test_a_table_just_above_not_stopping() -> None:
    """Downgrades on which the least deceleration, somewhere on the way, is 0.1005 m/s²: 1/a is as steep as it comes."""
    chance, gravity = np.random.default_rng(3), 9.80665
    for number in range(60):
        speeds = np.cumsum(chance.uniform(1.0, 12.0, int(chance.integers(2, 7))))
        values = chance.uniform(0.1, 0.29, len(speeds))
        table = FrictionTable(speeds, np.sort(values)[::-1] if number % 3 else values)
        grade, least = 0.0, float(values.min())
        for _ in range(60):
            grade = 0.1005 * math.sqrt(1.0 + grade * grade) / gravity - least
        limit = float(chance.choice([math.inf, 1.4])) * gravity * -grade + 0.2
        out = stop(speeds[-1], reaction_time_s=0.0, grade=grade, max_deceleration_mps2=limit, tables=(table,), table=0)
        brake, slope = brake_force(partial(_friction, table=table), grade=grade, limit=limit)
        across = gravity / math.sqrt(1.0 + grade * grade)
        knots = [*speeds]
        for low, high in pairwise(speeds):
            ends = [float(table.at(v)) * across - limit for v in (low, high)]
            if math.isfinite(limit) and ends[0] * ends[1] < 0.0:
                knots.append(brentq(lambda v, t, m: _friction(v, t) - m, low, high, args=(table, limit / across)))
        expected = by_quadrature(speeds[-1], brake=brake, slope=slope, knots=tuple(knots))
        assert bool(out.stops)
        assert (float(out.stopping_distance_m), float(out.stopping_time_s)) == pytest.approx(
            expected, rel=1e-11, abs=0.0
        )


def test_rows_with_and_without_a_table_keep_their_places() -> None:
    flat = FrictionTable(np.array([1.0, 50.0]), np.array([0.5, 0.5]))
    out = stop(
        [20.0, 20.0, 20.0, 30.0], reaction_time_s=1.0, mu=[math.nan, 0.5, math.nan, math.nan], tables=(TABLE, flat),
        table=[1, -1, 0, 1],
    )  # fmt: skip
    even = stop([20.0, 30.0], reaction_time_s=1.0, mu=0.5).stopping_distance_m
    assert out.stopping_distance_m[[0, 1, 3]] == pytest.approx(even[[0, 0, 1]], rel=1e-12)
    assert float(out.stopping_distance_m[2]) < float(even[0])


def test_beyond_the_sources_speeds_is_a_gap() -> None:
    out = stop([35.0, 37.0], reaction_time_s=1.0, tables=(TABLE,), table=0)
    assert out.reason.tolist() == ["", "outside-friction-range"]
    assert np.isnan(out.stopping_distance_m).tolist() == [False, True]
    # Downhill the lag carries a vehicle beyond the table.
    down = stop(35.9, reaction_time_s=1.0, brake_lag_s=0.5, grade=-0.1, tables=(TABLE,), table=0)
    assert down.reason == "outside-friction-range"
    valid = stop([20.0, 30.0], reaction_time_s=1.0, mu=0.5, valid_to_mps=25.0)
    assert valid.reason.tolist() == ["", "outside-friction-range"]


def test_too_little_friction_anywhere_on_the_way_does_not_stop() -> None:
    dip = FrictionTable(np.array([2.0, 10.0, 20.0]), np.array([0.5, 0.08, 0.5]))
    assert stop(20.0, reaction_time_s=1.0, grade=-0.09, tables=(dip,), table=0).reason == "never-at-rest"
    assert bool(stop(20.0, reaction_time_s=1.0, tables=(dip,), table=0).stops)


def test_an_unbraked_trailer_lengthens_the_braking_by_its_mass() -> None:
    alone = stop(25.0, reaction_time_s=1.0, mu=0.6).braking_distance_m
    drawn = stop(25.0, reaction_time_s=1.0, mu=0.6, brake_share=0.6).braking_distance_m
    assert float(drawn) == pytest.approx(float(alone) / 0.6)
    limited = stop(25.0, reaction_time_s=1.0, max_deceleration_mps2=5.0, brake_share=0.5).braking_distance_m
    assert float(limited) == pytest.approx(625.0 / 5.0)


@pytest.mark.parametrize(
    ("speeds", "values", "says"),
    [
        ([1.0], [0.5], "two or more"),
        ([1.0, 2.0], [0.5], "two or more"),
        ([2.0, 1.0], [0.5, 0.4], "rise"),
        ([1.0, 1.0], [0.5, 0.4], "rise"),
        ([1.0, 2.0], [0.5, 0.0], "mu"),
        ([1.0, 2.0], [0.5, 1.6], "mu"),
        ([-1.0, 2.0], [0.5, 0.4], "rise"),
    ],
)
def test_a_table_that_is_none_is_refused(speeds: list[float], values: list[float], says: str) -> None:
    with pytest.raises(ValueError, match=says):
        FrictionTable(np.array(speeds), np.array(values))


@pytest.mark.parametrize(
    ("table", "mu", "says"), [(1, math.nan, "table"), (-2, math.nan, "table"), (0, 0.5, "more than one")]
)
def test_an_index_that_is_none_is_refused(table: int, mu: float, says: str) -> None:
    with pytest.raises(ValueError, match=says):
        stop(20.0, reaction_time_s=1.0, mu=mu, tables=(TABLE,), table=table)


def test_friction_at_a_speed_knows_tables() -> None:
    found = friction_at([10.0, 10.0], mu=[math.nan, 0.3], tables=(TABLE,), table=[0, -1])
    assert found == pytest.approx([0.60, 0.3])


def test_penn_state_is_its_own_formula() -> None:
    """SN(V) = SN0·exp(-PNG·V/100), V in mph (from memory); friction is a hundredth of it."""
    f60, sp = penn_state(55.0, 0.9)
    for mph in (10.0, 40.0, 65.0):
        found = float(friction_at(mph * 0.44704, f60=f60, sp_kmh=sp))
        assert found == pytest.approx(0.55 * math.exp(-0.9 * mph / 100.0), rel=1e-12)


def test_the_speed_constant_follows_from_texture() -> None:
    """ASTM E1960: Sp = 14.2 + 89.7·MPD (from memory)."""
    assert speed_constant(1.0) == pytest.approx(103.9)
    with pytest.raises(ValueError, match="texture_mm"):
        speed_constant(0.0)
    with pytest.raises(ValueError, match="png"):
        penn_state(50.0, 0.0)


RANGES = {
    "speed_mps": (0.1, 60.0), "reaction_time_s": (0.2, 10.0), "brake_lag_s": (0.0, 3.0), "build_up_s": (0.0, 3.0),
    "grade": (-0.30, 0.30), "brake_efficiency": (0.05, 1.0), "max_deceleration_mps2": (0.2, 15.0),
    "brake_share": (0.2, 1.0),
}  # fmt: skip
MORE_IS_WORSE = ("speed_mps", "reaction_time_s", "brake_lag_s", "build_up_s")


def broken(key: str, curves: int = 12, rows: int = 2_000) -> int:
    """How many of `curves` times `rows` stops, half of the curves falling and half of any shape, are shorter or quicker
    for the worse of two values of `key`."""
    chance, found = np.random.default_rng(8), 0
    for number in range(curves):
        speeds = np.cumsum(chance.uniform(0.5, 30.0, int(chance.integers(2, 8))))
        values = chance.uniform(0.02, 1.5, len(speeds))
        table = FrictionTable(speeds / speeds[-1] * 90.0, np.sort(values)[::-1] if number % 2 else values)
        given = {name: chance.uniform(*ends, rows) for name, ends in RANGES.items()}
        other = chance.uniform(*RANGES[key], rows)
        ends = (np.minimum(given[key], other), np.maximum(given[key], other))
        better, worse = ends if key in MORE_IS_WORSE else ends[::-1]
        outs = [stop(**(given | {key: value}), tables=(table,), table=0) for value in (better, worse)]
        for name in ("stopping_distance_m", "stopping_time_s"):
            less, more = (np.where(out.stops, getattr(out, name), np.inf) for out in outs)
            found += int((more < less * (1.0 - 1e-9)).sum())
    return found


@pytest.mark.parametrize("key", RANGES)
def test_what_is_worse_is_never_shorter_under_a_table(key: str) -> None:
    assert broken(key) == 0


def test_a_stop_that_is_shorter_for_the_worse_is_found_out(monkeypatch: pytest.MonkeyPatch) -> None:
    """A planted mutant: the build-up rises to the force at the speed at which it begins, whatever the curve's shape."""
    monkeypatch.setattr(
        stopping, "_ramp_force", lambda lagging, rise_s, brake: brake.at(np.minimum(lagging.end_speed_mps, 90.0))
    )
    assert broken("brake_lag_s") > 0


def test_the_build_up_makes_no_stop_shorter_than_it_is() -> None:
    """Against steps that take the friction of the moment, under curves of any shape."""
    chance, longer = np.random.default_rng(21), []
    for _ in range(60):
        speeds = np.cumsum(chance.uniform(2.0, 15.0, 5))
        table = FrictionTable(speeds / speeds[-1] * 60.0, chance.uniform(0.2, 0.9, 5))
        speed, grade = chance.uniform(3.0, 45.0), chance.uniform(-0.12, 0.12)
        out = stop(speed, reaction_time_s=0.0, build_up_s=0.8, grade=grade, tables=(table,), table=0)
        brake, slope = brake_force(partial(_friction, table=table), grade=grade)
        truth = step_by_step(speed, reaction_time=0.0, lag=0.0, build_up=0.8, brake=brake, slope=slope)
        if out.stops:
            longer.append(float(out.stopping_distance_m) / truth["stopping"] - 1.0)
    assert len(longer) > 50
    assert min(longer) > -1e-8
