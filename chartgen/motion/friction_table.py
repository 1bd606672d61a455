"""Friction given as a table by speed: a smooth monotone curve through its points, and full braking under it.

The curve is the piecewise cubic of Fritsch and Carlson with Butland's slopes: it never overshoots, so between two
points it is never higher than the higher of them. Below the first speed the first value holds; beyond the last there is
none: nobody has measured it.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import cache

import numpy as np
from numpy.polynomial.legendre import leggauss
from numpy.typing import ArrayLike, NDArray

from chartgen.motion.limits import RANGES, BoolArray, FloatArray

_POINTS = 16
_REACH = 1.6
_SHARE = 0.9
"""A panel is short enough where a cubic deceleration changes by at most 0.9 of its middle value within 1.6 half-panels
of the middle, in the complex plane too. Then 1/a has no pole in the ellipse of 2.84 and is at most 10 times its middle
value there, so that 16 points leave out less than 2e-13; where it is not, the panel is halved."""
_DEEPEST = 40
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

    def part(self, rows: NDArray[np.intp]) -> TableBrake:
        """The same for some of the rows."""
        return TableBrake(table=self.table, scale=self.scale[rows], cap=self.cap[rows], slope=self.slope[rows])

    def least(self, low_mps: FloatArray, high_mps: FloatArray) -> FloatArray:
        """The least b over all speeds from one to the other: at an end or at a point of the table in between."""
        found = np.fmin(self.at(low_mps), self.at(high_mps))
        for speed, mu in zip(self.table.speeds_mps, self.table.mu, strict=True):
            between = (speed > low_mps) & (speed < high_mps)
            found = np.where(between, np.fmin(found, np.minimum(self.scale * mu, self.cap)), found)
        return np.asarray(found)


def braking_distance_and_time(speed_mps: FloatArray, brake: TableBrake) -> tuple[FloatArray, FloatArray]:
    """Full braking from a speed to rest under a table of friction.

    Formula: ``∫ v dv/a(v)`` and ``∫ dv/a(v)`` from 0 to the speed, ``a = b + g·sinθ``; Gauss-Legendre, split at the
    table's points, where the vehicle's own limit takes over, and finer where a is small; closed form below the first
    point and under the limit.

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
    for index in range(len(brake.table.mu) - 1):
        rows = np.flatnonzero(speed_mps > brake.table.speeds_mps[index])
        if rows.size:
            metres, seconds = _piece(speed_mps[rows], brake.part(rows), index)
            distance[rows] += metres
            time[rows] += seconds
    return distance, time


def _piece(speed: FloatArray, brake: TableBrake, index: int) -> tuple[FloatArray, FloatArray]:
    """Distance and time from `speed`, or from the upper point of a piece of the curve, down to its lower point."""
    left, right = brake.table.speeds_mps[index : index + 2]
    curve = _Cubic.of(brake.table, index)
    low, high = np.full(speed.shape, left), np.minimum(speed, right)
    over_low, over_high = (brake.scale * curve.at(v - left) > brake.cap for v in (low, high))
    cut = np.where(over_low, high, low)
    crosses = np.flatnonzero(over_low != over_high)
    if crosses.size:
        cut[crosses] = _where_limit_governs(high[crosses], brake.part(crosses), curve, left, over_low[crosses])
    # The limit governs up to the cut and friction above it, or the other way round where friction rises with speed.
    rises = over_high & ~over_low
    flat_low, flat_high = np.where(rises, cut, low), np.where(rises, high, cut)
    length = flat_high - flat_low
    time = np.where(length > 0.0, length / np.where(length > 0.0, brake.cap + brake.slope, 1.0), 0.0)
    metres, seconds = _panels(np.where(rises, low, cut), np.where(rises, cut, high), brake, curve, left)
    return metres + 0.5 * (flat_high + flat_low) * time, seconds + time


def _where_limit_governs(
    high: FloatArray, brake: TableBrake, curve: _Cubic, left: float, over_low: BoolArray
) -> FloatArray:
    """The speed above `left` at which friction and limit change places, by halving; it is known that they do."""
    bottom, top = np.full(high.shape, left), high.copy()
    for _ in range(_HALVINGS):
        middle = 0.5 * (bottom + top)
        same = (brake.scale * curve.at(middle - left) > brake.cap) == over_low
        bottom, top = np.where(same, middle, bottom), np.where(same, top, middle)
    return bottom


def _panels(
    low: FloatArray, high: FloatArray, brake: TableBrake, curve: _Cubic, left: float
) -> tuple[FloatArray, FloatArray]:
    """Distance and time between two speeds of each row under the curve alone, in panels as short as they need to be."""
    distance, time = np.zeros(low.shape), np.zeros(low.shape)
    row = np.flatnonzero(high > low)
    low, high = low[row], high[row]
    for depth in range(_DEEPEST + 1):
        middle, half = 0.5 * (low + high), 0.5 * (high - low)
        a = curve.around(middle - left, half, scale=brake.scale[row], slope=brake.slope[row])
        change = _REACH * (np.abs(a[1]) + _REACH * (np.abs(a[2]) + _REACH * np.abs(a[3])))
        fine = (change <= _SHARE * a[0]) | (depth == _DEEPEST)
        done, coarse = np.flatnonzero(fine), np.flatnonzero(~fine)
        metres, seconds = _gauss(middle[done], half[done], tuple(x[done] for x in a))
        distance += np.bincount(row[done], weights=metres, minlength=distance.size)
        time += np.bincount(row[done], weights=seconds, minlength=time.size)
        if not coarse.size:
            break
        row = np.concatenate([row[coarse], row[coarse]])
        low, high = np.concatenate([low[coarse], middle[coarse]]), np.concatenate([middle[coarse], high[coarse]])
    return distance, time


def _gauss(middle: FloatArray, half: FloatArray, a: tuple[FloatArray, ...]) -> tuple[FloatArray, FloatArray]:
    """Distance and time over a panel with ``a₀ + a₁x + a₂x² + a₃x³``, x from -1 to 1; its points in pairs ±x."""
    sums, tilts = np.zeros(middle.shape), np.zeros(middle.shape)
    for x, weight in _pairs():
        even, odd = a[0] + a[2] * (x * x), x * (a[1] + a[3] * (x * x))
        share = 2.0 * weight / ((even - odd) * (even + odd))
        sums += share * even
        tilts -= share * odd * x
    return half * (middle * sums + half * tilts), half * sums


@cache
def _pairs() -> tuple[tuple[float, float], ...]:
    """The positive nodes on -1..1 with their weights."""
    nodes, weights = leggauss(_POINTS)
    return tuple((float(x), float(w)) for x, w in zip(nodes, weights, strict=True) if x > 0.0)


@dataclass(frozen=True, slots=True)
class _Cubic:
    """One piece of a curve, ``c₀ + c₁u + c₂u² + c₃u³`` with u the speed above its lower point."""

    c0: float
    c1: float
    c2: float
    c3: float

    @classmethod
    def of(cls, table: FrictionTable, index: int) -> _Cubic:
        step = table.speeds_mps[index + 1] - table.speeds_mps[index]
        secant = (table.mu[index + 1] - table.mu[index]) / step
        first, last = table.slopes[index : index + 2]
        return cls(
            float(table.mu[index]), float(first), float((3.0 * secant - 2.0 * first - last) / step),
            float((first + last - 2.0 * secant) / (step * step)),
        )  # fmt: skip

    def at(self, u: FloatArray) -> FloatArray:
        return ((self.c3 * u + self.c2) * u + self.c1) * u + self.c0

    def around(
        self, u: FloatArray, half: FloatArray, *, scale: FloatArray, slope: FloatArray
    ) -> tuple[FloatArray, FloatArray, FloatArray, FloatArray]:
        """The coefficients of ``scale·μ + slope`` in x, where the speed is ``u + half·x``."""
        first = (3.0 * self.c3 * u + 2.0 * self.c2) * u + self.c1
        second = 3.0 * self.c3 * u + self.c2
        part = scale * half
        return scale * self.at(u) + slope, part * first, part * half * second, part * half * half * self.c3
