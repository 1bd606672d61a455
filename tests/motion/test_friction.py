"""Friction: what it is at a speed, and which ways of giving it are refused."""

from __future__ import annotations

import math

import numpy as np
import pytest

from chartgen.motion.friction import friction_at


def test_friction_at_60_kmh_is_f60() -> None:
    # ASTM E1960: F60 is by definition the friction at a slip speed of 60 km/h.
    assert friction_at(60 / 3.6, f60=[0.2, 0.5], sp_kmh=[40.0, 300.0]) == pytest.approx([0.2, 0.5], rel=1e-14)


def test_friction_halves_every_sp_ln2() -> None:
    # ASTM E1960, F(S) = F60 exp((60 - S)/Sp): half after Sp ln 2 in S.
    start, sp_kmh = 90.0, 110.0
    first = friction_at(start / 3.6, f60=0.35, sp_kmh=sp_kmh)
    second = friction_at((start + sp_kmh * math.log(2)) / 3.6, f60=0.35, sp_kmh=sp_kmh)
    assert float(first) == pytest.approx(2.0 * float(second), rel=1e-14)


def test_cap_holds_at_low_speed_only() -> None:
    values = friction_at([0.0, 5.0, 40.0], f60=0.5, sp_kmh=50.0, max_mu=0.9)
    assert values[:2].tolist() == [0.9, 0.9]
    assert float(values[2]) == pytest.approx(0.5 * math.exp((60 - 144) / 50), rel=1e-14)


def test_constant_and_falling_side_by_side() -> None:
    nan = np.nan
    values = friction_at(30.0, mu=[0.7, nan, nan], f60=[nan, 0.4, nan], sp_kmh=[nan, 100.0, nan])
    assert values[0] == 0.7
    assert float(values[1]) == pytest.approx(0.4 * math.exp(-0.48), rel=1e-14)
    assert math.isnan(values[2])


@pytest.mark.parametrize(
    ("given", "says"),
    [
        ({"mu": 0.0}, "mu: 0.0 is not accepted; it must be more than 0 and at most 1.5"),
        ({"mu": 1.51}, "mu: 1.51 is not accepted; it must be more than 0 and at most 1.5"),
        ({"mu": math.inf}, "mu: inf is not accepted; it must be more than 0 and at most 1.5"),
        ({"f60": -0.1, "sp_kmh": 100.0}, "f60: -0.1 is not accepted; it must be more than 0 and at most 1.5"),
        (
            {"f60": 0.4, "sp_kmh": 9.0},
            "sp_kmh: 9.0 is not accepted; it must be at least 10 km/h and at most 10000 km/h",
        ),
        ({"f60": 0.4, "sp_kmh": 100.0, "max_mu": math.nan}, "max_mu: nan is not accepted; it must be more than 0"),
        ({"f60": 0.4}, "f60, sp_kmh: friction that falls with speed needs both of them"),
        (
            {"mu": 0.4, "f60": 0.4, "sp_kmh": 100.0},
            "mu, f60: friction is either constant or falls with speed, not both",
        ),
        ({"mu": 0.4, "max_mu": 0.3}, "max_mu: a cap belongs to friction that falls with speed (f60, sp_kmh)"),
    ],
)
def test_faulty_friction_is_refused_by_name(given: dict[str, float], says: str) -> None:
    with pytest.raises(ValueError) as raised:  # noqa: PT011  # the whole message is compared below
        friction_at(20.0, **given)
    assert str(raised.value) == says


@pytest.mark.parametrize("speed", [-0.1, 200.1, math.nan, math.inf])
def test_speed_out_of_range(speed: float) -> None:
    with pytest.raises(ValueError, match=r"^speed_mps: "):
        friction_at(speed, mu=0.5)
