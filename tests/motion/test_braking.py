"""Full braking against adaptive quadrature (scipy.integrate.quad, QUADPACK) and the closed form."""

from __future__ import annotations

import math
from itertools import product

import numpy as np
import pytest

from chartgen.motion.stopping import stop

from .reference import STANDARD_GRAVITY, brake_force, by_quadrature, friction_law


def full_braking(speed: float, **road: float) -> tuple[float, float, bool]:
    out = stop(speed, reaction_time_s=0.0, **road)
    return float(out.braking_distance_m), float(out.stopping_time_s), bool(out.stops)


@pytest.mark.parametrize("mu", [0.02, 0.3, 0.67, 1.5])
@pytest.mark.parametrize("grade", [-0.01, 0.0, 0.3])
@pytest.mark.parametrize("efficiency", [0.6, 1.0])
def test_constant_friction_is_the_closed_form(mu: float, grade: float, efficiency: float) -> None:
    speed = np.array([0.5, 8.0, 40.0, 150.0])
    angle = math.atan(grade)
    slowing = STANDARD_GRAVITY * (efficiency * mu * math.cos(angle) + math.sin(angle))
    out = stop(speed, reaction_time_s=0.0, mu=mu, grade=grade, brake_efficiency=efficiency)
    if slowing < 0.1:
        assert not out.stops.any()
        return
    assert out.braking_distance_m == pytest.approx(speed**2 / (2 * slowing), rel=1e-12)
    assert out.stopping_time_s == pytest.approx(speed / slowing, rel=1e-12)


# Speed constants of wet roads run from about 30 (smooth texture) to 300 km/h (very coarse): Sp = 14.2 + 89.7 MPD.
USUAL = list(product([3.0, 15.0, 30.0, 55.0], [0.15, 0.35, 0.8], [30.0, 110.0, 300.0], [-0.12, -0.03, 0.0, 0.06]))


@pytest.mark.parametrize(("cap", "limit"), [(math.inf, math.inf), (0.6, math.inf), (math.inf, 4.0), (0.5, 3.0)])
def test_falling_friction_in_the_usual_range(cap: float, limit: float) -> None:
    compared = 0
    for speed, f60, sp_kmh, grade in USUAL:
        compared += _compare(speed, f60, sp_kmh, grade, cap, limit, rel=1e-11)
    assert compared > 90


def test_falling_friction_over_the_whole_range() -> None:
    """Speeds to 100 m/s, slopes to 30 %, speed constants from 10 km/h; friction capped at what is accepted, 1.5."""
    chance = np.random.default_rng(20)
    compared = 0
    for _ in range(500):
        speed, f60 = chance.uniform(0.1, 100.0), chance.uniform(0.02, 1.5)
        sp_kmh, grade = 10.0 ** chance.uniform(1.0, 3.0), chance.uniform(-0.3, 0.3)
        cap, limit = chance.uniform(0.3, 1.5), chance.choice([math.inf, chance.uniform(1.0, 12.0)])
        compared += _compare(speed, f60, sp_kmh, grade, cap, limit, rel=1e-11)
    assert compared > 300


@pytest.mark.parametrize("grade", [-0.2, -0.06, -1e-5, -1e-12, 1e-12, 1e-5, 0.06, 0.3])
def test_where_one_form_takes_over_from_another(grade: float) -> None:
    """Falls k·v about 0.05, slopes about e^1.5 - 1 and e^-1.5 - 1 of the brake's part at the top, long steep falls."""
    compared, angle = 0, math.atan(grade)
    logarithms = (-1.9, -1.5001, -1.4999, -0.3, 0.3, 1.4999, 1.5001, 3.0, 6.0)
    at_top = [math.tan(angle) / math.expm1(logarithm) for logarithm in logarithms] + [0.02, 0.3, 1.0]
    for exponent, friction in product((1e-6, 0.01, 0.0499999, 0.0500001, 0.3, 1.0, 3.9, 4.1, 9.0, 20.0), at_top):
        sp_kmh = min(max(3.6 * 25.0 / exponent, 10.0), 10_000.0)
        speed = exponent * sp_kmh / 3.6
        f60 = friction / math.exp((60.0 - 3.6 * speed) / sp_kmh)
        if 0.0 < f60 <= 1.5:
            compared += _compare(speed, f60, sp_kmh, grade, math.inf, math.inf, rel=1e-11)
    assert compared >= 15


def test_just_above_not_stopping_on_a_steep_downgrade() -> None:
    """The hardest integrand: the deceleration at the top speed is 0.11 m/s² and the integrand almost has a pole."""
    for sp_kmh, grade, speed in product([20.0, 60.0, 200.0], [-0.05, -0.15, -0.30], [10.0, 30.0]):
        angle = math.atan(grade)
        needed = (0.11 - STANDARD_GRAVITY * math.sin(angle)) / (STANDARD_GRAVITY * math.cos(angle))
        f60 = needed / math.exp((60.0 - 3.6 * speed) / sp_kmh)
        if f60 <= 1.5:
            assert _compare(speed, f60, sp_kmh, grade, math.inf, math.inf, rel=1e-11)


def _compare(speed: float, f60: float, sp_kmh: float, grade: float, cap: float, limit: float, *, rel: float) -> bool:
    distance, time, stops = full_braking(
        speed, f60=f60, sp_kmh=sp_kmh, max_mu=cap, grade=grade, max_deceleration_mps2=limit
    )
    if not stops:
        return False
    force, slope = brake_force(friction_law(f60=f60, sp_kmh=sp_kmh, max_mu=cap), grade=grade, limit=limit)
    across = STANDARD_GRAVITY * math.cos(math.atan(grade))
    highest = min(cap * across, limit)
    knot = (60.0 - sp_kmh * math.log(highest / (f60 * across))) / 3.6 if math.isfinite(highest) else 0.0
    expected = by_quadrature(speed, brake=force, slope=slope, knots=(knot,))
    assert (distance, time) == pytest.approx(expected, rel=rel, abs=0.0), (speed, f60, sp_kmh, grade, cap, limit)
    return True


def test_a_row_does_not_depend_on_its_neighbours() -> None:
    """Constant and falling friction, level, easy and hard rows in one call give what each gives alone."""
    chance = np.random.default_rng(4)
    rows = 300
    speed, grade = chance.uniform(1, 50, rows), chance.choice([-0.2, -0.05, 0.0, 0.04], rows)
    falls = chance.random(rows) < 0.7
    given = {
        "mu": np.where(falls, np.nan, chance.uniform(0.1, 1.0, rows)),
        "f60": np.where(falls, chance.uniform(0.1, 1.0, rows), np.nan),
        "sp_kmh": np.where(falls, chance.uniform(20, 300, rows), np.nan),
        "brake_lag_s": chance.choice([0.0, 0.4], rows),
        "build_up_s": chance.choice([0.0, 0.3], rows),
        "max_deceleration_mps2": chance.choice([np.inf, 5.0], rows),
    }
    together = stop(speed, reaction_time_s=1.0, grade=grade, **given)
    for i in range(rows):
        alone = stop(speed[i], reaction_time_s=1.0, grade=grade[i], **{name: x[i] for name, x in given.items()})
        assert together.stopping_distance_m[i] == pytest.approx(
            float(alone.stopping_distance_m), rel=1e-14, nan_ok=True
        )
        assert together.reason[i] == alone.reason
