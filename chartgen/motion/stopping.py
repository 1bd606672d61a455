"""Exact mechanics of a stop: reaction, brake lag, build-up, full braking, on any grade.

The order of the phases, and gravity from the end of the reaction, are the program's statement of what a stop is; the
formulas of each phase stand in `phases` and `braking`.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from chartgen.motion.braking import full_braking
from chartgen.motion.friction import Brake, checked_friction, some
from chartgen.motion.limits import LEAST_DECELERATION_MPS2, BoolArray, FloatArray, checked
from chartgen.motion.phases import build_up, lag

REASONS: tuple[str, ...] = ("", "too-little-friction", "never-at-rest")
"""Why a vehicle does not stop: "" it does; the least deceleration is positive but under `LEAST_DECELERATION_MPS2`;
gravity pulls at least as hard as the brakes hold."""

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

        All broadcast against one another. Per element exactly one of `mu` and (`f60`, `sp_kmh`) is given; with
        neither, the vehicle's limit alone governs and must be finite.

    Returns:
        A `Stop` in the broadcast shape: m, s, m/s².

    Raises:
        ValueError: an argument is outside its range or not finite, friction is given twice or by halves, or nothing
            limits the deceleration; the message names the argument. Also where the shapes do not broadcast.

    Source: equation of motion; friction ASTM E1960 (see `friction.friction_at`).

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
        **checked_friction(mu=mu, f60=f60, sp_kmh=sp_kmh, max_mu=max_mu),
    }
    bare = np.isnan(given["mu"]) & np.isnan(given["f60"])
    if (bare & np.isinf(given["max_deceleration_mps2"])).any():
        raise ValueError("mu: without friction (mu, or f60 and sp_kmh) max_deceleration_mps2 must be finite")
    if (bare & (given["brake_efficiency"] != 1.0)).any():
        raise ValueError("brake_efficiency: it is a share of friction (mu, or f60 and sp_kmh), and none is given")
    shape = np.broadcast_shapes(*(x.shape for x in given.values()))
    return _in_chunks({name: _flat(x, shape) for name, x in given.items()}, shape)


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
_BRAKE = ("mu", "f60", "sp_kmh", "max_mu", "grade", "brake_efficiency", "max_deceleration_mps2")


def _one_chunk(given: dict[str, FloatArray], out: dict[str, FloatArray], code: NDArray[np.int8]) -> None:
    """The phases in their order, for rows that fit the cache; writes into `out` and `code`."""
    speed, reaction_time = given["speed_mps"], given["reaction_time_s"]
    brake = Brake.of(**{name: given[name] for name in _BRAKE})
    lagging = lag(speed, lag_s=given["brake_lag_s"], slope_mps2=brake.slope)
    building = build_up(lagging.end_speed_mps, build_up_s=given["build_up_s"], brake=brake)
    full = full_braking(building.end_speed_mps, brake)

    slowing = least = full.deceleration_mps2
    if building.end_speed_mps is not speed:
        top = np.maximum(lagging.top_speed_mps, building.top_speed_mps)
        least = np.minimum(slowing, brake.at(top) + brake.slope)
    code[...] = least < LEAST_DECELERATION_MPS2
    if code.any():
        code[np.broadcast_to(slowing <= 0.0, code.shape)] = 2

    out["full_deceleration_mps2"][...] = slowing
    np.multiply(speed, reaction_time, out=out["reaction_distance_m"])
    out["lag_distance_m"][...] = lagging.distance_m
    np.add(building.distance_m, full.distance_m, out=out["braking_distance_m"])
    np.add(out["reaction_distance_m"], out["lag_distance_m"], out=out["stopping_distance_m"])
    out["stopping_distance_m"] += out["braking_distance_m"]
    np.add(reaction_time + lagging.time_s + building.time_s, full.time_s, out=out["stopping_time_s"])
    if code.any():
        for name in ("braking_distance_m", "stopping_distance_m", "stopping_time_s"):
            out[name][code != 0] = np.nan
