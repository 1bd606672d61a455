"""Reaction times from what a group can measure itself, and their spread as a lognormal."""

from __future__ import annotations

from math import exp, isfinite, log
from statistics import NormalDist

import numpy as np
from numpy.typing import ArrayLike

from chartgen.motion.limits import GRAVITY_MPS2, FloatArray


def dropped_rule_time(drop_m: ArrayLike) -> FloatArray:
    """The reaction time from the length that a dropped rule falls before it is caught.

    Formula: ``t = sqrt(2·s/g)``, free fall without air.

    Args:
        drop_m: how far it fell, m, more than 0, at most 10; any shape.

    Returns:
        Seconds, in that shape.

    Raises:
        ValueError: a fall out of its range or not finite.

    Source: uniformly accelerated motion; measuring with a dropped rule is common practice in classrooms.

    >>> round(float(dropped_rule_time(0.6)), 4)
    0.3498
    """
    drop = np.asarray(drop_m, dtype=np.float64)
    if not ((drop > 0.0) & (drop <= 10.0)).all():
        raise ValueError("drop_m: it must be more than 0 m and at most 10 m")
    return np.asarray(np.sqrt(2.0 * drop / GRAVITY_MPS2))


def lognormal(p_low: float, t_low_s: float, p_high: float, t_high_s: float) -> tuple[float, float]:
    """Location and scale of ln(t/s) of the lognormal through two percentiles.

    Formula: ``ln t_p = mu + sigma·z_p``, z_p the standard normal's quantile.

    Args:
        p_low: the lower share, 0 < p_low < p_high.
        t_low_s: the time that this share does not exceed, s, more than 0.
        p_high: the higher share, below 1.
        t_high_s: its time, s, more than `t_low_s`.

    Returns:
        mu and sigma.

    Raises:
        ValueError: shares or times are out of order or out of range.

    Source: the lognormal distribution; used for brake reaction times in sources:koppa-1997.

    >>> mu, sigma = lognormal(0.5, 1.1, 0.85, 1.6)
    >>> round(mu, 4), round(sigma, 4)
    (0.0953, 0.3615)
    """
    if not 0.0 < p_low < p_high < 1.0:
        raise ValueError("p_low, p_high: they must be shares, the first below the second")
    if not 0.0 < t_low_s < t_high_s or not isfinite(t_high_s):
        raise ValueError("t_low_s, t_high_s: the time of the higher share must be the longer one")
    z_low, z_high = (NormalDist().inv_cdf(p) for p in (p_low, p_high))
    sigma = (log(t_high_s) - log(t_low_s)) / (z_high - z_low)
    return log(t_low_s) - sigma * z_low, sigma


def lognormal_percentile(mu: float, sigma: float, p: float) -> float:
    """The time that a share of reactions does not exceed.

    Formula: ``t_p = exp(mu + sigma·z_p)``.

    Args:
        mu: location of ln(t/s).
        sigma: scale of ln(t/s), more than 0.
        p: the share, 0 < p < 1.

    Returns:
        Seconds.

    Raises:
        ValueError: a share or a scale out of its range.

    Source: the lognormal distribution.

    >>> round(lognormal_percentile(0.17, 0.44, 0.5), 3)
    1.185
    """
    if not 0.0 < p < 1.0 or not sigma > 0.0:
        raise ValueError("p, sigma: a share between 0 and 1 and a scale above 0 are needed")
    return exp(mu + sigma * NormalDist().inv_cdf(p))
