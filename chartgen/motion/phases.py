"""The two phases before full braking: the brake's lag and its build-up. Gravity acts in both.

Each takes the speed at its start and gives distance, time and the speed at its end; a vehicle may come to rest inside
it. Arrays have the shape (n,) or (1,); the arguments are checked by the caller (`stopping.stop`).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from chartgen.motion.friction import Brake
from chartgen.motion.limits import FloatArray


@dataclass(frozen=True, slots=True, kw_only=True)
class Phase:
    """One phase of a stop: how far (m), how long (s), and the speeds at its end and at its highest (m/s)."""

    distance_m: FloatArray
    time_s: FloatArray
    end_speed_mps: FloatArray
    top_speed_mps: FloatArray


def lag(speed_mps: FloatArray, *, lag_s: FloatArray, slope_mps2: FloatArray) -> Phase:
    """From the end of the reaction until the brake begins to act: only the slope changes the speed.

    Formula: distance ``v·t - g·sinθ·t²/2``, end speed ``v - g·sinθ·t``. Uphill, where the end speed would be under
    zero, the vehicle comes to rest inside the lag, after ``v/(g·sinθ)``, in ``v²/(2·g·sinθ)``.

    Args:
        speed_mps: m/s, at least 0.
        lag_s: s, at least 0.
        slope_mps2: ``g·sinθ`` in m/s², uphill positive.

    Returns:
        The phase, in m, s and m/s.

    Raises:
        Nothing: every argument in its range has an answer.

    Source: uniformly accelerated motion; the rule that gravity acts from the end of the reaction is ours.

    >>> import numpy as np
    >>> out = lag(np.array([20.0]), lag_s=np.array([0.5]), slope_mps2=np.array([-1.0]))
    >>> out.distance_m.tolist(), out.end_speed_mps.tolist()
    ([10.125], [20.5])
    """
    if not lag_s.any():
        return _nothing(speed_mps)
    end = speed_mps - slope_mps2 * lag_s
    time = np.broadcast_to(lag_s, end.shape)
    if (end <= 0.0).any():
        rest = speed_mps / np.where(slope_mps2 > 0.0, slope_mps2, np.inf)
        time = np.where(end <= 0.0, rest, time)
        end = np.maximum(end, 0.0)
    distance = time * (speed_mps - 0.5 * slope_mps2 * time)
    return Phase(distance_m=distance, time_s=time, end_speed_mps=end, top_speed_mps=np.maximum(speed_mps, end))


def build_up(speed_mps: FloatArray, *, build_up_s: FloatArray, brake: Brake) -> Phase:
    """From the brake's first bite to its full force: its part rises linearly from 0 to b, the slope acts in full.

    Formula: distance ``v·t_b - g·sinθ·t_b²/2 - b·t_b²/6``, end speed ``v - g·sinθ·t_b - b·t_b/2``. Where the end
    speed would be under zero, the vehicle comes to rest at the positive root τ of ``v - g·sinθ·τ - b·τ²/(2·t_b)``. On
    a downgrade the speed rises until the brake's part equals the slope's, at ``τ = t_b·g·|sinθ|/b``: the top speed.

    Where friction falls with speed, b is its value at the speed at which the build-up begins, the highest of it; but
    on a downgrade that keeps the vehicle faster than that, at a bound on the mean speed (see `_ramp_speed`).

    Args:
        speed_mps: m/s, at least 0.
        build_up_s: s, at least 0.
        brake: the brake's part and the slope.

    Returns:
        The phase, in m, s and m/s.

    Raises:
        Nothing: every argument in its range has an answer.

    Source: a deceleration that is linear in time, integrated twice.

    >>> import numpy as np
    >>> one = np.ones(1)
    >>> brake = Brake(at_zero=5 * one, fall_per_mps=0 * one, cap=np.inf * one, slope=0 * one)
    >>> out = build_up(20 * one, build_up_s=0.6 * one, brake=brake)
    >>> round(float(out.distance_m[0]), 12), round(float(out.end_speed_mps[0]), 12)
    (11.7, 18.5)
    """
    if not build_up_s.any():
        return _nothing(speed_mps)
    slope = brake.slope
    force = brake.at(_ramp_speed(speed_mps, build_up_s=build_up_s, brake=brake))
    end = speed_mps - build_up_s * (slope + 0.5 * force)
    time = build_up_s
    if (end <= 0.0).any():
        rest = _time_to_rest(speed_mps, force=force, build_up_s=build_up_s, slope=slope)
        time = np.where(end <= 0.0, np.minimum(rest, time), time)
        end = np.maximum(end, 0.0)
    rise = force / _divisor(build_up_s)
    distance = time * (speed_mps - time * (0.5 * slope + rise * time / 6.0))
    top = np.asarray(speed_mps)
    if (slope < 0.0).any():
        down = np.maximum(-slope, 0.0)
        peak = build_up_s * np.minimum(down / force, 1.0)
        top = speed_mps + peak * (down - 0.5 * rise * peak)
    return Phase(distance_m=distance, time_s=time, end_speed_mps=end, top_speed_mps=top)


def _ramp_speed(speed_mps: FloatArray, *, build_up_s: FloatArray, brake: Brake) -> FloatArray:
    """The speed whose friction the build-up rises to: never one that makes the stop shorter than it is.

    The force ``τ/t_b · b(w(τ))`` enters the end speed with the weight τ and the distance with τ·(t_b - τ). On a
    downgrade ``w <= v + g·|sinθ|·τ - b₀·τ²/(2·t_b)`` with b₀ the force at a speed that is not reached; the weighted
    means of that bound exceed v by ``t_b·(2·g·|sinθ|/3 - b₀/4)`` and ``t_b·(g·|sinθ|/2 - 3·b₀/20)``. As b is convex in
    the speed, its mean is at least its value there. On the level and uphill, and wherever the slope's pull is under
    0.3 of the force, that is the speed at the beginning.
    """
    if not (brake.slope < 0.0).any() or not brake.fall_per_mps.any():
        return speed_mps
    down = np.maximum(-brake.slope, 0.0)
    least = brake.at(speed_mps + down * build_up_s)
    excess = np.maximum(2.0 / 3.0 * down - 0.25 * least, 0.5 * down - 0.15 * least)
    return np.asarray(speed_mps + build_up_s * np.maximum(excess, 0.0))


def _time_to_rest(speed_mps: FloatArray, *, force: FloatArray, build_up_s: FloatArray, slope: FloatArray) -> FloatArray:
    """The positive root of the speed in the build-up, each sign of the slope in the form that loses no digits."""
    root = np.sqrt(slope * slope + 2.0 * force * speed_mps / _divisor(build_up_s))
    uphill = 2.0 * speed_mps / np.where(slope + root > 0.0, slope + root, 1.0)
    downhill = (root - slope) * build_up_s / force
    return np.where(slope >= 0.0, uphill, downhill)


def _divisor(build_up_s: FloatArray) -> FloatArray:
    """The time of the build-up to divide by; without one the quotient is multiplied by no time."""
    return build_up_s if build_up_s.min() > 0.0 else np.where(build_up_s > 0.0, build_up_s, 1.0)


def _nothing(speed_mps: FloatArray) -> Phase:
    """A phase that takes no time."""
    zero = np.zeros(1)
    return Phase(distance_m=zero, time_s=zero, end_speed_mps=speed_mps, top_speed_mps=speed_mps)
