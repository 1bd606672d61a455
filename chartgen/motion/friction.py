"""Friction between tyre and road, and the brake force it allows.

`friction_at` answers for a table or a page; `Brake` is the form the phases of a stop work with.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from math import exp

import numpy as np
from numpy.typing import ArrayLike, NDArray

from chartgen.motion.friction_table import FrictionTable
from chartgen.motion.limits import GRAVITY_MPS2, KMH_PER_MPS, RANGES, FloatArray, Rows, checked

_REFERENCE_KMH = 60.0
_KM_PER_MILE = 1.609344
"""Exact: the international mile of 1959."""


def friction_at(
    speed_mps: ArrayLike,
    *,
    mu: ArrayLike = np.nan,
    f60: ArrayLike = np.nan,
    sp_kmh: ArrayLike = np.nan,
    max_mu: ArrayLike = np.inf,
    tables: Sequence[FrictionTable] = (),
    table: ArrayLike = -1,
) -> FloatArray:
    """Friction at a speed: constant, falling with speed, or by a table.

    Formula: ``mu``, or ``min(f60 * exp((60 - S) / sp_kmh), max_mu)`` with S the speed in km/h (locked wheel: the slip
    speed is the vehicle's).

    Args:
        speed_mps: m/s, 0 to 200; any shape that broadcasts with the others.
        mu: constant friction, 0 < mu <= 1.5, or nan where friction falls with speed.
        f60: friction at 60 km/h, 0 < f60 <= 1.5, or nan where friction is constant.
        sp_kmh: speed constant in km/h, 10 to 10,000; given together with `f60`.
        max_mu: optional cap on the friction that falls with speed, more than 0.
        tables: frictions by speed.
        table: index into `tables`, -1 where the friction is not one of them.

    Returns:
        Friction, without unit, in the broadcast shape; nan where no friction is given at all, and beyond a table's
        last speed.

    Raises:
        ValueError: an argument is out of its range; more than one form, or half of one, is given for one element; a
            cap without the falling form.

    Source: ASTM E1960 (International Friction Index) and PIARC's experiment of 1992, equation for F(S)
    (sources:astm-e1960).

    >>> round(float(friction_at(60 / 3.6, f60=0.35, sp_kmh=110.0)), 6)
    0.35
    >>> friction_at([10.0, 30.0], mu=0.7).tolist()
    [0.7, 0.7]
    """
    speed = np.asarray(speed_mps, dtype=np.float64)
    if not ((speed >= 0.0) & (speed <= 200.0)).all():
        raise ValueError("speed_mps: it must be at least 0 m/s and at most 200 m/s")
    given = checked_friction(mu=mu, f60=f60, sp_kmh=sp_kmh, max_mu=max_mu)
    which = checked_tables(tables, table, given)
    at_zero, fall, cap = _as_falling(given["mu"], given["f60"], given["sp_kmh"], given["max_mu"])
    value = np.asarray(np.minimum(at_zero * np.exp(-fall * speed), cap))
    value = np.where(np.isinf(value), np.nan, value)
    for index, one in enumerate(tables):
        value = np.where(which == index, one.at(speed), value)
    return np.asarray(value)


def penn_state(sn0: float, png_h_per_mile: float) -> tuple[float, float]:
    """The falling friction of a skid number and its gradient, as `friction_at` takes it.

    Formula: ``SN(V) = SN0·exp(-PNG·V/100)``, V in mph, friction = SN/100; so ``f60 = SN0/100·exp(-PNG·V60/100)`` with
    V60 = 60 km/h in mph, and ``sp = 100/PNG`` mph in km/h.

    Args:
        sn0: skid number at zero speed, more than 0, at most 150.
        png_h_per_mile: percentage normalised gradient, % an mph, more than 0.

    Returns:
        f60 and sp_kmh.

    Raises:
        ValueError: a value out of its range, or a speed constant that leaves 10 to 10,000 km/h.

    Source: the Penn State model of skid resistance (from memory); the mile is exact, 1.609344 km.

    >>> f60, sp = penn_state(60.0, 0.9)
    >>> round(f60, 4), round(sp, 2)
    (0.429, 178.82)
    """
    if not 0.0 < sn0 <= 150.0 or not png_h_per_mile > 0.0:
        raise ValueError("sn0, png_h_per_mile: a skid number up to 150 and a gradient above 0 are needed")
    sp_kmh = 100.0 / png_h_per_mile * _KM_PER_MILE
    if not RANGES["sp_kmh"].low <= sp_kmh <= RANGES["sp_kmh"].high:
        raise ValueError(f"png_h_per_mile: a speed constant of {sp_kmh:g} km/h follows; it must be {RANGES['sp_kmh']}")
    return sn0 / 100.0 * exp(-_REFERENCE_KMH / sp_kmh), sp_kmh


def speed_constant(texture_mm: float) -> float:
    """The speed constant of the falling friction from the depth of the road's texture.

    Formula: ``Sp = 14.2 + 89.7·MPD``, in km/h.

    Args:
        texture_mm: mean profile depth MPD, mm, more than 0, at most 10.

    Returns:
        km/h.

    Raises:
        ValueError: a depth out of its range.

    Source: ASTM E1960, International Friction Index (sources:astm-e1960-sp, from memory).

    >>> round(speed_constant(0.8), 2)
    85.96
    """
    if not 0.0 < texture_mm <= 10.0:
        raise ValueError("texture_mm: it must be more than 0 mm and at most 10 mm")
    return 14.2 + 89.7 * texture_mm


def checked_tables(
    tables: Sequence[FrictionTable], table: ArrayLike, given: Mapping[str, FloatArray]
) -> NDArray[np.int64]:
    """The index of each element's table; raises ValueError for one that is not there, or beside another friction."""
    which = np.asarray(table)
    if which.dtype.kind not in "iu" or not ((which >= -1) & (which < len(tables))).all():
        raise ValueError(f"table: it must be -1, or the place of one of the {len(tables)} tables")
    by_table = which >= 0
    if by_table.any() and (by_table & (~np.isnan(given["mu"]) | ~np.isnan(given["f60"]))).any():
        raise ValueError("table, mu, f60: friction is given in more than one form")
    return which.astype(np.int64)


def checked_friction(*, mu: ArrayLike, f60: ArrayLike, sp_kmh: ArrayLike, max_mu: ArrayLike) -> dict[str, FloatArray]:
    """The four arguments of `friction_at` by name, as float arrays; raises ValueError as said there."""
    given = {
        "mu": checked("mu", mu, absent=True),
        "f60": checked("f60", f60, absent=True),
        "sp_kmh": checked("sp_kmh", sp_kmh, absent=True),
        "max_mu": checked("max_mu", max_mu),
    }
    has_mu, has_f60, has_sp = (~np.isnan(given[name]) for name in ("mu", "f60", "sp_kmh"))
    if (has_f60 != has_sp).any():
        raise ValueError("f60, sp_kmh: friction that falls with speed needs both of them")
    if (has_mu & has_f60).any():
        raise ValueError("mu, f60: friction is either constant or falls with speed, not both")
    if not has_f60.all() and (np.isfinite(given["max_mu"]) & ~has_f60).any():
        raise ValueError("max_mu: a cap belongs to friction that falls with speed (f60, sp_kmh)")
    return given


def _as_falling(
    mu: FloatArray, f60: FloatArray, sp_kmh: FloatArray, max_mu: FloatArray
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Either form of friction as ``min(at_zero * exp(-fall * v), cap)``, v in m/s: at_zero, fall per m/s, cap.

    A constant is a fall of 0; where no friction is given, at_zero is infinite and a vehicle's own limit has to govern.
    """
    fall = np.asarray(KMH_PER_MPS / sp_kmh)
    at_zero = np.asarray(f60 * np.exp(_REFERENCE_KMH / KMH_PER_MPS * fall))
    constant = np.isnan(f60)
    if constant.any():
        fall = np.where(constant, 0.0, fall)
        at_zero = np.where(constant, np.where(np.isnan(mu), np.inf, mu), at_zero)
    return at_zero, fall, max_mu


@dataclass(frozen=True, slots=True, kw_only=True)
class Brake:
    """The brake's part of the deceleration, ``b(v) = min(at_zero * exp(-fall_per_mps * v), cap)``, in m/s².

    `at_zero` is ``η·g·cosθ`` times the friction law's, `cap` the lower of the capped friction's and the vehicle's own
    limit; `slope` is ``g·sinθ``, what gravity adds (uphill positive). Arrays have the shape (n,) or (1,).
    """

    at_zero: FloatArray
    fall_per_mps: FloatArray
    cap: FloatArray
    slope: FloatArray

    @classmethod
    def of(
        cls,
        *,
        mu: FloatArray,
        f60: FloatArray,
        sp_kmh: FloatArray,
        max_mu: FloatArray,
        grade: FloatArray,
        brake_efficiency: FloatArray,
        max_deceleration_mps2: FloatArray,
        brake_share: FloatArray,
    ) -> Brake:
        """From arguments already checked: ``b = share·min(η·F·g·cosθ, a_max)``.

        With θ = atan(G): cosθ = 1/√(1+G²) and sinθ = G/√(1+G²), exactly.
        """
        at_zero, fall, cap = _as_falling(mu, f60, sp_kmh, max_mu)
        across = GRAVITY_MPS2 / np.sqrt(1.0 + grade * grade)
        scale = brake_efficiency * brake_share * across
        limits = [x for x in (scale * cap, max_deceleration_mps2 * brake_share) if not np.isinf(x).all()]
        lowest = np.asarray(np.minimum(*limits)) if len(limits) == 2 else (limits or [np.full(1, np.inf)])[0]
        return cls(at_zero=np.asarray(scale * at_zero), fall_per_mps=fall, cap=lowest, slope=np.asarray(grade * across))

    def at(self, speed_mps: FloatArray) -> FloatArray:
        """The brake's part b at a speed in m/s, without the slope."""
        if not self.fall_per_mps.max() > 0.0:
            return np.asarray(np.minimum(self.at_zero, self.cap))
        force = np.exp(-self.fall_per_mps * speed_mps)
        return np.asarray(np.minimum(self.at_zero * force, self.cap))

    def part(self, rows: Rows) -> Brake:
        """The same for some of the rows; a quantity that is one for all rows stays one."""
        return Brake(
            at_zero=some(self.at_zero, rows),
            fall_per_mps=some(self.fall_per_mps, rows),
            cap=some(self.cap, rows),
            slope=some(self.slope, rows),
        )


def some(value: FloatArray, rows: Rows) -> FloatArray:
    """`value` at `rows`; a single value for all rows stays as it is, so that it costs nothing."""
    return value if value.size == 1 else value[rows]
