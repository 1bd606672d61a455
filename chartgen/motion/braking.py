"""Full braking: from its first speed down to rest, under constant friction or friction that falls with speed.

Constant deceleration has a closed form, and so has the time under friction that falls with speed. Its distance is a
dilogarithm on a grade, an elementary function on the level; below the speed at which the cap or the vehicle's own limit
takes over, the deceleration is constant and the closed form serves again. Where the formulas would lose digits,
Gauss-Legendre quadrature of a variable without a near pole takes their place, row by row.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from math import ceil, factorial

import numpy as np
from numpy.polynomial import chebyshev
from numpy.polynomial.legendre import leggauss

from chartgen.motion.friction import Brake, some
from chartgen.motion.limits import BoolArray, FloatArray, Rows

_LEVEL_MPS2 = 1e-20
"""Below this the slope changes no digit of a deceleration that counts as one; products with it stay in range."""

_SHORT = 0.05
"""Chosen by us: below this exponent of the fall the closed forms lose digits, at most the factor 2/0.05 down to it."""

_SHORT_POINTS = 8
"""Enough for a fall of less than `_SHORT` where t is within `_FAR`: the pole is then 11 half-intervals away or more,
and the rule leaves out less than 20^-16."""

_FAR = 1.5
_DEGREE = 7
"""Of the polynomial in t² for t from -1.5 to 1.5: as the function's poles are at 2π·i, it leaves out no more than
6e-15."""

_PANEL = 4.0
_PANEL_POINTS = 16
"""Uphill: the poles are at least π beside the way, so 16 points for an exponent of 4 leave out less than 3^-32."""

_STEEP_POINTS = 32

_TERMS = 7
"""Below `_SHORT` the series leaves out less than 2e-16 after its seventh power."""


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


@dataclass(frozen=True, slots=True, kw_only=True)
class _Fall:
    """The way down from a speed to the knot, the speed below which the deceleration is constant (0 without one).

    With k the fall per m/s: ``exponent = k·(speed - knot)``, `growth` is e^exponent - 1, `force` the brake's part at
    the knot, `slope` as in `Brake`.
    """

    fall: FloatArray
    exponent: FloatArray
    growth: FloatArray
    force: FloatArray
    slope: FloatArray

    def part(self, rows: Rows) -> _Fall:
        """The same for some of the rows."""
        return _Fall(
            fall=some(self.fall, rows),
            exponent=some(self.exponent, rows),
            growth=some(self.growth, rows),
            force=some(self.force, rows),
            slope=some(self.slope, rows),
        )


Pair = tuple[FloatArray, FloatArray]
"""Distance beyond what the knot's speed alone would make of the time, ``∫ (v - knot) dv/a``, and time ``∫ dv/a``."""


def _falling(speed: FloatArray, brake: Brake) -> Braking:
    """Full braking under friction that falls with speed: above the knot, and with the closed form below it."""
    exponent, force, knot = brake.fall_per_mps * speed, brake.at_zero, None
    if not np.isinf(brake.cap).all():
        flat = np.minimum(np.maximum(np.log(brake.at_zero / brake.cap), 0.0), exponent)
        exponent, force, knot = exponent - flat, np.minimum(brake.at_zero, brake.cap), flat / brake.fall_per_mps
    growth = np.expm1(exponent)
    way = _Fall(fall=brake.fall_per_mps, exponent=exponent, growth=growth, force=force, slope=brake.slope)
    slowing = force / (1.0 + growth) + brake.slope
    distance, time = _above_knot(way)
    if knot is not None:
        after = knot / (force + brake.slope)
        distance = distance + knot * (time + 0.5 * after)
        time = time + after
    return Braking(distance_m=distance, time_s=time, deceleration_mps2=slowing)


def _above_knot(way: _Fall) -> Pair:
    """Each row by the form that suits it, whatever its neighbours."""
    level = np.abs(way.slope) < _LEVEL_MPS2
    if level.all():
        return _level(way)
    distance, time, fits = _grade(way)
    fits |= level
    others = np.flatnonzero(~fits)
    if others.size:
        distance[others], time[others] = _by_quadrature(way.part(others), others.size)
    levels = np.flatnonzero(level)
    if levels.size:
        distance[levels], time[levels] = _level(way.part(levels))
    return distance, time


def _level(way: _Fall) -> Pair:
    """On the level, with B the force: time ``(e^x - 1)/(k·B)``, distance ``(x·e^x - (e^x - 1))/(k²·B)``.

    For a small x the distance is taken from its series ``x²·Σ x^n/(n!·(n + 2))``: the difference would lose digits.
    """
    x, growth = way.exponent, way.growth
    time = growth / (way.fall * way.force)
    part = x * (1.0 + growth) - growth
    small = np.broadcast_to(x < _SHORT, part.shape)
    if small.any():
        y = some(x, small)
        series = np.zeros(y.shape)
        for n in range(_TERMS, -1, -1):
            series = series * y + 1.0 / (factorial(n) * (n + 2))
        part[small] = y * y * series
    return part / (way.fall * way.fall * way.force), time


def _grade(way: _Fall) -> tuple[FloatArray, FloatArray, BoolArray]:
    """On a grade, by the logarithm ``t = ln(a/b)`` of the whole deceleration over the brake's part; and where it fits.

    From t₁ at the knot to t₂ at the speed: time ``(t₂ - t₁)/(k·s)`` with s the slope. By parts, and as
    ``k·dv = dt/(1 - e^-t)``, the distance is ``(x·t₂ - ∫ t/(1 - e^-t) dt)/(k²·s)``. It fits where t is within `_FAR`
    and x is not so small that the difference loses digits; t₂ - t₁ is worked out as one logarithm for the same reason.
    """
    bottom = np.log1p(way.slope / way.force)
    span = np.log1p(way.slope * way.growth / (way.force + way.slope))
    top = bottom + span
    per_slope = 1.0 / (way.fall * way.slope)
    distance = (way.exponent * top - span * _mean(bottom, top)) * (per_slope / way.fall)
    time = span * per_slope
    fits = np.asarray(np.abs(top) <= _FAR)
    if way.exponent.min() < _SHORT:
        fits = fits & ((way.exponent >= _SHORT) | (way.exponent == 0.0))
    return distance, time, fits


def _mean(t: FloatArray, u: FloatArray) -> FloatArray:
    """The mean of ``ψ(t) = t/(1 - e^-t)`` from t to u, both within `_FAR`.

    ``ψ = t/2 + p(t²)`` with an even part that is near a polynomial p; the mean of t^2m is h/(2m + 1), where h is the
    sum of all products of 2m factors t or u, and h for m + 1 is ``(t² + u²)·h_m - t²u²·h_(m-1)``: Clenshaw's sum.
    """
    product = t * u
    squares = t * t + u * u
    fourth = product * product
    *rest, before, last = _even_part()
    older, newer = np.full(squares.shape, last), squares * last
    newer += before
    work = np.empty(squares.shape)
    for share in rest[:0:-1]:
        np.multiply(squares, newer, out=work)
        older *= fourth
        work -= older
        work += share
        older, newer, work = newer, work, older
    squares += product
    squares *= newer
    older *= fourth
    squares -= older
    product = t + u
    product *= 0.25
    squares += product
    squares += rest[0]
    return squares


@cache
def _even_part() -> tuple[float, ...]:
    """The coefficients of ``(t/2)·coth(t/2)`` in t², each divided by 2m + 1, from 0 to `_FAR`."""
    width = _FAR * _FAR

    def even(x: FloatArray) -> FloatArray:
        half = 0.5 * np.sqrt(0.5 * width * (x + 1.0))
        return np.asarray(half / np.tanh(half))

    places = chebyshev.chebpts1(100)
    fitted = chebyshev.Chebyshev(chebyshev.chebfit(places, even(places), _DEGREE), domain=[0.0, width])
    powers = fitted.convert(kind=np.polynomial.Polynomial, domain=[-1, 1], window=[-1, 1]).coef
    return tuple(float(c) / (2 * m + 1) for m, c in enumerate(powers))


def _by_quadrature(way: _Fall, rows: int) -> Pair:
    """Rows on a grade that `_grade` does not fit: short falls, slopes of most of the deceleration, and near balance."""
    uphill = way.slope > 0.0
    short = (way.exponent < _SHORT) & (way.slope * (1.0 + way.growth) > np.expm1(-_FAR) * way.force)
    distance, time = np.empty(rows), np.empty(rows)
    for which, form in ((short, _short), (~short & uphill, _steep_up), (~short & ~uphill, _steep_down)):
        here = np.flatnonzero(np.broadcast_to(which, rows))
        if here.size:
            distance[here], time[here] = form(way.part(here))
    return distance, time


def _short(way: _Fall) -> Pair:
    """Rows of a short fall that slow well."""
    return _gauss(way, _SHORT_POINTS, 1)


def _steep_up(way: _Fall) -> Pair:
    """Rows uphill whose slope is most of the deceleration."""
    return _gauss(way, _PANEL_POINTS, max(1, ceil(float(way.exponent.max()) / _PANEL)))


def _gauss(way: _Fall, points: int, panels: int) -> Pair:
    """Gauss-Legendre in the speed: with y from 0 to x, ``1/a = e^y/(B + s·e^y)``."""
    nodes, weights = _rule(points)
    nodes, weights = nodes[:, None], weights[:, None] / panels
    sums = moments = np.zeros(1)
    for panel in range(panels):
        places = (panel + nodes) / panels
        growth = np.exp(way.exponent * places)
        share = weights * growth / (way.force + way.slope * growth)
        sums = sums + share.sum(axis=0)
        moments = moments + (places * share).sum(axis=0)
    length = way.exponent / way.fall
    return length * length * moments, length * sums


def _steep_down(way: _Fall) -> Pair:
    """Rows on a downgrade whose least deceleration is small: 32 points in the logarithm of the deceleration.

    There 1/a has a pole just above the top speed. With ``z = ln a`` the integrals become
    ``∫ y(z)/(e^z + |s|) dz / k²`` and ``∫ 1/(e^z + |s|) dz / k``, whose nearest singularity is π away.
    """
    down, least = -way.slope, way.force / (1.0 + way.growth)
    highest = way.force - down
    span = np.log1p(least * way.growth / (least - down))
    nodes, weights = _rule(_STEEP_POINTS)
    before = span * (nodes[:, None] - 1.0)
    share = weights[:, None] / (highest * np.exp(before) + down)
    # y = ln(B/(e^z + |s|)), in the form that keeps its digits where it is small.
    exponent = -np.log1p(highest / way.force * np.expm1(before))
    sums, moments = share.sum(axis=0), (share * exponent).sum(axis=0)
    scale = span / way.fall
    return moments * scale / way.fall, sums * scale


@cache
def _rule(points: int) -> tuple[FloatArray, FloatArray]:
    """Nodes and weights on 0..1."""
    nodes, weights = leggauss(points)
    return 0.5 * (nodes + 1.0), 0.5 * weights
