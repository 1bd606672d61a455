"""The course of a stop: where the vehicle is and how fast, from seeing the hazard to rest.

`Motion` follows stops row by row, by their phases, with the forces of `stopping.stop`; `course` gives one of them for a
chart, and `inverse` asks it for a speed at a place.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import ArrayLike

from chartgen.motion.braking import full_braking
from chartgen.motion.friction import Brake
from chartgen.motion.friction_table import TableBrake, braking_distance_and_time
from chartgen.motion.limits import GRAVITY_MPS2, FloatArray
from chartgen.motion.phases import Phase, _ramp_speed, build_up, lag
from chartgen.motion.stopping import REASONS, _ramp_force, stop

PHASES: tuple[str, ...] = ("reaction", "lag", "build-up", "braking")
"""The phases whose ends a `Course` tells, in their order."""

OUTSIDE = REASONS.index("outside-friction-range")

_SURE_MPS2 = 1e-3
"""Chosen by us: with no less deceleration than this at every speed, full braking is inverted; else it is followed."""
_FIRST_STEPS, _LAST_STEPS = 128, 8192
_AGREED = 1e-12
"""Relative: where two numbers of steps agree to this, the motion has been followed closely enough."""
_ROUNDS = 80
_SAME = 4e-16
_SAME_SPEED = 1e-9

Arguments = dict[str, Any]
Goal = Callable[[FloatArray], tuple[FloatArray, FloatArray]]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Course:
    """One stop over time: arrays of one length, read-only; and the ends of its phases, in the order of `PHASES`."""

    time_s: FloatArray
    """Since the hazard was seen."""
    distance_m: FloatArray
    speed_mps: FloatArray
    end_time_s: FloatArray
    """nan for the braking of a vehicle that does not stop, and for all that nothing is known of."""
    end_distance_m: FloatArray
    end_speed_mps: FloatArray
    stops: bool


def course(speed_mps: float, times_s: ArrayLike | None = None, *, points: int = 121, **arguments: Any) -> Course:
    """Where a vehicle is, and how fast, at times since the hazard was seen.

    Formula: the motion of `stopping.stop`. In the reaction ``x = v·t``; in the lag ``v - g·sinθ·τ``; in the build-up
    ``v - g·sinθ·τ - b·τ²/(2·t_b)``; in full braking the speed from which the rest of the time is just the time to rest.
    At rest it stays.

    Args:
        speed_mps: speed when the hazard is seen, m/s, more than 0, at most 200.
        times_s: s, at least 0, rising or not; None for even times to rest with the ends of all phases among them.
        points: how many even times, where none are given, at least 2.
        **arguments: as `stopping.stop` takes them, each a single value.

    Returns:
        A `Course` in s, m and m/s, within 1e-9 relative. A vehicle that does not stop by the rule of `stopping.stop`
        is followed all the same; beyond what the friction's source speaks of, place and speed are nan.

    Raises:
        ValueError: as `stopping.stop`; more than one stop; a time that is none; no times for a vehicle that does not
            stop.

    Source: equation of motion.

    >>> out = course(20.0, [0.5, 1.0, 3.0, 9.0], reaction_time_s=1.0, max_deceleration_mps2=5.0)
    >>> out.distance_m.round(9).tolist(), out.speed_mps.round(9).tolist()
    ([10.0, 20.0, 50.0, 60.0], [20.0, 20.0, 10.0, 0.0])
    """
    given = rows_of({"speed_mps": speed_mps, **arguments})
    whole = stop(**given)
    if whole.stops.size != 1:
        raise ValueError(f"speed_mps: a course is that of one stop, and {whole.stops.size} are given")
    one, stops = Motion(given), bool(whole.stops[0])
    ends = one.ends(stops=stops, known=bool(whole.reason_code[0] != OUTSIDE))
    if times_s is None:
        if not stops or points < 2:
            raise ValueError("times_s, points: times are needed, or at least 2 points of a vehicle that stops")
        times = np.unique(np.concatenate([np.linspace(0.0, ends[0, -1], points), ends[0]]))
    else:
        times = np.atleast_1d(np.asarray(times_s, dtype=np.float64))
        if times.ndim != 1 or not (np.isfinite(times) & (times >= 0.0)).all():
            raise ValueError("times_s: they must be at least 0 s and finite, in one row")
    many = {name: value if name == "tables" else np.repeat(value, len(times)) for name, value in given.items()}
    place, speed = Motion(many).at_time(times)
    if whole.reason_code[0] == OUTSIDE:
        place, speed = (np.where(times > ends[0, 1], np.nan, x) for x in (place, speed))
    if stops:
        # To the last digit what the mechanics say.
        over = times >= ends[0, -1]
        place, speed = np.where(over, whole.stopping_distance_m, place), np.where(over, 0.0, speed)
        ends[1, -1] = float(whole.stopping_distance_m[0])
    arrays = (times, place, speed, *ends)
    for array in arrays:
        array.setflags(write=False)
    return Course(**dict(zip(Course.__slots__, arrays, strict=False)), stops=stops)


def rows_of(given: Mapping[str, Any]) -> Arguments:
    """Every argument but the tables as one row of the broadcast shape, with what `Motion` needs stated."""
    stated = {"brake_lag_s": 0.0, "build_up_s": 0.0, "grade": 0.0, **given}
    shape = np.broadcast_shapes(*(np.shape(value) for name, value in stated.items() if name != "tables"))
    return {
        name: value if name == "tables" else np.broadcast_to(np.asarray(value), shape).reshape(-1)
        for name, value in stated.items()
    }


def some(given: Mapping[str, Any], rows: Any) -> Arguments:
    """The arguments of some of the rows."""
    return {name: value if name == "tables" else value[rows] for name, value in given.items()}


class Forces:
    """The forces on each row from the end of the reaction on: the brake's part by its own law, and the slope."""

    def __init__(self, given: Mapping[str, Any]) -> None:
        rows = len(given["speed_mps"])
        left_out = {
            "mu": np.nan, "f60": np.nan, "sp_kmh": np.nan, "max_mu": np.inf, "brake_efficiency": 1.0,
            "max_deceleration_mps2": np.inf, "brake_share": 1.0, "valid_to_mps": np.inf,
        }  # fmt: skip
        of = {
            name: np.asarray(given.get(name, np.full(rows, value)), dtype=np.float64)
            for name, value in {**left_out, "grade": 0.0}.items()
        }
        self.last_mps = of.pop("valid_to_mps")
        which = np.asarray(given.get("table", np.full(rows, -1)))
        run = 1.0 / np.sqrt(1.0 + of["grade"] ** 2)
        self.slope = GRAVITY_MPS2 * of["grade"] * run
        scale = GRAVITY_MPS2 * run * of["brake_efficiency"] * of["brake_share"]
        cap = of["max_deceleration_mps2"] * of["brake_share"]
        self.parts: list[tuple[Any, Brake | TableBrake]] = []
        for index in np.unique(which):
            here = np.flatnonzero(which == index)
            if index < 0:
                self.parts.append((here, Brake.of(**{name: value[here] for name, value in of.items()})))
                continue
            table = given["tables"][index]
            self.last_mps = np.where(which == index, np.minimum(self.last_mps, table.last_mps), self.last_mps)
            brake = TableBrake(table=table, scale=scale[here], cap=cap[here], slope=self.slope[here])
            self.parts.append((here, brake))

    def slowing(self, speed: FloatArray) -> FloatArray:
        """The whole deceleration at a speed; nan where nothing is known of the friction."""
        out = np.empty(len(speed))
        for here, brake in self.parts:
            out[here] = brake.at(speed[here])
        return np.asarray(np.where(speed > self.last_mps * (1.0 + _SAME_SPEED), np.nan, out + self.slope))

    def least(self, speed: FloatArray) -> FloatArray:
        """The least deceleration at any speed from rest up to one."""
        out = np.empty(len(speed))
        for here, brake in self.parts:
            fast = speed[here]
            out[here] = brake.at(fast) if isinstance(brake, Brake) else brake.least(np.zeros(len(fast)), fast)
        return out + self.slope

    def ramp(self, lagging: Phase, rise_s: FloatArray) -> FloatArray:
        """What the build-up rises to, by the mechanics' own rules, so that the two cannot differ."""
        out = np.empty(len(rise_s))
        for here, brake in self.parts:
            before = Phase(**{
                name: np.broadcast_to(getattr(lagging, name), out.shape)[here] for name in Phase.__slots__
            })  # fmt: skip
            if isinstance(brake, Brake):
                out[here] = brake.at(_ramp_speed(before.end_speed_mps, build_up_s=rise_s[here], brake=brake))
            else:
                out[here] = _ramp_force(before, rise_s[here], brake)
        return out

    def to_rest(self, speed: FloatArray) -> tuple[FloatArray, FloatArray]:
        """Distance and time of full braking from a speed, for rows that come to rest."""
        metres, seconds = np.empty(len(speed)), np.empty(len(speed))
        for here, brake in self.parts:
            if isinstance(brake, Brake):
                made = full_braking(speed[here], brake)
                metres[here], seconds[here] = made.distance_m, made.time_s
            else:
                metres[here], seconds[here] = braking_distance_and_time(speed[here], brake)
        return metres, seconds


class Motion:
    """Each row's stop by its phases, from `rows_of` the arguments of `stopping.stop`, which has checked them."""

    def __init__(self, given: Mapping[str, Any]) -> None:
        names = ("speed_mps", "reaction_time_s", "brake_lag_s", "build_up_s")
        speed, reaction, lag_s, rise = (np.asarray(given[name], dtype=np.float64) for name in names)
        self.given, self.forces = given, Forces(given)
        self.speed, self.reaction_s, self.rise_s = speed, reaction, rise
        rows = speed.shape
        slope = self.forces.slope
        with np.errstate(all="ignore"):
            lagging = lag(speed, lag_s=lag_s, slope_mps2=slope)
            self.lagged_mps = np.broadcast_to(lagging.end_speed_mps, rows)
            self.ramp = self.forces.ramp(lagging, rise)
            even = Brake(at_zero=self.ramp, fall_per_mps=np.zeros(1), cap=np.full(1, np.inf), slope=slope)
            building = build_up(self.lagged_mps, build_up_s=rise, brake=even)
            self.after_mps = np.broadcast_to(building.end_speed_mps, rows)
            self.rests = np.asarray((self.after_mps <= 0.0) | (self.forces.least(self.after_mps) >= _SURE_MPS2))
            self.full_m, self.full_s = self.forces.to_rest(np.where(self.rests, self.after_mps, 0.0))
        self.lag_m, self.lag_s = (np.broadcast_to(x, rows) for x in (lagging.distance_m, lagging.time_s))
        self.build_up_m, self.build_up_s = (np.broadcast_to(x, rows) for x in (building.distance_m, building.time_s))

    def ends(self, *, stops: bool, known: bool) -> FloatArray:
        """Times, distances and speeds at the ends of the phases of the first row, shape (3, 4)."""
        seconds = np.cumsum([x[0] for x in (self.reaction_s, self.lag_s, self.build_up_s, self.full_s)])
        metres = np.cumsum([self.speed[0] * self.reaction_s[0], self.lag_m[0], self.build_up_m[0], self.full_m[0]])
        out = np.stack([seconds, metres, [self.speed[0], self.lagged_mps[0], self.after_mps[0], 0.0]])
        out[:, len(PHASES) if stops else 3 if known else 2 :] = np.nan
        return out

    def speed_at(self, place: FloatArray) -> FloatArray:
        """The speed at a distance from where the hazard was seen; 0 beyond the place of rest."""
        rest = place - self.speed * self.reaction_s
        square = self.speed * self.speed - 2.0 * self.forces.slope * np.maximum(rest, 0.0)
        out = np.where(rest <= 0.0, self.speed, np.sqrt(np.maximum(square, 0.0)))
        rest = rest - self.lag_m
        time = _solved(self._building, np.clip(rest, 0.0, self.build_up_m), self.build_up_s)
        out = np.where(rest > 0.0, np.maximum(self._building(time)[1], 0.0), out)
        rest = rest - self.build_up_m
        return np.asarray(np.where(rest > 0.0, self._braking_at(rest), out))

    def at_time(self, time: FloatArray) -> tuple[FloatArray, FloatArray]:
        """Distance from where the hazard was seen, and speed, at times since then."""
        place, speed = self.speed * np.minimum(time, self.reaction_s), self.speed
        rest = time - self.reaction_s
        part = np.clip(rest, 0.0, self.lag_s)
        place = place + part * (self.speed - 0.5 * self.forces.slope * part)
        speed = np.where(rest > 0.0, self.speed - self.forces.slope * part, speed)
        rest = rest - self.lag_s
        metres, fast = self._building(np.clip(rest, 0.0, self.build_up_s))
        place, speed = place + np.where(rest > 0.0, metres, 0.0), np.where(rest > 0.0, fast, speed)
        rest = rest - self.build_up_s
        metres, fast = self._braking_after(np.maximum(rest, 0.0))
        return np.asarray(place + metres), np.asarray(np.maximum(np.where(rest > 0.0, fast, speed), 0.0))

    def _building(self, time: FloatArray) -> tuple[FloatArray, FloatArray]:
        """Distance and speed in the build-up, a time after its beginning."""
        rise = np.where(self.rise_s > 0.0, self.ramp / np.where(self.rise_s > 0.0, self.rise_s, 1.0), 0.0)
        slope = self.forces.slope
        metres = time * (self.lagged_mps - time * (0.5 * slope + rise * time / 6.0))
        return metres, self.lagged_mps - time * (slope + 0.5 * rise * time)

    def _braking_at(self, way: FloatArray) -> FloatArray:
        """Speed when so much of full braking is done: the one from which the rest is just the distance to rest."""

        def reached(square: FloatArray) -> tuple[FloatArray, FloatArray]:
            fast = np.sqrt(square)
            return self.forces.to_rest(fast)[0], 0.5 / self.forces.slowing(fast)

        top = np.where(self.rests, self.after_mps, 0.0)
        out = np.sqrt(_solved(reached, np.clip(self.full_m - way, 0.0, self.full_m), top * top))
        here = np.flatnonzero(~self.rests & (way > 0.0))
        if here.size:
            forces, start = Forces(some(self.given, here)), self.after_mps[here]

            def along(state: FloatArray) -> FloatArray:
                return -forces.slowing(np.sqrt(2.0 * state[0]))[None]

            out[here] = np.sqrt(2.0 * _followed(along, (0.5 * start * start)[None], way[here])[0])
        return np.asarray(out)

    def _braking_after(self, time: FloatArray) -> tuple[FloatArray, FloatArray]:
        """Distance and speed of full braking a time after its beginning."""

        def reached(fast: FloatArray) -> tuple[FloatArray, FloatArray]:
            return self.forces.to_rest(fast)[1], 1.0 / self.forces.slowing(fast)

        top = np.where(self.rests, self.after_mps, 0.0)
        speed = np.array(_solved(reached, np.clip(self.full_s - time, 0.0, self.full_s), top))
        place = self.full_m - self.forces.to_rest(speed)[0]
        here = np.flatnonzero(~self.rests & (time > 0.0))
        if here.size:
            forces, start = Forces(some(self.given, here)), self.after_mps[here]

            def along(state: FloatArray) -> FloatArray:
                return np.stack([-forces.slowing(state[0]), state[0]])

            speed[here], place[here] = _followed(along, np.stack([start, np.zeros(len(start))]), time[here])
        return np.asarray(place), speed


def _solved(reached: Goal, goal: FloatArray, top: FloatArray) -> FloatArray:
    """Where from 0 to `top` a rising quantity reaches its goal: Newton's steps, halving where one would leave the
    bracket. `reached` gives the quantity and its slope."""
    low, high, at = np.zeros(len(top)), np.array(top), np.array(top)
    with np.errstate(all="ignore"):
        for _ in range(_ROUNDS):
            value, slope = reached(at)
            under = value < goal
            low, high = np.where(under, at, low), np.where(under, high, at)
            step = at - (value - goal) / slope
            step = np.where((step >= low) & (step <= high), step, 0.5 * (low + high))
            settled = np.abs(step - at) <= _SAME * at
            at = step
            if settled.all():
                break
    return at


def _followed(rate: Callable[[FloatArray], FloatArray], start: FloatArray, span: FloatArray) -> FloatArray:
    """The state after `span` of a motion that need not end, first axis its quantities, of which the first is never
    below 0: steps of fourth order, twice as many until two numbers of steps agree."""
    before, steps = _walked(rate, start, span, _FIRST_STEPS), 2 * _FIRST_STEPS
    while True:
        now = _walked(rate, start, span, steps)
        apart = np.abs(now - before) > _AGREED * np.abs(now)
        if steps >= _LAST_STEPS or not apart.any():
            return now
        before, steps = now, 2 * steps


def _walked(rate: Callable[[FloatArray], FloatArray], start: FloatArray, span: FloatArray, steps: int) -> FloatArray:
    def held(state: FloatArray) -> FloatArray:
        state[0] = np.maximum(state[0], 0.0)
        return state

    state, step = start, span / steps
    for _ in range(steps):
        one = rate(state)
        two = rate(held(state + 0.5 * step * one))
        three = rate(held(state + 0.5 * step * two))
        four = rate(held(state + step * three))
        state = held(state + step * (one + 2.0 * (two + three) + four) / 6.0)
    return state
