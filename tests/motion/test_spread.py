"""Are the percentiles those of closed forms, of plain Monte Carlo and of another sequence, and is the error honest?"""

from __future__ import annotations

import math
import time

import numpy as np
import pytest
from scipy import stats
from scipy.optimize import brentq

from chartgen.motion.friction_table import FrictionTable
from chartgen.motion.limits import GRAVITY_MPS2
from chartgen.motion.spread import SHIFTS, StoppingSpread, stopping_percentiles
from chartgen.motion.stopping import stop

SHARES = (0.50, 0.85, 0.95)
FIXED = {"reaction_mu": math.nan, "reaction_sigma": math.nan, "friction_low": 1.0, "friction_high": 1.0}
SLOW = {"reaction_mu": 0.17, "reaction_sigma": 0.44}  # a surprise, R. J. Koppa 1997


def spread(speed: object = 20.0, **arguments: object) -> StoppingSpread:
    given = {**FIXED, "reaction_time_s": 1.0, **arguments}
    return stopping_percentiles(np.atleast_1d(np.asarray(speed, dtype=float)), **given)


def test_reaction_alone_gives_the_lognormals_own_percentiles() -> None:
    found = spread([10.0, 30.0], **SLOW, max_deceleration_mps2=5.0, samples=16384)
    times = np.exp(0.17 + 0.44 * stats.norm.ppf(SHARES))
    for column, speed in enumerate((10.0, 30.0)):
        exact = speed * times + speed**2 / 10.0
        assert found.distance_m[:, column] == pytest.approx(exact, rel=1e-3)
        assert (np.abs(found.distance_m[:, column] - exact) <= 6 * found.error_m[:, column] + 1e-6).all()


def test_friction_alone_gives_the_uniforms_own_percentiles() -> None:
    """d = v²/(2·mu·k·g), k uniform: the p-th percentile is at the (1-p)-th factor."""
    found = spread(25.0, friction_low=0.8, friction_high=1.3, mu=0.5, samples=16384)
    factors = 0.8 + 0.5 * (1.0 - np.array(SHARES))
    assert found.distance_m[:, 0] == pytest.approx(25.0 + 625.0 / (2 * 0.5 * factors * GRAVITY_MPS2), rel=5e-4)


@pytest.mark.parametrize(
    "road",
    [
        {"mu": 0.5},
        {"f60": 0.4, "sp_kmh": 120.0, "max_mu": 0.6, "grade": -0.04},
        {"tables": (FrictionTable(np.array([5.0, 20.0, 40.0]), np.array([0.6, 0.45, 0.4])),), "table": 0},
        {"mu": 0.7, "max_deceleration_mps2": 5.0, "brake_lag_s": 0.4, "build_up_s": 0.3},
    ],
    ids=["constant", "falling", "table", "limit"],
)
def test_plain_monte_carlo_agrees(road: dict[str, object]) -> None:
    chance = np.random.default_rng(7)
    count = 200_000
    times = chance.lognormal(0.17, 0.44, count)
    factors = chance.uniform(0.85, 1.15, count)
    speed = 24.0
    given = dict(road)
    # A factor on the friction is a factor on the brake's efficiency, from a curve that is scaled up first.
    if "tables" in given:
        given["tables"] = (given["tables"][0].times(1.15),)  # type: ignore[index]
    for name in ("mu", "f60", "max_mu"):
        if name in given:
            given[name] = given[name] * 1.15  # type: ignore[operator]
    way = stop(np.full(count, speed), reaction_time_s=0.0, brake_efficiency=factors / 1.15, **given).stopping_distance_m
    drawn = np.sort(speed * times + way)
    found = spread(speed, **SLOW, friction_low=0.85, friction_high=1.15, samples=8192, **road)
    for share, metres, error in zip(SHARES, found.distance_m[:, 0], found.error_m[:, 0], strict=True):
        low, high = stats.binom.interval(0.9999, count, share)
        assert drawn[int(low)] - 5 * error <= metres <= drawn[int(high)] + 5 * error


def test_another_sequence_agrees() -> None:
    """Sobol' points of scipy, scrambled."""
    points = stats.qmc.Sobol(2, rng=3).random(16384)
    times = np.exp(0.17 + 0.44 * stats.norm.ppf(np.clip(points[:, 0], 1e-12, 1 - 1e-12)))
    factors = 0.8 + 0.4 * points[:, 1]
    drawn = np.sort(20.0 * times + 400.0 / (2 * 0.5 * factors * GRAVITY_MPS2))
    found = spread(20.0, **SLOW, friction_low=0.8, friction_high=1.2, mu=0.5, samples=16384)
    other = drawn[np.ceil(np.array(SHARES) * 16384).astype(int) - 1]
    # Each is off by its own error, of about the same size.
    assert (np.abs(found.distance_m[:, 0] - other) <= 6 * found.error_m[:, 0]).all()
    assert (found.error_m[:, 0] < 0.1).all()


def both_exact(speed: float) -> np.ndarray:
    """Percentiles of v·t + v²/(2·mu·k·g), k uniform: the lognormal's share over a fine row of factors, inverted."""
    factors = 0.8 + 0.5 * (np.arange(20_000) + 0.5) / 20_000
    way = speed**2 / (2 * 0.5 * factors * GRAVITY_MPS2)

    def share(metres: float) -> float:
        return float(stats.lognorm(s=0.44, scale=math.exp(0.17)).cdf((metres - way) / speed).mean())

    return np.array([brentq(lambda x, p=p: share(x) - p, 10.0, 400.0) for p in SHARES])


SPREADS: dict[str, tuple[dict[str, object], np.ndarray]] = {
    "reaction": ({**SLOW, "max_deceleration_mps2": 5.0}, 20.0 * np.exp(0.17 + 0.44 * stats.norm.ppf(SHARES)) + 40.0),
    "friction": (
        {"friction_low": 0.8, "friction_high": 1.3, "mu": 0.5},
        20.0 + 400.0 / (2 * 0.5 * (0.8 + 0.5 * (1.0 - np.array(SHARES))) * GRAVITY_MPS2),
    ),
    "both": ({**SLOW, "friction_low": 0.8, "friction_high": 1.3, "mu": 0.5}, both_exact(20.0)),
}


@pytest.mark.parametrize("name", SPREADS)
@pytest.mark.parametrize("samples", [256, 1024, 4096])
def test_the_error_is_honest(name: str, samples: int) -> None:
    """Over many seeds the stated error is the one seen, and the true percentile lies within it as often as it should.

    Eight shifts: Student's t with seven degrees of freedom puts 95 % within 2.365 errors.
    """
    arguments, exact = SPREADS[name]
    made = [spread(20.0, **arguments, samples=samples, seed=seed) for seed in range(100)]
    off = np.array([m.distance_m[:, 0] - exact for m in made])
    stated = np.array([m.error_m[:, 0] for m in made])
    seen = np.sqrt(np.mean(off * off, axis=0))
    assert (np.sqrt(np.mean(stated * stated, axis=0)) > 0.9 * seen).all()
    assert (np.sqrt(np.mean(stated * stated, axis=0)) < 1.9 * seen).all()
    assert np.mean(np.abs(off) <= 2.365 * stated) > 0.9


def test_no_percentile_is_without_its_error() -> None:
    """Next to the share that never ends nobody knows whether a percentile ends, and none is told."""
    shares = tuple(np.arange(0.60, 0.70, 0.001))
    found = spread(10.0, mu=0.1, friction_low=0.5, friction_high=2.0, grade=-0.09, percentiles=shares, samples=256)
    known = np.isfinite(found.distance_m[:, 0])
    assert 0 < known.sum() < len(shares)
    assert (found.error_m[known, 0] > 0.0).all()
    assert np.isnan(found.error_m[~known, 0]).all()


def test_a_lognormal_needs_no_fixed_time() -> None:
    whole = spread(20.0, **SLOW, mu=0.5)
    alone = stopping_percentiles(np.array([20.0]), **SLOW, friction_low=1.0, friction_high=1.0, mu=0.5)
    assert np.array_equal(whole.distance_m, alone.distance_m)


def test_same_seed_same_numbers_other_seed_others() -> None:
    one, two, other = (spread(20.0, **SLOW, mu=0.5, seed=s).distance_m for s in (4, 4, 5))
    assert np.array_equal(one, two)
    assert not np.array_equal(one, other)


def test_chunks_do_not_show() -> None:
    speeds = np.linspace(5.0, 40.0, 700)
    whole = spread(speeds, **SLOW, mu=0.6, friction_low=0.9, friction_high=1.1).distance_m
    one = spread(speeds[599], **SLOW, mu=0.6, friction_low=0.9, friction_high=1.1).distance_m
    assert whole[:, 599] == pytest.approx(one[:, 0], rel=1e-13)


def test_percentiles_among_stops_that_never_end_are_none() -> None:
    """On a slope of -9 % friction of 0.05 to 0.2: a third of the sample never ends."""
    found = spread(10.0, mu=0.1, friction_low=0.5, friction_high=2.0, grade=-0.09)
    assert 0.2 < found.endless[0] < 0.5
    assert np.isnan(found.distance_m[:, 0]).tolist() == [False, True, True]


def test_percentiles_rise_and_a_fixed_row_has_one_value() -> None:
    found = spread([10.0, 20.0], **SLOW, mu=0.5, friction_low=0.9, friction_high=1.2)
    assert (np.diff(found.distance_m, axis=0) > 0).all()
    fixed = spread(20.0, mu=0.5)
    assert fixed.distance_m[:, 0] == pytest.approx(float(stop(20.0, reaction_time_s=1.0, mu=0.5).stopping_distance_m))
    assert fixed.error_m == pytest.approx(0.0, abs=1e-12)


def test_a_friction_beyond_what_is_accepted_takes_the_longer_distance() -> None:
    found = spread(20.0, mu=1.2, friction_low=1.0, friction_high=2.0)
    assert (found.distance_m >= 20.0 + 400.0 / (2 * 1.5 * GRAVITY_MPS2) - 1e-9).all()


def test_five_thousand_rows_are_quick() -> None:
    began = time.perf_counter()
    spread(np.linspace(5.0, 40.0, 5000), **SLOW, mu=0.6, friction_low=0.9, friction_high=1.1, samples=1024)
    # Half a second here; the bound is for a machine that is busy with something else.
    assert time.perf_counter() - began < 20.0


@pytest.mark.parametrize(
    ("changes", "says"),
    [
        ({"percentiles": (0.85, 0.5)}, "percentiles"),
        ({"percentiles": (0.0, 0.5)}, "percentiles"),
        ({"samples": 4}, "samples"),
        ({"samples": SHIFTS * 100 + 1}, "samples"),
        ({"friction_low": 0.0}, "friction_low"),
        ({"reaction_time_s": math.nan}, "reaction_time_s"),
        ({"reaction_time_s": 11.0}, "reaction_time_s"),
        ({"reaction_mu": 0.1}, "reaction_mu, reaction_sigma"),
        ({"reaction_mu": 0.1, "reaction_sigma": 0.0}, "reaction_mu, reaction_sigma"),
        ({"friction_low": 1.2, "friction_high": 1.1}, "friction_low"),
    ],
)
def test_what_makes_no_sense_is_refused(changes: dict[str, object], says: str) -> None:
    with pytest.raises(ValueError, match=says):
        spread(20.0, mu=0.5, **changes)
