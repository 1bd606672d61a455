"""Other ways to the same numbers: a step-by-step integration of the motion, and adaptive quadrature.

Nothing here uses the program's formulas: forces along the road are written down again, and scipy integrates them.
"""

from __future__ import annotations

import csv
import math
from collections.abc import Callable
from itertools import pairwise
from pathlib import Path

import numpy as np
from scipy.integrate import quad, solve_ivp

STANDARD_GRAVITY = 9.80665
PUBLISHED = Path(__file__).parents[1] / "published"


def published(name: str) -> list[dict[str, str]]:
    """The rows of a published table, without its header of comments."""
    lines = (PUBLISHED / name).read_text(encoding="utf-8").splitlines()
    return list(csv.DictReader(line for line in lines if not line.startswith("#")))


def friction_law(
    *, mu: float | None = None, f60: float | None = None, sp_kmh: float | None = None, max_mu: float = math.inf
) -> Callable[[float], float]:
    """Friction as a function of the speed in m/s; infinite where none is given."""
    if mu is not None:
        return lambda v: mu
    if f60 is not None and sp_kmh is not None:
        return lambda v: min(f60 * math.exp((60.0 - 3.6 * v) / sp_kmh), max_mu)
    return lambda v: math.inf


def brake_force(
    friction: Callable[[float], float], *, grade: float, brake_efficiency: float = 1.0, limit: float = math.inf
) -> tuple[Callable[[float], float], float]:
    """The brake's deceleration by speed, and the slope's: m/s² along the road."""
    angle = math.atan(grade)
    across = STANDARD_GRAVITY * math.cos(angle)
    return lambda v: min(brake_efficiency * friction(v) * across, limit), STANDARD_GRAVITY * math.sin(angle)


def step_by_step(
    speed: float,
    *,
    reaction_time: float,
    lag: float,
    build_up: float,
    brake: Callable[[float], float],
    slope: float,
    ramp: Callable[[float], float] | None = None,
) -> dict[str, float]:
    """The motion integrated through its phases; distances by phase in m, and the time in s; inf where it never rests.

    `ramp` is the force the build-up rises to by speed; by default the brake's own at the speed of the moment.
    """
    rising = brake if ramp is None else ramp

    def coast(t: float, v: float) -> float:
        return -slope

    def bite(t: float, v: float) -> float:
        return -slope - rising(v) * t / build_up

    def brakes(t: float, v: float) -> float:
        return -slope - brake(v)

    out = {"reaction": speed * reaction_time, "time": reaction_time}
    velocity = speed
    for name, duration, law in (("lag", lag, coast), ("build_up", build_up, bite), ("full", 4000.0, brakes)):
        out[name] = 0.0
        if duration > 0.0 and velocity > 0.0:
            out[name], velocity, took = _integrate(law, velocity, duration)
            out["time"] += took
    if velocity > 0.0:
        out["full"] = out["time"] = math.inf
    out["braking"] = out["build_up"] + out["full"]
    out["stopping"] = out["reaction"] + out["lag"] + out["braking"]
    return out


def _integrate(
    acceleration: Callable[[float, float], float], velocity: float, duration: float
) -> tuple[float, float, float]:
    """Distance, last speed and time, until `duration` is over or the vehicle rests."""

    def rests(t: float, y: np.ndarray) -> float:
        return float(y[1])

    rests.terminal = True  # type: ignore[attr-defined]  # how solve_ivp is told to stop there
    rests.direction = -1.0  # type: ignore[attr-defined]
    run = solve_ivp(
        lambda t, y: [y[1], acceleration(t, y[1])],
        (0.0, duration),
        [0.0, velocity],
        method="DOP853",
        events=rests,
        rtol=1e-11,
        atol=1e-11,
    )
    distance, last = run.y[0, -1], run.y[1, -1]
    return float(distance), 0.0 if run.status == 1 else float(last), float(run.t[-1])


def by_quadrature(
    speed: float, *, brake: Callable[[float], float], slope: float, knots: tuple[float, ...] = ()
) -> tuple[float, float]:
    """Distance and time of full braking by adaptive quadrature over the speed, in pieces between the knots."""
    ends = sorted({0.0, speed, *(k for k in knots if 0.0 < k < speed)})
    distance = time = 0.0
    for low, high in pairwise(ends):
        distance += quad(lambda u: u / (brake(u) + slope), low, high, epsabs=0.0, epsrel=1e-12, limit=200)[0]
        time += quad(lambda u: 1.0 / (brake(u) + slope), low, high, epsabs=0.0, epsrel=1e-12, limit=200)[0]
    return distance, time
