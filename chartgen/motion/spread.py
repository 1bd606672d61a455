"""The spread of stopping distances over reaction and friction: percentiles by a seeded quasi-Monte-Carlo sample.

Reaction times are lognormal, the factor on the friction curve is uniform, and the two are independent. The sample is a
plane sequence of low discrepancy, shifted at random several times: the shifts give the sampling error.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache
from statistics import NormalDist
from typing import Any, Final

import numpy as np
from numpy.typing import ArrayLike

from chartgen.motion.limits import RANGES, FloatArray
from chartgen.motion.stopping import stop

SHIFTS: Final = 8
"""Independent random shifts of the sequence; their scatter is the sampling error."""
_SCATTER: Final = 0.9650304561
"""What the scatter of 8 normal values comes to on average, of their true one: sqrt(2/7)·Γ(4)/Γ(3.5)."""
_NODES: Final = 129
"""Factors on a friction curve at which a row's distance is worked out."""
_CHUNK_VALUES: Final = 2_000_000
"""Values worked at a time: 16 MB an array."""
_PLASTIC: Final = 1.324717957244746
"""The real root of x³ = x + 1; the fractions of n/x and n/x² fill the unit square evenly."""


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class StoppingSpread:
    """Percentiles of the stopping distance: first axis the percentiles, then the rows."""

    distance_m: FloatArray
    """nan where so many of the sampled stops never end that the percentile, or one a standard error higher, is among
    them: then it is not known to end."""
    error_m: FloatArray
    """Standard error of each percentile, from independent random shifts; nan with it."""
    endless: FloatArray
    """Share of the sampled stops of each row that never end."""


def stopping_percentiles(
    speed_mps: ArrayLike,
    *,
    reaction_mu: ArrayLike,
    reaction_sigma: ArrayLike,
    friction_low: ArrayLike,
    friction_high: ArrayLike,
    reaction_time_s: ArrayLike = np.nan,
    percentiles: Sequence[float] = (0.50, 0.85, 0.95),
    samples: int = 4096,
    seed: int = 1,
    **arguments: Any,
) -> StoppingSpread:
    """Within which distances given shares of stops end.

    Formula: ``s = v·exp(mu + sigma·Φ⁻¹(p)) + d(k)``, d the distance after the reaction as `stopping.stop` has it for
    friction times k, ``k = low + (high - low)·q``; (p, q) fill the unit square evenly. The percentile is the smallest
    distance that at least that share of the sample does not exceed.

    Args:
        speed_mps: m/s, shape (n,).
        reaction_mu: location of ln(t/s), shape (n,) or a number; nan with sigma where the time is fixed.
        reaction_sigma: scale of ln(t/s), more than 0, or nan for the fixed `reaction_time_s`.
        friction_low: lowest factor on the friction curve, more than 0.
        friction_high: highest factor, at least `friction_low`; both 1 where friction is fixed.
        reaction_time_s: the time where it is fixed, s, 0 to 10; elsewhere it is not used and may be nan.
        percentiles: shares between 0 and 1, rising.
        samples: stops sampled a row, a multiple of 8.
        seed: of the random shifts.
        **arguments: as `stopping.stop` takes them, each a number or of shape (n,).

    Returns:
        A `StoppingSpread` for the n rows.

    Raises:
        ValueError: as `stopping.stop`; factors, shares or a number of samples out of their range; mu without
            sigma; no time where it is fixed.

    Source: equation of motion; the sequence is the additive recurrence of the plane with the root of x³ = x + 1, a
    generalised golden ratio (common practice), shifted at random modulo 1 (Cranley and Patterson, SIAM Journal on
    Numerical Analysis 13(6), 1976).

    >>> import numpy as np
    >>> found = stopping_percentiles(
    ...     np.array([20.0]), reaction_mu=np.log(1.0), reaction_sigma=0.3, friction_low=1.0, friction_high=1.0,
    ...     reaction_time_s=1.0, max_deceleration_mps2=5.0)
    >>> round(float(found.distance_m[0, 0]), 1)
    60.0
    """
    speed = np.atleast_1d(np.asarray(speed_mps, dtype=np.float64))
    shares = _checked(percentiles, samples, friction_low, friction_high)
    each = samples // SHIFTS
    if samples % SHIFTS:
        raise ValueError(f"samples: {samples} is not a multiple of {SHIFTS}")
    rows = len(speed)
    time = _times(reaction_time_s, reaction_mu, reaction_sigma)
    own = {
        n: v if n == "tables" else np.broadcast_to(np.asarray(v), (rows,))
        for n, v in {"reaction_time_s": time, **arguments}.items()
    }
    spread = {
        name: np.broadcast_to(np.asarray(value, dtype=np.float64), (rows,))
        for name, value in (
            ("mu", reaction_mu), ("sigma", reaction_sigma), ("low", friction_low), ("high", friction_high),
        )
    }  # fmt: skip
    own = _curves(own, spread["high"])
    out = np.empty((len(shares), rows))
    error, endless = np.empty((len(shares), rows)), np.empty(rows)
    step = max(1, _CHUNK_VALUES // samples)
    for start in range(0, rows, step):
        part = slice(start, start + step)
        here = {n: v if n == "tables" else v[part] for n, v in own.items()}
        some = {name: value[part] for name, value in spread.items()}
        sample = _sampled(speed[part], here, some, each, seed)
        endless[part] = np.isinf(sample).mean(axis=(0, 1))
        ordered = np.sort(sample.reshape(samples, -1), axis=0)
        out[:, part] = _quantile(ordered, shares)
        error[:, part] = _error(ordered, sample, out[:, part], shares)
    lost = ~np.isfinite(out) | ~np.isfinite(error)
    out[lost], error[lost] = np.nan, np.nan
    return StoppingSpread(distance_m=out, error_m=error, endless=endless)


def _times(reaction_time_s: ArrayLike, mu: ArrayLike, sigma: ArrayLike) -> FloatArray:
    """The fixed times, a stand-in for the mechanics where they are not used."""
    time, mu, sigma = (np.asarray(x, dtype=np.float64) for x in (reaction_time_s, mu, sigma))
    if (np.isnan(mu) != np.isnan(sigma)).any() or (sigma <= 0.0).any() or np.isinf(mu).any() or np.isinf(sigma).any():
        raise ValueError("reaction_mu, reaction_sigma: both are needed, finite and the scale above 0, or both nan")
    fixed = np.isnan(sigma)
    if not ((~fixed | ((time >= 0.0) & (time <= RANGES["reaction_time_s"].high))).all()):
        raise ValueError(f"reaction_time_s: where no lognormal is given it must be {RANGES['reaction_time_s']}")
    return np.asarray(np.where(fixed, time, 0.0))


def _checked(percentiles: Sequence[float], samples: int, low: ArrayLike, high: ArrayLike) -> FloatArray:
    shares = np.asarray(percentiles, dtype=np.float64)
    if shares.ndim != 1 or not ((shares > 0.0) & (shares < 1.0)).all() or (np.diff(shares) <= 0.0).any():
        raise ValueError("percentiles: shares between 0 and 1 are needed, each above the one before")
    if samples < SHIFTS:
        raise ValueError(f"samples: at least {SHIFTS} are needed")
    lowest, highest = np.asarray(low, dtype=np.float64), np.asarray(high, dtype=np.float64)
    if not ((lowest > 0.0) & (lowest <= highest) & np.isfinite(highest)).all():
        raise ValueError("friction_low, friction_high: factors above 0 are needed, the first not above the second")
    return shares


def _sampled(
    speed: FloatArray, arguments: dict[str, Any], spread: dict[str, FloatArray], each: int, seed: int
) -> FloatArray:
    """Stopping distances, shape (shifts, samples of one shift, rows); infinite where the vehicle never stops."""
    squares = np.stack([_square(each, shift) for shift in _shifts(seed)])
    normal = _normal_quantile(squares[..., 0])[..., None]
    fixed = np.isnan(spread["sigma"])
    mu, sigma = np.where(fixed, 0.0, spread["mu"]), np.where(fixed, 0.0, spread["sigma"])
    time = np.where(fixed, arguments["reaction_time_s"], np.exp(mu + sigma * normal))
    varied = spread["low"] != spread["high"]
    way = np.empty((*squares.shape[:2], len(speed)))
    if not varied.all():
        still = ~varied
        way[..., still] = _after_reaction(speed[still], _some(arguments, still), spread["low"][still])
    if varied.any():
        some = _some(arguments, varied)
        way[..., varied] = _interpolated(
            speed[varied], some, spread["low"][varied], spread["high"][varied], squares[..., 1]
        )
    return np.asarray(speed * time + way)


def _curves(arguments: dict[str, Any], high: FloatArray) -> dict[str, Any]:
    """The arguments with every friction curve times its highest factor (`top_factor`), as far as the mechanics accept a
    friction: beyond that the longer distance is taken."""
    out = {**arguments, "top_factor": high}
    for name in ("mu", "f60", "max_mu"):
        if name in out:
            scaled = np.asarray(out[name]) * high
            out[name] = np.where(np.isinf(scaled), scaled, np.minimum(scaled, RANGES["mu"].high))
    which = np.broadcast_to(np.asarray(out.get("table", -1)), high.shape)
    factors = {index: float(high[which == index].max()) for index in np.unique(which[which >= 0])}
    if factors:
        tables = tuple(out["tables"])
        out["tables"] = tuple(t.times(factors.get(index, 1.0)) for index, t in enumerate(tables))
        out["top_factor"] = np.array([factors.get(index, h) for index, h in zip(which, high, strict=True)])
    return out


def _some(arguments: dict[str, Any], rows: Any) -> dict[str, Any]:
    return {name: value if name == "tables" else value[rows] for name, value in arguments.items()}


def _interpolated(
    speed: FloatArray, arguments: dict[str, Any], low: FloatArray, high: FloatArray, share: FloatArray
) -> FloatArray:
    """Distances after the reaction at the factors ``low + (high - low)·share``, taken in a straight line between those
    at `_NODES` even factors. The distance falls with the factor in a curve that hangs below its chords, so a straight
    line only lengthens it, by (high/low - 1)²/65,536 of it at most; next to a stop that never ends it counts as one."""
    even = np.linspace(0.0, 1.0, _NODES)[:, None]
    at = _after_reaction(speed, arguments, low + (high - low) * even)
    place = share * (_NODES - 1)
    left = np.minimum(place.astype(np.int64), _NODES - 2)
    part = (place - left)[..., None]
    with np.errstate(invalid="ignore"):
        return np.asarray(np.nan_to_num(at[left] * (1.0 - part) + at[left + 1] * part, nan=np.inf, posinf=np.inf))


def _after_reaction(speed: FloatArray, arguments: dict[str, Any], factor: FloatArray) -> FloatArray:
    """Distance from the end of the reaction to rest with the friction times `factor`, infinite without an end."""
    top = arguments["top_factor"]
    given = {name: value for name, value in arguments.items() if name != "top_factor"} | {"reaction_time_s": 0.0}
    if (np.asarray(factor) != 1.0).any():
        # The curve is at its highest already; the efficiency, a share of it, brings it down.
        given["brake_efficiency"] = np.minimum(np.asarray(given.get("brake_efficiency", 1.0)) * factor / top, 1.0)
    made = stop(speed, **given)
    return np.where(made.stops, made.stopping_distance_m, np.inf)


def _error(ordered: FloatArray, sample: FloatArray, found: FloatArray, shares: FloatArray) -> FloatArray:
    """Standard errors of the percentiles found: half of what lies between the percentiles of the shares one standard
    error below and above, that error being the scatter by shift of the share that does not exceed what was found.

    The scatter of the shifts' own percentiles would be too small where a shift has few samples."""
    count = len(ordered)
    seen = np.stack([(sample <= metres).mean(axis=1) for metres in found], axis=1)
    apart = np.sqrt(np.sum((seen - shares[:, None]) ** 2, axis=0) / (SHIFTS * (SHIFTS - 1))) / _SCATTER
    apart = np.maximum(apart, 0.5 / count)
    below = np.floor((shares[:, None] - apart) * count).astype(int) - 1
    above = np.ceil((shares[:, None] + apart) * count).astype(int) - 1
    low, high = (np.take_along_axis(ordered, np.clip(place, 0, count - 1), axis=0) for place in (below, above))
    with np.errstate(invalid="ignore"):
        return np.asarray(0.5 * (high - low))


def _quantile(ordered: FloatArray, shares: FloatArray) -> FloatArray:
    """The smallest of the ordered values (first axis) that at least each share does not exceed."""
    place = np.ceil(shares * len(ordered) - 1e-9).astype(int) - 1
    return np.asarray(ordered[np.clip(place, 0, len(ordered) - 1)])


@lru_cache(maxsize=64)
def _square(count: int, shift: tuple[float, float]) -> FloatArray:
    """`count` points that fill the unit square evenly, shifted modulo 1; never 0 or 1 themselves."""
    number = np.arange(1, count + 1)[:, None]
    ratios = np.array([1.0 / _PLASTIC, 1.0 / _PLASTIC**2])
    points = (number * ratios + np.array(shift)) % 1.0
    return np.asarray(np.clip(points, 1e-12, 1.0 - 1e-12), dtype=np.float64)


def _shifts(seed: int) -> tuple[tuple[float, float], ...]:
    drawn = np.random.Generator(np.random.PCG64(seed)).random((SHIFTS, 2))
    return tuple((float(x), float(y)) for x, y in drawn)


@lru_cache(maxsize=64)
def _quantiles(key: bytes) -> FloatArray:
    normal = NormalDist()
    return np.array([normal.inv_cdf(p) for p in np.frombuffer(key)])


def _normal_quantile(shares: FloatArray) -> FloatArray:
    """Φ⁻¹ of each share (P. J. Wichura, algorithm AS 241, Applied Statistics 37, 1988, as the standard library has
    it)."""
    flat = _quantiles(np.ascontiguousarray(shares).tobytes())
    return np.asarray(np.reshape(flat, shares.shape), dtype=np.float64)
