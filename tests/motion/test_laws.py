"""The laws of `laws.py`: each holds over the whole ranges, and each finds a planted mutant out."""

from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np
import pytest
from hypothesis import HealthCheck, Phase, given, settings

from chartgen.motion import braking, phases, stopping
from chartgen.motion.friction import Brake
from chartgen.motion.limits import FloatArray
from chartgen.motion.stopping import Stop, stop

from .laws import LAWS, Law, Situation, Stopper

BY_KEY = {law.key: law for law in LAWS}
EXAMPLES = 500


def try_law(law: Law, on_trial: Stopper, *, shrink: bool = True) -> None:
    """The law over `EXAMPLES` pairs of situations, the same ones each time."""
    steps = (Phase.explicit, Phase.generate, Phase.shrink) if shrink else (Phase.generate,)

    @settings(
        max_examples=EXAMPLES,
        derandomize=True,
        database=None,
        deadline=None,
        phases=steps,
        suppress_health_check=[HealthCheck.too_slow],
    )
    @given(law.pairs())
    def run(pair: tuple[Situation, Situation]) -> None:
        law.holds(on_trial, *pair)

    run()


@pytest.mark.parametrize("law", LAWS, ids=lambda law: law.name)
def test_law(law: Law) -> None:
    try_law(law, stop)


@pytest.mark.parametrize("law", LAWS, ids=lambda law: law.name)
def test_downgrades_that_barely_stop(law: Law) -> None:
    """Where friction and slope almost balance, each law once more, on situations made for it."""
    chance = np.random.default_rng(12)
    for _ in range(60):
        grade = chance.uniform(-0.25, -0.02)
        speed, sp_kmh = chance.uniform(5.0, 45.0), chance.uniform(20.0, 300.0)
        f60 = (-grade + chance.uniform(0.0, 0.06)) / math.exp((60 - 3.6 * speed) / sp_kmh)
        base = {
            "speed_mps": speed,
            "reaction_time_s": 1.0,
            "brake_lag_s": chance.uniform(0.0, 1.0),
            "build_up_s": chance.uniform(0.0, 1.0),
            "grade": grade,
            "brake_efficiency": 1.0,
            "max_deceleration_mps2": 15.0,
            "f60": min(f60, 1.4),
            "sp_kmh": sp_kmh,
            "max_mu": 1.5,
        }
        here = "f60" if law.key == "mu" else law.key
        bit = 0.02 * law.span * chance.uniform(0.05, 1.0)
        worse = base[here] + bit if law.up else base[here] - bit
        if worse > 0.0 or law.key == "grade":
            law.holds(stop, base, base | {here: worse})


Columns = dict[str, FloatArray]
Mutate = Callable[[Columns], Columns]


def changed(change: Mutate) -> Stopper:
    """`stop` with its arguments tampered with first."""
    return lambda **situation: stop(**change(situation))


# A mutant for each law, of the kinds that a slip of the pen makes: a clipped speed, a lost sign, a swapped term.
ARGUMENT_MUTANTS: dict[str, Mutate] = {
    "speed_mps": lambda s: s | {"speed_mps": np.minimum(s["speed_mps"], 60.0)},
    "reaction_time_s": lambda s: s | {"reaction_time_s": np.abs(s["reaction_time_s"] - 1.0)},
    "brake_lag_s": lambda s: s | {"brake_lag_s": 3.0 - s["brake_lag_s"]},
    "build_up_s": lambda s: s | {"build_up_s": 3.0 - s["build_up_s"]},
    "mu": lambda s: s | {k: 1.505 - s[k] for k in ("mu", "f60") if k in s},
    "max_mu": lambda s: s | ({"max_mu": 1.505 - s["max_mu"]} if "f60" in s else {}),
    "grade": lambda s: s | {"grade": np.abs(s["grade"])},
    "brake_efficiency": lambda s: s | {"brake_efficiency": 1.05 - s["brake_efficiency"]},
    "max_deceleration_mps2": lambda s: s | {"max_deceleration_mps2": 20.0 / s["max_deceleration_mps2"] + 0.1},
}


def test_each_law_has_its_mutant() -> None:
    assert set(ARGUMENT_MUTANTS) == set(BY_KEY)


@pytest.mark.parametrize("key", list(ARGUMENT_MUTANTS))
def test_law_finds_its_mutant_out(key: str) -> None:
    with pytest.raises(AssertionError, match=BY_KEY[key].name):
        try_law(BY_KEY[key], changed(ARGUMENT_MUTANTS[key]), shrink=False)


def test_a_lag_that_shortens_is_found_out(monkeypatch: pytest.MonkeyPatch) -> None:
    """The lag's distance left out."""

    def lag(speed_mps: FloatArray, *, lag_s: FloatArray, slope_mps2: FloatArray) -> phases.Phase:
        whole = phases.lag(speed_mps, lag_s=lag_s, slope_mps2=slope_mps2)
        return phases.Phase(
            distance_m=-0.1 * whole.distance_m,
            time_s=whole.time_s,
            end_speed_mps=whole.end_speed_mps,
            top_speed_mps=whole.top_speed_mps,
        )

    monkeypatch.setattr(stopping, "lag", lag)
    with pytest.raises(AssertionError, match="never shorter with lag"):
        try_law(BY_KEY["brake_lag_s"], stop, shrink=False)


def test_a_downgrade_that_slows_is_found_out(monkeypatch: pytest.MonkeyPatch) -> None:
    """The slope's sign swapped in full braking."""

    def full_braking(speed_mps: FloatArray, brake: Brake) -> braking.Braking:
        other = Brake(at_zero=brake.at_zero, fall_per_mps=brake.fall_per_mps, cap=brake.cap, slope=-brake.slope)
        return braking.full_braking(speed_mps, other)

    monkeypatch.setattr(stopping, "full_braking", full_braking)
    with pytest.raises(AssertionError, match="downhill never shorter"):
        try_law(BY_KEY["grade"], stop, shrink=False)


def test_a_stop_for_the_worse_is_found_out() -> None:
    """ "Does not stop" forgotten on the steepest downgrades."""

    def forgetful(**situation: FloatArray) -> Stop:
        return stop(**(situation | {"grade": np.where(situation["grade"] < -0.20, 0.0, situation["grade"])}))

    icy = {"speed_mps": 20.0, "reaction_time_s": 1.0, "mu": 0.05}
    law = BY_KEY["grade"]
    law.holds(stop, icy | {"grade": -0.15}, icy | {"grade": -0.25})
    with pytest.raises(AssertionError, match="stops only in the worse case"):
        law.holds(forgetful, icy | {"grade": -0.15}, icy | {"grade": -0.25})
