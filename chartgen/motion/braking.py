"""Full braking: from its first speed down to rest, under constant friction or friction that falls with speed.

Constant deceleration has a closed form. Where friction falls with speed, the distance is an integral over the speed,
worked out by Gauss-Legendre quadrature in one piece; below the speed at which the cap or the vehicle's own limit
takes over, the deceleration is constant and the closed form serves again.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

import numpy as np
from numpy.polynomial.legendre import leggauss

from chartgen.motion.friction import Brake, some
from chartgen.motion.limits import FloatArray

EASY_POINTS = 16
HARD_POINTS = 32
EASY_DECELERATION_MPS2 = 0.5
"""Chosen by us: from this least deceleration on, 16 points are enough; below it the integrand is steep and 32 are
used."""


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
    """Full braking under friction that falls with speed: closed form below the knot, quadrature above it."""
    slowing = brake.at(speed) + brake.slope
    knot = _knot(speed, brake)
    hard = (slowing < EASY_DECELERATION_MPS2) | (slowing < -brake.slope)
    if hard.all():
        distance, time = _hard(speed, knot, brake)
    else:
        distance, time = _quadrature(speed, knot, brake, EASY_POINTS)
        if hard.any():
            hard = np.broadcast_to(hard, distance.shape)
            distance[hard], time[hard] = _hard(some(speed, hard), some(knot, hard), brake.part(hard))
    if knot.any():
        even = brake.cap + brake.slope
        distance = distance + knot * knot / (2.0 * even)
        time = time + knot / even
    return Braking(distance_m=distance, time_s=time, deceleration_mps2=slowing)


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
    bottom = brake.at_zero * np.exp(-brake.fall_per_mps * knot) if knot.any() else brake.at_zero
    slope = brake.slope if brake.slope.any() else None
    shape = np.broadcast_shapes(fall.shape, bottom.shape, brake.slope.shape)
    low, high, work = np.empty(shape), np.empty(shape), np.empty(shape)
    sums, tilts = np.zeros(shape), np.zeros(shape)
    whole = np.exp(fall)
    for x, weight in _half_rule(points):
        np.exp(np.multiply(fall, x, out=low), out=low)
        np.divide(whole, low, out=high)
        if slope is not None:
            for growth in (low, high):
                np.multiply(slope, growth, out=work)
                np.add(work, bottom, out=work)
                np.divide(growth, work, out=growth)
        np.subtract(high, low, out=work)
        np.add(high, low, out=low)
        low *= weight
        sums += low
        work *= weight * (0.5 - x)
        tilts += work
    if slope is None:
        sums /= bottom
        tilts /= bottom
    tilts += 0.5 * sums
    sums *= length
    tilts *= length * length
    if knot.any():
        tilts += knot * sums
    return tilts, sums


def _hard(speed: FloatArray, knot: FloatArray, brake: Brake) -> tuple[FloatArray, FloatArray]:
    """Rows whose least deceleration is small: 32 points; on a downgrade in the logarithm of the deceleration.

    There ``1/a(u)`` has a pole just above the top speed. With ``z = ln a`` the integrals become
    ``∫ u(z)/(e^z + |s|) dz / k`` and ``∫ 1/(e^z + |s|) dz / k``, whose nearest singularity is π away.
    """
    shape = np.broadcast_shapes(speed.shape, knot.shape, brake.slope.shape, brake.at_zero.shape)
    down = np.broadcast_to(brake.slope < 0.0, shape)
    if down.all():
        return _in_log_deceleration(speed, knot, brake)
    distance, time = _quadrature(speed, knot, brake, HARD_POINTS)
    if down.any():
        rows = np.array(down)
        distance, time = (np.array(np.broadcast_to(x, shape)) for x in (distance, time))
        distance[rows], time[rows] = _in_log_deceleration(some(speed, rows), some(knot, rows), brake.part(rows))
    return distance, time


def _in_log_deceleration(speed: FloatArray, knot: FloatArray, brake: Brake) -> tuple[FloatArray, FloatArray]:
    """The downgrade's integrals in z = ln a, between the knot and `speed`."""
    down = -brake.slope
    lowest = brake.at_zero * np.exp(-brake.fall_per_mps * speed) - down
    bottom = np.log(lowest)
    span = np.log(brake.at_zero * np.exp(-brake.fall_per_mps * knot) - down) - bottom
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
