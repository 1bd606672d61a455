"""Friction between tyre and road, and the brake force it allows.

`friction_at` answers for a table or a page; `Brake` is the form the phases of a stop work with.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from chartgen.motion.limits import GRAVITY_MPS2, KMH_PER_MPS, BoolArray, FloatArray, checked

_REFERENCE_KMH = 60.0


def friction_at(
    speed_mps: ArrayLike,
    *,
    mu: ArrayLike = np.nan,
    f60: ArrayLike = np.nan,
    sp_kmh: ArrayLike = np.nan,
    max_mu: ArrayLike = np.inf,
) -> FloatArray:
    """Friction at a speed: constant, or falling with speed.

    Formula: ``mu``, or ``min(f60 * exp((60 - S) / sp_kmh), max_mu)`` with S the speed in km/h (locked wheel: the slip
    speed is the vehicle's).

    Args:
        speed_mps: m/s, 0 to 200; any shape that broadcasts with the others.
        mu: constant friction, 0 < mu <= 1.5, or nan where friction falls with speed.
        f60: friction at 60 km/h, 0 < f60 <= 1.5, or nan where friction is constant.
        sp_kmh: speed constant in km/h, 10 to 10,000; given together with `f60`.
        max_mu: optional cap on the friction that falls with speed, more than 0.

    Returns:
        Friction, without unit, in the broadcast shape; nan where no friction is given at all.

    Raises:
        ValueError: an argument is out of its range; both or half of the two forms are given for one element; a cap
            without the falling form.

    Source: ASTM E1960 (International Friction Index) and PIARC's experiment of 1992, equation for F(S).

    >>> round(float(friction_at(60 / 3.6, f60=0.35, sp_kmh=110.0)), 6)
    0.35
    >>> friction_at([10.0, 30.0], mu=0.7).tolist()
    [0.7, 0.7]
    """
    speed = np.asarray(speed_mps, dtype=np.float64)
    if not ((speed >= 0.0) & (speed <= 200.0)).all():
        raise ValueError("speed_mps: it must be at least 0 m/s and at most 200 m/s")
    law = FrictionLaw.checked(mu=mu, f60=f60, sp_kmh=sp_kmh, max_mu=max_mu)
    falling = law.at_zero * np.exp(-law.fall_per_mps * speed)
    value = np.asarray(np.minimum(falling, law.cap))
    return np.where(np.isinf(value), np.nan, value)


@dataclass(frozen=True, slots=True, kw_only=True)
class FrictionLaw:
    """Either form of friction as ``min(at_zero * exp(-fall_per_mps * v), cap)``, v in m/s.

    A constant is a fall of 0; where no friction is given `at_zero` is infinite and a vehicle's own limit has to govern.
    """

    at_zero: FloatArray
    fall_per_mps: FloatArray
    cap: FloatArray
    given: BoolArray

    @classmethod
    def checked(cls, *, mu: ArrayLike, f60: ArrayLike, sp_kmh: ArrayLike, max_mu: ArrayLike) -> FrictionLaw:
        """The law from the arguments of `friction_at`; raises ValueError as said there."""
        constant = checked("mu", mu, absent=True)
        at_60 = checked("f60", f60, absent=True)
        speed_constant = checked("sp_kmh", sp_kmh, absent=True)
        cap = checked("max_mu", max_mu)
        has_mu, has_f60, has_sp = ~np.isnan(constant), ~np.isnan(at_60), ~np.isnan(speed_constant)
        if (has_f60 != has_sp).any():
            raise ValueError("f60, sp_kmh: friction that falls with speed needs both of them")
        if (has_mu & has_f60).any():
            raise ValueError("mu, f60: friction is either constant or falls with speed, not both")
        if (np.isfinite(cap) & ~has_f60).any():
            raise ValueError("max_mu: a cap belongs to friction that falls with speed (f60, sp_kmh)")
        fall = np.asarray(KMH_PER_MPS / speed_constant)
        at_zero = np.asarray(at_60 * np.exp(_REFERENCE_KMH / speed_constant))
        if not has_f60.all():
            fall = np.where(has_f60, fall, 0.0)
            at_zero = np.where(has_f60, at_zero, np.where(has_mu, constant, np.inf))
        return cls(at_zero=at_zero, fall_per_mps=fall, cap=cap, given=np.asarray(has_mu | has_f60))


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

    def at(self, speed_mps: FloatArray) -> FloatArray:
        """The brake's part b at a speed in m/s, without the slope."""
        if not self.fall_per_mps.any():
            return np.asarray(np.minimum(self.at_zero, self.cap))
        falling = np.exp(-self.fall_per_mps * speed_mps)
        falling *= self.at_zero
        return np.asarray(np.minimum(falling, self.cap))

    def part(self, rows: slice | BoolArray) -> Brake:
        """The same for some of the rows; a quantity that is one for all rows stays one."""
        return Brake(
            at_zero=some(self.at_zero, rows),
            fall_per_mps=some(self.fall_per_mps, rows),
            cap=some(self.cap, rows),
            slope=some(self.slope, rows),
        )


def some(value: FloatArray, rows: slice | BoolArray) -> FloatArray:
    """`value` at `rows`; a single value for all rows stays as it is, so that it costs nothing."""
    return value if value.size == 1 else value[rows]


def brake_force(
    law: FrictionLaw, *, grade: FloatArray, brake_efficiency: FloatArray, max_deceleration_mps2: FloatArray
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """`at_zero`, `cap` and `slope` of a `Brake`, in m/s², from arguments already checked.

    ``b = min(η·F·g·cosθ, a_max)``; with θ = atan(G), cosθ = 1/√(1+G²) and sinθ = G/√(1+G²), exactly.
    """
    run = 1.0 / np.sqrt(1.0 + grade * grade)
    scale = brake_efficiency * (GRAVITY_MPS2 * run)
    at_zero = np.asarray(scale * law.at_zero)
    cap = np.asarray(np.minimum(scale * law.cap, max_deceleration_mps2))
    return at_zero, cap, np.asarray(GRAVITY_MPS2 * grade * run)
