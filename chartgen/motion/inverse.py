"""A stop asked backwards: how fast is the vehicle still at a place, and from which speed does it stop by it?

All mechanics are those of `stopping.stop`; its arguments are passed on as they are, whatever law of friction they give.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import ArrayLike

from chartgen.motion.gap import gap_distance_m, gap_seconds
from chartgen.motion.limits import GRAVITY_MPS2, BoolArray, FloatArray
from chartgen.motion.stopping import REASONS, stop

_SCAN = 240
"""Speeds tried before the search narrows: no unsafe stretch wider than a 240th of the top speed is stepped over."""
_HALVINGS = 46
_LEAST_MPS = 1e-9
"""Stands for rest where the mechanics want a speed above 0."""
_STEPS = 400
"""Steps in which a vehicle that never stops is followed to the place asked for."""

_OUTSIDE = REASONS.index("outside-friction-range")

Arguments = dict[str, Any]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Greatest:
    """The greatest speed asked for, m/s, 0 where no speed stops in time; `at_top`: even the top speed does."""

    speed_mps: FloatArray
    at_top: BoolArray


def residual_speed(speed_mps: ArrayLike, distance_m: ArrayLike, **arguments: Any) -> FloatArray:
    """How fast a vehicle still is when it has gone a distance since the hazard was seen.

    Formula: the speed v(x) of the stop that `stopping.stop` describes. Within the reaction the initial speed; in the
    lag ``sqrt(v² - 2·g·sinθ·x)``; in the build-up at the root of its cubic; in full braking the speed from which the
    rest of the way is just the full braking distance. 0 where the vehicle has stopped by then.

    Args:
        speed_mps: speed when the hazard is seen, m/s, more than 0, at most 200.
        distance_m: m from where the hazard was seen, at least 0.
        **arguments: as `stopping.stop` takes them; all broadcast against one another.

    Returns:
        m/s, in the broadcast shape, within 1e-9 relative; nan where a speed passed is one of which the friction's
        source does not speak. A vehicle that never stops has a speed too: it is followed
        step by step, within 1e-6.

    Raises:
        ValueError: as `stopping.stop`; a distance below 0 or not finite.

    Source: equation of motion.

    >>> round(float(residual_speed(20.0, 20.0 + 30.0, reaction_time_s=1.0, max_deceleration_mps2=5.0)), 9)
    10.0
    >>> float(residual_speed(20.0, 15.0, reaction_time_s=1.0, max_deceleration_mps2=5.0))
    20.0
    """
    place = np.asarray(distance_m, dtype=np.float64)
    if not (np.isfinite(place) & (place >= 0.0)).all():
        raise ValueError("distance_m: it must be at least 0 m and finite")
    given = _rows({"speed_mps": speed_mps, "distance_m": place, **_defaults(arguments)})
    whole = stop(**{name: value for name, value in given.items() if name != "distance_m"})
    told = np.array(whole.reason_code != _OUTSIDE)
    out = np.full(len(told), np.nan)
    if told.any():
        out[told] = np.maximum(_residual(_some(given, told)), 0.0)
    # Where it has stopped it has stopped, to the last digit.
    out[whole.stops & (np.nan_to_num(whole.stopping_distance_m, nan=np.inf) <= given["distance_m"])] = 0.0
    return np.asarray(out.reshape(_shape(speed_mps, place, arguments)))


def _residual(given: Arguments) -> FloatArray:
    way = _Way(given)
    rest = given["distance_m"] - given["speed_mps"] * given["reaction_time_s"]
    out = np.where(rest <= 0.0, given["speed_mps"], way.in_lag(rest))
    rest = rest - way.lag_m
    out = np.where(rest > 0.0, way.in_build_up(rest), out)
    rest = rest - way.build_up_m
    braking = (rest > 0.0) & (way.after_mps > 0.0)
    out = np.where(rest > 0.0, 0.0, out)
    if braking.any():
        out[braking] = way.in_full_braking(rest, braking)
    return np.asarray(out)


def _defaults(arguments: Mapping[str, Any]) -> Arguments:
    return {"brake_lag_s": 0.0, "build_up_s": 0.0, "grade": 0.0, **arguments}


def _rows(given: Mapping[str, Any]) -> Arguments:
    """Every argument but the friction tables as one row of the broadcast shape."""
    shape = np.broadcast_shapes(*(np.shape(value) for name, value in given.items() if name != "tables"))
    return {
        name: value if name == "tables" else np.broadcast_to(np.asarray(value), shape).reshape(-1)
        for name, value in given.items()
    }


def _some(given: Mapping[str, Any], rows: BoolArray) -> Arguments:
    return {name: value if name == "tables" else value[rows] for name, value in given.items()}


class _Way:
    """The phases of each row's stop, with their ends."""

    def __init__(self, given: Arguments) -> None:
        self.given = given
        grade = np.asarray(given["grade"], dtype=np.float64)
        self.slope = GRAVITY_MPS2 * grade / np.sqrt(1.0 + grade * grade)
        self.bare: Arguments = {n: v for n, v in given.items() if n not in ("speed_mps", "distance_m")}
        self.bare |= dict.fromkeys(("reaction_time_s", "brake_lag_s", "build_up_s"), np.zeros(len(grade)))
        speed = np.asarray(given["speed_mps"], dtype=np.float64)
        self.speed = speed
        lag_s = given["brake_lag_s"]
        in_lag = np.where(speed - self.slope * lag_s > 0.0, lag_s, speed / np.where(self.slope > 0, self.slope, np.inf))
        self.lag_m = in_lag * (speed - 0.5 * self.slope * in_lag)
        self.lagged_mps = np.maximum(speed - self.slope * in_lag, 0.0)
        self.rise_s = np.asarray(given["build_up_s"], dtype=np.float64)
        self.force = self._ramp_force()
        self.build_up_s = self._end_of_build_up()
        self.build_up_m = self._build_up_distance(self.build_up_s)
        self.after_mps = np.maximum(self._build_up_speed(self.build_up_s), 0.0)

    def force_at(self, speed: FloatArray) -> FloatArray:
        """The brake's part of the deceleration at a speed: what the mechanics give, less the slope."""
        made = stop(np.maximum(speed, _LEAST_MPS), **self.bare)
        return np.asarray(made.full_deceleration_mps2 - self.slope)

    def _ramp_force(self) -> FloatArray:
        """What the build-up rises to, by the mechanics' own rule (see `phases.build_up`)."""
        if not self.rise_s.any():
            return np.ones(len(self.speed))
        down = np.maximum(-self.slope, 0.0)
        bound = self.force_at(self.lagged_mps + down * self.rise_s)
        # The bound on the speed may lie beyond a table that the speeds themselves do not leave.
        least = np.where(np.isnan(bound), 0.0, bound)
        excess = np.maximum(np.maximum(2.0 / 3.0 * down - 0.25 * least, 0.5 * down - 0.15 * least), 0.0)
        force = self.force_at(self.lagged_mps + self.rise_s * excess)
        return np.where(np.isnan(force), self.force_at(self.lagged_mps), force)

    def _build_up_speed(self, time: FloatArray) -> FloatArray:
        rise = np.where(self.rise_s > 0.0, self.force / np.where(self.rise_s > 0.0, self.rise_s, 1.0), 0.0)
        return np.asarray(self.lagged_mps - time * (self.slope + 0.5 * rise * time))

    def _build_up_distance(self, time: FloatArray) -> FloatArray:
        rise = np.where(self.rise_s > 0.0, self.force / np.where(self.rise_s > 0.0, self.rise_s, 1.0), 0.0)
        return np.asarray(time * (self.lagged_mps - time * (0.5 * self.slope + rise * time / 6.0)))

    def _end_of_build_up(self) -> FloatArray:
        """Its own length, or the time at which the vehicle comes to rest inside it."""
        stops = self._build_up_speed(self.rise_s) <= 0.0
        if not stops.any():
            return self.rise_s
        # The speed falls through zero once: it can only rise before it falls.
        return np.where(
            stops, _bisect(lambda t: self._build_up_speed(t) > 0.0, np.zeros(len(stops)), self.rise_s), self.rise_s
        )

    def in_lag(self, rest: FloatArray) -> FloatArray:
        square = self.speed**2 - 2.0 * self.slope * rest
        return np.sqrt(np.maximum(square, 0.0))

    def in_build_up(self, rest: FloatArray) -> FloatArray:
        time = _bisect(lambda t: self._build_up_distance(t) < rest, np.zeros(len(rest)), self.build_up_s)
        return np.maximum(self._build_up_speed(time), 0.0)

    def in_full_braking(self, rest: FloatArray, rows: BoolArray) -> FloatArray:
        """Speeds of `rows`, which are still braking `rest` after the build-up."""
        start, way, bare = self.after_mps[rows], rest[rows], _some(self.bare, rows)
        whole = stop(np.maximum(start, _LEAST_MPS), **bare)
        left = whole.braking_distance_m - way
        ends = np.nan_to_num(left, nan=-1.0) > 0.0

        def too_near(speed: FloatArray) -> BoolArray:
            return np.asarray(stop(np.maximum(speed, _LEAST_MPS), **bare).braking_distance_m < left)

        # The upper end of the last bracket: a residual speed is never told too low.
        found = np.where(ends, _bisect(too_near, np.zeros(len(start)), start), 0.0)
        never = ~whole.stops
        if never.any():
            found[never] = _followed(start[never], way[never], _some(bare, never))
        return np.asarray(found)


def _followed(speed: FloatArray, way: FloatArray, bare: Arguments) -> FloatArray:
    """The speed after `way` of full braking of a vehicle that need not stop: ``d(v²/2)/dx = -a(v)``, fourth order."""

    def slowing(half_square: FloatArray) -> FloatArray:
        made = stop(np.sqrt(2.0 * np.maximum(half_square, _LEAST_MPS)), **bare)
        return np.asarray(made.full_deceleration_mps2)

    state, step = speed * speed / 2.0, way / _STEPS
    for _ in range(_STEPS):
        one = slowing(state)
        two = slowing(state - 0.5 * step * one)
        three = slowing(state - 0.5 * step * two)
        four = slowing(state - step * three)
        state = np.maximum(state - step * (one + 2.0 * two + 2.0 * three + four) / 6.0, 0.0)
    return np.asarray(np.sqrt(2.0 * state))


def _bisect(below: Callable[[FloatArray], BoolArray], low: FloatArray, high: FloatArray) -> FloatArray:
    """The upper end of the last bracket around the place where `below` turns from true to false, row by row."""
    low, high = low.astype(np.float64), high.astype(np.float64)
    for _ in range(_HALVINGS):
        middle = 0.5 * (low + high)
        under = below(middle)
        low, high = np.where(under, middle, low), np.where(under, high, middle)
    return high


def greatest_speed(distance_m: ArrayLike, *, top_mps: float, **arguments: Any) -> Greatest:
    """The greatest speed from which, and from every lower one, a vehicle stops within a distance.

    Formula: the largest v up to `top_mps` with ``s(u) <= distance`` for all u <= v, s as in `stopping.stop`. A
    speed from which the vehicle does not stop, or for which there is no friction, is not slow enough.

    Args:
        distance_m: what can be seen of the road, m, more than 0.
        top_mps: the fastest speed that is asked, m/s, more than 0, at most 200.
        **arguments: as `stopping.stop` takes them; all broadcast against one another.

    Returns:
        The speeds, from the safe side within 1e-12 of `top_mps`; 0 where even the slowest does not stop in time.

    Raises:
        ValueError: as `stopping.stop`; a distance or a top speed out of its range.

    Source: equation of motion.

    >>> found = greatest_speed(50.0, top_mps=40.0, reaction_time_s=1.0, max_deceleration_mps2=5.0)
    >>> round(float(found.speed_mps), 6), bool(found.at_top)
    (17.912878, False)
    """
    reach = np.asarray(distance_m, dtype=np.float64)
    if not (np.isfinite(reach) & (reach > 0.0)).all():
        raise ValueError("distance_m: it must be more than 0 m and finite")
    given = _rows({"distance_m": reach, **_defaults(arguments)})
    far = given.pop("distance_m")

    def slow_enough(speed: FloatArray) -> BoolArray:
        made = stop(speed, **given)
        return np.asarray(made.stops & (np.nan_to_num(made.stopping_distance_m, nan=np.inf) <= far))

    return _greatest(slow_enough, top_mps, len(far), _shape(reach, arguments))


def greatest_speed_in_gap(rule: Mapping[str, Any], *, top_mps: float, **arguments: Any) -> Greatest:
    """The greatest speed from which, and from every lower one, a vehicle stops within its following gap.

    Formula: the largest v up to `top_mps` with ``s(u) <= u·gap(u)`` for all u <= v. The vehicle ahead is taken to
    stop dead, as if it had hit a wall: the cautious reading, for rules of the gap count on its needing room too.

    Args:
        rule: the rule as `gap.gap_seconds` takes it, arrays or numbers.
        top_mps: the fastest speed that is asked, m/s, more than 0, at most 200.
        **arguments: as `stopping.stop` takes them; all broadcast against one another and the rule.

    Returns:
        The speeds, from the safe side within 1e-12 of `top_mps`; 0 where even the slowest does not stop in time.

    Raises:
        ValueError: as `stopping.stop` and `gap.gap_seconds`; a top speed out of its range.

    Source: equation of motion; the rule's own source.

    >>> found = greatest_speed_in_gap({"fixed_s": 2.0}, top_mps=40.0, reaction_time_s=1.0, max_deceleration_mps2=5.0)
    >>> round(float(found.speed_mps), 6)
    10.0
    """
    stated = {name: value for name, value in rule.items() if value is not None}
    given = _rows({**_defaults(arguments), **{f"rule {name}": value for name, value in stated.items()}})
    own = {name: given.pop(f"rule {name}") for name in stated}

    def slow_enough(speed: FloatArray) -> BoolArray:
        made = stop(speed, **given)
        gap = gap_distance_m(speed, gap_seconds(speed, **own))
        return np.asarray(made.stops & (np.nan_to_num(made.stopping_distance_m, nan=np.inf) <= gap))

    rows = len(next(value for name, value in given.items() if name != "tables"))
    return _greatest(slow_enough, top_mps, rows, _shape(*stated.values(), arguments))


def _shape(*values: Any) -> tuple[int, ...]:
    shapes = []
    for value in values:
        parts = [v for n, v in value.items() if n != "tables"] if isinstance(value, dict) else [value]
        shapes += [np.shape(part) for part in parts]
    return np.broadcast_shapes(*shapes)


def _greatest(
    slow_enough: Callable[[FloatArray], BoolArray], top_mps: float, rows: int, shape: tuple[int, ...]
) -> Greatest:
    """Scans upwards to the first speed that is too fast, then narrows down, keeping the safe end."""
    if not 0.0 < top_mps <= 200.0:
        raise ValueError("top_mps: it must be more than 0 m/s and at most 200 m/s")
    tried = top_mps * np.arange(1, _SCAN + 1) / _SCAN
    good = np.broadcast_to(slow_enough(tried[:, None]), (_SCAN, rows))
    at_top = good.all(axis=0)
    first = np.where(at_top, _SCAN, np.argmin(good, axis=0))
    low = np.where(first > 0, tried[np.maximum(first, 1) - 1], 0.0)
    high = np.where(at_top, low, tried[np.minimum(first, _SCAN - 1)])
    for _ in range(_HALVINGS):
        middle = 0.5 * (low + high)
        good = slow_enough(np.maximum(middle, _LEAST_MPS))
        low, high = np.where(good, middle, low), np.where(good, high, middle)
    # Narrowed down to nothing above rest: no speed is slow enough.
    found = np.where(at_top, top_mps, np.where(low <= 1e-6, 0.0, low))
    return Greatest(speed_mps=found.reshape(shape), at_top=at_top.reshape(shape))
