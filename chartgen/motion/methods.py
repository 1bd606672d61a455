"""Printed formulas of design and investigation manuals, each a method of its own, with the constants as printed.

The constants are the manuals' roundings (0.278 for 1/3.6, 254 for 2 g·3.6², 1.47 for mph to ft/s ...) and change
printed design values; exact physics is `stopping.stop`. V is in the manual's own unit, computed back from SI; results
are given in metres.

`METHOD_INPUTS` says which inputs each method can use. What is not in it is a fault of the edition, never ignored.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from chartgen.motion.friction import friction_at
from chartgen.motion.friction_table import FrictionTable
from chartgen.motion.limits import GRAVITY_MPS2, KMH_PER_MPS, LEAST_DECELERATION_MPS2, FloatArray, checked
from chartgen.motion.stopping import Stop, stop
from chartgen.motion.thumb import square_feet, square_half_metric, square_metric

MPS_PER_MPH = 0.44704
"""Exact: the international mile of 1959."""

M_PER_FT = 0.3048
"""Exact: the international foot of 1959."""

_GREEN_BOOK = "AASHTO, A Policy on Geometric Design of Highways and Streets, stopping sight distance"


def sight_metric(
    speed_mps: ArrayLike, *, reaction_time_s: ArrayLike, max_deceleration_mps2: ArrayLike, grade: ArrayLike = 0.0
) -> Stop:
    """Stopping sight distance, metric form with its printed constants.

    Formula: ``0.278·V·t + 0.039·V²/a`` on the level, ``0.278·V·t + V²/(254·((a/9.81) + G))`` on a grade; V in km/h, a
    in m/s², distances in m. The two forms do not meet at G = 0: 0.039 is 1.1 % above the exact constant.

    Args:
        speed_mps: m/s, more than 0, at most 200.
        reaction_time_s: brake reaction time, s, 0 to 10.
        max_deceleration_mps2: the design deceleration, m/s², finite, more than 0.
        grade: rise over run, uphill positive, -0.30 to 0.30.

    Returns:
        A `Stop` in m and s. The manual prints no time: the one given is that of an even deceleration over the
        printed distance.

    Raises:
        ValueError: an argument is outside its range or not finite; the message names it.

    Source: AASHTO, A Policy on Geometric Design of Highways and Streets (4th to 7th ed.), equations for SSD, metric
    half (sources:green-book-level, sources:green-book-grades).

    >>> out = sight_metric(100 / 3.6, reaction_time_s=2.5, max_deceleration_mps2=3.4)
    >>> round(float(out.reaction_distance_m), 1), round(float(out.braking_distance_m), 1)
    (69.5, 114.7)
    """
    speed, time, limit, slope = _sight_arguments(speed_mps, reaction_time_s, max_deceleration_mps2, grade)
    printed = speed * KMH_PER_MPS
    held = limit / 9.81 + slope
    braking = np.where(slope == 0.0, 0.039 * printed**2 / limit, printed**2 / (254.0 * _positive(held)))
    return _record(speed, time, reaction=0.278 * printed * time, braking=braking, held=held)


def sight_us(
    speed_mps: ArrayLike, *, reaction_time_s: ArrayLike, max_deceleration_mps2: ArrayLike, grade: ArrayLike = 0.0
) -> Stop:
    """Stopping sight distance, US customary form with its printed constants.

    Formula: ``1.47·V·t + 1.075·V²/a`` on the level, ``1.47·V·t + V²/(30·((a/32.2) + G))`` on a grade; V in mph, a in
    ft/s², distances in ft; converted to metres on the way out.

    Args:
        speed_mps: m/s, more than 0, at most 200.
        reaction_time_s: brake reaction time, s, 0 to 10.
        max_deceleration_mps2: the design deceleration, m/s², finite, more than 0.
        grade: rise over run, uphill positive, -0.30 to 0.30.

    Returns:
        A `Stop` in m and s. The manual prints no time: the one given is that of an even deceleration over the
        printed distance.

    Raises:
        ValueError: an argument is outside its range or not finite; the message names it.

    Source: AASHTO, A Policy on Geometric Design of Highways and Streets (4th to 7th ed.), equations for SSD, US
    customary half (sources:green-book-level, sources:green-book-grades).

    >>> out = sight_us(30 * 0.44704, reaction_time_s=2.5, max_deceleration_mps2=11.2 * 0.3048)
    >>> round(float(out.braking_distance_m) / 0.3048, 1)
    86.4
    """
    speed, time, limit, slope = _sight_arguments(speed_mps, reaction_time_s, max_deceleration_mps2, grade)
    printed, limit_ft = speed / MPS_PER_MPH, limit / M_PER_FT
    held = limit_ft / 32.2 + slope
    braking = np.where(slope == 0.0, 1.075 * printed**2 / limit_ft, printed**2 / (30.0 * _positive(held)))
    return _record(speed, time, reaction=1.47 * printed * time * M_PER_FT, braking=braking * M_PER_FT, held=held)


def slide_metric(
    speed_mps: ArrayLike,
    *,
    reaction_time_s: ArrayLike,
    mu: ArrayLike = np.nan,
    f60: ArrayLike = np.nan,
    sp_kmh: ArrayLike = np.nan,
    max_mu: ArrayLike = np.inf,
    grade: ArrayLike = 0.0,
    brake_efficiency: ArrayLike = 1.0,
    tables: Sequence[FrictionTable] = (),
    table: ArrayLike = -1,
) -> Stop:
    """Slide-to-stop distance, metric form with its printed constants.

    Formula: ``0.278·V·t + V²/(254·(f + G))``; V in km/h, distances in m, ``f = η·F(V)``: friction at the initial
    speed, the lowest of the stop, times the brake efficiency.

    Args:
        speed_mps: m/s, more than 0, at most 200.
        reaction_time_s: s, 0 to 10.
        mu: constant friction, 0 < mu <= 1.5, or nan.
        f60: friction at 60 km/h where it falls with speed (see `friction.friction_at`), 0 < f60 <= 1.5, or nan.
        sp_kmh: speed constant of that fall, km/h, 10 to 10,000, or nan.
        max_mu: cap on the friction that falls with speed, more than 0; infinite for none.
        grade: rise over run, uphill positive, -0.30 to 0.30.
        brake_efficiency: 0 < η <= 1.
        tables: frictions by speed, see `friction.friction_at`.
        table: index into `tables`, -1 where the friction is not one of them.

    Returns:
        A `Stop` in m and s. The formula gives no time: the one given is that of an even deceleration over the printed
        distance.

    Raises:
        ValueError: an argument is outside its range or not finite, or no friction is given; the message names it.

    Source: the slide-to-stop formula of collision investigation and highway manuals; e.g. 60 km/h, f 0.3, 2.5 s:
    41.70 + 47.24 = 88.94 m in a published worked example (tests/published/formulas_worked.csv).

    >>> out = slide_metric(60 / 3.6, reaction_time_s=2.5, mu=0.30)
    >>> round(float(out.stopping_distance_m), 2)
    88.94
    """
    speed, time, slope = _common_arguments(speed_mps, reaction_time_s, grade)
    printed = speed * KMH_PER_MPS
    held = _friction(speed, mu, f60, sp_kmh, max_mu, brake_efficiency, tables, table) + slope
    return _record(
        speed, time, reaction=0.278 * printed * time, braking=printed**2 / (254.0 * _positive(held)), held=held
    )


def slide_us(
    speed_mps: ArrayLike,
    *,
    reaction_time_s: ArrayLike,
    mu: ArrayLike = np.nan,
    f60: ArrayLike = np.nan,
    sp_kmh: ArrayLike = np.nan,
    max_mu: ArrayLike = np.inf,
    grade: ArrayLike = 0.0,
    brake_efficiency: ArrayLike = 1.0,
    tables: Sequence[FrictionTable] = (),
    table: ArrayLike = -1,
) -> Stop:
    """Slide-to-stop distance, US customary form with its printed constants.

    Formula: ``1.47·V·t + V²/(30·(f + G))``; V in mph, distances in ft, converted to metres on the way out; with
    ``f = η·F(V)``: friction at the initial speed, the lowest of the stop, times the brake efficiency.

    Args:
        speed_mps: m/s, more than 0, at most 200.
        reaction_time_s: s, 0 to 10.
        mu: constant friction, 0 < mu <= 1.5, or nan.
        f60: friction at 60 km/h where it falls with speed (see `friction.friction_at`), 0 < f60 <= 1.5, or nan.
        sp_kmh: speed constant of that fall, km/h, 10 to 10,000, or nan.
        max_mu: cap on the friction that falls with speed, more than 0; infinite for none.
        grade: rise over run, uphill positive, -0.30 to 0.30.
        brake_efficiency: 0 < η <= 1.
        tables: frictions by speed, see `friction.friction_at`.
        table: index into `tables`, -1 where the friction is not one of them.

    Returns:
        A `Stop` in m and s. The formula gives no time: the one given is that of an even deceleration over the printed
        distance.

    Raises:
        ValueError: an argument is outside its range or not finite, or no friction is given; the message names it.

    Source: the slide-to-stop formula of collision investigation and highway manuals; e.g. 60 mph, f 0.35, 2.5 s:
    563.36 ft in a published worked example (tests/published/formulas_worked.csv).

    >>> out = slide_us(60 * 0.44704, reaction_time_s=2.5, mu=0.35)
    >>> round(float(out.stopping_distance_m) / 0.3048, 2)
    563.36
    """
    speed, time, slope = _common_arguments(speed_mps, reaction_time_s, grade)
    printed = speed / MPS_PER_MPH
    held = _friction(speed, mu, f60, sp_kmh, max_mu, brake_efficiency, tables, table) + slope
    braking = printed**2 / (30.0 * _positive(held))
    return _record(speed, time, reaction=1.47 * printed * time * M_PER_FT, braking=braking * M_PER_FT, held=held)


@dataclass(frozen=True, slots=True, kw_only=True)
class MethodInputs:
    """A method's function and the names of its keyword arguments: those it must have and those it may have.

    `friction` in either set stands for `mu`, or `f60` with `sp_kmh` and perhaps `max_mu`. Anything else an edition
    states (a lag, a build-up, a limit ...) is unusable by the method.
    """

    function: Callable[..., Stop]
    required: frozenset[str]
    optional: frozenset[str] = frozenset()
    source: str = ""

    def usable(self, name: str) -> bool:
        """True where the method can use the input of that name."""
        return name in self.required or name in self.optional


METHOD_INPUTS: Mapping[str, MethodInputs] = {
    "first-principles": MethodInputs(
        function=stop,
        required=frozenset({"reaction_time_s"}),
        optional=frozenset({
            "friction", "grade", "brake_lag_s", "build_up_s", "brake_efficiency", "max_deceleration_mps2",
            "brake_share", "valid_to_mps",
        }),
        source="equation of motion",
    ),
    "sight-metric": MethodInputs(
        function=sight_metric,
        required=frozenset({"reaction_time_s", "max_deceleration_mps2"}),
        optional=frozenset({"grade"}),
        source=f"{_GREEN_BOOK}, metric half",
    ),
    "sight-us": MethodInputs(
        function=sight_us,
        required=frozenset({"reaction_time_s", "max_deceleration_mps2"}),
        optional=frozenset({"grade"}),
        source=f"{_GREEN_BOOK}, US customary half",
    ),
    "slide-metric": MethodInputs(
        function=slide_metric,
        required=frozenset({"reaction_time_s", "friction"}),
        optional=frozenset({"grade", "brake_efficiency"}),
        source="slide-to-stop formula, km/h and m",
    ),
    "slide-us": MethodInputs(
        function=slide_us,
        required=frozenset({"reaction_time_s", "friction"}),
        optional=frozenset({"grade", "brake_efficiency"}),
        source="slide-to-stop formula, mph and ft",
    ),
    "square-metric": MethodInputs(function=square_metric, required=frozenset(), source="rule of thumb, km/h and m"),
    "square-half-metric": MethodInputs(
        function=square_half_metric, required=frozenset(), source="rule of thumb for emergency braking, km/h and m"
    ),
    "square-feet": MethodInputs(function=square_feet, required=frozenset(), source="rule of thumb, mph and ft"),
}  # fmt: skip
"""By the name an edition uses. First principles need friction or a limit, at least one of the two."""


def _common_arguments(
    speed_mps: ArrayLike, reaction_time_s: ArrayLike, grade: ArrayLike
) -> tuple[FloatArray, FloatArray, FloatArray]:
    return checked("speed_mps", speed_mps), checked("reaction_time_s", reaction_time_s), checked("grade", grade)


def _sight_arguments(
    speed_mps: ArrayLike, reaction_time_s: ArrayLike, max_deceleration_mps2: ArrayLike, grade: ArrayLike
) -> tuple[FloatArray, FloatArray, FloatArray, FloatArray]:
    speed, time, slope = _common_arguments(speed_mps, reaction_time_s, grade)
    limit = checked("max_deceleration_mps2", max_deceleration_mps2)
    if np.isinf(limit).any():
        raise ValueError("max_deceleration_mps2: the method needs a finite deceleration")
    return speed, time, limit, slope


def _friction(
    speed: FloatArray, mu: ArrayLike, f60: ArrayLike, sp_kmh: ArrayLike, max_mu: ArrayLike, brake_efficiency: ArrayLike,
    tables: Sequence[FrictionTable], table: ArrayLike,
) -> FloatArray:  # fmt: skip
    friction = friction_at(speed, mu=mu, f60=f60, sp_kmh=sp_kmh, max_mu=max_mu, tables=tables, table=table)
    if np.isnan(friction).any():
        raise ValueError("mu: the method needs friction (mu, or f60 and sp_kmh)")
    return np.asarray(checked("brake_efficiency", brake_efficiency) * friction)


def _positive(held: FloatArray) -> FloatArray:
    """The bracket of a grade formula, or nan where it is not positive: no distance follows from it."""
    return np.where(held > 0.0, held, np.nan)


def _record(
    speed: FloatArray, time: FloatArray, *, reaction: FloatArray, braking: FloatArray, held: FloatArray
) -> Stop:
    """The common record. `held` is the share of gravity that slows the vehicle, slope included."""
    speed, time, reaction, braking, held = np.broadcast_arrays(speed, time, reaction, braking, held)
    full = held * GRAVITY_MPS2
    code = np.where(full <= 0.0, 2, np.where(full < LEAST_DECELERATION_MPS2, 1, 0)).astype(np.int8)
    stops = np.asarray(code == 0)
    braking = np.where(stops, braking, np.nan)
    out = Stop(
        reaction_distance_m=np.array(reaction),
        lag_distance_m=np.zeros(stops.shape),
        braking_distance_m=braking,
        stopping_distance_m=np.asarray(reaction + braking),
        stopping_time_s=np.asarray(time + 2.0 * braking / speed),
        full_deceleration_mps2=np.asarray(full),
        stops=stops,
        reason_code=code,
    )
    for name in Stop.__slots__:
        getattr(out, name).setflags(write=False)
    return out
