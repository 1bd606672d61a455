"""The spread of the stopping distance: percentiles over reaction and friction, as computed and as printed."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

import numpy as np
import numpy.typing as npt

from chartgen.figures.record import Columns
from chartgen.figures.rounding import up
from chartgen.figures.stops import arguments
from chartgen.figures.units import from_metres
from chartgen.motion.friction import friction_at
from chartgen.motion.friction_table import FrictionTable
from chartgen.motion.limits import KMH_PER_MPS
from chartgen.motion.spread import stopping_percentiles

if TYPE_CHECKING:
    from chartgen.edition.model import Edition, Friction

Floats = npt.NDArray[np.float64]

PERCENTILES: Final = (50, 85, 95)
NAMES: Final = (
    *(f"stopping_p{p}_m" for p in PERCENTILES), "spread_error_m",
    *(f"printed_p{p}" for p in PERCENTILES), *(f"printed_also_p{p}" for p in PERCENTILES),
)  # fmt: skip
_REFERENCE_KMH: Final = 60.0


def spread(columns: Columns, edition: Edition) -> Columns:
    """The percentiles of each row's stopping distance; nan without `[figures.spread]` and in rows where nothing varies.

    Formula: see `motion.spread.stopping_percentiles`: reaction lognormal, friction uniform over its range, independent.

    Args:
        columns: the inputs of the table, SI, one length.
        edition: for its drivers' lognormals, its surfaces' ranges, its sample and its units.

    Returns:
        Columns `NAMES`. `spread_error_m` is the largest sampling error of the three. A printed percentile goes up to
        the next step (see `printed_step`). A percentile that lies among stops that never end is nan.

    Raises:
        ValueError: an argument is out of its range (the front door has looked).

    Source: equation of motion; quasi-Monte-Carlo sampling.
    """
    out: Columns = {name: np.full(len(columns["row"]), np.nan) for name in NAMES}
    if edition.spread is None:
        return out
    mu, sigma = _reactions(columns, edition)
    low, high = _factors(columns, edition)
    rows = np.flatnonzero(~np.isnan(sigma) | (low != high))
    if len(rows) == 0:
        return out
    given = {n: v if n == "tables" else v[rows] for n, v in arguments(columns, edition).items()}
    made = stopping_percentiles(
        columns["speed_mps"][rows],
        reaction_mu=mu[rows],
        reaction_sigma=sigma[rows],
        friction_low=low[rows],
        friction_high=high[rows],
        percentiles=tuple(p / 100 for p in PERCENTILES),
        samples=edition.spread.samples,
        seed=edition.spread.seed,
        **given,
    )
    out["spread_error_m"][rows] = np.fmax.reduce(made.error_m, axis=0)
    for place, percent in enumerate(PERCENTILES):
        out[f"stopping_p{percent}_m"][rows] = made.distance_m[place]
    for prefix, unit, step in (
        ("printed", edition.distance_unit, edition.rounding.step),
        ("printed_also", edition.also_unit, edition.rounding.also_step),
    ):
        if unit is None:
            continue
        coarse = printed_step(from_metres(out["spread_error_m"], unit), step)
        for percent in PERCENTILES:
            out[f"{prefix}_p{percent}"] = up(from_metres(out[f"stopping_p{percent}_m"], unit), coarse)
    return out


def printed_step(error: npt.ArrayLike, step: float) -> float:
    """The step to which percentiles are printed: the edition's, or the first of its 2, 5, 10, 20, 50 … fold that is not
    smaller than the largest sampling error. Reported digits never exceed the sampling error.

    Formula: the least of ``step·{1, 2, 5, 10, 20, 50 …}`` that is at least the largest error.

    Args:
        error: sampling errors, any shape, in the printed unit; nan is passed over.
        step: the edition's, in the printed unit.

    Returns:
        A step in the printed unit.

    Raises:
        Nothing.

    Source: our own rule.

    >>> printed_step([0.02, 0.3], 1.0), printed_step([0.02, 3.0], 1.0)
    (1.0, 5.0)
    """
    errors = np.asarray(error, dtype=np.float64)
    worst = float(np.nanmax(errors)) if np.isfinite(errors).any() else 0.0
    scale = 1.0
    while True:
        for fold in (1.0, 2.0, 5.0):
            if fold * scale * step >= worst:
                return fold * scale * step
        scale *= 10.0


def _reactions(columns: Columns, edition: Edition) -> tuple[Floats, Floats]:
    """Location and scale of ln(t/s) of each row's driver; nan for a fixed time."""
    known = {d.id: d.reaction for d in edition.drivers}
    spreads = [known[driver] for driver in columns["driver"]]
    return (
        np.array([np.nan if r.mu is None else r.mu for r in spreads]),
        np.array([np.nan if r.sigma is None else r.sigma for r in spreads]),
    )


def _factors(columns: Columns, edition: Edition) -> tuple[Floats, Floats]:
    """Lowest and highest factor on each row's friction curve; 1 and 1 where no range is stated."""
    known = {s.id: _factor(s.friction) for s in edition.surfaces}
    pairs = [known[surface] for surface in columns["surface"]]
    return np.array([low for low, _ in pairs]), np.array([high for _, high in pairs])


def _factor(friction: Friction) -> tuple[float, float]:
    if friction.low is None or friction.high is None:
        return 1.0, 1.0
    at = reference_friction(friction)
    return friction.low / at, friction.high / at


def reference_friction(friction: Friction) -> float:
    """The friction that a stated range stands around: the constant, or the curve's value at 60 km/h.

    Formula: the constant, ``F(60 km/h)`` with its cap, or the table at 60 km/h (its nearest end beyond).

    Args:
        friction: a friction with one of the three laws.

    Returns:
        Friction, without unit.

    Raises:
        ValueError: it has no law.

    Source: see `motion.friction.friction_at`.
    """
    if friction.mu is not None:
        return friction.mu
    if friction.table is not None:
        speeds, mu = zip(*friction.table, strict=True)
        table = FrictionTable(speeds_mps=np.array(speeds) / KMH_PER_MPS, mu=np.array(mu))
        return float(table.at(np.array([min(max(_REFERENCE_KMH, speeds[0]), speeds[-1]) / KMH_PER_MPS]))[0])
    if friction.f60 is None or friction.sp_kmh is None:
        raise ValueError("a friction without a law has no range")
    cap = np.inf if friction.max_mu is None else friction.max_mu
    return float(friction_at(_REFERENCE_KMH / KMH_PER_MPS, f60=friction.f60, sp_kmh=friction.sp_kmh, max_mu=cap))
