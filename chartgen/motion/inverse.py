"""A stop asked backwards: how fast is the vehicle still at a place, and from which speed does it stop by it?

All mechanics are those of `stopping.stop`; its arguments are passed on as they are, whatever law of friction they give.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import ArrayLike

from chartgen.motion.course import OUTSIDE, Motion, rows_of, some
from chartgen.motion.gap import gap_distance_m, gap_seconds
from chartgen.motion.limits import BoolArray, FloatArray
from chartgen.motion.stopping import stop

_SCAN = 240
"""Speeds tried before the search narrows: no unsafe stretch wider than a 240th of the top speed is stepped over."""
_HALVINGS = 46
_LEAST_MPS = 1e-9
"""Stands for rest where the mechanics want a speed above 0."""
_WALK_MPS = 1.0 / 3.6
"""Chosen by us: 1 km/h, the slowest speed that a following gap is asked about. Below it a gap in seconds is next to no
distance, less than a vehicle on a downgrade rolls before its brakes bite."""
_JUST_BELOW = 1.0 - 2e-9
"""Relative: a rule's threshold counts as reached from a billionth below it on (see `gap.gap_seconds`)."""


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
        source does not speak. A vehicle that never stops has a speed too.

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
    given = rows_of({"speed_mps": speed_mps, "distance_m": place, **arguments})
    far = given.pop("distance_m")
    whole = stop(**given)
    told = np.flatnonzero(whole.reason_code != OUTSIDE)
    out = np.full(len(far), np.nan)
    out[told] = Motion(some(given, told)).speed_at(far[told])
    # Where it has stopped it has stopped, to the last digit.
    out[whole.stops & (np.nan_to_num(whole.stopping_distance_m, nan=np.inf) <= far)] = 0.0
    return np.asarray(out.reshape(_shape(speed_mps, place, arguments)))


def greatest_speed(distance_m: ArrayLike, *, top_mps: float, **arguments: Any) -> Greatest:
    """The greatest speed from which, and from every lower one, a vehicle stops within a distance.

    Formula: the largest v up to `top_mps` with ``s(u) <= distance`` for all u <= v, s as in `stopping.stop`. A
    speed from which the vehicle does not stop, or for which there is no friction, is not slow enough.

    Args:
        distance_m: what can be seen of the road, m, more than 0.
        top_mps: the fastest speed that is asked, m/s, more than 0, at most 200.
        **arguments: as `stopping.stop` takes them; all broadcast against one another.

    Returns:
        The speeds, from the safe side within 1e-12 of `top_mps`; 0 where even the slowest does not stop in time. Speeds
        are tried in 240 even steps first: an unsafe stretch between two of them would be missed. A stop gets longer
        with the speed, so there is none, unless a table of friction rises with it.

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
    given = rows_of({"distance_m": reach, **arguments})
    far = given.pop("distance_m")

    def slow_enough(speed: FloatArray) -> BoolArray:
        made = stop(speed, **given)
        return np.asarray(made.stops & (np.nan_to_num(made.stopping_distance_m, nan=np.inf) <= far))

    return _greatest(slow_enough, top_mps, np.full(len(far), np.inf), _shape(reach, arguments))


def greatest_speed_in_gap(rule: Mapping[str, Any], *, top_mps: float, **arguments: Any) -> Greatest:
    """The greatest speed from which, and from every lower one, a vehicle stops within its following gap.

    Formula: the largest v up to `top_mps` with ``s(u) <= u·gap(u)`` for all u from 1 km/h to v. The vehicle
    ahead is taken to stop dead, as if it had hit a wall: the cautious reading, for rules of the gap count on its
    needing room too.

    Args:
        rule: the rule as `gap.gap_seconds` takes it, arrays or numbers.
        top_mps: the fastest speed that is asked, m/s, more than 0, at most 200.
        **arguments: as `stopping.stop` takes them; all broadcast against one another and the rule.

    Returns:
        The speeds, from the safe side within 1e-12 of `top_mps`; 0 where even 1 km/h is too fast. Speeds are tried in
        240 even steps first, and just below the rule's threshold: the seconds it adds above excuse no speed below.

    Raises:
        ValueError: as `stopping.stop` and `gap.gap_seconds`; a top speed out of its range.

    Source: equation of motion; the rule's own source.

    >>> found = greatest_speed_in_gap({"fixed_s": 2.0}, top_mps=40.0, reaction_time_s=1.0, max_deceleration_mps2=5.0)
    >>> round(float(found.speed_mps), 6)
    10.0
    """
    stated = {name: value for name, value in rule.items() if value is not None}
    given = rows_of({**arguments, **{f"rule {name}": value for name, value in stated.items()}})
    own = {name: given.pop(f"rule {name}") for name in stated}

    def slow_enough(speed: FloatArray) -> BoolArray:
        made = stop(speed, **given)
        gap = gap_distance_m(speed, gap_seconds(speed, **own))
        return np.asarray(made.stops & (np.nan_to_num(made.stopping_distance_m, nan=np.inf) <= gap))

    threshold = np.asarray(own.get("extra_above_mps", np.full(given["grade"].shape, np.inf)), dtype=np.float64)
    return _greatest(
        slow_enough, top_mps, threshold * _JUST_BELOW, _shape(*stated.values(), arguments), least_mps=_WALK_MPS
    )


def _shape(*values: Any) -> tuple[int, ...]:
    shapes = []
    for value in values:
        parts = [v for n, v in value.items() if n != "tables"] if isinstance(value, dict) else [value]
        shapes += [np.shape(part) for part in parts]
    return np.broadcast_shapes(*shapes)


def _greatest(
    slow_enough: Callable[[FloatArray], BoolArray],
    top_mps: float,
    own_mps: FloatArray,
    shape: tuple[int, ...],
    *,
    least_mps: float = 0.0,
) -> Greatest:
    """Scans upwards, over each row's own speed too, to the first speed that is too fast, then narrows down, keeping the
    safe end."""
    if not 0.0 < top_mps <= 200.0:
        raise ValueError("top_mps: it must be more than 0 m/s and at most 200 m/s")
    least = min(least_mps, top_mps)
    even = np.broadcast_to(np.linspace(least, top_mps, _SCAN + 1)[:, None], (_SCAN + 1, len(own_mps)))
    tried = np.sort(np.concatenate([even, np.clip(own_mps, least, top_mps)[None]]), axis=0)
    good = slow_enough(np.maximum(tried, _LEAST_MPS))
    at_top = good.all(axis=0)
    first = np.where(at_top, len(tried) - 1, np.argmin(good, axis=0))
    low, high = (np.take_along_axis(tried, np.maximum(place, 0)[None], axis=0)[0] for place in (first - 1, first))
    for _ in range(_HALVINGS):
        middle = 0.5 * (low + high)
        good = slow_enough(np.maximum(middle, _LEAST_MPS))
        low, high = np.where(good, middle, low), np.where(good, high, middle)
    found = np.where(at_top, top_mps, np.where(first > 0, low, 0.0))
    return Greatest(speed_mps=found.reshape(shape), at_top=at_top.reshape(shape))
