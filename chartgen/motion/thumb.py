"""Rules of thumb in which the braking distance grows with the square of the speed, each a method of its own.

They take the speed and nothing else: reaction time and deceleration lie in the rule. Results are given in metres.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from chartgen.motion.limits import KMH_PER_MPS, FloatArray, checked
from chartgen.motion.stopping import Stop

_MPS_PER_MPH = 0.44704
_M_PER_FT = 0.3048
"""Exact: the international mile and foot of 1959."""

IMPLIED_REACTION_S: Mapping[str, float] = {
    "square-metric": 0.3 * KMH_PER_MPS,
    "square-half-metric": 0.3 * KMH_PER_MPS,
    "square-feet": _M_PER_FT / _MPS_PER_MPH,
}
"""The reaction time that lies in each rule: 3·V/10 m is 1.08 s of travel at V km/h; V ft at V mph is 0.6818 s."""


def square_metric(speed_mps: ArrayLike) -> Stop:
    """The rule of thumb for normal braking, V in km/h, distances in m.

    Formula: reaction ``3·(V/10)``, braking ``(V/10)²``.

    Args:
        speed_mps: m/s, more than 0, at most 200.

    Returns:
        A `Stop` in m and s, on the level. The rule gives no time: the one given is that of an even deceleration over
        the rule's own distance.

    Raises:
        ValueError: a speed outside its range or not finite.

    Source: driving-school teaching in Germany.

    >>> out = square_metric(50 / 3.6)
    >>> round(float(out.reaction_distance_m), 9), round(float(out.braking_distance_m), 9)
    (15.0, 25.0)
    """
    speed = checked("speed_mps", speed_mps)
    tens = speed * KMH_PER_MPS / 10.0
    return _record(speed, reaction=3.0 * tens, braking=tens * tens)


def square_half_metric(speed_mps: ArrayLike) -> Stop:
    """The rule of thumb for emergency braking, V in km/h, distances in m.

    Formula: reaction ``3·(V/10)``, braking ``(V/10)²/2``.

    Args:
        speed_mps: m/s, more than 0, at most 200.

    Returns:
        A `Stop` in m and s, on the level; its time as in `square_metric`.

    Raises:
        ValueError: a speed outside its range or not finite.

    Source: driving-school teaching in Germany.

    >>> round(float(square_half_metric(50 / 3.6).braking_distance_m), 9)
    12.5
    """
    speed = checked("speed_mps", speed_mps)
    tens = speed * KMH_PER_MPS / 10.0
    return _record(speed, reaction=3.0 * tens, braking=tens * tens / 2.0)


def square_feet(speed_mps: ArrayLike) -> Stop:
    """The rule of thumb in feet, V in mph.

    Formula: reaction ``V``, braking ``V²/20``, both in ft.

    Args:
        speed_mps: m/s, more than 0, at most 200.

    Returns:
        A `Stop` in m and s, on the level; its time as in `square_metric`.

    Raises:
        ValueError: a speed outside its range or not finite.

    Source: school rule in the United Kingdom; the distances in feet of sources:highway-code-126.

    >>> out = square_feet(50 * 0.44704)
    >>> round(float(out.stopping_distance_m) / 0.3048, 9)
    175.0
    """
    speed = checked("speed_mps", speed_mps)
    mph = speed / _MPS_PER_MPH
    return _record(speed, reaction=mph * _M_PER_FT, braking=mph * mph / 20.0 * _M_PER_FT)


def _record(speed: FloatArray, *, reaction: FloatArray, braking: FloatArray) -> Stop:
    """The record of a rule that always stops, on the level."""
    slowing = speed * speed / (2.0 * braking)
    arrays = {
        "reaction_distance_m": reaction,
        "lag_distance_m": np.zeros(speed.shape),
        "braking_distance_m": braking,
        "stopping_distance_m": reaction + braking,
        "stopping_time_s": reaction / speed + speed / slowing,
        "full_deceleration_mps2": slowing,
    }
    made = {name: np.asarray(value, dtype=np.float64) for name, value in arrays.items()}
    code = np.zeros(speed.shape, dtype=np.int8)
    stops = np.ones(speed.shape, dtype=bool)
    every: tuple[NDArray[Any], ...] = (*made.values(), code, stops)
    for array in every:
        array.setflags(write=False)
    return Stop(**made, stops=stops, reason_code=code)
