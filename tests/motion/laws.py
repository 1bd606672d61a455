"""The laws that every stop keeps, as one checker each: it takes the function on trial and two situations.

A situation is the keyword arguments of `stop`. A law changes one of them for the worse; a stop that is then shorter,
or takes less time, breaks the law. What does not stop counts as infinitely long.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from hypothesis import strategies as st

from chartgen.motion.stopping import Stop

Situation = dict[str, float]
Stopper = Callable[..., Stop]

SLACK = 1e-9
"""Relative: what two exact evaluations may differ by."""


def between(low: float, high: float) -> st.SearchStrategy[float]:
    return st.floats(low, high, allow_nan=False, allow_infinity=False, allow_subnormal=False)


# The whole ranges that an edition may state. Friction that falls is capped: near standstill it may not be above 1.5.
SPEED = between(0.1, 200.0)
REACTION = between(0.2, 10.0)
LAG = between(0.0, 3.0)
BUILD_UP = between(0.0, 3.0)
GRADE = between(-0.30, 0.30)
MU = between(0.005, 1.5)
EFFICIENCY = between(0.05, 1.0)
LIMIT = between(0.2, 15.0)
SP_KMH = between(10.0, 1000.0)


def _situation(plain: int, falls: bool, drawn: tuple[float, ...]) -> Situation:
    """Arguments from what was drawn. Each bit of `plain` sets one quantity to the value that leaves it out."""
    names = ("brake_lag_s", "build_up_s", "grade", "brake_efficiency", "max_deceleration_mps2", "max_mu")
    left_out = (0.0, 0.0, 0.0, 1.0, math.inf, 1.5)
    speed, reaction, friction, sp_kmh, *rest = drawn
    found = {"speed_mps": speed, "reaction_time_s": reaction}
    for bit, (name, value, without) in enumerate(zip(names, rest, left_out, strict=True)):
        found[name] = without if plain >> bit & 1 else value
    if falls:
        return found | {"f60": friction, "sp_kmh": sp_kmh}
    del found["max_mu"]
    return found | {"mu": friction}


SITUATIONS: st.SearchStrategy[Situation] = st.builds(
    _situation,
    st.integers(0, 63),
    st.booleans(),
    st.tuples(SPEED, REACTION, MU, SP_KMH, LAG, BUILD_UP, GRADE, EFFICIENCY, LIMIT, MU),
)
"""Any stop that an edition may ask for. (Drawn flat: nested choices take twice as long.)"""


@dataclass(frozen=True, kw_only=True)
class Law:
    """`name` says it; `key` is what is changed, `values` what it may be, `up` true where more of it is worse.

    `strict`: worse by more than a thousandth of the range is longer, not only not shorter.
    """

    name: str
    key: str
    values: st.SearchStrategy[float]
    up: bool
    span: float
    strict: bool = False

    def pairs(self) -> st.SearchStrategy[tuple[Situation, Situation]]:
        """The better and the worse situation."""

        def made(found: tuple[Situation, float, float]) -> tuple[Situation, Situation]:
            base, one, other = found
            better, worse = sorted((one, other), reverse=not self.up)
            return self.set(base, better), self.set(base, worse)

        return st.tuples(SITUATIONS, self.values, self.values).map(made)

    def set(self, base: Situation, value: float) -> Situation:
        """`base` with this law's quantity at `value`; friction is whichever form the situation has."""
        key = self.key
        if key == "mu" and "f60" in base:
            key = "f60"
        if key == "max_mu" and "f60" not in base:
            base = {k: v for k, v in base.items() if k != "mu"} | {"f60": base["mu"], "sp_kmh": 80.0}
        return base | {key: value}

    def holds(self, on_trial: Stopper, better: Situation, worse: Situation) -> None:
        """Raises AssertionError where the law is broken."""
        out = on_trial(**{name: np.array([better[name], worse[name]]) for name in better})
        stops, stops_worse = out.stops.tolist()
        assert stops or not stops_worse, f"{self.name}: stops only in the worse case"
        distance, time = (np.where(out.stops, x, np.inf) for x in (out.stopping_distance_m, out.stopping_time_s))
        for name, (shorter, longer) in (("distance", distance), ("time", time)):
            assert longer >= shorter * (1.0 - SLACK), f"{self.name}: {name} {longer} is under {shorter}"
        if self.strict and stops and abs(better[self.key] - worse[self.key]) > self.span / 1000.0:
            assert distance[1] > distance[0], f"{self.name}: not longer"


LAWS = (
    Law(name="longer with speed", key="speed_mps", values=SPEED, up=True, span=200.0, strict=True),
    Law(name="longer with reaction time", key="reaction_time_s", values=REACTION, up=True, span=10.0, strict=True),
    Law(name="never shorter with lag", key="brake_lag_s", values=LAG, up=True, span=3.0),
    Law(name="never shorter with build-up", key="build_up_s", values=BUILD_UP, up=True, span=3.0),
    Law(name="wet never shorter than dry", key="mu", values=MU, up=False, span=1.5),
    Law(name="a lower cap on friction never shorter", key="max_mu", values=MU, up=False, span=1.5),
    Law(name="downhill never shorter than level, nor level than uphill", key="grade", values=GRADE, up=False, span=0.6),
    Law(name="lower efficiency never shorter", key="brake_efficiency", values=EFFICIENCY, up=False, span=1.0),
    Law(name="a lower limit never shorter", key="max_deceleration_mps2", values=LIMIT, up=False, span=15.0),
)
"""By what is changed. "Does not stop" is part of each: it never turns into a stop for the worse."""
