"""Full braking: from its first speed down to rest, under constant friction or friction that falls with speed.

Constant deceleration has a closed form, and so has friction that falls with speed on the level. On a grade the
distance is an integral over the speed, worked out by Gauss-Legendre quadrature in one piece; below the speed at which
the cap or the vehicle's own limit takes over, the deceleration is constant and the closed form serves again.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from math import factorial

import numpy as np
from numpy.polynomial.legendre import leggauss

from chartgen.motion.friction import Brake, some
from chartgen.motion.limits import FloatArray

EASY_POINTS = 16
HARD_POINTS = 32
EASY_DECELERATION_MPS2 = 0.5
"""Chosen by us: from this least deceleration on, 16 points are enough; below it the integrand is steep and 32 are
used."""

EASY_FALL = 5.0
"""Chosen by us: friction that falls by more than e^5 over the stop is steep as well."""

_SMALL = 0.1
_TERMS = 10
"""Below `_SMALL` ten terms of the series leave out less than 1e-17."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Braking:
    """Full braking to rest: distance, time, and the deceleration at its start, slope included."""

    distance_m: FloatArray
    time_s: FloatArray
    deceleration_mps2: FloatArray


def full_braking(speed_mps: FloatArray, brake: Brake) -> Braking:
    """Full braking from `speed_mps` to rest.

    Formula: ``∫ v dv / a(v)`` and ``∫ dv / a(v)`` from 0 to the speed, with ``a(v) = b(v) + g·sinθ`` (see `Brake`);
    for a constant deceleration ``v²/(2a)`` and ``v/a``.

    Args:
        speed_mps: m/s, at least 0; shape (n,) or (1,).
        brake: the brake's part and the slope, shapes (n,) or (1,).

    Returns:
        Distance, time and first deceleration. Distance and time mean something only where a(v) is positive over all
        speeds passed; the caller blanks the others.

    Raises:
        Nothing.

    Source: equation of motion. Accuracy against adaptive quadrature: tests/motion/test_braking.py.

    >>> import numpy as np
    >>> one = np.ones(1)
    >>> brake = Brake(at_zero=5 * one, fall_per_mps=0 * one, cap=np.inf * one, slope=0 * one)
    >>> out = full_braking(20 * one, brake)
    >>> out.distance_m.tolist(), out.time_s.tolist()
    ([40.0], [4.0])
    """
    falls = brake.fall_per_mps > 0.0
    if falls.all():
        return _falling(speed_mps, brake)
    slowing = np.minimum(brake.at_zero, brake.cap) + brake.slope
    distance = speed_mps * speed_mps / (2.0 * slowing)
    time = speed_mps / slowing
    if falls.any():
        distance, time, slowing, falls = (np.array(x) for x in np.broadcast_arrays(distance, time, slowing, falls))
        part = _falling(some(speed_mps, falls), brake.part(falls))
        distance[falls], time[falls], slowing[falls] = part.distance_m, part.time_s, part.deceleration_mps2
    return Braking(distance_m=distance, time_s=time, deceleration_mps2=slowing)


def _falling(speed: FloatArray, brake: Brake) -> Braking:
    """Full braking under friction that falls with speed: quadrature above the knot, closed form below it."""
    slowing = brake.at(speed) + brake.slope
    knot = _knot(speed, brake)
    distance, time = _above_knot(speed, knot, brake, slowing)
    if knot.any():
        even = brake.cap + brake.slope
        distance = distance + knot * knot / (2.0 * even)
        time = time + knot / even
    return Braking(distance_m=distance, time_s=time, deceleration_mps2=slowing)


def _above_knot(
    speed: FloatArray, knot: FloatArray, brake: Brake, slowing: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Distance and time between `speed` and the knot, each row by the way that suits it, whatever its neighbours."""
    slope = brake.slope
    level = slope == 0.0
    long_fall = brake.fall_per_mps * speed > EASY_FALL
    hard = ~level & ((slowing < EASY_DECELERATION_MPS2) | (slowing < -slope) | long_fall)
    steep = hard & (slope < 0.0)
    ways = ((level, _level), (~level & ~hard, _easy), (hard & ~steep, _hard), (steep, _in_log_deceleration))
    for rows, way in ways:
        if rows.all():
            return way(speed, knot, brake)
    shape = np.broadcast_shapes(speed.shape, knot.shape, slope.shape, slowing.shape)
    distance, time = np.empty(shape), np.empty(shape)
    for some_rows, way in ways:
        rows = np.broadcast_to(some_rows, shape)
        if rows.any():
            distance[rows], time[rows] = way(some(speed, rows), some(knot, rows), brake.part(rows))
    return distance, time


def _level(speed: FloatArray, knot: FloatArray, brake: Brake) -> tuple[FloatArray, FloatArray]:
    """On the level the integrals have a closed form.

    With L the speed above the knot, ``x = k·L`` and B the brake's part at the knot: time ``L/B·(e^x - 1)/x``, distance
    ``L/B·(knot·(e^x - 1)/x + L·((x - 1)·e^x + 1)/x²)``; for a small x the two factors are taken from their series, as
    the closed forms would lose digits.
    """
    length = speed - knot
    x = brake.fall_per_mps * length
    per_force = length / _at_knot(knot, brake)
    growth = np.exp(x)
    first = (growth - 1.0) / x
    second = (growth - first) / x
    small = x < _SMALL
    if small.any():
        first[small], second[small] = _series(x[small])
    return per_force * (knot * first + length * second), per_force * first


def _series(x: FloatArray) -> tuple[FloatArray, FloatArray]:
    """``(e^x - 1)/x = Σ x^n/(n + 1)!`` and ``((x - 1)·e^x + 1)/x² = Σ x^n/(n!·(n + 2))``, for x below `_SMALL`."""
    first, second = np.zeros(x.shape), np.zeros(x.shape)
    for n in range(_TERMS - 1, -1, -1):
        first = first * x + 1.0 / factorial(n + 1)
        second = second * x + 1.0 / (factorial(n) * (n + 2))
    return first, second


def _easy(speed: FloatArray, knot: FloatArray, brake: Brake) -> tuple[FloatArray, FloatArray]:
    """Rows on a grade that slow well: 16 points."""
    return _quadrature(speed, knot, brake, EASY_POINTS)


def _hard(speed: FloatArray, knot: FloatArray, brake: Brake) -> tuple[FloatArray, FloatArray]:
    """Rows uphill whose least deceleration is small: 32 points."""
    return _quadrature(speed, knot, brake, HARD_POINTS)


def _at_knot(knot: FloatArray, brake: Brake) -> FloatArray:
    """The brake's part at the knot."""
    return brake.at_zero * np.exp(-brake.fall_per_mps * knot) if knot.any() else brake.at_zero


def _knot(speed: FloatArray, brake: Brake) -> FloatArray:
    """The speed below which the cap or the vehicle's limit governs: between 0 and `speed`."""
    if np.isinf(brake.cap).all():
        return np.zeros(1)
    return np.asarray(np.clip(np.log(brake.at_zero / brake.cap) / brake.fall_per_mps, 0.0, speed))


def _quadrature(speed: FloatArray, knot: FloatArray, brake: Brake, points: int) -> tuple[FloatArray, FloatArray]:
    """Gauss-Legendre in the speed, between the knot and `speed`: distance and time.

    With u = knot + L·x: ``1/a = P/(B + s·P)``, where ``P = exp(k·L·x)`` and B is the brake's part at the knot. The
    nodes lie in pairs x and 1 - x, so the second P of a pair is ``exp(k·L)/P``: half the exponentials, which are what
    costs time here. The pair's moments are ``x·p + (1-x)·q = (p+q)/2 + (1/2-x)·(q-p)``.
    """
    length = speed - knot
    fall = brake.fall_per_mps * length
    bottom = _at_knot(knot, brake)
    shape = np.broadcast_shapes(fall.shape, bottom.shape, brake.slope.shape)
    low, high, work = np.empty(shape), np.empty(shape), np.empty(shape)
    sums, tilts = np.zeros(shape), np.zeros(shape)
    whole = np.exp(fall)
    for x, weight in _half_rule(points):
        np.exp(np.multiply(fall, x, out=low), out=low)
        np.divide(whole, low, out=high)
        for growth in (low, high):
            np.multiply(brake.slope, growth, out=work)
            work += bottom
            growth /= work  # noqa: PLW2901  # in place on purpose: the buffers are reused
        np.subtract(high, low, out=work)
        low += high
        low *= weight
        sums += low
        work *= weight * (0.5 - x)
        tilts += work
    tilts += 0.5 * sums
    sums *= length
    tilts *= length * length
    return tilts + knot * sums, sums


def _in_log_deceleration(speed: FloatArray, knot: FloatArray, brake: Brake) -> tuple[FloatArray, FloatArray]:
    """Rows on a downgrade whose least deceleration is small: 32 points in the logarithm of the deceleration.

    There ``1/a(u)`` has a pole just above the top speed. With ``z = ln a`` the integrals become
    ``∫ u(z)/(e^z + |s|) dz / k`` and ``∫ 1/(e^z + |s|) dz / k``, whose nearest singularity is π away.
    """
    down = -brake.slope
    lowest = brake.at_zero * np.exp(-brake.fall_per_mps * speed) - down
    bottom = np.log(lowest)
    span = np.log(_at_knot(knot, brake) - down) - bottom
    sums, moments = np.zeros(span.shape), np.zeros(span.shape)
    for x, weight in zip(*_rule(HARD_POINTS), strict=True):
        part = np.exp(bottom + span * x) + down
        share = weight / part
        sums += share
        moments += share * np.log(brake.at_zero / part)
    scale = span / brake.fall_per_mps
    return moments * scale / brake.fall_per_mps, sums * scale


@cache
def _rule(points: int) -> tuple[FloatArray, FloatArray]:
    """Nodes and weights on 0..1."""
    nodes, weights = leggauss(points)
    return 0.5 * (nodes + 1.0), 0.5 * weights


@cache
def _half_rule(points: int) -> tuple[tuple[float, float], ...]:
    """The nodes below 1/2 with their weights; the others mirror them."""
    nodes, weights = _rule(points)
    half = points // 2
    return tuple((float(x), float(w)) for x, w in zip(nodes[:half], weights[:half], strict=True))
