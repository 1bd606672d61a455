"""Ten thousand stops three ways: the program, an integration in small steps, and quadrature of another kind, all within
1e-9.

Nothing here uses the program's formulas: forces along the road are written down again. The grid holds stops inside lag
and build-up, grades to ±12 %, speeds at which the vehicle's own limit takes over, tables by speed, and vehicles that
do not stop. The steps know only the forces, from the end of the reaction on; the quadrature goes with the textbook's
formulas for lag and build-up.
"""

from __future__ import annotations

import dataclasses
from collections.abc import Callable
from dataclasses import dataclass
from itertools import pairwise, product

import numpy as np
import numpy.typing as npt
import pytest
from numpy.polynomial.legendre import leggauss
from scipy.interpolate import PchipInterpolator

from chartgen.motion import braking, phases, stopping
from chartgen.motion.friction import Brake
from chartgen.motion.friction_table import FrictionTable, TableBrake, braking_distance_and_time
from chartgen.motion.stopping import REASONS, Stop, stop
from tests.motion.reference import STANDARD_GRAVITY

Floats = npt.NDArray[np.float64]
Truths = npt.NDArray[np.bool_]

SPEEDS = (0.8, 2.5, 6.0, 11.0, 16.0, 21.0, 25.0, 29.0, 33.0, 40.0)
GRADES = (-0.12, -0.09, -0.06, -0.03, -0.005, 0.0, 0.01, 0.04, 0.08, 0.12)
KNOTS = ((5.0, 12.0, 20.0, 30.0, 45.0), (8.0, 16.0, 25.0, 41.0))
VALUES = ((0.75, 0.62, 0.55, 0.48, 0.44), (0.30, 0.36, 0.24, 0.21))
TABLES = tuple(FrictionTable(np.array(k), np.array(v)) for k, v in zip(KNOTS, VALUES, strict=True))
CURVES = tuple(PchipInterpolator(k, v) for k, v in zip(KNOTS, VALUES, strict=True))
# mu | f60, sp (km/h), cap | number of a table
LAWS: tuple[dict[str, float], ...] = (
    {"mu": 0.05}, {"mu": 0.13}, {"mu": 0.4}, {"mu": 0.72},
    {"f60": 0.5, "sp_kmh": 90.0, "max_mu": 0.7}, {"f60": 0.35, "sp_kmh": 150.0, "max_mu": 1.2},
    {"f60": 0.16, "sp_kmh": 60.0, "max_mu": 0.3}, {"f60": 0.6, "sp_kmh": 400.0, "max_mu": 0.62},
    {"table": 0}, {"table": 1},
)  # fmt: skip
# lag, build-up (s), efficiency, limit (m/s²), share
VEHICLES = (
    (0.0, 0.0, 1.0, np.inf, 1.0), (0.0, 0.2, 1.0, np.inf, 1.0), (0.4, 0.3, 0.9, 5.0, 1.0), (0.6, 0.4, 0.8, 3.0, 1.0),
    (3.0, 0.0, 1.0, 4.0, 1.0), (0.0, 3.0, 1.0, np.inf, 1.0), (3.0, 3.0, 0.7, 2.2, 1.0), (0.5, 0.0, 0.6, 6.0, 0.7),
    (0.2, 1.5, 1.0, 1.4, 1.0), (1.0, 0.5, 0.95, 4.4, 0.65),
)  # fmt: skip
REACTION_S = 1.1
LEAST = 0.1


@dataclass(frozen=True)
class Grid:
    """The cases, one element each."""

    speed: Floats
    grade: Floats
    law: Floats
    lag: Floats
    rise: Floats
    scale: Floats
    """share times efficiency times g cos θ."""
    cap: Floats
    """share times the limit."""
    slope: Floats
    efficiency: Floats
    limit: Floats
    share: Floats


def grid() -> Grid:
    rows = np.array(
        [(v, g, law, *one) for v, g, law, one in product(SPEEDS, GRADES, range(len(LAWS)), VEHICLES)], dtype=float
    )
    speed, grade, law, lag, rise, efficiency, limit, share = rows.T
    angle = np.arctan(grade)
    return Grid(
        speed=speed, grade=grade, law=law.astype(int), lag=lag, rise=rise, efficiency=efficiency, limit=limit,
        share=share, scale=share * efficiency * STANDARD_GRAVITY * np.cos(angle), cap=share * limit,
        slope=STANDARD_GRAVITY * np.sin(angle),
    )  # fmt: skip


def friction(cases: Grid, speed: Floats) -> Floats:
    """Friction of each case at its speed, written down again."""
    out = np.empty_like(speed)
    for number, law in enumerate(LAWS):
        here = cases.law == number
        v = speed[here]
        if "mu" in law:
            out[here] = law["mu"]
        elif "f60" in law:
            out[here] = np.minimum(law["f60"] * np.exp((60.0 - 3.6 * v) / law["sp_kmh"]), law["max_mu"])
        else:
            table = int(law["table"])
            out[here] = CURVES[table](np.clip(v, KNOTS[table][0], KNOTS[table][-1]))
    return out


def brakes(cases: Grid, speed: Floats) -> Floats:
    """The brakes' part of the deceleration."""
    return np.asarray(np.minimum(cases.scale * friction(cases, speed), cases.cap))


def program(cases: Grid) -> Stop:
    given = {name: np.full(len(cases.speed), np.nan) for name in ("mu", "f60", "sp_kmh")}
    given["max_mu"] = np.full(len(cases.speed), np.inf)
    table = np.full(len(cases.speed), -1)
    for number, law in enumerate(LAWS):
        for name, value in law.items():
            if name == "table":
                table[cases.law == number] = int(value)
            else:
                given[name][cases.law == number] = value
    return stop(
        cases.speed, reaction_time_s=REACTION_S, brake_lag_s=cases.lag, build_up_s=cases.rise, grade=cases.grade,
        brake_efficiency=cases.efficiency, max_deceleration_mps2=cases.limit, brake_share=cases.share,
        tables=TABLES, table=table, mu=given["mu"], f60=given["f60"], sp_kmh=given["sp_kmh"], max_mu=given["max_mu"],
    )  # fmt: skip


# ---- the other way -----------------------------------------------------------------------------------------------


def bisected(below: Callable[[Floats], Truths], low: Floats, high: Floats) -> Floats:
    for _ in range(80):
        middle = 0.5 * (low + high)
        under = below(middle)
        low, high = np.where(under, middle, low), np.where(under, high, middle)
    return np.asarray(0.5 * (low + high))


@dataclass(frozen=True)
class Begun:
    """Where each case is when full braking begins."""

    lag_m: Floats
    build_up_m: Floats
    speed: Floats
    top: Floats
    time: Floats


def begun(cases: Grid) -> Begun:
    """Lag and build-up, by the motion's own polynomials in time; where the speed falls to nothing, up to there."""
    pull, nothing = cases.slope, np.zeros_like(cases.speed)
    lag_s = np.where(
        cases.speed - pull * cases.lag > 0,
        cases.lag,
        bisected(lambda t: cases.speed - pull * t > 0, nothing, cases.lag),
    )
    after_lag = np.maximum(cases.speed - pull * lag_s, 0.0)
    lag_m = cases.speed * lag_s - pull * lag_s**2 / 2
    per_s = ramp_force(cases, after_lag) / np.where(cases.rise > 0, cases.rise, np.inf)

    def speed_at(t: Floats) -> Floats:
        return after_lag - pull * t - per_s * t**2 / 2

    rise_s = np.where(speed_at(cases.rise) > 0, cases.rise, bisected(lambda t: speed_at(t) > 0, nothing, cases.rise))
    build_up_m = after_lag * rise_s - pull * rise_s**2 / 2 - per_s * rise_s**3 / 6
    # The speed is highest where the brakes' part equals the slope's pull.
    peak = np.clip(np.where(per_s > 0, -pull / np.where(per_s > 0, per_s, 1.0), 0.0), 0.0, rise_s)
    top = np.maximum.reduce([cases.speed, after_lag, speed_at(peak)])
    return Begun(lag_m, build_up_m, np.maximum(speed_at(rise_s), 0.0), top, lag_s + rise_s)


def begun_in_steps(cases: Grid) -> Begun:
    """Lag and build-up from the forces alone, in small steps of time."""
    lag_m, after_lag, lag_s, top_in_lag = stepped(cases.speed, cases.lag, lambda t: -cases.slope)
    per_s = ramp_force(cases, after_lag) / np.where(cases.rise > 0, cases.rise, np.inf)
    build_up_m, speed, rise_s, top = stepped(after_lag, cases.rise, lambda t: -cases.slope - per_s * t)
    return Begun(lag_m, build_up_m, speed, np.maximum(top_in_lag, top), lag_s + rise_s)


def stepped(
    speed: Floats, duration: Floats, acceleration: Callable[[Floats], Floats], steps: int = 60
) -> tuple[Floats, Floats, Floats, Floats]:
    """Distance, last speed, time and highest speed after `duration`, or at rest before it: Runge and Kutta's
    fourth-order steps of x'' = acceleration(t); the step in which the vehicle comes to rest is shortened by halving."""
    metres, now, v, top = np.zeros_like(speed), np.zeros_like(speed), speed.copy(), speed.copy()
    moving = speed > 0

    def step(long: Floats) -> tuple[Floats, Floats]:
        first, middle, last = (acceleration(now + share * long) for share in (0.0, 0.5, 1.0))
        return long * (v + long / 6 * (first + 2 * middle)), v + long / 6 * (first + 4 * middle + last)

    for _ in range(steps):
        whole = np.where(moving, duration / steps, 0.0)
        rests = step(whole)[1] <= 0
        long = np.where(rests & moving, bisected(lambda t: step(t)[1] > 0, np.zeros_like(whole), whole), whole)
        far, fast = step(long)
        metres, now, v = metres + far, now + long, np.where(rests & moving, 0.0, fast)
        top = np.maximum(top, v)
        moving = moving & ~rests
    return metres, v, now, top


def ramp_force(cases: Grid, speed: Floats) -> Floats:
    """What the build-up rises to, as the program says it: the force at the speed at which it begins; on a downgrade
    that keeps the vehicle faster, at a bound on that; under a table the least force at any speed it may pass."""
    down = np.maximum(-cases.slope, 0.0)
    fastest = speed + down * cases.rise
    least = brakes(cases, fastest)
    excess = np.maximum(np.maximum(2 / 3 * down - least / 4, down / 2 - 0.15 * least), 0.0)
    force = brakes(cases, speed + cases.rise * excess)
    for number, law in enumerate(LAWS):
        if "table" in law:
            here = cases.law == number
            table = int(law["table"])
            most = STANDARD_GRAVITY * (max(VALUES[table]) + 0.30)
            slowest = np.clip(speed - most * cases.rise, 0.0, KNOTS[table][-1])
            fastest = np.maximum(speed, cases.speed) + down * cases.rise
            seen = [brakes(cases, slowest), brakes(cases, np.minimum(fastest, KNOTS[table][-1]))]
            for knot in KNOTS[table]:
                between = (slowest < knot) & (knot < fastest)
                seen.append(np.where(between, brakes(cases, np.full_like(speed, knot)), np.inf))
            force = np.where(here, np.minimum.reduce(seen), force)
    return force


def kinks(cases: Grid, speed: Floats) -> Floats:
    """Speeds between 0 and `speed` at which the deceleration has an edge, in order, shape (edges, cases): the points of
    a table, the cap's, and where friction and the vehicle's limit change places, found by bisection."""
    edges = [np.zeros_like(speed)]
    for number, law in enumerate(LAWS):
        here = cases.law == number
        if "table" in law:
            edges += [np.where(here, knot, 0.0) for knot in KNOTS[int(law["table"])]]
        elif "f60" in law:
            capped = (60.0 - law["sp_kmh"] * np.log(law["max_mu"] / law["f60"])) / 3.6
            edges.append(np.where(here, capped, 0.0))
    ordered = np.sort(np.clip(np.stack([*edges, speed]), 0.0, speed), axis=0)
    crossings = []
    for low, high in pairwise(ordered):
        governed = cases.scale * friction(cases, high) < cases.cap
        free = cases.scale * friction(cases, low) < cases.cap
        cross = (governed != free) & (high > low)
        found = bisected(lambda v, free=free: (cases.scale * friction(cases, v) < cases.cap) == free, low, high)  # type: ignore[misc]
        crossings.append(np.where(cross, found, low))
    return np.asarray(np.sort(np.concatenate([ordered, np.stack(crossings)]), axis=0))


def marched(cases: Grid, speed: Floats, steps: int = 320) -> tuple[Floats, Floats]:
    """Full braking in small steps of speed, smooth piece by smooth piece: Runge and Kutta's fourth-order step of
    dx/dv = v/a and dt/dv = 1/a."""
    metres, seconds = np.zeros_like(speed), np.zeros_like(speed)
    edges = kinks(cases, speed)
    inside = 1e-13  # an edge belongs to the piece being walked
    for low, high in pairwise(edges):
        step = (high - low) / steps
        if not (step > 0).any():
            continue
        before = 1.0 / (brakes(cases, low + inside * step) + cases.slope)
        for number in range(steps):
            v = low + number * step
            middle = 1.0 / (brakes(cases, v + step / 2) + cases.slope)
            after = 1.0 / (brakes(cases, v + step * (1 - inside)) + cases.slope)
            seconds += step / 6 * (before + 4 * middle + after)
            metres += step / 6 * (v * before + 4 * (v + step / 2) * middle + (v + step) * after)
            before = after
    return metres, seconds


def squared(cases: Grid, speed: Floats, points: int = 48) -> tuple[Floats, Floats]:
    """Full braking by Gauss's rule over the kinetic energy, smooth piece by smooth piece: ∫ dw/a and ∫ dw/(v·a), with
    w = v²/2; the piece down to rest over the speed, where the second has an edge."""
    nodes, weights = leggauss(points)
    metres, seconds = np.zeros_like(speed), np.zeros_like(speed)
    edges = kinks(cases, speed)
    for low, high in pairwise(edges):
        for x, weight in zip(nodes, weights, strict=True):
            w = (low**2 + high**2) / 4 + (high**2 - low**2) / 4 * x
            v = np.sqrt(2 * w)
            part = weight / 2 * (high**2 - low**2) / 2 / (brakes(cases, v) + cases.slope)
            metres += np.where(low > 0, part, 0.0)
            seconds += np.where(low > 0, part / np.where(v > 0, v, 1.0), 0.0)
            v = (low + high) / 2 + (high - low) / 2 * x
            part = weight / 2 * (high - low) / (brakes(cases, v) + cases.slope)
            metres += np.where(low > 0, 0.0, part * v)
            seconds += np.where(low > 0, 0.0, part)
    return metres, seconds


def least_deceleration(cases: Grid, top: Floats) -> Floats:
    """The least of a(v) over all speeds passed: at rest, at an edge or at the top."""
    edges = kinks(cases, top)
    return np.asarray(np.min(np.stack([brakes(cases, v) + cases.slope for v in edges]), axis=0))


@pytest.fixture(scope="module")
def cases() -> Grid:
    return grid()


def test_the_grid_holds_what_it_says(cases: Grid) -> None:
    out, start = program(cases), begun(cases)
    assert len(cases.speed) == 10_000
    assert set(out.reason_code.tolist()) == set(range(len(REASONS)))
    stopped_in_lag = (start.speed == 0) & (start.build_up_m == 0) & (cases.rise == 0) & (cases.lag > 0)
    stopped_in_build_up = (start.speed == 0) & (start.build_up_m > 0)
    assert stopped_in_lag.sum() >= 20
    assert stopped_in_build_up.sum() > 200
    taken_over = (cases.scale * friction(cases, np.zeros_like(cases.speed)) > cases.cap) & (
        cases.scale * friction(cases, cases.speed) < cases.cap
    )
    assert taken_over.sum() > 100


WAYS = {"in small steps": (begun_in_steps, marched), "by quadrature": (begun, squared)}


Truth = tuple[Begun, Floats, Floats]


@pytest.fixture(scope="module")
def truths(cases: Grid) -> dict[str, Truth]:
    """By the name of the way: the beginning, and distance and time of full braking."""
    found: dict[str, Truth] = {}
    for way, (beginning, full_braking) in WAYS.items():
        start = beginning(cases)
        with np.errstate(divide="ignore", invalid="ignore"):
            found[way] = (start, *full_braking(cases, start.speed))
    return found


def agree(cases: Grid, out: Stop, truth: Truth) -> None:
    """Raises AssertionError where a distance or time of the program is more than 1e-9 off."""
    start, metres, seconds = truth
    here = out.stops
    assert here.sum() > 6_000
    braking = start.build_up_m + metres
    pairs = (
        (out.lag_distance_m, start.lag_m),
        (out.braking_distance_m, braking),
        (out.stopping_distance_m, cases.speed * REACTION_S + start.lag_m + braking),
        (out.stopping_time_s, REACTION_S + start.time + seconds),
    )
    for ours, theirs in pairs:
        # A part of nothing, such as braking after a stop inside the lag, has no relative error.
        assert np.max(np.abs(ours - theirs)[here] / np.maximum(theirs[here], 1e-3)) < 1e-9


@pytest.mark.parametrize("way", WAYS)
def test_three_ways_agree(cases: Grid, truths: dict[str, Truth], way: str) -> None:
    agree(cases, program(cases), truths[way])


def test_what_does_not_stop_is_the_same(cases: Grid) -> None:
    out, start = program(cases), begun(cases)
    last = np.array([KNOTS[int(law["table"])][-1] if "table" in law else np.inf for law in LAWS])[cases.law]
    outside = start.top > last * (1 + 1e-9)
    least = least_deceleration(cases, start.top)
    assert np.array_equal(out.reason_code == REASONS.index("outside-friction-range"), outside)
    # A case within rounding of the bound may fall on either side.
    sure = ~outside & (np.abs(least - LEAST) > 1e-9)
    assert np.array_equal(out.stops[sure], (least >= LEAST)[sure])
    assert sure.sum() > 9_000


def lag_without_gravity(speed: Floats, *, lag_s: Floats, slope_mps2: Floats) -> phases.Phase:
    return phases.lag(speed, lag_s=lag_s, slope_mps2=0.0 * slope_mps2)


def build_up_without_gravity(speed: Floats, *, build_up_s: Floats, brake: Brake) -> phases.Phase:
    return phases.build_up(speed, build_up_s=build_up_s, brake=dataclasses.replace(brake, slope=0.0 * brake.slope))


def braking_to_a_crawl(speed: Floats, brake: Brake) -> braking.Braking:
    """The last hundredth of a millionth of the distance left out."""
    whole = braking.full_braking(speed, brake)
    return dataclasses.replace(whole, distance_m=whole.distance_m * (1.0 - 1e-8))


def table_without_the_limit(speed: Floats, brake: TableBrake) -> tuple[Floats, Floats]:
    return braking_distance_and_time(speed, dataclasses.replace(brake, cap=np.full_like(brake.cap, np.inf)))


@pytest.mark.parametrize("way", WAYS)
@pytest.mark.parametrize(
    ("name", "mutant"),
    [
        ("lag", lag_without_gravity), ("build_up", build_up_without_gravity), ("full_braking", braking_to_a_crawl),
        ("braking_distance_and_time", table_without_the_limit),
    ],
)  # fmt: skip
def test_a_planted_mutant_is_found_out(
    cases: Grid, truths: dict[str, Truth], way: str, name: str, mutant: object, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(stopping, name, mutant)
    with pytest.raises(AssertionError):
        agree(cases, program(cases), truths[way])
