"""The whole stop: against a step-by-step integration, the check values, what does not stop, what is refused."""

from __future__ import annotations

import dataclasses
import math
from collections.abc import Callable
from itertools import product

import numpy as np
import pytest

from chartgen.motion import phases, stopping
from chartgen.motion.friction import Brake
from chartgen.motion.limits import FloatArray
from chartgen.motion.phases import Phase
from chartgen.motion.stopping import REASONS, stop

from .reference import brake_force, friction_law, step_by_step

MPH = 0.44704


def test_loaded_downgrade_check_value() -> None:
    """Stated with the mechanics: -9 %, 50 mph, 5 m/s², 0.4 s lag, 0.3 s build-up: 75.68 m after the reaction."""
    out = stop(50 * MPH, reaction_time_s=1.0, brake_lag_s=0.4, build_up_s=0.3, grade=-0.09, max_deceleration_mps2=5.0)
    assert round(float(out.stopping_distance_m - out.reaction_distance_m), 2) == 75.68


def test_leaving_gravity_out_before_full_braking_would_be_too_short() -> None:
    lorry = {"reaction_time_s": 0.0, "max_deceleration_mps2": 5.0}
    whole = stop(50 * MPH, brake_lag_s=0.4, build_up_s=0.3, grade=-0.09, **lorry)
    v, b, slope = 50 * MPH, 5.0, 9.80665 * math.sin(math.atan(-0.09))
    without = v * 0.4 + v * 0.3 - b * 0.3**2 / 6 + (v - b * 0.3 / 2) ** 2 / (2 * (b + slope))
    assert 0.01 < 1.0 - without / float(whole.stopping_distance_m) < 0.05


GRID = list(product([4.0, 16.0, 33.0], [-0.09, 0.0, 0.05], [(0.0, 0.0), (0.4, 0.0), (0.0, 0.6), (0.5, 0.3)]))


@pytest.mark.parametrize("mu", [0.15, 0.7])
@pytest.mark.parametrize("limit", [math.inf, 4.0])
def test_constant_friction_against_the_integration(mu: float, limit: float) -> None:
    for speed, grade, (lag, build_up) in GRID:
        out = stop(
            speed,
            reaction_time_s=1.1,
            brake_lag_s=lag,
            build_up_s=build_up,
            mu=mu,
            grade=grade,
            brake_efficiency=0.9,
            max_deceleration_mps2=limit,
        )
        brake, slope = brake_force(friction_law(mu=mu), grade=grade, brake_efficiency=0.9, limit=limit)
        steps = step_by_step(speed, reaction_time=1.1, lag=lag, build_up=build_up, brake=brake, slope=slope)
        _same(out, steps)


@pytest.mark.parametrize(("cap", "limit"), [(math.inf, math.inf), (0.5, math.inf), (math.inf, 4.0)])
def test_falling_friction_against_the_integration(cap: float, limit: float) -> None:
    """Without a build-up the two describe the same motion."""
    road = {"f60": 0.38, "sp_kmh": 90.0, "max_mu": cap}
    for speed, grade, (lag, build_up) in GRID:
        if build_up:
            continue
        out = stop(speed, reaction_time_s=0.8, brake_lag_s=lag, grade=grade, max_deceleration_mps2=limit, **road)
        brake, slope = brake_force(friction_law(**road), grade=grade, limit=limit)
        _same(out, step_by_step(speed, reaction_time=0.8, lag=lag, build_up=0.0, brake=brake, slope=slope))


def test_rest_in_the_lag_and_in_the_build_up_against_the_integration() -> None:
    for speed, grade, lag, build_up in product([0.3, 1.0, 2.0], [-0.05, 0.0, 0.1, 0.3], [0.0, 1.0], [0.5, 2.5]):
        out = stop(speed, reaction_time_s=0.5, brake_lag_s=lag, build_up_s=build_up, mu=0.8, grade=grade)
        brake, slope = brake_force(friction_law(mu=0.8), grade=grade)
        steps = step_by_step(speed, reaction_time=0.5, lag=lag, build_up=build_up, brake=brake, slope=slope)
        _same(out, steps)


@pytest.mark.parametrize("phase", ["lag", "build_up"])
def test_the_integration_finds_gravity_left_out(phase: str, monkeypatch: pytest.MonkeyPatch) -> None:
    """A planted mutant: the slope acts in full braking only."""

    def lag(speed: FloatArray, *, lag_s: FloatArray, slope_mps2: FloatArray) -> Phase:
        return phases.lag(speed, lag_s=lag_s, slope_mps2=0.0 * slope_mps2)

    def build_up(speed: FloatArray, *, build_up_s: FloatArray, brake: Brake) -> Phase:
        return phases.build_up(speed, build_up_s=build_up_s, brake=dataclasses.replace(brake, slope=0.0 * brake.slope))

    monkeypatch.setattr(stopping, phase, {"lag": lag, "build_up": build_up}[phase])
    out = stop(22.0, reaction_time_s=1.0, brake_lag_s=0.4, build_up_s=0.3, mu=0.5, grade=-0.09)
    brake, slope = brake_force(friction_law(mu=0.5), grade=-0.09)
    steps = step_by_step(22.0, reaction_time=1.0, lag=0.4, build_up=0.3, brake=brake, slope=slope)
    with pytest.raises(AssertionError):
        _same(out, steps)


def steady(value: float) -> Callable[[float], float]:
    """The same at every speed."""
    return lambda v: value


def _same(out: object, steps: dict[str, float]) -> None:
    for ours, theirs in (
        ("reaction_distance_m", "reaction"),
        ("lag_distance_m", "lag"),
        ("braking_distance_m", "braking"),
        ("stopping_distance_m", "stopping"),
        ("stopping_time_s", "time"),
    ):
        assert float(getattr(out, ours)) == pytest.approx(steps[theirs], rel=1e-8, abs=1e-9), (ours, steps)


def _build_up_against_the_truth(
    *, speeds: tuple[float, float], grades: float, build_ups: float, sp_kmh: tuple[float, float], cases: int
) -> np.ndarray:
    """How much longer, relatively, the stop is made by rising to one force instead of the speed's own."""
    chance = np.random.default_rng(9)
    longer = []
    for _ in range(cases):
        speed, grade = chance.uniform(*speeds), chance.uniform(-grades, grades)
        build_up, lag = chance.uniform(0.05, build_ups), chance.choice([0.0, 0.4])
        road = {"f60": chance.uniform(0.1, 0.7), "sp_kmh": chance.uniform(*sp_kmh), "max_mu": chance.uniform(0.4, 1.5)}
        limit = chance.choice([math.inf, 5.0])
        out = stop(
            speed,
            reaction_time_s=0.0,
            brake_lag_s=lag,
            build_up_s=build_up,
            grade=grade,
            max_deceleration_mps2=limit,
            **road,
        )
        if out.stops:
            brake, slope = brake_force(friction_law(**road), grade=grade, limit=limit)
            truth = step_by_step(speed, reaction_time=0.0, lag=lag, build_up=build_up, brake=brake, slope=slope)
            longer.append(float(out.stopping_distance_m) / truth["stopping"] - 1.0)
    assert len(longer) > cases // 2
    return np.array(longer)


def test_what_the_build_up_leaves_out_in_the_usual_range() -> None:
    """With friction that falls with speed the ramp rises to one force: never too short, at most 3 % too long."""
    longer = _build_up_against_the_truth(
        speeds=(5.0, 35.0), grades=0.12, build_ups=1.0, sp_kmh=(60.0, 300.0), cases=250
    )
    assert longer.min() > -1e-8
    assert longer.max() < 0.03


def test_what_the_build_up_leaves_out_in_the_whole_range() -> None:
    longer = _build_up_against_the_truth(
        speeds=(1.0, 60.0), grades=0.30, build_ups=3.0, sp_kmh=(20.0, 1000.0), cases=250
    )
    assert longer.min() > -1e-8
    assert longer.max() < 0.20


def test_build_up_rises_to_the_force_at_its_first_speed() -> None:
    """Where the slope pulls with less than 0.3 of the force: a ramp to F at the speed at which it begins."""
    road = {"f60": 0.4, "sp_kmh": 100.0}
    for speed, grade, lag in product([10.0, 30.0], [-0.05, 0.0, 0.05], [0.0, 0.4]):
        brake, slope = brake_force(friction_law(**road), grade=grade)
        first = steady(brake(speed - slope * lag))
        steps = step_by_step(speed, reaction_time=1.0, lag=lag, build_up=0.5, brake=brake, slope=slope, ramp=first)
        _same(stop(speed, reaction_time_s=1.0, brake_lag_s=lag, build_up_s=0.5, grade=grade, **road), steps)


def test_ice_on_a_downgrade_does_not_stop() -> None:
    out = stop([5.0, 13.0], reaction_time_s=1.0, brake_lag_s=0.5, mu=0.05, grade=-0.09)
    assert out.stops.tolist() == [False, False]
    assert out.reason.tolist() == ["never-at-rest", "never-at-rest"]
    assert out.reaction_distance_m.tolist() == [5.0, 13.0]
    assert np.isfinite(out.lag_distance_m).all()
    for blank in (out.braking_distance_m, out.stopping_distance_m, out.stopping_time_s):
        assert np.isnan(blank).all()


def test_least_deceleration_of_a_tenth() -> None:
    """0.1 m/s² still stops, less does not; both where the limit governs and where friction does."""
    out = stop(10.0, reaction_time_s=1.0, max_deceleration_mps2=[0.1, 0.0999, 5.0])
    assert out.stops.tolist() == [True, False, True]
    assert out.reason.tolist() == ["", "too-little-friction", ""]
    friction = 0.1 / 9.80665
    out = stop(10.0, reaction_time_s=1.0, mu=[friction * 1.0001, friction * 0.9999])
    assert out.reason.tolist() == ["", "too-little-friction"]


def test_friction_that_falls_decides_at_the_highest_speed_passed() -> None:
    road = {"reaction_time_s": 1.0, "f60": 0.2, "sp_kmh": 40.0, "grade": -0.08}
    slow, fast = stop(12.0, **road), stop(35.0, **road)
    assert bool(slow.stops)
    assert str(fast.reason) == "never-at-rest"
    # The lag's gain of speed alone can decide it.
    edge = next(v for v in np.arange(12.0, 35.0, 0.01) if not stop(v, **road).stops)
    assert stop(edge - 0.02, **road).stops
    assert not stop(edge - 0.02, brake_lag_s=1.0, **road).stops


def test_reasons_are_the_published_codes() -> None:
    assert REASONS == ("", "too-little-friction", "never-at-rest", "outside-friction-range")


def test_full_deceleration_includes_the_slope() -> None:
    out = stop(20.0, reaction_time_s=1.0, mu=0.6, grade=[-0.1, 0.0, 0.1], max_deceleration_mps2=5.0)
    slope = 9.80665 * 0.1 / math.hypot(1.0, 0.1)
    assert out.full_deceleration_mps2 == pytest.approx([5.0 - slope, 5.0, 5.0 + slope], rel=1e-14)


def test_shapes_broadcast_and_arrays_are_frozen() -> None:
    out = stop(np.array([[10.0], [20.0]]), reaction_time_s=1.0, mu=[0.3, 0.5, 0.7])
    assert out.stopping_distance_m.shape == out.stops.shape == out.reason.shape == (2, 3)
    assert float(out.braking_distance_m[1, 2]) == pytest.approx(400 / (2 * 0.7 * 9.80665), rel=1e-14)
    with pytest.raises(ValueError, match="read-only"):
        out.braking_distance_m[0, 0] = 1.0
    assert stop(10.0, reaction_time_s=1.0, mu=0.5).stopping_distance_m.shape == ()
    assert stop(np.empty(0), reaction_time_s=1.0, mu=0.5).stopping_distance_m.shape == (0,)


def test_chunks_do_not_show() -> None:
    speed = np.linspace(1.0, 60.0, 50_000)
    road = {"reaction_time_s": 1.0, "f60": 0.4, "sp_kmh": 120.0, "grade": -0.04, "build_up_s": 0.3}
    whole = stop(speed, **road).stopping_distance_m
    picked = np.array([0, 16_383, 16_384, 32_768, 49_999])
    assert whole[picked] == pytest.approx(
        [float(stop(speed[i], **road).stopping_distance_m) for i in picked], rel=1e-14
    )
    assert (np.diff(whole) > 0).all()


BAD = {
    "speed_mps": [0.0, -1.0, 200.1],
    "reaction_time_s": [-0.1, 10.1],
    "brake_lag_s": [-0.1, 3.1],
    "build_up_s": [-0.1, 3.1],
    "mu": [0.0, -0.5, 1.51],
    "grade": [-0.301, 0.301],
    "brake_efficiency": [0.0, -0.5, 1.01],
    "max_deceleration_mps2": [0.0, -5.0],
}


@pytest.mark.parametrize(
    ("name", "value"), [(n, v) for n, values in BAD.items() for v in (*values, math.nan, -math.inf)]
)
def test_out_of_range_is_refused_by_name(name: str, value: float) -> None:
    good = {"speed_mps": 20.0, "reaction_time_s": 1.0, "mu": 0.5}
    for given in (value, [0.5, value]):
        with pytest.raises(ValueError, match=rf"^{name}: "):
            stop(**(good | {name: given}))


@pytest.mark.parametrize("name", ["speed_mps", "reaction_time_s", "brake_lag_s", "build_up_s", "mu", "grade"])
def test_infinity_is_refused_by_name(name: str) -> None:
    with pytest.raises(ValueError, match=rf"^{name}: inf is not accepted"):
        stop(**({"speed_mps": 20.0, "reaction_time_s": 1.0, "mu": 0.5} | {name: math.inf}))


def test_something_must_limit_the_deceleration() -> None:
    with pytest.raises(ValueError) as raised:  # noqa: PT011  # the whole message is compared below
        stop(20.0, reaction_time_s=1.0)
    assert str(raised.value) == "mu: without friction (mu, or f60 and sp_kmh) max_deceleration_mps2 must be finite"


def test_an_efficiency_without_friction_is_refused() -> None:
    with pytest.raises(ValueError) as raised:  # noqa: PT011  # the whole message is compared below
        stop(20.0, reaction_time_s=1.0, max_deceleration_mps2=5.0, brake_efficiency=0.8)
    says = "brake_efficiency: it is a share of friction (mu, or f60 and sp_kmh), and none is given"
    assert str(raised.value) == says
