"""Do a dropped rule and two percentiles give the reaction times of published tables and of scipy?"""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import constants, stats

from chartgen.motion.reaction import dropped_rule_time, lognormal, lognormal_percentile


def test_a_rule_falls_freely() -> None:
    """t = √(2s/g), g from scipy.constants."""
    drops = np.array([0.05, 0.2, 0.6, 1.0])
    assert dropped_rule_time(drops) == pytest.approx(np.sqrt(2 * drops / constants.g), rel=1e-15)


@pytest.mark.parametrize("drop", [0.0, -0.1, 10.5, math.nan, math.inf])
def test_no_fall_no_time(drop: float) -> None:
    with pytest.raises(ValueError, match="drop_m"):
        dropped_rule_time(drop)


@pytest.mark.parametrize("p", [0.01, 0.15, 0.5, 0.85, 0.95, 0.99])
def test_percentiles_are_those_of_scipys_lognormal(p: float) -> None:
    assert lognormal_percentile(0.17, 0.44, p) == pytest.approx(stats.lognorm(s=0.44, scale=math.exp(0.17)).ppf(p))


def test_two_percentiles_come_back() -> None:
    """P. L. Olson and M. Sivak 1986: 1.1 s and 1.6 s at the 50th and 95th percentile, a scale of 0.228."""
    mu, sigma = lognormal(0.50, 1.1, 0.95, 1.6)
    assert sigma == pytest.approx(0.228, abs=5e-4)
    assert lognormal_percentile(mu, sigma, 0.50) == pytest.approx(1.1)
    assert lognormal_percentile(mu, sigma, 0.95) == pytest.approx(1.6)


@pytest.mark.parametrize(
    "given",
    [(0.85, 1.1, 0.5, 1.6), (0.5, 1.6, 0.85, 1.1), (0.5, 1.1, 1.0, 1.6), (0.0, 1.1, 0.5, 1.6), (0.5, 1, 0.85, 1)],
)
def test_percentiles_out_of_order_are_refused(given: tuple[float, float, float, float]) -> None:
    with pytest.raises(ValueError, match=r"p_low|t_low_s"):
        lognormal(*given)


@pytest.mark.parametrize(("sigma", "p"), [(0.0, 0.5), (0.4, 0.0), (0.4, 1.0), (-1.0, 0.5)])
def test_a_share_that_is_none_is_refused(sigma: float, p: float) -> None:
    with pytest.raises(ValueError, match="p, sigma"):
        lognormal_percentile(0.1, sigma, p)
