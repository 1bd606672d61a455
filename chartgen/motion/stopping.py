"""Exact mechanics of a stop: reaction, brake lag, build-up, full braking, on any grade.

The order of the phases, and gravity from the end of the reaction, are the program's statement of what a stop is; the
formulas of each phase stand in `phases` and `braking`.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from chartgen.motion.braking import Braking, full_braking
from chartgen.motion.friction import Brake, checked_friction, checked_tables, some
from chartgen.motion.friction_table import FrictionTable, TableBrake, braking_distance_and_time
from chartgen.motion.limits import GRAVITY_MPS2, LEAST_DECELERATION_MPS2, RANGES, BoolArray, FloatArray, checked
from chartgen.motion.phases import Phase, build_up, lag

REASONS: tuple[str, ...] = ("", "too-little-friction", "never-at-rest", "outside-friction-range")
"""Why there is no stop: "" there is one; the least deceleration is positive but under `LEAST_DECELERATION_MPS2`;
gravity pulls at least as hard as the brakes hold; the fastest speed passed is one of which the friction's source does
not speak, so that nothing can be said."""

_OUTSIDE = REASONS.index("outside-friction-range")
_SAME_SPEED = 1e-9
"""Relative: a speed this near the fastest one of a source counts as on it, whatever unit it was converted from."""

_CHUNK_ROWS = 16_384
"""Rows worked at a time: the buffers stay in the processor's cache."""


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Stop:
    """One stop for each element: arrays of one shape, read-only.

    Where the vehicle does not stop, braking, stopping and time are nan and `reason` says why; reaction and lag stay.
    """

    reaction_distance_m: FloatArray
    lag_distance_m: FloatArray
    braking_distance_m: FloatArray
    """Build-up included."""
    stopping_distance_m: FloatArray
    stopping_time_s: FloatArray
    """From seeing the hazard to rest."""
    full_deceleration_mps2: FloatArray
    """At the start of full braking, slope included; not positive where gravity wins."""
    stops: BoolArray
    reason_code: NDArray[np.int8]
    """Index into `REASONS`."""

    @property
    def reason(self) -> NDArray[np.str_]:
        """Per element one of `REASONS`; made on demand, as text is ten times the size of the numbers."""
        return np.asarray(REASONS)[self.reason_code]


def stop(
    speed_mps: ArrayLike,
    *,
    reaction_time_s: ArrayLike,
    brake_lag_s: ArrayLike = 0.0,
    build_up_s: ArrayLike = 0.0,
    mu: ArrayLike = np.nan,
    f60: ArrayLike = np.nan,
    sp_kmh: ArrayLike = np.nan,
    max_mu: ArrayLike = np.inf,
    grade: ArrayLike = 0.0,
    brake_efficiency: ArrayLike = 1.0,
    max_deceleration_mps2: ArrayLike = np.inf,
    brake_share: ArrayLike = 1.0,
    valid_to_mps: ArrayLike = np.inf,
    tables: Sequence[FrictionTable] = (),
    table: ArrayLike = -1,
) -> Stop:
    """How far and how long from seeing a hazard to rest, from first principles.

    Formula: reaction ``v·t_r`` at constant speed; from its end the slope ``g·sinθ`` acts throughout, θ = atan(grade);
    lag ``v·t_l - g·sinθ·t_l²/2``; build-up ``v·t_b - g·sinθ·t_b²/2 - b·t_b²/6``; full braking ``∫ v dv/a(v)`` with
    ``a = b + g·sinθ`` and ``b = min(η·F·g·cosθ, a_max)``. The build-up rises to b at the speed at which it begins. A
    vehicle does not stop where the least a(v) over the speeds passed from the end of the reaction on is under 0.1
    m/s² (chosen by us), whichever phase it would come to rest in.

    Args:
        speed_mps: speed when the hazard is seen, m/s, more than 0, at most 200.
        reaction_time_s: perception included, s, 0 to 10.
        brake_lag_s: time in which the brake does nothing yet, s, 0 to 3.
        build_up_s: time in which it rises linearly to its full force, s, 0 to 3.
        mu: constant friction, 0 < mu <= 1.5, or nan.
        f60: friction at 60 km/h where it falls with speed, 0 < f60 <= 1.5, or nan.
        sp_kmh: speed constant of that fall, km/h, 10 to 10,000, or nan.
        max_mu: cap on the friction that falls with speed, more than 0; infinite for none.
        grade: rise over run, uphill positive, -0.30 to 0.30.
        brake_efficiency: share of the friction that the brakes use, 0 < η <= 1.
        max_deceleration_mps2: the vehicle's own limit on the level, m/s², more than 0; infinite for none.
        brake_share: mass with brakes over whole mass, 0 < share <= 1; below 1 with an unbraked trailer.
        valid_to_mps: fastest speed that the friction's source speaks of, m/s; infinite for no end. A table has an end
            of its own.
        tables: frictions by speed.
        table: index into `tables`, -1 where the friction is not one of them.

        All but `tables` broadcast against one another. Per element exactly one of `mu`, (`f60`, `sp_kmh`) and `table`
        is given; with none, the vehicle's limit alone governs and must be finite.

    Returns:
        A `Stop` in the broadcast shape: m, s, m/s².

    Raises:
        ValueError: an argument is outside its range or not finite, friction is given twice or by halves, or nothing
            limits the deceleration; the message names the argument. Also where the shapes do not broadcast.

    Source: equation of motion; standard gravity of sources:cgpm-1901; friction of sources:astm-e1960.

    >>> lorry = {"brake_lag_s": 0.4, "build_up_s": 0.3, "max_deceleration_mps2": 5.0}
    >>> out = stop(50 * 0.44704, reaction_time_s=1.0, grade=-0.09, **lorry)
    >>> round(float(out.lag_distance_m + out.braking_distance_m), 2)
    75.68
    >>> ice = stop([10.0, 20.0], reaction_time_s=1.0, mu=0.05, grade=-0.09)
    >>> ice.stops.tolist(), ice.reason.tolist()
    ([False, False], ['never-at-rest', 'never-at-rest'])
    """
    given = {
        "speed_mps": checked("speed_mps", speed_mps),
        "reaction_time_s": checked("reaction_time_s", reaction_time_s),
        "brake_lag_s": checked("brake_lag_s", brake_lag_s),
        "build_up_s": checked("build_up_s", build_up_s),
        "grade": checked("grade", grade),
        "brake_efficiency": checked("brake_efficiency", brake_efficiency),
        "max_deceleration_mps2": checked("max_deceleration_mps2", max_deceleration_mps2),
        "brake_share": checked("brake_share", brake_share),
        "valid_to_mps": checked("valid_to_mps", valid_to_mps),
        **checked_friction(mu=mu, f60=f60, sp_kmh=sp_kmh, max_mu=max_mu),
    }
    which = checked_tables(tables, table, given)
    bare = (which < 0) & np.isnan(given["mu"]) & np.isnan(given["f60"])
    if (bare & np.isinf(given["max_deceleration_mps2"])).any():
        raise ValueError("mu: without friction (mu, or f60 and sp_kmh) max_deceleration_mps2 must be finite")
    if (bare & (given["brake_efficiency"] != 1.0)).any():
        raise ValueError("brake_efficiency: it is a share of friction (mu, or f60 and sp_kmh), and none is given")
    shape = np.broadcast_shapes(which.shape, *(x.shape for x in given.values()))
    flat = {name: _flat(x, shape) for name, x in given.items()}
    if not (which >= 0).any():
        return _in_chunks(flat, shape)
    return _by_table(flat, shape, tables, np.broadcast_to(which, shape).reshape(-1))


def _by_table(
    given: dict[str, FloatArray], shape: tuple[int, ...], tables: Sequence[FrictionTable], which: NDArray[np.int64]
) -> Stop:
    """The rows of each table apart, and those without one; put together again."""
    rows = len(which)
    out = {name: np.empty(rows) for name in _NAMES}
    code = np.zeros(rows, dtype=np.int8)
    for index in np.unique(which):
        whole = np.flatnonzero(which == index)
        for start in range(0, len(whole), _CHUNK_ROWS):
            here = whole[start : start + _CHUNK_ROWS]
            some_rows = {name: some(x, here) for name, x in given.items()}
            part, part_code = {name: np.empty(len(here)) for name in _NAMES}, np.zeros(len(here), dtype=np.int8)
            with np.errstate(divide="ignore", invalid="ignore", over="ignore", under="ignore"):
                if index < 0:
                    _one_chunk(some_rows, part, part_code)
                else:
                    full = {name: np.broadcast_to(x, part_code.shape) for name, x in some_rows.items()}
                    _one_table(full, tables[index], part, part_code)
            for name, values in part.items():
                out[name][here] = values
            code[here] = part_code
    return _record(out, code, shape)


def _flat(value: FloatArray, shape: tuple[int, ...]) -> FloatArray:
    """`value` as one row of the broadcast shape; what is one value for all stays one."""
    return value.reshape(1) if value.size == 1 else np.broadcast_to(value, shape).reshape(-1)


def _in_chunks(given: dict[str, FloatArray], shape: tuple[int, ...]) -> Stop:
    """Works the rows a cache-full at a time into one set of arrays."""
    rows = int(np.prod(shape, dtype=np.int64))
    out = {name: np.empty(rows) for name in _NAMES}
    code = np.zeros(rows, dtype=np.int8)
    with np.errstate(divide="ignore", invalid="ignore", over="ignore", under="ignore"):
        for start in range(0, rows, _CHUNK_ROWS):
            part = slice(start, start + _CHUNK_ROWS)
            here = {name: some(x, part) for name, x in given.items()}
            _one_chunk(here, {name: x[part] for name, x in out.items()}, code[part])
    return _record(out, code, shape)


def _record(out: dict[str, FloatArray], code: NDArray[np.int8], shape: tuple[int, ...]) -> Stop:
    """The arrays in the shape asked for, read-only."""
    arrays = {name: x.reshape(shape) for name, x in out.items()}
    code = code.reshape(shape)
    stops = np.asarray(code == 0)
    every: tuple[NDArray[Any], ...] = (*arrays.values(), code, stops)
    for array in every:
        array.setflags(write=False)
    return Stop(**arrays, reason_code=code, stops=stops)


_NAMES = (
    "reaction_distance_m",
    "lag_distance_m",
    "braking_distance_m",
    "stopping_distance_m",
    "stopping_time_s",
    "full_deceleration_mps2",
)
_BRAKE = ("mu", "f60", "sp_kmh", "max_mu", "grade", "brake_efficiency", "max_deceleration_mps2", "brake_share")


def _one_chunk(given: dict[str, FloatArray], out: dict[str, FloatArray], code: NDArray[np.int8]) -> None:
    """The phases in their order, for rows that fit the cache; writes into `out` and `code`."""
    speed = given["speed_mps"]
    brake = Brake.of(**{name: given[name] for name in _BRAKE})
    lagging = lag(speed, lag_s=given["brake_lag_s"], slope_mps2=brake.slope)
    building = build_up(lagging.end_speed_mps, build_up_s=given["build_up_s"], brake=brake)
    full = full_braking(building.end_speed_mps, brake)

    slowing = least = full.deceleration_mps2
    top = speed
    if building.end_speed_mps is not speed:
        top = np.maximum(lagging.top_speed_mps, building.top_speed_mps)
        least = np.minimum(slowing, brake.at(top) + brake.slope)
    code[...] = least < LEAST_DECELERATION_MPS2
    if code.any():
        code[np.broadcast_to(slowing <= 0.0, code.shape)] = 2
    _write(given, (lagging, building), full, top, out, code)


def _write(
    given: dict[str, FloatArray], phases: tuple[Phase, Phase], full: Braking, top: FloatArray,
    out: dict[str, FloatArray], code: NDArray[np.int8],
) -> None:  # fmt: skip
    """The results into `out`; what has no end, or no friction, is blanked."""
    (lagging, building), speed, reaction_time = phases, given["speed_mps"], given["reaction_time_s"]
    if not np.isinf(given["valid_to_mps"]).all():
        code[np.broadcast_to(top > given["valid_to_mps"] * (1.0 + _SAME_SPEED), code.shape)] = _OUTSIDE
    out["full_deceleration_mps2"][...] = full.deceleration_mps2
    np.multiply(speed, reaction_time, out=out["reaction_distance_m"])
    out["lag_distance_m"][...] = lagging.distance_m
    np.add(building.distance_m, full.distance_m, out=out["braking_distance_m"])
    np.add(out["reaction_distance_m"], out["lag_distance_m"], out=out["stopping_distance_m"])
    out["stopping_distance_m"] += out["braking_distance_m"]
    # The two short phases first: where they are one value for all rows, that is one pass less.
    np.add(lagging.time_s + building.time_s + reaction_time, full.time_s, out=out["stopping_time_s"])
    blank = np.flatnonzero(code)
    if blank.size:
        for name in ("braking_distance_m", "stopping_distance_m", "stopping_time_s"):
            out[name][blank] = np.nan


def _one_table(
    given: dict[str, FloatArray], table: FrictionTable, out: dict[str, FloatArray], code: NDArray[np.int8]
) -> None:
    """The phases in their order for rows under one table of friction; writes into `out` and `code`."""
    speed, grade = given["speed_mps"], given["grade"]
    run = 1.0 / np.sqrt(1.0 + grade * grade)
    share, rise = given["brake_share"], given["build_up_s"]
    brake = TableBrake(
        table=table, scale=share * given["brake_efficiency"] * GRAVITY_MPS2 * run,
        cap=share * given["max_deceleration_mps2"], slope=GRAVITY_MPS2 * grade * run,
    )  # fmt: skip
    lagging = lag(speed, lag_s=given["brake_lag_s"], slope_mps2=brake.slope)
    ramp = _ramp_force(lagging, rise, brake)
    even = Brake(at_zero=ramp, fall_per_mps=np.zeros(1), cap=np.full(1, np.inf), slope=brake.slope)
    building = build_up(lagging.end_speed_mps, build_up_s=rise, brake=even)
    begin = np.broadcast_to(building.end_speed_mps, speed.shape)
    top = np.maximum(np.maximum(lagging.top_speed_mps, building.top_speed_mps), speed)
    outside = top > table.last_mps * (1.0 + _SAME_SPEED)
    least = brake.least(np.zeros(len(speed)), np.minimum(top, table.last_mps)) + brake.slope
    code[...] = least < LEAST_DECELERATION_MPS2
    code[least <= 0.0] = 2
    code[outside] = _OUTSIDE
    slowing = brake.at(np.where(outside, np.nan, begin)) + brake.slope
    distance, time = braking_distance_and_time(np.where(code == 0, np.minimum(begin, table.last_mps), 0.0), brake)
    full = Braking(distance_m=distance, time_s=time, deceleration_mps2=slowing)
    _write(given, (lagging, building), full, top, out, code)


def _ramp_force(lagging: Phase, rise_s: FloatArray, brake: TableBrake) -> FloatArray:
    """What the build-up rises to: the least force at any speed from the fastest of the lag and of the build-up to the
    slowest of the build-up, so that a table that rises with speed makes no stop shorter than it is. On the level, under
    friction that falls with speed, that is the force at the speed at which it begins.

    The slowest is reckoned with the whole friction of the table and the steepest grade, and the fastest from the lag
    on: bounds that followed brakes, slope or lag more closely could make the better of two stops the longer one.
    """
    last = brake.table.last_mps
    most = GRAVITY_MPS2 * (float(brake.table.mu.max()) + RANGES["grade"].high)
    slowest = lagging.end_speed_mps - most * rise_s
    fastest = lagging.top_speed_mps + np.maximum(-brake.slope, 0.0) * rise_s
    return brake.least(np.clip(slowest, 0.0, last), np.minimum(fastest, last))
