"""Friction given as a table by speed: a smooth monotone curve through its points, and full braking under it.

The curve is the piecewise cubic of Fritsch and Carlson with Butland's slopes: it never overshoots, so between two
points it is never higher than the higher of them. Below the first speed the first value holds; beyond the last there is
none: nobody has measured it.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field
from functools import cache
from itertools import pairwise

import numpy as np
from numpy.polynomial.legendre import leggauss
from numpy.typing import ArrayLike

from chartgen.motion.limits import RANGES, BoolArray, FloatArray

_PANELS = 2
_POINTS = 16
"""Gauss-Legendre points in each of so many panels of a smooth piece."""
_HALVINGS = 60
_BEYOND = 1e-9
"""Relative: a speed this near the last one counts as on it, whatever unit it was converted from."""


@dataclass(frozen=True, slots=True, eq=False)
class FrictionTable:
    """Friction by speed.

    Formula: cubic Hermite pieces; slopes at inner points by Butland's weighted harmonic mean of the neighbouring
    secants, 0 where they differ in sign; at the ends a three-point formula that keeps the shape.

    Args:
        speeds_mps: m/s, two or more, rising, at least 0, at most 200.
        mu: friction at them, 0 < mu <= 1.5.

    Raises:
        ValueError: too few points, speeds out of order, a value out of its range.

    Source: F. N. Fritsch and J. Butland, A method for constructing local monotone piecewise cubic interpolants, SIAM
    Journal on Scientific and Statistical Computing 5(2), 1984.

    >>> table = FrictionTable(np.array([10.0, 20.0, 30.0]), np.array([0.6, 0.5, 0.45]))
    >>> table.at(np.array([5.0, 10.0, 20.0, 30.0])).tolist()
    [0.6, 0.6, 0.5, 0.45]
    >>> bool(np.isnan(table.at(31.0)))
    True
    """

    speeds_mps: FloatArray
    mu: FloatArray
    slopes: FloatArray = field(init=False)
    """dμ/dv at the points, per m/s."""

    def __post_init__(self) -> None:
        speeds, mu = (np.asarray(x, dtype=np.float64) for x in (self.speeds_mps, self.mu))
        if speeds.ndim != 1 or len(speeds) < 2 or speeds.shape != mu.shape:
            raise ValueError("speeds_mps, mu: two or more speeds are needed, with a friction for each")
        if not ((speeds >= 0.0) & (speeds <= 200.0)).all() or not (np.diff(speeds) > 0.0).all():
            raise ValueError("speeds_mps: they must rise, from at least 0 m/s to at most 200 m/s")
        if not RANGES["mu"].holds(mu).all():
            raise ValueError(f"mu: it must be {RANGES['mu']}")
        object.__setattr__(self, "speeds_mps", speeds)
        object.__setattr__(self, "mu", mu)
        object.__setattr__(self, "slopes", _slopes(speeds, mu))

    @property
    def last_mps(self) -> float:
        """The fastest speed of the table."""
        return float(self.speeds_mps[-1])

    def at(self, speed_mps: ArrayLike) -> FloatArray:
        """Friction at a speed in m/s, any shape; below the first speed its value, nan beyond the last."""
        speed = np.asarray(speed_mps, dtype=np.float64)
        first, last = self.speeds_mps[0], self.speeds_mps[-1]
        inside = np.clip(speed, first, last)
        value = self._inside(inside)
        return np.asarray(np.where(speed > last * (1.0 + _BEYOND), np.nan, value))

    def _inside(self, speed: FloatArray) -> FloatArray:
        left = np.clip(np.searchsorted(self.speeds_mps, speed, side="right") - 1, 0, len(self.mu) - 2)
        step = self.speeds_mps[left + 1] - self.speeds_mps[left]
        t = (speed - self.speeds_mps[left]) / step
        u = 1.0 - t
        ends = self.mu[left] * (1.0 + 2.0 * t) * u * u + self.mu[left + 1] * (1.0 + 2.0 * u) * t * t
        return np.asarray(ends + step * t * u * (self.slopes[left] * u - self.slopes[left + 1] * t))

    def times(self, factor: float) -> FrictionTable:
        """The whole curve times a factor, no value above what is accepted: beyond that the longer distance is taken."""
        return FrictionTable(self.speeds_mps, np.minimum(self.mu * factor, RANGES["mu"].high))


def _slopes(speeds: FloatArray, mu: FloatArray) -> FloatArray:
    width, secant = np.diff(speeds), np.diff(mu) / np.diff(speeds)
    if len(mu) == 2:
        return np.array([secant[0], secant[0]])
    before, after = secant[:-1], secant[1:]
    heavy, light = 2.0 * width[1:] + width[:-1], width[1:] + 2.0 * width[:-1]
    with np.errstate(divide="ignore", invalid="ignore"):
        mean = (heavy + light) / (heavy / before + light / after)
    inner = np.where(before * after > 0.0, mean, 0.0)
    first = _end_slope(width[0], width[1], secant[0], secant[1])
    last = _end_slope(width[-1], width[-2], secant[-1], secant[-2])
    return np.concatenate([[first], inner, [last]])


def _end_slope(near: float, far: float, secant: float, next_secant: float) -> float:
    slope = ((2.0 * near + far) * secant - near * next_secant) / (near + far)
    if np.sign(slope) != np.sign(secant):
        return 0.0
    if np.sign(secant) != np.sign(next_secant) and abs(slope) > 3.0 * abs(secant):
        return float(3.0 * secant)
    return float(slope)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class TableBrake:
    """The brake's part of the deceleration under one table, ``b(v) = min(scale·μ(v), cap)`` in m/s², row by row.

    `scale` is ``share·η·g·cosθ``, `cap` the vehicle's own limit times the share, `slope` ``g·sinθ``; shapes (n,).
    """

    table: FrictionTable
    scale: FloatArray
    cap: FloatArray
    slope: FloatArray

    def at(self, speed_mps: FloatArray) -> FloatArray:
        """b at a speed, without the slope; nan beyond the table."""
        return np.asarray(np.minimum(self.scale * self.table.at(speed_mps), self.cap))

    def least(self, low_mps: FloatArray, high_mps: FloatArray) -> FloatArray:
        """The least b over all speeds from one to the other: at an end or at a point of the table in between."""
        found = np.fmin(self.at(low_mps), self.at(high_mps))
        for speed in self.table.speeds_mps:
            between = (speed > low_mps) & (speed < high_mps)
            found = np.where(between, np.fmin(found, self.at(np.full(found.shape, speed))), found)
        return np.asarray(found)


def braking_distance_and_time(speed_mps: FloatArray, brake: TableBrake) -> tuple[FloatArray, FloatArray]:
    """Full braking from a speed to rest under a table of friction.

    Formula: ``∫ v dv/a(v)`` and ``∫ dv/a(v)`` from 0 to the speed, ``a = b + g·sinθ``; Gauss-Legendre, split at the
    table's points and where the vehicle's own limit takes over, closed form below the first point.

    Args:
        speed_mps: m/s, at least 0, not beyond the table; shape (n,).
        brake: the brake's part and the slope, shapes (n,).

    Returns:
        Metres and seconds, shape (n,). They mean something only where a(v) is positive over all speeds passed.

    Raises:
        Nothing.

    Source: equation of motion. Accuracy against a step-by-step integration: tests/motion/test_friction_table.py.

    >>> one = np.ones(1)
    >>> table = FrictionTable(np.array([10.0, 40.0]), np.array([0.5, 0.5]))
    >>> brake = TableBrake(table=table, scale=10.0 * one, cap=np.inf * one, slope=0.0 * one)
    >>> metres, seconds = braking_distance_and_time(20.0 * one, brake)
    >>> round(float(metres[0]), 9), round(float(seconds[0]), 9)
    (40.0, 4.0)
    """
    first = float(brake.table.speeds_mps[0])
    below = np.minimum(speed_mps, first)
    even = brake.at(np.zeros(len(speed_mps))) + brake.slope
    distance, time = below * below / (2.0 * even), below / even
    nodes, weights = _rule()
    for low, high in _pieces(speed_mps, brake):
        width = (high - low) / _PANELS
        for panel in range(_PANELS):
            start = low + panel * width
            at = start[:, None] + 0.5 * width[:, None] * (nodes + 1.0)
            slowing = np.minimum(brake.scale[:, None] * brake.table.at(at), brake.cap[:, None]) + brake.slope[:, None]
            share = 0.5 * width[:, None] * weights / slowing
            time = time + share.sum(axis=1)
            distance = distance + (share * at).sum(axis=1)
    return distance, time


@cache
def _rule() -> tuple[FloatArray, FloatArray]:
    nodes, weights = leggauss(_POINTS)
    return nodes, weights


def _pieces(speed: FloatArray, brake: TableBrake) -> Iterator[tuple[FloatArray, FloatArray]]:
    """Smooth pieces of each row's way down from its speed: between points of the table, cut where the limit governs."""
    knots = brake.table.speeds_mps
    for left, right in pairwise(knots):
        low, high = np.minimum(speed, left), np.minimum(speed, right)
        if (high > low).any():
            cut = _where_limit_governs(low, high, brake)
            yield low, cut
            yield cut, high


def _where_limit_governs(low: FloatArray, high: FloatArray, brake: TableBrake) -> FloatArray:
    """The speed between two points at which friction and limit change places; the upper one where they do not."""

    def above(speed: FloatArray) -> BoolArray:
        return np.asarray(brake.scale * brake.table.at(speed) > brake.cap)

    at_low, at_high = above(low), above(high)
    crosses = (at_low != at_high) & np.isfinite(brake.cap)
    if not crosses.any():
        return high
    bottom, top = low.copy(), high.copy()
    for _ in range(_HALVINGS):
        middle = 0.5 * (bottom + top)
        same = above(middle) == at_low
        bottom, top = np.where(same, middle, bottom), np.where(same, top, middle)
    return np.where(crosses, bottom, high)
